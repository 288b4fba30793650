"""Sheets -> HTML: every template gets one declared object and places it; all texts are made before.

Each sheet is rendered on its own to a piece whose link targets are unique in the package, so that pieces can be
rendered apart. A template ``sheets/<key>.html`` replaces ``sheet.html`` for the sheet of that key.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import astuple
from functools import cache
from html import escape, unescape

import jinja2

from calcpack.errors import RenderError
from calcpack.ledger import Ledger
from calcpack.report import blocks, views
from calcpack.report.anchors import section_anchor, sheet_anchor
from calcpack.report.cells import Desk
from calcpack.report.content import PackageContent
from calcpack.report.cover import contents, cover, title_block
from calcpack.report.fonts import TEMPLATES, missing_characters
from calcpack.report.numbering import number
from calcpack.report.style import style_sheet
from calcpack.report.symbols import Html
from calcpack.sheets.content import Block, Derivation, Facts, Figure, Listing, Prose, Section, Sheet, Table, Verdicts

# Template -> (name it knows its object by, class of the object).
CONTEXTS: dict[str, tuple[str, type]] = {
    "package.html": ("package", views.PackageView),
    "cover.html": ("cover", views.CoverView),
    "contents.html": ("contents", views.ContentsView),
    "sheet.html": ("sheet", views.SheetView),
    "parts/derivation.html": ("derivation", views.DerivationView),
    "parts/table.html": ("table", views.TableView),
    "parts/prose.html": ("prose", views.ProseView),
    "parts/facts.html": ("facts", views.FactsView),
    "parts/verdicts.html": ("verdicts", views.VerdictsView),
    "parts/figure.html": ("figure", views.FigureView),
    "parts/listing.html": ("listing", views.ListingView),
}
_TAG = re.compile(r"<[^>]*>")


@cache
def environment() -> jinja2.Environment:
    """The templates: everything is escaped that is not markup, an unknown name is an error."""
    return jinja2.Environment(
        loader=jinja2.FileSystemLoader(TEMPLATES), autoescape=True, undefined=jinja2.StrictUndefined,
        trim_blocks=True, lstrip_blocks=True,
    )


def render_html(package: PackageContent, ledger: Ledger, figures: dict[str, str]) -> str:
    """The package as one HTML document. Raises RenderError for what cannot be set, naming it and its place."""
    desk = Desk(ledger, number(package.sheets, ledger), figures)
    pieces = [("the cover", _fill(cover(package, desk)))]
    pieces.append(("the contents list", _fill(contents(package, desk))))
    for sheet in package.sheets:
        if not sheet.omitted:
            pieces.append((f"sheet {desk.numbering.sheets[sheet.key]} {sheet.title}", render_sheet(sheet, desk)))
    document = package.document
    head = title_block(package)
    margins = escape(" ".join((*astuple(head), package.program, package.fingerprint)))
    drawings = [(f"drawing {key}", svg) for key, svg in figures.items()]
    _require_glyphs([*pieces, ("the head and foot of every sheet", margins), *drawings])
    return _fill(
        views.PackageView(
            language=document.language, title=f"{document.number} {document.title}", date=document.date,
            keywords=", ".join(filter(None, (document.project, document.type, document.number, document.status))),
            program=package.program, style=style_sheet(package), head=head,
            pieces=tuple(Html(html) for _, html in pieces),
        ),
    )


def render_sheet(sheet: Sheet, desk: Desk) -> Html:
    """One sheet as a piece of HTML that stands alone apart from its links."""
    view = views.SheetView(
        sheet_anchor(sheet.key), desk.numbering.sheets[sheet.key], sheet.title, f"of-{sheet.key.replace('_', '-')}",
        tuple(_section(section, desk) for section in sheet.sections),
    )
    return _fill(view, f"sheets/{sheet.key}.html")


def _section(section: Section, desk: Desk) -> views.SectionView:
    set_blocks = tuple(_block(block, desk, (section.id, index)) for index, block in enumerate(section.blocks))
    return views.SectionView(
        section_anchor(section.id), desk.numbering.sections[section.id], section.title, set_blocks
    )


def _block(block: Block, desk: Desk, key: tuple[str, int]) -> Html:
    match block:
        case Derivation():
            return _fill(blocks.derivation(desk, block, key))
        case Table():
            return _fill(blocks.table(desk, block, key))
        case Facts():
            return _fill(blocks.facts(desk, block, key))
        case Verdicts():
            return _fill(blocks.verdicts(desk, block, key))
        case Figure():
            return _fill(blocks.figure(desk, block, key))
        case Prose(text=text, style=style):
            return _fill(views.ProseView(style, desk.sentence(text)))
        case Listing(caption=caption, text=text):
            return _fill(views.ListingView(caption, text))
    raise RenderError(f"{type(block).__name__} is no block of a sheet")


def _fill(view: object, *preferred: str) -> Html:
    """The first of the ``preferred`` templates that exists, else the one declared for the view, filled with it."""
    declared, name = next((path, name) for path, (name, of_class) in CONTEXTS.items() if type(view) is of_class)
    return Html(environment().select_template([*preferred, declared]).render({name: view}))


def _require_glyphs(pieces: Iterable[tuple[str, str]]) -> None:
    """Raise RenderError for characters that no bundled font draws, with where they stand."""
    problems = []
    for place, html in pieces:
        text = unescape(_TAG.sub(" ", html))
        for char in missing_characters(text):
            at = text.index(char)
            around = " ".join(text[max(at - 20, 0) : at + 21].split())
            problems.append(f"{place}: no bundled font has {char!r} (U+{ord(char):04X}), in “{around}”")
    if problems:
        raise RenderError("\n".join(problems))
