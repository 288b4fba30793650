"""Tolerances of acceptance grades, and factors of the methods for viscous liquids and reciprocating pumps."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.catalog.table import CatalogValue, load_table

_TOLERANCES = ("flow_low", "flow_high", "head_low", "head_high", "power_high", "efficiency_low")


@dataclass(frozen=True)
class AcceptanceGrade:
    """Tolerances of one grade as positive shares of the guaranteed figure: ``*_low`` downwards, ``*_high`` upwards."""

    grade: str
    title: str
    flow_low: CatalogValue
    flow_high: CatalogValue
    head_low: CatalogValue
    head_high: CatalogValue
    power_high: CatalogValue
    efficiency_low: CatalogValue


def acceptance_grade(grade: str) -> AcceptanceGrade:
    """Tolerances of a ``grade`` such as "1B"; raises :class:`CatalogError` when it is unknown."""
    table = load_table("acceptance_grades")
    row = table.named_row("acceptance grade", grade)
    tolerances = {column: table.value(row, column, "fraction", row["title"]) for column in _TOLERANCES}
    return AcceptanceGrade(row["grade"].upper(), row["title"], **tolerances)


def acceptance_grades() -> list[str]:
    """Every grade, in the order of the table."""
    return [row["grade"].upper() for row in load_table("acceptance_grades").rows]


def viscous_inlet_factor(inlet: str) -> CatalogValue:
    """Factor A of the viscous correction of NPSHR for an ``inlet`` ("end suction" or "side suction").

    Raises :class:`CatalogError` when it is unknown.
    """
    return _factor("viscous_inlet_factors", "inlet of a pump", inlet)


def acceleration_pump_factor(pattern: str) -> CatalogValue:
    """Factor C of the acceleration head for a ``pattern`` such as "triplex"; raises :class:`CatalogError`."""
    return _factor("acceleration_pump_factors", "pattern of a reciprocating pump", pattern)


def acceleration_liquid_factor(liquid: str) -> CatalogValue:
    """Factor k of the acceleration head for a ``liquid`` such as "water"; raises :class:`CatalogError`."""
    return _factor("acceleration_liquid_factors", "liquid of the acceleration head", liquid)


def _factor(table_name: str, what: str, name: str) -> CatalogValue:
    table = load_table(table_name)
    row = table.named_row(what, name)
    return table.value(row, "factor", "ratio", row["title"])
