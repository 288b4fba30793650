"""Head lost in in-line equipment: fixed, quadratic, by flow coefficient, by the maker's points, or set by a control."""

from __future__ import annotations

from calcpack.formulas import fittings, valves
from calcpack.ledger import Entry
from calcpack.project.model import FIXED, KV, QUADRATIC, Case, LossState
from calcpack.sheets.job import Job

OPEN = "open"  # state of a regulating valve that cannot reach its setting


def equipment_head(job: Job, case: Case, tag: str, flow: Entry) -> Entry:
    """Book the head that equipment ``tag`` takes from ``flow`` in a case, ``<tag>/h_e@<case>``."""
    valve = job.solved(case).valves.get(tag)
    if valve is not None and valve.state != OPEN:
        kept = f"{tag}/K_v@{case.settings_of}"
        if kept in job.ledger:
            return _by_coefficient(job, case, tag, flow, job.ledger[kept], f"as set in case {case.settings_of}")
        return _set_by_control(job, case, tag, flow, valve.head)
    state = case.system.equipment[tag].states[case.equipment[tag]]
    if state.law == QUADRATIC:
        return _quadratic(job, case, tag, flow, state)
    name = f"{case.system.equipment[tag].description}, {state.name}"
    if state.law == FIXED:
        return job.input(f"{tag}/h_r@{state.name}", state.head, "h_r", f"{name}: head loss", case)
    if state.law == KV:
        coefficient = job.input(f"{tag}/K_v@{state.name}", state.coefficient, "K_v", f"{name}: flow coefficient", case)
        return _by_coefficient(job, case, tag, flow, coefficient, state.name)
    heads = job.solved(case).lines[_line_of(case, tag)].equipment_head
    points = {"Q": [], "h": []}
    for position, (at, head) in enumerate(state.points, start=1):
        points["Q"].append(job.input(f"{tag}/Q_{position}@{state.name}", at, "Q", f"{name}: flow {position}", case).id)
        lost = job.input(f"{tag}/h_{position}@{state.name}", head, "h", f"{name}: head {position}", case)
        points["h"].append(lost.id)
    return job.ledger.found(
        f"{tag}/h_e@{case.id}", abs(heads[tag]), "h_e", f"Head lost in {tag}, {state.name}", "head", source="COMMON",
        locator="monotone cubic between the maker's points", residual=0.0, case=case.id,
        operands={"Q_1": flow.id, "Q": tuple(points["Q"]), "h": tuple(points["h"])},
    )


def head_of(job: Job, case: Case, tag: str) -> Entry:
    """The booked head of equipment in a case."""
    own = f"{tag}/h_e@{case.id}"
    return job.ledger[own] if own in job.ledger else job.at(f"{tag}/h_r@{case.equipment[tag]}", case)


def derived_ids(job: Job, case: Case, tag: str) -> list[str]:
    """Entries of equipment that a case derives by formula, in order."""
    wanted = (f"{tag}/h_e@{case.id}", f"{tag}/dp@{case.id}", f"{tag}/K_v@{case.id}")
    return [entry_id for entry_id in wanted if entry_id in job.ledger and job.ledger[entry_id].origin != "given"]


def _quadratic(job: Job, case: Case, tag: str, flow: Entry, state: LossState) -> Entry:
    name = f"{case.system.equipment[tag].description}, {state.name}"
    if state.drop is not None:
        drop = job.input(f"{tag}/dp_r@{state.name}", state.drop, "dp_r", f"{name}: pressure drop", case)
        density = job.input(f"{tag}/rho_r@{state.name}", state.density, "rho_r", f"{name}: density of that drop", case)
        head = job.once(f"{tag}/h_r@{state.name}", valves.HEAD_OF_DROP, case, dp=drop, rho=density, g=job.gravity())
    else:
        head = job.input(f"{tag}/h_r@{state.name}", state.head, "h_r", f"{name}: head loss", case)
    rated = job.input(f"{tag}/Q_r@{state.name}", state.flow, "Q_r", f"{name}: at flow", case)
    return job.ledger.apply(
        f"{tag}/h_e@{case.id}", fittings.EQUIPMENT_QUADRATIC, case=case.id, title=f"Head lost in {tag}, {state.name}",
        h_r=head, Q=flow, Q_r=rated,
    )


def _by_coefficient(job: Job, case: Case, tag: str, flow: Entry, coefficient: Entry, words: str) -> Entry:
    return job.ledger.apply(
        f"{tag}/h_e@{case.id}", valves.HEAD_KV, case=case.id, symbol="h_e", title=f"Head lost in {tag}, {words}",
        g=job.gravity(), Q=flow, K_v=coefficient,
    )


def _set_by_control(job: Job, case: Case, tag: str, flow: Entry, head: float) -> Entry:
    """The head that a valve takes to hold its setting, and the flow coefficient that this asks for."""
    entry = job.ledger.found(
        f"{tag}/h_e@{case.id}", abs(head), "h_e", f"Head that {tag} takes to hold its setting", "head",
        source="BERNOULLI", locator="network solution", residual=job.solved(case).convergence.energy, case=case.id,
        operands={"Q": flow.id},
    )
    if entry.value > 0:
        drop = job.ledger.apply(f"{tag}/dp@{case.id}", valves.DROP_OF_HEAD, case=case.id, rho=job.density(case),
                                g=job.gravity(), h=entry)
        job.ledger.apply(f"{tag}/K_v@{case.id}", valves.REQUIRED_KV, case=case.id, Q=flow, rho=job.density(case),
                         dp=drop)
    return entry


def _line_of(case: Case, tag: str) -> str:
    return next(line.tag for line in case.system.lines.values() if tag in line.equipment)
