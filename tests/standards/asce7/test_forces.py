"""Chapter 12 of ASCE/SEI 7-16, forces: base shear, distribution, drift, stability.

Rules are from memory, high, unless a document is named; statics is its own source.
"""

from __future__ import annotations

from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calckit.core.calc import Calc
from calckit.errors import InputError

from .building import BRACED, HEIGHTS, NAMES, STEEL, levels, open_flags, start, value, whole


def shear(T: float, supplements: tuple[int, ...] | None = (), **more: Any) -> Calc:
    """C_s at a period, class C unless said otherwise."""
    inputs: dict[str, Any] = {
        "S_S": 1.0, "S_1": 0.3, "T_L": "6 s", "site_class": "C", "R": 8, "I_e": 1.0, "T": f"{T} s", "W": "1000 kip",
    }  # fmt: skip
    calc = start(supplements=supplements, **inputs | more)
    calc.asce7.design_spectrum()
    calc.asce7.base_shear()
    return calc


def governing(calc: Calc) -> list[str]:
    """The equations that govern C_s."""
    return [each.equation for each in calc.lines.entries["C_s"].line.candidates if each.governs]


@pytest.mark.parametrize(("T", "equation"), [(0.2, "12.8-2"), (1.0, "12.8-3"), (3.0, "12.8-5"), (7.0, "12.8-5")])
def test_governing_equation_is_named(T: float, equation: str) -> None:
    assert governing(shear(T)) == [equation]


def test_limit_by_s_1_is_a_candidate_from_0_6_on() -> None:
    strong = shear(3.0, S_S=0.8, S_1=0.6)
    assert governing(strong) == ["12.8-6"]
    assert value(strong, "C_s") == pytest.approx(0.5 * 0.6 / 8, rel=1e-11)
    assert "C_sfloor1" not in shear(3.0, S_S=0.8, S_1=0.599).lines.entries


def test_lower_limit_carries_the_importance_factor_and_0_01() -> None:
    assert value(shear(5.0, I_e=1.5), "C_s") == pytest.approx(0.044 * 0.8 * 1.5, rel=1e-11)
    assert value(shear(5.0, S_S=0.2, S_1=0.05), "C_s") == 0.01


@settings(max_examples=25, deadline=None)
@given(T=st.floats(0.05, 9.0))
def test_exception_2_and_the_increase_of_supplement_3_give_the_same_shear(T: float) -> None:
    """Both are ways to the same C_s at every period (11.4.8; the corner periods differ, C_s does not)."""
    site = {"site_class": "D", "S_S": 0.9, "S_1": 0.35}
    by_exception = shear(T, (), study_exception="exception 2", **site)
    by_increase = shear(T, (1, 3), study_exception="S_M1 increased", **site)
    assert value(by_exception, "C_s") == pytest.approx(value(by_increase, "C_s"), rel=1e-10)


def test_between_t_s_and_1_5_t_s_the_basic_value_alone_applies() -> None:
    calc = shear(0.9, (), study_exception="exception 2", site_class="D", S_S=0.9, S_1=0.35)
    assert value(calc, "T_S") < 0.9 < 1.5 * value(calc, "T_S")
    assert value(calc, "C_s") == value(calc, "C_sbasic")
    assert governing(calc) == ["12.8-2"]


def test_unanswered_11_4_8_shows_both_and_uses_the_larger() -> None:
    calc = shear(1.5, None, site_class="D", S_S=0.9, S_1=0.35)
    assert value(calc, "C_swith") == pytest.approx(1.5 * value(calc, "C_swithout"), rel=1e-10)
    assert value(calc, "C_s") == value(calc, "C_swith")
    assert any("11.4.8 asks for" in text for text in open_flags(calc, "F_a"))


def test_statics_of_the_distribution() -> None:
    calc = whole()
    F_x, V_x, M_x = (value(calc, name) for name in ("F_x", "V_x", "M_x"))
    assert sum(F_x) == pytest.approx(value(calc, "V"), rel=1e-9)
    assert V_x[-1] == pytest.approx(value(calc, "V"), rel=1e-9)
    assert M_x[-1] == pytest.approx(sum(F * h for F, h in zip(F_x, HEIGHTS, strict=True)), rel=1e-9)
    assert V_x == sorted(V_x)
    assert sum(value(calc, "C_vx")) == pytest.approx(1, rel=1e-9)


@pytest.mark.parametrize(("T", "k"), [(0.1, 1), (0.5, 1), (1.5, 1.5), (2.4999, 1.99995), (2.5, 2), (6, 2)])
def test_exponent_of_the_distribution(T: float, k: float) -> None:
    """The upper limit is 2.5 s (course note on ASCE/SEI 7-05), not the 2.0 s that N. Taly, p. 7.47 prints."""
    calc = start(V="100 kip", T=f"{T} s")
    levels(calc)
    calc.asce7.vertical_distribution()
    assert value(calc, "k") == pytest.approx(k, rel=1e-11)


def test_the_same_building_in_both_unit_sets() -> None:
    """Heights typed in meters and results in kN give the forces of the US calculation."""
    shares = {}
    for units in ("US", "SI"):
        calc = start(units, V="100 kip", T="1.2 s")
        levels(calc, "m" if units == "SI" else "ft", 0.3048 if units == "SI" else 1.0)
        calc.asce7.vertical_distribution()
        shares[units] = value(calc, "C_vx")
    assert shares["SI"] == pytest.approx(shares["US"], rel=1e-10)


def test_missing_inputs_are_named_at_once() -> None:
    with pytest.raises(InputError, match=r"asce7\.vertical_distribution") as caught:
        start(V="10 kip").asce7.vertical_distribution()
    assert [fault.symbol for fault in caught.value.faults] == ["T", "h_x", "w_x", "h_sx"]


DISPLACEMENTS = (2.2, 1.8, 1.4, 0.9, 0.4)  # in
LOADS = (450.0, 1020.0, 1600.0, 2180.0, 2780.0)  # kip


def drifted(system: str = STEEL, SDC: str = "D", **more: Any) -> Calc:
    """Drift of the demo building."""
    inputs: dict[str, Any] = {
        "system": system, "SDC": SDC, "risk_category": "II", "drift_class": "all other", "C_d": 5.5, "I_e": 1.25,
        "V": "200 kip", "T": "0.8 s",
    }  # fmt: skip
    calc = start(**inputs | more)
    levels(calc, delta_xe_in=DISPLACEMENTS, P_x_kip=LOADS)
    calc.asce7.vertical_distribution()
    calc.asce7.drift()
    return calc


def test_amplified_drift() -> None:
    calc = drifted(rho=1.0)
    steps = [upper - lower for upper, lower in zip(DISPLACEMENTS, (*DISPLACEMENTS[1:], 0.0), strict=True)]
    assert value(calc, "Delta") == pytest.approx([5.5 * each / 1.25 for each in steps], rel=1e-9)


def test_allowable_drift_of_a_moment_frame_is_divided_by_rho() -> None:
    plain, divided = drifted(rho=1.0), drifted(rho=1.3)
    ratio = [a / b for a, b in zip(value(plain, "Delta_a"), value(divided, "Delta_a"), strict=True)]
    assert ratio == pytest.approx([1.3] * 5, rel=1e-9)
    assert value(plain, "Delta_a")[0] == pytest.approx(0.020 * 144, rel=1e-11)


@pytest.mark.parametrize(("system", "SDC"), [(BRACED, "D"), (STEEL, "C")])
def test_rho_does_not_touch_other_drift_limits(system: str, SDC: str) -> None:
    assert value(drifted(system, SDC, rho=1.3), "Delta_a")[0] == pytest.approx(0.020 * 144, rel=1e-11)


def test_moment_frame_without_rho_is_not_checked() -> None:
    line = drifted().lines.entries["drift"].line
    assert line.verdict == "NOT CHECKED"
    assert line.missing.startswith("ρ ")


def test_drift_without_displacements_is_not_checked() -> None:
    calc = start(system=BRACED, SDC="D", risk_category="II", drift_class="all other", C_d=5, I_e=1.0)
    levels(calc)
    assert calc.asce7.drift().line.verdict == "NOT CHECKED"


def test_drift_names_the_stories_that_fail() -> None:
    """Story drifts 1.76, 1.76, 2.2, 2.2, 1.76 in against 2.016 in (14 ft: 2.352 in) in risk category III."""
    calc = drifted(BRACED, risk_category="III", drift_class="all other")
    line = calc.lines.entries["drift"].line
    assert line.verdict == "NOT OK"
    assert line.detail.startswith("not met at 4, 3")


def test_torsional_irregularity_asks_for_edge_drifts() -> None:
    calc = start(system=BRACED, SDC="D", risk_category="II", drift_class="all other", C_d=5, I_e=1.0)
    levels(calc, delta_xe_in=DISPLACEMENTS)
    calc.answer("H1a", "yes", basis="demo")
    calc.asce7.drift()
    assert any("along the edges" in text for text in open_flags(calc, "drift"))


def test_stability_is_the_elastic_ratio() -> None:
    """theta is P_x Delta_e/(V_x h_sx) with the elastic drift: C_d and I_e cancel."""
    calc = drifted(rho=1.0)
    calc.asce7.stability()
    elastic = [upper - lower for upper, lower in zip(DISPLACEMENTS, (*DISPLACEMENTS[1:], 0.0), strict=True)]
    heights = [144.0, 144.0, 144.0, 144.0, 168.0]
    rows = zip(LOADS, elastic, value(calc, "V_x"), heights, strict=True)
    assert value(calc, "theta") == pytest.approx([P * d / (V * h) for P, d, V, h in rows], rel=1e-9)
    assert value(calc, "theta_max") == pytest.approx(0.5 / 5.5, rel=1e-11)


def test_stability_limit_is_at_most_a_quarter() -> None:
    calc = drifted(C_d=1.5, rho=1.0)
    calc.asce7.stability()
    assert value(calc, "theta_max") == 0.25


def test_stories_above_the_threshold_are_named() -> None:
    calc = drifted(V="60 kip", rho=1.0)
    calc.asce7.stability()
    theta = value(calc, "theta")
    over = [name for name, each in zip(NAMES, theta, strict=True) if each > 0.10]
    assert over
    assert any(f"above 0.10 at {', '.join(over)}" in text for text in open_flags(calc, "stability"))


def test_stability_without_loads_is_not_checked() -> None:
    calc = start(C_d=5.5)
    levels(calc)
    line = calc.asce7.stability().line
    assert line.verdict == "NOT CHECKED"
    assert "P_x (vertical load at level x and above" in line.missing
