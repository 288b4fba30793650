"""Grade line: total head and hydraulic grade along each pump's path, against the pipe axis."""

from __future__ import annotations

from calcpack.formulas import fittings, grade
from calcpack.formulas.liquid import PRESSURE_HEAD
from calcpack.ledger import Entry
from calcpack.project.model import OUTLET, TANK, Case, Line, Pump
from calcpack.sheets.content import Block, Column, Derivation, Figure, Prose, Ref, Row, Section, Sheet, Table, Verdicts
from calcpack.sheets.criteria import AT_LEAST, house_limit, judge
from calcpack.sheets.job import Job, case_label, least
from calcpack.sheets.path import Path, at_rest, pump_path
from calcpack.sheets.pressures import velocity_head_of
from calcpack.sheets.total_head import end_head
from calcpack.values import LOOKED_UP, Value


def fill(job: Job) -> Sheet:
    """Book heads at the profile points of every pump's path for the normal case and that of the lowest delivery."""
    sections = []
    for pump in job.project.system.pumps.values():
        cases = _cases(job, pump)
        if not cases or not any(line.profile for line in job.project.system.lines.values()):
            continue
        lines = pump_path(cases[0], job.solved(cases[0]), pump).discharge
        if not any(f"{line.tag}/H_2@{cases[0].id}" in job.ledger for line in lines):  # else drawn with another pump
            sections.append(_section(job, pump, cases))
    if not sections:
        return Sheet("grade_line", "Grade line", omitted="no line states the profile of its axis")
    return Sheet("grade_line", "Grade line", tuple(sections))


def _cases(job: Job, pump: Pump) -> list[Case]:
    heads = [f"{pump.tag}/H_d@{case.id}" for case in job.cases if f"{pump.tag}/H_d@{case.id}" in job.ledger]
    if not heads:
        return []
    lowest = job.project.case(least(job.ledger, heads).case)
    normal = job.project.case(job.project.normal_case)
    wanted = [normal] if f"{pump.tag}/H_d@{normal.id}" in job.ledger else []
    return wanted if lowest in wanted else [*wanted, lowest]


def _section(job: Job, pump: Pump, cases: list[Case]) -> Section:
    tag, points = pump.tag, {}
    for case in cases:
        path = pump_path(case, job.solved(case), pump)
        points[case.id] = _along(job, case, pump, path)
        _series(job, case, pump, path, points[case.id])
    shown = cases[0]
    margins = [job.ledger[f"{point}/m@{case.id}"] for case in cases for point in points[case.id]
               if f"{point}/m@{case.id}" in job.ledger]
    zero_text = "0 m" if job.ledger.system == "SI" else "0 ft"
    zero = Value(0.0, "head", zero_text, source="COMMON", locator="below it the pipe runs under vacuum",
                 status=LOOKED_UP)
    limit = job.input("limits/grade_margin", zero, "x_lim", "Hydraulic grade above the pipe axis")
    band = house_limit(job, "grade_band", "head", "2 m", 2.0, "Hydraulic grade above the axis: warning band")
    check = judge(job, f"grade/{tag}", f"{tag}: hydraulic grade above the pipe axis", margins, limit, AT_LEAST,
                  band=band, warning="little pressure is left at this point: air may gather, and the pipe run under "
                                     "vacuum when flow or level change")
    lowest = job.ledger[check.operands["value"]]
    point = lowest.id.rpartition("/m@")[0]
    derived = [f"{point}/{symbol}@{lowest.case}" for symbol in ("H", "z_h", "m")]
    blocks: tuple[Block, ...] = (
        Figure(f"grade-{tag}", f"{tag}: grade lines along the path, case {case_label(shown)}",
               f"Profile of the pipe axis with hydraulic and energy grade lines; the grade is nearest to the axis at "
               f"{{{point}/x}} along {point.partition('/')[0]}, where it stands {{{lowest.id}}} above it."),
        *(_table(job, tag, case, points[case.id], lowest.id) for case in cases),
        Prose("Losses of fittings are spread over the length of their line; the exit loss falls at its end.", "note"),
        Prose(f"Lowest margin, derived in full, case {case_label(job.project.case(lowest.case))}:"),
        Derivation(tuple(derived), governing=(lowest.id,)),
        Verdicts((check.id,)),
    )
    return Section(f"grade-{tag}", f"{tag}: grade along the path", blocks)


def _table(job: Job, tag: str, case: Case, points: list[str], lowest: str) -> Table:
    columns = (
        Column("Line", width=1.4),
        *(Column(title, symbol, kind) for title, symbol, kind in (
            ("Distance along the line", "x", "length"), ("Pipe axis", "z", "elevation"), ("Total head", "H", "head"),
            ("Hydraulic grade", "z_h", "elevation"), ("Grade above axis", "m", "head"))),
    )
    rows = tuple(
        Row((point.partition("/")[0], Ref(f"{point}/x"), Ref(f"{point}/z"),
             *(_cell(job, f"{point}/{symbol}@{case.id}") for symbol in ("H", "z_h", "m"))),
            mark="lowest" if f"{point}/m@{case.id}" == lowest else "")
        for point in points
    )
    return Table(f"{tag}: grade along the discharge, case {case_label(case)}", columns, rows)


def _cell(job: Job, entry_id: str) -> Ref | str:
    return Ref(entry_id) if entry_id in job.ledger else "end of the path"


def _along(job: Job, case: Case, pump: Pump, path: Path) -> list[str]:
    """Book the heads at the profile points of the discharge lines; returns the points' id stems in order."""
    head, stems = job.ledger[f"{pump.tag}/H_d@{case.id}"], []
    for line in path.discharge:
        total = job.ledger[f"{line.tag}/h_L@{case.id}"]
        length = job.ledger[f"{line.tag}/L"]
        for position, point in enumerate(line.profile, start=1):
            stem = f"{line.tag}/point-{position}"
            x = job.input(f"{stem}/x", point.chainage, "x", f"{line.tag}: chainage of point {position}", case)
            z = job.input(f"{stem}/z", point.elevation, "z", f"{line.tag}: axis at point {position}", case)
            key, title = f"{stem}/H@{case.id}", f"{line.tag}: total head at point {position}"
            at_end = point is line.profile[-1] and point.chainage.si >= line.length.si
            exit_loss = _exit_loss(job, case, line)
            operands = {"H_1": head, "h_L": total, "x": x, "L": length}
            if exit_loss is None:
                at = job.ledger.apply(key, grade.HEAD_ALONG, title=title, case=case.id, **operands)
            else:
                at = job.ledger.apply(key, grade.HEAD_ALONG_EXIT, title=title, case=case.id, h_x=exit_loss, **operands)
            hydraulic = job.ledger.apply(f"{stem}/z_h@{case.id}", grade.HYDRAULIC_GRADE, case=case.id, H=at,
                                         h_v=velocity_head_of(job, case, line))
            stems.append(stem)
            if not (at_end and case.system.nodes[line.end].kind in (OUTLET, TANK)):  # there the surface sets the grade
                job.ledger.apply(f"{stem}/m@{case.id}", grade.AXIS_MARGIN, case=case.id, z_h=hydraulic, z=z)
        head = job.ledger.apply(f"{line.tag}/H_2@{case.id}", grade.HEAD_AFTER, case=case.id, H_1=head, h_L=total)
    return stems


def _exit_loss(job: Job, case: Case, line: Line) -> Entry | None:
    """Head lost at the exit of the line, or None where it has none."""
    entry_id = f"{line.tag}/h_x@{case.id}"
    if entry_id in job.ledger:
        return job.ledger[entry_id]
    for position, fitting in enumerate(line.fittings, start=1):
        if fitting.type == "exit":
            return job.ledger.apply(entry_id, fittings.LOCAL_HEAD, symbol="h_x", title="Exit loss", case=case.id,
                                    K=f"{line.tag}/K_{position}", V=f"{line.tag}/V@{case.id}", g=job.gravity())
    return None


def _series(job: Job, case: Case, pump: Pump, path: Path, stems: list[str]) -> None:
    """Book the plotted curves: axis, energy and hydraulic grade over the distance along the whole path."""
    ledger, tag, distance = job.ledger, pump.tag, 0.0
    axis, energy, hydraulic = [], [], []
    head = end_head(job, case, path.source).value
    for line in path.suction:
        end = head - ledger[f"{line.tag}/h_L@{case.id}"].value
        rise = velocity_head_of(job, case, line).value
        reach = ledger[f"{line.tag}/L"].value
        energy += [(distance, head), (distance + reach, end)]
        hydraulic += [(distance, head - rise), (distance + reach, end - rise)]
        distance, head = distance + reach, end
    axis.append((distance, pump.shaft_elevation.si))
    for line in path.discharge:
        for stem in (one for one in stems if one.startswith(f"{line.tag}/")):
            at = distance + ledger[f"{stem}/x"].value
            axis.append((at, ledger[f"{stem}/z"].value))
            energy.append((at, ledger[f"{stem}/H@{case.id}"].value))
            hydraulic.append((at, ledger[f"{stem}/z_h@{case.id}"].value))
        if not line.profile:
            start = ledger[f"{tag}/H_d@{case.id}"].value if line is path.discharge[0] else energy[-1][1]
            end = ledger[f"{line.tag}/H_2@{case.id}"].value
            rise = velocity_head_of(job, case, line).value
            reach = ledger[f"{line.tag}/L"].value
            energy += [(distance, start), (distance + reach, end)]
            hydraulic += [(distance, start - rise), (distance + reach, end - rise)]
        distance += ledger[f"{line.tag}/L"].value
    boiling = _head(job, case, ledger["site/p_atm"].value - ledger[f"liquid/p_v@{case.temperature}"].value)
    curves = [
        ("axis", "z", "elevation", axis, "Pipe axis"), ("egl", "H", "head", energy, "Energy grade line"),
        ("hgl", "z_h", "elevation", hydraulic, "Hydraulic grade line"),
        ("vapour", "z_v", "elevation", [(x, z - boiling) for x, z in axis], "Grade at which the liquid boils"),
    ]
    if at_rest(case, path.delivery):
        level = end_head(job, case, path.delivery).value
        curves.append(("standstill", "z_0", "elevation", [(x, level) for x, _ in (axis[0], axis[-1])],
                       "Grade with the pump stopped"))
    ratings = [line.rating.si for line in path.discharge if line.rating is not None]
    if len(ratings) == len(path.discharge):
        rated = _head(job, case, min(ratings))
        curves.append(("rating", "z_r", "elevation", [(x, z + rated) for x, z in axis], "Grade at the pressure rating"))
    for name, symbol, kind, points, title in curves:
        ledger.series(f"grade/{tag}/{name}@{case.id}", f"{title}, {tag}", symbol, kind, points, points_kind="length",
                      case=case.id, source="BERNOULLI")


def _head(job: Job, case: Case, pressure: float) -> float:
    """Pressure as head of the liquid of the case, for plotted curves."""
    return float(PRESSURE_HEAD.evaluate(p=pressure, rho=job.density(case).value, g=job.gravity().value))
