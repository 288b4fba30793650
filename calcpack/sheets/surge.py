"""Surge screening: wave speed, reflection time and the sudden-stop rise of each rated line. Not a surge analysis."""

from __future__ import annotations

from calcpack.formulas import surge
from calcpack.ledger import Entry
from calcpack.ledger.entry import NOT_CHECKED, REFER
from calcpack.project.model import Case, Line, Pump
from calcpack.sheets.content import Block, Derivation, Prose, Section, Sheet, Verdicts
from calcpack.sheets.criteria import AT_MOST, judge
from calcpack.sheets.job import Job, greatest
from calcpack.sheets.path import pump_path

ANCHORAGE = "throughout"
STATEMENT = (
    "This is a screening, not a surge analysis: one line, liquid without gas, a sudden full stop. Line packing, "
    "reflections and the collapse of vapour cavities can exceed it, and the lowest pressures are not followed."
)


def fill(job: Job) -> Sheet:
    """Screen the longest discharge line of every pump; the case of its greatest velocity governs."""
    sections = []
    for pump in job.project.system.pumps.values():
        cases = [case for case in job.cases if f"{pump.tag}/p_d@{case.id}" in job.ledger]
        if not cases:
            continue
        line = _longest(job, pump, cases[0])
        if f"{line.tag}/a" in job.ledger:
            continue  # screened with another pump that feeds the same line
        section = _section(job, pump, line, cases)
        if section:
            sections.append(section)
    if not sections:
        return Sheet("surge", "Surge screening", omitted="no discharge line states its wall and elastic modulus")
    return Sheet("surge", "Surge screening", tuple(sections))


def _longest(job: Job, pump: Pump, case: Case) -> Line:
    """The line whose reflection time is longest governs; short ones beside it follow its pressure."""
    return max(pump_path(case, job.solved(case), pump).discharge, key=lambda line: line.length.si)


def _section(job: Job, pump: Pump, line: Line, cases: list[Case]) -> Section | None:
    tag, ledger = line.tag, job.ledger
    fastest = greatest(ledger, [f"{tag}/V@{case.id}" for case in cases if f"{tag}/V@{case.id}" in ledger])
    case = job.project.case(fastest.case)
    bulk = case.liquid.bulk_modulus
    if line.surge_modulus is None or bulk is None or line.pipe.wall is None:
        return None
    if line.surge_restraint is None and line.surge_poisson is None:
        return None
    bore, wall = job.at(f"{tag}/D", case), job.input(f"{tag}/t", line.pipe.wall, "t", "Wall thickness")
    formula, reason = surge.wave_speed_formula(bore.value / wall.value)
    restraint, derived = _restraint(job, line, bore, wall, formula is surge.WAVE_SPEED_THICK)
    wave = ledger.apply(
        f"{tag}/a", formula, case=case.id, rho=job.density(case), D=bore,
        K_b=job.input(f"liquid/K_b@{case.temperature}", bulk, "K_b", "Bulk modulus of the liquid"),
        E=job.input(f"{tag}/E", line.surge_modulus, "E", f"{tag}: elastic modulus of the wall"),
        t=wall, c_1=restraint,
    )
    time = ledger.apply(f"{tag}/t_r", surge.REFLECTION_TIME, case=case.id, L=ledger[f"{tag}/L"], a=wave)
    head = ledger.apply(f"{tag}/Delta_h@{case.id}", surge.JOUKOWSKY_HEAD, case=case.id, a=wave, V=fastest,
                        g=job.gravity())
    rise = ledger.apply(f"{tag}/Delta_p@{case.id}", surge.JOUKOWSKY_PRESSURE, case=case.id, rho=job.density(case),
                        a=wave, V=fastest)
    upper = ledger.apply(f"{tag}/p_u@{case.id}", surge.UPPER_ESTIMATE, case=case.id,
                         p_d=f"{pump.tag}/p_d@{case.id}", dp=rise)
    lower = ledger.apply(f"{tag}/p_l@{case.id}", surge.LOWER_ESTIMATE, case=case.id,
                         p_d=f"{pump.tag}/p_d@{case.id}", dp=rise)
    check = _screen(job, line, upper, lower, case)
    ids = (*derived, wave.id, time.id, head.id, rise.id, upper.id, lower.id)
    blocks: tuple[Block, ...] = (
        Prose(STATEMENT, "caution"),
        Prose(f"The pipe is taken as {surge.ANCHORAGES[ANCHORAGE][1]}; {reason}."),
        Derivation(ids, governing=(upper.id,)),
        Verdicts((check.id,)),
        Prose(
            f"A stop within {{{time.id}}} counts as sudden. Valve closing and pump stopping times, check-valve slam "
            "and the restart of a drained line are for the specialist.", "note",
        ),
    )
    return Section(f"surge-{tag}", f"{tag} {line.description}", blocks)


def _restraint(job: Job, line: Line, bore: Entry, wall: Entry, thick: bool) -> tuple[Entry, tuple[str, ...]]:
    """Restraint factor as stated, else of a pipe anchored throughout, for a thick wall too; and what it derives."""
    tag, ledger = line.tag, job.ledger
    if line.surge_restraint is not None:
        return job.input(f"{tag}/c_1", line.surge_restraint, "c_1", f"{tag}: restraint factor"), ()
    poisson = job.input(f"{tag}/nu_w", line.surge_poisson, "nu", f"{tag}: Poisson's ratio of the wall")
    thin = ledger.apply(f"{tag}/c_0", surge.ANCHORAGES[ANCHORAGE][0], symbol="c_0", nu=poisson)
    if not thick:
        return thin, (thin.id,)
    factor = ledger.apply(f"{tag}/c_1", surge.RESTRAINT_THICK, t=wall, D=bore, nu=poisson, c_0=thin)
    return factor, (thin.id, factor.id)


def _screen(job: Job, line: Line, upper: Entry, lower: Entry, case: Case) -> Entry:
    """Refer when the upper estimate passes the rating or the lower one falls below vapour pressure."""
    tag, ledger, title = line.tag, job.ledger, f"{line.tag}: surge screening"
    if line.rating is None:
        return ledger.not_decided(f"check/surge/{tag}", title, NOT_CHECKED, "the line states no pressure rating",
                                  source="JOUKOWSKY", case=case.id)
    rating = job.input(f"{tag}/rating", line.rating, "p_rat", f"{tag}: pressure rating")
    vapour = ledger[f"liquid/p_v@{case.temperature}"].value - ledger["site/p_atm"].value
    reasons = []
    if upper.value > rating.value:
        reasons.append(f"the upper estimate {{{upper.id}}} passes the rating {{{rating.id}}}")
    if lower.value < vapour:
        reasons.append(f"the lower estimate {{{lower.id}}} lies below vapour pressure, so the column may part")
    if reasons:
        return ledger.not_decided(f"check/surge/{tag}", title, REFER, "; ".join(reasons), source="JOUKOWSKY",
                                  case=case.id)
    return judge(job, f"surge/{tag}", title, [upper], rating, AT_MOST)
