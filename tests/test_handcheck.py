"""The hand-check: every printed line can be redone from its printed numbers, and a line that cannot is reported."""

import math
import re

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from calcpack import digits
from calcpack.digits import MAX_DIGITS, format_number, last_digit, round_significant
from calcpack.errors import CalcpackError
from calcpack.formulas import FORMULAS, criteria, duty, fittings, grade, liquid, pipe_flow, pump, suction
from calcpack.formulas.expression import evaluate, magnitude
from calcpack.ledger import Ledger, formula_of, settle_digits
from calcpack.ledger.handcheck import deviation, printed_unit

SUPERSCRIPTS = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")


def number_read(text: str) -> float:
    """The number that a reader takes from a printed text: groups closed up, power of ten applied."""
    plain = re.sub("[\u2009\u00a0]", "", text).replace(digits.MINUS, "-")
    mantissa, _, power = plain.partition(digits.TIMES + "10")
    return float(f"{mantissa}e{power.translate(SUPERSCRIPTS) or 0}")


def book(system="SI", digits=4, **values):
    """A ledger of looked-up numbers: name = (value, kind)."""
    ledger = Ledger(system)
    for name, (value, kind) in values.items():
        ledger.looked_up(name, value, name, name, kind, source="COMMON", digits=digits)
    return ledger


def redo(ledger, entry):
    """(redone, printed, digits) of a line from printed texts alone: what a checker with a calculator finds."""
    formula = formula_of(entry)

    def text_of(one, symbol):
        return format_number(printed_unit(formula, symbol, ledger.system).from_si(one.value), one.digits)

    operands = {
        symbol: number_read(text_of(ledger[ids], symbol)) if isinstance(ids, str)
        else [number_read(text_of(ledger[one], symbol)) for one in ids]
        for symbol, ids in entry.operands.items()
    }  # fmt: skip
    printed = number_read(text_of(entry, formula.result))
    return float(evaluate(formula.equation.right, operands)), printed, operands


# Numbers as text


@given(st.floats(-1e300, 1e300), st.integers(1, MAX_DIGITS))
def test_a_printed_number_reads_back_as_the_rounded_one(value, places):
    text = format_number(value, places)
    assert number_read(text) == pytest.approx(round_significant(value, places), rel=1e-15, abs=5e-324)
    if value:
        assert abs(number_read(text) - value) <= 0.500001 * last_digit(value, places)


@pytest.mark.parametrize(
    ("value", "places", "text"),
    [
        (0.0, 4, "0"), (-0.0, 4, "0"), (9.9996, 4, "10.00"), (999.96, 4, "1000"), (0.00012345, 3, "0.000123"),
        (-1.5, 3, "\u22121.50"), (12345.6, 4, "12\u2009350"), (1234567.0, 3, "1\u2009230\u2009000"),
        (9999.6, 4, "10\u2009000"), (4.57e-5, 3, "4.57\u00a0×\u00a010⁻⁵"), (2.15e9, 3, "2.15\u00a0×\u00a010⁹"),
        (99999999.0, 3, "1.00\u00a0×\u00a010⁸"), (math.nan, 4, "no value"), (math.inf, 4, "∞"),
        (-math.inf, 4, "\u2212∞"), (7.0, 1, "7"),
    ],
)  # fmt: skip
def test_a_number_prints_like_this(value, places, text):
    assert format_number(value, places) == text


@pytest.mark.parametrize(
    ("text", "count"),
    [("685", 3), ("0.0457", 3), ("10.60", 4), ("1e-6", 1), ("12 000", 5), ("1_000", 4), ("-2.50", 3), ("0", 1),
     ("0.0", 1), ("1.20E+3", 3), (".5", 1)],
)  # fmt: skip
def test_digits_of_a_number_as_written(text, count):
    assert digits.digits_written(text) == count


# Settling


def test_a_good_line_keeps_its_digits():
    ledger = book(Q=(0.028257, "flow"), A=(0.0186388, "area"))
    ledger.apply("V", pipe_flow.VELOCITY, Q="Q", A="A")
    outcome = settle_digits(ledger)
    assert (outcome.lines, outcome.widened, outcome.failed) == (1, 0, ())
    assert 0 < outcome.worst <= 1 and outcome.worst_id == "V"
    assert {entry.digits for entry in ledger} == {4}


def test_operands_are_widened_until_the_line_can_be_redone():
    ledger = book(digits=1, Q=(0.028257, "flow"), A=(0.0186388, "area"))
    ledger.apply("V", pipe_flow.VELOCITY, Q="Q", A="A")
    redone, printed, _ = redo(ledger, ledger["V"])
    assert abs(redone - printed) > 0.002 * printed  # 0.03 / 0.02 is 1.5, not 1.516
    outcome = settle_digits(ledger)
    assert outcome.failed == () and outcome.widened == 2
    redone, printed, _ = redo(ledger, ledger["V"])
    assert abs(redone - printed) <= 0.002 * printed
    assert 1 < ledger["Q"].digits < MAX_DIGITS and ledger["V"].digits == 4


def test_a_difference_of_nearly_equal_numbers_widens_its_operands():
    ledger = book(H_1=(100.037, "head"), H_2=(100.0, "head"))
    ledger.apply("H_st", duty.STATIC_HEAD, z_2="H_1", z_1="H_2")
    redone, printed, _ = redo(ledger, ledger["H_st"])
    assert (redone, printed) == (0.0, 0.037)
    outcome = settle_digits(ledger)
    assert outcome.failed == ()
    assert ledger["H_1"].digits == 6 and ledger["H_2"].digits == 4  # 100.0 is complete with four digits
    assert redo(ledger, ledger["H_st"])[0] == pytest.approx(0.037, rel=1e-9)


def test_widening_reaches_the_lines_that_share_an_operand():
    ledger = book(z=(100.037, "elevation"), z_0=(100.0, "elevation"), p=(0.0, "gauge_pressure"),
                  rho=(998.2, "density"), g=(9.80665, "acceleration"))  # fmt: skip
    ledger.apply("H", duty.TANK_HEAD, z="z", p_g="p", rho="rho", g="g")
    ledger.apply("H_st", duty.STATIC_HEAD, z_2="H", z_1="z_0")
    assert settle_digits(ledger).failed == ()
    assert ledger["H"].digits == 6 and ledger["z"].digits == 4  # 0.04 % off is inside 0.2 % for the line of H itself


def test_a_complete_cancellation_is_zero_on_paper_too():
    ledger = book(a=(1 / 3, "head"), b=(1 / 3, "head"))
    ledger.apply("zero", duty.STATIC_HEAD, z_2="a", z_1="b")
    assert settle_digits(ledger).failed == () and ledger["a"].digits == 4


def test_rounding_noise_of_floats_asks_for_no_digits():
    x = 0.1 + 0.2
    ledger = book(x=(x, "head"), x_lim=(0.3, "head"))
    margin = ledger.apply("m", criteria.margin_below("head"), x="x", x_lim="x_lim")
    assert margin.value == 0.0  # what floats leave of equal terms is not booked
    assert settle_digits(ledger).failed == () and ledger["x"].digits == 4


def test_a_cancellation_beyond_nine_digits_settles_at_nine():
    ledger = book(a=(math.pi, "head"), b=(math.pi + 1e-11, "head"))
    ledger.apply("d", duty.STATIC_HEAD, z_2="a", z_1="b")
    outcome = settle_digits(ledger)
    assert outcome.failed == () and ledger["a"].digits == MAX_DIGITS


def test_a_divisor_that_rounds_to_zero_is_widened():
    ledger = book(z_h=(100.037, "elevation"), z=(100.0, "elevation"), h=(1.0, "head"))
    ledger.apply("m", grade.AXIS_MARGIN, z_h="z_h", z="z")
    ledger.apply("r", suction.NPSH_RATIO, NPSHA="h", NPSHR="m")
    ledger["m"].value = 0.037
    assert settle_digits(ledger).failed == ()


def test_lists_zeros_and_huge_numbers_settle():
    ledger = book(
        zero=(0.0, "head"), h=(4.5678e-9, "head"), K_b=(2.15e9, "bulk_modulus"), rho=(1e-6, "density"),
        n=(3.0, "count"), K=(0.0, "loss_coefficient"), V=(-1.23456, "velocity"), g=(9.80665, "acceleration"),
    )  # fmt: skip
    ledger.apply("sum", fittings.SUM_EQUIPMENT, h_i=["zero", "h", "h"])
    ledger.apply("none", fittings.SUM_EQUIPMENT, h_i=[])
    ledger.apply("K_sum", fittings.SUM_K, n=["n"], K_i=["K"])
    ledger.apply("h_m", fittings.LOCAL_HEAD, K="K", V="V", g="g")
    ledger.apply("h_p", liquid.PRESSURE_HEAD, p="K_b", rho="rho", g="g")
    ledger.apply("E", pump.FLOW_PER_PUMP, Q=ledger.looked_up("Q", -0.0, "Q", "Q", "flow", source="COMMON"), i="n")
    outcome = settle_digits(ledger)
    assert outcome.lines == 6 and outcome.failed == ()


def test_an_implicit_line_is_redone_on_both_sides():
    ledger = book(eps=(4.57e-5, "roughness"), D=(0.154051, "diameter"), Re=(213456.7, "reynolds_number"))
    factor = pipe_flow.friction_factor(4.57e-5 / 0.154051, 213456.7)
    operands = {"eps": "eps", "D": "D", "Re": "Re"}
    ledger.solved("f", pipe_flow.COLEBROOK, factor, **operands)
    assert settle_digits(ledger).failed == ()
    ledger.solved("f_wrong", pipe_flow.COLEBROOK, factor * 1.01, **operands)
    outcome = settle_digits(ledger)
    assert outcome.failed == ("f_wrong",) and outcome.worst_id == "f_wrong"


def test_cases_of_one_quantity_print_to_the_same_decimal_place():
    ledger = book(i=(1.0, "count"), a=(12.3456, "head"), b=(1.23456, "head"), c=(98.7654, "head"))
    for case, head in (("1", "a"), ("2", "b"), ("3", "c")):
        ledger.apply(f"P/H_1@{case}", pump.STAGE_HEAD, H=head, i="i", case=case)
    ledger.apply("Q/H_1@1", pump.STAGE_HEAD, H="a", i="i", case="1")
    assert settle_digits(ledger).failed == ()
    texts = [format_number(ledger[f"P/H_1@{case}"].value, ledger[f"P/H_1@{case}"].digits) for case in "123"]
    assert texts == ["12.346", "1.235", "98.765"]
    assert ledger["Q/H_1@1"].digits == 4  # alone in its column


# The check can fail


@pytest.fixture
def lost_head():
    ledger = book(f=(0.01849, "friction_factor"), L=(412.0, "length"), D=(0.154051, "diameter"),
                  V=(1.51604, "velocity"), g=(9.80665, "acceleration"))  # fmt: skip
    ledger.apply("h_f", pipe_flow.FRICTION_HEAD, **{name: name for name in ("f", "L", "D", "V", "g")})
    assert settle_digits(ledger).failed == ()
    return ledger


@pytest.mark.parametrize("share", [1.0025, 0.9975, -1.0, 1000.0, 0.0])
def test_a_tampered_result_is_reported(lost_head, share):
    lost_head["h_f"].value *= share
    outcome = settle_digits(lost_head)
    assert outcome.failed == ("h_f",) and outcome.worst > 1.0 and outcome.worst_id == "h_f"


@pytest.mark.parametrize("operand", ["f", "L", "D", "V", "g"])
def test_a_tampered_operand_is_reported(lost_head, operand):
    lost_head[operand].value *= 1.01
    assert settle_digits(lost_head).failed == ("h_f",)


def test_a_wrong_rounding_is_reported(lost_head, monkeypatch):
    def cut_off(value, places):
        return math.floor(value * 10) / 10

    monkeypatch.setattr("calcpack.ledger.handcheck.round_significant", cut_off)
    assert settle_digits(lost_head).failed == ("h_f",)


def test_digits_taken_away_afterwards_are_seen(lost_head):
    lost_head["V"].digits = 1
    assert deviation(lost_head, lost_head["h_f"]) > 1.0
    assert settle_digits(lost_head).widened == 3  # D, V and g grow; f and L are complete as printed


def test_just_inside_and_just_outside_the_tolerance(lost_head):
    ledger = book(digits=9, Q=(2.0, "flow"), A=(1.0, "area"))
    line = ledger.apply("V", pipe_flow.VELOCITY, Q="Q", A="A")
    line.digits = 6
    for value, failed in ((2.00399, ()), (2.00402, ("V",)), (1.99602, ()), (1.99599, ("V",))):  # 0.2 % of the printed
        line.value = value
        assert settle_digits(ledger).failed == failed, value
    line.digits = 2  # now one unit of the last digit, 0.1, is the larger bound
    for value, failed in ((2.08, ()), (2.14, ()), (2.16, ("V",)), (1.87, ()), (1.84, ("V",))):
        line.value = value
        assert settle_digits(ledger).failed == failed, value


# Any formula, any numbers


RANGES = {
    "efficiency": (0.2, 0.95), "friction_factor": (0.005, 0.1), "reynolds_number": (4000.0, 1e8), "count": (1.0, 9.0),
    "length": (0.5, 5e4), "elevation": (-100.0, 3000.0), "head": (-50.0, 900.0), "diameter": (0.01, 2.0),
    "roughness": (1e-6, 1e-3), "area": (1e-4, 3.0), "volume": (0.1, 1e5), "flow": (1e-4, 5.0), "velocity": (0.05, 10.0),
    "daily_flow": (1e-4, 5.0), "acceleration": (9.78, 9.83), "density": (600.0, 1900.0),
    "dynamic_viscosity": (1e-4, 2.0),
    "absolute_pressure": (1e3, 1e6), "gauge_pressure": (-9e4, 4e6), "pressure_difference": (1.0, 1e7),
    "elastic_modulus": (8e8, 2.1e11), "bulk_modulus": (1e9, 2.4e9), "power": (10.0, 1e6), "energy": (1e6, 1e12),
    "energy_price": (1e-9, 1e-6), "hours": (360.0, 86400.0), "days": (86400.0, 86400.0), "duration": (0.1, 1e4),
    "rotational_speed": (10.0, 400.0), "specific_heat": (1500.0, 4300.0), "head_slope": (-900.0, 900.0),
    "quadratic_coefficient": (-1e5, 1e5), "efficiency_slope": (1.0, 100.0), "efficiency_square": (-5e3, 5e3),
    "efficiency_cube": (-1e5, 1e5), "fraction": (0.01, 1.0), "ratio": (0.1, 3.0), "dimensionless": (0.5, 300.0),
    "loss_coefficient": (0.02, 30.0), "angle": (0.05, 1.5),
    "kinematic_viscosity": (2e-7, 5e-4), "temperature_difference": (1.0, 40.0),
    "flow_coefficient_kv": (1e-4, 1.0), "flow_coefficient_cv": (1e-4, 1.0), "displacement": (1e-6, 1e-3),
}  # fmt: skip
EXPLICIT = [made for made in FORMULAS.values() if not made.unknown]


@settings(max_examples=300, deadline=None)
@given(st.data(), st.sampled_from(EXPLICIT), st.sampled_from(["SI", "US"]), st.integers(1, 5))
def test_every_settled_line_passes_an_independent_recomputation(data, made, system, places):
    ledger = Ledger(system)
    operands = {}
    for symbol in made.operands:
        kind = made.kinds[symbol].removesuffix("[]")
        numbers = st.floats(*RANGES[kind]).map(lambda number: number if abs(number) > 1e-12 else 0.0)
        names = [f"{symbol}/{i}" for i in range(3)] if made.kinds[symbol].endswith("[]") else [symbol]
        for name in names:
            ledger.looked_up(name, data.draw(numbers, label=name), symbol, name, kind,
                             source="COMMON", digits=places)  # fmt: skip
        operands[symbol] = names if made.kinds[symbol].endswith("[]") else symbol
    try:
        entry = ledger.apply("result", made, **operands)
    except CalcpackError:
        assume(False)  # a division by zero or a root of a negative number was drawn
    assert settle_digits(ledger).failed == ()
    redone, printed, values = redo(ledger, entry)
    allowed = max(last_digit(printed, entry.digits) if printed else 0.0, 0.002 * abs(printed))
    size = magnitude(made.equation.right, values)
    if abs(redone - printed) > allowed + 1e-12 * size:  # only where terms cancel beyond what nine digits can show
        assert abs(redone - printed) <= allowed + 1e-8 * size
        assert all(ledger[one].digits in (places, MAX_DIGITS) for one in entry.operand_ids())
        assert any(ledger[one].digits == MAX_DIGITS for one in entry.operand_ids())
