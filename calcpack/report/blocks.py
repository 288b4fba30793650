"""Blocks of a sheet -> the views that the templates place."""

from __future__ import annotations

from base64 import b64encode
from html import escape

from calcpack.errors import RenderError
from calcpack.formulas import FORMULAS
from calcpack.ledger import Entry
from calcpack.ledger.text import display_text
from calcpack.report.anchors import entry_anchor
from calcpack.report.cells import Desk, unit_in_head
from calcpack.report.derivation import lines
from calcpack.report.linear import linear
from calcpack.report.margin import cautions, notes
from calcpack.report.symbols import Html, number_html, symbol_html, symbol_text
from calcpack.report.typeset import linked
from calcpack.report.verdicts import verdict_html
from calcpack.report.views import (
    CellView,
    ColumnView,
    DerivationView,
    EntryView,
    FactsView,
    FactView,
    FigureView,
    RowView,
    TableView,
    VerdictsView,
    VerdictView,
)
from calcpack.sheets.content import Column, Derivation, Facts, Figure, Ref, Row, Table, Verdicts

NO_VALUE = "–"
KEPT_WHOLE = 10  # rows up to which a table stays on one page


def derivation(desk: Desk, block: Derivation, key: tuple[str, int]) -> DerivationView:
    """Entries in full. An entry that is derived elsewhere already keeps its first number and carries no target."""
    entries = []
    for item, entry_id in enumerate(block.ids):
        entry = desk.ledger[entry_id]
        anchor = desk.numbering.anchors.get((*key, item), "")
        title = number_html(entry.title)
        if entry.case:
            title = Html(f'{title}<span class="n">case {escape(entry.case)}</span>')
        entries.append(
            EntryView(
                anchor if anchor == entry_anchor(entry_id) else "",
                desk.numbering.homes[entry_id].label, title, _spoken(desk, entry),
                lines(entry, desk.ledger, desk.link, boxed=entry_id in block.governing),
                cautions(desk, entry), notes(desk, entry),
            )
        )
    return DerivationView(tuple(entries))


def table(desk: Desk, block: Table, key: tuple[str, int]) -> TableView:
    """A table. Raises RenderError for a row that has more or fewer cells than the table has columns."""
    columns = tuple(
        _column(desk, column, width, desk.numbering.labels[key])
        for column, width in zip(block.columns, _widths([column.width for column in block.columns]), strict=True)
    )
    rows = []
    for item, row in enumerate(block.rows):
        if len(row.cells) != len(block.columns):
            raise RenderError(
                f"table {block.caption!r}, row {item + 1}: {len(row.cells)} cells for {len(block.columns)} columns"
            )
        anchor = desk.numbering.anchors.get((*key, item), "")
        rows.append(_row(desk, block.columns, row, anchor))
    return TableView(
        desk.numbering.labels[key], _whole(rows), desk.sentence(block.caption), columns, tuple(rows),
        desk.sentence(block.note),
    )


def facts(desk: Desk, block: Facts, key: tuple[str, int]) -> FactsView:
    """A list of names and values."""
    rows = []
    for item, (name, cell) in enumerate(block.rows):
        anchor = desk.numbering.anchors.get((*key, item), "")
        rows.append(FactView(anchor, number_html(name), desk.cell(cell, here=anchor)))
    return FactsView(tuple(rows))


def verdicts(desk: Desk, block: Verdicts, key: tuple[str, int]) -> VerdictsView:
    """A table of criteria."""
    rows = []
    for item, entry_id in enumerate(block.ids):
        anchor = desk.numbering.anchors.get((*key, item), "")
        rows.append(_verdict(desk, desk.ledger[entry_id], anchor))
    return VerdictsView(desk.numbering.labels[key], _whole(rows), block.caption, tuple(rows))


def figure(desk: Desk, block: Figure, key: tuple[str, int]) -> FigureView:
    """A drawing as an image with its text alternative. Raises RenderError for a drawing that was not handed over."""
    try:
        svg = desk.figures[block.key]
    except KeyError:
        raise RenderError(f"no drawing {block.key!r} was handed over") from None
    style = "plate" if block.full_page and key[1] else ""  # behind its heading it has the page to itself already
    return FigureView(
        desk.numbering.anchors.get((*key, 0), ""), desk.numbering.labels[key], desk.sentence(block.caption),
        desk.plain(block.alt), f"data:image/svg+xml;base64,{b64encode(svg.encode()).decode()}", style,
    )


def _spoken(desk: Desk, entry: Entry) -> str:
    equation = f"{linear(FORMULAS[entry.formula])}; " if entry.formula else ""
    result = entry.choice or entry.verdict or display_text(entry, desk.ledger.system)
    return f"{equation}{symbol_text(entry.symbol)} = {result}" if entry.symbol else result


def _column(desk: Desk, column: Column, width: str, label: str) -> ColumnView:
    quantity = ""
    if column.symbol or column.kind:
        unit = unit_in_head(column, desk.ledger.system) if column.kind else ""
        quantity = symbol_html(column.symbol) + number_html(unit if column.symbol else unit.lstrip("\u00a0 ,/"))
    equation, home = "", desk.numbering.homes.get(column.derived)
    if home and home.label != label:  # a column does not refer to its own table
        equation = linked(escape(home.label), desk.link(column.derived))
    return ColumnView(
        number_html(column.title), Html(quantity), Html(equation), "num" if column.kind else "txt", width
    )


def _row(desk: Desk, columns: tuple[Column, ...], row: Row, anchor: str) -> RowView:
    cells = tuple(
        CellView(desk.cell(cell, column, anchor), "num" if column.kind else "txt")
        for cell, column in zip(row.cells, columns, strict=True)
    )
    return RowView(anchor, cells, row.mark, "total" if row.total else "")


def _verdict(desk: Desk, entry: Entry, anchor: str) -> VerdictView:
    value = limit = margin = Html(NO_VALUE)
    if entry.operands:
        value, limit, margin = (
            desk.show(Ref(str(entry.operands[name]), "quantity"), anchor) for name in ("value", "limit", "margin")
        )
        value = Html(f"{symbol_html(entry.symbol)} = {value}" if entry.symbol else value)
        limit = Html(f"{escape(entry.comparison)} {limit}")
    reasons = tuple(desk.sentence(text) for text in (entry.note, entry.warning) if text)
    return VerdictView(
        anchor, entry.title, entry.case, value, limit, margin, verdict_html(entry.verdict),
        desk.citation(entry.citation), reasons,
    )


def _whole(rows: list) -> str:
    return "whole" if len(rows) <= KEPT_WHOLE else ""


def _widths(shares: list[float]) -> list[str]:
    """Classes of column widths in whole per cent that add up to a hundred."""
    total = sum(shares)
    exact = [100 * share / total for share in shares]
    whole = [int(width) for width in exact]
    by_rest = sorted(range(len(shares)), key=lambda index: whole[index] - exact[index])
    for index in by_rest[: 100 - sum(whole)]:
        whole[index] += 1
    return [f"c{width}" for width in whole]
