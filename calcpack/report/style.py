"""The style sheet of a package: the fixed rules, column widths, and the texts of the page margins."""

from __future__ import annotations

from urllib.parse import quote

from calcpack.report.content import DRAFT, PackageContent
from calcpack.report.fonts import TEMPLATES
from calcpack.report.symbols import Html

DISCLAIMER = "criterion met / not met is arithmetic, not approval"
SHOWN_DIGITS = 16
# A pale word across every page, behind the text: solid grey, so that it needs no transparency.
_MARK = (
    '<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 210 297"><text x="105" y="150" text-anchor="middle" '
    'transform="rotate(-52 105 150)" font-family="CP Sans" font-weight="600" font-size="62" letter-spacing="6" '
    f'fill="#eeeeee">{DRAFT}</text></svg>'
)


def style_sheet(package: PackageContent) -> Html:
    """CSS of the whole document. Font addresses are relative to the folder of the templates."""
    footer = f"Computed by {package.program} · {DISCLAIMER} · fingerprint {short(package.fingerprint)}"
    widths = "".join(f".c{percent}{{width:{percent}%}}" for percent in range(1, 101))
    page = f"@page{{@bottom-left{{content:{css_string(footer)}}}}}"
    if package.draft:
        page += f'@page{{background:url("data:image/svg+xml,{quote(_MARK)}") 0 0/100% 100% no-repeat}}'
    fixed = (TEMPLATES / "style.css").read_text(encoding="utf-8")
    return Html("\n".join((fixed, widths, page)))


def short(fingerprint: str) -> str:
    """The first digits of a fingerprint in groups of four, enough to tell two packages apart by eye."""
    digits = fingerprint.replace(" ", "")[:SHOWN_DIGITS]
    return " ".join(digits[start : start + 4] for start in range(0, len(digits), 4))


def css_string(text: str) -> str:
    """``text`` as a CSS string, safe inside a style element."""
    return '"' + "".join(char if char.isalnum() or char in " .,·/-_" else f"\\{ord(char):x} " for char in text) + '"'
