"""Names of link targets: ledger ids and section ids as readable, reversible, collision-free fragments."""

from __future__ import annotations

import re

ENTRY = "e-"
SECTION = "s-"
SHEET = "sheet-"
SOURCE = "src-"

_PLAIN = re.compile(r"[A-Za-z0-9_-]")
_SHORT = {"/": ".", "@": ":"}
_LONG = {short: plain for plain, short in _SHORT.items()}
_ESCAPED = re.compile(r"~([0-9a-f]+)~|(.)", re.DOTALL)


def fragment(identifier: str) -> str:
    """``L-103/h_f@1`` -> ``L-103.h_f:1``; every other unsafe character becomes its code point between tildes."""
    return "".join(
        char if _PLAIN.match(char) else _SHORT.get(char) or f"~{ord(char):x}~" for char in identifier
    )


def identifier(text: str) -> str:
    """The id that :func:`fragment` turned into ``text``."""
    return _ESCAPED.sub(lambda match: chr(int(match[1], 16)) if match[1] else _LONG.get(match[2], match[2]), text)


def entry_anchor(entry_id: str) -> str:
    """Link target of a ledger entry."""
    return ENTRY + fragment(entry_id)


def section_anchor(section_id: str) -> str:
    """Link target of a section of a sheet."""
    return SECTION + fragment(section_id)


def sheet_anchor(key: str) -> str:
    """Link target of a sheet."""
    return SHEET + fragment(key)


def source_anchor(key: str) -> str:
    """Link target of a reference in the list of references."""
    return SOURCE + fragment(key)
