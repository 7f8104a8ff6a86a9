"""A second engineer's numbers beside those of an issued calculation.

Knows the CSV that `calckit extract` writes (`id,unit,checker_value,tolerance,reason`), differences and when a row is
settled. The tolerance is in percent and is the checker's own: without one a number is settled by its reason only. Must
not know how a number was computed.
"""

from __future__ import annotations

import csv
import math
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from calckit import units
from calckit.core.record import Line, Record
from calckit.errors import CommandError, Fault, InputError, MismatchError, UnitError, nearest_first
from calckit.report import seal
from calckit.report.extract import COLUMNS, RESULTS, row_id
from calckit.report.recheck import read, record_of, title

WITHIN = "within tolerance"
REASON = "differs, reason given"
NO_REASON = "differs, reason missing"
NO_TOLERANCE = "tolerance or reason missing"
NO_VALUE = "value missing"
LEFT_OUT = "no value, reason given"

_HEADINGS = ("id", "originator", "checker", "difference", "tolerance", "outcome")


@dataclass(frozen=True)
class Row:
    """One value beside the other, in the unit of the calculation.

    `difference` is checker less originator in percent of the originator's, None for words and blanks, infinite if the
    originator's value is 0 and the checker's is not.
    """

    id: str
    unit: str
    own: float | str
    shown: str
    checker: float | str | None
    difference: float | None
    tolerance: float | None
    reason: str
    outcome: str

    @property
    def settled(self) -> bool:
        """Whether the row is accepted, or differs for a stated reason."""
        return self.outcome in (WITHIN, REASON, LEFT_OUT)


@dataclass(frozen=True)
class _Own:
    line: Line
    value: float | str
    shown: str


def reconcile(path: Path, filled: Path) -> list[Row]:
    """Each row of a filled CSV beside the issued file's value.

    Raises MismatchError if the issued file was altered, CommandError or InputError (naming every bad row) for the CSV.
    """
    data = read(path)
    if seal.check(data).state == "altered":
        raise MismatchError(f"{path} was altered or re-saved after issue; cure: take the file as it was issued")
    try:
        text = filled.read_text(encoding="utf-8-sig")
    except UnicodeDecodeError as error:
        raise CommandError(f"{filled} is not UTF-8 text; cure: save it as CSV UTF-8") from error
    except OSError as error:
        raise CommandError(f"{filled} cannot be read: {error.strerror}") from error
    record = record_of(seal.issued_bytes(data))
    try:
        return compare(record, text)
    except InputError as error:
        raise InputError(f"{filled} beside {title(record)}", error.faults) from error


def compare(record: Record, text: str) -> list[Row]:
    """The rows of the CSV text beside the record.

    Raises InputError naming every bad row.

    >>> from tests.report.sample import record
    >>> [row.outcome for row in compare(record(), "id,unit,checker_value,tolerance,reason\\nX.V,kip,1,2,")]
    ['differs, reason missing']
    """
    own = {row_id(line, row): _Own(line, value, shown) for line in record.lines for row, value, shown in _entries(line)}
    faults: list[Fault] = []
    rows, seen = [], set[str]()
    for number, fields in _read(text):
        id_ = fields["id"]
        if id_ in seen:
            faults.append(Fault(f"row {number}", "each id once", id_, "keep one of the rows"))
        elif id_ not in own:
            near = ", ".join(nearest_first(id_, own)[:4])
            faults.append(Fault(f"row {number}", "the id of a result", id_ or "none", f"did you mean {near}"))
        else:
            found = _row(number, own[id_], fields, faults)
            rows += [found] if found else []
        seen.add(id_)
    if faults:
        raise InputError("checker's values", faults)
    return rows


def text(rows: Sequence[Row]) -> str:
    """The rows as a table for the terminal, with a count below."""
    cells = [_HEADINGS, *(_cells(row) for row in rows)]
    widths = [max(len(row[i]) for row in cells) for i in range(len(_HEADINGS))]
    table = ["  ".join(f"{cell:{width}}" for cell, width in zip(row, widths, strict=True)).rstrip() for row in cells]
    counts = (sum(row.outcome == WITHIN for row in rows), sum(row.outcome in (REASON, LEFT_OUT) for row in rows))
    left = len(rows) - sum(counts)
    return "\n".join(
        [*table, "", f"{len(rows)} values: {counts[0]} within tolerance, {counts[1]} with a reason, {left} not settled"]
    )


def _entries(line: Line) -> list[tuple[str, float | str, str]]:
    """Row label ("" for a single value), value and printed form of a result."""
    if line.kind not in RESULTS or line.value is None:
        return []
    if isinstance(line.value, list):
        return list(zip(line.rows, line.value, line.shown, strict=True))
    return [("", line.value, line.shown if isinstance(line.shown, str) else "")]


def _read(text: str) -> list[tuple[int, dict[str, str]]]:
    """The filled rows with their line numbers; commas, semicolons and tabs are taken, as the first line has them."""
    first = text.partition("\n")[0]
    rows = list(csv.reader(text.splitlines(), delimiter=max(",;\t", key=first.count)))
    head = [cell.strip() for cell in rows[0]] if rows else []
    missing = [name for name in COLUMNS if name not in head]
    if missing:
        fault = Fault("first row", ",".join(COLUMNS), f"none called {', '.join(missing)}")
        raise InputError("checker's values", [fault])
    found = []
    for number, cells in enumerate(rows[1:], 2):
        if any(cell.strip() for cell in cells):
            padded = [*cells, *[""] * (len(head) - len(cells))]
            found.append((number, {name: padded[head.index(name)].strip() for name in COLUMNS}))
    if not found:
        raise InputError("checker's values", [Fault("rows", "one for each value asked for", "none")])
    return found


def _row(number: int, own: _Own, fields: dict[str, str], faults: list[Fault]) -> Row | None:
    before = len(faults)
    where = f"row {number}, {fields['id']}"
    tolerance = _number(fields["tolerance"].rstrip("% "), f"{where}, tolerance", faults)
    if tolerance is not None and tolerance < 0:
        faults.append(Fault(f"{where}, tolerance", "percent, not below 0", fields["tolerance"]))
    checker: float | str | None = fields["checker_value"] or None
    if isinstance(own.value, float):
        checker = _number(fields["checker_value"], f"{where}, checker_value", faults)
        try:
            factor = units.factor(units.canonical(fields["unit"]), own.line.unit)
            checker = None if checker is None else checker * float(factor)
        except UnitError:
            needed = f"a unit like {own.line.unit}" if own.line.unit else "no unit"
            faults.append(Fault(f"{where}, unit", needed, fields["unit"] or "none"))
    if len(faults) > before:
        return None
    difference = None
    if isinstance(own.value, float) and isinstance(checker, float):
        gap = checker - own.value
        difference = gap / abs(own.value) * 100 if own.value else (math.copysign(math.inf, gap) if gap else 0.0)
    outcome = _outcome(own.value, checker, difference, tolerance, fields["reason"])
    return Row(
        fields["id"], own.line.unit, own.value, own.shown, checker, difference, tolerance, fields["reason"], outcome
    )


def _number(text: str, where: str, faults: list[Fault]) -> float | None:
    if not text:
        return None
    try:
        number = float(text)
    except ValueError:
        number = math.nan
    if not math.isfinite(number):
        faults.append(Fault(where, "a number with a decimal point, without its unit", text))
    return number


def _outcome(
    own: float | str, checker: float | str | None, difference: float | None, tolerance: float | None, reason: str
) -> str:
    if checker is None:
        return LEFT_OUT if reason else NO_VALUE
    if isinstance(own, str):
        agrees = own == checker
    elif tolerance is None or difference is None:
        return REASON if reason else NO_TOLERANCE
    else:
        agrees = abs(difference) <= tolerance
    if agrees:
        return WITHIN
    return REASON if reason else NO_REASON


def _cells(row: Row) -> tuple[str, ...]:
    unit = units.shown(row.unit)
    shown = row.shown if not unit or row.shown.endswith(unit) else f"{row.shown} {unit}"
    checker = f"{row.checker:.6g} {unit}".rstrip() if isinstance(row.checker, float) else row.checker or "none"
    difference = "" if row.difference is None else f"{row.difference:+.2f} %"
    tolerance = "" if row.tolerance is None else f"{row.tolerance:g} %"
    outcome = f"{row.outcome}: {row.reason}" if row.reason else row.outcome
    return row.id, shown, checker, difference, tolerance, outcome
