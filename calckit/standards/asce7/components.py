"""Chapter 13: seismic forces on nonstructural components, one at a time or a pasted list, in both editions.

Knows what each edition asks of a component, where its factors come from, and which candidate governs. Must not know
the structure that carries the component, beyond the numbers that enter.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from calckit.core.formula import Formula
from calckit.core.handle import Handle
from calckit.core.record import NOT_CHECKED, Candidate, Flag
from calckit.core.table import Table, load
from calckit.errors import Fault, InputError, ScopeError, nearest_first
from calckit.standards.asce7 import components_rules as rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.hazard import PACKAGE

if TYPE_CHECKING:
    from calckit.core.book import Entry
    from calckit.core.scope import Scope

STEP = "asce7.component_force"
STATED = ("given", "assumption", "judgment")
"""Kinds of lines that somebody typed."""
OF_STRUCTURE = "factors of the structure, I_e among them; not less than 1.3 above grade"


@dataclass(frozen=True)
class Edition:
    """What an edition takes from the row of a component: `factors` of F_p, in `tables`; and its equation of F_p."""

    factors: tuple[str, str]
    tables: tuple[str, ...]
    basic: Formula
    by_height: bool
    """Whether H_f and R_mu stand in the equation."""


EDITIONS = {
    "ASCE 7-16": Edition(
        ("a_p", "R_p"), ("components_architectural", "components_mechanical"), rules.F_P_BASIC, by_height=False
    ),
    "ASCE 7-22": Edition(("C_AR", "R_po"), ("components_mechanical_7_22",), rules.F_P_BASIC_7_22, by_height=True),
}


def of_edition(scope: Scope) -> Edition:
    """What the calculation's edition takes."""
    return EDITIONS[str(scope.calc.title_block["standard"])]


def find_row(scope: Scope, typed: str) -> tuple[str, Table] | Fault:
    """The key of the row that a name stands for, whole or one of its alternatives, and its table."""
    words = " ".join(typed.split())
    known: dict[str, tuple[str, Table]] = {}
    for name in of_edition(scope).tables:
        table = load(PACKAGE, name)
        for key in table.rows:
            known |= dict.fromkeys((key, *key.split(" or ")), (key, table))
    if words in known:
        return known[words]
    factors = " and ".join(of_edition(scope).factors)
    near = "; ".join(nearest_first(words, known)[:6])
    cure = f"near names: {near}; or leave it out and give {factors} with their source"
    return Fault("component", "a row of Table 13.5-1 or 13.6-1", typed, cure, scope.symbol("component").meaning)


def component_force(scope: Scope) -> Handle:
    """F_p of one component with its candidates, the vertical force, and the force for its anchors."""
    row = _row(scope)
    edition = of_edition(scope)
    modal = _modal(scope)
    grade = _grade(scope)
    needed = [*([] if row else edition.factors if _any_typed(scope) else ["component"]), "S_DS", "I_p", "W_p"]
    needed += ["A_xp"] if modal else [] if grade or _own(scope, "r_zh") else ["z", "h"]
    faults, waiting = absent(scope, needed)
    if edition.by_height and not grade:
        faults += structure_faults(scope)
    faults += importance_faults(scope)
    if faults:
        raise InputError(STEP, faults)
    if waiting:
        source, missing = rule("13.3.1"), ", ".join(scope.title_of(name) for name in waiting)
        return scope.verdict("component_force", "Seismic force on the component", NOT_CHECKED, source, missing=missing)
    with scope.step():
        flags = _factors(scope, row)
        if edition.by_height:
            flags += _by_height(scope, grade)
        elif not modal:
            _relative_height(scope)
        return forces(scope, rules.F_P_MODAL if modal else edition.basic, flags)


def entry(scope: Scope, name: str) -> Entry | None:
    """The line of a name where it stands for one value: the lists of a pasted table do not reach into a part."""
    found = scope.find(name)
    return None if found is None or isinstance(found.line.value, list) else found


def _own(scope: Scope, name: str) -> bool:
    """Whether somebody typed a number for a name."""
    found = entry(scope, name)
    return found is not None and found.line.kind in STATED and scope.number(name) is not None


def absent(scope: Scope, names: Sequence[str]) -> tuple[list[Fault], list[str]]:
    """Names without a line, and names whose line says that there is no number yet."""
    faults = [scope.missing(name) for name in names if entry(scope, name) is None]
    waiting = [name for name in names if entry(scope, name) and scope.number(name) is None]
    return faults, waiting


def _any_typed(scope: Scope) -> bool:
    return any(entry(scope, name) for name in of_edition(scope).factors)


def _row(scope: Scope) -> tuple[str, Table] | None:
    """The row of the component, None where none is named; refuses a row beside typed factors."""
    typed = scope.word("component") if entry(scope, "component") else None
    edition = of_edition(scope)
    if typed is None:
        return None
    found = find_row(scope, typed)
    if isinstance(found, Fault):
        raise InputError(STEP, [found])
    key, table = found
    faults = []
    for name in (*edition.factors, "Omega_0p"):
        text = table.row(key)[name]
        meaning = scope.symbol(name).meaning
        if _own(scope, name) and is_number(text):
            given = f"{_shown(scope, name)} beside {text} of {table.name}"
            cure = f'leave it out; override("{name}", ...) puts another value in force'
            faults.append(Fault(name, f"nothing beside the row {key}", given, cure, meaning))
        elif " to " in text:
            low, high = map(float, text.split(" to "))
            value = scope.number(name) if _own(scope, name) else None
            if value is None or not low <= value <= high:
                given = "nothing" if value is None else f"{value:g}"
                cure = f'give it with its source: given("{name}", ...)'
                needed = f"a number from {text}, as {table.name} has it for {key}"
                faults.append(Fault(name, needed, given, cure, meaning))
    if faults:
        raise InputError(STEP, faults)
    return found


def _shown(scope: Scope, name: str) -> str:
    found = scope.find(name)
    return str(found.line.shown) if found else ""


def is_number(text: str) -> bool:
    """Whether an entry of a table is a number."""
    return text.replace(".", "", 1).isdigit()


def _modal(scope: Scope) -> bool:
    """Whether floor accelerations of a modal analysis take the place of the height."""
    if not _own(scope, "a_i"):
        return False
    if of_edition(scope).by_height:
        cure = "leave a_i out"
        raise ScopeError(f"{scope.id_of('F_p')}: eq. 13.3-4 of ASCE 7-16 is not in ASCE 7-22 of this kit; {cure}")
    return True


def importance_faults(scope: Scope) -> list[Fault]:
    """A fault where I_p has a number that 13.1.3 does not."""
    value = scope.number("I_p")
    if value in (None, 1.0, 1.5):
        return []
    cure = 'answer("I_p", "1.0" or "1.5", basis=...)'
    return [Fault("I_p", "1.0 or 1.5 (13.1.3)", f"{value:g}", cure, scope.symbol("I_p").meaning)]


def structure_faults(scope: Scope) -> list[Fault]:
    """What 7-22 asks of the structure above grade and was neither given nor said to be unknown."""
    faults = []
    if entry(scope, "T_a") is None:
        cure = 'given("T_a", ...), or "none: why it is not known"'
        meaning = scope.symbol("T_a").meaning
        faults.append(Fault("T_a", "the lowest approximate period of the structure in s", "nothing", cure, meaning))
    if entry(scope, "R") is None:
        cure = 'given("R", ...) with Omega_0 and I_e, or "none: why the system is not known"'
        faults.append(Fault("R", "R of the structure, a plain number", "nothing", cure, scope.symbol("R").meaning))
    elif scope.number("R") is not None:
        faults += [scope.missing(name) for name in ("Omega_0", "I_e") if scope.number(name) is None]
    return faults


def _grade(scope: Scope) -> bool:
    """Whether 7-22 has the component at or below grade: as answered, else by its height above the base."""
    if not of_edition(scope).by_height:
        return False
    answered = scope.word("attached")
    if answered:
        return answered == rules.AT_GRADE
    height = scope.number("r_zh") if _own(scope, "r_zh") else scope.number("z") if _own(scope, "z") else None
    return height is not None and height <= 0


def _relative_height(scope: Scope) -> None:
    if _own(scope, "r_zh"):
        return
    z, h = scope.number("z", "ft") or 0.0, scope.number("h", "ft") or 0.0
    reason = "attached above the roof height: z/h counts as 1" if z > h else "at or below the base: 0" if z <= 0 else ""
    scope.compute(rules.R_ZH, detail=reason)


def _factors(scope: Scope, row: tuple[str, Table] | None) -> list[Flag]:
    """Look the factors up; a flag where they were typed."""
    names = (*of_edition(scope).factors, "Omega_0p")
    typed = [name for name in names if _own(scope, name)]
    if row:
        key, table = row
        for name in names:
            if name not in typed and is_number(table.row(key)[name]):
                scope.look_up(name, table.entry(key, name), rests=("component",))
    if not typed:
        return []
    where = f"the row {row[0]} of {row[1].name}" if row else "Table 13.5-1 or 13.6-1"
    listed = ", ".join(scope.plain(name) for name in typed)
    text = f"{scope.id_of('F_p')}: {listed} typed, not looked up: compare with {where}"
    return [Flag(text, True, "originator")]


def _by_height(scope: Scope, grade: bool) -> list[Flag]:
    """H_f and R_mu of 7-22 for one component; a flag where nobody answered how it is attached."""
    if grade:
        for name, formula in (("H_f", rules.H_F), ("R_mu", rules.R_MU)):
            source = replace(formula.source, equation="")
            scope.state(name, "1", "table", source, detail="at or below grade: 1", rests=("attached", "z", "r_zh"))
    else:
        _relative_height(scope)
        amplification(scope)
        ductility(scope)
    if scope.word("attached"):
        return []
    how = "z is not above 0" if grade else "z is above 0"
    taken = rules.AT_GRADE if grade else rules.ABOVE
    text = f"{scope.id_of('F_p')}: taken as {taken}, as {how}; answer `attached`, the base may differ from grade"
    return [Flag(text, True, "originator")]


def amplification(scope: Scope, row: str = "") -> None:
    """H_f of 7-22 above grade, by the period or, where it is said to be unknown, without it."""
    if scope.number("T_a") is None:
        scope.compute(rules.H_F_PERIOD_UNKNOWN, detail="period of the structure not known", rests=("T_a",), row=row)
        return
    scope.compute(rules.A_1)
    scope.compute(rules.A_2)
    scope.compute(rules.H_F, row=row)


def ductility(scope: Scope) -> None:
    """R_mu of 7-22 above grade, by the factors of the structure or, where they are said to be unknown, 1.3."""
    if scope.number("R") is not None:
        scope.compute(rules.R_MU, detail=OF_STRUCTURE)
        return
    detail = "system of the structure not known, above grade: 1.3"
    scope.state("R_mu", "1.3", "table", rules.R_MU.source, detail=detail, rests=("R",))


def _unit(scope: Scope) -> str:
    """The unit of the forces: that of the weight, if it is one of the calculation's set."""
    weight = scope.find("W_p")
    unit = weight.line.unit if weight else ""
    return unit if unit in {"US": ("lb", "kip"), "SI": ("N", "kN")}[scope.system] else ""


def forces(scope: Scope, basic: Formula, flags: Sequence[Flag], row: str = "") -> Handle:
    """The candidates of F_p, F_p itself, the vertical force and that of the anchors."""
    how: dict[str, Any] = {"unit": _unit(scope), "row": row}
    for formula in (basic, rules.F_P_MAX, rules.F_P_MIN):
        scope.compute(formula, **how)
    candidates = [] if row else _candidates(scope)
    F_p = scope.compute(rules.F_P, candidates=candidates, flags=flags, **how)
    scope.compute(rules.C_P, row=row)
    scope.compute(rules.F_PV, **how)
    if row or scope.number("Omega_0p") is not None:
        scope.compute(rules.F_P_OVERSTRENGTH, **how)
    else:
        missing = scope.title_of("Omega_0p")
        title = "Anchors in concrete and masonry"
        scope.verdict("anchors", title, NOT_CHECKED, rules.F_P_OVERSTRENGTH.source, missing=missing)
    return F_p


def _candidates(scope: Scope) -> list[Candidate]:
    """The three candidates in clause order; the one whose value is F_p governs."""
    reasons = {"F_pbasic": "equation of the force", "F_pmax": "upper limit", "F_pmin": "lower limit"}
    lines = {name: found.line for name in reasons if (found := scope.find(name))}
    basic, most, least = (float(line.value) for line in lines.values())  # type: ignore[arg-type]
    governs = "F_pmax" if basic > most else "F_pmin" if basic < least else "F_pbasic"
    return [
        Candidate(
            line.source.equation or f"clause {line.source.where}", value, line.unit, str(line.shown), reasons[name],
            name == governs, line.id,
        )
        for (name, line), value in zip(lines.items(), (basic, most, least), strict=True)
        if line.source
    ]  # fmt: skip
