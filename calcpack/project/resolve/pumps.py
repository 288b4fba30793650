"""Pumps: curve points as values, margins and regions where the project states none."""

from __future__ import annotations

from itertools import pairwise

from calcpack.catalog import criteria, motors
from calcpack.catalog.errors import CatalogError
from calcpack.project.model import Motor, Pump, PumpCurve
from calcpack.project.problems import suggestion
from calcpack.project.read import Text
from calcpack.project.resolve.draft import Draft, Keys
from calcpack.project.schema.base import BROKEN, Reading, intact
from calcpack.project.schema.leaves import Quantity
from calcpack.project.schema.pumps import CURVE_KINDS, CurveInput, MotorInput, PumpInput
from calcpack.values import SUPPLIED, UNCONFIRMED, Value

SUCTION, DISCHARGE = "suction", "discharge"
LEAST_POINTS = 3
GENERAL_SERVICE = "general"
USUAL_MARGIN_BASIS = "api_610"

_BOUNDS = {
    "flow": Quantity("flow", least=0.0),
    "head": Quantity("head", above=0.0),
    "efficiency": Quantity("efficiency", least=0.0, most=1.0),
    "npshr": Quantity("head", least=0.0),
}
_REGION = (("low", "70 %", 0.7), ("high", "120 %", 1.2))


def port(tag: str, side: str) -> str:
    """Tag of the port node of a pump."""
    return f"{tag}.{side}"


def resolve_pump(draft: Draft, tag: str, pump: PumpInput) -> Pump:
    """One pump item; parts that could not be read stay BROKEN."""
    if pump is BROKEN:
        return BROKEN
    keys: Keys = ("pumps", tag)
    if intact(pump.installed, pump.duty) and pump.duty > pump.installed:
        draft.wrong((*keys, "duty"), f"{pump.duty} units on duty, but {pump.installed} installed")
    curve = BROKEN if pump.curve is BROKEN else _curve(draft, (*keys, "curve"), pump.curve)
    low, high = _region(draft, keys, pump)
    ratio, margin = _npsh(draft, keys, pump)
    return Pump(
        tag=tag,
        description=pump.description,
        installed=pump.installed,
        duty=pump.duty,
        suction=port(tag, SUCTION),
        discharge=port(tag, DISCHARGE),
        shaft_elevation=pump.shaft_elevation,
        speed=pump.speed,
        stages=pump.stages,
        curve=curve,
        best_efficiency_flow=pump.best_efficiency_flow,
        preferred_low=low,
        preferred_high=high,
        minimum_flow=pump.minimum_flow,
        npsh_ratio=ratio,
        npsh_margin=margin,
        casing_rating=pump.casing_rating,
        flange_rating=pump.flange_rating,
        motor=_motor(draft, (*keys, "motor"), pump.motor) if pump.motor else None,
        rated_flow=pump.rated_flow,
        type=pump.type,
    )


def _curve(draft: Draft, keys: Keys, curve: CurveInput) -> PumpCurve:
    if not intact(curve.columns, curve.points):
        return BROKEN
    columns: dict[str, list[Value]] = {name: [] for name in curve.columns}
    reading = Reading(draft.problems, draft.units)
    status = curve.status or UNCONFIRMED
    for row in curve.points:
        if len(row) != len(columns):
            text = f"this point has {len(row)} numbers, the curve has {len(columns)} columns"
            draft.problems.add(row, text, f"columns: {', '.join(columns)}")
            continue
        for number, (name, values) in zip(row, columns.items(), strict=True):
            values.append(_point(number, name, str(curve.columns[name]), reading, curve.source, status))
    _check_curve(draft, keys, curve, columns)
    raw = draft.at(keys)
    return PumpCurve(
        **{name: tuple(columns[name]) if name in columns else None for name in CURVE_KINDS},
        source=curve.source,
        status=status,
        place=f"{raw.file}:{raw.line}",
    )


def _point(number: Text, name: str, unit: str, reading: Reading, source: str, status: str) -> Value:
    unit = "" if unit == "1" else unit
    return _BOUNDS[name].value(f"{number} {unit}".strip(), number, reading, source=source, status=status)


def _check_curve(draft: Draft, keys: Keys, curve: CurveInput, columns: dict[str, list[Value]]) -> None:
    flows = columns["flow"]
    if len(curve.points) < LEAST_POINTS:
        text = f"{len(curve.points)} points are too few for a curve"
        draft.wrong((*keys, "points"), text, f"give at least {LEAST_POINTS}")
    for before, after in pairwise(flows):
        if intact(before, after) and not after.si > before.si:
            text = f"flow {after.text} does not lie above {before.text} of the point before"
            draft.problems.add_at(after.path, after.file, after.line, text, "order the points by ascending flow")


def _region(draft: Draft, keys: Keys, pump: PumpInput) -> tuple[Value, Value]:
    if pump.preferred_region is BROKEN:
        return BROKEN, BROKEN
    if pump.preferred_region:
        return pump.preferred_region.low, pump.preferred_region.high
    note = "usual preferred region where the maker states none; it is narrower at high specific speed"
    return tuple(
        draft.supplied((*keys, "preferred_region", end), si, "fraction", text, "HI-9.6.3", note)
        for end, text, si in _REGION
    )


def _npsh(draft: Draft, keys: Keys, pump: PumpInput) -> tuple[Value, Value]:
    """Required NPSH margin: as stated, else that of the service, else that of any service."""
    stated = pump.npsh_margin
    if stated is BROKEN or pump.service is BROKEN:
        return BROKEN, BROKEN
    try:
        row = criteria.npsh_margin(pump.service or GENERAL_SERVICE)
    except CatalogError as error:
        draft.refused((*keys, "service"), error)
        return BROKEN, BROKEN
    note = f"the pump states no margin; taken from the table for {row.title}"
    ratio, head = (stated.ratio, stated.head) if stated else (None, None)
    if ratio is None:
        ratio = draft.row((*keys, "npsh_margin", "ratio"), row.ratio, "ratio", status=SUPPLIED, note=note)
    if head is None:
        head = draft.row((*keys, "npsh_margin", "head"), row.head_margin, "head_margin", status=SUPPLIED, note=note)
    return ratio, head


def _motor(draft: Draft, keys: Keys, motor: MotorInput) -> Motor:
    drive = motor.drive_efficiency
    if drive is None:
        note = "directly coupled: no gear, belt or frequency converter is stated"
        drive = draft.supplied((*keys, "drive_efficiency"), 1.0, "efficiency", "1.00", "COMMON", note)
    margin = motor.margin
    if margin is None:
        margin = _motor_margin(draft, keys, motor)
    return Motor(motor.rating, motor.efficiency, drive, margin, motor.poles)


def _motor_margin(draft: Draft, keys: Keys, motor: MotorInput) -> Value:
    if not intact(motor.rating, motor.margin_basis):
        return BROKEN
    try:
        row = motors.motor_margin(motor.margin_basis or USUAL_MARGIN_BASIS, motor.rating.si)
    except CatalogError as error:
        draft.refused((*keys, "margin_basis"), error)
        return BROKEN
    note = "the motor states no margin; taken from the table"
    return draft.row((*keys, "margin"), row, "margin", status=SUPPLIED, note=note)


def check_port(draft: Draft, keys: Keys, name: str) -> None:
    """Report an end of a line that names a port which no pump has."""
    tag, _, side = name.partition(".")
    pumps = draft.inputs.pumps
    if pumps is BROKEN:
        return
    if tag not in pumps:
        draft.wrong(keys, f"no pump '{tag}'", suggestion(tag, pumps))
    elif side not in (SUCTION, DISCHARGE):
        draft.wrong(keys, f"{tag} has no port '{side}'", suggestion(side, (SUCTION, DISCHARGE)))
