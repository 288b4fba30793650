"""Three invented systems as frozen models with small ledgers, for the tests of the drawings.

The inputs and results are those of the demonstration projects; curves are computed here from the same inputs.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace

import numpy as np

from calcpack.drawings.specs import CaseCurve, GradeLineSpec, Level, PumpCurve, SystemCurveSpec
from calcpack.formulas import pipe_flow
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
        val("2950 rpm", "rotational_speed"), 1, curve, val(bep, "flow"), val("0.7 ", "fraction"), val("1.2 ", "fraction"),
        val("30 m³/h", "flow"), val("1.3 ", "ratio"), val("0.6 m", "head"), None, None, None,
    )  # fmt: skip


@dataclass
class Sample:
    """A project with a ledger and what a caller would list for the drawings."""

    project: m.Project
    ledger: Ledger
    extra: dict = field(default_factory=dict)


def make_project(
    name: str, nodes: list[m.Node], lines: list[m.Line], pumps: list[m.Pump], equipment: dict[str, tuple[str, str]],
    cases: list[tuple], *, datum: str, units: str = "SI",
) -> m.Project:
    """A project of one liquid; ``cases`` are (id, title, level name, pumps running)."""
    for item in pumps:
        for port in (item.suction, item.discharge):
            nodes = [*nodes, m.Node(port, m.PUMP_PORT, "", item.shaft_elevation)]
    water = m.LiquidState(
        "normal", val("15 °C", "temperature"), val("999.10 kg/m³", "density"), val("1.13757 mPa·s", "dynamic_viscosity"),
        val("1.7057 kPa", "absolute_pressure"),
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
        ".", document, units, (), (), "", (), m.Requirement(None, None, None, None), None, system, made, "1", (), (), (),
        (), {}, (), (),
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
    (240, 209.68, 0.7227, 2.522), (300, 194.50, 0.7823, 3.040), (360, 176.08, 0.7820, 3.674), (420, 154.42, 0.7163, 4.422),
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
    branch = "8 elbow_90_long_radius, 2 butterfly_valve, tee_branch, tee_run"
    lines = [
        *(line(f"L-201{x}", "V-201", f"P-201{x}.suction", "DN 100", "butterfly_valve, concentric_reducer") for x in "ABC"),
        *(line(f"L-202{x}", f"P-201{x}.discharge", "N-201", "DN 100", "expander, swing_check_valve_angled, butterfly_valve")
          for x in "ABC"),
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
        line("L-301", "SU-301", "P-301.suction", "DN 300", "foot_valve_hinged, elbow_90_long_radius, eccentric_reducer"),
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


@dataclass(frozen=True)
class Way:
    """Pipes (bore m, length m, roughness m, sum of K, equipment head m, at flow m3/h) between two levels of a case."""

    case: str
    static: float
    pipes: tuple[tuple[float, ...], ...]
    npsh_static: float = 0.0  # suction side: (p_atm - p_v)/(rho g) + z_s - z_p
    suction: int = 1  # how many of the pipes lie before the pump

    def loss(self, flow: float, pipes: tuple[tuple[float, ...], ...]) -> float:
        """Head loss (m) at ``flow`` (m3/h) in water of 15 degC."""
        total = 0.0
        for bore, length, roughness, k, head, rated in pipes:
            speed = flow / HOUR / (np.pi * bore**2 / 4)
            factor = pipe_flow.friction_factor(roughness / bore, max(999.1 * speed * bore / 1.13757e-3, 1.0))
            total += (factor * length / bore + k) * speed**2 / (2 * G) + (head * (flow / rated) ** 2 if rated else 0.0)
        return float(total)

    def head(self, flow: float) -> float:
        """System head (m)."""
        return self.static + self.loss(flow, self.pipes)

    def npsha(self, flow: float) -> float:
        """NPSHA (m)."""
        return self.npsh_static - self.loss(flow, self.pipes[: self.suction])


def book_curves(ledger: Ledger, tag: str, points: list[tuple], ways: list[Way], units: int = 1) -> SystemCurveSpec:
    """Series of pump and system, duty points by bisection, and the list that a caller would hand to the plot."""
    flow, head, efficiency, npshr = (np.array(column) for column in zip(*points, strict=True))
    grid = np.linspace(0.0, flow[-1], 36)
    fits = {name: np.polyfit(flow, values, 3) for name, values in
            (("head", head), ("efficiency", efficiency), ("npshr", npshr))}  # fmt: skip
    ids: dict[str, tuple] = {}
    for name, symbol, kind, values in (
        ("head", "H", "head", head), ("efficiency", "eta", "efficiency", efficiency), ("npshr", "NPSHR", "head", npshr),
    ):  # fmt: skip
        curve = np.maximum(np.polyval(fits[name], grid), 0.0)
        ledger.series(f"curve/{tag}/{name}", name, symbol, kind, zip(grid / HOUR, curve, strict=True), points_kind="flow")
        pairs = []
        for k, (x, y) in enumerate(zip(flow, values, strict=True), start=1):
            ledger.given(f"{tag}/Q_{k}", val(f"{x} m³/h", "flow"), "Q", "flow")
            ledger.given(f"{tag}/{symbol}_{k}", val(f"{y} m" if kind == "head" else f"{y} ", kind), symbol, name)
            pairs.append((f"{tag}/Q_{k}", f"{tag}/{symbol}_{k}"))
        ids[name] = tuple(pairs)

    def power(at: float) -> float:
        return float(999.1 * G * at / HOUR * np.polyval(fits["head"], at) / np.polyval(fits["efficiency"], at))

    ledger.series(f"curve/{tag}/power", "shaft power", "P_s", "power",
                  [(at / HOUR, power(at)) for at in grid[4:]], points_kind="flow")  # fmt: skip
    cases = []
    for way in ways:
        c = way.case
        total = grid * units
        ledger.series(f"curve/system/{tag}@{c}", "system", "H_sys", "head",
                      [(at / HOUR, way.head(at)) for at in total], points_kind="flow")  # fmt: skip
        ledger.series(f"curve/npsha/{tag}@{c}", "NPSHA", "NPSHA", "head",
                      [(at / HOUR, way.npsha(at)) for at in total], points_kind="flow")  # fmt: skip
        low, high = 0.0, float(flow[-1])
        for _ in range(60):
            middle = (low + high) / 2
            below = np.polyval(fits["head"], middle) > way.head(middle * units)
            low, high = (middle, high) if below else (low, middle)
        duty = {
            "Q": (low * units / HOUR, "flow"), "H": (way.head(low * units), "head"), "H_st": (way.static, "head"),
            "eta": (np.polyval(fits["efficiency"], low), "efficiency"), "P_s": (power(low), "power"),
            "NPSHA": (way.npsha(low * units), "head"), "NPSHR": (np.polyval(fits["npshr"], low), "head"),
        }  # fmt: skip
        for symbol, (value, kind) in duty.items():
            ledger.found(f"duty/{tag}/{symbol}@{c}", value, symbol, symbol, kind, source="TOOL", residual=0.0)
        at = f"duty/{tag}/"
        cases.append(
            CaseCurve(c, f"curve/system/{tag}@{c}", f"{at}Q@{c}", f"{at}H@{c}", f"{at}H_st@{c}", f"{at}eta@{c}",
                      f"{at}NPSHA@{c}", f"{at}NPSHR@{c}", f"{at}P_s@{c}", f"curve/npsha/{tag}@{c}")
        )  # fmt: skip
    curve = PumpCurve(
        tag, f"curve/{tag}/head", f"curve/{tag}/efficiency", f"curve/{tag}/npshr", f"curve/{tag}/power", ids["head"],
        ids["efficiency"], ids["npshr"], tuple(range(1, units + 1)),
    )  # fmt: skip
    return SystemCurveSpec(tuple(cases), (curve,))


def larkmere_curves(units: str = "SI") -> tuple[Ledger, SystemCurveSpec]:
    """Five cases, a required point, preferred region and motor rating."""
    ledger = Ledger(units)
    ways = []
    for case, level, eps, strainer, npsh in (
        ("1", 11.40, 0.0457e-3, 0.30, 10.07), ("2", 10.60, 0.15e-3, 1.20, 10.07), ("3", 12.20, 0.0457e-3, 0.30, 10.07),
        ("4", 10.60, 0.0457e-3, 1.20, 10.01), ("5", 11.40, 0.0457e-3, 0.31, 10.15),
    ):  # fmt: skip
        pipes = (
            (0.20272, 9.5, eps, 1.0565, strainer, 90.0), (0.15405, 6.0, eps, 2.8280, 0.0, 0.0),
            (0.15405, 685.0, eps, 4.2783, 0.0, 0.0),
        )  # fmt: skip
        ways.append(Way(case, 44.50 - level, pipes, npsh + level - 9.20))
    spec = book_curves(ledger, "P-101", LARKMERE_CURVE, ways)
    for entry_id, text, kind in (
        ("duty/Q_des", "94.5 m³/h", "flow"), ("duty/H_des", "42.29 m", "head"), ("P-101/Q_BEP", "100 m³/h", "flow"),
        ("P-101/r_low", "0.70 ", "fraction"), ("P-101/r_high", "1.20 ", "fraction"),
        ("P-101/Q_min", "30 m³/h", "flow"), ("P-101/P_m", "22 kW", "power"),
    ):  # fmt: skip
        ledger.given(entry_id, val(text, kind), entry_id.rpartition("/")[2], entry_id)
    more = {"required": ("duty/Q_des", "duty/H_des"), "best_flow": "P-101/Q_BEP", "motor_rating": "P-101/P_m",
            "preferred": ("P-101/r_low", "P-101/r_high"), "minimum_flow": "P-101/Q_min"}  # fmt: skip
    return ledger, replace(spec, **more)


def hollins_curves() -> tuple[Ledger, SystemCurveSpec]:
    """A closed loop: no static head, one and two pumps in parallel."""
    ledger = Ledger("SI")
    ways = [
        Way("1", 0.0, ((0.15405, 4.0, 0.0457e-3, 1.4, 0.0, 0.0), (0.15405, 140.0, 0.0457e-3, 4.02, 17.3, 97.7)), 25.3),
        Way("2", 0.0, ((0.15405, 4.0, 0.0457e-3, 1.4, 0.0, 0.0), (0.15405, 140.0, 0.0457e-3, 4.02, 18.3, 97.7)), 25.3),
    ]
    spec = book_curves(ledger, "P-201", HOLLINS_CURVE, ways, units=2)
    ledger.given("P-201/Q_BEP", val("52 m³/h", "flow"), "Q_BEP", "best efficiency")
    return ledger, replace(spec, best_flow="P-201/Q_BEP")


def coldharbour_curves() -> tuple[Ledger, SystemCurveSpec]:
    """High static head, four cases."""
    ledger = Ledger("SI")
    ways = []
    for case, level, eps in (("1", 712.0, 0.0457e-3), ("2", 711.2, 0.30e-3), ("3", 712.8, 0.0457e-3),
                             ("4", 711.2, 0.0457e-3)):  # fmt: skip
        pipes = ((0.3048, 7.5, eps, 1.2133, 0.0, 0.0), (0.25451, 1420.0, eps, 5.0479, 0.0, 0.0))
        ways.append(Way(case, 877.0 - level, pipes, 9.115 + level - 713.5))
    return ledger, book_curves(ledger, "P-301", COLDHARBOUR_CURVE, ways)


def coldharbour_grade() -> tuple[Ledger, GradeLineSpec]:
    """Case 1 over the rising main: axis, grade lines, vapour limit, rating."""
    ledger = Ledger("SI")
    axis = [(float(c) + 7.5, float(z)) for c, z in COLDHARBOUR_PROFILE]
    suction, end = [(0.0, 712.0), (7.5, 711.86)], 877.0
    rise = 1.878**2 / (2 * G)
    hydraulic = [(x, 893.2 - (893.2 - end) * (x - 7.5) / 1420.0) for x, _ in axis]
    for name, symbol, points in (
        ("axis", "z", axis), ("hgl", "z_h", [*suction, *hydraulic]),
        ("egl", "H", [*suction, *((x, z + rise) for x, z in hydraulic)]),
        ("vapour", "z_v", [(x, z - 9.11) for x, z in axis]), ("rating", "z_r", [(x, z + 251.9) for x, z in axis]),
        ("standstill", "z_0", [(axis[0][0], end), (axis[-1][0], end)]),
    ):  # fmt: skip
        ledger.series(f"grade/{name}", name, symbol, "elevation", points, points_kind="length")
    ledger.given("SU-301/z@normal", val("712.00 m", "elevation"), "z", "level")
    ledger.given("TK-302/z@normal", val("877.00 m", "elevation"), "z", "level")
    ledger.found("L-302/m@1", 1.81, "m", "grade above axis", "head", source="TOOL", residual=0.0, digits=3)
    ledger.found("L-302/p@1", 1.81 * 1012 * G, "p", "pressure", "gauge_pressure", source="TOOL", residual=0.0, digits=3)
    return ledger, GradeLineSpec(
        "case 1, normal level, new", "grade/axis", "grade/hgl", "grade/egl", "grade/vapour", "grade/rating",
        "grade/standstill", (Level(0.0, "SU-301", "SU-301/z@normal"), Level(1427.5, "TK-302", "TK-302/z@normal")),
        "P-301", 7.5, 647.5, ("L-302/m@1", "L-302/p@1"),
    )  # fmt: skip
