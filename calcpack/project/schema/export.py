"""JSON Schema of the input files, so that editors complete and check the keys."""

from __future__ import annotations

from typing import Any

from pydantic import TypeAdapter

from calcpack.project.schema import FILE_TYPES
from calcpack.project.schema.leaves import LongForm

DIALECT = "https://json-schema.org/draft/2020-12/schema"


def json_schema() -> dict[str, Any]:
    """One document whose ``$defs`` hold a definition for each of the four files and for every block in them."""
    adapters = [(stem, "validation", TypeAdapter(type_)) for stem, type_ in FILE_TYPES.items()]
    adapters.append(("LongForm", "validation", TypeAdapter(LongForm)))
    files, shared = TypeAdapter.json_schemas(adapters)
    definitions = dict(shared.get("$defs", {}))
    for (stem, _), schema in files.items():
        if stem in FILE_TYPES:
            definitions[f"{stem}.yaml"] = {"title": f"{stem}.yaml", **schema}
    return {
        "$schema": DIALECT,
        "title": "Input files of a calcpack project",
        "description": "Each file of a project folder follows the definition of its own name.",
        "anyOf": [{"$ref": f"#/$defs/{stem}.yaml"} for stem in FILE_TYPES],
        "$defs": _tidy(definitions),
    }


def _tidy(schema: Any) -> Any:
    """Without null alternatives and defaults: a key that is not needed is left out, never written as null."""
    if isinstance(schema, list):
        return [_tidy(item) for item in schema]
    if not isinstance(schema, dict):
        return schema
    tidy = {
        key: _tidy(value) for key, value in schema.items() if key != "default" or (isinstance(value, dict) and value)
    }
    choices = tidy.get("anyOf")
    if isinstance(choices, list) and {"type": "null"} in choices:
        rest = [choice for choice in choices if choice != {"type": "null"}]
        if len(rest) == 1:
            del tidy["anyOf"]
            tidy = {**rest[0], **tidy}
        else:
            tidy["anyOf"] = rest
    return tidy
