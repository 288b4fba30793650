"""Invented pump, system and grade curves in small ledgers, for the tests of the plots.

The inputs are those of the systems in drawing_samples; curves are computed here with the friction formulas.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from drawing_samples import (
    COLDHARBOUR_CURVE,
    COLDHARBOUR_PROFILE,
    HOLLINS_CURVE,
    HOUR,
    LARKMERE_CURVE,
    G,
    val,
)

from calcpack.drawings.specs import CaseCurve, GradeLineSpec, Level, PumpCurve, SystemCurveSpec
from calcpack.formulas import pipe_flow
from calcpack.ledger import Ledger


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
        series = zip(grid / HOUR, curve, strict=True)
        ledger.series(f"curve/{tag}/{name}", name, symbol, kind, series, points_kind="flow")
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
