"""The short form: which lines it prints, what it says of itself, and that it never takes the place of the full form."""

from __future__ import annotations

import json
from functools import cache
from pathlib import Path

import pytest

from calckit import cli
from calckit.core.record import Record, digest
from calckit.report import html, pdf, view
from calckit.report.lines import Lines
from calckit.report.model import LineView, TableView, View
from calckit.report.recheck import recheck, record_of
from calckit.report.short import path, shorten
from tests.conftest import notebook_json
from tests.report import sample, test_pdf
from tests.report.rerun import second_pass
from tests.report.sheets import Sheets
from tests.report.test_html import _Page
from tests.report.test_matters import CONTENT


@cache
def full_record() -> Record:
    record = second_pass()
    record.calculation["notebook"] = "demo"
    return record


@cache
def full() -> View:
    return view.build(full_record(), CONTENT)


@cache
def short() -> View:
    return shorten(full(), full_record())


@cache
def page() -> _Page:
    return _Page(html.render(short(), figures={}, attachments=[]))


@cache
def sheets() -> Sheets:
    return Sheets(pdf.render(short(), figures={}, attachments=[], date="2026-12-01"))


def printed(model: View) -> set[str]:
    return {item.id for section in model.sections for item in section.items if isinstance(item, LineView)}


# --- which lines


def test_the_path_is_closed_and_reaches_the_results() -> None:
    kept, lines = path(full_record()), Lines(full_record())
    assert {"X.V", "Y.k", "X.drift", "Y.stability", "S_1", "site_class", "X.system", "w_x", "X.C_scap"} <= kept
    assert not {"S_a", "X.procedure", "X.H2", "X.sum_F"} & kept
    for id_ in kept:
        assert {ref.id for ref in lines.inputs(lines.by_id[id_])} <= kept, id_
    assert len(kept) < 0.7 * len(full_record().lines)


def test_checks_not_ok_or_not_made_are_always_printed() -> None:
    record = sample.record()
    bad = {line.id for line in record.lines if line.verdict in ("NOT OK", "NOT CHECKED")}
    assert bad and bad <= path(record)
    assert bad <= printed(shorten(view.build(record, sample.content()), record))


def test_without_an_answer_the_last_lines_are_the_results() -> None:
    record = sample.record()
    record.summaries = []
    kept = path(record)
    ends = {line.id for line in record.lines if line.kind == "computed" and not Lines(record).used_in(line)}
    assert ends and ends <= kept and "h_n" in kept


def test_the_lines_of_the_path_and_no_others_are_printed() -> None:
    assert printed(short()) == path(full_record())
    rows = {attrs["id"] for attrs in page().all("tr") if attrs.get("id", "").startswith("line-")}
    assert rows == {f"line-{full_record().line(id_).n}" for id_ in path(full_record())}
    numbers = {run.text.strip() for number in range(3, len(sheets()) + 1) for run in sheets().body(number)
               if "TD" in run.tags and run.x0 < 84}  # fmt: skip
    assert {str(full_record().line(id_).n) for id_ in path(full_record())} <= numbers


def test_tables_keep_the_columns_of_the_path() -> None:
    kept = path(full_record())
    tables = [item for section in short().sections for item in section.items if isinstance(item, TableView)]
    assert tables
    for table in tables:
        assert {column.ref.id for column in table.columns} <= kept
        assert all(len(cells) == len(table.columns) for _, cells in table.rows)


def test_references_to_lines_left_out_lead_nowhere() -> None:
    ids = {attrs["id"] for _, attrs in page().elements if "id" in attrs}
    links = {attrs["href"] for attrs in page().all("a") if attrs.get("href", "").startswith("#")}
    assert {link for link in links if link[1:] not in ids} == set()
    left_out = next(line for line in full_record().lines if line.id == "X.procedure")
    assert f"#line-{left_out.n}" not in links
    assert f"OK (line {left_out.n})" in " ".join(page().text.split())  # named in the answer all the same


def test_everything_before_the_lines_is_that_of_the_full_form() -> None:
    def words(model: View) -> list[object]:
        return [
            model.title_block, model.counts, model.cautions, model.field_of_use, model.not_covered, model.criteria,
            [(one.label, one.text) for one in model.statements], [one.text for one in model.open_items],
            [one.text for one in model.to_confirm], [one.shown for one in model.inputs],
            [(label, [cell.text for cell in cells]) for one in model.answer for label, cells in one.rows],
        ]  # fmt: skip

    assert words(short()) == words(full())
    assert full().matters is not None and short().matters is None


# --- what it says of itself


def test_cover_and_every_sheet_name_the_full_form() -> None:
    content = digest("".join((full_record().source, full_record().inputs, full_record().lines_hash)))[:8]
    named = f"calculation C-101, revision A, content {content}"
    kept, all_ = len(path(full_record())), len(full_record().lines)
    cover = f"of {named}: inputs, results and the path between. It prints {kept} of {all_} lines"
    assert "".join(f"SHORT FORM {cover}".split()) in "".join(sheets().reader.pages[0].extract_text().split())
    for sheet in sheets().reader.pages:
        said = " ".join(sheet.extract_text().split())
        assert f"Short form of {named}" in said and "SHORT FORM" in said
    assert f"Short form {cover}" in " ".join(page().text.split())
    style = html.render(short(), figures={}, attachments=[]).decode()
    foot = style[style.index("@bottom-left") : style.index("@bottom-right")]
    assert str(html._css_text(f"Short form of {named}")) in foot
    assert short().title == f"{full().title} (short form)"


def test_the_full_form_says_nothing_of_it() -> None:
    assert b"hort form" not in html.render(full(), figures={}, attachments=[])


def test_the_rules_of_a_sheet_hold() -> None:
    test_pdf.test_sheets_are_counted_truly_and_none_is_blank(sheets)
    test_pdf.test_nothing_stands_outside_the_margins(sheets)
    test_pdf.test_no_text_is_under_8_points_and_no_script_under_5_and_a_half(sheets)
    assert all("/TH" in test_pdf._kinds(table) for table in sheets().elements("Table"))
    assert len(sheets()) < len(Sheets(pdf.render(full(), figures={}, attachments=[], date="2026-12-01")))


# --- issued


CELLS = (
    "# Demonstration",
    'from calckit import Calc\ncalc = Calc(project="Wall", number="C-7", subject="Force", revision="A", '
    'date="2026-12-01", status="for check", units="US")\ncalc.document("S-201", title="Elevations")',
    'calc.given("h_w", "62 ft", source="S-201", meaning="height of the wall")',
    'calc.line("A_w", "h_w*h_w", unit="ft**2", meaning="area")\ncalc.note("N", "nothing more")',
)


@pytest.fixture(scope="module")
def issued(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("short")
    (folder / "demo.ipynb").write_text(json.dumps(notebook_json(list(CELLS))))
    return folder


def test_a_short_form_stands_beside_the_full_one(issued: Path, capsys: pytest.CaptureFixture[str]) -> None:
    book, out = str(issued / "demo.ipynb"), issued / "out"
    assert cli.main(["issue", book, "--to", str(out), "--short"]) == 0
    assert "C-7_A.record.json is not there; cure: issue without --short, too" in capsys.readouterr().out
    assert cli.main(["issue", book, "--to", str(out)]) == 0
    before = {path.name: path.read_bytes() for path in out.iterdir() if "_short" not in path.name}
    assert sorted(before) == ["C-7_A.html", "C-7_A.pdf", "C-7_A.record.json"]
    capsys.readouterr()
    assert cli.main(["issue", book, "--to", str(out), "--short"]) == 0
    assert "names a full form" not in capsys.readouterr().out
    assert {name: (out / name).read_bytes() for name in before} == before
    assert len(list(out.iterdir())) == 6
    for form in ("html", "pdf"):
        whole, brief = out / f"C-7_A.{form}", out / f"C-7_A_short.{form}"
        assert record_of(brief.read_bytes()) == record_of(whole.read_bytes())
        findings = recheck(brief)
        assert all(finding.good for finding in findings)
        assert findings[-1].text == "C-7_A_short.record.json names this file"
        assert cli.main(["recheck", str(brief)]) == 0
        data = brief.read_bytes()
        brief.write_bytes(data[: len(data) // 2] + bytes([data[len(data) // 2] ^ 1]) + data[len(data) // 2 + 1 :])
        assert cli.main(["recheck", str(brief)]) == 4


def test_a_full_form_of_other_content_is_told(issued: Path, capsys: pytest.CaptureFixture[str]) -> None:
    book, out = str(issued / "demo.ipynb"), issued / "other"
    assert cli.main(["issue", book, "--to", str(out)]) == 0
    capsys.readouterr()
    assert cli.main(["issue", book, "--to", str(out), "--short", "--set", "h_w=60 ft"]) == 0
    assert "C-7_A.record.json has content " in capsys.readouterr().out


def test_a_final_short_form_is_not_replaced(issued: Path, capsys: pytest.CaptureFixture[str]) -> None:
    book, out = str(issued / "demo.ipynb"), issued / "final"
    command = ["issue", book, "--to", str(out), "--short", "--status", "checked"]
    assert cli.main(command) == 0
    assert cli.main(command) == 2
    assert 'C-7_A_short.record.json is issued with status "checked" and is never overwritten' in capsys.readouterr().err
