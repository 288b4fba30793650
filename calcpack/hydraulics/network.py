"""The numbers of a network as flat arrays: one row per line, pump or node, one column per block (case)."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields, replace

import numpy as np

from calcpack.hydraulics.curves import FittedCurve
from calcpack.hydraulics.topology import Topology


@dataclass(frozen=True, eq=False)
class HeadCurves:
    """Head curves of the pumps of all blocks as padded cubics.

    ``breaks`` (pieces - 1, pumps, B) part the flow axis (infinity where a curve has fewer pieces); ``origins``
    (pieces, pumps, B) and ``coefficients`` (4, pieces, pumps, B) give each cubic in flow - origin. ``floor`` (pumps, B)
    is the least fall of head with flow that the solver's matrix uses, m per m3/s; ``flow_max`` (pumps, B) ends the
    data and ``rated`` (pumps, B) is where the search starts. Below zero flow a curve rises straight on.
    """

    breaks: np.ndarray
    origins: np.ndarray
    coefficients: np.ndarray
    floor: np.ndarray
    flow_max: np.ndarray
    rated: np.ndarray

    @classmethod
    def stack(cls, curves: Sequence[Sequence[FittedCurve]], rated: np.ndarray) -> HeadCurves:
        """From one curve per pump and block; ``rated`` (pumps, B) flows per unit."""
        shape = rated.shape
        made: dict[int, tuple] = {}
        for row in curves:
            for curve in row:
                if id(curve) not in made:
                    made[id(curve)] = _with_reverse_flow(curve)
        number = {key: i for i, key in enumerate(made)}
        index = np.array([[number[id(curve)] for curve in row] for row in curves], dtype=int).reshape(shape)
        pieces = max((len(row[1]) for row in made.values()), default=1)
        breaks = np.full((len(made) or 1, pieces - 1), np.inf)
        origins = np.zeros((len(made) or 1, pieces))
        coefficients = np.zeros((len(made) or 1, pieces, 4))
        ends = np.ones((len(made) or 1, 2))
        for i, (edge, origin, cubic, floor, flow_max) in enumerate(made.values()):
            breaks[i, : len(edge)], origins[i, : len(origin)], coefficients[i, : len(origin)] = edge, origin, cubic
            ends[i] = floor, flow_max
        return cls(
            np.moveaxis(breaks[index], -1, 0),
            np.moveaxis(origins[index], -1, 0),
            np.moveaxis(coefficients[index], (-1, -2), (0, 1)),
            ends[index, 0],
            ends[index, 1],
            rated,
        )

    def evaluate(self, flow: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Head (m) and its slope (m per m3/s) at ``flow`` per unit, (pumps, B)."""
        piece = np.sum(flow >= self.breaks, axis=0)[None]
        x = flow - np.take_along_axis(self.origins, piece, axis=0)[0]
        c0, c1, c2, c3 = np.take_along_axis(self.coefficients, piece[None], axis=1)[:, 0]
        return c0 + x * (c1 + x * (c2 + x * c3)), c1 + x * (2 * c2 + x * 3 * c3)


def _with_reverse_flow(curve: FittedCurve) -> tuple:
    """Pieces of ``curve`` with a straight, falling piece in front for flows below zero, its floor and its end."""
    breaks, origins, coefficients = curve.pieces
    floor = 1e-3 * max(abs(curve.value(curve.flow_min)), 1e-3) / curve.flow_max
    below = np.array([[curve.value(0.0), min(curve.slope(0.0), -floor), 0.0, 0.0]])
    kept = breaks > 0
    first = len(breaks) - int(np.count_nonzero(kept))
    return (
        np.concatenate([[0.0], breaks[kept]]),
        np.concatenate([[0.0], origins[first:]]),
        np.vstack([below, coefficients[first:]]),
        floor,
        curve.flow_max,
    )


@dataclass(frozen=True, eq=False)
class Network:
    """Everything the solver needs of some blocks that share one topology. SI.

    Lines (lines, B): ``bore``, ``area``, ``length``, ``roughness`` (relative), ``friction_factor`` (given Darcy factor,
    NaN where the correlation rules), ``local`` (sum of K), ``equipment`` (head per flow squared), ``fixed_loss`` (head
    of equipment whatever the flow), ``check`` (no flow backwards: the line has a check valve, or ends at an outlet).
    Liquid and site (1, B): ``density``, ``viscosity``, ``gravity``.
    Pumps (pumps, B): ``running`` units, ``curves``.
    Nodes (nodes, B): ``fixed_head`` (NaN where unknown), ``demand`` (flow out).
    """

    topology: Topology
    bore: np.ndarray
    area: np.ndarray
    length: np.ndarray
    roughness: np.ndarray
    friction_factor: np.ndarray
    local: np.ndarray
    equipment: np.ndarray
    fixed_loss: np.ndarray
    check: np.ndarray
    density: np.ndarray
    viscosity: np.ndarray
    gravity: np.ndarray
    running: np.ndarray
    curves: HeadCurves
    fixed_head: np.ndarray
    demand: np.ndarray

    @property
    def blocks(self) -> int:
        """Number of blocks B."""
        return self.demand.shape[1]

    def take(self, blocks: np.ndarray) -> Network:
        """The network with the given blocks only, in the given order (repeats allowed)."""
        curves = HeadCurves(*(_take(getattr(self.curves, field.name), blocks) for field in fields(HeadCurves)))
        arrays = {
            field.name: _take(getattr(self, field.name), blocks)
            for field in fields(Network)
            if field.name not in ("topology", "curves")
        }
        return replace(self, curves=curves, **arrays)

    @property
    def unresisted(self) -> np.ndarray:
        """True for lines that resist no flow at all, (lines, B): their flow has no answer."""
        friction = (self.length > 0) & (np.isnan(self.friction_factor) | (self.friction_factor > 0))
        return ~friction & (self.local <= 0) & (self.equipment <= 0)

    @property
    def present(self) -> np.ndarray:
        """True for links that exist in a block: all lines, and pumps with a unit running, (links, B)."""
        return np.concatenate([np.ones(self.bore.shape, dtype=bool), self.running > 0])


def _take(array: np.ndarray, blocks: np.ndarray) -> np.ndarray:
    return np.take(array, blocks, axis=-1)
