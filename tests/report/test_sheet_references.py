"""Line and sheet in the PDF: every reference names the sheet on which its line stands, and no other.

Where a line stands is read back from the finished file; what must be printed is worked out here from that.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Sequence
from functools import cache
from typing import Any

import pytest
import typst

from calckit.core.record import Enclosure, Record, Source
from calckit.errors import NotebookError
from calckit.report import html, pdf, view
from calckit.report.enclosures import Page
from calckit.report.issue import produce, settings_from
from calckit.report.lines import Lines
from calckit.report.model import Block, LineView, Ref, Span, View
from calckit.report.notebook import read
from tests.report import sample
from tests.report.sheets import Sheets
from tests.template_runs import TEMPLATE

DAY = "2026-12-01"
NUMBER_ENDS = 0.8 * 72 + 26 - 4
"""Where the numbers of lines end, from the left edge: left margin, width of the column, inset."""

DRAWING = b'<svg viewBox="0 0 612 792" width="612pt" height="792pt" xmlns="http://www.w3.org/2000/svg"/>'
BOUND = [Page("H-2", n, f"H-2, page {n}: printout", 612, 792, DRAWING) for n in (1, 4)]


def enclosing(record: Record) -> Record:
    """The sample with two bound pages and sources that name them, and one that names a page that is not bound."""
    record.enclosures = [Enclosure("H-2", "hazard.pdf", "1, 4", "printout")]
    for id_, where in (("S_S", "p. 1"), ("S_1", "p. 4"), ("T_L", "p. 2")):
        record.line(id_).source = Source("H-2", where)
    return record


@cache
def made(first_sheet: int = 1, sheet_prefix: str = "") -> tuple[View, Sheets]:
    record = enclosing(sample.record(first_sheet=first_sheet, sheet_prefix=sheet_prefix))
    model = view.build(record, sample.content())
    return model, Sheets(pdf.render(model, figures=sample.figures(), attachments=[], date=DAY, enclosed=BOUND))


def lines(model: View) -> Iterator[LineView]:
    yield from (item for section in model.sections for item in section.items if item.type == "line")


def places(found: Sheets) -> dict[int, int]:
    """The sheet on which each line stands, by the numbers in the first column of the tables of lines."""
    where: dict[int, int] = {}
    for number in range(1, len(found) + 1):
        for run in found.body(number):
            if run.tags[:1] == ("TD",) and run.text.strip().isdigit() and abs(run.x1 - NUMBER_ENDS) < 1:
                where.setdefault(int(run.text), number)
    return where


def expected(refs: Sequence[Ref], where: dict[int, int], name: Any = str) -> str:
    """Lines as line/sheet, the ends of runs of three and more."""
    runs: list[list[int]] = []
    for ref in refs:
        if runs and runs[-1][-1] == ref.n - 1:
            runs[-1].append(ref.n)
        else:
            runs.append([ref.n])

    def one(n: int) -> str:
        return f"{n}/{name(where[n])}"

    return ", ".join(f"{one(run[0])}–{one(run[-1])}" if len(run) > 2 else ", ".join(map(one, run)) for run in runs)


def squeezed(text: str) -> str:
    return "".join(text.split()).replace("\u2060", "")


def untrue(every: Iterable[LineView], found: Sheets, name: Any = str) -> list[str]:
    """References of lines that the file does not print as they must be."""
    where = places(found)
    texts = {number: squeezed(found.reader.pages[number - 1].extract_text()) for number in set(where.values())}
    wrong = []
    for line in every:
        here = where[line.n]
        for word, refs in (("from", line.inputs), ("used in", line.used_in)):
            wanted = f"{word} {expected(refs, where, name)}"
            if refs and squeezed(wanted) not in texts[here]:
                wrong.append(f"line {line.n}: {wanted}")
    return wrong


def test_every_line_names_the_lines_it_rests_on_and_those_that_use_it_with_their_sheets() -> None:
    model, found = made()
    assert {line.n for line in lines(model)} <= places(found).keys()
    assert untrue(lines(model), found) == []


def test_a_wrong_sheet_is_found() -> None:
    model, found = made()
    assert len(untrue(lines(model), found, lambda sheet: sheet + 1)) > 10


def test_the_demonstration_building_stays_within_16_sheets_and_every_reference_is_true() -> None:
    notebook = read(TEMPLATE)
    report = produce(notebook, settings_from(), ("pdf",))
    found = Sheets(report.files["pdf"])
    reader: Any = found.reader
    starts = {entry.title: reader.get_destination_page_number(entry) + 1 for entry in reader.outline}
    appendix = next(sheet for title, sheet in starts.items() if title.startswith("Appendix A"))
    assert appendix <= 17, "16 sheets before the first appendix"
    known = Lines(report.record)
    every = [known.view(line) for line in report.record.lines]
    assert len(every) > 130
    assert untrue(every, found) == []


def test_lists_give_line_and_sheet() -> None:
    model, found = made()
    where = places(found)
    text = found.text().replace("\u2060", "")
    for item in model.open_items:
        if item.ref:
            assert squeezed(f"{item.owner}{item.ref.n}/{where[item.ref.n]}") in text
    for one in model.inputs:
        assert squeezed(f"{one.ref.n}/{where[one.ref.n]}") in text
    for summary in (*model.answer, *model.drawings):
        for _, cells in summary.rows:
            for cell in cells:
                if cell.ref:
                    assert squeezed(f"{cell.text} ({cell.ref.n}/{where[cell.ref.n]})") in text
    for statement in model.statements:
        if statement.refs:
            assert squeezed(statement.text + expected(statement.refs, where)) in text


def test_carried_on_names_line_and_sheet() -> None:
    model, found = made()
    where = places(found)
    text = found.text().replace("\u2060", "")
    carried = [one for section in model.sections for one in section.carried]
    assert carried
    for one in carried:
        word = "line" if len(one.to) == 1 else "lines"
        assert squeezed(f"{one.shown} to {word} {expected(one.to, where)}") in text, one.name


# --- first sheet and prefix


def test_sheets_are_counted_from_the_first_sheet_with_the_prefix() -> None:
    model, found = made(12, "S-")
    last = len(found) + 11
    for number in range(1, len(found) + 1):
        assert squeezed(f"Sheet S-{number + 11} of S-{last}") in squeezed(found.reader.pages[number - 1].extract_text())
    assert untrue(lines(model), found, lambda sheet: f"S-{sheet + 11}") == []


def test_contents_name_the_same_sheets() -> None:
    _, found = made(12, "S-")
    reader: Any = found.reader
    first = squeezed(reader.pages[0].extract_text())
    entries = [entry for entry in reader.outline if not isinstance(entry, list)]
    assert len(entries) > 12
    for entry in entries:
        sheet = reader.get_destination_page_number(entry) + 12
        assert re.search(re.escape(squeezed(entry.title)) + rf"\.{{3,}}S-{sheet}", first), entry.title


def test_a_prefix_is_data() -> None:
    hostile = "A1#strong[*_$"
    _, found = made(1, hostile)
    assert squeezed(f"Sheet {hostile}1 of {hostile}{len(found)}") in squeezed(found.reader.pages[0].extract_text())


def test_printed_html_counts_from_the_first_sheet_with_the_prefix() -> None:
    model, _ = made(12, "S-")
    page = html.render(model, figures=sample.figures(), attachments=()).decode()
    assert 'content: "Sheet " "S\\00002d" counter(page) ; }' in page
    assert "@page :first { counter-set: page 12; }" in page
    plain, _ = made()
    page = html.render(plain, figures=sample.figures(), attachments=()).decode()
    assert 'content: "Sheet " "" counter(page) " of " "" counter(pages); }' in page
    assert "counter-set" not in page


# --- enclosed pages


def test_a_source_names_the_sheet_its_page_is_bound_on() -> None:
    model, found = made()
    sheets = {
        page.number: number
        for page in BOUND
        for number in range(1, len(found) + 1)
        if f"H-2,page{page.number}ofthedocument" in squeezed(found.reader.pages[number - 1].extract_text())
    }
    assert len(sheets) == 2
    text = found.text()
    for number in sheets:
        assert text.count(squeezed(f"H-2 p. {number}, sheet {sheets[number]}")) == 2, "at the line and among the inputs"
    assert squeezed("H-2 p. 2") in text and squeezed("H-2 p. 2, sheet") not in text
    assert [line.enclosed for line in lines(model) if line.id in ("S_S", "S_1", "T_L")] == [1, 2, 0]


def test_in_html_it_is_a_link_to_the_page() -> None:
    model, _ = made()
    page = html.render(model, figures=sample.figures(), attachments=(), enclosed=BOUND).decode()
    for place in (1, 2):
        assert page.count(f'<a href="#enclosed-{place}">enclosed</a>') == 2
        assert f'<figure id="enclosed-{place}">' in page


def test_without_enclosures_no_source_names_a_sheet() -> None:
    model = view.build(sample.record(), sample.content())
    assert {line.enclosed for line in lines(model)} == {0}
    assert "#enclosed-" not in html.render(model, figures=sample.figures(), attachments=()).decode()


# --- a layout that does not settle


class Warned:
    """Stands in for a warning of the typesetter."""

    message = "document did not converge within five attempts"


def test_sheets_that_cannot_be_settled_are_not_named_and_the_cover_says_so(monkeypatch: pytest.MonkeyPatch) -> None:
    compiled, calls = typst.compile_with_warnings, []

    def unsettled(*given: Any, **named: Any) -> Any:
        calls.append(given)
        data, warnings = compiled(*given, **named)
        return data, [*warnings, Warned()] if len(calls) == 1 else warnings

    monkeypatch.setattr(pdf.typst, "compile_with_warnings", unsettled)
    model = view.build(enclosing(sample.record()), sample.content())
    arguments: Any = {"figures": sample.figures(), "attachments": [], "date": DAY, "enclosed": BOUND}
    found = Sheets(pdf.render(model, **arguments))
    assert len(calls) == 2
    where = places(found)
    assert not [line.n for line in lines(model) if f"{line.n}/{where[line.n]}" in found.text()]
    assert "H-2p.1,enclosed" in found.text()
    assert squeezed("Sheets are not named beside the lines of this copy") in squeezed(
        found.reader.pages[0].extract_text()
    )
    monkeypatch.setattr(pdf.typst, "compile_with_warnings", lambda *_, **__: (b"", [Warned()]))
    with pytest.raises(NotebookError, match="cannot be set: its layout does not settle"):
        pdf.render(model, **arguments)


@pytest.mark.parametrize("rows", [12, 21, 30])
def test_sheets_are_named_wherever_the_breaks_fall(rows: int) -> None:
    filler = tuple(Block("paragraph", (Span("text", "A row of text."),)) for _ in range(rows))
    content = list(sample.content())
    content.insert(1, ("prose", filler))
    model = view.build(sample.record(), content)
    found = Sheets(pdf.render(model, figures=sample.figures(), attachments=[], date=DAY))
    assert untrue(lines(model), found) == []
