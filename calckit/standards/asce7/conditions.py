"""Reliefs that hold under conditions: the limit on S_DS, the category by S_DS alone, the exemption of class F.

Knows the conditions of each and what is missing to check them. Must not know forces or how they are distributed.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.handle import Handle, Handles
from calckit.core.record import NOT_CHECKED, NOT_OK, OK
from calckit.errors import InputError
from calckit.standards.asce7 import ground_rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.found import IRREGULARITIES, finding, with_findings
from calckit.standards.asce7.hazard import exempted, of_2022, site_class

if TYPE_CHECKING:
    from calckit.core.scope import Scope

MOST_STORIES = 5
SHORT = 0.5
"""Longest period, in s, of 12.8.1.3 and of the exemption of class F."""
LIMIT_TITLE = "Conditions of the limit on S_DS"
LIMIT_RESTS = (*with_findings(IRREGULARITIES), "S_DS_limit", "N_grade", "T", "rho", "site_class", "risk_category")


def short_building_limit(scope: Scope) -> Handles:
    """The limited S_DS of 12.8.1.3 where it is asked for and every condition holds; NOT CHECKED in 7-22."""
    if scope.word("S_DS_limit") != "taken":
        return Handles()
    if scope.number("S_DS") is None:
        raise InputError("asce7.short_building_limit", [scope.missing("S_DS")])
    source = ground_rules.S_DS_LIMITED.source
    with scope.step():
        verdict, detail, missing = _conditions(scope)
        check = scope.verdict(
            "S_DS_limited", LIMIT_TITLE, verdict, source, detail=detail, missing=missing, rests=LIMIT_RESTS
        )
        return Handles([check, scope.compute(ground_rules.S_DS_LIMITED)]) if verdict == OK else Handles([check])


def _conditions(scope: Scope) -> tuple[str, str, str]:
    """Verdict, words and what is missing, for the conditions of 12.8.1.3."""
    if of_2022(scope):
        return NOT_CHECKED, "", "the classes for which this edition allows the limit; S_DS is used without it"
    broken, missing = [], []
    for name in IRREGULARITIES:
        word = finding(scope, name)
        if word is None:
            missing.append(name)
        elif word == "yes":
            broken.append(f"irregularity {name}")
    N, T, rho = scope.number("N_grade"), scope.number("T", "s"), scope.number("rho")
    letter, risk = site_class(scope), scope.word("risk_category")
    for name, value in (("N_grade", N), ("T", T), ("rho", rho), ("site_class", letter), ("risk_category", risk)):
        if not value:
            missing.append(name)
    if N is not None and N > MOST_STORIES:
        broken.append(f"more than {MOST_STORIES} stories above the lower of base and grade plane")
    if T is not None and T > SHORT:
        broken.append(f"T above {SHORT} s")
    if rho is not None and rho > 1.0:
        broken.append("a redundancy factor above 1.0")
    if letter in ("E", "F"):
        broken.append(f"site class {letter}")
    if risk in ("III", "IV"):
        broken.append(f"risk category {risk}")
    if broken:
        return NOT_OK, f"S_DS is used without the limit: {', '.join(broken)}", ""
    if missing:
        return NOT_CHECKED, "", f"{', '.join(missing)}, to be answered above this step; S_DS is used without the limit"
    return OK, "no irregularity, stories, T, rho, site class and risk category within 12.8.1.3", ""


def category_conditions(scope: Scope) -> Handles:
    """The conditions under which 11.6 allows the category by S_DS alone; nothing where both tables are used."""
    if scope.word("category_basis") != "S_DS alone":
        return Handles()
    names = ("S_1", "T_a", "T_S", "T_drift", "C_s", "C_sbasic")
    faults = [scope.missing(name) for name in names if scope.number(name) is None]
    if faults:
        raise InputError("asce7.category_conditions", faults)
    with scope.step():
        made = Handles(
            scope.require(
                relation, title=f"Category by S_DS alone: {words}", source=rule("11.6"), id_=f"category_{id_}"
            )
            for id_, relation, words in (
                ("S_1", "S_1 < 0.75", "S_1"),
                ("T_a", "T_a < 0.8*T_S", "approximate period"),
                ("T_drift", "T_drift < T_S", "period for drift"),
                ("C_s", "C_s >= C_sbasic", "C_s by its basic value"),
            )
        )
        made.append(_diaphragm(scope))
        return made


def _diaphragm(scope: Scope) -> Handle:
    title, id_, word = "Category by S_DS alone: diaphragms", "category_diaphragm", scope.word("diaphragm")
    rests = ("diaphragm", "s_v")
    if word is None:
        return scope.verdict(id_, title, NOT_CHECKED, rule("11.6"), missing="the answer diaphragm", rests=rests)
    if word == "rigid":
        return scope.verdict(id_, title, OK, rule("11.6"), detail="rigid diaphragms", rests=rests)
    if word != "flexible":
        detail = f"{word} diaphragms are neither rigid nor flexible"
        return scope.verdict(id_, title, NOT_OK, rule("11.6"), detail=detail, rests=rests)
    scope.state("s_vmax", "40 ft", "table", rule("11.6"), detail="flexible diaphragms: 40 ft", rests=("diaphragm",))
    return scope.require("s_v <= s_vmax", title=title, source=rule("11.6"), id_=id_)


def exemption_of_class_F(scope: Scope) -> None:
    """Hold the period, without upper limit if known, against the 0.5 s of 20.3.1 where class F is exempted."""
    if not exempted(scope):
        return
    source = rule("20.3.1", obtained="found")
    scope.state("T_F", f"{SHORT} s", "table", source, detail=f"exemption of class F: {SHORT} s")
    period = "T_drift" if scope.number("T_drift") is not None else "T"
    scope.require(f"{period} <= T_F", title="Period of the exempted class F site", source=source, id_="class_F_period")
