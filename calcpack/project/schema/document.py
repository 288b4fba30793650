"""project.yaml: title block, people, requirement, criteria, references and statements."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from calcpack.project.schema.base import Input, Sourced
from calcpack.project.schema.leaves import Listed, Quantity
from calcpack.project.schema.words import Date, Loose, Name, Words
from calcpack.values import Value

STATUSES = ("draft", "preliminary", "for review", "for construction", "as built")

Flow = Annotated[Value, Quantity("flow", above=0.0)]
Fraction = Annotated[Value, Quantity("fraction", least=0.0, most=1.0)]
Band = Annotated[Value, Quantity("fraction", least=0.0)]
Temperature = Annotated[Value, Quantity("temperature", above=0.0)]


class DocumentInput(Input):
    """Title block of the package (fields of ISO 7200)."""

    project: Words = Field(description="name of the project")
    title: Words = Field(description="title of the calculation")
    number: Words = Field(description="document number")
    type: Words = Field(description="document type, such as 'design calculation'")
    owner: Words = Field(description="legal owner of the document")
    revision: Words = Field(description="revision being worked on, such as A or 0")
    status: Literal[STATUSES] = Field(description=f"stage of the document: {', '.join(STATUSES)}")
    date: Date = Field(description="date of this revision, year-month-day")
    language: Annotated[str, Field(pattern="^[a-z]{2}$")] = Field("en", description="two-letter language code")
    contract: Loose = Field("", description="contract number")
    location: str = Field("", description="site")
    department: str = Field("", description="responsible department")
    classification: str = Field("", description="confidentiality or keyword class")


class PersonInput(Input):
    """Someone who answers for a part of the package."""

    role: Words = Field(description="originator, checker, approver, responsible engineer, ...")
    name: Words = Field(description="name; nobody checks their own work")
    organisation: str = Field("", description="firm or authority")
    licence: str = Field("", description="licence number, where the role needs one")


class RequirementInput(Sourced):
    """What the system must deliver. Everything is optional; what is missing is not checked."""

    flow: Flow | None = Field(None, description="required flow, before any margin")
    margin: Fraction | None = Field(None, description="margin added to the required flow")
    daily_volume: Annotated[Value, Quantity("daily_flow", above=0.0)] | None = Field(
        None, description="volume to be moved in a day"
    )
    running_time: Annotated[Value, Quantity("hours", above=0.0, most=86400.0)] | None = Field(
        None, description="running time in a day"
    )
    case: Name = Field("", description="id of the case at which the design flow is wanted")


class EconomyInput(Sourced):
    """Figures for the yearly energy cost."""

    tariff: Annotated[Value, Quantity("energy_price", least=0.0)] | None = Field(None, description="price of energy")
    currency: str = Field("", description="currency word of the tariff")
    days_per_year: Annotated[Value, Quantity("days", above=0.0, most=366.0 * 86400.0)] | None = Field(
        None, description="days of operation in a year"
    )


class LimitsInput(Sourced):
    """Limits and warning bands of criteria that replace the usual ones of the program."""

    capacity_band: Band | None = Field(None, description="flow above the required flow under which a warning stands")
    oversupply: Band | None = Field(None, description="greatest flow at the design case, in % of the design flow")
    oversupply_band: Band | None = Field(None, description="flow below that limit from which a warning stands")
    curve_end_band: Band | None = Field(None, description="flow below the end of the curve from which a warning stands")
    minimum_flow_band: Band | None = Field(None, description="flow above the minimum under which a warning stands")
    npsh_warning_band: Band | None = Field(
        None, description="NPSH margin over the required one under which a warning stands"
    )
    pressure_band: Band | None = Field(None, description="pressure below the rating from which a warning stands")
    velocity_band: Band | None = Field(None, description="velocity inside its limits from which a warning stands")
    grade_band: Annotated[Value, Quantity("head")] | None = Field(
        None, description="hydraulic grade above the pipe axis under which a warning stands"
    )
    authority: Band | None = Field(None, description="least authority of a control valve, in % of the branch's drop")
    authority_band: Band | None = Field(None, description="authority above that limit under which a warning stands")
    loop_pressure: Annotated[Value, Quantity("gauge_pressure")] | None = Field(
        None, description="least static pressure at the top of a closed loop"
    )
    loop_band: Band | None = Field(None, description="static pressure above that limit under which a warning stands")
    hot_liquid: Temperature | None = Field(None, description="temperature above which contact is cautioned against")
    cold_liquid: Temperature | None = Field(
        None, description="temperature at or below which frost is cautioned against"
    )


class SourceDocumentInput(Input):
    """A document that inputs cite."""

    id: Words = Field(description="number or short name used in 'source' texts")
    title: Words = Field(description="title")
    revision: Loose = Field("", description="revision")
    date: Loose = Field("", description="date or year")


class StatementInput(Input):
    """An assumption, note or exclusion in your own words."""

    id: Name = Field(description="short id, such as A1 or N1")
    text: Words = Field(description="the statement")
    reason: str = Field("", description="why it is made")
    status: Literal["", "open", "closed"] = Field("", description="open or closed, for assumptions that await proof")
    owner: str = Field("", description="who closes it")
    covered_by: str = Field("", description="document that covers what is excluded here")


class RevisionInput(Input):
    """One line of the revision history."""

    revision: Words = Field(description="revision")
    date: Date = Field(description="date, year-month-day")
    reason: Words = Field(description="what changed and why")


class ProjectFile(Input):
    """project.yaml: what the package is, for whom, and by whom."""

    document: DocumentInput = Field(description="title block")
    people: Listed[PersonInput] = Field((), description="originator, checker, approver, responsible engineer")
    units: Literal["SI", "US"] = Field(description="unit system that the package prints in")
    purpose: Words = Field(description="what the calculation is to show")
    basis: Listed[str] = Field((), description="basis of design, in paragraphs")
    requirement: RequirementInput = Field(description="what the system must deliver; {} where nothing is required")
    economy: EconomyInput | None = Field(None, description="figures for the yearly energy cost")
    limits: LimitsInput | None = Field(None, description="limits of criteria that replace the usual ones")
    documents: Listed[SourceDocumentInput] = Field((), description="documents that the inputs come from")
    assumptions: Listed[StatementInput] = Field((), description="assumptions of the engineer")
    notes: Listed[StatementInput] = Field((), description="notes printed with the package")
    exclusions: Listed[StatementInput] = Field((), description="what the package does not cover")
    revisions: Listed[RevisionInput] = Field((), description="revision history, oldest first")
    normal_case: Name = Field(description="id of the case of normal operation")
