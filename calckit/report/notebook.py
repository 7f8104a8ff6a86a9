"""A notebook as a file: its cells, their ids, the headings above them, its hash and its copy without outputs.

Knows the notebook format and plain JSON. Must not know how a notebook is run or what its cells compute.
"""

from __future__ import annotations

import json
import re
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from calckit.core.record import canonical, digest
from calckit.errors import CommandError

_SAVE_ONCE = "cure: open it in a current notebook editor and save it once"
_KINDS = ("code", "markdown", "raw")
_FENCE = re.compile(r" {0,3}(`{3,}|~{3,})")
_SECTION = re.compile(r" {0,3}##[ \t]+(.*?)(?:[ \t]+#+)?[ \t]*$")


@dataclass(frozen=True)
class Cell:
    """One cell: `kind` is "code", "markdown" or "raw"; `pictures` are those pasted into a markdown cell."""

    id: str
    kind: str
    text: str
    pictures: dict[str, Any]

    @property
    def runs(self) -> bool:
        """Whether the cell holds code to be run."""
        return self.kind == "code" and bool(self.text.strip())


@dataclass(frozen=True)
class Notebook:
    """A notebook read from `folder`; `stem` is its file name without ending, `data` its JSON as it stands."""

    stem: str
    folder: Path
    cells: tuple[Cell, ...]
    data: dict[str, Any]

    def source_hash(self) -> str:
        """SHA-256 of the cells' id, type and text."""
        return digest(canonical([[cell.id, cell.kind, cell.text] for cell in self.cells]))

    def cell_hashes(self) -> dict[str, str]:
        """SHA-256 of id, type and text of each cell, by its id."""
        return {cell.id: digest(canonical([cell.id, cell.kind, cell.text])) for cell in self.cells}

    def headings(self) -> list[str]:
        """For each cell that runs, the nearest heading of level 2 above it, "" before the first.

        >>> text = '{"nbformat": 4, "nbformat_minor": 5, "metadata": {}, "cells": [%s, %s]}' % (
        ...     '{"id": "a", "cell_type": "markdown", "source": "## Site", "metadata": {}}',
        ...     '{"id": "b", "cell_type": "code", "source": "1", "metadata": {}}')
        >>> parse(text, "demo", Path()).headings()
        ['Site']
        """
        found, heading = [], ""
        for cell in self.cells:
            if cell.kind == "markdown":
                heading = (_sections(cell.text) or [heading])[-1]
            elif cell.runs:
                found.append(heading)
        return found

    def bare(self) -> bytes:
        """The notebook without outputs, counts and metadata: what the source hash covers, and pasted pictures."""
        cells = []
        for cell in self.cells:
            entry: dict[str, Any] = {"cell_type": cell.kind, "id": cell.id, "metadata": {}}
            if cell.kind == "code":
                entry |= {"execution_count": None, "outputs": []}
            if cell.pictures:
                entry["attachments"] = cell.pictures
            cells.append({**entry, "source": cell.text.splitlines(keepends=True)})
        whole = {
            "cells": cells,
            "metadata": {"language_info": {"name": "python"}},
            "nbformat": 4,
            "nbformat_minor": 5,
        }
        return (json.dumps(whole, ensure_ascii=False, indent=1) + "\n").encode()


def read(path: Path) -> Notebook:
    """Read a notebook file.

    Raises CommandError if it cannot be read, is no notebook, or has cells without an id or with the id of another.
    """
    try:
        text = path.read_text(encoding="utf-8")
    except (OSError, UnicodeDecodeError) as error:
        reason = error.strerror if isinstance(error, OSError) else "not UTF-8 text"
        raise CommandError(f"notebook {path} cannot be read: {reason}") from error
    return parse(text, path.stem, path.resolve().parent)


def parse(text: str, stem: str, folder: Path) -> Notebook:
    """Read a notebook from its JSON text; raises as `read` does."""
    try:
        data = json.loads(text)
    except ValueError as error:
        raise CommandError(f"{stem} is no notebook: {error}") from error
    if not isinstance(data, dict) or "nbformat" not in data:
        raise CommandError(f"{stem} is no notebook: it names no notebook format")
    if data["nbformat"] != 4:
        raise CommandError(f"notebook {stem} has format {data['nbformat']}; needed 4; {_SAVE_ONCE}")
    entries = data.get("cells")
    if not isinstance(entries, list) or not all(
        isinstance(entry, dict) and entry.get("cell_type") in _KINDS for entry in entries
    ):
        raise CommandError(f"notebook {stem} has cells that are neither {', '.join(_KINDS)}; {_SAVE_ONCE}")
    blank = sum(1 for entry in entries if not entry.get("id"))
    if blank:
        raise CommandError(
            f"notebook {stem}: {blank} of its {len(entries)} cells have no id, so that lines cannot be traced to "
            f"cells; {_SAVE_ONCE}"
        )
    ids = [entry["id"] for entry in entries]
    twice = sorted({id_ for id_ in ids if ids.count(id_) > 1})
    if twice:
        raise CommandError(
            f"notebook {stem}: the same id on more than one cell: {', '.join(twice)}; cure: delete the copy and "
            "insert its text into a new cell"
        )
    return Notebook(stem, folder, tuple(_cell(entry) for entry in entries), data)


def _cell(entry: dict[str, Any]) -> Cell:
    source = entry.get("source", "")
    text = source if isinstance(source, str) else "".join(source)
    return Cell(entry["id"], entry["cell_type"], text, entry.get("attachments", {}))


def _sections(markdown: str) -> list[str]:
    """The headings of level 2 in a Markdown text, fenced code left out."""
    found, fence = [], ""
    for line in markdown.splitlines():
        mark = _FENCE.match(line)
        if mark and (not fence or mark[1].startswith(fence)):
            fence = "" if fence else mark[1]
        elif not fence and (section := _SECTION.match(line)):
            found.append(section[1])
    return found
