"""The stages in order: the one module that knows them all.

project folder -> model -> solution -> ledger and sheets -> drawings -> report -> files
"""

from __future__ import annotations

import os
import platform
import tempfile
from collections import Counter
from collections.abc import Callable
from dataclasses import dataclass
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path

from calcpack import __version__, hydraulics, project, sheets
from calcpack.errors import CalcpackError
from calcpack.hydraulics.curves import pump_curves
from calcpack.ledger import Ledger
from calcpack.ledger.entry import CHECK, NOT_MET, VERDICTS
from calcpack.results import results, to_json
from calcpack.sheets.appendix import fingerprint
from calcpack.sheets.content import Sheet
from calcpack.sheets.job import Job

LIBRARIES = ("numpy", "scipy", "iapws", "fluids", "weasyprint", "matplotlib")
Progress = Callable[[str], None]


@dataclass(frozen=True)
class Outcome:
    """A filled job with its sheets; ``pdf`` and ``results`` are set once files were written."""

    job: Job
    content: tuple[Sheet, ...]
    fingerprint: str
    pdf: Path | None = None
    results: Path | None = None
    pages: int = 0

    @property
    def verdicts(self) -> dict[str, int]:
        """How many criteria ended in each verdict, in the order of severity known to the ledger."""
        counts = Counter(entry.verdict for entry in self.job.ledger.of_origin(CHECK))
        return {verdict: counts[verdict] for verdict in VERDICTS if counts[verdict]}

    @property
    def not_met(self) -> bool:
        """True when at least one criterion is not met."""
        return NOT_MET in self.verdicts


def check(folder: Path, progress: Progress) -> Outcome:
    """Read, validate, solve and fill the ledger. Raises ProjectError with every problem of the folder."""
    progress("reading the project")
    model = project.load(folder)
    progress(f"solving {len(model.cases)} cases")
    solution = hydraulics.solve(model)
    fits = {tag: pump_curves(pump) for tag, pump in model.system.pumps.items()}
    job = Job(model, solution, Ledger(model.units), fits, identity())
    progress("filling the sheets")
    content = sheets.fill(job)
    return Outcome(job, content, fingerprint(job))


def draft(folder: Path, progress: Progress) -> Outcome:
    """Write ``build/<document>-draft.pdf`` and ``build/results.json`` into the project folder.

    Both files are complete or not there: each is written beside its place and moved.
    """
    outcome = check(folder, progress)
    from calcpack.package import package_of
    from calcpack.pictures import pictures
    from calcpack.report.pdf import render

    progress("drawing")
    figures = pictures(outcome.job, outcome.content)
    progress(f"rendering {len(outcome.content)} sheets")
    rendered = render(package_of(outcome.job, outcome.content, outcome.fingerprint), outcome.job.ledger, figures)
    target = folder / "build"
    name = "".join(c if c.isalnum() or c in "-_." else "-" for c in outcome.job.project.document.number)
    pdf, data = target / f"{name}-draft.pdf", target / "results.json"
    try:
        target.mkdir(exist_ok=True)
        _replace(data, results_text(outcome).encode())
        _replace(pdf, rendered.pdf)
    except OSError as error:
        raise CalcpackError(f"{target}: cannot be written: {error.strerror}") from error
    return Outcome(outcome.job, outcome.content, outcome.fingerprint, pdf, data, rendered.pages)


def results_text(outcome: Outcome) -> str:
    """``results.json`` of an outcome."""
    return to_json(results(outcome.job, outcome.fingerprint))


def identity() -> dict[str, str]:
    """What computes: program and library versions. The same on every run of one installation."""
    found = {"program": f"calcpack {__version__}", "python": platform.python_version()}
    for name in LIBRARIES:
        try:
            found[name] = version(name)
        except PackageNotFoundError:
            found[name] = "not installed"
    return found


def _replace(path: Path, data: bytes) -> None:
    handle, temporary = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}-")
    try:
        with os.fdopen(handle, "wb") as stream:
            stream.write(data)
        os.chmod(temporary, 0o644)
        os.replace(temporary, path)
    except BaseException:
        Path(temporary).unlink(missing_ok=True)
        raise
