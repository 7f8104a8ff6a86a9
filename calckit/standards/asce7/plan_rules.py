"""Declarations for the class of diaphragms (12.3.1) and the distribution of a lateral force in plan (12.8.4).

Knows the symbols and formulas of these clauses. Must not know lines or the order of steps.

Each formula of the plan is declared once for both axes: `{a}` is the axis along the force, `{c}` the one across it.
`plus` and `minus` are the mass shifted toward the positive or the negative side across the force. Positions are
measured from the lower left corner of the plan; rigidities are relative, so displacements are relative too.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule

AXES = (("x", "y"), ("y", "x"))
CASES = (("plus", "+"), ("minus", "−"))
DESCRIPTIONS = (
    "untopped steel deck or wood panels on concrete, masonry or braced steel", "wood panels in light frame by 12.3.1.1",
    "one- or two-family dwelling", "concrete slab or filled deck", "none of these",
)  # fmt: skip


def case_name(along: str, across: str, sign: str) -> str:
    """The name of a load case: "X, mass shifted toward +Y".

    >>> case_name("x", "y", "+")
    'X, mass shifted toward +Y'
    """
    return f"{along.upper()}, mass shifted toward {sign}{across.upper()}"


def _of_axis(a: str, c: str) -> tuple[Symbol, ...]:
    positive = {"low": 0.0, "low_open": True}
    return (
        Symbol(f"{a}_i", f"position of element i along {a}, from the corner of the plan", "length", low=0),
        Symbol(f"k_i{a}", f"relative rigidity of element i along {a}", sub=f"i,{a}", low=0),
        Symbol(f"{a}_m", f"position of the center of mass along {a}", "length", low=0),
        Symbol(f"V_p{a}", f"lateral force along {a} that is distributed in plan", "force", sub=f"p,{a}", **positive),
        Symbol(f"K_p{a}", f"sum of the rigidities along {a}", sub=f"p,{a}", **positive),
        Symbol(f"{a}_R", f"position of the center of rigidity along {a}", "length"),
        Symbol(f"e_{a}", f"distance from the center of rigidity to the center of mass along {a}", "length"),
        Symbol(f"V_dir{a}", f"force along {a} in element i without torsion", "force", sub=f"direct,{a}"),
        Symbol(f"M_t{a}", f"inherent torsional moment, force along {a}", "moment", sub=f"t,{a}"),
        Symbol(f"M_ta{a}", f"accidental torsional moment before amplification, force along {a}", "moment",
               sub=f"ta,{a}"),
        Symbol(f"u_0{a}", f"relative displacement of the center of rigidity, force along {a}", "force", sub=f"0,{a}"),
        Symbol(f"plan_{a}", f"torsional irregularity of this story, force along {a}", "words",
               choices=("none", "over 1.2", "over 1.4")),
        Symbol(f"accidental_{a}", f"accidental torsion in the forces, force along {a}", "words",
               choices=("included", "omitted where permitted")),
        Symbol(f"A_p{a}", f"factor on the accidental torsional moment, force along {a}", sub=f"x,{a}", low=0, high=3),
        Symbol(f"V_des{a}", f"largest force along {a} in element i over all cases, torsion never subtracted", "force",
               sub=f"design,{a}"),
        Symbol(f"V_a{a}", f"force along {a} in element i from analysis", "force", sub=f"analysis,{a}"),
        Symbol(f"sum_V{a}", f"sum of the forces along {a} from analysis", "force", layout=f"total(V_a{a})"),
        *(symbol for name, sign in CASES for symbol in _of_case(a, c, name, sign)),
    )  # fmt: skip


def _of_case(a: str, c: str, name: str, sign: str) -> tuple[Symbol, ...]:
    case = case_name(a, c, sign)
    return (
        Symbol(f"M_1{a}{name}", f"torsional moment: {case}, A_x = 1", "moment", sub=f"1,{a},{sign}"),
        Symbol(f"u_1{a}{name}", f"relative displacement of the end at {c} = 0: {case}, A_x = 1", "force",
               sub=f"1,{a},{sign}"),
        Symbol(f"u_2{a}{name}", f"relative displacement of the end at {c} = L_{c}: {case}, A_x = 1", "force",
               sub=f"2,{a},{sign}"),
        Symbol(f"r_u{a}{name}", f"larger over mean displacement of the two ends: {case}", sub=f"u,{a},{sign}"),
        Symbol(f"M_p{a}{name}", f"torsional moment: {case}", "moment", sub=f"{a},{sign}"),
        Symbol(f"V_i{a}{name}", f"force along {a} in element i: {case}", "force", sub=f"i,{a},{sign}"),
        Symbol(f"Q_i{c}{name}", f"force along {c} in element i: {case}", "force", sub=f"i,{c},{sign}"),
    )  # fmt: skip


SYMBOLS = (
    *(symbol for axes in AXES for symbol in _of_axis(*axes)),
    Symbol("J_R", "torsional rigidity about the center of rigidity", "area", low=0, low_open=True),
    Symbol("diaphragm_found", "class of the diaphragm by calculation or description", "words",
           choices=("flexible", "semirigid", "rigid")),
    Symbol("diaphragm_is", "what the diaphragm is made of", "words", choices=DESCRIPTIONS),
    Symbol("r_sd", "span of the diaphragm over its depth", low=0, low_open=True, sub="span"),
    Symbol("delta_md", "largest deflection of the diaphragm itself under tributary load", "displacement", low=0,
           sub="MDD"),
    Symbol("delta_ave", "average drift of the vertical elements beside it under tributary load", "displacement", low=0,
           low_open=True, sub="avg"),
    Symbol("r_d", "deflection of the diaphragm over the average drift of the vertical elements"),
    Symbol("b_i", "tributary width of line i of vertical elements", "length", low=0, low_open=True),
    Symbol("L_s", "span of the diaphragm between lines of vertical elements", "length", low=0, low_open=True),
    Symbol("d_s", "depth of the diaphragm between its chords", "length", low=0, low_open=True),
    Symbol("V_p", "lateral force of the story that is distributed in plan", "force", low=0, low_open=True),
    Symbol("F_d", "lateral force on the diaphragm", "force", low=0, low_open=True),
    Symbol("sum_b", "sum of the tributary widths", "length", layout="total(b_i)"),
    Symbol("sum_L", "sum of the spans", "length", layout="total(L_s)"),
    Symbol("V_line", "force in line i of vertical elements", "force", sub="line"),
    Symbol("w_d", "force on each unit of length of the diaphragm", "line load"),
    Symbol("V_span", "shear at the ends of the span", "force", sub="span"),
    Symbol("v_span", "shear on each unit of depth of the diaphragm", "line load", sub="span"),
    Symbol("M_span", "moment at midspan", "moment", sub="span"),
    Symbol("T_chord", "chord force", "force", sub="chord"),
)  # fmt: skip

R_D_CLASS = Formula(
    "r_d", "delta_md/delta_ave", rule("12.3.1.3", "12.3-1"), sets=(("kip", "in"), ("kN", "mm"))
)  # fmt: skip


def _of_axes(result: str, text: str, where: str = "12.8.4", **more: str) -> tuple[Formula, Formula]:
    """One declaration for forces along x and along y."""
    along_x, along_y = (
        Formula(
            result.format(a=a, c=c, **more), text.format(a=a, c=c, **more), rule(where, obtained="found")
        ) for a, c in AXES
    )  # fmt: skip
    return along_x, along_y


K_P = K_P_X, K_P_Y = _of_axes("K_p{a}", "total(k_i{a})")
CENTER = CENTER_Y, CENTER_X = _of_axes("{c}_R", "total(k_i{a}*{c}_i)/K_p{a}")
E = E_Y, E_X = _of_axes("e_{c}", "{c}_m - {c}_R")
J_R = Formula(
    "J_R", "total(k_ix*(y_i - y_R)**2) + total(k_iy*(x_i - x_R)**2)", rule("12.8.4", obtained="found")
)  # fmt: skip
V_DIRECT = V_DIRECT_X, V_DIRECT_Y = _of_axes("V_dir{a}", "V_p{a}*k_i{a}/K_p{a}")
M_T = M_T_X, M_T_Y = _of_axes("M_t{a}", "V_p{a}*e_{c}", "12.8.4.1")
M_TA = M_TA_X, M_TA_Y = _of_axes("M_ta{a}", "0.05*L_{c}*V_p{a}", "12.8.4.2")

_PLUS, _MINUS = {"s": "plus", "sign": "+"}, {"s": "minus", "sign": "-"}
U_0 = U_0_X, U_0_Y = _of_axes("u_0{a}", "V_p{a}/K_p{a}", "12.8.4.3")
_M_1 = ("M_1{a}{s}", "M_t{a} {sign} M_ta{a}", "12.8.4.2")
M_1_PLUS = M_1_X_PLUS, M_1_Y_PLUS = _of_axes(*_M_1, **_PLUS)
M_1_MINUS = M_1_X_MINUS, M_1_Y_MINUS = _of_axes(*_M_1, **_MINUS)
_U_1 = ("u_1{a}{s}", "u_0{a} - M_1{a}{s}*{c}_R/J_R", "12.8.4.3")
U_1_PLUS = U_1_X_PLUS, U_1_Y_PLUS = _of_axes(*_U_1, **_PLUS)
U_1_MINUS = U_1_X_MINUS, U_1_Y_MINUS = _of_axes(*_U_1, **_MINUS)
_U_2 = ("u_2{a}{s}", "u_0{a} + M_1{a}{s}*(L_{c} - {c}_R)/J_R", "12.8.4.3")
U_2_PLUS = U_2_X_PLUS, U_2_Y_PLUS = _of_axes(*_U_2, **_PLUS)
U_2_MINUS = U_2_X_MINUS, U_2_Y_MINUS = _of_axes(*_U_2, **_MINUS)
_R_U = ("r_u{a}{s}", "max(u_1{a}{s}, u_2{a}{s})/((u_1{a}{s} + u_2{a}{s})/2)", "12.8.4.3")
R_U_PLUS = R_U_X_PLUS, R_U_Y_PLUS = _of_axes(*_R_U, **_PLUS)
R_U_MINUS = R_U_X_MINUS, R_U_Y_MINUS = _of_axes(*_R_U, **_MINUS)
_A_P = rule("12.8.4.3", "12.8-14", "found")
A_P = A_P_X, A_P_Y = tuple(
    Formula(f"A_p{a}", f"min(max((r_u{a}plus/1.2)**2, (r_u{a}minus/1.2)**2, 1), 3)", _A_P) for a, _ in AXES
)  # fmt: skip
_M_P = ("M_p{a}{s}", "M_t{a} {sign} A_p{a}*M_ta{a}", "12.8.4.3")
M_P_PLUS = M_P_X_PLUS, M_P_Y_PLUS = _of_axes(*_M_P, **_PLUS)
M_P_MINUS = M_P_X_MINUS, M_P_Y_MINUS = _of_axes(*_M_P, **_MINUS)
_V_I = ("V_i{a}{s}", "V_dir{a} + M_p{a}{s}*k_i{a}*({c}_i - {c}_R)/J_R")
V_I_PLUS = V_I_X_PLUS, V_I_Y_PLUS = _of_axes(*_V_I, **_PLUS)
V_I_MINUS = V_I_X_MINUS, V_I_Y_MINUS = _of_axes(*_V_I, **_MINUS)
_Q_I = ("Q_i{c}{s}", "-M_p{a}{s}*k_i{c}*({a}_i - {a}_R)/J_R")
Q_I_PLUS = Q_I_Y_PLUS, Q_I_X_PLUS = _of_axes(*_Q_I, **_PLUS)
Q_I_MINUS = Q_I_Y_MINUS, Q_I_X_MINUS = _of_axes(*_Q_I, **_MINUS)
V_DESIGN = V_DESIGN_X, V_DESIGN_Y = _of_axes(
    "V_des{a}", "max(abs(V_dir{a}), abs(V_i{a}plus), abs(V_i{a}minus), abs(Q_i{a}plus), abs(Q_i{a}minus))"
)
V_DESIGN_ALONG = V_DESIGN_ALONG_X, V_DESIGN_ALONG_Y = _of_axes(
    "V_des{a}", "max(abs(V_dir{a}), abs(V_i{a}plus), abs(V_i{a}minus))"
)
V_DESIGN_ACROSS = V_DESIGN_ACROSS_Y, V_DESIGN_ACROSS_X = _of_axes("V_des{c}", "max(abs(Q_i{c}plus), abs(Q_i{c}minus))")
SUM_V = SUM_V_X, SUM_V_Y = _of_axes("sum_V{a}", "total(V_a{a})")

_SPAN = "12.10.1"
SUM_B = Formula("sum_b", "total(b_i)", rule("12.8.4", obtained="found"))
SUM_L = Formula("sum_L", "total(L_s)", rule(_SPAN))
V_LINE = Formula("V_line", "V_p*b_i/sum_b", rule("12.8.4", obtained="found"))
W_D = Formula("w_d", "F_d/sum_L", rule(_SPAN))
V_SPAN = Formula("V_span", "w_d*L_s/2", rule(_SPAN))
UNIT_SHEAR = Formula("v_span", "V_span/d_s", rule(_SPAN))
M_SPAN = Formula("M_span", "w_d*L_s**2/8", rule(_SPAN))
T_CHORD = Formula("T_chord", "M_span/d_s", rule(_SPAN))
