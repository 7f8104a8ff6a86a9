"""The document model: what is counted, collected and numbered for both writers."""

from __future__ import annotations

from typing import Any

import pytest

from calckit.core.record import NOT_CHECKED, NOT_OK, OK, TO_BE_CONFIRMED, Candidate, Flag, Line, Record, Source
from calckit.report import view
from calckit.report.model import Block, LineView, Span, View
from tests.report import sample


@pytest.fixture
def record() -> Record:
    return sample.record()


def built(record: Record) -> View:
    return view.build(record, sample.content())


def line(made: View, id_: str) -> LineView:
    return next(item for section in made.sections for item in section.items if item.type == "line" and item.id == id_)


def numbers(refs: Any) -> list[int]:
    return [ref.n for ref in refs]


def heading(level: int, text: str) -> Block:
    return Block("heading", (Span("text", text),), level=level)


# --- sections


def test_headings_of_level_1_and_2_start_sections(record: Record) -> None:
    assert [(section.number, section.title) for section in built(record).sections] == [
        (1, "Demonstration building"), (2, "Documents and hazard"), (3, "Weight"), (4, "Period"), (5, "Base shear"),
        (6, "Forces over the height"), (7, "Drift and stability"), (8, "Notes"),
    ]  # fmt: skip


def test_lines_tables_and_figures_stand_where_their_cell_wrote_them(record: Record) -> None:
    weight = built(record).sections[2].items
    kinds = [(item.type, getattr(item, "id", "")) for item in weight]
    assert kinds == [
        ("line", "w_roof"), ("line", "h_x"), ("line", "w_x"), ("table", "levels"), ("line", "W"),
        ("figure", "elevation"), ("line", "J-snow"),
    ]  # fmt: skip


def test_nothing_is_left_out_where_the_text_is_not_there(record: Record) -> None:
    found = view.build(record, [("cell", 0)])
    assert [section.title for section in found.sections] == ["Calculation", "Further lines"]
    ids = [item.id for section in found.sections for item in section.items if item.type != "prose"]
    everything = [*record.lines, *record.tables, *record.figures]
    assert sorted(ids) == sorted(thing.id for thing in everything)


def test_headings_inside_a_section_skip_no_level(record: Record) -> None:
    text = (heading(2, "A"), heading(5, "B"), heading(6, "C"), heading(3, "D"), heading(4, "E"), heading(2, "F"))
    found = view.build(record, [("prose", text)])
    inner = found.sections[0].items[0]
    assert inner.type == "prose"
    assert [block.level for block in inner.blocks] == [3, 4, 3, 4]
    assert [section.title for section in found.sections] == ["A", "F", "Further lines"]


def test_a_section_names_the_results_that_others_use(record: Record) -> None:
    carried = built(record).sections[4].carried
    assert [(c.name, c.part, c.shown, numbers(c.to)) for c in carried] == [
        ("V", "X", "253.05 kip", [47]), ("V", "Y", "655.20 kip", [50]),
    ]  # fmt: skip


# --- lines


def test_a_line_names_what_it_rests_on_and_what_rests_on_it(record: Record) -> None:
    found = line(built(record), "X.T_a")
    assert numbers(found.inputs) == [6, 19, 20]
    assert numbers(found.used_in) == [24, 25]
    assert [step.plain for step in found.steps] == ["C_t × h_n^x", "0.028 × (67 ft)^0.8"]
    assert (found.shown, found.at, found.label, found.relation) == ("0.8091 s", "", "", False)


def test_a_list_shows_the_row_that_is_worked_and_its_table(record: Record) -> None:
    found = line(built(record), "X.F_x")
    assert (found.shown, found.at, found.table, found.values) == ("78.92 kip", "Roof", 2, ())
    assert (line(built(record), "h_x").shown, line(built(record), "h_x").table) == ("", 1)


def test_a_list_in_no_table_shows_its_values(record: Record) -> None:
    record.tables.clear()
    record.cells = [[entry for entry in cell if entry[0] != "table"] for cell in record.cells]
    assert line(built(record), "h_x").values[:2] == (("Roof", "67"), ("5", "54"))


def test_candidates_that_do_not_govern_are_minor(record: Record) -> None:
    found = [item.id for s in built(record).sections for item in s.items if item.type == "line" and item.minor]
    assert found == ["X.T_max", "Y.T_max", "X.C_sbasic", "X.C_sfloor", "Y.C_sbasic", "Y.C_sfloor"]
    governing = [candidate for candidate in line(built(record), "X.C_s").candidates if candidate.governs]
    assert [(c.equation, c.shown, c.ref and c.ref.id) for c in governing] == [("12.8-3", "0.05021", "X.C_scap")]


def test_a_minor_line_with_something_to_say_is_shown_in_full(record: Record) -> None:
    record.line("X.C_sbasic").flags.append(Flag("near a limit"))
    assert not line(built(record), "X.C_sbasic").minor


def test_a_candidate_that_governs_elsewhere_is_not_minor(record: Record) -> None:
    record.line("X.V").candidates.append(Candidate("12.8-2", 0.1, "", "0.1", "elsewhere", True, "X.C_sbasic"))
    assert not line(built(record), "X.C_sbasic").minor


@pytest.mark.parametrize(
    ("source", "confirmation"),
    [
        (Source("ASCE/SEI 7-16", "12.8", standard=True), TO_BE_CONFIRMED),
        (Source("ASCE/SEI 7-16", "12.8", standard=True, confirmed="confirmed in B by C, D"), "confirmed in B by C, D"),
        (Source("own formula"), ""),
    ],
)
def test_rules_of_a_standard_say_whether_they_were_confirmed(record: Record, source: Source, confirmation: str) -> None:
    record.line("X.V").source = source
    found = line(built(record), "X.V")
    assert (found.source, found.confirmation) == (source.text(), confirmation)


def test_an_override_keeps_the_kits_own_value(record: Record) -> None:
    found = line(built(record), "Y.C_s").override
    assert found is not None
    assert (found.computed, found.in_force, found.reason, found.by) == (
        "0.1157", "0.13", "the owner asks for a margin here", "J. Doe",
    )  # fmt: skip
    assert built(record).overrides == (found,)


# --- flags and open items


def test_open_items_are_numbered_and_a_flag_names_its_number(record: Record) -> None:
    found = built(record)
    assert [item.number for item in found.open_items] == list(range(1, 8))
    assert found.open_items[0].owner == "landscape architect"
    assert [item.number for item in found.to_confirm] == list(range(1, 17))
    flags = line(found, "w_roof").flags
    assert [(flag.number, flag.text, flag.owner) for flag in flags] == [(1, "", "landscape architect")]


def test_a_closed_item_names_the_line_that_closes_it(record: Record) -> None:
    flag = line(built(record), "N-survey").flags[0]
    assert (flag.number, flag.closed_by and flag.closed_by.id) == (0, "N-surveyed")


def test_a_remark_that_the_line_does_not_make_keeps_its_words(record: Record) -> None:
    record.line("X.V").flags.append(Flag("S_DS typed in place: 1.0"))
    record.line("Y.stability").flags.append(Flag("outside the range of the test data"))
    found = built(record)
    assert [flag.text for flag in line(found, "X.V").flags] == ["S_DS typed in place: 1.0"]
    assert [flag.text for flag in line(found, "Y.stability").flags] == ["", "outside the range of the test data"]


def test_what_the_line_says_is_not_said_again(record: Record) -> None:
    found = built(record)
    assert line(found, "Y.C_s").flags == ()
    for id_ in ("X.drift", "Y.stability", "X.N-model", "X.T_analysis"):
        assert [flag.text for flag in line(found, id_).flags] == [""], id_


# --- cover and answer


def test_the_cover_counts_what_is_unsettled(record: Record) -> None:
    found = {statement.label: (statement.text, numbers(statement.refs)) for statement in built(record).statements}
    assert found == {
        "Unconfirmed assumptions": ("1", [13]),
        "Unsettled inputs and answers": ("2", [21, 29]),
        "Checks NOT OK": ("1", [57]),
        "Checks NOT CHECKED": ("1", [58]),
        "Overrides": ("1", [43]),
        "Open items in all": ("7", []),
        "Tables and clauses to be confirmed against the standard": ("16", []),
    }


def test_the_cover_says_none(record: Record) -> None:
    record.lines = [Line("N", "note", text="x", n=1)]
    record.tables, record.figures, record.open_items, record.cells = [], [], [], []
    assert {statement.text for statement in view.build(record, []).statements} == {"none"}


@pytest.mark.parametrize(("checker", "said"), [("j. doe ", True), ("A. Else", False), ("", False)])
def test_the_cover_says_when_the_originator_checks(record: Record, checker: str, said: bool) -> None:
    record.calculation["checked_by"] = checker
    labels = [statement.label for statement in built(record).statements]
    assert ("Self-check" in labels) == said


def test_checks_are_counted_by_verdict(record: Record) -> None:
    found = built(record)
    assert found.counts == ((OK, 1), (NOT_OK, 1), (NOT_CHECKED, 1))
    assert [item.id for item in found.not_met] == ["Y.stability", "X.drift"]


def test_only_a_preliminary_issue_has_fields_for_the_seal(record: Record) -> None:
    assert built(record).seal_fields == ()
    record.calculation["status"] = "preliminary"
    fields = built(record).seal_fields
    assert fields == (("Purpose", "for permit"), ("Engineer of record", ""), ("License number", ""), ("Date", ""))


def test_the_engineer_of_record_is_never_filled_in(record: Record) -> None:
    assert built(record).sign_off == (("Prepared by", "J. Doe"), ("Checked by", ""), ("Engineer of record", ""))


def test_no_revision_row_is_the_first_issue(record: Record) -> None:
    assert [row.revision for row in built(record).revisions] == ["A", "B"]
    record.calculation["revisions"] = []
    first = built(record).revisions
    assert [(row.revision, row.reason, row.by, row.sheets) for row in first] == [("B", "First issue", "J. Doe", "all")]


def test_summaries_point_to_lines(record: Record) -> None:
    rows = dict(built(record).answer[0].rows)
    cells = rows["Base shear V"]
    assert [(cell.text, cell.ref and cell.ref.id) for cell in cells] == [("253.05 kip", "X.V"), ("655.20 kip", "Y.V")]
    assert [cell.ref for cell in rows["Redundancy factor rho"]] == [None, None]


@pytest.mark.parametrize(
    ("supplements", "said"),
    [(None, "not stated"), ([], "none (B-1 section 1)"), ([1, 3], "1, 3 (B-1 section 1)")],
)
def test_supplements_are_stated_or_said_not_to_be(record: Record, supplements: list[int] | None, said: str) -> None:
    record.calculation["standards"][0]["supplements"] = supplements
    assert dict(built(record).criteria)["Supplements in force"] == said


# --- lists


def test_the_input_list_holds_inputs_assumptions_and_answers(record: Record) -> None:
    record.line("J-snow").symbol = "H1a"
    found = {item.ref.id: item for item in built(record).inputs}
    assert {line.id for line in record.lines if line.kind in ("given", "assumption")} | {"J-snow"} == set(found)
    assert (found["S_S"].source, found["S_S"].date, found["S_S"].status) == ("H-2 p. 1", "2026-10-02", "in force")
    assert (found["w_roof"].source, found["w_roof"].status) == ("assumed", "open item 1")
    assert found["T_L"].status == "set at issue"
    assert found["w_x"].shown == "5 values"


def test_assumptions_are_numbered_with_basis_and_use(record: Record) -> None:
    (found,) = built(record).assumptions
    assert (found.number, found.ref.n, found.status) == (1, 13, "open item 1")
    assert found.basis.startswith("12 in of saturated soil")


def test_a_symbol_stands_once_with_its_unit_and_all_its_lines(record: Record) -> None:
    found = {item.symbol.plain: (item.unit, numbers(item.refs)) for item in built(record).symbols}
    assert found["T_a"] == ("s", [22, 30])
    assert found["C_s"] == ("number", [37, 43])
    assert found["T_analysis"] == ("", [21, 29])
    assert len(found) == len(built(record).symbols)


def test_references_name_the_lines_that_cite_them(record: Record) -> None:
    found = {item.key: item for item in built(record).references}
    assert list(found) == ["ASCE/SEI 7-16", "B-1", "H-2", "G-1", "S-100", "S-201", "M-1"]
    assert numbers(found["H-2"].refs) == [2, 3, 4]
    assert found["G-1"].author == "R. Roe"


def test_the_short_hash_is_taken_over_the_three(record: Record) -> None:
    before = built(record).short_hash
    assert len(before) == 8
    for name in ("source", "inputs", "lines_hash"):
        changed = sample.record()
        setattr(changed, name, "0" * 64)
        assert built(changed).short_hash != before


# --- missing data


@pytest.mark.parametrize("name", ["project", "revision", "documents", "software", "notebook", "supplements_source"])
def test_a_missing_field_is_an_error(record: Record, name: str) -> None:
    del record.calculation[name]
    with pytest.raises(KeyError, match=name):
        built(record)


def test_a_missing_form_is_an_error(record: Record) -> None:
    del record.line("X.V").forms["typst"]
    with pytest.raises(KeyError, match="typst"):
        built(record)


def test_a_table_column_without_a_line_is_an_error(record: Record) -> None:
    record.tables[0].columns[0].line = "unknown"
    with pytest.raises(KeyError, match="table 'levels': column 'h_x' has no printed symbol or no line"):
        built(record)


def test_a_line_under_two_cells_is_an_error(record: Record) -> None:
    record.cells[1].append(["line", "S_S"])
    with pytest.raises(KeyError, match="S_S"):
        built(record)
