"""Lines of kind analysis: results of array functions, with method, inputs and residual.

Knows how such a line is written and printed. Must not know any array function.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from calckit.core import digits
from calckit.core.book import Entry, this_cell
from calckit.core.handle import Handle
from calckit.core.record import Flag, Line, Source
from calckit.units import convert, shown

if TYPE_CHECKING:
    from calckit.core.scope import Scope

COLUMNS = 6
"""Columns of a table of values by mode; more are printed in further tables."""
LIMIT = "0.000001"
"""Residual above which an analysis does not count."""
_LEAST = 9
"""Decimals of the smallest residual that is told apart: what lies below differs from one machine to the next."""


@dataclass(frozen=True)
class Method:
    """How a result was obtained: in words, its source, and the symbols it rests on."""

    words: str
    source: Source
    rests: tuple[str, ...]


def write_list(
    scope: Scope, name: str, values: Sequence[float], unit: str, rows: Sequence[str], method: Method
) -> Handle:
    """Write a list that an array function gave, `values` in `unit`, one for each of `rows`."""
    symbol = scope.symbol(name)
    own = symbol.unit(scope.system)
    carried = [digits.carried(convert(float(value), unit, own)) for value in values]

    def made(places: int) -> Entry:
        line = Line(
            scope.id_of(name), "analysis", name, symbol.meaning, [float(value) for value in carried], own,
            [digits.numeral(value, places) for value in carried], part=scope.id, rows=list(rows),
            index=symbol.index.capitalize(), typeset=scope.typeset(symbol), source=method.source, text=method.words,
        )  # fmt: skip
        return Entry(line, this_cell(), None, places, made)

    return scope.write(made(digits.decimals_for(carried, symbol.digits)), method.rests)


def write_number(
    scope: Scope, name: str, value: float, unit: str, method: Method, flags: Sequence[Flag] = ()
) -> Handle:
    """Write a single number that an array function gave."""
    symbol = scope.symbol(name)
    own = symbol.unit(scope.system)
    carried = digits.carried(convert(float(value), unit, own))
    places = digits.decimals_for([carried], symbol.digits)
    line = Line(
        scope.id_of(name), "analysis", name, symbol.meaning, float(carried), own,
        f"{digits.numeral(carried, places)} {shown(own)}".rstrip(), part=scope.id, typeset=scope.typeset(symbol),
        source=method.source, text=method.words, flags=list(flags),
    )  # fmt: skip
    return scope.write(Entry(line, this_cell(), None, places), method.rests)


def write_residual(scope: Scope, name: str, value: float, method: Method) -> Handle:
    """Write a residual, rounded up to a power of ten.

    >>> from calckit import Calc
    >>> calc = Calc(project="Demo", number="D-1")
    >>> write_residual(calc, "r_modes", 3e-8, Method("demonstration", Source("own"), ()))
    r_modes = 0.0000001
    """
    decimals = next((place for place in range(_LEAST, 0, -1) if value <= 10.0**-place), 0)
    numeral = f"{10.0**-decimals:.{decimals}f}" if decimals else str(max(1, int(value) + 1))
    return scope.state(name, numeral, "analysis", method.source, text=method.words, rests=method.rests)


def tables(scope: Scope, id_: str, title: str, names: Sequence[str], head: str, beside: Sequence[str] = ()) -> None:
    """Print lists side by side, `beside` first in each table, in as many tables as their width asks for."""
    step = COLUMNS - len(beside)
    for start in range(0, len(names), step):
        more = f"-{start // step + 1}" if len(names) > step else ""
        scope.table(f"{id_}{more}", title, [*beside, *names[start : start + step]], head=head)

