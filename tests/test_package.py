"""The demo package as a whole: every number has a home and a link, the text says what it should, the file is stable."""

from __future__ import annotations

import json
import os
import re
import shutil
import subprocess
import sys
from collections import Counter
from dataclasses import dataclass, field
from html.parser import HTMLParser
from shutil import which

import pytest
from conftest import LARKMERE, ROOT, quiet

from calcpack import build
from calcpack.catalog.sources import load_sources
from calcpack.formulas import FORMULAS
from calcpack.ledger import Ledger
from calcpack.ledger.text import display_text, number_text, unit_of
from calcpack.package import package_of
from calcpack.pictures import pictures
from calcpack.report.anchors import entry_anchor, identifier
from calcpack.report.numbering import Numbering, number
from calcpack.report.pages import render_html
from calcpack.sheets.content import Derivation, Figure, Listing

FEWEST_PAGES, MOST_PAGES = 20, 45
FORBIDDEN = re.compile(r"\b(safe|safely|approved|compliant)\b", re.IGNORECASE)
UNFORMATTED = re.compile(r"\b(nan|inf|None|True|False)\b|(?<![0-9A-Za-z])\d+(\.\d+)?e[-+]?\d+|\d\.\d{10,}")
needs_poppler = pytest.mark.skipif(which("pdftotext") is None, reason="needs pdftotext of Poppler to read pages")


class Page(HTMLParser):
    """Ids, addresses and images of a document, and the addresses that stand in the equations of each entry."""

    def __init__(self, html: str) -> None:
        super().__init__()
        self.ids: list[str] = []
        self.hrefs: list[str] = []
        self.images: list[dict[str, str]] = []
        self.equations: dict[str, set[str]] = {}
        self._entry, self._inside = "", False
        self.feed(html)

    def handle_starttag(self, tag, attrs):
        found = dict(attrs)
        if "id" in found:
            self.ids.append(found["id"])
        if tag == "div" and found.get("class") == "e":
            self._entry = found.get("id", "")
        if tag == "article":
            self._inside = True
        if tag == "a":
            self.hrefs.append(found["href"])
            if self._inside and self._entry:
                self.equations.setdefault(self._entry, set()).add(found["href"])
        if tag == "img":
            self.images.append(found)

    def handle_endtag(self, tag):
        if tag == "article":
            self._inside = False


@dataclass
class Package:
    """What is looked at: the outcome, the HTML as read, and the numbering."""

    outcome: build.Outcome
    ledger: Ledger = field(init=False)
    page: Page = field(init=False)
    numbering: Numbering = field(init=False)

    def __post_init__(self) -> None:
        self.ledger = self.outcome.job.ledger
        figures = pictures(self.outcome.job, self.outcome.content)
        package = package_of(self.outcome.job, self.outcome.content, self.outcome.fingerprint)
        self.page = Page(render_html(package, self.ledger, figures))
        self.numbering = number(self.outcome.content, self.ledger)

    def blocks(self, kind: type) -> list:
        return [block for sheet in self.outcome.content for section in sheet.sections for block in section.blocks
                if isinstance(block, kind)]


@pytest.fixture(scope="module", params=["SI", "US", "starter"])
def package(request) -> Package:
    if request.param == "starter":
        return Package(build.check(ROOT / "calcpack" / "project" / "starter", quiet))
    return Package(request.getfixturevalue("larkmere" if request.param == "SI" else "larkmere_us"))


def test_every_entry_has_a_home_and_every_home_is_there(package):
    assert package.numbering.homeless(package.ledger) == []
    assert {home.anchor for home in package.numbering.homes.values()} <= set(package.page.ids)


def test_every_link_has_its_target_and_no_target_is_there_twice(package):
    assert [one for one, count in Counter(package.page.ids).items() if count > 1] == []
    assert all(href.startswith("#") for href in package.page.hrefs) and len(package.page.hrefs) > 500
    assert {href[1:] for href in package.page.hrefs} <= set(package.page.ids)


def test_every_operand_of_every_line_links_to_the_line_that_made_it(package):
    derived = {entry_id for block in package.blocks(Derivation) for entry_id in block.ids}
    looked_at = 0
    for anchor, hrefs in package.page.equations.items():
        entry = package.ledger[identifier(anchor.removeprefix("e-"))]
        if not entry.formula:
            continue
        for operand in entry.operand_ids():
            address = package.numbering.address(operand)
            assert address in hrefs, f"{entry.id}: {operand} is not linked"
            if operand in derived:
                assert address == f"#{entry_anchor(operand)}"
            looked_at += 1
    assert looked_at > 100


def test_every_equation_stands_on_paper_once_written_out(package):
    used = {FORMULAS[entry.formula].equation.text for entry in package.ledger if entry.formula and not entry.points}
    shown = {package.ledger[entry_id].formula for block in package.blocks(Derivation) for entry_id in block.ids}
    assert used == {FORMULAS[one].equation.text for one in shown if one} and len(used) > 20


def test_every_figure_has_a_text_alternative_with_its_numbers(package):
    figures = package.blocks(Figure)
    assert len(figures) == len(package.page.images) >= 2
    for image in package.page.images:
        assert len(image["alt"]) > 40 and "{" not in image["alt"]
    assert sum(bool(re.search(r"\d", image["alt"])) for image in package.page.images) >= 2


# The file.


@pytest.fixture(scope="module")
def pages(larkmere_draft) -> list[str]:
    """Text of each page of demo 1, with single spaces."""
    raw = subprocess.run(
        ["pdftotext", str(larkmere_draft.pdf), "-"], capture_output=True, check=True
    ).stdout.decode()
    return [" ".join(text.split()) for text in raw.split("\f")[:-1]]


def test_draft_writes_a_package_of_a_sensible_size(larkmere_draft):
    assert {path.name for path in larkmere_draft.pdf.parent.iterdir()} == {"LK-CAL-101-draft.pdf", "results.json"}
    assert FEWEST_PAGES <= larkmere_draft.pages <= MOST_PAGES
    assert larkmere_draft.pdf.stat().st_size < 2_000_000


def test_results_beside_the_package_are_those_of_check(larkmere_draft, larkmere):
    written = larkmere_draft.results.read_text(encoding="utf-8")
    assert written == build.results_text(larkmere)
    assert json.loads(written)["fingerprint"] == larkmere_draft.fingerprint


def test_same_bytes_from_another_process_place_hash_seed_and_time_zone(larkmere_draft, tmp_path):
    folder = tmp_path / "elsewhere" / "larkmere"
    shutil.copytree(LARKMERE, folder, ignore=shutil.ignore_patterns("build"))
    subprocess.run(
        [sys.executable, "-m", "calcpack", "draft", "larkmere"], cwd=folder.parent, check=True, capture_output=True,
        env={**os.environ, "PYTHONHASHSEED": "7", "TZ": "Asia/Tokyo", "LC_ALL": "C", "PYTHONPATH": str(ROOT)},
    )
    for path in (larkmere_draft.results, larkmere_draft.pdf):
        assert (folder / "build" / path.name).read_bytes() == path.read_bytes(), path.name


@needs_poppler
def test_every_page_is_numbered_and_marked(larkmere_draft, pages):
    assert len(pages) == larkmere_draft.pages
    mark = " ".join(re.findall("....", larkmere_draft.fingerprint)[:4])
    for place, text in enumerate(pages, start=1):
        assert f"sheet {place} of {larkmere_draft.pages}" in text and f"fingerprint {mark}" in text


@needs_poppler
def test_the_text_holds_the_key_results(larkmere_draft, pages):
    ledger = larkmere_draft.job.ledger
    text, verdict = " ".join(pages), pages[2]
    for symbol in ("Q", "H_sys", "eta", "NPSHA", "r_N", "p_s", "p_d", "P_s"):
        shown = display_text(ledger[f"P-101/{symbol}@1"], "SI").replace("\u00a0", " ")
        assert shown in verdict, f"{symbol}: {shown}"
    for line in ("L-101", "L-102", "L-103"):
        for case in larkmere_draft.job.cases:
            loss = ledger[f"{line}/h_L@{case.id}"]
            assert number_text(loss, unit_of(loss, "SI")) in text, loss.id
    # independent figures of the demo, to the digits that its tolerance leaves
    assert re.search(r"101\.\d+ m³/h", verdict) and re.search(r"43\.6\d m", verdict)
    for name in ("Settled-water transfer", "LK-CAL-101", "Criterion met, with a warning", "Hand-check"):
        assert name in text, name


@needs_poppler
def test_verdicts_stay_arithmetic(larkmere_draft, pages):
    """No word of the package calls a design fit for use; titles of sources and the user's own files are quotations."""
    text = " ".join(pages)
    for quoted in (*(one.title for one in load_sources().values()), *_listed(larkmere_draft)):
        text = text.replace(" ".join(quoted.split()), "")
    assert [match.group() for match in FORBIDDEN.finditer(text)] == []
    assert "criterion met / not met is arithmetic, not approval" in text


def _listed(outcome: build.Outcome) -> list[str]:
    blocks = [block for sheet in outcome.content for section in sheet.sections for block in section.blocks]
    return [line for block in blocks if isinstance(block, Listing) for line in block.text.splitlines() if line.strip()]


@needs_poppler
def test_no_number_was_left_unformatted(pages):
    found = [match.group() for text in pages for match in UNFORMATTED.finditer(text)]
    assert found == []


@pytest.mark.parametrize(
    ("text", "caught"),
    [("value nan m", "nan"), ("1.7e-13", "1.7e-13"), ("3e5 Pa", "3e5"), ("0.30000000000000004", "0.30000000000000004"),
     ("None", "None"), ("information 1a19e6 none 43.66 m", None)],
)
def test_the_search_finds_what_it_looks_for(text, caught):
    found = UNFORMATTED.search(text)
    assert (found and found.group()) == caught
