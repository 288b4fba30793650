"""The stages in order: the one module that knows them all.

project folder -> model -> solution -> ledger and sheets -> drawings -> report -> files
"""

from __future__ import annotations

import os
import platform
import tempfile
from collections import Counter
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path

from calcpack import __version__, hydraulics, project, sheets
from calcpack.errors import CalcpackError, Problem, ProjectError
from calcpack.hydraulics.curves import pump_curves
from calcpack.ledger import Ledger
from calcpack.ledger.entry import CHECK, NOT_MET, VERDICTS
from calcpack.project.model import Project
from calcpack.project.read import STEMS, Raw, Text, read_folder
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
    _require_folder(folder)
    progress("reading the project")
    model = project.load(folder)
    progress(f"solving {_counted(len(model.cases), 'case')}")
    solution = hydraulics.solve(model)
    fits = {tag: pump_curves(pump) for tag, pump in model.system.pumps.items()}
    job = Job(model, solution, Ledger(model.units), fits, identity())
    progress("filling the sheets")
    content = sheets.fill(job)
    return Outcome(job, content, fingerprint(job))


def draft(folder: Path, progress: Progress) -> Outcome:
    """Write ``build/<document>-draft.pdf`` and ``build/results.json`` into the project folder.

    Each file is complete or as it was before. Raises ProjectError for what is wrong in the folder, RenderError
    for what cannot be drawn, CalcpackError where the files cannot be written.
    """
    outcome = check(folder, progress)
    target = folder / "build"
    _require_writable(target)
    _require_characters(folder, outcome.job.project)
    from calcpack.package import package_of
    from calcpack.pictures import pictures
    from calcpack.report.pdf import render

    progress("drawing")
    figures = pictures(outcome.job, outcome.content)
    progress(f"rendering {_counted(len(outcome.content), 'part')}")
    rendered = render(package_of(outcome.job, outcome.content, outcome.fingerprint), outcome.job.ledger, figures)
    progress("writing")
    name = "".join(c if c.isalnum() or c in "-_." else "-" for c in outcome.job.project.document.number)
    pdf, data = target / f"{name}-draft.pdf", target / "results.json"
    try:
        target.mkdir(exist_ok=True)
        # The PDF first: it is the one that a viewer may hold open.
        _write({pdf: rendered.pdf, data: results_text(outcome).encode()})
    except OSError as error:
        raise _unwritable(Path(error.filename2 or error.filename or target), error.strerror) from error
    return replace(outcome, pdf=pdf, results=data, pages=rendered.pages)


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


def _counted(number: int, noun: str) -> str:
    return f"{number} {noun}{'' if number == 1 else 's'}"


def _require_folder(folder: Path) -> None:
    """Raise ProjectError, one problem, for what is no project folder at all."""
    files = [f"{stem}.yaml" for stem in STEMS]
    try:
        found = set(os.listdir(folder))
    except FileNotFoundError:
        text, hint = "there is no such folder", "calcpack new writes a project to start from"
    except NotADirectoryError:
        text, hint = "is not a folder", f"name the project folder, which holds {', '.join(files)}"
    except OSError as error:
        text, hint = f"cannot be read: {error.strerror}", ""
    else:
        if found.intersection(files):
            return
        text, hint = "is no project folder", f"one holds {', '.join(files)}; calcpack new writes them"
    raise ProjectError([Problem(str(folder), 0, "", text, hint)])


def _require_writable(target: Path) -> None:
    """Say before the long work that its files could not be written."""
    if target.exists() and not target.is_dir():
        raise _unwritable(target, "it is not a folder")
    if not os.access(target if target.exists() else target.parent, os.W_OK | os.X_OK):
        raise _unwritable(target, "no permission")


def _unwritable(path: Path, reason: str | None) -> CalcpackError:
    return CalcpackError(f"{path}: cannot be written: {reason or 'unknown reason'}")


def _require_characters(folder: Path, model: Project) -> None:
    """Raise ProjectError for characters that no bundled font draws: every line of the input files is printed."""
    from calcpack.report.fonts import missing_characters

    problems = []
    for file in model.files:
        for number, line in enumerate(file.text.splitlines(), start=1):
            if missing := missing_characters(line):
                problems.append(_undrawn(file.name, number, missing))
    written = {file.name: file.text for file in model.files}
    for raw in read_folder(folder).data.values():  # a text in quotes may name a character: "\u4E00"
        for text in _texts(raw):
            if missing := [char for char in missing_characters(text) if char not in written[text.file]]:
                problems.append(_undrawn(text.file, text.line, missing))
    if problems:
        raise ProjectError(problems)


def _undrawn(file: str, line: int, chars: list[str]) -> Problem:
    named = ", ".join(f"'{char}' U+{ord(char):04X}" if char.isprintable() else f"U+{ord(char):04X}" for char in chars)
    text = f"the fonts of the package do not hold the character{'' if len(chars) == 1 else 's'} {named}"
    return Problem(file, line, "", text, "write it with Latin or Greek letters and common signs, in comments too")


def _texts(raw: Raw | None) -> Iterator[Text]:
    if isinstance(raw, Text):
        yield raw
    elif raw is not None:
        for part in raw.values() if isinstance(raw, dict) else raw:
            yield from _texts(part)


def _write(files: dict[Path, bytes]) -> None:
    """Write every file beside its place, then move all of them: none is ever half there."""
    ready: dict[Path, Path] = {}
    try:
        for path, data in files.items():
            handle, temporary = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}-")
            ready[path] = Path(temporary)
            with os.fdopen(handle, "wb") as stream:
                stream.write(data)
            os.chmod(temporary, 0o644)
        for path, temporary in ready.items():
            os.replace(temporary, path)
    finally:
        for temporary in ready.values():
            temporary.unlink(missing_ok=True)
