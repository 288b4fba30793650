"""The numbers behind the system-curve plot, and its lower panels: efficiency, NPSH, shaft power."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from calcpack.drawings.plot_labels import end_labels
from calcpack.drawings.plots import LINE_STYLES, Page, axis_title, set_ticks, symbol
from calcpack.drawings.specs import Pair, SystemCurveSpec
from calcpack.drawings.svg import BLUE, INK
from calcpack.ledger import Ledger
from calcpack.ledger.text import quantity_text, unit_of
from calcpack.quantities import KINDS

if TYPE_CHECKING:
    from matplotlib.axes import Axes

Columns = tuple[list[float], list[float]]
LEFT, WIDTH, RIGHT, HEIGHT, GAP = 15.0, 170.0, 24.0, 24.0, 3.0
TITLE_AT = 4.6
DOTTED, DASH_DOT = (0, (1.2, 1.4)), (0, (7, 1.8, 1.2, 1.8))


class Curves:
    """Booked series and entries in the units of the axes."""

    def __init__(self, ledger: Ledger, spec: SystemCurveSpec) -> None:
        self.ledger, self.spec = ledger, spec
        ends = [xs[-1] for xs, _ in self.heads()]
        ends += [self.shown(case.flow) for case in spec.cases if case.flow]
        ends += [self.shown(spec.required[0])] if spec.required else []
        self.flow_end = 1.03 * max(ends)

    def series(self, entry_id: str, units: int = 1) -> Columns:
        """Abscissae and ordinates of a series; ``units`` in parallel have so many times the flow."""
        entry = self.ledger[entry_id]
        x_unit = KINDS[entry.points_kind].display_unit(self.ledger.system)
        y_unit = KINDS[entry.kind].display_unit(self.ledger.system)
        return ([units * x_unit.from_si(x) for x, _ in entry.points], [y_unit.from_si(y) for _, y in entry.points])

    def shown(self, entry_id: str) -> float:
        """Value of an entry in its display unit."""
        entry = self.ledger[entry_id]
        return unit_of(entry, self.ledger.system).from_si(entry.value)

    def points(self, pairs: Sequence[Pair], units: int = 1) -> Columns:
        """The maker's points."""
        return [units * self.shown(x) for x, _ in pairs], [self.shown(y) for _, y in pairs]

    def heads(self) -> list[Columns]:
        """Every curve of the head panel."""
        systems = [columns for _, _, columns in self.systems()]
        return systems + [self.series(pump.head, units) for pump in self.spec.pumps for units in pump.units]

    def systems(self) -> list[tuple[int, str, Columns]]:
        """Position and label of every case with the curve of its system; cases whose series is empty are left out."""
        cases = [(index, case) for index, case in enumerate(self.spec.cases) if case.system]
        found = [(index, case.case, self.series(case.system)) for index, case in cases]
        return [one for one in found if one[2][0]]

    def most_units(self) -> int:
        """Units in parallel for which the lower panels are drawn."""
        return max((units for pump in self.spec.pumps for units in pump.units), default=1)

    def preferred(self) -> tuple[float, float] | None:
        """Ends of the preferred region on the flow axis."""
        if not self.spec.preferred:
            return None
        low, high = (self._flow(one) for one in self.spec.preferred)
        return low, high

    def _flow(self, entry_id: str) -> float:
        entry = self.ledger[entry_id]
        if entry.kind == "flow":
            return self.shown(entry_id) * self.most_units()
        return entry.value * self.shown(self.spec.best_flow) * self.most_units()

    def flow_lines(self) -> list[tuple[float, str, tuple]]:
        """Vertical lines: flow, name with value, dash."""
        lines = []
        named = ((self.spec.minimum_flow, "minimum flow", DOTTED), (self.spec.best_flow, "best efficiency", DASH_DOT))
        for entry_id, name, dash in named:
            if entry_id:
                entry = self.ledger[entry_id]
                each = " each" if self.most_units() > 1 else ""
                text = f"{name} {quantity_text(entry, unit_of(entry, self.ledger.system))}{each}"
                lines.append((self.shown(entry_id) * self.most_units(), text, dash))
        return lines

    def band(self) -> tuple[list[float], list[float], list[float]] | None:
        """Flows with the lowest and highest system head, where every system curve has data."""
        import numpy as np

        curves = [columns for _, _, columns in self.systems()]
        if len(curves) < 2:
            return None
        low, high = max(xs[0] for xs, _ in curves), min(xs[-1] for xs, _ in curves)
        grid = np.linspace(low, high, 61)
        heads = np.array([np.interp(grid, xs, ys) for xs, ys in curves])
        return list(grid), list(heads.min(axis=0)), list(heads.max(axis=0))


@dataclass(frozen=True)
class Panel:
    """One lower panel: name of the PumpCurve series, the CaseCurve values at the duty, and the axis title."""

    series: str
    points: str
    duty: str
    title: str
    kind: str


_PANELS = (
    Panel("efficiency", "efficiency_points", "efficiency", symbol("η"), "efficiency"),
    Panel("npshr", "npshr_points", "npshr", "NPSH", "head"),
    Panel("power", "", "power", symbol("P", "s"), "power"),
)


def lower_panels(spec: SystemCurveSpec) -> list[Panel]:
    """The panels for which a pump has data."""
    return [panel for panel in _PANELS if any(getattr(pump, panel.series) for pump in spec.pumps)]


def draw_lower_panels(
    page: Page, curves: Curves, panels: Sequence[Panel], top: float, flow_lines: Callable[[Axes], None]
) -> None:
    """The panels one under another from ``top`` (mm), sharing the flow axis of the head panel."""
    for index, panel in enumerate(panels):
        axes = page.axes(LEFT, top + index * (HEIGHT + GAP), WIDTH - LEFT - RIGHT, HEIGHT)
        _draw(page, axes, curves, panel, top + index * (HEIGHT + GAP))
        flow_lines(axes)
        set_ticks(page, axes, "x", 15, drop=2.4 if index == len(panels) - 1 else 0.0)


def _draw(page: Page, axes: Axes, curves: Curves, panel: Panel, top: float) -> None:
    spec, system = curves.spec, curves.ledger.system
    ends: list[tuple[float, float, str]] = []
    lines: list[tuple[Columns, str]] = []  # of NPSHA, one for each case
    tops = [0.0]
    for pump in spec.pumps:
        series = getattr(pump, panel.series)
        if not series:
            continue
        xs, ys = curves.series(series, max(pump.units))
        axes.plot(xs, ys, color=BLUE, linewidth=1.3, zorder=2.6)
        if panel.points:
            axes.plot(*curves.points(getattr(pump, panel.points), max(pump.units)), "o", color=BLUE, markersize=2.4,
                      zorder=2.7, clip_on=False)  # fmt: skip
        name = f"NPSHR {pump.label}" if panel.kind == "head" else pump.label
        lines.append(((xs, ys), name))
        tops.append(max(ys))
    for index, case in enumerate(spec.cases):
        if panel.kind == "head" and case.npsha_curve:
            xs, ys = curves.series(case.npsha_curve)
            axes.plot(xs, ys, color=INK, linewidth=0.8, linestyle=LINE_STYLES[index % len(LINE_STYLES)], zorder=2.2)
            lines.append(((xs, ys), f"NPSHA, case {case.case}"))
            tops.append(max(ys))
    tops += _duty(axes, curves, panel)
    rating = spec.motor_rating if panel.kind == "power" else ""
    if rating:
        value = curves.shown(rating)
        axes.axhline(value, color=INK, linewidth=0.8, linestyle=DASH_DOT, zorder=2)
        text = f"motor {quantity_text(curves.ledger[rating], unit_of(curves.ledger[rating], system))}"
        lines.append((([0.0, curves.flow_end], [value, value]), text))
        tops.append(value)
    axes.set_xlim(0.0, curves.flow_end)
    axes.set_ylim(0.0, 1.1 * max(tops))
    for (xs, ys), name in lines:
        last = max((k for k, y in enumerate(ys) if 0.0 <= y <= 1.1 * max(tops)), default=len(ys) - 1)
        ends.append((*page.place(axes, xs[last], ys[last]), name))
    set_ticks(page, axes, "y", 5)
    page.text(TITLE_AT, top + HEIGHT / 2, axis_title(panel.title, KINDS[panel.kind].display_unit(system)),
              anchor="center", turned=True)  # fmt: skip
    end_labels(page, ends, WIDTH - RIGHT + 3.2, top + 1.0, top + HEIGHT - 1.0)


def _duty(axes: Axes, curves: Curves, panel: Panel) -> list[float]:
    """Duty points in a panel; NPSHA as open squares over the NPSHR dots."""
    drawn = []
    shapes = [(panel.duty, "o", INK)] + ([("npsha", "s", "none")] if panel.kind == "head" else [])
    for case in curves.spec.cases:
        for attribute, shape, fill in shapes:
            entry_id = getattr(case, attribute)
            if entry_id and case.flow:
                x, y = curves.shown(case.flow), curves.shown(entry_id)
                axes.plot([x], [y], shape, markersize=3.2, markerfacecolor=fill, markeredgecolor=INK,
                          markeredgewidth=0.7, zorder=5)  # fmt: skip
                drawn.append(y)
    return drawn
