"""How links join nodes, and which nodes hang together: plain index arrays, worked out once per network.

Arrays of the solver have one row per link or node and one column per block, a block being one case of a network.
Lines come first among the links, then pumps.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np


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
    def _incidence(self) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Link ends sorted by node: order of the (start, end) stack, nodes that have links, where each begins."""
        ends = np.concatenate([self.start, self.end])
        order = np.argsort(ends, kind="stable")
        occupied, offsets = np.unique(ends[order], return_index=True)
        return order, occupied, offsets

    def sum_at_nodes(self, at_start: np.ndarray, at_end: np.ndarray) -> np.ndarray:
        """Sum over the links of each node of a value given for the link's start and end: (links, B) -> (nodes, B)."""
        order, occupied, offsets = self._incidence
        total = np.zeros((len(self.nodes), at_start.shape[1]))
        if len(order):
            total[occupied] = np.add.reduceat(np.concatenate([at_start, at_end])[order], offsets, axis=0)
        return total

    @cached_property
    def _pairs(self) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
        """Links between two unknown nodes, sorted by the pair: links, where each pair begins, and its two nodes."""
        number = np.full(len(self.nodes), -1)
        number[self.unknown] = np.arange(len(self.unknown))
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
        """Label of the connected part of every node over open links, (nodes, B); labels are equal within a part."""
        blocks = is_open.shape[1]
        if blocks > 1 and np.array_equal(is_open, np.broadcast_to(is_open[:, :1], is_open.shape)):
            return self.parts(is_open[:, :1]) * blocks + np.arange(blocks)
        link, block = np.nonzero(is_open)
        a, b = self.start[link] * blocks + block, self.end[link] * blocks + block
        label = np.arange(len(self.nodes) * blocks)
        while True:
            lower = np.minimum(label[a], label[b])
            before = label.copy()
            np.minimum.at(label, label[a], lower)
            np.minimum.at(label, label[b], lower)
            while True:  # let every node point straight at its root
                jumped = label[label]
                if np.array_equal(jumped, label):
                    break
                label = jumped
            if np.array_equal(before, label):
                return label.reshape(len(self.nodes), blocks)

    def without_fixed_head(self, is_open: np.ndarray) -> np.ndarray:
        """True for nodes that no open link path joins to a fixed head, (nodes, B)."""
        label = self.parts(is_open)
        joined = np.zeros(label.size, dtype=bool)
        joined[label[self.fixed]] = True
        return ~joined[label]
