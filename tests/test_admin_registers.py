"""Registers of inputs, assumptions and open items; cautions and exclusions."""

from __future__ import annotations

import re
from collections import Counter
from dataclasses import replace

import pytest
from sheet_reading import ADMIN, blocks, changed, refs, section, sheet, table, texts

from calcpack.errors import LedgerError
from calcpack.ledger.entry import ASSUMED, CHECK, MET
from calcpack.report.cells import Desk
from calcpack.report.numbering import number
from calcpack.report.pages import render_sheet
from calcpack.sheets import caution_words, registers
from calcpack.sheets.content import Prose, Ref
from calcpack.values import CONFIRMED, UNCONFIRMED, Value


@pytest.fixture(scope="module")
def flooded(tmp_path_factory):
    """The pump two metres lower, hot water that is flagged, a case with another length."""
    return changed(
        tmp_path_factory.mktemp("flooded"),
        ("pumps.yaml", "shaft_elevation: {value: 9.20 m", "shaft_elevation: {value: 7.20 m"),
        ("system.yaml", "name: clear settled water", "name: settled {clear} water\n  flags: [potable, fibrous]"),
        ("system.yaml", "warm: 20 degC", "warm: 70 degC"),
        ("cases.yaml", "  pumps: {P-101: 1}\n\n3:",
         "  pumps: {P-101: 1}\n  set: {system.lines.L-103.length: 700 m}\n\n3:"),
    )


def test_sheets_of_a_changed_project_can_be_set(flooded):
    numbering = number(flooded.content, flooded.job.ledger)
    assert numbering.homeless(flooded.job.ledger) == []
    for key in ADMIN:
        render_sheet(sheet(flooded, key), Desk(flooded.job.ledger, numbering, {}))


def test_an_override_is_shown_with_its_case(flooded):
    other = table(flooded, "cases", "Inputs that a case sets differently").rows
    assert [(row.cells[1], flooded.job.ledger[row.cells[2].id].written) for row in other] == [
        ("system.lines.L-103.length", "700 m")
    ]


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
    counted = round(larkmere.job.ledger["count/criteria"].value)
    with pytest.raises(LedgerError, match=f"counted {counted}, now {counted + 1}"):
        registers.count(larkmere.job, "count/criteria", counted + 1, "")


def test_unseen_sources_are_marked(larkmere):
    caption = "Catalog rows, property values and constants"
    rows = {row.cells[1]: row for row in table(larkmere, "registers", caption).rows}
    assert rows["fittings/eps_T"].cells[3] == (Ref("fittings/eps_T", "source"), "(to confirm)")
    assert rows["basis/Re_laminar"].cells[3] == Ref("basis/Re_laminar", "source")


def test_braces_of_the_user_name_no_entry(flooded):
    assert registers.plain("a {b} c") == "a (b) c"
    assert any("settled (clear) water" in text for text in texts(flooded, "cautions", "cautions-raised"))


def test_value_list_needs_one_kind_and_every_item():
    values = [Value(float(number), "flow", "", path=f"a.{number}", status=CONFIRMED) for number in range(3)]
    assert registers._is_list("a.*", values)
    assert not registers._is_list("a.*", values[1:])
    assert not registers._is_list("a.*", [*values[:2], replace(values[2], kind="head")])


# cautions


def test_cautions_of_the_demo(larkmere):
    raised = texts(larkmere, "cautions", "cautions-raised")
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
    raised = texts(flooded, "cautions", "cautions-raised")
    assert not [text for text in raised if text.startswith("Suction below atmospheric")]
    assert [text for text in raised if text.startswith("Hot liquid") and "{liquid/T@warm}" in text]
    assert [text for text in raised if text.startswith("Drinking water") and "potable" in text]
    assert [text for text in raised if text.startswith("Hazard of the liquid") and "fibrous" in text]


def test_every_caution_carries_a_number(larkmere, flooded):
    for outcome in (larkmere, flooded):
        for text in texts(outcome, "cautions", "cautions-raised"):
            assert re.search(r"\{[^{}]+\}|\d", text), text


def test_every_unmet_criterion_raises_a_caution(larkmere):
    raised = " ".join(texts(larkmere, "cautions", "cautions-raised"))
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
