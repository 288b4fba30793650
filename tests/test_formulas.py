"""Every formula is dimensionally sound, cites a source, reproduces published figures and holds in both unit systems."""

from fnmatch import fnmatch
from functools import cache

import fluids.friction
import numpy as np
import pytest
import solutions_friction
import solutions_pumps
import solutions_systems
import yaml
from hypothesis import given, settings
from hypothesis import strategies as st
from published_cases import FOLDER, SOLVERS, UNITS, published, work_out

from calcpack.catalog.sources import load_sources
from calcpack.errors import FormulaError
from calcpack.formulas import FORMULAS, criteria, fittings, formula, liquid, pipe_flow, pump
from calcpack.formulas.expression import evaluate
from calcpack.quantities import KINDS
from calcpack.quantities import UNITS as PRINTED_UNITS

SOLUTIONS = (solutions_friction, solutions_pumps, solutions_systems)  # importing them fills SOLVERS
SUBJECTS = sorted({name for name, _ in SOLVERS.values()})
COHERENT = [one for one in FORMULAS.values() if not one.is_empirical]
ids = pytest.mark.parametrize("made", FORMULAS.values(), ids=FORMULAS)
coherent_ids = pytest.mark.parametrize("made", COHERENT, ids=[one.id for one in COHERENT])


@cache
def examples() -> list[dict]:
    with (FOLDER / "formula_examples.yaml").open(encoding="utf-8") as stream:
        return yaml.safe_load(stream)


def examples_of(formula_id: str) -> list[dict]:
    return [example for example in examples() if fnmatch(formula_id, example["formula"])]


@pytest.mark.parametrize("case_id", SOLVERS)
def test_published_figure(case_id):
    case, results, _ = work_out(case_id)
    misses = case.misses(results)
    if case.use == "misprint":
        assert misses, f"{case_id}: the misprinted figure is reproduced"
    else:
        assert not misses, "\n".join(misses.values())


def test_every_recorded_case_is_worked_out():
    assert {case_id for name in SUBJECTS for case_id in published(name)} == set(SOLVERS)
    assert len(SOLVERS) >= 60
    assert {case.use for name in SUBJECTS for case in published(name).values()} == {"check", "misprint"}


def test_the_atmosphere_row_that_contradicts_itself_keeps_its_right_half():
    case, results, _ = work_out("WP-26")
    assert set(case.misses(results)) == {"head_of_cold_water"}


@pytest.mark.parametrize("example", examples(), ids=lambda example: example["formula"])
def test_small_example(example):
    formulas = [one for one in FORMULAS.values() if fnmatch(one.id, example["formula"])]
    assert formulas, "no such formula"
    for made in formulas:
        operands = {name: _si(text) for name, text in example["inputs"].items()}
        expected = _si(example["expected"])
        allowed = float(example["tolerance"].removesuffix("%")) / 100 * abs(expected)
        assert made.evaluate(**operands) == pytest.approx(expected, rel=0, abs=allowed), example["source"]


def _si(text):
    if isinstance(text, list):
        return [_si(one) for one in text]
    return UNITS.Quantity(text).to_base_units().magnitude


def test_every_formula_has_an_example():
    worked = set().union(*(work_out(case_id)[2] for case_id in SOLVERS))
    without = [name for name in FORMULAS if name not in worked and not examples_of(name)]
    assert not without, f"formulas without a published or independent example: {', '.join(without)}"


@ids
def test_declaration_is_complete(made):
    assert made.source in load_sources(), f"{made.source} is not in the bibliography"
    assert made.title and made.title[0].isupper() and not made.title.endswith(".")
    for limits in made.valid:
        assert limits.low is not None or limits.high is not None
        assert limits.low is None or limits.high is None or limits.low < limits.high
    if made.unknown:
        assert made.result == made.unknown
        with pytest.raises(FormulaError, match="is solved for"):
            made.evaluate(**dict.fromkeys(made.operands, 1.0))


@ids
def test_units_of_an_empirical_formula_measure_its_kinds(made):
    for symbol, unit in made.units.items():
        kind = KINDS[made.kinds[symbol].removesuffix("[]")]
        have, wanted = (UNITS.Unit(PRINTED_UNITS[text].pint or "") for text in (unit, kind.si))
        if unit:
            assert have.is_compatible_with(wanted), f"{symbol}: {unit} does not measure {kind.name}"


def quantities(made, values, system):
    """``values`` as pint quantities in the coherent units of ``system``; lists stay lists."""
    made_of = {}
    for symbol, value in values.items():
        unit = UNITS.Unit(KINDS[made.kinds[symbol].removesuffix("[]")].coherent_unit(system).pint or "")
        made_of[symbol] = [UNITS.Quantity(one, unit) for one in value] if isinstance(value, list) else UNITS.Quantity(
            value, unit
        )
    return made_of


def sample(made, seed=1):
    """Operand values of moderate size, list operands with three entries; a lone ratio lies inside its range."""
    random = np.random.default_rng(seed)
    low = {limits.expression: limits.low for limits in made.valid if made.kinds.get(limits.expression) == "ratio"}
    return {
        name: random.uniform(0.2, 0.8, 3).tolist() if kind.endswith("[]")
        else float(random.uniform(0.2, 0.8)) + (low.get(name) or 0.0)
        for name, kind in made.kinds.items()
    }


@pytest.mark.parametrize("system", ["SI", "US"])
@coherent_ids
def test_both_sides_have_the_same_dimension(made, system):
    values = quantities(made, sample(made), system)
    left, right = (evaluate(side, values) for side in (made.equation.left, made.equation.right))
    assert UNITS.Quantity(right).is_compatible_with(UNITS.Quantity(left)), f"{left.units} against {right.units}"


def test_the_dimension_test_sees_a_wrong_formula():
    wrong = formula(
        "test.wrong", "Wrong", "h = f * L * (V**2 / (2 * g))", h="head", f="ratio", L="length", V="velocity",
        g="acceleration", source="TOOL",
    )  # fmt: skip
    del FORMULAS["test.wrong"]
    with pytest.raises(AssertionError, match="against"):
        test_both_sides_have_the_same_dimension(wrong, "SI")


@coherent_ids
@settings(max_examples=15)
@given(seed=st.integers(0, 10**6))
def test_printed_units_give_the_si_result(made, seed):
    if made.unknown:
        values = sample(made, seed) | {"Re": 4e4, "eps": 1e-3, "D": 0.3}
        values["f"] = pipe_flow.friction_factor(values["eps"] / values["D"], values["Re"])
        assert made.residual(**{name: values[name] for name in made.kinds}) == pytest.approx(0.0, abs=1e-12)
        return
    operands = {name: value for name, value in sample(made, seed).items() if name != made.result}
    for system in ("SI", "US"):
        printed = {name: _from_si(made, name, value, system) for name, value in operands.items()}
        unit = KINDS[made.kind].coherent_unit(system)
        redone = unit.to_si(made.evaluate_as_printed({**printed, made.result: 0.0})[1])
        scale = max(abs(made.evaluate(**operands)), 1e-3)
        assert redone == pytest.approx(made.evaluate(**operands), rel=1e-9, abs=1e-9 * scale)


def _from_si(made, name, value, system):
    unit = KINDS[made.kinds[name].removesuffix("[]")].coherent_unit(system)
    return [unit.from_si(one) for one in value] if isinstance(value, list) else unit.from_si(value)


@given(st.floats(0.0, 0.05), st.floats(4000.0, 1e9))
def test_turbulent_friction_factor_equals_the_open_library(roughness, reynolds):
    expected = fluids.friction.Colebrook(reynolds, roughness)
    assert pipe_flow.friction_factor(roughness, reynolds) == pytest.approx(expected, rel=1e-9)


@given(st.floats(1e-3, 2000.0), st.floats(0.0, 0.05))
def test_laminar_friction_factor_equals_the_open_library(reynolds, roughness):
    expected = fluids.friction.friction_factor(Re=reynolds, eD=roughness)
    assert pipe_flow.friction_factor(roughness, reynolds) == pytest.approx(expected, rel=1e-9)


@given(st.floats(0.0, 0.05), st.lists(st.floats(1.0, 1e8), min_size=1, max_size=6))
def test_friction_factor_of_arrays_is_that_of_each_element(roughness, reynolds):
    together = pipe_flow.friction_factor(roughness, np.array(reynolds))
    alone = [pipe_flow.friction_factor(roughness, one) for one in reynolds]
    np.testing.assert_allclose(together, alone, rtol=1e-13)


@pytest.mark.parametrize("roughness", [0.0, 1e-5, 0.001, 0.05])
def test_friction_factor_is_continuous_where_formulas_meet(roughness):
    for reynolds, low, high in ((2000.0, "LAMINAR", "CRITICAL_ZONE"), (4000.0, "CRITICAL_ZONE", "COLEBROOK")):
        below, above = np.nextafter(reynolds, 0), np.nextafter(reynolds, 1e9)
        assert pipe_flow.friction_formula(below) is getattr(pipe_flow, low)
        assert pipe_flow.friction_formula(above) is getattr(pipe_flow, high)
        assert pipe_flow.friction_factor(roughness, below) == pytest.approx(
            pipe_flow.friction_factor(roughness, above), rel=1e-12
        )


@given(st.floats(1e-6, 0.02), st.floats(5000.0, 1e8))
def test_explicit_friction_formula_stays_near_the_implicit_one(k, reynolds):
    explicit = pipe_flow.EXPLICIT.evaluate(eps=k, D=1.0, Re=reynolds)
    assert explicit == pytest.approx(pipe_flow.friction_factor(k, reynolds), rel=0.035)


@given(st.floats(0.02, 1.0))
def test_fully_turbulent_factor_is_the_limit_of_the_implicit_formula(bore):
    f_T = fittings.FULLY_TURBULENT.evaluate(eps_T=4.572e-5, D=bore)
    assert f_T == pytest.approx(pipe_flow.friction_factor(4.572e-5 / bore, 1e13), rel=1e-6)


def test_ranges_are_seen_in_the_units_of_the_formula():
    def names(made, **values):
        return [limits.expression for limits in made.outside_range(**values)]

    assert names(liquid.ATMOSPHERE, z=-600.0, p_atm=1e5) == ["z"]
    assert names(liquid.ATMOSPHERE, z=600.0, p_atm=1e5) == []
    assert names(pump.ANNUAL_ENERGY, P_e=1e3, t_y=9000 * 3600.0, W=1.0) == ["t_y"]
    assert names(pipe_flow.COLEBROOK, f=0.02, eps=0.06, D=1.0, Re=3999.0) == ["Re", "eps / D"]
    assert names(pump.SHAFT_POWER, P_h=1.0, eta=float("nan"), P_s=1.0) == ["eta"]


def test_a_margin_is_declared_for_each_kind_that_checks_compare():
    for kind in criteria.COMPARED_KINDS:
        assert criteria.margin_below(kind).kinds["x"] == kind
        assert criteria.excess(kind).kind == kind
    assert criteria.margin_below("elevation") is criteria.margin_below("head")
    assert criteria.deviation("gauge_pressure") is FORMULAS["criteria.deviation.pressure_difference"]
    assert criteria.margin_above("efficiency").evaluate(x=0.6, x_lim=0.5) == pytest.approx(0.2)
    with pytest.raises(FormulaError, match="'temperature' is not compared; known: ratio, head"):
        criteria.margin_above("temperature")
    assert [limits.expression for limits in criteria.margin_above("head").outside_range(x=1.0, x_lim=-2.0, m=-1.5)]


BAD_DECLARATIONS = {
    "declared twice": {"id": "pipe.area"},
    "without a source": {"source": ""},
    "symbols and kinds differ: c": {"text": "a = b * c"},
    "is not a quantity kind": {"b": "lenght"},
    "units: b = 'furlong'": {"units": {"a": "m", "b": "furlong"}},
    "every symbol needs one; without: b": {"units": {"a": "m"}},
    "an implicit equation names its unknown": {"text": "a = a * b"},
    "the unknown 'x' is not in the equation": {"unknown": "x"},
    "uses a symbol that the equation has not": {"valid": {"c": (0.0, None)}},
    "a sum without a list operand": {"text": "a = sum(b)"},
    "list operand outside a sum: b": {"b": "length[]"},
    "a formula is 'left = right'": {"text": "a"},
}


@pytest.mark.parametrize("message", BAD_DECLARATIONS)
def test_a_bad_declaration_is_refused(message):
    good = {"id": "test.good", "title": "Good", "text": "a = 2 * b", "source": "TOOL", "a": "length", "b": "length"}
    with pytest.raises(FormulaError, match=message.replace("(", r"\(")):
        formula(**(good | BAD_DECLARATIONS[message]))
    assert "test.good" not in FORMULAS


def test_evaluation_says_what_is_missing_and_what_has_no_result():
    with pytest.raises(FormulaError, match=r"pump\.percent_bep: needs Q, Q_BEP; got Q"):
        pump.PERCENT_BEP.evaluate(Q=1.0)
    with pytest.raises(FormulaError, match=r"pump\.percent_bep: no result for Q = 1.0, Q_BEP = 0.0 \(SI\)"):
        pump.PERCENT_BEP.evaluate(Q=1.0, Q_BEP=0.0)
