"""The check log: reading, marks that hold and fall off, coverage, comments, writing back."""

from __future__ import annotations

import os
import re
from functools import cache
from pathlib import Path
from typing import Any

import pytest

from calckit.core.assemble import assemble
from calckit.core.record import Line, Record, canonical, digest
from calckit.errors import CommandError, InputError
from calckit.report import checklog
from calckit.report.checklog import Log, expand, parse, self_check, tie
from calckit.report.model import Ref
from tests.building import COLUMNS, Building

HEAD = ",".join(checklog.COLUMNS)


def record(*lines: Line) -> Record:
    """A calculation of these lines, numbered in order."""
    for number, line in enumerate(lines, 1):
        line.n, line.content = number, digest(canonical(line.hashed()))
    return Record({}, lines=list(lines))


def small(first: float = 62.0) -> Record:
    return record(
        Line("h_n", "given", "h_n", "structural height", first, "ft", "62 ft", section="Height"),
        Line("X.T_a", "computed", "T_a", "approximate period", 0.76, "s", "0.76 s", part="X", section="Period"),
        Line("X.drift", "check", meaning="Story drift", verdict="OK", part="X", section="Drift and stability"),
        Line("N-1", "note", text="Watch the roof.", section="Drift and stability"),
    )


def log(*rows: str, head: str = "line,mark,initials,date") -> Log:
    return parse("\n".join((head, *rows, "")), "log.csv")


def marked(entry: Log, place: int = 0) -> list[str]:
    """The ids that the row is tied to."""
    return [id_ for id_, _ in entry.entries[place].ties]


# --- reading and writing


@pytest.mark.parametrize("end", ["\n", "\r\n"])
@pytest.mark.parametrize("delimiter", [",", ";", "\t"])
@pytest.mark.parametrize("bom", ["", "\ufeff"])
def test_what_is_not_the_kits_own_comes_back_as_it_was(delimiter: str, bom: str, end: str) -> None:
    rows = (
        ("mine", "line", "mark", "initials", "date", "comment", "answer"),
        ("z", "12", "A", "JR", "2026-12-05", "", ""),
        ("", "", "", "", "", "", ""),
        ("", "X.*", "q", "JR", "2026-12-05", '"Why, and\nwhere?"', ""),
        ("a", "N-1", "V", "K.L.", "2026-12-06", "", ""),
    )
    text = bom + "".join(delimiter.join(row) + end for row in rows)
    read = parse(text, "log.csv")
    assert [(entry.number, entry.line, entry.mark) for entry in read.entries] == [
        (2, "12", "A"),
        (4, "X.*", "Q"),
        (5, "N-1", "V"),
    ]
    assert read.entries[1].comment == "Why, and\nwhere?"
    written = read.to_csv()
    assert written.replace('"', "") == text.replace('"', "")
    assert parse(written, "log.csv") == read


def test_columns_that_were_not_there_follow_the_others() -> None:
    tied = tie(log("1,A,JR,2026-12-05,x", head="Line,Mark,Initials,DATE,mine"), small())
    assert tied.columns == (
        "line", "mark", "initials", "date", "mine", "comment", "basis", "why_it_matters", "action_asked", "answer",
        "state", "content",
    )  # fmt: skip
    assert tied.rows[0]["mine"] == "x"
    assert tied.rows[0]["content"] == f"h_n:{small().lines[0].content[:16]}"


def test_every_bad_row_is_named_at_once() -> None:
    rows = (
        "1,A,JR,2026-12-05,,,,,,,",
        ",A,JR,2026-12-05,,,,,,,",
        "1,X,JR,2026-12-05,,,,,,,",
        "1,,JR,2026-12-05,,,,,,,",
        "1,C,,5 Dec,,,,,,,",
        "1,A,JR,2026-02-30,,,,,,closed by JR,",
        "1,Q,JR,2026-12-05,why,,,,,done,",
        "1,Q,JR,2026-12-05,why,,,,,answered,",
        "1,Q,JR,2026-12-05,why,,,,so,answered by AB,",
        "1,A,JR,2026-12-05,,,,,,,touched",
        "h_n,A,JR,2026-12-05,,,,,,,T_a:0123456789abcdef",
    )
    with pytest.raises(InputError, match=r"check log log\.csv") as caught:
        log(*rows, head=HEAD)
    assert str(caught.value).splitlines() == [
        "check log log.csv: row 3, line: needed what the row stands on; given nothing; cure: write a line number such "
        "as 12",
        "  row 4, mark: needed A agreed, C correct this, Q question, V corrected and verified; given X",
        "  row 5: needed a mark or a comment; given neither; cure: write one, or remove the row",
        "  row 6, comment: needed a comment with the mark C; given none; cure: say what is meant",
        "  row 6, initials: needed the initials of who set the row; given nothing",
        "  row 6, date: needed a day, such as 2026-12-05; given 5 Dec; cure: keep the cell as text",
        "  row 7, date: needed a day, such as 2026-12-05; given 2026-02-30; cure: keep the cell as text",
        "  row 7: needed a comment for its state and answer; given none; cure: write the comment, or empty both cells",
        "  row 8, state: needed open, answered or closed by JR; given done",
        "  row 9, answer: needed an answer to a comment that is answered; given none; cure: say how it was met",
        "  row 10, state: needed open, answered or closed by JR; given answered by AB",
        "  row 11, content: needed what the kit wrote; given touched; cure: empty the cell",
        "  row 12, content: needed the content of h_n; given that of T_a; cure: empty the cell",
    ]


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", "header: needed a column 'line'; given nothing"),
        ("line,mark,date\n", "header: needed a column 'initials'; given line, mark, date"),
        (f"{HEAD},line\n", "header: needed each column once; given 'line' 2 times"),
        ("line,mark,initials,date\n1,A,JR,2026-12-05,more\n", "row 2: needed 4 cells; given 5"),
        ('line,mark,initials,date\n1,"A,JR,2026-12-05\n', "table: needed CSV text; given unexpected end of data"),
    ],
)
def test_a_table_that_is_none(text: str, said: str) -> None:
    with pytest.raises(InputError, match=re.escape(said)):
        parse(text, "log.csv")


def test_blank_columns_at_the_end_are_nothing() -> None:
    assert marked(tie(log("1,A,JR,2026-12-05,,", head="line,mark,initials,date,,"), small())) == ["h_n"]


def test_a_file_that_cannot_be_read(tmp_path: Path) -> None:
    with pytest.raises(CommandError, match=r"none\.csv cannot be read: No such file"):
        checklog.read(tmp_path / "none.csv")
    (tmp_path / "old.csv").write_bytes("line,mark,initials,date\n1,A,Ä,2026-12-05\n".encode("cp1252"))
    with pytest.raises(CommandError, match=r"old\.csv is not UTF-8 text; cure: save it as CSV in UTF-8"):
        checklog.read(tmp_path / "old.csv")


def test_a_log_that_cannot_be_written_stays_as_it_was(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "log.csv"
    checklog.write(path, log("1,A,JR,2026-12-05"))
    before = path.read_bytes()

    def refuse(*_: object) -> None:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(os, "replace", refuse)
    with pytest.raises(CommandError, match=r"log\.csv cannot be written"):
        checklog.write(path, tie(checklog.read(path), small()))
    assert path.read_bytes() == before
    assert os.listdir(tmp_path) == ["log.csv"]


# --- lines of a row


@pytest.mark.parametrize(
    ("place", "ids"),
    [
        ("2", ["X.T_a"]),
        ("2-3", ["X.T_a", "X.drift"]),
        ("2 to 3", ["X.T_a", "X.drift"]),
        ("2 – 3", ["X.T_a", "X.drift"]),
        ("X.T_a", ["X.T_a"]),
        ("N-1", ["N-1"]),
        ("X.*", ["X.T_a", "X.drift"]),
        ("section Drift and stability", ["X.drift", "N-1"]),
        ("Section drift and stability", ["X.drift", "N-1"]),
    ],
)
def test_what_a_row_stands_on(place: str, ids: list[str]) -> None:
    assert marked(tie(log(f"{place},A,JR,2026-12-05"), small())) == ids


def test_every_row_that_stands_on_no_line_is_named_at_once() -> None:
    rows = [
        f"{place},A,JR,2026-12-05" for place in ("5", "Dec-86", "3-2", "3-9", "X.T_b", "Y.*", "section Wind", "h_n")
    ]
    for step in (tie, expand):
        with pytest.raises(InputError, match=r"check log log\.csv") as caught:
            step(log(*rows), small())
        assert [fault.symbol for fault in caught.value.faults] == [f"row {n}, line" for n in range(2, 9)]
    said = [str(fault) for fault in caught.value.faults]
    assert said[1] == (
        "row 3, line: needed a line number up to 4, a range such as 12 to 86, or an id such as N-1, X.T_a, X.drift; "
        "given Dec-86"
    )
    assert "an id such as X.T_a" in said[4]
    assert said[5:] == [
        "row 7, line: needed a part: X.*; given Y.*",
        "row 8, line: needed section and one of: Height; Period; Drift and stability; given section Wind",
    ]


# --- marks that hold and fall off


@cache
def building() -> Record:
    return Building().record()


def everything_agreed(on: Record) -> Log:
    return tie(log(f"1-{len(on.lines)},A,JR,2026-12-05"), on)


def test_nothing_falls_off_an_unchanged_calculation() -> None:
    marks = expand(everything_agreed(building()), Building().record())
    lines = len(building().lines)
    assert marks.fallen == () and len(marks.by_line) == lines
    assert marks.coverage.text() == f"checked {lines} of {lines}; to be corrected 0; in question 0; not marked 0"


def test_a_changed_weight_drops_the_marks_of_what_rests_on_it_and_no_other() -> None:
    columns = dict(COLUMNS)
    columns["w_x [kip]"] = ("890", *columns["w_x [kip]"][1:])
    changed = Building(columns=columns).record()
    rests = {"w_x"}
    for line in changed.lines:  # lines stand after what they rest on
        if rests & set(line.inputs):
            rests.add(line.id)
    assert {"W", "X.V", "Y.F_x"} < rests and not {"h_x", "S_DS", "X.T_a"} & rests
    marks = expand(everything_agreed(building()), changed)
    assert {lost.ref.id for lost in marks.fallen} == rests
    assert all(lost.changed and lost.mark.row == 2 for lost in marks.fallen)
    assert set(marks.by_line) == {line.id for line in changed.lines} - rests
    assert {ref.id for ref in marks.coverage.unmarked} == rests


def noted(text: str) -> Record:
    calc = Building(second=False).calc()
    calc.note("N-roof", text)
    calc.note("N-wind", "Wind is not covered here.")
    return assemble(calc)


def test_a_changed_note_drops_its_own_mark_alone() -> None:
    marks = expand(everything_agreed(noted("A planted roof.")), noted("No planted roof."))
    assert [lost.ref.id for lost in marks.fallen] == ["N-roof"]


def test_marks_stay_with_their_lines_when_these_are_numbered_anew() -> None:
    old = tie(log("2,A,JR,2026-12-05", "section Drift and stability,A,JR,2026-12-05"), small())
    first = Line("S_S", "given", "S_S", "spectral acceleration", 1.25)
    marks = expand(old, record(first, *small().lines[1:]))
    assert set(marks.by_line) == {"X.T_a", "X.drift", "N-1"}
    assert [ref.id for ref in marks.coverage.unmarked] == ["S_S"]


def test_a_line_that_is_gone_is_told_from_a_changed_one() -> None:
    old = tie(log("1-4,A,JR,2026-12-05", "2,Q,JR,2026-12-05,why", head="line,mark,initials,date,comment"), small())
    now = record(small(70.0).lines[0], *small().lines[2:])
    marks = expand(old, now)
    assert [(lost.ref, lost.mark.letter, lost.changed) for lost in marks.fallen] == [
        (Ref(1, "h_n"), "A", True),
        (Ref(0, "X.T_a"), "Q", False),
    ]
    (remark,) = marks.remarks
    assert (remark.place, remark.refs, remark.gone) == ("2", (), ("X.T_a",))


def test_new_rows_count_for_nothing_until_they_are_tied() -> None:
    new = log("1,A,JR,2026-12-05", "2,Q,JR,2026-12-05,why", head="line,mark,initials,date,comment")
    marks = expand(new, small())
    assert marks.by_line == {} and marks.untied == (2, 3)
    assert marks.remarks[0].refs == (Ref(2, "X.T_a"),)
    assert expand(tie(new, small()), small()).untied == ()


def test_rows_that_are_tied_stay_as_they_are() -> None:
    tied = tie(log("1,A,JR,2026-12-05"), small())
    again = tie(tied.with_rows([*tied.rows, {**tied.rows[0], "content": ""}]), small(70.0))
    contents = [row["content"] for row in again.rows]
    assert contents[0] == tied.rows[0]["content"] != contents[1]
    assert expand(again, small(70.0)).by_line["h_n"].row == 3


FULL = "line,mark,initials,date,comment,answer,state"


def letters(*rows: str, then: Record | None = None) -> dict[str, str]:
    marks = expand(tie(log(*rows, head=FULL), small()), then or small())
    return {id_: mark.letter for id_, mark in marks.by_line.items()}


def test_the_last_row_is_the_mark() -> None:
    assert letters("1,A,JR,2026-12-05,,,", "1,V,KL,2026-12-06,,,") == {"h_n": "V"}


@pytest.mark.parametrize("letter", ["C", "Q"])
def test_what_is_to_be_corrected_or_in_question_stays_until_it_is_closed(letter: str) -> None:
    agreed = "1-2,A,JR,2026-12-06,,,"
    assert letters(f"1,{letter},JR,2026-12-05,why,,", agreed) == {"h_n": letter, "X.T_a": "A"}
    assert letters(f"1,{letter},JR,2026-12-05,why,so,answered", agreed) == {"h_n": letter, "X.T_a": "A"}
    assert letters(f"1,{letter},JR,2026-12-05,why,so,closed by JR", agreed) == {"h_n": "A", "X.T_a": "A"}
    assert letters(f"1,{letter},JR,2026-12-05,why,so,closed by jr") == {}


def test_a_corrected_line_can_be_marked_again() -> None:
    first = tie(log("1,C,JR,2026-12-05,wrong height,,", head=FULL), small())
    assert expand(first, small(70.0)).by_line == {}
    verified = {"line": "1", "mark": "V", "initials": "JR", "date": "2026-12-09"}
    marks = expand(tie(first.with_rows([*first.rows, verified]), small(70.0)), small(70.0))
    assert marks.by_line["h_n"].letter == "V" and marks.fallen == ()
    assert [(remark.state, remark.changed) for remark in marks.remarks] == [("open", True)]


# --- coverage and comments


def test_coverage_counts_what_is_agreed_or_verified() -> None:
    rows = ("1,V,JR,2026-12-05,,,", "2,C,JR,2026-12-05,wrong,,", "3,Q,JR,2026-12-05,why,,")
    marks = expand(tie(log(*rows, head=FULL), small()), small())
    assert marks.coverage.text() == "checked 1 of 4; to be corrected 1; in question 1; not marked 1"
    assert (marks.coverage.checked, marks.coverage.total) == (1, 4)
    assert marks.coverage.unmarked == (Ref(4, "N-1"),)
    assert marks.coverage.marked == {
        "A": (), "C": (Ref(2, "X.T_a"),), "Q": (Ref(3, "X.drift"),), "V": (Ref(1, "h_n"),),
    }  # fmt: skip
    assert marks.inputs.text() == "checked 1 of 1; to be corrected 0; in question 0; not marked 0"
    few = expand(tie(log("2,A,JR,2026-12-05"), small()), small()).coverage
    assert few.text() == "checked 1 of 4; to be corrected 0; in question 0; not marked 3"
    assert few.unmarked == (Ref(1, "h_n"), Ref(3, "X.drift"), Ref(4, "N-1"))


def test_comments_come_with_their_answers_and_closed_ones_last() -> None:
    rows = (
        "1,Q,JR,2026-12-05,first,survey,,,S-201,closed by JR,",
        "X.*,,KL,2026-12-05,second,,,,,,",
        "2,C,JR,2026-12-06,third,ASCE 7-16,drift,change it,changed in revision B,,",
    )
    marks = expand(tie(log(*rows, head=HEAD), small()), small())
    assert [(remark.comment, remark.state) for remark in marks.remarks] == [
        ("second", "open"),
        ("third", "answered"),
        ("first", "closed"),
    ]
    third = marks.remarks[1]
    assert (third.basis, third.why_it_matters, third.action_asked, third.answer) == (
        "ASCE 7-16", "drift", "change it", "changed in revision B",
    )  # fmt: skip
    assert (third.row, third.letter, third.initials, third.date) == (4, "C", "JR", "2026-12-06")
    assert marks.remarks[0].refs == (Ref(2, "X.T_a"), Ref(3, "X.drift"))


@pytest.mark.parametrize("state", ["closed", "closed by KL", "CLOSED by K"])
def test_only_who_made_a_comment_closes_it(state: str) -> None:
    said = f"row 2, state: needed closed by JR; given {state}; cure: only who made a comment closes it"
    with pytest.raises(InputError, match=re.escape(said)):
        log(f"1,Q,JR,2026-12-05,why,so,{state}", head=FULL)


def test_a_comment_without_an_answer_cannot_be_closed() -> None:
    with pytest.raises(InputError, match="row 2, answer: needed an answer to a comment that is closed; given none"):
        log("1,Q,JR,2026-12-05,why,,closed by JR", head=FULL)


@pytest.mark.parametrize(
    ("fields", "said"),
    [
        ({"prepared_by": "J. Doe", "checked_by": "K. Lee"}, ""),
        ({"prepared_by": "J. Doe"}, ""),
        ({"checked_by": "J. Doe"}, ""),
        (
            {"prepared_by": "J. Doe ", "checked_by": "j. doe"},
            "self-check: J. Doe is named both as originator and as checker",
        ),
    ],
)
def test_self_check(fields: dict[str, Any], said: str) -> None:
    assert self_check(fields) == said
