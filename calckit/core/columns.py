"""Tables of list lines: one number of decimals for each column, chosen so that every row follows from what is printed.

Knows the rule for rows (within one unit of the last printed digit from the printed columns). Must not know what the
lines mean.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from decimal import Decimal
from typing import TYPE_CHECKING

from calckit.core import digits
from calckit.core.book import Entry
from calckit.core.formula import Formula
from calckit.core.numbers import DECIMALS, in_decimals
from calckit.core.record import Column, Source, Table
from calckit.errors import DigitsError

if TYPE_CHECKING:
    from calckit.core.scope import Scope


def tabulate(scope: Scope, id_: str, title: str, names: Sequence[str], head: str = "Level") -> Table:
    """A table of the list lines `names` (written already), their decimals settled."""
    entries = {entry.line.id: entry for name in names if (entry := scope.find(name))}
    grids = {id_: _grid(entry) for id_, entry in entries.items()}
    while failing := _failing(entries, grids):
        if not any(_finer(entries, grids, id_) for id_ in failing):
            raise DigitsError(f"table {title!r}: rows do not follow from {digits.MOST_IN_TABLE} printed digits")
    for id_, places in grids.items():
        entry = entries[id_]
        if entry.remake and places != entry.decimals:
            scope.book.remade(entry.remake(places))
    lines = [scope.book.entries[id_].line for id_ in entries]
    columns = [Column(line.symbol, line.unit, line.id, line.typeset) for line in lines]
    rows = lines[0].rows
    shown = [[str(line.shown[i]) for line in lines] for i in range(len(rows))]
    return Table(scope.id_of(id_), scope.id, title, head, columns, list(rows), shown, list(entries))


def _grid(entry: Entry) -> int:
    values = entry.line.value if isinstance(entry.line.value, list) else []
    exact = [digits.carried(v) for v in values]
    return entry.decimals if entry.numerals else digits.decimals_for(exact, 4)


def _numbers(entry: Entry, places: int) -> list[Decimal]:
    if entry.numerals:
        return [Decimal(text) for text in entry.numerals]
    values = entry.line.value if isinstance(entry.line.value, list) else []
    return [Decimal(digits.numeral(digits.carried(v), places)) for v in values]


def _failing(entries: dict[str, Entry], grids: dict[str, int]) -> list[str]:
    """Columns that a row which does not follow rests on."""
    printed = {id_: _numbers(entry, grids[id_]) for id_, entry in entries.items()}
    wanting: list[str] = []
    for id_, entry in entries.items():
        line = entry.line
        if line.formula is None or entry.numerals:
            continue
        formula = Formula(line.symbol, line.formula, line.source or Source(""))
        values = {}
        for name in formula.names:
            key = f"{line.part}.{name}" if f"{line.part}.{name}" in line.inputs else name
            if key in printed and line.inputs[key].unit == entries[key].line.unit:
                values[name] = printed[key]
            else:
                shown = line.inputs[key].shown
                values[name] = [Decimal(t) for t in shown] if isinstance(shown, list) else _last_number(shown)
        unit = Decimal(1).scaleb(-grids[id_])
        for row, result in enumerate(printed[id_]):
            env = formula.env(values, DECIMALS, line.rows, row)
            worked = in_decimals(lambda env=env, formula=formula: formula.node.value(env))  # type: ignore[misc]
            if abs(worked - result) > unit:
                wanting += [key for key in line.inputs if key in printed and not entries[key].numerals]
                break
    return wanting


def _last_number(shown: str) -> Decimal:
    """The number of an operand's printed form, after conversion if there is one."""
    found = re.match(r"-?[\d.]+", shown.rpartition("= ")[2])
    return Decimal(found[0]) if found else Decimal(0)


def _finer(entries: dict[str, Entry], grids: dict[str, int], id_: str) -> bool:
    values = entries[id_].line.value
    most = digits.decimals_for([digits.carried(v) for v in values], digits.MOST_IN_TABLE) if isinstance(values, list) else 0
    if grids[id_] >= most:
        return False
    grids[id_] += 1
    return True
