"""What every block of the input files has in common: strict keys, and reading on after a mistake.

A wrong key or value is reported and replaced by :data:`BROKEN`, so that one mistake hides no other. Nothing that holds
BROKEN leaves ``project.load``: it raises as soon as anything was reported.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from typing import Annotated, Any, Literal

from pydantic import BaseModel, ConfigDict, Field, ValidationError, WrapValidator, field_validator, model_validator
from pydantic_core.core_schema import ValidationInfo

from calcpack.project.problems import Problems, nearest
from calcpack.project.read import Section
from calcpack.project.schema.messages import complaint
from calcpack.values import CONFIRMED, UNCONFIRMED

Status = Literal["confirmed", "unconfirmed"]


class _Broken:
    """Stands for a part of the input that could not be read and was reported."""

    def __repr__(self) -> str:
        return "BROKEN"

    def __bool__(self) -> bool:
        return False


BROKEN: Any = _Broken()


def intact(*parts: object) -> bool:
    """True when none of the parts is BROKEN."""
    return not any(part is BROKEN for part in parts)


@dataclass
class Reading:
    """Context of one reading: where problems go, the unit system for hints, and the origin that blocks state."""

    problems: Problems
    units: str
    origins: list[tuple[str, str]] = field(default_factory=lambda: [("", "")])

    @contextmanager
    def block(self, raw: Section) -> Iterator[None]:
        """While a block is read, the ``source`` and ``status`` that it states hold for the values in it.

        A block that names a source of its own is unconfirmed unless it says otherwise.
        """
        source = str(raw.get("source", self.origins[-1][0]))
        status = str(raw.get("status", UNCONFIRMED if "source" in raw else self.origins[-1][1]))
        if raw.get("status") == CONFIRMED and not source:
            at = raw["status"]
            text, hint = "said to be confirmed, but no source is named", "add source: '...'"
            self.problems.add_at(raw.path, at.file, at.line, text, hint)
        self.origins.append((source, status))
        try:
            yield
        finally:
            self.origins.pop()


def tolerant(raw: Any, handler: Callable[[Any], Any], info: ValidationInfo) -> Any:
    """Validate; on a mistake report it and go on with BROKEN."""
    if raw is BROKEN:
        return BROKEN
    try:
        return handler(raw)
    except ValidationError as error:
        for detail in error.errors(include_url=False):
            info.context.problems.add(*complaint(raw, detail))
        return BROKEN


Tolerant = WrapValidator(tolerant)


class Input(BaseModel):
    """A block of keys. Unknown and missing keys are reported; so is every value that does not fit."""

    model_config = ConfigDict(frozen=True, extra="forbid", str_strip_whitespace=True)

    @model_validator(mode="wrap")
    @classmethod
    def _read_on(cls, raw: Any, handler: Callable[[Any], Any], info: ValidationInfo) -> Any:
        if raw is BROKEN:
            return BROKEN
        problems = info.context.problems
        keys = {(entry.alias or name): entry for name, entry in cls.model_fields.items()}
        if not isinstance(raw, Section):
            problems.add(raw, "a block of keys is wanted here", f"keys: {', '.join(keys)}")
            return BROKEN
        known = {key: value for key, value in raw.items() if key in keys}
        for key in raw.keys() - keys.keys():
            free = [name for name in keys if name not in raw]
            if free_meant := nearest(key, free):
                known[free_meant] = BROKEN
            meant = free_meant or nearest(key, keys)
            hint = f"did you mean '{meant}'?" if meant else f"known: {', '.join(keys)}"
            at = raw[key]
            problems.add_at(raw.path, at.file, at.line, f"'{key}' is not known here", hint)
        for key, entry in keys.items():
            if entry.is_required() and key not in known:
                known[key] = BROKEN
                problems.add(raw, f"'{key}' is missing", _purpose(entry.description))
        if not issubclass(cls, Sourced):
            return handler(known)
        with info.context.block(raw):
            return handler(known)

    @field_validator("*", mode="wrap")
    @classmethod
    def _tolerate(cls, raw: Any, handler: Callable[[Any], Any], info: ValidationInfo) -> Any:
        return tolerant(raw, handler, info)


class Sourced(Input):
    """A block whose ``source`` and ``status`` hold for every value in it that states none of its own."""

    source: Annotated[
        str, Field(description="document and place that the values of this block come from, unless one names its own")
    ] = ""
    status: Annotated[
        Status | None, Field(description=f"{CONFIRMED} or {UNCONFIRMED}: holds for the values of this block")
    ] = None


def _purpose(description: str | None) -> str:
    return f"it is: {description}" if description else ""
