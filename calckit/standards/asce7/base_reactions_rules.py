"""What ASCE/SEI 7 says of reactions at the base and of overturning at the soil: symbols and formulas.

Knows expression, clause and how each was obtained. Must not know lines or the order of steps.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.record import Source
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule

STATICS = Source("statics")
SYMBOLS = (
    Symbol(
        "overturning_reduced",
        "the overturning moment at the soil is reduced by 25 %: equivalent lateral forces, no inverted pendulum and no "
        "cantilevered columns",
        "words", choices=("yes", "no"),
    ),
    Symbol("soil_vertical_effect", "whether E_v is counted in the uplift check at the soil (it may be left out there)",
           "words", choices=("counted", "left out")),
    Symbol("V_h", "horizontal seismic effect at the base", "force", sub="h"),
    Symbol("M_b", "overturning moment at the base", "moment"),
    Symbol("M_f", "overturning moment at the interface of soil and foundation", "moment"),
    Symbol("d_f", "distance between the foundations that hold the overturning couple", "length", low=0, low_open=True),
    Symbol("N_f", "force of the overturning couple at each of those foundations", "force"),
    Symbol("D_f", "dead load on the foundation on the tension side", "force", low=0, low_open=True),
)  # fmt: skip

V_H = Formula("V_h", "rho*V", rule("12.4.2.1", "12.4-3"))
M_B = Formula("M_b", "total(F_x*h_x)", rule("12.8.5"))
M_F = Formula("M_f", "M_b", STATICS)
M_F_REDUCED = Formula("M_f", "0.75*M_b", rule("12.13.4"))
N_F = Formula("N_f", "M_f/d_f", STATICS)
