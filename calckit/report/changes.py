"""What differs between two records of one calculation, in engineering terms.

Knows lines that are held against each other, came or went, and what stands beside them: title block, overrides, open
items, confirmations. Must not know how one line is told from another state of itself, nor files or output forms.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass, replace
from typing import Any

from calckit.core.record import TO_BE_CONFIRMED, Line, OpenItem, Record
from calckit.report.line_changes import NONE, SET, STEPS, Step, differs, is_moved, value_text
from calckit.report.lines import LABELS


@dataclass(frozen=True)
class Change:
    """All that differs in one thing: its `id`, its line numbers (0: it has none there), its meaning and a note."""

    id: str
    old_n: int
    new_n: int
    meaning: str
    steps: tuple[Step, ...] = ()
    note: str = ""


Changes = tuple[Change, ...]


HEADINGS = {
    "criteria": "Title block and criteria changed",
    "inputs": "Inputs changed",
    "formulas": "Formulas, clauses and look-ups changed",
    "decisions": "Decisions changed",
    "results": "Results moved",
    "margins": "Margins moved",
    "units": "Same quantity in another unit",
    "overrides": "Overrides added, removed or changed",
    "added": "Lines added",
    "removed": "Lines removed",
    "opened": "Open items opened",
    "closed": "Open items closed",
    "restated": "Open items restated",
    "confirmations": "Confirmation against the standard changed",
    "wording": "Notes and wording changed",
}
"""The groups of differences in the order of the reader's interest, and how each is headed."""


@dataclass(frozen=True)
class Changed:
    """The differences in the groups of `HEADINGS`.

    `answers` are the ids of the lines on the summary sheets of the newer record, `renumbered` how many lines stand in
    both records under different numbers.
    """

    criteria: Changes = ()
    inputs: Changes = ()
    formulas: Changes = ()
    decisions: Changes = ()
    results: Changes = ()
    margins: Changes = ()
    units: Changes = ()
    overrides: Changes = ()
    added: Changes = ()
    removed: Changes = ()
    opened: Changes = ()
    closed: Changes = ()
    restated: Changes = ()
    confirmations: Changes = ()
    wording: Changes = ()
    answers: tuple[str, ...] = ()
    renumbered: int = 0

    def groups(self) -> list[tuple[str, str, Changes]]:
        """Name, heading and content of every group, empty ones included."""
        return [(name, heading, getattr(self, name)) for name, heading in HEADINGS.items()]


def between(old: Record, new: Record) -> Changed:
    """What differs between two records.

    A line is held against the line with the same id. Only a line that differs itself is listed: by its own content,
    or because its value followed from one that moved; the note of a moved result names the inputs it moved through.
    """
    before = {line.id: line for line in old.lines}
    after = {line.id: line for line in new.lines}
    pairs = [(before[id_], line) for id_, line in after.items() if id_ in before]
    listed = {name: tuple(_listed(pairs, steps)) for name, steps in STEPS.items()}
    listed["inputs"] = tuple(_with_source(change, after) for change in listed["inputs"])
    moved = {
        change.id for name in ("inputs", "decisions", "results") for change in listed[name] if is_moved(change.steps)
    }
    moved |= after.keys() - before.keys()
    own = {change.id for change in listed["formulas"]}
    for name in ("decisions", "results"):
        listed[name] = tuple(replace(one, note=_through(after[one.id], moved, own)) for one in listed[name])
    return Changed(
        criteria=tuple(_criteria(old, new)),
        overrides=tuple(_overrides(before, after)),
        added=tuple(_whole(line, False) for id_, line in after.items() if id_ not in before),
        removed=tuple(_whole(line, True) for id_, line in before.items() if id_ not in after),
        confirmations=tuple(_confirmations(old, new)),
        answers=tuple(dict.fromkeys(id_ for one in new.summaries for row in one.rows for id_ in row.lines if id_)),
        renumbered=sum(a.n != b.n for a, b in pairs),
        **_items(old, new),
        **listed,
    )


def _listed(pairs: Iterable[tuple[Line, Line]], steps: Callable[[Line, Line], Iterator[Step]]) -> Iterator[Change]:
    for a, b in pairs:
        found = tuple(steps(a, b))
        if found:
            yield Change(b.id, a.n, b.n, _meaning(b), found)


def _meaning(line: Line) -> str:
    return "" if line.meaning in ("note", "judgment") else line.meaning


def _with_source(change: Change, lines: Mapping[str, Line]) -> Change:
    line = lines[change.id]
    said = [line.source.text() if line.source else "", SET if line.detail == SET else ""]
    return replace(change, note=", ".join(filter(None, said)))


def _through(line: Line, moved: set[str], own: set[str]) -> str:
    """The direct inputs that moved, and whether the line's own formula or look-up changed."""
    inputs = dict.fromkeys([*line.inputs, *(one.line for one in line.candidates)])
    found = ", ".join(id_ for id_ in inputs if id_ in moved)
    itself = ("own look-up" if line.kind == "table" else "own formula or clause") if line.id in own else ""
    return " and ".join(filter(None, (itself, f"through {found}" if found else "")))


# --- beside the lines


def _criteria(old: Record, new: Record) -> Iterator[Change]:
    """Title block, codes, documents, revisions, parts, software and enclosures, a change for each that differs."""
    before, after = ({**dict(_entries(one.calculation)), **_enclosures(one)} for one in (old, new))
    for name in [*after, *(name for name in before if name not in after)]:
        steps = tuple(differs("", before.get(name, ""), after.get(name, "")))
        if steps:
            yield Change(name, 0, 0, "", steps)


_KEYED = {
    "documents": ("document", "key"), "standards": ("standard", "id"), "parts": ("part", "id"),
    "revisions": ("revision row", "revision"),
}  # fmt: skip


def _entries(facts: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    for name, value in facts.items():
        if name in _KEYED:
            label, key = _KEYED[name]
            for place, row in enumerate(value, 1):
                said = "; ".join(f"{k} {_plain(v)}" for k, v in row.items() if k != key and v not in ("", None))
                yield f"{label} {row.get(key) or place}", said or "declared"
        elif name == "software":
            flat = {k: v for k, v in value.items() if k != "libraries"} | value.get("libraries", {})
            yield from ((f"software: {k}", _plain(v)) for k, v in flat.items())
        else:
            yield name.replace("_", " "), _plain(value)


def _enclosures(record: Record) -> dict[str, str]:
    return {f"enclosure {one.document}": f"{one.file}, pages {one.pages}; {one.alt}" for one in record.enclosures}


def _plain(value: object) -> str:
    if value is None:
        return "not stated"
    return "; ".join(map(str, value)) if isinstance(value, list | tuple) else str(value)


def _whole(line: Line, gone: bool) -> Change:
    said = line.verdict or (line.text if line.kind == "note" else value_text(line))
    step = Step("", said, NONE) if gone else Step("", NONE, said)
    note = LABELS.get(line.kind) or line.kind
    return Change(line.id, line.n if gone else 0, 0 if gone else line.n, line.meaning, (step,), note)


def _overrides(before: Mapping[str, Line], after: Mapping[str, Line]) -> Iterator[Change]:
    for id_ in [*after, *(id_ for id_ in before if id_ not in after)]:
        a, b = before.get(id_), after.get(id_)
        steps = list(differs("override", _override(a), _override(b)))
        if a and b and a.computed and b.computed and a.computed.value != b.computed.value:
            steps.append(Step("the kit's own value", str(a.computed.shown), str(b.computed.shown)))
        if steps:
            yield Change(id_, a.n if a else 0, b.n if b else 0, _meaning(b or before[id_]), tuple(steps))


def _override(line: Line | None) -> str:
    if not line or not line.override:
        return ""
    override = line.override
    said = f"{override.shown}; reason: {override.reason}; by {override.by}"
    return f"{said}; {override.document}" if override.document else said


def _items(old: Record, new: Record) -> dict[str, Changes]:
    """Open items opened, closed and restated (the same item of the same line in other words or of another owner)."""
    before, after = _open(old), _open(new)
    numbers = [{line.id: line.n for line in record.lines} for record in (old, new)]
    closing = {line.closes: f"closed by line {line.n}, {line.id}" for line in new.lines if line.closes}

    def change(item: OpenItem, steps: tuple[Step, ...] = (), note: str = "") -> Change:
        old_n, new_n = (lines.get(item.line, 0) for lines in numbers)
        return Change(item.line or item.id, old_n, new_n, item.text, steps, note or item.owner)

    gone = {item.id: item for key, item in before.items() if key not in after}
    come = {item.id: item for key, item in after.items() if key not in before}
    both = gone.keys() & come.keys()
    restated = [
        change(item, tuple(differs("text", gone[id_].text, item.text))) for id_, item in come.items() if id_ in both
    ]
    for key in before.keys() & after.keys():
        steps = tuple(differs("owner", before[key].owner, after[key].owner))
        if steps:
            restated.append(change(after[key], steps))
    closed = []
    for id_, item in gone.items():
        if id_ not in both:
            note = closing.get(item.line, "" if not item.line or item.line in numbers[1] else "its line is removed")
            closed.append(change(item, note=note))
    opened = [change(item) for id_, item in come.items() if id_ not in both]
    restated.sort(key=lambda one: one.new_n)
    return {"opened": tuple(opened), "closed": tuple(closed), "restated": tuple(restated)}


def _open(record: Record) -> dict[tuple[str, str], OpenItem]:
    return {(item.line, item.text): item for item in record.open_items if item.group == "open"}


def _confirmations(old: Record, new: Record) -> Iterator[Change]:
    """Tables and clauses whose standing against the printed standard changed."""
    before, after = _standing(old), _standing(new)
    for name in [*after, *(name for name in before if name not in after)]:
        steps = tuple(differs("", before.get(name, "not used"), after.get(name, "not used")))
        if steps:
            yield Change(name, 0, 0, "", steps)


def _standing(record: Record) -> dict[str, str]:
    found = {item.text: TO_BE_CONFIRMED for item in record.open_items if item.group == "confirm"}
    for line in record.lines:
        if line.source and line.source.standard and line.source.confirmed:
            found[f"{line.source.document} {line.source.where}"] = line.source.confirmed
    return found
