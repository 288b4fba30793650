"""Closed loop: the static pressure that keeps air out at its highest point while the pumps stand."""

from __future__ import annotations

from calcpack.formulas import grade
from calcpack.project.model import OUTLET, TANK
from calcpack.sheets.content import Derivation, Section, Sheet, Verdicts
from calcpack.sheets.criteria import AT_LEAST, house_limit, judge
from calcpack.sheets.job import Job
from calcpack.sheets.total_head import end_head


def fill(job: Job) -> Sheet:
    """Book the static pressure at the highest point, with the densest liquid of the cases, and its criterion."""
    title = "Closed loop"
    system, ledger = job.project.system, job.ledger
    fixed = [node for node in system.nodes.values() if node.kind in (TANK, OUTLET)]
    if len(fixed) != 1 or fixed[0].gas_pressure is None:
        return Sheet("closed_loop", title, omitted="the system is open: it has free surfaces or outlets")
    heights = [(node.elevation, node.tag) for node in system.nodes.values() if node.elevation is not None]
    heights += [(point.elevation, line.tag) for line in system.lines.values() for point in line.profile]
    highest, where = max(heights, key=lambda pair: pair[0].si)
    case = max(job.cases, key=lambda one: job.density(one).value)
    top = job.input("loop/z", highest, "z", f"Highest point of the loop, at {where}")
    static = ledger.apply("loop/p", grade.NODE_PRESSURE, title=f"Static pressure at {where}, pumps off",
                          rho=job.density(case), g=job.gravity(), H=end_head(job, case, fixed[0].tag), z=top)
    limit = house_limit(job, "loop_pressure", "gauge_pressure", "10 kPa gauge", 10e3,
                        "Static pressure at the top of a closed loop")
    band = house_limit(job, "loop_band", "fraction", "50 %", 0.5, "Static pressure of a loop: warning band")
    check = judge(job, "loop-static", "Closed loop: static pressure at the highest point", [static], limit, AT_LEAST,
                  band=band, warning="little pressure is left to keep air out")
    blocks = (Derivation((static.id,), governing=(static.id,)), Verdicts((check.id,)))
    return Sheet("closed_loop", title, (Section("loop-static", "Static pressure with the pumps off", blocks),))
