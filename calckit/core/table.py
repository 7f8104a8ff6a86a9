"""Tables of a standard, kept as text files: look-up by row and column, and interpolation along the columns.

Knows the file form (a header of `# key: value` lines, then CSV) and what a look-up must be able to say of itself:
table, row, column, the two bracketing entries. Must not know lines or symbols.
"""

from __future__ import annotations

import csv
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from importlib import resources
from itertools import pairwise

from calckit.core.record import Source
from calckit.errors import CalckitError, UnknownNameError

REQUIRED = ("standard", "edition", "table", "title", "clause", "rows", "obtained", "documents")
"""Header keys without which a table is not read."""


@dataclass(frozen=True)
class Found:
    """A look-up: the entry as printed (`text`), or, between two columns, the expression that interpolates.

    `detail` names table, row and column, with the bracketing entries if interpolated. At a column of the axis `knot` is
    the expression of the straight lines on both sides, which gives the entry itself there.
    """

    text: str
    expression: str
    detail: str
    source: Source
    knot: str = ""


@dataclass(frozen=True)
class Table:
    """One table: `header`, column names and rows of text keyed by the first column."""

    header: dict[str, str]
    columns: tuple[str, ...]
    rows: dict[str, tuple[str, ...]]

    @property
    def name(self) -> str:
        """What the table is called in print: "Table 11.4-1"."""
        return f"Table {self.header['table']}"

    def source(self, row: str) -> Source:
        """The source of a row's values."""
        obtained = self.header["obtained"]
        if "obtained" in self.columns:
            obtained = self.rows[row][self.columns.index("obtained")] or obtained
        return Source(self.header["standard"], self.name, obtained=obtained, standard=True)

    def row(self, key: str) -> dict[str, str]:
        """A row as column -> text; UnknownNameError lists the known rows, nearest first."""
        if key not in self.rows:
            raise UnknownNameError(f"{self.name} ({self.header['title']}): row", key, self.rows)
        return dict(zip(self.columns, self.rows[key], strict=True))

    def entry(self, key: str, column: str) -> Found:
        """The entry at a row and a named column."""
        text = self.row(key)[column]
        return Found(text, "", f"{self.name}, row {key}, column {column}: {text}", self.source(key))

    def band(self, column: str, value: float, what: str) -> Found:
        """The entry of the last row whose key (a lower bound) is not above `value`."""
        keys = list(self.rows)
        key = [key for key in keys if float(key) <= value][-1]
        after = keys.index(key) + 1
        upper = f" and below {keys[after]}" if after < len(keys) else ""
        text = self.row(key)[column]
        detail = f"{self.name}, row {what} not less than {key}{upper}, column {column}: {text}"
        return Found(text, "", detail, self.source(key))

    def along(self, key: str, symbol: str, value: float) -> Found:
        """The entry of a row at `value` of the column axis, by straight line between columns, ends held."""
        row = self.row(key)
        axis = [column for column in self.columns if column.replace(".", "", 1).isdigit()]
        points = [(float(column), column, row[column]) for column in axis]
        source = self.source(key)
        for position, column, text in points:
            below, beyond = column == axis[0] and value < position, column == axis[-1] and value > position
            if value == position or below or beyond:
                side = "below the first" if below else "beyond the last"
                held = f" (end value, {symbol} {side} column)" if below or beyond else ""
                knot = "" if held else _knot(points, column, symbol)
                return Found(text, "", f"{self.name}, row {key}, column {column}: {text}{held}", source, knot)
        (_, a, low), (_, b, high) = next(
            (left, right) for left, right in pairwise(points) if left[0] < value < right[0]
        )
        detail = f"{self.name}, row {key}, between columns {a}: {low} and {b}: {high}"
        if low == high:
            return Found(low, "", detail, source)
        if not (_number(low) and _number(high)):
            return Found(low if not _number(low) else high, "", detail, source)
        return Found("", _between(a, low, b, high, symbol), detail, source)


def _between(a: str, low: str, b: str, high: str, symbol: str) -> str:
    return f"{low} + ({high} - {low})*({symbol} - {a})/({b} - {a})"


def _knot(points: Sequence[tuple[float, str, str]], column: str, symbol: str) -> str:
    """The straight lines below and above a column, an end value held; "" where they are level or entries are words."""
    at = [name for _, name, _ in points].index(column)
    near = points[max(at - 1, 0) : at + 2]
    if not all(_number(text) for _, _, text in near) or len({text for _, _, text in near}) == 1:
        return ""
    entry = points[at][2]
    lines = [_between(a, low, b, high, symbol) for (_, a, low), (_, b, high) in pairwise(near)]
    below = lines[0] if at else entry
    above = lines[-1] if at + 1 < len(points) else entry
    return f"{below} if {symbol} <= {column} else {above}"


def _number(text: str) -> bool:
    try:
        float(text)
    except ValueError:
        return False
    return True


@cache
def load(package: str, name: str) -> Table:
    """Read `tables/<name>.csv` of a standard's package.

    Raises CalckitError if the header lacks a required key or a row lacks an entry.
    """
    text = (resources.files(package) / "tables" / f"{name}.csv").read_text(encoding="utf-8")
    return read(text, name)


def read(text: str, name: str) -> Table:
    """A table from its text."""
    lines = text.splitlines()
    header = dict(
        (part.strip() for part in line.lstrip("# ").split(":", 1))
        for line in lines
        if line.startswith("#") and ":" in line
    )
    missing = [key for key in REQUIRED if not header.get(key)]
    if missing:
        raise CalckitError(f"table {name}: the header lacks {', '.join(missing)}")
    first, *rows = csv.reader(line for line in lines if line.strip() and not line.startswith("#"))
    uneven = [row[0] for row in rows if len(row) != len(first)]
    if uneven:
        raise CalckitError(f"table {name}: rows {', '.join(uneven)} do not have {len(first)} entries")
    return Table(header, tuple(first[1:]), {row[0]: _stripped(row[1:]) for row in rows})


def _stripped(cells: Sequence[str]) -> tuple[str, ...]:
    return tuple(cell.strip() for cell in cells)
