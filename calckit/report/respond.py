"""The response to a checker's comments: each with its answer, and line and sheet of the report where it was met.

Knows what the letter says and where lines stand on the sheets of an issued PDF. Fills no field of a person, and
changes neither the log nor the report.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from datetime import UTC, datetime
from pathlib import Path

from calckit.core.record import Record
from calckit.errors import CommandError
from calckit.report import checked, checklog, seal, small_document
from calckit.report.checked import CommentView
from calckit.report.comments import sheets_of_lines
from calckit.report.files import replace_together, report_name
from calckit.report.model import Ref
from calckit.report.recheck import read, record_of, title

_ENDING = "_response.pdf"


def respond(log_path: Path, report: Path, to: Path) -> str:
    """Write the response to the comments of a log, as they stand against an issued PDF, and say what was done.

    `to` is the file to write, or a folder; then the name follows the calculation. Raises CommandError if a file cannot
    be read, the log holds no comment or the target stands already, MismatchError if the PDF is no issued report, and
    InputError naming every bad row of the log.
    """
    data = read(report)
    if not seal.is_pdf(data):
        raise CommandError(f"{report} is no PDF, and only a PDF has sheets; cure: name the issued PDF")
    record = record_of(seal.issued_bytes(data))
    log = checklog.read(log_path)
    marks = checklog.expand(log, record)
    comments = sorted(checked.comments(marks), key=lambda one: one.number)
    if not comments:
        raise CommandError(f"{log_path} holds no comment to be answered")
    path = to / (_name(record, report) + _ENDING) if to.is_dir() else to
    if path.exists():
        raise CommandError(f"{path} exists and is not overwritten; cure: name another file with --to")
    sheets = sheets_of_lines(data, record)
    replace_together(path.parent, {path.name: render(comments, record, sheets, log.name, report.name)})
    counts = _counts(comments)
    words = [str(path), f"  {title(record)}; file seal: {seal.check(data).text()}", f"  comments: {counts}"]
    words += [f"  note: comment {one.number}, {one.place}: no answer yet" for one in comments if not one.answer]
    if marks.untied:
        rows = ", ".join(map(str, marks.untied))
        words.append(f"  note: rows not tied to an issue yet, taken as set on this one: {rows}")
    return "\n".join(words)


def render(
    comments: Sequence[CommentView], record: Record, sheets: Mapping[int, str], log_name: str, report_name: str
) -> bytes:
    """The letter as PDF/A-3a and PDF/UA-1, dated as the issue; `sheets` names the sheet of each line by its number."""
    facts = record.calculation
    data = {
        "paper": facts.get("paper", "Letter"),
        "facts": [
            pair
            for pair in (
                ("Project", facts.get("project", "")),
                ("Calculation", title(record)),
                ("Originator", ", ".join(filter(None, (facts.get("prepared_by", ""), facts.get("firm", ""))))),
                ("Checker", facts.get("checked_by", "")),
                ("Report", report_name),
                ("Check log", log_name),
                ("Comments", _counts(comments)),
            )
            if pair[1]
        ],
        "project": facts.get("project", ""),
        "comments": [
            {
                "number": one.number,
                "by": one.by,
                "place": one.place,
                "parts": one.parts,
                "answer": one.answer,
                "where": _where(one.refs, sheets),
                "state": one.state,
                "note": one.note,
            }
            for one in comments
        ],
    }
    day = datetime.fromisoformat(facts["date"]).replace(tzinfo=UTC)
    return small_document.typeset("respond.typ", data, day, "the response")


def _name(record: Record, report: Path) -> str:
    facts = record.calculation
    return report_name(facts.get("number", ""), facts.get("revision", ""), report.stem)


def _counts(comments: Sequence[CommentView]) -> str:
    states = [one.state for one in comments]
    return ", ".join(f"{states.count(state)} {state}" for state in ("open", "answered", "closed"))


def _where(refs: Sequence[Ref], sheets: Mapping[int, str]) -> list[str]:
    """The lines by sheet, runs of lines as ranges."""
    found = []
    for sheet in dict.fromkeys(sheets.get(ref.n, "") for ref in refs):
        here = [ref for ref in refs if sheets.get(ref.n, "") == sheet]
        runs = ", ".join(f"{a.n}" if a == b else f"{a.n}–{b.n}" for a, b in checked.ranges(here))
        found.append(f"line{'s' if len(here) > 1 else ''} {runs}" + (f", sheet {sheet}" if sheet else ""))
    return found
