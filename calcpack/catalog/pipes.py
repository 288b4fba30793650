"""Pipe sizes by standard: outside diameter and wall as printed. The bore is left to a formula, so that it is traced."""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction

from calcpack.catalog.errors import CatalogError
from calcpack.catalog.table import CatalogValue, Row, Table, load_table

_NUMBER = re.compile(r"(?:(?P<whole>\d+)[ -]+)?(?P<top>\d+)/(?P<bottom>[1-9]\d*)|(?P<decimal>\d+(?:\.\d+)?)")
_SIZE = re.compile(
    r"(?P<word>dn/od|dn|nps|od|d)?\s*(?P<number>\d[\d./ -]*?)\s*(?P<unit>in\.?|inch|\"|mm)?", re.IGNORECASE
)
_NAMED_BY = {"dn": "dn", "nps": "nps", "d": "d", "od": "d", "dn/od": "d", "in": "nps", "in.": "nps", "inch": "nps",
             '"': "nps", "mm": "d"}  # fmt: skip


@dataclass(frozen=True)
class _Standard:
    title: str
    table: str
    size: str  # how a size is printed, from the columns of the row
    size_hint: str
    columns: tuple[str, ...]  # columns that a size may be looked up by
    class_word: str  # printed before the schedule, ratio or type
    class_prefixes: tuple[str, ...]


_SCHEDULE = ("SCHEDULE", "SCH.", "SCH")
_IRON_PIPE = ("DN {dn} (NPS {nps})", 'write for example "DN 150" or "NPS 6"', ("dn", "nps"))
_STANDARDS = {
    "B36.10M": _Standard("ASME B36.10M", "pipe_steel_b36_10", *_IRON_PIPE, "schedule", _SCHEDULE),
    "B36.19M": _Standard("ASME B36.19M", "pipe_stainless_b36_19", *_IRON_PIPE, "schedule", _SCHEDULE),
    "D1785": _Standard("ASTM D1785", "pipe_pvc_d1785", *_IRON_PIPE, "schedule", _SCHEDULE),
    "4427": _Standard(
        "ISO 4427", "pipe_pe_iso4427", "d {d}", 'it is named by its outside diameter: write for example "d 110"',
        ("d",), "SDR", ("SDR",),
    ),
    "B88": _Standard(
        "ASTM B88", "tube_copper_b88", "DN {dn} (nominal {nps} in)", 'write for example "DN 50" or "2 in"',
        ("dn", "nps"), "type", ("TYPE",),
    ),
}  # fmt: skip


@dataclass(frozen=True)
class PipeSize:
    """One catalogued pipe; both values are diameters in m.

    ``dn`` is the nominal diameter without its unit (150 for DN 150); for a standard that names pipe by its outside
    diameter it is that outside diameter in mm.
    """

    outside_diameter: CatalogValue
    wall: CatalogValue
    nominal: str
    dn: int


def standards() -> list[str]:
    """Titles of the standards that have a table."""
    return [standard.title for standard in _STANDARDS.values()]


def pipe(standard: str, size: object, schedule: object) -> PipeSize:
    """Outside diameter and wall of one pipe.

    ``size``: "DN 150", "NPS 1 1/4", "6 in", or "d 63" and "63 mm" where the standard goes by outside diameter.
    ``schedule``: schedule, "SDR 11" or type, as text or number.

    Raises :class:`CatalogError`, naming the neighbours that exist, when there is no such row.
    """
    entry = _standard(standard)
    table = load_table(entry.table)
    wanted_class = _class(entry, schedule)
    column, wanted = _size(entry, size)
    same_size = [row for row in table.rows if _number(row[column]) == wanted]
    if not same_size:
        raise CatalogError(f'{entry.title} has no size "{size}"', _neighbours(entry, table, column, wanted))
    for row in same_size:
        if row["schedule"] == wanted_class:
            return _pipe_size(entry, table, row)
    known = ", ".join(row["schedule"] for row in same_size)
    raise CatalogError(
        f"{entry.title} has no {entry.class_word} {wanted_class} for {entry.size.format(**same_size[0])}",
        f"{entry.class_word} known for this size: {known}",
    )


def candidates(standard: str, schedule: object) -> list[PipeSize]:
    """All sizes of one schedule, ratio or type, in ascending order.

    Raises :class:`CatalogError` when the standard has none.
    """
    entry = _standard(standard)
    table = load_table(entry.table)
    wanted = _class(entry, schedule)
    sizes = [_pipe_size(entry, table, row) for row in table.rows if row["schedule"] == wanted]
    if not sizes:
        known = ", ".join(dict.fromkeys(row["schedule"] for row in table.rows))
        raise CatalogError(f"{entry.title} has no {entry.class_word} {wanted}", f"{entry.class_word} known: {known}")
    return sorted(sizes, key=lambda size: size.outside_diameter.value)


def _standard(name: str) -> _Standard:
    key = "".join(str(name).upper().split())
    for body in ("ASME", "ASTM", "ISO"):
        key = key.removeprefix(body)
    if key not in _STANDARDS:
        raise CatalogError(f'no pipe table for the standard "{name}"', f"known: {', '.join(standards())}")
    return _STANDARDS[key]


def _class(entry: _Standard, schedule: object) -> str:
    number = isinstance(schedule, int | float) and not isinstance(schedule, bool)
    text = f"{schedule:g}" if number else str(schedule).strip().upper()
    for prefix in entry.class_prefixes:
        if text.startswith(prefix):
            return text.removeprefix(prefix).strip()
    return text


def _size(entry: _Standard, size: object) -> tuple[str, Fraction]:
    """Column to look in and number to look for."""
    match = _SIZE.fullmatch(str(size).strip())
    named_by = _NAMED_BY.get((match["word"] or match["unit"] or "").lower()) if match else None
    number = _number(match["number"]) if match else None
    if named_by not in entry.columns or number is None:
        raise CatalogError(f'"{size}" does not name a size of {entry.title}', entry.size_hint)
    return named_by, number


def _number(text: str) -> Fraction | None:
    """ "1 1/4", "1-1/4" or "1.25" -> 5/4; None when the text is something else."""
    match = _NUMBER.fullmatch(text.strip())
    if match is None:
        return None
    if match["decimal"]:
        return Fraction(match["decimal"])
    return int(match["whole"] or 0) + Fraction(int(match["top"]), int(match["bottom"]))


def _neighbours(entry: _Standard, table: Table, column: str, wanted: Fraction) -> str:
    sizes = {_number(row[column]): entry.size.format(**row) for row in table.rows}
    below = max((number for number in sizes if number < wanted), default=None)
    above = min((number for number in sizes if number > wanted), default=None)
    return "next to it: " + ", ".join(sizes[number] for number in (below, above) if number is not None)


def _pipe_size(entry: _Standard, table: Table, row: Row) -> PipeSize:
    nominal = entry.size.format(**row)
    label = f"{nominal}, {entry.class_word} {row['schedule']}"
    return PipeSize(
        outside_diameter=table.value(row, "outside_diameter", "diameter", label),
        wall=table.value(row, "wall", "diameter", label),
        nominal=nominal,
        dn=int(row.get("dn") or row["d"]),
    )
