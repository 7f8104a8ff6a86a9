"""The design spectrum read at periods: by S_DS and S_D1, or between the pasted ordinates of a 7-22 printout.

Knows the periods of a printout, interpolation between ordinates and what 21.4 makes of them. Must not know where S_DS
and S_D1 come from, nor the structure.
"""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Callable, Mapping, Sequence
from itertools import pairwise
from math import ceil
from typing import TYPE_CHECKING, Any

from calckit.core import rows
from calckit.core.book import Entry, this_cell
from calckit.core.digits import carried, decimals_for, numeral, typed_numeral
from calckit.core.formula import Formula
from calckit.core.handle import Handle, Handles
from calckit.core.inputs import NONE
from calckit.core.level_lines import write_column
from calckit.core.levels import grid
from calckit.core.record import Flag, Line, Operand
from calckit.core.symbol import Symbol
from calckit.errors import Fault, InputError, ScopeError
from calckit.standards.asce7 import formulas, ground_rules
from calckit.standards.asce7.clauses import rule, rule_of
from calckit.standards.asce7.hazard import basis, of_2022, site_class

if TYPE_CHECKING:
    from calckit.core.scope import Scope

PERIODS = (
    0, 0.01, 0.02, 0.03, 0.05, 0.075, 0.1, 0.15, 0.2, 0.25, 0.3, 0.4, 0.5, 0.75, 1, 1.5, 2, 3, 4, 5, 7.5, 10,
)  # fmt: skip
"""The 22 periods of the multi-period spectrum of 7-22 (11.4.5.1), in s; from memory, high."""
LAST = 10
ENVELOPE = ("S_aC", "S_aCD", "S_aD")
COLUMNS = (("S_an",), ("S_aM",), ENVELOPE)
"""What may be pasted beside T_n: design ordinates, risk-targeted ones, or those of the three classes of the default."""
STIFF = {"ASCE 7-16": ("A", "B", "C"), "ASCE 7-22": ("A", "B", "BC", "C")}
"""Classes with a shear wave velocity above 1200 (7-16) or 1450 ft/s (7-22), for which 21.4 looks from 1 to 2 s only."""
CURVE_POINTS = 200
TWO_PERIOD = "no ordinates of a printout: spectrum by S_DS and S_D1 (11.4.5.2), meant for where there are none"
OWN_DEFAULT = "default site class: the ordinates are those that the printout gives for the default"
WITHIN = 2
"""Difference in % taken for rounding of printed values; common practice, no source."""


def multi_period(scope: Scope) -> bool:
    """Whether the spectrum runs between the pasted ordinates of a printout (7-22)."""
    return of_2022(scope) and basis(scope) == "printout" and scope.find("S_an") is not None


# ordinates pasted


def printed_ordinates(scope: Scope, text: str, source: str) -> Handles:
    """Ordinates as list lines, and S_DS and S_D1 as 21.4 takes them from a spectrum, beside those in use."""
    if text.strip().partition(":")[0].strip() == NONE:
        return Handles()
    where = "asce7.printed_ordinates"
    if basis(scope) == "mapped":
        raise ScopeError(f"{where}: mapped values of 7-16 give the spectrum of 11.4.6; compare by printed_values(...)")
    if text.startswith("@"):
        text = scope.calc.file(text[1:]).decode("utf-8-sig")
    table = rows.parse("ordinates", _with_names(text), lambda name, _: _column(scope, name), scope.system)
    faults = [scope.missing(name) for name in ("S_DS", "S_D1") if scope.number(name) is None]
    faults += _column_faults(scope, table) or _period_faults(scope, table)
    if faults:
        raise InputError(where, faults)
    origin = scope.calc.sources.read(source, where)
    with scope.step():
        pasted = [write_column(scope, table, name, symbol, origin) for name, symbol in table.symbols.items()]
        shown = list(table.symbols)
        if set(ENVELOPE) <= set(shown):
            scope.compute(ground_rules.S_AM_ENVELOPE, rests=("site_class",))
            shown.append("S_aM")
        if "S_an" not in shown:
            scope.compute(ground_rules.S_AN)
            shown.append("S_an")
        scope.compute(ground_rules.P_N)
        scope.table("ordinates", "Ordinates of the spectrum", [*shown, "p_n"], head="Period")
        if basis(scope) == "printout":
            last = ground_rules.in_row("S_a10", "S_an", f"{LAST} s", ground_rules.S_A_MULTI.source)
            scope.compute(last, detail="periods beyond it are scaled from it")
        return Handles([*pasted, *_by_21_4(scope)])


def _with_names(text: str) -> str:
    """The pasted rows with a first column that names each by its period: "0.5 s"."""
    named = []
    for number, cells in enumerate(grid("ordinates", text)):
        try:
            name = f"{float(cells[0]):g} s"
        except ValueError:
            name = cells[0] if number else "period"
        named.append("\t".join([name, *cells]))
    return "\n".join(named)


def _column(scope: Scope, name: str) -> Symbol | Fault:
    if name == "T_n" or any(name in columns for columns in COLUMNS):
        return scope.symbol(name)
    return Fault(name, "T_n [s] and S_an, or S_aM, or S_aC, S_aCD and S_aD", name)


def _column_faults(scope: Scope, table: rows.Rows) -> list[Fault]:
    given = [name for name in table.symbols if name != "T_n"]
    if "T_n" not in table.symbols or tuple(given) not in COLUMNS:
        needed = "T_n [s] with S_an, or with S_aM, or with S_aC, S_aCD, S_aD in this order"
        return [Fault("ordinates header", needed, ", ".join(table.symbols), "correct the header")]
    if tuple(given) == ENVELOPE and not (of_2022(scope) and site_class(scope) == "default"):
        cure = "paste the ordinates of the site class under S_aM"
        return [Fault("ordinates header", "three classes for the default site class of 7-22 only", "them", cure)]
    return []


def _period_faults(scope: Scope, table: rows.Rows) -> list[Fault]:
    periods = [float(reading.value) for reading in table.columns["T_n"]]
    if any(a >= b for a, b in pairwise(periods)):
        return [Fault("T_n", "periods that rise from row to row", "others", "sort the rows", "period")]
    if basis(scope) == "site-specific":
        wanted: Sequence[float] = (0.2, 1, 2) if site_class(scope) in _stiff(scope) else (0.2, 1, 2, 5)
        others: list[float] = []
    else:
        wanted, others = PERIODS, [period for period in periods if period not in PERIODS]
    missing = [period for period in wanted if period not in periods]
    faults = []
    if missing:
        named = ", ".join(f"{period:g} s" for period in missing)
        faults.append(Fault("T_n", f"{len(wanted)} periods", f"none at {named}", "add these rows", "period"))
    if others:
        named = ", ".join(f"{period:g} s" for period in others)
        cure = "leave these rows out: the spectrum is interpolated between the 22"
        faults.append(Fault("T_n", f"the {len(PERIODS)} periods of 11.4.5.1 only", f"also {named}", cure, "period"))
    return faults


def _stiff(scope: Scope) -> tuple[str, ...]:
    return STIFF[scope.calc.title_block["standard"]]


def _by_21_4(scope: Scope) -> Handles:
    """S_DS and S_D1 as 21.4 takes them from the ordinates, and how far they are from those in use."""
    longest = 2 if site_class(scope) in _stiff(scope) else 5
    reach = f"from 1 to {longest} s for class {site_class(scope)}"
    source = ground_rules.P_N.source
    for result, column, span, words in (
        ("S_amax", "S_an", (0.2, 5), "the largest from 0.2 to 5 s"),
        ("p_max", "p_n", (1, longest), f"the largest {reach}"),
    ):
        row = _largest(scope, column, *span)
        scope.compute(ground_rules.in_row(result, column, row, source), detail=words, rests=("site_class",))
    flags = [Flag(OWN_DEFAULT)] if site_class(scope) == "default" and scope.find("S_aC") is None else []
    newer = of_2022(scope)
    if newer:
        scope.compute(ground_rules.in_row("S_a1", "S_an", "1 s", source))
    made = [
        scope.compute(ground_rules.S_DS_ORDINATES, flags=flags),
        scope.compute(ground_rules.S_D1_ORDINATES_22 if newer else ground_rules.S_D1_ORDINATES),
    ]
    for result, other, ours in (("e_DSo", "S_DSo", "S_DS"), ("e_D1o", "S_D1o", "S_D1")):
        scope.compute(ground_rules.difference(result, other, ours), decimals=2)
    made.append(
        scope.require(
            f"max(abs(e_DSo), abs(e_D1o)) <= {WITHIN}", id_="ordinates_agree", source=source,
            title=f"S_DS and S_D1 in use agree with the ordinates within {WITHIN} %",
        )
    )  # fmt: skip
    return Handles(made)


def _largest(scope: Scope, column: str, low: float, high: float) -> str:
    """The row of the largest entry of a column between two periods."""
    periods, values = _list(scope, "T_n"), _list(scope, column)
    inside = [place for place, period in enumerate(periods) if low <= period <= high]
    entry = scope.find(column)
    assert entry is not None
    return entry.line.rows[max(inside, key=lambda place: values[place])]


def _list(scope: Scope, name: str) -> list[float]:
    entry = scope.find(name)
    assert entry is not None
    assert isinstance(entry.line.value, list)
    return entry.line.value


# the spectrum read


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
    names = [str(number) for number in range(1, len(periods) + 1)]
    shown = [f"{period:.{places}f}" for period in periods]
    multi = multi_period(scope)
    source = ground_rules.S_A_MULTI.source if multi else rule("11.4.6")
    line = Line(
        scope.id_of("T_r"), "given", "T_r", symbol.meaning, [float(p) for p in periods], "s", shown, part=scope.id,
        rows=names, typeset=scope.typeset(symbol), source=source, detail="periods chosen for the table",
    )  # fmt: skip
    with scope.step():
        scope.write(Entry(line, this_cell(), tuple(shown), places))
        if multi:
            handle = _between_ordinates(scope, list(map(float, periods)), names)
            columns = ["T_r", "T_lo", "S_alo", "T_hi", "S_ahi", "S_a"]
        else:
            open_ = of_2022(scope) and basis(scope) == "printout"
            handle = scope.compute(formulas.S_A, flags=[Flag(TWO_PERIOD, True, "originator")] if open_ else [])
            columns = ["T_r", "S_a"]
        scope.table("spectrum", "Design spectrum", columns, head="Point")
        return handle


def _between_ordinates(scope: Scope, periods: Sequence[float], names: list[str]) -> Handle:
    _reach(scope, max(periods))
    knots = _list(scope, "T_n")
    low = [_place(knots, period) for period in periods]
    high = [place + 1 for place in low]
    for name, column, places in (
        ("T_lo", "T_n", low), ("S_alo", "S_an", low), ("T_hi", "T_n", high), ("S_ahi", "S_an", high),
    ):  # fmt: skip
        scope.write(_picked(scope, name, column, places, names))
    return scope.compute(ground_rules.S_A_MULTI)


def _place(knots: Sequence[float], period: float) -> int:
    """The last ordinate at or below a period, but never the last of all."""
    return min(bisect_right(knots, period), len(knots) - 1) - 1


def _picked(scope: Scope, name: str, column: str, places: Sequence[int], names: list[str]) -> Entry:
    """A list of entries of another list, printed as they are there or finer."""
    origin, symbol = scope.find(column), scope.symbol(name)
    assert origin is not None
    line = origin.line
    values = [_list(scope, column)[place] for place in places]
    typed = tuple(origin.numerals[place] for place in places) if origin.numerals else None

    def made(decimals: int) -> Entry:
        shown = list(typed or (numeral(carried(value), decimals) for value in values))
        own = Line(
            scope.id_of(name), "table", name, symbol.meaning, values, line.unit, shown, part=scope.id, rows=names,
            inputs={line.id: Operand(line.value, line.unit, line.shown, line.content)}, typeset=scope.typeset(symbol),
            source=rule_of("ASCE 7-22", "11.4.5.1", obtained="memory, high"), detail="from the table of ordinates",
        )  # fmt: skip
        return Entry(own, this_cell(), typed, decimals, None if typed else made)

    return made(max(origin.decimals, 0) if typed else decimals_for([carried(value) for value in values], 4))


def _reach(scope: Scope, longest: float) -> None:
    """Refuse periods beyond the ordinates where the rule known for them would leave a step in the spectrum."""
    T_L = scope.number("T_L", "s") or 0.0
    if longest > LAST > T_L:
        raise ScopeError(
            f"11.4.5.1: a period of {longest:g} s is beyond the last ordinate, and T_L = {T_L:g} s below {LAST} s: the "
            "rule known to the kit is not continuous there; stay within 10 s, or take S_a from the printed standard"
        )


def ordinate_at_T(scope: Scope) -> Handle:
    """S_a at the period T of a part, between the two ordinates beside it."""
    T = scope.number("T", "s") or 0.0
    _reach(scope, T)
    entry = scope.find("T_n")
    assert entry is not None
    knots, names = _list(scope, "T_n"), entry.line.rows
    if T > LAST:
        return scope.compute(ground_rules.S_AT_LONG)
    place = _place(knots, T)
    if T in knots:
        formula = ground_rules.in_row("S_aT", "S_an", names[knots.index(T)], ground_rules.S_AN.source)
        return scope.compute(formula, detail="the period is that of an ordinate", rests=("T",))
    return scope.compute(ground_rules.between(*names[place : place + 2]), detail="linear between two ordinates")


def spectrum_curve(scope: Scope, longest: float | None) -> tuple[list[float], list[float]]:
    """Periods up to `longest` with the corners among them, and S_a at each, for a figure; writes no line."""
    multi = multi_period(scope)
    names = ("T_L",) if multi else ("S_DS", "S_D1", "T_0", "T_S", "T_L")
    faults = [scope.missing(name) for name in names if scope.number(name) is None]
    if faults:
        raise InputError("asce7.spectrum_curve", faults)
    values = {name: scope.number(name) or 0.0 for name in names}
    longest = _past_all_periods(scope) if longest is None else longest
    if multi:
        _reach(scope, longest)
    knots = _list(scope, "T_n") if multi else [values[name] for name in ("T_0", "T_S", "T_L")]
    corners = {period for period in knots if period <= longest}
    periods = sorted({0.0, longest, *corners, *(longest * step / CURVE_POINTS for step in range(1, CURVE_POINTS))})
    if not multi:
        return periods, _along(formulas.S_A, periods, lambda period: values)
    ordinates = _list(scope, "S_an")

    def beside(period: float) -> dict[str, float]:
        low = _place(knots, period)
        ends = {"T_lo": knots[low], "S_alo": ordinates[low], "T_hi": knots[low + 1], "S_ahi": ordinates[low + 1]}
        return values | ends | {"S_a10": ordinates[-1]}

    return periods, _along(ground_rules.S_A_MULTI, periods, beside)


def _along(formula: Formula, periods: Sequence[float], values: Callable[[float], Mapping[str, Any]]) -> list[float]:
    return [formula.value({**values(period), "T_r": period}) for period in periods]


def _past_all_periods(scope: Scope) -> float:
    """The next half second past every period of every part."""
    parts = scope.calc.parts.values()
    periods = [part.number(name, "s") or 0.0 for part in parts for name in ("T_a", "T_max", "T", "T_analysis")]
    return max(2.0, 0.5 * ceil(2.2 * max(periods, default=0.0)))
