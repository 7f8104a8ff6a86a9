"""What Table 12.2-1 and its footnotes, and the period of wall structures, declare beyond the shared symbols.

Knows symbols and formulas of system footnotes (12.2.1, 12.2.5.4) and of eqs 12.8-9 and 12.8-10. Must not know lines.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule

SYMBOLS = (
    Symbol("Omega_0_less", "overstrength factor is taken 0.5 lower for flexible diaphragms (footnote of Table 12.2-1)",
           "words", choices=("yes", "no")),
    Symbol("Omega_0tab", "overstrength factor of the table", sub="0,tab", low=1, high=5),
    Symbol("height_rule", "which height limit is claimed: that of Table 12.2-1, the higher one of 12.2.5.4, or that of "
           "one-story steel ordinary braced frames, whose light roof the basis states", "words",
           choices=("table", "12.2.5.4", "one story")),
    Symbol("r_line", "largest share of the base shear that one line of the system carries, accidental torsion left out",
           sub="line", low=0, low_open=True, high=1),
    Symbol("A_B", "area of the base of the structure", "area", low=0, low_open=True),
    Symbol("D_i", "length of wall i", "length", low=0, low_open=True),
    Symbol("t_i", "thickness of the web of wall i", "displacement", low=0, low_open=True),
    Symbol("A_i", "web area of wall i", "area"),
    Symbol("A_ei", "web area of wall i, less for its slenderness", "area", sub="e,i"),
    Symbol("C_w", "coefficient of the walls for the approximate period", low=0, low_open=True),
    Symbol("C_q", "coefficient of the approximate period of wall structures", low=0, low_open=True, high=0.01),
)  # fmt: skip

OMEGA_0_LESS = Formula("Omega_0", "Omega_0tab - 0.5", rule("Table 12.2-1"))
A_I = Formula("A_i", "D_i*t_i", rule("12.8.2.1"))
A_EI = Formula("A_ei", "A_i/(1 + 0.83*(h_n/D_i)**2)", rule("12.8.2.1", "12.8-10"))
C_W = Formula("C_w", "100/A_B*total(A_ei)", rule("12.8.2.1", "12.8-10"))
T_A_WALLS = Formula(
    "T_a", "C_q/sqrt(C_w)*h_n", rule("12.8.2.1", "12.8-9"), units={"T_a": ("s", "s"), "h_n": ("ft", "ft")}
)
"""With h_n in ft in both unit sets: the metric coefficient recalled, 0.00058, does not give the same period."""
