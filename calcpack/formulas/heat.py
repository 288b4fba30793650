"""Heat carried by the liquid: flow for a heat load, temperature rise, and the flow that keeps a pump cool."""

from calcpack.formulas.formula import formula

FLOW = formula(
    "heat.flow", "Flow for a heat load", "Q = P / (rho * c_p * dT)",
    Q="flow", P="power", rho="density", c_p="specific_heat", dT="temperature_difference",
    source="ENERGY-BALANCE", locator="single-phase liquid, properties at its mean temperature",
)

RISE = formula(
    "heat.rise", "Temperature change by heat or power", "dT = P / (rho * c_p * Q)",
    dT="temperature_difference", P="power", rho="density", c_p="specific_heat", Q="flow",
    source="ENERGY-BALANCE", locator="all of it taken up by the liquid",
)

MINIMUM_FLOW = formula(
    "heat.minimum_flow", "Thermal minimum flow of a pump", "Q_min = P_s / (rho * c_p * dT)",
    Q_min="flow", P_s="power", rho="density", c_p="specific_heat", dT="temperature_difference",
    source="ENERGY-BALANCE", locator="all shaft power heats the liquid",
    note="not the mechanical minimum, which the maker states and which is mostly larger",
)

TIME_AT_NO_FLOW = formula(
    "heat.time_at_no_flow", "Time to heat the liquid in a pump at no flow", "t = rho * V_p * c_p * dT / P_s",
    t="duration", rho="density", V_p="volume", c_p="specific_heat", dT="temperature_difference", P_s="power",
    source="ENERGY-BALANCE", locator="all shaft power heats the liquid in the casing",
    note="heat taken up by the casing and lost to the air left out",
)
