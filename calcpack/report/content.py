"""What a package consists of, as ``build`` hands it to the report."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.project.model import Document, Person, RevisionNote, SourceDocument
from calcpack.sheets.content import Sheet

DRAFT = "DRAFT"


@dataclass(frozen=True)
class OpenItem:
    """Something to be settled before construction. ``text`` may hold ``{entry id}`` placeholders; ``entry`` is the
    entry that it is about, if there is one."""

    id: str
    text: str
    entry: str = ""


@dataclass(frozen=True)
class Preliminary:
    """Release for a stated purpose, printed instead of the seal (22 TAC 137.33(e))."""

    purpose: str
    engineer: str
    licence: str
    date: str


@dataclass(frozen=True)
class CoverContent:
    """The cover, besides the title-block data. ``scope`` says what a seal covers and what not; ``register`` is the key
    of the sheet that lists every open item."""

    people: tuple[Person, ...] = ()
    revisions: tuple[RevisionNote, ...] = ()
    documents: tuple[SourceDocument, ...] = ()
    purpose: str = ""
    open_items: tuple[OpenItem, ...] = ()
    register: str = ""
    scope: tuple[str, ...] = ()
    preliminary: Preliminary | None = None


@dataclass(frozen=True)
class PackageContent:
    """A whole package. ``program`` is name and version, ``fingerprint`` the identity of inputs and program."""

    document: Document
    cover: CoverContent
    sheets: tuple[Sheet, ...]
    program: str
    fingerprint: str
    draft: bool
