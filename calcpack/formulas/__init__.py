"""Every formula of the program: importing this package declares them all in FORMULAS."""

from calcpack.formulas import criteria, duty, fittings, grade, liquid, pipe_flow, pump, suction, surge
from calcpack.formulas.formula import FORMULAS, Formula, formula

__all__ = [
    "FORMULAS", "Formula", "criteria", "duty", "fittings", "formula", "grade", "liquid", "pipe_flow", "pump",
    "suction", "surge",
]
