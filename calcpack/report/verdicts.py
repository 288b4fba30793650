"""How a verdict looks: always its words, in a frame whose line style tells it apart without colour."""

from __future__ import annotations

from html import escape

from calcpack.ledger import entry as origin
from calcpack.report.symbols import Html

STYLES = {origin.MET: "met", origin.MET_WITH_WARNING: "warning", origin.NOT_MET: "not-met"}
UNDECIDED = "open"


def verdict_html(verdict: str) -> Html:
    """The verdict in its frame."""
    return Html(f'<b class="verdict {STYLES.get(verdict, UNDECIDED)}">{escape(verdict)}</b>')
