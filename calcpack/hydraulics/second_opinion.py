"""Second opinion at run time: friction factors, loss coefficients and bores recomputed by the library ``fluids``.

The library is an independent implementation; it shares no code and no table with this program except where the
catalog says that a row was read in it. Functions return None where the library offers nothing comparable.
"""

from __future__ import annotations

from collections.abc import Callable

STEEL_STANDARDS = ("ASME B36.10M", "ASME B36.19M")


def friction_factor(reynolds: float, relative_roughness: float) -> float:
    """Darcy factor by the library's own choice of method. It leaves laminar flow at Re 2040, this program at 2000."""
    from fluids.friction import friction_factor as library

    return float(library(Re=reynolds, eD=relative_roughness))


def fully_turbulent_factor(diameter: float) -> float:
    """Fully turbulent factor of clean steel for ``diameter`` (m), from the library's own fit to the handbook table."""
    from fluids.fittings import ft_Crane

    return float(ft_Crane(diameter))


def bore(standard: str, nominal_inches: float, schedule: str) -> float | None:
    """Inside diameter, m, of a steel size; None for standards that the library does not hold."""
    if standard not in STEEL_STANDARDS:
        return None
    from fluids.piping import nearest_pipe

    try:
        return float(nearest_pipe(NPS=nominal_inches, schedule=schedule)[1])
    except ValueError:
        return None


def loss_coefficient(fitting: str, diameter: float) -> float | None:
    """K of one fully open fitting of catalog type ``fitting`` in a line of bore ``diameter`` (m)."""
    function = _coefficients().get(fitting)
    return None if function is None else float(function(diameter))


def _coefficients() -> dict[str, Callable[[float], float]]:
    from fluids import fittings as library

    return {
        "gate_valve": lambda d: library.K_gate_valve_Crane(d, d, 0.0),
        "globe_valve": lambda d: library.K_globe_valve_Crane(d, d),
        "angle_valve_full_area": lambda d: library.K_angle_valve_Crane(d, d),
        "ball_valve": lambda d: library.K_ball_valve_Crane(d, d, 0.0),
        "butterfly_valve": library.K_butterfly_valve_Crane,
        "plug_valve": lambda d: library.K_plug_valve_Crane(d, d, 0.0),
        "diaphragm_valve_weir": library.K_diaphragm_valve_Crane,
        "swing_check_valve_angled": library.K_swing_check_valve_Crane,
        "swing_check_valve_straight": lambda d: library.K_swing_check_valve_Crane(d, angled=False),
        "foot_valve_hinged": lambda d: library.K_foot_valve_Crane(d, style=1),
        "foot_valve_poppet": lambda d: library.K_foot_valve_Crane(d, style=0),
        "tilting_disc_check_valve_5deg": lambda d: library.K_tilting_disk_check_valve_Crane(d, 5.0),
        "elbow_90_short_radius": lambda d: library.bend_rounded_Crane(d, 90.0, bend_diameters=1.0),
        "elbow_90_long_radius": lambda d: library.bend_rounded_Crane(d, 90.0, bend_diameters=1.5),
        "entrance_flush": lambda d: library.entrance_sharp("Crane"),
        "exit": lambda d: library.exit_normal(),
    }
