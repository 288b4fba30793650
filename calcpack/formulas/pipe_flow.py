"""Friction of a Newtonian liquid in a full pipe: velocity, Reynolds number, friction factor, head."""

from __future__ import annotations

import numpy as np

from calcpack.formulas.formula import Formula, formula

LAMINAR_LIMIT = 2000.0
TURBULENT_LIMIT = 4000.0
MAX_RELATIVE_ROUGHNESS = 0.05

BORE = formula(
    "pipe.bore", "Inside diameter", "D = D_o - 2 * t",
    D="diameter", D_o="diameter", t="diameter",
    source="GEOMETRY", note="nominal wall on both sides",
)

AREA = formula(
    "pipe.area", "Flow area", "A = pi * D**2 / 4",
    A="area", D="diameter",
    source="GEOMETRY",
)

VELOCITY = formula(
    "pipe.velocity", "Mean velocity", "V = Q / A",
    V="velocity", Q="flow", A="area",
    source="CONTINUITY",
)

REYNOLDS = formula(
    "pipe.reynolds", "Reynolds number", "Re = rho * V * D / mu",
    Re="reynolds_number", rho="density", V="velocity", D="diameter", mu="dynamic_viscosity",
    source="REYNOLDS",
)

RELATIVE_ROUGHNESS = formula(
    "pipe.relative_roughness", "Relative roughness", "k = eps / D",
    k="ratio", eps="roughness", D="diameter",
    source="GEOMETRY",
)

LAMINAR = formula(
    "pipe.friction_laminar", "Friction factor (Darcy), laminar", "f = 64 / Re",
    f="friction_factor", Re="reynolds_number",
    source="HI-DATABOOK", locator="eq. 3.A.5", valid={"Re": (None, LAMINAR_LIMIT)},
)

COLEBROOK = formula(
    "pipe.friction_colebrook", "Friction factor (Darcy), solved for f",
    "1 / sqrt(f) = -2 * log10(eps / (3.7 * D) + 2.51 / (Re * sqrt(f)))",
    f="friction_factor", eps="roughness", D="diameter", Re="reynolds_number", unknown="f",
    source="HI-DATABOOK", locator="eq. 3.A.2 (Colebrook-White)",
    valid={"Re": (TURBULENT_LIMIT, None), "eps / D": (0.0, MAX_RELATIVE_ROUGHNESS)},
)

CRITICAL_ZONE = formula(
    "pipe.friction_critical", "Friction factor (Darcy), critical zone",
    "f = f_2000 + (f_4000 - f_2000) * (Re - 2000) / 2000",
    f="friction_factor", f_2000="friction_factor", f_4000="friction_factor", Re="reynolds_number",
    source="TOOL", locator="straight line in Re",
    valid={"Re": (LAMINAR_LIMIT, TURBULENT_LIMIT)},
    note="flow between Re 2000 and 4000 may be unstable; 0.03 to 0.05 is possible",
)

EXPLICIT = formula(
    "pipe.friction_explicit", "Friction factor (Darcy), explicit form",
    "f = 0.25 / log10(eps / (3.7 * D) + 5.74 / Re**0.9)**2",
    f="friction_factor", eps="roughness", D="diameter", Re="reynolds_number",
    source="HI-DATABOOK", locator="eq. 3.A.3 (Swamee-Jain)",
    valid={"Re": (5000.0, 1e8), "eps / D": (1e-6, 0.02)},
    note="second correlation, for comparison only",
)

FRICTION_HEAD = formula(
    "pipe.friction_head", "Friction head", "h_f = f * (L / D) * (V**2 / (2 * g))",
    h_f="head", f="friction_factor", L="length", D="diameter", V="velocity", g="acceleration",
    source="HI-DATABOOK", locator="eq. 3.A.1 (Darcy-Weisbach)",
)

VELOCITY_HEAD = formula(
    "pipe.velocity_head", "Velocity head", "h_v = V**2 / (2 * g)",
    h_v="head", V="velocity", g="acceleration",
    source="BERNOULLI",
)

GRADIENT = formula(
    "pipe.gradient", "Friction gradient", "J = h_f / L",
    J="gradient", h_f="head", L="length",
    source="GEOMETRY",
)


def solve_colebrook(relative_roughness, reynolds):
    """Friction factor of COLEBROOK by Newton's method on x = 1/sqrt(f); arrays broadcast.

    Converges to round-off in a few steps for 0 <= eps/D <= 0.05 and Re >= 2000.
    """
    roughness_term = np.asarray(relative_roughness, dtype=float) / 3.7
    reynolds_term = 2.51 / np.asarray(reynolds, dtype=float)
    x = np.full(np.broadcast(roughness_term, reynolds_term).shape, 8.0)
    for _ in range(30):
        inner = roughness_term + reynolds_term * x
        step = (x + 2.0 * np.log10(inner)) / (1.0 + 2.0 / np.log(10.0) * reynolds_term / inner)
        x = x - step
        if np.all(np.abs(step) <= 1e-15 * np.abs(x)):
            break
    return x**-2.0 if x.ndim else float(x**-2.0)


def friction_formula(reynolds: float) -> Formula:
    """The friction formula that applies at this Reynolds number; solver and sheets both ask here."""
    if reynolds <= LAMINAR_LIMIT:
        return LAMINAR
    return COLEBROOK if reynolds >= TURBULENT_LIMIT else CRITICAL_ZONE


def friction_factor(relative_roughness, reynolds):
    """Darcy friction factor over all regimes (arrays broadcast; Re > 0).

    Laminar to Re 2000, Colebrook-White from Re 4000, a straight line in Re between (domain convention, printed as an
    assumption).
    """
    reynolds = np.asarray(reynolds, dtype=float)
    roughness = np.asarray(relative_roughness, dtype=float)
    laminar = LAMINAR.evaluate(Re=np.maximum(reynolds, 1e-300))
    turbulent = solve_colebrook(roughness, np.maximum(reynolds, TURBULENT_LIMIT))
    between = CRITICAL_ZONE.evaluate(
        f_2000=LAMINAR.evaluate(Re=LAMINAR_LIMIT), f_4000=solve_colebrook(roughness, TURBULENT_LIMIT), Re=reynolds
    )
    factor = np.where(reynolds <= LAMINAR_LIMIT, laminar, np.where(reynolds >= TURBULENT_LIMIT, turbulent, between))
    return factor if factor.ndim else float(factor)
