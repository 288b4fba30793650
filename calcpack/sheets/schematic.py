"""Flow schematic: the figure, drawn from the model and the entries of the normal case."""

from __future__ import annotations

from calcpack.sheets.content import Figure, Section, Sheet
from calcpack.sheets.job import Job, case_label


def fill(job: Job) -> Sheet:
    """The schematic shows what the model holds; it books nothing."""
    case = job.project.case(job.project.normal_case)
    lines = ", ".join(f"{line.tag} from {line.start} to {line.end}" for line in case.system.lines.values())
    figure = Figure(
        "schematic", f"Flow schematic, flows of case {case_label(case)}",
        f"Schematic with elevation to scale. Lines: {lines}.", full_page=True,
    )
    return Sheet("schematic", "Flow schematic", (Section("schematic", "Schematic", (figure,)),))
