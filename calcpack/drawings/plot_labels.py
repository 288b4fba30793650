"""Labels of plots: spread beside the frame, or set near their points where nothing else stands."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from itertools import pairwise

from calcpack.drawings.fonts import POINT, text_width
from calcpack.drawings.geometry import Box
from calcpack.drawings.plots import SMALL, Page

PITCH = 2.9  # mm between the middles of two labels one above the other
HEIGHT = 2.6  # mm that a label takes
Track = Sequence[tuple[float, float]]  # a curve in mm on the page


def label_width(text: str, size: float = SMALL) -> float:
    """Width in mm of a plot text of ``size`` points."""
    return text_width(text, size * POINT)


def spread(wanted: Sequence[float], low: float, high: float, pitch: float = PITCH) -> list[float]:
    """Positions in the order of ``wanted``, at least ``pitch`` apart, inside [low, high] if they fit, near to what is
    wanted."""
    order = sorted(range(len(wanted)), key=lambda index: (wanted[index], index))
    groups: list[list[float]] = []  # [sum of wanted middles, count]
    for index in order:
        groups.append([wanted[index], 1])
        while len(groups) > 1 and _middle(groups[-1]) - _middle(groups[-2]) < pitch * _half(groups[-2:]):
            last = groups.pop()
            groups[-1] = [groups[-1][0] + last[0], groups[-1][1] + last[1]]
    placed: list[float] = []
    for group in groups:
        first = _middle(group) - pitch * (group[1] - 1) / 2
        placed += [first + pitch * k for k in range(int(group[1]))]
    shift = max(low - placed[0], 0.0) or min(high - placed[-1], 0.0) if placed else 0.0
    result = [0.0] * len(wanted)
    for index, position in zip(order, placed, strict=True):
        result[index] = position + shift
    return result


def _half(groups: Sequence[Sequence[float]]) -> float:
    return sum(group[1] for group in groups) / 2


def _middle(group: Sequence[float]) -> float:
    return group[0] / group[1]


def end_labels(page: Page, ends: Sequence[tuple[float, float, str]], x: float, low: float, high: float) -> list[Box]:
    """Labels of curve ends (x, y, text; mm) in a column at ``x``, each led to its end; returns what they occupy."""
    boxes = []
    for (from_x, from_y, text), y in zip(ends, spread([end[1] for end in ends], low, high), strict=True):
        page.line((from_x, x - 2.2, x - 0.6), (from_y, y, y), 0.35)
        page.text(x, y, text)
        boxes.append(Box(x, y - HEIGHT / 2, x + label_width(text), y + HEIGHT / 2))
    return boxes


def track_boxes(track: Track, half_width: float = 0.4) -> list[Box]:
    """A curve as a chain of small rectangles."""
    boxes = []
    for (x0, y0), (x1, y1) in pairwise(track):
        parts = max(1, math.ceil(max(abs(x1 - x0), abs(y1 - y0)) / 2.0))
        for k in range(parts):
            a, b = k / parts, (k + 1) / parts
            xs = sorted((x0 + a * (x1 - x0), x0 + b * (x1 - x0)))
            ys = sorted((y0 + a * (y1 - y0), y0 + b * (y1 - y0)))
            boxes.append(Box(xs[0], ys[0], xs[1], ys[1]).grown(half_width))
    return boxes


class Placer:
    """Sets labels near points: clear of texts, if possible of curves, with leaders that do not cross each other."""

    def __init__(self, frame: Box, texts: Iterable[Box], curves: Iterable[Box]) -> None:
        self.frame, self.texts, self.curves = frame, list(texts), list(curves)
        self.leaders: list[tuple[tuple[float, float], tuple[float, float]]] = []

    def near(self, x: float, y: float, width: float, height: float = HEIGHT, closest: float = 4.0) -> Box:
        """The best rectangle of that size around (x, y), at least ``closest`` mm away; it is minded from then on."""
        best, cost = None, math.inf
        for ring in range(7):
            distance = closest + 2.0 * ring
            for step in range(24):
                angle = math.radians(15 * step + 90)
                cx = x + math.cos(angle) * (distance + width / 2 * abs(math.cos(angle)))
                cy = y - math.sin(angle) * (distance + height / 2 * abs(math.sin(angle)))
                box = Box(cx - width / 2, cy - height / 2, cx + width / 2, cy + height / 2)
                price = self._price((x, y), box, distance)
                if price < cost - 1e-9:
                    best, cost = box, price
        assert best is not None
        self.texts.append(best)
        self.leaders.append(((x, y), nearest_point(box=best, x=x, y=y)))
        return best

    def _price(self, point: tuple[float, float], box: Box, distance: float) -> float:
        f = self.frame
        if box.x0 < f.x0 + 0.5 or box.x1 > f.x1 - 0.5 or box.y0 < f.y0 + 0.5 or box.y1 > f.y1 - 0.5:
            return 1e6
        leader = (point, nearest_point(box=box, x=point[0], y=point[1]))
        price = distance
        price += 200.0 * sum(box.overlaps(other, 0.5) for other in self.texts)
        price += 40.0 * sum(box.overlaps(other) for other in self.curves)
        price += 120.0 * sum(_cross(leader, other) for other in self.leaders)
        price += 120.0 * sum(_touches(other, box) for other in self.leaders)
        price += 200.0 * sum(_touches(leader, other) for other in self.texts)
        return price


def nearest_point(*, box: Box, x: float, y: float) -> tuple[float, float]:
    """The point of ``box`` nearest to (x, y): where a leader ends."""
    return min(max(x, box.x0), box.x1), min(max(y, box.y0), box.y1)


def _touches(leader: tuple, box: Box) -> bool:
    (x0, y0), (x1, y1) = leader
    return any(box.holds(x0 + (x1 - x0) * k / 12, y0 + (y1 - y0) * k / 12) for k in range(2, 13))


def _cross(one: tuple, other: tuple) -> bool:
    (a, b), (c, d) = one, other

    def side(p: tuple, q: tuple, r: tuple) -> float:
        return (q[0] - p[0]) * (r[1] - p[1]) - (q[1] - p[1]) * (r[0] - p[0])

    return side(a, b, c) * side(a, b, d) < 0 and side(c, d, a) * side(c, d, b) < 0
