"""Published problems of whole systems, computed end to end through project folders of YAML files.

Every case names its source and how far that was seen in ``tests/published``; the test ids repeat the kind of evidence,
and a miss prints the source. The cases are worked out in ``systems_*.py``.
"""

import shutil
import subprocess
from dataclasses import replace
from pathlib import Path

import pytest
import systems_duty_points  # importing them fills SYSTEMS
import systems_npsh
import systems_unpumped
from published_cases import published, si
from system_projects import (
    PUMP,
    Computed,
    Sketch,
    junction,
    line,
    liquid,
    outlet,
    published_case,
    pump_through,
    stated,
    tank,
)
from systems_pumped import STRESS, SYSTEMS, water_lifted_400_ft
from systems_unpumped import needed, pressure

from calcpack import build

EVIDENCE = (
    ("first-hand problem, answer from memory", "problem-seen"), ("first-hand", "first-hand"),
    ("second-hand: published answer", "quoted"), ("second-hand: open textbook", "notebook"), ("memory", "memory"),
    ("common practice", "common-practice"),
)  # fmt: skip
CHECKS = [case_id for case_id in SYSTEMS if published_case(case_id).use == "check"]


def named(case_id: str) -> str:
    """Id of a test: the case and the kind of evidence behind it."""
    evidence = published_case(case_id).evidence
    return f"{case_id}-{next(word for start, word in EVIDENCE if evidence.startswith(start))}"


def work_out(case_id: str, folder: Path) -> dict[str, float]:
    """Results of a case through its project folder, SI."""
    return dict(SYSTEMS[case_id](published_case(case_id), folder))


def near(value: float, figure: str, share: float) -> bool:
    """Whether ``value`` (SI) lies within ``share`` of a printed figure."""
    return value == pytest.approx(si(figure), rel=share)


@pytest.mark.parametrize("case_id", CHECKS, ids=named)
def test_published_system(case_id, tmp_path):
    case, results = published_case(case_id), work_out(case_id, tmp_path)
    assert set(case.expected) <= set(results), f"{case_id}, {case.source}: not every printed figure is compared"
    assert not case.misses(results)


def test_enough_systems_are_compared():
    kinds = [case_id.partition("-")[0] for case_id in CHECKS]
    assert kinds.count("PS") >= 17 and kinds.count("NP") >= 9 and kinds.count("NW") >= 8
    assert set(published("systems")) <= {*SYSTEMS, "PS-31"}
    assert {solver.__module__ for solver in SYSTEMS.values()} == {
        "systems_pumped", *(one.__name__ for one in (systems_unpumped, systems_npsh, systems_duty_points))
    }


@pytest.mark.parametrize(
    ("case_id", "output", "right"),
    [("PS-04", "pressure_difference", "2.6 bar"), ("HL-19", "friction_loss", "161.4 ft")],
    ids=["PS-04-quoted", "HL-19-common-practice"],
)
def test_misprint_is_not_reproduced(case_id, output, right, tmp_path):
    """PS-04 (Crane TP-410M, misprint) forgets the 22 m of lift; HL-19 quotes a loss that a steel pipe does not have."""
    case, results = published_case(case_id), work_out(case_id, tmp_path)
    assert case.use == "misprint" and case.misses(results)
    assert near(results[output], right, 0.005)


def test_power_that_a_companion_prints_32_times_too_large(tmp_path):
    """HL-13 (first-hand, companion notebook to Fluid Mechanics for Chemical Engineers): 290.8 hp; HL-12 has 9.03."""
    results = work_out("HL-12", tmp_path)
    assert published_case("HL-13").misses(results)
    assert near(results["hydraulic_power"], "9.03 hp", 0.03)


def test_impeller_of_a_similar_pump_follows_both_affinity_laws(tmp_path):
    """PS-31 (first-hand, companion notebook): 0.173 m by an exponent of 1/5; what we find for PS-25 wants 0.190 m."""
    pump, scaled = published_case("PS-25"), published_case("PS-31")
    results = work_out("PS-25", tmp_path)
    faster = results["speed"] / pump["model_speed"]
    by_flow = pump["model_diameter"] * (pump["flow"] / pump["model_flow"] / faster) ** (1 / 3)
    by_head = pump["model_diameter"] * (results["differential_head"] / pump["model_head"]) ** 0.5 / faster
    assert by_flow == pytest.approx(by_head, rel=1e-3)
    assert near(by_flow, "0.190 m", 0.005)
    assert scaled.misses({"impeller_diameter": by_flow})


def test_exit_is_counted_once(tmp_path):
    """PS-15 (companion notebook): the printed 85.4 hp hold the velocity head at the exit twice; 84.4 hp is ours."""
    results, printed = work_out("PS-15", tmp_path), published_case("PS-15").expected["power"]
    assert near(results["power_counted_once"], "84.4 hp", 0.003)
    assert not near(results["power_counted_once"], printed, 0.01)
    assert near(results["power"], printed, 0.003)


def test_speed_is_found_by_the_affinity_parabola(tmp_path):
    """OP-05 (companion notebook): its short cut gives 987 rpm, the strict method 980 rpm."""
    assert near(work_out("OP-05", tmp_path)["speed_2"], "980.25 rpm", 0.001)


def test_flow_between_laminar_and_turbulent_is_said(tmp_path):
    """PS-12 (companion notebook) reads a turbulent chart value at Re 2546; in a smooth pipe we interpolate and say so.

    The result lies between the laminar one, 272 kPa, and the printed 320 kPa.
    """
    case = published_case("PS-12")
    flow = f"{case['mass_flow'] / case['density']:.15g} m3/s"
    pipe = line("J-1", "N-2", stated(case, "diameter"), stated(case, "length"), roughness="0 mm", k={"exit": 1})
    made = needed(case, tmp_path, pipe, outlet(stated(case, "lift")), inflow=flow,
                  liquid=liquid(stated(case, "density"), stated(case, "viscosity")))  # fmt: skip
    assert "critical-zone" in made.findings()
    assert near(made.at("L-1/Re"), "2546", 0.001)
    assert si("272 kPa") < pressure(made, made.head("J-1")) < 0.95 * si("320 kPa")
    assert made.at("L-1/f") < STRESS * case["phi"]


def test_a_real_roughness_gives_less_flow_than_the_fully_turbulent_factor(tmp_path):
    """PS-05 (quoted): clean steel at the actual Reynolds number passes 4 to 6 % less (our recomputation)."""
    fixed = work_out("PS-05", tmp_path / "fixed")["flow"]
    made = systems_unpumped.drain(published_case("PS-05"), roughness="0.0457 mm").computed(tmp_path / "rough")
    assert 0.94 < made.at("L-1/Q") / fixed < 0.96


def test_printed_level_gives_the_stated_flow(tmp_path):
    """PS-07 (companion notebook) the other way round: a tank at the printed level, the flow found."""
    case = published_case("PS-07")
    k = {name: stated(case, f"K_{name}") for name in ("entrance", "two_elbows", "valve", "exit")}
    pipe = line("T-1", "T-2", stated(case, "diameter"), stated(case, "length"), roughness=stated(case, "roughness"),
                k=k)  # fmt: skip
    made = Sketch(
        nodes={"T-1": tank(case.expected["elevation_1"]), "T-2": tank(stated(case, "elevation_2"))},
        lines={"L-1": pipe}, liquid=liquid(stated(case, "density"), stated(case, "viscosity")),
    ).computed(tmp_path)
    assert made.at("L-1/Q") == pytest.approx(case["flow"], rel=0.0025)  # half of the tolerance on the head


def test_suction_of_a_pump_whose_flow_a_demand_sets(tmp_path):
    """NP-05 (companion notebook) with the 3 L/s drawn at a junction and nothing beyond: no system curve, same NPSHA."""
    case = published_case("NP-05")
    sketch = systems_npsh.suction(
        case, level="0 m", air=stated(case, "atmospheric_pressure"), bore=stated(case, "diameter"),
        fluid=liquid(stated(case, "density"), vapour=stated(case, "vapour_pressure", "absolute")),
    )  # fmt: skip
    sketch.nodes["N-2"] = junction(demand=stated(case, "flow"))
    tall = pump_through(2 * case["flow"], 60.0, 0.7, elevation=stated(case, "lift"))
    made = replace(sketch, flow=None, pumps={PUMP: tall}).computed(tmp_path)
    assert made.at(f"{PUMP}/Q") == pytest.approx(case["flow"], rel=1e-9)
    assert near(made.at(f"{PUMP}/NPSHA"), case.expected["NPSHA"], 0.012)
    assert made.at(f"{PUMP}/H_sys") == pytest.approx(made.at(f"{PUMP}/H"), rel=1e-9)
    assert f"curve/system/{PUMP}@1" not in made.outcome.job.ledger


def test_pumps_in_series_leave_the_shut_off_pressure_open(tmp_path):
    """OP-09 (memory), two in a row: no free surface feeds the second, so its greatest pressure is not judged."""
    work_out("OP-09", tmp_path)
    made = Computed(build.check(tmp_path / "series", lambda step: None))
    assert made.verdict("pressure/P-2") == "not checked"
    assert "P-2/p_max" not in made.outcome.job.ledger and f"{PUMP}/p_max" in made.outcome.job.ledger
    between = made.head("P-2.suction")
    assert between == pytest.approx(made.at(f"{PUMP}/H") - made.at("L-1/h_L") - made.at("L-3/h_L"), abs=1e-6)
    column = made("liquid/rho@normal") * made("site/g")
    assert made.at("P-2/p_s") == pytest.approx(column * (between - made.at("L-3/h_v")), rel=1e-6)
    assert made.at("P-2/H_sys") == pytest.approx(made.at("P-2/H"), rel=1e-9)


@pytest.mark.skipif(shutil.which("pdftotext") is None, reason="pdftotext is not installed")
def test_package_of_a_published_system_prints_its_figures(tmp_path):
    """PS-01 (answer quoted by an open library): the PDF exists and prints head and power beside source and inputs."""
    case = published_case("PS-01")
    results = water_lifted_400_ft(case, tmp_path)
    outcome = build.draft(tmp_path, lambda step: None)
    assert outcome.pdf.is_file() and outcome.results.is_file()
    printed = subprocess.run(
        ["pdftotext", "-layout", str(outcome.pdf), "-"], capture_output=True, text=True, check=True
    ).stdout
    text = " ".join(printed.split())
    head, power = results["total_head"] / si("1 ft"), results["brake_power"] / si("1 hp")
    for figure in (f"{head:.1f} ft", f"{power:.2f} hp", "100.0 US gpm", "3.068 in", "0.9500 cP", case.source):
        assert figure in text, figure
    assert outcome.job.ledger[f"{PUMP}/H@1"].value == pytest.approx(results["total_head"], rel=1e-9)
