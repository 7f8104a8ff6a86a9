"""A user's own lines and checks that cannot be: each message names the line, the part that is wrong and the cure."""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import Any

import pytest

from calckit import Calc
from calckit.errors import ExpressionError, InputError, ScopeError, UnitError, UnknownNameError
from tests.refusals import UNITS, refused


@pytest.fixture
def calc() -> Calc:
    """A calculation with one document."""
    made = Calc(project="Bad lines")
    made.document("S-201", title="Framing elevations")
    return made


PIECES = r"write numbers, names, \+ - \* / \*\*, comparisons, a if c else b and functions"


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("V^2", r"'V\^2' is not read; write \*\* for a power, not \^"),
        ("V.upper()", r"'V\.upper\(\)' is not read; " + PIECES),
        ("'abc'", "only numbers may stand as constants"),
        ("f'{V}'", PIECES),
        ("lambda: 1", "'lambda: 1' is not read; " + PIECES),
        ("[v for v in V]", r"'\[v for v in V\]' is not read; " + PIECES),
        ("{V}", PIECES),
        ("(V, V)", PIECES),
        ("V[0]", PIECES),
        ("a.b.c", PIECES),
        ("not V", PIECES),
        ("+V", PIECES),
        ("V and V", PIECES),
        ("V // 2", PIECES),
        ("V @ V", PIECES),
        ("V is V", PIECES),
        ("1 if V else 2", PIECES),
        ("V if 1 < V < 3 else 2", "'1 < V < 3' is not read"),
        ("2*(V > 1)", r"'V > 1' is not read; a comparison stands alone in a check, or between if and else"),
        ("max(V > 1, 2)", "'V > 1' is not read; a comparison stands alone"),
        ("V > V", "line 'Q_1': 'V > V' is a relation; write it with check"),
        ("f(V)", r"'f\(V\)' is not read; functions are above, abs, below, cos, exp, level"),
        ("sqr(V)", "functions are sqrt, "),
        ("__import__('os')", "functions are"),
        ("open('x')", "functions are"),
        ("eval('1')", "functions are"),
        ("sqrt(V, V)", r"'sqrt\(V, V\)' is not read; sqrt takes 1 argument"),
        ("max(V)", "max takes two or more arguments"),
        ("max(V, key=V)", PIECES),
        ("max(*V)", "max takes two or more arguments"),
        ("level(F_x, 5)", r'name the level in quotes, as in level\(F_x, "5"\)'),
        ("1j*V", "only numbers may stand as constants"),
        ("True", "only numbers may stand as constants"),
        ("None", "only numbers may stand as constants"),
        ("0x10*V", "'0x10' is not read; write numbers in plain digits, such as 1250 or 0.25"),
        ("1_000*V", "'1_000' is not read; write numbers in plain digits"),
        ("V +", "expression 'V \\+': invalid syntax at character"),
        ("V := 2", "invalid syntax at character"),
        ("V; V", "invalid syntax at character"),
        ("", "expression '': invalid syntax"),
    ],
)
def test_expression(calc: Calc, text: str, message: str) -> None:
    calc.given("V", "10 kip", source="S-201")
    refused(calc, ExpressionError, message, lambda: calc.line("Q_1", text, unit="kip", meaning="a line"))


def test_unit_of_a_users_line(calc: Calc) -> None:
    calc.given("V", "10 kip", source="S-201")
    calc.given("h_n", "62 ft", source="S-201")

    def line(text: str, unit: str) -> Callable[[], Any]:
        return lambda: calc.line("M_r", text, unit=unit, meaning="rough moment")

    message = r"M_r: needed a unit of the kind of the right-hand side, not kip; given force\*length from V\*h_n; cure"
    refused(calc, UnitError, message, line("V*h_n", "kip"))
    refused(calc, UnitError, r"not a plain number; given force\*length", line("V*h_n", ""))
    refused(calc, UnitError, rf"kNm: needed a unit the kit knows; given 'kNm'; cure: {UNITS}", line("V*h_n", "kNm"))
    refused(
        calc, ExpressionError, r"^M_r = V \+ h_n: sum of unlike quantities: force and length", line("V + h_n", "kip")
    )
    refused(calc, ExpressionError, "comparison of unlike quantities: force and length", line("max(V, h_n)", "kip"))
    refused(calc, ExpressionError, "comparison of unlike", line("V if V == h_n else V", "kip"))
    refused(calc, ExpressionError, "sqrt|power with an exponent of unlike", line("V**h_n", "kip"))
    refused(calc, ExpressionError, "log of unlike quantities: force and a plain number", line("V*log(V)", "kip"))


@pytest.mark.parametrize(
    ("text", "unit", "cure"),
    [("h_n", "cm", "m"), ("T_L", "ms", "s"), ("V", "MN", "kN"), ("V/a_0", "kg", r"kN\*s\*\*2/m"),
     ("a_0", "g", r"ft/s\*\*2"),
     ("V/a_0", "slug", r"kip\*s\*\*2/ft"), ("V/h_n", "kN/in", "kN/m"), ("h_n*h_n", "ft*in", r"in\*\*2"),
     ("V*h_n", "kN*cm", r"kN\*m")],
)  # fmt: skip
def test_unit_that_would_hide_a_factor(calc: Calc, text: str, unit: str, cure: str) -> None:
    # operands print in one coherent set, so a result in such a unit would be wrong by the factor between them
    for name, value in (("V", "10 kip"), ("h_n", "62 ft"), ("T_L", "8 s")):
        calc.given(name, value, source="S-201")
    calc.given("a_0", "1 g", source="S-201", meaning="acceleration")
    message = (
        rf"Q_1: needed a unit that needs no factor beside the operands' units; given .*; cure: write unit=\"{cure}\""
    )
    refused(calc, UnitError, message, lambda: calc.line("Q_1", text, unit=unit, meaning="a line"))


def test_operand_that_is_not_there(calc: Calc) -> None:
    calc.given("V", "10 kip", source="S-201")
    message = r"Q_1 \(a line\): .*h_nn: needed a number; given nothing; cure: supply it .*, or did you mean .*h_n"
    refused(calc, InputError, message, lambda: calc.line("Q_1", "V*h_nn", unit="kip", meaning="a line"))
    refused(
        calc,
        UnknownNameError,
        "check 'Own': symbol 'V_q' is not known",
        lambda: calc.check("V_q", "<=", "V", title="Own"),
    )
    calc.given("T_analysis", "none: model not run", source="S-201")
    message = "T_analysis .*: needed a number in s; given none: model not run; cure: supply it with"
    refused(calc, InputError, message, lambda: calc.line("Q_1", "T_analysis", unit="s", meaning="a line"))


def test_value_that_does_not_exist(calc: Calc) -> None:
    calc.given("V", "10 kip", source="S-201")
    for text, reason in (
        ("V/(V - V)", "division by zero"),
        ("V*log(0)", ""),
        ("V*(0-1)**0.5", ""),
        ("V*10**308", "not finite"),
    ):
        message = rf"^Q_1 = {re.escape(text)}: .*{reason}"
        refused(calc, ScopeError, message, lambda text=text: calc.line("Q_1", text, unit="kip", meaning="a line"))


def test_check(calc: Calc) -> None:
    calc.given("V", "10 kip", source="S-201")
    calc.given("h_n", "62 ft", source="S-201")
    refused(
        calc, ExpressionError, "a check takes <, <=, >= or >, not ==", lambda: calc.check("V", "==", "V", title="Own")
    )
    message = "check 'Own', V <= h_n: comparison of unlike quantities: length and force"
    refused(calc, ExpressionError, message, lambda: calc.check("V", "<=", "h_n", title="Own"))


def test_list_where_one_number_is_needed(calc: Calc) -> None:
    calc.levels("level, h_x [ft], w_x [kip]\n2, 24, 10\n1, 12, 20", source="S-201")
    message = r"level '9' is not known; levels are 2, 1"
    refused(calc, ExpressionError, message, lambda: calc.line("Q_1", 'level(w_x, "9")', unit="kip", meaning="a line"))
