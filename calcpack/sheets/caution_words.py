"""The standing words of the cautions: hazards by criterion and by flag of the liquid, exclusions, who decides."""

from __future__ import annotations

GENERAL = "To be assessed by the responsible engineer under the codes and site rules that apply."
MAKER = "The maker's instructions take precedence; the responsible engineer decides under the codes that apply."
OWNER = "Safeguards are for the owner under local rules; the more stringent rule governs."
SPECIALIST = "This is a screening, not a surge analysis: a specialist decides whether a study is needed."
PIPING = "Rating, relief and test pressure are for the piping engineer under the code that governs."

ANY_CRITERION = ("Criterion", "The margin is not what is wanted.", GENERAL)

# First word of a criterion's id -> hazard, what it can lead to, who decides.
CRITERIA: dict[str, tuple[str, str, str]] = {
    "capacity": ("Shortfall of flow", "The system may deliver less than is required.", GENERAL),
    "design-flow": ("Shortfall of flow", "The margin that the project wants on flow is not there in full.", GENERAL),
    "oversupply": ("Flow above the design flow", "More power, velocity and suction head are used than intended.",
                   GENERAL),
    "end-of-curve": ("End of the pump curve", "Beyond the last point nothing is known of the pump.", MAKER),
    "preferred-low": ("Duty away from best efficiency", "Vibration, noise and wear can rise.", MAKER),
    "preferred-high": ("Duty away from best efficiency", "Vibration, noise and wear can rise.", MAKER),
    "minimum-flow": ("Low flow through the pump", "Heating and vibration can harm the pump.", MAKER),
    "curve-shape": ("Shape of the pump curve", "The pump may have more than one duty point at the same head.", MAKER),
    "npsh-ratio": ("Cavitation", "A pump near its required suction head loses head and is worn.", MAKER),
    "npsh-margin": ("Cavitation", "A pump near its required suction head loses head and is worn.", MAKER),
    "suction-vapour": ("Vapour at the suction", "Liquid may boil before it reaches the pump.", MAKER),
    "suction-gauge": ("Suction below atmospheric pressure", "Air may enter through seals, packings and joints.", MAKER),
    "motor": ("Motor loading", "The motor may be overloaded in service.", MAKER),
    "motor-end": ("Motor loading", "The motor may be overloaded when the pump runs out along its curve.", MAKER),
    "pressure": ("Pressure and rating", "A closed valve brings the line to this pressure.", PIPING),
    "pressure-casing": ("Pressure and rating", "A closed valve brings the casing to this pressure.", PIPING),
    "pressure-flanges": ("Pressure and rating", "A closed valve brings the flanges to this pressure.", PIPING),
    "surge": ("Pressure surge", "Valve closing, pump stopping and power failure can bring pressures beyond the steady "
              "ones, above and below; a change of operation needs a new look.", SPECIALIST),
    "check-valve": ("Check valve not fully open", "The loss used is that of a fully open valve.", MAKER),
    "velocity-high": ("High velocity", "Noise, erosion and surge rise with velocity.", GENERAL),
    "velocity-low": ("Low velocity", "Solids may settle and air may stay in the line.", GENERAL),
}

# Code of a finding of the solution -> hazard, who decides.
ANY_FINDING = ("Finding of the solution", GENERAL)
FINDINGS: dict[str, tuple[str, str]] = {
    "sub-atmospheric": ("Pressure below atmospheric", "Air valves, collapse of the wall and ingress are for the piping "
                        "engineer."),
    "below-vapour-pressure": ("Vapour in the line", "The result must not be used; the responsible engineer changes the "
                              "system or the case."),
    "past-end-of-curve": ("End of the pump curve", MAKER),
    "below-start-of-curve": ("Start of the pump curve", MAKER),
    "two-intersections": ("Two duty points", MAKER),
    "flat-curve": ("Sharing of flow between pumps", MAKER),
    "no-flow": ("Pump without flow", MAKER),
    "no-flow-static-above-shutoff": ("Pump without flow", MAKER),
    "not-converged": ("No solution", "The result must not be used."),
}

# Findings after which a result is none: the verdict cannot stand on the criteria alone.
VOID = ("no-flow", "no-flow-static-above-shutoff", "not-converged", "no-resistance", "disconnected", "unmet-demand",
        "past-end-of-curve", "below-start-of-curve", "below-vapour-pressure", "inflow-at-outlet")

# Flag of the liquid -> hazard, fact ({flag}, {liquid}, {temperature} are put in), who decides.
FLAGS: dict[str, tuple[str, str, str]] = {
    "potable": (
        "Drinking water",
        "The liquid ({liquid}, up to {temperature}) is flagged {flag}: materials in contact with it, disinfection, and "
        "separation from water of lesser quality are outside this calculation.",
        "Approvals and backflow prevention are for the water authority under local rules.",
    ),
    "solids": (
        "Solids in the liquid",
        "The liquid ({liquid}) is flagged {flag}: settling, wear and the effect on the pump curve are outside this "
        "calculation.",
        "Test work and the maker's experience decide.",
    ),
    "other": (
        "Hazard of the liquid",
        "The liquid ({liquid}) is flagged {flag}, at up to {temperature}.",
        "Seals, ventilation, drainage and area classification are for specialists under local rules.",
    ),
}

# Topic (a word that a project's own exclusion may use) and what is not covered.
EXCLUSIONS: tuple[tuple[str, str], ...] = (
    ("structural", "foundations, buildings, tanks, and the strength of pipes against loads"),
    ("supports", "pipe supports, anchors, flexibility and stress"),
    ("thrust", "thrust at bends, tees and dead ends, and its restraint"),
    ("buoyancy", "flotation of empty pipes, wells and tanks"),
    ("electrical", "supply, protection, earthing, controls and area classification"),
    ("surge", "analysis of pressures that change with time; at most a screening is printed"),
    ("corrosion", "corrosion, erosion, coatings, linings and cathodic protection"),
    ("noise", "noise and vibration of pumps, valves and pipes"),
    ("water quality", "treatment, mixing, age and disinfection of the liquid"),
    ("relief", "sizing and setting of relief devices, air valves and vents"),
    ("ventilation", "ventilation of wells, pits and pump rooms, and gas detection"),
    ("construction", "installation, pressure testing, cleaning and commissioning"),
)

NOBODY_ELSE: tuple[str, ...] = (
    "A permit may leave out the hydraulics, the structure and the efficiency of the equipment, and rely on the "
    "responsible engineer alone.",
    "The program compares its own results with a second method; that helps a checker and is not a check. Whether the "
    "inputs describe the plant as it will be built, whether the maker's curve belongs to the pump that will be "
    "supplied, and whether the criteria are the right ones for this plant, only a person can say.",
    "Drawings and schedules of this package are made from the same inputs as the calculation: they agree with it, not "
    "necessarily with the plant.",
)
