"""The four printed forms: exact strings, and the same meaning in all of them for expressions at random."""

from __future__ import annotations

import re
from decimal import Decimal, DivisionByZero, InvalidOperation, Overflow
from typing import Any
from xml.etree import ElementTree

import pytest
import typst as typst_compiler
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from calckit.core.layout import Printed
from calckit.core.nodes import Env, build
from calckit.core.numbers import DECIMALS, FLOATS, in_decimals
from calckit.core.printers import FORMS, print_all, typeset
from calckit.core.symbol import Symbol
from tests.core import read_forms
from tests.core.expressions import OVER_ROWS, ROWS, SINGLE, floats, shown, values
from tests.printed_digits import Reader, rounded

LAYOUTS = {
    "C_sfloor": Symbol("C_sfloor", "lower limit", sub="s,floor"),
    "wh_x": Symbol("wh_x", "share", layout="w_x*h_x**k"),
    "sum_wh": Symbol("sum_wh", "sum", layout="total(w_i*h_i**k)"),
}


def symbol(name: str) -> Symbol:
    """The symbol of a name: spelt by the name alone unless it has a layout of its own."""
    return LAYOUTS.get(name) or Symbol(name, name)


def printed(text: str, operands: dict[str, Any] | None = None, row: int | None = None) -> dict[str, str]:
    """The four forms, with numbers if there are operands (written "62 ft", or a list of such)."""
    if operands is None:
        return print_all(build(text), symbol)

    def one(raw: str) -> Printed:
        numeral, _, unit = raw.partition(" ")
        return Printed(numeral, unit)

    shown_as = {n: [one(r) for r in raw] if isinstance(raw, list) else one(raw) for n, raw in operands.items()}
    numbers = {
        n: [float(p.numeral) for p in v] if isinstance(v, list) else float(v.numeral) for n, v in shown_as.items()
    }
    return print_all(build(text), symbol, shown_as, Env(numbers, FLOATS, ROWS, row))


SYMBOLIC = [
    ("C_t*h_n**x", "C_t × h_n^x", r"C_{t}\,h_{n}^{x}", "C_t h_n^(x)"),
    ("S_DS/(R/I_e)", "S_DS / (R / I_e)", r"\frac{S_{\mathrm{DS}}}{\left(R / I_{e}\right)}",
     r'frac(S_"DS", (R \/ I_e))'),
    ("2/3*S_MS", "2 / 3 × S_MS", r"\frac{2}{3}\,S_{\mathrm{MS}}", 'frac(2, 3) S_"MS"'),
    ("a/b/c", "a / b / c", r"\frac{\frac{a}{b}}{c}", "frac(frac(a, b), c)"),
    ("a/(b*c)", "a / (b × c)", r"\frac{a}{b\,c}", "frac(a, b c)"),
    ("a - (b - c)", "a - (b - c)", r"a - \left(b - c\right)", "a − (b − c)"),
    ("a - b - c", "a - b - c", "a - b - c", "a − b − c"),
    ("(-d)**2", "(-d)^2", r"\left(-d\right)^{2}", "(−d)^(2)"),
    ("-d**2", "-d^2", "-d^{2}", "−d^(2)"),
    ("(a/b)**2", "(a / b)^2", r"\left(\frac{a}{b}\right)^{2}", "(frac(a, b))^(2)"),
    ("a**b**2", "a^(b^2)", "a^{b^{2}}", "a^(b^(2))"),
    ("(a**b)**2", "(a^b)^2", r"\left(a^{b}\right)^{2}", "(a^(b))^(2)"),
    ("a*2.50", "a × 2.50", r"a \times 2.50", "a times 2.50"),
    ("sqrt(a/b)", "sqrt(a / b)", r"\sqrt{\frac{a}{b}}", "sqrt(frac(a, b))"),
    ("abs(sum_F/V - 1)", "|sum_F / V - 1|", r"\left|\frac{\mathrm{sum}_{F}}{V} - 1\right|",
     'abs(frac("sum"_F, V) − 1)'),
    ("max(0.044*S_DS*I_e, 0.01)", "max(0.044 × S_DS × I_e, 0.01)",
     r"\max\left(0.044\,S_{\mathrm{DS}}\,I_{e},\; 0.01\right)", 'max(0.044 S_"DS" I_e, 0.01)'),
    ("1 if T <= 0.5 else 2 if T >= 2.5 else T", "1 if T ≤ 0.5; 2 if T ≥ 2.5; T otherwise",
     r"\begin{cases}1 & \text{if } T \le 0.5 \\ 2 & \text{if } T \ge 2.5 \\ T & \text{otherwise}\end{cases}",
     'cases(1 quad "if " T ≤ 0.5, 2 quad "if " T ≥ 2.5, T quad "otherwise")'),
    ("a - (b if a > b else c)", "a - (b if a > b; c otherwise)",
     r"a - \left(\begin{cases}b & \text{if } a > b \\ c & \text{otherwise}\end{cases}\right)",
     'a − (cases(b quad "if " a > b, c quad "otherwise"))'),
    ("total(w_x*h_x)", "Σ w_x × h_x", r"\sum w_{x}\,h_{x}", "sum w_x h_x"),
    ("total(a - w_x)", "Σ (a - w_x)", r"\sum \left(a - w_{x}\right)", "sum (a − w_x)"),
    ("above(F_x)", "Σ(i ≥ x) F_x", r"\sum_{i \ge x} F_{x}", "sum_(i ≥ x) F_x"),
    ("delta_x - below(delta_x)", "δ_x - δ_x−1", r"\delta_{x} - \delta_{\mathrm{x-1}}", 'δ_x − δ_"x−1"'),
    ('level(F_x, "5")', "F_x, level 5", r"F_{\mathrm{x,\ level\ 5}}", 'F_"x, level 5"'),
    ('level(F_x, "wall A")', "F_x, wall A", r"F_{\mathrm{x,\ wall\ A}}", 'F_"x, wall A"'),
    ("lambda_*Omega_0*C_sfloor", "λ × Ω_0 × C_s,floor", r"\lambda\,\Omega_{\mathrm{0}}\,C_{\mathrm{s,floor}}",
     'λ Ω_"0" C_"s,floor"'),
    ("wh_x/sum_wh", "w_x × h_x^k / (Σ w_i × h_i^k)", r"\frac{w_{x}\,h_{x}^{k}}{\sum w_{i}\,h_{i}^{k}}",
     "frac(w_x h_x^(k), sum w_i h_i^(k))"),
    ("wh_x**2", "(w_x × h_x^k)^2", r"\left(w_{x}\,h_{x}^{k}\right)^{2}", "(w_x h_x^(k))^(2)"),
    ("Delta <= Delta_a", "Δ ≤ Δ_a", r"\Delta \le \Delta_{a}", "Δ ≤ Δ_a"),
    ("a != b", "a ≠ b", r"a \ne b", "a ≠ b"),
]  # fmt: skip


@pytest.mark.parametrize(("text", "plain", "latex", "typst"), SYMBOLIC)
def test_symbolic(text: str, plain: str, latex: str, typst: str) -> None:
    forms = printed(text)
    assert (forms["plain"], forms["latex"], forms["typst"]) == (plain, latex, typst)


NUMBERS = {
    "a": "2", "b": "-3", "c": "4.0 ft", "d": "-5 kip", "h_n": "30 m", "x": "0.9", "T": "1.2 s", "a_g": "9.807 m/s**2",
    "F_x": ["59.03 kip", "53.85 kip", "-1.00 kip"], "w_x": ["1 kip", "2 kip", "3 kip"],
}  # fmt: skip
SUBSTITUTED = [
    ("a + b", "2 + (-3)", r"2 + \left(-3\right)", "2 + (−3)"),
    ("a - b", "2 - (-3)", r"2 - \left(-3\right)", "2 − (−3)"),
    ("b - a", "-3 - 2", "-3 - 2", "−3 − 2"),
    ("-b", "-(-3)", r"-\left(-3\right)", "−(−3)"),
    ("a*b", "2 × (-3)", r"2 \times \left(-3\right)", "2 times (−3)"),
    ("a/b", "2 / (-3)", r"\frac{2}{-3}", "frac(2, −3)"),
    ("a/(b/a)", "2 / ((-3) / 2)", r"\frac{2}{\left(\left(-3\right) / 2\right)}", r"frac(2, ((−3) \/ 2))"),
    ("h_n**x", "(30 m)^0.9", r"\left(30\,\mathrm{m}\right)^{0.9}", '(30 thin "m")^(0.9)'),
    ("a**x", "2^0.9", "2^{0.9}", "2^(0.9)"),
    ("d**2", "(-5 kip)^2", r"\left(-5\,\mathrm{kip}\right)^{2}", '(−5 thin "kip")^(2)'),
    ("(-d)**2", "(-(-5 kip))^2", r"\left(-\left(-5\,\mathrm{kip}\right)\right)^{2}", '(−(−5 thin "kip"))^(2)'),
    ("d/a_g", "(-5 kip) / 9.807 m/s²", r"\frac{-5\,\mathrm{kip}}{9.807\,\mathrm{m}{\cdot}\mathrm{s}^{-2}}",
     'frac(−5 thin "kip", 9.807 thin "m/s²")'),
    ("1 if T <= 0.5 else 1 + (T - 0.5)/(2.5 - 0.5)", "1 + (1.2 s - 0.5) / (2.5 - 0.5)",
     r"1 + \frac{1.2\,\mathrm{s} - 0.5}{2.5 - 0.5}", '1 + frac(1.2 thin "s" − 0.5, 2.5 − 0.5)'),
    ("a - (a if a < b else a + b)", "2 - (2 + (-3))", r"2 - \left(2 + \left(-3\right)\right)", "2 − (2 + (−3))"),
    ("a*(1 if a < b else b)", "2 × (-3)", r"2 \times \left(-3\right)", "2 times (−3)"),
    ("total(w_x)", "1 kip + 2 kip + 3 kip", r"1\,\mathrm{kip} + 2\,\mathrm{kip} + 3\,\mathrm{kip}",
     '1 thin "kip" + 2 thin "kip" + 3 thin "kip"'),
    ("d - total(w_x)", "-5 kip - (1 kip + 2 kip + 3 kip)",
     r"-5\,\mathrm{kip} - \left(1\,\mathrm{kip} + 2\,\mathrm{kip} + 3\,\mathrm{kip}\right)",
     '−5 thin "kip" − (1 thin "kip" + 2 thin "kip" + 3 thin "kip")'),
    ("a*total(w_x)", "2 × (1 kip + 2 kip + 3 kip)",
     r"2 \times \left(1\,\mathrm{kip} + 2\,\mathrm{kip} + 3\,\mathrm{kip}\right)",
     '2 times (1 thin "kip" + 2 thin "kip" + 3 thin "kip")'),
    ("total(F_x)", "59.03 kip + 53.85 kip + (-1.00 kip)",
     r"59.03\,\mathrm{kip} + 53.85\,\mathrm{kip} + \left(-1.00\,\mathrm{kip}\right)",
     '59.03 thin "kip" + 53.85 thin "kip" + (−1.00 thin "kip")'),
    ("above(F_x)", "59.03 kip + 53.85 kip", r"59.03\,\mathrm{kip} + 53.85\,\mathrm{kip}",
     '59.03 thin "kip" + 53.85 thin "kip"'),
    ("F_x - below(F_x)", "53.85 kip - (-1.00 kip)", r"53.85\,\mathrm{kip} - \left(-1.00\,\mathrm{kip}\right)",
     '53.85 thin "kip" − (−1.00 thin "kip")'),
    ('a*level(F_x, "Roof")', "2 × 59.03 kip", r"2 \times 59.03\,\mathrm{kip}", '2 times 59.03 thin "kip"'),
    ("abs(b - a)", "|-3 - 2|", r"\left|-3 - 2\right|", "abs(−3 − 2)"),
    ("a <= b", "2 ≤ -3", r"2 \le -3", "2 ≤ −3"),
]  # fmt: skip


@pytest.mark.parametrize(("text", "plain", "latex", "typst"), SUBSTITUTED)
def test_substituted(text: str, plain: str, latex: str, typst: str) -> None:
    forms = printed(text, NUMBERS, row=1)
    assert (forms["plain"], forms["latex"], forms["typst"]) == (plain, latex, typst)


def test_nothing_below_the_lowest_level() -> None:
    assert printed("F_x - below(F_x)", NUMBERS, row=2)["plain"] == "-1.00 kip - 0 kip"


@pytest.mark.parametrize(
    ("text", "mathml"),
    [
        ("C_t*h_n**x",
         "<mrow><msub><mi>C</mi><mi>t</mi></msub><mo>\u2062</mo><msup><mrow><msub><mi>h</mi><mi>n</mi></msub></mrow>"
         "<mrow><mi>x</mi></mrow></msup></mrow>"),
        ("S_DS/(R/I_e)",
         "<mrow><mfrac><mrow><msub><mi>S</mi><mtext>DS</mtext></msub></mrow><mrow><mrow><mo>(</mo><mi>R</mi><mo>/</mo>"
         "<msub><mi>I</mi><mi>e</mi></msub><mo>)</mo></mrow></mrow></mfrac></mrow>"),
        ("a < b", "<mrow><mi>a</mi><mo>&lt;</mo><mi>b</mi></mrow>"),
    ],
)  # fmt: skip
def test_mathml(text: str, mathml: str) -> None:
    assert printed(text)["mathml"] == mathml


def test_mathml_of_a_negative_number_with_its_unit() -> None:
    assert printed("a - d", NUMBERS, row=1)["mathml"] == (
        "<mrow><mn>2</mn><mo>−</mo><mrow><mo>(</mo><mrow><mo>−</mo><mn>5</mn></mrow><mspace width='0.2em'/>"
        "<mtext>kip</mtext><mo>)</mo></mrow></mrow>"
    )


EVERY = [printed(text) for text, *_ in SYMBOLIC] + [printed(text, NUMBERS, 1) for text, *_ in SUBSTITUTED]


def test_mathml_is_well_formed() -> None:
    known = {
        "mrow", "mi", "mo", "mn", "mtext", "mspace", "msub", "msup", "mfrac", "msqrt", "munder", "mtable", "mtr", "mtd",
    }  # fmt: skip
    for forms in EVERY:
        tree = ElementTree.fromstring(forms["mathml"])
        assert {node.tag for node in tree.iter()} <= known
        assert all(len(node) == 2 for node in tree.iter() if node.tag in ("msub", "msup", "mfrac", "munder"))


def test_latex_braces_and_brackets_are_balanced() -> None:
    for forms in EVERY:
        bare = re.sub(r"\\[{}\\]", "", forms["latex"])
        depth = 0
        for sign in bare:
            depth += (sign == "{") - (sign == "}")
            assert depth >= 0, forms["latex"]
        assert depth == 0, forms["latex"]
        assert bare.count(r"\left") == bare.count(r"\right")
        assert bare.count(r"\begin") == bare.count(r"\end")


def test_typst_compiles() -> None:
    # as the report does it: the form is data, set by eval in math mode
    body = "\n".join(f"#eval({_quoted(forms['typst'])}, mode: \"math\")\n" for forms in EVERY)
    pdf = typst_compiler.compile(body.encode())
    assert isinstance(pdf, bytes) and pdf.startswith(b"%PDF")


def test_typst_that_is_wrong_does_not_compile() -> None:
    with pytest.raises(Exception, match="unclosed delimiter"):
        typst_compiler.compile(b'#eval("frac(a, b", mode: "math")')


def _quoted(text: str) -> str:
    return '"' + text.replace("\\", "\\\\").replace('"', '\\"') + '"'


def test_typeset_symbols() -> None:
    assert typeset(Symbol("S_DS", "ordinate"), symbol) == {
        "plain": "S_DS", "latex": r"S_{\mathrm{DS}}", "typst": 'S_"DS"',
        "mathml": "<mrow><msub><mi>S</mi><mtext>DS</mtext></msub></mrow>",
    }  # fmt: skip
    assert typeset(Symbol("delta_xe", "displacement"), symbol)["plain"] == "δ_xe"
    assert typeset(Symbol("lambda_", "factor"), symbol)["latex"] == r"\lambda"
    assert typeset(Symbol("omicron_1", "odd"), symbol)["latex"] == r"o_{\mathrm{1}}"
    assert typeset(LAYOUTS["wh_x"], symbol)["typst"] == "w_x h_x^(k)"


def test_text_of_the_user_is_never_markup() -> None:
    odd = Symbol("Q_1", "odd", sub='#{"$<&>_^\\')
    forms = typeset(odd, symbol)
    assert ElementTree.fromstring(forms["mathml"])[0][1].text == '#{"$<&>_^\\'
    assert forms["latex"] == r'Q_{\mathrm{\#\{"\$<\&>\_\wedge\ \backslash\ }}'
    assert forms["typst"] == r'Q_"#{\"$<&>_^\\"'
    typst_compiler.compile(f'#eval({_quoted(forms["typst"])}, mode: "math")'.encode())


# every form says the same


def read_back(form: str, text: str) -> Decimal:
    """What a form with numbers gives when it is read back."""
    plain = text if form == "plain" else getattr(read_forms, form)(text)
    value = Reader(plain).read()
    assert isinstance(value, Decimal)
    return value


def same_in_all_forms(text: str, numbers: dict[str, Any], row: int | None) -> None:
    """The number that each printed form gives is the number the expression gives."""
    node = build(text)
    env = Env(numbers, DECIMALS, ROWS, row)
    try:
        expected = in_decimals(lambda: node.value(env))
    except (DivisionByZero, InvalidOperation, Overflow):
        assume(False)
    assume(abs(expected) < Decimal("1e20"))
    operands = {
        name: [Printed(shown(v), "kip") for v in value] if isinstance(value, list) else Printed(shown(value), "ft")
        for name, value in numbers.items()
    }
    forms = print_all(node, symbol, operands, Env(floats(numbers), FLOATS, ROWS, row))
    for name in FORMS:
        assert rounded(read_back(name, forms[name]), 12) == rounded(Decimal(expected), 12), (name, forms[name])


@given(SINGLE, values())
@settings(max_examples=300, deadline=None, derandomize=True)
def test_numbers_mean_the_same_in_every_form(text: str, numbers: dict[str, Any]) -> None:
    same_in_all_forms(text, numbers, None)


@given(OVER_ROWS, values(), st.integers(0, 2))
@settings(max_examples=300, deadline=None, derandomize=True)
def test_rows_mean_the_same_in_every_form(text: str, numbers: dict[str, Any], row: int) -> None:
    same_in_all_forms(text, numbers, row)
