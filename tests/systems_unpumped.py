"""Published problems without a pump: gravity, stated flows and networks, each as a project folder.

Where a problem states a flow and asks for a head, the flow enters at a junction and the head there is read.
"""

from __future__ import annotations

import math
from itertools import pairwise
from pathlib import Path

from published_cases import PublishedCase, si
from system_projects import (
    Computed,
    Sketch,
    junction,
    line,
    liquid,
    loss,
    outlet,
    published_case,
    stated,
    stub,
    tank,
    water,
)
from systems_pumped import FANNING, STRESS, system

G = si("1 standard_gravity")


def pressure(made: Computed, head: float) -> float:
    """Pressure of a column of the liquid, Pa."""
    return made("liquid/rho@normal") * made("site/g") * head


def needed(case: PublishedCase, folder: Path, pipe: dict, end: dict, **more) -> Computed:
    """One line ``pipe`` from junction J-1, where the stated flow enters, to ``end``, which is N-2."""
    inflow = more.pop("inflow", None) or stated(case, "flow")
    return Sketch(nodes={"J-1": junction(inflow=inflow), "N-2": end}, lines={"L-1": pipe}, source=case.source,
                  **more).computed(folder)  # fmt: skip


@system("PS-03", "PS-04")
def two_pipes_and_a_rise(case, folder):
    """Elbow of each size at 14 f_T, and the enlargement on the small pipe; the 34 m pipe comes first.

    The pressure at the start is the total head there less elevation and velocity head.
    """
    whole = published_case("PS-03")
    beta = whole["inside_diameter_1"] / whole["inside_diameter_2"]
    factor, enlargement = whole["friction_factor"], (1 - beta**2) ** 2
    small = line("J-1", "J-2", stated(whole, "inside_diameter_1"), stated(whole, "length_1"), factor=factor,
                 k={"elbow": 14 * factor, "enlargement": f"{enlargement:.8g}"})  # fmt: skip
    large = line("J-2", "N-3", stated(whole, "inside_diameter_2"), stated(whole, "length_2"), factor=factor,
                 k={"elbow": 14 * factor, "exit": 1})  # fmt: skip
    made = Sketch(
        nodes={"J-1": junction(inflow=stated(whole, "flow")), "J-2": junction(),
               "N-3": outlet(stated(whole, "static_rise"))},
        lines={"L-1": small, "L-2": large}, liquid=liquid(stated(whole, "density")), source=whole.source,
    ).computed(folder)  # fmt: skip
    return {"pressure_difference": pressure(made, made.head("J-1") - made.at("L-1/V") ** 2 / (2 * G))}


def drain(case: PublishedCase, **friction: str) -> Sketch:
    """The tank of PS-05 draining through its line; ``friction`` is a factor or a roughness.

    Reduced seat of the ball valve: seat, gradual contraction and enlargement at the stated angles, on the seat bore.
    """
    beta, f_T = case["ball_seat"] / case["inside_diameter"], case["fT"]
    narrowing = 0.8 * math.sin(case["inlet_angle"] / 2) * (1 - beta**2)
    widening = 2.6 * math.sin(case["outlet_angle"] / 2) * (1 - beta**2) ** 2
    ball = (3 * f_T + narrowing + widening) / beta**4
    elbows = {"type": "elbow", "K": case["elbow_coefficient"] * f_T, "count": 6}
    pipe = line("T-1", "N-2", stated(case, "inside_diameter"), stated(case, "length"), fittings=[elbows],
                k={"entrance": 0.5, "ball_valve": f"{ball:.8g}", "exit": 1}, **friction)  # fmt: skip
    return Sketch(nodes={"T-1": tank(stated(case, "head")), "N-2": outlet("0 m")}, lines={"L-1": pipe},
                  liquid=liquid("1000 kg/m3"), source=case.source)  # fmt: skip


@system("PS-05")
def draining_tank(case, folder):
    """The friction factor is the fully turbulent one throughout, as in the source."""
    made = drain(case, factor=stated(case, "fT")).computed(folder)
    return {"velocity": made.at("L-1/V"), "flow": made.at("L-1/Q")}


@system("PS-07")
def reservoir_feeding_another(case, folder):
    k = {name: stated(case, f"K_{name}") for name in ("entrance", "two_elbows", "valve", "exit")}
    pipe = line("J-1", "N-2", stated(case, "diameter"), stated(case, "length"), roughness=stated(case, "roughness"),
                k=k)  # fmt: skip
    made = needed(case, folder, pipe, tank(stated(case, "elevation_2")),
                  liquid=liquid(stated(case, "density"), stated(case, "viscosity")))  # fmt: skip
    return {"elevation_1": made.head("J-1"), "friction_factor": made.at("L-1/f")}


@system("PS-12")
def sulphuric_acid(case, folder):
    """Pressure over the whole energy of the jet: lift, friction and one velocity head."""
    pipe = line("J-1", "N-2", stated(case, "diameter"), stated(case, "length"), factor=STRESS * case["phi"],
                k={"exit": 1})  # fmt: skip
    made = needed(case, folder, pipe, outlet(stated(case, "lift")),
                  inflow=f"{case['mass_flow'] / case['density']:.15g} m3/s",
                  liquid=liquid(stated(case, "density"), stated(case, "viscosity")))  # fmt: skip
    return {"pressure_drop": pressure(made, made.head("J-1"))}


@system("PS-23")
def solvent_between_tanks(case, folder):
    pipe = line("J-1", "N-2", stated(case, "diameter"), stated(case, "length"), factor=FANNING * case["fanning_factor"],
                k={"entrance": 0.5, "exit": 1})  # fmt: skip
    made = needed(case, folder, pipe, tank("0 m"), liquid=liquid(stated(case, "density"), stated(case, "viscosity")))
    return {"friction_pressure_drop": pressure(made, made.at("L-1/h_f")), "level_difference": made.head("J-1")}


@system("PS-24")
def feed_tank(case, folder):
    """The column is a closed tank at 55 kPa gauge."""
    pipe = line("J-1", "N-2", stated(case, "diameter"), stated(case, "length"), factor=FANNING * case["fanning_factor"],
                k={"fittings": stated(case, "K_fittings"), "exit": 1})  # fmt: skip
    made = needed(case, folder, pipe, tank("0 m", stated(case, "pressure", "gauge")),
                  inflow=f"{case['mass_flow'] / case['density']:.15g} m3/s",
                  liquid=liquid(stated(case, "density")))  # fmt: skip
    return {"height": made.head("J-1")}


@system("HL-18", "HL-19")
def small_bore_at_six_gpm(case, folder):
    """New steel, water of 60 degF by look-up."""
    pipe = line("J-1", "N-2", stated(case, "inside_diameter"), stated(case, "length"),
                roughness=stated(case, "roughness"), k={"exit": 0})  # fmt: skip
    made = needed(case, folder, pipe, tank("0 ft"), liquid=water(stated(case, "temperature")), units="US")
    return {"friction_loss": made.at("L-1/h_f")}


@system("HL-20")
def velocity_for_a_pressure_drop(case, folder):
    """A closed tank holds the pressure drop; the velocity is found."""
    roughness = f"{case['relative_roughness'] * case['diameter'] * 1000:.10g} mm"
    pipe = line("T-1", "T-2", stated(case, "diameter"), stated(case, "length"), roughness=roughness,
                k={"entrance": 0, "exit": 0})  # fmt: skip
    made = Sketch(nodes={"T-1": tank("0 m", stated(case, "pressure_drop", "gauge")), "T-2": tank("0 m")},
                  lines={"L-1": pipe}, liquid=liquid(stated(case, "density"), stated(case, "viscosity")),
                  source=case.source).computed(folder)  # fmt: skip
    return {"velocity": made.at("L-1/V")}


@system("HL-22")
def flow_for_a_head(case, folder):
    pipe = line("T-1", "T-2", stated(case, "diameter"), stated(case, "length"), roughness=stated(case, "roughness"),
                k={"entrance": 0, "exit": 0})  # fmt: skip
    made = Sketch(nodes={"T-1": tank(stated(case, "head_loss")), "T-2": tank("0 m")}, lines={"L-1": pipe},
                  liquid=liquid("1000 kg/m3", kinematic=stated(case, "kinematic_viscosity")),
                  source=case.source).computed(folder)  # fmt: skip
    return {"flow": made.at("L-1/Q")}


def _reservoirs(case: PublishedCase, nodes: dict, lines: dict, **more) -> Sketch:
    """A network whose ends lose nothing: entrance and exit are listed with K 0 where a line meets a tank."""
    for made in lines.values():
        ends = {"entrance": nodes[made["from"]]["type"] == "tank", "exit": nodes[made["to"]]["type"] == "tank"}
        made["fittings"] += [{"type": type_, "K": 0} for type_, there in ends.items() if there]
    fluid = more.pop("liquid", None) or liquid("1000 kg/m3", kinematic=stated(case, "kinematic_viscosity"))
    return Sketch(nodes=nodes, lines=lines, liquid=fluid, source=case.source, **more)


@system("NW-01")
def three_reservoirs(case, folder):
    def pipe(start, end, number):
        return line(start, end, stated(case, f"diameter_{number}"), stated(case, f"length_{number}"),
                    roughness=stated(case, "roughness"))  # fmt: skip

    nodes = {tag: tank(stated(case, f"elevation_{tag}")) for tag in "ABC"}
    nodes["J"] = junction(demand=stated(case, "demand"))
    made = _reservoirs(case, nodes, {"AJ": pipe("A", "J", 1), "BJ": pipe("B", "J", 2), "JC": pipe("J", "C", 3)})
    made = made.computed(folder)
    return {"flow_A_to_J": made.flow("AJ"), "flow_B_to_J": made.flow("BJ"), "flow_J_to_C": made.flow("JC")}


@system("NW-03")
def two_loops(case, folder):
    nodes = {"A": tank(stated(case, "reservoir_head_A")), "B": junction(), "E": junction()}
    nodes |= {tag: junction(demand=stated(case, f"demand_{tag}")) for tag in "CDF"}
    lines = {
        tag: line(*tag, stated(case, f"pipe_{tag}_diameter"), stated(case, f"pipe_{tag}_length"),
                  roughness=stated(case, "roughness"))
        for tag in ("AB", "BC", "AD", "BE", "CF", "DE", "EF")
    }  # fmt: skip
    made = _reservoirs(case, nodes, lines).computed(folder)
    return {"flow_AB": made.flow("AB"), "flow_CF": made.flow("CF")}


@system("NW-04", "NW-13")
def pipes_in_series(case, folder):
    """Three pipes, with given friction factors or roughness."""
    given = "f1" in case.inputs
    ends = ("T-1", "J-2", "J-3", "T-4")
    lines = {
        f"L-{i}": line(
            start, end, stated(case, f"D{i}"), stated(case, f"L{i}"), factor=stated(case, f"f{i}") if given else None,
            roughness=None if given else stated(case, f"e{i}"),
        )
        for i, (start, end) in enumerate(pairwise(ends), start=1)
    }
    head = stated(case, "head" if given else "head_loss")
    nodes = {"T-1": tank(head), "J-2": junction(), "J-3": junction(), "T-4": tank("0 m")}
    made = _reservoirs(case, nodes, lines, liquid=liquid("1000 kg/m3") if given else None).computed(folder)
    return {"flow": made.flow("L-3")}


@system("NW-06")
def two_tanks_to_a_third(case, folder):
    def pipe(start, end, name):
        return line(start, end, stated(case, f"diameter_{name}"), stated(case, f"length_{name}"),
                    factor=STRESS * case["phi"])  # fmt: skip

    nodes = {"A": tank(stated(case, "head_A")), "B": tank(stated(case, "head_B")), "C": tank("0 m"), "J": junction()}
    lines = {"AJ": pipe("A", "J", "branches"), "BJ": pipe("B", "J", "branches"), "JC": pipe("J", "C", "main")}
    fluid = liquid(stated(case, "density"), stated(case, "viscosity"))
    return {"flow_to_C": _reservoirs(case, nodes, lines, liquid=fluid).computed(folder).flow("JC")}


@system("NW-08")
def square_loop(case, folder):
    """Every side loses the stated pressure at 1 L/s, by the square of the flow: equipment in a short wide line."""
    head = case["coefficient"] * si("1 L/s") ** 2 / (1000 * G)
    law = {"law": "quadratic", "head": f"{head:.12g} m", "flow": "1 L/s"}
    sides = ("AB", "BC", "AD", "DC")
    nodes = {"A": junction(inflow=stated(case, "inflow_A")), "B": junction(inflow=stated(case, "inflow_B")),
             "C": tank("0 m"), "D": junction(demand="0.9 L/s")}  # fmt: skip
    made = _reservoirs(
        case, nodes, {tag: stub(*tag, "1 m", equipment=[f"R-{tag}"]) for tag in sides}, liquid=liquid("1000 kg/m3"),
        equipment={f"R-{tag}": loss("1 m") | {"states": {"only": law}} for tag in sides},
    ).computed(folder)
    lost = {f"dp_{tag}": pressure(made, made.at(f"R-{tag}/h_e")) for tag in sides}
    return {"flow_AB": made.flow("AB"), "flow_BC": made.flow("BC"), **lost}


@system("NW-11")
def parallel_pipes(case, folder):
    """Equal length and friction factor, whatever they are."""
    nodes = {"J": junction(inflow=stated(case, "total_flow")), "T": tank("0 m")}
    lines = {tag: line("J", "T", stated(case, f"diameter_{tag}"), "100 m", factor=0.02) for tag in "AB"}
    made = _reservoirs(case, nodes, lines, liquid=liquid("1000 kg/m3")).computed(folder)
    return {"flow_A": made.flow("A"), "flow_B": made.flow("B")}


@system("NW-14")
def rough_pipes_between_reservoirs(case, folder):
    """Flows towards the junction are positive in the source."""
    nodes = {f"T-{i}": tank(stated(case, f"elevation_{i}")) for i in (1, 2, 3)} | {"J": junction()}
    lines = {
        f"L-{i}": line(f"T-{i}", "J", stated(case, f"D{i}"), stated(case, f"L{i}"), roughness=stated(case, f"e{i}"))
        for i in (1, 2, 3)
    }
    made = _reservoirs(case, nodes, lines).computed(folder)
    return {f"flow_{i}": made.flow(f"L-{i}") for i in (1, 2, 3)} | {"junction_head": made.head("J")}
