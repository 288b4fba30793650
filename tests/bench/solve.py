"""Speed of the network solver against the work it cannot avoid. Run: python tests/bench/solve.py

First, a looped grid of 10 000 pipes: solving time over the time of its own sparse factorisations, that is of as many
factorisations of the same matrix as there were iterations. Second, 1000 cases of a 50-line system: solving time over
iterations times one evaluation of the friction and curve formulas on all lines of all cases. Each is timed for the
arrays and for a whole project with its results.
"""

from __future__ import annotations

import sys
import time
from dataclasses import replace
from pathlib import Path

import numpy as np

ROOT = Path(__file__).resolve().parents[2]
sys.path[:0] = [str(ROOT), str(ROOT / "tests")]

import builders as b  # noqa: E402

from calcpack import hydraulics  # noqa: E402
from calcpack.formulas.fittings import LOCAL_HEAD  # noqa: E402
from calcpack.formulas.pipe_flow import FRICTION_HEAD, REYNOLDS, VELOCITY, friction_factor  # noqa: E402
from calcpack.hydraulics import laws, linear, newton  # noqa: E402
from calcpack.hydraulics.assemble import groups  # noqa: E402

REPEATS = 5


def best(work, repeats: int = REPEATS):
    """Shortest time of ``work()`` in seconds, and what it returned."""
    shortest, returned = np.inf, None
    for _ in range(repeats):
        begin = time.perf_counter()
        returned = work()
        shortest = min(shortest, time.perf_counter() - begin)
    return shortest, returned


def grid(side: int) -> b.System:
    """A square grid of about 2 side**2 pipes with small demands, fed from tanks at two corners."""
    random = np.random.default_rng(20)
    tag = "N{}-{}".format
    nodes = [b.junction(tag(i, j), float(random.uniform(0, 4e-4))) for i in range(side) for j in range(side)]
    lines = [b.line("feed-1", "T1", tag(0, 0), length=50, bore=0.8, roughness=1e-4),
             b.line("feed-2", "T2", tag(side - 1, side - 1), length=50, bore=0.8, roughness=1e-4)]
    for i in range(side):
        for j in range(side):
            for other in ((i + 1, j), (i, j + 1)):
                if max(other) < side:
                    lines.append(b.line(
                        f"L{len(lines)}", tag(i, j), tag(*other), length=float(random.uniform(50, 150)),
                        bore=float(random.uniform(0.1, 0.4)), roughness=float(random.uniform(2e-5, 5e-4)),
                        k=float(random.uniform(0, 5)),
                    ))
    return b.system([b.tank("T1", 80.0), b.tank("T2", 75.0), *nodes], lines)


def plant() -> b.System:
    """A 50-line system: three pumps in parallel, a ring main of branches, a return to tanks."""
    flow, head = [0.0, 0.02, 0.04, 0.06, 0.08], [62.0, 60.8, 57.2, 51.2, 42.8]
    pumps = [b.pump(f"P{i}", flow, head, best=0.05) for i in range(3)]
    made = []

    def add(start: str, end: str, length: float, bore: float, fittings=()) -> None:
        made.append(b.line(f"L{len(made)}", start, end, length=length, bore=bore, roughness=4.57e-5, k=1.5,
                           fittings=fittings))

    add("T0", "S", 20, 0.4)
    for p in pumps:
        add("S", p.suction, 4, 0.25)
        add(p.discharge, "D", 6, 0.2, [b.check_valve()])
    add("D", "R0", 150, 0.35)
    for i in range(20):
        add(f"R{i}", f"R{(i + 1) % 20}", 80 + 3 * i, 0.25)
    for i in range(1, 20):
        add(f"R{i}", f"B{i}", 30 + i, 0.08)
    for i in range(1, 4):
        add(f"R{5 * i}", f"T{i}", 120, 0.15)
    nodes = [b.tank("T0", 5.0, 6.0, 7.0), *(b.tank(f"T{i}", 30.0 + i) for i in range(1, 4)), b.junction("S"),
             b.junction("D"), *(b.junction(f"R{i}") for i in range(20)),
             *(b.junction(f"B{i}", 0.002 + 1e-4 * i) for i in range(1, 20))]
    return b.system(nodes, made, pumps)


def bench_grid() -> None:
    """Print the ratios of the 10 000-pipe grid."""
    project = b.project(b.case("1", grid(71)))
    ((group),) = groups(project.cases)
    net = group.network
    matrices: list[tuple] = []
    original = linear.SparseFactors.factorise

    def recorded(self, ground, pairs):
        matrices.append((self, ground.copy(), pairs.copy()))
        return original(self, ground, pairs)

    linear.SparseFactors.factorise = recorded
    result = newton.solve(net)
    linear.SparseFactors.factorise = original
    factors = sum(best(lambda entry=entry: original(*entry))[0] for entry in matrices)
    arrays, _ = best(lambda: newton.solve(net))
    whole, _ = best(lambda: hydraulics.solve(project), 3)
    print(f"{len(net.topology.lines)} pipes, {len(net.topology.unknown)} unknown heads, {int(result.iterations[0])} "
          f"iterations, {len(matrices)} factorisations, converged {bool(result.converged[0])}")
    print(f"  factorisations {factors * 1e3:.0f} ms; arrays {arrays * 1e3:.0f} ms = {arrays / factors:.2f} x; "
          f"whole project {whole * 1e3:.0f} ms = {whole / factors:.2f} x (goal 2.5)")


def bench_cases() -> None:
    """Print the ratios of 1000 cases of a 50-line system."""
    system = plant()
    random = np.random.default_rng(7)
    cases = []
    for i in range(1000):
        lines = {
            tag: replace(line, length=b.value(line.length.si * random.uniform(0.9, 1.1), "length"))
            for tag, line in system.lines.items()
        }
        cases.append(b.case(str(i), replace(system, lines=lines), level=str(i % 3), running={"P2": i % 2}))
    project = b.project(*cases)
    ((group),) = groups(project.cases)
    net = group.network
    arrays, result = best(lambda: newton.solve(net))
    count = len(net.topology.lines)
    flow, units = result.flow[:count] + net.area * 1e-3, np.maximum(net.running, 1)

    def evaluation():
        speed = VELOCITY.evaluate(Q=np.abs(flow), A=net.area)
        reynolds = REYNOLDS.evaluate(rho=net.density, V=speed, D=net.bore, mu=net.viscosity)
        factor = friction_factor(net.roughness, reynolds)
        friction = FRICTION_HEAD.evaluate(f=factor, L=net.length, D=net.bore, V=speed, g=net.gravity)
        return friction, LOCAL_HEAD.evaluate(K=net.local, V=speed, g=net.gravity), net.curves.evaluate(
            result.flow[count:] / units)

    one, _ = best(evaluation, 20)
    own, _ = best(lambda: laws.losses(net, result.flow, result.state), 20)
    assembling, _ = best(lambda: groups(project.cases), 3)
    whole, _ = best(lambda: hydraulics.solve(project), 3)
    iterations = int(result.iterations.max())
    mean = float(result.iterations.mean())
    print(f"{len(cases)} cases of {count} lines and {len(net.topology.pumps)} pumps, {iterations} iterations at most, "
          f"{mean:.1f} on average, all converged {bool(result.converged.all())}")
    print(f"  one evaluation {one * 1e3:.1f} ms (the solver's with slopes {own * 1e3:.1f} ms); arrays "
          f"{arrays * 1e3:.0f} ms = {arrays / (iterations * one):.2f} x (goal 3), {arrays / (mean * one):.2f} x by the "
          f"average; reading {assembling * 1e3:.0f} ms, whole project {whole * 1e3:.0f} ms = "
          f"{whole / (iterations * one):.2f} x")


if __name__ == "__main__":
    bench_grid()
    bench_cases()
