"""File names, and the replacement of several files together.

Knows folders, names and how a write can fail. Must not know what the files hold.
"""

from __future__ import annotations

import os
import re
import secrets
import shutil
from collections.abc import Container, Iterable, Mapping, Sequence
from contextlib import suppress
from pathlib import Path

from calckit.core.record import WITHDRAWN
from calckit.errors import CommandError

_TEMPORARY = re.compile(r"\.(.+)\.[0-9a-f]{8}\.(?:new|old)")
_UNFIT = re.compile(r'[<>:"/\\|?*\x00-\x1f\x7f]|^[. ]|[. ]$')


def report_name(number: str, revision: str, stem: str, status: str = "") -> str:
    """The name of an issue, without ending: `<number>_<revision>`, the notebook's stem if the number is blank.

    A revision that is withdrawn has its status at the end, so that the files that were in force stay beside it.

    >>> report_name("C-101/2", "A", "building"), report_name("", "A", "building")
    ('C-101-2_A', 'building')
    >>> report_name("C-101", "A", "building", "superseded")
    'C-101_A_superseded'
    """
    number, revision = number.strip(), revision.strip()
    ending = f"_{status}" if status in WITHDRAWN else ""
    if not number:
        return stem + ending
    return _UNFIT.sub("-", f"{number}_{revision}" if revision else number) + ending


def replace_together(folder: Path, files: Mapping[str, bytes]) -> list[Path]:
    """Write files under these names into a folder: all of them, or none.

    A name may be a full path to a file elsewhere.
    Each is written and flushed under a temporary name first; then they take their places in the order given. If one
    cannot, those before it get their earlier content back. The last file should be the one that names the others, so
    that a power cut between two renames leaves a set that shows it. What an earlier call that was broken off left
    behind is removed: parts at once, kept copies after the files have taken their places.

    Raises CommandError naming the file that could not be written; every earlier file is then as it was.

    >>> import tempfile
    >>> with tempfile.TemporaryDirectory() as folder:
    ...     [path.name for path in replace_together(Path(folder), {"a.txt": b"1", "b.txt": b"2"})]
    ['a.txt', 'b.txt']
    """
    token = secrets.token_hex(4)
    targets = [folder / name for name in files]
    new = [target.with_name(f".{target.name}.{token}.new") for target in targets]
    old = [target.with_name(f".{target.name}.{token}.old") for target in targets]
    at, moved, had = folder, 0, set[Path]()
    try:
        folder.mkdir(parents=True, exist_ok=True)
        _discard(part for part in leftovers(folder, files) if part.suffix == ".new")
        for at, part, data in zip(targets, new, files.values(), strict=True):  # noqa: B007
            _write(part, data)
        for at, keep in zip(targets, old, strict=True):
            if at.is_dir():
                raise IsADirectoryError("a folder has this name")
            if at.exists():
                shutil.copy2(at, keep)
                had.add(at)
        for at, part in zip(targets, new, strict=True):
            os.replace(part, at)
            moved += 1
    except BaseException as error:
        _discard(new)
        _put_back(targets[:moved], old[:moved], had)
        _discard(old)
        if isinstance(error, OSError):
            raise CommandError(
                f"{at} cannot be written ({error.strerror or error}); nothing was changed; "
                "cure: close it where it is open, or choose another folder with --to"
            ) from error
        raise
    _discard(old)
    _discard(leftovers(folder, files))
    for parent in {target.parent for target in targets}:
        _flush_folder(parent)
    return targets


def leftovers(folder: Path, names: Iterable[str]) -> list[Path]:
    """Temporary files under these names in a folder, as a writing that was broken off leaves them behind.

    >>> leftovers(Path("no such folder"), ["a.txt"])
    []
    """
    targets = {folder / name for name in names}
    places = sorted({target.parent for target in targets if target.parent.is_dir()})
    named = [(path, _TEMPORARY.fullmatch(path.name)) for place in places for path in sorted(place.iterdir())]
    return [path for path, found in named if found and path.with_name(found[1]) in targets]


def _put_back(targets: Sequence[Path], kept: Sequence[Path], had: Container[Path]) -> None:
    """Give the targets their earlier content; what cannot be given back stays in its kept copy, which is named."""
    stuck = []
    for target, keep in zip(targets, kept, strict=True):
        try:
            os.replace(keep, target) if target in had else target.unlink()
        except OSError:
            stuck.append(f"{target} (its earlier content: {keep})")
    if stuck:
        raise CommandError(f"the writing failed half-way, and these could not be put back: {', '.join(stuck)}")


def _discard(paths: Iterable[Path]) -> None:
    for path in paths:
        with suppress(OSError):
            path.unlink(missing_ok=True)


def _write(path: Path, data: bytes) -> None:
    with path.open("xb") as file:
        file.write(data)
        file.flush()
        os.fsync(file.fileno())


def _flush_folder(folder: Path) -> None:
    """Make the renames last through a power cut, where the system lets a folder be flushed."""
    with suppress(OSError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)
