"""Valves by their flow coefficient: head lost, required coefficient, authority, balancing, choking and cavitation.

A flow coefficient is the flow of water at a pressure drop of one unit: K_v in m³/h at 1 bar, C_v in US gpm at 1 psi.
The constants stand for water of 1000 kg/m³ (K_v) and of 62.37 lb/ft³ (C_v, 60 °F). All pressures at a valve are
absolute.
"""

from calcpack.formulas.formula import formula

TURBULENT_LIMIT = 10_000.0  # Reynolds number of the valve

_METRIC = {"K_v": "m³/h", "Q": "m³/h"}
_US = {"C_v": "US gpm", "Q": "US gpm"}
_FITTED = {"K_v": "m³/h", "d": "mm"}

KV_OF_CV = formula(
    "valves.kv_of_cv", "Flow coefficient, metric, from the US one", "K_v = 0.865 * C_v",
    K_v="flow_coefficient_kv", C_v="flow_coefficient_cv",
    units={"K_v": "m³/h", "C_v": "US gpm"},
    source="IEC60534-2-1", locator="ratio of the constants N1 and N18 for K_v and C_v",
)

HEAD_KV = formula(
    "valves.head_kv", "Head lost in a valve", "h_va = (100000 / (1000 * g)) * (Q / K_v)**2",
    h_va="head", g="acceleration", Q="flow", K_v="flow_coefficient_kv",
    units={**_METRIC, "h_va": "m", "g": "m/s²"},
    source="IEC60534-1", locator="definition of K_v: water of 1000 kg/m³ at 100 000 Pa",
    note="the head does not depend on the density; turbulent, not choked; K_v at the opening stated",
)

HEAD_CV = formula(
    "valves.head_cv", "Head lost in a valve", "h_va = (144 / (1.9385 * g)) * (Q / C_v)**2",
    h_va="head", g="acceleration", Q="flow", C_v="flow_coefficient_cv",
    units={**_US, "h_va": "ft", "g": "ft/s²"},
    source="IEC60534-1", locator="definition of C_v: water of 1.9385 slug/ft³ at 144 lbf/ft²",
    note="the head does not depend on the density; turbulent, not choked; C_v at the opening stated",
)

DROP_KV = formula(
    "valves.drop_kv", "Pressure drop of a valve", "dp = 100 * (rho / 1000) * (Q / K_v)**2",
    dp="pressure_difference", rho="density", Q="flow", K_v="flow_coefficient_kv",
    units={**_METRIC, "dp": "kPa", "rho": "kg/m³"},
    source="IEC60534-1", locator="definition of K_v", note="turbulent, not choked; K_v at the opening stated",
)

DROP_CV = formula(
    "valves.drop_cv", "Pressure drop of a valve", "dp = (rho / 62.37) * (Q / C_v)**2",
    dp="pressure_difference", rho="density", Q="flow", C_v="flow_coefficient_cv",
    units={**_US, "dp": "psi", "rho": "lb/ft³"},
    source="IEC60534-1", locator="definition of C_v", note="turbulent, not choked; C_v at the opening stated",
)

LOSS_KV = formula(
    "valves.loss_kv", "Loss coefficient equal to a flow coefficient", "K = 0.0015989 * D**4 / K_v**2",
    K="loss_coefficient", D="diameter", K_v="flow_coefficient_kv",
    units={"K": "", "D": "mm", "K_v": "m³/h"},
    source="IEC60534-2-1", locator="constant N2, published as 0.0016", note="on the velocity head of the bore D",
)

LOSS_CV = formula(
    "valves.loss_cv", "Loss coefficient equal to a flow coefficient", "K = 890.3 * D**4 / C_v**2",
    K="loss_coefficient", D="diameter", C_v="flow_coefficient_cv",
    units={"K": "", "D": "in", "C_v": "US gpm"},
    source="IEC60534-2-1", locator="constant N2, published as 890", note="on the velocity head of the bore D",
)

REQUIRED_KV = formula(
    "valves.required_kv", "Flow coefficient required", "K_v = (Q / 0.1) * sqrt((rho / 1000) / dp)",
    K_v="flow_coefficient_kv", Q="flow", rho="density", dp="pressure_difference",
    units={**_METRIC, "rho": "kg/m³", "dp": "kPa"},
    source="IEC60534-2-1", locator="turbulent flow of liquids, N1 = 0.1",
    note="valve of line size; the drop is the sizing drop where the flow could choke",
)

REQUIRED_CV = formula(
    "valves.required_cv", "Flow coefficient required", "C_v = Q * sqrt((rho / 62.37) / dp)",
    C_v="flow_coefficient_cv", Q="flow", rho="density", dp="pressure_difference",
    units={**_US, "rho": "lb/ft³", "dp": "psi"},
    source="IEC60534-2-1", locator="turbulent flow of liquids, N1 = 1",
    note="valve of line size; the drop is the sizing drop where the flow could choke",
)

DROP_OF_HEAD = formula(
    "valves.drop_of_head", "Pressure drop of a head lost", "dp = rho * g * h",
    dp="pressure_difference", rho="density", g="acceleration", h="head",
    source="HYDROSTATICS", locator="also HI data book eq. 1.A.1",
)

HEAD_OF_DROP = formula(
    "valves.head_of_drop", "Head of a pressure drop", "h_r = dp / (rho * g)",
    h_r="head", dp="pressure_difference", rho="density", g="acceleration",
    source="HYDROSTATICS", locator="also HI data book eq. 1.A.1",
    note="density of the liquid that the drop was stated for",
)

AUTHORITY = formula(
    "valves.authority", "Authority of a control valve", "N = dp_v / (dp_v + dp_r)",
    N="ratio", dp_v="pressure_difference", dp_r="pressure_difference",
    source="COMMON", locator="drop of the open valve over that of the whole controlled circuit",
    valid={"N": (0.0, 1.0)}, note="0.3 at least and 0.5 as a target are in use",
)

AUTHORITY_OF_BRANCH = formula(
    "valves.authority_of_branch", "Authority of a control valve in its branch", "N = h_v / h_b",
    N="fraction", h_v="head", h_b="head",
    source="COMMON", locator="head lost in the open valve over that of its whole branch",
    note="0.3 at least and 0.5 as a target are in use",
)

BALANCE_DROP = formula(
    "valves.balance_drop", "Pressure drop for the balancing valve", "dp_b = dp_a - dp_i",
    dp_b="pressure_difference", dp_a="pressure_difference", dp_i="pressure_difference",
    source="DEFINITION", locator="pressure across the branch less the drop of the branch at its design flow",
    valid={"dp_b": (0.0, None)}, note="the branch without surplus is the index branch; its valve stays open",
)

CRITICAL_RATIO = formula(
    "valves.critical_ratio", "Liquid critical pressure ratio factor", "F_F = 0.96 - 0.28 * sqrt(p_v / p_c)",
    F_F="ratio", p_v="absolute_pressure", p_c="absolute_pressure",
    source="IEC60534-2-1", locator="liquid critical pressure ratio factor", valid={"p_v / p_c": (0.0, 1.0)},
)

CHOKED_DROP = formula(
    "valves.choked_drop", "Pressure drop that chokes the valve", "dp_c = F_L**2 * (p_1 - F_F * p_v)",
    dp_c="pressure_difference", F_L="ratio", p_1="absolute_pressure", F_F="ratio", p_v="absolute_pressure",
    source="IEC60534-2-1", locator="choked flow, valve of line size", valid={"F_L": (0.0, 1.0)},
    note="F_L at the opening of the duty; p_v at the highest temperature",
)

SIZING_DROP = formula(
    "valves.sizing_drop", "Pressure drop for sizing", "dp_s = min(p_1 - p_2, dp_c)",
    dp_s="pressure_difference", p_1="absolute_pressure", p_2="absolute_pressure", dp_c="pressure_difference",
    source="IEC60534-2-1", locator="the smaller of actual and choked drop", valid={"dp_s": (0.0, None)},
    note="where the choked drop governs, a lower outlet pressure passes no more flow",
)

CAVITATION_INDEX = formula(
    "valves.cavitation_index", "Cavitation index", "sigma = (p_1 - p_v) / (p_1 - p_2)",
    sigma="ratio", p_1="absolute_pressure", p_v="absolute_pressure", p_2="absolute_pressure",
    source="ISA-RP75.23", locator="definition with the inlet pressure",
    note="the maker states the least value; 1.5 to 2 is typical of standard trim; p_2 below p_v flashes",
)

INLET_REDUCER = formula(
    "valves.inlet_reducer", "Loss coefficient of the inlet reducer", "zeta_1 = 0.5 * (1 - (d / D_1)**2)**2",
    zeta_1="loss_coefficient", d="diameter", D_1="diameter",
    source="IEC60534-2-1", locator="short concentric reducer", valid={"d / D_1": (0.0, 1.0)},
    note="on the bore of the valve",
)

OUTLET_EXPANDER = formula(
    "valves.outlet_expander", "Loss coefficient of the outlet expander", "zeta_2 = (1 - (d / D_2)**2)**2",
    zeta_2="loss_coefficient", d="diameter", D_2="diameter",
    source="IEC60534-2-1", locator="short concentric expander", valid={"d / D_2": (0.0, 1.0)},
    note="on the bore of the valve",
)

BORE_CHANGE = formula(
    "valves.bore_change", "Velocity head exchanged at a change of bore", "zeta_B = 1 - (d / D)**4",
    zeta_B="loss_coefficient", d="diameter", D="diameter",
    source="IEC60534-2-1", locator="Bernoulli coefficient", valid={"d / D": (0.0, 1.0)},
    note="on the bore of the valve",
)

SUM_ZETA = formula(
    "valves.sum_zeta", "Sum of the coefficients of both reducers", "zeta = zeta_1 + zeta_2 + zeta_B1 - zeta_B2",
    zeta="loss_coefficient", zeta_1="loss_coefficient", zeta_2="loss_coefficient", zeta_B1="loss_coefficient",
    zeta_B2="loss_coefficient",
    source="IEC60534-2-1", locator="sum of the velocity head loss coefficients",
)

PIPING_FACTOR = formula(
    "valves.piping_factor", "Piping geometry factor", "F_P = 1 / sqrt(1 + (zeta / 0.0016) * (K_v / d**2)**2)",
    F_P="ratio", zeta="loss_coefficient", K_v="flow_coefficient_kv", d="diameter",
    units={**_FITTED, "F_P": "", "zeta": ""},
    source="IEC60534-2-1", locator="N2 = 0.0016", valid={"K_v / d**2": (0.0, 0.0407)},
)

REDUCED_KV = formula(
    "valves.reduced_kv", "Flow coefficient required between reducers",
    "K_v = K_0 / sqrt(1 - (zeta / 0.0016) * (K_0 / d**2)**2)",
    K_v="flow_coefficient_kv", K_0="flow_coefficient_kv", zeta="loss_coefficient", d="diameter",
    units={**_FITTED, "K_0": "m³/h", "zeta": ""},
    source="IEC60534-2-1", locator="K_0 over F_P, solved for K_v", valid={"K_v / d**2": (0.0, 0.0407)},
    note="K_0 is the coefficient of a valve of line size; not choked",
)

COMBINED_FACTOR = formula(
    "valves.combined_factor", "Pressure recovery factor with the inlet reducer",
    "F_LP = F_L / sqrt(1 + (F_L**2 / 0.0016) * (zeta_1 + zeta_B1) * (K_v / d**2)**2)",
    F_LP="ratio", F_L="ratio", zeta_1="loss_coefficient", zeta_B1="loss_coefficient", K_v="flow_coefficient_kv",
    d="diameter",
    units={**_FITTED, "F_LP": "", "F_L": "", "zeta_1": "", "zeta_B1": ""},
    source="IEC60534-2-1", locator="N2 = 0.0016",
)

CHOKED_DROP_REDUCERS = formula(
    "valves.choked_drop_reducers", "Pressure drop that chokes the valve between reducers",
    "dp_c = (F_LP / F_P)**2 * (p_1 - F_F * p_v)",
    dp_c="pressure_difference", F_LP="ratio", F_P="ratio", p_1="absolute_pressure", F_F="ratio",
    p_v="absolute_pressure",
    source="IEC60534-2-1", locator="choked flow, valve with attached fittings",
    note="pressures in the pipe before and after the reducers",
)

REYNOLDS = formula(
    "valves.reynolds", "Reynolds number of a valve",
    "Re_v = (0.0707 * F_d * Q / (nu * sqrt(K_v * F_L))) * (F_L**2 * K_v**2 / (0.0016 * D**4) + 1)**0.25",
    Re_v="reynolds_number", F_d="ratio", Q="flow", nu="kinematic_viscosity", K_v="flow_coefficient_kv", F_L="ratio",
    D="diameter",
    units={**_METRIC, "Re_v": "", "F_d": "", "nu": "m²/s", "F_L": "", "D": "mm"},
    source="IEC60534-2-1", locator="N4 = 0.0707, N2 = 0.0016", valid={"Re_v": (TURBULENT_LIMIT, None)},
    note="below the limit the flow is not turbulent and the required coefficient is larger: refer",
)
