"""A writing that fails or is killed: the earlier set stays whole, or every next command says that the set is mixed."""

import os
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from calckit import cli
from calckit.errors import CommandError
from calckit.report import issue
from calckit.report.files import leftovers, replace_together
from calckit.report.recheck import recheck
from tests.report import broken_off, plain

ROOT = Path(__file__).parents[2]
NAMES = ("C-101_A.html", "C-101_A.pdf", "C-101_A.record.json")
NEW = {"a.html": b"h" * 9000, "a.pdf": b"p" * 90000, "a.record.json": b"r" * 900}
OLD = {"a.html": b"old html", "a.pdf": b"old pdf", "a.record.json": b"old record"}

needs_fork = pytest.mark.skipif(not hasattr(os, "fork"), reason="the system cannot copy a process")


@pytest.fixture(autouse=True)
def real_run(monkeypatch: pytest.MonkeyPatch) -> None:
    """Put the run of a notebook back when a test is over."""
    monkeypatch.setattr(issue, "produce", issue.produce)


def content(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir() if path.is_file()}


def reports(folder: Path) -> dict[str, bytes]:
    return {name: data for name, data in content(folder).items() if not name.startswith(".")}


def killed(folder: Path, status: str, *, earlier: bool) -> tuple[dict[str, bytes], list[Path]]:
    """An earlier set, and a folder for each step at which a second issue was killed; the last was not."""
    old, out = folder / "old", folder / "out"
    old.mkdir()
    if earlier:
        broken_off.write(old, broken_off.report(plain.record(purpose="first")))
    command = [sys.executable, "-m", "tests.report.broken_off", str(old), str(out), status]
    subprocess.run(command, cwd=ROOT, check=True, env=os.environ | {"PYTHONPATH": str(ROOT)})
    return content(old), sorted(out.iterdir())


def said_by_commands(folder: Path, capsys: pytest.CaptureFixture[str]) -> dict[str, bool]:
    """Of each command, whether it says of this set that it is mixed."""
    html, pdf, record = (folder / name for name in NAMES)
    said = {}
    for path in (html, pdf):
        findings = {finding.what: finding for finding in recheck(path)}
        said[f"recheck {path.suffix}"] = "mixed set" in findings["record beside it"].text
        assert findings["record beside it"].good != said[f"recheck {path.suffix}"]
    for path in (html, pdf, record):
        cli.main(["compare", str(path), str(path)])
        said[f"compare {path.suffix}"] = "mixed set" in capsys.readouterr().out
    cli.main(["files", str(html), str(pdf), str(record), "--to", str(folder.with_suffix(".pdf"))])
    said["files"] = "mixed set" in capsys.readouterr().out
    log = folder.with_suffix(".csv")
    for command in ("extract {} --ask none", "reconcile {} none.csv", f"comments {{}} --check-log {log}"):
        cli.main(command.format(pdf).split())
        said[command.split()[0]] = "mixed set" in capsys.readouterr().err
    return said


@needs_fork
def test_killed_at_each_step(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    old, folders = killed(tmp_path, "for check", earlier=True)
    new = content(folders[-1])
    assert set(new) == set(old) == set(NAMES) and all(new[name] != old[name] for name in NAMES)
    outcomes = []
    for folder in folders:
        found = reports(folder)
        assert set(found) == set(NAMES)
        assert all(found[name] in (old[name], new[name]) for name in NAMES)  # no file is ever half a file
        outcomes.append("old" if found == old else "new" if found == new else "mixed")
        if outcomes[-1] == "mixed" and outcomes[-2] != "mixed":
            assert set(said_by_commands(folder, capsys).values()) == {True}
        left = [path.name for path in leftovers(folder, NAMES)]
        assert {path.name for path in folder.iterdir()} == {*NAMES, *left}
        said = broken_off.write(folder, broken_off.report(plain.record(purpose="third")))
        assert ("note: the earlier files were a mixed set" in said) == (outcomes[-1] == "mixed")
        assert [name for name in left if name not in said] == []
        assert ("what a writing that was broken off left behind" in said) == bool(left)
        assert {path.name for path in folder.iterdir()} == set(NAMES)
    assert outcomes == sorted(outcomes, key=["old", "mixed", "new"].index)
    assert outcomes.count("old") > 12 and outcomes.count("mixed") == 2 and outcomes.count("new") > 3


@needs_fork
def test_a_whole_set_is_not_called_mixed(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    broken_off.write(tmp_path, broken_off.report(plain.record()))
    assert set(said_by_commands(tmp_path, capsys).values()) == {False}


@needs_fork
def test_killed_while_there_was_nothing_yet(tmp_path: Path) -> None:
    _, folders = killed(tmp_path, "for check", earlier=False)
    new = content(folders[-1])
    counts = []
    for folder in folders:
        assert reports(folder).items() <= new.items()
        counts.append(len(reports(folder)))
        broken_off.write(folder, broken_off.report(plain.record(purpose="third")))
        assert set(content(folder)) == set(NAMES)
    assert counts == sorted(counts) and set(counts) == {0, 1, 2, 3}


@needs_fork
def test_killed_on_the_way_to_a_final_status(tmp_path: Path) -> None:
    old, folders = killed(tmp_path, "checked", earlier=True)
    new = content(folders[-1])
    refused = 0
    for folder in folders:
        before = reports(folder)
        if before == old:
            continue
        with pytest.raises(CommandError, match='is issued with status "checked" and is never overwritten') as caught:
            broken_off.write(folder, broken_off.report(plain.record()))
        assert reports(folder) == before
        assert ("left of a writing that was broken off" in str(caught.value)) == (before != new)
        if before != new:
            refused += 1
            for name in NAMES[:2]:
                if before[name] == new[name]:
                    (folder / name).unlink()
            broken_off.write(folder, broken_off.report(plain.record()))
            assert set(content(folder)) == set(NAMES)
    assert refused == 2


# --- a disk that is full, a place where nothing can be written


def mounted(place: Path, *options: str) -> Iterator[Path]:
    place.mkdir()
    command = ["mount", "-t", "tmpfs", *options, "tmpfs", str(place)]
    try:
        result = subprocess.run(command, capture_output=True, text=True)
    except FileNotFoundError:
        pytest.skip("the system has no mount command")
    if result.returncode:
        pytest.skip(f"no file system can be mounted here: {result.stderr.strip()}")
    try:
        yield place
    finally:
        subprocess.run(["umount", str(place)], check=True)


@pytest.fixture
def small_disk(tmp_path: Path) -> Iterator[Path]:
    """A disk of 128 KB."""
    yield from mounted(tmp_path / "disk", "-o", "size=128k")


def put(folder: Path) -> None:
    for name, data in OLD.items():
        (folder / name).write_bytes(data)


@pytest.mark.parametrize("room", [0, 4096, 20000, 102400])
def test_a_full_disk_leaves_the_earlier_files(room: int, small_disk: Path) -> None:
    put(small_disk)
    held = small_disk / "other"
    held.write_bytes(b"x")
    status = os.statvfs(small_disk)
    held.write_bytes(b"x" * max(0, status.f_bavail * status.f_frsize + 4096 - room))
    before = content(small_disk)
    with pytest.raises(CommandError, match=r"cannot be written \(No space left on device\); nothing was changed"):
        replace_together(small_disk, NEW)
    assert content(small_disk) == before
    held.unlink()
    replace_together(small_disk, NEW)
    assert content(small_disk) == NEW


def test_an_issue_onto_a_full_disk(small_disk: Path) -> None:
    broken_off.write(small_disk, broken_off.report(plain.record()))
    before = content(small_disk)
    record = plain.record(purpose="x" * 60000)
    with pytest.raises(CommandError, match=r"C-101_A\..* cannot be written \(No space left on device\)"):
        broken_off.write(small_disk, broken_off.report(record))
    assert content(small_disk) == before
    assert all(finding.good for finding in recheck(small_disk / NAMES[1]) if finding.what == "record beside it")


def test_leftovers_make_room_first(small_disk: Path) -> None:
    put(small_disk)
    (small_disk / ".a.pdf.0123abcd.new").write_bytes(b"x" * 80000)
    replace_together(small_disk, NEW)
    assert content(small_disk) == NEW


def locked(path: Path) -> Callable[[], object]:
    """Make a file or folder one that cannot be changed, and return what makes it free again."""
    for flag in ("+i", "-i"):
        try:
            result = subprocess.run(["chattr", flag, str(path)], capture_output=True, text=True)
        except FileNotFoundError:
            pytest.skip("the system has no chattr command")
        if result.returncode:
            pytest.skip(f"nothing can be locked here: {result.stderr.strip()}")
    subprocess.run(["chattr", "+i", str(path)], check=True)
    return lambda: subprocess.run(["chattr", "-i", str(path)], check=True)


@pytest.mark.parametrize("name", [*OLD, "."])
def test_a_file_or_folder_that_is_locked(name: str, tmp_path: Path) -> None:
    put(tmp_path)
    free = locked(tmp_path / name)
    try:
        with pytest.raises(CommandError, match=r"cannot be written .*Operation not permitted.*; nothing was"):
            replace_together(tmp_path, NEW)
        assert content(tmp_path) == OLD
    finally:
        free()
    replace_together(tmp_path, NEW)
    assert content(tmp_path) == NEW


def test_a_disk_that_can_only_be_read(tmp_path: Path) -> None:
    for place in mounted(tmp_path / "disk", "-o", "size=1m"):
        put(place)
        subprocess.run(["mount", "-o", "remount,ro", str(place)], check=True)
        with pytest.raises(CommandError, match=r"cannot be written \(Read-only file system\); nothing was changed"):
            replace_together(place, NEW)
        assert content(place) == OLD


@pytest.mark.parametrize("name", NAMES)
def test_an_issue_where_a_folder_has_the_name(name: str, tmp_path: Path) -> None:
    (tmp_path / name).mkdir()
    with pytest.raises(CommandError, match=rf"{name} cannot be written \(a folder has this name\); nothing was"):
        broken_off.write(tmp_path, broken_off.report(plain.record()))
    assert content(tmp_path) == {}
