"""``calcpack new``: a project that can be computed as it is, or nothing."""

from __future__ import annotations

from pathlib import Path

from conftest import ROOT

from calcpack import build
from calcpack.__main__ import DONE, REFUSED, main

FILES = {"project.yaml", "system.yaml", "pumps.yaml", "cases.yaml"}


def test_a_new_project_can_be_checked_and_says_that_it_is_invented(tmp_path, capsys):
    folder = tmp_path / "my project"
    assert main(["new", str(folder)]) == DONE
    *paths, after = capsys.readouterr().out.splitlines()
    assert {Path(path) for path in paths} == {folder / name for name in FILES} == set(folder.iterdir())
    assert after == f"next: calcpack check '{folder}'"
    assert main(["check", str(folder)]) == DONE
    assert "criterion met: " in capsys.readouterr().out
    outcome = build.check(folder, lambda step: None)
    words = " ".join(note.text for note in outcome.job.project.notes)
    assert "invented" in words and "(invented)" in outcome.job.project.document.project
    assert all("invented" in person.name for person in outcome.job.project.people)


def test_every_key_of_a_new_project_is_explained_or_plain():
    starter = ROOT / "calcpack" / "project" / "starter"
    for name in FILES:
        assert (starter / name).read_text(encoding="utf-8").startswith("# "), name


def test_new_leaves_what_is_there_alone(tmp_path, capsys):
    (tmp_path / "file").write_text("mine")
    (tmp_path / "used").mkdir()
    (tmp_path / "used" / "notes.txt").write_text("mine")
    for name, words in (("file", "is a file"), ("file/below", "is a file"), ("used", "is not empty")):
        assert main(["new", str(tmp_path / name)]) == REFUSED
        first, last = capsys.readouterr().err.splitlines()
        assert first.startswith(f"{tmp_path / name}: {words}") and first.endswith("; name a new folder")
        assert last == "calcpack: 1 problem; nothing was written"
    assert (tmp_path / "file").read_text() == "mine"
    assert [path.name for path in (tmp_path / "used").iterdir()] == ["notes.txt"]
    (tmp_path / "empty").mkdir()
    assert main(["new", str(tmp_path / "empty")]) == DONE


def test_new_writes_four_files_or_none(tmp_path, capsys, monkeypatch):
    write, count = Path.write_bytes, iter(range(9))

    def full(path, data):
        if next(count) == 2:
            raise OSError(28, "No space left on device")
        return write(path, data)

    monkeypatch.setattr(Path, "write_bytes", full)
    assert main(["new", str(tmp_path / "p")]) == REFUSED
    assert "cannot be written: No space left on device" in capsys.readouterr().err
    assert list((tmp_path / "p").iterdir()) == []
