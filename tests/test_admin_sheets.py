"""The sheets around the calculation: verdict, basis, registers, cases, cautions, schedules, references, record."""

from __future__ import annotations

import re
import shutil
from collections import Counter
from dataclasses import replace
from pathlib import Path

import pytest
from builders import case, check_valve, line, outlet, project, pump, system, tank

from calcpack import build, hydraulics, sheets
from calcpack.catalog.sources import load_sources
from calcpack.digits import DEFAULT_DIGITS
from calcpack.errors import LedgerError
from calcpack.formulas import FORMULAS, pipe_flow
from calcpack.hydraulics.curves import pump_curves
from calcpack.ledger import Ledger
from calcpack.ledger.entry import ASSUMED, CHECK, MET, MET_WITH_WARNING, REFER
from calcpack.ledger.handcheck import TOLERANCE
from calcpack.report.cells import Desk
from calcpack.report.numbering import number
from calcpack.report.pages import render_sheet
from calcpack.sheets import appendix, caution_words, record, references, registers
from calcpack.sheets.content import Derivation, Facts, Listing, Prose, Ref, Table, Verdicts
from calcpack.sheets.job import Job
from calcpack.sheets.verdict import verdict_counts
from calcpack.values import CONFIRMED, UNCONFIRMED, Value

LARKMERE = Path(__file__).parent.parent / "projects" / "larkmere-transfer"
ADMIN = ("verdict", "basis", "registers", "cases", "cautions", "schedules", "references", "appendix", "record")
PLACEHOLDER = re.compile(r"\{[^{}]+\}")


def sheet(outcome, key):
    return next(one for one in outcome.content if one.key == key)


def section(outcome, key, section_id):
    return next(one for one in sheet(outcome, key).sections if one.id == section_id)


def blocks(outcome, key, kind):
    return [block for one in sheet(outcome, key).sections for block in one.blocks if isinstance(block, kind)]


def table(outcome, key, caption):
    return next(block for block in blocks(outcome, key, Table) if block.caption == caption)


def refs(row):
    cells = [cell if isinstance(cell, tuple) else (cell,) for cell in row.cells]
    return [part for cell in cells for part in cell if isinstance(part, Ref)]


def texts(outcome, section_id):
    return [block.text for block in section(outcome, "cautions", section_id).blocks if isinstance(block, Prose)]


def changed(folder, *changes):
    """The demo with texts of its files replaced, computed anew."""
    copy = folder / "project"
    shutil.copytree(LARKMERE, copy, ignore=shutil.ignore_patterns("build"))
    for name, old, new in changes:
        text = (copy / name).read_text()
        assert old in text
        (copy / name).write_text(text.replace(old, new))
    return build.check(copy, lambda step: None)


@pytest.fixture(scope="module")
def flooded(tmp_path_factory):
    """The pump two metres lower, hot water that is flagged, a case with another length, an input that nothing uses."""
    return changed(
        tmp_path_factory.mktemp("flooded"),
        ("pumps.yaml", "shaft_elevation: {value: 9.20 m", "shaft_elevation: {value: 7.20 m"),
        ("system.yaml", "name: clear settled water", "name: settled {clear} water\n  flags: [potable, fibrous]"),
        ("system.yaml", "warm: 20 degC", "warm: 70 degC"),
        ("cases.yaml", "  pumps: {P-101: 1}\n\n3:",
         "  pumps: {P-101: 1}\n  set: {system.lines.L-103.length: 700 m}\n\n3:"),
    )


# every entry has a place on paper


def test_every_entry_is_printed(larkmere):
    ledger = {entry.id for entry in larkmere.job.ledger}
    assert ledger == record.printed(larkmere.content)
    without = record.printed(one for one in larkmere.content if one.key != "record")
    assert ledger - without, "the record would have nothing to print"


def test_every_formula_is_written_out_once(larkmere):
    derived = {larkmere.job.ledger[entry_id].formula for one in larkmere.content for part in one.sections
               for block in part.blocks if isinstance(block, Derivation) for entry_id in block.ids}
    assert {entry.formula for entry in larkmere.job.ledger if entry.formula} <= derived


def test_sentences_and_sources_are_no_home():
    shows = (Ref("a", "title"), Ref("b", "source"), Ref("c", "where"), Ref("d", "used"), Ref("e"), Ref("f", "quantity"))
    made = record.Sheet("x", "X", (record.Section("x", "X", (
        Prose("{g} is mentioned"), Facts((("name", shows),)), Verdicts(("h",)), Derivation(("i",)),
    )),))
    assert record.printed([made]) == {"e", "f", "h", "i"}


@pytest.mark.parametrize("fixture", ["larkmere", "larkmere_us", "flooded"])
def test_sheets_can_be_set(fixture, request):
    outcome = request.getfixturevalue(fixture)
    numbering = number(outcome.content, outcome.job.ledger)
    assert numbering.homeless(outcome.job.ledger) == []
    for key in ADMIN:
        assert len(render_sheet(sheet(outcome, key), Desk(outcome.job.ledger, numbering, {}))) > 1000


# verdict


def test_verdict_groups_hold_every_criterion_once(larkmere):
    ledger = larkmere.job.ledger
    shown = [entry_id for block in blocks(larkmere, "verdict", Verdicts) for entry_id in block.ids]
    shown += [row.cells[0].id for row in table(larkmere, "verdict", "Criteria met, with the governing case").rows]
    assert sorted(shown) == sorted(entry.id for entry in ledger.of_origin(CHECK))
    order = [ledger[entry_id].verdict for entry_id in shown]
    assert list(dict.fromkeys(order)) == [REFER, MET_WITH_WARNING, MET]


def test_verdict_counts(larkmere):
    counted = {verdict: entry.value for verdict, entry in verdict_counts(larkmere.job).items()}
    assert counted == Counter(entry.verdict for entry in larkmere.job.ledger.of_origin(CHECK))
    assert larkmere.job.ledger["count/criteria"].value == sum(counted.values())


def test_key_results_name_the_worst_case(larkmere):
    caption = "P-101: normal case, and the worst of all cases"
    rows = {row.cells[0]: row for row in table(larkmere, "verdict", caption).rows}
    assert [ref.id for ref in refs(rows["NPSHA / NPSHR"])] == ["P-101/r_N@1", "P-101/r_N@4"]
    assert [ref.id for ref in refs(rows["Shaft power of one unit"])] == ["P-101/P_s@1", "P-101/P_s@3"]
    assert rows["Suction pressure"].cells[-1].startswith("4 ")


# basis


def test_basis_quotes_the_constants_of_the_program(larkmere):
    ledger = larkmere.job.ledger
    assert ledger["basis/digits"].value == DEFAULT_DIGITS
    assert ledger["basis/hand_check"].value == TOLERANCE
    assert ledger["basis/Re_laminar"].value == pipe_flow.LAMINAR_LIMIT
    assert ledger["basis/Re_turbulent"].value == pipe_flow.TURBULENT_LIMIT


@pytest.mark.parametrize("part", ["basis-method", "basis-conventions", "basis-validity"])
def test_basis_has_no_number_of_its_own(larkmere, part):
    for block in section(larkmere, "basis", part).blocks:
        words = PLACEHOLDER.sub("", block.text).replace("P-101", "")
        assert not re.search(r"\d", words), words


# registers


def test_every_input_is_in_the_register(larkmere):
    inputs = [value for value in larkmere.job.project.values if value.status in (CONFIRMED, UNCONFIRMED)]
    written = Counter(ref.id for block in section(larkmere, "registers", "register-inputs").blocks
                      for row in block.rows for ref in refs(row) if ref.show == "written")
    booked = [larkmere.job.ledger[entry_id] for entry_id in written]
    assert sorted(entry.path for entry in booked) == sorted(value.path for value in inputs)
    assert set(written.values()) == {1}
    assert all(entry.written == next(value.text for value in inputs if value.path == entry.path) for entry in booked)


def test_lists_stand_together(larkmere):
    rows = {row.cells[0]: row for row in table(larkmere, "registers", "Inputs of pumps.yaml").rows}
    flows = [ref.id for ref in refs(rows["P-101.curve.points.*.0"]) if ref.show == "written"]
    assert flows == [f"P-101/Q_{point}" for point in range(1, 9)]
    assert len([row for row in rows if "curve" in row]) == 4


def test_inputs_without_use_are_listed_and_booked(larkmere):
    rows = {row.cells[0]: row for row in table(larkmere, "registers", "Inputs of system.yaml").rows}
    row = rows["lines.L-101.profile.*.elevation"]
    assert row.cells[2] == "not used"
    assert larkmere.job.ledger["input/system.lines.L-101.profile.1.elevation"].written == "9.40 m"


def test_tolerance_prints_no_more_digits_than_it_needs(larkmere):
    entry = larkmere.job.ledger["input/system.lines.L-101.length/tolerance"]
    assert (entry.value, entry.digits) == (0.3, 1)


def test_open_items(larkmere):
    job = larkmere.job
    items = registers.open_items(job)
    unconfirmed = {item.id for item in items if item.kind == registers.UNCONFIRMED_INPUT}
    assert unconfirmed == {
        "project.economy.tariff", "pumps.P-101.motor.efficiency", "system.equipment.ST-101.states.dirty.head",
        *(f"system.lines.L-10{number}.roughness.aged" for number in (1, 2, 3)),
    }
    assumed = [item for item in items if item.kind == registers.PROGRAM_ASSUMPTION]
    assert [item.entry for item in assumed] == [entry.id for entry in job.ledger.of_origin(ASSUMED)]
    assert assumed[0].id == "PA1"
    assert [item.id for item in items if item.kind == registers.PROJECT_ASSUMPTION] == ["A1", "A2"]
    assert len({item.id for item in items}) == len(items)
    counts = {kind: entry.value for kind, entry in registers.open_counts(job).items()}
    assert counts == {kind: sum(item.kind == kind for item in items) for kind in registers.KINDS_OF_ITEM}


def test_a_count_must_not_change_after_it_was_printed(larkmere):
    with pytest.raises(LedgerError, match="counted 30, now 31"):
        registers.count(larkmere.job, "count/criteria", 31, "")


def test_unseen_sources_are_marked(larkmere):
    caption = "Catalog rows, property values and constants"
    rows = {row.cells[1]: row for row in table(larkmere, "registers", caption).rows}
    assert rows["fittings/eps_T"].cells[3] == (Ref("fittings/eps_T", "source"), "(to confirm)")
    assert rows["basis/Re_laminar"].cells[3] == Ref("basis/Re_laminar", "source")


def test_braces_of_the_user_name_no_entry(flooded):
    assert registers.plain("a {b} c") == "a (b) c"
    assert any("settled (clear) water" in text for text in texts(flooded, "cautions-raised"))


# cases


def test_cases_show_levels_results_and_overrides(larkmere, flooded):
    rows = table(larkmere, "cases", "Cases: levels, states and units running").rows
    assert [ref.id for ref in refs(rows[1])] == ["TK-101/z@min", "liquid/T@normal", "P-101/i@2"]
    duty = table(larkmere, "cases", "P-101: duty and power").rows
    assert [refs(row)[0].id for row in duty] == [f"P-101/Q@{case}" for case in "12345"]
    other = table(flooded, "cases", "Inputs that a case sets differently").rows
    assert [(row.cells[1], flooded.job.ledger[row.cells[2].id].written) for row in other] == [
        ("system.lines.L-103.length", "700 m")
    ]


def test_every_criterion_with_a_margin_has_its_case(larkmere):
    ledger = larkmere.job.ledger
    rows = table(larkmere, "cases", "Cases and the criteria that each governs").rows
    shown = {ref.id: row.cells[0] for row in rows for ref in refs(row) if ref.show == "title"}
    with_margin = [check for check in ledger.of_origin(CHECK) if check.operands]
    assert sorted(shown) == sorted(check.id for check in with_margin)
    assert all(shown[check.id].startswith(check.case or "the same") for check in with_margin)
    assert [ledger[refs(row)[0].id].value for row in rows] == [len(refs(row)) - 1 for row in rows]


# cautions


def test_cautions_of_the_demo(larkmere):
    raised = texts(larkmere, "cautions-raised")
    assert [text for text in raised if text.startswith("Suction below") and "{P-101/p_s@4} in case 4" in text]
    assert [text for text in raised if text.startswith("Check valve not fully open") and "{L-102/V@2}" in text]
    assert [text for text in raised if text.startswith("Pressure surge") and "{L-103/p_u@3}" in text]
    assert [text for text in raised if text.startswith("Stored energy") and "{TK-102/z}" in text]
    assert [text for text in raised if text.startswith("Trapped liquid") and "{P-101/count-valves}" in text]
    assert [text for text in raised if text.startswith("Open liquid surface") and "{TK-101/z@max}" in text]
    assert [text for text in raised if text.startswith("Freezing") and "{liquid/T@cold}" in text]
    assert larkmere.job.ledger["P-101/count-valves"].value == 4  # two gates, a check valve, a butterfly valve
    assert not [text for text in raised if text.startswith(("Hot liquid", "Drinking water", "Hazard of the liquid"))]


def test_cautions_follow_the_results(flooded):
    raised = texts(flooded, "cautions-raised")
    assert not [text for text in raised if text.startswith("Suction below atmospheric")]
    assert [text for text in raised if text.startswith("Hot liquid") and "{liquid/T@warm}" in text]
    assert [text for text in raised if text.startswith("Drinking water") and "potable" in text]
    assert [text for text in raised if text.startswith("Hazard of the liquid") and "fibrous" in text]


def test_every_caution_carries_a_number(larkmere, flooded):
    for outcome in (larkmere, flooded):
        for text in texts(outcome, "cautions-raised"):
            assert re.search(r"\{[^{}]+\}|\d", text), text


def test_every_unmet_criterion_raises_a_caution(larkmere):
    raised = " ".join(texts(larkmere, "cautions-raised"))
    for check in larkmere.job.ledger.of_origin(CHECK):
        told = check.title in raised or check.id == "check/suction-gauge/P-101"  # told case by case
        assert told == (check.verdict != MET), check.id


def test_exclusions_name_the_document_that_covers_each(larkmere):
    rows = {row.cells[0]: row for row in
            table(larkmere, "cautions", "Topics outside this calculation, and the document that covers each").rows}
    assert set(rows) == {topic for topic, _ in caution_words.EXCLUSIONS}
    assert rows["supports"].cells[2] == rows["thrust"].cells[2] == "LK-CAL-201 (invented) (E2)"
    assert (rows["noise"].cells[2], rows["noise"].mark) == ("none named", "open")
    own = table(larkmere, "cautions", "Exclusions stated by the project").rows
    assert [row.cells[0] for row in own] == ["E1", "E2", "E3"]


def test_wording_promises_nothing(larkmere, flooded):
    for outcome in (larkmere, flooded):
        for key in ("verdict", "basis", "cautions"):
            for block in blocks(outcome, key, Prose):
                assert not re.search(r"\b(safe|safely|approved|compliant|guaranteed?)\b", block.text, re.I), block.text


# schedules


def test_schedules_list_everything(larkmere):
    system = larkmere.job.project.system
    first = lambda caption: [row.cells[0] for row in table(larkmere, "schedules", caption).rows]  # noqa: E731
    assert first("Line list") == first("Lines: governing case and range of velocity") == list(system.lines)
    assert first("Nodes, elevations and levels") == list(system.nodes)
    assert first("Valves and fittings by line") == [tag for tag, line in system.lines.items() for _ in line.fittings]
    assert first("Equipment: head lost by state") == ["ST-101", "ST-101"]


def test_line_schedule_takes_the_case_of_the_greatest_loss(larkmere):
    ledger = larkmere.job.ledger
    for row in table(larkmere, "schedules", "Lines: governing case and range of velocity").rows:
        shown = [ledger[ref.id] for ref in refs(row)]
        tag = row.cells[0]
        assert shown[3].value == max(ledger[f"{tag}/h_L@{case}"].value for case in "12345")
        assert {entry.case for entry in shown[:4]} == {shown[3].case}
        assert shown[4].value == min(ledger[f"{tag}/V@{case}"].value for case in "12345")


# references


def test_references_list_what_is_cited(larkmere):
    rows = table(larkmere, "references", "Sources cited in this package").rows
    cited = {entry.citation.key for entry in larkmere.job.ledger if entry.citation.key}
    assert {row.cells[0] for row in rows} == cited <= set(load_sources())
    assert [row.cells[1] for row in rows] == [f"R{number}" for number in range(1, len(rows) + 1)]
    standing = {row.cells[0]: row.cells[4] for row in rows}
    assert registers.TO_CONFIRM in standing["TP410"] and "text seen" in standing["HI-DATABOOK"]


def test_formulas_are_counted(larkmere):
    ledger = larkmere.job.ledger
    used = Counter(entry.formula for entry in ledger if entry.formula)
    rows = table(larkmere, "references", "Formulas used and how often").rows
    assert {row.cells[0]: ledger[row.cells[4].id].value for row in rows} == used


def test_ranges_in_words():
    words = [references.range_words(FORMULAS[key], FORMULAS[key].valid[0], "SI") for key in
             ("pipe.friction_laminar", "pipe.friction_colebrook", "liquid.atmosphere")]
    assert [text.replace("\u2009", "").replace("\u2212", "-") for text in words] == [
        "Re up to 2000", "Re from 4000", "z from -500 m up to 11000 m"
    ]


def test_documents_count_their_inputs(larkmere):
    job = larkmere.job
    rows = {row.cells[0]: row for row in table(larkmere, "references", "Documents of the project").rows}
    citing = [value for value in job.project.values
              if "LK-STR-101" in value.source and value.status in (CONFIRMED, UNCONFIRMED)]
    assert job.ledger[rows["LK-STR-101"].cells[4].id].value == len(citing) == 3
    others = [row.cells[0] for row in table(larkmere, "references", "Other sources that inputs name").rows]
    assert "judgement: steel after about 20 years" in others


# appendix


def test_appendix_lists_the_files_as_read(larkmere):
    listed = [(block.caption, block.text) for block in blocks(larkmere, "appendix", Listing)]
    assert listed == [(f"{file.name}, SHA-256 {file.sha256}", file.text) for file in larkmere.job.project.files]


def test_fingerprint_follows_inputs_and_program(larkmere):
    job, first = larkmere.job, appendix.fingerprint(larkmere.job)
    files = job.project.files
    other_file = replace(job.project, files=(replace(files[0], sha256="0" * 64), *files[1:]))
    assert len({first, appendix.fingerprint(replace(job, project=other_file)),
                appendix.fingerprint(replace(job, program={**job.program, "numpy": "0"}))}) == 3


def test_value_list_needs_one_kind_and_every_item():
    values = [Value(float(number), "flow", "", path=f"a.{number}", status=CONFIRMED) for number in range(3)]
    assert registers._is_list("a.*", values)
    assert not registers._is_list("a.*", values[1:])
    assert not registers._is_list("a.*", [*values[:2], replace(values[2], kind="head")])


# systems without pump, without duty, with a case in which nothing runs


def water(*, lift: float, running: tuple[int, ...]):
    """A job with all sheets filled: one pump from a tank to an outlet, one case for each number of units running."""
    made = system(
        [tank("A", 10.0), outlet("B", 10.0 + lift)],
        [line("L1", "A", "P.suction", length=10.0, bore=0.15, roughness=4e-5, k=2.0),
         line("L2", "P.discharge", "B", length=300.0, bore=0.1, roughness=4e-5, k=5.0, fittings=[check_valve()])],
        [pump("P", [0, 0.01, 0.02, 0.03], [60, 58, 50, 35])],
    )  # fmt: skip
    return filled(project(*(case(str(number), made, running=number) for number in running)))


def filled(model):
    """The job and sheets of a model."""
    fits = {tag: pump_curves(item) for tag, item in model.system.pumps.items()}
    job = Job(model, hydraulics.solve(model), Ledger(model.units), fits)
    return job, sheets.fill(job)


def raised(content):
    cautions = next(one for one in content if one.key == "cautions")
    return [block.text for part in cautions.sections if part.id == "cautions-raised" for block in part.blocks]


def test_a_gravity_line_has_all_admin_sheets():
    made = system([tank("A", 10.0), tank("B", 5.0)], [line("L1", "A", "B", length=100.0, bore=0.1, k=2.0)])
    job, content = filled(project(case("1", made)))
    assert {entry.id for entry in job.ledger} == record.printed(content)
    assert number(content, job.ledger).homeless(job.ledger) == []


def test_a_pump_without_duty_is_a_caution_with_the_words_of_the_solver():
    job, content = water(lift=80.0, running=(1,))
    finding = job.solution.cases["1"].findings[0]
    told = [text for text in raised(content) if text.startswith("Pump without flow")]
    assert len(told) == 1 and finding.text.rstrip(".") in told[0] and "case 1" in told[0]


def test_a_case_in_which_nothing_runs_shows_no_duty():
    job, content = water(lift=30.0, running=(1, 0))
    cases = next(one for one in content if one.key == "cases")
    results = next(part for part in cases.sections if part.id == "cases-P").blocks[0].rows
    assert refs(results[0])[0].id == "P/Q@1"
    assert refs(results[1]) == []
    assert job.ledger["P/i@0"].value == 0
