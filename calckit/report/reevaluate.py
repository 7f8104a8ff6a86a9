"""Every formula of a record evaluated again, in the unit set that the calculation does not use.

Knows the record, the syntax tree of an expression, units and floats. Must not know how the kit works, rounds or prints
a line: no node, printer or arithmetic of the core is used, so that an error there is not made here too.

A homogeneous formula gives the same quantity in any coherent set of units, so its operands are converted to the other
one and its result back. An empirical formula holds in its declared units alone and is evaluated in them. The record
does not name the two: a formula is empirical if the kinds of its quantities do not match, and must then say in which
units it takes its operands.
"""

from __future__ import annotations

import ast
import functools
import math
import operator
import sys
from collections import Counter
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from calckit import units
from calckit.core.parser import Parsed, dotted, parse
from calckit.core.record import NOT_CHECKED, NOT_OK, OK, Candidate, Line, Operand, Record
from calckit.errors import CalckitError

TOLERANCE = 1e-9
_SAME = 1e-11
"""Relative: values are recorded with 12 significant digits, and checks compare them so."""
_PRECISION = 4 * sys.float_info.epsilon

OTHER, UNITLESS, DECLARED = "in the other unit set", "without units of force or length", "in the declared units"
"""The ways a formula can be evaluated again."""

BROKEN = (CalckitError, ArithmeticError, ValueError, TypeError, LookupError, AttributeError, RecursionError)
"""What reading a record that was tampered with may raise."""

_NOT_MET = "not met at "
_METRIC, _US = ("kN", "m"), ("kip", "ft")
_ARITHMETIC: dict[type[ast.operator], Callable[[Any, Any], Any]] = {
    ast.Add: operator.add, ast.Sub: operator.sub, ast.Mult: operator.mul, ast.Div: operator.truediv,
    ast.Pow: operator.pow,
}  # fmt: skip
_COMPARISON: dict[type[ast.cmpop], Callable[[Any, Any], bool]] = {
    ast.Lt: operator.lt, ast.LtE: operator.le, ast.Gt: operator.gt, ast.GtE: operator.ge, ast.Eq: operator.eq,
    ast.NotEq: operator.ne,
}  # fmt: skip


@dataclass(frozen=True)
class Walk:
    """The value of an expression by a walk over its syntax tree, on any numbers that know + - * / ** and < <=.

    `values` gives each name its number, or its list with one number for each of `rows`, roof first; `literal` makes a
    number of digits, `call` applies a function of one number.

    >>> Walk(parse("max(a, total(b))*2"), {"a": 1.0, "b": [2.0, 3.0]}, ["Roof", "2"], float, getattr).result()
    10.0
    """

    parsed: Parsed
    values: Mapping[str, Any]
    rows: Sequence[str]
    literal: Callable[[str], Any]
    call: Callable[[str, Any], Any]

    def result(self, row: int | None = None) -> Any:
        """The value of the whole expression, for one row if it runs over rows."""
        return self.value(self.parsed.tree, row)

    def sides(self, row: int | None = None) -> tuple[Any, Any]:
        """The values left and right of the relation that the expression is; ValueError if it is none."""
        if not isinstance(self.parsed.tree, ast.Compare):
            raise ValueError(f"{self.parsed.text} is no relation")
        return self.value(self.parsed.tree.left, row), self.value(self.parsed.tree.comparators[0], row)

    def value(self, node: ast.expr, row: int | None) -> Any:
        """The value of a part of the expression."""
        name = dotted(node)
        if name is not None:
            found = self.values[name]
            if not isinstance(found, list):
                return found
            if row is None:
                raise ValueError(f"{name} is a list")
            return found[row]
        match node:
            case ast.Constant():
                return self.literal(self.parsed.literal(node))
            case ast.UnaryOp(operand=operand):
                return -self.value(operand, row)
            case ast.BinOp(left=left, op=op, right=right):
                return _ARITHMETIC[type(op)](self.value(left, row), self.value(right, row))
            case ast.IfExp(test=ast.Compare(left=left, ops=[sign], comparators=[right]), body=body, orelse=orelse):
                holds = _COMPARISON[type(sign)](self.value(left, row), self.value(right, row))
                return self.value(body if holds else orelse, row)
            case ast.Call(func=ast.Name(id=function), args=args):
                return self._function(function, args, row)
        raise ValueError(f"{self.parsed.text} is not read")

    def _function(self, function: str, args: Sequence[ast.expr], row: int | None) -> Any:
        if function == "level":
            return self.value(args[0], self.rows.index(ast.literal_eval(args[1])))
        if function == "total":
            return self._sum(args[0], range(len(self.rows)))
        if function in ("above", "below"):
            if row is None:
                raise ValueError(f"{function}(...) stands outside a list")
            if function == "above":
                return self._sum(args[0], range(row + 1))
            here = self.value(args[0], row)
            return self.value(args[0], row + 1) if row + 1 < len(self.rows) else here - here
        values = [self.value(arg, row) for arg in args]
        if function in ("min", "max"):
            return min(values) if function == "min" else max(values)
        return self.call(function, values[0])

    def _sum(self, node: ast.expr, rows: Sequence[int]) -> Any:
        return functools.reduce(operator.add, [self.value(node, row) for row in rows])


def operands_of(line: Line) -> dict[str, Operand]:
    """The operand that each name of a line's formula stands for.

    Raises KeyError if the line lacks one.
    """
    names = parse(line.formula or "").names
    return {name: line.inputs.get(f"{line.part}.{name}") or line.inputs[name] for name in names}


def rows_of(line: Line, lines: Mapping[str, Line]) -> list[str]:
    """The rows over which the lists of a line run: its own, or those of its operands."""
    listed = (lines[id_].rows for id_ in line.inputs if id_ in lines and lines[id_].rows)
    return line.rows or next(listed, [])


def named(line: Line) -> str:
    """A line as a finding names it."""
    return f"line {line.n}, {line.id}"


def counted(number: int, what: str) -> str:
    """A count in words.

    >>> counted(1, "line"), counted(2, "table row")
    ('1 line', '2 table rows')
    """
    return f"{number} {what}{'' if number == 1 else 's'}"


@dataclass
class Outcome:
    """What was evaluated again: how many formulas each `way`, the number of `checks` and `candidates`, the checks that
    a rule decides and no relation (`by_rule`), and the `faults`, each beginning with its line."""

    ways: Counter[str] = field(default_factory=Counter)
    checks: int = 0
    candidates: int = 0
    by_rule: int = 0
    faults: list[str] = field(default_factory=list)

    def text(self) -> str:
        """The account in words."""
        ways = ", ".join(f"{self.ways[way]} {way}" for way in (OTHER, UNITLESS, DECLARED) if self.ways[way])
        words = f"{counted(self.ways.total(), 'formula')} evaluated again, {self.checks} of them checks"
        words += f"; {counted(self.candidates, 'candidate')} as in their lines" if self.candidates else ""
        words += f"\n{ways}" if ways else ""
        by_rule = f"\nnot made again: {counted(self.by_rule, 'check')} by a rule that is no relation of numbers"
        return words + by_rule if self.by_rule else words


def reevaluate(record: Record) -> Outcome:
    """Evaluate every formula of a record again, and hold operands, candidates and verdicts against their lines."""
    found = Outcome()
    lines = {line.id: line for line in record.lines}
    for line in record.lines:
        try:
            found.faults += [f"{named(line)}: {fault}" for fault in _line(line, lines, found)]
        except BROKEN as error:
            found.faults.append(f"{named(line)}: cannot be evaluated again ({error})")
    return found


def _line(line: Line, lines: Mapping[str, Line], found: Outcome) -> list[str]:
    faults = [fault for id_, operand in line.inputs.items() for fault in _operand(id_, operand, lines)]
    faults += [fault for candidate in line.candidates for fault in _candidate(line, candidate, lines)]
    found.candidates += len(line.candidates)
    if line.kind == "check" and (line.verdict == NOT_CHECKED or line.formula is None):
        found.by_rule += line.verdict != NOT_CHECKED
        return faults
    if line.formula is None:
        return [*faults, "the record holds no formula of it"] if line.kind == "computed" else faults
    given = _Given(line, operands_of(line), rows_of(line, lines))
    if line.kind == "check":
        found.checks += 1
    return faults + (_check(given, found) if line.kind == "check" else _computed(given, found))


def _operand(id_: str, operand: Operand, lines: Mapping[str, Line]) -> list[str]:
    """Whether an operand is what its line says; one typed in place has no line behind it."""
    if not operand.content:
        return []
    line = lines.get(id_)
    if line is None:
        return [f"rests on {id_}, which is not in the record"]
    faults = [] if line.content == operand.content else [f"rests on another state of {named(line)}"]
    if isinstance(line.value, str) or line.value is None:
        same = line.value == operand.value
    else:
        own, taken = _listed(line.value), _listed(operand.value)
        converted = [units.convert(float(value), line.unit, operand.unit) for value in own]
        same = len(converted) == len(taken) and all(map(_close, converted, taken))
    given = f"takes {id_} as {_text(operand.value, operand.unit)}, but {named(line)} is {_text(line.value, line.unit)}"
    return faults if same else [*faults, given]


def _candidate(line: Line, candidate: Candidate, lines: Mapping[str, Line]) -> list[str]:
    """Whether a candidate prints what its line does, and the governing one is the line's own value."""
    name = f"candidate {candidate.equation}"
    faults = []
    own = lines.get(candidate.line)
    if candidate.line and own is None and candidate.value is not None:
        faults.append(f"{name}: {candidate.line} is not in the record")
    if own is not None and not _prints(candidate, own):
        faults.append(f"{name} is {candidate.shown}, but {named(own)} is {own.shown}")
    value, unit = _stated(line)
    if candidate.governs and candidate.value is not None:
        if not _close(_number(value, unit, candidate.unit), candidate.value):
            faults.append(f"{name} is said to govern, but it is {candidate.shown} and the line {_text(value, unit)}")
    elif candidate.governs and value != candidate.shown:
        faults.append(f"{name} is said to govern, but it is {candidate.shown} and the line {value}")
    return faults


def _prints(candidate: Candidate, line: Line) -> bool:
    """Whether a candidate is what its line is: the same number, or the same word, or none where the line has none."""
    if not isinstance(line.value, int | float):
        return candidate.value is None and candidate.shown in (line.shown, line.value, "none")
    if candidate.value is None or candidate.shown != line.shown:
        return False
    return _close(_number(line.value, line.unit, candidate.unit), candidate.value)


def _stated(line: Line) -> tuple[Any, str]:
    """The value that the kit computed, with its unit; an override stands beside it."""
    return (line.computed.value, line.computed.unit) if line.computed else (line.value, line.unit)


def _listed(value: Any) -> list[Any]:
    return value if isinstance(value, list) else [value]


def _number(value: Any, unit: str, other: str) -> float:
    return units.convert(float(value), unit, other)


def _close(a: float, b: float, noise: float = 0.0) -> bool:
    return abs(a - b) <= TOLERANCE * max(abs(a), abs(b)) + _PRECISION * noise


def _text(value: Any, unit: str) -> str:
    numbers = ", ".join(f"{v:.10g}" if isinstance(v, int | float) else str(v) for v in _listed(value))
    return f"{numbers} {units.shown(unit)}".rstrip()


@dataclass(frozen=True)
class _Given:
    """A line with the operands of its formula and the rows its lists run over."""

    line: Line
    operands: Mapping[str, Operand]
    rows: Sequence[str]

    def indices(self) -> Sequence[int | None]:
        """The rows for which the line has a value; None stands for the single value of a line that is no list."""
        return range(len(self.line.rows)) if self.line.rows else [None]

    def unit_set(self) -> tuple[str, str] | None:
        """The other set of force and length; None if nothing here has a unit of either."""
        used = [operand.unit for operand in self.operands.values()] + [_stated(self.line)[1]]
        telling = next((unit for unit in used if any(units.powers(unit)[:2])), None)
        if telling is None:
            return None
        return _US if units.homogeneous_set(telling, "US")[0] in ("N", "kN") else _METRIC

    def walk(self, other: tuple[str, str] | None) -> Walk:
        """The walk with the operands in the `other` set, or as plain numbers in the units they are recorded in."""

        def amount(value: Any, unit: str) -> _Amount:
            own = units.coherent(unit, *other) if other else unit
            number = units.convert(float(value), unit, own)
            return _Amount(number, units.powers(own) if other else _PLAIN, abs(number))

        values = {
            name: [amount(v, o.unit) for v in o.value] if isinstance(o.value, list) else amount(o.value, o.unit)
            for name, o in self.operands.items()
        }
        return Walk(parse(self.line.formula or ""), values, self.rows, _literal, _call)

    def either(self, work: Callable[[Walk], list[_Amount]], result: str | None) -> tuple[list[_Amount], str, str]:
        """What `work` gives, in the unit `result` (None: as it comes), the way it went, and what is wrong with it."""
        other = self.unit_set()
        basis = other or _METRIC
        try:
            amounts = work(self.walk(basis))
            if result is not None:
                for amount in amounts:
                    _alike(amount.powers, units.powers(result))
                ratio = float(units.factor(units.coherent(result, *basis), result))
                amounts = [_Amount(a.value * ratio, a.powers, a.noise * ratio) for a in amounts]
        except _UnlikeError:
            with_units = any(any(units.powers(operand.unit)) for operand in self.operands.values())
            stated = any(part.startswith("with ") for part in self.line.detail.split("; "))
            silent = "the kinds of quantity do not match, and no units are declared"
            return work(self.walk(None)), DECLARED, silent if with_units and not stated else ""
        return amounts, OTHER if other else UNITLESS, ""


def _computed(given: _Given, found: Outcome) -> list[str]:
    value, unit = _stated(given.line)
    indices = given.indices()
    amounts, way, silent = given.either(lambda walk: [walk.result(row) for row in indices], unit)
    found.ways[way] += 1
    stated = _listed(value)
    faults = [silent] if silent else []
    if len(stated) != len(amounts):
        return [*faults, f"{len(stated)} values are recorded for {len(amounts)} rows"]
    for row, number, amount in zip(given.line.rows or [""], stated, amounts, strict=True):
        if not _close(float(number), amount.value, amount.noise):
            at = f" at {row}" if row else ""
            obtained = f"{way} {given.line.formula} gives {_text(amount.value, unit)}"
            faults.append(f"recorded {_text(number, unit)}{at}; {obtained}")
    return faults


def _check(given: _Given, found: Outcome) -> list[str]:
    """The relation at every row, the verdict, and the ratio of the worst row."""
    line, indices = given.line, given.indices()
    pairs, way, silent = given.either(lambda walk: _pairs(walk, indices), None)
    found.ways[way] += 1
    tree = parse(line.formula or "").tree
    assert isinstance(tree, ast.Compare)
    upper = isinstance(tree.ops[0], ast.Lt | ast.LtE)
    met, ratios = [], []
    for left, right in zip(pairs[::2], pairs[1::2], strict=True):
        near = abs(left.value - right.value) <= _SAME * abs(right.value)
        met.append(None if near else _COMPARISON[type(tree.ops[0])](left.value, right.value))
        demand, limit = (left, right) if upper else (right, left)
        ratios.append(demand / limit if limit.value else None)
    faults = [silent] if silent else []
    failing = [holds is False for holds in met]
    possible = {NOT_OK} if any(failing) else {OK, NOT_OK} if None in met else {OK}
    if line.verdict not in possible:
        faults.append(f"recorded {line.verdict}; {way} {line.formula} gives {' or '.join(sorted(possible))}")
    if line.rows:
        failed = {row for row, fails in zip(line.rows, failing, strict=True) if fails}
        said = next((part for part in line.detail.split("; ") if part.startswith(_NOT_MET)), "")
        if not failed <= set(said.removeprefix(_NOT_MET).split(", ")):
            faults.append(f"{_NOT_MET}{', '.join(sorted(failed))}; the line says {said or 'nothing of it'}")
    return faults + _ratio(line, ratios, failing, way)


def _ratio(line: Line, ratios: Sequence[_Amount | None], failing: Sequence[bool], way: str) -> list[str]:
    """Whether the recorded ratio is that of the row worked in full, and no other row is worse."""
    here = line.rows.index(line.row) if line.rows else 0
    own = ratios[here]
    if own is None or None in ratios:
        return [] if line.value is None else ["a ratio is recorded to a limit of nothing"]
    faults = []
    if not isinstance(line.value, int | float) or not _close(line.value, own.value, own.noise):
        faults.append(f"recorded ratio {_text(line.value, '')}; {way} it is {own.value:.10g}")
    for place, other in enumerate(ratios):
        larger = other is not None and other.value > own.value and not _close(other.value, own.value, other.noise)
        if (failing[place], larger) > (failing[here], False):
            faults.append(f"{line.row} is said to be the worst row, but {line.rows[place]} is worse")
    return faults


def _pairs(walk: Walk, indices: Sequence[int | None]) -> list[_Amount]:
    """Left and right side, row after row; the two must be alike."""
    amounts = []
    for row in indices:
        left, right = walk.sides(row)
        _alike(left.powers, right.powers)
        amounts += [left, right]
    return amounts


class _UnlikeError(ValueError):
    """Unlike quantities added or compared."""


_Powers = tuple[float, float, float]
_PLAIN: _Powers = (0.0, 0.0, 0.0)


def _alike(powers: _Powers, other: _Powers) -> None:
    if any(abs(a - b) > TOLERANCE for a, b in zip(powers, other, strict=True)):
        raise _UnlikeError(f"unlike quantities: {units.kind_text(powers)} and {units.kind_text(other)}")


@dataclass(frozen=True, eq=False)
class _Amount:
    """A number in a coherent set, its powers of mass, length and time, and its `noise`: how large the numbers were
    that it came from, so that what float arithmetic loses where they cancel is not taken for a difference."""

    value: float
    powers: _Powers = _PLAIN
    noise: float = 0.0

    def __add__(self, other: _Amount) -> _Amount:
        _alike(self.powers, other.powers)
        value = self.value + other.value
        return _Amount(value, self.powers, self.noise + other.noise + abs(value))

    def __neg__(self) -> _Amount:
        return _Amount(-self.value, self.powers, self.noise)

    def __sub__(self, other: _Amount) -> _Amount:
        return self + -other

    def __mul__(self, other: _Amount) -> _Amount:
        value = self.value * other.value
        noise = abs(self.value) * other.noise + abs(other.value) * self.noise + abs(value)
        return _Amount(value, _combined(self.powers, other.powers, 1), noise)

    def __truediv__(self, other: _Amount) -> _Amount:
        value = self.value / other.value
        noise = (self.noise + abs(value) * other.noise) / abs(other.value) + abs(value)
        return _Amount(value, _combined(self.powers, other.powers, -1), noise)

    def __pow__(self, other: _Amount) -> _Amount:
        _alike(other.powers, _PLAIN)
        value = math.pow(self.value, other.value)
        noise = abs(value)
        if self.value:
            noise += abs(value * other.value / self.value) * self.noise
            noise += abs(value * math.log(abs(self.value))) * other.noise
        return _Amount(value, _combined(_PLAIN, self.powers, other.value), noise)

    def _beyond(self, other: _Amount) -> float:
        """How far above another; zero where float arithmetic cannot tell them apart."""
        _alike(self.powers, other.powers)
        apart = self.value - other.value
        return apart if abs(apart) > sys.float_info.epsilon * (self.noise + other.noise) else 0.0

    def __lt__(self, other: _Amount) -> bool:
        return self._beyond(other) < 0

    def __le__(self, other: _Amount) -> bool:
        return self._beyond(other) <= 0

    def __gt__(self, other: _Amount) -> bool:
        return self._beyond(other) > 0

    def __ge__(self, other: _Amount) -> bool:
        return self._beyond(other) >= 0

    def __eq__(self, other: object) -> bool:
        return self._beyond(other) == 0 if isinstance(other, _Amount) else NotImplemented

    __hash__ = None  # type: ignore[assignment]


def _combined(powers: _Powers, other: _Powers, times: float) -> _Powers:
    mass, length, time = (a + times * b for a, b in zip(powers, other, strict=True))
    return mass, length, time


def _literal(text: str) -> _Amount:
    return _Amount(float(text), _PLAIN, float(text))


_SLOPES: dict[str, Callable[[float], float]] = {
    "exp": math.exp, "log": lambda x: 1 / x, "sin": math.cos, "cos": math.sin, "tan": lambda x: 1 + math.tan(x) ** 2,
}  # fmt: skip


def _call(function: str, x: _Amount) -> _Amount:
    if function == "abs":
        return _Amount(abs(x.value), x.powers, x.noise)
    if function == "sqrt":
        return x ** _Amount(0.5)
    _alike(x.powers, _PLAIN)
    value = float(getattr(math, function)(x.value))
    return _Amount(value, _PLAIN, abs(value) + abs(_SLOPES[function](x.value)) * x.noise)
