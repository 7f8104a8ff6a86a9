"""The signature report: one sheet that names issued files by their digests, to be signed and sealed by hand.

Knows digests, what an issued file says of itself, and the fields that stay blank. Signs nothing, fills no field of a
person, and changes none of the files.
"""

from __future__ import annotations

import hashlib
import os
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

from calckit.core.record import Record, from_json
from calckit.errors import CommandError, MismatchError
from calckit.report import seal, small_document
from calckit.report.files import replace_together, report_name
from calckit.report.recheck import beside, record_of, strangers, title

_ENDING = "_signature.pdf"


@dataclass(frozen=True)
class Listed:
    """One file as the sheet names it.

    `record` is the record that it is or carries, `verdict` what its seal says; None where it has none. `strangers` say
    which files beside it belong to another issue.
    """

    name: str
    size: int
    sha256: str
    sha1: str
    record: Record | None
    verdict: seal.Verdict | None
    strangers: Sequence[str] = ()


def write(files: Sequence[Path], to: Path) -> str:
    """Write the signature report of these files and say what was done.

    `to` is the file to write, or a folder; then the name follows the first calculation among the files. Raises
    CommandError naming every file that cannot be read, and if the target stands already or the sheet is full.
    """
    listed = look(files)
    path = to / _name(listed) if to.is_dir() else to
    if path.exists():
        raise CommandError(f"{path} exists and is not overwritten; cure: name another file with --to")
    replace_together(path.parent, {path.name: render(listed)})
    words = [str(path), *(f"  {item.name}: SHA-256 {item.sha256}" for item in listed)]
    words += [
        f"note: {item.name}: {item.verdict.text()}"
        for item in listed
        if item.verdict and item.verdict.state != "intact"
    ]
    words += [f"note: {item.name}: {said}" for item in listed for said in item.strangers]
    if len({_issue(item.record) for item in listed if item.record}) > 1:
        words.append("note: the files belong to more than one issue")
    return "\n".join(words)


def look(files: Sequence[Path]) -> list[Listed]:
    """What the sheet says of each file. Raises CommandError naming every file that cannot be read."""
    faults, found = [], []
    for path in files:
        try:
            data = path.read_bytes()
        except OSError as error:
            faults.append(f"{path} cannot be read: {error.strerror}")
            continue
        sha1 = hashlib.sha1(data, usedforsecurity=False).hexdigest()
        sealed = not _is_record(path.name) and seal.seal_of(data)
        verdict = seal.check(data) if sealed else None
        sha256 = hashlib.sha256(data).hexdigest()
        record = _record(path.name, data)
        found.append(Listed(path.name, len(data), sha256, sha1, record, verdict, _strangers(path, data, record)))
    if faults:
        raise CommandError("\n".join(faults))
    return found


def render(listed: Sequence[Listed]) -> bytes:
    """The sheet as PDF/A-3a and PDF/UA-1: the same bytes for the same files.

    Its date is that of the latest issue among them; where they state none, SOURCE_DATE_EPOCH or the present day.
    Raises CommandError if the files do not fit on one sheet.
    """
    records = [item.record for item in listed if item.record]
    facts = records[0].calculation if records else {}
    issues = list(dict.fromkeys(map(_issue, records)))
    data = {
        "paper": facts.get("paper", "Letter"),
        "project": " / ".join(dict.fromkeys(project for project, _ in issues)),
        "issues": [issue for _, issue in issues],
        "files": [
            {
                "name": item.name,
                "size": f"{item.size:,} bytes",
                "sha256": item.sha256,
                "sha1": item.sha1,
                "description": ", ".join(filter(None, _issue(item.record))),
                "state": item.verdict.text() if item.verdict else "",
            }
            for item in listed
        ],
    }
    return small_document.typeset("signature.typ", data, _day(records), "the signature report")


def _is_record(name: str) -> bool:
    return name.lower().endswith(".json")


def _record(name: str, data: bytes) -> Record | None:
    """The record that a file is or carries; None if there is none."""
    try:
        return from_json(data.decode()) if _is_record(name) else record_of(seal.issued_bytes(data))
    except (MismatchError, ValueError, KeyError, TypeError):
        return None


def _strangers(path: Path, data: bytes, record: Record | None) -> list[str]:
    if record is None:
        return []
    if _is_record(path.name):
        return strangers(record, path)
    return [finding.text for finding in beside(path, data) if not finding.good]


def _issue(record: Record | None) -> tuple[str, str]:
    """The project and the issue that a record belongs to."""
    return (record.calculation.get("project", ""), title(record)) if record else ("", "")


def _name(listed: Sequence[Listed]) -> str:
    for item in listed:
        if item.record:
            facts = item.record.calculation
            return report_name(facts.get("number", ""), facts.get("revision", ""), Path(item.name).stem) + _ENDING
    return Path(listed[0].name).stem + _ENDING


def _day(records: Sequence[Record]) -> datetime:
    days = [day for record in records if (day := record.calculation.get("date"))]
    if days:
        return datetime.fromisoformat(max(days)).replace(tzinfo=UTC)
    epoch = os.environ.get("SOURCE_DATE_EPOCH", "")
    return datetime.fromtimestamp(int(epoch), UTC) if epoch.isdecimal() else datetime.now(UTC)
