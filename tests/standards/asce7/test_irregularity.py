"""Irregularities and redundancy of ASCE/SEI 7, rule by rule.

Limits of types H1 to H5 are read in N. Taly, Design of Reinforced Masonry Structures, 2nd edition (ASCE/SEI 7-05 text);
the others are from memory, high, unless a test says so.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import pytest

from calckit.core.assemble import assemble
from calckit.core.calc import Calc
from calckit.errors import InputError

from .building import value

BOTH = ("ASCE 7-16", "ASCE 7-22")
FOUR = ("R", "3", "2", "1")
PLAN = ("H1a", "H1b", "H2", "H3", "H4", "H5")


def start(standard: str = "ASCE 7-16", units: str = "US", category: str = "D", **inputs: Any) -> Calc:
    """A calculation of one design category with these inputs."""
    calc = Calc(project="Demo", number="D-1", standard=standard, units=units)
    calc.document("P", title="Demo data")
    calc.given("SDC", category, source="P")
    for name, raw in inputs.items():
        calc.given(name, raw, source="P")
    return calc


def levels(calc: Calc, names: Sequence[str] = FOUR, weights: Sequence[float] = (), height: float = 12) -> None:
    """Stories of one height, roof first."""
    weights = weights or [100] * len(names)
    rows = [f"{name}, {height * (len(names) - i)}, {w}" for i, (name, w) in enumerate(zip(names, weights, strict=True))]
    calc.levels("\n".join(["level, h_x [ft], w_x [kip]", *rows]), source="P")


def paste(
    calc: Calc, header: str, columns: Sequence[Sequence[float]], names: Sequence[str] = FOUR, id_: str = "t"
) -> None:
    """Paste columns over rows."""
    rows = [", ".join(map(str, row)) for row in zip(names, *columns, strict=True)]
    calc.rows(id_, "\n".join([f"story, {header}", *rows]), source="P")


def ends(calc: Calc, first: Sequence[float], second: Sequence[float], names: Sequence[str] = ("R", "1")) -> None:
    """Displacements of both ends for one shift of the mass, in inches."""
    paste(calc, "d_1plus [in], d_2plus [in]", (first, second), names, "ends")


def found(calc: Calc, name: str) -> Any:
    """What the numbers say of a type, None if they say nothing."""
    entry = calc.find(f"{name}_found")
    return entry.line.value if entry else None


def detail(calc: Calc, name: str) -> str:
    """The reason on a line."""
    return calc.lines.entries[name].line.detail


def flags(calc: Calc, name: str) -> list[str]:
    """What a line leaves open."""
    return [flag.text for flag in calc.lines.entries[name].line.flags if flag.open]


# torsion
@pytest.mark.parametrize("standard", BOTH)
@pytest.mark.parametrize(
    ("ratio", "H1a", "H1b"),
    [(1.19, "no", "no"), (1.2, "no", "no"), (1.21, "yes", "no"), (1.4, "yes", "no"), (1.41, "yes", "yes")],
)
def test_torsional_irregularity_by_drifts_of_the_ends(standard: str, ratio: float, H1a: str, H1b: str) -> None:
    calc = start(standard)
    calc.answer("one_side", "no", basis="demo")
    ends(calc, [round(ratio, 6)], [round(2 - ratio, 6)], ["R"])
    calc.asce7.end_displacements()
    assert (found(calc, "H1a"), found(calc, "H1b")) == (H1a, H1b)


def test_trap_10_irregularity_from_drifts_amplification_from_displacements() -> None:
    # the upper story twists (0.5 over 0.3: 1.25) though the displacements of its level do not (0.9 over 0.7: 1.125)
    calc = start()
    ends(calc, [0.9, 0.4], [0.7, 0.4])
    calc.asce7.end_displacements()
    assert value(calc, "r_Dplus") == pytest.approx([1.25, 1.0], rel=1e-9)
    assert found(calc, "H1a") == "yes" and detail(calc, "H1a_found") == "r_D,+ = 1.250 at R (> 1.2): yes"
    assert value(calc, "A_x") == [1, 1]  # from displacements; from drifts it would be (1.25/1.2)**2 = 1.085
    # and the other way round: displacements twist, the drift of the upper story does not
    other = start()
    ends(other, [1.3, 0.9], [0.7, 0.3])
    other.asce7.end_displacements()
    assert value(other, "r_Dplus") == pytest.approx([1.0, 1.5], rel=1e-9)
    assert value(other, "A_x") == pytest.approx([(1.3 / 1.2) ** 2, (1.5 / 1.2) ** 2], rel=1e-9)


@pytest.mark.parametrize(("first", "expected"), [(1.0, 1.0), (1.9, 1.9**2 / 1.44), (1.99, (1.99 / 1.2) ** 2)])
def test_trap_10_amplification_between_1_and_3(first: float, expected: float) -> None:
    calc = start()
    ends(calc, [first, 3.0], [2 - first, 0.0], ["R", "1"])
    calc.asce7.end_displacements()
    top, bottom = value(calc, "A_x")
    assert top == pytest.approx(expected, rel=1e-9)
    assert bottom == pytest.approx((2 / 1.2) ** 2, rel=1e-9)
    # one end moving backwards: 2.2 times the mean, 3.36, is cut to 3
    back = start()
    ends(back, [2.2], [-0.2], ["R"])
    back.asce7.end_displacements()
    assert value(back, "A_x") == [3]


def test_the_larger_of_both_shifts_counts_and_one_alone_is_flagged() -> None:
    calc = start()
    ends(calc, [1.1], [0.9], ["R"])
    calc.asce7.end_displacements()
    assert found(calc, "H1a") == "no"
    assert "one shift of the mass only" in flags(calc, "r_Dplus")[0]
    calc = start()
    columns = ([1.1], [0.9], [0.7], [1.3])
    paste(calc, "d_1plus [in], d_2plus [in], d_1minus [in], d_2minus [in]", columns, ["R"])
    calc.asce7.end_displacements()
    assert found(calc, "H1a") == "yes" and flags(calc, "r_Dplus") == []
    assert value(calc, "A_x") == pytest.approx([(1.3 / 1.2) ** 2], rel=1e-9)


@pytest.mark.parametrize("category", ["B", "C"])
def test_amplification_from_category_C_on(category: str) -> None:
    calc = start(category=category)
    ends(calc, [1.5], [0.5], ["R"])
    calc.asce7.end_displacements()
    assert (calc.find("A_x") is not None) == (category == "C")


def test_flexible_diaphragm_has_no_torsional_irregularity() -> None:
    calc = start()
    calc.answer("diaphragm", "flexible", basis="demo")
    ends(calc, [1.5], [0.5], ["R"])
    calc.asce7.end_displacements()
    assert (found(calc, "H1a"), found(calc, "H1b")) == ("no", "no")
    assert "flexible" in detail(calc, "H1a_found")


def test_later_edition_asks_for_strength_on_one_side_and_knows_no_amplification() -> None:
    calc = start("ASCE 7-22")
    ends(calc, [1.1], [0.9], ["R"])
    calc.asce7.end_displacements()
    assert found(calc, "H1a") is None
    assert calc.lines.entries["H1a_open"].line.verdict == "NOT CHECKED"
    calc = start("ASCE 7-22")
    calc.answer("one_side", "yes", basis="demo")
    ends(calc, [1.1], [0.9], ["R"])
    calc.asce7.end_displacements()
    assert found(calc, "H1a") == "yes" and calc.find("A_x") is None
    line = calc.lines.entries["amplification"].line
    assert line.verdict == "NOT CHECKED" and "rule of this edition" in line.missing
    source = calc.lines.entries["H1a_found"].line.source
    assert source and (source.document, source.obtained) == ("ASCE/SEI 7-22", "memory, medium")


def test_numbers_decide_over_an_answer_and_say_so() -> None:
    calc = start()
    calc.answer("H1a", "no", basis="by eye")
    ends(calc, [1.3], [0.7], ["R"])
    calc.asce7.end_displacements()
    assert flags(calc, "H1a_found") == ["H1a is answered no; the numbers say yes, and they decide"]
    calc.asce7.procedure()
    assert "H1a_found" in calc.lines.entries["procedure"].line.inputs


def test_numbers_close_the_question() -> None:
    calc = start()
    calc.answers("H1a; not answered\nH1b; not answered\nH2; not answered")
    ends(calc, [1.1], [0.9], ["R"])
    calc.asce7.end_displacements()
    items = [item.line for item in assemble(calc).open_items]
    assert "H2" in items and not {"H1a", "H1b"} & set(items)


def test_bad_ends_are_all_named() -> None:
    calc = start()
    paste(calc, "d_1minus [in]", ([1.0],), ["R"])
    with pytest.raises(InputError, match=r"(?s)d_1plus.*d_2plus.*d_2minus"):
        calc.asce7.end_displacements()
    calc = start()
    levels(calc)
    ends(calc, [1.0], [1.0], ["Top"])
    with pytest.raises(InputError, match=r"needed rows R, 3, 2, 1; given rows Top"):
        calc.asce7.end_displacements()


def test_without_ends_torsion_is_not_checked() -> None:
    calc = start()
    calc.asce7.end_displacements()
    line = calc.lines.entries["ends"].line
    assert line.verdict == "NOT CHECKED" and "d_1plus" in line.missing


# plan
@pytest.mark.parametrize(("p_x", "p_y", "word"), [(15, 15, "no"), (16, 15, "no"), (16, 16, "yes")])
def test_reentrant_corner(p_x: float, p_y: float, word: str) -> None:
    calc = start(p_x=f"{p_x} ft", p_y=f"{p_y} ft", L_x="100 ft", L_y="100 ft")
    levels(calc)
    calc.asce7.irregularities()
    assert found(calc, "H2") == word


def test_reentrant_corner_in_the_later_edition_is_not_checked() -> None:
    calc = start("ASCE 7-22", p_x="30 ft", p_y="30 ft", L_x="100 ft", L_y="100 ft")
    levels(calc)
    calc.asce7.irregularities()
    assert found(calc, "H2") is None
    assert calc.lines.entries["H2_numbers"].line.verdict == "NOT CHECKED"


def test_reentrant_corner_names_what_is_missing() -> None:
    calc = start(p_x="30 ft")
    levels(calc)
    with pytest.raises(InputError, match=r"(?s)p_y.*L_x.*L_y"):
        calc.asce7.irregularities()


@pytest.mark.parametrize(("area", "word"), [("50 m**2", "no"), ("51 m**2", "yes")])
def test_openings(area: str, word: str) -> None:
    calc = start(units="SI", A_open=area, A_gross="100 m**2")
    levels(calc)
    calc.asce7.irregularities()
    assert found(calc, "H3") == word


@pytest.mark.parametrize(("below", "word"), [(50, "no"), (49, "yes"), (150, "no"), (151, "yes")])
def test_diaphragm_stiffness(below: float, word: str) -> None:
    calc = start()
    levels(calc)
    paste(calc, "K_d [kip/in]", ([100, below, below, below],))
    calc.asce7.irregularities()
    assert found(calc, "H3") == word


# height
@pytest.mark.parametrize("standard", BOTH)
@pytest.mark.parametrize(
    ("stiffness", "V1a", "V1b"),
    [
        ((100, 100, 100, 70), "yes", "no"),  # 0.70 of the story above, but under 0.80 of the mean of three
        ((60, 60, 100, 70), "no", "no"),  # 0.70 and 70/73.3
        ((60, 60, 100, 69), "yes", "no"), ((60, 60, 100, 60), "yes", "no"), ((60, 60, 100, 59), "yes", "yes"),
        ((100, 100, 100, 80), "no", "no"), ((100, 110, 90, 79), "yes", "no"), ((150, 110, 90, 80), "yes", "yes"),
    ],
)  # fmt: skip
def test_soft_story(standard: str, stiffness: Sequence[float], V1a: str, V1b: str) -> None:
    calc = start(standard)
    levels(calc)
    paste(calc, "K_s [kip/in]", (stiffness,))
    calc.asce7.irregularities()
    assert (found(calc, "V1a"), found(calc, "V1b")) == (V1a, V1b)


def test_stiffness_from_shear_and_drift_in_both_unit_sets() -> None:
    found_in = {}
    for units, unit in (("US", "kip/in"), ("SI", "kN/mm")):
        calc = start(units=units)
        calc.levels("level, h_x [ft], w_x [kip], delta_xe [in]\nR, 24, 90, 0.75\n1, 12, 100, 0.5", source="P")
        paste(calc, "V_x [kip]", ([50, 80],), ["R", "1"])
        calc.asce7.irregularities()  # two stories in category D: not considered
        assert found(calc, "V1a") == "no" and "two stories" in detail(calc, "V1a_found")
        calc = start(units=units, category="E")
        calc.levels("level, h_x [ft], w_x [kip], delta_xe [in]\nR, 24, 90, 0.75\n1, 12, 100, 0.5", source="P")
        paste(calc, "V_x [kip]", ([50, 80],), ["R", "1"])
        calc.asce7.irregularities()
        line = calc.lines.entries["K_s"].line
        assert line.unit == unit
        found_in[units] = value(calc, "r_K")
    assert found_in["US"] == pytest.approx([0.8, 0], rel=1e-12)
    assert found_in["SI"] == pytest.approx(found_in["US"], rel=1e-11)


def test_waiver_by_drift_ratios_is_taken_only_where_it_is_asked_for_and_holds() -> None:
    def judged(answer: str, drifts: Sequence[float]) -> Calc:
        calc = start()
        levels(calc)
        calc.answer("drift_waiver", answer, basis="demo")
        paste(calc, "K_s [kip/in], Delta [in]", ([100, 100, 100, 50], drifts))
        calc.asce7.irregularities()
        return calc

    even = judged("yes", [1.0, 2.0, 2.0, 2.0])  # the ratio 2.0 is of the top two stories, which are left out
    assert (found(even, "V1a"), found(even, "V1b"), found(even, "V2")) == ("no", "no", "no")
    assert "1.3" in detail(even, "V1a_found")
    assert found(judged("yes", [1.0, 1.0, 1.0, 1.31]), "V1b") == "yes"
    assert found(judged("yes", [1.0, 1.0, 1.0, 1.3]), "V1b") == "no"
    assert found(judged("no", [1.0, 1.0, 1.0, 1.0]), "V1b") == "yes"
    calc = start()
    levels(calc)
    calc.answer("drift_waiver", "yes", basis="demo")
    calc.asce7.irregularities()
    assert calc.lines.entries["waiver"].line.missing == "Δ (story drift)"


@pytest.mark.parametrize(
    ("weights", "word"),
    [
        ((100, 100, 150, 100), "no"), ((100, 100, 151, 100), "yes"), ((20, 100, 100, 100), "no"),
        ((151, 100, 100, 100), "yes"), ((100, 100, 150, 225.1), "yes"), ((150, 100, 100, 100), "no"),
    ],
)  # fmt: skip
def test_mass(weights: Sequence[float], word: str) -> None:
    calc = start()
    levels(calc, weights=weights)
    calc.asce7.irregularities()
    assert found(calc, "V2") == word
    later = start("ASCE 7-22")
    levels(later, weights=weights)
    later.asce7.irregularities()
    assert found(later, "V2") == "no" and "no irregularity of mass" in detail(later, "V2_found")


@pytest.mark.parametrize("standard", BOTH)
@pytest.mark.parametrize(
    ("widths", "word"),
    [((10, 13, 13, 13), "no"), ((13, 10, 10, 10), "no"), ((10, 13.1, 13, 13), "yes"), ((13.1, 10, 10, 10), "yes")],
)
def test_width(standard: str, widths: Sequence[float], word: str) -> None:
    calc = start(standard)
    levels(calc)
    paste(calc, "b_s [m]", (widths,))
    calc.asce7.irregularities()
    assert found(calc, "V3") == word


@pytest.mark.parametrize("standard", BOTH)
@pytest.mark.parametrize(
    ("below", "V5a", "V5b"), [(80, "no", "no"), (79, "yes", "no"), (65, "yes", "no"), (64.9, "yes", "yes")]
)
def test_weak_story(standard: str, below: float, V5a: str, V5b: str) -> None:
    calc = start(standard)
    levels(calc)
    paste(calc, "V_ys [kN]", ([100, 100, 100, below],))
    calc.asce7.irregularities()
    assert (found(calc, "V5a"), found(calc, "V5b")) == (V5a, V5b)
    calc.asce7.procedure()
    assert calc.lines.entries["prohibited"].line.verdict == ("NOT OK" if V5b == "yes" else "OK")


def test_no_ratio_reads_on_the_wrong_side_of_its_limit() -> None:
    calc = start()
    levels(calc)
    paste(calc, "V_ys [kip]", ([10000, 10000, 10000, 7999.9],))
    calc.asce7.irregularities()
    assert "0.79999 at 1 (< 0.8)" in detail(calc, "V5a_found")


def test_lists_over_other_rows_are_refused_at_once() -> None:
    calc = start()
    levels(calc)
    paste(calc, "b_s [ft], V_ys [kip]", ([1, 2], [1, 2]), ["R", "3"])
    with pytest.raises(InputError, match=r"(?s)b_s \(width.*V_ys \(lateral strength"):
        calc.asce7.irregularities()


# what follows
def answered(category: str, standard: str = "ASCE 7-16", **words: str) -> Calc:
    """All types answered no but those named."""
    calc = start(standard, category=category)
    levels(calc)
    names = (*PLAN, "V1a", "V1b", "V2", "V3", "V4", "V5a", "V5b")
    for name in names:
        if words.get(name) != "open":
            calc.answer(name, words.get(name, "no"), basis="demo")
    calc.asce7.irregularities()
    return calc


@pytest.mark.parametrize("standard", BOTH)
@pytest.mark.parametrize(
    ("category", "name", "factor"),
    [("D", "H1a", 1.25), ("E", "H4", 1.25), ("F", "V4", 1.25), ("D", "H5", 1.0), ("D", "V3", 1.0), ("C", "H1a", 1.0)],
)
def test_collectors(standard: str, category: str, name: str, factor: float) -> None:
    calc = answered(category, standard, **{name: "yes"})
    assert value(calc, "f_collector") == factor
    assert bool(flags(calc, "f_collector")) == (factor > 1)


def test_offsets_and_model() -> None:
    calc = answered("C", H4="yes")
    assert (value(calc, "discontinuous"), value(calc, "model_3d")) == ("yes", "yes")
    calc = answered("C", V4="yes")
    assert (value(calc, "discontinuous"), value(calc, "model_3d")) == ("yes", "no")
    calc = answered("D", H5="yes")
    assert (value(calc, "discontinuous"), value(calc, "model_3d")) == ("no", "yes")


def test_consequences_wait_for_answers() -> None:
    calc = answered("D", H4="open")
    assert calc.find("f_collector") is None
    for id_ in ("f_collector_open", "discontinuous_open", "model_3d_open"):
        line = calc.lines.entries[id_].line
        assert (line.verdict, line.missing) == ("NOT CHECKED", "answers H4")


def test_procedure_in_the_later_edition_is_not_checked() -> None:
    calc = answered("D", "ASCE 7-22")
    calc.given("h_n", "48 ft", source="P")
    calc.asce7.procedure()
    line = calc.lines.entries["procedure"].line
    assert line.verdict == "NOT CHECKED" and "ASCE 7-22" in line.missing


@pytest.mark.parametrize(
    ("names", "height", "verdict"), [(("R", "1"), 15, "OK"), (("R", "1"), 16, "NOT CHECKED"), (FOUR, 7, "NOT CHECKED")]
)
def test_weak_story_in_low_categories(names: Sequence[str], height: float, verdict: str) -> None:
    calc = start(category="C", h_n=f"{height * len(names)} ft")
    levels(calc, names, height=height)
    calc.answer("V5b", "yes", basis="demo")
    calc.asce7.procedure()
    assert calc.lines.entries["prohibited"].line.verdict == verdict
