"""The building template issued with an override, an assumption, a judgment, a default and checks of its own.

Knows how it is made and how its two files are read. The additions are invented.
"""

from __future__ import annotations

import json
import re
from collections.abc import Callable
from functools import cache
from html import unescape
from pathlib import Path
from typing import Any

from calckit.core.record import Line, Record
from calckit.report import notebook
from calckit.report.issue import Report, produce
from calckit.report.run import Settings
from tests.report.sheets import Sheets
from tests.template_runs import TEMPLATE

BEFORE = """
calc.revise("A", date="2026-12-01", reason="first issue for comment", by="J. Doe", sheets="all")
calc.document("M-1", title="Anchor data", author="Supplier", revision="3", date="2026-10-07")
x.override("T_a", "0.95 s", reason="measured on a like frame", by="J. Doe", document="B-1 section 7")
calc.assume("V_anchor", "300 kip", meaning="shear that the anchors carry", basis="catalog, not yet ordered")
"""
AFTER = """
x.line("M_r", "V * 2/3 * h_n", unit="kip*ft", meaning="rough overturning moment")
x.check("V", "<=", "V_anchor", title="Anchors of the brace line", source="M-1 p. 2")
x.check("V", "<=", "V_anchor/2", title="Half of the anchors", source="M-1 p. 2")
x.judge("J-1", "The stair is separated from the frame.", basis="joint of 2 in, S-201 detail 7")
"""
SET = {
    "prepared_by": "J. Doe", "checked_by": "R. Roe", "firm": "Own Firm", "jurisdiction": "Demonstration County",
    "h_n": "81 ft",
}  # fmt: skip


@cache
def report() -> Report:
    """The report, made once."""
    data: dict[str, Any] = json.loads(TEMPLATE.read_text(encoding="utf-8"))
    for after, id_, text in (("systems", "own-before", BEFORE), ("notes", "own-after", AFTER)):
        place = [cell["id"] for cell in data["cells"]].index(after) + 1
        cell = {"id": id_, "cell_type": "code", "metadata": {}, "source": text.strip(), "outputs": []}
        data["cells"].insert(place, {**cell, "execution_count": None})
    (cell,) = [cell for cell in data["cells"] if cell["id"] == "approximate"]
    cell["source"] = [text for text in cell["source"] if not text.startswith('y.given("T_a_method"')]
    return produce(notebook.parse(json.dumps(data), TEMPLATE.stem, Path()), Settings(set=SET))


def record() -> Record:
    """The record of the report."""
    return report().record


@cache
def sheets() -> Sheets:
    """The PDF taken apart."""
    return Sheets(report().files["pdf"])


@cache
def page() -> str:
    """The source of the HTML file without its style sheet and attachments."""
    text = report().files["html"].decode()
    text = re.sub(r"<style>.*?</style>", "", text, flags=re.DOTALL)
    return re.sub(r'href="data:[^"]*"', 'href=""', text)


def squeezed(text: str) -> str:
    """Without blanks and breaks, so that it does not matter where a row was broken."""
    return "".join(text.split())


@cache
def texts() -> tuple[str, str]:
    """The words of both files, without blanks."""
    words = unescape(re.sub(r"<[^>]*>", " ", page()))
    return squeezed(sheets().text()), squeezed(words)


@cache
def sheet_texts() -> tuple[str, ...]:
    """The words of each sheet, without blanks."""
    return tuple(squeezed(sheet.extract_text()) for sheet in sheets().reader.pages)


@cache
def alternatives() -> frozenset[str]:
    """The alternative texts of the formulas in the PDF, without blanks."""
    return frozenset(squeezed(str(element["/Alt"])) for element in sheets().elements("Formula") if "/Alt" in element)


def lacking(*words: str) -> list[str]:
    """Of these words, those that do not stand in both files."""
    return [word for word in words if not all(squeezed(word) in text for text in texts())]


def lines(wanted: Callable[[Line], object]) -> list[Line]:
    """Lines of the record; at least one."""
    found = [line for line in record().lines if wanted(line)]
    assert found
    return found


def of_kind(*kinds: str) -> list[Line]:
    """Lines of these kinds."""
    return lines(lambda line: line.kind in kinds)


def row_of(line: Line) -> str:
    """The source of a line's row in the HTML file."""
    (found,) = re.findall(rf'<tr id="line-{line.n}".*?(?=<tr id="line-|</section>)', page(), flags=re.DOTALL)
    return str(found)


def everywhere(*words: str) -> list[tuple[int, str]]:
    """Of these words, those missing on a sheet."""
    return [(n, word) for n, text in enumerate(sheet_texts(), 1) for word in words if squeezed(word) not in text[:420]]


def formulas(row: str) -> str:
    """The formulas of a row as a reader without eyesight is told them."""
    return squeezed(unescape("".join(re.findall(r'(?:alttext|aria-label)="([^"]*)"', row))))


def plain(row: str) -> str:
    """The words of a row, without blanks."""
    return squeezed(unescape(re.sub("<[^>]*>", " ", row)))


def section(title: str, until: str) -> str:
    """The words of the PDF between two headings, the contents left out."""
    text = "".join(sheet_texts()[1:])
    return text[text.index(squeezed(title)) : text.index(squeezed(until))]
