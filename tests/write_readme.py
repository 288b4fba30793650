"""The parts of README.md that are made from the program, so that they cannot drift.

python tests/write_readme.py              write them
python tests/write_readme.py --pictures   draft the demo and make its two pictures (needs pdftotext and pdftoppm)
"""

from __future__ import annotations

import re
import shutil
import subprocess
import sys
import tempfile
from collections.abc import Callable, Iterator
from pathlib import Path

ROOT = Path(__file__).parent.parent
sys.path.insert(0, str(ROOT))

from calcpack.project import json_schema  # noqa: E402
from calcpack.project.schema.base import Sourced  # noqa: E402

README = ROOT / "README.md"
DEMO = ROOT / "projects" / "larkmere-transfer"
PICTURES = {"sheet": "Losses by line", "system-curve": "System curve"}  # picture -> sheet whose first page it shows
FILES = ("project.yaml", "system.yaml", "pumps.yaml", "cases.yaml")
OF_A_BLOCK = {one.description for one in Sourced.model_fields.values()}  # told once above the tables
PLURAL = {"block": "blocks", "text": "texts", "number": "numbers", "list of numbers": "lists of numbers"}
WIDEST = 62  # resolution of the pictures, dots an inch
MISTAKES = (  # file, what stands there, what a hurried engineer writes
    ("project.yaml", "  margin: 5 %", "  margn: 5 %"),
    ("system.yaml", "size: DN 200", "size: DN 205"),
    ("system.yaml", "{value: 9.5 m,", "{value: 9.5,"),
    ("pumps.yaml", "casing_rating: 1000 kPa gauge", "casing_rating: 1000 kPa"),
    ("pumps.yaml", "{value: 0.925,", "{value: 92.5,"),
    ("cases.yaml", "  purposes: [head]\n  temperature: normal\n  levels: min",
     "  purposes: [head]\n  temperature: normal\n  levels: mni"),
)


def errors() -> str:
    """What ``check`` says of the demo with a few mistakes."""
    with tempfile.TemporaryDirectory() as place:
        folder = Path(place) / "project"
        shutil.copytree(DEMO, folder, ignore=shutil.ignore_patterns("build"))
        for file, right, wrong in MISTAKES:
            text = (folder / file).read_text(encoding="utf-8")
            assert text.count(right) == 1, (file, right)
            (folder / file).write_text(text.replace(right, wrong), encoding="utf-8")
        made = subprocess.run(
            [sys.executable, "-m", "calcpack", "check", str(folder)], cwd=ROOT, capture_output=True, encoding="utf-8",
        )
    assert made.returncode == 2 and not made.stdout
    return f"```text\n$ calcpack check my-project\n{made.stderr}```"


def line() -> str:
    """The first line of the demo as its file has it."""
    text = (DEMO / "system.yaml").read_text(encoding="utf-8")
    block = re.search(r"^lines:\n  L-101:\n(?:    .*\n)+", text, re.MULTILINE)[0]
    return f"```yaml\n{block}```"


def keys() -> str:
    """Every key of the input files, from the schema."""
    definitions = json_schema()["$defs"]
    parts = [_table(f"`{file}`", list(Keys(definitions).rows(definitions[file], ""))) for file in FILES]
    parts.append(_table("A value in its long form", list(Keys(definitions).rows(definitions["LongForm"], ""))))
    return "\n\n".join(parts)


Row = tuple[str, str, str, str]


def _table(title: str, rows: list[Row]) -> str:
    lines = [f"**{title}**", "", "| key | what it is | written as | needed |", "| --- | --- | --- | --- |"]
    return "\n".join([*lines, *(f"| {' | '.join(row)} |" for row in rows)])


class Keys:
    """Walks the schema of one file. A block that stands in several places is spelled out in the first."""

    def __init__(self, definitions: dict) -> None:
        self.definitions = definitions
        self.told: dict[str, str] = {}

    def rows(self, schema: dict, path: str) -> Iterator[Row]:
        """Rows of what stands at ``path``: its keys, each followed by the keys of the block that it holds."""
        name = schema.get("$ref", "")
        if self.told.setdefault(name, path) != path and name:
            return
        schema = _followed(schema, self.definitions)
        if "oneOf" in schema:
            for choice in schema["oneOf"]:
                block = _followed(choice, self.definitions)
                key, word = next((key, one["const"]) for key, one in block["properties"].items() if "const" in one)
                yield f"`{path}`", block["description"], f"with `{key}: {word}`:", ""
                yield from self.keys(block, path, besides=key)
        elif "properties" in schema:
            yield from self.keys(schema, path)
        elif isinstance(schema.get("additionalProperties"), dict) and not _is_value(schema["additionalProperties"]):
            yield from self.rows(schema["additionalProperties"], f"{path}.NAME" if path else "NAME")
        elif isinstance(schema.get("items"), dict):
            yield from self.rows(schema["items"], f"{path}[]")

    def keys(self, block: dict, path: str, besides: str = "") -> Iterator[Row]:
        """A row for each key of a block, but for source and status of the block as a whole."""
        for name, one in block["properties"].items():
            if name != besides and one.get("description") not in OF_A_BLOCK:
                key = f"{path}.{name}" if path else name
                needed = "yes" if name in block.get("required", ()) else ""
                yield f"`{key}`", one.get("description", ""), self.form(one, key), needed
                yield from self.rows(one, key)

    def form(self, schema: dict, path: str) -> str:
        """How a key is written, in a few words."""
        if "items" in schema and (before := self.told.get(schema["items"].get("$ref"), path)) != path:
            return f"as `{before.removesuffix('[]')}`"
        return _form(schema)


def _followed(schema: dict, definitions: dict) -> dict:
    while "$ref" in schema:
        schema = definitions[schema["$ref"].rpartition("/")[2]]
    return schema


def _is_value(schema: dict) -> bool:
    """True for a number with its unit, which has a short and a long form."""
    return any(one.get("$ref", "").endswith("/LongForm") for one in schema.get("anyOf", ()))


def _form(schema: dict) -> str:
    if _is_value(schema):
        short = next(one for one in schema["anyOf"] if "pattern" in one).get("description", "number or %")
        named = any(one.get("type") == "object" for one in schema["anyOf"])
        return f"{short}, or such by name" if named else short
    if "$ref" in schema:
        return "block"
    if "enum" in schema:
        return "one of " + ", ".join(schema["enum"])
    if "anyOf" in schema:
        return "; or ".join(_form(one) for one in schema["anyOf"])
    if "oneOf" in schema:
        return "block of one kind"
    if schema.get("type") == "array":
        inner = schema.get("items", {})
        return "list of words" if "enum" in inner else f"list of {PLURAL.get(_form(inner), _form(inner))}"
    if schema.get("type") == "object":
        inner = schema.get("additionalProperties")
        return f"by name: {_form(inner) if isinstance(inner, dict) else 'any value'}"
    if schema.get("format") == "date":
        return "date"
    return {"integer": "whole number", "number": "number", "boolean": "true or false"}.get(str(schema["type"]), "text")


PARTS: dict[str, Callable[[], str]] = {"errors": errors, "line": line, "keys": keys}


def written(text: str) -> str:
    """The text of README.md with every part made anew."""
    for name, make in PARTS.items():
        begin, end = f"<!-- {name}: made by tests/write_readme.py -->\n", f"\n<!-- end of {name} -->"
        head, found, rest = text.partition(begin)
        _, closed, tail = rest.partition(end)
        assert found and closed, f"README.md lacks the marks of {name}"
        text = f"{head}{begin}\n{make()}\n{end}{tail}"
    return text


def write_pictures(target: Path) -> None:
    """Pages of the demo package as PNG."""
    with tempfile.TemporaryDirectory() as place:
        folder = Path(place) / "demo"
        shutil.copytree(DEMO, folder, ignore=shutil.ignore_patterns("build"))
        subprocess.run([sys.executable, "-m", "calcpack", "draft", str(folder)], cwd=ROOT, check=True)
        (pdf,) = (folder / "build").glob("*.pdf")
        text = subprocess.run(["pdftotext", "-layout", str(pdf), "-"], capture_output=True, check=True).stdout.decode()
        target.mkdir(exist_ok=True)
        for name, title in PICTURES.items():
            page = 1 + next(number for number, words in enumerate(text.split("\f"))
                            if number > 1 and re.search(rf"^ *\d+ +{title}$", words, re.MULTILINE))
            subprocess.run(["pdftoppm", "-png", "-singlefile", "-r", str(WIDEST), "-f", str(page), "-l", str(page),
                            str(pdf), str(target / name)], check=True)


if __name__ == "__main__":
    if "--pictures" in sys.argv:
        write_pictures(ROOT / ".pictures")
    else:
        README.write_text(written(README.read_text(encoding="utf-8")), encoding="utf-8")
