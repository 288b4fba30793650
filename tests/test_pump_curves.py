"""Pump curves: the polynomial where it fits, else a monotone cubic, and never a shape that the points have not."""

from __future__ import annotations

import builders as b
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.interpolate import PchipInterpolator

from calcpack.errors import CalcpackError
from calcpack.hydraulics.curves import PCHIP, POLYNOMIAL, fit_efficiency, fit_head, fit_npshr, pump_curves
from calcpack.hydraulics.network import HeadCurves

FLOW = np.arange(0, 160, 20) / 3600
HEAD = [54.00, 53.44, 52.16, 50.16, 47.44, 44.00, 39.84, 34.96]  # 54 - 0.01 Q - 0.0009 Q**2, Q in m3/h
EFFICIENCY = [0, 0.2575, 0.4706, 0.6320, 0.7343, 0.7700, 0.7318, 0.6123]
NPSHR = [1.70, 1.76, 1.94, 2.24, 2.66, 3.20, 3.86, 4.64]  # 1.7 + 0.00015 Q**2
STEEP = [40.0, 39.5, 38.0, 35.0, 30.0, 20.0]  # no quadratic comes within 1 % of these
STEEP_FLOW = np.arange(6) * 2e-3


def test_points_of_a_polynomial_are_fitted_exactly():
    head, efficiency, npshr = fit_head(FLOW, HEAD), fit_efficiency(FLOW, EFFICIENCY), fit_npshr(FLOW, NPSHR)
    assert [curve.kind for curve in (head, efficiency, npshr)] == [POLYNOMIAL] * 3
    assert head.coefficients == pytest.approx((54.0, -0.01 * 3600, -0.0009 * 3600**2), rel=1e-9)
    assert npshr.coefficients == pytest.approx((1.7, 0.0, 0.00015 * 3600**2), rel=1e-9, abs=1e-9)
    assert efficiency.coefficients[0] == 0
    assert head.residual < 1e-12 and efficiency.residual < 5e-4 and npshr.residual < 1e-12
    assert (head.flow_min, head.flow_max) == (FLOW[0], FLOW[-1])


def test_residual_is_the_largest_distance_from_a_point():
    bent = np.array(HEAD)
    bent[3] += 0.3  # 0.6 % of head: still a quadratic
    curve = fit_head(FLOW, bent)
    assert curve.kind == POLYNOMIAL
    assert curve.residual == pytest.approx(np.max(np.abs(curve.value(FLOW) - bent)))
    assert curve.residual > 0.1


@pytest.mark.parametrize(
    ("fit", "flow", "values", "why"),
    [
        (fit_head, STEEP_FLOW, STEEP, "residual over 1 %"),
        (fit_head, FLOW[:3], [40.0, 30.0, 25.0], "curves upward, so it would rise beyond the data"),
        (fit_head, FLOW, [50.0, 50.0, 49.9, 49.6, 49.0, 48.2, 47.1, 45.5], "the fit droops, the points do not"),
        (fit_head, FLOW[:2], [40.0, 30.0], "two points"),
        (fit_efficiency, FLOW, [0, 0.5, 0.6, 0.62, 0.63, 0.62, 0.6, 0.3], "residual over one point"),
        (fit_npshr, FLOW, [2.0, 2.0, 2.0, 2.1, 2.4, 3.2, 4.8, 8.0], "residual over 1 %"),
    ],
)
def test_a_polynomial_that_does_not_fit_gives_way(fit, flow, values, why):
    curve = fit(flow, values)
    assert curve.kind == PCHIP, why
    assert curve.value(np.asarray(flow)) == pytest.approx(values, abs=1e-12)


def test_a_drooping_curve_is_known_as_such():
    drooping = fit_head(FLOW[:5], [30.0, 33.0, 34.0, 33.0, 30.0])
    assert drooping.kind == POLYNOMIAL and drooping.droops
    assert fit_head(FLOW, [30.0, 33.0, 34.0, 33.5, 30.0, 20.0, 15.0, 14.0]).droops
    assert not fit_head(FLOW, HEAD).droops
    assert not fit_head(STEEP_FLOW, STEEP).droops


CURVES = st.lists(st.floats(0.05, 8.0), min_size=2, max_size=9).flatmap(
    lambda falls: st.tuples(st.just(falls), st.lists(st.floats(0.001, 0.02), min_size=len(falls), max_size=len(falls)))
)


@settings(derandomize=True, deadline=None, max_examples=60)
@given(CURVES)
def test_the_monotone_cubic_is_the_known_one_and_overshoots_nowhere(steps):
    from calcpack.hydraulics.curves import _pchip

    falls, widths = steps
    flow, head = np.concatenate([[0], np.cumsum(widths)]), 80.0 - np.concatenate([[0], np.cumsum(falls)])
    curve = _pchip(flow, head)
    between = np.linspace(0, flow[-1], 300)
    assert curve.value(between) == pytest.approx(PchipInterpolator(flow, head)(between), abs=1e-9)
    assert np.all(np.diff(curve.value(between)) <= 1e-12)
    beyond = flow[-1] * np.array([1.0, 1.1, 1.2])
    assert np.diff(curve.value(beyond)) == pytest.approx(0.1 * flow[-1] * curve.slope(flow[-1]), abs=1e-9)


@settings(derandomize=True, deadline=None, max_examples=60)
@given(CURVES, st.floats(0.01, 1.3))
def test_slope_is_the_derivative(steps, place):
    falls, widths = steps
    flow, head = np.concatenate([[0], np.cumsum(widths)]), 80.0 - np.concatenate([[0], np.cumsum(falls)])
    curve = fit_head(flow, head)
    at = place * flow[-1]
    if np.min(np.abs(flow - at)) < 1e-5 * flow[-1]:
        at += 1e-4 * flow[-1]  # the second derivative jumps at the points
    step = 1e-6 * flow[-1]
    difference = (curve.value(at + step) - curve.value(at - step)) / (2 * step)
    assert curve.slope(at) == pytest.approx(difference, rel=1e-4, abs=1e-4 * 80 / flow[-1])


def test_curves_of_many_pumps_are_those_of_each_and_rise_below_zero_flow():
    made = [fit_head(FLOW, HEAD), fit_head(STEEP_FLOW, STEEP), fit_head(FLOW[2:], HEAD[2:])]
    stacked = HeadCurves.stack([[curve, curve] for curve in made], np.ones((3, 2)))
    for flow in (0.0, 1e-3, 0.01, 0.05):
        head, slope = stacked.evaluate(np.full((3, 2), flow))
        assert head[:, 0] == pytest.approx([curve.value(flow) for curve in made])
        assert slope[:, 1] == pytest.approx([curve.slope(flow) for curve in made])
    still, backwards = stacked.evaluate(np.zeros((3, 2)))[0], stacked.evaluate(np.full((3, 2), -0.01))[0]
    assert np.all(backwards > still)


def test_only_given_columns_are_fitted():
    curves = pump_curves(b.pump("P", FLOW, HEAD, npshr=NPSHR))
    assert curves.efficiency is None
    assert curves.npshr.value(0.0) == pytest.approx(1.7)


@pytest.mark.parametrize(
    ("flow", "head", "words"),
    [([0.0], [10.0], "one point makes no curve"), ([0.0, 0.02, 0.01], [3.0, 2.0, 1.0], "must start at zero or above"),
     ([0.0, 0.01], [3.0, 2.0, 1.0], "2 flows but 3 values")],
)
def test_data_that_make_no_curve_are_refused(flow, head, words):
    with pytest.raises(CalcpackError, match=f"^P: curve: .*{words}"):
        pump_curves(b.pump("P", flow, head))
