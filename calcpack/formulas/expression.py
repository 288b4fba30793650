"""Formula text -> tree: a small closed language that is both evaluated and typeset.

Names, real numbers, ``+ - * / **``, brackets and the functions of :data:`FUNCTIONS`; nothing else parses.
The text is read with Python's own grammar and every node, called name and constant is checked, so that no
attribute, subscript, string, keyword or unknown call gets through. Both the solver and the sheets evaluate the
same tree on floats or numpy arrays.
"""

from __future__ import annotations

import ast
import math
import operator
import re
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from functools import reduce

import numpy as np

from calcpack.errors import FormulaError


@dataclass(frozen=True)
class Number:
    """A constant; ``text`` is how the author wrote it and how it prints."""

    value: float
    text: str


@dataclass(frozen=True)
class Symbol:
    """A name to be replaced by a value."""

    name: str


@dataclass(frozen=True)
class Negative:
    """Minus in front of a term."""

    operand: Node


@dataclass(frozen=True)
class Binary:
    """``left operator right`` with operator one of ``+ - * / **``."""

    operator: str
    left: Node
    right: Node


@dataclass(frozen=True)
class Call:
    """A call of one of :data:`FUNCTIONS`."""

    function: str
    arguments: tuple[Node, ...]


Node = Number | Symbol | Negative | Binary | Call

OPERATORS: dict[type, str] = {ast.Add: "+", ast.Sub: "-", ast.Mult: "*", ast.Div: "/", ast.Pow: "**"}


def _power(base, exponent):
    """``base ** exponent``, refused where Python would turn complex: a root of a negative number."""
    result = base**exponent
    if isinstance(result, complex):
        raise ArithmeticError(f"{base!r}**{exponent!r} is not real")
    return result


_APPLY: dict[str, Callable] = {
    "+": operator.add,
    "-": operator.sub,
    "*": operator.mul,
    "/": operator.truediv,
    "**": _power,
}


# name -> (callable, number of arguments); ``sum`` runs over list operands and is evaluated by sum_terms
FUNCTIONS: dict[str, tuple[Callable | None, int]] = {
    "sqrt": (np.sqrt, 1),
    "log10": (np.log10, 1),
    "ln": (np.log, 1),
    "exp": (np.exp, 1),
    "sin": (np.sin, 1),
    "abs": (np.abs, 1),
    "min": (np.minimum, 2),
    "max": (np.maximum, 2),
    "sum": (None, 1),
}
CONSTANTS = {"pi": math.pi}
MAX_LENGTH = 400
_DECIMAL = re.compile(r"(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][-+]?[0-9]+)?")


@dataclass(frozen=True)
class Equation:
    """``left = right`` as trees. An explicit formula has a bare symbol on the left."""

    text: str
    left: Node
    right: Node

    @property
    def is_explicit(self) -> bool:
        """True when the left side is one symbol that the right side does not use."""
        return isinstance(self.left, Symbol) and self.left.name not in set(symbols(self.right))


def parse(text: str) -> Equation:
    """Read ``"h_f = f * (L / D) * (V**2 / (2*g))"``.

    Raises FormulaError naming the text and the part that the language does not know.
    """
    if len(text) > MAX_LENGTH:
        raise FormulaError(f"{text[:40]}...: longer than {MAX_LENGTH} characters")
    if not text.isascii() or "#" in text:
        raise FormulaError(f"{text!r}: a formula is plain ASCII without remarks; Greek letters are named (rho, eta)")
    left, equals, right = text.partition("=")
    if not equals or "=" in right:
        raise FormulaError(f"{text!r}: a formula is 'left = right' with exactly one '='")
    return Equation(text, _read(left, text), _read(right, text))


def _read(side: str, text: str) -> Node:
    try:
        tree = ast.parse(side.strip(), mode="eval").body
    except (SyntaxError, ValueError, RecursionError, MemoryError) as error:
        raise FormulaError(f"{text!r}: cannot be read: {side.strip()!r}") from error
    return _convert(tree, side.strip(), text)


def _convert(node: ast.AST, side: str, text: str) -> Node:
    if isinstance(node, ast.Constant):
        written = ast.get_source_segment(side, node) or ""
        if not _DECIMAL.fullmatch(written) or not math.isfinite(float(written)):
            raise FormulaError(f"{text!r}: {written} is not a decimal number")
        return Number(float(written), written)
    if isinstance(node, ast.Name):
        if node.id in FUNCTIONS:
            raise FormulaError(f"{text!r}: function {node.id!r} is used as a symbol")
        return Symbol(node.id)
    if isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub):
        return Negative(_convert(node.operand, side, text))
    if isinstance(node, ast.BinOp) and type(node.op) in OPERATORS:
        return Binary(OPERATORS[type(node.op)], _convert(node.left, side, text), _convert(node.right, side, text))
    if isinstance(node, ast.Call):
        if not isinstance(node.func, ast.Name) or node.func.id not in FUNCTIONS:
            raise FormulaError(f"{text!r}: only these functions may be called: {', '.join(FUNCTIONS)}")
        if node.keywords or any(isinstance(argument, ast.Starred) for argument in node.args):
            raise FormulaError(f"{text!r}: {node.func.id} takes plain arguments only")
        wanted = FUNCTIONS[node.func.id][1]
        if len(node.args) != wanted:
            raise FormulaError(f"{text!r}: {node.func.id} takes {wanted} argument(s), not {len(node.args)}")
        return Call(node.func.id, tuple(_convert(argument, side, text) for argument in node.args))
    raise FormulaError(f"{text!r}: {type(node).__name__} is not part of the formula language")


def symbols(node: Node) -> Iterator[str]:
    """Names of the symbols in reading order, repeats included, constants such as pi left out."""
    match node:
        case Symbol(name):
            if name not in CONSTANTS:
                yield name
        case Negative(operand):
            yield from symbols(operand)
        case Binary(_, left, right):
            yield from symbols(left)
            yield from symbols(right)
        case Call(_, arguments):
            for argument in arguments:
                yield from symbols(argument)


def summed_terms(node: Node) -> Iterator[Node]:
    """The terms that stand inside ``sum``."""
    match node:
        case Call("sum", (term,)):
            yield term
        case Negative(operand):
            yield from summed_terms(operand)
        case Binary(_, left, right):
            yield from summed_terms(left)
            yield from summed_terms(right)
        case Call(_, arguments):
            for argument in arguments:
                yield from summed_terms(argument)


def evaluate(node: Node, values: Mapping[str, object]):
    """Value of the tree with ``values``: floats or arrays that broadcast; a list operand is a list or tuple of them.

    Python floats raise ArithmeticError (division by zero, root of a negative number), arrays follow numpy.
    """
    match node:
        case Number(value, _):
            return value
        case Symbol(name):
            return values[name] if name in values else CONSTANTS[name]
        case Negative(operand):
            return -evaluate(operand, values)
        case Binary(symbol, left, right):
            return _APPLY[symbol](evaluate(left, values), evaluate(right, values))
        case Call("sum", (term,)):
            return sum_terms(term, values)
        case Call(function, arguments):
            return FUNCTIONS[function][0](*(evaluate(argument, values) for argument in arguments))
    raise FormulaError(f"{node!r} is not a node of the formula language")


def sum_terms(term: Node, values: Mapping[str, object], value_of: Callable = evaluate):
    """Sum of ``value_of(term)`` over the entries of its list operands, taken side by side; 0 for empty lists.

    Raises FormulaError when there is no list operand or their lengths differ.
    """
    lists = {name: values[name] for name in symbols(term) if isinstance(values[name], (list, tuple))}
    lengths = {name: len(entries) for name, entries in lists.items()}
    if not lists or len(set(lengths.values())) != 1:
        raise FormulaError(f"sum: needs lists of one length, got {lengths or 'no list'}")
    rows = [dict(zip(lists, row, strict=True)) for row in zip(*lists.values(), strict=True)]
    terms = [value_of(term, {**values, **row}) for row in rows]
    return reduce(operator.add, terms) if terms else 0.0


def magnitude(node: Node, values: Mapping[str, object]):
    """Size of the terms behind :func:`evaluate`: differences are added up instead, signs are dropped.

    The rounding of a result is a share of this, however small the result itself is.
    """
    match node:
        case Negative(operand):
            return magnitude(operand, values)
        case Binary("+" | "-", left, right):
            return magnitude(left, values) + magnitude(right, values)
        case Binary("*", left, right):
            return magnitude(left, values) * magnitude(right, values)
        case Binary("/", left, right):
            return magnitude(left, values) / abs(evaluate(right, values))
        case Call("sum", (term,)):
            return sum_terms(term, values, magnitude)
    return abs(evaluate(node, values))
