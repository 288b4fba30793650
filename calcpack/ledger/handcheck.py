"""The hand-check: redo every printed line from its printed numbers, as a checker with a calculator would."""

from __future__ import annotations

import math
from dataclasses import dataclass

from calcpack.digits import DEFAULT_DIGITS, MAX_DIGITS, exponent_of, last_digit, round_significant
from calcpack.formulas import Formula
from calcpack.formulas.formula import LIST
from calcpack.ledger.book import NOISE, Ledger, formula_of
from calcpack.ledger.entry import APPLIED, SOLVED, Entry
from calcpack.quantities import KINDS, UNITS, Unit

TOLERANCE = 0.002  # relative; the other bound is one unit in the last printed digit
NINE_DIGITS = 10.0 ** (1 - MAX_DIGITS)  # share of the largest term that printing can resolve at most
WITHOUT_RESULT = 1e9  # deviation of a line whose printed numbers give no result; finite, so that it can be printed


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
        return UNITS[formula.units[symbol]]
    return KINDS[formula.kinds[symbol].removesuffix(LIST)].coherent_unit(system)


def printed_value(entry: Entry, unit: Unit) -> float:
    """The rounded number that stands for ``entry`` in a line printed in ``unit``."""
    return round_significant(unit.from_si(entry.value), entry.digits)


def settle_digits(ledger: Ledger) -> HandCheck:
    """Give operands more digits until every line can be redone by hand; report the outcome.

    A line made by a formula holds when the formula of the printed operands gives the printed result within one unit
    of its last printed digit or 0.2 %, whichever is larger. The root of an implicit formula holds when both sides of
    the equation, worked out from printed numbers, agree within 0.2 %. A difference of nearly equal numbers whose
    terms are printed with nine digits holds when it agrees to the ninth digit of the largest term.
    """
    lines = [entry for entry in ledger.of_origin(APPLIED, SOLVED) if entry.formula]
    widened: set[str] = set()
    changed = True
    while changed:  # ends: digits only grow, and MAX_DIGITS is their bound
        changed = False
        for entry in lines:
            while deviation(ledger, entry) > 1.0 and _widen(ledger, entry, widened):
                changed = True
        changed |= _align(ledger)
    worst, worst_id, failed = 0.0, "", []
    for entry in lines:
        share = deviation(ledger, entry)
        if share > 1.0:
            failed.append(entry.id)
        if share > worst:
            worst, worst_id = share, entry.id
    return HandCheck(len(lines), len(widened), tuple(failed), worst, worst_id)


def _align(ledger: Ledger) -> bool:
    """Print the same quantity of several cases to the same decimal place: columns of a table then line up.

    Digits only grow: the place is that of the largest member, one digit finer where another has fewer digits before
    the point. Returns True when any entry changed.
    """
    families: dict[str, list[Entry]] = {}
    for entry in ledger.of_origin(APPLIED, SOLVED):
        if entry.case and entry.value and math.isfinite(entry.value):
            families.setdefault(entry.id.replace(f"@{entry.case}", ""), []).append(entry)
    changed = False
    for family in families.values():
        unit = KINDS[family[0].kind].display_unit(ledger.system)
        exponents = {id(entry): exponent_of(unit.from_si(entry.value), entry.digits) for entry in family}
        highest = max(exponents.values())
        digits = max(entry.digits for entry in family if exponents[id(entry)] == highest)
        digits = min(digits, DEFAULT_DIGITS) + (min(exponents.values()) < highest)
        for entry in family:
            wanted = min(digits + exponents[id(entry)] - highest, MAX_DIGITS)
            if wanted > entry.digits:
                entry.digits, changed = wanted, True
    return changed


def deviation(ledger: Ledger, entry: Entry) -> float:
    """Difference between the redone and the printed result, as a share of the allowed difference.

    WITHOUT_RESULT where the printed numbers give none (for example a divisor that rounds to zero).
    """
    formula = formula_of(entry)
    printed = _printed_operands(ledger, entry, formula)
    printed[formula.result] = printed_value(entry, printed_unit(formula, formula.result, ledger.system))
    left, redone, scale = formula.evaluate_as_printed(printed)
    tolerance = 0.0 if formula.unknown or not left else last_digit(left, entry.digits)
    resolution = NOISE if any(_can_grow(ledger, *one) for one in _operands(ledger, entry, formula)) else NINE_DIGITS
    allowed = max(tolerance, TOLERANCE * abs(left)) + resolution * scale
    difference = abs(redone - left)
    if difference == 0.0:
        return 0.0
    share = difference / allowed if allowed else math.inf
    return min(share, WITHOUT_RESULT) if math.isfinite(share) else WITHOUT_RESULT


def _printed_operands(ledger: Ledger, entry: Entry, formula: Formula) -> dict[str, float | list[float]]:
    printed: dict[str, float | list[float]] = {}
    for symbol, ids in (entry.operands or {}).items():
        unit = printed_unit(formula, symbol, ledger.system)
        if isinstance(ids, str):
            printed[symbol] = printed_value(ledger[ids], unit)
        else:
            printed[symbol] = [printed_value(ledger[one], unit) for one in ids]
    return printed


def _operands(ledger: Ledger, entry: Entry, formula: Formula) -> list[tuple[str, Unit]]:
    """Ids of the operands of a line with the unit that each is printed in."""
    pairs = []
    for symbol, ids in (entry.operands or {}).items():
        unit = printed_unit(formula, symbol, ledger.system)
        pairs.extend((one, unit) for one in ([ids] if isinstance(ids, str) else ids))
    return pairs


def _can_grow(ledger: Ledger, operand_id: str, unit: Unit) -> bool:
    """True while more digits would change the number as printed in ``unit``."""
    operand = ledger[operand_id]
    value = unit.from_si(operand.value)
    return operand.digits < MAX_DIGITS and round_significant(value, operand.digits) != round_significant(
        value, MAX_DIGITS
    )


def _widen(ledger: Ledger, entry: Entry, widened: set[str]) -> bool:
    grown = {one for one, unit in _operands(ledger, entry, formula_of(entry)) if _can_grow(ledger, one, unit)}
    for operand_id in grown:
        ledger[operand_id].digits += 1
    widened |= grown
    return bool(grown)
