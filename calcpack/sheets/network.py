"""Network: continuity at every node, energy around every loop, and the pressures at the nodes."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from calcpack.formulas import grade
from calcpack.ledger import Entry
from calcpack.project.model import JUNCTION, PUMP_PORT, Case
from calcpack.sheets.content import Block, Column, Prose, Ref, Row, Section, Sheet, Table
from calcpack.sheets.job import Job, case_label
from calcpack.sheets.total_head import end_head


@dataclass(frozen=True)
class Link:
    """A line or pump between two nodes: its head, whether it is a gain, whether the flow goes from start to end."""

    tag: str
    start: str
    end: str
    head: Entry
    gain: bool
    forward: bool


def fill(job: Job) -> Sheet:
    """Book what is left over at nodes and around loops. A single line of pipes needs no such sheet."""
    system = job.project.system
    if not _branches(job):
        return Sheet("network", "Network", omitted="no node joins more than two lines: one flow along each path")
    cases = [case for case in job.cases if job.solved(case).convergence.converged]
    normal = next((case for case in cases if case.id == job.project.normal_case), cases[0])
    inner = [tag for tag, node in system.nodes.items() if node.kind in (JUNCTION, PUMP_PORT)]
    for case in cases:
        for tag in inner:
            _book_node(job, case, tag)
    sections = [
        Section("network-continuity", "Continuity at the nodes", _continuity(job, cases, normal, inner)),
        *_loops(job, cases),
        Section("network-pressures", "Heads and pressures at the nodes", _pressures(job, cases)),
    ]
    return Sheet("network", "Network", tuple(sections))


def _branches(job: Job) -> bool:
    ends = [node for line in job.project.system.lines.values() for node in (line.start, line.end)]
    return any(ends.count(node) > 2 for node in ends)


def _flows(job: Job, case: Case, node: str) -> tuple[list[tuple[str, Entry]], list[tuple[str, Entry]]]:
    """Lines and pumps that bring flow to a node and take it away, with their flow entries."""
    inward, outward = [], []
    solved, system = job.solved(case), case.system
    for tag, line in system.lines.items():
        entry = job.ledger[f"{tag}/Q@{case.id}"]
        forward = solved.lines[tag].flow >= 0
        if node == (line.end if forward else line.start):
            inward.append((tag, entry))
        elif node == (line.start if forward else line.end):
            outward.append((tag, entry))
    for tag, pump in system.pumps.items():
        if f"{tag}/Q@{case.id}" in job.ledger:
            if node == pump.discharge:
                inward.append((tag, job.ledger[f"{tag}/Q@{case.id}"]))
            elif node == pump.suction:
                outward.append((tag, job.ledger[f"{tag}/Q@{case.id}"]))
    demand = system.nodes[node].demand
    if demand is not None:
        entry = job.input(f"{node}/q", demand, "q", f"{node}: demand", case)
        (outward if demand.si >= 0 else inward).append(("demand", entry))
    return inward, outward


def _book_node(job: Job, case: Case, node: str) -> None:
    inward, outward = _flows(job, case, node)
    values = {"Q_in": [abs(entry.value) for _, entry in inward], "Q_out": [abs(entry.value) for _, entry in outward]}
    formula = grade.NODE_BALANCE
    job.ledger.found(
        f"{node}/dQ@{case.id}", float(formula.evaluate(**values)) if inward and outward else 0.0, "dQ",
        f"{node}: {formula.title.lower()}", "flow", source=formula.source, residual=0.0, case=case.id, digits=2,
        operands={"Q_in": tuple(one.id for _, one in inward), "Q_out": tuple(one.id for _, one in outward)},
    )


def _continuity(job: Job, cases: list[Case], normal: Case, nodes: list[str]) -> tuple[Block, ...]:
    rows = []
    for node in nodes:
        inward, outward = _flows(job, normal, node)
        rows.append(Row((node, _listed(inward), _listed(outward), Ref(f"{node}/dQ@{normal.id}", "quantity"))))
    columns = (Column("Node", width=1.6), Column("Flow in", width=3.2), Column("Flow out", width=3.2),
               Column("Left over", "dQ", width=1.4))
    residuals = (Column("Node", width=1.6), *(Column(f"Case {case.id}", "dQ") for case in cases))
    others = tuple(Row((node, *(Ref(f"{node}/dQ@{case.id}", "quantity") for case in cases))) for node in nodes)
    return (
        Table(f"Flows at every node, case {case_label(normal)}", columns, tuple(rows)),
        Table("Flow left over at every node, all cases", residuals, others),
    )


def _listed(flows: list[tuple[str, Entry]]) -> tuple[str | Ref, ...]:
    parts: list[str | Ref] = []
    for tag, entry in flows:
        parts += [tag, Ref(entry.id, "quantity"), ";"]
    return tuple(parts[:-1]) or ("none",)


def _links(job: Job, case: Case) -> list[Link]:
    made, solved = [], job.solved(case)
    for tag, line in case.system.lines.items():
        if solved.lines[tag].open and f"{tag}/h_L@{case.id}" in job.ledger:
            made.append(Link(tag, line.start, line.end, job.ledger[f"{tag}/h_L@{case.id}"], False,
                             solved.lines[tag].flow >= 0))
    made += [Link(tag, pump.suction, pump.discharge, job.ledger[f"{tag}/H@{case.id}"], True, True)
             for tag, pump in case.system.pumps.items() if f"{tag}/H@{case.id}" in job.ledger]
    return made


def _loops(job: Job, cases: list[Case]) -> list[Section]:
    """Heads around each independent loop; paths between surfaces of known head are closed by the total-head sheet."""
    blocks: list[Block] = []
    for case in cases:
        rows = []
        for number, loop in enumerate(_cycles(_links(job, case)), start=1):
            gains = [link for link, along in loop if link.gain == (along == link.forward)]
            losses = [link for link, along in loop if link.gain != (along == link.forward)]
            if not gains or not losses:
                continue
            formula = grade.LOOP_BALANCE
            left = float(formula.evaluate(
                h_a=[one.head.value for one in gains], h_b=[one.head.value for one in losses]
            ))
            entry = job.ledger.found(
                f"loop-{number}/dH@{case.id}", left, "dH", f"Loop {number}: {formula.title.lower()}", "head",
                source=formula.source, residual=0.0, case=case.id, digits=2,
                operands={"h_a": tuple(one.head.id for one in gains), "h_b": tuple(one.head.id for one in losses)},
            )
            rows.append(Row((str(number), _heads(gains), _heads(losses), Ref(entry.id, "quantity"))))
        if rows:
            columns = (Column("Loop", width=0.6), Column("Heads one way", width=3.6),
                       Column("Heads the other way", width=3.6), Column("Left over", "dH", width=1.4))
            blocks.append(Table(f"Heads around the loops, case {case_label(case)}", columns, tuple(rows)))
    return [Section("network-loops", "Energy around the loops", tuple(blocks))] if blocks else []


def _heads(links: list[Link]) -> tuple[str | Ref, ...]:
    parts: list[str | Ref] = []
    for link in links:
        parts += [link.tag, Ref(link.head.id, "quantity"), ";"]
    return tuple(parts[:-1])


def _cycles(links: list[Link]) -> Iterator[list[tuple[Link, bool]]]:
    """Independent loops as (link, gone along its direction): each link that a spanning tree leaves closes one."""
    chords: list[Link] = []
    tree: dict[str, list[tuple[str, Link]]] = {}
    root: dict[str, str] = {}

    def find(node: str) -> str:
        while root.setdefault(node, node) != node:
            node = root[node]
        return node

    for link in links:
        a, b = find(link.start), find(link.end)
        if a == b:
            chords.append(link)
            continue
        root[a] = b
        tree.setdefault(link.start, []).append((link.end, link))
        tree.setdefault(link.end, []).append((link.start, link))
    for chord in chords:
        path = _path(tree, chord.end, chord.start)
        yield [(chord, True), *path]


def _path(tree: dict[str, list[tuple[str, Link]]], start: str, end: str) -> list[tuple[Link, bool]]:
    """The only way through the tree from ``start`` to ``end``."""
    stack: list[tuple[str, list[tuple[Link, bool]]]] = [(start, [])]
    seen = {start}
    while stack:
        node, way = stack.pop()
        if node == end:
            return way
        for neighbour, link in tree.get(node, ()):
            if neighbour not in seen:
                seen.add(neighbour)
                stack.append((neighbour, [*way, (link, link.start == node)]))
    return []


def _pressures(job: Job, cases: list[Case]) -> tuple[Block, ...]:
    blocks: list[Block] = []
    for case in cases:
        solved, rows = job.solved(case), []
        for tag, node in case.system.nodes.items():
            elevation = node.elevation
            if elevation is None or solved.heads[tag] != solved.heads[tag]:
                continue
            z = job.input(f"{tag}/z", elevation, "z", f"{tag}: elevation", case)
            key = f"{tag}/H@{case.id}"
            if key in job.ledger:  # a path of a pump ends here
                head = job.ledger[key]
            elif node.kind in (JUNCTION, PUMP_PORT):
                head = job.ledger.found(
                    key, solved.heads[tag], "H", f"{tag}: total head", "head", source="BERNOULLI",
                    locator="network solution", residual=solved.convergence.energy, case=case.id,
                )
            else:
                head = end_head(job, case, tag)
            pressure = job.ledger.apply(f"{tag}/p@{case.id}", grade.NODE_PRESSURE, case=case.id, H=head, z=z,
                                        title=f"{tag}: {grade.NODE_PRESSURE.title.lower()}", rho=job.density(case),
                                        g=job.gravity())
            rows.append(Row((tag, node.description or node.kind, Ref(z.id), Ref(head.id), Ref(pressure.id))))
        columns = (Column("Node", width=1.6), Column("What it is", width=3.0), Column("Elevation", "z", "elevation"),
                   Column("Total head", "H", "head"), Column("Pressure", "p", "gauge_pressure"))
        blocks.append(Table(f"Nodes, case {case_label(case)}", columns, tuple(rows)))
    return (Prose("Pressures are those of liquid brought to rest: the velocity head is not deducted.", "note"), *blocks)
