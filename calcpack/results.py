"""``results.json``: every number of a package for programs to read. The format is documented by RESULTS_SCHEMA."""

from __future__ import annotations

import json
import math

from calcpack.formulas.grade import NODE_PRESSURE
from calcpack.formulas.pipe_flow import VELOCITY_HEAD
from calcpack.formulas.suction import PORT_PRESSURE
from calcpack.ledger import Entry, Ledger
from calcpack.ledger.entry import CHECK, COMPARISONS, ORIGINS, VERDICTS
from calcpack.ledger.text import display_text
from calcpack.project.model import JUNCTION, PUMP_PORT, Case
from calcpack.quantities import KINDS, SYSTEMS
from calcpack.sheets.job import Job

FORMAT = "calcpack-results"
VERSION = 1
_DOCUMENT = ("project", "title", "number", "revision", "status")

_TEXT = {"type": "string"}


def _number(description: str) -> dict:
    return {"type": ["number", "null"], "description": description}


def _text(description: str) -> dict:
    return {**_TEXT, "description": description}


def _object(description: str, properties: dict, optional: tuple[str, ...] = ()) -> dict:
    """An object that has every one of ``properties`` but the optional ones."""
    return {
        "type": "object", "description": description, "properties": properties,
        "required": [name for name in properties if name not in optional],
    }


def _by_tag(description: str, properties: dict) -> dict:
    return {"type": "object", "description": description, "additionalProperties": _object("", properties)}


_LINE = {
    "open": {"type": "boolean", "description": "false where a check valve or a fixed loss keeps the line shut"},
    "flow": _number("m3/s, from the line's start to its end; negative against it"),
    "velocity": _number("m/s, mean, signed like the flow"),
    "reynolds": _number("Reynolds number"),
    "friction_factor": _number("Darcy friction factor"),
    "friction_head": _number("m, lost to pipe friction, signed like the flow"),
    "local_head": _number("m, lost in fittings, signed like the flow"),
    "equipment_head": _number("m, lost in equipment, signed like the flow"),
    "velocity_head": _number("m"),
    "head_start": _number("m, total head above datum at the node where the line starts"),
    "head_end": _number("m, total head above datum at the node where the line ends"),
    "pressure_start": _number("Pa gauge in the line at its start, see above"),
    "pressure_end": _number("Pa gauge in the line at its end, see above"),
}
_NODE = {
    "elevation": _number("m above datum: of the pipe connection, or of the free surface where none is stated"),
    "head": _number("m, total head above datum"),
    "pressure": _number("Pa gauge at that elevation, velocity head not deducted"),
}
_PUMP = {
    "running": {"type": "integer", "minimum": 0, "description": "units that run, in parallel"},
    "speed": _number("fraction of the speed of the curve"),
    "flow": _number("m3/s, of all running units together"),
    "flow_each": _number("m3/s, of one unit"),
    "head": _number("m, of one unit; beyond the curve data it is extrapolated, and a finding says so"),
    "efficiency": _number("fraction"),
    "shaft_power": _number("W, of one unit"),
    "share_of_best_efficiency_flow": _number("flow of one unit over its best-efficiency flow"),
    "npsha": _number("m, net positive suction head available, absolute, at the shaft elevation"),
    "npshr": _number("m, net positive suction head required, at the flow of one unit"),
    "npsh_ratio": _number("npsha over npshr"),
    "suction_pressure": _number("Pa gauge at the suction port, velocity head deducted"),
    "discharge_pressure": _number("Pa gauge at the discharge port, velocity head deducted"),
}
_VALVE = {
    "state": _text("active (holds its setting), open (cannot reach it), shut, or solved (balanced)"),
    "head": _number("m, lost in it"),
    "flow_coefficient": _number("m3/s of water at 1 bar that this takes; null where nothing is lost"),
}
# Names of the pump's numbers that are ledger entries, and their symbols there.
_PUMP_SYMBOLS = {
    "efficiency": "eta", "shaft_power": "P_s", "share_of_best_efficiency_flow": "r", "npsha": "NPSHA",
    "npshr": "NPSHR", "npsh_ratio": "r_N", "suction_pressure": "p_s", "discharge_pressure": "p_d",
}
_CASE = {
    "id": _TEXT,
    "title": _TEXT,
    "lines": _by_tag("by tag of the line", _LINE),
    "nodes": _by_tag("by tag of the node; ports of a pump are P-101.suction and P-101.discharge", _NODE),
    "pumps": _by_tag("by tag of the pump: its duty", _PUMP),
    "equipment": _by_tag("by tag of the equipment", {"head": _number("m, lost in it, signed like the flow")}),
    "valves": _by_tag("by tag of the control or balancing valve", _VALVE),
    "convergence": _object("how the solution was reached", {
        "converged": {"type": "boolean"},
        "iterations": {"type": "integer"},
        "continuity": _number("m3/s, largest flow left over at a node"),
        "energy": _number("m, largest head left over along a line"),
    }),
    "findings": {"type": "array", "items": _object("what a reader must know about the case", {
        "code": _text("stable word"), "tag": _text("where"), "text": _text("with its numbers"),
    })},
}
_CHECK = {
    "id": _text("id of its entry"),
    "title": _TEXT,
    "verdict": {"enum": list(VERDICTS)},
    "case": _text("governing case; empty where the criterion is none of a case"),
    "comparison": {"enum": ["", *COMPARISONS], "description": "value to limit; empty where nothing was compared"},
    "value": _number("SI"),
    "limit": _number("SI"),
    "margin": _number("SI, or a fraction of the limit; negative beyond the limit"),
    "value_entry": _text("id of the entry of the value"),
    "limit_entry": _text("id of the entry of the limit"),
    "text": _text("value and limit as printed, or why nothing was compared"),
    "note": _text("reason of a warning"),
    "source": _text("source of the limit"),
}
_ENTRY = {
    "id": _text("stable path, such as L-103/h_f@2: friction head of line L-103 in case 2"),
    "title": _TEXT,
    "symbol": _TEXT,
    "kind": _text("quantity kind, such as head or gauge_pressure"),
    "si": _number("the number in si_unit; null for choices and curves"),
    "si_unit": _TEXT,
    "text": _text("number and unit as printed"),
    "unit": _text("unit as printed"),
    "origin": _text(f"what made the number: {', '.join(ORIGINS)}"),
    "case": _text("empty where it holds for every case"),
    "formula": _text("id of the formula that made it"),
    "operands": {
        "type": "object", "description": "symbol of the formula: id of the entry, or list of ids",
        "additionalProperties": {"anyOf": [_TEXT, {"type": "array", "items": _TEXT}]},
    },
    "source": _text("key of the bibliography with the place in it, or the document that the project names"),
    "path": _text("of an input: its path in the input files"),
    "place": _text("of an input: file and line"),
    "status": _text("of an input: confirmed, unconfirmed, looked up, supplied by the program"),
    "note": _text("the choice, or a remark"),
    "points": {
        "type": "array", "description": "of a curve: pairs of the swept number and the number of the kind, SI",
        "items": {"type": "array", "items": {"type": "number"}, "minItems": 2, "maxItems": 2},
    },
    "points_kind": _text("of a curve: quantity kind of the swept number"),
}
_CONVENTIONS = (
    "Numbers are SI (m, s, kg, Pa, W, K, rad/s), unrounded; null stands for a number that does not "
    "exist. Heads are total energy heads above the project datum. Pressures are gauge unless the kind says absolute. "
    "The pressure of a node is that of liquid brought to rest: it belongs to the total head. The pressure at an end of "
    "a line is that of the flowing liquid at the elevation of the node: the velocity head of the line is deducted at "
    "junctions and pump ports; at a tank or outlet it is the pressure of the node, because the entrance and exit "
    "losses of the line lie between. "
    "Stability: within one version a field keeps its name, place, unit and meaning, and none that is required goes; "
    "new fields, kinds, origins and finding codes may come, so a reader passes over what it does not know. "
    "Ids of entries are stable between revisions of a project. The version is raised when anything else changes."
)
RESULTS_SCHEMA = {
    "$schema": "https://json-schema.org/draft/2020-12/schema",
    "title": "Results of a calculation package",
    **_object(_CONVENTIONS, {
        "format": {"const": FORMAT},
        "version": {"const": VERSION},
        "program": {"type": "object", "additionalProperties": _TEXT, "description": "names and versions"},
        "document": _object("title block", {name: _TEXT for name in _DOCUMENT}),
        "fingerprint": _text("SHA-256 over the input files and the program versions"),
        "units": {"enum": list(SYSTEMS), "description": "unit system of the printed texts"},
        "cases": {"type": "array", "items": _object("one operating case", _CASE)},
        "checks": {"type": "array", "items": _object("one criterion", _CHECK)},
        "entries": {
            "type": "array", "description": "the whole ledger, in the order of calculation",
            "items": _object("one number of the package", _ENTRY, optional=("points", "points_kind")),
        },
    }),
}


def results(job: Job, fingerprint: str) -> dict:
    """The results of a filled job as plain data, SI floats. Follows RESULTS_SCHEMA."""
    document = job.project.document
    return {
        "format": FORMAT,
        "version": VERSION,
        "program": dict(job.program),
        "document": {name: str(getattr(document, name)) for name in _DOCUMENT},
        "fingerprint": fingerprint,
        "units": job.project.units,
        "cases": [_case(job, case) for case in job.cases],
        "checks": [_check(job, entry) for entry in job.ledger.of_origin(CHECK)],
        "entries": [_entry(job.ledger, entry) for entry in job.ledger],
    }


def to_json(data: dict) -> str:
    """Stable JSON text: one space a level, UTF-8, no NaN, newline at the end."""
    return json.dumps(data, indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def _case(job: Job, case: Case) -> dict:
    solved = job.solved(case)
    nodes = {
        tag: {"elevation": _finite(_elevation(case, tag)), "head": _finite(head),
              "pressure": _finite(_pressure(job, case, tag))}
        for tag, head in solved.heads.items()
    }
    return {
        "id": case.id, "title": case.title,
        "lines": {tag: _line(job, case, tag) for tag in solved.lines},
        "nodes": nodes,
        "pumps": {tag: _pump(job, case, tag) for tag in solved.pumps},
        "equipment": {tag: {"head": _finite(head)} for line in solved.lines.values()
                      for tag, head in line.equipment_head.items()},
        "valves": {tag: {"state": one.state, "head": _finite(one.head), "flow_coefficient": _finite(one.coefficient)}
                   for tag, one in solved.valves.items()},
        "convergence": {
            "converged": solved.convergence.converged, "iterations": solved.convergence.iterations,
            "continuity": _finite(solved.convergence.continuity), "energy": _finite(solved.convergence.energy),
        },
        "findings": [{"code": one.code, "tag": one.tag, "text": one.text} for one in solved.findings],
    }


def _line(job: Job, case: Case, tag: str) -> dict:
    solved, line = job.solved(case), case.system.lines[tag]
    flow = solved.lines[tag]
    velocity_head = float(VELOCITY_HEAD.evaluate(V=flow.velocity, g=job.gravity().value))
    numbers = {
        "flow": flow.flow, "velocity": flow.velocity, "reynolds": flow.reynolds,
        "friction_factor": flow.friction_factor, "friction_head": flow.friction_head, "local_head": flow.local_head,
        "equipment_head": sum(flow.equipment_head.values()), "velocity_head": velocity_head,
        "head_start": solved.heads[line.start], "head_end": solved.heads[line.end],
        "pressure_start": _pressure(job, case, line.start, velocity_head),
        "pressure_end": _pressure(job, case, line.end, velocity_head),
    }
    return {"open": flow.open, **{name: _finite(number) for name, number in numbers.items()}}


def _pump(job: Job, case: Case, tag: str) -> dict:
    duty = job.solved(case).pumps[tag]
    booked = {name: f"{tag}/{symbol}@{case.id}" for name, symbol in _PUMP_SYMBOLS.items()}
    return {
        "running": duty.running, "speed": _finite(job.solved(case).speeds.get(tag, 1.0)),
        "flow": _finite(duty.flow), "flow_each": _finite(duty.flow_each), "head": _finite(duty.head),
        **{name: _finite(job.ledger[key].value) if key in job.ledger else None for name, key in booked.items()},
    }


def _elevation(case: Case, tag: str) -> float:
    """Elevation of a node, of its free surface where the pipe has none; NaN where neither is stated."""
    node = case.system.nodes[tag]
    if node.elevation is not None:
        return node.elevation.si
    return node.levels[case.levels[tag]].si if node.levels else math.nan


def _pressure(job: Job, case: Case, tag: str, velocity_head: float | None = None) -> float:
    """Gauge pressure at a node, or in a line of that velocity head where it joins the node."""
    quantities = {
        "rho": job.density(case).value, "g": job.gravity().value, "H": job.solved(case).heads[tag],
        "z": _elevation(case, tag),
    }
    if velocity_head is None or case.system.nodes[tag].kind not in (JUNCTION, PUMP_PORT):
        return float(NODE_PRESSURE.evaluate(**quantities))
    return float(PORT_PRESSURE.evaluate(h_v=velocity_head, **quantities))


def _check(job: Job, entry: Entry) -> dict:
    ledger, operands = job.ledger, entry.operands or {}
    compared = {name: ledger[operands[name]] for name in ("value", "limit") if name in operands}
    texts = [display_text(one, ledger.system) for one in compared.values()]
    return {
        "id": entry.id, "title": entry.title, "verdict": entry.verdict, "case": entry.case,
        "comparison": entry.comparison,
        **{name: _finite(compared[name].value) if name in compared else None for name in ("value", "limit")},
        "margin": _finite(entry.value),
        **{f"{name}_entry": operands.get(name, "") for name in ("value", "limit")},
        "text": f" {entry.comparison} ".join(texts) or job.plain(entry.note), "note": job.plain(entry.warning),
        "source": _source(entry),
    }


def _entry(ledger: Ledger, entry: Entry) -> dict:
    kind = KINDS[entry.kind]
    text = display_text(entry, ledger.system) if entry.choice or math.isfinite(entry.value) else ""
    made = {
        "id": entry.id, "title": entry.title, "symbol": entry.symbol, "kind": entry.kind, "si": _finite(entry.value),
        "si_unit": kind.si, "text": text, "unit": kind.display_unit(ledger.system).text, "origin": entry.origin,
        "case": entry.case, "formula": entry.formula, "operands": {name: ids if isinstance(ids, str) else list(ids)
                                               for name, ids in (entry.operands or {}).items()},
        "source": _source(entry), "path": entry.path, "place": entry.place, "status": entry.status,
        "note": entry.choice or entry.note,
    }
    if entry.points:
        made |= {"points": [[x, y] for x, y in entry.points], "points_kind": entry.points_kind}
    return made


def _source(entry: Entry) -> str:
    return " ".join(part for part in (entry.citation.key, entry.citation.locator, entry.citation.text) if part)


def _finite(number: float) -> float | None:
    return float(number) if math.isfinite(number) else None
