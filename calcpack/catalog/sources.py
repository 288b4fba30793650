"""The bibliography: one record for every source key that a formula, a table or a criterion cites."""

from __future__ import annotations

from dataclasses import dataclass, fields
from functools import cache
from pathlib import Path

import yaml

from calcpack.catalog.errors import CatalogError

KINDS = ("primary", "secondary", "library", "common practice", "memory")
_FILE = Path(__file__).parent / "sources.yaml"


@dataclass(frozen=True)
class Source:
    """One entry of the bibliography.

    ``kind`` says how its content came to us: primary (its own text was read), secondary (quoted by a third party),
    library (read in an open-source library that cites it), common practice (no single document) or memory.
    ``seen`` is true only when its own text was read. ``year`` is None where the edition is not known.
    """

    key: str
    title: str
    body: str
    edition: str
    year: int | None
    kind: str
    seen: bool
    note: str

    @property
    def needs_confirmation(self) -> bool:
        """True when edition and clause still have to be confirmed by someone who has the text."""
        return not self.seen and self.kind != "common practice"


@cache
def load_sources() -> dict[str, Source]:
    """Read ``sources.yaml`` once: key -> :class:`Source`.

    Raises :class:`CatalogError` for a record with missing, unknown or wrong fields.
    """
    with _FILE.open(encoding="utf-8") as stream:
        records = yaml.safe_load(stream)
    return {key: _source(key, record) for key, record in records.items()}


def source(key: str) -> Source:
    """Return the bibliography entry of ``key``; raises :class:`CatalogError` when there is none."""
    try:
        return load_sources()[key]
    except KeyError:
        raise CatalogError(f'no source "{key}" in the bibliography', "add a record to sources.yaml") from None


def _source(key: str, record: dict) -> Source:
    wanted = {field.name for field in fields(Source)} - {"key"}
    if set(record) != wanted:
        raise CatalogError(f'source "{key}" has fields {sorted(record)}', f"needed: {sorted(wanted)}")
    if record["kind"] not in KINDS:
        raise CatalogError(f'source "{key}" has kind "{record["kind"]}"', f"known: {', '.join(KINDS)}")
    return Source(key=key, **record)
