"""Laws that hold for every network: balances, odd and rising losses, one answer whatever the order, name or start.

Random examples are derandomised: every run sees the same ones. CALCPACK_FULL=1 takes 200 networks instead of 40 for
the comparison with an independent root search.
"""

from __future__ import annotations

import os

import builders as b
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from random_networks import Balances, random_case, renamed
from scipy.optimize import root

from calcpack.hydraulics import laws, linear, newton, solve
from calcpack.hydraulics.assemble import groups
from calcpack.hydraulics.second_method import second_solutions

LAWS = settings(derandomize=True, deadline=None, max_examples=60)
NETWORKS = settings(derandomize=True, deadline=None, max_examples=40)
SEEDS = st.integers(0, 10_000)
INDEPENDENT = 200 if os.environ.get("CALCPACK_FULL") else 40

LINES = st.fixed_dictionaries({
    "length": st.floats(0.5, 5000), "bore": st.floats(0.01, 1.5), "roughness": st.floats(0, 5e-4),
    "k": st.floats(0, 50), "factor": st.none() | st.floats(0.005, 0.1),
})
SPEEDS = st.floats(-8, 1).map(lambda power: 10.0**power)
VISCOSITIES = st.floats(-4, -1).map(lambda power: 10.0**power)


def network_of(line: dict, viscosity: float):
    """The arrays of one line between two tanks, with some equipment."""
    made = b.line("L", "A", "B", equipment=["E"], **line)
    system = b.system([b.tank("A", 1.0), b.tank("B", 0.0)], [made], items=[b.equipment("E", on=(0.5, 0.02))],
                      liquids={"normal": (1000.0, viscosity, 2000.0)})
    (group,) = groups([b.case("1", system)])
    return group.network


def solved(case):
    return solve(b.project(case)).cases[case.id]


def throughput(solution) -> float:
    return max([abs(line.flow) for line in solution.lines.values()] + [1e-6])


@LAWS
@given(LINES, VISCOSITIES, SPEEDS, st.floats(1.0001, 3.0), st.sampled_from([laws.COLEBROOK, laws.SWAMEE_JAIN]))
def test_loss_is_odd_and_rises_with_flow(line, viscosity, speed, ratio, correlation):
    net = network_of(line, viscosity)
    flow = net.area * speed
    head, slope = laws.line_losses(net, flow, correlation)
    back, same = laws.line_losses(net, -flow, correlation)
    assert back == -head
    assert same == slope > 0
    assert laws.line_losses(net, flow * ratio, correlation)[0] > head > 0
    assert laws.line_losses(net, 0.0 * flow, correlation)[0] == 0


@LAWS
@given(LINES, VISCOSITIES, SPEEDS, st.sampled_from([laws.COLEBROOK, laws.SWAMEE_JAIN]))
def test_slope_is_the_derivative(line, viscosity, speed, correlation):
    net = network_of(line, viscosity)
    re = 1000.0 * speed * line["bore"] / viscosity
    if any(abs(re / joint - 1) < 1e-3 for joint in (2000.0, 4000.0)):
        re = speed = 0.0  # at the joins of the regimes the slope jumps; look at rest instead
    flow = net.area * max(speed, 1e-7)
    step = flow * 1e-5
    upper, lower = (laws.line_losses(net, flow + sign * step, correlation)[0] for sign in (1, -1))
    assert laws.line_losses(net, flow, correlation)[1] == pytest.approx((upper - lower) / (2 * step), rel=1e-6)


@LAWS
@given(LINES, VISCOSITIES, st.floats(-8, -1))
def test_near_rest_the_loss_is_the_laminar_line(line, viscosity, power):
    line = line | {"factor": None, "k": 0.0}
    net = network_of(line, viscosity)
    speed = 10.0**power * viscosity / (1000.0 * line["bore"])  # Reynolds number 1e-8 to 0.1
    exact = 32 * viscosity * line["length"] * speed / (1000.0 * b.GRAVITY * line["bore"] ** 2)
    equipment = 0.5 * (net.area * speed / 0.02) ** 2
    head, slope = laws.line_losses(net, net.area * speed)
    assert head == pytest.approx(exact + equipment, rel=1e-9)
    assert slope >= exact / (net.area * speed) * (1 - 1e-9)


def test_loss_is_continuous_where_regimes_meet():
    net = network_of({"length": 10.0, "bore": 0.1, "roughness": 1e-4, "k": 0.0, "factor": None}, 1e-3)
    for re in (2000.0, 4000.0):
        flow = net.area * re * 1e-3 / (1000.0 * 0.1)
        below, above = (laws.line_losses(net, flow * (1 + side))[0] for side in (-1e-9, 1e-9))
        assert above == pytest.approx(below, rel=1e-7)


@NETWORKS
@given(SEEDS)
def test_balances_of_random_networks(seed):
    case = random_case(seed)
    solution = solved(case)
    assert solution.convergence.converged
    assert solution.convergence.continuity <= 1e-10 * throughput(solution) + 1e-9
    assert solution.convergence.energy <= 1e-8
    into = dict.fromkeys(case.system.nodes, 0.0)
    for tag, line in case.system.lines.items():
        found = solution.lines[tag]
        into[line.start] -= found.flow
        into[line.end] += found.flow
        if found.open and not np.isnan(solution.heads[line.start] - solution.heads[line.end]):
            lost = found.friction_head + found.local_head + sum(found.equipment_head.values())
            assert solution.heads[line.start] - lost == pytest.approx(solution.heads[line.end], abs=1e-7)
    for tag, pump in case.system.pumps.items():
        into[pump.suction] -= solution.pumps[tag].flow
        into[pump.discharge] += solution.pumps[tag].flow
    for tag, node in case.system.nodes.items():
        if node.kind in ("junction", "pump port") and not np.isnan(solution.heads[tag]):
            demand = node.demand.si if node.demand is not None else 0.0
            assert into[tag] == pytest.approx(demand, abs=1e-9 * throughput(solution) + 1e-9)


@NETWORKS
@given(SEEDS)
def test_one_way_links_obey_their_heads(seed):
    """Open ones never run backwards, shut ones are held shut: with falling curves that leaves one answer."""
    case = random_case(seed)
    solution = solved(case)
    for tag, line in case.system.lines.items():
        found = solution.lines[tag]
        if np.isnan(solution.heads[line.start] - solution.heads[line.end]):
            assert found.flow == 0
        elif line.check_valve is not None or case.system.nodes[line.end].kind == "outlet":
            assert found.flow >= 0
            if not found.open:
                assert found.flow == 0
                assert solution.heads[line.start] - solution.heads[line.end] <= 1e-5
    for tag, pump in case.system.pumps.items():
        duty = solution.pumps[tag]
        assert duty.flow >= 0
        across = solution.heads[pump.discharge] - solution.heads[pump.suction]
        if duty.flow > 0:
            assert across == pytest.approx(duty.head, abs=1e-7)
        elif not np.isnan(across):
            assert across >= duty.head - 1e-5


@NETWORKS
@given(SEEDS, SEEDS)
def test_names_order_and_drawing_direction_change_nothing(seed, other):
    case = random_case(seed)
    twin, flows = renamed(case, other)
    first, second = solved(case), solved(twin)
    for tag, (new, sign) in flows.items():
        assert second.lines[new].flow * sign == pytest.approx(
            first.lines[tag].flow, rel=1e-6, abs=1e-7 * throughput(first) + 1e-8
        )
    for tag in case.system.pumps:
        assert second.pumps[tag].flow == pytest.approx(first.pumps[tag].flow, rel=1e-6, abs=1e-8)


@NETWORKS
@given(SEEDS, SEEDS)
def test_another_start_gives_the_same_answer(seed, other):
    (group,) = groups([random_case(seed)])
    net = group.network
    usual = newton.solve(net)
    random = np.random.default_rng(other)
    start = random.uniform(-3, 3, usual.flow.shape) * np.concatenate([net.area, net.curves.rated])
    again = newton.solve(net, start)
    scale = np.abs(usual.flow).max(initial=0)
    assert again.converged.all()
    assert np.allclose(again.flow, usual.flow, rtol=1e-6, atol=1e-7 * scale + 1e-8)


@settings(NETWORKS, max_examples=15)
@given(SEEDS)
def test_blocks_side_by_side_do_not_disturb_each_other(seed):
    """Networks solved as one set of blocks give what each gives alone, also beside one that is impossible."""
    case = random_case(seed)
    (group,) = groups([case])
    random = np.random.default_rng(seed)
    net = group.network.take(np.zeros(6, dtype=int))
    net.length[:] *= random.uniform(0.2, 5.0, net.length.shape)
    net.demand[:] *= np.array([1.0, 0.5, -2.0, 0.0, 30.0, 1.0])
    net.local[:, 4], net.length[:, 5] = 0.0, 0.0
    together = newton.solve(net)
    for block in range(6):
        alone = newton.solve(net.take(np.array([block])))
        assert alone.converged[0] == together.converged[block]
        scale = np.nan_to_num(np.abs(alone.flow)).max(initial=0)
        assert np.allclose(alone.flow[:, 0], together.flow[:, block], 1e-6, 1e-7 * scale + 1e-8, equal_nan=True)


@settings(NETWORKS, max_examples=15)
@given(SEEDS)
def test_both_linear_solvers_give_the_same_flows(seed):
    case = random_case(seed)
    first = solved(case)
    limit = linear.LARGEST_ELIMINATION
    try:
        linear.LARGEST_ELIMINATION = 0
        second = solved(case)
    finally:
        linear.LARGEST_ELIMINATION = limit
    for tag, line in first.lines.items():
        assert second.lines[tag].flow == pytest.approx(line.flow, rel=1e-6, abs=1e-7 * throughput(first) + 1e-8)


@NETWORKS
@given(SEEDS)
def test_the_second_method_agrees(seed):
    case = random_case(seed)
    project = b.project(case)
    solution = solve(project)
    (second,) = second_solutions(project, solution).values()
    assert second.converged
    first = solution.cases[case.id]
    for tag, found in (first.lines | first.pumps).items():
        assert second.flows[tag] == pytest.approx(found.flow, rel=1e-6, abs=1e-6 * throughput(first) + 1e-8)


@pytest.mark.parametrize("seed", range(INDEPENDENT))
def test_an_independent_root_search_agrees(seed):
    """All balances written out link by link with another library's friction factor, searched from 20 % away."""
    case = random_case(seed)
    solution = solved(case)
    balances = Balances(case, solution)
    found = balances.vector(solution)
    if not len(found):
        assert all(line.flow == 0 for line in solution.lines.values())
        return
    assert np.abs(balances(found)).max() < 1e-6
    start = found * np.random.default_rng(seed).uniform(0.8, 1.2, len(found))
    results = (root(balances, start, method=method, tol=1e-12).x for method in ("lm", "hybr"))
    best = min(results, key=lambda x: np.abs(balances(x)).max())
    flows = len(balances.open) + len(balances.pumping)
    scale = np.abs(found[:flows]).max(initial=0)
    assert np.allclose(best[:flows], found[:flows], rtol=1e-5, atol=1e-6 * scale + 1e-7)
