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
TOO_LARGE = "not run: too many loops"
NOT_SOLVED = "not run: the case has no solution"
MOST_LOOPS = 400
MOST_STEPS = 200
SCANNED = 257  # flows at which a loop with a pump is looked at before its root is bracketed
AT_REST = -1  # stands for a link that carries nothing
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
    """Every case of ``solution`` once more by loops; ``correlation`` is ``laws.COLEBROOK`` or ``laws.SWAMEE_JAIN``."""
    found = {}
    for group in groups(project.cases):
        for block, case in enumerate(group.cases):
            network = group.network.take(np.array([block]))
            found[case.id] = _solve(network, solution.cases[case.id], correlation)
    return {case.id: found[case.id] for case in project.cases}


@dataclass(frozen=True, eq=False)
class _Loops:
    """Flows of all links as ``base + loops @ x`` for flows ``x`` of the links ``chords``; ``given`` (links,) is the
    head difference of fixed nodes at a link's ends, ``state`` (links,) the direction of fixed losses."""

    net: Network
    chords: list[int]
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
    nothing = np.full(len(topology.links), np.nan)
    if any(np.isnan(line.flow) for line in first.lines.values()):
        return _answer(net, first.case, NOT_SOLVED, correlation, nothing, np.nan)
    carries = [first.lines[tag].open for tag in topology.lines] + [
        first.pumps[tag].running > 0 and first.pumps[tag].flow > 0 for tag in topology.pumps
    ]
    dead = np.isnan([first.heads[tag] for tag in topology.nodes])
    is_open = np.array(carries, dtype=bool) & ~dead[topology.start] & ~dead[topology.end]
    base, loops, chords = _spanning_tree(net, is_open)
    if len(chords) > MOST_LOOPS:
        return _answer(net, first.case, TOO_LARGE, correlation, nothing, np.nan)
    fixed = np.where(topology.fixed, net.fixed_head[:, 0], 0.0)
    state = np.sign([flow.flow for flow in first.lines.values()] + [1.0] * len(topology.pumps))
    system = _Loops(net, chords, base, loops, fixed[topology.start] - fixed[topology.end], state, correlation)
    if not chords:
        return _answer(net, first.case, FORWARD, correlation, base, 0.0)
    method, search = (BRACKET, _bracketed) if len(chords) == 1 else (LOOPS, _corrected)
    x = search(system)
    left = float(np.abs(system.energy(x)).max())
    return _answer(net, first.case, method, correlation, system.flow(x)[:, 0], left)


def _bracketed(system: _Loops) -> np.ndarray:
    """The chord flow (1, 1) at which the one loop closes; of several, the largest at which the sum rises."""

    def energy(x: np.ndarray) -> np.ndarray:
        return system.energy(x[None, :])[0]

    low, high = _bracket(system, energy)
    for _ in range(40):
        points = np.linspace(low, high, 9)
        past = np.flatnonzero(energy(points) > 0)
        first = max(int(past[0]) if len(past) else 8, 1)
        low, high = points[first - 1], points[first]
        if high - low <= 1e-15 * max(abs(low), abs(high)):
            break
    return np.array([[0.5 * (low + high)]])


def _bracket(system: _Loops, energy: Callable[[np.ndarray], np.ndarray]) -> tuple[float, float]:
    """Two chord flows between which the energy sum turns from negative to positive."""
    net, chord = system.net, system.chords[0]
    lines = len(net.topology.lines)
    if chord >= lines:  # a pump: look over its whole curve, for it may be met twice
        pump = chord - lines
        flow = np.linspace(0.0, float(net.curves.flow_max[pump, 0] * net.running[pump, 0]), SCANNED)
        spare = energy(flow)
        rising = np.flatnonzero((spare[:-1] <= 0) & (spare[1:] > 0))
        if len(rising):
            return float(flow[rising[-1]]), float(flow[rising[-1] + 1])
    size = float(np.max(net.area, initial=1e-3)) + float(np.max(np.abs(system.base)))
    low, high = -size, size
    for _ in range(60):
        first, last = energy(np.array([low, high]))
        if first <= 0 <= last:
            break
        low, high = (low * 2 if first > 0 else low), (high * 2 if last < 0 else high)
    return low, high


def _corrected(system: _Loops) -> np.ndarray:
    """Chord flows (chords, 1) at which all loops close, from rest in lines and best efficiency in pumps."""
    net = system.net
    units = np.maximum(net.running, 1.0)
    least = np.concatenate([np.zeros(net.area.shape), net.curves.floor / units])
    width = np.concatenate([net.area, 0.1 * net.curves.flow_max * units]) * 1e-5
    rated = np.concatenate([np.zeros(net.area.shape), net.curves.rated * net.running])
    x = rated[system.chords]
    energy = system.energy(x)
    for _ in range(MOST_STEPS):
        flow = system.flow(x)
        shift = width + 1e-6 * np.abs(flow)
        slope = (system.head_loss(flow + shift) - system.head_loss(flow - shift)) / (2.0 * shift)
        matrix = system.loops.T @ (np.maximum(slope, least) * system.loops)
        step = np.linalg.solve(matrix, -energy)
        before, part = float(np.sum(energy * step)), 1.0
        for _ in range(30):
            new = system.energy(x + part * step)
            after = float(np.sum(new * step))
            if after <= -0.5 * before:
                break
            part *= min(max(before / (before - after), 0.1), 0.7)
        settled = np.abs(new).max() >= 0.5 * np.abs(energy).max() and np.abs(energy).max() < CLOSED
        x, energy = x + part * step, new
        if np.abs(energy).max() == 0 or settled:
            break
    return x


def _answer(net: Network, case: str, method: str, correlation: str, flow: np.ndarray, energy: float) -> SecondSolution:
    converged = bool(energy <= ACCEPTED)
    values = flow if converged else np.full(len(flow), np.nan)
    return SecondSolution(
        case, method, correlation, dict(zip(net.topology.links, values.tolist(), strict=True)), energy, converged
    )


def _spanning_tree(net: Network, is_open: np.ndarray) -> tuple[np.ndarray, np.ndarray, list[int]]:
    """Tree flows from the demands (links,), the loop of every chord (links, chords), and the chords.

    All fixed heads are one root. Lines are taken into the tree before pumps, so that pumps become chords.
    """
    topology = net.topology
    count = len(topology.nodes)
    start = np.where(topology.fixed[topology.start], count, topology.start)
    end = np.where(topology.fixed[topology.end], count, topology.end)
    parent: dict[int, tuple[int, int, float]] = {}  # node -> next node towards the root, link, sign of flow to the root
    order, tree = [count], set()
    beside: dict[int, list[tuple[int, int, float]]] = {}
    for link in np.flatnonzero(is_open).tolist():
        a, b = int(start[link]), int(end[link])
        beside.setdefault(a, []).append((b, link, -1.0))
        beside.setdefault(b, []).append((a, link, 1.0))
    lines = len(topology.lines)

    def grow(front: list[int], pumps_too: bool) -> None:
        while front:
            node = front.pop(0)
            for other, link, sign in beside.get(node, ()):
                if other != count and other not in parent and (pumps_too or link < lines):
                    parent[other] = (node, link, sign)
                    tree.add(link)
                    order.append(other)
                    front.append(other)

    grow([count], False)
    grow(list(order), True)
    for node in beside:  # parts that only a link at rest joins to the root: they may still circulate
        if node != count and node not in parent:
            parent[node] = (count, AT_REST, 0.0)
            order.append(node)
            grow([node], True)
    base = np.zeros(len(topology.links) + 1)  # the last place is for links at rest
    supply = {node: -float(net.demand[node, 0]) for node in parent}
    for node in reversed(order[1:]):
        towards, link, sign = parent[node]
        base[link] = sign * supply[node]
        if towards != count:
            supply[towards] += supply[node]
    chords = [link for link in np.flatnonzero(is_open).tolist() if link not in tree]
    loops = np.zeros((len(base), len(chords)))
    for column, chord in enumerate(chords):
        loops[chord, column] = 1.0
        for node, direction in ((int(end[chord]), 1.0), (int(start[chord]), -1.0)):
            while node != count:
                node, link, sign = parent[node]
                loops[link, column] += direction * sign
    return base[:AT_REST], loops[:AT_REST], chords
