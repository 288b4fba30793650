"""The leaves of the input files that carry numbers, and blocks of named or alternative things."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Annotated, Any, TypeVar

from pydantic import BeforeValidator, Field, GetCoreSchemaHandler, GetJsonSchemaHandler
from pydantic_core import core_schema

from calcpack.errors import UnitError
from calcpack.project.problems import suggestion
from calcpack.project.read import Items, Raw, Section, Text
from calcpack.project.schema.base import BROKEN, Input, Reading, Status, Tolerant, intact
from calcpack.project.schema.words import NAME, NAME_HINT, Loose
from calcpack.quantities import KINDS
from calcpack.units import parse_quantity, typed, with_article
from calcpack.values import CONFIRMED, UNCONFIRMED, Value

EVERY_CASE = "constant"  # state of a roughness that has one value for all cases

_DIFFERENCE_OF = {
    "temperature": "temperature_difference", "gauge_pressure": "pressure_difference",
    "absolute_pressure": "pressure_difference",
}  # fmt: skip
_NUMBER_PATTERN = r"^[-+\u2212]?[0-9.][0-9._ \u00a0\u2009\u202f]*([eE][-+]?[0-9]+)?"


class LongForm(Input):
    """A value with its provenance."""

    value: Loose = Field(description="the number with its unit, as in the short form")
    source: str | None = Field(None, description="document and place that the value comes from")
    status: Status | None = Field(None, description="confirmed or unconfirmed")
    tolerance: Loose | None = Field(None, description="plus or minus, with its unit or in % of the value")
    note: str = Field("", description="remark that is printed with the value")


@dataclass(frozen=True)
class Quantity:
    """Marks a field as a quantity of a kind; it becomes a :class:`~calcpack.values.Value`.

    Bounds are SI values: greater than ``above``, at least ``least``, at most ``most``.
    """

    kind: str
    above: float | None = None
    least: float | None = None
    most: float | None = None

    def read(self, raw: Raw, info: core_schema.ValidationInfo) -> Value:
        """The Value of a short or long form; BROKEN once its mistakes are reported."""
        reading: Reading = info.context
        if raw is BROKEN:
            return BROKEN
        if isinstance(raw, Text):
            source, status = reading.origins[-1]
            return self.value(raw, raw, reading, source=source, status=status)
        if isinstance(raw, Items):
            reading.problems.add(raw, f"a list stands where {with_article(KINDS[self.kind].title)} is wanted")
            return BROKEN
        form = LongForm.model_validate(raw, context=reading)
        if not intact(form, form and form.value, form and form.status):
            return BROKEN
        source, status = reading.origins[-1]
        if form.source is not None:
            source, status = form.source, form.status or UNCONFIRMED
        if form.status == CONFIRMED and not source:
            reading.problems.add(raw, "said to be confirmed, but no source is named", "add source: '...'")
        return self.value(
            form.value, raw, reading, source=source, status=form.status or status,
            tolerance=form.tolerance or "", note=form.note,
        )  # fmt: skip

    def value(
        self, written: str, raw: Raw, reading: Reading, *, source: str, status: str, tolerance: str = "", note: str = ""
    ) -> Value:
        """The Value of a text that stands at ``raw``; BROKEN once its mistakes are reported."""
        try:
            si, _ = parse_quantity(written, self.kind, reading.units)
            margin = self._tolerance(tolerance, si, reading.units) if tolerance else None
        except UnitError as error:
            reading.problems.add(raw, error.text, error.hint)
            return BROKEN
        if wrong := self._outside(si):
            reading.problems.add(raw, f"'{written}' cannot be {with_article(KINDS[self.kind].title)}", wrong)
            return BROKEN
        return Value(
            si, self.kind, written.strip(), source, status=status or UNCONFIRMED, tolerance=margin, note=note,
            path=raw.path, file=raw.file, line=raw.line,
        )  # fmt: skip

    def _tolerance(self, text: str, si: float, units: str) -> float:
        if KINDS[self.kind].si and text.rstrip().endswith("%"):
            return parse_quantity(text, "fraction", units)[0] * abs(si)
        return parse_quantity(text, _DIFFERENCE_OF.get(self.kind, self.kind), units)[0]

    def _outside(self, si: float) -> str:
        unit = typed(KINDS[self.kind].si)
        if self.above is not None and not si > self.above:
            return f"it must be greater than {self.above:g} {unit}".rstrip()
        if self.least is not None and not si >= self.least:
            return f"it must be at least {self.least:g} {unit}".rstrip()
        if self.most is not None and not si <= self.most:
            return f"it must be at most {self.most:g} {unit}".rstrip()
        return ""

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> core_schema.CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, schema: Any, handler: GetJsonSchemaHandler) -> dict[str, Any]:
        kind = KINDS[self.kind]
        units = " or ".join(dict.fromkeys(" ".join((typed(unit), kind.word)).strip() for unit in kind.display if unit))
        if kind.si:
            short = {"type": "string", "pattern": rf"{_NUMBER_PATTERN}\s*[^0-9\s].*$", "description": f"in {units}"}
        else:
            short = {"type": ["string", "number"], "pattern": rf"{_NUMBER_PATTERN}\s*%?$"}
        return {"title": kind.title, "anyOf": [short, {"$ref": "#/$defs/LongForm"}]}


@dataclass(frozen=True)
class NamedOrOne:
    """A quantity for every case (a single value), or one for each named state."""

    quantity: Quantity

    def read(self, raw: Raw, info: core_schema.ValidationInfo) -> Mapping[str, Value]:
        """States by name; a single value stands under :data:`EVERY_CASE`."""
        if raw is BROKEN:
            return BROKEN
        if not isinstance(raw, Section) or "value" in raw:
            value = self.quantity.read(raw, info)
            return {EVERY_CASE: value} if intact(value) else BROKEN
        return {name: self.quantity.read(one, info) for name, one in _check_names(raw, info).items()}

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> core_schema.CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, schema: Any, handler: GetJsonSchemaHandler) -> dict[str, Any]:
        one = self.quantity.__get_pydantic_json_schema__(schema, handler)
        return {"title": one["title"], "anyOf": [*one["anyOf"], {"type": "object", "additionalProperties": one}]}


@dataclass(frozen=True)
class OneOf:
    """Alternatives of a block, told apart by the word that stands under ``key``."""

    key: str
    models: tuple[tuple[str, type[Input]], ...]

    def _choose(self, raw: Any, handler: Callable[[Any], Any], info: core_schema.ValidationInfo) -> Any:
        if raw is BROKEN:
            return BROKEN
        words = [word for word, _ in self.models]
        if not isinstance(raw, Section):
            info.context.problems.add(raw, "a block of keys is wanted here", f"with '{self.key}' among them")
        elif self.key not in raw:
            info.context.problems.add(raw, f"'{self.key}' is missing", f"one of: {', '.join(words)}")
        elif raw[self.key] not in words:
            word = raw[self.key]
            text = f"'{word}' is not known here" if isinstance(word, str) else "one word is wanted here"
            info.context.problems.add(word, text, suggestion(str(word), words))
        else:
            return handler(raw)
        return BROKEN

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> core_schema.CoreSchema:
        choices = {word: handler.generate_schema(model) for word, model in self.models}
        union = core_schema.tagged_union_schema(choices, discriminator=lambda raw: str(raw[self.key]))
        return core_schema.with_info_wrap_validator_function(self._choose, union)


def _check_names(raw: Any, info: core_schema.ValidationInfo) -> Any:
    """Report keys that cannot be names; they stay, so that what names them is not blamed."""
    if not isinstance(raw, Section):
        return raw
    for key, item in raw.items():
        if not NAME.fullmatch(key):
            info.context.problems.add_at(raw.path, item.file, item.line, f"'{key}' cannot be a name", NAME_HINT)
    return raw


T = TypeVar("T")
Named = Annotated[dict[str, Annotated[T, Tolerant]], BeforeValidator(_check_names)]
Listed = list[Annotated[T, Tolerant]]
