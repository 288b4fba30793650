"""What a terminal shows: tables, findings, criteria and open items; progress, bold heads and Ctrl-C."""

from __future__ import annotations

import os
import re
import signal
import subprocess
import sys

import pytest
from conftest import ROOT, edit
from system_projects import Sketch, junction, line, outlet, pump, tank, water

from calcpack.__main__ import DONE, NOT_MET, REFUSED, STOPPED, main
from calcpack.ledger.entry import CHECK
from calcpack.terminal import WIDTH, report

COLUMNS = {"flow": "m3/h", "head": "m", "efficiency": "1", "npshr": "m"}
POINTS = [[0, 50, 0, 1], [50, 48, 0.6, 1.5], [100, 42, 0.75, 2.5], [150, 30, 0.65, 4]]
CHECK_VALVE = [{"type": "swing_check_valve_angled"}]


def pipe(start: str, end: str, length: str, bore: str = "150 mm", **more) -> dict:
    return line(start, end, bore, length, roughness="0.1 mm", **more)


LOOP = Sketch(
    water("15 degC"),
    {"TK-1": tank("50 m"), "J-1": junction("5 m"), "J-2": junction("4 m", "20 m3/h"), "J-3": junction("3 m", "9 m3/h")},
    {
        "L-1": pipe("TK-1", "J-1", "500 m", k={"entrance": 0.5}), "L-2": pipe("J-1", "J-2", "300 m"),
        "L-3": pipe("J-2", "J-3", "300 m"), "L-4": pipe("J-3", "J-1", "300 m"),
    },
    cases={str(n): {"set": {"system.nodes.J-3.demand": f"{3 * n} m3/h"}} for n in range(1, 15)},
)
STATION = Sketch(
    water("15 degC"),
    {"TK-1": tank("2 m"), "J-1": junction("0 m"), "J-2": junction("1 m"), "O-1": outlet("25 m")},
    {
        "L-0": pipe("TK-1", "J-1", "5 m", "200 mm", k={"entrance": 0.5}),
        "L-1": pipe("J-1", "P-1.suction", "5 m"), "L-2": pipe("J-1", "P-2.suction", "5 m"),
        "L-3": pipe("P-1.discharge", "J-2", "5 m", fittings=CHECK_VALVE),
        "L-4": pipe("P-2.discharge", "J-2", "5 m", fittings=CHECK_VALVE),
        "L-5": pipe("J-2", "O-1", "800 m", "200 mm", k={"exit": 1}),
    },
    pumps={
        "P-1": pump(POINTS, COLUMNS, "100 m3/h", installed=3, duty=2, description="main pumps"),
        "P-2": pump(POINTS, COLUMNS, "100 m3/h"),
    },
    cases={
        "1": {}, "2": {"pumps": {"P-1": 1, "P-2": 0}},
        "3": {"pumps": {"P-1": 3, "P-2": 1}, "set": {"system.nodes.O-1.elevation": "70 m"}},
    },
)


@pytest.fixture(scope="module")
def loop(tmp_path_factory):
    return LOOP.computed(tmp_path_factory.mktemp("loop")).outcome.job


@pytest.fixture(scope="module")
def station(tmp_path_factory):
    return STATION.computed(tmp_path_factory.mktemp("station")).outcome.job


def blocks(job) -> dict[str, list[str]]:
    """Lines of the report by head, without their indent."""
    found = [block.splitlines() for block in re.split(r"\n\n(?! )", report(job, color=False))]
    return {lines[0]: [text[2:] for text in lines[1:]] for lines in found}


def columns(table: list[str]) -> list[list[str]]:
    return [re.split(r" {2,}", row.strip()) for row in table]


def test_every_pump_has_its_table(station):
    said = blocks(station)
    names, units, *rows = said["P-1  main pumps"]
    assert names.split()[:4] == ["case", "running", "flow", "one"] and units.split()[:2] == ["m³/h", "m³/h"]
    assert [row.split()[:2] for row in rows[:2]] == [["1", "2"], ["2", "1"]]
    both, each = (float(text) for text in rows[0].split()[2:4])
    assert both == pytest.approx(2 * each, rel=1e-3)
    assert both / 3600 == pytest.approx(station.solution.cases["1"].pumps["P-1"].flow, rel=1e-3)
    assert rows[2] == "case 3: no duty point"
    assert said["P-2"][-2:] == ["case 2: does not run", "case 3: no duty point"]
    assert "running" not in said["P-2"][0]


def test_the_flows_of_a_network_are_shown_with_their_signs(loop):
    table = blocks(loop)["flow of the lines, negative against the direction drawn"]
    shown: dict[tuple[str, str], float] = {}
    for part in "\n".join(table).split("\n\n"):
        names, units, *rows = columns(part.splitlines())
        assert names[0] == "line" and set(units) == {"m³/h"}
        for tag, *flows in rows:
            shown |= {(name.removeprefix("case "), tag): float(text.replace("−", "-"))
                      for name, text in zip(names[1:], flows, strict=True)}
    assert len(shown) == 14 * 4 and max(map(len, table)) <= WIDTH
    for (case, tag), flow in shown.items():
        solved = loop.solution.cases[case].lines[tag].flow
        assert flow / 3600 == pytest.approx(solved, rel=1e-3, abs=1e-9) and (flow < 0) == (solved < 0)
    assert min(shown.values()) < 0


def test_decimal_signs_stand_one_below_the_other(loop, larkmere):
    for job, head in ((loop, "flow of the lines, negative against the direction drawn"),
                      (larkmere.job, "P-101  settled-water transfer pumps P-101A and P-101B")):
        table = "\n".join(blocks(job)[head]).split("\n\n")[0].splitlines()
        points = [[match.start() for match in re.finditer(r"\.", row)] for row in table[2:]]
        assert len(points[0]) > 3 and all(row == points[0] for row in points)


def test_lines_that_are_shut_say_so(station):
    table = columns(blocks(station)["flow of the lines, negative against the direction drawn"])
    assert {row[0]: row[-1] for row in table[2:]}["L-3"] == "shut"


def test_one_path_shows_no_flows_of_lines(larkmere):
    assert not any(head.startswith("flow of the lines") for head in blocks(larkmere.job))


def test_findings_of_the_solution_are_told(station):
    findings = [f"case {case.id}: {one.text}" for case in station.cases for one in station.solved(case).findings]
    said = blocks(station)["findings of the solution"]
    assert len(findings) > 2 and said == [text.replace("\u00a0", " ") for text in findings]


def test_every_criterion_stands_once_worst_first(station):
    said = {head: lines for head, lines in blocks(station).items() if re.fullmatch(r"[a-z, ]+: \d+", head)}
    assert [head.rpartition(":")[0] for head in said] == [
        "criterion not met", "not checked", "criterion met, with a warning", "criterion met",
    ]
    checks = station.ledger.of_origin(CHECK)
    lines = [text for head in said for text in said[head]]
    assert len(lines) == len(checks) and all(any(text.startswith(f"{one.title}: ") for text in lines) for one in checks)
    assert all(int(head.rpartition(" ")[2]) == len(said[head]) for head in said)
    assert "; ".join(said) in report(station, color=False).splitlines()[-1]


def test_the_points_of_a_curve_are_one_open_item(station):
    head, lines = next((head, lines) for head, lines in blocks(station).items() if head.startswith("open items"))
    curves = [text for text in lines if ".curve.points" in text]
    assert [re.sub(r":\d+:", ":", text) for text in curves] == [
        "pumps.yaml: pumps.P-1.curve.points: the whole list, 4 items",
        "pumps.yaml: pumps.P-2.curve.points: the whole list, 4 items",
    ]
    inputs = [text for text in lines if re.match(r"\w+\.yaml:\d+: ", text)]
    assert int(re.search(r"(\d+) inputs not confirmed", head)[1]) == len(inputs) - len(curves) + 4 * len(curves)


def test_open_items_of_every_kind_are_listed(larkmere):
    head, lines = next((head, lines) for head, lines in blocks(larkmere.job).items() if head.startswith("open items"))
    counts = [int(count) for count in re.findall(r"\d+", head)]
    assert len(counts) == 3 and sum(counts) == len(lines)
    assert "pumps.yaml:21: pumps.P-101.motor.efficiency = 0.925" in lines
    assert "PA1: Acceleration of gravity = 9.80665 m/s²" in lines
    assert any(text.startswith("A1: The rising main ") for text in lines)


def on_a_terminal(*arguments: object, interrupt_after: str = "", **settings: str) -> tuple[int, str]:
    """Exit status and all that a terminal shows; Ctrl-C once it shows ``interrupt_after``."""
    pty = pytest.importorskip("pty")
    try:
        here, there = pty.openpty()
    except OSError as error:
        pytest.skip(f"this machine gives no terminal: {error}")
    process = subprocess.Popen(
        [sys.executable, "-m", "calcpack", *map(str, arguments)], cwd=ROOT, stdout=there, stderr=there,
        env={**os.environ, "TERM": "xterm", **settings},
    )
    os.close(there)
    shown, sent = b"", False
    while True:
        try:
            new = os.read(here, 4096)
        except OSError:  # the other end is closed
            break
        if not new:
            break
        shown += new
        if interrupt_after and not sent and interrupt_after.encode() in shown:
            process.send_signal(signal.SIGINT)
            sent = True
    os.close(here)
    return process.wait(), shown.decode().replace("\r\n", "\n")


def test_a_terminal_sees_progress_and_bold_heads(small, monkeypatch):
    monkeypatch.delenv("NO_COLOR", raising=False)
    status, shown = on_a_terminal("check", small)
    assert status in (DONE, NOT_MET)
    assert shown.startswith("  reading the project\n  solving 2 cases\n  filling the sheets\n")
    assert "\033[1mcases\033[0m\n" in shown
    _, plain = on_a_terminal("check", small, NO_COLOR="1")
    assert "\033" not in plain and plain == re.sub(r"\033\[\d*m", "", shown)


def test_ctrl_c_in_the_middle_of_the_pdf_leaves_nothing(small):
    status, shown = on_a_terminal("draft", small, interrupt_after="rendering")
    assert status == STOPPED
    assert shown.splitlines()[-1].endswith("calcpack: stopped") and "Traceback" not in shown
    assert not (small / "build").exists()


def test_an_interrupt_that_a_library_swallowed_stops_before_anything_is_written(small, capsys, monkeypatch):
    from calcpack.report import pdf

    def render(*_):
        try:
            os.kill(os.getpid(), signal.SIGINT)
        except KeyboardInterrupt:
            return pdf.Rendered(b"%PDF", 3)

    monkeypatch.setattr(pdf, "render", render)
    assert main(["draft", str(small)]) == STOPPED
    assert capsys.readouterr().err == "calcpack: stopped\n" and not (small / "build").exists()
    assert signal.getsignal(signal.SIGINT) is signal.default_int_handler


def test_control_characters_of_the_inputs_reach_no_terminal(small, capsys):
    edit(small, "cases.yaml", "title: normal level", r'title: "normal\e[31m level')
    edit(small, "cases.yaml", "level, new pipe", 'level, new pipe"')
    main(["check", str(small)])
    assert "normal?[31m level" in capsys.readouterr().out
    edit(small, "cases.yaml", "temperature: warm", r'temperature: "\e[31mwarm"')
    assert main(["check", str(small)]) == REFUSED
    assert "\033" not in capsys.readouterr().err
