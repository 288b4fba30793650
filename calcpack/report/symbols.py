"""Symbols, numbers and units as HTML text after ISO 80000-1: quantities italic, units and names upright."""

from __future__ import annotations

import re
from html import escape

from calcpack.report.fonts import ITALIC, REGULAR, width

GREEK = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "eps": "ε", "epsilon": "ε", "zeta": "ζ", "eta": "η",
    "theta": "θ", "kappa": "κ", "lam": "λ", "mu": "μ", "nu": "ν", "xi": "ξ", "rho": "ρ",
    "sigma": "σ", "tau": "τ", "phi": "φ", "chi": "χ", "psi": "ψ", "omega": "ω", "Gamma": "Γ", "Theta": "Θ",
    "Lambda": "Λ", "Sigma": "Σ", "Phi": "Φ", "Psi": "Ψ", "Omega": "Ω",
}  # fmt: skip
PI = "π"
DELTA = "Δ"
_DIFFERENCE = re.compile(r"d([A-Za-z])$")  # dh, dp: a difference of the quantity named by one letter
RUNNING_INDICES = ("i", "j", "k")
SMALL = 0.7  # size of subscripts and superscripts

_RAISED = {ord(raised): plain for raised, plain in zip("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789−", strict=True)}
_RAISED_RUN = re.compile("[⁰¹²³⁴⁵⁶⁷⁸⁹⁻]+")
DRAWN_RAISED = {"2": "²", "3": "³"}  # the text fonts hold these two; the others are set as superscripts


class Html(str):
    """Text that is markup already, so that templates do not escape it again."""

    __slots__ = ()

    def __html__(self) -> str:
        return self


def split(name: str) -> tuple[str, str, str]:
    """``dh_f`` or ``Delta_h_f`` -> (prefix 'Δ', letter 'h', subscript 'f')."""
    prefix = DELTA if name.startswith("Delta_") else ""
    base, _, subscript = name.removeprefix("Delta_").partition("_")
    difference = _DIFFERENCE.match(base)
    if difference:
        prefix, base = DELTA, difference[1]
    return prefix, GREEK.get(base, base), subscript.replace("_", ",")


def symbol_html(name: str) -> Html:
    """A symbol name of the formula language as HTML: ``h_f`` -> ``<i>h</i><sub>f</sub>``."""
    if name == "pi":
        return Html(PI)
    prefix, letter, subscript = split(name)
    text = f"{prefix}<i>{escape(letter)}</i>"
    if subscript in RUNNING_INDICES:
        text += f"<sub><i>{subscript}</i></sub>"
    elif subscript:
        text += f"<sub>{escape(subscript)}</sub>"
    return Html(text)


def symbol_text(name: str) -> str:
    """A symbol name as plain text: ``rho_s`` -> ``ρ_s``."""
    if name == "pi":
        return PI
    prefix, letter, subscript = split(name)
    return prefix + letter + (f"_{subscript}" if subscript else "")


def symbol_width(name: str) -> float:
    """Width of :func:`symbol_html` in em."""
    if name == "pi":
        return width(PI, REGULAR)
    prefix, letter, subscript = split(name)
    return width(prefix, REGULAR) + width(letter, ITALIC) + SMALL * width(subscript, REGULAR)


def number_html(text: str) -> Html:
    """A formatted number or unit: escaped, powers that the text fonts lack set as superscripts."""

    def raise_run(match: re.Match) -> str:
        run = match[0]
        return run if run in DRAWN_RAISED.values() else f"<sup>{run.translate(_RAISED)}</sup>"

    return Html(_RAISED_RUN.sub(raise_run, escape(text)))


def number_width(text: str) -> float:
    """Width of :func:`number_html` in em, set upright in the formula font."""
    raised = "".join(_RAISED_RUN.findall(text))
    return width(_RAISED_RUN.sub("", text), REGULAR) + SMALL * width(raised.translate(_RAISED), REGULAR)
