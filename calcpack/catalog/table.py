"""Reading a table file: a heading that says where the numbers come from, then comma-separated rows.

Heading lines are ``# name: text``; a text that goes on takes further ``#`` lines without a name::

    # title:  what the table is
    # source: bibliography key, then edition or place; or "by row" when each row names its own key
    # seen:   yes or no, then how the numbers were read
    # keys:   columns that together identify a row
    # units:  column = unit; column = unit
    # note:   what a reader of a number has to know
"""

from __future__ import annotations

import csv
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal, InvalidOperation
from functools import cache
from pathlib import Path
from types import MappingProxyType

from calcpack.catalog.errors import CatalogError
from calcpack.catalog.names import plain, unknown
from calcpack.catalog.sources import source

FOLDER = Path(__file__).parent / "tables"
BY_ROW = "by row"
_HEADING = ("title", "source", "seen", "keys", "units", "note")

# Exact decimal factors to SI, so that 168.3 mm becomes the float nearest to 0.1683 m.
_TO_SI = {
    "1": Decimal(1),
    "mm": Decimal("0.001"),
    "in": Decimal("0.0254"),
    "m": Decimal(1),
    "m/s": Decimal(1),
    "kW": Decimal(1000),
    "hp": 550 * Decimal("0.3048") * Decimal("0.45359237") * Decimal("9.80665"),  # 550 ft lbf/s
    "%": Decimal("0.01"),
}

Row = Mapping[str, str]


@dataclass(frozen=True)
class CatalogValue:
    """One looked-up number: SI value with quantity kind, and the table, row and source key it came from.

    ``seen`` is true when the text of the source itself was read.
    """

    value: float
    kind: str
    table: str
    row: str
    source: str
    seen: bool
    note: str = ""


@dataclass(frozen=True)
class Table:
    """One published table. ``rows`` keep the texts as printed; ``units`` maps a column to its unit."""

    name: str
    title: str
    source: str
    locator: str
    seen: str
    keys: tuple[str, ...]
    units: Mapping[str, str]
    note: str
    rows: tuple[Row, ...]

    def source_of(self, row: Row) -> str:
        """Bibliography key behind ``row``."""
        return row["source"] if self.source == BY_ROW else self.source

    def named_row(self, what: str, name: str) -> Row:
        """The row whose first key is ``name``, in any spelling; ``what`` says in a message what the name stands for.

        Raises :class:`CatalogError` with the nearest names when there is none.
        """
        key = self.keys[0]
        for row in self.rows:
            if row[key] == plain(name):
                return row
        raise unknown(what, name, (row[key] for row in self.rows))

    def value(self, row: Row, column: str, kind: str, label: str) -> CatalogValue:
        """Number of ``column`` in SI with its provenance; ``label`` names the row for a reader.

        Raises :class:`CatalogError` when the cell is empty or not a number.
        """
        key = self.source_of(row)
        return CatalogValue(
            value=self._si(row, column, label),
            kind=kind,
            table=self.name,
            row=label,
            source=key,
            seen=source(key).seen,
            note=row.get("note") or self.note,
        )

    def optional(self, row: Row, column: str, kind: str, label: str) -> CatalogValue | None:
        """As :meth:`value`; None where the cell is empty."""
        return self.value(row, column, kind, label) if row[column] else None

    def _si(self, row: Row, column: str, label: str) -> float:
        try:
            return float(Decimal(row[column]) * _TO_SI[self.units[column]])
        except InvalidOperation:
            raise CatalogError(f'table {self.name}, {label}: {column} is "{row[column]}", not a number') from None


@cache
def load_table(name: str) -> Table:
    """Read ``tables/<name>.csv`` once.

    Raises :class:`CatalogError` when the file, a heading or a cell is missing, or a unit is unknown.
    """
    path = FOLDER / f"{name}.csv"
    if not path.is_file():
        raise CatalogError(f'there is no table "{name}"', f"tables: {', '.join(table_names())}")
    lines = path.read_text(encoding="utf-8").splitlines()
    heading = _heading(name, [line[1:] for line in lines if line.startswith("#")])
    reader = csv.DictReader([line for line in lines if line and not line.startswith("#")], strict=True)
    rows = tuple(MappingProxyType(row) for row in reader)
    for row in rows:
        if None in row or None in row.values():
            raise CatalogError(f"table {name}: a row has not as many cells as the header", str(dict(row)))
    key, _, locator = heading["source"].partition(",")
    units = dict(pair.strip().split(" = ") for pair in heading["units"].split(";"))
    if strange := set(units.values()) - set(_TO_SI):
        raise CatalogError(f"table {name}: unknown unit {sorted(strange)}", f"known: {', '.join(_TO_SI)}")
    return Table(
        name=name,
        title=heading["title"],
        source=key.strip(),
        locator=locator.strip(),
        seen=heading["seen"],
        keys=tuple(part.strip() for part in heading["keys"].split(",")),
        units=MappingProxyType(units),
        note=heading["note"],
        rows=rows,
    )


def table_names() -> list[str]:
    """Names of all tables, in alphabetical order."""
    return sorted(path.stem for path in FOLDER.glob("*.csv"))


def _heading(name: str, lines: list[str]) -> dict[str, str]:
    heading: dict[str, str] = {}
    current = ""
    for line in lines:
        word, colon, text = line.strip().partition(":")
        if colon and word in _HEADING:
            current = word
            heading[current] = text.strip()
        else:
            heading[current] = f"{heading.get(current, '')} {line.strip()}".strip()
    if missing := [word for word in _HEADING if not heading.get(word)]:
        raise CatalogError(f"table {name}: heading lacks {', '.join(missing)}")
    return heading
