"""A published equation, declared once: what the solver computes is what the sheet typesets."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass, field
from itertools import chain

import numpy as np

from calcpack.errors import FormulaError
from calcpack.formulas.expression import (
    Equation,
    Node,
    Symbol,
    evaluate,
    magnitude,
    parse,
    summed_terms,
    symbols,
)
from calcpack.quantities import KINDS, UNITS, Unit

LIST = "[]"


@dataclass(frozen=True)
class Range:
    """A range of validity: ``expression`` must lie in [low, high] (None = unbounded)."""

    expression: str
    low: float | None
    high: float | None
    tree: Node

    def holds(self, values: Mapping[str, object]) -> bool:
        """True when the expression of ``values`` lies inside the range; one without a value (0/0) lies outside."""
        try:
            with np.errstate(all="ignore"):
                value = evaluate(self.tree, values)
        except ZeroDivisionError:
            return False
        return bool((self.low is None or value >= self.low) and (self.high is None or value <= self.high))


@dataclass(frozen=True, eq=False)
class Formula:
    """One equation with its symbols, source and range.

    ``kinds`` maps each symbol to a quantity kind; a kind ending in ``[]`` is a list operand (inside ``sum``).
    ``units`` names, for empirical formulas with dimensional constants, the unit (key of ``quantities.UNITS``) that
    each symbol must be put in; every other formula holds in any coherent system. ``unknown`` is the symbol an
    implicit equation is solved for.
    """

    id: str
    title: str
    equation: Equation
    kinds: Mapping[str, str]
    source: str
    locator: str = ""
    valid: tuple[Range, ...] = ()
    note: str = ""
    units: Mapping[str, str] = field(default_factory=dict)
    unknown: str = ""

    @property
    def result(self) -> str:
        """The symbol that the formula gives."""
        if self.unknown:
            return self.unknown
        assert isinstance(self.equation.left, Symbol)
        return self.equation.left.name

    @property
    def kind(self) -> str:
        """Quantity kind of the result."""
        return self.kinds[self.result]

    @property
    def operands(self) -> tuple[str, ...]:
        """Symbols that must be supplied, in reading order, each once."""
        names = (*symbols(self.equation.left), *symbols(self.equation.right))
        return tuple(dict.fromkeys(name for name in names if name != self.result))

    @property
    def is_empirical(self) -> bool:
        """True when the constants carry units, so that the operands must be in :attr:`units`."""
        return bool(self.units)

    def evaluate(self, **values):
        """Result in SI from SI floats or numpy arrays; a list operand is a list or tuple.

        Raises FormulaError for missing or unknown symbols, for floats without a result (division by zero, root of a
        negative number), and when the formula is implicit.
        """
        if self.unknown:
            raise FormulaError(f"{self.id}: is solved for {self.unknown}, not evaluated")
        self._check_names(values, self.operands)
        on_arrays = any(isinstance(value, np.ndarray) for value in values.values())
        try:
            with np.errstate(**({} if on_arrays else dict.fromkeys(("divide", "over", "invalid"), "raise"))):
                result = evaluate(self.equation.right, self._in_own_units(values))
        except ArithmeticError as error:
            given = ", ".join(f"{name} = {value!r}" for name, value in values.items())
            raise FormulaError(f"{self.id}: no result for {given} (SI)") from error
        return UNITS[self.units[self.result]].to_si(result) if self.is_empirical else result

    def evaluate_as_printed(self, values: Mapping[str, object]) -> tuple[float, float, float]:
        """Left side, right side and the size of the terms of the right one, for the hand-check.

        ``values`` (result included) are numbers already in the units of the printed line. Sides without a result are
        nan.
        """
        left, right = self.equation.left, self.equation.right
        try:
            with np.errstate(all="ignore"):
                return float(evaluate(left, values)), float(evaluate(right, values)), float(magnitude(right, values))
        except ArithmeticError:
            return math.nan, math.nan, math.nan

    def residual(self, **values) -> float:
        """``left - right`` of the equation with the unknown's value among ``values``, relative to the left side."""
        self._check_names(values, (*self.operands, self.result))
        left = evaluate(self.equation.left, values)
        return (left - evaluate(self.equation.right, values)) / left

    def outside_range(self, **values) -> tuple[Range, ...]:
        """The declared ranges that the SI ``values`` (result included) leave."""
        values = self._in_own_units(values)
        return tuple(limits for limits in self.valid if not limits.holds(values))

    def _in_own_units(self, values: Mapping[str, object]) -> Mapping[str, object]:
        """SI values in the units that an empirical formula demands; unchanged for every other formula."""
        if not self.is_empirical:
            return values
        return {name: _from_si(UNITS[self.units[name]], value) for name, value in values.items()}

    def _check_names(self, values: Mapping[str, object], wanted: tuple[str, ...]) -> None:
        if set(values) != set(wanted):
            raise FormulaError(f"{self.id}: needs {', '.join(wanted)}; got {', '.join(values) or 'nothing'}")


def _from_si(unit: Unit, value):
    if isinstance(value, (list, tuple)):
        return [unit.from_si(one) for one in value]
    return unit.from_si(value)


FORMULAS: dict[str, Formula] = {}


def formula(
    id: str,
    title: str,
    text: str,
    *,
    source: str,
    locator: str = "",
    valid: Mapping[str, tuple[float | None, float | None]] | None = None,
    note: str = "",
    units: Mapping[str, str] | None = None,
    unknown: str = "",
    **kinds: str,
) -> Formula:
    """Declare a formula and enter it in :data:`FORMULAS`.

    Raises FormulaError at import for a duplicate id, a missing source, a symbol without kind, a kind without symbol,
    an unknown kind or unit, a list operand outside ``sum``, units for some symbols only, or an implicit equation
    without ``unknown``.
    """
    equation = parse(text)
    names = set(symbols(equation.left)) | set(symbols(equation.right))
    if id in FORMULAS:
        raise FormulaError(f"{id}: declared twice")
    if not source:
        raise FormulaError(f"{id}: a formula without a source is refused")
    if names != set(kinds):
        raise FormulaError(f"{id}: symbols and kinds differ: {', '.join(sorted(names ^ set(kinds)))}")
    for name, kind in kinds.items():
        if kind.removesuffix(LIST) not in KINDS:
            raise FormulaError(f"{id}: {name}: {kind!r} is not a quantity kind")
    for name, unit in (units or {}).items():
        if name not in kinds or unit not in UNITS:
            raise FormulaError(f"{id}: units: {name} = {unit!r} is not known")
    if units and set(units) != names:
        raise FormulaError(f"{id}: units: every symbol needs one; without: {', '.join(sorted(names - set(units)))}")
    _check_lists(id, equation, {name for name, kind in kinds.items() if kind.endswith(LIST)})
    if not unknown and not (equation.is_explicit and equation.left.name in kinds):
        raise FormulaError(f"{id}: an implicit equation names its unknown")
    if unknown and unknown not in names:
        raise FormulaError(f"{id}: the unknown {unknown!r} is not in the equation")
    ranges = []
    for expression, (low, high) in (valid or {}).items():
        tree = parse(f"range = {expression}").right
        if not set(symbols(tree)) <= names:
            raise FormulaError(f"{id}: range {expression!r} uses a symbol that the equation has not")
        ranges.append(Range(expression, low, high, tree))
    made = Formula(id, title, equation, dict(kinds), source, locator, tuple(ranges), note, dict(units or {}), unknown)
    FORMULAS[id] = made
    return made


def _check_lists(id: str, equation: Equation, lists: set[str]) -> None:
    terms = [list(symbols(term)) for side in (equation.left, equation.right) for term in summed_terms(side)]
    if any(not lists & set(term) for term in terms):
        raise FormulaError(f"{id}: a sum without a list operand")
    outside = Counter([*symbols(equation.left), *symbols(equation.right)]) - Counter(chain.from_iterable(terms))
    if stray := lists & set(outside):
        raise FormulaError(f"{id}: list operand outside a sum: {', '.join(sorted(stray))}")
