"""Units: every factor of the glossary against pint, and the reading of quantities from text."""

import math
import subprocess
import sys
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack import units
from calcpack.errors import UnitError
from calcpack.quantities import KINDS, SYSTEMS, UNITS
from calcpack.units import parse_quantity


def by_pint(printed, unit):
    """A printed value as a pint quantity; units with a number in them, such as m/100 m, are expressions."""
    if unit.offset:
        return units.registry().Quantity(printed, unit.pint)
    return printed * units.registry().Quantity(unit.pint or "dimensionless")


@pytest.mark.parametrize("unit", UNITS.values(), ids=lambda unit: unit.text or "(number)")
def test_factor_and_offset_agree_with_pint(unit):
    si = UNITS[units.si_text(unit)].pint or "dimensionless"
    for printed in (0.0, 1.0, 37.5):
        expected = by_pint(printed, unit).to(si).magnitude
        assert unit.to_si(printed) == pytest.approx(expected, rel=1e-12, abs=1e-15)


@pytest.mark.parametrize("kind", KINDS.values(), ids=lambda kind: kind.name)
def test_every_unit_of_a_kind_has_its_dimension(kind):
    for text in (*kind.coherent, *kind.display):
        assert by_pint(1.0, UNITS[text]).dimensionality == by_pint(1.0, UNITS[kind.si]).dimensionality, text


def test_coherent_units_are_coherent():
    """Formulas are evaluated in SI and printed in coherent units: pounds-force, slugs, feet and seconds fit."""
    slug, foot, pound_force = (
        UNITS["slug/ft³"].factor * 0.3048**3,
        UNITS["ft"].factor,
        UNITS["lbf/ft²"].factor * 0.3048**2,
    )
    assert slug * foot == pytest.approx(pound_force, rel=1e-15)


@pytest.mark.parametrize("kind", KINDS.values(), ids=lambda kind: kind.name)
@pytest.mark.parametrize("system", SYSTEMS)
def test_display_text_of_every_kind_is_read_back(kind, system):
    unit = kind.display_unit(system)
    if unit.text in ("m/100 m", "ft/100 ft"):
        return  # a gradient is only printed
    for spelling in {unit.text, units.typed(unit.text)}:
        text = " ".join(part for part in ("12.5", spelling, kind.word) if part)
        si, number = parse_quantity(text, kind.name, system)
        assert (unit.from_si(si), number) == (pytest.approx(12.5, rel=1e-12), "12.5")


@given(value=st.floats(1e-30, 1e30), unit=st.sampled_from(["mm", "ft", "in", "km", "m"]))
def test_a_length_survives_the_way_there_and_back(value, unit):
    si, _ = parse_quantity(f"{value!r} {unit}", "length", "SI")
    assert UNITS[unit].from_si(si) == pytest.approx(value, rel=1e-14)


@given(text=st.text(max_size=30), kind=st.sampled_from(sorted(KINDS)))
def test_any_text_is_a_finite_number_or_refused(text, kind):
    try:
        si, number = parse_quantity(text, kind, "SI")
    except UnitError as error:
        assert error.text
    else:
        assert math.isfinite(si) and math.isfinite(float(number))


READ = [
    ("9.5 m", "length", 9.5, "9.5"),
    ("9.5m", "length", 9.5, "9.5"),
    ("-1.5 m", "elevation", -1.5, "-1.5"),
    ("\u22121.5 m", "elevation", -1.5, "-1.5"),
    ("154.05 mm", "diameter", 0.15405, "154.05"),
    ("6 ft", "head", 1.8288, "6"),
    ("90 m3/h", "flow", 0.025, "90"),
    ("90 m³/h", "flow", 0.025, "90"),
    ("90 m^3/h", "flow", 0.025, "90"),
    ("1 980 m3/d", "daily_flow", 1980 / 86400, "1980"),
    ("1_980 m3/d", "daily_flow", 1980 / 86400, "1980"),
    ("1\u2009980 m3/d", "daily_flow", 1980 / 86400, "1980"),
    ("100 gpm", "flow", 100 * 231 * 0.0254**3 / 60, "100"),
    ("100 imperial_gallon/min", "flow", 100 * 4.54609e-3 / 60, "100"),
    ("10 l/min", "flow", 1 / 6000, "10"),
    ("15 degC", "temperature", 288.15, "15"),
    ("59 °F", "temperature", 288.15, "59"),
    ("288.15 K", "temperature", 288.15, "288.15"),
    ("1.8 °R", "temperature_difference", 1.0, "1.8"),
    ("5 %", "fraction", 0.05, "5"),
    ("0.925", "efficiency", 0.925, "0.925"),
    ("1e-3", "dimensionless", 0.001, "1e-3"),
    ("1000 kPa gauge", "gauge_pressure", 1e6, "1000"),
    ("10 barg", "gauge_pressure", 1e6, "10"),
    ("10 bar (g)", "gauge_pressure", 1e6, "10"),
    ("100 psig", "gauge_pressure", 689475.7293168361, "100"),
    ("-20 kPa gauge", "gauge_pressure", -2e4, "-20"),
    ("14.5 psia", "absolute_pressure", 99973.98075094123, "14.5"),
    ("101.3 kPa abs", "absolute_pressure", 101300.0, "101.3"),
    ("55 kPa", "pressure_difference", 55e3, "55"),
    ("207 GPa", "elastic_modulus", 2.07e11, "207"),
    ("22 kW", "power", 22e3, "22"),
    ("30 hp", "power", 22370.996147, "30"),
    ("2950 rpm", "rotational_speed", 2950 * math.pi / 30, "2950"),
    ("2950 1/min", "rotational_speed", 2950 * math.pi / 30, "2950"),
    ("0.14 /kWh", "energy_price", 0.14 / 3.6e6, "0.14"),
    ("0.14 per kWh", "energy_price", 0.14 / 3.6e6, "0.14"),
    ("1.13757e-3 Pa s", "dynamic_viscosity", 1.13757e-3, "1.13757e-3"),
    ("1 cSt", "kinematic_viscosity", 1e-6, "1"),
    ("1 oil_bbl/h", "flow", 42 * 0.003785411784 / 3600, "1"),
    ("0.998 t/m3", "density", 998.0, "0.998"),
    ("62.4 lb/ft3", "density", 62.4 * 16.018463373960138, "62.4"),
    ("4.19 kJ/(kg.K)", "specific_heat", 4190.0, "4.19"),
    ("22 h", "hours", 79200.0, "22"),
    ("30 min", "hours", 1800.0, "30"),
    ("365 days", "days", 365 * 86400.0, "365"),
]


@pytest.mark.parametrize(("text", "kind", "si", "number"), READ, ids=[row[0] for row in READ])
def test_quantities_are_read(text, kind, si, number):
    found, written = parse_quantity(text, kind, "SI")
    assert (found, written) == (pytest.approx(si, rel=1e-9), number)


def test_decimal_factors_leave_no_rounding_noise():
    assert parse_quantity("154.05 mm", "diameter", "SI")[0] == 0.15405
    assert parse_quantity("70 %", "fraction", "SI")[0] == 0.7
    assert parse_quantity("90 m3/h", "flow", "SI")[0] == 0.025


REFUSED = [
    ("685", "length", ["'685' has no unit", "write '685 m'"]),
    ("685", "diameter", ["has no unit", "write '685 mm'"]),
    ("90", "flow", ["has no unit", "write '90 m3/h'"]),
    ("100", "gauge_pressure", ["has no unit", "write '100 kPa gauge'"]),
    ("685 kg", "length", ["'685 kg' is a mass", "a length such as '685 m' is wanted"]),
    ("5 ft2", "length", ["is an area", "a length such as"]),
    ("5 kg/s", "flow", ["is a mass flow", "a volume flow such as '5 m3/h'"]),
    ("5 kW", "energy", ["is a power", "an energy such as"]),
    ("1900 bbl/h", "flow", ["'bbl' in '1900 bbl/h' names more than one unit", "oil_bbl for 42 US gal"]),
    ("2 barrels/day", "flow", ["'barrels' in '2 barrels/day' names more than one unit"]),
    ("1 ton/m3", "density", ["'ton' in '1 ton/m3' names more than one unit", "t for 1000 kg"]),
    ("50 kPa", "head", ["is a pressure", "a head such as '50 m'"]),
    ("500 mm", "head", ["is not how a head is written", "m or ft"]),
    ("1000 kPa", "gauge_pressure", ["does not say gauge or absolute", "write '1000 kPa gauge'"]),
    ("1000 kPa", "absolute_pressure", ["does not say gauge or absolute", "write '1000 kPa absolute'"]),
    ("1000 kPa abs", "gauge_pressure", ["is an absolute pressure", "'1000 kPa gauge' is wanted"]),
    ("14 psig", "absolute_pressure", ["is a gauge pressure", "'14 psi absolute' is wanted"]),
    ("5 kPa gauge", "pressure_difference", ["is a gauge pressure", "'5 kPa' is wanted"]),
    ("5 m", "gauge_pressure", ["is a length", "'5 kPa gauge' is wanted"]),
    ("-5 kPa abs", "absolute_pressure", ["below absolute zero"]),
    ("-300 degC", "temperature", ["below absolute zero"]),
    ("5 degC", "temperature_difference", ["is a temperature, not a difference", "write '5 K'"]),
    ("9,5 m", "length", ["has a comma", "decimal point"]),
    ("1,980.5 m3/d", "daily_flow", ["has a comma"]),
    ("0.77 m", "efficiency", ["has a unit", "'0.77', or in %"]),
    ("50 Hz", "rotational_speed", ["the unit 'Hz'", "is not known", "'50 rpm'"]),
    ("1000 kpa gauge", "gauge_pressure", ["the unit 'kpa'", "did you mean '1000 kPa gauge'?"]),
    ("685 M", "length", ["the unit 'M'", "did you mean '685 m'?"]),
    ("0.14 EUR/kWh", "energy_price", ["the unit 'EUR/kWh'", "'0.14 /kWh'"]),
    ("", "length", ["nothing is written"]),
    ("abc", "length", ["is not a number with a unit", "'10 m'"]),
    ("abc", "efficiency", ["is not a number"]),
    ("nan m", "length", ["is not a number with a unit"]),
    ("inf m", "length", ["is not a number with a unit"]),
    ("1e999 m", "length", ["too large"]),
    ("1e308 km", "length", ["too large"]),
    ("1e-999 m", "length", ["too small"]),
    ("10..5 m", "length", ["is not a number with a unit"]),
    ("1 00 m", "length", ["'00 m'", "is not known"]),
    ("m", "length", ["is not a number with a unit"]),
    ("5 m; import os", "length", ["is not known"]),
    ("5 __import__('os')", "length", ["is not known"]),
    ("5 m**9999999", "length", ["is not known"]),
    ("5 (m", "length", ["is not known"]),
    ("5 " + "m" * 500, "length", ["too long"]),
]


@pytest.mark.parametrize(("text", "kind", "says"), REFUSED, ids=[f"{row[0][:20]} as {row[1]}" for row in REFUSED])
def test_what_is_wrong_and_what_would_be_right_is_said(text, kind, says):
    with pytest.raises(UnitError) as caught:
        parse_quantity(text, kind, "SI")
    for part in says:
        assert part in str(caught.value)


def test_hints_follow_the_unit_system_of_the_project():
    for kind, example in (
        ("length", "685 ft"),
        ("flow", "685 gpm"),
        ("gauge_pressure", "685 psi gauge"),
        ("diameter", "685 in"),
    ):
        with pytest.raises(UnitError, match=f"write '{example}'"):
            parse_quantity("685", kind, "US")


def test_glossary_units_need_no_unit_library():
    code = (
        "import sys; from calcpack.units import parse_quantity\n"
        "for text, kind in (('9.5 m', 'length'), ('5 %', 'fraction'), ('9 gpm', 'flow')):"
        " parse_quantity(text, kind, 'SI')\n"
        "sys.exit('pint' in sys.modules)"
    )
    assert subprocess.run([sys.executable, "-c", code], cwd=Path(__file__).parent.parent, check=False).returncode == 0
