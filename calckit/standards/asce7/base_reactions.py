"""Chapter 12, the base: horizontal reaction, overturning, its reduction at the soil, the couple and uplift.

Knows when the reduction is permitted and what uplift is held against. Must not know foundations or soil.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.handle import Handle, Handles
from calckit.core.record import NOT_CHECKED, Flag
from calckit.errors import InputError, ScopeError
from calckit.standards.asce7 import base_reactions_rules as rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.load_effects import methods
from calckit.standards.asce7.load_effects_rules import STRENGTH

if TYPE_CHECKING:
    from calckit.core.scope import Scope

CANTILEVERED = "cantilevered column"
"""Family of Table 12.2-1 to which the reduction of 12.13.4 is not open."""


def base_reactions(scope: Scope) -> Handles:
    """V_h, M_b against M_x, M_f with its reduction, the couple over d_f, and the check against uplift."""
    faults = [scope.missing(name) for name in ("F_x", "h_x", "M_x") if scope.find(name) is None]
    faults += [scope.missing("V")] if scope.number("V") is None else []
    if faults:
        raise InputError("asce7.base_reactions", faults)
    with scope.step():
        made = Handles()
        if scope.number("rho") is not None:
            made.append(scope.compute(rules.V_H))
        made.append(scope.compute(rules.M_B))
        lowest = scope.find("M_x").line.rows[-1]  # type: ignore[union-attr]
        scope.require(
            f'abs(M_b/level(M_x, {lowest!r}) - 1) <= 0.001', title="Overturning by levels equals that by stories",
            source=rules.STATICS, id_="sum_of_overturning",
        )  # fmt: skip
        made.append(_at_the_soil(scope))
        if scope.number("d_f") is not None:
            made.append(scope.compute(rules.N_F))
        return Handles([*made, *(_uplift(scope, method) for method in methods(scope))])


def _at_the_soil(scope: Scope) -> Handle:
    rests = ("overturning_reduced", "system")
    answer = scope.word("overturning_reduced")
    if answer != "yes":
        detail = "no reduction taken" if answer == "no" else "no reduction: overturning_reduced is not answered"
        return scope.compute(rules.M_F, detail=detail, rests=rests)
    system = scope.word("system") or ""
    if system.startswith(CANTILEVERED):
        cure = "answer overturning_reduced with no"
        raise ScopeError(
            f"{scope.id_of('M_f')}: 12.13.4 gives no reduction to cantilevered columns; given {system}; {cure}"
        )
    detail = "equivalent lateral forces: reduced by 25 %"
    flags = [] if system else [Flag(f"{scope.id_of('M_f')}: reduced without a system stated", True, "originator")]
    return scope.compute(rules.M_F_REDUCED, detail=detail, flags=flags, rests=rests)


def _uplift(scope: Scope, method: str) -> Handle:
    """The couple against the dead load of the tension side, with the factors of combination 7 or 10."""
    left_out = scope.word("soil_vertical_effect") == "left out"
    strength = method == STRENGTH
    effect = "rho*N_f" if strength else "0.7*rho*N_f"
    factor = ("0.9" if strength else "0.6") if left_out else ("c_D7" if strength else "c_D10")
    id_, title = f"uplift_{method.split()[0]}", f"No uplift on the tension side, {method}"
    source = rule("2.3.6") if strength else rule("2.4.5", obtained="found")
    names = ("rho", "N_f", "D_f", *(() if left_out else (factor,)))
    if absent := [name for name in names if scope.number(name) is None]:
        missing = ", ".join(f"{scope.plain(name)} ({scope.symbol(name).meaning})" for name in absent)
        return scope.verdict(id_, title, NOT_CHECKED, source, missing=missing, rests=("load_method",))
    without = [Flag(f"{title}: E_v is left out at the soil (12.4.2.2)")] if left_out else []
    return scope.require(f"{effect} <= {factor}*D_f", title=title, source=source, id_=id_, flags=without)
