"""The bundled fonts hold what is printed, and what is drawn is what the fonts hold."""

from __future__ import annotations

import io
from dataclasses import replace

import pikepdf
import pytest
from fontTools.pens.recordingPen import DecomposingRecordingPen
from fontTools.ttLib import TTFont
from report_sample import SVG, content, ledger

from calcpack.digits import MINUS, THIN_SPACE, TIMES
from calcpack.errors import RenderError
from calcpack.formulas import FORMULAS
from calcpack.quantities import UNITS
from calcpack.report import fonts
from calcpack.report.pages import render_html
from calcpack.report.pdf import write_pdf
from calcpack.report.symbols import GREEK, split

FACES = sorted(path.stem for path in fonts.FONTS.glob("*.ttf"))
OPERATORS = f"Σ√≤≥≈·{TIMES}{MINUS}∞→±°|()–"
# The stacks of the style sheet, first family first.
MATH = ("CPMath-Regular", "CPSymbols")
MATH_ITALIC = ("CPMath-Italic", "CPSymbols")
SANS = ("CPSans-Regular", "CPSymbols")


def glossary() -> list[str]:
    """Every letter that a symbol, name or unit of the program prints with, and the operators."""
    letters = "".join(
        part for formula in FORMULAS.values() for name in formula.kinds for part in split(name)
    )
    return sorted(set(letters + "".join(UNITS) + "".join(GREEK.values()) + OPERATORS) - set(" \u00a0" + THIN_SPACE))


def test_styles_of_a_family_hold_the_same_characters():
    for family in ("CPMath", "CPSans"):
        sets = [frozenset(fonts.advances(face)) for face in FACES if face.startswith(family)]
        assert len(sets) > 1 and len(set(sets)) == 1


def test_every_licence_lies_beside_the_fonts():
    assert {path.name for path in fonts.FONTS.glob("OFL-*.txt")} == {"OFL-STIX-Two.txt", "OFL-Source-Sans-3.txt"}


def test_glossary_has_no_missing_character():
    assert fonts.missing_characters("".join(glossary())) == []


def test_missing_characters_are_named_once_in_order():
    assert fonts.missing_characters("ab漢c字漢\n") == ["漢", "字"]


def test_width_adds_advances():
    one = fonts.width("ρ", fonts.ITALIC)
    assert 0.3 < one < 0.8
    assert fonts.width("ρρ", fonts.ITALIC) == pytest.approx(2 * one)
    assert fonts.width("√", fonts.REGULAR) == fonts.advances(fonts.SYMBOLS)[ord("√")]


def test_character_without_glyph_stops_the_report_and_says_where():
    package = content(ledger())
    sheet = package.sheets[0]
    changed = replace(package, sheets=(replace(sheet, title="Verdict 漢"), *package.sheets[1:]))
    with pytest.raises(RenderError, match=r"sheet 1 Verdict 漢: no bundled font has '漢' \(U\+6F22\)"):
        render_html(changed, ledger(), {"curve": SVG})


@pytest.mark.parametrize(
    ("style", "stack"), [("m", MATH), ("m i", MATH_ITALIC), ("", SANS)], ids=["math", "math italic", "sans"]
)
def test_drawn_glyph_is_the_glyph_of_the_font(style, stack):
    """The outline in the PDF equals the outline of the same character in the font file that ought to draw it."""
    chars = glossary()
    css = (fonts.TEMPLATES / "style.css").read_text(encoding="utf-8")
    tag = "i" if style.endswith("i") else "span"
    body = "".join(f'<p class="{style[:1]}"><{tag}>&#{ord(char)};</{tag}></p>' for char in chars)
    pdf = write_pdf(f'<html lang="en"><title>glyphs</title><style>{css}</style><body>{body}</body></html>').pdf
    drawn = list(_drawn(pdf))
    assert len(drawn) == len(chars)
    for char, outline in zip(chars, drawn, strict=True):
        face = next(face for face in stack if ord(char) in fonts.advances(face))
        assert outline == _outline_of(face, char), f"{char} (U+{ord(char):04X}) is not drawn from {face}"


def _drawn(pdf: bytes):
    """Outlines of the glyphs on the pages, in order, page margins left out."""
    with pikepdf.open(io.BytesIO(pdf)) as document:
        for page in document.pages:
            files = {name: _embedded(font) for name, font in page.Resources.Font.items()}
            shown, current = [], None
            for operands, operator in pikepdf.parse_content_stream(page):
                if str(operator) == "Tf":
                    current = files[str(operands[0])]
                elif str(operator) in ("Tj", "TJ"):
                    texts = operands[0] if str(operator) == "TJ" else [operands[0]]
                    codes = b"".join(bytes(text) for text in texts if isinstance(text, pikepdf.String))
                    shown.append([_outline(current, int.from_bytes(codes[i : i + 2])) for i in range(0, len(codes), 2)])
            yield from (run[0] for run in shown if len(run) == 1)


def _embedded(font: pikepdf.Object) -> TTFont:
    descendant = font.DescendantFonts[0]
    assert descendant.CIDToGIDMap == "/Identity"
    return TTFont(io.BytesIO(descendant.FontDescriptor.FontFile2.read_bytes()))


def _outline(font: TTFont, glyph: int) -> list:
    pen = DecomposingRecordingPen(font.getGlyphSet())
    font.getGlyphSet()[font.getGlyphOrder()[glyph]].draw(pen)
    return pen.value


def _outline_of(face: str, char: str) -> list:
    with TTFont(fonts.FONTS / f"{face}.ttf") as font:
        return _outline(font, font.getGlyphID(font.getBestCmap()[ord(char)]))


def test_fonts_of_the_machine_are_never_used():
    """Whatever family a text asks for, it is set in a bundled one."""
    page = '<html lang="en"><title>x</title><p style="font-family:DejaVu Sans,monospace">Ag1</p></html>'
    with pikepdf.open(io.BytesIO(write_pdf(page).pdf)) as document:
        names = [str(font.BaseFont) for font in document.pages[0].Resources.Font.values()]
    assert names and all("CP-" in name for name in names), names
