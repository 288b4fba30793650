"""What the caller wants written on the schematic: entry ids by tag."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

Ids = Mapping[str, tuple[str, ...]]


@dataclass(frozen=True)
class SchematicLabels:
    """Entry ids to print at each item, for the case ``case_id``.

    ``line_entries``: line tag -> entries of its box; the entry of kind flow gives the arrow (start to end when
    positive); flow and velocity print without sign, and a line without a flow entry gets no arrow. ``node_entries``:
    node tag -> entries under its name (elevation, pressure, demand). ``level_entries``: tank tag -> level name ->
    entry. ``pump_entries``: pump tag -> entries over its symbol (shaft elevation, flow, head). ``crest_entries``:
    line tag -> elevation of its highest point where that stands above both ends. ``columns`` are optional hints:
    tag of a node or pump -> column (0 is leftmost) in place of the computed one; it may lie between two columns.
    """

    case_id: str
    line_entries: Ids = field(default_factory=dict)
    node_entries: Ids = field(default_factory=dict)
    level_entries: Mapping[str, Mapping[str, str]] = field(default_factory=dict)
    pump_entries: Ids = field(default_factory=dict)
    crest_entries: Mapping[str, str] = field(default_factory=dict)
    columns: Mapping[str, float] = field(default_factory=dict)
