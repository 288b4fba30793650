"""Validation errors of the schema library in the words of this program, each at the piece of input it is about."""

from __future__ import annotations

from typing import Any

from calcpack.project.problems import nearest
from calcpack.project.read import Items, Raw, Section

SAID = "said"  # type of an error that already carries our own words in its context: text, hint


def complaint(raw: Raw, detail: dict[str, Any]) -> tuple[Raw, str, str]:
    """(piece of input, what is wrong, what would be right) of one error below ``raw``."""
    at = _follow(raw, detail["loc"])
    kind, context = detail["type"], detail.get("ctx", {})
    written = f"'{at}'" if isinstance(at, str) else "this"
    if kind == SAID:
        return at, context["text"], context["hint"]
    if kind in ("literal_error", "union_tag_invalid"):
        return _choice(at, context)
    if kind == "union_tag_not_found":
        key = context["discriminator"].strip("'")
        return at, f"'{key}' is missing", "it says what this block describes"
    if kind in ("dict_type", "mapping_type", "model_type"):
        return at, f"{_found(at)} stands where a block of keys is wanted", "write lines such as 'key: value' below it"
    if kind in ("list_type", "tuple_type"):
        return at, f"{_found(at)} stands where a list is wanted", "write [..] or lines that begin with '- '"
    if kind == "string_type":
        return at, f"{_found(at)} stands where text is wanted", ""
    if kind in ("int_parsing", "int_type", "int_from_float", "int_parsing_size"):
        return at, f"{written} is not a whole number", ""
    if kind == "greater_than_equal":
        return at, f"{written} is too small", f"at least {context['ge']}"
    if kind == "string_too_short":
        return at, "nothing is written here", ""
    if kind == "too_short":
        return at, "this list is too short", f"at least {context['min_length']}"
    return at, f"{written} does not fit here: {detail['msg']}", ""


def _follow(raw: Raw, location: tuple[int | str, ...]) -> Raw:
    """The piece of input at a location; parts of it that are no keys (names of alternatives) are passed over."""
    at = raw
    for part in location:
        if (isinstance(at, Section) and part in at) or (isinstance(at, Items) and isinstance(part, int)):
            at = at[part]
    return at


def _found(raw: Raw) -> str:
    if isinstance(raw, Section):
        return "a block of keys"
    if isinstance(raw, Items):
        return "a list"
    return f"'{raw}'" if raw else "nothing"


def _choice(at: Raw, context: dict[str, Any]) -> tuple[Raw, str, str]:
    expected = context.get("expected") or context["expected_tags"]
    names = [name.strip().strip("'") for name in expected.replace(" or ", ", ").split(",")]
    if "tag" in context and isinstance(at, Section):
        written, at = context["tag"], at.get(context["discriminator"].strip("'"), at)
    else:
        written = at if isinstance(at, str) else _found(at)
    near = nearest(written, names)
    hint = f"did you mean '{near}'?" if near else f"one of: {', '.join(names)}"
    return at, f"'{written}' is not known here", hint
