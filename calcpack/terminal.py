"""Results, criteria and open items as text for a terminal."""

from __future__ import annotations

from calcpack.ledger.entry import CHECK, MET, MET_WITH_WARNING, NOT_MET
from calcpack.ledger.text import display_text, number_text, unit_of
from calcpack.sheets.job import Job

BOLD, PLAIN = "\033[1m", "\033[0m"
COLUMNS = (("Q", "flow"), ("H", "head"), ("eta", "efficiency"), ("P_s", "shaft power"), ("NPSHA", "NPSHA"),
           ("NPSHR", "NPSHR"), ("p_s", "suction"), ("p_d", "discharge"))
ORDER = {NOT_MET: 0, MET_WITH_WARNING: 8, MET: 9}


def report(job: Job, *, color: bool) -> str:
    """Duty table by pump and case, findings of the solver, criteria, open items."""
    lines: list[str] = []
    for tag in job.project.system.pumps:
        lines += _duty(job, tag, color)
    lines += [f"case {case.id}: {finding.text}" for case in job.cases for finding in job.solved(case).findings]
    lines += ["", _head("criteria", color), *_criteria(job)]
    opened = [value for value in job.project.values if value.is_open]
    unconfirmed = [value for value in opened if not value.is_assumption]
    lines += ["", _head("open items", color),
              f"{len(unconfirmed)} inputs not confirmed, {len(opened) - len(unconfirmed)} values supplied by the program"]
    lines += [f"  {value.file}:{value.line}: {value.path} = {value.text}" for value in unconfirmed]
    return "\n".join(lines)


def _head(text: str, color: bool) -> str:
    return f"{BOLD}{text}{PLAIN}" if color else text


def _duty(job: Job, tag: str, color: bool) -> list[str]:
    cases = [case for case in job.cases if f"{tag}/H@{case.id}" in job.ledger]
    if not cases:
        return [f"{tag}: no duty point in any case"]
    shown = [(symbol, title) for symbol, title in COLUMNS if f"{tag}/{symbol}@{cases[0].id}" in job.ledger]
    entries = [[job.ledger[f"{tag}/{symbol}@{case.id}"] for symbol, _ in shown] for case in cases]
    system = job.ledger.system
    heads = [f"{title} {unit_of(entry, system).text}".strip() for (_, title), entry in zip(shown, entries[0], strict=True)]
    rows = [[case.id, *(number_text(entry, unit_of(entry, system)) for entry in row)]
            for case, row in zip(cases, entries, strict=True)]
    widths = [max(len(row[i]) for row in [["case", *heads], *rows]) for i in range(len(heads) + 1)]
    table = ["  ".join(cell.rjust(width) for cell, width in zip(row, widths, strict=True))
             for row in [["case", *heads], *rows]]
    titles = [f"  {case.id}  {case.title}" for case in cases]
    return [_head(f"{tag} {job.project.system.pumps[tag].description}", color), *titles, *table]


def _criteria(job: Job) -> list[str]:
    checks = sorted(job.ledger.of_origin(CHECK), key=lambda entry: ORDER.get(entry.verdict, 1))
    lines = []
    for entry in checks:
        operands, system = entry.operands or {}, job.ledger.system
        if operands:
            value, limit = job.ledger[operands["value"]], job.ledger[operands["limit"]]
            case = f", case {entry.case}" if entry.case else ""
            text = f"{display_text(value, system)} {entry.comparison} {display_text(limit, system)}{case}"
        else:
            text = job.plain(entry.note)
        lines.append(f"  {entry.verdict}: {entry.title}: {text}")
    return lines
