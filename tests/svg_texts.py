"""Reading drawings back: every text of an SVG with the rectangle it covers, measured with the bundled fonts."""

from __future__ import annotations

import re
from dataclasses import dataclass
from xml.etree import ElementTree

from PIL import ImageFont

from calcpack.drawings.fonts import font_folder
from calcpack.drawings.geometry import Box

SVG = "{http://www.w3.org/2000/svg}"
SCALE = 200  # font size in pixels at which PIL measures


@dataclass(frozen=True)
class Text:
    """One text element: what it says, its size in the drawing's unit, and the ink's rectangle (approximately)."""

    text: str
    size: float
    box: Box


def root_of(svg: str) -> ElementTree.Element:
    """The parsed drawing; raises when it is not well-formed."""
    return ElementTree.fromstring(svg)


def texts_of(svg: str) -> list[Text]:
    """Every text of a drawing."""
    return [_measured(element) for element in root_of(svg).iter(f"{SVG}text")]


def words_of(svg: str) -> str:
    """All texts, one a line."""
    return "\n".join(text.text for text in texts_of(svg))


def unit_of_print(svg: str) -> float:
    """Points on paper for one unit of the drawing."""
    root = root_of(svg)
    return float(root.get("width", "").removesuffix("mm")) / float(root.get("viewBox", "").split()[2]) * 72 / 25.4


def overlapping(texts: list[Text]) -> list[tuple[str, str]]:
    """Pairs of texts whose ink touches."""
    return [(a.text, b.text) for i, a in enumerate(texts) for b in texts[i + 1 :] if a.box.overlaps(b.box)]


def _measured(element: ElementTree.Element) -> Text:
    style = dict(re.findall(r"([\w-]+): ([^;]+)", element.get("style", "")))
    size = float(element.get("font-size") or style["font-size"].removesuffix("px"))
    bold = element.get("font-weight") == "600"
    width = _width(element.text or "", size, bold)
    width += sum(_width(part.text or "", float(part.get("font-size") or size), bold) for part in element)
    x, y = float(element.get("x", 0)), float(element.get("y", 0))
    anchor = element.get("text-anchor") or style.get("text-anchor", "start")
    x0 = x - {"start": 0.0, "middle": width / 2, "end": width}[anchor]
    box = Box(x0, y - 0.70 * size, x0 + width, y + 0.08 * size)  # capitals and digits; descenders rarely meet ascenders
    turn = re.match(r"rotate\((-?[\d.]+) ", element.get("transform", ""))
    if turn and float(turn.group(1)) == -90:
        box = Box(x + box.y0 - y, y - (box.x1 - x), x + box.y1 - y, y - (box.x0 - x))
    return Text("".join(element.itertext()), size, box)


def _width(text: str, size: float, bold: bool) -> float:
    file = font_folder() / ("CPSans-SemiBold.ttf" if bold else "CPSans-Regular.ttf")
    return ImageFont.truetype(str(file), SCALE).getlength(text) * size / SCALE
