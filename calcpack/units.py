"""Text of a quantity -> SI float: the only file that knows pint, and only for units that the glossary lacks.

A text such as ``"9.5 m"`` or ``"1000 kPa gauge"`` is matched by strict patterns; nothing in it is evaluated. Units of
the glossary and their other spellings need no pint, whose import takes about a second.
"""

from __future__ import annotations

import difflib
import math
import re
from fractions import Fraction
from functools import cache

from calcpack.errors import UnitError
from calcpack.quantities import KINDS, UNITS, Kind, Unit

MAX_LENGTH = 80  # characters of a quantity text

_SIGN = "-+\u2212"
_SPACES = " \u00a0\u2009\u202f"
_DIGITS = rf"(?:\d{{1,3}}(?:[_{_SPACES}]\d{{3}})+(?:\.\d+)?|\d+\.?\d*|\.\d+)"
_QUANTITY = re.compile(
    rf"(?P<number>[{_SIGN}]?{_DIGITS}(?:[eE][-+]?\d{{1,3}})?)(?![\d,.])[{_SPACES}]*(?P<unit>.*)", re.ASCII
)
_COMMA = re.compile(rf"[{_SIGN}]?\d[\d_{_SPACES}.]*,[\d,.]*(?P<rest>.*)", re.ASCII)
_UNIT_CHARACTERS = re.compile(r"[A-Za-z0-9_ %./*^()°µ·²³⁵\-]{0,40}")
_FACTOR = r"[A-Za-zµ][A-Za-zµ_]*[1-9]?"
_UNUSUAL_UNIT = re.compile(rf"(?:1/)?{_FACTOR}(?: ?[.*/ ] ?{_FACTOR})*")

_PLAIN = str.maketrans(
    {"²": "2", "³": "3", "⁵": "5", "⁶": "6", "⁹": "9", "·": ".", "*": ".", "^": None, "\u00b5": "u", "\u03bc": "u"}
)

# Other spellings of glossary units, plain form -> glossary text.
_ALIASES = {
    "l/s": "L/s", "gpm": "US gpm", "gal/min": "US gpm", "US gal/min": "US gpm",
    "gal": "US gal", "gallon": "US gal", "gal/d": "US gal/d", "gal/day": "US gal/d", "gpd": "US gal/d",
    "cfs": "ft³/s", "m3/hr": "m³/h", "m3/day": "m³/d", "inch": "in", "lbm/ft3": "lb/ft³", "lbf/in2": "psi",
    "degC": "°C", "deg C": "°C", "degF": "°F", "deg F": "°F", "hr": "h", "hour": "h", "hours": "h",
    "day": "d", "days": "d", "sec": "s", "1/min": "rpm", "r/min": "rpm", "rev/min": "rpm",
    "/kWh": "1/kWh", "per kWh": "1/kWh", "percent": "%", "Pa s": "Pa·s", "mPa s": "mPa·s", "1": "",
}  # fmt: skip

# How a glossary unit is typed on a plain keyboard, where the glossary text is not.
_TYPED = {
    "m³/h": "m3/h", "m³/s": "m3/s", "m³/d": "m3/d", "m³": "m3", "m²": "m2", "ft²": "ft2", "ft³": "ft3",
    "m/s²": "m/s2", "ft/s²": "ft/s2", "kg/m³": "kg/m3", "lb/ft³": "lb/ft3", "mPa·s": "mPa.s", "mm²/s": "mm2/s",
    "°C": "degC", "°F": "degF", "1/kWh": "/kWh", "US gpm": "gpm", "US gal": "gal", "US gal/d": "gal/d",
    "kWh/m³": "kWh/m3", "kJ/(kg·K)": "kJ/(kg.K)", "Btu/(lb·°F)": "Btu/(lb.°F)", "s²/m⁵": "s2/m5", "s²/ft⁵": "s2/ft5",
}  # fmt: skip

# Words that name more than one unit, of which the unit library would silently take one: what to write instead.
_AMBIGUOUS = {
    **dict.fromkeys(("bbl", "barrel", "barrels"), "oil_bbl for 42 US gal, or the volume in US gal or m3"),
    **dict.fromkeys(("ton", "tons"), "t for 1000 kg, short_ton for 2000 lb or long_ton for 2240 lb"),
}  # fmt: skip

# SI unit of glossary units that no kind prints.
_SI_OF_OTHERS = {"km": "m", "L/s": "m³/s", "MPa": "Pa"}

_DIMENSION_NAMES = {
    "": "a plain number", "m": "a length", "m²": "an area", "m³": "a volume", "m³/s": "a volume flow",
    "m/s": "a velocity", "m/s²": "an acceleration", "kg/m³": "a density", "Pa·s": "a dynamic viscosity",
    "m²/s": "a kinematic viscosity", "Pa": "a pressure", "W": "a power", "J": "an energy",
    "J/m³": "an energy per volume",
    "1/J": "a price per energy", "s": "a duration", "K": "a temperature", "rad/s": "a rotational speed",
    "J/(kg·K)": "a specific heat", "s²/m⁵": "a quadratic coefficient", "kg": "a mass", "kg/s": "a mass flow",
    "N": "a force", "1/s": "a frequency",
}  # fmt: skip

_PRESSURE_WORDS = {
    "gauge": "gauge_pressure", "g": "gauge_pressure", "abs": "absolute_pressure", "absolute": "absolute_pressure",
    "a": "absolute_pressure",
}  # fmt: skip
_WORD = re.compile(r"(?P<unit>\S+) *(?:\((?P<bracketed>gauge|g|absolute|abs|a)\)| (?P<word>gauge|g|absolute|abs|a))")
_COMPACT = re.compile(r"(?P<unit>psi|bar|kPa|MPa)(?P<word>[ga])")
_ARTICLE = re.compile(r"[aeiou]")


def parse_quantity(text: str, kind: str, system: str) -> tuple[float, str]:
    """``"9.5 m"``, "length" -> (9.5, "9.5"): the SI value and the number as written, without digit groups.

    ``kind`` is a key of KINDS; ``system`` ('SI' or 'US') chooses the unit that a hint proposes. Raises UnitError for
    a text that is not a finite quantity of that kind, with a missing or foreign unit, or where a pressure does not
    say whether it is gauge or absolute.
    """
    wanted = KINDS[kind]
    written = text.strip(_SPACES + "\t\n")
    number, unit = _split(written, wanted, system)
    if wanted.si == "":
        return _plain_number(written, number, unit, wanted), number
    if unit == "":
        raise UnitError(f"'{written}' has no unit", f"write '{_example(number, wanted, system)}'")
    bare, stated = _pressure_word(unit)
    found = _known_unit(bare)
    if found is None:
        factor, offset = _unusual_factor(written, number, bare, wanted, system), 0.0
    elif si_text(found) == wanted.si:
        factor, offset = found.factor, found.offset
    else:
        raise _wrong_dimension(written, _name_of(si_text(found)), number, wanted, system)
    _check_pressure_word(written, number, bare, stated, wanted)
    if kind == "head" and (found is None or found.text not in ("m", "ft")):
        raise UnitError(
            f"'{written}' is not how a head is written",
            f"give it in m or ft, such as '{_example('10', wanted, system)}'",
        )
    if kind == "temperature_difference" and offset:
        raise UnitError(
            f"'{written}' is a temperature, not a difference", f"write '{_example(number, wanted, system)}'"
        )
    _check_finite(written, number)
    si = _si_value(written, number, factor, offset)
    if kind in ("absolute_pressure", "temperature") and si < 0.0:
        raise UnitError(f"'{written}' is below absolute zero")
    return si, number


def typed(unit: str) -> str:
    """A glossary unit as it is typed on a plain keyboard: "m³/h" -> "m3/h"."""
    return _TYPED.get(unit, unit)


def si_text(unit: Unit) -> str:
    """SI unit text that stands for the dimension of a glossary unit."""
    return _si_texts()[unit.text]


def with_article(title: str) -> str:
    """A kind's title with its article: "length" -> "a length"."""
    return f"{'an' if _ARTICLE.match(title) else 'a'} {title}"


def _split(written: str, wanted: Kind, system: str) -> tuple[str, str]:
    example = _example("10", wanted, system)
    if not written:
        raise UnitError("nothing is written here", f"write for example '{example}'")
    if len(written) > MAX_LENGTH:
        raise UnitError(f"'{written[:20]}...' is too long for a quantity", f"write for example '{example}'")
    match = _QUANTITY.fullmatch(written)
    if match:
        number = match["number"].replace("\u2212", "-").replace("_", "")
        number = "".join(number.split())
        return number, " ".join(match["unit"].split())
    comma = _COMMA.fullmatch(written)
    if comma:
        raise UnitError(
            f"'{written}' has a comma in its number",
            "write a decimal point, and group thousands with a space or not at all, such as '1 234.5'",
        )
    raise UnitError(f"'{written}' is not a {'number' if wanted.si == '' else 'number with a unit'}",
                    f"write for example '{example}'")  # fmt: skip


def _check_finite(written: str, number: str) -> None:
    value = float(number)
    if not math.isfinite(value):
        raise UnitError(f"'{written}' is too large to compute with")
    if value == 0.0 and re.search("[1-9]", number.lower().split("e")[0]):
        raise UnitError(f"'{written}' is too small to compute with")


def _si_value(written: str, number: str, factor: float, offset: float) -> float:
    """The float nearest to the exact product, so that 154.05 mm is 0.15405 m to the last bit."""
    try:
        return float(Fraction(number) * _exact(factor) + _exact(offset))
    except OverflowError:
        raise UnitError(f"'{written}' is too large to compute with") from None


@cache
def _exact(factor: float) -> Fraction:
    """The short fraction that a factor stands for (1/3600, 0.3048), else the float itself."""
    short = Fraction(factor).limit_denominator(10**12)
    return short if float(short) == factor else Fraction(factor)


def _plain_number(written: str, number: str, unit: str, wanted: Kind) -> float:
    found = _known_unit(unit)
    if found is None or found.text not in ("", "%"):
        raise UnitError(
            f"'{written}' has a unit", f"{with_article(wanted.title)} is a plain number such as '{number}', or in %"
        )
    _check_finite(written, number)
    return _si_value(written, number, found.factor, 0.0)


def _pressure_word(unit: str) -> tuple[str, str]:
    """ "kPa gauge" -> ("kPa", "gauge_pressure"); the kind is empty where no word stands."""
    match = _WORD.fullmatch(unit) or _COMPACT.fullmatch(unit)
    if match is None:
        return unit, ""
    return match["unit"], _PRESSURE_WORDS[next(word for word in match.groups()[1:] if word)]


def _check_pressure_word(written: str, number: str, bare: str, stated: str, wanted: Kind) -> None:
    if wanted.name in _PRESSURE_WORDS.values():
        if not stated:
            raise UnitError(f"'{written}' does not say gauge or absolute", f"write '{written} {wanted.word}'")
        if stated != wanted.name:
            raise UnitError(
                f"'{written}' is {with_article(KINDS[stated].title)}",
                f"{with_article(wanted.title)} such as '{number} {bare} {wanted.word}' is wanted",
            )
    elif stated:
        raise UnitError(
            f"'{written}' is {with_article(KINDS[stated].title)}",
            f"{with_article(wanted.title)} such as '{number} {bare}' is wanted, without such a word",
        )


def _wrong_dimension(written: str, found: str, number: str, wanted: Kind, system: str) -> UnitError:
    title = with_article(wanted.title)
    return UnitError(f"'{written}' is {found}", f"{title} such as '{_example(number, wanted, system)}' is wanted")


def _unusual_factor(written: str, number: str, unit: str, wanted: Kind, system: str) -> float:
    """Factor to SI of a unit outside the glossary, by pint. Raises UnitError."""
    plain = _spelling(unit)
    for word in re.split(r"[ ./]", plain):
        if word in _AMBIGUOUS:
            raise UnitError(f"'{word}' in '{written}' names more than one unit", f"write {_AMBIGUOUS[word]}")
    if not _UNIT_CHARACTERS.fullmatch(unit) or not _UNUSUAL_UNIT.fullmatch(plain) or wanted.si in ("K", "rad/s", "1/J"):
        raise _unknown_unit(written, unit, number, wanted, system)
    try:
        one = quantity(1.0, re.sub(r"([A-Za-zµ_])([1-9])", r"\1**\2", re.sub(r" ?[. ] ?", "*", plain)))
    except Exception as error:  # pint raises a dozen unrelated kinds for a text that is no unit
        raise _unknown_unit(written, unit, number, wanted, system) from error
    if not one.is_compatible_with(UNITS[wanted.si].pint):
        found = _pint_dimension_names().get(one.dimensionality)
        if found is None:
            raise _unknown_unit(written, unit, number, wanted, system)
        raise _wrong_dimension(written, found, number, wanted, system)
    return float(one.to(UNITS[wanted.si].pint).magnitude)


@cache
def _pint_dimension_names() -> dict:
    pint_texts = {(UNITS[key].pint if key in UNITS else key): name for key, name in _DIMENSION_NAMES.items()}
    named = {}
    for text, name in pint_texts.items():
        named.setdefault(quantity(1.0, text).dimensionality, name)  # the first of equal dimensions names them
    return named


def _unknown_unit(written: str, unit: str, number: str, wanted: Kind, system: str) -> UnitError:
    known = {_spelling(text): typed(text) for text, entry in UNITS.items() if si_text(entry) == wanted.si}
    lower = {spelling.lower(): spelling for spelling in known}
    near = difflib.get_close_matches(_spelling(unit).lower(), lower, n=1, cutoff=0.6)
    word = f" {wanted.word}" if wanted.word else ""
    proposal = f"{number} {known[lower[near[0]]]}{word}" if near else _example(number, wanted, system)
    lead = "did you mean" if near else f"{with_article(wanted.title)} is written for example"
    return UnitError(f"the unit '{unit}' of '{written}' is not known", f"{lead} '{proposal}'{'?' if near else ''}")


def _example(number: str, wanted: Kind, system: str) -> str:
    unit = typed(wanted.display_unit(system).text)
    if wanted.si == "":
        return number if unit != "%" else f"{number} %"
    return " ".join(part for part in (number, unit, wanted.word) if part)


def _spelling(unit: str) -> str:
    """A unit reduced to plain letters: powers as digits, dots for products."""
    return unit.translate(_PLAIN)


@cache
def _spellings() -> dict[str, str]:
    return {_spelling(text): text for text in UNITS} | _ALIASES


def _known_unit(unit: str) -> Unit | None:
    text = _spellings().get(_spelling(unit))
    return UNITS[text] if text is not None else None


def _name_of(si: str) -> str:
    return _DIMENSION_NAMES.get(si, "of another dimension")


@cache
def _si_texts() -> dict[str, str]:
    printed = {text: kind.si for kind in KINDS.values() for text in (*kind.coherent, *kind.display)}
    return {text: _SI_OF_OTHERS.get(text, printed.get(text, text)) for text in UNITS}


@cache
def registry():
    """The pint registry, made at first use; ``gpm`` and ``gal`` are the US ones."""
    import pint

    return pint.UnitRegistry()


def quantity(value: float, unit: str):
    """A pint quantity, for the unusual units here and for dimension checks in tests. ``unit`` in pint's spelling."""
    return registry().Quantity(value, unit)
