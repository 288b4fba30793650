"""Findings about low pressure at nodes and along the profile of lines."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from calcpack.formulas.grade import AXIS_MARGIN, HEAD_ALONG, HYDRAULIC_GRADE
from calcpack.formulas.liquid import ABSOLUTE_PRESSURE, ATMOSPHERE
from calcpack.formulas.pipe_flow import VELOCITY_HEAD
from calcpack.formulas.suction import PORT_PRESSURE
from calcpack.hydraulics.solution import Finding
from calcpack.hydraulics.solved import Solved
from calcpack.project.model import JUNCTION, PUMP_PORT

LEAST_DEPTH = 1e-6  # m below atmospheric that is said; less is rounding


def find(solved: Solved) -> Iterator[tuple[int, Finding]]:
    """Nodes and high points whose pressure is below atmospheric or below the vapour pressure."""
    yield from _nodes(solved)
    yield from _profiles(solved)


def _nodes(solved: Solved) -> Iterator[tuple[int, Finding]]:
    topology, head = solved.topology, solved.result.head
    elevation = _elevations(solved)
    speed = solved.line_state[0]
    fastest = np.zeros(head.shape)
    count = len(topology.lines)
    np.maximum.at(fastest, topology.start[:count], speed)
    np.maximum.at(fastest, topology.end[:count], speed)
    velocity_head = VELOCITY_HEAD.evaluate(V=fastest, g=solved.net.gravity)
    below = elevation - head + velocity_head > LEAST_DEPTH
    for n, b in zip(*np.nonzero(below), strict=True):
        gauge = PORT_PRESSURE.evaluate(
            rho=solved.net.density[0, b], g=solved.net.gravity[0, b], H=head[n, b], z=elevation[n, b],
            h_v=velocity_head[n, b],
        )
        tag = topology.nodes[n]
        yield b, _low(solved, int(b), tag, f"at {tag}", gauge)
        if solved.net.demand[n, b] > 0:
            wanted = solved.said(solved.net.demand[n, b], "flow")
            lacking = solved.said(elevation[n, b] - head[n, b] + velocity_head[n, b], "head")
            text = f"Demand of {wanted} at {tag} cannot be delivered: the head there is {lacking} too low."
            yield b, Finding("unmet-demand", tag, text)


def _elevations(solved: Solved) -> np.ndarray:
    """Elevation of junctions and ports, (nodes, B); NaN for tanks and outlets and where none is given."""
    cases = solved.group.cases
    elevation = np.full((len(solved.topology.nodes), len(cases)), np.nan)
    for b, case in enumerate(cases):
        for n, node in enumerate(case.system.nodes.values()):
            if node.kind in (JUNCTION, PUMP_PORT) and node.elevation is not None:
                elevation[n, b] = node.elevation.si
    return elevation


def _profiles(solved: Solved) -> Iterator[tuple[int, Finding]]:
    topology, net = solved.topology, solved.net
    for b, case in enumerate(solved.group.cases):
        for i, line in enumerate(case.system.lines.values()):
            inner = [point for point in line.profile if 0 < point.chainage.si < line.length.si]
            first, last = solved.result.head[topology.start[i], b], solved.result.head[topology.end[i], b]
            if not inner or np.isnan(first) or solved.result.state[i, b] == 0:
                continue
            chainage = np.array([point.chainage.si for point in inner])
            axis = np.array([point.elevation.si for point in inner])
            head = HEAD_ALONG.evaluate(H_1=first, h_L=first - last, x=chainage, L=line.length.si)
            h_v = VELOCITY_HEAD.evaluate(V=solved.line_state[0][i, b], g=net.gravity[0, b])
            margin = AXIS_MARGIN.evaluate(z_h=HYDRAULIC_GRADE.evaluate(H=head, h_v=h_v), z=axis)
            worst = int(np.argmin(margin))
            if margin[worst] < -LEAST_DEPTH:
                gauge = PORT_PRESSURE.evaluate(
                    rho=net.density[0, b], g=net.gravity[0, b], H=head[worst], z=axis[worst], h_v=h_v
                )
                place = f"in {line.tag} at chainage {solved.said(chainage[worst], 'length')}"
                yield b, _low(solved, b, line.tag, place, gauge)


def _low(solved: Solved, block: int, tag: str, place: str, gauge: float) -> Finding:
    """The finding of a pressure below atmospheric, or worse, below the vapour pressure."""
    case = solved.group.cases[block]
    site, vapour = case.system.site, case.liquid.vapour_pressure.si
    air = site.atmospheric_pressure.si if site.atmospheric_pressure else ATMOSPHERE.evaluate(z=site.elevation.si)
    absolute = ABSOLUTE_PRESSURE.evaluate(p_atm=air, p_g=gauge)
    text = f"Pressure {place} is {solved.said(gauge, 'gauge_pressure')} gauge"
    if absolute < vapour:
        below = (
            f", {solved.said(absolute, 'absolute_pressure')} absolute, below the vapour pressure of "
            f"{solved.said(vapour, 'absolute_pressure')}: the liquid column cannot hold and this flow is not real."
        )
        return Finding("below-vapour-pressure", tag, text + below)
    return Finding("sub-atmospheric", tag, f"{text}, {solved.said(absolute, 'absolute_pressure')} absolute.")
