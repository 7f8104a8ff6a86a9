"""Working a formula into a line: operands found and converted, value, digits, printed forms.

Knows how a computed line and a check come about. Must not know a standard, the order of lines or how a line is shown.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from decimal import Decimal
from functools import partial
from typing import TYPE_CHECKING, Any

from calckit import units
from calckit.core import digits
from calckit.core.book import Entry, this_cell
from calckit.core.formula import Formula
from calckit.core.numbers import DECIMALS, DIMENSIONS, FLOATS, Dimensioned, in_decimals
from calckit.core.record import NOT_CHECKED, NOT_OK, OK, Flag, Line, Operand, Value
from calckit.core.symbol import Symbol
from calckit.errors import CalckitError, DigitsError, ExpressionError, Fault, InputError, ScopeError, UnitError

if TYPE_CHECKING:
    from calckit.core.scope import Scope


RATIO_DIGITS = 3
RATIO_DECIMALS = 4


@dataclass
class Inputs:
    """The operands of a line: entries by name, and for each the unit, the float values and the digits' view of it."""

    entries: dict[str, Entry]
    unit: dict[str, str] = field(default_factory=dict)
    values: dict[str, Any] = field(default_factory=dict)
    operands: dict[str, digits.Operand] = field(default_factory=dict)
    rows: list[str] = field(default_factory=list)
    typed: frozenset[str] = frozenset()

    def listed(self, name: str) -> bool:
        """Whether the name stands for a list."""
        return isinstance(self.values[name], list)


def gather(scope: Scope, formula: Formula, result_unit: str, typed: Mapping[str, Entry]) -> Inputs:
    """Find every operand, converted into one coherent set (empirical: into the declared units)."""
    entries = {name: entry for name in formula.names if (entry := typed.get(name) or scope.find(name))}
    faults = [scope.missing(name) for name in formula.names if name not in entries]
    faults += [scope.missing(name, entry.line) for name, entry in entries.items() if not _numeric(entry.line.value)]
    if faults:
        raise InputError(f"{scope.title_of(formula.result)}", faults)
    found = Inputs(entries, typed=frozenset(typed))
    system = scope.system
    force, length = formula.set_of(system) or units.homogeneous_set(result_unit, system)
    for name, entry in entries.items():
        line = entry.line
        declared = formula.units.get(name) if formula.units else None
        unit = declared[system == "SI"] if declared else units.coherent(line.unit, force, length)
        if units.same_kind(unit, line.unit) and units.factor(unit, line.unit) == 1:
            unit = line.unit  # psf is lb/ft**2: nothing to convert
        if not units.same_kind(unit, line.unit):
            needed = f"a unit like {units.shown(unit)}"
            raise UnitError(formula.result, [Fault(name, needed, units.shown(line.unit) or "a plain number")])
        many = line.value if isinstance(line.value, list) else [line.value]
        floats = [units.convert(float(v), line.unit, unit) for v in many]  # type: ignore[arg-type]
        same = unit == line.unit
        exact = tuple(digits.carried(v) for v in floats)
        least = entry.decimals if same else digits.decimals_for(exact, 4)
        found.unit[name] = unit
        found.values[name] = floats if isinstance(line.value, list) else floats[0]
        found.operands[name] = digits.Operand(exact, least, entry.numerals if same else None)
        if isinstance(line.value, list):
            if found.rows and found.rows != line.rows:
                raise ExpressionError(f"{formula.text!r}: {name} does not run over the same rows as the other lists")
            found.rows = line.rows
    return found


def _numeric(value: Value) -> bool:
    return isinstance(value, int | float) or (isinstance(value, list) and all(isinstance(v, float) for v in value))


def compute(
    scope: Scope,
    formula: Formula,
    *,
    unit: str = "",
    meaning: str = "",
    kind: str = "computed",
    detail: str = "",
    flags: Sequence[Flag] = (),
    typed: Mapping[str, Entry] | None = None,
    row: str = "",
    decimals: int | None = None,
    symbol: Symbol | None = None,
) -> Entry:
    """Work `formula` in a scope into a line that is not yet written.

    `unit` is the result's unit where the symbol's display unit is not wanted; `typed` are operands typed in place;
    `row` is the row of a list that is worked in full; `decimals` overrides the number of decimals of the result.
    """
    symbol = symbol or scope.symbol(formula.result)
    unit = (
        formula.units[formula.result][scope.system == "SI"]
        if formula.units and formula.result in formula.units
        else unit or symbol.unit(scope.system)
    )
    inputs = gather(scope, formula, unit, typed or {})
    _no_factor(formula, unit, scope.system)
    _in_domain(formula, inputs)
    listed = _runs_over_rows(formula, inputs)
    indices = range(len(inputs.rows)) if listed else (None,)
    try:
        _same_kind(formula, inputs, unit, 0 if listed else None)
        floats = [formula.value(inputs.values, inputs.rows, i) for i in indices]
    except (ZeroDivisionError, OverflowError, ValueError, TypeError) as error:
        if isinstance(error, CalckitError):
            raise
        raise ScopeError(f"{formula.result} = {formula.text}: no value for the numbers given ({error})") from None
    if not all(math.isfinite(v) for v in floats):
        raise ScopeError(f"{formula.result} = {formula.text}: the value is not finite")
    values = tuple(digits.carried(v) for v in floats)
    places = digits.decimals_for(values, symbol.digits) if decimals is None else decimals
    worked = _worked_row(formula, inputs.rows, values, row) if listed else None
    target = digits.numeral(values[worked or 0], places)
    fifth = Decimal(2).scaleb(-places - 1)  # of a unit: half is lost to the rounded result, the rest is for lists

    def gives_target(result: Decimal) -> bool:
        return digits.numeral(digits.carried(result), places) == target

    printed = _printed(formula, inputs, worked, gives_target, values if listed else (), fifth)
    if printed is None:
        raise DigitsError(f"{formula.result} = {formula.text}: {digits.CARRIED} printed digits do not give {target}")
    shown = [digits.numeral(v, places) for v in values]
    line = Line(
        scope.id_of(symbol.name), kind, symbol.name, meaning or symbol.meaning,
        [float(v) for v in values] if listed else float(values[0]), unit,
        shown if listed else f"{shown[0]} {units.shown(unit)}".rstrip(), part=scope.id,
        rows=list(inputs.rows) if listed else [], row=inputs.rows[worked] if worked is not None else "",
        formula=formula.text, inputs=_recorded(inputs, printed), forms=_forms(scope, formula, inputs, printed, worked),
        typeset=scope.typeset(symbol), source=formula.source,
        detail="; ".join(
            part for part in (detail, _declared_units(scope, formula), _conversions(scope, inputs, printed)) if part
        ),
        flags=[*flags, *_typed_flags(scope, inputs)],
    )  # fmt: skip

    def remake(places: int) -> Entry:
        return compute(
            scope, formula, unit=unit, meaning=meaning, kind=kind, detail=detail, flags=flags, typed=typed, row=row,
            decimals=places, symbol=symbol,
        )  # fmt: skip

    return Entry(line, this_cell(), None, places, remake)


def _no_factor(formula: Formula, unit: str, system: str) -> None:
    """Refuse a result unit outside the set of its operands (cm from m, g from ft/s**2): a factor would be implicit."""
    if formula.units:
        return
    own = units.coherent(unit, *(formula.set_of(system) or units.homogeneous_set(unit, system)))
    if units.factor(own, unit) != 1:
        cure = f'write unit="{own}"' if own else "leave the unit away"
        needed = "a unit that needs no factor beside the operands' units"
        raise UnitError(formula.result, [Fault(formula.result, needed, units.shown(unit), cure)])


def _in_domain(formula: Formula, inputs: Inputs) -> None:
    if not formula.domain:
        return
    domain = Formula(formula.result, formula.domain, formula.source)
    if not domain.node.value(domain.env(inputs.values, FLOATS)):
        raise ScopeError(f"{formula.result}: {formula.source.text()} holds for {formula.domain} only")


def _runs_over_rows(formula: Formula, inputs: Inputs) -> bool:
    """Whether the result is a list: a list stands outside total(...) and level(...), or above/below is used."""
    from calckit.core.nodes import Above, AtLevel, Below, Ref, Total

    def runs(node: Any) -> bool:
        if isinstance(node, Ref):
            return inputs.listed(node.name)
        if isinstance(node, Above | Below):
            return True
        if isinstance(node, Total | AtLevel):
            return False
        return any(runs(arg) for arg in node.args)

    return bool(inputs.rows) and runs(formula.node)


def _kind(formula: Formula, inputs: Inputs, row: int | None, what: str) -> Any:
    """The value with the kind of quantity it has; ExpressionError where unlike quantities are added or compared."""

    def dimensioned(name: str) -> Any:
        powers = units.powers(inputs.unit[name])
        value = inputs.values[name]
        return [Dimensioned(v, powers) for v in value] if isinstance(value, list) else Dimensioned(value, powers)

    env = formula.env({name: dimensioned(name) for name in inputs.values}, DIMENSIONS, inputs.rows, row)
    try:
        return formula.node.value(env)
    except ExpressionError as error:
        raise ExpressionError(f"{what}: {error}") from None


def _same_kind(formula: Formula, inputs: Inputs, unit: str, row: int | None) -> None:
    """Refuse a homogeneous formula whose sides differ in kind."""
    if formula.units:
        return
    result = _kind(formula, inputs, row, f"{formula.result} = {formula.text}")
    if any(abs(a - b) > 1e-9 for a, b in zip(result.powers, units.powers(unit), strict=True)):
        given = f"{result.kind()} from {formula.text}"
        needed = f"a unit of the kind of the right-hand side, not {units.shown(unit) or 'a plain number'}"
        raise UnitError(formula.result, [Fault(formula.result, needed, given, "correct unit= or the expression")])


def _worked_row(formula: Formula, rows: Sequence[str], values: Sequence[Decimal], row: str) -> int:
    if row:
        return list(rows).index(row)
    if "above(" in formula.text and len(rows) > 1:
        return 1
    return max(range(len(values)), key=lambda i: abs(values[i]))


def _printed(
    formula: Formula,
    inputs: Inputs,
    row: int | None,
    accept: Callable[[Any], bool],
    results: Sequence[Decimal] = (),
    slack: Decimal = Decimal(0),
) -> dict[str, tuple[str, ...]] | None:
    """The numerals of every operand with which decimal arithmetic gives what `accept` takes.

    `results` are the values of all rows, which the printed single operands must give within `slack`.
    """
    whole = any(word in formula.text for word in ("total(", "above(", "below(", "level("))
    narrowed = dict(inputs.operands)
    if row is not None and not whole:
        for name, operand in inputs.operands.items():
            if inputs.listed(name):
                typed = (operand.typed[row],) if operand.typed else None
                narrowed[name] = digits.Operand((operand.values[row],), operand.least, typed)

    def tried(numbers: Mapping[str, Sequence[Decimal]]) -> bool:
        values = {
            name: (list(numbers[name]) * (1 if whole else len(inputs.rows)))
            if inputs.listed(name)
            else numbers[name][0]
            for name in numbers
        }
        env = formula.env(values, DECIMALS, inputs.rows, row)
        return accept(in_decimals(lambda: formula.node.value(env))) and serve_all(numbers)

    def serve_all(numbers: Mapping[str, Sequence[Decimal]]) -> bool:
        """Whether the printed single operands serve every row, the lists at all their digits, within `slack`."""
        exact = {
            name: list(operand.values) if inputs.listed(name) else numbers[name][0]
            for name, operand in inputs.operands.items()
        }
        return all(
            abs(in_decimals(partial(formula.node.value, formula.env(exact, DECIMALS, inputs.rows, i))) - value) <= slack
            for i, value in enumerate(results)
        )

    found = digits.fewest(narrowed, tried)
    return None if found is None else {name: inputs.operands[name].numerals(d) for name, d in found.items()}


def _recorded(inputs: Inputs, printed: Mapping[str, tuple[str, ...]]) -> dict[str, Operand]:
    recorded = {}
    for name, entry in inputs.entries.items():
        line, unit = entry.line, inputs.unit[name]
        if inputs.listed(name):
            shown: str | list[str] = list(printed[name])
        else:
            own = f"{printed[name][0]} {units.shown(unit)}".rstrip()
            shown = own if unit == line.unit else f"{line.shown} = {own}"
        recorded[name if name in inputs.typed else line.id] = Operand(inputs.values[name], unit, shown, line.content)
    return recorded


def _forms(
    scope: Scope, formula: Formula, inputs: Inputs, printed: Mapping[str, tuple[str, ...]], row: int | None
) -> dict[str, list[str]]:
    from calckit.core.layout import Printed
    from calckit.core.printers import print_all

    shown: dict[str, Any] = {}
    for name, texts in printed.items():
        numbers = [Printed(text, inputs.unit[name]) for text in texts]
        shown[name] = numbers if inputs.listed(name) else numbers[0]
    env = formula.env(inputs.values, FLOATS, inputs.rows, row)
    symbolic = print_all(formula.node, scope.symbol)
    substituted = print_all(formula.node, scope.symbol, shown, env)
    return {name: [symbolic[name], substituted[name]] for name in symbolic}


def _declared_units(scope: Scope, formula: Formula) -> str:
    """The units in which an empirical formula takes its operands: "h_n in ft"."""
    pairs = {name: pair[scope.system == "SI"] for name, pair in (formula.units or {}).items() if name in formula.names}
    listed = ", ".join(f"{scope.plain(name)} in {units.shown(unit)}" for name, unit in pairs.items())
    return f"with {listed}" if listed else ""


def _conversions(scope: Scope, inputs: Inputs, printed: Mapping[str, tuple[str, ...]]) -> str:
    parts = []
    for name, entry in inputs.entries.items():
        unit, own = inputs.unit[name], entry.line.unit
        if unit != own and inputs.listed(name):
            parts.append(f"{scope.plain(name)} converted from {units.shown(own)} to {units.shown(unit)}")
        elif unit != own:
            parts.append(f"{scope.plain(name)} = {entry.line.shown} = {printed[name][0]} {units.shown(unit)}")
    return "; ".join(parts)


def _typed_flags(scope: Scope, inputs: Inputs) -> list[Flag]:
    return [Flag(f"{scope.plain(name)} typed in place: {inputs.entries[name].line.shown}") for name in inputs.typed]


_AGAINST = {"<=": ">", "<": ">=", ">=": "<", ">": "<="}
"""What a relation that is not met says of the numbers."""


def judged(relation: Formula, env: Any) -> bool:
    """Whether a relation holds, both sides at 10 significant digits: rounding on the way to them decides nothing."""
    from calckit.core.nodes import COMPARE

    left, sign, right = relation.node.args[0], relation.node.sign, relation.node.args[2]
    return bool(COMPARE[sign](*(digits.carried(side.value(env), digits.COMPARED) for side in (left, right))))


def check(scope: Scope, id_: str, relation: Formula, *, title: str, flags: Sequence[Flag] = ()) -> Entry:
    """Work a relation (`demand <= limit`) into a check line that is not yet written.

    Over a list the worst entry is printed and the entries that fail are named.
    """
    left, sign, right = relation.node.args[0], relation.node.sign, relation.node.args[2]
    if sign not in _AGAINST:
        raise ExpressionError(f"check {title!r}: a check takes <, <=, >= or >, not {sign}")
    first = next((name for name in relation.names if scope.find(name)), None)
    found = scope.find(first) if first else None
    unit = found.line.unit if found else ""
    inputs = gather(scope, relation, unit, {})
    listed = _runs_over_rows(relation, inputs)
    rows = range(len(inputs.rows)) if listed else (None,)
    demand, limit = (left, right) if sign.startswith("<") else (right, left)

    def ratio(env: Any) -> Any:
        return demand.value(env) / limit.value(env)

    def env_at(row: int | None) -> Any:
        return relation.env(inputs.values, FLOATS, inputs.rows, row)

    _kind(relation, inputs, 0 if listed else None, f"check {title!r}, {relation.text}")
    holds = [judged(relation, env_at(row)) for row in rows]
    safe = all(limit.value(env_at(row)) for row in rows)
    ratios = [ratio(env_at(row)) if safe else 0.0 for row in rows]
    worst = max(range(len(ratios)), key=lambda i: (not holds[i], ratios[i]))
    row = worst if listed else None
    value = digits.carried(ratios[worst])
    places = min(digits.decimals_for([value], RATIO_DIGITS), RATIO_DECIMALS)
    target = digits.numeral(value, places)
    pair = Formula(relation.result, relation.text, relation.source, relation.units)

    def accepted(result: Any) -> bool:
        truth, quotient = result
        return truth == holds[worst] and (not safe or digits.numeral(digits.carried(quotient), places) == target)

    pair._cache["node"] = _Pair(relation.node, demand, limit)
    printed = _printed(pair, inputs, row, accepted)
    if printed is None:
        raise DigitsError(f"check {title!r}: {digits.CARRIED} printed digits do not show the relation")
    forms = _forms(scope, relation, inputs, printed, row)
    if not holds[worst]:
        forms = _reversed(scope, relation, inputs, printed, row, forms)
    failing = [inputs.rows[i] for i, ok in enumerate(holds) if not ok] if listed else []
    over = f"not met at {', '.join(failing)}" if failing else ""
    verdict = OK if all(holds) else NOT_OK
    line = Line(
        scope.id_of(id_), "check", "", title, float(value) if safe else None, "", target if safe else "", part=scope.id,
        rows=list(inputs.rows) if listed else [], row=inputs.rows[worst] if listed else "", formula=relation.text,
        inputs=_recorded(inputs, printed), forms=forms, source=relation.source,
        detail="; ".join(part for part in (over, _conversions(scope, inputs, printed)) if part), verdict=verdict,
        flags=list(flags) if verdict == OK else [*flags, Flag(_label(scope, title, over), True, "originator")],
    )  # fmt: skip
    return Entry(line, this_cell(), remake=lambda _places: check(scope, id_, relation, title=title, flags=flags))


def _label(scope: Scope, title: str, over: str) -> str:
    return f"{scope.labelled(title)}: {over or 'not met'}"


class _Pair:
    """A relation read as (true or false, demand over limit)."""

    def __init__(self, relation: Any, demand: Any, limit: Any) -> None:
        self.relation, self.demand, self.limit = relation, demand, limit

    def value(self, env: Any) -> tuple[bool, Any]:
        limit = self.limit.value(env)
        return self.relation.value(env), self.demand.value(env) / limit if limit else Decimal(0)


def _reversed(
    scope: Scope, relation: Formula, inputs: Inputs, printed: Mapping[str, tuple[str, ...]], row: int | None,
    forms: dict[str, list[str]],
) -> dict[str, list[str]]:  # fmt: skip
    """The forms of a check that is not met: the limit as required, the numbers as they are."""
    from calckit.core.nodes import Relation

    left, sign, right = relation.node.args[0], relation.node.sign, relation.node.args[2]
    actual = Formula(relation.result, relation.text, relation.source, relation.units)
    actual._cache["node"] = Relation(left, _AGAINST[sign], right)
    against = _forms(scope, actual, inputs, printed, row)
    return {name: [forms[name][0], against[name][1]] for name in forms}


def not_checked(scope: Scope, id_: str, title: str, missing: str, source: Any, formula: str | None = None) -> Entry:
    """A check that could not be made, with what it is waiting for."""
    flag = Flag(f"{scope.labelled(title)}: NOT CHECKED, missing {missing}", True, "originator")
    line = Line(
        scope.id_of(id_), "check", "", title, None, "", "", part=scope.id, formula=formula, source=source,
        verdict=NOT_CHECKED, missing=missing, flags=[flag],
    )  # fmt: skip
    return Entry(line, this_cell())
