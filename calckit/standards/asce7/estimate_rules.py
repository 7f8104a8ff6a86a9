"""What the second estimate of the base shear declares: a period by another rule, an ordinate, a shear, a difference.

Knows its symbols and formulas. Must not know lines.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.record import Source
from calckit.core.symbol import Symbol

OWN = Source("estimate by the kit's authors, no clause")
RAYLEIGH = Source("Rayleigh's method for the period, from memory")
COMMON = Source("common practice, no source: a tenth of a second a story for frames, half of that for stiff systems")

SYMBOLS = (
    Symbol("g", "standard acceleration of gravity", "acceleration", low=0, low_open=True),
    Symbol("N_e", "number of levels above the base", low=1, high=200),
    Symbol("T_e", "period of the second estimate", "time", low=0, low_open=True),
    Symbol("S_ae", "design ordinate of the second estimate, as a fraction of g", sub="a,e"),
    Symbol("V_e", "base shear of the second estimate", "force"),
    Symbol("e_V", "difference of the second estimate from the base shear, in %", digits=3),
)

T_E_DISPLACEMENTS = Formula(
    "T_e", "2*3.14159265*sqrt(total(w_x*delta_xe**2)/(g*total(F_x*delta_xe)))", RAYLEIGH
)
T_E_MODEL = Formula(
    "T_e", "2*3.14159265*sqrt(total(w_x*delta_xe**2)/(g*(V_applied/V)*total(F_x*delta_xe)))", RAYLEIGH
)
"""For displacements of a model that was run with another shear than V."""
T_E_FRAME = Formula("T_e", "0.1*N_e", COMMON, units={"T_e": ("s", "s")})
T_E_STIFF = Formula("T_e", "0.05*N_e", COMMON, units={"T_e": ("s", "s")})
S_A_E = Formula(
    "S_ae", "S_DS if T_e <= T_S else S_D1/T_e if T_e <= T_L else S_D1*T_L/T_e**2", OWN,
    units=dict.fromkeys(("T_e", "T_S", "T_L"), ("s", "s")),
)  # fmt: skip
V_E = Formula("V_e", "S_ae/(R/I_e)*total(w_x)", OWN)
V_DIFFERENCE = Formula("e_V", "100*(V_e/V - 1)", OWN)
