"""The layout of an expression, shared by all printed forms: symbolic, or with numbers in place of names.

Knows where brackets, fractions and signs stand for each node. Must not know how a form spells them, nor how digits are
chosen.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, ClassVar

import sympy
from sympy.core.symbol import Str
from sympy.printing.printer import Printer

from calckit.core.nodes import (
    Above,
    AtLevel,
    Below,
    Call,
    Cases,
    Env,
    Largest,
    Literal,
    Negative,
    Node,
    Plus,
    Power,
    Product,
    Quotient,
    Ref,
    Relation,
    Smallest,
    Total,
    build,
)  # fmt: skip
from calckit.core.symbol import Symbol

_SIGNS = {"<=": "≤", ">=": "≥", "==": "=", "!=": "≠"}


@dataclass(frozen=True)
class Printed:
    """An operand as it is printed: numeral and unit."""

    numeral: str
    unit: str = ""


Operands = Mapping[str, Printed | Sequence[Printed]]


class Form(Printer):
    """The layout shared by the four forms; a subclass writes the pieces.

    `symbols` gives the symbol of a name. With `operands` (and the `env` that decides branches, rows and levels) names
    print as numbers; without, as symbols.
    """

    times: ClassVar[str]
    beside: ClassVar[str]
    minus: ClassVar[str] = "−"
    stacked: ClassVar[bool] = True

    def __init__(self, symbols: Callable[[str], Symbol], operands: Operands | None = None, env: Env | None = None):
        super().__init__()
        self.symbols, self.operands, self.env = symbols, operands, env

    def emptyPrinter(self, expr: Any) -> str:
        """Refuse what has no method here."""
        raise TypeError(f"no printed form for {type(expr).__name__}")

    # pieces: one set per form
    def atom(self, stem: str, subscript: str) -> str:
        """A symbol."""
        raise NotImplementedError

    def numeral(self, text: str, unit: str) -> str:
        """A number with its unit."""
        raise NotImplementedError

    def word(self, text: str) -> str:
        """Upright text."""
        raise NotImplementedError

    def sign(self, text: str) -> str:
        """An operator or relation sign between blanks."""
        return f" {text} "

    def negated(self, inner: str) -> str:
        """With a minus sign before it."""
        return self.minus + inner

    def bracket(self, inner: str) -> str:
        """In round brackets."""
        return f"({inner})"

    def fraction(self, top: str, bottom: str) -> str:
        """A stacked quotient."""
        raise NotImplementedError

    def power(self, base: str, exponent: str) -> str:
        """A raised exponent."""
        raise NotImplementedError

    def root(self, inner: str) -> str:
        """A square root."""
        raise NotImplementedError

    def summed(self, under: str, inner: str) -> str:
        """A sum sign with what stands under it."""
        raise NotImplementedError

    def cases(self, branches: list[tuple[str, str]]) -> str:
        """Values with their conditions."""
        raise NotImplementedError

    def bars(self, inner: str) -> str:
        """An absolute value."""
        return f"|{inner}|"

    def applied(self, name: str, args: list[str]) -> str:
        """A function of one or more arguments."""
        return self.word(name) + self.bracket(", ".join(args))

    # symbols
    def symbol(self, symbol: Symbol) -> str:
        """The printed form of a symbol."""
        if symbol.layout:
            return type(self)(self.symbols).doprint(build(symbol.layout))
        return self.atom(symbol.stem, symbol.subscript)

    def _composite(self, node: sympy.Expr) -> bool:
        return isinstance(node, Ref) and self.operands is None and bool(self.symbols(node.name).layout)

    # where brackets stand
    def _signed(self, node: sympy.Expr) -> bool:
        return isinstance(node, Ref) and self.operands is not None and self._operand(node.name).numeral.startswith("-")

    def _united(self, node: sympy.Expr) -> bool:
        return isinstance(node, Ref) and self.operands is not None and bool(self._operand(node.name).unit)

    def _chosen(self, node: sympy.Expr) -> sympy.Expr:
        """With numbers, the branch that applies stands in place of its cases."""
        while isinstance(node, Cases) and self.operands is not None:
            assert self.env is not None
            node = node.branch(self.env)
        return node

    def _base(self, node: sympy.Expr) -> str:
        node = self._chosen(node)
        simple = isinstance(node, Ref | Literal) and not self._signed(node) and not self._united(node)
        return self._print(node) if simple and not self._composite(node) else self.bracket(self._print(node))

    def _factor(self, node: sympy.Expr, first: bool = False) -> str:
        node = self._chosen(node)
        loose = isinstance(node, Plus | Negative | Cases | Relation | Total | Below) or self._signed(node)
        slashed = isinstance(node, Quotient) and not self.stacked and not first
        return self.bracket(self._print(node)) if loose or slashed else self._print(node)

    def _term(self, node: sympy.Expr, taken: bool = False) -> str:
        node = self._chosen(node)
        added_up = taken and isinstance(node, Total) and self.operands is not None
        loose = isinstance(node, Plus | Negative | Cases | Relation) or self._signed(node) or added_up
        return self.bracket(self._print(node)) if loose else self._print(node)

    def _under(self, node: sympy.Expr) -> str:
        """A denominator, or a part of one: quotients inside print on one row."""
        if isinstance(node, Quotient):
            return self.bracket(self._slash(node))
        if self.stacked:
            inner = (
                Product(*(_Shown(self._under(arg)) if isinstance(arg, Quotient) else arg for arg in node.args))
                if isinstance(node, Product)
                else node
            )
            return self._print(inner)
        tight = isinstance(node, Ref | Literal | Power | Call) and not self._signed(node)
        return self._print(node) if tight and not self._composite(node) else self.bracket(self._print(node))

    def _slash(self, node: Quotient) -> str:
        bottom = node.args[1]
        tight = isinstance(bottom, Ref | Literal | Power | Call) and not self._signed(bottom)
        under = self._print(bottom) if tight else self.bracket(self._print(bottom))
        return self._factor(node.args[0], first=True) + self.sign("/") + under

    # one method per node
    def _print_Ref(self, node: Ref) -> str:
        if self.operands is None:
            return self.symbol(self.symbols(node.name))
        operand = self._operand(node.name)
        return self.numeral(operand.numeral, operand.unit)

    def _operand(self, name: str) -> Printed:
        assert self.operands is not None
        operand = self.operands[name]
        if isinstance(operand, Printed):
            return operand
        assert self.env is not None and self.env.row is not None
        return operand[self.env.row]

    def _print__Shown(self, node: _Shown) -> str:
        return str(node.args[0])

    def _print_Literal(self, node: Literal) -> str:
        return self.numeral(node.text, "")

    def _print_Negative(self, node: Negative) -> str:
        return self.negated(self._factor(node.args[0]))

    def _print_Plus(self, node: Plus) -> str:
        first = node.args[0]
        text = self._term(first) if isinstance(first, Cases) and self.operands is None else self._print(first)
        for term in node.args[1:]:
            taken = isinstance(term, Negative)
            text += self.sign(self.minus if taken else "+") + self._term(term.args[0] if taken else term, taken)
        return text

    def _print_Product(self, node: Product) -> str:
        text = self._factor(node.args[0], first=True)
        for factor in node.args[1:]:
            number = self.operands is not None or isinstance(factor, Literal) or self._starts_with_number(factor)
            text += (self.sign(self.times) if number else self.beside) + self._factor(factor)
        return text

    def _starts_with_number(self, node: sympy.Expr) -> bool:
        if isinstance(node, Power | Product):
            return self._starts_with_number(node.args[0])
        if isinstance(node, Quotient):
            return self._starts_with_number(node.args[0])
        return isinstance(node, Literal)

    def _print_Quotient(self, node: Quotient) -> str:
        if not self.stacked:
            return self._factor(node.args[0], first=True) + self.sign("/") + self._under(node.args[1])
        return self.fraction(self._print(node.args[0]), self._under(node.args[1]))

    def _print_Power(self, node: Power) -> str:
        exponent = node.args[1]
        raised = self._slash(exponent) if isinstance(exponent, Quotient) else self._print(exponent)
        if not self.stacked and (not isinstance(exponent, Ref | Literal) or self._composite(exponent)):
            raised = self.bracket(raised)
        return self.power(self._base(node.args[0]), raised)

    def _print_Call(self, node: Call) -> str:
        inner = self._print(node.args[1])
        if node.function == "sqrt":
            return self.root(inner)
        return self.bars(inner) if node.function == "abs" else self.applied(node.function, [inner])

    def _print_Largest(self, node: Largest) -> str:
        return self.applied("max", [self._print(arg) for arg in node.args])

    def _print_Smallest(self, node: Smallest) -> str:
        return self.applied("min", [self._print(arg) for arg in node.args])

    def _print_Relation(self, node: Relation) -> str:
        sign = _SIGNS.get(node.sign, node.sign)
        return self._print(node.args[0]) + self.sign(self.relation(sign)) + self._print(node.args[2])

    def relation(self, sign: str) -> str:
        """A relation sign as the form writes it."""
        return sign

    def _print_Cases(self, node: Cases) -> str:
        if self.operands is not None:
            return self._print(self._chosen(node))
        branches: list[tuple[str, str]] = []
        rest: sympy.Expr = node
        while isinstance(rest, Cases):
            branches.append((self._print(rest.args[0]), self._print(rest.args[1])))
            rest = rest.args[2]
        return self.cases([*branches, (self._print(rest), "")])

    def _print_Total(self, node: Total) -> str:
        if self.operands is None:
            inner = node.args[0]
            loose = isinstance(inner, Plus | Cases)
            body = self._print(inner)
            return self.summed("i ≥ x" if isinstance(node, Above) else "", self.bracket(body) if loose else body)
        assert self.env is not None
        return self.sign("+").join(self._at(row, node.args[0], self._term) for row in node.rows(self.env))

    _print_Above = _print_Total

    def _at(self, row: int, node: sympy.Expr, show: Callable[[sympy.Expr], str]) -> str:
        assert self.env is not None
        kept, self.env = self.env, self.env.at(row)
        try:
            return show(node)
        finally:
            self.env = kept

    def _print_Below(self, node: Below) -> str:
        inner = node.args[0]
        if self.operands is None:
            return self._lower(inner, lambda sub: "x−1" if sub in ("", "x") else f"{sub}, x−1")
        assert self.env is not None and self.env.row is not None
        if self.env.row + 1 >= len(self.env.rows):
            return self.numeral("0", self._operand(inner.name).unit if isinstance(inner, Ref) else "")
        return self._at(self.env.row + 1, inner, self._factor)

    def _print_AtLevel(self, node: AtLevel) -> str:
        inner = node.args[0]
        if self.operands is None:
            index = self.symbols(inner.name).index if isinstance(inner, Ref) else "level"
            name = node.level if " " in node.level else f"{index} {node.level}"  # "wall A", "0.5 s" say what they are
            return self._lower(inner, lambda sub: f"{sub}, {name}".removeprefix(", "))
        assert self.env is not None
        return self._at(node.env(self.env).row or 0, inner, self._factor)

    def _lower(self, inner: sympy.Expr, subscript: Callable[[str], str]) -> str:
        if isinstance(inner, Ref) and not self._composite(inner):
            symbol = self.symbols(inner.name)
            return self.atom(symbol.stem, subscript(symbol.subscript))
        return self.bracket(self._print(inner)) + " " + self.word(subscript(""))


class _Shown(Node):
    """A part that is printed already."""

    __slots__ = ()

    def __new__(cls, text: str) -> _Shown:
        return sympy.Expr.__new__(cls, Str(text))


