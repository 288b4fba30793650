"""Fixtures that several test modules share: the demo project computed once."""

import os
from pathlib import Path

import pytest
from hypothesis import settings

# The same examples on every run, so that a red run can be repeated; CALCPACK_EXPLORE=1 draws new ones.
settings.register_profile("steady", derandomize=True, deadline=None)
settings.register_profile("explore", deadline=None)
settings.load_profile("explore" if os.environ.get("CALCPACK_EXPLORE") else "steady")

ROOT = Path(__file__).parent.parent
LARKMERE = ROOT / "projects" / "larkmere-transfer"


def quiet(step: str) -> None:
    """Progress that nobody watches."""


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
