"""Symbols for items that sit in a line, drawn by us in the manner of ISO 10628-2 (its sheets were not seen: the shapes
are as commonly drawn).

Every symbol is drawn about (x, y) on a horizontal pipe; ``way`` is +1 when the line runs to the right, -1 to the left.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from calcpack.drawings.svg import INK, PAPER, THIN, Svg, number

HALF = 1.5  # mm, half the height of a valve body
REACH = 2.2  # mm, half its length


@dataclass(frozen=True)
class Symbol:
    """A shape, its name in the legend, and the space it needs (mm) along the pipe, above and below it."""

    title: str
    draw: Callable[[Svg, float, float, int], None]
    length: float = 2 * REACH
    above: float = HALF
    below: float = HALF


def _bow_tie(svg: Svg, x: float, y: float, way: int) -> None:
    svg.polyline(
        ((x - REACH, y - HALF), (x + REACH, y + HALF), (x + REACH, y - HALF), (x - REACH, y + HALF)),
        close=True, fill=PAPER,
    )  # fmt: skip


def _gate(svg: Svg, x: float, y: float, way: int) -> None:
    _bow_tie(svg, x, y, way)
    svg.line(x, y - HALF, x, y + HALF)


def _globe(svg: Svg, x: float, y: float, way: int) -> None:
    _bow_tie(svg, x, y, way)
    svg.circle(x, y, 0.62, fill=INK)


def _ball(svg: Svg, x: float, y: float, way: int) -> None:
    _bow_tie(svg, x, y, way)
    svg.circle(x, y, 0.8)


def _butterfly(svg: Svg, x: float, y: float, way: int) -> None:
    svg.rect(x - REACH + 0.4, y - HALF, 2 * REACH - 0.8, 2 * HALF, pen=0)
    for side in (-1, 1):
        svg.line(x + side * (REACH - 0.4), y - HALF, x + side * (REACH - 0.4), y + HALF)
    svg.line(x - REACH + 0.4, y + HALF, x + REACH - 0.4, y - HALF)
    svg.circle(x, y, 0.5, fill=INK)


def _check(svg: Svg, x: float, y: float, way: int) -> None:
    """Two plates and a flap hinged upstream at the top, with the direction of free flow."""
    svg.rect(x - REACH + 0.2, y - HALF, 2 * REACH - 0.4, 2 * HALF, pen=0)
    for side in (-1, 1):
        svg.line(x + side * (REACH - 0.2), y - HALF, x + side * (REACH - 0.2), y + HALF)
    start, end = (x - way * (REACH - 0.2), y - HALF), (x + way * (REACH - 0.2), y + HALF)
    svg.line(*start, *end)
    svg.circle(start[0], start[1], 0.45, fill=INK, pen=0)
    svg.polyline((end, (end[0] - way * 1.5, end[1] - 0.25), (end[0] - way * 0.75, end[1] - 1.3)), close=True, fill=INK)


def _control(svg: Svg, x: float, y: float, way: int) -> None:
    _bow_tie(svg, x, y, way)
    svg.line(x, y, x, y - 2.2)
    svg.path(
        f"M{number(x - 1.3)} {number(y - 2.2)}A1.3 1.3 0 0 1 {number(x + 1.3)} {number(y - 2.2)}Z", fill=PAPER
    )


def _balancing(svg: Svg, x: float, y: float, way: int) -> None:
    _bow_tie(svg, x, y, way)
    svg.line(x, y, x, y - 2.4)
    svg.line(x - 1.1, y - 2.4, x + 1.1, y - 2.4)


def _foot(svg: Svg, x: float, y: float, way: int) -> None:
    _check(svg, x, y, way)
    svg.rect(x - way * (REACH + 1.1) - 0.9, y - HALF, 1.8, 2 * HALF, dash="0.5 0.4")


def _strainer(svg: Svg, x: float, y: float, way: int) -> None:
    svg.rect(x - REACH, y - 1.8, 2 * REACH, 3.6)
    svg.line(x - REACH, y + 1.8, x + REACH, y - 1.8, dash="0.6 0.45")


def _reducer(svg: Svg, x: float, y: float, way: int) -> None:
    _taper(svg, x, y, way, 1.5, 0.8)


def _expander(svg: Svg, x: float, y: float, way: int) -> None:
    _taper(svg, x, y, -way, 1.5, 0.8)


def _taper(svg: Svg, x: float, y: float, way: int, wide: float, narrow: float) -> None:
    a, b = x - way * 1.7, x + way * 1.7
    svg.polyline(((a, y - wide), (b, y - narrow), (b, y + narrow), (a, y + wide)), close=True, fill=PAPER)


def _eccentric(svg: Svg, x: float, y: float, way: int) -> None:
    """Flat on top, as a pump suction wants it."""
    a, b = x - way * 1.7, x + way * 1.7
    svg.polyline(((a, y - 1.1), (b, y - 1.1), (b, y + 0.4), (a, y + 1.6)), close=True, fill=PAPER)


def _exchanger(svg: Svg, x: float, y: float, way: int) -> None:
    svg.circle(x, y, 2.8)
    svg.polyline(
        ((x - 2.8, y), (x - 1.5, y), (x - 0.7, y - 1.5), (x + 0.7, y + 1.5), (x + 1.5, y), (x + 2.8, y)), width=THIN
    )


def _cooler(svg: Svg, x: float, y: float, way: int) -> None:
    """An exchanger coil over a fan."""
    svg.rect(x - 3.2, y - 2.2, 6.4, 4.4)
    svg.polyline(
        ((x - 3.2, y), (x - 2.0, y), (x - 1.2, y - 1.3), (x, y + 1.3), (x + 1.2, y - 1.3), (x + 2.0, y), (x + 3.2, y))
    )
    svg.path(
        f"M{number(x)} {number(y + 3.1)}C{number(x - 1.5)} {number(y + 2.2)} {number(x - 1.5)} {number(y + 4)} "
        f"{number(x)} {number(y + 3.1)}C{number(x + 1.5)} {number(y + 2.2)} {number(x + 1.5)} {number(y + 4)} "
        f"{number(x)} {number(y + 3.1)}Z", fill=PAPER,
    )  # fmt: skip


def _separator(svg: Svg, x: float, y: float, way: int) -> None:
    """A small vessel with a vent above and a pocket below."""
    svg.rect(x - 1.6, y - 2.6, 3.2, 5.2, radius=1.5)
    svg.line(x, y - 2.6, x, y - 3.4)
    svg.line(x - 0.6, y - 3.4, x + 0.6, y - 3.4)
    svg.line(x - 1.6, y + 1.0, x + 1.6, y + 1.0, dash="0.5 0.4")


def _meter(svg: Svg, x: float, y: float, way: int) -> None:
    svg.circle(x, y, 2.0)
    svg.line(x - 1.1, y + 1.1, x + 0.9, y - 0.9)
    svg.polyline(((x + 1.3, y - 1.3), (x + 0.3, y - 0.9), (x + 0.9, y - 0.3)), close=True, fill=INK)


def _equipment(svg: Svg, x: float, y: float, way: int) -> None:
    svg.rect(x - 2.8, y - 2.0, 5.6, 4.0)


def _fitting(svg: Svg, x: float, y: float, way: int) -> None:
    svg.polyline(((x - 1.5, y), (x, y - 1.5), (x + 1.5, y), (x, y + 1.5)), close=True, fill=PAPER)


def arrow_head(svg: Svg, x: float, y: float, way: int) -> None:
    """The flow arrow: its tip lies ``way`` of the middle."""
    tail = x - way * 1.3
    svg.polyline(((x + way * 1.3, y), (tail, y - 0.95), (tail, y + 0.95)), close=True, fill=INK, width=0)


INLINE: dict[str, Symbol] = {
    "gate": Symbol("gate valve", _gate),
    "globe": Symbol("globe valve", _globe),
    "ball": Symbol("ball valve", _ball),
    "butterfly": Symbol("butterfly valve", _butterfly),
    "valve": Symbol("valve, other", _bow_tie),
    "check": Symbol("check valve", _check),
    "foot": Symbol("foot valve with strainer", _foot, length=2 * REACH + 2.4),
    "control": Symbol("control valve", _control, above=3.6),
    "balancing": Symbol("balancing valve", _balancing, above=2.5),
    "strainer": Symbol("strainer", _strainer, above=1.8, below=1.8),
    "reducer": Symbol("reducer, concentric", _reducer, length=3.4),
    "expander": Symbol("expander, concentric", _expander, length=3.4),
    "eccentric": Symbol("reducer, eccentric", _eccentric, length=3.4, below=1.6),
    "exchanger": Symbol("heat exchanger", _exchanger, length=5.6, above=2.8, below=2.8),
    "cooler": Symbol("cooler with fan", _cooler, length=6.4, above=2.2, below=4.0),
    "separator": Symbol("separator", _separator, length=3.2, above=3.4, below=2.6),
    "meter": Symbol("flow meter", _meter, length=4.0, above=2.0, below=2.0),
    "equipment": Symbol("equipment, other", _equipment, length=5.6, above=2.0, below=2.0),
    "fitting": Symbol("fitting, other", _fitting, length=3.0),
}

# The first word found in a type's name decides; an empty key means that the item has no symbol (pipe work).
_FITTING_WORDS = (
    ("foot", "foot"), ("check", "check"), ("gate", "gate"), ("globe", "globe"), ("ball", "ball"),
    ("butterfly", "butterfly"), ("control", "control"), ("balanc", "balancing"), ("strainer", "strainer"),
    ("eccentric", "eccentric"), ("expander", "expander"), ("enlargement", "expander"),
    ("reducer", "reducer"), ("contraction", "reducer"), ("meter", "meter"), ("valve", "valve"), ("elbow", ""),
    ("bend", ""), ("tee", ""), ("mitre", ""), ("entrance", ""), ("exit", ""), ("coupling", ""),
)  # fmt: skip
_EQUIPMENT_WORDS = (
    ("strainer", "strainer"), ("filter", "strainer"), ("dry cooler", "cooler"), ("cooling tower", "cooler"),
    ("coil", "exchanger"), ("fan", "cooler"), ("exchanger", "exchanger"), ("chiller", "exchanger"),
    ("boiler", "exchanger"), ("cooler", "exchanger"), ("control", "control"), ("balanc", "balancing"),
    ("separator", "separator"), ("meter", "meter"), ("valve", "valve"),
)  # fmt: skip


def fitting_symbol(type_: str) -> str:
    """Key of :data:`INLINE` for a fitting type; empty for pipe work without a symbol (bends, tees, entrances)."""
    return _first(type_, _FITTING_WORDS, "fitting")


def equipment_symbol(type_: str, description: str) -> str:
    """Key of :data:`INLINE` for an equipment item, from its type and else from its description."""
    return _first(type_, _EQUIPMENT_WORDS, "") or _first(description, _EQUIPMENT_WORDS, "equipment")


def _first(name: str, words: tuple[tuple[str, str], ...], otherwise: str) -> str:
    spoken = name.lower().replace("_", " ").replace("-", " ")
    return next((key for word, key in words if word in spoken), otherwise)
