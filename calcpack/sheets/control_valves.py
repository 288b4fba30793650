"""Control and balancing valves: state, drop and flow coefficient in every case, settings found, authority."""

from __future__ import annotations

from calcpack.formulas import valves
from calcpack.ledger import Entry
from calcpack.project.model import KV, Case, Equipment, Line
from calcpack.sheets.content import Block, Column, Derivation, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.criteria import AT_LEAST, house_limit, judge
from calcpack.sheets.job import Job, case_label

CONTROL, BALANCING = "control_valve", "balancing_valve"


def fill(job: Job) -> Sheet:
    """Lay out every valve that is set or sets itself; books authority and its criterion."""
    items = [item for item in job.project.system.equipment.values() if item.type in (CONTROL, BALANCING)]
    sections = []
    for item in items:
        line = next(line for line in job.project.system.lines.values() if item.tag in line.equipment)
        flowing = [case for case in job.cases if f"{item.tag}/h_e@{case.id}" in job.ledger]
        if flowing:
            sections.append(_section(job, item, line, flowing))
    if not sections:
        return Sheet("control_valves", "Control and balancing valves", omitted="the system has none that passes flow")
    return Sheet("control_valves", "Control and balancing valves", tuple(sections))


def _section(job: Job, item: Equipment, line: Line, cases: list[Case]) -> Section:
    tag = item.tag
    normal = next((case for case in cases if case.id == job.project.normal_case), cases[0])
    derived = [f"{tag}/{symbol}@{case.id}" for case in cases[:1] for symbol in ("dp", "K_v")]
    derived = [entry_id for entry_id in derived if entry_id in job.ledger and job.ledger[entry_id].formula]
    solved = [case for case in cases if f"{tag}/K_v@{case.id}" in job.ledger]
    if not derived and solved:
        derived = [f"{tag}/dp@{solved[0].id}", f"{tag}/K_v@{solved[0].id}"]
    blocks: list[Block] = []
    if item.control is not None:
        setting = job.input(f"{tag}/setting", item.control.setting, "x_set", f"{tag}: setting, {item.control.holds}")
        blocks.append(Prose(f"{tag} holds the {item.control.holds} at {{{setting.id}}}; where it cannot, it is open."))
    if item.type == CONTROL:
        authority = _authority(job, item, line, normal)
        if authority:
            derived.append(authority[0].id)
            blocks.append(Verdicts((authority[1].id,)))
    if derived:
        blocks.insert(0, Derivation(tuple(derived)))
    blocks.append(_table(job, item, line, cases))
    return Section(f"control-valves-{tag}", f"{tag} {item.description}", tuple(blocks))


def _authority(job: Job, item: Equipment, line: Line, case: Case) -> tuple[Entry, Entry] | None:
    """Share of the branch's head that the open valve takes, at the normal case."""
    tag, state = item.tag, item.states.get(case.equipment.get(item.tag, ""))
    if state is None or state.law != KV or f"{line.tag}/h_L@{case.id}" not in job.ledger:
        return None
    entry = job.ledger.apply(f"{tag}/N@{case.id}", valves.AUTHORITY_OF_BRANCH, case=case.id,
                             h_v=f"{tag}/h_e@{case.id}", h_b=f"{line.tag}/h_L@{case.id}")
    limit = house_limit(job, "authority", "fraction", "30 %", 0.3, "Authority of a control valve, least")
    band = house_limit(job, "authority_band", "fraction", "67 %", 0.67, "Authority: warning band up to the target")
    check = judge(job, f"authority/{tag}", f"{tag}: authority in its branch", [entry], limit, AT_LEAST, band=band,
                  warning="below the target that is usual for good control")
    return entry, check


def _table(job: Job, item: Equipment, line: Line, cases: list[Case]) -> Table:
    tag, rows = item.tag, []
    for case in cases:
        valve = job.solved(case).valves.get(tag)
        state = valve.state if valve is not None else case.equipment[tag]
        coefficient = f"{tag}/K_v@{case.id}"
        kept = f"{tag}/K_v@{case.settings_of}"
        stated = f"{tag}/K_v@{case.equipment[tag]}"
        shown = next((key for key in (coefficient, kept, stated) if key in job.ledger), "")
        rows.append(Row((case_label(case), f"{state}, set in case {case.settings_of}" if shown == kept else state,
                         Ref(f"{line.tag}/Q@{case.id}"), Ref(f"{tag}/h_e@{case.id}"), Ref(shown) if shown else "none")))
    columns = (Column("Case", width=3.4), Column("State", width=1.8), Column("Flow", "Q", "flow"),
               Column("Head lost", "h_e", "head"), Column("Flow coefficient", "K_v", "flow_coefficient_kv"))
    return Table(f"{tag} in line {line.tag}: all cases", columns, tuple(rows))
