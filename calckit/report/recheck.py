"""Hold an issued report against itself: its seal, its hashes, and the record that lies beside it.

Knows how attachments are taken out of a PDF or HTML file. Runs none of the code inside; must not know how a report is
written.
"""

from __future__ import annotations

import base64
import binascii
import io
from collections.abc import Iterator
from dataclasses import dataclass
from html.parser import HTMLParser
from pathlib import Path
from urllib.parse import unquote_to_bytes

from calckit.core.record import Record, from_json, lines_hash
from calckit.errors import CalckitError, CommandError, MismatchError
from calckit.report import notebook, seal
from calckit.report.attachments import Parcel, inputs_hash, unpack

RECORD_ENDING = ".record.json"


@dataclass(frozen=True)
class Finding:
    """One thing looked at: `what`, whether it is as issued, and the words for it."""

    what: str
    good: bool
    text: str


def recheck(path: Path) -> list[Finding]:
    """Everything that can be said of an issued PDF or HTML file from the file alone and the record beside it.

    Raises CommandError if the file cannot be read or is neither PDF nor HTML.
    """
    data = read(path)
    verdict = seal.check(data)
    findings = [Finding("seal", verdict.state != "altered", verdict.text())]
    try:
        parcel = parcel_of(seal.issued_bytes(data))
        record = from_json(parcel.record.decode())
    except (MismatchError, ValueError, KeyError, TypeError) as error:
        return [*findings, Finding("attachments", False, str(error))]
    findings.append(Finding("issue", True, title(record)))
    findings += _hashes(parcel, record)
    return [*findings, *beside(path, data)]


def read(path: Path) -> bytes:
    """The bytes of a PDF or HTML file; raises CommandError."""
    try:
        data = path.read_bytes()
    except OSError as error:
        raise CommandError(f"{path} cannot be read: {error.strerror}") from error
    if not seal.is_pdf(data) and b"<html" not in data[:4096].lower():
        raise CommandError(f"{path} is neither a PDF nor an HTML file; cure: name an issued report")
    return data


def title(record: Record) -> str:
    """Which issue this is, in one line."""
    fields = record.calculation
    number = fields.get("number") or fields.get("notebook", "")
    revision = f"revision {fields['revision']}" if fields.get("revision") else ""
    return ", ".join(filter(None, (number, revision, fields.get("status", ""), fields.get("date", ""))))


def parcel_of(data: bytes) -> Parcel:
    """What is attached to an issued report.

    Raises MismatchError if it is not there or cannot be taken out.
    """
    return unpack(dict(_from_pdf(data) if seal.is_pdf(data) else _from_html(data)))


def record_of(data: bytes) -> Record:
    """The record attached to an issued report; raises MismatchError."""
    try:
        return from_json(parcel_of(data).record.decode())
    except (ValueError, KeyError, TypeError) as error:
        raise MismatchError(f"the attached record cannot be read: {error}") from error


def beside(path: Path, data: bytes) -> list[Finding]:
    """Whether the record that lies beside a report names it; nothing is said if none lies there."""
    place = path.with_name(path.stem + RECORD_ENDING)
    if not place.exists():
        return []
    try:
        seals = from_json(place.read_text(encoding="utf-8")).seals or {}
    except (OSError, ValueError, KeyError, TypeError) as error:
        return [Finding("record beside it", False, f"{place.name} cannot be read: {error}")]
    if seals.get(kind_of(data)) == seal.seal_of(data):
        return [Finding("record beside it", True, f"{place.name} names this file")]
    return [Finding("record beside it", False, f"{place.name} belongs to another issue: the files are a mixed set")]


def kind_of(data: bytes) -> str:
    """ "pdf" or "html"."""
    return "pdf" if seal.is_pdf(data) else "html"


def _hashes(parcel: Parcel, record: Record) -> list[Finding]:
    found = [_compare("lines", record.lines_hash, lines_hash(record.lines))]
    try:
        source = notebook.parse(parcel.notebook.decode(), parcel.stem, Path()).source_hash()
        found.append(_compare("source", record.source, source))
    except (CalckitError, ValueError) as error:
        found.append(Finding("source", False, str(error)))
    found.append(_compare("inputs", record.inputs, inputs_hash(record, parcel.settings, parcel.files)))
    return found


def _compare(what: str, stated: str, obtained: str) -> Finding:
    if stated == obtained:
        return Finding(what, True, f"as issued ({stated[:8]})")
    return Finding(what, False, f"not as issued: the record states {stated[:8]}, the content gives {obtained[:8]}")


def _from_pdf(data: bytes) -> Iterator[tuple[str, bytes]]:
    from pypdf import PdfReader

    try:
        for name, contents in PdfReader(io.BytesIO(data)).attachments.items():
            yield name, contents[0]
    except Exception as error:  # a damaged file may raise anything in the reader
        raise MismatchError(f"the attachments cannot be taken out of the PDF: {error}") from error


def _from_html(data: bytes) -> Iterator[tuple[str, bytes]]:
    reader = _Downloads()
    reader.feed(data.decode("utf-8", errors="replace"))
    for name, link in reader.links:
        head, _, body = link.partition(",")
        try:
            plain = unquote_to_bytes(body)
            yield name, base64.b64decode(plain, validate=True) if head.endswith(";base64") else plain
        except binascii.Error as error:
            raise MismatchError(f"the attachment {name} cannot be taken out of the HTML file: {error}") from error


class _Downloads(HTMLParser):
    """The data: links with a file name in a page."""

    def __init__(self) -> None:
        super().__init__()
        self.links: list[tuple[str, str]] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Keep one link."""
        fields = dict(attrs)
        name, link = fields.get("download"), fields.get("href") or ""
        if tag == "a" and name and link.startswith("data:"):
            self.links.append((name, link))
