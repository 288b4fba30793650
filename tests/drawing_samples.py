"""Invented systems as frozen models with small ledgers, for the tests of the schematic."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calcpack.drawings.schematic_labels import SchematicLabels
from calcpack.ledger import Ledger
from calcpack.project import model as m
from calcpack.quantities import UNITS
from calcpack.values import CONFIRMED, Value

G = 9.80665
HOUR = 3600.0


def val(text: str, kind: str) -> Value:
    """A confirmed input as a person writes it."""
    number, _, unit = text.partition(" ")
    return Value(float(UNITS[unit].to_si(float(number))), kind, text, source="invented", status=CONFIRMED)


def tank(tag: str, text: str, *, elevation: str = "", gas: str = "", **levels: str) -> m.Node:
    """A tank with its levels by name."""
    return m.Node(
        tag, m.TANK, text, val(elevation, "elevation") if elevation else None,
        {name: val(level, "elevation") for name, level in levels.items()},
        val(gas, "gauge_pressure") if gas else None,
    )  # fmt: skip


def point(tag: str, kind: str, elevation: str, text: str = "", demand: str = "") -> m.Node:
    """A junction, outlet or pump port."""
    return m.Node(tag, kind, text, val(elevation, "elevation"), demand=val(demand, "flow") if demand else None)


def line(tag: str, start: str, end: str, size: str, fittings: str = "", equipment: str = "", profile=()) -> m.Line:
    """A line; ``fittings`` is a text such as 'gate_valve, 2 elbow_90_long_radius'."""
    made = []
    for text in filter(None, fittings.split(", ")):
        count, _, type_ = text.rpartition(" ")
        made.append(m.Fitting(type_, type_.replace("_", " "), int(count or 1), "K", val("1 ", "loss_coefficient")))
    points = tuple(m.ProfilePoint(val(f"{c} m", "length"), val(f"{z} m", "elevation")) for c, z in profile)
    return m.Line(
        tag, start, end, "", "", m.Pipe("ASME B36.10M", size, "40", "carbon steel", None, None), val("100 m", "length"),
        {"new": val("0.0457 mm", "roughness")}, tuple(made), tuple(filter(None, equipment.split(", "))), profile=points,
    )  # fmt: skip


def pump(tag: str, shaft: str, points: list[tuple], *, installed: int = 1, bep: str = "100 m³/h") -> m.Pump:
    """A pump with ``points`` of (m3/h, m, efficiency, NPSHR m)."""
    flow, head, efficiency, npshr = zip(*points, strict=True)
    curve = m.PumpCurve(
        tuple(val(f"{q} m³/h", "flow") for q in flow), tuple(val(f"{h} m", "head") for h in head),
        tuple(val(f"{e} ", "efficiency") for e in efficiency), tuple(val(f"{n} m", "head") for n in npshr),
        "invented", CONFIRMED, "",
    )  # fmt: skip
    return m.Pump(
        tag, "centrifugal pump", installed, 1, f"{tag}.suction", f"{tag}.discharge", val(shaft, "elevation"),
        val("2950 rpm", "rotational_speed"), 1, curve, val(bep, "flow"), val("0.7 ", "fraction"),
        val("1.2 ", "fraction"), val("30 m³/h", "flow"), val("1.3 ", "ratio"), val("0.6 m", "head"), None, None, None,
    )  # fmt: skip


@dataclass
class Sample:
    """A project with a ledger and what a caller would list for the drawings."""

    project: m.Project
    ledger: Ledger


def make_project(
    name: str, nodes: list[m.Node], lines: list[m.Line], pumps: list[m.Pump], equipment: dict[str, tuple[str, str]],
    cases: list[tuple], *, datum: str, units: str = "SI",
) -> m.Project:
    """A project of one liquid; ``cases`` are (id, title, level name, pumps running)."""
    for item in pumps:
        for port in (item.suction, item.discharge):
            nodes = [*nodes, m.Node(port, m.PUMP_PORT, "", item.shaft_elevation)]
    water = m.LiquidState(
        "normal", val("15 °C", "temperature"), val("999.10 kg/m³", "density"),
        val("1.13757 mPa·s", "dynamic_viscosity"), val("1.7057 kPa", "absolute_pressure"),
    )  # fmt: skip
    loss = m.LossState("clean", "quadratic", val("0.3 m", "head"), val("90 m³/h", "flow"))
    system = m.System(
        m.Site(val("85 m", "elevation"), datum, val("9.80665 m/s²", "acceleration")),
        m.Liquid("water", "water", {"normal": water}), {node.tag: node for node in nodes},
        {one.tag: one for one in lines},
        {tag: m.Equipment(tag, type_, text, {"clean": loss}) for tag, (type_, text) in equipment.items()},
        {item.tag: item for item in pumps},
    )  # fmt: skip
    made = tuple(
        m.Case(id_, title, system, "normal", {node.tag: level for node in nodes if node.levels}, {}, {}, running)
        for id_, title, level, running in cases
    )
    document = m.Document(name, name, "X-001", "calculation", "invented", "A", "draft", "2026-11-30")
    return m.Project(
        ".", document, units, (), (), "", (), m.Requirement(None, None, None, None), None, system, made, "1",
        (), (), (), (), {}, (), (),
    )  # fmt: skip


def book(project: m.Project, flows: dict[str, float], bores: dict[str, float], duty: dict[str, tuple]) -> Ledger:
    """A ledger for case 1: ``flows`` in m3/h by line, ``duty`` (m3/h, m) by pump, and every elevation of the model."""
    ledger = Ledger(project.units)
    system = project.system
    for node in system.nodes.values():
        if node.elevation:
            ledger.given(f"{node.tag}/z", node.elevation, "z", "elevation")
        if node.demand:
            ledger.given(f"{node.tag}/Q", node.demand, "Q", "demand")
        if node.gas_pressure:
            ledger.given(f"{node.tag}/p_g", node.gas_pressure, "p_g", "gas pressure")
        for name, level in (node.levels or {}).items():
            ledger.given(f"{node.tag}/z@{name}", level, "z", f"level {name}")
    for item in system.pumps.values():
        ledger.given(f"{item.tag}/z", item.shaft_elevation, "z", "shaft elevation")
    for one in system.lines.values():
        if one.profile:
            high = max(one.profile, key=lambda p: p.elevation.si)
            ledger.given(f"{one.tag}/z_high", high.elevation, "z", "high point")
    for tag, flow in flows.items():
        area = np.pi * bores[tag] ** 2 / 4
        ledger.found(f"{tag}/Q@1", flow / HOUR, "Q", "flow", "flow", source="TOOL", residual=0.0)
        ledger.found(f"{tag}/V@1", flow / HOUR / area, "V", "velocity", "velocity", source="TOOL", residual=0.0)
    for tag, (flow, head) in duty.items():
        ledger.found(f"{tag}/Q@1", flow / HOUR, "Q", "flow", "flow", source="TOOL", residual=0.0)
        ledger.found(f"{tag}/H@1", head, "H", "head", "head", source="TOOL", residual=0.0)
    return ledger


LARKMERE_CURVE = [
    (0, 54.00, 0, 1.70), (20, 53.44, 0.2575, 1.76), (40, 52.16, 0.4706, 1.94), (60, 50.16, 0.6320, 2.24),
    (80, 47.44, 0.7343, 2.66), (100, 44.00, 0.7700, 3.20), (120, 39.84, 0.7318, 3.86), (140, 34.96, 0.6123, 4.64),
]  # fmt: skip
HOLLINS_CURVE = [
    (0, 25.40, 0, 1.20), (10, 25.13, 0.2355, 1.26), (20, 24.52, 0.4323, 1.44), (30, 23.57, 0.5843, 1.74),
    (40, 22.28, 0.6851, 2.16), (50, 20.65, 0.7287, 2.70), (60, 18.68, 0.7087, 3.36), (70, 16.37, 0.6190, 4.14),
]  # fmt: skip
COLDHARBOUR_CURVE = [
    (0, 238.00, 0, 1.600), (60, 235.78, 0.2419, 1.658), (120, 230.32, 0.4468, 1.830), (180, 221.62, 0.6090, 2.118),
    (240, 209.68, 0.7227, 2.522), (300, 194.50, 0.7823, 3.040), (360, 176.08, 0.7820, 3.674),
    (420, 154.42, 0.7163, 4.422),
]  # fmt: skip
COLDHARBOUR_PROFILE = ((0, 713.5), (180, 760), (420, 835), (640, 884), (1050, 868), (1420, 877))


def larkmere(units: str = "SI", flow: float = 101.73) -> Sample:
    """Single line from a tank to a free outlet, one duty and one standby pump. ``flow`` in m3/h."""
    nodes = [
        tank("TK-101", "settled-water tank", elevation="9.60 m", min="10.60 m", normal="11.40 m", max="12.20 m"),
        point("N-102", m.JUNCTION, "9.20 m"),
        point("TK-102", m.OUTLET, "44.50 m", "contact tank"),
    ]
    lines = [
        line("L-101", "TK-101", "P-101.suction", "DN 200",
             "entrance_flush, gate_valve, 2 elbow_90_long_radius, eccentric_reducer", "ST-101"),
        line("L-102", "P-101.discharge", "N-102", "DN 150",
             "expander, swing_check_valve_angled, butterfly_valve, 2 elbow_90_long_radius"),
        line("L-103", "N-102", "TK-102", "DN 150", "8 elbow_45, 6 elbow_90_long_radius, gate_valve, exit"),
    ]  # fmt: skip
    cases = [
        ("1", "normal level, new, clean, 15 °C", "normal", {"P-101": 1}),
        ("2", "minimum level, aged, dirty, 15 °C", "min", {"P-101": 1}),
        ("3", "maximum level, new, clean, 15 °C", "max", {"P-101": 1}),
    ]
    project = make_project(
        "Larkmere settled-water transfer", nodes, lines, [pump("P-101", "9.20 m", LARKMERE_CURVE, installed=2)],
        {"ST-101": ("strainer", "basket strainer")}, cases, datum="AD", units=units,
    )
    bores = {"L-101": 0.20272, "L-102": 0.15405, "L-103": 0.15405}
    return Sample(project, book(project, dict.fromkeys(bores, flow), bores, {"P-101": (flow, 43.67)}))


def hollins() -> Sample:
    """Closed loop with three parallel pumps (one standing by), a two-branch split and a high point."""
    nodes = [
        tank("V-201", "expansion vessel", gas="150 kPa", normal="2.0 m"),
        point("N-201", m.JUNCTION, "2.0 m"),
        point("N-202", m.JUNCTION, "3.0 m"),
        point("N-203", m.JUNCTION, "3.0 m"),
        point("HP-201", m.JUNCTION, "14.0 m"),
    ]
    suction = "butterfly_valve, concentric_reducer"
    discharge = "expander, swing_check_valve_angled, butterfly_valve"
    branch = "8 elbow_90_long_radius, 2 butterfly_valve, tee_branch, tee_run"
    lines = [
        *(line(f"L-201{x}", "V-201", f"P-201{x}.suction", "DN 100", suction) for x in "ABC"),
        *(line(f"L-202{x}", f"P-201{x}.discharge", "N-201", "DN 100", discharge) for x in "ABC"),
        line("L-203", "N-201", "HP-201", "DN 150", "5 elbow_90_long_radius, butterfly_valve", "DC-201"),
        line("L-204", "HP-201", "N-202", "DN 150", "5 elbow_90_long_radius"),
        line("L-205A", "N-202", "N-203", "DN 125", branch, "CB-A, FCV-A, BV-A"),
        line("L-205B", "N-202", "N-203", "DN 100", branch, "CB-B, FCV-B, BV-B"),
        line("L-206", "N-203", "V-201", "DN 150", "2 tee_run, butterfly_valve", "AS-201"),
    ]  # fmt: skip
    equipment = {"DC-201": ("dry_cooler", "dry cooler"), "AS-201": ("separator", "air and dirt separator")}
    for x in "AB":
        equipment |= {
            f"CB-{x}": ("heat_exchanger", f"coil bank, hall {x}"), f"FCV-{x}": ("control_valve", "control valve"),
            f"BV-{x}": ("balancing_valve", "balancing valve"),
        }  # fmt: skip
    pumps = [pump(f"P-201{x}", "1.2 m", HOLLINS_CURVE, bep="52 m³/h") for x in "ABC"]
    cases = [("1", "as found, two pumps", "normal", {"P-201A": 1, "P-201B": 1, "P-201C": 0})]
    project = make_project("Hollins Bay hall cooling loop", nodes, lines, pumps, equipment, cases, datum="hall floor")
    bores = {one.tag: {"DN 100": 0.10226, "DN 125": 0.12819, "DN 150": 0.15405}[one.pipe.size] for one in lines}
    flows = {"L-203": 100.29, "L-204": 100.29, "L-205A": 60.80, "L-205B": 39.50, "L-206": 100.29}
    for x, flow in zip("ABC", (50.15, 50.15, 0.0), strict=True):
        flows |= {f"L-201{x}": flow, f"L-202{x}": flow}
    duty = {"P-201A": (50.15, 20.62), "P-201B": (50.15, 20.62)}
    return Sample(project, book(project, flows, bores, duty))


def coldharbour() -> Sample:
    """Suction lift from a sump and a long rising main over a crest."""
    nodes = [
        tank("SU-301", "pit sump", min="711.20 m", normal="712.00 m", max="712.80 m"),
        tank("TK-302", "settling pond", normal="877.00 m"),
    ]
    lines = [
        line("L-301", "SU-301", "P-301.suction", "DN 300",
             "foot_valve_hinged, elbow_90_long_radius, eccentric_reducer"),
        line("L-302", "P-301.discharge", "TK-302", "DN 250",
             "expander, nozzle_check_valve, gate_valve, 4 elbow_90_long_radius, 10 elbow_45, exit",
             profile=COLDHARBOUR_PROFILE),
    ]  # fmt: skip
    cases = [("1", "normal level, new", "normal", {"P-301": 1})]
    project = make_project(
        "Coldharbour pit dewatering main", nodes, lines, [pump("P-301", "713.50 m", COLDHARBOUR_CURVE, bep="330 m³/h")],
        {}, cases, datum="site datum",
    )
    bores = {"L-301": 0.3048, "L-302": 0.25451}
    return Sample(project, book(project, dict.fromkeys(bores, 343.87), bores, {"P-301": (343.87, 181.35)}))


def looped() -> Sample:
    """A reservoir over a looped network with demands at nearly one elevation."""
    nodes = [
        tank("TK-1", "reservoir", normal="60.0 m"), point("A", m.JUNCTION, "20.0 m"),
        point("B", m.JUNCTION, "18.0 m", demand="20 m³/h"), point("C", m.JUNCTION, "22.0 m"),
        point("D", m.JUNCTION, "19.0 m", demand="30 m³/h"), point("E", m.JUNCTION, "21.0 m"),
        point("F", m.JUNCTION, "15.0 m", demand="25 m³/h"),
    ]  # fmt: skip
    ways = {
        "L-1": ("TK-1", "A", 75.0), "L-2": ("A", "B", 40.0), "L-3": ("A", "C", 35.0), "L-4": ("B", "D", 20.0),
        "L-5": ("C", "D", 12.0), "L-6": ("C", "E", 23.0), "L-7": ("D", "F", 2.0), "L-8": ("E", "F", 23.0),
    }  # fmt: skip
    lines = [line(tag, start, end, "DN 150", "gate_valve") for tag, (start, end, _) in ways.items()]
    project = make_project("looped", nodes, lines, [], {}, [("1", "normal", "normal", {})], datum="AD")
    flows = {tag: flow for tag, (_, _, flow) in ways.items()}
    return Sample(project, book(project, flows, dict.fromkeys(ways, 0.15), {}))


def branched(units: str = "US") -> Sample:
    """Two of three pumps feed three deliveries; one line runs against its drawing."""
    nodes = [
        tank("TK-1", "wet well", elevation="1.0 m", min="2.0 m", normal="3.0 m", max="4.0 m"),
        point("N-1", m.JUNCTION, "2.5 m"), point("N-2", m.JUNCTION, "12.0 m"),
        point("O-1", m.OUTLET, "25.0 m", "north tank"), point("O-2", m.OUTLET, "18.0 m", "middle tank"),
        tank("TK-9", "south tank", elevation="8.0 m", normal="9.0 m", max="10.0 m"),
    ]  # fmt: skip
    lines = [
        line("L-1", "TK-1", "P-1.suction", "DN 200", "gate_valve, eccentric_reducer"),
        line("L-2", "P-1.discharge", "N-1", "DN 150", "expander, swing_check_valve_angled, gate_valve"),
        line("L-3", "N-1", "O-1", "DN 100", "5 gate_valve"), line("L-4", "N-1", "N-2", "DN 100", "globe_valve", "FM-1"),
        line("L-5", "N-2", "O-2", "DN 80", "ball_valve"), line("L-6", "N-2", "TK-9", "DN 80", "sight_glass"),
    ]  # fmt: skip
    project = make_project(
        "branched", nodes, lines, [pump("P-1", "1.5 m", LARKMERE_CURVE, installed=3)],
        {"FM-1": ("flow_meter", "flow meter")}, [("1", "normal", "normal", {"P-1": 2})], datum="AD", units=units,
    )  # fmt: skip
    flows = {"L-1": 75.0, "L-2": 75.0, "L-3": 67.0, "L-4": 8.0, "L-5": 20.0, "L-6": -12.0}
    return Sample(project, book(project, flows, dict.fromkeys(flows, 0.15), {"P-1": (75.0, 44.0)}))


def labels(sample: Sample, **more) -> SchematicLabels:
    """Everything that the sample's ledger holds, as a caller would list it for case 1."""
    ledger, system = sample.ledger, sample.project.case("1").system

    def booked(*ids: str) -> tuple[str, ...]:
        return tuple(one for one in ids if one in ledger)

    return SchematicLabels(
        "1", {tag: booked(f"{tag}/Q@1", f"{tag}/V@1") for tag in system.lines},
        {tag: booked(f"{tag}/p_g", f"{tag}/Q", *(() if node.levels else (f"{tag}/z",)))
         for tag, node in system.nodes.items()},
        {tag: {name: f"{tag}/z@{name}" for name in node.levels} for tag, node in system.nodes.items() if node.levels},
        {tag: booked(f"{tag}/z", f"{tag}/Q@1", f"{tag}/H@1") for tag in system.pumps},
        {tag: f"{tag}/z_high" for tag in system.lines if f"{tag}/z_high" in ledger}, **more,
    )  # fmt: skip
