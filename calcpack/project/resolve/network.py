"""How the parts hang together: names that must exist, and every part reached from a fixed head."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from itertools import pairwise

from calcpack.project.model import JUNCTION, OUTLET, PUMP_PORT, TANK, Node
from calcpack.project.problems import suggestion
from calcpack.project.resolve.draft import Draft, Keys
from calcpack.project.resolve.pumps import DISCHARGE, SUCTION, check_port, port
from calcpack.project.schema.base import BROKEN, intact
from calcpack.project.schema.system import JunctionInput, OutletInput, TankInput

ORDERED_LEVELS = ("min", "normal", "max")
_ENTRANCES = ("entrance", "foot_valve")
_EXITS = ("exit",)


def resolve_nodes(draft: Draft) -> Mapping[str, Node]:
    """Every node by tag, ports of the pumps among them."""
    system, pumps = draft.inputs.system, draft.inputs.pumps
    if not intact(system, pumps) or system.nodes is BROKEN:
        return BROKEN
    nodes = {tag: _node(draft, tag, node) for tag, node in system.nodes.items()}
    for tag, pump in pumps.items():
        for side in (SUCTION, DISCHARGE):
            name = port(tag, side)
            elevation = pump.shaft_elevation if pump is not BROKEN else BROKEN
            nodes[name] = Node(name, PUMP_PORT, f"{side} of {tag}", elevation)
    return nodes


def _node(draft: Draft, tag: str, node: TankInput | OutletInput | JunctionInput) -> Node:
    if node is BROKEN:
        return BROKEN
    if isinstance(node, TankInput):
        _check_levels(draft, tag, node)
        return Node(tag, TANK, node.description, node.elevation, node.levels, node.gas_pressure, service=node.service)
    if isinstance(node, OutletInput):
        return Node(tag, OUTLET, node.description, node.elevation, service=node.service)
    return Node(tag, JUNCTION, node.description, node.elevation, demand=node.demand, service=node.service)


def _check_levels(draft: Draft, tag: str, tank: TankInput) -> None:
    keys: Keys = ("system", "nodes", tag, "levels")
    if tank.levels is BROKEN:
        return
    if not tank.levels:
        draft.wrong(keys, "no level is given", "such as {min: 1.0 m, normal: 2.0 m, max: 3.0 m}")
    known = [(name, tank.levels[name]) for name in ORDERED_LEVELS if tank.levels.get(name)]
    for (lower, low), (upper, high) in pairwise(known):
        if low.si > high.si:
            text = f"the level {lower}, {low.text}, is above the level {upper}, {high.text}"
            draft.wrong((*keys, lower), text, f"order them: {' <= '.join(ORDERED_LEVELS)}")


def check_network(draft: Draft) -> None:
    """Report names that do not exist, tags used twice, and parts that are not connected."""
    system = draft.inputs.system
    if system is BROKEN:
        return
    _check_tags(draft)
    if not intact(system.nodes, system.lines):
        return
    for tag, line in system.lines.items():
        if line is not BROKEN:
            _check_ends(draft, tag)
    _check_equipment(draft)
    _check_connected(draft)


def _check_tags(draft: Draft) -> None:
    """One tag names one thing, whatever its kind."""
    system = draft.inputs.system
    owners: dict[str, str] = {}
    for label, home, items in (
        ("a node", ("system", "nodes"), system.nodes),
        ("a line", ("system", "lines"), system.lines),
        ("an equipment item", ("system", "equipment"), system.equipment),
        ("a pump", ("pumps",), draft.inputs.pumps),
    ):
        for tag in items if items is not BROKEN else ():
            _own(draft, owners, tag, label, (*home, tag))
    for line_tag, line in system.lines.items() if system.lines is not BROKEN else ():
        for at, fitting in enumerate((line and line.fittings) or ()):
            if fitting and fitting.tag:
                keys = ("system", "lines", line_tag, "fittings", at)
                _own(draft, owners, fitting.tag, f"a fitting of line {line_tag}", keys)


def _own(draft: Draft, owners: dict[str, str], tag: str, label: str, keys: Keys) -> None:
    if tag in owners:
        draft.wrong(keys, f"the tag {tag} also names {owners[tag]}", "give every part a tag of its own")
    owners.setdefault(tag, label)


def _check_ends(draft: Draft, tag: str) -> None:
    system = draft.inputs.system
    line = system.lines[tag]
    keys: Keys = ("system", "lines", tag)
    for key, name in (("from", line.start), ("to", line.end)):
        if name is BROKEN:
            continue
        if name in system.nodes:
            continue
        if "." in name:
            check_port(draft, (*keys, key), name)
        elif draft.inputs.pumps is not BROKEN and name in draft.inputs.pumps:
            side = SUCTION if key == "to" else DISCHARGE
            draft.wrong((*keys, key), f"{name} is a pump; a line joins one of its ports", f"write {port(name, side)}")
        else:
            draft.wrong((*keys, key), f"no node '{name}'", suggestion(name, _node_names(draft)))
    if intact(line.start, line.end) and line.start == line.end:
        draft.wrong((*keys, "to"), "the line ends where it begins")
    _check_end_losses(draft, tag)


def _node_names(draft: Draft) -> Iterator[str]:
    yield from draft.inputs.system.nodes
    for tag in draft.inputs.pumps if draft.inputs.pumps is not BROKEN else ():
        yield port(tag, SUCTION)
        yield port(tag, DISCHARGE)


def _check_end_losses(draft: Draft, tag: str) -> None:
    """Entrance and exit losses are never left to guess: the line lists them, with K 0 where there is none."""
    system = draft.inputs.system
    line = system.lines[tag]
    if line.fittings is BROKEN or not intact(*line.fittings, *(one and one.type for one in line.fittings)):
        return
    types = [fitting.type for fitting in line.fittings]
    start, end = (system.nodes.get(name) if name is not BROKEN else BROKEN for name in (line.start, line.end))
    keys: Keys = ("system", "lines", tag, "fittings")
    if isinstance(start, OutletInput):
        draft.wrong(("system", "lines", tag, "from"), f"{line.start} is an outlet: a line can only end there")
    if isinstance(start, TankInput) and not any(type_.startswith(_ENTRANCES) for type_ in types):
        text = f"begins at the tank {line.start}, but no entrance is among its fittings"
        draft.wrong(keys, text, "add {type: entrance_flush}, or {type: entrance, K: 0} where it is neglected")
    if isinstance(end, TankInput | OutletInput) and not any(type_.startswith(_EXITS) for type_ in types):
        text = f"ends at {line.end}, but no exit is among its fittings"
        draft.wrong(keys, text, "add {type: exit}, or {type: exit, K: 0} where the velocity head is recovered")


def _check_equipment(draft: Draft) -> None:
    system = draft.inputs.system
    if system.equipment is BROKEN:
        return
    home: dict[str, str] = {}
    complete = True
    for tag, line in system.lines.items():
        if line is BROKEN or line.equipment is BROKEN:
            complete = False
            continue
        for at, item in enumerate(line.equipment):
            keys: Keys = ("system", "lines", tag, "equipment", at)
            if item is BROKEN:
                complete = False
            elif item not in system.equipment:
                complete = False
                draft.wrong(keys, f"no equipment '{item}'", suggestion(item, system.equipment))
            elif item in home:
                draft.wrong(keys, f"{item} already sits in line {home[item]}", "an item sits in one line")
            else:
                home[item] = tag
    for item in system.equipment if complete else ():
        if item not in home:
            draft.wrong(("system", "equipment", item), "sits in no line", f"add it to a line: equipment: [{item}]")


def _check_connected(draft: Draft) -> None:
    """Every part hangs together and has a fixed head; judged only where every end is known."""
    system, pumps = draft.inputs.system, draft.inputs.pumps
    if pumps is BROKEN or not intact(*system.lines.values(), *system.nodes.values()):
        return
    names = set(_node_names(draft))
    links = [(line.start, line.end) for line in system.lines.values()]
    if not all(intact(*link) and set(link) <= names for link in links):
        return
    reached = {name for link in links for name in link}
    for name in sorted(names - reached):
        keys = ("system", "nodes", name) if "." not in name else ("pumps", name.partition(".")[0])
        draft.wrong(keys, f"no line reaches {name}", "connect it with a line or take it out")
    if reached != names:
        return
    links += [(port(tag, SUCTION), port(tag, DISCHARGE)) for tag in pumps]
    for at, part in enumerate(_parts(names, links)):
        tag = next(tag for tag, line in system.lines.items() if line.start in part)
        members = ", ".join(sorted(part))
        if at > 0:
            text = f"not connected with the rest: {members}"
            draft.wrong(("system", "lines", tag), text, "connect the parts, or make them two projects")
        if not any(isinstance(system.nodes.get(name), TankInput | OutletInput) for name in part):
            text = f"nothing fixes the head of {members}"
            draft.wrong(("system", "lines", tag), text, "a tank or an outlet does")


def _parts(names: set[str], links: list[tuple[str, str]]) -> list[set[str]]:
    """Sets of names that are linked with each other, the largest first."""
    parts: list[set[str]] = []
    for name in sorted(names):
        linked = {name}
        for one, other in links:
            if {one, other} & linked:
                linked |= {one, other} & names
        touching = [part for part in parts if part & linked]
        parts = [part for part in parts if not part & linked]
        parts.append(linked.union(*touching))
    return sorted(parts, key=lambda part: (-len(part), sorted(part)))
