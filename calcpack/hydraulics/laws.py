"""Head lost in every link at given flows, and its slope: the laws the solver balances.

Every law is odd in the flow and rises with it. The heads come from the formula objects that the sheets print; the
slopes are their derivatives, worked out by hand here and compared with differences in the tests.
"""

from __future__ import annotations

import numpy as np

from calcpack.formulas.fittings import LOCAL_HEAD
from calcpack.formulas.pipe_flow import (
    CRITICAL_ZONE,
    EXPLICIT,
    FRICTION_HEAD,
    LAMINAR,
    LAMINAR_LIMIT,
    REYNOLDS,
    TURBULENT_LIMIT,
    VELOCITY,
    friction_factor,
    solve_colebrook,
)
from calcpack.hydraulics.network import Network

# Below this speed (m/s) a law is taken as the straight line to the origin, so that no slope vanishes at rest. Laminar
# friction is that line anyway; the head of a quadratic loss at this speed is under 1e-19 m per unit of K.
REST = 1e-9
COLEBROOK = "Colebrook-White"
SWAMEE_JAIN = "explicit form"


def line_losses(net: Network, flow: np.ndarray, correlation: str = COLEBROOK) -> tuple[np.ndarray, np.ndarray]:
    """Head lost (m, signed like ``flow``) and slope (m per m3/s) of the lines, (lines, B), without fixed losses."""
    least = net.area * REST
    size = np.maximum(np.abs(flow), least)
    speed = VELOCITY.evaluate(Q=size, A=net.area)
    reynolds = REYNOLDS.evaluate(rho=net.density, V=speed, D=net.bore, mu=net.viscosity)
    factor, exponent = _factors(net, reynolds, correlation)
    friction = FRICTION_HEAD.evaluate(f=factor, L=net.length, D=net.bore, V=speed, g=net.gravity)
    square = LOCAL_HEAD.evaluate(K=net.local, V=speed, g=net.gravity) + net.equipment * size**2
    head = friction + square
    slope = (friction * (2.0 + exponent) + 2.0 * square) / size
    return head * (flow / size), slope


def line_factors(net: Network, flow: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Speed, Reynolds number and friction factor of the lines at ``flow`` (lines, B); at rest the factor is NaN."""
    speed = VELOCITY.evaluate(Q=np.abs(flow), A=net.area)
    reynolds = REYNOLDS.evaluate(rho=net.density, V=speed, D=net.bore, mu=net.viscosity)
    factor = friction_factor(net.roughness, np.where(reynolds > 0, reynolds, 1.0))
    factor = np.where(reynolds > 0, factor, np.nan)
    return speed, reynolds, np.where(np.isnan(net.friction_factor), factor, net.friction_factor)


def pump_losses(net: Network, flow: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Head lost (negative: the pump gives head) and slope of the pumps at their total ``flow``, (pumps, B).

    On a drooping part of a curve the slope returned is a small positive floor: the search then settles where the
    system is steeper than the pump, which is the stable crossing.
    """
    units = np.maximum(net.running, 1.0)
    head, slope = net.curves.evaluate(flow / units)
    return -head, np.maximum(-slope, net.curves.floor) / units


def losses(net: Network, flow: np.ndarray, state: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Head lost from start to end and slope of every link, (links, B); ``state`` is the direction of fixed losses."""
    lines = len(net.bore)
    head, slope = np.empty(flow.shape), np.empty(flow.shape)
    head[:lines], slope[:lines] = line_losses(net, flow[:lines])
    head[:lines] += state[:lines] * net.fixed_loss
    head[lines:], slope[lines:] = pump_losses(net, flow[lines:])
    return head, slope


def _factors(net: Network, reynolds: np.ndarray, correlation: str) -> tuple[np.ndarray, np.ndarray]:
    """Friction factor, and its exponent d ln f / d ln Re, at ``reynolds`` > 0."""
    rough = net.roughness
    bounded = np.maximum(reynolds, TURBULENT_LIMIT)
    factor = _turbulent(rough, bounded, correlation)
    exponent = _turbulent_exponent(rough, bounded, factor, correlation)
    low = reynolds < TURBULENT_LIMIT
    if low.any():  # few lines as a rule: the other regimes are worked out for them alone
        k, re = rough[low], reynolds[low]
        at_rest, at_turbulence = LAMINAR.evaluate(Re=LAMINAR_LIMIT), _turbulent(k, TURBULENT_LIMIT, correlation)
        between = CRITICAL_ZONE.evaluate(f_2000=at_rest, f_4000=at_turbulence, Re=re)
        rise = (at_turbulence - at_rest) / (TURBULENT_LIMIT - LAMINAR_LIMIT)
        laminar = re <= LAMINAR_LIMIT
        factor[low] = np.where(laminar, LAMINAR.evaluate(Re=re), between)
        exponent[low] = np.where(laminar, -1.0, rise * re / between)
    given = ~np.isnan(net.friction_factor)
    if given.any():
        factor, exponent = np.where(given, net.friction_factor, factor), np.where(given, 0.0, exponent)
    return factor, exponent


def _turbulent(rough: np.ndarray, reynolds, correlation: str) -> np.ndarray:
    if correlation == COLEBROOK:
        return solve_colebrook(rough, reynolds)
    return EXPLICIT.evaluate(eps=rough, D=1.0, Re=reynolds)  # eps / D is all that the formula uses


def _turbulent_exponent(rough: np.ndarray, reynolds: np.ndarray, factor: np.ndarray, correlation: str) -> np.ndarray:
    """d ln f / d ln Re by the implicit derivative of each correlation (x = 1 / sqrt(f))."""
    x = 1.0 / np.sqrt(factor)
    if correlation == COLEBROOK:
        share = 2.51 / reynolds
        weight = (2.0 / np.log(10.0)) * share / (rough / 3.7 + share * x)
        return -2.0 * weight / (1.0 + weight)
    share = 5.74 / reynolds**0.9
    return -(3.6 / np.log(10.0)) * share / (rough / 3.7 + share) / x
