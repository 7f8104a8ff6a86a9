"""Comments made in a returned PDF, read into the check log by the line that they stand on.

Knows the standard annotations of a PDF (ISO 32000-1, 12.5.6) and where the rows of lines stand on a sheet: between the
rules of a table whose columns are headed "Line" and "Mark". Must not know how marks count or are printed.
"""

from __future__ import annotations

import io
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field, replace
from itertools import pairwise
from pathlib import Path
from typing import Any

from calckit.core.record import Record
from calckit.errors import CommandError, MismatchError
from calckit.report import checklog, seal
from calckit.report.recheck import read, record_of, title

_OVER_TEXT = ("/Highlight", "/Underline", "/StrikeOut", "/Squiggly")
_OF_THE_REPORT = ("/Link", "/Popup", "/Widget", "/FileAttachment")
_MARKED = re.compile(rf"([{''.join(checklog.MARKS)}])(?:\s*:\s*(.*))?", re.DOTALL)
_WORD = re.compile(r"\w+")
_STAMP = re.compile(r"D:(\d{4})(\d{2})(\d{2})")
_FORMULA_SIGNS = ("=", "+", "-", "@")
_LEAST = 1.0  # points; a rule shorter than this parts nothing
_SLACK = 1.5  # points
_FIRST_ROW = 6.0  # points from the top of a text box to the middle of its first row


@dataclass(frozen=True)
class Comment:
    """An annotation: its `sheet`, the `lines` that it stands on by number, and what it says.

    `mark` is the letter that it is, or begins with before a colon ("C: use 2.5"). `date` and `author` are blank where
    the file does not state them.
    """

    sheet: int
    lines: tuple[int, ...]
    mark: str
    words: str
    author: str
    date: str


@dataclass(frozen=True)
class _Row:
    """The stretch of a sheet that one line takes up, in points from the lower edge."""

    number: int
    top: float
    bottom: float


def collect(pdf: Path, log_path: Path) -> str:
    """Add the comments of a returned PDF to a check log and say what was done.

    The log is made if it is not there. Its rows without content are taken as set on this PDF. A comment that the log
    holds already is not added twice.

    Raises CommandError if a file cannot be read or written, MismatchError if the PDF is no issued report, and
    InputError naming every bad row of the log.
    """
    data = read(pdf)
    if not seal.is_pdf(data):
        raise CommandError(f"{pdf} is no PDF; comments are read from a PDF; cure: name the returned PDF")
    record = record_of(seal.issued_bytes(data))
    log = checklog.read(log_path) if log_path.exists() else checklog.Log(log_path.name)
    waiting = sum(not entry.ties for entry in log.entries)
    tied = checklog.tie(log, record)
    held = {_key(entry) for entry in tied.entries}
    rows, left, again = [], [], 0
    for comment in comments_of(data):
        row = _row(comment, record)
        if isinstance(row, str):
            left.append(f"  sheet {comment.sheet}, {comment.author or 'no author'}: {comment.words!r} {row}")
            continue
        (entry,) = checklog.tie(tied.with_rows([row]), record).entries
        if _key(entry) in held:
            again += 1
            continue
        held.add(_key(entry))
        rows.append(row)
    whole = checklog.tie(tied.with_rows([*tied.rows, *rows]), record)
    if rows or waiting or not log_path.exists():
        checklog.write(log_path, whole)
    verdict = seal.check(data)
    words = [f"{title(record)}; file seal: {verdict.text()}", f"{log_path}: {len(rows)} added, {again} held already"]
    if waiting:
        words.append(f"rows of the log taken as set on this file: {waiting}")
    words += [f"  row {entry.number}, {entry.line}: {_said(entry)}" for entry in whole.entries[len(tied.entries) :]]
    if left:
        words += [f"not added: {len(left)}", *left]
    return "\n".join(words)


def comments_of(data: bytes) -> list[Comment]:
    """The comments in a PDF, in the order of the sheets and from top to bottom.

    Raises MismatchError if the file is damaged.
    """
    from pypdf import PdfReader

    found = []
    try:
        pages = PdfReader(io.BytesIO(data)).pages
        for sheet, page in enumerate(pages, 1):
            notes = [note for reference in _of(page, "/Annots", ()) if _speaks(note := reference.get_object())]
            rows = _rows(pages, sheet) if notes else []
            found += [_comment(note, sheet, rows) for note in sorted(notes, key=lambda note: -_reach(note)[0])]
    except Exception as error:  # a damaged file may raise anything in the reader
        raise MismatchError(f"the comments cannot be read from the PDF: {error}") from error
    return found


def sheets_of_lines(data: bytes, record: Record) -> dict[int, str]:
    """The name of the sheet on which each line of an issued PDF begins, by the number of the line.

    Raises MismatchError if the file is damaged.
    """
    from pypdf import PdfReader

    facts, found = record.calculation, dict[int, str]()
    first, prefix = facts.get("first_sheet", 1), facts.get("sheet_prefix", "")
    try:
        pages = PdfReader(io.BytesIO(data)).pages
        for place in range(len(pages)):
            for row in _drawn_rows(pages[place]):
                found.setdefault(row.number, f"{prefix}{place + first}")
    except Exception as error:  # a damaged file may raise anything in the reader
        raise MismatchError(f"the sheets cannot be read from the PDF: {error}") from error
    found.pop(0, None)  # a row that goes on from the sheet before
    return found


# --- annotations


def _of(thing: Any, name: str, default: Any = "") -> Any:
    """An entry of a dictionary; unlike `get`, it follows references."""
    return thing[name] if name in thing else default  # noqa: SIM401


def _speaks(note: Any) -> bool:
    """Whether an annotation is a comment, and not part of the report or the state of another comment."""
    return _of(note, "/Subtype") not in _OF_THE_REPORT and "/StateModel" not in note


def _comment(note: Any, sheet: int, rows: Sequence[_Row]) -> Comment:
    words = _words(note)
    marked = _MARKED.fullmatch(words)
    mark, words = (marked[1], (marked[2] or "").strip()) if marked else ("", words)
    if not words and (mark in ("C", "Q") or note["/Subtype"] in _OVER_TEXT):
        words = f"({note['/Subtype'][1:]} without words)"
    stamp = _STAMP.match(str(_of(note, "/M") or _of(note, "/CreationDate")))
    high, low = _reach(_of(note, "/IRT", note))
    return Comment(
        sheet=sheet,
        lines=tuple(dict.fromkeys(row.number for row in rows if row.bottom <= high and row.top > low)),
        mark=mark,
        words=words,
        author=str(_of(note, "/T")).strip(),
        date="-".join(stamp.groups()) if stamp else "",
    )


def _words(note: Any) -> str:
    return "\n".join(str(_of(note, "/Contents")).splitlines()).strip()


def _reach(note: Any) -> tuple[float, float]:
    """The upper and lower end of what an annotation points at: a stretch of text, or a place."""
    kind = note["/Subtype"]
    corners = [float(corner) for corner in note["/Rect"]]
    high, low = max(corners[1::2]), min(corners[1::2])
    if kind in _OVER_TEXT:
        if "/QuadPoints" in note:
            points = [float(point) for point in note["/QuadPoints"]][1::2]
            high, low = max(points), min(points)
        slack = min(_SLACK, (high - low) / 4)
        return high - slack, low + slack
    if kind == "/FreeText":
        place = float(note["/CL"][1]) if "/CL" in note else high - min(_FIRST_ROW, (high - low) / 2)
    else:
        place = (high + low) / 2
    return place, place


# --- the log


def _row(comment: Comment, record: Record) -> dict[str, str] | str:
    """The row of a comment in the log, or why it cannot stand there."""
    known = {line.n: line.id for line in record.lines}
    numbers = [number for number in comment.lines if number in known]
    if not comment.words and not comment.mark:
        return "has no words"
    if not numbers:
        return "stands on no line"
    if not comment.author:
        return "names no author"
    if not comment.date:
        return "states no date"
    place = known[numbers[0]] if len(numbers) == 1 else f"{min(numbers)} to {max(numbers)}"
    words = f"'{comment.words}" if comment.words.startswith(_FORMULA_SIGNS) else comment.words
    return {
        "line": place, "mark": comment.mark, "initials": _initials(comment.author), "date": comment.date,
        "comment": words, "state": "open" if words else "",
    }  # fmt: skip


def _initials(author: str) -> str:
    """The initials of a name; a single word stays as it is.

    >>> _initials("Jane Roe"), _initials("JR"), _initials("jroe")
    ('JR', 'JR', 'jroe')
    """
    words = _WORD.findall(author)
    return "".join(word[0].upper() for word in words) if len(words) > 1 else author


def _key(entry: checklog.Entry) -> tuple[object, ...]:
    """What makes two rows the same comment on the same content."""
    return entry.ties, entry.mark, entry.initials, entry.comment


def _said(entry: checklog.Entry) -> str:
    return ": ".join(filter(None, (entry.mark, " ".join(entry.comment.split()))))


# --- the rows on a sheet


def _rows(pages: Sequence[Any], sheet: int) -> list[_Row]:
    """The stretches of a sheet that lines take up, from top to bottom; a row without a number goes on from before."""
    rows = _drawn_rows(pages[sheet - 1])
    if rows and not rows[0].number:
        before = next((above[-1].number for at in range(sheet - 1, 0, -1) if (above := _rows(pages, at))), 0)
        rows[0] = replace(rows[0], number=before)
    return rows


def _drawn_rows(page: Any) -> list[_Row]:
    drawn = _Drawn()
    page.extract_text(visitor_operand_before=drawn.operator, visitor_text=drawn.text)
    return list(drawn.rows())


@dataclass
class _Drawn:
    """The straight rules and the texts of a sheet, as the page description draws them."""

    across: list[tuple[float, float, float]] = field(default_factory=list)  # y, left, right
    down: list[tuple[float, float, float]] = field(default_factory=list)  # x, top, bottom
    texts: list[tuple[str, float, float]] = field(default_factory=list)  # text, x, y
    _from: tuple[float, float] = (0.0, 0.0)

    def operator(self, operator: bytes, operands: Any, matrix: Sequence[float], _text_matrix: object) -> None:
        """Take note of a straight line."""
        if operator not in (b"m", b"l"):
            return
        x, y = _moved(matrix, float(operands[0]), float(operands[1]))
        if operator == b"l":
            x0, y0 = self._from
            if abs(y - y0) < _LEAST <= abs(x - x0):
                self.across.append((y, min(x, x0), max(x, x0)))
            elif abs(x - x0) < _LEAST <= abs(y - y0):
                self.down.append((x, max(y, y0), min(y, y0)))
        self._from = (x, y)

    def text(self, text: str, matrix: Sequence[float], text_matrix: Sequence[float], *_font: object) -> None:
        """Take note of a text."""
        if text.strip():
            self.texts.append((text.strip(), *_moved(matrix, text_matrix[4], text_matrix[5])))

    def rows(self) -> Iterator[_Row]:
        """The stretches between the rules, from top to bottom; the number is 0 where none stands there."""
        for _, x, y in sorted((text for text in self.texts if text[0] == "Mark"), key=lambda text: -text[2]):
            sides = [rule for rule in self.down if rule[1] + _SLACK > y > rule[2]]
            left = max((rule for rule in sides if rule[0] <= x), default=None)
            headed = [text for text in self.texts if text[0] == "Line" and abs(text[2] - y) < _SLACK and text[1] < x]
            if left is None or not headed:
                continue
            edge, top, bottom = left
            within = {y for y, start, end in self.across if start < edge < end and top + _SLACK > y > bottom - _SLACK}
            edges = sorted(within, reverse=True)
            for upper, lower in pairwise(edges):
                numbers = [
                    int(text) for text, x, y in self.texts if upper > y > lower and x < edge and text.isdecimal()
                ]
                if lower < headed[0][2] < upper or upper - lower < _LEAST:
                    continue
                yield _Row(numbers[0] if numbers else 0, upper, lower)


def _moved(matrix: Sequence[float], x: float, y: float) -> tuple[float, float]:
    a, b, c, d, e, f = matrix
    return a * x + c * y + e, b * x + d * y + f
