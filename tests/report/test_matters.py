"""What matters as printed: columns, rows, reading order and breaks, in both files and within the rules of a sheet."""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from itertools import pairwise

import pytest

from calckit import Calc
from calckit.core.assemble import assemble
from calckit.core.record import Flag, Line, OpenItem, Operand, Record, Summary, SummaryRow
from calckit.report import html, influence, matters, pdf, view
from calckit.report.lines import Lines
from calckit.report.matters import EffectView, MattersView, MoverView
from calckit.report.model import Content, View
from tests.report import test_pdf
from tests.report.rerun import rerun, second_pass
from tests.report.sheets import Sheets
from tests.report.test_html import _Page

CONTENT: Content = [("cell", k) for k in range(40)]


@cache
def model(second: bool, paper: str = "Letter") -> View:
    record = second_pass() if second else rerun({}, {})
    return view.build(replace(record, calculation=record.calculation | {"paper": paper, "notebook": "demo"}), CONTENT)


def found(second: bool) -> MattersView:
    shown = model(second).matters
    assert shown
    return shown


@cache
def sheets(paper: str = "Letter") -> Sheets:
    return Sheets(pdf.render(model(True, paper), figures={}, attachments=[], date="2026-12-01"))


@cache
def page() -> bytes:
    return html.render(model(True), figures={}, attachments=[])


def row(second: bool, line: str, level: str = "") -> MoverView:
    (one,) = (row for row in found(second).tables[0].rows if (row.ref.id, row.level) == (line, level))
    return one


# --- columns and rows


def test_the_columns_are_the_governing_results_in_the_words_of_the_answer() -> None:
    (table,) = found(True).tables
    assert [(group.label, [column.ref.id for column in group.columns]) for group in table.groups] == [
        ("Design base shear", ["X.V", "Y.V"]),
        ("Exponent of the distribution", ["X.k", "Y.k"]),
        ("Largest story drift over allowable", ["X.drift", "Y.drift"]),
        ("Largest stability coefficient over its maximum", ["X.stability", "Y.stability"]),
    ]
    assert all(len(row.effects) == 8 for row in table.rows)


def test_the_rows_of_the_first_pass() -> None:
    # V = S_D1/(C_t h_n^x R/I_e) W, x = 0.8 and 0.75, one story weight by its share of 6060 kip; k by hand below
    (table,) = found(False).tables
    assert [(row.ref.id, row.level, row.shown, *(effect.text for effect in row.effects)) for row in table.rows] == [
        ("S_1", "", "0.26", "+1.000", "+1.000", "0", "0"),
        ("h_n", "", "80 ft", "−0.800", "−0.750", "+0.307", "+0.197"),
        ("w_x", "2", "1100 kip", "+0.182", "+0.182", "0", "0"),
        ("w_x", "6, 5, 4, 3", "1020 kip", "+0.168", "+0.168", "0", "0"),
        ("w_x", "Roof", "880 kip", "+0.145", "+0.145", "0", "0"),
    ]
    assert table.most == table.rows
    # k = 1 + (T - 0.5)/2, T = 0.5350 s: dk/dT T/k x; k = 1 is reached at T = 0.5 s
    high = row(False, "h_n")
    assert float(high.effects[3].text) == pytest.approx(0.5 * 0.5350 / 1.0175 * 0.75, abs=0.0005)
    assert high.switch and high.switch.ref.id == "Y.k"
    assert high.switch.percent == f"−{(1 - 0.5 / 0.5350) / 0.75 * 100:.1f} %"


def test_both_sides_of_a_tie_are_printed_with_the_line_that_ties() -> None:
    roof = row(True, "h_x", "Roof")
    assert roof.effects[5] == EffectView("", "−6.154", "0")  # 80 ft over a story of 13 ft; the tied stories stay
    assert [tie.id for tie in roof.ties] == ["Y.drift"]


def test_the_strongest_input_of_every_result_stands_with_the_results() -> None:
    record = second_pass()
    ids = influence.governing(record)
    most = {(row.ref.id, level) for row in found(True).tables[0].most for level in row.level.split(", ")}
    for place, id_ in enumerate(ids):
        best = max(influence.table(record, ids), key=lambda row: row.effects[place].size)
        assert (best.line, best.level) in most, id_
    assert len(found(True).tables[0].most) == 6


def test_every_input_stands_in_a_row_or_is_read_next() -> None:
    for second in (False, True):
        record = second_pass() if second else rerun({}, {})
        shown = found(second)
        rows = {row.ref.id for table in shown.tables for row in table.rows}
        still = [ref.id for _, refs in shown.still for ref in refs]
        assert len(still) == len(set(still))
        assert not rows & set(still)
        assert rows | set(still) == {row.line for row in influence.table(record, ["X.V"])}


def small(*inputs: str, count: int = 1) -> Record:
    """Results r0, r1, ... that are the sum of the first two inputs; the first has a document, the second is open."""
    lines = [Line(name, "given", name, value=1.0, shown="1", content=name, n=n) for n, name in enumerate(inputs, 1)]
    lines[1].flags = [Flag("b is to be settled", open=True)]
    operands = {name: Operand(1.0, "", "1", name) for name in inputs[:2]}
    text = " + ".join(operands)
    results = [Line(f"r{k}", "computed", f"r{k}", value=2.0, shown="2", formula=text, inputs=operands, n=9 + k)
               for k in range(count)]  # fmt: skip
    answer = Summary("answer", "Results", ["all"], [SummaryRow(f"result {k}", ["2"], [f"r{k}"]) for k in range(count)])
    item = OpenItem("b", "b", "b is to be settled", "", "open")
    return Record({}, [*lines, *results], open_items=[item], summaries=[answer])


def test_what_is_unsettled_is_said_and_read_first() -> None:
    record = small("a", "b", "c")
    made = matters.build(record, Lines(record))
    assert made
    assert [(row.ref.id, row.state) for row in made.tables[0].rows] == [
        ("b", "no document; open item 1"), ("a", "no document"),
    ]  # fmt: skip
    assert [(label, [ref.id for ref in refs]) for label, refs in made.still] == [("no document", ["c"])]
    labels = [label for label, _ in found(False).still]
    assert labels == ["no document, and an open item", "no document", "settled"]


def test_more_than_eight_results_are_two_tables() -> None:
    record = small("a", "b", count=9)
    made = matters.build(record, Lines(record))
    assert made and [len(table.groups) for table in made.tables] == [8, 1]
    assert [len(row.effects) for table in made.tables for row in table.rows] == [8, 8, 1, 1]


def test_nothing_is_told_where_the_answer_has_no_number() -> None:
    assert matters.build(Record({}, small("a", "b").lines), Lines(Record({}))) is None


# --- as printed


@cache
def in_html() -> str:
    return " ".join(_Page(page()).text.split())


def test_every_row_stands_in_both_files() -> None:
    text = sheets().text()
    for one in found(True).tables[0].rows:
        cells = [effect.text or effect.below + effect.above for effect in one.effects]
        printed = "".join([f"at{one.level}" if one.level else "", f"={one.shown}", one.state, *cells]).replace(" ", "")
        assert printed in text, one
        assert printed in in_html().replace(" ", ""), one
        if one.switch:
            assert f"{one.switch.percent} in {one.switch.ref.n}" in in_html()
            assert f"{one.switch.percent}in{one.switch.ref.n}".replace(" ", "") in text


def test_it_stands_after_the_results_and_in_full_after_the_inputs() -> None:
    headed = dict(test_pdf.bookmarks(sheets()))
    places = [number for number in range(1, len(sheets()) + 1)
              if "What matters:" in sheets().reader.pages[number - 1].extract_text()]  # fmt: skip
    assert headed["Results"] <= places[0] <= headed["Open items, overrides, values to be confirmed"]
    assert headed["Appendix A Inputs"] < places[1] <= headed["Appendix B Symbols"]
    assert len(places) == 2
    said = page().decode()
    order = ["answer", "open", "input-list", "what-matters", "symbols"]
    order = [f'id="{anchor}"' for anchor in order]
    order.insert(1, "What matters: percent")
    assert sorted(order, key=said.index) == order


def test_links_of_the_table_reach_their_lines() -> None:
    parsed = _Page(page())
    ids = {attrs["id"] for _, attrs in parsed.elements if "id" in attrs}
    links = [attrs["href"] for attrs in parsed.all("a") if attrs.get("href", "").startswith("#")]
    assert "#what-matters" in links
    assert [link for link in links if link[1:] not in ids] == []
    assert parsed.faults == []


def test_a_break_is_named_in_both_files() -> None:
    calc = Calc(project="Harbor Street Clinic", standard="ASCE 7-16")
    calc.document("D-1", title="All inputs")
    calc.givens("S_S, 0.68, D-1\nS_1, 0.26, D-1\nT_L, 8 s, D-1\nsite_class, C, D-1\nrisk_category, III, D-1")
    calc.given("h_n", "80 ft", source="D-1")
    calc.levels("level, h_x [ft], w_x [kip]\nRoof, 80, 880\n2, 15, 1100", source="D-1")
    calc.asce7.design_spectrum()
    calc.asce7.design_category()
    calc.asce7.seismic_weight()
    x = calc.part("X")
    x.given("system", "moment frame: steel special moment frame", source="D-1")
    x.asce7.system()
    x.asce7.approximate_period(h_n="70 ft")
    x.asce7.period()
    x.asce7.base_shear()
    record = assemble(calc)
    record.calculation["notebook"] = "demo"
    shown = view.build(record, [])
    assert shown.matters
    assert [(one.ref.id, one.text) for one in shown.matters.breaks] == [("X.T_a", "h_n typed in place: 70 ft")]
    number = shown.matters.breaks[0].ref.n
    words = f"beyond which no change is followed: line {number}, h_n typed in place: 70 ft."
    assert words in " ".join(_Page(html.render(shown, figures={}, attachments=[])).text.split())
    printed = Sheets(pdf.render(shown, figures={}, attachments=[], date="2026-12-01")).text()
    assert printed.count("".join(words.split())) == 2


# --- the rules of a sheet


@pytest.mark.parametrize("paper", ["Letter", "A4"])
def test_the_rules_of_a_sheet_hold(paper: str) -> None:
    test_pdf.test_sheets_are_counted_truly_and_none_is_blank(lambda: sheets(paper))
    test_pdf.test_nothing_stands_outside_the_margins(lambda: sheets(paper))
    test_pdf.test_no_text_is_under_8_points_and_no_script_under_5_and_a_half(lambda: sheets(paper))
    made = sheets(paper)
    assert [row for row in made.elements("TR") if len(test_pdf._places(row)) != 1] == []
    assert all("/TH" in test_pdf._kinds(table) for table in made.elements("Table"))
    for number in range(1, len(made) + 1):
        assert not {"H1", "H2", "H3"} & set(made.body(number)[-1].tags), number


def test_cells_of_the_table_do_not_run_into_each_other() -> None:
    numbers = range(2, len(sheets()) + 1)
    number = [n for n in numbers if any(run.text.startswith("+0.444") for run in sheets().body(n))][-1]
    rows: dict[float, list[tuple[float, float]]] = {}
    for run in sheets().body(number):
        if "TD" in run.tags and "Formula" not in run.tags:
            rows.setdefault(round(run.y, 1), []).append((run.x0, run.x1))
    assert len(rows) > 20
    for ends in rows.values():
        ends.sort()
        assert all(right <= left + 0.5 for (_, right), (left, _) in pairwise(ends)), ends
