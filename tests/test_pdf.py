"""The package as PDF: pages, margins, draft mark, links, metadata, and the same bytes on every run."""

from __future__ import annotations

import io
import os
import re
import subprocess
import sys
from itertools import combinations
from pathlib import Path
from shutil import which

import pikepdf
import pytest
from report_sample import SVG, content, ledger

from calcpack.errors import RenderError
from calcpack.report import pdf
from calcpack.report.content import DRAFT

pytestmark = pytest.mark.skipif(which("pdftotext") is None, reason="needs pdftotext of Poppler to read pages")
FIGURES = {"curve": SVG}
TESTS = Path(__file__).parent
LEFT, RIGHT, TOP, BOTTOM = 56.0, 556.0, 30.0, 820.0  # points from the top left corner: 20 mm to bind, 14 mm right


@pytest.fixture(scope="module")
def rendered() -> pdf.Rendered:
    return pdf.render(content(ledger(), draft=True), ledger(), FIGURES)


@pytest.fixture(scope="module")
def pages(rendered) -> list[str]:
    """Text of each page."""
    return [_text(rendered.pdf, place) for place in range(1, rendered.pages + 1)]


def test_every_page_says_sheet_n_of_all(rendered, pages):
    assert rendered.pages == len(pages) > 8
    for place, text in enumerate(pages, start=1):
        assert f"sheet {place} of {rendered.pages}" in text
        assert "fingerprint 7c1e 09ab 44d2" in text and "calcpack 0.1.0" in text


def test_every_page_but_the_cover_has_the_title_block(pages):
    for text in pages[1:]:
        assert "LK-210-CAL-001" in text and "2026-11-30" in text and "Larkmere settled-water transfer" in text


def test_draft_mark_is_on_every_page_of_a_draft_alone(rendered):
    assert all("DRAFT" in drawn for drawn in _drawn(rendered.pdf))
    issued = pdf.render(content(ledger()), ledger(), FIGURES)
    assert not any("DRAFT" in drawn for drawn in _drawn(issued.pdf))


def test_contents_list_gives_the_page_of_each_sheet(pages):
    for title in ("Verdict", "Losses by line", "Inputs as read"):
        page = int(re.search(rf"{title}[ .]+(\d+)", pages[1])[1])
        assert re.search(rf"^\s*\d+\s+{title}\s*$", pages[page - 1], re.MULTILINE), title


def test_links_of_the_file_lead_to_destinations(rendered):
    with pikepdf.open(io.BytesIO(rendered.pdf)) as file:
        names = file.Root.Names.Dests.Names
        targets = {str(names[place]) for place in range(0, len(names), 2)}
        links = [
            str(link.Dest if "/Dest" in link else link.A.D)
            for page in file.pages for link in page.get("/Annots", []) if link.Subtype == "/Link"
        ]
    assert len(links) > 300 and set(links) <= targets


def test_bookmarks_and_metadata(rendered):
    with pikepdf.open(io.BytesIO(rendered.pdf)) as file:
        with file.open_outline() as outline:
            titles = [item.title for item in outline.root]
            sections = [item.title for item in outline.root[4].children]
        assert titles[2:6] == ["1 Verdict", "2 Inputs and assumptions", "4 Losses by line",
                               "5 Net positive suction head"]  # fmt: skip
        assert sections == ["4.1 L-101 suction line", "4.2 L-102 pump discharge", "4.3 L-103 rising main"]
        assert str(file.docinfo["/Title"]) == "LK-210-CAL-001 Transfer pumps P-101A/B: hydraulic calculation"
        assert str(file.docinfo["/CreationDate"]).startswith("D:20261130")
        assert str(file.Root.Lang) == "en"


def test_nothing_runs_out_of_its_page_or_over_other_words(rendered):
    boxes = subprocess.run(
        ["pdftotext", "-bbox", "-", "-"], input=rendered.pdf, capture_output=True, check=True
    ).stdout.decode()
    for page in boxes.split("<page ")[1:]:
        found = re.findall(r'xMin="([\d.]+)" yMin="([\d.]+)" xMax="([\d.]+)" yMax="([\d.]+)">(.*?)</word>', page)
        words = [(*map(float, word[:4]), word[4]) for word in found if word[4] not in DRAFT]
        for x0, y0, x1, y1, word in words:
            assert x0 > LEFT and x1 < RIGHT and y0 > TOP and y1 < BOTTOM, word
        for one, other in combinations(words, 2):
            assert _common(one, other) < 0.5, f"{one[4]} lies on {other[4]}"


def _common(one: tuple, other: tuple) -> float:
    """Area that two boxes share, as a part of the smaller one."""
    wide = min(one[2], other[2]) - max(one[0], other[0])
    high = min(one[3], other[3]) - max(one[1], other[1])
    smaller = min((box[2] - box[0]) * (box[3] - box[1]) for box in (one, other))
    return max(wide, 0.0) * max(high, 0.0) / smaller


def test_same_bytes_in_the_same_process(rendered):
    assert pdf.render(content(ledger(), draft=True), ledger(), FIGURES).pdf == rendered.pdf


@pytest.mark.parametrize("seed", ["1", "2"])
def test_same_bytes_in_another_process_with_another_hash_seed(rendered, seed, tmp_path):
    script = (
        "import sys; sys.path[:0] = sys.argv[1:3]\n"
        "from report_sample import SVG, content, ledger\n"
        "from calcpack.report.pdf import render\n"
        "sys.stdout.buffer.write(render(content(ledger(), draft=True), ledger(), {'curve': SVG}).pdf)\n"
    )
    zone = {"1": "UTC", "2": "Asia/Tokyo"}[seed]
    made = subprocess.run(
        [sys.executable, "-W", "ignore", "-c", script, str(TESTS), str(TESTS.parent)], cwd=tmp_path,
        env={**os.environ, "PYTHONHASHSEED": seed, "TZ": zone}, capture_output=True, check=True,
    )
    assert made.stdout == rendered.pdf


def test_missing_engine_is_explained(monkeypatch):
    monkeypatch.setitem(sys.modules, "weasyprint", None)
    with pytest.raises(RenderError, match=r"the PDF engine cannot start.*; on this machine: "):
        pdf.write_pdf("<p>x</p>")


@pytest.mark.parametrize(
    ("body", "words"),
    [('<a href="#nowhere">x</a>', "nowhere"), ('<img alt="x" src="data:image/svg+xml,%3Csvg">', "image")],
)
def test_what_the_engine_cannot_use_stops_the_report(body, words):
    with pytest.raises(RenderError, match=words):
        pdf.write_pdf(f'<html lang="en"><title>x</title><body>{body}</body></html>')


def test_font_settings_of_the_caller_are_left_alone(monkeypatch):
    monkeypatch.setenv("FONTCONFIG_FILE", "/elsewhere/fonts.conf")
    pdf.write_pdf('<html lang="en"><title>x</title><p>x</p></html>')
    assert os.environ["FONTCONFIG_FILE"] == "/elsewhere/fonts.conf"


def _text(data: bytes, page: int) -> str:
    return subprocess.run(
        ["pdftotext", "-layout", "-f", str(page), "-l", str(page), "-", "-"], input=data, capture_output=True,
        check=True,
    ).stdout.decode()


def _drawn(data: bytes) -> list[str]:
    """Words of each page with those turned on the page."""
    found = []
    with pikepdf.open(io.BytesIO(data)) as file:
        for place in range(1, len(file.pages) + 1):
            raw = subprocess.run(
                ["pdftotext", "-raw", "-f", str(place), "-l", str(place), "-", "-"], input=data, capture_output=True,
                check=True,
            ).stdout.decode()
            found.append("".join(raw.split()))
    return found
