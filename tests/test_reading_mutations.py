"""Whatever is typed into the files of a project: reading gives a project or a list of problems, never anything else."""

from copy import deepcopy
from pathlib import Path

import yaml
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from calcpack.errors import ProjectError
from calcpack.project import load

LARKMERE = Path(__file__).parent.parent / "projects" / "larkmere-transfer"
SOURCES = {path.name: path.read_text(encoding="utf-8") for path in sorted(LARKMERE.glob("*.yaml"))}
SNIPPETS = [
    *("", " ", "\n", "  ", ":", ": ", "- ", "{", "}", "[", "]", ",", "#", "'", '"', "&a ", "*a", "!x ", "%", "|", ">"),
    *("~", "null", "true", "1", "-1", "0", "1e400", "nan", "m", " m", "kPa", "P-101", "TK-101", ".", "@", "\t", "<<: "),
    *("\x00", "\ud800", "é", "{a: b}", "[a, b]", "[]", "{}"),
]


@st.composite
def mutations(draw):
    """Up to four edits of the demo: a piece of one file cut out and something else put in."""
    texts = dict(SOURCES)
    for _ in range(draw(st.integers(1, 4))):
        name = draw(st.sampled_from(sorted(texts)))
        text = texts[name]
        start = draw(st.integers(0, len(text)))
        length = draw(st.sampled_from([0, 0, 1, 1, 2, 5, 20, 200]))
        put_in = draw(st.sampled_from(SNIPPETS) | st.text(max_size=6))
        if draw(st.booleans()):  # a whole line, so that structure survives more often
            start = text.rfind("\n", 0, start) + 1
            length = max(text.find("\n", start) - start, 0) if length else 0
        texts[name] = text[:start] + put_in + text[start + length :]
    return texts


def loads_or_reports(texts, folder):
    for name, text in texts.items():
        (folder / name).write_bytes(text.encode("utf-8", errors="surrogatepass"))
    try:
        project = load(folder)
    except ProjectError as error:
        assert error.problems
        assert all(problem.text for problem in error.problems)
    else:
        assert "BROKEN" not in repr(project)


@settings(max_examples=150, deadline=None, suppress_health_check=list(HealthCheck))
@given(texts=mutations())
def test_any_text_gives_a_project_or_problems(texts, tmp_path_factory):
    loads_or_reports(texts, tmp_path_factory.mktemp("mutant"))


VALUES = [
    *("", "x", "0", "-1", "1e999", "12 m", "12 kPa gauge", "5 %", "P-101.suction", "TK-101", "new", "constant", "1"),
    *([], {}, ["x"], [["1"]], {"x": "1"}, {"value": "1 m"}, {"value": []}, {"type": "tank"}, {"law": "fixed"}),
]


def places(node, found):
    """Every block and list of a file."""
    if isinstance(node, dict | list):
        found.append(node)
        for child in node.values() if isinstance(node, dict) else node:
            places(child, found)
    return found


@st.composite
def rearrangements(draw):
    """Up to four parts of the demo replaced, taken out or renamed; every file stays YAML."""
    files = {name: yaml.load(text, Loader=yaml.BaseLoader) for name, text in SOURCES.items()}
    for _ in range(draw(st.integers(1, 4))):
        nodes = places(files[draw(st.sampled_from(sorted(files)))], [])
        node = nodes[draw(st.integers(0, len(nodes) - 1))]
        if not node:
            continue
        key = draw(st.sampled_from(sorted(node) if isinstance(node, dict) else range(len(node))))
        action = draw(st.sampled_from(["replace", "replace", "take out", "rename"]))
        if action == "replace":
            node[key] = deepcopy(draw(st.sampled_from(VALUES)))
        elif action == "take out":
            del node[key]
        elif isinstance(node, dict):
            node[draw(st.sampled_from(["x", key + "s", key[:-1], "TK-101", "type", "value", ""]))] = node.pop(key)
    return {name: yaml.safe_dump(data, sort_keys=False) for name, data in files.items()}


@settings(max_examples=150, deadline=None, suppress_health_check=list(HealthCheck))
@given(texts=rearrangements())
def test_any_structure_gives_a_project_or_problems(texts, tmp_path_factory):
    loads_or_reports(texts, tmp_path_factory.mktemp("mutant"))
