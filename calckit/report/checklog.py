"""The check log: one CSV table in which a checker marks lines and comments on them.

One row is one mark, one comment, or both. The columns, in any order, others are kept as they are:

`line`
    what the row stands on: a number on the sheets (`12`), a range (`12-86` or `12 to 86`; a spreadsheet takes the
    first for a date), a line id (`X.T_a`), a part (`X.*`), or a section (`section Drift and stability`).
`mark`
    a letter: A agreed, C correct this, Q question, V corrected and verified. C and Q need a comment. Blank for a
    comment alone.
`initials`, `date`
    who set the row, and when (2026-12-05).
`comment`, `basis`, `why_it_matters`, `action_asked`
    the concern, what it rests on, its significance, and what is asked for.
`answer`
    how and where the comment was met, written by the originator.
`state`
    `open`, `answered` (needs an answer) or `closed by JR` (needs an answer, and only the initials of the row's own
    `initials` close it). Blank stands for open, or for answered where there is an answer.
`content`
    filled by the kit: for each line of the row its id and the first 16 digits of its content hash. Leave it blank in
    a new row. To mark a line again, add a row.

A mark holds as long as the content of its line, and so of everything that the line rests on, is what it was marked on.
The last row that holds for a line is its mark, but a C or Q stays until its comment is closed, and counts no more when
it is.

Knows the table, and how its rows meet the lines of a record. Must not know how marks are printed or where a comment
was made.
"""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from datetime import date
from pathlib import Path
from typing import Any

from calckit.core.record import Line, Record
from calckit.errors import CommandError, Fault, InputError, nearest_first
from calckit.report.files import replace_together
from calckit.report.model import Ref

COLUMNS = (
    "line", "mark", "initials", "date", "comment", "basis", "why_it_matters", "action_asked", "answer", "state",
    "content",
)  # fmt: skip
MARKS = {"A": "agreed", "C": "correct this", "Q": "question", "V": "corrected and verified"}
INPUT_KINDS = ("given", "assumption", "judgment")
"""The kinds of lines that have a sign-off of their own."""

_NEEDED = ("line", "mark", "initials", "date")
_SETTLED = ("A", "V")
_STATES = ("open", "answered", "closed")
_DIGITS = 16
_DAY = re.compile(r"\d{4}-\d{2}-\d{2}")
_NUMBERS = re.compile(r"(\d+)(?:\s*(?:-|–|to)\s*(\d+))?")
_SECTION = "section "
_TIE = re.compile(rf"(\S+):([0-9a-f]{{{_DIGITS}}})")
_BOM = "\ufeff"


@dataclass(frozen=True)
class Entry:
    """One row, read: `number` is its number in the table, the header being 1.

    `state` is "open", "answered" or "closed", blank without a comment. `ties` are the lines that the row was set on:
    pairs of id and content digits; empty in a new row.
    """

    number: int
    line: str
    mark: str
    initials: str
    date: str
    comment: str
    basis: str
    why_it_matters: str
    action_asked: str
    answer: str
    state: str
    ties: tuple[tuple[str, str], ...]


@dataclass(frozen=True)
class Log:
    """The whole table: `columns` and `rows` as they stand in the file `name`, and the `entries` read from them."""

    name: str
    columns: tuple[str, ...] = COLUMNS
    rows: tuple[Mapping[str, str], ...] = ()
    entries: tuple[Entry, ...] = ()
    delimiter: str = ","
    line_end: str = "\n"
    marked_utf8: bool = False

    def with_rows(self, rows: Iterable[Mapping[str, str]]) -> Log:
        """The log with other rows, read again; raises InputError naming every bad one."""
        columns = (*self.columns, *(name for name in COLUMNS if name not in self.columns))
        kept = tuple({name: row.get(name, "") for name in columns} for row in rows)
        return replace(self, columns=columns, rows=kept, entries=_entries(self.name, kept))

    def to_csv(self) -> str:
        """The text of the file.

        >>> print(parse("line,mark,initials,date,mine\\n12,A,JR,2026-12-05,x\\n", "log.csv").to_csv(), end="")
        line,mark,initials,date,mine
        12,A,JR,2026-12-05,x
        """
        out = io.StringIO()
        writer = csv.writer(out, delimiter=self.delimiter, lineterminator=self.line_end)
        writer.writerow(self.columns)
        writer.writerows([row.get(name, "") for name in self.columns] for row in self.rows)
        return (_BOM if self.marked_utf8 else "") + out.getvalue()


@dataclass(frozen=True)
class Mark:
    """A mark on one line: `letter` is one of MARKS, `row` the number of the row that set it."""

    letter: str
    initials: str
    date: str
    row: int


@dataclass(frozen=True)
class Fallen:
    """A mark that fell off: the line `changed` since, or it is there no more (`ref.n` is 0)."""

    ref: Ref
    mark: Mark
    changed: bool


@dataclass(frozen=True)
class Remark:
    """A comment with its answer.

    `place` is what the row names, `refs` its lines as they are numbered now, `gone` the ids that are there no more.
    `changed` says that one of the lines changed since.
    """

    row: int
    place: str
    refs: tuple[Ref, ...]
    gone: tuple[str, ...]
    changed: bool
    letter: str
    initials: str
    date: str
    comment: str
    basis: str
    why_it_matters: str
    action_asked: str
    answer: str
    state: str


@dataclass(frozen=True)
class Coverage:
    """How far the check got: the lines that bear each letter, and the `unmarked` ones, of `total`."""

    marked: Mapping[str, tuple[Ref, ...]]
    unmarked: tuple[Ref, ...]

    @property
    def total(self) -> int:
        """The number of lines counted."""
        return len(self.unmarked) + sum(map(len, self.marked.values()))

    @property
    def checked(self) -> int:
        """The number of lines that are agreed, or corrected and verified."""
        return sum(len(self.marked[letter]) for letter in _SETTLED)

    def text(self) -> str:
        """The count in words.

        >>> Coverage({"A": (Ref(1, "h_n"),), "C": (Ref(2, "T_a"),), "Q": (), "V": ()}, (Ref(3, "T"),)).text()
        'checked 1 of 3; to be corrected 1; in question 0; not marked 1'
        """
        return (
            f"checked {self.checked} of {self.total}; to be corrected {len(self.marked['C'])}; "
            f"in question {len(self.marked['Q'])}; not marked {len(self.unmarked)}"
        )


@dataclass(frozen=True)
class Marks:
    """The log laid over a record.

    `by_line` gives the mark of each line that has one, by id. `fallen` are the marks of lines that have none any more
    and of lines that are gone. `coverage` counts all lines, `inputs` the inputs, assumptions and answers. `remarks`
    are the comments, closed ones last. `untied` are the numbers of rows that `tie` has not filled: their marks count
    for nothing yet.
    """

    by_line: Mapping[str, Mark]
    fallen: tuple[Fallen, ...]
    coverage: Coverage
    inputs: Coverage
    remarks: tuple[Remark, ...]
    untied: tuple[int, ...]


def self_check(calculation: Mapping[str, Any]) -> str:
    """What to print when one person is named as originator and as checker; "" otherwise.

    >>> self_check({"prepared_by": "J. Doe", "checked_by": "j.  doe "})
    'self-check: J. Doe is named both as originator and as checker'
    >>> self_check({"prepared_by": "", "checked_by": ""})
    ''
    """
    originator, checker = (" ".join(calculation.get(name, "").split()) for name in ("prepared_by", "checked_by"))
    if not originator or originator.casefold() != checker.casefold():
        return ""
    return f"self-check: {originator} is named both as originator and as checker"


# --- the file


def parse(text: str, name: str) -> Log:
    """Read the text of a check log; `name` is what messages call it. Comma, semicolon or tab may part the cells.

    Raises InputError naming every bad row.
    """
    body = text.removeprefix(_BOM)
    head = body.partition("\n")[0]
    delimiter = max(",;\t", key=head.count)
    line_end = "\r\n" if head.endswith("\r") else "\n"
    try:
        table = list(csv.reader(io.StringIO(body, newline=""), delimiter=delimiter, strict=True))
    except csv.Error as error:
        fault = Fault("table", "CSV text", str(error), "save it as CSV again")
        raise InputError(f"check log {name}", [fault]) from error
    columns = [cell.strip() for cell in table[0]] if table else []
    columns = [cell.casefold() if cell.casefold() in COLUMNS else cell for cell in columns]
    while columns and not columns[-1]:
        columns.pop()
    faults = [
        Fault("header", f"a column {column!r}", ", ".join(columns) or "nothing", "name the columns in the first row")
        for column in _NEEDED
        if column not in columns
    ]
    faults += [
        Fault("header", "each column once", f"{column!r} {columns.count(column)} times", "rename or remove one")
        for column in dict.fromkeys(columns)
        if columns.count(column) > 1
    ]
    faults += [
        Fault(f"row {number}", f"{len(columns)} cells", str(len(cells)), "put a text with commas in quotation marks")
        for number, cells in enumerate(table[1:], 2)
        if columns and any(cell.strip() for cell in cells[len(columns) :])
    ]
    if faults:
        raise InputError(f"check log {name}", faults)
    rows = tuple(dict(zip(columns, [*cells, *[""] * len(columns)][: len(columns)], strict=True)) for cells in table[1:])
    return Log(name, tuple(columns), rows, _entries(name, rows), delimiter, line_end, text.startswith(_BOM))


def read(path: Path) -> Log:
    """Read a check log. Raises CommandError if the file cannot be read, InputError naming every bad row."""
    try:
        text = path.read_bytes().decode("utf-8")
    except OSError as error:
        raise CommandError(f"{path} cannot be read: {error.strerror}") from error
    except UnicodeDecodeError as error:
        raise CommandError(f"{path} is not UTF-8 text; cure: save it as CSV in UTF-8") from error
    return parse(text, path.name)


def write(path: Path, log: Log) -> None:
    """Put the log in place of the file, whole or not at all. Raises CommandError."""
    replace_together(path.parent, {path.name: log.to_csv().encode("utf-8")})


def _entries(name: str, rows: Sequence[Mapping[str, str]]) -> tuple[Entry, ...]:
    faults: list[Fault] = []
    found = []
    for number, row in enumerate(rows, 2):
        if any(cell.strip() for cell in row.values()):
            cells = {column: row.get(column, "").strip() for column in COLUMNS}
            before = len(faults)
            faults += _faults(f"row {number}", cells)
            if len(faults) == before:
                state, ties = _state(cells)[0], tuple(_TIE.findall(cells.pop("content")))
                found.append(Entry(number, ties=ties, **cells | {"mark": cells["mark"].upper(), "state": state}))
    if faults:
        raise InputError(f"check log {name}", faults)
    return tuple(found)


def _state(cells: Mapping[str, str]) -> tuple[str, str]:
    """The state and the initials of who closed, of a comment."""
    word, _, closer = cells["state"].partition(" ")
    if word:
        return word.casefold(), closer.strip().removeprefix("by").strip()
    return ("answered" if cells["answer"] else "open") if cells["comment"] else "", ""


def _faults(where: str, cells: Mapping[str, str]) -> Iterator[Fault]:
    """What is wrong with one row, apart from any record."""
    if not cells["line"]:
        yield Fault(f"{where}, line", "what the row stands on", "nothing", "write a line number such as 12")
    if cells["mark"].upper() not in ("", *MARKS):
        letters = ", ".join(f"{letter} {meaning}" for letter, meaning in MARKS.items())
        yield Fault(f"{where}, mark", letters, cells["mark"])
    if not cells["mark"] and not cells["comment"]:
        yield Fault(where, "a mark or a comment", "neither", "write one, or remove the row")
    if cells["mark"].upper() in ("C", "Q") and not cells["comment"]:
        yield Fault(f"{where}, comment", f"a comment with the mark {cells['mark']}", "none", "say what is meant")
    if not cells["initials"]:
        yield Fault(f"{where}, initials", "the initials of who set the row", "nothing")
    if not _is_day(cells["date"]):
        yield Fault(f"{where}, date", "a day, such as 2026-12-05", cells["date"] or "nothing", "keep the cell as text")
    if len(_TIE.findall(cells["content"])) != len(cells["content"].split()):
        yield Fault(f"{where}, content", "what the kit wrote", cells["content"][:40], "empty the cell")
    else:
        strange = [id_ for id_, _ in _TIE.findall(cells["content"]) if not _may_hold(cells["line"], id_)]
        if strange:
            given = f"that of {', '.join(strange)}"
            yield Fault(f"{where}, content", f"the content of {cells['line']}", given, "empty the cell")
    yield from _state_faults(where, cells)


def _state_faults(where: str, cells: Mapping[str, str]) -> Iterator[Fault]:
    state, closer = _state(cells)
    if not cells["comment"]:
        if cells["state"] or cells["answer"]:
            yield Fault(where, "a comment for its state and answer", "none", "write the comment, or empty both cells")
    elif state not in _STATES or (closer and state != "closed"):
        yield Fault(f"{where}, state", "open, answered or closed by JR", cells["state"])
    elif state != "open" and not cells["answer"]:
        yield Fault(f"{where}, answer", f"an answer to a comment that is {state}", "none", "say how it was met")
    if state == "closed" and closer.casefold() != cells["initials"].casefold():
        yield Fault(
            f"{where}, state", f"closed by {cells['initials'] or '(the initials of the row)'}", cells["state"],
            "only who made a comment closes it",
        )  # fmt: skip


def _is_day(text: str) -> bool:
    try:
        return bool(_DAY.fullmatch(text) and date.fromisoformat(text))
    except ValueError:
        return False


# --- against a record


def tie(log: Log, record: Record) -> Log:
    """The log with the content of each new row filled from the record of the sheets that the checker had.

    Line numbers in new rows are those of these sheets. Raises InputError naming every row that stands on no line.
    """
    lines = _resolved(log, record)
    rows = [dict(row) for row in log.rows]
    for entry in log.entries:
        if not entry.ties:
            rows[entry.number - 2]["content"] = " ".join(f"{line.id}:{_mark_of(line)}" for line in lines[entry.number])
    return log.with_rows(rows)


def expand(log: Log, record: Record) -> Marks:
    """The log laid over a record: the mark of each line, what fell off, the coverage and the comments.

    Raises InputError naming every new row that stands on no line.
    """
    new = _resolved(log, record)
    lines = {line.id: line for line in record.lines}
    set_on: dict[str, list[tuple[Entry, str]]] = {}
    for entry in log.entries:
        for id_, digits in entry.ties if _counts(entry) else ():
            set_on.setdefault(id_, []).append((entry, digits))
    by_line: dict[str, Mark] = {}
    fallen = []
    for id_, marks in set_on.items():
        line = lines.get(id_)
        holding = [entry for entry, digits in marks if line and digits == _mark_of(line)]
        if holding:
            pending = [entry for entry in holding if entry.mark not in _SETTLED]
            by_line[id_] = _mark((pending or holding)[-1])
        else:
            fallen.append(Fallen(Ref(line.n if line else 0, id_), _mark(marks[-1][0]), line is not None))
    remarks = [_remark(entry, new, lines) for entry in log.entries if entry.comment]
    return Marks(
        by_line=by_line,
        fallen=tuple(sorted(fallen, key=lambda lost: (lost.ref.n == 0, lost.ref.n))),
        coverage=_coverage(record.lines, by_line),
        inputs=_coverage([line for line in record.lines if line.kind in INPUT_KINDS], by_line),
        remarks=tuple(sorted(remarks, key=lambda remark: remark.state == "closed")),
        untied=tuple(new),
    )


def _counts(entry: Entry) -> bool:
    return entry.mark in _SETTLED or (entry.mark != "" and entry.state != "closed")


def _coverage(lines: Iterable[Line], by_line: Mapping[str, Mark]) -> Coverage:
    marked: dict[str, list[Ref]] = {letter: [] for letter in ("", *MARKS)}
    for line in lines:
        marked[by_line[line.id].letter if line.id in by_line else ""].append(Ref(line.n, line.id))
    found = {letter: tuple(refs) for letter, refs in marked.items()}
    unmarked = found.pop("")
    return Coverage(found, unmarked)


def _remark(entry: Entry, new: Mapping[int, Sequence[Line]], lines: Mapping[str, Line]) -> Remark:
    ids = [line.id for line in new.get(entry.number, ())] or [id_ for id_, _ in entry.ties]
    return Remark(
        row=entry.number,
        place=entry.line,
        refs=tuple(sorted((Ref(lines[id_].n, id_) for id_ in ids if id_ in lines), key=lambda ref: ref.n)),
        gone=tuple(id_ for id_ in ids if id_ not in lines),
        changed=any(id_ in lines and digits != _mark_of(lines[id_]) for id_, digits in entry.ties),
        letter=entry.mark,
        **{name: getattr(entry, name) for name in COLUMNS if name not in ("line", "mark", "content")},
    )


def _mark(entry: Entry) -> Mark:
    return Mark(entry.mark, entry.initials, entry.date, entry.number)


def _mark_of(line: Line) -> str:
    """What a mark remembers of a line."""
    return line.content[:_DIGITS]


def _resolved(log: Log, record: Record) -> dict[int, list[Line]]:
    """The lines of each new row, by its number."""
    found = {entry.number: _named(entry.line, record) for entry in log.entries if not entry.ties}
    faults = [
        Fault(f"row {entry.number}, line", _known(entry.line, record), entry.line)
        for entry in log.entries
        if found.get(entry.number) == []
    ]
    if faults:
        raise InputError(f"check log {log.name}", faults)
    return found


def _named(place: str, record: Record) -> list[Line]:
    """The lines that a cell names; none if one end of a range is no line."""
    numbers = _NUMBERS.fullmatch(place)
    if numbers:
        first, last = int(numbers[1]), int(numbers[2] or numbers[1])
        known = {line.n for line in record.lines}
        return [line for line in record.lines if first <= line.n <= last] if {first, last} <= known else []
    if place.casefold().startswith(_SECTION):
        title = place[len(_SECTION) :].strip().casefold()
        return [line for line in record.lines if line.section.casefold() == title]
    return [line for line in record.lines if _may_hold(place, line.id)]


def _may_hold(place: str, id_: str) -> bool:
    """Whether a row can stand on a line with this id; numbers and sections may stand on any."""
    if _NUMBERS.fullmatch(place) or place.casefold().startswith(_SECTION):
        return True
    return id_.startswith(place[:-1]) if place.endswith(".*") else id_ == place


def _known(place: str, record: Record) -> str:
    """What a cell that names no line could have named."""
    if place.casefold().startswith(_SECTION):
        return f"section and one of: {'; '.join(dict.fromkeys(line.section for line in record.lines))}"
    if place.endswith(".*"):
        parts = dict.fromkeys(line.part for line in record.lines if line.part)
        return f"a part: {', '.join(f'{part}.*' for part in parts) or 'this calculation has none'}"
    near = nearest_first(place, [line.id for line in record.lines])[:3]
    return (
        f"a line number up to {max((line.n for line in record.lines), default=0)}, a range such as 12 to 86, or an id "
        f"such as {', '.join(near)}"
    )
