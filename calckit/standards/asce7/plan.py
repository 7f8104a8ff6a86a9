"""Chapter 12, one story in plan: class of the diaphragm and distribution of a lateral force to the elements.

Knows the three classes, the load cases of accidental torsion and what is checked of a distribution. Must not know how
forces over the height or displacements come about.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit import units
from calckit.core.digits import COMPARED, carried
from calckit.core.formula import Formula
from calckit.core.handle import Handle, Handles
from calckit.core.record import NOT_CHECKED, Flag
from calckit.errors import Fault, InputError, ScopeError, UnknownNameError
from calckit.standards.asce7 import plan_rules as rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.found import finding, present
from calckit.standards.asce7.hazard import of_2022
from calckit.standards.asce7.irregularity import AMPLIFIED, question

if TYPE_CHECKING:
    from calckit.core.scope import Scope

STEEP = 3.0
"""Largest span over depth of a diaphragm that is rigid by description (12.3.1.2)."""
TYPES = ("H1a", "H1b", "H2", "H3", "H4", "H5")
CONCRETE, OTHER = rules.DESCRIPTIONS[-2:]


# class of the diaphragm
def classify(scope: Scope) -> Handle:
    """The class of the diaphragm by calculation (12.3.1.3), else by description (12.3.1.1, 12.3.1.2)."""
    numbers = [name for name in ("delta_md", "delta_ave") if scope.number(name) is not None]
    if len(numbers) == 1:
        absent = ({"delta_md", "delta_ave"} - set(numbers)).pop()
        raise InputError("asce7.diaphragm", [scope.missing(absent)])
    with scope.step():
        if numbers:
            return _by_calculation(scope)
        return _by_description(scope)


def _say(scope: Scope, word: str, where: str, obtained: str, detail: str, rests: tuple[str, ...]) -> Handle:
    answered, flags = scope.word("diaphragm"), []
    if answered and answered != word:
        text = f"{scope.id_of('diaphragm')} is answered {answered}; found {word}, and that is used"
        flags.append(Flag(text, True, "originator"))
    source, detail = rule(where, obtained=obtained), f"{detail}: {word}"
    closes = question(scope, "diaphragm")
    return scope.state("diaphragm_found", word, "table", source, detail=detail, flags=flags, rests=rests, closes=closes)


def _by_calculation(scope: Scope) -> Handle:
    ratio = float(carried(float(scope.compute(rules.R_D_CLASS)), COMPARED))
    if ratio > 2:
        return _say(scope, "flexible", "12.3.1.3", "memory, high", "deflection over twice the drift", ("r_d",))
    rigid = _rigid_by_description(scope)
    if rigid:
        return _say(scope, "rigid", "12.3.1.2", "memory, high", rigid, ("r_d", "diaphragm_is", "r_sd", *TYPES))
    detail = "deflection not over twice the drift, not rigid by description"
    return _say(scope, "semirigid", "12.3.1", "memory, high", detail, ("r_d", "diaphragm_is", "r_sd", *TYPES))


def _by_description(scope: Scope) -> Handle:
    made_of = scope.word("diaphragm_is")
    if made_of is None:
        raise InputError("asce7.diaphragm", [scope.missing("diaphragm_is"), scope.missing("delta_md")])
    rests = ("diaphragm_is", "r_sd", *TYPES)
    if made_of not in (CONCRETE, OTHER):
        return _say(scope, "flexible", "12.3.1.1", "memory, medium", made_of, rests)
    if made_of == CONCRETE:
        if scope.number("r_sd") is None:
            raise InputError("asce7.diaphragm", [scope.missing("r_sd")])
        found, unknown = _plan_types(scope)
        if unknown and not found and (scope.number("r_sd") or 0.0) <= STEEP:
            title, missing = "Class of the diaphragm", f"answers {', '.join(unknown)}"
            return scope.verdict("diaphragm_open", title, NOT_CHECKED, rule("12.3.1.2"), missing=missing)
        if rigid := _rigid_by_description(scope):
            return _say(scope, "rigid", "12.3.1.2", "memory, high", rigid, rests)
    detail = "neither flexible nor rigid by description, no calculation given"
    return _say(scope, "semirigid", "12.3.1", "memory, high", detail, rests)


def _plan_types(scope: Scope) -> tuple[list[str], list[str]]:
    """Horizontal irregularities present in any direction, and those unknown in a direction that asks for them."""
    directions = [part for part in scope.calc.parts.values() if len(present(part, TYPES)[1]) < len(TYPES)]
    directions = directions or [scope]
    found = {name for part in directions for name in present(part, TYPES)[0]}
    unknown = {name for part in directions for name in present(part, TYPES)[1]}
    return sorted(found), sorted(unknown - found)


def _rigid_by_description(scope: Scope) -> str:
    """Why the diaphragm is rigid by description, blank if it is not."""
    ratio = scope.number("r_sd")
    found, unknown = _plan_types(scope)
    if scope.word("diaphragm_is") != CONCRETE or ratio is None or ratio > STEEP or found or unknown:
        return ""
    return f"{CONCRETE}, span over depth not over {STEEP:g}, no horizontal irregularity"


# forces taken into the plan
def _direction(scope: Scope, id_: str) -> Scope:
    """The part that carries the forces along an axis; the scope itself if none is named."""
    parts = scope.calc.parts
    if id_ and id_ not in parts:
        raise UnknownNameError("part", id_, list(parts))
    return parts[id_] if id_ else scope


def _typed(scope: Scope, name: str) -> bool:
    entry = scope.find(name)
    return entry is not None and entry.line.kind == "given" and isinstance(entry.line.value, float)


def _take(scope: Scope, symbol: str, listed: str, id_: str, level: str, faults: list[Fault]) -> Formula | None:
    """What brings the force of a level into the plan: None where it is typed; a fault where it is nowhere."""
    if _typed(scope, symbol):
        return None
    name = f"{id_}.{listed}" if id_ else listed
    entry = scope.find(name)
    if entry is None or not entry.line.rows:
        faults.append(scope.missing(name if id_ else symbol))
        return None
    if level not in entry.line.rows:
        needed = f"one of {', '.join(entry.line.rows)}"
        faults.append(Fault("level", needed, repr(level), "name a level of the table of levels"))
        return None
    return Formula(symbol, f'level({name}, "{level}")', rule("12.8.4"))


# rigid
def rigid(scope: Scope, level: str, along_x: str, along_y: str) -> Handles:
    """Relative rigidity with inherent and accidental torsion, both shifts of the mass, in one or both directions."""
    kind = finding(scope, "diaphragm")
    if kind in ("flexible", "semirigid"):
        cure = "use flexible_distribution" if kind == "flexible" else "paste the analysis into pasted_distribution"
        raise ScopeError(f"{scope.labelled('distribution by rigidity')}: the diaphragm is {kind}; {cure}")
    faults = [scope.missing(n) for n in ("x_i", "y_i", "k_ix", "k_iy") if scope.find(n) is None]
    faults += [scope.missing(n) for n in ("x_m", "y_m", "L_x", "L_y") if scope.number(n) is None]
    faults += [scope.missing("SDC")] if scope.word("SDC") is None else []
    directions = {0: along_x, 1: along_y}
    wanted = [axis for axis, id_ in directions.items() if id_ or _typed(scope, f"V_p{'xy'[axis]}")]
    if not wanted:
        faults += [scope.missing("V_px"), scope.missing("V_py")]
    for id_ in filter(None, directions.values()):
        _direction(scope, id_)
    taken = {a: _take(scope, f"V_p{'xy'[a]}", "V_x", directions[a], level, faults) for a in wanted}
    faults += _outside(scope) if not faults else []
    if faults:
        raise InputError("asce7.rigid_distribution", faults)
    with scope.step():
        flags = [] if kind else [Flag(f"{scope.labelled('diaphragm')}: taken as rigid; its class is open", True)]
        for axis in (0, 1):
            scope.compute(rules.K_P[axis])
        for axis in (0, 1):
            scope.compute(rules.CENTER[axis])
            scope.compute(rules.E[axis])
        scope.compute(rules.J_R, flags=flags)
        for axis in wanted:
            if formula := taken[axis]:
                scope.compute(formula)
            _ends(scope, axis, directions[axis])
        missing = {axis: _factor(scope, axis, directions[axis], level) for axis in wanted}
        if any(missing.values()):
            return Handles(_waits(scope, axis, text) for axis, text in missing.items() if text)
        for axis in wanted:
            _elements(scope, axis, level)
        return _design(scope, wanted, level)


def _outside(scope: Scope) -> list[Fault]:
    """Positions outside the plan, and an axis along which nothing resists."""
    faults = []
    for axis in "xy":
        entry, length = scope.find(f"{axis}_i"), scope.find(f"L_{axis}")
        rigidities = scope.find(f"k_i{axis}")
        assert entry and length and rigidities
        limit = units.convert(float(length.line.value), length.line.unit, entry.line.unit)  # type: ignore[arg-type]
        meaning = scope.symbol(f"{axis}_i").meaning
        pairs = zip(entry.line.rows, entry.line.value, entry.line.shown, strict=True)  # type: ignore[arg-type]
        for row, value, shown in pairs:
            if not -1e-9 <= value <= limit * (1 + 1e-9):
                needed, cure = f"within the plan, 0 to {length.line.shown}", "measure from the corner of the plan"
                given = f"{shown} {units.shown(entry.line.unit)}"
                faults.append(Fault(f"{axis}_i of {row}", needed, given, cure, meaning))
        if not any(rigidities.line.value):  # type: ignore[arg-type]
            meaning = scope.symbol(f"k_i{axis}").meaning
            cure = "give the elements along this axis their rigidity"
            needed = "one element that resists along the axis"
            faults.append(Fault(f"k_i{axis}", needed, "0 in all rows", cure, meaning))
    return faults


def _ends(scope: Scope, axis: int, id_: str) -> None:
    """Torsional moments of one direction, relative displacements of the ends and what their ratio says."""
    for formula in (
        rules.M_T, rules.M_TA, rules.U_0, rules.M_1_PLUS, rules.U_1_PLUS, rules.U_2_PLUS, rules.R_U_PLUS,
        rules.M_1_MINUS, rules.U_1_MINUS, rules.U_2_MINUS, rules.R_U_MINUS,
    ):  # fmt: skip
        scope.compute(formula[axis])
    _own_ratio(scope, axis, _direction(scope, id_))


def _waits(scope: Scope, axis: int, missing: str) -> Handle:
    """The forces of a direction for which the amplification of accidental torsion is not known."""
    a = rules.AXES[axis][0]
    title = f"Forces in the elements, force along {a.upper()}"
    return scope.verdict(f"elements_{a}", title, NOT_CHECKED, rule("12.8.4.3", obtained="found"), missing=missing)


def _elements(scope: Scope, axis: int, level: str) -> None:
    """The forces of one direction in the elements, both shifts of the mass, and the checks of their sums."""
    a, c = rules.AXES[axis]
    for formula in (
        rules.V_DIRECT, rules.M_P_PLUS, rules.M_P_MINUS, rules.V_I_PLUS, rules.V_I_MINUS, rules.Q_I_PLUS,
        rules.Q_I_MINUS,
    ):  # fmt: skip
        scope.compute(formula[axis])
    at = f" at level {level}" if level else ""
    columns = [f"k_i{a}", f"{c}_i", f"V_dir{a}", f"V_i{a}plus", f"V_i{a}minus"]
    scope.table(f"plan_{a}", f"Force along {a.upper()} in plan{at}: elements along it", columns, head="Element")
    columns = [f"k_i{c}", f"{a}_i", f"Q_i{c}plus", f"Q_i{c}minus"]
    scope.table(f"plan_{a}{c}", f"Force along {a.upper()} in plan{at}: elements across it", columns, head="Element")
    for name, sign in rules.CASES:
        case = rules.case_name(a, c, sign)
        source = rule("12.8.4", obtained="found")
        scope.require(f"abs(total(V_i{a}{name})/V_p{a} - 1) <= 0.001", title=f"{case}: forces along the load add up",
                      source=source, id_=f"sum_{a}{name}")  # fmt: skip
        scope.require(f"abs(total(Q_i{c}{name})) <= 0.001*V_p{a}", title=f"{case}: forces across the load cancel",
                      source=source, id_=f"across_{a}{name}")  # fmt: skip
        turning = f"total(V_i{a}{name}*({c}_i - {c}_R)) - total(Q_i{c}{name}*({a}_i - {a}_R))"
        scope.require(f"abs({turning} - M_p{a}{name}) <= 0.001*V_p{a}*L_{c}", title=f"{case}: moments balance",
                      source=source, id_=f"moment_{a}{name}")  # fmt: skip


def _own_ratio(scope: Scope, axis: int, direction: Scope) -> None:
    """What the ends of this story say of torsional irregularity."""
    a = rules.AXES[axis][0]
    ratios = [float(carried(scope.number(f"r_u{a}{name}") or 0.0, COMPARED)) for name, _ in rules.CASES]
    word = "over 1.4" if max(ratios) > 1.4 else "over 1.2" if max(ratios) > 1.2 else "none"
    flags = []
    said = finding(direction, "H1a")
    if word != "none" and said == "no":
        text = f"{scope.id_of(f'plan_{a}')} is {word} in this story, but {direction.id_of('H1a')} reads no"
        flags.append(Flag(text, True, "originator"))
    rests = (f"r_u{a}plus", f"r_u{a}minus")
    detail = f"larger end over the mean of both, the worse shift, with accidental torsion, A_x = 1: {word}"
    source = rule("Table 12.3-1", obtained="found")
    scope.state(f"plan_{a}", word, "table", source, detail=detail, flags=flags, rests=rests)


def _single(scope: Scope) -> bool:
    levels = scope.find("h_x")
    return levels is None or len(levels.line.rows) == 1


def _torsion_known(scope: Scope, axis: int, direction: Scope) -> tuple[bool | None, bool | None]:
    """Whether the direction has types H1a and H1b; None where nothing says so."""
    words = [finding(direction, name) for name in ("H1a", "H1b")]
    severe, some = (None if word is None else word == "yes" for word in reversed(words))
    if _single(scope):
        here = scope.word(f"plan_{rules.AXES[axis][0]}")
        some = bool(some) or here != "none"
        severe = bool(severe) or here == "over 1.4"
    return (some or severe) if severe else some, severe


def _factor(scope: Scope, axis: int, id_: str, level: str) -> str:
    """Write A_x of this level for forces along one axis, or why it is 1 or 0; gives what is missing, blank if nothing.

    It comes from the ends of the whole structure; in a structure of one story the ends of the plan are those.
    """
    a = rules.AXES[axis][0]
    name, direction, category = f"A_p{a}", _direction(scope, id_), scope.word("SDC") or ""
    if _typed(scope, name):
        return ""
    some, severe = _torsion_known(scope, axis, direction)
    source, flags = rule("12.8.4.3", "12.8-14", "found"), []
    rests = ("SDC", f"plan_{a}", f"accidental_{a}")
    if scope.word(f"accidental_{a}") == "omitted where permitted":
        needed = severe if category == "B" else some if category in AMPLIFIED else False
        if needed is False and not of_2022(scope):
            detail = f"accidental torsion left out of the forces, design category {category}: 0"
            scope.state(name, "0", "table", rule("12.8.4.2", obtained="found"), detail=detail, rests=rests)
            return ""
        text = f"{scope.id_of(name)}: accidental torsion is not shown to be omissible, and is included"
        flags.append(Flag(text, True, "originator"))
    if category not in AMPLIFIED or some is False:
        reason = f"design category {category}" if category not in AMPLIFIED else "no torsional irregularity"
        scope.state(name, "1", "table", source, detail=f"{reason}, not amplified: 1", flags=flags, rests=rests)
        return ""
    if some is None:
        return f"{direction.id_of('H1a')}, {direction.id_of('H1b')}: paste the ends, or answer them"
    if of_2022(scope):
        return f"{scope.id_of(name)}: how this edition amplifies accidental torsion is not known to the kit; give it"
    listed = f"{id_}.A_x" if id_ else "A_x"
    if _single(scope):
        scope.compute(rules.A_P[axis], flags=flags, detail="one story, relative displacements of the ends")
    elif scope.find(listed) is None:
        return f"{listed}: supply it with asce7.end_displacements()"
    else:
        scope.compute(Formula(name, f'level({listed}, "{level}")', source), flags=flags)
    return ""


def _design(scope: Scope, wanted: list[int], level: str) -> Handles:
    """The largest force of each element over all cases; torsion that would help is not subtracted."""
    axis = wanted[0]
    one = (rules.V_DESIGN_ALONG[axis], rules.V_DESIGN_ACROSS[axis])
    formulas = rules.V_DESIGN if len(wanted) == 2 else one
    made = Handles(scope.compute(formula) for formula in formulas)
    at = f" at level {level}" if level else ""
    for a, along in zip("xy", (0 in wanted, 1 in wanted), strict=True):
        across = 1 - "xy".index(a) in wanted
        columns = [f"V_dir{a}", f"V_i{a}plus", f"V_i{a}minus"] if along else []
        columns += [f"Q_i{a}plus", f"Q_i{a}minus"] if across else []
        title = f"Largest forces along {a.upper()} in the elements{at}, torsion never subtracted"
        scope.table(f"plan_design_{a}", title, [*columns, f"V_des{a}"], head="Element")
    return made


# flexible
def flexible(scope: Scope, level: str, direction: str) -> Handles:
    """Tributary width for the lines of vertical elements; shear, moment and chord force of simple spans."""
    kind = finding(scope, "diaphragm")
    if kind in ("rigid", "semirigid"):
        raise ScopeError(f"{scope.labelled('distribution by tributary width')}: the diaphragm is {kind}, not flexible")
    faults = [scope.missing(n) for n in ("b_i", "L_s", "d_s") if scope.find(n) is None]
    _direction(scope, direction)
    story = _take(scope, "V_p", "V_x", direction, level, faults)
    of_diaphragm = f"{direction}.F_px" if direction else "F_px"
    listed = "F_px" if scope.find(of_diaphragm) else "F_x"
    force = _take(scope, "F_d", listed, direction, level, faults)
    if faults:
        raise InputError("asce7.flexible_distribution", faults)
    with scope.step():
        for formula in filter(None, (story, force)):
            detail = "design force of the diaphragm" if "F_px" in formula.text else ""
            scope.compute(formula, detail=detail)
        for formula in (rules.SUM_B, rules.SUM_L):
            scope.compute(formula)
        scope.require("abs(sum_b/sum_L - 1) <= 0.001", title="Tributary widths cover the spans",
                      source=rules.V_LINE.source, id_="widths")  # fmt: skip
        made = Handles([scope.compute(rules.V_LINE)])
        scope.table("tributary_forces", "Forces in the lines of vertical elements", ["b_i", "V_line"], head="Line")
        scope.require("abs(total(V_line)/V_p - 1) <= 0.001", title="Forces in the lines add up",
                      source=rules.V_LINE.source, id_="sum_lines")  # fmt: skip
        flags = _not_the_diaphragm_force(scope, force)
        scope.compute(rules.W_D, flags=flags)
        for formula in (rules.V_SPAN, rules.UNIT_SHEAR, rules.M_SPAN, rules.T_CHORD):
            made.append(scope.compute(formula))
        columns = ["L_s", "d_s", "V_span", "v_span", "M_span", "T_chord"]
        scope.table("simple_spans", "Simple spans of the diaphragm", columns, head="Span")
        return made


def _not_the_diaphragm_force(scope: Scope, force: Formula | None) -> list[Flag]:
    if force is None or "F_px" in force.text:
        return []
    text = f"{scope.id_of('F_d')} is the force of the level; the design force of the diaphragm (12.10.1) may be larger"
    return [Flag(text, True, "originator")]


# semirigid
def pasted(scope: Scope, level: str, along_x: str, along_y: str) -> Handles:
    """Forces of an analysis with the diaphragm's own stiffness: their sum against the force of the story."""
    axes = {axis: id_ for axis, id_ in (("x", along_x), ("y", along_y)) if scope.find(f"V_a{axis}")}
    faults = [] if axes else [scope.missing("V_ax"), scope.missing("V_ay")]
    for id_ in axes.values():
        _direction(scope, id_)
    taken = {axis: _take(scope, f"V_p{axis}", "V_x", id_, level, faults) for axis, id_ in axes.items()}
    if faults:
        raise InputError("asce7.pasted_distribution", faults)
    with scope.step():
        made = Handles()
        for axis in axes:
            if formula := taken[axis]:
                scope.compute(formula)
            made.append(scope.compute(rules.SUM_V["xy".index(axis)]))
            scope.require(f"abs(sum_V{axis}/V_p{axis} - 1) <= 0.01", title=f"Forces along {axis.upper()} add up",
                          source=rule("12.8.4"), id_=f"sum_{axis}")  # fmt: skip
        return made
