"""Arithmetics in which a formula can be worked: floats, decimals, slopes, dimensions.

Knows numbers and functions of numbers. Must not know expressions, symbols or how numbers are printed.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from decimal import Context, Decimal, localcontext
from typing import Any

from calckit import units
from calckit.errors import ExpressionError

DECIMAL = Context(prec=40)


@dataclass(frozen=True)
class Arithmetic:
    """How a literal becomes a number and what a function of one number gives."""

    literal: Callable[[str], Any]
    call: Callable[[str, Any], Any]


def _float_call(name: str, x: float) -> float:
    return abs(x) if name == "abs" else getattr(math, name)(x)


FLOATS = Arithmetic(float, _float_call)


def _decimal_call(name: str, x: Decimal) -> Decimal:
    if name == "abs":
        return abs(x)
    if name in ("sqrt", "exp"):
        return getattr(x, name)()
    if name == "log":
        return x.ln()
    import sympy

    return Decimal(str(getattr(sympy, name)(sympy.Float(str(x), DECIMAL.prec)).evalf(DECIMAL.prec)))


DECIMALS = Arithmetic(Decimal, _decimal_call)


def in_decimals(work: Callable[[], Decimal]) -> Decimal:
    """What `work` gives with 40 digits carried."""
    with localcontext(DECIMAL):
        return work()


@dataclass(frozen=True)
class Dual:
    """A number and its slope in one direction; equal numbers are ordered by slope: a tie gives the one-sided slope."""

    value: float
    slope: float = 0.0

    def __add__(self, other: Dual) -> Dual:
        return Dual(self.value + other.value, self.slope + other.slope)

    def __sub__(self, other: Dual) -> Dual:
        return Dual(self.value - other.value, self.slope - other.slope)

    def __neg__(self) -> Dual:
        return Dual(-self.value, -self.slope)

    def __mul__(self, other: Dual) -> Dual:
        return Dual(self.value * other.value, self.slope * other.value + self.value * other.slope)

    def __truediv__(self, other: Dual) -> Dual:
        value = self.value / other.value
        return Dual(value, (self.slope - value * other.slope) / other.value)

    def __pow__(self, other: Dual) -> Dual:
        value = self.value**other.value
        slope = other.value * self.value ** (other.value - 1) * self.slope if self.slope else 0.0
        return Dual(value, slope + (value * math.log(self.value) * other.slope if other.slope else 0.0))

    def __lt__(self, other: Dual) -> bool:
        return (self.value, self.slope) < (other.value, other.slope)

    def __gt__(self, other: Dual) -> bool:
        return other < self

    def __le__(self, other: Dual) -> bool:
        return not other < self

    def __ge__(self, other: Dual) -> bool:
        return not self < other


_DERIVATIVES: dict[str, Callable[[float], float]] = {
    "sqrt": lambda x: 0.5 / math.sqrt(x),
    "exp": math.exp,
    "log": lambda x: 1 / x,
    "sin": math.cos,
    "cos": lambda x: -math.sin(x),
    "tan": lambda x: 1 + math.tan(x) ** 2,
}


def _dual_call(name: str, x: Dual) -> Dual:
    if name == "abs":
        return max(x, -x)
    return Dual(_float_call(name, x.value), _DERIVATIVES[name](x.value) * x.slope if x.slope else 0.0)


DUALS = Arithmetic(lambda text: Dual(float(text)), _dual_call)


@dataclass(frozen=True, eq=False)
class Dimensioned:
    """A number with the powers of mass, length and time it carries; refuses sums of unlike kinds."""

    value: float
    powers: tuple[float, float, float] = (0.0, 0.0, 0.0)

    def _alike(self, other: Dimensioned, what: str) -> None:
        if any(abs(a - b) > 1e-9 for a, b in zip(self.powers, other.powers, strict=True)):
            raise ExpressionError(f"{what} of unlike quantities: {self.kind()} and {other.kind()}")

    def kind(self) -> str:
        """The kind in words: "length", "force*length", ..."""
        return units.kind_text(self.powers)

    def __add__(self, other: Dimensioned) -> Dimensioned:
        self._alike(other, "sum")
        return Dimensioned(self.value + other.value, self.powers)

    def __sub__(self, other: Dimensioned) -> Dimensioned:
        self._alike(other, "difference")
        return Dimensioned(self.value - other.value, self.powers)

    def __neg__(self) -> Dimensioned:
        return Dimensioned(-self.value, self.powers)

    def __mul__(self, other: Dimensioned) -> Dimensioned:
        return Dimensioned(self.value * other.value, _sum(self.powers, other.powers, 1))

    def __truediv__(self, other: Dimensioned) -> Dimensioned:
        return Dimensioned(self.value / other.value, _sum(self.powers, other.powers, -1))

    def __pow__(self, other: Dimensioned) -> Dimensioned:
        other._alike(Dimensioned(0.0), "power with an exponent")
        raised = tuple(power * other.value for power in self.powers)
        return Dimensioned(self.value**other.value, raised)  # type: ignore[arg-type]

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Dimensioned):
            return NotImplemented
        self._alike(other, "comparison")
        return self.value == other.value

    def __hash__(self) -> int:
        return hash((self.value, self.powers))

    def __lt__(self, other: Dimensioned) -> bool:
        self._alike(other, "comparison")
        return self.value < other.value

    def __gt__(self, other: Dimensioned) -> bool:
        return other < self

    def __le__(self, other: Dimensioned) -> bool:
        return not other < self

    def __ge__(self, other: Dimensioned) -> bool:
        return not self < other


def _sum(a: tuple[float, ...], b: tuple[float, ...], sign: int) -> tuple[float, float, float]:
    mass, length, time = (x + sign * y for x, y in zip(a, b, strict=True))
    return mass, length, time


def _dimension_call(name: str, x: Dimensioned) -> Dimensioned:
    if name == "abs":
        return Dimensioned(abs(x.value), x.powers)
    if name == "sqrt":
        return x ** Dimensioned(0.5)
    x._alike(Dimensioned(0.0), name)
    return Dimensioned(_float_call(name, x.value))


DIMENSIONS = Arithmetic(lambda text: Dimensioned(float(text)), _dimension_call)
