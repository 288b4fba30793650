"""Calculation record: every ledger entry that no other sheet prints, so that each number has a place on paper."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from calcpack.formulas import FORMULAS
from calcpack.ledger import Entry
from calcpack.ledger.entry import SERIES
from calcpack.sheets.content import (
    Block,
    Cell,
    Column,
    Derivation,
    Facts,
    Prose,
    Ref,
    Row,
    Section,
    Sheet,
    Table,
    Verdicts,
)
from calcpack.sheets.job import Job
from calcpack.sheets.registers import TOOL, count

SHOWS_NUMBER = ("number", "quantity", "choice", "written", "verdict")


def fill(job: Job, sheets: Sequence[Sheet]) -> Sheet:
    """Tabulate what ``sheets`` (all others, filled) leave out. Figures and sentences only mention an entry."""
    elsewhere = printed(sheets)
    examples = _examples(job, sheets)
    curves = [entry for entry in job.ledger.of_origin(SERIES) if entry.id not in elsewhere]
    rest = [entry for entry in job.ledger if entry.origin != SERIES and entry.id not in {*elsewhere, *examples}]
    sections = []
    if curves:
        rows = tuple(_curve(job, entry) for entry in curves)
        columns = (Column("Entry", width=2.2), Column("Curve", width=3.2), Column("Points", "", "count", width=0.8),
                   Column("From", width=1.3), Column("To", width=1.3), Column("Least", width=1.3),
                   Column("Greatest", width=1.3))
        sections.append(Section("record-curves", "Plotted curves", (
            Table("Plotted curves: points, range of the swept quantity, range of the values", columns, rows),
        )))
    if examples:
        sections.append(Section("record-formulas", "Formulas written out on no other sheet", (
            Prose("The first use of each; further uses stand in the tables below or beside their results."),
            Derivation(examples),
        )))
    if rest:
        groups: dict[str, list[Entry]] = {}
        for entry in rest:
            groups.setdefault(_group(entry), []).append(entry)
        tables = (_table(group, entries) for group, entries in groups.items())
        sections.append(Section("record-entries", "Entries printed on no other sheet", (
            Prose("Each line names what made the number and where its operands stand, so that it can be redone."),
            *tables,
        )))
    if not sections:
        return Sheet("record", "Calculation record", omitted="every entry stands on another sheet")
    return Sheet("record", "Calculation record", tuple(sections))


def printed(sheets: Iterable[Sheet]) -> set[str]:
    """Ids of the entries that stand on a sheet with their number: derived, in a table, in a list, or judged."""
    return {entry_id for block in _blocks(sheets) for entry_id in _ids(block)}


def _examples(job: Job, sheets: Iterable[Sheet]) -> tuple[str, ...]:
    """The first entry of every equation that no sheet derives, so that each stands on paper once.

    Margins are declared once for each kind of quantity with the same text: one of them shows it.
    """
    made = {entry.id: FORMULAS[entry.formula].equation.text for entry in job.ledger
            if entry.formula and entry.origin != SERIES}
    derived = {made.get(entry_id) for block in _blocks(sheets) if isinstance(block, Derivation)
               for entry_id in block.ids}
    first: dict[str, str] = {}
    for entry_id, text in made.items():
        if text not in derived:
            first.setdefault(text, entry_id)
    return tuple(first.values())


def _blocks(sheets: Iterable[Sheet]) -> Iterator[Block]:
    return (block for sheet in sheets for section in sheet.sections for block in section.blocks)


def _ids(block: Block) -> Iterator[str]:
    match block:
        case Derivation(ids=ids) | Verdicts(ids=ids):
            yield from ids
        case Table(rows=rows):
            for row in rows:
                for cell in row.cells:
                    yield from _shown(cell)
        case Facts(rows=rows):
            for _, cell in rows:
                yield from _shown(cell)


def _shown(cell: Cell) -> Iterator[str]:
    for part in cell if isinstance(cell, tuple) else (cell,):
        if isinstance(part, Ref) and part.show in SHOWS_NUMBER:
            yield part.id


def _group(entry: Entry) -> str:
    """The tag that an id begins with; criteria count by the word after it."""
    parts = entry.id.split("/")
    return f"check/{parts[1]}" if parts[0] == "check" and len(parts) > 1 else parts[0]


def _table(group: str, entries: list[Entry]) -> Table:
    columns = (Column("Entry", width=2.6), Column("What it is", width=2.8), Column("Value", width=1.4),
               Column("Made by", width=3.6), Column("Source", width=2.2))
    rows = tuple(
        Row((entry.id, Ref(entry.id, "title"), Ref(entry.id, "choice" if entry.choice else "quantity"), _made_by(entry),
             Ref(entry.id, "source")))
        for entry in entries
    )
    return Table(group, columns, rows)


def _made_by(entry: Entry) -> Cell:
    """Formula id, else the origin, and each operand by symbol and place."""
    parts: list[str | Ref] = [entry.formula or entry.origin]
    for operand in entry.operand_ids():
        parts += [";", Ref(operand, "symbol"), Ref(operand, "where")]
    return tuple(parts)


def _curve(job: Job, entry: Entry) -> Row:
    x, y = zip(*entry.points, strict=True)
    ends = [_end(job, entry, name, kind, value) for name, kind, value in (
        ("from", entry.points_kind, min(x)), ("to", entry.points_kind, max(x)), ("least", entry.kind, min(y)),
        ("greatest", entry.kind, max(y)))]
    points = count(job, f"{entry.id}/points", len(entry.points), f"{entry.title}: number of points")
    # A curve has no number to show: its empty view as a choice makes this row the place that other sheets link to.
    name = (Ref(entry.id, "title"), Ref(entry.id, "choice"))
    return Row((entry.id, name, Ref(points.id), *(Ref(end, "quantity") for end in ends)))


def _end(job: Job, entry: Entry, name: str, kind: str, value: float) -> str:
    return job.ledger.looked_up(f"{entry.id}/{name}", value, entry.symbol, f"{entry.title}: {name}", kind, source=TOOL,
                                locator="of the plotted points").id
