"""Run a notebook clean: a fresh Python process, every cell top to bottom, nothing of the user's own setup.

Knows the kernel and what it hands over in the run folder. Must not know what a report looks like, nor import what
computes the lines: the process that issues loads neither sympy nor nbconvert.
"""

from __future__ import annotations

import asyncio
import json
import logging
import os
import re
import subprocess
import sys
import sysconfig
from collections.abc import Mapping
from concurrent.futures import ThreadPoolExecutor
from dataclasses import asdict, dataclass, field
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import nbformat
from jupyter_client.kernelspec import KernelSpec, KernelSpecManager
from jupyter_client.manager import AsyncKernelManager
from nbclient import NotebookClient
from nbclient.exceptions import DeadKernelError

import calckit
from calckit.core.record import Record, from_json
from calckit.errors import NotebookError
from calckit.report.notebook import Cell, Notebook

_DELIVER = "from calckit.core.run import deliver; deliver()"
_KERNEL_OPTIONS = ("--HistoryManager.enabled=False", "--InteractiveShellApp.exec_PYTHONSTARTUP=False")
_QUIET = logging.getLogger("calckit.run")
_QUIET.addHandler(logging.NullHandler())
_QUIET.propagate = False  # what goes wrong is said once, in our own words
_ANSI = re.compile(r"\x1b\[[0-9;]*m")
_TEMPORARY_FILE = re.compile(r" \([^()]*\.py, line \d+\)$")


@dataclass(frozen=True)
class Settings:
    """What an issue sets from outside: `set` values by line id, the text of `files` named behind @, status, date and
    the register of confirmed values; None leaves the notebook's own."""

    set: Mapping[str, str] = field(default_factory=dict)
    files: Mapping[str, str] = field(default_factory=dict)
    status: str | None = None
    date: str | None = None
    confirmed: str | None = None

    def to_json(self) -> str:
        """The settings as JSON text: the same bytes for the same settings.

        >>> Settings(status="for check").to_json().splitlines()[-2]
        ' "status": "for check"'
        """
        return json.dumps(asdict(self), ensure_ascii=False, indent=1, sort_keys=True) + "\n"


@dataclass(frozen=True)
class Problem:
    """A set value that is "unknown", "unused" or "invalid"."""

    kind: str
    id: str
    text: str


@dataclass(frozen=True)
class Outcome:
    """What a run gave.

    `executed` is the notebook with outputs, `failure` the message of the cell that raised ("" if none did), `record`
    None if the run stopped or no calculation was started. `figures` and `files` hold contents by name.
    """

    executed: Any
    failure: str
    record: Record | None
    problems: tuple[Problem, ...]
    figures: Mapping[str, bytes]
    files: Mapping[str, bytes]


def run(notebook: Notebook, settings: Settings, *, outputs: bool = True) -> Outcome:
    """Run every cell of the notebook in a fresh process of this Python, in the notebook's folder.

    Without `outputs` the lines and figures are not shown below the cells, which saves drawing each figure again.

    Raises NotebookError if the process cannot be started or the calculation cannot be handed over; a cell that raises
    is reported in the outcome.
    """
    with TemporaryDirectory(prefix="calckit-", ignore_cleanup_errors=True) as name:
        folder = Path(name)
        given = {
            **asdict(settings),
            "headings": notebook.headings(),
            "outputs": outputs,
            "notebook_folder": str(notebook.folder),
        }
        (folder / "settings.json").write_text(json.dumps(given, ensure_ascii=False), encoding="utf-8")
        executed, failure, unable = _execute(notebook, folder)
        if unable and not failure:
            raise NotebookError(f"the calculation cannot be handed over to the report: {unable}")
        return _collect(folder, executed, failure)


class _OwnKernel(KernelSpecManager):
    """The kernel is the interpreter that runs this, whatever kernels are installed."""

    def get_kernel_spec(self, kernel_name: str) -> KernelSpec:
        argv = [sys.executable, "-m", "ipykernel_launcher", "-f", "{connection_file}", *_KERNEL_OPTIONS]
        return KernelSpec(argv=argv, display_name=kernel_name, language="python")


def _execute(notebook: Notebook, folder: Path) -> tuple[Any, str, str]:
    """The executed notebook, the message of the cell that raised, and why the hand-over failed.

    The event loop is our own: the caller may be a worker thread, or may have a loop that is running.
    """

    def work() -> tuple[Any, str, str]:
        with asyncio.Runner(loop_factory=asyncio.SelectorEventLoop) as runner:
            return runner.run(_execute_cells(notebook, folder))

    try:
        asyncio.get_running_loop()
    except RuntimeError:
        return work()
    with ThreadPoolExecutor(1) as pool:
        return pool.submit(work).result()


async def _execute_cells(notebook: Notebook, folder: Path) -> tuple[Any, str, str]:
    node = _fresh(notebook)
    replies: list[dict[str, Any]] = []
    manager = AsyncKernelManager(kernel_name="calckit", kernel_spec_manager=_OwnKernel(), log=_QUIET)
    manager.connection_file = str(folder / "kernel.json")
    client = NotebookClient(
        node,
        km=manager,
        log=_QUIET,
        timeout=None,
        allow_errors=True,
        record_timing=False,
        skip_cells_with_tag="",
        on_cell_executed=lambda cell, cell_index, execute_reply: replies.append(execute_reply["content"]),
    )
    failure = unable = ""
    try:
        await _start(client, notebook, folder)
        running = [(index, cell) for index, cell in enumerate(notebook.cells) if cell.runs]
        for (index, cell), heading in zip(running, notebook.headings(), strict=True):
            (folder / "cell").write_text(str(len(replies) + 1))  # versions of IPython count differently inside a cell
            await client.async_execute_cell(node.cells[index], index, execution_count=len(replies) + 1)
            if replies[-1]["status"] != "ok":
                failure = _failure(cell, len(replies), heading, replies[-1])
                break
        node.cells.append(nbformat.v4.new_code_cell(_DELIVER))  # type: ignore[no-untyped-call]
        await client.async_execute_cell(node.cells[-1], len(node.cells) - 1)
        node.cells.pop()
        if replies[-1]["status"] != "ok":
            unable = _message(replies[-1])
    except DeadKernelError as error:
        task = asyncio.current_task()
        if task and task.cancelling():  # nbclient takes a cancelled wait, such as after Ctrl-C, for a dead process
            raise asyncio.CancelledError from error
        raise NotebookError(f"the Python process ended while cell [{len(replies) + 1}] ran") from error
    finally:
        if client.kc:
            client.kc.stop_channels()
        if manager.has_kernel:
            await manager.shutdown_kernel(now=True)
    return node, failure, unable


async def _start(client: NotebookClient, notebook: Notebook, folder: Path) -> None:
    """Start the process; raises NotebookError with what it said last."""
    log = folder / "kernel.log"
    try:
        with log.open("wb") as messages:
            await client.async_start_new_kernel(
                cwd=str(notebook.folder), env=_environment(folder), stdout=subprocess.DEVNULL, stderr=messages
            )
            await client.async_start_new_kernel_client()
    except (RuntimeError, OSError) as error:
        said = [line for line in log.read_text(encoding="utf-8", errors="replace").splitlines() if "rror" in line]
        raise NotebookError(f"no Python process for the notebook: {(said or [str(error)])[-1]}") from error


def _fresh(notebook: Notebook) -> Any:
    """The notebook as nbclient takes it, without earlier outputs."""
    node: Any = nbformat.from_dict(notebook.data)  # type: ignore[no-untyped-call]
    for entry, cell in zip(node.cells, notebook.cells, strict=True):
        entry.source = cell.text
        entry.setdefault("metadata", nbformat.NotebookNode())  # type: ignore[no-untyped-call]
        if cell.kind == "code":
            entry.outputs, entry.execution_count = [], None
    return node


def _environment(folder: Path) -> dict[str, str]:
    """The environment of the run: as this process has it, without what would make two runs differ."""
    (folder / "matplotlibrc").touch()
    found = {name: value for name, value in os.environ.items() if name not in ("MPLBACKEND", "PYTHONSTARTUP")}
    home = str(Path(calckit.__file__).resolve().parent.parent)
    if home not in map(sysconfig.get_path, ("purelib", "platlib")):  # a source tree: the run uses the same kit
        found["PYTHONPATH"] = os.pathsep.join(filter(None, (home, found.get("PYTHONPATH"))))
    return {
        **found,
        "CALCKIT_RUN": str(folder),
        "IPYTHONDIR": str(folder / "ipython"),
        "MATPLOTLIBRC": str(folder / "matplotlibrc"),
        "PYTHONHASHSEED": "0",
        "PYDEVD_DISABLE_FILE_VALIDATION": "1",
    }


def _failure(cell: Cell, number: int, heading: str, reply: Mapping[str, Any]) -> str:
    """The error of a cell: what to mend first, then the line of the cell where it happened."""
    trace = _ANSI.sub("", "\n".join(reply.get("traceback", [])))
    at = re.findall(rf"Cell In\[{reply.get('execution_count', number)}\], line (\d+)", trace)
    lines = cell.text.splitlines()
    line = int(at[-1]) if at else 0
    place = f"cell [{number}]" + (f' under "{heading}"' if heading else "") + (f", line {line}" if line else "")
    shown = f"\n  {line} | {lines[line - 1].strip()}" if 0 < line <= len(lines) else ""
    return f"{place}: {_message(reply)}{shown}"


def _message(reply: Mapping[str, Any]) -> str:
    if reply["status"] == "aborted":
        return "the run was stopped"
    text = _TEMPORARY_FILE.sub("", _ANSI.sub("", reply.get("evalue", "")).strip())
    return f"{reply.get('ename', 'error')}: {text}" if text else str(reply.get("ename", "error"))


def _collect(folder: Path, executed: Any, failure: str) -> Outcome:
    """Read what the kernel left in the run folder."""
    path = folder / "outcome.json"
    handed = json.loads(path.read_text(encoding="utf-8")) if path.exists() else {}
    data = None if failure else handed.get("record")
    figures = {file.name: file.read_bytes() for file in sorted((folder / "figures").glob("*"))}
    files = {name: (folder / place).read_bytes() for name, place in sorted(handed.get("files", {}).items())}
    return Outcome(
        executed,
        failure,
        from_json(json.dumps(data)) if data else None,
        tuple(Problem(**problem) for problem in handed.get("problems", [])),
        figures,
        files,
    )
