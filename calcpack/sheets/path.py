"""The way of the liquid through a pump: from the free surface it is drawn from to where it is delivered."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.hydraulics.solution import CaseSolution
from calcpack.project.model import OUTLET, TANK, Case, Line, Pump

FIXED = (TANK, OUTLET)


@dataclass(frozen=True)
class Path:
    """Lines in flow order before and after the pump, and the nodes of known head at both ends."""

    source: str
    suction: tuple[Line, ...]
    discharge: tuple[Line, ...]
    delivery: str

    @property
    def lines(self) -> tuple[Line, ...]:
        """Every line of the path in flow order."""
        return (*self.suction, *self.discharge)


def at_rest(case: Case, tag: str) -> bool:
    """True for a tank or outlet, whose head is known without a solution.

    A path may also end at a demand, or at a port of another pump in series with this one.
    """
    return case.system.nodes[tag].kind in FIXED


def pump_path(case: Case, solution: CaseSolution, pump: Pump) -> Path:
    """Follow the largest flow upstream and downstream of ``pump`` to nodes of known head.

    Where the path splits, the branch of larger flow is followed; the head between the same two nodes is equal along
    every branch, so the choice only decides which losses are listed.
    """
    suction = _follow(case, solution, pump.suction, upstream=True)
    discharge = _follow(case, solution, pump.discharge, upstream=False)
    return Path(suction[0], tuple(reversed(suction[1])), tuple(discharge[1]), discharge[0])


def _follow(case: Case, solution: CaseSolution, node: str, upstream: bool) -> tuple[str, list[Line]]:
    lines: list[Line] = []
    seen = {node}
    while case.system.nodes[node].kind not in FIXED:
        steps = [(_flow_out(solution, line, node), line) for line in case.system.lines.values()
                 if node in (line.start, line.end) and line not in lines]
        if upstream:
            steps = [(-flow, line) for flow, line in steps]
        steps = [step for step in steps if step[0] > 0] or steps
        if not steps:
            break
        line = max(steps, key=lambda step: step[0])[1]
        lines.append(line)
        node = line.end if node == line.start else line.start
        if node in seen:
            break
        seen.add(node)
    return node, lines


def _flow_out(solution: CaseSolution, line: Line, node: str) -> float:
    flow = solution.lines[line.tag].flow
    return flow if line.start == node else -flow
