"""Chapter 12, structural walls out of plane: the force on the wall and that of its anchorage.

Knows the limits and how the diaphragm decides the anchorage. Must not know the wall's strength or its anchors.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit import units
from calckit.core.handle import Handle, Handles
from calckit.core.record import NOT_CHECKED, Flag
from calckit.errors import Fault, InputError, ScopeError
from calckit.standards.asce7 import wall_forces_rules as rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.found import finding, with_findings
from calckit.standards.asce7.load_effects import methods
from calckit.standards.asce7.load_effects_rules import ALLOWABLE

if TYPE_CHECKING:
    from calckit.core.scope import Scope


def wall_forces(scope: Scope) -> Handles:
    """The force on walls out of plane (12.11.1), for each unit of length with h_w, and the anchorage (12.11.2)."""
    if scope.word("SDC") == "A":
        cure = "leave the step out; take the forces of 1.4"
        raise ScopeError(f"{scope.id_of('f_w')}: 12.11 does not apply in design category A; {cure}")
    faults = [scope.missing(name) for name in ("S_DS", "I_e") if scope.number(name) is None]
    faults += [scope.missing("w_w")] if not scope.has_number("w_w") else []
    faults += _above_the_roof(scope)
    if faults:
        raise InputError("asce7.wall_forces", faults)
    with scope.step():
        made = Handles(scope.compute(formula) for formula in (rules.F_W_BASIC, rules.F_W_MIN, rules.F_W))
        if ALLOWABLE in methods(scope):
            made.append(scope.compute(rules.F_W_ALLOWABLE, rests=("load_method",)))
        if scope.has_number("h_w"):
            made += [scope.compute(formula) for formula in (rules.W_WALL, rules.F_WALL)]
        columns = ("w_w", "f_wbasic", "f_wmin", "f_w", "f_wA", "h_w", "W_wall", "F_wall")
        _tabulate(scope, "wall_forces", "Walls out of plane", columns)
        made.append(_anchorage(scope))
        return made


def _above_the_roof(scope: Scope) -> list[Fault]:
    z_a, h_n = scope.find("z_a"), scope.number("h_n", "ft")
    if z_a is None or h_n is None or not scope.has_number("z_a"):
        return []
    value = z_a.line.value
    heights = [float(each) for each in (value if isinstance(value, list) else [value])]  # type: ignore[arg-type]
    highest = max(heights)
    if units.convert(highest, z_a.line.unit, "ft") <= h_n * (1 + 1e-9):
        return []
    needed = f"a height not above that of the roof, {h_n:g} ft"
    cure = "correct the height; a parapet is a component"
    return [Fault("z_a", needed, f"{highest:g} {z_a.line.unit}", cure, scope.symbol("z_a").meaning)]


def _anchorage(scope: Scope) -> Handle:
    title = "Anchorage of walls"
    kind = finding(scope, "diaphragm")
    flexible = kind in ("flexible", "semirigid")
    absent = [name for name in ("W_pa", *(("L_f",) if flexible else ())) if not scope.has_number(name)]
    missing = [f"{scope.plain(name)} ({scope.symbol(name).meaning})" for name in absent]
    if kind is None:
        missing.append(f"answer diaphragm ({scope.symbol('diaphragm').meaning})")
    if missing:
        rests = (*with_findings(["diaphragm"]), "W_pa", "L_f")
        return scope.verdict("anchorage", title, NOT_CHECKED, rule("12.11.2"), missing=", ".join(missing), rests=rests)
    basic = rules.F_AN_BASIC
    if flexible:
        scope.compute(rules.K_A, flags=_semirigid(scope, kind), rests=with_findings(["diaphragm"]))
    else:
        detail = "diaphragm that is not flexible: 1.0"
        scope.state("k_a", "1.0", "table", rule("12.11.2.1"), detail=detail, rests=with_findings(["diaphragm"]))
        if scope.has_number("z_a") and scope.number("h_n") is not None:
            scope.compute(rules.R_Z, rests=with_findings(["diaphragm"]))
            basic = rules.F_AN_BELOW
    weight = scope.find("W_pa")
    assert weight is not None
    for formula in (basic, rules.F_AN_MIN, rules.F_AN):
        made = scope.compute(formula, unit=weight.line.unit)
    _tabulate(scope, "wall_anchorage", title, ("L_f", "k_a", "z_a", "r_z", "W_pa", "F_anbasic", "F_anmin", "F_an"))
    return made


def _semirigid(scope: Scope, kind: str | None) -> list[Flag]:
    if kind != "semirigid":
        return []
    rest = "what 12.11.2.1 asks under a semirigid one is to be confirmed"
    return [Flag(f"{scope.id_of('k_a')}: taken as for a flexible diaphragm; {rest}", True, "originator")]


def _tabulate(scope: Scope, id_: str, title: str, names: tuple[str, ...]) -> None:
    """A table of those of the lines that are lists."""
    listed = [name for name in names if (entry := scope.find(name)) and entry.line.rows]
    if listed:
        scope.table(id_, title, listed, head="Wall")
