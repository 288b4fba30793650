"""The elevation axis: to scale, and stretched only where levels would otherwise run into each other."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
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


def elevation_scale(
    low: float, high: float, height: float, told_apart: Iterable[tuple[float, float]]
) -> ElevationScale:
    """An axis of ``height`` mm from ``low`` to ``high`` on which the two elevations of every pair of ``told_apart`` are
    at least ``SMALLEST_GAP`` apart; everything else shares what is left to one scale."""
    if high - low < 1e-6:
        low, high = low - 0.5, high + 0.5
    pairs = sorted({(min(pair), max(pair)) for pair in told_apart if abs(pair[0] - pair[1]) > 1e-6})
    ends = sorted({low, high, *(z for pair in pairs for z in pair)})
    pieces = list(pairwise(ends))
    steepness: dict[tuple[float, float], float] = {}  # mm per m where a pair asks for more than the scale
    while True:
        stretched = sum((b - a) * steepness[a, b] for a, b in steepness)
        rest = (high - low) - sum(b - a for a, b in steepness)
        scale = max(height - stretched, 0.2 * height) / rest if rest > 1e-9 else 0.0
        more = {}
        for a, b in pieces:
            asked = [SMALLEST_GAP / (q - p) for p, q in pairs if p <= a and b <= q]
            if max(asked, default=0.0) > max(scale, steepness.get((a, b), 0.0)) + 1e-9:
                more[a, b] = max(asked)
        if not more:
            break
        steepness |= more
    y = stretched + scale * rest
    knots = [(ends[0], y)]
    for a, b in pieces:
        y -= (b - a) * steepness.get((a, b), scale)
        knots.append((b, y))
    return ElevationScale(tuple(knots), _joined(sorted(steepness)))


def _joined(intervals: Sequence[tuple[float, float]]) -> tuple[tuple[float, float], ...]:
    joined: list[tuple[float, float]] = []
    for low, high in intervals:
        if joined and abs(joined[-1][1] - low) < 1e-9:
            joined[-1] = (joined[-1][0], high)
        else:
            joined.append((low, high))
    return tuple(joined)
