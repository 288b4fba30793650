"""One ledger entry written out: symbol = formula = numbers = result, broken into lines that fit the column."""

from __future__ import annotations

import math
from html import escape

from calcpack.digits import format_number
from calcpack.ledger import Entry, Ledger, formula_of
from calcpack.ledger import entry as origin
from calcpack.ledger.handcheck import printed_unit
from calcpack.ledger.text import NBSP, quantity_text, unit_of
from calcpack.quantities import KINDS, Unit
from calcpack.report.symbols import Html, number_html, number_width, symbol_html
from calcpack.report.typeset import Link, Piece, linked, substituted, symbolic
from calcpack.report.verdicts import verdict_html
from calcpack.report.views import LineView

COLUMN = 32.6  # em: width of the formula column of the style sheet, equals sign included
EQUALS = 1.06  # em, with its spaces
RESIDUAL_DIGITS = 1


def lines(entry: Entry, ledger: Ledger, link: Link, *, boxed: bool) -> tuple[LineView, ...]:
    """The lines of an entry; ``boxed`` puts the result into a frame."""
    if entry.origin == origin.APPLIED:
        return _applied(entry, ledger, link, boxed)
    if entry.origin == origin.SOLVED and entry.formula:
        return _implicit(entry, ledger, link, boxed)
    if entry.origin == origin.CHECK:
        return (_check(entry, ledger, link),)
    if entry.origin == origin.SERIES:
        words = f"{symbol_html(entry.symbol)}: plotted curve of {len(entry.points)} points"
        return (LineView(Html(""), Html(words), True),)
    if entry.choice and math.isnan(entry.value):
        return (LineView(Html(""), Html(f'<b class="r">{escape(entry.choice)}</b>'), True),)
    text = _result(entry, (unit_of(entry, ledger.system), KINDS[entry.kind].coherent_unit(ledger.system)), boxed)
    residual = _residual(entry) if entry.residual is not None else ""
    return (LineView(_equals(symbol_html(entry.symbol)), Html(text.html + residual), True),)


def _applied(entry: Entry, ledger: Ledger, link: Link, boxed: bool) -> tuple[LineView, ...]:
    formula = formula_of(entry)
    symbol = symbol_html(entry.symbol)
    _, in_symbols = symbolic(formula)
    _, in_numbers = substituted(formula, entry, ledger, link)
    units = (printed_unit(formula, formula.result, ledger.system), unit_of(entry, ledger.system))
    result = _result(entry, units, boxed)
    if in_symbols.width + in_numbers.width + result.width + 2 * EQUALS <= COLUMN:
        return (_line(symbol, in_symbols, in_numbers, result),)
    if in_numbers.width + EQUALS + result.width <= COLUMN:
        return (_line(symbol, in_symbols), _line(Html(""), in_numbers, result))
    return (_line(symbol, in_symbols), _line(Html(""), in_numbers), _line(Html(""), result))


def _implicit(entry: Entry, ledger: Ledger, link: Link, boxed: bool) -> tuple[LineView, ...]:
    """The equation, its root with the residual, and the equation once more with the numbers put in."""
    formula = formula_of(entry)
    left, right = symbolic(formula)
    left_numbers, right_numbers = substituted(formula, entry, ledger, link)
    units = (printed_unit(formula, formula.result, ledger.system), unit_of(entry, ledger.system))
    result = _result(entry, units, boxed)
    return (
        _line(Html(left.html), right),
        LineView(_equals(symbol_html(entry.symbol)), Html(result.html + _residual(entry)), True),
        _line(Html(left_numbers.html), right_numbers),
    )


def _check(entry: Entry, ledger: Ledger, link: Link) -> LineView:
    operands = entry.operands or {}
    box = verdict_html(entry.verdict)
    if "value" not in operands:
        return LineView(Html(""), box, True)
    value, limit = ledger[str(operands["value"])], ledger[str(operands["limit"])]
    texts = [
        linked(number_html(quantity_text(one, unit_of(one, ledger.system))), link(one.id)) for one in (value, limit)
    ]
    return LineView(
        _equals(symbol_html(entry.symbol)), Html(f"{texts[0]} {escape(entry.comparison)} {texts[1]}&emsp;{box}"), True
    )


def _result(entry: Entry, units: tuple[Unit, Unit], boxed: bool) -> Piece:
    """The value in both units, once where they are the same; the last one stands out."""
    texts = list(dict.fromkeys(quantity_text(entry, unit) for unit in units))
    frame = "r" if boxed else "v"
    parts = [str(number_html(text)) for text in texts]
    parts[-1] = f'<b class="{frame}">{parts[-1]}</b>'
    width = sum(number_width(text) for text in texts) + EQUALS * (len(texts) - 1) + (1.0 if boxed else 0.0)
    return Piece(" = ".join(parts), width)


def _residual(entry: Entry) -> str:
    text = number_html(format_number(entry.residual or 0.0, RESIDUAL_DIGITS))
    return f'<span class="n">residual{NBSP}{text}</span>'


def _line(left: Html, *pieces: Piece) -> LineView:
    width = sum(piece.width for piece in pieces) + EQUALS * (len(pieces) - 1)
    return LineView(_equals(left), Html(" = ".join(piece.html for piece in pieces)), width <= COLUMN)


def _equals(left: str) -> Html:
    return Html(f"{left} =" if left else "=")
