"""The cover and the contents list."""

from __future__ import annotations

from html import escape

from calcpack.ledger import entry as origin
from calcpack.project.model import Document, SourceDocument
from calcpack.report.anchors import section_anchor, sheet_anchor
from calcpack.report.cells import Desk
from calcpack.report.content import CoverContent, OpenItem, PackageContent
from calcpack.report.symbols import Html
from calcpack.report.typeset import linked
from calcpack.report.verdicts import verdict_html
from calcpack.report.views import (
    ContentsLine,
    ContentsSection,
    ContentsView,
    CountView,
    CoverView,
    FieldView,
    OpenItemView,
    RevisionView,
    SignatureView,
    TitleBlockView,
)
from calcpack.sheets.content import Ref

SHOWN_OPEN_ITEMS = 6


def cover(package: PackageContent, desk: Desk) -> CoverView:
    """The cover: title block after ISO 7200, what is open, who signs, where the seal goes."""
    content, document = package.cover, package.document
    checks = desk.ledger.of_origin(origin.CHECK)
    counts = [(verdict, sum(check.verdict == verdict for check in checks)) for verdict in origin.VERDICTS]
    more = len(content.open_items) - SHOWN_OPEN_ITEMS
    return CoverView(
        project=document.project, title=document.title, fields=_fields(document), status=document.status,
        purpose=content.purpose, preliminary=_preliminary(content),
        verdicts=tuple(CountView(verdict_html(verdict), str(count)) for verdict, count in counts if count),
        open_count=str(len(content.open_items)),
        open_items=tuple(_open_item(desk, item) for item in content.open_items[:SHOWN_OPEN_ITEMS]),
        more_open=_more(desk, content, more) if more > 0 else Html(""),
        revisions=tuple(RevisionView(note.revision, note.date, note.reason) for note in content.revisions),
        signatures=tuple(
            SignatureView(one.role, one.name, one.organisation, one.licence) for one in content.people
        ),
        documents=tuple(_document(one) for one in content.documents), scope=content.scope,
        sealed=content.preliminary is None,
    )


def contents(package: PackageContent, desk: Desk) -> ContentsView:
    """Every sheet with its sections; a sheet left out with the reason."""
    lines = []
    for sheet in package.sheets:
        sections = tuple(
            ContentsSection(desk.numbering.sections[one.id], one.title, f"#{section_anchor(one.id)}")
            for one in sheet.sections
        )
        address = "" if sheet.omitted else f"#{sheet_anchor(sheet.key)}"
        lines.append(ContentsLine(desk.numbering.sheets[sheet.key], sheet.title, address, sheet.omitted, sections))
    return ContentsView(tuple(lines))


def title_block(package: PackageContent) -> TitleBlockView:
    """The running head of every sheet."""
    document = package.document
    return TitleBlockView(
        document.project, document.title, document.number, document.revision, document.date, document.status,
        document.type,
    )


def _fields(document: Document) -> tuple[FieldView, ...]:
    named = (
        ("owner", document.owner), ("document number", document.number), ("document type", document.type),
        ("revision", document.revision), ("date of issue", document.date),
        ("contract", document.contract), ("location", document.location), ("department", document.department),
        ("classification", document.classification), ("language", document.language),
    )
    return tuple(FieldView(name, value) for name, value in named if value)


def _preliminary(content: CoverContent) -> tuple[FieldView, ...]:
    block = content.preliminary
    if block is None:
        return ()
    return (
        FieldView("released for", block.purpose), FieldView("engineer", block.engineer),
        FieldView("licence", block.licence), FieldView("date of release", block.date),
    )


def _open_item(desk: Desk, item: OpenItem) -> OpenItemView:
    place = desk.show(Ref(item.entry, "where")) if item.entry else Html("")
    return OpenItemView(item.id, desk.sentence(item.text), place)


def _more(desk: Desk, content: CoverContent, count: int) -> Html:
    number = desk.numbering.sheets.get(content.register, "")
    place = linked(f"sheet\u00a0{escape(number)}", f"#{sheet_anchor(content.register)}") if number else "the register"
    return Html(f"and {count} more in {place}")


def _document(one: SourceDocument) -> str:
    tail = ", ".join(part for part in (f"rev {one.revision}" if one.revision else "", one.date) if part)
    return f"{one.id} {one.title}" + (f" ({tail})" if tail else "")
