"""What the caller lists for the plots: ids of booked series and entries. Empty ids mean that nothing is drawn."""

from __future__ import annotations

from dataclasses import dataclass

Pair = tuple[str, str]  # ids of the entries that give abscissa and ordinate of a point


@dataclass(frozen=True)
class CaseCurve:
    """One case of the system-curve plot.

    ``case`` is the short label ('1'), ``system`` the series of the system's head over the total flow of the pump item,
    ``flow`` and ``head`` the duty point (total flow). ``static`` is the static head for the table of duty points.
    ``efficiency``, ``npsha``, ``npshr`` and ``power`` are the duty's values in the lower panels; ``npsha_curve`` is a
    series of NPSHA over the total flow.
    """

    case: str
    system: str = ""
    flow: str = ""
    head: str = ""
    static: str = ""
    efficiency: str = ""
    npsha: str = ""
    npshr: str = ""
    power: str = ""
    npsha_curve: str = ""


@dataclass(frozen=True)
class PumpCurve:
    """One pump item: series over the flow of one unit, and the maker's points (flow entry, value entry).

    ``units`` says for how many units in parallel the head curve is drawn, ascending; the lower panels are drawn for the
    greatest. ``label`` names the curve (usually the tag).
    """

    label: str
    head: str
    efficiency: str = ""
    npshr: str = ""
    power: str = ""
    head_points: tuple[Pair, ...] = ()
    efficiency_points: tuple[Pair, ...] = ()
    npshr_points: tuple[Pair, ...] = ()
    units: tuple[int, ...] = (1,)


@dataclass(frozen=True)
class SystemCurveSpec:
    """Pump and system curves of one pump item with the duty points of all cases.

    ``required`` is the point that the system must reach (flow, head). ``best_flow`` is the flow of one unit at best
    efficiency; ``preferred`` the ends of the preferred region, each a flow or a share of ``best_flow``;
    ``minimum_flow`` the least continuous flow of one unit; ``motor_rating`` the rated power of one driver.
    """

    cases: tuple[CaseCurve, ...]
    pumps: tuple[PumpCurve, ...]
    required: Pair | None = None
    best_flow: str = ""
    preferred: Pair | None = None
    minimum_flow: str = ""
    motor_rating: str = ""


@dataclass(frozen=True)
class Level:
    """A liquid level on the profile: where along the path (m), whose, and its entry."""

    at: float
    tag: str
    level: str


@dataclass(frozen=True)
class GradeLineSpec:
    """Grade lines of one case along one path; series are elevations over chainage.

    ``title`` names the case. ``vapour`` is the elevation down to which the grade may fall before the liquid boils,
    ``rating`` that up to which the pipe is rated, ``standstill`` the grade with the pump stopped. ``pump_at`` is the
    pump's chainage (m). ``lowest_at`` is the chainage (m) of the lowest pressure and ``lowest`` the entries written
    there.
    """

    title: str
    axis: str
    hydraulic: str
    energy: str = ""
    vapour: str = ""
    rating: str = ""
    standstill: str = ""
    levels: tuple[Level, ...] = ()
    pump: str = ""
    pump_at: float | None = None
    lowest_at: float | None = None
    lowest: tuple[str, ...] = ()
