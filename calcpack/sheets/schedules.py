"""Schedules: lines, fittings and valves, equipment, pumps, nodes, as the calculation has them."""

from __future__ import annotations

from calcpack.ledger import Entry
from calcpack.project.model import Equipment, Line, LossState, Node, Pump
from calcpack.sheets.cases import NONE
from calcpack.sheets.content import Cell, Column, Facts, Ref, Row, Section, Sheet, Table
from calcpack.sheets.job import Job, case_label, greatest
from calcpack.values import CONFIRMED, Value


def fill(job: Job) -> Sheet:
    """Lay out the schedules; books inputs that only a schedule prints (states that no case uses, ratings)."""
    system = job.project.system
    sections = [Section("schedule-lines", "Line list", (_lines(job), _line_results(job)))]
    if any(line.fittings for line in system.lines.values()):
        sections.append(Section("schedule-fittings", "Valve and fitting list", (_fittings(job),)))
    if system.equipment:
        sections.append(Section("schedule-equipment", "Equipment list", (_equipment(job),)))
    sections += [Section(f"schedule-{pump.tag}", f"Pump data: {pump.tag}", (Facts(_pump(job, pump)),))
                 for pump in system.pumps.values()]
    sections.append(Section("schedule-nodes", "Nodes and levels", (_nodes(job),)))
    return Sheet("schedules", "Schedules", tuple(sections))


def _ref(job: Job, entry_id: str) -> Cell:
    return Ref(entry_id) if entry_id in job.ledger else NONE


def _lines(job: Job) -> Table:
    columns = (
        Column("Line", width=0.9), Column("From", width=1.7), Column("To", width=1.5), Column("Service", width=1.3),
        Column("Size", width=1.9), Column("Material", width=1.5), Column("Bore", "D", "diameter", width=0.9),
        Column("Length", "L", "length", width=0.9), Column("Roughness by state", width=1.7),
        Column("Rating", "p_rat", "gauge_pressure", width=1.7),
    )
    rows = []
    for line in job.project.system.lines.values():
        pipe = line.pipe
        schedule = f"schedule {pipe.schedule}" if pipe.schedule else ""
        size = ", ".join(part for part in (pipe.standard, pipe.size, schedule) if part)
        rating = NONE
        if line.rating is not None:
            rating = Ref(job.input(f"{line.tag}/rating", line.rating, "p_rat", f"{line.tag}: pressure rating").id)
        rows.append(Row((
            line.tag, line.start, line.end, _spaced(line.service or line.description), size or NONE,
            _spaced(pipe.material), _ref(job, f"{line.tag}/D"), _ref(job, f"{line.tag}/L"), _roughness(job, line),
            rating,
        )))
    return Table("Line list", columns, tuple(rows))


def _roughness(job: Job, line: Line) -> Cell:
    parts: list[str | Ref] = []
    for state, value in line.roughness.items():
        entry = job.input(f"{line.tag}/eps@{state}", value, "eps", f"Roughness, {state}")
        parts += [f"{state}:", Ref(entry.id, "quantity"), ";"]
    return tuple(parts[:-1]) or NONE


def _line_results(job: Job) -> Table:
    columns = (
        Column("Line", width=0.9), Column("Case of the greatest loss", width=3.0), Column("Flow", "Q", "flow"),
        Column("Velocity", "V", "velocity"), Column("Gradient", "J", "gradient"), Column("Loss", "h_L", "head"),
        Column("Least velocity", "V", "velocity", width=1.5),
        Column("Greatest velocity", "V", "velocity", width=1.8),
    )
    rows = []
    for tag in job.project.system.lines:
        flowing = [case for case in job.cases if f"{tag}/V@{case.id}" in job.ledger]
        if not flowing:
            rows.append(Row((tag, "no flow in any case", *[NONE] * 6)))
            continue
        case = job.project.case(greatest(job.ledger, [f"{tag}/h_L@{one.id}" for one in flowing]).case)
        speeds = sorted((job.ledger[f"{tag}/V@{one.id}"] for one in flowing), key=lambda entry: entry.value)
        cells = (Ref(f"{tag}/{symbol}@{case.id}") for symbol in ("Q", "V", "J", "h_L"))
        rows.append(Row((tag, case_label(case), *cells, Ref(speeds[0].id), Ref(speeds[-1].id))))
    return Table("Lines: governing case and range of velocity", columns, tuple(rows))


def _fittings(job: Job) -> Table:
    columns = (
        Column("Line", width=0.9), Column("Tag", width=0.9), Column("Fitting or valve", width=3.4),
        Column("Number", "N", "count", width=0.8), Column("Factor", "n", "dimensionless", width=0.8),
        Column("Coefficient of one", "K_i", "loss_coefficient", width=1.7), Column("Source", width=2.4),
    )
    rows = []
    for line in job.project.system.lines.values():
        for position, fitting in enumerate(line.fittings, start=1):
            factor, coefficient = f"{line.tag}/n_{position}", f"{line.tag}/K_{position}"
            basis = factor if factor in job.ledger else coefficient
            rows.append(Row((
                line.tag, fitting.tag or NONE, fitting.title, _ref(job, f"{line.tag}/N_{position}"), _ref(job, factor),
                _ref(job, coefficient), Ref(basis, "source") if basis in job.ledger else NONE,
            )))
    return Table("Valves and fittings by line", columns, tuple(rows))


def _equipment(job: Job) -> Table:
    columns = (
        Column("Tag", width=0.9), Column("Description", width=2.6), Column("In line", width=1.0),
        Column("State", width=1.0), Column("What it loses"), Column("At flow", "Q_r", "flow"),
        Column("Source", width=2.4),
    )
    rows = []
    for item in job.project.system.equipment.values():
        lines = ", ".join(line.tag for line in job.project.system.lines.values() if item.tag in line.equipment)
        for name, state in item.states.items():
            lost = _stated_loss(job, item, state)
            flow: Cell = "any flow"
            if state.flow is not None:
                at = job.input(f"{item.tag}/Q_r@{name}", state.flow, "Q_r", f"{item.description}, {name}: at flow")
                flow = Ref(at.id)
            rows.append(Row((item.tag, item.description or item.type, lines or NONE, name, Ref(lost.id, "quantity"),
                             flow, Ref(lost.id, "source"))))
    return Table("Equipment: head lost by state", columns, tuple(rows))


def _stated_loss(job: Job, item: Equipment, state: LossState) -> Entry:
    """What the project states of a loss: a head, a pressure drop or a flow coefficient."""
    name = f"{item.description}, {state.name}"
    if state.coefficient is not None:
        return job.input(f"{item.tag}/K_v@{state.name}", state.coefficient, "K_v", f"{name}: flow coefficient")
    if state.drop is not None:
        return job.input(f"{item.tag}/dp_r@{state.name}", state.drop, "dp_r", f"{name}: pressure drop")
    return job.input(f"{item.tag}/h_r@{state.name}", state.head, "h_r", f"{name}: head loss")


def _pump(job: Job, pump: Pump) -> tuple[tuple[str, Cell], ...]:
    tag = pump.tag
    rows: list[tuple[str, Cell]] = [("Description", pump.description or NONE), ("Type", pump.type or NONE)]
    for symbol, number, name in (("installed", pump.installed, "units installed"), ("duty", pump.duty, "units on duty"),
                                 ("stages", pump.stages, "stages")):
        value = Value(float(number), "count", str(number), source=pump.curve.source, status=CONFIRMED)
        entry = job.input(f"{tag}/{symbol}", value, "i", f"{tag}: {name}")
        rows.append((_capital(name), Ref(entry.id)))
    rows.append(("Curve data", f"{pump.curve.source or 'no source stated'} ({pump.curve.status})"))
    rows += _booked(job, tag, (
        ("z", "Shaft centre, elevation"), ("n", "Speed"), ("Q_BEP", "Flow at best efficiency"),
        ("H_BEP", "Head at best efficiency"), ("Q_min", "Minimum continuous flow"), ("r_low", "Preferred region, from"),
        ("r_high", "Preferred region, to"), ("H_0", "Highest head of the curve"), ("n_s", "Specific speed"),
        ("S", "Suction specific speed"),
    ))
    normal = job.project.case(job.project.normal_case)
    rows += _booked(job, tag, (
        (f"Q_1@{normal.id}", "Flow of one unit"), (f"H@{normal.id}", "Head"), (f"eta@{normal.id}", "Efficiency"),
        (f"NPSHR@{normal.id}", "NPSHR"), (f"NPSHA@{normal.id}", "NPSHA"), (f"P_s@{normal.id}", "Shaft power"),
    ), f", case {normal.id}")
    powers = [f"{tag}/P_s@{case.id}" for case in job.cases if f"{tag}/P_s@{case.id}" in job.ledger]
    if powers:
        rows.append(("Greatest shaft power of the cases", Ref(greatest(job.ledger, powers).id, "quantity")))
    rows += _booked(job, tag, (
        ("P_s_end", "Shaft power at the end of the curve"), ("P_m", "Motor rating"), ("p_max", "Greatest pressure"),
        ("rating_casing", "Rating of the casing"), ("rating_flanges", "Rating of the flanges"),
    ))
    if pump.motor is not None and pump.motor.poles:
        rows.append(("Motor poles", pump.motor.poles))
    return tuple(rows)


def _booked(job: Job, tag: str, names: tuple[tuple[str, str], ...], where: str = "") -> list[tuple[str, Cell]]:
    return [(f"{name}{where}", Ref(f"{tag}/{symbol}", "quantity")) for symbol, name in names
            if f"{tag}/{symbol}" in job.ledger]


def _nodes(job: Job) -> Table:
    columns = (Column("Node", width=1.6), Column("Kind", width=1.0), Column("Description", width=2.6),
               Column("Elevation", "z", "elevation"), Column("Levels", width=3.0),
               Column("Gas pressure", "p_g", "gauge_pressure", width=1.5), Column("Demand", "Q", "flow"))
    return Table("Nodes, elevations and levels", columns,
                 tuple(_node(job, node) for node in job.project.system.nodes.values()))


def _node(job: Job, node: Node) -> Row:
    elevation: Cell = NONE
    shaft = next((f"{pump.tag}/z" for pump in job.project.system.pumps.values()
                  if node.tag in (pump.suction, pump.discharge) and f"{pump.tag}/z" in job.ledger), "")
    if shaft:
        elevation = Ref(shaft)
    elif node.elevation is not None:
        elevation = Ref(job.input(f"{node.tag}/z", node.elevation, "z", f"{node.tag}: elevation").id)
    levels: list[str | Ref] = []
    for name, level in (node.levels or {}).items():
        entry = job.input(f"{node.tag}/z@{name}", level, "z", f"{node.tag}: level, {name}")
        levels += [f"{name}:", Ref(entry.id, "quantity"), ";"]
    gas: Cell = _ref(job, f"{node.tag}/p_g")
    demand: Cell = NONE
    if node.demand is not None:
        demand = Ref(job.input(f"{node.tag}/demand", node.demand, "q", f"{node.tag}: demand").id)
    return Row((node.tag, node.kind, node.description or NONE, elevation, tuple(levels[:-1]) or NONE, gas, demand))


def _spaced(name: str) -> str:
    """A name of the catalog as words, so that it can be broken."""
    return name.replace("_", " ") or NONE


def _capital(words: str) -> str:
    return words[0].upper() + words[1:]
