"""project.yaml: title block, people, requirement and statements."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

from calcpack.project.model import (
    Document,
    Economy,
    Person,
    Requirement,
    RevisionNote,
    SourceDocument,
    Statement,
)
from calcpack.project.problems import suggestion
from calcpack.project.resolve.draft import Draft
from calcpack.project.schema.base import BROKEN, Input, intact
from calcpack.project.schema.document import ProjectFile
from calcpack.values import Value

ORIGINATOR, CHECKER = "originator", "checker"


def resolve_document(draft: Draft) -> dict[str, Any]:
    """Fields of the Project that come from project.yaml."""
    project = draft.inputs.project
    _check_people(draft, project)
    _check_case_names(draft, project)
    _check_ids(draft, project)
    requirement = project.requirement
    return {
        "document": _same(Document, project.document),
        "units": draft.units,
        "people": tuple(_same(Person, one) for one in project.people or ()),
        "revisions": tuple(_same(RevisionNote, one) for one in project.revisions or ()),
        "purpose": project.purpose,
        "description": tuple(project.basis or ()),
        "requirement": _same(Requirement, requirement, "flow", "margin", "daily_volume", "running_time", "case"),
        "economy": _same(Economy, project.economy, "tariff", "currency", "days_per_year") if project.economy else None,
        "normal_case": project.normal_case,
        "documents": tuple(_same(SourceDocument, one) for one in project.documents or ()),
        "assumptions": _statements(draft, project, "assumptions"),
        "notes": _statements(draft, project, "notes"),
        "exclusions": _statements(draft, project, "exclusions"),
        "limits": _limits(project),
    }


def _same(model: type, block: Input, *names: str) -> Any:
    """The model object with the fields of the same names."""
    if block is BROKEN:
        return BROKEN
    return model(**{name: getattr(block, name) for name in names or type(block).model_fields})


def _statements(draft: Draft, project: ProjectFile, name: str) -> tuple[Statement, ...]:
    blocks = getattr(project, name) or ()
    return tuple(
        Statement(
            one.id, one.text, one.reason, one.status, one.owner, one.covered_by, draft.place(("project", name, at))
        )
        for at, one in enumerate(blocks)
        if one is not BROKEN
    )


def _limits(project: ProjectFile) -> Mapping[str, Value]:
    if not project.limits:
        return {}
    stated = ((name, getattr(project.limits, name)) for name in type(project.limits).model_fields)
    return {name: value for name, value in stated if isinstance(value, Value)}


def _check_people(draft: Draft, project: ProjectFile) -> None:
    if project.people is BROKEN:
        return
    originators = {one.name for one in project.people if one and one.role == ORIGINATOR}
    for at, one in enumerate(project.people):
        if one and one.role == CHECKER and intact(one.name) and one.name in originators:
            text = f"{one.name} is originator and checker"
            draft.wrong(("project", "people", at), text, "nobody checks their own work: name another person")


def _check_case_names(draft: Draft, project: ProjectFile) -> None:
    cases = draft.inputs.cases
    if not cases:  # broken or empty, which was reported
        return
    wanted = [(("project", "normal_case"), project.normal_case)]
    if project.requirement:
        wanted.append((("project", "requirement", "case"), project.requirement.case))
    for keys, name in wanted:
        if name and name not in cases:
            draft.wrong(keys, f"no case '{name}'", suggestion(name, cases))


def _check_ids(draft: Draft, project: ProjectFile) -> None:
    _check_unique(draft, "documents", project.documents or ())
    for name in ("assumptions", "notes", "exclusions"):
        _check_unique(draft, name, getattr(project, name) or ())


def _check_unique(draft: Draft, name: str, blocks: Iterable[Any]) -> None:
    seen: set[str] = set()
    for at, one in enumerate(blocks):
        if one is BROKEN or one.id is BROKEN:
            continue
        if one.id in seen:
            draft.wrong(("project", name, at), f"the id {one.id} is used twice", "give every entry an id of its own")
        seen.add(one.id)
