"""The printed-digits rule: which digits are printed so that a line can be redone from them.

Knows decimal rounding and the search for the fewest digits. Must not know expressions, lines or units.

Values are rounded to 12 significant digits, then half up, in decimal. A result is shown to its symbol's significant
digits, whole numbers of up to seven digits in full. Each operand is printed with the fewest digits, up to the 12 that
are carried, for which decimal arithmetic on the printed numerals gives the shown result; what was typed prints as
typed. (More than 10 are needed only where the result stands all but halfway between two printed numbers.)
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from decimal import ROUND_HALF_UP, Decimal

from calckit.core.numbers import DECIMAL

CARRIED = 12
COMPARED = 10
MOST_IN_TABLE = 7
WHOLE = 7


def carried(value: float | Decimal, figures: int = CARRIED) -> Decimal:
    """A value rounded to 12 significant digits, or to `figures`.

    >>> carried(0.1 + 0.2)
    Decimal('0.300000000000')
    """
    number = value if isinstance(value, Decimal) else Decimal(repr(float(value)))
    if not number:
        return Decimal(0)
    return number.quantize(Decimal(1).scaleb(number.adjusted() - figures + 1), ROUND_HALF_UP, DECIMAL)


def decimals_for(values: Iterable[Decimal], digits: int) -> int:
    """Number of decimals at which the largest of `values` has `digits` significant digits.

    A whole number of up to 7 digits is printed in full; a longer one is rounded to 7 significant digits, which gives a
    negative number of decimals.

    >>> [decimals_for([Decimal(text)], 4) for text in ("0.76045", "30394", "121937234", "0")]
    [4, 0, -2, 0]
    """
    largest = max((abs(value) for value in values), default=Decimal(0))
    if not largest:
        return 0
    return max(digits - 1 - largest.adjusted(), min(0, WHOLE - 1 - largest.adjusted()))


def numeral(value: Decimal, decimals: int) -> str:
    """The value rounded half up to `decimals`, in plain digits.

    >>> numeral(Decimal("0.12345"), 4), numeral(Decimal("-0.00001"), 2)
    ('0.1235', '0.00')
    """
    rounded = value.quantize(Decimal(1).scaleb(-decimals), ROUND_HALF_UP, DECIMAL)
    return format(rounded or abs(rounded), "f")


def typed_numeral(value: float) -> str:
    """The digits of a number that was typed without text.

    >>> typed_numeral(1.25), typed_numeral(62), typed_numeral(1e-7)
    ('1.25', '62', '0.0000001')
    """
    return str(value) if isinstance(value, int) else format(Decimal(repr(value)), "f")


@dataclass(frozen=True)
class Operand:
    """One operand of a line: its values (one, or one for each row), the decimals of its own shown form, and the
    numerals as typed, if it was typed."""

    values: tuple[Decimal, ...]
    least: int
    typed: tuple[str, ...] | None = None
    most: int = field(init=False)

    def __post_init__(self) -> None:
        carried = (decimals_for([value], CARRIED) for value in self.values)
        object.__setattr__(self, "most", max(self.least, *carried))

    def numerals(self, decimals: int) -> tuple[str, ...]:
        """The printed numerals at this number of decimals; an entry that would not round back prints more."""
        return self.typed or tuple(numeral(value, self._honest(value, decimals)) for value in self.values)

    def column(self, decimals: int) -> tuple[str, ...]:
        """The printed numerals of a table column: every entry at the same number of decimals."""
        return self.typed or tuple(numeral(value, decimals) for value in self.values)

    def _honest(self, value: Decimal, decimals: int) -> int:
        most = max(decimals, decimals_for([value], CARRIED))  # all that is carried always rounds back
        return next((d for d in range(decimals, most + 1) if _rounds_back(value, self.least, d)), most)

    def choices(self) -> range:
        """The numbers of decimals that may be printed, fewest first."""
        return range(self.least, self.least + 1 if self.typed else self.most + 1)


def _rounds_back(value: Decimal, least: int, decimals: int) -> bool:
    printed = Decimal(numeral(value, decimals))
    return all(numeral(printed, fewer) == numeral(value, fewer) for fewer in range(least, decimals))


def fewest(
    operands: Mapping[str, Operand], accept: Callable[[Mapping[str, Sequence[Decimal]]], bool]
) -> dict[str, int] | None:
    """The decimals of every operand with the fewest digits whose numerals `accept` takes; None if there are none."""
    choices = {name: operand.choices() for name, operand in operands.items()}

    def accepted(step: Mapping[str, int]) -> bool:
        printed = {name: operands[name].numerals(choices[name][step[name]]) for name in operands}
        return accept({name: [Decimal(text) for text in texts] for name, texts in printed.items()})

    longest = max((len(options) for options in choices.values()), default=1)
    for extra in range(longest):
        step = {name: min(extra, len(options) - 1) for name, options in choices.items()}
        if accepted(step):
            break
    else:
        return None
    shortened = True
    while shortened:  # fewer digits of one operand may leave room for fewer of another
        shortened = False
        for name in sorted(step, key=lambda name: -step[name]):
            for fewer in range(step[name]):
                if accepted(step | {name: fewer}):
                    step[name], shortened = fewer, True
                    break
    return {name: choices[name][place] for name, place in step.items()}
