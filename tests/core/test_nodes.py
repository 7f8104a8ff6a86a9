"""Parser and nodes: names, values in every arithmetic, slopes against sympy, one-sided slopes at ties."""

from __future__ import annotations

import ast
import math
import random
from decimal import Decimal
from typing import Any

import pytest
import sympy
from hypothesis import assume, given, settings

from calckit.core.formula import Formula
from calckit.core.nodes import Env, Quotient, Ref, build
from calckit.core.numbers import DECIMALS, DIMENSIONS, FLOATS, Dimensioned, Dual, in_decimals
from calckit.core.parser import parse
from calckit.core.record import Source
from calckit.errors import ExpressionError
from tests.core.expressions import OVER_ROWS, ROWS, SCALARS, SINGLE, floats, values

OWN = Source("own formula")
EXPRESSIONS = [
    "C_t*h_n**x", "S_DS/(R/I_e)", "S_D1*T_L/(T**2*(R/I_e))", "a - b - c/d", "-a**2 + (-b)**2", "a/b/c*d", "2/3*a + 0.5",
    "sqrt(a*b)/c", "exp(-a/b)", "log(a)*b", "sin(a)*cos(b) + tan(c)", "abs(a - b)*c", "a**(b/c)", "a**b**0.5",
    "min(a*b, c)", "max(a, b/c, 0.01)", "max(min(a, b), c*d)", "a if b < c else d*a",
    "1 if a <= 0.5 else 2 if a >= 2.5 else 1 + (a - 0.5)/(2.5 - 0.5)",
]  # fmt: skip


# parser


def test_names_in_order_of_appearance() -> None:
    assert parse("b*a + X.V - b + total(w_x)*level(F_x, \"5\")").names == ("b", "a", "X.V", "w_x", "F_x")


def test_literals_keep_their_text() -> None:
    parsed = parse("0.50*a + 2")
    literals = [node for node in ast.walk(parsed.tree) if isinstance(node, ast.Constant)]
    assert sorted(parsed.literal(node) for node in literals) == ["0.50", "2"]


def test_surrounding_blanks_do_not_matter() -> None:
    assert parse("  a +  b ").text == "a +  b"
    assert build("a + b").value(Env({"a": 1.0, "b": 2.0}, FLOATS)) == 3.0


def test_parsing_the_text_again_gives_the_same_tree() -> None:
    for text in EXPRESSIONS:
        assert ast.dump(parse(text).tree) == ast.dump(ast.parse(text, mode="eval").body)


# nodes


def test_layout_is_kept() -> None:
    node = build("S_DS/(R/I_e)")
    assert isinstance(node, Quotient)
    assert [type(arg).__name__ for arg in node.args] == ["Ref", "Quotient"]
    assert isinstance(node.args[0], Ref)
    assert [type(arg).__name__ for arg in build("a*b*c").args] == ["Ref", "Ref", "Ref"]
    assert [type(arg).__name__ for arg in build("b + a - b").args] == ["Ref", "Ref", "Negative"]
    assert build("b*a") != build("a*b")


def point(names: tuple[str, ...], seed: int) -> dict[str, float]:
    """A number for each name."""
    numbers = random.Random(seed)
    return {name: numbers.uniform(0.3, 3.0) for name in names}


@pytest.mark.parametrize("text", EXPRESSIONS)
def test_value_and_slope_agree_with_sympy(text: str) -> None:
    formula = Formula("q", text, OWN)
    plain = formula.node.plain()
    for seed in range(8):
        at = point(formula.names, seed)
        numbers = {sympy.Symbol(name, positive=True): sympy.Float(value, 30) for name, value in at.items()}
        exact = float(plain.subs(numbers).evalf(20))
        assert formula.value(at) == pytest.approx(exact, rel=1e-12)
        in_decimal = Env({name: Decimal(value) for name, value in at.items()}, DECIMALS)
        assert float(in_decimals(lambda env=in_decimal: formula.node.value(env))) == pytest.approx(exact, rel=1e-12)
        for name in formula.names:
            slope = float(plain.diff(sympy.Symbol(name, positive=True)).subs(numbers).doit().evalf(20))
            for side in (1, -1):
                assert formula.slope(at, name, side) == pytest.approx(slope, rel=1e-9, abs=1e-12), (name, seed)


@given(SINGLE, values())
@settings(max_examples=200, deadline=None, derandomize=True)
def test_floats_and_decimals_agree(text: str, numbers: dict[str, Any]) -> None:
    node = build(text)
    try:
        exact = in_decimals(lambda: node.value(Env(numbers, DECIMALS)))
        value = node.value(Env(floats(numbers), FLOATS))
    except (ArithmeticError, ValueError):
        assume(False)
    assume(abs(exact) > Decimal("1e-6"))
    assume(abs(value) < 1e12)
    # a branch may fall either way where its sides differ by rounding alone
    if not math.isclose(value, float(exact), rel_tol=1e-7, abs_tol=1e-7):
        assert " if " in text


@given(OVER_ROWS, values())
@settings(max_examples=100, deadline=None, derandomize=True)
def test_every_row_is_worked(text: str, numbers: dict[str, Any]) -> None:
    node = build(text)
    for row in range(len(ROWS)):
        try:
            value = node.value(Env(floats(numbers), FLOATS, ROWS, row))
        except (ArithmeticError, ValueError):
            continue
        assert isinstance(value, float | complex) or value == int(value)


def test_sums_over_levels() -> None:
    numbers = {"F": [5.0, 3.0, 2.0], "h": [30.0, 20.0, 10.0], "f": 2.0}

    def row(text: str, place: int | None) -> float:
        return float(build(text).value(Env(numbers, FLOATS, ROWS, place)))

    assert row("total(F*h)", None) == 230
    assert [row("above(F)", i) for i in range(3)] == [5, 8, 10]
    assert [row("below(F)", i) for i in range(3)] == [3, 2, 0]
    assert [row("F - below(F)", i) for i in range(3)] == [2, 1, 2]
    assert row('level(F, "3") + f', None) == 5
    assert [row("above(above(F))", i) for i in range(3)] == [5, 13, 23]
    assert [row('level(above(F), "2")/total(F)', i) for i in range(3)] == [1, 1, 1]


@pytest.mark.parametrize(
    ("text", "message"),
    [("F", "F is a list over levels: use total"), ("above(F)", r"above\(...\) needs a level"),
     ("below(F)", r"below\(...\) needs a level"), ('level(F, "9")', "level '9' is not known; levels are Roof, 3, 2")],
)  # fmt: skip
def test_list_without_a_row(text: str, message: str) -> None:
    with pytest.raises(ExpressionError, match=message):
        build(text).value(Env({"F": [1.0, 2.0, 3.0]}, FLOATS, ROWS))


# slopes


def test_one_sided_slopes_at_ties() -> None:
    def both(text: str, at: dict[str, float], name: str) -> tuple[float, float]:
        formula = Formula("q", text, OWN)
        return formula.slope(at, name, 1), formula.slope(at, name, -1)

    assert both("min(a, b)", {"a": 1.0, "b": 1.0}, "a") == (0, 1)
    assert both("max(a, b)", {"a": 1.0, "b": 1.0}, "a") == (1, 0)
    assert both("max(a, 2*b, 3*c)", {"a": 6.0, "b": 3.0, "c": 2.0}, "c") == (3, 0)
    assert both("min(2*a, a + 1)", {"a": 1.0}, "a") == (1, 2)
    assert both("abs(a - b)", {"a": 1.0, "b": 1.0}, "a") == (1, -1)
    # k of ASCE/SEI 7-16 12.8.3: flat below 0.5 s, rising to 2.5 s, flat above
    k = "1 if T <= 0.5 else 2 if T >= 2.5 else 1 + (T - 0.5)/(2.5 - 0.5)"
    assert both(k, {"T": 0.5}, "T") == (0.5, 0)
    assert both(k, {"T": 2.5}, "T") == (0, 0.5)
    assert both(k, {"T": 1.0}, "T") == (0.5, 0.5)


def test_slope_of_a_list_is_that_of_a_common_shift() -> None:
    formula = Formula("q", "total(F*h)/total(F)", OWN)
    at = {"F": [5.0, 3.0, 2.0], "h": [30.0, 20.0, 10.0]}
    assert formula.slope(at, "h", rows=ROWS) == pytest.approx(1.0)
    step = 1e-6
    moved = formula.value(at | {"F": [f + step for f in at["F"]]}, ROWS) - formula.value(at, ROWS)
    assert formula.slope(at, "F", rows=ROWS) == pytest.approx(moved / step, rel=1e-5)


@pytest.mark.parametrize("name", SCALARS)
def test_slope_against_differences(name: str) -> None:
    formula = Formula("q", "sqrt(a**2 + b**2)*exp(-T_a/h_n) + log(h_n)*abs(b)**T_a", OWN)
    at = {"a": 1.25, "b": -0.75, "T_a": 1.5, "h_n": 2.0}
    step = 1e-5
    ahead, behind = formula.value(at | {name: at[name] + step}), formula.value(at | {name: at[name] - step})
    assert formula.slope(at, name) == pytest.approx((ahead - behind) / (2 * step), rel=1e-8)


def test_dual_numbers_order_equal_values_by_slope() -> None:
    assert Dual(1.0, 2.0) > Dual(1.0, 1.0) and Dual(1.0, 1.0) <= Dual(1.0, 1.0) and Dual(2.0, 0.0) >= Dual(1.0, 9.0)


# kinds of quantity


def test_kinds_are_worked_through_an_expression() -> None:
    force, length = Dimensioned(2.0, (1.0, 1.0, -2.0)), Dimensioned(3.0, (0.0, 1.0, 0.0))
    env = Env({"V": force, "h": length, "n": Dimensioned(2.0)}, DIMENSIONS)
    assert build("V*h/2 + V*(h - 0.5*h)").value(env).kind() == "force*length"
    assert build("sqrt(h*h)").value(env).kind() == "length"
    assert build("h**0.5*h**1.5").value(env).kind() == "length**2"
    assert build("V/V").value(env).kind() == "a plain number"
    for text in ("V + h", "V - h", "max(V, h)", "V if h > V else h", "h**h", "exp(h)", "V if V == h else V"):
        with pytest.raises(ExpressionError, match="of unlike"):
            build(text).value(env)


# formulas


def test_formula_builds_no_node_before_it_is_used() -> None:
    formula = Formula("q", "a*b", OWN)
    assert formula.names == ("a", "b") and formula._cache == {}
    assert formula.node is formula.node


def test_sums_of_decimals_carry_forty_digits() -> None:
    third = in_decimals(lambda: build("1/3").value(Env({}, DECIMALS)))
    assert str(third) == "0." + "3" * 40
