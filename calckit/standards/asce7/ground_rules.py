"""What chapters 11, 20 and 21 of ASCE/SEI 7 declare beside the mapped values of 7-16.

Knows symbols and formulas of the 7-22 ground motion, of peak acceleration, of printed values set beside ours, of
ordinates of a study and of the reliefs by conditions. Must not know lines or the order of steps.
"""

from __future__ import annotations

import re

from calckit.core.formula import Formula
from calckit.core.record import Source
from calckit.core.symbol import Symbol
from calckit.standards.asce7 import formulas
from calckit.standards.asce7.clauses import rule, rule_of
from calckit.standards.asce7.symbols import SYMBOLS as EARLIER

COMPARED = ("F_a", "F_v", "S_MS", "S_M1", "S_DS", "S_D1", "T_0", "T_S", "F_PGA", "PGA_M")
"""What a printout may print that the kit works out as well."""


def _ordinate(name: str, meaning: str, sub: str = "") -> Symbol:
    return Symbol(name, f"{meaning}, as a fraction of g", sub=sub, low=0, high=5)


_GROUND = (
    Symbol("T_n", "period of a pasted ordinate", "time", low=0, high=30),
    _ordinate("S_aM", "risk-targeted ordinate at T_n", "a,M"),
    _ordinate("S_aC", "risk-targeted ordinate of class C at T_n", "a,C"),
    _ordinate("S_aCD", "risk-targeted ordinate of class CD at T_n", "a,CD"),
    _ordinate("S_aD", "risk-targeted ordinate of class D at T_n", "a,D"),
    _ordinate("S_an", "design ordinate at T_n", "a,n"),
    Symbol("p_n", "product of period in s and design ordinate"),
    _ordinate("S_amax", "largest design ordinate from 0.2 to 5 s", "a,max"),
    _ordinate("S_a1", "design ordinate at 1 s", "a,1"),
    Symbol("p_max", "largest product of period in s and design ordinate, from 1 s on"),
    _ordinate("S_DSo", "design ordinate for short periods, from the ordinates", "DS,ord"),
    _ordinate("S_D1o", "design ordinate at 1 s, from the ordinates", "D1,ord"),
    Symbol("T_lo", "period of the pasted ordinate at or below T_r", "time", low=0),
    _ordinate("S_alo", "design ordinate at T_lo", "a,lo"),
    Symbol("T_hi", "period of the next pasted ordinate", "time", low=0),
    _ordinate("S_ahi", "design ordinate at T_hi", "a,hi"),
    _ordinate("S_a10", "design ordinate at 10 s", "a,10"),
    _ordinate("S_aT", "design ordinate at the period T, of the multi-period spectrum", "a,T"),
    Symbol(
        "C_s_method", "which spectrum the seismic response coefficient is taken from (12.8.1.1 of 7-22)", "words",
        choices=("multi-period", "two-period"),
    ),
    Symbol("C_smulti", "seismic response coefficient, multi-period spectrum", sub="s,multi", low=0, high=5),
    _ordinate("PGA", "mapped peak ground acceleration"),
    Symbol("F_PGA", "site coefficient for peak ground acceleration", low=0, low_open=True, high=5),
    _ordinate("PGA_M", "peak ground acceleration adjusted for the site"),
)  # fmt: skip

_BESIDE = (
    Symbol("e_DSo", "difference of S_DS from the ordinates against S_DS in use, in %", sub="DS,ord"),
    Symbol("e_D1o", "difference of S_D1 from the ordinates against S_D1 in use, in %", sub="D1,ord"),
    Symbol("F_ag", "F_a of the general procedure, as 21.3 takes it", sub="a,gen"),
    Symbol("F_vg", "F_v of the general procedure, as 21.3 takes it", sub="v,gen"),
    _ordinate("S_MSg", "S_MS of the general procedure", "MS,gen"),
    _ordinate("S_M1g", "S_M1 of the general procedure", "M1,gen"),
    _ordinate("S_DSg", "S_DS of the general procedure", "DS,gen"),
    _ordinate("S_D1g", "S_D1 of the general procedure", "D1,gen"),
    Symbol("T_0g", "T_0 of the general procedure", "time", sub="0,gen"),
    Symbol("T_Sg", "T_S of the general procedure", "time", sub="S,gen"),
    _ordinate("S_ag", "design ordinate of the general procedure at T_n", "a,gen"),
)

_CONDITIONS = (
    Symbol(
        "liquefaction_exemption", "class F for liquefiable soil alone, and a period not above 0.5 s (20.3.1)", "words",
        choices=("yes", "no"),
    ),
    Symbol(
        "underlying_class", "class that the site would have without liquefaction", "words",
        choices=("A", "B", "BC", "C", "CD", "D", "DE", "E"),
    ),
    Symbol("T_F", "longest period for which the exemption of class F holds", "time"),
    Symbol(
        "category_basis", "which tables of 11.6 give the design category", "words",
        choices=("both tables", "S_DS alone"),
    ),
    Symbol("s_v", "largest distance between vertical elements under flexible diaphragms", "length", low=0),
    Symbol("s_vmax", "largest such distance for the category by S_DS alone", "length", sub="v,max"),
    Symbol("S_DS_limit", "limit on S_DS for C_s and E_v (12.8.1.3)", "words", choices=("taken", "not taken")),
    Symbol("N_grade", "stories above the lower of base and grade plane, mezzanines counted", low=1, high=200),
    _ordinate("S_DSlim", "design ordinate for short periods as limited for C_s and E_v", "DS,lim"),
)  # fmt: skip

_KNOWN = {symbol.name: symbol for symbol in (*EARLIER, *_GROUND)}
_PRINTED = tuple(
    Symbol(f"{name}pr", f"{_KNOWN[name].meaning}, as printed", _KNOWN[name].kind,
           sub=f"{_KNOWN[name].subscript},print".removeprefix(","), low=0, low_open=True)
    for name in COMPARED
)  # fmt: skip
_DIFFERENCES = tuple(
    Symbol(f"e_{name.replace('_', '')}", f"difference of the printed {name} from ours, in %", sub=name.replace("_", ""))
    for name in COMPARED
)

SYMBOLS = (*_GROUND, *_BESIDE, *_CONDITIONS, *_PRINTED, *_DIFFERENCES)

_S = ("s", "s")

# 11.4.5.1 of 7-22: multi-period spectrum
S_AM_ENVELOPE = Formula("S_aM", "max(S_aC, S_aCD, S_aD)", rule_of("ASCE 7-22", "11.4", obtained="found"))
S_AN = Formula("S_an", "2/3*S_aM", rule_of("ASCE 7-22", "11.4.5.1", obtained="memory, high"))
S_A_MULTI = Formula(
    "S_a",
    "S_alo + (S_ahi - S_alo)*(T_r - T_lo)/(T_hi - T_lo) if T_r <= 10 "
    "else S_a10*10/T_r if T_r <= T_L else S_a10*10*T_L/T_r**2",
    rule_of("ASCE 7-22", "11.4.5.1"),
    units=dict.fromkeys(("T_r", "T_lo", "T_hi", "T_L"), _S),
)
S_AT_LONG = Formula(
    "S_aT", "S_a10*10/T if T <= T_L else S_a10*10*T_L/T**2", rule_of("ASCE 7-22", "11.4.5.1"),
    units=dict.fromkeys(("T", "T_L"), _S),
)  # fmt: skip
C_S_MULTI = Formula("C_smulti", "S_aT/(R/I_e)", rule_of("ASCE 7-22", "12.8.1.1", obtained="found"))


def between(low: str, high: str) -> Formula:
    """S_a at the period T between two ordinates whose rows are named "0.5 s" and "0.75 s"."""
    a, b = low.removesuffix(" s"), high.removesuffix(" s")
    at_a, at_b = f'level(S_an, "{low}")', f'level(S_an, "{high}")'
    text = f"{at_a} + ({at_b} - {at_a})*(T - {a})/({b} - {a})"
    return Formula("S_aT", text, rule_of("ASCE 7-22", "11.4.5.1", obtained="memory, high"), units={"T": _S})


# 11.8.3 peak ground acceleration
PGA_M = Formula("PGA_M", "F_PGA*PGA", rule("11.8.3", "11.8-1"))

# 21.4 design ordinates from a spectrum
P_N = Formula("p_n", "T_n*S_an", rule("21.4"), units={"T_n": _S})
S_DS_ORDINATES = Formula("S_DSo", "0.90*S_amax", rule("21.4"))
S_D1_ORDINATES = Formula("S_D1o", "p_max", rule("21.4"))
S_D1_ORDINATES_22 = Formula("S_D1o", "max(0.90*p_max, S_a1)", rule_of("ASCE 7-22", "21.4"))


def in_row(result: str, column: str, row: str, source: Source) -> Formula:
    """The entry of a column in a named row, as a line of its own."""
    return Formula(result, f'level({column}, "{row}")', source)


# differences, in %
BESIDE = Source("comparison of two ways to a value")


def difference(result: str, other: str, ours: str) -> Formula:
    """How far another value is from ours, in % of ours."""
    return Formula(result, f"100*({other}/{ours} - 1)", BESIDE)


def _renamed(formula: Formula, source: Source, **names: str) -> Formula:
    """A declared formula for other symbols: what it says of S_DS, said of S_DSlim."""
    pattern = re.compile(rf"\b({'|'.join(names)})\b")

    def other(text: str) -> str:
        return pattern.sub(lambda match: names[match[0]], text)

    units = {other(name): pair for name, pair in formula.units.items()} if formula.units else None
    return Formula(other(formula.result), other(formula.text), source, units)


# 21.3, 21.4 floor of a site-specific spectrum: 80 % of the general procedure
_GENERAL = {name: f"{name}g" for name in ("F_a", "F_v", "S_MS", "S_M1", "S_DS", "S_D1", "T_0", "T_S", "S_a")}
_FLOOR = rule("21.3", obtained="memory, medium")
S_MS_GENERAL, S_M1_GENERAL, S_DS_GENERAL, S_D1_GENERAL, T_0_GENERAL, T_S_GENERAL = (
    _renamed(each, _FLOOR, **_GENERAL)
    for each in (formulas.S_MS, formulas.S_M1, formulas.S_DS, formulas.S_D1, formulas.T_0, formulas.T_S)
)
S_A_GENERAL = _renamed(formulas.S_A, _FLOOR, **_GENERAL, T_r="T_n")
S_DS_OF_PRINTOUT = Formula("S_DSg", "2/3*S_MS", rule_of("ASCE 7-22", "21.4"))
S_D1_OF_PRINTOUT = Formula("S_D1g", "2/3*S_M1", rule_of("ASCE 7-22", "21.4"))

# 12.8.1.3 limit on S_DS
S_DS_LIMITED = Formula("S_DSlim", "max(min(S_DS, 1.0), 0.70*S_DS)", rule("12.8.1.3"))
_LIMITED = rule("12.8.1.3")
C_S_BASIC_LIMITED = _renamed(formulas.C_S_BASIC, _LIMITED, S_DS="S_DSlim")
C_S_FLOOR_LIMITED = _renamed(formulas.C_S_FLOOR, _LIMITED, S_DS="S_DSlim")
