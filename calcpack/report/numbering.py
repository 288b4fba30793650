"""Numbers of sheets, sections, lines and tables, and the place where each ledger entry stands.

A sheet's number is its position, also when an earlier sheet is left out, so that numbers do not shift. Lines count
through their section (7.3.1), tables and figures are lettered through their sheet (Table 7.B).
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field

from calcpack.errors import RenderError
from calcpack.ledger import Ledger
from calcpack.report.anchors import entry_anchor, section_anchor, sheet_anchor, source_anchor
from calcpack.report.claims import claims
from calcpack.sheets.content import Block, Derivation, Figure, Section, Sheet, Table, Verdicts

REFERENCES = "references"  # key of the sheet whose tables list the sources, key first
FEW = 4  # places listed one by one; more are drawn together by section, then by sheet


@dataclass(frozen=True)
class Home:
    """Where an entry stands: link target, printed number, and the section and sheet that hold it."""

    anchor: str
    label: str
    section: str
    sheet: str


@dataclass
class Numbering:
    """Everything that is numbered in one package.

    ``sheets`` and ``sections`` map keys and ids to numbers; ``labels`` maps (section id, block position) to the label
    of a table or figure; ``homes`` maps entry ids to their homes; ``anchors`` maps (section id, block position, item
    position) to the link target that stands on that line or row; ``sources`` maps each key that the list of references
    has a row for to how it is cited there (R4).
    """

    sheets: dict[str, str] = field(default_factory=dict)
    sections: dict[str, str] = field(default_factory=dict)
    labels: dict[tuple[str, int], str] = field(default_factory=dict)
    homes: dict[str, Home] = field(default_factory=dict)
    anchors: dict[tuple[str, int, int], str] = field(default_factory=dict)
    sources: dict[str, str] = field(default_factory=dict)
    users: dict[str, list[str]] = field(default_factory=dict)

    def address(self, entry_id: str) -> str:
        """Address of the place that made the entry; "" where it has none."""
        home = self.homes.get(entry_id)
        return f"#{home.anchor}" if home else ""

    def used_in(self, entry_id: str) -> list[tuple[str, str]]:
        """(label, address) of every place that uses the entry, drawn together where there are many."""
        homes = [self.homes[user] for user in reversed(self.users.get(entry_id, ())) if user in self.homes]
        places = {home.label: f"#{home.anchor}" for home in homes}
        if len(places) > FEW:
            places = {self.sections[home.section]: f"#{section_anchor(home.section)}" for home in homes}
        if len(places) > FEW:
            places = {f"sheet\u00a0{self.sheets[home.sheet]}": f"#{sheet_anchor(home.sheet)}" for home in homes}
        return sorted(places.items(), key=lambda place: _in_order(place[0]))

    def homeless(self, ledger: Ledger) -> list[str]:
        """Ids of entries that no sheet prints."""
        return [entry.id for entry in ledger if entry.id not in self.homes]


def number(sheets: Sequence[Sheet], ledger: Ledger) -> Numbering:
    """Number the sheets and find the home of every entry.

    The home is the derivation; else the row that gives its source, the first row that shows its number, or the figure
    that is drawn from it. Raises RenderError for a section id or sheet key that occurs twice.
    """
    numbering = Numbering(users=ledger.users())
    claimed: list[tuple[int, tuple[str, int, int], tuple[str, ...], str, str]] = []
    for position, sheet in enumerate(sheets, start=1):
        if sheet.key in numbering.sheets:
            raise RenderError(f"sheet {sheet.key!r} occurs twice")
        numbering.sheets[sheet.key] = str(position)
        tables, figures = _letters(), _letters()
        for place, section in enumerate(sheet.sections, start=1):
            if section.id in numbering.sections:
                raise RenderError(f"section {section.id!r} occurs twice")
            numbering.sections[section.id] = f"{position}.{place}"
            _derivations(numbering, section, sheet.key)
            if sheet.key == REFERENCES:
                _references(numbering, section)
            for index, block in enumerate(section.blocks):
                label = _block_label(block, position, tables, figures)
                numbering.labels[section.id, index] = label
                for claim in claims(block, ledger):
                    key = (section.id, index, claim.item)
                    claimed.append((claim.rank, key, claim.ids, label or f"{position}.{place}", sheet.key))
    for _, key, ids, label, sheet_key in sorted(claimed, key=lambda claim: claim[0]):
        new = [entry_id for entry_id in ids if entry_id not in numbering.homes]
        if new:
            anchor = numbering.anchors.setdefault(key, entry_anchor(new[0]))
            numbering.homes |= {entry_id: Home(anchor, label, key[0], sheet_key) for entry_id in new}
    return numbering


def _references(numbering: Numbering, section: Section) -> None:
    """Link targets of the sources: rows whose first cell is the key and whose second is the number."""
    for index, block in enumerate(section.blocks):
        for item, row in enumerate(block.rows if isinstance(block, Table) else ()):
            key, number = (*row.cells, "")[:2]
            if isinstance(key, str) and isinstance(number, str) and key not in numbering.sources:
                numbering.sources[key] = number
                numbering.anchors[section.id, index, item] = source_anchor(key)


def _derivations(numbering: Numbering, section: Section, sheet: str) -> None:
    count = 0
    for index, block in enumerate(section.blocks):
        if not isinstance(block, Derivation):
            continue
        for item, entry_id in enumerate(block.ids):
            if entry_id not in numbering.homes:
                count += 1
                anchor = entry_anchor(entry_id)
                label = f"{numbering.sections[section.id]}.{count}"
                numbering.homes[entry_id] = Home(anchor, label, section.id, sheet)
                numbering.anchors[section.id, index, item] = anchor


def _block_label(block: Block, sheet: int, tables: Iterator[str], figures: Iterator[str]) -> str:
    match block:
        case Table() | Verdicts():
            return f"Table\u00a0{sheet}.{next(tables)}"
        case Figure():
            return f"Figure\u00a0{sheet}.{next(figures)}"
    return ""


def _letters() -> Iterator[str]:
    """A, B, ..., Z, AA, AB, ..."""
    count = 0
    while True:
        count += 1
        text, rest = "", count
        while rest:
            rest, digit = divmod(rest - 1, 26)
            text = chr(ord("A") + digit) + text
        yield text


def _in_order(label: str) -> tuple[str, tuple]:
    """Sort key: lines before tables before figures, each by number."""
    word, _, digits = label.rpartition("\u00a0")
    parts = digits.split(".")
    return word, tuple((part.isdigit(), int(part) if part.isdigit() else 0, len(part), part) for part in parts)
