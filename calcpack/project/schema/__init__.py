"""The input files as declared blocks of keys: what may stand where, in which form, and what it means.

``document``, ``system``, ``pumps``, ``cases``   the four files
``base``, ``leaves``, ``messages``               how blocks, values and mistakes are read
``export``                                       JSON Schema of the files, for editors
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from pydantic import TypeAdapter

from calcpack.project.problems import Problems
from calcpack.project.read import Section
from calcpack.project.schema.base import BROKEN, Reading
from calcpack.project.schema.cases import CaseInput
from calcpack.project.schema.document import ProjectFile
from calcpack.project.schema.leaves import Named
from calcpack.project.schema.pumps import PumpInput
from calcpack.project.schema.system import SystemFile
from calcpack.quantities import SYSTEMS

FILE_TYPES: dict[str, Any] = {
    "project": ProjectFile,
    "system": SystemFile,
    "pumps": Named[PumpInput],
    "cases": Named[CaseInput],
}
_ADAPTERS = {stem: TypeAdapter(type_) for stem, type_ in FILE_TYPES.items()}


@dataclass(frozen=True)
class Inputs:
    """The four files as validated; each may be or hold BROKEN."""

    project: ProjectFile
    system: SystemFile
    pumps: Mapping[str, PumpInput]
    cases: Mapping[str, CaseInput]


def validate(stem: str, raw: Section | None, units: str, problems: Problems) -> Any:
    """One file as its declared type; mistakes go to ``problems`` and leave BROKEN in their place."""
    if raw is None:
        return BROKEN
    return _ADAPTERS[stem].validate_python(raw, context=Reading(problems, units))


def validate_all(data: Mapping[str, Section | None], problems: Problems) -> Inputs:
    """All four files; ``data`` is what ``read_folder`` gave."""
    units = units_of(data)
    return Inputs(**{stem: validate(stem, raw, units, problems) for stem, raw in data.items()})


def units_of(data: Mapping[str, Section | None]) -> str:
    """Unit system of the project for hints, before anything is validated."""
    project = data.get("project")
    units = project.get("units") if project else None
    return str(units) if units in SYSTEMS else SYSTEMS[0]
