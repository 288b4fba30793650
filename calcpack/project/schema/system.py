"""system.yaml: site, liquid, nodes, lines and equipment."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from calcpack.project.schema.base import Input, Sourced
from calcpack.project.schema.leaves import Listed, Named, NamedOrOne, OneOf, Quantity
from calcpack.project.schema.words import Loose, Name, Words
from calcpack.values import Value

Elevation = Annotated[Value, Quantity("elevation")]
Length = Annotated[Value, Quantity("length", above=0.0)]
Diameter = Annotated[Value, Quantity("diameter", above=0.0)]
Head = Annotated[Value, Quantity("head", least=0.0)]
Flow = Annotated[Value, Quantity("flow", above=0.0)]
Velocity = Annotated[Value, Quantity("velocity", above=0.0)]
GaugePressure = Annotated[Value, Quantity("gauge_pressure")]
Rating = Annotated[Value, Quantity("gauge_pressure", above=0.0)]
Temperature = Annotated[Value, Quantity("temperature", above=0.0)]
BulkModulus = Annotated[Value, Quantity("bulk_modulus", above=0.0)]


class SiteInput(Sourced):
    """Where the system stands."""

    elevation: Elevation = Field(description="ground elevation; it gives the atmospheric pressure")
    datum: Words = Field(description="what elevations are measured from")
    gravity: Annotated[Value, Quantity("acceleration", above=0.0)] | None = Field(
        None, description="acceleration of gravity, where the standard one will not do"
    )
    atmospheric_pressure: Annotated[Value, Quantity("absolute_pressure", above=0.0)] | None = Field(
        None, description="measured atmospheric pressure, instead of the one that follows from the elevation"
    )


class WaterInput(Sourced):
    """Clean water: properties are looked up for each temperature."""

    model: Literal["water"] = Field(description="water: properties are looked up")
    name: Words = Field(description="what the liquid is called")
    temperatures: Named[Temperature] = Field(description="named temperatures, normal among them")
    flags: Listed[Name] = Field((), description="what else matters: potable, solids, corrosive, ...")


class LiquidRowInput(Sourced):
    """Properties of a liquid at one temperature."""

    temperature: Temperature = Field(description="temperature")
    density: Annotated[Value, Quantity("density", above=0.0)] = Field(description="density")
    dynamic_viscosity: Annotated[Value, Quantity("dynamic_viscosity", above=0.0)] | None = Field(
        None, description="dynamic viscosity; or give the kinematic one"
    )
    kinematic_viscosity: Annotated[Value, Quantity("kinematic_viscosity", above=0.0)] | None = Field(
        None, description="kinematic viscosity; or give the dynamic one"
    )
    vapour_pressure: Annotated[Value, Quantity("absolute_pressure", least=0.0)] = Field(
        description="vapour pressure, absolute"
    )
    bulk_modulus: BulkModulus | None = Field(None, description="bulk modulus, for pressure surge")
    specific_heat: Annotated[Value, Quantity("specific_heat", above=0.0)] | None = Field(
        None, description="specific heat capacity"
    )


class TableLiquidInput(Sourced):
    """Any liquid: you state its properties at each temperature."""

    model: Literal["table"] = Field(description="table: properties are stated here")
    name: Words = Field(description="what the liquid is called")
    temperatures: Named[LiquidRowInput] = Field(description="properties by named temperature, normal among them")
    flags: Listed[Name] = Field((), description="what else matters: potable, solids, corrosive, ...")


class TankInput(Sourced):
    """A free surface at one of several named levels."""

    type: Literal["tank"] = Field(description="tank: free surface at a level")
    description: str = Field("", description="what it is")
    levels: Named[Elevation] = Field(
        description="elevations of the surface by name; min, normal, max are kept in order"
    )
    gas_pressure: GaugePressure | None = Field(None, description="gas pressure above the surface; open tanks have none")
    elevation: Elevation | None = Field(None, description="elevation of the pipe connection")
    service: str = Field("", description="what it serves")


class OutletInput(Sourced):
    """A free discharge to the air."""

    type: Literal["outlet"] = Field(description="outlet: free discharge")
    description: str = Field("", description="what it is")
    elevation: Elevation = Field(description="elevation of the pipe end")
    service: str = Field("", description="what it serves")


class JunctionInput(Sourced):
    """A point where lines meet or change size."""

    type: Literal["junction"] = Field(description="junction: lines meet")
    description: str = Field("", description="what it is")
    elevation: Elevation = Field(description="elevation of the pipe axis")
    demand: Annotated[Value, Quantity("flow")] | None = Field(
        None, description="flow drawn here; negative where it enters"
    )
    service: str = Field("", description="what it serves")


class PipeInput(Sourced):
    """Pipe size: a row of a standard, or diameters of your own."""

    standard: str = Field("", description="dimension standard, such as 'ASME B36.10M'")
    size: Loose = Field("", description="nominal size, such as 'DN 150', 'NPS 6' or 'd 110'")
    schedule: Loose = Field("", description="schedule, SDR or type of the standard")
    material: str = Field("", description="pipe material, as in the roughness table; a standard implies it")
    outside_diameter: Diameter | None = Field(None, description="outside diameter, where no standard gives it")
    wall: Diameter | None = Field(None, description="wall thickness, where no standard gives it")
    bore: Diameter | None = Field(None, description="inside diameter; it goes before outside diameter and wall")


class FittingInput(Sourced):
    """Fittings of one type. The coefficient is looked up unless you give n or K."""

    type: Words = Field(description="type, as in the fittings table; any word where n or K is given")
    title: str = Field("", description="what it is called in print")
    count: Annotated[int, Field(ge=1)] = Field(1, description="how many")
    n: Annotated[Value, Quantity("dimensionless", least=0.0)] | None = Field(None, description="n of K = n fT")
    K: Annotated[Value, Quantity("loss_coefficient")] | None = Field(
        None, description="loss coefficient on the velocity head of the line"
    )
    tag: Name = Field("", description="tag of a valve")


class VelocityInput(Sourced):
    """Velocity limits of a line; without them those of its service hold."""

    minimum: Velocity | None = Field(None, description="least velocity")
    maximum: Velocity | None = Field(None, description="greatest velocity")


class SurgeInput(Sourced):
    """Pipe data for the speed of a pressure wave; without them those of the material hold."""

    modulus: Annotated[Value, Quantity("elastic_modulus", above=0.0)] | None = Field(
        None, description="modulus of elasticity of the wall"
    )
    poisson: Annotated[Value, Quantity("ratio", above=0.0, most=0.5)] | None = Field(
        None, description="Poisson's ratio of the wall"
    )
    restraint: Annotated[Value, Quantity("dimensionless", above=0.0, most=2.0)] | None = Field(
        None, description="restraint factor of the wave-speed formula; else that of a pipe anchored throughout"
    )


class ProfilePointInput(Sourced):
    """A point of the pipe axis."""

    chainage: Annotated[Value, Quantity("length", least=0.0)] = Field(
        description="distance along the line from its start"
    )
    elevation: Elevation = Field(description="elevation of the pipe axis")


class LineInput(Sourced):
    """A line of constant size between two nodes."""

    start: Words = Field(alias="from", description="node or pump port where the line begins, such as P-101.discharge")
    end: Words = Field(alias="to", description="node or pump port where the line ends, such as P-101.suction")
    description: str = Field("", description="what it is")
    service: str = Field("", description="service of the velocity table, such as pump_suction")
    pipe: PipeInput = Field(description="pipe size")
    length: Length = Field(description="length of pipe")
    roughness: Annotated[dict[str, Value], NamedOrOne(Quantity("roughness", least=0.0))] | None = Field(
        None, description="absolute roughness: one value, or one for each condition (new, aged)"
    )
    friction_factor: Annotated[Value, Quantity("friction_factor", above=0.0)] | None = Field(
        None, description="given Darcy friction factor; it replaces roughness and correlation"
    )
    fittings: Listed[FittingInput] = Field((), description="fittings and valves, entrance and exit among them")
    equipment: Listed[str] = Field((), description="tags of the equipment that the flow passes")
    velocity: VelocityInput | None = Field(None, description="velocity limits")
    rating: Rating | None = Field(None, description="pressure rating of the weakest part")
    profile: Listed[ProfilePointInput] = Field((), description="pipe axis for the grade line, from the start on")
    surge: SurgeInput | None = Field(None, description="pipe data for pressure surge")


class QuadraticLossInput(Sourced):
    """Loss that grows with the square of the flow."""

    law: Literal["quadratic"] = Field(description="quadratic: the head at a flow is given")
    head: Head = Field(description="head loss at that flow")
    flow: Flow = Field(description="flow of that head loss")


class FixedLossInput(Sourced):
    """Loss that does not depend on the flow."""

    law: Literal["fixed"] = Field(description="fixed: the same head at any flow")
    head: Head = Field(description="head loss")


class DropLossInput(Sourced):
    """Loss that grows with the square of the flow, stated as a pressure drop."""

    law: Literal["drop"] = Field(description="drop: the pressure drop at a flow is given, and the density it is for")
    pressure_drop: Annotated[Value, Quantity("pressure_difference", least=0.0)] = Field(
        description="pressure drop at that flow"
    )
    density: Annotated[Value, Quantity("density", above=0.0)] = Field(description="density of the liquid of that drop")
    flow: Flow = Field(description="flow of that pressure drop")


class CoefficientLossInput(Sourced):
    """Loss of a valve by its flow coefficient."""

    law: Literal["kv"] = Field(description="kv: the flow coefficient Kv at this opening is given")
    coefficient: Annotated[Value, Quantity("flow_coefficient_kv", above=0.0)] = Field(
        description="flow coefficient: flow of water at a drop of 1 bar"
    )


LAWS = (("quadratic", QuadraticLossInput), ("fixed", FixedLossInput), ("drop", DropLossInput),
        ("kv", CoefficientLossInput))


class EquipmentInput(Sourced):
    """An item that the flow passes, in one or more states."""

    type: Words = Field(description="strainer, meter, heat exchanger, ...")
    description: str = Field("", description="what it is")
    states: Named[Annotated[object, OneOf("law", LAWS)]] = Field(
        description="head loss by state, such as clean and dirty"
    )


Liquid = Annotated[object, OneOf("model", (("water", WaterInput), ("table", TableLiquidInput)))]
Node = Annotated[object, OneOf("type", (("tank", TankInput), ("outlet", OutletInput), ("junction", JunctionInput)))]


class SystemFile(Input):
    """system.yaml: the physical system."""

    site: SiteInput = Field(description="where the system stands")
    liquid: Liquid = Field(description="what is pumped")
    nodes: Named[Node] = Field(description="tanks, outlets and junctions by tag")
    lines: Named[LineInput] = Field(description="lines by tag")
    equipment: Named[EquipmentInput] = Field({}, description="equipment by tag")
