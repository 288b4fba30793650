"""Local losses: coefficients of fittings and valves, equipment, and the loss of a line as a whole."""

import math

from calcpack.formulas.formula import Formula, formula

GRADUAL_LIMIT = math.pi / 4  # included angle, 45 degrees
_BORES = {"D_s / D_l": (0.0, 1.0)}
_ON_SMALL_BORE = "on the velocity head of the small bore D_s"

FULLY_TURBULENT = formula(
    "fittings.fully_turbulent", "Fully turbulent friction factor", "f_T = 0.25 / log10(eps_T / (3.7 * D))**2",
    f_T="friction_factor", eps_T="roughness", D="diameter",
    source="TP410", locator="2009 edition, friction factor for clean steel pipe",
    valid={"eps_T / D": (1e-6, 0.05)},
    note="with the roughness of clean steel, whatever the pipe material",
)

COEFFICIENT = formula(
    "fittings.coefficient", "Loss coefficient", "K = n * f_T",
    K="loss_coefficient", n="dimensionless", f_T="friction_factor",
    source="TP410", locator="2009 edition, appendix A",
)

CONVERT_K = formula(
    "fittings.convert_k", "Loss coefficient on another bore", "K_2 = K_1 * (D_2 / D_1)**4",
    K_2="loss_coefficient", K_1="loss_coefficient", D_2="diameter", D_1="diameter",
    source="CONTINUITY", locator="equal head on the velocity heads of both bores",
)

SUM_K = formula(
    "fittings.sum_k", "Sum of loss coefficients", "K = sum(n * K_i)",
    K="loss_coefficient", n="count[]", K_i="loss_coefficient[]",
    source="HI-DATABOOK", locator="eq. 3.B.1, losses added", note="fittings taken as far enough apart not to interact",
)

LOCAL_HEAD = formula(
    "fittings.local_head", "Head lost in fittings", "h_m = K * (V**2 / (2 * g))",
    h_m="head", K="loss_coefficient", V="velocity", g="acceleration",
    source="HI-DATABOOK", locator="eq. 3.B.1",
)

EQUIPMENT_QUADRATIC = formula(
    "fittings.equipment_quadratic", "Head lost in equipment", "h_e = h_r * (Q / Q_r)**2",
    h_e="head", h_r="head", Q="flow", Q_r="flow",
    source="COMMON", locator="turbulent loss scaled from the stated point",
)

SUM_EQUIPMENT = formula(
    "fittings.sum_equipment", "Head lost in all equipment of a line", "h_e = sum(h_i)",
    h_e="head", h_i="head[]",
    source="BERNOULLI",
)

LINE_HEAD_PIPE = formula(
    "fittings.line_head_pipe", "Head lost in the line", "h_L = h_f + h_m",
    h_L="head", h_f="head", h_m="head",
    source="BERNOULLI", note="the line carries no equipment",
)

LINE_HEAD = formula(
    "fittings.line_head", "Head lost in the line", "h_L = h_f + h_m + h_e",
    h_L="head", h_f="head", h_m="head", h_e="head",
    source="BERNOULLI",
)

CHECK_VALVE_VELOCITY = formula(
    "fittings.check_valve_velocity", "Least velocity that opens a check valve fully", "V_min = N / sqrt(rho)",
    V_min="velocity", N="dimensionless", rho="density",
    units={"V_min": "m/s", "N": "", "rho": "kg/m³"},
    source="TP410", locator="2009 metric edition, appendix A",
    note="N belongs to the pattern of the valve, for m/s and kg/m³",
)

SUDDEN_ENLARGEMENT = formula(
    "fittings.sudden_enlargement", "Loss coefficient of a sudden enlargement", "K = (1 - (D_s / D_l)**2)**2",
    K="loss_coefficient", D_s="diameter", D_l="diameter",
    source="HI-DATABOOK", locator="eq. 3.B.3", valid=_BORES, note=_ON_SMALL_BORE,
)

GRADUAL_ENLARGEMENT = formula(
    "fittings.gradual_enlargement", "Loss coefficient of a gradual enlargement",
    "K = 2.6 * sin(theta / 2) * (1 - (D_s / D_l)**2)**2",
    K="loss_coefficient", theta="angle", D_s="diameter", D_l="diameter",
    source="TP410", locator="2009 edition, included angle theta", valid={"theta": (0.0, GRADUAL_LIMIT), **_BORES},
    note=_ON_SMALL_BORE,
)

SUDDEN_CONTRACTION = formula(
    "fittings.sudden_contraction", "Loss coefficient of a sudden contraction", "K = 0.5 * (1 - (D_s / D_l)**2)",
    K="loss_coefficient", D_s="diameter", D_l="diameter",
    source="TP410", locator="2009 edition", valid=_BORES, note=_ON_SMALL_BORE,
)

STEEP_CONTRACTION = formula(
    "fittings.steep_contraction", "Loss coefficient of a steep contraction",
    "K = 0.5 * sqrt(sin(theta / 2)) * (1 - (D_s / D_l)**2)",
    K="loss_coefficient", theta="angle", D_s="diameter", D_l="diameter",
    source="TP410", locator="2009 edition, included angle theta",
    valid={"theta": (GRADUAL_LIMIT, math.pi), **_BORES}, note=_ON_SMALL_BORE,
)

GRADUAL_CONTRACTION = formula(
    "fittings.gradual_contraction", "Loss coefficient of a gradual contraction",
    "K = 0.8 * sin(theta / 2) * (1 - (D_s / D_l)**2)",
    K="loss_coefficient", theta="angle", D_s="diameter", D_l="diameter",
    source="TP410", locator="2009 edition, included angle theta", valid={"theta": (0.0, GRADUAL_LIMIT), **_BORES},
    note=_ON_SMALL_BORE,
)


def enlargement_formula(angle: float) -> Formula:
    """Formula of an enlargement by its included angle, rad: beyond 45 degrees it counts as sudden."""
    return GRADUAL_ENLARGEMENT if angle <= GRADUAL_LIMIT else SUDDEN_ENLARGEMENT


def contraction_formula(angle: float) -> Formula:
    """Formula of a contraction by its included angle, rad; STEEP_CONTRACTION at 180 degrees is the sudden one."""
    return GRADUAL_CONTRACTION if angle <= GRADUAL_LIMIT else STEEP_CONTRACTION
