"""The printed-digits rule held against a record, from what it prints.

Knows the plain printed forms, decimal arithmetic and the syntax of expressions. Must not know how the kit rounds,
chooses digits or prints: only what stands on the sheet counts.

Values are rounded to 12 significant digits, then half up. Decimal arithmetic on the numerals of a substituted line
gives its printed result; a relation is true as printed; a row of a table follows from its printed columns within one
unit of the last printed digit; a form with more digits rounds to every shorter form of the same value.
"""

from __future__ import annotations

import ast
import math
import re
from collections import Counter
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from decimal import ROUND_HALF_UP, Context, Decimal, localcontext
from typing import Any

from calckit import units
from calckit.core.parser import parse
from calckit.core.record import NOT_CHECKED, NOT_OK, Line, Operand, Record, Table, Value
from calckit.report.reevaluate import BROKEN, Walk, counted, named, operands_of, rows_of

_WORK = Context(prec=34)
_CARRIED = Context(prec=12, rounding=ROUND_HALF_UP)
_WHOLE = 7
"""A whole number with more digits is printed with this many that count."""
_EQUAL = Decimal("1e-25")

_NUMERAL = r"-?\d+(?:\.\d+)?"
_UNIT = r"(?:1/)?[A-Za-z]+[⁻⁰¹²³⁴-⁹]*(?:[·/][A-Za-z]+[⁻⁰¹²³⁴-⁹]*)*"
_SHOWN = re.compile(rf"({_NUMERAL})(?: ({_UNIT}))?")
_WITH_UNIT = re.compile(rf"(?<![\w.])(\d+(?:\.\d+)?) {_UNIT}(?![\w(])")
_SIGNS = {"×": "*", "^": "**", "≤": "<=", "≥": ">=", "≠": "!=", " = ": " == "}
_OPPOSITE = {"≤": ">", "<": "≥", "≥": "<", ">": "≤"}
_TRUE: dict[str, Callable[[Decimal, Decimal], bool]] = {
    "≤": lambda a, b: a <= b, "<": lambda a, b: a < b, "≥": lambda a, b: a >= b, ">": lambda a, b: a > b,
}  # fmt: skip
_BETWEEN = re.compile(r"between columns (\S+): (\S+) and (\S+): (\S+)$")


@dataclass
class Outcome:
    """How many `lines` (computed, table values, checks) and table `rows` were followed, and the `faults`, each
    beginning with its line or table."""

    lines: int = 0
    rows: int = 0
    faults: list[str] = field(default_factory=list)

    def text(self) -> str:
        """The account in words."""
        return f"{counted(self.lines, 'line')}, {counted(self.rows, 'table row')} follow from what is printed"


def check_digits(record: Record) -> Outcome:
    """Hold every line, check, table value and table row of a record against the printed-digits rule."""
    found = Outcome()
    lines = {line.id: line for line in record.lines}

    def look(name: str, faults: Callable[[], Iterator[str]]) -> None:
        try:
            with localcontext(_WORK):
                found.faults += [f"{name}: {fault}" for fault in faults()]
        except BROKEN as error:
            found.faults.append(f"{name}: what is printed cannot be read ({error})")

    for line in record.lines:
        look(named(line), lambda line=line: _line(line, lines, found))  # type: ignore[misc]
    for table in record.tables:
        look(f"table {table.id}", lambda table=table: _table(table, lines, found))  # type: ignore[misc]
    return found


def _line(line: Line, lines: Mapping[str, Line], found: Outcome) -> Iterator[str]:
    yield from _result(line)
    for id_, operand in line.inputs.items():
        yield from _operand(id_, operand, lines.get(id_) if operand.content else None)
    if line.formula is None:
        if line.kind == "table":
            found.lines += 1
            yield from _looked_up(line)
        return
    if line.verdict == NOT_CHECKED:
        return
    found.lines += 1
    if not line.forms.get("plain"):
        yield "nothing is printed of its formula"
        return
    yield from _same_digits(line)
    if line.kind == "table":
        yield from _interpolated(line)
    yield from _relation(line, lines) if line.kind == "check" else _worked(line, lines)


# results and operands


def _result(line: Line) -> Iterator[str]:
    """Whether the printed results are the recorded values, rounded."""
    if line.computed and not isinstance(line.computed.value, str):
        yield from _rounded("computed result", line.computed.value, line.computed.unit, line.computed.shown)
    if line.override and line.override.shown != line.shown:
        yield f"printed {line.shown}, overridden by {line.override.shown}"
    if not isinstance(line.value, str):
        yield from _rounded("result", line.value, line.unit, line.shown)


def _rounded(what: str, value: Value, unit: str, shown: str | list[str], apart: bool = False) -> Iterator[str]:
    """Whether a value, or each of a list, is printed as it is recorded."""
    if isinstance(value, list):
        if not isinstance(shown, list) or len(shown) != len(value):
            yield f"{what} does not print {len(value)} values"
        else:
            pairs = zip(value, shown, strict=True)
            wrong = [
                f"{text} for {number!r}" for number, text in pairs if not _rounds(_exact(number), text, shown, apart)
            ]
            if wrong:
                yield f"{what} is printed as {', '.join(wrong)}"
    elif isinstance(value, int | float):
        match = _SHOWN.fullmatch(shown) if isinstance(shown, str) else None
        if match is None or (match[2] or "") != units.shown(unit):
            yield f"{what} {shown!r} is no number in {units.shown(unit) or 'no unit'}"
        elif not _rounds(_exact(value), match[1]):
            yield f"{what} is printed as {shown} for {value!r}"


def _exact(value: float) -> Decimal:
    return Decimal(repr(value))


def _operand(id_: str, operand: Operand, line: Line | None) -> Iterator[str]:
    """Whether an operand prints its value, and its longer form rounds to the shorter one that its line prints."""
    if isinstance(operand.value, str) or operand.value is None:
        if line is not None and operand.shown != line.shown:
            yield f"operand {id_} is printed as {operand.shown}, its line as {line.shown}"
        return
    if isinstance(operand.shown, str):
        own, equals, last = operand.shown.rpartition(" = ")
        if equals and line is not None and own != line.shown:
            yield f"operand {id_} is printed as {own}, its line as {line.shown}"
        yield from _rounded(f"operand {id_}", operand.value, operand.unit, last)
    else:
        yield from _rounded(f"operand {id_}", operand.value, operand.unit, operand.shown, apart=True)
    if line is None or operand.unit != line.unit:
        return
    here, there = [[_numeral(text) for text in _listed(shown)] for shown in (operand.shown, line.shown)]
    pairs = zip(here, there, strict=True)
    wrong = [f"{longer} and {shorter}" for longer, shorter in pairs if not _rounds(Decimal(longer), shorter, there)]
    if wrong:
        yield f"two printed forms of {id_} do not round to each other: {', '.join(wrong)}"


def _listed(shown: str | list[str]) -> list[str]:
    return shown if isinstance(shown, list) else [shown]


def _numeral(shown: str) -> str:
    """The number of a printed form, after conversion if there is one; ValueError if it is none."""
    match = _SHOWN.fullmatch(shown.rpartition(" = ")[2])
    if match is None:
        raise ValueError(f"{shown!r} is no number")
    return match[1]


def _last(numeral: str, beside: Sequence[str], apart: bool = False) -> int:
    """Decimals of the last digit that counts: negative where whole numbers are so long that their last digits do not
    count and are printed as zeros. The numerals `beside` one in a list end with it, unless each stands `apart`."""
    decimals = numeral.partition(".")[2]
    every = [other.lstrip("-") for other in (numeral, *beside)]
    uncounted = max(map(len, every)) - _WHOLE
    if decimals or uncounted <= 0:
        return len(decimals)
    zeros = [len(other) - len(other.rstrip("0")) for other in (every[:1] if apart else every) if other.strip("0")]
    return -min([uncounted, *zeros])


def _rounds(value: Decimal, numeral: str, beside: Sequence[str] = (), apart: bool = False) -> bool:
    """Whether a value is this numeral, as typed, or prints as it, rounded to 12 digits and then half up."""
    if float(value) == float(numeral):
        return True
    carried, last = _CARRIED.plus(value), _last(numeral, beside, apart)
    return any(  # a zero at the end of a long whole number may count
        carried.quantize(Decimal(1).scaleb(-places), ROUND_HALF_UP, _WORK) == Decimal(numeral)
        for places in range(last, max(last, 0) + 1)
    )


# lines


def _worked(line: Line, lines: Mapping[str, Line]) -> Iterator[str]:
    """The substituted form gives the printed result, and holds the operands of the formula."""
    row = line.rows.index(line.row) if line.rows else None
    shown = line.computed.shown if line.computed else line.shown
    target = _numeral(shown if isinstance(shown, str) else shown[row or 0])
    printed = line.forms["plain"][1]
    value = _read(printed).result()
    if not _rounds(value, target, shown if isinstance(shown, list) else ()):
        yield f"printed {printed} gives {value:.12g}, not the printed {target}"
    elif not _same(value, _formula(line, lines).result(row)):
        yield f"printed {printed} is not {line.formula} with the operands of the line"


def _relation(line: Line, lines: Mapping[str, Line]) -> Iterator[str]:
    """The printed relation is true, says what the verdict says, and its sides give the printed ratio."""
    row = line.rows.index(line.row) if line.rows else None
    required, printed = line.forms["plain"]
    demanded, sign = _sign(required), _sign(printed)
    left, right = _read(printed).sides()
    if not _TRUE[sign](left, right):
        yield f"printed {printed}, which is not true"
    if sign != (_OPPOSITE[demanded] if line.verdict == NOT_OK else demanded):
        yield f"printed {printed} for {required}, but the verdict is {line.verdict}"
    demand, limit = (left, right) if demanded in "≤<" else (right, left)
    if line.value is not None and not _rounds(demand / limit, _numeral(str(line.shown))):
        yield f"printed {printed} gives the ratio {demand / limit:.12g}, not the printed {line.shown}"
    if not all(map(_same, (left, right), _formula(line, lines).sides(row))):
        yield f"printed {printed} is not {line.formula} with the operands of the line"


def _sign(relation: str) -> str:
    found: list[str] = re.findall(r" ([≤≥<>]) ", relation)
    if len(found) != 1:
        raise ValueError(f"{relation!r} is no relation")
    return found[0]


def _read(printed: str) -> Walk:
    """A substituted form as an expression of bare numbers."""
    text = _WITH_UNIT.sub(r"\1", printed)
    for sign, written in _SIGNS.items():
        text = text.replace(sign, written)
    parts: list[str] = []
    for piece in re.split(r"(\|)", text):
        opens = piece == "|" and re.search(r"(?:^|[-+*/<>=(,])\s*$", "".join(parts))
        parts.append(piece if piece != "|" else "abs(" if opens else ")")
    return Walk(parse("".join(parts)), {}, (), Decimal, _call)


def _formula(line: Line, lines: Mapping[str, Line]) -> Walk:
    """The formula of a line on the numerals that its operands print."""
    values = {
        name: [Decimal(_numeral(text)) for text in operand.shown]
        if isinstance(operand.shown, list)
        else Decimal(_numeral(operand.shown))
        for name, operand in operands_of(line).items()
    }
    return Walk(parse(line.formula or ""), values, rows_of(line, lines), Decimal, _call)


def _call(function: str, x: Decimal) -> Decimal:
    if function == "abs":
        return abs(x)
    if function in ("sqrt", "exp", "log"):
        found: Decimal = getattr(x, {"log": "ln"}.get(function, function))()
        return found
    return Decimal(getattr(math, function)(float(x)))  # 15 digits of it count: more than are printed


def _same(a: Decimal, b: Decimal) -> bool:
    return abs(a - b) <= _EQUAL * max(abs(a), abs(b), Decimal(1))


def _same_digits(line: Line) -> Iterator[str]:
    """Every form of a line prints the numerals of the plain one."""
    numerals = {name: Counter(re.findall(r"\d+(?:\.\d+)?", forms[1])) for name, forms in line.forms.items()}
    for name, found in numerals.items():
        missing = numerals["plain"] - found
        if missing:
            yield f"the {name} form does not print {', '.join(sorted(missing))}"


# values of tables of the standard


def _looked_up(line: Line) -> Iterator[str]:
    """The printed value is the entry that the look-up quotes; for a list, the entry that it quotes for each row."""
    shown = line.computed.shown if line.computed else line.shown
    if not line.detail.startswith("Table "):
        return
    if isinstance(shown, list):
        for row, entry in zip(line.rows, shown, strict=True):
            if not re.search(rf" \({re.escape(row)}\): {re.escape(entry)}(?:$|;)", line.detail):
                yield f"printed {entry} at {row}, but the look-up reads {line.detail}"
    elif not re.search(rf": {re.escape(shown)}(?:$|;| \(| and )", line.detail):
        yield f"printed {shown}, but the look-up reads {line.detail}"


def _interpolated(line: Line) -> Iterator[str]:
    """The formula takes the bracketing entries that the look-up quotes."""
    entries = next((match for part in line.detail.split("; ") if (match := _BETWEEN.search(part))), None)
    literals = {node.value for node in ast.walk(parse(line.formula or "").tree) if isinstance(node, ast.Constant)}
    if entries is None or {float(text) for text in entries.groups()} != {float(str(number)) for number in literals}:
        yield f"{line.formula} is not the straight line between the entries of {line.detail!r}"


# tables


def _table(table: Table, lines: Mapping[str, Line], found: Outcome) -> Iterator[str]:
    columns = {column.line: [row[place] for row in table.shown] for place, column in enumerate(table.columns)}
    followed = 0
    for id_, printed in columns.items():
        line = lines[id_]
        if line.rows != table.rows or line.shown != printed:
            yield f"column {id_} is not as {named(line)} prints it"
            continue
        walk = _column(line, columns, lines)
        if walk is None:
            continue
        followed += 1
        for row, text in enumerate(printed):
            value = walk.result(row)
            if abs(value - Decimal(text)) > Decimal(1).scaleb(-_last(text, printed)):
                yield f"{id_} at {table.rows[row]} is printed as {text}, its row gives {value:.12g}"
    found.rows += len(table.rows) if followed else 0


def _column(line: Line, columns: Mapping[str, Sequence[str]], lines: Mapping[str, Line]) -> Walk | None:
    """The formula of a column on the columns beside it; None for an input, or where a list of it is no column here."""
    if line.formula is None:
        return None
    values: dict[str, Any] = {}
    for name, operand in operands_of(line).items():
        if not isinstance(operand.shown, list):
            values[name] = Decimal(_numeral(operand.shown))
            continue
        id_ = next(id_ for id_, other in line.inputs.items() if other is operand)
        if id_ not in columns:
            return None
        ratio = units.factor(lines[id_].unit, operand.unit)
        values[name] = [Decimal(text) * ratio.numerator / ratio.denominator for text in columns[id_]]
    return Walk(parse(line.formula), values, line.rows, Decimal, _call)
