"""How the published cases of whole systems are worked out with the declared formulas, step by step.

Where a case states a friction factor read from a chart, that factor is used: Fanning f times 4, R/(rho u2) times 8.
"""

import math

from published_cases import STANDARD_GRAVITY as G
from published_cases import si, solves
from scipy.optimize import brentq
from solutions_friction import loss_of, reduced_seat

from calcpack.formulas import duty, fittings, grade, liquid, pipe_flow, pump, suction

FANNING, STRESS = 4, 8


def losses(w, *, f, L, D, V, K=0.0):
    """Friction plus local head of one line, m."""
    h_f = w(pipe_flow.FRICTION_HEAD, f=f, L=L, D=D, V=V, g=G)
    return w(fittings.LINE_HEAD_PIPE, h_f=h_f, h_m=w(fittings.LOCAL_HEAD, K=K, V=V, g=G))


def total(w, static, *heads):
    return w(duty.TOTAL_HEAD, H_st=static, h_L=list(heads))


def shaft_power(w, rho, Q, H, eta):
    return w(pump.SHAFT_POWER, P_h=w(pump.HYDRAULIC_POWER, rho=rho, g=G, Q=Q, H=H), eta=eta)


@solves("systems_by_formula", "PS-01")
def water_lifted_400_ft(case, w):
    D, f_T = case["inside_diameter"], case["fT"]
    nu = w(liquid.KINEMATIC, mu=case["viscosity"], rho=case["density"])
    h_f, V, *_ = loss_of(
        w, eps=case["roughness"], D=D, L=case["pipe_length"], Q=case["flow"], nu=nu, rho=case["density"]
    )
    elbow, gate = (w(fittings.COEFFICIENT, n=n, f_T=f_T) for n in (30.0, 8.0))
    check = reduced_seat(w, 600.0, f_T, case["lift_check_bore"], D)
    K = w(fittings.SUM_K, n=[4.0, 1.0, 1.0, 1.0], K_i=[elbow, gate, check, 1.0])  # the last is the exit
    H = total(w, case["static_lift"], h_f, w(fittings.LOCAL_HEAD, K=K, V=V, g=G))
    return {
        "total_head": H,
        "brake_power": shaft_power(w, case["density"], case["flow"], H, case["pump_efficiency"]),
    }


@solves("systems_by_formula", "PS-02")
def crude_oil_line(case, w):
    nu = w(liquid.KINEMATIC, mu=case["viscosity"], rho=case["density"])
    h, *_ = loss_of(
        w, eps=case["roughness"], D=case["inside_diameter"], L=case["length"], Q=case["flow"], nu=nu,
        rho=case["density"],
    )
    H = total(w, case["static_lift"], h)
    return {
        "total_head": H,
        "brake_power": shaft_power(w, case["density"], case["flow"], H, case["pump_efficiency"]),
    }


@solves("systems_by_formula", "PS-03")
def two_pipes_and_a_rise(case, w):
    """The 90 degree elbow of each size at 14 f_T and the change of velocity head; enlargement on the small pipe."""
    f, D_1, D_2 = case["friction_factor"], case["inside_diameter_1"], case["inside_diameter_2"]
    V_1, V_2 = w.velocity(case["flow"], D_1), w.velocity(case["flow"], D_2)
    elbow = w(fittings.COEFFICIENT, n=14.0, f_T=f)
    enlargement = (1 - (D_1 / D_2) ** 2) ** 2
    small = losses(w, f=f, L=case["length_1"], D=D_1, V=V_1, K=elbow + enlargement)
    large = losses(w, f=f, L=case["length_2"], D=D_2, V=V_2, K=elbow)
    H_1 = total(w, case["static_rise"], small, large, w(pipe_flow.VELOCITY_HEAD, V=V_2, g=G))
    h_v = w(pipe_flow.VELOCITY_HEAD, V=V_1, g=G)
    p = w(suction.PORT_PRESSURE, rho=case["density"], g=G, H=H_1, z=0.0, h_v=h_v)
    return {"pressure_difference": p}


@solves("systems_by_formula", "PS-04")
def rise_alone(case, w):
    return {"pressure_difference": w(suction.PORT_PRESSURE, rho=999.1, g=G, H=case["static_rise"], z=0.0, h_v=0.0)}


@solves("systems_by_formula", "PS-05")
def draining_tank(case, w):
    D, f_T = case["inside_diameter"], case["fT"]
    beta = case["ball_seat"] / D
    # Reduced seat: gradual contraction at the inlet angle, gradual enlargement at the outlet angle, on the seat bore.
    inlet = 0.8 * math.sin(case["inlet_angle"] / 2) * (1 - beta**2)
    outlet = 2.6 * math.sin(case["outlet_angle"] / 2) * (1 - beta**2) ** 2
    ball = w(fittings.COEFFICIENT, n=3.0, f_T=f_T)
    valve = w(fittings.CONVERT_K, K_1=ball + inlet + outlet, D_2=D, D_1=case["ball_seat"])
    elbow = w(fittings.COEFFICIENT, n=case["elbow_coefficient"], f_T=f_T)
    K = w(fittings.SUM_K, n=[1.0, 6.0, 1.0, 1.0], K_i=[0.5, elbow, valve, 1.0])  # entrance first, exit last
    V = brentq(lambda v: losses(w, f=f_T, L=case["length"], D=D, V=v, K=K) - case["head"], 0.1, 20)
    return {"velocity": V, "flow": V * w(pipe_flow.AREA, D=D)}


@solves("systems_by_formula", "PS-07")
def reservoir_feeding_another(case, w):
    nu = w(liquid.KINEMATIC, mu=case["viscosity"], rho=case["density"])
    h_f, V, _, f = loss_of(
        w, eps=case["roughness"], D=case["diameter"], L=case["length"], Q=case["flow"], nu=nu, rho=case["density"]
    )
    K = w(
        fittings.SUM_K, n=[1.0] * 4,
        K_i=[case[name] for name in ("K_entrance", "K_two_elbows", "K_valve", "K_exit")],
    )
    H = total(w, case["elevation_2"], h_f, w(fittings.LOCAL_HEAD, K=K, V=V, g=G))
    return {"elevation_1": H, "friction_factor": f}


@solves("systems_by_formula", "PS-10")
def nitric_acid(case, w):
    Q = case["mass_flow"] / case["density"]
    V = w.velocity(Q, case["diameter"])
    power = {}
    for age in ("new", "old"):
        f = STRESS * case[f"stanton_pannell_phi_{age}"]
        H = total(w, case["lift"], losses(w, f=f, L=case["length"], D=case["diameter"], V=V))
        power[age] = w(pump.HYDRAULIC_POWER, rho=case["density"], g=G, Q=Q, H=H)
    return {"power_new": power["new"], "power_increase_old": power["old"] / power["new"] - 1}


@solves("systems_by_formula", "PS-11")
def heat_exchanger_line(case, w):
    D, V = case["diameter"], w.velocity(case["flow"], case["diameter"])
    L = case["length"] + case["lift"] + case["fittings"] * D
    h = losses(w, f=STRESS * case["phi"], L=L, D=D, V=V)
    H = total(w, case["lift"], h, w(fittings.SUM_EQUIPMENT, h_i=[case["exchanger_loss"]]))
    return {
        "power": shaft_power(w, case["density"], case["flow"], H, case["efficiency"]),
        "outlet_pressure_gauge": w(suction.PORT_PRESSURE, rho=case["density"], g=G, H=H, z=0.0, h_v=0.0),
    }


@solves("systems_by_formula", "PS-12")
def sulphuric_acid(case, w):
    """Pressure over the whole energy of the jet: lift, friction and one velocity head."""
    D = case["diameter"]
    V = w.velocity(case["mass_flow"] / case["density"], D)
    H = total(w, case["lift"], losses(w, f=STRESS * case["phi"], L=case["length"], D=D, V=V, K=1.0))
    return {"pressure_drop": w(suction.PORT_PRESSURE, rho=case["density"], g=G, H=H, z=0.0, h_v=0.0)}


@solves("systems_by_formula", "PS-14")
def similar_exchanger_line(case, w):
    V = w.velocity(case["flow"], case["diameter"])
    h = losses(w, f=STRESS * case["phi"], L=case["equivalent_length"], D=case["diameter"], V=V)
    H = total(w, case["lift"], h, case["exchanger_loss"])
    return {"power": shaft_power(w, 1000.0, case["flow"], H, case["efficiency"])}


@solves("systems_by_formula", "PS-15")
def reservoir_200_ft_higher(case, w):
    """As printed: the exit loss in the sum of K and the discharge velocity head besides."""
    D, V = case["diameter"], w.velocity(case["flow"], case["diameter"])
    pipe = {"f": FANNING * case["fanning_factor"], "L": case["length"], "D": D, "V": V}
    with_fittings = losses(w, **pipe, K=case["sum_K"])
    H = total(w, case["lift"], with_fittings, w(pipe_flow.VELOCITY_HEAD, V=V, g=G))
    return {
        "friction_in_pipe": losses(w, **pipe),
        "total_friction": with_fittings,
        "power": shaft_power(w, case["density"], case["flow"], H, case["efficiency"]),
        "Reynolds": w(pipe_flow.REYNOLDS, rho=case["density"], V=V, D=D, mu=case["viscosity"]),
    }


@solves("systems_by_formula", "PS-16")
def turpentine(case, w):
    h_v = w(pipe_flow.VELOCITY_HEAD, V=case["velocity"], g=G)
    after = w(grade.HEAD_AFTER, H_1=case["efficiency"] * case["work_per_mass"], h_L=case["lift"])
    area = case["area"]
    flow = brentq(lambda q: w(pipe_flow.VELOCITY, Q=q, A=area) - case["velocity"], 0.0, 1.0, xtol=1e-12)
    return {"friction": w(grade.HYDRAULIC_GRADE, H=after, h_v=h_v), "flow": flow}


@solves("systems_by_formula", "PS-18")
def arctic_oil_line(case, w):
    H = total(
        w, 0.0, losses(w, f=case["friction_factor"], L=case["length"], D=case["diameter"], V=case["velocity"])
    )
    rho = case["specific_weight"] / G
    return {"pump_head": H, "power": w(pump.HYDRAULIC_POWER, rho=rho, g=G, Q=case["flow"], H=H)}


@solves("systems_by_formula", "PS-19")
def two_inch_line(case, w):
    D, g = case["diameter"], si("32.2 ft/s**2")  # gravity of the source
    V = w.velocity(case["flow"], D)
    Re = w(pipe_flow.REYNOLDS, rho=case["density"], V=V, D=D, mu=case["kinematic_viscosity"] * case["density"])
    f = w.darcy(case["relative_roughness"] * D, D, Re)
    h_f = w(pipe_flow.FRICTION_HEAD, f=f, L=case["length"], D=D, V=V, g=g)
    H = total(w, case["lift"], h_f, w(fittings.LOCAL_HEAD, K=case["sum_K"], V=V, g=g))
    return {
        "velocity": V, "Reynolds": Re, "friction_factor": f, "pump_head": H,
        "power": w(pump.HYDRAULIC_POWER, rho=case["density"], g=g, Q=case["flow"], H=H),
    }


@solves("systems_by_formula", "PS-21")
def nozzle(case, w):
    def in_pipe(jet, name):
        V = jet * (case["nozzle_diameter"] / case[f"{name}_diameter"]) ** 2
        h_v = w(pipe_flow.VELOCITY_HEAD, V=V, g=G)
        return w(fittings.LOCAL_HEAD, K=case[f"K_{name}"], V=V, g=G), h_v

    def surplus(jet):
        h_v = w(pipe_flow.VELOCITY_HEAD, V=jet, g=G)
        heads = (in_pipe(jet, "suction")[0], in_pipe(jet, "delivery")[0], h_v)
        return total(w, case["nozzle_elevation"], *heads) - case["pump_head"]

    jet = brentq(surplus, 0.1, 30.0)
    loss, h_v = in_pipe(jet, "suction")
    H = w(grade.HEAD_AFTER, H_1=0.0, h_L=loss)
    p = w(suction.PORT_PRESSURE, rho=1000.0, g=G, H=H, z=case["pump_elevation"], h_v=h_v)
    assert p < 0
    return {"jet_velocity": jet, "suction_pressure_magnitude": -p}


@solves("systems_by_formula", "PS-23")
def solvent_between_tanks(case, w):
    D, V = case["diameter"], w.velocity(case["flow"], case["diameter"])
    pipe = {"f": FANNING * case["fanning_factor"], "L": case["length"], "D": D, "V": V}
    drop = w(suction.PORT_PRESSURE, rho=case["density"], g=G, H=losses(w, **pipe), z=0.0, h_v=0.0)
    return {"friction_pressure_drop": drop, "level_difference": losses(w, **pipe, K=0.5 + 1.0)}


@solves("systems_by_formula", "PS-24")
def feed_tank(case, w):
    D, rho = case["diameter"], case["density"]
    V = w.velocity(case["mass_flow"] / rho, D)
    h = losses(w, f=FANNING * case["fanning_factor"], L=case["length"], D=D, V=V, K=case["K_fittings"])
    column = w(duty.TANK_HEAD, z=0.0, p_g=case["pressure"], rho=rho, g=G)
    return {"height": total(w, column, h, w(pipe_flow.VELOCITY_HEAD, V=V, g=G))}


@solves("systems_by_formula", "PS-25")
def similar_pump(case, w):
    """The printed 27.96 m are friction, exit, lift and pressure over 1 - 0.25, with water at 1000 kg/m3."""
    V, rho = case["velocity"], 1000.0
    area = case["flow"] / V
    D = brentq(lambda d: w(pipe_flow.AREA, D=d) - area, 0.01, 1.0)
    L = case["suction_length"] + case["delivery_length"]
    h = losses(w, f=FANNING * case["fanning_factor"], L=L, D=D, V=V, K=1.0)
    static = w(duty.TANK_HEAD, z=case["lift"], p_g=case["pressure_rise"], rho=rho, g=G)
    H = total(w, static, h) / (1 - case["loss_fraction"])
    model = w(pump.SPECIFIC_SPEED, n=case["model_speed"], Q=case["model_flow"], H=case["model_head"])
    speed = brentq(
        lambda n: w(pump.SPECIFIC_SPEED, n=n, Q=case["flow"], H=H) - model, 1.0, 500.0, xtol=1e-9
    )
    return {
        "differential_head": H, "speed": speed,
        "power": shaft_power(w, rho, case["flow"], H, case["efficiency"]),
    }


@solves("systems_by_formula", "PS-27")
def lift_above_a_reservoir(case, w):
    V = w(pipe_flow.VELOCITY, Q=case["mass_flow"] / case["density"], A=case["area"])
    H = total(w, case["rise"], case["friction_head"], w(pipe_flow.VELOCITY_HEAD, V=V, g=G))
    return {"velocity": V, "pump_head": H}


@solves("systems_by_formula", "PS-28")
def pump_test(case, w):
    rho = 1000.0  # cold water; the product rho H does not depend on it but for lift and velocity head

    def head(gauge, elevation, D):
        h = w(liquid.PRESSURE_HEAD, p=gauge, rho=rho, g=G)
        h_v = w(pipe_flow.VELOCITY_HEAD, V=w.velocity(case["flow"], D), g=G)
        return h + elevation + h_v

    H_d = head(case["discharge_gauge"], case["gauge_elevation_difference"], case["discharge_diameter"])
    H = w(pump.PUMP_HEAD, H_d=H_d, H_s=head(case["suction_gauge"], 0.0, case["suction_diameter"]))
    return {"power": w(pump.HYDRAULIC_POWER, rho=rho, g=G, Q=case["flow"], H=H)}
