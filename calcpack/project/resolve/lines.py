"""Lines: pipe, fittings, equipment, limits and profile."""

from __future__ import annotations

from itertools import pairwise

from calcpack.catalog import criteria, fittings
from calcpack.catalog.errors import CatalogError
from calcpack.project.model import Fitting, Line, ProfilePoint
from calcpack.project.resolve.draft import Draft, Keys
from calcpack.project.resolve.pipes import resolve_pipe, resolve_roughness, resolve_surge
from calcpack.project.schema.base import BROKEN, intact
from calcpack.project.schema.system import FittingInput, JunctionInput, LineInput, OutletInput
from calcpack.values import SUPPLIED, Value

LENGTH_SLACK = 1e-6  # of the length: a profile that ends where its line does
ELEVATION_SLACK = 0.1  # m: the profile and the node at its end mean the same point


def resolve_line(draft: Draft, tag: str, line: LineInput) -> Line:
    """One line; parts that could not be read stay BROKEN."""
    if line is BROKEN:
        return BROKEN
    keys: Keys = ("system", "lines", tag)
    pipe, dn = (BROKEN, None) if line.pipe is BROKEN else resolve_pipe(draft, (*keys, "pipe"), line.pipe)
    material = pipe.material if pipe is not BROKEN else BROKEN
    minimum, maximum = _velocity(draft, keys, line)
    surge = resolve_surge(draft, keys, line, material)
    profile = line.profile or ()
    _check_profile(draft, keys, line)
    return Line(
        tag=tag,
        start=line.start,
        end=line.end,
        description=line.description,
        service=line.service,
        pipe=pipe,
        length=line.length,
        roughness=resolve_roughness(draft, keys, line, material),
        fittings=tuple(_fitting(draft, (*keys, "fittings", at), one, dn) for at, one in enumerate(line.fittings or ())),
        equipment=tuple(line.equipment or ()),
        velocity_minimum=minimum,
        velocity_maximum=maximum,
        rating=line.rating,
        friction_factor=line.friction_factor,
        profile=tuple(ProfilePoint(one.chainage, one.elevation) for one in profile if one is not BROKEN),
        **surge,
    )


def _fitting(draft: Draft, keys: Keys, fitting: FittingInput, dn: int | None) -> Fitting:
    if fitting is BROKEN or not intact(fitting.type, fitting.n, fitting.K):
        return BROKEN
    if fitting.n is not None and fitting.K is not None:
        draft.wrong(keys, "both n and K are given", "keep the one that the source states")
        return BROKEN
    given = fitting.K if fitting.n is None else fitting.n
    row, refusal = _table_row(fitting.type, dn)
    title = fitting.title or _title(fitting.type)
    constant = row and row.full_open_constant
    full_open = draft.row((*keys, "full_open_constant"), constant, "full_open_constant") if constant else None
    if given is not None:
        method = fittings.K if fitting.n is None else fittings.N_FT
        return Fitting(fitting.type, title, fitting.count, method, given, full_open, fitting.tag)
    if row is None:
        draft.refused(keys, refusal)
        return BROKEN
    coefficient = draft.row((*keys, "coefficient"), row.coefficient, "coefficient")
    return Fitting(row.type, title, fitting.count, row.method, coefficient, full_open, fitting.tag)


def _table_row(type_: str, dn: int | None) -> tuple[fittings.FittingRow | None, CatalogError | None]:
    try:
        return fittings.fitting(type_, dn), None
    except CatalogError as error:
        return None, error


def _title(type_: str) -> str:
    try:
        return fittings.fitting_title(type_)
    except CatalogError:
        return type_.replace("_", " ")


def _velocity(draft: Draft, keys: Keys, line: LineInput) -> tuple[Value | None, Value | None]:
    """Stated velocity limits, else those of the service; None where there is neither."""
    if line.velocity is BROKEN or line.service is BROKEN:
        return BROKEN, BROKEN
    minimum = line.velocity.minimum if line.velocity else None
    maximum = line.velocity.maximum if line.velocity else None
    if not line.service:
        return minimum, maximum
    try:
        limits = criteria.velocity_range(line.service)
    except CatalogError as error:
        draft.refused((*keys, "service"), error)
        return BROKEN, BROKEN
    note = f"the line states no limit; taken from the table for {limits.title}"
    if minimum is None and limits.minimum:
        minimum = draft.row((*keys, "velocity", "minimum"), limits.minimum, "minimum", status=SUPPLIED, note=note)
    if maximum is None and limits.maximum:
        maximum = draft.row((*keys, "velocity", "maximum"), limits.maximum, "maximum", status=SUPPLIED, note=note)
    if minimum and maximum and minimum.si > maximum.si:
        draft.wrong((*keys, "velocity"), f"least velocity {minimum.text} is above greatest velocity {maximum.text}")
    return minimum, maximum


def _check_profile(draft: Draft, keys: Keys, line: LineInput) -> None:
    where = (*keys, "profile")
    points = line.profile or ()
    if not points or not intact(line.length, *points, *(point and point.chainage for point in points)):
        return
    if len(points) < 2:
        draft.wrong(where, "a profile has at least two points")
    for at, (before, after) in enumerate(pairwise(points), start=1):
        if not after.chainage.si > before.chainage.si:
            text = f"chainage {after.chainage.text} does not lie beyond {before.chainage.text} of the point before"
            draft.wrong((*where, at, "chainage"), text, "order the points from the start of the line")
    if points[-1].chainage.si > line.length.si * (1 + LENGTH_SLACK):
        text = f"the profile goes to {points[-1].chainage.text}, the line is {line.length.text} long"
        draft.wrong((*where, len(points) - 1, "chainage"), text, "correct the length or the profile")
    _check_profile_ends(draft, where, line)


def _check_profile_ends(draft: Draft, where: Keys, line: LineInput) -> None:
    """A profile meets the outlets and junctions at its ends: one elevation is not stated in two ways."""
    if line.start == line.end:  # reported as such
        return
    nodes = draft.inputs.system.nodes
    last = len(line.profile) - 1
    for at, name, chainage in ((0, line.start, 0.0), (last, line.end, line.length.si)):
        point, node = line.profile[at], nodes.get(name) if nodes is not BROKEN and name is not BROKEN else None
        if not isinstance(node, OutletInput | JunctionInput) or not intact(point.elevation, node.elevation):
            continue
        reaches_end = abs(point.chainage.si - chainage) <= LENGTH_SLACK * line.length.si
        if reaches_end and abs(point.elevation.si - node.elevation.si) > ELEVATION_SLACK:
            text = f"the profile has {point.elevation.text} where {name} lies at {node.elevation.text}"
            draft.wrong((*where, at, "elevation"), text, "one of the two is wrong")
