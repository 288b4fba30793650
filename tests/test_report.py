"""The package as HTML: links both ways, numbers of sheets and lines, the cover, and what is refused."""

from __future__ import annotations

import re
from collections import Counter
from dataclasses import replace
from html import unescape
from html.parser import HTMLParser
from itertools import pairwise

import jinja2
import pytest
from report_sample import SVG, content, ledger, sheets

from calcpack.errors import RenderError
from calcpack.formulas import pipe_flow
from calcpack.ledger import Ledger
from calcpack.report import pages
from calcpack.report.anchors import entry_anchor, fragment, identifier
from calcpack.report.content import CoverContent, Preliminary
from calcpack.report.numbering import FEW, number
from calcpack.report.pages import render_html
from calcpack.report.style import css_string
from calcpack.sheets.content import Column, Derivation, Figure, Prose, Ref, Row, Section, Sheet, Table

FIGURES = {"curve": SVG}


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
    assert all(later <= earlier + 1 for earlier, later in pairwise(levels))


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


def test_a_sheet_may_have_a_template_of_its_own(monkeypatch):
    own = '{% extends "sheet.html" %}{% block lead %}<p>own words</p>{% endblock %}'
    loader = jinja2.ChoiceLoader([jinja2.DictLoader({"sheets/one.html": own}), pages.environment().loader])
    monkeypatch.setattr(pages, "environment", lambda: pages_environment(loader))
    html = render_html(_with(Section("s", "S", (Prose("said"),))), ledger(), FIGURES)
    assert html.index("own words") < html.index(">said<")


def pages_environment(loader: jinja2.BaseLoader) -> jinja2.Environment:
    return jinja2.Environment(loader=loader, autoescape=True, undefined=jinja2.StrictUndefined)
