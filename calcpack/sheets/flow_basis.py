"""Flow basis: what the system must deliver, and the margin shown apart from it."""

from __future__ import annotations

from calcpack.formulas import duty
from calcpack.ledger import Entry
from calcpack.sheets.content import Block, Derivation, Prose, Section, Sheet
from calcpack.sheets.job import Job
from calcpack.values import LOOKED_UP, Value


def fill(job: Job) -> Sheet:
    """Book required and design flow; check a stated flow against the daily volume where both are given."""
    requirement = job.project.requirement
    if requirement.flow is None and requirement.daily_volume is None:
        return Sheet("flow_basis", "Flow basis", omitted="the project states no required flow")
    derived: list[str] = []
    blocks: list[Block] = []
    from_volume = _from_volume(job, derived)
    if requirement.flow is not None:
        required = job.input("duty/Q_req", requirement.flow, "Q_req", "Required flow")
        derived.append(required.id)
    else:
        required = from_volume
    if requirement.flow is not None and from_volume is not None:
        blocks.append(
            Prose(f"The stated required flow {{{required.id}}} is carried on; the daily volume gives "
                  f"{{{from_volume.id}}}.")
        )
    design = design_flow(job, required)
    if design is not required:
        derived.append(design.id)
    blocks.append(Derivation(tuple(derived), governing=(design.id,)))
    blocks.append(Prose("No margin is put on the head: reserves in head act as throttling and move the duty point."))
    return Sheet("flow_basis", "Flow basis", (Section("flow-basis", "Required and design flow", tuple(blocks)),))


def design_flow(job: Job, required: Entry) -> Entry:
    """Required flow with the stated margin; the required flow itself where no margin is stated."""
    if "duty/Q_des" in job.ledger:
        return job.ledger["duty/Q_des"]
    margin = job.project.requirement.margin
    if margin is None:
        return required
    fraction = job.input("duty/m", margin, "m", "Design margin on flow")
    return job.ledger.apply("duty/Q_des", duty.DESIGN_FLOW, Q_req=required, m=fraction)


def required_flow(job: Job) -> Entry | None:
    """The required flow entry, or None where the project states none."""
    return job.ledger["duty/Q_req"] if "duty/Q_req" in job.ledger else None


def _from_volume(job: Job, derived: list[str]) -> Entry | None:
    requirement = job.project.requirement
    if requirement.daily_volume is None or requirement.running_time is None:
        return None
    daily = job.input("duty/q_d", requirement.daily_volume, "q_d", "Daily volume")
    running = job.input("duty/t_d", requirement.running_time, "t_d", "Running time in a day, planned")
    day = Value(86400.0, "days", "1 d", source="DEFINITION", locator="one day", status=LOOKED_UP)
    one = job.input("duty/t_1", day, "t_1", "One day")
    volume = job.ledger.apply("duty/V_d", duty.DAILY_VOLUME, q_d=daily, t_1=one)
    key = "duty/Q_req" if requirement.flow is None else "duty/Q_vol"
    flow = job.ledger.apply(key, duty.DAILY_FLOW, V_d=volume, t_d=running)
    derived += [volume.id, flow.id]
    return flow
