"""The physical system of one case: every part resolved, and the network checked."""

from __future__ import annotations

from collections.abc import Mapping

from calcpack.project.model import FIXED, KV, QUADRATIC, Equipment, LossState, System
from calcpack.project.resolve.draft import Draft
from calcpack.project.resolve.lines import resolve_line
from calcpack.project.resolve.network import check_network, resolve_nodes
from calcpack.project.resolve.pumps import resolve_pump
from calcpack.project.resolve.site import resolve_liquid, resolve_site
from calcpack.project.schema.base import BROKEN
from calcpack.project.schema.system import CoefficientLossInput, DropLossInput, EquipmentInput, FixedLossInput


def resolve_system(draft: Draft) -> System:
    """The system as its inputs state it; parts that could not be read stay BROKEN."""
    system, pumps = draft.inputs.system, draft.inputs.pumps
    check_network(draft)
    return System(
        site=_part(system, "site", lambda site: resolve_site(draft, site)),
        liquid=_part(system, "liquid", lambda liquid: resolve_liquid(draft, liquid)),
        nodes=resolve_nodes(draft),
        lines=_part(system, "lines", lambda lines: {tag: resolve_line(draft, tag, one) for tag, one in lines.items()}),
        equipment=_part(system, "equipment", _equipment),
        pumps=BROKEN if pumps is BROKEN else {tag: resolve_pump(draft, tag, one) for tag, one in pumps.items()},
    )


def _part(system, name: str, resolve):
    part = BROKEN if system is BROKEN else getattr(system, name)
    return BROKEN if part is BROKEN else resolve(part)


def _equipment(items: Mapping[str, EquipmentInput]) -> Mapping[str, Equipment]:
    return {
        tag: BROKEN if item is BROKEN else Equipment(tag, item.type, item.description, _states(item.states))
        for tag, item in items.items()
    }


def _states(states: Mapping[str, object]) -> Mapping[str, LossState]:
    if states is BROKEN:
        return BROKEN
    return {name: BROKEN if one is BROKEN else _state(name, one) for name, one in states.items()}


def _state(name: str, one: object) -> LossState:
    match one:
        case CoefficientLossInput():
            return LossState(name, KV, coefficient=one.coefficient)
        case DropLossInput():
            return LossState(name, QUADRATIC, flow=one.flow, drop=one.pressure_drop, density=one.density)
        case FixedLossInput():
            return LossState(name, FIXED, one.head)
    return LossState(name, QUADRATIC, one.head, one.flow)
