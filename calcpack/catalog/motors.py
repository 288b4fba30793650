"""Standard motor ratings, service margins and full-load efficiency."""

from __future__ import annotations

from calcpack.catalog.errors import CatalogError
from calcpack.catalog.names import plain, unknown
from calcpack.catalog.table import CatalogValue, Row, load_table

_SERIES = {"SI": "motor_ratings_iec", "US": "motor_ratings_nema"}


def next_motor_rating(power_W: float, system: str) -> CatalogValue:
    """Smallest standard rating in W not below ``power_W``: IEC kilowatts for "SI", NEMA horsepower for "US".

    Raises :class:`CatalogError` when the power is not positive or above the series.
    """
    if system not in _SERIES:
        raise CatalogError(f'no motor series for the unit system "{system}"', f"known: {', '.join(_SERIES)}")
    if not power_W > 0:
        raise CatalogError(f"a motor rating needs a positive power, not {power_W:g} W")
    table = load_table(_SERIES[system])
    unit = table.units["rating"]
    for row in table.rows:
        rating = table.value(row, "rating", "power", f"{row['rating']} {unit}")
        if rating.value >= power_W:
            return rating
    raise CatalogError(
        f"{power_W:g} W is above the largest catalogued motor, {rating.row}", "state the rating with its source"
    )


def motor_margin(basis: str, rating_W: float) -> CatalogValue:
    """Least ratio of motor rating to greatest shaft power by ``basis``, for a motor rated ``rating_W``.

    Raises :class:`CatalogError` when the basis is unknown.
    """
    table = load_table("motor_margins")
    rows = [row for row in table.rows if row["basis"] == plain(basis)]
    if not rows:
        raise unknown("basis of motor margin", basis, (row["basis"] for row in table.rows))
    limits = [table.optional(row, "rating_max", "power", row["title"]) for row in rows]
    row = next(row for row, limit in zip(rows, limits, strict=True) if limit is None or rating_W <= limit.value)
    return table.value(row, "margin", "ratio", row["title"])


def motor_efficiency(rating_W: float, efficiency_class: str, poles: int, frequency_Hz: int) -> CatalogValue:
    """Nominal full-load efficiency of a standard motor, for example ("IE3", 4 poles, 50 Hz).

    Raises :class:`CatalogError` when the table has no such class, pole number, frequency or rating.
    """
    table = load_table("motor_efficiency")
    wanted = (str(efficiency_class).upper(), str(poles), str(frequency_Hz))
    rows = [row for row in table.rows if (row["efficiency_class"], row["poles"], row["frequency"]) == wanted]
    if not rows:
        known = dict.fromkeys(_motor(row) for row in table.rows)
        raise CatalogError(
            f"no efficiencies for {wanted[0]}, {poles} poles, {frequency_Hz} Hz", f"known: {'; '.join(known)}"
        )
    for row in rows:
        if abs(table.value(row, "rating", "power", "").value - rating_W) <= 1e-9 * rating_W:
            return table.value(row, "efficiency", "efficiency", f"{_motor(row)}, {row['rating']} kW")
    known = ", ".join(row["rating"] for row in rows)
    raise CatalogError(
        f"no efficiency for a rating of {rating_W / 1000:g} kW", f"kW known for {_motor(rows[0])}: {known}"
    )


def _motor(row: Row) -> str:
    return f"{row['efficiency_class']}, {row['poles']} poles, {row['frequency']} Hz"
