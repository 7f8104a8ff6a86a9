"""Tables of list lines: one number of decimals for each column, chosen so that every row follows from what is printed.

Knows the rule for rows (within one unit of the last printed digit from the printed columns). Must not know what the
lines mean.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from decimal import Decimal
from fractions import Fraction
from functools import partial
from typing import TYPE_CHECKING, Any

from calckit import units
from calckit.core import digits
from calckit.core.book import Entry
from calckit.core.formula import Formula
from calckit.core.numbers import DECIMALS, in_decimals
from calckit.core.parser import parse
from calckit.core.record import Column, Source, Table
from calckit.errors import DigitsError

if TYPE_CHECKING:
    from calckit.core.scope import Scope


def tabulate(scope: Scope, id_: str, title: str, names: Sequence[str], head: str = "Level") -> Table:
    """A table of the list lines `names` (written already), their decimals settled.

    In the first table that prints a column its decimals are free; a later table may print more, if rounding them gives
    the first ones. Lines that print entries of a settled column are worked again, so that none prints fewer digits.
    """
    entries = {entry.line.id: entry for name in names if (entry := scope.find(name))}
    others = [table for table in scope.book.tables.values() if table.id != scope.id_of(id_)]
    settled = {key for table in others for key in table.lines} & set(entries)
    columns = {key: _column(entry, key in settled) for key, entry in entries.items()}
    grids = {key: column.least for key, column in columns.items()}
    while failing := _failing(entries, grids):
        finer = [_finer(columns, grids, key, key in settled) for key in failing]
        if not any(finer):
            raise DigitsError(f"table {title!r}: rows do not follow from {digits.MOST_IN_TABLE} printed digits")
    _coarsen(entries, columns, grids, settled)
    printed = [columns[key].column(places) for key, places in grids.items()]
    _work_again(scope, {key: places for key, places in grids.items() if key not in settled})
    lines = [entry.line for entry in entries.values()]
    heads = [Column(line.symbol, line.unit, line.id, line.typeset) for line in lines]
    rows = lines[0].rows
    shown = [[column[i] for column in printed] for i in range(len(rows))]
    return Table(scope.id_of(id_), scope.id, title, head, heads, list(rows), shown, list(entries))


def _column(entry: Entry, settled: bool) -> digits.Operand:
    values = entry.line.value if isinstance(entry.line.value, list) else []
    exact = tuple(digits.carried(v) for v in values)
    least = entry.decimals if settled or entry.numerals else digits.decimals_for(exact, 4)
    return digits.Operand(exact, least, entry.numerals)


def _work_again(scope: Scope, grids: dict[str, int]) -> None:
    for key, entry in list(scope.book.entries.items()):
        rests = key in grids or not grids.keys().isdisjoint(entry.line.inputs)
        if entry.remake and rests and not entry.line.override:
            scope.book.remade(entry.remake(grids.get(key, entry.decimals)))


def _numbers(entry: Entry, places: int) -> list[Decimal]:
    return [Decimal(text) for text in _column(entry, settled=False).column(places)]


def _failing(entries: dict[str, Entry], grids: dict[str, int]) -> list[str]:
    """Columns that a row which does not follow rests on."""
    wanting: list[str] = []
    for id_, entry in entries.items():
        values = _printed_operands(_at(entry, grids[id_]), entries, grids)
        if values is None:
            continue
        line = entry.line
        formula = Formula(line.symbol, line.formula or "", line.source or Source(""))
        unit = Decimal(1).scaleb(-grids[id_])
        for row, result in enumerate(_numbers(entry, grids[id_])):
            env = formula.env(values, DECIMALS, line.rows, row)
            if abs(in_decimals(partial(formula.node.value, env)) - result) > unit:
                wanting += [key for key in line.inputs if key in entries and not entries[key].numerals]
                break
    return wanting


def _at(entry: Entry, places: int) -> Entry:
    """The line as it prints with this number of decimals, its single operands with as many digits as that takes."""
    if entry.remake is None or places == entry.decimals:
        return entry
    if places not in entry.remade:
        entry.remade[places] = entry.remake(places)
    return entry.remade[places]


def _printed_operands(entry: Entry, entries: dict[str, Entry], grids: dict[str, int]) -> dict[str, Any] | None:
    """What the names of a column's formula print as in this table; None for an input, or where a list is no column."""
    line = entry.line
    if line.formula is None or entry.numerals:
        return None
    values: dict[str, Any] = {}
    for name in parse(line.formula).names:
        key = f"{line.part}.{name}" if f"{line.part}.{name}" in line.inputs else name
        operand = line.inputs[key]
        if not isinstance(operand.shown, list):
            values[name] = _last_number(operand.shown)
        elif key not in entries:
            return None
        else:
            ratio = units.factor(entries[key].line.unit, operand.unit)
            values[name] = [_times(number, ratio) for number in _numbers(entries[key], grids[key])]
    return values


def _times(number: Decimal, ratio: Fraction) -> Decimal:
    return in_decimals(lambda: number * ratio.numerator / ratio.denominator)


def _last_number(shown: str) -> Decimal:
    """The number of an operand's printed form, after conversion if there is one."""
    found = re.match(r"-?[\d.]+", shown.rpartition("= ")[2])
    return Decimal(found[0]) if found else Decimal(0)


def _finer(columns: dict[str, digits.Operand], grids: dict[str, int], key: str, settled: bool) -> bool:
    """Print one more digit in a column; in a settled one, the next number of digits that rounds back to the first."""
    column = columns[key]
    most = digits.decimals_for(column.values, digits.MOST_IN_TABLE)
    finer = [places for places in range(grids[key] + 1, most + 1) if not settled or column.admissible(places)]
    if finer:
        grids[key] = finer[0]
    return bool(finer)


def _coarsen(
    entries: dict[str, Entry], columns: dict[str, digits.Operand], grids: dict[str, int], settled: set[str]
) -> None:
    """Take back digits that no row needs."""
    for key, column in columns.items():
        for places in range(column.least, grids[key]):
            admissible = key not in settled or column.admissible(places)
            if admissible and not _failing(entries, grids | {key: places}):
                grids[key] = places
                break
