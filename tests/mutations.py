"""Each requirement shown to be tested: its feature is taken out in a copy of the tree, and its test must then fail.

`python -m tests.mutations [ROW ...]` applies one edit at a time to a temporary copy, runs the named tests there, prints
killed or SURVIVED, and notes the outcome in `tests/mutations.txt`. All of them take ten minutes or more and are no part
of the test suite, which only asserts that each edit still finds its place and that none survived.
"""

from __future__ import annotations

import os
import re
import shutil
import subprocess
import sys
from dataclasses import dataclass
from pathlib import Path
from tempfile import TemporaryDirectory

ROOT = Path(__file__).parents[1]
RESULTS = ROOT / "tests" / "mutations.txt"
_FAILED = 1  # pytest's exit code for tests that failed; anything else is no proof
_SAID = re.compile(r": assert |AssertionError|DID NOT RAISE|substring not found")

TYPST = "calckit/report/assets/report.typ"
PIECES = "calckit/report/assets/pieces.typ"
SHEETS = "calckit/report/assets/sheets.typ"
PAGE = "calckit/report/assets/report.html.j2"
VIEW = "calckit/report/view.py"
LINES = "calckit/report/lines.py"
LOG = "calckit/report/checklog.py"
CHECKED = "calckit/report/checked.py"
ISSUE = "calckit/report/issue.py"
ASCE7 = "calckit/standards/asce7/"

ROWS = "tests/report/test_requirement_rows.py::test_"
PACKAGE = "tests/report/test_requirement_package.py::test_"
OF_PDF = "tests/report/test_pdf.py::test_"
OF_LOG = "tests/report/test_checklog.py::test_"
OF_ISSUE = "tests/report/test_issue.py::test_"
OF_STATUS = "tests/report/test_status.py::test_"
ASKED = "tests/report/test_requirement_questions.py::test_"
OF_QUESTIONS = "tests/standards/asce7/test_questions.py::test_"
OF_CHECK = "tests/report/test_checked.py::test_"


@dataclass(frozen=True)
class Mutation:
    """`old`, which stands once in `file`, is replaced by `new`; then one of `tests` must fail. `rows` are the ids."""

    rows: tuple[str, ...]
    file: str
    old: str
    new: str
    tests: tuple[str, ...]

    @property
    def name(self) -> str:
        """Rows, file and first test."""
        return f"{','.join(self.rows)}: {self.file}: {self.tests[0]}"


def _of(rows: str, file: str, old: str, new: str, *tests: str) -> Mutation:
    return Mutation(tuple(rows.split()), file, old, new, tests)


ALL = [
    _of("A1", TYPST, 'field("Project", strong(sheet-title.project))', 'field("Project", [])',
        ROWS + "a1_a5_project_place_and_number_stand_on_every_sheet"),
    _of("A2", SHEETS, "of #sheet-text(counter(page).final().first())*", "of 99*", ROWS + "a2_sheets_are_counted_truly"),
    _of("A3", TYPST, 'field("Date", sheet-title.date)', 'field("Date", [])',
        ROWS + "a3_revision_and_day_stand_on_every_sheet"),
    _of("A4", TYPST, "#let initials = [initials #blank(38pt) date #blank(50pt)]", "#let initials = []",
        ROWS + "a4_names_with_space_for_initials_and_day"),
    _of("A5", TYPST, 'field("Calculation", strong(sheet-title.number))', 'field("Calculation", [])',
        ROWS + "a1_a5_project_place_and_number_stand_on_every_sheet"),
    _of("A6", PAGE, "{% if line.steps %}{{ formula(line) }}{% endif %}", "",
        ROWS + "a6_each_computed_line_prints_symbols_numbers_and_result"),
    _of("A7", LINES, "return line.source.text()", "return line.source.document",
        ROWS + "a7_each_formula_cites_its_document_and_clause"),
    _of("A8", TYPST, "symbol(s.symbol), s.meaning, s.unit,", 'symbol(s.symbol), "", s.unit,',
        ROWS + "a8_each_symbol_is_defined_at_its_line_and_in_the_list"),
    _of("A9", VIEW, 'units.shown(line.unit) or "number"', "units.shown(line.unit)",
        ROWS + "a9_each_number_has_its_unit_or_is_called_a_number"),
    _of("A10", PAGE, '<p class="meaning">{{ line.source }}', '<p class="meaning">',
        ROWS + "a10_each_input_names_its_source_or_is_called_assumed"),
    _of("A11", PAGE, '{% if line.detail %}<p class="note words">{{ line.detail }}</p>{% endif %}', "",
        ROWS + "a11_look_ups_print_table_row_column_and_neighbors"),
    _of("A12", LINES, "candidates=tuple(self._candidate(candidate) for candidate in line.candidates),",
        "candidates=(),", ROWS + "a12_all_limits_of_c_s_are_printed_and_one_governs"),
    _of("A13", VIEW, "rounded half up; rounding serves printing only.", "rounded half up.",
        ROWS + "a13_rounding_serves_printing_and_is_stated"),
    _of("A14", "templates/building_lateral_force.ipynb", "Weights: {w_x.in_words}.", "Weights as usual.",
        ROWS + "a14_the_sketch_shows_the_levels_of_the_inputs"),
    _of("A15", LINES, "shown=self.shown(line),", "shown=str(line.value),",
        ROWS + "a15_no_list_is_printed_as_a_program_would"),
    _of("A16", VIEW, "tuple(_carried(items, home, number))", "()", ROWS + "a16_sections_end_with_what_they_carry_on"),
    _of("A17", LINES, "text=line.text,", 'text="",', ROWS + "a17_judgments_are_called_so_and_give_their_reason"),
    _of("A18", LINES, "override=self.override(line),", "override=None,",
        ROWS + "a18_an_override_prints_both_values_reason_and_name"),
    _of("A19", PIECES, "#let rule = 0.6pt + black", "#let rule = 0.6pt + red",
        ROWS + "a19_everything_is_drawn_in_black_gray_and_white"),
    _of("A20", ISSUE, 'if cell.kind == "markdown":', 'if cell.kind in ("markdown", "code"):',
        ROWS + "a20_no_code_warning_or_traceback_is_printed"),
    _of("A21", PAGE, '{% elif line.kind == "check" %}ratio {% endif %}', "{% endif %}",
        ROWS + "a21_checks_print_demand_limit_ratio_and_verdict"),
    _of("B1", TYPST, "[CALCULATION]", "[]", PACKAGE + "b1_the_cover_says_what_this_is"),
    _of("B2", TYPST, "([Role], [Printed name], [Signature], [Date])", "([Role], [Printed name], [], [Date])",
        PACKAGE + "b2_e4_the_sign_off_leaves_what_belongs_to_persons_blank"),
    _of("B3", VIEW, '("Unconfirmed assumptions", ("assumption",))', '("Unconfirmed assumptions", ())',
        PACKAGE + "b3_the_cover_counts_what_is_unconfirmed"),
    _of("B4", TYPST, "rect(width: 62mm, height: 58mm, stroke: hair)", "rect(width: 42mm, height: 38mm, stroke: hair)",
        PACKAGE + "b4_the_frame_for_seal_and_signature_is_51_mm_each_way_and_empty"),
    _of("B5", TYPST, 'field("Status", strong(upper(sheet-title.status)))', "[]",
        PACKAGE + "b5_the_status_stands_on_every_sheet"),
    _of("B5", SHEETS, '#let standing = if view.standing != ""', '#let standing = if view.standing == "never"',
        OF_STATUS + "every_sheet_of_a_withdrawn_revision_bears_the_word"),
    _of("B6 E3", VIEW, 'for name in facts["preliminary_fields"])', 'for name in ("Purpose", "Date"))',
        OF_STATUS + "fields_of_a_preliminary_issue_are_a_setting"),
    _of("B6", VIEW, 'if facts["status"] != "preliminary"', 'if facts["status"] != "never"',
        OF_PDF + "a_preliminary_issue_has_fields_in_place_of_the_seal"),
    _of("B7", "calckit/core/calc.py", "if not row[name].strip()", "if name not in row",
        "tests/core/test_sources.py::test_a_revision_without_a_reason_is_refused"),
    _of("B8", TYPST, "outline(title: none)", "[]",
        PACKAGE + "b8_the_contents_name_true_sheets_and_equal_the_bookmarks"),
    _of("B9", VIEW, 'yield "Building code", facts["building_code"] or "not stated"', "",
        PACKAGE + "b9_criteria_stand_before_the_first_line"),
    _of("B10", VIEW, "not_covered=tuple(record.not_covered),", "not_covered=(),",
        PACKAGE + "b10_e2_purpose_field_of_use_and_what_is_not_covered"),
    _of("B11", "calckit/standards/asce7/summary.py", 'else "equivalent lateral force" for by_modes in modal]',
        'else "as usual" for by_modes in modal]', PACKAGE + "b11_the_method_is_named"),
    _of("B12", VIEW, '", ".join(line.shown), line.text, _status(line, lines),',
        '", ".join(line.shown), "", _status(line, lines),',
        PACKAGE + "b12_assumptions_are_numbered_with_basis_use_and_open_item"),
    _of("B13", VIEW, 'dates.get(line.source.document, "") if line.source else ""', '""',
        PACKAGE + "b13_the_input_list_gives_source_day_and_status"),
    _of("B14", TYPST, "str(o.number), o.text, o.owner,", 'str(o.number), o.text, "",',
        PACKAGE + "b14_open_items_are_listed_with_owner_and_line"),
    _of("B15", TYPST, "r.key, r.title, r.author, r.revision,", 'r.key, r.title, r.author, "",',
        PACKAGE + "b15_documents_are_listed_with_edition_and_day"),
    _of("B16", VIEW, 'tuple(software["libraries"].items())', "()",
        PACKAGE + "b16_program_libraries_python_and_platform_are_named"),
    _of("B17", "calckit/standards/asce7/__init__.py", "the command calckit verify asce7 runs", "a command runs",
        PACKAGE + "b17_the_report_says_how_the_kit_is_checked_again"),
    _of("B18", "calckit/core/scope.py", 'self.state(name, usual, "given", source, detail=DEFAULT)', "pass",
        PACKAGE + "b18_what_nobody_typed_is_called_default"),
    _of("B19", TYPST, "for s in view.answer { summary(s) }", "", PACKAGE + "b19_governing_results_stand_on_sheet_2"),
    _of("B20", ASCE7 + "estimate_rules.py", '"100*(V_e/V - 1)"', '"100*(V/V_e - 1)"',
        ASKED + "b20_an_independent_estimate_stands_beside_the_base_shear_with_the_difference"),
    _of("B22", ASCE7 + "site_report.py", "if given == in_use:", "if given:",
        OF_QUESTIONS + "site_class_against_the_report"),
    _of("B21", "calckit/standards/asce7/summary.py", '    ("Response modification coefficient", ("R",)),\n', "",
        PACKAGE + "b21_the_seismic_data_for_the_drawings_are_complete"),
    _of("B23", TYPST, "author: (sheet-title.prepared_by, sheet-title.firm, ()).find(name => name != \"\"),",
        "author: (),", PACKAGE + "b23_title_author_and_language_stand_in_the_metadata"),
    _of("C1", ISSUE, '    if status == "checked" and ', '    if status == "never" and ',
        OF_ISSUE + "what_the_calculation_contradicts_is_refused"),
    _of("C2", CHECKED, '(_LEVEL, facts.get("check_level", "")),', '(_LEVEL, ""),',
        OF_CHECK + "level_and_method_stand_on_the_cover_and_under_check"),
    _of("C3", CHECKED, '(_METHOD, facts.get("check_method", "")),', '(_METHOD, ""),',
        OF_CHECK + "level_and_method_stand_on_the_cover_and_under_check"),
    _of("C6", CHECKED, "_INPUTS: _checked(marks.inputs)}", "_INPUTS: _checked(marks.coverage)}",
        OF_CHECK + "coverage_of_lines_and_of_inputs"),
    _of("C4", PAGE, '<span class="mark" aria-hidden="true"></span>', "",
        PACKAGE + "c4_a_mark_can_stand_against_every_line"),
    _of("C5", LOG, 'unmarked = found.pop("")', 'unmarked = found.pop("")[:1]',
        OF_LOG + "coverage_counts_what_is_agreed_or_verified"),
    _of("C7", "calckit/report/extract.py", "_LEAST = 4", "_LEAST = 9",
        "tests/report/test_extract.py::test_a_planted_result_is_found_in_metadata_and_attachments"),
    _of("C8", "calckit/report/reconcile.py", "gap / abs(own.value) * 100", "gap / abs(checker) * 100",
        "tests/report/test_reconcile.py::test_difference_is_checker_less_originator"),
    _of("C9", LOG, 'if state == "closed" and closer.casefold() != cells["initials"].casefold():', "if False:",
        OF_LOG + "only_who_made_a_comment_closes_it"),
    _of("C10", "calckit/report/compare.py", 'listed = ("inputs", "results",', 'listed = ("inputs",',
        "tests/report/test_compare.py::test_changed_lines"),
    _of("C10", PIECES, 'if line.was != "" { par(was(line.was)) }', "",
        "tests/report/test_revised.py::test_the_old_value_stands_beside_the_result_in_both_files"),
    _of("C11", "calckit/report/changes.py", "moved |= after.keys() - before.keys()", "moved -= before.keys()",
        "tests/report/test_changes.py::test_one_story_weight_lists_the_given_and_every_moved_result_and_nothing_else"),
    _of("C12", LOG, "if line and digits == _mark_of(line)]", "if line]",
        OF_LOG + "a_changed_weight_drops_the_marks_of_what_rests_on_it_and_no_other"),
    _of("C13", VIEW, 'if line.kind in ("given", "assumption") or (line.kind == "judgment" and line.symbol):',
        'if line.kind in ("given", "assumption"):',
        PACKAGE + "c13_every_question_prints_its_answer_or_that_there_is_none"),
    _of(" ".join(f"S{n}" for n in range(1, 23)), ASCE7 + "questions.py", "for question in QUESTIONS)",
        "for question in ())",
        *(f"{ASKED}each_question_prints_in_both_files_with_its_answer_or_as_an_open_item[S{n}]" for n in range(1, 23))),
    _of("S6 S13", ASCE7 + "questions_rules.py", ' Need("A_x amplification", where=_AMPLIFIED)', "",
        OF_QUESTIONS + "irregularities_by_numbers_come_before_answers_and_torsion_asks_for_its_amplification"),
    _of("S19", ASCE7 + "questions.py", "True, OWNER))", "False, OWNER))",
        OF_QUESTIONS + "what_no_line_answers_is_an_open_item_of_the_originator"),
    _of("S21", ASCE7 + "questions.py", 'return "" if need.text in line.text else', 'return "" if True else',
        OF_QUESTIONS + "cracked_stiffness_is_read_from_what_was_said_of_the_model"),
    _of("D1", PAGE, "default-src 'none'; style-src", "default-src *; style-src",
        PACKAGE + "d1_the_page_needs_no_script_and_no_network"),
    _of("D2", "calckit/report/signature.py", '"sha1": item.sha1,', '"sha1": item.sha256,',
        "tests/report/test_signature.py::test_the_sheet_lists_each_file_with_size_digests_and_description"),
    _of("D3", ISSUE, '= ("preliminary", "for check")', '= ("preliminary", "for check", "checked")',
        OF_ISSUE + "any_other_status_is_never_overwritten"),
    _of("D4", TYPST, '    ("SHA-256 of the source", raw(s.source)),\n', "",
        PACKAGE + "d4_hashes_stand_in_full_once_and_short_on_every_sheet"),
    _of("D5", "calckit/report/attachments.py", "Attachment(SETTINGS, self.settings,", 'Attachment(SETTINGS, b"{}",',
        PACKAGE + "d5_source_settings_and_record_are_inside"),
    _of("D6", "calckit/report/run.py", 'skip_cells_with_tag="",', 'skip_cells_with_tag="skip-execution",',
        "tests/report/test_run.py::test_every_cell_runs_once_in_order_and_clean"),
    _of("D7", "calckit/report/pdf.py", "timestamp=int(day.timestamp()),",
        "timestamp=__import__('time').time_ns() // 10**9,",
        "tests/report/test_issue_whole.py::test_the_same_bytes_a_month_later_elsewhere"),
    _of("D8", PIECES, "table.hline(stroke: rule), table.header(..head.map(note)), table.hline(stroke: hair),",
        "table.hline(stroke: rule), ..head.map(note), table.hline(stroke: hair),",
        OF_PDF + "tables_have_header_cells"),
    _of("E1", "calckit/core/record.py", 'OK = "OK"', 'OK = "approved"',
        PACKAGE + "e1_the_kit_never_says_that_anything_is_in_order"),
    _of("E2", VIEW, "field_of_use=tuple(record.field_of_use),", "field_of_use=(),",
        PACKAGE + "b10_e2_purpose_field_of_use_and_what_is_not_covered"),
    _of("E4", VIEW, 'facts["checked_by"], ""), strict=True', 'facts["checked_by"], "J. Doe"), strict=True',
        PACKAGE + "b2_e4_the_sign_off_leaves_what_belongs_to_persons_blank"),
    _of("E5", VIEW, "ReferenceView(**document, refs=", 'ReferenceView(**{**document, "date": ""}, refs=',
        PACKAGE + "e5_hazard_values_name_their_authority_and_the_kit_does_not_vouch"),
    _of("E6", "calckit/standards/asce7/formulas.py", 'rule("12.7.2")', 'rule("12.7.2, all dead load and more")',
        PACKAGE + "e6_the_standard_is_cited_by_number_alone"),
]  # fmt: skip
"""One edit for each requirement that has a test."""


def outcome(mutation: Mutation, tree: Path) -> str:
    """Apply an edit in a copy of the tree, run its tests there and undo it: "killed", or "SURVIVED" and why."""
    place = tree / mutation.file
    text = place.read_text(encoding="utf-8")
    place.write_text(text.replace(mutation.old, mutation.new), encoding="utf-8")
    command = [sys.executable, "-m", "pytest", "-qx", "-n0", "--tb=line", "-p", "no:cacheprovider", *mutation.tests]
    environment = {**os.environ, "PYTHONPATH": str(tree), "PYTHONDONTWRITEBYTECODE": "1"}
    result = subprocess.run(command, cwd=tree, env=environment, capture_output=True, text=True, check=False)
    place.write_text(text, encoding="utf-8")
    if result.returncode != _FAILED:
        return f"SURVIVED, exit {result.returncode}"
    said = _SAID.search(result.stdout)
    return "killed" if said else "SURVIVED, the test broke and did not fail"


def main(wanted: list[str]) -> int:
    """Run the mutations of these rows, or all, and note each outcome; the exit code is 1 if any survived."""
    said = RESULTS.read_text(encoding="utf-8").splitlines() if RESULTS.exists() else []
    lines = {line.partition(": ")[2]: line for line in said if line.startswith(("killed", "SURVIVED"))}
    survived = False
    with TemporaryDirectory(prefix="calckit-mutations-") as folder:
        tree = Path(folder) / "tree"
        shutil.copytree(ROOT, tree, ignore=shutil.ignore_patterns(".*", "__pycache__"))
        for mutation in ALL:
            if not wanted or set(wanted) & set(mutation.rows):
                found = outcome(mutation, tree)
                survived |= found != "killed"
                lines[mutation.name] = f"{found}: {mutation.name}"
                sys.stdout.write(lines[mutation.name] + "\n")
                sys.stdout.flush()
    head = "The last outcome of each edit of `python -m tests.mutations`: row, edited file, test."
    kept = [lines[mutation.name] for mutation in ALL if mutation.name in lines]
    RESULTS.write_text("\n".join([head, "", *kept, ""]), encoding="utf-8")
    return int(survived)


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
