"""cases.yaml: operating cases by id."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Literal

from pydantic import Field, PlainValidator, WithJsonSchema
from pydantic_core import core_schema

from calcpack.project.read import Section, Text
from calcpack.project.schema.base import BROKEN, Input
from calcpack.project.schema.leaves import Listed, Named, Quantity
from calcpack.project.schema.words import Name, Words
from calcpack.values import Value

PURPOSES = ("normal", "head", "flow", "npsh", "cold", "hot", "low_flow", "occasional")


def _choice(raw: Any, info: core_schema.ValidationInfo) -> Any:
    """One word for everything, or a word for each tag."""
    if raw is BROKEN or isinstance(raw, Text):
        return raw
    if not isinstance(raw, Section) or not all(isinstance(word, Text) for word in raw.values()):
        info.context.problems.add(raw, "one word, or one for each tag, is wanted here", "such as {TK-101: min}")
        return BROKEN
    return raw


def _anything(raw: Any) -> Any:
    return raw


Choice = Annotated[
    str | Mapping[str, str],
    PlainValidator(_choice),
    WithJsonSchema({"anyOf": [{"type": "string"}, {"type": "object", "additionalProperties": {"type": "string"}}]}),
]


class CaseInput(Input):
    """One operating case: the state of every part, and inputs that it sets differently."""

    title: Words = Field(description="what the case is")
    purposes: Listed[Literal[PURPOSES]] = Field((), description=f"what the case is for: {', '.join(PURPOSES)}")
    temperature: Name = Field(description="named temperature of the liquid")
    levels: Choice | None = Field(None, description="level name for all tanks, or by tank")
    roughness: Choice | None = Field(None, description="pipe condition for all lines, or by line")
    equipment: Choice | None = Field(None, description="state of all equipment, or by tag")
    pumps: Named[Annotated[int, Field(ge=0)]] = Field(description="units running, by pump")
    speeds: Named[Annotated[Value, Quantity("fraction", above=0.0, most=1.2)]] = Field(
        {}, description="speed as a share of that of the curve, by pump; 100 % where not given"
    )
    overrides: dict[str, Annotated[Any, PlainValidator(_anything), WithJsonSchema({})]] = Field(
        {}, alias="set", description="inputs that this case sets differently: input path and value"
    )
