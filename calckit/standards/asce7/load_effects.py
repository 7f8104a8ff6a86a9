"""Chapter 12, load effects: vertical and horizontal effects, load combinations, directions taken together.

Knows which factor, which effect and which combination applies. Must not know elements or their strength.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.book import Entry, this_cell
from calckit.core.formula import Formula
from calckit.core.handle import Handle, Handles
from calckit.core.record import NOT_CHECKED, NOT_OK, OK, Line, Source
from calckit.errors import Fault, InputError, ScopeError
from calckit.standards.asce7 import load_effects_rules as rules
from calckit.standards.asce7.clauses import rule, rule_of
from calckit.standards.asce7.found import finding, with_findings

if TYPE_CHECKING:
    from calckit.core.scope import Scope

_ALLOWABLE_CLAUSE = rule("2.4.5", obtained="found")
SNOW: dict[str, tuple[tuple[str, Source], tuple[str, Source]]] = {
    "ASCE 7-16": (("0.2", rule("2.3.6")), ("0.75", _ALLOWABLE_CLAUSE)),
    "ASCE 7-22": (("0.15", rule_of("ASCE 7-22", "2.3.6")), ("0.1", rule_of("ASCE 7-22", "2.4.5"))),
}
"""Factors on S in combinations 6 and 9 of each edition."""


def methods(scope: Scope) -> tuple[str, ...]:
    """The methods whose combinations are printed; both while load_method is not answered."""
    word = scope.word("load_method")
    return (word,) if word in (rules.STRENGTH, rules.ALLOWABLE) else (rules.STRENGTH, rules.ALLOWABLE)


def load_effects(scope: Scope) -> Handles:
    """E_v over D, the factors of the combinations in force, the combinations in words, and the rule of 12.5."""
    if scope.word("SDC") == "A":
        cure = "leave the step out; take the forces and combinations of 1.4"
        raise ScopeError(f"{scope.id_of('r_Ev')}: 12.4 does not apply in design category A; {cure}")
    if scope.number("S_DS") is None:
        raise InputError("asce7.load_effects", [scope.missing("S_DS")])
    edition = str(scope.calc.title_block["standard"])
    (snow_6, source_6), (snow_9, source_9) = SNOW[edition]
    with scope.step():
        made = Handles([_vertical(scope)])
        if rules.STRENGTH in methods(scope):
            made += [scope.compute(formula, rests=("load_method",)) for formula in (rules.C_D6, rules.C_D7)]
            made.append(_live(scope))
            made.append(scope.state("c_S6", snow_6, "table", source_6, detail=f"{edition}: {snow_6}"))
        if rules.ALLOWABLE in methods(scope):
            factors = (rules.C_D8, rules.C_D9, rules.C_D10)
            made += [scope.compute(formula, rests=("load_method",)) for formula in factors]
            made.append(scope.state("c_S9", snow_9, "table", source_9, detail=f"{edition}: {snow_9}"))
            if scope.number("rho") is not None and scope.number("C_s") is not None:
                made.append(scope.compute(rules.C_S_ALLOWABLE))
        made.append(_in_words(scope))
        made.append(_directions(scope))
        return made


def _vertical(scope: Scope) -> Handle:
    """E_v over D: nothing where it is left out, 0.3 S_av with a vertical spectrum, else 0.2 S_DS."""
    rests = ("vertical_effect", "SDC")
    if scope.word("vertical_effect") == "left out":
        if scope.word("SDC") != "B":
            given = f"given design category {scope.word('SDC') or 'not stated'}"
            rest = f"{given}; answer vertical_effect with counted"
            raise ScopeError(f"{scope.id_of('r_Ev')}: E_v may be left out in design category B only (12.4.2.2); {rest}")
        detail = "design category B: the vertical effect is permitted to be 0"
        return scope.state("r_Ev", "0", "table", rule("12.4.2.2"), detail=detail, rests=rests)
    if scope.number("S_av") is not None:
        return scope.compute(rules.R_EV_SPECTRUM, detail="with the vertical spectrum of 11.9", rests=rests)
    if scope.number("S_DSlim") is not None:
        limited = Formula("r_Ev", rules.R_EV.text.replace("S_DS", "S_DSlim"), rules.R_EV.source)
        return scope.compute(limited, detail="with S_DS limited by 12.8.1.3", rests=rests)
    return scope.compute(rules.R_EV, rests=rests)


def _live(scope: Scope) -> Handle:
    reduced = scope.word("L_reduced") == "yes"
    factor = "0.5" if reduced else "1.0"
    why = "live load not above 100 psf, no garage, no assembly" if reduced else "no reduction stated"
    detail = f"{why}: {factor}"
    return scope.state("c_L", factor, "table", rule("2.3.6"), detail=detail, rests=("L_reduced",))


def _in_words(scope: Scope) -> Handle:
    """The combinations with their numbers, for the drawings and the notes of other calculations."""

    def shown(name: str) -> str:
        entry = scope.find(name)
        return str(entry.line.shown) if entry and scope.number(name) is not None else scope.plain(name)

    rho = shown("rho")
    texts = []
    if rules.STRENGTH in methods(scope):
        texts.append(
            f"Strength: (6) {shown('c_D6')} D + {rho} Q_E + {shown('c_L')} L + {shown('c_S6')} S; "
            f"(7) {shown('c_D7')} D + {rho} Q_E."
        )
    if rules.ALLOWABLE in methods(scope):
        texts.append(
            f"Allowable stress: (8) {shown('c_D8')} D + 0.7 × {rho} Q_E; (9) {shown('c_D9')} D + 0.525 × {rho} Q_E "
            f"+ 0.75 L + {shown('c_S9')} S; (10) {shown('c_D10')} D + 0.7 × {rho} Q_E."
        )
    texts.append(f"Q_E acts in either sense; with overstrength, {shown('Omega_0')} Q_E stands for {rho} Q_E.")
    names = ("c_D6", "c_D7", "c_L", "c_S6", "c_D8", "c_D9", "c_D10", "c_S9", "rho", "Omega_0")
    line = Line(scope.id_of("combinations"), "note", meaning="load combinations", part=scope.id, text=" ".join(texts))
    return scope.write(Entry(line, this_cell()), names)


def _directions(scope: Scope) -> Handle:
    """Whether the directions are taken together (12.5), and whether the effects say so."""
    verdict, detail, missing = _taken_together(scope)
    rests = ("SDC", *with_findings(["H5"]), "two_systems", "orthogonal")
    return scope.verdict(
        "directions", "Directions taken together", verdict, rule("12.5"), detail=detail, missing=missing, rests=rests
    )


def _taken_together(scope: Scope) -> tuple[str, str, str]:
    category, nonparallel, shared = scope.word("SDC"), finding(scope, "H5"), scope.word("two_systems")
    if category is None:
        return NOT_CHECKED, "", "SDC (seismic design category)"
    if category == "B":
        return OK, "design category B: each direction by itself", ""
    reasons = ["nonparallel systems (H5)"] if nonparallel == "yes" else []
    if category != "C" and shared == "yes":
        reasons.append("elements of two intersecting systems")
    if not reasons:
        asked = {"H5": nonparallel} if category == "C" else {"H5": nonparallel, "two_systems": shared}
        if unanswered := [name for name, word in asked.items() if word is None]:
            return NOT_CHECKED, "", f"answers {', '.join(unanswered)}"
        return OK, f"design category {category}: each direction by itself", ""
    needed = f"design category {category}, {' and '.join(reasons)}: 100 % with 30 % at right angles"
    answer = scope.word("orthogonal")
    if answer is None:
        return NOT_CHECKED, needed, "answer orthogonal"
    return (OK, needed, "") if answer == "yes" else (NOT_OK, f"{needed} is needed", "")


def load_combinations(scope: Scope) -> Handle:
    """E_v, E_h or E_mh and every combination over the listed elements, with the largest and the smallest effect."""
    if faults := _given_twice(scope):
        raise InputError("asce7.load_combinations", faults)
    factors = {rules.STRENGTH: ("c_D6", "c_D7", "c_L", "c_S6"), rules.ALLOWABLE: ("c_D8", "c_D9", "c_D10", "c_S9")}
    needed = ("r_Ev", *(name for method in methods(scope) for name in factors[method]))
    if faults := [scope.missing(name) for name in needed if scope.number(name) is None]:
        raise InputError("asce7.load_combinations", faults)
    overstrength = scope.word("overstrength") == "yes"
    two = scope.has_number("Q_Ep") and scope.has_number("Q_Et")
    effects = ("D", "L", "S", *(() if two else ("Q_E",)))
    wanted = [name for name in effects if not scope.has_number(name)]
    wanted += [name for name in ("Omega_0" if overstrength else "rho",) if scope.number(name) is None]
    with scope.step():
        if wanted:
            missing = ", ".join(f"{scope.plain(name)} ({scope.symbol(name).meaning})" for name in wanted)
            return scope.verdict(
                "load_combinations", "Load combinations", NOT_CHECKED, rule("2.3.6"), missing=missing,
                rests=(*effects, "rho", "Omega_0", "overstrength"),
            )  # fmt: skip
        unit = scope.find("D").line.unit  # type: ignore[union-attr]
        if two:
            scope.compute(rules.Q_E_TWO, unit=unit, detail="the redundancy factor of this part is taken for both")
        scope.compute(rules.E_V, unit=unit)
        scope.compute(_horizontal(scope, overstrength), unit=unit, rests=("overstrength",))
        for method in methods(scope):
            made = _combined(scope, method, overstrength, unit)
        return made


def _given_twice(scope: Scope) -> list[Fault]:
    entry = scope.find("Q_E")
    if entry is None or entry.line.kind not in ("given", "assumption") or scope.find("Q_Ep") is None:
        return []
    cure = "give Q_E alone, or the two effects Q_Ep and Q_Et from which it is worked"
    return [Fault("Q_E", "one source", "Q_E beside Q_Ep", cure, scope.symbol("Q_E").meaning)]


def _horizontal(scope: Scope, overstrength: bool) -> Formula:
    if not overstrength:
        return rules.E_H
    return rules.E_MH_LIMITED if scope.has_number("E_cl") else rules.E_MH


def _combined(scope: Scope, method: str, overstrength: bool, unit: str) -> Handle:
    printed = (rules.PRINTED_OVERSTRENGTH if overstrength else rules.PRINTED)[method]
    for formula in (*printed, *rules.EXTREMES[method]):
        made = scope.compute(formula, unit=unit, rests=("load_method", "overstrength"))
    if made.rows:
        horizontal = "E_mh" if overstrength else "E_h"
        columns = [formula.result for formula in (*printed, *rules.EXTREMES[method])]
        title = f"Load combinations, {method}{', with overstrength' if overstrength else ''}"
        inputs = ["D", "L", "S", "Q_E", horizontal]
        listed = [name for name in inputs if (entry := scope.find(name)) and entry.line.rows]
        scope.table(f"combinations_{method.split()[0]}", title, [*listed, *columns], head="Element")
    return made
