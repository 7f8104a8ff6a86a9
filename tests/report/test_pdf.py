"""The PDF report, held against what a sheet must be by reading the file back."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import replace
from functools import cache
from typing import Any

import pytest

from calckit.core.record import Record
from calckit.errors import NotebookError
from calckit.report import pdf, seal, view
from calckit.report.attachments import Attachment
from calckit.report.model import Block, Content, Span, View
from tests.report import sample
from tests.report.sheets import Sheets

DAY = "2026-12-01"
MARGIN = 36.0  # half an inch
ATTACHED = [
    Attachment("library.ipynb", b'{"cells": []}', "application/x-ipynb+json", "Source notebook", "source"),
    Attachment("file-weights%2Froof.csv", "w;Δ\n1;2\n".encode(), "text/csv", "File read by the notebook", "data"),
]

Change = Callable[[Record], None]


def rendered(change: Change | None = None, content: Content | None = None, **fields: Any) -> bytes:
    record = sample.record(**fields)
    if change:
        change(record)
    return pdf.render(
        view.build(record, content or sample.content()), figures=sample.figures(), attachments=ATTACHED, date=DAY
    )


@cache
def issued() -> bytes:
    return rendered()


@cache
def sheets() -> Sheets:
    return Sheets(issued())


def bookmarks(found: Sheets) -> list[tuple[str, int]]:
    """Titles of the bookmarks and the sheets they lead to."""
    reader: Any = found.reader
    return [(" ".join(entry.title.split()), reader.get_destination_page_number(entry) + 1) for entry in reader.outline]


def extreme(record: Record) -> None:
    """Texts longer than any column, row or sheet."""
    record.line("N-hostile").text = "word " * 2500
    record.line("site_class").shown = "unbreakable_" * 12
    record.line("X.T_a").source.where = "12.8.2.1" * 15  # type: ignore[union-attr]
    record.line("X.V").forms["typst"] = ["W^(k_a^2)", "frac(1, 2)^(frac(3_(4_5), 2))"]
    record.line("J-snow").detail = "x" * 400
    record.open_items[2].text = "to be settled " * 400
    record.calculation["documents"][1]["title"] = "T" * 300
    table = record.tables[1]
    table.columns *= 4
    table.shown = [row * 4 for row in table.shown]
    row = {"revision": "A", "date": "2026-11-01", "reason": "because " * 14, "by": "J. Doe", "sheets": "1-9"}
    record.calculation["revisions"] = [row] * 20


@cache
def extreme_sheets() -> Sheets:
    name = "Hubert-" * 14
    return Sheets(rendered(extreme, paper="A4", project="on and on " * 20, subject="s" * 150, prepared_by=name))


BOTH = pytest.mark.parametrize("made", [sheets, extreme_sheets], ids=["sample", "extreme"])


# --- every sheet


@BOTH
def test_sheets_are_counted_truly_and_none_is_blank(made: Callable[[], Sheets]) -> None:
    found = made()
    for number in range(1, len(found) + 1):
        text = found.reader.pages[number - 1].extract_text()
        assert f"Sheet {number} of {len(found)}" in " ".join(text.split())
        assert found.body(number)


@BOTH
def test_nothing_stands_outside_the_margins(made: Callable[[], Sheets]) -> None:
    found = made()
    for number in range(1, len(found) + 1):
        width, height = (float(side) for side in found.reader.pages[number - 1].mediabox[2:])
        for run in found.runs(number):
            inside = run.x0 >= MARGIN and run.x1 <= width - MARGIN and MARGIN <= run.y <= height - MARGIN
            assert inside, (number, run)


@BOTH
def test_no_text_is_under_8_points_and_no_script_under_5_and_a_half(made: Callable[[], Sheets]) -> None:
    found = made()
    for number in range(1, len(found) + 1):
        for run in found.runs(number):
            assert run.size >= (5.5 if "Formula" in run.tags else 8.0) - 1e-6, (number, run)


@BOTH
def test_sources_stay_in_their_column(made: Callable[[], Sheets]) -> None:
    found, seen = made(), 0
    heads = {run.text.strip(): run.x0 for number in (4, 5, 6) for run in found.body(number) if "TH" in run.tags}
    for number in range(5, dict(bookmarks(found))["Appendix A Inputs"]):
        named = {run.text.strip() for run in found.body(number) if "TH" in run.tags}
        if named <= {"Line", "Mark", "Source", "Calculation", "Result"}:
            for run in found.body(number):
                if "TD" in run.tags and heads["Source"] - 1 <= run.x0 < heads["Calculation"] - 1:
                    assert run.x1 <= heads["Calculation"], (number, run)
                    seen += 1
    assert seen > 50


@pytest.mark.parametrize(("paper", "size"), [("Letter", (612.0, 792.0)), ("A4", (595.28, 841.89))])
def test_paper(paper: str, size: tuple[float, float]) -> None:
    found = sheets() if paper == "Letter" else extreme_sheets()
    for page in found.reader.pages:
        assert [float(side) for side in page.mediabox] == pytest.approx([0, 0, *size], abs=0.01)


def test_the_title_block_stands_on_every_sheet() -> None:
    wanted = (
        "ProjectQuarry Road Library (demonstration)", "Calculation C-207", "Revision B", "Date 2026-12-01",
        "Status FOR CHECK", "Location Demonstration site", "Subject Lateral seismic forces · Sample Structures",
        "Prepared by J. Doe", "Checked by", "initials",
    )  # fmt: skip
    for number in range(1, len(sheets()) + 1):
        said = "".join("".join(run.text.split()) for run in sheets().runs(number) if run.tags == ("Artifact",))
        assert [text for text in wanted if "".join(text.split()) not in said] == []


def test_the_footer_carries_the_first_digits_over_the_three_hashes() -> None:
    short = view.build(sample.record(), sample.content()).short_hash
    for page in sheets().reader.pages:
        assert f"Content {short} of source" in " ".join(page.extract_text().split())


@pytest.mark.parametrize("filler", range(0, 36, 6))
def test_no_heading_stands_last_on_a_sheet_and_no_row_is_split(filler: int) -> None:
    intro = tuple(Block("paragraph", (Span("text", "A row of text."),)) for _ in range(filler))
    content = list(sample.content())
    content.insert(1, ("prose", intro))
    found = Sheets(rendered(content=content))
    for number in range(1, len(found) + 1):
        assert not {"H1", "H2", "H3"} & set(found.body(number)[-1].tags), number
    assert [row for row in found.elements("TR") if len(_places(row)) != 1] == []


def test_only_a_row_taller_than_a_sheet_goes_on() -> None:
    # the long note and the long open item
    assert len([row for row in extreme_sheets().elements("TR") if len(_places(row)) != 1]) == 2


def _places(element: Any) -> set[int]:
    """The sheets, by object number, on which the content of a structure element lies."""
    found: set[int] = set()
    children = element.get("/K", [])
    for child in children if isinstance(children, list) else [children]:
        inner = child.get_object()
        if isinstance(inner, int):
            found.add(element.raw_get("/Pg").idnum)
        elif "/S" in inner:
            found |= _places(inner)
        elif "/Pg" in inner:
            found.add(inner.raw_get("/Pg").idnum)
    return found


# --- the cover


def test_a_clear_space_of_51_millimeters_holds_no_text() -> None:
    label = next(run for run in sheets().body(1) if run.text.startswith("Seal"))
    side = 51 / 25.4 * 72
    middle, top = label.x0 + 31 / 25.4 * 72, label.y - 10
    inside = [
        run for run in sheets().runs(1)
        if run.x1 > middle - side / 2 and run.x0 < middle + side / 2 and top - side - 10 < run.y < top
    ]  # fmt: skip
    assert inside == []


def test_a_preliminary_issue_has_fields_in_place_of_the_seal() -> None:
    said = Sheets(rendered(status="preliminary")).reader.pages[0].extract_text()
    for field in ("Purpose", "Engineer of record", "License number", "Date", "Preliminary issue"):
        assert field in said
    assert "Seal and signature" not in said


def test_contents_give_the_bookmarks_with_their_true_sheets() -> None:
    titles = [title for title, _ in bookmarks(sheets())]
    assert titles[:4] == [
        "Results", "Open items, overrides, values to be confirmed", "Criteria and assumptions",
        "1 Demonstration building",
    ]  # fmt: skip
    assert titles[-1] == "Appendix E Field of use and cautions"
    rows: dict[tuple[bool, float], str] = {}
    for run in sheets().runs(1):
        if "TOCI" in run.tags or run.tags == ("Artifact",):
            place = (run.x0 > 306, round(run.y, 1))
            rows[place] = rows.get(place, "") + "".join(run.text.split()).replace("\u2060", "")
    entries = {re.sub(r"\.{3,}\d+$", "", row): row for row in rows.values() if "..." in row}
    wanted = {"".join(title.split()): sheet for title, sheet in bookmarks(sheets())}
    assert {title: int(row.rpartition(".")[2]) for title, row in entries.items()} == wanted
    for title, sheet in bookmarks(sheets()):
        heading = "".join(run.text for run in sheets().body(sheet) if "H1" in run.tags)
        assert "".join(title.split()) in "".join(heading.split())


def test_the_whole_answer_stands_on_sheets_2_and_3() -> None:
    said = " ".join((sheets().reader.pages[1].extract_text() + sheets().reader.pages[2].extract_text()).split())
    for text in (
        "Governing results", "X: East-west Y: North-south", "Seismic data for the drawings",
        "Checks: 1 OK, 1 NOT OK, 1 NOT CHECKED", "landscape architect", "Overrides", "the owner asks for a margin here",
        "To be confirmed against the standard: 16 tables and clauses", "S_DS 11.3 % above category C 12/4",
    ):  # fmt: skip
        assert text in said


# --- lines


def test_every_line_stands_with_number_source_meaning_and_result() -> None:
    text = sheets().text()
    for section in view.build(sample.record(), sample.content()).sections:
        for item in section.items:
            if item.type == "line":
                said = [item.source, item.confirmation, item.text, item.detail, item.margin, item.missing, item.shown]
                said += [item.verdict] + ([] if item.minor else [item.meaning])
                said += [part for candidate in item.candidates for part in (candidate.shown, candidate.reason)]
                assert [part for part in said if "".join(part.split()) not in text] == []


def test_alternative_texts_are_the_plain_forms() -> None:
    alts = [formula["/Alt"] for formula in sheets().elements("Formula")]
    assert all(alts)
    for line in sample.record().lines:
        if line.forms and line.kind != "check":
            assert f"{line.typeset['plain']} = {line.forms['plain'][0]}" in alts
            assert f"= {line.forms['plain'][1]}" in alts
        else:
            assert set(line.forms.get("plain", [])) <= set(alts)


def test_figures_have_alternative_texts() -> None:
    alts = [figure.get("/Alt") for figure in sheets().elements("Figure")]
    assert alts and all(alts)
    assert {figure.alt for figure in sample.record().figures} <= set(alts)


def test_tables_have_header_cells() -> None:
    tables = sheets().elements("Table")
    assert len(tables) > 20
    for table in tables:
        assert "/TH" in _kinds(table)


def _kinds(element: Any) -> list[str]:
    children = element.get("/K", [])
    found = []
    for child in children if isinstance(children, list) else [children]:
        inner = child.get_object()
        if hasattr(inner, "get") and "/S" in inner:
            found += [inner["/S"], *_kinds(inner)]
    return found


def test_lines_are_linked_to_the_lines_they_rest_on() -> None:
    reader = sheets().reader
    named = {run.text.strip(): (number, run.y) for number in range(4, 9) for run in sheets().body(number)
             if run.tags[:1] == ("TD",) and run.x0 < 84}  # fmt: skip
    landed = set()
    for page in reader.pages[3:8]:
        for annotation in page.get("/Annots", []):
            target = annotation.get_object().get("/Dest") or annotation.get_object()["/A"]["/D"]
            if isinstance(target, str):
                target = reader.named_destinations[target].dest_array
            number = reader.get_page_number(target[0].get_object()) + 1
            landed.add((number, round(float(target[3]))))
    number, y = named["22"]
    assert any(sheet == number and 0 <= top - y <= 20 for sheet, top in landed)


def test_a_wide_quotient_is_set_on_rows() -> None:
    long = Sheets(rendered()).text()
    assert "(880kip×(67ft)1.155)/(880kip×(67ft)1.155+1020kip" in long


# --- the file


def test_the_file_declares_archive_and_accessibility_profiles() -> None:
    metadata = sheets().catalog["/Metadata"].get_data().decode()
    assert re.search(r"<pdfaid:part>3</pdfaid:part>", metadata)
    assert re.search(r"<pdfaid:conformance>A</pdfaid:conformance>", metadata)
    assert re.search(r"<pdfuaid:part>1</pdfuaid:part>", metadata)
    assert sheets().catalog["/MarkInfo"]["/Marked"]
    assert sheets().catalog["/Lang"] == "en-US"
    info = sheets().reader.metadata
    assert info is not None
    assert info.title == "C-207 - Lateral seismic forces - Quarry Road Library (demonstration)"
    assert info.author == "J. Doe"


def test_the_day_of_issue_is_the_only_time_in_the_file() -> None:
    info = sheets().reader.metadata
    assert info is not None and str(info.get("/CreationDate")).startswith("D:20261201000000")


def test_attachments_come_out_as_they_went_in() -> None:
    assert dict(sheets().reader.attachments) == {attached.name: [attached.data] for attached in ATTACHED}


def test_the_seal_fits() -> None:
    sealed = seal.apply(issued())
    assert seal.check(sealed).state == "intact"
    assert Sheets(sealed).text() == sheets().text()


def test_the_same_input_gives_the_same_bytes() -> None:
    assert rendered() == issued()
    assert rendered(location="elsewhere") != issued()


def test_fonts_are_embedded() -> None:
    for page in sheets().reader.pages:
        for font in page["/Resources"]["/Font"].values():  # type: ignore[index, union-attr]
            descriptor = font.get_object()["/DescendantFonts"][0].get_object()["/FontDescriptor"].get_object()
            assert {"/FontFile2", "/FontFile3"} & set(descriptor)


# --- texts are data


def test_hostile_texts_come_out_as_typed() -> None:
    wanted = "".join(sample.HOSTILE.split())
    assert sheets().text().count(wanted) >= 4  # paragraph, caption, note, reference
    assert any(sample.HOSTILE in figure["/Alt"] for figure in sheets().elements("Figure"))


def test_hostile_title_blocks_come_out_as_typed() -> None:
    fields = ("project", "location", "number", "subject", "revision", "firm", "purpose", "prepared_by", "checked_by")
    typed = {field: f"{field}: {sample.HOSTILE}" for field in fields}
    text = Sheets(rendered(**typed)).text()
    assert [value for value in typed.values() if "".join(value.split()) not in text] == []


def test_math_that_cannot_be_set_is_shown_as_its_source() -> None:
    assert r"\unknown{x}" in sheets().text()


def _foreign(record: Record) -> None:
    record.line("J-snow").text = "Roof 漢 and \u202e hidden \x07 end"
    record.calculation["firm"] = "字"


def _view(change: Change) -> View:
    record = sample.record()
    change(record)
    return view.build(record, sample.content())


def test_characters_without_a_glyph_are_shown_as_code_points() -> None:
    text = Sheets(rendered(_foreign)).text()
    assert "Roof[U+6F22]and[U+202E]hidden[U+0007]end" in text
    notice = "Characters that the fonts of this report lack are shown as code points in brackets: "
    assert "".join(f"{notice}U+0007, U+202E, U+5B57, U+6F22.".split()) in text


def test_characters_without_a_glyph_are_reported() -> None:
    assert pdf.missing_glyphs(_view(_foreign)) == [
        "U+5B57 in '字'",
        "U+6F22, U+202E, U+0007 in 'Roof 漢 and \\u202e hidden \\x07 end'",
    ]
    assert pdf.missing_glyphs(_view(lambda record: None)) == []


# --- refusals


def test_a_drawing_that_is_not_there_is_named() -> None:
    with pytest.raises(NotebookError, match=r"figure 'elevation': the drawing 'elevation\.svg' was not handed over"):
        pdf.render(_view(lambda record: None), figures={}, attachments=[], date=DAY)


def test_a_drawing_without_size_is_named() -> None:
    with pytest.raises(NotebookError, match="figure 'elevation': the drawing states no width and height"):
        pdf.render(
            _view(lambda record: None), figures=dict.fromkeys(sample.figures(), b"<svg/>"), attachments=[], date=DAY
        )


def test_a_formula_that_cannot_be_set_is_an_error() -> None:
    def broken(record: Record) -> None:
        record.line("X.T_a").forms["typst"][0] = "unknown_word"

    with pytest.raises(NotebookError, match="the PDF report cannot be set: unknown variable"):
        pdf.render(_view(broken), figures=sample.figures(), attachments=[], date=DAY)


def test_a_report_without_lines_is_set() -> None:
    record = replace(sample.record(), lines=[], tables=[], figures=[], open_items=[], summaries=[], cells=[])
    made = pdf.render(view.build(record, []), figures={}, attachments=[], date=DAY)
    assert "Noopenitems." in Sheets(made).text()


# --- density


def test_a_building_stays_within_its_sheets() -> None:
    assert len(sample.record().lines) > 60
    assert dict(bookmarks(sheets()))["Appendix A Inputs"] <= 8
