"""Differences between two results that should agree."""

from __future__ import annotations

from calcpack.formulas.criteria import deviation
from calcpack.ledger import Entry
from calcpack.sheets.job import Job


def difference(job: Job, entry_id: str, symbol: str, title: str, *, own: Entry, other: Entry) -> Entry:
    """Book ``other / own - 1``.

    It is booked as found, not as a line to redo by hand: two nearly equal numbers would have to print nine digits each.
    """
    formula = deviation(own.kind)
    value = float(formula.evaluate(x_2=other.value, x_1=own.value)) if own.value else 0.0
    return job.ledger.found(
        entry_id, value, symbol, title, "fraction", source=formula.source, locator="second over first, less one",
        residual=0.0, case=own.case, digits=2, operands={"x_2": other.id, "x_1": own.id},
    )
