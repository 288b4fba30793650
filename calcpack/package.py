"""From a filled job to what the report prints: cover, sheets, and the drawings by key."""

from __future__ import annotations

from calcpack.project.model import Person
from calcpack.report.content import CoverContent, OpenItem, PackageContent, Preliminary
from calcpack.sheets.content import Sheet
from calcpack.sheets.job import Job
from calcpack.sheets.registers import open_items

PRELIMINARY = "preliminary"
RESPONSIBLE = "responsible engineer"


def package_of(job: Job, sheets: tuple[Sheet, ...], fingerprint: str) -> PackageContent:
    """The package of a job as a draft."""
    project = job.project
    cover = CoverContent(
        people=project.people,
        revisions=project.revisions,
        documents=project.documents,
        purpose=project.purpose,
        open_items=tuple(OpenItem(item.id, item.text, item.entry) for item in open_items(job)),
        register="registers",
        scope=_scope(job),
        preliminary=_preliminary(job),
    )
    return PackageContent(project.document, cover, sheets, job.program["program"], fingerprint, draft=True)


def _scope(job: Job) -> tuple[str, ...]:
    excluded = "; ".join(statement.text.rstrip(". ") for statement in job.project.exclusions)
    covered = "Covers: the steady hydraulic calculation of this package for the cases listed."
    return (covered, f"Does not cover: {excluded}.") if excluded else (covered,)


def _preliminary(job: Job) -> Preliminary | None:
    """The block that a preliminary release carries in place of a seal."""
    document = job.project.document
    if document.status != PRELIMINARY:
        return None
    engineer = next((one for one in job.project.people if one.role == RESPONSIBLE), Person(RESPONSIBLE, ""))
    return Preliminary("review; not for construction", engineer.name, engineer.licence, document.date)
