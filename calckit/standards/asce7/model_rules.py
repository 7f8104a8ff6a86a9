"""What the analysis model, the reliefs of drift and the separation of buildings declare beyond the shared symbols.

Knows symbols and formulas of 12.8.6.1, 12.8.6.2, 12.8.7 and 12.12.3. Must not know lines.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.record import Source
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule

PROPORTION = Source("proportion: elastic displacements follow the shear")
AGREEMENT = Source("common practice, no source: model and calculation agree within 1 %")

SYMBOLS = (
    Symbol("with_P_delta", "the analysis model includes P-delta effects", "words", choices=("yes", "no")),
    Symbol("drift_relief", "relief of the base shear for drift: the lower limit of C_s by S_DS left out (floor), and "
           "no upper limit on the period (floor and period)", "words", choices=("none", "floor", "floor and period")),
    Symbol("C_scapdrift", "seismic response coefficient for drift, upper limit", sub="s,cap,drift", low=0,
           low_open=True, high=50),
    Symbol("C_sdrift", "seismic response coefficient for drift", sub="s,drift", low=0, low_open=True, high=5),
    Symbol("V_drift", "base shear for drift", "force", low=0, low_open=True),
    Symbol("r_V", "base shear for drift over base shear applied in the model", sub="V", low=0, low_open=True),
    Symbol("delta_xs", "elastic displacement of level x, scaled to the base shear for drift", "displacement",
           sub="xe,scaled"),
    Symbol("V_xdrift", "story shear below level x that goes with the drifts", "force", sub="x,drift"),
    Symbol("theta_P", "stability coefficient against drifts that include P-delta", digits=3),
    Symbol("delta_eM", "largest elastic displacement at the gap, torsion included", "displacement", sub="e,M", low=0),
    Symbol("delta_M", "largest inelastic displacement at the gap", "displacement", low=0),
    Symbol("delta_M2", "largest inelastic displacement of the adjacent structure at the gap", "displacement",
           sub="M2", low=0),
    Symbol("delta_MT", "separation of adjacent structures", "displacement", sub="MT", low=0),
    Symbol("d_gap", "clear distance provided at the gap", "displacement", sub="gap", low=0, low_open=True),
)  # fmt: skip

C_S_CAP_DRIFT = Formula(
    "C_scapdrift", "S_D1/(T_drift*(R/I_e))", rule("12.8.6.2", obtained="memory, high"), units={"T_drift": ("s", "s")}
)
C_S_CAP_DRIFT_LONG = Formula(
    "C_scapdrift", "S_D1*T_L/(T_drift**2*(R/I_e))", rule("12.8.6.2", obtained="memory, high"),
    units={"T_drift": ("s", "s"), "T_L": ("s", "s")},
)  # fmt: skip
V_DRIFT = Formula("V_drift", "C_sdrift*W", rule("12.8.6.1"))
V_DRIFT_PLAIN = Formula("V_drift", "V", rule("12.8.6.1"))
R_V = Formula("r_V", "V_drift/V_applied", PROPORTION)
DELTA_XS = Formula("delta_xs", "r_V*delta_xe", PROPORTION)
DELTA_X_SCALED = Formula("delta_x", "C_d*delta_xs/I_e", rule("12.8.6", "12.8-15", "found"))
V_XDRIFT = Formula("V_xdrift", "V_x*V_drift/V", PROPORTION)
THETA_DRIFT = Formula(
    "theta", "P_x*Delta*I_e/(V_xdrift*h_sx*C_d)", rule("12.8.7", "12.8-16", "found"),
    sets=(("kip", "in"), ("kN", "mm")),
)  # fmt: skip
THETA_P = Formula("theta_P", "theta/(1 + theta)", rule("12.8.7", obtained="found"))
DELTA_M = Formula("delta_M", "C_d*delta_eM/I_e", rule("12.12.3", "12.12-1"))
DELTA_MT = Formula("delta_MT", "sqrt(delta_M**2 + delta_M2**2)", rule("12.12.3", "12.12-2"))
