"""The command line: what each command prints, and its exit code."""

import json
import subprocess
import sys
import types
from pathlib import Path

import pytest

import calckit
import calckit.core
from calckit import cli
from calckit.errors import CalckitError, CommandError, MismatchError, NotebookError
from calckit.report import seal
from tests.conftest import WriteNotebook, notebook_json
from tests.report import plain

Capture = pytest.CaptureFixture[str]


@pytest.fixture
def templates(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    folder = tmp_path / "kit" / "templates"
    folder.mkdir(parents=True)
    for name, cells in (("wall", ["1", "# Wall panel #\n\ntext"]), ("building", ["# Building, lateral force"])):
        (folder / f"{name}.ipynb").write_text(json.dumps(notebook_json(cells)))
    monkeypatch.setattr(cli, "__file__", str(tmp_path / "kit" / "calckit" / "cli.py"))
    (tmp_path / "work").mkdir()
    monkeypatch.chdir(tmp_path / "work")
    return folder


def test_new_lists_the_templates(templates: Path, capsys: Capture) -> None:
    assert cli.main(["new"]) == 0
    assert capsys.readouterr().out == "building  Building, lateral force\nwall      Wall panel\n"


def test_new_prefers_the_templates_of_the_installed_package(templates: Path, capsys: Capture) -> None:
    inside = templates.parent / "calckit" / "templates"
    inside.mkdir(parents=True)
    (inside / "packed.ipynb").write_text(json.dumps(notebook_json(["# Packed"])))
    assert cli.main(["new"]) == 0
    assert capsys.readouterr().out == "packed  Packed\n"


@pytest.mark.parametrize(
    ("arguments", "place"),
    [
        (["wall"], "wall.ipynb"),
        (["wall.ipynb"], "wall.ipynb"),
        (["wall", "--to", "job.ipynb"], "job.ipynb"),
        (["wall", "--to", ".."], "../wall.ipynb"),
    ],
)
def test_new_copies_a_template(arguments: list[str], place: str, templates: Path, capsys: Capture) -> None:
    assert cli.main(["new", *arguments]) == 0
    assert capsys.readouterr().out == f"{place}\n"
    assert Path(place).read_bytes() == (templates / "wall.ipynb").read_bytes()


def test_new_never_writes_over_a_file(templates: Path, capsys: Capture) -> None:
    Path("wall.ipynb").write_text("mine")
    assert cli.main(["new", "wall"]) == 2
    assert capsys.readouterr().err == (
        "calckit: wall.ipynb exists and is not overwritten; cure: name another file with --to\n"
    )
    assert Path("wall.ipynb").read_text() == "mine"


def test_new_with_an_unknown_name_lists_the_known(templates: Path, capsys: Capture) -> None:
    assert cli.main(["new", "wal"]) == 2
    assert capsys.readouterr().err == "calckit: template 'wal' is not known; known: wall, building\n"


def test_new_into_a_folder_that_is_not_there(templates: Path, capsys: Capture) -> None:
    assert cli.main(["new", "wall", "--to", "none/job.ipynb"]) == 2
    assert "No such file or directory: 'none/job.ipynb'" in capsys.readouterr().err


def test_recheck_exit_codes_and_words(tmp_path: Path, capsys: Capture) -> None:
    path = tmp_path / "a.html"
    path.write_bytes(seal.apply(plain.html_file(None, figures={}, attachments=())))
    assert cli.main(["recheck", str(path)]) == 4
    assert capsys.readouterr().out == (
        f"{path}\n  seal         intact\n  attachments  the attachments of an issued report are not there: "
        "settings.json, record.json, one source notebook\n"
    )
    assert cli.main(["recheck", str(tmp_path / "none.pdf")]) == 2
    assert capsys.readouterr().err == f"calckit: {tmp_path}/none.pdf cannot be read: No such file or directory\n"


@pytest.mark.parametrize(("passed", "code"), [(True, 0), (False, 4)])
def test_verify(passed: bool, code: int, monkeypatch: pytest.MonkeyPatch, capsys: Capture) -> None:
    asked = []
    checks = types.ModuleType("calckit.core.checks")
    checks.report = lambda name, records: (asked.append((name, records)) or "12 published checks", passed)  # type: ignore[attr-defined]
    monkeypatch.setitem(sys.modules, "calckit.core.checks", checks)
    monkeypatch.setattr(calckit.core, "checks", checks, raising=False)
    assert cli.main(["verify", "asce7"]) == cli.main(["verify", "--records", "motions"]) == code
    assert asked == [("asce7", None), (None, Path("motions"))]
    assert capsys.readouterr().out == "12 published checks\n" * 2


@pytest.mark.parametrize(
    ("error", "code"),
    [
        (CommandError("x"), 2),
        (NotebookError("x"), 3),
        (MismatchError("x"), 4),
        (CalckitError("x"), 2),
        (OSError("x"), 2),
    ],
)
def test_each_error_has_its_code_and_one_message(
    error: Exception, code: int, monkeypatch: pytest.MonkeyPatch, capsys: Capture
) -> None:
    def fail(_arguments: object) -> int:
        raise error

    monkeypatch.setattr(cli, "_recheck", fail)
    assert cli.main(["recheck", "a.pdf"]) == code
    assert capsys.readouterr() == ("", "calckit: x\n")


def test_an_interruption_is_said(monkeypatch: pytest.MonkeyPatch, capsys: Capture) -> None:
    def stop(_arguments: object) -> int:
        raise KeyboardInterrupt

    monkeypatch.setattr(cli, "_recheck", stop)
    assert cli.main(["recheck", "a.pdf"]) == 130
    assert capsys.readouterr().err == "calckit: stopped\n"


@pytest.mark.parametrize("arguments", [[], ["print"], ["issue"], ["issue", "a.ipynb", "--only", "doc"], ["recheck"]])
def test_a_command_line_at_fault_exits_with_2(arguments: list[str], capsys: Capture) -> None:
    with pytest.raises(SystemExit, match=r"^2$"):
        cli.main(arguments)
    assert "usage: calckit" in capsys.readouterr().err


def test_issue_refuses_before_it_runs_anything(
    write_notebook: WriteNotebook, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Capture
) -> None:
    monkeypatch.chdir(tmp_path)
    write_notebook("1", name="old.ipynb", nbformat=3)
    assert cli.main(["issue", "old.ipynb"]) == 2
    assert cli.main(["issue", "none.ipynb"]) == 2
    assert cli.main(["issue", "old.ipynb", "--set", "h_n", "--date", "soon"]) == 2
    assert capsys.readouterr().err.splitlines() == [
        "calckit: notebook old has format 3; needed 4; cure: open it in a current notebook editor and save it once",
        "calckit: notebook none.ipynb cannot be read: No such file or directory",
        "calckit: --set h_n: needed ID=VALUE, such as h_n=70 ft",
        "--date soon: needed a day, such as 2026-12-01",
    ]


def test_the_module_is_the_same_program() -> None:
    result = subprocess.run([sys.executable, "-m", "calckit", "--version"], capture_output=True, text=True, check=True)
    assert result.stdout == f"calckit {calckit.__version__}\n"


def test_the_templates_of_the_kit_are_listed(capsys: Capture) -> None:
    assert cli.main(["new"]) == 0
    listed = dict(line.split(maxsplit=1) for line in capsys.readouterr().out.splitlines())
    assert "building_lateral_force" in listed
    assert all(listed.values())
