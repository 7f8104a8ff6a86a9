"""Writing several files together: all or none, whatever goes wrong."""

import os
from pathlib import Path

import pytest

from calckit.errors import CommandError
from calckit.report import files
from calckit.report.files import replace_together, report_name

NEW = {"a.html": b"new html", "a.pdf": b"new pdf", "a.record.json": b"new record"}
OLD = {"a.html": b"old html", "a.pdf": b"old pdf", "a.record.json": b"old record"}


def content(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir() if path.is_file()}


def put(folder: Path) -> None:
    for name, data in OLD.items():
        (folder / name).write_bytes(data)


def test_files_are_written_and_nothing_else_stays(tmp_path: Path) -> None:
    assert replace_together(tmp_path, NEW) == [tmp_path / name for name in NEW]
    assert content(tmp_path) == NEW


def test_files_are_replaced(tmp_path: Path) -> None:
    put(tmp_path)
    replace_together(tmp_path, NEW)
    assert content(tmp_path) == NEW


def test_folder_is_made(tmp_path: Path) -> None:
    replace_together(tmp_path / "a" / "b", NEW)
    assert content(tmp_path / "a" / "b") == NEW


def test_the_last_file_is_renamed_last(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    order = []

    def rename(source: Path, target: Path) -> None:
        order.append(Path(target).name)
        os.rename(source, target)

    monkeypatch.setattr(files.os, "replace", rename)
    replace_together(tmp_path, NEW)
    assert order == list(NEW)


@pytest.mark.parametrize("failing", list(NEW))
@pytest.mark.parametrize("earlier", [True, False])
def test_a_rename_that_fails_changes_nothing(
    failing: str, earlier: bool, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    if earlier:
        put(tmp_path)
    rename = os.replace

    def refuse(source: Path, target: Path) -> None:
        if Path(target).name == failing and str(source).endswith(".new"):
            raise PermissionError(13, "in use by another program")
        rename(source, target)

    monkeypatch.setattr(files.os, "replace", refuse)
    with pytest.raises(CommandError, match=rf"{failing} cannot be written \(in use by another program\); nothing was"):
        replace_together(tmp_path, NEW)
    assert content(tmp_path) == (OLD if earlier else {})


@pytest.mark.parametrize("name", list(NEW))
def test_a_folder_of_that_name_changes_nothing(name: str, tmp_path: Path) -> None:
    (tmp_path / name).mkdir()
    with pytest.raises(CommandError, match=rf"{name} cannot be written \(a folder has this name\)"):
        replace_together(tmp_path, NEW)
    assert content(tmp_path) == {}


def test_a_disk_that_fills_changes_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    put(tmp_path)
    calls = []

    def full(handle: int) -> None:
        calls.append(handle)
        if len(calls) == 2:
            raise OSError(28, "No space left on device")

    monkeypatch.setattr(files.os, "fsync", full)
    with pytest.raises(CommandError, match=r"a\.pdf cannot be written \(No space left on device\)"):
        replace_together(tmp_path, NEW)
    assert content(tmp_path) == OLD


def test_an_interruption_changes_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    put(tmp_path)
    rename = os.replace

    def stop(source: Path, target: Path) -> None:
        if Path(target).name == "a.record.json":
            raise KeyboardInterrupt
        rename(source, target)

    monkeypatch.setattr(files.os, "replace", stop)
    with pytest.raises(KeyboardInterrupt, match=r"^$"):
        replace_together(tmp_path, NEW)
    assert content(tmp_path) == OLD


def test_what_cannot_be_put_back_is_kept_and_named(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    put(tmp_path)
    rename = os.replace

    def stuck(source: Path, target: Path) -> None:
        if Path(target).name == "a.pdf" or str(source).endswith(".old"):
            raise PermissionError(13, "in use by another program")
        rename(source, target)

    monkeypatch.setattr(files.os, "replace", stuck)
    with pytest.raises(CommandError, match=r"could not be put back: .*a\.html \(its earlier content: .*\.old\)"):
        replace_together(tmp_path, NEW)
    assert b"old html" in content(tmp_path).values()


def test_a_folder_that_is_a_file_is_named(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("text")
    with pytest.raises(CommandError, match="out cannot be written"):
        replace_together(tmp_path / "out", NEW)
    assert (tmp_path / "out").read_text() == "text"


@pytest.mark.skipif(not hasattr(os, "geteuid") or os.geteuid() == 0, reason="the superuser may write anywhere")
def test_an_unwritable_folder_changes_nothing(tmp_path: Path) -> None:
    put(tmp_path)
    tmp_path.chmod(0o500)
    try:
        with pytest.raises(CommandError, match="cannot be written"):
            replace_together(tmp_path, NEW)
        assert content(tmp_path) == OLD
    finally:
        tmp_path.chmod(0o700)


@pytest.mark.parametrize(
    ("number", "revision", "name"),
    [
        ("C-101", "A", "C-101_A"),
        ("C-101", "", "C-101"),
        ("", "A", "stem"),
        ("  ", "A", "stem"),
        ("C/101:7", "B?", "C-101-7_B-"),
        ("..\\up", "0", "-.-up_0"),
        ("Büro 7", "1", "Büro 7_1"),
        ("a\nb", "A.", "a-b_A-"),
    ],
)
def test_names(number: str, revision: str, name: str) -> None:
    assert report_name(number, revision, "stem") == name
