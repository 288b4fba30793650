"""A second solution of every case by another road, and the same with a second friction correlation.

The first method balances node heads; this one balances loops. A spanning tree carries whatever flows the remaining
links (chords) have, so continuity always holds, and the energy sum round each loop must vanish. No loop: the flows
follow from the demands alone. One loop (a pump between two tanks is one, closed through the tanks): its flow is
bracketed and the bracket narrowed. More: all loops are corrected together, with slopes taken from differences.

What is shared with the first method are the formulas, the reading of the model, and which valves are shut; the flows
show whether those states agree.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from calcpack.hydraulics import laws
from calcpack.hydraulics.assemble import groups
from calcpack.hydraulics.network import Network
from calcpack.hydraulics.solution import CaseSolution, Solution
from calcpack.project.model import Project

FORWARD = "flows from the demands alone"
BRACKET = "bracketed root of one loop"
LOOPS = "correction of all loops together"
NOT_RUN = "not run: too many loops"
MOST_LOOPS = 400
MOST_STEPS = 200
SCANNED = 257  # flows at which a loop with a pump is looked at before its root is bracketed
CLOSED = 1e-9  # m, largest energy sum left in a loop; accepted up to ACCEPTED
ACCEPTED = 1e-6


@dataclass(frozen=True)
class SecondSolution:
    """Flows (m3/s) by tag of line and pump as the second method finds them with one friction correlation.

    ``energy`` is the largest energy sum left in a loop (m). Without convergence, or where the method was not run, the
    flows are NaN.
    """

    case: str
    method: str
    correlation: str
    flows: Mapping[str, float]
    energy: float
    converged: bool


def second_solutions(
    project: Project, solution: Solution, correlation: str = laws.COLEBROOK
) -> dict[str, SecondSolution]:
    """Every case of ``solution`` once more by loops, with ``correlation`` (``laws.COLEBROOK``, ``laws.SWAMEE_JAIN``)."""
    found = {}
    for group in groups(project.cases):
        for block, case in enumerate(group.cases):
            network = group.network.take(np.array([block]))
            found[case.id] = _solve(network, solution.cases[case.id], correlation)
    return {case.id: found[case.id] for case in project.cases}


@dataclass(frozen=True, eq=False)
class _Loops:
    """Flows of all links as ``base + loops @ x`` for chord flows ``x``; ``given`` (links,) is the head difference of
    fixed nodes at a link's ends, ``state`` (links,) the direction of fixed losses."""

    net: Network
    base: np.ndarray
    loops: np.ndarray
    given: np.ndarray
    state: np.ndarray
    correlation: str

    def flow(self, x: np.ndarray) -> np.ndarray:
        """Flows (links, B) for chord flows (chords, B)."""
        return self.base[:, None] + self.loops @ x

    def head_loss(self, flow: np.ndarray) -> np.ndarray:
        """Head lost in every link at ``flow`` (links, B)."""
        count = len(self.net.topology.lines)
        wide = self.net.take(np.zeros(flow.shape[1], dtype=int))
        lines, _ = laws.line_losses(wide, flow[:count], self.correlation)
        lines = lines + self.state[:count, None] * wide.fixed_loss
        return np.concatenate([lines, laws.pump_losses(wide, flow[count:])[0]])

    def energy(self, x: np.ndarray) -> np.ndarray:
        """Energy sum (chords, B) round the loop of every chord."""
        return self.loops.T @ (self.head_loss(self.flow(x)) - self.given[:, None])


def _solve(net: Network, first: CaseSolution, correlation: str) -> SecondSolution:
    topology = net.topology
    carries = [
        first.lines[tag].open and not np.isnan(first.lines[tag].flow) for tag in topology.lines
    ] + [first.pumps[tag].running > 0 and first.pumps[tag].flow > 0 for tag in topology.pumps]
    dead = np.isnan([first.heads[tag] for tag in topology.nodes])
    is_open = np.array(carries, dtype=bool) & ~dead[topology.start]
    base, loops, count = _spanning_tree(net, is_open)
    if count > MOST_LOOPS:
        return _answer(net, first.case, NOT_RUN, correlation, np.full(len(base), np.nan), np.nan)
    fixed = np.where(topology.fixed, net.fixed_head[:, 0], 0.0)
    state = np.sign([flow.flow for flow in first.lines.values()] + [1.0] * len(topology.pumps))
    system = _Loops(net, base, loops, fixed[topology.start] - fixed[topology.end], state, correlation)
    if count == 0:
        return _answer(net, first.case, FORWARD, correlation, base, 0.0)
    if count == 1:
        x = _bracketed(system)
        return _answer(net, first.case, BRACKET, correlation, system.flow(x)[:, 0], float(np.abs(system.energy(x)).max()))
    x = _corrected(system)
    return _answer(net, first.case, LOOPS, correlation, system.flow(x)[:, 0], float(np.abs(system.energy(x)).max()))


def _answer(net: Network, case: str, method: str, correlation: str, flow: np.ndarray, energy: float) -> SecondSolution:
    converged = bool(energy <= ACCEPTED)
    values = flow if converged else np.full(len(flow), np.nan)
    return SecondSolution(
        case, method, correlation, dict(zip(net.topology.links, values.tolist(), strict=True)), energy, converged
    )


def _spanning_tree(net: Network, is_open: np.ndarray) -> tuple[np.ndarray, np.ndarray, int]:
    """Tree flows from the demands (links,), the loop of every chord (links, chords), and the number of chords.

    All fixed heads are one root. Lines are taken into the tree before pumps, so that pumps become chords.
    """
    topology = net.topology
    count = len(topology.nodes)
    start = np.where(topology.fixed[topology.start], count, topology.start)
    end = np.where(topology.fixed[topology.end], count, topology.end)
    parent: dict[int, tuple[int, int, float]] = {}  # node -> next node towards the root, link, sign of flow to the root
    order, front, tree = [count], [count], set()
    beside: dict[int, list[tuple[int, int, float]]] = {}
    for link in np.flatnonzero(is_open).tolist():
        a, b = int(start[link]), int(end[link])
        beside.setdefault(a, []).append((b, link, -1.0))
        beside.setdefault(b, []).append((a, link, 1.0))
    lines = len(topology.lines)
    for pumps_too in (False, True):
        front = list(order)
        while front:
            node = front.pop(0)
            for other, link, sign in beside.get(node, ()):
                if other != count and other not in parent and (pumps_too or link < lines):
                    parent[other] = (node, link, sign)
                    tree.add(link)
                    order.append(other)
                    front.append(other)
    base = np.zeros(len(topology.links))
    supply = {node: -float(net.demand[node, 0]) for node in parent}
    for node in reversed(order[1:]):
        towards, link, sign = parent[node]
        base[link] -= sign * -supply[node]
        if towards != count:
            supply[towards] += supply[node]
    chords = [link for link in np.flatnonzero(is_open).tolist() if link not in tree]
    loops = np.zeros((len(topology.links), len(chords)))
    for column, chord in enumerate(chords):
        loops[chord, column] = 1.0
        for node, direction in ((int(end[chord]), 1.0), (int(start[chord]), -1.0)):
            while node != count:
                node, link, sign = parent[node]
                loops[link, column] += direction * sign
    return base, loops, len(chords)
