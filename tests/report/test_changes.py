"""What differs between two records: on runs of the building template, and on records changed by hand."""

from __future__ import annotations

import copy
import re
from collections.abc import Callable
from dataclasses import asdict
from pathlib import Path

import pytest

from calckit.core.record import TO_BE_CONFIRMED, Enclosure, Flag, Line, Margin, OpenItem, Operand, Override, Record
from calckit.report.changes import HEADINGS, Change, Changed, Changes, between
from calckit.report.line_changes import Step
from tests import template_runs
from tests.template_runs import SECOND_PASS, template

LEVELS = """\
level, h_x [ft], w_x [kip]
Roof, 80, 880
6, 67, 1020
5, 54, 1020
4, 41, 1020
3, 28, 1020
2, 15, 1100
"""


@pytest.fixture(scope="session")
def first() -> Record:
    """The template as it is committed."""
    return template()


def with_levels(folder: Path, text: str) -> Record:
    (folder / "levels.csv").write_text(text, encoding="utf-8")
    return template({"levels": "@levels.csv"}, folder)


def filled(changed: Changed) -> dict[str, list[str]]:
    """The ids in each group that holds something."""
    return {name: [change.id for change in changes] for name, _, changes in changed.groups() if changes}


def one(changes: Changes, id_: str) -> Change:
    (found,) = [change for change in changes if change.id == id_]
    return found


def dependants(record: Record, id_: str) -> set[str]:
    """Every line that rests on a line, by the operands and candidates that the lines themselves name."""
    found: set[str] = set()
    front = {id_}
    while front:
        named = ((line.id, {*line.inputs, *(c.line for c in line.candidates)}) for line in record.lines)
        front = {user for user, names in named if names & front} - found
        found |= front
    return found


# --- runs of the template


def test_one_story_weight_lists_the_given_and_every_moved_result_and_nothing_else(tmp_path: Path) -> None:
    old = with_levels(tmp_path, LEVELS)
    new = with_levels(tmp_path, LEVELS.replace("4, 41, 1020", "4, 41, 1100"))
    changed = between(old, new)
    before = {line.id: line for line in old.lines}
    moved = {line.id for line in new.lines if line.value != before[line.id].value}
    # a check whose ratio prints as zero both times holds what rounding leaves of a difference that is zero
    residue = {id_ for id_ in moved if all(line.shown in ("0", "0.0000") for line in (before[id_], new.line(id_)))}
    assert all(new.line(id_).verdict == "OK" for id_ in residue)
    assert filled(changed).keys() == {"inputs", "results"}
    assert changed.inputs == (
        Change("w_x", 35, 35, "effective seismic weight of level x",
               (Step("row 4", "1020 kip", "1100 kip", "+7.8 %"),), "S-100"),
    )  # fmt: skip
    assert {change.id for change in changed.results} == moved - {"w_x"} - residue
    assert {change.id for change in changed.results} <= dependants(new, "w_x")
    assert len(changed.results) >= 15
    for change in changed.results:
        through = change.note.removeprefix("through ").split(", ")
        assert set(through) == set(new.line(change.id).inputs) & moved
    assert changed.renumbered == 0


def test_a_result_by_level_gives_the_entry_that_moved_most_and_each_row(tmp_path: Path) -> None:
    old = with_levels(tmp_path, LEVELS)
    new = with_levels(tmp_path, LEVELS.replace("4, 41, 1020", "4, 41, 1100"))
    steps = one(between(old, new).results, "X.F_x").steps
    assert [step.what for step in steps] == [
        "moved most, row 4", "row Roof", "row 6", "row 5", "row 4", "row 3", "row 2",
    ]  # fmt: skip
    for step in steps:
        row = step.what.rpartition("row ")[2]
        for record, shown in ((old, step.old), (new, step.new)):
            entry = record.line("X.F_x")
            assert shown == f"{entry.shown[entry.rows.index(row)]} kip"
    # 40.15/37.15 - 1, by pocket calculator
    assert (steps[0].old, steps[0].new, steps[0].change) == ("37.15 kip", "40.15 kip", "+8.1 %")


def test_levels_that_come_and_go(tmp_path: Path) -> None:
    old = with_levels(tmp_path, LEVELS)
    new = with_levels(tmp_path, LEVELS.replace("6, 67", "6A, 67"))
    steps = one(between(old, new).inputs, "w_x").steps
    assert steps == (Step("row 6A", "none", "1020 kip"), Step("row 6", "1020 kip", "none"))


def test_a_hazard_value_flips_what_governs(first: Record) -> None:
    changed = between(first, template({"S_S": "1.1"}))
    assert filled(changed).keys() == {"inputs", "formulas", "decisions", "results", "margins"}
    assert one(changed.inputs, "S_S").steps == (Step("", "0.68", "1.1", "+61.8 %"),)
    assert one(changed.decisions, "X.C_s") == Change(
        "X.C_s", 66, 66, "seismic response coefficient", (Step("governs", "12.8-3", "12.8-5"),),
        "through X.C_sbasic, X.C_sfloor",
    )  # fmt: skip
    assert one(changed.formulas, "F_a").steps[1] == Step(
        "look-up", "Table 11.4-1, row C, between columns 0.5: 1.3 and 0.75: 1.2",
        "Table 11.4-1, row C, between columns 1.0: 1.2 and 1.25: 1.2",
    )  # fmt: skip
    assert one(changed.results, "F_a").note == "own look-up and through S_S"
    assert one(changed.results, "X.C_s").steps == (Step("", "0.04357", "0.04840", "+11.1 %"),)
    assert one(changed.margins, "SDC_DS").steps[0].old == "S_DS 11.3 % above category C"


def test_a_category_is_a_decision(first: Record) -> None:
    changed = between(first, template({"S_S": "0.30", "S_1": "0.10"}))
    assert Step("", "D", "B") in one(changed.decisions, "SDC").steps
    assert "SDC" not in filled(changed)["results"]


def test_another_system_brings_a_line_a_verdict_and_an_open_item(first: Record) -> None:
    changed = between(first, template({"X.system": "moment frame: steel intermediate moment frame"}))
    assert [(c.id, c.old_n, c.new_n, c.steps[0].new) for c in changed.added] == [("X.h_limit", 0, 28, "35 ft")]
    permitted = one(changed.decisions, "X.system_permitted")
    assert permitted.steps[0] == Step("verdict", "OK", "NOT OK")
    assert (permitted.old_n, permitted.new_n) == (28, 29)
    assert permitted.note == "own formula or clause and through X.h_limit"
    assert one(changed.opened, "X.system_permitted").meaning == "X: System and height permitted: not met"
    assert changed.renumbered == len(first.lines) - 27
    assert one(changed.results, "X.R").steps == (Step("", "8", "4.5", "-43.8 %"),)
    back = between(template({"X.system": "moment frame: steel intermediate moment frame"}), first)
    assert [(c.id, c.old_n, c.new_n, c.steps[0].old) for c in back.removed] == [("X.h_limit", 28, 0, "35 ft")]
    assert [c.id for c in back.closed] == ["X.system_permitted"]


def test_an_answered_question(first: Record) -> None:
    changed = between(first, template({"X.H1a": "no"}))
    assert filled(changed) == {
        "inputs": ["X.H1a"], "decisions": ["X.procedure"], "closed": ["X.H1a"], "restated": ["X.procedure"],
    }  # fmt: skip
    assert changed.inputs[0].steps == (Step("", "not answered", "no"),)
    assert changed.decisions[0].steps == (
        Step(
            "verdict", "NOT CHECKED, missing answers H1a, H1b, V1a, V1b", "NOT CHECKED, missing answers H1b, V1a, V1b"
        ),
    )


def test_the_second_pass(first: Record, tmp_path: Path) -> None:
    (tmp_path / "levels.csv").write_text(template_runs.LEVELS, encoding="utf-8")
    changed = between(first, template(SECOND_PASS, tmp_path))
    assert one(changed.inputs, "X.T_analysis").steps == (Step("", "none: model not run yet", "1.2 s"),)
    assert Step("governs", "approximate period", "analysis") in one(changed.decisions, "X.T").steps
    assert Step("formula", "T_a", "min(T_analysis, T_max)") in one(changed.formulas, "X.T").steps
    assert one(changed.decisions, "X.drift").steps[0].new == "OK"
    assert {"X.drift", "Y.stability", "X.H1a"} <= {change.id for change in changed.closed}


def test_the_same_calculation_in_the_other_units_moves_nothing_but_what_is_empirical() -> None:
    old = Record({}, [Line("h", "given", value=80.0, unit="ft", shown="80 ft", n=1),
                      Line("M", "computed", value=100.0, unit="kip*ft", shown="100.0 kip·ft", n=2)])  # fmt: skip
    new = Record({}, [Line("h", "given", value=24.384, unit="m", shown="24.384 m", n=1),
                      Line("M", "computed", value=135.581794833, unit="kN*m", shown="135.6 kN·m", n=2)])  # fmt: skip
    changed = between(old, new)
    assert filled(changed) == {"inputs": ["h"], "units": ["M"]}
    assert changed.inputs[0].steps == (Step("unit", "ft", "m", "same quantity"),)
    new.lines[1].value = 135.6
    assert filled(between(old, new)) == {"inputs": ["h"], "results": ["M"]}


# --- records changed by hand


def _given(record: Record) -> None:
    line = record.line("S_S")
    assert line.source
    line.source.where = "p. 4"


def _document(record: Record) -> None:
    record.calculation["documents"][1]["date"] = "2027-01-05"


def _typed(record: Record) -> None:
    record.line("h_n").shown = "80.0 ft"


def _basis(record: Record) -> None:
    record.line("X.H2").text = "plan has one short wing"


def _kind(record: Record) -> None:
    record.line("S_1").kind = "assumption"


def _formula(record: Record) -> None:
    line = record.line("X.V")
    line.formula, line.forms["plain"] = "C_s*W*1.0", ["C_s × W × 1.0", "..."]


def _clause(record: Record) -> None:
    line = record.line("S_MS")
    assert line.source
    line.source.equation = "11.4-9"


def _operand(record: Record) -> None:
    line = record.line("X.V")
    line.inputs = {"X.C_s": line.inputs["X.C_s"], "X.W": line.inputs["W"]}


def _flag(record: Record) -> None:
    record.line("X.T_a").flags.append(Flag("h_n typed in place"))


def _case(record: Record) -> None:
    record.line("X.k").detail = "1 up to 0.5 s"


def _applies(record: Record) -> None:
    record.line("X.C_s").candidates[1].reason = "upper limit for T > T_L"


def _margin(record: Record) -> None:
    margin = record.line("SDC_DS").margin
    assert margin
    record.line("SDC_DS").margin = Margin(margin.to, margin.value + 1e-7, margin.unit, margin.shown)


def _override(record: Record) -> None:
    line = record.line("X.V")
    line.computed = Operand(line.value, "kip", "264.0 kip")
    line.override = Override(line.value, "264.0 kip", "as agreed", "J. Doe", "L-3 p. 2")


def _amendment(record: Record) -> None:
    record.calculation["amendments"] = ["County 16.1"]


def _edition(record: Record) -> None:
    record.calculation["standards"][0]["supplements"] = [1, 3]


def _library(record: Record) -> None:
    record.calculation["software"]["libraries"]["sympy"] = "1.15"


def _enclosure(record: Record) -> None:
    record.enclosures.append(Enclosure("H-2", "hazard.pdf", "1-4", "printout"))


def _owner(record: Record) -> None:
    record.open_items[0].owner = "checker"


def _opened(record: Record) -> None:
    record.open_items.append(OpenItem("override-q", "", "the override of q meets no value", "originator", "open"))


def _closed_by_note(record: Record) -> None:
    record.lines.append(Line("N-done", "note", text="model run", closes="N-roof", n=len(record.lines) + 1))
    record.open_items = [item for item in record.open_items if item.line != "N-roof"]


def _confirmed(record: Record) -> None:
    for line in record.lines:
        if line.source and line.source.where == "Table 12.8-2":
            line.source.confirmed = "confirmed in R-1 by R. Roe, 2026-12-01"
    record.open_items = [item for item in record.open_items if item.id != "confirm-Table 12.8-2"]


def _note(record: Record) -> None:
    record.line("N-roof").text = "Run the model with cracked stiffness."


def _meaning(record: Record) -> None:
    record.line("X.V").meaning = "base shear of the direction"


def _digit(record: Record) -> None:
    record.line("X.V").value = 264.02000001


BY_HAND: list[tuple[Callable[[Record], None], str, str, list[tuple[str, str, str]]]] = [
    (_given, "inputs", "S_S", [("source", "H-2 p. 1 (Hazard printout, 2026-10-02)",
                                "H-2 p. 4 (Hazard printout, 2026-10-02)")]),
    (_document, "criteria", "document H-2", [("", "title Hazard printout; date 2026-10-02",
                                              "title Hazard printout; date 2027-01-05")]),
    (_typed, "inputs", "h_n", [("as typed", "80 ft", "80.0 ft")]),
    (_basis, "inputs", "X.H2", [("basis", "rectangular plan", "plan has one short wing")]),
    (_kind, "inputs", "S_1", [("kind", "input", "assumption")]),
    (_formula, "formulas", "X.V", [("formula", "C_s × W", "C_s × W × 1.0")]),
    (_clause, "formulas", "S_MS", [("source", "ASCE/SEI 7-16 11.4.4, eq. 11.4-1", "ASCE/SEI 7-16 11.4.4, eq. 11.4-9")]),
    (_operand, "formulas", "X.V", [("rests on", "X.C_s, W", "X.C_s, X.W")]),
    (_flag, "decisions", "X.T_a", [("flag", "none", "h_n typed in place")]),
    (_case, "decisions", "X.k", [("case", "linear between 0.5 and 2.5 s; with T in s", "1 up to 0.5 s")]),
    (_applies, "decisions", "X.C_s", [("applies as", "upper limit for T ≤ T_L", "upper limit for T > T_L")]),
    (_override, "overrides", "X.V", [("override", "none", "264.0 kip; reason: as agreed; by J. Doe; L-3 p. 2")]),
    (_amendment, "criteria", "amendments", [("", "none", "County 16.1")]),
    (_library, "criteria", "software: sympy", [("", "1.14.0", "1.15")]),
    (_enclosure, "criteria", "enclosure H-2", [("", "none", "hazard.pdf, pages 1-4; printout")]),
    (_owner, "restated", "X.H1a", [("owner", "originator", "checker")]),
    (_confirmed, "confirmations", "ASCE/SEI 7-16 Table 12.8-2",
     [("", TO_BE_CONFIRMED, "confirmed in R-1 by R. Roe, 2026-12-01")]),
    (_note, "wording", "N-roof",
     [("text", "The weights of the roof equipment are the supplier's first figures; the final ones are awaited.",
       "Run the model with cracked stiffness.")]),
    (_meaning, "wording", "X.V", [("meaning", "base shear", "base shear of the direction")]),
]  # fmt: skip


@pytest.mark.parametrize(("change", "group", "id_", "steps"), BY_HAND, ids=[row[0].__name__ for row in BY_HAND])
def test_one_thing_changed_by_hand_is_listed_alone(
    change: Callable[[Record], None], group: str, id_: str, steps: list[tuple[str, str, str]], first: Record
) -> None:
    new = copy.deepcopy(first)
    change(new)
    changed = between(first, new)
    assert filled(changed) == {group: [id_]}
    assert [(step.what, step.old, step.new) for step in getattr(changed, group)[0].steps] == steps


def test_supplements(first: Record) -> None:
    new = copy.deepcopy(first)
    _edition(new)
    (found,) = between(first, new).criteria
    assert (found.id, found.steps[0].new) == (
        "standard asce7",
        "edition ASCE 7-16; name ASCE/SEI 7-16; supplements 1; 3",
    )


def test_a_value_that_moves_below_the_printed_digits_is_listed_with_the_digits_that_tell(first: Record) -> None:
    new = copy.deepcopy(first)
    _digit(new)
    (moved,) = between(first, new).results
    (step,) = moved.steps
    assert re.fullmatch(r"264\.0 kip \(264\.0\d+\)", step.old)
    assert re.fullmatch(r"264\.0 kip \(264\.0\d+\)", step.new)
    assert step.old != step.new
    assert re.fullmatch(r"[+-]\de-0\d %|[+-]0\.0\d+ %", step.change)
    other = copy.deepcopy(first)
    _margin(other)
    (margin,) = between(first, other).margins
    assert margin.steps[0].old != margin.steps[0].new


def test_what_was_zero_has_no_change_in_per_cent() -> None:
    old = Record({}, [Line("q", "computed", value=0.0, unit="kip", shown="0 kip", n=1)])
    new = Record({}, [Line("q", "computed", value=3.0, unit="kip", shown="3 kip", n=1)])
    assert between(old, new).results[0].steps == (Step("", "0 kip", "3 kip", "from 0"),)


def test_the_kit_s_own_value_under_a_standing_override(first: Record) -> None:
    old, new = copy.deepcopy(first), copy.deepcopy(first)
    _override(old)
    _override(new)
    new.line("X.V").computed = Operand(270.0, "kip", "270.0 kip")
    changed = between(old, new)
    assert filled(changed) == {"overrides": ["X.V"]}
    assert changed.overrides[0].steps == (Step("the kit's own value", "264.0 kip", "270.0 kip"),)
    gone = between(old, first).overrides
    assert gone[0].steps == (Step("override", "264.0 kip; reason: as agreed; by J. Doe; L-3 p. 2", "none"),)


def test_open_items(first: Record) -> None:
    new = copy.deepcopy(first)
    _opened(new)
    _closed_by_note(new)
    changed = between(first, new)
    assert filled(changed) == {"added": ["N-done"], "opened": ["override-q"], "closed": ["N-roof"]}
    assert changed.closed[0].note == f"closed by line {len(new.lines)}, N-done"
    second = OpenItem("X.H1a-2", "X.H1a", "and its basis is missing", "originator", "open")
    both = copy.deepcopy(first)
    both.open_items.insert(1, second)
    left = copy.deepcopy(first)
    left.open_items[0] = OpenItem("X.H1a-1", "X.H1a", second.text, "originator", "open")
    assert filled(between(both, left)) == {"closed": ["X.H1a"]}  # the item left takes the number of the one closed


def test_a_record_against_itself(first: Record) -> None:
    assert between(first, copy.deepcopy(first)) == Changed(answers=between(first, first).answers)
    assert [name for name, _, _ in Changed().groups()] == list(HEADINGS)


def test_nothing_is_changed_by_looking(first: Record) -> None:
    new = template({"S_S": "1.1"})
    before = asdict(first), asdict(new)
    between(first, new)
    assert (asdict(first), asdict(new)) == before
