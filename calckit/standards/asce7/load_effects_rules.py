"""What ASCE/SEI 7 says of seismic load effects: symbols and formulas of 12.4, 2.3.6, 2.4.5 and 12.5.

Knows expression, clause and how each was obtained. Must not know lines or the order of steps.

A load effect is any force or moment, in the unit in which it is typed; combinations are linear in them. Those ending in
`r` take the horizontal effect with its sense reversed.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule

STRENGTH, ALLOWABLE = "strength", "allowable stress"
_YES_NO = ("yes", "no")


def _effect(name: str, meaning: str, *, sub: str = "") -> Symbol:
    return Symbol(name, meaning, "load effect", sub=sub)


def _pair(name: str, combination: str) -> tuple[Symbol, Symbol]:
    stem = name.partition("_")[0]
    return (
        _effect(name, f"combination {combination}, horizontal effect added"),
        _effect(f"{stem}_{combination}r", f"combination {combination}, horizontal effect taken away",
                sub=f"{combination},rev"),
    )  # fmt: skip


SYMBOLS = (
    Symbol("load_method", "which combinations are printed", "words", choices=(STRENGTH, ALLOWABLE, "both")),
    Symbol("vertical_effect", "whether the vertical effect E_v is counted (it may be left out in design category B)",
           "words", choices=("counted", "left out")),
    Symbol("L_reduced", "the factor on L is 0.5: live load not above 100 psf (4.79 kPa), no garage, no public assembly",
           "words", choices=_YES_NO),
    Symbol("overstrength", "the elements listed are designed with overstrength", "words", choices=_YES_NO),
    Symbol("two_systems", "columns or walls that belong to two intersecting systems have a seismic axial load of at "
           "least 20 % of their capacity", "words", choices=_YES_NO),
    Symbol("orthogonal", "the effects hold 100 % of the forces in one direction with 30 % of those at right angles",
           "words", choices=_YES_NO),
    Symbol("S_av", "design vertical ordinate by 11.9, as a fraction of g", sub="av", low=0, low_open=True, high=5),
    Symbol("r_Ev", "vertical seismic effect over the dead load effect", sub="Ev", low=0, high=2),
    Symbol("c_D6", "factor on D in combination 6, vertical effect included", sub="D,6"),
    Symbol("c_D7", "factor on D in combination 7, vertical effect included", sub="D,7"),
    Symbol("c_D8", "factor on D in combination 8, vertical effect included", sub="D,8"),
    Symbol("c_D9", "factor on D in combination 9, vertical effect included", sub="D,9"),
    Symbol("c_D10", "factor on D in combination 10, vertical effect included", sub="D,10"),
    Symbol("c_L", "factor on L in combination 6", low=0.5, high=1),
    Symbol("c_S6", "factor on S in combination 6", sub="S,6", low=0, high=1),
    Symbol("c_S9", "factor on S in combination 9", sub="S,9", low=0, high=1),
    Symbol("C_sA", "seismic response coefficient times redundancy, for allowable stress", sub="s,A"),
    _effect("D", "effect of dead load"),
    _effect("L", "effect of live load"),
    _effect("S", "effect of snow load"),
    _effect("Q_E", "effect of the horizontal seismic forces"),
    _effect("Q_Ep", "effect of the seismic forces in the direction of this part", sub="E,par"),
    _effect("Q_Et", "effect of the seismic forces at right angles to this part", sub="E,perp"),
    Symbol("E_cl", "largest effect the yielding parts can pass on, as a positive number", "load effect", low=0),
    _effect("E_v", "vertical seismic effect"),
    _effect("E_h", "horizontal seismic effect"),
    _effect("E_mh", "horizontal seismic effect with overstrength"),
    *_pair("U_6", "6"), *_pair("U_7", "7"),
    _effect("U_max", "largest effect for strength"),
    _effect("U_min", "smallest effect for strength"),
    *_pair("A_8", "8"), *_pair("A_9", "9"), *_pair("A_10", "10"),
    _effect("A_max", "largest effect for allowable stress"),
    _effect("A_min", "smallest effect for allowable stress"),
)  # fmt: skip

# 12.4 effects
R_EV = Formula("r_Ev", "0.2*S_DS", rule("12.4.2.2", "12.4-4a"))
R_EV_SPECTRUM = Formula("r_Ev", "0.3*S_av", rule("12.4.2.2", "12.4-4b"))
E_V = Formula("E_v", "r_Ev*D", rule("12.4.2.2"))
E_H = Formula("E_h", "rho*Q_E", rule("12.4.2.1", "12.4-3"))
E_MH = Formula("E_mh", "Omega_0*Q_E", rule("12.4.3.1", "12.4-7"))
E_MH_LIMITED = Formula("E_mh", "min(Omega_0*abs(Q_E), E_cl)", rule("12.4.3.2"))
Q_E_TWO = Formula("Q_E", "max(abs(Q_Ep) + 0.3*abs(Q_Et), 0.3*abs(Q_Ep) + abs(Q_Et))", rule("12.5.3"))

# factors on D, printed once
C_D6 = Formula("c_D6", "1.2 + r_Ev", rule("2.3.6"))
C_D7 = Formula("c_D7", "0.9 - r_Ev", rule("2.3.6"))
C_D8 = Formula("c_D8", "1.0 + 0.7*r_Ev", rule("2.4.5", obtained="found"))
C_D9 = Formula("c_D9", "1.0 + 0.525*r_Ev", rule("2.4.5", obtained="found"))
C_D10 = Formula("c_D10", "0.6 - 0.7*r_Ev", rule("2.4.5", obtained="found"))
C_S_ALLOWABLE = Formula("C_sA", "0.7*rho*C_s", rule("2.4.5", obtained="found"))


def _four(result: str, gravity: str, factor: str = "") -> tuple[Formula, Formula, Formula, Formula]:
    """A combination with E_h added and taken away, then with E_mh."""
    source = rule("2.3.6") if result.startswith("U") else rule("2.4.5", obtained="found")
    one, two, three, four = (
        Formula(result + end, f"{gravity} {sign} {factor}{effect}", source)
        for effect in ("E_h", "E_mh")
        for end, sign in (("", "+"), ("r", "-"))
    )
    return one, two, three, four


U_6, U_6_REVERSED, U_6_OVER, U_6_OVER_REVERSED = _four("U_6", "c_D6*D + c_L*L + c_S6*S")
U_7, U_7_REVERSED, U_7_OVER, U_7_OVER_REVERSED = _four("U_7", "c_D7*D")
A_8, A_8_REVERSED, A_8_OVER, A_8_OVER_REVERSED = _four("A_8", "c_D8*D", "0.7*")
A_9, A_9_REVERSED, A_9_OVER, A_9_OVER_REVERSED = _four("A_9", "c_D9*D + 0.75*L + c_S9*S", "0.525*")
A_10, A_10_REVERSED, A_10_OVER, A_10_OVER_REVERSED = _four("A_10", "c_D10*D", "0.7*")
U_MAX = Formula("U_max", "max(U_6, U_6r, U_7, U_7r)", rule("2.3.6"))
U_MIN = Formula("U_min", "min(U_6, U_6r, U_7, U_7r)", rule("2.3.6"))
A_MAX = Formula("A_max", "max(A_8, A_8r, A_9, A_9r, A_10, A_10r)", rule("2.4.5", obtained="found"))
A_MIN = Formula("A_min", "min(A_8, A_8r, A_9, A_9r, A_10, A_10r)", rule("2.4.5", obtained="found"))

PRINTED = {
    STRENGTH: (U_6, U_6_REVERSED, U_7, U_7_REVERSED),
    ALLOWABLE: (A_8, A_8_REVERSED, A_9, A_9_REVERSED, A_10, A_10_REVERSED),
}
"""The combinations of each method with E_h."""
PRINTED_OVERSTRENGTH = {
    STRENGTH: (U_6_OVER, U_6_OVER_REVERSED, U_7_OVER, U_7_OVER_REVERSED),
    ALLOWABLE: (A_8_OVER, A_8_OVER_REVERSED, A_9_OVER, A_9_OVER_REVERSED, A_10_OVER, A_10_OVER_REVERSED),
}
"""The same with E_mh."""
EXTREMES = {STRENGTH: (U_MAX, U_MIN), ALLOWABLE: (A_MAX, A_MIN)}
"""Largest and smallest of each method."""
