"""Every item of a record held against the printed-digits rule; the arithmetic is in `printed_digits`.

Knows which lines, tables and printed forms a record holds. Must not know how the kit made them: it imports none of it.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence
from decimal import Decimal
from fractions import Fraction
from itertools import combinations
from typing import Any

from tests.printed_digits import (
    CONTEXT,
    UNITS,
    Audit,
    Formula,
    Reader,
    Relation,
    decimals,
    factor,
    inputs_of,
    last_numeral,
    printed,
    rounded,
)  # fmt: skip

Json = Mapping[str, Any]


def audit(record: Json) -> Audit:
    """Hold every computed line, table value, check, table row, conversion and repeated form against the rule."""
    found = Audit()
    lines = {line["id"]: line for line in record["lines"]}
    for line in record["lines"]:
        if line["kind"] == "check":
            _check(found, line, record["tables"])
        elif line["forms"]:
            _computed(found, line, lines)
        if line["kind"] == "table":
            _table_value(found, line, lines)
        _conversions(found, line, lines)
    for table in record["tables"]:
        _rows(found, table, lines)
    _forms(found, record, lines)
    return found


def own_result(line: Json) -> str:
    """The result that the line's form must give: the kit's own where it is overridden, the worked row of a list."""
    shown = line["computed"]["shown"] if line["computed"] else line["shown"]
    return shown[line["rows"].index(line["row"])] if isinstance(shown, list) else shown


def _computed(found: Audit, line: Json, lines: Mapping[str, Json]) -> None:
    text = line["forms"]["plain"][1]
    shown = printed(own_result(line))
    assert shown, line["id"]
    beside = line["shown"] if isinstance(line["shown"], list) else ()
    numeral, places = Decimal(shown[0]), decimals(shown[0], beside)
    reader = Reader(text)
    value = reader.read()
    assert isinstance(value, Decimal), text
    kind = "computed line" if line["kind"] == "computed" else f"{line['kind']} value worked"
    good = rounded(value, places) == numeral
    found.item(kind, good, f"{line['id']} = {text} gives {rounded(value, places)}, printed {shown[0]}")
    row = line["rows"].index(line["row"]) if line["rows"] else None
    values = {name: _operand(line["inputs"][key]["shown"]) for name, key in inputs_of(line).items()}
    rows = next(
        (lines[key]["rows"] for key, operand in line["inputs"].items() if isinstance(operand["shown"], list)), []
    )
    again = Formula(line["formula"], values, rows).at(row)
    found.item(
        "formula with its inputs", rounded(again, places) == numeral,
        f"{line['id']} = {line['formula']} with {values} gives {rounded(again, places)}, printed {shown[0]}",
    )  # fmt: skip
    clashing = [names for names in _kinds(reader.units).values() if len(names) > 1]
    found.item("one set of units", not clashing, f"{line['id']} = {text} mixes {clashing}")


def _kinds(units: set[str]) -> dict[str, set[str]]:
    kinds = defaultdict(set)
    for unit in units:
        for name in re.findall(r"[A-Za-z]+", unit):
            kinds[UNITS[name][1]].add(name)
    return kinds


def _operand(shown: str | Sequence[str]) -> Decimal | list[Decimal]:
    return last_numeral(shown) if isinstance(shown, str) else [Decimal(text) for text in shown]


_ENTRY = re.compile(r": ([^:;]+?)(?:; .*| \(end value, .*)?\Z")
_BETWEEN = re.compile(r"between columns ([\d.]+): ([\d.]+) and ([\d.]+): ([\d.]+)\Z")


def _table_value(found: Audit, line: Json, lines: Mapping[str, Json]) -> None:
    shown = line["computed"]["shown"] if line["computed"] else line["shown"]
    if line["rows"] and line["detail"].startswith("Table "):
        quoted = dict(re.findall(r" \(([^()]+)\): ([\d.]+)(?=;|\Z)", line["detail"]))
        entries = dict(zip(line["rows"], shown, strict=True))
        found.item("table value", quoted == entries, f"{line['id']}: {line['detail']}, printed {entries}")
    elif between := _BETWEEN.search(line["detail"]):
        a, low, b, high = map(Decimal, between.groups())
        place = next(operand["shown"] for operand in line["inputs"].values() if printed(operand["shown"]))
        x = last_numeral(place)
        value = low + (high - low) * (x - a) / (b - a)
        numeral = printed(shown)
        good = a <= x <= b and numeral is not None and rounded(value, decimals(numeral[0])) == Decimal(numeral[0])
        found.item("table value", good, f"{line['id']}: {line['detail']} at {x} gives {value}, printed {shown}")
    elif line["candidates"]:
        governing = [c["shown"] for c in line["candidates"] if c["governs"]]
        if governing:
            found.item("table value", shown in governing, f"{line['id']}: {shown} is not among {governing}")
        else:
            found.skipped.append(f"table value {line['id']}: decided by {line['detail']}, no candidate governs")
    elif entry := _ENTRY.search(line["detail"]):
        found.item("table value", entry[1] == shown, f"{line['id']}: {line['detail']}, printed {shown}")
    elif line["detail"].endswith(f" {shown}"):
        found.item("table value", True, "")
    else:
        found.skipped.append(f"table value {line['id']}: {line['detail']!r} does not repeat it")


def _check(found: Audit, line: Json, tables: Sequence[Json]) -> None:
    if not line["forms"]:
        found.skipped.append(f"check {line['id']}: {line['verdict']}, no relation of numbers")
        return
    required, actual = line["forms"]["plain"]
    relation = Reader(actual).read()
    assert isinstance(relation, Relation), actual
    found.item("check", relation.true, f"{line['id']}: {actual} is not true as printed")
    (sign,) = re.findall("[≤≥<>]", required)
    met = {"≤": relation.left <= relation.right, "<": relation.left < relation.right,
           "≥": relation.left >= relation.right, ">": relation.left > relation.right}[sign]  # fmt: skip
    failing = line["detail"].startswith("not met at ")
    found.item("verdict", met == (line["verdict"] == "OK") and not (met and failing), f"{line['id']}: {actual}")
    demand, limit = (relation.left, relation.right) if sign in "≤<" else (relation.right, relation.left)
    ratio = rounded(demand / limit, decimals(line["shown"]))
    found.item("ratio", ratio == Decimal(line["shown"]), f"{line['id']}: {actual} gives {ratio}, not {line['shown']}")
    if line["rows"]:
        _failing_rows(found, line, tables)


def _failing_rows(found: Audit, line: Json, tables: Sequence[Json]) -> None:
    """The rows named as not met are those whose printed columns do not meet the relation."""
    table = next((t for t in tables if set(line["inputs"]) <= {*t["lines"], *_single(line)}), None)
    if table is None:
        found.skipped.append(f"rows of check {line['id']}: no table prints them all")
        return
    formula = Formula(line["formula"], _columns(line, table), line["rows"])
    detail = line["detail"].partition(";")[0].removeprefix("not met at ")
    named = detail.split(", ") if line["detail"].startswith("not met at ") else []
    unmet = [name for row, name in enumerate(line["rows"]) if not formula.at(row)]
    even = [name for row, name in enumerate(line["rows"]) if formula.even_at(row)]
    if set(named) ^ set(unmet) <= set(even) and named != unmet:
        found.skipped.append(f"rows of check {line['id']}: both sides print alike at {', '.join(even)}")
        return
    found.item("rows of a check", named == unmet, f"{line['id']}: names {named}, the table gives {unmet}")


def _single(line: Json) -> set[str]:
    return {key for key, operand in line["inputs"].items() if isinstance(operand["shown"], str)}


def _columns(line: Json, table: Json) -> dict[str, Any]:
    """What the names of a line's formula print as in a table: columns converted exactly, single operands as shown."""
    values: dict[str, Any] = {}
    for name, key in inputs_of(line).items():
        operand = line["inputs"][key]
        if isinstance(operand["shown"], str):
            values[name] = last_numeral(operand["shown"])
        else:
            place = table["lines"].index(key)
            ratio = factor(table["columns"][place]["unit"], operand["unit"])
            values[name] = [_times(cells[place], ratio) for cells in table["shown"]]
    return values


def _times(numeral: str, ratio: Fraction) -> Decimal:
    exact = Fraction(numeral) * ratio
    return CONTEXT.divide(Decimal(exact.numerator), Decimal(exact.denominator))


def _rows(found: Audit, table: Json, lines: Mapping[str, Json]) -> None:
    for place, column in enumerate(table["columns"]):
        line = lines[column["line"]]
        cells = [row[place] for row in table["shown"]]
        even = len({decimals(cell, cells) for cell in cells}) == 1
        found.item("column", even, f"{table['id']}, {line['id']}: decimals differ: {cells}")
        if line["formula"] is None:
            continue
        lists = set(line["inputs"]) - _single(line)
        if not lists <= set(table["lines"]):
            found.skipped.append(f"column {line['id']} of {table['id']}: {sorted(lists)} are not all in the table")
            continue
        formula = Formula(line["formula"], _columns(line, table), table["rows"])
        unit = Decimal(1).scaleb(-decimals(cells[0], cells)) + Decimal("1e-30")  # what 50 digits of arithmetic lose
        for row, (name, cell) in enumerate(zip(table["rows"], cells, strict=True)):
            value = formula.at(row)
            where = f"{table['id']}, {line['id']} at {name}"
            found.item("table row", abs(value - Decimal(cell)) <= unit, f"{where}: {value:.12g}, printed {cell}")


def _conversions(found: Audit, line: Json, lines: Mapping[str, Json]) -> None:
    for key, operand in line["inputs"].items():
        origin = lines.get(key)
        own, equals, other = ("", "", "") if isinstance(operand["shown"], list) else operand["shown"].partition(" = ")
        pairs = []
        if equals:
            first, second = printed(own), printed(other)
            assert first and second, operand["shown"]
            typed = origin is None or origin["formula"] is None
            pairs = [(first, second[0], Fraction() if typed else Fraction(1, 2) / Fraction(10) ** decimals(first[0]))]
        elif origin and origin["unit"] != operand["unit"] and origin["rows"]:
            exact = [(repr(value), origin["unit"]) for value in origin["value"]]
            pairs = [(first, second, Fraction()) for first, second in zip(exact, operand["shown"], strict=True)]
        beside = operand["shown"] if isinstance(operand["shown"], list) else ()
        for first, second, slack in pairs:
            ratio = factor(first[1], operand["unit"])
            away = abs(Fraction(first[0]) * ratio - Fraction(second))
            good = away <= Fraction(1, 2) / Fraction(10) ** decimals(second, beside) + slack * ratio
            found.item("conversion", good, f"{line['id']}, {key}: {' '.join(first)} = {second} {operand['unit']}")


Key = tuple[str, str, str]
"""Line, row and unit of a value."""
Shown = tuple[str, int]
"""A numeral and its decimals."""


def printed_forms(record: Json, lines: Mapping[str, Json]) -> Iterator[tuple[Key, Shown, str]]:
    """Every printed form of a value, and where it stands."""
    for line in record["lines"]:
        yield from _entries(line["id"], line["rows"], line["shown"], line["unit"], line["id"])
        if line["computed"]:
            yield from _entries(f"{line['id']} (own)", [], line["computed"]["shown"], line["unit"], line["id"])
        for key, operand in line["inputs"].items():
            origin = lines.get(key)
            if origin and origin["content"] == operand["content"]:
                yield from _entries(key, origin["rows"], operand["shown"], operand["unit"], f"operand of {line['id']}")
        for candidate in line["candidates"]:
            if candidate["line"]:
                origin = lines[candidate["line"]]
                yield from _entries(
                    candidate["line"], [], candidate["shown"], origin["unit"], f"candidate of {line['id']}"
                )
    for table in record["tables"]:
        for place, id_ in enumerate(table["lines"]):
            cells = [row[place] for row in table["shown"]]
            yield from _entries(id_, table["rows"], cells, lines[id_]["unit"], f"table {table['id']}")
    for summary in record["summaries"]:
        for row in summary["rows"]:
            for cell, id_ in zip(row["cells"], row["lines"], strict=True):
                if id_ and lines[id_]["kind"] != "check":
                    yield from _cell(row["label"], cell, lines[id_], f"summary {summary['title']}")


def _cell(label: str, cell: str, line: Json, where: str) -> Iterator[tuple[Key, Shown, str]]:
    """A cell of a summary; where the line is a list, its entry for the row that the label names."""
    name = label.rpartition(": ")[2]
    if name in line["rows"] and (form := printed(cell)):
        yield (line["id"], name, line["unit"]), (form[0], decimals(form[0], line["shown"])), where
    else:
        yield from _entries(line["id"], [], cell, line["unit"], where)


def _entries(
    id_: str, rows: Sequence[str], shown: str | Sequence[str], unit: str, where: str
) -> Iterator[tuple[Key, Shown, str]]:
    if isinstance(shown, str):
        for part in shown.split(" = "):
            if form := printed(part):
                yield (id_, "", form[1]), (form[0], decimals(form[0])), where
    else:
        for row, text in zip(rows, shown, strict=True):
            if form := printed(text):
                yield (id_, row, unit), (form[0], decimals(form[0], shown)), where


def _forms(found: Audit, record: Json, lines: Mapping[str, Json]) -> None:
    groups: dict[Key, dict[Shown, str]] = defaultdict(dict)
    for key, form, where in printed_forms(record, lines):
        groups[key].setdefault(form, where)
    for key, forms in groups.items():
        if len(forms) < 2:
            continue
        clashing = []
        for pair in combinations(forms, 2):
            short, long = sorted(pair, key=lambda form: form[1])
            if rounded(Decimal(long[0]), short[1]) != Decimal(short[0]):
                clashing.append(f"{long[0]} ({forms[long]}) against {short[0]} ({forms[short]})")
        found.item("repeated value", not clashing, f"{' '.join(key)}: {'; '.join(clashing)}")
