"""The record: the machine-readable form of a calculation, and the only thing that exporters read.

Knows the fields, their order, the JSON form and the hashes. Must not know how a line is computed, printed or shown;
imports neither sympy nor pint, so that the issuing process stays light.
"""

from __future__ import annotations

import hashlib
import json
import re
from collections.abc import Iterable
from dataclasses import asdict, dataclass, field, fields
from typing import Any

SCHEMA = "calckit.record.v1"
MIME = "application/vnd.calckit.v1+json"

Value = float | str | list[float] | None

OK = "OK"
NOT_OK = "NOT OK"
NOT_CHECKED = "NOT CHECKED"

STATUSES = ("preliminary", "for check", "checked", "for construction", "superseded", "void")
WITHDRAWN = ("superseded", "void")
"""Statuses that withdraw a revision: marked at the head of every sheet, written beside the files they withdraw."""
CHECK_LEVELS = ("", "self", "other person", "other organization")

TO_BE_CONFIRMED = "to be confirmed against the standard"


@dataclass
class Source:
    """Where a value or rule comes from.

    `document` is the printed name of the document, `where` the clause, table or page, `equation` its number.
    `entry` is the document's own entry (title, author, revision, date) for a declared document, `obtained` how the
    kit's authors obtained a value of a standard, `confirmed` the register entry that confirms it.
    """

    document: str
    where: str = ""
    equation: str = ""
    obtained: str = ""
    confirmed: str | None = None
    entry: str = ""
    standard: bool = False

    def text(self) -> str:
        """The printed source, on one line.

        >>> Source("ASCE/SEI 7-16", "12.8.2.1", "12.8-7").text()
        'ASCE/SEI 7-16 12.8.2.1, eq. 12.8-7'
        """
        head = f"{self.document} {self.where}".strip()
        return f"{head}, eq. {self.equation}" if self.equation else head


@dataclass
class Operand:
    """One input of a line as it stood when the line was written: value in `unit`, printed form, content hash.

    What a check that was not made waits for and no line gave is absent: it has no value and no content. One typed in
    place has a value and no content.
    """

    value: Value
    unit: str
    shown: str | list[str]
    content: str = ""

    def is_absent(self) -> bool:
        """Whether no line gave this operand when it was asked for.

        >>> Operand(None, "", "").is_absent(), Operand(1.0, "ft", "1 ft").is_absent()
        (True, False)
        """
        return self.value is None and not self.content


@dataclass
class Candidate:
    """One of several competing values, in clause order; `line` is the line that works it out."""

    equation: str
    value: float | None
    unit: str
    shown: str
    reason: str
    governs: bool
    line: str = ""


@dataclass
class Flag:
    """Something the reader must know about a line; `open` makes it an open item of `owner`."""

    text: str
    open: bool = False
    owner: str = ""


@dataclass
class Override:
    """A value put in place of the kit's own, which stays in the line's `computed`."""

    value: Value
    shown: str
    reason: str
    by: str
    document: str = ""


@dataclass
class Margin:
    """How near the value stands to the next limit or category."""

    to: str
    value: float
    unit: str
    shown: str


@dataclass
class Line:
    """One numbered statement of the calculation.

    `value` is a number, a word, or a list (one entry for each of `rows`, roof first). `shown` is the printed result
    with its unit; for a list, the printed entries without unit. `forms` holds `[symbolic, substituted]`, the
    right-hand sides (for a check the whole relation), for each of plain, latex, mathml and typst; for a list they work
    the row `row` in full. `typeset` is the symbol alone in the same four forms. `text` is the wording of a note,
    judgment or basis; `detail` the look-up of a table value or the branch that applies; `missing` what a check that
    was not made is waiting for.
    """

    id: str
    kind: str
    symbol: str = ""
    meaning: str = ""
    value: Value = None
    unit: str = ""
    shown: str | list[str] = ""
    n: int = 0
    part: str = ""
    section: str = ""
    rows: list[str] = field(default_factory=list)
    row: str = ""
    index: str = ""
    formula: str | None = None
    inputs: dict[str, Operand] = field(default_factory=dict)
    forms: dict[str, list[str]] = field(default_factory=dict)
    typeset: dict[str, str] = field(default_factory=dict)
    source: Source | None = None
    text: str = ""
    detail: str = ""
    candidates: list[Candidate] = field(default_factory=list)
    computed: Operand | None = None
    override: Override | None = None
    verdict: str | None = None
    missing: str = ""
    margin: Margin | None = None
    flags: list[Flag] = field(default_factory=list)
    owner: str = ""
    closes: str = ""
    content: str = ""

    def hashed(self) -> dict[str, Any]:
        """What the content hash covers; number, section, printed forms and flags are left out."""
        source = asdict(self.source) if self.source else None
        if source:
            source.pop("confirmed")
        return {
            "id": self.id, "kind": self.kind, "symbol": self.symbol, "meaning": self.meaning, "value": self.value,
            "unit": self.unit, "formula": self.formula, "source": source, "verdict": self.verdict,
            "override": asdict(self.override) if self.override else None, "text": self.text, "rows": self.rows,
            "inputs": {name: operand.content for name, operand in self.inputs.items()},
        }  # fmt: skip


@dataclass
class Column:
    """One column of a table: the list line it prints."""

    symbol: str
    unit: str
    line: str
    typeset: dict[str, str] = field(default_factory=dict)


@dataclass
class Table:
    """Several list lines side by side; `shown[i][j]` is row i, column j. `head` names the row labels ("Level")."""

    id: str
    part: str
    title: str
    head: str
    columns: list[Column]
    rows: list[str]
    shown: list[list[str]]
    lines: list[str] = field(default_factory=list)


@dataclass
class Figure:
    """A drawing made from lines; `file` is its name in the figure folder, `alt` what a reader who cannot see needs."""

    id: str
    caption: str
    alt: str
    file: str
    lines: list[str] = field(default_factory=list)


@dataclass
class Enclosure:
    """Pages of a declared document, bound behind the calculation.

    `document` is the document's key, `file` the PDF as the notebook names it, `pages` the pages as typed ("1-3, 7"),
    `alt` what a reader who cannot see needs to know of them.
    """

    document: str
    file: str
    pages: str
    alt: str

    def page_numbers(self) -> list[int]:
        """The pages one by one.

        Raises ValueError unless `pages` lists pages and ranges from 1 up, each page once and rising.

        >>> Enclosure("H-2", "hazard.pdf", "1-3, 7", "printout").page_numbers()
        [1, 2, 3, 7]
        """
        spans = [re.fullmatch(r"\s*([0-9]{1,4})(?:\s*-\s*([0-9]{1,4}))?\s*", item) for item in self.pages.split(",")]
        ends = [(int(span[1]), int(span[2] or span[1])) for span in spans if span]
        numbers = [number for first, last in ends for number in range(first, last + 1)]
        rising = numbers == sorted(set(numbers)) and all(first <= last for first, last in ends)
        if len(ends) < len(spans) or not rising or numbers[0] < 1:
            raise ValueError(f"{self.pages!r} is no rising list of pages")
        return numbers


@dataclass
class OpenItem:
    """One thing to be closed before issue for construction; `group` is "open" or "confirm"."""

    id: str
    line: str
    text: str
    owner: str
    group: str


@dataclass
class SummaryRow:
    """One row of a summary: a label and, for each column, the printed text and the line it comes from."""

    label: str
    cells: list[str]
    lines: list[str]


@dataclass
class Summary:
    """A computed table for the first sheets. `role` is "answer" (directions side by side) or "drawings"."""

    role: str
    title: str
    columns: list[str]
    rows: list[SummaryRow]


@dataclass
class Record:
    """The whole calculation.

    `calculation` holds the title block, documents, revisions, parts, standards and software. `cells` lists, for each
    code cell in order, what it wrote: `["line" | "table" | "figure", id]`. `field_of_use` and `not_covered` are the
    standard's own statements of what the kit does and leaves out. `source` is the hash of all cells of the notebook,
    `cell_hashes` that of each by its id.
    """

    calculation: dict[str, Any]
    lines: list[Line] = field(default_factory=list)
    tables: list[Table] = field(default_factory=list)
    figures: list[Figure] = field(default_factory=list)
    open_items: list[OpenItem] = field(default_factory=list)
    summaries: list[Summary] = field(default_factory=list)
    cells: list[list[list[str]]] = field(default_factory=list)
    field_of_use: list[str] = field(default_factory=list)
    not_covered: list[str] = field(default_factory=list)
    enclosures: list[Enclosure] = field(default_factory=list)
    source: str = ""
    inputs: str = ""
    lines_hash: str = ""
    seals: dict[str, str] | None = None
    cell_hashes: dict[str, str] = field(default_factory=dict)

    def line(self, id_: str) -> Line:
        """The line with this id; KeyError if there is none."""
        for line in self.lines:
            if line.id == id_:
                return line
        raise KeyError(id_)

    def to_json(self) -> str:
        """The record as JSON text: the same bytes for the same calculation."""
        return json.dumps({"schema": SCHEMA, **asdict(self)}, ensure_ascii=False, indent=1, allow_nan=False) + "\n"

    def sealed(self, seals: dict[str, str] | None) -> Record:
        """The same record with these seals (None in the copy that is attached to the files)."""
        return Record(**{f.name: getattr(self, f.name) for f in fields(self)} | {"seals": seals})


def digest(data: str | bytes) -> str:
    """SHA-256 in hexadecimal."""
    return hashlib.sha256(data.encode() if isinstance(data, str) else data).hexdigest()


def canonical(thing: object) -> str:
    """JSON text with sorted keys and no blanks, for hashing."""
    return json.dumps(thing, ensure_ascii=False, sort_keys=True, separators=(",", ":"), allow_nan=False)


def lines_hash(lines: Iterable[Line]) -> str:
    """One hash over all lines, their numbers and printed forms included."""
    return digest(canonical([asdict(line) for line in lines]))


def from_json(text: str) -> Record:
    """Read a record.

    Raises ValueError if the text is not a record of this schema.
    """
    data = json.loads(text)
    if not isinstance(data, dict) or data.pop("schema", None) != SCHEMA:
        raise ValueError(f"not a record of schema {SCHEMA}")
    data["lines"] = [_line(line) for line in data["lines"]]
    data["tables"] = [Table(**{**t, "columns": [Column(**c) for c in t["columns"]]}) for t in data["tables"]]
    data["figures"] = [Figure(**f) for f in data["figures"]]
    data["open_items"] = [OpenItem(**o) for o in data["open_items"]]
    data["summaries"] = [Summary(**{**s, "rows": [SummaryRow(**r) for r in s["rows"]]}) for s in data["summaries"]]
    data["enclosures"] = [Enclosure(**e) for e in data.get("enclosures", [])]
    return Record(**data)


def _line(data: dict[str, Any]) -> Line:
    data = dict(data)
    data["inputs"] = {name: Operand(**operand) for name, operand in data["inputs"].items()}
    data["candidates"] = [Candidate(**c) for c in data["candidates"]]
    data["flags"] = [Flag(**f) for f in data["flags"]]
    for name, kind in (("source", Source), ("computed", Operand), ("override", Override), ("margin", Margin)):
        if data[name] is not None:
            data[name] = kind(**data[name])
    return Line(**data)
