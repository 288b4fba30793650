"""What every sheet works on: the model, its solution and the ledger being filled."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from calcpack.hydraulics.solution import CaseSolution, Solution
from calcpack.ledger import Entry, Ledger
from calcpack.project.model import Case, Line, Node, Project
from calcpack.values import Value


@dataclass
class Job:
    """One build: ``project`` and ``solution`` are read, ``ledger`` is written."""

    project: Project
    solution: Solution
    ledger: Ledger
    program: Mapping[str, str] = field(default_factory=dict)

    @property
    def cases(self) -> tuple[Case, ...]:
        """Operating cases in project order."""
        return self.project.cases

    def solved(self, case: Case) -> CaseSolution:
        """Solution of one case."""
        return self.solution.cases[case.id]

    def input(self, entry_id: str, value: Value, symbol: str, title: str, case: Case | None = None) -> Entry:
        """Book an input value. A case that overrides it gets an entry of its own, ``<id>@<case>``."""
        if entry_id in self.ledger:
            booked = self.ledger[entry_id]
            if booked.value == value.si and booked.kind == value.kind:
                return booked
            entry_id = f"{entry_id}@{case.id}" if case else entry_id
        return self.ledger.given(entry_id, value, symbol, title)

    def at(self, entry_id: str, case: Case) -> Entry:
        """The entry of this case, or the one that all cases share."""
        own = f"{entry_id}@{case.id}"
        return self.ledger[own] if own in self.ledger else self.ledger[entry_id]

    def once(self, base_id: str, formula, case: Case, **operands) -> Entry:
        """Apply a formula whose operands most cases share: booked once, and again only where operands differ."""
        for entry_id in (base_id, f"{base_id}@{case.id}"):
            if entry_id not in self.ledger:
                return self.ledger.apply(entry_id, formula, **operands)
            booked = self.ledger[entry_id]
            if booked.operands == {name: _ids(operand) for name, operand in operands.items()}:
                return booked
        raise AssertionError(f"{base_id}: a case books one value")

    def gravity(self) -> Entry:
        """Acceleration of gravity used throughout."""
        return self.input("site/g", self.project.system.site.gravity, "g", "Acceleration of gravity")

    def density(self, case: Case) -> Entry:
        """Density of the liquid in a case."""
        return self.ledger[f"liquid/rho@{case.temperature}"]

    def line_cases(self, line: Line) -> tuple[Case, ...]:
        """Cases in which the line exists and carries flow."""
        return tuple(case for case in self.cases if f"{line.tag}/h_L@{case.id}" in self.ledger)

    def node(self, case: Case, tag: str) -> Node:
        """A node as the case has it."""
        return case.system.nodes[tag]


def _ids(operand) -> str | tuple[str, ...]:
    if isinstance(operand, Entry):
        return operand.id
    if isinstance(operand, str):
        return operand
    return tuple(_ids(one) for one in operand)


def case_label(case: Case) -> str:
    """How a case is named in tables: its id and title."""
    return f"{case.id} {case.title}"


def greatest(ledger: Ledger, ids: list[str]) -> Entry:
    """The entry of greatest value; the first of equals."""
    return max((ledger[one] for one in ids), key=lambda entry: entry.value)


def least(ledger: Ledger, ids: list[str]) -> Entry:
    """The entry of least value; the first of equals."""
    return min((ledger[one] for one in ids), key=lambda entry: entry.value)
