"""What is asked of the pump: the required flow, the static head and the total head."""

from calcpack.formulas.formula import formula

DAILY_VOLUME = formula(
    "duty.daily_volume", "Volume of a day", "V_d = q_d * t_1",
    V_d="volume", q_d="daily_flow", t_1="days",
    source="DEFINITION", note="with t_1 one day",
)

DAILY_FLOW = formula(
    "duty.daily_flow", "Required flow", "Q_req = V_d / t_d",
    Q_req="flow", V_d="volume", t_d="hours",
    source="DEFINITION", locator="volume of a day over the running time of a day", valid={"t_d": (None, 86400.0)},
)

RUNNING_HOURS = formula(
    "duty.running_hours", "Running time in a day", "t_d = V_d / Q",
    t_d="hours", V_d="volume", Q="flow",
    source="DEFINITION", valid={"t_d": (0.0, 86400.0)},
)

DESIGN_FLOW = formula(
    "duty.design_flow", "Design flow", "Q_des = Q_req * (1 + m)",
    Q_des="flow", Q_req="flow", m="fraction",
    source="COMMON", locator="flow margin, shown apart from the required flow",
    note="no margin is put on head",
)

TANK_HEAD = formula(
    "duty.tank_head", "Total head at a free surface", "H = z + p_g / (rho * g)",
    H="head", z="elevation", p_g="gauge_pressure", rho="density", g="acceleration",
    source="BERNOULLI", locator="liquid at rest",
)

STATIC_HEAD = formula(
    "duty.static_head", "Static head", "H_st = z_2 - z_1",
    H_st="head", z_2="elevation", z_1="elevation",
    source="BERNOULLI", locator="delivery less suction, both at rest",
)

TOTAL_HEAD = formula(
    "duty.total_head", "Total head of the system", "H = H_st + sum(h_L)",
    H="head", H_st="head", h_L="head[]",
    source="BERNOULLI",
)
