"""A pasted table whose columns become list lines: walls, areas and loads, components.

Knows its text form and every way in which it can be wrong, named by row and column. Must not know lines or standards.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass

from calckit import units
from calckit.core.inputs import Reading, read
from calckit.core.levels import grid, padded
from calckit.core.symbol import Symbol
from calckit.errors import Fault, InputError, UnitError

_HEAD = re.compile(r"(\w+)(?:\s*\[(.*)\])?")


@dataclass(frozen=True)
class Rows:
    """A table read from text: `head` of its first column, `names` of its rows, symbols and readings by symbol name."""

    head: str
    names: tuple[str, ...]
    symbols: dict[str, Symbol]
    columns: dict[str, list[Reading]]

    def typed(self, symbol: str) -> tuple[str, ...]:
        """The numerals of a column, brought to one number of decimals."""
        return padded([reading.numeral for reading in self.columns[symbol]])


def parse(what: str, text: str, symbols: Callable[[str, str], Symbol | Fault], system: str) -> Rows:
    """Read a table: a header `wall, x_i [ft], rigidity`, then one row each; comma, semicolon or tab between.

    `what` is the table's id, for messages; `symbols` gives the symbol of a name and unit, or what is wrong with it.
    Raises InputError naming every bad row and column at once.

    >>> length = Symbol("L_w", "length of the wall", "length")
    >>> table = parse("walls", "wall, L_w [ft]\\nA, 20\\nB, 12.5", lambda name, unit: length, "US")
    >>> table.head, table.names, table.typed("L_w")
    ('wall', ('A', 'B'), ('20.0', '12.5'))
    """
    table = grid(what, text)
    faults: list[Fault] = []
    header = [_column(what, place, cell, symbols, faults) for place, cell in enumerate(table[0][1:], 2)]
    names = [row[0] for row in table[1:]]
    if not names:
        faults.append(Fault(what, "a row under the header", "no rows", "add the rows"))
    faults += [Fault(what, "each row named once", f"{name!r} twice") for name in set(names) if names.count(name) > 1]
    named = [symbol.name for symbol, _ in filter(None, header)]
    faults += [Fault(what, "each column once", f"{name} twice") for name in set(named) if named.count(name) > 1]
    columns: dict[str, list[Reading]] = {name: [] for name in named}
    for number, row in enumerate(table[1:], 1):
        place = f"{what}, row {number} ({row[0]})"
        if len(row) != len(table[0]):
            faults.append(Fault(place, f"{len(table[0])} entries", f"{len(row)} entries"))
            continue
        for column, cell in zip(header, row[1:], strict=True):
            if column:
                symbol, unit = column
                reading = read(symbol, f"{cell} {unit}".strip(), system) if cell else None
                if isinstance(reading, Reading):
                    columns[symbol.name].append(reading)
                else:
                    wrong = reading or Fault("", "a number", "blank", "fill the cell")
                    cure = wrong.cure or "correct the cell"
                    where = f"{place}, column {symbol.name}"
                    faults.append(Fault(where, wrong.needed, wrong.given, cure, symbol.meaning))
    if faults:
        raise InputError(what, faults)
    declared = {symbol.name: symbol for symbol, _ in filter(None, header)}
    return Rows(table[0][0], tuple(names), declared, columns)


def _column(
    what: str, place: int, cell: str, symbols: Callable[[str, str], Symbol | Fault], faults: list[Fault]
) -> tuple[Symbol, str] | None:
    where, match = f"{what} header, column {place}", _HEAD.fullmatch(cell)
    if match is None:
        faults.append(Fault(where, "a symbol, or symbol [unit]", repr(cell), "write it like L_w [ft]"))
        return None
    try:
        unit = units.canonical(match[2] or "")
    except UnitError as error:
        faults.append(Fault(where, "a unit the kit knows", str(match[2]), error.faults[0].cure))
        return None
    symbol = symbols(match[1], unit)
    if isinstance(symbol, Fault):
        cure = 'use a symbol of the standard, or add meanings={"...": "..."}'
        faults.append(Fault(where, symbol.needed, match[1], cure))
        return None
    return symbol, unit
