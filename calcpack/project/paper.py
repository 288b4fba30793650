"""What the package is besides the physical system: title block, people, what is required, statements, files."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.values import Value


@dataclass(frozen=True)
class Document:
    """Title-block data (ISO 7200 fields) of the package."""

    project: str
    title: str
    number: str
    type: str
    owner: str
    revision: str
    status: str
    date: str
    language: str = "en"
    contract: str = ""
    location: str = ""
    department: str = ""
    classification: str = ""


@dataclass(frozen=True)
class Person:
    """Someone with a role in the package: originator, checker, approver, responsible engineer."""

    role: str
    name: str
    organisation: str = ""
    licence: str = ""


@dataclass(frozen=True)
class RevisionNote:
    """One line of the revision history as the project states it."""

    revision: str
    date: str
    reason: str


@dataclass(frozen=True)
class SourceDocument:
    """A document of the project that inputs cite."""

    id: str
    title: str
    revision: str = ""
    date: str = ""


@dataclass(frozen=True)
class Statement:
    """An assumption, note or exclusion in the user's words; ``status`` open or closed, ``owner`` who closes it."""

    id: str
    text: str
    reason: str = ""
    status: str = ""
    owner: str = ""
    covered_by: str = ""
    place: str = ""


@dataclass(frozen=True)
class Requirement:
    """What the system must deliver: Values or None where the user states none."""

    flow: Value | None  # flow
    margin: Value | None  # fraction added to the flow
    daily_volume: Value | None  # daily_flow
    running_time: Value | None  # hours per day
    case: str = ""  # the case at which the design flow is wanted


@dataclass(frozen=True)
class Economy:
    """Energy figures: tariff per energy (energy_price), currency word, operating days a year."""

    tariff: Value | None
    currency: str
    days_per_year: Value | None


@dataclass(frozen=True)
class InputFile:
    """One file of the folder as read."""

    name: str
    text: str
    sha256: str
