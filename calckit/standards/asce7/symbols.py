"""The symbols of ASCE/SEI 7 for equivalent lateral forces.

Knows name, meaning, kind of unit, printed form and allowed range of each. Must not know formulas or steps.

Ranges are those of sense, wide enough for any site and building, not limits of the standard: a value outside is a slip
of the pen or of the unit. Spectral ordinates are fractions of g; no mapped value of the country comes near 5.
"""

from __future__ import annotations

from calckit.core.symbol import Symbol
from calckit.core.table import load

_YES_NO = ("yes", "no")
_CATEGORIES = ("A", "B", "C", "D", "E", "F")
_SITE_CLASSES = ("A", "B", "B assumed", "BC", "C", "CD", "D", "D default", "DE", "E", "F", "default")
_DRIFT_CLASSES = tuple(load("calckit.standards.asce7", "drift").rows)


def _ordinate(name: str, meaning: str) -> Symbol:
    return Symbol(name, f"{meaning}, as a fraction of g", low=0, low_open=True, high=5)


def _positive(name: str, meaning: str, kind: str = "number", *, sub: str = "", high: float | None = None) -> Symbol:
    return Symbol(name, meaning, kind, sub=sub, low=0, low_open=True, high=high)


def _period(name: str, meaning: str, *, sub: str = "") -> Symbol:
    return _positive(name, meaning, "time", sub=sub, high=30)


def _question(name: str, meaning: str) -> Symbol:
    return Symbol(name, meaning, "words", choices=_YES_NO)


_GROUND_MOTION = (
    _ordinate("S_S", "mapped risk-targeted spectral ordinate at 0.2 s"),
    _ordinate("S_1", "mapped risk-targeted spectral ordinate at 1 s"),
    Symbol("report_class", "site class that the geotechnical report gives", "words", choices=_SITE_CLASSES),
    Symbol(
        "site_class", "site class", "words", choices=_SITE_CLASSES,
    ),
    Symbol(
        "hazard_basis", "where the design ordinates come from", "words",
        choices=("mapped", "printout", "site-specific"),
    ),
    Symbol(
        "study_exception", "what is taken in place of the ground motion hazard analysis of 11.4.8", "words",
        choices=("exception 1", "exception 2", "exception 3", "S_M1 increased", "study made", "not needed"),
    ),
    Symbol("supplements", "supplements to the standard that are in force", "words"),
    _positive("F_a", "site coefficient for short periods", high=5),
    _positive("F_v", "site coefficient for a period of 1 s", high=5),
    _ordinate("S_MS", "site-adjusted risk-targeted ordinate for short periods"),
    _ordinate("S_M1", "site-adjusted risk-targeted ordinate at 1 s"),
    _ordinate("S_DS", "design spectral ordinate for short periods"),
    _ordinate("S_D1", "design spectral ordinate at 1 s"),
    _period("T_0", "period at which the flat part of the design spectrum starts"),
    _period("T_S", "period at which the flat part of the design spectrum ends"),
    _period("T_Sinc", "period at which the flat part ends with S_D1 increased by half", sub="S,inc"),
    _period("T_L", "period at which the long-period part of the design spectrum starts"),
    Symbol("T_r", "period at which the spectrum is read", "time", low=0, high=30),
    Symbol("S_a", "design spectral ordinate at the period T_r, as a fraction of g", low=0, high=5),
)  # fmt: skip

_CATEGORY = (
    Symbol("risk_category", "risk category", "words", choices=("I", "II", "III", "IV")),
    Symbol("I_e", "importance factor", low=1, high=2),
    Symbol("SDC_DS", "design category by S_DS", "words", choices=_CATEGORIES),
    Symbol("SDC_D1", "design category by S_D1", "words", choices=_CATEGORIES),
    Symbol("SDC", "seismic design category", "words", choices=_CATEGORIES),
)

_IRREGULARITIES = (
    ("H1a", "drift at one end over 1.2 times the mean of both, with accidental torsion"),
    ("H1b", "drift at one end over 1.4 times the mean of both, with accidental torsion"),
    ("H2", "both wings past a re-entrant corner over 15 % of the plan"),
    ("H3", "diaphragm more than half open, or half as stiff as the next"),
    ("H4", "offset out of plane in the path of the lateral forces"),
    ("H5", "vertical elements not parallel to the main axes"),
    ("V1a", "story below 70 % of the stiffness above, or 80 % of the mean of three"),
    ("V1b", "story below 60 % of the stiffness above, or 70 % of the mean of three"),
    ("V2", "mass over 1.5 times that of the next story, lighter roof left out"),
    ("V3", "lateral system over 1.3 times as wide as in the next story"),
    ("V4", "offset in plane that puts overturning on supports below"),
    ("V5a", "story below 80 % of the lateral strength above"),
    ("V5b", "story below 65 % of the lateral strength above"),
)
"""Horizontal and vertical irregularities of Tables 12.3-1 and 12.3-2, in our own words."""

_STRUCTURE = (
    Symbol("system", "seismic force-resisting system, a row of Table 12.2-1", "words"),
    Symbol("R", "response modification coefficient", low=1, high=10),
    Symbol("Omega_0", "overstrength factor", low=1, high=5),
    Symbol("C_d", "deflection amplification factor", low=1, high=10),
    _positive("h_limit", "height limit of the system", "length", sub="limit"),
    _positive("h_n", "structural height", "length"),
    Symbol("N", "number of stories above the base", low=1, high=200),
    Symbol("T_a_method", "how the approximate period is found", "words", choices=("table", "stories", "walls")),
    _positive("C_t", "coefficient of the approximate period", high=0.2),
    _positive("x", "exponent of the approximate period", high=1),
    _period("T_a", "approximate period"),
    Symbol("C_u", "coefficient of the upper limit on the period", low=1, high=2),
    _period("T_max", "upper limit on the period for strength, C_u T_a"),
    _period("T_analysis", "period found by analysis of the structure"),
    Symbol("T_choice", "which period is taken where the analysis gives less than T_a", "words",
           choices=("analysis", "approximate", "not needed")),
    _period("T", "period used for strength"),
    _period("T_drift", "period used for drift"),
    *(_question(name, f"irregularity {name}: {meaning}") for name, meaning in _IRREGULARITIES),
    Symbol("diaphragm", "how the diaphragms are classed", "words", choices=("flexible", "semirigid", "rigid")),
    _question("torsion", "inherent and accidental torsion are in the forces and displacements used"),
    _question("weight_contents", "the level weights hold all that 12.7.2 counts: dead load, partitions, equipment, "
              "shares of storage live load and snow, roof planting"),
)  # fmt: skip

_FORCES = (
    _positive("w_x", "effective seismic weight of level x", "force"),
    _positive("W", "effective seismic weight", "force"),
    _positive("h_x", "height of level x above the base", "length"),
    _positive("h_sx", "height of the story below level x", "length"),
    _positive("C_sbasic", "seismic response coefficient, basic value", sub="s,basic", high=5),
    _positive("C_scap", "seismic response coefficient, upper limit", sub="s,cap", high=50),
    _positive("C_scapinc", "seismic response coefficient, upper limit increased by half", sub="s,cap,inc", high=50),
    _positive("C_sfloor", "seismic response coefficient, lower limit", sub="s,floor", high=1),
    _positive("C_sfloor1", "seismic response coefficient, lower limit by S_1", sub="s,floor,S1", high=5),
    _positive("C_swithout", "seismic response coefficient without the increase of 11.4.8", sub="s,without", high=5),
    _positive("C_swith", "seismic response coefficient with the increase of 11.4.8", sub="s,with", high=5),
    _positive("C_s", "seismic response coefficient", high=5),
    _positive("V", "base shear", "force"),
    Symbol("k", "exponent of the vertical distribution", low=1, high=2),
    _positive("w_i", "effective seismic weight of level i", "force"),
    _positive("h_i", "height of level i above the base", "length"),
    Symbol("wh_x", "share of level x before division by the sum", layout="w_x*h_x**k"),
    Symbol("sum_wh", "sum of the shares of all levels", layout="total(w_i*h_i**k)"),
    Symbol("C_vx", "vertical distribution factor"),
    Symbol("F_i", "lateral force at level i", "force"),
    Symbol("F_x", "lateral force at level x", "force"),
    Symbol("sum_F", "sum of the lateral forces", "force", layout="total(F_i)"),
    Symbol("V_x", "story shear below level x", "force"),
    Symbol("M_x", "overturning moment at the base of the story below level x", "moment"),
)

_DRIFT = (
    _positive("V_applied", "base shear applied in the analysis model", "force"),
    _positive("W_model", "effective seismic weight of the analysis model", "force"),
    Symbol("delta_xe", "elastic displacement of level x under the design forces", "displacement", low=0),
    Symbol("delta_x", "amplified displacement of level x", "displacement"),
    Symbol("Delta", "story drift", "displacement"),
    Symbol("drift_class", "kind of structure for the allowable story drift", "words", choices=_DRIFT_CLASSES),
    _positive("r_Delta", "allowable story drift over story height", sub="Δ", high=0.1),
    Symbol("rho", "redundancy factor", low=1, high=1.3),
    Symbol("Delta_a", "allowable story drift", "displacement"),
    Symbol("P_level", "vertical load of level x, no load factor above 1.0", "force", sub="level", low=0),
    _positive("P_x", "vertical load at level x and above, no load factor above 1.0", "force"),
    _positive("beta", "ratio of shear demand to shear capacity of the story", high=1),
    Symbol("theta", "stability coefficient", digits=3),
    Symbol("theta_max", "largest stability coefficient allowed", sub="max"),
)

SYMBOLS = (*_GROUND_MOTION, *_CATEGORY, *_STRUCTURE, *_FORCES, *_DRIFT)
