"""The network solver gives published flows and duties, and names every state that has no ordinary answer."""

from __future__ import annotations

from dataclasses import replace

import builders as b
import degenerate_states as states
import numpy as np
import pytest
from published_networks import NETWORKS, results

from calcpack.errors import CalcpackError
from calcpack.hydraulics import newton, solve
from calcpack.hydraulics.laws import SWAMEE_JAIN
from calcpack.hydraulics.second_method import BRACKET, FORWARD, LOOPS, second_solutions
from calcpack.hydraulics.system_curve import crossings, system_curve

HOUR = 3600.0


@pytest.mark.parametrize("case_id", NETWORKS)
def test_published_network(case_id):
    case, found = results(case_id)
    assert set(found) == set(case.expected)
    assert not case.misses(found)


def test_every_recorded_network_is_solved():
    from published_cases import published

    assert {id for id, (name, _) in NETWORKS.items() if name == "networks"} == set(published("networks"))


# A transfer from a tank through a strainer, one pump and a 685 m rising main: invented system, flows and heads found
# by bracketed roots outside this program; flow and head agree within 0.3 %, pressure within 2 kPa.
TRANSFER = {  # case: level, roughness, strainer, temperature, flow m3/h, head m, suction pressure kPa gauge
    "1": ("1", "new", "clean", "normal", 101.73, 43.67, 16.7),
    "2": ("0", "aged", "dirty", "normal", 93.27, 45.24, 0.1),
    "3": ("2", "new", "clean", "normal", 103.76, 43.27, 24.3),
    "4": ("0", "new", "dirty", "warm", 97.21, 44.52, -1.0),
    "5": ("1", "new", "clean", "cold", 100.87, 43.83, 16.8),
}
SYSTEM_CURVES = {  # head, m, at 0, 30, 60, 90, 94.5 and 120 m3/h
    "1": (33.10, 34.18, 37.01, 41.48, 42.29, 47.57),
    "2": (33.90, 35.18, 38.72, 44.48, 45.53, 52.45),
    "3": (32.30, 33.38, 36.21, 40.68, 41.49, 46.77),
}


def transfer(units="SI"):
    pump = b.pump(
        "P", [q / HOUR for q in range(0, 160, 20)], [54.00, 53.44, 52.16, 50.16, 47.44, 44.00, 39.84, 34.96],
        elevation=9.2, best=100 / HOUR,
    )

    def crane(n, count=1, kind="fitting"):
        return b.fitting(n, count, "n_fT", kind)

    steel = {"roughness": 4.57e-5, "aged": 1.5e-4}
    lines = [
        b.line("L1", "T1", "P.suction", length=9.5, bore=0.20272, equipment=["S"],
               fittings=[b.fitting(0.5), crane(8), crane(14, 2), b.fitting(0.05)], **steel),
        b.line("L2", "P.discharge", "J", length=6.0, bore=0.15405,
               fittings=[b.fitting(0.25), crane(100, 1, "swing_check_valve"), crane(45), crane(14, 2)], **steel),
        b.line("L3", "J", "T2", length=685.0, bore=0.15405,
               fittings=[crane(16, 8), crane(14, 6), crane(8), b.fitting(1.0)], **steel),
    ]
    strainer = b.equipment("S", clean=(0.3, 90 / HOUR), dirty=(1.2, 90 / HOUR))
    liquids = {"normal": (999.10, 1.13757e-3, 1705.7), "warm": (998.21, 1.00160e-3, 2339.2),
               "cold": (999.97, 1.5182e-3, 872.6)}
    nodes = [b.tank("T1", 10.6, 11.4, 12.2), b.junction("J", elevation=9.2), b.outlet("T2", 44.5)]
    system = b.system(nodes, lines, [pump], [strainer], liquids=liquids, elevation=85.0)
    return b.project(
        *(b.case(id, system, level=row[0], roughness=row[1], states={"S": row[2]}, temperature=row[3])
          for id, row in TRANSFER.items()),
        units=units,
    )


def test_flow_and_head_of_a_transfer_in_five_cases():
    project = transfer()
    for id, (*_, flow, head, suction) in TRANSFER.items():
        case = solve(project).cases[id]
        assert case.pumps["P"].flow * HOUR == pytest.approx(flow, rel=3e-3)
        assert case.pumps["P"].head == pytest.approx(head, rel=3e-3)
        liquid, speed = project.case(id).liquid, case.lines["L1"].velocity
        pressure = liquid.density.si * (b.GRAVITY * (case.heads["P.suction"] - 9.2) - speed**2 / 2)
        assert pressure / 1e3 == pytest.approx(suction, abs=0.2)


def test_parts_of_the_loss_of_a_transfer():
    lines = solve(transfer()).cases["1"].lines
    assert lines["L1"].friction_head == pytest.approx(0.0327, abs=1e-4)
    assert lines["L1"].local_head == pytest.approx(0.0413, abs=1e-4)
    assert lines["L1"].equipment_head["S"] == pytest.approx(0.3833, abs=1e-4)
    assert lines["L3"].friction_head == pytest.approx(9.1974, abs=5e-4)
    assert lines["L3"].local_head == pytest.approx(0.5014, abs=1e-4)
    assert lines["L3"].reynolds == pytest.approx(205_100, rel=1e-3)
    assert lines["L3"].friction_factor == pytest.approx(0.0176, abs=5e-5)


@pytest.mark.parametrize("id", SYSTEM_CURVES)
def test_system_curve_of_a_transfer(id):
    heads = system_curve(transfer(), id, "P", [q / HOUR for q in (0, 30, 60, 90, 94.5, 120)])
    assert heads == pytest.approx(SYSTEM_CURVES[id], rel=3e-3)


def test_the_duty_is_where_the_curves_cross():
    project = transfer()
    for case in solve(project).cases.values():
        (crossing,) = crossings(project, case.case, "P")
        assert crossing.stable
        assert crossing.flow == pytest.approx(case.pumps["P"].flow, rel=1e-9)
        assert crossing.head == pytest.approx(case.pumps["P"].head, rel=1e-9)


def test_second_method_and_second_correlation_of_a_transfer():
    project = transfer()
    solution = solve(project)
    for id, second in second_solutions(project, solution).items():
        assert (second.method, second.converged) == (BRACKET, True)
        assert second.flows["P"] == pytest.approx(solution.cases[id].pumps["P"].flow, rel=1e-9)
        assert second.flows["L3"] == second.flows["P"]
    for id, other in second_solutions(project, solution, SWAMEE_JAIN).items():
        difference = other.flows["P"] / solution.cases[id].pumps["P"].flow - 1
        assert 1e-5 < abs(difference) < 5e-3  # another formula, within its known distance


def test_the_only_low_pressure_of_a_transfer_is_said_in_its_units():
    for units, expected in (("SI", "−1.009\u00a0kPa gauge"), ("US", "−0.1463\u00a0psi gauge")):
        cases = solve(transfer(units)).cases
        assert [(id, f.code, f.tag) for id, case in cases.items() for f in case.findings] == [
            ("4", "sub-atmospheric", "P.suction")
        ]
        assert expected in cases["4"].findings[0].text


def test_a_pressure_between_vapour_and_vacuum_is_below_vapour_pressure():
    for vapour, code in ((99.2e3, "sub-atmospheric"), (99.4e3, "below-vapour-pressure")):  # the port has 99.30 kPa
        case = transfer().case("4")
        state = replace(case.liquid, vapour_pressure=b.value(vapour, "absolute_pressure"))
        liquid = replace(case.system.liquid, states={"warm": state})
        case = replace(case, system=replace(case.system, liquid=liquid))
        (finding,) = solve(b.project(case)).cases["4"].findings
        assert finding.code == code


# Each state: builder, the findings it must give (code, tag, parts of the text), flows in m3/h that must come out.
DEGENERATE = [
    (states.static_above_shutoff,
     [("closed-by-check-valve", "L2", "40.00", "45.00", "5.000"),
      ("no-flow-static-above-shutoff", "P", "40.00", "45.00", "5.000")], {"L1": 0, "L2": 0}),
    (lambda: states.static_above_shutoff(check=False),
     [("no-flow-static-above-shutoff", "P", "40.00", "45.00", "5.000")], {"L1": 0, "L2": 0}),
    (states.past_end, [("past-end-of-curve", "P", "80.00", "24.00", "109.6"), ("sub-atmospheric", "P.suction")], None),
    (states.below_start, [("below-start-of-curve", "P", "40.00"), ("sub-atmospheric", "P.suction")], None),
    (states.two_duties,
     [("two-intersections", "P", "2 times", "not stable", "(stable)", "30.00"), ("sub-atmospheric", "P.suction")],
     None),
    (states.high_point, [("sub-atmospheric", "P.suction"), ("sub-atmospheric", "L2", "chainage", "absolute")], None),
    (states.impossible_siphon,
     [("sub-atmospheric", "P.suction"), ("below-vapour-pressure", "L2", "400.0", "not real")], None),
    (states.dead_leg, [], {"leg": 0}),
    (states.at_rest, [], {"L1": 0, "L2": 0, "L3": 0, "L4": 0}),
    (lambda: states.at_rest(factor=0.02), [], {"L1": 0, "L2": 0, "L3": 0, "L4": 0}),
    (states.island, [("disconnected", "J3", "J3, J4"), ("unmet-demand", "J4", "7.200")], {"L2": 0}),
    (states.demand_behind_stopped_pump,
     [("disconnected", "J", "P is not running"), ("unmet-demand", "J", "10.80", "P is not running")],
     {"L1": 0, "L2": 0}),
    (states.pump_into_dead_end, [("no-flow", "P", "leads nowhere", "40.00")], {"L1": 0, "L2": 0}),
    (states.weak_pump_pushed_shut,
     [("closed-by-check-valve", "weak", "20.00", "31.16", "11.16"), ("sub-atmospheric", "strong.suction")],
     {"weak-in": 0, "weak-out": 0}),
    (states.flat_curve, [("flat-curve", "P", "2 units"), ("sub-atmospheric", "P.suction")], None),
    (states.reversed_line, [("reverse-flow", "L1", "93.31", "from T2 to T1")], {"L1": -93.306}),
    (states.shut_line, [("closed-by-check-valve", "L1", "10.00", "20.00")], {"L1": 0}),
    (states.outlet_too_high, [("outlet-too-high", "L1", "10.00")], {"L1": 0}),
    (states.drawing_from_outlet, [("inflow-at-outlet", "L1", "not real")], None),
    (states.too_much_demand,
     [("below-vapour-pressure", "J"), ("unmet-demand", "J", "72.00", "10.59")], {"L1": 72.0}),
    (states.between_laminar_and_turbulent, [("critical-zone", "L1", "3000", "0.03618", "0.04393")], None),
    (states.held_by_fixed_loss, [("closed-by-fixed-loss", "L1", "13.00", "10.00", "5.000")], {"L1": 0}),
    (lambda: states.held_by_fixed_loss(1.0), [], None),
    (states.inflow_behind_check_valve,
     [("disconnected", "J", "L1"), ("unmet-demand", "J", "Inflow", "7.200")], {"L1": 0}),
    (states.twins, [], {"L1": 41.221, "L2": 41.221, "L3": 82.442}),
]


@pytest.mark.parametrize(("build", "wanted", "flows"), DEGENERATE)
def test_degenerate_state_is_named(build, wanted, flows):
    project = b.project(build())
    case = solve(project).cases["1"]
    assert case.convergence.converged
    assert [(f.code, f.tag) for f in case.findings] == [row[:2] for row in wanted]
    for finding, (_, _, *parts) in zip(case.findings, wanted, strict=True):
        for part in parts:
            assert part in finding.text
    for tag, flow in (flows or {}).items():
        assert case.lines[tag].flow * HOUR == pytest.approx(flow, rel=1e-4, abs=1e-12)
    second = second_solutions(project, solve(project))["1"]
    for tag, line in case.lines.items():
        assert second.flows[tag] == pytest.approx(line.flow, rel=1e-7, abs=1e-7)


def test_a_line_without_resistance_is_refused_by_name():
    project = b.project(states.level_line())
    case = solve(project).cases["1"]
    assert not case.convergence.converged
    assert np.isnan(case.lines["L1"].flow)
    (finding,) = case.findings
    assert (finding.code, finding.tag) == ("no-resistance", "L1")
    assert not second_solutions(project, solve(project))["1"].converged


def test_an_unfinished_search_says_where_it_stands(monkeypatch):
    monkeypatch.setattr(newton, "MOST_ITERATIONS", 2)
    case = solve(b.project(states.twins())).cases["1"]
    assert not case.convergence.converged
    assert case.convergence.energy > 1e-4
    (finding,) = case.findings
    assert finding.code == "not-converged"
    assert finding.tag in ("L1", "L2", "L3")
    assert "energy residual" in finding.text


def test_the_head_across_a_shut_valve_is_real_on_both_sides():
    case = solve(b.project(states.static_above_shutoff())).cases["1"]
    assert case.heads["P.discharge"] == pytest.approx(40.0)
    assert not case.lines["L2"].open
    assert case.pumps["P"].head == pytest.approx(40.0)


def test_a_fixed_loss_that_is_overcome_costs_its_head():
    case = solve(b.project(states.held_by_fixed_loss(1.0))).cases["1"]
    line = case.lines["L1"]
    assert line.equipment_head["S"] == 1.0
    assert line.friction_head + 1.0 == pytest.approx(3.0, abs=1e-9)


def test_two_units_share_the_flow_and_a_stopped_pump_carries_none():
    project = b.project(states.lift(15.0, running=2))
    both = solve(project).cases["1"].pumps["P"]
    assert both.flow_each == pytest.approx(both.flow / 2)
    assert both.running == 2
    off = solve(b.project(states.lift(15.0, running=0))).cases["1"]
    assert off.pumps["P"].flow == off.pumps["P"].head == 0.0
    assert off.heads["P.discharge"] == pytest.approx(15.0)


def test_system_curve_of_a_stopped_pump_starts_at_the_static_head():
    project = b.project(states.lift(15.0, running=0))
    heads = system_curve(project, "1", "P", [0.0, 10 / HOUR, 20 / HOUR])
    assert heads[0] == pytest.approx(15.0, abs=1e-9)
    assert 15.0 < heads[1] < heads[2]


def test_crossings_of_a_drooping_curve():
    project = b.project(states.two_duties())
    low, high = crossings(project, "1", "P")
    assert (low.stable, high.stable) == (False, True)
    assert solve(project).cases["1"].pumps["P"].flow == pytest.approx(high.flow, rel=1e-9)  # the stable one is shown
    assert crossings(b.project(states.static_above_shutoff()), "1", "P") == ()
    with pytest.raises(KeyError):
        crossings(b.project(states.two_duties()), "1", "P9")


def test_methods_of_the_second_solution_by_number_of_loops():
    for build, method in ((states.too_much_demand, FORWARD), (states.reversed_line, BRACKET), (states.twins, LOOPS)):
        project = b.project(build())
        assert second_solutions(project, solve(project))["1"].method == method


def test_cases_of_different_topology_keep_their_order():
    one, two, three = states.twins(), states.reversed_line(), states.twins()
    cases = [b.case(str(i), case.system) for i, case in enumerate((one, two, three))]
    solution = solve(b.project(*cases))
    assert list(solution.cases) == ["0", "1", "2"]
    assert solution.cases["0"].lines == solution.cases["2"].lines


def test_a_model_that_is_no_network_is_refused():
    case = states.twins()
    nodes = dict(case.system.nodes) | {"T1": replace(case.system.nodes["T1"], levels=None)}
    with pytest.raises(CalcpackError, match="T1: a tank needs a level or an elevation"):
        solve(b.project(replace(case, system=replace(case.system, nodes=nodes))))
