"""pumps.yaml: pumps by tag, with the maker's curve."""

from __future__ import annotations

from typing import Annotated, Any

from pydantic import Field, PlainValidator, WithJsonSchema
from pydantic_core import core_schema

from calcpack.project.read import Items, Section, Text
from calcpack.project.schema.base import BROKEN, Sourced
from calcpack.project.schema.document import Flow
from calcpack.project.schema.leaves import Quantity
from calcpack.project.schema.system import Elevation, Rating
from calcpack.project.schema.words import Loose
from calcpack.values import Value

CURVE_KINDS = {"flow": "flow", "head": "head", "efficiency": "efficiency", "npshr": "head"}
NEEDED_COLUMNS = ("flow", "head")


def _columns(raw: Any, info: core_schema.ValidationInfo) -> Any:
    """Unit text by column name, in the order written."""
    if raw is BROKEN:
        return BROKEN
    problems = info.context.problems
    if not isinstance(raw, Section):
        problems.add(raw, "a block of keys is wanted here", "such as {flow: m3/h, head: m, efficiency: '1', npshr: m}")
        return BROKEN
    good = True
    for name, unit in raw.items():
        if name not in CURVE_KINDS or not isinstance(unit, Text):
            problems.add_at(
                raw.path, unit.file, unit.line, f"'{name}' is not a column", f"known: {', '.join(CURVE_KINDS)}"
            )
            good = False
    for name in NEEDED_COLUMNS:
        if name not in raw:
            problems.add(raw, f"the column '{name}' is missing")
            good = False
    return raw if good else BROKEN


def _rows(raw: Any, info: core_schema.ValidationInfo) -> Any:
    """Rows of numbers, kept as read."""
    if raw is BROKEN:
        return BROKEN
    if not isinstance(raw, Items):
        info.context.problems.add(raw, "a list of points is wanted here", "one [..] of numbers for each point")
        return BROKEN
    good = True
    for row in raw:
        if not isinstance(row, Items) or not all(isinstance(number, Text) for number in row):
            info.context.problems.add(row, "a list of numbers is wanted here", "such as [0, 54.0, 0, 1.7]")
            good = False
    return raw if good else BROKEN


class CurveInput(Sourced):
    """Performance curve as the maker states it."""

    columns: Annotated[
        Any, PlainValidator(_columns), WithJsonSchema({"type": "object", "additionalProperties": {"type": "string"}})
    ] = Field(description="columns with their units: flow, head, and where known efficiency and npshr")
    points: Annotated[
        Any,
        PlainValidator(_rows),
        WithJsonSchema({"type": "array", "items": {"type": "array", "items": {"type": "number"}}, "minItems": 3}),
    ] = Field(description="one list of numbers for each point, flow ascending")


class PreferredRegionInput(Sourced):
    """Preferred operating region as fractions of the best-efficiency flow."""

    low: Annotated[Value, Quantity("fraction", above=0.0, most=1.0)] = Field(description="lower end, such as 70 %")
    high: Annotated[Value, Quantity("fraction", least=1.0, most=3.0)] = Field(description="upper end, such as 120 %")


class NpshMarginInput(Sourced):
    """Required margin of NPSH available over NPSH required."""

    ratio: Annotated[Value, Quantity("ratio", least=1.0)] | None = Field(None, description="as a ratio")
    head: Annotated[Value, Quantity("head", least=0.0)] | None = Field(None, description="as a head")


class MotorInput(Sourced):
    """Driver."""

    rating: Annotated[Value, Quantity("power", above=0.0)] = Field(description="rated power")
    efficiency: Annotated[Value, Quantity("efficiency", above=0.0, most=1.0)] = Field(
        description="motor efficiency at the duty load"
    )
    drive_efficiency: Annotated[Value, Quantity("efficiency", above=0.0, most=1.0)] | None = Field(
        None, description="efficiency of gear, belt or frequency converter; 1 where directly coupled"
    )
    margin: Annotated[Value, Quantity("ratio", least=1.0)] | None = Field(
        None, description="required ratio of rating to greatest shaft power"
    )
    margin_basis: str = Field("", description="rule of the motor-margin table, where no margin is given")
    poles: Loose = Field("", description="number of poles")


class PumpInput(Sourced):
    """A pump item: one or more equal units in parallel."""

    description: str = Field("", description="what it is")
    type: str = Field("", description="type of pump")
    service: str = Field("", description="service of the NPSH-margin table")
    installed: Annotated[int, Field(ge=1)] = Field(description="units installed, standby among them")
    duty: Annotated[int, Field(ge=1)] = Field(description="units that run together at normal duty")
    shaft_elevation: Elevation = Field(description="elevation of the shaft, datum of NPSH")
    speed: Annotated[Value, Quantity("rotational_speed", above=0.0)] = Field(description="speed of the curve")
    stages: Annotated[int, Field(ge=1)] = Field(1, description="number of stages")
    curve: CurveInput = Field(description="maker's curve of one unit")
    best_efficiency_flow: Flow = Field(description="flow of best efficiency of one unit")
    rated_flow: Flow | None = Field(None, description="flow that the unit is ordered for")
    minimum_flow: Flow | None = Field(None, description="minimum continuous flow of one unit")
    preferred_region: PreferredRegionInput | None = Field(None, description="preferred operating region")
    npsh_margin: NpshMarginInput | None = Field(None, description="required NPSH margin")
    casing_rating: Rating | None = Field(None, description="pressure rating of the casing")
    flange_rating: Rating | None = Field(None, description="pressure rating of the flanges")
    motor: MotorInput | None = Field(None, description="driver")
