"""System curve: head that the system asks over flow, with the pump curve and every duty point."""

from __future__ import annotations

from math import isfinite

from calcpack.formulas import pump as formulas
from calcpack.hydraulics.curves import at_speed
from calcpack.hydraulics.system_curve import crossings, system_curve
from calcpack.ledger import Entry
from calcpack.project.model import Case, Pump
from calcpack.sheets.content import Block, Column, Figure, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.criteria import AT_MOST, judge
from calcpack.sheets.job import Job, case_label
from calcpack.sheets.pump_at_case import speed_ratio
from calcpack.values import LOOKED_UP, Value

POINTS = 41  # plotted points of each curve
TABULATED = 7  # flows of the table, zero to the end of the pump data

CURVES = (("head", "H", "head", "Head"), ("efficiency", "eta", "efficiency", "Efficiency"),
          ("npshr", "NPSHR", "head", "NPSHR"))


def fill(job: Job) -> Sheet:
    """Book system and pump curves of every pump with a duty, the table of heads, and the count of crossings."""
    sections = []
    for pump in job.project.system.pumps.values():
        cases = [case for case in job.cases if f"{pump.tag}/Q@{case.id}" in job.ledger]
        if cases:
            sections.append(_section(job, pump, cases))
    if not sections:
        return Sheet("system_curve", "System curve", omitted="no pump has a duty point in any case")
    return Sheet("system_curve", "System curve", tuple(sections))


def _section(job: Job, pump: Pump, cases: list[Case]) -> Section:
    tag = pump.tag
    _pump_series(job, pump, cases)
    curved = [case for case in cases if _system_series(job, pump, case)]
    without = tuple(
        Prose(f"Case {case_label(case)}: the system of {tag} has no curve. Demands alone set its flow, or there is no "
              "solution at another flow.", "note") for case in cases if case not in curved
    )
    if not curved:
        return Section(f"system-curve-{tag}", f"{tag}: system and pump curve", without)
    cases = curved
    check = _one_crossing(job, pump, cases)
    normal = next((case for case in cases if case.id == job.project.normal_case), cases[0])
    blocks: tuple[Block, ...] = (
        Figure(
            f"system-curve-{tag}", f"{tag}: system curves of all cases, pump curve and duty points",
            f"System curves start at their static head and rise with flow; the pump curve falls from {{{tag}/H_1}}. "
            f"In case {normal.id} they cross at {{{tag}/Q@{normal.id}}} and {{{tag}/H@{normal.id}}}.",
            full_page=True,
        ),
        _table(job, pump, cases),
        *without,
        Verdicts((check.id,)),
    )
    return Section(f"system-curve-{tag}", f"{tag}: system and pump curve", blocks)


def _pump_series(job: Job, pump: Pump, cases: list[Case]) -> None:
    fits = job.fits[pump.tag]
    for attribute, symbol, kind, title in CURVES:
        fit = getattr(fits, attribute)
        if fit is None:
            continue
        flows = [fit.flow_min + (fit.flow_max - fit.flow_min) * i / (POINTS - 1) for i in range(POINTS)]
        job.ledger.series(f"curve/{pump.tag}/{attribute}", f"{pump.tag}: {title} over flow", symbol, kind,
                          [(flow, fit.value(flow)) for flow in flows], points_kind="flow", source="COMMON")
    for case in (case for case in cases if speed_ratio(job, case, pump) != 1.0):
        slow = at_speed(fits.head, speed_ratio(job, case, pump))
        flows = [slow.flow_min + (slow.flow_max - slow.flow_min) * i / (POINTS - 1) for i in range(POINTS)]
        job.ledger.series(f"curve/{pump.tag}/head@{case.id}", f"{pump.tag}: head over flow, case {case_label(case)}",
                          "H", "head", [(flow, slow.value(flow)) for flow in flows], points_kind="flow",
                          source="AFFINITY", case=case.id)
    if fits.efficiency is None:
        return
    density, gravity = job.density(job.project.case(job.project.normal_case)), job.gravity()
    points = []
    for flow in (fits.head.flow_max * i / (POINTS - 1) for i in range(1, POINTS)):
        efficiency = fits.efficiency.value(flow)
        if efficiency > 0:
            hydraulic = formulas.HYDRAULIC_POWER.evaluate(rho=density.value, g=gravity.value, Q=flow,
                                                          H=fits.head.value(flow))
            points.append((flow, formulas.SHAFT_POWER.evaluate(P_h=hydraulic, eta=efficiency)))
    job.ledger.series(f"curve/{pump.tag}/power", f"{pump.tag}: shaft power over flow", "P_s", "power", points,
                      points_kind="flow", formula=formulas.SHAFT_POWER.id)


def _system_series(job: Job, pump: Pump, case: Case) -> bool:
    """Book the system curve of a case; False where it has none."""
    end = job.fits[pump.tag].head.flow_max * max(case.pumps.get(pump.tag, 1), 1)
    flows = [end * i / (POINTS - 1) for i in range(POINTS)]
    heads = system_curve(job.project, case.id, pump.tag, flows)
    if not all(isfinite(head) for head in heads):
        return False
    job.ledger.series(f"curve/system/{pump.tag}@{case.id}", f"System curve, case {case_label(case)}", "H_sys", "head",
                      zip(flows, heads, strict=True), points_kind="flow", case=case.id, source="BERNOULLI")
    return True


def _table(job: Job, pump: Pump, cases: list[Case]) -> Table:
    """Heads at the flows of the maker's points, so that the columns can be laid beside the pump curve."""
    tag = pump.tag
    count = len(pump.curve.flow)
    step = max(1, -(-count // (TABULATED + 1)))
    positions = sorted({*range(1, count + 1, step), count})
    flows = [job.ledger[f"{tag}/Q_{position}"] for position in positions]
    flows += [job.ledger[key] for key in ("duty/Q_req", "duty/Q_des") if key in job.ledger]
    flows = sorted({entry.value: entry for entry in flows}.values(), key=lambda entry: entry.value)
    for case in cases:
        heads = system_curve(job.project, case.id, tag, [entry.value for entry in flows])
        for flow, head in zip(flows, heads, strict=True):
            job.ledger.found(_key(tag, flow, case), float(head), "H_sys", f"Head of the system at {flow.title.lower()}",
                             "head", source="BERNOULLI", locator="network solution at a given flow",
                             residual=job.solved(case).convergence.energy, case=case.id, operands={"Q": flow.id})
    columns = (Column("Flow of", width=2.2), Column("Flow", "Q", "flow"),
               *(Column(f"Case {case.id}", "H_sys", "head") for case in cases))
    rows = tuple(Row((Ref(flow.id, "title"), Ref(flow.id), *(Ref(_key(tag, flow, case)) for case in cases)))
                 for flow in flows)
    return Table(f"{tag}: head of the system over flow", columns, rows)


def _key(tag: str, flow: Entry, case: Case) -> str:
    return f"curve/system/{tag}/at-{flow.id.rpartition('/')[2]}@{case.id}"


def _one_crossing(job: Job, pump: Pump, cases: list[Case]) -> Entry:
    """One crossing inside the curve data in every case: two mean an unstable duty."""
    tag = pump.tag
    one = Value(1.0, "count", "1", source="COMMON", locator="a stable duty is the only crossing", status=LOOKED_UP)
    limit = job.input("limits/crossings", one, "x_lim", "Crossings of pump and system curve")
    counts = []
    for case in cases:
        found = crossings(job.project, case.id, tag)
        counts.append(job.ledger.found(
            f"{tag}/crossings@{case.id}", float(len(found)), "i_x", f"{tag}: crossings of pump and system curve",
            "count", source="DEFINITION", locator="scan of the curve data", residual=0.0, case=case.id, digits=1,
        ))
    return judge(job, f"one-crossing/{tag}", f"{tag}: pump and system curve cross once", counts, limit, AT_MOST)
