"""The leaves of the input files that are words: texts, names, dates."""

from __future__ import annotations

import datetime
import re
from typing import Annotated

from pydantic import AfterValidator, Field, WithJsonSchema
from pydantic_core import PydanticCustomError

from calcpack.project.schema.messages import SAID

NAME = re.compile(r"[A-Za-z0-9][A-Za-z0-9_-]*")
NAME_HINT = "letters, digits, '-' and '_', beginning with a letter or digit"


def _check_name(text: str) -> str:
    if not NAME.fullmatch(text):
        raise _said(f"'{text}' cannot be a name", NAME_HINT)
    return text


def _check_date(text: str) -> str:
    try:
        return datetime.date.fromisoformat(text).isoformat()
    except ValueError:
        raise _said(f"'{text}' is not a date", "write year-month-day, such as 2026-03-31") from None


def _said(text: str, hint: str) -> PydanticCustomError:
    return PydanticCustomError(SAID, "{text}; {hint}", {"text": text, "hint": hint})


# An editor's reader takes 40 or 2.1 for a number where the text "40" is meant.
_TEXT_OR_NUMBER = WithJsonSchema({"type": ["string", "number"]})

Words = Annotated[str, Field(min_length=1), _TEXT_OR_NUMBER]
Loose = Annotated[str, _TEXT_OR_NUMBER]
Name = Annotated[str, AfterValidator(_check_name), _TEXT_OR_NUMBER]
Date = Annotated[str, AfterValidator(_check_date), WithJsonSchema({"type": "string", "format": "date"})]
