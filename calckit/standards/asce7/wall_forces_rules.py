"""What ASCE/SEI 7 says of structural walls out of plane and of their anchorage: symbols and formulas of 12.11.

Knows expression, clause, equation and how each was obtained. Must not know lines or the order of steps.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.record import Source
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule

SYMBOLS = (
    Symbol("w_w", "weight of the wall on each unit of area", "pressure", low=0, low_open=True),
    Symbol("h_w", "height of the wall", "length", low=0, low_open=True),
    Symbol("f_wbasic", "force on the wall out of plane, on each unit of area, basic value", "pressure", sub="w,basic"),
    Symbol("f_wmin", "force on the wall out of plane, on each unit of area, lower limit", "pressure", sub="w,min"),
    Symbol("f_w", "force on the wall out of plane, on each unit of area", "pressure"),
    Symbol("f_wA", "force on the wall out of plane for allowable stress, on each unit of area", "pressure", sub="w,A"),
    Symbol("W_wall", "weight of the wall on each unit of length", "line load"),
    Symbol("F_wall", "force on the wall out of plane, on each unit of length", "line load"),
    Symbol("L_f", "span of the flexible diaphragm that supports the wall, between vertical elements", "length", low=0),
    Symbol("k_a", "amplification factor for the flexibility of the diaphragm", low=1, high=2),
    Symbol("z_a", "height of the anchorage above the base", "length", low=0),
    Symbol("r_z", "factor of an anchorage below the roof under a diaphragm that is not flexible"),
    Symbol("W_pa", "weight of the wall tributary to the anchorage, for one anchor or on each unit of length",
           "load effect", sub="p,a", low=0),
    Symbol("F_anbasic", "anchorage force, basic value", "load effect", sub="an,basic"),
    Symbol("F_anmin", "anchorage force, lower limit", "load effect", sub="an,min"),
    Symbol("F_an", "anchorage force, in the unit of the weight", "load effect"),
)  # fmt: skip

F_W_BASIC = Formula("f_wbasic", "0.4*S_DS*I_e*w_w", rule("12.11.1", obtained="found"))
F_W_MIN = Formula("f_wmin", "0.10*w_w", rule("12.11.1", obtained="found"))
F_W = Formula("f_w", "max(f_wbasic, f_wmin)", rule("12.11.1", obtained="found"))
F_W_ALLOWABLE = Formula("f_wA", "0.7*f_w", rule("2.4.5", obtained="found"))
W_WALL = Formula("W_wall", "w_w*h_w", Source("statics"))
F_WALL = Formula("F_wall", "f_w*h_w", Source("statics"))

K_A = Formula("k_a", "min(1.0 + L_f/100, 2.0)", rule("12.11.2.1", "12.11-2"), units={"L_f": ("ft", "ft")})
R_Z = Formula("r_z", "(1 + 2*z_a/h_n)/3", rule("12.11.2.1"))
F_AN_BASIC = Formula("F_anbasic", "0.4*S_DS*k_a*I_e*W_pa", rule("12.11.2.1", "12.11-1"))
F_AN_BELOW = Formula("F_anbasic", "r_z*0.4*S_DS*k_a*I_e*W_pa", rule("12.11.2.1", "12.11-1"))
F_AN_MIN = Formula("F_anmin", "0.2*k_a*I_e*W_pa", rule("12.11.2.1"))
F_AN = Formula("F_an", "max(F_anbasic, F_anmin)", rule("12.11.2.1"))
