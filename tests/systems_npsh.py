"""Published NPSH problems as project folders: suction tank, suction line, pump; the delivery side is of no matter.

The chosen pump takes the flow that the problem states (any flow where none is stated, the losses being given).
"""

from __future__ import annotations

import math
from dataclasses import replace

from published_cases import PublishedCase, si
from system_projects import PUMP, Computed, Sketch, liquid, loss, outlet, stated, stub, tank
from systems_pumped import DISCHARGE, SUCTION, system

G = si("1 standard_gravity")
WIDE = "1 m"  # bore of a suction line whose losses are stated: without velocity head or friction worth the name
ANY_FLOW = "5 L/s"
WATER = 1000.0  # kg/m3, where heads are stated: the column that turns them into pressures and back


def suction(
    case: PublishedCase, *, level: str, fluid: dict, air: str, losses: tuple[str, ...] = (), gas: str | None = None,
    bore: str = WIDE, flow: str = ANY_FLOW,
) -> Sketch:
    """A tank whose level stands ``level`` above the datum, fixed ``losses``, and a free discharge 10 m above."""
    tags = [f"F-{number}" for number, _ in enumerate(losses, start=1)]
    return Sketch(
        nodes={"T-1": tank(level, gas), "N-2": outlet("10 m")},
        lines={"L-1": stub("T-1", SUCTION, bore, {"entrance": 0}, equipment=tags),
               "L-2": stub(DISCHARGE, "N-2", bore, {"exit": 1})},
        equipment=dict(zip(tags, map(loss, losses), strict=True)), liquid=fluid,
        site={"atmospheric_pressure": f"{air} absolute"}, flow=flow, source=case.source,
    )  # fmt: skip


def column(head: float) -> str:
    """Pressure text of a stated head."""
    return f"{WATER * G * head / 1000:.15g} kPa"


@system("NP-01", "NP-02", "NP-03")
def heads_as_stated(case, folder):
    """Every term is stated as a head; pressures are those of columns of water."""
    level = stated(case, "static_head" if "static_head" in case.inputs else "static_lift")
    second = "entrance_loss" if "entrance_loss" in case.inputs else "inlet_loss"
    flow = stated(case, "flow") if "flow" in case.inputs else ANY_FLOW
    sketch = suction(
        case, level=level, fluid=liquid("1000 kg/m3", vapour=f"{column(case['vapour_head'])} absolute"),
        air=column(case["atmospheric_head"]), losses=(stated(case, "friction_loss"), stated(case, second)), flow=flow,
    )  # fmt: skip
    made = replace(sketch, units="US").with_chosen_pump(folder, si(flow))
    return {"NPSHA": made.at(f"{PUMP}/NPSHA")}


@system("NP-05")
def benzene_lift(case, folder):
    """Twice: with the pump at the stated lift, and at the height found for 8 m, which must give 8 m."""
    fluid = liquid(stated(case, "density"), vapour=stated(case, "vapour_pressure", "absolute"))
    sketch = suction(case, level="0 m", fluid=fluid, air=stated(case, "atmospheric_pressure"),
                     bore=stated(case, "diameter"), flow=stated(case, "flow"))  # fmt: skip
    lifted = sketch.with_chosen_pump(folder / "lifted", case["flow"], elevation=stated(case, "lift"))
    height = case["lift"] + lifted.at(f"{PUMP}/NPSHA") - 8.0
    low = sketch.with_chosen_pump(folder / "low", case["flow"], elevation=f"{height:.12g} m")
    assert abs(low.at(f"{PUMP}/NPSHA") - 8.0) < 1e-6
    return {
        "dynamic_head": lifted.at("L-1/h_v"), "inlet_pressure": lifted.at(f"{PUMP}/p_s_abs"),
        "NPSHA": lifted.at(f"{PUMP}/NPSHA"), "height_for_8_m": height,
    }  # fmt: skip


def _lowest_level(made: Computed, level: float, required: float) -> float:
    """The level at which NPSHA has fallen to what is required: one falls with the other."""
    return level - (made.at(f"{PUMP}/NPSHA") - required)


@system("NP-06")
def tank_drawn_down(case, folder):
    """A closed tank under the stated absolute pressure, which is below atmospheric pressure."""
    fluid = liquid(stated(case, "density"), vapour=stated(case, "vapour_pressure", "absolute"))
    sketch = suction(
        case, level=stated(case, "initial_level"), fluid=fluid, air="101.325 kPa", flow=stated(case, "flow"),
        gas=f"{(case['surface_pressure'] - 101325) / 1000:.10g} kPa gauge", losses=(stated(case, "friction"),),
    )  # fmt: skip
    full = sketch.with_chosen_pump(folder / "full", case["flow"], elevation=stated(case, "suction_rise"))
    level = _lowest_level(full, case["initial_level"], case["NPSH"])
    sketch.nodes["T-1"] = tank(f"{level:.12g} m", sketch.nodes["T-1"]["gas_pressure"])
    low = sketch.with_chosen_pump(folder / "low", case["flow"], elevation=stated(case, "suction_rise"))
    assert abs(low.at(f"{PUMP}/NPSHA") - case["NPSH"]) < 1e-6
    volume = math.pi * case["tank_diameter"] ** 2 / 4 * (case["initial_level"] - level)
    return {"volume": volume, "time": volume / full.at(f"{PUMP}/Q")}


@system("NP-07")
def condensate_alarm_level(case, folder):
    """NPSHR by the stated correlation, 2.8 times the specific speed to 4/3 times the head."""
    required = 2.8 * case["specific_speed_dimensionless"] ** (4 / 3) * case["head"]
    fluid = liquid(stated(case, "density"), vapour=stated(case, "vapour_pressure", "absolute"))
    sketch = suction(
        case, level="3 m", fluid=fluid, air="101.325 kPa", losses=(stated(case, "friction"),),
        gas=f"{(case['surface_pressure'] - 101325) / 1000:.10g} kPa gauge",
    )  # fmt: skip
    made = sketch.with_chosen_pump(folder, si(ANY_FLOW), npshr=required)
    return {"level": _lowest_level(made, 3.0, required)}


@system("NP-09")
def hot_water_sump(case, folder):
    """The height at which the pressure at the inlet is the vapour pressure: NPSHA is then the velocity head."""
    bore = 0.1
    flow = case["velocity"] * math.pi * bore**2 / 4
    fluid = liquid(stated(case, "density"), vapour=stated(case, "vapour_pressure", "absolute"))
    sketch = suction(case, level="0 ft", fluid=fluid, air=stated(case, "atmospheric_pressure"),
                     losses=(stated(case, "loss"),), bore=f"{bore} m", flow=f"{flow:.15g} m3/s")  # fmt: skip
    made = replace(sketch, units="US").with_chosen_pump(folder / "low", flow, elevation="10 ft")
    height = si("10 ft") + made.at(f"{PUMP}/NPSHA") - made.at("L-1/h_v")
    top = sketch.with_chosen_pump(folder / "top", flow, elevation=f"{height:.12g} m")
    assert abs(top.at(f"{PUMP}/p_s_abs") - case["vapour_pressure"]) < 1.0
    return {"height": height}


@system("NP-11")
def pressurised_tank(case, folder):
    """The tank lies below the pump, which needs more than there is: the criterion is not met."""
    fluid = liquid(stated(case, "density"), vapour=stated(case, "vapour_pressure", "absolute"))
    sketch = suction(case, level=f"-{stated(case, 'lift')}", fluid=fluid, air="14.6959 psi",
                     gas=stated(case, "tank_gauge_pressure", "gauge"), losses=(stated(case, "friction"),))  # fmt: skip
    made = replace(sketch, units="US").with_chosen_pump(folder, si(ANY_FLOW), npshr=case["NPSHR"])
    assert made.verdict(f"npsh-margin/{PUMP}") == made.verdict(f"npsh-ratio/{PUMP}") == "criterion not met"
    return {"NPSHA": made.at(f"{PUMP}/NPSHA")}


@system("NP-13")
def pump_setting_by_suction_specific_speed(case, folder):
    """The stated vapour pressure is no water's at a pumping temperature: a check of the chain alone."""
    required = case["head"] * (case["specific_speed"] / case["suction_specific_speed"]) ** (4 / 3)
    fluid = liquid("1000 kg/m3", vapour=stated(case, "vapour_pressure", "absolute"))
    sketch = suction(case, level="0 m", fluid=fluid, air=column(case["atmospheric_head"]))
    made = sketch.with_chosen_pump(folder, si(ANY_FLOW), npshr=required)
    return {"elevation": made.at(f"{PUMP}/NPSHA") - required}
