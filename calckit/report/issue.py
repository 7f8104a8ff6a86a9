"""The whole of an issue: run the notebook clean, render, seal, write together, and say what the reader must know.

Knows the order of these steps and when an issue is refused. Must not know how anything is computed or set.
"""

from __future__ import annotations

import os
import re
from collections.abc import Mapping, Sequence
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, replace
from datetime import UTC, date, datetime
from pathlib import Path
from typing import Literal

from calckit.core.record import (
    NOT_CHECKED,
    NOT_OK,
    STATUSES,
    TO_BE_CONFIRMED,
    WITHDRAWN,
    Line,
    Record,
    from_json,
    lines_hash,
)
from calckit.errors import CommandError, MismatchError, NotebookError
from calckit.report import checked, checklog, enclosures, html, pdf, revised, seal, view
from calckit.report.attachments import Attachment, Parcel, inputs_hash
from calckit.report.compare import Issue
from calckit.report.files import leftovers, replace_together, report_name
from calckit.report.model import Block, Content, View
from calckit.report.notebook import Notebook
from calckit.report.prose import blocks
from calckit.report.recheck import RECORD_ENDING, kind_of, record_of, title
from calckit.report.run import Outcome, Problem, Settings, run
from calckit.report.short import NAME_ENDING, shorten

FORMATS = ("html", "pdf")
_REPLACEABLE = ("preliminary", "for check")
_WITHDRAW = '; to withdraw it, issue with --status superseded or void, which writes beside it'
_MIXED = "; no record beside it names it: move it away if it is left of a writing that was broken off"
_DAY = re.compile(r"\d{4}-\d{2}-\d{2}")


@dataclass(frozen=True)
class Report:
    """A calculation ready to be written: its `record` without seals, the sealed files by format, `notices` of what a
    file cannot show as it was typed, and the check log `laid` over it."""

    name: str
    record: Record
    files: Mapping[str, bytes]
    notices: Sequence[str] = ()
    laid: checked.Laid | None = None


@dataclass(frozen=True)
class Issued:
    """What was written, and the words for the terminal."""

    paths: Sequence[Path]
    text: str


def settings_from(
    set_values: Sequence[str] = (),
    *,
    status: str | None = None,
    day: str | None = None,
    confirmed: str | None = None,
) -> Settings:
    """The settings of an issue from the command line; `set_values` are texts `ID=VALUE`.

    A value `@file` is read from the current folder. Without `day`, SOURCE_DATE_EPOCH counts. Raises CommandError with
    everything that is at fault.

    >>> settings_from(["h_n=70 ft"], day="2026-12-01").set
    {'h_n': '70 ft'}
    """
    faults: list[str] = []
    values: dict[str, str] = {}
    files: dict[str, str] = {}
    for text in set_values:
        id_, equals, value = text.partition("=")
        id_, value = id_.strip(), value.strip()
        if not equals or not id_:
            faults.append(f"--set {text}: needed ID=VALUE, such as h_n=70 ft")
        elif id_ in values:
            faults.append(f"--set {text}: {id_} is set twice")
        else:
            values[id_] = value
            if value.startswith("@"):
                _read_text(value[1:], f"--set {text}", files, faults)
    register: dict[str, str] = {}
    if confirmed is not None:
        _read_text(confirmed, f"--confirmed {confirmed}", register, faults)
    if status is not None and status not in STATUSES:
        faults.append(f"--status {status}: needed one of {', '.join(STATUSES)}")
    day = _day(day, faults)
    if faults:
        raise CommandError("\n".join(faults))
    return Settings(values, files, status, day, next(iter(register.values()), None))


def produce(
    notebook: Notebook,
    settings: Settings,
    formats: Sequence[str] = FORMATS,
    *,
    former: Issue | None = None,
    log: checklog.Log | None = None,
    folder: Path = Path(),
    short: bool = False,
) -> Report:
    """Run the notebook and make the report in these formats, whole or in its short form; nothing is written.

    With the `former` issue named, what changed since is told and flagged. With a check log it is the checker's copy;
    new rows of the log were set on the former issue, named or lying in the folder.

    Raises NotebookError if a cell raises, CommandError if a set value is at fault or the issue is refused, and
    InputError if a row of the log stands on no line.
    """
    with ThreadPoolExecutor(len(FORMATS)) as pool:
        if "html" in formats:
            pool.submit(html.template, "report.html.j2")  # page and font are made ready while the notebook runs
        outcome = run(notebook, settings, outputs=False)
        record = _accepted(notebook, settings, outcome)
        given = settings.to_json().encode()
        record.source, record.cell_hashes = notebook.source_hash(), notebook.cell_hashes()
        record.inputs = inputs_hash(record, given, outcome.files)
        record.lines_hash = lines_hash(record.lines)
        record.seals = None
        fields = record.calculation
        name = report_name(fields.get("number", ""), fields.get("revision", ""), notebook.stem, fields["status"])
        parcel = Parcel(notebook.stem, notebook.bare(), given, outcome.files, record.to_json().encode())
        changed = revised.revised(former, record, parcel) if former else None
        model = view.build(record, _content(notebook, record), changed)
        before = former.record if former else checked.former_beside(folder, name, record)
        laid = checked.lay(log, record, before) if log else None
        if laid:
            model = checked.onto(model, record, laid)
            parcel = replace(parcel, check_log=laid.log.to_csv().encode())
        if short:
            model = shorten(model, record)
        writers = {form: pool.submit(_WRITERS[form], model, record, outcome, parcel.pack()) for form in formats}
        written = {form: writer.result() for form, writer in writers.items()}
    name += NAME_ENDING if short else ""
    notices = [notice for _, said in written.values() for notice in said]
    return Report(name, record, {form: seal.apply(data) for form, (data, _) in written.items()}, notices, laid)


def _accepted(notebook: Notebook, settings: Settings, outcome: Outcome) -> Record:
    """The record of a run that may be issued."""
    _refuse_problems(outcome, settings)
    if outcome.record is None:
        raise NotebookError("the notebook starts no calculation; cure: write calc = Calc(...) in its first code cell")
    outcome.record.calculation["notebook"] = notebook.stem
    _refuse_status(outcome.record)
    return outcome.record


def _html(model: View, record: Record, outcome: Outcome, attached: Sequence[Attachment]) -> tuple[bytes, list[str]]:
    """The HTML file, and what it cannot show as it was typed."""
    bound = enclosures.pages(record, outcome.files, "png")
    page = html.render(model, figures=outcome.figures, attachments=attached, enclosed=bound)
    return page, html.missing_glyphs(model)


def _pdf(model: View, record: Record, outcome: Outcome, attached: Sequence[Attachment]) -> tuple[bytes, list[str]]:
    """The PDF file, and what it cannot show as it was typed."""
    bound, day = enclosures.pages(record, outcome.files, "svg"), record.calculation["date"]
    lacking = [f"shown as a code point in the PDF: {found}" for found in pdf.missing_glyphs(model)]
    return pdf.render(model, figures=outcome.figures, attachments=attached, date=day, enclosed=bound), lacking


_WRITERS = {"html": _html, "pdf": _pdf}


def issue(
    notebook: Notebook,
    settings: Settings,
    folder: Path,
    formats: Sequence[str] = FORMATS,
    *,
    former: Path | None = None,
    check_log: Path | None = None,
    short: bool = False,
) -> Issued:
    """Issue a notebook into a folder, whole or in its short form.

    `former` is an issued file of the earlier revision; the check log, if there is one, gets its new rows tied.

    Raises as `produce` does, and CommandError if the former file cannot be used, if files of an issued revision stand
    there, or a file cannot be read or written; earlier files, the log among them, are then as they were.
    """
    log = checklog.read(check_log) if check_log else None
    earlier = revised.open_former(former) if former else None
    report = produce(notebook, settings, formats, former=earlier, log=log, folder=folder, short=short)
    notices = [*report.notices, *_earlier(folder, report.name)]
    if short:
        notices += _full_form(folder / (report.name.removesuffix(NAME_ENDING) + RECORD_ENDING), report.record)
    seals = {form: seal.seal_of(data) for form, data in report.files.items()}
    for form in FORMATS:
        left = folder / f"{report.name}.{form}"
        if form not in report.files and left.exists():
            if _same_issue(left.read_bytes(), report.record):
                seals[form] = seal.seal_of(left.read_bytes())
            else:
                notices.append(f"note: {left} stands from another issue and does not belong to these files")
    contents = {f"{report.name}.{form}": data for form, data in report.files.items()}
    if check_log and report.laid and report.laid.tied:
        if checklog.read(check_log) != log:
            raise CommandError(f"{check_log} was changed while the notebook ran; nothing was written; issue again")
        contents = {str(check_log.resolve()): report.laid.log.to_csv().encode(), **contents}
    contents[report.name + RECORD_ENDING] = report.record.sealed(seals).to_json().encode()
    if left_behind := leftovers(folder, contents):
        names = ", ".join(path.name for path in left_behind)
        notices.append(f"note: removed what a writing that was broken off left behind: {names}")
    paths = replace_together(folder, contents)
    words = [title(report.record), *(f"  {path}" for path in paths), *notices, *account(report.record)]
    if report.laid:
        words += checked.account(report.laid, report.record)
    return Issued(paths, "\n".join(words))


def account(record: Record) -> list[str]:
    """What the originator must know after an issue: checks not met or not made, open items, values to be confirmed."""
    lines = []
    for verdict in (NOT_OK, NOT_CHECKED):
        found = [line for line in record.lines if line.verdict == verdict]
        lines.append(f"{verdict}: {len(found) or 'none'}")
        lines += [f"  {_check(line)}" for line in found]
    still_open = [item for item in record.open_items if item.group == "open"]
    confirm = [item for item in record.open_items if item.group == "confirm"]
    lines.append(f"open items: {len(still_open) or 'none'}")
    lines += [f"  {item.text}" + (f" ({item.owner})" if item.owner else "") for item in still_open]
    lines.append(f"{TO_BE_CONFIRMED}: {len(confirm) or 'none'}")
    return lines


def _content(notebook: Notebook, record: Record) -> Content:
    """The notebook in order: the text of Markdown cells, and where each code cell wrote its lines."""
    content: list[tuple[Literal["prose"], Sequence[Block]] | tuple[Literal["cell"], int]] = []
    place = 0
    for cell in notebook.cells:
        if cell.kind == "markdown":
            content.append(("prose", blocks(cell.text)))
        elif cell.runs:
            if place < len(record.cells):
                content.append(("cell", place))
            place += 1
    return content


def _check(line: Line) -> str:
    said = line.forms.get("plain", [""])[-1]
    if line.verdict == NOT_CHECKED:
        said = f"missing {line.missing}" if line.missing else ""
    place = f"line {line.n}, {line.part}" if line.part else f"line {line.n}"
    return f"{place}  {line.meaning or line.id}" + (f": {said}" if said else "")


def _read_text(name: str, where: str, into: dict[str, str], faults: list[str]) -> None:
    try:
        into[name] = Path(name).read_text(encoding="utf-8-sig")
    except OSError as error:
        faults.append(f"{where}: {name or 'a blank name'} cannot be read: {error.strerror}")
    except UnicodeDecodeError:
        faults.append(f"{where}: {name} is not UTF-8 text; cure: save it as UTF-8")


def _day(day: str | None, faults: list[str]) -> str | None:
    if day is not None:
        try:
            if not _DAY.fullmatch(day):
                raise ValueError
            date.fromisoformat(day)
        except ValueError:
            faults.append(f"--date {day}: needed a day, such as 2026-12-01")
        return day
    epoch = os.environ.get("SOURCE_DATE_EPOCH")
    if not epoch:
        return None
    try:
        return datetime.fromtimestamp(int(epoch), UTC).date().isoformat()
    except (ValueError, OverflowError, OSError):
        faults.append(f"SOURCE_DATE_EPOCH {epoch}: needed whole seconds since 1970")
        return None


def _refuse_problems(outcome: Outcome, settings: Settings) -> None:
    """Report what is wrong with set values; of a run that stopped, only what is certain."""
    if not outcome.failure:
        if outcome.problems:
            raise CommandError("set values at fault:\n" + "\n".join(map(_problem, outcome.problems)))
        return
    certain = [problem for problem in outcome.problems if problem.kind == "invalid"]
    undecided = sorted({problem.id for problem in outcome.problems} - {problem.id for problem in certain})
    parts = [outcome.failure]
    if certain:
        parts.append("set values at fault:\n" + "\n".join(map(_problem, certain)))
    if undecided:
        parts.append(f"set values undecided, as the run stopped: {', '.join(undecided)}")
    if certain:
        raise CommandError("\n".join(parts))
    raise NotebookError("\n".join(parts))


def _problem(problem: Problem) -> str:
    return f"  {problem.id}: {problem.kind}; {problem.text}"


def _refuse_status(record: Record) -> None:
    """Refuse a status that the calculation's own content contradicts."""
    fields = record.calculation
    status, said = fields["status"], checklog.self_check(fields)
    faults = []
    if status == "checked" and said:
        faults.append(f"{said}; cure: another person checks it")
    elif status == "checked" and fields.get("check_level") == "self":
        faults.append('check_level is "self"; cure: another person checks it, and check_level says so')
    if status == "for construction" and record.open_items and not fields.get("open_items_accepted", "").strip():
        ids = ", ".join(item.id for item in record.open_items[:6])
        more = len(record.open_items) - 6
        faults.append(
            f"{len(record.open_items)} open items: {ids}{f' and {more} more' if more > 0 else ''}; "
            'cure: close them, issue "for check", or say on the cover why they stay open, '
            'Calc(open_items_accepted="reason, by whom")'
        )
    faults += revised.revision_faults(record)
    if not fields["date"]:
        faults.append('no date; cure: write Calc(date="2026-12-01"), or give --date')
    if faults:
        raise CommandError(f'the issue with status "{status}" is refused:\n  ' + "\n  ".join(faults))


def _earlier(folder: Path, name: str) -> list[str]:
    """Refuse to write over files whose record does not say that they may be replaced; a note if they were mixed."""
    place = folder / (name + RECORD_ENDING)
    record = _record(place) if place.is_file() else None
    if place.is_file():
        _refuse_status_of(place, record)
    strangers = []
    for path in (folder / f"{name}.{form}" for form in FORMATS):
        if path.is_file():
            data = path.read_bytes()
            named = record is not None and (record.seals or {}).get(kind_of(data)) == seal.seal_of(data)
            _refuse_status_of(path, record if named else _attached(data), "" if named else _MIXED)
            if not named:
                strangers.append(path.name)
    if not strangers:
        return []
    return [f"note: the earlier files were a mixed set; not named by their record: {', '.join(strangers)}"]


def _full_form(place: Path, record: Record) -> list[str]:
    """A note if the full form that a short one names does not stand beside it."""
    found = _record(place) if place.is_file() else None
    content = view.content_of(record)
    if found and view.content_of(found) == content:
        return []
    stands = f"has content {view.content_of(found)}" if found else "is not there"
    return [f"note: the short form names a full form of content {content}; {place.name} {stands}; "
            "cure: issue without --short, too"]


def _refuse_status_of(path: Path, record: Record | None, mixed: str = "") -> None:
    if record is None:
        raise CommandError(f"{path} stands there and holds no record that can be read; cure: move it away")
    status = record.calculation.get("status")
    if status not in _REPLACEABLE:
        raise CommandError(
            f'{path} is issued with status "{status}" and is never overwritten{mixed}; cure: give the calculation its '
            "next revision, Calc(revision=...)" + _WITHDRAW * (status not in WITHDRAWN)
        )


def _record(path: Path) -> Record | None:
    try:
        return from_json(path.read_text(encoding="utf-8"))
    except (OSError, ValueError, KeyError, TypeError):
        return None


def _attached(data: bytes) -> Record | None:
    try:
        return record_of(data)
    except MismatchError:
        return None


def _same_issue(data: bytes, record: Record) -> bool:
    return seal.check(data).state == "intact" and _attached(data) == record
