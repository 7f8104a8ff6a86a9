"""Write an issue again and again, each time killed a step later: `python -m tests.report.broken_off OLD OUT STATUS`.

OLD is a folder with an earlier issue, or empty. Of each attempt a copy of OLD is left in a folder of OUT named by the
step at which the process was killed; the last one came to its end. A step is anything that the process asks of the file
system while it writes (the events by which Python reports that), and each flush, before and after.
"""

import os
import shutil
import signal
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

from calckit.core.record import Record
from calckit.report import files, issue, notebook, seal
from calckit.report.attachments import Parcel
from calckit.report.run import Settings
from tests.report import plain

_NOTEBOOK = b'{"cells": [], "metadata": {}, "nbformat": 4, "nbformat_minor": 5}'
STEPS = ("open", "os.rename", "os.remove", "os.mkdir", "os.listdir", "os.scandir", "shutil.copyfile", "os.utime")


def report(record: Record) -> issue.Report:
    """A report as `produce` makes it, by plain writers."""
    parcel = Parcel("demo", _NOTEBOOK, b"{}", {}, record.to_json().encode())
    made = {
        "html": plain.html_file(None, figures={}, attachments=parcel.pack()),
        "pdf": plain.pdf_file(None, figures={}, attachments=parcel.pack(), date="2026-12-01"),
    }
    return issue.Report("C-101_A", record, {form: seal.apply(data) for form, data in made.items()})


def write(folder: Path, made: issue.Report) -> str:
    """The writing half of an issue; what the terminal says."""
    issue.produce = lambda *_, **__: made  # type: ignore[assignment]
    return issue.issue(notebook.Notebook("demo", Path(), (), {}), Settings(), folder).text


def _killed_at(step: int, folder: Path, made: issue.Report) -> bool:
    """Write in a process that is killed before this step; whether it came to its end."""
    child = os.fork()
    if child == 0:
        count = 0

        def pass_step() -> None:
            nonlocal count
            if count == step:
                os.kill(os.getpid(), signal.SIGKILL)
            count += 1

        def watch(event: str, _: Any) -> None:
            if event in STEPS:
                pass_step()

        def flush(handle: int, real: Callable[[int], None] = os.fsync) -> None:
            pass_step()
            real(handle)
            pass_step()

        files.os.fsync = flush
        sys.addaudithook(watch)
        write(folder, made)
        os._exit(0)
    _, status = os.waitpid(child, 0)
    if os.WIFSIGNALED(status):
        assert os.WTERMSIG(status) == signal.SIGKILL
        return False
    assert os.WEXITSTATUS(status) == 0
    return True


def main(old: Path, out: Path, status: str) -> None:
    """Kill at every step in turn until a writing comes to its end."""
    record = plain.record(status=status, purpose="second")
    record.open_items = []
    made = report(record)
    step, done = 0, False
    while not done:
        folder = Path(shutil.copytree(old, out / f"{step:03}"))
        done = _killed_at(step, folder, made)
        step += 1


if __name__ == "__main__":
    main(Path(sys.argv[1]), Path(sys.argv[2]), sys.argv[3])
