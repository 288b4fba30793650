"""Which rows of a sheet show the number of which ledger entry, and how good a home they are for it."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from calcpack.ledger import Ledger
from calcpack.sheets.content import Block, Cell, Facts, Figure, Ref, Table, Verdicts

PLACEHOLDER = re.compile(r"\{([^{}|]+)(?:\|([^{}|]+))?\}")
SHOWS_NUMBER = ("number", "quantity", "equation", "choice", "written", "verdict")
SHOWS_ORIGIN = ("written", "source")

# Ranks, best first.
REGISTER, ROW, ASIDE = range(3)


@dataclass(frozen=True)
class Claim:
    """Item (row, line, or 0 for a figure) of a block that could be the home of ``ids``."""

    rank: int
    item: int
    ids: tuple[str, ...]


def claims(block: Block, ledger: Ledger) -> Iterator[Claim]:
    """Every claim of a block: rows that give number and origin, rows that show the number, verdict operands and
    figures."""
    match block:
        case Table(rows=rows):
            for item, row in enumerate(rows):
                yield from _row_claims(item, row.cells)
        case Facts(rows=rows):
            for item, (_, cell) in enumerate(rows):
                yield from _row_claims(item, (cell,))
        case Verdicts(ids=ids):
            for item, entry_id in enumerate(ids):
                yield Claim(ROW, item, (entry_id,))
                yield Claim(ASIDE, item, ledger[entry_id].operand_ids())
        case Figure(caption=caption, alt=alt):
            yield Claim(ASIDE, 0, tuple(match[1] for match in PLACEHOLDER.finditer(f"{caption} {alt}")))


def parts(cell: Cell) -> tuple[str | Ref, ...]:
    """A cell as the texts and references that are set one after the other."""
    return cell if isinstance(cell, tuple) else (cell,)


def _row_claims(item: int, cells: tuple[Cell, ...]) -> Iterator[Claim]:
    refs = [part for cell in cells for part in parts(cell) if isinstance(part, Ref)]
    shown = tuple(ref.id for ref in refs if ref.show in SHOWS_NUMBER)
    with_origin = {ref.id for ref in refs if ref.show in SHOWS_ORIGIN}
    yield Claim(REGISTER, item, tuple(entry_id for entry_id in shown if entry_id in with_origin))
    yield Claim(ROW, item, shown)
