"""The things that a schematic is laid out from: each knows the room it needs and how to draw itself.

A block is placed by its anchor (x, y); lines meet it at ports. A node's anchor lies at its elevation, a line's block
(its symbols, label and box) wherever there is room.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from calcpack.drawings.geometry import Box
from calcpack.drawings.svg import DASHES, HAIR, INK, PAPER, THICK, THIN, Point, Svg
from calcpack.drawings.symbols import INLINE, arrow_head
from calcpack.drawings.words import ROW, Words, set_rows, widest
from calcpack.ledger.text import NBSP

RIGHT, DOWN, LEFT, UP = (1.0, 0.0), (0.0, 1.0), (-1.0, 0.0), (0.0, -1.0)
ANYWHERE = (RIGHT, DOWN, LEFT, UP)
PUMP_RADIUS = 3.6
NODE_RADIUS = 0.95
BRANCH_RADIUS = 0.75
_GAP = 1.4  # mm between symbols along a line
_ARROW = 4.2  # mm of pipe for the flow arrow


@dataclass
class Block:
    """Room around an anchor in mm (left, right, up, down); x and y are set by the layout."""

    tag: str
    left: float = 0.0
    right: float = 0.0
    up: float = 0.0
    down: float = 0.0
    x: float = 0.0
    y: float = 0.0

    @property
    def box(self) -> Box:
        """The occupied rectangle."""
        return Box(self.x - self.left, self.y - self.up, self.x + self.right, self.y + self.down)

    @property
    def height(self) -> float:
        """Room from top to bottom."""
        return self.up + self.down

    def port(self, way: int, line: str) -> tuple[Point, tuple[Point, ...]]:
        """Where ``line`` meets the block when it leaves towards ``way`` (+1 right), and its outward directions."""
        raise NotImplementedError

    def draw(self, svg: Svg) -> None:
        """Draw at the anchor."""
        raise NotImplementedError


@dataclass
class JunctionBlock(Block):
    """A node of the network; its name is placed after the lines are drawn. ``demand`` adds an outgoing arrow;
    ``crest`` makes it the highest point of a line, which is no node and has no mark."""

    demand: bool = False
    crest: bool = False
    rows: list[Words] = field(default_factory=list)

    def __post_init__(self) -> None:
        self.left = self.right = self.up = 1.2
        self.down = 7.0 if self.demand else 1.2

    def port(self, way, line):
        return (self.x, self.y), ANYWHERE[:1] + ANYWHERE[2:] if self.demand else ANYWHERE

    def draw(self, svg):
        if self.demand:
            svg.line(self.x, self.y, self.x, self.y + 4.6, width=THIN)
            svg.polyline(
                ((self.x, self.y + 6.4), (self.x - 0.9, self.y + 4.0), (self.x + 0.9, self.y + 4.0)),
                close=True, fill=INK, width=0,
            )  # fmt: skip
        if not self.crest:
            svg.circle(self.x, self.y, NODE_RADIUS)


@dataclass
class OutletBlock(Block):
    """Free discharge: the pipe end turns down and the liquid falls."""

    rows: list[Words] = field(default_factory=list)

    def __post_init__(self) -> None:
        self.left, self.right = max(1.5, widest(self.rows) - 7.0), 7.0
        self.up, self.down = 1.6 + ROW * len(self.rows), 6.5

    def port(self, way, line):
        return (self.x - self.left, self.y), (LEFT,)

    def draw(self, svg):
        x, y = self.x, self.y
        svg.polyline(((x - self.left, y), (x + 3, y), (x + 3, y + 2.6)), width=THICK)
        svg.line(x + 1.9, y + 2.6, x + 4.1, y + 2.6)
        for shift in (-0.7, 0.0, 0.7):
            svg.line(x + 3 + shift, y + 3.2, x + 3 + shift, y + 5.9, width=HAIR, dash="0.7 0.5")
        set_rows(svg, self.rows, x + self.right, y - self.up, "end")


@dataclass
class PumpBlock(Block):
    """A pump item: its first unit on the anchor, further units under it; units that stand by are dashed."""

    way: int = 1
    units: int = 1
    running: int = 1
    duty: int = 1
    rows: list[Words] = field(default_factory=list)

    PITCH = 2 * PUMP_RADIUS + 1.6

    def __post_init__(self) -> None:
        manifold = 3.0 if self.units > 1 else 0.6
        side = max(PUMP_RADIUS + manifold, widest(self.rows) / 2)
        self.left = self.right = side
        self.up = PUMP_RADIUS + 1.0 + ROW * len(self.rows)
        self.down = PUMP_RADIUS + 0.6 + self.PITCH * (self.units - 1) + (ROW if self.word else 0.0)

    @property
    def word(self) -> str:
        """What is written under the last unit when it does not run."""
        if self.running >= self.units:
            return ""
        return "standby" if self.duty < self.units else "not running"

    def port(self, way, line):
        return (self.x + way * self.left, self.y), (RIGHT if way > 0 else LEFT,)

    def draw(self, svg):
        x, y = self.x, self.y
        header = PUMP_RADIUS + 2.2
        for side in (-1, 1):
            svg.line(x + side * PUMP_RADIUS, y, x + side * self.left, y, width=THICK)
        for unit in range(1, self.units):
            low = y + unit * self.PITCH
            dash = DASHES if unit >= self.running else ""
            for side in (-1, 1):
                svg.polyline(
                    ((x + side * header, low - self.PITCH), (x + side * header, low), (x + side * PUMP_RADIUS, low)),
                    width=THIN if dash else THICK, dash=dash,
                )  # fmt: skip
        for unit in range(self.units):
            draw_pump(svg, x, y + unit * self.PITCH, self.way, unit >= self.running)
        set_rows(svg, self.rows, x, y - self.up, "middle")
        if self.word:
            Words(self.word).set(svg, x, y + self.down - ROW / 2, "middle")


def draw_pump(svg: Svg, x: float, y: float, way: int, dashed: bool, radius: float = PUMP_RADIUS) -> None:
    """Centrifugal pump: a circle whose triangle points to the discharge; dashed when it stands by."""
    dash = "0.9 0.6" if dashed else ""
    svg.circle(x, y, radius, pen=THIN if dashed else 0.35, dash=dash)
    svg.polyline(((x, y - radius), (x + way * radius, y), (x, y + radius)), width=THIN, dash=dash)


@dataclass
class LineBlock(Block):
    """The part of a line that carries its symbols (keys of INLINE with the tag of the item), label and box.

    ``way`` is +1 when the line runs from left to right, ``flow`` the sign of the solved flow (0: none or unknown).
    """

    way: int = 1
    flow: int = 0
    symbols: list[tuple[str, str]] = field(default_factory=list)
    label: Words = field(default_factory=lambda: Words(""))
    rows: list[Words] = field(default_factory=list)

    def __post_init__(self) -> None:
        self.rows = _packed(self.rows, max(self.run, self.label.width))
        half = max(self.run, self.label.width, widest(self.rows) + 1.6) / 2
        self.left = self.right = half
        shapes = [INLINE[key] for key, _ in self.symbols]
        self._head = max([1.0, *(shape.above for shape in shapes)]) + 0.5
        self._foot = max([1.0, *(shape.below for shape in shapes)]) + 0.7
        self.tag_row = self._foot
        if any(tag for _, tag in self.symbols):
            self._foot += ROW
        self.up = self._head + ROW
        self.down = self._foot + (ROW * len(self.rows) + 0.9 if self.rows else 0.0)

    @property
    def run(self) -> float:
        """Length of pipe that the symbols and the arrow take."""
        return _ARROW + sum(self._room(item) + _GAP for item in self.symbols)

    @staticmethod
    def _room(item: tuple[str, str]) -> float:
        key, tag = item
        return max(INLINE[key].length, Words(tag).width - _GAP + 0.8 if tag else 0.0)

    def port(self, way, line):
        return (self.x + way * self.left, self.y), (RIGHT if way > 0 else LEFT,)

    def draw(self, svg):
        x, y = self.x, self.y
        svg.line(x - self.left, y, x + self.right, y, width=THICK)
        at = -self.run / 2 + _GAP / 2
        for key, tag in self.symbols:
            room = self._room((key, tag))
            middle = x + self.way * (at + room / 2)
            INLINE[key].draw(svg, middle, y, self.way)
            if tag:
                Words(tag).set(svg, middle, y + self.tag_row + ROW / 2, "middle")
            at += room + _GAP
        if self.flow:
            arrow_head(svg, x + self.way * (at + _ARROW / 2 - _GAP / 2), y, self.way * self.flow)
        self.label.set(svg, x, y - self.up + ROW / 2, "middle")
        if self.rows:
            width, height = widest(self.rows) + 1.6, ROW * len(self.rows) + 0.4
            svg.rect(x - width / 2, y + self._foot + 0.2, width, height, pen=HAIR, fill=PAPER)
            set_rows(svg, self.rows, x, y + self._foot + 0.4, "middle")


def _packed(rows: list[Words], width: float) -> list[Words]:
    """Short plain rows joined two by two where both fit into ``width``."""
    packed: list[Words] = []
    for row in rows:
        plain = bool(packed) and not packed[-1].symbol and not row.symbol
        joined = Words(f"{packed[-1].text}{NBSP * 3}{row.text}") if plain else row
        if plain and joined.width + 1.6 <= width:
            packed[-1] = joined
        else:
            packed.append(row)
    return packed
