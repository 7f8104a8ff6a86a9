"""12.9.1, the steps: modal response spectrum analysis from modes that stand as lines.

Knows which modes are enough, what a mode gives at each level, and how combined values are scaled. Must not know how
modes are found or combined: it takes T_m, W_m, r_m, s_xn, d_xn and the combined values by symbol.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.handle import Handle, Handles
from calckit.core.record import NOT_CHECKED, OK, Flag
from calckit.core.series import formula_of, numbered, symbol_of
from calckit.errors import InputError, ScopeError
from calckit.standards.asce7 import modal_rules as rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.forces import allowable_drift
from calckit.standards.asce7.hazard import study

if TYPE_CHECKING:
    from calckit.core.scope import Scope

NEED_THREE_DIMENSIONS = ("H1a", "H1b", "H4", "H5")
"""Irregularities that a model without torsion does not represent: torsional, extreme torsional, out-of-plane offset,
nonparallel system."""
STICK = "stick model"
SHARE = "0.90"
DRIFT = "Story drift, modal analysis"
WIDTH = 6
"""Columns of a table of values by mode."""
_TITLES = {
    "F_xn": "Lateral forces by mode", "V_xn": "Story shears by mode", "M_xn": "Overturning moments by mode",
    "delta_xn": "Displacements by mode", "Delta_n": "Story drifts by mode",
}  # fmt: skip

_BESIDE = (
    ("modal_forces", "Lateral forces: modes combined, for design, static", ("F_xt", "F_xd", "F_x")),
    ("modal_shears", "Story shears: modes combined, for design, static", ("V_xt", "V_xd", "V_x", "q_x")),
    ("modal_moments", "Overturning moments: modes combined, for design, static", ("M_xt", "M_xd", "M_x")),
    ("modal_displacements", "Displacements: modes combined, for design", ("delta_xt", "delta_xd")),
    ("modal_drifts", "Story drifts: modes combined, for design, allowable", ("Delta_t", "Delta_d", "Delta_a")),
)
"""Tables of the answer: the second column decides whether there is one."""


def modal_response(scope: Scope) -> Handles:
    """The spectral ordinate, coefficient and base shear of each mode, and what each mode gives at each level."""
    single = ("S_DS", "S_D1", "T_0", "T_S", "T_L", "R", "I_e", "C_d", "r_sum")
    faults = [scope.missing(name) for name in single if scope.number(name) is None]
    faults += [scope.missing(name) for name in ("T_m", "W_m", "r_m", "h_sx") if scope.find(name) is None]
    if faults:
        raise InputError("asce7.modal_response", faults)
    modes = scope.find("T_m")
    assert modes is not None
    with scope.step():
        _model(scope)
        _enough(scope)
        scope.compute(rules.S_AM, flags=_hazard_flags(scope))
        made = Handles([scope.compute(rules.C_SM), scope.compute(rules.V_M)])
        scope.table("modal", "Modal response", ["T_m", "S_am", "C_sm", "W_m", "r_m", "V_m"], head="Mode")
        numbers = [int(row) for row in modes.line.rows]
        for number in numbers:
            _one_mode(scope, number)
        for name, title in _TITLES.items():
            names = [numbered(name, number) for number in numbers]
            for start in range(0, len(names), WIDTH):
                more = f"-{start // WIDTH + 1}" if len(names) > WIDTH else ""
                scope.table(f"{name}{more}", title, names[start : start + WIDTH])
        return made


def _model(scope: Scope) -> None:
    """Whether the model fits the structure; a stick is refused where torsion must be modeled."""
    source, title = rule("12.7.3"), "Model fits the irregularities"
    rests = ("modal_model", *NEED_THREE_DIMENSIONS)
    model = scope.word("modal_model")
    if model is None:
        missing = "modal_model: stick model or three-dimensional analysis"
        scope.verdict("modal_fit", title, NOT_CHECKED, source, missing=missing, rests=rests)
        return
    if model != STICK:
        entry = scope.find("modal_model")
        detail = f"{model}: {entry.line.text}" if entry else model
        scope.verdict("modal_fit", title, OK, source, detail=detail, rests=rests)
        return
    answers = {name: scope.word(name) for name in NEED_THREE_DIMENSIONS}
    if present := [name for name, word in answers.items() if word == "yes"]:
        raise ScopeError(
            f"{scope.id_of('V_m')}: {', '.join(present)} answered yes, and a stick model has no torsion: for design a "
            "three-dimensional model is needed (12.7.3); paste its modes with methods.pasted_modes(...)"
        )
    if waiting := [name for name, word in answers.items() if word is None]:
        scope.verdict("modal_fit", title, NOT_CHECKED, source, missing=f"answers {', '.join(waiting)}", rests=rests)
        return
    detail = f"stick model; {', '.join(NEED_THREE_DIMENSIONS)} answered no"
    flag = Flag("a stick model has no torsion: accidental torsion (12.8.4.2) is to be added", True, "originator")
    made = scope.verdict("modal_fit", title, OK, source, detail=detail, rests=rests)
    made.line.flags.append(flag)


def _enough(scope: Scope) -> None:
    share = scope.number("r_sum") or 0.0
    by_alternative = round(share, 9) < 1
    where = "12.9.1.1, exception" if by_alternative else "12.9.1.1"
    detail = "the alternative to all of the mass" if by_alternative else "all of the mass is in the modes taken"
    scope.state("r_min", SHARE, "table", rule(where), detail=detail)
    scope.require("r_sum >= r_min", title="Modes enough", source=rule(where), id_="modes_enough")


def _hazard_flags(scope: Scope) -> list[Flag]:
    if study(scope.calc).reading not in ("both", "exception 2"):
        return []
    text = "exception 2 of 11.4.8 speaks of C_s of 12.8 alone: ordinates for a modal analysis are to be settled"
    return [Flag(f"{scope.id_of('S_am')}: {text}", True, "engineer of record")]


def _one_mode(scope: Scope, number: int) -> None:
    made = {symbol.name: symbol for symbol in (symbol_of(each, number) for each in rules.OF_MODE.values())}
    scope.calc.own_symbols |= made
    scope.compute(rules.coefficient_of(number))
    for formula in rules.STORY:
        scope.compute(formula_of(formula, number, rules.SERIES))


def modal_scaling(scope: Scope) -> Handles:
    """V_t against the static V, the factors on forces and drifts, and the values for design beside the static ones."""
    faults = [scope.missing(name) for name in ("V", "V_t", "S_1", "W") if scope.number(name) is None]
    if (scope.number("S_1") or 0.0) >= 0.6 and scope.number("C_sfloor1") is None:
        faults.append(scope.missing("C_sfloor1"))
    if faults:
        raise InputError("asce7.modal_scaling", faults)
    with scope.step():
        made = Handles([scope.compute(rules.F_V, detail=_share(scope)), _drift_factor(scope)])
        if scope.number("T_max") is not None and scope.number("T") is not None:
            scope.require(
                "T <= T_max", title="Period of the static base shear", source=rules.F_V.source, id_="modal_period"
            )
        made += [scope.compute(formula) for name, formula in rules.SCALED.items() if scope.find(name)]
        drifts_judged = scope.find("Delta_d") is not None and _allowed(scope)
        _beside_static(scope)
        if drifts_judged:
            scope.require("Delta_d <= Delta_a", title=DRIFT, source=rule("12.12.1"), id_="modal_drift")
        return made


def _allowed(scope: Scope) -> bool:
    """Whether Delta_a stands, written here unless asce7.drift() wrote it before."""
    if scope.absent("Delta_a"):
        formula = allowable_drift(scope, "modal_drift", DRIFT)
        if isinstance(formula, Handle):
            return False
        scope.compute(formula)
    return True


def _share(scope: Scope) -> str:
    V, V_t = scope.number("V", "kN") or 0.0, scope.number("V_t", "kN") or 1.0
    return f"V_t is {V_t / V * 100:.1f} % of V; 100 % is asked for, T in V not above C_u T_a"


def _drift_factor(scope: Scope) -> Handle:
    if (scope.number("S_1") or 0.0) >= 0.6:
        return scope.compute(rules.F_DELTA, detail="drifts are scaled for eq. 12.8-6 alone")
    detail = "drifts are not scaled, as S_1 is below 0.6 and eq. 12.8-6 does not apply"
    return scope.state("f_Delta", "1", "table", rules.F_DELTA.source, detail=detail, rests=("S_1",))


def _beside_static(scope: Scope) -> None:
    """A table for each quantity: combined, for design, static or allowable."""
    if scope.find("V_xd") and scope.find("V_x"):
        scope.compute(rules.Q_X)
    for id_, title, names in _BESIDE:
        if scope.find(names[1]):
            scope.table(id_, title, [name for name in names if scope.find(name)])
