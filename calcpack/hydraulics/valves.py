"""Open or shut: check valves, the check valve every pump implies, and equipment with a fixed loss.

A state is +1 (open, from start to end), -1 (open the other way, fixed losses without a check valve) or 0 (shut).
States change only between balanced flows: what runs backwards shuts, what is pushed open opens. The heads of a
network of falling pump curves and rising losses are those of a convex problem, so the changes come to rest; should
rounding make them cycle, they are made one at a time.
"""

from __future__ import annotations

import numpy as np

from calcpack.hydraulics.network import Network

HEAD_TOLERANCE = 1e-6  # m that must push a shut valve before it opens
SPEED_TOLERANCE = 1e-8  # m/s backwards that counts as reverse flow
ONE_AT_A_TIME = 12  # rounds of joint changes before single ones
MOST_ROUNDS = 80


def area_of_links(net: Network) -> np.ndarray:
    """Flow that counts as 1 m/s in each link, (links, B): the bore, or for pumps a tenth of their curve's length."""
    return np.concatenate([net.area, 0.1 * net.curves.flow_max * np.maximum(net.running, 1.0)])


def opening_drop(net: Network) -> np.ndarray:
    """Head from start to end above which a shut link opens forwards, (links, B): fixed loss, or less the shut-off."""
    shutoff, _ = net.curves.evaluate(np.zeros(net.running.shape))
    return np.concatenate([net.fixed_loss, -shutoff])


def one_way(net: Network) -> np.ndarray:
    """True for links that never carry reverse flow, (links, B)."""
    return np.concatenate([net.check, np.ones(net.running.shape, dtype=bool)])


def review(
    net: Network, flow: np.ndarray, drop: np.ndarray, state: np.ndarray, present: np.ndarray, rounds: np.ndarray
) -> tuple[np.ndarray, np.ndarray]:
    """New states (links, B), and which nodes (nodes, B) only a shut valve could serve.

    ``flow`` and ``drop`` are balanced flows and head drops, ``present`` the links that take part, ``rounds`` (B,) how
    often each block was reviewed. A shut link may leave a part of the network without any head to rest on; then one of
    the links around it stays open (it will carry nothing), a pump rather than a valve. If even so flow runs backwards,
    the demands of that part are impossible and its nodes are returned.
    """
    threshold, single = opening_drop(net), one_way(net)
    stateful = present & (single | (threshold > 0))
    backwards = stateful & (state * flow < -SPEED_TOLERANCE * area_of_links(net)) & (state != 0)
    forwards = stateful & (state == 0) & (drop > threshold + HEAD_TOLERANCE)
    reverse = stateful & (state == 0) & ~single & (drop < -threshold - HEAD_TOLERANCE)
    new, stranded = state.copy(), np.zeros(net.demand.shape, dtype=bool)
    for block in np.flatnonzero((backwards | forwards | reverse).any(axis=0)):
        opening = forwards[:, block].astype(np.int8) - reverse[:, block]
        shutting = np.flatnonzero(backwards[:, block])
        single_change = rounds[block] >= ONE_AT_A_TIME
        wanted = state[:, block] + (0 if single_change else opening)
        kept, alone = _keep_one_way_out(net, block, present[:, block] & (wanted != 0), shutting)
        wanted[np.setdiff1d(shutting, kept)] = 0
        if single_change:
            wanted += opening
            changes = np.flatnonzero(wanted != state[:, block])[:1]
            wanted = np.where(np.isin(np.arange(len(wanted)), changes), wanted, state[:, block])
        if np.array_equal(wanted, state[:, block]):  # what must stay open turns, or cannot be served
            two_way = kept[~single[kept, block]]
            wanted[two_way] *= -1
            stranded[:, block] = alone & (len(two_way) == 0)
        new[:, block] = wanted
    return new, stranded


def _keep_one_way_out(
    net: Network, block: int, is_open: np.ndarray, shutting: np.ndarray
) -> tuple[np.ndarray, np.ndarray]:
    """Of the links about to shut, those that must stay open; and the nodes (nodes,) that hang on them alone."""
    topology = net.topology
    staying = is_open.copy()
    staying[shutting] = False
    label = topology.parts(staying[:, None])[:, 0]
    held = {int(part) for part in label[topology.fixed]}
    joined = {int(part): int(part) for part in np.unique(label)}

    def root(part: int) -> int:
        while joined[part] != part:
            part = joined[part]
        return part

    def rank(link: int) -> tuple[bool, bool, int]:
        """Pumps are kept before lines into tanks and outlets, those before check valves inside the system."""
        return link >= len(topology.lines), bool(topology.fixed[topology.end[link]]), int(link)

    kept = []
    for link in sorted(shutting.tolist(), key=rank, reverse=True):
        a, b = root(int(label[topology.start[link]])), root(int(label[topology.end[link]]))
        if a == b or (a in held and b in held):
            continue
        kept.append(link)
        joined[a] = b
        if a in held:
            held.add(b)
    return np.array(kept, dtype=int), ~np.isin(label, [int(part) for part in label[topology.fixed]])
