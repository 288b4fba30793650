"""Pressures at the pump ports in every case, pressure at shut-off against the ratings, and the grade line."""

from __future__ import annotations

from calcpack.formulas import grade, liquid, pipe_flow, suction
from calcpack.formulas import pump as formulas
from calcpack.ledger import Entry
from calcpack.ledger.entry import NOT_CHECKED
from calcpack.project.model import Case, Line, Pump
from calcpack.sheets.content import Block, Column, Derivation, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.criteria import AT_LEAST, AT_MOST, house_limit, judge
from calcpack.sheets.job import Job, case_label, least
from calcpack.sheets.path import at_rest, pump_path
from calcpack.sheets.pump_at_case import value_at
from calcpack.sheets.total_head import end_head
from calcpack.values import LOOKED_UP, Value

PORTS = (("s", "suction"), ("d", "discharge"))


def fill(job: Job) -> Sheet:
    """Book port pressures and shut-off pressure of every pump, and the criteria on them."""
    sections = []
    for pump in job.project.system.pumps.values():
        cases = [case for case in job.cases if f"{pump.tag}/H@{case.id}" in job.ledger]
        for case in cases:
            _book(job, case, pump)
        if cases:
            sections += [_ports(job, pump, cases), _shut_off(job, pump, cases)]
    if not sections:
        return Sheet("pressures", "Pressures", omitted="no pump has a duty point in any case")
    return Sheet("pressures", "Pressures", tuple(sections))


def _book(job: Job, case: Case, pump: Pump) -> None:
    tag, ledger = pump.tag, job.ledger
    path = pump_path(case, job.solved(case), pump)
    elevation = job.input(f"{tag}/z", pump.shaft_elevation, "z_p", f"{tag}: elevation of the shaft centre", case)
    suction_head = ledger.apply(
        f"{tag}/H_s@{case.id}", grade.HEAD_AFTER_LINES, case=case.id, symbol="H_s",
        title="Total head at the suction port", H_1=end_head(job, case, path.source),
        h_L=[ledger[f"{line.tag}/h_L@{case.id}"] for line in path.suction],
    )
    ledger.apply(f"{tag}/H_d@{case.id}", formulas.DISCHARGE_HEAD, case=case.id, H_s=suction_head,
                 H=f"{tag}/H@{case.id}")
    for (letter, word), line in zip(PORTS, (path.suction[-1], path.discharge[0]), strict=True):
        velocity_head = velocity_head_of(job, case, line)
        gauge = ledger.apply(
            f"{tag}/p_{letter}@{case.id}", suction.PORT_PRESSURE, case=case.id, symbol=f"p_{letter}",
            title=f"Pressure at the {word} port", rho=job.density(case), g=job.gravity(),
            H=f"{tag}/H_{letter}@{case.id}", z=elevation, h_v=velocity_head,
        )
        if letter == "s":
            ledger.apply(f"{tag}/p_s_abs@{case.id}", liquid.ABSOLUTE_PRESSURE, case=case.id, symbol="p_s_abs",
                         title="Absolute pressure at the suction port", p_atm="site/p_atm", p_g=gauge)


def velocity_head_of(job: Job, case: Case, line: Line) -> Entry:
    """Velocity head in a line, booked once for each case."""
    entry_id = f"{line.tag}/h_v@{case.id}"
    if entry_id in job.ledger:
        return job.ledger[entry_id]
    return job.ledger.apply(entry_id, pipe_flow.VELOCITY_HEAD, case=case.id, V=f"{line.tag}/V@{case.id}",
                            g=job.gravity())


def _ports(job: Job, pump: Pump, cases: list[Case]) -> Section:
    tag, ledger = pump.tag, job.ledger
    lowest = least(ledger, [f"{tag}/p_s@{case.id}" for case in cases])
    case = job.project.case(lowest.case)
    vapour = [ledger[f"liquid/p_v@{one.temperature}"] for one in cases]
    absolute = [ledger[f"{tag}/p_s_abs@{one.id}"] for one in cases]
    gauges = [ledger[f"{tag}/p_s@{one.id}"] for one in cases]
    above_vapour = judge(job, f"suction-vapour/{tag}", f"{tag}: suction pressure above vapour pressure", absolute,
                         vapour, AT_LEAST)
    zero_text = "0 kPa gauge" if ledger.system == "SI" else "0 psig"
    zero = Value(0.0, "gauge_pressure", zero_text, source="COMMON", locator="below it air may leak in",
                 status=LOOKED_UP)
    atmosphere = job.input("limits/suction_gauge", zero, "x_lim", "Suction pressure preferred at or above atmospheric")
    above_air = judge(job, f"suction-gauge/{tag}", f"{tag}: suction preferred at or above atmospheric pressure", [],
                      atmosphere, AT_LEAST, advisory=gauges, warning="below atmospheric pressure: air may leak in")
    path = pump_path(case, job.solved(case), pump)
    suction_line, discharge_line = path.suction[-1].tag, path.discharge[0].tag
    derived = (f"{tag}/H_s@{case.id}", f"{suction_line}/h_v@{case.id}", f"{tag}/p_s@{case.id}",
               f"{tag}/p_s_abs@{case.id}", f"{tag}/H_d@{case.id}", f"{discharge_line}/h_v@{case.id}",
               f"{tag}/p_d@{case.id}")
    columns = (
        Column("Case", width=3.2),
        *(Column(title, symbol, kind, f"{tag}/{symbol}@{case.id}") for title, symbol, kind in (
            ("Suction head", "H_s", "head"), ("Suction pressure", "p_s", "gauge_pressure"),
            ("Suction, absolute", "p_s_abs", "absolute_pressure"), ("Discharge head", "H_d", "head"),
            ("Discharge pressure", "p_d", "gauge_pressure"))),
    )
    symbols = ("H_s", "p_s", "p_s_abs", "H_d", "p_d")
    rows = tuple(
        Row((case_label(one), *(Ref(f"{tag}/{symbol}@{one.id}") for symbol in symbols)),
            mark="lowest suction" if one is case else "")
        for one in cases
    )
    blocks: tuple[Block, ...] = (
        Prose(f"At the shaft elevation {{{tag}/z}}. Derived in full for the case of the lowest suction pressure: "
              f"case {case_label(case)}."),
        Derivation(derived, governing=(lowest.id,)),
        Table(f"{tag}: pressures at the ports, all cases", columns, rows),
        Verdicts((above_vapour.id, above_air.id)),
    )
    return Section(f"pressures-{tag}", f"{tag}: pressures at the ports", blocks)


def _shut_off(job: Job, pump: Pump, cases: list[Case]) -> Section:
    """Greatest suction pressure without flow plus the highest head of the curve, against every rating."""
    tag, ledger = pump.tag, job.ledger
    moving = _fed_by_no_surface(job, pump, cases)
    if moving:
        check = ledger.not_decided(f"check/pressure/{tag}", f"{tag}: greatest pressure against the ratings",
                                   NOT_CHECKED, f"the suction pressure without flow is not known: {moving} feeds it")
        return Section(f"shut-off-{tag}", f"{tag}: pressure at shut-off", (Verdicts((check.id,)),))
    highest = value_at(job, pump, "H", ledger[f"{tag}/Q_{_highest_point(pump)}"], f"{tag}/H_0")
    highest.symbol, highest.title = "H_0", "Highest head of the curve"
    case = max(cases, key=lambda one: end_head(job, one, pump_path(one, job.solved(one), pump).source).value)
    densest = max(cases, key=lambda one: job.density(one).value)
    zero = Value(0.0, "head", "0 m" if ledger.system == "SI" else "0 ft", source="DEFINITION",
                 locator="liquid at rest", status=LOOKED_UP)
    still = job.input("pressures/h_v0", zero, "h_v", "Velocity head without flow")
    static = ledger.apply(
        f"{tag}/p_s0", suction.PORT_PRESSURE, symbol="p_s0", title="Greatest suction pressure, no flow",
        rho=job.density(densest), g=job.gravity(),
        H=end_head(job, case, pump_path(case, job.solved(case), pump).source), z=ledger[f"{tag}/z"], h_v=still,
    )
    greatest_pressure = ledger.apply(f"{tag}/p_max", formulas.SHUTOFF_PRESSURE, p_s=static, rho=job.density(densest),
                                     g=job.gravity(), H_0=highest)
    band = house_limit(job, "pressure_band", "fraction", "10 %", 0.1, "Pressure: warning band below the rating")
    checks = []
    for word, value in (("casing", pump.casing_rating), ("flanges", pump.flange_rating)):
        if value is not None:
            rating = job.input(f"{tag}/rating_{word}", value, "p_rat", f"{tag}: rating of the {word}")
            checks.append(judge(job, f"pressure-{word}/{tag}", f"{tag}: greatest pressure against the {word}",
                                [greatest_pressure], rating, AT_MOST, band=band).id)
    for line in pump_path(case, job.solved(case), pump).discharge:
        if line.rating is not None:
            rating = job.input(f"{line.tag}/rating", line.rating, "p_rat", f"{line.tag}: pressure rating")
            checks.append(judge(job, f"pressure/{tag}/{line.tag}",
                                f"{line.tag}: greatest pressure of {tag} against the rating", [greatest_pressure],
                                rating, AT_MOST, band=band).id)
    if not checks:
        checks.append(ledger.not_decided(f"check/pressure/{tag}", f"{tag}: greatest pressure against the ratings",
                                         NOT_CHECKED, "the project states no rating").id)
    blocks: tuple[Block, ...] = (
        Prose(
            "With a closed discharge the pump adds the highest head of its curve to the greatest suction pressure; "
            f"levels of case {case_label(case)}, density of case {case_label(densest)}. Line ratings are compared at "
            "the shaft elevation, the lowest point of the discharge unless the profile says otherwise."
        ),
        Derivation((highest.id, static.id, greatest_pressure.id), governing=(greatest_pressure.id,)),
        Verdicts(tuple(checks)),
    )
    return Section(f"shut-off-{tag}", f"{tag}: pressure at shut-off", blocks)


def _fed_by_no_surface(job: Job, pump: Pump, cases: list[Case]) -> str:
    """A node that is no free surface, a pump before this one or an inflow, and feeds the pump in some case."""
    sources = {pump_path(case, job.solved(case), pump).source: case for case in cases}
    return next((tag for tag, case in sources.items() if not at_rest(case, tag)), "")


def _highest_point(pump: Pump) -> int:
    heads = [value.si for value in pump.curve.head]
    return heads.index(max(heads)) + 1
