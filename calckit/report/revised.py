"""What a revision changed against the former issue, as the report tells it: in groups, and line by line.

Knows which file may be named as the former issue, and how differences become rows and marks of the document model. Must
not know how differences are found, nor output forms.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

from calckit.core.record import Record
from calckit.errors import CommandError, MismatchError
from calckit.report import compare
from calckit.report.attachments import Parcel
from calckit.report.changes import Change, Changes
from calckit.report.line_changes import MOST, ROW
from calckit.report.model import Ref
from calckit.report.recheck import title

_ADDED = "not in the former issue"
_TITLE_BLOCK = ("revision", "date")
_FIRST = re.compile(r"[Aa]?|-|[A-Za-z]?0*[01]")
_ROW_OF_TABLE = "revision row "


@dataclass(frozen=True)
class ChangedRow:
    """One difference: the line (None: it is no line of this revision), what changed in which respect, old and new.

    `former_n` is the number that a removed line had, 0 otherwise; `change` the relative change where there is one.
    `first` tells whether the row is the first of its thing.
    """

    ref: Ref | None
    former_n: int
    id: str
    meaning: str
    note: str
    what: str
    old: str
    new: str
    change: str
    first: bool


@dataclass(frozen=True)
class ChangedGroup:
    """Differences of one kind; `valued` tells whether old and new stand beside each other."""

    heading: str
    count: int
    valued: bool
    rows: tuple[ChangedRow, ...]


@dataclass(frozen=True)
class Revised:
    """What changed since the former issue.

    `former` names it ("revision A"), `issue` says which file it was. `was` pairs the id of each changed line with
    what is printed beside its result. `lines`, `tables` and `figures` are those whose content changed.
    """

    former: str
    issue: str
    remarks: tuple[str, ...]
    groups: tuple[ChangedGroup, ...]
    unchanged: tuple[str, ...]
    was: tuple[tuple[str, str], ...]
    lines: tuple[Ref, ...]
    tables: tuple[int, ...]
    figures: tuple[int, ...]


def open_former(path: Path) -> compare.Issue:
    """The former issue: a PDF, an HTML file or a record file as it was issued.

    Raises CommandError if it cannot be read, is none of these or was altered.

    >>> open_former(Path("no-such-file.pdf"))
    Traceback (most recent call last):
    calckit.errors.CommandError: --former: no-such-file.pdf cannot be read: No such file or directory
    """
    try:
        found = compare.open_issue(path)
    except (CommandError, MismatchError) as error:
        raise CommandError(f"--former: {error}") from error
    if found.faults:
        said = "; ".join(found.faults)
        raise CommandError(f"--former: {path} is not as it was issued: {said}; cure: name the file as it was issued")
    return found


def revised(former: compare.Issue, record: Record, parcel: Parcel) -> Revised:
    """What this record, with what is attached beside it, changed against the former issue.

    Raises CommandError if the former issue is one of another calculation, of the same revision or of a later one.
    """
    _refuse(former, record)
    comparison = compare.of_issues(former, compare.Issue("this issue", record, parcel))
    name = _name(former.record)
    numbers = {line.id: line.n for line in record.lines}
    was = {id_: _was(text, name) for id_, text in compare.changed_lines(comparison).items()}
    groups = [_group(heading, changes, numbers) for heading, changes in _groups(comparison) if changes]
    lines = [Ref(line.n, line.id) for line in record.lines if line.id in was]
    return Revised(
        name,
        f"{title(former.record)} ({former.name})",
        comparison.remarks,
        tuple(groups),
        tuple(heading for heading, changes in _groups(comparison) if not changes),
        tuple(was.items()),
        tuple(lines),
        tuple(n for n, one in enumerate(record.tables, 1) if was.keys() & {column.line for column in one.columns}),
        tuple(n for n, one in enumerate(record.figures, 1) if was.keys() & set(one.lines)),
    )


def revision_faults(record: Record) -> list[str]:
    """What keeps a revision from being issued: it has no row in the revision table, or not the newest one.

    The first revision (blank, A, 0, 1, P1 and the like) needs none.

    >>> revision_faults(Record({"revision": "B", "revisions": []}))[0].partition(";")[0]
    'revision B has no row in the revision table'
    """
    revision, rows = record.calculation.get("revision", ""), record.calculation.get("revisions", [])
    if not rows and _FIRST.fullmatch(revision.strip()):
        return []
    if all(row["revision"] != revision for row in rows):
        return [
            f"revision {revision or '(blank)'} has no row in the revision table; cure: say what changed and why, "
            f'calc.revise("{revision}", date="2026-12-08", reason="...", by="...")'
        ]
    if rows[-1]["revision"] != revision:
        newest = rows[-1]["revision"]
        return [
            f"the newest row of the revision table is {newest}, the title block says {revision}; cure: write "
            f'Calc(revision="{newest}"), or put the rows in order'
        ]
    return []


def _refuse(former: compare.Issue, record: Record) -> None:
    old, new = former.record.calculation, record.calculation
    numbers = [facts.get("number") or f"without number, notebook {facts.get('notebook', '')}" for facts in (old, new)]
    faults = []
    if numbers[0] != numbers[1]:
        faults.append(f"it is calculation {numbers[0]}, this one is {numbers[1]}; cure: name a file of this one")
    elif old.get("revision", "") == new.get("revision", ""):
        faults.append(
            f"it is {_name(former.record)} itself; cure: name the file of the earlier revision, or give this one its "
            "next revision, Calc(revision=...)"
        )
    elif any(row["revision"] == new.get("revision", "") for row in old.get("revisions", [])):
        faults.append(f"it came after revision {new['revision']}; cure: name the file of the earlier revision")
    if faults:
        raise CommandError(f"--former: {former.name} is refused: {faults[0]}")


def _name(record: Record) -> str:
    revision = record.calculation.get("revision", "")
    return f"revision {revision}" if revision else "the issue without a revision"


def _was(text: str, former: str) -> str:
    brief = former.replace("revision ", "rev ")
    return f"new since {brief}" if text == _ADDED else f"was {text} ({brief})"


def _groups(comparison: compare.Comparison) -> Iterator[tuple[str, Changes]]:
    """The groups as the report prints them: results of the summary sheets before the others.

    What the title block and the revision table say of a revision, and set values, which their lines say, are left out.
    """
    answers = comparison.changed.answers
    for name, heading, changes in comparison.groups():
        if name == "criteria":
            yield heading, tuple(one for one in changes if not _is_of_revision(one.id))
        elif name == "settings":
            yield heading, tuple(one for one in changes if not one.id.startswith(compare.SET_VALUE))
        elif name == "results":
            yield f"{heading}: on the summary sheets", tuple(one for one in changes if one.id in answers)
            yield f"{heading}: others", tuple(one for one in changes if one.id not in answers)
        else:
            yield heading, changes


def _is_of_revision(id_: str) -> bool:
    return id_ in _TITLE_BLOCK or id_.startswith(_ROW_OF_TABLE)


def _group(heading: str, changes: Changes, numbers: Mapping[str, int]) -> ChangedGroup:
    rows = tuple(row for change in changes for row in _rows(change, numbers))
    return ChangedGroup(heading, len(changes), any(change.steps for change in changes), rows)


def _rows(change: Change, numbers: Mapping[str, int]) -> Iterator[ChangedRow]:
    """A row for each difference; of a list, the entry that moved most stands for all of them."""
    ref = Ref(change.new_n, change.id) if change.new_n and numbers.get(change.id) == change.new_n else None
    former_n = change.old_n if not change.new_n else 0
    meaning = "" if change.meaning == change.id else change.meaning
    steps: Sequence[tuple[str, str, str, str]] = [(one.what, one.old, one.new, one.change) for one in change.steps]
    if any(what.startswith(MOST) for what, *_ in steps):
        steps = [step for step in steps if not step[0].startswith(ROW)]
    for place, (what, old, new, per_cent) in enumerate(steps or [("", "", "", "")]):
        yield ChangedRow(ref, former_n, change.id, meaning, change.note, what, old, new, per_cent, not place)
