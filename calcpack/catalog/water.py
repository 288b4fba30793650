"""Liquid water by the IAPWS formulations.

Density, specific heat and speed of sound: IAPWS-IF97 region 1. Vapour pressure: its saturation line (region 4).
Viscosity: the 2008 formulation without its critical enhancement, which is negligible in this range.
Bulk modulus: the isentropic one, K = rho w^2 with the speed of sound w, because pressure waves are isentropic.
Accuracy: at 25 C and 0.1 MPa the IF97 speed of sound is 0.10 % above the value that IAPWS publishes for that state
(SR6-08, table 8), so K is 0.2 % high there.

The equations of region 1 are called directly. The library's state object chooses the phase itself and turns to steam
when a saturated state differs from the saturation line by the last bit of a float.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

from calcpack.catalog.errors import CatalogError
from calcpack.catalog.sources import source
from calcpack.catalog.table import CatalogValue

LOWEST_TEMPERATURE = 273.15  # K, 0 C
HIGHEST_TEMPERATURE = 623.15  # K, upper end of region 1
HIGHEST_PRESSURE = 100e6  # Pa, upper end of region 1
_MPA = 1e6


@dataclass(frozen=True)
class WaterProperties:
    """Liquid water: density kg/m3, dynamic viscosity Pa s, vapour pressure Pa absolute, specific heat J/(kg K),
    isentropic bulk modulus Pa."""

    density: CatalogValue
    dynamic_viscosity: CatalogValue
    vapour_pressure: CatalogValue
    specific_heat: CatalogValue
    bulk_modulus: CatalogValue


@lru_cache(maxsize=4096)
def water(temperature_K: float, pressure_Pa: float = 101325.0) -> WaterProperties:
    """Properties of liquid water at ``temperature_K`` and absolute ``pressure_Pa``.

    Raises :class:`CatalogError` below 0 C, above 350 C, above 100 MPa and where the liquid would be steam.
    """
    celsius = temperature_K - LOWEST_TEMPERATURE
    if not LOWEST_TEMPERATURE <= temperature_K <= HIGHEST_TEMPERATURE:
        raise CatalogError(
            f"water at {celsius:.2f} C is outside 0 C to 350 C", "state the properties of the liquid with their source"
        )
    # Imported here: the library takes about a second to load and few commands need it.
    from iapws import _Viscosity
    from iapws.iapws97 import _PSat_T, _Region1

    saturation_Pa = float(_PSat_T(temperature_K)) * _MPA
    on_line = f"saturation line at {celsius:.2f} C"
    at_state = f"liquid water at {celsius:.2f} C and {pressure_Pa / 1000:.3f} kPa absolute"
    if not saturation_Pa <= pressure_Pa <= HIGHEST_PRESSURE:
        raise CatalogError(
            f"there is no {at_state}",
            f"the pressure must lie between the vapour pressure, {saturation_Pa / 1000:.3f} kPa, and 100 MPa",
        )
    state = _Region1(temperature_K, pressure_Pa / _MPA)
    density = 1 / float(state["v"])
    return WaterProperties(
        density=_value(density, "density", at_state, "IAPWS-IF97", "region 1"),
        dynamic_viscosity=_value(
            float(_Viscosity(density, temperature_K)), "dynamic_viscosity", at_state, "IAPWS-VISC",
            "without critical enhancement",
        ),
        vapour_pressure=_value(saturation_Pa, "absolute_pressure", on_line, "IAPWS-IF97", "region 4"),
        specific_heat=_value(1000 * float(state["cp"]), "specific_heat", at_state, "IAPWS-IF97", "region 1"),
        bulk_modulus=_value(
            density * float(state["w"]) ** 2, "bulk_modulus", at_state, "IAPWS-IF97",
            "isentropic: density times the square of the speed of sound, region 1",
        ),
    )  # fmt: skip


def _value(value: float, kind: str, row: str, key: str, note: str) -> CatalogValue:
    return CatalogValue(value=value, kind=kind, table="water", row=row, source=key, seen=source(key).seen, note=note)
