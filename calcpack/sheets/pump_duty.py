"""Pump duty: where pump and system balance in every case, and how the duty lies on the curve."""

from __future__ import annotations

from calcpack.formulas import pump as formulas
from calcpack.formulas import viscous
from calcpack.ledger import Entry
from calcpack.ledger.entry import OUT_OF_RANGE
from calcpack.project.model import Case, Pump
from calcpack.sheets.compare import difference
from calcpack.sheets.content import Block, Column, Derivation, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.criteria import AT_LEAST, AT_MOST, house_limit, judge
from calcpack.sheets.flow_basis import required_flow
from calcpack.sheets.job import Job, case_label
from calcpack.sheets.pump_at_case import (
    best_flow,
    case_value_at,
    end_flow,
    speed_ratio,
    viscosity_parameter,
    viscous_factors,
)
from calcpack.values import CONFIRMED, LOOKED_UP, Value

WATER = "water"  # liquid model whose curves need no look at viscosity


def fill(job: Job) -> Sheet:
    """Book flow, head, efficiency, NPSHR and position of every pump in every case, and the criteria on them."""
    sections = []
    for pump in job.project.system.pumps.values():
        running = [case for case in job.cases if case.pumps.get(pump.tag)]
        if not running:
            continue
        duties = [case for case in running if f"{pump.tag}/H_sys@{case.id}" in job.ledger and _book(job, case, pump)]
        exists = _duty_exists(job, pump, running, duties).id
        if duties:
            sections.append(_section(job, pump, duties, (exists, *_judge(job, pump, duties))))
        else:
            sections.append(Section(f"pump-duty-{pump.tag}", f"{pump.tag}: duty points", (Verdicts((exists,)),)))
    if not sections:
        return Sheet("pump_duty", "Pump duty", omitted="no pump runs in any case")
    return Sheet("pump_duty", "Pump duty", tuple(sections))


def _duty_exists(job: Job, pump: Pump, running: list[Case], duties: list[Case]) -> Entry:
    """A duty inside the curve data in every case in which the pump runs; the solver's findings say why where not."""
    tag, numbers = pump.tag, {}
    for name, cases, title in (("duties", duties, "cases with a duty inside the curve data"),
                               ("runs", running, "cases in which it runs")):
        numbers[name] = job.ledger.looked_up(
            f"{tag}/{name}", float(len(cases)), f"i_{name[0]}", f"{tag}: {title}", "count", source="DEFINITION",
            locator="counted", digits=len(str(len(cases))),
        )
    missing = [case for case in running if case not in duties]
    found = [f"case {case.id}: {finding.text}" for case in missing for finding in job.solved(case).findings
             if finding.tag == tag]
    return judge(job, f"duty-exists/{tag}", f"{tag}: a duty inside the curve data in every case", [numbers["duties"]],
                 numbers["runs"], AT_LEAST, note=" ".join(found))


def _book(job: Job, case: Case, pump: Pump) -> bool:
    tag, duty = pump.tag, job.solved(case).pumps[pump.tag]
    fit = job.fits[tag]
    ratio = speed_ratio(job, case, pump)
    within = ratio * fit.head.flow_min <= duty.flow_each <= ratio * fit.head.flow_max
    if not duty.running or not within or duty.flow_each <= 0:
        return False
    flow = job.ledger.found(
        f"{tag}/Q@{case.id}", duty.flow, "Q", f"{tag}: flow of the running units", "flow", source="CONTINUITY",
        locator="network solution", residual=job.solved(case).convergence.continuity, case=case.id,
    )
    each = flow
    if duty.running > 1:
        number = Value(float(duty.running), "count", str(duty.running), source="case definition", status=CONFIRMED)
        running = job.input(f"{tag}/i@{case.id}", number, "i", f"{tag}: units running", case)
        each = job.ledger.apply(f"{tag}/Q_1@{case.id}", formulas.FLOW_PER_PUMP, case=case.id, Q=flow, i=running)
    else:
        each = job.ledger.found(
            f"{tag}/Q_1@{case.id}", duty.flow_each, "Q_1", f"{tag}: flow of one unit", "flow", source="CONTINUITY",
            locator="one unit runs", residual=0.0, case=case.id, operands={"Q": flow.id},
        )
    best = best_flow(job, pump, case)
    case_value_at(job, pump, "H", each, case)
    if fit.efficiency is not None:
        case_value_at(job, pump, "eta", each, case)
    if fit.npshr is not None:
        case_value_at(job, pump, "NPSHR", each, case)
    job.ledger.apply(f"{tag}/r@{case.id}", formulas.PERCENT_BEP, case=case.id, Q=each, Q_BEP=best)
    difference(job, f"{tag}/closure@{case.id}", "d_H", "Head of the pump against head of the system",
               own=job.ledger[f"{tag}/H_sys@{case.id}"], other=job.ledger[f"{tag}/H@{case.id}"])
    return True


def _judge(job: Job, pump: Pump, cases: list[Case]) -> tuple[str, ...]:
    tag, ledger = pump.tag, job.ledger
    flows = [ledger[f"{tag}/Q@{case.id}"] for case in cases]
    each = [ledger[f"{tag}/Q_1@{case.id}"] for case in cases]
    ratios = [ledger[f"{tag}/r@{case.id}"] for case in cases]
    checks = [*_capacity(job, pump, flows)]
    last = [end_flow(job, pump, case) for case in cases]
    near_end = house_limit(job, "curve_end_band", "fraction", "5 %", 0.05, "End of curve: warning band")
    checks.append(judge(job, f"end-of-curve/{tag}", f"{tag}: flow within the curve data", each, last, AT_MOST,
                        band=near_end))
    low = job.input(f"{tag}/r_low", pump.preferred_low, "r_low", f"{tag}: preferred region, lower end")
    high = job.input(f"{tag}/r_high", pump.preferred_high, "r_high", f"{tag}: preferred region, upper end")
    checks.append(judge(job, f"preferred-low/{tag}", f"{tag}: preferred region, lower end", ratios, low, AT_LEAST))
    checks.append(judge(job, f"preferred-high/{tag}", f"{tag}: preferred region, upper end", ratios, high, AT_MOST))
    if pump.minimum_flow is not None:
        least = job.input(f"{tag}/Q_min", pump.minimum_flow, "Q_min", f"{tag}: minimum continuous flow")
        band = house_limit(job, "minimum_flow_band", "fraction", "10 %", 0.1, "Minimum flow: warning band")
        checks.append(judge(job, f"minimum-flow/{tag}", f"{tag}: minimum continuous flow", each, least, AT_LEAST,
                            band=band))
    checks.append(_curve_shape(job, pump))
    if job.project.system.liquid.model != WATER:
        checks += _water_curve(job, pump, cases)
    return tuple(check.id for check in checks)


def _capacity(job: Job, pump: Pump, flows: list[Entry]) -> list[Entry]:
    tag, ledger, requirement = pump.tag, job.ledger, job.project.requirement
    required = required_flow(job)
    if required is None or len(job.project.system.pumps) > 1:
        return []  # with several pump items the requirement is on the system, not on one of them
    band = house_limit(job, "capacity_band", "fraction", "3 %", 0.03, "Capacity: warning band")
    checks = [judge(job, f"capacity/{tag}", f"{tag}: required flow in every case", flows, required, AT_LEAST,
                    band=band)]
    normal = f"{tag}/Q@{requirement.case or job.project.normal_case}"
    if "duty/Q_des" in ledger and normal in ledger:
        design = ledger["duty/Q_des"]
        checks.append(judge(job, f"design-flow/{tag}", f"{tag}: design flow at its case", [ledger[normal]], design,
                            AT_LEAST, band=band))
    if normal in ledger:
        base = ledger["duty/Q_des"] if "duty/Q_des" in ledger else required
        excess = house_limit(job, "oversupply", "fraction", "115 %", 1.15, "Oversupply: limit on the design flow")
        share = ledger.apply(f"{tag}/r_des", formulas.PERCENT_BEP, symbol="r_des", case=ledger[normal].case,
                             title="Flow relative to the design flow", Q=ledger[normal], Q_BEP=base)
        near = house_limit(job, "oversupply_band", "fraction", "4 %", 0.04, "Oversupply: warning band")
        checks.append(judge(job, f"oversupply/{tag}", f"{tag}: flow not far above the design flow", [share], excess,
                            AT_MOST, band=near))
    return checks


def _water_curve(job: Job, pump: Pump, cases: list[Case]) -> list[Entry]:
    """Whether the curve for water holds for the liquid: the greatest parameter B against the limit of the method."""
    found = [viscosity_parameter(job, pump, case) for case in cases if viscous_factors(job, pump, case) is None]
    parameters = [parameter for parameter in found if parameter is not None]
    if not parameters:
        return []
    greatest, title = max(parameters, key=lambda entry: entry.value), f"{pump.tag}: curve for water holds"
    text = f"{viscous.NO_CORRECTION_LIMIT:g}"
    one = Value(viscous.NO_CORRECTION_LIMIT, "ratio", text, source="HI-9.6.7", locator="no correction up to here",
                status=LOOKED_UP)
    limit = job.input("limits/viscosity_parameter", one, "x_lim", "Viscosity parameter up to which the curve holds")
    if greatest.value <= limit.value:
        return [judge(job, f"viscosity/{pump.tag}", title, [greatest], limit, AT_MOST)]
    reason = (f"the viscosity parameter {{{greatest.id}}} is above {{{limit.id}}}: head and efficiency are those for "
              "water, without the correction of the method; ask the maker for the curve with this liquid")
    return [job.ledger.not_decided(f"check/viscosity/{pump.tag}", title, OUT_OF_RANGE, reason, source="HI-9.6.7",
                                   case=greatest.case)]


def _curve_shape(job: Job, pump: Pump) -> Entry:
    """Head must fall from point to point: the least fall between neighbours against zero."""
    tag, ledger, falls = pump.tag, job.ledger, []
    for position in range(1, len(pump.curve.flow)):
        falls.append(ledger.apply(
            f"{tag}/fall_{position}", formulas.PUMP_HEAD, symbol=f"Delta_H_{position}",
            title=f"Fall of head from point {position} to point {position + 1}",
            H_d=f"{tag}/H_{position}", H_s=f"{tag}/H_{position + 1}",
        ))
    least = min(falls, key=lambda entry: entry.value)
    zero = Value(0.0, "head", "0 m" if job.ledger.system == "SI" else "0 ft", source="COMMON",
                 locator="a curve that rises steadily to shut-off crosses the system once", status=LOOKED_UP)
    limit = job.input("limits/curve_fall", zero, "x_lim", "Least fall of head between neighbouring points")
    return judge(job, f"curve-shape/{tag}", f"{tag}: head falls steadily with flow", [least], limit, AT_LEAST)


def _section(job: Job, pump: Pump, cases: list[Case], checks: tuple[str, ...]) -> Section:
    tag = pump.tag
    normal = next((case for case in cases if case.id == job.project.normal_case), cases[0])
    symbols = [symbol for symbol in ("Q", "Q_1", "H", "eta", "NPSHR", "r")
               if f"{tag}/{symbol}@{normal.id}" in job.ledger]
    derived = tuple(f"{tag}/{symbol}@{normal.id}" for symbol in symbols
                    if symbol != "Q_1" or job.ledger[f"{tag}/Q_1@{normal.id}"].formula)
    at_case = ["n", "Q_BEP", "Q_end", "a_0", "a_1", "b_1", "b_2", "b_3", "c_0", "C_Q", "C_HB", "C_eta"]
    if f"{tag}/C_Q@{normal.id}" in job.ledger:
        at_case.insert(at_case.index("C_Q"), "B")
    derived = (*(entry_id for entry_id in (f"{tag}/{name}@{normal.id}" for name in at_case) if entry_id in job.ledger),
               *derived)
    heads = {"Q": ("Flow", "flow"), "H": ("Head, curve", "head"), "eta": ("Efficiency", "efficiency"),
             "NPSHR": ("NPSHR", "head"), "r": ("Share of best-efficiency flow", "fraction")}
    shown = [symbol for symbol in heads if symbol in symbols]
    columns = (
        Column("Case", width=3.2),
        *(Column(heads[symbol][0], symbol, heads[symbol][1], f"{tag}/{symbol}@{normal.id}") for symbol in shown),
        Column("Head, system", "H_sys", "head", f"{tag}/H_sys@{normal.id}"),
    )
    rows = tuple(
        Row((case_label(case), *(Ref(f"{tag}/{symbol}@{case.id}") for symbol in shown), Ref(f"{tag}/H_sys@{case.id}")),
            mark="in full" if case is normal else "")
        for case in cases
    )
    blocks: tuple[Block, ...] = (
        Prose(
            "The flow is where the head of the fitted pump curve equals the head that the system needs; the two are "
            f"computed apart and compared. Derived in full for case {case_label(normal)}."
        ),
        Derivation(derived, governing=(f"{tag}/H@{normal.id}",)),
        Table(f"{tag}: duty in all cases", columns, rows),
        Verdicts(checks),
    )
    return Section(f"pump-duty-{tag}", f"{tag}: duty points", blocks)
