"""What every sheet works on: the model, its solution and the ledger being filled."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field

from calcpack.hydraulics.curves import PumpCurves
from calcpack.hydraulics.solution import CaseSolution, Solution
from calcpack.ledger import Entry, Ledger
from calcpack.ledger.text import display_text
from calcpack.project.model import Case, Project
from calcpack.values import Value

PLACEHOLDER = re.compile(r"\{([^{}|]+)(?:\|[^{}]*)?\}")


@dataclass
class Job:
    """One build: ``project``, ``solution`` and ``fits`` (fitted curves by pump) are read, ``ledger`` is written.

    ``program`` identifies the program that computes: name, version, libraries.
    """

    project: Project
    solution: Solution
    ledger: Ledger
    fits: Mapping[str, PumpCurves]
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

    def plain(self, text: str) -> str:
        """``text`` with its ``{entry id}`` placeholders written out, for places without links."""
        return PLACEHOLDER.sub(lambda found: display_text(self.ledger[found[1]], self.ledger.system), text)


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
