"""The command line as a user meets it: exit status, what is printed where, and what stays untouched."""

from __future__ import annotations

import json
import os
import re
import shutil
import subprocess
import sys
from pathlib import Path

import pytest
from conftest import LARKMERE, ROOT, SMALL, edit

from calcpack.__main__ import DONE, NO_READER, NOT_MET, REFUSED, STOPPED, main
from calcpack.errors import RenderError

FILES = {"project.yaml", "system.yaml", "pumps.yaml", "cases.yaml"}


def line_of(folder: Path, file: str, text: str) -> int:
    return next(n for n, line in enumerate((folder / file).read_text(encoding="utf-8").splitlines(), 1) if text in line)


def run(*arguments: object, **settings: str) -> subprocess.CompletedProcess[str]:
    """The program in a process of its own."""
    return subprocess.run(
        [sys.executable, "-m", "calcpack", *map(str, arguments)], cwd=ROOT, env={**os.environ, **settings},
        capture_output=True, encoding="utf-8",
    )


# What is imported.


def imported(*arguments: object) -> set[str]:
    """Libraries that a command leaves in memory."""
    code = (
        "import sys\nfrom calcpack.__main__ import main\n"
        "try:\n    main(sys.argv[1:])\nexcept SystemExit:\n    pass\n"
        "print('modules', *{name.partition('.')[0] for name in sys.modules}, file=sys.stderr)"
    )
    made = subprocess.run([sys.executable, "-c", code, *map(str, arguments)], cwd=ROOT, capture_output=True, text=True)
    return set(re.search("^modules (.*)", made.stderr, re.MULTILINE)[1].split())


@pytest.mark.parametrize("arguments", [("--help",), ("check", "--help"), ("--version",), ("schema", "--bogus"), ()])
def test_help_waits_for_no_library(arguments):
    names = imported(*arguments)
    assert "calcpack" in names
    assert names.isdisjoint({"pydantic", "numpy", "scipy", "pint", "yaml", "jinja2", "weasyprint", "matplotlib"})


@pytest.mark.parametrize("broken", [False, True])
def test_check_waits_for_no_drawing_and_no_pdf(small, broken):
    if broken:
        edit(small, "cases.yaml", "temperature: warm", "temperature: wram")
    names = imported("check", small)
    assert "pydantic" in names
    assert names.isdisjoint({"jinja2", "weasyprint", "matplotlib", "fontTools"})


def test_draft_of_a_broken_project_waits_for_no_drawing_and_no_pdf(small):
    edit(small, "cases.yaml", "temperature: warm", "temperature: wram")
    assert imported("draft", small).isdisjoint({"jinja2", "weasyprint", "matplotlib", "fontTools"})


# Exit status and streams.


def test_without_a_command_the_help_is_shown(capsys):
    assert main([]) == REFUSED
    assert "COMMAND" in capsys.readouterr().err


@pytest.mark.parametrize("arguments", [["bogus"], ["check"], ["check", ".", "--jso"], ["schema", "extra"]])
def test_wrong_arguments_are_refused(arguments, capsys):
    with pytest.raises(SystemExit) as stop:
        main(arguments)
    assert stop.value.code == REFUSED
    assert "usage: calcpack" in capsys.readouterr().err


def test_check_of_the_demo(capsys):
    assert main(["check", str(LARKMERE)]) == DONE
    out, err = capsys.readouterr()
    assert err == ""
    assert "\033" not in out
    assert re.search(r"^  1 +101\.76 +43\.66 +0\.7697 +15\.71 ", out, re.MULTILINE)


def test_status_says_that_a_criterion_is_not_met(small, capsys):
    edit(small, "project.yaml", "flow: 40 m3/h", "flow: 400 m3/h")
    assert main(["check", str(small)]) == NOT_MET
    out = capsys.readouterr().out
    assert re.search(r"^criterion not met: \d\n  P-01: ", out, re.MULTILINE)
    assert out.splitlines()[-1].startswith("criterion not met: ")


def test_json_and_text_agree_about_the_status(small, capsys):
    edit(small, "project.yaml", "flow: 40 m3/h", "flow: 400 m3/h")
    assert main(["check", "--json", str(small)]) == NOT_MET
    checks = json.loads(capsys.readouterr().out)["checks"]
    assert "criterion not met" in {check["verdict"] for check in checks}


def test_every_mistake_is_a_line_and_the_last_line_counts_them(small, capsys):
    edit(small, "cases.yaml", "temperature: warm", "temperature: wram")
    edit(small, "system.yaml", "length: 685 m", "length: 685")
    assert main(["check", str(small)]) == REFUSED
    out, err = capsys.readouterr()
    assert out == ""
    first, second, last = err.splitlines()
    at = line_of(small, "cases.yaml", "wram")
    assert first.startswith(f"cases.yaml:{at}: case low, temperature: no temperature is named 'wram'; did you mean")
    assert second.startswith(f"system.yaml:{line_of(small, 'system.yaml', '685')}: line L-03, length: ")
    assert last == "calcpack: 2 problems; nothing was written"


def test_mistakes_as_json(small, capsys):
    edit(small, "cases.yaml", "temperature: warm", "temperature: wram")
    assert main(["draft", str(small), "--json"]) == REFUSED
    out, err = capsys.readouterr()
    (problem,) = json.loads(out)["problems"]
    assert err == "" and set(problem) == {"file", "line", "where", "text", "hint"}
    assert (problem["file"], problem["line"]) == ("cases.yaml", line_of(small, "cases.yaml", "wram"))


def test_schemas_are_printed(capsys):
    assert main(["schema"]) == DONE
    assert set(json.loads(capsys.readouterr().out)["$defs"]) >= FILES
    assert main(["schema", "--results"]) == DONE
    assert {"cases", "checks", "entries"} <= set(json.loads(capsys.readouterr().out)["properties"])


def test_a_reader_that_goes_away_ends_it_quietly(small):
    process = subprocess.Popen(
        [sys.executable, "-m", "calcpack", "check", str(small)], cwd=ROOT, stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    )
    process.stdout.close()
    error = process.stderr.read()
    process.stderr.close()
    assert (process.wait(), error) == (NO_READER, b"")


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="needs a device that is always full")
def test_a_full_disk_is_one_line(small):
    with open("/dev/full", "w") as full:
        made = subprocess.run(
            [sys.executable, "-m", "calcpack", "check", str(small)], cwd=ROOT, stdout=full, stderr=subprocess.PIPE,
            text=True,
        )
    assert (made.returncode, made.stderr) == (REFUSED, "calcpack: output: No space left on device\n")


def test_a_terminal_without_the_characters_still_gets_the_results(small):
    made = run("check", small, PYTHONIOENCODING="ascii")
    assert made.returncode in (DONE, NOT_MET) and made.stderr == ""
    assert r"m\xb3/h" in made.stdout
    read = json.loads(run("check", small, "--json", PYTHONIOENCODING="ascii").stdout)
    assert "m³/h" in {entry["unit"] for entry in read["entries"]}


# Folders that are none.


def folders(tmp_path: Path) -> dict[str, tuple[Path, str]]:
    (tmp_path / "file").write_text("x")
    (tmp_path / "empty").mkdir()
    (tmp_path / "some").mkdir()
    shutil.copy(SMALL / "project.yaml", tmp_path / "some")
    return {
        "missing": (tmp_path / "missing", "there is no such folder; calcpack new "),
        "file": (tmp_path / "file", "is not a folder; name the project folder, which holds project.yaml, "),
        "below a file": (tmp_path / "file" / "x", "is not a folder; "),
        "empty": (tmp_path / "empty", "is no project folder; one holds project.yaml, "),
    }


@pytest.mark.parametrize("command", ["check", "draft"])
@pytest.mark.parametrize("which", ["missing", "file", "below a file", "empty"])
def test_a_folder_that_is_none_is_one_clear_line(tmp_path, which, command, capsys):
    folder, words = folders(tmp_path)[which]
    assert main([command, str(folder)]) == REFUSED
    out, err = capsys.readouterr()
    first, last = err.splitlines()
    assert out == "" and first.startswith(f"{folder}: {words}")
    assert last == "calcpack: 1 problem; nothing was written"
    assert not (folder / "build").exists()


def test_a_folder_that_lacks_files_names_them(tmp_path, capsys):
    folders(tmp_path)
    assert main(["check", str(tmp_path / "some")]) == REFUSED
    lines = capsys.readouterr().err.splitlines()
    assert [line.partition(":")[0] for line in lines[:-1]] == ["cases.yaml", "pumps.yaml", "system.yaml"]
    assert all(": is missing" in line for line in lines[:-1])


def test_a_folder_that_cannot_be_read_is_one_clear_line(small, capsys, monkeypatch):
    def refuse(folder):
        raise PermissionError(13, "Permission denied", str(folder))

    monkeypatch.setattr(os, "listdir", refuse)
    assert main(["check", str(small)]) == REFUSED
    assert capsys.readouterr().err.splitlines()[0] == f"{small}: cannot be read: Permission denied"


# What a draft leaves behind.


def test_draft_says_where_its_files_are(small, capsys, monkeypatch):
    printed_without_an_engine(monkeypatch)
    status = main(["draft", str(small)])
    out, err = capsys.readouterr()
    pdf, results = small / "build" / "SM-001-draft.pdf", small / "build" / "results.json"
    assert out.splitlines()[:2] == [f"{pdf}  (3 sheets)", str(results)] and err == ""
    assert pdf.read_bytes() == b"%PDF" and json.loads(results.read_text(encoding="utf-8"))["format"]
    assert (status == NOT_MET) == ("criterion not met" in out)
    assert main(["draft", "--json", str(small)]) == status
    told = json.loads(capsys.readouterr().out)
    assert (told["pdf"], told["results"], told["sheets"]) == (str(pdf), str(results), 3)
    assert sum(told["verdicts"].values()) == len(json.loads(results.read_text(encoding="utf-8"))["checks"])


def printed_without_an_engine(monkeypatch, error: BaseException | None = None) -> None:
    """A PDF engine that writes at once, or fails."""
    from calcpack.report import pdf

    def render(*_):
        if error is not None:
            raise error
        return pdf.Rendered(b"%PDF", 3)

    monkeypatch.setattr(pdf, "render", render)


@pytest.mark.parametrize(
    ("error", "status", "said"),
    [
        (RenderError("the PDF engine cannot start"), REFUSED, "calcpack: the PDF engine cannot start\n"),
        (RenderError("one\ntwo"), REFUSED, "calcpack: one\ncalcpack: two\n"),
        (KeyboardInterrupt(), STOPPED, "calcpack: stopped\n"),
    ],
)
def test_a_draft_that_fails_leaves_the_files_of_the_last_one(small, error, status, said, capsys, monkeypatch):
    printed_without_an_engine(monkeypatch)
    main(["draft", str(small)])
    before = {path.name: path.read_bytes() for path in (small / "build").iterdir()}
    capsys.readouterr()
    edit(small, "project.yaml", "flow: 40 m3/h", "flow: 41 m3/h")
    printed_without_an_engine(monkeypatch, error)
    assert main(["draft", str(small)]) == status
    assert capsys.readouterr() == ("", said)
    assert {path.name: path.read_bytes() for path in (small / "build").iterdir()} == before


@pytest.mark.parametrize("error", [PermissionError(13, "Permission denied"), KeyboardInterrupt()])
def test_a_file_that_cannot_be_put_in_place_leaves_nothing_behind(small, error, capsys, monkeypatch):
    printed_without_an_engine(monkeypatch)

    def fail(*_):
        raise error

    monkeypatch.setattr(os, "replace", fail)
    status = main(["draft", str(small)])
    assert status == (STOPPED if isinstance(error, KeyboardInterrupt) else REFUSED)
    said = capsys.readouterr().err
    assert said == "calcpack: stopped\n" or said.endswith(": cannot be written: Permission denied\n")
    assert said.count("\n") == 1 and list((small / "build").iterdir()) == []


def test_a_build_folder_that_is_a_file_is_refused_before_the_work(small, capsys, monkeypatch):
    printed_without_an_engine(monkeypatch, AssertionError("rendered"))
    (small / "build").write_text("mine")
    assert main(["draft", str(small)]) == REFUSED
    assert capsys.readouterr().err == f"calcpack: {small / 'build'}: cannot be written: it is not a folder\n"
    assert (small / "build").read_text() == "mine"


@pytest.mark.parametrize("exists", [False, True])
def test_a_build_folder_that_is_closed_is_refused_before_the_work(small, exists, capsys, monkeypatch):
    printed_without_an_engine(monkeypatch, AssertionError("rendered"))
    if exists:
        (small / "build").mkdir()
    asked = []
    monkeypatch.setattr(os, "access", lambda path, mode: asked.append(path))
    assert main(["draft", str(small)]) == REFUSED
    assert asked == [small / "build" if exists else small]
    assert capsys.readouterr().err == f"calcpack: {small / 'build'}: cannot be written: no permission\n"


def test_characters_that_no_font_holds_are_named_with_file_and_line(small, capsys, monkeypatch):
    printed_without_an_engine(monkeypatch, AssertionError("rendered"))
    edit(small, "project.yaml", "title: Small transfer", r'title: "Small \u4E00 transfer"')  # named, not written
    edit(small, "pumps.yaml", "installed: 2", "installed: 2 # 漢字 and 漢")
    edit(small, "cases.yaml", "title: normal level", "title: naïve Öl λ ≤ 5 \U0001f600 level")
    assert main(["draft", str(small)]) == REFUSED
    *lines, last = capsys.readouterr().err.splitlines()
    wanted = (("cases.yaml", "Öl", " '\U0001f600' U+1F600"), ("project.yaml", "u4E00", " '一' U+4E00"),
              ("pumps.yaml", "漢", "s '漢' U+6F22, '字' U+5B57"))
    for line, (file, text, named) in zip(lines, wanted, strict=True):
        place = f"{file}:{line_of(small, file, text)}"
        assert line.startswith(f"{place}: the fonts of the package do not hold the character{named}; ")
    assert last == "calcpack: 3 problems; nothing was written"
    assert not (small / "build").exists()
