"""Status, revisions and the first sheet: what refuses an issue, what marks a withdrawn one, what the cover says."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from calckit import Calc, cli
from calckit.core.record import Record, from_json
from calckit.errors import CommandError, InputError
from calckit.report import html, issue, pdf, seal, view
from calckit.report.notebook import Notebook
from calckit.report.revised import revision_faults
from calckit.report.run import Settings
from tests.report import plain, sample
from tests.report.sheets import Sheets
from tests.report.test_issue import ROW_B, Give, content, give, source  # noqa: F401
from tests.report.test_issue_whole import demonstration

DAY = "2026-12-01"


def in_pdf(**fields: Any) -> Sheets:
    return Sheets(pdf.render(built(**fields), figures=sample.figures(), attachments=[], date=DAY))


def in_html(**fields: Any) -> str:
    return html.render(built(**fields), figures=sample.figures(), attachments=()).decode()


def built(**fields: Any) -> Any:
    return view.build(sample.record(**fields), sample.content())


def squeezed(text: str) -> str:
    return "".join(text.split())


# --- revisions


@pytest.mark.parametrize("revision", ["", "A", "a", "0", "1", "01", "P1", "P01", "C0", "-"])
def test_a_first_revision_needs_no_row(revision: str) -> None:
    assert revision_faults(Record({"revision": revision, "revisions": []})) == []


@pytest.mark.parametrize("revision", ["B", "2", "P02", "10", "AA"])
def test_a_later_revision_without_a_row_is_refused_with_the_cure(
    revision: str, source: Notebook, give: Give, tmp_path: Path  # noqa: F811
) -> None:
    give(revision=revision)
    cure = rf'revision {revision} has no row in the revision table; cure: .*calc\.revise\("{revision}", date='
    with pytest.raises(CommandError, match=cure):
        issue.issue(source, Settings(), tmp_path)
    assert content(tmp_path) == {}
    give(revision=revision, revisions=[ROW_B | {"revision": revision}])
    assert issue.issue(source, Settings(), tmp_path).paths


def test_a_table_whose_newest_row_is_another_revision_is_refused() -> None:
    rows = [ROW_B | {"revision": name} for name in "AB"]
    assert revision_faults(Record({"revision": "B", "revisions": rows})) == []
    (fault,) = revision_faults(Record({"revision": "A", "revisions": rows}))
    assert fault == (
        'the newest row of the revision table is B, the title block says A; cure: write Calc(revision="B"), or put the '
        "rows in order"
    )
    (fault,) = revision_faults(Record({"revision": "A", "revisions": [ROW_B]}))
    assert fault.startswith("revision A has no row in the revision table")


def test_an_empty_reason_refuses_the_issue(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = demonstration(tmp_path)
    notebook = json.loads(path.read_text())
    notebook["cells"][1]["source"] = "".join(notebook["cells"][1]["source"]).replace('"A"', '"B"') + (
        '\ncalc.revise("B", date="2026-12-08", reason=" ", by="J. Doe")'
    )
    path.write_text(json.dumps(notebook))
    assert cli.main(["issue", str(path), "--to", str(tmp_path / "out")]) == cli.CELL_RAISED
    assert "revise reason: needed text; given blank" in capsys.readouterr().err
    assert not (tmp_path / "out").exists()


# --- for construction


def test_open_items_left_open_for_construction_need_a_reason(
    source: Notebook, give: Give, tmp_path: Path  # noqa: F811
) -> None:
    give(status="for construction", open_items_accepted=" ")
    with pytest.raises(CommandError, match=r'2 open items: .*cure: .*Calc\(open_items_accepted="reason, by whom"\)'):
        issue.issue(source, Settings(), tmp_path)
    give(status="for construction", open_items_accepted="survey follows by addendum, J. Doe")
    issue.issue(source, Settings(), tmp_path)
    assert from_json((tmp_path / "C-101_A.record.json").read_text()).calculation["status"] == "for construction"


def test_the_cover_says_which_items_stay_open_and_why() -> None:
    fields = {"status": "for construction", "open_items_accepted": "survey follows by addendum, J. Doe"}
    record = sample.record()
    counts = [sum(item.group == group for item in record.open_items) for group in ("open", "confirm")]
    said = (
        f"Issued for construction with open items: {counts[0]} to be closed (No. 1 to {counts[0]}) and {counts[1]} to "
        f"be confirmed against the standard (No. 1 to {counts[1]}). Reason given: survey follows by addendum, J. Doe"
    )
    assert squeezed(said) in squeezed(in_pdf(**fields).reader.pages[0].extract_text())
    assert f"<strong>{said}</strong>" in in_html(**fields)


@pytest.mark.parametrize("status", ["preliminary", "for check", "checked"])
def test_another_status_says_nothing_of_it(status: str) -> None:
    assert built(status=status, open_items_accepted="a reason").left_open == ""


def test_nothing_is_said_where_nothing_is_open() -> None:
    record = sample.record(status="for construction", open_items_accepted="a reason")
    record.open_items = []
    assert view.build(record, sample.content()).left_open == ""


# --- superseded and void


@pytest.mark.parametrize("status", ["superseded", "void"])
def test_every_sheet_of_a_withdrawn_revision_bears_the_word(status: str) -> None:
    found = in_pdf(status=status)
    word = status.upper()
    for number in range(1, len(found) + 1):
        runs = found.runs(number)
        marks = [run for run in runs if squeezed(run.text) == word and run.size > 11]
        assert len(marks) == 1, number
        (mark,) = marks
        assert mark.tags == ("Artifact",)
        assert mark.y <= 792 - 36 and all(run.y < mark.y for run in runs if run is not mark), "above all other text"
    page = in_html(status=status)
    assert f'<p class="standing">{word}</p>' in page
    assert "@top-center { width: 20%;" in page and f'content: "[ " "{word}" " ]"; }}' in page


def test_a_revision_in_force_bears_no_mark() -> None:
    assert built().standing == ""
    assert 'class="standing"' not in in_html() and "@top-center" not in in_html()


@pytest.mark.parametrize("status", ["superseded", "void"])
def test_withdrawing_writes_beside_the_files_in_force(
    status: str, source: Notebook, give: Give, tmp_path: Path  # noqa: F811
) -> None:
    record = plain.record(status="for construction")
    record.open_items = []
    give(record)
    issue.issue(source, Settings(), tmp_path)
    before = content(tmp_path)
    give(status=status)
    paths = issue.issue(source, Settings(), tmp_path).paths
    assert [path.name for path in paths] == [f"C-101_A_{status}.{end}" for end in ("html", "pdf", "record.json")]
    assert before.items() <= content(tmp_path).items()
    assert all(seal.check(path.read_bytes()).state == "intact" for path in paths[:2])
    with pytest.raises(CommandError, match=rf"C-101_A_{status}\.\S+ is issued with status .* never overwritten"):
        issue.issue(source, Settings(), tmp_path)
    give(status="for check")
    with pytest.raises(CommandError, match="to withdraw it, issue with --status superseded or void"):
        issue.issue(source, Settings(), tmp_path)


# --- in place of the seal


def test_fields_of_a_preliminary_issue_are_a_setting() -> None:
    fields = {
        "status": "preliminary", "preliminary_caption": "Issued for review only",
        "preliminary_fields": ["Purpose", "Prepared under the direction of", "Registration"],
    }  # fmt: skip
    assert built(**fields).seal_fields == (
        ("Purpose", "for permit"), ("Prepared under the direction of", ""), ("Registration", ""),
    )  # fmt: skip
    said = in_pdf(**fields).reader.pages[0].extract_text()
    page = in_html(**fields)
    for text in ("Issued for review only", "Prepared under the direction of", "Registration"):
        assert text in " ".join(said.split()) and text in page
    assert "License number" not in said and "License number" not in page
    assert "seal-space" not in page.partition("</style>")[2]


def test_without_fields_a_preliminary_issue_keeps_the_clear_space() -> None:
    fields = {"status": "preliminary", "preliminary_fields": [], "seal_caption": "Seal, signature and date"}
    assert "Seal, signature and date" in in_pdf(**fields).reader.pages[0].extract_text()
    page = in_html(**fields)
    assert 'class="seal-space"' in page and '<p class="small">Seal, signature and date</p>' in page


def test_the_clear_space_under_a_long_caption_is_51_millimeters() -> None:
    found = in_pdf(seal_caption="Seal, signature and date of the engineer of record, by hand, in ink, on each copy")
    start = next(run for run in found.body(1) if run.text.startswith("Seal, signature"))
    lowest = min(run.y for run in found.body(1) if abs(run.x0 - start.x0) < 1 and run.size < 8.5 and run.y > 400)
    side = 51 / 25.4 * 72
    left, top = start.x0 + (62 - 51) / 2 / 25.4 * 72, lowest - 10
    inside = [r for r in found.runs(1) if r.x1 > left and r.x0 < left + side and top - side < r.y < top]
    assert inside == []
    assert "width: 56mm; height: 56mm" in in_html()


def test_settings_of_the_first_sheet_are_read_and_refused_together() -> None:
    block = Calc("Demo", first_sheet=12, sheet_prefix="S-", preliminary_fields=("Purpose",)).title_block
    assert (block["first_sheet"], block["sheet_prefix"], block["preliminary_fields"]) == (12, "S-", ["Purpose"])
    assert Calc("Demo").title_block["preliminary_fields"] == ["Purpose", "Engineer of record", "License number", "Date"]
    with pytest.raises(InputError, match="first_sheet: needed a whole number from 1 up; given 0") as caught:
        Calc("Demo", first_sheet=0, sheet_prefix=3, preliminary_fields=("Purpose", " "))  # type: ignore[arg-type]
    assert [fault.symbol for fault in caught.value.faults] == ["first_sheet", "sheet_prefix", "preliminary_fields"]


def test_settings_can_be_set_for_one_issue(tmp_path: Path) -> None:
    path = demonstration(tmp_path)
    out = tmp_path / "out"
    values = ["--set", "first_sheet=5", "--set", "sheet_prefix=E-", "--set", "preliminary_fields=Purpose; Date"]
    assert cli.main(["issue", str(path), "--to", str(out), "--status", "preliminary", *values]) == 0
    said = " ".join(Sheets((out / "C-7_A.pdf").read_bytes()).reader.pages[0].extract_text().split())
    assert "Sheet E-5 of E-" in said and "License number" not in said
    assert cli.main(["issue", str(path), "--to", str(out), "--set", "first_sheet=none"]) == cli.AT_FAULT
