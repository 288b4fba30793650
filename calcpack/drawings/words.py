"""Lines of text on a drawing: words and booked numbers, with their width known before they are set."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from calcpack.digits import MINUS
from calcpack.drawings.fonts import CAP_HEIGHT, POINT, text_width
from calcpack.drawings.svg import INK, Svg, span
from calcpack.ledger import Ledger
from calcpack.ledger.text import display_text
from calcpack.quantities import KINDS

TAG_SIZE = 7.0 * POINT
TEXT_SIZE = 6.6 * POINT
ROW = 2.75  # mm from line to line
_SPEAKING_KINDS = ("flow", "daily_flow", "velocity", "gauge_pressure", "absolute_pressure")
_SUBSCRIPT_SHARE = 0.72


@dataclass(frozen=True)
class Words:
    """One line of text. ``symbol`` (with ``subscript``) stands before the text in the maths face."""

    text: str
    symbol: str = ""
    subscript: str = ""
    bold: bool = False

    @property
    def size(self) -> float:
        """Font size in mm."""
        return TAG_SIZE if self.bold else TEXT_SIZE

    @property
    def width(self) -> float:
        """Width in mm."""
        lead = text_width(self.symbol, self.size, "math") + text_width(self.subscript, self.size * _SUBSCRIPT_SHARE)
        return lead + text_width(self.text, self.size, "semibold" if self.bold else "regular")

    def set(self, svg: Svg, x: float, y: float, anchor: str = "start", colour: str = INK) -> None:
        """Set the line with its middle height at ``y``."""
        spans = ""
        if self.symbol:
            spans = span(self.symbol, italic=True)
            rest = span(self.text)
            if self.subscript:
                spans += span(self.subscript, lowered=True, size=self.size)
                rest = rest.replace("<tspan>", f'<tspan dy="{-0.18 * self.size:.3f}">', 1)
            spans += rest
        svg.text(
            x, y + CAP_HEIGHT * self.size / 2, self.text, self.size, anchor=anchor, bold=self.bold, spans=spans,
            colour=colour,
        )  # fmt: skip


def entry_words(ledger: Ledger, entry_id: str, *, magnitude: bool = False) -> Words:
    """A booked number with its unit, led by its symbol unless the unit alone says what it is.

    ``magnitude`` leaves the sign out, for flows whose direction an arrow shows.
    """
    entry = ledger[entry_id]
    text = display_text(entry, ledger.system)
    if magnitude:
        text = text.removeprefix(MINUS)
    if entry.kind in _SPEAKING_KINDS:
        return Words(text)
    symbol, _, subscript = entry.symbol.partition("_")
    return Words(f" = {text}", symbol or KINDS[entry.kind].title, subscript)


def widest(rows: Iterable[Words]) -> float:
    """Width of the widest line; 0 for none."""
    return max((row.width for row in rows), default=0.0)


def wrapped(text: str, width: float) -> list[Words]:
    """``text`` broken at spaces into lines of at most ``width`` mm (a longer word stands alone)."""
    lines: list[str] = []
    for word in text.split():
        if lines and Words(f"{lines[-1]} {word}").width <= width:
            lines[-1] += f" {word}"
        else:
            lines.append(word)
    return [Words(line) for line in lines]


def set_rows(svg: Svg, rows: Iterable[Words], x: float, top: float, anchor: str = "start") -> None:
    """Lines one under another; the first has its upper edge at ``top``."""
    for index, row in enumerate(rows):
        row.set(svg, x, top + ROW * (index + 0.5), anchor)
