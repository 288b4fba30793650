"""Verification: residuals, a second solution, a second correlation, a second library, and the hand-check."""

from __future__ import annotations

from calcpack.hydraulics.laws import SWAMEE_JAIN
from calcpack.hydraulics.second_method import SecondSolution, second_solutions
from calcpack.ledger import Entry, settle_digits
from calcpack.project.model import Case
from calcpack.sheets import second_opinion
from calcpack.sheets.compare import difference
from calcpack.sheets.content import Block, Column, Facts, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.criteria import AT_MOST, judge
from calcpack.sheets.job import Job, case_label
from calcpack.values import LOOKED_UP, Value

CONTINUITY_LIMIT = 1e-6  # of the greatest flow of the case
ENERGY_LIMIT = 1e-3  # m


def fill(job: Job) -> Sheet:
    """Book what supports the checker. Runs the hand-check last, over every line booked so far."""
    sections = [_residuals(job), *_second(job), second_opinion.section(job), _ranges(job)]
    sections.append(_hand_check(job))
    return Sheet("verification", "Verification", (_statement(), *sections))


def _statement() -> Section:
    return Section(
        "verification-statement", "What this sheet is",
        (Prose("Everything here is computed by the program itself. It supports the checker and is not checking: a "
               "person other than the originator checks inputs, method and results."),),
    )


def _residuals(job: Job) -> Section:
    rows, continuity, energy = [], [], []
    for case in job.cases:
        reached = job.solved(case).convergence
        greatest = max((abs(flow.flow) for flow in job.solved(case).lines.values()), default=0.0)
        share = reached.continuity / greatest if greatest else 0.0
        continuity.append(_found(job, f"verification/continuity@{case.id}", share, "r_c",
                                 "Continuity residual over the greatest flow", "ratio", case))
        energy.append(_found(job, f"verification/energy@{case.id}", reached.energy, "r_e", "Energy residual", "head",
                             case))
        steps = _found(job, f"verification/iterations@{case.id}", float(reached.iterations), "i", "Iterations", "count",
                       case)
        rows.append(Row((case_label(case), Ref(steps.id), Ref(continuity[-1].id), Ref(energy[-1].id))))
    columns = (Column("Case", width=3.2), Column("Iterations", "i", "count"), Column("Continuity", "r_c", "ratio"),
               Column("Energy", "r_e", "head"))
    limits = (
        ("continuity", continuity, Value(CONTINUITY_LIMIT, "ratio", "1e-6", source="TOOL", status=LOOKED_UP)),
        ("energy", energy, Value(ENERGY_LIMIT, "head", "1 mm", source="TOOL", status=LOOKED_UP)),
    )
    checks = []
    for word, values, value in limits:
        limit = job.input(f"limits/{word}_residual", value, "x_lim", f"Greatest {word} residual")
        checks.append(judge(job, f"residual-{word}", f"Residual of {word}", values, limit, AT_MOST).id)
    return Section(
        "verification-residuals", "Residuals of the network solution",
        (Table("Residuals, all cases", columns, tuple(rows)), Verdicts(tuple(checks))),
    )


def _found(job: Job, entry_id: str, value: float, symbol: str, title: str, kind: str, case: Case) -> Entry:
    return job.ledger.found(entry_id, value, symbol, title, kind, source="TOOL", residual=0.0, case=case.id, digits=2)


def _second(job: Job) -> list[Section]:
    """Flow of every pump by another solution method, and by another friction correlation."""
    methods = second_solutions(job.project, job.solution)
    correlations = second_solutions(job.project, job.solution, SWAMEE_JAIN)
    rows = [
        _compare(job, case, tag, methods[case.id], correlations[case.id])
        for case in job.cases
        for tag in job.project.system.pumps
        if f"{tag}/Q@{case.id}" in job.ledger and methods[case.id].converged and correlations[case.id].converged
    ]
    if not rows:
        return [Section("verification-second", "Second method",
                        (Prose("No second solution was found for any case: this support is missing.", "caution"),))]
    columns = (Column("Pump and case", width=3.2), Column("This package", "Q", "flow"),
               Column("Second method", "Q_2", "flow"), Column("Difference", "d_2"),
               Column("Second correlation", "Q_3", "flow"), Column("Difference", "d_3"),
               Column("Head, curve against system", "d_H"))
    blocks: tuple[Block, ...] = (
        Prose(f"Second method: {next(iter(methods.values())).method}; it balances the energy round loops where the "
              f"first one balances nodes. Second correlation: {SWAMEE_JAIN} in place of Colebrook-White. The last "
              "column compares the head of the pump curve with the head that the sheets sum up along the path."),
        Table("Flow by a second method and by a second correlation", columns, tuple(rows)),
    )
    return [Section("verification-second", "Second method and second correlation", blocks)]


def _compare(job: Job, case: Case, tag: str, method: SecondSolution, correlation: SecondSolution) -> Row:
    ledger, own = job.ledger, job.ledger[f"{tag}/Q@{case.id}"]
    cells: list = [f"{tag}, case {case_label(case)}", Ref(own.id)]
    for number, word, second in ((2, "second method", method), (3, "second correlation", correlation)):
        other = ledger.found(f"{tag}/Q-{word.replace(' ', '-')}@{case.id}", second.flows[tag], f"Q_{number}",
                             f"{tag}: flow by the {word}", "flow", source="TOOL", locator=second.method,
                             residual=second.energy, case=case.id)
        gap = difference(job, f"{tag}/d_{number}@{case.id}", f"d_{number}", f"{tag}: {word} against this package",
                         own=own, other=other)
        cells += [Ref(other.id), Ref(gap.id, "quantity")]
    closure = ledger[f"{tag}/closure@{case.id}"]
    return Row((*cells, Ref(closure.id, "quantity")))


def _ranges(job: Job) -> Section:
    """Every use of a formula outside its declared range."""
    outside = [entry for entry in job.ledger if entry.findings]
    if not outside:
        return Section("verification-ranges", "Ranges of validity",
                       (Prose("Every formula was used inside the range that its source or this package declares."),))
    rows = tuple(Row((entry.title, Ref(entry.id, "quantity"), "; ".join(entry.findings), Ref(entry.id, "source")))
                 for entry in outside)
    columns = (Column("Entry", width=2.4), Column("Value"), Column("Outside the range of", width=1.6),
               Column("Source", width=2.0))
    return Section("verification-ranges", "Ranges of validity",
                   (Prose("These results use a formula outside its declared range; they are not to be relied on "
                          "without the responsible engineer's judgement.", "caution"),
                    Table("Used outside the declared range", columns, rows)))


def _hand_check(job: Job) -> Section:
    outcome = settle_digits(job.ledger)
    figures = (
        ("lines", outcome.lines, "Printed lines redone from their printed numbers"),
        ("widened", outcome.widened, "Entries that print more digits for it"),
        ("failed", len(outcome.failed), "Lines that could not be redone"),
    )
    rows = []
    for name, number, title in figures:
        entry = job.ledger.found(f"hand-check/{name}", float(number), "i", title, "count", source="TOOL", residual=0.0,
                                 digits=max(len(str(number)), 1))
        rows.append((title, Ref(entry.id)))
    worst = job.ledger.found("hand-check/worst", outcome.worst, "d", "Greatest deviation as a share of what is allowed",
                             "fraction", source="TOOL", residual=0.0, digits=2)
    rows.append((f"{worst.title}, at {job.ledger[outcome.worst_id].title.lower()}" if outcome.worst_id else worst.title,
                 Ref(worst.id, "quantity")))
    zero = Value(0.0, "count", "0", source="TOOL", locator="every line can be redone", status=LOOKED_UP)
    limit = job.input("limits/hand_check", zero, "x_lim", "Lines that cannot be redone")
    margin = job.ledger.found("check/hand-check/m", float(len(outcome.failed)), "m", "Lines beyond the limit", "count",
                              source="TOOL", residual=0.0, digits=1)
    verdict = "criterion met" if not outcome.failed else "criterion not met"
    check = job.ledger.check("check/hand-check", "Hand-check of every printed line",
                             value=job.ledger["hand-check/failed"], limit=limit, comparison=AT_MOST, margin=margin,
                             verdict=verdict, note=", ".join(outcome.failed))
    return Section(
        "verification-hand-check", "Hand-check",
        (Prose("Every line with numbers was redone from the numbers as they are printed. It holds when it gives the "
               "printed result within one unit of its last digit or within the tolerance that the basis of design "
               "states, whichever is larger."), Facts(tuple(rows)), Verdicts((check.id,))),
    )
