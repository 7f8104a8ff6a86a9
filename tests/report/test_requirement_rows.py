"""Requirements on sheets and lines, read off an issued report; each name starts with its row.

Everything is looked for in both files of one issue. What other tests prove better stands there; the table,
`tests/requirements.toml`, names both.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

import pytest
from pypdf.generic import ContentStream

from calckit import units
from calckit.core.record import NOT_CHECKED, NOT_OK, OK
from tests.report import issued_sample as issued
from tests.report.issued_sample import (
    alternatives,
    everywhere,
    formulas,
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


def test_a1_a5_project_place_and_number_stand_on_every_sheet() -> None:
    assert len(sheet_texts()) > 10
    assert everywhere("Project Harbor Street Clinic (demonstration)", "Location Demonstration site") == []
    assert everywhere("Calculation C-101") == []


def test_a2_sheets_are_counted_truly() -> None:
    count = len(sheet_texts())
    assert [n for n in range(1, count + 1) if f"Sheet{n}of{count}" not in sheet_texts()[n - 1]] == []
    assert "counter(page)" in issued.report().files["html"].decode()


def test_a3_revision_and_day_stand_on_every_sheet() -> None:
    assert everywhere("Revision A", "Date 2026-12-01") == []


def test_a4_names_with_space_for_initials_and_day() -> None:
    assert everywhere("Prepared by J. Doe initials date", "Checked by R. Roe initials date") == []


def test_a6_each_computed_line_prints_symbols_numbers_and_result() -> None:
    seen = 0
    for line in of_kind("computed"):
        forms = line.forms.get("plain", [])
        if not line.formula or len(forms) < 2 or line.text:
            continue
        row = row_of(line)
        shown = line.shown if isinstance(line.shown, str) else line.shown[line.rows.index(line.row)]
        assert squeezed(shown) in plain(row), line.id
        if 'class="formula"' in row:
            seen += 1
            for form in forms:
                assert squeezed(form) in formulas(row), (line.id, form)
                assert any(squeezed(form)[:20] in text for text in alternatives()), (line.id, form)
    assert seen > 25


def test_a7_each_formula_cites_its_document_and_clause() -> None:
    for line in of_kind("computed", "table", "check"):
        assert line.source is not None, line.id
        cited = f"{line.source.document} {line.source.where}".strip()
        assert squeezed(cited) in plain(row_of(line)), line.id
        assert lacking(cited) == [], line.id
    equations = [line.source.equation for line in of_kind("computed") if line.source and line.source.equation]
    assert len(equations) > 15 and lacking(*(f"eq. {equation}" for equation in equations)) == []


def test_a8_each_symbol_is_defined_at_its_line_and_in_the_list() -> None:
    listed = section("Appendix B Symbols", "Appendix C References")
    symbols = issued.lines(lambda line: line.typeset)
    for line in symbols:
        assert line.meaning, line.id
        assert squeezed(line.meaning) in listed, line.id
        assert squeezed(line.meaning) in plain(row_of(line)), line.id


def test_a9_each_number_has_its_unit_or_is_called_a_number() -> None:
    listed = section("Appendix B Symbols", "Appendix C References")
    numbers = issued.lines(lambda line: isinstance(line.value, float) and isinstance(line.shown, str) and line.typeset)
    for line in numbers:
        unit = units.shown(line.unit)
        if unit:
            assert str(line.shown).endswith(f" {unit}"), line.id
        assert squeezed(line.meaning + (unit or "number")) in listed, line.id
    for number, table in enumerate(record().tables, 1):
        for column in table.columns:
            unit = units.shown(column.unit)
            head = issued.page()[issued.page().index(f"<caption>Table {number}. ") :].partition("</thead>")[0]
            assert unit in plain(head) and (not unit or f"({unit})" in texts()[0])


def test_a10_each_input_names_its_source_or_is_called_assumed() -> None:
    for line in of_kind("given"):
        if line.source is None:
            assert line.value == "none", line.id  # not known yet: there is nothing to have a source
        else:
            assert squeezed(f"{line.source.document} {line.source.where}") in plain(row_of(line)), line.id
    (assumed,) = of_kind("assumption")
    assert '<span class="kind">assumption</span>' in row_of(assumed)
    assert lacking("catalog, not yet ordered") == []
    assert squeezed("assumption shear that the anchors carry") in texts()[0]


def test_a11_look_ups_print_table_row_column_and_neighbors() -> None:
    details = [line.detail for line in of_kind("table")]
    assert "Table 11.4-1, row C, between columns 0.5: 1.3 and 0.75: 1.2" in details
    assert len([detail for detail in details if re.match(r"Table [\d.-]+, row .+", detail)]) > 10
    assert lacking(*details) == []


def test_a12_all_limits_of_c_s_are_printed_and_one_governs() -> None:
    line = record().line("X.C_s")
    assert len(line.candidates) >= 3
    assert [candidate.governs for candidate in line.candidates].count(True) == 1
    assert lacking(*(candidate.shown for candidate in line.candidates)) == []
    assert lacking(*(candidate.equation for candidate in line.candidates)) == []
    row = plain(row_of(line))
    assert row.count("governs") == 1


def test_a13_rounding_serves_printing_and_is_stated() -> None:
    assert lacking("Values are carried with 12 significant digits.", "rounding serves printing only") == []
    line = record().line("S_DS")
    assert line.shown == "0.5567" and line.value == pytest.approx(2 / 3 * 1.228 * 0.68, rel=1e-11)
    assert line.value != float(line.shown)


def test_a14_the_sketch_shows_the_levels_of_the_inputs() -> None:
    (figure,) = [figure for figure in record().figures if figure.id == "elevation"]
    heights, weights = record().line("h_x"), record().line("w_x")
    for row, height, weight in zip(heights.rows, heights.shown, weights.shown, strict=True):
        assert f"{row}" in figure.alt and height in figure.alt and weight in figure.alt
    assert squeezed(figure.alt) in {squeezed(str(e.get("/Alt"))) for e in issued.sheets().elements("Figure")}
    drawing = issued.page()[issued.page().index('id="figure-1"') :].partition("</figure>")[0]
    assert "<svg" in drawing or "<img" in drawing


def test_a15_no_list_is_printed_as_a_program_would() -> None:
    for text in texts():
        assert not re.search(r"\['?[\d.]+'?,'?[\d.]+'?,|array\(|\{'", text)


def test_a16_sections_end_with_what_they_carry_on() -> None:
    lines = record().lines
    for part in ("X", "Y"):
        line = record().line(f"{part}.V")
        users = [other.n for other in lines if line.id in other.inputs and other.section != line.section]
        assert len(users) >= 2
        assert f"{part}𝑉={squeezed(str(line.shown))}tolines{users[0]}/" in texts()[0]
        home = issued.page()[issued.page().index(f'id="line-{line.n}"') :].partition("</section>")[0]
        carried = home[home.index("Carried forward") :]
        assert re.search(rf"{line.shown} \(line {line.n}\) to {users[0]},", re.sub("<[^>]*>", "", carried))


def test_a17_judgments_are_called_so_and_give_their_reason() -> None:
    line = record().line("X.J-1")
    assert "judgment" in row_of(line)
    assert lacking("The stair is separated from the frame.", "joint of 2 in, S-201 detail 7") == []


def test_a18_an_override_prints_both_values_reason_and_name() -> None:
    line = record().line("X.T_a")
    assert line.override and line.computed
    assert lacking(str(line.computed.shown), "0.95 s", "measured on a like frame", "J. Doe", "B-1 section 7") == []
    row = plain(row_of(line))
    assert all(squeezed(word) in row for word in (str(line.computed.shown), "0.95 s", "measured on a like frame"))
    assert squeezed("Overrides 1") in sheet_texts()[0]


def colors(resources: Any, stream: Any, met: set[int]) -> Iterator[tuple[float, ...]]:
    """Every color that a sheet draws with, forms inside it included."""
    reader = issued.sheets().reader
    for operands, operator in ContentStream(stream, reader).operations:
        if operator in (b"rg", b"RG", b"g", b"G", b"sc", b"SC", b"scn", b"SCN"):
            yield tuple(float(value) for value in operands if isinstance(value, int | float))
        assert operator not in (b"k", b"K")
    for form in resources.get("/XObject", {}).values():
        inner = form.get_object()
        if inner.get("/Subtype") == "/Form" and id(inner) not in met:
            met.add(id(inner))
            yield from colors(inner.get("/Resources", {}), inner, met)


def test_a19_everything_is_drawn_in_black_gray_and_white() -> None:
    found = {
        color
        for sheet in issued.sheets().reader.pages
        for color in colors(sheet["/Resources"], sheet.get_contents(), set())
    }
    assert (0.0,) in found
    assert [color for color in found if len(color) not in (0, 1) and max(color) - min(color) > 0.001] == []
    source = re.sub(r"data:[\w/+-]+;base64,[\w+/=]*", "", issued.report().files["html"].decode())
    shades = re.findall(r"#([0-9a-fA-F]{3,8})\b(?=[;\s}])", source)
    assert len(shades) > 5
    assert [shade for shade in shades if len({*re.findall(".." if len(shade) > 4 else ".", shade)}) > 1] == []
    assert not re.search(r"(?:color|background)[^;{}]*:\s*(?:rgb|hsl|(?!black|white|gray|inherit)[a-z]+\b)", source)


def test_a20_no_code_warning_or_traceback_is_printed() -> None:
    for text in texts():
        assert not re.search(r"Traceback|Warning:|>>>|importCalc|calc\.\w+\(|x\.asce7|\bNone\b|\bnan\b|<object", text)


def test_a21_checks_print_demand_limit_ratio_and_verdict() -> None:
    for verdict, word in ((OK, "OK"), (NOT_OK, "NOT OK")):
        checks = issued.lines(lambda line, wanted=verdict: line.verdict == wanted and line.formula)
        for line in checks:
            row = plain(row_of(line))
            assert f"ratio{squeezed(str(line.shown))}{squeezed(word)}" in row, line.id
            assert all(squeezed(form) in formulas(row_of(line)) for form in line.forms["plain"]), line.id
    for line in issued.lines(lambda line: line.verdict == NOT_CHECKED):
        assert "NOT CHECKED" in row_of(line) and line.missing
