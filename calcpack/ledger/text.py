"""Entries as text: the one formatter that sheets, drawings and the terminal share (ISO 80000-1, SP 811)."""

from __future__ import annotations

import math

from calcpack.digits import format_number
from calcpack.ledger.entry import Entry
from calcpack.quantities import KINDS, Unit

NBSP = "\u00a0"


def unit_of(entry: Entry, system: str) -> Unit:
    """The unit in which ``entry`` is shown in results and tables of ``system``."""
    return KINDS[entry.kind].display_unit(system)


def number_text(entry: Entry, unit: Unit) -> str:
    """The rounded number of ``entry`` in ``unit``, without the unit."""
    if entry.choice and math.isnan(entry.value):
        return entry.choice
    return format_number(unit.from_si(entry.value), entry.digits)


def quantity_text(entry: Entry, unit: Unit, *, word: bool = True) -> str:
    """Number, unit and, where it matters, the word gauge or absolute: ``443.8 kPa gauge``."""
    text = number_text(entry, unit)
    if unit.text and not math.isnan(entry.value):
        text += NBSP + unit.text
    qualifier = KINDS[entry.kind].word
    return f"{text} {qualifier}" if word and qualifier else text


def display_text(entry: Entry, system: str) -> str:
    """``entry`` as a reader meets it in running text: display unit of the system, qualifier included."""
    return quantity_text(entry, unit_of(entry, system))
