"""Chapter 11 of ASCE/SEI 7-16: coefficients at their special cases, 11.4.8, spectrum, category.

Published numbers are in `checks.toml`; here the rules of the standard (from memory, high, unless a document is named)
are held at their edges.
"""

from __future__ import annotations

import pytest

from calckit.core.calc import Calc
from calckit.errors import InputError, ScopeError

from .building import open_flags, start, value


def spectrum(site_class: str, S_S: float, S_1: float, supplements: tuple[int, ...] | None = (), **more: str) -> Calc:
    """The design spectrum of a site."""
    calc = start(supplements=supplements, S_S=S_S, S_1=S_1, T_L="8 s", site_class=site_class, **more)
    calc.asce7.design_spectrum()
    return calc


def test_default_class_d_takes_at_least_1_2() -> None:
    """Also in IBC 2018 and 2021, 1613.2.3; City of Santa Ana, permit record 370584, p. 131 uses it."""
    assert value(spectrum("D default", 1.3, 0.1), "F_a") == 1.2
    assert value(spectrum("D", 1.25, 0.1), "F_a") == 1.0
    assert value(spectrum("D default", 0.5, 0.1), "F_a") == 1.4


def test_class_b_without_velocity_takes_1_0() -> None:
    """11.4.3; International Building Code 2018, 1613.2."""
    calc = spectrum("B assumed", 0.9, 0.3)
    assert (value(calc, "F_a"), value(calc, "F_v")) == (1.0, 1.0)


@pytest.mark.parametrize(("S_S", "F_a"), [(0.01, 1.6), (0.25, 1.6), (0.375, 1.5), (1.5, 1.0), (2.9, 1.0)])
def test_ends_of_the_table_hold(S_S: float, F_a: float) -> None:
    assert value(spectrum("D", S_S, 0.1), "F_a") == pytest.approx(F_a, rel=1e-12)


def test_site_class_f_is_refused() -> None:
    with pytest.raises(ScopeError, match="site response analysis is needed"):
        spectrum("F", 0.5, 0.1)


def test_class_e_needs_supplement_1_for_f_v() -> None:
    with pytest.raises(ScopeError, match="without Supplement 1: F_v is undefined"):
        spectrum("E", 0.5, 0.15)
    with pytest.raises(ScopeError, match="supplements not answered: F_v is undefined"):
        spectrum("E", 0.5, 0.15, None)
    assert value(spectrum("E", 0.5, 0.15, (1,)), "F_v") == pytest.approx(3.75, rel=1e-12)


def test_class_e_strong_shaking_needs_an_exception() -> None:
    with pytest.raises(ScopeError, match='answer study_exception "exception 1"'):
        spectrum("E", 1.2, 0.15, (1,))
    with pytest.raises(ScopeError, match=r"between 0\.75 and 1\.0"):
        spectrum("E", 0.9, 0.15, (1,))
    assert value(spectrum("E", 1.2, 0.15, (1,), study_exception="exception 1"), "F_a") == 1.2
    with pytest.raises(ScopeError, match="exception 3"):
        spectrum("E", 0.5, 0.3, (1,))
    assert value(spectrum("E", 0.5, 0.3, (1,), study_exception="exception 3"), "F_v") == 2.8


def test_class_d_without_answers_is_open_and_shows_both_corners() -> None:
    calc = spectrum("D", 0.6, 0.22, None)
    assert any("11.4.8 asks for" in text for text in open_flags(calc, "F_a"))
    assert value(calc, "T_Sinc") == pytest.approx(1.5 * value(calc, "T_S"), rel=1e-11)


def test_class_d_with_weak_shaking_asks_nothing() -> None:
    calc = spectrum("D", 0.6, 0.19, None)
    assert open_flags(calc, "F_a") == []
    assert "T_Sinc" not in calc.lines.entries


def test_supplement_3_increases_s_m1() -> None:
    plain = spectrum("D", 0.6, 0.22, (), study_exception="exception 2")
    raised = spectrum("D", 0.6, 0.22, (1, 3), study_exception="S_M1 increased")
    for name in ("S_M1", "S_D1", "T_S"):
        assert value(raised, name) == pytest.approx(1.5 * value(plain, name), rel=1e-11)
    assert value(raised, "S_DS") == value(plain, "S_DS")


@pytest.mark.parametrize(("supplements", "exception"), [((), "S_M1 increased"), ((3,), "exception 2")])
def test_exception_must_fit_the_supplements(supplements: tuple[int, ...], exception: str) -> None:
    with pytest.raises(InputError, match="study_exception: needed"):
        spectrum("D", 0.6, 0.22, supplements, study_exception=exception)


def test_site_specific_values_stand_and_site_coefficients_are_not_written() -> None:
    calc = start(S_S=1.2, S_1=0.5, T_L="8 s", site_class="F", hazard_basis="site-specific")
    calc.asce7.site_specific_values(0.9, 0.6, source="P")
    calc.asce7.design_spectrum()
    assert value(calc, "T_S") == pytest.approx(2 / 3, rel=1e-11)
    assert not {"F_a", "F_v", "S_MS", "S_M1"} & calc.lines.entries.keys()


def test_all_missing_inputs_are_named_at_once() -> None:
    with pytest.raises(InputError, match=r"asce7\.design_spectrum") as caught:
        start(S_S=1.0).asce7.design_spectrum()
    assert [fault.symbol for fault in caught.value.faults] == ["S_1", "T_L", "site_class"]


@pytest.mark.parametrize("corner", ["T_0", "T_S", "T_L"])
def test_spectrum_is_continuous_at_its_corners(corner: str) -> None:
    calc = spectrum("C", 0.6, 0.22)
    T, step = value(calc, corner), 1e-7
    below, at, above = calc.asce7.spectrum_ordinates([T - step, T, T + step]).value
    assert below == pytest.approx(at, rel=1e-5)
    assert above == pytest.approx(at, rel=1e-5)


def test_spectrum_at_rest_and_on_its_flat_part() -> None:
    """From memory, high: 0.4 S_DS at T = 0."""
    calc = spectrum("C", 0.6, 0.22)
    S_DS = value(calc, "S_DS")
    assert calc.asce7.spectrum_ordinates([0, 0.2]).value == pytest.approx([0.4 * S_DS, S_DS], rel=1e-11)


@pytest.mark.parametrize("periods", [[], [-0.1], [float("nan")], [True]])
def test_bad_periods_are_refused(periods: list[float]) -> None:
    with pytest.raises(InputError, match="period"):
        spectrum("C", 0.6, 0.22).asce7.spectrum_ordinates(periods)


def category(S_DS: float, S_D1: float, risk: str = "II", S_1: float = 0.3, S_S: float = 1.0) -> Calc:
    """The design category for given ordinates."""
    calc = start(S_S=S_S, S_1=S_1, S_DS=S_DS, S_D1=S_D1, risk_category=risk)
    calc.asce7.design_category()
    return calc


@pytest.mark.parametrize(
    ("S_DS", "S_D1", "risk", "S_1", "letter"),
    [
        (0.49, 0.19, "II", 0.3, "C"), (0.50, 0.05, "II", 0.3, "D"), (0.1, 0.20, "I", 0.3, "D"),
        (0.166, 0.066, "III", 0.05, "A"), (0.167, 0.066, "III", 0.05, "B"), (0.167, 0.066, "IV", 0.05, "C"),
        (1.2, 0.9, "II", 0.75, "E"), (1.2, 0.9, "IV", 0.75, "F"), (1.2, 0.9, "IV", 0.7499, "D"),
    ],
)  # fmt: skip
def test_more_severe_table_gives_the_category(S_DS: float, S_D1: float, risk: str, S_1: float, letter: str) -> None:
    assert value(category(S_DS, S_D1, risk, S_1), "SDC") == letter


def test_category_a_by_mapped_values_leaves_its_forces_open() -> None:
    calc = category(0.2, 0.1, S_1=0.04, S_S=0.15)
    assert value(calc, "SDC") == "A"
    assert any("1.4.2" in text for text in open_flags(calc, "SDC"))


def test_margin_names_the_nearest_change() -> None:
    margin = category(0.49, 0.19).lines.entries["SDC_DS"].line.margin
    assert margin is not None
    assert (margin.to, margin.shown) == ("below category D", "S_DS 2.0 %")
    assert margin.value == pytest.approx(2.0)
