"""Everything found wrong while a folder is read, each with its place and a name that an engineer knows."""

from __future__ import annotations

import difflib
from collections.abc import Iterable

from calcpack.errors import Problem
from calcpack.project.read import Raw

_ITEMS = {
    ("system", "nodes"): "node", ("system", "lines"): "line", ("system", "equipment"): "equipment",
}  # fmt: skip
_FILES = {"pumps": "pump", "cases": "case"}
_ELEMENTS = {
    "fittings": "fitting", "points": "point", "profile": "profile point", "people": "person", "documents": "document",
    "assumptions": "assumption", "notes": "note", "exclusions": "exclusion", "revisions": "revision",
    "basis": "basis paragraph", "purposes": "purpose", "flags": "flag", "equipment": "item",
}  # fmt: skip


class Problems(list[Problem]):
    """A growing list of problems."""

    def add(self, raw: Raw, text: str, hint: str = "") -> None:
        """Report something wrong at a piece of input."""
        self.add_at(raw.path, raw.file, raw.line, text, hint)

    def add_at(self, path: str, file: str, line: int, text: str, hint: str = "") -> None:
        """Report something wrong with the input of that path, standing in that line."""
        self.append(Problem(file, line, place_name(path), text, hint))

    def adopt(self, others: Problems, case: str) -> None:
        """Take over what only the overrides of a case brought up."""
        known = set(self)
        for problem in others:
            if problem not in known:
                where = f"case {case}, {problem.where}" if problem.file != "cases.yaml" else problem.where
                self.append(Problem(problem.file, problem.line, where, problem.text, problem.hint))


def place_name(path: str) -> str:
    """``"system.lines.L-103.fittings.2.K"`` -> ``"line L-103, fitting 3, K"``."""
    parts = path.split(".")
    if tuple(parts[:2]) in _ITEMS and len(parts) > 2:
        head, rest = f"{_ITEMS[tuple(parts[:2])]} {parts[2]}", parts[3:]
    elif parts[0] in _FILES and len(parts) > 1:
        head, rest = f"{_FILES[parts[0]]} {parts[1]}", parts[2:]
    else:
        head, rest = "", parts[1:]
    words = [head] if head else []
    for before, part in zip(["", *rest], rest, strict=False):
        if part.isdecimal() and before.isdecimal():
            words.append(f"number {int(part) + 1}")
        elif part.isdecimal() and words:
            words[-1] = f"{_ELEMENTS.get(words[-1], words[-1])} {int(part) + 1}"
        else:
            words.append(part)
    return ", ".join(words)


def suggestion(word: str, known: Iterable[str]) -> str:
    """What would be right instead of ``word``: the nearest known word, else all of them."""
    names = list(dict.fromkeys(known))
    near = nearest(word, names)
    if near:
        return f"did you mean '{near}'?"
    return f"known: {', '.join(names)}" if names else "none is declared"


def nearest(word: str, known: Iterable[str]) -> str:
    """The known word most like ``word``, or nothing."""
    lower = {}
    for name in known:
        lower.setdefault(name.lower(), name)
    close = difflib.get_close_matches(word.lower(), lower, n=1, cutoff=0.6)
    return lower[close[0]] if close else ""
