"""The lines of one calculation as they stand: who wrote them, in which order, what rests on what.

Knows cells, transactions, replacing and removing lines, and when a line is stale. Must not know how a line is
computed, shown or exported.
"""

from __future__ import annotations

import copy
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field, replace
from graphlib import CycleError, TopologicalSorter
from typing import Any

from calckit.core.record import Figure, Line, Operand, Table, canonical, digest
from calckit.core.settings import Settings, current
from calckit.errors import DuplicateError


@dataclass(frozen=True)
class Cell:
    """A run of a cell: the cell's `key` and the number of the `run`."""

    key: str
    run: int


@dataclass
class Entry:
    """A line with what the core must remember beside it.

    `numerals` are the digits as typed (None for a computed value), `decimals` those of the shown form; `remake` works
    the line again with other decimals, for the column of a table.
    """

    line: Line
    cell: Cell
    numerals: tuple[str, ...] | None = None
    decimals: int = 0
    remake: Callable[[int], Entry] | None = None
    remade: dict[int, Entry] = field(default_factory=dict)


_runs: list[str] = []


def this_cell() -> Cell:
    """The cell that is running; outside a notebook the whole script counts as one run.

    In a clean run the issuing process says which cell it is; in a live session runs are told apart by the message that
    asked for them, and cells by the id that the notebook sends along.
    """
    shell = _shell()
    if shell is None:
        return Cell("script", 0)
    folder = current().folder
    marker = folder / "cell" if folder else None
    if marker and marker.is_file():
        number = int(marker.read_text(encoding="ascii"))
        return Cell(f"cell {number}", number)
    request = shell.get_parent()
    message = request.get("header", {}).get("msg_id", "")
    if not _runs or _runs[-1] != message:
        _runs.append(message)
    return Cell(request.get("metadata", {}).get("cellId") or f"run {len(_runs)}", len(_runs))


def _shell() -> Any:
    try:
        from IPython import get_ipython
    except ImportError:
        return None
    return get_ipython()


@dataclass
class Book:
    """All lines, tables and figures of a calculation, in document order."""

    settings: Settings
    entries: dict[str, Entry] = field(default_factory=dict)
    tables: dict[str, Table] = field(default_factory=dict)
    figures: dict[str, Figure] = field(default_factory=dict)
    blocks: list[tuple[Cell, str, str]] = field(default_factory=list)
    notices: list[str] = field(default_factory=list)
    written: list[str] = field(default_factory=list)
    fresh_tables: set[str] = field(default_factory=set)
    depth: int = 0
    deleted: set[str] = field(default_factory=set)

    def watch(self, then: Callable[[Any], None]) -> None:
        """Drop, after each run of a cell, the lines that the cell no longer writes; `then` takes its result."""

        def settle(result: Any) -> None:
            self.drop_left_over(this_cell())
            self.note_deleted()
            then(result)

        shell = _shell()
        if shell is not None:
            shell.events.register("post_run_cell", settle)

    def note_deleted(self) -> None:
        """Note the cells that the notebook, with its request to run one, says were deleted since."""
        shell = _shell()
        if shell is not None:
            self.deleted |= set(shell.get_parent().get("metadata", {}).get("deletedCells", ()))
            self.deleted.discard(this_cell().key)

    def without_cell(self) -> list[str]:
        """Lines in force whose cell was deleted from the notebook, in document order."""
        self.note_deleted()
        return [id_ for cell, kind, id_ in self.blocks if kind == "line" and cell.key in self.deleted]

    def drop_left_over(self, cell: Cell) -> None:
        """Remove what earlier runs of this cell wrote and this run did not."""

        def left_over(other: Cell) -> bool:
            return other.key == cell.key and other.run < cell.run

        for id_ in [id_ for id_, entry in self.entries.items() if left_over(entry.cell)]:
            del self.entries[id_]
        gone = [(kind, id_) for where, kind, id_ in self.blocks if left_over(where)]
        self.blocks = [block for block in self.blocks if not left_over(block[0])]
        for kind, id_ in gone:
            store: dict[str, Any] = {"table": self.tables, "figure": self.figures}.get(kind, {})
            if not any(block[1:] == (kind, id_) for block in self.blocks):
                store.pop(id_, None)

    @contextmanager
    def together(self) -> Iterator[list[str]]:
        """Write all lines or none; yields the list of ids written so far."""
        kept = (dict(self.entries), dict(self.tables), dict(self.figures), list(self.blocks), list(self.written))
        self.depth += 1
        try:
            yield self.written
        except BaseException:
            self.entries, self.tables, self.figures, self.blocks, self.written = kept
            raise
        finally:
            self.depth -= 1

    def write(self, entry: Entry) -> Entry:
        """Put a line in its place: a new one at the end, a repeated one where it stood."""
        line = entry.line
        self._claim("line", line.id, self.entries[line.id].cell if line.id in self.entries else None)
        headings, run = self.settings.headings, entry.cell.run
        line.section = headings[run - 1] if 0 < run <= len(headings) else ""
        line.content = digest(canonical(line.hashed()))
        self.entries[line.id] = entry
        self.written.append(line.id)
        return entry

    def write_table(self, table: Table) -> None:
        """Put a table after the lines it prints."""
        self._claim("table", table.id, self._where("table", table.id))
        self.tables[table.id] = table

    def write_figure(self, figure: Figure) -> None:
        """Put a figure in its place."""
        self._claim("figure", figure.id, self._where("figure", figure.id))
        self.figures[figure.id] = figure

    def _where(self, kind: str, id_: str) -> Cell | None:
        return next((cell for cell, *block in self.blocks if block == [kind, id_]), None)

    def _claim(self, kind: str, id_: str, earlier: Cell | None) -> None:
        cell = this_cell()
        if earlier is not None:
            if earlier == cell:
                raise DuplicateError(
                    f"{kind} {id_!r} is written twice in one run of a cell; give one of them another id"
                )
            if self.settings.clean:
                raise DuplicateError(f"{kind} {id_!r} is written by two cells; give one of them another id")
            if earlier.key != cell.key:
                self.notices.append(f"{kind} {id_} replaces the one that another cell wrote")
        place = next((i for i, (_, *block) in enumerate(self.blocks) if block == [kind, id_]), None)
        if place is None:
            self.blocks.append((cell, kind, id_))
        else:
            self.blocks[place] = (cell, kind, id_)

    def remade(self, entry: Entry) -> None:
        """Put a line worked again with other decimals in place of itself."""
        old = self.entries[entry.line.id]
        kept = {name: getattr(old.line, name) for name in ("section", "content", "source", "candidates", "margin")}
        entry.line, entry.cell = replace(entry.line, **kept), old.cell
        entry.line.inputs = old.line.inputs | entry.line.inputs
        self.entries[entry.line.id] = entry

    def find(self, part: str, name: str) -> Entry | None:
        """What a name stands for in a part: the part's own line, then the calculation's."""
        own = self.entries.get(f"{part}.{name}") if part and "." not in name else None
        return own or self.entries.get(name)

    def stale(self) -> dict[str, list[str]]:
        """Lines whose operands are no longer what they were -> the operands; and all that rests on such lines."""
        found: dict[str, list[str]] = {}
        while True:
            now = {id_: names for id_, entry in self.entries.items() if (names := self._outdated(entry.line, found))}
            if now == found:
                return found
            found = now

    def _outdated(self, line: Line, stale: Mapping[str, object]) -> list[str]:
        """Operands that are not what they were, or are themselves stale; one typed in place has no line behind it."""
        found = []
        for name, operand in line.inputs.items():
            entry = self.find(line.part, name)
            if operand.is_absent():
                changed = entry is not None
            else:
                changed = entry is None or entry.line.content != operand.content or entry.line.id in stale
            if changed and (operand.content or operand.is_absent()):
                found.append(name)
        return found

    def behind(self, ids: Iterable[str], stale: Mapping[str, Sequence[str]]) -> tuple[list[str], list[Cell]]:
        """Why lines are stale: what has become of the operands it began with, and the cells to run, in order."""
        causes: dict[str, None] = {}
        suppliers: dict[Cell, set[Cell]] = {}
        ahead, done = sorted(ids, reverse=True), set()
        while ahead:
            id_ = ahead.pop()
            if id_ in done:
                continue
            line, cell = self.entries[id_].line, self.entries[id_].cell
            needs = suppliers.setdefault(cell, set())
            done.add(id_)
            for name in stale[id_]:
                found = self.find(line.part, name)
                if found is None or found.line.id not in stale:
                    causes[f"{name} {_became(name, line.inputs[name], found)}"] = None
                    continue
                needs |= {found.cell} - {cell}
                ahead.append(found.line.id)
        return list(causes), self._in_order(suppliers)

    def _in_order(self, suppliers: Mapping[Cell, set[Cell]]) -> list[Cell]:
        """Cells so that each stands after those it takes from, otherwise in document order."""
        places = {cell: place for place, (cell, *_) in reversed(list(enumerate(self.blocks)))}
        sorter, ordered = TopologicalSorter(suppliers), list[Cell]()
        try:
            sorter.prepare()
        except CycleError:
            return sorted(suppliers, key=lambda cell: places[cell])
        while sorter.is_active():
            ready = sorted(sorter.get_ready(), key=lambda cell: places[cell])
            sorter.done(*ready)
            ordered += ready
        return ordered

    def snapshot(self) -> list[Line]:
        """Copies of all lines in document order, numbered 1..n."""
        lines = [copy.deepcopy(self.entries[id_].line) for _, kind, id_ in self.blocks if kind == "line"]
        for n, line in enumerate(lines, 1):
            line.n = n
        return lines


def _became(name: str, operand: Operand, found: Entry | None) -> str:
    if operand.is_absent():
        return "is there now"
    if found is None:
        return "is gone"
    return "changed" if found.line.id == name else f"is {found.line.id} now"
