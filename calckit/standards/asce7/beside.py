"""Values set beside ours: those of a printout, and the floor of a site-specific study.

Knows what may be compared and the 80 % of 21.3 and 21.4. Must not know the structure.
"""

from __future__ import annotations

import csv
from functools import partial
from typing import TYPE_CHECKING

from calckit.core.handle import Handle, Handles
from calckit.core.inputs import NONE
from calckit.core.record import NOT_CHECKED, Flag
from calckit.core.table import load
from calckit.errors import Fault, InputError, ScopeError
from calckit.standards.asce7 import ground_rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.hazard import (
    PACKAGE,
    basis,
    coefficient_F_a,
    coefficient_F_v,
    ground_class,
    of_2022,
    site_class,
    without_velocity,
)

if TYPE_CHECKING:
    from calckit.core.scope import Scope

WITHIN = 1
"""Difference in % taken for rounding of printed values; common practice, no source."""
PGA_FLOOR = "default class D: whether F_PGA has a least value, as F_a has, is to be looked up in 11.8.3"
FLOOR = "Site-specific {} is not below 80 % of the general procedure"


# values of a printout


def printed_values(scope: Scope, text: str) -> Handles:
    """Printed values as inputs, the difference of each from ours in %, and the check of the largest."""
    if text.strip().partition(":")[0].strip() == NONE:
        return Handles()
    where, known = "asce7.printed_values", ground_rules.COMPARED
    typed = [[cell.strip() for cell in row] for row in csv.reader(text.strip().splitlines(), skipinitialspace=True)]
    faults = []
    for number, row in enumerate(typed, 1):
        place = f"row {number} ({row[0] if row else ''})"
        if len(row) != 3:
            faults.append(Fault(place, "symbol, value, source", ", ".join(row), "write three entries"))
        elif row[0] not in known:
            faults.append(Fault(place, f"one of {', '.join(known)}", row[0], "leave the row out"))
        elif scope.number(row[0]) is None:
            faults.append(scope.missing(row[0]))
    names = [row[0] for row in typed if row]
    faults += [Fault(where, "each symbol once", f"{name} twice") for name in set(names) if names.count(name) > 1]
    if faults:
        raise InputError(where, faults)
    with scope.step():
        made, differences = Handles(), []
        for name, value, source in typed:
            made.append(scope.given(f"{name}pr", value, source))  # type: ignore[attr-defined]
        for name in names:
            result = f"e_{name.replace('_', '')}"
            made.append(scope.compute(ground_rules.difference(result, f"{name}pr", name), decimals=2))
            differences.append(f"abs({result})")
        largest = f"max({', '.join(differences)})" if len(differences) > 1 else differences[0]
        title = f"Printed values agree with ours within {WITHIN} %"
        source_of_check = ground_rules.BESIDE
        made.append(scope.require(f"{largest} <= {WITHIN}", title=title, source=source_of_check, id_="printed_agree"))
        return made


# peak ground acceleration


def peak_acceleration(scope: Scope) -> Handles:
    """F_PGA by Table 11.8-1 and PGA_M in 7-16; in 7-22 and by a study PGA_M is an input; none without a value."""
    where = "asce7.peak_acceleration"
    name = "PGA_M" if of_2022(scope) or basis(scope) == "site-specific" else "PGA"
    found = scope.find(name)
    if found is not None and found.line.value == NONE:
        return Handles()
    if name == "PGA_M":
        if found is None:
            raise InputError(where, [scope.missing("PGA_M")])
        return Handles([Handle(scope, found.line.id)])
    faults = [scope.missing("PGA")] if scope.number("PGA") is None else []
    faults += [scope.missing("site_class")] if scope.word("site_class") is None else []
    if faults:
        raise InputError(where, faults)
    letter = ground_class(scope)
    if letter == "F":
        raise ScopeError("site class F: PGA_M comes from the site response analysis (11.8.3); give it as PGA_M")
    default = scope.word("site_class") == "D default"
    flags = [Flag(PGA_FLOOR, True, "holder of the standard")] if default else []
    with scope.step():
        if scope.word("site_class") == "B assumed":
            F_PGA = without_velocity(scope, "F_PGA", flags)
        else:
            found_value = load(PACKAGE, "F_PGA").along(letter, "PGA", scope.number("PGA") or 0.0)
            F_PGA = scope.look_up("F_PGA", found_value, flags, rests=("site_class", "underlying_class", "PGA"))
        return Handles([F_PGA, scope.compute(ground_rules.PGA_M)])


# the floor of a site-specific study


def study_floor(scope: Scope) -> Handles:
    """S_DS, S_D1 and pasted ordinates of a study against 80 % of the general procedure (21.3, 21.4)."""
    if basis(scope) != "site-specific":
        return Handles()
    faults = [scope.missing(name) for name in ("S_DS", "S_D1", "S_S", "S_1", "T_L") if scope.number(name) is None]
    faults += [scope.missing("site_class")] if scope.word("site_class") is None else []
    if faults:
        raise InputError("asce7.study_floor", faults)
    with scope.step():
        return _floor_22(scope) if of_2022(scope) else _floor_16(scope)


def _floor_16(scope: Scope) -> Handles:
    missing = _undefined(scope)
    if missing:
        return _not_checked(scope, missing)
    _coefficients(scope)
    for formula in (
        ground_rules.S_MS_GENERAL, ground_rules.S_M1_GENERAL, ground_rules.S_DS_GENERAL, ground_rules.S_D1_GENERAL,
    ):  # fmt: skip
        scope.compute(formula)
    made = _against_80_percent(scope)
    if scope.find("S_an") is not None:
        for formula in (ground_rules.T_0_GENERAL, ground_rules.T_S_GENERAL, ground_rules.S_A_GENERAL):
            scope.compute(formula)
        scope.table("floor", "Ordinates of the study and of the general procedure", ["T_n", "S_an", "S_ag"], "Period")
        made.append(_require(scope, "S_an", "S_ag", "ordinates"))
    return made


def _undefined(scope: Scope) -> str:
    """Why the general procedure has no value for the site class, blank if it has."""
    letter, S_S, S_1 = site_class(scope), scope.number("S_S") or 0.0, scope.number("S_1") or 0.0
    if letter == "F":
        return "the general procedure of 21.3 for class F"
    if letter == "E" and 0.75 < S_S < 1.0:
        return "F_a of class E between S_S 0.75 and 1.0 (Table 11.4-1 has no entry to interpolate to)"
    if letter == "E" and 0.1 < S_1 < 0.2:
        return "F_v of class E between S_1 0.1 and 0.2 (Table 11.4-2)"
    return ""


def _coefficients(scope: Scope) -> None:
    """F_a and F_v of the general procedure: those of 11.4, but for classes D and E where 21.3 has its own."""
    letter, S_S, S_1 = site_class(scope), scope.number("S_S") or 0.0, scope.number("S_1") or 0.0
    own = {"F_ag": "1.0"} if letter == "E" and S_S >= 1.0 else {}
    if letter in ("D", "E") and S_1 >= 0.2:
        own["F_vg"] = "2.5" if letter == "D" else "4.0"
    source = rule("21.3", obtained="memory, medium")
    by_table = {"F_ag": partial(coefficient_F_a, flags=[]), "F_vg": coefficient_F_v}
    for name, write in by_table.items():
        if name in own:
            detail = f"21.3, class {letter}: {own[name]}"
            scope.state(name, own[name], "table", source, detail=detail, rests=("site_class", "S_S", "S_1"))
        else:
            write(scope, letter, name=name)


def _floor_22(scope: Scope) -> Handles:
    absent = [name for name in ("S_MS", "S_M1") if scope.number(name) is None]
    if absent:
        return _not_checked(scope, f"{' and '.join(absent)} of the geodatabase for the site class (class F: class E)")
    scope.compute(ground_rules.S_DS_OF_PRINTOUT)
    scope.compute(ground_rules.S_D1_OF_PRINTOUT)
    return _against_80_percent(scope)


def _against_80_percent(scope: Scope) -> Handles:
    return Handles([_require(scope, "S_DS", "S_DSg", "S_DS"), _require(scope, "S_D1", "S_D1g", "S_D1")])


def _require(scope: Scope, ours: str, general: str, words: str) -> Handle:
    source = rule("21.4" if words != "ordinates" else "21.3", obtained="memory, medium")
    return scope.require(f"{ours} >= 0.80*{general}", title=FLOOR.format(words), source=source, id_=f"floor_{words}")


def _not_checked(scope: Scope, missing: str) -> Handles:
    source, title = rule("21.4", obtained="memory, medium"), FLOOR.format("S_DS and S_D1")
    rests = ("site_class", "hazard_basis")
    return Handles([scope.verdict("floor_S_DS", title, NOT_CHECKED, source, missing=missing, rests=rests)])
