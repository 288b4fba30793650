"""Orthogonal routes for the lines between blocks: short, with few bends, around everything that stands in the way."""

from __future__ import annotations

import heapq
from bisect import bisect_left
from collections.abc import Iterable, Mapping, Sequence
from itertools import pairwise

from calcpack.drawings.blocks import ANYWHERE
from calcpack.drawings.geometry import Box
from calcpack.drawings.svg import Point

PITCH = 2.0  # mm between neighbouring lanes
STUB = 1.0  # mm straight out of a port
CLEAR = 0.9  # mm kept to every block
BEND = 6.0  # costs in mm of detour
CROSSING = 14.0
BESIDE = 3.0  # per mm on a foreign line or closer to it than APART
APART = 1.4  # mm
BLOCKED = 400.0  # per step through a block: only when there is no other way
RISER_AGAIN = 0.8  # per mm on a vertical lane that the same node uses elsewhere
SHARED = 0.4  # per mm along a line of the same node: they leave it as one header

PASSES = 2
_NOBODY: tuple[str, ...] = ()

Port = tuple[Point, tuple[Point, ...]]


class Router:
    """Routes on lanes through the free space of a drawing; every route found is minded by the later ones."""

    def __init__(self, area: Box, obstacles: Mapping[str, Box], ports: Iterable[Point]) -> None:
        points = list(ports)
        self.xs = _lanes(area.x0, area.x1, [x for x, _ in points])
        self.ys = _lanes(area.y0, area.y1, [y for _, y in points])
        self._near = (_neighbours(self.xs), _neighbours(self.ys))
        self._blocked: dict[tuple[int, int], set[str]] = {}
        for tag, box in obstacles.items():
            grown = box.grown(CLEAR)
            for i in range(bisect_left(self.xs, grown.x0), len(self.xs)):
                if self.xs[i] > grown.x1:
                    break
                for j in range(bisect_left(self.ys, grown.y0), len(self.ys)):
                    if self.ys[j] > grown.y1:
                        break
                    if grown.holds(self.xs[i], self.ys[j]):
                        self._blocked.setdefault((i, j), set()).add(tag)
        self._risers: dict[tuple[str, int], int] = {}  # (node, vertical lane) -> steps of the node on it
        self._used: dict[tuple, list[str]] = {}  # undirected step -> nodes whose legs run there, one each
        self._passed: dict[tuple[int, int], list[str]] = {}

    def route_all(self, legs: Sequence[tuple[str, Port, Port]]) -> list[list[Point]]:
        """Corner points of every leg (node, start, goal); legs of one node may run together.

        Legs are routed in turn, then each once more among all the others: an early one may stand in the way.
        """
        cells = [self._route(start, goal, node) for node, start, goal in legs]
        for _ in range(PASSES):
            for index, (node, start, goal) in enumerate(legs):
                self._forget(cells[index], node)
                cells[index] = self._route(start, goal, node)
        return [
            _corners([start[0], *((self.xs[i], self.ys[j]) for i, j in found), goal[0]])
            for found, (_, start, goal) in zip(cells, legs, strict=True)
        ]

    def _route(self, start: Port, goal: Port, node: str) -> list[tuple[int, int]]:
        starts = [(*self._cell(_out(start[0], way, len(start[1]))), ANYWHERE.index(way)) for way in start[1]]
        goals = {
            (*self._cell(_out(goal[0], way, len(goal[1]))), ANYWHERE.index((-way[0], -way[1]))) for way in goal[1]
        }
        through = node if len(start[1]) > 1 or len(goal[1]) > 1 else ""
        cells = self._search(starts, goals, node, through)
        self._book(cells, node)
        return cells

    def _search(self, starts: Sequence[tuple], goals: set[tuple], node: str, through: str) -> list[tuple[int, int]]:
        targets = [(self.xs[i], self.ys[j]) for i, j, _ in goals]

        def ahead(i: int, j: int) -> float:
            x, y = self.xs[i], self.ys[j]
            return SHARED * min(abs(x - a) + abs(y - b) for a, b in targets)

        best: dict[tuple, float] = {}
        came: dict[tuple, tuple | None] = {}
        heap = []
        for state in starts:
            best[state], came[state] = 0.0, None
            heapq.heappush(heap, (ahead(state[0], state[1]), 0.0, state))
        while heap:
            _, cost, state = heapq.heappop(heap)
            if state in goals:
                return self._trace(came, state)
            if cost > best[state]:
                continue
            for following, price in self._steps(state, node, through):
                total = cost + price
                if total < best.get(following, float("inf")) - 1e-9:
                    best[following], came[following] = total, state
                    heapq.heappush(heap, (total + ahead(following[0], following[1]), total, following))
        raise AssertionError("the lanes of a drawing are connected")

    @staticmethod
    def _trace(came: dict, state: tuple) -> list[tuple[int, int]]:
        cells: list[tuple[int, int]] = []
        step: tuple | None = state
        while step is not None:
            if not cells or cells[-1] != step[:2]:
                cells.append(step[:2])
            step = came[step]
        return cells[::-1]

    def _steps(self, state: tuple, node: str, through: str) -> Iterable[tuple[tuple, float]]:
        i, j, way = state
        for turn in range(4):
            if turn == (way + 2) % 4:
                continue
            if turn != way:
                yield (i, j, turn), BEND
                continue
            dx, dy = ANYWHERE[turn]
            a, b = i + int(dx), j + int(dy)
            if not (0 <= a < len(self.xs) and 0 <= b < len(self.ys)):
                continue
            length = abs(self.xs[a] - self.xs[i]) + abs(self.ys[b] - self.ys[j])
            price = length
            users = self._used.get(_step((i, j), (a, b)))
            if users:
                price = SHARED * length if users.count(node) == len(users) else length * BESIDE + BLOCKED
            else:
                passing = self._passed.get((a, b), _NOBODY)
                if passing.count(node) < len(passing):
                    price += CROSSING
                if dx == 0 and self._risers.get((node, i)):
                    price *= RISER_AGAIN
            for lane in self._near[0][i] if dx == 0 else self._near[1][j]:
                beside = _step((lane, j), (lane, b)) if dx == 0 else _step((i, lane), (a, lane))
                others = self._used.get(beside, _NOBODY)
                if others.count(node) < len(others):
                    price += length * BESIDE
            if self._blocked.get((a, b), set()) - {through}:
                price += BLOCKED
            yield (a, b, turn), price

    def _book(self, cells: Sequence[tuple[int, int]], node: str) -> None:
        for one, other in pairwise(cells):
            self._used.setdefault(_step(one, other), []).append(node)
            if one[0] == other[0]:
                self._risers[node, one[0]] = self._risers.get((node, one[0]), 0) + 1
        for cell in cells:
            self._passed.setdefault(cell, []).append(node)

    def _forget(self, cells: Sequence[tuple[int, int]], node: str) -> None:
        for one, other in pairwise(cells):
            self._used[_step(one, other)].remove(node)
            if one[0] == other[0]:
                self._risers[node, one[0]] -= 1
        for cell in cells:
            self._passed[cell].remove(node)

    def _cell(self, point: Point) -> tuple[int, int]:
        return _nearest(self.xs, point[0]), _nearest(self.ys, point[1])


def stub_end(port: Port) -> list[Point]:
    """The points at which routes of a port may begin."""
    return [_out(port[0], way, len(port[1])) for way in port[1]]


def _out(point: Point, way: Point, ways: int) -> Point:
    """Straight out of a wall port; a node that may be left in several directions is its own starting point."""
    if ways > 1:
        return point
    return point[0] + STUB * way[0], point[1] + STUB * way[1]


def _lanes(low: float, high: float, exact: Sequence[float]) -> list[float]:
    """Evenly spaced lanes, giving way to the exact positions of ports."""
    kept = sorted({round(value, 4) for value in exact})
    count = int((high - low) / PITCH) + 1
    for index in range(count + 1):
        lane = round(low + index * PITCH, 4)
        near = bisect_left(kept, lane)
        if all(abs(kept[k] - lane) > 0.8 for k in (near - 1, near) if 0 <= k < len(kept)):
            kept.insert(near, lane)
    return kept


def _neighbours(lanes: Sequence[float]) -> list[list[int]]:
    """For every lane the lanes too near to tell lines on them apart."""
    return [[k for k in (i - 2, i - 1, i + 1, i + 2) if 0 <= k < len(lanes) and abs(lanes[k] - lane) < APART]
            for i, lane in enumerate(lanes)]  # fmt: skip


def _nearest(values: Sequence[float], value: float) -> int:
    index = bisect_left(values, value)
    return min((k for k in (index - 1, index) if 0 <= k < len(values)), key=lambda k: abs(values[k] - value))


def _step(one: tuple[int, int], other: tuple[int, int]) -> tuple:
    return (one, other) if one < other else (other, one)


def _corners(points: Sequence[Point]) -> list[Point]:
    kept: list[Point] = []
    for point in points:
        if kept and abs(kept[-1][0] - point[0]) < 1e-6 and abs(kept[-1][1] - point[1]) < 1e-6:
            continue
        if len(kept) > 1 and _straight(kept[-2], kept[-1], point):
            kept[-1] = point
        else:
            kept.append(point)
    return kept


def _straight(a: Point, b: Point, c: Point) -> bool:
    return any(abs(a[k] - b[k]) < 1e-6 and abs(b[k] - c[k]) < 1e-6 for k in (0, 1))
