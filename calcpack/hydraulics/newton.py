"""Flows and heads of a network by Newton's method on all balances at once (global gradient method).

Each step solves the node heads from a symmetric positive definite matrix and corrects every flow; after the first full
step continuity holds exactly and stays so. The flows minimise a convex function whose slope along a step is the sum
of energy residual times flow change, so a step that goes past the minimum is seen by the sign of that sum and cut.
Blocks (cases) are stepped side by side but judged, cut and finished each on its own.

Method: "A gradient algorithm for the analysis of pipe networks", in Computer Applications in Water
Supply, 1988 (from memory, not seen).
"""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np

from calcpack.hydraulics import laws, valves
from calcpack.hydraulics.linear import solver_for
from calcpack.hydraulics.network import Network

MOST_ITERATIONS = 200
FLOW_TOLERANCE = 1e-10  # of the sum of flows, for the change still to come
SPEED_TOLERANCE = 1e-9  # m/s in every line, for networks at rest; slower flows are set to zero
NOISE_SPEED = 1e-6  # m/s below which a flow is zero if its head loss is lost in the rounding of the heads
HEAD_NOISE = 1e-14  # of the largest head (or 1 m): what rounding leaves of a head drop
ENERGY_TOLERANCE = 1e-11  # of the largest head (or 1 m), for the head lost in any link
ACCEPTED_CONTINUITY = 1e-6  # of the throughput
ACCEPTED_ENERGY = 1e-4  # m
OVERSHOOT = 0.5  # a step may leave this part of its starting slope, of either sign


@dataclass(frozen=True, eq=False)
class Result:
    """Solved blocks. ``flow`` and ``state`` (links, B), ``head`` (nodes, B; NaN for ``dead`` nodes, which no open path
    joins to a fixed head, and whose links carry nothing), and per block: ``iterations``, the largest ``continuity``
    (m3/s) and ``energy`` (m) residual, ``converged``, and ``unsettled`` where valve states kept changing."""

    flow: np.ndarray
    state: np.ndarray
    head: np.ndarray
    dead: np.ndarray
    iterations: np.ndarray
    continuity: np.ndarray
    energy: np.ndarray
    converged: np.ndarray
    unsettled: np.ndarray


@dataclass(eq=False)
class _Search:
    """Blocks still being solved; every array has one column per block."""

    net: Network
    blocks: np.ndarray
    flow: np.ndarray
    state: np.ndarray
    present: np.ndarray
    dead: np.ndarray
    head: np.ndarray
    fresh: np.ndarray  # continuity does not hold yet: the next step is taken whole
    rounds: np.ndarray
    best: np.ndarray  # smallest change to come so far
    stalled: np.ndarray  # iterations since it last halved
    idle: np.ndarray  # unknown nodes without an open link

    def take(self, keep: np.ndarray) -> None:
        """Keep only the blocks ``keep`` (numbers of columns)."""
        self.net = self.net.take(keep)
        for field in fields(self)[1:]:
            setattr(self, field.name, np.take(getattr(self, field.name), keep, axis=-1))


def solve(net: Network, flow: np.ndarray | None = None) -> Result:
    """Solve every block of ``net`` from ``flow`` (links, B), or from 1 m/s in lines and best efficiency in pumps.

    A block with a line that resists no flow is not solved: its flows and heads are NaN.
    """
    blocks, count = net.blocks, len(net.topology.links)
    if flow is None:
        flow = np.concatenate([net.area * 1.0, net.curves.rated * net.running])
    dead = net.topology.without_fixed_head(net.present)
    present = net.present & ~dead[net.topology.start]
    known = np.where(np.isnan(net.fixed_head), np.nanmax(net.fixed_head, axis=0, initial=0.0), net.fixed_head)
    search = _Search(
        net, np.arange(blocks), np.where(present, flow, 0.0), present.astype(np.int8), present, dead, known,
        np.ones(blocks, dtype=bool), np.zeros(blocks, dtype=int), np.full(blocks, np.inf), np.zeros(blocks, dtype=int),
        _idle(net, present, dead),
    )
    out = Result(
        np.zeros((count, blocks)), np.zeros((count, blocks), dtype=np.int8), np.full(net.demand.shape, np.nan),
        np.zeros(net.demand.shape, dtype=bool), np.zeros(blocks, dtype=int), np.zeros(blocks), np.zeros(blocks),
        np.zeros(blocks, dtype=bool), np.zeros(blocks, dtype=bool),
    )
    unresisted = net.unresisted.any(axis=0)
    if unresisted.any():
        out.flow[:, unresisted] = out.continuity[unresisted] = out.energy[unresisted] = np.nan
        search.take(np.flatnonzero(~unresisted))
        if unresisted.all():
            return out
    solver = solver_for(net.topology)
    law = laws.losses(search.net, search.flow, search.state)
    for iteration in range(1, MOST_ITERATIONS + 1):
        law = _step(search, solver, law)
        balanced = _balanced(search, law)
        changed = _review(search, balanced)
        done = settled = balanced & ~changed
        if iteration == MOST_ITERATIONS:
            out.unsettled[search.blocks] = changed
            done = np.ones_like(done)
        if changed.any():
            law = laws.losses(search.net, search.flow, search.state)
        if done.any():
            out.converged[search.blocks] = settled
            _store(search, law, done, iteration, out)
            keep = np.flatnonzero(~done)
            if not len(keep):
                break
            search.take(keep)
            law = tuple(np.take(part, keep, axis=-1) for part in law)
    return out


def _idle(net: Network, is_open: np.ndarray, dead: np.ndarray) -> np.ndarray:
    """Unknown nodes that no open link touches, or that are dead, (unknowns, B)."""
    touched = net.topology.sum_at_nodes(is_open, is_open) > 0
    return (~touched | dead)[net.topology.unknown]


def _step(search: _Search, solver, law: tuple[np.ndarray, np.ndarray]) -> tuple[np.ndarray, np.ndarray]:
    """One Newton step of every block, cut where it overshoots; returns losses and slopes at the new flows."""
    topology = search.net.topology
    head_loss, slope = law
    conductance = np.where(search.state != 0, 1.0 / slope, 0.0)
    pull = conductance * (head_loss - topology.drop(search.head))
    flow = search.flow - pull
    unknown = topology.unknown
    right = (topology.sum_at_nodes(-flow, flow) - search.net.demand)[unknown]
    ground = topology.sum_to_fixed(conductance)
    ground[search.idle] = 1.0  # nothing to balance there: the head stays
    right[search.idle] = 0.0
    change = np.zeros(search.head.shape)
    if len(unknown):
        change[unknown] = solver.solve(ground, topology.sum_at_pairs(conductance), right)
    search.head = search.head + change
    step = conductance * topology.drop(change) - pull
    return _advance(search, step, head_loss)


def _advance(search: _Search, step: np.ndarray, head_loss: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Move the flows along ``step``, as far as each block's minimum allows."""
    drop = search.net.topology.drop(search.head)
    before = np.sum((head_loss - drop) * step, axis=0)
    flow = search.flow + step
    law = laws.losses(search.net, flow, search.state)
    after = np.sum((law[0] - drop) * step, axis=0)
    size = np.sum(np.abs(step), axis=0)
    matters = ~search.fresh & (size > _smallest_change(search.net, flow)) & (before < 0)
    over = np.flatnonzero(matters & (after > -OVERSHOOT * before))
    part = np.ones(len(over))
    for _ in range(30):
        if not len(over):
            break
        ratio = before[over] / (before[over] - after[over])
        part *= np.clip(ratio, 0.1, 0.7)
        shorter = search.flow[:, over] + part * step[:, over]
        cut = laws.losses(search.net.take(over), shorter, search.state[:, over])
        flow[:, over] = shorter
        for whole, column in zip(law, cut, strict=True):
            whole[:, over] = column
        after[over] = np.sum((cut[0] - drop[:, over]) * step[:, over], axis=0)
        still = after[over] > -OVERSHOOT * before[over]
        over, part = over[still], part[still]
    search.flow = flow
    search.fresh = np.zeros_like(search.fresh)
    return law


def _smallest_change(net: Network, flow: np.ndarray) -> np.ndarray:
    """Sum over the links of a flow change too small to matter, m3/s (B,)."""
    return FLOW_TOLERANCE * np.sum(np.abs(flow), axis=0) + SPEED_TOLERANCE * np.sum(net.area, axis=0)


def _imbalance(net: Network, flow: np.ndarray, dead: np.ndarray) -> np.ndarray:
    """Largest continuity residual at the unknown nodes that are not dead, m3/s (B,)."""
    excess = np.where(dead, 0.0, net.topology.sum_at_nodes(-flow, flow) - net.demand)
    return np.max(np.abs(excess[net.topology.unknown]), axis=0, initial=0.0)


def _balanced(search: _Search, law: tuple[np.ndarray, np.ndarray]) -> np.ndarray:
    """Which blocks (B,) are balanced as well as rounding allows."""
    net = search.net
    residual = np.abs(np.where(search.state != 0, law[0] - net.topology.drop(search.head), 0.0))
    scale = 1.0 + np.max(np.abs(search.head), axis=0, initial=0.0)
    to_come = np.sum(np.maximum(residual - HEAD_NOISE * scale, 0.0) / law[1], axis=0)
    small = _smallest_change(net, search.flow)
    energy = np.max(residual, axis=0, initial=0.0)
    limit = ENERGY_TOLERANCE * scale
    balanced = (to_come <= small) & (energy <= limit)
    if balanced.any():
        balanced &= _imbalance(net, search.flow, search.dead) <= small
    better = to_come < 0.5 * search.best
    search.best = np.where(better, to_come, search.best)
    search.stalled = np.where(better, 0, search.stalled + 1)
    # Rounding of large heads over very small slopes can keep the change from falling further.
    return balanced | ((search.stalled >= 6) & (to_come <= 1e3 * small) & (energy <= ACCEPTED_ENERGY))


def _review(search: _Search, balanced: np.ndarray) -> np.ndarray:
    """Look at the valves of balanced blocks; true (B,) where a state changed and the block must go on."""
    changed = np.zeros(len(search.blocks), dtype=bool)
    columns = np.flatnonzero(balanced & (search.rounds < valves.MOST_ROUNDS))
    if not len(columns):
        return changed
    whole = len(columns) == len(changed)
    net = search.net if whole else search.net.take(columns)
    state, present = search.state[:, columns], search.present[:, columns]
    drop = net.topology.drop(search.head[:, columns])
    new, stranded = valves.review(net, search.flow[:, columns], drop, state, present, search.rounds[columns])
    if stranded.any():
        search.dead[:, columns] |= stranded
        reach = ~search.dead[:, columns]
        present &= reach[net.topology.start] & reach[net.topology.end]
        search.present[:, columns] = present
        new = np.where(present, new, 0)
    moved = new != state
    fast = valves.area_of_links(net) * 0.1
    flow = np.where(moved & (new != 0), new * fast, np.where(new == 0, 0.0, search.flow[:, columns]))
    search.flow[:, columns], search.state[:, columns] = flow, new
    changed[columns] = moved.any(axis=0)
    search.rounds[changed] += 1
    search.fresh[changed] = True
    search.best[changed] = np.inf
    if changed.any():
        search.idle = _idle(search.net, search.state != 0, search.dead)
    search.stalled[changed] = 0
    return changed


def _store(search: _Search, law: tuple[np.ndarray, np.ndarray], done: np.ndarray, iteration: int, out: Result) -> None:
    """Write finished blocks to the result, tiny flows as zero, with the residuals that remain."""
    columns = np.flatnonzero(done)
    net, at = search.net.take(columns), search.blocks[columns]
    state, dead, head = search.state[:, columns], search.dead[:, columns], search.head[:, columns]
    residual = np.where(state != 0, law[0][:, columns] - net.topology.drop(head), 0.0)
    flow = search.flow[:, columns]
    resolved = 10.0 * HEAD_NOISE * (1.0 + np.max(np.abs(head), axis=0, initial=0.0))
    noise = law[1][:, columns] * np.abs(flow) < resolved
    area = valves.area_of_links(net)
    at_rest = (np.abs(flow) <= SPEED_TOLERANCE * area) | (noise & (np.abs(flow) <= NOISE_SPEED * area))
    quiet = np.where(at_rest, 0.0, flow)
    least = SPEED_TOLERANCE * np.sum(net.area, axis=0)
    flow = np.where(_imbalance(net, quiet, dead) <= _imbalance(net, flow, dead) + least, quiet, flow)
    continuity = _imbalance(net, flow, dead)
    energy = np.max(np.abs(residual), axis=0, initial=0.0)
    throughput = np.max(np.abs(flow), axis=0, initial=0.0) + np.max(np.abs(net.demand), axis=0, initial=0.0)
    out.flow[:, at], out.state[:, at], out.dead[:, at] = flow, state, dead
    out.head[:, at] = np.where(dead, np.nan, head)
    out.iterations[at], out.continuity[at], out.energy[at] = iteration, continuity, energy
    out.unsettled[at] |= search.rounds[columns] >= valves.MOST_ROUNDS
    small = (continuity <= ACCEPTED_CONTINUITY * throughput + least) & (energy <= ACCEPTED_ENERGY)
    out.converged[at] &= small & ~out.unsettled[at]
