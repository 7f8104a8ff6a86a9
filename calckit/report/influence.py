"""What matters: how far each input moves the governing results, in the order in which a checker reads the inputs.

Knows inputs, relative changes and reading order. Must not know how a slope is worked (`calckit.report.slopes`) nor how
a report prints the table.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from calckit.core.record import Line, Record
from calckit.errors import Fault, InputError, nearest_first
from calckit.report.lines import Lines
from calckit.report.slopes import Break, Chain, Met, Seed, Switch

NEAR = 10.0
"""Percent of an input within which the switch of a branch is told; beyond it a first-order distance says little."""

_SAME = 1e-9
_DECIMALS = 3


@dataclass(frozen=True)
class Effect:
    """How one input moves one result, in percent of the result per percent of the input.

    `more` is the slope towards larger inputs, `less` the one towards smaller; None where there is none (a word, a jump,
    a result of 0).
    Where the two differ `ties` names the lines that stand at a tie or table knot. `switch` is the nearest branch that
    would change over, `breaks` where no slope could be taken.
    """

    result: str
    more: float | None
    less: float | None
    ties: tuple[str, ...] = ()
    switch: Switch | None = None
    breaks: tuple[Break, ...] = ()

    @property
    def size(self) -> float:
        """The larger of the two slopes, without sign."""
        return max(abs(self.more or 0.0), abs(self.less or 0.0))


@dataclass(frozen=True)
class Row:
    """One input: a given, an assumption, an answer or an overridden value; one entry of a list counts as one input.

    `level` is the row label of a list's entry. `unsourced` tells that no document is named, `unconfirmed` that an open
    item of the line stands.
    """

    line: str
    level: str
    shown: str
    unsourced: bool
    unconfirmed: bool
    effects: tuple[Effect, ...]

    @property
    def size(self) -> float:
        """The largest of its effects, rounded as it is printed."""
        return round(max((effect.size for effect in self.effects), default=0.0), _DECIMALS)


def table(record: Record, ids: Sequence[str]) -> list[Row]:
    """Every input with its effect on each of the results `ids`, the most influential first.

    Inputs of equal influence follow in the order unsourced, unconfirmed, settled, and then as they stand in the
    calculation. Of a list result the row worked in full is taken. Raises InputError naming every id that is no number.

    >>> from calckit.core.record import Operand
    >>> weight = Line("w_x", "given", value=[300.0, 100.0], shown=["300", "100"], rows=["Roof", "2"], content="5f")
    >>> total = Line("W", "computed", value=400.0, formula="total(w_x)",
    ...              inputs={"w_x": Operand([300.0, 100.0], "", ["300", "100"], "5f")})
    >>> [(row.line, row.level, row.effects[0].more) for row in table(Record({}, [weight, total]), ["W"])]
    [('w_x', 'Roof', 0.75), ('w_x', '2', 0.25)]
    """
    chain = Chain(record)
    _numbers_only(chain, ids)
    state = Lines(record)
    rows = [row for line in chain.inputs for row in _rows(chain, line, ids, state.is_open(line))]
    return sorted(rows, key=lambda row: (-row.size, not row.unsourced, not row.unconfirmed))


def breaks(record: Record, ids: Sequence[str]) -> list[Break]:
    """Where the chains to these results are broken, so that a slope does not tell the whole influence.

    >>> from tests.report.sample import record
    >>> breaks(record(), ["T_L"])
    []
    """
    chain = Chain(record)
    _numbers_only(chain, ids)
    return list(dict.fromkeys(found for id_ in ids for found in chain.breaks(id_)))


def governing(record: Record) -> list[str]:
    """The numbers that the answer is about, in its order.

    Those are the numbers worked out by the calculation that the answer names and on which no other of them rests, and
    the checks whose ratio it prints.

    >>> from tests.report.sample import record
    >>> {"X.V", "Y.V", "X.k", "Y.k"} <= set(governing(record())), "X.R" in governing(record())
    (True, False)
    """
    chain = Chain(record)
    numbers, ratios = dict[str, None](), dict[str, None]()
    for row in (row for summary in record.summaries if summary.role == "answer" for row in summary.rows):
        for cell, id_ in zip(row.cells, row.lines, strict=True):
            line = chain.lines.get(id_)
            if line is None:
                continue
            if line.kind in ("computed", "analysis") and isinstance(line.value, float):
                numbers[line.id] = None
            elif line.kind == "check" and isinstance(line.value, float) and str(line.shown) in cell:
                ratios[line.id] = None
    below = {source for id_ in numbers for source in chain.upstream(id_) if source != id_}
    return [id_ for id_ in numbers if id_ not in below] + list(ratios)


def _numbers_only(chain: Chain, ids: Sequence[str]) -> None:
    faults = []
    for id_ in ids:
        line = chain.lines.get(id_)
        if line is None:
            near = ", ".join(nearest_first(id_, chain.lines)[:4])
            faults.append(Fault(id_, "the id of a line", "no such line", f"did you mean {near}"))
        elif not isinstance(line.value, int | float | list):
            faults.append(Fault(id_, "a line whose value is a number", str(line.value), meaning=line.meaning))
    if faults:
        raise InputError("influence", faults)


def _rows(chain: Chain, line: Line, ids: Sequence[str], is_open: bool) -> Iterator[Row]:
    listed = isinstance(line.value, list)
    count = len(line.value) if isinstance(line.value, list) else 1
    for place in range(count):
        if isinstance(line.value, str | None):
            effects = tuple(Effect(id_, None, None) for id_ in ids)
        else:
            effects = tuple(_effect(chain, id_, line.id, place) for id_ in ids)
        shown = line.shown if isinstance(line.shown, str) else line.shown[place]
        level = line.rows[place] if listed else ""
        yield Row(line.id, level, shown, line.source is None, is_open, effects)


def _effect(chain: Chain, result: str, line: str, place: int) -> Effect:
    if line not in chain.upstream(result):
        return Effect(result, 0.0, 0.0)
    more, met = _side(chain, result, Seed(line, place, 1))
    less, met_less = _side(chain, result, Seed(line, place, -1))
    differ = more is not None and less is not None and abs(more - less) > _SAME * max(abs(more), abs(less))
    near = [switch for switch in met.switches if 0 < switch.percent <= NEAR]
    near += [replace(switch, percent=-switch.percent) for switch in met_less.switches if 0 < switch.percent <= NEAR]
    return Effect(
        result, more, less,
        tuple({**met.ties, **met_less.ties}) if differ else (),
        min(near, key=lambda switch: abs(switch.percent), default=None),
        tuple({**met.breaks, **met_less.breaks}),
    )  # fmt: skip


def _side(chain: Chain, result: str, seed: Seed) -> tuple[float | None, Met]:
    met = Met()
    duals = chain.follow(result, seed, met)
    line = chain.lines[result]
    worked = line.rows.index(line.row) if line.row and isinstance(line.value, list) else 0
    number = duals[worked]
    if met.breaks or not number.value:
        return None, met
    return number.slope * seed.side / number.value * 100 + 0.0, met  # no minus zero
