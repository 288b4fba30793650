"""Site and liquid: gravity where none is stated, and properties of water by look-up."""

from __future__ import annotations

from calcpack.catalog import water
from calcpack.catalog.errors import CatalogError
from calcpack.project.model import Liquid, LiquidState, Site
from calcpack.project.resolve.draft import Draft
from calcpack.project.schema.base import BROKEN, intact
from calcpack.project.schema.system import LiquidRowInput, SiteInput, TableLiquidInput, WaterInput
from calcpack.quantities import KINDS, STANDARD_GRAVITY, UNITS
from calcpack.units import typed
from calcpack.values import Value

NORMAL = "normal"


def resolve_site(draft: Draft, site: SiteInput) -> Site:
    """The site, with standard gravity where none is stated."""
    if site is BROKEN:
        return BROKEN
    return Site(site.elevation, site.datum, site.gravity or _gravity(draft), site.atmospheric_pressure)


def _gravity(draft: Draft) -> Value:
    unit = KINDS["acceleration"].display_unit(draft.units)
    text = f"{unit.from_si(STANDARD_GRAVITY):.7g} {typed(unit.text)}"
    note = "standard value; the local one differs by up to 0.3 %"
    return draft.supplied(
        ("system", "site", "gravity"), STANDARD_GRAVITY, "acceleration", text, "STANDARD-GRAVITY", note
    )


def resolve_liquid(draft: Draft, liquid: WaterInput | TableLiquidInput) -> Liquid:
    """The liquid at every named temperature."""
    if liquid is BROKEN:
        return BROKEN
    states = {}
    if not intact(liquid.temperatures):
        return BROKEN
    for name, entry in liquid.temperatures.items():
        if entry is BROKEN:
            states[name] = BROKEN
        elif isinstance(liquid, WaterInput):
            states[name] = _water(draft, name, entry)
        else:
            states[name] = _stated(draft, name, entry)
    if NORMAL not in states:
        draft.wrong(("system", "liquid", "temperatures"), f"no temperature is named '{NORMAL}'")
    return Liquid(liquid.name, liquid.model, states, tuple(liquid.flags or ()))


def _water(draft: Draft, name: str, temperature: Value) -> LiquidState:
    keys = ("system", "liquid", "temperatures", name)
    try:
        found = water.water(temperature.si)
    except CatalogError as error:
        draft.refused(keys, error)
        return BROKEN
    names = ("density", "dynamic_viscosity", "vapour_pressure", "bulk_modulus", "specific_heat")
    return LiquidState(name, temperature, **{one: draft.property((*keys, one), getattr(found, one)) for one in names})


def _stated(draft: Draft, name: str, row: LiquidRowInput) -> LiquidState:
    keys = ("system", "liquid", "temperatures", name)
    viscosity = row.dynamic_viscosity
    if row.dynamic_viscosity is None and row.kinematic_viscosity is None:
        draft.wrong(keys, "no viscosity is given", "give dynamic_viscosity or kinematic_viscosity")
        viscosity = BROKEN
    elif row.dynamic_viscosity is not None and row.kinematic_viscosity is not None:
        draft.wrong(keys, "two viscosities are given", "keep the one that is measured")
    elif viscosity is None:
        viscosity = _dynamic(row.kinematic_viscosity, row.density)
    return LiquidState(
        name, row.temperature, row.density, viscosity, row.vapour_pressure, row.bulk_modulus, row.specific_heat
    )


def _dynamic(kinematic: Value, density: Value) -> Value:
    """Dynamic viscosity from the stated kinematic one; its text is the product to six figures."""
    if not intact(kinematic, density):
        return BROKEN
    si = kinematic.si * density.si
    unit = UNITS["mPa·s"]
    return Value(
        si, "dynamic_viscosity", f"{unit.from_si(si):.6g} {unit.text}", kinematic.source, kinematic.locator,
        kinematic.status, note=f"stated kinematic viscosity {kinematic.text} times density {density.text}",
        path=kinematic.path, file=kinematic.file, line=kinematic.line,
    )  # fmt: skip
