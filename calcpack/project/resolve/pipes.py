"""Pipe size, roughness and wall data of a line: table rows where the project gives none of its own."""

from __future__ import annotations

import re
from collections.abc import Mapping

from calcpack.catalog import materials, pipes
from calcpack.catalog.errors import CatalogError
from calcpack.project.model import Pipe
from calcpack.project.resolve.draft import Draft, Keys
from calcpack.project.schema.base import BROKEN, intact
from calcpack.project.schema.system import LineInput, PipeInput
from calcpack.values import SUPPLIED, Value

# The material that a dimension standard implies, as the roughness table calls it.
_MATERIAL_OF_TABLE = {
    "pipe_steel_b36_10": "commercial_steel", "pipe_stainless_b36_19": "stainless_steel", "pipe_pvc_d1785": "pvc",
    "pipe_pe_iso4427": "polyethylene", "tube_copper_b88": "copper",
}  # fmt: skip

# Modulus of elasticity in GPa and Poisson's ratio for pressure waves; from memory, not seen in a source.
_ELASTIC = {
    "commercial_steel": ("207", "0.30"), "cement_lined_steel": ("207", "0.30"), "galvanised_iron": ("207", "0.30"),
    "stainless_steel": ("193", "0.30"), "copper": ("117", "0.34"), "pvc": ("3.0", "0.40"),
    "polyethylene": ("0.9", "0.45"),
}  # fmt: skip
_SIZE = re.compile(r"DN ?(\d+)", re.IGNORECASE)


def resolve_pipe(draft: Draft, keys: Keys, pipe: PipeInput) -> tuple[Pipe, int | None]:
    """The pipe and its DN number, which some fittings depend on (None where no size is named)."""
    if not intact(*(getattr(pipe, name) for name in PipeInput.model_fields)):
        return BROKEN, None
    outside, wall, material, size = pipe.outside_diameter, pipe.wall, pipe.material, pipe.size
    match = _SIZE.search(size)
    dn = int(match[1]) if match else None
    if pipe.standard or pipe.schedule:
        row = _row(draft, keys, pipe)
        if row is None:
            material = material or BROKEN
        else:
            outside = outside or draft.row((*keys, "outside_diameter"), row.outside_diameter, "outside_diameter")
            wall = wall or draft.row((*keys, "wall"), row.wall, "wall")
            material = material or _MATERIAL_OF_TABLE[row.wall.table]
            size, dn = row.nominal, row.dn
    elif pipe.bore is None and (outside is None or wall is None):
        draft.wrong(keys, "no size is given", "give standard, size and schedule; or bore; or outside_diameter and wall")
    _check_fit(draft, keys, outside, wall, pipe.bore)
    return Pipe(pipe.standard, size, pipe.schedule, material, outside, wall, pipe.bore), dn


def resolve_roughness(draft: Draft, keys: Keys, line: LineInput, material: str) -> Mapping[str, Value]:
    """Roughness by condition: as stated, else that of the material; none where the friction factor is given."""
    if line.roughness is not None or line.friction_factor is not None:
        return {} if line.roughness is None else line.roughness
    if not intact(material):
        return BROKEN
    where = (*keys, "roughness")
    if not material:
        draft.wrong(where, "neither roughness nor pipe material is given", "add roughness: {new: ..., aged: ...}")
        return BROKEN
    found = {}
    for condition in ("new", "aged"):
        try:
            row = materials.roughness(material, condition)
        except CatalogError as error:
            if condition == "new":
                draft.refused(where, error)
                return BROKEN
            continue
        note = "the line states no roughness; taken from the table by its material"
        found[condition] = draft.row((*where, condition), row, "roughness", status=SUPPLIED, note=note)
    return found


def resolve_surge(draft: Draft, keys: Keys, line: LineInput, material: str) -> dict[str, Value | None]:
    """Modulus of elasticity, Poisson's ratio and restraint factor by their name in Line.

    Modulus and ratio are as stated, else those of the material; a factor that is not stated follows from a formula.
    """
    modulus = line.surge.modulus if line.surge else None
    poisson = line.surge.poisson if line.surge else None
    if material in _ELASTIC:
        gigapascal, ratio = _ELASTIC[material]
        name = material.replace("_", " ")
        if modulus is None:
            note = f"usual value for {name}; from memory, not seen"
            modulus = draft.supplied(
                (*keys, "surge", "modulus"), float(gigapascal) * 1e9, "elastic_modulus", f"{gigapascal} GPa",
                "WAVE-SPEED", note,
            )  # fmt: skip
        if poisson is None:
            note = f"usual value for {name}; from memory, not seen"
            poisson = draft.supplied((*keys, "surge", "poisson"), float(ratio), "ratio", ratio, "WAVE-SPEED", note)
    restraint = line.surge.restraint if line.surge else None
    return {"surge_modulus": modulus, "surge_poisson": poisson, "surge_restraint": restraint}


def _row(draft: Draft, keys: Keys, pipe: PipeInput) -> pipes.PipeSize | None:
    lacking = [name for name in ("standard", "size", "schedule") if not getattr(pipe, name)]
    if lacking:
        draft.wrong(keys, f"{' and '.join(lacking)} missing", "a standard size is named by standard, size and schedule")
        return None
    try:
        return pipes.pipe(pipe.standard, pipe.size, pipe.schedule)
    except CatalogError as error:
        draft.refused(keys, error)
        return None


def _check_fit(draft: Draft, keys: Keys, outside: Value | None, wall: Value | None, bore: Value | None) -> None:
    if outside and wall and 2 * wall.si >= outside.si:
        draft.wrong((*keys, "wall"), f"a wall of {wall.text} leaves no bore in an outside diameter of {outside.text}")
    if outside and bore and bore.si >= outside.si:
        draft.wrong((*keys, "bore"), f"a bore of {bore.text} does not fit into an outside diameter of {outside.text}")
