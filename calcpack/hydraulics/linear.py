"""The symmetric positive definite equations of the node heads, for one block or for a thousand at once.

All blocks share one pattern, so small systems are eliminated symbolically once (minimum degree order) and numerically
for all blocks side by side: each step is an array operation over the blocks. Large systems go to sparse LU, one
factorisation per block; scipy is imported only then.
"""

from __future__ import annotations

import numpy as np

from calcpack.hydraulics.topology import Topology

LARGEST_ELIMINATION = 400  # unknowns; beyond, the compiled factorisation is faster than one numpy call per step


def solver_for(topology: Topology) -> Elimination | SparseFactors:
    """The quicker of the two solvers for this network."""
    unknowns = len(topology.unknown)
    return (Elimination if unknowns <= LARGEST_ELIMINATION else SparseFactors)(unknowns, *topology.pairs)


class Elimination:
    """Node by node over all blocks at once, in terms of conductances between nodes and to fixed heads.

    Eliminating a node only adds positive conductances between its neighbours: nothing cancels, so that lines at rest
    (conductance 1e7) beside throttled ones (1e-3) cost no digits. The diagonal is their sum and never stored.
    """

    def __init__(self, unknowns: int, low: np.ndarray, high: np.ndarray) -> None:
        entry = {(int(a), int(b)): k for k, (a, b) in enumerate(zip(low, high, strict=True))}
        self._given = len(entry)
        neighbours: list[set[int]] = [set() for _ in range(unknowns)]
        for a, b in entry:
            neighbours[a].add(b)
            neighbours[b].add(a)
        left = set(range(unknowns))
        self._steps = []
        while left:
            node = min(left, key=lambda n: (len(neighbours[n]), n))
            left.remove(node)
            rows = sorted(neighbours[node])
            column = [entry[min(node, row), max(node, row)] for row in rows]
            first, second, target = [], [], []
            for i, a in enumerate(rows):
                neighbours[a].remove(node)
                for j in range(i + 1, len(rows)):
                    b = rows[j]
                    neighbours[a].add(b)
                    neighbours[b].add(a)
                    first.append(i)
                    second.append(j)
                    target.append(entry.setdefault((a, b), len(entry)))
            self._steps.append((node, *(np.array(part, dtype=int) for part in (rows, column, first, second, target))))
        self._entries = len(entry)

    def solve(self, ground: np.ndarray, pairs: np.ndarray, right: np.ndarray) -> np.ndarray:
        """Heads (unknowns, B) that drive the flows ``right`` (unknowns, B) out of the network at its fixed heads.

        ``ground`` (unknowns, B) is the conductance of each node to fixed heads, ``pairs`` (pairs, B) that among nodes.
        """
        to_fixed, x = ground.copy(), right.copy()
        between = np.zeros((self._entries, ground.shape[1]))
        between[: self._given] = pairs
        factors, diagonal = [], np.empty(ground.shape)
        for node, rows, column, first, second, target in self._steps:
            values = between[column]
            diagonal[node] = to_fixed[node] + values.sum(axis=0)
            factor = values / diagonal[node]
            to_fixed[rows] += factor * to_fixed[node]
            x[rows] += factor * x[node]
            if len(target):
                between[target] += factor[first] * values[second]
            factors.append(factor)
        x /= diagonal
        for (node, rows, *_), factor in zip(reversed(self._steps), reversed(factors), strict=True):
            x[node] += np.sum(factor * x[rows], axis=0)
        return x


class SparseFactors:
    """Sparse LU in symmetric mode of each block."""

    def __init__(self, unknowns: int, low: np.ndarray, high: np.ndarray) -> None:
        from scipy.sparse import csc_matrix  # 0.2 s that small networks need not spend

        self._low, self._high, every = low, high, np.arange(unknowns)
        rows, columns = np.concatenate([every, high, low]), np.concatenate([every, low, high])
        self._order = np.lexsort((rows, columns))
        indices = rows[self._order].astype(np.int32)
        pointers = np.concatenate([[0], np.cumsum(np.bincount(columns, minlength=unknowns))]).astype(np.int32)
        self._matrix = csc_matrix((np.zeros(len(indices)), indices, pointers), shape=(unknowns, unknowns))

    def factorise(self, ground: np.ndarray, pairs: np.ndarray):
        """LU of one block from its conductances to fixed heads (unknowns,) and between nodes (pairs,)."""
        from scipy.sparse.linalg import splu

        count = len(ground)
        diagonal = ground + np.bincount(self._low, pairs, count) + np.bincount(self._high, pairs, count)
        self._matrix.data = np.concatenate([diagonal, -pairs, -pairs])[self._order]
        # The matrix is positive definite: no pivoting, and an order made for symmetric patterns (measured: 25 % faster
        # than the column order on a 10 000-pipe grid).
        return splu(self._matrix, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options={"SymmetricMode": True})

    def solve(self, ground: np.ndarray, pairs: np.ndarray, right: np.ndarray) -> np.ndarray:
        """Heads (unknowns, B), see :meth:`Elimination.solve`."""
        return np.column_stack(
            [self.factorise(ground[:, b], pairs[:, b]).solve(right[:, b].copy()) for b in range(right.shape[1])]
        )
