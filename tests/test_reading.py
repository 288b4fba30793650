"""Reading of project folders: sound ones become a model, bad ones one message for every mistake and no other.

The bad ones are files in ``tests/cases``. A case edits the sound project ``tests/projects/small``:

name      what is wrong
edits     file -> list of [text in the file, text in its place]; or the whole text; or null to leave the file out
problems  every problem that must be reported, and no other:
            file     may be left out where one file is edited
            at       text of the line that the problem must point to; "" where no line applies
            offset   lines below that line
            where    tag and key that it must name
            says     parts that the message must hold
            exactly  the whole message, where it is fixed
"""

import ast
import re
import shutil
import subprocess
import sys
from pathlib import Path

import pytest
import yaml

from calcpack.errors import ProjectError
from calcpack.project import json_schema, load
from calcpack.project.schema.cases import PURPOSES
from calcpack.project.schema.document import LimitsInput
from calcpack.project.starter import write_starter
from calcpack.sheets import basis
from calcpack.values import CONFIRMED, LOOKED_UP, SUPPLIED, UNCONFIRMED

TESTS = Path(__file__).parent
SMALL = TESTS / "projects" / "small"
LARKMERE = TESTS.parent / "projects" / "larkmere-transfer"
LARKMERE_US = TESTS / "projects" / "larkmere-us"
CASES = [
    pytest.param(case, id=f"{path.stem}: {case['name']}")
    for path in sorted((TESTS / "cases").glob("*.yaml"))
    for case in yaml.safe_load(path.read_text(encoding="utf-8"))
]


def edited(folder: Path, edits: dict) -> Path:
    """The small project in ``folder``, with edits."""
    for path in SMALL.glob("*.yaml"):
        shutil.copy(path, folder)
    for name, changes in edits.items():
        path = folder / name
        if changes is None:
            path.unlink()
        elif isinstance(changes, str):
            path.write_text(changes, encoding="utf-8")
        else:
            text = path.read_text(encoding="utf-8")
            for old, new in changes:
                assert old in text, f"{name} has no {old!r}"
                text = text.replace(old, new, 1)
            path.write_text(text, encoding="utf-8")
    return folder


def problems_of(folder: Path) -> list:
    with pytest.raises(ProjectError) as caught:
        load(folder)
    return caught.value.problems


@pytest.mark.parametrize("case", CASES)
def test_every_mistake_is_reported_in_its_place_and_nothing_else_is(case, tmp_path):
    found = problems_of(edited(tmp_path, case["edits"]))
    report = "\n".join(str(problem) for problem in found)
    left = list(found)
    for wanted in case["problems"]:
        file = wanted.get("file") or next(iter(case["edits"]))
        line = line_of(tmp_path / file, wanted["at"]) + wanted.get("offset", 0)
        match = next((one for one in left if fits(one, file, line, wanted)), None)
        assert match is not None, f"not reported at {file}:{line}: {wanted}\n\nreported:\n{report}"
        left.remove(match)
    assert not left, f"blamed without need: {[str(one) for one in left]}"


def line_of(path: Path, text: str) -> int:
    if not text:
        return 0
    lines = path.read_text(encoding="utf-8").splitlines()
    return next(number for number, line in enumerate(lines, start=1) if text in line)


def fits(problem, file: str, line: int, wanted: dict) -> bool:
    message = str(problem)
    return (
        (problem.file, problem.line) == (file, line)
        and problem.where == wanted.get("where", problem.where)
        and message == wanted.get("exactly", message)
        and all(part in message for part in wanted.get("says", ()))
    )


def test_messages_speak_to_engineers(tmp_path):
    """No word of the libraries behind the reading, and every message names its file."""
    foreign = ("pydantic", "pint", "dict", "NoneType", "validat", "str_", "ValueError", "Input", "BROKEN")
    for case in CASES:
        folder = tmp_path / "project"
        folder.mkdir()
        for problem in problems_of(edited(folder, case.values[0]["edits"])):
            assert not any(word in str(problem) for word in foreign), problem
            assert str(problem).startswith(problem.file)
        shutil.rmtree(folder)


# Files that cannot be taken as they are


def test_a_file_that_is_not_utf8_names_the_line(tmp_path):
    path = edited(tmp_path, {}) / "project.yaml"
    path.write_bytes(path.read_bytes().replace(b"To be read.", b"Stra\xdfe."))
    (problem,) = problems_of(tmp_path)
    assert (problem.line, "UTF-8" in problem.text) == (line_of(SMALL / "project.yaml", "purpose:"), True)


def test_a_control_character_is_refused(tmp_path):
    (problem,) = problems_of(edited(tmp_path, {"project.yaml": [["To be read.", "To be\x07 read."]]}))
    assert "U+0007" in problem.text


def test_a_link_is_refused(tmp_path):
    elsewhere = tmp_path / "elsewhere.yaml"
    folder = tmp_path / "project"
    folder.mkdir()
    edited(folder, {})
    (folder / "cases.yaml").rename(elsewhere)
    (folder / "cases.yaml").symlink_to(elsewhere)
    (problem,) = [one for one in problems_of(folder) if one.file == "cases.yaml"]
    assert "link" in problem.text


def test_a_folder_in_place_of_a_file_is_refused(tmp_path):
    edited(tmp_path, {"cases.yaml": None})
    (tmp_path / "cases.yaml").mkdir()
    (problem,) = problems_of(tmp_path)
    assert problem.text == "is not a file"


def test_a_large_file_is_refused(tmp_path):
    edited(tmp_path, {"cases.yaml": "# " + "x" * 1_000_000})
    (problem,) = problems_of(tmp_path)
    assert "larger than 1000 kB" in problem.text


def test_a_folder_that_is_not_there_lacks_all_files(tmp_path):
    assert [one.text for one in problems_of(tmp_path / "nowhere")] == ["is missing"] * 4


# Sound projects


@pytest.fixture(scope="module")
def larkmere():
    return load(LARKMERE)


def test_larkmere_has_the_inputs_of_its_brief(larkmere):
    lines = larkmere.system.lines
    assert [line.pipe.bore for line in lines.values()] == [None, None, None]
    bores = [line.pipe.outside_diameter.si - 2 * line.pipe.wall.si for line in lines.values()]
    # the brief has the inch sizes of the same pipe
    assert bores == pytest.approx([0.20272, 0.15405, 0.15405], rel=3e-4)
    assert [line.length.si for line in lines.values()] == [9.5, 6.0, 685.0]
    assert larkmere.system.nodes["TK-101"].levels["normal"].si == 11.4
    assert larkmere.system.nodes["P-101.suction"].elevation.si == 9.2
    pump = larkmere.system.pumps["P-101"]
    assert [round(value.si * 3600) for value in pump.curve.flow] == [0, 20, 40, 60, 80, 100, 120, 140]
    assert [value.si for value in pump.curve.head] == [54.0, 53.44, 52.16, 50.16, 47.44, 44.0, 39.84, 34.96]
    assert [case.id for case in larkmere.cases] == ["1", "2", "3", "4", "5"]
    worst = larkmere.case("2")
    assert (worst.levels, worst.equipment) == ({"TK-101": "min"}, {"ST-101": "dirty"})
    assert set(worst.roughness.values()) == {"aged"}
    assert {value.status for value in larkmere.values} == {CONFIRMED, UNCONFIRMED, SUPPLIED, LOOKED_UP}


def test_larkmere_in_us_units_is_the_same_project(larkmere):
    other = load(LARKMERE_US)
    assert (larkmere.units, other.units) == ("SI", "US")
    assert [value.path for value in other.values] == [value.path for value in larkmere.values]
    for mine, theirs in zip(larkmere.values, other.values, strict=True):
        assert theirs.si == pytest.approx(mine.si, rel=1e-12, abs=0), mine.path
        assert theirs.tolerance == (mine.tolerance and pytest.approx(mine.tolerance, rel=1e-12)), mine.path
        assert (theirs.status, theirs.source, theirs.kind) == (mine.status, mine.source, mine.kind)


def test_every_value_knows_its_place_and_origin(larkmere):
    order = {f"{stem}.yaml": at for at, stem in enumerate(("project", "system", "pumps", "cases"))}
    places = [(order[value.file], value.line) for value in larkmere.values]
    assert places == sorted(places)
    for value in larkmere.values:
        assert value.path.startswith(value.file.removesuffix(".yaml"))
        assert value.source, value
        if value.status in (CONFIRMED, UNCONFIRMED) and ".curve." not in value.path:
            line = (LARKMERE / value.file).read_text(encoding="utf-8").splitlines()[value.line - 1]
            assert value.text in line, value
        if value.status == SUPPLIED:
            assert value.note, value


def test_sources_of_the_program_are_in_the_bibliography(larkmere):
    from calcpack.catalog.sources import load_sources

    keys = {value.source for value in (*larkmere.values, *load(SMALL).values) if value.status in (SUPPLIED, LOOKED_UP)}
    assert keys and keys <= set(load_sources())


def test_texts_that_the_program_writes_can_be_read_back(larkmere):
    from calcpack.units import parse_quantity

    written = [value for value in larkmere.values if value.status in (SUPPLIED, LOOKED_UP)]
    assert len(written) > 30
    for value in (*written, *(one for one in load(LARKMERE_US).values if one.status in (SUPPLIED, LOOKED_UP))):
        assert parse_quantity(value.text, value.kind, "SI")[0] == pytest.approx(value.si, rel=1e-4), value


def test_water_is_written_to_five_figures(larkmere):
    water = larkmere.system.liquid.states["normal"]
    texts = [one.text for one in (water.density, water.dynamic_viscosity, water.vapour_pressure)]
    assert texts == ["999.10 kg/m³", "1.1376 mPa·s", "1.7057 kPa absolute"]


def test_words_that_yaml_would_turn_into_something_else_stay_words(tmp_path):
    edits = {
        "project.yaml": [["owner: Nobody (invented)", "owner: no"], ["revision: A", "revision: 1e3"],
                         ["number: SM-001", "number: 0o17"], ["title: Small transfer", "title: 12:30:45"]],
        "system.yaml": [["schedule: 40}\n    length: 5 m", "schedule: '40'}\n    length: 5 m"]],
    }  # fmt: skip
    document = load(edited(tmp_path, edits)).document
    assert (document.owner, document.revision, document.number, document.title) == ("no", "1e3", "0o17", "12:30:45")


def test_units_outside_the_glossary_are_taken(tmp_path):
    edits = {"system.yaml": [["length: 685 m", "length: 0.685 kilometers"], ["1600 kPa gauge", "16 barg"]]}
    line = load(edited(tmp_path, edits)).system.lines["L-03"]
    assert (line.length.si, line.rating.si) == (685.0, 1.6e6)


def test_origin_of_a_block_holds_until_a_value_names_its_own(tmp_path):
    edits = {
        "system.yaml": [
            ["    length: 685 m", "    source: ISO-3\n    status: confirmed\n    length: 685 m"],
            ["rating: 1600 kPa gauge", "rating: {value: 1600 kPa gauge, source: leaflet, tolerance: 2 %, note: PN 16}"],
        ]
    }
    line = load(edited(tmp_path, edits)).system.lines["L-03"]
    assert (line.length.source, line.length.status) == ("ISO-3", CONFIRMED)
    assert (line.roughness["aged"].source, line.roughness["aged"].status) == ("ISO-3", CONFIRMED)
    assert (line.rating.source, line.rating.status, line.rating.note) == ("leaflet", UNCONFIRMED, "PN 16")
    assert line.rating.tolerance == pytest.approx(32e3)


def test_a_case_overrides_its_own_system_only():
    project = load(SMALL)
    base, low = project.cases
    assert base.system is project.system
    assert (base.system.lines["L-03"].rating.si, low.system.lines["L-03"].rating.si) == (1.6e6, 1.0e6)
    assert low.system.lines["L-01"] == base.system.lines["L-01"]
    (override,) = low.overrides
    assert (override.path, override.text) == ("system.lines.L-03.rating", "1000 kPa gauge")
    rating = low.system.lines["L-03"].rating
    assert (f"{rating.file}:{rating.line}", rating.path) == (override.place, override.path)
    assert rating in project.values and base.system.lines["L-03"].rating in project.values


def test_an_override_may_be_of_any_depth_and_form(tmp_path):
    edits = {"cases.yaml": [["    system.lines.L-03.rating: 1000 kPa gauge", "\n".join((
        "    system.lines.L-03.fittings.0.count: 6",
        "    system.lines.L-03.length: {value: 700 m, source: survey, status: confirmed}",
        "    system.liquid.temperatures.warm: 40 degC",
        "    pumps.P-01.curve.points.1.1: 57",
        "    system.lines.L-01.roughness: 0.1 mm",
    ))], ["L-01: new, ", ""]]}  # fmt: skip
    project = load(edited(tmp_path, edits))
    base, low = project.cases
    assert [case.system.lines["L-03"].fittings[0].count for case in (base, low)] == [4, 6]
    assert low.system.lines["L-03"].length.source == "survey"
    assert low.liquid.density.si < base.system.liquid.states["warm"].density.si
    assert [case.system.pumps["P-01"].curve.head[1].si for case in (base, low)] == [58.0, 57.0]
    assert low.roughness["L-01"] == "constant"
    assert low.overrides[1].text == "700 m"


def test_stated_numbers_go_before_tables(tmp_path):
    edits = {
        "system.yaml": [
            [
                "site: {elevation: 100 m,",
                "site: {gravity: 9.81 m/s2, atmospheric_pressure: 100 kPa abs, elevation: 100 m,",
            ],
            [
                "- {type: gate_valve}",
                "- {type: gate_valve, n: 10}\n      - {type: odd_thing, title: odd thing, K: 0.7}",
            ],
            [
                "service: general_main",
                "service: general_main\n    velocity: {maximum: 2 m/s}\n    friction_factor: 0.02",
            ],
            ["    roughness: {new: 0.05 mm, aged: 0.2 mm}\n", "    surge: {modulus: 200 GPa, restraint: 1}\n"],
        ],
        "cases.yaml": [["L-02: new, L-03: aged}", "L-02: new}"]],
        "pumps.yaml": [["motor: {rating: 11 kW,", "motor: {rating: 11 kW, margin: 1.1, drive_efficiency: 96 %,"]],
    }
    project = load(edited(tmp_path, edits))
    site, line = project.system.site, project.system.lines["L-03"]
    assert (site.gravity.si, site.atmospheric_pressure.si) == (9.81, 1e5)
    gate, odd = project.system.lines["L-01"].fittings[1:]
    assert (gate.method, gate.coefficient.si, odd.method, odd.coefficient.si, odd.title) == (
        "n_fT", 10.0, "K", 0.7, "odd thing",
    )  # fmt: skip
    assert (line.velocity_maximum.si, line.velocity_minimum.status) == (2.0, SUPPLIED)
    assert (line.friction_factor.si, line.roughness, line.surge_modulus.si) == (0.02, {}, 200e9)
    assert "L-03" not in project.cases[0].roughness
    motor = project.system.pumps["P-01"].motor
    assert (motor.margin.si, motor.drive_efficiency.si) == (1.1, 0.96)


def test_a_liquid_of_its_own(tmp_path):
    rows = (
        "temperatures:\n    normal: {temperature: 15 degC, density: 900 kg/m3, kinematic_viscosity: 20 mm2/s,"
        " vapour_pressure: 1 kPa abs}\n    warm: {temperature: 30 degC, density: 890 kg/m3, dynamic_viscosity: 9 mPa.s,"
        " vapour_pressure: 2 kPa abs, bulk_modulus: 1.5 GPa, specific_heat: 2 kJ/(kg.K)}"
    )
    edits = {
        "system.yaml": [["model: water", "model: table"], ["temperatures: {normal: 15 degC, warm: 30 degC}", rows]]
    }
    states = load(edited(tmp_path, edits)).system.liquid.states
    assert states["normal"].dynamic_viscosity.si == pytest.approx(0.018)
    assert "20 mm2/s" in states["normal"].dynamic_viscosity.note
    assert (states["warm"].bulk_modulus.si, states["normal"].bulk_modulus) == (1.5e9, None)


def test_a_system_may_have_no_pumps(tmp_path):
    edits = {
        "system.yaml": [["    to: P-01.suction", "    to: J-01"], ["    from: P-01.discharge\n    to: J-01",
                                                                 "    from: J-01\n    to: J-02"],
                        ["  J-01:\n", "  J-02: {type: junction, elevation: 0.5 m}\n  J-01:\n"],
                        ["  L-03:\n    from: J-01", "  L-03:\n    from: J-02"]],
        "pumps.yaml": "{}\n",
        "cases.yaml": [["pumps: {P-01: 1}\nlow", "pumps: {}\nlow"], ["pumps: {P-01: 1}\n  set", "pumps: {}\n  set"]],
    }  # fmt: skip
    assert load(edited(tmp_path, edits)).system.pumps == {}


def test_the_starter_is_a_sound_project(tmp_path):
    written = write_starter(tmp_path / "new" / "project")
    assert [path.name for path in written] == ["project.yaml", "system.yaml", "pumps.yaml", "cases.yaml"]
    project = load(tmp_path / "new" / "project")
    assert len(project.cases) == 2
    assert "invented" in project.document.project


def test_the_starter_leaves_a_folder_with_something_in_it_alone(tmp_path):
    (tmp_path / "mine.txt").write_text("mine")
    with pytest.raises(ProjectError, match="is not empty"):
        write_starter(tmp_path)
    assert [path.name for path in tmp_path.iterdir()] == ["mine.txt"]


def test_no_unit_library_is_loaded_for_the_demo():
    code = f"import sys; from calcpack.project import load; load({str(LARKMERE)!r}); sys.exit('pint' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], cwd=TESTS.parent, check=False).returncode == 0


# The schema for editors


def test_the_json_schema_describes_every_key():
    document = json_schema()
    assert document["$schema"].endswith("2020-12/schema")
    definitions = document["$defs"]
    assert {"project.yaml", "system.yaml", "pumps.yaml", "cases.yaml"} <= set(definitions)
    for name, definition in definitions.items():
        for key, entry in definition.get("properties", {}).items():
            assert entry.get("description"), f"{name}.{key} says nothing"
    for reference in references(document):
        assert reference.removeprefix("#/$defs/") in definitions, reference
    length = definitions["LineInput"]["properties"]["length"]["anyOf"][0]["pattern"]
    assert re.search(length, "9.5 m") and re.search(length, "1 980 m") and not re.search(length, "685")
    assert {"from", "to", "pipe", "length"} == set(definitions["LineInput"]["required"])
    assert not definitions["LineInput"]["additionalProperties"]


def test_every_limit_that_a_sheet_asks_for_can_be_set(tmp_path):
    """The sheets call house_limit(job, name, kind, text, ...): name, kind and text must do as an input."""
    asked = set()
    for path in sorted((TESTS.parent / "calcpack" / "sheets").glob("*.py")):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Call) and getattr(node.func, "id", "") == "house_limit":
                asked.add(tuple(argument.value for argument in node.args[1:4]))
    assert len(asked) >= 8
    limits = "".join(f"  {name}: {text}\n" for name, _, text in sorted(asked))
    project = load(edited(tmp_path, {"project.yaml": [["normal_case:", f"limits:\n{limits}normal_case:"]]}))
    assert {(name, value.kind, value.text) for name, value in project.limits.items()} == asked
    assert set(project.limits) == set(LimitsInput.model_fields) - {"source", "status"}


def test_purposes_are_those_that_the_basis_explains():
    assert set(PURPOSES) == set(basis.PURPOSES)


def references(node):
    if isinstance(node, dict):
        yield from [node["$ref"]] if isinstance(node.get("$ref"), str) else []
        for child in node.values():
            yield from references(child)
    elif isinstance(node, list):
        for child in node:
            yield from references(child)
