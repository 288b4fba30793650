"""What a reader must know about a solved case: states without a duty, shut valves, low pressures, each with numbers."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from calcpack.formulas.pipe_flow import LAMINAR_LIMIT, TURBULENT_LIMIT, solve_colebrook
from calcpack.hydraulics import laws, pressures, pump_findings
from calcpack.hydraulics.assemble import Group
from calcpack.hydraulics.newton import MOST_ITERATIONS, Result
from calcpack.hydraulics.solution import Finding
from calcpack.hydraulics.solved import Solved
from calcpack.project.model import OUTLET


def find(group: Group, result: Result, units: str) -> list[tuple[Finding, ...]]:
    """Findings of every block in a fixed order: solution, parts, valves, pumps, lines, pressures."""
    solved = Solved(group, result, units)
    collected: list[list[Finding]] = [[] for _ in group.cases]
    finders = (
        _convergence, _parts, _shut_lines, pump_findings.find, _reverse_flow, _critical_zone, pressures.find,
    )
    for finder in finders:
        for block, finding in finder(solved):
            collected[block].append(finding)
    return [tuple(found) for found in collected]


def _convergence(solved: Solved) -> Iterator[tuple[int, Finding]]:
    result, topology = solved.result, solved.topology
    for b in np.flatnonzero(~result.converged):
        bare = [topology.lines[i] for i in np.flatnonzero(solved.net.unresisted[:, b])]
        if bare:
            text = "has neither length nor local loss, so no flow follows from the heads: give it a resistance"
            yield b, Finding("no-resistance", bare[0], f"{', '.join(bare)} {text}.")
            continue
        column = np.array([b])
        net, flow = solved.net.take(column), result.flow[:, column]
        state, head = result.state[:, column], np.nan_to_num(result.head[:, column])
        residual = np.where(state != 0, laws.losses(net, flow, state)[0] - topology.drop(head), 0.0)[:, 0]
        excess = (topology.sum_at_nodes(-flow, flow) - net.demand)[:, 0]
        excess[topology.fixed | result.dead[:, b]] = 0.0
        worst, node = int(np.argmax(np.abs(residual))), int(np.argmax(np.abs(excess)))
        reason = "valve states keep changing" if result.unsettled[b] else f"stopped after {MOST_ITERATIONS} iterations"
        text = (
            f"Not converged ({reason}). Largest energy residual {solved.said(residual[worst], 'head')} in "
            f"{topology.links[worst]}, largest continuity residual {solved.said(excess[node], 'flow')} at "
            f"{topology.nodes[node]}."
        )
        yield b, Finding("not-converged", topology.links[worst], text)


def _parts(solved: Solved) -> Iterator[tuple[int, Finding]]:
    """Parts of the network that no open path joins to a tank or outlet."""
    topology, dead, net = solved.topology, solved.result.dead, solved.net
    for b in np.flatnonzero(dead.any(axis=0)):
        label = topology.parts((net.present[:, b] & dead[topology.start, b])[:, None])[:, 0]
        for part in np.unique(label[dead[:, b]]):
            inside = dead[:, b] & (label == part)
            names = [topology.nodes[n] for n in np.flatnonzero(inside)]
            touching = inside[topology.start] | inside[topology.end]
            off = touching & ~net.present[:, b]
            barred = touching & net.present[:, b] & ~(inside[topology.start] & inside[topology.end])
            stopped = "".join(
                f" {topology.links[i]} is {word}."
                for where, word in ((off, "not running"), (barred, "a check valve against the flow"))
                for i in np.flatnonzero(where)
            )
            text = f"No open path joins {', '.join(names)} to a tank or outlet: no flow, heads unknown.{stopped}"
            yield b, Finding("disconnected", names[0], text)
            for n in np.flatnonzero(inside & (net.demand[:, b] != 0)):
                amount, tag = solved.said(abs(net.demand[n, b]), "flow"), topology.nodes[n]
                what = f"Demand of {amount} at {tag} is not met" if net.demand[n, b] > 0 else (
                    f"Inflow of {amount} at {tag} cannot leave"
                )
                text = f"{what}: no open path.{stopped}"
                yield b, Finding("unmet-demand", topology.nodes[n], text)


def _shut_lines(solved: Solved) -> Iterator[tuple[int, Finding]]:
    topology, head = solved.topology, solved.result.head
    count = len(topology.lines)
    shut = solved.alive[:count] & (solved.result.state[:count] == 0) & ~solved.unsolved
    for i, b in zip(*np.nonzero(shut), strict=True):
        tag, first, last = topology.lines[i], head[topology.start[i], b], head[topology.end[i], b]
        heads = f"{solved.said(first, 'head')} at its start, {solved.said(last, 'head')} at its end"
        short = solved.said(last - first + solved.net.fixed_loss[i, b], "head")
        if solved.group.cases[b].system.lines[tag].check_valve is not None:
            text = f"The check valve in {tag} is shut: total head {heads}; {short} hold it."
            yield b, Finding("closed-by-check-valve", tag, text)
        elif solved.net.fixed_loss[i, b] > 0:
            loss = solved.said(solved.net.fixed_loss[i, b], "head")
            text = f"No flow in {tag}: total head {heads}; the difference does not overcome the fixed loss of {loss}."
            yield b, Finding("closed-by-fixed-loss", tag, text)
        else:
            outlet = topology.nodes[topology.end[i]]
            text = f"No flow in {tag}: its outlet {outlet} is {short} too high; total head {heads}."
            yield b, Finding("outlet-too-high", tag, text)


def _reverse_flow(solved: Solved) -> Iterator[tuple[int, Finding]]:
    topology, flow = solved.topology, solved.line_flow
    for i, b in zip(*np.nonzero(flow < 0), strict=True):
        amount = solved.said(-flow[i, b], "flow")
        start, end = topology.nodes[topology.start[i]], topology.nodes[topology.end[i]]
        tag = topology.lines[i]
        yield b, Finding("reverse-flow", tag, f"{tag} carries {amount} from {end} to {start}.")
    nodes = list(solved.group.cases[0].system.nodes.values())
    outlet = np.array([node.kind == OUTLET for node in nodes], dtype=bool)
    for i, b in zip(*np.nonzero(outlet[topology.start[: len(flow)], None] & (flow > 0)), strict=True):
        tag, node = topology.lines[i], topology.nodes[topology.start[i]]
        amount = solved.said(flow[i, b], "flow")
        text = f"{tag} would draw {amount} from the outlet {node}, where there is no liquid: this flow is not real."
        yield b, Finding("inflow-at-outlet", tag, text)


def _critical_zone(solved: Solved) -> Iterator[tuple[int, Finding]]:
    _, reynolds, factor = solved.line_state
    inside = (reynolds > LAMINAR_LIMIT) & (reynolds < TURBULENT_LIMIT) & np.isnan(solved.net.friction_factor)
    turbulent = solve_colebrook(solved.net.roughness[inside], reynolds[inside])
    for i, b, upper in zip(*np.nonzero(inside), turbulent, strict=True):
        tag, re = solved.topology.lines[i], solved.said(reynolds[i, b], "reynolds_number")
        used, other = (solved.said(f, "friction_factor") for f in (factor[i, b], upper))
        text = (
            f"Reynolds number {re} in {tag} lies between laminar and turbulent flow: friction factor uncertain, "
            f"{used} used, {other} if turbulent."
        )
        yield b, Finding("critical-zone", tag, text)
