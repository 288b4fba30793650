"""Pressure of the air at site, and properties that follow from other properties of the liquid."""

from calcpack.formulas.formula import formula

ATMOSPHERE = formula(
    "liquid.atmosphere", "Atmospheric pressure at site", "p_atm = 101325 * (1 - 2.25577e-5 * z)**5.25588",
    p_atm="absolute_pressure", z="elevation",
    units={"p_atm": "Pa", "z": "m"},
    source="ISA-ATM", locator="troposphere, 15 °C at sea level", valid={"z": (-500.0, 11000.0)},
    note="standard day; the weather moves it by about 3 %",
)

ABSOLUTE_PRESSURE = formula(
    "liquid.absolute_pressure", "Absolute pressure", "p_abs = p_atm + p_g",
    p_abs="absolute_pressure", p_atm="absolute_pressure", p_g="gauge_pressure",
    source="DEFINITION", valid={"p_abs": (0.0, None)},
)

PRESSURE_HEAD = formula(
    "liquid.pressure_head", "Pressure head", "h = p / (rho * g)",
    h="head", p="pressure_difference", rho="density", g="acceleration",
    source="HYDROSTATICS", locator="also HI data book eq. 1.A.1",
)

KINEMATIC = formula(
    "liquid.kinematic_viscosity", "Kinematic viscosity", "nu = mu / rho",
    nu="kinematic_viscosity", mu="dynamic_viscosity", rho="density",
    source="DEFINITION",
)
