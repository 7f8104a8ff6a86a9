"""The lines that a table of levels becomes.

Knows which columns are inputs and which follow from others. Must not know how the table was typed.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.book import Entry, this_cell
from calckit.core.formula import Formula
from calckit.core.handle import Handle, Handles
from calckit.core.inputs import own_symbol
from calckit.core.levels import BASE, Levels
from calckit.core.record import Line, Source
from calckit.errors import UnknownNameError

if TYPE_CHECKING:
    from collections.abc import Mapping

    from calckit.core.rows import Rows
    from calckit.core.scope import Scope
    from calckit.core.symbol import Symbol

GEOMETRY = Source("geometry of the levels")
STATICS = Source("sum from the roof down")


def write_levels(scope: Scope, table: Levels, sources: Mapping[str, Source]) -> Handles:
    """Write the columns as list lines, and what follows from them: h_x and h_sx from each other, P_x from P_level.

    `sources` are those of single columns by symbol, and that of all others under "".
    """
    made = Handles()
    symbols = {header.rpartition(".")[2] for header in table.columns}
    if absent := [symbol for symbol in sources if symbol and symbol not in symbols]:
        raise UnknownNameError("levels: source of column", absent[0], sorted(symbols), "name a column by its symbol")
    if BASE in table.columns:
        base = table.columns[BASE][0]
        for name, meaning in (("z_x", "elevation of level x"), ("z_b", "elevation of the base")):
            scope.calc.own_symbols[name] = own_symbol(name, meaning, base.unit)  # type: ignore[assignment]
        made.append(_column(scope, table, "elevation", "z_x", sources[""]))
        made.append(scope.state("z_b", f"{base.numeral} {base.unit}", "given", sources[""]))
        made.append(scope.compute(Formula("h_x", "z_x - z_b", GEOMETRY), unit=base.unit))
    for header in table.columns:
        part, _, symbol = header.rpartition(".")
        if symbol in ("elevation", BASE):
            continue
        source = sources.get(symbol, sources[""])
        made.append(_column(scope.calc.parts[part] if part else scope, table, header, symbol, source))
    given = {header for header in table.columns if "." not in header}
    if "h_sx" in given:
        formula = Formula("h_x", "total(h_sx) - above(h_sx) + h_sx", GEOMETRY)
        made.append(scope.compute(formula, unit=table.columns["h_sx"][0].unit))
    else:
        unit = (table.columns.get("h_x") or table.columns["elevation"])[0].unit
        made.append(scope.compute(Formula("h_sx", "h_x - below(h_x)", GEOMETRY), unit=unit))
    if "P_level" in given:
        made.append(scope.compute(Formula("P_x", "above(P_level)", STATICS), unit=table.columns["P_level"][0].unit))
    order = ("z_x", "h_x", "h_sx", "w_x", "P_level", "P_x")
    displacements = [header for header in table.columns if header.endswith(".delta_xe")]
    scope.table("levels", "Levels", [name for name in (*order, *displacements) if scope.find(name)])
    return made


def _column(scope: Scope, table: Levels, header: str, symbol: str, source: Source) -> Handle:
    return write_column(scope, table, header, scope.symbol(symbol), source)


def write_column(
    scope: Scope, table: Levels | Rows, header: str, declared: Symbol, source: Source, *, kind: str = "given",
    detail: str = "",
) -> Handle:  # fmt: skip
    """Write one column of a pasted table as a list line: of inputs, or of entries that its rows name in a table."""
    readings, typed = table.columns[header], table.typed(header)
    line = Line(
        scope.id_of(declared.name), kind, declared.name, declared.meaning, [float(r.value) for r in readings],
        readings[0].unit, list(typed), part=scope.id, rows=list(table.names), typeset=scope.typeset(declared),
        source=source, detail=detail,
    )  # fmt: skip
    places = len(typed[0].partition(".")[2])
    return scope.write(Entry(line, this_cell(), typed, places))
