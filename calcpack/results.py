"""``results.json``: every number of a package for programs to read. The format is documented by RESULTS_SCHEMA."""

from __future__ import annotations

import json
import math

from calcpack.ledger import Entry, Ledger
from calcpack.ledger.entry import CHECK
from calcpack.ledger.text import display_text
from calcpack.quantities import KINDS
from calcpack.sheets.job import Job

FORMAT = "calcpack-results"
VERSION = 1

_NUMBER = {"type": ["number", "null"]}
_TEXT = {"type": "string"}
RESULTS_SCHEMA = {
    "$schema": "https://json-schema.org/draft/2020-12/schema",
    "title": "Results of a calculation package",
    "description": "All numbers are SI (m, s, kg, Pa, W, K, rad/s); pressures are gauge unless the kind says absolute. "
    "Heads are total energy heads above the project datum. null stands for a number that does not exist.",
    "type": "object",
    "required": ["format", "version", "program", "document", "units", "cases", "checks", "entries"],
    "properties": {
        "format": {"const": FORMAT},
        "version": {"const": VERSION, "description": "raised when a field changes its meaning or goes"},
        "program": {"type": "object", "additionalProperties": _TEXT},
        "document": {"type": "object", "additionalProperties": _TEXT},
        "fingerprint": {**_TEXT, "description": "SHA-256 over the input files and the program version"},
        "units": {"enum": ["SI", "US"], "description": "unit system of the display texts"},
        "cases": {
            "type": "array",
            "items": {
                "type": "object",
                "required": ["id", "title", "lines", "nodes", "pumps", "convergence", "findings"],
                "properties": {
                    "id": _TEXT,
                    "title": _TEXT,
                    "lines": {
                        "description": "by tag: flow (negative against the drawing), velocity, heads lost, pressures "
                        "at both ends",
                        "type": "object",
                        "additionalProperties": {"type": "object", "additionalProperties": _NUMBER},
                    },
                    "nodes": {
                        "description": "by tag: total head, elevation, gauge pressure without velocity head deducted",
                        "type": "object",
                        "additionalProperties": {"type": "object", "additionalProperties": _NUMBER},
                    },
                    "pumps": {
                        "description": "by tag: duty of one unit and number running",
                        "type": "object",
                        "additionalProperties": {"type": "object", "additionalProperties": _NUMBER},
                    },
                    "convergence": {"type": "object"},
                    "findings": {"type": "array", "items": {"type": "object", "additionalProperties": _TEXT}},
                },
            },
        },
        "checks": {
            "type": "array",
            "items": {
                "type": "object",
                "required": ["id", "title", "verdict"],
                "properties": {
                    "id": _TEXT, "title": _TEXT, "verdict": _TEXT, "case": _TEXT, "comparison": _TEXT,
                    "value": _NUMBER, "limit": _NUMBER, "margin": _NUMBER, "text": _TEXT, "source": _TEXT,
                },
            },
        },
        "entries": {
            "type": "array",
            "items": {
                "type": "object",
                "required": ["id", "symbol", "kind", "si", "origin"],
                "properties": {
                    "id": _TEXT, "title": _TEXT, "symbol": _TEXT, "kind": _TEXT, "si": _NUMBER, "text": _TEXT,
                    "unit": _TEXT, "origin": _TEXT, "case": _TEXT, "formula": _TEXT,
                    "operands": {"type": "object"}, "source": _TEXT, "path": _TEXT, "place": _TEXT, "status": _TEXT,
                    "note": _TEXT, "points": {"type": "array"},
                },
            },
        },
    },
}


def results(job: Job, fingerprint: str) -> dict:
    """The results of a filled job as plain data, SI floats. Follows RESULTS_SCHEMA."""
    document = job.project.document
    return {
        "format": FORMAT,
        "version": VERSION,
        "program": dict(job.program),
        "document": {name: str(getattr(document, name)) for name in ("project", "title", "number", "revision", "status")},
        "fingerprint": fingerprint,
        "units": job.project.units,
        "cases": [_case(job, case) for case in job.cases],
        "checks": [_check(job.ledger, entry) for entry in job.ledger.of_origin(CHECK)],
        "entries": [_entry(job.ledger, entry) for entry in job.ledger],
    }


def to_json(data: dict) -> str:
    """Stable JSON text: two spaces, UTF-8, no NaN, newline at the end."""
    return json.dumps(data, indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def _case(job: Job, case) -> dict:
    solved = job.solved(case)
    lines = {
        tag: {
            "flow": _number(flow.flow), "velocity": _number(flow.velocity), "reynolds": _number(flow.reynolds),
            "friction_factor": _number(flow.friction_factor), "friction_head": _number(flow.friction_head),
            "local_head": _number(flow.local_head), "equipment_head": _number(sum(flow.equipment_head.values())),
            "head_start": _number(solved.heads[case.system.lines[tag].start]),
            "head_end": _number(solved.heads[case.system.lines[tag].end]),
            "pressure_start": _pressure(job, case, case.system.lines[tag].start),
            "pressure_end": _pressure(job, case, case.system.lines[tag].end),
        }
        for tag, flow in solved.lines.items()
    }
    nodes = {
        tag: {"head": _number(head), "elevation": _elevation(case, tag), "pressure": _pressure(job, case, tag)}
        for tag, head in solved.heads.items()
    }
    return {
        "id": case.id, "title": case.title, "lines": lines, "nodes": nodes,
        "pumps": {tag: _pump(job, case, tag) for tag in solved.pumps},
        "convergence": {
            "iterations": solved.convergence.iterations, "continuity": _number(solved.convergence.continuity),
            "energy": _number(solved.convergence.energy), "converged": solved.convergence.converged,
        },
        "findings": [{"code": one.code, "tag": one.tag, "text": one.text} for one in solved.findings],
    }


def _pump(job: Job, case, tag: str) -> dict:
    duty = job.solved(case).pumps[tag]
    names = {"efficiency": "eta", "npsha": "NPSHA", "npshr": "NPSHR", "shaft_power": "P_s",
             "share_of_best_efficiency_flow": "r", "suction_pressure": "p_s", "discharge_pressure": "p_d"}
    entries = {name: f"{tag}/{symbol}@{case.id}" for name, symbol in names.items()}
    values = {name: _number(job.ledger[key].value) if key in job.ledger else None for name, key in entries.items()}
    return {"running": duty.running, "flow_each": _number(duty.flow_each), "flow": _number(duty.flow),
            "head": _number(duty.head), **values}


def _elevation(case, tag: str) -> float | None:
    node = case.system.nodes[tag]
    if node.elevation is not None:
        return node.elevation.si
    return node.levels[case.levels[tag]].si if node.levels else None


def _pressure(job: Job, case, tag: str) -> float | None:
    elevation = _elevation(case, tag)
    if elevation is None:
        return None
    head = job.solved(case).heads[tag]
    return _number(job.density(case).value * job.gravity().value * (head - elevation))


def _check(ledger: Ledger, entry: Entry) -> dict:
    operands = entry.operands or {}
    values = {name: _number(ledger[operands[name]].value) if name in operands else None for name in ("value", "limit")}
    texts = [display_text(ledger[operands[name]], ledger.system) for name in ("value", "limit") if name in operands]
    return {
        "id": entry.id, "title": entry.title, "verdict": entry.verdict, "case": entry.case,
        "comparison": entry.comparison, **values, "margin": _number(entry.value),
        "text": f" {entry.comparison} ".join(texts) or entry.note, "source": _source(entry),
    }


def _entry(ledger: Ledger, entry: Entry) -> dict:
    made = {
        "id": entry.id, "title": entry.title, "symbol": entry.symbol, "kind": entry.kind, "si": _number(entry.value),
        "text": "" if entry.points else display_text(entry, ledger.system),
        "unit": KINDS[entry.kind].display_unit(ledger.system).text, "origin": entry.origin, "case": entry.case,
        "formula": entry.formula, "operands": {name: ids if isinstance(ids, str) else list(ids)
                                               for name, ids in (entry.operands or {}).items()},
        "source": _source(entry), "path": entry.path, "place": entry.place, "status": entry.status,
        "note": entry.choice or entry.note,
    }
    if entry.points:
        made["points"] = [[x, y] for x, y in entry.points]
    return made


def _source(entry: Entry) -> str:
    return " ".join(part for part in (entry.citation.key, entry.citation.locator, entry.citation.text) if part)


def _number(value: float) -> float | None:
    return float(value) if math.isfinite(value) else None
