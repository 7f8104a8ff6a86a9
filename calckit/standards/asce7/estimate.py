"""A second estimate of the base shear beside the first, and their difference in %.

Knows which period stands in for that of 12.8.2 and when there is none. Must not know how the base shear is worked.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.handle import Handle
from calckit.core.record import NOT_CHECKED, Flag, Source
from calckit.errors import InputError
from calckit.standards.asce7 import estimate_rules as rules
from calckit.standards.asce7.systems import system_row

if TYPE_CHECKING:
    from calckit.core.scope import Scope

EXPECTED = 30.0
"""Difference in % above which the step asks for an explanation."""
EXPECTATION = f"differences over {EXPECTED:.0f} % ask for an explanation (common practice, no source)"
FRAMES = ("steel moment frame", "concrete moment frame")
GRAVITY = {"US": "32.174 ft/s**2", "SI": "9.80665 m/s**2"}


def second_estimate(scope: Scope) -> Handle:
    """e_V: V_e from the weights and the spectrum at a period that does not rest on 12.8.2, against V.

    The lower limits of C_s and the cap on the period are left out: they are no part of what a structure feels.
    """
    needed = ("S_DS", "S_D1", "T_S", "T_L", "R", "I_e", "V")
    faults = [scope.missing(name) for name in needed if scope.number(name) is None]
    faults += [scope.missing(name) for name in ("w_x", "F_x") if scope.find(name) is None]
    if faults:
        raise InputError("asce7.second_estimate", faults)
    with scope.step():
        displaced = scope.find("delta_xe") is not None
        if not displaced and scope.word("T_a_method") == "stories":
            missing = f"{scope.plain('delta_xe')} ({scope.symbol('delta_xe').meaning}): T_a is by the stories already"
            title = "Second estimate of the base shear"
            return scope.verdict("second_estimate", title, NOT_CHECKED, rules.OWN, missing=missing, rests=("delta_xe",))
        if displaced:
            _by_displacements(scope)
        else:
            _by_stories(scope)
        scope.compute(rules.S_A_E)
        scope.compute(rules.V_E, detail="no lower limit of C_s, no cap on the period")
        made = scope.compute(rules.V_DIFFERENCE, detail=EXPECTATION)
        if abs(float(made)) > EXPECTED:
            text = f"{made.id}: {made.line.shown} % is over {EXPECTED:.0f} %; explain the difference of V_e from V"
            made.line.flags.append(Flag(text, True, "originator"))
        return made


def _by_displacements(scope: Scope) -> None:
    value, source = GRAVITY[scope.system], Source("standard gravity")
    scope.state("g", value, "table", source, detail="9.80665 m/s² by definition")
    if scope.number("V_applied") is not None:
        scope.compute(rules.T_E_MODEL, detail="forces of the model in proportion to the shear applied")
    else:
        detail = "displacements taken as those under F_x: the shear applied in the model is not stated"
        scope.compute(rules.T_E_DISPLACEMENTS, detail=detail)


def _by_stories(scope: Scope) -> None:
    levels = scope.find("w_x")
    assert levels is not None
    count = len(levels.line.rows)
    scope.state("N_e", str(count), "table", rules.OWN, detail=f"rows of the table of levels: {count}", rests=("w_x",))
    frame = system_row(scope)[1]["period"] in FRAMES
    scope.compute(rules.T_E_FRAME if frame else rules.T_E_STIFF, rests=("system",))
