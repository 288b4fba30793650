"""Names typed by people: one spelling for look-up, and the nearest known names for a hint."""

from __future__ import annotations

from collections.abc import Iterable
from difflib import get_close_matches

from calcpack.catalog.errors import CatalogError


def plain(name: object) -> str:
    """Spelling used in the tables: lower case, words joined by underscores."""
    return "_".join(str(name).lower().replace("-", " ").replace("_", " ").split())


def unknown(what: str, name: object, known: Iterable[str]) -> CatalogError:
    """The error for a ``name`` that is not among ``known``; its hint gives the nearest names, else all."""
    names = sorted(set(known))
    wanted = plain(name)
    near = [known_name for known_name in names if wanted and wanted in known_name]
    near = near or get_close_matches(wanted, names, n=4, cutoff=0.5)
    hint = f"nearest: {', '.join(near)}" if near else f"known: {', '.join(names)}"
    return CatalogError(f'no {what} "{name}"', hint)
