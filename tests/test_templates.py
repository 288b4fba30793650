"""Templates place texts and do nothing else: no arithmetic, no numbers of their own, only declared names."""

from __future__ import annotations

import re
from dataclasses import fields, is_dataclass
from typing import get_args, get_type_hints

import pytest
from jinja2 import meta, nodes

from calcpack.report.fonts import TEMPLATES
from calcpack.report.pages import CONTEXTS, environment

NAMES = sorted(path.relative_to(TEMPLATES).as_posix() for path in TEMPLATES.rglob("*.html"))
ARITHMETIC = (nodes.Add, nodes.Sub, nodes.Mul, nodes.Div, nodes.FloorDiv, nodes.Mod, nodes.Pow, nodes.Neg, nodes.Pos)
CHANGING = (nodes.Call, nodes.Filter)  # a filter such as round would change a number


def tree(name: str) -> nodes.Template:
    return environment().parse((TEMPLATES / name).read_text(encoding="utf-8"))


def own_context(name: str) -> tuple[str, type]:
    return CONTEXTS["sheet.html" if name.startswith("sheets/") else name]


def test_every_template_is_declared():
    assert {name for name in NAMES if not name.startswith("sheets/")} == set(CONTEXTS)


def test_every_object_is_given_to_one_template():
    classes = [of_class for _, of_class in CONTEXTS.values()]
    assert len(set(classes)) == len(classes)
    assert all(is_dataclass(one) and one.__dataclass_params__.frozen for one in classes)


@pytest.mark.parametrize("name", NAMES)
def test_no_arithmetic_and_no_calls(name):
    found = [type(node).__name__ for node in tree(name).find_all((*ARITHMETIC, *CHANGING))]
    assert found == []


@pytest.mark.parametrize("name", NAMES)
def test_no_number_in_the_words(name):
    text = "".join(node.data for node in tree(name).find_all(nodes.TemplateData))
    words = re.sub(r"<[^>]*>", " ", text)
    constants = [node.value for node in tree(name).find_all(nodes.Const) if isinstance(node.value, (int, float))]
    assert re.findall(r"\d", words) == [] and constants == []


@pytest.mark.parametrize("name", NAMES)
def test_one_declared_name_and_only_declared_fields(name):
    context, of_class = own_context(name)
    assert meta.find_undeclared_variables(tree(name)) <= {context}
    for owner, field in used(name, context, of_class):
        assert field in get_type_hints(owner), f"{name}: {owner.__name__} has no field {field}"


def test_every_declared_field_is_placed():
    """A field that no template places is a text that nobody reads."""
    placed = {pair for name in NAMES for pair in used(name, *own_context(name))}
    owners = {owner for owner, _ in placed}
    unused = [
        f"{owner.__name__}.{field.name}" for owner in owners for field in fields(owner)
        if (owner, field.name) not in placed
    ]
    assert unused == []


@pytest.mark.parametrize(
    ("text", "caught"), [("{{ line.value * 1000 }}", "Mul"), ("{{ a | round }}", "Filter"), ("{{ -a }}", "Neg")]
)
def test_the_test_finds_arithmetic(text, caught):
    found = [type(node).__name__ for node in environment().parse(text).find_all((*ARITHMETIC, *CHANGING))]
    assert caught in found


def used(name: str, context: str, of_class: type) -> set[tuple[type, str]]:
    """(class, field) of every attribute that a template reads, loop variables followed through their types."""
    return _read(tree(name), {context: of_class})


def _read(node: nodes.Node, known: dict[str, type]) -> set[tuple[type, str]]:
    if isinstance(node, nodes.For):
        inner = {**known, node.target.name: _element(node.iter, known)}
        found = _read(node.iter, known)
        for part in (*node.body, *node.else_):
            found |= _read(part, inner)
        return found
    if isinstance(node, nodes.Getattr):
        owner = _class(node.node, known)
        found = _read(node.node, known)
        return found if owner is None else found | {(owner, node.attr)}
    found = set()
    for child in node.iter_child_nodes():
        found |= _read(child, known)
    return found


def _class(node: nodes.Node, known: dict[str, type]) -> type | None:
    if isinstance(node, nodes.Name):
        return known.get(node.name)  # None for the loop object of the template language
    assert isinstance(node, nodes.Getattr)
    owner = _class(node.node, known)
    return None if owner is None else get_type_hints(owner)[node.attr]


def _element(node: nodes.Node, known: dict[str, type]) -> type:
    return get_args(_class(node, known))[0]
