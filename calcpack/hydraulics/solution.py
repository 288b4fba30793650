"""What the solver hands over: flows and heads of every case, SI floats."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field


@dataclass(frozen=True)
class Finding:
    """Something a reader must know about a case: ``code`` is a stable word, ``tag`` where, ``text`` with numbers."""

    code: str
    tag: str
    text: str


@dataclass(frozen=True)
class LineFlow:
    """One line: flow from its start to its end (negative = against the drawing), velocity and head losses signed like
    the flow. At rest the friction factor is NaN unless it was given. ``open`` is False where a check valve, a fixed
    loss or an outlet that is too high keeps the line shut."""

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
    """One pump item (all running units together): flow per running unit, total flow, head (0 when none runs).

    A finding 'past-end-of-curve' or 'below-start-of-curve' on the pump's tag means that the head is extrapolated and
    this is no duty."""

    flow_each: float
    flow: float
    head: float
    running: int


@dataclass(frozen=True)
class ValveState:
    """A regulating or balancing valve: ``state`` 'active' (holds its setting), 'open' (cannot reach it), 'shut' or
    'solved' (balanced); head lost in it (m); the flow coefficient that this takes (SI, m3/s), inf when nothing is lost.
    """

    state: str
    head: float
    coefficient: float


@dataclass(frozen=True)
class Convergence:
    """How the solution was reached: iterations, the largest continuity residual (m3/s) and energy residual (m)."""

    iterations: int
    continuity: float
    energy: float
    converged: bool


@dataclass(frozen=True)
class CaseSolution:
    """One case. ``heads`` are total energy heads above datum (gauge), m, by node tag; NaN where no open path joins the
    node to a tank or outlet (its lines carry nothing). All flows and heads are NaN where a line has no resistance."""

    case: str
    heads: Mapping[str, float]
    lines: Mapping[str, LineFlow]
    pumps: Mapping[str, PumpDuty]
    convergence: Convergence
    valves: Mapping[str, ValveState] = field(default_factory=dict)
    speeds: Mapping[str, float] = field(default_factory=dict)  # pump -> fraction of the curve's speed, where not 1
    findings: tuple[Finding, ...] = ()


@dataclass(frozen=True)
class Solution:
    """All cases by id, in the order of the project."""

    cases: Mapping[str, CaseSolution]
