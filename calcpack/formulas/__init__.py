"""Every formula of the program: importing this package declares them all in FORMULAS."""

from calcpack.formulas import pipe_flow
from calcpack.formulas.formula import FORMULAS, Formula, formula

__all__ = ["FORMULAS", "Formula", "formula", "pipe_flow"]
