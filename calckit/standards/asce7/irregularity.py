"""Chapter 12, irregularities: each type from numbers where they decide, else the engineer's answer; what follows.

Knows the thresholds of Tables 12.3-1 and 12.3-2, when A_x is asked for, and what irregularities bring with them. Must
not know forces in plan, redundancy or the permitted procedure.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from calckit.core.digits import COMPARED, carried, numeral
from calckit.core.formula import Formula
from calckit.core.handle import Handle, Handles
from calckit.core.record import NOT_CHECKED, Flag, Source
from calckit.core.scope import OPEN_ANSWER
from calckit.errors import Fault, InputError
from calckit.standards.asce7 import irregularity_rules as rules
from calckit.standards.asce7.clauses import rule, rule_of
from calckit.standards.asce7.found import IRREGULARITIES, finding, present, with_findings
from calckit.standards.asce7.hazard import of_2022
from calckit.standards.asce7.margins import to_limit

if TYPE_CHECKING:
    from calckit.core.scope import Scope

AMPLIFIED = ("C", "D", "E", "F")
"""Design categories in which torsional irregularity asks for A_x (12.8.4.3)."""
COLLECTORS = ("H1a", "H1b", "H2", "H3", "H4", "V4")
"""Types that raise forces in collectors and diaphragm connections in design categories D to F (12.3.3.4)."""
THREE_DIMENSIONAL = ("H1a", "H1b", "H4", "H5")
OFFSETS = ("H4", "V4")
NEW = "ASCE 7-22"

Over = list[tuple[str, float, str]]
"""Where a ratio stands (story), its value, and the symbol that prints it."""


def _ratios(scope: Scope, name: str, *, down: int = 0, skip: int = 0) -> Over:
    """Each ratio of a list line with the story it speaks of, `down` rows below its own; the first `skip` left out."""
    entry = scope.find(name)
    if entry is None or not isinstance(entry.line.value, list):
        return []
    rows, values = entry.line.rows, entry.line.value
    return [(rows[i + down], float(carried(values[i], COMPARED)), name) for i in range(skip, len(rows) - down)]


def _inverse(ratio: tuple[str, float, str]) -> float:
    """A ratio the other way round: what is in the row over what is below."""
    return float(carried(1 / ratio[1], COMPARED))


def _told(scope: Scope, over: Over, limit: float, sign: str) -> str:
    """The ratios named, each with the digits that show on which side of the limit it is."""
    told = []
    for story, value, name in over:
        exact, places = carried(value), 3
        while float(numeral(exact, places)) == limit != value and places < COMPARED:
            places += 1
        told.append(f"{scope.plain(name)} = {numeral(exact, places)} at {story}")
    return f"{'; '.join(told)} ({sign} {limit:g})"


def _decide(
    scope: Scope, name: str, over: Over, limit: float, sign: str, source: Source, rests: Sequence[str]
) -> Handle:
    """Write whether any ratio is beyond its limit; `over` are those that are."""
    detail = _told(scope, over, limit, sign) if over else f"none {sign} {limit:g}"
    return _write(scope, name, "yes" if over else "no", detail, source, rests)


def _write(
    scope: Scope, name: str, word: str, detail: str, source: Source, rests: Sequence[str], *, exempt: bool = False
) -> Handle:
    """Write what the numbers say of one type; where the engineer's answer says otherwise, the line says so."""
    answered, flags = scope.word(name), []
    if answered and answered != word and not exempt:
        text = f"{scope.id_of(name)} is answered {answered}; the numbers say {word}, and they decide"
        flags.append(Flag(text, True, "originator"))
    return scope.state(
        f"{name}_found", word, "table", source, detail=f"{detail}: {word}", flags=flags, rests=rests,
        closes=question(scope, name),
    )  # fmt: skip


def question(scope: Scope, name: str) -> str:
    """The line of a question that has no answer, which a result closes; blank if there is none."""
    entry = scope.find(name)
    return entry.line.id if entry and entry.line.value == OPEN_ANSWER else ""


def _plan(scope: Scope) -> Source:
    return rule_of(NEW, "Table 12.3-1") if of_2022(scope) else rule("Table 12.3-1", obtained="found")


def _height(scope: Scope) -> Source:
    return rule_of(NEW, "Table 12.3-2") if of_2022(scope) else rule("Table 12.3-2")


def _alike(scope: Scope, names: Sequence[str]) -> None:
    """Refuse pasted lists that do not run over the levels, roof first."""
    levels = scope.find("h_x")
    faults = [scope.missing("h_x")] if levels is None else []
    for name in names:
        entry = scope.find(name)
        if levels and entry and entry.line.rows != levels.line.rows:
            needed, given = ", ".join(levels.line.rows), ", ".join(entry.line.rows)
            cure = "name one row for each level, in the order of the table of levels"
            faults.append(Fault(name, f"rows {needed}", f"rows {given}", cure, scope.symbol(name).meaning))
    if faults:
        raise InputError("asce7.irregularities", faults)


def end_displacements(scope: Scope) -> Handles:
    """Story drifts of the diaphragm ends and their ratio; A_x of each level where it is asked for."""
    names = ("d_1plus", "d_2plus", "d_1minus", "d_2minus")
    if not any(map(scope.find, names)):
        title = "Torsional irregularity by the ends of the diaphragm"
        missing = f"{', '.join(names)} (elastic displacements of both ends, both shifts of the mass)"
        with scope.step():
            return Handles([scope.verdict("ends", title, NOT_CHECKED, _plan(scope), missing=missing)])
    faults = [scope.missing(n) for n in ("d_1plus", "d_2plus") if scope.find(n) is None]
    faults += [scope.missing("SDC")] if scope.word("SDC") is None else []
    both = [scope.find(n) is not None for n in ("d_1minus", "d_2minus")]
    if any(both) and not all(both):
        faults += [scope.missing(n) for n, there in zip(("d_1minus", "d_2minus"), both, strict=True) if not there]
    if faults:
        raise InputError("asce7.end_displacements", faults)
    if scope.find("h_x"):
        _alike(scope, ("d_1plus", "d_2plus", *(("d_1minus", "d_2minus") if all(both) else ())))
    cases = (0, 1) if all(both) else (0,)
    with scope.step():
        made = Handles()
        for case in cases:
            word = ("plus", "minus")[case]
            for formula in (rules.D_1, rules.D_2, rules.R_D):
                made.append(scope.compute(formula[case], flags=_one_case(scope, cases, formula)))
            scope.table(
                f"end_drifts_{word}", f"Story drifts of the diaphragm ends, mass shifted toward {'+−'[case]}",
                [f"{name}{word}" for name in ("d_1", "d_2", "D_1", "D_2", "r_D")], head="Story below",
            )  # fmt: skip
        return Handles([*made, *_torsional(scope), *_amplification(scope, cases)])


def _one_case(scope: Scope, cases: Sequence[int], formula: tuple[Formula, Formula]) -> list[Flag]:
    if len(cases) == 2 or formula is not rules.R_D:
        return []
    text = f"{scope.labelled('ends of the diaphragm')}: one shift of the mass only; paste d_1minus and d_2minus too"
    return [Flag(text, True, "originator")]


def _torsional(scope: Scope) -> list[Handle]:
    """H1a and H1b from the drifts of the ends: A_x = 1, rigid or semirigid diaphragms only."""
    source, rests = _plan(scope), ("r_Dplus", "r_Dminus", "diaphragm", "diaphragm_found", "one_side")
    if finding(scope, "diaphragm") == "flexible":
        text = "flexible diaphragm: the types are those of rigid and semirigid diaphragms"
        return [_write(scope, name, "no", text, source, rests) for name in ("H1a", "H1b")]
    for name in ("r_Dplus", "r_Dminus"):
        _margin_of_ends(scope, name)
    ratios = _ratios(scope, "r_Dplus") + _ratios(scope, "r_Dminus")
    beyond = {limit: [each for each in ratios if each[1] > limit] for limit in (1.2, 1.4)}
    severe = _decide(scope, "H1b", beyond[1.4], 1.4, ">", source, rests)
    if not of_2022(scope) or beyond[1.2]:
        return [_decide(scope, "H1a", beyond[1.2], 1.2, ">", source, rests), severe]
    if scope.word("one_side") is None:
        title, missing = "Torsional irregularity by the numbers", "the answer one_side (strength on one side)"
        return [severe, scope.verdict("H1a_open", title, NOT_CHECKED, source, missing=missing)]
    if scope.word("one_side") == "yes":
        text = "over 75 % of the strength of a story on one side of its center of mass"
        return [_write(scope, "H1a", "yes", text, source, rests), severe]
    return [_decide(scope, "H1a", [], 1.2, ">", source, rests), severe]


def _margin_of_ends(scope: Scope, name: str) -> None:
    """How near the largest ratio of end drifts is to the limit of the next type."""
    entry = scope.find(name)
    if entry is not None and (ratios := _ratios(scope, name)):
        largest = max(value for _, value, _ in ratios)
        limit, kind = (1.2, "H1a") if largest <= 1.2 else (1.4, "H1b")
        words = f"{limit:g}, above which {kind} is present"
        entry.line.margin = to_limit(f"largest {scope.plain(name)}", largest, limit, words)


def _amplification(scope: Scope, cases: Sequence[int]) -> list[Handle]:
    """A_x of each level (12.8-14) from the displacements of the ends, where it is asked for."""
    if (scope.word("SDC") or "") not in AMPLIFIED or not present(scope, ("H1a", "H1b"))[0]:
        return []
    if of_2022(scope):
        missing = "the rule of this edition, which is written around the ratio of drifts"
        title, source = "Amplification of accidental torsion", rule_of(NEW, "12.8.4.3")
        return [scope.verdict("amplification", title, NOT_CHECKED, source, missing=missing)]
    for case in cases:
        word = ("plus", "minus")[case]
        for formula in (rules.D_MAX, rules.D_AVG):
            scope.compute(formula[case])
        columns = [f"{name}{word}" for name in ("d_1", "d_2", "d_max", "d_avg")]
        scope.table(
            f"end_means_{word}", f"Displacements of the diaphragm ends, mass shifted toward {'+−'[case]}", columns
        )
    made = scope.compute(rules.A_X if len(cases) == 2 else rules.A_X_ONE_CASE, rests=("H1a_found", "H1b_found"))
    if isinstance(made.value, list):
        made.line.margin = to_limit(f"largest {scope.plain('A_x')}", max(made.value), 3.0, "3, its upper limit")
    words = [("plus", "minus")[case] for case in cases]
    columns = [f"{name}{word}" for word in words for name in ("d_max", "d_avg")]
    scope.table("amplification", "Amplification of accidental torsion", [*columns, "A_x"])
    return [made]


def irregularities(scope: Scope) -> Handles:
    """The types that numbers of the stories and the plan decide (not torsion), and what all types bring with them."""
    if scope.word("SDC") is None:
        raise InputError("asce7.irregularities", [scope.missing("SDC")])
    pasted = [name for name in ("K_d", "K_s", "b_s", "V_ys") if scope.find(name)]
    _alike(scope, pasted)
    with scope.step():
        made = Handles([*_corner(scope), *_openings(scope)])
        made += _stiffness_and_mass(scope)
        made += _width(scope)
        made += _strength(scope)
        return Handles([*made, *_consequences(scope)])


def _corner(scope: Scope) -> list[Handle]:
    """H2 from the projections past a re-entrant corner."""
    given = [name for name in ("p_x", "p_y") if scope.number(name) is not None]
    if not given:
        return []
    if of_2022(scope):
        missing = "the threshold of this edition, which may have been raised; answer H2 from the printed standard"
        title = "Re-entrant corner by the numbers"
        return [scope.verdict("H2_numbers", title, NOT_CHECKED, _plan(scope), missing=missing)]
    faults = [scope.missing(name) for name in ("p_x", "p_y", "L_x", "L_y") if scope.number(name) is None]
    if faults:
        raise InputError("asce7.irregularities", faults)
    ratios = [("x", scope.compute(rules.R_PX)), ("y", scope.compute(rules.R_PY))]
    over: Over = [(axis, float(carried(float(r), COMPARED)), f"r_p{axis}") for axis, r in ratios]
    beyond = [each for each in over if each[1] > 0.15]
    source, rests = _plan(scope), ("r_px", "r_py")
    if len(beyond) == 1:
        told = _told(scope, beyond, 0.15, ">")
        return [_write(scope, "H2", "no", f"{told}, along one axis only", source, rests)]
    return [_decide(scope, "H2", beyond, 0.15, ">", source, rests)]


def _openings(scope: Scope) -> list[Handle]:
    """H3 from the open share of a diaphragm, or from diaphragm stiffnesses of adjacent levels."""
    over: Over = []
    numbers = False
    if scope.number("A_open") is not None:
        if scope.number("A_gross") is None:
            raise InputError("asce7.irregularities", [scope.missing("A_gross")])
        share = float(carried(float(scope.compute(rules.R_OPEN)), COMPARED))
        over += [("the diaphragm", share, "r_open")] if share > 0.5 else []
        numbers = True
    if scope.find("K_d"):
        scope.compute(rules.R_KD)
        scope.table("diaphragm_ratios", "Stiffness of the diaphragms", ["K_d", "r_Kd"])
        over += [each for each in _ratios(scope, "r_Kd", down=1) if each[1] < 0.5 or each[1] > 1.5]
        numbers = True
    if not numbers:
        return []
    rests = ("r_open", "r_Kd")
    if not over:
        detail = "open share not over half, diaphragm stiffness of adjacent levels within half, as far as given"
        return [_write(scope, "H3", "no", detail, _plan(scope), rests)]
    told = "; ".join(f"{scope.plain(name)} = {numeral(carried(value), 4)} at {where}" for where, value, name in over)
    detail = f"{told} (over 0.5 open, or stiffness outside 0.5 to 1.5)"
    return [_write(scope, "H3", "yes", detail, _plan(scope), rests)]


def _stiffness_and_mass(scope: Scope) -> list[Handle]:
    """V1a, V1b and V2, or why they are not judged."""
    names = ("V1a", "V1b", "V2")
    if exempt := _exempt(scope):
        rests = ("r_q", "drift_waiver", "SDC", "h_x")
        return [_write(scope, name, "no", exempt, rule("12.3.2.2"), rests, exempt=True) for name in names]
    return [*_stiffness(scope), *_mass(scope)]


def _exempt(scope: Scope) -> str:
    """Why types V1 and V2 are not judged, blank if they are."""
    levels = scope.find("h_x")
    count, category = len(levels.line.rows) if levels else 0, scope.word("SDC") or ""
    if count == 1:
        return "one story: the type is not considered"
    if count == 2 and category in ("B", "C", "D"):
        return f"two stories in design category {category}: the type is not considered"
    if scope.word("drift_waiver") != "yes" or count < 3:
        return ""
    if scope.find("Delta") is None:
        title, missing = "Types V1 and V2 by drift ratios", f"{scope.plain('Delta')} (story drift)"
        scope.verdict("waiver", title, NOT_CHECKED, rule("12.3.2.2"), missing=missing)
        return ""
    scope.compute(rules.Q_S)
    scope.compute(rules.R_Q)
    scope.table("drift_ratios", "Drift ratios of adjacent stories", ["Delta", "h_sx", "q_s", "r_q"], head="Story below")
    compared = _ratios(scope, "r_q", down=1, skip=1)
    over = [each for each in compared if each[1] > 1.3]
    if over:
        return ""
    return f"{_told(scope, [max(compared, key=lambda each: each[1])], 1.3, 'largest, not over')}, top two left out"


def _stiffness(scope: Scope) -> list[Handle]:
    entry = scope.find("K_s")
    own = entry is None or entry.line.kind != "given"
    if own:
        if scope.find("V_x") is None or scope.find("delta_xe") is None:
            return []
        scope.compute(rules.K_S)
    for formula in (rules.K_1, rules.R_K, rules.K_2, rules.R_K3):
        scope.compute(formula)
    operands = ["V_x", "delta_xe"] if own else []
    columns = [*operands, "K_s", "K_1", "K_2", "r_K", "r_K3"]
    scope.table("stiffness_ratios", "Story stiffnesses, and ratios of what is below", columns, head="Story below")
    one, three = _ratios(scope, "r_K", down=1), _ratios(scope, "r_K3", down=3)
    made, rests = [], ("K_s", "r_K", "r_K3")
    for name, against_one, against_three in (("V1a", 0.70, 0.80), ("V1b", 0.60, 0.70)):
        soft = [each for each in one if each[1] < against_one], [each for each in three if each[1] < against_three]
        told = [_told(scope, o, limit, "<") for o, limit in zip(soft, (against_one, against_three), strict=True) if o]
        detail = "; ".join(told) or f"none < {against_one:g} of the story above or < {against_three:g} of three"
        made.append(_write(scope, name, "yes" if told else "no", detail, _height(scope), rests))
    return made


def _mass(scope: Scope) -> list[Handle]:
    if scope.find("w_x") is None:
        return []
    if of_2022(scope):
        text = "this edition has no irregularity of mass"
        return [_write(scope, "V2", "no", text, _height(scope), ("w_x",), exempt=True)]
    scope.compute(rules.R_W)
    scope.table("weight_ratios", "Weights of adjacent levels", ["w_x", "r_w"])
    ratios = _ratios(scope, "r_w", down=1)
    heavier_below = [each for place, each in enumerate(ratios) if each[1] > 1.5 and place]
    heavier_above = [each for each in ratios if _inverse(each) > 1.5]
    over = heavier_below + heavier_above
    detail = "; ".join(f"{scope.plain(n)} = {numeral(carried(v), 4)} at {story}" for story, v, n in over)
    none = "weights of adjacent levels within 1.5 times, a lighter roof left out"
    detail = f"{detail} (outside 1/1.5 to 1.5)" if over else none
    return [_write(scope, "V2", "yes" if over else "no", detail, _height(scope), ("r_w",))]


def _width(scope: Scope) -> list[Handle]:
    if scope.find("b_s") is None:
        return []
    scope.compute(rules.R_B)
    scope.table("width_ratios", "Widths of the lateral system", ["b_s", "r_b"], head="Story below")
    over = [each for each in _ratios(scope, "r_b", down=1) if each[1] > 1.3 or _inverse(each) > 1.3]
    detail = "; ".join(f"{scope.plain(n)} = {numeral(carried(v), 4)} at {story}" for story, v, n in over)
    detail = f"{detail} (outside 1/1.3 to 1.3)" if over else "widths of adjacent stories within 1.3 times"
    return [_write(scope, "V3", "yes" if over else "no", detail, _height(scope), ("r_b",))]


def _strength(scope: Scope) -> list[Handle]:
    if scope.find("V_ys") is None:
        return []
    scope.compute(rules.R_VY)
    scope.table("strength_ratios", "Lateral strengths of the stories", ["V_ys", "r_Vy"], head="Story below")
    ratios, made = _ratios(scope, "r_Vy", down=1), []
    for name, limit in (("V5a", 0.80), ("V5b", 0.65)):
        weak = [each for each in ratios if each[1] < limit]
        made.append(_decide(scope, name, weak, limit, "<", _height(scope), ("r_Vy",)))
    return made


def _consequences(scope: Scope) -> list[Handle]:
    """Lines for what irregularities bring: collectors, supports of offset walls and frames, the model."""
    category = scope.word("SDC") or ""
    rests = ("SDC", *with_findings(IRREGULARITIES))
    return [
        _collectors(scope, category, rests),
        _follows(scope, "discontinuous", OFFSETS, rule("12.3.3.3"), rests,
                 "supports of discontinuous walls and frames take the overstrength combinations"),
        _follows(scope, "model_3d", THREE_DIMENSIONAL, rule("12.7.3"), rests,
                 "the structure is analyzed by a three-dimensional model"),
    ]  # fmt: skip


def _collectors(scope: Scope, category: str, rests: Sequence[str]) -> Handle:
    source = rule("12.3.3.4")
    if category not in ("D", "E", "F"):
        detail = f"design category {category}: 1.00"
        return scope.state("f_collector", "1.00", "table", source, detail=detail, rests=rests)
    found, unknown = present(scope, COLLECTORS)
    if found:
        text = f"{scope.labelled('collectors and diaphragm connections')}: forces 25 % up by {', '.join(found)}"
        detail, flags = f"{', '.join(found)} in design category {category}: 1.25", [Flag(text, True, "originator")]
        return scope.state("f_collector", "1.25", "table", source, detail=detail, flags=flags, rests=rests)
    if unknown:
        title, missing = "Increase of forces in collectors", f"answers {', '.join(unknown)}"
        return scope.verdict("f_collector_open", title, NOT_CHECKED, source, missing=missing, rests=rests)
    detail = f"none of {', '.join(COLLECTORS)}: 1.00"
    return scope.state("f_collector", "1.00", "table", source, detail=detail, rests=rests)


def _follows(
    scope: Scope, symbol: str, names: Sequence[str], source: Source, rests: Sequence[str], text: str
) -> Handle:
    found, unknown = present(scope, names)
    if unknown and not found:
        title = f"{scope.symbol(symbol).meaning}"
        missing = f"answers {', '.join(unknown)}"
        return scope.verdict(f"{symbol}_open", title, NOT_CHECKED, source, missing=missing, rests=rests)
    flags = [Flag(f"{scope.labelled(text)}: {', '.join(found)}", True, "originator")] if found else []
    word = "yes" if found else "no"
    detail = f"by {', '.join(found)}: {word}" if found else f"none of {', '.join(names)}: {word}"
    return scope.state(symbol, word, "table", source, detail=detail, flags=flags, rests=rests)
