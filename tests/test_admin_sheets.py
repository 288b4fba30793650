"""The sheets around the calculation: verdict, basis, cases, schedules, references, appendix, record."""

from __future__ import annotations

import re
from collections import Counter
from dataclasses import replace

import pytest
from builders import case, check_valve, line, outlet, project, pump, system, tank
from sheet_reading import ADMIN, blocks, filled, refs, section, sheet, table, texts

from calcpack.catalog.sources import load_sources
from calcpack.digits import DEFAULT_DIGITS
from calcpack.formulas import FORMULAS, pipe_flow
from calcpack.ledger.entry import CHECK, MET, MET_WITH_WARNING, REFER
from calcpack.ledger.handcheck import TOLERANCE
from calcpack.report.cells import Desk
from calcpack.report.numbering import number
from calcpack.report.pages import render_sheet
from calcpack.sheets import appendix, record, references, registers
from calcpack.sheets.content import Derivation, Facts, Listing, Prose, Ref, Section, Sheet, Verdicts
from calcpack.sheets.verdict import verdict_counts
from calcpack.values import CONFIRMED, UNCONFIRMED

PLACEHOLDER = re.compile(r"\{[^{}]+\}")


# every entry has a place on paper


def test_every_entry_is_printed(larkmere):
    ledger = {entry.id for entry in larkmere.job.ledger}
    assert ledger == record.printed(larkmere.content)
    without = record.printed(one for one in larkmere.content if one.key != "record")
    assert ledger - without, "the record would have nothing to print"


def test_every_formula_is_written_out_once(larkmere):
    """By its text: a margin is declared for each kind of quantity with the same text."""
    derived = {text_of(larkmere.job.ledger[entry_id]) for one in larkmere.content for part in one.sections
               for block in part.blocks if isinstance(block, Derivation) for entry_id in block.ids}
    assert {text_of(entry) for entry in larkmere.job.ledger} <= {"", *derived}


def text_of(entry):
    return FORMULAS[entry.formula].equation.text if entry.formula else ""


def test_sentences_and_sources_are_no_home():
    shows = (Ref("a", "title"), Ref("b", "source"), Ref("c", "where"), Ref("d", "used"), Ref("e"), Ref("f", "quantity"))
    made = Sheet("x", "X", (Section("x", "X", (
        Prose("{g} is mentioned"), Facts((("name", shows),)), Verdicts(("h",)), Derivation(("i",)),
    )),))
    assert record.printed([made]) == {"e", "f", "h", "i"}


@pytest.mark.parametrize("fixture", ["larkmere", "larkmere_us"])
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


# cases


def test_cases_show_levels_and_results(larkmere):
    rows = table(larkmere, "cases", "Cases: levels, states and units running").rows
    assert [ref.id for ref in refs(rows[1])] == ["TK-101/z@min", "liquid/T@normal", "P-101/i@2"]
    duty = table(larkmere, "cases", "P-101: duty and power").rows
    assert [refs(row)[0].id for row in duty] == [f"P-101/Q@{case}" for case in "12345"]


def test_every_criterion_with_a_margin_has_its_case(larkmere):
    ledger = larkmere.job.ledger
    rows = table(larkmere, "cases", "Cases and the criteria that each governs").rows
    shown = {ref.id: row.cells[0] for row in rows for ref in refs(row) if ref.show == "title"}
    with_margin = [check for check in ledger.of_origin(CHECK) if check.operands]
    assert sorted(shown) == sorted(check.id for check in with_margin)
    assert all(shown[check.id].startswith(check.case or "the same") for check in with_margin)
    assert [ledger[refs(row)[0].id].value for row in rows] == [len(refs(row)) - 1 for row in rows]


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
    used = Counter(text_of(entry) for entry in ledger if entry.formula)
    rows = table(larkmere, "references", "Formulas used and how often").rows
    first = {row.cells[5].id: ledger[row.cells[4].id].value for row in rows}
    assert {text_of(ledger[entry_id]): value for entry_id, value in first.items()} == used
    assert {row.cells[0] for row in rows} >= {"pipe.velocity", "criteria.margin_below"}


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


# systems without pump, without duty, with a case in which nothing runs


def water(*, lift: float, running: tuple[int, ...]):
    """One pump from a tank to an outlet, one case for each number of units running."""
    made = system(
        [tank("A", 10.0), outlet("B", 10.0 + lift)],
        [line("L1", "A", "P.suction", length=10.0, bore=0.15, roughness=4e-5, k=2.0),
         line("L2", "P.discharge", "B", length=300.0, bore=0.1, roughness=4e-5, k=5.0, fittings=[check_valve()])],
        [pump("P", [0, 0.01, 0.02, 0.03], [60, 58, 50, 35])],
    )  # fmt: skip
    return filled(project(*(case(str(number), made, running=number) for number in running)))


def test_a_gravity_line_has_all_admin_sheets():
    made = system([tank("A", 10.0), tank("B", 5.0)], [line("L1", "A", "B", length=100.0, bore=0.1, k=2.0)])
    outcome = filled(project(case("1", made)))
    assert {entry.id for entry in outcome.job.ledger} == record.printed(outcome.content)
    assert number(outcome.content, outcome.job.ledger).homeless(outcome.job.ledger) == []


def test_a_pump_without_duty_is_told_in_the_words_of_the_solver():
    outcome = water(lift=80.0, running=(1,))
    finding = next(one for one in outcome.job.solution.cases["1"].findings if one.tag == "P")
    told = [text for text in texts(outcome, "cautions", "cautions-raised") if text.startswith("Pump without flow")]
    assert len(told) == 1 and finding.text.rstrip(".") in told[0] and "case 1" in told[0]


def test_a_case_without_result_is_no_answer():
    answer = texts(water(lift=80.0, running=(1,)), "verdict", "verdict-question")[1]
    assert "{count/void}" in answer and "not complete" in answer and "Every criterion is decided" not in answer
    answer = texts(water(lift=30.0, running=(1,)), "verdict", "verdict-question")[1]
    assert "count/void" not in answer


def test_a_case_in_which_nothing_runs_shows_no_duty():
    outcome = water(lift=30.0, running=(1, 0))
    rows = section(outcome, "cases", "cases-P").blocks[0].rows
    assert refs(rows[0])[0].id == "P/Q@1"
    assert refs(rows[1]) == []
    assert outcome.job.ledger["P/i@0"].value == 0
