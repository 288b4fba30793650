"""Loss coefficients of fittings and valves, and the constant for the velocity that holds a check valve fully open."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.catalog.errors import CatalogError
from calcpack.catalog.names import plain, unknown
from calcpack.catalog.table import CatalogValue, Row, load_table

_TABLE = "fittings"
N_FT = "n_fT"
K = "K"
GIVEN = "given"


@dataclass(frozen=True)
class FittingRow:
    """One catalogued fitting, fully open where it is a valve.

    ``method`` is "n_fT" (``coefficient`` is n, and K = n fT) or "K" (``coefficient`` is K on the velocity head of the
    line). ``full_open_constant`` is N of v_min = N / sqrt(rho), v in m/s and rho in kg/m3; None unless a check valve.
    """

    type: str
    title: str
    method: str
    coefficient: CatalogValue
    full_open_constant: CatalogValue | None


def fitting_types() -> list[str]:
    """Every type that may be named, in the order of the table."""
    return list(dict.fromkeys(row["type"] for row in load_table(_TABLE).rows))


def fitting_title(type_: str) -> str:
    """Title of a type, also of one whose coefficient has to be given; raises :class:`CatalogError` when unknown."""
    return _rows(type_)[0]["title"]


def fitting(type_: str, dn: int | None = None) -> FittingRow:
    """Coefficient of a fitting; ``dn`` (150 for DN 150) is needed where it depends on the size.

    Raises :class:`CatalogError` for an unknown type, for a size that the table does not cover, and for a type
    that has no general coefficient.
    """
    rows = _rows(type_)
    row = _for_size(rows, dn)
    if row["method"] == GIVEN:
        raise CatalogError(f'"{row["type"]}" has no general coefficient', row["note"])
    table = load_table(_TABLE)
    kind = "dimensionless" if row["method"] == N_FT else "loss_coefficient"
    label = row["title"] if len(rows) == 1 else f"{row['title']}, {_band(row)}"
    return FittingRow(
        type=row["type"],
        title=row["title"],
        method=row["method"],
        coefficient=table.value(row, "coefficient", kind, label),
        full_open_constant=table.optional(row, "full_open_constant", "dimensionless", label),
    )


def _rows(type_: str) -> list[Row]:
    rows = [row for row in load_table(_TABLE).rows if row["type"] == plain(type_)]
    if not rows:
        raise unknown("fitting type", type_, fitting_types())
    return rows


def _for_size(rows: list[Row], dn: int | None) -> Row:
    if not rows[0]["dn_min"]:
        return rows[0]
    for row in rows:
        if dn is not None and int(row["dn_min"]) <= dn <= int(row["dn_max"]):
            return row
    size = "no size was given" if dn is None else f"DN {dn} is not covered"
    bands = ", ".join(_band(row) for row in rows)
    raise CatalogError(f'the coefficient of "{rows[0]["type"]}" depends on the size and {size}',
                       f"covered: {bands}; or give the coefficient with its source")  # fmt: skip


def _band(row: Row) -> str:
    return f"DN {row['dn_min']} to {row['dn_max']}"
