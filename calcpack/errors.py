"""What can go wrong, said so that an engineer can mend it."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, order=True)
class Problem:
    """One thing wrong in one place of a project folder.

    ``file`` and ``line`` (1-based; 0 where no line applies) say where, ``where`` names the tag or key,
    ``text`` what is wrong and ``hint`` what would be right.
    """

    file: str
    line: int
    where: str
    text: str
    hint: str = ""

    def __str__(self) -> str:
        place = f"{self.file}:{self.line}" if self.line else self.file
        where = f"{self.where}: " if self.where else ""
        hint = f"; {self.hint}" if self.hint else ""
        return f"{place}: {where}{self.text}{hint}"


class CalcpackError(Exception):
    """Base of every error that calcpack raises on purpose."""


class ProjectError(CalcpackError):
    """The project folder cannot be read as a model; carries every problem found, in file and line order."""

    def __init__(self, problems: list[Problem]) -> None:
        self.problems = sorted(set(problems))
        super().__init__("\n".join(str(problem) for problem in self.problems))


class FormulaError(CalcpackError):
    """A formula declaration or expression text is not acceptable."""


class LedgerError(CalcpackError):
    """An entry cannot be booked: duplicate id, unknown operand or wrong kind."""


class UnitError(CalcpackError):
    """A text is not a quantity of the wanted kind; ``hint`` says what would be."""

    def __init__(self, text: str, hint: str = "") -> None:
        self.text = text
        self.hint = hint
        super().__init__(f"{text}; {hint}" if hint else text)


class RenderError(CalcpackError):
    """The package cannot be drawn or written, for example because the PDF engine is missing."""
