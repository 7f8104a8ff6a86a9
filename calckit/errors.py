"""Every error the kit raises, each also a built-in kind.

Knows how an error is worded: the symbol, what is needed, what was given and how to mend it. Must not know any
part of the kit.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from difflib import get_close_matches


class CalckitError(Exception):
    """Base of every error raised on purpose by the kit."""


@dataclass(frozen=True)
class Fault:
    """One bad input: `symbol` (with `meaning`), what is `needed`, what was `given`, and the `cure`.

    >>> print(Fault("h_n", "a length, such as \\"62 ft\\"", "62", cure="add the unit", meaning="structural height"))
    h_n (structural height): needed a length, such as "62 ft"; given 62; cure: add the unit
    """

    symbol: str
    needed: str
    given: str
    cure: str = ""
    meaning: str = ""

    def __str__(self) -> str:
        name = f"{self.symbol} ({self.meaning})" if self.meaning else self.symbol
        cure = f"; cure: {self.cure}" if self.cure else ""
        return f"{name}: needed {self.needed}; given {self.given}{cure}"


class InputError(CalckitError, ValueError):
    """One or more bad inputs; `faults` lists all of one call."""

    def __init__(self, where: str, faults: Sequence[Fault]) -> None:
        self.where = where
        self.faults = tuple(faults)
        super().__init__(f"{where}: " + "\n  ".join(str(fault) for fault in self.faults))


class UnitError(InputError):
    """A unit that is missing, unknown or of the wrong kind."""


class ExpressionError(CalckitError, SyntaxError):
    """An expression that the kit does not read."""


class UnknownNameError(CalckitError, LookupError):
    """A name that is not among the known ones; the message lists them, nearest first."""

    def __init__(self, what: str, name: str, known: Iterable[str], cure: str = "") -> None:
        self.name = name
        self.known = nearest_first(name, known)
        listed = ", ".join(self.known) if self.known else "none yet"
        super().__init__(f"{what} {name!r} is not known; known: {listed}" + (f"; cure: {cure}" if cure else ""))


class DuplicateError(CalckitError, ValueError):
    """One id written twice where it may stand only once."""


class StaleObjectError(CalckitError, RuntimeError):
    """An object of a calculation that has been started afresh."""


class ScopeError(CalckitError, ValueError):
    """A case outside the scope of a clause, which the kit refuses."""


class DigitsError(CalckitError, ArithmeticError):
    """A line whose printed digits cannot give its printed result."""


class CommandError(CalckitError, ValueError):
    """The command line, or a set value, is at fault (exit code 2)."""


class NotebookError(CalckitError, RuntimeError):
    """The notebook cannot be run to its end (exit code 3)."""


class MismatchError(CalckitError, ValueError):
    """Files or checks that do not match (exit code 4)."""


def nearest_first(name: str, known: Iterable[str]) -> tuple[str, ...]:
    """`known` with the names most like `name` first, those before all that differ in case alone.

    >>> nearest_first("S_d", ["T_a", "S_D1", "S_DS"])
    ('S_D1', 'S_DS', 'T_a')
    """
    names = sorted(set(known))
    same = [word for word in names if word.casefold() == name.casefold()]
    near = [*same, *sorted(word for word in get_close_matches(name, names, n=4, cutoff=0.4) if word not in same)]
    return (*near, *(word for word in names if word not in near))
