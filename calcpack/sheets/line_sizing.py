"""Line sizing: why each size was chosen, and the velocities in every case against their limits."""

from __future__ import annotations

from calcpack.catalog import pipes
from calcpack.formulas import fittings, pipe_flow
from calcpack.ledger import Entry
from calcpack.project.model import Case, Line
from calcpack.sheets.content import Block, Column, Derivation, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.criteria import AT_LEAST, AT_MOST, house_limit, judge
from calcpack.sheets.job import Job

ONE_FLOW = 1e-6  # relative: lines that differ by less carry the same flow
CANDIDATE = "/size/"  # stands in the ids of entries of a candidate size
NEIGHBOURS = 2  # catalog sizes shown on each side of the chosen one


def fill(job: Job) -> Sheet:
    """Book the candidate sizes of every line at the sizing flow, and the velocity criteria over all cases."""
    case = job.project.case(job.project.requirement.case or job.project.normal_case)
    sections = []
    for line in case.system.lines.values():
        blocks: list[Block] = []
        flow = _sizing_flow(job, line, case)
        if flow is not None and line.pipe.standard and not line.pipe.bore and line.friction_factor is None:
            blocks += _candidates(job, case, line, flow)
        checks = velocity_checks(job, line)
        if checks:
            blocks += [Derivation(derived) for derived in [_derived(job, line)] if derived]
            blocks.append(Verdicts(checks))
        if blocks:
            sections.append(Section(f"sizing-{line.tag}", f"{line.tag} {line.description}", tuple(blocks)))
    if not sections:
        return Sheet("line_sizing", "Line sizing", omitted="no line has a catalog size or a velocity limit")
    return Sheet("line_sizing", "Line sizing and velocities", tuple(sections))


def _sizing_flow(job: Job, line: Line, case: Case) -> Entry | None:
    """Design flow where the whole requirement passes the line; otherwise the line's own flow of the case."""
    own = f"{line.tag}/Q@{case.id}"
    flows = [abs(flow.flow) for flow in job.solved(case).lines.values()]
    single = len(job.project.system.pumps) == 1 and max(flows) - min(flows) <= ONE_FLOW * max(flows)
    for key in ("duty/Q_des", "duty/Q_req"):
        if single and key in job.ledger:
            return job.ledger[key]
    return job.ledger[own] if own in job.ledger and job.ledger[own].value > 0 else None


def _candidates(job: Job, case: Case, line: Line, flow: Entry) -> list[Block]:
    sizes = pipes.candidates(line.pipe.standard, line.pipe.schedule)
    position = [size.nominal for size in sizes].index(line.pipe.size)
    chosen = sizes[position]
    shown = sizes[max(position - NEIGHBOURS, 0) : position + NEIGHBOURS + 1]
    rows, fitting = [], []
    for size in shown:
        velocity = _book(job, case, line, flow, size)
        key = f"{line.tag}{CANDIDATE}{size.nominal}"
        inside = _inside(line, velocity)
        if not inside:
            fitting.append(size)
        shown_symbols = ("D_o", "t", "D", "V", "Re", "f", "J", "h_f")
        cells = (size.nominal, *(Ref(f"{key}/{symbol}") for symbol in shown_symbols), inside or "inside")
        rows.append(Row(cells, mark="chosen" if size is chosen else ""))
    smallest = fitting[0].nominal if fitting else None
    reason = "the smallest of the sizes shown that keeps the velocity inside its limits at the sizing flow"
    if smallest != chosen.nominal:
        reason = ("no size shown keeps the velocity inside its limits" if smallest is None else
                  f"stated by the project; the smallest size inside the velocity limits would be {smallest}")
    job.ledger.chosen(f"{line.tag}/size", chosen.nominal, f"{line.tag}: size", reason=reason, source="TOOL",
                      operands={"Q": flow.id})
    columns = (
        Column("Size", width=1.7),
        *(Column(title, symbol, kind) for title, symbol, kind in (
            ("Outside diameter", "D_o", "diameter"), ("Wall", "t", "diameter"), ("Inside diameter", "D", "diameter"),
            ("Velocity", "V", "velocity"), ("Reynolds number", "Re", "reynolds_number"),
            ("Friction factor", "f", "friction_factor"), ("Gradient", "J", "gradient"),
            ("Friction head", "h_f", "head"))),
        Column("Velocity limits", width=1.4),
    )
    return [
        Prose(f"Sizes of {line.pipe.standard}, schedule {line.pipe.schedule} "
              f"({{{line.tag}{CANDIDATE}{chosen.nominal}/D_o|source}}), at the flow {{{flow.id}}} in new pipe. "
              f"Chosen: {{{line.tag}/size|choice}}, {reason}."),
        Table(f"{line.tag}: candidate sizes", columns, tuple(rows)),
    ]


def _inside(line: Line, velocity: Entry) -> str:
    if line.velocity_maximum is not None and velocity.value > line.velocity_maximum.si:
        return "above the limit"
    if line.velocity_minimum is not None and velocity.value < line.velocity_minimum.si:
        return "below the limit"
    return ""


def _book(job: Job, case: Case, line: Line, flow: Entry, size: pipes.PipeSize) -> Entry:
    key, ledger = f"{line.tag}{CANDIDATE}{size.nominal}", job.ledger
    for symbol, value, word in (("D_o", size.outside_diameter, "outside diameter"), ("t", size.wall, "wall")):
        ledger.looked_up(f"{key}/{symbol}", value.value, symbol, f"{size.nominal}: {word}", "diameter",
                         source=value.source, locator=f"{value.table}, {value.row}", digits=4)
    bore = ledger.apply(f"{key}/D", pipe_flow.BORE, D_o=f"{key}/D_o", t=f"{key}/t")
    area = ledger.apply(f"{key}/A", pipe_flow.AREA, D=bore)
    velocity = ledger.apply(f"{key}/V", pipe_flow.VELOCITY, Q=flow, A=area)
    reynolds = ledger.apply(f"{key}/Re", pipe_flow.REYNOLDS, rho=job.density(case), V=velocity, D=bore,
                            mu=f"liquid/mu@{case.temperature}")
    state = next(iter(line.roughness))
    roughness = job.input(f"{line.tag}/eps@{state}", line.roughness[state], "eps", f"Roughness, {state}", case)
    formula = pipe_flow.friction_formula(reynolds.value)
    factor = pipe_flow.friction_factor(roughness.value / bore.value, reynolds.value)
    if formula is pipe_flow.COLEBROOK:
        entry = ledger.solved(f"{key}/f", formula, factor, eps=roughness, D=bore, Re=reynolds)
    elif formula is pipe_flow.LAMINAR:
        entry = ledger.apply(f"{key}/f", formula, Re=reynolds)
    else:
        entry = ledger.found(f"{key}/f", factor, "f", formula.title, "friction_factor", source=formula.source,
                             locator=formula.locator, residual=0.0, operands={"Re": reynolds.id})
    length = job.input(f"{line.tag}/L", line.length, "L", "Length", case)
    head = ledger.apply(f"{key}/h_f", pipe_flow.FRICTION_HEAD, f=entry, L=length, D=bore, V=velocity, g=job.gravity())
    ledger.apply(f"{key}/J", pipe_flow.GRADIENT, h_f=head, L=length)
    return velocity


def velocity_checks(job: Job, line: Line) -> tuple[str, ...]:
    """Book the velocity criteria of one line over all cases, and the full opening of its check valve."""
    values = [job.ledger[f"{line.tag}/V@{case.id}"] for case in job.cases if f"{line.tag}/V@{case.id}" in job.ledger]
    if not values:
        return ()
    checks = []
    if line.velocity_maximum is not None:
        limit = job.input(f"{line.tag}/V_max", line.velocity_maximum, "V_max", f"{line.tag}: greatest velocity")
        band = house_limit(job, "velocity_band", "fraction", "10 %", 0.1, "Velocity: warning band")
        checks.append(judge(job, f"velocity-high/{line.tag}", f"{line.tag}: velocity, upper limit", values, limit,
                            AT_MOST, band=band).id)
    if line.velocity_minimum is not None:
        limit = job.input(f"{line.tag}/V_low", line.velocity_minimum, "V_low", f"{line.tag}: least velocity")
        checks.append(judge(job, f"velocity-low/{line.tag}", f"{line.tag}: velocity, lower limit", values, limit,
                            AT_LEAST).id)
    if line.check_valve is not None:
        checks.append(_check_valve(job, line, values).id)
    return tuple(checks)


def _check_valve(job: Job, line: Line, values: list[Entry]) -> Entry:
    valve, tag = line.check_valve, line.tag
    title = f"{tag}: {valve.title} fully open"
    if valve.full_open_constant is None:
        return job.ledger.not_decided(f"check/check-valve/{tag}", title, "not checked",
                                      "the maker's velocity for full opening is not given")
    constant = job.input(f"{tag}/N_cv", valve.full_open_constant, "N", f"{valve.title}: full-open constant")
    limits = {}
    for case in job.cases:
        limits[case.id] = job.once(f"{tag}/V_min@{case.temperature}", fittings.CHECK_VALVE_VELOCITY, case, N=constant,
                                   rho=job.density(case))
    decisive = [value for value in values if value.case == job.project.normal_case] or values[:1]
    others = [value for value in values if value not in decisive]
    return judge(
        job, f"check-valve/{tag}", title, decisive, [limits[value.case] for value in (*decisive, *others)], AT_LEAST,
        advisory=others, warning="the disc is not fully open in this case: flutter, wear and a higher loss",
    )


def _derived(job: Job, line: Line) -> tuple[str, ...]:
    key = f"{line.tag}/V_min@"
    ids = [entry.id for entry in job.ledger if entry.id.startswith(key)]
    return tuple(ids[:1])
