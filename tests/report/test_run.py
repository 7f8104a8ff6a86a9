"""Running a notebook clean. The kernel side is stood in for by a small module, so that each case is in plain sight."""

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path
from typing import Any

import pytest

from calckit.errors import NotebookError
from calckit.report import notebook
from calckit.report.run import Outcome, Problem, Settings, run
from tests.conftest import WriteNotebook, notebook_json
from tests.report.stand_in import KERNEL


def kept(outcome: Outcome) -> dict[str, Any]:
    """What a cell noted down with `keep`."""
    values: dict[str, Any] = json.loads(outcome.figures["kept.json"])
    return values


def test_settings_reach_the_kernel(write_notebook: WriteNotebook, tmp_path: Path) -> None:
    path = write_notebook(
        "# Title", "## Site", KERNEL, "  ", "## Weight", 'keep(**json.loads((folder / "settings.json").read_text()))'
    )
    settings = Settings({"h_n": "70 ft"}, {"my.csv": "a,b"}, "for check", "2026-12-01", "standard,edition\n")
    assert kept(run(notebook.read(path), settings)) == {
        "set": {"h_n": "70 ft"},
        "files": {"my.csv": "a,b"},
        "status": "for check",
        "date": "2026-12-01",
        "confirmed": "standard,edition\n",
        "headings": ["Site", "Weight"],
        "outputs": True,
        "notebook_folder": str(tmp_path),
    }


def test_the_kernel_is_this_interpreter_in_the_notebooks_folder(
    write_notebook: WriteNotebook, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    home = tmp_path / "home"
    (home / "profile_default" / "startup").mkdir(parents=True)
    (home / "profile_default" / "startup" / "a.py").write_text("of_the_user = True")
    (home / "profile_default" / "ipython_kernel_config.py").write_text(
        "c.InteractiveShell.ast_node_interactivity = 'none'"
    )
    (home / "start.py").write_text("of_the_user = True")
    (home / "matplotlibrc").write_text("font.size: 33")
    monkeypatch.setenv("IPYTHONDIR", str(home))
    monkeypatch.setenv("PYTHONSTARTUP", str(home / "start.py"))
    monkeypatch.setenv("MATPLOTLIBRC", str(home / "matplotlibrc"))
    monkeypatch.setenv("MPLBACKEND", "TkAgg")
    monkeypatch.setenv("JUPYTER_PATH", str(home))
    path = write_notebook(
        KERNEL,
        "ip = get_ipython()\n"
        "import matplotlib\n"
        'keep(python=sys.executable, cwd=os.getcwd(), user="of_the_user" in globals(),\n'
        '     history=ip.history_manager.enabled, profile=ip.profile_dir.location, hash=hash("T_a"),\n'
        '     mode=ip.ast_node_interactivity, size=matplotlib.rcParams["font.size"], backend=matplotlib.get_backend())',
    )
    source = notebook.read(path)
    first, second = kept(run(source, Settings())), kept(run(source, Settings()))
    assert first["python"] == sys.executable
    assert first["cwd"] == str(tmp_path)
    assert first["user"] is first["history"] is False
    assert not first["profile"].startswith(str(home))
    assert first["mode"] == "last_expr"
    assert first["size"] == 10.0
    assert "inline" in first["backend"]
    assert first["hash"] == second["hash"]
    assert list((home / "profile_default").glob("history*")) == []


def test_every_cell_runs_once_in_order_and_clean(write_notebook: WriteNotebook) -> None:
    skip = {"tags": ["skip-execution"]}
    cells = notebook_json([KERNEL, "seen = []", "seen.append(2)\nprint('two')", "seen.append(3)", "keep(seen=seen)"])
    cells["cells"][3]["metadata"] = skip
    cells["cells"][4]["outputs"] = [{"output_type": "stream", "name": "stdout", "text": "old"}]
    outcome = run(notebook.parse(json.dumps(cells), "demo", Path.cwd()), Settings())
    assert kept(outcome) == {"seen": [2, 3]}
    assert len(outcome.executed.cells) == 5
    assert [cell.execution_count for cell in outcome.executed.cells] == [1, 2, 3, 4, 5]
    assert outcome.executed.cells[2].outputs[0].text == "two\n"
    assert outcome.executed.cells[4].outputs == []


def test_each_cell_can_read_its_number(write_notebook: WriteNotebook) -> None:
    path = write_notebook("# Title", KERNEL, "  ", 'keep(cell=(folder / "cell").read_text())', "1")
    assert kept(run(notebook.read(path), Settings())) == {"cell": "2"}


def test_two_runs_give_the_same_executed_notebook(write_notebook: WriteNotebook) -> None:
    source = notebook.read(write_notebook(KERNEL, "1 + 1", "print({'b', 'a', 'c'})"))
    assert run(source, Settings()).executed == run(source, Settings()).executed


def test_what_is_handed_over(write_notebook: WriteNotebook) -> None:
    path = write_notebook(
        KERNEL,
        '(folder / "files").mkdir()\n(folder / "files" / "0").write_text("level,w_x")\n'
        'outcome["files"] = {"data/w.csv": "files/0"}\n'
        'outcome["problems"] = [{"kind": "unknown", "id": "h_m", "text": "nearest known: h_n"}]\n'
        "keep()",
    )
    outcome = run(notebook.read(path), Settings())
    assert outcome.problems == (Problem("unknown", "h_m", "nearest known: h_n"),)
    assert dict(outcome.files) == {"data/w.csv": b"level,w_x"}
    assert list(outcome.figures) == ["kept.json"]
    assert outcome.record is None
    assert outcome.failure == ""


def test_a_cell_that_raises_is_named_with_its_line(write_notebook: WriteNotebook) -> None:
    path = write_notebook(
        KERNEL,
        "## Period of *X*",
        "class WrongInput(ValueError): pass\n\nraise WrongInput('S_S: needed a number\\n  next')",
        "1 / 0",
    )
    outcome = run(notebook.read(path), Settings())
    assert outcome.failure == (
        'cell [2] under "Period of *X*", line 3: WrongInput: S_S: needed a number\n  next\n'
        "  3 | raise WrongInput('S_S: needed a number\\n  next')"
    )
    assert "\x1b" not in outcome.failure
    assert outcome.record is None
    assert outcome.executed.cells[3].outputs == []


def test_the_line_in_the_cell_that_raised_not_in_the_library(write_notebook: WriteNotebook) -> None:
    outcome = run(notebook.read(write_notebook(KERNEL, "import json\n\njson.loads('{')")), Settings())
    assert outcome.failure.startswith("cell [2], line 3: JSONDecodeError: ")
    assert outcome.failure.endswith("\n  3 | json.loads('{')")


def test_a_tag_does_not_let_an_error_pass(write_notebook: WriteNotebook) -> None:
    cells = notebook_json([KERNEL, "1 / 0"])
    cells["cells"][1]["metadata"] = {"tags": ["raises-exception"]}
    outcome = run(notebook.parse(json.dumps(cells), "demo", Path.cwd()), Settings())
    assert outcome.failure == "cell [2], line 1: ZeroDivisionError: division by zero\n  1 | 1 / 0"


def test_a_syntax_error_names_no_temporary_file(write_notebook: WriteNotebook) -> None:
    outcome = run(notebook.read(write_notebook(KERNEL, "x = 1\ny = 2 2")), Settings())
    assert outcome.failure == "cell [2], line 2: SyntaxError: invalid syntax\n  2 | y = 2 2"


def test_problems_are_handed_over_even_when_a_cell_raised(write_notebook: WriteNotebook) -> None:
    path = write_notebook(
        KERNEL, 'outcome["problems"] = [{"kind": "invalid", "id": "h_n", "text": "needs a unit"}]', "1 / 0"
    )
    outcome = run(notebook.read(path), Settings())
    assert outcome.problems == (Problem("invalid", "h_n", "needs a unit"),)
    assert outcome.failure.startswith("cell [3], line 1: ZeroDivisionError")


def test_a_deliver_that_fails_is_said(write_notebook: WriteNotebook) -> None:
    path = write_notebook(KERNEL, "stand_in.deliver = lambda: 1 / 0")
    with pytest.raises(NotebookError, match="cannot be handed over to the report: ZeroDivisionError: division by zero"):
        run(notebook.read(path), Settings())


def test_a_process_that_ends_is_said(write_notebook: WriteNotebook, capfd: pytest.CaptureFixture[str]) -> None:
    path = write_notebook(KERNEL, "os._exit(1)")
    with pytest.raises(NotebookError, match=r"the Python process ended while cell \[2\] ran"):
        run(notebook.read(path), Settings())
    assert capfd.readouterr() == ("", "")


def test_a_process_that_cannot_start_is_said(write_notebook: WriteNotebook, monkeypatch: pytest.MonkeyPatch) -> None:
    path = write_notebook(KERNEL)
    monkeypatch.setattr(sys, "executable", "/bin/false")
    with pytest.raises(NotebookError, match="no Python process for the notebook"):
        run(notebook.read(path), Settings())


def test_what_the_process_said_last_is_shown(write_notebook: WriteNotebook, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("PYTHONHOME", "/no/such/place")
    with pytest.raises(NotebookError, match="no Python process for the notebook: ModuleNotFoundError: No module named"):
        run(notebook.read(write_notebook(KERNEL)), Settings())


@pytest.mark.skipif(os.name != "posix", reason="sends a POSIX signal")
def test_ctrl_c_stops_the_run_and_its_process(write_notebook: WriteNotebook, tmp_path: Path) -> None:
    path = write_notebook(KERNEL, f"Path({str(tmp_path / 'pid')!r}).write_text(str(os.getpid()))", "while True: pass")
    code = (
        "import sys; from pathlib import Path\n"
        "from calckit.report import notebook\n"
        "from calckit.report.run import Settings, run\n"
        "run(notebook.read(Path(sys.argv[1])), Settings())"
    )
    process = subprocess.Popen([sys.executable, "-c", code, str(path)], stderr=subprocess.PIPE, text=True)
    for _ in range(200):
        if (tmp_path / "pid").exists() and (tmp_path / "pid").read_text():
            break
        time.sleep(0.1)
    kernel = int((tmp_path / "pid").read_text())
    time.sleep(0.3)
    process.send_signal(signal.SIGINT)
    _, said = process.communicate(timeout=20)
    assert said.rstrip().endswith("KeyboardInterrupt")
    with pytest.raises(ProcessLookupError, match="No such process"):
        os.kill(kernel, 0)


def test_input_is_not_waited_for(write_notebook: WriteNotebook) -> None:
    outcome = run(notebook.read(write_notebook(KERNEL, "input('your name')")), Settings())
    assert "StdinNotImplementedError" in outcome.failure


def test_a_run_whose_outputs_nobody_keeps_gives_the_same_record() -> None:
    source = notebook.read(Path(__file__).parents[2] / "templates" / "building_lateral_force.ipynb")
    shown, bare = run(source, Settings()), run(source, Settings(), outputs=False)
    assert shown.record == bare.record
    assert shown.figures == bare.figures
    assert sum(len(cell.get("outputs", [])) for cell in shown.executed.cells) > 40
    assert sum(len(cell.get("outputs", [])) for cell in bare.executed.cells) == 0
