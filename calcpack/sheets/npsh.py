"""NPSH: every term of what is available, against what the pump requires, in every case."""

from __future__ import annotations

from calcpack.formulas import suction
from calcpack.formulas.fittings import SUM_EQUIPMENT
from calcpack.ledger import Entry
from calcpack.project.model import Case, Pump
from calcpack.sheets.content import Block, Column, Derivation, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.criteria import AT_LEAST, house_limit, judge
from calcpack.sheets.job import Job, case_label, least
from calcpack.sheets.path import Path, pump_path
from calcpack.sheets.total_head import end_head
from calcpack.values import LOOKED_UP, Value


def fill(job: Job) -> Sheet:
    """Book NPSHA, NPSHR, ratio and difference of every pump in every case, and their criteria."""
    sections = []
    for pump in job.project.system.pumps.values():
        cases = [case for case in job.cases if f"{pump.tag}/NPSHR@{case.id}" in job.ledger]
        if not cases:
            continue
        for case in cases:
            _book(job, case, pump)
        sections.append(_section(job, pump, cases, _judge(job, pump, cases)))
    if not sections:
        return Sheet("npsh", "Net positive suction head", omitted="no pump has NPSHR data")
    return Sheet("npsh", "Net positive suction head", tuple(sections))


def _book(job: Job, case: Case, pump: Pump) -> None:
    tag, ledger = pump.tag, job.ledger
    path = pump_path(case, job.solved(case), pump)
    available = ledger.apply(
        f"{tag}/NPSHA@{case.id}", suction.NPSH_AVAILABLE, case=case.id,
        p_atm="site/p_atm", p_g=_gas_pressure(job, case, path), p_v=f"liquid/p_v@{case.temperature}",
        rho=job.density(case), g=job.gravity(), z_s=_surface(job, case, path),
        z_p=job.input(f"{tag}/z", pump.shaft_elevation, "z_p", f"{tag}: elevation of the shaft centre", case),
        h_s=_suction_loss(job, case, pump, path),
    )
    required = ledger[f"{tag}/NPSHR@{case.id}"]
    for symbol, formula in (("r_N", suction.NPSH_RATIO), ("m_N", suction.NPSH_DIFFERENCE)):
        ledger.apply(f"{tag}/{symbol}@{case.id}", formula, symbol=symbol, case=case.id, NPSHA=available, NPSHR=required)


def _surface(job: Job, case: Case, path: Path) -> Entry:
    node = case.system.nodes[path.source]
    if node.levels:
        name = case.levels[path.source]
        return job.input(f"{path.source}/z@{name}", node.levels[name], "z", f"{path.source}: level, {name}", case)
    return end_head(job, case, path.source)


def _gas_pressure(job: Job, case: Case, path: Path) -> Entry:
    node = case.system.nodes[path.source]
    value = node.gas_pressure or Value(
        0.0, "gauge_pressure", "0 kPa gauge", source="DEFINITION", locator="open to the atmosphere", status=LOOKED_UP
    )
    return job.input(f"{path.source}/p_g", value, "p_g", f"{path.source}: gas pressure", case)


def _suction_loss(job: Job, case: Case, pump: Pump, path: Path) -> Entry:
    losses = [job.ledger[f"{line.tag}/h_L@{case.id}"] for line in path.suction]
    if len(losses) == 1:
        return losses[0]
    return job.ledger.apply(
        f"{pump.tag}/h_s@{case.id}", SUM_EQUIPMENT, symbol="h_s", case=case.id, title="Suction loss", h_i=losses
    )


def _judge(job: Job, pump: Pump, cases: list[Case]) -> tuple[str, ...]:
    tag = pump.tag
    ratio = job.input(f"{tag}/r_lim", pump.npsh_ratio, "r_lim", "NPSH ratio required")
    margin = job.input(f"{tag}/m_lim", pump.npsh_margin, "m_lim", "NPSH margin required")
    band = house_limit(
        job, "npsh_warning_band", "fraction", "50 %", 0.5, "NPSH margin: warning band above the requirement"
    )
    ids = []
    for symbol, limit, word in (("r_N", ratio, "ratio"), ("m_N", margin, "margin")):
        values = [job.ledger[f"{tag}/{symbol}@{case.id}"] for case in cases]
        ids.append(judge(job, f"npsh-{word}/{tag}", f"{tag}: NPSH {word}", values, limit, AT_LEAST, band=band).id)
    return tuple(ids)


def _section(job: Job, pump: Pump, cases: list[Case], checks: tuple[str, ...]) -> Section:
    tag = pump.tag
    governing = least(job.ledger, [f"{tag}/r_N@{case.id}" for case in cases])
    case = job.project.case(governing.case)
    derived = [f"{tag}/NPSHA@{case.id}", f"{tag}/NPSHR@{case.id}", f"{tag}/r_N@{case.id}", f"{tag}/m_N@{case.id}"]
    if f"{tag}/h_s@{case.id}" in job.ledger:
        derived.insert(0, f"{tag}/h_s@{case.id}")
    available = job.ledger[derived[0] if len(derived) == 4 else derived[1]].operands
    columns = (
        Column("Case", width=3.2),
        Column("Flow", "Q", "flow"),
        Column("Surface", "z_s", "elevation"),
        Column("Suction loss", "h_s", "head"),
        Column("Vapour pressure", "p_v", "absolute_pressure"),
        Column("Available", "NPSHA", "head", f"{tag}/NPSHA@{case.id}"),
        Column("Required", "NPSHR", "head", f"{tag}/NPSHR@{case.id}"),
        Column("Ratio", "r_N", "ratio", f"{tag}/r_N@{case.id}"),
        Column("Margin", "m_N", "head", f"{tag}/m_N@{case.id}"),
    )
    blocks: tuple[Block, ...] = (
        Prose(
            f"Datum of NPSH is the shaft centre {{{available['z_p']}}}. Total heads are used, so that the velocity "
            "head at the suction port is included on both sides. Derived in full for the case of the least ratio: "
            f"case {case_label(case)}."
        ),
        Derivation(tuple(derived), governing=(governing.id, f"{tag}/m_N@{case.id}")),
        Table(f"{tag}: NPSH, all cases", columns, tuple(_row(job, tag, one, one is case) for one in cases)),
        Verdicts(checks),
        Prose(
            "NPSHR is the maker's test value at a three per cent head drop, on cold water; a pump at that value is "
            "already cavitating. The margin required by the maker for the service takes precedence.",
            "note",
        ),
    )
    return Section(f"npsh-{tag}", f"{tag}: available and required", blocks)


def _row(job: Job, tag: str, case: Case, governs: bool) -> Row:
    operands = job.ledger[f"{tag}/NPSHA@{case.id}"].operands
    symbols = ("NPSHA", "NPSHR", "r_N", "m_N")
    cells = (case_label(case), Ref(f"{tag}/Q_1@{case.id}"), Ref(operands["z_s"]), Ref(operands["h_s"]),
             Ref(operands["p_v"]), *(Ref(f"{tag}/{symbol}@{case.id}") for symbol in symbols))
    return Row(cells, mark="governs NPSH" if governs else "")
