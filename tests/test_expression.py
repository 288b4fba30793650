"""The formula language: closed, evaluated alike on floats and arrays, read back from its own print."""

import math

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from calcpack.errors import FormulaError
from calcpack.formulas.expression import (
    CONSTANTS,
    FUNCTIONS,
    MAX_LENGTH,
    Binary,
    Call,
    Negative,
    Number,
    Symbol,
    evaluate,
    magnitude,
    parse,
    summed_terms,
    symbols,
)

OUTSIDE_THE_LANGUAGE = {
    "attribute": "a = b.real",
    "subscript": "a = b[0]",
    "string": "a = 'b'",
    "bytes": "a = b'b'",
    "formatted string": "a = f'{b}'",
    "list": "a = [b]",
    "tuple": "a = b, c",
    "dict": "a = {b: c}",
    "set": "a = {b}",
    "list comprehension": "a = sum([b for b in c])",
    "generator": "a = sum(b for b in c)",
    "unknown call": "a = open(b)",
    "call of a symbol": "a = b(c)",
    "call of a call": "a = sqrt(b)(c)",
    "call of an attribute": "a = b.sqrt(c)",
    "keyword argument": "a = sqrt(x=b)",
    "starred argument": "a = max(*b)",
    "double-starred argument": "a = max(**b)",
    "too many arguments": "a = sqrt(b, c)",
    "too few arguments": "a = max(b)",
    "no argument": "a = sum()",
    "function as symbol": "a = sqrt + b",
    "True": "a = b * True",
    "None": "a = None",
    "ellipsis": "a = ...",
    "complex number": "a = 2j * b",
    "hexadecimal": "a = 0x10 * b",
    "underscore in a number": "a = 1_000 * b",
    "number beyond floats": "a = 1e999 * b",
    "integer beyond floats": "a = 1" + "0" * 390,
    "unary plus": "a = +b",
    "not": "a = not b",
    "complement": "a = ~b",
    "floor division": "a = b // c",
    "modulo": "a = b % c",
    "matrix product": "a = b @ c",
    "shift": "a = b << c",
    "and": "a = b and c",
    "comparison": "a = b < c",
    "if": "a = b if c else d",
    "lambda": "a = lambda: b",
    "await": "a = await b",
    "assignment expression": "a = (b := c)",
    "two equals signs": "a = b = c",
    "equality": "a == b",
    "no equals sign": "a + b",
    "empty right side": "a = ",
    "empty left side": " = b",
    "two statements": "a = b; c",
    "remark": "a = b # not printed",
    "Greek letter": "a = \u03c1 * b",
    "unbalanced": "a = (b",
    "nested beyond reading": "a = " + "(" * 198 + "b" + ")" * 198,
    "too long": "a = " + " + ".join(["b"] * MAX_LENGTH),
}


@pytest.mark.parametrize("text", OUTSIDE_THE_LANGUAGE.values(), ids=OUTSIDE_THE_LANGUAGE)
def test_nothing_outside_the_language_is_read(text):
    with pytest.raises(FormulaError):
        parse(text)


def test_deep_nesting_is_read_and_evaluated():
    assert evaluate(parse("a = " + "(" * 150 + "b" + ")" * 150).right, {"b": 3.0}) == 3.0
    assert evaluate(parse("a = " + "-" * 390 + "b").right, {"b": 3.0}) == 3.0


def test_an_error_names_the_text_and_what_is_known():
    with pytest.raises(FormulaError, match=r"'a = tan\(b\)'.*only these functions may be called: sqrt, log10"):
        parse("a = tan(b)")
    with pytest.raises(FormulaError, match="max takes 2 argument"):
        parse("a = max(b, c, d)")


def test_a_huge_power_is_read_without_being_worked_out():
    tree = parse("a = 9**9**9**9").right
    assert tree == Binary("**", Number(9.0, "9"), Binary("**", Number(9.0, "9"), Binary("**", *[Number(9.0, "9")] * 2)))
    with pytest.raises(OverflowError):
        evaluate(tree, {})


def test_precedence_is_that_of_algebra():
    values = {"a": 7.0, "b": 3.0, "c": 2.0}
    for text, expected in {
        "x = a - b - c": 2.0,
        "x = a / b / c": 7.0 / 6.0,
        "x = b**c**c": 81.0,
        "x = -b**c": -9.0,
        "x = (-b)**c": 9.0,
        "x = a + b * c": 13.0,
        "x = b**-c": 1.0 / 9.0,
        "x = 2 * pi * a": 14.0 * math.pi,
    }.items():
        assert evaluate(parse(text).right, values) == pytest.approx(expected, rel=1e-15), text


def test_every_function_is_the_one_its_name_says():
    expected = {
        "sqrt": math.sqrt, "log10": math.log10, "ln": math.log, "exp": math.exp, "sin": math.sin,
        "abs": abs, "min": min, "max": max,
    }  # fmt: skip
    assert set(expected) | {"sum"} == set(FUNCTIONS)
    for name, function in expected.items():
        arguments = [0.7, 1.9][: FUNCTIONS[name][1]]
        values = dict(zip("ab", arguments, strict=False))
        tree = parse(f"x = {name}({', '.join(values)})").right
        assert evaluate(tree, values) == pytest.approx(function(*arguments), rel=1e-15), name


def test_symbols_come_in_reading_order_without_constants():
    equation = parse("h = f * (L / D) * (V**2 / (2 * g)) + pi * L")
    assert list(symbols(equation.right)) == ["f", "L", "D", "V", "g", "L"]
    assert equation.is_explicit
    assert not parse("1 / sqrt(f) = log10(f)").is_explicit
    assert not parse("f = log10(f)").is_explicit


def test_a_sum_takes_its_lists_side_by_side():
    tree = parse("K = 2 * sum(n * K_i * c)").right
    assert evaluate(tree, {"n": [1.0, 2.0], "K_i": [0.5, 0.2], "c": 10.0}) == pytest.approx(18.0, rel=1e-15)
    assert evaluate(tree, {"n": [], "K_i": [], "c": 10.0}) == 0.0
    cases = np.array([1.0, 2.0, 3.0])
    np.testing.assert_allclose(evaluate(tree, {"n": (1.0, 2.0), "K_i": [cases, 2 * cases], "c": 1.0}), 10 * cases)
    assert [list(symbols(term)) for term in summed_terms(tree)] == [["n", "K_i", "c"]]
    with pytest.raises(FormulaError, match="lists of one length"):
        evaluate(tree, {"n": [1.0], "K_i": [0.5, 0.2], "c": 10.0})
    with pytest.raises(FormulaError, match="no list"):
        evaluate(tree, {"n": 1.0, "K_i": 2.0, "c": 10.0})


def test_a_root_of_a_negative_number_is_no_number():
    tree = parse("a = b**0.5").right
    with pytest.raises(ArithmeticError, match="not real"):
        evaluate(tree, {"b": -4.0})
    with np.errstate(invalid="ignore"):
        assert np.isnan(evaluate(tree, {"b": np.array([-4.0])})).all()


def test_magnitude_adds_what_a_difference_cancels():
    values = {"a": 3.0, "b": 2.0, "x": [1.0, -4.0]}
    for text, expected in {
        "m = a - b": 5.0,
        "m = -(a - b) * b": 10.0,
        "m = (a - b) / -b": 2.5,
        "m = sum(x - b)": 9.0,
        "m = sqrt(a + 1)": 2.0,
    }.items():
        assert magnitude(parse(text).right, values) == pytest.approx(expected), text


NAMES = ("a", "b_1", "rho", "h_f")
number = st.floats(1e-3, 1e3).map(lambda value: Number(value, repr(value)))
leaf = st.one_of(number, st.sampled_from([*NAMES, *CONSTANTS]).map(Symbol))


def _inner(children):
    one = sorted(name for name, (_, count) in FUNCTIONS.items() if count == 1 and name != "sum")
    return st.one_of(
        children.map(Negative),
        st.builds(Binary, st.sampled_from(["+", "-", "*", "/", "**"]), children, children),
        st.builds(lambda name, node: Call(name, (node,)), st.sampled_from(one), children),
        st.builds(lambda name, *nodes: Call(name, nodes), st.sampled_from(["min", "max"]), children, children),
    )


trees = st.recursive(leaf, _inner, max_leaves=8)


def written(node) -> str:
    """The tree as formula text, every operation in brackets."""
    match node:
        case Number(_, text):
            return text
        case Symbol(name):
            return name
        case Negative(operand):
            return f"(-{written(operand)})"
        case Binary(operator, left, right):
            return f"({written(left)} {operator} {written(right)})"
        case Call(function, arguments):
            return f"{function}({', '.join(written(argument) for argument in arguments)})"
    raise AssertionError(node)


@given(trees)
def test_a_tree_is_read_back_from_its_print(tree):
    text = f"x = {written(tree)}"
    assume(len(text) <= MAX_LENGTH)
    assert parse(text).right == tree


@settings(max_examples=200)
@given(trees, st.lists(st.tuples(*[st.floats(0.1, 10.0)] * len(NAMES)), min_size=1, max_size=4))
def test_floats_and_arrays_give_the_same_value(tree, rows):
    columns = {name: np.array(column) for name, column in zip(NAMES, zip(*rows, strict=True), strict=True)}
    with np.errstate(all="ignore"):
        together = np.broadcast_to(np.asarray(evaluate_or_none(tree, columns), dtype=float), len(rows))
        for row, value in zip(rows, together, strict=True):
            alone = evaluate_or_none(tree, dict(zip(NAMES, row, strict=True)))
            if alone is None or not np.isfinite(alone) or not np.isfinite(value):
                continue  # floats raise where arrays give inf or nan
            # Library powers and logarithms may differ in the last place, and differences magnify that.
            scale = float(magnitude(tree, dict(zip(NAMES, row, strict=True))))
            assume(math.isfinite(scale))
            assert alone == pytest.approx(value, rel=1e-6, abs=1e-9 * scale)


def evaluate_or_none(tree, values):
    try:
        return evaluate(tree, values)
    except ArithmeticError:
        return None
