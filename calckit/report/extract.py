"""What a second engineer needs to recalculate independently: inputs, criteria and the symbols asked for, nothing else.

Knows what is left out (text cells, notes, reasoning, overrides, figures, every result), and searches the finished files
for any result that slipped in by way of a title or a source. Must not know how an issued report is written.
"""

from __future__ import annotations

import base64
import binascii
import csv
import io
import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from decimal import ROUND_HALF_UP, Decimal
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

from calckit import units
from calckit.core.record import Line, Record
from calckit.errors import CommandError, Fault, InputError, MismatchError, nearest_first
from calckit.report import html, seal
from calckit.report.files import replace_together, report_name
from calckit.report.lines import source, typeset
from calckit.report.model import Typeset
from calckit.report.recheck import read, record_of
from calckit.report.view import CAUTIONS

HEADING = "Independent recalculation: inputs and criteria only"
COLUMNS = ("id", "unit", "checker_value", "tolerance", "reason")
RESULTS = ("computed", "table", "analysis")
"""Kinds of line that may be asked for."""

_LEAST = 4  # significant digits from which a numeral is held against the results
_NUMERAL = re.compile(r"(?<![\w.])-?\d+(?:\.\d+)?(?:[eE][+-]?\d+)?(?!\d)")
_GROUPED = re.compile(r"(?<![\w.,])\d{1,3}(?:,\d{3})+(?:\.\d+)?(?!\d)")
_DAY = re.compile(r"\b\d{4}-\d{2}-\d{2}\b")


@dataclass(frozen=True)
class Given:
    """An input as printed: one value, or one for each row of a list."""

    id: str
    part: str
    symbol: Typeset | None
    name: str
    meaning: str
    unit: str
    shown: str | tuple[str, ...]
    source: str


@dataclass(frozen=True)
class Levels:
    """Lists of inputs over the same rows, side by side."""

    rows: tuple[str, ...]
    columns: tuple[Given, ...]

    @property
    def printed(self) -> list[tuple[str, tuple[str, ...]]]:
        """Row label and the entry of each column."""
        return list(zip(self.rows, zip(*(column.shown for column in self.columns), strict=True), strict=True))


@dataclass(frozen=True)
class Asked:
    """A symbol whose value the second engineer is asked for; `unit` as the CSV spells it."""

    id: str
    part: str
    symbol: Typeset | None
    name: str
    meaning: str
    unit: str
    printed_unit: str


@dataclass(frozen=True)
class Extract:
    """Everything that the export prints."""

    title_block: tuple[tuple[str, str], ...]
    facts: Mapping[str, Any]
    criteria: tuple[tuple[str, str], ...]
    documents: tuple[Mapping[str, str], ...]
    givens: tuple[Given, ...]
    levels: tuple[Levels, ...]
    assumptions: tuple[Given, ...]
    answers: tuple[Given, ...]
    asked: tuple[Asked, ...]


@dataclass(frozen=True)
class Leak:
    """A result that stands in a file of the export: the line, the numeral and what stands around it."""

    line: str
    numeral: str
    where: str

    def __str__(self) -> str:
        return f"{self.line} as {self.numeral} in {self.where}"


def export(path: Path, ids: Sequence[str], folder: Path) -> list[Path]:
    """Write the HTML and the CSV for an issued file into a folder; returns their paths.

    Raises MismatchError if the file was altered or a result would be handed over, InputError for ids that cannot be
    asked for, CommandError if a target exists: it may hold a checker's values.
    """
    data = read(path)
    if seal.check(data).state == "altered":
        raise MismatchError(
            f"{path} was altered or re-saved after issue; cure: take the inputs from the file as it was issued"
        )
    record = record_of(seal.issued_bytes(data))
    found = collect(record, ids)
    facts = record.calculation
    name = f"{report_name(facts.get('number', ''), facts.get('revision', ''), facts.get('notebook', ''))}_recalculation"
    files = {f"{name}.html": render(found), f"{name}.csv": blank(found.asked)}
    leaked = leaks(record, files)
    if leaked:
        raise MismatchError(
            "the export would hand over results, and is not written: " + "; ".join(map(str, leaked)) + "; cure: take "
            "them out of the titles, sources and meanings of the notebook and issue it again"
        )
    for target in (folder / name for name in files):
        if target.exists():
            raise CommandError(
                f"{target} exists and is not overwritten, it may hold a checker's values; "
                "cure: choose a folder with --to"
            )
    return replace_together(folder, files)


def collect(record: Record, ids: Sequence[str]) -> Extract:
    """What is handed over, and what is asked for.

    Raises InputError naming every id that is no line, or no result.

    >>> from tests.report.sample import record
    >>> found = collect(record(), ["X.V"])
    >>> [one.id for one in found.asked], any(given.id == "X.V" for given in found.givens)
    (['X.V'], False)
    """
    facts = record.calculation
    lines = {line.id: line for line in record.lines}
    faults = [fault for id_ in ids if (fault := _fault(id_, lines))]
    if faults or not ids:
        raise InputError("asked for", faults or [Fault("--ask", "the ids of the results wanted", "none")])
    chosen = [lines[id_] for id_ in dict.fromkeys(ids)]
    numbers = [line for line in record.lines if line.kind == "given"]
    return Extract(
        title_block=tuple(_title_block(facts)),
        facts=facts,
        criteria=tuple(_criteria(facts)),
        documents=tuple(facts["documents"]),
        givens=tuple(_given(line) for line in numbers if not line.rows),
        levels=tuple(_levels(numbers)),
        assumptions=tuple(_given(line) for line in record.lines if line.kind == "assumption"),
        answers=tuple(_given(line) for line in record.lines if line.kind == "judgment" and line.symbol),
        asked=tuple(one for line in chosen for one in _asked(line)),
    )


def row_id(line: Line, row: str = "") -> str:
    """How the CSV names a result, or one entry of a list.

    >>> row_id(Line("X.F_x", "computed"), "Roof")
    'X.F_x[Roof]'
    """
    return f"{line.id}[{row}]" if row else line.id


def blank(asked: Sequence[Asked]) -> bytes:
    """The CSV to be filled: `id,unit,checker_value,tolerance,reason`, the last three blank."""
    text = io.StringIO()
    writer = csv.writer(text)
    writer.writerow(COLUMNS)
    writer.writerows((one.id, one.unit, "", "", "") for one in asked)
    return text.getvalue().encode()


def render(found: Extract) -> bytes:
    """The sheet as UTF-8 HTML, without a script and without anything to fetch."""
    template = html.template("extract.html.j2")
    return template.render(found=found, heading=HEADING, cautions=CAUTIONS).encode()


def _fault(id_: str, lines: Mapping[str, Line]) -> Fault | None:
    line = lines.get(id_)
    if line is None:
        near = ", ".join(nearest_first(id_, (name for name, one in lines.items() if one.kind in RESULTS))[:4])
        return Fault(id_, "the id of a line", "no such line", f"did you mean {near}")
    if line.kind not in RESULTS or line.value is None:
        given = "an input" if _is_input(line) else f"a {line.kind}"
        return Fault(id_, "a result: a computed line, a table value or an analysis", given, meaning=line.meaning)
    return None


def _title_block(facts: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    for label, name in (
        ("Project", "project"), ("Location", "location"), ("Calculation number", "number"), ("Revision", "revision"),
        ("Date", "date"), ("Status", "status"), ("Firm", "firm"),
    ):  # fmt: skip
        yield label, facts[name] or "not stated"


def _criteria(facts: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    yield "Building code", facts["building_code"] or "not stated"
    yield "Jurisdiction", facts["jurisdiction"] or "not stated"
    yield "Local amendments", "; ".join(facts["amendments"]) or "none stated"
    for standard in facts["standards"]:
        yield "Standard", standard["name"]
        numbers = standard["supplements"]
        text = "not stated" if numbers is None else ", ".join(map(str, numbers)) or "none"
        said_by = facts["supplements_source"]
        yield "Supplements in force", f"{text} ({said_by})" if said_by and numbers is not None else text
    yield "Units", {"US": "US customary", "SI": "SI"}[facts["units"]]
    yield "Parts", "; ".join(f"{part['id']}: {part['title']}" for part in facts["parts"]) or "none"


def _given(line: Line) -> Given:
    shown = line.shown if isinstance(line.shown, str) else tuple(line.shown)
    stated = source(line) if line.source or line.kind != "judgment" else ""
    return Given(
        line.id, line.part, typeset(line.typeset), line.symbol, line.meaning, units.shown(line.unit), shown, stated
    )


def _levels(lines: Sequence[Line]) -> Iterator[Levels]:
    groups: dict[tuple[str, ...], list[Line]] = {}
    for line in lines:
        if line.rows:
            groups.setdefault(tuple(line.rows), []).append(line)
    for rows, columns in groups.items():
        yield Levels(rows, tuple(_given(line) for line in columns))


def _asked(line: Line) -> Iterator[Asked]:
    for row in line.rows or ("",):
        yield Asked(
            row_id(line, row), line.part, typeset(line.typeset), line.symbol,
            f"{line.meaning}, {row}" if row else line.meaning, line.unit, units.shown(line.unit),
        )  # fmt: skip


# --- no result may stand in the export


def leaks(record: Record, files: Mapping[str, bytes]) -> list[Leak]:
    """Every result found in the text or metadata of the files, by name, or in what is packed into them.

    A numeral of four or more significant digits is a result if rounding a result half up to as many digits gives it
    and no input, edition or date has the same value.

    >>> from tests.report.sample import record
    >>> [leak.line for leak in leaks(record(), {"a.csv": b"V,kip,0.03"})]
    []
    """
    inputs = set(_input_numbers(record))
    results = list(_results(record))
    found: dict[tuple[str, ...], Leak] = {}
    for name, data in files.items():
        for place, text in ((f"the name {name}", name), *_texts(name, data)):
            for numeral in _numerals(_DAY.sub(" ", text)):
                number = abs(Decimal(numeral))
                digits = _significant(numeral)
                if digits < _LEAST or number in inputs:
                    continue
                for line, value in results:
                    if _rounded(value, digits) == number:
                        found.setdefault(
                            (line, numeral, place), Leak(line, numeral, f"{place}: {_around(text, numeral)}")
                        )
    return list(found.values())


def _is_input(line: Line) -> bool:
    return line.kind in ("given", "assumption", "judgment")


def _input_numbers(record: Record) -> Iterator[Decimal]:
    facts = record.calculation
    texts = [facts["building_code"], *facts["amendments"], facts["standard"]]
    texts += [standard["name"] for standard in facts["standards"]]
    for line in record.lines:
        if _is_input(line):
            texts += [line.shown] if isinstance(line.shown, str) else line.shown
            yield from map(abs, _values(line.value))
    for text in texts:
        yield from (abs(Decimal(numeral)) for numeral in _numerals(text))


def _results(record: Record) -> Iterator[tuple[str, Decimal]]:
    """Every number that the calculation worked out, those not in force among them, with its line."""
    for line in record.lines:
        if _is_input(line):
            continue
        numbers = [*_values(line.value), *_values(line.computed.value if line.computed else None)]
        numbers += [number for candidate in line.candidates for number in _values(candidate.value)]
        numbers += _values(line.margin.value if line.margin else None)
        for number in dict.fromkeys(numbers):
            yield line.id, abs(number)


def _values(value: object) -> list[Decimal]:
    if isinstance(value, list):
        return [number for entry in value for number in _values(entry)]
    return [Decimal(repr(value))] if isinstance(value, int | float) else []


def _numerals(text: str) -> list[str]:
    return _NUMERAL.findall(text) + [found.replace(",", "") for found in _GROUPED.findall(text)]


def _significant(numeral: str) -> int:
    mantissa = re.split("[eE]", numeral)[0]
    return len(re.sub(r"[-.]", "", mantissa).lstrip("0"))


def _rounded(value: Decimal, digits: int) -> Decimal:
    if not value:
        return value
    return value.quantize(Decimal(1).scaleb(value.adjusted() - digits + 1), ROUND_HALF_UP)


def _around(text: str, numeral: str) -> str:
    words = " ".join(text.split())
    at = max(words.find(numeral), 0)
    return repr(words[max(at - 30, 0) : at + len(numeral) + 20])


def _texts(name: str, data: bytes) -> Iterator[tuple[str, str]]:
    """What a file says, as (place, text): the words and attributes of a page, and the files inside it."""
    text = data.decode("utf-8", errors="replace")
    if b"<html" not in data[:4096].lower():
        yield name, text
        return
    page = _Page()
    page.feed(text)
    yield from ((f"{name}, {place}", words) for place, words in page.texts)
    for inner, packed in page.packed:
        yield from _texts(f"{inner} inside {name}", packed)


class _Page(HTMLParser):
    """The texts of a page: words, comments, attributes; style sheets hold lengths only and are passed over."""

    def __init__(self) -> None:
        super().__init__()
        self.texts: list[tuple[str, str]] = []
        self.packed: list[tuple[str, bytes]] = []
        self._tags: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Keep the attributes, and unpack what a data: address holds."""
        self._tags.append(tag)
        for name, value in attrs:
            if value and value.startswith("data:"):
                head, _, body = value.partition(",")
                coded = head.endswith(";base64")
                try:
                    self.packed.append((head, base64.b64decode(body, validate=True) if coded else body.encode()))
                except binascii.Error:
                    self.texts.append((name, body))
            elif value:
                self.texts.append((f"the attribute {name}", value))

    def handle_endtag(self, tag: str) -> None:
        """Leave the element."""
        while self._tags and self._tags.pop() != tag:
            pass

    def handle_data(self, data: str) -> None:
        """Keep words outside a style sheet."""
        if "style" not in self._tags[-1:] and data.strip():
            self.texts.append((f"<{self._tags[-1] if self._tags else ''}>", data))

    def handle_comment(self, data: str) -> None:
        """Keep a comment."""
        self.texts.append(("a comment", data))
