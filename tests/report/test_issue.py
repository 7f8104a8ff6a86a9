"""Issuing: what is refused, what is written and replaced, what the terminal says.

The run and the two writers are stood in for by plain ones; the whole chain is tested at the end with the real ones.
"""

import json
import os
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from calckit.core.record import WITHDRAWN, Record, from_json, lines_hash
from calckit.errors import CommandError, NotebookError
from calckit.report import files, issue, notebook, seal
from calckit.report.notebook import Notebook
from calckit.report.recheck import record_of
from calckit.report.run import Outcome, Problem, Settings
from tests.conftest import notebook_json
from tests.report import plain

Give = Callable[..., None]
ROW_B = {"revision": "B", "date": "2026-12-08", "reason": "heavier roof", "by": "J. Doe", "sheets": ""}


@pytest.fixture
def source(tmp_path: Path) -> Notebook:
    return notebook.parse(json.dumps(notebook_json(["# Demo", "1"])), "demo", tmp_path)


@pytest.fixture
def give(monkeypatch: pytest.MonkeyPatch) -> Give:
    """Set what the run gives: title block fields, or parts of the outcome."""

    def set_outcome(
        record: Record | None = None,
        failure: str = "",
        problems: tuple[Problem, ...] = (),
        files: Any = None,
        **fields: Any,
    ) -> None:
        made = None if failure else record or plain.record(**fields)
        outcome = Outcome(None, failure, made, problems, {}, files or {})
        monkeypatch.setattr(issue, "run", lambda *_, **__: outcome)

    monkeypatch.setattr(issue.view, "build", lambda *_: None)
    monkeypatch.setattr(issue.html, "render", plain.html_file)
    monkeypatch.setattr(issue.pdf, "render", plain.pdf_file)
    for writer in (issue.html, issue.pdf):
        monkeypatch.setattr(writer, "missing_glyphs", lambda _view: [])
    set_outcome()
    return set_outcome


def content(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir()} if folder.exists() else {}


def saved_record(folder: Path, name: str = "C-101_A") -> Record:
    return from_json((folder / f"{name}.record.json").read_text())


# settings


def test_settings_with_files(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "my.csv").write_bytes(b"\xef\xbb\xbflevel,w_x\r\n")
    (tmp_path / "register.csv").write_text("standard,edition\n")
    monkeypatch.chdir(tmp_path)
    settings = issue.settings_from(
        ["levels=@./my.csv", "h_n = 70 ft", "N=a = b"], status="checked", day="2026-12-01", confirmed="register.csv"
    )
    assert settings == Settings(
        {"levels": "@./my.csv", "h_n": "70 ft", "N": "a = b"},
        {"./my.csv": "level,w_x\n"},
        "checked",
        "2026-12-01",
        "standard,edition\n",
    )


def test_all_faults_of_the_command_line_at_once(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "latin.csv").write_bytes(b"\xff")
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "soon")
    with pytest.raises(CommandError, match=r"^--set h_n: needed ID=VALUE") as caught:
        issue.settings_from(
            ["h_n", "=1", "a=1", "a=2", "levels=@none.csv", "x=@latin.csv", "y=@"], status="final", confirmed="none.csv"
        )
    assert str(caught.value).splitlines() == [
        "--set h_n: needed ID=VALUE, such as h_n=70 ft",
        "--set =1: needed ID=VALUE, such as h_n=70 ft",
        "--set a=2: a is set twice",
        "--set levels=@none.csv: none.csv cannot be read: No such file or directory",
        "--set x=@latin.csv: latin.csv is not UTF-8 text; cure: save it as UTF-8",
        "--set y=@: a blank name cannot be read: Is a directory",
        "--confirmed none.csv: none.csv cannot be read: No such file or directory",
        "--status final: needed one of preliminary, for check, checked, for construction, superseded, void",
        "SOURCE_DATE_EPOCH soon: needed whole seconds since 1970",
    ]


@pytest.mark.parametrize("day", ["20261201", "2026-13-01", "tomorrow", "2026-W49-2", ""])
def test_a_date_that_is_no_day(day: str) -> None:
    with pytest.raises(CommandError, match=f"--date {day}: needed a day, such as 2026-12-01"):
        issue.settings_from(day=day)


def test_date_before_epoch_before_none(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1796083199")
    assert issue.settings_from().date == "2026-11-30"
    assert issue.settings_from(day="2026-12-05").date == "2026-12-05"
    monkeypatch.delenv("SOURCE_DATE_EPOCH")
    assert issue.settings_from().date is None


# refusals


def test_set_values_at_fault_are_reported_together_and_nothing_is_written(
    source: Notebook, give: Give, tmp_path: Path
) -> None:
    give(problems=(Problem("unknown", "h_m", "nearest known: h_n"), Problem("invalid", "S_S", "S_S: needed a number")))
    with pytest.raises(CommandError, match="set values at fault") as caught:
        issue.issue(source, Settings(), tmp_path / "out")
    assert str(caught.value) == (
        "set values at fault:\n  h_m: unknown; nearest known: h_n\n  S_S: invalid; S_S: needed a number"
    )
    assert content(tmp_path / "out") == {}


def test_of_a_run_that_stopped_only_the_certain_is_reported(source: Notebook, give: Give, tmp_path: Path) -> None:
    give(
        failure="cell [2]: ValueError: x",
        problems=(
            Problem("unknown", "b", ""),
            Problem("unused", "a", ""),
            Problem("invalid", "S_S", "needed a number"),
        ),
    )
    with pytest.raises(CommandError, match="cell") as caught:
        issue.issue(source, Settings(), tmp_path)
    assert str(caught.value) == (
        "cell [2]: ValueError: x\nset values at fault:\n  S_S: invalid; needed a number\n"
        "set values undecided, as the run stopped: a, b"
    )


def test_a_cell_that_raised_leaves_earlier_files(source: Notebook, give: Give, tmp_path: Path) -> None:
    issue.issue(source, Settings(), tmp_path)
    before = content(tmp_path)
    give(failure="cell [2]: ValueError: x", problems=(Problem("unknown", "a", ""),))
    with pytest.raises(NotebookError, match=r"^cell .*x\nset values undecided, as the run stopped: a$"):
        issue.issue(source, Settings(), tmp_path)
    assert content(tmp_path) == before


def test_a_notebook_without_a_calculation(source: Notebook, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(issue, "run", lambda *_, **__: Outcome(None, "", None, (), {}, {}))
    with pytest.raises(NotebookError, match="starts no calculation; cure: write calc = Calc"):
        issue.produce(source, Settings())


@pytest.mark.parametrize(
    ("fields", "message"),
    [
        ({"status": "checked", "checked_by": " j.  doe"}, "self-check: J. Doe is named both .*; cure: another person"),
        ({"status": "checked", "check_level": "self"}, 'check_level is "self"; cure: another person checks it'),
        ({"status": "for construction"}, "2 open items: h_n-1, confirm-12.8.2.1; cure: close them"),
        ({"date": ""}, r"no date; cure: write Calc\(date="),
    ],
)
def test_what_the_calculation_contradicts_is_refused(
    fields: dict[str, str], message: str, source: Notebook, give: Give, tmp_path: Path
) -> None:
    give(**fields)
    with pytest.raises(CommandError, match=message):
        issue.issue(source, Settings(), tmp_path)
    assert content(tmp_path) == {}


def test_checked_by_another_and_construction_without_open_items_are_issued(
    source: Notebook, give: Give, tmp_path: Path
) -> None:
    give(status="checked", checked_by="R. Roe")
    issue.issue(source, Settings(), tmp_path / "a")
    record = plain.record(status="for construction")
    record.open_items = []
    give(record)
    issue.issue(source, Settings(), tmp_path / "b")
    assert saved_record(tmp_path / "b").calculation["status"] == "for construction"


# what is written


def test_files_hashes_seals_and_attachments(source: Notebook, give: Give, tmp_path: Path) -> None:
    give(files={"data/w.csv": b"level,w_x"})
    settings = Settings({"h_n": "70 ft"}, date="2026-12-01")
    issued = issue.issue(source, settings, tmp_path / "out")
    assert [path.name for path in issued.paths] == ["C-101_A.html", "C-101_A.pdf", "C-101_A.record.json"]
    record = saved_record(tmp_path / "out")
    assert record.source == source.source_hash()
    assert record.lines_hash == lines_hash(record.lines)
    assert len(record.inputs) == 64
    assert record.calculation["notebook"] == "demo"
    html, pdf = (path.read_bytes() for path in issued.paths[:2])
    assert record.seals == {"html": seal.seal_of(html), "pdf": seal.seal_of(pdf)}
    for data in (html, pdf):
        assert seal.check(data).state == "intact"
        assert record_of(data) == record.sealed(None)


def test_attachments_are_the_same_bytes_in_both(source: Notebook, give: Give, tmp_path: Path) -> None:
    from calckit.report.recheck import parcel_of

    give(files={"data/w.csv": b"level,w_x"})
    settings = Settings({"h_n": "70 ft"}, {"my.csv": "a"})
    report = issue.produce(source, settings)
    parcels = [parcel_of(data) for data in report.files.values()]
    assert parcels[0] == parcels[1]
    assert parcels[0].notebook == source.bare()
    assert json.loads(parcels[0].settings) == {
        "set": {"h_n": "70 ft"},
        "files": {"my.csv": "a"},
        "status": None,
        "date": None,
        "confirmed": None,
    }
    assert parcels[0].files == {"data/w.csv": b"level,w_x"}
    assert parcels[0].record == report.record.to_json().encode()


def test_inputs_hash_moves_with_givens_settings_and_files_alone(source: Notebook, give: Give) -> None:
    base = issue.produce(source, Settings(), ()).record.inputs
    assert issue.produce(source, Settings(), ()).record.inputs == base
    give(files={"w.csv": b"1"})
    assert issue.produce(source, Settings(), ()).record.inputs != base
    give()
    assert issue.produce(source, Settings({"h_n": "62 ft"}), ()).record.inputs != base
    record = plain.record()
    record.lines[1].value = 0.77
    give(record)
    assert issue.produce(source, Settings(), ()).record.inputs == base
    record = plain.record()
    record.lines[0].value = 63.0
    give(record)
    assert issue.produce(source, Settings(), ()).record.inputs != base


def test_what_the_terminal_says(source: Notebook, give: Give, tmp_path: Path) -> None:
    assert issue.issue(source, Settings(), tmp_path).text.splitlines() == [
        "C-101, revision A, for check, 2026-12-01",
        f"  {tmp_path}/C-101_A.html",
        f"  {tmp_path}/C-101_A.pdf",
        f"  {tmp_path}/C-101_A.record.json",
        "NOT OK: 1",
        "  line 3, X  Stability, story 3: 0.12 <= 0.09",
        "NOT CHECKED: 1",
        "  line 4  Story drift: missing displacements of the model",
        "open items: 1",
        "  height to be surveyed (architect)",
        "to be confirmed against the standard: 1",
    ]


def test_nothing_to_say_is_said() -> None:
    assert issue.account(Record({})) == [
        "NOT OK: none",
        "NOT CHECKED: none",
        "open items: none",
        "to be confirmed against the standard: none",
    ]


def test_name_from_the_notebook_if_the_number_is_blank(source: Notebook, give: Give, tmp_path: Path) -> None:
    give(number="")
    assert [path.stem for path in issue.issue(source, Settings(), tmp_path, ("pdf",)).paths] == ["demo", "demo.record"]


# replacing


@pytest.mark.parametrize("status", ["preliminary", "for check"])
def test_these_are_replaced(status: str, source: Notebook, give: Give, tmp_path: Path) -> None:
    give(status=status)
    issue.issue(source, Settings(), tmp_path)
    give(purpose="second")
    issue.issue(source, Settings(), tmp_path)
    assert saved_record(tmp_path).calculation["purpose"] == "second"


@pytest.mark.parametrize("status", ["checked", "for construction", "superseded", "void", "something new"])
def test_any_other_status_is_never_overwritten(status: str, source: Notebook, give: Give, tmp_path: Path) -> None:
    record = plain.record(status=status)
    record.open_items = []
    give(record)
    name = issue.issue(source, Settings(), tmp_path).paths[0].stem
    before = content(tmp_path)
    again = status if status in WITHDRAWN else "preliminary"
    give(status=again)
    with pytest.raises(CommandError, match=f'{name}.* status "{status}" and is never overwritten; cure: .* next revis'):
        issue.issue(source, Settings(), tmp_path)
    assert content(tmp_path) == before
    give(revision="B", revisions=[ROW_B])
    issue.issue(source, Settings(), tmp_path)
    assert before.items() <= content(tmp_path).items()


@pytest.mark.parametrize("kept", ["C-101_A.html", "C-101_A.pdf", "C-101_A.record.json"])
@pytest.mark.parametrize("only", ["html", "pdf"])
def test_one_issued_file_is_enough_to_refuse(
    kept: str, only: str, source: Notebook, give: Give, tmp_path: Path
) -> None:
    give(status="checked")
    issue.issue(source, Settings(), tmp_path)
    for name in set(content(tmp_path)) - {kept}:
        (tmp_path / name).unlink()
    give()
    before = content(tmp_path)
    with pytest.raises(CommandError, match=f"{kept} is issued with status"):
        issue.issue(source, Settings(), tmp_path, (only,))
    assert content(tmp_path) == before


def test_an_issued_file_beside_the_record_of_a_draft_is_kept(source: Notebook, give: Give, tmp_path: Path) -> None:
    give(status="checked")
    issue.issue(source, Settings(), tmp_path)
    checked = (tmp_path / "C-101_A.pdf").read_bytes()
    give()
    issue.issue(source, Settings(), tmp_path / "draft")
    for path in (tmp_path / "draft").iterdir():
        path.replace(tmp_path / path.name)
    (tmp_path / "C-101_A.pdf").write_bytes(checked)
    with pytest.raises(CommandError, match=r'C-101_A\.pdf is issued with status "checked"'):
        issue.issue(source, Settings(), tmp_path)
    assert (tmp_path / "C-101_A.pdf").read_bytes() == checked


@pytest.mark.parametrize("name", ["C-101_A.html", "C-101_A.pdf", "C-101_A.record.json"])
def test_a_stranger_of_that_name_is_kept(name: str, source: Notebook, give: Give, tmp_path: Path) -> None:
    (tmp_path / name).write_text("someone's own file")
    with pytest.raises(CommandError, match=f"{name} stands there and holds no record that can be read; cure: move it"):
        issue.issue(source, Settings(), tmp_path)
    assert content(tmp_path) == {name: b"someone's own file"}


def test_a_mixed_set_is_said_when_it_is_replaced(source: Notebook, give: Give, tmp_path: Path) -> None:
    issue.issue(source, Settings(), tmp_path)
    old = (tmp_path / "C-101_A.pdf").read_bytes()
    give(purpose="second")
    issue.issue(source, Settings(), tmp_path)
    (tmp_path / "C-101_A.pdf").write_bytes(old)
    assert "note: the earlier files were a mixed set; not named by their record: C-101_A.pdf" in (
        issue.issue(source, Settings(), tmp_path).text
    )
    assert "note:" not in issue.issue(source, Settings(), tmp_path).text


def test_one_form_alone(source: Notebook, give: Give, tmp_path: Path) -> None:
    issued = issue.issue(source, Settings(), tmp_path, ("html",))
    assert set(content(tmp_path)) == {"C-101_A.html", "C-101_A.record.json"}
    assert set(saved_record(tmp_path).seals or {}) == {"html"}
    issued = issue.issue(source, Settings(), tmp_path, ("pdf",))
    assert "note" not in issued.text
    assert set(saved_record(tmp_path).seals or {}) == {"html", "pdf"}
    give(purpose="second")
    issued = issue.issue(source, Settings(), tmp_path, ("pdf",))
    assert f"note: {tmp_path}/C-101_A.html stands from another issue and does not belong to these files" in issued.text
    assert set(saved_record(tmp_path).seals or {}) == {"pdf"}


def test_a_write_that_fails_leaves_the_earlier_set(
    source: Notebook, give: Give, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    issue.issue(source, Settings(), tmp_path)
    before = content(tmp_path)
    rename = os.replace

    def locked(old: Path, new: Path) -> None:
        if str(new).endswith(".pdf") and str(old).endswith(".new"):
            raise PermissionError(13, "open in a viewer")
        rename(old, new)

    monkeypatch.setattr(files.os, "replace", locked)
    give(purpose="second")
    with pytest.raises(CommandError, match=r"C-101_A\.pdf cannot be written \(open in a viewer\); nothing was changed"):
        issue.issue(source, Settings(), tmp_path)
    assert content(tmp_path) == before


def test_two_issues_give_the_same_bytes(source: Notebook, give: Give, tmp_path: Path) -> None:
    issue.issue(source, Settings(), tmp_path / "a")
    issue.issue(source, Settings(), tmp_path / "b")
    assert content(tmp_path / "a") == content(tmp_path / "b") != {}
