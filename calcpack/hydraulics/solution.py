"""What the solver hands over: flows and heads of every case, SI floats."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass


@dataclass(frozen=True)
class Finding:
    """Something a reader must know about a case: ``code`` is a stable word, ``tag`` where, ``text`` with numbers."""

    code: str
    tag: str
    text: str


@dataclass(frozen=True)
class LineFlow:
    """One line: flow from its start to its end (negative = against the drawing) and head losses in flow direction
    (signed like the flow). ``open`` is False where a check valve is shut."""

    flow: float
    velocity: float
    reynolds: float
    friction_factor: float
    friction_head: float
    local_head: float
    equipment_head: Mapping[str, float]
    open: bool = True


@dataclass(frozen=True)
class PumpDuty:
    """One pump item (all running units together): flow per running unit, total flow, head."""

    flow_each: float
    flow: float
    head: float
    running: int


@dataclass(frozen=True)
class Convergence:
    """How the solution was reached: iterations, the largest continuity residual (m3/s) and energy residual (m)."""

    iterations: int
    continuity: float
    energy: float
    converged: bool


@dataclass(frozen=True)
class CaseSolution:
    """One case. ``heads`` are total energy heads above datum (gauge), m, by node tag."""

    case: str
    heads: Mapping[str, float]
    lines: Mapping[str, LineFlow]
    pumps: Mapping[str, PumpDuty]
    convergence: Convergence
    findings: tuple[Finding, ...] = ()


@dataclass(frozen=True)
class Solution:
    """All cases by id, in the order of the project."""

    cases: Mapping[str, CaseSolution]
