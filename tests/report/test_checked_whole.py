"""The checker's round with the real command: mark, issue with the log, change, issue again, respond."""

from __future__ import annotations

import json
import shutil
from functools import partial
from pathlib import Path

import pytest

from calckit.core.record import Record, from_json
from calckit.errors import CommandError
from calckit.report import checklog, files, issue, notebook
from calckit.report.recheck import parcel_of
from calckit.report.run import Outcome, Settings
from tests.report import plain, sample
from tests.report.sheets import Sheets
from tests.report.test_issue_whole import Run, complaints, content, demonstration, run_calckit

LOG = (
    "line,mark,initials,date,comment,basis,why_it_matters,action_asked,answer,state\n"
    "1 to 4,A,JR,2026-12-05,,,,,,\n"
    "V_w,Q,JR,2026-12-05,Is p per height?,S-201,,Say so,Its meaning says so on line p,answered\n"
)
CHECKED = ("--check-log", "log.csv", "--set", "check_level=other person", "--set", "check_method=line by line")


@pytest.fixture(scope="module")
def once(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with the notebook, its first issue without a log in `out`, and a log that nobody has tied."""
    folder = tmp_path_factory.mktemp("first")
    result = run_calckit(folder, "issue", demonstration(folder), "--to", "out")
    assert result.returncode == 0, result.stderr
    (folder / "log.csv").write_text(LOG)
    return folder


@pytest.fixture
def folder(once: Path, tmp_path: Path) -> Path:
    return Path(shutil.copytree(once, tmp_path / "job"))


@pytest.fixture
def calckit(folder: Path) -> Run:
    return partial(run_calckit, folder)


def saved(folder: Path, name: str = "C-7_A") -> Record:
    return from_json((folder / "out" / f"{name}.record.json").read_text())


def retype(folder: Path, old: str, new: str) -> None:
    """Change the notebook."""
    path = folder / "demo.ipynb"
    text = path.read_text()
    assert json.dumps(old)[1:-1] in text
    path.write_text(text.replace(json.dumps(old)[1:-1], json.dumps(new)[1:-1]))


def said_of_the_check(stdout: str) -> list[str]:
    lines = stdout.splitlines()
    return lines[next(n for n, line in enumerate(lines) if line.startswith("check log")) :]


def test_the_round(folder: Path, calckit: Run) -> None:
    before = saved(folder)
    result = calckit("issue", "demo.ipynb", "--to", "out", *CHECKED)
    assert said_of_the_check(result.stdout) == [
        "check log log.csv: rows tied: 2, to the former issue, C-7, revision A, for check, 2026-12-01",
        "  lines: checked 3 of 4; to be corrected 0; in question 1; not marked 0",
        "  inputs: checked 2 of 2; to be corrected 0; in question 0; not marked 0",
        "  marks that fell off: none",
        "  comments not closed: 1 of 1",
        "    1, V_w, Q JR 2026-12-05: answered",
    ]
    # the log holds the content of the lines and is inside both files; the lines are those of the issue without it
    tied = checklog.read(folder / "log.csv")
    assert [entry.ties for entry in tied.entries] == [
        tuple((line.id, line.content[:16]) for line in before.lines), (("V_w", before.line("V_w").content[:16]),),
    ]  # fmt: skip
    for form in ("html", "pdf"):
        inside = parcel_of((folder / "out" / f"C-7_A.{form}").read_bytes()).check_log
        assert inside == (folder / "log.csv").read_bytes()
    now = saved(folder)
    assert now.lines == before.lines and now.lines_hash == before.lines_hash
    assert now.calculation["check_level"] == "other person"
    # a changed height drops its own mark and those of all that rests on it
    retype(folder, '"62 ft"', '"63 ft"')
    result = calckit("issue", "demo.ipynb", "--to", "out", *CHECKED)
    assert said_of_the_check(result.stdout) == [
        "check log log.csv: rows tied: 0",
        "  lines: checked 1 of 4; to be corrected 0; in question 0; not marked 3",
        "  inputs: checked 1 of 2; to be corrected 0; in question 0; not marked 1",
        "  marks that fell off: 3",
        "    line 1, h_n: A JR 2026-12-05",
        "    line 3, V_w: Q JR 2026-12-05",
        f"    line 4, {now.lines[3].id}: A JR 2026-12-05",
        "  comments not closed: 1 of 1",
        "    1, V_w, Q JR 2026-12-05: answered",
    ]
    for form in ("html", "pdf"):
        result = calckit("recheck", f"out/C-7_A.{form}", "--run")
        assert result.returncode == 0
        assert result.stdout.splitlines()[1] == "  seal              intact"
        assert result.stdout.splitlines()[-1] == "  run  every line equal (4 lines)"
    # the response
    result = calckit("respond", "log.csv", "--report", "out/C-7_A.pdf", "--to", "out")
    assert (result.returncode, result.stdout.splitlines()) == (
        0,
        [
            "out/C-7_A_response.pdf",
            "  C-7, revision A, for check, 2026-12-01; file seal: intact",
            "  comments: 0 open, 1 answered, 0 closed",
        ],
    )
    assert "Itsmeaningsayssoonlinep" in Sheets((folder / "out" / "C-7_A_response.pdf").read_bytes()).text()
    result = calckit("respond", "log.csv", "--report", "out/C-7_A.pdf", "--to", "out")
    assert result.returncode == 2 and "exists and is not overwritten" in result.stderr


def test_rows_are_tied_to_the_revision_before_where_the_next_one_is_new(folder: Path, calckit: Run) -> None:
    retype(folder, '"62 ft"', '"63 ft"')
    retype(folder, 'revision="A"', 'revision="B"')
    row = 'calc.revise("B", date="2026-12-02", reason="height corrected", by="originator")'
    retype(folder, 'calc.file("notes.txt")', f'calc.file("notes.txt")\n{row}')
    result = calckit("issue", "demo.ipynb", "--to", "out", *CHECKED)
    assert said_of_the_check(result.stdout)[:2] == [
        "check log log.csv: rows tied: 2, to the former issue, C-7, revision A, for check, 2026-12-01",
        "  lines: checked 1 of 4; to be corrected 0; in question 0; not marked 3",
    ]


def test_without_a_former_record_rows_are_tied_to_this_one(folder: Path, calckit: Run) -> None:
    result = calckit("issue", "demo.ipynb", "--to", "new", *CHECKED)
    assert said_of_the_check(result.stdout)[0] == (
        "check log log.csv: rows tied: 2, to this issue, C-7, revision A, for check, 2026-12-01"
    )


@pytest.mark.parametrize(
    ("log", "more", "words"),
    [
        (LOG.replace("V_w,Q", "V_x,Q"), (), "row 3, line: needed a line number up to 4"),
        (LOG.replace("answered", "closed by JD"), (), "only who made a comment closes it"),
        (LOG, ("--set", "check_level=boss"), "check_level: needed one of self, other person, other organization"),
        (LOG, ("--set", "checked_by=j.  DOE", "--status", "checked"), "self-check: J. Doe is named both as originator"),
        (LOG, ("--set", "check_level=self", "--status", "checked"), 'check_level is "self"; cure: another person'),
    ],
    ids=["no line", "not the commenter", "no level", "one name", "level self"],
)
def test_what_is_refused_leaves_log_and_files_as_they_were(
    log: str, more: tuple[str, ...], words: str, folder: Path, calckit: Run
) -> None:
    (folder / "log.csv").write_text(log)
    before = content(folder / "out")
    result = calckit("issue", "demo.ipynb", "--to", "out", "--check-log", "log.csv", *more)
    assert result.returncode == 2
    assert words in "\n".join(complaints(result.stderr))
    assert content(folder / "out") == before and (folder / "log.csv").read_text() == log


def test_a_checked_issue_says_what_is_not_checked(folder: Path, calckit: Run) -> None:
    checker = ("--status", "checked", "--set", "checked_by=J. Roe")
    result = calckit("issue", "demo.ipynb", "--to", "out", *CHECKED, *checker)
    assert result.returncode == 0, result.stderr
    assert said_of_the_check(result.stdout)[-1] == (
        '  note: the status is "checked"; lines not checked: 1; comments not closed: 1'
    )


# --- writing the log


@pytest.fixture
def stood_in(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A log for the sample, whose run is stood in for; the two writers are plain."""
    record = sample.record(notebook="demo")
    monkeypatch.setattr(issue, "run", lambda *_, **__: Outcome(None, "", record, (), {}, {}))
    monkeypatch.setattr(issue.html, "render", plain.html_file)
    monkeypatch.setattr(issue.pdf, "render", plain.pdf_file)
    path = tmp_path / "checks" / "log.csv"
    path.parent.mkdir()
    path.write_text(LOG.replace("V_w", "h_n"))
    return path


def issued(log: Path) -> issue.Issued:
    source = notebook.parse(json.dumps({"cells": [], "metadata": {}, "nbformat": 4, "nbformat_minor": 5}), "demo", log)
    return issue.issue(source, Settings(), log.parents[1] / "out", check_log=log)


def test_log_and_files_are_written_together_or_not_at_all(stood_in: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    typed, replace = stood_in.read_bytes(), files.os.replace
    done: list[str] = []

    def locked(source: Path, target: Path) -> None:
        if str(target).endswith(".record.json"):
            raise PermissionError(13, "Permission denied")
        replace(source, target)
        done.append(Path(target).name)

    monkeypatch.setattr(files.os, "replace", locked)
    with pytest.raises(CommandError, match=r"record\.json cannot be written .*; nothing was changed"):
        issued(stood_in)
    assert done[0] == "log.csv"  # it was in place, and was put back
    assert stood_in.read_bytes() == typed
    assert content(stood_in.parents[1] / "out") == {} and list(content(stood_in.parent)) == ["log.csv"]
    monkeypatch.undo()


def test_a_log_that_was_changed_meanwhile_is_kept(stood_in: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    run = issue.run

    def edited(*given: object, **more: object) -> Outcome:
        stood_in.write_text(stood_in.read_text() + "2,A,JR,2026-12-06,,,,,,\n")
        return run(*given, **more)  # type: ignore[arg-type]

    monkeypatch.setattr(issue, "run", edited)
    with pytest.raises(CommandError, match="was changed while the notebook ran; nothing was written"):
        issued(stood_in)
    assert stood_in.read_text().endswith("2,A,JR,2026-12-06,,,,,,\n")
    assert content(stood_in.parents[1] / "out") == {}


def test_a_log_without_new_rows_is_not_written(stood_in: Path) -> None:
    issued(stood_in)
    tied = stood_in.read_bytes()
    before = stood_in.stat().st_ino
    said = issued(stood_in).text
    assert "rows tied: 0" in said
    assert (stood_in.read_bytes(), stood_in.stat().st_ino) == (tied, before)
