"""Published cases: the YAML files beside this one, and the worksheets that work them out with the declared formulas."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cache
from pathlib import Path

import pint
import yaml

from calcpack.formulas import FORMULAS, Formula, pipe_flow

FOLDER = Path(__file__).parent / "published"
STANDARD_GRAVITY = 9.80665  # m/s2
UNITS = pint.UnitRegistry(autoconvert_offset_to_baseunit=True)


@cache
def si(text: str) -> float:
    """SI number of a quantity text: ``si('3 inch') == 0.0762``."""
    return float(UNITS.Quantity(str(text)).to_base_units().magnitude)


@dataclass(frozen=True)
class PublishedCase:
    """One record of a file of published figures; all quantities are texts. ``case['flow']`` is an input in SI."""

    id: str
    title: str
    source: str
    source_seen: bool
    evidence: str
    use: str
    inputs: Mapping[str, str]
    expected: Mapping[str, str]
    tolerance: str | Mapping[str, str]
    tolerance_reason: str

    def __getitem__(self, name: str) -> float:
        return si(self.inputs[name])

    def allowed(self, output: str) -> float:
        """Allowed difference of ``output`` in SI: a share of the expected figure, or absolute in its unit."""
        text = self.tolerance if isinstance(self.tolerance, str) else self.tolerance[output]
        if text.startswith("+/-"):
            unit = UNITS.Quantity(self.expected[output]).units
            return float(UNITS.Quantity(float(text[3:]), unit).to_base_units().magnitude)
        return float(text.removesuffix("%")) / 100 * abs(si(self.expected[output]))

    def misses(self, results: Mapping[str, float]) -> dict[str, str]:
        """Outputs further from the printed figure than the case allows, with both numbers (SI)."""
        return {
            output: f"{self.id}, {self.source}: {output} is {results[output]:.6g}, printed {text}"
            for output, text in self.expected.items()
            if not abs(results[output] - si(text)) <= self.allowed(output)
        }


@cache
def published(name: str) -> dict[str, PublishedCase]:
    """Cases of ``published/<name>.yaml`` by id."""
    with (FOLDER / f"{name}.yaml").open(encoding="utf-8") as stream:
        records = [PublishedCase(**record) for record in yaml.safe_load(stream)]
    cases = {case.id: case for case in records}
    assert len(cases) == len(records), f"{name}: an id occurs twice"
    return cases


class Worksheet:
    """Evaluates formulas and notes which ones were used."""

    def __init__(self) -> None:
        self.used: set[str] = set()

    def __call__(self, formula: Formula, **operands: object) -> float:
        self.used.add(formula.id)
        return float(formula.evaluate(**operands))

    def darcy(self, eps: float, D: float, Re: float) -> float:
        """Friction factor by the formula that applies; the root of the implicit one is put back into it."""
        formula = pipe_flow.friction_formula(Re)
        if formula is pipe_flow.LAMINAR:
            return self(formula, Re=Re)
        assert formula is pipe_flow.COLEBROOK, f"Re {Re:.0f} lies in the critical zone"
        self.used.add(formula.id)
        factor = pipe_flow.friction_factor(self(pipe_flow.RELATIVE_ROUGHNESS, eps=eps, D=D), Re)
        assert abs(formula.residual(f=factor, eps=eps, D=D, Re=Re)) < 1e-12
        return factor

    def velocity(self, Q: float, D: float) -> float:
        """Mean velocity of ``Q`` in a full pipe."""
        return self(pipe_flow.VELOCITY, Q=Q, A=self(pipe_flow.AREA, D=D))


Solver = Callable[[PublishedCase, Worksheet], Mapping[str, float]]
SOLVERS: dict[str, tuple[str, Solver]] = {}


def solves(name: str, *ids: str) -> Callable[[Solver], Solver]:
    """Enter a function that works out cases ``ids`` of file ``name``; it returns every expected output in SI."""

    def enter(solver: Solver) -> Solver:
        for case_id in ids:
            assert case_id not in SOLVERS, f"{case_id} is worked out twice"
            SOLVERS[case_id] = (name, solver)
        return solver

    return enter


def work_out(case_id: str) -> tuple[PublishedCase, Mapping[str, float], set[str]]:
    """The case, its results in SI and the ids of the formulas used."""
    name, solver = SOLVERS[case_id]
    case, sheet = published(name)[case_id], Worksheet()
    results = solver(case, sheet)
    assert set(results) == set(case.expected), f"{case_id}: outputs differ from the expected ones"
    assert sheet.used <= set(FORMULAS) and sheet.used, f"{case_id}: worked out without a declared formula"
    return case, results, sheet.used
