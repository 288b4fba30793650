"""Registers: every input with its source and status, every assumption, every catalog value, and what is still open."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from calcpack.catalog.sources import source
from calcpack.errors import LedgerError
from calcpack.ledger import Entry
from calcpack.ledger.entry import ASSUMED, LOOKED_UP
from calcpack.project.model import Statement
from calcpack.quantities import KINDS
from calcpack.sheets.content import Block, Cell, Column, Facts, Prose, Ref, Row, Section, Sheet, Table
from calcpack.sheets.job import Job
from calcpack.sheets.line_sizing import CANDIDATE
from calcpack.values import CONFIRMED, UNCONFIRMED, Value

OPEN = "open"
TOOL = "TOOL"
TO_CONFIRM = "edition and clause to be confirmed"
UNUSED = "input/"  # ids of inputs that no sheet used
EVERY = "*"  # in a path: every item of a list
FEWEST = 3  # items that a list needs to be drawn together
_NOTE = f"Marked (to confirm): the text of the source was not seen; {TO_CONFIRM}."

UNCONFIRMED_INPUT = "inputs not confirmed"
PROGRAM_ASSUMPTION = "assumptions made by the program"
PROJECT_ASSUMPTION = "open assumptions of the project"
PROJECT_NOTE = "open notes of the project"
KINDS_OF_ITEM = (UNCONFIRMED_INPUT, PROGRAM_ASSUMPTION, PROJECT_ASSUMPTION, PROJECT_NOTE)

# Kind of a tolerance, where the difference of two values is another kind than the values.
_DIFFERENCE = {
    "temperature": "temperature_difference",
    "gauge_pressure": "pressure_difference",
    "absolute_pressure": "pressure_difference",
}


@dataclass(frozen=True)
class OpenItem:
    """Something that somebody still has to confirm or close. ``id`` is its number (PA3), input path or statement id;
    ``text`` may hold placeholders; ``entry`` is the ledger entry behind it ("" for statements)."""

    kind: str
    id: str
    text: str
    entry: str = ""
    owner: str = ""


def fill(job: Job) -> Sheet:
    """Book the inputs that no sheet used, and lay out the registers. The ledger must be complete."""
    inputs = _book_unused(job)
    sections = (
        _inputs(job, inputs), _assumptions(job), _looked_up(job), _open(job),
    )
    return Sheet("registers", "Inputs and assumptions", sections)


def count(job: Job, entry_id: str, number: int, title: str) -> Entry:
    """Book a count that the program made, so that it can be printed. Raises LedgerError when it has changed since."""
    if entry_id in job.ledger:
        booked = job.ledger[entry_id]
        if booked.value != number:
            raise LedgerError(f"{entry_id}: counted {booked.value:g}, now {number}; something was booked in between")
        return booked
    return job.ledger.looked_up(entry_id, number, "N", title, "count", source=TOOL, locator="counted",
                                digits=len(str(number)))


def plain(words: str) -> str:
    """The user's words in a paragraph: braces would name ledger entries there, so they become parentheses."""
    return words.replace("{", "(").replace("}", ")")


def assumed(job: Job) -> list[tuple[str, Entry]]:
    """Every value that the program supplied, with its number PA1, PA2, ... in booking order.

    P for program: the project numbers its own assumptions as it likes.
    """
    return [(f"PA{number}", entry) for number, entry in enumerate(job.ledger.of_origin(ASSUMED), start=1)]


def open_items(job: Job) -> tuple[OpenItem, ...]:
    """Everything open, by kind in the order of :data:`KINDS_OF_ITEM`. Needs the complete ledger."""
    entries = _book_unused(job)
    items = []
    for path, values in _inputs_by_path(job).items():
        if any(value.status == UNCONFIRMED for value in values):
            first = entries[values[0].path][0]
            items.append(OpenItem(UNCONFIRMED_INPUT, path, _words(first, more=len(values) > 1), first))
    items += [OpenItem(PROGRAM_ASSUMPTION, number, _words(entry.id), entry.id) for number, entry in assumed(job)]
    for kind, statements in ((PROJECT_ASSUMPTION, job.project.assumptions), (PROJECT_NOTE, job.project.notes)):
        items += [OpenItem(kind, one.id, plain(one.text), owner=one.owner) for one in statements if one.status == OPEN]
    return tuple(items)


def open_counts(job: Job) -> dict[str, Entry]:
    """How many open items there are of each kind, as booked counts (kinds without any included)."""
    items = open_items(job)
    return {
        kind: count(job, f"count/{kind.replace(' ', '-')}", sum(item.kind == kind for item in items),
                    f"Number of {kind}")
        for kind in KINDS_OF_ITEM
    }


def _words(entry_id: str, more: bool = False) -> str:
    return f"{{{entry_id}|title}}: {{{entry_id}|quantity}}{' and the rest of the list' if more else ''}"


def _inputs_by_path(job: Job) -> dict[str, list[Value]]:
    """Inputs of the project in file order. A list whose items all state the value alike stands as one, under a path
    with ``*`` for the number of the item."""
    patterns: dict[str, list[Value]] = {}
    for value in job.project.values:
        if value.status in (CONFIRMED, UNCONFIRMED):
            patterns.setdefault(_pattern(value.path), []).append(value)
    found: dict[str, list[Value]] = {}
    for pattern, values in patterns.items():
        if _is_list(pattern, values):
            found[pattern] = values
        else:
            found |= {value.path: [value] for value in values}
    return found


def _pattern(path: str) -> str:
    """``points.3.0`` -> ``points.*.0``, ``profile.2.elevation`` -> ``profile.*.elevation``."""
    parts = path.split(".")
    places = [place for place, part in enumerate(parts) if part.isdigit()]
    for place in places[:-1] if len(places) > 1 and places[-1] == len(parts) - 1 else places:
        parts[place] = EVERY
    return ".".join(parts)


def _is_list(pattern: str, values: list[Value]) -> bool:
    alike = {(value.kind, value.source, value.status) for value in values}
    if pattern.count(EVERY) != 1 or len(values) < FEWEST or len(alike) > 1:
        return False
    place = pattern.split(".").index(EVERY)
    return [value.path.split(".")[place] for value in values] == [str(number) for number in range(len(values))]


def _book_unused(job: Job) -> dict[str, list[str]]:
    """Ids of the entries of every input by its path; an input without any is booked, so that it is printed too."""
    booked: dict[str, list[str]] = {}
    for entry in job.ledger:
        if entry.path:
            booked.setdefault(entry.path, []).append(entry.id)
    for value in job.project.values:
        if value.path not in booked and value.status in (CONFIRMED, UNCONFIRMED):
            note = value.note or "read, used by no sheet"
            booked[value.path] = [job.ledger.given(f"{UNUSED}{value.path}", value, "", value.path, note=note).id]
    return booked


def _inputs(job: Job, entries: dict[str, list[str]]) -> Section:
    columns = (
        Column("Input", width=3.0), Column("As written", width=1.4), Column("As used", width=1.4),
        Column("Tolerance", width=0.9), Column("Source", width=2.2), Column("Status", width=1.1),
        Column("Line", width=0.5), Column("Used in", width=1.5),
    )
    by_file: dict[str, list[Row]] = {}
    for path, values in _inputs_by_path(job).items():
        by_file.setdefault(values[0].file, []).append(_input_row(job, path, values, entries))
    note = f"{EVERY} in a path stands for every item of a list."
    blocks = [Table(f"Inputs of {file}", columns, tuple(rows), note) for file, rows in by_file.items()]
    return Section("register-inputs", "Input register", tuple(blocks) or (Prose("The project states no values."),))


def _input_row(job: Job, path: str, values: list[Value], entries: dict[str, list[str]]) -> Row:
    """One input, or one list: then the numbers as written, one after the other, and the first and last as used."""
    first, ids = values[0], [entries[value.path] for value in values]
    if len(values) > 1:
        used: Cell = (Ref(ids[0][0], "quantity"), "to", Ref(ids[-1][0], "quantity"))
    else:
        used = tuple(part for entry_id in ids[0] for part in (";", Ref(entry_id, "quantity")))[1:]
    if ids[0][0].startswith(UNUSED):
        used = "not used"
    statuses = dict.fromkeys(value.status for value in values)
    return Row((
        path.removeprefix(f"{first.file.partition('.')[0]}."), tuple(Ref(one[0], "written") for one in ids), used,
        _tolerance(job, first), Ref(ids[0][0], "source") if first.source else "none stated", ", ".join(statuses),
        str(first.line), Ref(ids[0][0], "used"),
    ))


def _tolerance(job: Job, value: Value) -> Cell:
    if value.tolerance is None:
        return ""
    entry_id, kind = f"input/{value.path}/tolerance", _DIFFERENCE.get(value.kind, value.kind)
    if entry_id not in job.ledger:
        as_written = Value(value.tolerance, kind, "", value.source, status=value.status, file=value.file,
                           line=value.line)
        entry = job.ledger.given(entry_id, as_written, "u", f"{value.path}: tolerance")
        entry.digits = fewest_digits(job, entry)
    return ("±", Ref(entry_id, "quantity"))


def fewest_digits(job: Job, entry: Entry) -> int:
    """The least number of digits that carries the whole value in the printed unit, four at most."""
    shown = KINDS[entry.kind].display_unit(job.ledger.system).from_si(entry.value)
    return next((digits for digits in range(1, 4) if abs(float(f"{shown:.{digits}g}") - shown) <= 1e-9 * abs(shown)), 4)


def _assumptions(job: Job) -> Section:
    columns = (
        Column("No.", width=0.6), Column("Value supplied by the program", width=2.8), Column("Entry", width=1.6),
        Column("Value", width=1.2), Column("Source", width=1.8), Column("Reason", width=2.8),
        Column("Used in", width=1.4),
    )
    rows = tuple(
        Row((number, Ref(entry.id, "title"), entry.id, Ref(entry.id, "quantity"), _sourced(entry), plain(entry.note),
             Ref(entry.id, "used")))
        for number, entry in assumed(job)
    )
    blocks: list[Block] = [Prose(
        "A value that the project does not state is supplied by the program, never silently: each is an assumption "
        "until the responsible engineer confirms it or states another in the input files."
    )]
    if rows:
        blocks.append(Table("Assumptions made by the program", columns, rows, _NOTE))
    if job.project.assumptions:
        blocks.append(_statements("Assumptions of the project", job.project.assumptions))
    if job.project.notes:
        blocks.append(_statements("Notes of the project", job.project.notes))
    return Section("register-assumptions", "Assumption register", tuple(blocks))


def _statements(caption: str, statements: Sequence[Statement]) -> Table:
    columns = (Column("Id", width=0.8), Column("Statement", width=4.0), Column("Reason", width=3.0),
               Column("Status", width=0.8), Column("Closed by", width=1.4))
    rows = tuple(Row((one.id, one.text, one.reason, one.status, one.owner)) for one in statements)
    return Table(caption, columns, rows)


def _looked_up(job: Job) -> Section:
    columns = (Column("Value", width=2.8), Column("Entry", width=2.2), Column("As used", width=1.2),
               Column("Source and row", width=4.2))
    entries = [entry for entry in job.ledger.of_origin(LOOKED_UP)
               if entry.citation.key != TOOL and CANDIDATE not in entry.id]  # candidate sizes stand in their own table
    rows = tuple(
        Row((Ref(entry.id, "title"), entry.id, Ref(entry.id, "quantity"), _sourced(entry))) for entry in entries
    )
    table = Table("Catalog rows, property values and constants", columns, rows, _NOTE)
    return Section("register-catalog", "Values looked up", (table if rows else Prose("None.", "note"),))


def _sourced(entry: Entry) -> Cell:
    if entry.citation.key and source(entry.citation.key).needs_confirmation:
        return (Ref(entry.id, "source"), "(to confirm)")
    return Ref(entry.id, "source")


def _open(job: Job) -> Section:
    items, counts = open_items(job), open_counts(job)
    blocks: list[Block] = [Facts(tuple((kind[0].upper() + kind[1:], Ref(entry.id)) for kind, entry in counts.items()))]
    inputs = tuple(
        Row((item.id, Ref(item.entry, "title"), Ref(item.entry, "quantity"), Ref(item.entry, "source")))
        for item in items if item.kind == UNCONFIRMED_INPUT
    )
    if inputs:
        columns = (Column("Input", width=3.0), Column("What it is", width=3.4), Column("Value, of a list the first",
                   width=1.6), Column("Source", width=2.4))
        blocks.append(Table("Inputs to be confirmed", columns, inputs))
    if counts[PROGRAM_ASSUMPTION].value > 0:
        blocks.append(Prose("Every assumption made by the program, in the assumption register above, is open."))
    stated = tuple(
        Row((item.id, item.kind, item.text, item.owner or "not named"))
        for item in items if item.kind in (PROJECT_ASSUMPTION, PROJECT_NOTE)
    )
    if stated:
        columns = (Column("Id", width=0.8), Column("Kind", width=2.0), Column("Statement", width=5.0),
                   Column("Closed by", width=1.6))
        blocks.append(Table("Statements to be closed", columns, stated))
    if not items:
        blocks.append(Prose("Nothing is open."))
    return Section("register-open", "Open items", tuple(blocks))
