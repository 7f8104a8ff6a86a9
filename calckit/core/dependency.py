"""What a result rests on, as plain data for a drawing.

Knows how operands lead from line to line. Must not know how the lines are drawn.
"""

from __future__ import annotations

from typing import Any

from calckit import units
from calckit.core.book import Book
from calckit.core.record import Line


def dependency(book: Book, result: str) -> dict[str, Any]:
    """The lines above `result` and itself, in document order, and the edges between them."""
    needs: dict[str, list[str]] = {}
    ahead = [result]
    while ahead:
        id_ = ahead.pop()
        if id_ not in needs:
            needs[id_] = _suppliers(book, book.entries[id_].line)
            ahead += needs[id_]
    lines = {line.id: (line.n, _name(line), _value(line)) for line in book.snapshot() if line.id in needs}
    return {"lines": lines, "edges": [(giver, id_) for id_ in lines for giver in needs[id_]], "result": result}


def _suppliers(book: Book, line: Line) -> list[str]:
    """The lines behind the operands of a line; one typed in place has none."""
    found = [book.find(line.part, name) for name, operand in line.inputs.items() if operand.content]
    return [entry.line.id for entry in found if entry]


def _name(line: Line) -> str:
    if not line.symbol:
        return f"{line.part}: {line.meaning}" if line.part else line.meaning
    return line.id


def _value(line: Line) -> str:
    if line.verdict:
        return line.verdict
    if not isinstance(line.shown, list):
        return line.shown
    ends = sorted(zip(line.value, line.shown, strict=True))  # type: ignore[arg-type]
    return f"{ends[0][1]} to {ends[-1][1]} {units.shown(line.unit)}".rstrip()
