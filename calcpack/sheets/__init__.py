"""The sheets: each module books its entries and returns what it prints.

:data:`CALCULATION` is the order in which they are filled, because later ones use entries of earlier ones.
:data:`PRINTING` is the order on paper. A new sheet is one module here, a line in each list, and where it wants its own
standing text a template of the same name.
"""

from __future__ import annotations

from calcpack.sheets import (
    appendix,
    basis,
    cases,
    cautions,
    closed_loop,
    control_valves,
    flow_basis,
    grade_line,
    line_losses,
    line_sizing,
    liquid,
    network,
    npsh,
    power,
    pressures,
    pump_curve,
    pump_duty,
    record,
    references,
    registers,
    schedules,
    schematic,
    surge,
    system_curve,
    total_head,
    verdict,
    verification,
)
from calcpack.sheets.content import Sheet
from calcpack.sheets.job import Job

CALCULATION = (
    liquid,
    flow_basis,
    line_losses,
    line_sizing,
    total_head,
    pump_curve,
    pump_duty,
    system_curve,
    npsh,
    power,
    pressures,
    closed_loop,
    grade_line,
    surge,
    control_valves,
    network,
    verification,  # runs the hand-check: nothing after it applies a formula
    schematic,
    cases,
    basis,
    schedules,
    cautions,  # counts the assumptions: after it only the registers book inputs
    registers,
    verdict,
    references,
    appendix,
)
PRINTING = (
    "verdict",
    "basis",
    "registers",
    "schematic",
    "liquid",
    "flow_basis",
    "line_sizing",
    "line_losses",
    "network",
    "total_head",
    "pump_curve",
    "system_curve",
    "pump_duty",
    "npsh",
    "power",
    "pressures",
    "closed_loop",
    "grade_line",
    "surge",
    "control_valves",
    "cases",
    "verification",
    "cautions",
    "schedules",
    "references",
    "appendix",
    "record",
)


def fill(job: Job) -> tuple[Sheet, ...]:
    """Fill every sheet into the job's ledger and return them in printing order."""
    sheets = {sheet.key: sheet for sheet in (module.fill(job) for module in CALCULATION)}
    sheets["record"] = record.fill(job, list(sheets.values()))
    return tuple(sheets[key] for key in PRINTING)
