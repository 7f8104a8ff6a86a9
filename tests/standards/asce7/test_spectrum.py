"""Ground motion of ASCE/SEI 7-22: printout, ordinates, multi-period spectrum, what 21.4 makes of it.

Rules from memory, high, unless a document is named; numbers are of an invented site.
"""

from __future__ import annotations

import json
from itertools import pairwise
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calckit import Calc
from calckit.core.assemble import assemble
from calckit.errors import InputError, ScopeError
from tests.printed_audit import audit
from tests.refusals import refused

from .building import open_flags, start, value
from .printout import ORDINATES, PERIODS, pasted, printed, start_22

DESIGN = [2 / 3 * ordinate for ordinate in ORDINATES]


def test_design_ordinates_are_two_thirds() -> None:
    calc = printed()
    assert value(calc, "S_DS") == pytest.approx(2 / 3 * 1.52, rel=1e-11)
    assert value(calc, "S_D1") == pytest.approx(2 / 3 * 1.22, rel=1e-11)
    assert value(calc, "S_an") == pytest.approx(DESIGN, rel=1e-11)


def test_mapped_is_refused_with_the_cure() -> None:
    """7-22 has no site coefficients: quotients printed as F_a and F_v are not to be interpolated."""
    calc = start_22(hazard_basis="mapped")
    message = "hazard_basis: needed printout or site-specific under ASCE 7-22; given mapped"
    error = refused(calc, InputError, message, calc.asce7.design_spectrum)
    assert 'set hazard_basis to "printout" and give S_S, S_1, S_MS and S_M1' in str(error)


def test_a_printout_is_no_basis_under_7_16() -> None:
    calc = start(S_S=1.0, S_1=0.1, T_L="8 s", site_class="C", hazard_basis="printout")
    message = "hazard_basis: needed mapped or site-specific under ASCE 7-16"
    refused(calc, InputError, message, calc.asce7.design_spectrum)


@pytest.mark.parametrize("word", ["A", "B", "BC", "C", "CD", "D", "DE", "E", "default"])
def test_site_classes_of_7_22(word: str) -> None:
    assert value(printed(site_class=word), "S_DS") > 0


@pytest.mark.parametrize("word", ["B assumed", "D default"])
def test_site_classes_of_7_16_are_refused_under_7_22(word: str) -> None:
    calc = start_22(site_class=word)
    refused(calc, InputError, f"site_class: needed one of A, B, BC, .* given {word}", calc.asce7.design_spectrum)


@pytest.mark.parametrize("word", ["BC", "CD", "DE", "default"])
def test_site_classes_of_7_22_are_refused_under_7_16(word: str) -> None:
    calc = start(S_S=1.0, S_1=0.1, T_L="8 s", site_class=word)
    refused(calc, InputError, f"site_class: needed one of A, B, B assumed, .* given {word}", calc.asce7.design_spectrum)


def test_missing_values_of_a_printout_are_named_at_once() -> None:
    with pytest.raises(InputError, match=r"asce7\.design_spectrum") as caught:
        start_22(S_MS=None, S_M1=None, T_L=None).asce7.design_spectrum()
    assert [fault.symbol for fault in caught.value.faults] == ["T_L", "S_MS", "S_M1"]


def test_missing_and_other_periods_are_named() -> None:
    calc = start_22()
    calc.asce7.design_spectrum()
    kept = [place for place, period in enumerate(PERIODS) if period not in (0.075, 7.5)]
    text = pasted([ORDINATES[i] for i in kept], [PERIODS[i] for i in kept]) + "\n12, 0.05"
    message = r"none at 0\.075 s, 7\.5 s"
    error = refused(calc, InputError, message, lambda: calc.asce7.printed_ordinates(text, source="P"))
    assert "also 12 s" in str(error)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (pasted(column="S_a"), "S_an, or S_aM, or S_aC"),
        (pasted(column="S_aC"), "with S_an, or with S_aM"),
        (pasted(ORDINATES[::-1], PERIODS[::-1]), "periods that rise"),
        (pasted().replace("0.61", "x"), "column S_aM"),
        (pasted().replace("0.01, 0.62", "0.00, 0.62"), "each row named once"),
        ("T_n [s], S_aC, S_aCD, S_aD\n0, 1, 1, 1", "for the default site class of 7-22 only"),
        ("", "needed"),
    ],
)
def test_bad_tables_are_refused(text: str, message: str) -> None:
    calc = start_22()
    calc.asce7.design_spectrum()
    refused(calc, InputError, message, lambda: calc.asce7.printed_ordinates(text, source="P"))


def test_ordinates_need_s_ds_and_s_d1() -> None:
    calc = start_22()
    refused(calc, InputError, "S_DS .*supply it with", lambda: calc.asce7.printed_ordinates(pasted(), source="P"))


def test_ordinates_are_no_input_of_mapped_values() -> None:
    calc = start(S_S=1.0, S_1=0.1, T_L="8 s", site_class="C")
    calc.asce7.design_spectrum()
    refused(calc, ScopeError, r"mapped values of 7-16", lambda: calc.asce7.printed_ordinates(pasted(), source="P"))
    assert calc.asce7.printed_ordinates("none: mapped", source="P") == []


def test_s_ds_and_s_d1_from_the_ordinates() -> None:
    """0.90 x the largest ordinate from 0.2 to 5 s; 0.90 x the largest T S_a (memory, medium), not below S_a(1 s)."""
    calc = printed()
    assert value(calc, "S_DSo") == pytest.approx(0.9 * 2 / 3 * 1.69, rel=1e-11)
    assert value(calc, "S_D1o") == pytest.approx(max(0.9 * 2 / 3 * 0.85 * 1.5, 2 / 3 * 1.22), rel=1e-11)
    assert value(calc, "e_DSo") == pytest.approx(100 * (0.9 * 1.69 / 1.52 - 1), rel=1e-8)
    assert calc["ordinates_agree"].line.verdict == "OK"


def test_s_ds_that_the_ordinates_do_not_bear_out_is_not_ok() -> None:
    calc = printed(S_MS=1.45)
    assert calc["ordinates_agree"].line.verdict == "NOT OK"
    assert open_flags(calc, "ordinates_agree") == ["S_DS and S_D1 in use agree with the ordinates within 2 %: not met"]


@pytest.mark.parametrize(
    ("word", "longest"), [("A", 2), ("BC", 2), ("C", 2), ("CD", 5), ("D", 5), ("E", 5), ("default", 5)]
)
def test_soft_classes_look_from_1_to_5_s(word: str, longest: int) -> None:
    """The switch at 1450 ft/s (memory, medium) lies between C and CD."""
    raised = list(ORDINATES)
    raised[PERIODS.index(4)] = 0.55
    inside = {period: period * raised[PERIODS.index(period)] * 2 / 3 for period in (1, 1.5, 2, 3, 4, 5)}
    largest = max(product for period, product in inside.items() if period <= longest)
    assert value(printed(text=pasted(raised), site_class=word), "p_max") == pytest.approx(largest, rel=1e-11)


def test_default_class_is_the_largest_of_three_at_each_period() -> None:
    """The three classes: FEMA P-2192-4, slides on the 2024 International Residential Code seismic maps."""
    others = [[round(ordinate * factor, 4) for ordinate in ORDINATES] for factor in (0.9, 1.0, 0.8)]
    others[0][5] = 1.2
    others[2][-1] = 0.09
    rows = zip(PERIODS, *others, strict=True)
    text = "\n".join(["T_n [s], S_aC, S_aCD, S_aD", *(", ".join(map(str, row)) for row in rows)])
    calc = printed(text=text, site_class="default")
    assert value(calc, "S_aM") == [max(each) for each in zip(*others, strict=True)]
    assert audit(json.loads(assemble(calc).to_json())).faults == []


def test_default_class_of_the_printout_itself_says_so() -> None:
    calc = printed(site_class="default")
    flags = [flag.text for name in ("S_DS", "S_DSo") for flag in calc.lines.entries[name].line.flags]
    assert any("most critical of classes C, CD and D" in text for text in flags)
    assert any("those that the printout gives for the default" in text for text in flags)


def by_hand(T: float, T_L: float = 12) -> float:
    """Linear between the ordinates, scaled from the one at 10 s beyond (memory, medium)."""
    if T > 10:
        return DESIGN[-1] * 10 / T if T <= T_L else DESIGN[-1] * 10 * T_L / T**2
    low, high = next((a, b) for a, b in pairwise(range(22)) if PERIODS[a] <= T <= PERIODS[b])
    share = (T - PERIODS[low]) / (PERIODS[high] - PERIODS[low])
    return DESIGN[low] * (1 - share) + DESIGN[high] * share


@settings(max_examples=15, deadline=None)
@given(T=st.lists(st.floats(0, 20).map(lambda period: round(period, 3)), min_size=1, max_size=6))
def test_spectrum_between_the_ordinates(T: list[float]) -> None:
    calc = printed()
    assert calc.asce7.spectrum_ordinates(T).value == pytest.approx([by_hand(period) for period in T], rel=1e-9)
    assert audit(json.loads(assemble(calc).to_json())).faults == []


@pytest.mark.parametrize("corner", [*PERIODS[1:], 12])
def test_multi_period_spectrum_is_continuous(corner: float) -> None:
    calc, step = printed(), 1e-7
    below, at, above = calc.asce7.spectrum_ordinates([corner - step, corner, corner + step]).value
    assert below == pytest.approx(at, rel=1e-4)
    assert above == pytest.approx(at, rel=1e-4)


def test_curve_passes_through_the_ordinates() -> None:
    calc = printed()
    T, S_a = calc.asce7.spectrum_curve(14.0)
    drawn = dict(zip(T, S_a, strict=True))
    assert [drawn[float(period)] for period in PERIODS] == pytest.approx(DESIGN, rel=1e-11)
    assert drawn[14.0] == pytest.approx(by_hand(14.0), rel=1e-11)


def test_beyond_10_s_with_a_shorter_t_l_is_refused() -> None:
    calc = printed(T_L="8 s")
    refused(calc, ScopeError, "not continuous there", lambda: calc.asce7.spectrum_ordinates([1, 11]))
    assert calc.asce7.spectrum_ordinates([9.0, 10]).value == pytest.approx([by_hand(9.0), DESIGN[-1]], rel=1e-11)


def test_without_ordinates_the_two_period_spectrum_stands_open() -> None:
    calc = start_22()
    calc.asce7.design_spectrum()
    S_a = calc.asce7.spectrum_ordinates([0.0, 0.3, 2.0])
    S_DS, S_D1 = value(calc, "S_DS"), value(calc, "S_D1")
    assert S_a.value == pytest.approx([0.4 * S_DS, S_DS, S_D1 / 2], rel=1e-11)
    assert any("11.4.5.2" in text for text in open_flags(calc, "S_a"))
    assert S_a.line.source.text() == "ASCE/SEI 7-22 11.4.5.2, eq. 11.4-3 to 11.4-5"


# C_s by both methods


def shear(T: float, method: str = "", ordinates: bool = True, **more: Any) -> Calc:
    """C_s at a period under 7-22."""
    inputs = {"R": 8, "I_e": 1.0, "T": f"{T} s", "W": "1000 kip", **more}
    calc = printed(**inputs) if ordinates else start_22(**inputs)
    if not ordinates:
        calc.asce7.design_spectrum()
    if method:
        calc.answer("C_s_method", method, source="P")
    calc.asce7.base_shear()
    return calc


@pytest.mark.parametrize("T", [0.03, 0.3, 0.62, 1.0, 2.7, 11.0, 13.0])
def test_method_by_the_multi_period_spectrum(T: float) -> None:
    calc = shear(T, "multi-period")
    assert value(calc, "S_aT") == pytest.approx(by_hand(T), rel=1e-9)
    assert value(calc, "C_s") == pytest.approx(max(by_hand(T) / 8, 0.044 * value(calc, "S_DS")), rel=1e-9)
    assert open_flags(calc, "C_s") == []
    assert audit(json.loads(assemble(calc).to_json())).faults == []


@pytest.mark.parametrize("T", [0.03, 0.3, 0.62, 1.0, 2.7])
def test_method_by_two_periods(T: float) -> None:
    calc = shear(T, "two-period")
    S_DS, S_D1 = value(calc, "S_DS"), value(calc, "S_D1")
    assert value(calc, "C_s") == pytest.approx(max(min(S_DS, S_D1 / T) / 8, 0.044 * S_DS), rel=1e-9)
    assert "C_smulti" in calc.lines.entries


@pytest.mark.parametrize("T", [0.03, 0.4, 1.5])
def test_unanswered_method_takes_the_larger_and_stays_open(T: float) -> None:
    calc = shear(T)
    both = [value(shear(T, method), "C_s") for method in ("multi-period", "two-period")]
    assert value(calc, "C_s") == max(both)
    assert any("C_s_method" in text for text in open_flags(calc, "C_s"))
    (governs,) = [each for each in calc["C_s"].line.candidates if each.governs]
    assert governs.value == pytest.approx(value(calc, "C_s"), rel=1e-11)


def test_candidates_print_no_equation_number_of_7_22() -> None:
    assert {each.equation for each in shear(0.62)["C_s"].line.candidates} == {"clause 12.8.1.1"}


def test_lower_limit_by_s_1_is_kept() -> None:
    calc = shear(9.0, "multi-period", S_1=0.7)
    assert value(calc, "C_s") == pytest.approx(max(0.5 * 0.7 / 8, 0.044 * value(calc, "S_DS")), rel=1e-11)
    assert "C_sfloor1" in calc.lines.entries


def test_multi_period_method_needs_ordinates() -> None:
    with pytest.raises(InputError, match=r"S_an .*printed_ordinates"):
        shear(0.5, "multi-period", ordinates=False)


def test_multi_period_method_is_not_in_7_16() -> None:
    calc = start(S_S=1.0, S_1=0.1, T_L="8 s", site_class="C", R=8, I_e=1.0, T="1 s", W="10 kip")
    calc.asce7.design_spectrum()
    calc.answer("C_s_method", "multi-period", source="P")
    refused(calc, ScopeError, "7-16 has the two-period parameters only", calc.asce7.base_shear)


def test_without_ordinates_the_line_says_that_one_method_was_not_worked() -> None:
    line = shear(0.5, ordinates=False)["C_s"].line
    assert any("no ordinates of a printout" in flag.text for flag in line.flags)


# 11.4.7


@pytest.mark.parametrize("word", ["D", "DE", "E"])
def test_no_study_is_asked_of_soft_classes(word: str) -> None:
    """The removal: C. A. Kircher and others on the 2020 NEHRP Provisions (first pages)."""
    calc = shear(0.62, "two-period", site_class=word)
    assert not {"C_swith", "C_scapinc", "T_Sinc"} & calc.lines.entries.keys()
    assert not any("11.4.8" in flag.text for entry in calc.lines.entries.values() for flag in entry.line.flags)


def test_an_exception_to_11_4_8_is_refused() -> None:
    calc = start_22(study_exception="exception 2")
    refused(calc, InputError, "the rule for classes D and E is not in this edition", calc.asce7.design_spectrum)
    assert value(printed(study_exception="not needed"), "S_DS") > 0


def test_site_class_f_is_refused() -> None:
    calc = start_22(site_class="F")
    refused(calc, ScopeError, r"site response analysis is needed \(11\.4\.7\)", calc.asce7.design_spectrum)


def test_geodatabase_values_are_written_under_7_22_only() -> None:
    calc = start_22(S_MS=None, S_M1=None)
    assert [str(handle) for handle in calc.asce7.geodatabase_values(1.52, 1.22, source="P", PGA_M=0.6)] == [
        "S_MS = 1.52", "S_M1 = 1.22", "PGA_M = 0.6",
    ]  # fmt: skip
    assert start(S_S=1.0).asce7.geodatabase_values("none: mapped", "none: mapped", source="P") == []
