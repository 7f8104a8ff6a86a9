"""Chapter 12, diaphragms: forces over the levels with their bounds, transfer forces, connections, collectors.

Knows which of the competing forces applies and what each waits for. Must not know the class of a diaphragm or how a
force is spread in plan.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.handle import Handle
from calckit.core.inputs import NONE
from calckit.core.record import NOT_CHECKED, OK, Flag
from calckit.errors import Fault, InputError, ScopeError
from calckit.standards.asce7 import diaphragm_forces_rules as rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.found import finding, with_findings

if TYPE_CHECKING:
    from calckit.core.scope import Scope

INCREASED_BY = ("H1a", "H1b", "H2", "H3", "H4", "V4")
"""Irregularities with which 12.3.3.4 increases the forces of connections and collectors in categories D to F."""


def diaphragm_forces(scope: Scope) -> Handle:
    """F_px at every level with its bounds, what governs it, transfer forces, the force for design, collectors."""
    _refuse_category_a(scope)
    lists = ("F_x", "w_x") if scope.word("w_px_basis") == "w_x" else ("F_x", "w_x", "w_px")
    faults = [scope.missing(name) for name in ("S_DS", "I_e") if scope.number(name) is None]
    faults += [scope.missing(name) for name in lists if not _listed(scope, name)]
    faults += _rows_apart(scope)
    if faults:
        raise InputError("asce7.diaphragm_forces", faults)
    flags = _precast(scope)
    with scope.step():
        if scope.word("w_px_basis") == "w_x":
            detail = "w_x for every direction, on the safe side: walls parallel to the force are left in"
            scope.compute(rules.W_PX_AS_W_X, detail=detail, rests=("w_px_basis",))
        for formula in (rules.F_PX_BASIC, rules.F_PX_MIN, rules.F_PX_MAX):
            scope.compute(formula)
        F_px = scope.compute(rules.F_PX, flags=flags, rests=("diaphragm_material", "SDC"))
        scope.compute(rules.I_PX)
        bounds = ["F_pxbasic", "F_pxmin", "F_pxmax", "F_px", "i_px"]
        scope.table("diaphragm_forces", "Diaphragm forces", ["w_x", "F_x", "w_px", *bounds])
        transferred = _transfer(scope)
        _design(scope, transferred)
        increased = _increase(scope)
        _collectors(scope, transferred, increased)
        return F_px


def _refuse_category_a(scope: Scope) -> None:
    if scope.word("SDC") == "A":
        cure = "leave the step out; take the forces of 1.4"
        raise ScopeError(f"{scope.id_of('F_px')}: 12.10 does not apply in design category A; {cure}")


def _listed(scope: Scope, name: str) -> bool:
    entry = scope.find(name)
    return entry is not None and isinstance(entry.line.value, list)


def _rows_apart(scope: Scope) -> list[Fault]:
    """Lists that do not run over the levels, roof first."""
    levels = scope.find("F_x")
    faults = []
    weights = scope.find("w_px")
    if weights and weights.line.kind == "given" and scope.word("w_px_basis") == "w_x":
        cure = "answer list, or leave the column w_px out"
        faults.append(Fault("w_px_basis", "list", "w_x beside a list w_px", cure))
    for name in ("w_px", "F_pa", "F_tx"):
        entry = scope.find(name)
        if levels and entry and entry.line.rows and entry.line.rows != levels.line.rows:
            given, wanted = ", ".join(entry.line.rows), ", ".join(levels.line.rows)
            cure = "name the rows as the levels, roof first"
            faults.append(Fault(name, f"a row for each level: {wanted}", given, cure, scope.symbol(name).meaning))
    return faults


def _precast(scope: Scope) -> list[Flag]:
    """Refuse precast diaphragms where 12.10.3 is mandatory; flags where the answer is open."""
    material, category = scope.word("diaphragm_material"), scope.word("SDC")
    if category == "B" or material not in (None, rules.PRECAST):
        return []
    if material and category:
        raise ScopeError(
            f"{scope.id_of('F_px')}: 12.10.3 is mandatory for precast concrete diaphragms in design category "
            f"{category} and is not in the kit; work these diaphragms by 12.10.3 outside it and leave the step out"
        )
    why = "the system is of precast concrete; " if "precast" in (scope.word("system") or "") else ""
    cure = "give the design category SDC" if material else "answer diaphragm_material"
    text = f"{scope.id_of('F_px')}: {why}12.10.3 is mandatory for precast diaphragms in categories C to F: {cure}"
    return [Flag(text, True, "originator")]


def _stated(scope: Scope, name: str) -> bool:
    """Whether a list is declared as none, with its reason."""
    entry = scope.find(name)
    return entry is not None and entry.line.value == NONE


def _transfer(scope: Scope) -> bool:
    """Transfer forces with rho, or with Omega_0 under an offset out of plane; whether they were worked."""
    id_, title, source = "transfer", "Transfer forces in the diaphragms", rule("12.10.1.1", obtained="found")
    offset, rests = finding(scope, "H4"), (*with_findings(["H4"]), "F_tx", "rho", "Omega_0")
    if not _listed(scope, "F_tx"):
        if _stated(scope, "F_tx") and offset != "yes":
            scope.verdict(id_, title, OK, source, detail="none to be transferred, as stated", rests=rests)
            return False
        missing = f"{scope.plain('F_tx')} ({scope.symbol('F_tx').meaning})"
        missing += "; with irregularity H4 there are such forces" if offset == "yes" else ""
        scope.verdict(id_, title, NOT_CHECKED, source, missing=missing, rests=rests)
        return False
    factor = "Omega_0" if offset == "yes" else "rho"
    absent = [] if scope.number(factor) is not None else [f"{scope.plain(factor)} ({scope.symbol(factor).meaning})"]
    absent += ["answer H4"] if offset is None else []
    if absent:
        scope.verdict(id_, title, NOT_CHECKED, source, missing=", ".join(absent), rests=rests)
        return False
    formula, why = {
        "Omega_0": (rules.F_T_OVERSTRENGTH, "offset out of plane (H4): overstrength"),
        "rho": (rules.F_T_REDUNDANT, "no offset out of plane (H4): redundancy"),
    }[factor]
    scope.compute(formula, detail=why, rests=with_findings(["H4"]))
    return True


def _design(scope: Scope, transferred: bool) -> None:
    """The larger of F_px and the force of the analysis, and the transfer force."""
    analyzed = _listed(scope, "F_pa")
    formula = {
        (False, False): rules.F_D, (True, False): rules.F_D_ANALYSIS,
        (False, True): rules.F_D_TRANSFER, (True, True): rules.F_D_BOTH,
    }[analyzed, transferred]  # fmt: skip
    flags = []
    if not analyzed and not _stated(scope, "F_pa"):
        text = f"{scope.id_of('F_dx')}: the forces of the structural analysis, where larger, are not given (F_pa)"
        flags.append(Flag(text, True, "originator"))
    scope.compute(formula, flags=flags, rests=("F_pa", "F_tx"))
    columns = [name for name, used in (("F_pa", analyzed), ("F_tx", transferred), ("F_Tx", transferred)) if used]
    scope.table("diaphragm_design", "Diaphragm forces for design", ["F_px", *columns, "F_dx"])


def _increase(scope: Scope) -> bool | None:
    """Whether 12.3.3.4 increases connections and collectors; None while an answer is open."""
    id_, title, source = "connections", "Diaphragm connections and collectors", rule("12.3.3.4")
    category, rests = scope.word("SDC"), ("SDC", *with_findings(INCREASED_BY))
    if category in ("B", "C"):
        scope.verdict(id_, title, OK, source, detail=f"design category {category}: no increase", rests=rests)
        return False
    asked = [name for name in INCREASED_BY if name in scope.calc.standard.symbols]
    present = [name for name in asked if finding(scope, name) == "yes"]
    if present and category is not None:
        detail = f"irregularity {', '.join(present)}; all of F_dx, on the safe side"
        scope.compute(rules.F_J, detail=detail, rests=rests)
        return True
    unanswered = [name for name in asked if finding(scope, name) is None]
    waiting = ["SDC"] if category is None else []
    if unanswered or waiting:
        missing = ", ".join([*waiting, *([f"answers {', '.join(unanswered)}"] if unanswered else [])])
        scope.verdict(id_, title, NOT_CHECKED, source, missing=missing, rests=rests)
        return None
    detail = f"none of {', '.join(asked)}: no increase"
    scope.verdict(id_, title, OK, source, detail=detail, rests=rests)
    return False


def _collectors(scope: Scope, transferred: bool, increased: bool | None) -> None:
    """The largest of three forces in design categories C to F."""
    id_, title, source = "collectors", "Collector forces", rule("12.10.2.1")
    category = scope.word("SDC")
    if category == "B":
        detail = "design category B: collectors take the diaphragm force F_dx, without overstrength"
        scope.verdict(id_, title, OK, rule("12.10.2"), detail=detail, rests=("SDC",))
        return
    absent = ["SDC (seismic design category)"] if category is None else []
    if scope.number("Omega_0") is None:
        absent.append(f"{scope.plain('Omega_0')} ({scope.symbol('Omega_0').meaning})")
    if absent:
        scope.verdict(id_, title, NOT_CHECKED, source, missing=", ".join(absent), rests=("SDC",))
        return
    for formula in (rules.F_CA, rules.F_CB):
        scope.compute(formula)
    detail = {
        True: "increased for the irregularity; forces with overstrength are not",
        False: "no increase of 12.3.3.4",
        None: "without the increase of 12.3.3.4, which is open",
    }[increased]
    scope.compute(rules.F_CM_INCREASED if increased else rules.F_CM, detail=detail)
    flags = [Flag(f"{scope.id_of('F_cx')}: transfer forces are not in it; a collector that carries one adds F_Tx")]
    scope.compute(rules.F_C, flags=flags if transferred else [], rests=("SDC",))
    scope.compute(rules.I_C)
    columns = ["F_x", "F_pxbasic", "F_pxmin", "F_ca", "F_cb", "F_cm", "F_cx", "i_cx"]
    scope.table("collector_forces", "Collector forces", columns)
