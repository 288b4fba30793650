"""Operating cases: the system with each case's overrides, and the state of every part."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from calcpack.project.model import TANK, Case, System
from calcpack.project.problems import Problems, nearest, suggestion
from calcpack.project.resolve.draft import Draft, Keys
from calcpack.project.resolve.overrides import OVERRIDABLE, overlaid
from calcpack.project.resolve.system import resolve_system
from calcpack.project.schema import validate
from calcpack.project.schema.base import BROKEN, intact
from calcpack.project.schema.cases import CaseInput
from calcpack.values import Value

States = Mapping[str, Mapping[str, object]]  # tag -> named states


def resolve_cases(draft: Draft, base: System) -> tuple[Case, ...]:
    """Every case that could be read, in the order of the file."""
    cases = draft.inputs.cases
    if cases is BROKEN:
        return ()
    if not cases:
        draft.wrong(("cases",), "no case is given", "a case says which level, condition and pumps are meant")
    return tuple(_case(draft, case_id, case, base) for case_id, case in cases.items() if case is not BROKEN)


def _case(draft: Draft, case_id: str, case: CaseInput, base: System) -> Case:
    system, overrides = base, ()
    if case.overrides:
        data, overrides = overlaid(draft, case_id)
        problems = Problems()
        read = {stem: validate(stem, data[stem], draft.units, problems) for stem in OVERRIDABLE}
        system = resolve_system(Draft(data, replace(draft.inputs, **read), draft.units, problems))
        draft.problems.adopt(problems, case_id)
    keys: Keys = ("cases", case_id)
    nodes, lines, equipment = (part if intact(part) else {} for part in (system.nodes, system.lines, system.equipment))
    levels = {tag: node.levels for tag, node in nodes.items() if node and node.kind == TANK and node.levels}
    conditions = {tag: line.roughness for tag, line in lines.items() if line and line.roughness}
    states = {tag: item.states for tag, item in equipment.items() if item and item.states}
    _check_temperature(draft, keys, case, system)
    return Case(
        id=case_id,
        title=case.title,
        system=system,
        temperature=case.temperature,
        levels=_chosen(draft, (*keys, "levels"), case.levels, levels, "level", "tank"),
        roughness=_chosen(draft, (*keys, "roughness"), case.roughness, conditions, "condition", "line"),
        equipment=_chosen(draft, (*keys, "equipment"), case.equipment, states, "state", "equipment"),
        pumps=_running(draft, keys, case, system),
        speeds=_speeds(draft, keys, case, system),
        purposes=tuple(case.purposes or ()),
        overrides=overrides,
    )


def _check_temperature(draft: Draft, keys: Keys, case: CaseInput, system: System) -> None:
    if not intact(case.temperature, system.liquid) or case.temperature in system.liquid.states:
        return
    text = f"no temperature is named '{case.temperature}'"
    draft.wrong((*keys, "temperature"), text, suggestion(case.temperature, system.liquid.states))


def _chosen(
    draft: Draft, keys: Keys, choice: str | Mapping[str, str] | None, options: States, what: str, owner: str
) -> Mapping[str, str]:
    """The state of every tag: the named one, or the only one that it has."""
    if choice is BROKEN:
        return {}
    every = list(dict.fromkeys(name for states in options.values() for name in states))
    if isinstance(choice, str) and options and choice not in every:
        draft.wrong(keys, f"no {owner} has a {what} '{choice}'", suggestion(choice, every))
        return {}
    if isinstance(choice, Mapping):
        options = _without_misspelt(draft, keys, choice, options, owner)
    chosen = {}
    for tag, states in options.items():
        name = choice.get(tag) if isinstance(choice, Mapping) else choice
        stated = name is not None and (isinstance(choice, Mapping) or name in states or len(states) > 1)
        if not stated and len(states) == 1:
            chosen[tag] = next(iter(states))
        elif name is None:
            draft.wrong(keys, f"the case names no {what} of {tag}", f"one of: {', '.join(states)}")
        elif name not in states:
            where = (*keys, tag) if isinstance(choice, Mapping) else keys
            draft.wrong(where, f"{tag} has no {what} '{name}'", suggestion(name, states))
        else:
            chosen[tag] = str(name)
    return chosen


def _without_misspelt(draft: Draft, keys: Keys, choice: Mapping[str, str], options: States, owner: str) -> States:
    """The options less those whose tag the case misspells, which is reported."""
    system = draft.inputs.system
    parts = (
        {"tank": system.nodes, "line": system.lines, "equipment": system.equipment}[owner] if intact(system) else BROKEN
    )
    if parts is BROKEN:
        return options
    unknown = [tag for tag in choice if tag not in parts]
    for tag in unknown:
        draft.wrong((*keys, tag), f"no {owner} '{tag}'", suggestion(tag, parts))
    meant = {nearest(tag, parts) for tag in unknown}
    return {tag: states for tag, states in options.items() if tag not in meant}


def _speeds(draft: Draft, keys: Keys, case: CaseInput, system: System) -> Mapping[str, Value]:
    if not intact(case.speeds, system.pumps):
        return {}
    for tag in case.speeds:
        if tag not in system.pumps:
            draft.wrong((*keys, "speeds", tag), f"no pump '{tag}'", suggestion(tag, system.pumps))
    return {tag: share for tag, share in case.speeds.items() if share is not BROKEN}


def _running(draft: Draft, keys: Keys, case: CaseInput, system: System) -> Mapping[str, int]:
    if not intact(case.pumps, system.pumps):
        return {}
    where = (*keys, "pumps")
    meant = set()
    for tag, running in case.pumps.items():
        if tag not in system.pumps:
            draft.wrong((*where, tag), f"no pump '{tag}'", suggestion(tag, system.pumps))
            meant.add(nearest(tag, system.pumps))
            continue
        pump = system.pumps[tag]
        if pump is not BROKEN and intact(pump.installed, running) and running > pump.installed:
            draft.wrong((*where, tag), f"{running} units run, but {pump.installed} installed")
    for tag in system.pumps:
        if tag not in case.pumps and tag not in meant:
            draft.wrong(where, f"the case does not say how many units of {tag} run", f"such as {{{tag}: 1}}")
    return dict(case.pumps)
