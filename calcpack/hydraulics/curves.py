"""Continuous pump curves from the maker's points: a polynomial where it fits, else a monotone cubic through the points.

The choice follows the fit itself, so that nobody has to make it: a polynomial is kept when its largest residual is
under the limit and it bends the way the points do; otherwise piecewise cubic Hermite interpolation (PCHIP) is used,
which passes through every point and never overshoots between them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise

import numpy as np

from calcpack.errors import CalcpackError
from calcpack.project.model import Pump

POLYNOMIAL = "polynomial"
PCHIP = "pchip"
HEAD_RESIDUAL = 0.01  # of the head at the point (common practice: a fit within 1 % of head)
EFFICIENCY_RESIDUAL = 0.01  # one point of efficiency (common practice)
NPSHR_RESIDUAL = 0.01  # of the largest NPSHR (common practice)


@dataclass(frozen=True)
class FittedCurve:
    """One quantity of a pump over the flow per unit, SI throughout.

    ``coefficients`` of a polynomial ascend from the constant term; those of a PCHIP are the slopes at its points
    (``knots`` flows, ``values`` there). ``residual`` is the largest distance from a point, in the unit of the curve.
    Outside ``flow_min`` to ``flow_max`` the polynomial continues and a PCHIP goes on straight: whoever uses such a
    value must say so.
    """

    kind: str
    coefficients: tuple[float, ...]
    residual: float
    flow_min: float
    flow_max: float
    knots: tuple[float, ...] = ()
    values: tuple[float, ...] = ()

    @cached_property
    def pieces(self) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """The curve as cubics: breaks (n - 1,), origins (n,) and ascending coefficients (n, 4) in flow - origin."""
        if self.kind == POLYNOMIAL:
            row = np.zeros(4)
            row[: len(self.coefficients)] = self.coefficients
            return np.empty(0), np.zeros(1), row[None, :]
        x, y, s = (np.array(column) for column in (self.knots, self.values, self.coefficients))
        width, rise = np.diff(x), np.diff(y) / np.diff(x)
        square = (3 * rise - 2 * s[:-1] - s[1:]) / width
        cube = (s[:-1] + s[1:] - 2 * rise) / width**2
        inner = np.column_stack([y[:-1], s[:-1], square, cube])
        ends = np.array([[y[0], s[0], 0.0, 0.0], [y[-1], s[-1], 0.0, 0.0]])
        return x, np.concatenate([x[:1], x[:-1], x[-1:]]), np.vstack([ends[:1], inner, ends[1:]])

    def value(self, flow):
        """The quantity at ``flow`` per unit, m3/s (float or array)."""
        c, x = self._local(flow)
        result = c[..., 0] + x * (c[..., 1] + x * (c[..., 2] + x * c[..., 3]))
        return result if result.ndim else float(result)

    def slope(self, flow):
        """Derivative of the quantity by flow at ``flow`` (float or array)."""
        c, x = self._local(flow)
        result = c[..., 1] + x * (2 * c[..., 2] + x * 3 * c[..., 3])
        return result if result.ndim else float(result)

    def _local(self, flow) -> tuple[np.ndarray, np.ndarray]:
        flow = np.asarray(flow, dtype=float)
        breaks, origins, coefficients = self.pieces
        piece = np.searchsorted(breaks, flow, side="right")
        return coefficients[piece], flow - origins[piece]

    @cached_property
    def droops(self) -> bool:
        """True when the curve rises with flow somewhere inside its data (a head curve may then be met twice)."""
        flow = np.linspace(self.flow_min, self.flow_max, 401)
        return bool(np.any(np.diff(self.value(flow)) > 1e-9 * abs(self.value(self.flow_min))))


@dataclass(frozen=True)
class PumpCurves:
    """The fitted curves of one pump; efficiency and NPSHR are None where the maker gives none."""

    head: FittedCurve
    efficiency: FittedCurve | None
    npshr: FittedCurve | None


def at_speed(curve: FittedCurve, ratio: float) -> FittedCurve:
    """A head curve at ``ratio`` times its speed: flow scales with the speed, head with its square (affinity rules)."""
    if ratio == 1.0:
        return curve
    powers = range(2, 2 - len(curve.coefficients), -1) if curve.kind == POLYNOMIAL else [1] * len(curve.coefficients)
    return FittedCurve(
        curve.kind, tuple(c * ratio**power for c, power in zip(curve.coefficients, powers, strict=True)),
        curve.residual * ratio**2, curve.flow_min * ratio, curve.flow_max * ratio,
        tuple(flow * ratio for flow in curve.knots), tuple(head * ratio**2 for head in curve.values),
    )


def pump_curves(pump: Pump) -> PumpCurves:
    """Fit every column of the pump's curve data.

    Raises CalcpackError where the data cannot make a curve (fewer than two points, flows not ascending).
    """
    curve = pump.curve
    flow = _checked(pump.tag, [value.si for value in curve.flow])

    def column(values, fit) -> FittedCurve | None:
        if values is None:
            return None
        if len(values) != len(flow):
            raise CalcpackError(f"{pump.tag}: curve: {len(flow)} flows but {len(values)} values in another column")
        return fit(flow, [value.si for value in values])

    head = column(curve.head, fit_head)
    assert head is not None
    return PumpCurves(head, column(curve.efficiency, fit_efficiency), column(curve.npshr, fit_npshr))


def fit_head(flow: Sequence[float], head: Sequence[float]) -> FittedCurve:
    """``H = a0 + a1 Q + a2 Q**2`` when within 1 % of the head at every point, else PCHIP.

    A quadratic that curves upward, or that droops where the points do not, is refused too: the first would rise again
    beyond the data, the second would show an instability that the pump has not.
    """
    x, y = np.asarray(flow, dtype=float), np.asarray(head, dtype=float)
    fitted = _polynomial(x, y, (0, 1, 2))
    if fitted is None or np.any(np.abs(fitted.value(x) - y) >= HEAD_RESIDUAL * np.abs(y)):
        return _pchip(x, y)
    bend = fitted.coefficients[2] * x[-1] ** 2
    points_droop = bool(np.any(np.diff(y) > 0))
    if bend > 1e-9 * np.max(np.abs(y)) or (fitted.droops and not points_droop):
        return _pchip(x, y)
    return fitted


def fit_efficiency(flow: Sequence[float], efficiency: Sequence[float]) -> FittedCurve:
    """``eta = b1 Q + b2 Q**2 + b3 Q**3`` when within one point everywhere, else PCHIP."""
    x, y = np.asarray(flow, dtype=float), np.asarray(efficiency, dtype=float)
    fitted = _polynomial(x, y, (1, 2, 3))
    return fitted if fitted is not None and fitted.residual < EFFICIENCY_RESIDUAL else _pchip(x, y)


def fit_npshr(flow: Sequence[float], npshr: Sequence[float]) -> FittedCurve:
    """``NPSHR = c0 + c2 Q**2`` when within 1 % of the largest value, else PCHIP."""
    x, y = np.asarray(flow, dtype=float), np.asarray(npshr, dtype=float)
    fitted = _polynomial(x, y, (0, 2))
    limit = NPSHR_RESIDUAL * float(np.max(np.abs(y)))
    return fitted if fitted is not None and fitted.residual < limit else _pchip(x, y)


def _checked(tag: str, flow: list[float]) -> list[float]:
    if len(flow) < 2:
        raise CalcpackError(f"{tag}: curve: one point makes no curve; give at least two, better five or more")
    if any(b <= a for a, b in pairwise(flow)) or flow[0] < 0:
        raise CalcpackError(f"{tag}: curve: flows must start at zero or above and ascend")
    return flow


def _polynomial(x: np.ndarray, y: np.ndarray, powers: tuple[int, ...]) -> FittedCurve | None:
    """Least-squares fit on the given powers; None with fewer points than the fit could miss."""
    if np.count_nonzero(x) + (0 in powers and x[0] == 0) < len(powers):
        return None
    scaled = x / x[-1]  # keeps the normal equations well conditioned whatever the unit
    solved = np.linalg.lstsq(np.column_stack([scaled**power for power in powers]), y, rcond=None)[0]
    coefficients = np.zeros(max(powers) + 1)
    coefficients[list(powers)] = solved / x[-1] ** np.array(powers)
    made = FittedCurve(POLYNOMIAL, tuple(coefficients.tolist()), 0.0, float(x[0]), float(x[-1]))
    residual = float(np.max(np.abs(made.value(x) - y)))
    return FittedCurve(POLYNOMIAL, made.coefficients, residual, made.flow_min, made.flow_max)


def _pchip(x: np.ndarray, y: np.ndarray) -> FittedCurve:
    """Monotone piecewise cubic through the points (weighted harmonic mean slopes, three-point ends)."""
    width, rise = np.diff(x), np.diff(y) / np.diff(x)
    slopes = np.full(len(x), rise[0])
    if len(x) > 2:
        before, after = rise[:-1], rise[1:]
        same = before * after > 0
        w1, w2 = 2 * width[1:] + width[:-1], width[1:] + 2 * width[:-1]
        slopes[1:-1] = 0.0
        slopes[1:-1][same] = ((w1 + w2)[same]) / (w1[same] / before[same] + w2[same] / after[same])
        slopes[0] = _end_slope(width[0], width[1], rise[0], rise[1])
        slopes[-1] = _end_slope(width[-1], width[-2], rise[-1], rise[-2])
    return FittedCurve(
        PCHIP, tuple(slopes.tolist()), 0.0, float(x[0]), float(x[-1]), tuple(x.tolist()), tuple(y.tolist())
    )


def _end_slope(near: float, far: float, rise: float, next_rise: float) -> float:
    slope = ((2 * near + far) * rise - near * next_rise) / (near + far)
    if slope * rise <= 0:
        return 0.0
    return 3 * rise if rise * next_rise <= 0 and abs(slope) > 3 * abs(rise) else slope
