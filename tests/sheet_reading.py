"""Reading of filled sheets in tests: find sheets, sections, tables and references; compute changed projects."""

from __future__ import annotations

import shutil
from pathlib import Path

from calcpack import build, hydraulics, sheets
from calcpack.hydraulics.curves import pump_curves
from calcpack.ledger import Ledger
from calcpack.sheets.content import Prose, Ref, Table
from calcpack.sheets.job import Job

LARKMERE = Path(__file__).parent.parent / "projects" / "larkmere-transfer"
ADMIN = ("verdict", "basis", "registers", "cases", "cautions", "schedules", "references", "appendix", "record")


def sheet(outcome, key):
    """The sheet of that key."""
    return next(one for one in outcome.content if one.key == key)


def section(outcome, key, section_id):
    """A section of a sheet by its id."""
    return next(one for one in sheet(outcome, key).sections if one.id == section_id)


def blocks(outcome, key, kind):
    """All blocks of one kind of a sheet."""
    return [block for one in sheet(outcome, key).sections for block in one.blocks if isinstance(block, kind)]


def table(outcome, key, caption):
    """A table of a sheet by its caption."""
    return next(block for block in blocks(outcome, key, Table) if block.caption == caption)


def refs(row):
    """The references of a table row in order."""
    cells = [cell if isinstance(cell, tuple) else (cell,) for cell in row.cells]
    return [part for cell in cells for part in cell if isinstance(part, Ref)]


def texts(outcome, key, section_id):
    """The sentences of a section."""
    return [block.text for block in section(outcome, key, section_id).blocks if isinstance(block, Prose)]


def changed(folder, *changes):
    """The demo with texts of its files replaced, computed anew."""
    copy = folder / "project"
    shutil.copytree(LARKMERE, copy, ignore=shutil.ignore_patterns("build"))
    for name, old, new in changes:
        text = (copy / name).read_text()
        assert old in text
        (copy / name).write_text(text.replace(old, new))
    return build.check(copy, lambda step: None)


def filled(model):
    """The outcome of a model that was built without files."""
    fits = {tag: pump_curves(item) for tag, item in model.system.pumps.items()}
    job = Job(model, hydraulics.solve(model), Ledger(model.units), fits)
    return build.Outcome(job, sheets.fill(job), "")
