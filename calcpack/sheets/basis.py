"""Basis of design: purpose, system, requirement, cases, methods, conventions, and why the model fits."""

from __future__ import annotations

from calcpack.digits import DEFAULT_DIGITS
from calcpack.formulas import pipe_flow
from calcpack.hydraulics import curves
from calcpack.ledger import Entry
from calcpack.ledger.handcheck import TOLERANCE
from calcpack.sheets.content import Block, Column, Prose, Row, Section, Sheet, Table
from calcpack.sheets.job import Job, greatest, least
from calcpack.sheets.registers import TOOL, plain

# What the purposes of a case mean to the checks.
PURPOSES = {
    "normal": "the usual state of the system; decides where only one case can",
    "head": "the greatest head asked of the pump",
    "flow": "the greatest flow: motor power, velocities, end of the curve",
    "npsh": "the least suction head: low level, warm liquid, dirty suction",
    "cold": "the coldest liquid: viscosity, density",
    "hot": "the warmest liquid: vapour pressure",
    "low_flow": "the least flow: minimum flow of the pump, settling, check valve",
    "occasional": "a state that occurs now and then",
}
NOT_COVERED = (
    "starting, stopping and other changes with time (except the screening of pressure surge, where it is printed)",
    "pipes that are partly full, and lines that drain or fill",
    "liquids with gas, vapour or settling solids, and liquids whose viscosity depends on the rate of shear",
    "heat given to or taken from the liquid along the way",
    "the strength, support and movement of pipes and equipment",
)


def fill(job: Job) -> Sheet:
    """State the basis; books the constants of method and rounding that the text quotes."""
    sections = (
        _purpose(job), _requirement(job), _cases(job),
        Section("basis-method", "Method", _method(job)),
        Section("basis-conventions", "Conventions", _conventions(job)),
        Section("basis-validity", "Validity of the model", _validity(job)),
    )
    return Sheet("basis", "Basis of design", tuple(section for section in sections if section.blocks))


def _constant(job: Job, name: str, value: float, title: str, kind: str, digits: int, source: str = TOOL,
              locator: str = "") -> str:
    """Book a constant of the program; returns its placeholder."""
    entry_id = f"basis/{name}"
    if entry_id not in job.ledger:
        job.ledger.looked_up(entry_id, value, "", title, kind, source=source, locator=locator, digits=digits)
    return f"{{{entry_id}}}"


def _purpose(job: Job) -> Section:
    blocks = [Prose(plain(text)) for text in (job.project.purpose, *job.project.description) if text]
    return Section("basis-purpose", "Purpose and system", tuple(blocks))


def _requirement(job: Job) -> Section:
    ledger, parts = job.ledger, []
    if "duty/q_d" in ledger and "duty/t_d" in ledger:
        parts.append("The system moves {duty/q_d} a day in {duty/t_d} of running time.")
    if "duty/Q_req" in ledger:
        parts.append("Required flow: {duty/Q_req}.")
    if "duty/Q_des" in ledger:
        case = job.project.case(job.project.requirement.case or job.project.normal_case)
        parts.append("With a margin on flow of {duty/m} the design flow is {duty/Q_des}, wanted in case "
                     f"{case.id} ({plain(case.title)}). No margin is put on head.")
    if not parts:
        parts.append("The project states no required flow; the duty is reported, not judged against a requirement.")
    return Section("basis-requirement", "Requirement", (Prose(" ".join(parts)),))


def _cases(job: Job) -> Section:
    columns = (Column("Case", width=0.6), Column("Title", width=3.0), Column("What it is for", width=4.0))
    rows = tuple(
        Row((case.id, case.title, "; ".join(PURPOSES.get(word, word) for word in case.purposes) or "not stated"),
            mark="normal" if case.id == job.project.normal_case else "")
        for case in job.cases
    )
    return Section("basis-cases", "Operating cases", (
        Table("Operating cases and their purpose", columns, rows),
        Prose("Every case is solved as a whole. Each criterion is held against every case and the case of the least "
              "margin governs; it is found by comparison, not chosen beforehand."),
    ))


def _method(job: Job) -> tuple[Block, ...]:
    laminar = _constant(job, "Re_laminar", pipe_flow.LAMINAR_LIMIT, "Reynolds number below which flow is laminar",
                        "reynolds_number", 1, pipe_flow.LAMINAR.source, pipe_flow.LAMINAR.locator)
    turbulent = _constant(job, "Re_turbulent", pipe_flow.TURBULENT_LIMIT,
                          "Reynolds number from which flow is taken as turbulent", "reynolds_number", 1)
    given = [line.tag for line in job.project.system.lines.values() if line.friction_factor]
    friction = (
        "Pipe friction: Darcy-Weisbach with the Darcy friction factor. Laminar flow up to a Reynolds number of "
        f"{laminar}; the Colebrook-White equation, solved to round-off, from {turbulent}; in the critical zone between "
        "them a straight line in the Reynolds number, which is a convention of this program, because flow there is "
        "not steady."
    )
    if given:
        friction += f" A friction factor stated by the project replaces the correlation in {', '.join(given)}."
    fittings = (
        "Fittings and valves: loss coefficients on the velocity head of the line they stand in. A coefficient given by "
        "n times the fully turbulent friction factor uses the roughness of clean steel"
        + (" {fittings/eps_T}" if "fittings/eps_T" in job.ledger else "")
        + ", whatever the pipe; coefficients are added, so fittings are taken as far enough apart not to disturb each "
        "other."
    )
    return (
        Prose("Unknowns are the total energy head at every junction and pump port and the flow in every line. They "
              "satisfy continuity at every node and the energy equation along every line and pump. The sheets then "
              "recompute every head from the flows found, and compare."),
        Prose(friction),
        Prose(fittings),
        Prose("Equipment: head loss from the stated point, with the square of the flow unless stated as fixed."),
        Prose(_curve_fit(job)),
    )


def _curve_fit(job: Job) -> str:
    limits = [
        _constant(job, name, value, title, kind, 1) for name, value, title, kind in (
            ("fit_H", curves.HEAD_RESIDUAL, "Misfit allowed to the head curve, of the head at the point", "fraction"),
            ("fit_eta", curves.EFFICIENCY_RESIDUAL, "Misfit allowed to the efficiency curve", "fraction"),
            ("fit_NPSHR", curves.NPSHR_RESIDUAL, "Misfit allowed to the NPSHR curve, of its largest value", "fraction"),
        )
    ]
    text = (
        "Pump curves: a polynomial by least squares through the maker's points (head with the square of flow, "
        "efficiency with the cube and zero at no flow, NPSHR with the square) where it misses no point by more than "
        f"{limits[0]} of the head, {limits[1]} of efficiency and {limits[2]} of the largest NPSHR; otherwise a "
        "monotone cubic through every point. Nothing is solved beyond the last point without a finding."
    )
    for pump in job.project.system.pumps.values():
        residual = f"{pump.tag}/residual-H"
        if residual in job.ledger:
            fit = "polynomial" if f"{pump.tag}/a_0" in job.ledger else "monotone cubic"
            text += f" {pump.tag}: {fit} for head, greatest misfit {{{residual}}}."
    return text


def _conventions(job: Job) -> tuple[Block, ...]:
    site = job.project.system.site
    digits = _constant(job, "digits", DEFAULT_DIGITS, "Significant digits printed", "count", 1)
    tolerance = _constant(job, "hand_check", TOLERANCE, "Allowed difference of a line redone by hand", "fraction", 1)
    air = ("a record stated by the project" if site.atmospheric_pressure
           else "computed from the elevation of the site for a standard day")
    return (
        Prose(f"Datum of all elevations: {plain(site.datum)}. Acceleration of gravity: {{{job.gravity().id}}}."),
        Prose("Pressures are gauge unless the word absolute stands beside them. Atmospheric pressure: "
              f"{{site/p_atm}}, {air}."),
        Prose("Heads are heads of the pumped liquid. Head and pressure are converted with the density of the liquid at "
              "the temperature of the case."),
        Prose("Total head includes the velocity head. Static head is the difference of two surfaces at rest, without "
              "velocity head; the velocity head of a discharge is lost in the exit coefficient of the last line. NPSH "
              "is referred to the shaft centre and includes the velocity head at the suction port."),
        Prose("Losses and velocities are positive in the direction of flow; a flow against the drawing says so."),
        Prose(f"Rounding: numbers are computed in full precision and printed with {digits} significant digits, inputs "
              "as written. A number is printed with more digits where a line redone from the printed numbers would "
              f"otherwise differ by more than {tolerance} and by more than its last digit. Every line is redone in "
              "this way at every build, and the outcome is printed on the verification sheet."),
        Prose("A value that a case sets differently has an entry of its own, named with the case. The governing case "
              "of each line is derived in full; the other cases stand in tables under the same equations."),
    )


def _validity(job: Job) -> tuple[Block, ...]:
    text = (
        f"The model takes steady flow of {plain(job.project.system.liquid.name)} as a single liquid of constant "
        "density and Newtonian viscosity, at one temperature in each case, in pipes that run full."
    )
    span = _span(job, "/Re@")
    if span:
        text += (f" Reynolds numbers run from {{{span[0].id}}} to {{{span[1].id}}}; ranges of validity are tested at "
                 "every use of a formula, and what leaves them is reported under the line and among the cautions.")
    speeds = _span(job, "/V@")
    if speeds:
        text += f" Velocities run from {{{speeds[0].id}}} to {{{speeds[1].id}}}."
    return (Prose(text), Prose(f"Not covered: {'; '.join(NOT_COVERED)}."))


def _span(job: Job, part: str) -> tuple[Entry, Entry] | None:
    """The entries of least and greatest value of one symbol over all lines and cases."""
    ids = [f"{tag}{part}{case.id}" for tag in job.project.system.lines for case in job.cases]
    ids = [entry_id for entry_id in ids if entry_id in job.ledger]
    return (least(job.ledger, ids), greatest(job.ledger, ids)) if ids else None
