"""Steady flows and heads of every case of a project, and the checks that stand beside them."""

from __future__ import annotations

from calcpack.hydraulics.assemble import groups
from calcpack.hydraulics.newton import solve as solve_network
from calcpack.hydraulics.results import case_solutions
from calcpack.hydraulics.solution import Solution
from calcpack.project.model import Project

__all__ = ["Solution", "solve"]


def solve(project: Project) -> Solution:
    """Solve all cases of ``project`` at once.

    What a system cannot do (no duty point, a part without a fixed head, a demand that is not met) is a finding of its
    case, not an error. Raises CalcpackError only for a model that is not a network (an unknown kind of node or law).
    """
    found = {}
    for group in groups(project.cases):
        result = solve_network(group.network)
        found.update(case_solutions(group, result, project.units))
    return Solution({case.id: found[case.id] for case in project.cases})
