"""What ASCE/SEI 7 says of diaphragm and collector forces: symbols and formulas of 12.10.1 and 12.10.2.

Knows expression, clause, equation and how each was obtained. Must not know lines or the order of steps.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule


def _force(name: str, meaning: str, *, sub: str = "") -> Symbol:
    return Symbol(name, meaning, "force", sub=sub, low=0)


PRECAST = "precast concrete"
SYMBOLS = (
    Symbol(
        "diaphragm_material", "what the diaphragms are made of", "words",
        choices=("cast-in-place concrete", PRECAST, "concrete on steel deck", "bare steel deck", "wood", "other"),
    ),
    Symbol(
        "w_px_basis", "weights for the diaphragm forces: a list w_px without the walls parallel to the force, or w_x",
        "words", choices=("list", "w_x"),
    ),
    Symbol("w_px", "weight tributary to the diaphragm at level x", "force", sub="px", low=0, low_open=True),
    _force("F_pa", "inertia force of the diaphragm at level x by analysis, no transfer force in it"),
    _force("F_tx", "transfer force in the diaphragm at level x by analysis, before rho or Omega_0"),
    _force("F_pxbasic", "diaphragm force from the level forces above", sub="px,basic"),
    _force("F_pxmin", "diaphragm force, lower limit", sub="px,min"),
    _force("F_pxmax", "diaphragm force, upper limit", sub="px,max"),
    _force("F_px", "diaphragm force at level x"),
    Symbol("i_px", "what governs F_px: 1 the level forces above, 2 the lower limit, 3 the upper limit", digits=1),
    _force("F_Tx", "transfer force for design"),
    _force("F_dx", "diaphragm force for design, transfer force included"),
    _force("F_jx", "force for diaphragm connections, increased"),
    _force("F_ca", "collector force from the level force, with overstrength"),
    _force("F_cb", "collector force from the diaphragm force of the level forces above, with overstrength"),
    _force("F_cm", "collector force from the lower limit, ordinary combinations"),
    _force("F_cx", "collector force at level x, as a force of the whole diaphragm"),
    Symbol("i_cx", "what governs F_cx: 1 the level force, 2 the level forces above, 3 the lower limit", digits=1),
)  # fmt: skip

W_PX_AS_W_X = Formula("w_px", "w_x", rule("12.10.1.1"))
F_PX_BASIC = Formula("F_pxbasic", "w_px*above(F_x)/above(w_x)", rule("12.10.1.1", "12.10-1", "found"))
F_PX_MIN = Formula("F_pxmin", "0.2*S_DS*I_e*w_px", rule("12.10.1.1", "12.10-2", "found"))
F_PX_MAX = Formula("F_pxmax", "0.4*S_DS*I_e*w_px", rule("12.10.1.1", "12.10-3", "found"))
F_PX = Formula("F_px", "min(max(F_pxbasic, F_pxmin), F_pxmax)", rule("12.10.1.1", obtained="found"))
I_PX = Formula(
    "i_px", "2 if F_pxbasic < F_pxmin else 3 if F_pxbasic > F_pxmax else 1", rule("12.10.1.1", obtained="found")
)
F_T_REDUNDANT = Formula("F_Tx", "rho*F_tx", rule("12.10.1.1", obtained="found"))
F_T_OVERSTRENGTH = Formula("F_Tx", "Omega_0*F_tx", rule("12.10.1.1", obtained="found"))
F_D = Formula("F_dx", "F_px", rule("12.10.1"))
F_D_ANALYSIS = Formula("F_dx", "max(F_px, F_pa)", rule("12.10.1"))
F_D_TRANSFER = Formula("F_dx", "F_px + F_Tx", rule("12.10.1"))
F_D_BOTH = Formula("F_dx", "max(F_px, F_pa) + F_Tx", rule("12.10.1"))
F_J = Formula("F_jx", "1.25*F_dx", rule("12.3.3.4"))

# 12.10.2 collectors
F_CA = Formula("F_ca", "Omega_0*F_x", rule("12.10.2.1"))
F_CB = Formula("F_cb", "Omega_0*F_pxbasic", rule("12.10.2.1"))
F_CM = Formula("F_cm", "F_pxmin", rule("12.10.2.1"))
F_CM_INCREASED = Formula("F_cm", "1.25*F_pxmin", rule("12.3.3.4"))
F_C = Formula("F_cx", "max(F_ca, F_cb, F_cm)", rule("12.10.2.1"))
I_C = Formula("i_cx", "3 if F_cm > max(F_ca, F_cb) else 2 if F_cb > F_ca else 1", rule("12.10.2.1"))
