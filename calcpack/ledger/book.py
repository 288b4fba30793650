"""The ledger: every printed number is booked here once, with its voucher."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable, Iterator, Sequence

from calcpack.digits import DEFAULT_DIGITS, MAX_DIGITS, digits_written, round_significant
from calcpack.errors import LedgerError
from calcpack.formulas import FORMULAS, Formula
from calcpack.formulas.expression import magnitude
from calcpack.formulas.formula import LIST
from calcpack.ledger import entry as origin
from calcpack.ledger.entry import Citation, Entry
from calcpack.quantities import KINDS
from calcpack.values import LOOKED_UP, SUPPLIED, Value

_WITHOUT_VALUE = (origin.CHOSEN, origin.SERIES, origin.CHECK)
_ORIGIN_OF_STATUS = {SUPPLIED: origin.ASSUMED, LOOKED_UP: origin.LOOKED_UP}
NOISE = 1e-13  # share of the terms of a difference that floating-point arithmetic leaves over
Operand = Entry | str | Sequence[Entry | str]
_NUMBER = re.compile(r"[-+]?[0-9][0-9_ ]*\.?[0-9]*(?:[eE][-+]?[0-9]+)?|[-+]?\.[0-9]+")


class Ledger:
    """Entries by id in booking order. ``system`` ('SI' or 'US') is the unit system that the package prints in."""

    def __init__(self, system: str) -> None:
        self.system = system
        self._entries: dict[str, Entry] = {}

    def __getitem__(self, entry_id: str) -> Entry:
        try:
            return self._entries[entry_id]
        except KeyError:
            raise LedgerError(f"no entry {entry_id!r} in the ledger") from None

    def __contains__(self, entry_id: object) -> bool:
        return entry_id in self._entries

    def __iter__(self) -> Iterator[Entry]:
        return iter(self._entries.values())

    def __len__(self) -> int:
        return len(self._entries)

    def given(self, entry_id: str, value: Value, symbol: str, title: str, *, note: str = "") -> Entry:
        """Book an input of the project, a catalog or property value, or the program's own supply (an assumption).

        Booking the same input twice gives the entry that is there. Raises LedgerError when that one is another number.
        """
        if entry_id in self._entries:
            booked = self._entries[entry_id]
            if (booked.value, booked.kind) != (value.si, value.kind):
                raise LedgerError(f"{entry_id}: booked with {booked.written or booked.value}, now given {value.text}")
            return booked
        from_bibliography = value.status in (SUPPLIED, LOOKED_UP)
        citation = Citation(value.source, value.locator) if from_bibliography else Citation(text=value.source)
        return self._book(
            Entry(
                entry_id, title, symbol, value.kind, value.si,
                _ORIGIN_OF_STATUS.get(value.status, origin.GIVEN),
                citation=citation, status=value.status, note=note or value.note, written=value.text, path=value.path,
                place=f"{value.file}:{value.line}" if value.line else value.file,
                digits=self._digits_given(value),
            )
        )

    def looked_up(
        self, entry_id: str, value: float, symbol: str, title: str, kind: str, *,
        source: str, locator: str = "", note: str = "", digits: int | None = None, case: str = "",
    ) -> Entry:
        """Book a catalog row or a liquid property; ``source`` is a key of the bibliography."""
        entry = Entry(
            entry_id, title, symbol, kind, float(value), origin.LOOKED_UP,
            citation=Citation(source, locator), note=note, case=case,
        )
        if digits is not None:
            entry.digits = digits
        return self._book(entry)

    def apply(
        self, entry_id: str, formula: Formula, *, title: str = "", symbol: str = "", case: str = "", note: str = "",
        **operands: Operand,
    ) -> Entry:
        """Evaluate an explicit formula on booked operands and book the result.

        Operands are entries, ids, or lists of them for list operands. Ranges of validity that are left become
        findings of the entry. Raises LedgerError for an operand of another kind and for a result that is no number.
        """
        ids, values = self._resolve(formula, operands)
        result = float(formula.evaluate(**values))
        if not formula.is_empirical and abs(result) <= NOISE * magnitude(formula.equation.right, values):
            result = 0.0  # equal terms: what is left is the noise of the arithmetic
        findings = self._findings(formula, {**values, formula.result: result})
        return self._book(
            Entry(
                entry_id, title or formula.title, symbol or formula.result, formula.kind, result, origin.APPLIED,
                formula=formula.id, operands=ids, citation=Citation(formula.source, formula.locator), case=case,
                note=note or formula.note, findings=findings,
            )
        )

    def solved(
        self, entry_id: str, formula: Formula, value: float, *, title: str = "", symbol: str = "", case: str = "",
        note: str = "", **operands: Operand,
    ) -> Entry:
        """Book the root ``value`` of an implicit formula with the residual that its own tree leaves."""
        ids, values = self._resolve(formula, operands)
        values[formula.result] = value
        return self._book(
            Entry(
                entry_id, title or formula.title, symbol or formula.result, formula.kind, float(value), origin.SOLVED,
                formula=formula.id, operands=ids, citation=Citation(formula.source, formula.locator), case=case,
                note=note or formula.note, residual=float(formula.residual(**values)),
                findings=self._findings(formula, values),
            )
        )

    def found(
        self, entry_id: str, value: float, symbol: str, title: str, kind: str, *,
        source: str, locator: str = "", residual: float, case: str = "", note: str = "",
        operands: dict[str, origin.OperandIds] | None = None, digits: int | None = None,
    ) -> Entry:
        """Book what the network solver found (a flow), with the residual of the equation that it satisfies."""
        entry = Entry(
            entry_id, title, symbol, kind, float(value), origin.SOLVED, operands=operands,
            citation=Citation(source, locator), case=case, note=note, residual=float(residual),
        )
        if digits is not None:
            entry.digits = digits
        return self._book(entry)

    def chosen(
        self, entry_id: str, choice: str, title: str, *, reason: str, source: str = "", locator: str = "",
        case: str = "", value: float = math.nan, kind: str = "dimensionless", symbol: str = "",
        operands: dict[str, origin.OperandIds] | None = None,
    ) -> Entry:
        """Book a choice from candidates, with its reason."""
        return self._book(
            Entry(
                entry_id, title, symbol, kind, value, origin.CHOSEN, citation=Citation(source, locator), case=case,
                note=reason, choice=choice, operands=operands,
            )
        )

    def series(
        self, entry_id: str, title: str, symbol: str, kind: str, points: Iterable[tuple[float, float]], *,
        points_kind: str, formula: str = "", operands: dict[str, origin.OperandIds] | None = None, source: str = "",
        case: str = "", note: str = "",
    ) -> Entry:
        """Book a plotted curve: ``points`` are (swept value of ``points_kind``, value of ``kind``), SI."""
        pairs = tuple((float(x), float(y)) for x, y in points)
        return self._book(
            Entry(
                entry_id, title, symbol, kind, math.nan, origin.SERIES, formula=formula, operands=operands,
                citation=Citation(source), case=case, note=note, points=pairs, points_kind=points_kind,
            )
        )

    def check(
        self, entry_id: str, title: str, *, value: Entry, limit: Entry, comparison: str, margin: Entry, verdict: str,
        citation: Citation | None = None, note: str = "", warning: str = "",
    ) -> Entry:
        """Book a criterion: ``value comparison limit`` (comparison '≤' or '≥') with its margin and verdict.

        The source is the limit's own unless ``citation`` says otherwise.
        """
        if verdict not in origin.VERDICTS or comparison not in origin.COMPARISONS:
            raise LedgerError(f"{entry_id}: {comparison!r}, {verdict!r}: not a comparison and a verdict")
        self._require_kind(entry_id, "limit", value.kind, limit)
        excess = value.value - limit.value if comparison == origin.AT_MOST else limit.value - value.value
        noise = 1e-9 * max(abs(value.value), abs(limit.value))
        if (verdict == origin.MET and not excess <= noise) or (verdict == origin.NOT_MET and not excess >= -noise):
            raise LedgerError(f"{entry_id}: {value.value!r} {comparison} {limit.value!r} (SI) is not {verdict!r}")
        return self._book(
            Entry(
                entry_id, title, value.symbol, margin.kind, margin.value, origin.CHECK,
                operands={"value": value.id, "limit": limit.id, "margin": margin.id}, comparison=comparison,
                citation=citation or limit.citation, case=value.case, note=note, verdict=verdict, warning=warning,
            )
        )

    def not_decided(
        self, entry_id: str, title: str, verdict: str, reason: str, *, source: str = "", case: str = ""
    ) -> Entry:
        """Book a criterion that could not be decided: not checked, out of range, or referred; with the reason."""
        if verdict not in (origin.NOT_CHECKED, origin.OUT_OF_RANGE, origin.REFER):
            raise LedgerError(f"{entry_id}: {verdict!r} needs a value and a limit")
        return self._book(
            Entry(entry_id, title, "", "dimensionless", math.nan, origin.CHECK, citation=Citation(source), case=case,
                  note=reason, verdict=verdict)
        )

    def of_origin(self, *origins: str) -> list[Entry]:
        """Entries of these origins in booking order."""
        return [entry for entry in self if entry.origin in origins]

    def users(self) -> dict[str, list[str]]:
        """Entry id -> ids of the entries that use it, in booking order."""
        users: dict[str, list[str]] = {entry.id: [] for entry in self}
        for entry in self:
            for operand in dict.fromkeys(entry.operand_ids()):
                users[operand].append(entry.id)
        return users

    def _book(self, entry: Entry) -> Entry:
        if entry.id in self._entries:
            raise LedgerError(f"{entry.id}: booked twice")
        if not math.isfinite(entry.value) and entry.origin not in _WITHOUT_VALUE:
            raise LedgerError(f"{entry.id}: {entry.value} is no value; operands: {entry.operands or 'none'}")
        if entry.kind not in KINDS:
            raise LedgerError(f"{entry.id}: {entry.kind!r} is not a quantity kind")
        for operand in entry.operand_ids():
            if operand not in self._entries:
                raise LedgerError(f"{entry.id}: operand {operand!r} is not booked")
        self._entries[entry.id] = entry
        return entry

    def _resolve(self, formula: Formula, operands: dict[str, Operand]) -> tuple[dict, dict]:
        if set(operands) != set(formula.operands):
            raise LedgerError(f"{formula.id}: needs {', '.join(formula.operands)}; got {', '.join(operands)}")
        ids: dict[str, origin.OperandIds] = {}
        values: dict[str, object] = {}
        for name in formula.operands:
            kind, operand = formula.kinds[name], operands[name]
            if kind.endswith(LIST) != isinstance(operand, (list, tuple)):
                wanted = "a list of entries" if kind.endswith(LIST) else "one entry"
                raise LedgerError(f"{formula.id}: {name} takes {wanted}")
            if kind.endswith(LIST):
                entries = [self._entry(one, kind.removesuffix(LIST), formula, name) for one in operand]
                ids[name] = tuple(entry.id for entry in entries)
                values[name] = [entry.value for entry in entries]
            else:
                entry = self._entry(operand, kind, formula, name)
                ids[name] = entry.id
                values[name] = entry.value
        return ids, values

    def _entry(self, operand: object, kind: str, formula: Formula, name: str) -> Entry:
        entry = operand if isinstance(operand, Entry) else self[str(operand)]
        self._require_kind(formula.id, name, kind, entry)
        return entry

    @staticmethod
    def _require_kind(where: str, name: str, kind: str, entry: Entry) -> None:
        """Kinds agree when their units do; a gauge pressure is no absolute one."""
        have, wanted = KINDS[entry.kind], KINDS[kind]
        if have.coherent != wanted.coherent or (have.word and wanted.word and have.word != wanted.word):
            raise LedgerError(f"{where}: {name} must be of kind {kind}; {entry.id} is of kind {entry.kind}")

    def _digits_given(self, value: Value) -> int:
        """Digits as written where they carry the whole number in the printed units, else no fewer than usual."""
        number = _NUMBER.match(value.text.strip())
        if not number:
            return DEFAULT_DIGITS
        digits, kind = min(digits_written(number.group()), MAX_DIGITS), KINDS[value.kind]
        shown, coherent = kind.display_unit(self.system), kind.coherent_unit(self.system)
        for unit in (shown,) if shown.offset else (shown, coherent):  # kelvins are not what a temperature prints in
            printed = unit.from_si(value.si)
            if not math.isclose(round_significant(printed, digits), printed, rel_tol=1e-12):
                return max(digits, DEFAULT_DIGITS)
        return digits

    @staticmethod
    def _findings(formula: Formula, values: dict) -> tuple[str, ...]:
        return tuple(limits.expression for limits in formula.outside_range(**values))


def formula_of(entry: Entry) -> Formula:
    """The formula that made the entry. Raises LedgerError for an entry without one."""
    try:
        return FORMULAS[entry.formula]
    except KeyError:
        raise LedgerError(f"{entry.id}: made without a formula") from None
