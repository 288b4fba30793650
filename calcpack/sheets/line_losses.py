"""Losses by line: the governing case of each line in full, the other cases under the same equations."""

from __future__ import annotations

from calcpack.formulas import fittings, pipe_flow
from calcpack.ledger import Entry
from calcpack.project.model import Case, Line
from calcpack.sheets.content import Block, Column, Derivation, Prose, Ref, Row, Section, Sheet, Table
from calcpack.sheets.equipment_losses import derived_ids, equipment_head, head_of
from calcpack.sheets.job import Job, case_label, greatest
from calcpack.values import CONFIRMED, LOOKED_UP, Value

STILL = 1e-12  # m3/s: below this a line carries no flow


def fill(job: Job) -> Sheet:
    """Book the losses of every line in every case and lay out the governing case of each."""
    sections = []
    for line in job.project.system.lines.values():
        for case in job.cases:
            book_line(job, case, case.system.lines[line.tag])
        sections.append(_section(job, line))
    return Sheet("line_losses", "Losses by line", tuple(sections))


def book_line(job: Job, case: Case, line: Line) -> Entry:
    """Book velocity to total loss of one line in one case; returns the line total ``<line>/h_L@<case>``."""
    tag, ledger, flow = line.tag, job.ledger, job.solved(case).lines[line.tag]
    residual = job.solved(case).convergence.continuity
    q = ledger.found(
        f"{tag}/Q@{case.id}", abs(flow.flow), "Q", "Flow", "flow",
        source="CONTINUITY", locator="network solution", residual=residual, case=case.id,
        note="against the direction of the drawing" if flow.flow < -STILL else "",
    )
    bore, area = bore_and_area(job, case, line)
    length = job.input(f"{tag}/L", line.length, "L", "Length", case)
    total_k = _coefficients(job, case, line, bore)
    if q.value <= STILL:
        return ledger.found(
            f"{tag}/h_L@{case.id}", 0.0, "h_L", "Head loss of the line", "head",
            source="DEFINITION", residual=0.0, case=case.id, note="no flow, no loss",
        )
    velocity = ledger.apply(f"{tag}/V@{case.id}", pipe_flow.VELOCITY, Q=q, A=area, case=case.id)
    factor = _friction_factor(job, case, line, bore, velocity)
    friction = ledger.apply(
        f"{tag}/h_f@{case.id}", pipe_flow.FRICTION_HEAD, case=case.id,
        f=factor, L=length, D=bore, V=velocity, g=job.gravity(),
    )
    local = ledger.apply(
        f"{tag}/h_m@{case.id}", fittings.LOCAL_HEAD, case=case.id, K=total_k, V=velocity, g=job.gravity()
    )
    ledger.apply(f"{tag}/J@{case.id}", pipe_flow.GRADIENT, case=case.id, h_f=friction, L=length)
    items = [equipment_head(job, case, item, q) for item in line.equipment]
    if not items:
        return ledger.apply(f"{tag}/h_L@{case.id}", fittings.LINE_HEAD_PIPE, case=case.id, h_f=friction, h_m=local)
    equipment = items[0]
    if len(items) > 1:
        equipment = ledger.apply(f"{tag}/h_e@{case.id}", fittings.SUM_EQUIPMENT, case=case.id, h_i=items)
    return ledger.apply(
        f"{tag}/h_L@{case.id}", fittings.LINE_HEAD, case=case.id, h_f=friction, h_m=local, h_e=equipment
    )


def bore_and_area(job: Job, case: Case, line: Line) -> tuple[Entry, Entry]:
    """Inside diameter and flow area of a line, booked once for all cases that share the size."""
    tag, pipe = line.tag, line.pipe
    if pipe.bore:
        bore = job.input(f"{tag}/D", pipe.bore, "D", "Inside diameter", case)
    else:
        outside = job.input(f"{tag}/D_o", pipe.outside_diameter, "D_o", "Outside diameter", case)
        wall = job.input(f"{tag}/t", pipe.wall, "t", "Wall thickness", case)
        bore = job.once(f"{tag}/D", pipe_flow.BORE, case, D_o=outside, t=wall)
    return bore, job.once(f"{tag}/A", pipe_flow.AREA, case, D=bore)


def _coefficients(job: Job, case: Case, line: Line, bore: Entry) -> Entry:
    tag, counts, coefficients = line.tag, [], []
    for position, fitting in enumerate(line.fittings, start=1):
        coefficient_id = f"{tag}/K_{position}"
        if fitting.method == "n_fT":
            steel = fully_turbulent_roughness(job)
            turbulent = job.once(f"{tag}/f_T", fittings.FULLY_TURBULENT, case, eps_T=steel, D=bore)
            number = job.input(f"{tag}/n_{position}", fitting.coefficient, "n", f"{fitting.title}: n", case)
            coefficient = job.once(coefficient_id, fittings.COEFFICIENT, case, n=number, f_T=turbulent)
            coefficient.title = fitting.title
            coefficient.symbol = f"K_{position}"
        else:
            coefficient = job.input(coefficient_id, fitting.coefficient, f"K_{position}", fitting.title, case)
        count = Value(float(fitting.count), "count", str(fitting.count), fitting.coefficient.source, status=CONFIRMED)
        counts.append(job.input(f"{tag}/N_{position}", count, f"N_{position}", f"Number of {fitting.title}", case))
        coefficients.append(coefficient)
    if coefficients:
        return job.once(f"{tag}/K", fittings.SUM_K, case, n=counts, K_i=coefficients)
    none = Value(0.0, "loss_coefficient", "0", source="DEFINITION", locator="no fitting in the line", status=LOOKED_UP)
    return job.input(f"{tag}/K", none, "K", "Sum of loss coefficients", case)


def fully_turbulent_roughness(job: Job) -> Entry:
    """Roughness of clean commercial steel, on which the fitting factors are based whatever the pipe."""
    value = Value(
        0.0457e-3, "roughness", "0.0457 mm", source="TP410", locator="basis of the factor f_T", status=LOOKED_UP
    )
    return job.input("fittings/eps_T", value, "eps_T", "Roughness of clean steel (fittings)")


def _friction_factor(job: Job, case: Case, line: Line, bore: Entry, velocity: Entry) -> Entry:
    tag, ledger, key = line.tag, job.ledger, f"{line.tag}/f@{case.id}"
    reynolds = ledger.apply(
        f"{tag}/Re@{case.id}", pipe_flow.REYNOLDS, case=case.id,
        rho=job.density(case), V=velocity, D=bore, mu=f"liquid/mu@{case.temperature}",
    )
    if line.friction_factor:
        return job.input(f"{tag}/f", line.friction_factor, "f", "Friction factor (Darcy), given", case)
    state = case.roughness[tag]
    roughness = job.input(f"{tag}/eps@{state}", line.roughness[state], "eps", f"Roughness, {state}", case)
    formula = pipe_flow.friction_formula(reynolds.value)
    solved = pipe_flow.friction_factor(roughness.value / bore.value, reynolds.value)
    if formula is pipe_flow.LAMINAR:
        return ledger.apply(key, formula, case=case.id, Re=reynolds)
    if formula is pipe_flow.COLEBROOK:
        return ledger.solved(key, formula, solved, case=case.id, eps=roughness, D=bore, Re=reynolds)
    bounds = {}
    for name, limit in (("f_2000", pipe_flow.LAMINAR_LIMIT), ("f_4000", pipe_flow.TURBULENT_LIMIT)):
        bounds[name] = ledger.found(
            f"{tag}/{name}@{case.id}", pipe_flow.friction_factor(roughness.value / bore.value, limit), name,
            f"Friction factor at the {'lower' if name == 'f_2000' else 'upper'} end of the critical zone",
            "friction_factor", source="HI-DATABOOK", residual=0.0, case=case.id,
            operands={"eps": roughness.id, "D": bore.id},
        )
    return ledger.apply(key, formula, case=case.id, Re=reynolds, **bounds)


def _section(job: Job, line: Line) -> Section:
    tag, flowing = line.tag, [case for case in job.cases if f"{line.tag}/V@{case.id}" in job.ledger]
    title = f"{tag} {line.description}"
    if not flowing:
        return Section(f"losses-{tag}", title, (Prose("The line carries no flow in any case.", "note"),))
    governing = greatest(job.ledger, [f"{tag}/h_L@{case.id}" for case in flowing])
    case = job.project.case(governing.case)
    blocks: tuple[Block, ...] = (
        Prose(f"Derived in full for the case of the greatest loss of this line: case {case_label(case)}."),
        *([_fittings_table(job, line)] if line.fittings else []),
        Derivation(_derived_ids(job, line, case), governing=(governing.id,)),
        _cases_table(job, line, flowing, case),
    )
    return Section(f"losses-{tag}", title, blocks)


def _derived_ids(job: Job, line: Line, case: Case) -> tuple[str, ...]:
    tag = line.tag
    wanted = ["D", "A", "f_T", "K", f"V@{case.id}", f"Re@{case.id}", f"f@{case.id}", f"f_2000@{case.id}"]
    wanted += [f"h_f@{case.id}", f"J@{case.id}", f"h_m@{case.id}"]
    ids = [job.at(f"{tag}/{symbol}", case).id for symbol in wanted if f"{tag}/{symbol}" in job.ledger]
    ids = [entry for entry in ids if job.ledger[entry].formula]
    ids += [entry_id for item in line.equipment for entry_id in derived_ids(job, case, item)]
    return (*ids, f"{tag}/h_L@{case.id}")


def _fittings_table(job: Job, line: Line) -> Table:
    columns = (
        Column("Fitting", width=3.0),
        Column("Number", "N", "count"),
        Column("Factor", "n", "dimensionless"),
        Column("Coefficient of one", "K_i", "loss_coefficient"),
        Column("Source", width=2.4),
    )
    rows = []
    for position in range(1, len(line.fittings) + 1):
        factor = f"{line.tag}/n_{position}"
        basis = factor if factor in job.ledger else f"{line.tag}/K_{position}"
        cells = (
            Ref(f"{line.tag}/K_{position}", "title"),
            Ref(f"{line.tag}/N_{position}"),
            Ref(factor) if factor in job.ledger else "K given",
            Ref(f"{line.tag}/K_{position}"),
            Ref(basis, "source"),
        )
        rows.append(Row(cells))
    return Table(f"{line.tag}: fittings, on the velocity head of the line", columns, tuple(rows))


def _cases_table(job: Job, line: Line, cases: list[Case], governing: Case) -> Table:
    tag = line.tag
    names = [("Flow", "Q", "flow"), ("Velocity", "V", "velocity"), ("Reynolds number", "Re", "reynolds_number"),
             ("Friction factor", "f", "friction_factor"), ("Friction", "h_f", "head"),
             ("Gradient", "J", "gradient"), ("Fittings", "h_m", "head")]
    columns = [Column("Case", width=3.4)]
    columns += [Column(title, symbol, kind, job.at(f"{tag}/{symbol}", governing).id) for title, symbol, kind in names]
    columns += [Column(item, "h_e", "head") for item in line.equipment]
    columns.append(Column("Line total", "h_L", "head", f"{tag}/h_L@{governing.id}"))
    rows = []
    for case in cases:
        cells = [case_label(case)]
        cells += [Ref(job.at(f"{tag}/{symbol}", case).id) for _, symbol, _ in names]
        cells += [Ref(head_of(job, case, item).id) for item in line.equipment]
        cells.append(Ref(f"{tag}/h_L@{case.id}"))
        rows.append(Row(tuple(cells), mark="in full above" if case is governing else ""))
    return Table(f"{tag}: all cases", tuple(columns), tuple(rows))
