"""A project while it is resolved: its inputs, the raw text behind them, and where problems go."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calcpack.catalog.errors import CatalogError
from calcpack.catalog.table import CatalogValue, load_table
from calcpack.project.problems import Problems
from calcpack.project.read import Items, Raw, Section
from calcpack.project.schema import Inputs
from calcpack.quantities import KINDS, UNITS
from calcpack.values import LOOKED_UP, SUPPLIED, Value

Keys = tuple[str | int, ...]  # file stem, then keys and list positions
_PLAIN = {"1": ""}  # units of the tables that the glossary writes otherwise


@dataclass
class Draft:
    """``data`` is the raw input by file stem, ``inputs`` what the schema made of it; either may lack broken parts."""

    data: Mapping[str, Section | None]
    inputs: Inputs
    units: str
    problems: Problems

    def at(self, keys: Keys) -> Raw:
        """The piece of input at ``keys``, or the innermost one around it that exists."""
        raw: Raw = self.data[str(keys[0])]
        for key in keys[1:]:
            if (isinstance(raw, Section) and key in raw) or (isinstance(raw, Items) and isinstance(key, int)):
                raw = raw[key]
            else:
                break
        return raw

    def wrong(self, keys: Keys, text: str, hint: str = "") -> None:
        """Report a problem at a piece of input."""
        self.problems.add(self.at(keys), text, hint)

    def refused(self, keys: Keys, error: CatalogError) -> None:
        """Report a look-up that has no answer."""
        self.wrong(keys, error.message, error.hint)

    def place(self, keys: Keys) -> str:
        """``file:line`` of a piece of input."""
        raw = self.at(keys)
        return f"{raw.file}:{raw.line}"

    def value(
        self,
        keys: Keys,
        si: float,
        kind: str,
        text: str,
        status: str,
        source: str,
        *,
        locator: str = "",
        note: str = "",
    ) -> Value:
        """A Value that stands for ``keys`` without being written there."""
        raw = self.at(keys)
        path = ".".join(str(key) for key in keys)
        return Value(si, kind, text, source, locator, status, note=note, path=path, file=raw.file, line=raw.line)

    def supplied(
        self, keys: Keys, si: float, kind: str, text: str, source: str, note: str, *, locator: str = ""
    ) -> Value:
        """A value that nobody stated and the program supplies: an assumption."""
        return self.value(keys, si, kind, text, SUPPLIED, source, locator=locator, note=note)

    def row(self, keys: Keys, found: CatalogValue, column: str, *, status: str = LOOKED_UP, note: str = "") -> Value:
        """A number of a table, written with the unit of the table; ``status`` may make it an assumption."""
        unit = load_table(found.table).units[column]
        text = " ".join(part for part in (f"{_in(found.value, unit):.12g}", _PLAIN.get(unit, unit)) if part)
        remark = "; ".join(part for part in (note, found.note) if part)
        locator = f"table {found.table}: {found.row}"
        return self.value(keys, found.value, found.kind, text, status, found.source, locator=locator, note=remark)

    def property(self, keys: Keys, found: CatalogValue) -> Value:
        """A computed property, written to five figures in the display unit of the project."""
        kind = KINDS[found.kind]
        unit = kind.display_unit(self.units)
        number = f"{unit.from_si(found.value):#.5g}".rstrip(".")
        text = " ".join(part for part in (number, unit.text, kind.word) if part)
        return self.value(
            keys, found.value, found.kind, text, LOOKED_UP, found.source, locator=found.row, note=found.note
        )


def _in(si: float, unit: str) -> float:
    return UNITS[_PLAIN.get(unit, unit)].from_si(si)
