"""How the published cases of air pressure, NPSH, pumps, power and surge are worked out with the declared formulas."""

from published_cases import STANDARD_GRAVITY as G
from published_cases import si, solves
from scipy.optimize import brentq
from solutions_friction import WATER_60F, loss_of

from calcpack.formulas import duty, fittings, liquid, pipe_flow, pump, suction, surge
from calcpack.quantities import UNITS

US_SPECIFIC_SPEED = (UNITS["m³/s"].factor / UNITS["US gpm"].factor) ** 0.5 / (1 / UNITS["ft"].factor) ** 0.75


@solves("atmosphere", "WP-23", "WP-24", "WP-25", "WP-26")
def air_pressure(case, w):
    p = w(liquid.ATMOSPHERE, z=case["altitude"])
    return {"pressure": p, "head_of_cold_water": w(liquid.PRESSURE_HEAD, p=p, rho=1000.0, g=G)}


def npsh_from_heads(w, *, atmospheric, static, vapour, losses):
    """NPSHA where the case states heads: as pressures of a column of water, so that the formula itself is used."""
    column = 1000.0 * G
    h_s = w(fittings.SUM_EQUIPMENT, h_i=list(losses))
    return w(
        suction.NPSH_AVAILABLE, p_atm=atmospheric * column, p_g=0.0, p_v=vapour * column, rho=1000.0, g=G,
        z_s=static, z_p=0.0, h_s=h_s,
    )


@solves("npsh", "NP-01")
def open_tank(case, w):
    return {"NPSHA": npsh_from_heads(
        w, atmospheric=case["atmospheric_head"], static=case["static_head"], vapour=case["vapour_head"],
        losses=(case["entrance_loss"], case["friction_loss"]),
    )}  # fmt: skip


@solves("npsh", "NP-02")
def suction_lift(case, w):
    return {"NPSHA": npsh_from_heads(
        w, atmospheric=case["atmospheric_head"], static=case["static_lift"], vapour=case["vapour_head"],
        losses=(case["entrance_loss"], case["friction_loss"]),
    )}  # fmt: skip


@solves("npsh", "NP-03")
def open_tank_with_inlet_allowance(case, w):
    return {"NPSHA": npsh_from_heads(
        w, atmospheric=case["atmospheric_head"], static=case["static_head"], vapour=case["vapour_head"],
        losses=(case["friction_loss"], case["inlet_loss"]),
    )}  # fmt: skip


@solves("npsh", "NP-05")
def benzene_lift(case, w):
    rho, lift = case["density"], case["lift"]
    h_v = w(pipe_flow.VELOCITY_HEAD, V=w.velocity(case["flow"], case["diameter"]), g=G)
    gauge = w(suction.PORT_PRESSURE, rho=rho, g=G, H=0.0, z=lift, h_v=h_v)

    def available(height):
        return w(
            suction.NPSH_AVAILABLE, p_atm=case["atmospheric_pressure"], p_g=0.0, p_v=case["vapour_pressure"], rho=rho,
            g=G, z_s=0.0, z_p=height, h_s=0.0,
        )

    return {
        "dynamic_head": h_v,
        "inlet_pressure": w(liquid.ABSOLUTE_PRESSURE, p_atm=case["atmospheric_pressure"], p_g=gauge),
        "NPSHA": available(lift),
        "height_for_8_m": brentq(lambda height: available(height) - 8.0, 0.0, 5.0),
    }


@solves("npsh", "NP-06")
def lowest_tank_level(case, w):
    def available(level):
        return w(
            suction.NPSH_AVAILABLE, p_atm=case["surface_pressure"], p_g=0.0, p_v=case["vapour_pressure"],
            rho=case["density"], g=G, z_s=level, z_p=case["suction_rise"], h_s=case["friction"],
        )

    lowest = brentq(lambda level: available(level) - case["NPSH"], -10.0, 10.0)
    volume = w(pipe_flow.AREA, D=case["tank_diameter"]) * (case["initial_level"] - lowest)
    return {"volume": volume, "time": w(duty.RUNNING_HOURS, V_d=volume, Q=case["flow"])}


@solves("npsh", "NP-09")
def highest_inlet(case, w):
    h_v = w(pipe_flow.VELOCITY_HEAD, V=case["velocity"], g=G)
    losses = w(fittings.LINE_HEAD, h_f=case["loss"], h_m=h_v, h_e=0.0)
    return {"height": w(
        suction.NPSH_AVAILABLE, p_atm=case["atmospheric_pressure"], p_g=0.0, p_v=case["vapour_pressure"],
        rho=case["density"], g=G, z_s=0.0, z_p=0.0, h_s=losses,
    )}  # fmt: skip


@solves("npsh", "NP-11")
def pressurised_tank(case, w):
    return {"NPSHA": w(
        suction.NPSH_AVAILABLE, p_atm=si("14.696 psi"), p_g=case["tank_gauge_pressure"], p_v=case["vapour_pressure"],
        rho=case["density"], g=G, z_s=0.0, z_p=case["lift"], h_s=case["friction"],
    )}  # fmt: skip


@solves("pumps", "OP-01", "OP-02")
def another_speed(case, w):
    speeds = {"n_1": case["speed_1"], "n_2": case["speed_2"]}
    return {
        "flow_2": w(pump.AFFINITY_FLOW, Q_1=case["flow_1"], **speeds),
        "head_2": w(pump.AFFINITY_HEAD, H_1=case["head_1"], **speeds),
        "power_2": w(pump.AFFINITY_POWER, P_1=case["power_1"], **speeds),
    }


def specific_speed_us(w, n, Q, H):
    """Specific speed in rpm, US gpm and ft."""
    return w(pump.SPECIFIC_SPEED, n=n, Q=Q, H=H) * US_SPECIFIC_SPEED


@solves("pumps", "OP-03")
def design_point_moved(case, w):
    Q_1, n_1 = case["flow_1"], case["speed_1"]
    H_1 = brentq(lambda h: specific_speed_us(w, n_1, Q_1, h) - case["specific_speed"], 1.0, 100.0)
    speeds = {"n_1": n_1, "n_2": case["speed_2"]}
    Q_2, H_2 = w(pump.AFFINITY_FLOW, Q_1=Q_1, **speeds), w(pump.AFFINITY_HEAD, H_1=H_1, **speeds)
    water = w(pump.HYDRAULIC_POWER, rho=WATER_60F["rho"], g=G, Q=Q_2, H=H_2)
    return {
        "flow_2": Q_2, "head_1": H_1, "head_2": H_2, "water_power_2": water,
        "shaft_power_2": w(pump.SHAFT_POWER, P_h=water, eta=case["efficiency"]),
    }


@solves("pumps", "OP-09")
def one_two_and_stacked(case, w):
    per_flow = case["pump_coefficient_per_1000gpm_squared"] / si("1000 gallon/minute") ** 2
    curve = {"a_0": case["pump_shutoff_head"], "a_1": 0.0, "a_2": -per_flow}
    D = case["diameter"]

    def system(Q):
        V = w.velocity(Q, D)
        h = w(pipe_flow.FRICTION_HEAD, f=case["friction_factor"], L=case["length"], D=D, V=V, g=G)
        return w(duty.TOTAL_HEAD, H_st=case["static_head"], h_L=[h])

    def duty_point(parallel, stages):
        def surplus(Q):
            each = w(pump.FLOW_PER_PUMP, Q=Q, i=parallel)
            return stages * w(pump.HEAD_CURVE, Q=each, **curve) - system(Q)

        Q = brentq(surplus, 0.01, 3.0)
        return Q, system(Q)

    points = {"one": duty_point(1, 1), "parallel": duty_point(2, 1), "series": duty_point(1, 2)}
    return {f"{what}_{name}": point[i] for name, point in points.items() for i, what in enumerate(("flow", "head"))}


@solves("pumps", "OP-10")
def speed_doubled(case, w):
    n, Q, H = case["speed"], case["flow"], case["head"]
    speeds = {"n_1": n, "n_2": n * case["ratio"]}
    Q_2, H_2 = w(pump.AFFINITY_FLOW, Q_1=Q, **speeds), w(pump.AFFINITY_HEAD, H_1=H, **speeds)
    return {
        "specific_speed": specific_speed_us(w, n, Q, H), "flow_2": Q_2, "head_2": H_2,
        "specific_speed_2": specific_speed_us(w, speeds["n_2"], Q_2, H_2),
    }


@solves("pumps", "PW-09")
def least_speed(case, w):
    def speed(head):
        return brentq(
            lambda n: specific_speed_us(w, n, case["flow"], head) - case["specific_speed"], 1.0, 1000.0, xtol=1e-9
        )

    stages = brentq(
        lambda i: speed(w(pump.STAGE_HEAD, H=case["head"], i=i)) - si("600 rpm"), 1.0, 20.0, xtol=1e-9
    )
    return {"speed": speed(case["head"]), "stages_at_600rpm": stages}


@solves("pumps", "PW-10")
def specific_speed_of_a_design_point(case, w):
    metric = w(pump.SPECIFIC_SPEED, n=case["speed"], Q=case["flow"], H=case["head"])
    return {"Ns_US": metric * US_SPECIFIC_SPEED, "Ns_dimensionless": metric * si("1 rpm") / G**0.75}


@solves("pumps", "PW-12")
def suction_specific_speed(case, w):
    metric = w(pump.SUCTION_SPECIFIC_SPEED, n=case["speed"], Q=case["flow"], NPSHR=case["NPSH"])
    return {"suction_specific_speed": metric / 60 / G**0.75}  # in revolutions per second, with g


@solves("power", "PW-02")
def small_pump(case, w):
    water = w(pump.HYDRAULIC_POWER, rho=case["density"], g=G, Q=case["flow"], H=case["head"])
    return {"power": w(pump.SHAFT_POWER, P_h=water, eta=case["efficiency"])}


@solves("power", "PW-03")
def efficiency_of_a_pump(case, w):
    head = w(liquid.PRESSURE_HEAD, p=case["pressure_rise"], rho=1000.0, g=G)
    water = w(pump.HYDRAULIC_POWER, rho=1000.0, g=G, Q=case["flow"], H=head)
    return {"efficiency": w(pump.WIRE_TO_WATER, P_h=water, P_e=case["power"])}


@solves("power", "PW-05")
def head_from_power(case, w):
    rho = case["specific_weight"] / G
    unit = w(pump.HYDRAULIC_POWER, rho=rho, g=G, Q=case["flow"], H=1.0)
    loss = w(pump.PUMP_HEAD, H_d=case["power"] / unit, H_s=case["lift"])
    return {"head_loss": loss, "lost_power": w(pump.HYDRAULIC_POWER, rho=rho, g=G, Q=case["flow"], H=loss)}


@solves("power", "PW-08")
def yearly_cost(case, w):
    h, *_ = loss_of(
        w, eps=case["roughness"], D=case["inside_diameter"], L=case["length"], Q=case["flow"], nu=WATER_60F["nu"]
    )
    water = w(pump.HYDRAULIC_POWER, rho=WATER_60F["rho"], g=G, Q=case["flow"], H=h)
    power = w(pump.ELECTRIC_POWER, P_s=water, eta_m=case["combined_efficiency"], eta_d=1.0)
    energy = w(pump.ANNUAL_ENERGY, P_e=power, t_y=case["hours_per_year"])
    return {"yearly_cost": w(pump.ANNUAL_COST, W=energy, c=UNITS["1/kWh"].to_si(case["rate_per_kWh"]))}


def wave_speed(case, w, c_1=1.0):
    """Speed in the pipe of the case; ``c_1=0`` is a rigid pipe."""
    elastic = {"E": case["elastic_modulus"], "D": case["diameter"], "t": case["wall"]} if c_1 else {}
    rigid = {"E": 1.0, "D": 1.0, "t": 1.0}
    return w(
        surge.WAVE_SPEED, K_b=case["bulk_modulus"], rho=case["density"], c_1=c_1, **(elastic or rigid)
    )


def sudden_rise(case, w, a, V):
    return w(surge.JOUKOWSKY_PRESSURE, rho=case["density"], a=a, V=V)


@solves("surge", "WH-01")
def rigid_and_elastic(case, w):
    return {
        "pressure_rise_rigid": sudden_rise(case, w, wave_speed(case, w, c_1=0.0), case["velocity"]),
        "pressure_rise_elastic": sudden_rise(case, w, wave_speed(case, w), case["velocity"]),
    }


@solves("surge", "WH-03")
def full_and_slow(case, w):
    a = wave_speed(case, w)
    rise, time = sudden_rise(case, w, a, case["velocity"]), w(surge.REFLECTION_TIME, L=case["length"], a=a)
    return {
        "pressure_rise_full": rise,
        "pressure_rise_slow": rise * time / case["closure_time"],
        "critical_time": time,
    }


@solves("surge", "WH-04")
def total_pressure(case, w):
    a = wave_speed(case, w)
    rise = sudden_rise(case, w, a, case["velocity_1"] - case["velocity_2"])
    slow = rise * w(surge.REFLECTION_TIME, L=case["length"], a=a) / case["closure_time"]
    static = w(suction.PORT_PRESSURE, rho=case["density"], g=G, H=case["static_head"], z=0.0, h_v=0.0)
    return {"total_pressure": w(surge.UPPER_ESTIMATE, p_d=static, dp=slow)}


@solves("surge", "WH-05")
def length_that_feels_the_peak(case, w):
    a = wave_speed(case, w, c_1=0.0)
    head = w(surge.JOUKOWSKY_HEAD, a=a, V=case["velocity"], g=G)
    return {
        "pressure_rise": w(suction.PORT_PRESSURE, rho=case["density"], g=G, H=head, z=0.0, h_v=0.0),
        "length_with_peak": case["length"] - a * case["closure_time"] / 2,
    }


@solves("surge", "WH-07")
def check_valve_slam(case, w):
    rise = sudden_rise(case, w, case["speed_of_sound"], case["velocity"])
    return {"peak_pressure": w(surge.UPPER_ESTIMATE, p_d=case["initial_pressure"], dp=rise)}
