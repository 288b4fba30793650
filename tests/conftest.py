"""Fixtures that several test modules share: the demo project computed once."""

import os
import shutil
from pathlib import Path

import pytest
from hypothesis import settings

# The same examples on every run, so that a red run can be repeated; CALCPACK_EXPLORE=1 draws new ones.
settings.register_profile("steady", derandomize=True, deadline=None)
settings.register_profile("explore", deadline=None)
settings.load_profile("explore" if os.environ.get("CALCPACK_EXPLORE") else "steady")

ROOT = Path(__file__).parent.parent
LARKMERE = ROOT / "projects" / "larkmere-transfer"
SMALL = ROOT / "tests" / "projects" / "small"


def quiet(step: str) -> None:
    """Progress that nobody watches."""


def edit(folder: Path, file: str, old: str, new: str) -> None:
    """Put ``new`` in the place of the one ``old`` of an input file."""
    text = (folder / file).read_text(encoding="utf-8")
    assert text.count(old) == 1, f"{file} holds {old!r} {text.count(old)} times"
    (folder / file).write_text(text.replace(old, new), encoding="utf-8")


@pytest.fixture
def small(tmp_path) -> Path:
    """A copy of the small project, to edit."""
    return Path(shutil.copytree(SMALL, tmp_path / "small", ignore=shutil.ignore_patterns("build")))


@pytest.fixture(scope="session")
def larkmere():
    """Outcome of ``check`` on demo 1."""
    from calcpack import build

    return build.check(LARKMERE, quiet)


@pytest.fixture(scope="session")
def larkmere_us():
    """Outcome of ``check`` on the US-unit copy of demo 1."""
    from calcpack import build

    return build.check(ROOT / "tests" / "projects" / "larkmere-us", quiet)


@pytest.fixture(scope="session")
def larkmere_draft(tmp_path_factory):
    """Outcome of ``draft`` on a copy of demo 1: the files stand in the ``build`` folder of the copy."""
    from calcpack import build

    folder = tmp_path_factory.mktemp("draft") / "larkmere"
    shutil.copytree(LARKMERE, folder, ignore=shutil.ignore_patterns("build"))
    return build.draft(folder, quiet)
