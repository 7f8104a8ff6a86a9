"""What reviewers of seismic calculations ask first, and which lines answer each question.

Knows the questions in our own words, the names of the lines that answer them and when each is asked for. Must not know
how an answer is found or printed.
"""

from __future__ import annotations

from dataclasses import dataclass

from calckit.core.symbol import Symbol
from calckit.standards.asce7.found import IRREGULARITIES

NOT_APPLICABLE = "n/a"
_BY_MODES = (("modal_model", ("stick model", "three-dimensional analysis")),)
_AMPLIFIED = (("H1a_found H1a", ("yes",)), ("SDC", ("C", "D", "E", "F")))


@dataclass(frozen=True)
class Need:
    """One thing that a question asks for: the first of `names` that gives an answer.

    It is asked in each direction, or once if `shared`; only if every one of `where` holds: names, and the words of
    which one must be theirs. The text of the line must hold `text`.
    """

    names: str
    shared: bool = False
    where: tuple[tuple[str, tuple[str, ...]], ...] = ()
    text: str = ""


@dataclass(frozen=True)
class Question:
    """A question: what it asks for; `also` what it shows beside if it is there, in any part.

    Where nothing is asked for, `because` says why it does not apply, by the lines of `rests`.
    """

    id: str
    words: str
    needs: tuple[Need, ...]
    also: str = ""
    because: str = ""
    rests: str = ""


def _each(*names: str) -> tuple[Need, ...]:
    return tuple(Need(name) for name in names)


def _once(*names: str) -> tuple[Need, ...]:
    return tuple(Need(name, shared=True) for name in names)


QUESTIONS = (
    Question("Q1", "risk category and importance factor", _once("risk_category", "I_e")),
    Question("Q2", "site class, by which report or by default", _once("site_class", "site_report")),
    Question(
        "Q3", "site-specific study, or what stands in its place",
        (
            Need("study_exception", shared=True, where=(("hazard_basis", ("mapped", "printout")),)),
            Need("floor_S_DS", shared=True, where=(("hazard_basis", ("site-specific",)),)),
            Need("hazard_basis", shared=True),
        ),
    ),
    Question("Q4", "design category by both ordinates and by S_1", _once("SDC_DS", "SDC_D1", "SDC")),
    Question(
        "Q5", "system permitted at this height; its factors", _each("system_permitted", "R", "Omega_0", "C_d"),
        also="h_limit",
    ),
    Question(
        "Q6", "irregularities, and what follows from each",
        (
            *(Need(f"{name}_found {name}") for name in IRREGULARITIES),
            *_each("f_collector f_collector_open", "discontinuous discontinuous_open", "model_3d model_3d_open"),
        ),
    ),
    Question("Q7", "procedure permitted", _each("prohibited", "procedure")),
    Question("Q8", "what the seismic weight holds", _once("weight_contents w_0", "W")),
    Question("Q9", "periods for strength and for drift", _each("T_a", "T_max", "T", "T_drift"), also="C_t x"),
    Question(
        "Q10", "seismic response coefficient, all limits", _each("C_sbasic", "C_scap", "C_sfloor", "C_s"),
        also="C_smulti C_scapinc C_sfloor1",
    ),
    Question(
        "Q11", "limit on S_DS for short buildings", (Need("S_DS_limited", where=(("S_DS_limit", ("taken",)),)),),
        also="S_DSlim", because="the limit of 12.8.1.3 is not taken", rests="C_sbasic",
    ),
    Question(
        "Q12", "exponent of the distribution; forces add up", _each("k", "sum_of_lateral_forces_equals_base_shear")
    ),
    Question(
        "Q13", "torsion, its amplification, both shifts in both directions",
        (*_each("torsion", "H1a_found H1a"), Need("A_x amplification", where=_AMPLIFIED)),
        also="r_Dplus r_Dminus V_desx V_desy",
    ),
    Question("Q14", "redundancy", _each("rho")),
    Question("Q15", "drift, amplified, against its limit", _each("r_Delta", "C_d", "drift")),
    Question("Q16", "stability and its maximum", _each("theta_max", "stability")),
    Question(
        "Q17", "diaphragms, collectors, transfer forces",
        _each("F_px", "F_Tx transfer", "F_jx connections", "F_cx collectors"),
    ),
    Question("Q18", "vertical effect and overstrength in the combinations", _each("r_Ev", "Omega_0", "combinations")),
    Question("Q19", "both directions at once", _each("directions")),
    Question(
        "Q20", "modal analysis: mass, scaling, combination",
        tuple(Need(name, where=_BY_MODES) for name in ("modes_enough", "f_V", "f_Delta")),
        because="the lateral forces here are static", rests="V",
    ),
    Question("Q21", "stiffness of cracked sections in the model", (Need("V_applied", text="stiffness: "),)),
    Question(
        "Q22", "overturning carried into the foundations", _each("M_b", "M_f", "uplift_strength uplift_allowable"),
        also="V_h N_f",
    ),
)  # fmt: skip
"""The questions in the order in which they print."""

SYMBOLS = tuple(
    Symbol(each.id, f"question {each.id} does not apply: {each.words}", "words", choices=(NOT_APPLICABLE,))
    for each in QUESTIONS
)
