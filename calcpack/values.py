"""A number that knows where it came from: the leaf of the project model."""

from __future__ import annotations

from dataclasses import dataclass

CONFIRMED = "confirmed"
UNCONFIRMED = "unconfirmed"
SUPPLIED = "supplied by the program"
LOOKED_UP = "looked up"


@dataclass(frozen=True)
class Value:
    """One quantity of the project.

    ``si`` is the SI float; ``text`` the number and unit as written (``"9.5 m"``). ``status`` is confirmed,
    unconfirmed, looked up (catalog row or liquid property), or supplied by the program (then it is an assumption).
    ``source`` is the user's own words for confirmed and unconfirmed values, a key of the bibliography for the other
    two, with ``locator`` the row or clause. ``path`` is the input path such as ``system.lines.L-103.length``.
    """

    si: float
    kind: str
    text: str
    source: str = ""
    locator: str = ""
    status: str = UNCONFIRMED
    tolerance: float | None = None
    note: str = ""
    path: str = ""
    file: str = ""
    line: int = 0

    @property
    def is_assumption(self) -> bool:
        """True when the program, not the user, supplied the number."""
        return self.status == SUPPLIED

    @property
    def is_open(self) -> bool:
        """True while nobody has confirmed the number."""
        return self.status in (UNCONFIRMED, SUPPLIED)
