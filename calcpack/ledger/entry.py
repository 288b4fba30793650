"""One booked number: what it is, what made it, and where it came from."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.digits import DEFAULT_DIGITS

# Origins of an entry.
GIVEN = "given"  # input of the project
ASSUMED = "assumed"  # supplied by the program: a numbered assumption
LOOKED_UP = "looked up"  # catalog row or property
APPLIED = "applied"  # formula
SOLVED = "solved"  # found by iteration: equation, value, residual
CHOSEN = "chosen"  # from candidates, with the reason
SERIES = "series"  # a plotted curve
CHECK = "check"  # value against limit
ORIGINS = (GIVEN, ASSUMED, LOOKED_UP, APPLIED, SOLVED, CHOSEN, SERIES, CHECK)

# Verdicts of a check; the wording is the same everywhere.
MET = "criterion met"
MET_WITH_WARNING = "criterion met, with a warning"
NOT_MET = "criterion not met"
NOT_CHECKED = "not checked"
OUT_OF_RANGE = "method out of range"
REFER = "refer to a specialist"
VERDICTS = (MET, MET_WITH_WARNING, NOT_MET, NOT_CHECKED, OUT_OF_RANGE, REFER)

# Comparisons of a check.
AT_MOST = "≤"
AT_LEAST = "≥"
COMPARISONS = (AT_MOST, AT_LEAST)

OperandIds = str | tuple[str, ...]


@dataclass(frozen=True)
class Citation:
    """A source key of the bibliography with the place in it; or, for inputs, the document the user named."""

    key: str = ""
    locator: str = ""
    text: str = ""


@dataclass
class Entry:
    """A number of the package (all SI).

    ``operands`` maps each symbol of the formula to the id of its entry, or to a tuple of ids for a list operand.
    ``written`` is an input's own text, ``place`` its file and line, ``path`` its input path. ``digits`` is how many
    significant digits it prints with, everywhere. A ``check`` holds the value's and the limit's entries in operands
    'value' and 'limit' and its margin as ``value``; a ``chosen`` entry holds the choice as ``choice``; a ``series``
    has points instead of a value.
    """

    id: str
    title: str
    symbol: str
    kind: str
    value: float
    origin: str
    formula: str = ""
    operands: dict[str, OperandIds] | None = None
    citation: Citation = Citation()
    status: str = ""
    case: str = ""
    note: str = ""
    written: str = ""
    place: str = ""
    path: str = ""
    digits: int = DEFAULT_DIGITS
    residual: float | None = None
    choice: str = ""
    comparison: str = ""
    verdict: str = ""
    warning: str = ""
    findings: tuple[str, ...] = ()
    points: tuple[tuple[float, float], ...] = ()
    points_kind: str = ""

    def operand_ids(self) -> tuple[str, ...]:
        """Ids of every operand, list operands opened, in order."""
        ids: list[str] = []
        for operand in (self.operands or {}).values():
            ids.extend([operand] if isinstance(operand, str) else operand)
        return tuple(ids)
