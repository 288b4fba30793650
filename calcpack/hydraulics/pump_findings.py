"""Findings about pumps: no duty, a duty outside the data, two duties, load sharing."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from calcpack.hydraulics.solution import Finding
from calcpack.hydraulics.solved import Solved
from calcpack.hydraulics.system_curve import find_crossings, required_head

END_TOLERANCE = 1e-9  # of the last flow of the data
# Units in parallel share the flow badly where 1 % of the head moves more than a tenth of the flow (common practice).
HEAD_SHIFT, FLOW_SHIFT = 0.01, 0.1


def find(solved: Solved) -> Iterator[tuple[int, Finding]]:
    """Findings of every running pump."""
    for pump, tag in enumerate(solved.topology.pumps):
        link = len(solved.topology.lines) + pump
        running = solved.alive[link] & ~solved.unsolved
        each = solved.pump_flow[pump] / np.maximum(solved.net.running[pump], 1.0)
        yield from _without_flow(solved, pump, tag, np.flatnonzero(running & (each == 0)))
        yield from _outside_data(solved, pump, tag, each, running & (each > 0))
        for b in np.flatnonzero(running):
            yield from _two_duties(solved, pump, tag, int(b))
        yield from _sharing(solved, pump, tag, each, running & (each > 0))


def _without_flow(solved: Solved, pump: int, tag: str, blocks: np.ndarray) -> Iterator[tuple[int, Finding]]:
    if not len(blocks):
        return
    needed = required_head(solved.net.take(blocks), pump, np.zeros(len(blocks)))
    others = np.delete(solved.pump_flow[:, blocks], pump, axis=0)
    for b, need, pushed in zip(blocks, needed, (others > 0).any(axis=0), strict=True):
        shutoff = solved.group.curves[pump][b].value(0.0)
        has = f"shut-off head {solved.said(shutoff, 'head')}"
        if np.isnan(need):
            yield b, Finding("no-flow", tag, f"{tag} runs without flow: its discharge leads nowhere; {has}.")
            continue
        short = solved.said(need - shutoff, "head")
        wants = f"{solved.said(need, 'head')} wanted at no flow"
        if pushed and need > shutoff:
            text = f"{tag} runs without flow, held shut by the other pumps: {has}, {wants}, {short} short."
            yield b, Finding("closed-by-check-valve", tag, text)
        elif need > shutoff:
            text = f"No flow through {tag}: {has}, {wants}, {short} short; the check valve stays shut."
            yield b, Finding("no-flow-static-above-shutoff", tag, text)
        else:
            yield b, Finding("no-flow", tag, f"{tag} runs without flow: {has}, {wants}; no demand or outlet takes it.")


def _outside_data(solved: Solved, pump: int, tag: str, each: np.ndarray, running: np.ndarray):
    curves = solved.group.curves[pump]
    last = solved.net.curves.flow_max[pump]
    past = np.flatnonzero(running & (each > last * (1 + END_TOLERANCE)))
    if len(past):
        units = np.maximum(solved.net.running[pump, past], 1.0)
        needed = required_head(solved.net.take(past), pump, last[past] * units)
        for b, need in zip(past, needed, strict=True):
            makes = solved.said(curves[b].value(last[b]), "head")
            text = (
                f"No duty point on the curve of {tag}: at its last flow, {solved.said(last[b], 'flow')} per unit, it "
                f"makes {makes} and the system takes {solved.said(need, 'head')}. "
                f"Balance would need {solved.said(each[b], 'flow')} per unit, which the data do not cover."
            )
            yield b, Finding("past-end-of-curve", tag, text)
    first = np.array([curve.flow_min for curve in curves])
    for b in np.flatnonzero(running & (each < first * (1 - END_TOLERANCE))):
        text = (
            f"{tag} runs at {solved.said(each[b], 'flow')} per unit, below the first flow of its curve data, "
            f"{solved.said(first[b], 'flow')}: the head there is extrapolated."
        )
        yield b, Finding("below-start-of-curve", tag, text)


def _two_duties(solved: Solved, pump: int, tag: str, block: int) -> Iterator[tuple[int, Finding]]:
    curve = solved.group.curves[pump][block]
    if not curve.droops:
        return
    found = find_crossings(solved.net.take(np.array([block])), pump, curve)
    if len(found) < 2:
        return
    listed = "; ".join(
        f"{solved.said(point.flow, 'flow')} at {solved.said(point.head, 'head')} "
        f"({'stable' if point.stable else 'not stable'})"
        for point in found
    )
    shown = solved.said(solved.pump_flow[pump, block], "flow")
    text = (
        f"The head curve of {tag} droops and meets the system curve {len(found)} times: {listed}. Shut-off head "
        f"{solved.said(curve.value(0.0), 'head')}. The flow may hunt or not start; {shown} is shown."
    )
    yield block, Finding("two-intersections", tag, text)


def _sharing(solved: Solved, pump: int, tag: str, each: np.ndarray, running: np.ndarray):
    many = running & (solved.net.running[pump] > 1)
    if not many.any():
        return
    for b in np.flatnonzero(many):
        curve = solved.group.curves[pump][b]
        head, slope = curve.value(each[b]), curve.slope(each[b])
        if HEAD_SHIFT * abs(head) > FLOW_SHIFT * each[b] * abs(slope):
            shift = HEAD_SHIFT * abs(head)
            moved = solved.said(min(shift / max(abs(slope), 1e-12), each[b]), "flow")
            units = int(solved.net.running[pump, b])
            text = (
                f"The head curve of {tag} is flat at the duty: a difference of {solved.said(shift, 'head')} between "
                f"its {units} units moves {moved} or more from one to the other."
            )
            yield b, Finding("flat-curve", tag, text)
