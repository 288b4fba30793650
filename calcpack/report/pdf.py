"""HTML -> PDF with the bundled fonts alone, byte for byte the same on every run."""

from __future__ import annotations

import gc
import logging
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
    """An HTML document of :func:`render_html` as PDF.

    Raises RenderError for what the engine could not use: a link without target, a drawing that it cannot read.
    """
    with _surroundings(), _no_errors():
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
    """Show the font library the bundled fonts alone, stop the clock of the fonts, and keep the collector from running.

    Without the collector rendering is a fifth faster, and nothing here makes cycles that matter.
    """
    ours = {"FONTCONFIG_FILE": str(FONTS / "fonts.conf"), "SOURCE_DATE_EPOCH": "0"}
    theirs, was_enabled = {name: os.environ.get(name) for name in ours}, gc.isenabled()
    os.environ.update(ours)
    gc.disable()
    try:
        yield
    finally:
        if was_enabled:
            gc.enable()
        for name, value in theirs.items():
            if value is None:
                del os.environ[name]
            else:
                os.environ[name] = value


@contextmanager
def _no_errors() -> Iterator[None]:
    """Turn what the engine only logs as an error into one."""
    records: list[logging.LogRecord] = []
    handler = logging.Handler(logging.ERROR)
    handler.emit = records.append  # type: ignore[method-assign]
    logger = logging.getLogger("weasyprint")
    logger.addHandler(handler)
    try:
        yield
    finally:
        logger.removeHandler(handler)
    if records:
        raise RenderError("\n".join(record.getMessage() for record in records))
