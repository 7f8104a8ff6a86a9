"""What differs between two states of one line: its inputs, formula, decisions, result, margin, unit and wording.

Knows the fields of a line and how two values are told apart. Must not know other lines, open items or the title block.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass, replace

from calckit import units
from calckit.core.record import NOT_CHECKED, Candidate, Line, Source
from calckit.errors import UnitError
from calckit.report.lines import LABELS

NONE = "none"
SAME_VALUE = "same quantity"
SET = "set at issue"
"""What a line says of itself whose value was set on the command line."""
ROW, MOST = "row ", "moved most, "
"""How a step names a row of a list, and the row that moved most."""

_INPUTS = ("given", "assumption", "judgment")
_CONVERTED = re.compile(r" = .* = | converted from ")
_DIGITS = 12  # significant digits that a record carries
_ROUNDING = 1e-9  # of a value carried with 12 digits through a chain and from one unit to another


@dataclass(frozen=True)
class Step:
    """One thing that differs: `what` it is ("" for the value of the line), `old`, `new`, and the `change` in %."""

    what: str
    old: str
    new: str
    change: str = ""


def differs(what: str, old: str, new: str) -> Iterator[Step]:
    """A step if two texts differ; a blank one reads "none"."""
    if old != new:
        yield Step(what, old or NONE, new or NONE)


def is_moved(steps: Iterable[Step]) -> bool:
    """Whether a value or a verdict moved, not only what is said of it."""
    return any(step.what in ("", "verdict") or step.what.startswith((ROW, MOST)) for step in steps)


# --- the seven groups


def _of_inputs(a: Line, b: Line) -> Iterator[Step]:
    """Value, kind, source and basis of a given, an assumption or an answer."""
    if b.kind not in _INPUTS:
        return
    yield from differs("kind", LABELS[a.kind] or a.kind, LABELS[b.kind])
    yield from _values(a, b)
    if a.value == b.value and a.shown != b.shown and a.unit == b.unit:
        yield Step("as typed", _typed(a), _typed(b), SAME_VALUE)
    yield from _same_in_other_unit(a, b)
    yield from differs("source", _source(a.source), _source(b.source))
    yield from differs("basis", _basis(a), _basis(b))


def _of_formulas(a: Line, b: Line) -> Iterator[Step]:
    """Kind, formula, clause, operands and look-up of a line that is worked out."""
    if b.kind in (*_INPUTS, "note"):
        return
    yield from differs("kind", LABELS[a.kind] or a.kind, LABELS[b.kind] or b.kind)
    formula = list(differs("formula", _formula(a), _formula(b))) if a.formula != b.formula else []
    yield from formula
    if not formula and a.verdict != NOT_CHECKED != b.verdict:
        yield from differs("rests on", ", ".join(a.inputs), ", ".join(b.inputs))
    yield from differs("source", _source(a.source), _source(b.source))
    if b.kind == "table":
        yield from differs("look-up", a.detail, b.detail)


def _of_decisions(a: Line, b: Line) -> Iterator[Step]:
    """Words that come out, verdicts, what governs, the case that applies, and flags that are no open items."""
    if b.kind in (*_INPUTS, "note"):
        return
    if a.value != b.value and (isinstance(a.value, str) or isinstance(b.value, str)):
        yield Step("", value_text(a), value_text(b))
    yield from differs("verdict", _verdict(a), _verdict(b))
    yield from differs("candidates", _equations(a.candidates), _equations(b.candidates))
    governing = [[one for one in line.candidates if one.governs] for line in (a, b)]
    yield from differs("governs", *map(_equations, governing))
    if _equations(governing[0]) == _equations(governing[1]):
        yield from differs("applies as", *("; ".join(one.reason for one in many) for many in governing))
    if b.kind != "table":
        yield from differs("case", _case(a), _case(b))
    flags = [_flags(line) for line in (a, b)]
    yield from (Step("flag", text, NONE) for text in flags[0] if text not in flags[1])
    yield from (Step("flag", NONE, text) for text in flags[1] if text not in flags[0])


def _case(line: Line) -> str:
    """What the detail of a line says, without operands in another unit: those are inputs, and change as such."""
    return "; ".join(part for part in line.detail.split("; ") if not _CONVERTED.search(part))


def _of_results(a: Line, b: Line) -> Iterator[Step]:
    if b.kind not in (*_INPUTS, "note") and not isinstance(a.value, str) and not isinstance(b.value, str):
        yield from _values(a, b)


def _of_units(a: Line, b: Line) -> Iterator[Step]:
    if b.kind not in _INPUTS:
        yield from _same_in_other_unit(a, b)


def _of_margins(a: Line, b: Line) -> Iterator[Step]:
    texts = [f"{line.margin.shown} {line.margin.to}" if line.margin else "" for line in (a, b)]
    if a.margin and b.margin and a.margin.to == b.margin.to and a.margin.value != b.margin.value:
        texts = list(_apart(a.margin.value, b.margin.value, *texts))
    yield from differs("", *texts)


def _of_wording(a: Line, b: Line) -> Iterator[Step]:
    """The meaning or title of a line, and the text of a note."""
    yield from differs("meaning", a.meaning, b.meaning)
    if b.kind == "note":
        yield from differs("kind", LABELS[a.kind] or a.kind, LABELS[b.kind])
        yield from differs("text", a.text, b.text)
        yield from differs("owner", a.owner, b.owner)
        yield from differs("closes", a.closes, b.closes)


STEPS: dict[str, Callable[[Line, Line], Iterator[Step]]] = {
    "inputs": _of_inputs, "formulas": _of_formulas, "decisions": _of_decisions, "results": _of_results,
    "margins": _of_margins, "units": _of_units, "wording": _of_wording,
}  # fmt: skip


def _formula(line: Line) -> str:
    return line.forms["plain"][0] if line.formula and line.forms.get("plain") else line.formula or ""


def _source(source: Source | None) -> str:
    if source is None:
        return ""
    return f"{source.text()} ({source.entry})" if source.entry else source.text()


def _basis(line: Line) -> str:
    return "; ".join(text for text in (line.text, line.detail) if text not in ("", SET))


def _verdict(line: Line) -> str:
    return f"{line.verdict}, missing {line.missing}" if line.verdict and line.missing else line.verdict or ""


def _equations(candidates: Iterable[Candidate]) -> str:
    return ", ".join(one.equation for one in candidates)


def _flags(line: Line) -> list[str]:
    """Flags that are no open items; what an override says of itself stands in its own group."""
    return [flag.text for flag in line.flags if not flag.open and not flag.text.startswith(f"{line.id} overridden")]


# --- values


def _typed(line: Line) -> str:
    return ", ".join(line.shown) if isinstance(line.shown, list) else line.shown


def value_text(line: Line) -> str:
    """The whole value as printed, "none" if there is none."""
    if isinstance(line.shown, list):
        unit = units.shown(line.unit)
        return ", ".join(line.shown) + (f" {unit}" if unit else "")
    return line.shown or (NONE if line.value is None else str(line.value))


def _is_zero(numeral: str) -> bool:
    return "0" in numeral and not set(numeral) & set("123456789")


def _values(a: Line, b: Line) -> Iterator[Step]:
    """The value, or of a list the entry that moved most and each row that moved."""
    if a.value == b.value and a.unit == b.unit and a.rows == b.rows:
        return
    if isinstance(a.value, list) and isinstance(b.value, list):
        rows = list(_rows(a, b))
        most = max(rows, key=lambda row: round(abs(row[1]), 9), default=None)
        if most and len(rows) > 1 and most[1]:
            yield replace(most[0], what=f"{MOST}{most[0].what}")
        yield from (step for step, _ in rows)
    elif isinstance(a.value, int | float) and isinstance(b.value, int | float):
        if b.kind == "check" and _is_zero(_typed(a)) and _is_zero(_typed(b)):
            return  # what rounding leaves of a difference that is zero
        ratio = _ratio(a.value, a.unit, b.value, b.unit)
        if ratio != 0.0:
            yield Step("", *_apart(a.value, b.value, value_text(a), value_text(b)), _percent(ratio, a.value))
    else:
        yield from differs("", value_text(a), value_text(b))


def _rows(a: Line, b: Line) -> Iterator[tuple[Step, float]]:
    """A step and its relative change for each row that moved, in the order of the newer list."""
    older, newer = _by_row(a), _by_row(b)
    for row in [*newer, *(row for row in older if row not in newer)]:
        if row not in older or row not in newer:
            yield Step(f"{ROW}{row}", older.get(row, (0, NONE))[1], newer.get(row, (0, NONE))[1]), 0.0
            continue
        (x, x_shown), (y, y_shown) = older[row], newer[row]
        ratio = _ratio(x, a.unit, y, b.unit)
        if ratio != 0.0:
            yield Step(f"{ROW}{row}", *_apart(x, y, x_shown, y_shown), _percent(ratio, x)), ratio or 0.0


def _by_row(line: Line) -> dict[str, tuple[float, str]]:
    """Value and printed entry by the name of the row, by its place where rows have no names."""
    values = line.value if isinstance(line.value, list) else []
    shown = line.shown if isinstance(line.shown, list) else [str(value) for value in values]
    names = line.rows if len(line.rows) == len(values) else [str(place) for place in range(1, len(values) + 1)]
    unit = f" {units.shown(line.unit)}".rstrip()
    return {name: (value, text + unit) for name, value, text in zip(names, values, shown, strict=False)}


def _ratio(x: float, x_unit: str, y: float, y_unit: str) -> float | None:
    """The relative change, 0 for the same quantity, None where there is none: from zero, or to another kind of unit."""
    if x_unit != y_unit:
        try:
            x = units.convert(x, x_unit, y_unit)
        except UnitError:
            return None
        if abs(y - x) <= _ROUNDING * abs(x):
            return 0.0
    if x == y:
        return 0.0
    return (y - x) / abs(x) if x else None


def _percent(ratio: float | None, old: float) -> str:
    """A relative change in %, with its sign.

    >>> _percent(0.0784, 1.0), _percent(-0.00000312, 1.0), _percent(None, 0.0)
    ('+7.8 %', '-0.0003 %', 'from 0')
    """
    if ratio is None:
        return "" if old else "from 0"
    per_cent = 100 * ratio
    if abs(per_cent) < 0.05:
        return f"{per_cent:+.1g} %"
    return f"{per_cent:+.1f} %" if abs(per_cent) < 1000 else f"{per_cent:+.0f} %"


def _apart(x: float, y: float, x_shown: str, y_shown: str) -> tuple[str, str]:
    """Both as printed, or with as many digits as tell them apart where they are printed alike."""
    if x_shown != y_shown or x == y:
        return x_shown, y_shown
    for digits in range(4, _DIGITS + 5):
        texts = f"{x:.{digits}g}", f"{y:.{digits}g}"
        if texts[0] != texts[1]:
            return f"{x_shown} ({texts[0]})", f"{y_shown} ({texts[1]})"
    return x_shown, y_shown


def _same_in_other_unit(a: Line, b: Line) -> Iterator[Step]:
    if a.unit != b.unit and a.rows == b.rows and a.value is not None and not list(_values(a, b)):
        yield Step("unit", units.shown(a.unit) or NONE, units.shown(b.unit) or NONE, SAME_VALUE)
