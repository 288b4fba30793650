"""A pump's curves as they act in a case: at its speed, with its impeller, with its liquid."""

from __future__ import annotations

from calcpack.formulas import Formula, liquid, speed, viscous
from calcpack.formulas import pump as formulas
from calcpack.hydraulics.curves import POLYNOMIAL, FittedCurve
from calcpack.ledger import Entry
from calcpack.project.model import Case, Pump
from calcpack.sheets.job import Job

COEFFICIENTS = {
    "H": ("Head", (("a_0", 0), ("a_1", 1), ("a_2", 2))),
    "eta": ("Efficiency", (("b_1", 1), ("b_2", 2), ("b_3", 3))),
    "NPSHR": ("NPSHR", (("c_0", 0), ("c_2", 2))),
}  # symbol and power of each term of the fitted polynomial
FORMULA = {"H": formulas.HEAD_CURVE, "eta": formulas.EFFICIENCY_CURVE, "NPSHR": formulas.NPSHR_CURVE}
VISCOUS = {"H": viscous.HEAD_CURVE, "eta": viscous.EFFICIENCY_CURVE}
ATTRIBUTE = {"H": "head", "eta": "efficiency", "NPSHR": "npshr"}
AT_SPEED = {
    "a_0": speed.HEAD_CONSTANT, "a_1": speed.HEAD_SLOPE, "b_1": speed.EFFICIENCY_LINEAR,
    "b_2": speed.EFFICIENCY_SQUARE, "b_3": speed.EFFICIENCY_CUBE, "c_0": speed.NPSHR_CONSTANT,
}  # the coefficients that change with speed
CORRECTED = "viscosity-corrected"  # finding of the solver
POWER_OF_SPEED = {"H": 2, "eta": 0, "NPSHR": 2}


def value_at(job: Job, pump: Pump, symbol: str, flow: Entry, entry_id: str) -> Entry:
    """Book head, efficiency or NPSHR ('H', 'eta', 'NPSHR') at ``flow`` from the curve as fitted, at its own speed."""
    fit: FittedCurve = getattr(job.fits[pump.tag], ATTRIBUTE[symbol])
    if fit.kind == POLYNOMIAL:
        coefficients = {name: f"{pump.tag}/{name}" for name, _ in COEFFICIENTS[symbol][1]}
        return job.ledger.apply(entry_id, FORMULA[symbol], Q=flow, **coefficients)
    return _between_points(job, symbol, flow, entry_id, float(fit.value(flow.value)), fit, "")


def case_value_at(job: Job, pump: Pump, symbol: str, flow: Entry, case: Case) -> Entry:
    """Book ``<pump>/<symbol>@<case>``: the curve at the speed, with the impeller and the liquid of the case."""
    fit: FittedCurve = getattr(job.fits[pump.tag], ATTRIBUTE[symbol])
    entry_id, ratio = f"{pump.tag}/{symbol}@{case.id}", speed_ratio(job, case, pump)
    factors = viscous_factors(job, pump, case)
    if fit.kind != POLYNOMIAL or (pump.tag in case.trims and symbol != "H"):
        return _scaled(job, pump, symbol, flow, case, fit)
    coefficients = {name: _coefficient(job, pump, name, case, ratio) for name, _ in COEFFICIENTS[symbol][1]}
    if factors is None:
        return job.ledger.apply(entry_id, FORMULA[symbol], case=case.id, Q=flow, **coefficients)
    if symbol == "NPSHR":
        return job.ledger.apply(entry_id, FORMULA[symbol], case=case.id, note="curve for water; with a viscous liquid "
                                "the maker's figure is needed", Q=flow, **coefficients)
    formula: Formula = VISCOUS[symbol]
    more = {name: factors[name] for name in formula.operands if name in factors}
    if "Q_BEP" in formula.operands:
        more["Q_BEP"] = best_flow(job, pump, case)
    return job.ledger.apply(entry_id, formula, case=case.id, symbol=symbol, Q_v=flow, **coefficients, **more)


def speed_ratio(job: Job, case: Case, pump: Pump) -> float:
    """Ratio by which flows scale in a case: speed over that of the curve, times the impeller's ratio where trimmed."""
    ratio = job.solved(case).speeds.get(pump.tag, 1.0)
    trim = case.trims.get(pump.tag)
    return ratio * (trim.si / pump.impeller.si if trim is not None and pump.impeller is not None else 1.0)


def best_flow(job: Job, pump: Pump, case: Case) -> Entry:
    """Flow at best efficiency at the speed of the case."""
    return _flow_at_speed(job, pump, case, job.ledger[f"{pump.tag}/Q_BEP"], "Q_BEP", "flow at best efficiency")


def end_flow(job: Job, pump: Pump, case: Case) -> Entry:
    """Flow at which the curve data end, at the speed of the case."""
    last = job.ledger[f"{pump.tag}/Q_{len(pump.curve.flow)}"]
    return _flow_at_speed(job, pump, case, last, "Q_end", "flow at the end of the curve data")


def speed_of(job: Job, pump: Pump, case: Case) -> Entry:
    """Speed of the pump in the case: that of the curve, or the stated or found share of it."""
    rated, ratio = job.ledger[f"{pump.tag}/n"], job.solved(case).speeds.get(pump.tag, 1.0)
    entry_id, title = f"{pump.tag}/n@{case.id}", f"{pump.tag}: speed"
    if ratio == 1.0 or entry_id in job.ledger:
        return job.ledger[entry_id] if entry_id in job.ledger else rated
    stated = case.speeds.get(pump.tag)
    share_id, words = f"{pump.tag}/s@{case.id}", f"{pump.tag}: speed as a share of the curve's"
    if stated is not None:
        share = job.input(share_id, stated, "s", words, case)
    else:
        origin = f"as found in case {case.settings_of}" if case.settings_of else "found for the wanted flows"
        share = job.ledger.found(share_id, ratio, "s", words, "fraction", source="TOOL", locator=origin,
                                 residual=job.solved(case).convergence.energy, case=case.id, digits=5)
    return job.ledger.apply(entry_id, speed.SPEED, case=case.id, title=title, s=share, n_0=rated)


def viscous_factors(job: Job, pump: Pump, case: Case) -> dict[str, Entry] | None:
    """Correction factors of ANSI/HI 9.6.7 for the liquid of the case; None where the solver used the water curve."""
    tag = pump.tag
    corrected = any(one.code == CORRECTED and one.tag == tag for one in job.solved(case).findings)
    parameter = viscosity_parameter(job, pump, case) if corrected else None
    if parameter is None or viscous.regime(parameter.value) is not viscous.CORRECTED:
        return None
    flow = _once(job, f"{tag}/C_Q@{case.id}", viscous.FLOW_FACTOR, case, B=parameter)
    return {
        "C_Q": flow,
        "C_HB": _once(job, f"{tag}/C_HB@{case.id}", viscous.HEAD_FACTOR_BEP, case, C_Q=flow),
        "C_eta": _once(job, f"{tag}/C_eta@{case.id}", viscous.EFFICIENCY_FACTOR, case, B=parameter),
    }


def viscosity_parameter(job: Job, pump: Pump, case: Case) -> Entry | None:
    """Parameter B of ANSI/HI 9.6.7 for the liquid of the case; None where the best-efficiency head is not known."""
    tag, ledger = pump.tag, job.ledger
    if f"{tag}/H_BEP" not in ledger:
        return None
    speed_now, best = speed_of(job, pump, case), best_flow(job, pump, case)
    nu_id = f"liquid/nu@{case.temperature}"
    if nu_id not in ledger:
        ledger.apply(nu_id, liquid.KINEMATIC, mu=f"liquid/mu@{case.temperature}", rho=job.density(case))
    head = ledger[f"{tag}/H_stage"] if pump.stages > 1 else ledger[f"{tag}/H_BEP"]
    if speed_now is not ledger[f"{tag}/n"]:
        head = _once(job, f"{tag}/H_BEP@{case.id}", formulas.AFFINITY_HEAD, case, H_1=head, n_2=speed_now,
                     n_1=ledger[f"{tag}/n"])
    key = f"{tag}/B@{case.id}"
    return _once(job, key, viscous.PARAMETER, case, nu=ledger[nu_id], H_BEP=head, Q_BEP=best, n=speed_now)


def _coefficient(job: Job, pump: Pump, name: str, case: Case, ratio: float) -> Entry:
    """A coefficient of the fitted polynomial, scaled to the speed or the impeller of the case."""
    base = job.ledger[f"{pump.tag}/{name}"]
    trim = case.trims.get(pump.tag)
    if trim is not None and pump.impeller is not None:
        formula = {"a_0": speed.TRIM_HEAD_CONSTANT, "a_1": speed.TRIM_HEAD_SLOPE}.get(name)
        if formula is not None:
            diameters = {
                "D_2": job.input(f"{pump.tag}/D_2@{case.id}", trim, "D_2", f"{pump.tag}: impeller", case),
                "D_1": job.input(f"{pump.tag}/D_1", pump.impeller, "D_1", f"{pump.tag}: impeller of the curve"),
            }
            base = _once(job, f"{pump.tag}/{name}-trim@{case.id}", formula, case, **{name: base}, **diameters)
    if job.solved(case).speeds.get(pump.tag, 1.0) == 1.0 or name not in AT_SPEED:
        return base
    return _once(job, f"{pump.tag}/{name}@{case.id}", AT_SPEED[name], case, n=speed_of(job, pump, case),
                 n_0=job.ledger[f"{pump.tag}/n"], **{name: base})


def _flow_at_speed(job: Job, pump: Pump, case: Case, base: Entry, symbol: str, words: str) -> Entry:
    now = speed_of(job, pump, case)
    if now is job.ledger[f"{pump.tag}/n"]:
        return base
    entry = _once(job, f"{pump.tag}/{symbol}@{case.id}", formulas.AFFINITY_FLOW, case, Q_1=base, n_2=now,
                  n_1=job.ledger[f"{pump.tag}/n"])
    entry.symbol, entry.title = symbol, f"{pump.tag}: {words} at this speed"
    return entry


def _once(job: Job, entry_id: str, formula: Formula, case: Case, **operands: Entry) -> Entry:
    if entry_id in job.ledger:
        return job.ledger[entry_id]
    return job.ledger.apply(entry_id, formula, case=case.id, **operands)


def _scaled(job: Job, pump: Pump, symbol: str, flow: Entry, case: Case, fit: FittedCurve) -> Entry:
    """Between the maker's points, with flow and value scaled to the case."""
    ratio = speed_ratio(job, case, pump)
    value = float(fit.value(flow.value / ratio)) * ratio ** POWER_OF_SPEED[symbol]
    words = "" if ratio == 1.0 else ", scaled by the affinity rules"
    return _between_points(job, symbol, flow, f"{pump.tag}/{symbol}@{case.id}", value, fit, words, case.id)


def _between_points(job: Job, symbol: str, flow: Entry, entry_id: str, value: float, fit: FittedCurve, words: str,
                    case: str = "") -> Entry:
    return job.ledger.found(
        entry_id, value, symbol, f"{COEFFICIENTS[symbol][0]} between the maker's points", FORMULA[symbol].kind,
        source="COMMON", locator=f"monotone cubic interpolation{words}", residual=fit.residual, case=case,
        operands={"Q": flow.id},
    )
