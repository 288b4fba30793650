"""Pump and system curves with every duty point, over panels for efficiency, NPSH and shaft power.

All numbers are booked series and entries; see :class:`SystemCurveSpec` for what the caller lists.
"""

from __future__ import annotations

from calcpack.drawings.curve_panels import Curves, draw_lower_panels, lower_panels
from calcpack.drawings.geometry import Box
from calcpack.drawings.plot_labels import HEIGHT, PITCH, Placer, end_labels, label_width, nearest_point, track_boxes
from calcpack.drawings.plots import LINE_STYLES, Page, axis_title, set_ticks, style, symbol
from calcpack.drawings.specs import SystemCurveSpec
from calcpack.drawings.svg import BLUE, INK
from calcpack.ledger import Ledger
from calcpack.ledger.text import number_text, quantity_text, unit_of
from calcpack.quantities import KINDS

WIDTH = 170.0  # mm
LEFT, RIGHT, TOP, FOOT = 15.0, 24.0, 1.0, 10.0
KEY = 3.0  # mm under the flow axis for the key of the marks
TITLE_AT = 4.6  # mm, where the axis titles stand
HEAD_HEIGHT = 92.0
PANEL_HEIGHT, PANEL_GAP = 24.0, 3.0
ROOM_ABOVE = 0.12  # of the range shown
ROOM_BELOW = 0.5  # of the range of heads, where the axis does not begin at zero
BAND = "#ececec"
REGION = "#e3eaf1"
REGION_NAME = "preferred region"
FAR = 14.0  # mm, a curve that ends farther than this from the right edge is named at its own end
NUMBER_RADIUS = 1.75  # mm, the circle round a case number
COLUMNS = (
    ("static", symbol("H", "st")), ("flow", symbol("Q")), ("head", symbol("H")), ("efficiency", symbol("η")),
    ("power", symbol("P", "s")), ("npsha", "NPSHA"), ("npshr", "NPSHR"),
)  # fmt: skip
_FRAME = Box(LEFT, TOP, WIDTH - RIGHT, TOP + HEAD_HEIGHT)


def system_curve(ledger: Ledger, spec: SystemCurveSpec) -> str:
    """SVG text of the plot, 170 mm wide, with the duty points as numbers under the panels.

    Raises LedgerError for an id that is not booked.
    """
    with style():
        plot = _Plot(ledger, spec)
        plot.draw()
        return plot.page.svg()


class _Plot:
    def __init__(self, ledger: Ledger, spec: SystemCurveSpec) -> None:
        self.ledger, self.spec = ledger, spec
        self.curves = Curves(ledger, spec)
        self.panels = lower_panels(spec)
        self.bottom = TOP + HEAD_HEIGHT + (PANEL_HEIGHT + PANEL_GAP) * len(self.panels)
        self.rows = self._rows()
        self.page = Page(WIDTH, self.bottom + FOOT + KEY + (PITCH * len(self.rows) + 2.0 if self.rows else 0.0))
        self.axes = self.page.axes(LEFT, TOP, WIDTH - LEFT - RIGHT, HEAD_HEIGHT)
        self.texts: list[Box] = []
        self.tracks: list[Box] = []

    def draw(self) -> None:
        """Draw everything."""
        heads = [y for _, ys in self.curves.heads() for y in ys]
        self.axes.set_xlim(0.0, self.curves.flow_end)
        self.axes.set_ylim(_lowest(heads), max(heads) + ROOM_ABOVE * (max(heads) - _lowest(heads)))
        self._regions()
        ends = [*self._systems(), *self._pumps()]
        self._name_flow_lines()
        inside = [end for end in ends if end[0] < _FRAME.x1 - FAR]
        ends = [end for end in ends if end not in inside]
        set_ticks(self.page, self.axes, "y", 12)
        set_ticks(self.page, self.axes, "x", 15, drop=0.0 if self.panels else 2.4)
        head_title = axis_title(symbol("H"), KINDS["head"].display_unit(self.system))
        self.page.text(TITLE_AT, TOP + HEAD_HEIGHT / 2, head_title, anchor="center", turned=True)
        self.texts += end_labels(self.page, ends, WIDTH - RIGHT + 3.2, TOP + 1.5, TOP + HEAD_HEIGHT - 1.5)
        self._duty_points(inside)
        draw_lower_panels(self.page, self.curves, self.panels, TOP + HEAD_HEIGHT + PANEL_GAP, self._flow_lines)
        flow_title = axis_title(symbol("Q"), KINDS["flow"].display_unit(self.system))
        self.page.text(LEFT + (WIDTH - LEFT - RIGHT) / 2, self.bottom + 6.6, flow_title, anchor="center")
        self._key()
        self._table()

    @property
    def system(self) -> str:
        return self.ledger.system

    def _regions(self) -> None:
        """Preferred region as a band, minimum and best-efficiency flow as lines, each named at the top."""
        preferred = self.curves.preferred()
        if preferred:
            self.axes.axvspan(*preferred, color=REGION, linewidth=0, zorder=0.5)
            low, _ = self.page.place(self.axes, preferred[0], 0)
            width = label_width(REGION_NAME)
            self.page.text(low + 1.0, TOP + 2.2, REGION_NAME)
            self.texts.append(Box(low + 1.0, TOP + 0.9, low + 1.0 + width, TOP + 3.5))
        self._flow_lines(self.axes)

    def _name_flow_lines(self) -> None:
        """Beside each line, at its foot or its head, wherever the curves leave more room."""
        for flow, name, _ in self.curves.flow_lines():
            x, _ = self.page.place(self.axes, flow, 0)
            width = label_width(name)
            places = [Box(x - HEIGHT - 0.3, y - width, x, y) for y in (_FRAME.y1 - 1.2, _FRAME.y0 + 1.2 + width)]
            box = min(places, key=lambda place: sum(place.overlaps(other) for other in (*self.tracks, *self.texts)))
            self.page.text(x - HEIGHT / 2 - 0.3, box.y1, name, turned=True)
            self.texts.append(box)
            self.tracks += track_boxes(((x, _FRAME.y0), (x, _FRAME.y1)))

    def _flow_lines(self, axes) -> None:
        for flow, _, dash in self.curves.flow_lines():
            axes.axvline(flow, color=INK, linewidth=0.6, linestyle=dash, zorder=1.4)

    def _systems(self) -> list[tuple[float, float, str]]:
        """System curves over the band between their extremes; returns the ends for labels."""
        ends = []
        band = self.curves.band()
        if band:
            self.axes.fill_between(*band, color=BAND, linewidth=0, zorder=0.8)
        for index, case, (xs, ys) in self.curves.systems():
            dash = LINE_STYLES[index % len(LINE_STYLES)]
            self.axes.plot(xs, ys, color=INK, linewidth=0.8, linestyle=dash, zorder=2.2)
            self.axes.plot(xs[:1], ys[:1], "o", color=INK, markersize=2.2, zorder=3, clip_on=False)
            ends.append(self._track(xs, ys, f"system, case {case}"))
        return ends

    def _pumps(self) -> list[tuple[float, float, str]]:
        ends = []
        for pump in self.spec.pumps:
            for units in pump.units:
                xs, ys = self.curves.series(pump.head, units)
                self.axes.plot(xs, ys, color=BLUE, linewidth=1.5, zorder=2.6)
                points = self.curves.points(pump.head_points, units)
                self.axes.plot(*points, "o", color=BLUE, markersize=2.6, zorder=2.7, clip_on=False)
                name = f"{units} × {pump.label}" if len(pump.units) > 1 or units > 1 else pump.label
                ends.append(self._track(xs, ys, name))
        return ends

    def _track(self, xs, ys, name: str) -> tuple[float, float, str]:
        track = [self.page.place(self.axes, x, y) for x, y in zip(xs, ys, strict=True)]
        self.tracks += track_boxes(track)
        return (*track[-1], name)

    def _duty_points(self, named_ends: list[tuple[float, float, str]]) -> None:
        placer = Placer(_FRAME, self.texts, self.tracks)
        points = [(*self._at(case.flow, case.head), case.case) for case in self.spec.cases if case.flow and case.head]
        placer.texts += [Box(x, y, x, y).grown(0.8) for x, y, _ in points]
        if self.spec.required:
            x, y = self._at(*self.spec.required)
            self._marker(self.spec.required, "D", 5.0, "none")
            text = "required " + ", ".join(quantity_text(self.ledger[one], unit_of(self.ledger[one], self.system))
                                           for one in self.spec.required)  # fmt: skip
            box = placer.near(x, y, label_width(text), closest=5.0)
            self._lead(x, y, box, 1.3)
            self.page.text((box.x0 + box.x1) / 2, (box.y0 + box.y1) / 2, text, anchor="center")
        for x, y, name in named_ends:
            box = placer.near(x, y, label_width(name), closest=2.0)
            self.page.text((box.x0 + box.x1) / 2, (box.y0 + box.y1) / 2, name, anchor="center")
        for x, y, name in sorted(points):
            size = max(2 * NUMBER_RADIUS, label_width(name) + 1.2)
            box = placer.near(x, y, size, 2 * NUMBER_RADIUS, closest=5.0)
            self._lead(x, y, box, 0.0)
            self.page.disc((box.x0 + box.x1) / 2, (box.y0 + box.y1) / 2, size, 2 * NUMBER_RADIUS)
            self.page.text((box.x0 + box.x1) / 2, (box.y0 + box.y1) / 2, name, anchor="center")
        for case in self.spec.cases:
            if case.flow and case.head:
                self._marker((case.flow, case.head), "o", 3.4, INK)
        self.texts = placer.texts
        self.tracks += [segment for leader in placer.leaders for segment in track_boxes(leader, 0.3)]

    def _key(self) -> None:
        """The marks under the flow axis, those that are used."""
        duties = [case for case in self.spec.cases if case.flow]
        marks = [
            ("o", 3.4, INK, "duty point, with its case", bool(duties)),
            ("s", 3.2, "none", "NPSHA at the duty", any(case.npsha for case in duties) and len(self.panels) > 0),
            ("D", 5.0, "none", "required point", self.spec.required is not None),
            ("o", 2.6, BLUE, "point of the maker's curve", any(pump.head_points for pump in self.spec.pumps)),
        ]
        x, y = LEFT, self.bottom + FOOT + 0.6
        for shape, size, fill, text, used in marks:
            if used:
                self.page.mark(x, y, shape, size, fill)
                self.page.text(x + 2.0, y, text)
                x += label_width(text) + 7.0
        if self.axes.get_ylim()[0] > 0.0:
            self.page.text(WIDTH - RIGHT, self.bottom + 6.6, "The head axis does not begin at zero.", anchor="right")

    def _lead(self, x: float, y: float, box: Box, off: float) -> None:
        end = nearest_point(box=box, x=x, y=y)
        length = max(((end[0] - x) ** 2 + (end[1] - y) ** 2) ** 0.5, 1e-9)
        share = off / length
        self.page.line((x + share * (end[0] - x), end[0]), (y + share * (end[1] - y), end[1]), 0.35)

    def _at(self, flow: str, head: str) -> tuple[float, float]:
        return self.page.place(self.axes, self.curves.shown(flow), self.curves.shown(head))

    def _marker(self, pair, shape: str, size: float, fill: str) -> None:
        x, y = (self.curves.shown(one) for one in pair)
        self.axes.plot([x], [y], shape, markersize=size, markerfacecolor=fill, markeredgecolor=INK, markeredgewidth=0.8,
                       zorder=5)  # fmt: skip

    def _table(self) -> None:
        """Duty points as numbers under the panels."""
        widths = [max(map(label_width, column)) + 4.0 for column in zip(*self.rows, strict=True)]
        top = self.bottom + FOOT + KEY
        for index, row in enumerate(self.rows):
            y, right = top + PITCH * (index + 0.5), LEFT
            for text, width in zip(row, widths, strict=True):
                right += width
                self.page.text(right - 2.0, y, text, anchor="right")
        if self.rows:
            self.page.line((LEFT, LEFT + sum(widths)), (top + PITCH,) * 2, 0.5)

    def _rows(self) -> list[list[str]]:
        duties = [case for case in self.spec.cases if case.flow and case.head]
        columns = [("case", [case.case for case in duties])]
        for attribute, name in COLUMNS:
            ids = [getattr(case, attribute) for case in duties]
            if not any(ids):
                continue
            unit = unit_of(self.ledger[next(filter(None, ids))], self.system)
            cells = [number_text(self.ledger[one], unit) if one else "" for one in ids]
            columns.append((axis_title(name, unit), cells))
        if not duties:
            return []
        return [[head for head, _ in columns], *map(list, zip(*(cells for _, cells in columns), strict=True))]


def _lowest(heads: list[float]) -> float:
    """Where the head axis begins: at zero, or higher where that would leave half of the panel empty."""
    low, high = min(heads), max(heads)
    start = low - ROOM_BELOW * (high - low)
    return start if start > 0.25 * high else min(0.0, low)
