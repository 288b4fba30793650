"""The documents say what the program does: generated parts are current, named files and commands exist."""

import re
import subprocess
import sys
from pathlib import Path

import pytest
import write_readme

ROOT = Path(__file__).parent.parent
README = (ROOT / "README.md").read_text(encoding="utf-8")
DEVELOPERS = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")


def test_generated_parts_of_the_readme_are_current():
    assert write_readme.written(README) == README, "run: python tests/write_readme.py"


def test_the_readme_holds_two_set_up_commands_and_ci_runs_just_these():
    commands = re.findall(r"^python3 -m venv .*$", README, re.MULTILINE)
    assert len(commands) == 2
    assert commands[0].endswith(".venv/bin/calcpack draft projects/larkmere-transfer")
    assert commands[1].endswith(".venv/bin/pytest")
    assert "grep -E '^python3 -m venv '" in (ROOT / ".ci" / "run").read_text(encoding="utf-8")


@pytest.mark.parametrize("text", [README, DEVELOPERS], ids=["README", "DEVELOPERS"])
def test_linked_and_named_files_exist(text):
    linked = [target for target in re.findall(r"\]\(([^)#]+)\)", text) if "://" not in target]
    named = re.findall(r"`((?:calcpack|report_templates|tests|projects)/[\w./*-]+)`", text)
    assert linked or named
    for target in [*linked, *named]:
        if "/build/" not in target:
            assert list(ROOT.glob(target.rstrip("/"))), target


def test_every_part_of_the_package_is_in_the_contributor_guide():
    for path in (ROOT / "calcpack").iterdir():
        if path.is_dir() and path.name != "__pycache__":
            assert f"`{path.name}/`" in DEVELOPERS, path.name


def test_every_command_is_in_the_readme():
    words = subprocess.run([sys.executable, "-m", "calcpack", "--help"], capture_output=True, text=True, check=True)
    commands = re.findall(r"^    (\w+) ", words.stdout, re.MULTILINE)
    assert {"new", "check", "draft", "schema"} <= set(commands)
    for command in commands:
        assert f"calcpack {command}" in README, command
