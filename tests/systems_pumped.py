"""Published problems of pumped systems, each as a project folder; results by output of the case, SI."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import replace
from pathlib import Path

from published_cases import PublishedCase, Worksheet, si
from solutions_friction import reduced_seat
from system_projects import (
    PUMP,
    STUB,
    STUB_FACTOR,
    Computed,
    Sketch,
    junction,
    line,
    liquid,
    loss,
    outlet,
    pump,
    required_head,
    stated,
    stub,
    tank,
    water,
)

Solver = Callable[[PublishedCase, Path], Mapping[str, float]]
SYSTEMS: dict[str, Solver] = {}
SUCTION, DISCHARGE = f"{PUMP}.suction", f"{PUMP}.discharge"
FANNING, STRESS = 4, 8  # Darcy factor over Fanning's, and over R / (rho u2)


def system(*case_ids: str) -> Callable[[Solver], Solver]:
    """Enter a function that works out published cases through a project folder."""

    def enter(solver: Solver) -> Solver:
        for case_id in case_ids:
            assert case_id not in SYSTEMS, f"{case_id} is worked out twice"
            SYSTEMS[case_id] = solver
        return solver

    return enter


def lift(case: PublishedCase, main: dict, *, rise: str, suction: dict | None = None, **more) -> Sketch:
    """Tank and pump at the datum, one line ``main`` to a tank ``rise`` above; no suction pipe unless given."""
    bore = main["pipe"]["bore"]
    return Sketch(
        nodes={"T-1": tank("0 m"), "T-2": tank(rise)},
        lines={"L-1": suction or stub("T-1", SUCTION, bore, {"entrance": 0}), "L-2": main},
        source=case.source, **more,
    )


@system("PS-01")
def water_lifted_400_ft(case, folder):
    """30 of the 500 ft before the pump; elbows and gate by n, so with the program's own factor; no entrance listed."""
    check = reduced_seat(Worksheet(), 600.0, case["fT"], case["lift_check_bore"], case["inside_diameter"])
    pipe = {"bore": stated(case, "inside_diameter"), "roughness": stated(case, "roughness")}
    fittings = [{"type": "elbow", "n": 30, "count": 4}, {"type": "gate_valve", "n": 8}]
    sketch = lift(
        case,
        line(DISCHARGE, "T-2", length="470 ft", k={"lift_check_valve": f"{check:.8g}", "exit": 1}, fittings=fittings,
             **pipe),
        suction=line("T-1", SUCTION, length="30 ft", k={"entrance": 0}, **pipe),
        rise=stated(case, "static_lift"), liquid=liquid(stated(case, "density"), stated(case, "viscosity")),
        units="US", flow=stated(case, "flow"),
    )  # fmt: skip
    assert si("30 ft") + si("470 ft") == case["pipe_length"]
    made = sketch.with_chosen_pump(folder, case["flow"], case["pump_efficiency"])
    return {"total_head": required_head(made), "brake_power": made.at(f"{PUMP}/P_s")}


@system("PS-02")
def crude_oil_line(case, folder):
    main = line(DISCHARGE, "T-2", stated(case, "inside_diameter"), stated(case, "length"),
                roughness=stated(case, "roughness"), k={"exit": 0})  # fmt: skip
    sketch = lift(case, main, rise=stated(case, "static_lift"), units="US", flow=stated(case, "flow"),
                  liquid=liquid(stated(case, "density"), stated(case, "viscosity")))  # fmt: skip
    made = sketch.with_chosen_pump(folder, case["flow"], case["pump_efficiency"])
    return {"total_head": required_head(made), "brake_power": made.at(f"{PUMP}/P_s")}


@system("PS-10")
def nitric_acid(case, folder):
    """New and corroded pipe; hydraulic power, with the velocity head of the acid at the end."""
    flow = case["mass_flow"] / case["density"]
    power = {}
    for age in ("new", "old"):
        factor = STRESS * case[f"stanton_pannell_phi_{age}"]
        main = line(DISCHARGE, "T-2", stated(case, "diameter"), stated(case, "length"), factor=factor, k={"exit": 1})
        sketch = lift(case, main, rise=stated(case, "lift"), flow=f"{flow:.15g} m3/s",
                      liquid=liquid(stated(case, "density"), stated(case, "viscosity")))  # fmt: skip
        power[age] = sketch.with_chosen_pump(folder / age, flow).at(f"{PUMP}/P_h")
    return {"power_new": power["new"], "power_increase_old": power["old"] / power["new"] - 1}


def _exchanger_line(case: PublishedCase, length: str, density: str, folder: Path) -> Computed:
    main = line(DISCHARGE, "T-2", stated(case, "diameter"), length, factor=STRESS * case["phi"], k={"exit": 1},
                equipment=["E-1"])  # fmt: skip
    sketch = lift(case, main, rise=stated(case, "lift"), equipment={"E-1": loss(stated(case, "exchanger_loss"))},
                  liquid=liquid(density), flow=stated(case, "flow"))  # fmt: skip
    return sketch.with_chosen_pump(folder, case["flow"], case["efficiency"])


@system("PS-11")
def heat_exchanger_line(case, folder):
    """The source adds the lift and 290 diameters for the fittings to the length of the pipe."""
    length = case["length"] + case["lift"] + case["fittings"] * case["diameter"]
    made = _exchanger_line(case, f"{length:.10g} m", stated(case, "density"), folder)
    return {"power": made.at(f"{PUMP}/P_s"), "outlet_pressure_gauge": made.at(f"{PUMP}/p_d")}


@system("PS-14")
def similar_exchanger_line(case, folder):
    made = _exchanger_line(case, stated(case, "equivalent_length"), "1000 kg/m3", folder)
    return {"power": made.at(f"{PUMP}/P_s")}


@system("PS-15")
def reservoir_200_ft_higher(case, folder):
    """The printed power counts the discharge velocity head besides the exit loss; ours counts it once.

    ``power`` is ours with that velocity head added again, ``power_counted_once`` what the program gives.
    """
    main = line(DISCHARGE, "T-2", stated(case, "diameter"), stated(case, "length"),
                factor=FANNING * case["fanning_factor"],
                k={"fittings": f"{case['sum_K'] - 1:.10g}", "exit": 1})  # fmt: skip
    sketch = lift(case, main, rise=stated(case, "lift"), units="US", flow=stated(case, "flow"),
                  liquid=liquid(stated(case, "density"), stated(case, "viscosity")))  # fmt: skip
    made = sketch.with_chosen_pump(folder, case["flow"], case["efficiency"])
    once, head, again = made.at(f"{PUMP}/P_s"), made.at(f"{PUMP}/H"), made.at("L-2/h_v")
    return {
        "friction_in_pipe": made.at("L-2/h_f"), "total_friction": made.at("L-2/h_L"), "Reynolds": made.at("L-2/Re"),
        "power": once * (head + again) / head, "power_counted_once": once,
    }  # fmt: skip


@system("PS-18")
def arctic_oil_line(case, folder):
    """Both ends at one level; the specific weight in lbf/ft3 is the density in lb/ft3."""
    main = line(DISCHARGE, "T-2", stated(case, "diameter"), stated(case, "length"), factor=case["friction_factor"],
                k={"exit": 0})  # fmt: skip
    density = stated(case, "specific_weight").replace("lbf", "lb")
    sketch = lift(case, main, rise="0 ft", units="US", flow=stated(case, "flow"), liquid=liquid(density))
    made = sketch.with_chosen_pump(folder, case["flow"])
    return {"pump_head": required_head(made), "power": made.at(f"{PUMP}/P_h")}


@system("PS-19")
def two_inch_line(case, folder):
    """Gravity of the source, 32.2 ft/s2; the entrance stands in the sum of coefficients of the one line."""
    roughness = f"{case['relative_roughness'] * case['diameter'] / si('1 ft'):.10g} ft"
    main = line(DISCHARGE, "T-2", stated(case, "diameter"), stated(case, "length"), roughness=roughness,
                k={"fittings": f"{case['sum_K'] - 1:.10g}", "exit": 1})  # fmt: skip
    sketch = lift(case, main, rise=stated(case, "lift"), units="US", flow=stated(case, "flow"),
                  site={"gravity": "32.2 ft/s2"},
                  liquid=liquid(stated(case, "density"), kinematic=stated(case, "kinematic_viscosity")))  # fmt: skip
    made = sketch.with_chosen_pump(folder, case["flow"])
    return {
        "velocity": made.at("L-2/V"), "Reynolds": made.at("L-2/Re"), "friction_factor": made.at("L-2/f"),
        "pump_head": required_head(made), "power": made.at(f"{PUMP}/P_h"),
    }  # fmt: skip


@system("PS-21")
def nozzle(case, folder):
    """The pump gives 50 m at any flow, as stated: the flow is found. The nozzle is a line of its own bore."""
    flat = pump([[q, case["pump_head"]] for q in (0, 20, 40, 60)], {"flow": "L/s", "head": "m"}, "40 L/s",
                elevation=stated(case, "pump_elevation"))  # fmt: skip
    made = Sketch(
        nodes={"T-1": tank("0 m"), "J-1": junction(stated(case, "nozzle_elevation")),
               "N-1": outlet(stated(case, "nozzle_elevation"))},
        lines={
            "L-1": stub("T-1", SUCTION, stated(case, "suction_diameter"), {"entrance": stated(case, "K_suction")}),
            "L-2": stub(DISCHARGE, "J-1", stated(case, "delivery_diameter"), {"losses": stated(case, "K_delivery")}),
            "L-3": stub("J-1", "N-1", stated(case, "nozzle_diameter"), {"exit": 1}),
        },
        pumps={PUMP: flat}, liquid=liquid("1000 kg/m3"), source=case.source,
    ).computed(folder)  # fmt: skip
    return {"jet_velocity": made.at("L-3/V"), "suction_pressure_magnitude": -made.at(f"{PUMP}/p_s")}


@system("PS-25")
def similar_pump(case, folder):
    """Pipe for 2 m/s; control valve and other losses are a quarter of the whole head, so a third of the rest.

    The speed is the one at which the chosen pump has the specific speed of the model pump.
    """
    flow, length = case["flow"], case["suction_length"] + case["delivery_length"]
    bore = math.sqrt(4 * flow / (math.pi * case["velocity"]))
    main = line(DISCHARGE, "T-2", f"{bore:.10g} m", f"{length:.10g} m", factor=FANNING * case["fanning_factor"],
                k={"exit": 1})  # fmt: skip
    sketch = lift(case, main, rise=stated(case, "lift"), liquid=liquid("1000 kg/m3"), flow=stated(case, "flow"))
    sketch.nodes["T-2"]["gas_pressure"] = stated(case, "pressure_rise", "gauge")
    bare = sketch.with_chosen_pump(folder / "bare", flow).at(f"{PUMP}/H")
    share = case["loss_fraction"]
    main["equipment"] = ["CV-1"]
    sketch = replace(sketch, equipment={"CV-1": loss(f"{bare * share / (1 - share):.12g} m")})
    chosen = sketch.with_chosen_pump(folder / "whole", flow, case["efficiency"], speed="2460 rpm")
    model = lift(case, line(DISCHARGE, "T-2", "150 mm", STUB, factor=STUB_FACTOR, k={"exit": 0}), liquid=sketch.liquid,
                 rise=stated(case, "model_head"), flow=stated(case, "model_flow"))  # fmt: skip
    model = model.with_chosen_pump(folder / "model", case["model_flow"], speed=f"{60 * case['model_speed']:g} rpm")
    assert abs(model.at(f"{PUMP}/H") - case["model_head"]) < 1e-3
    speed = si(case.expected["speed"]) * model(f"{PUMP}/n_s") / chosen(f"{PUMP}/n_s")
    return {"differential_head": required_head(chosen), "speed": speed, "power": chosen.at(f"{PUMP}/P_s")}


@system("PS-27")
def lift_above_a_reservoir(case, folder):
    """The 2 ft of friction are stated as such; the pipe of 65 ft adds a thousandth of a foot."""
    bore = 2 * math.sqrt(case["area"] / math.pi)
    flow = case["mass_flow"] / case["density"]
    main = line(DISCHARGE, "T-2", f"{bore:.10g} m", stated(case, "rise"), factor=0.02, k={"exit": 1},
                equipment=["F-1"])  # fmt: skip
    sketch = lift(case, main, rise=stated(case, "rise"), equipment={"F-1": loss(stated(case, "friction_head"))},
                  liquid=liquid(stated(case, "density")), units="US", flow=f"{flow:.15g} m3/s")  # fmt: skip
    made = sketch.with_chosen_pump(folder, flow)
    return {"velocity": made.at("L-2/V"), "pump_head": required_head(made)}


@system("PS-28")
def pump_test(case, folder):
    """Gauges as closed tanks: the reading is the gas pressure, the suction velocity head the level.

    The exit loses the velocity head of the discharge. The pump ports must then show the gauge readings again.
    """
    area = math.pi * case["suction_diameter"] ** 2 / 4
    h_v = (case["flow"] / area) ** 2 / (2 * si("1 standard_gravity"))
    rise = stated(case, "gauge_elevation_difference")
    sketch = Sketch(
        nodes={"T-1": tank(f"{h_v:.12g} m", stated(case, "suction_gauge", "gauge")),
               "T-2": tank(rise, stated(case, "discharge_gauge", "gauge"))},
        lines={"L-1": stub("T-1", SUCTION, stated(case, "suction_diameter"), {"entrance": 0}),
               "L-2": stub(DISCHARGE, "T-2", stated(case, "discharge_diameter"), {"exit": 1})},
        liquid=liquid("62.4 lb/ft3"), units="US", flow=stated(case, "flow"), source=case.source,
    )  # fmt: skip
    made = sketch.with_chosen_pump(folder, case["flow"])
    column = si("62.4 lb/ft**3") * si("1 standard_gravity")
    assert abs(made.at(f"{PUMP}/p_s") - case["suction_gauge"]) < 10
    assert abs(made.at(f"{PUMP}/p_d") - case["discharge_gauge"] - column * case["gauge_elevation_difference"]) < 10
    return {"power": made.at(f"{PUMP}/P_h")}


@system("HL-12")
def three_inch_line(case, folder):
    """Water of 60 degF by look-up; both ends at one level."""
    main = line(DISCHARGE, "T-2", stated(case, "inside_diameter"), stated(case, "length"),
                roughness=stated(case, "roughness"), k={"exit": 0})  # fmt: skip
    sketch = lift(case, main, rise="0 ft", units="US", flow=stated(case, "flow"), liquid=water("60 degF"))
    made = sketch.with_chosen_pump(folder, case["flow"])
    drop = made("liquid/rho@normal") * made("site/g") * made.at("L-2/h_f") * si("100 ft") / case["length"]
    return {"pressure_drop_per_100ft": drop, "hydraulic_power": made.at(f"{PUMP}/P_h")}
