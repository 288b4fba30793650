"""Power, motor and energy: what the liquid, the shaft and the meter see in every case."""

from __future__ import annotations

from calcpack.formulas import duty
from calcpack.formulas import pump as formulas
from calcpack.ledger import Entry
from calcpack.project.model import Case, Motor, Pump
from calcpack.sheets.content import Block, Column, Derivation, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.criteria import AT_LEAST, judge
from calcpack.sheets.job import Job, case_label, greatest
from calcpack.sheets.pump_at_case import value_at

END = "end of curve"


def fill(job: Job) -> Sheet:
    """Book power of every pump with efficiency data, the motor criteria and the energy of the normal case."""
    sections = []
    for pump in job.project.system.pumps.values():
        cases = [case for case in job.cases if f"{pump.tag}/eta@{case.id}" in job.ledger]
        if not cases:
            continue
        for case in cases:
            _book(job, case, pump)
        sections.append(_section(job, pump, cases))
        energy = _energy(job, pump, cases)
        if energy:
            sections.append(energy)
    if not sections:
        return Sheet("power", "Power, motor and energy", omitted="no pump has efficiency data")
    return Sheet("power", "Power, motor and energy", tuple(sections))


def _book(job: Job, case: Case, pump: Pump) -> None:
    tag, ledger = pump.tag, job.ledger
    hydraulic = ledger.apply(
        f"{tag}/P_h@{case.id}", formulas.HYDRAULIC_POWER, case=case.id, rho=job.density(case), g=job.gravity(),
        Q=f"{tag}/Q_1@{case.id}", H=f"{tag}/H@{case.id}",
    )
    shaft = ledger.apply(
        f"{tag}/P_s@{case.id}", formulas.SHAFT_POWER, case=case.id, P_h=hydraulic, eta=f"{tag}/eta@{case.id}"
    )
    if pump.motor is None:
        return
    motor, drive = _driver(job, pump.tag, pump.motor)
    electric = ledger.apply(f"{tag}/P_e@{case.id}", formulas.ELECTRIC_POWER, case=case.id, P_s=shaft, eta_m=motor,
                            eta_d=drive)
    ledger.apply(f"{tag}/eta_w@{case.id}", formulas.WIRE_TO_WATER, case=case.id, P_h=hydraulic, P_e=electric)
    ledger.apply(f"{tag}/E@{case.id}", formulas.SPECIFIC_ENERGY, case=case.id, P_e=electric,
                 Q=f"{tag}/Q_1@{case.id}")


def _driver(job: Job, tag: str, motor: Motor) -> tuple[Entry, Entry]:
    return (
        job.input(f"{tag}/eta_m", motor.efficiency, "eta_m", f"{tag}: motor efficiency at the duty load"),
        job.input(f"{tag}/eta_d", motor.drive_efficiency, "eta_d", f"{tag}: drive efficiency"),
    )


def _motor_checks(job: Job, pump: Pump, cases: list[Case]) -> tuple[list[str], list[str]]:
    """Motor rating over the greatest shaft power of the cases, and over the power at the end of the curve."""
    tag, ledger, motor = pump.tag, job.ledger, pump.motor
    if motor is None:
        return [], [ledger.not_decided(f"check/motor/{tag}", f"{tag}: motor rating", "not checked",
                                       "the project states no motor").id]
    rating = job.input(f"{tag}/P_m", motor.rating, "P_m", f"{tag}: motor rating")
    heaviest = greatest(ledger, [f"{tag}/P_s@{case.id}" for case in cases])
    ratio = ledger.apply(f"{tag}/r_m", formulas.MOTOR_RATIO, case=heaviest.case, P_m=rating, P_s=heaviest)
    derived, checks = [ratio.id], []
    if motor.margin is not None:
        limit = job.input(f"{tag}/r_m_lim", motor.margin, "r_m_lim", f"{tag}: motor rating over greatest shaft power")
        checks.append(judge(job, f"motor/{tag}", f"{tag}: motor rating over the greatest shaft power of the cases",
                            [ratio], limit, AT_LEAST).id)
    end_ids = _end_of_curve(job, pump, cases)
    end = ledger[end_ids[-1]]
    checks.append(judge(job, f"motor-end/{tag}", f"{tag}: motor carries the power at the end of the curve", [rating],
                        end, AT_LEAST, note="power at the last point of the maker's curve").id)
    return [*derived, *end_ids], checks


def _end_of_curve(job: Job, pump: Pump, cases: list[Case]) -> list[str]:
    tag, ledger = pump.tag, job.ledger
    flow = ledger[f"{tag}/Q_{len(pump.curve.flow)}"]
    densest = max(cases, key=lambda case: job.density(case).value)
    head = value_at(job, pump, "H", flow, f"{tag}/H_end")
    efficiency = value_at(job, pump, "eta", flow, f"{tag}/eta_end")
    head.symbol, efficiency.symbol = "H_end", "eta_end"
    head.title, efficiency.title = f"Head, {END}", f"Efficiency, {END}"
    hydraulic = ledger.apply(f"{tag}/P_h_end", formulas.HYDRAULIC_POWER, title=f"Power given to the liquid, {END}",
                             rho=job.density(densest), g=job.gravity(), Q=flow, H=head)
    shaft = ledger.apply(f"{tag}/P_s_end", formulas.SHAFT_POWER, symbol="P_s_end", title=f"Shaft power, {END}",
                         P_h=hydraulic, eta=efficiency)
    return [head.id, efficiency.id, hydraulic.id, shaft.id]


def _section(job: Job, pump: Pump, cases: list[Case]) -> Section:
    tag = pump.tag
    governing = greatest(job.ledger, [f"{tag}/P_s@{case.id}" for case in cases])
    case = job.project.case(governing.case)
    columns = [("Hydraulic", "P_h", "power"), ("Shaft", "P_s", "power"), ("Electric", "P_e", "power"),
               ("Wire to water", "eta_w", "efficiency"), ("Energy per volume", "E", "specific_energy")]
    present = [column for column in columns if f"{tag}/{column[1]}@{case.id}" in job.ledger]
    derived, checks = _motor_checks(job, pump, cases)
    rows = tuple(
        Row((case_label(one), *(Ref(f"{tag}/{symbol}@{one.id}") for _, symbol, _ in present)),
            mark="governs motor" if one is case else "")
        for one in cases
    )
    blocks: tuple[Block, ...] = (
        Prose(f"Derived in full for the case of the greatest shaft power: case {case_label(case)}."),
        Derivation((*(f"{tag}/{symbol}@{case.id}" for _, symbol, _ in present), *derived), governing=(governing.id,)),
        Table(
            f"{tag}: power of one unit, all cases",
            (Column("Case", width=3.2),
             *(Column(title, symbol, kind, f"{tag}/{symbol}@{case.id}") for title, symbol, kind in present)),
            rows,
        ),
        Verdicts(tuple(checks)),
    )
    return Section(f"power-{tag}", f"{tag}: power and motor", blocks)


def _energy(job: Job, pump: Pump, cases: list[Case]) -> Section | None:
    """Energy of a year at the normal case, where daily volume and operating days are given."""
    tag, ledger, economy = pump.tag, job.ledger, job.project.economy
    normal = job.project.normal_case
    if economy is None or economy.days_per_year is None or "duty/V_d" not in ledger or pump.motor is None:
        return None
    if normal not in {case.id for case in cases} or len(job.project.system.pumps) > 1:
        return None
    hours = ledger.apply(f"{tag}/t_d", duty.RUNNING_HOURS, V_d="duty/V_d", Q=f"{tag}/Q@{normal}", case=normal)
    days = job.input("economy/n_d", economy.days_per_year, "n_d", "Days of operation in a year")
    year = ledger.apply(f"{tag}/t_y", formulas.ANNUAL_HOURS, t_d=hours, n_d=days, t_1="duty/t_1")
    energy = ledger.apply(f"{tag}/W", formulas.ANNUAL_ENERGY, P_e=f"{tag}/P_e@{normal}", t_y=year)
    ids = [hours.id, year.id, energy.id]
    if economy.tariff is not None:
        tariff = job.input("economy/c", economy.tariff, "c", f"Price of energy, {economy.currency}")
        cost = ledger.apply(f"{tag}/C", formulas.ANNUAL_COST, title=f"Energy cost of a year, {economy.currency}",
                            W=energy, c=tariff)
        ids.append(cost.id)
    return Section(
        f"energy-{tag}", f"{tag}: energy of a year",
        (Prose("For the daily volume at the normal case throughout the year; other cases are not weighted."),
         Derivation(tuple(ids))),
    )
