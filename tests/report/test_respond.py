"""The response to comments, read back as a stranger would."""

from __future__ import annotations

import re
from functools import cache
from pathlib import Path
from typing import Any

import pytest

from calckit.core.record import digest
from calckit.errors import CommandError, InputError, MismatchError
from calckit.report import checked, checklog, pdf, seal, view
from calckit.report.attachments import Parcel
from calckit.report.respond import render, respond
from tests.report import sample
from tests.report.sheets import Sheets
from tests.report.test_checked import HEAD, MARGIN, ROWS, in_columns, squeezed
from tests.report.test_pdf import _places


@cache
def report() -> bytes:
    """The sample as an issued PDF."""
    record = sample.record(notebook="library", checked_by="J. Roe")
    for line in record.lines:
        line.content = digest(line.id)
    attached = Parcel("library", b"{}", b"{}", {}, record.to_json().encode()).pack()
    made = view.build(record, sample.content())
    return seal.apply(pdf.render(made, figures=sample.figures(), attachments=attached, date="2026-12-01"))


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "C-207_B.pdf").write_bytes(report())
    (tmp_path / "log.csv").write_text("\n".join((HEAD, *ROWS, "")))
    return tmp_path


def test_each_comment_stands_with_its_answer_and_the_sheet_of_its_line(folder: Path) -> None:
    said = respond(folder / "log.csv", folder / "C-207_B.pdf", folder)
    assert said.splitlines() == [
        str(folder / "C-207_B_response.pdf"),
        "  C-207, revision B, for check, 2026-12-01; file seal: intact",
        "  comments: 2 open, 1 answered, 1 closed",
        "  note: comment 1, 38: no answer yet",
        "  note: comment 4, section Notes: no answer yet",
        "  note: rows not tied to an issue yet, taken as set on this one: 2, 3, 4, 5, 6, 7",
    ]
    text = Sheets((folder / "C-207_B_response.pdf").read_bytes()).text()
    _, sheet = in_columns(Sheets(report()))
    rows = (
        f"1Concern Which weight is in W?Basis S-201 shows a planted roofWhy it matters The base shear moves with it"
        f"Asked State itQ JR 2026-12-06no answer yetline 38, sheet {sheet[38]}open",
        f"2Concern Is this coefficient right?Basis Table 12.8-2Asked Check the rowC KL 2026-12-07Row confirmed on line "
        f"22line 22, sheet {sheet[22]}answered",
        f"3Concern Height is from the wrong gridAsked Take grid AV JR 2026-12-07Grid A is usedline 6, sheet {sheet[6]}"
        "closed",
        f"4Concern {sample.HOSTILE}KL 2026-12-07no answer yetlines 59–61, sheet {sheet[59]}open",
    )
    assert [row for row in rows if squeezed(row) not in text] == []
    places = [text.index(squeezed(row)) for row in rows]
    assert places == sorted(places)
    for fact in ("CheckerJ.Roe", "ReportC-207_B.pdf", "Checkloglog.csv", "OriginatorJ.Doe,SampleStructures"):
        assert fact in text


def test_the_fields_of_persons_stay_blank(folder: Path) -> None:
    respond(folder / "log.csv", folder / "C-207_B.pdf", folder / "r.pdf")
    text = Sheets((folder / "r.pdf").read_bytes()).text()
    assert re.search(r"SignedbyhandForPrintednameSignatureDateOriginatorChecker(Responsetocomments,sheet|$)", text)


def test_neither_log_nor_report_is_changed_and_nothing_is_overwritten(folder: Path) -> None:
    before = {path.name: path.read_bytes() for path in folder.iterdir()}
    respond(folder / "log.csv", folder / "C-207_B.pdf", folder)
    assert {name: (folder / name).read_bytes() for name in before} == before
    with pytest.raises(CommandError, match=r"C-207_B_response\.pdf exists and is not overwritten; cure"):
        respond(folder / "log.csv", folder / "C-207_B.pdf", folder)


def test_what_cannot_be_responded_to(folder: Path) -> None:
    (folder / "page.html").write_text("<!DOCTYPE html><html></html>")
    with pytest.raises(CommandError, match=r"page\.html is no PDF, and only a PDF has sheets; cure"):
        respond(folder / "log.csv", folder / "page.html", folder)
    (folder / "other.pdf").write_bytes(b"%PDF-1.7\n")
    with pytest.raises(MismatchError, match="attachments cannot be taken out"):
        respond(folder / "log.csv", folder / "other.pdf", folder)
    (folder / "marks.csv").write_text(f"{HEAD}\n1,A,JR,2026-12-05,,,,,,,\n")
    with pytest.raises(CommandError, match=r"marks\.csv holds no comment to be answered"):
        respond(folder / "marks.csv", folder / "C-207_B.pdf", folder)
    (folder / "bad.csv").write_text(f"{HEAD}\n99,Q,JR,2026-12-05,why,,,,,,\n")
    with pytest.raises(InputError, match="row 2, line: needed a line number up to 61"):
        respond(folder / "bad.csv", folder / "C-207_B.pdf", folder)
    assert not list(folder.glob("*_response.pdf"))


def letter(*rows: str, **fields: Any) -> bytes:
    record = sample.record(**fields)
    log = checklog.parse("\n".join((HEAD, *rows, "")), "log.csv")
    found = checked.comments(checklog.expand(log, record))
    return render(found, record, {}, log.name, "r" * 200 + ".pdf")


@pytest.mark.parametrize(("paper", "size"), [("Letter", (612, 792)), ("A4", (595.28, 841.89))])
def test_the_rules_of_the_sheets_hold(paper: str, size: tuple[float, float]) -> None:
    rows = [f"{n},Q,JR,2026-12-07,Why is it {n}?,{'W' * 90},It moves,Say why,,open," for n in range(1, 40)]
    rows.append(f"40,C,JR,2026-12-07,{'word ' * 2000},,,,{'answer ' * 300},answered,")
    data = letter(*rows, paper=paper, project="on and on " * 20)
    assert data == letter(*rows, paper=paper, project="on and on " * 20)
    found = Sheets(data)
    assert re.search(r"<pdfuaid:part>1</pdfuaid:part>", found.catalog["/Metadata"].get_data().decode())
    assert len([row for row in found.elements("TR") if len(_places(row)) > 1]) == 1  # the one longer than a sheet
    for number in range(1, len(found) + 1):
        box = [float(side) for side in found.reader.pages[number - 1].mediabox[2:]]
        assert box == pytest.approx(size, abs=0.01)
        assert f"sheet {number} of {len(found)}" in found.reader.pages[number - 1].extract_text()
        for run in found.runs(number):
            assert run.size >= 8 - 1e-6, (number, run)
            inside = run.x0 >= MARGIN and run.x1 <= box[0] - MARGIN and MARGIN <= run.y <= box[1] - MARGIN
            assert inside, (number, run)
