"""What travels inside an issued report: the source notebook, the settings, the files it read and the record.

Knows their names, and how to put them together and take them apart again. Must not know how a report is written.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from urllib.parse import quote, unquote

from calckit.core.record import Record, canonical, digest
from calckit.errors import MismatchError

RECORD = "record.json"
SETTINGS = "settings.json"
CHECK_LOG = "check_log.csv"
_FILE = "file-"
_GIVEN = ("given", "assumption", "judgment")
_MEDIA = {".csv": "text/csv", ".tsv": "text/tab-separated-values", ".txt": "text/plain", ".json": "application/json"}


@dataclass(frozen=True)
class Attachment:
    """One file inside a report.

    `name` is the file name shown to the reader, `description` what it is, `relationship` how a PDF calls its
    relation to the document ("source", "data", "alternative" or "supplement").

    >>> Attachment("settings.json", b"{}", "application/json", "Settings of the issue", "data").name
    'settings.json'
    """

    name: str
    data: bytes
    media_type: str
    description: str
    relationship: str


@dataclass(frozen=True)
class Parcel:
    """Everything that is attached: `files` maps the name used in the notebook to the content, `check_log` is None in an
    issue without one."""

    stem: str
    notebook: bytes
    settings: bytes
    files: Mapping[str, bytes]
    record: bytes
    check_log: bytes | None = None

    def pack(self) -> list[Attachment]:
        """The attachments, in the order of the reader's interest.

        >>> [a.name for a in Parcel("demo", b"{}", b"{}", {"data/w.csv": b""}, b"{}").pack()]
        ['demo.ipynb', 'settings.json', 'file-data%2Fw.csv', 'record.json']
        """
        files = [
            Attachment(_FILE + quote(name, safe=" "), data, _media(name), f"File read by the notebook: {name}", "data")
            for name, data in sorted(self.files.items())
        ]
        if self.check_log is not None:
            files.append(Attachment(CHECK_LOG, self.check_log, "text/csv", "Check log: marks and comments", "data"))
        return [
            Attachment(
                f"{self.stem}.ipynb", self.notebook, "application/x-ipynb+json", "Source notebook, no outputs", "source"
            ),
            Attachment(SETTINGS, self.settings, "application/json", "Settings of this issue", "data"),
            *files,
            Attachment(RECORD, self.record, "application/json", "Record of the calculation", "data"),
        ]


def unpack(attached: Mapping[str, bytes]) -> Parcel:
    """Take attachments apart again.

    Raises MismatchError naming what is missing.

    >>> parcel = Parcel("demo", b"{}", b"{}", {"data/w.csv": b"1"}, b"{}")
    >>> unpack({a.name: a.data for a in parcel.pack()}) == parcel
    True
    """
    notebooks = [name for name in attached if name.endswith(".ipynb") and not name.startswith(_FILE)]
    missing = [name for name in (SETTINGS, RECORD) if name not in attached]
    if len(notebooks) != 1:
        missing.append("one source notebook")
    if missing:
        raise MismatchError(f"the attachments of an issued report are not there: {', '.join(missing)}")
    files = {unquote(name.removeprefix(_FILE)): data for name, data in attached.items() if name.startswith(_FILE)}
    stem = notebooks[0].removesuffix(".ipynb")
    return Parcel(
        stem, attached[notebooks[0]], attached[SETTINGS], files, attached[RECORD], attached.get(CHECK_LOG)
    )


def inputs_hash(record: Record, settings: bytes, files: Mapping[str, bytes]) -> str:
    """SHA-256 of all givens, assumptions and answers in force, the settings and the files."""
    return digest(
        canonical(
            {
                "givens": [[line.id, line.value, line.unit] for line in record.lines if line.kind in _GIVEN],
                "settings": digest(settings),
                "files": {name: digest(data) for name, data in files.items()},
            }
        )
    )


def _media(name: str) -> str:
    ending = name[name.rfind(".") :].lower() if "." in name else ""
    return _MEDIA.get(ending, "application/octet-stream")
