"""The legend: the symbols that the drawing uses, and no others."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass

from calcpack.drawings.blocks import (
    BRANCH_RADIUS,
    NODE_RADIUS,
    Block,
    JunctionBlock,
    LineBlock,
    OutletBlock,
    PumpBlock,
    draw_pump,
)
from calcpack.drawings.geometry import Box
from calcpack.drawings.svg import INK, PAPER, THICK, Point, Svg
from calcpack.drawings.symbols import INLINE, arrow_head
from calcpack.drawings.tank_block import TankBlock, level_mark
from calcpack.drawings.words import ROW, Words

_HEIGHT = 6.8  # mm, height of one legend row
_SHAPE = 8.6  # mm for the symbol
_PAD = 1.2
_GAP = 0.9  # mm between heading and symbols, for actuators
_HEADING = Words("Symbols used (shapes in the manner of ISO 10628-2)")


@dataclass(frozen=True)
class LegendEntry:
    """A shape and its name; ``draw`` gets the drawing and the middle of the shape."""

    title: str
    draw: Callable[[Svg, float, float], None]


def legend_entries(blocks: Iterable[Block], tees: Sequence[Point]) -> list[LegendEntry]:
    """What the drawing shows, in a fixed order: vessels, pumps, line items, marks."""
    blocks = list(blocks)
    tanks = [block for block in blocks if isinstance(block, TankBlock)]
    pumps = [block for block in blocks if isinstance(block, PumpBlock)]
    lines = [block for block in blocks if isinstance(block, LineBlock)]
    used = {key for line in lines for key, _ in line.symbols} | {tank.foot for tank in tanks if tank.foot}
    entries = []
    if any(not tank.closed for tank in tanks):
        entries.append(LegendEntry("open tank", _open_tank))
    if any(tank.closed for tank in tanks):
        entries.append(LegendEntry("closed vessel", _closed_vessel))
    if tanks:
        entries.append(LegendEntry("liquid level of the case", _level))
    if any(isinstance(block, OutletBlock) for block in blocks):
        entries.append(LegendEntry("free discharge", _free_discharge))
    if any(pump.running for pump in pumps):
        entries.append(LegendEntry("centrifugal pump, running", lambda svg, x, y: draw_pump(svg, x, y, 1, False, 2.4)))
    if any(pump.running < pump.units for pump in pumps):
        entries.append(LegendEntry("pump, not running", lambda svg, x, y: draw_pump(svg, x, y, 1, True, 2.4)))
    for key, symbol in INLINE.items():
        if key in used:
            entries.append(LegendEntry(symbol.title, _inline(key)))
    if any(line.flow for line in lines):
        entries.append(LegendEntry("direction of flow", _arrow))
    if any(isinstance(block, JunctionBlock) and not block.crest for block in blocks):
        entries.append(LegendEntry("node", _node))
    if tees:
        entries.append(LegendEntry("branch", _branch))
    return entries


def legend_size(entries: Sequence[LegendEntry], columns: int) -> tuple[float, float]:
    """Width and height that :func:`draw_legend` takes with so many columns."""
    widths = _widths(entries, columns)
    return max(sum(widths), _HEADING.width) + 2 * _PAD, ROW + _GAP + _HEIGHT * _rows(entries, columns) + 2 * _PAD


def draw_legend(svg: Svg, entries: Sequence[LegendEntry], box: Box) -> None:
    """A heading and columns of symbols with their names, filling ``box`` (of a size from :func:`legend_size`)."""
    width = box.x1 - box.x0 + 1e-6
    columns = max(n for n in range(1, len(entries) + 1) if n == 1 or legend_size(entries, n)[0] <= width)
    widths, rows = _widths(entries, columns), _rows(entries, columns)
    with svg.group("legend", "legend"):
        _HEADING.set(svg, box.x0 + _PAD, box.y0 + _PAD + ROW / 2)
        for index, entry in enumerate(entries):
            x = box.x0 + _PAD + sum(widths[: index // rows])
            y = box.y0 + _PAD + ROW + _GAP + _HEIGHT * (index % rows + 0.5)
            entry.draw(svg, x + _SHAPE / 2, y)
            Words(entry.title).set(svg, x + _SHAPE + 1.2, y)


def _rows(entries: Sequence[LegendEntry], columns: int) -> int:
    return math.ceil(len(entries) / columns)


def _widths(entries: Sequence[LegendEntry], columns: int) -> list[float]:
    rows = _rows(entries, columns)
    chunks = [entries[index : index + rows] for index in range(0, len(entries), rows)]
    return [max(Words(entry.title).width for entry in chunk) + _SHAPE + 4.0 for chunk in chunks]


def _pipe(svg: Svg, x: float, y: float) -> None:
    svg.line(x - _SHAPE / 2, y, x + _SHAPE / 2, y, width=THICK)


def _inline(key: str) -> Callable[[Svg, float, float], None]:
    def draw(svg: Svg, x: float, y: float) -> None:
        _pipe(svg, x, y)
        INLINE[key].draw(svg, x, y, 1)

    return draw


def _node(svg: Svg, x: float, y: float) -> None:
    _pipe(svg, x, y)
    svg.circle(x, y, NODE_RADIUS)


def _branch(svg: Svg, x: float, y: float) -> None:
    _pipe(svg, x, y)
    svg.circle(x, y, BRANCH_RADIUS, pen=0, fill=INK)


def _arrow(svg: Svg, x: float, y: float) -> None:
    _pipe(svg, x, y)
    arrow_head(svg, x, y, 1)


def _open_tank(svg: Svg, x: float, y: float) -> None:
    svg.polyline(((x - 3, y - 2.2), (x - 3, y + 2.2), (x + 3, y + 2.2), (x + 3, y - 2.2)), width=0.35)


def _closed_vessel(svg: Svg, x: float, y: float) -> None:
    svg.rect(x - 3, y - 2.4, 6, 4.8, pen=0.35, radius=1.6, fill=PAPER)


def _level(svg: Svg, x: float, y: float) -> None:
    svg.line(x - 3, y, x + 3, y)
    level_mark(svg, x, y)


def _free_discharge(svg: Svg, x: float, y: float) -> None:
    svg.polyline(((x - 3.5, y - 1.4), (x + 1.5, y - 1.4), (x + 1.5, y + 0.6)), width=THICK)
    svg.line(x + 0.4, y + 0.6, x + 2.6, y + 0.6)
    for shift in (-0.6, 0.0, 0.6):
        svg.line(x + 1.5 + shift, y + 1.1, x + 1.5 + shift, y + 2.6, dash="0.7 0.5", width=0.12)
