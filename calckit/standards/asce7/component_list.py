"""Chapter 13: a pasted list of nonstructural components.

Knows the form of the list, what each row asks for, and the tables it becomes. Must not know the equations.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import partial
from typing import Any

from calckit.core.handle import Handle
from calckit.core.inputs import Reading
from calckit.core.level_lines import write_column
from calckit.core.levels import grid
from calckit.core.record import NOT_CHECKED, Flag
from calckit.core.rows import Rows, parse
from calckit.core.symbol import Symbol
from calckit.core.table import Table
from calckit.errors import Fault, InputError
from calckit.standards.asce7 import components as one
from calckit.standards.asce7 import components_rules as rules
from calckit.standards.asce7.clauses import rule

WHAT = "components"
ROW = "component"
"""The column that names a row of a table of the standard."""
ANCHORS = "Omega_0p"
_SURENESS = ("memory, medium", "memory, high", "found")


@dataclass(frozen=True)
class Listed:
    """A list as read: its columns of numbers; for each row the key in `table` (None: factors typed), and as typed."""

    rows: Rows
    keys: tuple[str, ...] = ()
    typed: tuple[str, ...] = ()
    table: Table | None = None


def components(scope: Any, text: str, source: str) -> Handle:
    """F_p of every component of a pasted list, with what governs it, the vertical force and that of the anchors."""
    origin = scope.calc.sources.read(source, WHAT)
    listed: Listed = scope.text_in_force(WHAT, text, partial(_read, scope))
    by_height = one.of_edition(scope).by_height
    scalars = [name for name in ("S_DS", "h", "I_p") if name not in listed.rows.columns]
    faults, waiting = one.absent(scope, scalars)
    faults += one.structure_faults(scope) if by_height else []
    faults += one.importance_faults(scope) if "I_p" in scalars else []
    if faults:
        raise InputError(WHAT, faults)
    if waiting:
        missing = ", ".join(scope.title_of(name) for name in waiting)
        title = "Seismic forces on the components"
        return scope.verdict("component_forces", title, NOT_CHECKED, rule("13.3.1"), missing=missing)
    with scope.step():
        for name, symbol in listed.rows.symbols.items():
            write_column(scope, listed.rows, name, symbol, origin)
        flags = _factors(scope, listed)
        worked = _heaviest(listed.rows)
        scope.compute(rules.R_ZH, row=worked, detail="above the roof height 1, at or below the base 0")
        if by_height:
            one.amplification(scope, worked)
            flags += _ductility(scope, listed.rows, worked)
        F_p = one.forces(scope, one.of_edition(scope).basic, flags, worked)
        scope.compute(rules.I_GOVERNING, row=worked)
        _tables(scope, listed.rows)
        return F_p


def _read(scope: Any, text: str) -> Listed:
    """The list; InputError names every bad row and column at once."""
    cells = grid(WHAT, text)
    place = cells[0].index(ROW, 1) if ROW in cells[0][1:] else None
    factors = (*one.of_edition(scope).factors, ANCHORS)
    known = ("W_p", "z", "I_p", *(() if place else factors))

    def symbol(name: str, unit: str) -> Symbol | Fault:
        allowed = Fault(name, f"one of {', '.join((ROW, *known))}", name)
        return scope.calc.standard.symbols[name] if name in known else allowed

    numbers = "\n".join("\t".join(cell for i, cell in enumerate(row) if i != place) for row in cells)
    faults: list[Fault] = []
    keys, table = _rows_of_table(scope, cells, place, faults) if place else ((), None)
    typed = tuple(" ".join(row[place].split()) for row in cells[1:] if len(row) > place) if place else ()
    try:
        rows = parse(WHAT, numbers, symbol, scope.system)
    except InputError as error:
        raise InputError(WHAT, [*error.faults, *faults]) from None
    for name in ("W_p", "z", *(() if place else factors)):
        if name not in rows.columns:
            cure = f"add it, or a column {ROW} with rows of the table" if name in factors else "add it"
            faults.append(Fault(name, "a column", "none", cure, scope.symbol(name).meaning))
    for name, reading in zip(rows.names, rows.columns.get("I_p", ()), strict=False):
        if reading.value not in (1.0, 1.5):
            faults.append(Fault(f"{WHAT}, {name}, column I_p", "1.0 or 1.5 (13.1.3)", reading.numeral, "correct it"))
    if faults:
        raise InputError(WHAT, faults)
    return Listed(rows, keys, typed, table)


def _rows_of_table(
    scope: Any, cells: list[list[str]], place: int, faults: list[Fault]
) -> tuple[tuple[str, ...], Table | None]:
    """The row of the table that each component takes; one list takes rows of one table."""
    keys, tables = [], []
    for row in (row for row in cells[1:] if len(row) > place):
        where = f"{WHAT}, {row[0]}, column {ROW}"
        found = one.find_row(scope, row[place])
        if isinstance(found, Fault):
            faults.append(Fault(where, found.needed, found.given, found.cure.partition("; or")[0]))
            continue
        key, table = found
        words = [name for name in table.columns if name != "obtained" and not one.is_number(table.row(key)[name])]
        if words:
            has = f"{', '.join(words)} = {table.row(key)[words[0]]}"
            cure = "work it by itself, as a part, with the factor typed"
            faults.append(Fault(where, "a row whose entries are numbers", f"{key} with {has}", cure))
        keys.append(key)
        tables.append(table)
    names = sorted({table.name for table in tables})
    if len(names) > 1:
        cure = 'paste one list for each, in parts of their own: part("A", ...).asce7.components(...)'
        faults.append(Fault(f"{WHAT}, column {ROW}", "rows of one table", f"rows of {' and '.join(names)}", cure))
    return tuple(keys), tables[0] if tables else None


def _heaviest(rows: Rows) -> str:
    """The component that is worked in full."""
    weights = [float(reading.value) for reading in rows.columns["W_p"]]
    return rows.names[weights.index(max(weights))]


def _factors(scope: Any, listed: Listed) -> list[Flag]:
    """Write the factors of the table as list lines; a flag where they were typed."""
    names = (*one.of_edition(scope).factors, ANCHORS)
    if listed.table is None:
        text = f"{scope.id_of('F_p')}: factors typed, not looked up: compare with Table 13.5-1 or 13.6-1"
        return [Flag(text, True, "originator")]
    columns = {
        name: [Reading(float(text), "", text) for text in (listed.table.row(key)[name] for key in listed.keys)]
        for name in names
    }
    factors = Rows(listed.rows.head, listed.rows.names, {}, columns)
    source = min((listed.table.source(key) for key in listed.keys), key=lambda each: _SURENESS.index(each.obtained))
    for name in names:
        entries = zip(listed.typed, listed.rows.names, factors.typed(name), strict=True)
        quoted = "; ".join(f"{row} ({tag}): {entry}" for row, tag, entry in entries)
        detail = f"{listed.table.name}, column {name}, rows {quoted}"
        write_column(scope, factors, name, scope.symbol(name), source, kind="table", detail=detail)
    return []


def _ductility(scope: Any, rows: Rows, worked: str) -> list[Flag]:
    """R_mu of 7-22: one for all above grade, else by row; a flag that grade was taken from z."""
    if all(float(reading.value) > 0 for reading in rows.columns["z"]):
        one.ductility(scope)
    else:
        known = scope.number("R") is not None
        formula = rules.R_MU_BY_ROW if known else rules.R_MU_SYSTEM_UNKNOWN_BY_ROW
        detail = one.OF_STRUCTURE if known else "system of the structure not known"
        scope.compute(formula, row=worked, detail=f"{detail}; 1 at or below grade", rests=("R",))
    text = f"{scope.id_of('F_p')}: above grade where z is above 0, else at or below; the base may differ from grade"
    return [Flag(text, True, "originator")]


def _tables(scope: Any, rows: Rows) -> None:
    """What enters each force, and the forces."""
    importance = ["I_p"] if "I_p" in rows.columns else []
    height = ["H_f"] if one.of_edition(scope).by_height else []
    height += ["R_mu"] if height and scope.find("R_mu").line.rows else []
    entering = ["W_p", *importance, "z", "r_zh", *height, *one.of_edition(scope).factors, "F_pbasic"]
    scope.table("components", "Components", entering, head=rows.head)
    forces = ["W_p", *importance, "F_pbasic", "F_pmax", "F_pmin", "F_p", "i_p", "c_p", "F_pv", ANCHORS, "F_pO"]
    scope.table("component_forces", "Forces on the components", forces, head=rows.head)
