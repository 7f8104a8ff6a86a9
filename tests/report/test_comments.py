"""Comments of a returned PDF: every line is found where it stands, and nothing is lost without a word."""

from __future__ import annotations

import io
import re
from functools import cache
from pathlib import Path
from typing import Any

import pytest
from pypdf import PdfWriter
from pypdf.annotations import FreeText, Highlight, Text
from pypdf.generic import (
    ArrayObject,
    DictionaryObject,
    FloatObject,
    NameObject,
    TextStringObject,
)

from calckit import cli
from calckit.core.record import Record, digest
from calckit.errors import CommandError, InputError, MismatchError
from calckit.report import checklog, comments, pdf, seal, view
from calckit.report.attachments import Parcel
from calckit.report.comments import Comment
from tests.report import sample
from tests.report.sheets import Run, Sheets

Capture = pytest.CaptureFixture[str]
Rect = tuple[float, float, float, float]
DAY = "2026-12-01"
STAMP = "D:20261205143000-08'00'"
NUMBER_ENDS = 0.8 * 72 + 26 - 4  # the left margin and the column of the numbers, which are set to its right end
LONG = "N-hostile"


@cache
def record() -> Record:
    made = sample.record()
    made.line(LONG).text = "word " * 2500  # more than a sheet
    for line in made.lines:
        line.content = digest(line.id)
    return made


@cache
def issued(paper: str = "Letter") -> bytes:
    made = record()
    made.calculation["paper"] = paper
    attached = Parcel("demo", b"{}", b"{}", {}, made.to_json().encode()).pack()
    model = view.build(made, sample.content())
    return seal.apply(pdf.render(model, figures=sample.figures(), attachments=attached, date=DAY))


@cache
def numbers(paper: str = "Letter") -> dict[int, tuple[int, Run]]:
    """Sheet and place of the number of each line, found by the tags of the file and not by its rules."""
    found: dict[int, tuple[int, Run]] = {}
    sheets = Sheets(issued(paper))
    for sheet in range(1, len(sheets) + 1):
        for run in sheets.runs(sheet):
            last = len(found) + 1
            if abs(run.x1 - NUMBER_ENDS) < 1 and run.text == str(last) and {"TR", "TD"} <= set(run.tags):
                found[last] = (sheet, run)
    return found


Note = tuple[int, Any]


def note(kind: Any, sheet: int, rect: Rect, words: str = "", /, **fields: Any) -> Note:
    """An annotation on a sheet, by J. Roe unless `fields` say otherwise; a field None is left out."""
    made = kind(rect=rect, **({} if kind is Highlight else {"text": words}), **fields.pop("made", {}))
    entries = {"T": "Jane Roe", "M": STAMP, "Contents": words} | fields
    for name, value in entries.items():
        key = NameObject(f"/{name}")
        if value is None:
            made.pop(key, None)
        else:
            made[key] = TextStringObject(value) if isinstance(value, str) else value
    return sheet, made


def at(number: int, words: str = "", /, **fields: Any) -> Note:
    """A text note beside the number of a line."""
    sheet, run = numbers()[number]
    return note(Text, sheet, (570, run.y - 7, 590, run.y + 13), words, **fields)


def over(first: int, last: int, words: str = "", **fields: Any) -> Note:
    """A highlight from one line's number to another's, on one sheet."""
    (sheet, top), (_, bottom) = numbers()[first], numbers()[last]
    low, high, left, right = bottom.y - 2, top.y + 8, 250.0, 400.0
    corners = ArrayObject(FloatObject(x) for x in (left, high, right, high, left, low, right, low))
    return note(Highlight, sheet, (left, low, right, high), words, made={"quad_points": corners}, **fields)


def returned(*notes: Note, data: bytes | None = None) -> bytes:
    """The issued PDF with annotations appended, as a viewer saves it."""
    writer = PdfWriter(io.BytesIO(data or issued()), incremental=True)
    for sheet, made in notes:
        writer.add_annotation(sheet - 1, made)
    out = io.BytesIO()
    writer.write(out)
    return out.getvalue()


def read(*notes: Note) -> list[Comment]:
    return comments.comments_of(returned(*notes))


def placed(*notes: Note) -> list[tuple[int, ...]]:
    return [comment.lines for comment in read(*notes)]


# --- where a comment stands


@pytest.mark.parametrize("paper", ["Letter", "A4"])
def test_every_line_is_found_by_a_note_beside_its_number(paper: str) -> None:
    found = numbers(paper)
    assert list(found) == [line.n for line in record().lines]
    notes = [
        note(Text, sheet, (400, run.y - 6, 420, run.y + 10), f"to line {number}")
        for number, (sheet, run) in found.items()
    ]
    data = returned(*notes, data=issued(paper))
    assert seal.check(data).state == "added"
    assert {comment.words: comment.lines for comment in comments.comments_of(data)} == {
        f"to line {number}": (number,) for number in found
    }


def test_a_row_reaches_down_to_its_last_text() -> None:
    sheets, found = Sheets(issued()), numbers()
    notes = {}
    for number, (sheet, run) in found.items():
        below = found.get(number + 1)
        if below and below[0] == sheet:
            between = [other for other in sheets.body(sheet) if below[1].y + 12 < other.y <= run.y]
            if all("TD" in other.tags for other in between):  # the next line stands in the same table
                low = min((other.y for other in between), default=run.y)
                notes[number] = note(Text, sheet, (300, low, 301, low + 1), f"to line {number}")
    assert len(notes) > 30
    assert {comment.words: comment.lines for comment in read(*notes.values())} == {
        f"to line {number}": (number,) for number in notes
    }


def test_a_row_that_goes_on_over_sheets_keeps_its_line() -> None:
    line = record().line(LONG).n
    (first, _), (last, _) = numbers()[line], numbers()[line + 1]
    assert last - first >= 2
    notes = [note(Text, sheet, (300, 300, 320, 320), "x") for sheet in range(first + 1, last)]
    assert placed(*notes) == [(line,)] * len(notes)


def test_a_highlight_stands_on_all_lines_that_it_covers() -> None:
    assert placed(over(2, 4, "these"), over(3, 3, "this")) == [(2, 3, 4), (3,)]


def test_a_text_box_stands_where_it_begins_and_a_callout_where_it_points() -> None:
    (sheet, second), (_, third) = numbers()[2], numbers()[3]
    box = (300.0, third.y - 200, 400.0, second.y + 8)
    arrow = ArrayObject(FloatObject(x) for x in (100, third.y, 200, third.y, 300, third.y - 100))
    long, pointing = note(FreeText, sheet, box, "long text"), note(FreeText, sheet, box, "pointing", CL=arrow)
    assert placed(long, pointing) == [(2,), (3,)]


def test_an_answer_to_a_comment_stands_where_the_comment_stands() -> None:
    sheet, made = at(3, "why?")
    reply = note(Text, sheet, (10, 10, 30, 30), "because", T="J. Doe", IRT=made)
    assert placed((sheet, made), reply) == [(3,), (3,)]


def test_places_outside_the_lines_are_none() -> None:
    top, cover = (300.0, 740.0, 310.0, 750.0), (300.0, 400.0, 310.0, 410.0)
    last = len(Sheets(issued()))
    assert placed(note(Text, 1, cover, "x"), note(Text, numbers()[1][0], top, "x"), note(Text, last, cover, "x")) == [
        (), (), (),
    ]  # fmt: skip


# --- what it says


def test_comments_come_from_top_to_bottom_with_author_and_day() -> None:
    found = read(at(4, "second"), at(2, "first\rrow two", M=None, CreationDate="D:20261206"))
    assert [(c.words, c.author, c.date) for c in found] == [
        ("first\nrow two", "Jane Roe", "2026-12-06"),
        ("second", "Jane Roe", "2026-12-05"),
    ]


def test_a_comment_may_begin_with_a_mark() -> None:
    said = {
        "A": ("A", ""),
        "V": ("V", ""),
        "C: use 2.5": ("C", "use 2.5"),
        "Q :\nwhy?": ("Q", "why?"),
        "C": ("C", "(Text without words)"),
        "A beam is missing": ("", "A beam is missing"),
        "ACI: see 5.3": ("", "ACI: see 5.3"),
    }
    found = read(*(at(number, words) for number, words in enumerate(said, 1)))
    assert [(comment.mark, comment.words) for comment in found] == list(said.values())


def test_what_is_no_comment_is_not_read() -> None:
    link = DictionaryObject({NameObject("/Subtype"): NameObject("/Popup")})
    assert read() == []
    assert (
        read(at(2, "Accepted set by J. Roe", StateModel="Review", State="Accepted"), at(3, Subtype=link["/Subtype"]))
        == []
    )


# --- into the log


def collected(tmp_path: Path, *notes: Note, log: str | None = None) -> tuple[list[str], checklog.Log]:
    (tmp_path / "C-101_A.pdf").write_bytes(returned(*notes))
    if log is not None:
        (tmp_path / "log.csv").write_text(log, encoding="utf-8")
    said = comments.collect(tmp_path / "C-101_A.pdf", tmp_path / "log.csv").splitlines()
    return said, checklog.read(tmp_path / "log.csv")


def test_a_new_log_is_made_and_tied_to_the_file(tmp_path: Path) -> None:
    said, log = collected(tmp_path, at(2, "C: use 2.5"), at(3, "A"), over(2, 4, "check these"))
    added = len((tmp_path / "C-101_A.pdf").read_bytes()) - len(issued())
    ids = [line.id for line in record().lines]
    assert said == [
        f"C-207, revision B, for check, 2026-12-01; file seal: {added} bytes added after issue",
        f"{tmp_path}/log.csv: 3 added, 0 held already",
        "  row 2, 2 to 4: check these",
        f"  row 3, {ids[1]}: C: use 2.5",
        f"  row 4, {ids[2]}: A",
    ]
    assert [(e.line, e.mark, e.initials, e.date, e.comment, e.state) for e in log.entries] == [
        ("2 to 4", "", "JR", "2026-12-05", "check these", "open"),
        (ids[1], "C", "JR", "2026-12-05", "use 2.5", "open"),
        (ids[2], "A", "JR", "2026-12-05", "", ""),
    ]
    marks = checklog.expand(log, record())
    assert {id_: mark.letter for id_, mark in marks.by_line.items()} == {ids[1]: "C", ids[2]: "A"}
    assert marks.untied == ()


def test_rows_are_added_once_behind_the_others(tmp_path: Path) -> None:
    own = "mine,line,mark,initials,date\r\nx,4,A,JR,2026-12-05\r\n"
    said, log = collected(tmp_path, at(2, "why?"), at(2, "why?"), log=own)
    assert said[1:4] == [
        f"{tmp_path}/log.csv: 1 added, 1 held already",
        "rows of the log taken as set on this file: 1",
        f"  row 3, {record().lines[1].id}: why?",
    ]
    assert [row["mine"] for row in log.rows] == ["x", ""] and log.line_end == "\r\n"
    before = (tmp_path / "log.csv").read_bytes()
    said = comments.collect(tmp_path / "C-101_A.pdf", tmp_path / "log.csv").splitlines()
    assert said[1:] == [f"{tmp_path}/log.csv: 0 added, 2 held already"]
    assert (tmp_path / "log.csv").read_bytes() == before


def test_rows_written_by_hand_are_tied_even_without_a_comment_in_the_file(tmp_path: Path) -> None:
    path, log = tmp_path / "C-207_B.pdf", tmp_path / "log.csv"
    path.write_bytes(issued())
    log.write_text("line,mark,initials,date\n4,A,JR,2026-12-05\n")
    assert comments.collect(path, log).splitlines() == [
        "C-207, revision B, for check, 2026-12-01; file seal: intact",
        f"{log}: 0 added, 0 held already",
        "rows of the log taken as set on this file: 1",
    ]
    line = record().lines[3]
    assert checklog.read(log).entries[0].ties == ((line.id, line.content[:16]),)


def test_what_cannot_be_added_is_said(tmp_path: Path) -> None:
    ink = DictionaryObject({NameObject("/Subtype"): NameObject("/Ink")})["/Subtype"]
    said, log = collected(
        tmp_path, note(Text, 1, (300, 400, 310, 410), "see letter"), at(2, "who?", T=None), at(3, "when?", M=None),
        at(4, Subtype=ink), at(5, "placed"),
    )  # fmt: skip
    assert [entry.comment for entry in log.entries] == ["placed"]
    sheet = numbers()[2][0]
    assert said[3:] == [
        "not added: 4",
        "  sheet 1, Jane Roe: 'see letter' stands on no line",
        f"  sheet {sheet}, no author: 'who?' names no author",
        f"  sheet {sheet}, Jane Roe: 'when?' states no date",
        f"  sheet {sheet}, Jane Roe: '' has no words",
    ]


def test_no_comment_becomes_a_formula_of_a_spreadsheet(tmp_path: Path) -> None:
    words = ["=2+3", "+1", "-see S-201", "@SUM(A1)"]
    notes = [at(number, text) for number, text in enumerate(words, 1)]
    _, log = collected(tmp_path, *notes)
    assert [entry.comment for entry in log.entries] == [f"'{text}" for text in words]
    assert "0 added, 4 held already" in comments.collect(tmp_path / "C-101_A.pdf", tmp_path / "log.csv")


def test_bad_rows_of_the_log_are_named_and_nothing_is_written(tmp_path: Path) -> None:
    bad = "line,mark,initials,date\n1,Z,JR,2026-12-05\n99,A,JR,2026-12-05\n"
    with pytest.raises(InputError, match="row 2, mark: needed A agreed"):
        collected(tmp_path, at(2, "x"), log=bad)
    assert (tmp_path / "log.csv").read_text() == bad


@pytest.mark.parametrize(
    ("name", "data", "error", "said"),
    [
        ("a.html", b"<html></html>", CommandError, "a.html is no PDF; comments are read from a PDF"),
        ("a.txt", b"text", CommandError, "a.txt is neither a PDF nor an HTML file"),
        ("a.pdf", b"%PDF-1.7 broken", MismatchError, "the attachments cannot be taken out of the PDF"),
    ],
)
def test_a_file_that_is_no_issued_pdf(
    name: str, data: bytes, error: type[Exception], said: str, tmp_path: Path
) -> None:
    (tmp_path / name).write_bytes(data)
    with pytest.raises(error, match=re.escape(said)):
        comments.collect(tmp_path / name, tmp_path / "log.csv")
    assert not (tmp_path / "log.csv").exists()


def test_the_command(tmp_path: Path, capsys: Capture) -> None:
    path, log = tmp_path / "back.pdf", tmp_path / "log.csv"
    path.write_bytes(returned(at(2, "A")))
    before = path.read_bytes()
    assert cli.main(["comments", str(path), "--check-log", str(log)]) == 0
    assert f"{log}: 1 added, 0 held already\n" in capsys.readouterr().out
    assert path.read_bytes() == before
    assert checklog.read(log).entries[0].mark == "A"
    assert cli.main(["comments", str(tmp_path / "none.pdf"), "--check-log", str(log)]) == 2
    assert capsys.readouterr().err.startswith(f"calckit: {tmp_path}/none.pdf cannot be read")
