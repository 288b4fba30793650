"""Cases of a project -> networks: the resolved model as arrays, cases of one topology side by side."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from calcpack.errors import CalcpackError
from calcpack.formulas.duty import TANK_HEAD
from calcpack.formulas.fittings import COEFFICIENT, FULLY_TURBULENT
from calcpack.formulas.pipe_flow import AREA, BORE, RELATIVE_ROUGHNESS
from calcpack.hydraulics.curves import FittedCurve, at_speed, pump_curves
from calcpack.hydraulics.equipment import quadratic_head
from calcpack.hydraulics.network import HeadCurves, Network
from calcpack.hydraulics.topology import Topology
from calcpack.project.model import FIXED, JUNCTION, OUTLET, PUMP_PORT, TANK, Case, Line, LossState, Node, Pipe

CLEAN_STEEL = 0.0457e-3  # m, roughness behind the fully turbulent factor (TP-410, 2009 edition)


@dataclass(frozen=True, eq=False)
class Group:
    """Cases of equal topology: column ``b`` of ``network`` is ``cases[b]``, ``curves[p][b]`` the head curve of pump
    ``p`` there."""

    network: Network
    cases: tuple[Case, ...]
    curves: tuple[tuple[FittedCurve, ...], ...]


def bore(pipe: Pipe) -> float:
    """Inside diameter, m: the user's own, else outside diameter less two walls."""
    if pipe.bore is not None:
        return pipe.bore.si
    if pipe.outside_diameter is None or pipe.wall is None:
        raise CalcpackError(f"{pipe.standard} {pipe.size}: neither a bore nor outside diameter and wall are known")
    return BORE.evaluate(D_o=pipe.outside_diameter.si, t=pipe.wall.si)


def equipment_states(case: Case, line: Line) -> list[tuple[str, LossState]]:
    """Tag and state, in this case, of every item of equipment in ``line``."""
    return [(tag, case.system.equipment[tag].states[case.equipment[tag]]) for tag in line.equipment]


def groups(cases: Iterable[Case]) -> list[Group]:
    """Networks of all cases, in the order in which their topologies first appear."""
    found: dict[tuple, list[Case]] = {}
    for case in cases:
        system = case.system
        key = (
            tuple((node.tag, node.kind in (TANK, OUTLET)) for node in system.nodes.values()),
            tuple((line.tag, line.start, line.end) for line in system.lines.values()),
            tuple((pump.tag, pump.suction, pump.discharge) for pump in system.pumps.values()),
        )
        found.setdefault(key, []).append(case)
    return [_group(same) for same in found.values()]


def _group(cases: Sequence[Case]) -> Group:
    system = cases[0].system
    number = {tag: i for i, tag in enumerate(system.nodes)}
    lines, pumps = list(system.lines.values()), list(system.pumps.values())
    topology = Topology(
        nodes=tuple(system.nodes),
        lines=tuple(system.lines),
        pumps=tuple(system.pumps),
        start=np.array([number[line.start] for line in lines] + [number[pump.suction] for pump in pumps], dtype=int),
        end=np.array([number[line.end] for line in lines] + [number[pump.discharge] for pump in pumps], dtype=int),
        fixed=np.array([node.kind in (TANK, OUTLET) for node in system.nodes.values()], dtype=bool),
    )
    density = np.array([[case.liquid.density.si for case in cases]])
    gravity = np.array([[case.system.site.gravity.si for case in cases]])
    fixed_head, demand = _nodes(cases, density, gravity)
    running, rated, curves = _pumps(cases)
    network = Network(
        topology=topology,
        **_lines(cases),
        density=density,
        viscosity=np.array([[case.liquid.dynamic_viscosity.si for case in cases]]),
        gravity=gravity,
        running=running,
        curves=HeadCurves.stack(curves, rated),
        fixed_head=fixed_head,
        demand=demand,
    )
    return Group(network, tuple(cases), curves)


def _lines(cases: Sequence[Case]) -> dict[str, np.ndarray]:
    """Arrays (lines, B) of the lines; a line that cases share is read once."""
    rows: list[tuple[float, ...]] = []
    seen: dict[tuple, int] = {}
    index = np.empty((len(cases[0].system.lines), len(cases)), dtype=int)
    for column, case in enumerate(cases):
        for i, line in enumerate(case.system.lines.values()):
            state = case.roughness.get(line.tag)
            roughness = None if state is None else line.roughness[state]  # a line of given friction factor needs none
            states = tuple(state for _, state in equipment_states(case, line)) if line.equipment else ()
            to_outlet = case.system.nodes[line.end].kind == OUTLET
            gravity = case.system.site.gravity.si
            key = (id(line), id(roughness), to_outlet, gravity, *map(id, states))
            place = seen.get(key)
            if place is None:
                place = seen[key] = len(rows)
                rows.append(_row(line, 0.0 if roughness is None else roughness.si, states, to_outlet, gravity))
            index[i, column] = place
    table = np.array(rows, dtype=float).reshape(len(rows), 9)
    diameter, length, roughness, factor, plain, crane, equipment, fixed, check = table.T
    local = plain + COEFFICIENT.evaluate(n=crane, f_T=FULLY_TURBULENT.evaluate(eps_T=CLEAN_STEEL, D=diameter))
    columns = {
        "bore": diameter,
        "area": AREA.evaluate(D=diameter),
        "length": length,
        "roughness": RELATIVE_ROUGHNESS.evaluate(eps=roughness, D=diameter),
        "friction_factor": factor,
        "local": local,
        "equipment": equipment,
        "fixed_loss": fixed,
        "check": check > 0,
    }
    return {name: column[index] for name, column in columns.items()}


def _row(
    line: Line, roughness: float, states: tuple[LossState, ...], to_outlet: bool, gravity: float
) -> tuple[float, ...]:
    plain = crane = equipment = fixed = 0.0
    for fitting in line.fittings:
        if fitting.method == "n_fT":
            crane += fitting.count * fitting.coefficient.si
        elif fitting.method == "K":
            plain += fitting.count * fitting.coefficient.si
        else:
            raise CalcpackError(f"{line.tag}: {fitting.type}: method {fitting.method!r} is not n_fT or K")
    for state in states:
        if state.law == FIXED:
            fixed += state.head.si
        else:
            equipment += quadratic_head(state, 1.0, gravity)
    factor = float("nan") if line.friction_factor is None else line.friction_factor.si
    check = float(line.check_valve is not None or to_outlet)  # an outlet has no liquid to give back
    return bore(line.pipe), line.length.si, roughness, factor, plain, crane, equipment, fixed, check


def _nodes(cases: Sequence[Case], density: np.ndarray, gravity: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Known heads (NaN elsewhere) and demands, (nodes, B)."""
    level = np.full((len(cases[0].system.nodes), len(cases)), np.nan)
    gas, demand = np.zeros(level.shape), np.zeros(level.shape)
    for column, case in enumerate(cases):
        for i, node in enumerate(case.system.nodes.values()):
            if node.kind in (TANK, OUTLET):
                level[i, column] = surface(case, node)
                gas[i, column] = node.gas_pressure.si if node.gas_pressure is not None else 0.0
            elif node.kind not in (JUNCTION, PUMP_PORT):
                raise CalcpackError(f"{node.tag}: {node.kind!r} is not a kind of node")
            if node.demand is not None:
                demand[i, column] = node.demand.si
    return TANK_HEAD.evaluate(z=level, p_g=gas, rho=density, g=gravity), demand


def surface(case: Case, node: Node) -> float:
    """Elevation at which a tank or outlet holds its pressure: the named level, or the end of the pipe."""
    if node.levels:
        return node.levels[case.levels[node.tag]].si
    if node.elevation is None:
        raise CalcpackError(f"{node.tag}: a {node.kind} needs a level or an elevation")
    return node.elevation.si


def _pumps(cases: Sequence[Case]) -> tuple[np.ndarray, np.ndarray, tuple[tuple[FittedCurve, ...], ...]]:
    """Units running and best-efficiency flows (pumps, B), and head curves; a curve that cases share is fitted once."""
    fitted: dict[tuple[int, float], FittedCurve] = {}
    shape = (len(cases[0].system.pumps), len(cases))
    running, rated = np.zeros(shape), np.zeros(shape)
    curves: list[list[FittedCurve]] = [[] for _ in range(shape[0])]
    for column, case in enumerate(cases):
        for i, pump in enumerate(case.system.pumps.values()):
            ratio = case.speeds[pump.tag].si if pump.tag in case.speeds else 1.0
            key = (id(pump.curve), ratio)
            if key not in fitted:
                fitted[key] = at_speed(pump_curves(pump).head, ratio)
            curves[i].append(fitted[key])
            running[i, column] = case.pumps[pump.tag]
            rated[i, column] = ratio * pump.best_efficiency_flow.si
    return running, rated, tuple(tuple(row) for row in curves)
