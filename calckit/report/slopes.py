"""Slopes of recorded results: the chain rule over the recorded formulas, forward, on one side at a time.

Walks the parser's syntax tree with numbers that carry a slope, and from line to line through the recorded inputs. Knows
ties, the nearest switch of a branch and where the chain is broken. Must not know how a line was computed, nor what a
reader is told of it.
"""

from __future__ import annotations

import ast
import math
import operator
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import cached_property, reduce

from calckit import units
from calckit.core.numbers import DUALS, Dual
from calckit.core.parser import Parsed, dotted, parse
from calckit.core.record import Line, Operand, Record

TIE = 1e-10
"""Relative difference below which two branches count as equal: values in a record carry 12 digits."""

_SAME = 1e-9
_INPUTS = ("given", "assumption", "judgment")
_UNWORKED = (ZeroDivisionError, OverflowError, ValueError, TypeError, IndexError)


_ARITHMETIC: dict[type[ast.operator], Callable[[Dual, Dual], Dual]] = {
    ast.Add: operator.add, ast.Sub: operator.sub, ast.Mult: operator.mul, ast.Div: operator.truediv,
    ast.Pow: operator.pow,
}  # fmt: skip
_COMPARE: dict[type[ast.cmpop], Callable[[float, float], bool]] = {
    ast.Lt: operator.lt, ast.LtE: operator.le, ast.Gt: operator.gt, ast.GtE: operator.ge,
    ast.Eq: operator.eq, ast.NotEq: operator.ne,
}  # fmt: skip


@dataclass(frozen=True)
class Switch:
    """A branch that changes over when the input moves by about `percent` (first order): the line, and the branch.

    On the side "less" a move downwards counts as positive.
    """

    percent: float
    line: str
    branch: str


@dataclass(frozen=True)
class Break:
    """Where a change of an input does not reach a result: the line, and why."""

    line: str
    text: str


@dataclass
class Met:
    """What was met on the way: lines with a tie, switches, and places without a slope."""

    ties: dict[str, None] = field(default_factory=dict)
    switches: list[Switch] = field(default_factory=list)
    breaks: dict[Break, None] = field(default_factory=dict)


@dataclass(frozen=True)
class Seed:
    """One input number: the line, its place in a list (0 for a single number), and the side, 1 (more) or -1 (less)."""

    line: str
    place: int
    side: int


@dataclass(frozen=True)
class Worked:
    """A formula being worked for one row: what its names stand for, and what is met."""

    line: str
    parsed: Parsed
    operands: Mapping[str, Sequence[Dual]]
    listed: frozenset[str]
    rows: Sequence[str]
    row: int | None
    met: Met

    def number(self, node: ast.expr) -> Dual:
        """The number and slope of one node."""
        name = dotted(node)
        if name:
            if name in self.listed and self.row is None:
                raise ValueError(f"{name} is a list")
            return self.operands[name][(self.row or 0) if name in self.listed else 0]
        match node:
            case ast.Constant():
                return Dual(float(self.parsed.literal(node)))
            case ast.UnaryOp(operand=operand):
                return -self.number(operand)
            case ast.BinOp(left=left, op=op, right=right):
                return _ARITHMETIC[type(op)](self.number(left), self.number(right))
            case ast.IfExp(test=ast.Compare() as test, body=body, orelse=orelse):
                return self._cases(test, body, orelse)
            case ast.Compare(left=left, ops=[op], comparators=[right]):  # a check: demand over limit
                pair = (left, right) if isinstance(op, ast.Lt | ast.LtE) else (right, left)
                return self.number(pair[0]) / self.number(pair[1])
            case ast.Call(func=ast.Name(id=function), args=args):
                return self._call(function, args, node)
        raise ValueError(f"{ast.unparse(node)} is not read")

    def _call(self, function: str, args: Sequence[ast.expr], node: ast.expr) -> Dual:
        first = args[0]
        match function:
            case "min" | "max":
                return self._first(1 if function == "max" else -1, [(self, arg) for arg in args], node)
            case "total":
                return reduce(operator.add, (replace(self, row=row).number(first) for row in range(self._count())))
            case "above":
                return reduce(operator.add, (replace(self, row=row).number(first) for row in range(self._level() + 1)))
            case "below":
                lower = self._level() + 1
                return replace(self, row=lower).number(first) if lower < self._count() else Dual(0.0)
            case "level":
                return replace(self, row=list(self.rows).index(ast.literal_eval(args[1]))).number(first)
        x = self.number(first)
        if function == "abs":
            return x if self._order(x, -x, node) >= 0 else -x
        worked: Dual = DUALS.call(function, x)
        return worked

    def _count(self) -> int:
        return max((len(self.operands[name]) for name in self.listed), default=0)

    def _level(self) -> int:
        if self.row is None:
            raise ValueError("no level is worked")
        return self.row

    def _first(self, sign: int, many: Sequence[tuple[Worked, ast.expr]], node: ast.expr) -> Dual:
        """The largest (sign 1) or smallest (sign -1) of several, without what those behind meet among themselves."""
        apart = [replace(worked, met=Met()) for worked, _ in many]
        numbers = [worked.number(each) for worked, (_, each) in zip(apart, many, strict=True)]
        first = reduce(lambda a, b: a if sign * _ahead(numbers[a], numbers[b]) >= 0 else b, range(len(numbers)))
        self.met.ties |= apart[first].met.ties
        self.met.switches += apart[first].met.switches
        for place, worked in enumerate(apart):
            self.met.breaks |= worked.met.breaks
            if place != first:
                self._order(numbers[first], numbers[place], node)
        return numbers[first]

    def _order(self, a: Dual, b: Dual, node: ast.expr) -> float:
        """Above 0 if `a` is the larger on the side looked at, below 0 if `b` is; a tie is ordered by the slopes."""
        gap, rate = a.value - b.value, a.slope - b.slope
        if rate and _tied(a.value, b.value):
            self.met.ties.setdefault(self.line)
        elif rate:
            self.met.switches.append(Switch(-gap / rate, self.line, ast.unparse(node)))
        return _ahead(a, b)

    def _cases(self, test: ast.Compare, body: ast.expr, orelse: ast.expr) -> Dual:
        left, right = self.number(test.left), self.number(test.comparators[0])
        holds = _COMPARE[type(test.ops[0])]
        order = self._order(left, right, test)
        chosen = holds(order, 0.0) if order else holds(left.value, right.value)
        number = self.number(body if chosen else orelse)
        if chosen != holds(left.value, right.value):  # a tie, and the branch in force is the other one
            own = self.number(orelse if chosen else body)
            if not _tied(number.value, own.value):
                text = f"the value jumps from {own.value:.4g} to {number.value:.4g} at {ast.unparse(test)}"
                self.met.breaks.setdefault(Break(self.line, text))
        return number

    def worst(self) -> Dual:
        """The largest ratio of a check over all rows."""
        tree = self.parsed.tree
        return self._first(1, [(replace(self, row=row), tree) for row in range(self._count())], tree)


class Chain:
    """The lines of a record with the operands that tie them together.

    >>> from calckit.core.record import Line, Operand
    >>> weight = Line("w_x", "given", value=[300.0, 100.0], unit="kip", rows=["Roof", "2"], content="5f")
    >>> total = Line("W", "computed", value=400.0, unit="kip", formula="total(w_x)",
    ...              inputs={"w_x": Operand([300.0, 100.0], "kip", ["300", "100"], "5f")})
    >>> Chain(Record({}, [weight, total])).follow("W", Seed("w_x", 0, 1), Met())
    [Dual(value=400.0, slope=3.0)]
    """

    def __init__(self, record: Record) -> None:
        self.lines = {line.id: line for line in record.lines}
        self._upstream: dict[str, dict[str, None]] = {}
        self._dead: dict[str, str] = {}

    @cached_property
    def inputs(self) -> list[Line]:
        """Every value that someone put in: givens, assumptions, answers that are inputs, and overridden lines."""
        return [
            line for line in self.lines.values()
            if line.override or line.kind in ("given", "assumption") or (line.kind == "judgment" and line.symbol)
        ]  # fmt: skip

    def upstream(self, id_: str) -> dict[str, None]:
        """The lines that this one rests on, itself among them."""
        if id_ not in self._upstream:
            found = {id_: None}
            for source in self._sources(self.lines[id_]).values():
                if source:
                    found |= self.upstream(source.id)
            self._upstream[id_] = found
        return self._upstream[id_]

    def breaks(self, id_: str) -> list[Break]:
        """Where the chain to this line is broken: typed in place, overridden, without a formula, not reproduced."""
        found = []
        for line in map(self.lines.__getitem__, self.upstream(id_)):
            if line.override:
                found.append(Break(line.id, f"overridden: {line.override.shown} is in force, whatever stands above it"))
            for key, source in self._sources(line).items():
                if source is None:
                    found.append(Break(line.id, f"{key} typed in place: {_shown(line.inputs[key])}"))
            if self._why_dead(line):
                found.append(Break(line.id, self._why_dead(line)))
        return found

    def follow(self, id_: str, seed: Seed, met: Met) -> list[Dual]:
        """The numbers of a line, each with its slope per 1 % of the seeded input on the seeded side.

        On the side "less" the slope is that of the way down: its sign is turned round. Raises KeyError if there is no
        such line.
        """
        source = self.lines[seed.line]
        numbers = [Dual(value) for value in _numbers(source.value)]
        moved = numbers[seed.place].value
        numbers[seed.place] = Dual(moved, seed.side * moved / 100)
        return self._duals(self.lines[id_], seed.line, {seed.line: numbers}, met)

    def _duals(self, line: Line, seed: str, known: dict[str, list[Dual]], met: Met) -> list[Dual]:
        if line.id not in known:
            known[line.id] = [Dual(value) for value in _numbers(line.value)]
            operands = {
                key: self._operand(line.inputs[key], source, seed, known, met)
                for key, source in self._sources(line).items()
            }
            moved = any(dual.slope for duals in operands.values() for dual in duals)
            if moved and line.formula is not None and not self._why_dead(line):
                try:
                    known[line.id] = self._work(line, operands, met)
                except _UNWORKED:
                    met.breaks.setdefault(Break(line.id, "the slope is not finite here"))
        return known[line.id]

    def _operand(
        self, operand: Operand, source: Line | None, seed: str, known: dict[str, list[Dual]], met: Met
    ) -> list[Dual]:
        values = _numbers(operand.value)
        if source is None or seed not in self.upstream(source.id):
            return [Dual(value) for value in values]
        factor = float(units.factor(source.unit, operand.unit))
        slopes = [dual.slope * factor for dual in self._duals(source, seed, known, met)]
        return [Dual(value, slope) for value, slope in zip(values, slopes, strict=True)]

    def _work(self, line: Line, operands: Mapping[str, list[Dual]], met: Met) -> list[Dual]:
        """The line's formula worked anew; one number for each row of a list."""
        assert line.formula is not None
        parsed = parse(line.formula)
        keys = {name: _key(name, line) for name in parsed.names}
        listed = frozenset(name for name, key in keys.items() if isinstance(line.inputs[key].value, list))
        sources = self._sources(line)
        rows = line.rows or next((s.rows for name in listed if (s := sources[keys[name]])), [])
        named = {name: operands[key] for name, key in keys.items()}
        worked = Worked(line.id, parsed, named, listed, rows, None, met)
        if isinstance(line.value, list):
            return [replace(worked, row=row).number(parsed.tree) for row in range(len(line.value))]
        return [worked.worst() if line.rows else worked.number(parsed.tree)]

    def _sources(self, line: Line) -> dict[str, Line | None]:
        """The line behind each operand, None for a value typed in place; nothing for a line that was itself put in."""
        if line.override or line.kind in _INPUTS:
            return {}
        return {key: self.lines.get(key) if operand.content else None for key, operand in line.inputs.items()}

    def _why_dead(self, line: Line) -> str:
        """Why the formula of a computed number cannot be followed; "" if it can, or if there is none to follow."""
        if line.id not in self._dead:
            self._dead[line.id] = self._find_dead(line)
        return self._dead[line.id]

    def _find_dead(self, line: Line) -> str:
        values = _numbers(line.value)
        if not values or line.override or line.kind in _INPUTS:
            return ""
        if line.formula is None:
            return "" if line.kind == "table" else f"no formula is recorded ({line.kind})"
        operands = {key: [Dual(value) for value in _numbers(operand.value)] for key, operand in line.inputs.items()}
        try:
            worked = self._work(line, operands, Met())
        except (*_UNWORKED, KeyError):
            return "the recorded formula cannot be worked"
        same = all(math.isclose(dual.value, value, rel_tol=_SAME, abs_tol=_SAME**2)
                   for dual, value in zip(worked, values, strict=True))
        return "" if same else "the recorded formula does not give the recorded value"


def _key(name: str, line: Line) -> str:
    """The key under which an operand of this name is recorded: itself, or the part's own symbol."""
    return name if name in line.inputs else f"{line.part}.{name}"


def _numbers(value: object) -> list[float]:
    if isinstance(value, list):
        return [float(entry) for entry in value]
    return [float(value)] if isinstance(value, int | float) else []


def _shown(operand: Operand) -> str:
    return ", ".join(operand.shown) if isinstance(operand.shown, list) else operand.shown


def _ahead(a: Dual, b: Dual) -> float:
    """Above 0 if `a` is the larger on the side looked at, below 0 if `b` is, 0 if neither."""
    return a.slope - b.slope if _tied(a.value, b.value) else a.value - b.value


def _tied(a: float, b: float) -> bool:
    return abs(a - b) <= TIE * max(abs(a), abs(b))
