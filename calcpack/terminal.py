"""Results, criteria and open items as text for a terminal: the numbers as the package prints them."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Sequence

from calcpack.digits import MINUS
from calcpack.ledger import Entry
from calcpack.ledger.entry import CHECK, MET, MET_WITH_WARNING, NOT_CHECKED, NOT_MET, OUT_OF_RANGE, REFER
from calcpack.ledger.text import NBSP, display_text, number_text, unit_of
from calcpack.project.model import Case
from calcpack.quantities import KINDS
from calcpack.sheets.job import Job
from calcpack.sheets.registers import (
    EVERY,
    KINDS_OF_ITEM,
    PROGRAM_ASSUMPTION,
    UNCONFIRMED_INPUT,
    OpenItem,
    open_items,
)

BOLD, PLAIN = "\033[1m", "\033[0m"
WIDTH = 100  # characters that a table may take before its columns go on below
WORST_FIRST = (NOT_MET, OUT_OF_RANGE, REFER, NOT_CHECKED, MET_WITH_WARNING, MET)
COLUMNS = (
    ("Q", "flow"), ("Q_1", "one unit"), ("H", "head"), ("eta", "efficiency"), ("P_s", "shaft power"),
    ("NPSHA", "NPSHA"), ("NPSHR", "NPSHR"), ("p_s", "suction"), ("p_d", "discharge"),
)
_CONTROL = re.compile(r"[\x00-\x1f\x7f-\x9f]")


def report(job: Job, *, color: bool) -> str:
    """Cases, duties by pump, flows of a network, findings, criteria, open items, and all of it counted at the end."""
    blocks = [("cases", [f"{case.id}  {case.title}" for case in job.cases])]
    for tag, pump in job.project.system.pumps.items():
        blocks.append((f"{tag}  {pump.description}".rstrip(), _duties(job, tag)))
    if _branches(job):
        blocks.append(("flow of the lines, negative against the direction drawn", _flows(job)))
    findings = [f"case {case.id}: {one.text}" for case in job.cases for one in job.solved(case).findings]
    if findings:
        blocks.append(("findings of the solution", findings))
    verdicts = list(_criteria(job))
    blocks += [*verdicts, _open(job)]
    blocks.append(("; ".join(head for head, _ in (*verdicts, blocks[-1])), []))
    return "\n\n".join(_block(head, lines, color) for head, lines in blocks)


def criteria(job: Job, *verdicts: str) -> list[str]:
    """One line for each criterion that ended with one of these verdicts: what, value and limit, governing case."""
    return [_clean(_criterion(job, one)) for one in job.ledger.of_origin(CHECK) if one.verdict in verdicts]


def _block(head: str, lines: Iterable[str], color: bool) -> str:
    title = f"{BOLD}{_clean(head)}{PLAIN}" if color else _clean(head)
    return "\n".join((title, *(f"  {_clean(line)}".rstrip() for line in lines)))


def _clean(text: str) -> str:
    """No control characters of the inputs reach a terminal, and no spaces that it may draw badly."""
    return _CONTROL.sub("?", text).replace(NBSP, " ")


def _duties(job: Job, tag: str) -> list[str]:
    """The table of a pump: a row for each case."""
    booked = [case for case in job.cases if f"{tag}/H@{case.id}" in job.ledger]
    several = any(job.solved(case).pumps[tag].running > 1 for case in booked)
    shown = [
        (symbol, title) for symbol, title in COLUMNS
        if (symbol != "Q_1" or several) and any(f"{tag}/{symbol}@{case.id}" in job.ledger for case in booked)
    ]
    heads = [("case", ""), *([("running", "")] if several else [])]
    for symbol, title in shown:
        entry = next(one for case in booked if (one := _entry(job, f"{tag}/{symbol}@{case.id}")))
        heads.append((title, _unit(job, entry)))
    rows, others = [], []
    for case in job.cases:
        running = job.solved(case).pumps[tag].running
        if case not in booked:
            others.append(f"case {case.id}: {'no duty point' if running else 'does not run'}")
            continue
        cells = [_number(job, _entry(job, f"{tag}/{symbol}@{case.id}")) for symbol, _ in shown]
        rows.append([case.id, *([str(running)] if several else []), *cells])
    return [*(_table(heads, rows) if rows else []), *others]


def _branches(job: Job) -> bool:
    """True where lines carry different flows, or nothing but lines has results to show."""
    if not job.project.system.pumps:
        return True
    for case in job.cases:
        flows = [abs(line.flow) for line in job.solved(case).lines.values()]
        if max(flows) - min(flows) > 1e-6 * max(flows):
            return True
    return False


def _flows(job: Job) -> list[str]:
    """A row for each line and a column for each case; columns that do not fit go on below."""
    tags = list(job.project.system.lines)
    columns = [(case, [_flow(job, case, tag) for tag in tags]) for case in job.cases]
    known = [one for case in job.cases for tag in tags if (one := _entry(job, f"{tag}/Q@{case.id}"))]
    unit = _unit(job, known[0]) if known else ""
    lines: list[str] = []
    while columns:
        count = len(columns)
        while True:
            part = columns[:count]
            heads = [("line", ""), *((f"case {case.id}", unit) for case, _ in part)]
            table = _table(heads, [[tag, *(cells[i] for _, cells in part)] for i, tag in enumerate(tags)])
            if count == 1 or max(map(len, table)) <= WIDTH:
                break
            count -= 1
        lines += ["", *table] if lines else table
        columns = columns[count:]
    return lines


def _flow(job: Job, case: Case, tag: str) -> str:
    solved, entry = job.solved(case).lines[tag], _entry(job, f"{tag}/Q@{case.id}")
    if not solved.open:
        return "shut"
    if entry is None:
        return "unknown"
    return (MINUS if solved.flow < 0 else "") + _number(job, entry)


def _entry(job: Job, entry_id: str) -> Entry | None:
    return job.ledger[entry_id] if entry_id in job.ledger else None


def _number(job: Job, entry: Entry | None) -> str:
    return "" if entry is None else number_text(entry, unit_of(entry, job.ledger.system))


def _unit(job: Job, entry: Entry) -> str:
    return " ".join(filter(None, (unit_of(entry, job.ledger.system).text, KINDS[entry.kind].word)))


def _table(heads: Sequence[tuple[str, str]], rows: Sequence[Sequence[str]]) -> list[str]:
    """Columns under name and unit; the first to the left, the others with their decimal signs one below the other."""
    columns = []
    for place, (name, unit) in enumerate(heads):
        cells = [row[place] for row in rows]
        if place:
            cells = _on_point(cells)
        width = max(len(text) for text in (name, unit, *cells))
        columns.append([text.rjust(width) if place else text.ljust(width) for text in (name, unit, *cells)])
    lines = ["  ".join(texts) for texts in zip(*columns, strict=True)]
    return lines if any(unit for _, unit in heads) else [lines[0], *lines[2:]]


def _on_point(cells: Sequence[str]) -> list[str]:
    tail = max((len(cell) - len(cell.partition(".")[0]) for cell in cells), default=0)
    return [cell + " " * (tail - len(cell) + len(cell.partition(".")[0])) for cell in cells]


def _criteria(job: Job) -> Iterator[tuple[str, list[str]]]:
    for verdict in WORST_FIRST:
        lines = criteria(job, verdict)
        if lines:
            yield f"{verdict}: {len(lines)}", lines


def _criterion(job: Job, entry: Entry) -> str:
    operands, system = entry.operands or {}, job.ledger.system
    if not operands:
        return f"{entry.title}: {job.plain(entry.note)}"
    value, limit = job.ledger[operands["value"]], job.ledger[operands["limit"]]
    text = f"{entry.title}: {display_text(value, system)}, limit {entry.comparison} {display_text(limit, system)}"
    case = f", case {entry.case}" if entry.case else ""
    return f"{text}{case}{f'; {job.plain(entry.warning)}' if entry.warning else ''}"


def _open(job: Job) -> tuple[str, list[str]]:
    items = open_items(job)
    counts = [(kind, sum(item.kind == kind for item in items)) for kind in KINDS_OF_ITEM]
    said = ", ".join(f"{count} {kind}" for kind, count in counts if count)
    return f"open items: {said or 'none'}", list(_items(job, items))


def _items(job: Job, items: Iterable[OpenItem]) -> Iterator[str]:
    """A line for each item; the columns of one list, such as the points of a pump curve, stand together."""
    lists: dict[str, list[OpenItem]] = {}
    for item in items:
        if item.kind == UNCONFIRMED_INPUT:
            lists.setdefault(item.id.partition(f".{EVERY}")[0], []).append(item)
        elif item.kind == PROGRAM_ASSUMPTION:
            lists[item.id] = [item]
        else:
            lists[f"{item.kind} {item.id}"] = [item]
    for path, gathered in lists.items():
        first = gathered[0]
        entry = job.ledger[first.entry] if first.entry else None
        if entry is None:
            yield f"{first.id}: {first.text}{f' (to be closed by {first.owner})' if first.owner else ''}"
        elif first.kind == PROGRAM_ASSUMPTION:
            yield f"{first.id}: {entry.title} = {display_text(entry, job.ledger.system)}"
        elif path != first.id:
            count = f", {len(gathered)} items" if len(gathered) > 1 else ""
            yield f"{entry.place}: {path}: the whole list{count}"
        else:
            yield f"{entry.place}: {path} = {entry.written}"
