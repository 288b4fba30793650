"""Solved arrays -> the solution that sheets read."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calcpack.formulas.fittings import EQUIPMENT_QUADRATIC, LOCAL_HEAD
from calcpack.formulas.pipe_flow import FRICTION_HEAD
from calcpack.hydraulics import laws
from calcpack.hydraulics.assemble import FIXED, Group, equipment_states
from calcpack.hydraulics.findings import find
from calcpack.hydraulics.newton import Result
from calcpack.hydraulics.solution import CaseSolution, Convergence, LineFlow, PumpDuty
from calcpack.project.model import Case, Line


@dataclass(frozen=True, eq=False)
class _Losses:
    """Parts of the head losses of the lines as nested lists [line][block]."""

    velocity: list
    reynolds: list
    factor: list
    friction: list
    local: list


def case_solutions(group: Group, result: Result, units: str) -> dict[str, CaseSolution]:
    """The solution of every case of ``group`` by case id; ``units`` is the unit system of finding texts."""
    net, topology = group.network, group.network.topology
    count = len(topology.lines)
    flow = result.flow[:count]
    parts = _losses(group, flow)
    flows, state, pump_flow = flow.tolist(), result.state[:count].tolist(), result.flow[count:]
    each = pump_flow / np.maximum(net.running, 1.0)
    head = np.where(net.running > 0, net.curves.evaluate(each)[0], 0.0)
    shut = (result.state[:count] == 0) & ~result.dead[topology.start[:count]]
    findings = find(group, result, units)
    made = {}
    for b, case in enumerate(group.cases):
        lines = {
            tag: LineFlow(
                flow=flows[i][b],
                velocity=parts.velocity[i][b],
                reynolds=parts.reynolds[i][b],
                friction_factor=parts.factor[i][b],
                friction_head=parts.friction[i][b],
                local_head=parts.local[i][b],
                equipment_head=_equipment(case, line, flows[i][b], state[i][b]) if line.equipment else {},
                open=not shut[i, b],
            )
            for i, (tag, line) in enumerate(case.system.lines.items())
        }
        pumps = {
            tag: PumpDuty(float(each[p, b]), float(pump_flow[p, b]), float(head[p, b]), int(net.running[p, b]))
            for p, tag in enumerate(topology.pumps)
        }
        made[case.id] = CaseSolution(
            case.id,
            dict(zip(topology.nodes, result.head[:, b].tolist(), strict=True)),
            lines,
            pumps,
            Convergence(
                int(result.iterations[b]),
                float(result.continuity[b]),
                float(result.energy[b]),
                bool(result.converged[b]),
            ),
            findings[b],
        )
    return made


def _losses(group: Group, flow: np.ndarray) -> _Losses:
    net = group.network
    speed, reynolds, factor = laws.line_factors(net, flow)
    sign = np.sign(flow)
    known = np.where(speed > 0, factor, 0.0)
    friction = sign * FRICTION_HEAD.evaluate(f=known, L=net.length, D=net.bore, V=speed, g=net.gravity)
    local = sign * LOCAL_HEAD.evaluate(K=net.local, V=speed, g=net.gravity)
    return _Losses(*(part.tolist() for part in (sign * speed, reynolds, factor, friction, local)))


def _equipment(case: Case, line: Line, flow: float, state: int) -> dict[str, float]:
    """Head lost in each item of equipment, signed like the flow; a fixed loss at rest holds no head."""
    heads = {}
    for tag, loss in equipment_states(case, line):
        if loss.law == FIXED:
            heads[tag] = loss.head.si * (state if flow else 0)
        else:
            heads[tag] = float(
                np.sign(flow) * EQUIPMENT_QUADRATIC.evaluate(h_r=loss.head.si, Q=flow, Q_r=loss.flow.si)
            )
    return heads
