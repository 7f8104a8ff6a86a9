"""The printed-digits rule held against a record, from what is printed alone.

Knows the record as plain JSON, the plain-text forms, and decimal arithmetic. Must not know how the kit parses, works,
rounds or prints: nothing of it is imported, so that an error there is not made here too.

The rule: values are rounded to 12 significant digits, then half up; a whole number of more than 7 digits is rounded to
7. Decimal arithmetic on the numerals of a substituted line gives its printed result; a relation is true as printed;
each row of a table follows from its printed columns within one unit of the last printed digit; a form printed with more
digits rounds to every shorter printed form of that value.
"""

from __future__ import annotations

import ast
import re
from collections import Counter
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from decimal import ROUND_HALF_UP, Context, Decimal, localcontext
from fractions import Fraction
from typing import Any

CONTEXT = Context(prec=50)
CARRIED = 12
WHOLE = 7

_POUND = Fraction("4.4482216152605")  # newtons: international pound, standard gravity 9.80665 m/s2 (NIST SP 811)
_FOOT = Fraction("0.3048")  # meters: international foot (NIST SP 811)
UNITS: dict[str, tuple[Fraction, str]] = {
    "m": (Fraction(1), "length"), "mm": (Fraction(1, 1000), "length"), "cm": (Fraction(1, 100), "length"),
    "ft": (_FOOT, "length"), "in": (_FOOT / 12, "length"), "N": (Fraction(1), "force"), "kN": (Fraction(1000), "force"),
    "MN": (Fraction(10**6), "force"), "lb": (_POUND, "force"), "kip": (1000 * _POUND, "force"),
    "s": (Fraction(1), "time"), "psf": (_POUND / _FOOT**2, "pressure"), "kPa": (Fraction(1000), "pressure"),
}  # fmt: skip
"""Factor to newton, meter, second, and the kind, of each unit that the printed lines use."""

_SUPER = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
_UNIT = r"(?:1/)?[A-Za-z]+[⁰¹²³⁴⁵⁶⁷⁸⁹⁻]*(?:[·/][A-Za-z]+[⁰¹²³⁴⁵⁶⁷⁸⁹⁻]*)*(?![A-Za-z(_])"
_TOKEN = re.compile(
    rf"\s*(?:(?P<number>(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?)(?: (?P<unit>{_UNIT}))?"
    r"|(?P<name>[a-z]+)(?=\()|(?P<sign>[-+×/^(),|≤≥<>=≠]))"
)
_SHOWN = re.compile(rf"(?P<number>-?\d+(?:\.\d+)?)(?: (?P<unit>{_UNIT}))?\Z")
_RELATIONS: dict[str, Callable[[Decimal, Decimal], bool]] = {
    "≤": lambda a, b: a <= b, "≥": lambda a, b: a >= b, "<": lambda a, b: a < b, ">": lambda a, b: a > b,
    "=": lambda a, b: a == b, "≠": lambda a, b: a != b,
}  # fmt: skip


def factor(unit: str, other: str) -> Fraction:
    """What a number in `unit` is multiplied by to stand in `other`.

    >>> factor("ft", "in"), factor("kip·ft", "lb*in")
    (Fraction(12, 1), Fraction(12000, 1))
    """
    return _size(unit) / _size(other)


def _size(unit: str) -> Fraction:
    size = Fraction(1)
    for sign, name, power in _pieces(unit):
        size *= UNITS[name][0] ** (sign * power)
    return size


def _pieces(unit: str) -> Iterator[tuple[int, str, int]]:
    plain = unit.translate(_SUPER).replace("**", "")
    for sign, name, power in re.findall(r"(^|[*·/])([A-Za-z]+)(-?\d+)?", plain):
        yield (-1 if sign == "/" else 1), name, int(power or 1)


def rounded(value: Decimal, decimals: int) -> Decimal:
    """A value at 12 significant digits, then half up to `decimals`.

    >>> rounded(Decimal("0.12345"), 4), rounded(Decimal("2.4999999999999"), 0)
    (Decimal('0.1235'), Decimal('3'))
    """
    if value:
        value = value.quantize(Decimal(1).scaleb(value.adjusted() - CARRIED + 1), ROUND_HALF_UP, CONTEXT)
    return value.quantize(Decimal(1).scaleb(-decimals), ROUND_HALF_UP, CONTEXT)


def decimals(numeral: str, beside: Sequence[str] = ()) -> int:
    """The decimals of a printed numeral: negative for one of more than 7 whole digits that is rounded to 7.

    An entry of a list is rounded like the largest entry `beside` it.

    >>> decimals("0.7605"), decimals("1134205"), decimals("121937200"), decimals("671070", ["19848140", "671070"])
    (4, 0, -2, -1)
    """
    if "." in numeral:
        return len(numeral.partition(".")[2])
    over = max(len(text.lstrip("-").partition(".")[0]) for text in (numeral, *beside)) - WHOLE
    return -over if over > 0 and numeral.endswith("0" * over) else 0


@dataclass(frozen=True)
class Relation:
    """A relation as printed: both sides and the sign between them."""

    left: Decimal
    sign: str
    right: Decimal

    @property
    def true(self) -> bool:
        """Whether it holds for the printed numbers."""
        return _RELATIONS[self.sign](self.left, self.right)


class Reader:
    """Reads one plain-text form with numbers and works it in decimals; `units` are those it prints."""

    def __init__(self, text: str) -> None:
        self.text, self.units = text, set[str]()
        self.tokens: list[tuple[str, str]] = []
        place, text = 0, text.strip()
        while place < len(text):
            match = _TOKEN.match(text, place)
            if not match:
                raise ValueError(f"{self.text!r} is not read from {text[place:]!r}")
            kind = match.lastgroup if match.lastgroup != "unit" else "number"
            self.tokens.append((str(kind), match[str(kind)]))
            if match["unit"]:
                self.units.add(match["unit"])
            place = match.end()

    def read(self) -> Decimal | Relation:
        """The value of the form, or its relation."""
        with localcontext(CONTEXT):
            left = self._sum()
            result: Decimal | Relation = left
            if self.tokens and self.tokens[0][1] in _RELATIONS:
                result = Relation(left, self._take(), self._sum())
        if self.tokens:
            raise ValueError(f"{self.text!r} is not read from {self.tokens[0][1]!r}")
        return result

    def _take(self, wanted: str = "") -> str:
        if not self.tokens or (wanted and self.tokens[0][1] != wanted):
            raise ValueError(f"{self.text!r}: {wanted or 'more'} is missing")
        return self.tokens.pop(0)[1]

    def _next(self, *signs: str) -> bool:
        return bool(self.tokens) and self.tokens[0][0] == "sign" and self.tokens[0][1] in signs

    def _sum(self) -> Decimal:
        value = self._product()
        while self._next("+", "-"):
            sign = self._take()
            term = self._product()
            value = value + term if sign == "+" else value - term
        return value

    def _product(self) -> Decimal:
        value = self._factor()
        while self._next("×", "/"):
            sign = self._take()
            other = self._factor()
            value = value * other if sign == "×" else value / other
        return value

    def _factor(self) -> Decimal:
        if self._next("-"):
            self._take()
            return -self._factor()
        base = self._atom()
        if self._next("^"):
            self._take()
            return base ** self._factor()
        return base

    def _atom(self) -> Decimal:
        kind, text = self.tokens[0] if self.tokens else ("", "")
        if kind == "number":
            return Decimal(self._take())
        if kind == "name":
            self._take()
            self._take("(")
            args = [self._sum()]
            while self._next(","):
                self._take()
                args.append(self._sum())
            self._take(")")
            return call(text, args)
        if text == "|":
            self._take()
            value = self._sum()
            self._take("|")
            return abs(value)
        self._take("(")
        value = self._sum()
        self._take(")")
        return value


def call(name: str, args: Sequence[Decimal]) -> Decimal:
    """A function of decimals."""
    if name in ("min", "max"):
        return min(args) if name == "min" else max(args)
    (x,) = args
    if name == "abs":
        return abs(x)
    if name in ("sqrt", "exp"):
        return x.sqrt() if name == "sqrt" else x.exp()
    if name == "log":
        return x.ln()
    sine, cosine = _series(x, 1), _series(x, 0)
    return {"sin": sine, "cos": cosine, "tan": sine / cosine}[name]


def _series(x: Decimal, first: int) -> Decimal:
    term = x if first else Decimal(1)
    total, n = Decimal(0), first
    while abs(term) > Decimal(1).scaleb(-45):
        total += term
        term, n = -term * x * x / ((n + 1) * (n + 2)), n + 2
    return total


def evaluate(text: str) -> Decimal | Relation:
    """What a plain-text form with numbers gives.

    >>> evaluate("max(min(0.1041, 0.02099), 0.03665)"), evaluate("|205.2 kip / 205.2 kip - 1| ≤ 0.001").true
    (Decimal('0.03665'), True)
    """
    return Reader(text).read()


class Formula:
    """A formula text worked on printed numbers; `values` are numbers, or lists over `rows`."""

    def __init__(self, text: str, values: Mapping[str, Any], rows: Sequence[str] = ()) -> None:
        self.text, self.values, self.rows = text, values, rows
        self.tree = ast.parse(text, mode="eval").body

    def at(self, row: int | None) -> Any:
        """The value in a row (None for a formula without rows)."""
        with localcontext(CONTEXT):
            return self._value(self.tree, row)

    def even_at(self, row: int) -> bool:
        """Whether both sides of a relation are the same number in a row."""
        assert isinstance(self.tree, ast.Compare)
        with localcontext(CONTEXT):
            return bool(self._value(self.tree.left, row) == self._value(self.tree.comparators[0], row))

    def _value(self, node: ast.expr, row: int | None) -> Any:
        match node:
            case ast.Name(id=name):
                return self._named(name, row)
            case ast.Attribute(value=ast.Name(id=part), attr=name):
                return self._named(f"{part}.{name}", row)
            case ast.Constant():
                return Decimal(str(ast.get_source_segment(self.text, node)))
            case ast.UnaryOp(operand=operand):
                return -self._value(operand, row)
            case ast.IfExp(test=test, body=body, orelse=orelse):
                return self._value(body if self._value(test, row) else orelse, row)
            case ast.Compare(left=left, ops=[op], comparators=[right]):
                signs = {ast.Lt: "<", ast.LtE: "≤", ast.Gt: ">", ast.GtE: "≥", ast.Eq: "=", ast.NotEq: "≠"}
                return _RELATIONS[signs[type(op)]](self._value(left, row), self._value(right, row))
            case ast.BinOp(left=left, op=op, right=right):
                return self._binary(self._value(left, row), op, self._value(right, row))
            case ast.Call(func=ast.Name(id=name), args=args):
                return self._called(name, args, row)
        raise ValueError(f"{self.text!r}: {ast.dump(node)} is not read")

    def _named(self, name: str, row: int | None) -> Decimal:
        value = self.values[name]
        if isinstance(value, list):
            assert row is not None, f"{self.text!r}: {name} is a list"
            return Decimal(value[row])
        return Decimal(value)

    def _binary(self, left: Decimal, op: ast.operator, right: Decimal) -> Decimal:
        match op:
            case ast.Add():
                return left + right
            case ast.Sub():
                return left - right
            case ast.Mult():
                return left * right
            case ast.Div():
                return left / right
            case ast.Pow():
                return left**right
        raise ValueError(f"{self.text!r}: {op} is not read")

    def _called(self, name: str, args: list[ast.expr], row: int | None) -> Decimal:
        if name == "total":
            return sum((self._value(args[0], i) for i in range(len(self.rows))), Decimal(0))
        if name == "above":
            assert row is not None
            return sum((self._value(args[0], i) for i in range(row + 1)), Decimal(0))
        if name == "below":
            assert row is not None
            return self._value(args[0], row + 1) if row + 1 < len(self.rows) else Decimal(0)
        if name == "level":
            return self._value(args[0], list(self.rows).index(ast.literal_eval(args[1])))
        return call(name, [self._value(arg, row) for arg in args])


def names_in(formula: str) -> Iterator[str]:
    """The names of a formula, functions left out."""
    tree = ast.parse(formula, mode="eval")
    dotted = {id(node.value) for node in ast.walk(tree) if isinstance(node, ast.Attribute)}
    called = {id(node.func) for node in ast.walk(tree) if isinstance(node, ast.Call)}
    for node in ast.walk(tree):
        if isinstance(node, ast.Attribute):
            assert isinstance(node.value, ast.Name)
            yield f"{node.value.id}.{node.attr}"
        elif isinstance(node, ast.Name) and id(node) not in dotted | called:
            yield node.id


def printed(shown: str) -> tuple[str, str] | None:
    """Numeral and unit of a printed value, None if it is no number.

    >>> printed("0.7605 s"), printed("moment frame")
    (('0.7605', 's'), None)
    """
    match = _SHOWN.match(shown)
    return (match["number"], match["unit"] or "") if match else None


@dataclass
class Audit:
    """What was held against the rule: `counts` by kind of item, `faults` found, `skipped` with the reason."""

    counts: Counter[str] = field(default_factory=Counter)
    faults: list[str] = field(default_factory=list)
    skipped: list[str] = field(default_factory=list)

    def item(self, kind: str, good: bool, fault: str) -> None:
        """Count one item, and its fault if it is not good."""
        self.counts[kind] += 1
        if not good:
            self.faults.append(f"{kind}: {fault}")


def inputs_of(line: Mapping[str, Any]) -> dict[str, str]:
    """The formula's names -> the keys of the line's inputs."""
    found = {}
    for name in names_in(line["formula"]):
        own = f"{line['part']}.{name}"
        found[name] = own if own in line["inputs"] else name
    return found


def last_numeral(shown: str) -> Decimal:
    """The number of an operand, after conversion if there is one ("18.90 m = 62.008 ft")."""
    found = printed(shown.rpartition(" = ")[2])
    assert found, f"{shown!r} is no number"
    return Decimal(found[0])
