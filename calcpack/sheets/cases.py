"""Cases matrix: what each case sets, what comes out for each pump, and which case governs each criterion."""

from __future__ import annotations

from calcpack.ledger import Entry
from calcpack.ledger.entry import CHECK
from calcpack.project.model import Case, Pump
from calcpack.sheets.content import Block, Cell, Column, Prose, Ref, Row, Section, Sheet, Table
from calcpack.sheets.job import Job, case_label, greatest
from calcpack.sheets.registers import count
from calcpack.values import CONFIRMED, Value

NONE = "–"
DUTY = (("Flow", "Q", "flow"), ("Head", "H", "head"), ("Efficiency", "eta", "efficiency"),
        ("Shaft power", "P_s", "power"), ("Share of BEP", "r", "fraction"))
SUCTION = (("Available", "NPSHA", "head"), ("Required", "NPSHR", "head"), ("Ratio", "r_N", "ratio"),
           ("Suction pressure", "p_s", "gauge_pressure"), ("Discharge pressure", "p_d", "gauge_pressure"))


def fill(job: Job) -> Sheet:
    """Tabulate definition, results and governing cases; books the number of units running."""
    sections = [Section("cases-definition", "Definition of the cases", (_definition(job), *_overrides(job)))]
    for pump in job.project.system.pumps.values():
        blocks = _results(job, pump)
        if blocks:
            sections.append(Section(f"cases-{pump.tag}", f"{pump.tag}: results of all cases", blocks))
    rows = _governing(job)
    if rows:
        columns = (Column("Governing case", width=2.4), Column("Criteria", "", "count", width=0.8),
                   Column("Which", width=6.0))
        sections.append(Section("cases-governing", "Governing cases", (
            Table("Cases and the criteria that each governs", columns, rows),
            Prose("Extremes are combined only as far as a case states them: a case stands for a state that can occur."),
        )))
    return Sheet("cases", "Cases", tuple(sections))


def running(job: Job, case: Case, pump: Pump) -> Entry:
    """Number of units of a pump that run in a case."""
    number = case.pumps.get(pump.tag, 0)
    value = Value(float(number), "count", str(number), source="case definition", status=CONFIRMED)
    return job.input(f"{pump.tag}/i@{case.id}", value, "i", f"{pump.tag}: units running")


def _definition(job: Job) -> Table:
    system = job.project.system
    pumps = tuple(system.pumps.values())
    columns = (
        Column("Case", width=2.4), Column("Levels", width=2.4), Column("Roughness", width=1.8),
        Column("Temperature", width=1.5), Column("Equipment", width=1.6),
        *(Column(f"{pump.tag} running", "", "count", width=1.3) for pump in pumps),
    )
    rows = []
    for case in job.cases:
        cells: tuple[Cell, ...] = (
            case_label(case), _levels(job, case), _states(case.roughness), _temperature(job, case),
            _states(case.equipment), *(Ref(running(job, case, pump).id) for pump in pumps),
        )
        rows.append(Row(cells, mark="normal" if case.id == job.project.normal_case else ""))
    return Table("Cases: levels, states and units running", columns, tuple(rows))


def _levels(job: Job, case: Case) -> Cell:
    parts: list[str | Ref] = []
    for tag, name in case.levels.items():
        level = case.system.nodes[tag].levels[name]
        entry = job.input(f"{tag}/z@{name}", level, "z", f"{tag}: level, {name}", case)
        parts += [f"{tag} {name}", Ref(entry.id, "quantity"), ";"]
    return tuple(parts[:-1]) or NONE


def _states(states: dict[str, str]) -> str:
    """``aged: L-101, L-102; new: L-103`` from the state of each tag."""
    tags: dict[str, list[str]] = {}
    for tag, state in states.items():
        tags.setdefault(state, []).append(tag)
    return "; ".join(f"{state}: {', '.join(names)}" for state, names in tags.items()) or NONE


def _temperature(job: Job, case: Case) -> Cell:
    entry_id = f"liquid/T@{case.temperature}"
    return (case.temperature, Ref(entry_id, "quantity")) if entry_id in job.ledger else case.temperature


def _overrides(job: Job) -> tuple[Block, ...]:
    """What a case sets differently, input by input."""
    places = {entry.place: entry.id for entry in job.ledger if entry.place}
    rows = tuple(
        Row((case_label(case), one.path, Ref(places[one.place], "written") if one.place in places else one.text,
             one.place))
        for case in job.cases for one in case.overrides
    )
    if not rows:
        return (Prose("No case sets an input differently beyond these states."),)
    columns = (Column("Case", width=2.4), Column("Input", width=3.0), Column("As written"), Column("Where", width=1.4))
    return (Table("Inputs that a case sets differently", columns, rows),)


def _results(job: Job, pump: Pump) -> tuple[Block, ...]:
    blocks = []
    for caption, names in (("duty and power", DUTY), ("suction and pressures", SUCTION)):
        present = [name for name in names if any(_has(job, pump, name[1], case) for case in job.cases)]
        if not present:
            continue
        first = {symbol: next(f"{pump.tag}/{symbol}@{case.id}" for case in job.cases if _has(job, pump, symbol, case))
                 for _, symbol, _ in present}
        columns = [Column("Case", width=2.8)]
        columns += [Column(title, symbol, kind, first[symbol], width=1.4) for title, symbol, kind in present]
        if names is DUTY:
            columns.append(Column("Greatest velocity", "V", "velocity", width=1.6))
        rows = tuple(_row(job, pump, case, present, names is DUTY) for case in job.cases)
        note = "BEP: flow at best efficiency. Greatest velocity: of all lines." if names is DUTY else ""
        blocks.append(Table(f"{pump.tag}: {caption}", tuple(columns), rows, note))
    return tuple(blocks)


def _row(job: Job, pump: Pump, case: Case, present: list[tuple[str, str, str]], with_velocity: bool) -> Row:
    cells: list[Cell] = [case_label(case)]
    for _, symbol, _ in present:
        cells.append(Ref(f"{pump.tag}/{symbol}@{case.id}") if _has(job, pump, symbol, case) else NONE)
    if with_velocity:
        ids = [f"{tag}/V@{case.id}" for tag in case.system.lines if f"{tag}/V@{case.id}" in job.ledger]
        cells.append(Ref(greatest(job.ledger, ids).id) if ids else NONE)
    return Row(tuple(cells), mark="normal" if case.id == job.project.normal_case else "")


def _has(job: Job, pump: Pump, symbol: str, case: Case) -> bool:
    return f"{pump.tag}/{symbol}@{case.id}" in job.ledger


def _governing(job: Job) -> tuple[Row, ...]:
    """Cases with the criteria that have their least margin there; last those that no case decides."""
    checks = [check for check in job.ledger.of_origin(CHECK) if "margin" in (check.operands or {})]
    names = {case.id: case_label(case) for case in job.cases} | {"": "the same in all cases"}
    rows = []
    for case_id, label in names.items():
        governed = [check for check in checks if check.case == case_id]
        if governed:
            parts = [part for check in governed for part in (Ref(check.id, "title"), ";")]
            number = count(job, f"count/governed@{case_id or 'all'}", len(governed), f"Criteria governed: {label}")
            rows.append(Row((label, Ref(number.id), tuple(parts[:-1]))))
    return tuple(rows)
