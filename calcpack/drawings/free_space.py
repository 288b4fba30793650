"""Places for what is written last: the names of nodes and the legend, where nothing else stands."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from calcpack.drawings.geometry import Box

CLEAR = 0.8  # mm between a name and anything else
_STEP = 2.0
_SAMPLES = 16  # points looked at along a leader; the first few lie on the node itself
_OFF = 5


def name_place(
    x: float, y: float, width: float, height: float, blocks: Sequence[Box], lines: Sequence[Box], frame: Box
) -> Box:
    """The free rectangle of ``width`` and ``height`` nearest to (x, y), inside ``frame`` if it can be.

    It keeps clear of ``blocks`` (things with text) and ``lines``; its leader keeps off the blocks and, if it can, off
    the lines.
    """

    def cost(box: Box) -> tuple:
        end = leader_end(x, y, box)
        hits = 8 * sum(box.overlaps(other, CLEAR) for other in (*blocks, *lines))
        hits += 5 * sum(_crosses((x, y), end, other) for other in blocks)
        hits += sum(_crosses((x, y), end, other) for other in lines)
        outside = max(frame.x0 - box.x0, 0.0) + max(box.x1 - frame.x1, 0.0)
        away = abs((box.x0 + box.x1) / 2 - x) + 1.5 * abs((box.y0 + box.y1) / 2 - y)
        return hits, round(outside, 3), round(away, 3), box.y0, box.x0

    return min(_around(x, y, width, height), key=cost)


def leader_end(x: float, y: float, box: Box) -> tuple[float, float]:
    """The point of a name's rectangle nearest to what it names, where its leader ends."""
    return min(max(x, box.x0), box.x1), min(max(y, box.y0), box.y1)


def _crosses(start: tuple[float, float], end: tuple[float, float], other: Box) -> bool:
    """True when the straight way from just off ``start`` to ``end`` passes through ``other``."""
    for step in range(_OFF, _SAMPLES + 1):
        share = step / _SAMPLES
        if other.holds(start[0] + share * (end[0] - start[0]), start[1] + share * (end[1] - start[1])):
            return True
    return False


def _around(x: float, y: float, width: float, height: float) -> list[Box]:
    boxes = []
    for ring in range(14):
        off = 1.5 + 1.6 * ring
        for dx in dict.fromkeys((1.5, off, -1.5 - width, -off - width, -width / 2, -width, -width * 0.85, 0.0)):
            for dy in (-off - height, off, -height / 2, -height - 0.6, 0.6):
                boxes.append(Box(x + dx, y + dy, x + dx + width, y + dy + height))
    return boxes


def free_rectangle(sizes: Iterable[tuple[float, float]], occupied: Sequence[Box], frame: Box, gap: float) -> Box | None:
    """The first of ``sizes`` that fits into ``frame`` clear of everything by ``gap``; of its places the one nearest to
    the upper left corner. None when no size fits."""
    for width, height in sizes:
        best = None
        rows = int((frame.y1 - frame.y0 - height) / _STEP) + 1
        columns = int((frame.x1 - frame.x0 - width) / _STEP) + 1
        for row in range(max(rows, 0)):
            for column in range(max(columns, 0)):
                x, y = frame.x0 + column * _STEP, frame.y0 + row * _STEP
                box = Box(x, y, x + width, y + height)
                if (best is None or row + column < best[0]) and not any(box.overlaps(other, gap) for other in occupied):
                    best = (row + column, box)
        if best:
            return best[1]
    return None
