"""The verdict page: the question, every criterion with its governing case, the key results, what is open."""

from __future__ import annotations

from calcpack.ledger import Entry
from calcpack.ledger.entry import CHECK, MET, MET_WITH_WARNING, NOT_CHECKED, NOT_MET, OUT_OF_RANGE, REFER
from calcpack.project.model import Pump
from calcpack.sheets.caution_words import VOID
from calcpack.sheets.content import Block, Column, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.job import Job, case_label, greatest, least
from calcpack.sheets.registers import count, open_counts, plain

# Worst first.
ORDER = (NOT_MET, OUT_OF_RANGE, REFER, NOT_CHECKED, MET_WITH_WARNING)
INCOMPLETE = (NOT_MET, OUT_OF_RANGE, REFER, NOT_CHECKED)
LEAST, GREATEST = "least", "greatest"
# Result, symbol, and which of all cases is the worst.
RESULTS = (
    ("Flow", "Q", LEAST), ("Total head", "H_sys", GREATEST), ("Efficiency", "eta", LEAST),
    ("NPSHA", "NPSHA", LEAST), ("NPSHA / NPSHR", "r_N", LEAST), ("Suction pressure", "p_s", LEAST),
    ("Discharge pressure", "p_d", GREATEST), ("Shaft power of one unit", "P_s", GREATEST),
)
SINGLE = (("P_m", "motor rating"), ("p_max", "greatest pressure at shut-off"),
          ("W", "energy of a year at the normal case"))
DEFERENCE = (
    "This package applies the formulas listed to the inputs listed. It does not replace the judgement of the "
    "responsible engineer, the maker's data, or the codes and rules that govern the site. Where a criterion reads "
    f"\"{NOT_MET}\", \"{OUT_OF_RANGE}\", \"{REFER}\" or \"{NOT_CHECKED}\", the work is not complete."
)


def fill(job: Job) -> Sheet:
    """Group the criteria by verdict and book how many there are of each; what is not plainly met comes first."""
    sections = [Section("verdict-question", "Question and standing", (
        Prose(plain(job.project.purpose)), _answer(job), _open(job), Prose(DEFERENCE, "note"),
    ))]
    for verdict in ORDER:
        ids = tuple(check.id for check in checks(job, verdict))
        if ids:
            sections.append(Section(f"verdict-{_key(verdict)}", _capital(verdict), (Verdicts(ids),)))
    sections.append(Section("verdict-results", "Key results", _results(job)))
    met = checks(job, MET)
    if met:
        sections.append(Section(f"verdict-{_key(MET)}", _capital(MET), (_met(met),)))
    return Sheet("verdict", "Verdict", tuple(sections))


def _met(met: list[Entry]) -> Table:
    """The criteria that need no words, one line each."""
    columns = (Column("Criterion", width=3.0), Column("Case", width=0.5), Column("Value", width=1.3),
               Column("Limit", width=1.5), Column("Margin", width=0.9), Column("Source of the limit", width=3.2))
    rows = tuple(
        Row((Ref(check.id, "title"), check.case or "all", Ref(check.operands["value"], "quantity"),
             (check.comparison, Ref(check.operands["limit"], "quantity")), Ref(check.operands["margin"], "quantity"),
             Ref(check.id, "source")))
        for check in met
    )
    return Table("Criteria met, with the governing case", columns, rows)


def checks(job: Job, *verdicts: str) -> list[Entry]:
    """Criteria that ended with one of these verdicts, in booking order."""
    return [check for check in job.ledger.of_origin(CHECK) if check.verdict in verdicts]


def verdict_counts(job: Job) -> dict[str, Entry]:
    """How many criteria ended with each verdict, worst first, as booked counts; verdicts without any left out."""
    numbers = {verdict: len(checks(job, verdict)) for verdict in (*ORDER, MET)}
    return {
        verdict: count(job, f"count/{_key(verdict)}", number, f"Number with: {verdict}")
        for verdict, number in numbers.items() if number
    }


def _answer(job: Job) -> Prose:
    """How many criteria ended how, and whether that is an answer at all."""
    counts = verdict_counts(job)
    if not counts:
        return Prose("No criterion was booked: nothing is judged in this package.", "caution")
    total = count(job, "count/criteria", len(job.ledger.of_origin(CHECK)), "Number of criteria")
    parts = "; ".join(f"{verdict}: {{{entry.id}}}" for verdict, entry in counts.items())
    text, undecided = f"Criteria: {{{total.id}}}, of which {parts}.", any(one in counts for one in INCOMPLETE)
    if undecided:
        text += " The work is not complete until the first groups are settled."
    void = [finding for case in job.cases for finding in job.solved(case).findings if finding.code in VOID]
    if void:
        number = count(job, "count/void", len(void), "Number of findings that leave a case without a valid result")
        text += (f" Cases have no valid result by {{{number.id}}} findings of the solution, told among the cautions; "
                 "criteria of such a case are not judged and the work is not complete.")
    if not undecided and not void:
        text += " Every criterion is decided."
    return Prose(text, "caution" if undecided or void else "")


def _results(job: Job) -> tuple[Block, ...]:
    pumps = job.project.system.pumps.values()
    named = [("duty/Q_req", "Required flow"), ("duty/Q_des", "Design flow")]
    named += [(f"{pump.tag}/{symbol}", f"{pump.tag}: {name}") for pump in pumps for symbol, name in SINGLE]
    single = [f"{name}: {{{entry_id}}}" for entry_id, name in named if entry_id in job.ledger]
    blocks: list[Block] = [Prose(f"{'; '.join(single)}.")] if single else []
    normal = job.project.case(job.project.normal_case)
    columns = (Column("Result", width=1.9), Column(f"Case {normal.id} (normal)", width=1.5),
               Column("Worst of all cases", width=1.5), Column("Which", width=0.8), Column("Governing case", width=4.3))
    for pump in pumps:
        rows = tuple(row for row in (_result(job, pump, *one) for one in RESULTS) if row)
        if rows:
            blocks.append(Table(f"{pump.tag}: normal case, and the worst of all cases", columns, rows))
    return tuple(blocks) or (Prose("No result: no pump has a duty point."),)


def _result(job: Job, pump: Pump, name: str, symbol: str, which: str) -> Row | None:
    """One result of a pump: at the normal case, and the worst of all cases with the case that gives it."""
    ids = [f"{pump.tag}/{symbol}@{case.id}" for case in job.cases if f"{pump.tag}/{symbol}@{case.id}" in job.ledger]
    if not ids:
        return None
    worst = (least if which == LEAST else greatest)(job.ledger, ids)
    normal = f"{pump.tag}/{symbol}@{job.project.normal_case}"
    return Row((
        name, Ref(normal, "quantity") if normal in job.ledger else "no duty point", Ref(worst.id, "quantity"), which,
        case_label(job.project.case(worst.case)),
    ))


def _open(job: Job) -> Prose:
    counts = open_counts(job)
    parts = "; ".join(f"{kind}: {{{entry.id}}}" for kind, entry in counts.items())
    some = any(entry.value > 0 for entry in counts.values())
    return Prose(f"Open items: {parts}.", "caution" if some else "")


def _key(verdict: str) -> str:
    return verdict.replace(",", "").replace(" ", "-")


def _capital(words: str) -> str:
    return words[0].upper() + words[1:]
