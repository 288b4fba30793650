"""Formulas as HTML: structure, brackets, powers, numbers with units and links, and the line as plain text."""

from __future__ import annotations

import re
from html.parser import HTMLParser

import pytest
from report_sample import ledger

from calcpack.errors import FormulaError
from calcpack.formulas import FORMULAS, fittings, liquid, pipe_flow, pump
from calcpack.formulas.expression import Binary, Call, Negative, Number, parse
from calcpack.formulas.formula import Formula
from calcpack.ledger import Ledger
from calcpack.ledger.handcheck import printed_unit
from calcpack.ledger.text import quantity_text
from calcpack.report.derivation import COLUMN, lines
from calcpack.report.linear import linear
from calcpack.report.symbols import number_html, number_width, symbol_html, symbol_text
from calcpack.report.typeset import inline, substituted, symbolic

G = "\u00a0"  # the gap between symbols


class Reader(HTMLParser):
    """Checks that tags nest, and collects the text."""

    def __init__(self) -> None:
        super().__init__()
        self.open: list[str] = []
        self.text = ""

    def handle_starttag(self, tag, attrs):
        self.open.append(tag)

    def handle_endtag(self, tag):
        assert self.open.pop() == tag

    def handle_data(self, data):
        self.text += data


def text_of(html: str) -> str:
    reader = Reader()
    reader.feed(html)
    reader.close()
    assert reader.open == []
    return reader.text


def made(text: str) -> Formula:
    """A formula of plain numbers that stands in no list."""
    equation = parse(text)
    names = re.findall(r"[A-Za-z_]\w*", text)
    return Formula("test", "Test", equation, dict.fromkeys(names, "dimensionless"), "TEST")


def right(text: str) -> str:
    return symbolic(made(f"y = {text}"))[1].html


def numbers(text: str, **values: float) -> str:
    """The right side of ``y = text`` with numbers put in, as text."""
    formula = made(f"y = {text}")
    book = Ledger("SI")
    for name, value in values.items():
        book.looked_up(name, value, name, name, "dimensionless", source="TEST", digits=3)
    entry = book.looked_up("y", 1.0, "y", "y", "dimensionless", source="TEST")
    entry.operands = {name: name for name in values}
    return text_of(substituted(formula, entry, book, lambda _: "")[1].html).replace(f"{G}·{G}", " · ")


@pytest.mark.parametrize(
    ("name", "html", "text"),
    [
        ("V", "<i>V</i>", "V"), ("h_f", "<i>h</i><sub>f</sub>", "h_f"), ("rho", "<i>ρ</i>", "ρ"),
        ("eta_m", "<i>η</i><sub>m</sub>", "η_m"), ("K_i", "<i>K</i><sub><i>i</i></sub>", "K_i"),
        ("Delta_H_1", "Δ<i>H</i><sub>1</sub>", "ΔH_1"), ("NPSHA", "<i>NPSHA</i>", "NPSHA"),
        ("dp", "Δ<i>p</i>", "Δp"), ("pi", "π", "π"),
        ("f_2000", "<i>f</i><sub>2000</sub>", "f_2000"), ("p_s_max", "<i>p</i><sub>s,max</sub>", "p_s,max"),
    ],
)  # fmt: skip
def test_symbol(name, html, text):
    assert symbol_html(name) == html
    assert symbol_text(name) == text


def test_fraction_is_a_box_and_grouping_in_text_is_grouping_in_print():
    friction = symbolic(pipe_flow.FRICTION_HEAD)[1].html
    assert friction == (
        f'<i>f</i>{G}<span class="fr"><b><i>L</i></b><i>D</i></span>{G}'
        f'<span class="fr"><b><i>V</i>²</b>2{G}<i>g</i></span>'
    )
    assert right("f * L / D") == f'<span class="fr"><b><i>f</i>{G}<i>L</i></b><i>D</i></span>'


@pytest.mark.parametrize(
    ("text", "html"),
    [
        ("a * (1 + m)", f"<i>a</i>{G}(1 + <i>m</i>)"),
        ("a - (b - c)", "<i>a</i> − (<i>b</i> − <i>c</i>)"),
        ("a - b - c", "<i>a</i> − <i>b</i> − <i>c</i>"),
        ("a * -b", f"<i>a</i>{G}(−<i>b</i>)"),
        ("-(a + b)", "−(<i>a</i> + <i>b</i>)"),
        ("(a + b)**2", "(<i>a</i> + <i>b</i>)²"),
        ("(a * b)**3", f"(<i>a</i>{G}<i>b</i>)³"),
        ("a**2", "<i>a</i>²"),
        ("a**0.75", "<i>a</i><sup>0.75</sup>"),
        ("a**(1/2)", "<i>a</i><sup>1/2</sup>"),
        ("(a**2)**3", "(<i>a</i>²)³"),
        ("2 * 3 * a", f"2{G}·{G}3{G}<i>a</i>"),
        ("sqrt(a)", '<span class="rt">√<span><i>a</i></span></span>'),
        ("sqrt(a)**3", '(<span class="rt">√<span><i>a</i></span></span>)³'),
        ("log10(a)**2", "(log<sub>10</sub>\u2009(<i>a</i>))²"),
        ("ln(a)", "ln\u2009(<i>a</i>)"),
        ("abs(a)", "|<i>a</i>|"),
        ("min(a, b)", "min\u2009(<i>a</i>, <i>b</i>)"),
        ("sum(n * K_i)", f"Σ\u2009<i>n</i>{G}<i>K</i><sub><i>i</i></sub>"),
        ("sum(a) * b", f"(Σ\u2009<i>a</i>){G}<i>b</i>"),
        ("b * sum(a)", f"<i>b</i>{G}Σ\u2009<i>a</i>"),
        ("sum(a + b)", "Σ\u2009(<i>a</i> + <i>b</i>)"),
        ("1e-6 * a", f"1{G}×{G}10<sup>−6</sup>{G}<i>a</i>"),
        ("101325 * a", f"101\u2009325{G}<i>a</i>"),
    ],
)  # fmt: skip
def test_expression(text, html):
    assert right(text) == html


def test_tall_contents_get_tall_brackets_and_a_raised_power():
    assert right("(a / b)**2") == (
        '<span class="br"><span class="fr"><b><i>a</i></b><i>b</i></span></span><sup class="t">2</sup>'
    )
    assert right("sqrt(a / b)").startswith('<span class="fq"><span class="fr">')
    assert right("abs(a / b)").startswith('<span class="ab"><span class="fr">')


@pytest.mark.parametrize(
    ("text", "values", "printed"),
    [
        ("a * b", {"a": 2.0, "b": 3.0}, "2.00 · 3.00"),
        ("a - b", {"a": 2.0, "b": -3.0}, "2.00 − (−3.00)"),
        ("a * b", {"a": 2.0, "b": -3.0}, "2.00 · (−3.00)"),
        ("a * b", {"a": -2.0, "b": 3.0}, "−2.00 · 3.00"),
        ("a**2", {"a": 2.0}, "2.00²"),
        ("a**2", {"a": -2.0}, "(−2.00)²"),
        ("a**2", {"a": 2.0e9}, f"(2.00{G}×{G}109)²"),
        ("-a", {"a": -2.0}, "−(−2.00)"),
        ("2 * a", {"a": 2.0}, "2 · 2.00"),
        ("pi * a", {"a": 2.0}, "π · 2.00"),
    ],
)
def test_numbers_put_in(text, values, printed):
    assert numbers(text, **values) == printed


def test_sum_is_written_out_term_by_term():
    book = ledger()
    entry = book["L-103/K"]
    written = text_of(substituted(fittings.SUM_K, entry, book, lambda _: "")[1].html).replace(G, " ")
    counts, coefficients = entry.operands["n"], entry.operands["K_i"]
    terms = [
        f"{quantity_text(book[n], printed_unit(fittings.SUM_K, 'n', 'SI'))} · "
        f"{quantity_text(book[k], printed_unit(fittings.SUM_K, 'K_i', 'SI'))}"
        for n, k in zip(counts, coefficients, strict=True)
    ]
    assert written == " + ".join(terms) and len(terms) == 5


def test_a_list_outside_sum_is_refused():
    book = ledger()
    wrong = Formula("test", "Test", parse("K = n * K_i"), dict(fittings.SUM_K.kinds), "TEST")
    with pytest.raises(FormulaError, match="stands outside"):
        substituted(wrong, book["L-103/K"], book, lambda _: "")


@pytest.mark.parametrize("system", ["SI", "US"])
def test_every_substituted_number_carries_its_unit_and_its_link(system):
    """The printed operand of each line is the text of the hand-check's number, inside a link to what made it."""
    book = ledger(system)
    count = 0
    for entry in book:
        if not entry.formula:
            continue
        formula = FORMULAS[entry.formula]
        left, right_side = substituted(formula, entry, book, lambda one: f"#{one}")
        html = left.html + right_side.html
        text_of(html)
        for name, ids in entry.operands.items():
            unit = printed_unit(formula, name, system)
            for one in [ids] if isinstance(ids, str) else ids:
                wanted = number_html(quantity_text(book[one], unit, word=False))
                assert f'<a href="#{one}">{wanted}</a>' in html, f"{entry.id}: {one}"
                count += 1
    assert count > 300


def test_empirical_formula_prints_in_the_units_that_it_demands():
    book = ledger("US")
    html = substituted(liquid.ATMOSPHERE, book["site/p_atm"], book, lambda _: "")[1].html
    assert f"85.00{G}m" in html or f"85{G}m" in html
    assert "ft" not in html


def test_implicit_line_shows_equation_root_residual_and_check():
    book = ledger()
    shown = lines(book["L-103/f@1"], book, lambda one: f"#{one}", boxed=False)
    assert [text_of(line.left) for line in shown] == ["1√f =", "f =", "1√0.01765 ="]
    assert re.match(rf"0\.01765residual{G}\d", text_of(shown[1].right))
    assert 'href="#L-103/Re@1"' in shown[2].right and 'href="#L-103/f@1"' in shown[2].left


def test_result_is_given_in_both_units_and_boxed_only_when_it_governs():
    book = ledger()
    plain = lines(book["L-103/D"], book, lambda _: "", boxed=False)[-1].right
    assert text_of(plain).endswith(f"= 0.1541{G}m = 154.1{G}mm")
    assert 'class="r"' not in plain
    boxed = lines(book["L-103/h_f@2"], book, lambda _: "", boxed=True)[-1].right
    assert boxed.endswith(f'= <b class="r">9.204{G}m</b>')


def test_short_lines_are_joined_and_long_ones_broken():
    book = ledger()
    assert len(lines(book["L-103/V@1"], book, lambda _: "", boxed=False)) == 1
    assert len(lines(book["P-101/NPSHA@2"], book, lambda _: "", boxed=True)) == 2
    american = ledger("US")
    assert len(lines(american["P-101/NPSHA@2"], american, lambda _: "", boxed=True)) == 3


def test_every_formula_can_be_typeset_and_most_fit_the_column():
    too_wide = []
    for formula in FORMULAS.values():
        for side in symbolic(formula):
            assert text_of(side.html)
            if side.width > COLUMN:
                too_wide.append(formula.id)
    assert too_wide == []


def test_widths_follow_the_font():
    assert symbolic(pump.SHAFT_POWER)[1].width < symbolic(pump.HYDRAULIC_POWER)[1].width
    assert number_width("10⁻⁶") < number_width("10−6")


@pytest.mark.parametrize(
    ("formula", "text"),
    [
        (pipe_flow.FRICTION_HEAD, "h_f = f · (L / D) · (V^2 / (2 · g))"),
        (pipe_flow.COLEBROOK, "1 / √(f) = −2 · log₁₀ (ε / (3.7 · D) + 2.51 / (Re · √(f)))"),
        (pump.TEMPERATURE_RISE, "ΔT = (g · H / c_p) · (1 / η − 1)"),
        (fittings.SUM_K, "K = Σ (n · K_i)"),
    ],
)
def test_plain_text_form(formula, text):
    assert linear(formula) == text


@pytest.mark.parametrize("formula", FORMULAS.values(), ids=lambda one: one.id)
def test_plain_text_form_means_the_same(formula):
    """Read back as a formula, the plain text is the tree that it came from."""
    text = linear(formula).replace("·", "*").replace("^", "**").replace("−", "-").replace("√", "sqrt")
    text = text.replace("log₁₀ ", "log10").replace("Σ ", "sum")
    names = {symbol_text(name): name for name in (*formula.kinds, "pi")}
    text = re.sub(r"[^\W\d][\w,]*", lambda match: names.get(match[0], match[0]), text)
    again = parse(text)
    assert _flat(again.left) == _flat(formula.equation.left)
    assert _flat(again.right) == _flat(formula.equation.right)


def _flat(node):
    """The tree with products and sums flattened, as brackets that change nothing are not printed."""
    match node:
        case Binary("*" | "+" as operator, a, b):
            parts = []
            for part in (_flat(a), _flat(b)):
                parts.extend(part[1:] if isinstance(part, tuple) and part[0] == operator else [part])
            return (operator, *parts)
        case Binary(operator, a, b):
            return (operator, _flat(a), _flat(b))
        case Negative(a):
            return ("negative", _flat(a))
        case Call(function, arguments):
            return (function, *map(_flat, arguments))
        case Number(value, _):
            return value
    return node.name


def test_inline_range_is_written_with_a_stroke():
    assert inline(parse("r = eps / D").right) == "<i>ε</i>/<i>D</i>"
