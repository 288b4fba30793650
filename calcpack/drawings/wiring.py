"""The lines of the schematic: from node to line block to node, and the points where they part."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import pairwise

from calcpack.drawings.blocks import Block, JunctionBlock, LineBlock, PumpBlock
from calcpack.drawings.geometry import around, segment_box
from calcpack.drawings.layout import Graph, Placed
from calcpack.drawings.routes import Port, Router, stub_end
from calcpack.drawings.svg import Point
from calcpack.project.model import System

EDGE = 7.0  # mm of free space around the blocks
Leg = tuple[str, str, Port, Port]  # line, node whose lines may run together, from, to


def wire(graph: Graph, placed: Placed, system: System) -> dict[str, list[list[Point]]]:
    """For every line its legs as corner points, from its start to its end."""
    legs = [leg for line in placed.lines for leg in _legs(graph, placed, system, line)]
    blocks: Mapping[str, Block] = {**placed.nodes, **placed.lines, **placed.crests}
    points = [point for _, _, one, other in legs for port in (one, other) for point in stub_end(port)]
    area = around([block.box for block in blocks.values()]).grown(EDGE)
    router = Router(area, {block.tag: block.box for block in blocks.values()}, points)
    order = sorted(range(len(legs)), key=lambda k: (_detour(legs[k]), legs[k][0], k))
    found = dict(zip(order, router.route_all([legs[index][1:] for index in order]), strict=True))
    routes: dict[str, list[list[Point]]] = {line: [] for line in placed.lines}
    for index, leg in enumerate(legs):
        routes[leg[0]].append([(round(x, 3), round(y, 3)) for x, y in found[index]])
    return routes


def _legs(graph: Graph, placed: Placed, system: System, line: str) -> list[Leg]:
    block = placed.lines[line]
    start, end = graph.ends[line]
    first, last = (_node_port(placed, system, node, line, block) for node in (start, end))
    legs = [(line, start, first, block.port(-block.way, line))]
    crest = placed.crests.get(line)
    if crest is None:
        return [*legs, (line, end, block.port(block.way, line), last)]
    legs.append((line, crest.tag, block.port(block.way, line), crest.port(-block.way, line)))
    return [*legs, (line, end, crest.port(block.way, line), last)]


def _node_port(placed: Placed, system: System, node: str, line: str, block: LineBlock) -> Port:
    item = placed.nodes[node]
    if not isinstance(item, PumpBlock):
        return item.port(1 if block.x > item.x else -1, line)
    suction = system.pumps[node].suction
    is_suction = suction in (system.lines[line].start, system.lines[line].end)
    return item.port(-item.way if is_suction else item.way, line)


def _detour(leg: Leg) -> float:
    (x0, y0), (x1, y1) = leg[2][0], leg[3][0]
    return round(abs(y1 - y0) * 10 + abs(x1 - x0), 3)


def branch_points(graph: Graph, placed: Placed, routes: Mapping[str, list[list[Point]]]) -> list[Point]:
    """Points where lines of one node part from each other away from the node's own mark."""
    legs: dict[str, list[list[Point]]] = {}
    for line, paths in routes.items():
        for node, path in zip(graph.ends[line], (paths[0], paths[-1]), strict=True):
            legs.setdefault(node, []).append(path)
    found: list[Point] = []
    for node, paths in legs.items():
        corners = [point for path in paths for point in path]
        near: dict[Point, set[Point]] = {}
        for path in paths:
            for a, b in _pieces(path, corners):
                near.setdefault(a, set()).add(b)
                near.setdefault(b, set()).add(a)
        item = placed.nodes[node]
        own = {(item.x, item.y)} if isinstance(item, JunctionBlock) else set()
        found += [point for point, others in near.items() if len(others) > 2 and point not in own]
    return sorted(found)


def _pieces(path: list[Point], cuts: list[Point]) -> list[tuple[Point, Point]]:
    """The straight pieces of a path, cut where another path has a corner on it."""
    pieces = []
    for a, b in pairwise(path):
        strip = segment_box(a, b, 1e-6)
        on = sorted({a, b, *(c for c in cuts if strip.holds(*c))}, key=lambda p: abs(p[0] - a[0]) + abs(p[1] - a[1]))
        pieces += list(pairwise(on))
    return pieces
