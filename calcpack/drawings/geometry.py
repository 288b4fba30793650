"""Rectangles on paper: what is occupied and what is free."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass


@dataclass(frozen=True)
class Box:
    """A rectangle in mm, y downwards: left, top, right, bottom."""

    x0: float
    y0: float
    x1: float
    y1: float

    def overlaps(self, other: Box, gap: float = 0.0) -> bool:
        """True when the two come closer than ``gap``."""
        return (
            self.x0 < other.x1 + gap and other.x0 < self.x1 + gap
            and self.y0 < other.y1 + gap and other.y0 < self.y1 + gap
        )  # fmt: skip

    def grown(self, by: float) -> Box:
        """The rectangle with a margin of ``by`` on every side."""
        return Box(self.x0 - by, self.y0 - by, self.x1 + by, self.y1 + by)

    def holds(self, x: float, y: float) -> bool:
        """True when the point lies strictly inside."""
        return self.x0 < x < self.x1 and self.y0 < y < self.y1


def around(boxes: Iterable[Box]) -> Box:
    """The smallest rectangle that holds all ``boxes`` (at least one)."""
    boxes = list(boxes)
    return Box(
        min(box.x0 for box in boxes), min(box.y0 for box in boxes),
        max(box.x1 for box in boxes), max(box.y1 for box in boxes),
    )  # fmt: skip


def segment_box(start: tuple[float, float], end: tuple[float, float], half_width: float) -> Box:
    """The strip that a straight horizontal or vertical segment occupies."""
    (x1, y1), (x2, y2) = start, end
    return Box(min(x1, x2), min(y1, y2), max(x1, x2), max(y1, y2)).grown(half_width)


def nearest_slot(wanted: float, up: float, down: float, taken: Iterable[tuple[float, float]], gap: float) -> float:
    """The position nearest to ``wanted`` at which [position - up, position + down] keeps ``gap`` to every interval of
    ``taken``; of two equally near the lower value wins."""
    busy = sorted((low - gap - down, high + gap + up) for low, high in taken)

    def free(position: float) -> bool:
        return all(not (low + 1e-9 < position < high - 1e-9) for low, high in busy)

    candidates = [wanted, *(edge for pair in busy for edge in pair)]
    return min((one for one in candidates if free(one)), key=lambda one: (round(abs(one - wanted), 6), one))
