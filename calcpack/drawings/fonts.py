"""The bundled faces: where they lie and how wide a text is, so that labels can be placed before anything is drawn.

A reader of the two TrueType tables that give advance widths (``cmap`` format 4 or 12, ``hmtx``); kerning is left out,
which makes texts a little wider than they print, never narrower by more than a hair.
"""

from __future__ import annotations

import struct
from functools import cache
from pathlib import Path

from calcpack.errors import RenderError

SANS = "CP Sans"
MATH = "CP Math"
SYMBOLS = "CP Symbols"
FAMILIES = (SANS, SYMBOLS, "sans-serif")

POINT = 25.4 / 72  # mm
CAP_HEIGHT = 0.66  # of the font size, both sans weights
DESCENT = 0.21  # of the font size, lower-case letters
SMALLEST_PRINT = 6.5 * POINT  # mm; smaller text does not survive a copying machine

_FILES = {
    "regular": "CPSans-Regular.ttf",
    "semibold": "CPSans-SemiBold.ttf",
    "italic": "CPSans-Italic.ttf",
    "math": "CPMath-Italic.ttf",
    "symbols": "CPSymbols.ttf",
}


def font_folder() -> Path:
    """Folder of the bundled fonts, in a checkout or an installed package. Raises RenderError when it is missing."""
    package = Path(__file__).resolve().parents[1]
    for root in (package, package.parent):
        folder = root / "report_templates" / "fonts"
        if (folder / _FILES["regular"]).is_file():
            return folder
    raise RenderError("the bundled fonts (report_templates/fonts) are missing from this installation")


def text_width(text: str, size: float, face: str = "regular") -> float:
    """Width of ``text`` in the unit of ``size``; a character that the face lacks is measured in CP Symbols."""
    own, fallback = _advances(face), _advances("symbols")
    missing = own["n"]
    return size * sum(own.get(char) or fallback.get(char) or missing for char in text)


@cache
def _advances(face: str) -> dict[str, float]:
    """Advance width of every character of a face, as a share of the font size."""
    data = (font_folder() / _FILES[face]).read_bytes()
    tables = {}
    for index in range(struct.unpack_from(">H", data, 4)[0]):
        tag, _, offset, _ = struct.unpack_from(">4sLLL", data, 12 + 16 * index)
        tables[tag.decode("ascii")] = offset
    units = struct.unpack_from(">H", data, tables["head"] + 18)[0]
    metrics = struct.unpack_from(">H", data, tables["hhea"] + 34)[0]
    advances = [struct.unpack_from(">H", data, tables["hmtx"] + 4 * index)[0] / units for index in range(metrics)]
    glyphs = _character_map(data, tables["cmap"])
    return {chr(code): advances[min(glyph, metrics - 1)] for code, glyph in sorted(glyphs.items())}


def _character_map(data: bytes, start: int) -> dict[int, int]:
    glyphs: dict[int, int] = {}
    for index in range(struct.unpack_from(">H", data, start + 2)[0]):
        platform, _, offset = struct.unpack_from(">HHL", data, start + 4 + 8 * index)
        if platform not in (0, 3):
            continue
        table = start + offset
        form = struct.unpack_from(">H", data, table)[0]
        if form == 4:
            glyphs |= _format_4(data, table)
        elif form == 12:
            glyphs |= _format_12(data, table)
    return glyphs


def _format_4(data: bytes, table: int) -> dict[int, int]:
    count = struct.unpack_from(">H", data, table + 6)[0] // 2
    ends, starts, deltas, offsets = (table + 14, table + 16 + 2 * count, table + 16 + 4 * count, table + 16 + 6 * count)
    glyphs = {}
    for index in range(count):
        end, first = (struct.unpack_from(">H", data, where + 2 * index)[0] for where in (ends, starts))
        delta = struct.unpack_from(">h", data, deltas + 2 * index)[0]
        offset = struct.unpack_from(">H", data, offsets + 2 * index)[0]
        for code in range(first, min(end, 0xFFFE) + 1):
            glyph = code
            if offset:
                glyph = struct.unpack_from(">H", data, offsets + 2 * index + offset + 2 * (code - first))[0]
            if not offset or glyph:
                glyph = (glyph + delta) & 0xFFFF
            if glyph:
                glyphs[code] = glyph
    return glyphs


def _format_12(data: bytes, table: int) -> dict[int, int]:
    glyphs = {}
    for index in range(struct.unpack_from(">L", data, table + 12)[0]):
        first, end, glyph = struct.unpack_from(">LLL", data, table + 16 + 12 * index)
        glyphs |= {code: glyph + code - first for code in range(first, end + 1)}
    return glyphs
