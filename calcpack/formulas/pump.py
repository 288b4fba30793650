"""Pump duty: power, energy, position on the curve, specific speeds, pressure at shut-off, other speeds."""

from calcpack.formulas.formula import formula

SPECIFIC_SPEED_UNITS = {"n": "rpm", "Q": "m³/s"}

FLOW_PER_PUMP = formula(
    "pump.flow_per_pump", "Flow of one pump", "Q_1 = Q / i",
    Q_1="flow", Q="flow", i="count",
    source="CONTINUITY", locator="equal pumps in parallel", valid={"i": (1.0, None)},
)

PARALLEL_FLOW = formula(
    "pump.parallel_flow", "Flow of all pumps in parallel", "Q = sum(Q_i)",
    Q="flow", Q_i="flow[]",
    source="CONTINUITY", locator="flows of the pumps at their common head",
)

SERIES_HEAD = formula(
    "pump.series_head", "Head of all pumps in series", "H = sum(H_i)",
    H="head", H_i="head[]",
    source="BERNOULLI", locator="heads of the pumps at their common flow",
)

PUMP_HEAD = formula(
    "pump.head", "Total head of the pump", "H = H_d - H_s",
    H="head", H_d="head", H_s="head",
    source="BERNOULLI", locator="total head at discharge less that at suction",
)

DISCHARGE_HEAD = formula(
    "pump.discharge_head", "Total head at the pump discharge", "H_d = H_s + H",
    H_d="head", H_s="head", H="head",
    source="BERNOULLI",
)

STAGE_HEAD = formula(
    "pump.stage_head", "Head of one stage", "H_1 = H / i",
    H_1="head", H="head", i="count",
    source="DEFINITION", valid={"i": (1.0, None)},
)

HEAD_CURVE = formula(
    "pump.head_curve", "Head from the fitted curve", "H = a_0 + a_1 * Q + a_2 * Q**2",
    H="head", a_0="head", a_1="head_slope", a_2="quadratic_coefficient", Q="flow",
    source="COMMON", locator="least-squares fit of the maker's points",
)

EFFICIENCY_CURVE = formula(
    "pump.efficiency_curve", "Efficiency from the fitted curve", "eta = b_1 * Q + b_2 * Q**2 + b_3 * Q**3",
    eta="efficiency", b_1="efficiency_slope", b_2="efficiency_square", b_3="efficiency_cube", Q="flow",
    source="COMMON", locator="least-squares fit of the maker's points", valid={"eta": (0.0, 1.0)},
)

NPSHR_CURVE = formula(
    "pump.npshr_curve", "NPSHR from the fitted curve", "NPSHR = c_0 + c_2 * Q**2",
    NPSHR="head", c_0="head", c_2="quadratic_coefficient", Q="flow",
    source="COMMON", locator="least-squares fit of the maker's points",
)

HYDRAULIC_POWER = formula(
    "pump.hydraulic_power", "Power given to the liquid", "P_h = rho * g * Q * H",
    P_h="power", rho="density", g="acceleration", Q="flow", H="head",
    source="HI-DATABOOK", locator="pump power, in coherent units",
)

SHAFT_POWER = formula(
    "pump.shaft_power", "Shaft power", "P_s = P_h / eta",
    P_s="power", P_h="power", eta="efficiency",
    source="HI-DATABOOK", locator="pump power, in coherent units", valid={"eta": (0.01, 1.0)},
    note="efficiency of the pump alone, at the duty",
)

ELECTRIC_POWER = formula(
    "pump.electric_power", "Electric power taken", "P_e = P_s / (eta_m * eta_d)",
    P_e="power", P_s="power", eta_m="efficiency", eta_d="efficiency",
    source="DEFINITION", locator="motor and drive in series", valid={"eta_m": (0.01, 1.0), "eta_d": (0.01, 1.0)},
)

WIRE_TO_WATER = formula(
    "pump.wire_to_water", "Wire-to-water efficiency", "eta_w = P_h / P_e",
    eta_w="efficiency", P_h="power", P_e="power",
    source="DEFINITION", valid={"eta_w": (0.0, 1.0)},
)

MOTOR_RATIO = formula(
    "pump.motor_ratio", "Motor rating over shaft power", "r_m = P_m / P_s",
    r_m="ratio", P_m="power", P_s="power",
    source="DEFINITION",
)

SPECIFIC_ENERGY = formula(
    "pump.specific_energy", "Energy per volume pumped", "E = P_e / Q",
    E="specific_energy", P_e="power", Q="flow",
    source="DEFINITION",
)

ANNUAL_HOURS = formula(
    "pump.annual_hours", "Running time in a year", "t_y = t_d * (n_d / t_1)",
    t_y="hours", t_d="hours", n_d="days", t_1="days",
    source="DEFINITION", locator="running time of a day, days of operation", note="with t_1 one day",
    valid={"n_d / t_1": (0.0, 366.0)},
)

ANNUAL_ENERGY = formula(
    "pump.annual_energy", "Energy of a year", "W = P_e * t_y",
    W="energy", P_e="power", t_y="hours",
    units={"W": "kWh", "P_e": "kW", "t_y": "h"},
    source="DEFINITION", valid={"t_y": (0.0, 8784.0)},
)

ANNUAL_COST = formula(
    "pump.annual_cost", "Energy cost of a year", "C = W * c",
    C="money", W="energy", c="energy_price",
    units={"C": "", "W": "kWh", "c": "1/kWh"},
    source="DEFINITION",
)

PERCENT_BEP = formula(
    "pump.percent_bep", "Flow relative to best efficiency", "r = Q / Q_BEP",
    r="fraction", Q="flow", Q_BEP="flow",
    source="DEFINITION",
)

SPECIFIC_SPEED = formula(
    "pump.specific_speed", "Specific speed", "n_s = n * sqrt(Q) / H**0.75",
    n_s="specific_speed", n="rotational_speed", Q="flow", H="head",
    units={**SPECIFIC_SPEED_UNITS, "n_s": "", "H": "m"},
    source="HI-DATABOOK", locator="eq. 1.D.1 (rpm, m³/s, m)",
    note="flow at best efficiency, head of one stage",
)

SUCTION_SPECIFIC_SPEED = formula(
    "pump.suction_specific_speed", "Suction specific speed", "S = n * sqrt(Q) / NPSHR**0.75",
    S="specific_speed", n="rotational_speed", Q="flow", NPSHR="head",
    units={**SPECIFIC_SPEED_UNITS, "S": "", "NPSHR": "m"},
    source="HI-DATABOOK", locator="section 1.D (rpm, m³/s, m)",
    note="flow of one impeller eye and NPSHR, both at best efficiency",
)

SHUTOFF_PRESSURE = formula(
    "pump.shutoff_pressure", "Pressure at shut-off", "p_max = p_s + rho * g * H_0",
    p_max="gauge_pressure", p_s="gauge_pressure", rho="density", g="acceleration", H_0="head",
    source="BERNOULLI", locator="no flow", note="highest head of the curve on the highest suction pressure",
)

TEMPERATURE_RISE = formula(
    "pump.temperature_rise", "Temperature rise in the pump", "dT = (g * H / c_p) * (1 / eta - 1)",
    dT="temperature_difference", g="acceleration", H="head", c_p="specific_heat", eta="efficiency",
    source="ENERGY-BALANCE", locator="all losses kept by the liquid", valid={"eta": (0.01, 1.0)},
)

AFFINITY_FLOW = formula(
    "pump.affinity_flow", "Flow at another speed", "Q_2 = Q_1 * (n_2 / n_1)",
    Q_2="flow", Q_1="flow", n_2="rotational_speed", n_1="rotational_speed",
    source="AFFINITY", locator="Hydraulic Institute data book eq. 1.B.6", valid={"n_2 / n_1": (0.6, 1.2)},
)

AFFINITY_HEAD = formula(
    "pump.affinity_head", "Head at another speed", "H_2 = H_1 * (n_2 / n_1)**2",
    H_2="head", H_1="head", n_2="rotational_speed", n_1="rotational_speed",
    source="AFFINITY", locator="Hydraulic Institute data book eq. 1.B.6", valid={"n_2 / n_1": (0.6, 1.2)},
)

AFFINITY_POWER = formula(
    "pump.affinity_power", "Power at another speed", "P_2 = P_1 * (n_2 / n_1)**3",
    P_2="power", P_1="power", n_2="rotational_speed", n_1="rotational_speed",
    source="AFFINITY", locator="Hydraulic Institute data book eq. 1.B.6", valid={"n_2 / n_1": (0.6, 1.2)},
    note="efficiency taken as unchanged",
)
