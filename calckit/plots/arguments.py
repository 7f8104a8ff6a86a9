"""What a figure is given: numbers and words read and checked, all faults of a call reported at once.

Knows what can be drawn. Must not know how.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import ROUND_HALF_UP, Decimal, InvalidOperation
from itertools import pairwise
from typing import Any

from calckit.errors import Fault, InputError
from calckit.plots.style import unprintable

Numbers = Sequence[float | str]
"""Numbers, or the numerals printed elsewhere in the calculation, which are then printed as they stand."""

MOST_PARTS = 2
_DIGITS = 4


@dataclass(frozen=True)
class Column:
    """Numbers to draw and the same numbers as they are printed."""

    values: tuple[float, ...]
    shown: tuple[str, ...]


def numerals(values: Sequence[float]) -> tuple[str, ...]:
    """Numbers printed with one number of decimals: 4 significant digits at the largest, fewer if all are shorter.

    >>> numerals([123.456, 7.0]), numerals([62.0, 49.5]), numerals([0.76045])
    (('123.5', '7.0'), ('62.0', '49.5'), ('0.7605',))
    """
    exact = [Decimal(f"{value:.12g}") for value in values]
    largest = max(abs(value) for value in exact)
    most = max(0, _DIGITS - 1 - largest.adjusted()) if largest else 0
    places = min(most, max(max(0, -int(value.normalize().as_tuple().exponent)) for value in exact))
    return tuple(format(value.quantize(Decimal(1).scaleb(-places), ROUND_HALF_UP), "f") for value in exact)


class Reader:
    """Reads the arguments of one call, collects what is wrong with them, and raises it all together."""

    def __init__(self, where: str) -> None:
        self.where = where
        self.faults: list[Fault] = []

    def fault(self, symbol: str, needed: str, given: object, cure: str) -> None:
        """Note one bad argument."""
        self.faults.append(Fault(symbol, needed, str(given), cure))

    def done(self) -> None:
        """Raise InputError if anything was wrong."""
        if self.faults:
            raise InputError(self.where, self.faults)

    def words(self, **texts: str) -> None:
        """Check single texts that are printed."""
        for name, text in texts.items():
            if bad := unprintable(text):
                given = f"{text!r}, with {bad!r}"
                self.fault(name, "characters that the lettering of figures has", given, "spell it otherwise")

    def levels(self, levels: Sequence[str]) -> list[str]:
        """Names of levels: at least one, each once, none blank."""
        names = [str(name) for name in levels]
        if not names or len(set(names)) < len(names) or not all(name.strip() for name in names):
            needed = "names of levels, roof first, each once and none blank"
            self.fault("levels", needed, ", ".join(map(repr, names)) or "none", "name every level once")
        for name in names:
            self.words(levels=name)
        return names

    def column(self, name: str, values: Numbers, count: int) -> Column:
        """`count` finite numbers."""
        numbers: list[float] = []
        wrong: list[str] = []
        for value in values:
            try:
                numbers.append(float(Decimal(value) if isinstance(value, str) else value))
            except (InvalidOperation, TypeError, ValueError):
                numbers.append(math.nan)
            if not math.isfinite(numbers[-1]):
                wrong.append(repr(value))
        if wrong:
            self.fault(name, "finite numbers", ", ".join(wrong), "give every entry as a number")
        if len(numbers) != count:
            self.fault(name, f"{count} numbers, one for each entry", len(numbers), "give as many numbers as entries")
        if wrong or len(numbers) != count or not numbers:
            return Column((0.0,) * count, ("",) * count)
        plain = numerals(numbers)
        shown = (value if isinstance(value, str) else text for value, text in zip(values, plain, strict=True))
        return Column(tuple(numbers), tuple(shown))

    def heights(self, h_x: Numbers, count: int) -> Column:
        """Heights of levels above the base: positive and falling, roof first."""
        known = len(self.faults)
        heights = self.column("h_x", h_x, count)
        ends = (*heights.values, 0.0)
        if len(self.faults) == known and any(upper <= lower for upper, lower in pairwise(ends)):
            needed = "heights above the base, each above the next and the last above 0"
            self.fault("h_x", needed, ", ".join(heights.shown), "list the levels roof first, without the base")
        return heights

    def parts(self, name: str, columns: Mapping[str, Numbers], count: int) -> dict[str, Column]:
        """One column of numbers for each of one or two parts."""
        if not isinstance(columns, Mapping) or not 1 <= len(columns) <= MOST_PARTS:
            given = list(columns) if isinstance(columns, Mapping) else type(columns).__name__
            self.fault(name, f"1 to {MOST_PARTS} parts with their numbers", given, 'give a mapping like {"X": [...]}')
            return {}
        for part in columns:
            self.words(**{name: str(part)})
        return {str(part): self.column(f"{name}[{part!r}]", values, count) for part, values in columns.items()}

    def periods(self, name: str, periods: Mapping[str, Any], longest: float) -> list[tuple[str, float, str]]:
        """Labelled periods within the curve: label, period, numeral."""
        read = []
        for label, period in periods.items():
            self.words(**{name: label})
            column = self.column(f"{name}[{label!r}]", [period], 1)
            if not 0 <= column.values[0] <= longest:
                needed = f"a period from 0 to {longest:g} s, where the curve is drawn"
                cure = "draw the curve further or leave this period out"
                self.fault(f"{name}[{label!r}]", needed, column.shown[0], cure)
            read.append((label, column.values[0], column.shown[0]))
        return read
