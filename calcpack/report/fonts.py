"""The bundled fonts: where they are, which characters they hold, how wide a text runs."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from pathlib import Path

import calcpack

_PACKAGE = Path(calcpack.__file__).parent
# Beside the package in the source tree, inside it once installed.
TEMPLATES = next(
    (folder for folder in (_PACKAGE.parent / "report_templates", _PACKAGE / "report_templates") if folder.is_dir()),
    _PACKAGE / "report_templates",
)
FONTS = TEMPLATES / "fonts"

REGULAR = "CPMath-Regular"
ITALIC = "CPMath-Italic"
SANS = "CPSans-Regular"
SEMIBOLD = "CPSans-SemiBold"
SYMBOLS = "CPSymbols"
# Characters that lay text out and need no glyph of their own.
_WITHOUT_GLYPH = frozenset("\n\r\t\u00ad\u200b")


@cache
def advances(face: str) -> Mapping[int, float]:
    """Code point -> advance width in em, of the font file ``face``."""
    from fontTools.ttLib import TTFont  # a tenth of a second: only where a PDF is made

    with TTFont(FONTS / f"{face}.ttf", lazy=True) as font:
        units = font["head"].unitsPerEm
        widths = font["hmtx"]
        return {code: widths[glyph][0] / units for code, glyph in font.getBestCmap().items()}


def width(text: str, face: str) -> float:
    """Width of ``text`` set in ``face``, in em; characters of no own glyph are taken from the symbol font."""
    own, symbols = advances(face), advances(SYMBOLS)
    return sum(own.get(ord(char), symbols.get(ord(char), 1.0)) for char in text)


@cache
def characters() -> frozenset[int]:
    """Code points that the bundled fonts hold together: every style of text falls back over all families."""
    # An upright family and its styles are drawn from the same set, so one face speaks for each family.
    return frozenset(advances(SANS)) | frozenset(advances(REGULAR)) | frozenset(advances(SYMBOLS))


def missing_characters(text: str) -> list[str]:
    """Characters of ``text`` that no bundled font can draw, each once, in order."""
    known = characters()
    return [char for char in dict.fromkeys(text) if ord(char) not in known and char not in _WITHOUT_GLYPH]
