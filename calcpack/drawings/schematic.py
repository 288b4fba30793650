"""The flow schematic, drawn from the model: elevation to scale, one case's flows, a legend of the symbols used.

``schematic(project, ledger, labels)`` takes the frozen model for what exists and how it connects, and the ledger for
every number that is written.
"""

from __future__ import annotations

import math
from itertools import pairwise

from calcpack.drawings.blocks import BRANCH_RADIUS, NODE_RADIUS, Block, JunctionBlock
from calcpack.drawings.elevation_scale import ElevationScale
from calcpack.drawings.free_space import free_rectangle, leader_end, name_place
from calcpack.drawings.geometry import Box, around, segment_box
from calcpack.drawings.items import Items
from calcpack.drawings.layout import Graph, Placed, graph_of, place
from calcpack.drawings.legend import draw_legend, legend_entries, legend_size
from calcpack.drawings.schematic_labels import SchematicLabels
from calcpack.drawings.svg import BLUE, GREY, HAIR, INK, PALE, THICK, Point, Svg
from calcpack.drawings.ticks import round_ticks, tick_texts
from calcpack.drawings.wiring import branch_points, wire
from calcpack.drawings.words import ROW, TEXT_SIZE, Words, set_rows, widest, wrapped
from calcpack.ledger import Ledger
from calcpack.project.model import Project
from calcpack.quantities import KINDS

WIDTH = 170.0  # mm, between the margins of an A4 sheet
AXIS = 15.0  # mm for the elevation axis
HEIGHTS = (62.0, 70.0, 76.0, 82.0, 90.0, 96.0, 102.0, 108.0, 114.0, 120.0)  # mm of elevation axis to choose from
MARGIN = 1.0
TICK_PITCH = 6.5  # mm, ticks of the axis are at least so far apart
LEADER_FROM = 2.8  # mm, a name farther than this from its node gets a leader
LEGEND_COLUMNS = (4, 3, 2, 5, 1)  # inside the drawing, in order of liking


def schematic(project: Project, ledger: Ledger, labels: SchematicLabels) -> str:
    """SVG text of the flow schematic for the case ``labels.case_id``; see :class:`SchematicLabels`.

    The drawing is 170 mm wide; a system that needs more room gets a wider one, with text at the same size. Raises
    KeyError for an unknown case and LedgerError for an entry id that is not booked.
    """
    graph = graph_of(project.case(labels.case_id).system, labels.columns)
    placed, scale = _fitted(project, ledger, labels, graph)
    return _Drawing(project, labels, graph, placed, scale).svg()


def _fitted(
    project: Project, ledger: Ledger, labels: SchematicLabels, graph: Graph
) -> tuple[Placed, ElevationScale]:
    """The axis on which least has to give way (nodes aside, parts stretched, lines off the elevation of their ends),
    not taller than that is worth."""
    tried = []
    for height in HEIGHTS:
        items = Items(project, ledger, labels, graph, height)
        placed = place(graph, items.node_blocks(), items.line_blocks(), items.crest_blocks(), WIDTH - AXIS - 2 * MARGIN)
        trouble = 30.0 * placed.crowded + 12.0 * len(items.scale.stretched) + 2.0 * _astray(graph, placed)
        tried.append((trouble + height / 2, placed, items.scale))
    _, placed, scale = min(tried, key=lambda one: one[0])
    return placed, scale


def _astray(graph: Graph, placed: Placed) -> float:
    """How far lines lie from the elevation of the nearer of their ends, all together (mm)."""
    return sum(
        min(abs(block.y - placed.nodes[end].y) for end in graph.ends[tag]) for tag, block in placed.lines.items()
    )


class _Drawing:
    """One schematic on its way from placed blocks to SVG."""

    def __init__(
        self, project: Project, labels: SchematicLabels, graph: Graph, placed: Placed, scale: ElevationScale
    ) -> None:
        self.project, self.placed, self.scale = project, placed, scale
        self.case = project.case(labels.case_id)
        self.unit = KINDS["elevation"].display_unit(project.units)
        self.blocks: list[Block] = [*placed.nodes.values(), *placed.lines.values(), *placed.crests.values()]
        self.routes = wire(graph, placed, self.case.system)
        self.tees = branch_points(graph, placed, self.routes)
        self.written = [block.box for block in self.blocks]
        self.drawn = [
            segment_box(a, b, THICK / 2)
            for paths in self.routes.values() for points in paths for a, b in pairwise(points)
        ]  # fmt: skip

    def svg(self) -> str:
        """The whole sheet: axis, lines, items, names, legend, notes."""
        svg = Svg()
        axis = Box(-3.0, self.scale.y(self.scale.high), self.placed.width, self.scale.y(self.scale.low))
        names = self._names(axis)
        frame = around([axis, *self.written, *self.drawn])
        right = frame.x1
        with svg.group("axis", "elevation"):
            self._axis(svg, frame)
        self._items(svg, names)
        entries = legend_entries(self.blocks, self.tees)
        sizes = [legend_size(entries, columns) for columns in LEGEND_COLUMNS if columns <= len(entries)]
        inside = free_rectangle(sizes, [*self.written, *self.drawn], Box(0.0, frame.y0, frame.x1, frame.y1), 3.0)
        bottom = frame.y1 + 2.0
        if inside:
            svg.rect(inside.x0, inside.y0, inside.x1 - inside.x0, inside.y1 - inside.y0, pen=HAIR)
            draw_legend(svg, entries, inside)
        else:
            columns = max(n for n in range(1, len(entries) + 1) if legend_size(entries, n)[0] <= right + AXIS or n == 1)
            width, height = legend_size(entries, columns)
            draw_legend(svg, entries, Box(-AXIS, bottom, -AXIS + width, bottom + height))
            bottom += height + 1.0
        svg.line(-AXIS, bottom, right, bottom, width=HAIR, colour=GREY)
        rows = [row for text in self._notes() for row in wrapped(text, right + AXIS)]
        set_rows(svg, rows, -AXIS, bottom + 0.8)
        bottom += 0.8 + ROW * len(rows)
        top = frame.y0 - ROW - 2.0
        title = Words(f"Flow and velocity: case {self.case.id}, {self.case.title}", bold=True)
        title.set(svg, -AXIS, top + ROW / 2)
        left = -AXIS - MARGIN
        return svg.document(left, top - MARGIN, right + MARGIN - left, bottom - top + 2 * MARGIN)

    def _items(self, svg: Svg, names: list[tuple[Box, list[Words], Point]]) -> None:
        for box in (*(block.box for block in self.blocks), *(box for box, _, _ in names)):
            svg.rect(box.x0, box.y0, box.x1 - box.x0, box.y1 - box.y0, pen=0)  # the grid stops at what is written
        for line, paths in self.routes.items():
            with svg.group("route", line):
                for points in paths:
                    svg.polyline(points, width=THICK)
        for point in self.tees:
            svg.circle(*point, BRANCH_RADIUS, pen=0, fill=INK)
        for block in self.blocks:
            with svg.group("item", block.tag):
                block.draw(svg)
        for box, rows, (x, y) in names:
            end = leader_end(x, y, box)
            length = math.dist((x, y), end)
            if length > LEADER_FROM:
                share = NODE_RADIUS / length
                svg.line(x + share * (end[0] - x), y + share * (end[1] - y), *end, width=HAIR)
            set_rows(svg, rows, box.x0, box.y0)

    def _axis(self, svg: Svg, frame: Box) -> None:
        x = -3.0
        top, foot = self.scale.y(self.scale.high), self.scale.y(self.scale.low)
        low, high = self.unit.from_si(self.scale.low), self.unit.from_si(self.scale.high)
        ticks = round_ticks(low, high, max(int((foot - top) / TICK_PITCH), 3))
        for tick, text in zip(ticks, tick_texts(ticks), strict=True):
            y = self.scale.y(self.unit.to_si(tick))
            svg.line(x, y, frame.x1, y, width=HAIR, colour=PALE)
            svg.line(x - 1.2, y, x, y)
            Words(text).set(svg, x - 1.8, y, "end")
        svg.line(x, top, x, foot)
        for a, b in self.scale.stretched:
            svg.line(x, self.scale.y(a), x, self.scale.y(b), width=1.1, colour=BLUE)
        title = f"Elevation / {self.unit.text}"
        if not self._datum_note():
            title += f" (datum: {self.project.system.site.datum})"
        svg.text(-AXIS + 1.9, (top + foot) / 2, title, TEXT_SIZE, anchor="middle", turned=True)

    def _datum_note(self) -> str:
        """The datum as a note, when its name is too long for the axis."""
        text = f"Elevation / {self.unit.text} (datum: {self.project.system.site.datum})"
        length = self.scale.y(self.scale.low) - self.scale.y(self.scale.high)
        return f"Datum of elevations: {self.project.system.site.datum}." if Words(text).width > length else ""

    def _names(self, frame: Box) -> list[tuple[Box, list[Words], Point]]:
        """Names of junctions and crests: (place, rows, the point they belong to)."""
        names = []
        for block in self.blocks:
            if isinstance(block, JunctionBlock) and block.rows:
                width, height = widest(block.rows), ROW * len(block.rows)
                box = name_place(block.x, block.y, width, height, self.written, self.drawn, frame)
                names.append((box, block.rows, (block.x, block.y)))
                self.written.append(box)
        return names

    def _notes(self) -> list[str]:
        notes = ["Elevation to scale, chainage not to scale. Bends, entrances and exits are not drawn."]
        if self.scale.stretched:
            notes[0] += " The heavy part of the axis is stretched so that the levels there can be told apart."
        if self._datum_note():
            notes[0] += f" {self._datum_note()}"
        if self.placed.stacked:
            stacked = ", ".join(sorted(self.placed.stacked))
            leaders = ", ".join(sorted(set(self.placed.stacked.values())))
            notes.append(f"{stacked}: at the shaft elevation of {leaders}, drawn below it.")
        return notes
