"""What stands below the cells of a live session, and the marks put there when its lines no longer hold.

Knows which display holds which lines and what a mark says. Must not know when a line is stale, nor how a line looks.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from calckit.core import display
from calckit.core.book import Book, Cell, this_cell
from calckit.core.record import Line, Table

_LONGEST = 48
"""Characters of a cell's first line that name it."""


@dataclass
class Output:
    """One display: the `place`-th below its cell, the lines it shows, its forms as first shown, the mark it bears."""

    cell: Cell
    place: int
    ids: tuple[str, ...]
    data: Mapping[str, Any]
    mark: str = ""

    @property
    def display_id(self) -> str:
        """The same for the same cell and place, whenever the cell runs."""
        return f"calckit {self.cell.key} {self.place}"


@dataclass
class Outputs:
    """The displays of a calculation that stand in the notebook."""

    book: Book
    shown: list[Output] = field(default_factory=list)
    names: dict[str, str] = field(default_factory=dict)

    def show(self, lines: Sequence[Line], tables: Sequence[Table], notices: Sequence[str]) -> None:
        """Show lines and tables below the cell that runs."""
        cell = this_cell()
        self.shown = [output for output in self.shown if output.cell.key != cell.key or output.cell == cell]
        place = 1 + sum(output.cell == cell for output in self.shown)
        output = Output(cell, place, tuple(line.id for line in lines), {})
        output.data = display.show(lines, tables, notices, output.display_id)
        if output.data:
            self.shown.append(output)

    def settle(self, result: Any) -> None:
        """After a run of a cell, which gave `result`: mark what became stale, and take marks off what is fresh."""
        cell = this_cell()
        first = next((line.strip() for line in result.info.raw_cell.splitlines() if line.strip()), "")
        first = first if len(first) <= _LONGEST else f"{first[:_LONGEST]}..."
        self.names[cell.key] = f"[{result.execution_count}] {first}"
        self.shown = [output for output in self.shown if output.cell.key != cell.key or output.cell == cell]
        if self.book.settings.clean:
            return
        stale = self.book.stale()
        for output in self.shown:
            self._put(output, self._mark(output, stale))

    def start_afresh(self) -> None:
        """Mark everything shown: its calculation has been started afresh."""
        for output in self.shown:
            self._put(output, "stale: the calculation was started afresh; run this cell again")
        self.shown = []

    def why(self, ids: Iterable[str], stale: Mapping[str, Sequence[str]]) -> str:
        """What changed, and the cells to run again in order, for some of the stale lines."""
        causes, cells = self.book.behind(ids, stale)
        again = "; ".join(map(self._named, cells))
        return f"{', '.join(causes)}; run again{', in this order' if len(cells) > 1 else ''}: {again}"

    def _named(self, cell: Cell) -> str:
        return self.names.get(cell.key, cell.key) + (" (deleted)" if cell.key in self.book.deleted else "")

    def _mark(self, output: Output, stale: Mapping[str, Sequence[str]]) -> str:
        entries = self.book.entries
        own = [id_ for id_ in output.ids if id_ in entries and entries[id_].cell == output.cell]
        lost = [id_ for id_ in output.ids if id_ not in own]
        marks = []
        if lost:
            marks.append(f"no longer in force: {', '.join(lost)}, written by another cell since")
        if found := [id_ for id_ in own if id_ in stale]:
            which = f" ({', '.join(found)})" if len(found) < len(output.ids) else ""
            marks.append(f"stale{which}: {self.why(found, stale)}")
        return "; ".join(marks)

    def _put(self, output: Output, mark: str) -> None:
        if mark != output.mark:
            output.mark = mark
            display.show_again(output.data, mark, output.display_id)
