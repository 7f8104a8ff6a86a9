"""Tables of list lines: one number of decimals for each column, chosen so that every row follows from what is printed.

Knows the rule for rows (within one unit of the last printed digit from the printed columns). Must not know what the
lines mean.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace
from decimal import Decimal
from fractions import Fraction
from functools import partial
from typing import TYPE_CHECKING, Any

from calckit import units
from calckit.core import digits, work
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

    A column prints the same wherever it stands: tables that share one are settled together, and every line that prints
    an entry of a column whose digits changed is worked again.
    """
    book = scope.book
    keys = [entry.line.id for name in names if (entry := scope.find(name))]
    together = _sharing(book.tables.values(), book.entries, scope.id_of(id_), keys)
    entries = {key: book.entries[key] for group in together.values() for key in group}
    grids = {key: entry.decimals for key, entry in entries.items()}
    while failing := _failing(entries, together.values(), grids):
        finer = [_finer(entries[key], grids, key) for key in failing]
        if not any(finer):
            raise DigitsError(f"table {title!r}: rows do not follow from {digits.MOST_IN_TABLE} printed digits")
    _coarsen(entries, together.values(), grids)
    changed = {key: places for key, places in grids.items() if places != entries[key].decimals}
    _work_again(scope, changed)
    for other in [book.tables[key] for key in together if key in book.tables]:
        book.tables[other.id] = replace(other, shown=_shown(scope, other.lines))
    lines = [book.entries[key].line for key in keys]
    heads = [Column(line.symbol, line.unit, line.id, line.typeset) for line in lines]
    return Table(scope.id_of(id_), scope.id, title, head, heads, list(lines[0].rows), _shown(scope, keys), keys)


def tell_apart(scope: Scope, check: Entry) -> None:
    """Print the columns of a check with enough digits that every row reads in its table as it was judged."""
    book = scope.book
    keys = [key for key, operand in check.line.inputs.items() if isinstance(operand.shown, list)]
    table = next((table for table in book.tables.values() if set(keys) <= set(table.lines)), None)
    if table is None:
        return
    here = {key: book.entries[key] for key in keys}
    grids = {key: entry.decimals for key, entry in here.items()}
    while not _reads_as_judged(check, here, grids):
        finer = [_finer(entry, grids, key) for key, entry in here.items() if not entry.numerals]
        if not any(finer):
            return  # all but equal: the check itself works its row with every digit that is carried
    changed = {key: places for key, places in grids.items() if places != here[key].decimals}
    if changed:
        _work_again(scope, changed)
        owner = scope.calc.parts.get(table.part, scope.calc)
        name = table.id.removeprefix(f"{table.part}.")
        book.tables[table.id] = tabulate(owner, name, table.title, table.lines, table.head)


def _reads_as_judged(check: Entry, here: dict[str, Entry], grids: dict[str, int]) -> bool:
    line = check.line
    relation = Formula(line.meaning, line.formula or "", line.source or Source(""))
    shown = _printed_operands(check, here, grids)
    names = {name: f"{line.part}.{name}" if f"{line.part}.{name}" in line.inputs else name for name in shown or {}}
    exact = {name: _carried(line.inputs[key].value) for name, key in names.items()}
    return shown is None or all(
        relation.node.value(relation.env(shown, DECIMALS, line.rows, row))
        == work.judged(relation, relation.env(exact, DECIMALS, line.rows, row))
        for row in range(len(line.rows))
    )


def _carried(value: Any) -> Any:
    return [digits.carried(v) for v in value] if isinstance(value, list) else digits.carried(value)


def _sharing(
    tables: Iterable[Table], entries: Mapping[str, Entry], id_: str, keys: Sequence[str]
) -> dict[str, Sequence[str]]:
    """The new table's columns, and those of every table linked to it by a computed column."""
    found: dict[str, Sequence[str]] = {id_: keys}
    linked = {key for key in keys if not entries[key].numerals}
    waiting = [table for table in tables if table.id != id_]
    while more := [table for table in waiting if table.id not in found and linked & set(table.lines)]:
        for table in more:
            found[table.id] = table.lines
            linked |= {key for key in table.lines if not entries[key].numerals}
    return found


def _shown(scope: Scope, keys: Sequence[str]) -> list[list[str]]:
    printed = [scope.book.entries[key].line.shown for key in keys]
    return [[column[i] for column in printed] for i in range(len(printed[0]))]


def _work_again(scope: Scope, grids: dict[str, int]) -> None:
    for key, entry in list(scope.book.entries.items()):
        rests = key in grids or not grids.keys().isdisjoint(entry.line.inputs)
        if entry.remake and rests and not entry.line.override:
            scope.book.remade(entry.remake(grids.get(key, entry.decimals)))
    for entry in scope.book.entries.values():
        for key in grids.keys() & entry.line.inputs.keys() - _named(entry):
            entry.line.inputs[key].shown = list(scope.book.entries[key].line.shown)


def _named(entry: Entry) -> set[str]:
    """The ids that a line's formula names; the other inputs of the line it merely rests on."""
    line = entry.line
    names = parse(line.formula).names if line.formula else ()
    return {id_ for name in names for id_ in (name, f"{line.part}.{name}")}


def _column(entry: Entry) -> digits.Operand:
    values = entry.line.value if isinstance(entry.line.value, list) else []
    return digits.Operand(tuple(digits.carried(v) for v in values), entry.decimals, entry.numerals)


def _numbers(entry: Entry, places: int) -> list[Decimal]:
    return [Decimal(text) for text in _column(entry).column(places)]


def _failing(entries: dict[str, Entry], tables: Iterable[Sequence[str]], grids: dict[str, int]) -> set[str]:
    """Columns that a row which does not follow rests on."""
    wanting: set[str] = set()
    for keys in tables:
        here = {key: entries[key] for key in keys}
        for key in keys:
            if not _follows(key, here, grids):
                wanting |= {name for name in here[key].line.inputs if name in here and not here[name].numerals}
    return wanting


def _follows(key: str, here: dict[str, Entry], grids: dict[str, int]) -> bool:
    """Whether every row of a column follows from the printed columns beside it, within one unit of the last digit."""
    entry = here[key]
    values = _printed_operands(_at(entry, grids[key]), here, grids)
    if values is None:
        return True
    line = entry.line
    formula = Formula(line.symbol, line.formula or "", line.source or Source(""))
    unit = Decimal(1).scaleb(-grids[key])
    return all(
        abs(in_decimals(partial(formula.node.value, formula.env(values, DECIMALS, line.rows, row))) - result) <= unit
        for row, result in enumerate(_numbers(entry, grids[key]))
    )


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


def _finer(entry: Entry, grids: dict[str, int], key: str) -> bool:
    """Print one more digit in a column, up to the most a table may print."""
    more = grids[key] < digits.decimals_for(_column(entry).values, digits.MOST_IN_TABLE)
    grids[key] += more
    return more


def _coarsen(entries: dict[str, Entry], tables: Iterable[Sequence[str]], grids: dict[str, int]) -> None:
    """Take back digits that no row needs."""
    for key, entry in entries.items():
        for places in range(entry.decimals, grids[key]):
            if not _failing(entries, tables, grids | {key: places}):
                grids[key] = places
                break
