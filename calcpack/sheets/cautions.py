"""Cautions raised from results and inputs, exclusions, and what nobody else has checked.

Each caution has a trigger, one sentence of fact that carries its number, and one of deference. Nothing here promises
safety or states the law: local rules and licensed practice decide.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from calcpack.formulas import pipe_flow
from calcpack.ledger import Entry
from calcpack.ledger.entry import CHECK, MET, NOT_CHECKED
from calcpack.project.model import TANK, Case, Line, Pump
from calcpack.sheets.caution_words import (
    ANY_CRITERION,
    ANY_FINDING,
    CRITERIA,
    EXCLUSIONS,
    FINDINGS,
    FLAGS,
    GENERAL,
    MAKER,
    NOBODY_ELSE,
    OWNER,
)
from calcpack.sheets.content import Column, Prose, Row, Section, Sheet, Table
from calcpack.sheets.criteria import house_limit
from calcpack.sheets.job import Job, greatest
from calcpack.sheets.path import at_rest, pump_path
from calcpack.sheets.registers import count, open_counts, plain
from calcpack.sheets.total_head import end_head

CLOSABLE = ("valve", "cock", "damper")
NONE_NAMED = "none named"


@dataclass(frozen=True)
class Caution:
    """``fact`` carries its numbers as ``{entry id}``; ``deference`` says who decides."""

    hazard: str
    fact: str
    deference: str = GENERAL


def fill(job: Job) -> Sheet:
    """Evaluate every trigger; books the limits and counts that the sentences quote."""
    raised = [*_suction(job), *_criteria(job), *_liquid(job), *_stored(job), *_methods(job), *_assumptions(job)]
    sections = (
        Section("cautions-raised", "Cautions raised by this project", tuple(_prose(one) for one in raised)),
        Section("cautions-always", "Cautions that hold for every pumped system",
                tuple(_prose(one) for one in _always(job))),
        Section("cautions-exclusions", "Outside this calculation", _exclusions(job)),
        Section("cautions-unchecked", "What nobody else has checked", _unchecked(job)),
    )
    return Sheet("cautions", "Cautions and exclusions", tuple(section for section in sections if section.blocks))


def _prose(caution: Caution) -> Prose:
    return Prose(f"{caution.hazard}. {caution.fact} {caution.deference}", "caution")


def _case(job: Job, case_id: str) -> str:
    return f"case {case_id} ({plain(job.project.case(case_id).title)})"


def _suction(job: Job) -> Iterator[Caution]:
    """Every case in which the pressure at a suction port is below atmospheric."""
    for tag in job.project.system.pumps:
        entries = [job.ledger[f"{tag}/p_s@{case.id}"] for case in job.cases if f"{tag}/p_s@{case.id}" in job.ledger]
        below = [entry for entry in entries if entry.value < 0]
        if below:
            values = "; ".join(f"{{{entry.id}}} in {_case(job, entry.case)}" for entry in below)
            yield Caution(
                "Suction below atmospheric pressure",
                f"The pressure at the suction port of {tag} falls below atmospheric: {values}; air may enter through "
                "seals, packings and joints.", MAKER,
            )


def _criteria(job: Job) -> Iterator[Caution]:
    """Every criterion that is not plainly met, in the words of its family."""
    for check in job.ledger.of_origin(CHECK):
        if check.verdict == MET:
            continue
        family = check.id.removeprefix("check/").split("/")[0]
        if family == "suction-gauge" and check.verdict != NOT_CHECKED:
            continue  # told case by case above
        hazard, consequence, deference = CRITERIA.get(family, ANY_CRITERION)
        yield Caution(hazard, _fact(job, check, consequence), deference)


def _fact(job: Job, check: Entry, consequence: str) -> str:
    operands = check.operands or {}
    where = f" in {_case(job, check.case)}" if check.case else ""
    if "value" not in operands:
        return f"{check.title}{where}: {check.verdict}; {check.note}. {consequence}"
    reason = f" ({check.warning})" if check.warning else ""
    return (f"{check.title}{where}: {{{operands['value']}}} against a limit of {{{operands['limit']}}}, margin "
            f"{{{operands['margin']}}}; {check.verdict}{reason}. {consequence}")


def _liquid(job: Job) -> Iterator[Caution]:
    """Flags of the liquid, and temperatures beyond the limits from which a caution is raised."""
    names = [case.temperature for case in job.cases]
    entries = [job.ledger[f"liquid/T@{name}"] for name in dict.fromkeys(names) if f"liquid/T@{name}" in job.ledger]
    if not entries:
        return
    warmest, coldest = max(entries, key=lambda one: one.value), min(entries, key=lambda one: one.value)
    for flag in job.project.system.liquid.flags:
        hazard, fact, deference = FLAGS.get(flag, FLAGS["other"])
        yield Caution(hazard, fact.format(flag=flag, liquid=plain(job.project.system.liquid.name),
                                          temperature=f"{{{warmest.id}}}"), deference)
    hot = house_limit(job, "hot_liquid", "temperature", "60 °C", 333.15, "Liquid temperature: caution on contact above",
                      source="TOOL", note="a threshold for raising the caution, not a limit of exposure")
    cold = house_limit(job, "cold_liquid", "temperature", "5 °C", 278.15, "Liquid temperature: caution on frost at or "
                       "below", source="TOOL", note="a threshold for raising the caution")
    if warmest.value > hot.value:
        yield Caution("Hot liquid and surfaces", f"The liquid reaches {{{warmest.id}}}, above the threshold of "
                      f"{{{hot.id}}}; contact may burn.", OWNER)
    if coldest.value <= cold.value:
        yield Caution("Freezing", f"The liquid is at {{{coldest.id}}} in a case, at or below the threshold of "
                      f"{{{cold.id}}}; standing liquid may freeze when the surroundings are colder.", OWNER)


def _stored(job: Job) -> Iterator[Caution]:
    """Columns of liquid above a stopped pump, liquid shut in between valves, and open liquid surfaces."""
    for pump in job.project.system.pumps.values():
        cases = [case for case in job.cases if f"{pump.tag}/H_sys@{case.id}" in job.ledger]
        if cases:
            yield from _column(job, pump, cases)
            yield from _shut_in(job, pump, cases[0])
    for node in job.project.system.nodes.values():
        levels = [entry.id for entry in job.ledger if entry.id.startswith(f"{node.tag}/z@")]
        if node.kind == TANK and node.gas_pressure is None and levels:
            yield Caution(
                "Open liquid surface, confined space",
                f"{node.tag} holds an open surface up to {{{greatest(job.ledger, levels).id}}}: somebody may fall in, "
                "and the air above the liquid may be short of oxygen or toxic.", OWNER,
            )


def _column(job: Job, pump: Pump, cases: list[Case]) -> Iterator[Caution]:
    deliveries = [(case, pump_path(case, job.solved(case), pump).delivery) for case in cases]
    ends = [end_head(job, case, tag) for case, tag in deliveries if at_rest(case, tag)]
    if not ends:
        return
    highest = max(ends, key=lambda entry: entry.value)
    shaft = job.input(f"{pump.tag}/z", pump.shaft_elevation, "z_p", f"{pump.tag}: elevation of the shaft centre")
    if highest.value > shaft.value:
        yield Caution("Stored energy", f"When {pump.tag} stands still, liquid up to {{{highest.id}}} above datum bears "
                      f"on it at {{{shaft.id}}}, held by valves alone.", OWNER)


def _shut_in(job: Job, pump: Pump, case: Case) -> Iterator[Caution]:
    lines = [line for line in pump_path(case, job.solved(case), pump).lines if _valves(line)]
    valves = count(job, f"{pump.tag}/count-valves", sum(_valves(line) for line in lines),
                   f"{pump.tag}: valves along its path that can close")
    if valves.value > 1:
        yield Caution(
            "Trapped liquid",
            f"Along the path of {pump.tag} {{{valves.id}}} valves can close, in {', '.join(one.tag for one in lines)}; "
            "the pressure of liquid shut in between two of them rises when it warms.", GENERAL,
        )


def _valves(line: Line) -> int:
    return sum(fitting.count for fitting in line.fittings if any(word in fitting.type for word in CLOSABLE))


def _methods(job: Job) -> Iterator[Caution]:
    """Results in the critical zone, outside the range of a formula, or with a finding of the solver."""
    between = [entry for entry in job.ledger if entry.formula == pipe_flow.CRITICAL_ZONE.id]
    if between:
        places = "; ".join(f"{entry.id.split('/')[0]} in {_case(job, entry.case)}, Reynolds number "
                           f"{{{entry.operands['Re']}}}" for entry in between if entry.case)
        yield Caution("Flow between laminar and turbulent", f"The friction factor is uncertain in the critical zone: "
                      f"{places or 'of a candidate size only'}.", GENERAL)
    outside = [entry for entry in job.ledger if entry.findings]
    if outside:
        number = count(job, "count/outside-range", len(outside), "Number of results outside the range of their formula")
        named = "; ".join(f"{entry.id.split('/')[0]}: {entry.title} {{{entry.id}}}" for entry in outside)
        yield Caution("Formula used outside its range", f"Results outside the stated range of their formula: "
                      f"{{{number.id}}} ({named}).", "Not to be used for purchase or operation until confirmed.")
    yield from _findings(job)


def _findings(job: Job) -> Iterator[Caution]:
    """Findings of the solution, those of one code and place together; what other cautions tell is left out."""
    told = {("critical-zone", tag) for tag in job.project.system.lines}
    told |= {("sub-atmospheric", pump.suction) for pump in job.project.system.pumps.values()}
    grouped: dict[tuple[str, str], list[str]] = {}
    for case in job.cases:
        for finding in job.solved(case).findings:
            key = (finding.code, finding.tag)
            if key not in told:
                words = plain(finding.text).rstrip(".")
                grouped.setdefault(key, []).append(f"{words} ({_case(job, case.id)})")
    for (code, _), texts in grouped.items():
        hazard, deference = FINDINGS.get(code, ANY_FINDING)
        yield Caution(hazard, f"{'; '.join(texts)}.", deference)


def _assumptions(job: Job) -> Iterator[Caution]:
    counts = [entry for entry in open_counts(job).values() if entry.value > 0]
    if counts:
        text = "; ".join(f"{entry.title.removeprefix('Number of ')}: {{{entry.id}}}" for entry in counts)
        yield Caution("Open inputs and assumptions", f"The results rest on values that nobody has confirmed: {text}.",
                      "Each is to be confirmed or replaced before the package is issued for construction.")


def _always(job: Job) -> Iterator[Caution]:
    for tag in job.project.system.pumps:
        speed = f" at {{{tag}/n}}" if f"{tag}/n" in job.ledger else ""
        yield Caution("Rotating machinery", f"{tag} turns{speed}: guards, alignment and the energy that stays in "
                      "shaft and liquid when the drive is off are to be dealt with before anybody works on it.",
                      "Isolation and lock-out follow the owner's procedure, the maker's instructions and local rules.")
        motor = f" of {{{tag}/P_m}}" if f"{tag}/P_m" in job.ledger else ""
        yield Caution("Electrical", f"The drive{motor} of {tag} is taken as a number only: supply, protection, "
                      "earthing and area classification are outside this calculation.",
                      "They are for a licensed electrical designer under local rules.")
    yield Caution("Automatic start", "A pump controlled by level, pressure or time starts without warning.", OWNER)


def _exclusions(job: Job) -> tuple[Table, ...]:
    """The standing topics with the document that covers each, and the exclusions in the project's own words."""
    stated = job.project.exclusions
    rows = []
    for topic, text in EXCLUSIONS:
        own = [one for one in stated if one.covered_by and topic in f"{one.id.replace('-', ' ')} {one.text}".lower()]
        covered = "; ".join(f"{one.covered_by} ({one.id})" for one in own)
        rows.append(Row((topic, text, covered or NONE_NAMED), mark="" if covered else "open"))
    columns = (Column("Topic", width=1.6), Column("Not covered here", width=4.0), Column("Covered by", width=2.4))
    tables = [Table("Topics outside this calculation, and the document that covers each", columns, tuple(rows))]
    if stated:
        columns = (Column("Id", width=0.6), Column("Excluded", width=3.4), Column("Reason", width=2.0),
                   Column("Covered by", width=2.0))
        own_rows = tuple(Row((one.id, one.text, one.reason, one.covered_by or NONE_NAMED)) for one in stated)
        tables.append(Table("Exclusions stated by the project", columns, own_rows))
    return tuple(tables)


def _unchecked(job: Job) -> tuple[Prose, ...]:
    checks = [check for check in job.ledger.of_origin(CHECK) if check.verdict == NOT_CHECKED]
    number = count(job, "count/criteria-not-checked", len(checks), "Number of criteria that could not be checked")
    return (
        *(Prose(text) for text in NOBODY_ELSE),
        Prose(f"Criteria for which an input is missing: {{{number.id}}}."),
    )
