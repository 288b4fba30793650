"""Criteria: compare booked values with booked limits, find the governing case, and book the verdict."""

from __future__ import annotations

from collections.abc import Sequence

from calcpack.formulas import criteria
from calcpack.ledger import Citation, Entry
from calcpack.ledger.entry import MET, MET_WITH_WARNING, NOT_MET
from calcpack.sheets.job import Job
from calcpack.values import SUPPLIED, Value

AT_LEAST = "≥"
AT_MOST = "≤"


def house_limit(job: Job, name: str, kind: str, text: str, si: float, title: str, *, source: str = "COMMON",
                note: str = "", symbol: str = "x_lim") -> Entry:
    """A limit that the project may set in ``limits:``; else the program supplies it as a numbered assumption."""
    value = job.project.limits.get(name) or Value(si, kind, text, source=source, status=SUPPLIED, note=note)
    return job.input(f"limits/{name}", value, symbol, title)


def judge(
    job: Job,
    key: str,
    title: str,
    values: Sequence[Entry],
    limit: Entry | Sequence[Entry],
    comparison: str,
    *,
    citation: Citation | None = None,
    band: Entry | None = None,
    advisory: Sequence[Entry] = (),
    note: str = "",
    warning: str = "",
) -> Entry:
    """Book ``check/<key>``: every value against its limit, the least margin governs.

    ``limit`` is one entry or one for each value. A margin under ``band`` (fraction) gives a warning, and so does an
    ``advisory`` value beyond the limit: values that good practice wants inside but that do not decide.
    """
    limits = list(limit) if isinstance(limit, Sequence) else [limit] * (len(values) + len(advisory))
    margins = [
        _margin(job, key, value, bound, comparison) for value, bound in zip([*values, *advisory], limits, strict=True)
    ]
    deciding = range(len(values))
    worst = min(deciding, key=lambda index: margins[index].value)
    verdict, reason = MET, ""
    if margins[worst].value < 0:
        verdict = NOT_MET
    elif band is not None and margins[worst].value < band.value:
        verdict, reason = MET_WITH_WARNING, warning or f"margin under {{{band.id}|quantity}}"
    else:
        beyond = [index for index in range(len(values), len(margins)) if margins[index].value < 0]
        if beyond:
            worst = min(beyond, key=lambda index: margins[index].value)
            verdict, reason = MET_WITH_WARNING, warning
    value = [*values, *advisory][worst]
    return job.ledger.check(
        f"check/{key}", title, value=value, limit=limits[worst], comparison=comparison, margin=margins[worst],
        verdict=verdict, citation=citation, note=note, warning=reason,
    )


def _margin(job: Job, key: str, value: Entry, limit: Entry, comparison: str) -> Entry:
    suffix = f"@{value.case}" if value.case else ""
    entry_id = f"check/{key}/m{suffix}"
    if limit.value == 0.0:  # a relative margin to zero has no meaning
        formula = criteria.excess(value.kind)
    else:
        formula = criteria.margin_below(value.kind) if comparison == AT_MOST else criteria.margin_above(value.kind)
    return job.ledger.apply(entry_id, formula, case=value.case, x=value, x_lim=limit)
