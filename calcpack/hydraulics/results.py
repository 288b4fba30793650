"""Solved arrays -> the solution that sheets read."""

from __future__ import annotations

import numpy as np

from calcpack.formulas.fittings import LOCAL_HEAD
from calcpack.formulas.pipe_flow import FRICTION_HEAD
from calcpack.hydraulics import laws
from calcpack.hydraulics.assemble import FIXED, Group, equipment_states
from calcpack.hydraulics.equipment import quadratic_head
from calcpack.hydraulics.findings import find
from calcpack.hydraulics.newton import Result
from calcpack.hydraulics.solution import CaseSolution, Convergence, LineFlow, PumpDuty
from calcpack.project.model import Case, Line


def case_solutions(group: Group, result: Result, units: str) -> dict[str, CaseSolution]:
    """The solution of every case of ``group`` by case id; ``units`` is the unit system of finding texts."""
    net, topology = group.network, group.network.topology
    count = len(topology.lines)
    flow, pump_flow = result.flow[:count], result.flow[count:]
    each = pump_flow / np.maximum(net.running, 1.0)
    head = np.where(net.running > 0, net.curves.evaluate(each)[0], 0.0)
    dead = result.dead[topology.start[:count]] | result.dead[topology.end[:count]]
    is_open = (result.state[:count] != 0) | dead
    columns = [part.T for part in (*_losses(group, flow), is_open, result.state[:count])]
    findings = find(group, result, units)
    made = {}
    for b, case in enumerate(group.cases):
        rows = zip(*(column[b].tolist() for column in columns), strict=True)
        lines = {
            line.tag: LineFlow(*row[:6], _equipment(case, line, row[0], row[7]) if line.equipment else {}, row[6])
            for line, row in zip(case.system.lines.values(), rows, strict=True)
        }
        pumps = {
            tag: PumpDuty(float(each[p, b]), float(pump_flow[p, b]), float(head[p, b]), int(net.running[p, b]))
            for p, tag in enumerate(topology.pumps)
        }
        made[case.id] = CaseSolution(
            case.id,
            dict(zip(topology.nodes, (result.head[:, b] + 0.0).tolist(), strict=True)),
            lines,
            pumps,
            Convergence(
                int(result.iterations[b]),
                float(result.continuity[b]),
                float(result.energy[b]),
                bool(result.converged[b]),
            ),
            speeds={tag: value.si for tag, value in case.speeds.items()},
            findings=findings[b],
        )
    return made


def _losses(group: Group, flow: np.ndarray) -> tuple[np.ndarray, ...]:
    """Flow, velocity, Reynolds number, friction factor, friction and local head of the lines, each (lines, B)."""
    net = group.network
    speed, reynolds, factor = laws.line_factors(net, flow)
    sign = np.sign(flow)
    known = np.where(speed > 0, factor, 0.0)
    friction = sign * FRICTION_HEAD.evaluate(f=known, L=net.length, D=net.bore, V=speed, g=net.gravity)
    local = sign * LOCAL_HEAD.evaluate(K=net.local, V=speed, g=net.gravity)
    return flow, sign * speed, reynolds, factor, friction, local


def _equipment(case: Case, line: Line, flow: float, state: int) -> dict[str, float]:
    """Head lost in each item of equipment, signed like the flow; a fixed loss at rest holds no head."""
    heads = {}
    for tag, loss in equipment_states(case, line):
        if loss.law == FIXED:
            heads[tag] = loss.head.si * (state if flow else 0)
        else:
            heads[tag] = float(np.sign(flow)) * quadratic_head(loss, abs(flow), case.system.site.gravity.si)
    return heads
