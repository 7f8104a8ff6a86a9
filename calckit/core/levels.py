"""The pasted table of levels: heights, weights, displacements.

Knows its text form and every way in which it can be wrong, named by row and column. Must not know lines or standards.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from itertools import pairwise

from calckit import units
from calckit.core.inputs import Reading, read
from calckit.core.symbol import Symbol
from calckit.errors import Fault, InputError, UnitError, nearest_first

HEIGHTS = ("h_x", "elevation", "h_sx")
COLUMNS = (*HEIGHTS, "w_x", "delta_xe", "P_x", "P_level")
BASE = "base"


@dataclass
class Levels:
    """Levels read from text, roof first: `names`, and `columns` of readings keyed by header symbol ("X.delta_xe")."""

    names: list[str]
    columns: dict[str, list[Reading]] = field(default_factory=dict)

    def typed(self, symbol: str) -> tuple[str, ...]:
        """The numerals of a column, brought to one number of decimals."""
        return padded([reading.numeral for reading in self.columns[symbol]])


def padded(numerals: Sequence[str]) -> tuple[str, ...]:
    """Typed numerals brought to one number of decimals.

    >>> padded(["1", "2.25"])
    ('1.00', '2.25')
    """
    places = max(len(text.partition(".")[2]) for text in numerals)
    split = [text.partition(".") for text in numerals]
    return tuple(f"{whole}.{decimals.ljust(places, '0')}" if places else whole for whole, _, decimals in split)


def parse(text: str, symbols: Callable[[str], Symbol], parts: tuple[str, ...], system: str) -> Levels:
    """Read the table of levels.

    `text` has a header `level, h_x [ft], w_x [kip], ...` and one row a level, in either order; separators are comma,
    semicolon or tab. Raises InputError naming every bad row and column at once.

    >>> table = parse("level, h_x [ft], w_x [kip]\\n1, 12, 400\\n2, 24, 300",
    ...               lambda name: Symbol(name, name, "length" if name == "h_x" else "force"), (), "US")
    >>> table.names, table.typed("h_x")
    (['2', '1'], ('24', '12'))
    """
    faults: list[Fault] = []
    rows = grid("levels", text)
    header = _header(rows[0], parts, faults)
    names: list[str] = []
    raw: dict[str, list[Reading]] = {symbol: [] for symbol, _ in header[1:]}
    for number, cells in enumerate(rows[1:], 1):
        if len(cells) != len(rows[0]):
            faults.append(_fault(number, cells[0], "row", f"{len(rows[0])} entries", f"{len(cells)} entries"))
            continue
        if cells[0] in names:
            faults.append(_fault(number, cells[0], "level", "a name used once", "a name used before"))
        names.append(cells[0])
        for (symbol, unit), cell in zip(header[1:], cells[1:], strict=True):
            if symbol == "elevation" or cell or cells[0].lower() != BASE:
                reading = _reading(symbol, unit, cell, symbols, system)
                if isinstance(reading, Fault):
                    cure = reading.cure or "correct the cell"
                    faults.append(_fault(number, cells[0], symbol, reading.needed, reading.given, cure))
                    continue
                raw[symbol].append(reading)
    if not names:
        faults.append(Fault("levels", "a row for each level under the header", "no rows", "add the rows"))
    _refuse(faults)
    return _roof_first(Levels(names, raw), faults)


def grid(what: str, text: str) -> list[list[str]]:
    """A pasted table as rows of cells; comma, semicolon or tab between. InputError names `what` if there is no text.

    >>> grid("walls", "wall; L_w [ft]\\nA; 20")
    [['wall', 'L_w [ft]'], ['A', '20']]
    """
    lines = [line for line in text.splitlines() if line.strip()]
    if not lines:
        raise InputError(what, [Fault(what, "a header and a row each", "no text", "paste the table")])
    separator = next((mark for mark in ("\t", ";", ",") if mark in lines[0]), ",")
    return [[cell.strip() for cell in row] for row in csv.reader(lines, delimiter=separator, skipinitialspace=True)]


def _header(cells: list[str], parts: tuple[str, ...], faults: list[Fault]) -> list[tuple[str, str]]:
    header = [("level", "")]
    if cells[0] != "level":
        faults.append(Fault("levels header, column 1", '"level"', repr(cells[0]), "name the first column level"))
    for place, cell in enumerate(cells[1:], 2):
        match = re.fullmatch(r"([\w.]+)\s*\[(.+)\]", cell)
        part, _, symbol = match[1].rpartition(".") if match else ("", "", "")
        known = symbol in COLUMNS and (not part or part in parts)
        if not match or not known:
            wanted = [f"{p}.delta_xe" for p in parts] + list(COLUMNS)
            listed = ", ".join(nearest_first(cell.split(" ")[0], wanted))
            faults.append(
                Fault(
                    f"levels header, column {place}",
                    "symbol [unit] with a known symbol",
                    repr(cell),
                    f"write one of {listed}",
                )
            )
            continue
        try:
            header.append((match[1], units.canonical(match[2])))
        except UnitError as error:
            faults.append(
                Fault(f"levels header, column {place}", "a unit the kit knows", match[2], error.faults[0].cure)
            )
    _refuse(faults)
    named = [symbol for symbol, _ in header]
    heights = [symbol for symbol in named if symbol in HEIGHTS]
    if len(heights) != 1:
        faults.append(Fault("levels header", f"exactly one of {', '.join(HEIGHTS)}", ", ".join(heights) or "none"))
    faults += [
        Fault("levels header", "each column once", f"{symbol} twice")
        for symbol in set(named)
        if named.count(symbol) > 1
    ]
    _refuse(faults)
    return header


def _reading(symbol: str, unit: str, cell: str, symbols: Callable[[str], Symbol], system: str) -> Reading | Fault:
    name = symbol.rpartition(".")[2]
    declared = Symbol("elevation", "elevation", "length") if name == "elevation" else symbols(name)
    if not cell:
        return Fault(symbol, "a number", "blank", "fill the cell")
    return read(declared, f"{cell} {unit}", system)


def _fault(row: int, level: str, column: str, needed: str, given: str, cure: str = "") -> Fault:
    return Fault(f"levels, row {row} ({level}), column {column}", needed, given, cure)


def _roof_first(levels: Levels, faults: list[Fault]) -> Levels:
    kind = next(symbol for symbol in HEIGHTS if symbol in levels.columns)
    if kind == "elevation":
        return _from_elevations(levels, faults)
    if any(name.lower() == BASE for name in levels.names):
        faults.append(Fault("levels", "a row named base only with the column elevation", "a row named base"))
    if kind == "h_x":
        values = [reading.value for reading in levels.columns["h_x"]]
        levels = _ordered(levels, values, faults)
    _refuse(faults)
    return levels


def _ordered(levels: Levels, heights: list[float | str], faults: list[Fault]) -> Levels:
    pairs = list(pairwise(heights))
    if all(a > b for a, b in pairs):  # type: ignore[operator]
        return levels
    if all(a < b for a, b in pairs):  # type: ignore[operator]
        return Levels(levels.names[::-1], {name: column[::-1] for name, column in levels.columns.items()})
    for row, (a, b) in enumerate(pairs, 2):
        up = heights[0] < heights[-1]  # type: ignore[operator]
        if a == b or (a < b) != up:  # type: ignore[operator]
            what = "the same height as the row before" if a == b else "a height that runs the other way"
            faults.append(_fault(row, levels.names[row - 1], "height", "heights that only rise or only fall", what))
    _refuse(faults)
    return levels


def _from_elevations(levels: Levels, faults: list[Fault]) -> Levels:
    bases = [i for i, name in enumerate(levels.names) if name.lower() == BASE]
    if bases != [len(levels.names) - 1] or len(levels.names) < 2:
        faults.append(Fault("levels", "a last row named base with its elevation", f"last row {levels.names[-1]!r}"))
    _refuse(faults)
    base = levels.columns["elevation"][-1]
    above = Levels(levels.names[:-1], {n: c[: len(levels.names) - 1] for n, c in levels.columns.items()})
    ordered = _ordered(above, [reading.value for reading in above.columns["elevation"]], faults)
    below = [i for i, r in enumerate(ordered.columns["elevation"], 1) if r.value <= base.value]  # type: ignore[operator]
    faults += [_fault(i, ordered.names[i - 1], "elevation", "above the base", "at or below the base") for i in below]
    _refuse(faults)
    ordered.columns[BASE] = [base]
    return ordered


def _refuse(faults: list[Fault]) -> None:
    if faults:
        raise InputError("levels", faults)
