"""Head that in-line equipment takes from a flow."""

from __future__ import annotations

from calcpack.errors import CalcpackError
from calcpack.formulas.fittings import EQUIPMENT_QUADRATIC
from calcpack.formulas.valves import HEAD_KV, HEAD_OF_DROP
from calcpack.project.model import KV, QUADRATIC, LossState


def quadratic_head(state: LossState, flow: float, gravity: float) -> float:
    """Head (m) lost at ``flow`` (m3/s, 0 or above) in a state whose loss grows with the square of the flow.

    Raises CalcpackError for a state that lacks its numbers.
    """
    if state.law == KV and state.coefficient is not None:
        return float(HEAD_KV.evaluate(g=gravity, Q=flow, K_v=state.coefficient.si))
    if state.law == QUADRATIC and state.flow is not None:
        return float(EQUIPMENT_QUADRATIC.evaluate(h_r=_rated_head(state, gravity), Q=flow, Q_r=state.flow.si))
    raise CalcpackError(f"equipment state {state.name}: a {state.law} loss lacks its numbers")


def _rated_head(state: LossState, gravity: float) -> float:
    if state.head is not None:
        return state.head.si
    if state.drop is None or state.density is None:
        raise CalcpackError(f"equipment state {state.name}: neither head nor pressure drop is given")
    return float(HEAD_OF_DROP.evaluate(dp=state.drop.si, rho=state.density.si, g=gravity))
