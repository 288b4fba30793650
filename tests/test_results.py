"""``results.json``: follows its schema, holds the whole ledger, and its pressures follow the stated convention."""

from __future__ import annotations

import json
import math
from copy import deepcopy

import jsonschema
import pytest
from conftest import ROOT, quiet
from system_projects import Sketch, junction, line, pump_through, tank, water

from calcpack import build
from calcpack.ledger.entry import CHECK, SERIES
from calcpack.project.model import TANK
from calcpack.quantities import KINDS
from calcpack.results import RESULTS_SCHEMA

GRAVITY = 9.80665  # m/s2
PROJECTS = ("larkmere", "larkmere_us", "starter", "cut_off")


@pytest.fixture(scope="module")
def starter():
    """The project that ``new`` writes; its files hold no output."""
    return build.check(ROOT / "calcpack" / "project" / "starter", quiet)


@pytest.fixture(scope="module")
def cut_off(tmp_path_factory):
    """A junction that a pump at rest alone would feed: nothing is known of it."""
    sketch = Sketch(
        water("15 degC"), {"TK-1": tank("20 m"), "TK-2": tank("5 m", "50 kPa gauge"), "J-1": junction("1 m", "9 m3/h")},
        {
            "L-1": line("TK-1", "TK-2", "100 mm", "200 m", roughness="0.1 mm", k={"entrance": 0.5, "exit": 1}),
            "L-2": line("TK-1", "P-1.suction", "100 mm", "10 m", roughness="0.1 mm", k={"entrance": 0.5}),
            "L-3": line("P-1.discharge", "J-1", "100 mm", "10 m", roughness="0.1 mm"),
        },
        pumps={"P-1": pump_through(0.0025, 20.0, 0.6)}, cases={"1": {"pumps": {"P-1": 0}}},
    )
    return build.check(sketch.write(tmp_path_factory.mktemp("cut-off")), quiet)


@pytest.fixture(params=PROJECTS)
def outcome(request):
    return request.getfixturevalue(request.param)


@pytest.fixture
def data(outcome) -> dict:
    return strict_json(build.results_text(outcome))


def strict_json(text: str) -> dict:
    def refuse(word: str):
        raise AssertionError(f"{word} is no JSON")

    return json.loads(text, parse_constant=refuse)


def closed(schema: object) -> object:
    """The schema without room for fields that it does not name."""
    if isinstance(schema, list):
        return [closed(one) for one in schema]
    if not isinstance(schema, dict):
        return schema
    made = {name: closed(one) for name, one in schema.items()}
    return made | {"additionalProperties": False} if "properties" in made and made.get("type") == "object" else made


def test_the_schema_is_one_and_says_what_is_stable():
    jsonschema.Draft202012Validator.check_schema(RESULTS_SCHEMA)
    words = RESULTS_SCHEMA["description"]
    assert "within one version a field keeps its name, place, unit and meaning" in words
    assert "the velocity head of the line is deducted at junctions and pump ports" in words


def test_results_follow_the_schema_and_every_field_is_in_it(data):
    jsonschema.Draft202012Validator(closed(RESULTS_SCHEMA)).validate(data)


@pytest.mark.parametrize("spoil", ["lines", "verdict", "extra", "flow"])
def test_the_schema_refuses_what_does_not_follow_it(larkmere, spoil):
    data = deepcopy(strict_json(build.results_text(larkmere)))
    if spoil == "lines":
        del data["cases"][0]["lines"]["L-101"]["velocity"]
    elif spoil == "verdict":
        data["checks"][0]["verdict"] = "fine"
    elif spoil == "extra":
        data["cases"][0]["pumps"]["P-101"]["price"] = 1.0
    else:
        data["cases"][0]["lines"]["L-101"]["flow"] = "0.02"
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.Draft202012Validator(closed(RESULTS_SCHEMA)).validate(data)


def test_every_entry_is_there_with_its_number(outcome, data):
    ledger = outcome.job.ledger
    assert [one["id"] for one in data["entries"]] == [entry.id for entry in ledger]
    for one, entry in zip(data["entries"], ledger, strict=True):
        assert one["si"] == (entry.value if math.isfinite(entry.value) else None), entry.id
        assert one["si_unit"] == KINDS[entry.kind].si and one["origin"] == entry.origin
        assert {ids for ids in _flat(one["operands"].values())} == set(entry.operand_ids())
        assert ("points" in one) == (entry.origin == SERIES)
        assert one["text"] or entry.origin in (SERIES, CHECK), entry.id


def _flat(operands) -> list[str]:
    return [one for ids in operands for one in ([ids] if isinstance(ids, str) else ids)]


def test_every_check_is_there_with_its_numbers(outcome, data):
    ledger = outcome.job.ledger
    checks = {entry.id: entry for entry in ledger.of_origin(CHECK)}
    assert [one["id"] for one in data["checks"]] == list(checks) != []
    for one in data["checks"]:
        entry = checks[one["id"]]
        assert (one["verdict"], one["title"], one["comparison"]) == (entry.verdict, entry.title, entry.comparison)
        for name in ("value", "limit"):
            booked = ledger[entry.operands[name]].value if entry.operands else None
            assert one[name] == booked, one["id"]
        assert one["text"] and (one["margin"] is None) == math.isnan(entry.value)


def test_every_line_node_and_pump_is_there_in_every_case(outcome, data):
    job = outcome.job
    assert [one["id"] for one in data["cases"]] == [case.id for case in job.cases]
    for one, case in zip(data["cases"], job.cases, strict=True):
        solved = job.solved(case)
        assert list(one["lines"]) == list(case.system.lines) and list(one["nodes"]) == list(case.system.nodes)
        assert list(one["pumps"]) == list(case.system.pumps) and set(one["equipment"]) == set(case.system.equipment)
        assert {tag: line["flow"] for tag, line in one["lines"].items()} == {
            tag: line.flow for tag, line in solved.lines.items()
        }
        assert {tag: node["head"] for tag, node in one["nodes"].items()} == {
            tag: None if math.isnan(head) else head for tag, head in solved.heads.items()
        }
        assert [finding["text"] for finding in one["findings"]] == [finding.text for finding in solved.findings]


def test_heads_fall_along_every_line_by_what_is_lost(outcome, data):
    for case in data["cases"]:
        for tag, flow in case["lines"].items():
            if flow["open"] and flow["head_start"] is not None:
                lost = flow["friction_head"] + flow["local_head"] + flow["equipment_head"]
                assert flow["head_start"] - flow["head_end"] == pytest.approx(lost, abs=1e-6), tag


def test_pressure_of_a_node_is_its_head_over_its_elevation(outcome, data):
    for one, case in zip(data["cases"], outcome.job.cases, strict=True):
        weight = outcome.job.density(case).value * GRAVITY
        known = {tag: node for tag, node in one["nodes"].items() if node["pressure"] is not None}
        assert known
        for tag, node in known.items():
            assert node["pressure"] == pytest.approx(weight * (node["head"] - node["elevation"]), abs=1e-3), tag


def test_pressure_at_the_ends_of_a_line(outcome, data):
    """That of the flowing liquid at junctions and ports, that of the node at tanks and outlets."""
    system, seen = outcome.job.project.system, set()
    for one, case in zip(data["cases"], outcome.job.cases, strict=True):
        density = outcome.job.density(case).value
        for tag, flow in one["lines"].items():
            for end, node in (("start", system.lines[tag].start), ("end", system.lines[tag].end)):
                kind, at_rest = system.nodes[node].kind, one["nodes"][node]["pressure"]
                if at_rest is None:
                    assert flow[f"pressure_{end}"] is None
                    continue
                moving = 0.0 if kind in (TANK, "outlet") else 0.5 * density * flow["velocity"] ** 2
                assert flow[f"pressure_{end}"] == pytest.approx(at_rest - moving, abs=1e-3), (tag, end)
                seen.add(kind)
    assert TANK in seen


def test_pressure_at_the_ports_is_that_of_the_sheets(larkmere):
    for case in strict_json(build.results_text(larkmere))["cases"]:
        pump = case["pumps"]["P-101"]
        assert pump["suction_pressure"] == larkmere.job.ledger[f"P-101/p_s@{case['id']}"].value
        assert case["lines"]["L-101"]["pressure_end"] == pytest.approx(pump["suction_pressure"], rel=1e-9, abs=1e-6)
        assert case["lines"]["L-102"]["pressure_start"] == pytest.approx(pump["discharge_pressure"], rel=1e-9)
        assert None not in pump.values() and pump["share_of_best_efficiency_flow"] == pytest.approx(
            pump["flow_each"] * 3600 / 100, rel=1e-9
        )


def test_what_does_not_exist_is_null(cut_off):
    (case,) = strict_json(build.results_text(cut_off))["cases"]
    assert case["nodes"]["J-1"] == {"elevation": 1.0, "head": None, "pressure": None}
    assert case["lines"]["L-3"]["pressure_end"] is None
    assert case["nodes"]["TK-2"]["pressure"] == pytest.approx(50e3)


def test_numbers_are_si_whatever_the_package_prints(larkmere, larkmere_us):
    ours, theirs = (strict_json(build.results_text(one))["cases"] for one in (larkmere, larkmere_us))
    for one, other in zip(ours, theirs, strict=True):
        for part in ("lines", "nodes", "pumps"):
            for tag, numbers in one[part].items():
                for name, number in numbers.items():
                    assert other[part][tag][name] == pytest.approx(number, rel=1e-6, abs=1e-9), (tag, name)


def test_the_text_is_the_same_each_time(larkmere):
    assert build.results_text(larkmere) == build.results_text(larkmere)
    assert build.results_text(larkmere).endswith("}\n")
