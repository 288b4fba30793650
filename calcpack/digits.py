"""Rounding and writing of numbers after ISO 80000-1: one place, used by ledger, tables, plots and terminal."""

from __future__ import annotations

import math
import re

THIN_SPACE = "\u2009"
MINUS = "\u2212"
TIMES = "\u00d7"
DEFAULT_DIGITS = 4
MAX_DIGITS = 9
SUPERSCRIPTS = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


def exponent_of(value: float, digits: int) -> int:
    """Decimal exponent of the leading digit of ``value`` once rounded to ``digits`` significant digits."""
    return int(f"{abs(value):.{max(digits, 1) - 1}e}".split("e")[1]) if value else 0


def round_significant(value: float, digits: int) -> float:
    """``value`` as it is printed with ``digits`` significant digits (a float; 0 and non-finite pass through)."""
    if value == 0 or not math.isfinite(value):
        return value
    return float(f"{value:.{digits - 1}e}")


def last_digit(value: float, digits: int) -> float:
    """The place value of the last printed digit."""
    return 10.0 ** (exponent_of(value, digits) - digits + 1)


def _group(integer: str) -> str:
    if len(integer) <= 4:  # four-digit integers stay together (ISO 80000-1 allows it)
        return integer
    head = len(integer) % 3
    parts = ([integer[:head]] if head else []) + [integer[i : i + 3] for i in range(head, len(integer), 3)]
    return THIN_SPACE.join(parts)


def format_number(value: float, digits: int = DEFAULT_DIGITS) -> str:
    """Text of ``value`` with ``digits`` significant digits, thin-space groups, and a power of ten where needed."""
    if not math.isfinite(value):
        return "no value" if math.isnan(value) else ("∞" if value > 0 else MINUS + "∞")
    if value == 0:
        return "0"
    sign = MINUS if value < 0 else ""
    exponent = exponent_of(value, digits)
    if -4 <= exponent < 7:
        text = f"{abs(round_significant(value, digits)):.{max(digits - 1 - exponent, 0)}f}"
        integer, _, fraction = text.partition(".")
        return sign + _group(integer) + (f".{fraction}" if fraction else "")
    mantissa = f"{abs(value):.{digits - 1}e}".split("e")[0]
    return f"{sign}{mantissa} {TIMES} 10{str(exponent).translate(SUPERSCRIPTS)}".replace(" ", "\u00a0")


def digits_written(text: str) -> int:
    """Significant digits of a number as a person wrote it ('12 000' -> 5, '0.0457' -> 3, '10.60' -> 4, '1e-6' -> 1)."""
    mantissa = re.split("[eE]", text.strip())[0]
    return max(len(re.sub("[^0-9]", "", mantissa).lstrip("0")), 1)
