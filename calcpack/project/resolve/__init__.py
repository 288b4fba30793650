"""Validated input -> the frozen model: names followed, table rows looked up, everything cross-checked.

``draft``      what is being resolved and where problems go
``document``   project.yaml
``site``, ``pipes``, ``lines``, ``pumps``, ``network``, ``system``   the physical system
``overrides``, ``cases``   operating cases
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import fields, is_dataclass, replace

from calcpack.project.model import InputFile, Project
from calcpack.project.read import STEMS
from calcpack.project.resolve.cases import resolve_cases
from calcpack.project.resolve.document import resolve_document
from calcpack.project.resolve.draft import Draft
from calcpack.project.resolve.system import resolve_system
from calcpack.project.schema.base import BROKEN
from calcpack.values import Value

_FILE_ORDER = {f"{stem}.yaml": at for at, stem in enumerate(STEMS)}


def resolve(draft: Draft, folder: str, files: tuple[InputFile, ...]) -> Project | None:
    """The project; None once problems were reported, be they older or found here."""
    document = {} if draft.inputs.project is BROKEN else resolve_document(draft)
    system = resolve_system(draft)
    cases = resolve_cases(draft, system)
    if draft.problems:
        return None
    project = Project(folder=folder, system=system, cases=cases, values=(), files=files, **document)
    return replace(project, values=_values_of(project))


def _values_of(project: Project) -> tuple[Value, ...]:
    """Every Value of the model once, in file and line order."""
    found = dict.fromkeys(_walk(project, set()))
    return tuple(sorted(found, key=lambda value: (_FILE_ORDER[value.file], value.line)))


def _walk(part: object, seen: set[int]) -> Iterator[Value]:
    if isinstance(part, Value):
        yield part
    elif is_dataclass(part):
        if id(part) not in seen:  # cases share the base system
            seen.add(id(part))
            for one in fields(part):
                yield from _walk(getattr(part, one.name), seen)
    elif isinstance(part, Mapping):
        for one in part.values():
            yield from _walk(one, seen)
    elif isinstance(part, tuple):
        for one in part:
            yield from _walk(one, seen)
