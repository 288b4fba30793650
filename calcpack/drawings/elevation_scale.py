"""The elevation axis: to scale, and stretched only where levels would otherwise run into each other."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

SMALLEST_GAP = 1.6  # mm between two levels that a reader must tell apart


@dataclass(frozen=True)
class ElevationScale:
    """Elevation (m) -> distance below the top of the axis (mm), linear between ``knots`` (elevation, position).

    ``stretched`` lists the intervals (low, high) that are drawn taller than the rest.
    """

    knots: tuple[tuple[float, float], ...]
    stretched: tuple[tuple[float, float], ...]

    def y(self, elevation: float) -> float:
        """Position of an elevation; beyond the ends the nearest part goes on."""
        knots = self.knots
        index = next((i for i in range(1, len(knots) - 1) if elevation < knots[i][0]), len(knots) - 1)
        (z0, y0), (z1, y1) = knots[index - 1], knots[index]
        return y0 + (y1 - y0) * (elevation - z0) / (z1 - z0)

    @property
    def low(self) -> float:
        """Lowest elevation of the axis."""
        return self.knots[0][0]

    @property
    def high(self) -> float:
        """Highest elevation of the axis."""
        return self.knots[-1][0]


def elevation_scale(low: float, high: float, height: float, told_apart: Sequence[float]) -> ElevationScale:
    """An axis of ``height`` mm from ``low`` to ``high`` on which neighbours of ``told_apart`` are at least
    ``SMALLEST_GAP`` apart; everything else shares what is left to one scale."""
    if high - low < 1e-6:
        low, high = low - 0.5, high + 0.5
    marks = sorted({round(z, 9) for z in told_apart if low <= z <= high})
    gaps = [(a, b) for a, b in pairwise(marks) if b - a > 1e-6]
    tight: list[tuple[float, float]] = []
    while True:
        rest = (high - low) - sum(b - a for a, b in tight)
        scale = (height - SMALLEST_GAP * len(tight)) / rest if rest > 1e-9 else math.inf
        more = [gap for gap in gaps if gap not in tight and (gap[1] - gap[0]) * scale < SMALLEST_GAP - 1e-9]
        if not more:
            break
        tight += more
    tight.sort()
    ends = sorted({low, high, *(z for gap in tight for z in gap)})
    knots, y = [(ends[0], height)], height
    for a, b in pairwise(ends):
        y -= SMALLEST_GAP if (a, b) in tight else (b - a) * scale
        knots.append((b, y))
    return ElevationScale(tuple(knots), _joined(tight))


def _joined(intervals: Sequence[tuple[float, float]]) -> tuple[tuple[float, float], ...]:
    joined: list[tuple[float, float]] = []
    for low, high in intervals:
        if joined and abs(joined[-1][1] - low) < 1e-9:
            joined[-1] = (joined[-1][0], high)
        else:
            joined.append((low, high))
    return tuple(joined)
