"""Second opinion: every factor, coefficient and bore that the library ``fluids`` also offers, with the difference."""

from __future__ import annotations

from fractions import Fraction

from calcpack.hydraulics import second_opinion
from calcpack.ledger import Entry
from calcpack.project.model import Line
from calcpack.sheets.compare import difference
from calcpack.sheets.content import Block, Column, Prose, Ref, Row, Section, Table
from calcpack.sheets.job import Job, case_label

SOURCE = "FLUIDS"


def section(job: Job) -> Section:
    """Recompute with the library and tabulate what this package uses, what the library gives, and the difference."""
    blocks: list[Block] = [
        Prose(
            "Computed at run time by the open library fluids, whose code is independent of this program. Differences "
            "in loss coefficients come from the library's own fit of the fully turbulent friction factor."
        )
    ]
    for caption, rows in (
        ("Friction factors", _friction(job)),
        ("Loss coefficients of one fitting", _coefficients(job)),
        ("Inside diameters", _bores(job)),
    ):
        if rows:
            columns = (Column("Item", width=3.4), Column("This package"), Column("Library"), Column("Difference"))
            blocks.append(Table(caption, columns, tuple(rows)))
    return Section("second-opinion", "Second opinion by an independent library", tuple(blocks))


def _row(job: Job, label: str, own: Entry, library: float) -> Row:
    other = job.ledger.found(
        f"{own.id}/library", library, own.symbol, f"{own.title}: by the library", own.kind, source=SOURCE,
        residual=0.0, case=own.case, digits=max(own.digits, 4),
    )
    gap = difference(job, f"{own.id}/d_library", "d", f"{own.title}: library against this package", own=own,
                     other=other)
    return Row((label, Ref(own.id, "quantity"), Ref(other.id, "quantity"), Ref(gap.id, "quantity")))


def _friction(job: Job) -> list[Row]:
    rows = []
    for case in job.cases:
        for line in case.system.lines.values():
            key = f"{line.tag}/f@{case.id}"
            if key not in job.ledger or not job.ledger[key].formula:
                continue
            own, state = job.ledger[key], case.roughness[line.tag]
            reynolds = job.ledger[f"{line.tag}/Re@{case.id}"].value
            roughness = job.at(f"{line.tag}/eps@{state}", case).value / job.at(f"{line.tag}/D", case).value
            rows.append(_row(job, f"{line.tag}, case {case_label(case)}", own,
                             second_opinion.friction_factor(reynolds, roughness)))
    return rows


def _coefficients(job: Job) -> list[Row]:
    rows, seen = [], set()
    for line in job.project.system.lines.values():
        bore = job.ledger[f"{line.tag}/D"].value
        for position, fitting in enumerate(line.fittings, start=1):
            library = second_opinion.loss_coefficient(fitting.type, bore)
            own = job.ledger[f"{line.tag}/K_{position}"]
            if library is None or own.value == 0.0 or (fitting.type, bore, own.value) in seen:
                continue
            seen.add((fitting.type, bore, own.value))
            rows.append(_row(job, f"{line.tag}: {fitting.title}", own, library))
    return rows


def _bores(job: Job) -> list[Row]:
    rows = []
    for line in job.project.system.lines.values():
        inches = _inches(line)
        if line.pipe.bore or inches is None:
            continue
        library = second_opinion.bore(line.pipe.standard, inches, str(line.pipe.schedule))
        if library is not None:
            rows.append(_row(job, f"{line.tag}: {line.pipe.size}, schedule {line.pipe.schedule}",
                             job.ledger[f"{line.tag}/D"], library))
    return rows


def _inches(line: Line) -> float | None:
    """Nominal size in inches from the looked-up row, whose text names it as ``NPS 6``."""
    wall = line.pipe.wall
    _, found, rest = wall.locator.partition("NPS ") if wall else ("", "", "")
    if not found:
        return None
    words = rest.replace(")", " ").replace(",", " ").split()
    total = Fraction(0)
    for word in words[:2]:
        try:
            total += Fraction(word)
        except ValueError:
            break
    return float(total) if total else None
