"""An issue that names the former one: marks at the lines, the section that tells it, refusals."""

from __future__ import annotations

import html as escapes
import io
import json
import re
from collections.abc import Callable
from functools import cache
from pathlib import Path
from typing import Any

import pytest
from pypdf import PdfReader, PdfWriter
from pypdf.generic import ContentStream

from calckit import cli
from calckit.core.record import Flag, Line, OpenItem, Record, lines_hash
from calckit.errors import CommandError
from calckit.report import html, pdf, revised, view
from calckit.report.attachments import Parcel
from calckit.report.compare import Issue
from calckit.report.revised import Revised
from tests.report import sample
from tests.report.sheets import Sheets
from tests.report.test_issue_whole import demonstration

DAY = "2026-12-01"
ROW_A = {"revision": "A", "date": "2026-11-01", "reason": "First issue", "by": "J. Doe", "sheets": "all"}
ROW_B = {"revision": "B", "date": "2026-12-01", "reason": "Planted roof added", "by": "J. Doe", "sheets": ""}


def former() -> Record:
    """Revision A of the sample: another weight, another base shear, one line less, one line more, an open item."""
    made = sample.record(revision="A", date="2026-11-01", revisions=[ROW_A])
    shear, weight = made.line("X.V"), made.line("w_x")
    shear.value, shear.shown = 250.0, "250.0 kip"
    assert isinstance(weight.value, list) and isinstance(weight.shown, list)
    weight.value[0], weight.shown[0] = 800.0, "800"
    made.lines = [line for line in made.lines if line.id != "w_roof"]
    made.lines.append(Line("N-gone", "note", meaning="note", text="To be dropped.", n=99))
    made.open_items.append(OpenItem("N-gone-1", "N-gone", "a question since answered", "originator", "open"))
    made.lines_hash = lines_hash(made.lines)
    return made


def told(change: Callable[[Record], None] = lambda record: None) -> tuple[Record, Revised]:
    """Revision B of the sample and what it changed."""
    new = sample.record(revisions=[ROW_A, ROW_B])
    change(new)
    parcel = Parcel("library", b'{"cells": []}', b"{}", {}, b"")
    return new, revised.revised(Issue("C-207_A.record.json", former(), None), new, parcel)


@cache
def sheets() -> Sheets:
    record, changed = told()
    model = view.build(record, sample.content(), changed)
    return Sheets(pdf.render(model, figures=sample.figures(), attachments=[], date=DAY))


@cache
def page() -> str:
    record, changed = told()
    made = html.render(view.build(record, sample.content(), changed), figures=sample.figures(), attachments=())
    return made.decode()


def squeezed(text: str) -> str:
    return "".join(text.split())


# --- at the lines


def test_changed_lines_say_what_stood_there() -> None:
    was = dict(told()[1].was)
    assert was["X.V"] == "was 250.0 kip (rev A)"
    assert was["w_x"] == "was 800 kip at Roof (rev A)"
    assert was["w_roof"] == "new since rev A"
    assert set(was) == {"X.V", "w_x", "w_roof"}


def test_the_old_value_stands_beside_the_result_in_both_files() -> None:
    record, changed = told()
    assert [ref.id for ref in changed.lines] == ["w_roof", "w_x", "X.V"]
    for ref in changed.lines:
        row = re.search(rf'<tr id="line-{ref.n}".*?</tr>\n', page(), re.DOTALL)
        assert row and f"<strong>{dict(changed.was)[ref.id]}</strong>" in row[0]
        assert 'class=" changed"' in row[0]
    assert page().count('class=" changed"') == 3
    assert squeezed(f"{record.line('X.V').shown}was 250.0 kip (rev A)") in sheets().text()
    assert squeezed("was 800 kip at Roof (rev A)") in sheets().text()
    assert squeezed("new since rev A") in sheets().text()


def test_the_summaries_say_it_too() -> None:
    answers = {cell.lines[0] for one in sample.record().summaries for cell in one.rows}
    assert "X.V" in answers
    assert page().count("was 250.0 kip (rev A)") == 1 + sum(
        id_ == "X.V" for one in sample.record().summaries for row in one.rows for id_ in row.lines
    )
    assert "was 250.0 kip (rev A)" in " ".join(sheets().reader.pages[1].extract_text().split())


def test_a_bar_in_the_margin_marks_the_rows_that_changed() -> None:
    bars = [bar for number in range(1, len(sheets()) + 1) for bar in thick_rules(sheets(), number)]
    assert len(bars) == 3
    assert all(width >= 2 and shade == 0 for width, shade in bars), "black, and wider than any other rule"
    plain = view.build(sample.record(), sample.content())
    unmarked = Sheets(pdf.render(plain, figures=sample.figures(), attachments=[], date=DAY))
    assert [thick_rules(unmarked, number) for number in range(1, len(unmarked) + 1)] == [[]] * len(unmarked)


def thick_rules(found: Sheets, number: int) -> list[tuple[float, float]]:
    """Width and shade of each vertical rule wider than 2 points at the left margin of a sheet."""
    made, at, shade, width = [], None, 0.0, 0.0
    page: Any = found.reader.pages[number - 1]
    for operands, operator in ContentStream(page.get_contents(), found.reader).operations:
        if operator == b"w":
            width = float(operands[0])
        elif operator in (b"G", b"SCN"):
            shade = float(operands[0])
        elif operator == b"m":
            at = [float(operand) for operand in operands]
        elif operator == b"l" and at is not None and abs(at[0] - float(operands[0])) < 0.01 and width > 2:
            made.append((width, shade))
    return made


# --- the section and the revision table


def test_the_section_tells_each_kind_of_change_in_both_files() -> None:
    wanted = (
        "What changed since revision A", "Inputs changed: 1", "800 kip", "880 kip", "+10.0 %",
        "Results moved: on the summary sheets: 1", "250.0 kip", "Lines added: 1", "w_roof", "Lines removed: 1",
        "N-gone",
        "Open items closed: 1", "a question since answered",
        "Held against C-207, revision A, for check, 2026-11-01 (C-207_A.record.json)",
    )  # fmt: skip
    in_page = squeezed(escapes.unescape(re.sub(r"<[^>]*>", "", page())))
    for text in wanted:
        assert squeezed(text) in sheets().text(), text
        assert squeezed(text) in in_page, text


def test_it_stands_after_the_answer_and_in_the_contents() -> None:
    titles = [" ".join(str(entry["/Title"]).split()) for entry in sheets().reader.outline]  # type: ignore[call-overload, index]
    place = titles.index("What changed since revision A")
    assert titles[place - 2 : place + 2] == [
        "Results", "Open items, overrides, values to be confirmed", "What changed since revision A",
        "Criteria and assumptions",
    ]  # fmt: skip
    assert '<li><a href="#changed">What changed since revision A</a></li>' in page()
    assert page().index('id="open"') < page().index('<section id="changed">') < page().index('id="criteria"')


def test_blank_sheets_of_the_newest_row_are_the_sheets_that_changed() -> None:
    marked = {number for number in range(2, len(sheets()) + 1) if re.search(r"\(rev A\)|since rev A", words(number))}
    assert len(marked) > 2
    first = words(1)
    said = re.search(r"Planted roof added J\. Doe ([\d, –]+)", first)
    assert said
    listed = set()
    for part in said[1].split(","):
        low, _, high = part.strip().partition("–")
        listed |= set(range(int(low), int(high or low) + 1))
    assert marked <= listed
    assert listed - marked <= {number for number in listed if re.search("Table|Figure", words(number))}
    numbers = [ref.n for ref in told()[1].lines]
    links = ", ".join(f'<a href="#line-{n}">{n}</a>' for n in numbers)
    assert f"<td>J. Doe</td><td>lines {links}</td>" in page()


def words(number: int) -> str:
    return " ".join(sheets().reader.pages[number - 1].extract_text().split())


def test_typed_sheets_stay_and_without_a_former_issue_none_are_said() -> None:
    rows = view.build(sample.record(revisions=[ROW_A, ROW_B]), sample.content()).revisions
    assert [row.sheets for row in rows] == ["all", "not stated"]
    record, changed = told()
    record.calculation["revisions"][1] = ROW_B | {"sheets": "4"}
    assert view.build(record, sample.content(), changed).revisions[1].sheets == "4"


def test_a_revision_that_changed_nothing_says_so() -> None:
    old = sample.record(revision="A", date="2026-11-01", revisions=[ROW_A])
    new = sample.record(revisions=[ROW_A, ROW_B])
    changed = revised.revised(Issue("a.record.json", old, None), new, Parcel("library", b"", b"{}", {}, b""))
    assert (changed.groups, changed.was, changed.lines) == ((), (), ())
    model = view.build(new, sample.content(), changed)
    said = "No input, formula, result or open item changed."
    assert said in html.render(model, figures=sample.figures(), attachments=()).decode()
    found = Sheets(pdf.render(model, figures=sample.figures(), attachments=[], date=DAY))
    assert squeezed(said) in found.text()
    assert squeezed("J. Doe none") in squeezed(found.reader.pages[0].extract_text())


def test_page_rules_hold_with_marks() -> None:
    found = sheets()
    for number in range(1, len(found) + 1):
        for run in found.runs(number):
            assert run.x0 >= 36 and run.x1 <= 612 - 36, (number, run)
            assert run.size >= (5.5 if "Formula" in run.tags else 8.0) - 1e-6, (number, run)
        assert not {"H1", "H2", "H3"} & set(found.body(number)[-1].tags), number
    for table in found.elements("Table"):
        assert "TH" in str([child.get_object().get("/S") for row in walk(table) for child in row])


def walk(table: Any) -> list[Any]:
    """The cells of each row of a table."""
    rows = []
    ahead = [table]
    while ahead:
        element = ahead.pop()
        children = [child.get_object() for child in as_list(element.get("/K", []))]
        inner = [child for child in children if hasattr(child, "get") and "/S" in child]
        rows += [inner] if element.get("/S") == "/TR" else []
        ahead += inner
    return rows


def as_list(thing: Any) -> list[Any]:
    return list(thing) if isinstance(thing, list) else [thing]


def test_texts_are_data() -> None:
    def hostile(record: Record) -> None:
        record.line("X.V").meaning = sample.HOSTILE
        record.line("X.V").flags.append(Flag(sample.HOSTILE))

    record, changed = told(hostile)
    model = view.build(record, sample.content(), changed)
    assert any(sample.HOSTILE in row.new or sample.HOSTILE in row.meaning for one in changed.groups for row in one.rows)
    made = html.render(model, figures=sample.figures(), attachments=()).decode()
    assert "<script" not in made
    assert str(escapes.escape(sample.HOSTILE, quote=False)).replace("'", "&#39;").replace('"', "&#34;") in made
    found = Sheets(pdf.render(model, figures=sample.figures(), attachments=[], date=DAY))
    assert found.text().count(squeezed(sample.HOSTILE)) > sheets().text().count(squeezed(sample.HOSTILE))


# --- what is refused


@pytest.mark.parametrize(
    ("fields", "message"),
    [
        ({"number": "C-9"}, "it is calculation C-9, this one is C-207; cure: name a file of this one"),
        ({"revision": "B"}, "it is revision B itself; cure: name the file of the earlier revision, or give this one"),
        ({"revisions": [ROW_A, ROW_B], "revision": "C"}, "it came after revision B; cure: name the file of the"),
    ],
)
def test_a_file_that_is_no_former_issue(fields: dict[str, Any], message: str) -> None:
    old = former()
    old.calculation |= fields
    new = sample.record(revisions=[ROW_A, ROW_B])
    with pytest.raises(CommandError, match=message):
        revised.revised(Issue("other.pdf", old, None), new, Parcel("library", b"", b"{}", {}, b""))


REVISION_B = 'calc.revise("B", date="2026-12-08", reason="survey", by="J. Doe")\ncalc.document('


@pytest.fixture(scope="module")
def chain(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A notebook issued as revision A, then changed and ready to be issued as revision B."""
    folder = tmp_path_factory.mktemp("chain")
    path = demonstration(folder)
    assert cli.main(["issue", str(path), "--to", str(folder)]) == 0
    notebook = json.loads(path.read_text())
    for cell in notebook["cells"]:
        text = "".join(cell["source"]).replace("62 ft", "65 ft").replace('revision="A"', 'revision="B"')
        cell["source"] = text.replace("calc.document(", REVISION_B, 1)
    path.write_text(json.dumps(notebook))
    return folder


@pytest.mark.parametrize("ending", ["pdf", "html", "record.json"])
def test_the_former_file_in_any_form(ending: str, chain: Path, tmp_path: Path) -> None:
    old = (chain / "C-7_A.pdf").read_bytes()
    arguments = ["issue", str(chain / "demo.ipynb"), "--to", str(tmp_path), "--former", str(chain / f"C-7_A.{ending}")]
    assert cli.main(arguments) == 0
    assert (chain / "C-7_A.pdf").read_bytes() == old
    said = squeezed("= 130.0 kip was 124.0 kip (rev A)")
    assert said in Sheets((tmp_path / "C-7_B.pdf").read_bytes()).text()
    made = (tmp_path / "C-7_B.html").read_text()
    assert "<strong>was 124.0 kip (rev A)</strong>" in made and "<strong>was 62 ft (rev A)</strong>" in made


def test_an_altered_former_file_writes_nothing(
    chain: Path, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    data = (chain / "C-7_A.html").read_bytes()
    bad = tmp_path / "bad.html"
    bad.write_bytes(data.replace(b"Harbor", b"Arbour", 1))
    out = tmp_path / "out"
    code = cli.main(["issue", str(chain / "demo.ipynb"), "--to", str(out), "--former", str(bad)])
    said = capsys.readouterr().err
    assert code == 2 and not out.exists()
    assert "bad.html is not as it was issued: altered or re-saved after issue; cure: name the file as it was" in said


def test_marks_added_to_the_former_file_are_a_remark(chain: Path, tmp_path: Path) -> None:
    marked = tmp_path / "C-7_A.pdf"
    writer = PdfWriter(io.BytesIO((chain / "C-7_A.pdf").read_bytes()), incremental=True)
    writer.add_metadata({"/Note": "looked at"})
    writer.write(marked)
    assert len(PdfReader(marked).pages) == len(PdfReader(chain / "C-7_A.pdf").pages)
    found = revised.open_former(marked)
    assert found.faults == () and "added after issue" in found.remarks[0]


def test_the_same_revision_is_refused_at_the_command_line(
    chain: Path, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    settings = ["--set", "revision=A", "--set", "number=C-7"]
    code = cli.main(
        ["issue", str(chain / "demo.ipynb"), "--to", str(tmp_path), "--former", str(chain / "C-7_A.pdf"), *settings]
    )
    assert code == 2
    assert "revision A has no row in the revision table" in capsys.readouterr().err


def test_a_record_without_numbers_is_told_by_its_notebook() -> None:
    old, new = former(), sample.record(revisions=[ROW_A, ROW_B])
    for record in (old, new):
        record.calculation["number"] = ""
    other = Issue("a.json", old, None)
    assert revised.revised(other, new, Parcel("library", b"", b"{}", {}, b"")).former == "revision A"
    old.calculation["notebook"] = "bridge"
    with pytest.raises(CommandError, match="without number, notebook bridge, this one is without number, notebook lib"):
        revised.revised(other, new, Parcel("library", b"", b"{}", {}, b""))
