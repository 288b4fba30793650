"""The glossary: every quantity kind, its SI unit, and the units that each unit system prints.

Row 1 of the import rules: nothing here knows pint. The factors are exact or by definition and
``tests/test_units.py`` compares each with pint.
"""

from __future__ import annotations

from dataclasses import dataclass

SYSTEMS = ("SI", "US")

FOOT = 0.3048  # m, exact (international foot)
INCH = 0.0254  # m, exact
POUND = 0.45359237  # kg, exact
STANDARD_GRAVITY = 9.80665  # m/s2, exact by definition
POUND_FORCE = POUND * STANDARD_GRAVITY  # N
SLUG = POUND_FORCE / FOOT  # kg
GALLON = 231 * INCH**3  # m3, US liquid gallon
HORSEPOWER = 550 * FOOT * POUND_FORCE  # W
PI = 3.141592653589793


@dataclass(frozen=True)
class Unit:
    """A unit as printed: ``SI value = factor * printed value + offset``."""

    text: str
    pint: str
    factor: float
    offset: float = 0.0

    def to_si(self, value):
        """Printed value -> SI value (floats or arrays)."""
        return value * self.factor + self.offset

    def from_si(self, value):
        """SI value -> printed value (floats or arrays)."""
        return (value - self.offset) / self.factor


UNITS: dict[str, Unit] = {
    unit.text: unit
    for unit in (
        Unit("", "", 1.0),
        Unit("%", "percent", 0.01),
        Unit("m", "m", 1.0),
        Unit("mm", "mm", 1e-3),
        Unit("km", "km", 1e3),
        Unit("ft", "ft", FOOT),
        Unit("in", "inch", INCH),
        Unit("m²", "m**2", 1.0),
        Unit("ft²", "ft**2", FOOT**2),
        Unit("m³", "m**3", 1.0),
        Unit("ft³", "ft**3", FOOT**3),
        Unit("L", "liter", 1e-3),
        Unit("US gal", "gallon", GALLON),
        Unit("m³/s", "m**3/s", 1.0),
        Unit("m³/h", "m**3/hour", 1 / 3600),
        Unit("m³/d", "m**3/day", 1 / 86400),
        Unit("L/s", "liter/s", 1e-3),
        Unit("ft³/s", "ft**3/s", FOOT**3),
        Unit("US gpm", "gallon/minute", GALLON / 60),
        Unit("US gal/d", "gallon/day", GALLON / 86400),
        Unit("m/s", "m/s", 1.0),
        Unit("ft/s", "ft/s", FOOT),
        Unit("m/s²", "m/s**2", 1.0),
        Unit("ft/s²", "ft/s**2", FOOT),
        Unit("kg/m³", "kg/m**3", 1.0),
        Unit("slug/ft³", "slug/ft**3", SLUG / FOOT**3),
        Unit("lb/ft³", "lb/ft**3", POUND / FOOT**3),
        Unit("Pa·s", "Pa*s", 1.0),
        Unit("mPa·s", "mPa*s", 1e-3),
        Unit("lbf·s/ft²", "lbf*s/ft**2", POUND_FORCE / FOOT**2),
        Unit("cP", "centipoise", 1e-3),
        Unit("m²/s", "m**2/s", 1.0),
        Unit("mm²/s", "mm**2/s", 1e-6),
        Unit("ft²/s", "ft**2/s", FOOT**2),
        Unit("cSt", "centistokes", 1e-6),
        Unit("Pa", "Pa", 1.0),
        Unit("kPa", "kPa", 1e3),
        Unit("MPa", "MPa", 1e6),
        Unit("GPa", "GPa", 1e9),
        Unit("lbf/ft²", "lbf/ft**2", POUND_FORCE / FOOT**2),
        Unit("psi", "psi", POUND_FORCE / INCH**2),
        Unit("ksi", "ksi", 1000 * POUND_FORCE / INCH**2),
        Unit("W", "W", 1.0),
        Unit("kW", "kW", 1e3),
        Unit("ft·lbf/s", "ft*lbf/s", FOOT * POUND_FORCE),
        Unit("hp", "hp", HORSEPOWER),
        Unit("J", "J", 1.0),
        Unit("ft·lbf", "ft*lbf", FOOT * POUND_FORCE),
        Unit("kWh", "kWh", 3.6e6),
        Unit("J/m³", "J/m**3", 1.0),
        Unit("kWh/m³", "kWh/m**3", 3.6e6),
        Unit("ft·lbf/ft³", "ft*lbf/ft**3", POUND_FORCE / FOOT**2),
        Unit("kWh/1000 US gal", "kWh/(1000*gallon)", 3.6e6 / (1000 * GALLON)),
        Unit("1/J", "1/J", 1.0),
        Unit("1/(ft·lbf)", "1/(ft*lbf)", 1 / (FOOT * POUND_FORCE)),
        Unit("1/kWh", "1/kWh", 1 / 3.6e6),
        Unit("s", "s", 1.0),
        Unit("h", "hour", 3600.0),
        Unit("d", "day", 86400.0),
        Unit("K", "K", 1.0),
        Unit("°R", "delta_degF", 5 / 9),
        Unit("°C", "degC", 1.0, 273.15),
        Unit("°F", "degF", 5 / 9, 459.67 * 5 / 9),
        Unit("rad/s", "rad/s", 1.0),
        Unit("rpm", "rpm", PI / 30),
        Unit("J/(kg·K)", "J/(kg*K)", 1.0),
        Unit("kJ/(kg·K)", "kJ/(kg*K)", 1e3),
        Unit("ft·lbf/(slug·°R)", "ft*lbf/(slug*delta_degF)", FOOT * POUND_FORCE / SLUG * 1.8),
        Unit("Btu/(lb·°F)", "Btu_it/(lb*delta_degF)", 4186.8),
        Unit("m/100 m", "m/(100*m)", 0.01),
        Unit("ft/100 ft", "ft/(100*ft)", 0.01),
        Unit("rad", "rad", 1.0),
        Unit("°", "degree", PI / 180),
        Unit("s²/m⁵", "s**2/m**5", 1.0),
        Unit("s²/ft⁵", "s**2/ft**5", FOOT**-5),
        Unit("s/m²", "s/m**2", 1.0),
        Unit("s/ft²", "s/ft**2", FOOT**-2),
        Unit("s/m³", "s/m**3", 1.0),
        Unit("s/ft³", "s/ft**3", FOOT**-3),
        Unit("s²/m⁶", "s**2/m**6", 1.0),
        Unit("s²/ft⁶", "s**2/ft**6", FOOT**-6),
        Unit("s³/m⁹", "s**3/m**9", 1.0),
        Unit("s³/ft⁹", "s**3/ft**9", FOOT**-9),
    )
}


@dataclass(frozen=True)
class Kind:
    """One quantity kind. Units are keys of :data:`UNITS`; pairs are (SI system, US system).

    ``coherent`` units stand in substituted lines, ``display`` units in results and tables.
    ``word`` follows the number where the unit alone would be ambiguous (gauge, absolute).
    """

    name: str
    title: str
    si: str
    coherent: tuple[str, str]
    display: tuple[str, str]
    word: str = ""

    def coherent_unit(self, system: str) -> Unit:
        """Unit of substituted lines in ``system`` ('SI' or 'US')."""
        return UNITS[self.coherent[SYSTEMS.index(system)]]

    def display_unit(self, system: str) -> Unit:
        """Unit of results, tables and axes in ``system``."""
        return UNITS[self.display[SYSTEMS.index(system)]]


def _kind(name: str, title: str, si: str, coherent: str, display: str | None = None, word: str = "") -> Kind:
    pair = tuple(coherent.split("|"))
    shown = tuple((display or coherent).split("|"))
    return Kind(name, title, si, (pair[0], pair[-1]), (shown[0], shown[-1]), word)


KINDS: dict[str, Kind] = {
    kind.name: kind
    for kind in (
        _kind("dimensionless", "number", "", ""),
        _kind("count", "count", "", ""),
        _kind("ratio", "ratio", "", ""),
        _kind("fraction", "fraction", "", "", "%"),
        _kind("efficiency", "efficiency", "", ""),
        _kind("friction_factor", "Darcy friction factor", "", ""),
        _kind("reynolds_number", "Reynolds number", "", ""),
        _kind("loss_coefficient", "loss coefficient", "", ""),
        _kind("money", "money", "", ""),
        _kind("length", "length", "m", "m|ft"),
        _kind("elevation", "elevation", "m", "m|ft"),
        _kind("head", "head", "m", "m|ft"),
        _kind("diameter", "diameter", "m", "m|ft", "mm|in"),
        _kind("roughness", "absolute roughness", "m", "m|ft", "mm|in"),
        _kind("area", "area", "m²", "m²|ft²"),
        _kind("volume", "volume", "m³", "m³|ft³", "m³|US gal"),
        _kind("flow", "volume flow", "m³/s", "m³/s|ft³/s", "m³/h|US gpm"),
        _kind("daily_flow", "daily volume", "m³/s", "m³/s|ft³/s", "m³/d|US gal/d"),
        _kind("velocity", "velocity", "m/s", "m/s|ft/s"),
        _kind("acceleration", "acceleration", "m/s²", "m/s²|ft/s²"),
        _kind("density", "density", "kg/m³", "kg/m³|slug/ft³", "kg/m³|lb/ft³"),
        _kind("dynamic_viscosity", "dynamic viscosity", "Pa·s", "Pa·s|lbf·s/ft²", "mPa·s|cP"),
        _kind("kinematic_viscosity", "kinematic viscosity", "m²/s", "m²/s|ft²/s", "mm²/s|cSt"),
        _kind("absolute_pressure", "absolute pressure", "Pa", "Pa|lbf/ft²", "kPa|psi", "absolute"),
        _kind("gauge_pressure", "gauge pressure", "Pa", "Pa|lbf/ft²", "kPa|psi", "gauge"),
        _kind("pressure_difference", "pressure difference", "Pa", "Pa|lbf/ft²", "kPa|psi"),
        _kind("elastic_modulus", "modulus of elasticity", "Pa", "Pa|lbf/ft²", "GPa|ksi"),
        _kind("bulk_modulus", "bulk modulus", "Pa", "Pa|lbf/ft²", "GPa|ksi"),
        _kind("power", "power", "W", "W|ft·lbf/s", "kW|hp"),
        _kind("energy", "energy", "J", "J|ft·lbf", "kWh"),
        _kind("specific_energy", "energy per volume", "J/m³", "J/m³|ft·lbf/ft³", "kWh/m³|kWh/1000 US gal"),
        _kind("energy_price", "price of energy", "1/J", "1/J|1/(ft·lbf)", "1/kWh"),
        _kind("duration", "duration", "s", "s"),
        _kind("hours", "duration", "s", "s", "h"),
        _kind("days", "duration", "s", "s", "d"),
        _kind("temperature", "temperature", "K", "K", "°C|°F"),
        _kind("temperature_difference", "temperature difference", "K", "K|°R"),
        _kind("rotational_speed", "rotational speed", "rad/s", "rad/s", "rpm"),
        _kind("specific_heat", "specific heat", "J/(kg·K)", "J/(kg·K)|ft·lbf/(slug·°R)", "kJ/(kg·K)|Btu/(lb·°F)"),
        _kind("gradient", "friction gradient", "", "", "m/100 m|ft/100 ft"),
        _kind("angle", "angle", "rad", "rad", "°"),
        _kind("flow_coefficient_kv", "flow coefficient Kv (water, 1 bar)", "m³/s", "m³/s", "m³/h"),
        _kind("flow_coefficient_cv", "flow coefficient Cv (water, 1 psi)", "m³/s", "m³/s|ft³/s", "US gpm"),
        _kind("displacement", "volume moved by one turn", "m³", "m³|ft³", "L|US gal"),
        _kind("quadratic_coefficient", "quadratic loss coefficient", "s²/m⁵", "s²/m⁵|s²/ft⁵"),
        _kind("head_slope", "head over flow", "s/m²", "s/m²|s/ft²"),
        _kind("efficiency_slope", "efficiency over flow", "s/m³", "s/m³|s/ft³"),
        _kind("efficiency_square", "efficiency over flow squared", "s²/m⁶", "s²/m⁶|s²/ft⁶"),
        _kind("efficiency_cube", "efficiency over flow cubed", "s³/m⁹", "s³/m⁹|s³/ft⁹"),
        _kind("specific_speed", "specific speed (rpm, m³/s, m)", "", ""),
    )
}
