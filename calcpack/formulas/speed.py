"""A pump at another speed or with a trimmed impeller: points, curve coefficients, and the lowest speed that delivers.

Flow follows the speed and head its square, so that of ``H = a_0 + a_1 * Q + a_2 * Q**2`` the first coefficient scales
with the square of the speed, the second with the speed, and the third not at all.
"""

from calcpack.formulas.formula import formula

AFFINITY_RANGE = {"n / n_0": (0.6, 1.2)}
TRIM_RANGE = {"D_2 / D_1": (0.9, 1.0)}
_SPEEDS = {"n": "rotational_speed", "n_0": "rotational_speed"}
_DIAMETERS = {"D_1": "diameter", "D_2": "diameter"}
_AFFINITY = {"source": "AFFINITY", "locator": "Hydraulic Institute data book eq. 1.B.6", "valid": AFFINITY_RANGE}
_TRIM = {"source": "AFFINITY", "locator": "Hydraulic Institute data book eq. 1.B.7", "valid": TRIM_RANGE}

SPEED = formula(
    "speed.speed", "Speed", "n = s * n_0",
    n="rotational_speed", s="fraction", n_0="rotational_speed",
    source="DEFINITION", locator="share of the speed of the curve",
)

HEAD_CURVE = formula(
    "speed.head_curve", "Head from the fitted curve, at another speed",
    "H = a_0 * (n / n_0)**2 + a_1 * (n / n_0) * Q + a_2 * Q**2",
    H="head", a_0="head", a_1="head_slope", a_2="quadratic_coefficient", Q="flow", **_SPEEDS,
    **_AFFINITY, note="coefficients of the curve at the speed n_0",
)

HEAD_CONSTANT = formula(
    "speed.head_constant", "Head curve at another speed: constant", "a_0_n = a_0 * (n / n_0)**2",
    a_0_n="head", a_0="head", **_SPEEDS, **_AFFINITY,
)

HEAD_SLOPE = formula(
    "speed.head_slope", "Head curve at another speed: linear coefficient", "a_1_n = a_1 * (n / n_0)",
    a_1_n="head_slope", a_1="head_slope", **_SPEEDS, **_AFFINITY,
    note="the quadratic coefficient does not change with speed",
)

EFFICIENCY_LINEAR = formula(
    "speed.efficiency_linear", "Efficiency curve at another speed: linear coefficient", "b_1_n = b_1 * (n_0 / n)",
    b_1_n="efficiency_slope", b_1="efficiency_slope", **_SPEEDS, **_AFFINITY,
    note="efficiency kept at homologous flows",
)

EFFICIENCY_SQUARE = formula(
    "speed.efficiency_square", "Efficiency curve at another speed: quadratic coefficient",
    "b_2_n = b_2 * (n_0 / n)**2",
    b_2_n="efficiency_square", b_2="efficiency_square", **_SPEEDS, **_AFFINITY,
    note="efficiency kept at homologous flows",
)

EFFICIENCY_CUBE = formula(
    "speed.efficiency_cube", "Efficiency curve at another speed: cubic coefficient", "b_3_n = b_3 * (n_0 / n)**3",
    b_3_n="efficiency_cube", b_3="efficiency_cube", **_SPEEDS, **_AFFINITY,
    note="efficiency kept at homologous flows",
)

NPSHR_CONSTANT = formula(
    "speed.npshr_constant", "NPSHR curve at another speed: constant", "c_0_n = c_0 * (n / n_0)**2",
    c_0_n="head", c_0="head", **_SPEEDS,
    source="PUMP-TEXTS", locator="NPSHR at other speeds", valid={"n / n_0": (0.8, 1.2)},
    note="the quadratic coefficient does not change with speed; at lower speeds NPSHR falls less",
)

NPSHR = formula(
    "speed.npshr", "NPSHR at another speed", "NPSHR_2 = NPSHR_1 * (n_2 / n_1)**2",
    NPSHR_2="head", NPSHR_1="head", n_2="rotational_speed", n_1="rotational_speed",
    source="PUMP-TEXTS", locator="NPSHR at other speeds", valid={"n_2 / n_1": (0.8, 1.2)},
    note="at homologous flows; exponents of 1.3 to 2 are reported at lower speeds, so that NPSHR falls less",
)

EFFICIENCY = formula(
    "speed.efficiency", "Efficiency at another speed", "eta_2 = 1 - (1 - eta_1) * (n_1 / n_2)**0.1",
    eta_2="efficiency", eta_1="efficiency", n_1="rotational_speed", n_2="rotational_speed",
    source="PUMP-TEXTS", locator="efficiency at other speeds",
    valid={"n_2 / n_1": (0.6, 1.1), "eta_1": (0.0, 1.0)},
    note="at homologous flows; often left out from 80 to 100 % of the speed",
)

LOWEST_SPEED = formula(
    "speed.lowest", "Speed at which the pump only holds the static head", "n_min = n_1 * sqrt(H_st / H_0)",
    n_min="rotational_speed", n_1="rotational_speed", H_st="head", H_0="head",
    source="AFFINITY", locator="Hydraulic Institute data book eq. 1.B.6, head at no flow",
    valid={"H_st / H_0": (0.0, 1.0)}, note="at and below this speed nothing is delivered; H_0 is the head at no flow",
)

TRIM_FLOW = formula(
    "speed.trim_flow", "Flow with a trimmed impeller", "Q_2 = Q_1 * (D_2 / D_1)",
    Q_2="flow", Q_1="flow", **_DIAMETERS, **_TRIM, note="limits of the maker hold",
)

TRIM_HEAD = formula(
    "speed.trim_head", "Head with a trimmed impeller", "H_2 = H_1 * (D_2 / D_1)**2",
    H_2="head", H_1="head", **_DIAMETERS, **_TRIM, note="limits of the maker hold",
)

TRIM_POWER = formula(
    "speed.trim_power", "Power with a trimmed impeller", "P_2 = P_1 * (D_2 / D_1)**3",
    P_2="power", P_1="power", **_DIAMETERS, **_TRIM, note="efficiency taken as unchanged; limits of the maker hold",
)

TRIM_DIAMETER = formula(
    "speed.trim_diameter", "Trimmed diameter for a head", "D_2 = D_1 * sqrt(H_2 / H_1)",
    D_2="diameter", D_1="diameter", H_2="head", H_1="head", **_TRIM,
    note="H_1 is the head at the homologous flow of the larger impeller; limits of the maker hold",
)

TRIM_EFFICIENCY = formula(
    "speed.trim_efficiency", "Efficiency with a trimmed impeller", "eta_2 = eta_1 - 0.1 * (1 - D_2 / D_1)",
    eta_2="efficiency", eta_1="efficiency", **_DIAMETERS,
    source="PUMP-TEXTS", locator="about one point for each tenth of the diameter", valid=TRIM_RANGE,
    note="at homologous flows",
)

TRIM_HEAD_CONSTANT = formula(
    "speed.trim_head_constant", "Head curve with a trimmed impeller: constant", "a_0_t = a_0 * (D_2 / D_1)**2",
    a_0_t="head", a_0="head", **_DIAMETERS, **_TRIM,
)

TRIM_HEAD_SLOPE = formula(
    "speed.trim_head_slope", "Head curve with a trimmed impeller: linear coefficient", "a_1_t = a_1 * (D_2 / D_1)",
    a_1_t="head_slope", a_1="head_slope", **_DIAMETERS, **_TRIM,
    note="the quadratic coefficient does not change with the trim",
)
