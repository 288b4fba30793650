"""Drawings: legible, complete, true to the ledger, and the same bytes on every run."""

from __future__ import annotations

import base64
import hashlib
import os
import re
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import drawing_curve_samples as curves
import drawing_samples as samples
import pytest
from drawing_samples import labels
from svg_texts import SVG, overlapping, root_of, texts_of, unit_of_print, words_of

from calcpack.drawings.fonts import SMALLEST_PRINT, font_folder, text_width
from calcpack.drawings.grade_line import grade_line
from calcpack.drawings.schematic import schematic
from calcpack.drawings.symbols import INLINE, equipment_symbol, fitting_symbol
from calcpack.drawings.system_curve import system_curve
from calcpack.errors import LedgerError
from calcpack.ledger.text import display_text, number_text, quantity_text, unit_of
from calcpack.quantities import KINDS

SYSTEMS = {
    "larkmere": samples.larkmere, "hollins": samples.hollins, "coldharbour": samples.coldharbour,
    "looped": samples.looped, "branched": samples.branched,
}  # fmt: skip
PLOTS = {
    "larkmere": (system_curve, curves.larkmere_curves), "hollins": (system_curve, curves.hollins_curves),
    "coldharbour": (system_curve, curves.coldharbour_curves), "grade": (grade_line, curves.coldharbour_grade),
}  # fmt: skip


def draw(name: str) -> str:
    sample = SYSTEMS[name]()
    return schematic(sample.project, sample.ledger, labels(sample))


def plot(name: str) -> str:
    function, make = PLOTS[name]
    return function(*make())


@pytest.fixture(scope="module")
def drawings() -> dict[str, str]:
    return {f"schematic {name}": draw(name) for name in SYSTEMS} | {f"plot {name}": plot(name) for name in PLOTS}


EVERY = [f"schematic {name}" for name in SYSTEMS] + [f"plot {name}" for name in PLOTS]


@pytest.mark.parametrize("name", EVERY)
def test_no_two_texts_touch(drawings, name):
    texts = texts_of(drawings[name])
    assert len(texts) > 15
    assert overlapping(texts) == []


@pytest.mark.parametrize("name", EVERY)
def test_every_text_lies_on_the_sheet_and_can_be_read_in_print(drawings, name):
    svg = drawings[name]
    x, y, width, height = (float(part) for part in root_of(svg).get("viewBox").split())
    points = unit_of_print(svg)
    for text in texts_of(svg):
        assert text.size * points >= SMALLEST_PRINT * 72 / 25.4 - 0.01, text
        assert text.box.x0 >= x and text.box.x1 <= x + width and text.box.y0 >= y and text.box.y1 <= y + height, text


@pytest.mark.parametrize("name", ["schematic larkmere", "schematic hollins", "schematic coldharbour", *EVERY[5:]])
def test_drawings_of_the_demos_are_as_wide_as_the_type_area(drawings, name):
    assert root_of(drawings[name]).get("width") == "170mm"


def test_equal_inputs_give_equal_bytes_in_this_and_in_another_process(drawings):
    again = {name: draw(name.split()[1]) if name.startswith("s") else plot(name.split()[1]) for name in EVERY}
    assert again == drawings
    code = (
        "import hashlib, test_drawings as t\n"
        "for n in t.EVERY:\n"
        "    svg = t.draw(n.split()[1]) if n.startswith('s') else t.plot(n.split()[1])\n"
        "    print(hashlib.sha256(svg.encode()).hexdigest())\n"
    )
    tests = Path(__file__).parent
    settings = {**os.environ, "PYTHONHASHSEED": "7", "PYTHONPATH": os.pathsep.join((str(tests), str(tests.parent)))}
    settings |= {"TZ": "Asia/Tokyo", "SOURCE_DATE_EPOCH": "1"}
    run = subprocess.run([sys.executable, "-c", code], env=settings, capture_output=True, text=True, check=True)
    assert run.stdout.split() == [hashlib.sha256(drawings[name].encode()).hexdigest() for name in EVERY]


@pytest.mark.parametrize("name", SYSTEMS)
def test_every_tag_of_the_model_is_written(drawings, name):
    system = SYSTEMS[name]().project.case("1").system
    words = words_of(drawings[f"schematic {name}"])
    tags = [tag for tag in system.nodes if not tag.endswith((".suction", ".discharge"))]
    for tag in (*tags, *system.lines, *system.pumps, *system.equipment):
        assert re.search(rf"(?<![\w-]){re.escape(tag)}(?![\w-])", words), tag
    for line in system.lines.values():
        assert line.pipe.size in words.replace("\u00a0", " ")


@pytest.mark.parametrize("name", SYSTEMS)
def test_every_listed_entry_is_written_as_the_ledger_says_it(drawings, name):
    sample = SYSTEMS[name]()
    listed = labels(sample)
    words = words_of(drawings[f"schematic {name}"])
    ids = [one for group in (listed.line_entries, listed.node_entries, listed.pump_entries) for ids in group.values()
           for one in ids]  # fmt: skip
    ids += [one for levels in listed.level_entries.values() for one in levels.values()]
    ids += listed.crest_entries.values()
    assert len(ids) > 10
    for one in ids:
        entry = sample.ledger[one]
        assert display_text(entry, sample.ledger.system).removeprefix("\u2212") in words, one


def test_a_changed_entry_changes_what_is_written():
    sample = samples.larkmere()
    sample.ledger["L-103/V@1"].digits = 7
    words = words_of(schematic(sample.project, sample.ledger, labels(sample)))
    assert display_text(sample.ledger["L-103/V@1"], "SI") in words and "1.516\u00a0m/s" in words  # L-102 keeps its own


def test_an_unknown_entry_is_refused():
    sample = samples.larkmere()
    with pytest.raises(LedgerError, match="L-103/X@1"):
        schematic(sample.project, sample.ledger, replace(labels(sample), line_entries={"L-103": ("L-103/X@1",)}))
    ledger, spec = curves.larkmere_curves()
    with pytest.raises(LedgerError, match="no/such"):
        system_curve(ledger, replace(spec, required=("no/such", "duty/H_des")))


def arrows(svg: str) -> dict[str, int]:
    """Item tag -> direction of its flow arrow on paper (+1 to the right), from the tip of the filled triangle."""
    found = {}
    for group in root_of(svg).iter(f"{SVG}g"):
        for path in group.iter(f"{SVG}path"):
            points = re.findall(r"(-?[\d.]+) (-?[\d.]+)", path.get("d"))
            if group.get("class") == "item" and path.get("stroke") is None and len(points) == 3:
                found[group.get("data-tag")] = 1 if float(points[0][0]) > float(points[1][0]) else -1
    return found


def test_arrows_follow_the_solved_sign():
    there, back, none = (samples.larkmere(flow=flow) for flow in (101.73, -101.73, 0.0))
    ways = [arrows(schematic(one.project, one.ledger, labels(one))) for one in (there, back, none)]
    lines = {"L-101", "L-102", "L-103"}
    assert {tag: way for tag, way in ways[0].items() if tag in lines} == dict.fromkeys(lines, 1)
    assert {tag: way for tag, way in ways[1].items() if tag in lines} == dict.fromkeys(lines, -1)
    assert not lines & set(ways[2])
    lines_only = replace(labels(back), pump_entries={})
    assert "\u2212" not in words_of(schematic(back.project, back.ledger, lines_only))  # the arrow is the sign


def test_arrows_of_a_loop_run_round(drawings):
    way = arrows(drawings["schematic hollins"])
    assert way["L-201A"] == way["L-202A"] == way["L-203"] == 1  # out through the pumps to the high point
    assert way["L-204"] == way["L-205A"] == way["L-205B"] == way["L-206"] == -1  # and back
    assert "L-201C" not in way  # standing still
    assert arrows(drawings["schematic branched"])["L-6"] == -1


@pytest.mark.parametrize("name", SYSTEMS)
def test_the_legend_has_the_symbols_used_and_no_others(drawings, name):
    system = SYSTEMS[name]().project.case("1").system
    fittings = {fitting_symbol(fitting.type) for line in system.lines.values() for fitting in line.fittings}
    items = {equipment_symbol(item.type, item.description) for item in system.equipment.values()}
    expected = {INLINE[key].title for key in (fittings | items) - {""}}
    legend = next(g for g in root_of(drawings[f"schematic {name}"]).iter(f"{SVG}g") if g.get("class") == "legend")
    shown = {"".join(text.itertext()) for text in legend.iter(f"{SVG}text")}
    assert shown & {symbol.title for symbol in INLINE.values()} == expected
    assert ("closed vessel" in shown) == (name == "hollins")
    assert ("pump, not running" in shown) == (name in ("larkmere", "hollins", "branched"))


def test_standby_units_are_dashed(drawings):
    def circles(name: str, tag: str) -> list[bool]:
        items = root_of(drawings[f"schematic {name}"]).iter(f"{SVG}g")
        group = next(g for g in items if g.get("class") == "item" and g.get("data-tag") == tag)
        return [circle.get("stroke-dasharray") is not None for circle in group.iter(f"{SVG}circle")]

    assert circles("larkmere", "P-101") == [False, True]
    assert circles("branched", "P-1") == [False, False, True]
    assert [circles("hollins", f"P-201{x}") for x in "ABC"] == [[False], [False], [True]]
    assert "standby" in words_of(drawings["schematic larkmere"])
    assert "P-201B, P-201C: at the shaft elevation of P-201A" in words_of(drawings["schematic hollins"])


def test_us_projects_are_drawn_in_us_units(drawings):
    words = words_of(drawings["schematic branched"]) + words_of(system_curve(*curves.larkmere_curves("US")))
    for unit in ("US gpm", "ft/s", "Elevation / ft", "H / ft", "Q / (US gpm)", " / hp"):
        assert unit in words.replace("\u00a0", " "), unit
    assert "m³/h" not in words and "kW" not in words


def test_system_curve_writes_duty_points_and_names_every_curve(drawings):
    ledger, spec = curves.larkmere_curves()
    words = words_of(drawings["plot larkmere"])
    for case in spec.cases:
        assert f"system, case {case.case}" in words and f"NPSHA, case {case.case}" in words
        for one in (case.flow, case.head, case.static, case.npsha, case.npshr, case.power, case.efficiency):
            assert number_text(ledger[one], unit_of(ledger[one], "SI")) in words.split("\n"), one
    named = {"minimum flow": spec.minimum_flow, "best efficiency": spec.best_flow, "motor": spec.motor_rating}
    for name, one in named.items():
        assert f"{name} {quantity_text(ledger[one], unit_of(ledger[one], 'SI'))}" in words
    assert "preferred region" in words and "required 94.5" in words
    assert "Q / (m³/h)" in words and "H / m" in words and "NPSH / m" in words and "Ps / kW" in words
    assert "1 × P-201" in words_of(drawings["plot hollins"]) and "2 × P-201" in words_of(drawings["plot hollins"])


def test_grade_line_names_its_case_and_the_lowest_pressure(drawings):
    ledger, spec = curves.coldharbour_grade()
    words = words_of(drawings["plot grade"])
    for text in (spec.title, "pipe axis", "hydraulic grade line", "energy grade line", "vapour limit", "pipe rating",
                 "lowest pressure", "chainage / m", "z / m"):  # fmt: skip
        assert text in words, text
    for one in spec.lowest:
        assert f"{ledger[one].title} {display_text(ledger[one], 'SI')}" in words


def test_a_far_rating_line_does_not_squash_the_profile():
    ledger, spec = curves.coldharbour_grade()
    far = [(x, y + 2000.0) for x, y in ledger["grade/rating"].points]
    ledger.series("grade/far", "rating", "z_r", "elevation", far, points_kind="length")
    texts = {text.text: text.box for text in texts_of(grade_line(ledger, replace(spec, rating="grade/far")))}
    assert "3000" in texts and texts["3000"].y1 < texts["900"].y0
    assert texts["720"].y0 - texts["900"].y0 > 150.0  # points; most of the height shows the grade lines
    assert overlapping(texts_of(grade_line(ledger, replace(spec, rating="grade/far")))) == []


def test_our_width_of_a_text_is_that_of_the_font():
    from fontTools.ttLib import TTFont

    for face, file in (("regular", "CPSans-Regular"), ("semibold", "CPSans-SemiBold"), ("symbols", "CPSymbols")):
        font = TTFont(font_folder() / f"{file}.ttf")
        glyphs, metrics, units = font.getBestCmap(), font["hmtx"], font["head"].unitsPerEm
        for code, glyph in glyphs.items():
            if code not in range(0x300, 0x370) and metrics[glyph][0]:
                assert text_width(chr(code), 1.0, face) == pytest.approx(metrics[glyph][0] / units), chr(code)


def test_figures_print_with_the_bundled_fonts_only(drawings):
    from weasyprint import HTML

    faces = "".join(
        f'@font-face{{font-family:"{name}";font-weight:{weight};font-style:{slant};src:url({path.as_uri()})}}'
        for name, weight, slant, path in (
            ("CP Sans", 400, "normal", font_folder() / "CPSans-Regular.ttf"),
            ("CP Sans", 600, "normal", font_folder() / "CPSans-SemiBold.ttf"),
            ("CP Math", 400, "italic", font_folder() / "CPMath-Italic.ttf"),
            ("CP Symbols", 400, "normal", font_folder() / "CPSymbols.ttf"),
        )
    )
    images = "".join(
        f'<img src="data:image/svg+xml;base64,{base64.b64encode(svg.encode()).decode()}">' for svg in drawings.values()
    )
    pdf = HTML(string=f"<style>{faces}</style>{images}").write_pdf(uncompressed_pdf=True)
    fonts = {name.decode() for name in re.findall(rb"/BaseFont /(?:[A-Z]{6}\+)?([\w-]+)", pdf)}
    assert fonts and {font[:2] for font in fonts} == {"CP"}, fonts


def test_every_kind_of_axis_has_a_title_in_both_systems():
    from calcpack.drawings.plots import axis_title

    titles = {axis_title("x", KINDS[kind].display_unit(system)) for kind in ("flow", "head", "power", "efficiency")
              for system in ("SI", "US")}  # fmt: skip
    assert titles == {"x / (m³/h)", "x / (US gpm)", "x / m", "x / ft", "x / kW", "x / hp", "x"}
