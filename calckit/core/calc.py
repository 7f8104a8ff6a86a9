"""A calculation and its parts.

Knows the title block, documents, revisions and parts. Must not know how lines are made or reported.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from datetime import date as calendar_date
from pathlib import Path
from typing import Any

from calckit.core import settings
from calckit.core.book import Book, _shell
from calckit.core.outputs import Outputs
from calckit.core.record import CHECK_LEVELS, STATUSES, Enclosure
from calckit.core.sources import Document, Sources
from calckit.core.standard import edition
from calckit.core.symbol import Symbol
from calckit.core.writer import Writer
from calckit.errors import DuplicateError, Fault, InputError, UnknownNameError

PRELIMINARY_FIELDS = ("Purpose", "Engineer of record", "License number", "Date")
"""What a preliminary issue prints in place of the clear space for the seal."""

_LISTS = ("amendments", "preliminary_fields")
_current: list[Calc] = []


class Part(Writer):
    """A named scope with its own symbols (a direction, a component).

    >>> Calc(project="Demo", number="D-1").part("Y", "North-south").title
    'North-south'
    """


class Calc(Writer):
    """One calculation package.

    Arguments are the fields of the title block; `standard` names the standard in one edition, `units` the unit set
    ("US" or "SI") in which empirical formulas are worked and results are shown, `supplements` those in force (None:
    not answered; () for none), with `supplements_source`. `first_sheet` and `sheet_prefix` number the sheets ("Sheet
    S-12 of S-30"). A preliminary issue prints `preliminary_fields` under `preliminary_caption` in place of the clear
    space (with () it keeps the space); above the space stands `seal_caption`. `open_items_accepted` is the reason why
    an issue for construction may leave items open; the cover prints it. `check_level` (self, other person, other
    organization) and `check_method` (line by line, alternative method, independent recalculation, comparison with a
    proven case, or in other words) stay blank until the checker states them. Raises InputError naming every bad field
    at once.

    >>> calc = Calc(project="Harbor Street Clinic", number="C-101", standard="ASCE 7-16")
    >>> calc.document("S-201", title="Framing elevations", revision="2", date="2026-11-14")
    >>> calc.revise("B", date="2026-12-08", reason="story weights", by="originator", sheets="all")
    >>> x = calc.part("X", "East-west direction")
    >>> x is calc.part("X", "East-west direction"), current() is calc
    (True, True)
    """

    def __init__(
        self,
        project: str,
        number: str = "",
        *,
        location: str = "",
        subject: str = "",
        building_code: str = "",
        amendments: Sequence[str] = (),
        jurisdiction: str = "",
        firm: str = "",
        revision: str = "",
        date: str = "",
        status: str = "preliminary",
        purpose: str = "",
        prepared_by: str = "",
        checked_by: str = "",
        check_level: str = "",
        check_method: str = "",
        units: str = "US",
        paper: str = "Letter",
        standard: str = "ASCE 7-16",
        supplements: Sequence[int] | None = None,
        supplements_source: str = "",
        first_sheet: int = 1,
        sheet_prefix: str = "",
        seal_caption: str = "Seal and signature",
        preliminary_caption: str = "Preliminary issue, not for construction",
        preliminary_fields: Sequence[str] = PRELIMINARY_FIELDS,
        open_items_accepted: str = "",
    ) -> None:
        fields = {name: value for name, value in locals().items() if name != "self" and not name.startswith("__")}
        self.superseded = False
        super().__init__(self, "", "calculation")
        run = settings.current()
        self.title_block = _title_block(fields, run)
        self.lines = Book(run)
        self.outputs = Outputs(self.lines)
        self.standard = edition(self.title_block["standard"])
        self.sources = Sources(self.standard)
        self.parts: dict[str, Part] = {}
        self.own_symbols: dict[str, Symbol] = {}
        self.overrides: dict[str, tuple[Any, str, str, str]] = {}
        self.revisions: list[dict[str, str]] = []
        self.files: dict[str, bytes] = {}
        self.figure_data: dict[str, bytes] = {}
        self.enclosures: dict[str, Enclosure] = {}
        if run.confirmed:
            self.sources.read_register(run.confirmed)
        if _shell() is not None:
            for other in _current:
                other.superseded = True
                other.outputs.start_afresh()
        _current[:] = [self]
        self.lines.watch(self.outputs.settle)

    def document(self, key: str, *, title: str, author: str = "", revision: str = "", date: str = "") -> None:
        """Declare a document; sources name it by its key."""
        self.sources.declare(Document(key, title, author, revision, date))

    def enclose(self, document: str, file: str, *, pages: str, alt: str) -> None:
        """Bind pages of a declared document behind the calculation, each on a sheet of its own.

        Arguments: `document`, its key; `file`, a PDF beside the notebook, which travels with the report; `pages`, those
        to bind, such as "1-3, 7"; `alt`, what a reader who cannot see needs to know of them. Raises UnknownNameError
        for a key that is not declared, InputError naming everything else that is wrong; whether the file has these
        pages is found when the report is written.

        >>> Calc(project="Demo", number="D-1").enclose("H-2", "hazard.pdf", pages="1-3", alt="hazard printout")
        Traceback (most recent call last):
        calckit.errors.UnknownNameError: enclose: document 'H-2' is not known; known: none yet; cure: declare it: ...
        """
        clean = self.book.settings.clean
        if document not in self.sources.documents:
            cure = 'declare it: calc.document("KEY", title=...)'
            raise UnknownNameError("enclose: document", document, self.sources.documents, cure)
        if clean and document in self.enclosures:
            raise DuplicateError(f"document {document!r} is enclosed twice; name all its pages in one call")
        enclosure = Enclosure(document, Path(file).as_posix(), str(pages), alt)
        faults = [] if alt.strip() else [Fault("alt", "words for a reader who cannot see the pages", "blank")]
        try:
            enclosure.page_numbers()
        except ValueError:
            faults.append(Fault("pages", "pages and ranges, each page once and rising", repr(pages), 'as in "1-3, 7"'))
        try:
            if b"%PDF-" not in self.file(file)[:1024]:
                faults.append(Fault("file", "a PDF", f"{file}, which is none", "print the document to PDF"))
        except InputError as error:
            faults += error.faults
        if faults:
            raise InputError(f"enclose {document}", faults)
        self.enclosures[document] = enclosure

    def dependency(self, name: str) -> dict[str, Any]:
        """The lines that a result rests on, as plain data for `plots.dependency`.

        `name` is a symbol or a line id. Returns `lines` (number, symbol or title, printed value, by line id and in
        document order), `edges` (id of an input, id of the line that uses it) and `result` (the id). Numbers are those
        of the calculation as it stands. Raises UnknownNameError.

        >>> calc = Calc(project="Demo", number="D-1")
        >>> _ = calc.assume("b", "30 ft", basis="demo", meaning="length of the wall")
        >>> _ = calc.line("A", "b*b", unit="ft^2", meaning="area")
        >>> calc.dependency("A")
        {'lines': {'b': (1, 'b', '30 ft'), 'A': (2, 'A', '900.0 ft²')}, 'edges': [('b', 'A')], 'result': 'A'}
        """
        from calckit.core.dependency import dependency

        return dependency(self.book, self[name].id)

    def revise(self, revision: str, *, date: str, reason: str, by: str, sheets: str = "") -> None:
        """A row of the revision table; every revision but the first needs one before it is issued.

        `reason` says what changed and why; with `sheets` blank the report of an issue that names the former one
        (`--former`) says which sheets changed. Raises InputError naming every blank field, DuplicateError for a second
        row of one revision.

        >>> Calc(project="Demo", number="D-1").revise("B", date="2026-12-08", reason=" ", by="originator")
        Traceback (most recent call last):
        calckit.errors.InputError: revise: revise reason: needed text; given blank
        """
        row = {"revision": revision, "date": date, "reason": reason, "by": by, "sheets": sheets}
        faults = [
            Fault(f"revise {name}", "text", "blank")
            for name in ("revision", "date", "reason", "by")
            if not row[name].strip()
        ]
        if faults:
            raise InputError("revise", faults)
        if row not in self.revisions:
            if any(other["revision"] == revision for other in self.revisions):
                raise DuplicateError(f"revision {revision!r} is in the revision table already, with another row")
            self.revisions.append(row)

    def part(self, id_: str, title: str = "") -> Part:
        """The part with this id, made at the first call."""
        if self.superseded:
            _ = self.book
        if not re.fullmatch(r"[A-Za-z]\w*", id_):
            raise InputError("part", [Fault(id_, "an id of letters and digits, starting with a letter", repr(id_))])
        if id_ in self.standard.symbols:
            raise InputError(
                "part", [Fault(id_, "an id that is no symbol of the standard", repr(id_), "choose another id")]
            )
        if id_ not in self.parts:
            self.parts[id_] = Part(self, id_, title or id_)
        return self.parts[id_]


def current() -> Calc | None:
    """The calculation made last in this process.

    >>> calc = Calc(project="Demo", number="D-1")
    >>> current() is calc
    True
    """
    return _current[0] if _current else None


def _title_block(fields: dict[str, Any], run: settings.Settings) -> dict[str, Any]:
    block = dict(fields)
    for name in _LISTS:
        block[name] = [block[name]] if isinstance(block[name], str) else list(block[name])
    for name in block:
        found = run.value(name)
        if found:
            block[name] = _typed_field(name, found[1], block[name], run)
    block["status"] = run.status or block["status"]
    block["date"] = run.date or block["date"]
    faults = [fault for name in block if (fault := _field_fault(name, block[name]))]
    if faults:
        raise InputError("Calc", faults)
    if block["supplements"] is not None:
        block["supplements"] = sorted(block["supplements"])
    return block


def _typed_field(name: str, text: str, own: Any, run: settings.Settings) -> Any:
    value: Any = text
    if name in _LISTS:
        value = [part.strip() for part in text.split(";") if part.strip()]
    if name == "first_sheet" and text.strip().isdecimal():
        value = int(text)
    if name == "supplements":
        words = [part.strip() for part in text.split(",") if part.strip()]
        numbers = words != ["none"]
        value = [int(word) if word.isdigit() else word for word in words] if numbers else []
    fault = _field_fault(name, value)
    if fault is None and name == "standard":
        try:
            edition(value)
        except UnknownNameError as error:
            fault = Fault("standard", "an edition the kit offers", value, str(error))
    if fault:
        run.invalid[name] = str(fault)
        return own
    return value


def _field_fault(name: str, value: Any) -> Fault | None:
    choices = {
        "status": STATUSES, "units": ("US", "SI"), "paper": ("Letter", "A4"), "check_level": CHECK_LEVELS
    }.get(name)  # fmt: skip
    if choices and value not in choices:
        return Fault(name, f"one of {', '.join(filter(None, choices))}", repr(value))
    if name == "project" and not str(value).strip():
        return Fault(name, "the project's name", "blank")
    if name == "date" and value:
        try:
            calendar_date.fromisoformat(value)
        except (TypeError, ValueError):
            return Fault(name, "a day as YYYY-MM-DD", repr(value))
    if name == "supplements" and value is not None:
        if not all(isinstance(number, int) for number in value):
            return Fault(name, "numbers of the supplements in force, or none", repr(value), 'write "1,3" or "none"')
        return None
    if name == "first_sheet":
        good = isinstance(value, int) and not isinstance(value, bool) and value >= 1
        return None if good else Fault(name, "a whole number from 1 up", repr(value))
    texts = value if name in _LISTS else [value]
    if value is not None and not all(isinstance(text, str) for text in texts):
        return Fault(name, "text", repr(value))
    if name == "preliminary_fields" and not all(text.strip() for text in value):
        return Fault(name, "a name for every field, or none", repr(value))
    return None
