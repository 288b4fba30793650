"""What the templates get: one declared, frozen object each. Every text is final; templates place it."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.report.symbols import Html


@dataclass(frozen=True)
class LineView:
    """``left`` ends in the equals sign; a line that fits its column is not broken."""

    left: Html
    right: Html
    fits: bool


@dataclass(frozen=True)
class EntryView:
    """A derived entry. ``spoken`` is the text alternative of its lines."""

    anchor: str
    number: str
    title: Html
    spoken: str
    lines: tuple[LineView, ...]
    cautions: tuple[Html, ...]
    notes: tuple[Html, ...]


@dataclass(frozen=True)
class DerivationView:
    """Entries in print order."""

    entries: tuple[EntryView, ...]


@dataclass(frozen=True)
class ColumnView:
    """A column head of up to three lines: title, symbol with unit, equation number; ``width`` is a class."""

    title: Html
    quantity: Html
    equation: Html
    align: str
    width: str


@dataclass(frozen=True)
class CellView:
    """One cell."""

    html: Html
    align: str


@dataclass(frozen=True)
class RowView:
    """One row; ``mark`` is a word in a frame, ``style`` a class."""

    anchor: str
    cells: tuple[CellView, ...]
    mark: str
    style: str


@dataclass(frozen=True)
class TableView:
    """A table with its label and caption; ``style`` is a class."""

    label: str
    style: str
    caption: Html
    columns: tuple[ColumnView, ...]
    rows: tuple[RowView, ...]
    note: Html


@dataclass(frozen=True)
class ProseView:
    """A paragraph."""

    style: str
    html: Html


@dataclass(frozen=True)
class FactView:
    """A name and its value."""

    anchor: str
    name: str
    html: Html


@dataclass(frozen=True)
class FactsView:
    """A list of facts."""

    rows: tuple[FactView, ...]


@dataclass(frozen=True)
class VerdictView:
    """One criterion. ``notes`` are reasons and warnings under its title."""

    anchor: str
    title: str
    case: str
    value: Html
    limit: Html
    margin: Html
    verdict: Html
    source: Html
    notes: tuple[Html, ...]


@dataclass(frozen=True)
class VerdictsView:
    """A table of criteria; ``style`` is a class."""

    label: str
    style: str
    caption: str
    rows: tuple[VerdictView, ...]


@dataclass(frozen=True)
class FigureView:
    """A drawing; ``address`` is its data address, ``style`` a class."""

    anchor: str
    label: str
    caption: Html
    alt: str
    address: str
    style: str


@dataclass(frozen=True)
class ListingView:
    """Text set as it stands."""

    caption: str
    text: str


@dataclass(frozen=True)
class SectionView:
    """A numbered section; ``blocks`` are set already."""

    anchor: str
    number: str
    title: str
    blocks: tuple[Html, ...]


@dataclass(frozen=True)
class SheetView:
    """A calculation sheet. ``style`` is its key as a class name, so that the style sheet can name it."""

    anchor: str
    number: str
    title: str
    style: str
    sections: tuple[SectionView, ...]


@dataclass(frozen=True)
class FieldView:
    """A labelled field of a title block; an empty value is left blank to be filled in by hand."""

    name: str
    value: str


@dataclass(frozen=True)
class SignatureView:
    """A person who signs."""

    role: str
    name: str
    organisation: str
    licence: str


@dataclass(frozen=True)
class RevisionView:
    """A line of the revision history."""

    revision: str
    date: str
    reason: str


@dataclass(frozen=True)
class OpenItemView:
    """An open item with the place that explains it."""

    id: str
    text: Html
    place: Html


@dataclass(frozen=True)
class CountView:
    """How many of what; ``frame`` is the verdict in its frame."""

    frame: Html
    count: str


@dataclass(frozen=True)
class CoverView:
    """The cover."""

    project: str
    title: str
    fields: tuple[FieldView, ...]
    status: str
    purpose: str
    preliminary: tuple[FieldView, ...]
    verdicts: tuple[CountView, ...]
    open_count: str
    open_items: tuple[OpenItemView, ...]
    more_open: Html
    revisions: tuple[RevisionView, ...]
    signatures: tuple[SignatureView, ...]
    documents: tuple[str, ...]
    scope: tuple[str, ...]
    sealed: bool


@dataclass(frozen=True)
class ContentsSection:
    """A section in the contents list."""

    number: str
    title: str
    address: str


@dataclass(frozen=True)
class ContentsLine:
    """A sheet in the contents list; an omitted sheet has a reason and no address."""

    number: str
    title: str
    address: str
    reason: str
    sections: tuple[ContentsSection, ...]


@dataclass(frozen=True)
class ContentsView:
    """The contents list."""

    sheets: tuple[ContentsLine, ...]


@dataclass(frozen=True)
class TitleBlockView:
    """The running head of every sheet; initials and dates of preparer and checker are left to be filled in."""

    project: str
    title: str
    number: str
    revision: str
    date: str
    status: str
    type: str


@dataclass(frozen=True)
class PackageView:
    """The frame around all sheets. ``style`` is the style sheet; ``date`` the date of issue (ISO 8601)."""

    language: str
    title: str
    keywords: str
    date: str
    program: str
    style: Html
    head: TitleBlockView
    pieces: tuple[Html, ...]
