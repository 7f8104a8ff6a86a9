"""Hold an issued report against itself: seal, hashes, printed digits, formulas, and the record that lies beside it.

Knows how attachments are taken out of a PDF or HTML file, and what is held against what. `recheck` runs none of the
code inside, `run_again` does. Must not know how a report is written.
"""

from __future__ import annotations

import base64
import binascii
import io
import json
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import asdict, dataclass
from html.parser import HTMLParser
from pathlib import Path, PurePosixPath
from tempfile import TemporaryDirectory
from urllib.parse import unquote_to_bytes

from calckit.core.record import Line, Record, canonical, digest, from_json, lines_hash
from calckit.errors import CalckitError, CommandError, MismatchError, NotebookError
from calckit.report import notebook, seal
from calckit.report.attachments import Parcel, inputs_hash, unpack
from calckit.report.digits_check import check_digits
from calckit.report.reevaluate import BROKEN, counted, named, reevaluate

RECORD_ENDING = ".record.json"


@dataclass(frozen=True)
class Finding:
    """One thing looked at: `what`, whether it is as issued, and the words for it, one thing at fault a line."""

    what: str
    good: bool
    text: str


def recheck(path: Path) -> list[Finding]:
    """Everything that can be said of an issued PDF or HTML file from the file alone and the record beside it.

    None of the code in the file is run.
    Raises CommandError if the file cannot be read or is neither PDF nor HTML.
    """
    data = read(path)
    verdict = seal.check(data)
    findings = [Finding("seal", verdict.state != "altered", "\n".join([verdict.text(), *verdict.changes]))]
    try:
        parcel = parcel_of(seal.issued_bytes(data))
        record = from_json(parcel.record.decode())
    except (MismatchError, ValueError, KeyError, TypeError) as error:
        return [*findings, Finding("attachments", False, str(error))]
    findings.append(Finding("issue", True, title(record)))
    altered = list(_altered_lines(record))
    findings += _hashes(parcel, record, altered)
    findings += _contents(record, altered)
    return [*findings, *beside(path, data)]


def run_again(path: Path) -> list[Finding]:
    """Run the notebook inside an issued file in a fresh process, and hold every line against the record.

    This runs the code that the file carries, with the rights of whoever calls it. Raises CommandError if the file
    cannot be read, MismatchError if there is nothing to run, NotebookError if a cell raises.
    """
    from calckit.report.run import Settings, run

    data = read(path)
    parcel = parcel_of(seal.issued_bytes(data))
    record = record_of(seal.issued_bytes(data))
    with TemporaryDirectory(prefix="calckit-recheck-", ignore_cleanup_errors=True) as name:
        folder = Path(name)
        try:
            settings = Settings(**json.loads(parcel.settings))
            source = notebook.parse(parcel.notebook.decode(), parcel.stem, folder)
        except (ValueError, TypeError) as error:
            raise MismatchError(f"the attached settings or notebook cannot be read: {error}") from error
        _unfold(parcel.files, folder)
        outcome = run(source, settings)
    if outcome.failure:
        raise NotebookError(outcome.failure)
    problems = [f"set value {problem.id}: {problem.kind}; {problem.text}" for problem in outcome.problems]
    if outcome.record is None:
        raise NotebookError("the notebook inside the file starts no calculation")
    differing = _differing(record.lines, outcome.record.lines)
    now, then = (json.dumps(r.calculation.get("software"), sort_keys=True) for r in (outcome.record, record))
    software = [] if now == then else [f"issued with {_software(record)}", f"run with {_software(outcome.record)}"]
    if problems or differing:
        return [Finding("run", False, "\n".join(["not as issued:", *problems, *differing, *software]))]
    return [Finding("run", True, "\n".join([f"every line equal ({counted(len(record.lines), 'line')})", *software]))]


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
    """Whether the record that lies beside a report names it and its other form; nothing is said if none lies there."""
    place = path.with_name(path.stem + RECORD_ENDING)
    if not place.exists():
        return []
    try:
        record = from_json(place.read_text(encoding="utf-8"))
    except (OSError, ValueError, KeyError, TypeError) as error:
        return [Finding("record beside it", False, f"{place.name} cannot be read: {error}")]
    if (record.seals or {}).get(kind_of(data)) != seal.seal_of(data):
        return [Finding("record beside it", False, f"{place.name} belongs to another issue: the files are a mixed set")]
    others = strangers(record, place)
    return [Finding("record beside it", not others, "\n".join(others) or f"{place.name} names this file")]


def strangers(record: Record, place: Path) -> list[str]:
    """The reports beside a record file that are not those it names."""
    found = []
    for form, stated in (record.seals or {}).items():
        other = place.with_name(f"{place.name.removesuffix(RECORD_ENDING)}.{form}")
        if other.is_file() and seal.seal_of(other.read_bytes()) != stated:
            found.append(f"{other.name} beside it belongs to another issue: the files are a mixed set")
    return found


def kind_of(data: bytes) -> str:
    """ "pdf" or "html"."""
    return "pdf" if seal.is_pdf(data) else "html"


def _hashes(parcel: Parcel, record: Record, altered: Sequence[str]) -> list[Finding]:
    """The three hashes of the record, and where one does not fit, what is at fault."""
    found = []
    beside = [] if altered else ["no content of a line differs: it is a number, a printed form, a flag or this hash"]
    try:
        found.append(_compare("lines", record.lines_hash, lines_hash(record.lines), beside))
    except ValueError as error:  # a number that is none
        found.append(Finding("lines", False, str(error)))
    try:
        source = notebook.parse(parcel.notebook.decode(), parcel.stem, Path())
        cells = list(_altered_cells(record.cell_hashes, source.cell_hashes()))
        found.append(_compare("source", record.source, source.source_hash(), cells))
    except (CalckitError, ValueError) as error:
        found.append(Finding("source", False, str(error)))
    # the givens are lines; what else this hash covers has no hash of its own
    attached = [] if altered else ["the lines are as hashed: settings.json or a file that the notebook read differs"]
    try:
        inputs = inputs_hash(record, parcel.settings, parcel.files)
        found.append(_compare("inputs", record.inputs, inputs, attached))
    except ValueError as error:
        found.append(Finding("inputs", False, str(error)))
    return found


def _altered_lines(record: Record) -> Iterator[str]:
    """Lines whose content hash is not that of what stands in them."""
    for line in record.lines:
        try:
            fits = line.content == digest(canonical(line.hashed()))
        except BROKEN:
            fits = False
        if not fits:
            yield f"{named(line)}: not what it was hashed with"


def _altered_cells(stated: Mapping[str, str], now: Mapping[str, str]) -> Iterator[str]:
    """Cells of the notebook that are not those of the issue."""
    if not stated:
        yield "the record holds no hash of single cells"
        return
    for id_, hash_ in now.items():
        if id_ not in stated:
            yield f"cell {id_}: added"
        elif hash_ != stated[id_]:
            yield f"cell {id_}: altered"
    yield from (f"cell {id_}: taken out" for id_ in stated if id_ not in now)


def _contents(record: Record, altered: Sequence[str]) -> list[Finding]:
    """What the record says, read again: hashes of single lines, printed digits, formulas."""
    digits, formulas = check_digits(record), reevaluate(record)
    return [
        _faults("contents", f"as hashed: {counted(len(record.lines), 'line')}", altered),
        _faults("printed digits", digits.text(), digits.faults),
        _faults("formulas", formulas.text(), formulas.faults),
    ]


def _faults(what: str, account: str, faults: Sequence[str]) -> Finding:
    if not faults:
        return Finding(what, True, account)
    return Finding(what, False, "\n".join([f"at fault: {len(faults)}", *faults]))


def _unfold(files: Mapping[str, bytes], folder: Path) -> None:
    """Write attached files where the notebook looks for them; none may lie outside the folder."""
    for name, data in files.items():
        inside = PurePosixPath(name)
        if inside.is_absolute() or ".." in inside.parts or "\\" in name or ":" in name or not inside.parts:
            raise MismatchError(f"the attached file {name!r} does not lie beside the notebook; nothing was run")
        target = folder.joinpath(*inside.parts)
        target.parent.mkdir(parents=True, exist_ok=True)
        target.write_bytes(data)


def _differing(issued: Sequence[Line], now: Sequence[Line]) -> list[str]:
    """Lines that are not the same; the number of a line counts only through the order of all."""
    old, new = ({line.id: line for line in lines} for lines in (issued, now))
    found = []
    for id_, line in old.items():
        if id_ not in new:
            found.append(f"{named(line)}: no longer written")
        elif fields := _fields(line, new[id_]):
            found.append(f"{named(line)}: {'; '.join(fields)}")
    found += [f"{named(line)}: not in the issued record" for id_, line in new.items() if id_ not in old]
    if not found and list(old) != list(new):
        found.append("the lines stand in another order")
    return found


def _fields(line: Line, other: Line) -> list[str]:
    """What of a line differs: the printed result, else the names of the fields."""
    old, new = asdict(line), asdict(other)
    names = [name for name in old if name != "n" and old[name] != new[name]]
    if "shown" in names:
        return [f"issued {line.shown}, now {other.shown}"]
    if "value" in names:
        return [f"issued {line.value!r}, now {other.value!r}"]
    return [f"another {', '.join(names)}"] if names else []


def _software(record: Record) -> str:
    software = record.calculation.get("software") or {}
    libraries = ", ".join(f"{name} {version}" for name, version in (software.get("libraries") or {}).items())
    parts = (software.get("name"), software.get("version"))
    return f"{' '.join(filter(None, parts))} (Python {software.get('python')}, {software.get('platform')}; {libraries})"


def _compare(what: str, stated: str, obtained: str, causes: Sequence[str]) -> Finding:
    if stated == obtained:
        return Finding(what, True, f"as issued ({stated[:8]})")
    words = f"not as issued: the record states {stated[:8]}, the content gives {obtained[:8]}"
    return Finding(what, False, "\n".join([words, *causes]))


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
