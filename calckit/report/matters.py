"""What matters, ready to be printed: the inputs that move the governing results, and the order in which to read them.

Knows the columns, rows and words of that table. Must not know how a slope is worked (`calckit.report.influence`) nor
any output form.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import groupby

from calckit import units
from calckit.core.record import Line, Record
from calckit.report import influence
from calckit.report.influence import Effect, Row
from calckit.report.lines import Lines, typeset
from calckit.report.model import Ref, Typeset

_MOST = 5  # rows with the results, if the strongest of each result are not more
_ACROSS = 8  # results side by side
_SHOWN = 0.0005  # the smallest effect that is not printed as 0
_NO_SLOPE = "no slope"


@dataclass(frozen=True)
class MovedView:
    """A column: one governing result."""

    ref: Ref
    part: str
    symbol: Typeset | None


@dataclass(frozen=True)
class MovedGroup:
    """Columns under one heading, in the words of the answer."""

    label: str
    columns: tuple[MovedView, ...]


@dataclass(frozen=True)
class EffectView:
    """Percent of a result for 1 % more of the input; `below` and `above` in place of `text` where the sides differ."""

    text: str
    below: str
    above: str


@dataclass(frozen=True)
class SwitchView:
    """The nearest branch that changes over: by what change of the input, and in which line."""

    percent: str
    ref: Ref


@dataclass(frozen=True)
class MoverView:
    """A row: one input, or neighboring entries of a list that are alike. `state` is what is unsettled about it."""

    ref: Ref
    symbol: Typeset | None
    name: str
    part: str
    level: str
    shown: str
    state: str
    effects: tuple[EffectView, ...]
    ties: tuple[Ref, ...]
    switch: SwitchView | None


@dataclass(frozen=True)
class MattersTable:
    """Some results side by side with the inputs that move them, the most influential first.

    `most` are the rows that stand with the results: the strongest of each result, and others up to five.
    """

    groups: tuple[MovedGroup, ...]
    rows: tuple[MoverView, ...]
    most: tuple[MoverView, ...]


@dataclass(frozen=True)
class BreakView:
    """Where a change of an input does not reach a result."""

    ref: Ref
    text: str


@dataclass(frozen=True)
class MattersView:
    """What matters. `still` are the inputs that stand in no row, in the order in which they are read next."""

    tables: tuple[MattersTable, ...]
    breaks: tuple[BreakView, ...]
    still: tuple[tuple[str, tuple[Ref, ...]], ...]


def build(record: Record, lines: Lines) -> MattersView | None:
    """What matters in a calculation; None if its answer names no number that was worked out.

    >>> from tests.report.sample import record
    >>> found = build(record(), Lines(record()))
    >>> [(row.ref.id, row.effects[4].text) for row in found.tables[0].rows]  # an overridden value counts as an input
    [('Y.C_s', '+1.000')]
    """
    ids = influence.governing(record)
    if not ids:
        return None
    rows = influence.table(record, ids)
    tables, seen = [], set[str]()
    for start in range(0, len(ids), _ACROSS):
        across = [replace(row, effects=row.effects[start : start + _ACROSS]) for row in rows]
        moving = [row for row in across if _moves(row)]
        seen |= {row.line for row in moving}
        groups = tuple(_groups(record, lines, ids[start : start + _ACROSS]))
        tables.append(MattersTable(groups, *_movers(moving, lines)))
    broken = tuple(
        BreakView(ref, found.text) for found in influence.breaks(record, ids) if (ref := lines.ref(found.line))
    )
    return MattersView(tuple(tables), broken, tuple(_still([row for row in rows if row.line not in seen], lines)))


def _moves(row: Row) -> bool:
    """Whether a row has anything to tell."""
    return any(effect.size >= _SHOWN or effect.switch or effect.breaks for effect in row.effects)


def _groups(record: Record, lines: Lines, ids: Sequence[str]) -> Iterator[MovedGroup]:
    labels = {id_: row.label for summary in record.summaries if summary.role == "answer"
              for row in summary.rows for id_ in row.lines}  # fmt: skip
    for label, group in groupby(ids, key=labels.__getitem__):
        columns = tuple(MovedView(_ref(line), line.part, typeset(line.typeset)) for line in map(lines.by_id.get, group)
                        if line)  # fmt: skip
        yield MovedGroup(label, columns)


def _movers(rows: Iterable[Row], lines: Lines) -> tuple[tuple[MoverView, ...], tuple[MoverView, ...]]:
    """The rows as printed, and the most important of them; neighbors that differ in the level alone are one row."""
    views, sizes = list[MoverView](), list[list[float]]()
    pairs = ((row, _mover(row, lines)) for row in rows)
    for view, group in groupby(pairs, key=lambda pair: replace(pair[1], level="")):
        alike = list(group)
        views.append(replace(view, level=", ".join(each.level for _, each in alike if each.level)))
        sizes.append([effect.size for effect in alike[0][0].effects])
    columns = list(zip(*sizes, strict=True))
    strongest = dict.fromkeys(column.index(max(column)) for column in columns if max(column) >= _SHOWN)
    chosen = list({**strongest, **dict.fromkeys(range(len(views)))})[: max(_MOST, len(strongest))]
    return tuple(views), tuple(views[place] for place in sorted(chosen))


def _mover(row: Row, lines: Lines) -> MoverView:
    line = lines.by_id[row.line]
    near = [effect.switch for effect in row.effects if effect.switch]
    first = min(near, key=lambda switch: abs(switch.percent), default=None)
    at = lines.ref(first.line) if first else None
    numbers = [str(number) for flag in line.flags if (number := lines.open_number(line, flag))]
    state = [*(["no document"] if row.unsourced else []), *([f"open item {', '.join(numbers)}"] if numbers else [])]
    return MoverView(
        _ref(line), typeset(line.typeset), line.symbol, line.part, row.level,
        f"{row.shown} {units.shown(line.unit)}".strip() if row.level else row.shown, "; ".join(state),
        tuple(map(_effect, row.effects)),
        lines.refs(tie for effect in row.effects for tie in effect.ties),
        SwitchView(f"{first.percent:+.2g} %".replace("-", "−"), at) if first and at else None,
    )  # fmt: skip


def _effect(effect: Effect) -> EffectView:
    below, above = _percent(effect.less), _percent(effect.more)
    return EffectView(above, "", "") if below == above else EffectView("", below, above)


def _percent(slope: float | None) -> str:
    if slope is None:
        return _NO_SLOPE
    return f"{slope:+.3f}".replace("-", "−") if abs(slope) >= _SHOWN else "0"


def _still(rows: Sequence[Row], lines: Lines) -> Iterator[tuple[str, tuple[Ref, ...]]]:
    """The other inputs, those without a document first, then those with an open item."""
    for label, unsourced, unconfirmed in (
        ("no document, and an open item", True, True), ("no document", True, False), ("an open item", False, True),
        ("settled", False, False),
    ):  # fmt: skip
        refs = lines.refs(row.line for row in rows if (row.unsourced, row.unconfirmed) == (unsourced, unconfirmed))
        if refs:
            yield label, refs


def _ref(line: Line) -> Ref:
    return Ref(line.n, line.id)
