"""HTML -> PDF with the bundled fonts alone, byte for byte the same on every run."""

from __future__ import annotations

import gc
import os
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from types import ModuleType

from calcpack.errors import RenderError
from calcpack.ledger import Ledger
from calcpack.report.content import PackageContent
from calcpack.report.fonts import FONTS, TEMPLATES
from calcpack.report.pages import render_html

VARIANT = "pdf/a-3u"
_FONT_SETTINGS = "FONTCONFIG_FILE"
# What brings the text layout library that the PDF engine needs (from the engine's installation notes).
_REMEDIES = {
    "darwin": "brew install pango",
    "win32": "pacman -S mingw-w64-ucrt-x86_64-pango (in an MSYS2 shell)",
}
_REMEDY = "apt install libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz-subset0"


@dataclass(frozen=True)
class Rendered:
    """A finished file and the number of its pages."""

    pdf: bytes
    pages: int


def render(package: PackageContent, ledger: Ledger, figures: dict[str, str]) -> Rendered:
    """Write the package as PDF. ``figures`` are SVG texts by key.

    Raises RenderError where the engine is missing or something cannot be drawn.
    """
    return write_pdf(render_html(package, ledger, figures))


def write_pdf(html: str) -> Rendered:
    """An HTML document of :func:`render_html` as PDF."""
    with _surroundings():
        weasyprint = engine()
        document = weasyprint.HTML(string=html, base_url=f"{TEMPLATES.as_uri()}/").render(pdf_variant=VARIANT)
        return Rendered(document.write_pdf(), len(document.pages))


def engine() -> ModuleType:
    """The PDF engine. Imported here and nowhere else: it takes two seconds.

    Raises RenderError with the one command that brings what is missing.
    """
    try:
        import weasyprint
    except (ImportError, OSError) as error:
        remedy = _REMEDIES.get(sys.platform, _REMEDY)
        raise RenderError(f"the PDF engine cannot start ({error}); on this machine: {remedy}") from error
    return weasyprint


@contextmanager
def _surroundings() -> Iterator[None]:
    """Show the font library the bundled fonts alone, and keep the collector from running.

    Without it rendering is a fifth faster, and nothing here makes cycles that matter.
    """
    fonts, was_enabled = os.environ.get(_FONT_SETTINGS), gc.isenabled()
    os.environ[_FONT_SETTINGS] = str(FONTS / "fonts.conf")
    gc.disable()
    try:
        yield
    finally:
        if was_enabled:
            gc.enable()
        if fonts is None:
            del os.environ[_FONT_SETTINGS]
        else:
            os.environ[_FONT_SETTINGS] = fonts
