"""The formulas of ASCE/SEI 7 for equivalent lateral forces, each declared once, with the numbers of 7-16.

Knows expression, clause, equation and how each was obtained. Must not know lines or the order of steps.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.standards.asce7.clauses import rule

_INCH_SET = (("kip", "in"), ("kN", "mm"))

# 11.4 ground motion
S_MS = Formula("S_MS", "F_a*S_S", rule("11.4.4", "11.4-1", "found"))
S_M1 = Formula("S_M1", "F_v*S_1", rule("11.4.4", "11.4-2", "found"))
S_M1_INCREASED = Formula("S_M1", "1.5*F_v*S_1", rule("11.4.8, Supplement 3"))
S_DS = Formula("S_DS", "2/3*S_MS", rule("11.4.5", "11.4-3", "found"))
S_D1 = Formula("S_D1", "2/3*S_M1", rule("11.4.5", "11.4-4", "found"))
T_S = Formula("T_S", "S_D1/S_DS", rule("11.4.6"), units={"T_S": ("s", "s")})
T_S_INCREASED = Formula("T_Sinc", "1.5*S_D1/S_DS", rule("11.4.8, Supplement 3"), units={"T_Sinc": ("s", "s")})
T_0 = Formula("T_0", "0.2*S_D1/S_DS", rule("11.4.6"), units={"T_0": ("s", "s")})
S_A = Formula(
    "S_a",
    "S_DS*(0.4 + 0.6*T_r/T_0) if T_r < T_0 else S_DS if T_r <= T_S else S_D1/T_r if T_r <= T_L else S_D1*T_L/T_r**2",
    rule("11.4.6", "11.4-5 to 11.4-7"),
    units=dict.fromkeys(("T_r", "T_0", "T_S", "T_L"), ("s", "s")),
)

# 12.8.2 period
T_A_TABLE = Formula("T_a", "C_t*h_n**x", rule("12.8.2.1", "12.8-7"), units={"T_a": ("s", "s"), "h_n": ("ft", "m")})
T_A_STORIES = Formula("T_a", "0.1*N", rule("12.8.2.1", "12.8-8"), units={"T_a": ("s", "s")})
T_MAX = Formula("T_max", "C_u*T_a", rule("12.8.2"))
T_CAPPED = Formula("T", "min(T_analysis, T_max)", rule("12.8.2"))
T_APPROXIMATE = Formula("T", "T_a", rule("12.8.2"))
T_ANALYSIS = Formula("T", "T_analysis", rule("12.8.2"))
T_DRIFT_ANALYSIS = Formula("T_drift", "T_analysis", rule("12.8.6.2"))
T_DRIFT_APPROXIMATE = Formula("T_drift", "T_a", rule("12.8.6.2"))

# 12.8.1 base shear
_SECONDS = {"T": ("s", "s"), "T_L": ("s", "s")}
C_S_BASIC = Formula("C_sbasic", "S_DS/(R/I_e)", rule("12.8.1.1", "12.8-2", "found"))
C_S_CAP = Formula("C_scap", "S_D1/(T*(R/I_e))", rule("12.8.1.1", "12.8-3", "found"), units={"T": ("s", "s")})
C_S_CAP_LONG = Formula("C_scap", "S_D1*T_L/(T**2*(R/I_e))", rule("12.8.1.1", "12.8-4", "found"), units=_SECONDS)
C_S_CAP_INCREASED = Formula("C_scapinc", "1.5*C_scap", rule("11.4.8, exception 2", obtained="found"))
C_S_FLOOR = Formula("C_sfloor", "max(0.044*S_DS*I_e, 0.01)", rule("12.8.1.1", "12.8-5", "found"))
C_S_FLOOR_S1 = Formula("C_sfloor1", "0.5*S_1/(R/I_e)", rule("12.8.1.1", "12.8-6", "found"))
V = Formula("V", "C_s*W", rule("12.8.1", "12.8-1"))
W = Formula("W", "total(w_x)", rule("12.7.2"))

# 12.8.3 to 12.8.5 distribution
K = Formula(
    "k", "1 if T <= 0.5 else 2 if T >= 2.5 else 1 + (T - 0.5)/(2.5 - 0.5)", rule("12.8.3", obtained="found"),
    units={"T": ("s", "s")},
)  # fmt: skip
WH_X = Formula("wh_x", "w_x*h_x**k", rule("12.8.3", "12.8-12"), units={"w_x": ("kip", "kN"), "h_x": ("ft", "m")})
SUM_WH = Formula("sum_wh", "total(wh_x)", rule("12.8.3", "12.8-12"))
C_VX = Formula("C_vx", "wh_x/sum_wh", rule("12.8.3", "12.8-12"))
F_X = Formula("F_x", "C_vx*V", rule("12.8.3", "12.8-11"))
V_X = Formula("V_x", "above(F_x)", rule("12.8.4", "12.8-13"))
M_X = Formula("M_x", "above(V_x*h_sx)", rule("12.8.5"))
SUM_F = Formula("sum_F", "total(F_x)", rule("12.8.3"))

# 12.8.6, 12.8.7, 12.12.1 drift and stability
DELTA_X = Formula("delta_x", "C_d*delta_xe/I_e", rule("12.8.6", "12.8-15", "found"))
DELTA = Formula("Delta", "delta_x - below(delta_x)", rule("12.8.6"))
DELTA_A = Formula("Delta_a", "r_Delta*h_sx", rule("12.12.1"))
DELTA_A_RHO = Formula("Delta_a", "r_Delta*h_sx/rho", rule("12.12.1.1"))
THETA = Formula("theta", "P_x*Delta*I_e/(V_x*h_sx*C_d)", rule("12.8.7", "12.8-16", "found"), sets=_INCH_SET)
THETA_MAX = Formula("theta_max", "min(0.5/(beta*C_d), 0.25)", rule("12.8.7", "12.8-17", "found"))
