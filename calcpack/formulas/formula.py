"""A published equation, declared once: what the solver computes is what the sheet typesets."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from calcpack.errors import FormulaError
from calcpack.formulas.expression import Equation, Node, Symbol, evaluate, parse, symbols
from calcpack.quantities import KINDS, UNITS

LIST = "[]"


@dataclass(frozen=True)
class Range:
    """A range of validity: ``expression`` must lie in [low, high] (None = unbounded)."""

    expression: str
    low: float | None
    high: float | None
    tree: Node

    def holds(self, values: Mapping[str, object]) -> bool:
        """True when the expression of ``values`` lies inside the range."""
        value = evaluate(self.tree, values)
        return (self.low is None or value >= self.low) and (self.high is None or value <= self.high)


@dataclass(frozen=True)
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
        """Result in SI from SI floats or numpy arrays. Raises FormulaError for missing or unknown symbols."""
        self._check_names(values, self.operands)
        if not self.is_empirical:
            return evaluate(self.equation.right, values)
        demanded = {name: UNITS[self.units.get(name, "")].from_si(value) for name, value in values.items()}
        return UNITS[self.units.get(self.result, "")].to_si(evaluate(self.equation.right, demanded))

    def evaluate_as_printed(self, values: Mapping[str, object]):
        """Result from numbers that are already in the units of the printed line (the hand-check)."""
        return evaluate(self.equation.right, values)

    def residual(self, **values) -> float:
        """``left - right`` of the equation with the unknown's value among ``values``, relative to the left side."""
        self._check_names(values, (*self.operands, self.result))
        left = evaluate(self.equation.left, values)
        return (left - evaluate(self.equation.right, values)) / left

    def outside_range(self, **values) -> tuple[Range, ...]:
        """The declared ranges that the SI ``values`` (result included) leave."""
        if self.is_empirical:
            values = {name: UNITS[self.units.get(name, "")].from_si(value) for name, value in values.items()}
        return tuple(limits for limits in self.valid if not limits.holds(values))

    def _check_names(self, values: Mapping[str, object], wanted: tuple[str, ...]) -> None:
        if set(values) != set(wanted):
            raise FormulaError(f"{self.id}: needs {', '.join(wanted)}; got {', '.join(values) or 'nothing'}")


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
    an unknown kind or unit, or an implicit equation without ``unknown``.
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
    if not unknown and not equation.is_explicit:
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
