"""What a sheet consists of: blocks that name ledger entries. No numbers live here, only entry ids and words."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Ref:
    """The value of an entry in a table cell or sentence. ``show`` is 'number' (unit stands in the column head),
    'quantity' (number and unit), 'choice', 'source', 'written', 'verdict' or 'title'."""

    id: str
    show: str = "number"


Cell = str | Ref | tuple[str | Ref, ...]  # a tuple is set one after the other


@dataclass(frozen=True)
class Column:
    """``kind`` (quantity kind) prints the unit in the head as 'symbol / unit'; ``derived`` is the id of an entry
    whose equation number heads the column. Text columns have no kind. ``width`` is a share of the table."""

    title: str
    symbol: str = ""
    kind: str = ""
    derived: str = ""
    width: float = 1.0


@dataclass(frozen=True)
class Row:
    """One line of a table; ``mark`` is a short word set in a box beside the first cell (for example 'governs')."""

    cells: tuple[Cell, ...]
    mark: str = ""
    total: bool = False


@dataclass(frozen=True)
class Table:
    """A table block. Every cell of a quantity column is a Ref or words."""

    caption: str
    columns: tuple[Column, ...]
    rows: tuple[Row, ...]
    note: str = ""


@dataclass(frozen=True)
class Derivation:
    """Entries printed in full, in order: name, formula, substituted line, result, source, range, where used.
    ``governing`` ids get the result box."""

    ids: tuple[str, ...]
    governing: tuple[str, ...] = ()


@dataclass(frozen=True)
class Prose:
    """A paragraph. ``{entry id}`` stands for the linked quantity of that entry, ``{entry id|show}`` for another view
    (see Ref). ``style`` '' or 'note' or 'caution'."""

    text: str
    style: str = ""


@dataclass(frozen=True)
class Facts:
    """A two-column list of name and value (Ref or words)."""

    rows: tuple[tuple[str, Cell], ...]


@dataclass(frozen=True)
class Verdicts:
    """Check entries as rows: criterion, governing case, value, limit, margin, verdict, source."""

    ids: tuple[str, ...]
    caption: str = ""


@dataclass(frozen=True)
class Figure:
    """A drawing that ``build`` hands over as SVG under ``key``; ``alt`` is its text alternative, made from data
    (``{entry id}`` allowed)."""

    key: str
    caption: str
    alt: str
    full_page: bool = False


@dataclass(frozen=True)
class Listing:
    """Long text set as it stands in a monospaced block: input files, hashes."""

    caption: str
    text: str


Block = Table | Derivation | Prose | Facts | Verdicts | Figure | Listing


@dataclass(frozen=True)
class Section:
    """A numbered section of a sheet. ``id`` is stable (for links and cross references), unique in the package."""

    id: str
    title: str
    blocks: tuple[Block, ...]


@dataclass(frozen=True)
class Sheet:
    """One calculation sheet: ``key`` is the word shared by module, template and cross references.

    ``omitted`` says why a sheet has nothing to print; it then appears in the contents list only.
    """

    key: str
    title: str
    sections: tuple[Section, ...] = ()
    omitted: str = ""
