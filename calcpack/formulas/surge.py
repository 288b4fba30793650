"""Pressure surge, first estimate: wave speed, reflection time, sudden stop of the flow."""

from calcpack.errors import FormulaError
from calcpack.formulas.formula import Formula, formula

THIN_WALL_LIMIT = 25.0  # inside diameter over wall
_WAVE = "a = sqrt(K_b / rho) / sqrt(1 + (K_b / E) * (D / t) * c_1)"
_WAVE_KINDS = {
    "a": "velocity", "K_b": "bulk_modulus", "rho": "density", "E": "elastic_modulus", "D": "diameter",
    "t": "diameter", "c_1": "dimensionless",
}  # fmt: skip

RESTRAINT_UPSTREAM = formula(
    "surge.restraint_upstream", "Restraint factor, thin wall, pipe anchored upstream only", "c_1 = 1 - nu / 2",
    c_1="dimensionless", nu="ratio",
    source="WAVE-SPEED", locator="widening of the pipe alone", note="nu is Poisson's ratio of the wall",
    valid={"nu": (0.0, 0.5)},
)

RESTRAINT_UPSTREAM_LENGTHENING = formula(
    "surge.restraint_upstream_lengthening",
    "Restraint factor, thin wall, pipe anchored upstream only, lengthening counted", "c_1 = 5 / 4 - nu",
    c_1="dimensionless", nu="ratio",
    source="WAVE-SPEED", locator="widening and lengthening of the pipe; older texts",
    note="nu is Poisson's ratio of the wall", valid={"nu": (0.0, 0.5)},
)

RESTRAINT_THROUGHOUT = formula(
    "surge.restraint_throughout", "Restraint factor, thin wall, pipe anchored throughout", "c_1 = 1 - nu**2",
    c_1="dimensionless", nu="ratio",
    source="WAVE-SPEED", locator="no movement along the pipe", note="nu is Poisson's ratio of the wall",
    valid={"nu": (0.0, 0.5)},
)

RESTRAINT_JOINTS = formula(
    "surge.restraint_joints", "Restraint factor, thin wall, expansion joints throughout", "c_1 = 1",
    c_1="dimensionless",
    source="WAVE-SPEED", locator="no stress along the pipe",
    note="some texts take 1 - nu/2, with Poisson's ratio nu, for expansion joints as well",
)

RESTRAINT_THICK = formula(
    "surge.restraint_thick", "Restraint factor, thick wall", "c_1 = (2 * t / D) * (1 + nu) + c_0 * (D / (D + t))",
    c_1="dimensionless", t="diameter", D="diameter", nu="ratio", c_0="dimensionless",
    source="WAVE-SPEED", locator="thick wall; c_0 is the factor of the thin wall with the same anchorage",
    note="nu is Poisson's ratio of the wall", valid={"D / t": (None, THIN_WALL_LIMIT), "nu": (0.0, 0.5)},
)

WAVE_SPEED = formula(
    "surge.wave_speed", "Speed of the pressure wave", _WAVE, **_WAVE_KINDS,
    source="WAVE-SPEED", locator="elastic pipe, thin wall", valid={"D / t": (THIN_WALL_LIMIT, None)},
    note="liquid without free gas; a little gas lowers it much",
)

WAVE_SPEED_THICK = formula(
    "surge.wave_speed_thick", "Speed of the pressure wave, thick wall", _WAVE, **_WAVE_KINDS,
    source="WAVE-SPEED", locator="elastic pipe, thick wall", valid={"D / t": (None, THIN_WALL_LIMIT)},
    note="with the restraint factor of the thick wall; liquid without free gas; a little gas lowers it much",
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

# How the pipe is held -> the factor of the thin wall, and the words for a record of the choice.
ANCHORAGES: dict[str, tuple[Formula, str]] = {
    "upstream": (RESTRAINT_UPSTREAM, "anchored at its upstream end only"),
    "upstream with lengthening": (
        RESTRAINT_UPSTREAM_LENGTHENING, "anchored at its upstream end only, lengthening of the pipe counted",
    ),
    "throughout": (RESTRAINT_THROUGHOUT, "anchored against movement along its whole length"),
    "expansion joints": (RESTRAINT_JOINTS, "free to move at expansion joints along its whole length"),
}  # fmt: skip


def restraint_formula(anchorage: str) -> tuple[Formula, str]:
    """Formula of the thin-wall restraint factor for a key of ANCHORAGES, and the reason in words.

    Raises FormulaError for an unknown anchorage.
    """
    try:
        return ANCHORAGES[anchorage]
    except KeyError:
        raise FormulaError(f"no restraint factor for {anchorage!r}; known: {', '.join(ANCHORAGES)}") from None


def wave_speed_formula(diameter_over_wall: float) -> tuple[Formula, str]:
    """WAVE_SPEED for a thin wall, else WAVE_SPEED_THICK, whose c_1 is that of RESTRAINT_THICK; and the reason."""
    if diameter_over_wall >= THIN_WALL_LIMIT:
        return WAVE_SPEED, "the wall is thin: the restraint factor of the thin wall holds"
    return WAVE_SPEED_THICK, "the wall is thick: the restraint factor of the thick wall holds"
