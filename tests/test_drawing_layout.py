"""Layout of the drawings: elevation to scale, lines around everything, labels apart."""

from __future__ import annotations

import re
from itertools import pairwise

import drawing_samples as samples
import pytest
from drawing_samples import labels
from hypothesis import given
from hypothesis import strategies as st
from svg_texts import SVG, root_of, texts_of

from calcpack.drawings.blocks import LEFT, RIGHT
from calcpack.drawings.elevation_scale import SMALLEST_GAP, elevation_scale
from calcpack.drawings.geometry import Box, nearest_slot, segment_box
from calcpack.drawings.items import Items
from calcpack.drawings.layout import graph_of, place
from calcpack.drawings.plot_labels import spread
from calcpack.drawings.routes import Router, stub_end
from calcpack.drawings.schematic import schematic
from calcpack.drawings.ticks import round_ticks, tick_texts
from calcpack.drawings.wiring import wire

MAKERS = [samples.larkmere, samples.hollins, samples.coldharbour, samples.looped, samples.branched]


def laid_out(sample, **hints):
    """Graph, placed blocks and routes of a sample on an axis of 80 mm."""
    listed = labels(sample, **hints)
    system = sample.project.case("1").system
    graph = graph_of(system, listed.columns)
    items = Items(sample.project, sample.ledger, listed, graph, 80.0)
    placed = place(graph, items.node_blocks(), items.line_blocks(), items.crest_blocks(), 150.0)
    return graph, placed, wire(graph, placed, system), items


def blocks_of(placed):
    return [*placed.nodes.values(), *placed.lines.values(), *placed.crests.values()]


@pytest.mark.parametrize("make", MAKERS)
def test_blocks_keep_clear_of_each_other(make):
    _, placed, _, _ = laid_out(make())
    blocks = blocks_of(placed)
    assert [(a.tag, b.tag) for i, a in enumerate(blocks) for b in blocks[i + 1 :] if a.box.overlaps(b.box)] == []


@pytest.mark.parametrize("make", MAKERS)
def test_lines_run_square_and_around_every_block(make):
    _, placed, routes, _ = laid_out(make())
    for line, paths in routes.items():
        for path in paths:
            for (x0, y0), (x1, y1) in pairwise(path):
                assert x0 == x1 or y0 == y1, line
                for block in blocks_of(placed):
                    if block.tag != line and block.tag not in own_ends(make, line):
                        strip = segment_box((x0, y0), (x1, y1), 0.0)
                        assert not strip.overlaps(block.box.grown(-0.1)), (line, block.tag)


def own_ends(make, line: str) -> tuple[str, ...]:
    graph = graph_of(make().project.case("1").system, {})
    return (*graph.ends[line], f"{line} high point")


@pytest.mark.parametrize("make", MAKERS)
def test_lines_of_different_nodes_never_run_on_each_other(make):
    graph, _, routes, _ = laid_out(make())
    legs = []
    for line, paths in routes.items():
        nodes = [graph.ends[line][0], *[line] * (len(paths) - 2), graph.ends[line][1]]
        legs += [(node, a, b) for node, path in zip(nodes, paths, strict=True) for a, b in pairwise(path)]
    for index, (node, a, b) in enumerate(legs):
        for other, c, d in legs[index + 1 :]:
            if node == other:
                continue
            for k in (0, 1):  # both along the same axis and closer than lines can be told apart
                if a[k] == b[k] and c[k] == d[k] and abs(a[k] - c[k]) < 0.9:
                    low, high = (max(min(p[1 - k], q[1 - k]) for p, q in ((a, b), (c, d))),
                                 min(max(p[1 - k], q[1 - k]) for p, q in ((a, b), (c, d))))  # fmt: skip
                    assert high - low < 0.5, (node, other)


@pytest.mark.parametrize("make", MAKERS)
def test_nodes_stand_at_their_elevation(make):
    sample = make()
    _, placed, _, items = laid_out(sample)
    system = sample.project.case("1").system
    for tag, block in placed.nodes.items():
        if tag in placed.stacked:
            leader = placed.nodes[placed.stacked[tag]]
            assert block.y > leader.y and block.x == leader.x
            assert system.pumps[tag].shaft_elevation.si == system.pumps[placed.stacked[tag]].shaft_elevation.si
        elif tag in system.pumps:
            assert block.y == pytest.approx(items.scale.y(system.pumps[tag].shaft_elevation.si), abs=1e-3)
        elif system.nodes[tag].elevation:
            assert block.y == pytest.approx(items.scale.y(system.nodes[tag].elevation.si), abs=1e-3)


def test_the_drawn_axis_is_to_scale():
    """Ticks and node circles of the finished sheet follow one straight line from elevation to height."""
    sample = samples.hollins()
    root = root_of(schematic(sample.project, sample.ledger, labels(sample)))
    axis = next(g for g in root.iter(f"{SVG}g") if g.get("class") == "axis")
    ticks = {text.text: float(text.get("y")) for text in axis.iter(f"{SVG}text") if re.fullmatch(r"\d+", text.text)}
    low, high = min(ticks, key=int), max(ticks, key=int)
    scale = (ticks[high] - ticks[low]) / (int(high) - int(low))
    for text, y in ticks.items():
        assert y == pytest.approx(ticks[low] + scale * (int(text) - int(low)), abs=0.01)
    heights = {g.get("data-tag"): float(next(g.iter(f"{SVG}circle")).get("cy")) for g in root.iter(f"{SVG}g")
               if g.get("data-tag") in ("N-201", "HP-201")}  # fmt: skip
    assert heights["HP-201"] - heights["N-201"] == pytest.approx(scale * (14.0 - 2.0), abs=0.01)


@pytest.mark.parametrize("make", MAKERS)
def test_no_text_stands_on_a_line(make):
    sample = make()
    svg = schematic(sample.project, sample.ledger, labels(sample))
    texts = texts_of(svg)
    for group in root_of(svg).iter(f"{SVG}g"):
        if group.get("class") != "route":
            continue
        for path in group.iter(f"{SVG}path"):
            points = [(float(x), float(y)) for x, y in re.findall(r"(-?[\d.]+) (-?[\d.]+)", path.get("d"))]
            for a, b in pairwise(points):
                struck = [text.text for text in texts if text.box.overlaps(segment_box(a, b, 0.2))]
                assert struck == [], (group.get("data-tag"), struck)


def test_routes_go_around_what_stands_in_the_way():
    wall = Box(20.0, -15.0, 30.0, 15.0)
    start, goal = ((0.0, 0.0), (RIGHT,)), ((50.0, 0.0), (LEFT,))
    router = Router(Box(-10, -30, 60, 30), {"wall": wall}, [*stub_end(start), *stub_end(goal)])
    (path,) = router.route_all([("A", start, goal)])
    assert path[0] == (0.0, 0.0) and path[-1] == (50.0, 0.0)
    assert not any(segment_box(a, b, 0.0).overlaps(wall) for a, b in pairwise(path))
    assert len(path) == 6  # four bends, no more


def test_routes_of_one_node_share_a_header_and_others_keep_off_it():
    ports = [((0.0, 0.0), (RIGHT,)), ((0.0, 12.0), (RIGHT,)), ((40.0, 20.0), (LEFT,)), ((40.0, 26.0), (LEFT,)),
             ((40.0, -8.0), (LEFT,))]  # fmt: skip
    router = Router(Box(-10, -30, 60, 40), {}, [point for port in ports for point in stub_end(port)])
    one, two, other = router.route_all(
        [("A", ports[0], ports[2]), ("A", ports[0], ports[3]), ("B", ports[1], ports[4])]
    )
    assert one[1] == two[1]  # they turn off together
    risers = {x for path in (one, two) for (x, _), (b, _) in pairwise(path) if x == b}
    assert len(risers) == 1
    assert all(abs(x - b) > 1.0 for x in risers for (b, _), (c, _) in pairwise(other) if b == c)


def test_hints_move_a_node():
    sample = samples.larkmere()
    plain, _, _, _ = laid_out(sample)
    hinted, placed, _, _ = laid_out(sample, columns={"N-102": 1.75})
    assert plain.column["N-102"] == 2.0 and hinted.column["N-102"] == 1.75
    assert placed.nodes["N-102"].x < placed.lines["L-103"].x


def test_a_closed_loop_is_folded_back():
    graph, placed, _, _ = laid_out(samples.hollins())
    assert graph.column["V-201"] == 0 and graph.column["HP-201"] == 3
    assert graph.column["N-203"] == graph.column["P-201A"] == 1  # out and back stand in the same columns
    assert placed.nodes["P-201A"].way == 1


@given(
    st.lists(st.floats(0.0, 100.0), min_size=1, max_size=6, unique=True).map(sorted),
    st.floats(0.0, 50.0), st.floats(40.0, 120.0),
)  # fmt: skip
def test_levels_can_be_told_apart_and_keep_their_order(levels, below, height):
    low, high = levels[0] - below, levels[-1] + 100.0
    scale = elevation_scale(low, high, height, pairwise(levels))
    heights = [scale.y(level) for level in (low, *levels, high)]
    assert all(a >= b - 1e-9 for a, b in pairwise(heights))  # higher is further up
    for a, b in pairwise(levels):
        if b - a > 1e-6:
            assert scale.y(a) - scale.y(b) >= SMALLEST_GAP - 1e-6
    assert heights[0] == pytest.approx(height, abs=1e-6) and heights[-1] == pytest.approx(0.0, abs=1e-6)
    if not scale.stretched:
        middle = scale.y((low + high) / 2)
        assert middle == pytest.approx(height / 2, abs=1e-6)


@given(st.lists(st.floats(0.0, 60.0), max_size=12), st.floats(0.5, 4.0))
def test_spread_labels_keep_their_order_and_pitch(wanted, pitch):
    placed = spread(wanted, 0.0, 60.0, pitch)
    order = sorted(range(len(wanted)), key=lambda k: (wanted[k], k))
    for a, b in pairwise(order):
        assert placed[b] - placed[a] >= pitch - 1e-9
    if all(b - a >= pitch for a, b in pairwise(sorted(wanted))):
        assert placed == pytest.approx(wanted)


@given(st.lists(st.tuples(st.floats(0.0, 50.0), st.floats(0.1, 5.0)), max_size=8), st.floats(0.0, 50.0))
def test_a_slot_is_free_and_the_nearest(intervals, wanted):
    taken = [(low, low + length) for low, length in intervals]
    found = nearest_slot(wanted, 1.0, 2.0, taken, 0.5)
    assert all(found + 2.0 <= low - 0.5 + 1e-6 or found - 1.0 >= high + 0.5 - 1e-6 for low, high in taken)
    if all(wanted + 2.0 < low - 0.5 or wanted - 1.0 > high + 0.5 for low, high in taken):
        assert found == wanted


def test_ticks_are_round_and_written_to_their_place():
    assert round_ticks(9.2, 44.5, 8) == [10, 15, 20, 25, 30, 35, 40]
    assert tick_texts([0.0, 0.2, 0.4]) == ["0.0", "0.2", "0.4"]
    assert tick_texts([0.0, 500.0, 1000.0]) == ["0", "500", "1000"]
    assert tick_texts([10000.0, 20000.0]) == ["10\u2009000", "20\u2009000"]
    assert tick_texts([-5.0, 0.0, 5.0]) == ["\u22125", "0", "5"]


def test_boxes_touch_only_when_they_overlap():
    one = Box(0, 0, 2, 2)
    assert one.overlaps(Box(1, 1, 3, 3)) and not one.overlaps(Box(2, 0, 3, 2)) and one.overlaps(Box(2.5, 0, 3, 2), 1.0)
