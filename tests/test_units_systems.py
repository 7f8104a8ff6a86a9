"""One building in every unit: the same results under one declaration, and the two declarations close together."""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

import pytest
import sympy

from calckit import Calc, units
from calckit.core import work
from calckit.core.book import Cell, Entry
from calckit.core.formula import Formula
from calckit.core.record import Line, Record
from calckit.core.standard import edition
from calckit.core.symbol import KINDS, Symbol
from calckit.methods import symbols as methods_symbols
from calckit.standards.asce7 import modal_rules
from calckit.standards.asce7.declared import FORMULAS
from tests.building import Building, metric

ONE_DECLARATION = 1e-12
TWO_DECLARATIONS = 1e-3

EMPIRICAL_COLUMNS = {"C_t", "wh_x", "sum_wh"}
"""Coefficients printed for feet and for meters, and sums of kip ft^k and of kN m^k: other numbers by their nature."""
RESIDUAL = "sum_of_lateral_forces_equals_base_shear"
"""A check whose ratio is what rounding to 12 digits leaves: nothing to compare, only to be small."""


def results(record: Record) -> dict[str, tuple[list[float], str]]:
    """The numbers of every line, with their unit."""
    found = {}
    for line in record.lines:
        numbers = line.value if isinstance(line.value, list) else [line.value]
        if all(isinstance(number, int | float) for number in numbers):
            found[line.id] = ([float(number) for number in numbers if number is not None], line.unit)
    return found


def compared(first: Record, second: Record) -> Iterator[tuple[str, float, float]]:
    """Every result of the first calculation beside that of the second, in the first one's unit."""
    other = results(second)
    assert other.keys() == results(first).keys()
    for id_, (numbers, unit) in results(first).items():
        its, its_unit = other[id_]
        yield from ((id_, a, units.convert(b, its_unit, unit)) for a, b in zip(numbers, its, strict=True))


def apart(first: Record, second: Record, tolerance: float) -> list[tuple[str, float, float]]:
    """The results that differ by more than the tolerance."""
    return [
        (id_, a, b)
        for id_, a, b in compared(first, second)
        if id_.rpartition(".")[2] not in EMPIRICAL_COLUMNS and abs(a - b) > tolerance * max(abs(a), abs(b))
    ]


@pytest.mark.parametrize("system", ["US", "SI"])
@pytest.mark.parametrize("second", [False, True], ids=["first pass", "second pass"])
def test_typed_in_either_system_under_one_declaration(system: str, second: bool) -> None:
    typed_us, typed_si = Building(second=second), metric(Building(second=second))
    assert typed_si.givens["h_n"] == "24.384 m" and "w_x [kN]" in typed_si.columns
    first, other = typed_us.record(units=system), typed_si.record(units=system)
    assert len(list(compared(first, other))) > 130
    assert apart(first, other, ONE_DECLARATION) == []
    # the declaration is the same, so empirical columns agree too
    assert [id_ for id_, a, b in compared(first, other) if abs(a - b) > ONE_DECLARATION * max(abs(a), abs(b))] == []
    assert [line.verdict for line in first.lines] == [line.verdict for line in other.lines]


def test_two_declarations_agree_within_a_thousandth() -> None:
    us, si = Building().record(units="US"), Building().record(units="SI")
    assert len(list(compared(us, si))) > 130
    assert [found for found in apart(us, si, TWO_DECLARATIONS) if not found[0].endswith(RESIDUAL)] == []
    assert all(abs(float(r.line(f"{part}.{RESIDUAL}").value)) < 1e-6 for r in (us, si) for part in ("X", "Y"))
    # and they are two: the printed coefficients differ
    assert (us.line("X.C_t").value, si.line("X.C_t").value) == (0.028, 0.0724)
    assert us.line("X.T_a").value != si.line("X.T_a").value


def test_the_unit_set_picks_declaration_and_display() -> None:
    typed_si = metric(Building()).record(units="US")
    assert (typed_si.line("X.V").unit, typed_si.line("X.drift").inputs["X.Delta"].unit) == ("kip", "in")
    assert typed_si.line("X.T_a").inputs["h_n"].shown == "24.384 m = 80.00 ft"
    assert "h_n = 24.384 m = 80.00 ft" in typed_si.line("X.T_a").detail
    typed_us = Building().record(units="SI")
    assert (typed_us.line("X.V").unit, typed_us.line("X.Delta").unit) == ("kN", "mm")
    assert typed_us.line("X.T_a").inputs["h_n"].shown == "80 ft = 24.384 m"


# every formula with its operands in every unit

MIXED = {
    "length": ("ft", "in", "m", "mm"),
    "displacement": ("in", "ft", "mm", "m"),
    "force": ("kip", "lb", "kN", "N"),
    "time": ("s", "ms", "s", "ms"),
    "moment": ("kip*ft", "lb*in", "kN*m", "N*mm"),
    "area": ("ft**2", "in**2", "m**2", "mm**2"),
    "stiffness": ("kip/in", "kip/ft", "kN/mm", "N/m"),
    "line load": ("kip/ft", "plf", "kN/m", "N/mm"),
}
OF_MODE = {**modal_rules.OF_MODE, **methods_symbols.OF_MODE}
SYMBOLS = {**edition("ASCE 7-16").symbols, **OF_MODE}
LISTS = {"w_x", "h_x", "h_sx", "wh_x", "C_vx", "F_x", "V_x", "delta_xe", "delta_x", "Delta", "P_x", "T_r", "A_ei",
         "T_m", "W_m", "S_am", "C_sm", "V_xd", "s_xn", "d_xn", "F_xn", "V_xn", "delta_xn",
         "F_xt", "V_xt", "M_xt", "delta_xt", "Delta_t"}  # fmt: skip
LISTS |= {f"{d}{case}" for d in ("d_1", "d_2", "D_1", "D_2") for case in ("plus", "minus")}
LISTS |= {"K_d", "K_s", "K_1", "K_2", "b_s", "V_ys", "q_s"}
LISTS |= {"x_i", "y_i", "k_ix", "k_iy", "V_ax", "V_ay", "b_i", "L_s", "d_s", "V_dirx", "V_diry"}
ROWS = ["Roof", "3", "2"]


def entry(symbol: Symbol, unit: str, number: int) -> Entry:
    """A line for an operand, its value fixed by the symbol and converted to `unit`."""
    own = symbol.unit("US")
    base = [1.0 + 0.1375 * number, 1.0 + 0.1125 * number, 1.0 + 0.0875 * number]
    values = [units.convert(value, own, unit) for value in base]
    value: Any = values if symbol.name in LISTS else values[0]
    rows = ROWS if symbol.name in LISTS else []
    line = Line(symbol.name, "computed", symbol.name, symbol.meaning, value, unit, "", rows=rows)
    return Entry(line, Cell("test", 0), None, 4)


def worked(formula: Formula, choice: int) -> tuple[list[float], str]:
    """The values of a formula, before rounding, with every operand typed in its unit number `choice`."""
    calc = Calc(project="Units")
    calc.own_symbols |= OF_MODE
    operands = {}
    for number, name in enumerate(formula.names, 1):
        symbol = SYMBOLS[name]
        place = (choice + number) % 4 if choice else 0
        operands[name] = entry(symbol, MIXED.get(symbol.kind, (symbol.unit("US"),) * 4)[place], number)
    line = work.compute(calc, formula, typed=operands).line
    inputs = work.gather(calc, formula, line.unit, operands)
    rows = range(len(line.rows)) if line.rows else (None,)
    return [formula.value(inputs.values, inputs.rows, row) for row in rows], line.unit


@pytest.mark.parametrize("name", FORMULAS)
def test_formula_with_every_unit_mixed(name: str) -> None:
    formula = FORMULAS[name]
    expected, unit = worked(formula, 0)
    for choice in (1, 2, 3):
        obtained, own = worked(formula, choice)
        assert own == unit
        assert obtained == pytest.approx(expected, rel=ONE_DECLARATION, abs=0)


def test_units_are_mixed_in_earnest() -> None:
    # the alternatives reach formulas whose operands have a unit: most of chapter 12 past the coefficients
    united = [name for name, formula in FORMULAS.items() if any(SYMBOLS[n].kind in MIXED for n in formula.names)]
    assert len(united) > 20 and {"THETA", "DELTA_A", "V", "WH_X", "T_A_TABLE", "M_X"} <= set(united)


# homogeneous, or marked empirical


def degrees(expr: sympy.Expr, scales: dict[sympy.Symbol, sympy.Expr]) -> sympy.Expr:
    """What an expression is multiplied by when every symbol is multiplied by its scale.

    Branches (largest, smallest, cases) must share one factor, and so must both sides of a condition. Raises
    AssertionError if there is no such factor.
    """
    branching = [node for node in expr.atoms(sympy.Max, sympy.Min, sympy.Piecewise) if node != expr]
    if isinstance(expr, sympy.Max | sympy.Min):
        factors = {degrees(arg, scales) for arg in expr.args}
        assert len(factors) == 1, f"{expr}: branches of unlike kind {factors}"
        return factors.pop()
    if isinstance(expr, sympy.Piecewise):
        for _, condition in expr.args:
            sides = {degrees(side, scales) for side in condition.args} if condition != sympy.true else {1}
            assert len(sides) == 1, f"{condition}: sides of unlike kind"
        factors = {degrees(value, scales) for value, _ in expr.args if value != 0}  # nothing is of every kind
        assert len(factors) == 1, f"{expr}: branches of unlike kind {factors}"
        return factors.pop()
    extended = dict(scales)
    for node in branching:
        stand_in = sympy.Dummy(positive=True)
        extended[stand_in] = degrees(node, scales)
        expr = expr.subs(node, stand_in)
    scaled = expr.subs({symbol: symbol * scale for symbol, scale in extended.items()}, simultaneous=True)
    ratio = sympy.simplify(scaled / expr)
    assert not ratio.free_symbols & set(extended), f"{expr} is not homogeneous: {ratio}"
    return ratio


MASS, LENGTH, TIME = sympy.symbols("mass length time", positive=True)


def scale(unit: str) -> sympy.Expr:
    """The product of powers of the scales of mass, length and time for a unit."""
    mass, length, time = (sympy.nsimplify(power) for power in units.powers(unit))
    return sympy.Mul(MASS**mass, LENGTH**length, TIME**time)


def unit_of(name: str) -> str:
    """The SI unit of a symbol."""
    return SYMBOLS[name].unit("SI")


@pytest.mark.parametrize("name", [name for name, formula in FORMULAS.items() if not formula.units])
def test_formula_is_homogeneous(name: str) -> None:
    # the value one level down is another number of the same kind: a symbol of its own
    own = FORMULAS[name]
    formula = Formula(own.result, re.sub(r"below\((\w+)\)", r"\1below", own.text), own.source)
    scales = {sympy.Symbol(n, positive=True): scale(unit_of(n.removesuffix("below"))) for n in formula.names}
    factor = degrees(formula.node.plain(), scales)
    assert sympy.simplify(factor / scale(unit_of(formula.result))) == 1


def test_proof_refuses_what_is_not_homogeneous() -> None:
    a, b = sympy.symbols("a b", positive=True)
    scales = {a: LENGTH, b: TIME}
    assert degrees(a**2 / b + sympy.Max(a, 2 * a) * a / b, scales) == LENGTH**2 / TIME
    with pytest.raises(AssertionError, match="not homogeneous"):
        degrees(a + b, scales)
    with pytest.raises(AssertionError, match="unlike kind"):
        degrees(sympy.Min(a, b), scales)
    with pytest.raises(AssertionError, match="unlike kind"):
        degrees(sympy.Piecewise((a, a > b), (2 * a, True)), scales)


@pytest.mark.parametrize("name", [name for name, formula in FORMULAS.items() if formula.units])
def test_empirical_formula_states_the_unit_of_each_symbol(name: str) -> None:
    formula = FORMULAS[name]
    assert formula.units
    united = {n for n in (formula.result, *formula.names) if unit_of(n)}
    assert united <= set(formula.units), "a symbol with a unit is left out"
    for n, pair in formula.units.items():
        assert n in (formula.result, *formula.names)
        assert all(units.same_kind(unit, unit_of(n)) for unit in pair)
    # it is marked because it has to be: scaled units would change it
    scales = {sympy.Symbol(n, positive=True): scale(unit_of(n)) for n in formula.names}
    try:
        factor = degrees(formula.node.plain(), scales)
    except AssertionError:
        return
    assert sympy.simplify(factor / scale(unit_of(formula.result))) != 1


def test_both_declarations_of_an_empirical_formula_are_coherent() -> None:
    # T_a = C_t h_n^x with h_n in feet, C_t 0.028, and in meters, C_t 0.0724 (ASCE/SEI 7-16 Table 12.8-2, from memory)
    formula = FORMULAS["T_A_TABLE"]
    for height in (10.0, 80.0, 400.0):
        us = formula.value({"C_t": 0.028, "h_n": height, "x": 0.8})
        si = formula.value({"C_t": 0.0724, "h_n": units.convert(height, "ft", "m"), "x": 0.8})
        assert si == pytest.approx(us, rel=TWO_DECLARATIONS)


def test_kinds_pair_units_of_one_kind() -> None:
    for us, si in KINDS.values():
        assert units.same_kind(us, si)
