"""12.9.1, what is declared: symbols and formulas of modal response spectrum analysis; those of one mode for mode n.

Knows expression, clause and how each was obtained. Must not know lines, nor how modes are found or combined.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol
from calckit.standards.asce7 import formulas
from calckit.standards.asce7.clauses import rule

SYMBOLS = (
    Symbol("r_min", "least share of the weight that the modes taken must have", sub="min"),
    Symbol("S_am", "design spectral acceleration of each mode, as a fraction of g", low=0, index="mode"),
    Symbol("C_sm", "modal response coefficient of each mode", low=0, sub="s,m", index="mode"),
    Symbol("V_m", "base shear of each mode", "force", index="mode"),
    Symbol("V_t", "base shear of the modes combined", "force", low=0, low_open=True),
    Symbol("F_xt", "lateral force at level x, modes combined", "force", sub="x,t"),
    Symbol("V_xt", "story shear below level x, modes combined", "force", sub="x,t"),
    Symbol("M_xt", "overturning moment at the base of the story below level x, modes combined", "moment", sub="x,t"),
    Symbol("delta_xt", "displacement of level x, modes combined", "displacement", sub="x,t"),
    Symbol("Delta_t", "story drift, modes combined", "displacement"),
    Symbol("f_V", "factor on the combined forces", low=1),
    Symbol("f_Delta", "factor on the combined displacements and drifts", low=1, sub="Δ"),
    Symbol("F_xd", "lateral force at level x, modal analysis, for design", "force", sub="x,d"),
    Symbol("V_xd", "story shear below level x, modal analysis, for design", "force", sub="x,d"),
    Symbol("M_xd", "overturning moment at the base of the story, modal analysis, for design", "moment", sub="x,d"),
    Symbol("delta_xd", "displacement of level x, modal analysis, for design", "displacement", sub="x,d"),
    Symbol("Delta_d", "story drift, modal analysis, for design", "displacement"),
    Symbol("q_x", "story shear of the modal analysis over the static one"),
)

_OF_MODE = (
    Symbol("C_sn", "modal response coefficient of mode n", sub="s,n"),
    Symbol("F_xn", "lateral force at level x in mode n", "force", sub="x,n"),
    Symbol("V_xn", "story shear below level x in mode n", "force", sub="x,n"),
    Symbol("M_xn", "overturning moment at the base of the story below level x in mode n", "moment", sub="x,n"),
    Symbol("delta_xn", "displacement of level x in mode n, amplified", "displacement", sub="x,n"),
    Symbol("Delta_n", "story drift in mode n", "displacement"),
)
OF_MODE = {symbol.name: symbol for symbol in _OF_MODE}
"""Symbols of a numbered series, one for each mode."""
SERIES = {*OF_MODE, "s_xn", "d_xn"}
"""Names in the formulas below that are numbered; s_xn and d_xn come with the modes."""

S_AM = Formula("S_am", formulas.S_A.text.replace("T_r", "T_m"), rule("12.9.1.2"),
               units=dict.fromkeys(("T_m", "T_0", "T_S", "T_L"), ("s", "s")))  # fmt: skip
C_SM = Formula("C_sm", "S_am/(R/I_e)", rule("12.9.1.2"))
V_M = Formula("V_m", "C_sm*W_m", rule("12.9.1.2"))

F_XN = Formula("F_xn", "C_sn*s_xn", rule("12.9.1.2"))
V_XN = Formula("V_xn", "above(F_xn)", rule("12.9.1.2"))
M_XN = Formula("M_xn", "above(V_xn*h_sx)", rule("12.9.1.2"))
DELTA_XN = Formula("delta_xn", "C_d*C_sn*d_xn/I_e", rule("12.9.1.2"))
DELTA_N = Formula("Delta_n", "delta_xn - below(delta_xn)", rule("12.9.1.2"))
STORY = (F_XN, V_XN, M_XN, DELTA_XN, DELTA_N)
"""What each mode gives at each level, in this order."""

F_V = Formula("f_V", "max(V/V_t, 1)", rule("12.9.1.4.1"))
F_DELTA = Formula("f_Delta", "max(C_sfloor1*W/V_t, 1)", rule("12.9.1.4.2"))
F_XD = Formula("F_xd", "f_V*F_xt", rule("12.9.1.4.1"))
V_XD = Formula("V_xd", "f_V*V_xt", rule("12.9.1.4.1"))
M_XD = Formula("M_xd", "f_V*M_xt", rule("12.9.1.4.1"))
DELTA_XD = Formula("delta_xd", "f_Delta*delta_xt", rule("12.9.1.4.2"))
DELTA_D = Formula("Delta_d", "f_Delta*Delta_t", rule("12.9.1.4.2"))
SCALED = {"F_xt": F_XD, "V_xt": V_XD, "M_xt": M_XD, "delta_xt": DELTA_XD, "Delta_t": DELTA_D}
"""What is scaled, if it was combined, and by which formula."""
Q_X = Formula("q_x", "V_xd/V_x", rule("12.9.1.4.1"))


def coefficient_of(number: int) -> Formula:
    """The modal response coefficient of one mode, from the list over modes.

    >>> coefficient_of(2).text
    'level(C_sm, "2")'
    """
    return Formula(f"C_s{number}", f'level(C_sm, "{number}")', C_SM.source)
