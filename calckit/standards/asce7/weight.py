"""The effective seismic weight built up from areas and loads (12.7.2).

Knows how a take-off is typed, what of each load counts in each edition, and how it comes to w_x. Must not know what the
weight is used for.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from calckit.core.handle import Handle
from calckit.core.inputs import Reading
from calckit.core.level_lines import write_column
from calckit.core.levels import grid
from calckit.core.record import Source
from calckit.core.rows import Rows, parse
from calckit.core.symbol import Symbol
from calckit.errors import Fault, InputError
from calckit.standards.asce7 import weight_rules as rules

if TYPE_CHECKING:
    from calckit.core.scope import Scope

WHAT = "weight_take_off"
SNOW = {"ASCE 7-16": ("0.20", {"US": "30 psf", "SI": "1.44 kPa"}, "memory, high"),
        "ASCE 7-22": ("0.15", {"US": "45 psf", "SI": "45 psf"}, "memory, medium")}  # fmt: skip
"""Edition -> share of the snow load that counts, the load above which it does, and how both were obtained."""
LEAST_PARTITIONS = {"US": "10 psf", "SI": "0.48 kPa"}
MARK = "\x1f"
"""Stands between level and kind of area while a table is read."""


def weight_take_off(scope: Any, text: str, source: str) -> Handle:
    """w_x from a pasted table: level, kind of area, then A_u, q_D and any other column of `weight_rules.TYPED`.

    A kind of area that comes back at several levels is one table over the levels; where a level has none of it, its
    area is 0. Raises InputError naming every bad row and column at once.
    """
    origin = scope.calc.sources.read(source, WHAT)
    levels = scope.find("h_x")
    if levels is None:
        raise InputError(WHAT, [scope.missing("h_x")])
    typed = scope.find("w_x")
    if typed and typed.line.kind == "given":
        cure = "leave the column w_x out of levels, or the take-off away"
        raise InputError(WHAT, [Fault("w_x", "one origin of the level weights", "w_x of levels and a take-off", cure)])
    if text.startswith("@"):
        text = scope.file(text[1:]).decode("utf-8-sig")
    table = _read(text, scope.system)
    kinds = _sorted(table, levels.line.rows)
    with scope.step():
        _limits(scope, table.columns)
        worked = _fullest(kinds)
        for number, (name, rows) in enumerate(kinds.items(), 1):
            _one_kind(scope, number, name, rows, origin, worked)
        return _level_weights(scope, kinds, worked)


def _read(text: str, system: str) -> Rows:
    """The table with level and kind of area joined in the row's name."""
    cells = grid(WHAT, text)
    if len(cells[0]) < 3:
        cure = "level, area, A_u [ft**2], q_D [psf], ..."
        raise InputError(WHAT, [Fault("header", "level, kind of area, then columns", ", ".join(cells[0]), cure)])
    known = {each.name: each for each in rules.TYPED}

    def symbol(name: str, unit: str) -> Symbol | Fault:
        return known.get(name) or Fault(name, f"one of {', '.join(known)}", name)

    joined = "\n".join(
        "\t".join([MARK.join(row[:2]), *row[2:]]) if len(row) > 1 else row[0] for row in cells
    )
    try:
        table = parse(WHAT, joined, symbol, system)
    except InputError as error:
        faults = [
            replace(fault, symbol=fault.symbol.replace(MARK, ": "), given=fault.given.replace("\\x1f", ": "))
            for fault in error.faults
        ]
        raise InputError(WHAT, faults) from None
    absent = [name for name in ("A_u", "q_D") if name not in table.columns]
    if absent:
        raise InputError(WHAT, [Fault(name, "a column", "none", f"add {name}", known[name].meaning) for name in absent])
    return table


def _sorted(table: Rows, levels: list[str]) -> dict[str, Rows]:
    """One table over the levels for each kind of area, in the order of the take-off."""
    places: dict[str, dict[str, int]] = {}
    faults = []
    for place, row in enumerate(table.names):
        level, _, kind = row.partition(MARK)
        places.setdefault(kind, {})[level] = place
        where = f"row {place + 1} ({level})"
        if level not in levels:
            faults.append(Fault(where, f"a level: {', '.join(levels)}", level, "correct the name"))
        if not kind:
            faults.append(Fault(where, "what kind of area it is", "blank", "name it: floor slab"))
    named = {level for of_kind in places.values() for level in of_kind}
    absent = [level for level in levels if level not in named]
    faults += [Fault(f"level {level}", "a row at least", "none", "add its rows") for level in absent]
    if faults:
        raise InputError(WHAT, faults)
    return {
        kind: Rows("Level", tuple(levels), table.symbols, _columns(table, levels, of_kind))
        for kind, of_kind in places.items()
    }


def _columns(table: Rows, levels: list[str], places: Mapping[str, int]) -> dict[str, list[Reading]]:
    """The columns of one kind of area; those that are 0 throughout are left out, but for area and dead load."""
    columns = {}
    for name, readings in table.columns.items():
        unit = readings[0].unit
        column = [readings[places[level]] if level in places else Reading(0.0, unit, "0") for level in levels]
        if name in ("A_u", "q_D") or any(reading.value for reading in column):
            columns[name] = column
    return columns


def _fullest(kinds: Mapping[str, Rows]) -> str:
    """The level that has most kinds of area: the one that is worked in full."""
    (names,) = {rows.names for rows in kinds.values()}
    return max(names, key=lambda level: sum(_has(rows, level) for rows in kinds.values()))


def _has(rows: Rows, level: str) -> bool:
    """Whether a level has any of a kind of area."""
    place = rows.names.index(level)
    return any(rows.columns[name][place].value for name in ("A_u", "W_e", "W_d") if name in rows.columns)


def _limits(scope: Scope, columns: Mapping[str, list[Reading]]) -> None:
    """What the clause says of partitions and snow, where the take-off has them."""
    clause = rules.W_X_COUNTED.source
    if any(reading.value for reading in columns.get("q_P", [])):
        least = LEAST_PARTITIONS[scope.system]
        scope.state("q_Pmin", least, "table", clause, detail=f"where the floor design has partitions: {least}")
    if any(reading.value for reading in columns.get("p_f", [])):
        share, limits, obtained = SNOW[str(scope.calc.title_block["standard"])]
        source, limit = replace(clause, obtained=obtained), limits[scope.system]
        scope.state("p_flim", limit, "table", source, detail=f"snow counts above: {limit}")
        scope.state("r_S", share, "table", source, detail=f"share of the snow load: {share}")


def _one_kind(scope: Scope, number: int, name: str, rows: Rows, source: Source, worked: str) -> None:
    """The typed columns of one kind of area, what counts of them, its weight, and their table."""
    symbols = rules.symbols_of(number, name)
    scope.calc.own_symbols.update(symbols)
    row = worked if _has(rows, worked) else ""
    printed = []
    for column in rows.columns:
        own = rules.numbered(column, number)
        write_column(scope, rows, column, symbols[own], source)
        printed.append(own)
        counted = {"q_P": rules.PARTITIONS, "p_f": rules.SNOW}.get(column)
        if counted:
            printed.append(rules.numbered(counted.result, number))
            scope.compute(rules.of_kind(counted, number), row=row)
    weight = rules.of_kind(rules.weight_of(rows.columns), number)
    scope.compute(weight, row=row)
    scope.table(f"take_off_{number}", f"Weight take-off: {name}", [*printed, weight.result])


def _level_weights(scope: Scope, kinds: Mapping[str, Rows], worked: str) -> Handle:
    """w_x from the weights of all kinds of area and, where there is any, the share of the storage live load."""
    numbers = range(1, len(kinds) + 1)
    weights = [rules.numbered("w_u", number) for number in numbers]
    stored = [number for number, rows in zip(numbers, kinds.values(), strict=True) if "q_L" in rows.columns]
    if not stored:
        made = scope.compute(rules.sum_over("w_x", "w_u", numbers), row=worked)
        printed = weights
    else:
        scope.compute(rules.sum_over("w_0", "w_u", numbers), row=worked)
        scope.compute(rules.sum_over("w_s", "A_u*q_L", stored, "0.25"), row=worked)
        left_out = scope.word("storage_share") == "left out up to 5 %"
        formula = rules.W_X_LEFT_OUT if left_out else rules.W_X_COUNTED
        made = scope.compute(formula, row=worked, rests=("storage_share",))
        printed = [*weights, "w_0", "w_s"]
    scope.table("level_weights", "Effective seismic weight of the levels", [*printed, "w_x"])
    return made


def diaphragm_weights(scope: Scope, without: Sequence[str]) -> Handle:
    """w_px from the take-off: w_x without the kinds of area that are walls parallel to the force."""
    if scope.find("w_x") is None:
        raise InputError("asce7.diaphragm_weights", [scope.missing("w_x")])
    kinds: dict[str, int] = {}
    while own := scope.calc.own_symbols.get(rules.numbered("w_u", len(kinds) + 1)):
        kinds[own.meaning.rpartition(": ")[0]] = len(kinds) + 1
    absent = [name for name in without if name not in kinds]
    if absent:
        cure = f"name kinds of area of the take-off: {'; '.join(kinds) or 'none was made'}"
        faults = [Fault("without", "a kind of area of the take-off", name, cure) for name in absent]
        raise InputError("asce7.diaphragm_weights", faults)
    left_out = [kinds[name] for name in without]
    detail = f"without {', '.join(without)}" if without else "no walls parallel to the force"
    with scope.step():
        made = scope.compute(rules.diaphragm_weight(left_out), detail=detail)
        columns = ["w_x", *(rules.numbered("w_u", kind) for kind in left_out), "w_px"]
        scope.table("diaphragm_weights", "Weights for the diaphragm forces", columns)
        return made
