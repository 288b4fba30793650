"""Small projects built straight from the model, in SI floats, for tests that need no files."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence

from calcpack.project.model import (
    JUNCTION,
    OUTLET,
    PUMP_PORT,
    TANK,
    Case,
    Document,
    Equipment,
    Fitting,
    Line,
    Liquid,
    LiquidState,
    LossState,
    Node,
    Pipe,
    ProfilePoint,
    Project,
    Pump,
    PumpCurve,
    Requirement,
    Site,
    System,
)
from calcpack.values import Value

GRAVITY = 9.80665


def value(si: float, kind: str = "dimensionless") -> Value:
    """A bare Value."""
    return Value(float(si), kind, f"{si}")


def tank(tag: str, *levels: float, gas: float | None = None, demand: float | None = None) -> Node:
    """A tank with levels named ``0``, ``1``, ... (m)."""
    return Node(
        tag, TANK, levels={str(i): value(level, "elevation") for i, level in enumerate(levels)},
        gas_pressure=None if gas is None else value(gas, "gauge_pressure"),
    )


def outlet(tag: str, elevation: float) -> Node:
    """A free outlet."""
    return Node(tag, OUTLET, elevation=value(elevation, "elevation"))


def junction(tag: str, demand: float = 0.0, elevation: float | None = None) -> Node:
    """A junction with a demand in m3/s."""
    return Node(
        tag, JUNCTION, demand=value(demand, "flow") if demand else None,
        elevation=None if elevation is None else value(elevation, "elevation"),
    )


def fitting(coefficient: float, count: int = 1, method: str = "K", kind: str = "elbow") -> Fitting:
    """Fittings of one type; ``kind`` 'swing_check_valve' closes against reverse flow."""
    return Fitting(kind, kind, count, method, value(coefficient))


def check_valve(coefficient: float = 2.0, method: str = "K") -> Fitting:
    """A swing check valve."""
    return fitting(coefficient, 1, method, "swing_check_valve")


def line(
    tag: str, start: str, end: str, *, length: float, bore: float, roughness: float = 0.0, k: float = 0.0,
    fittings: Iterable[Fitting] = (), equipment: Sequence[str] = (), factor: float | None = None,
    profile: Sequence[tuple[float, float]] = (), aged: float | None = None,
) -> Line:
    """A line (m); ``k`` adds one plain coefficient, ``factor`` a given Darcy factor, ``aged`` a second roughness."""
    made = list(fittings) + ([fitting(k)] if k else [])
    states = {"new": value(roughness, "roughness")}
    if aged is not None:
        states["aged"] = value(aged, "roughness")
    return Line(
        tag, start, end, "", "", Pipe("", "", "", "", None, None, value(bore, "diameter")), value(length, "length"),
        states, tuple(made), tuple(equipment),
        friction_factor=None if factor is None else value(factor, "friction_factor"),
        profile=tuple(ProfilePoint(value(x, "length"), value(z, "elevation")) for x, z in profile),
    )


def equipment(tag: str, **states: tuple[float, float] | float) -> Equipment:
    """Equipment: each state is (head, flow) of a quadratic loss, or the head of a fixed one."""
    made = {}
    for name, given in states.items():
        head, flow = given if isinstance(given, tuple) else (given, None)
        law = "fixed" if flow is None else "quadratic"
        made[name] = LossState(
            name, law, value(head, "head"), None if flow is None else value(flow, "flow")
        )
    return Equipment(tag, "equipment", "", made)


def pump(
    tag: str, flow: Sequence[float], head: Sequence[float], *, suction: str = "", discharge: str = "",
    elevation: float = 0.0, best: float | None = None, installed: int = 1,
    efficiency: Sequence[float] | None = None, npshr: Sequence[float] | None = None,
) -> Pump:
    """A pump from curve points (m3/s, m); ports default to ``tag.suction`` and ``tag.discharge``."""

    def column(values, kind):
        return None if values is None else tuple(value(v, kind) for v in values)

    curve = PumpCurve(
        column(flow, "flow"), column(head, "head"), column(efficiency, "efficiency"), column(npshr, "head"),
        "invented", "confirmed", "",
    )
    return Pump(
        tag, "", installed, 1, suction or f"{tag}.suction", discharge or f"{tag}.discharge",
        value(elevation, "elevation"), value(309.0, "rotational_speed"), 1, curve,
        value(best if best is not None else 0.6 * flow[-1], "flow"), value(0.7), value(1.2), None, value(1.5),
        value(0.5, "head"), None, None, None,
    )


def ports(made: Pump) -> list[Node]:
    """The port nodes of a pump."""
    return [Node(tag, PUMP_PORT, elevation=made.shaft_elevation) for tag in (made.suction, made.discharge)]


def system(
    nodes: Iterable[Node], lines: Iterable[Line], pumps: Iterable[Pump] = (), items: Iterable[Equipment] = (), *,
    liquids: Mapping[str, tuple[float, float, float]] | None = None, gravity: float = GRAVITY, elevation: float = 0.0,
) -> System:
    """A system; ``liquids`` maps temperature names to (density, dynamic viscosity, vapour pressure)."""
    pumps = list(pumps)
    every = [*nodes, *(node for made in pumps for node in ports(made))]
    states = {
        name: LiquidState(
            name, value(288.15, "temperature"), value(rho, "density"), value(mu, "dynamic_viscosity"),
            value(p_v, "absolute_pressure"),
        )
        for name, (rho, mu, p_v) in (liquids or {"normal": (999.10, 1.13757e-3, 1705.7)}).items()
    }
    return System(
        Site(value(elevation, "elevation"), "", value(gravity, "acceleration")),
        Liquid("water", "", states),
        {node.tag: node for node in every},
        {made.tag: made for made in lines},
        {item.tag: item for item in items},
        {made.tag: made for made in pumps},
    )


def case(
    id: str, built: System, *, temperature: str = "normal", level: Mapping[str, str] | str = "0",
    roughness: str = "new", states: Mapping[str, str] | None = None, running: Mapping[str, int] | int = 1,
) -> Case:
    """A case: one level name for every tank that has it (or one per tank), one roughness state, units running."""
    tanks = {tag: level if isinstance(level, str) else level.get(tag, "0") for tag in built.nodes}
    return Case(
        id, id, built, temperature,
        {tag: tanks[tag] if tanks[tag] in node.levels else "0" for tag, node in built.nodes.items() if node.levels},
        {tag: roughness if roughness in made.roughness else "new" for tag, made in built.lines.items()},
        {tag: (states or {}).get(tag, next(iter(item.states))) for tag, item in built.equipment.items()},
        {tag: running if isinstance(running, int) else running.get(tag, 1) for tag in built.pumps},
    )


def project(*cases: Case, units: str = "SI") -> Project:
    """A project of some cases, everything else empty."""
    return Project(
        "", Document("", "", "", "", "", "", "", ""), units, (), (), "", (), Requirement(None, None, None, None), None,
        cases[0].system, cases, cases[0].id, (), (), (), (), {}, (), (),
    )
