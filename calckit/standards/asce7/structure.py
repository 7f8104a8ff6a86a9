"""Chapter 12, the structure: system, period, effective weight, irregularities and permitted procedure.

Knows Tables 12.6-1, 12.8-1 and 12.8-2 and the choice of T. Must not know forces.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

from calckit import units
from calckit.core.handle import Handle
from calckit.core.inputs import NONE
from calckit.core.record import NOT_CHECKED, NOT_OK, OK, Candidate, Flag, Source
from calckit.core.table import load
from calckit.errors import InputError, ScopeError
from calckit.standards.asce7 import formulas
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.found import IRREGULARITIES, present, with_findings
from calckit.standards.asce7.hazard import PACKAGE, of_2022, study
from calckit.standards.asce7.margins import to_limit
from calckit.standards.asce7.systems import height_conditions, system_row
from calckit.standards.asce7.wall_period import period_of_walls

if TYPE_CHECKING:
    from calckit.core.scope import Scope

TOLERATED = {"H2", "H3", "H4", "H5", "V4", "V5a", "V5b"}
"""Irregularities with which equivalent lateral forces stay permitted up to 160 ft (Table 12.6-1)."""
PROHIBITED = {"D": {"V5b"}, "E": {"H1b", "V1b", "V5a", "V5b"}, "F": {"H1b", "V1b", "V5a", "V5b"}}
"""Irregularities that 12.3.3.1 prohibits, by design category."""
RESTS = ("SDC", "risk_category", "system", "h_n", "h_x", "T", "T_S", *with_findings(IRREGULARITIES))
"""What the permitted procedure rests on."""


def approximate_period(scope: Scope, typed: Mapping[str, Any]) -> Handle:
    """T_a by Table 12.8-2; by 0.1 N or from the walls where the engineer chooses it and the conditions hold."""
    operands = scope.typed_in_place(typed)
    with scope.step():
        method = scope.choice("T_a_method", "table", Source(scope.calc.standard.name, "12.8.2.1"))
        flags = _height_flags(scope)
        if method == "stories":
            return _by_stories(scope, flags)
        if method == "walls":
            return period_of_walls(scope, operands, flags)
        _, row, _ = system_row(scope)
        table = load(PACKAGE, "C_t")
        column = "C_t (m)" if scope.system == "SI" else "C_t (ft)"
        scope.look_up("C_t", table.entry(row["period"], column), rests=("system",))
        scope.look_up("x", table.entry(row["period"], "x"), rests=("system",))
        return scope.compute(formulas.T_A_TABLE, typed=operands, flags=flags)


def _height_flags(scope: Scope) -> list[Flag]:
    levels, h_n = scope.find("h_x"), scope.number("h_n")
    if levels is None or h_n is None or not isinstance(levels.line.value, list):
        return []
    entry = scope.find("h_n")
    assert entry is not None
    highest = units.convert(max(levels.line.value), levels.line.unit, entry.line.unit)
    if abs(h_n / highest - 1) <= 0.001:
        return []
    top = max(levels.line.shown, key=float)
    text = f"h_n = {entry.line.shown} differs from the highest level, {top} {levels.line.unit}"
    return [Flag(text, True, "originator")]


def _by_stories(scope: Scope, flags: list[Flag]) -> Handle:
    key, row, _ = system_row(scope)
    levels = scope.find("h_x")
    if levels is None:
        raise InputError("asce7.approximate_period", [scope.missing("h_x")])
    count = len(levels.line.rows)
    highest = units.convert(max(levels.line.value), levels.line.unit, "ft")  # type: ignore[type-var, arg-type]
    broken = []
    if count > 12:
        broken.append(f"{count} stories, more than 12")
    if row["period"] not in ("steel moment frame", "concrete moment frame"):
        broken.append(f"{key} is no steel or concrete moment frame")
    if highest / count < 10:
        broken.append(f"average story height {highest / count:.2f} ft, below 10 ft")
    if broken:
        raise ScopeError(f"{scope.id_of('T_a')} by 0.1 N (12.8.2.1): {'; '.join(broken)}; set T_a_method to table")
    source, detail = formulas.T_A_STORIES.source, "number of levels above the base"
    scope.state("N", str(count), "table", source, detail=detail, rests=("h_x",))
    return scope.compute(formulas.T_A_STORIES, flags=flags)


def period(scope: Scope) -> Handle:
    """C_u, the upper limit C_u T_a, the period T for strength with its three candidates, and T for drift."""
    faults = [scope.missing(name) for name in ("S_D1", "T_a") if scope.number(name) is None]
    if faults:
        raise InputError("asce7.period", faults)
    with scope.step():
        found = load(PACKAGE, "C_u").along("C_u", "S_D1", scope.number("S_D1") or 0.0)
        scope.look_up("C_u", found, rests=("S_D1",))
        scope.compute(formulas.T_MAX)
        formula, reason, flags = _choice(scope)
        compared = _candidates(scope, formula, reason)
        rests = ("T_analysis", "T_a", "T_max", "T_choice")
        T = scope.compute(formula, detail=reason, flags=flags, candidates=compared, rests=rests)
        analysis, limit = scope.number("T_analysis", "s"), scope.number("T_max", "s")
        if analysis is not None and limit:
            T.line.margin = to_limit("T_analysis", analysis, limit, "the upper limit C_u T_a")
        formula = formulas.T_DRIFT_ANALYSIS if analysis is not None else formulas.T_DRIFT_APPROXIMATE
        scope.compute(formula, detail="no upper limit for drift", rests=("T_analysis",))
        return T


def _choice(scope: Scope) -> tuple[Any, str, list[Flag]]:
    analysis, approximate = scope.number("T_analysis", "s"), scope.number("T_a", "s") or 0.0
    if analysis is None:
        return formulas.T_APPROXIMATE, "no analysis: T = T_a, not C_u T_a", []
    if analysis >= approximate:
        return formulas.T_CAPPED, "analysis, not more than C_u T_a", []
    choice = scope.word("T_choice")
    if choice == "analysis":
        return formulas.T_ANALYSIS, "analysis shorter than T_a, taken by the engineer's choice", []
    if choice == "approximate":
        return formulas.T_APPROXIMATE, "T_a taken over a shorter analysis by the engineer's choice", []
    flag = Flag(
        f"{scope.id_of('T_analysis')} is shorter than T_a; T = T_a is used until T_choice is answered",
        True,
        "engineer of record",
    )
    return formulas.T_APPROXIMATE, "T_a is permitted in place of an analysis; the choice is open", [flag]


def _candidates(scope: Scope, formula: Any, reason: str) -> list[Candidate]:
    listed = []
    T_max, T_analysis = scope.number("T_max"), scope.number("T_analysis")
    capped = "T_analysis" if (T_analysis or 0) <= (T_max or 0) else "T_max"
    governs = {formulas.T_APPROXIMATE: "T_a", formulas.T_ANALYSIS: "T_analysis"}.get(formula, capped)
    words = {"T_a": "approximate period", "T_analysis": "analysis", "T_max": "upper limit C_u T_a"}
    for name, word in words.items():
        entry = scope.find(name)
        number = scope.number(name)
        shown = str(entry.line.shown) if entry and number is not None else NONE
        listed.append(
            Candidate(
                word,
                number,
                "s",
                shown,
                reason if governs == name else word,
                governs == name,
                entry.line.id if entry else "",
            )
        )
    return listed


def seismic_weight(scope: Scope) -> Handle:
    """W, the sum of the level weights; what they contain is the engineer's answer weight_contents."""
    with scope.step():
        return scope.compute(formulas.W)


def procedure(scope: Scope) -> Handle:
    """Whether equivalent lateral forces are permitted (Table 12.6-1), and prohibited irregularities (12.3.3.1)."""
    questions = (
        ("prohibited", "No prohibited irregularity", "12.3.3.1", _prohibited),
        ("procedure", "Equivalent lateral force procedure permitted", "Table 12.6-1", _table_12_6_1),
    )
    with scope.step():
        height_conditions(scope)
        for id_, title, where, decide in questions:
            verdict, detail, missing = decide(scope)
            source = rule(where, obtained="found")
            made = scope.verdict(id_, title, verdict, source, detail=detail, missing=missing, rests=RESTS)
        return made


def _prohibited(scope: Scope) -> tuple[str, str, str]:
    category = scope.word("SDC")
    if category is None:
        return NOT_CHECKED, "", "SDC (seismic design category)"
    wanted = PROHIBITED.get(category, set())
    there, unanswered = present(scope, IRREGULARITIES)
    if found := sorted(wanted & set(there)):
        return NOT_OK, f"{', '.join(found)} is prohibited in design category {category}", ""
    if waiting := sorted(wanted & set(unanswered)):
        return NOT_CHECKED, "", f"answers {', '.join(waiting)}"
    if category in ("B", "C") and "V5b" in there:
        return _weak_story(scope, category)
    return OK, f"design category {category}: none of {', '.join(sorted(wanted)) or 'the types'} present", ""


def _weak_story(scope: Scope, category: str) -> tuple[str, str, str]:
    """Type V5b in categories B and C (12.3.3.2): low structures, or a weak story with overstrength."""
    levels, h_n = scope.find("h_x"), scope.number("h_n", "ft")
    if levels is None or h_n is None:
        return NOT_CHECKED, "", "levels and h_n, for the limits of 12.3.3.2 on type V5b"
    if len(levels.line.rows) <= 2 and h_n <= 30:
        return OK, f"design category {category}, V5b: not over two stories and 30 ft (12.3.3.2)", ""
    return NOT_CHECKED, "", "that the weak story (V5b) carries Omega_0 times the force (12.3.3.2)"


def _table_12_6_1(scope: Scope) -> tuple[str, str, str]:
    if of_2022(scope):
        return NOT_CHECKED, "", "the rule of ASCE 7-22 on permitted procedures, which is not known to the kit"
    category, risk = scope.word("SDC"), scope.word("risk_category")
    levels, h_n = scope.find("h_x"), scope.number("h_n", "ft")
    if category is None or levels is None or h_n is None:
        return NOT_CHECKED, "", "SDC, levels and h_n"
    if category in "ABC":
        return OK, f"design category {category}: permitted for every structure", ""
    if risk in ("I", "II") and len(levels.line.rows) <= 2:
        return OK, f"risk category {risk}, not more than two stories", ""
    if "light frame" in (scope.word("system") or ""):
        return OK, "light frame construction", ""
    there, unanswered = present(scope, IRREGULARITIES)
    if unanswered:
        return NOT_CHECKED, "", f"answers {', '.join(unanswered)}"
    if h_n <= 160 and set(there) <= TOLERATED:
        return OK, f"h_n not above 160 ft, irregularities: {', '.join(there) or 'none'}", ""
    if there:
        listed = ", ".join(there)
        return NOT_OK, f"design category {category} with irregularities {listed} and h_n = {h_n:g} ft", ""
    return _long_period(scope, category, h_n)


def _long_period(scope: Scope, category: str, h_n: float) -> tuple[str, str, str]:
    T, T_S, increased = scope.number("T", "s"), scope.number("T_S", "s"), scope.number("T_Sinc", "s")
    if T is None or T_S is None:
        return NOT_CHECKED, "", "T and T_S"
    readings = [T_S] if study(scope.calc).reading != "both" or increased is None else [T_S, increased]
    shown = " and ".join(f"3.5 T_S = {3.5 * value:.4g} s" for value in readings)
    holds = [3.5 * value > T for value in readings]
    detail = f"regular, h_n = {h_n:g} ft above 160 ft; T = {T:.4g} s against {shown}"
    if all(holds):
        return OK, detail, ""
    if any(holds):
        return NOT_CHECKED, detail, f"the reading of 11.4.8: the answer differs between {shown}"
    return NOT_OK, f"design category {category}: {detail}", ""
