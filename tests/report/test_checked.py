"""The checker's copy: marks, coverage, marks that fell off and comments, read back from both files."""

from __future__ import annotations

import html as markup
import re
from dataclasses import replace
from functools import cache
from pathlib import Path
from typing import Any

import pytest
from pypdf.generic import ContentStream

from calckit.core.assemble import assemble
from calckit.core.record import Record
from calckit.errors import InputError
from calckit.report import checked, checklog, html, pdf, view
from calckit.report.checked import FallenView
from calckit.report.comments import sheets_of_lines
from calckit.report.model import Ref
from tests.building import COLUMNS, Building
from tests.report import sample
from tests.report.sheets import Run, Sheets
from tests.report.test_pdf import MARGIN, _places

DAY = "2026-12-01"
HEAD = ",".join(checklog.COLUMNS)
TYPED = sample.HOSTILE.replace('"', '""')
ROWS = (
    "1-20,A,JR,2026-12-05,,,,,,,",
    "24 to 40,A,KL,2026-12-06,,,,,,,",
    "38,Q,JR,2026-12-06,Which weight is in W?,S-201 shows a planted roof,The base shear moves with it,State it,,open,",
    "22,C,KL,2026-12-07,Is this coefficient right?,Table 12.8-2,,Check the row,Row confirmed on line 22,answered,",
    "h_n,V,JR,2026-12-07,Height is from the wrong grid,,,Take grid A,Grid A is used,closed by JR,",
    f'section Notes,,KL,2026-12-07,"{TYPED}",,,,,,',
)
MARKED = {
    **dict.fromkeys(range(1, 21), "AJR12-05"), **dict.fromkeys(range(24, 41), "AKL12-06"), 38: "QJR12-06[1]",
    22: "CKL12-07[2]", 6: "VJR12-07[3]", 59: "[4]", 60: "[4]", 61: "[4]",
}  # fmt: skip
"""What stands in the Mark column, by line, as the rows say."""


def log(*rows: str) -> checklog.Log:
    return checklog.parse("\n".join((HEAD, *rows, "")), "log.csv")


def model(record: Record, content: Any, *rows: str, on: Record | None = None, name: str = "log.csv") -> view.View:
    laid = checked.lay(replace(log(*rows), name=name), record, on)
    return checked.onto(view.build(record, content), record, laid)


def printed(*rows: str, **fields: Any) -> tuple[Sheets, str]:
    """Both files of the sample with these rows laid over it."""
    made = model(sample.record(**fields), sample.content(), *rows)
    data = pdf.render(made, figures=sample.figures(), attachments=[], date=DAY)
    return Sheets(data), html.render(made, figures=sample.figures(), attachments=[]).decode()


@cache
def both() -> tuple[Sheets, str]:
    return printed(*ROWS, check_level="other person", check_method="line by line")


def in_columns(found: Sheets) -> tuple[dict[int, list[Run]], dict[int, int]]:
    """What is set in the Mark column beside each line number, and the sheet of each number.

    Numbers of lines end where the head "Line" ends; marks are of 8 points between the heads "Mark" and "Source".
    """
    marks: dict[int, list[Run]] = {}
    place: dict[int, int] = {}
    for sheet in range(1, len(found) + 1):
        heads = found.runs(sheet)  # the head that a table repeats on its next sheet is no content
        mark = next((run for run in heads if run.text.strip() == "Mark"), None)
        if mark is None:
            continue
        row = {run.text.strip(): run for run in heads if run.y == mark.y}
        cells = [run for run in heads if "TD" in run.tags and "Formula" not in run.tags]
        ends = row["Line"].x1
        numbers = {int(run.text): run.y for run in cells if run.text.isdecimal() and abs(run.x1 - ends) < 0.5}
        for n, y in numbers.items():
            below = max((other for other in numbers.values() if other < y), default=0)
            marks[n] = [
                run for run in cells
                if run.size < 8.5 and mark.x0 - 5 < run.x0 < row["Source"].x0 - 5 and below + 3 < run.y < y + 3
            ]  # fmt: skip
            assert all(run.x1 <= row["Source"].x0 - 5 for run in marks[n]), (sheet, marks[n])
            place[n] = sheet
    return marks, place


def in_sheets(found: Sheets) -> dict[int, str]:
    """What stands in the Mark column beside each line number, blanks left out."""
    return {
        n: squeezed("".join(run.text for run in sorted(runs, key=lambda run: (-round(run.y), run.x0))))
        for n, runs in in_columns(found)[0].items()
    }


def in_page(page: str) -> dict[int, str]:
    """What stands below each line number of the HTML file."""
    cells = re.findall(r'<tr id="line-(\d+)".*?<th scope="row">\1(.*?)</th>', page, re.DOTALL)
    return {int(n): "".join(re.sub("<[^>]*>", "", cell).split()) for n, cell in cells}


def squeezed(text: str) -> str:
    return "".join(text.split())


# --- marks


def test_every_mark_stands_beside_its_line_in_both_files_and_no_other() -> None:
    found, page = both()
    lines = {line.n for line in sample.record().lines}
    assert {n: text for n, text in in_sheets(found).items() if text} == MARKED
    assert {n: text for n, text in in_page(page).items() if text} == MARKED
    assert set(in_sheets(found)) == set(in_page(page)) == lines


def test_the_box_stays_where_no_mark_is() -> None:
    _, page = both()
    boxes = page.count('<span class="mark" aria-hidden="true">')
    assert boxes == len(sample.record().lines) - sum(not text.startswith("[") for text in MARKED.values())


def test_the_year_is_printed_where_marks_are_of_two_years() -> None:
    found, page = printed("1,A,JR,2026-12-05,,,,,,,", "2,A,long-initials,2027-01-05,,,,,,,")
    for marks in (in_sheets(found), in_page(page)):
        assert (marks[1], marks[2]) == ("AJR2026-12-05", "Along-initials2027-01-05")


def test_without_a_log_the_columns_are_blank_and_there_is_no_check_section() -> None:
    made = view.build(sample.record(), sample.content())
    found = Sheets(pdf.render(made, figures=sample.figures(), attachments=[], date=DAY))
    page = html.render(made, figures=sample.figures(), attachments=[]).decode()
    assert not any(in_sheets(found).values()) and not any(in_page(page).values())
    assert 'id="check"' not in page and "Marksthatfelloff" not in found.text()
    assert f"_____of{len(sample.record().lines)}" in found.text()


def test_lines_are_found_on_their_sheets_whether_marked_or_not() -> None:
    made = model(sample.record(), sample.content(), *ROWS)
    data = pdf.render(made, figures=sample.figures(), attachments=[], date=DAY)
    _, place = in_columns(Sheets(data))
    assert sheets_of_lines(data, Record({})) == {n: str(sheet) for n, sheet in place.items()}
    named = sheets_of_lines(data, Record({"sheet_prefix": "S-", "first_sheet": 11}))
    assert named == {n: f"S-{sheet + 10}" for n, sheet in place.items()}


# --- coverage and sign-off


def test_coverage_of_lines_and_of_inputs() -> None:
    agreed = {n for n, text in MARKED.items() if text[0] in "AV"}
    lines = sample.record().lines
    inputs = {line.n for line in lines if line.kind in ("given", "assumption", "judgment")}
    said = f"{len(agreed)} of {len(lines)}", f"{len(agreed & inputs)} of {len(inputs)}"
    assert said == ("36 of 61", "11 of 16")
    found, page = both()
    text = found.text()
    assert all(text.count(squeezed(count)) == 2 and page.count(count) == 2 for count in said)  # cover and section
    unmarked = "Alllines,notmarked:21,23,41–61"
    assert unmarked in text
    assert unmarked in squeezed(re.sub("<[^>]*>", "", page))
    named = f"Inputs,assumptionsandanswers,notmarked:{','.join(map(str, sorted(inputs - set(MARKED) | {59} & inputs)))}"
    assert named in text


def test_who_marked_is_counted() -> None:
    rows = [(one.initials, one.letters, one.comments, one.days) for one in _checked(ROWS).checkers]
    assert rows == [
        ("JR", (19, 0, 1, 1), 2, "2026-12-05 to 2026-12-07"), ("KL", (16, 1, 0, 0), 2, "2026-12-06 to 2026-12-07"),
    ]  # fmt: skip


def _checked(rows: tuple[str, ...]) -> checked.CheckedView:
    made = model(sample.record(), sample.content(), *rows).checked
    assert made is not None
    return made


def test_level_and_method_stand_on_the_cover_and_under_check() -> None:
    found, page = both()
    cover = squeezed(found.reader.pages[0].extract_text())
    assert "LevelofthecheckMethodofthecheckLinescheckedInputscheckedotherpersonlinebyline36of6111of16" in cover
    assert "Levelofthecheck:otherperson.Methodofthecheck:linebyline." in found.text()
    assert "<strong>other person</strong>" in page and "<td class=\"words\">line by line</td>" in page


def test_a_self_check_is_said() -> None:
    found, page = printed(*ROWS, prepared_by="J. Doe", checked_by="j.  doe")
    said = "J. Doe is named both as originator and as checker"
    assert found.text().count(squeezed(said)) == 2 and page.count(said) == 2


def test_the_key_is_printed_once() -> None:
    found, page = both()
    assert found.text().count("correctedandverified") == page.count("corrected and verified") == 1


# --- marks that fell off


def everything_agreed(on: Record) -> str:
    return f"1 to {len(on.lines)},A,JR,2026-12-05,,,,,,,"


def fallen(old: Record, new: Record) -> tuple[FallenView, ...]:
    tied = checklog.tie(log(everything_agreed(old)), old)
    laid = checked.lay(tied, new, None)
    made = checked.onto(view.build(new, []), new, laid).checked
    assert made is not None
    return made.fallen


def named(record: Record) -> Record:
    record.calculation["notebook"] = "building"
    return record


def worked(**fields: Any) -> Record:
    """The building of the tests, as an issue would have it."""
    return named(Building(**fields).record(date=DAY))


def heavier() -> Record:
    columns = dict(COLUMNS)
    columns["w_x [kip]"] = ("890", *columns["w_x [kip]"][1:])
    return worked(columns=columns)


def rests_on(record: Record, id_: str) -> set[int]:
    """The numbers of a line and of all that rest on it, from the graph of the record."""
    found = {id_}
    for line in record.lines:  # lines stand after what they rest on
        if found & set(line.inputs):
            found.add(line.id)
    return {record.line(one).n for one in found}


def test_a_changed_weight_blanks_the_marks_of_all_that_rests_on_it_and_no_other() -> None:
    old, new = worked(), heavier()
    gone = rests_on(new, "w_x")
    made = model(new, [], everything_agreed(old), on=old)
    marks = in_sheets(Sheets(pdf.render(made, figures={}, attachments=[], date=DAY)))
    page = in_page(html.render(made, figures={}, attachments=[]).decode())
    everything = {line.n for line in new.lines}
    assert 20 < len(gone) < len(everything) - 20
    for found in (marks, page):
        assert {n for n, text in found.items() if text == "AJR12-05"} == everything - gone
        assert {n for n, text in found.items() if text == ""} == gone


def test_marks_that_fell_off_are_named_with_the_line_that_changed() -> None:
    new = heavier()
    first = Ref(new.line("w_x").n, "w_x")
    changed, resting = fallen(worked(), new)
    assert (changed.mark, changed.refs, changed.cause, changed.roots) == ("A JR 2026-12-05", (first,), "changed", ())
    assert {ref.n for ref in resting.refs} == rests_on(new, "w_x") - {first.n}
    assert (resting.cause, resting.roots) == ("rests on what changed", (first,))


def noted(text: str) -> Record:
    calc = Building(second=False).calc(date=DAY)
    calc.note("N-roof", text)
    calc.note("N-wind", "Wind is not covered here.")
    return named(assemble(calc))


def test_a_changed_note_drops_its_own_mark_alone() -> None:
    (lost,) = fallen(noted("A planted roof."), noted("No planted roof."))
    assert [ref.id for ref in lost.refs] == ["N-roof"] and lost.cause == "changed"


def test_a_line_that_is_gone_is_named() -> None:
    (lost,) = fallen(noted("A planted roof."), worked(second=False))
    assert (lost.refs, lost.gone, lost.cause) == ((), ("N-roof", "N-wind"), "the line is there no more")


# --- comments


def test_comments_keep_their_numbers_and_open_ones_come_first() -> None:
    found = _checked(ROWS).comments
    assert [(one.number, one.state) for one in found] == [(1, "open"), (4, "open"), (2, "answered"), (3, "closed")]
    assert [(label, words) for label, words in found[0].parts] == [
        ("Concern", "Which weight is in W?"), ("Basis", "S-201 shows a planted roof"),
        ("Why it matters", "The base shear moves with it"), ("Asked", "State it"),
    ]  # fmt: skip


def test_every_part_of_a_comment_is_printed_in_both_files() -> None:
    found, page = both()
    text, shown = found.text(), squeezed(markup.unescape(re.sub("<[^>]*>", "", page)))
    for one in _checked(ROWS).comments:
        for words in (one.by, one.answer, one.state, *(words for _, words in one.parts)):
            assert squeezed(words) in text
            assert squeezed(words) in shown


def test_a_comment_is_text_and_never_markup() -> None:
    found, page = both()
    assert found.text().count(squeezed(sample.HOSTILE)) == Sheets(_plain()).text().count(squeezed(sample.HOSTILE)) + 1
    assert "<script" not in page
    assert markup.escape(sample.HOSTILE, quote=False)[:30] in page.replace("&#34;", '"').replace("&#39;", "'")


@cache
def _plain() -> bytes:
    made = view.build(sample.record(), sample.content())
    return pdf.render(made, figures=sample.figures(), attachments=[], date=DAY)


def grays(found: Sheets) -> set[float]:
    """The grays in which text is set on the sheets, 0 being black."""
    seen, gray = set[float](), 0.0
    for page in found.reader.pages:
        for operands, operator in ContentStream(page.get_contents(), found.reader).operations:
            if operator in (b"scn", b"sc", b"g"):
                gray = float(operands[0])
            elif operator in (b"Tj", b"TJ"):
                seen.add(round(gray, 3))
    return seen


def contrast(gray: float) -> float:
    """Contrast of a gray on white (Web Content Accessibility Guidelines 2.1, relative luminance and contrast ratio)."""
    light = gray / 12.92 if gray <= 0.03928 else ((gray + 0.055) / 1.055) ** 2.4
    return 1.05 / (light + 0.05)


def test_a_closed_comment_is_dimmed_and_stays_legible() -> None:
    (closed,) = [row for row in ROWS if "closed by" in row]
    with_it, page = both()
    without, other = printed(*(row for row in ROWS if row != closed))
    (gray,) = grays(with_it) - grays(without)
    assert 4.5 <= contrast(gray) < 10
    assert '<tr id="comment-3" class="closed">' in page and 'class="closed"' not in other
    (color,) = re.findall(r"\.closed > \* \{ color: #(\w\w)\1\1; \}", page)
    assert 4.5 <= contrast(int(color, 16) / 255) < 10


def test_the_cover_counts_what_is_left() -> None:
    said = {one.label: (one.text, [ref.n for ref in one.refs]) for one in model(
        heavier(), [], everything_agreed(worked()), "W,Q,JR,2026-12-06,why,,,,,,",
        on=worked(),
    ).statements}  # fmt: skip
    gone = sorted(rests_on(heavier(), "w_x"))
    assert said["Comments of the check not closed"] == ("1", [heavier().line("W").n])
    assert said["Marks of the check that fell off"] == (str(len(gone)), gone)


# --- the sheets


@cache
def crowded() -> Sheets:
    """Comments longer than a sheet, more than fit on one, initials and a file name wider than their columns."""
    rows = [
        "1-61,A,jroe-abcdefghijklmnop,2026-12-05,,,,,,,",
        f"50,C,JR,2027-12-07,{'word ' * 2000},{'W' * 200},,,{'answer ' * 300},answered,",
        *(f"{n},Q,KL,2026-12-07,Why is it {n}?,Sheet S-201,The result moves,Say why,,open," for n in range(1, 40)),
    ]
    made = model(sample.record(paper="A4"), sample.content(), *rows, name="log" * 60 + ".csv")
    return Sheets(pdf.render(made, figures=sample.figures(), attachments=[], date=DAY))


@pytest.mark.parametrize("made", [lambda: both()[0], crowded], ids=["sample", "crowded"])
def test_the_rules_of_the_sheets_hold(made: Any) -> None:
    found = made()
    split = [row for row in found.elements("TR") if len(_places(row)) != 1]
    assert len(split) == (0 if found is both()[0] else 1)  # the comment that is longer than a sheet
    assert re.search(r"<pdfuaid:part>1</pdfuaid:part>", found.catalog["/Metadata"].get_data().decode())
    for number in range(1, len(found) + 1):
        width, height = (float(side) for side in found.reader.pages[number - 1].mediabox[2:])
        assert found.body(number) and not {"H1", "H2", "H3"} & set(found.body(number)[-1].tags), number
        for run in found.runs(number):
            assert run.size >= (5.5 if "Formula" in run.tags else 8.0) - 1e-6, (number, run)
            inside = run.x0 >= MARGIN and run.x1 <= width - MARGIN and MARGIN <= run.y <= height - MARGIN
            assert inside, (number, run)


def test_marks_wider_than_their_column_are_broken_in_it() -> None:
    marks = in_sheets(crowded())  # reading them asserts that each ends before the next column
    assert marks[45] == "Ajroe-abcdefghijklmnop2026-12-05"
    assert marks[50] == "CJR2027-12-07[1]"


# --- which record new rows are tied to


def test_former_is_the_record_at_the_target_else_the_latest_of_another_revision(tmp_path: Path) -> None:
    def save(name: str, **fields: Any) -> None:
        (tmp_path / f"{name}.record.json").write_text(sample.record(**fields).to_json(), encoding="utf-8")

    def found() -> str:
        former = checked.former_beside(tmp_path, "C-207_C", sample.record(revision="C"))
        return former.calculation["revision"] if former else ""

    (tmp_path / "broken.record.json").write_text("{}")
    save("other", number="C-9", date="2026-12-30")
    assert found() == ""
    for days, latest in ((("2026-11-01", "2026-12-01"), "B"), (("2026-12-02", "2026-12-01"), "A")):
        for revision, day in zip("AB", days, strict=True):
            save(f"C-207_{revision}", revision=revision, date=day)
        assert found() == latest  # whatever the order of the folder
    save("C-207_C", revision="C", date="2026-10-01")
    assert found() == "C"


def test_new_rows_are_tied_to_the_former_record_and_tied_ones_stay() -> None:
    old, new = noted("A planted roof."), noted("No planted roof.")
    row = "N-roof,A,JR,2026-12-05,,,,,,,"
    assert [one.gone or one.refs[0].id for one in _fell(log(row), new, old)] == ["N-roof"]
    assert _fell(log(row), new, None) == ()
    again = checked.lay(checklog.tie(log(row), old), new, new)
    assert again.tied == 0 and len(again.marks.fallen) == 1


def _fell(rows: checklog.Log, record: Record, former: Record | None) -> tuple[FallenView, ...]:
    made = checked.onto(view.build(record, []), record, checked.lay(rows, record, former)).checked
    assert made is not None
    return made.fallen


def test_a_row_that_stands_on_no_line_of_the_former_record_is_refused() -> None:
    with pytest.raises(InputError, match=r"row 2, line: needed a line number up to .*; given N-new"):
        checked.lay(log("N-new,A,JR,2026-12-05,,,,,,,"), noted("x"), Building(second=False).record())
