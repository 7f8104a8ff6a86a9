"""Requirements on package, check, record and deference, read off an issued report; each name starts with its row.

Everything is looked for in both files of one issue. What other tests prove better stands there; the table,
`tests/requirements.toml`, names both.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

from pypdf.generic import ContentStream

from calckit import __version__
from calckit.report import seal
from calckit.report.checklog import MARKS
from calckit.report.recheck import parcel_of
from calckit.standards.asce7 import FIELD_OF_USE, NOT_COVERED
from tests.report import issued_sample as issued
from tests.report.issued_sample import (
    everywhere,
    lacking,
    of_kind,
    plain,
    record,
    row_of,
    section,
    sheet_texts,
    squeezed,
    texts,
)  # fmt: skip
from tests.report.sheets import IDENTITY, matrix_of, product

# --- B: the package


def test_b1_the_cover_says_what_this_is() -> None:
    cover = sheet_texts()[0]
    for words in (
        "CALCULATION", "Status: FOR CHECK, first pass, before the analysis model",
        "Harbor Street Clinic (demonstration)", "Demonstration site", "Calculation C-101, revision A, 2026-12-01",
        "Own Firm", "Lateral seismic forces",
    ):  # fmt: skip
        assert squeezed(words) in cover, words


def test_b2_e4_the_sign_off_leaves_what_belongs_to_persons_blank() -> None:
    roles = "Prepared by J. Doe Checked by R. Roe Engineer of record"
    block = f"Role Printed name Signature Date {roles} Level of the check"
    assert squeezed(block) in sheet_texts()[0]


def test_b3_the_cover_counts_what_is_unconfirmed() -> None:
    (assumed,) = of_kind("assumption")
    cover = sheet_texts()[0]
    assert f"Unconfirmedassumptions1{assumed.n}" in cover.replace("1 ", "1")
    unanswered = issued.lines(lambda line: line.kind == "judgment" and any(flag.open for flag in line.flags))
    assert f"Unsettledinputsandanswers{len(unanswered)}{unanswered[0].n}/" in cover
    open_ones = [item for item in record().open_items if item.group == "open"]
    assert f"Openitemsinall{len(open_ones)}" in cover


def frames(number: int) -> Iterator[tuple[float, float, float, float]]:
    """The closed paths of a sheet: left, bottom, right, upper edge in points."""
    matrix, saved, points = IDENTITY, [], []
    page = issued.sheets().reader.pages[number - 1]
    for operands, operator in ContentStream(page.get_contents(), issued.sheets().reader).operations:
        if operator == b"q":
            saved.append(matrix)
        elif operator == b"Q":
            matrix = saved.pop()
        elif operator == b"cm":
            matrix = product(matrix_of(operands), matrix)
        elif operator in (b"m", b"l"):
            points = [] if operator == b"m" else points
            a, b, c, d, e, f = matrix
            x, y = map(float, operands)
            points = [*points, (a * x + c * y + e, b * x + d * y + f)]
        elif operator == b"h":
            xs, ys = zip(*points, strict=True)
            yield min(xs), min(ys), max(xs), max(ys)


def test_b4_the_frame_for_seal_and_signature_is_51_mm_each_way_and_empty() -> None:
    side = 51 / 25.4 * 72
    found = [box for box in frames(1) if box[2] - box[0] >= side and box[3] - box[1] >= side]
    label = next(run for run in issued.sheets().body(1) if run.text.startswith("Seal and signature"))
    below = [box for box in found if abs(box[0] - label.x0) < 2 and box[3] < label.y]
    assert len(below) == 1
    left, bottom, right, top = below[0]
    for run in issued.sheets().runs(1):
        assert not (run.x1 > left and run.x0 < right and bottom < run.y < top), run.text
    inner = [box for box in frames(1) if box[0] > left and box[2] < right and box[1] > bottom and box[3] < top]
    assert inner == []
    assert "seal-space" in issued.page() and "Clear space for seal and signature" in issued.page()


def test_b5_the_status_stands_on_every_sheet() -> None:
    assert everywhere("Status FOR CHECK") == []


def test_b7_the_revision_table_gives_day_reason_and_name() -> None:
    row = "Revision Date Reason By Sheets A 2026-12-01 first issue for comment J. Doe all"
    assert squeezed(row) in sheet_texts()[0]
    assert lacking("first issue for comment") == []


def test_b8_the_contents_name_true_sheets_and_equal_the_bookmarks() -> None:
    reader: Any = issued.sheets().reader
    cover = "\n".join(map(squeezed, reader.pages[0].extract_text().splitlines()))
    seen = 0
    for entry in reader.outline:
        if isinstance(entry, list):
            continue
        sheet = reader.get_destination_page_number(entry)
        title = squeezed(str(entry.title))
        assert title in sheet_texts()[sheet], title
        if sheet:
            seen += 1
            assert re.search(rf"^{re.escape(title)}\.+{sheet + 1}$", cover, flags=re.MULTILINE), title
    assert seen > 15


def test_b9_criteria_stand_before_the_first_line() -> None:
    assert lacking("Building code IBC 2021", "Jurisdiction Demonstration County") == []
    assert lacking("Local amendments none stated", "Standard ASCE/SEI 7-16", "Supplements in force not stated") == []
    text = "".join(sheet_texts()[1:])
    assert text.index("BuildingcodeIBC2021") < text.index(squeezed("Line Mark Source Calculation Result"))


def test_b10_e2_purpose_field_of_use_and_what_is_not_covered() -> None:
    assert lacking("Seismic base shear, its distribution over the height, story drift and stability of one") == []
    assert len(NOT_COVERED) > 3 and lacking(*FIELD_OF_USE, *NOT_COVERED) == []


def test_b11_the_method_is_named() -> None:
    assert lacking("by the equivalent lateral force procedure", "Analysis procedure equivalent lateral force") == []


def test_b12_assumptions_are_numbered_with_basis_use_and_open_item() -> None:
    (assumed,) = of_kind("assumption")
    users = [line.n for line in record().lines if "V_anchor" in line.inputs]
    assert len(users) == 2
    block = section("Criteria and assumptions", "1 Building: lateral seismic forces")
    assert re.search(r"1\D*shearthattheanchorscarry", block)
    assert "catalog,notyetordered" in block
    assert all(str(number) in block for number in (assumed.n, *users))
    assert [item.line for item in record().open_items if item.line == assumed.id] == [assumed.id]
    assert "openitem" in block


def test_b13_the_input_list_gives_source_day_and_status() -> None:
    listed = section("Appendix A Inputs", "Appendix B Symbols")
    days = {document["key"]: document["date"] for document in record().calculation["documents"]}
    for line in issued.lines(lambda line: line.kind == "given" and line.value != "none"):
        assert line.source
        assert squeezed(line.meaning) in listed, line.id
        day = days.get(line.source.document, "")
        assert squeezed(f"{line.source.document} {line.source.where} {day}") in listed, line.id
    assert "inforce" in listed and "openitem" in listed and "setatissue" in listed


def test_b14_open_items_are_listed_with_owner_and_line() -> None:
    items = [item for item in record().open_items if item.group == "open"]
    assert len(items) > 15
    assert lacking(*(item.text for item in items)) == []
    listed = section("Open items, overrides", "Criteria and assumptions")
    for item in items:
        assert squeezed(f"{item.text}{item.owner}{record().line(item.line).n}") in listed, item.id


def test_b15_documents_are_listed_with_edition_and_day() -> None:
    listed = section("Appendix C References used", "Appendix D Software")
    for document in record().calculation["documents"]:
        row = (document[name] for name in ("key", "title", "author", "revision", "date"))
        assert squeezed("".join(row)) in listed
    assert "ASCE/SEI7-16" in listed


def test_b16_program_libraries_python_and_platform_are_named() -> None:
    software = record().calculation["software"]
    assert software["version"] == __version__
    libraries = [f"{name} {version}" for name, version in software["libraries"].items()]
    assert {"sympy", "pint", "numpy"} <= software["libraries"].keys()
    assert lacking(f"calckit {__version__}", software["python"], software["platform"], *libraries) == []


def test_b17_the_report_says_how_the_kit_is_checked_again() -> None:
    assert lacking("calckit verify asce7") == []


def test_b18_what_nobody_typed_is_called_default() -> None:
    """What stands in the input list was typed in a cell, was set at issue, or is called default."""
    source = parcel_of(issued.report().files["pdf"]).notebook.decode()
    defaults = []
    for line in of_kind("given", "assumption", "judgment"):
        if line.detail == "set at issue":
            assert line.id in issued.SET
        elif line.detail == "default":
            defaults.append(line.id)
        else:
            name = "spectrum_ordinates" if line.symbol == "T_r" else line.id.rpartition(".")[2]
            assert re.search(rf"\b{re.escape(name)}\b", source), line.id
    listed = section("Appendix A Inputs", "Appendix B Symbols")
    assert defaults == ["Y.T_a_method"]
    assert listed.count("default") == 1
    assert squeezed("how the approximate period is found table ASCE/SEI 7-16 12.8.2.1 default") in listed
    row = plain(row_of(record().line("Y.T_a_method")))
    assert "default" in row and "tobeconfirmed" not in row


def test_b19_governing_results_stand_on_sheet_2() -> None:
    for id_ in ("S_DS", "SDC", "X.V", "Y.V", "X.C_s", "X.T", "W"):
        line = record().line(id_)
        assert f"{squeezed(str(line.shown))}({line.n}/" in sheet_texts()[1], id_


def test_b21_the_seismic_data_for_the_drawings_are_complete() -> None:
    # the items that IBC 1603.1.5 asks for on the drawings (from memory)
    text = "".join(sheet_texts()[1:3])
    block = text[text.index("Seismicdataforthedrawings") :]
    for label in (
        "Risk category", "Importance factor", "Mapped ordinates S_S, S_1", "Site class", "Design ordinates S_DS, S_D1",
        "Seismic design category", "Force-resisting system", "Design base shear", "Seismic response coefficient",
        "Response modification coefficient", "Analysis procedure",
    ):  # fmt: skip
        assert squeezed(label) in block, label
    assert lacking("Seismic data for the drawings") == []


def test_b23_title_author_and_language_stand_in_the_metadata() -> None:
    reader = issued.sheets().reader
    assert reader.metadata is not None
    assert reader.metadata.title == "C-101 - Lateral seismic forces - Harbor Street Clinic (demonstration)"
    assert reader.metadata.author == "J. Doe"
    assert issued.sheets().catalog["/Lang"] == "en-US"
    head = issued.page().partition("</head>")[0]
    assert '<html lang="en"' in head and 'name="author" content="J. Doe"' in head
    assert "<title>C-101 - Lateral seismic forces" in head


# --- C: the check


def test_c4_a_mark_can_stand_against_every_line() -> None:
    assert set(MARKS) == {"A", "C", "Q", "V"}
    for line in record().lines:
        assert 'class="mark"' in row_of(line), line.id
    assert squeezed("Line Mark Source Calculation Result") in "".join(sheet_texts())


def test_c13_every_question_prints_its_answer_or_that_there_is_none() -> None:
    listed = section("Appendix A Inputs", "Appendix B Symbols")
    questions = issued.lines(lambda line: line.kind == "judgment" and line.symbol)
    assert len(questions) > 25
    for line in questions:
        assert squeezed(f"{line.meaning}{line.shown}") in listed, line.id
        if line.shown == "not answered":
            assert any(item.line == line.id for item in record().open_items), line.id


# --- D: the record that lasts


def test_d1_the_page_needs_no_script_and_no_network() -> None:
    source = issued.page()
    assert not re.search(r"<script|<link|<iframe|\bon\w+=\"|src=\"(?!data:)|@import|url\((?!['\"]?data:)", source)
    assert "default-src 'none'" in source
    catalog = issued.sheets().catalog
    assert "/JavaScript" not in catalog.get("/Names", {}) and "/OpenAction" not in catalog


def test_d4_hashes_stand_in_full_once_and_short_on_every_sheet() -> None:
    assert lacking(record().source, record().inputs, record().lines_hash) == []
    (short,) = {match for text in sheet_texts() for match in re.findall(r"Content([0-9a-f]{8})of", text)}
    assert [n for n, text in enumerate(sheet_texts(), 1) if f"Content{short}of" not in text] == []


def test_d5_source_settings_and_record_are_inside() -> None:
    parcels = [parcel_of(data) for data in issued.report().files.values()]
    assert parcels[0] == parcels[1]
    assert b"own-before" in parcels[0].notebook and b'"outputs": []' in parcels[0].notebook
    assert b"81 ft" in parcels[0].settings
    assert b'"python"' in parcels[0].record


def test_d8_tables_have_headers_and_pictures_words() -> None:
    found = issued.sheets()
    assert found.catalog["/MarkInfo"]["/Marked"]
    assert len(found.elements("TH")) > 50
    figures = found.elements("Figure")
    assert len(figures) >= 4 and all(str(figure.get("/Alt", "")).strip() for figure in figures)
    assert issued.page().count("<th ") > 50
    assert all('alt="' in tag and 'alt=""' not in tag for tag in re.findall(r"<img[^>]*>", issued.page()))


# --- E: deference


def test_e1_the_kit_never_says_that_anything_is_in_order() -> None:
    for text in texts():
        assert not re.search("approved|certified|compliant|complies", text.lower())


def test_e5_hazard_values_name_their_authority_and_the_kit_does_not_vouch() -> None:
    for id_ in ("S_S", "S_1", "T_L"):
        line = record().line(id_)
        assert line.source and line.source.document == "H-2" and "H-2 p. 1" in row_of(line)
    assert lacking("the kit stores them and does not vouch for them.") == []
    assert "2026-10-02" in section("Appendix C References used", "Appendix D Software")


def test_e6_the_standard_is_cited_by_number_alone() -> None:
    cited = {line.source.where for line in record().lines if line.source and line.source.document == "ASCE/SEI 7-16"}
    assert len(cited) > 20
    number = re.compile(r"\d+(\.\d+)+|Table \d+\.\d+-\d+")
    assert [where for where in cited if not number.fullmatch(where)] == []


def test_both_files_carry_the_same_calculation() -> None:
    pdf, html = (parcel_of(issued.report().files[form]).record for form in ("pdf", "html"))
    assert pdf == html
    assert {seal.check(data).state for data in issued.report().files.values()} == {"intact"}
