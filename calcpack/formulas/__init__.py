"""Every formula of the program: importing this package declares them all in FORMULAS."""

from calcpack.formulas import (
    acceptance,
    criteria,
    displacement,
    duty,
    fittings,
    grade,
    heat,
    liquid,
    pipe_flow,
    pump,
    speed,
    suction,
    surge,
    valves,
    viscous,
)
from calcpack.formulas.formula import FORMULAS, Formula, formula

__all__ = [
    "FORMULAS", "Formula", "acceptance", "criteria", "displacement", "duty", "fittings", "formula", "grade", "heat",
    "liquid", "pipe_flow", "pump", "speed", "suction", "surge", "valves", "viscous",
]
