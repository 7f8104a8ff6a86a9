"""Two issued files held against each other: read, compared, and said at the terminal, on a page and in sentences.

Knows how a record is taken out of a PDF, an HTML file or a record file, and how a comparison is worded. Must not know
how a difference between two lines is found, nor why anything was changed.
"""

from __future__ import annotations

import json
from collections.abc import Container, Iterator, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

from calckit.core.record import Record, digest, from_json, lines_hash
from calckit.errors import CalckitError, CommandError, MismatchError
from calckit.report import html, notebook, seal
from calckit.report.attachments import Parcel
from calckit.report.changes import Change, Changed, Changes, between
from calckit.report.files import replace_together
from calckit.report.line_changes import NONE, Step
from calckit.report.recheck import beside, parcel_of, read, strangers, title

CAUTION = (
    "This comparison states what differs between two files. It does not say why, nor whether a change is right; that "
    "is for the originator and the checker."
)
_LONG = 64  # characters of old and new together above which each stands on a row of its own at the terminal
_SHORT = 160  # characters of a notebook text that are shown
SET_VALUE = "set value "
"""How a difference in the settings names a value that was set for the issue."""
_NO_PARCEL = "settings, files and text cells were not compared: a record file does not hold them"


@dataclass(frozen=True)
class Issue:
    """One issued file: its record, what is attached (None for a record file), and what is wrong with the file."""

    name: str
    record: Record
    parcel: Parcel | None
    faults: tuple[str, ...] = ()
    remarks: tuple[str, ...] = ()


@dataclass(frozen=True)
class Comparison:
    """What differs between two issued files.

    `changed` holds the groups found in the records; `settings` (set values, the register, files read) and `prose` (the
    text cells) those found in what is attached. `faults` say which file is not as it was issued.
    """

    old: Issue
    new: Issue
    changed: Changed
    settings: Changes = ()
    prose: Changes = ()

    @property
    def faults(self) -> tuple[str, ...]:
        """What is wrong with either file, named by the file."""
        return tuple(f"{word}, {issue.name}: {fault}" for word, issue in self._sides() for fault in issue.faults)

    @property
    def remarks(self) -> tuple[str, ...]:
        """What the reader must know of how the files were compared."""
        said = [f"{word}, {issue.name}: {remark}" for word, issue in self._sides() for remark in issue.remarks]
        return tuple(said) if self.old.parcel and self.new.parcel else (*said, _NO_PARCEL)

    def _sides(self) -> tuple[tuple[str, Issue], ...]:
        return ("old", self.old), ("new", self.new)

    def groups(self) -> list[tuple[str, str, Changes]]:
        """Name, heading and content of every group, in the order of the reader's interest."""
        found = self.changed.groups()
        place = [name for name, _, _ in found].index("inputs") + 1
        found.insert(place, ("settings", "Settings and files changed", self.settings))
        return [*found, ("prose", "Text of the notebook changed", self.prose)]


def compare(old: Path, new: Path) -> Comparison:
    """Hold two issued files, each a PDF, an HTML file or a record file, against each other; no code in them is run.

    Raises CommandError if a file cannot be read or is none of these, MismatchError if its record cannot be read.
    """
    return of_issues(open_issue(old), open_issue(new))


def of_issues(old: Issue, new: Issue) -> Comparison:
    """Hold two files that were read against each other."""
    settings: Changes = ()
    prose: Changes = ()
    if old.parcel and new.parcel:
        titles = {**old.record.calculation, **new.record.calculation}  # said in the title block
        settings = tuple(_settings(*(dict(_entries(issue.parcel, titles)) for issue in (old, new) if issue.parcel)))
        prose = tuple(_prose(_texts(old.parcel), _texts(new.parcel)))
    return Comparison(old, new, between(old.record, new.record), settings, prose)


def open_issue(path: Path) -> Issue:
    """Read an issued file and hold it against its seal, its hash of the lines and the files beside it.

    Raises as `compare` does.
    """
    if path.name.endswith(".json"):
        return _record_file(path)
    data = read(path)
    verdict = seal.check(data)
    try:
        parcel = parcel_of(seal.issued_bytes(data))
    except MismatchError as error:
        raise MismatchError(f"{path}: {error}") from error
    record = _record(path, parcel.record)
    faults = ["; ".join([verdict.text(), *verdict.changes])] if verdict.state == "altered" else []
    faults += _altered_lines(record)
    faults += [finding.text for finding in beside(path, data) if not finding.good]
    remarks = (verdict.text(),) if verdict.state == "added" else ()
    return Issue(path.name, record, parcel, tuple(faults), remarks)


def _record_file(path: Path) -> Issue:
    try:
        data = path.read_bytes()
    except OSError as error:
        raise CommandError(f"{path} cannot be read: {error.strerror}") from error
    record = _record(path, data)
    return Issue(path.name, record, None, (*_altered_lines(record), *strangers(record, path)))


def _record(path: Path, data: bytes) -> Record:
    try:
        return from_json(data.decode("utf-8"))
    except (ValueError, KeyError, TypeError) as error:
        raise MismatchError(f"{path}: its record cannot be read: {error}") from error


def _altered_lines(record: Record) -> list[str]:
    obtained = lines_hash(record.lines)
    if obtained == record.lines_hash:
        return []
    stated = record.lines_hash[:8] or NONE
    return [f"lines not as issued: the record states {stated}, the content gives {obtained[:8]}"]


# --- what is attached


def _settings(before: Mapping[str, str], after: Mapping[str, str]) -> Iterator[Change]:
    for name in [*after, *(name for name in before if name not in after)]:
        a, b = before.get(name, NONE), after.get(name, NONE)
        if a != b:
            yield Change(name, 0, 0, "", (Step("", a, b),))


def _entries(parcel: Parcel, titles: Container[str]) -> Iterator[tuple[str, str]]:
    """Set values, the register of confirmations, and every file with its digest; fields of the title block left out."""
    try:
        settings = json.loads(parcel.settings)
        values: Mapping[str, str] = settings.get("set") or {}
        named: Mapping[str, str] = settings.get("files") or {}
        register: str = settings.get("confirmed") or ""
        found = [*((f"{SET_VALUE}{id_}", str(value)) for id_, value in values.items() if id_ not in titles)]
        found += [(f"file {name}", _content(text.encode())) for name, text in named.items()]
    except (ValueError, AttributeError) as error:
        raise MismatchError(f"the attached settings cannot be read: {error}") from error
    yield from found
    if register:
        yield "register of confirmations", _content(register.encode())
    for name, data in parcel.files.items():
        yield f"file {name}", _content(data)


def _content(data: bytes) -> str:
    return f"{len(data)} bytes, sha256 {digest(data)[:8]}"


def _texts(parcel: Parcel) -> dict[str, tuple[str, str]]:
    """Of every text cell, by its id, the heading it stands under and its text."""
    try:
        cells = notebook.parse(parcel.notebook.decode(), parcel.stem, Path()).cells
    except (CalckitError, ValueError) as error:
        raise MismatchError(f"the attached notebook cannot be read: {error}") from error
    found, heading = {}, ""
    for cell in cells:
        if cell.kind == "markdown":
            lines = cell.text.splitlines()
            heading = next((line.strip("# ") for line in lines if line.startswith("#")), heading)
            found[cell.id] = (heading, cell.text)
    return found


def _prose(old: Mapping[str, tuple[str, str]], new: Mapping[str, tuple[str, str]]) -> Iterator[Change]:
    for id_ in [*new, *(id_ for id_ in old if id_ not in new)]:
        (_, a), (_, b) = old.get(id_, ("", "")), new.get(id_, ("", ""))
        if a != b:
            heading = (new if id_ in new else old)[id_][0]
            yield Change(f"under {heading}" if heading else id_, 0, 0, "", (Step("", _only(a, b), _only(b, a)),))


def _only(text: str, other: str) -> str:
    """The lines that the other text has not, cut to what tells the reader where to look."""
    there = set(other.splitlines())
    said = " ".join(line.strip() for line in text.splitlines() if line not in there and line.strip())
    return (said if len(said) <= _SHORT else f"{said[:_SHORT].rstrip()} ...") or NONE


# --- said


def text(comparison: Comparison) -> str:
    """The comparison for the terminal: groups that hold something, then the names of those that do not."""
    said = [f"old  {_head(comparison.old)}", f"new  {_head(comparison.new)}"]
    said += [f"NOT AS ISSUED  {fault}" for fault in comparison.faults]
    said += [f"note: {remark}" for remark in comparison.remarks]
    for _, heading, changes in comparison.groups():
        if changes:
            said += ["", f"{heading}: {len(changes)}", *_rows(changes)]
    empty = [heading for _, heading, changes in comparison.groups() if not changes]
    if empty:
        said += ["", "Nothing under: " + "; ".join(empty)]
    if comparison.changed.renumbered:
        said += ["", _renumbered(comparison.changed.renumbered)]
    return "\n".join([*said, "", CAUTION])


def _head(issue: Issue) -> str:
    return f"{title(issue.record)}  ({issue.name})"


def _renumbered(count: int) -> str:
    return f"{count} line{'' if count == 1 else 's'} of both files stand under another number; that alone is no change"


def number(change: Change) -> str:
    """The line number, old and new where they differ; blank for what is no line."""
    numbers = dict.fromkeys(n for n in (change.old_n, change.new_n) if n)
    return " -> ".join(map(str, numbers))


def _rows(changes: Changes) -> Iterator[str]:
    wide = max(len(number(change)) for change in changes)
    for change in changes:
        named = "" if change.meaning.startswith(change.id) else change.id
        said = "  ".join(filter(None, (named, change.meaning, f"[{change.note}]" if change.note else "")))
        yield f"  {number(change):>{wide}}  {said}".rstrip()
        steps, indent = change.steps, " " * (wide + 6)
        if bool(change.old_n) == bool(change.new_n):
            yield from _steps(steps, indent)
        else:  # the line stands in one of the files
            yield from (f"{indent}{step.new if change.new_n else step.old}" for step in steps)


def _steps(steps: Sequence[Step], indent: str) -> Iterator[str]:
    short = [step for step in steps if len(step.old) + len(step.new) <= _LONG]
    what, old, new = (max((len(getattr(step, name)) for step in short), default=0) for name in ("what", "old", "new"))
    for step in steps:
        if step in short:
            label = f"{step.what:{what}}  " if what else ""
            yield f"{indent}{label}{step.old:>{old}} -> {step.new:{new}}  {step.change}".rstrip()
        else:
            yield f"{indent}{step.what or 'value'}".rstrip()
            yield f"{indent}  old: {step.old}"
            yield f"{indent}  new: {step.new}" + (f"  {step.change}" if step.change else "")


def narrative(comparison: Comparison) -> list[str]:
    """Sentences for a revision narrative: what changed. Why is not known to the kit and is left to the originator.

    Results are told by those of the summary sheets, and by the one that moved most.
    """
    changed, said = comparison.changed, []
    for lead, changes in (
        ("", changed.criteria),
        ("Input ", changed.inputs),
        ("", tuple(one for one in comparison.settings if not one.id.startswith(SET_VALUE))),  # its line says more
        ("Override of ", changed.overrides),
        ("Line ", changed.formulas),
        ("Decision at ", changed.decisions),
    ):
        said += [f"{lead}{_sentence(change)}" for change in changes]
    if changed.results:
        said.append(_results(changed))
    for heading, changes in (
        ("Added", changed.added),
        ("Removed", changed.removed),
        ("Confirmation changed for", changed.confirmations),
        ("Notes and wording changed at", changed.wording),
        ("Text of the notebook changed", comparison.prose),
    ):
        if changes:
            said.append(f"{heading}: {', '.join(change.id for change in changes)}.")
    for word, changes in (("opened", changed.opened), ("closed", changed.closed), ("restated", changed.restated)):
        if changes:
            said.append(f"Open items {word}: " + "; ".join(_item(change) for change in changes) + ".")
    return said or ["No input, formula, result or open item changed."]


def _sentence(change: Change) -> str:
    name = f"{change.id} ({change.meaning})" if change.meaning and change.meaning != change.id else change.id
    steps = [step for step in change.steps if not step.what.startswith("moved most")]
    return f"{name}: " + "; ".join(_step(step) for step in steps) + "."


def _step(step: Step) -> str:
    what = f"{step.what} " if step.what else ""
    return f"{what}from {step.old} to {step.new}" + (f" ({step.change})" if step.change else "")


def _results(changed: Changed) -> str:
    count = len(changed.results)
    first = f"{count} result{'' if count == 1 else 's'} moved"
    on_sheet = [change for change in changed.results if change.id in changed.answers]
    if not on_sheet:
        return f"{first}."
    told = "; ".join(f"{change.id} {_step(change.steps[0])}" for change in on_sheet)
    return f"{first}; of those on the summary sheets: {told}."


def _item(change: Change) -> str:
    return f"{change.meaning} ({change.note})" if change.note else change.meaning


def changed_lines(comparison: Comparison) -> dict[str, str]:
    """For each line of the newer file that differs, by its id, what stood in its place, for a mark in the margin.

    The old value if that changed (of a list, the rows that changed), else what changed and its old wording; "not in
    the former issue" for a line that was added.
    """
    found: dict[str, list[Step]] = {}
    listed = ("inputs", "results", "decisions", "units", "formulas", "margins", "overrides", "wording")
    for name in listed:
        for change in getattr(comparison.changed, name):
            if change.new_n:
                found.setdefault(change.id, []).extend(change.steps)
    former = {id_: _former(steps) for id_, steps in found.items()}
    return former | {change.id: "not in the former issue" for change in comparison.changed.added}


def _former(steps: list[Step]) -> str:
    rows = [step for step in steps if step.what.startswith("row ")]
    values = [step.old for step in steps if not step.what]
    if rows:
        return ", ".join(f"{step.old} at {step.what.removeprefix('row ')}" for step in rows)
    return values[0] if values else "; ".join(f"{step.what}: {step.old}" for step in steps)


# --- on a page


def page(comparison: Comparison) -> bytes:
    """The comparison as one HTML file in UTF-8 that runs no script and fetches nothing; the same bytes each time."""
    return (
        html.template("compare.html.j2")
        .render(
            number=number,
            comparison=comparison,
            heads=(("Old", _head(comparison.old)), ("New", _head(comparison.new))),
            paper=comparison.new.record.calculation.get("paper", "Letter"),
            narrative=narrative(comparison),
            renumbered=_renumbered(comparison.changed.renumbered) if comparison.changed.renumbered else "",
            caution=CAUTION,
        )
        .encode()
    )


def write(comparison: Comparison, path: Path) -> Path:
    """Write the page; an earlier comparison there is replaced, and stays whole if that fails.

    Raises CommandError if the name does not end in .html, an issued report stands there, or it cannot be written.
    """
    if path.suffix.lower() not in (".html", ".htm"):
        raise CommandError(f"--to {path}: needed a file name that ends in .html")
    if path.is_file() and seal.seal_of(path.read_bytes()):
        raise CommandError(f"{path} is an issued report and is never overwritten; cure: name another file with --to")
    return replace_together(path.parent, {path.name: page(comparison)})[0]
