"""Random small networks with tanks, outlets, tees, loops, pumps, check valves and demands; and their laws, again.

The second half writes the head losses and balances out a second time, link by link, with the friction factor of the
open library ``fluids``: nothing of the solver's arrays is used.
"""

from __future__ import annotations

from dataclasses import replace

import builders as b
import numpy as np
from fluids.friction import Clamond

from calcpack.hydraulics.curves import pump_curves
from calcpack.hydraulics.solution import CaseSolution
from calcpack.project.model import Case, Line, System

BEND = np.array([50.0, 48.0, 42.0, 32.0])


def random_case(seed: int) -> Case:
    """A connected network of up to eleven junctions: a tree grown from the tanks, then some loops."""
    random = np.random.default_rng(seed)
    tanks = [b.tank(f"T{i}", float(random.uniform(0, 60))) for i in range(random.integers(1, 4))]
    if random.random() < 0.3:
        tanks.append(b.outlet("O", float(random.uniform(0, 30))))
    count = int(random.integers(2, 12))
    joints = [b.junction(f"J{i}", float(random.choice([0, 0, random.uniform(-0.01, 0.03)]))) for i in range(count)]
    lines: list[Line] = []
    pumps = []

    def join(start: str, end: str) -> None:
        lines.append(b.line(
            f"L{len(lines)}", start, end, length=float(10 ** random.uniform(0, 3.3)),
            bore=float(random.uniform(0.04, 0.4)), roughness=float(10 ** random.uniform(-6, -3.5)),
            k=float(random.choice([0, random.uniform(0, 20)])), factor=None if random.random() < 0.8 else 0.02,
            fittings=[b.check_valve()] if random.random() < 0.2 else [],
        ))

    for i, joint in enumerate(joints):
        other = str(random.choice([node.tag for node in (*tanks, *joints[:i])]))
        if random.random() < 0.25:
            made = b.pump(f"P{len(pumps)}", [0, 0.01, 0.02, 0.03], BEND * random.uniform(0.3, 1.5))
            pumps.append(made)
            join(other, made.suction)
            join(made.discharge, joint.tag)
        else:
            join(*((other, joint.tag) if random.random() < 0.5 else (joint.tag, other)))
    for _ in range(int(random.integers(0, count))):
        join(*(str(tag) for tag in random.choice([node.tag for node in (*tanks, *joints)], 2, replace=False)))
    return b.case(str(seed), b.system([*tanks, *joints], lines, pumps))


def renamed(case: Case, seed: int) -> tuple[Case, dict[str, tuple[str, float]]]:
    """The same network with new tags in another order, some lines drawn the other way.

    Returns the case and, for each old line tag, the new tag and the sign of its flow.
    """
    random, system = np.random.default_rng(seed), case.system
    nodes = {tag: f"n{i}" for i, tag in enumerate(random.permutation(list(system.nodes)))}
    flows, lines = {}, []
    for i, tag in enumerate(random.permutation(list(system.lines))):
        line = system.lines[str(tag)]
        turned = line.check_valve is None and "O" not in (line.start, line.end) and random.random() < 0.5
        ends = (line.end, line.start) if turned else (line.start, line.end)
        flows[line.tag] = (f"l{i}", -1.0 if turned else 1.0)
        lines.append(replace(line, tag=f"l{i}", start=nodes[ends[0]], end=nodes[ends[1]]))
    pumps = {
        tag: replace(system.pumps[str(tag)], suction=nodes[system.pumps[str(tag)].suction],
                     discharge=nodes[system.pumps[str(tag)].discharge])
        for tag in random.permutation(list(system.pumps)).tolist()
    }
    made = System(
        system.site, system.liquid, {nodes[t]: replace(system.nodes[t], tag=nodes[t]) for t in nodes},
        {line.tag: line for line in lines}, system.equipment, pumps,
    )
    return b.case("other", made), flows


def head_lost(case: Case, line: Line, flow: float) -> float:
    """Head lost in ``line`` at ``flow`` (signed), friction and plain coefficients alone."""
    if flow == 0:
        return 0.0
    bore, liquid, g = line.pipe.bore.si, case.liquid, case.system.site.gravity.si
    speed = abs(flow) / (np.pi * bore**2 / 4)
    re = liquid.density.si * speed * bore / liquid.dynamic_viscosity.si
    rough = line.roughness["new"].si / bore
    if line.friction_factor is not None:
        factor = line.friction_factor.si
    elif re <= 2000:
        factor = 64 / re
    elif re < 4000:
        factor = 0.032 + (Clamond(4000.0, rough) - 0.032) * (re - 2000) / 2000
    else:
        factor = Clamond(re, rough)
    k = sum(fitting.count * fitting.coefficient.si for fitting in line.fittings)
    return float(np.sign(flow) * (factor * line.length.si / bore + k) * speed**2 / (2 * g))


class Balances:
    """The equations of a case as one function of all flows and heads, for the links that ``solution`` leaves open."""

    def __init__(self, case: Case, solution: CaseSolution) -> None:
        self.case, system = case, case.system
        self.open = [t for t, line in system.lines.items() if solution.lines[t].open and not self._dead(solution, line)]
        self.pumping = [t for t in system.pumps if solution.pumps[t].flow > 0]
        self.heads = {t: solution.heads[t] for t, node in system.nodes.items() if node.kind in ("tank", "outlet")}
        self.free = [t for t in system.nodes if t not in self.heads and not np.isnan(solution.heads[t])]
        self.curves = {t: pump_curves(system.pumps[t]).head for t in self.pumping}

    @staticmethod
    def _dead(solution: CaseSolution, line: Line) -> bool:
        return bool(np.isnan(solution.heads[line.start]) or np.isnan(solution.heads[line.end]))

    def vector(self, solution: CaseSolution) -> np.ndarray:
        """The unknowns of a solution: flows of open lines, of pumps, heads of free nodes."""
        return np.array([solution.lines[t].flow for t in self.open] + [solution.pumps[t].flow for t in self.pumping]
                        + [solution.heads[t] for t in self.free])

    def __call__(self, x: np.ndarray) -> np.ndarray:
        """Residuals: energy of lines and pumps (m), continuity of nodes (in units of 1 L/s)."""
        lines, pumps = self.case.system.lines, self.case.system.pumps
        flows = dict(zip([*self.open, *self.pumping], x, strict=False))
        heads = self.heads | dict(zip(self.free, x[len(flows):], strict=True))
        residual = [
            head_lost(self.case, lines[t], flows[t]) - heads[lines[t].start] + heads[lines[t].end] for t in self.open
        ]
        residual += [self.curves[t].value(flows[t]) + heads[pumps[t].suction] - heads[pumps[t].discharge]
                     for t in self.pumping]
        ends = [(t, lines[t].start, lines[t].end) for t in self.open]
        ends += [(t, pumps[t].suction, pumps[t].discharge) for t in self.pumping]
        for node in self.free:
            demand = self.case.system.nodes[node].demand
            balance = -(demand.si if demand is not None else 0.0)
            balance += sum(flows[t] * ((end == node) - (start == node)) for t, start, end in ends)
            residual.append(1e3 * balance)
        return np.array(residual)
