"""The record of a calculation as it stands.

Knows how lines, tables, figures, open items and the title block come together. Must not know files or exporters.
"""

from __future__ import annotations

import importlib.metadata
import platform
from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

import calckit
from calckit.core.record import NOT_CHECKED, Line, OpenItem, Record

if TYPE_CHECKING:
    from calckit.core.calc import Calc

LIBRARIES = ("sympy", "pint", "numpy", "matplotlib")


def assemble(calc: Calc) -> Record:
    """The record: numbered lines, tables, figures, open items, summaries. Hashes and seals are left to the issue."""
    lines = calc.lines.snapshot()
    for line in lines:
        if line.source:
            line.source.confirmed = calc.sources.confirmation(line.source)
    return Record(
        _calculation(calc), lines,
        [calc.lines.tables[id_] for _, kind, id_ in calc.lines.blocks if kind == "table"],
        [calc.lines.figures[id_] for _, kind, id_ in calc.lines.blocks if kind == "figure"],
        list(_open_items(calc, lines)), calc.standard.summaries(calc), _cells(calc),
        list(calc.standard.field_of_use), list(calc.standard.not_covered), list(calc.enclosures.values()),
    )  # fmt: skip


def _calculation(calc: Calc) -> dict[str, Any]:
    standard = calc.standard
    supplements = calc.title_block["supplements"]
    return calc.title_block | {
        "standards": [
            {"id": standard.family, "edition": standard.edition, "name": standard.name, "supplements": supplements}
        ],
        "documents": calc.sources.entries(),
        "revisions": list(calc.revisions),
        "parts": [{"id": part.id, "title": part.title} for part in calc.parts.values()],
        "software": {
            "name": "calckit",
            "version": calckit.__version__,
            "python": platform.python_version(),
            "platform": platform.system(),
            "libraries": {name: importlib.metadata.version(name) for name in LIBRARIES},
        },
    }


def _cells(calc: Calc) -> list[list[list[str]]]:
    runs: dict[int, list[list[str]]] = {}
    for cell, kind, id_ in calc.lines.blocks:
        runs.setdefault(cell.run, []).append([kind, id_])
    if not calc.lines.settings.clean:
        return [runs[run] for run in sorted(runs)]
    return [runs.get(run, []) for run in range(1, max(runs, default=0) + 1)]


def _open_items(calc: Calc, lines: list[Line]) -> Iterator[OpenItem]:
    closed = {line.closes for line in lines if line.closes}
    for line in lines:
        if line.id in closed:
            continue
        for number, flag in enumerate((flag for flag in line.flags if flag.open), 1):
            yield OpenItem(f"{line.id}-{number}", line.id, flag.text, flag.owner, "open")
    used: dict[str, Line] = {}
    for line in lines:
        if line.source and line.source.standard and line.verdict != NOT_CHECKED:
            used.setdefault(line.source.where, line)
    name = calc.standard.name
    for where, line in used.items():
        if where and where not in calc.sources.confirmed:
            yield OpenItem(f"confirm-{where}", line.id, f"{name} {where}", "holder of the standard", "confirm")
    overridden = {line.id for line in lines if line.override}
    for id_ in sorted(calc.overrides.keys() - overridden):
        text = f"the override of {id_!r} meets no single value computed in this calculation"
        yield OpenItem(f"override-{id_}", "", text, "originator", "open")
    for what in calc.sources.confirmed:
        if what not in used:
            text = f"the confirmation of {what!r} meets no line of this calculation"
            yield OpenItem(f"confirmation-{what}", "", text, "originator", "open")
