"""Documents and the sources that point into them, and what confirms a clause or table of a standard.

Knows declared documents, the standard's own names, and the register of confirmations. Must not know lines.
"""

from __future__ import annotations

import csv
import io
from dataclasses import asdict, dataclass, field

from calckit.core.record import Source
from calckit.core.standard import Standard
from calckit.errors import DuplicateError, Fault, InputError, UnknownNameError

REGISTER = ("standard", "edition", "table_or_clause", "document", "by", "date")
"""Columns of the office register."""


@dataclass(frozen=True)
class Document:
    """A document declared once, by the key under which sources name it."""

    key: str
    title: str
    author: str = ""
    revision: str = ""
    date: str = ""

    def entry(self) -> str:
        """The document's own entry, as the reference list prints it."""
        marks = (self.author, f"revision {self.revision}" if self.revision else "", self.date)
        return ", ".join(part for part in (self.title, *marks) if part)


@dataclass
class Sources:
    """The documents of a calculation and its standard."""

    standard: Standard
    documents: dict[str, Document] = field(default_factory=dict)
    confirmed: dict[str, str] = field(default_factory=dict)

    def declare(self, document: Document) -> None:
        """Add a document; a second one under the same key must be the same."""
        if document.key in self.documents and self.documents[document.key] != document:
            raise DuplicateError(f"document {document.key!r} is declared twice with different entries")
        faults = [
            Fault(name, "text", "blank")
            for name, text in asdict(document).items()
            if name in ("key", "title") and not text.strip()
        ]
        if faults:
            raise InputError("document", faults)
        self.documents[document.key] = document

    def read(self, text: str, what: str) -> Source:
        """A source: a declared key (the longest that matches), a blank, a free place.

        Raises UnknownNameError, which lists the known keys; InputError if it is blank.
        """
        text = " ".join(text.split())
        if not text:
            cure = 'name a document, as in source="H-2 p. 4", or use assume(...)'
            raise InputError(what, [Fault("source", "a declared document and a place in it", "nothing", cure)])
        keys = [*self.documents, self.standard.edition]
        matching = [key for key in keys if text == key or text.startswith(key + " ")]
        if not matching:
            cure = 'declare it: calc.document("KEY", title=...)'
            raise UnknownNameError(f"{what}: document in source", text, keys, cure)
        key = max(matching, key=len)
        where = text[len(key) :].strip()
        if key == self.standard.edition:
            return self.standard.source(where)
        return Source(key, where, entry=self.documents[key].entry())

    def confirm(self, what: str, document: str, by: str, date: str) -> None:
        """Note that a table or clause was looked up in the printed standard."""
        given = {"table or clause": what, "document": document, "by": by, "date": date}
        faults = [Fault(f"confirm {name}", "text", "blank") for name, text in given.items() if not text.strip()]
        if faults:
            raise InputError("confirm", faults)
        self.confirmed[what] = f"confirmed in {document} by {by}, {date}"

    def read_register(self, text: str) -> None:
        """Take the entries of the office register that belong to this standard and edition."""
        rows = csv.DictReader(io.StringIO(text))
        if tuple(rows.fieldnames or ()) != REGISTER:
            given = ",".join(rows.fieldnames or ())
            raise InputError("register", [Fault("header", ",".join(REGISTER), given or "nothing")])
        for row in rows:
            if row["standard"] == self.standard.name and row["edition"] == self.standard.edition:
                self.confirm(row["table_or_clause"], row["document"], row["by"], row["date"])

    def confirmation(self, source: Source) -> str | None:
        """The register entry for a source of the standard, None if there is none."""
        return self.confirmed.get(source.where) if source.standard else None

    def entries(self) -> list[dict[str, str]]:
        """All documents as plain data."""
        return [asdict(document) for document in self.documents.values()]
