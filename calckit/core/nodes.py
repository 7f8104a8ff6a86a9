"""Expression nodes: sympy expressions that keep the layout in which they were written.

Knows the kinds of node, how one is built from a checked syntax tree, and its value in any arithmetic. Must not know
how a node is printed, nor units or symbols.
"""

from __future__ import annotations

import ast
import operator
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cache
from typing import Any

import sympy
from sympy.core.symbol import Str

from calckit.core.numbers import Arithmetic
from calckit.core.parser import COMPARISONS, Parsed, dotted, parse
from calckit.errors import ExpressionError

COMPARE = {
    "<": operator.lt, "<=": operator.le, ">": operator.gt, ">=": operator.ge, "==": operator.eq, "!=": operator.ne,
}  # fmt: skip
"""Comparison sign -> comparison."""


@dataclass(frozen=True)
class Env:
    """What names stand for: numbers or lists (one entry for each of `rows`, roof first), and the row being worked."""

    values: Mapping[str, Any]
    arithmetic: Arithmetic
    rows: Sequence[str] = ()
    row: int | None = None

    def at(self, row: int) -> Env:
        """The same with another row."""
        return replace(self, row=row)

    def number(self, name: str) -> Any:
        """The number that `name` stands for in this row."""
        value = self.values[name]
        if not isinstance(value, list | tuple):
            return value
        if self.row is None:
            raise ExpressionError(f"{name} is a list over levels: use total({name}) or level({name}, ...)")
        return value[self.row]


class Node(sympy.Expr):
    """Base of the layout nodes."""

    is_commutative = True
    __slots__ = ()

    def value(self, env: Env) -> Any:
        """The number this node gives under `env`."""
        raise NotImplementedError

    def plain(self) -> sympy.Expr:
        """The ordinary sympy expression of the same value, for proofs in tests."""
        raise NotImplementedError


class Ref(sympy.Symbol):
    """A name."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        """The number the name stands for."""
        return env.number(self.name)

    def plain(self) -> sympy.Expr:
        """The ordinary symbol, positive."""
        return sympy.Symbol(self.name, positive=True)


class Literal(Node):
    """A number that keeps its text."""

    __slots__ = ()

    def __new__(cls, text: str) -> Literal:
        return sympy.Expr.__new__(cls, Str(text))

    @property
    def text(self) -> str:
        """The digits as typed."""
        return str(self.args[0])

    def value(self, env: Env) -> Any:
        return env.arithmetic.literal(self.text)

    def plain(self) -> sympy.Expr:
        return sympy.Rational(self.text)


class Negative(Node):
    """Minus one operand."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        return -self.args[0].value(env)

    def plain(self) -> sympy.Expr:
        return -self.args[0].plain()


class Plus(Node):
    """Terms in the order written; a term taken away stands in a `Negative`."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        total = self.args[0].value(env)
        for term in self.args[1:]:
            total = total - term.args[0].value(env) if isinstance(term, Negative) else total + term.value(env)
        return total

    def plain(self) -> sympy.Expr:
        return sympy.Add(*(term.plain() for term in self.args))


class Product(Node):
    """Factors in the order written."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        total = self.args[0].value(env)
        for factor in self.args[1:]:
            total = total * factor.value(env)
        return total

    def plain(self) -> sympy.Expr:
        return sympy.Mul(*(factor.plain() for factor in self.args))


class Quotient(Node):
    """A numerator over a denominator, as written."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        return self.args[0].value(env) / self.args[1].value(env)

    def plain(self) -> sympy.Expr:
        return self.args[0].plain() / self.args[1].plain()


class Power(Node):
    """A base to an exponent."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        return self.args[0].value(env) ** self.args[1].value(env)

    def plain(self) -> sympy.Expr:
        return self.args[0].plain() ** self.args[1].plain()


class Call(Node):
    """A function of one argument."""

    __slots__ = ()

    def __new__(cls, name: str, argument: sympy.Expr) -> Call:
        return sympy.Expr.__new__(cls, Str(name), argument)

    @property
    def function(self) -> str:
        """The function's name."""
        return str(self.args[0])

    def value(self, env: Env) -> Any:
        return env.arithmetic.call(self.function, self.args[1].value(env))

    def plain(self) -> sympy.Expr:
        name = "Abs" if self.function == "abs" else self.function
        return getattr(sympy, name)(self.args[1].plain())


class Largest(Node):
    """The largest of several."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        return max(arg.value(env) for arg in self.args)

    def plain(self) -> sympy.Expr:
        return sympy.Max(*(arg.plain() for arg in self.args))


class Smallest(Node):
    """The smallest of several."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        return min(arg.value(env) for arg in self.args)

    def plain(self) -> sympy.Expr:
        return sympy.Min(*(arg.plain() for arg in self.args))


class Relation(Node):
    """A comparison; its value is true or false."""

    __slots__ = ()

    def __new__(cls, left: sympy.Expr, sign: str, right: sympy.Expr) -> Relation:
        return sympy.Expr.__new__(cls, left, Str(sign), right)

    @property
    def sign(self) -> str:
        """The comparison sign as typed."""
        return str(self.args[1])

    def value(self, env: Env) -> bool:
        return bool(COMPARE[self.sign](self.args[0].value(env), self.args[2].value(env)))

    def plain(self) -> sympy.Expr:
        return sympy.Rel(self.args[0].plain(), self.args[2].plain(), self.sign)


class Cases(Node):
    """A value if a relation holds, else another."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        return self.branch(env).value(env)

    def branch(self, env: Env) -> sympy.Expr:
        """The branch that applies."""
        yes, relation, no = self.args
        return yes if relation.value(env) else no

    def plain(self) -> sympy.Expr:
        yes, relation, no = (arg.plain() for arg in self.args)
        return sympy.Piecewise((yes, relation), (no, True))


class Total(Node):
    """The sum over all levels."""

    __slots__ = ()

    def rows(self, env: Env) -> list[int]:
        """The rows that are summed."""
        return list(range(len(env.rows)))

    def value(self, env: Env) -> Any:
        first, *others = (self.args[0].value(env.at(row)) for row in self.rows(env))
        for value in others:
            first = first + value
        return first

    def plain(self) -> sympy.Expr:
        return self.args[0].plain()


class Above(Total):
    """The sum over a level and those above it."""

    __slots__ = ()

    def rows(self, env: Env) -> list[int]:
        if env.row is None:
            raise ExpressionError("above(...) needs a level: it is used in a line over levels")
        return list(range(env.row + 1))


class Below(Node):
    """The value one level down; nothing at the lowest level."""

    __slots__ = ()

    def value(self, env: Env) -> Any:
        if env.row is None:
            raise ExpressionError("below(...) needs a level: it is used in a line over levels")
        inner = self.args[0].value(env.at(min(env.row + 1, len(env.rows) - 1)))
        return inner if env.row + 1 < len(env.rows) else inner - inner

    def plain(self) -> sympy.Expr:
        return self.args[0].plain()


class AtLevel(Node):
    """The value at a named level."""

    __slots__ = ()

    def __new__(cls, argument: sympy.Expr, level: str) -> AtLevel:
        return sympy.Expr.__new__(cls, argument, Str(level))

    @property
    def level(self) -> str:
        """The level's name."""
        return str(self.args[1])

    def env(self, env: Env) -> Env:
        """`env` moved to the named level."""
        if self.level not in env.rows:
            raise ExpressionError(f"level {self.level!r} is not known; levels are {', '.join(env.rows) or 'none yet'}")
        return env.at(list(env.rows).index(self.level))

    def value(self, env: Env) -> Any:
        return self.args[0].value(self.env(env))

    def plain(self) -> sympy.Expr:
        return self.args[0].plain()


@cache
def build(text: str) -> sympy.Expr:
    """The node tree of an expression text.

    >>> type(build("S_DS/(R/I_e)")).__name__
    'Quotient'
    """
    parsed = parse(text)
    return _node(parsed.tree, parsed)


def _node(tree: ast.expr, parsed: Parsed) -> sympy.Expr:
    name = dotted(tree)
    if name:
        return Ref(name)
    match tree:
        case ast.Constant():
            return Literal(parsed.literal(tree))
        case ast.UnaryOp(operand=operand):
            return Negative(_node(operand, parsed))
        case ast.BinOp(left=left, op=op, right=right):
            return _binary(_node(left, parsed), op, _node(right, parsed))
        case ast.Compare(left=left, ops=[op], comparators=[right]):
            return Relation(_node(left, parsed), COMPARISONS[type(op)], _node(right, parsed))
        case ast.IfExp(test=test, body=body, orelse=orelse):
            return Cases(*(_node(part, parsed) for part in (body, test, orelse)))
        case ast.Call(func=ast.Name(id=function), args=args):
            return _call(function, args, parsed)
    raise ExpressionError(f"expression {parsed.text!r} is not read")


def _binary(left: sympy.Expr, op: ast.operator, right: sympy.Expr) -> sympy.Expr:
    match op:
        case ast.Add() | ast.Sub():
            second = Negative(right) if isinstance(op, ast.Sub) else right
            return Plus(*(left.args if isinstance(left, Plus) else (left,)), second)
        case ast.Mult():
            return Product(*(left.args if isinstance(left, Product) else (left,)), right)
        case ast.Div():
            return Quotient(left, right)
    return Power(left, right)


def _call(function: str, args: list[ast.expr], parsed: Parsed) -> sympy.Expr:
    if function == "level":
        return AtLevel(_node(args[0], parsed), ast.literal_eval(args[1]))
    nodes = [_node(arg, parsed) for arg in args]
    kinds = {"min": Smallest, "max": Largest, "total": Total, "above": Above, "below": Below}
    return kinds[function](*nodes) if function in kinds else Call(function, nodes[0])
