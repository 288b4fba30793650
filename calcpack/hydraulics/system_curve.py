"""What the system asks of one pump: required head over flow, and where it meets the pump's own curve."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from calcpack.hydraulics.assemble import groups
from calcpack.hydraulics.curves import FittedCurve
from calcpack.hydraulics.network import Network
from calcpack.hydraulics.newton import solve
from calcpack.project.model import Project

SCANNED = 161  # flows at which the two curves are compared before a crossing is refined
REFINEMENTS = 12  # each narrows a crossing by the factor 1 / (POINTS_EACH - 1)
POINTS_EACH = 9


@dataclass(frozen=True)
class Crossing:
    """A flow (total of the running units, m3/s) at which pump and system ask the same head (m).

    ``stable`` where the system curve is the steeper one: a small rise of flow then slows down again.
    """

    flow: float
    head: float
    stable: bool


def required_head(net: Network, pump: int, flow: np.ndarray) -> np.ndarray:
    """Head (B,) that pump number ``pump`` must give to pass ``flow`` (B,), the rest of each block running as it does.

    The pump is replaced by a flow taken from its suction node and given to its discharge node. NaN where no head can
    answer: the discharge side leads nowhere, or the block does not converge.
    """
    topology = net.topology
    link = len(topology.lines) + pump
    suction, discharge = topology.start[link], topology.end[link]
    demand, running = net.demand.copy(), net.running.copy()
    demand[suction] += flow
    demand[discharge] -= flow
    running[pump] = 0.0
    result = solve(replace(net, demand=demand, running=running))
    return np.where(result.converged, result.head[discharge] - result.head[suction], np.nan)


def system_curve(project: Project, case_id: str, pump: str, flows: Sequence[float]) -> np.ndarray:
    """Head (m) that the system of a case asks of ``pump`` at each total flow of ``flows`` (m3/s).

    At zero flow this is the static head. Other pumps of the case keep running on their curves. Raises KeyError for an
    unknown case or pump.
    """
    network, number, _ = _of_case(project, case_id, pump)
    return _required(network, number, np.asarray(flows, dtype=float))


def crossings(project: Project, case_id: str, pump: str) -> tuple[Crossing, ...]:
    """Every crossing of pump and system curve between zero flow and the end of the pump's data, by rising flow.

    ``pump`` takes the number of units that the case runs (one where it is off). More than one crossing means that the
    head curve droops; none means that the static head is above the curve or the duty past its end.
    """
    network, number, curve = _of_case(project, case_id, pump)
    return find_crossings(network, number, curve)


def find_crossings(network: Network, pump: int, curve: FittedCurve) -> tuple[Crossing, ...]:
    """Crossings of one block, see :func:`crossings`; ``curve`` is the head of one unit."""
    units = max(float(network.running[pump, 0]), 1.0)

    def surplus(flow: np.ndarray) -> np.ndarray:
        return curve.value(flow / units) - _required(network, pump, flow)

    flow = np.linspace(0.0, units * curve.flow_max, SCANNED)
    spare = surplus(flow)
    found = []
    for i in np.flatnonzero(np.sign(spare[:-1]) * np.sign(spare[1:]) < 0):
        low, high, falling = flow[i], flow[i + 1], spare[i] > 0
        for _ in range(REFINEMENTS):
            inner = np.linspace(low, high, POINTS_EACH)
            past = np.flatnonzero((surplus(inner) > 0) != falling)
            first = int(past[0]) if len(past) else POINTS_EACH - 1
            low, high = inner[max(first - 1, 0)], inner[first]
        middle = 0.5 * (low + high)
        found.append(Crossing(float(middle), float(curve.value(middle / units)), bool(falling)))
    return tuple(found)


def _required(network: Network, pump: int, flows: np.ndarray) -> np.ndarray:
    return required_head(network.take(np.zeros(len(flows), dtype=int)), pump, flows)


def _of_case(project: Project, case_id: str, pump: str) -> tuple[Network, int, FittedCurve]:
    (group,) = groups([project.case(case_id)])
    if pump not in group.network.topology.pumps:
        raise KeyError(pump)
    number = group.network.topology.pumps.index(pump)
    return group.network, number, group.curves[number][0]
