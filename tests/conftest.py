"""Fixtures that several test modules share: the demo project computed once."""

from pathlib import Path

import pytest

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
