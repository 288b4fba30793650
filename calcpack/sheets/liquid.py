"""Liquid and site: properties at each temperature that a case uses, atmospheric pressure, gravity."""

from __future__ import annotations

from calcpack.formulas import liquid as formulas
from calcpack.sheets.content import Column, Derivation, Prose, Ref, Row, Section, Sheet, Table
from calcpack.sheets.job import Job

PROPERTIES = (
    ("T", "temperature", "T", "Temperature"),
    ("rho", "density", "rho", "Density"),
    ("mu", "dynamic_viscosity", "mu", "Dynamic viscosity"),
    ("p_v", "vapour_pressure", "p_v", "Vapour pressure"),
)


def fill(job: Job) -> Sheet:
    """Book site and liquid entries; tabulate them by named temperature."""
    site = job.project.system.site
    gravity = job.gravity()
    elevation = job.input("site/z", site.elevation, "z", "Elevation of the site")
    if site.atmospheric_pressure:
        atmosphere = job.input("site/p_atm", site.atmospheric_pressure, "p_atm", "Atmospheric pressure")
    else:
        atmosphere = job.ledger.apply("site/p_atm", formulas.ATMOSPHERE, z=elevation)
    names = list(dict.fromkeys(case.temperature for case in job.cases))
    rows = tuple(_book(job, name) for name in names)
    columns = (
        Column("Temperature name", width=1.6),
        Column("Temperature", "T", "temperature"),
        Column("Density", "rho", "density"),
        Column("Dynamic viscosity", "mu", "dynamic_viscosity"),
        Column("Kinematic viscosity", "nu", "kinematic_viscosity", derived=f"liquid/nu@{names[0]}"),
        Column("Vapour pressure", "p_v", "absolute_pressure"),
        Column("Source", width=2.0),
    )
    site_ids = ("site/z", "site/p_atm", "site/g") if atmosphere.operands else ("site/z", "site/g")
    return Sheet(
        "liquid",
        "Liquid and site",
        (
            Section(
                "liquid-properties",
                f"{job.project.system.liquid.name}: properties by temperature",
                (Table("Liquid properties used by the cases", columns, rows), Derivation((f"liquid/nu@{names[0]}",))),
            ),
            Section(
                "site",
                "Site",
                (
                    Prose(
                        "Elevations are above datum: "
                        f"{site.datum}. Gauge pressures are above the atmospheric pressure {{{atmosphere.id}}}; heads "
                        "are heads of the pumped liquid at the temperature of the case, converted with the density of "
                        f"the case and {{{gravity.id}}}."
                    ),
                    Derivation(site_ids),
                ),
            ),
        ),
    )


def _book(job: Job, name: str) -> Row:
    liquid = job.project.system.liquid.states[name]
    for symbol, attribute, _, title in PROPERTIES:
        job.input(f"liquid/{symbol}@{name}", getattr(liquid, attribute), symbol, title)
    nu = job.ledger.apply(
        f"liquid/nu@{name}", formulas.KINEMATIC, mu=f"liquid/mu@{name}", rho=f"liquid/rho@{name}"
    )
    symbols = ("T", "rho", "mu")
    cells = tuple(Ref(f"liquid/{symbol}@{name}") for symbol in symbols)
    return Row((name, *cells, Ref(nu.id), Ref(f"liquid/p_v@{name}"), Ref(f"liquid/rho@{name}", "source")))
