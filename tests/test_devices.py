"""Valves by flow coefficient, equipment by pressure drop, and pumps at another speed: through project folders."""

import math
import shutil
from pathlib import Path

import pytest
from conftest import quiet

from calcpack import build
from calcpack.errors import ProjectError
from calcpack.hydraulics.curves import POLYNOMIAL, FittedCurve, at_speed, fit_head
from calcpack.quantities import UNITS

SMALL = Path(__file__).parent / "projects" / "small"
GPM, FEET = UNITS["US gpm"], UNITS["ft"]
STRAINER = "clean: {law: quadratic, head: 0.2 m, flow: 40 m3/h}"


def computed(folder: Path, edits: dict[str, list[tuple[str, str]]]):
    """The small project with edits, checked."""
    shutil.copytree(SMALL, folder, ignore=shutil.ignore_patterns("build"))
    for file, pairs in edits.items():
        text = (folder / file).read_text(encoding="utf-8")
        for before, after in pairs:
            assert text.count(before) == 1, before
            text = text.replace(before, after)
        (folder / file).write_text(text, encoding="utf-8")
    return build.check(folder, quiet).job


def test_a_flow_coefficient_loses_one_bar_of_water_at_its_own_flow(tmp_path):
    """IEC 60534-1 defines Kv (from memory): 1 bar of water of 1000 kg/m3, which are 10.197 m of any liquid."""
    job = computed(tmp_path / "p", {"system.yaml": [(STRAINER, "clean: {law: kv, coefficient: 80 m3/h}")]})
    flow, head = job.ledger["L-01/Q@base"].value, job.ledger["ST-01/h_e@base"].value
    assert head == pytest.approx(10.1972 * (flow * 3600 / 80) ** 2, rel=1e-5)
    assert head == pytest.approx(job.solution.cases["base"].lines["L-01"].equipment_head["ST-01"], rel=1e-12)
    assert job.ledger["hand-check/failed"].value == 0


def test_a_pressure_drop_becomes_head_of_its_own_liquid(tmp_path):
    """50 kPa at 1020 kg/m3 are 4.9986 m, worked by hand; the head stays whatever is pumped."""
    drop = "clean: {law: drop, pressure_drop: 50 kPa, density: 1020 kg/m3, flow: 40 m3/h}"
    job = computed(tmp_path / "p", {"system.yaml": [(STRAINER, drop)]})
    flow = job.ledger["L-01/Q@base"].value * 3600
    assert job.ledger["ST-01/h_r@clean"].value == pytest.approx(4.99861, rel=1e-5)
    assert job.ledger["ST-01/h_e@base"].value == pytest.approx(4.99861 * (flow / 40) ** 2, rel=1e-5)
    solved = job.solution.cases["base"].lines["L-01"].equipment_head["ST-01"]
    assert job.ledger["ST-01/h_e@base"].value == pytest.approx(solved, rel=1e-12)


def test_a_pump_slowed_by_a_tenth_gives_the_published_points():
    """Hydraulic Institute data book, pump slowed by 10 %: 213 ft at no flow becomes 173 ft; 198 ft at 400 gpm becomes
    160 ft at 360 gpm. Heads there are rounded to a foot."""
    curve = fit_head([0.0, GPM.to_si(200), GPM.to_si(400)], [FEET.to_si(head) for head in (213, 206, 198)])
    slow = at_speed(curve, 0.9)
    for flow, head in ((0, 173), (180, 167), (360, 160)):
        assert FEET.from_si(slow.value(GPM.to_si(flow))) == pytest.approx(head, abs=0.6)
    assert slow.flow_max == pytest.approx(GPM.to_si(360))


@pytest.mark.parametrize("heads", [[60, 58, 52, 42], [60, 60, 45, 44]], ids=["polynomial", "between points"])
def test_affinity_holds_for_both_kinds_of_curve(heads):
    curve: FittedCurve = fit_head([0.0, 0.01, 0.02, 0.03], heads)
    slow = at_speed(curve, 0.8)
    assert (curve.kind == POLYNOMIAL) == (heads[1] == 58)
    for flow in (0.0, 0.004, 0.013, 0.028):
        assert slow.value(0.8 * flow) == pytest.approx(0.64 * curve.value(flow), rel=1e-12)
        assert slow.slope(0.8 * flow) == pytest.approx(0.8 * curve.slope(flow), rel=1e-12)


def test_a_case_runs_a_pump_at_a_share_of_its_speed(tmp_path):
    """The sheets derive the scaled curve apart and must meet the solver's head; efficiency keeps at homologous flow."""
    slow = ("  pumps: {P-01: 1}\nlow:", "  pumps: {P-01: 1}\n  speeds: {P-01: 95 %}\nlow:")
    job = computed(tmp_path / "p", {"cases.yaml": [slow]})
    full = build.check(SMALL, quiet).job.ledger
    ledger, duty = job.ledger, job.solution.cases["base"].pumps["P-01"]
    assert job.solution.cases["base"].speeds == {"P-01": pytest.approx(0.95)}
    assert ledger["P-01/n@base"].value == pytest.approx(0.95 * ledger["P-01/n"].value)
    assert ledger["P-01/H@base"].value == pytest.approx(duty.head, rel=1e-9)
    assert abs(ledger["P-01/closure@base"].value) < 1e-9
    assert ledger["P-01/Q@base"].value < full["P-01/Q@base"].value
    assert ledger["P-01/Q_BEP@base"].value == pytest.approx(0.95 * ledger["P-01/Q_BEP"].value)
    flow = duty.flow / 0.95
    terms = [ledger[f"P-01/b_{power}"].value * flow**power for power in (1, 2, 3)]
    assert ledger["P-01/eta@base"].value == pytest.approx(math.fsum(terms), rel=1e-9)
    assert ledger["P-01/n@base"].id in {one for entry in ledger for one in entry.operand_ids()}
    assert ledger["hand-check/failed"].value == 0


def test_a_speed_of_an_unknown_pump_and_a_wild_one_are_refused(tmp_path):
    wrong = ("  pumps: {P-01: 1}\nlow:", "  pumps: {P-01: 1}\n  speeds: {P-1: 95 %, P-01: 300 %}\nlow:")
    with pytest.raises(ProjectError) as refused:
        computed(tmp_path / "p", {"cases.yaml": [wrong]})
    texts = [str(problem) for problem in refused.value.problems]
    assert len(texts) == 2
    assert any("no pump 'P-1'" in text and "P-01" in text for text in texts)
    assert any("300 %" in text for text in texts)
