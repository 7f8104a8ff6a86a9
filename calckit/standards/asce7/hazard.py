"""Chapter 11: hazard values to design ordinates, importance factor and design category.

Knows site classes, site coefficients, where the design ordinates come from, 11.4.8 and the category tables. Must not
know the structure, nor pasted ordinates.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Any

from calckit.core.digits import carried, decimals_for, numeral
from calckit.core.formula import Formula
from calckit.core.handle import Handle, Handles
from calckit.core.inputs import NONE
from calckit.core.record import Candidate, Flag, Margin, Source
from calckit.core.table import load
from calckit.errors import Fault, InputError, ScopeError
from calckit.standards.asce7 import formulas
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.margins import to_limit

if TYPE_CHECKING:
    from calckit.core.scope import Scope

PACKAGE = "calckit.standards.asce7"
NOT_NEEDED = "not needed"
CATEGORY_A = "design category A: the forces of 1.4.2 apply in place of 12.8, with the dead load and not W"
CLASS_E = "class E with Supplement 3: whether S_M1 is increased as for class D is not known to the kit; not increased"
MAPPED_ONLY = ("F_a", "F_v", "S_MS", "S_M1")
CLASSES = {
    "ASCE 7-16": ("A", "B", "B assumed", "C", "D", "D default", "E", "F"),
    "ASCE 7-22": ("A", "B", "BC", "C", "CD", "D", "DE", "E", "F", "default"),
}
"""Site classes of each edition."""
BASES = {"ASCE 7-16": ("mapped", "site-specific"), "ASCE 7-22": ("printout", "site-specific")}
"""Where the design ordinates of each edition may come from, the usual way first."""
NO_COEFFICIENTS = (
    'set hazard_basis to "printout" and give S_S, S_1, S_MS and S_M1 of the printout for the site class: this edition '
    "has no tables of F_a and F_v, and quotients printed under those names are not to be interpolated"
)
DEFAULT_CLASS = "default site class: S_MS and S_M1 are those of the most critical of classes C, CD and D"
MAPPED_CURE = 'set it to "mapped"; compare a printout by asce7.printed_values(...)'
EXEMPTED = (
    "class F by liquefiable soil, exempted from the site response analysis (20.3.1): ground motion as for class {}; "
    "the site stays class F for every other rule"
)
EXEMPTED_22 = "that the exemption of class F and its class hold in this edition is to be confirmed"
RULE_FOR_A = "S_1 and S_S are so small that 7-16 gives category A directly; for this edition that is to be confirmed"
BY_S_DS_TABLE = "Table 11.6-1 alone"
BY_S_DS = "category by S_DS alone (11.6): its conditions are checked by asce7.category_conditions() in each direction"
EXCEPTIONS = {"exception 1", "exception 2", "exception 3", "S_M1 increased"}


@dataclass(frozen=True)
class Hazard:
    """What 11.4.8 says of this site: whether a study is `triggered`, and how it is met.

    `reading` is "plain" (no increase), "exception 2" (C_s), "increased" (S_M1) or "both" while that is not answered.
    """

    triggered: tuple[str, ...]
    reading: str


def of_2022(scope: Scope) -> bool:
    """Whether the calculation is under ASCE 7-22."""
    return bool(scope.calc.title_block["standard"] == "ASCE 7-22")


def basis(scope: Scope) -> str:
    """Where the design ordinates come from; unsaid, the usual way of the edition."""
    return scope.word("hazard_basis") or BASES[scope.calc.title_block["standard"]][0]


def site_class(scope: Scope) -> str:
    """The letters of the site class, "B assumed" and "D default" reduced to their letter."""
    return (scope.word("site_class") or "").partition(" ")[0]


def exempted(scope: Scope) -> bool:
    """Whether the engineer states the exemption of class F for liquefiable soil and short periods (20.3.1)."""
    return site_class(scope) == "F" and scope.word("liquefaction_exemption") == "yes"


def ground_class(scope: Scope) -> str:
    """The class that site coefficients and 11.4.8 follow: the site class, or what stands for an exempted class F."""
    return scope.word("underlying_class") or "F" if exempted(scope) else site_class(scope)


def study(scope: Scope) -> Hazard:
    """Read 11.4.8 of 7-16 for the site class and the mapped values; 7-22 asks no study of classes D and E."""
    if of_2022(scope):
        return _no_study_by_class(scope)
    if basis(scope) == "site-specific":
        return Hazard((), "plain")
    letter, S_S, S_1 = ground_class(scope), scope.number("S_S") or 0.0, scope.number("S_1") or 0.0
    triggered = []
    if letter == "E" and S_S >= 1.0:
        triggered.append("class E with S_S not less than 1.0")
    if letter in ("D", "E") and S_1 >= 0.2:
        triggered.append(f"class {letter} with S_1 not less than 0.2")
    supplements = scope.calc.title_block["supplements"]
    exception = scope.word("study_exception")
    if exception == "study made":
        cure = 'set hazard_basis to "site-specific" and give its S_DS and S_D1'
        raise InputError(
            "design spectrum", [Fault("study_exception", "an exception for mapped values", exception, cure)]
        )
    if not triggered or letter == "E":
        return Hazard(tuple(triggered), "plain")
    if supplements is None or exception in (None, NOT_NEEDED):
        return Hazard(tuple(triggered), "both")
    wanted = "S_M1 increased" if 3 in supplements else "exception 2"
    if exception != wanted:
        given = f"{exception!r} with supplements {supplements or 'none'} in force"
        raise InputError("design spectrum", [Fault("study_exception", repr(wanted), given, "correct the answer")])
    return Hazard(tuple(triggered), "increased" if wanted == "S_M1 increased" else "exception 2")


def _no_study_by_class(scope: Scope) -> Hazard:
    exception = scope.word("study_exception")
    if exception in (None, NOT_NEEDED):
        return Hazard((), "plain")
    cure = 'answer "not needed": the rule for classes D and E is not in this edition'
    raise InputError("design spectrum", [Fault("study_exception", repr(NOT_NEEDED), repr(exception), cure)])


def design_spectrum(scope: Scope) -> Handles:
    """Site coefficients, S_MS, S_M1, S_DS, S_D1, T_0, T_S; from a site-specific study only the last four."""
    where = basis(scope)
    needed = ["S_S", "S_1", "T_L"]
    needed += {"site-specific": ["S_DS", "S_D1"], "printout": ["S_MS", "S_M1"]}.get(where, [])
    faults = [scope.missing(name) for name in needed if scope.number(name) is None]
    faults += _edition_faults(scope)
    if faults:
        raise InputError("asce7.design_spectrum", faults)
    with scope.step():
        scope.choice("hazard_basis", where, Source(scope.calc.standard.name, "11.4.4"))
        made = Handles()
        if where == "mapped":
            made = _mapped(scope)
        elif where == "printout":
            made = _of_printout(scope)
        made += [scope.compute(formulas.T_0), scope.compute(formulas.T_S)]
        if study(scope).reading == "both":
            made.append(scope.compute(formulas.T_S_INCREASED))
        return made


def _edition_faults(scope: Scope) -> list[Fault]:
    """What the words for site class and basis lack in this edition."""
    name = scope.calc.title_block["standard"]
    if scope.word("site_class") is None:
        return [scope.missing("site_class")]
    faults = []
    if basis(scope) not in BASES[name]:
        cure = NO_COEFFICIENTS if of_2022(scope) else MAPPED_CURE
        faults.append(Fault("hazard_basis", f"{' or '.join(BASES[name])} under {name}", basis(scope), cure))
    words = [("site_class", scope.word("site_class"))]
    if exempted(scope):
        words.append(("underlying_class", scope.word("underlying_class")))
    for symbol, word in words:
        known = [each for each in CLASSES[name] if symbol == "site_class" or each not in ("F", "default")]
        if word is None:
            faults.append(scope.missing(symbol))
        elif word not in known:
            cure = "take the class by the shear wave velocity of this edition"
            faults.append(Fault(symbol, f"one of {', '.join(known)} under {name}", word, cure))
    return faults


def _ground(scope: Scope) -> str:
    """The class that the ground motion follows; class F without exemption is refused."""
    letter = ground_class(scope)
    if letter == "F":
        clause = "11.4.7" if of_2022(scope) else "11.4.8"
        raise ScopeError(
            f"site class F: a site response analysis is needed ({clause}); set hazard_basis to site-specific, or "
            "answer liquefaction_exemption and underlying_class where 20.3.1 exempts the site"
        )
    return letter


def _exemption_flags(scope: Scope) -> list[Flag]:
    if not exempted(scope):
        return []
    flags = [Flag(EXEMPTED.format(ground_class(scope)))]
    return [*flags, Flag(EXEMPTED_22, True, "holder of the standard")] if of_2022(scope) else flags


def _of_printout(scope: Scope) -> Handles:
    """S_DS and S_D1 from the S_MS and S_M1 that a printout gives for the site class."""
    _ground(scope)
    flags = [*_exemption_flags(scope), *([Flag(DEFAULT_CLASS)] if site_class(scope) == "default" else [])]
    rests = ("site_class", "hazard_basis")
    S_DS = scope.compute(formulas.S_DS, flags=flags, rests=rests)
    return Handles([S_DS, scope.compute(formulas.S_D1, rests=rests)])


def _mapped(scope: Scope) -> Handles:
    letter, hazard = _ground(scope), study(scope)
    flags = [*_exemption_flags(scope), *_study_flags(scope, hazard)]
    made = [coefficient_F_a(scope, letter, flags), coefficient_F_v(scope, letter)]
    increased = hazard.reading == "increased"
    made += [scope.compute(formulas.S_MS), scope.compute(formulas.S_M1_INCREASED if increased else formulas.S_M1)]
    return Handles([*made, scope.compute(formulas.S_DS), scope.compute(formulas.S_D1)])


def _study_flags(scope: Scope, hazard: Hazard) -> list[Flag]:
    if not hazard.triggered:
        return []
    why = "; ".join(hazard.triggered)
    source = scope.calc.title_block["supplements_source"]
    if hazard.reading == "both":
        text = f"11.4.8 asks for a hazard analysis ({why}): supplements in force and exception taken are not answered"
        return [Flag(text, True, "engineer of record")]
    flags = [
        Flag(
            f"11.4.8 ({why}): {scope.word('study_exception')} taken in place of a hazard analysis"
        )
    ]
    if not source.strip():
        flags.append(Flag("supplements in force: no source given (supplements_source)", True, "originator"))
    return flags


def coefficient_F_a(scope: Scope, letter: str, flags: Sequence[Flag], name: str = "F_a") -> Handle:
    """F_a of Table 11.4-1 with its special cases, written as `name`."""
    if scope.word("site_class") == "B assumed":
        return without_velocity(scope, name, flags)
    table, S_S = load(PACKAGE, "F_a"), scope.number("S_S") or 0.0
    if letter == "E" and S_S > 0.75:
        return _F_a_of_class_E(scope, S_S, flags)
    found = table.along(letter, "S_S", S_S)
    value = (
        Formula("F_a", found.expression, found.source).value({"S_S": S_S}) if found.expression else float(found.text)
    )
    if scope.word("site_class") == "D default" and value < 1.2:
        detail = f"default class D: not less than 1.2 ({found.detail})"
        shown = found.text or numeral(carried(value), decimals_for([carried(value)], scope.symbol(name).digits))
        compared = [
            Candidate(found.source.where, value, "", shown, "entry of the table", False),
            Candidate("clause 11.4.4", 1.2, "", "1.2", "least value of default class D", True),
        ]
        return scope.state(
            name, "1.2", "table", rule("11.4.4"), detail=detail, flags=flags, rests=("site_class", "S_S"),
            candidates=compared,
        )  # fmt: skip
    return scope.look_up(name, found, flags, rests=("site_class", "underlying_class", "S_S"))


def without_velocity(scope: Scope, name: str, flags: Sequence[Flag]) -> Handle:
    """The coefficient 1.0 of class B assumed without measured velocity."""
    source, detail = rule("11.4.3", obtained="found"), "class B without measured velocity"
    return scope.state(name, "1.0", "table", source, detail=detail, flags=flags, rests=("site_class",))


def _F_a_of_class_E(scope: Scope, S_S: float, flags: Sequence[Flag]) -> Handle:
    if S_S < 1.0:
        raise ScopeError(
            "site class E with S_S between 0.75 and 1.0: Table 11.4-1 gives no entry to interpolate to; see 11.4.8"
        )
    if scope.word("study_exception") != "exception 1":
        raise ScopeError(
            "site class E with S_S not less than 1.0: 11.4.8 asks for a study; "
            'answer study_exception "exception 1" to take F_a as for class C'
        )
    found = load(PACKAGE, "F_a").along("C", "S_S", S_S)
    taken = Flag("F_a taken as for class C by exception 1 of 11.4.8")
    return scope.look_up("F_a", found, [*flags, taken], rests=("site_class", "S_S", "study_exception"))


def coefficient_F_v(scope: Scope, letter: str, name: str = "F_v") -> Handle:
    """F_v of Table 11.4-2, for class E by Supplement 1 alone, written as `name`."""
    if scope.word("site_class") == "B assumed":
        return without_velocity(scope, name, [])
    S_1, row = scope.number("S_1") or 0.0, letter
    flags: list[Flag] = []
    if letter == "E" and S_1 > 0.1:
        supplements = scope.calc.title_block["supplements"]
        if supplements is None or 1 not in supplements:
            state = "not answered" if supplements is None else "without Supplement 1"
            raise ScopeError(f"site class E with S_1 above 0.1, supplements {state}: F_v is undefined (11.4.8)")
        if S_1 >= 0.2 and scope.word("study_exception") != "exception 3":
            raise ScopeError(
                "site class E with S_1 not less than 0.2: 11.4.8 asks for a study; "
                'answer study_exception "exception 3" if T is not above T_S'
            )
        row = "E, Supplement 1"
        flags = [Flag(CLASS_E, True, "holder of the standard")] if 3 in supplements and S_1 >= 0.2 else []
    found = load(PACKAGE, "F_v").along(row, "S_1", S_1)
    return scope.look_up(name, found, flags, rests=("site_class", "underlying_class", "S_1"))


def site_specific_values(scope: Scope, S_DS: Any, S_D1: Any, source: str) -> Handles:
    """The ordinates of a site-specific study; written only if the hazard basis is site-specific."""
    settings = scope.book.settings
    if basis(scope) != "site-specific":
        return Handles()
    for name in () if of_2022(scope) else MAPPED_ONLY:
        settings.unused[name] = "hazard_basis is site-specific: site coefficients are not used"
    with scope.step():
        return Handles([scope.given("S_DS", S_DS, source), scope.given("S_D1", S_D1, source)])


def geodatabase_values(scope: Scope, values: Mapping[str, Any], source: str) -> Handles:
    """S_MS, S_M1, PGA_M as 7-22 reads them for the site class; nothing in 7-16, which works them out."""
    if not of_2022(scope):
        return Handles()
    stated = {name: value for name, value in values.items() if not _none(value)}
    with scope.step():
        return Handles(scope.given(name, value, source) for name, value in stated.items())


def _none(value: Any) -> bool:
    return isinstance(value, str) and value.partition(":")[0].strip() == NONE


def design_category(scope: Scope) -> Handles:
    """I_e, the categories by S_DS and S_D1 with their margins, and the more severe of them."""
    risk = scope.word("risk_category")
    faults = [scope.missing("risk_category")] if risk is None else []
    faults += [scope.missing(name) for name in ("S_DS", "S_D1", "S_S", "S_1") if scope.number(name) is None]
    if faults or risk is None:
        raise InputError("asce7.design_category", faults)
    with scope.step():
        I_e = scope.look_up("I_e", load(PACKAGE, "I_e").entry(risk, "I_e"), rests=("risk_category",))
        made = [_by_table(scope, "SDC_DS", "S_DS", risk), _by_table(scope, "SDC_D1", "S_D1", risk)]
        return Handles([I_e, *made, _governing_category(scope, risk, made)])


def _by_table(scope: Scope, name: str, ordinate: str, risk: str) -> Handle:
    table = load(PACKAGE, f"category_{ordinate}")
    value = scope.number(ordinate) or 0.0
    found = table.band(risk, value, ordinate)
    margin = _nearest_edge(table, risk, value, ordinate)
    rests = (ordinate, "risk_category")
    return scope.state(name, found.text, "table", found.source, detail=found.detail, rests=rests, margin=margin)


def _nearest_edge(table: Any, risk: str, value: float, ordinate: str) -> Margin | None:
    edges = [(float(low), table.row(low)[risk]) for low in table.rows]
    changes = [
        (low, before, after) for (_, before), (low, after) in pairwise(edges) if before != after
    ]
    if not changes:
        return None
    edge, before, after = min(changes, key=lambda change: abs(change[0] - value))
    side = f"above category {before}" if value >= edge else f"below category {after}"
    percent = abs(value / edge - 1) * 100
    return Margin(side, percent, "%", f"{ordinate} {percent:.1f} %")


def _governing_category(scope: Scope, risk: str, made: Sequence[Handle]) -> Handle:
    S_S, S_1 = scope.number("S_S") or 0.0, scope.number("S_1") or 0.0
    letters = [str(handle.value) for handle in made]
    word, detail = max(letters), "the more severe of the two tables"
    flags: list[Flag] = []
    if S_1 >= 0.75:
        word, detail = ("F" if risk == "IV" else "E"), f"S_1 = {S_1:g} is not less than 0.75"
    elif scope.word("category_basis") == "S_DS alone":
        word, detail = letters[0], BY_S_DS_TABLE
        flags.append(Flag(BY_S_DS))
    elif S_1 <= 0.04 and S_S <= 0.15 and not of_2022(scope):
        word, detail = "A", "S_1 not above 0.04 and S_S not above 0.15"
    elif S_1 <= 0.04 and S_S <= 0.15 and word != "A":
        flags.append(Flag(RULE_FOR_A, True, "holder of the standard"))
    if word == "A":
        flags.append(Flag(CATEGORY_A, True, "originator"))
    deciding = made[:1] if detail == BY_S_DS_TABLE else made
    compared = [
        Candidate(
            line.source.where, None, "", str(line.value), line.detail,
            handle in deciding and line.value == word, line.id,
        )
        for handle in made
        if (line := handle.line).source
    ]
    rests = ("SDC_DS", "SDC_D1", "S_S", "S_1", "risk_category", "category_basis")
    margin = to_limit("S_1", S_1, 0.75, "0.75, from which the category is E or F") if S_1 else None
    return scope.state(
        "SDC", word, "table", rule("11.6"), detail=detail, flags=flags, rests=rests, candidates=compared, margin=margin
    )
