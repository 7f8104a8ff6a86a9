"""What writing a line returns: the value in force, read when it is asked for.

Knows the line's id. Must not know how the line came about.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.record import Line, Value
from calckit.errors import UnknownNameError
from calckit.units import Quantity, shown

if TYPE_CHECKING:
    from calckit.core.scope import Scope


class Handle:
    """The line `id` of a calculation.

    >>> from calckit import Calc
    >>> calc = Calc(project="Demo", number="D-1")
    >>> T_L = calc.assume("T_L", "8 s", basis="demo")
    >>> T_L.value, T_L.unit, float(T_L)
    (8.0, 's', 8.0)
    >>> T_L.quantity, T_L.shown, T_L.rows, T_L.line.kind
    (Quantity(value=8.0, unit='s', numeral=''), '8 s', [], 'assumption')
    >>> T_L.in_words
    '8 s'
    """

    def __init__(self, scope: Scope, id_: str) -> None:
        self._scope, self.id = scope, id_

    @property
    def line(self) -> Line:
        """The line as it stands; UnknownNameError if the cell no longer writes it."""
        entries = self._scope.book.entries
        if self.id not in entries:
            raise UnknownNameError("line", self.id, entries, "run again the cell that writes it")
        return entries[self.id].line

    @property
    def value(self) -> Value:
        """The value in force: a number, a word, or a list (roof first)."""
        return self.line.value

    @property
    def unit(self) -> str:
        """The unit of the value."""
        return self.line.unit

    @property
    def rows(self) -> list[str]:
        """The row names of a list, roof first; empty for a single value."""
        return self.line.rows

    @property
    def shown(self) -> str | list[str]:
        """The printed result: with its unit for a single value, the printed entries for a list."""
        return self.line.shown

    @property
    def in_words(self) -> str:
        """The printed result in words: "80 ft", or for a list "Roof 80 ft, 2 15 ft"; for alternative texts."""
        line = self.line
        if not isinstance(line.shown, list):
            return line.shown
        return ", ".join(f"{row} {entry} {shown(line.unit)}" for row, entry in zip(line.rows, line.shown, strict=True))

    @property
    def quantity(self) -> Quantity:
        """The value with its unit, for a single number."""
        return Quantity(float(self), self.unit)

    def __float__(self) -> float:
        value = self.value
        if not isinstance(value, int | float):
            raise TypeError(f"{self.id} is not a single number: {value!r}")
        return float(value)

    def __repr__(self) -> str:
        line = self.line
        shown = ", ".join(line.shown) if isinstance(line.shown, list) else line.shown
        return f"{self.id} = {shown or line.verdict or line.text}"

    def _ipython_display_(self) -> None:
        """Nothing: the step has shown its lines already."""


class Handles(list[Handle]):
    """The handles of a step that writes several lines; shows nothing of its own below a cell.

    >>> Handles()
    []
    """

    def _ipython_display_(self) -> None:
        """Nothing: the step has shown its lines already."""
