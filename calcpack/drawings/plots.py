"""What the plots share: bundled fonts, one style, axes laid out in millimetres, SVG that is the same on every run.

matplotlib is imported inside the functions that draw: it takes seconds, and only a package with figures needs it.
"""

from __future__ import annotations

import io
import re
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from functools import cache
from typing import TYPE_CHECKING

from calcpack.drawings.fonts import FAMILIES, MATH, POINT, SYMBOLS, font_folder
from calcpack.drawings.svg import BLUE, INK, PALE, PAPER, number
from calcpack.drawings.ticks import round_ticks, tick_texts
from calcpack.quantities import Unit

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

INCH = 25.4  # mm
SIZE = 7.0  # pt, all text of a plot
SMALL = 6.6  # pt, labels inside the axes
LINE_STYLES: tuple = (
    "solid", (0, (6, 2)), (0, (6, 1.6, 1.2, 1.6)), (0, (1.2, 1.4)), (0, (10, 2)), (0, (8, 1.6, 1.2, 1.6, 1.2, 1.6)),
)  # fmt: skip
_OPEN, _CLOSE = "‹", "›"
_MARKED = re.compile(f"{_OPEN}([^{_CLOSE}_]+)(?:_([^{_CLOSE}]+))?{_CLOSE}")
_LONG_NUMBER = re.compile(r"-?\d+\.\d{4,}")
_TAG = re.compile(r"<[^>]*>")
_TEXT = re.compile(r'(<text style="[^"]*font-size: ([\d.]+)px[^>]*>)([^<]*)(</text>)')

_STYLE = {
    "svg.fonttype": "none",
    "svg.hashsalt": "calcpack",
    "font.family": list(FAMILIES[:2]),
    "font.size": SIZE,
    "axes.linewidth": 0.6,
    "axes.edgecolor": INK,
    "axes.labelsize": SIZE,
    "axes.axisbelow": True,
    "axes.unicode_minus": True,
    "grid.color": PALE,
    "grid.linewidth": 0.35,
    "lines.solid_capstyle": "butt",
    "lines.dash_capstyle": "butt",
    "xtick.labelsize": SIZE,
    "ytick.labelsize": SIZE,
    "xtick.major.width": 0.6,
    "ytick.major.width": 0.6,
    "xtick.major.size": 2.5,
    "ytick.major.size": 2.5,
    "xtick.direction": "in",
    "ytick.direction": "in",
    "figure.dpi": 72.0,
    "path.simplify": False,
}


def symbol(name: str, subscript: str = "") -> str:
    """Markup for a quantity symbol inside a plot text: set in the maths face once the SVG is written."""
    return f"{_OPEN}{name}_{subscript}{_CLOSE}" if subscript else f"{_OPEN}{name}{_CLOSE}"


@contextmanager
def style() -> Iterator[None]:
    """The plot style, whatever the user's own matplotlib settings are."""
    import matplotlib.style

    _register_fonts()
    with matplotlib.style.context(["default", _STYLE]):
        yield


@cache
def _register_fonts() -> None:
    from matplotlib import font_manager

    for name in ("CPSans-Regular.ttf", "CPSans-Italic.ttf", "CPSymbols.ttf"):
        font_manager.fontManager.addfont(font_folder() / name)


class Page:
    """A figure of ``width`` by ``height`` mm; positions in mm from its upper left corner."""

    def __init__(self, width: float, height: float) -> None:
        from matplotlib.backends.backend_svg import FigureCanvasSVG
        from matplotlib.figure import Figure

        self.width, self.height = width, height
        self.figure: Figure = Figure(figsize=(width / INCH, height / INCH))
        FigureCanvasSVG(self.figure)
        self.figure.patch.set_visible(False)

    def axes(self, left: float, top: float, width: float, height: float) -> Axes:
        """Axes with the given frame."""
        share = (left / self.width, 1 - (top + height) / self.height, width / self.width, height / self.height)
        return self.figure.add_axes(share)

    def text(
        self, x: float, y: float, text: str, *, anchor: str = "left", size: float = SMALL, turned: bool = False
    ) -> None:
        """A text with its middle height at ``y``; ``turned`` reads upwards with its middle height at ``x``."""
        drop = _DROP * size * POINT
        x, y = (x + drop, y) if turned else (x, y + drop)
        self.figure.text(x / self.width, 1 - y / self.height, text, ha=anchor, va="baseline", fontsize=size, color=INK,
                         rotation=90 if turned else 0, rotation_mode="anchor", zorder=6)  # fmt: skip

    def disc(self, x: float, y: float, width: float, height: float) -> None:
        """A white disc with a thin edge about (x, y)."""
        from matplotlib.patches import Ellipse

        place = (x / self.width, 1 - y / self.height)
        self.figure.add_artist(
            Ellipse(place, width / self.width, height / self.height, transform=self.figure.transFigure,
                    facecolor=PAPER, edgecolor=INK, linewidth=0.5, zorder=5)
        )  # fmt: skip

    def mark(self, x: float, y: float, shape: str, size: float, fill: str) -> None:
        """A marker about (x, y), as in the axes: black edge, or no edge where it is filled with the accent."""
        from matplotlib.lines import Line2D

        self.figure.add_artist(
            Line2D([x / self.width], [1 - y / self.height], marker=shape, markersize=size, markerfacecolor=fill,
                   markeredgecolor=fill if fill == BLUE else INK, markeredgewidth=0.8, zorder=5)
        )  # fmt: skip

    def line(self, x: Sequence[float], y: Sequence[float], width: float = 0.4, colour: str = INK) -> None:
        """A thin line through points in mm."""
        from matplotlib.lines import Line2D

        xs, ys = [a / self.width for a in x], [1 - b / self.height for b in y]
        self.figure.add_artist(Line2D(xs, ys, linewidth=width, color=colour, zorder=4))

    def place(self, axes: Axes, x: float, y: float) -> tuple[float, float]:
        """Where a data point stands on the page, mm."""
        px, py = axes.transData.transform((x, y))
        return float(px) / 72 * INCH, self.height - float(py) / 72 * INCH

    def svg(self) -> str:
        """The figure as SVG text. Call inside :func:`style`."""
        stream = io.StringIO()
        metadata = dict.fromkeys(("Date", "Creator", "Format", "Type"))
        self.figure.savefig(stream, format="svg", metadata=metadata)
        return _settled(stream.getvalue(), self.width, self.height)


_DROP = 0.33  # of the font size: half the height of a capital, from the middle of a line to its baseline


def set_ticks(page: Page, axes: Axes, which: str, most: int, drop: float = 0.0) -> None:
    """Round ticks on the 'x' or 'y' axis with a pale grid; 'x' ticks are written ``drop`` mm below the frame."""
    low, high = axes.get_xlim() if which == "x" else axes.get_ylim()
    ticks = round_ticks(low, high, most)
    axis = axes.xaxis if which == "x" else axes.yaxis
    axis.set_ticks(ticks, [""] * len(ticks))
    axis.grid(True)
    for tick, text in zip(ticks, tick_texts(ticks), strict=True):
        if which == "y":
            x, y = page.place(axes, axes.get_xlim()[0], tick)
            page.text(x - 1.2, y, text, anchor="right", size=SIZE)
        elif drop:
            x, y = page.place(axes, tick, axes.get_ylim()[0])
            page.text(x, y + drop, text, anchor="center", size=SIZE)


def axis_title(name: str, unit: Unit) -> str:
    """Quantity over unit, as ISO 80000-1 heads an axis: ``Q / (m³/h)``; the name alone for a pure number."""
    if not unit.text:
        return name
    compound = any(mark in unit.text for mark in "/· ")
    return f"{name} / ({unit.text})" if compound else f"{name} / {unit.text}"


def _settled(text: str, width: float, height: float) -> str:
    """Without what varies between versions: prologue, metadata, spare digits; with symbols in the maths face."""
    text = text[text.index("<svg") :]
    text = re.sub(r"\s*<metadata>.*?</metadata>", "", text, flags=re.DOTALL)
    text = re.sub(r' transform="rotate\(-?0 [^"]*\)"', "", text)
    text = _TAG.sub(lambda tag: _LONG_NUMBER.sub(_short, tag.group()), text)
    text = _TEXT.sub(_with_symbols, text)
    size = f'width="{width:g}mm" height="{height:g}mm"'
    return re.sub(r'width="[\d.]+pt" height="[\d.]+pt"', size, text, count=1)


def _short(match: re.Match) -> str:
    text = f"{float(match.group()):.3f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def _with_symbols(match: re.Match) -> str:
    head, size, body, tail = match.groups()
    lowering = 0.18 * float(size)
    spans, lowered = [], False
    for index, piece in enumerate(_MARKED.split(body)):  # text, symbol, subscript, text, symbol, ...
        if not piece:
            continue
        attributes = ""
        if index % 3 == 1:
            attributes = f' font-family="{MATH}, {SYMBOLS}, serif" font-style="italic"'
        elif index % 3 == 2:
            attributes = f' font-size="{number(0.72 * float(size))}" dy="{number(lowering)}"'
        if lowered:
            attributes += f' dy="{number(-lowering)}"'
        lowered = index % 3 == 2
        spans.append(f"<tspan{attributes}>{piece}</tspan>")
    return head + "".join(spans) + tail if _OPEN in body else match.group()
