"""How the published cases of pipe friction, fittings and US constants are worked out with the declared formulas."""

import math

from published_cases import STANDARD_GRAVITY as G
from published_cases import si, solves
from scipy.optimize import brentq

from calcpack.formulas import duty, fittings, liquid, pipe_flow, pump, surge
from calcpack.quantities import UNITS

WATER_60F = {"nu": si("1.217e-5 ft**2/s"), "rho": si("62.37 lb/ft**3")}  # as in the cases that state both


def loss_of(w, *, eps, D, L, Q, nu, rho=1000.0):
    """Friction head, m, and what leads to it."""
    V = w.velocity(Q, D)
    Re = w(pipe_flow.REYNOLDS, rho=rho, V=V, D=D, mu=nu * rho)
    f = w.darcy(eps, D, Re)
    return w(pipe_flow.FRICTION_HEAD, f=f, L=L, D=D, V=V, g=G), V, Re, f


@solves("friction", "FF-02")
def laminar_tube(case, w):
    Q = case["velocity"] * w(pipe_flow.AREA, D=case["diameter"])
    nu = w(liquid.KINEMATIC, mu=case["viscosity"], rho=case["density"])
    h, *_ = loss_of(w, eps=0.0, D=case["diameter"], L=case["length"], Q=Q, nu=nu, rho=case["density"])
    return {
        "head_loss": h,
        "pressure_drop": case["density"] * G * h,
        "pumping_power": w(pump.HYDRAULIC_POWER, rho=case["density"], g=G, Q=Q, H=h),
    }


@solves("friction", "FF-03")
def oil_in_a_sloping_pipe(case, w):
    nu = w(liquid.KINEMATIC, mu=case["viscosity"], rho=case["density"])
    h, _, Re, _ = loss_of(w, eps=0.0, D=case["diameter"], L=case["length"], Q=case["flow"], nu=nu)
    slope = w(pipe_flow.GRADIENT, h_f=h, L=case["length"])
    return {"Reynolds": Re, "pressure_drop": case["density"] * G * h, "slope_angle": -math.asin(slope)}


@solves("friction", "FF-04")
def glycerol(case, w):
    nu = w(liquid.KINEMATIC, mu=case["viscosity"], rho=case["density"])
    head = w(liquid.PRESSURE_HEAD, p=case["pressure_drop"], rho=case["density"], g=G)
    pipe = {"eps": 0.0, "D": case["diameter"], "L": case["length"], "nu": nu}
    Q = brentq(lambda q: loss_of(w, Q=q, **pipe)[0] - head, 1e-4, 0.05, xtol=1e-12)
    return {"flow": Q, "Reynolds": loss_of(w, Q=Q, **pipe)[2]}


@solves("friction", "FF-05", "FF-06", "FF-07", "FF-08", "FF-17")
def friction_factor(case, w):
    return {"friction_factor": w.darcy(case["relative_roughness"], 1.0, case["Reynolds"])}


@solves("friction", "FF-09")
def smooth_plastic(case, w):
    D = case["inside_diameter"]
    V = w.velocity(case["flow"], D)
    Re = w(pipe_flow.REYNOLDS, rho=case["density"], V=V, D=D, mu=case["viscosity"])
    return {"Reynolds": Re, "friction_factor": w.darcy(0.0, D, Re)}


@solves("friction", "FF-10")
def galvanised_fanning(case, w):
    h, _, _, f = loss_of(
        w, eps=case["roughness"], D=case["diameter"], L=case["length"], Q=case["flow"], nu=case["kinematic_viscosity"]
    )
    return {"fanning_factor": f / 4, "head_loss": h}


@solves("friction", "FF-12", "FF-13", "FF-14", "FF-16")
def fully_turbulent(case, w):
    return {"fT": w(fittings.FULLY_TURBULENT, eps_T=case["roughness"], D=case["inside_diameter"])}


@solves("friction", "FF-19")
def filling_a_glass(case, w):
    def reynolds(time):
        V = w.velocity(w(duty.DAILY_FLOW, V_d=case["volume"], t_d=time), case["diameter"])
        return w(pipe_flow.REYNOLDS, rho=case["density"], V=V, D=case["diameter"], mu=case["viscosity_50F"])

    return {
        "time_laminar_50F": brentq(lambda time: reynolds(time) - 2100, 1, 100),
        "time_turbulent_50F": brentq(lambda time: reynolds(time) - 4000, 1, 100),
    }


@solves("friction", "HL-01", "HL-02", "HL-03")
def friction_table(case, w):
    h, V, *_ = loss_of(
        w, eps=case["roughness"], D=case["inside_diameter"], L=case["length"], Q=case["flow"],
        nu=case["kinematic_viscosity"],
    )
    return {"velocity": V, "velocity_head": w(pipe_flow.VELOCITY_HEAD, V=V, g=G), "friction_loss": h}


@solves("friction", "HL-10")
def rule_of_fours(case, w):
    h, *_ = loss_of(
        w, eps=si("0.00015 ft"), D=case["inside_diameter"], L=case["length"], Q=case["flow"], nu=WATER_60F["nu"]
    )
    return {"pressure_drop": WATER_60F["rho"] * G * h}


@solves("friction", "HL-11")
def fuel_oil(case, w):
    h, *_ = loss_of(
        w, eps=case["roughness"], D=case["inside_diameter"], L=case["length"], Q=case["flow"],
        nu=case["kinematic_viscosity"],
    )
    drop = case["specific_gravity"] * WATER_60F["rho"] * G * h
    return {"pressure_drop": drop, "pressure_drop_psi": drop}


@solves("friction", "HL-12")
def long_water_line(case, w):
    h, *_ = loss_of(
        w, eps=case["roughness"], D=case["inside_diameter"], L=case["length"], Q=case["flow"], nu=WATER_60F["nu"]
    )
    return {
        "pressure_drop_per_100ft": WATER_60F["rho"] * G * h * si("100 ft") / case["length"],
        "hydraulic_power": w(pump.HYDRAULIC_POWER, rho=WATER_60F["rho"], g=G, Q=case["flow"], H=h),
    }


@solves("friction", "HL-13")
def long_water_line_power(case, w):
    h = w(liquid.PRESSURE_HEAD, p=case["pressure_drop"], rho=WATER_60F["rho"], g=G)
    return {"hydraulic_power": w(pump.HYDRAULIC_POWER, rho=WATER_60F["rho"], g=G, Q=case["flow"], H=h)}


@solves("friction", "HL-18", "HL-19")
def six_gallons_a_minute(case, w):
    h, *_ = loss_of(
        w, eps=case["roughness"], D=case["inside_diameter"], L=case["length"], Q=case["flow"], nu=WATER_60F["nu"]
    )
    return {"friction_loss": h}


@solves("friction", "HL-20")
def largest_velocity(case, w):
    D, nu = case["diameter"], case["viscosity"] / case["density"]
    head = w(liquid.PRESSURE_HEAD, p=case["pressure_drop"], rho=case["density"], g=G)
    area = w(pipe_flow.AREA, D=D)
    V = brentq(
        lambda v: loss_of(w, eps=case["relative_roughness"] * D, D=D, L=case["length"], Q=v * area, nu=nu)[0] - head,
        0.1, 10,
    )
    return {"velocity": V}


@solves("friction", "HL-22")
def flow_for_a_head(case, w):
    pipe = {"eps": case["roughness"], "D": case["diameter"], "L": case["length"], "nu": case["kinematic_viscosity"]}
    return {"flow": brentq(lambda q: loss_of(w, Q=q, **pipe)[0] - case["head_loss"], 0.004, 0.1, xtol=1e-9)}


@solves("friction", "HL-23")
def bore_for_a_head(case, w):
    pipe = {"eps": case["roughness"], "L": case["length"], "Q": case["flow"], "nu": case["kinematic_viscosity"]}
    return {"diameter": brentq(lambda d: loss_of(w, D=d, **pipe)[0] - case["head_loss"], 0.05, 1.0)}


@solves("fittings", "FT-02")
def angle_valve(case, w):
    D = case["inside_diameter"]
    K = w(fittings.COEFFICIENT, n=case["coefficient"], f_T=case["fT"])
    ratio = K / case["fT"]

    def excess(q):  # head loss less that of 1 bar at 1000 kg/m3, which defines Kv
        h = w(fittings.LOCAL_HEAD, K=K, V=w.velocity(q, D), g=G)
        return h - w(liquid.PRESSURE_HEAD, p=1e5, rho=1000.0, g=G)

    return {"K": K, "Kv": brentq(excess, 1e-3, 1.0), "equivalent_length_ratio": ratio, "equivalent_length": ratio * D}


def reduced_seat(w, n, f_T, seat, pipe):
    """K on the pipe bore of a valve with a reduced seat: seat, contraction and enlargement, on the seat bore first."""
    beta = seat / pipe
    changes = beta * (0.5 * (1 - beta**2) + (1 - beta**2) ** 2)
    K_1 = w(fittings.SUM_K, n=[1.0, 1.0], K_i=[w(fittings.COEFFICIENT, n=n, f_T=f_T), changes])
    return w(fittings.CONVERT_K, K_1=K_1, D_2=pipe, D_1=seat)


@solves("fittings", "FT-04")
def lift_check_valve(case, w):
    K = reduced_seat(w, 600.0, case["fT_valve"], case["valve_bore"], case["pipe_bore"])
    h = w(fittings.LOCAL_HEAD, K=K, V=w.velocity(case["flow"], case["pipe_bore"]), g=G)
    return {"K": K, "pressure_drop": case["density"] * G * h}


@solves("fittings", "FT-09")
def gradual_expansion(case, w):
    h = w(fittings.LOCAL_HEAD, K=case["K"], V=case["velocity_1"], g=G)
    V_2 = case["velocity_1"] * (case["diameter_1"] / case["diameter_2"]) ** 2
    gain = w(pipe_flow.VELOCITY_HEAD, V=case["velocity_1"], g=G) - w(pipe_flow.VELOCITY_HEAD, V=V_2, g=G)
    return {"head_loss": h, "pressure_2": case["pressure_1"] + case["density"] * G * (case["alpha"] * gain - h)}


GPM, INCH, FOOT = UNITS["US gpm"].factor, UNITS["in"].factor, UNITS["ft"].factor
PSI, HP, CST = UNITS["psi"].factor, UNITS["hp"].factor, UNITS["cSt"].factor


def _reynolds_constants(w):
    V = w.velocity(GPM, INCH)
    unit = {"rho": 1.0, "D": INCH, "mu": CST}
    return w(pipe_flow.REYNOLDS, V=V, **unit), w(pipe_flow.REYNOLDS, V=FOOT, **unit)


@solves("constants", *(f"CC-{number:02d}" for number in (*range(1, 9), *range(11, 20))))
def constant(case, w):
    g, water = case["g"], WATER_60F["rho"]
    V = w.velocity(GPM, INCH)
    by_id = {
        "CC-01": lambda: V / FOOT,
        "CC-02": lambda: w(pipe_flow.VELOCITY, Q=GPM, A=INCH**2) / FOOT,
        "CC-03": lambda: HP / w(pump.HYDRAULIC_POWER, rho=water, g=g, Q=GPM, H=FOOT),
        "CC-04": lambda: HP / w(pump.HYDRAULIC_POWER, rho=1.0, g=1.0, Q=GPM, H=PSI),
        "CC-05": lambda: w(liquid.PRESSURE_HEAD, p=PSI, rho=water, g=g) / FOOT,
        "CC-06": lambda: FOOT / w(liquid.PRESSURE_HEAD, p=PSI, rho=water, g=g),
        "CC-07": lambda: UNITS["ft³"].factor / UNITS["US gal"].factor,
        "CC-08": lambda: UNITS["ft³/s"].factor / GPM,
        "CC-11": lambda: 1e3 / w(pump.HYDRAULIC_POWER, rho=1e3, g=g, Q=UNITS["m³/h"].factor, H=1.0),
        "CC-12": lambda: _reynolds_constants(w)[0],
        "CC-13": lambda: _reynolds_constants(w)[1],
        "CC-14": lambda: w(fittings.LOCAL_HEAD, K=1.0, V=V, g=g) / FOOT,
        "CC-15": lambda: w(liquid.PRESSURE_HEAD, p=PSI, rho=water, g=g) / w(pipe_flow.VELOCITY_HEAD, V=V, g=g),
        "CC-16": lambda: g / UNITS["ft/s²"].factor,
        "CC-17": lambda: si("1 bar") / PSI,
        "CC-18": lambda: w(liquid.PRESSURE_HEAD, p=si("1 atm"), rho=water, g=g) / FOOT,
        "CC-19": lambda: w(surge.JOUKOWSKY_PRESSURE, rho=water, a=FOOT, V=FOOT) / PSI,
    }
    return {"constant": by_id[case.id]()}
