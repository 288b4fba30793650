"""The hand-check: redo every printed line from its printed numbers, as a checker with a calculator would."""

from __future__ import annotations

import math
from dataclasses import dataclass

from calcpack.digits import MAX_DIGITS, last_digit, round_significant
from calcpack.formulas import Formula
from calcpack.ledger.book import Ledger, formula_of
from calcpack.ledger.entry import APPLIED, Entry
from calcpack.quantities import KINDS, UNITS, Unit

TOLERANCE = 0.002  # relative; the other bound is one unit in the last printed digit


@dataclass(frozen=True)
class HandCheck:
    """Outcome over the whole ledger. ``worst`` is the largest deviation as a share of what was allowed."""

    lines: int
    widened: int
    failed: tuple[str, ...]
    worst: float
    worst_id: str


def printed_unit(formula: Formula, symbol: str, system: str) -> Unit:
    """Unit in which ``symbol`` stands in the substituted line of ``formula``."""
    if formula.is_empirical:
        return UNITS[formula.units.get(symbol, "")]
    return KINDS[formula.kinds[symbol].removesuffix("[]")].coherent_unit(system)


def printed_value(entry: Entry, unit: Unit) -> float:
    """The rounded number that stands for ``entry`` in a line printed in ``unit``."""
    return round_significant(unit.from_si(entry.value), entry.digits)


def settle_digits(ledger: Ledger) -> HandCheck:
    """Give operands more digits until every applied line can be redone by hand; report the outcome.

    A line holds when the formula of the printed operands gives the printed result within one unit of its last printed
    digit or 0.2 %, whichever is larger.
    """
    lines = ledger.of_origin(APPLIED)
    widened: set[str] = set()
    changed = True
    while changed:
        changed = False
        for entry in lines:
            while deviation(ledger, entry) > 1.0 and _widen(ledger, entry, widened):
                changed = True
    worst, worst_id, failed = 0.0, "", []
    for entry in lines:
        share = deviation(ledger, entry)
        if not share <= 1.0:
            failed.append(entry.id)
        if share > worst:
            worst, worst_id = share, entry.id
    return HandCheck(len(lines), len(widened), tuple(failed), worst, worst_id)


def deviation(ledger: Ledger, entry: Entry) -> float:
    """Difference between the redone and the printed result, as a share of the allowed difference."""
    formula = formula_of(entry)
    operands = {}
    for symbol, ids in (entry.operands or {}).items():
        unit = printed_unit(formula, symbol, ledger.system)
        if isinstance(ids, str):
            operands[symbol] = printed_value(ledger[ids], unit)
        else:
            operands[symbol] = [printed_value(ledger[one], unit) for one in ids]
    unit = printed_unit(formula, formula.result, ledger.system)
    printed = printed_value(entry, unit)
    redone = float(formula.evaluate_as_printed(operands))
    if not math.isfinite(redone) or not math.isfinite(printed):
        return math.inf
    difference = abs(redone - printed)
    allowed = max(last_digit(printed, entry.digits) if printed else 0.0, TOLERANCE * abs(printed))
    if printed == 0.0 or allowed == 0.0:
        scale = max((abs(value) for value in _flat(operands.values())), default=0.0)
        return 0.0 if difference <= 1e-9 * max(scale, 1e-30) else math.inf
    return difference / allowed


def _widen(ledger: Ledger, entry: Entry, widened: set[str]) -> bool:
    grown = False
    for operand_id in entry.operand_ids():
        operand = ledger[operand_id]
        if operand.digits < MAX_DIGITS and not _is_exact(operand, ledger.system):
            operand.digits += 1
            widened.add(operand_id)
            grown = True
    return grown


def _is_exact(entry: Entry, system: str) -> bool:
    """True when printing more digits would add zeros only."""
    for unit in (KINDS[entry.kind].coherent_unit(system), KINDS[entry.kind].display_unit(system)):
        value = unit.from_si(entry.value)
        if round_significant(value, entry.digits) != round_significant(value, MAX_DIGITS):
            return False
    return True


def _flat(values) -> list[float]:
    return [one for value in values for one in (value if isinstance(value, list) else [value])]


