"""Chapter 11 beyond the mapped values: values beside ours, peak acceleration, studies, reliefs, and traps.

Rules from memory, high, unless said otherwise; numbers are of an invented site.
"""

from __future__ import annotations

import json
from typing import Any

import pytest

from calckit import Calc
from calckit.core.assemble import assemble
from calckit.core.table import load
from calckit.errors import InputError, ScopeError
from tests.printed_audit import audit
from tests.refusals import refused

from .building import QUESTIONS, open_flags, start, value
from .printout import printed, start_22


def mapped(units: str = "US", supplements: tuple[int, ...] | None = (), **inputs: Any) -> Calc:
    """The design spectrum of a mapped site."""
    site = {"S_S": 0.6, "S_1": 0.15, "T_L": "8 s", "site_class": "C"}
    calc = start(units, supplements, **site | inputs)
    calc.asce7.design_spectrum()
    return calc


def faults(calc: Calc) -> list[str]:
    """What the printed-digits audit finds."""
    return audit(json.loads(assemble(calc).to_json())).faults


# printed values


def test_printed_values_stand_beside_ours() -> None:
    calc = mapped()
    calc.asce7.printed_values("F_a, 1.26, P\nS_MS, 0.756, P\nS_DS, 0.504, P\nS_D1, 0.15, P\nT_S, 0.298 s, P")
    assert value(calc, "e_SDS") == pytest.approx(0, abs=1e-9)
    assert value(calc, "e_TS") == pytest.approx(100 * (0.298 * 0.504 / 0.15 - 1), rel=1e-8)
    assert calc["printed_agree"].line.verdict == "OK"
    assert faults(calc) == []


def test_printed_values_of_another_edition_do_not_agree() -> None:
    """City of Santa Ana, permit record 380941, p. 26: F_v of 2010 in a 2016 form, 1.5 for 1.842."""
    calc = mapped(site_class="D default", S_S=1.277, S_1=0.458, study_exception="exception 2")
    calc.asce7.printed_values("F_v, 1.5, P\nS_DS, 1.022, P")
    assert value(calc, "e_Fv") == pytest.approx(100 * (1.5 / 1.842 - 1), rel=1e-9)
    assert calc["printed_agree"].line.verdict == "NOT OK"
    assert open_flags(calc, "printed_agree")


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("S_DS, 0.5", "needed symbol, value, source"), ("S_D, 0.5, P", "needed one of F_a, F_v, S_MS"),
        ("S_DS, 0.5, P\nS_DS, 0.6, P", "each symbol once"), ("PGA_M, 0.5, P", "PGA_M .*needed a number"),
        ("S_DS, -0.5, P", "above 0"),
    ],
)  # fmt: skip
def test_bad_printed_values(text: str, message: str) -> None:
    calc = mapped()
    refused(calc, InputError, message, lambda: calc.asce7.printed_values(text))


def test_printed_values_may_be_left_out() -> None:
    assert mapped().asce7.printed_values("none: no printout") == []


# peak acceleration


@pytest.mark.parametrize(
    ("word", "PGA", "F_PGA"),
    [("C", 0.05, 1.3), ("C", 0.15, 1.25), ("D", 0.2, 1.4), ("E", 0.55, 1.15), ("B", 0.4, 0.9), ("B assumed", 0.4, 1.0),
     ("A", 0.9, 0.8)],
)  # fmt: skip
def test_peak_acceleration(word: str, PGA: float, F_PGA: float) -> None:
    """Table 11.8-1; class B without velocity, 1.0: International Building Code 2018, 1613.2."""
    calc = start(site_class=word, PGA=PGA)
    calc.asce7.peak_acceleration()
    assert (value(calc, "F_PGA"), value(calc, "PGA_M")) == pytest.approx((F_PGA, F_PGA * PGA), rel=1e-11)
    assert faults(calc) == []


def test_peak_acceleration_of_the_default_class_stays_open() -> None:
    calc = start(site_class="D default", PGA=0.5)
    calc.asce7.peak_acceleration()
    assert any("least value" in text for text in open_flags(calc, "F_PGA"))


def test_peak_acceleration_without_inputs() -> None:
    with pytest.raises(InputError, match=r"asce7\.peak_acceleration") as caught:
        start().asce7.peak_acceleration()
    assert [fault.symbol for fault in caught.value.faults] == ["PGA", "site_class"]
    assert start(PGA="none: not in the printout").asce7.peak_acceleration() == []
    with pytest.raises(ScopeError, match="site class F: PGA_M comes from"):
        start(site_class="F", PGA=0.3).asce7.peak_acceleration()


def test_peak_acceleration_of_7_22_is_an_input() -> None:
    with pytest.raises(InputError, match="PGA_M"):
        start_22().asce7.peak_acceleration()
    assert [str(handle) for handle in start_22(PGA_M=0.61).asce7.peak_acceleration()] == ["PGA_M = 0.61"]


# site-specific study


def study(**inputs: Any) -> Calc:
    """S_DS and S_D1 of a study under 7-16."""
    site: dict[str, Any] = {"S_S": 1.2, "S_1": 0.5, "T_L": "8 s", "site_class": "D", "hazard_basis": "site-specific"}
    ordinates = {"S_DS": inputs.pop("S_DS", 0.8), "S_D1": inputs.pop("S_D1", 0.8)}
    calc = start(supplements=(1,), **site | inputs)
    calc.asce7.site_specific_values(**ordinates, source="P")
    calc.asce7.design_spectrum()
    return calc


@pytest.mark.parametrize(
    ("inputs", "F_a", "F_v"),
    [
        ({}, 1.02, 2.5), ({"S_1": 0.19}, 1.02, 2.22), ({"site_class": "C"}, 1.2, 1.5),
        ({"site_class": "E"}, 1.0, 4.0), ({"site_class": "E", "S_S": 0.5, "S_1": 0.1}, 1.7, 4.2),
        ({"site_class": "D default"}, 1.2, 2.5), ({"site_class": "B assumed"}, 1.0, 1.0),
    ],
)
def test_floor_of_a_study(inputs: dict[str, Any], F_a: float, F_v: float) -> None:
    """21.3, memory, medium: F_v 2.5 and 4.0, F_a 1.0 of class E; else the tables."""
    calc = study(**inputs)
    made = calc.asce7.study_floor()
    assert (value(calc, "F_ag"), value(calc, "F_vg")) == pytest.approx((F_a, F_v), rel=1e-11)
    for name, check, mapped_, factor in (("S_DS", made[0], "S_S", F_a), ("S_D1", made[1], "S_1", F_v)):
        held = value(calc, name) >= 0.8 * 2 / 3 * factor * value(calc, mapped_)
        assert check.line.verdict == ("OK" if held else "NOT OK")
    assert faults(calc) == []


@pytest.mark.parametrize(
    ("inputs", "missing"),
    [
        ({"site_class": "F"}, "class F"), ({"site_class": "E", "S_S": 0.9}, "F_a of class E"),
        ({"site_class": "E", "S_1": 0.15}, "F_v of class E"),
    ],
)
def test_floor_that_is_not_defined_is_not_checked(inputs: dict[str, Any], missing: str) -> None:
    (check,) = study(**inputs).asce7.study_floor()
    assert check.line.verdict == "NOT CHECKED"
    assert missing in check.line.missing


def test_ordinates_of_a_study_are_held_against_the_floor() -> None:
    calc = study(S_DS=0.9, S_D1=0.8)
    text = "T_n [s], S_an\n0, 0.4\n0.2, 0.9\n0.5, 1.0\n1, 0.8\n2, 0.40\n3, 0.2\n5, 0.10"
    calc.asce7.printed_ordinates(text, source="P")
    assert (value(calc, "S_DSo"), value(calc, "S_D1o")) == pytest.approx((0.9, 0.8), rel=1e-11)  # 7-16: no 0.90 on S_D1
    *_, last = calc.asce7.study_floor()
    assert last.line.verdict == "NOT OK"
    assert last.line.detail.startswith("not met at 3 s, 5 s")
    assert faults(calc) == []


def test_ordinates_of_a_study_need_the_periods_of_21_4() -> None:
    calc = study()
    text = "T_n [s], S_an\n0, 0.4\n0.2, 0.9\n1, 0.8\n2, 0.40"
    refused(calc, InputError, "none at 5 s", lambda: calc.asce7.printed_ordinates(text, source="P"))


def test_floor_of_7_22_is_that_of_the_geodatabase() -> None:
    calc = start_22(hazard_basis="site-specific", S_MS=None, S_M1=None)
    calc.asce7.site_specific_values(0.8, 0.6, source="P")
    calc.asce7.design_spectrum()
    (check,) = calc.asce7.study_floor()
    assert (check.line.verdict, check.line.missing[:13]) == ("NOT CHECKED", "S_MS and S_M1")


def test_floor_asks_nothing_of_mapped_values() -> None:
    assert mapped().asce7.study_floor() == []
    assert printed().asce7.study_floor() == []


# class F


def exempted(start_: Any = start, **inputs: Any) -> Calc:
    """An exempted class F site, of class C without liquefaction."""
    site: dict[str, Any] = {"S_S": 0.6, "S_1": 0.15, "T_L": "8 s", "risk_category": "II", "R": 5, "W": "100 kip"}
    site |= {"site_class": "F", "liquefaction_exemption": "yes", "underlying_class": "C", "T": "0.4 s"}
    calc = start_(**site | inputs)
    calc.asce7.design_spectrum()
    return calc


def test_exempted_class_f_takes_the_coefficients_of_its_class() -> None:
    """S. K. Ghosh Associates, note of August 2021."""
    calc = exempted()
    assert (value(calc, "F_a"), value(calc, "F_v")) == pytest.approx((1.26, 1.5), rel=1e-11)
    assert value(calc, "site_class") == "F"
    assert any("class F by liquefiable soil" in flag.text for flag in calc["F_a"].line.flags)


@pytest.mark.parametrize(("T", "verdict"), [("0.5 s", "OK"), ("0.51 s", "NOT OK")])
@pytest.mark.parametrize("start_", [start, start_22])
def test_exempted_class_f_holds_up_to_half_a_second(start_: Any, T: str, verdict: str) -> None:
    calc = exempted(start_, T=T, I_e=1.0, **({"S_MS": 0.7, "S_M1": 0.3} if start_ is start_22 else {}))
    calc.asce7.base_shear()
    assert calc["class_F_period"].line.verdict == verdict


def test_exempted_class_f_uses_the_period_without_upper_limit() -> None:
    calc = exempted(T_drift="0.7 s", I_e=1.0)
    calc.asce7.base_shear()
    assert calc["class_F_period"].line.verdict == "NOT OK"


def test_exempted_class_f_follows_11_4_8_of_its_class() -> None:
    calc = exempted(underlying_class="D", S_1=0.3)
    assert any("11.4.8 asks for" in text for text in open_flags(calc, "F_a"))


def test_exemption_stays_open_under_7_22() -> None:
    calc = exempted(start_22, S_MS=0.7, S_M1=0.3)
    assert any("to be confirmed" in text for text in open_flags(calc, "S_DS"))


@pytest.mark.parametrize(
    ("inputs", "error", "message"),
    [
        ({"underlying_class": "none: unknown"}, InputError, "underlying_class"),
        ({"underlying_class": "CD"}, InputError, "underlying_class: needed one of A, B, B assumed, C, D, .*given CD"),
        ({"liquefaction_exemption": "no"}, ScopeError, "site response analysis is needed"),
    ],
)
def test_exemption_needs_its_answers(inputs: dict[str, Any], error: Any, message: str) -> None:
    with pytest.raises(error, match=message):
        exempted(**inputs)


# limit on S_DS


def short(**inputs: Any) -> Calc:
    """A short regular building that takes the limit."""
    facts: dict[str, Any] = {
        "S_S": 2.4, "S_1": 0.7, "site_class": "C", "risk_category": "II", "N_grade": 3, "T": "0.3 s", "rho": 1.0,
        "R": 6, "W": "100 kip", "S_DS_limit": "taken", **dict.fromkeys(QUESTIONS, "no"),
    }  # fmt: skip
    calc = mapped(**{name: word for name, word in (facts | inputs).items() if word is not None})
    calc.asce7.design_category()
    calc.asce7.short_building_limit()
    calc.asce7.base_shear()
    return calc


def test_limit_on_s_ds_where_every_condition_holds() -> None:
    calc = short()
    assert value(calc, "S_DS") == pytest.approx(1.92, rel=1e-11)
    assert value(calc, "S_DSlim") == pytest.approx(0.70 * 1.92, rel=1e-11)
    assert value(calc, "C_sbasic") == pytest.approx(0.70 * 1.92 / 6, rel=1e-11)
    assert value(calc, "C_sfloor") == pytest.approx(0.044 * 0.70 * 1.92, rel=1e-11)
    assert calc["S_DS_limited"].line.verdict == "OK"
    assert faults(calc) == []


@pytest.mark.parametrize(
    ("inputs", "words"),
    [
        ({"V2": "yes"}, "irregularity V2"), ({"N_grade": 6}, "more than 5 stories"), ({"T": "0.51 s"}, "T above 0.5 s"),
        ({"rho": 1.3}, "redundancy factor above 1.0"), ({"risk_category": "III"}, "risk category III"),
        ({"site_class": "F", "liquefaction_exemption": "yes", "underlying_class": "C"}, "site class F"),
        ({"site_class": "E", "S_S": 0.7, "S_1": 0.1}, "site class E"),
    ],
)
def test_each_condition_of_the_limit(inputs: dict[str, Any], words: str) -> None:
    calc = short(**inputs)
    assert calc["S_DS_limited"].line.verdict == "NOT OK"
    assert words in calc["S_DS_limited"].line.detail
    assert "S_DSlim" not in calc.lines.entries


@pytest.mark.parametrize("name", ["rho", "N_grade", "H1a"])
def test_limit_is_not_taken_while_a_condition_is_unanswered(name: str) -> None:
    calc = short(**{name: None})
    assert calc["S_DS_limited"].line.verdict == "NOT CHECKED"
    assert name in calc["S_DS_limited"].line.missing
    assert value(calc, "C_sbasic") == pytest.approx(1.92 / 6, rel=1e-11)


def test_limit_is_asked_for_or_absent() -> None:
    calc = short(S_DS_limit="not taken")
    assert "S_DS_limited" not in calc.lines.entries


def test_limit_is_not_checked_under_7_22() -> None:
    calc = start_22(S_DS_limit="taken")
    calc.asce7.design_spectrum()
    (check,) = calc.asce7.short_building_limit()
    assert (check.line.verdict, "S_DSlim" in calc.lines.entries) == ("NOT CHECKED", False)


# category by S_DS alone


def by_S_DS(units: str = "US", **inputs: Any) -> Calc:
    """A building whose category is taken by S_DS alone, its conditions checked; S_D1 alone would give D."""
    facts: dict[str, Any] = {
        "S_S": 0.55, "S_1": 0.22, "site_class": "C", "risk_category": "II", "category_basis": "S_DS alone",
        "T_a": "0.25 s", "T": "0.25 s", "T_drift": "0.25 s", "diaphragm": "rigid", "R": 5, "W": "100 kip",
    }  # fmt: skip
    calc = mapped(units, **facts | inputs)
    calc.asce7.design_category()
    calc.asce7.base_shear()
    calc.asce7.category_conditions()
    return calc


def verdicts(calc: Calc) -> dict[str, str]:
    """Conditions that are not OK."""
    checks = ("S_1", "T_a", "T_drift", "C_s", "diaphragm")
    said = {name: calc[f"category_{name}"].line.verdict for name in checks}
    return {name: word for name, word in said.items() if word != "OK"}


def test_category_by_s_ds_alone() -> None:
    calc = by_S_DS()
    assert (value(calc, "SDC_DS"), value(calc, "SDC_D1"), value(calc, "SDC")) == ("C", "D", "C")
    assert verdicts(calc) == {}
    assert [each.value for each in calc["SDC"].line.candidates if each.governs] == [None]
    assert faults(calc) == []


@pytest.mark.parametrize(
    ("inputs", "not_ok"),
    [
        ({"T_a": "0.38 s"}, {"T_a": "NOT OK"}), ({"T_drift": "0.47 s"}, {"T_drift": "NOT OK"}),
        ({"T": "0.6 s"}, {"C_s": "NOT OK"}), ({"diaphragm": "semirigid"}, {"diaphragm": "NOT OK"}),
        ({"diaphragm": "flexible", "s_v": "41 ft"}, {"diaphragm": "NOT OK"}),
        ({"diaphragm": "flexible", "s_v": "12.19 m"}, {}), ({"diaphragm": "flexible"}, {"diaphragm": "NOT CHECKED"}),
        ({"diaphragm": "none: open"}, {"diaphragm": "NOT CHECKED"}),
    ],
)
@pytest.mark.parametrize("units", ["US", "SI"])
def test_each_condition_of_the_category(units: str, inputs: dict[str, Any], not_ok: dict[str, str]) -> None:
    assert verdicts(by_S_DS(units, **inputs)) == not_ok


def test_both_tables_ask_no_conditions() -> None:
    calc = mapped(category_basis="both tables")
    assert calc.asce7.category_conditions() == []


# traps


def test_trap_1_tables_of_7_10_do_not_serve_7_16() -> None:
    """Permit record 380941: F_v 1.842, not 1.5. Older F_a of class B 1.0, class E 0.9: not in the tables."""
    calc = mapped(site_class="D default", S_S=1.277, S_1=0.458, study_exception="exception 2")
    assert (value(calc, "F_v"), value(calc, "F_a")) == pytest.approx((1.842, 1.2), rel=1e-11)
    assert (value(mapped(site_class="B"), "F_a"), value(mapped(site_class="B"), "F_v")) == (0.9, 0.8)


def test_trap_1_upper_limit_on_the_period_is_not_that_of_nehrp_1997() -> None:
    """UFC 3-310-07A prints 1.2 for S_D1 0.4 and more."""
    row = load("calckit.standards.asce7", "C_u").row("C_u")
    assert [float(text) for text in row.values() if text[0].isdigit()] == [1.7, 1.6, 1.5, 1.4, 1.4]


def test_trap_1_floor_of_the_default_class() -> None:
    assert value(mapped(site_class="D default", S_S=1.5), "F_a") == 1.2


def test_trap_2_f_v_is_interpolated() -> None:
    """City of Santa Ana, permit record 370584, p. 131: prints 1.8; 1.832 is right."""
    calc = mapped(site_class="D default", S_S=1.314, S_1=0.468, study_exception="exception 2")
    assert value(calc, "F_v") == pytest.approx(1.832, rel=1e-11)


@pytest.mark.parametrize("share", [1.05, 1.25, 1.45, 1.55])
def test_trap_3_basic_value_alone_up_to_1_5_t_s(share: float) -> None:
    """City of Santa Ana, record 139372, p. 821: eq. 12.8-2 alone up to 1.5 T_S, then 1.5 x eq. 12.8-3."""
    site = {"site_class": "D", "S_S": 0.9, "S_1": 0.35, "study_exception": "exception 2", "R": 8, "W": "100 kip"}
    calc = mapped(I_e=1.0, T="1 s", **site)
    T_S, S_DS, S_D1 = (value(calc, name) for name in ("T_S", "S_DS", "S_D1"))
    calc = mapped(I_e=1.0, T=f"{share * T_S:.4f} s", **site)
    calc.asce7.base_shear()
    T = value(calc, "T")
    expected = S_DS / 8 if share <= 1.5 else 1.5 * S_D1 / (T * 8)
    assert value(calc, "C_s") == pytest.approx(expected, rel=1e-9)
    assert value(calc, "C_s") > 1.0001 * S_D1 / (T * 8)


@pytest.mark.parametrize("word", ["D", "D default"])
def test_trap_3_11_4_8_is_not_forgotten(word: str) -> None:
    calc = mapped(supplements=None, site_class=word, S_1=0.2)
    assert any("11.4.8 asks for a hazard analysis" in text for text in open_flags(calc, "F_a"))


@pytest.mark.parametrize(("risk", "letter"), [("I", "E"), ("III", "E"), ("IV", "F")])
@pytest.mark.parametrize("start_", [start, start_22])
def test_trap_4_category_e_and_f_by_s_1(start_: Any, risk: str, letter: str) -> None:
    """N. Taly, Example 6.1 prints D with S_1 = 0.90."""
    calc = start_(S_S=2.0, S_1=0.75, S_DS=1.2, S_D1=0.9, risk_category=risk, category_basis="S_DS alone")
    calc.asce7.design_category()
    assert value(calc, "SDC") == letter


def test_trap_4_category_takes_the_unlimited_s_ds() -> None:
    calc = short(S_S=1.0, S_1=0.2)
    assert value(calc, "S_DSlim") == value(calc, "S_DS")
    calc = short()
    assert "S_DS" in calc["SDC_DS"].line.inputs
    assert not any("S_DSlim" in calc[name].line.inputs for name in ("SDC_DS", "SDC_D1", "SDC"))


@pytest.mark.parametrize("S_1", [0.11, 0.15, 0.199])
def test_trap_17_class_e_between_0_1_and_0_2_in_the_2016_printing(S_1: float) -> None:
    with pytest.raises(ScopeError, match="without Supplement 1: F_v is undefined"):
        mapped(site_class="E", S_S=0.5, S_1=S_1)
    calc = mapped(supplements=(1,), site_class="E", S_S=0.5, S_1=S_1)
    assert value(calc, "F_v") == pytest.approx(4.2 - (S_1 - 0.1) * 9, rel=1e-11)


def test_category_a_by_small_values_is_open_under_7_22() -> None:
    """The rule of 7-16 (International Building Code 1613.2) is not known for 7-22."""
    inputs = {"S_S": 0.12, "S_1": 0.03, "S_DS": 0.2, "S_D1": 0.05, "risk_category": "II"}
    calc = start(**inputs)
    calc.asce7.design_category()
    assert value(calc, "SDC") == "A"
    calc = start_22(**inputs)
    calc.asce7.design_category()
    assert value(calc, "SDC") == "B"
    assert any("to be confirmed" in text for text in open_flags(calc, "SDC"))
