"""The whole package: links both ways, numbers of sheets and lines, the cover, and the same bytes on every run."""

from __future__ import annotations

import io
import os
import re
import subprocess
import sys
from collections import Counter
from dataclasses import replace
from html import unescape
from html.parser import HTMLParser
from pathlib import Path
from shutil import which

import pikepdf
import pytest

from calcpack.errors import RenderError
from calcpack.formulas import pipe_flow
from calcpack.ledger import Ledger
from calcpack.report import pdf
from calcpack.report.anchors import entry_anchor, fragment, identifier
from calcpack.report.content import CoverContent, Preliminary
from calcpack.report.numbering import FEW, number
from calcpack.report.pages import render_html
from calcpack.report.style import css_string
from calcpack.sheets.content import Column, Derivation, Figure, Prose, Ref, Row, Section, Sheet, Table
from report_sample import SVG, content, ledger, sheets

pytestmark = pytest.mark.skipif(which("pdftotext") is None, reason="needs pdftotext of Poppler to read pages")
FIGURES = {"curve": SVG}
TESTS = Path(__file__).parent


class Page(HTMLParser):
    """Ids, addresses, heading levels and images of a document."""

    def __init__(self, html: str) -> None:
        super().__init__()
        self.ids: list[str] = []
        self.hrefs: list[str] = []
        self.headings: list[int] = []
        self.images: list[dict] = []
        self.feed(html)

    def handle_starttag(self, tag, attrs):
        found = dict(attrs)
        if "id" in found:
            self.ids.append(found["id"])
        if tag == "a":
            self.hrefs.append(found["href"])
        if re.fullmatch("h[1-6]", tag):
            self.headings.append(int(tag[1]))
        if tag == "img":
            self.images.append(found)


@pytest.fixture(scope="module", params=["SI", "US"])
def html(request) -> str:
    book = ledger(request.param)
    return render_html(content(book), book, FIGURES)


@pytest.fixture(scope="module")
def rendered() -> pdf.Rendered:
    return pdf.render(content(ledger(), draft=True), ledger(), FIGURES)


@pytest.fixture(scope="module")
def pages(rendered) -> list[str]:
    """Text of each page."""
    return [_text(rendered.pdf, place) for place in range(1, rendered.pages + 1)]


def test_every_link_has_its_target_and_no_target_is_there_twice(html):
    page = Page(html)
    assert [one for one, count in Counter(page.ids).items() if count > 1] == []
    assert all(href.startswith("#") for href in page.hrefs)
    assert {href[1:] for href in page.hrefs} <= set(page.ids)
    assert len(page.hrefs) > 300


def test_every_home_is_a_target_and_every_use_is_linked_back(html):
    book = ledger("SI" if "m³/h" in html else "US")
    numbering = number(sheets(book), book)
    ids = set(Page(html).ids)
    assert {home.anchor for home in numbering.homes.values()} <= ids
    assert f'<a href="#{entry_anchor("L-103/h_f@2")}">' in html
    uses = dict(numbering.used_in("L-103/h_f@2"))
    assert uses[numbering.homes["L-103/h_L@2"].label] == "#e-L-103.h_L:2"


def test_every_entry_but_the_unprinted_has_a_home():
    book = ledger()
    assert number(sheets(book), book).homeless(book) == []


def test_headings_begin_at_one_and_skip_no_level(html):
    levels = Page(html).headings
    assert levels[0] == 1
    assert all(later <= earlier + 1 for earlier, later in zip(levels, levels[1:], strict=False))


def test_every_image_has_a_text_alternative_with_its_numbers(html):
    images = Page(html).images
    assert len(images) == 2
    assert re.fullmatch(r"Curve of head over flow through [\d.]+\s(m³/h|US gpm)", images[0]["alt"])


@pytest.mark.parametrize("text", ["L-103/h_f@2", "a b~c", "~2f~", "Ä/ö@@.", "plain-id_1", "{x}"])
def test_anchor_is_reversible(text):
    assert identifier(fragment(text)) == text
    assert not re.search(r"[\s@/\"'<>&#]", fragment(text))


def test_anchors_do_not_collide():
    texts = ["a/b", "a.b", "a@b", "a:b", "a~2e~b", "a~b", "a b", "ab"]
    assert len({fragment(text) for text in texts}) == len(texts)
    assert entry_anchor("L-103/h_f@2") == "e-L-103.h_f:2"


def test_numbers_of_sheets_sections_lines_and_tables():
    book = ledger()
    numbering = number(sheets(book), book)
    assert numbering.sheets["losses"] == "4"  # the sheet left out before it keeps its number
    assert numbering.sections["losses-L-103"] == "4.3"
    assert numbering.homes["L-103/D"].label == "4.3.1"
    assert numbering.homes["L-103/h_f@1"].label == "Table\u00a04.C"
    assert numbering.homes["L-103/L"].label == "Table\u00a02.A"  # the register, not the page that shows it first
    assert numbering.homes["curve/system@1"].label == "6.1.1"


def test_many_uses_are_drawn_together():
    book = ledger()
    numbering = number(sheets(book), book)
    uses = numbering.used_in("site/g")
    assert len(numbering.users["site/g"]) > FEW
    assert [label for label, _ in uses] == ["4.1", "4.2", "4.3", "5.1"]


def test_a_second_derivation_of_an_entry_keeps_the_first_number():
    book = ledger()
    twice = Section("again", "Again", (Derivation(("L-103/D",)),))
    extra = (*sheets(book), Sheet("extra", "Extra", (twice,)))
    html = render_html(replace(content(book), sheets=extra), book, FIGURES)
    assert html.count(f'id="{entry_anchor("L-103/D")}"') == 1
    assert html.count('<b class="count">4.3.1</b>') == 2


def _with(section: Section):
    return replace(content(ledger()), cover=CoverContent(), sheets=(Sheet("one", "One", (section,)),))


@pytest.mark.parametrize(
    ("block", "words"),
    [
        (Table("t", (Column("a"), Column("b")), (Row(("x",)),)), "1 cells for 2 columns"),
        (Table("t", (Column("Q", "Q", "flow"),), (Row((Ref("L-103/V@1"),)),)), "is in m³/h; L-103/V@1 is in m/s"),
        (Prose("flow {L-103/Q@1|colour}"), "'colour' is no view of an entry"),
        (Figure("missing", "caption", "alt"), "no drawing 'missing'"),
    ],
)
def test_what_cannot_be_printed_is_refused(block, words):
    with pytest.raises(RenderError, match=re.escape(words)):
        render_html(_with(Section("s", "S", (block,))), ledger(), FIGURES)


def test_a_section_id_occurs_once():
    book = ledger()
    section = Section("same", "Same", ())
    with pytest.raises(RenderError, match="section 'same' occurs twice"):
        number((Sheet("one", "One", (section,)), Sheet("two", "Two", (section,))), book)


def test_user_words_are_escaped():
    html = render_html(_with(Section("s", "<b>S</b> & T", (Prose("a < b & c"),))), ledger(), FIGURES)
    assert "&lt;b&gt;S&lt;/b&gt; &amp; T" in html and "a &lt; b &amp; c" in html
    assert css_string('</style>"\\') == '"\\3c /style\\3e \\22 \\5c "'


def test_a_range_that_is_left_is_a_caution_on_paper():
    book = Ledger("SI")
    for name, si, kind in (("eps", 1e-3, "roughness"), ("D", 0.01, "diameter"), ("Re", 4500.0, "reynolds_number")):
        book.looked_up(name, si, name, name, kind, source="TP410")
    book.apply("f", pipe_flow.EXPLICIT, eps="eps", D="D", Re="Re")
    html = render_html(_with(Section("s", "S", (Derivation(("f",)),))), book, FIGURES)
    cautions = re.findall(r'<p class="out">(.*)</p>', html)
    assert len(cautions) == 2
    assert "outside the range 5000 ≤ <i>Re</i>" in cautions[0]


def test_cover_names_verdicts_open_items_people_and_seal(html):
    cover = html[html.index('<section class="cover">') : html.index('<section class="contents">')]
    words = " ".join(unescape(re.sub("<[^>]*>", " ", cover)).split())
    assert "2 criterion met" in words and "1 criterion not met" in words
    assert "Open items: 9" in words and "and 3 more in sheet 2" in words
    assert "rising main rerouted" in words and "licence 00000" in words
    assert ">seal<" in cover and "date of sealing" in words


def test_preliminary_release_prints_its_block_and_no_seal():
    release = Preliminary("tender", "D. Example", "licence 00000", "2026-11-30")
    html = render_html(content(ledger(), preliminary=release), ledger(), FIGURES)
    assert "released for</small>tender" in html and "date of release</small>2026-11-30" in html
    assert ">seal<" not in html


def test_contents_list_names_sheets_left_out(html):
    assert "Intake and sump: left out, the project has no sump" in html


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


def test_nothing_runs_out_of_its_page(rendered):
    """Words stay between the margins, and no two lines of a page lie on each other."""
    boxes = subprocess.run(
        ["pdftotext", "-bbox", "-", "-"], input=rendered.pdf, capture_output=True, check=True
    ).stdout.decode()
    for page in boxes.split("<page ")[1:]:
        for x0, y0, x1, y1, word in re.findall(
            r'xMin="([\d.]+)" yMin="([\d.]+)" xMax="([\d.]+)" yMax="([\d.]+)">(.*?)</word>', page
        ):
            if word in "DRAFT":
                continue
            assert float(x0) > 50 and float(x1) < 558, word
            assert float(y0) > 30 and float(y1) < 820, word


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
    with pytest.raises(RenderError, match="the PDF engine cannot start.*; on this machine: "):
        pdf.write_pdf("<p>x</p>")


@pytest.mark.parametrize(
    ("body", "words"), [('<a href="#nowhere">x</a>', "nowhere"), ('<img alt="x" src="data:image/svg+xml,%3Csvg">', "image")]
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
