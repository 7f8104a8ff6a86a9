"""The analysis model against the calculation: its shear and weight, the shear for drift, the separation of buildings.

Knows the reliefs of 12.8.6, when displacements are scaled and by what. Must not know the distribution over the height.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.formula import Formula
from calckit.core.handle import Handle
from calckit.core.record import NOT_CHECKED, Flag
from calckit.errors import InputError
from calckit.standards.asce7 import model_rules as rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.forces import upper
from calckit.standards.asce7.hazard import study

if TYPE_CHECKING:
    from calckit.core.scope import Scope

WITHIN = 0.01
"""How far the model's shear and weight may be from those of the calculation."""


def analysis_model(scope: Scope) -> Handle:
    """V for drift, the checks of the model's weight and shear, and the scaled displacements where they are needed."""
    faults = [scope.missing(name) for name in ("V", "W") if scope.number(name) is None]
    if faults:
        raise InputError("asce7.analysis_model", faults)
    with scope.step():
        _shear_for_drift(scope)
        scope.require(
            f"abs(W_model/W - 1) <= {WITHIN}", title="Weight of the analysis model", source=rules.AGREEMENT,
            id_="model_weight",
        )  # fmt: skip
        return _shear_applied(scope)


def _shear_for_drift(scope: Scope) -> Handle:
    """V_drift: V itself without a relief; with one, C_s without its floor, and with it without the cap on T."""
    relief = scope.word("drift_relief") or "none"
    if relief == "none":
        return scope.compute(rules.V_DRIFT_PLAIN, detail="no relief taken for drift", rests=("drift_relief",))
    period, cap = "T", "C_scap"
    if relief == "floor and period":
        period, cap = "T_drift", "C_scapdrift"
        long = (scope.number("T_drift", "s") or 0.0) > (scope.number("T_L", "s") or 0.0)
        scope.compute(
            rules.C_S_CAP_DRIFT_LONG if long else rules.C_S_CAP_DRIFT, detail="no upper limit on the period for drift"
        )
    beyond = (scope.number(period, "s") or 0.0) > 1.5 * (scope.number("T_S", "s") or 0.0)
    plain, increased = upper(cap, f"1.5*{cap}" if beyond else "")
    reading = study(scope.calc).reading
    text = increased if reading in ("both", "exception 2") else plain
    detail = "the lower limit by S_DS left out for drift"
    if (scope.number("S_1") or 0.0) >= 0.6:
        text, detail = f"max({text}, C_sfloor1)", f"{detail}; the lower limit by S_1 stays"
    if reading == "both":
        detail += "; with the increase of 11.4.8, which is not answered"
    edition = str(scope.calc.title_block["standard"])
    flags = []
    if edition != "ASCE 7-16":
        said = f"{scope.id_of('V_drift')}: that {edition} keeps the reliefs for drift was not looked at"
        flags = [Flag(said, True, "holder of the standard")]
    scope.compute(Formula("C_sdrift", text, rule("12.8.6.1")), detail=detail, rests=("drift_relief",))
    return scope.compute(rules.V_DRIFT, flags=flags, rests=("drift_relief",))


def _shear_applied(scope: Scope) -> Handle:
    """The check of V_applied against V_drift, or against V, and then the displacements times V_drift/V_applied."""
    applied, V, V_drift = (scope.number(name, "kip") for name in ("V_applied", "V", "V_drift"))
    assert V is not None and V_drift is not None
    target, flags = "V", []
    if applied is not None and (scope.word("drift_relief") or "none") != "none":
        to_drift, to_V = (abs(applied / shear - 1) <= WITHIN for shear in (V_drift, V))
        target = "V" if to_V and not to_drift else "V_drift"
        if not to_V and not to_drift:
            text = f"{scope.id_of('V_applied')} agrees neither with V_drift nor with V: displacements are not scaled"
            flags = [Flag(text, True, "originator")]
    made = scope.require(
        f"abs(V_applied/{target} - 1) <= {WITHIN}", title="Base shear applied in the analysis model",
        source=rules.AGREEMENT, id_="model_shear", flags=flags,
    )  # fmt: skip
    if target == "V" and applied is not None and V_drift != V and made.line.verdict == "OK":
        scope.compute(rules.R_V)
        if scope.find("delta_xe") is not None:
            scope.compute(rules.DELTA_XS)
            scope.table("scaled", "Displacements scaled to the base shear for drift", ["delta_xe", "delta_xs"])
    return made


def separation(scope: Scope) -> Handle:
    """delta_M (12.12-1), with the adjacent structure's the separation delta_MT (12.12-2), against the clear distance.

    ASCE 7-22 changed the displacement that counts, and the kit does not know how: NOT CHECKED.
    """
    title, edition = "Separation", str(scope.calc.title_block["standard"])
    if edition != "ASCE 7-16":
        missing = f"12.12.3 of {edition}: its separation by another displacement is to be read in the printed standard"
        return scope.verdict("separation", title, NOT_CHECKED, rule("12.12.3"), missing=missing)
    faults = [scope.missing(name) for name in ("delta_eM", "C_d", "I_e") if scope.number(name) is None]
    if faults:
        raise InputError("asce7.separation", faults)
    with scope.step():
        scope.compute(rules.DELTA_M)
        needed = "delta_M"
        if scope.number("delta_M2") is not None:
            scope.compute(rules.DELTA_MT)
            needed = "delta_MT"
        return scope.require(f"d_gap >= {needed}", title=title, source=rule("12.12.3"), id_="separation")
