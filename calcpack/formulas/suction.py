"""Suction side: net positive suction head and the pressure at a port."""

from calcpack.formulas.formula import formula

NPSH_AVAILABLE = formula(
    "suction.npsh_available", "Net positive suction head available",
    "NPSHA = (p_atm + p_g - p_v) / (rho * g) + z_s - z_p - h_s",
    NPSHA="head", p_atm="absolute_pressure", p_g="gauge_pressure", p_v="absolute_pressure", rho="density",
    g="acceleration", z_s="elevation", z_p="elevation", h_s="head",
    source="HI-DATABOOK", locator="eq. 1.D.6",
    note="total head, so that the velocity head at the port is included",
)

NPSH_RATIO = formula(
    "suction.npsh_ratio", "NPSH ratio", "r = NPSHA / NPSHR",
    r="ratio", NPSHA="head", NPSHR="head",
    source="HI-9.6.1", locator="NPSH margin ratio",
)

NPSH_DIFFERENCE = formula(
    "suction.npsh_difference", "NPSH margin", "m = NPSHA - NPSHR",
    m="head", NPSHA="head", NPSHR="head",
    source="HI-9.6.1", locator="NPSH margin",
)

PORT_PRESSURE = formula(
    "suction.port_pressure", "Gauge pressure at a port", "p = rho * g * (H - z - h_v)",
    p="gauge_pressure", rho="density", g="acceleration", H="head", z="elevation", h_v="head",
    source="BERNOULLI", note="total head less elevation and velocity head",
)
