"""Positive-displacement pumps: flow with slip, power, and the head that accelerates the suction column."""

from calcpack.formulas.formula import formula

FLOW = formula(
    "displacement.flow", "Flow of a positive-displacement pump", "Q = V_d * (n / (2 * pi)) * (1 - s)",
    Q="flow", V_d="displacement", n="rotational_speed", s="fraction",
    source="CONTINUITY", locator="displacement of a turn, turns in time, less slip", valid={"s": (0.0, 1.0)},
    note="needs a relief valve: nothing in the pump limits the pressure against a shut discharge",
)

SLIP = formula(
    "displacement.slip", "Slip", "s = 1 - eta_v",
    s="fraction", eta_v="efficiency",
    source="DEFINITION", locator="volumetric efficiency", valid={"eta_v": (0.0, 1.0)},
    note="of the maker, at the pressure and viscosity of the duty",
)

POWER = formula(
    "displacement.power", "Shaft power of a positive-displacement pump", "P_s = dp * Q / eta",
    P_s="power", dp="pressure_difference", Q="flow", eta="efficiency",
    source="ENERGY-BALANCE", locator="pressure rise times flow delivered", valid={"eta": (0.01, 1.0)},
    note="overall efficiency of the pump; rises with the pressure up to that of the relief valve",
)

ACCELERATION_HEAD = formula(
    "displacement.acceleration_head", "Acceleration head of a suction line", "h_a = L * V * n * C / (k * g)",
    h_a="head", L="length", V="velocity", n="rotational_speed", C="ratio", k="ratio", g="acceleration",
    units={"h_a": "m", "L": "m", "V": "m/s", "n": "rpm", "C": "", "k": "", "g": "m/s²"},
    source="HI-RECIPROCATING", locator="acceleration head; C by pump, k by liquid", valid={"L": (0.0, 15.0)},
    note="added up over the pipes of the suction line and taken from NPSHA; longer lines need a dampener or a study",
)
