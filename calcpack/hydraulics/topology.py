"""How links join nodes, and which nodes hang together: plain index arrays, worked out once per network.

Arrays of the solver have one row per link or node and one column per block, a block being one case of a network.
Lines come first among the links, then pumps.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

FEW_BLOCKS = 8  # up to here sums are made block by block, beyond for all blocks link by link (measured)


@dataclass(frozen=True, eq=False)
class Topology:
    """Tags and connections. ``start`` and ``end`` (links,) are node numbers, ``fixed`` (nodes,) marks known heads."""

    nodes: tuple[str, ...]
    lines: tuple[str, ...]
    pumps: tuple[str, ...]
    start: np.ndarray
    end: np.ndarray
    fixed: np.ndarray

    @property
    def links(self) -> tuple[str, ...]:
        """Tags of all links in the order of the arrays."""
        return self.lines + self.pumps

    @cached_property
    def unknown(self) -> np.ndarray:
        """Numbers of the nodes whose head is to be found."""
        return np.flatnonzero(~self.fixed)

    @cached_property
    def _incidence(self) -> list[tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]]:
        """The link ends of every node dealt out in rounds, so that no node comes twice in a round: the nodes and links
        of the round's starts, and those of its ends."""
        rounds: list[tuple[list[int], list[int], list[int], list[int]]] = []
        met = [0] * len(self.nodes)
        for side, ends in ((0, self.start.tolist()), (2, self.end.tolist())):
            for link, node in enumerate(ends):
                if met[node] == len(rounds):
                    rounds.append(([], [], [], []))
                rounds[met[node]][side].append(node)
                rounds[met[node]][side + 1].append(link)
                met[node] += 1
        return [tuple(np.array(part, dtype=int) for part in parts) for parts in rounds]

    def sum_at_nodes(self, leaving: np.ndarray, entering: np.ndarray) -> np.ndarray:
        """Sum over the links of each node of a value for links that start there and one for links that end there.

        (links, B) -> (nodes, B).
        """
        blocks = leaving.shape[1]
        if blocks <= FEW_BLOCKS:
            columns = [
                np.bincount(self.start, leaving[:, b], len(self.nodes))
                + np.bincount(self.end, entering[:, b], len(self.nodes))
                for b in range(blocks)
            ]
            return np.column_stack(columns) if columns else np.zeros((len(self.nodes), 0))
        total = np.zeros((len(self.nodes), blocks))
        for start_nodes, start_links, end_nodes, end_links in self._incidence:
            total[start_nodes] += leaving[start_links]
            total[end_nodes] += entering[end_links]
        return total

    @cached_property
    def _to_fixed(self) -> tuple[np.ndarray, np.ndarray]:
        """Links with one end at a fixed head, and the number of their other node among the unknowns."""
        number = np.cumsum(~self.fixed) - 1
        links = np.flatnonzero(self.fixed[self.start] != self.fixed[self.end])
        return links, number[np.where(self.fixed[self.start], self.end, self.start)[links]]

    def sum_to_fixed(self, values: np.ndarray) -> np.ndarray:
        """Sum, for each unknown node, over its links to fixed heads: (links, B) -> (unknowns, B)."""
        links, places = self._to_fixed
        total = np.zeros((len(self.unknown), values.shape[1]))
        np.add.at(total, places, values[links])
        return total

    @cached_property
    def _pairs(self) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
        """Links between two unknown nodes, sorted by the pair: links, where each pair begins, and its two nodes."""
        number = np.where(self.fixed, -1, np.cumsum(~self.fixed) - 1)
        a, b = number[self.start], number[self.end]
        inner = np.flatnonzero((a >= 0) & (b >= 0) & (a != b))
        low, high = np.minimum(a[inner], b[inner]), np.maximum(a[inner], b[inner])
        order = np.lexsort((high, low))
        key = low[order] * (len(self.unknown) + 1) + high[order]
        _, offsets = np.unique(key, return_index=True)
        return inner[order], offsets, low[order][offsets], high[order][offsets]

    @property
    def pairs(self) -> tuple[np.ndarray, np.ndarray]:
        """The two unknowns of each off-diagonal entry of the node matrix (lower number first), each pair once."""
        return self._pairs[2], self._pairs[3]

    def sum_at_pairs(self, values: np.ndarray) -> np.ndarray:
        """Sum over parallel links: (links, B) -> (pairs, B)."""
        links, offsets, low, _ = self._pairs
        if len(offsets) == len(links):
            return values[links]
        return np.add.reduceat(values[links], offsets, axis=0) if len(low) else np.empty((0, values.shape[1]))

    def drop(self, head: np.ndarray) -> np.ndarray:
        """Head at the start less head at the end of every link: (nodes, B) -> (links, B)."""
        return head[self.start] - head[self.end]

    def parts(self, is_open: np.ndarray) -> np.ndarray:
        """Which nodes hang together over open links: for every node the lowest node of its part, (nodes, B)."""
        if is_open.shape[1] == 1:
            return self._lowest(is_open)
        # Blocks with the same open links have the same parts, and most blocks do.
        patterns, alike = np.unique(np.packbits(is_open, axis=0), axis=1, return_inverse=True)
        return self._lowest(np.unpackbits(patterns, axis=0, count=len(is_open)).astype(bool))[:, alike.ravel()]

    def _lowest(self, is_open: np.ndarray) -> np.ndarray:
        """Parts by joining labels along links and letting every node point straight at its root."""
        blocks = is_open.shape[1]
        link, block = np.nonzero(is_open)
        a, b = self.start[link] * blocks + block, self.end[link] * blocks + block
        label = np.arange(len(self.nodes) * blocks)
        while True:
            lower = np.minimum(label[a], label[b])
            before = label.copy()
            np.minimum.at(label, label[a], lower)
            np.minimum.at(label, label[b], lower)
            while True:
                jumped = label[label]
                if np.array_equal(jumped, label):
                    break
                label = jumped
            if np.array_equal(before, label):
                return label.reshape(len(self.nodes), blocks) // blocks

    def without_fixed_head(self, is_open: np.ndarray) -> np.ndarray:
        """True for nodes that no open link path joins to a fixed head, (nodes, B)."""
        label = self.parts(is_open)
        joined = np.zeros(label.shape, dtype=bool)
        np.put_along_axis(joined, label[self.fixed], True, axis=0)
        return ~np.take_along_axis(joined, label, axis=0)
