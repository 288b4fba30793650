"""Margins of a value against a limit, and the deviation between two results.

One text holds for every kind, but a formula states its kinds: there is one declaration per group of kinds with equal
units (head stands for length, elevation and diameter; pressure difference for every pressure; ratio for all numbers).
"""

from __future__ import annotations

from calcpack.errors import FormulaError
from calcpack.formulas.formula import FORMULAS, Formula, formula
from calcpack.quantities import KINDS

COMPARED_KINDS = ("ratio", "head", "flow", "velocity", "pressure_difference", "power", "duration", "rotational_speed")
_KIND_OF_UNITS = {KINDS[kind].coherent: kind for kind in COMPARED_KINDS}

for _kind in COMPARED_KINDS:
    formula(
        f"criteria.margin_below.{_kind}", "Margin to an upper limit", "m = 1 - x / x_lim",
        m="fraction", x=_kind, x_lim=_kind,
        source="DEFINITION", valid={"x_lim": (0.0, None)}, note="negative when the limit is exceeded",
    )
    formula(
        f"criteria.margin_above.{_kind}", "Margin over a lower limit", "m = x / x_lim - 1",
        m="fraction", x=_kind, x_lim=_kind,
        source="DEFINITION", valid={"x_lim": (0.0, None)}, note="negative when the limit is not reached",
    )
    formula(
        f"criteria.excess.{_kind}", "Value less limit", "m = x - x_lim",
        m=_kind, x=_kind, x_lim=_kind,
        source="DEFINITION", note="for limits of zero or below, where a relative margin has no meaning",
    )
    formula(
        f"criteria.deviation.{_kind}", "Deviation of the second result", "d = x_2 / x_1 - 1",
        d="fraction", x_2=_kind, x_1=_kind,
        source="DEFINITION",
    )


def margin_below(kind: str) -> Formula:
    """``m = 1 - x / x_lim`` for values of ``kind``. Raises FormulaError for a kind that no check compares."""
    return _declared("margin_below", kind)


def margin_above(kind: str) -> Formula:
    """``m = x / x_lim - 1`` for values of ``kind``. Raises FormulaError for a kind that no check compares."""
    return _declared("margin_above", kind)


def excess(kind: str) -> Formula:
    """``m = x - x_lim`` for values of ``kind``. Raises FormulaError for a kind that no check compares."""
    return _declared("excess", kind)


def deviation(kind: str) -> Formula:
    """``d = x_2 / x_1 - 1`` for values of ``kind``. Raises FormulaError for a kind that no check compares."""
    return _declared("deviation", kind)


def _declared(name: str, kind: str) -> Formula:
    try:
        return FORMULAS[f"criteria.{name}.{_KIND_OF_UNITS[KINDS[kind].coherent]}"]
    except KeyError:
        raise FormulaError(f"criteria.{name}: {kind!r} is not compared; known: {', '.join(COMPARED_KINDS)}") from None
