"""Chapter 12, forces: base shear, distribution over the height, drift and stability.

Knows which candidate of C_s governs and why, and which checks follow. Must not know how lines are printed.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.digits import carried, decimals_for, numeral
from calckit.core.formula import Formula
from calckit.core.handle import Handle
from calckit.core.record import NOT_CHECKED, Candidate, Flag
from calckit.core.table import load
from calckit.errors import InputError, ScopeError
from calckit.standards.asce7 import formulas, ground_rules, model_rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.conditions import exemption_of_class_F
from calckit.standards.asce7.found import present
from calckit.standards.asce7.hazard import PACKAGE, basis, ground_class, of_2022, study
from calckit.standards.asce7.margins import put_on_check, to_limit
from calckit.standards.asce7.spectrum import multi_period, ordinate_at_T
from calckit.standards.asce7.systems import system_row

if TYPE_CHECKING:
    from calckit.core.scope import Scope

IN_MODEL = Flag("P-delta effects are in the model: θ/(1 + θ) is compared with the maximum (12.8.7)")
UNDECLARED = "analysis(with_P_delta=...) does not say whether P-delta is in the model; taken as not in it"
THRESHOLD = 0.10
"""theta at or below which P-delta effects need not be considered (12.8.7)."""
MULTI, TWO = "multi-period", "two-period"
METHOD_OPEN = "the larger of both methods of 12.8.1.1 is used until C_s_method is answered"
NO_ORDINATES = "C_s by the two-period parameters alone: no ordinates of a printout for the method by S_a(T)"


def base_shear(scope: Scope) -> Handle:
    """Every candidate of C_s, the governing one, and V."""
    needed = ("S_DS", "S_D1", "S_1", "T_L", "T_S", "R", "I_e", "T", "W")
    faults = [scope.missing(name) for name in needed if scope.number(name) is None]
    if scope.word("C_s_method") == MULTI and not multi_period(scope):
        if not of_2022(scope):
            raise ScopeError("C_s_method multi-period: 12.8.1.1 of 7-16 has the two-period parameters only")
        faults.append(scope.missing("S_an"))
    if faults:
        raise InputError("asce7.base_shear", faults)
    with scope.step():
        _candidate_lines(scope)
        C_s = _governing(scope)
        floors = [scope.number(name) or 0.0 for name in _floors(scope).split(", ")]
        C_s.line.margin = to_limit("C_s", float(C_s), max(floors), "its lower limit")
        return scope.compute(formulas.V, detail=_against_computed(scope, C_s))


def _candidate_lines(scope: Scope) -> None:
    T, T_L, S_1 = scope.number("T", "s") or 0.0, scope.number("T_L", "s") or 0.0, scope.number("S_1") or 0.0
    exemption_of_class_F(scope)
    if multi_period(scope):
        ordinate_at_T(scope)
        scope.compute(ground_rules.C_S_MULTI)
    limited = scope.number("S_DSlim") is not None
    scope.compute(ground_rules.C_S_BASIC_LIMITED if limited else formulas.C_S_BASIC)
    long = T > T_L
    scope.compute(formulas.C_S_CAP_LONG if long else formulas.C_S_CAP, detail="T > T_L" if long else "T ≤ T_L")
    if study(scope.calc).reading in ("both", "exception 2") and _beyond(scope):
        scope.compute(formulas.C_S_CAP_INCREASED, detail="T > 1.5 T_S")
    floor = scope.compute(ground_rules.C_S_FLOOR_LIMITED if limited else formulas.C_S_FLOOR)
    words = "0.6, from which a second lower limit of C_s applies"
    floor.line.margin = to_limit("S_1", S_1, 0.6, words) if S_1 else None
    if S_1 >= 0.6:
        scope.compute(formulas.C_S_FLOOR_S1, detail="S_1 is not less than 0.6")


def _beyond(scope: Scope) -> bool:
    """Whether T is above 1.5 T_S, where exception 2 of 11.4.8 increases the upper limit."""
    return (scope.number("T", "s") or 0.0) > 1.5 * (scope.number("T_S", "s") or 0.0)


def upper(cap: str, increased: str) -> tuple[str, str]:
    """C_s before its lower limits: the smaller of basic value and upper limit, plain and as 11.4.8 increases it.

    `increased` names the increased upper limit; blank where the basic value alone applies.

    >>> upper("C_scap", "")
    ('min(C_sbasic, C_scap)', 'C_sbasic')
    """
    return f"min(C_sbasic, {cap})", f"min(C_sbasic, {increased})" if increased else "C_sbasic"


def _floors(scope: Scope) -> str:
    return "C_sfloor, C_sfloor1" if scope.number("S_1") and (scope.number("S_1") or 0.0) >= 0.6 else "C_sfloor"


def _governing(scope: Scope) -> Handle:
    reading = study(scope.calc).reading
    source = rule("12.8.1.1", obtained="found")
    if (
        ground_class(scope.calc) == "E"
        and scope.word("study_exception") == "exception 3"
        and (scope.number("T", "s") or 0) > (scope.number("T_S", "s") or 0)
    ):
        raise ScopeError(
            f"{scope.id_of('C_s')}: exception 3 of 11.4.8 holds for T not above T_S only; a hazard analysis is needed"
        )
    plain, increased = (
        f"max({text}, {_floors(scope)})" for text in upper("C_scap", "C_scapinc" if _beyond(scope) else "")
    )
    if reading == "both":
        scope.compute(Formula("C_swithout", plain, source), detail="11.4.8 without the 50 % increase")
        scope.compute(
            Formula("C_swith", increased, rule("11.4.8, exception 2", obtained="found")),
            detail="11.4.8 with the 50 % increase",
        )
        flag = Flag(
            f"{scope.id_of('C_s')}: the larger of both readings of 11.4.8 is used until it is answered"
        )
        text, flags = "max(C_swithout, C_swith)", [flag]
    else:
        text, flags = (increased if reading == "exception 2" else plain), []
    if of_2022(scope):
        text, flags = _by_method(scope, plain)
    candidates = _candidates(scope, reading)
    return scope.compute(Formula("C_s", text, source), candidates=candidates, flags=flags, rests=("C_s_method",))


def _methods(scope: Scope) -> tuple[str, ...]:
    """The methods of 7-22 that C_s is taken from; both while the engineer has not said which."""
    if not multi_period(scope):
        return (TWO,)
    chosen = scope.word("C_s_method")
    return (chosen,) if chosen else (MULTI, TWO)


def _by_method(scope: Scope, two_period: str) -> tuple[str, list[Flag]]:
    """C_s of 7-22 by the method or methods in use, with what is open."""
    methods = _methods(scope)
    multi = f"max(C_smulti, {_floors(scope)})"
    if methods == (MULTI,):
        return multi, []
    if methods == (TWO,):
        left = basis(scope) == "printout" and not multi_period(scope)
        return two_period, [Flag(NO_ORDINATES)] if left else []
    text = f"max(C_smulti, min(C_sbasic, C_scap), {_floors(scope)})"
    return text, [Flag(f"{scope.id_of('C_s')}: {METHOD_OPEN}", True, "engineer of record")]


def _candidates(scope: Scope, reading: str) -> list[Candidate]:
    """Every candidate in clause order with its value and reason; the one whose value is C_s governs."""
    reasons = {
        "C_smulti": "method by S_a(T) of the multi-period spectrum",
        "C_sbasic": "basic value with S_DS limited by 12.8.1.3" if scope.number("S_DSlim") else "basic value",
        "C_scap": "upper limit for T ≤ T_L"
        if (scope.number("T") or 0) <= (scope.number("T_L") or 0)
        else "upper limit for T > T_L",
        "C_scapinc": "upper limit increased by 11.4.8 for T > 1.5 T_S",
        "C_sfloor": "lower limit",
        "C_sfloor1": "lower limit where S_1 ≥ 0.6",
    }
    lines = [(name, entry.line) for name in reasons if (entry := scope.find(name))]
    values = {name: float(line.value) for name, line in lines}  # type: ignore[arg-type]
    cap = "C_scapinc" if "C_scapinc" in values else "C_scap"
    if reading == "exception 2" and not _beyond(scope):
        cap = "C_sbasic"
    if reading == "both" and not _beyond(scope):
        cap = "C_sbasic"
    upper = min(("C_sbasic", cap), key=lambda name: values[name])
    if "C_smulti" in values:
        before = {MULTI: "C_smulti", TWO: upper}
        upper = max((before[method] for method in _methods(scope)), key=lambda name: values[name])
    governs = max(
        (upper, *(name for name in ("C_sfloor", "C_sfloor1") if name in values)), key=lambda name: values[name]
    )
    return [
        Candidate(
            line.source.equation or f"clause {line.source.where}",
            values[name],
            "",
            str(line.shown),
            reasons[name],
            name == governs,
            line.id,
        )
        for name, line in lines
        if line.source
    ]


def _against_computed(scope: Scope, C_s: Handle) -> str:
    """What V would be with the kit's own C_s, where another is in force."""
    line, W = C_s.line, scope.find("W")
    if not line.computed or not isinstance(line.computed.value, float) or W is None:
        return ""
    change = (float(C_s) / line.computed.value - 1) * 100
    value = carried(line.computed.value * float(W.line.value))  # type: ignore[arg-type]
    would = f"{numeral(value, decimals_for([value], 4))} {W.line.unit}"
    own = f"with the computed C_s = {line.computed.shown}, V would be {would}"
    return f"{own}; the value in force gives {change:+.2f} %"


def vertical_distribution(scope: Scope) -> Handle:
    """k, C_vx, F_x, V_x and M_x over the height, and the check of their sum."""
    faults = [scope.missing(name) for name in ("T", "V") if scope.number(name) is None]
    faults += [scope.missing(name) for name in ("h_x", "w_x", "h_sx") if scope.find(name) is None]
    if faults:
        raise InputError("asce7.vertical_distribution", faults)
    with scope.step():
        T = scope.number("T", "s") or 0.0
        reason = (
            "T not above 0.5 s" if T <= 0.5 else "T not below 2.5 s" if T >= 2.5 else "linear between 0.5 and 2.5 s"
        )
        scope.compute(formulas.K, detail=reason)
        for formula in (formulas.WH_X, formulas.SUM_WH, formulas.C_VX, formulas.F_X, formulas.V_X, formulas.M_X):
            made = scope.compute(formula)
        scope.table(
            "forces",
            "Lateral forces, story shears and overturning moments",
            ["h_x", "w_x", "wh_x", "C_vx", "F_x", "V_x", "h_sx", "M_x"],
        )
        scope.compute(formulas.SUM_F)
        scope.require(
            "abs(sum_F/V - 1) <= 0.001", title="Sum of lateral forces equals base shear", source=formulas.F_X.source
        )
        return made


def drift(scope: Scope) -> Handle:
    """Amplified displacements and story drifts against the allowable drift; NOT CHECKED without displacements."""
    title = "Story drift"
    with scope.step():
        formula = allowable_drift(scope, "drift", title)
        if isinstance(formula, Handle):
            return formula
        if scope.find("delta_xe") is None:
            scope.compute(formula)
            scope.table("drift", "Allowable story drift", ["h_sx", "Delta_a"], head="Story below")
            return scope.require("Delta <= Delta_a", title=title, source=rule("12.12.1"), id_="drift")
        scaled = scope.find("delta_xs") is not None
        scope.compute(model_rules.DELTA_X_SCALED if scaled else formulas.DELTA_X, flags=_renamed_flags(scope))
        scope.compute(formulas.DELTA)
        scope.compute(formula)
        scope.table(
            "drift",
            "Displacements and story drifts",
            ["delta_xs" if scaled else "delta_xe", "delta_x", "Delta", "h_sx", "Delta_a"],
            head="Story below",
        )
        flags = [*_edge_flags(scope), *_relief_flags(scope)]
        made = scope.require("Delta <= Delta_a", title=title, source=rule("12.12.1"), id_="drift", flags=flags)
        return put_on_check(made, "Δ", "the allowable story drift")


def _relief_flags(scope: Scope) -> list[Flag]:
    """What is open where a relief was answered and V_drift was never worked."""
    if (scope.word("drift_relief") or "none") == "none" or scope.number("V_drift") is not None:
        return []
    text = f"{scope.id_of('drift_relief')} has no effect: asce7.analysis_model() was not run above"
    return [Flag(text, True, "originator")]


def _renamed_flags(scope: Scope) -> list[Flag]:
    """What the kit does not know of displacements in the edition in force."""
    edition = str(scope.calc.title_block["standard"])
    if edition == "ASCE 7-16":
        return []
    unknown = f"{edition} adds the deflection of the diaphragms; worked without it, to be confirmed"
    return [Flag(f"{scope.id_of('delta_x')}: {unknown}", True, "holder of the standard")]


def allowable_drift(scope: Scope, id_: str, title: str) -> Formula | Handle:
    """The formula of Delta_a, its limit written; or the check `id_` as not made, where rho is missing."""
    risk, kind = scope.word("risk_category"), scope.word("drift_class")
    faults = [scope.missing(name) for name, word in (("risk_category", risk), ("drift_class", kind)) if word is None]
    if faults or risk is None or kind is None:
        raise InputError("asce7.drift", faults)
    scope.look_up("r_Delta", load(PACKAGE, "drift").entry(kind, risk), rests=("drift_class", "risk_category"))
    moment_frame = _divided_by_rho(scope)
    if moment_frame and scope.number("rho") is None:
        missing = f"{scope.plain('rho')} (redundancy factor; it divides the allowable drift of a moment frame)"
        return scope.verdict(id_, title, NOT_CHECKED, rule("12.12.1.1"), missing=missing, rests=("rho",))
    return formulas.DELTA_A_RHO if moment_frame else formulas.DELTA_A


def _divided_by_rho(scope: Scope) -> bool:
    """Whether 12.12.1.1 divides the allowable drift by rho: moment frames only, design categories D to F."""
    key, _, _ = system_row(scope)
    return key.startswith("moment frame:") and (scope.word("SDC") or "") in ("D", "E", "F")


def _edge_flags(scope: Scope) -> list[Flag]:
    if (scope.word("SDC") or "") not in ("C", "D", "E", "F"):
        return []
    if present(scope, ("H1a", "H1b"))[0]:
        return [
            Flag(
                "torsional irregularity: drift is to be taken along the edges (12.12.1), not at the centers of mass",
                True,
                "originator",
            )
        ]
    return []


def stability(scope: Scope) -> Handle:
    """The stability coefficient of each story against its maximum; NOT CHECKED without P_x or drifts."""
    title = "Stability coefficient"
    with scope.step():
        if scope.number("beta") is None or scope.absent("beta"):
            scope.state("beta", "1.0", "table", rule("12.8.7"), detail="permitted to be taken as 1.0")
        scope.compute(formulas.THETA_MAX)
        absent = [name for name in ("P_x", "Delta", "V_x", "h_sx") if scope.find(name) is None]
        if absent:
            missing = ", ".join(f"{scope.plain(name)} ({scope.symbol(name).meaning})" for name in absent)
            return scope.verdict("stability", title, NOT_CHECKED, rule("12.8.7"), missing=missing, rests=absent)
        theta, shears = _theta(scope)
        included = scope.word("with_P_delta") == "yes"
        compared = "theta_P" if included else "theta"
        columns = ["P_x", "Delta", *shears, "h_sx", "theta"]
        if included:
            scope.compute(model_rules.THETA_P)
            columns.append("theta_P")
        scope.table("stability", "Stability coefficients", columns, head="Story below")
        values = theta.value if isinstance(theta.value, list) else []
        if values:
            words = f"{THRESHOLD:.2f}, above which P-delta counts"
            theta.line.margin = to_limit("largest θ", max(values), THRESHOLD, words)
        flags = [IN_MODEL] if included else _amplify(scope, theta)
        if scope.word("with_P_delta") is None and scope.number("V_applied") is not None:
            flags.append(Flag(scope.labelled(UNDECLARED), True, "originator"))
        source = formulas.THETA.source
        made = scope.require(f"{compared} <= theta_max", title=title, source=source, id_="stability", flags=flags)
        return put_on_check(made, scope.plain(compared), "its maximum")


def _theta(scope: Scope) -> tuple[Handle, list[str]]:
    """theta from drifts and story shears of one set of forces, and the columns of shears."""
    if (scope.word("drift_relief") or "none") == "none" or scope.number("V_drift") is None:
        return scope.compute(formulas.THETA), ["V_x"]
    scope.compute(model_rules.V_XDRIFT)
    return scope.compute(model_rules.THETA_DRIFT), ["V_x", "V_xdrift"]


def _amplify(scope: Scope, theta: Handle) -> list[Flag]:
    values = theta.value if isinstance(theta.value, list) else []
    over = [row for row, value in zip(theta.line.rows, values, strict=True) if value > THRESHOLD]
    if not over:
        return [Flag(f"θ is not above {THRESHOLD:.2f} in any story: P-delta effects need not be considered")]
    return [
        Flag(
            f"θ is above {THRESHOLD:.2f} at {', '.join(over)}: multiply drifts and forces by 1/(1 - θ) there",
            True,
            "originator",
        )
    ]

