"""Reviewers' questions, the second estimate of the base shear, the site class against its report; both editions."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

import numpy as np
import pytest

from calckit.core.assemble import assemble
from calckit.core.calc import Calc
from calckit.core.standard import edition
from calckit.errors import InputError
from calckit.report.reevaluate import reevaluate
from calckit.standards.asce7.declared import SYMBOLS
from calckit.standards.asce7.questions_rules import QUESTIONS
from tests.building import Building

from .building import NAMES, WEIGHTS, open_flags, start, value, whole


def worked(second: bool = True, units: str = "US") -> Calc:
    """The building of two directions."""
    return Building(second=second).calc(number="D-1", units=units)


def displaced(calc: Calc, displacements: Sequence[float]) -> None:
    """Paste displacements in inches, roof first."""
    rows = [f"{name}, {d:.6f}" for name, d in zip(NAMES, displacements, strict=True)]
    calc.rows("displacements", "\n".join(["level, delta_xe [in]", *rows]), source="P")


def asked(calc: Calc, id_: str) -> Any:
    """The note of one question; the questions are put once."""
    if "review_Q1" not in calc.lines.entries:
        calc.asce7.reviewers_questions()
    return calc.lines.entries[f"review_{id_}"].line


# --- the questions


def test_all_22_questions_print_in_order_and_each_can_be_answered_as_not_applicable() -> None:
    made = worked().asce7.reviewers_questions()
    numbers = [f"Q{n}" for n in range(1, 23)]
    assert [handle.line.meaning.split()[0] for handle in made] == numbers
    assert [each.id for each in QUESTIONS] == numbers
    assert all(SYMBOLS[number].choices == ("n/a",) for number in numbers)


def test_every_name_that_a_question_asks_for_is_one_the_kit_can_write() -> None:
    # a symbol, or the id of a check or note that a step writes
    ids = {
        "site_report", "floor_S_DS", "system_permitted", "f_collector_open", "discontinuous_open", "model_3d_open",
        "prohibited", "procedure", "S_DS_limited", "sum_of_lateral_forces_equals_base_shear", "amplification", "drift",
        "stability", "transfer", "connections", "collectors", "combinations", "directions", "uplift_strength",
        "uplift_allowable", "modes_enough",
    }  # fmt: skip
    texts = [need.names for each in QUESTIONS for need in each.needs]
    texts += [names for each in QUESTIONS for need in each.needs for names, _ in need.where]
    names = {name for text in [*texts, *(f"{q.also} {q.rests}" for q in QUESTIONS)] for name in text.split()}
    assert {name.removesuffix("_found") for name in names} - ids - edition("ASCE 7-16").symbols.keys() == set()
    assert ids <= names


def test_lines_answer_and_the_note_rests_on_them() -> None:
    line = asked(worked(), "Q5")
    assert line.text == (
        "X: System and height permitted OK, R = 8, Ω_0 = 3, C_d = 5.5; "
        "Y: System and height permitted OK, R = 6, Ω_0 = 2, C_d = 5, h_limit = 160 ft"
    )
    assert [*line.inputs][:4] == ["X.system_permitted", "X.R", "X.Omega_0", "X.C_d"]
    assert (line.kind, line.detail, line.flags) == ("note", "", [])
    assert all(operand.content for operand in line.inputs.values())


def test_what_no_line_answers_is_an_open_item_of_the_originator() -> None:
    calc = worked()
    line = asked(calc, "Q19")
    assert line.detail == "not answered: X: directions; Y: directions"
    items = [(item.text, item.owner) for item in assemble(calc).open_items if item.line == "review_Q19"]
    assert items == [(f"{line.meaning}: {line.detail}", "originator")]
    assert [operand.is_absent() for operand in line.inputs.values()] == [True, True]


def test_a_check_not_made_and_a_question_not_answered_are_no_answers_and_not_ok_is_one() -> None:
    calc = worked(second=False)
    calc.answer("torsion", "not answered")
    assert asked(calc, "Q16").detail == "not answered: X: stability (NOT CHECKED); Y: stability (NOT CHECKED)"
    assert asked(calc, "Q13").detail.startswith("not answered: X: torsion (not answered), H1a; Y: torsion")
    high = whole(h_n="330 ft", system="building frame: steel special concentrically braced frame")
    line = asked(high, "Q5")
    assert line.text.startswith("System and height permitted NOT OK, R = 6") and line.detail == ""


def test_not_applicable_with_its_reason_closes_a_question_and_without_one_stays_open() -> None:
    calc = worked()
    calc.answer("Q21", "n/a", basis="steel frames, nothing cracks")
    line = asked(calc, "Q21")
    assert (line.text, line.detail) == ("n/a because: steel frames, nothing cracks (Q21)", "")
    assert [*line.inputs] == ["Q21"]
    calc = worked()
    calc.answer("Q19", "n/a")
    assert asked(calc, "Q19").text == "n/a because: no reason given (Q19)"
    assert open_flags(calc, "Q19") == [f"Q19 is answered without a basis: {SYMBOLS['Q19'].meaning}"]
    with pytest.raises(InputError, match=r"Q19 .*needed one of n/a; given fine"):
        calc.answer("Q19", "fine", basis="because")


def test_not_applicable_for_one_direction_leaves_the_other_open() -> None:
    calc = worked()
    calc.parts["X"].answer("Q22", "n/a", basis="on existing piers")
    line = asked(calc, "Q22")
    assert line.text == "n/a because: on existing piers (X.Q22)"
    assert line.detail == "not answered: Y: M_b, M_f, uplift_strength"


def test_modal_analysis_and_the_limit_on_S_DS_do_not_apply_unless_used() -> None:
    calc = worked()
    assert asked(calc, "Q20").text.startswith("n/a because the lateral forces here are static: X: V = ")
    assert asked(calc, "Q11").text.startswith("n/a because the limit of 12.8.1.3 is not taken: X: C_s,basic = ")
    taken = whole(S_DS_limit="taken")
    line = asked(taken, "Q11")
    assert (line.text, line.detail) == ("", "not answered: S_DS_limited")
    taken = whole(S_DS_limit="taken")
    taken.asce7.short_building_limit()
    line = asked(taken, "Q11")
    assert (line.text, line.detail) == ("Conditions of the limit on S_DS NOT OK", "")


def test_irregularities_by_numbers_come_before_answers_and_torsion_asks_for_its_amplification() -> None:
    calc = worked()
    x = calc.parts["X"]
    x.answers("H1a; no; model\nH2; no; plan")
    x.rows("ends", "level, d_1plus [in], d_2plus [in]\nRoof, 3.0, 1.0\n6, 2.5, 0.9\n5, 2.0, 0.8\n4, 1.5, 0.7\n"
           "3, 1.0, 0.5\n2, 0.5, 0.2", source="D-1")  # fmt: skip
    x.answer("torsion", "yes", basis="model")
    x.asce7.end_displacements()
    assert asked(calc, "Q6").text.startswith("X: H1a_found yes, H1b_found yes, H2 no")
    line = asked(calc, "Q13")
    assert line.text == "X: torsion yes, H1a_found yes, A_x, r_D,+" and line.detail == "not answered: Y: torsion, H1a"
    answered = worked()
    answered.parts["X"].answer("H1a", "yes", basis="model")
    assert asked(answered, "Q13").detail == "not answered: X: torsion, A_x; Y: torsion, H1a"


def test_cracked_stiffness_is_read_from_what_was_said_of_the_model() -> None:
    silent = whole()
    silent.analysis(V_applied="90 kip")
    assert asked(silent, "Q21").detail == "not answered: V_applied (does not say stiffness)"
    calc = whole()
    calc.analysis(V_applied="90 kip", stiffness="half of gross for walls")
    assert (asked(calc, "Q21").detail, asked(calc, "Q21").text) == ("", "V_applied = 90 kip")


def test_a_note_goes_stale_when_what_it_missed_comes() -> None:
    calc = worked()
    asked(calc, "Q14")
    assert "review_Q21" not in calc.lines.stale()
    calc.parts["X"].analysis(V_applied="90 kip", stiffness="gross")
    assert calc.lines.stale()["review_Q21"] == ["X.V_applied"]


@pytest.mark.parametrize("standard", ["ASCE 7-16", "ASCE 7-22"])
def test_questions_without_parts_in_both_editions(standard: str) -> None:
    calc = Calc(project="Demo", number="D-1", standard=standard)
    line = asked(calc, "Q1")
    assert line.detail == "not answered: risk_category, I_e" and line.text == ""
    assert len(assemble(calc).open_items) == 22 - len(("Q11", "Q20"))


# --- the second estimate


@pytest.mark.parametrize("units", ["US", "SI"])
def test_the_estimate_by_stories_stands_beside_the_base_shear_with_its_difference(units: str) -> None:
    calc = whole(units)
    calc.asce7.second_estimate()
    S_D1, weight = value(calc, "S_D1"), value(calc, "W")
    assert value(calc, "T_e") == pytest.approx(0.5)  # five stories of a moment frame
    by_hand = min(value(calc, "S_DS"), S_D1 / 0.5) / 8 * weight
    assert value(calc, "V_e") == pytest.approx(by_hand, rel=1e-9)
    assert value(calc, "e_V") == pytest.approx((by_hand / value(calc, "V") - 1) * 100, rel=1e-9)
    line = calc.lines.entries["e_V"].line
    assert line.detail == "differences over 30 % ask for an explanation (common practice, no source)"
    assert line.verdict is None and line.source.text() == "estimate by the kit's authors, no clause"
    assert reevaluate(assemble(calc)).faults == []


def test_over_30_percent_is_an_open_item_and_below_it_is_none() -> None:
    calc = worked(second=False)
    for part in calc.parts.values():
        part.asce7.second_estimate()
    assert [calc.lines.entries[f"{part}.e_V"].line.shown for part in "XY"] == ["55.4", "14.5"]
    assert open_flags(calc, "X.e_V") == ["X.e_V: 55.4 % is over 30 %; explain the difference of V_e from V"]
    assert open_flags(calc, "Y.e_V") == []


def test_stiff_systems_take_half_of_the_rule_for_frames() -> None:
    calc = whole(system="building frame: steel special concentrically braced frame")
    calc.asce7.second_estimate()
    assert value(calc, "T_e") == pytest.approx(0.25)


def test_the_period_by_displacements_against_the_eigenvalues_of_a_shear_building() -> None:
    # Rayleigh's quotient is not below the first eigenvalue of K u = w^2 M u, and close to it (numpy.linalg, public)
    calc = whole()
    forces = np.array(value(calc, "F_x"))  # kip, roof first
    stiffness = np.array([300.0, 380.0, 450.0, 500.0, 520.0])  # kip/in of the story below each level
    displacements = np.cumsum((np.cumsum(forces) / stiffness)[::-1])[::-1]
    displaced(calc, displacements.tolist())
    calc.asce7.second_estimate()
    K = np.zeros((5, 5))
    for story, k in enumerate(stiffness):
        K[story, story] += k
        if story < 4:
            K[story + 1, story + 1] += k
            K[story, story + 1] -= k
            K[story + 1, story] -= k
    mass = np.array(WEIGHTS) / 386.0886  # kip s2/in
    first = min(np.linalg.eigvals(K / mass[:, None]).real)
    exact = 2 * math.pi / math.sqrt(first)
    assert exact * 0.99 < value(calc, "T_e") <= exact * 1.000001


def test_displacements_of_a_model_with_another_shear_give_the_same_period() -> None:
    displacements = (2.0, 1.7, 1.3, 0.8, 0.4)
    plain, double = whole(), whole()
    displaced(plain, displacements)
    displaced(double, [2 * d for d in displacements])
    double.analysis(V_applied=f"{2 * value(double, 'V'):.9f} kip")
    for calc in (plain, double):
        calc.asce7.second_estimate()
    assert value(double, "T_e") == pytest.approx(value(plain, "T_e"), rel=1e-7)


def test_no_estimate_by_stories_where_T_a_is_by_stories_and_missing_inputs_are_named_at_once() -> None:
    calc = whole(T_a_method="stories")
    line = calc.asce7.second_estimate().line
    assert line.verdict == "NOT CHECKED" and line.missing.endswith("T_a is by the stories already")
    with pytest.raises(InputError, match=r"(?s)S_DS .*S_D1 .*w_x .*F_x "):
        start().asce7.second_estimate()


# --- the site class against its report


@pytest.mark.parametrize(
    ("in_use", "said", "verdict", "words"),
    [
        ("C", "C", "OK", "P gives class C, which is in use"),
        ("C", "D", "NOT OK", "P gives class D; in use is C"),
        ("D default", "none: not bored", "OK", "no report (not bored): class D default is declared a default"),
        ("D", "none: no borings yet", "NOT CHECKED", ""),
        ("C", "", "NOT CHECKED", ""),
    ],
)
def test_site_class_against_the_report(in_use: str, said: str, verdict: str, words: str) -> None:
    calc = start(site_class=in_use, **({"report_class": said} if said else {}))
    line = calc.asce7.site_report().line
    assert (line.verdict, line.detail) == (verdict, words)
    if verdict == "NOT CHECKED":
        assert line.missing == "report_class (site class that the geotechnical report gives)"
    with pytest.raises(InputError, match="site_class"):
        start().asce7.site_report()


# --- margins of torsion


def test_the_ratio_of_end_drifts_says_how_near_the_next_type_is() -> None:
    for first, text in ((1.14, "largest r_D,+ 5.0 % below 1.2, above which H1a is present"),
                        (1.33, "largest r_D,+ 5.0 % below 1.4, above which H1b is present")):  # fmt: skip
        calc = start(SDC="D")
        calc.rows("ends", f"story, d_1plus [in], d_2plus [in]\nR, {first}, {2 - first:.2f}", source="P")
        calc.asce7.end_displacements()
        margin = calc.lines.entries["r_Dplus"].line.margin
        assert margin is not None and f"{margin.shown} {margin.to}" == text
    margin = calc.lines.entries["A_x"].line.margin
    assert margin is not None and margin.to == "below 3, its upper limit"


def test_modal_analysis_is_answered_by_its_lines_where_there_are_modes() -> None:
    (question,) = (each for each in QUESTIONS if each.id == "Q20")
    words = dict(question.needs[0].where)["modal_model"]
    assert set(words) == set(edition("ASCE 7-16").symbols["modal_model"].choices)
