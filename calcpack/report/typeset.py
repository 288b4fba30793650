"""Expression tree -> HTML text: the same tree that was evaluated, with symbols or with numbers.

Fractions, radicals and brackets are inline boxes of the style sheet; nothing is an image, so all of it can be
selected, searched and linked. Grouping in the formula text is grouping in print.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from html import escape
from itertools import pairwise

from calcpack.digits import MINUS, THIN_SPACE, TIMES, digits_written, format_number
from calcpack.errors import FormulaError
from calcpack.formulas import Formula
from calcpack.formulas.expression import Binary, Call, Negative, Node, Number, Symbol, symbols
from calcpack.ledger import Entry, Ledger
from calcpack.ledger.handcheck import printed_unit
from calcpack.ledger.text import quantity_text
from calcpack.quantities import Unit
from calcpack.report.fonts import ITALIC, REGULAR, width
from calcpack.report.symbols import DRAWN_RAISED, SMALL, Html, number_html, number_width, symbol_html, symbol_width

DOT = "·"
GAP = "\u00a0"  # between the symbols of a product
# How tightly a piece holds together, loosest first.
SUM, SIGMA, PRODUCT, FRACTION, QUANTITY, ATOM = range(6)
# Widths of the boxes of the style sheet, em.
_FRACTION_MARGIN = 0.5
_RADICAL = 0.9
_BREAKABLE = 28.0  # a product this wide may be broken at a dot, a narrower one only before plus and minus
_TALL_BRACKETS = 0.9
_TITLES = {"log10": "log<sub>10</sub>"}

Link = Callable[[str], str]  # entry id -> address, "" where there is none


@dataclass(frozen=True)
class Piece:
    """A typeset part: markup, width in em, how tightly it binds, whether it is taller than a line, whether it is a
    number (products of numbers take a dot), whether it begins with a minus sign."""

    html: str
    width: float
    level: int = ATOM
    tall: bool = False
    numeric: bool = False
    minus: bool = False


Leaf = Callable[[str, int | None], Piece]  # symbol, position in a list operand


def symbolic(formula: Formula) -> tuple[Piece, Piece]:
    """Left and right side of the equation, in symbols."""
    setter = _Setter(lambda name, _: Piece(symbol_html(name), symbol_width(name)))
    return setter.set(formula.equation.left), setter.set(formula.equation.right)


def substituted(formula: Formula, entry: Entry, ledger: Ledger, link: Link) -> tuple[Piece, Piece]:
    """Left and right side of the equation with the printed numbers of ``entry``, each linked to what made it.

    The unknown of an implicit equation is the entry itself.
    """

    def leaf(name: str, index: int | None) -> Piece:
        ids = entry.id if name == formula.result else (entry.operands or {})[name]
        if not isinstance(ids, str):
            if index is None:
                raise FormulaError(f"{formula.id}: list {name} stands outside sum()")
            ids = ids[index]
        return quantity(ledger[ids], printed_unit(formula, name, ledger.system), link)

    setter = _Setter(leaf, {name: len(ids) for name, ids in (entry.operands or {}).items() if not isinstance(ids, str)})
    return setter.set(formula.equation.left), setter.set(formula.equation.right)


def inline(node: Node) -> Html:
    """An expression in symbols that stays inside a line of text: a fraction is written with a stroke."""
    return Html(_in_line(_Setter(lambda name, _: Piece(symbol_html(name), symbol_width(name))), node).html)


def quantity(entry: Entry, unit: Unit, link: Link) -> Piece:
    """The printed number of ``entry`` with its unit, linked."""
    text = quantity_text(entry, unit, word=False)
    level = QUANTITY if unit.text or TIMES in text else ATOM
    return Piece(
        linked(number_html(text), link(entry.id)), number_width(text), level, numeric=True, minus=text.startswith(MINUS)
    )


def linked(html: str, address: str) -> Html:
    """``html`` as a link, or as it is where there is no address."""
    return Html(f'<a href="{escape(address)}">{html}</a>' if address else html)


class _Setter:
    """Walks one tree. ``lists`` holds the length of each list operand when sums are to be written out."""

    def __init__(self, leaf: Leaf, lists: dict[str, int] | None = None) -> None:
        self.leaf = leaf
        self.lists = lists
        self.index: int | None = None

    def set(self, node: Node) -> Piece:
        match node:
            case Number(value, text):
                shown = format_number(value, digits_written(text))
                return Piece(
                    number_html(shown), number_width(shown), QUANTITY if TIMES in shown else ATOM, numeric=True
                )
            case Symbol("pi"):
                return Piece(symbol_html("pi"), symbol_width("pi"), numeric=self.lists is not None)
            case Symbol(name):
                return self.leaf(name, self.index)
            case Negative(operand):
                inner = _closed(self.set(operand), PRODUCT)
                return replace(inner, html=MINUS + inner.html, width=inner.width + 0.6, level=PRODUCT, minus=True)
            case Binary("+" | "-" as operator, left, right):
                return self._sum(operator, self.set(left), self.set(right))
            case Binary("*"):
                return _product([self.set(one) for one in _factors(node)], written_out=self.lists is not None)
            case Binary("/", over, under):
                return _fraction(self.set(over), self.set(under))
            case Binary("**", base, exponent):
                return self._power(self.set(base), exponent)
            case Call("sum", (argument,)):
                return self._total(argument)
            case Call(function, arguments):
                return self._call(function, [self.set(argument) for argument in arguments])
        raise FormulaError(f"{node!r} cannot be typeset")

    @staticmethod
    def _sum(operator: str, left: Piece, right: Piece) -> Piece:
        if right.level == SUM or right.minus:
            right = bracketed(right)
        sign = "+" if operator == "+" else MINUS
        return Piece(
            f"{left.html} {sign} {right.html}", left.width + right.width + 1.1, SUM, left.tall or right.tall,
            left.numeric and right.numeric, left.minus,
        )

    def _power(self, base: Piece, exponent: Node) -> Piece:
        if base.level != ATOM or base.minus:
            base = bracketed(base)
        if isinstance(exponent, Number) and exponent.text in DRAWN_RAISED and not base.tall:
            raised, wide = DRAWN_RAISED[exponent.text], 0.35
        else:
            text = _in_line(self, exponent)
            mark = ' class="t"' if base.tall else ""
            raised, wide = f"<sup{mark}>{text.html}</sup>", SMALL * text.width
        return replace(base, html=base.html + raised, width=base.width + wide, level=QUANTITY)

    def _total(self, argument: Node) -> Piece:
        """A sum over list operands: a sigma in symbols, the terms in numbers."""
        if self.lists is None:
            inner = self.set(argument)
            inner = bracketed(inner) if inner.level == SUM else inner
            return Piece(f"Σ{THIN_SPACE}{inner.html}", inner.width + width("Σ", REGULAR) + 0.2, SIGMA, inner.tall)
        total = None
        for index in range(max((self.lists.get(name, 0) for name in symbols(argument)), default=0)):
            self.index = index
            term = self.set(argument)
            total = term if total is None else self._sum("+", total, term)
        self.index = None
        return total or Piece("0", width("0", REGULAR), numeric=True)

    def _call(self, function: str, arguments: list[Piece]) -> Piece:
        inner = arguments[0]
        if function == "sqrt":
            return _radical(inner)
        if function == "abs":
            html = f'<span class="ab">{inner.html}</span>' if inner.tall else f"|{inner.html}|"
            return Piece(html, inner.width + 0.6, ATOM, inner.tall, inner.numeric)
        joined = Piece(
            ", ".join(piece.html for piece in arguments), sum(piece.width for piece in arguments), SUM,
            any(piece.tall for piece in arguments),
        )
        name = f"{_TITLES.get(function, function)}{THIN_SPACE}"
        inside = bracketed(joined)
        return replace(inside, html=name + inside.html, width=inside.width + width(function, REGULAR), level=PRODUCT)


def bracketed(piece: Piece) -> Piece:
    """``piece`` in round brackets, drawn as high as it is."""
    if piece.tall:
        return Piece(f'<span class="br">{piece.html}</span>', piece.width + _TALL_BRACKETS, ATOM, True, piece.numeric)
    return Piece(f"({piece.html})", piece.width + 2 * width("(", REGULAR), ATOM, False, piece.numeric)


def _closed(piece: Piece, level: int) -> Piece:
    return bracketed(piece) if piece.level < level or piece.minus else piece


def _factors(node: Node) -> list[Node]:
    if isinstance(node, Binary) and node.operator == "*":
        return [*_factors(node.left), *_factors(node.right)]
    return [node]


def _product(factors: list[Piece], *, written_out: bool) -> Piece:
    """Numbers are joined by a half-high dot, everything else by a space."""
    last = len(factors) - 1
    for place, factor in enumerate(factors):
        reaches_on = factor.level == SIGMA and place < last  # else it would seem to sum what follows
        if factor.level == SUM or reaches_on or (factor.minus and place):
            factors[place] = bracketed(factor)
    dots = [written_out or (before.numeric and after.numeric) for before, after in pairwise(factors)]
    total = sum(factor.width for factor in factors) + sum(0.75 if dot else 0.25 for dot in dots)
    space = " " if total > _BREAKABLE else GAP
    html = factors[0].html
    for dot, factor in zip(dots, factors[1:], strict=True):
        html += (f"{space}{DOT}{space}" if dot else GAP) + factor.html
    return Piece(
        html, total, PRODUCT, any(factor.tall for factor in factors), all(factor.numeric for factor in factors),
        factors[0].minus,
    )


def _fraction(over: Piece, under: Piece) -> Piece:
    html = f'<span class="fr"><b>{over.html}</b>{under.html}</span>'
    return Piece(
        html, max(over.width, under.width) + _FRACTION_MARGIN, FRACTION, True, over.numeric and under.numeric
    )


def _radical(inner: Piece) -> Piece:
    if inner.tall:
        html = f'<span class="fq">{inner.html}</span>'
    else:
        html = f'<span class="rt">√<span>{inner.html}</span></span>'
    return Piece(html, inner.width + _RADICAL, FRACTION, inner.tall, inner.numeric)


def _in_line(setter: _Setter, node: Node) -> Piece:
    """An exponent: fractions are written with a stroke."""
    if isinstance(node, Binary) and node.operator == "/":
        over, under = _closed(setter.set(node.left), PRODUCT), _closed(setter.set(node.right), QUANTITY)
        return Piece(f"{over.html}/{under.html}", over.width + under.width + width("/", ITALIC))
    return setter.set(node)
