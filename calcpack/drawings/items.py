"""From the model to blocks: which symbols, names and booked numbers each item of the schematic shows."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import pairwise

from calcpack.drawings.blocks import Block, JunctionBlock, LineBlock, OutletBlock, PumpBlock
from calcpack.drawings.elevation_scale import ElevationScale, elevation_scale
from calcpack.drawings.layout import Graph
from calcpack.drawings.schematic_labels import SchematicLabels
from calcpack.drawings.symbols import equipment_symbol, fitting_symbol
from calcpack.drawings.tank_block import TankBlock
from calcpack.drawings.words import Words, entry_words, wrapped
from calcpack.ledger import Ledger
from calcpack.ledger.text import NBSP, display_text
from calcpack.project.model import OUTLET, TANK, Line, Node, Project, Pump

NAME_WIDTH = 24.0  # mm, for the description under a tag
AXIS_MARGIN = 0.03  # of the range, beyond the lowest and the highest elevation
MOST_ALIKE = 3  # more fittings of one type than this are drawn once with their count
_ARROWED = ("flow", "velocity")  # the arrow shows their sign


class Items:
    """Blocks of one case at one height of the elevation axis; y of node blocks is set, x of none."""

    def __init__(
        self, project: Project, ledger: Ledger, labels: SchematicLabels, graph: Graph, height: float
    ) -> None:
        self.case = project.case(labels.case_id)
        self.system = self.case.system
        self.ledger, self.labels, self.graph = ledger, labels, graph
        self.scale = self._scale(height)

    def _scale(self, height: float) -> ElevationScale:
        levels = [level.si for node in self.system.nodes.values() for level in (node.levels or {}).values()]
        shafts = [pump.shaft_elevation.si for pump in self.system.pumps.values()]
        nodes = [node.elevation.si for node in self.system.nodes.values() if node.elevation]
        crests = [crest for line in self.system.lines.values() if (crest := crest_of(line)) is not None]
        every = [*levels, *shafts, *nodes, *crests]
        margin = AXIS_MARGIN * (max(every) - min(every))
        return elevation_scale(min(every) - margin, max(every) + margin, height, self._told_apart())

    def _told_apart(self) -> list[tuple[float, float]]:
        """Neighbouring levels of a tank, among them the shafts of the pumps that draw from it."""
        pairs: list[tuple[float, float]] = []
        for node in self.system.nodes.values():
            fed = {line.end for line in self.system.lines.values() if line.start == node.tag}
            shafts = {pump.shaft_elevation.si for pump in self.system.pumps.values() if pump.suction in fed}
            pairs += pairwise(sorted(shafts | {level.si for level in (node.levels or {}).values()}))
        return pairs

    def node_blocks(self) -> dict[str, Block]:
        """Blocks of tanks, outlets, junctions and pumps, by tag."""
        blocks: dict[str, Block] = {}
        for tag in self.graph.items:
            if tag in self.system.pumps:
                blocks[tag] = self._pump(self.system.pumps[tag])
            else:
                blocks[tag] = self._node(self.system.nodes[tag])
        return blocks

    def line_blocks(self) -> dict[str, LineBlock]:
        """Blocks of lines, by tag."""
        return {tag: self._line(line) for tag, line in self.system.lines.items()}

    def crest_blocks(self) -> dict[str, Block]:
        """The highest point of each line whose profile rises above both of its ends, by line."""
        blocks: dict[str, Block] = {}
        for tag, line in self.system.lines.items():
            crest = crest_of(line)
            if crest is not None:
                booked = self.labels.crest_entries.get(tag)
                rows = [Words("high point"), entry_words(self.ledger, booked)] if booked else [Words("high point")]
                blocks[tag] = JunctionBlock(f"{tag} high point", y=self.scale.y(crest), crest=True, rows=rows)
        return blocks

    def _node(self, node: Node) -> Block:
        entries = [entry_words(self.ledger, one) for one in self.labels.node_entries.get(node.tag, ())]
        rows = [Words(node.tag, bold=True), *wrapped(node.description, NAME_WIDTH), *entries]
        if node.kind == TANK:
            return self._tank(node, rows)
        block: Block
        if node.kind == OUTLET:
            block = OutletBlock(node.tag, rows=rows)
        else:
            block = JunctionBlock(node.tag, rows=rows, demand=node.demand is not None and node.demand.si > 0)
        block.y = self.scale.y(node.elevation.si)
        return block

    def _tank(self, node: Node, rows: list[Words]) -> TankBlock:
        booked: Mapping[str, str] = self.labels.level_entries.get(node.tag, {})
        current = self.case.levels.get(node.tag, "")
        levels = []
        for name, level in sorted((node.levels or {}).items(), key=lambda pair: (-pair[1].si, pair[0])):
            words = Words("")
            if name in booked:
                words = Words(f"{name} {display_text(self.ledger[booked[name]], self.ledger.system)}")
            levels.append((self.scale.y(level.si), words, name == current))
        lowest = max(y for y, _, _ in levels)
        ways = [self.graph.way(line) * (1 if self.graph.ends[line][0] == node.tag else -1)
                for line in self.graph.lines_of(node.tag)]  # fmt: skip
        nozzle = self.scale.y(node.elevation.si) if node.elevation else lowest + 1.6
        lift, foot = self._suction_lift(node)
        return TankBlock(
            node.tag, levels=levels, nozzle=nozzle, closed=node.gas_pressure is not None,
            label_side=-1 if sum(ways) >= 0 else 1, dip=lift, foot=foot, rows=rows, way=1 if sum(ways) >= 0 else -1,
        )  # fmt: skip

    def _suction_lift(self, node: Node) -> tuple[float | None, str]:
        """Position of a suction pipe that rises from the tank to a pump above its levels, and its foot valve."""
        highest = max(level.si for level in (node.levels or {}).values())
        for pump in self.system.pumps.values():
            for line in self.system.lines.values():
                if line.start == node.tag and line.end == pump.suction and pump.shaft_elevation.si > highest:
                    keys = [fitting_symbol(fitting.type) for fitting in line.fittings]
                    return self.scale.y(pump.shaft_elevation.si), "foot" if "foot" in keys else ""
        return None, ""

    def _pump(self, pump: Pump) -> PumpBlock:
        running = self.case.pumps.get(pump.tag, pump.duty)
        entries = [entry_words(self.ledger, one) for one in self.labels.pump_entries.get(pump.tag, ())]
        feeds = [tag for tag, line in self.system.lines.items() if pump.suction in (line.start, line.end)]
        from_left = all(self.graph.line_column(tag) < self.graph.column[pump.tag] for tag in feeds)
        block = PumpBlock(
            pump.tag, way=1 if from_left else -1, units=pump.installed, running=running, duty=pump.duty,
            rows=[Words(pump.tag, bold=True), *entries],
        )  # fmt: skip
        block.y = self.scale.y(pump.shaft_elevation.si)
        return block

    def _line(self, line: Line) -> LineBlock:
        ids = self.labels.line_entries.get(line.tag, ())
        flows = [self.ledger[one].value for one in ids if self.ledger[one].kind == "flow"]
        flow = (flows[0] > 0) - (flows[0] < 0) if flows else 0
        return LineBlock(
            line.tag, way=self.graph.way(line.tag), flow=flow, symbols=self._symbols(line),
            label=Words(f"{line.tag}{NBSP}{NBSP}{line.pipe.size}", bold=True),
            rows=[entry_words(self.ledger, one, magnitude=self.ledger[one].kind in _ARROWED) for one in ids],
        )  # fmt: skip

    def _symbols(self, line: Line) -> list[tuple[str, str]]:
        """Symbols in order from the start of the line: fittings as listed, equipment after the first valve, reducers
        next to the pump they serve."""
        fittings = []
        for fitting in line.fittings:
            key = fitting_symbol(fitting.type)
            if not key or (key == "foot" and self._is_lift(line)):
                continue
            if fitting.count > MOST_ALIKE:
                fittings.append((key, fitting.tag or f"{fitting.count}×"))
            else:
                fittings += [(key, fitting.tag)] * fitting.count
        items = [self.system.equipment[tag] for tag in line.equipment]
        equipment = [(equipment_symbol(item.type, item.description), item.tag) for item in items]
        ports = {port for pump in self.system.pumps.values() for port in (pump.suction, pump.discharge)}
        tapers = [one for one in fittings if one[0] in ("reducer", "expander", "eccentric")]
        valves = [one for one in fittings if one not in tapers]
        middle = valves[:1] + equipment + valves[1:]
        if line.end in ports:
            return middle + tapers
        return tapers + middle if line.start in ports else middle + tapers

    def _is_lift(self, line: Line) -> bool:
        node = self.system.nodes[line.start]
        return node.kind == TANK and self._suction_lift(node)[0] is not None


def crest_of(line: Line) -> float | None:
    """Elevation (m) of a profile's highest point where it stands above both ends of the line."""
    if len(line.profile) < 3:
        return None
    high = max(point.elevation.si for point in line.profile)
    ends = (line.profile[0].elevation.si, line.profile[-1].elevation.si)
    return high if high > max(ends) + 1e-6 else None
