"""A solved group of cases as the finders of findings read it."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from calcpack.digits import format_number
from calcpack.hydraulics import laws
from calcpack.hydraulics.assemble import Group
from calcpack.hydraulics.network import Network
from calcpack.hydraulics.newton import Result
from calcpack.hydraulics.topology import Topology
from calcpack.quantities import KINDS

NBSP = "\u00a0"


@dataclass(frozen=True, eq=False)
class Solved:
    """A solved group as the finders read it; every finder yields (block, finding)."""

    group: Group
    result: Result
    units: str

    @property
    def net(self) -> Network:
        """The group's network."""
        return self.group.network

    @property
    def topology(self) -> Topology:
        """The group's topology."""
        return self.group.network.topology

    @property
    def line_flow(self) -> np.ndarray:
        """Flow of the lines, (lines, B)."""
        return self.result.flow[: len(self.topology.lines)]

    @property
    def pump_flow(self) -> np.ndarray:
        """Total flow of the pumps, (pumps, B)."""
        return self.result.flow[len(self.topology.lines) :]

    @cached_property
    def alive(self) -> np.ndarray:
        """Links that take part: present, and not in a dead part of the network, (links, B)."""
        return self.net.present & ~self.result.dead[self.topology.start] & ~self.result.dead[self.topology.end]

    @cached_property
    def line_state(self) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Speed, Reynolds number and friction factor of the lines."""
        return laws.line_factors(self.net, self.line_flow)

    @cached_property
    def unsolved(self) -> np.ndarray:
        """Blocks (B,) without a solution at all."""
        return self.net.unresisted.any(axis=0)

    def said(self, value: float, kind: str) -> str:
        """``value`` (SI) of a quantity kind as text in the display unit of the unit system."""
        unit = KINDS[kind].display_unit(self.units)
        text = format_number(unit.from_si(float(value)))
        return f"{text}{NBSP}{unit.text}" if unit.text else text
