"""The short form of a report: inputs, results and the path between.

Knows which lines that path has and what of the document model goes with them. Must not know output forms, nor how the
model is made. The record of a short form is that of the full one.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import fields, is_dataclass, replace
from typing import Any

from calckit.core.record import NOT_CHECKED, NOT_OK, Record
from calckit.report import influence
from calckit.report.lines import Lines
from calckit.report.model import Item, LineView, Ref, SectionView, TableView, View

_RESULTS = ("computed", "analysis", "check")

NAME_ENDING = "_short"
"""What the file name of a short form has behind that of the full one."""


def path(record: Record) -> set[str]:
    """The ids of the lines from the inputs to the governing results, and of the checks that are not OK or not made.

    Where no answer names a result, those count that no other line uses.

    >>> from tests.report.sample import record
    >>> {"h_n", "X.T_a", "X.V"} <= path(record()), "X.F_x" in path(record())
    (True, False)
    """
    lines = Lines(record)
    walked = set[str]()
    ends = [line.id for line in record.lines if line.kind in _RESULTS and not lines.used_in(line)]
    ahead = influence.governing(record) or ends
    while ahead:
        line = lines.by_id[ahead.pop()]
        if line.id not in walked:
            ahead += [ref.id for ref in lines.inputs(line)]
        walked.add(line.id)
    return walked | {line.id for line in record.lines if line.verdict in (NOT_OK, NOT_CHECKED)}


def shorten(view: View, record: Record) -> View:
    """The short form of a view; a reference to a line that does not stand in it is printed and leads nowhere."""
    kept = path(record)
    sections = tuple(left for section in view.sections if (left := _section(section, kept)).items)
    symbols = tuple(symbol for symbol in view.symbols if any(ref.id in kept for ref in symbol.refs))
    block = view.title_block
    full = ", ".join((f"calculation {block.number or view.software.notebook}",
                      *([f"revision {block.revision}"] if block.revision else []), f"content {view.short_hash}"))
    said = f"It prints {len(kept)} of {len(record.lines)} lines, with the numbers that they have in the full form"
    short: View = _unlinked(replace(view, sections=sections, symbols=symbols, matters=None), kept)
    return replace(short, title=f"{view.title} (short form)", short_of=full, short_note=said)


def _section(section: SectionView, kept: set[str]) -> SectionView:
    carried = (replace(one, to=tuple(ref for ref in one.to if ref.id in kept))
               for one in section.carried if one.ref.id in kept)  # fmt: skip
    return replace(
        section, items=tuple(_items(section.items, kept)), carried=tuple(one for one in carried if one.to)
    )


def _items(items: Iterable[Item], kept: set[str]) -> Iterable[Item]:
    for item in items:
        if isinstance(item, LineView) and item.id in kept:
            yield item
        elif isinstance(item, TableView) and any(column.ref.id in kept for column in item.columns):
            places = [place for place, column in enumerate(item.columns) if column.ref.id in kept]
            rows = tuple((label, tuple(cells[place] for place in places)) for label, cells in item.rows)
            yield replace(item, columns=tuple(item.columns[place] for place in places), rows=rows)


def _unlinked(thing: Any, kept: set[str]) -> Any:
    """A piece of the model with every reference to a line outside `kept` marked as leading nowhere."""
    if isinstance(thing, Ref):
        return thing if thing.id in kept else replace(thing, here=False)
    if isinstance(thing, tuple):
        return tuple(_unlinked(entry, kept) for entry in thing)
    if is_dataclass(thing) and not isinstance(thing, type):
        return replace(thing, **{f.name: _unlinked(getattr(thing, f.name), kept) for f in fields(thing)})
    return thing
