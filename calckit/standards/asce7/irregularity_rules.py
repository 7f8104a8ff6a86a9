"""Declarations for irregularities (12.3.2, 12.3.3), drifts of the diaphragm ends (12.8.4) and redundancy (12.3.4).

Knows the symbols and formulas of these clauses. Must not know lines or the order of steps.

Ratios over stories stand in the row of the upper story: what is one story down over what is there. `plus` and `minus`
are the two cases of accidental torsion, the mass shifted toward the positive or the negative side across the force.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule

_YES_NO = ("yes", "no")
_INCH_SET = (("kip", "in"), ("kN", "mm"))
_SHIFTS = (("plus", "+"), ("minus", "−"))
TYPES = ("H1a", "H1b", "H2", "H3", "V1a", "V1b", "V2", "V3", "V5a", "V5b")
"""Irregularities that numbers decide."""


def _of_ends(case: str, sign: str) -> tuple[Symbol, ...]:
    shifted = f"mass shifted toward {sign}"
    return (
        *(
            Symbol(f"d_{end}{case}", f"elastic displacement of end {end} of the diaphragm, {shifted}, A_x = 1",
                   "displacement", sub=f"{end},{sign}")
            for end in (1, 2)
        ),
        Symbol(f"d_max{case}", f"larger displacement of the two ends, {shifted}", "displacement", sub=f"max,{sign}"),
        Symbol(f"d_avg{case}", f"mean displacement of the two ends, {shifted}", "displacement", sub=f"avg,{sign}"),
        *(
            Symbol(f"D_{end}{case}", f"elastic story drift of end {end}, {shifted}", "displacement",
                   sub=f"{end},{sign}")
            for end in (1, 2)
        ),
        Symbol(f"r_D{case}", f"larger over mean story drift of the two ends, {shifted}", sub=f"D,{sign}"),
    )  # fmt: skip


SYMBOLS = (
    *(symbol for case in _SHIFTS for symbol in _of_ends(*case)),
    Symbol("A_x", "torsional amplification factor", low=1, high=3),
    *(Symbol(f"{name}_found", f"irregularity {name} by the numbers", "words", choices=_YES_NO) for name in TYPES),
    Symbol("one_side", "over 75 % of a story's lateral strength at or on one side of its center of mass", "words",
           choices=_YES_NO),
    Symbol("p_x", "projection past the re-entrant corner along x", "length", low=0),
    Symbol("p_y", "projection past the re-entrant corner along y", "length", low=0),
    Symbol("L_x", "plan dimension along x", "length", low=0, low_open=True),
    Symbol("L_y", "plan dimension along y", "length", low=0, low_open=True),
    Symbol("r_px", "projection over plan dimension along x", sub="p,x"),
    Symbol("r_py", "projection over plan dimension along y", sub="p,y"),
    Symbol("A_open", "area of the largest openings of a diaphragm together", "area", low=0),
    Symbol("A_gross", "gross area enclosed by the diaphragm", "area", low=0, low_open=True),
    Symbol("r_open", "open share of the diaphragm"),
    Symbol("K_d", "effective stiffness of the diaphragm of the level", "stiffness", low=0, low_open=True),
    Symbol("r_Kd", "stiffness of the diaphragm one level down over that of this level", sub="K,d"),
    Symbol("K_s", "lateral stiffness of the story below the level", "stiffness", low=0, low_open=True),
    Symbol("K_1", "stiffness one story down", "stiffness"),
    Symbol("K_2", "stiffness two stories down", "stiffness"),
    Symbol("r_K", "stiffness one story down over that of this story"),
    Symbol("r_K3", "stiffness three stories down over the mean of this story and the two below it", sub="K,3"),
    Symbol("r_w", "weight one level down over that of this level"),
    Symbol("b_s", "width of the lateral system in the story", "length", low=0, low_open=True),
    Symbol("r_b", "width one story down over that of this story"),
    Symbol("V_ys", "lateral strength of the story", "force", sub="y,s", low=0, low_open=True),
    Symbol("r_Vy", "lateral strength one story down over that of this story", sub="V,y"),
    Symbol("drift_waiver", "types V1 and V2 are judged by drift ratios, from drifts that leave torsion out", "words",
           choices=_YES_NO),
    Symbol("q_s", "story drift over story height"),
    Symbol("r_q", "drift ratio one story down over that of this story"),
    Symbol("f_collector", "factor on forces in collectors and diaphragm connections by irregularity", low=1, high=1.25,
           sub="collector"),
    Symbol("discontinuous", "overstrength is asked for in what supports a discontinuous wall or frame", "words",
           choices=_YES_NO),
    Symbol("model_3d", "a three-dimensional model is asked for", "words", choices=_YES_NO),
    Symbol("r_Vs", "story shear over base shear", sub="V,s"),
    Symbol("r_loss", "largest loss of story strength on removing one element of Table 12.3-3", low=0, high=1),
    Symbol("n_bay1", "bays of perimeter framing on the side with fewer, along this direction", sub="bay,1", low=0),
    Symbol("n_bay2", "bays of perimeter framing on the side with fewer, across this direction", sub="bay,2", low=0),
    Symbol("removal_torsion", "removing one element of Table 12.3-3 makes a torsional irregularity of the severe type",
           "words", choices=_YES_NO),
    Symbol("removal_passes", "every story with more than 35 % of the base shear passes Table 12.3-3", "words",
           choices=_YES_NO),
    Symbol("perimeter_bays", "every story with more than 35 % of the base shear has two bays of perimeter framing on "
           "each side in both directions", "words", choices=_YES_NO),
)  # fmt: skip


def _of_shifts(result: str, text: str, where: str, obtained: str) -> tuple[Formula, Formula]:
    """One declaration for both cases of accidental torsion; `{s}` stands for the case."""
    source = rule(where, obtained=obtained)
    plus, minus = (
        Formula(result.format(s=case), text.format(s=case), source, sets=_INCH_SET) for case, _ in _SHIFTS
    )  # fmt: skip
    return plus, minus


D_1 = D_1_PLUS, D_1_MINUS = _of_shifts("D_1{s}", "d_1{s} - below(d_1{s})", "Table 12.3-1", "found")
D_2 = D_2_PLUS, D_2_MINUS = _of_shifts("D_2{s}", "d_2{s} - below(d_2{s})", "Table 12.3-1", "found")
R_D = R_D_PLUS, R_D_MINUS = _of_shifts("r_D{s}", "max(D_1{s}, D_2{s})/((D_1{s} + D_2{s})/2)", "Table 12.3-1", "found")
D_MAX = D_MAX_PLUS, D_MAX_MINUS = _of_shifts("d_max{s}", "max(d_1{s}, d_2{s})", "12.8.4.3", "found")
D_AVG = D_AVG_PLUS, D_AVG_MINUS = _of_shifts("d_avg{s}", "(d_1{s} + d_2{s})/2", "12.8.4.3", "found")

_A_X = rule("12.8.4.3", "12.8-14", "found")
A_X = Formula("A_x", "min(max((d_maxplus/(1.2*d_avgplus))**2, (d_maxminus/(1.2*d_avgminus))**2, 1), 3)", _A_X,
              sets=_INCH_SET)  # fmt: skip
A_X_ONE_CASE = Formula("A_x", "min(max((d_maxplus/(1.2*d_avgplus))**2, 1), 3)", _A_X, sets=_INCH_SET)

R_PX = Formula("r_px", "p_x/L_x", rule("Table 12.3-1", obtained="found"))
R_PY = Formula("r_py", "p_y/L_y", rule("Table 12.3-1", obtained="found"))
R_OPEN = Formula("r_open", "A_open/A_gross", rule("Table 12.3-1", obtained="found"))
R_KD = Formula("r_Kd", "below(K_d)/K_d", rule("Table 12.3-1", obtained="found"), sets=_INCH_SET)

K_S = Formula(
    "K_s", "V_x/(delta_xe - below(delta_xe))", rule("Table 12.3-2"), sets=_INCH_SET
)  # fmt: skip
K_1 = Formula("K_1", "below(K_s)", rule("Table 12.3-2"))
K_2 = Formula("K_2", "below(K_1)", rule("Table 12.3-2"))
R_K = Formula("r_K", "K_1/K_s", rule("Table 12.3-2"), sets=_INCH_SET)
R_K3 = Formula("r_K3", "below(K_2)/((K_s + K_1 + K_2)/3)", rule("Table 12.3-2"), sets=_INCH_SET)
R_W = Formula("r_w", "below(w_x)/w_x", rule("Table 12.3-2"))
R_B = Formula("r_b", "below(b_s)/b_s", rule("Table 12.3-2"))
R_VY = Formula("r_Vy", "below(V_ys)/V_ys", rule("Table 12.3-2"))
Q_S = Formula("q_s", "Delta/h_sx", rule("12.3.2.2"), sets=_INCH_SET)
R_Q = Formula("r_q", "below(q_s)/q_s", rule("12.3.2.2"))

R_VS = Formula("r_Vs", "V_x/V", rule("12.3.4.2"))
