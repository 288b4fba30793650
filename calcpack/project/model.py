"""The frozen model of a project: everything resolved, in SI, every number a Value that knows its origin.

``project.load`` makes it; hydraulics, sheets and drawings read it and never change it.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from calcpack.project.paper import (
    Document,
    Economy,
    InputFile,
    Person,
    Requirement,
    RevisionNote,
    SourceDocument,
    Statement,
)
from calcpack.values import Value

# Kinds of node.
TANK = "tank"  # free surface at a named level, with an optional gas pressure above it
OUTLET = "outlet"  # free discharge at an elevation
JUNCTION = "junction"  # continuity, with an optional demand
PUMP_PORT = "pump port"  # suction or discharge connection of a pump, at its shaft elevation


@dataclass(frozen=True)
class Site:
    """``atmospheric_pressure`` is a measured record, else it follows from the elevation."""

    elevation: Value
    datum: str
    gravity: Value
    atmospheric_pressure: Value | None = None


@dataclass(frozen=True)
class LiquidState:
    """Properties at one named temperature. ``vapour_pressure`` is absolute."""

    name: str
    temperature: Value
    density: Value
    dynamic_viscosity: Value
    vapour_pressure: Value
    bulk_modulus: Value | None = None
    specific_heat: Value | None = None


@dataclass(frozen=True)
class Liquid:
    """The liquid at each named temperature; ``states`` keeps the order of the input (normal among them)."""

    name: str
    model: str
    states: Mapping[str, LiquidState]
    flags: tuple[str, ...] = ()


@dataclass(frozen=True)
class Node:
    """A point of the network. ``levels`` (tank) are free-surface elevations by name; ``elevation`` is the pipe's."""

    tag: str
    kind: str
    description: str = ""
    elevation: Value | None = None
    levels: Mapping[str, Value] | None = None
    gas_pressure: Value | None = None
    demand: Value | None = None
    service: str = ""


@dataclass(frozen=True)
class Fitting:
    """``count`` items of one type; method 'n_fT' (K = n fT) or 'K', on the velocity head of its line."""

    type: str
    title: str
    count: int
    method: str
    coefficient: Value
    full_open_constant: Value | None = None  # check valves: N of v = N / sqrt(rho)
    tag: str = ""

    @property
    def is_check_valve(self) -> bool:
        """True for a fitting that closes against reverse flow."""
        return "check" in self.type or self.type.startswith("foot_valve")


# Laws of a head loss.
QUADRATIC = "quadratic"  # head at a flow, scaled with the square of the flow
FIXED = "fixed"  # head whatever the flow
KV = "kv"  # flow coefficient
TABLE = "table"  # heads at flows, monotone cubic between
SHUT = "shut"  # passes nothing

# What a regulating valve holds.
HOLDS_FLOW = "flow"
HOLDS_DOWNSTREAM = "downstream pressure"  # gauge pressure at the end node of its line
HOLDS_UPSTREAM = "upstream pressure"  # gauge pressure at the start node of its line


@dataclass(frozen=True)
class LossState:
    """Head loss of equipment in one state.

    ``head`` and ``flow`` belong to QUADRATIC and FIXED; ``coefficient`` (flow_coefficient_kv) to KV; ``points`` (flow,
    head) to TABLE. A loss that the user stated as pressure has become head with ``density``; ``drop`` keeps it.
    """

    name: str
    law: str
    head: Value | None = None
    flow: Value | None = None
    coefficient: Value | None = None
    points: tuple[tuple[Value, Value], ...] = ()
    drop: Value | None = None
    density: Value | None = None


@dataclass(frozen=True)
class Control:
    """What a regulating valve holds: one of HOLDS_FLOW (a flow), HOLDS_DOWNSTREAM, HOLDS_UPSTREAM (gauge_pressure)."""

    holds: str
    setting: Value


@dataclass(frozen=True)
class Equipment:
    """An in-line item with one or more states (clean, dirty; open, shut).

    A regulating valve has a ``control``; fully open it loses what its state says. A balancing valve (type
    ``balancing_valve``) may be solved by a case for a wanted flow, between shut and its state's coefficient.
    """

    tag: str
    type: str
    description: str
    states: Mapping[str, LossState]
    control: Control | None = None


@dataclass(frozen=True)
class Pipe:
    """Size of a line. ``bore`` is the user's own inside diameter where given, else OD and wall rule."""

    standard: str
    size: str
    schedule: str
    material: str
    outside_diameter: Value | None
    wall: Value | None
    bore: Value | None = None


@dataclass(frozen=True)
class ProfilePoint:
    """Pipe axis: chainage along the line from its start, elevation."""

    chainage: Value
    elevation: Value


@dataclass(frozen=True)
class Line:
    """A pipe line from node ``start`` to node ``end`` with constant size."""

    tag: str
    start: str
    end: str
    description: str
    service: str
    pipe: Pipe
    length: Value
    roughness: Mapping[str, Value]
    fittings: tuple[Fitting, ...]
    equipment: tuple[str, ...]
    velocity_minimum: Value | None = None
    velocity_maximum: Value | None = None
    rating: Value | None = None  # gauge_pressure
    friction_factor: Value | None = None  # a given Darcy factor replaces the correlation
    profile: tuple[ProfilePoint, ...] = ()
    surge_modulus: Value | None = None  # elastic modulus of the wall
    surge_poisson: Value | None = None  # Poisson's ratio of the wall
    surge_restraint: Value | None = None  # restraint factor c1 as stated; else it follows from a formula

    @property
    def check_valve(self) -> Fitting | None:
        """The line's check valve, if it has one."""
        return next((fitting for fitting in self.fittings if fitting.is_check_valve), None)


@dataclass(frozen=True)
class PumpCurve:
    """Maker's points, each column of equal length, ascending flow from the first point."""

    flow: tuple[Value, ...]
    head: tuple[Value, ...]
    efficiency: tuple[Value, ...] | None
    npshr: tuple[Value, ...] | None
    source: str
    status: str
    place: str


@dataclass(frozen=True)
class Motor:
    """Driver: rated power, efficiency at the duty load."""

    rating: Value
    efficiency: Value
    drive_efficiency: Value | None = None
    margin: Value | None = None  # required ratio of rating to greatest shaft power
    poles: str = ""


@dataclass(frozen=True)
class Pump:
    """A pump item. ``suction`` and ``discharge`` are its port nodes."""

    tag: str
    description: str
    installed: int
    duty: int
    suction: str
    discharge: str
    shaft_elevation: Value
    speed: Value
    stages: int
    curve: PumpCurve
    best_efficiency_flow: Value
    preferred_low: Value  # fraction of best-efficiency flow
    preferred_high: Value
    minimum_flow: Value | None
    npsh_ratio: Value
    npsh_margin: Value
    casing_rating: Value | None
    flange_rating: Value | None
    motor: Motor | None
    rated_flow: Value | None = None
    type: str = ""
    speed_low: Value | None = None  # allowed speed range of a variable-speed pump (rotational_speed)
    speed_high: Value | None = None
    impeller: Value | None = None  # diameter of the curve
    impeller_low: Value | None = None
    impeller_high: Value | None = None
    allowable_low: Value | None = None  # maker's allowable region, fraction of best-efficiency flow
    allowable_high: Value | None = None
    acceptance_grade: str = ""  # of ISO 9906
    viscosity_correction: bool = True  # correct the water curve where the liquid asks for it


@dataclass(frozen=True)
class System:
    """The physical system with one case's overrides applied."""

    site: Site
    liquid: Liquid
    nodes: Mapping[str, Node]
    lines: Mapping[str, Line]
    equipment: Mapping[str, Equipment]
    pumps: Mapping[str, Pump]


@dataclass(frozen=True)
class Override:
    """One input that a case sets differently."""

    path: str
    text: str
    place: str


@dataclass(frozen=True)
class Balance:
    """What a case solves for: balancing valves set so that each line in ``flows`` carries its flow.

    ``valves`` maps each of those lines to its balancing valve. The valve of the line that needs most head (the index)
    stays open and the speed of ``pump`` brings it to its flow; without ``pump`` the index line takes what it gets.
    """

    flows: Mapping[str, Value]
    valves: Mapping[str, str]
    pump: str = ""


@dataclass(frozen=True)
class Case:
    """One operating case: the system as overridden, and the named state of each part.

    ``levels`` maps tanks to level names, ``roughness`` lines, ``equipment`` items; ``pumps`` maps pumps to the number
    running. ``purposes`` are words that checks look for: normal, head, flow, npsh, cold, ...
    """

    id: str
    title: str
    system: System
    temperature: str
    levels: Mapping[str, str]
    roughness: Mapping[str, str]
    equipment: Mapping[str, str]
    pumps: Mapping[str, int]
    speeds: Mapping[str, Value] = field(default_factory=dict)  # fraction of the curve's speed, where not 1
    trims: Mapping[str, Value] = field(default_factory=dict)  # impeller diameter, where not that of the curve
    balance: Balance | None = None
    settings_of: str = ""  # id of the case whose solved settings (valves, speed) this case keeps
    purposes: tuple[str, ...] = ()
    overrides: tuple[Override, ...] = ()

    @property
    def liquid(self) -> LiquidState:
        """Liquid properties of the case."""
        return self.system.liquid.states[self.temperature]


@dataclass(frozen=True)
class Project:
    """A whole project. ``units`` is 'SI' or 'US'; ``values`` every input Value in file and line order."""

    folder: str
    document: Document
    units: str
    people: tuple[Person, ...]
    revisions: tuple[RevisionNote, ...]
    purpose: str
    description: tuple[str, ...]
    requirement: Requirement
    economy: Economy | None
    system: System
    cases: tuple[Case, ...]
    normal_case: str
    documents: tuple[SourceDocument, ...]
    assumptions: tuple[Statement, ...]
    notes: tuple[Statement, ...]
    exclusions: tuple[Statement, ...]
    limits: Mapping[str, Value]
    values: tuple[Value, ...]
    files: tuple[InputFile, ...]

    def case(self, case_id: str) -> Case:
        """The case of that id. Raises KeyError."""
        return next(case for case in self.cases if case.id == case_id)
