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
    near = get_close_matches(plain(name), names, n=4, cutoff=0.5)
    hint = f"nearest: {', '.join(near)}" if near else f"known: {', '.join(names)}"
    return CatalogError(f'no {what} "{name}"', hint)
