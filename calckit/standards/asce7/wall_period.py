"""The approximate period of masonry and concrete shear walls (eqs 12.8-9 and 12.8-10).

Knows for which structures the equations hold and what they need. Must not know other periods or forces.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

from calckit import units
from calckit.core.handle import Handle
from calckit.core.record import Flag
from calckit.errors import InputError, ScopeError
from calckit.standards.asce7 import structure_rules as rules
from calckit.standards.asce7.systems import system_row

if TYPE_CHECKING:
    from calckit.core.scope import Scope

HIGHEST = {"US": (120.0, "ft"), "SI": (36.6, "m")}
C_Q = "0.0019"
"""Coefficient of eq. 12.8-9 for heights in ft."""
FAMILIES = ("bearing wall", "building frame")
MATERIALS = ("masonry", "concrete wall", "concrete shear wall", "plain concrete", "precast wall")


def period_of_walls(scope: Scope, operands: Mapping[str, Any], flags: Sequence[Flag]) -> Handle:
    """T_a from the walls pasted with `rows`: lengths D_i and thicknesses t_i, and the area A_B of the base.

    Raises InputError naming all that is missing, ScopeError for other systems and above the height of the clause.
    """
    faults = [scope.missing(name) for name in ("D_i", "t_i") if scope.find(name) is None]
    faults += [scope.missing("A_B")] if scope.number("A_B") is None else []
    height = operands.get("h_n") or scope.find("h_n")
    if height is None or not isinstance(height.line.value, float):
        faults.append(scope.missing("h_n"))
    if faults:
        raise InputError("asce7.approximate_period", faults)
    key, _, _ = system_row(scope)
    family, _, name = key.partition(": ")
    limit, unit = HIGHEST[scope.system]
    broken = []
    if family not in FAMILIES or not any(material in name for material in MATERIALS):
        broken.append(f"{key} is no masonry or concrete shear wall")
    if units.convert(height.line.value, height.line.unit, unit) > limit:
        broken.append(f"h_n = {height.line.shown} is above {limit:g} {unit}")
    if broken:
        raise ScopeError(
            f"{scope.id_of('T_a')} from the walls (12.8.2.1): {'; '.join(broken)}; set T_a_method to table"
        )
    scope.compute(rules.A_I)
    scope.compute(rules.A_EI, typed=operands)
    scope.table("wall_areas", "Web areas of the walls", ["D_i", "t_i", "A_i", "A_ei"], head="Wall")
    scope.compute(rules.C_W)
    scope.state("C_q", C_Q, "table", rules.T_A_WALLS.source, detail=f"with h_n in ft: {C_Q}")
    return scope.compute(rules.T_A_WALLS, typed=operands, flags=flags)
