"""Which entries each drawing shows: from a filled job to the SVG texts that the figures of the sheets ask for."""

from __future__ import annotations

from calcpack.drawings.grade_line import grade_line
from calcpack.drawings.schematic import schematic
from calcpack.drawings.schematic_labels import SchematicLabels
from calcpack.drawings.specs import CaseCurve, GradeLineSpec, Level, PumpCurve, SystemCurveSpec
from calcpack.drawings.system_curve import system_curve
from calcpack.project.model import TANK, Case, Pump
from calcpack.sheets.content import Figure, Sheet
from calcpack.sheets.job import Job, case_label
from calcpack.sheets.path import pump_path

SCHEMATIC, CURVE, GRADE = "schematic", "system-curve-", "grade-"


def pictures(job: Job, sheets: tuple[Sheet, ...]) -> dict[str, str]:
    """SVG text of every figure that ``sheets`` hold, by its key."""
    keys = [block.key for sheet in sheets for section in sheet.sections for block in section.blocks
            if isinstance(block, Figure)]
    return {key: _draw(job, key) for key in keys}


def _draw(job: Job, key: str) -> str:
    if key == SCHEMATIC:
        return schematic(job.project, job.ledger, _labels(job))
    if key.startswith(CURVE):
        return system_curve(job.ledger, _curve_spec(job, job.project.system.pumps[key.removeprefix(CURVE)]))
    return grade_line(job.ledger, _grade_spec(job, job.project.system.pumps[key.removeprefix(GRADE)]))


def _labels(job: Job) -> SchematicLabels:
    case = job.project.case(job.project.normal_case)
    system = case.system
    return SchematicLabels(
        case_id=case.id,
        line_entries={tag: _booked(job, f"{tag}/Q@{case.id}", f"{tag}/V@{case.id}") for tag in system.lines},
        node_entries={tag: _booked(job, f"{tag}/z") for tag in system.nodes},
        level_entries={
            tag: {name: f"{tag}/z@{name}" for name in node.levels if f"{tag}/z@{name}" in job.ledger}
            for tag, node in system.nodes.items() if node.kind == TANK and node.levels
        },
        crest_entries=_crests(job, case),
        pump_entries={
            tag: _booked(job, f"{tag}/z", f"{tag}/Q@{case.id}", f"{tag}/H@{case.id}") for tag in system.pumps
        },
    )


def _crests(job: Job, case: Case) -> dict[str, str]:
    """The highest profile point of each line that rises above both its ends."""
    crests = {}
    for tag, line in case.system.lines.items():
        heights = [point.elevation.si for point in line.profile]
        if heights and max(heights) > max(heights[0], heights[-1]):
            entry = f"{tag}/point-{heights.index(max(heights)) + 1}/z"
            if entry in job.ledger:
                crests[tag] = entry
    return crests


def _booked(job: Job, *ids: str) -> tuple[str, ...]:
    return tuple(one for one in ids if one in job.ledger)


def _one(job: Job, entry_id: str) -> str:
    return entry_id if entry_id in job.ledger else ""


def _curve_spec(job: Job, pump: Pump) -> SystemCurveSpec:
    tag = pump.tag
    cases = [case for case in job.cases if f"{tag}/Q@{case.id}" in job.ledger]
    units = sorted({case.pumps[tag] for case in cases})
    last = {name: len(getattr(pump.curve, name) or ()) for name in ("head", "efficiency", "npshr")}
    symbols = {"head": "H", "efficiency": "eta", "npshr": "NPSHR"}
    points = {
        f"{name}_points": tuple((f"{tag}/Q_{i}", f"{tag}/{symbols[name]}_{i}") for i in range(1, count + 1))
        for name, count in last.items()
    }
    curves = {name: _one(job, f"curve/{tag}/{name}") for name in ("head", "efficiency", "npshr", "power")}
    shares = (_one(job, f"{tag}/r_low"), _one(job, f"{tag}/r_high"))
    return SystemCurveSpec(
        cases=tuple(_case_curve(job, tag, case) for case in cases),
        pumps=(PumpCurve(tag, units=tuple(units), **curves, **points), *_other_speeds(job, tag, cases)),
        required=_required(job, tag),
        best_flow=_one(job, f"{tag}/Q_BEP"),
        preferred=shares if all(shares) else None,
        minimum_flow=_one(job, f"{tag}/Q_min"),
        motor_rating=_one(job, f"{tag}/P_m"),
    )


def _other_speeds(job: Job, tag: str, cases: list[Case]) -> list[PumpCurve]:
    """The head curve of every case that runs the pump at another speed."""
    return [PumpCurve(f"{tag}, case {case.id}", head=f"curve/{tag}/head@{case.id}", units=(case.pumps[tag],))
            for case in cases if f"curve/{tag}/head@{case.id}" in job.ledger]


def _case_curve(job: Job, tag: str, case: Case) -> CaseCurve:
    def at(symbol: str) -> str:
        return _one(job, f"{tag}/{symbol}@{case.id}")

    return CaseCurve(
        case.id, system=_one(job, f"curve/system/{tag}@{case.id}"), flow=at("Q"), head=at("H"), static=at("H_st"),
        efficiency=at("eta"), npsha=at("NPSHA"), npshr=at("NPSHR"), power=at("P_s"),
    )


def _required(job: Job, tag: str) -> tuple[str, str] | None:
    """The design point: design flow and what the system asks at it, in the case at which it is wanted."""
    case = job.project.requirement.case or job.project.normal_case
    for symbol in ("Q_des", "Q_req"):
        head = f"curve/system/{tag}/at-{symbol}@{case}"
        if head in job.ledger:
            return f"duty/{symbol}", head
    return None


def _grade_spec(job: Job, pump: Pump) -> GradeLineSpec:
    tag, ledger = pump.tag, job.ledger
    stem = f"grade/{tag}/"
    candidates = (job.project.case(job.project.normal_case), *job.cases)
    case = next(one for one in candidates if f"{stem}axis@{one.id}" in ledger)
    path = pump_path(case, job.solved(case), pump)
    reach = sum(line.length.si for line in path.suction)
    total = sum(line.length.si for line in path.lines)
    levels = []
    for at, node in ((0.0, path.source), (total, path.delivery)):
        names = case.system.nodes[node].levels
        entry = f"{node}/z@{case.levels[node]}" if names else f"{node}/z"
        if entry in ledger:
            levels.append(Level(at, node, entry))
    check = ledger[f"check/grade/{tag}"]
    lowest = ledger[check.operands["value"]]
    point = lowest.id.rpartition("/m@")[0]
    shown = lowest.case == case.id
    return GradeLineSpec(
        title=f"case {case_label(case)}",
        axis=f"{stem}axis@{case.id}", hydraulic=f"{stem}hgl@{case.id}", energy=f"{stem}egl@{case.id}",
        vapour=_one(job, f"{stem}vapour@{case.id}"), rating=_one(job, f"{stem}rating@{case.id}"),
        standstill=_one(job, f"{stem}standstill@{case.id}"), levels=tuple(levels), pump=tag, pump_at=reach,
        lowest_at=_chainage(job, path.discharge, point, reach) if shown else None,
        lowest=(lowest.id,) if shown else (),
    )


def _chainage(job: Job, lines, point: str, start: float) -> float:
    for line in lines:
        if point.startswith(f"{line.tag}/"):
            return start + job.ledger[f"{point}/x"].value
        start += line.length.si
    return start
