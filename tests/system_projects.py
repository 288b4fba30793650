"""Project folders from compact data: the four YAML files are written, read back and computed as an engineer's are.

Values are texts with units, as in the input files. What a published problem leaves open stands under ``OPEN`` and does
not enter the figure that is compared.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path

import yaml
from published_cases import PublishedCase, published

from calcpack import build, project
from calcpack.hydraulics.system_curve import system_curve

PUBLISHED = ("systems", "systems_by_formula", "npsh", "pumps", "networks", "friction")
OPEN = "not stated by the problem; does not enter the figure compared"
PUMP = "P-1"
STUB = "1 mm"  # a line must have a length: where the source has no pipe, one whose loss is far below the tolerance
STUB_FACTOR = 0.01
CASE = "1"


def published_case(case_id: str) -> PublishedCase:
    """The published case of that id, which stands in exactly one of the files."""
    (found,) = [published(name)[case_id] for name in PUBLISHED if case_id in published(name)]
    return found


def stated(case: PublishedCase, name: str, word: str = "") -> str:
    """An input of a published case as it is written in a project: '1.36 ft**3/s' -> '1.36 ft3/s'."""
    return f"{case.inputs[name].replace('**', '')} {word}".strip()


def liquid(
    density: str, viscosity: str | None = None, *, kinematic: str | None = None, vapour: str | None = None
) -> dict:
    """A liquid of stated properties at one temperature, which has no bearing on them."""
    row: dict = {"temperature": {"value": "20 degC", "source": OPEN}, "density": density}
    if kinematic is None:
        row["dynamic_viscosity"] = viscosity or {"value": "1 mPa.s", "source": OPEN}
    else:
        row["kinematic_viscosity"] = kinematic
    row["vapour_pressure"] = vapour or {"value": "0 kPa absolute", "source": OPEN}
    return {"name": "liquid of the problem", "model": "table", "temperatures": {"normal": row}}


def water(temperature: str) -> dict:
    """Water whose properties the program looks up."""
    return {"name": "water", "model": "water", "temperatures": {"normal": temperature}}


def tank(level: str, gas: str | None = None) -> dict:
    """A tank with one level, and a gas pressure (gauge) where it is closed."""
    return {"type": "tank", "levels": {"normal": level}} | ({} if gas is None else {"gas_pressure": gas})


def outlet(elevation: str) -> dict:
    """A free discharge."""
    return {"type": "outlet", "elevation": elevation}


def junction(elevation: str = "0 m", demand: str | None = None, inflow: str | None = None) -> dict:
    """A junction; ``demand`` is drawn there, ``inflow`` enters."""
    drawn = demand if inflow is None else f"-{inflow}"
    return {"type": "junction", "elevation": elevation} | ({} if drawn is None else {"demand": drawn})


def line(
    start: str, end: str, bore: str, length: str, *, factor: float | str | None = None, roughness: str | None = None,
    k: Mapping[str, float | str] | None = None, fittings: Sequence[dict] = (), equipment: Sequence[str] = (),
) -> dict:
    """A line with a given friction factor or a roughness; ``k`` gives loss coefficients by fitting."""
    made: dict = {"from": start, "to": end, "pipe": {"bore": bore}, "length": length}
    made |= {"friction_factor": factor} if roughness is None else {"roughness": roughness}
    made["fittings"] = [*({"type": type_, "K": value} for type_, value in (k or {}).items()), *fittings]
    return made | ({"equipment": list(equipment)} if equipment else {})


def stub(start: str, end: str, bore: str, k: Mapping[str, float | str] | None = None, **more) -> dict:
    """A line without friction worth the name: its local losses and equipment alone count."""
    return line(start, end, bore, STUB, factor=STUB_FACTOR, k=k, **more)


def loss(head: str) -> dict:
    """Equipment that loses the same head at any flow."""
    return {"type": "stated loss", "description": "stated loss", "states": {"only": {"law": "fixed", "head": head}}}


def pump(points: Sequence[Sequence[float]], columns: Mapping[str, str], best: str, *, elevation="0 m", **more) -> dict:
    """A pump of one unit with these curve points."""
    return {
        "installed": 1, "duty": 1, "shaft_elevation": elevation, "speed": "1450 rpm", "best_efficiency_flow": best,
        "curve": {"columns": dict(columns), "points": [list(point) for point in points]},
    } | more  # fmt: skip


def pump_through(flow: float, head: float, efficiency: float, npshr: float = 1.0, **more) -> dict:
    """A pump chosen for a duty (m3/s, m): head, efficiency and NPSHR are met there, the rest is a usual shape."""
    points = [(s * flow, head * (1.25 - 0.25 * s**2), e * efficiency, npshr * (0.6 + 0.4 * s**2))
              for s, e in ((0.0, 0.0), (0.5, 0.7), (1.0, 1.0), (1.5, 0.8))]  # fmt: skip
    columns = {"flow": "m3/s", "head": "m", "efficiency": "1", "npshr": "m"}
    return pump([[float(f"{x:.15g}") for x in p] for p in points], columns, f"{flow:.15g} m3/s", **more)


@dataclass(frozen=True)
class Computed:
    """A computed folder: numbers of the ledger and heads of the solution, SI."""

    outcome: build.Outcome

    def __call__(self, entry_id: str) -> float:
        return self.outcome.job.ledger[entry_id].value

    def at(self, entry_id: str, case: str = CASE) -> float:
        """Entry of a case."""
        return self(f"{entry_id}@{case}")

    def flow(self, tag: str, case: str = CASE) -> float:
        """Flow of a line, negative against its direction."""
        return self.outcome.job.solution.cases[case].lines[tag].flow

    def head(self, node: str, case: str = CASE) -> float:
        """Total head at a node above datum."""
        return self.outcome.job.solution.cases[case].heads[node]

    def findings(self, case: str = CASE) -> set[str]:
        """Codes of what the solver found worth saying."""
        return {finding.code for finding in self.outcome.job.solution.cases[case].findings}

    def verdict(self, check: str) -> str:
        """Verdict of a criterion."""
        return self.outcome.job.ledger[f"check/{check}"].verdict


@dataclass(frozen=True)
class Sketch:
    """A system in compact form. ``cases`` gives what each case sets differently; ``flow`` is the required flow."""

    liquid: dict
    nodes: dict[str, dict]
    lines: dict[str, dict]
    pumps: dict[str, dict] = field(default_factory=dict)
    equipment: dict[str, dict] = field(default_factory=dict)
    cases: dict[str, dict] = field(default_factory=lambda: {CASE: {}})
    units: str = "SI"
    site: dict = field(default_factory=dict)
    flow: str | None = None
    source: str = "published problem"

    def write(self, folder: Path) -> Path:
        """Write the four files; returns the folder."""
        files = {
            "project": {
                "document": {
                    "project": "Published problems", "title": self.source, "number": "PUB-1",
                    "type": "comparison", "owner": "tests", "revision": "A", "status": "draft", "date": "2026-01-31",
                },
                "units": self.units, "purpose": "To compare the result with the published one.",
                "requirement": {} if self.flow is None else {"flow": self.flow, "case": CASE},
                "normal_case": CASE,
            },
            "system": {
                "site": {"elevation": "0 m", "datum": "datum of the problem"} | self.site,
                "liquid": self.liquid, "nodes": self.nodes, "lines": self.lines, "equipment": self.equipment,
            },
            "pumps": self.pumps,
            "cases": {
                name: {"title": "as published", "temperature": "normal",
                       "pumps": {tag: made["duty"] for tag, made in self.pumps.items()}} | case
                for name, case in self.cases.items()
            },
        }  # fmt: skip
        folder.mkdir(exist_ok=True)
        for stem, data in files.items():
            text = yaml.safe_dump(data, sort_keys=False, allow_unicode=True)
            (folder / f"{stem}.yaml").write_text(text, encoding="utf-8")
        return folder

    def computed(self, folder: Path) -> Computed:
        """Write and compute; the solution must hold and every printed line must be redone by hand-check."""
        made = Computed(build.check(self.write(folder), lambda step: None))
        assert all(case.convergence.converged for case in made.outcome.job.solution.cases.values())
        assert made("hand-check/failed") == 0, made.outcome.job.ledger["check/hand-check"].note
        return made

    def needed_head(self, folder: Path, flow: float) -> float:
        """Head that the system asks of the pump at ``flow`` (m3/s)."""
        return float(system_curve(project.load(self.write(folder)), CASE, PUMP, [flow])[0])

    def with_chosen_pump(self, folder: Path, flow: float, efficiency: float = 0.7, **more) -> Computed:
        """For problems that state a flow and ask for head and power, as an engineer goes about it.

        The system curve at that flow gives the head; then a pump whose curve passes through that point takes its
        place, so that duty, power and port pressures are computed. The required head of the second project is read
        from its system curve, which knows nothing of the pump's own curve.
        """
        first = replace(self, pumps={PUMP: pump_through(flow, 1.0, efficiency, **more)})
        head = first.needed_head(folder, flow)
        made = replace(self, pumps={PUMP: pump_through(flow, head, efficiency, **more)}).computed(folder)
        assert abs(made.at(f"{PUMP}/Q") / flow - 1) < 1e-6
        return made


def required_head(made: Computed, case: str = CASE) -> float:
    """Head of the system at the required flow, as the sheet of the system curve prints it."""
    return made(f"curve/system/{PUMP}/at-Q_req@{case}")
