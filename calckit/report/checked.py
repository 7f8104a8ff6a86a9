"""The checker's copy: a check log laid over the calculation that is issued, as a piece of the document model.

Knows on which record the new rows of a log were set, how comments are numbered, and what the check section, the
sign-off and the cover say of the check. Must not know HTML, Typst or where a comment was made.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from pathlib import Path

from calckit.core.record import Line, Record, from_json
from calckit.report import checklog
from calckit.report.checklog import MARKS, Coverage, Fallen, Log, Marks, Remark
from calckit.report.model import Ref, Statement, View
from calckit.report.recheck import RECORD_ENDING, title

_ORDER = ("open", "answered", "closed")
_LEVEL, _METHOD, _LINES, _INPUTS = "Level of the check", "Method of the check", "Lines checked", "Inputs checked"


@dataclass(frozen=True)
class Laid:
    """A check log laid over the record of an issue.

    `log` has all rows tied, `tied` counts those that were new, `on` says which issue they were taken as set on, and
    `marks` is what holds now.
    """

    log: Log
    tied: int
    on: str
    marks: Marks


@dataclass(frozen=True)
class LineMark:
    """What the Mark column shows of one line: the mark, if it has one, and the numbers of the comments on it.

    `short` is the date without the year where all marks are of one year.
    """

    letter: str
    initials: str
    date: str
    short: str
    comments: tuple[int, ...]


@dataclass(frozen=True)
class CoverageView:
    """How far the check got: `letters` are the numbers of lines that bear each mark, in the order of the key."""

    label: str
    checked: str
    letters: tuple[int, ...]
    unmarked: tuple[Ref, ...]


@dataclass(frozen=True)
class CheckerView:
    """Who set rows: the marks that hold by letter, the comments, and the first and last day."""

    initials: str
    letters: tuple[int, ...]
    comments: int
    days: str


@dataclass(frozen=True)
class FallenView:
    """Marks that fell off for one reason. `gone` are ids of lines that are there no more, `roots` the changed lines
    that the others rest on."""

    mark: str
    refs: tuple[Ref, ...]
    gone: tuple[str, ...]
    cause: str
    roots: tuple[Ref, ...]


@dataclass(frozen=True)
class CommentView:
    """A comment; its anchor is `comment-<number>`, the number is that of its place among all comments of the log.

    `parts` are (label, text): concern, basis, why it matters, what is asked; blank ones are left out. `note` says what
    became of its lines since.
    """

    number: int
    place: str
    refs: tuple[Ref, ...]
    by: str
    parts: tuple[tuple[str, str], ...]
    answer: str
    state: str
    note: str

    @property
    def closed(self) -> bool:
        """Whether the commenter closed it."""
        return self.state == "closed"


@dataclass(frozen=True)
class CheckedView:
    """The check as the report prints it; `by_line` goes by line number, `counts` are comments by state."""

    log: str
    self_check: str
    level: str
    method: str
    key: tuple[tuple[str, str], ...]
    coverage: tuple[CoverageView, ...]
    checkers: tuple[CheckerView, ...]
    by_line: Mapping[int, LineMark]
    fallen: tuple[FallenView, ...]
    comments: tuple[CommentView, ...]
    counts: tuple[tuple[str, int], ...]


def sign_off(record: Record) -> tuple[tuple[str, str], ...]:
    """What the sign-off block says of the check: as entered in the title block, else with room to write.

    >>> sign_off(Record({"check_level": "other person"}))[0]
    ('Level of the check', 'other person')
    """
    facts = record.calculation
    inputs = sum(line.kind in checklog.INPUT_KINDS for line in record.lines)
    return (
        (_LEVEL, facts.get("check_level", "")),
        (_METHOD, facts.get("check_method", "")),
        (_LINES, f"_____ of {len(record.lines)}"),
        (_INPUTS, f"_____ of {inputs}"),
    )


def former_beside(folder: Path, name: str, record: Record) -> Record | None:
    """The record of the sheets that the checker had: that at the target, else the latest of another revision there."""
    found = [
        (path.name == name + RECORD_ENDING, other.calculation.get("date", ""), path.name, other)
        for path in folder.glob("*" + RECORD_ENDING)
        if (other := _read(path)) and _identity(other) == _identity(record)
    ]
    return max(found, key=lambda entry: entry[:3])[3] if found else None


def lay(log: Log, record: Record, former: Record | None) -> Laid:
    """Lay a log over a record; rows that are not tied yet are tied to the former one if there is one.

    Raises InputError naming every new row that stands on no line of the record it is tied to.
    """
    before = former or record
    tied = checklog.tie(log, before)
    new = sum(not entry.ties for entry in log.entries)
    on = f"the former issue, {title(former)}" if former else f"this issue, {title(record)}"
    return Laid(tied, new, on, checklog.expand(tied, record))


def account(laid: Laid, record: Record) -> list[str]:
    """What the terminal says of the check."""
    marks = laid.marks
    words = [f"check log {laid.log.name}: rows tied: {laid.tied}" + (f", to {laid.on}" if laid.tied else "")]
    words.append(f"  lines: {marks.coverage.text()}")
    words.append(f"  inputs: {marks.inputs.text()}")
    words.append(f"  marks that fell off: {len(marks.fallen) or 'none'}")
    words += [f"    {_fell(lost)}" for lost in marks.fallen]
    pending = [comment for comment in comments(marks) if not comment.closed]
    words.append(f"  comments not closed: {len(pending) or 'none'} of {len(marks.remarks)}")
    words += [f"    {one.number}, {one.place}, {one.by}: {one.state}" for one in pending]
    left = marks.coverage.total - marks.coverage.checked
    if record.calculation.get("status") == "checked" and (left or pending):
        words.append(f'  note: the status is "checked"; lines not checked: {left}; comments not closed: {len(pending)}')
    return words


def onto(view: View, record: Record, laid: Laid) -> View:
    """The document model with the check in it: its section, the sign-off and the cover."""
    facts, marks = record.calculation, laid.marks
    found = comments(marks)
    pending = [comment for comment in found if not comment.closed]
    lost = tuple(one.ref for one in marks.fallen if one.ref.n)
    counted = {_LINES: _checked(marks.coverage), _INPUTS: _checked(marks.inputs)}
    checked = CheckedView(
        log=laid.log.name,
        self_check=checklog.self_check(facts),
        level=facts.get("check_level", ""),
        method=facts.get("check_method", ""),
        key=tuple(MARKS.items()),
        coverage=(
            _coverage("All lines", marks.coverage),
            _coverage("Inputs, assumptions and answers", marks.inputs),
        ),
        checkers=_checkers(laid),
        by_line=_by_line(marks, found),
        fallen=_fallen(marks.fallen, record),
        comments=found,
        counts=tuple((state, sum(comment.state == state for comment in found)) for state in _ORDER),
    )
    statements = (
        Statement("Comments of the check not closed", _number(pending), _union(one.refs for one in pending)),
        Statement("Marks of the check that fell off", _number(marks.fallen), lost),
    )
    return replace(
        view,
        checked=checked,
        check=tuple((label, counted.get(label, said)) for label, said in view.check),
        statements=(*view.statements, *statements),
    )


def comments(marks: Marks) -> tuple[CommentView, ...]:
    """The comments of a log, open ones first, closed ones last; each keeps its number from issue to issue."""
    in_log = sorted(marks.remarks, key=lambda remark: remark.row)
    views = [_comment(number, remark) for number, remark in enumerate(in_log, 1)]
    return tuple(sorted(views, key=lambda view: (_ORDER.index(view.state), view.number)))


def ranges(refs: Iterable[Ref]) -> list[tuple[Ref, Ref]]:
    """First and last of each run of lines whose numbers follow each other.

    >>> [(a.n, b.n) for a, b in ranges([Ref(1, "a"), Ref(2, "b"), Ref(5, "c")])]
    [(1, 2), (5, 5)]
    """
    runs: list[tuple[Ref, Ref]] = []
    for ref in refs:
        if runs and runs[-1][1].n + 1 == ref.n:
            runs[-1] = (runs[-1][0], ref)
        else:
            runs.append((ref, ref))
    return runs


def _read(path: Path) -> Record | None:
    try:
        return from_json(path.read_text(encoding="utf-8"))
    except (OSError, ValueError, KeyError, TypeError):
        return None


def _identity(record: Record) -> tuple[str, ...]:
    """What makes two records issues of one calculation; without a number, the notebook's name."""
    facts = record.calculation
    return facts.get("project", ""), facts.get("number", "") or facts.get("notebook", "")


def _number(things: Iterable[object]) -> str:
    count = len(tuple(things))
    return str(count) if count else "none"


def _union(many: Iterable[tuple[Ref, ...]]) -> tuple[Ref, ...]:
    return tuple(sorted({ref for refs in many for ref in refs}, key=lambda ref: ref.n))


def _checked(coverage: Coverage) -> str:
    return f"{coverage.checked} of {coverage.total}"


def _coverage(label: str, coverage: Coverage) -> CoverageView:
    letters = tuple(len(coverage.marked[letter]) for letter in MARKS)
    return CoverageView(label, _checked(coverage), letters, coverage.unmarked)


def _checkers(laid: Laid) -> tuple[CheckerView, ...]:
    views = []
    for initials in dict.fromkeys(entry.initials for entry in laid.log.entries):
        own = [entry for entry in laid.log.entries if entry.initials == initials]
        held = [mark.letter for mark in laid.marks.by_line.values() if mark.initials == initials]
        days = sorted({entry.date for entry in own})
        span = days[0] if len(days) == 1 else f"{days[0]} to {days[-1]}"
        said = sum(bool(entry.comment) for entry in own)
        views.append(CheckerView(initials, tuple(held.count(letter) for letter in MARKS), said, span))
    return tuple(views)


def _by_line(marks: Marks, found: Iterable[CommentView]) -> dict[int, LineMark]:
    numbers: dict[str, list[int]] = {}
    lines: dict[str, int] = {ref.id: ref.n for refs in marks.coverage.marked.values() for ref in refs}
    for comment in sorted(found, key=lambda comment: comment.number):
        for ref in comment.refs:
            numbers.setdefault(ref.id, []).append(comment.number)
            lines[ref.id] = ref.n
    one_year = len({mark.date[:4] for mark in marks.by_line.values()}) == 1
    made = {}
    for id_, n in sorted(lines.items(), key=lambda pair: pair[1]):
        mark, said = marks.by_line.get(id_), tuple(numbers.get(id_, ()))
        if mark:
            short = mark.date[5:] if one_year else mark.date
            made[n] = LineMark(mark.letter, mark.initials, mark.date, short, said)
        else:
            made[n] = LineMark("", "", "", "", said)
    return made


def _fallen(fallen: Iterable[Fallen], record: Record) -> tuple[FallenView, ...]:
    """The marks that fell off, those of one kind and one reason together."""
    lines = {line.id: line for line in record.lines}
    changed = {lost.ref.id: lost.ref for lost in fallen if lost.changed}
    above: dict[str, set[str]] = {}
    for line in record.lines:  # lines stand after what they rest on
        above[line.id] = set(line.inputs).union(*(above.get(id_, set()) for id_ in line.inputs))
    kinds: dict[tuple[str, str, tuple[Ref, ...]], list[Ref]] = {}
    for lost in fallen:
        first = changed.keys() & above.get(lost.ref.id, set())
        roots = _union([tuple(changed[id_] for id_ in first if not changed.keys() & above[id_])])
        said = f"{lost.mark.letter} {lost.mark.initials} {lost.mark.date}"
        kinds.setdefault((said, _cause(lost, roots, lines), roots), []).append(lost.ref)
    return tuple(
        FallenView(
            said, tuple(ref for ref in refs if ref.n), tuple(ref.id for ref in refs if not ref.n), cause, roots
        )
        for (said, cause, roots), refs in kinds.items()
    )  # fmt: skip


def _cause(lost: Fallen, roots: tuple[Ref, ...], lines: Mapping[str, Line]) -> str:
    if not lost.changed:
        return "the line is there no more"
    if roots:
        return "rests on what changed"
    return "changed, or rests on a line that did" if lines[lost.ref.id].inputs else "changed"


def _fell(lost: Fallen) -> str:
    said = f"{lost.mark.letter} {lost.mark.initials} {lost.mark.date}"
    return f"line {lost.ref.n}, {lost.ref.id}: {said}" if lost.ref.n else f"{lost.ref.id}, there no more: {said}"


def _comment(number: int, remark: Remark) -> CommentView:
    parts = (
        ("Concern", remark.comment), ("Basis", remark.basis), ("Why it matters", remark.why_it_matters),
        ("Asked", remark.action_asked),
    )  # fmt: skip
    became = []
    if remark.changed:
        became.append("changed since the comment")
    if remark.gone:
        became.append(f"there no more: {', '.join(remark.gone)}")
    by = " ".join(filter(None, (remark.letter, remark.initials, remark.date)))
    return CommentView(
        number, remark.place, remark.refs, by, tuple(part for part in parts if part[1]), remark.answer, remark.state,
        "; ".join(became),
    )  # fmt: skip
