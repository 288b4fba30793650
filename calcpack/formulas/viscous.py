"""Performance of a rotodynamic pump with a viscous liquid, from its curves for water (ANSI/HI 9.6.7).

The parameter B is formed at the best efficiency point of the water curve, with the head of one stage. It decides
whether the water curve holds, is corrected, or the method ends: :func:`regime` names the formulas.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.formulas.formula import Formula, formula

NO_CORRECTION_LIMIT = 1.0
REFER_LIMIT = 40.0
_CORRECTED = {"B": (NO_CORRECTION_LIMIT, REFER_LIMIT)}
_METHOD_UNITS = {"nu": "cSt", "Q_BEP": "m³/h", "H_BEP": "m", "n": "rpm"}

PARAMETER = formula(
    "viscous.parameter", "Viscosity parameter",
    "B = 16.5 * sqrt(nu) * H_BEP**0.0625 / (Q_BEP**0.375 * n**0.25)",
    B="ratio", nu="kinematic_viscosity", H_BEP="head", Q_BEP="flow", n="rotational_speed",
    units={**_METHOD_UNITS, "B": ""},
    source="HI-9.6.7", locator="parameter B, metric units",
    valid={
        "nu": (1.0, 3000.0), "Q_BEP": (3.0, 260.0), "H_BEP": (6.0, 130.0), "B": (None, REFER_LIMIT),
        "n * sqrt(Q_BEP / 3600) / H_BEP**0.75": (None, 60.0),
    },
    note="water curve at best efficiency, head of one stage; radial impeller, Newtonian liquid",
)

SELECTION_PARAMETER = formula(
    "viscous.selection_parameter", "Viscosity parameter before a pump is chosen",
    "B = 2.80 * sqrt(nu) / (Q_v**0.25 * H_v**0.125)",
    B="ratio", nu="kinematic_viscosity", Q_v="flow", H_v="head",
    units={"B": "", "nu": "cSt", "Q_v": "m³/h", "H_v": "m"},
    source="HI-9.6.7", locator="preliminary selection, metric units",
    valid={"nu": (1.0, 3000.0), "B": (None, REFER_LIMIT)},
    note="flow and head with the viscous liquid; to be repeated with the curve of the pump chosen",
)

FLOW_FACTOR = formula(
    "viscous.flow_factor", "Correction factor of flow", "C_Q = 2.71**(-0.165 * log10(B)**3.15)",
    C_Q="ratio", B="ratio",
    source="HI-9.6.7", locator="correction factor C_Q", valid=_CORRECTED, note="one number for all flows",
)

EFFICIENCY_FACTOR = formula(
    "viscous.efficiency_factor", "Correction factor of efficiency", "C_eta = B**(-0.0547 * B**0.69)",
    C_eta="ratio", B="ratio",
    source="HI-9.6.7", locator="correction factor of efficiency", valid=_CORRECTED, note="one number for all flows",
)

NO_FLOW_FACTOR = formula(
    "viscous.no_flow_factor", "Correction factor of flow, water curve holds", "C_Q = 1",
    C_Q="ratio",
    source="HI-9.6.7", locator="B at most 1",
)

NO_EFFICIENCY_FACTOR = formula(
    "viscous.no_efficiency_factor", "Correction factor of efficiency, water curve holds", "C_eta = 1",
    C_eta="ratio",
    source="HI-9.6.7", locator="B at most 1",
)

HEAD_FACTOR_BEP = formula(
    "viscous.head_factor_bep", "Correction factor of head at best efficiency", "C_HB = C_Q",
    C_HB="ratio", C_Q="ratio",
    source="HI-9.6.7", locator="correction factor of head at best efficiency",
)

HEAD_FACTOR = formula(
    "viscous.head_factor", "Correction factor of head", "C_H = 1 - (1 - C_HB) * (Q_w / Q_BEP)**0.75",
    C_H="ratio", C_HB="ratio", Q_w="flow", Q_BEP="flow",
    source="HI-9.6.7", locator="correction factor of head at other flows", valid={"Q_w / Q_BEP": (0.0, None)},
    note="flows on the water curve",
)

FLOW = formula(
    "viscous.flow", "Flow with the viscous liquid", "Q_v = C_Q * Q_w",
    Q_v="flow", C_Q="ratio", Q_w="flow",
    source="HI-9.6.7", locator="corrected performance",
)

HEAD = formula(
    "viscous.head", "Head with the viscous liquid", "H_v = C_H * H_w",
    H_v="head", C_H="ratio", H_w="head",
    source="HI-9.6.7", locator="corrected performance",
)

EFFICIENCY = formula(
    "viscous.efficiency", "Efficiency with the viscous liquid", "eta_v = C_eta * eta_w",
    eta_v="efficiency", C_eta="ratio", eta_w="efficiency",
    source="HI-9.6.7", locator="corrected performance",
)

WATER_FLOW = formula(
    "viscous.water_flow", "Flow on the water curve", "Q_w = Q_v / C_Q",
    Q_w="flow", Q_v="flow", C_Q="ratio",
    source="HI-9.6.7", locator="corrected performance, the other way round",
)

WATER_HEAD = formula(
    "viscous.water_head", "Head on the water curve", "H_w = H_v / C_H",
    H_w="head", H_v="head", C_H="ratio",
    source="HI-9.6.7", locator="corrected performance, the other way round",
)

HEAD_CURVE = formula(
    "viscous.head_curve", "Head with the viscous liquid, from the fitted water curve",
    "H_v = (1 - (1 - C_HB) * (Q_v / (C_Q * Q_BEP))**0.75) * (a_0 + a_1 * (Q_v / C_Q) + a_2 * (Q_v / C_Q)**2)",
    H_v="head", C_HB="ratio", Q_v="flow", C_Q="ratio", Q_BEP="flow", a_0="head", a_1="head_slope",
    a_2="quadratic_coefficient",
    source="HI-9.6.7", locator="factors of flow and head on the fitted curve",
)

EFFICIENCY_CURVE = formula(
    "viscous.efficiency_curve", "Efficiency with the viscous liquid, from the fitted water curve",
    "eta_v = C_eta * (b_1 * (Q_v / C_Q) + b_2 * (Q_v / C_Q)**2 + b_3 * (Q_v / C_Q)**3)",
    eta_v="efficiency", C_eta="ratio", b_1="efficiency_slope", Q_v="flow", C_Q="ratio", b_2="efficiency_square",
    b_3="efficiency_cube",
    source="HI-9.6.7", locator="factors of flow and efficiency on the fitted curve", valid={"eta_v": (0.0, 1.0)},
)

NPSHR_FACTOR = formula(
    "viscous.npshr_factor", "Correction factor of NPSHR",
    "C_N = 1 + A * (1 / C_HB - 1) * 274000 * NPSHR_BEP / (Q_BEP**0.667 * n**1.33)",
    C_N="ratio", A="ratio", C_HB="ratio", NPSHR_BEP="head", Q_BEP="flow", n="rotational_speed",
    units={"C_N": "", "A": "", "C_HB": "", "NPSHR_BEP": "m", "Q_BEP": "m³/h", "n": "rpm"},
    source="HI-9.6.7", locator="correction of NPSHR, metric units", valid={"A": (0.0, 0.5)},
    note="A belongs to the inlet of the pump; an estimate, the maker's figure goes before it",
)

NPSHR = formula(
    "viscous.npshr", "NPSHR with the viscous liquid", "NPSHR_v = C_N * NPSHR_w",
    NPSHR_v="head", C_N="ratio", NPSHR_w="head",
    source="HI-9.6.7", locator="corrected performance",
)


@dataclass(frozen=True)
class Regime:
    """What the method asks for: its formulas of C_Q and C_eta, or none where it ends and the maker must be asked."""

    name: str
    reason: str
    flow_factor: Formula | None
    efficiency_factor: Formula | None


UNCORRECTED = Regime("water curve", "B is low: the water curve holds", NO_FLOW_FACTOR, NO_EFFICIENCY_FACTOR)
CORRECTED = Regime("corrected", "B lies in the range of the correction", FLOW_FACTOR, EFFICIENCY_FACTOR)
REFER = Regime("refer", "B is beyond the range of the correction: the maker of the pump has to state it", None, None)


def regime(B: float) -> Regime:
    """The regime at a value of PARAMETER (B > 0); solver and sheets both ask here."""
    if B >= REFER_LIMIT:
        return REFER
    return CORRECTED if B > NO_CORRECTION_LIMIT else UNCORRECTED
