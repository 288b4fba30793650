"""Pump data: the maker's points as given, the fitted curves with what they leave over, specific speeds."""

from __future__ import annotations

from calcpack.formulas import pump as formulas
from calcpack.hydraulics.curves import POLYNOMIAL, FittedCurve, PumpCurves
from calcpack.project.model import Pump
from calcpack.sheets.content import Block, Column, Derivation, Facts, Prose, Ref, Row, Section, Sheet, Table
from calcpack.sheets.job import Job
from calcpack.sheets.pump_at_case import COEFFICIENTS, FORMULA, value_at
from calcpack.values import CONFIRMED, Value

COLUMNS = (
    ("Q", "flow", "Flow", "flow"),
    ("H", "head", "Head", "head"),
    ("eta", "efficiency", "Efficiency", "efficiency"),
    ("NPSHR", "npshr", "NPSHR", "head"),
)
def fill(job: Job) -> Sheet:
    """Book points, fit coefficients and specific speeds of every pump."""
    sections = tuple(_section(job, pump) for pump in job.project.system.pumps.values())
    if not sections:
        return Sheet("pump_curve", "Pump data", omitted="the project has no pump")
    return Sheet("pump_curve", "Pump data", sections)


def _section(job: Job, pump: Pump) -> Section:
    tag, fit = pump.tag, job.fits[pump.tag]
    table = _points(job, pump)
    for symbol, attribute in (("H", "head"), ("eta", "efficiency"), ("NPSHR", "npshr")):
        if getattr(fit, attribute) is not None:
            _coefficients(job, pump, symbol, getattr(fit, attribute))
    blocks: tuple[Block, ...] = (_facts(job, pump), table, *_fit_blocks(job, pump, fit), *_speeds(job, pump, fit))
    return Section(f"pump-curve-{tag}", f"{tag} {pump.description}", blocks)


def _facts(job: Job, pump: Pump) -> Facts:
    tag = pump.tag
    speed = job.input(f"{tag}/n", pump.speed, "n", f"{tag}: speed")
    best = job.input(f"{tag}/Q_BEP", pump.best_efficiency_flow, "Q_BEP", f"{tag}: flow at best efficiency")
    rows = [
        ("Curve data", f"{pump.curve.source} ({pump.curve.status})"),
        ("Speed", Ref(speed.id, "quantity")),
        ("Flow at best efficiency", Ref(best.id, "quantity")),
    ]
    if pump.type:
        rows.insert(0, ("Type", pump.type))
    return Facts(tuple(rows))


def _points(job: Job, pump: Pump) -> Table:
    tag, rows = pump.tag, []
    present = [column for column in COLUMNS if getattr(pump.curve, column[1]) is not None]
    for position in range(len(pump.curve.flow)):
        cells = [str(position + 1)]
        for symbol, attribute, title, _ in present:
            value = getattr(pump.curve, attribute)[position]
            entry = job.input(f"{tag}/{symbol}_{position + 1}", value, symbol, f"{tag}: {title}, point {position + 1}")
            cells.append(Ref(entry.id))
        rows.append(Row(tuple(cells)))
    columns = (Column("Point", width=0.6), *(Column(title, symbol, kind) for symbol, _, title, kind in present))
    return Table(f"{tag}: the maker's points", columns, tuple(rows))


def _coefficients(job: Job, pump: Pump, symbol: str, fit: FittedCurve) -> None:
    if fit.kind != POLYNOMIAL:
        return
    title, names = COEFFICIENTS[symbol]
    attribute = {"H": "head", "eta": "efficiency", "NPSHR": "npshr"}[symbol]
    points = tuple(f"{pump.tag}/{symbol}_{i + 1}" for i in range(len(getattr(pump.curve, attribute))))
    flows = tuple(f"{pump.tag}/Q_{i + 1}" for i in range(len(pump.curve.flow)))
    for name, power in names:
        job.ledger.found(
            f"{pump.tag}/{name}", fit.coefficients[power], name, f"{title} curve: coefficient",
            FORMULA[symbol].kinds[name],
            source="COMMON", locator="least-squares fit of the maker's points", residual=fit.residual,
            operands={"Q": flows, symbol: points}, digits=6,
        )


def _fit_blocks(job: Job, pump: Pump, fit: PumpCurves) -> list[Block]:
    rows = []
    for symbol, attribute in (("H", "head"), ("eta", "efficiency"), ("NPSHR", "npshr")):
        curve = getattr(fit, attribute)
        if curve is None:
            continue
        title, names = COEFFICIENTS[symbol]
        residual = job.ledger.found(
            f"{pump.tag}/residual-{symbol}", curve.residual, f"d_{symbol}", f"{title}: greatest distance to a point",
            FORMULA[symbol].kind, source="COMMON", residual=0.0, digits=2,
        )
        polynomial = curve.kind == POLYNOMIAL
        if polynomial:
            cells = [part for name, _ in names for part in (
                Ref(f"{pump.tag}/{name}", "symbol"), " = ", Ref(f"{pump.tag}/{name}", "quantity"), "; ")][:-1]
        rows.append(Row((title, tuple(cells) if polynomial else "monotone cubic interpolation between the points",
                         Ref(residual.id, "quantity"))))
    columns = (Column("Curve"), Column("Coefficients", width=4.2), Column("Greatest distance to a point", width=1.6))
    return [
        Table(f"{pump.tag}: fitted curves", columns, tuple(rows)),
        Prose("The curves hold between the first and the last point; nothing is read outside them without a finding."),
    ]


def _speeds(job: Job, pump: Pump, fit: PumpCurves) -> list[Block]:
    tag, ledger = pump.tag, job.ledger
    best = ledger[f"{tag}/Q_BEP"]
    if not fit.head.flow_min <= best.value <= fit.head.flow_max:
        return [Prose("The flow at best efficiency lies outside the curve data: specific speeds are not computed.")]
    head = value_at(job, pump, "H", best, f"{tag}/H_BEP")
    head.symbol, head.title = "H_BEP", "Head at best efficiency"
    ids, stage = [head.id], head
    if pump.stages > 1:
        stages = Value(float(pump.stages), "count", str(pump.stages), source=pump.curve.source, status=CONFIRMED)
        number = job.input(f"{tag}/i", stages, "i", f"{tag}: number of stages")
        stage = ledger.apply(f"{tag}/H_stage", formulas.STAGE_HEAD, H=head, i=number)
        ids.append(stage.id)
    ids.append(ledger.apply(f"{tag}/n_s", formulas.SPECIFIC_SPEED, n=f"{tag}/n", Q=best, H=stage).id)
    if fit.npshr is not None:
        required = value_at(job, pump, "NPSHR", best, f"{tag}/NPSHR_BEP")
        required.symbol, required.title = "NPSHR_BEP", "NPSHR at best efficiency"
        suction = ledger.apply(f"{tag}/S", formulas.SUCTION_SPECIFIC_SPEED, n=f"{tag}/n", Q=best, NPSHR=required)
        ids += [required.id, suction.id]
    return [Derivation(tuple(ids))]
