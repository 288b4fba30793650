"""Static and total head: along each pump's path, from free surface to free surface."""

from __future__ import annotations

from math import isfinite

from calcpack.formulas import duty
from calcpack.ledger import Entry
from calcpack.project.model import OUTLET, Case, Pump
from calcpack.sheets.content import Block, Column, Derivation, Prose, Ref, Row, Section, Sheet, Table
from calcpack.sheets.job import Job, case_label, greatest
from calcpack.sheets.path import Path, at_rest, pump_path


def fill(job: Job) -> Sheet:
    """Book end heads, static head and total head of every pump's path in every case."""
    sections = []
    for pump in job.project.system.pumps.values():
        running = [case for case in job.cases if case.pumps.get(pump.tag)]
        paths = {case.id: pump_path(case, job.solved(case), pump) for case in running}
        cases = [case for case in running if _known(job, case, paths[case.id])]
        for case in cases:
            _book(job, case, pump, paths[case.id])
        if cases:
            sections.append(_section(job, pump, cases, paths))
    if not sections:
        return Sheet("total_head", "Static and total head", omitted="no pump runs in any case")
    return Sheet("total_head", "Static and total head", tuple(sections))


def end_head(job: Job, case: Case, tag: str) -> Entry:
    """Total head at the end of a path above datum.

    Of a tank or outlet it is the level, with gas pressure where the tank has any; elsewhere the network solution.
    """
    node = case.system.nodes[tag]
    if not at_rest(case, tag):
        key, solved = f"{tag}/H@{case.id}", job.solved(case)
        return job.ledger[key] if key in job.ledger else job.ledger.found(
            key, solved.heads[tag], "H", f"{tag}: total head", "head", source="BERNOULLI", locator="network solution",
            residual=solved.convergence.energy, case=case.id, note="the path ends here, with the liquid moving",
        )
    if node.kind == OUTLET:
        return job.input(f"{tag}/z", node.elevation, "z", f"{tag}: elevation of the free discharge", case)
    name = case.levels[tag]
    level = job.input(f"{tag}/z@{name}", node.levels[name], "z", f"{tag}: level, {name}", case)
    if node.gas_pressure is None:
        return level
    pressure = job.input(f"{tag}/p_g", node.gas_pressure, "p_g", f"{tag}: gas pressure", case)
    return job.once(f"{tag}/H@{name}-{case.temperature}", duty.TANK_HEAD, case, z=level, p_g=pressure,
                    rho=job.density(case), g=job.gravity())


def _known(job: Job, case: Case, path: Path) -> bool:
    """False where the path ends in a part of the network without a head."""
    return all(isfinite(job.solved(case).heads[tag]) for tag in (path.source, path.delivery))


def _book(job: Job, case: Case, pump: Pump, path: Path) -> None:
    tag = pump.tag
    static = job.ledger.apply(
        f"{tag}/H_st@{case.id}", duty.STATIC_HEAD, case=case.id,
        z_2=end_head(job, case, path.delivery), z_1=end_head(job, case, path.source),
    )
    losses = [job.ledger[f"{line.tag}/h_L@{case.id}"] for line in path.lines]
    job.ledger.apply(
        f"{tag}/H_sys@{case.id}", duty.TOTAL_HEAD, case=case.id, symbol="H_sys", H_st=static, h_L=losses
    )


def _section(job: Job, pump: Pump, cases: list[Case], paths: dict[str, Path]) -> Section:
    tag = pump.tag
    governing = greatest(job.ledger, [f"{tag}/H_sys@{case.id}" for case in cases])
    case = job.project.case(governing.case)
    path = paths[case.id]
    ends = [entry.id for entry in (end_head(job, case, path.source), end_head(job, case, path.delivery))
            if entry.formula]
    lines = [line.tag for line in path.lines]
    moving = [tag for tag in (path.source, path.delivery) if not at_rest(case, tag)]
    ends_are = "Heads at both ends are those of liquid at rest" if not moving else (
        f"The head at {' and '.join(moving)}, a demand or another pump, is that of the network solution, with the "
        "liquid moving; the static head is the difference between the two ends"
    )
    blocks: tuple[Block, ...] = (
        Prose(
            f"Path of {tag}: {path.source}, {', '.join(lines)}, {path.delivery}. {ends_are}; the velocity head of a "
            "free discharge is in the exit loss of the last line. Derived in full for the case of the greatest total "
            f"head: case {case_label(case)}."
        ),
        Derivation((*ends, f"{tag}/H_st@{case.id}", governing.id), governing=(governing.id,)),
        Table(
            f"{tag}: static and total head, all cases",
            (
                Column("Case", width=3.2),
                Column("Flow", "Q", "flow"),
                Column("Static", "H_st", "head", f"{tag}/H_st@{case.id}"),
                *(Column(line, "h_L", "head", f"{line}/h_L@{case.id}") for line in lines),
                Column("Total", "H_sys", "head", governing.id),
            ),
            tuple(_row(job, tag, one, paths[one.id], one is case) for one in cases),
        ),
    )
    return Section(f"total-head-{tag}", f"{tag}: static head, losses, total head", blocks)


def _row(job: Job, tag: str, case: Case, path: Path, governs: bool) -> Row:
    losses = (Ref(f"{line.tag}/h_L@{case.id}") for line in path.lines)
    cells = (
        case_label(case), Ref(f"{path.lines[-1].tag}/Q@{case.id}"), Ref(f"{tag}/H_st@{case.id}"), *losses,
        Ref(f"{tag}/H_sys@{case.id}"),
    )
    return Row(cells, mark="governs head" if governs else "")
