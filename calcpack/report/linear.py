"""A formula as one line of plain text: the text alternative of the typeset equation."""

from __future__ import annotations

from calcpack.digits import MINUS
from calcpack.formulas import Formula
from calcpack.formulas.expression import Binary, Call, Negative, Node, Number, Symbol
from calcpack.report.symbols import symbol_text

_LEVELS = {"+": 1, "-": 1, "*": 2, "/": 2, "**": 4}
_NEGATIVE = 3
_ATOM = 5
_SIGNS = {"+": " + ", "-": f" {MINUS} ", "*": " · ", "/": " / ", "**": "^"}
_TITLES = {"sqrt": "√", "log10": "log₁₀ ", "sum": "Σ "}


def linear(formula: Formula) -> str:
    """``h_f = f · (L / D) · (V^2 / (2 · g))``: brackets wherever reading from the left would go wrong."""
    return f"{expression(formula.equation.left)} = {expression(formula.equation.right)}"


def expression(node: Node) -> str:
    """One side of an equation as plain text."""
    return _text(node)[0]


def _text(node: Node) -> tuple[str, int]:
    match node:
        case Number(_, text):
            return text, _ATOM
        case Symbol(name):
            return symbol_text(name), _ATOM
        case Negative(operand):
            return MINUS + _inside(operand, _NEGATIVE), _NEGATIVE
        case Binary(operator, left, right):
            level = _LEVELS[operator]
            # a - (b - c), a / (b * c), (a / b) * c and both (x^y)^z and x^(y^z) show their brackets
            is_mixed = level == 2 and isinstance(left, Binary) and left.operator == "/"
            before = _inside(left, level + 1 if operator == "**" or is_mixed else level)
            return f"{before}{_SIGNS[operator]}{_inside(right, level + 1)}", level
        case Call(function, arguments):
            inside = ", ".join(_text(argument)[0] for argument in arguments)
            return f"{_TITLES.get(function, function)}({inside})", _ATOM
    raise TypeError(f"{node!r} is not a node of the formula language")


def _inside(node: Node, level: int) -> str:
    text, own = _text(node)
    return text if own >= level else f"({text})"
