"""Ranges and margins that a design is compared with: velocity by service, suction margin by service."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.catalog.table import CatalogValue, load_table


@dataclass(frozen=True)
class VelocityRange:
    """Velocity limits of a service in m/s; None where the table gives none. ``normal_*`` is the usual design range."""

    service: str
    title: str
    minimum: CatalogValue | None
    normal_low: CatalogValue | None
    normal_high: CatalogValue | None
    maximum: CatalogValue | None


@dataclass(frozen=True)
class NpshMargin:
    """Margin of NPSH available over NPSH required: ratio to NPSH required or head in m, whichever asks for more."""

    service: str
    title: str
    ratio: CatalogValue
    head_margin: CatalogValue


def velocity_range(service: str) -> VelocityRange:
    """Velocity limits of ``service``; raises :class:`CatalogError` when it is unknown."""
    table = load_table("velocity_ranges")
    row = table.named_row("velocity service", service)
    limits = {
        column: table.optional(row, column, "velocity", row["title"])
        for column in ("minimum", "normal_low", "normal_high", "maximum")
    }
    return VelocityRange(row["service"], row["title"], **limits)


def npsh_margin(service: str) -> NpshMargin:
    """Suction margin of ``service``; raises :class:`CatalogError` when it is unknown."""
    table = load_table("npsh_margins")
    row = table.named_row("suction service", service)
    return NpshMargin(
        service=row["service"],
        title=row["title"],
        ratio=table.value(row, "ratio", "ratio", row["title"]),
        head_margin=table.value(row, "head_margin", "head", row["title"]),
    )


def velocity_services() -> list[str]:
    """Every service that has velocity limits."""
    return [row["service"] for row in load_table("velocity_ranges").rows]


def npsh_services() -> list[str]:
    """Every service that has a suction margin."""
    return [row["service"] for row in load_table("npsh_margins").rows]
