"""Where things stand on the schematic: columns by graph distance from the sources, height by elevation.

Nodes keep their elevation. Pumps side by side at one shaft elevation are drawn one under another, the first at its
elevation; other nodes that would cover each other move apart sideways. Line blocks go wherever their column has room,
in line with one of their ends if they can.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from itertools import pairwise

from calcpack.drawings.blocks import Block, JunctionBlock, LineBlock, PumpBlock
from calcpack.drawings.geometry import nearest_slot
from calcpack.project.model import TANK, System

ROOM = 1.6  # mm between two blocks of a column
NAME_ROOM = 6.0  # mm between two nodes of a column, for the name of one
CHANNEL = 3.4  # mm between two columns, for one riser
RISER = 2.0  # mm more for each further riser


@dataclass
class Graph:
    """Items (tanks, outlets, junctions, pumps) by tag and, for each line, the items at its ends."""

    items: tuple[str, ...]
    ends: dict[str, tuple[str, str]]
    column: dict[str, float] = field(default_factory=dict)  # item -> column

    def line_column(self, line: str) -> float:
        """Column of a line's block: half a step right of its nearer end."""
        start, end = self.ends[line]
        return min(self.column[start], self.column[end]) + 0.5

    def way(self, line: str) -> int:
        """+1 when the line runs to the right (or turns within a column), -1 to the left."""
        start, end = self.ends[line]
        return 1 if self.column[start] <= self.column[end] else -1

    def lines_of(self, item: str) -> list[str]:
        """Lines that end at the item, by tag."""
        return sorted(line for line, ends in self.ends.items() if item in ends)


def graph_of(system: System, hints: Mapping[str, float]) -> Graph:
    """The graph of a system with its columns. ``hints`` overrule the computed column of an item."""
    ports = {port: pump.tag for pump in system.pumps.values() for port in (pump.suction, pump.discharge)}
    items = tuple(dict.fromkeys(ports.get(tag, tag) for tag in system.nodes))
    lines = system.lines.values()
    ends = {line.tag: (ports.get(line.start, line.start), ports.get(line.end, line.end)) for line in lines}
    graph = Graph(items, ends)
    starts = {start for start, _ in ends.values()}
    fed = {end for _, end in ends.values()}
    tanks = [tag for tag in items if tag in system.nodes and system.nodes[tag].kind == TANK]
    sources = [tag for tag in tanks if tag in starts and tag not in fed] or tanks or list(items[:1])
    neighbours: dict[str, set[str]] = {tag: set() for tag in items}
    for start, end in ends.values():
        neighbours[start].add(end)
        neighbours[end].add(start)
    distance: dict[str, float] = {}
    for seeds in (sources, items):  # the second pass takes up what no source reaches
        frontier = [tag for tag in seeds if tag not in distance]
        distance |= dict.fromkeys(frontier, 0.0)
        while frontier:
            reached = sorted({near for tag in frontier for near in neighbours[tag]} - set(distance))
            distance |= dict.fromkeys(reached, distance[frontier[0]] + 1)
            frontier = reached
    graph.column = {tag: float(hints.get(tag, distance[tag])) for tag in items}
    return graph


@dataclass
class Placed:
    """Blocks with their places; ``stacked`` maps a pump to the pump under whose elevation it is drawn. ``crowded``
    counts nodes that had to move sideways although their elevations differ."""

    nodes: dict[str, Block]
    lines: dict[str, LineBlock]
    crests: dict[str, Block]  # by line
    stacked: dict[str, str]
    crowded: int
    width: float


def place(
    graph: Graph, nodes: dict[str, Block], lines: dict[str, LineBlock], crests: dict[str, Block], wanted_width: float
) -> Placed:
    """Give every block its place; the y of node and crest blocks is already their elevation."""
    stacked = _stack_pumps(graph, nodes, lines)
    sub_columns, crowded = _spread_sideways(graph, nodes)
    _place_lines(graph, nodes, lines)
    columns: dict[tuple[float, int], list[Block]] = {}
    for tag, block in nodes.items():
        columns.setdefault((graph.column[tag], sub_columns[tag]), []).append(block)
    for tag, block in lines.items():
        columns.setdefault((graph.line_column(tag), 0), []).append(block)
    for tag, block in crests.items():
        columns.setdefault((graph.line_column(tag) + 0.25 * graph.way(tag), 0), []).append(block)
    width = _place_columns(graph, nodes, lines, columns, wanted_width)
    return Placed(nodes, lines, crests, stacked, crowded, width)


def _stack_pumps(graph: Graph, nodes: dict[str, Block], lines: dict[str, LineBlock]) -> dict[str, str]:
    stacked: dict[str, str] = {}
    first: dict[tuple[float, float], str] = {}
    low: dict[str, float] = {}
    for tag in sorted(tag for tag in graph.items if isinstance(nodes[tag], PumpBlock)):
        block = nodes[tag]
        own = [block, *(lines[line] for line in graph.lines_of(tag))]
        up, down = max(one.up for one in own), max(one.down for one in own)
        key = (graph.column[tag], round(block.y, 3))
        if key in first:
            leader = first[key]
            block.y = low[leader] + ROOM + up
            stacked[tag] = leader
        else:
            leader = first[key] = tag
        low[leader] = block.y + down
    return stacked


def _spread_sideways(graph: Graph, nodes: dict[str, Block]) -> tuple[dict[str, int], int]:
    sub: dict[str, int] = {}
    crowded = 0
    for column in sorted(set(graph.column.values())):
        filled: list[list[Block]] = []
        for tag in sorted((tag for tag in graph.items if graph.column[tag] == column), key=lambda t: (-nodes[t].y, t)):
            block = nodes[tag]
            clear = (index for index, others in enumerate(filled) if not any(_clash(block, one) for one in others))
            sub[tag] = next(clear, len(filled))
            if sub[tag]:
                crowded += any(abs(block.y - one.y) > 1e-6 for others in filled for one in others if _clash(block, one))
            if sub[tag] == len(filled):
                filled.append([])
            filled[sub[tag]].append(block)
    return sub, crowded


def _clash(one: Block, other: Block) -> bool:
    room = NAME_ROOM if isinstance(one, JunctionBlock) and isinstance(other, JunctionBlock) else ROOM
    return one.y - one.up < other.y + other.down + room and other.y - other.up < one.y + one.down + room


def _place_lines(graph: Graph, nodes: dict[str, Block], lines: dict[str, LineBlock]) -> None:
    """Lines at pumps first, level with the pump; then the rest, each level with one of its ends if there is room."""
    taken: dict[float, list[tuple[float, float]]] = {}

    def at_pump(tag: str) -> bool:
        return any(isinstance(nodes[end], PumpBlock) for end in graph.ends[tag])

    for tag in sorted(lines, key=lambda t: (not at_pump(t), t)):
        block = lines[tag]
        ends = graph.ends[tag]
        pumps = [end for end in ends if isinstance(nodes[end], PumpBlock)]
        busy = taken.setdefault(graph.line_column(tag), [])
        options = []
        for end in pumps or ends:
            wanted = nodes[end].y
            y = nearest_slot(wanted, block.up, block.down, busy, ROOM)
            options.append((round(abs(y - wanted), 3), y))
        block.y = min(options)[1]
        busy.append((block.y - block.up, block.y + block.down))


def _place_columns(
    graph: Graph, nodes: dict[str, Block], lines: dict[str, LineBlock],
    columns: dict[tuple[float, int], list[Block]], wanted_width: float,
) -> float:
    order = sorted(columns)
    gaps = [_gap(graph, nodes, lines, left, right) for left, right in pairwise(order)]
    halves = [(max(b.left for b in columns[key]), max(b.right for b in columns[key])) for key in order]
    needed = sum(left + right for left, right in halves) + sum(gaps)
    spare = max(wanted_width - needed, 0.0) / len(gaps) if gaps else 0.0
    x = 0.0
    for index, key in enumerate(order):
        left, right = halves[index]
        for block in columns[key]:
            if isinstance(block, (LineBlock, PumpBlock)):  # ports in line, so that risers share a lane
                block.left, block.right = left, right
            block.x = round(x + left, 3)
            block.y = round(block.y, 3)
        x += left + right + (gaps[index] + spare if index < len(gaps) else 0.0)
    return max(needed, wanted_width if gaps else needed)


def _gap(graph: Graph, nodes: dict[str, Block], lines: dict[str, LineBlock], left: tuple, right: tuple) -> float:
    """Room between two columns: one channel, and more for every node whose lines need a riser of their own there."""
    risers = set()
    for tag, block in lines.items():
        for end in graph.ends[tag]:
            pair = sorted((graph.column[end], graph.line_column(tag)))
            if pair[0] <= left[0] and right[0] <= pair[1] and abs(nodes[end].y - block.y) > 0.3:
                risers.add(end)
    return CHANNEL + RISER * max(len(risers) - 1, 0)
