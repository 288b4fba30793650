"""Grade lines along a path: pipe axis, hydraulic and energy grade, levels, and the limits on both sides."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from calcpack.drawings.free_space import free_rectangle
from calcpack.drawings.geometry import Box
from calcpack.drawings.plot_labels import HEIGHT, PITCH, Placer, end_labels, label_width, nearest_point, track_boxes
from calcpack.drawings.plots import LINE_STYLES, Page, axis_title, set_ticks, style, symbol
from calcpack.drawings.specs import GradeLineSpec
from calcpack.drawings.svg import BLUE, GREY, INK
from calcpack.ledger import Ledger
from calcpack.ledger.text import display_text
from calcpack.quantities import KINDS

if TYPE_CHECKING:
    from matplotlib.axes import Axes

WIDTH = 170.0  # mm
LEFT, RIGHT, TOP, HEIGHT_OF_AXES, FOOT = 15.0, 33.0, 5.0, 104.0, 9.0
ROOM = 0.06  # of the range of elevations, above and below
TITLE_AT = 4.6  # mm
CLOSE = 4.0  # mm between grade and axis, under which the lowest point is drawn once more, enlarged
ENLARGED = ((48.0, 28.0), (40.0, 24.0), (34.0, 20.0))  # mm, in order of liking
MARGINS = (13.0, 8.0)  # mm, for the ticks and the name of the enlarged part
SAME = 0.6  # mm between the two grade lines, under which a note says that they coincide
FAR_ABOVE = 0.6  # of the range of everything else, from which the rating line gets a piece of the axis to itself
UPPER, BREAK = 14.0, 2.4  # mm: height of that piece, and the break under it


@dataclass(frozen=True)
class _Curve:
    """A line of the plot: attribute of the spec, its name, and how it is drawn."""

    series: str
    name: str
    width: float
    dash: object
    colour: str = INK


_CURVES = (
    _Curve("rating", "pipe rating", 0.8, LINE_STYLES[2]),
    _Curve("energy", "energy grade line", 0.7, LINE_STYLES[1], BLUE),
    _Curve("hydraulic", "hydraulic grade line", 1.3, "solid", BLUE),
    _Curve("standstill", "grade, pump stopped", 0.8, LINE_STYLES[4], GREY),
    _Curve("axis", "pipe axis", 1.6, "solid"),
    _Curve("vapour", "vapour limit", 0.8, LINE_STYLES[3]),
)


def grade_line(ledger: Ledger, spec: GradeLineSpec) -> str:
    """SVG text of the profile, 170 mm wide; see :class:`GradeLineSpec`. Raises LedgerError for an unknown id."""
    with style():
        return _Profile(ledger, spec).svg()


class _Profile:
    def __init__(self, ledger: Ledger, spec: GradeLineSpec) -> None:
        self.ledger, self.spec = ledger, spec
        self.across = KINDS["length"].display_unit(ledger.system)
        self.up = KINDS["elevation"].display_unit(ledger.system)
        self.page = Page(WIDTH, TOP + HEIGHT_OF_AXES + FOOT)
        drawn = [(curve, getattr(spec, curve.series)) for curve in _CURVES if getattr(spec, curve.series)]
        self.lines = [(curve, *self._series(entry_id)) for curve, entry_id in drawn]
        self.every = [y for curve, _, ys in self.lines if curve.series != "rating" for y in ys]
        self.every += [self.up.from_si(ledger[level.level].value) for level in spec.levels]
        cut = self._cut()
        self.frame = Box(LEFT, TOP + cut, WIDTH - RIGHT, TOP + HEIGHT_OF_AXES)
        self.axes = self._axes(self.frame)
        self.upper = self._axes(Box(LEFT, TOP, WIDTH - RIGHT, TOP + cut - BREAK)) if cut else None

    def _axes(self, frame: Box) -> Axes:
        return self.page.axes(frame.x0, frame.y0, frame.x1 - frame.x0, frame.y1 - frame.y0)

    def _cut(self) -> float:
        """Height (mm) to set apart for a rating line that lies far above everything else; else 0 and it joins in."""
        rating = self._rating()
        if rating and min(rating) - max(self.every) > FAR_ABOVE * (max(self.every) - min(self.every)):
            return UPPER + BREAK
        self.every += rating
        return 0.0

    def _rating(self) -> list[float]:
        return [y for curve, _, ys in self.lines if curve.series == "rating" for y in ys]

    def _series(self, entry_id: str) -> tuple[list[float], list[float]]:
        points = self.ledger[entry_id].points
        return [self.across.from_si(x) for x, _ in points], [self.up.from_si(y) for _, y in points]

    def svg(self) -> str:
        spec = self.spec
        self._scales()
        tracks, ends = [], []
        for curve, xs, ys in self.lines:
            axes = self.upper if self.upper and curve.series == "rating" else self.axes
            axes.plot(xs, ys, color=curve.colour, linewidth=curve.width, linestyle=curve.dash, zorder=3)
            track = [self.page.place(axes, x, y) for x, y in zip(xs, ys, strict=True)]
            tracks += track_boxes(track)
            ends.append((*track[-1], curve.name))
        texts = end_labels(self.page, ends, WIDTH - RIGHT + 3.2, TOP + 1.5, TOP + HEIGHT_OF_AXES - 1.5)
        self._marks(Placer(self.frame, texts, tracks))
        self.page.text(LEFT, 2.0, spec.title)
        middle = TOP + HEIGHT_OF_AXES / 2
        self.page.text(TITLE_AT, middle, axis_title(symbol("z"), self.up), anchor="center", turned=True)
        title = axis_title("chainage", self.across)
        self.page.text((LEFT + WIDTH - RIGHT) / 2, TOP + HEIGHT_OF_AXES + 6.6, title, anchor="center")
        if spec.energy and self._grades_apart() < SAME:
            note = "Energy and hydraulic grade coincide at this scale."
            self.page.text(WIDTH - RIGHT, 2.0, note, anchor="right")
        return self.page.svg()

    def _scales(self) -> None:
        """Limits and ticks; a rating line set apart gets its own piece of the elevation axis."""
        end = max(xs[-1] for _, xs, _ in self.lines)
        pieces = [(self.axes, self.every, 12)] + ([(self.upper, self._rating(), 3)] if self.upper else [])
        for axes, heights, most in pieces:
            room = ROOM * max(max(heights) - min(heights), 1.0)
            axes.set_xlim(-0.01 * end, end * 1.01)
            axes.set_ylim(min(heights) - room, max(heights) + room)
            set_ticks(self.page, axes, "y", most)
            set_ticks(self.page, axes, "x", 10, drop=2.4 if axes is self.axes else 0.0)
        if self.upper:
            for y in (self.frame.y0 - BREAK, self.frame.y0):
                self.page.line((LEFT - 1.2, LEFT + 1.2), (y + 0.6, y - 0.6), 0.6)

    def _grades_apart(self) -> float:
        """Greatest distance (mm) between the two grade lines."""
        (_, energy), (_, hydraulic) = self._series(self.spec.energy), self._series(self.spec.hydraulic)
        scale = (self.frame.y1 - self.frame.y0) / (self.axes.get_ylim()[1] - self.axes.get_ylim()[0])
        return max((abs(a - b) for a, b in zip(energy, hydraulic, strict=False)), default=0.0) * scale

    def _at(self, x: float, y: float) -> tuple[float, float]:
        return self.page.place(self.axes, x, y)

    def _marks(self, placer: Placer) -> None:
        """Levels, the pump and the lowest pressure, each named where there is room."""
        for level in self.spec.levels:
            x, y = self._at(self.across.from_si(level.at), self.up.from_si(self.ledger[level.level].value))
            self.page.mark(x, y - 0.9, "v", 4.0, "none")
            self._name(placer, x, y, [f"{level.tag} {display_text(self.ledger[level.level], self.ledger.system)}"])
        if self.spec.pump_at is not None:
            at = self.across.from_si(self.spec.pump_at)
            x, y = self._at(at, self._on("axis", self.spec.pump_at))
            self.page.mark(x, y, "o", 5.0, "none")
            self._name(placer, x, y, [self.spec.pump])
        if self.spec.lowest_at is not None:
            at = self.across.from_si(self.spec.lowest_at)
            x, y = self._at(at, self._on("hydraulic", self.spec.lowest_at))
            self.page.mark(x, y, "D", 4.5, "none")
            entries = [self.ledger[one] for one in self.spec.lowest]
            values = [f"{entry.title} {display_text(entry, self.ledger.system)}" for entry in entries]
            self._name(placer, x, y, ["lowest pressure", *values])
            if self._gap_at(self.spec.lowest_at) < CLOSE:
                self._enlarged(placer, self.spec.lowest_at)

    def _gap_at(self, at: float) -> float:
        """Distance on paper (mm) between hydraulic grade and pipe axis at a chainage."""
        _, grade = self._at(0.0, self._on("hydraulic", at))
        _, axis = self._at(0.0, self._on("axis", at))
        return abs(axis - grade)

    def _enlarged(self, placer: Placer, at: float) -> None:
        """The surroundings of the lowest pressure once more, where there is room, at a scale that shows the margin."""
        sizes = [(width + MARGINS[0], height + MARGINS[1]) for width, height in ENLARGED]
        room = free_rectangle(sizes, [*placer.texts, *placer.curves], self.frame.grown(-1.0), 1.2)
        if room is None:
            return
        axes = self.page.axes(
            room.x0 + 11.0, room.y0 + 3.8, room.x1 - room.x0 - MARGINS[0], room.y1 - room.y0 - MARGINS[1]
        )
        axes.set_zorder(5)
        middle, grade = self.across.from_si(at), self._on("hydraulic", at)
        margin = max(abs(grade - self._on("axis", at)), 1e-3)
        reach = 0.06 * (self.axes.get_xlim()[1] - self.axes.get_xlim()[0])
        axes.set_xlim(middle - reach, middle + reach)
        axes.set_ylim(grade - 3.5 * margin, grade + 2.5 * margin)
        for curve, xs, ys in self.lines:
            axes.plot(xs, ys, color=curve.colour, linewidth=curve.width, linestyle=curve.dash, zorder=3)
        axes.plot([middle], [grade], "D", markersize=4.5, markerfacecolor="none", markeredgecolor=INK,
                  markeredgewidth=0.8, zorder=4)  # fmt: skip
        set_ticks(self.page, axes, "y", 5)
        set_ticks(self.page, axes, "x", 4, drop=2.2)
        self.page.text(room.x0 + 11.0, room.y0 + 1.6, "lowest pressure, enlarged")

    def _on(self, series: str, at: float) -> float:
        """Height of a line at a chainage in m (the later of two points at one chainage)."""
        import numpy as np

        xs, ys = self._series(getattr(self.spec, series))
        return float(np.interp(self.across.from_si(at), xs, ys))

    def _name(self, placer: Placer, x: float, y: float, rows: list[str]) -> None:
        width = max(map(label_width, rows))
        height = HEIGHT + PITCH * (len(rows) - 1)
        box = placer.near(x, y, width, height, closest=4.0)
        end = nearest_point(box=box, x=x, y=y)
        self.page.line((x, end[0]), (y, end[1]), 0.35)
        for index, row in enumerate(rows):
            self.page.text(box.x0, box.y0 + HEIGHT / 2 + PITCH * index, row)
