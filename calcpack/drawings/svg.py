"""A small SVG writer: millimetres in, text stays text, equal calls give equal bytes."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from xml.sax.saxutils import escape, quoteattr

from calcpack.drawings.fonts import FAMILIES, MATH, SYMBOLS

Point = tuple[float, float]

INK = "#000000"
BLUE = "#0b3d6b"  # the one accent; as dark as ink on a copy
GREY = "#555555"
PALE = "#d4d4d4"
PAPER = "#ffffff"

THICK = 0.5  # mm, the process line
THIN = 0.25  # mm, everything else (2:1)
HAIR = 0.12  # mm, grid and leaders
DASHES = "1.4 0.9"
DOTS = "0.3 0.7"


def number(value: float) -> str:
    """A coordinate with at most three decimals, without trailing zeros."""
    text = f"{value:.3f}".rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def span(text: str, *, italic: bool = False, lowered: bool = False, size: float = 0.0) -> str:
    """A piece of a text line: ``italic`` for quantity symbols (set in the maths face), ``lowered`` for a subscript of
    a line of ``size``."""
    attributes = ""
    if italic:
        attributes += f' font-family="{MATH}, {SYMBOLS}, serif" font-style="italic"'
    if lowered:
        attributes += f' font-size="{number(0.72 * size)}" dy="{number(0.18 * size)}"'
    return f"<tspan{attributes}>{escape(text)}</tspan>"


class Svg:
    """One drawing in the making. Coordinates in mm, y downwards."""

    def __init__(self) -> None:
        self._parts: list[str] = []
        self._depth = 1

    def _add(self, text: str) -> None:
        self._parts.append(" " * self._depth + text)

    @contextmanager
    def group(self, kind: str, tag: str) -> Iterator[None]:
        """Everything drawn inside belongs to ``tag`` (an item of the model or a part of the sheet)."""
        self._add(f"<g class={quoteattr(kind)} data-tag={quoteattr(tag)}>")
        self._depth += 1
        yield
        self._depth -= 1
        self._add("</g>")

    @contextmanager
    def turned(self, x: float, y: float, degrees: float) -> Iterator[None]:
        """Everything drawn inside is turned clockwise about (x, y)."""
        self._add(f'<g transform="rotate({number(degrees)} {number(x)} {number(y)})">')
        self._depth += 1
        yield
        self._depth -= 1
        self._add("</g>")

    def path(
        self, commands: str, *, width: float = THIN, dash: str = "", colour: str = INK, fill: str = "none"
    ) -> None:
        """A path of SVG ``commands``; width 0 draws no outline."""
        stroke = f' stroke="{colour}" stroke-width="{number(width)}"' if width else ""
        dashes = f' stroke-dasharray="{dash}"' if dash else ""
        self._add(f'<path d="{commands}" fill="{fill}"{stroke}{dashes}/>')

    def polyline(self, points: Sequence[Point], *, close: bool = False, **style) -> None:
        """Straight segments through ``points``; style as for :meth:`path`."""
        commands = "M" + "L".join(f"{number(x)} {number(y)}" for x, y in points) + ("Z" if close else "")
        self.path(commands, **style)

    def line(self, x1: float, y1: float, x2: float, y2: float, **style) -> None:
        """One straight segment."""
        self.polyline(((x1, y1), (x2, y2)), **style)

    def rect(self, x: float, y: float, width: float, height: float, *, pen: float = THIN, radius: float = 0.0,
             fill: str = PAPER, dash: str = "", colour: str = INK) -> None:
        """A rectangle by its upper left corner; ``pen`` is the outline's width."""
        stroke = f' stroke="{colour}" stroke-width="{number(pen)}"' if pen else ""
        round_ = f' rx="{number(radius)}"' if radius else ""
        dashes = f' stroke-dasharray="{dash}"' if dash else ""
        self._add(
            f'<rect x="{number(x)}" y="{number(y)}" width="{number(width)}" height="{number(height)}"{round_}'
            f' fill="{fill}"{stroke}{dashes}/>'
        )

    def circle(
        self, x: float, y: float, radius: float, *, pen: float = THIN, fill: str = PAPER, dash: str = ""
    ) -> None:
        """A circle about (x, y)."""
        dashes = f' stroke-dasharray="{dash}"' if dash else ""
        stroke = f' stroke="{INK}" stroke-width="{number(pen)}"' if pen else ""
        self._add(f'<circle cx="{number(x)}" cy="{number(y)}" r="{number(radius)}" fill="{fill}"{stroke}{dashes}/>')

    def text(self, x: float, y: float, text: str, size: float, *, anchor: str = "start", bold: bool = False,
             spans: str = "", colour: str = INK, turned: bool = False) -> None:
        """A line of text on the baseline at (x, y). ``spans`` (from :func:`span`) replaces the plain ``text``;
        ``turned`` reads upwards."""
        weight = ' font-weight="600"' if bold else ""
        turn = f' transform="rotate(-90 {number(x)} {number(y)})"' if turned else ""
        fill = f' fill="{colour}"' if colour != INK else ""
        place = f'x="{number(x)}" y="{number(y)}" font-size="{number(size)}" text-anchor="{anchor}"'
        self._add(f"<text {place}{weight}{fill}{turn}>{spans or escape(text)}</text>")

    def document(self, x: float, y: float, width: float, height: float) -> str:
        """The whole drawing, showing the rectangle at (x, y) at its true size."""
        families = ", ".join(FAMILIES)
        head = (
            f'<svg xmlns="http://www.w3.org/2000/svg" width="{number(width)}mm" height="{number(height)}mm"'
            f' viewBox="{number(x)} {number(y)} {number(width)} {number(height)}" font-family="{families}"'
            ' stroke-linecap="butt" stroke-linejoin="miter">'
        )
        return "\n".join((head, *self._parts, "</svg>")) + "\n"
