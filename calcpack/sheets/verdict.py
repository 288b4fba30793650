"""The verdict page: the question, every criterion with its governing case, the key results, what is open."""

from __future__ import annotations

from calcpack.ledger import Entry
from calcpack.ledger.entry import CHECK, MET, MET_WITH_WARNING, NOT_CHECKED, NOT_MET, OUT_OF_RANGE, REFER
from calcpack.project.model import Pump
from calcpack.sheets.content import Cell, Facts, Prose, Ref, Section, Sheet, Verdicts
from calcpack.sheets.job import Job, case_label, greatest, least
from calcpack.sheets.registers import count, open_counts, plain

# Worst first.
ORDER = (NOT_MET, OUT_OF_RANGE, REFER, NOT_CHECKED, MET_WITH_WARNING, MET)
INCOMPLETE = (NOT_MET, OUT_OF_RANGE, REFER, NOT_CHECKED)
DEFERENCE = (
    "This package applies the formulas listed to the inputs listed. It does not replace the judgement of the "
    "responsible engineer, the maker's data, or the codes and rules that govern the site. Where a criterion reads "
    f"\"{NOT_MET}\", \"{OUT_OF_RANGE}\", \"{REFER}\" or \"{NOT_CHECKED}\", the work is not complete."
)


def fill(job: Job) -> Sheet:
    """Group the criteria by verdict and book how many there are of each."""
    sections = [Section("verdict-question", "Question", (Prose(plain(job.project.purpose)), _answer(job)))]
    for verdict in ORDER:
        ids = tuple(check.id for check in checks(job, verdict))
        if ids:
            sections.append(Section(f"verdict-{verdict.replace(' ', '-').replace(',', '')}", _capital(verdict),
                                    (Verdicts(ids),)))
    sections.append(Section("verdict-results", "Key results", (Facts(_results(job)),)))
    sections.append(Section("verdict-open", "Open items and standing of this package", (_open(job), Prose(DEFERENCE))))
    return Sheet("verdict", "Verdict", tuple(sections))


def checks(job: Job, *verdicts: str) -> list[Entry]:
    """Criteria that ended with one of these verdicts, in booking order."""
    return [check for check in job.ledger.of_origin(CHECK) if check.verdict in verdicts]


def verdict_counts(job: Job) -> dict[str, Entry]:
    """How many criteria ended with each verdict, worst first, as booked counts; verdicts without any left out."""
    numbers = {verdict: len(checks(job, verdict)) for verdict in ORDER}
    return {
        verdict: count(job, f"count/{verdict.replace(' ', '-').replace(',', '')}", number, f"Number with: {verdict}")
        for verdict, number in numbers.items() if number
    }


def _answer(job: Job) -> Prose:
    counts = verdict_counts(job)
    if not counts:
        return Prose("No criterion was booked: nothing is judged in this package.", "caution")
    total = count(job, "count/criteria", len(job.ledger.of_origin(CHECK)), "Number of criteria")
    parts = "; ".join(f"{verdict}: {{{entry.id}}}" for verdict, entry in counts.items())
    complete = not any(verdict in counts for verdict in INCOMPLETE)
    end = "Every criterion is decided." if complete else "The work is not complete until the first groups are settled."
    return Prose(f"Criteria: {{{total.id}}}, of which {parts}. {end}", "" if complete else "caution")


def _results(job: Job) -> tuple[tuple[str, Cell], ...]:
    rows: list[tuple[str, Cell]] = []
    for entry_id, name in (("duty/Q_req", "Required flow"), ("duty/Q_des", "Design flow")):
        if entry_id in job.ledger:
            rows.append((name, Ref(entry_id, "quantity")))
    for pump in job.project.system.pumps.values():
        rows += _normal(job, pump) + _governing(job, pump)
    return tuple(rows)


def _normal(job: Job, pump: Pump) -> list[tuple[str, Cell]]:
    """The duty of the normal case, on one line each."""
    normal = job.project.case(job.project.normal_case)
    names = (("Q", "flow"), ("H", "head"), ("eta", "efficiency"), ("P_s", "shaft power of one unit"),
             ("p_d", "discharge pressure"))
    return [
        (f"{pump.tag}: {name}, case {case_label(normal)}", Ref(f"{pump.tag}/{symbol}@{normal.id}", "quantity"))
        for symbol, name in names if f"{pump.tag}/{symbol}@{normal.id}" in job.ledger
    ]


def _governing(job: Job, pump: Pump) -> list[tuple[str, Cell]]:
    """The worst of all cases, with the case that governs."""
    tag, rows = pump.tag, []
    for symbol, pick, name in (
        ("Q", least, "least flow"), ("H_sys", greatest, "greatest total head"), ("r_N", least, "least NPSHA / NPSHR"),
        ("p_s", least, "lowest suction pressure"), ("P_s", greatest, "greatest shaft power of one unit"),
    ):
        ids = [f"{tag}/{symbol}@{case.id}" for case in job.cases if f"{tag}/{symbol}@{case.id}" in job.ledger]
        if ids:
            entry = pick(job.ledger, ids)
            label = case_label(job.project.case(entry.case))
            rows.append((f"{tag}: {name}, case {label}", Ref(entry.id, "quantity")))
    for symbol, name in (("P_m", "motor rating"), ("p_max", "greatest pressure at shut-off"),
                         ("W", "energy of a year at the normal case")):
        if f"{tag}/{symbol}" in job.ledger:
            rows.append((f"{tag}: {name}", Ref(f"{tag}/{symbol}", "quantity")))
    return rows


def _open(job: Job) -> Facts:
    return Facts(tuple((_capital(kind), Ref(entry.id)) for kind, entry in open_counts(job).items()))


def _capital(words: str) -> str:
    return words[0].upper() + words[1:]
