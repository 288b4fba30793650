"""References to ledger entries inside tables and sentences, as linked HTML."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from html import escape

from calcpack.errors import RenderError
from calcpack.ledger import Citation, Entry, Ledger
from calcpack.ledger.text import NBSP, number_text, quantity_text, unit_of
from calcpack.quantities import KINDS
from calcpack.report.anchors import source_anchor
from calcpack.report.claims import PLACEHOLDER, parts
from calcpack.report.numbering import Numbering
from calcpack.report.symbols import Html, number_html, symbol_html
from calcpack.report.typeset import linked
from calcpack.report.verdicts import verdict_html
from calcpack.sheets.content import Cell, Column, Ref

NO_SPACE_BEFORE = tuple(",;.:)")


@dataclass(frozen=True)
class Desk:
    """What every block needs at hand: the ledger, the numbers of everything, and the drawings by key."""

    ledger: Ledger
    numbering: Numbering
    figures: dict[str, str]

    def link(self, entry_id: str) -> str:
        """Address of the place that made the entry."""
        return self.numbering.address(entry_id)

    def show(self, ref: Ref, here: str = "") -> Html:
        """A reference as HTML; ``here`` is the anchor of the row it stands on, which needs no link to itself."""
        try:
            view = SHOWS[ref.show]
        except KeyError:
            raise RenderError(f"{ref.id}: {ref.show!r} is no view of an entry; known: {', '.join(SHOWS)}") from None
        html = view(self, self.ledger[ref.id])
        address = self.link(ref.id) if ref.show in LINKED else ""
        return linked(html, "" if address == f"#{here}" else address)

    def cell(self, cell: Cell, column: Column | None = None, here: str = "") -> Html:
        """The contents of a table cell. Raises RenderError for a number whose unit the column head does not name."""
        html = ""
        for part in parts(cell):
            if isinstance(part, str):
                html += ("" if part[:1] in NO_SPACE_BEFORE else " ") + number_html(part)
                continue
            if part.show == "number":
                part = self._with_unit(part, column)
            html += " " + self.show(part, here)
        return Html(html.strip())

    def sentence(self, text: str) -> Html:
        """Words with ``{entry id}`` and ``{entry id|show}`` put in."""
        html, last = "", 0
        for match in PLACEHOLDER.finditer(text):
            html += number_html(text[last : match.start()]) + self.show(Ref(match[1], match[2] or "quantity"))
            last = match.end()
        return Html(html + number_html(text[last:]))

    def plain(self, text: str) -> str:
        """Like :meth:`sentence`, as plain text for a text alternative."""
        return PLACEHOLDER.sub(lambda match: self._plain(self.ledger[match[1]]), text)

    def citation(self, citation: Citation) -> Html:
        """``[R4, place]`` linked to the list of references, or the document that the user named."""
        if not citation.key:
            return number_html(citation.text)
        number = self.numbering.sources.get(citation.key)
        address = f"#{source_anchor(citation.key)}" if number else ""
        locator = f", {number_html(citation.locator)}" if citation.locator else ""
        return Html(f"[{linked(escape(number or citation.key), address)}{locator}]")

    def places(self, entry_id: str) -> Html:
        """Linked list of the places that use an entry."""
        return Html(", ".join(linked(escape(label), address) for label, address in self.numbering.used_in(entry_id)))

    def _plain(self, entry: Entry) -> str:
        return quantity_text(entry, unit_of(entry, self.ledger.system))

    def _with_unit(self, ref: Ref, column: Column | None) -> Ref:
        entry, system = self.ledger[ref.id], self.ledger.system
        unit = unit_of(entry, system)
        if column is None or not column.kind:
            return Ref(ref.id, "quantity")
        head = KINDS[column.kind].display_unit(system)
        if head != unit and not entry.choice:
            raise RenderError(
                f"column {column.title or column.symbol!r} is in {head.text or 'plain numbers'}; "
                f"{ref.id} is in {unit.text or 'plain numbers'}"
            )
        return ref


def unit_in_head(column: Column, system: str) -> str:
    """The unit of a column after its symbol: ``/ (m³/h)`` in SI packages, ``, US gpm`` in US packages."""
    kind = KINDS[column.kind]
    unit = kind.display_unit(system).text
    word = f" {kind.word}" if kind.word else ""
    if not unit:
        return ""
    if system == "US":
        return f", {unit}{word}"
    shown = f"({unit})" if "/" in unit or "·" in unit else unit
    return f"{NBSP}/{NBSP}{shown}{word}"


def _number(desk: Desk, entry: Entry) -> Html:
    return number_html(number_text(entry, unit_of(entry, desk.ledger.system)))


def _quantity(desk: Desk, entry: Entry) -> Html:
    return number_html(quantity_text(entry, unit_of(entry, desk.ledger.system)))


def _equation(desk: Desk, entry: Entry) -> Html:
    return Html(f"{symbol_html(entry.symbol)} = {_quantity(desk, entry)}")


def _where(desk: Desk, entry: Entry) -> Html:
    home = desk.numbering.homes.get(entry.id)
    return Html(escape(home.label) if home else "")


# What a Ref can show of an entry.
SHOWS: dict[str, Callable[[Desk, Entry], Html]] = {
    "number": _number,
    "quantity": _quantity,
    "choice": lambda desk, entry: number_html(entry.choice),
    "source": lambda desk, entry: desk.citation(entry.citation),
    "written": lambda desk, entry: number_html(entry.written),
    "verdict": lambda desk, entry: verdict_html(entry.verdict),
    "title": lambda desk, entry: number_html(entry.title),
    "equation": _equation,
    "symbol": lambda desk, entry: symbol_html(entry.symbol),
    "status": lambda desk, entry: number_html(entry.status),
    "where": _where,
    "used": lambda desk, entry: desk.places(entry.id),
}
LINKED = ("number", "quantity", "equation", "choice", "where")
