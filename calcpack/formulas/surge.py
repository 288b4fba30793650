"""Pressure surge, first estimate: wave speed, reflection time, sudden stop of the flow."""

from calcpack.formulas.formula import formula

WAVE_SPEED = formula(
    "surge.wave_speed", "Speed of the pressure wave", "a = sqrt(K_b / rho) / sqrt(1 + (K_b / E) * (D / t) * c_1)",
    a="velocity", K_b="bulk_modulus", rho="density", E="elastic_modulus", D="diameter", t="diameter",
    c_1="dimensionless",
    source="WAVE-SPEED", locator="elastic pipe, thin wall", valid={"D / t": (25.0, None)},
    note="liquid without free gas; a little gas lowers it much",
)

REFLECTION_TIME = formula(
    "surge.reflection_time", "Reflection time", "t_r = 2 * L / a",
    t_r="duration", L="length", a="velocity",
    source="WAVE-SPEED", note="a change within this time counts as sudden",
)

JOUKOWSKY_HEAD = formula(
    "surge.joukowsky_head", "Head rise at a sudden stop", "dh = a * V / g",
    dh="head", a="velocity", V="velocity", g="acceleration",
    source="JOUKOWSKY",
)

JOUKOWSKY_PRESSURE = formula(
    "surge.joukowsky_pressure", "Pressure rise at a sudden stop", "dp = rho * a * V",
    dp="pressure_difference", rho="density", a="velocity", V="velocity",
    source="JOUKOWSKY", note="an estimate, not an upper bound",
)

UPPER_ESTIMATE = formula(
    "surge.upper_estimate", "Highest pressure, estimate", "p_u = p_d + dp",
    p_u="gauge_pressure", p_d="gauge_pressure", dp="pressure_difference",
    source="JOUKOWSKY", locator="steady pressure plus the sudden rise",
)

LOWER_ESTIMATE = formula(
    "surge.lower_estimate", "Lowest pressure, estimate", "p_l = p_d - dp",
    p_l="gauge_pressure", p_d="gauge_pressure", dp="pressure_difference",
    source="JOUKOWSKY", locator="steady pressure less the sudden drop",
    note="a figure below vapour pressure means that the liquid column parts",
)
