"""Edges of a performance guarantee by acceptance grade (ISO 9906): what the delivered pump may differ by.

The requirement is compared with the low edge; motor, pressure and NPSH with the high edge.
"""

from calcpack.formulas.formula import formula

_SOURCE = {"source": "ISO9906", "locator": "tolerance factors of the acceptance grades"}

LOW_FLOW = formula(
    "acceptance.low_flow", "Flow at the low edge", "Q_low = Q * (1 - t_Q)",
    Q_low="flow", Q="flow", t_Q="fraction", **_SOURCE,
)

HIGH_FLOW = formula(
    "acceptance.high_flow", "Flow at the high edge", "Q_high = Q * (1 + t_Q)",
    Q_high="flow", Q="flow", t_Q="fraction", **_SOURCE,
)

LOW_HEAD = formula(
    "acceptance.low_head", "Head at the low edge", "H_low = H * (1 - t_H)",
    H_low="head", H="head", t_H="fraction", **_SOURCE,
)

HIGH_HEAD = formula(
    "acceptance.high_head", "Head at the high edge", "H_high = H * (1 + t_H)",
    H_high="head", H="head", t_H="fraction", **_SOURCE,
)

HIGH_POWER = formula(
    "acceptance.high_power", "Shaft power at the high edge", "P_high = P_s * (1 + t_P)",
    P_high="power", P_s="power", t_P="fraction", **_SOURCE,
    valid={"P_s": (10e3, None)}, note="smaller pumps have wider tolerances",
)

LOW_EFFICIENCY = formula(
    "acceptance.low_efficiency", "Efficiency at the low edge", "eta_low = eta * (1 - t_eta)",
    eta_low="efficiency", eta="efficiency", t_eta="fraction", **_SOURCE,
    note="the tolerance is a share of the efficiency, not points",
)

LOW_CURVE = formula(
    "acceptance.low_curve", "Head curve at the low edge",
    "H_low = (1 - t_H) * (a_0 + a_1 * (Q / (1 - t_Q)) + a_2 * (Q / (1 - t_Q))**2)",
    H_low="head", t_H="fraction", a_0="head", a_1="head_slope", Q="flow", t_Q="fraction",
    a_2="quadratic_coefficient", **_SOURCE,
    note="every point of the curve moved by both tolerances",
)

HIGH_CURVE = formula(
    "acceptance.high_curve", "Head curve at the high edge",
    "H_high = (1 + t_H) * (a_0 + a_1 * (Q / (1 + t_Q)) + a_2 * (Q / (1 + t_Q))**2)",
    H_high="head", t_H="fraction", a_0="head", a_1="head_slope", Q="flow", t_Q="fraction",
    a_2="quadratic_coefficient", **_SOURCE,
    note="every point of the curve moved by both tolerances",
)
