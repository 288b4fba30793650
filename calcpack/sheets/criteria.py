"""Criteria: compare booked values with booked limits, find the governing case, and book the verdict."""

from __future__ import annotations

from collections.abc import Sequence

from calcpack.formulas import Formula, criteria
from calcpack.ledger import Citation, Entry
from calcpack.ledger.entry import MET, MET_WITH_WARNING, NOT_MET
from calcpack.sheets.job import Job
from calcpack.values import SUPPLIED, Value

AT_LEAST = "≥"
AT_MOST = "≤"
MARGIN_DIGITS = 2


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
    ``values`` may be empty where none decides.
    """
    limits = list(limit) if isinstance(limit, Sequence) else [limit] * (len(values) + len(advisory))
    pairs = list(zip([*values, *advisory], limits, strict=True))
    margins = [_margin(comparison, value, bound) for value, bound in pairs]
    worst = min(range(len(values) or len(margins)), key=margins.__getitem__)
    verdict, reason = MET, ""
    if values and margins[worst] < 0:
        verdict = NOT_MET
    elif band is not None and margins[worst] < band.value:
        verdict, reason = MET_WITH_WARNING, warning or f"margin under {{{band.id}}}"
    elif advisory and min(margins[len(values) :]) < 0:
        worst = min(range(len(values), len(margins)), key=margins.__getitem__)
        verdict, reason = MET_WITH_WARNING, warning
    value, bound = pairs[worst]
    margin = job.ledger.apply(
        f"check/{key}/m", _formula(comparison, value, bound), case=value.case, x=value, x_lim=bound
    )
    if margin.kind == "fraction":
        margin.digits = MARGIN_DIGITS
    return job.ledger.check(
        f"check/{key}", title, value=value, limit=bound, comparison=comparison, margin=margin, verdict=verdict,
        citation=citation, note=note, warning=reason,
    )


def _formula(comparison: str, value: Entry, limit: Entry) -> Formula:
    if limit.value == 0.0:  # a relative margin to zero has no meaning
        return criteria.excess(value.kind)
    return criteria.margin_below(value.kind) if comparison == AT_MOST else criteria.margin_above(value.kind)


def _margin(comparison: str, value: Entry, limit: Entry) -> float:
    """Margin of one value, to find the one that governs; the governing one is booked."""
    margin = float(_formula(comparison, value, limit).evaluate(x=value.value, x_lim=limit.value))
    return -margin if limit.value == 0.0 and comparison == AT_MOST else margin
