"""The published networks and duty points as projects, and the outputs each source prints, in SI."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from itertools import pairwise

import builders as b
from published_cases import PublishedCase, published, si

from calcpack.hydraulics import solve
from calcpack.hydraulics.solution import CaseSolution
from calcpack.project.model import System

WATER = 1000.0  # kg/m3, where a source states no density
NETWORKS: dict[str, tuple[str, Callable[[PublishedCase], Mapping[str, float]]]] = {}


def network(case_id: str, name: str = "networks"):
    """Enter a function that builds and solves a published case."""

    def enter(work):
        NETWORKS[case_id] = (name, work)
        return work

    return enter


def results(case_id: str) -> tuple[PublishedCase, Mapping[str, float]]:
    """The case and what the solver makes of it."""
    name, work = NETWORKS[case_id]
    case = published(name)[case_id]
    return case, work(case)


def solved(system: System, **options) -> CaseSolution:
    """The only case of ``system``; it must converge."""
    solution = solve(b.project(b.case("1", system, **options))).cases["1"]
    assert solution.convergence.converged, solution.findings
    return solution


def of_viscosity(nu: float) -> dict[str, tuple[float, float, float]]:
    """A liquid of kinematic viscosity ``nu`` (m2/s)."""
    return {"normal": (WATER, nu * WATER, 2000.0)}


@network("NW-01")
def three_reservoirs(case):
    def pipe(tag, start, end, number):
        return b.line(tag, start, end, length=case[f"length_{number}"], bore=case[f"diameter_{number}"],
                      roughness=case["roughness"])

    system = b.system(
        [*(b.tank(t, case[f"elevation_{t}"]) for t in "ABC"), b.junction("J", case["demand"])],
        [pipe("AJ", "A", "J", 1), pipe("BJ", "B", "J", 2), pipe("JC", "J", "C", 3)],
        liquids=of_viscosity(case["kinematic_viscosity"]),
    )
    lines = solved(system).lines
    return {"flow_A_to_J": lines["AJ"].flow, "flow_B_to_J": lines["BJ"].flow, "flow_J_to_C": lines["JC"].flow}


@network("NW-03")
def two_loops(case):
    pipes = [
        b.line(t, t[0], t[1], length=case[f"pipe_{t}_length"], bore=case[f"pipe_{t}_diameter"],
               roughness=case["roughness"])
        for t in ("AB", "BC", "AD", "BE", "CF", "DE", "EF")
    ]
    nodes = [b.tank("A", case["reservoir_head_A"]), b.junction("B"), b.junction("E"),
             *(b.junction(t, case[f"demand_{t}"]) for t in "CDF")]
    lines = solved(b.system(nodes, pipes, liquids=of_viscosity(case["kinematic_viscosity"]))).lines
    return {"flow_AB": lines["AB"].flow, "flow_CF": lines["CF"].flow}


@network("NW-04")
def series_of_given_factors(case):
    ends = ["1", "2", "3", "4"]
    pipes = [
        b.line(f"L{i + 1}", ends[i], ends[i + 1], length=case[f"L{i + 1}"], bore=case[f"D{i + 1}"],
               factor=case[f"f{i + 1}"])
        for i in range(3)
    ]
    system = b.system([b.tank("1", case["head"]), b.junction("2"), b.junction("3"), b.tank("4", 0.0)], pipes)
    return {"flow": solved(system).lines["L1"].flow}


@network("NW-06")
def two_tanks_to_a_third(case):
    factor = 8 * case["phi"]  # R / (rho u2) = f / 8
    branch = {"length": case["length_branches"], "bore": case["diameter_branches"], "factor": factor}
    system = b.system(
        [b.tank("A", case["head_A"]), b.tank("B", case["head_B"]), b.tank("C", 0.0), b.junction("J")],
        [b.line("AJ", "A", "J", **branch), b.line("BJ", "B", "J", **branch),
         b.line("JC", "J", "C", length=case["length_main"], bore=case["diameter_main"], factor=factor)],
        liquids={"normal": (case["density"], case["viscosity"], 2000.0)},
    )
    return {"flow_to_C": solved(system).lines["JC"].flow}


@network("NW-08")
def square_loop(case):
    """Each side is a loss coefficient on a 50 mm line, chosen so that it loses the stated pressure."""
    area = si("0.25 * 3.141592653589793 * 0.05**2 m**2")
    k = 2 * case["coefficient"] * area**2 / WATER
    inflows = {"A": case["inflow_A"], "B": case["inflow_B"], "D": -si("0.9 L/s")}
    nodes = [*(b.junction(t, -flow) for t, flow in inflows.items()), b.tank("C", 0.0)]
    sides = [b.line(t, t[0], t[1], length=0.0, bore=0.05, k=k) for t in ("AB", "BC", "AD", "DC")]
    solution = solved(b.system(nodes, sides, liquids=of_viscosity(1e-6)))
    lost = {t: WATER * b.GRAVITY * solution.lines[t].local_head for t in ("AB", "BC", "AD", "DC")}
    return {"flow_AB": solution.lines["AB"].flow, "flow_BC": solution.lines["BC"].flow,
            **{f"dp_{t}": value for t, value in lost.items()}}


@network("NW-11")
def parallel_pipes(case):
    pipes = [b.line(t, "1", "2", length=100.0, bore=case[f"diameter_{t}"], factor=0.02) for t in "AB"]
    lines = solved(b.system([b.junction("1", -case["total_flow"]), b.tank("2", 0.0)], pipes)).lines
    return {"flow_A": lines["A"].flow, "flow_B": lines["B"].flow}


def _three_pipes(case, ends):
    return [
        b.line(f"L{i}", *ends[i - 1], length=case[f"L{i}"], bore=case[f"D{i}"], roughness=case[f"e{i}"])
        for i in (1, 2, 3)
    ]


@network("NW-13")
def rough_pipes_in_series(case):
    nodes = [b.tank("1", case["head_loss"]), b.junction("2"), b.junction("3"), b.tank("4", 0.0)]
    pipes = _three_pipes(case, ["12", "23", "34"])
    return {"flow": solved(b.system(nodes, pipes, liquids=of_viscosity(case["kinematic_viscosity"]))).lines["L1"].flow}


@network("NW-14")
def rough_pipes_between_reservoirs(case):
    """Flows towards the junction are positive in the source."""
    nodes = [*(b.tank(str(i), case[f"elevation_{i}"]) for i in (1, 2, 3)), b.junction("J")]
    pipes = _three_pipes(case, ["1J", "2J", "3J"])
    solution = solved(b.system(nodes, pipes, liquids=of_viscosity(case["kinematic_viscosity"])))
    return {**{f"flow_{i}": solution.lines[f"L{i}"].flow for i in (1, 2, 3)}, "junction_head": solution.heads["J"]}


def _lift(static, pumps, *, length, bore, factor, k=0.0, running=1):
    """A pump (or several in series) lifting through one line with a given friction factor."""
    tags = [made.tag for made in pumps]
    feed = [b.line("feed", "T1", f"{tags[0]}.suction", length=0.0, bore=bore, k=1e-9)]
    between = [
        b.line(f"{one}-{two}", f"{one}.discharge", f"{two}.suction", length=0.0, bore=bore, k=1e-9)
        for one, two in pairwise(tags)
    ]
    main = b.line("main", f"{tags[-1]}.discharge", "T2", length=length, bore=bore, factor=factor, k=k)
    system = b.system([b.tank("T1", 0.0), b.tank("T2", static)], [*feed, *between, main], pumps)
    return solved(system, running=running)


@network("OP-04")
def tabulated_pump(case):
    flow = [i * 1e-3 for i in (0, 2, 4, 6, 8, 10)]
    head = [case[f"pump_H_at_{i}_L_s"] for i in (0, 2, 4, 6, 8, 10)]
    solution = _lift(case["static_head"], [b.pump("P", flow, head)], length=case["length"], bore=case["pipe_diameter"],
                     factor=4 * case["fanning_factor"], k=1.0)
    # The stated coefficient holds one velocity head besides the friction: the exit.
    main = solution.lines["main"]
    lost = (main.friction_head + main.local_head) / main.flow**2
    assert abs(lost / case["system_coefficient"] - 1) < 1e-3
    return {"flow": solution.pumps["P"].flow, "head": solution.pumps["P"].head}


@network("OP-09", "pumps")
def one_two_parallel_two_series(case):
    unit = si("1000 gallon/minute")
    flow = [i * unit for i in (0, 5, 10, 15, 20, 25)]
    head = [case["pump_shutoff_head"] - case["pump_coefficient_per_1000gpm_squared"] * (q / unit) ** 2 for q in flow]
    line = {"length": case["length"], "bore": case["diameter"], "factor": case["friction_factor"]}
    pump = b.pump("P1", flow, head)
    one = _lift(case["static_head"], [pump], **line)
    two = _lift(case["static_head"], [pump], running=2, **line)
    series = _lift(case["static_head"], [pump, b.pump("P2", flow, head)], **line)
    return {
        "flow_one": one.pumps["P1"].flow, "head_one": one.pumps["P1"].head,
        "flow_parallel": two.pumps["P1"].flow, "head_parallel": two.pumps["P1"].head,
        "flow_series": series.lines["main"].flow,
        "head_series": series.pumps["P1"].head + series.pumps["P2"].head,
    }


@network("HI-DUTY-1")
def data_book_duty(case):
    flow, head = ([case[f"{name}_{i}"] for i in (1, 2, 3, 4)] for name in ("flow", "head"))
    pump = b.pump("P", flow, head)
    line = {"length": case["length"], "bore": case["inside_diameter"], "factor": case["friction_factor"],
            "k": case["loss_coefficient"]}
    as_is = _lift(case["static_head"], [pump], **line)
    higher = _lift(case["static_head"] + case["added_static_head"], [pump], **line)
    return {"flow": as_is.pumps["P"].flow, "head": as_is.pumps["P"].head,
            "flow_with_added_head": higher.pumps["P"].flow}
