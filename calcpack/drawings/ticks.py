"""Sensible round ticks, and their text: shared by the elevation axis and the plots."""

from __future__ import annotations

import math
from collections.abc import Sequence

from calcpack.digits import exponent_of, format_number


def round_ticks(low: float, high: float, most: int) -> list[float]:
    """Ticks at multiples of 1, 2 or 5 times a power of ten inside [low, high], at most ``most`` and as many as fit."""
    exponent = math.floor(math.log10((high - low) / most)) - 1
    while True:
        for mantissa in (1, 2, 5):
            step = mantissa * 10.0**exponent
            first, last = math.ceil(low / step - 1e-9), math.floor(high / step + 1e-9)
            if last - first + 1 <= most:
                return [index * step for index in range(first, last + 1)]
        exponent += 1


def tick_texts(ticks: Sequence[float]) -> list[str]:
    """Text of evenly spaced ticks, each to the place of the spacing."""
    if len(ticks) < 2:
        return [format_number(tick) for tick in ticks]
    place = exponent_of(abs(ticks[1] - ticks[0]), 1)
    texts = []
    for tick in ticks:
        rounded = round(tick, max(-place, 0))
        text = format_number(rounded, max(exponent_of(rounded, 9) - place + 1, 1))
        if rounded == 0 and place < 0:
            text = "0." + "0" * -place
        texts.append(text)
    return texts
