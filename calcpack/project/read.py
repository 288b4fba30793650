"""A project folder -> plain data in which every text, block and list knows its path, file and line.

YAML is read as events only, so nothing is constructed: every scalar stays the text that was written (``no`` is
"no", ``0.50`` is "0.50"). Tags, duplicate keys, deep nesting, many aliases, large files, links and files that are not
UTF-8 are refused.
"""

from __future__ import annotations

import hashlib
import re
import stat
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path

import yaml

from calcpack.errors import Problem
from calcpack.project.model import InputFile

STEMS = ("project", "system", "pumps", "cases")
MAX_BYTES = 1_000_000
MAX_DEPTH = 20
MAX_NODES = 50_000  # after aliases are followed

_LOADER = getattr(yaml, "CSafeLoader", yaml.SafeLoader)
_FOREIGN = re.compile("[^\t\n\r\x20-\x7e\xa0-\u2027\u202a-\ud7ff\ue000-\ufefe\uff00-\ufffd\U00010000-\U0010ffff]")


class Text(str):
    """A scalar as written."""

    path: str
    file: str
    line: int


class Section(dict[str, "Raw"]):
    """A block of keys in the order written."""

    path: str
    file: str
    line: int


class Items(list["Raw"]):
    """A list."""

    path: str
    file: str
    line: int


Raw = Text | Section | Items


@dataclass
class Folder:
    """What was read: per file stem the raw data (None where a file could not be read) and the files themselves."""

    data: dict[str, Section | None]
    files: tuple[InputFile, ...]
    problems: list[Problem] = field(default_factory=list)


class _ReadingError(Exception):
    """One thing in a file that stops its reading."""

    def __init__(self, line: int, text: str, hint: str = "") -> None:
        self.line, self.text, self.hint = line, text, hint


@dataclass
class _Node:
    """A node of the document before it has a path; ``content`` is str, list of nodes, or dict of nodes."""

    content: str | list[_Node] | dict[str, _Node]
    line: int
    size: int = 1
    depth: int = 1


def read_folder(folder: Path) -> Folder:
    """Read the four files of a folder; everything wrong is collected in ``problems``."""
    data: dict[str, Section | None] = {}
    files, problems = [], []
    for stem in STEMS:
        name = f"{stem}.yaml"
        data[stem] = None
        try:
            content = _bytes_of(folder, name)
            text = _decoded(content)
            files.append(InputFile(name, text, hashlib.sha256(content).hexdigest()))
            data[stem] = _parsed(text, stem, name, problems)
        except _ReadingError as refused:
            problems.append(Problem(name, refused.line, "", refused.text, refused.hint))
    return Folder(data, tuple(files), problems)


def placed(raw: Raw, path: str) -> Raw:
    """A copy of a piece of input under another path; files and lines stay."""
    if isinstance(raw, Section):
        copy: Raw = Section((key, placed(value, f"{path}.{key}")) for key, value in raw.items())
    elif isinstance(raw, Items):
        copy = Items(placed(value, f"{path}.{index}") for index, value in enumerate(raw))
    else:
        copy = Text(raw)
    copy.path, copy.file, copy.line = path, raw.file, raw.line
    return copy


def _bytes_of(folder: Path, name: str) -> bytes:
    path = folder / name
    try:
        status = path.lstat()
        if stat.S_ISLNK(status.st_mode):
            raise _ReadingError(0, "is a link to another file", "put the file itself into the project folder")
        if not stat.S_ISREG(status.st_mode):
            raise _ReadingError(0, "is not a file")
        with path.open("rb") as stream:
            content = stream.read(MAX_BYTES + 1)
    except FileNotFoundError:
        raise _ReadingError(
            0, "is missing", "a project folder holds project.yaml, system.yaml, pumps.yaml, cases.yaml"
        ) from None
    except OSError as error:
        raise _ReadingError(0, f"cannot be read: {error.strerror}") from None
    if len(content) > MAX_BYTES:
        raise _ReadingError(0, f"is larger than {MAX_BYTES // 1000} kB", "an input file holds text typed by people")
    return content


def _decoded(content: bytes) -> str:
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content.count(b"\n", 0, error.start) + 1
        raise _ReadingError(line, "is not UTF-8 text", "save the file with the encoding UTF-8") from None
    if match := _FOREIGN.search(text):
        line = text.count("\n", 0, match.start()) + 1
        raise _ReadingError(line, f"has the control character U+{ord(match.group()):04X}", "delete it")
    return text


def _parsed(text: str, stem: str, name: str, problems: list[Problem]) -> Section:
    composer = _Composer(text, name, problems)
    try:
        root = composer.document()
    except yaml.MarkedYAMLError as error:
        mark = error.problem_mark or error.context_mark
        line = mark.line + 1 if mark else 0
        raise _ReadingError(line, *_yaml_words(error, text.splitlines()[line - 1 : line])) from None
    except yaml.YAMLError:
        raise _ReadingError(0, "is not YAML text") from None
    if not isinstance(root.content, dict):
        raise _ReadingError(root.line, "holds no keys", "write lines such as 'key: value'")
    return _located(root, stem, name)


def _located(node: _Node, path: str, file: str) -> Raw:
    if isinstance(node.content, dict):
        raw: Raw = Section((key, _located(child, f"{path}.{key}", file)) for key, child in node.content.items())
    elif isinstance(node.content, list):
        raw = Items(_located(child, f"{path}.{index}", file) for index, child in enumerate(node.content))
    else:
        raw = Text(node.content)
    raw.path, raw.file, raw.line = path, file, node.line
    return raw


def _yaml_words(error: yaml.MarkedYAMLError, lines: list[str]) -> tuple[str, str]:
    """What is wrong and what would be right; ``lines`` is the line of the mistake, if there is one."""
    problem = str(error.problem or error.context or "")
    if any(line.lstrip(" ").startswith("\t") for line in lines):
        return "a tab stands where YAML wants spaces", "indent with spaces"
    if "mapping values are not allowed" in problem:
        return "a second ': ' stands on this line", "put text that contains ': ' in quotes, or mend the indentation"
    return f"this is not YAML: {problem}", "look at brackets, quotes and indentation here and on the line above"


@dataclass
class _Frame:
    """A list or block that is still open; ``key`` is the key whose value comes next."""

    node: _Node
    anchor: str
    key: _Node | None = None


class _Composer:
    """Builds nodes from parser events with an explicit stack, so that no input can exhaust the interpreter's own."""

    def __init__(self, text: str, name: str, problems: list[Problem]) -> None:
        self._events: Iterator[yaml.Event] = yaml.parse(text, Loader=_LOADER)
        self._name = name
        self._problems = problems
        self._anchors: dict[str, _Node] = {}
        self._stack: list[_Frame] = []
        self._root: _Node | None = None

    def document(self) -> _Node:
        """The root node of the only document. Raises _ReadingError, yaml.YAMLError."""
        for event in self._events:
            line = event.start_mark.line + 1
            if isinstance(event, yaml.DocumentStartEvent) and self._root is not None:
                raise _ReadingError(line, "a second document begins here", "keep one in each file")
            if getattr(event, "tag", None) is not None:
                raise _ReadingError(line, f"a tag ({event.tag}) is not allowed", "write plain text")
            if isinstance(event, yaml.MappingStartEvent):
                self._open(_Node({}, line), event.anchor)
            elif isinstance(event, yaml.SequenceStartEvent):
                self._open(_Node([], line), event.anchor)
            elif isinstance(event, yaml.CollectionEndEvent):
                frame = self._stack.pop()
                self._close(frame.node, frame.anchor)
            elif isinstance(event, yaml.ScalarEvent):
                self._close(_Node(event.value, line), event.anchor)
            elif isinstance(event, yaml.AliasEvent):
                self._close(self._followed(event.anchor, line), None)
        if self._root is None:
            raise _ReadingError(0, "is empty", "start from the files of a new project")
        return self._root

    def _open(self, node: _Node, anchor: str | None) -> None:
        if len(self._stack) >= MAX_DEPTH:
            raise _ReadingError(node.line, f"is nested deeper than {MAX_DEPTH} levels")
        self._stack.append(_Frame(node, anchor or ""))

    def _followed(self, anchor: str, line: int) -> _Node:
        node = self._anchors.get(anchor)
        if node is None:
            raise _ReadingError(line, f"the alias *{anchor} names no anchor written before", "write the text out")
        if len(self._stack) + node.depth > MAX_DEPTH:
            raise _ReadingError(line, f"is nested deeper than {MAX_DEPTH} levels")
        return _Node(node.content, line, node.size, node.depth)

    def _close(self, node: _Node, anchor: str | None) -> None:
        """Put a complete node where it belongs: into the open list or block, or at the root."""
        if anchor:
            self._anchors[anchor] = node
        if not self._stack:
            self._root = node
            return
        frame = self._stack[-1]
        parent = frame.node
        if isinstance(parent.content, list):
            parent.content.append(node)
        elif frame.key is None:
            if not isinstance(node.content, str):
                raise _ReadingError(node.line, "a key is a list or block", "a key is one word")
            frame.key = node
            return
        else:
            self._enter(parent.content, frame.key, node)
            frame.key = None
        parent.size += node.size
        parent.depth = max(parent.depth, node.depth + 1)
        if parent.size > MAX_NODES:
            raise _ReadingError(node.line, f"holds more than {MAX_NODES} values", "aliases repeat what they stand for")

    def _enter(self, block: dict[str, _Node], key: _Node, node: _Node) -> None:
        name = key.content
        if name in block:
            first = f"the first stands on line {block[name].line}"
            self._problems.append(Problem(self._name, key.line, "", f"'{name}' is written twice in one block", first))
        else:
            block[name] = _Node(node.content, key.line, node.size, node.depth)
