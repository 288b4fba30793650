"""What stands beside a derived line: source, range of validity, origin of its inputs, where it is used."""

from __future__ import annotations

from calcpack.digits import digits_written, format_number
from calcpack.formulas import FORMULAS, Formula
from calcpack.formulas.expression import Symbol
from calcpack.formulas.formula import LIST, Range
from calcpack.ledger import Entry
from calcpack.ledger import entry as origin
from calcpack.ledger.text import display_text
from calcpack.quantities import KINDS, UNITS, Unit
from calcpack.report.cells import Desk
from calcpack.report.symbols import Html, number_html, symbol_html
from calcpack.report.typeset import inline, linked
from calcpack.values import CONFIRMED

_PLAIN = str.maketrans({"²": "2", "³": "3", " ": "", "\u00a0": "", "\u2009": ""})  # spelling that is no difference


def notes(desk: Desk, entry: Entry) -> tuple[Html, ...]:
    """Lines of the margin, in reading order."""
    lines = [desk.citation(entry.citation)] if entry.citation.key or entry.citation.text else []
    if entry.note:
        lines.append(desk.sentence(entry.note))
    if entry.written and entry.written.translate(_PLAIN) != display_text(entry, desk.ledger.system).translate(_PLAIN):
        lines.append(Html(f"as written: {number_html(entry.written)}"))
    if entry.status and entry.status != CONFIRMED:
        lines.append(number_html(entry.status))
    if entry.formula:
        formula = FORMULAS[entry.formula]
        ranges = [range_html(formula, limits, desk.ledger.system) for limits in formula.valid]
        if formula.is_empirical:
            lines.append(_demanded_units(formula))
        if ranges:
            lines.append(Html(f"range: {', '.join(ranges)}"))
        lines.extend(_inputs(desk, entry))
    used = desk.places(entry.id)
    if used:
        lines.append(Html(f"used in {used}"))
    return tuple(lines)


def cautions(desk: Desk, entry: Entry) -> tuple[Html, ...]:
    """What a checker must not miss under a line: ranges of validity that are left."""
    found = []
    for limits in FORMULAS[entry.formula].valid if entry.formula else ():
        if limits.expression in entry.findings:
            found.append(Html(f"outside the range {range_html(FORMULAS[entry.formula], limits, desk.ledger.system)}"))
    return tuple(found)


def range_html(formula: Formula, limits: Range, system: str) -> Html:
    """A range of validity: ``Re ≥ 4000`` or ``0 ≤ ε / D ≤ 0.05``."""
    subject = inline(limits.tree)
    unit = _unit_of_range(formula, limits, system)
    low, high = (None if bound is None else _bound(bound, unit) for bound in (limits.low, limits.high))
    if low is None:
        return Html(f"{subject} ≤ {high}")
    if high is None:
        return Html(f"{subject} ≥ {low}")
    return Html(f"{low} ≤ {subject} ≤ {high}")


def _demanded_units(formula: Formula) -> Html:
    """The units that the constants of an empirical formula demand."""
    named = [f"{symbol_html(name)} in {number_html(unit)}" for name, unit in formula.units.items() if unit]
    return Html(f"constants hold for {', '.join(named)}")


def _unit_of_range(formula: Formula, limits: Range, system: str) -> tuple[Unit, Unit]:
    """Unit that the bounds are declared in, and the unit that they print in."""
    if not isinstance(limits.tree, Symbol):
        return UNITS[""], UNITS[""]
    if formula.is_empirical:
        unit = UNITS[formula.units.get(limits.tree.name, "")]
        return unit, unit
    kind = KINDS[formula.kinds[limits.tree.name].removesuffix(LIST)]
    return UNITS[kind.si], kind.coherent_unit(system)


def _bound(value: float, units: tuple[Unit, Unit]) -> Html:
    declared, printed = units
    shown = printed.from_si(declared.to_si(value))
    text = format_number(shown, digits_written(f"{shown:.4g}"))
    return number_html(f"{text}\u00a0{printed.text}" if printed.text else text)


def _inputs(desk: Desk, entry: Entry) -> list[Html]:
    """Operands that come straight from the project or the program, with source and status."""
    lines = []
    for symbol, ids in (entry.operands or {}).items():
        for operand in [desk.ledger[one] for one in ([ids] if isinstance(ids, str) else ids)]:
            if operand.origin == origin.ASSUMED:
                text = "assumption of the program"
            elif operand.origin == origin.GIVEN and operand.citation.text and isinstance(ids, str):
                text = f"{operand.citation.text}, {operand.status}"
            else:
                continue
            name = symbol if isinstance(ids, str) else operand.symbol
            lines.append(Html(f"{linked(symbol_html(name), desk.link(operand.id))}: {number_html(text)}"))
    return lines
