"""Chapter 11: hazard values to design ordinates, importance factor and design category.

Knows site coefficients, the site-specific basis, 11.4.8 and the category tables. Must not know the structure.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from math import ceil
from typing import TYPE_CHECKING, Any

from calckit.core.book import Entry, this_cell
from calckit.core.digits import typed_numeral
from calckit.core.formula import Formula
from calckit.core.handle import Handle, Handles
from calckit.core.record import Candidate, Flag, Line, Margin, Source
from calckit.core.table import load
from calckit.errors import Fault, InputError, ScopeError
from calckit.standards.asce7 import formulas

if TYPE_CHECKING:
    from calckit.core.scope import Scope

PACKAGE = "calckit.standards.asce7"
CURVE_POINTS = 200
NOT_NEEDED = "not needed"
CATEGORY_A = "design category A: the forces of 1.4.2 apply in place of 12.8, with the dead load and not W"
CLASS_E = "class E with Supplement 3: whether S_M1 is increased as for class D is not known to the kit; not increased"
MAPPED_ONLY = ("F_a", "F_v", "S_MS", "S_M1")
EXCEPTIONS = {"exception 1", "exception 2", "exception 3", "S_M1 increased"}


@dataclass(frozen=True)
class Hazard:
    """What 11.4.8 says of this site: whether a study is `triggered`, and how it is met.

    `reading` is "plain" (no increase), "exception 2" (C_s), "increased" (S_M1) or "both" while that is not answered.
    """

    triggered: tuple[str, ...]
    reading: str


def basis(scope: Scope) -> str:
    """`mapped` unless the engineer says site-specific."""
    return scope.word("hazard_basis") or "mapped"


def site_class(scope: Scope) -> str:
    """The letter of the site class, "B assumed" and "D default" reduced to their letter."""
    return (scope.word("site_class") or "").partition(" ")[0]


def study(scope: Scope) -> Hazard:
    """Read 11.4.8 for the site class and the mapped values."""
    if basis(scope) == "site-specific":
        return Hazard((), "plain")
    letter, S_S, S_1 = site_class(scope), scope.number("S_S") or 0.0, scope.number("S_1") or 0.0
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


def design_spectrum(scope: Scope) -> Handles:
    """Site coefficients, S_MS, S_M1, S_DS, S_D1, T_0, T_S; from a site-specific study only the last four."""
    faults = [scope.missing(name) for name in ("S_S", "S_1", "T_L") if scope.number(name) is None]
    if scope.word("site_class") is None:
        faults.append(scope.missing("site_class"))
    if basis(scope) == "site-specific":
        faults += [scope.missing(name) for name in ("S_DS", "S_D1") if scope.number(name) is None]
    if faults:
        raise InputError("asce7.design_spectrum", faults)
    with scope.step():
        taken = scope.choice("hazard_basis", "mapped", Source(formulas.NAME, "11.4.4"))
        made = Handles() if taken == "site-specific" else _mapped(scope)
        made += [scope.compute(formulas.T_0), scope.compute(formulas.T_S)]
        if study(scope).reading == "both":
            made.append(scope.compute(formulas.T_S_INCREASED))
        return made


def _mapped(scope: Scope) -> Handles:
    letter, hazard = site_class(scope), study(scope)
    if letter == "F":
        raise ScopeError("site class F: a site response analysis is needed (11.4.8); set hazard_basis to site-specific")
    flags = _study_flags(scope, hazard)
    made = [_F_a(scope, letter, flags), _F_v(scope, letter, hazard)]
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


def _F_a(scope: Scope, letter: str, flags: Sequence[Flag]) -> Handle:
    if scope.word("site_class") == "B assumed":
        return _without_velocity(scope, "F_a", flags)
    table, S_S = load(PACKAGE, "F_a"), scope.number("S_S") or 0.0
    if letter == "E" and S_S > 0.75:
        return _F_a_of_class_E(scope, S_S, flags)
    found = table.along(letter, "S_S", S_S)
    value = (
        Formula("F_a", found.expression, found.source).value({"S_S": S_S}) if found.expression else float(found.text)
    )
    if scope.word("site_class") == "D default" and value < 1.2:
        detail = f"default class D: not less than 1.2 ({found.detail})"
        return scope.state(
            "F_a", "1.2", "table", formulas.rule("11.4.4"), detail=detail, flags=flags, rests=("site_class", "S_S")
        )
    return scope.look_up("F_a", found, flags, rests=("site_class", "S_S"))


def _without_velocity(scope: Scope, name: str, flags: Sequence[Flag]) -> Handle:
    rule, detail = formulas.rule("11.4.3", obtained="found"), "class B without measured velocity"
    return scope.state(name, "1.0", "table", rule, detail=detail, flags=flags, rests=("site_class",))


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


def _F_v(scope: Scope, letter: str, hazard: Hazard) -> Handle:
    if scope.word("site_class") == "B assumed":
        return _without_velocity(scope, "F_v", [])
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
    return scope.look_up("F_v", load(PACKAGE, "F_v").along(row, "S_1", S_1), flags, rests=("site_class", "S_1"))


def site_specific_values(scope: Scope, S_DS: Any, S_D1: Any, source: str) -> Handles:
    """The ordinates of a site-specific study; written only if the hazard basis is site-specific."""
    settings = scope.book.settings
    if basis(scope) == "mapped":
        return Handles()
    for name in MAPPED_ONLY:
        settings.unused[name] = "hazard_basis is site-specific: site coefficients are not used"
    with scope.step():
        return Handles([scope.given("S_DS", S_DS, source), scope.given("S_D1", S_D1, source)])


def spectrum_ordinates(scope: Scope, periods: Sequence[float]) -> Handle:
    """S_a at the given periods in seconds: one list line and its table."""
    faults = [
        Fault(
            "T_r",
            "a period not below 0, in seconds",
            repr(period),
            "correct the list",
            "period at which the spectrum is read",
        )
        for period in periods
        if isinstance(period, bool) or not isinstance(period, int | float) or not 0 <= period < 1e3
    ]
    if faults or not periods:
        raise InputError("asce7.spectrum_ordinates", faults or [Fault("periods", "at least one period", "none")])
    symbol = scope.symbol("T_r")
    numerals = [typed_numeral(period) for period in periods]
    places = max(len(text.partition(".")[2]) for text in numerals)
    rows = [str(number) for number in range(1, len(periods) + 1)]
    shown = [f"{period:.{places}f}" for period in periods]
    line = Line(
        scope.id_of("T_r"), "given", "T_r", symbol.meaning, [float(p) for p in periods], "s", shown, part=scope.id,
        rows=rows, typeset=scope.typeset(symbol), source=formulas.rule("11.4.6"), detail="periods chosen for the table",
    )  # fmt: skip
    with scope.step():
        scope.write(Entry(line, this_cell(), tuple(shown), places))
        handle = scope.compute(formulas.S_A)
        scope.table("spectrum", "Design spectrum", ["T_r", "S_a"], head="Point")
        return handle


def spectrum_curve(scope: Scope, longest: float | None) -> tuple[list[float], list[float]]:
    """Periods up to `longest` with the corners among them, and S_a at each, for a figure; writes no line."""
    names = ("S_DS", "S_D1", "T_0", "T_S", "T_L")
    faults = [scope.missing(name) for name in names if scope.number(name) is None]
    if faults:
        raise InputError("asce7.spectrum_curve", faults)
    values = {name: scope.number(name) or 0.0 for name in names}
    longest = _past_all_periods(scope) if longest is None else longest
    corners = {values[name] for name in ("T_0", "T_S", "T_L") if values[name] <= longest}
    periods = sorted({0.0, longest, *corners, *(longest * step / CURVE_POINTS for step in range(1, CURVE_POINTS))})
    return periods, [formulas.S_A.value(values | {"T_r": period}) for period in periods]


def _past_all_periods(scope: Scope) -> float:
    """The next half second past every period of every part."""
    parts = scope.calc.parts.values()
    periods = [part.number(name, "s") or 0.0 for part in parts for name in ("T_a", "T_max", "T", "T_analysis")]
    return max(2.0, 0.5 * ceil(2.2 * max(periods, default=0.0)))


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
    if S_1 >= 0.75:
        word, detail = ("F" if risk == "IV" else "E"), f"S_1 = {S_1:g} is not less than 0.75"
    elif S_1 <= 0.04 and S_S <= 0.15:
        word, detail = "A", "S_1 not above 0.04 and S_S not above 0.15"
    flags = [Flag(CATEGORY_A, True, "originator")] if word == "A" else []
    compared = [
        Candidate(line.source.where, None, "", str(line.value), line.detail, line.value == word, line.id)
        for handle in made
        if (line := handle.line).source
    ]
    rests = ("SDC_DS", "SDC_D1", "S_S", "S_1", "risk_category")
    rule = formulas.rule("11.6")
    return scope.state("SDC", word, "table", rule, detail=detail, flags=flags, rests=rests, candidates=compared)
