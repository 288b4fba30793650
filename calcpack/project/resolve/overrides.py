"""Inputs that a case sets differently: laid over a copy of the raw data, which is then read again."""

from __future__ import annotations

import difflib
from collections.abc import Iterator, Mapping

from calcpack.project.model import Override
from calcpack.project.read import Items, Raw, Section, Text, placed
from calcpack.project.resolve.draft import Draft

OVERRIDABLE = ("system", "pumps")


def overlaid(draft: Draft, case_id: str) -> tuple[Mapping[str, Section | None], tuple[Override, ...]]:
    """Raw data with the overrides of a case, and the overrides; unknown paths are reported and left out."""
    data = dict(draft.data)
    overrides = []
    for path, raw in draft.at(("cases", case_id, "set")).items():
        if path.partition(".")[0] in OVERRIDABLE and data[path.partition(".")[0]] is None:
            continue  # that file could not be read, which was reported
        if _lay_over(data, path, raw):
            overrides.append(Override(path, _in_words(raw), f"{raw.file}:{raw.line}"))
        else:
            draft.problems.add_at(
                f"cases.{case_id}", raw.file, raw.line, f"no input has the path '{path}'", _hint(data, path)
            )
    return data, tuple(overrides)


def _lay_over(data: dict[str, Section | None], path: str, raw: Raw) -> bool:
    """Put ``raw`` at ``path``; the blocks on the way are copied, so that the base stays as it is."""
    stem, *keys = path.split(".")
    if stem not in OVERRIDABLE or not keys:
        return False
    parents: list[Section | Items] = [data[stem]]
    for key in keys[:-1]:
        child = _child(parents[-1], key)
        if not isinstance(child, Section | Items):
            return False
        parents.append(child)
    if isinstance(parents[-1], Items) and _child(parents[-1], keys[-1]) is None:
        return False
    new: Raw = placed(raw, path)
    for parent, key in zip(reversed(parents), reversed(keys), strict=True):
        copy = type(parent)(parent)
        copy.path, copy.file, copy.line = parent.path, parent.file, parent.line
        copy[key if isinstance(copy, Section) else int(key)] = new
        new = copy
    data[stem] = new
    return True


def _child(parent: Raw, key: str) -> Raw | None:
    if isinstance(parent, Section):
        return parent.get(key)
    if isinstance(parent, Items) and key.isdecimal() and int(key) < len(parent):
        return parent[int(key)]
    return None


def _in_words(raw: Raw) -> str:
    if isinstance(raw, Section):
        return (
            str(raw["value"]) if "value" in raw else ", ".join(f"{key}: {_in_words(one)}" for key, one in raw.items())
        )
    if isinstance(raw, Items):
        return ", ".join(_in_words(one) for one in raw)
    return str(raw)


def _hint(data: Mapping[str, Section | None], path: str) -> str:
    known = [one for stem in OVERRIDABLE if data.get(stem) for one in _paths(data[stem])]
    near = difflib.get_close_matches(path, known, n=1, cutoff=0.6)
    return f"did you mean '{near[0]}'?" if near else "paths look like system.lines.L-101.length"


def _paths(raw: Raw) -> Iterator[str]:
    children = raw.values() if isinstance(raw, Section) else raw
    for child in children:
        yield child.path
        if not isinstance(child, Text):
            yield from _paths(child)
