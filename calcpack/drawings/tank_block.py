"""Tanks and vessels with their named levels."""

from __future__ import annotations

from dataclasses import dataclass, field

from calcpack.drawings.blocks import LEFT, RIGHT, Block
from calcpack.drawings.geometry import nearest_slot
from calcpack.drawings.svg import BLUE, HAIR, INK, PAPER, THICK, THIN, Point, Svg
from calcpack.drawings.symbols import INLINE
from calcpack.drawings.words import ROW, Words, set_rows, widest

_HALF = 6.5  # mm, half the width of the body
_FREEBOARD = 2.6
_SUBMERGED = 2.6
_LEADER = 2.6


@dataclass
class TankBlock(Block):
    """A tank: ``levels`` are (position, words, is level of the case), positions absolute (mm).

    ``nozzle`` is the position of its pipes. ``label_side`` -1 writes the levels on the left. ``dip`` is the position
    of a suction pipe that comes in over the rim, with the symbol at its lower end (``foot``).
    """

    levels: list[tuple[float, Words, bool]] = field(default_factory=list)
    nozzle: float = 0.0
    closed: bool = False
    label_side: int = -1
    dip: float | None = None
    foot: str = ""
    way: int = 1
    rows: list[Words] = field(default_factory=list)

    def __post_init__(self) -> None:
        high = min(y for y, _, _ in self.levels)
        low = max(y for y, _, _ in self.levels)
        self.y = self.nozzle
        self.top = high - (1.0 if self.dip is not None else _FREEBOARD + (1.2 if self.closed else 0.0))
        self.bottom = max(low + _SUBMERGED, self.nozzle + 1.6) + (1.2 if self.closed else 0.0)
        if self.dip is None:
            self.top = min(self.top, self.nozzle - 1.6)
        else:
            self.bottom = max(self.bottom, low + 8.0)
        self.texts = self._spread()
        head = min([self.top, self.texts[0] - ROW / 2, *([self.dip - 1.2] if self.dip is not None else [])])
        self.up = self.y - head + 0.6 + ROW * len(self.rows)
        self.down = max(self.bottom, self.texts[-1] + ROW / 2) + 0.4 - self.y
        label = widest(words for _, words, _ in self.levels)
        sides = {self.label_side: _HALF + (_LEADER + label if label else 0.0), -self.label_side: _HALF}
        self.left, self.right = sides[-1], sides[1]
        name = widest(self.rows)
        if self.label_side < 0:  # the name ends (or starts) flush with the far wall
            self.left = max(self.left, name - _HALF)
        else:
            self.right = max(self.right, name - _HALF)

    def _spread(self) -> list[float]:
        """Heights of the level texts, apart enough to be read, as near to their levels as can be."""
        middle = len(self.levels) // 2
        order = sorted(range(len(self.levels)), key=lambda index: (abs(index - middle), index))
        taken: dict[int, float] = {}
        for index in order:
            wanted = self.levels[index][0]
            for other, y in taken.items():
                wanted = max(wanted, y + ROW) if other < index else min(wanted, y - ROW)
            busy = [(y - ROW / 2, y + ROW / 2) for y in taken.values()]
            taken[index] = nearest_slot(wanted, ROW / 2, ROW / 2, busy, 0.0)
        return [taken[index] for index in range(len(self.levels))]

    def port(self, way, line) -> tuple[Point, tuple[Point, ...]]:
        reach = self.right if way > 0 else self.left
        y = self.dip if self.dip is not None else self.nozzle
        return (self.x + way * reach, y), (RIGHT if way > 0 else LEFT,)

    def draw(self, svg: Svg) -> None:
        x0, x1 = self.x - _HALF, self.x + _HALF
        anchor = "end" if self.label_side < 0 else "start"
        surface = next((y for y, _, current in self.levels if current), self.levels[0][0])
        if self.closed:
            svg.rect(x0, self.top, 2 * _HALF, self.bottom - self.top, pen=0.35, radius=2.4)
        else:
            svg.polyline(((x0, self.top), (x0, self.bottom), (x1, self.bottom), (x1, self.top)), width=0.35, fill=PAPER)
        for index, (y, words, current) in enumerate(self.levels):
            svg.line(x0, y, x1, y, width=THIN if current else HAIR, dash="" if current else "1.2 0.7",
                     colour=BLUE if current else INK)  # fmt: skip
            edge = self.x + self.label_side * _HALF
            end = edge + self.label_side * (_LEADER - 0.6)
            if words.text:
                svg.line(edge, y, end, self.texts[index], width=HAIR)
                words.set(svg, edge + self.label_side * _LEADER, self.texts[index], anchor)
        level_mark(svg, self.x - _HALF + 3.0, surface)
        self._pipes(svg)
        set_rows(svg, self.rows, self.x - self.label_side * _HALF, self.y - self.up, anchor)

    def _pipes(self, svg: Svg) -> None:
        if self.dip is None:
            return
        x, low = self.x + 1.5, self.bottom - 2.4
        svg.polyline(((self.x + self.way * self.right, self.dip), (x, self.dip), (x, low)), width=THICK)
        if self.foot:
            with svg.turned(x, low - 2.2, 90):
                INLINE[self.foot].draw(svg, x, low - 2.2, -1)


def level_mark(svg: Svg, x: float, y: float) -> None:
    """The triangle that stands on a free surface, with two short strokes under it."""
    svg.polyline(((x, y), (x - 1.0, y - 1.6), (x + 1.0, y - 1.6)), close=True, fill=PAPER)
    svg.line(x - 0.7, y + 0.5, x + 0.7, y + 0.5, width=HAIR)
    svg.line(x - 0.35, y + 0.9, x + 0.35, y + 0.9, width=HAIR)
