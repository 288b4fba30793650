"""The ledger books each number once with its voucher, and refuses what cannot be right."""

import math

import pytest

from calcpack.errors import FormulaError, LedgerError
from calcpack.formulas import duty, fittings, liquid, pipe_flow, pump, suction
from calcpack.ledger import Citation, Ledger, formula_of
from calcpack.ledger import entry as origin
from calcpack.values import CONFIRMED, LOOKED_UP, SUPPLIED, Value


def value(si, kind, text, **more):
    return Value(si, kind, text, **({"source": "LK-ISO-101", "status": CONFIRMED} | more))


@pytest.fixture
def ledger():
    book = Ledger("SI")
    book.looked_up("Q", 0.02, "Q", "Flow", "flow", source="COMMON")
    book.looked_up("D", 0.1, "D", "Bore", "diameter", source="B36.10M")
    book.apply("A", pipe_flow.AREA, D="D")
    return book


def test_an_input_keeps_its_text_its_place_and_its_words(ledger):
    given = value(9.5, "length", "9.5 m", path="system.lines.L-1.length", file="system.yaml", line=12, note="as built")
    entry = ledger.given("L-1/L", given, "L", "Length")
    assert (entry.value, entry.kind, entry.written, entry.place) == (9.5, "length", "9.5 m", "system.yaml:12")
    assert (entry.origin, entry.status, entry.citation) == (origin.GIVEN, CONFIRMED, Citation(text="LK-ISO-101"))
    assert (entry.path, entry.note, entry.digits) == ("system.lines.L-1.length", "as built", 2)


def test_where_a_number_comes_from_decides_its_origin_and_citation(ledger):
    supplied = value(9.80665, "acceleration", "9.80665 m/s2", source="STANDARD-GRAVITY", status=SUPPLIED)
    found = value(998.2, "density", "998.2 kg/m3", source="IAPWS-IF97", status=LOOKED_UP, locator="20 degC")
    assert ledger.given("g", supplied, "g", "Gravity").origin == origin.ASSUMED
    assert ledger["g"].citation == Citation("STANDARD-GRAVITY")
    assert ledger.given("rho", found, "rho", "Density").origin == origin.LOOKED_UP
    assert ledger["rho"].citation == Citation("IAPWS-IF97", "20 degC")
    assert ledger["A"].citation == Citation(pipe_flow.AREA.source, pipe_flow.AREA.locator)


@pytest.mark.parametrize(
    ("system", "si", "kind", "text", "digits"),
    [
        ("SI", 30.0, "length", "30 m", 2),
        ("US", 30.0, "length", "30 m", 4),  # 98.43 ft: two digits would print 98 ft
        ("US", 9.144, "length", "30 ft", 2),
        ("SI", 9.144, "length", "30 ft", 4),
        ("SI", 0.1524, "diameter", "6 in", 4),
        ("SI", 0.1023, "diameter", "102.3 mm", 4),
        ("SI", 4.57e-5, "roughness", "0.0457 mm", 3),
        ("SI", 12000.0, "length", "12 000 m", 5),
        ("SI", 293.15, "temperature", "20 °C", 2),
        ("SI", 0.7, "efficiency", "0.70", 2),
        ("SI", 1.0, "length", "about a metre", 4),
        ("SI", 0.12345678901234, "length", "0.12345678901234 m", 9),
    ],
)
def test_an_input_prints_with_the_digits_it_was_written_with_if_they_carry_it(system, si, kind, text, digits):
    assert Ledger(system).given("x", value(si, kind, text), "x", "Length").digits == digits


def test_an_input_is_booked_once_but_never_with_two_numbers(ledger):
    first = ledger.given("L", value(9.5, "length", "9.5 m"), "L", "Length")
    assert ledger.given("L", value(9.5, "length", "9.5 m"), "L", "Length") is first
    with pytest.raises(LedgerError, match=r"L: booked with 9.5 m, now given 9.6 m"):
        ledger.given("L", value(9.6, "length", "9.6 m"), "L", "Length")


def test_a_formula_books_value_operands_and_titles(ledger):
    entry = ledger.apply("V", pipe_flow.VELOCITY, Q="Q", A=ledger["A"], case="1", title="Velocity in the line")
    assert entry.value == 0.02 / ledger["A"].value
    assert (entry.operands, entry.operand_ids()) == ({"Q": "Q", "A": "A"}, ("Q", "A"))
    assert (entry.origin, entry.kind, entry.symbol, entry.case) == (origin.APPLIED, "velocity", "V", "1")
    assert entry.title == "Velocity in the line" and ledger["A"].title == pipe_flow.AREA.title
    assert formula_of(entry) is pipe_flow.VELOCITY
    with pytest.raises(LedgerError, match="made without a formula"):
        formula_of(ledger["Q"])


def test_list_operands_keep_their_order(ledger):
    for name, number in (("n_1", 2.0), ("n_2", 1.0)):
        ledger.looked_up(name, number, "n", "Number", "count", source="COMMON")
    for name, number in (("K_1", 0.3), ("K_2", 0.5)):
        ledger.looked_up(name, number, "K", "Coefficient", "loss_coefficient", source="TP410")
    entry = ledger.apply("K", fittings.SUM_K, n=["n_1", "n_2"], K_i=[ledger["K_1"], "K_2"])
    assert entry.value == pytest.approx(1.1)
    assert entry.operands == {"n": ("n_1", "n_2"), "K_i": ("K_1", "K_2")}
    assert entry.operand_ids() == ("n_1", "n_2", "K_1", "K_2")
    with pytest.raises(FormulaError, match="lists of one length"):
        ledger.apply("K2", fittings.SUM_K, n=["n_1"], K_i=["K_1", "K_2"])
    assert ledger.apply("none", fittings.SUM_EQUIPMENT, h_i=[]).value == 0.0


def test_wrong_operands_are_refused(ledger):
    refusals = {
        "A must be of kind area; Q is of kind flow": lambda: ledger.apply("V", pipe_flow.VELOCITY, Q="Q", A="Q"),
        "no entry 'nothing' in the ledger": lambda: ledger.apply("V", pipe_flow.VELOCITY, Q="Q", A="nothing"),
        "needs Q, A; got Q": lambda: ledger.apply("V", pipe_flow.VELOCITY, Q="Q"),
        "needs Q, A; got Q, A, B": lambda: ledger.apply("V", pipe_flow.VELOCITY, Q="Q", A="A", B="A"),
        "Q takes one entry": lambda: ledger.apply("V", pipe_flow.VELOCITY, Q=["Q"], A="A"),
        "h_i takes a list of entries": lambda: ledger.apply("h", fittings.SUM_EQUIPMENT, h_i="Q"),
        "A: booked twice": lambda: ledger.apply("A", pipe_flow.AREA, D="D"),
        "'lenght' is not a quantity kind": lambda: ledger.looked_up("x", 1.0, "x", "X", "lenght", source="COMMON"),
        "operand 'nothing' is not booked": lambda: ledger.found(
            "q", 1.0, "Q", "Flow", "flow", source="CONTINUITY", residual=0.0, operands={"Q": "nothing"}
        ),
        "x: nan is no value": lambda: ledger.looked_up("x", math.nan, "x", "X", "length", source="COMMON"),
    }
    before = len(ledger)
    for message, refused in refusals.items():
        with pytest.raises(LedgerError, match=message):
            refused()
    assert len(ledger) == before


def test_gauge_and_absolute_pressure_do_not_mix(ledger):
    ledger.looked_up("p_g", 1e5, "p_g", "Pressure", "gauge_pressure", source="COMMON")
    ledger.looked_up("p_a", 1e5, "p_a", "Pressure", "absolute_pressure", source="COMMON")
    assert ledger.apply("p", liquid.ABSOLUTE_PRESSURE, p_atm="p_a", p_g="p_g").value == 2e5
    with pytest.raises(LedgerError, match="p_g must be of kind gauge_pressure; p_a is of kind absolute_pressure"):
        ledger.apply("p_2", liquid.ABSOLUTE_PRESSURE, p_atm="p_a", p_g="p_a")


def test_a_formula_without_a_result_books_nothing(ledger):
    ledger.looked_up("zero", 0.0, "Q", "Flow", "flow", source="COMMON")
    ledger.looked_up("bad", -1.0, "rho", "Density", "density", source="COMMON")
    ledger.looked_up("N", 45.0, "N", "Constant", "dimensionless", source="TP410")
    with pytest.raises(FormulaError, match=r"pump\.percent_bep: no result for Q = 0.02, Q_BEP = 0.0"):
        ledger.apply("r", pump.PERCENT_BEP, Q="Q", Q_BEP="zero")
    with pytest.raises(FormulaError, match=r"fittings\.check_valve_velocity: no result for"):
        ledger.apply("v", fittings.CHECK_VALVE_VELOCITY, N="N", rho="bad")
    assert "r" not in ledger and "v" not in ledger


def test_a_range_that_is_left_is_a_finding(ledger):
    for name, reynolds in (("slow", 1500.0), ("fast", 50000.0)):
        ledger.looked_up(name, reynolds, "Re", "Reynolds number", "reynolds_number", source="REYNOLDS")
    assert ledger.apply("f_slow", pipe_flow.LAMINAR, Re="slow").findings == ()
    assert ledger.apply("f_fast", pipe_flow.LAMINAR, Re="fast").findings == ("Re",)


def test_a_root_is_booked_with_its_residual(ledger):
    ledger.looked_up("eps", 1e-4, "eps", "Roughness", "roughness", source="COMMON")
    ledger.looked_up("Re", 1e5, "Re", "Reynolds number", "reynolds_number", source="REYNOLDS")
    operands = {"eps": "eps", "D": "D", "Re": "Re"}
    right = ledger.solved("f", pipe_flow.COLEBROOK, pipe_flow.friction_factor(1e-3, 1e5), **operands)
    wrong = ledger.solved("f_wrong", pipe_flow.COLEBROOK, 0.03, **operands)
    assert right.origin == origin.SOLVED and abs(right.residual) < 1e-12
    assert abs(wrong.residual) > 0.1
    with pytest.raises(FormulaError, match="is solved for f"):
        ledger.apply("f_applied", pipe_flow.COLEBROOK, **operands)


def test_users_lists_who_uses_an_entry_in_booking_order(ledger):
    ledger.apply("V", pipe_flow.VELOCITY, Q="Q", A="A")
    ledger.apply("V_2", pipe_flow.VELOCITY, Q="Q", A="A")
    ledger.looked_up("h", 1.0, "h", "Head", "head", source="COMMON")
    ledger.apply("sum", fittings.SUM_EQUIPMENT, h_i=["h", "h"])
    assert ledger.users() == {
        "Q": ["V", "V_2"], "D": ["A"], "A": ["V", "V_2"], "V": [], "V_2": [], "h": ["sum"], "sum": [],
    }  # fmt: skip
    assert [entry.id for entry in ledger] == list(ledger.users())
    assert [entry.id for entry in ledger.of_origin(origin.APPLIED)] == ["A", "V", "V_2", "sum"]


@pytest.fixture
def npsh(ledger):
    for name, head in (("NPSHA", 6.0), ("NPSHR", 4.0), ("little", 3.0)):
        ledger.looked_up(name, head, name, name, "head", source="COMMON")
    ledger.looked_up("r_lim", 1.1, "r_lim", "Ratio required", "ratio", source="HI-9.6.1", locator="table")
    ledger.apply("r", suction.NPSH_RATIO, NPSHA="NPSHA", NPSHR="NPSHR", case="2")
    ledger.apply("m", pump.PERCENT_BEP, Q="Q", Q_BEP="Q")
    return ledger


def test_a_check_carries_value_limit_margin_and_the_source_of_the_limit(npsh):
    check = npsh.check(
        "check/r", "Ratio", value=npsh["r"], limit=npsh["r_lim"], comparison="≥", margin=npsh["m"], verdict=origin.MET
    )
    assert check.operands == {"value": "r", "limit": "r_lim", "margin": "m"}
    assert (check.value, check.kind, check.case) == (1.0, "fraction", "2")
    assert check.citation == Citation("HI-9.6.1", "table")


@pytest.mark.parametrize(
    ("comparison", "verdict", "limit", "message"),
    [
        ("≥", origin.NOT_MET, "r_lim", "1.5 ≥ 1.1 .* is not 'criterion not met'"),
        ("≤", origin.MET, "r_lim", "1.5 ≤ 1.1 .* is not 'criterion met'"),
        ("≥", "passed", "r_lim", "not a comparison and a verdict"),
        (">", origin.MET, "r_lim", "not a comparison and a verdict"),
        ("≥", origin.MET, "NPSHR", "limit must be of kind ratio; NPSHR is of kind head"),
    ],
)
def test_a_check_that_contradicts_its_numbers_is_refused(npsh, comparison, verdict, limit, message):
    numbers = {"value": npsh["r"], "limit": npsh[limit], "margin": npsh["m"]}
    with pytest.raises(LedgerError, match=message):
        npsh.check("c", "C", **numbers, comparison=comparison, verdict=verdict)


def test_an_undecided_check_says_why(npsh):
    entry = npsh.not_decided("c", "Rating", origin.NOT_CHECKED, "no rating given for L-103")
    assert entry.verdict == origin.NOT_CHECKED and entry.note == "no rating given for L-103" and math.isnan(entry.value)
    with pytest.raises(LedgerError, match="needs a value and a limit"):
        npsh.not_decided("d", "Rating", origin.MET, "because")


def test_a_series_and_a_choice_need_no_value(ledger):
    curve = ledger.series("curve", "Head", "H", "head", [(0.0, 50.0), (0.1, 40)], points_kind="flow", source="COMMON")
    assert curve.points == ((0.0, 50.0), (0.1, 40.0)) and math.isnan(curve.value)
    choice = ledger.chosen("motor", "18.5 kW", "Motor", reason="next rating above 15.9 kW", operands={"Q": "Q"})
    assert (choice.choice, choice.note, ledger.users()["Q"]) == ("18.5 kW", "next rating above 15.9 kW", ["motor"])


def test_daily_volume_through_the_ledger_gives_the_flow(ledger):
    ledger.given("q_d", value(2040 / 86400, "daily_flow", "2040 m3/d"), "q_d", "Daily volume")
    ledger.given("t_1", value(86400.0, "days", "1 d"), "t_1", "One day")
    ledger.given("t_d", value(72000.0, "hours", "20 h"), "t_d", "Running time")
    ledger.apply("V_d", duty.DAILY_VOLUME, q_d="q_d", t_1="t_1")
    assert ledger.apply("Q_req", duty.DAILY_FLOW, V_d="V_d", t_d="t_d").value == pytest.approx(102 / 3600)
