"""What ASCE/SEI 7 says of nonstructural components: symbols and formulas of 13.3.1 and 13.4.2, both editions.

Knows expression, clause, equation and how each was obtained. Must not know lines or the order of steps.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule, rule_of

ABOVE, AT_GRADE = "above grade", "at or below grade"


def _force(name: str, meaning: str, *, sub: str = "") -> Symbol:
    return Symbol(name, meaning, "force", sub=sub, low=0, low_open=True)


def _factor(name: str, meaning: str, high: float, *, low: float = 1, sub: str = "") -> Symbol:
    return Symbol(name, meaning, sub=sub, low=low, high=high)


SYMBOLS = (
    Symbol("component", "kind of component, a row of Table 13.5-1 or 13.6-1", "words"),
    Symbol("attached", "where the component is attached", "words", choices=(ABOVE, AT_GRADE)),
    _force("W_p", "weight of the component in operation"),
    _factor("I_p", "importance factor of the component", 1.5),
    Symbol("z", "height above the base at which the component is attached", "length"),
    Symbol("h", "average roof height above the base", "length", low=0, low_open=True),
    _factor("r_zh", "z over h, not below 0 and not above 1", 1, low=0),
    _factor("a_p", "amplification factor of the component", 2.5),
    _factor("R_p", "response modification factor of the component", 12),
    Symbol("a_i", "acceleration at the level by modal analysis with R = 1, as a fraction of g", low=0, high=10),
    _factor("A_xp", "torsional amplification factor at the level of the component", 3, sub="x"),
    _factor("a_1", "coefficient of the linear term over the height", 2.5, low=0),
    _factor("a_2", "coefficient of the tenth power over the height", 1, low=0),
    _factor("H_f", "amplification with height", 3.5),
    _factor("R_mu", "reduction by the ductility of the structure", 3),
    _factor("C_AR", "resonance and ductility factor of the component, for where it is attached", 4),
    _factor("R_po", "strength factor of the component", 3),
    _factor("Omega_0p", "overstrength factor for the component's anchors in concrete and masonry", 3, sub="0p"),
    _force("F_pbasic", "horizontal force on the component before its limits", sub="p,basic"),
    _force("F_pmax", "horizontal force on the component, upper limit", sub="p,max"),
    _force("F_pmin", "horizontal force on the component, lower limit", sub="p,min"),
    _force("F_p", "horizontal force on the component, in any direction"),
    Symbol("c_p", "horizontal force on the component over its weight", low=0),
    Symbol("i_p", "what governs the horizontal force: 1 the equation, 2 the upper limit, 3 the lower limit", digits=1),
    _force("F_pv", "vertical force on the component, up or down, at the same time"),
    _force("F_pO", "horizontal force for anchors in concrete and masonry, with overstrength", sub="p,Ω"),
)  # fmt: skip
_POUNDS = (("lb", "ft"), ("kN", "m"))

R_ZH = Formula("r_zh", "max(min(z/h, 1), 0)", rule("13.3.1", obtained="found"))
F_P_BASIC = Formula("F_pbasic", "0.4*a_p*S_DS*W_p/(R_p/I_p)*(1 + 2*r_zh)", rule("13.3.1", "13.3-1", "found"))
F_P_MODAL = Formula("F_pbasic", "a_i*a_p*W_p/(R_p/I_p)*A_xp", rule("13.3.1", "13.3-4"))
F_P_MAX = Formula("F_pmax", "1.6*S_DS*I_p*W_p", rule("13.3.1", "13.3-2", "found"))
F_P_MIN = Formula("F_pmin", "0.3*S_DS*I_p*W_p", rule("13.3.1", "13.3-3", "found"))
F_P = Formula("F_p", "max(min(F_pbasic, F_pmax), F_pmin)", rule("13.3.1", obtained="found"))
C_P = Formula("c_p", "F_p/W_p", rule("13.3.1", obtained="found"), sets=_POUNDS)
I_GOVERNING = Formula(
    "i_p", "2 if F_pbasic > F_pmax else 3 if F_pbasic < F_pmin else 1", rule("13.3.1", obtained="found"),
    sets=_POUNDS,
)  # fmt: skip
F_PV = Formula("F_pv", "0.2*S_DS*W_p", rule("13.3.1"))
F_P_OVERSTRENGTH = Formula("F_pO", "Omega_0p*F_p", rule("13.4.2"))

# 7-22 alone
_BY_PERIOD = rule_of("ASCE 7-22", "13.3.1.1", "13.3-4", "memory, high")
_DUCTILITY = rule_of("ASCE 7-22", "13.3.1.2", "13.3-6", "memory, high")
_SECONDS = {"T_a": ("s", "s")}
_R_MU = "max(sqrt(1.1*R/(I_e*Omega_0)), 1.3)"

A_1 = Formula("a_1", "min(1/T_a, 2.5)", _BY_PERIOD, units=_SECONDS)
A_2 = Formula("a_2", "max(1 - (0.4/T_a)**2, 0)", _BY_PERIOD, units=_SECONDS)
H_F = Formula("H_f", "1 + a_1*r_zh + a_2*r_zh**10", _BY_PERIOD)
H_F_PERIOD_UNKNOWN = Formula("H_f", "1 + 2.5*r_zh", rule_of("ASCE 7-22", "13.3.1.1", "13.3-5", "memory, high"))
R_MU = Formula("R_mu", _R_MU, _DUCTILITY)
R_MU_BY_ROW = Formula("R_mu", f"1 if r_zh <= 0 else {_R_MU}", _DUCTILITY)
R_MU_SYSTEM_UNKNOWN_BY_ROW = Formula("R_mu", "1 if r_zh <= 0 else 1.3", _DUCTILITY)
F_P_BASIC_7_22 = Formula(
    "F_pbasic", "0.4*S_DS*I_p*W_p*(H_f/R_mu)*(C_AR/R_po)", rule_of("ASCE 7-22", "13.3.1", "13.3-1", "memory, high")
)
