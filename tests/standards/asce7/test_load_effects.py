"""Load effects, combinations and directions (12.4, 2.3.6, 2.4.5, 12.5) in both editions.

Rules are those listed in NOTES.md; numbers are worked here by hand arithmetic from inputs of our own.
"""

from __future__ import annotations

from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calckit.core.calc import Calc
from calckit.errors import InputError, ScopeError, UnitError

from .loads import EDITIONS, begin, faults, line, pasted, sources, value

EFFECTS = {"D": (120, -14), "L": (45, 3), "S": (12, 0), "Q_E": (80, -33)}
NAMES = ("A-1", "B-1")


def combined(standard: str = "ASCE 7-16", units: str = "US", unit: str = "kip", **inputs: Any) -> Calc:
    """The combinations of two elements."""
    effects = {name: inputs.pop(name, EFFECTS[name]) for name in EFFECTS}
    calc = begin(standard, units, **inputs)
    calc.asce7.load_effects()
    columns = {f"{name} [{unit}]": column for name, column in effects.items()}
    calc.rows("elements", pasted("element", NAMES, columns), source="P")
    calc.asce7.load_combinations()
    return calc


@pytest.mark.parametrize("standard", EDITIONS)
def test_factors_on_dead_load(standard: str) -> None:
    calc = begin(standard)
    calc.asce7.load_effects()
    r = 0.2 * 0.83
    wanted = {"r_Ev": r, "c_D6": 1.2 + r, "c_D7": 0.9 - r, "c_D8": 1 + 0.7 * r, "c_D9": 1 + 0.525 * r,
              "c_D10": 0.6 - 0.7 * r}  # fmt: skip
    assert {name: value(calc, name) for name in wanted} == pytest.approx(wanted, rel=1e-11)


@pytest.mark.parametrize(("standard", "six", "nine"), [("ASCE 7-16", 0.2, 0.75), ("ASCE 7-22", 0.15, 0.1)])
def test_snow_by_edition(standard: str, six: float, nine: float) -> None:
    calc = begin(standard)
    calc.asce7.load_effects()
    assert (value(calc, "c_S6"), value(calc, "c_S9")) == (six, nine)
    obtained = {line(calc, name).source.obtained for name in ("c_S6", "c_S9")}  # type: ignore[union-attr]
    assert obtained == ({"memory, medium"} if standard == "ASCE 7-22" else {"memory, high", "found"})


def test_vertical_effect_from_the_vertical_spectrum_and_from_the_limited_ordinate() -> None:
    calc = begin(S_av=0.6)
    calc.asce7.load_effects()
    assert value(calc, "r_Ev") == pytest.approx(0.18, rel=1e-11)
    limited = begin()
    limited.given("S_DSlim", 0.7, source="P", meaning="S_DS limited by 12.8.1.3")
    limited.asce7.load_effects()
    assert value(limited, "r_Ev") == pytest.approx(0.14, rel=1e-11)
    assert "12.8.1.3" in line(limited, "r_Ev").detail


def test_vertical_effect_may_be_left_out_in_category_b_only() -> None:
    calc = begin(SDC="B", vertical_effect="left out")
    calc.asce7.load_effects()
    assert (value(calc, "r_Ev"), value(calc, "c_D6"), value(calc, "c_D10")) == (0, 1.2, 0.6)
    with pytest.raises(ScopeError, match=r"in design category B only .* category D; answer vertical_effect with"):
        begin(vertical_effect="left out").asce7.load_effects()


@pytest.mark.parametrize(("answer", "factor"), [("yes", 0.5), ("no", 1.0), (None, 1.0)])
def test_factor_on_live_load(answer: str | None, factor: float) -> None:
    calc = combined(L_reduced=answer)
    assert value(calc, "c_L") == factor
    assert value(calc, "U_6")[0] == pytest.approx(1.366 * 120 + factor * 45 + 0.2 * 12 + 1.3 * 80, rel=1e-11)


@pytest.mark.parametrize("standard", EDITIONS)
def test_every_combination_in_both_senses(standard: str) -> None:
    calc = combined(standard)
    six, nine = (0.2, 0.75) if standard == "ASCE 7-16" else (0.15, 0.1)
    for row, (D, L, S, Q_E) in enumerate(zip(*EFFECTS.values(), strict=True)):
        v, h = 0.166 * D, 1.3 * Q_E
        wanted = {
            "U_6": 1.2 * D + v + L + six * S + h, "U_6r": 1.2 * D + v + L + six * S - h,
            "U_7": 0.9 * D - v + h, "U_7r": 0.9 * D - v - h,
            "A_8": D + 0.7 * v + 0.7 * h, "A_8r": D + 0.7 * v - 0.7 * h,
            "A_9": D + 0.525 * v + 0.525 * h + 0.75 * L + nine * S,
            "A_9r": D + 0.525 * v - 0.525 * h + 0.75 * L + nine * S,
            "A_10": 0.6 * D - 0.7 * v + 0.7 * h, "A_10r": 0.6 * D - 0.7 * v - 0.7 * h,
        }  # fmt: skip
        assert {name: value(calc, name)[row] for name in wanted} == pytest.approx(wanted, rel=1e-10)
        for stem in "UA":
            each = [number for name, number in wanted.items() if name.startswith(stem)]
            assert value(calc, f"{stem}_max")[row] == pytest.approx(max(each), rel=1e-10)
            assert value(calc, f"{stem}_min")[row] == pytest.approx(min(each), rel=1e-10)


@settings(max_examples=20, deadline=None)
@given(
    first=st.tuples(*[st.integers(-500, 500)] * 4), second=st.tuples(*[st.integers(-500, 500)] * 4),
    factor=st.integers(1, 9),
)  # fmt: skip
def test_combinations_are_linear(first: tuple[int, ...], second: tuple[int, ...], factor: int) -> None:
    """The combination of a sum is the sum of the combinations, and a multiple's the multiple."""
    rows = zip(first, second, strict=True)
    pair = combined(**dict(zip(EFFECTS, rows, strict=True)))
    mixed = [a + factor * b for a, b in zip(first, second, strict=True)]
    single = combined(**{name: (each, 0) for name, each in zip(EFFECTS, mixed, strict=True)})
    for name in ("E_v", "E_h", "U_6", "U_6r", "U_7", "U_7r", "A_8", "A_9", "A_9r", "A_10"):
        one, other = value(pair, name)
        assert value(single, name)[0] == pytest.approx(one + factor * other, rel=1e-9, abs=1e-6)


def test_trap_15_overstrength_takes_no_redundancy() -> None:
    one, more = (combined(overstrength="yes", rho=rho) for rho in (1.0, 1.3))
    for name in ("E_mh", "U_6", "U_7r", "A_8", "A_10r"):
        assert value(one, name) == value(more, name)
    assert value(more, "E_mh") == [200, -82.5]
    assert "E_h" not in more.lines.entries
    assert "with overstrength" in " ".join(table.title for table in more.lines.tables.values())


def test_overstrength_is_limited_by_the_capacity() -> None:
    calc = combined(overstrength="yes", E_cl="150 kip")
    assert value(calc, "E_mh") == [150, 82.5]
    assert value(calc, "U_min")[0] == pytest.approx(0.734 * 120 - 150, rel=1e-10)


@pytest.mark.parametrize("unit", ["kip*ft", "lb/ft", "kN*m"])
def test_any_unit_of_force_or_moment(unit: str) -> None:
    calc = combined(unit=unit)
    assert line(calc, "U_max").unit == unit
    assert value(calc, "U_max") == pytest.approx(value(combined(), "U_max"), rel=1e-11)
    assert faults(calc) == []


def test_effects_of_unlike_kind_and_of_no_force_are_refused() -> None:
    calc = begin(D="100 kip", L="0 kip", S="0 kip", Q_E="20 kip*ft")
    calc.asce7.load_effects()
    with pytest.raises(UnitError, match="E_h: "):
        calc.asce7.load_combinations()
    assert "E_v" not in calc.lines.entries
    with pytest.raises(InputError, match=r"D .effect of dead load.: needed a load effect with its unit; given 100 ft"):
        begin(D="100 ft")


def test_one_element_typed_alone() -> None:
    calc = begin(D="100 kip", L="40 kip", S="0 kip", Q_E="50 kip", load_method="strength")
    calc.asce7.load_effects()
    calc.asce7.load_combinations()
    assert value(calc, "U_max") == pytest.approx(136.6 + 40 + 65, rel=1e-11)
    assert "A_8" not in calc.lines.entries and "c_D8" not in calc.lines.entries
    assert faults(calc) == []


def test_the_larger_of_both_directions() -> None:
    calc = begin(D="100 kip", L="40 kip", S="0 kip", Q_Ep="-50 kip", Q_Et="40 kip")
    calc.asce7.load_effects()
    calc.asce7.load_combinations()
    assert value(calc, "Q_E") == 62
    assert faults(calc) == []
    twice = begin(D="1 kip", L="0 kip", S="0 kip", Q_E="3 kip", Q_Ep="2 kip", Q_Et="2 kip")
    twice.asce7.load_effects()
    with pytest.raises(InputError, match="Q_E beside Q_Ep; cure: give Q_E alone"):
        twice.asce7.load_combinations()


def test_factors_serve_own_lines() -> None:
    calc = combined()
    moments = {"M_D": "90 kip*ft", "M_L": "30 kip*ft", "M_E": "150 kip*ft"}
    for name, moment in moments.items():
        calc.given(name, moment, source="P", meaning="bending moment")
    own = calc.line("M_u", "c_D6*M_D + c_L*M_L + rho*M_E", unit="kip*ft", meaning="bending moment for strength")
    assert own.value == pytest.approx(1.366 * 90 + 30 + 1.3 * 150, rel=1e-11)


def test_what_is_not_there_yet_is_named() -> None:
    calc = begin(rho=None, D="100 kip")
    calc.asce7.load_effects()
    check = calc.asce7.load_combinations().line
    assert (check.verdict, check.missing) == (
        "NOT CHECKED",
        "L (effect of live load), S (effect of snow load), Q_E (effect of the horizontal seismic forces), "
        "ρ (redundancy factor)",
    )
    with pytest.raises(InputError, match=r"r_Ev .*asce7\.load_effects\(\)") as caught:
        begin().asce7.load_combinations()
    assert len(caught.value.faults) == 9
    with pytest.raises(InputError, match=r"S_DS .*asce7\.design_spectrum\(\)"):
        begin(S_DS=None).asce7.load_effects()


def test_combinations_in_words() -> None:
    calc = begin(load_method="strength", L_reduced="yes")
    calc.asce7.load_effects()
    assert line(calc, "combinations").text == (
        "Strength: (6) 1.366 D + 1.3 Q_E + 0.5 L + 0.2 S; (7) 0.7340 D + 1.3 Q_E. "
        "Q_E acts in either sense; with overstrength, 2.5 Q_E stands for 1.3 Q_E."
    )
    assert set(line(calc, "combinations").inputs) >= {"c_D6", "c_D7", "rho", "Omega_0"}
    early = begin(load_method="allowable stress", rho=None, Omega_0=None)
    early.asce7.load_effects()
    assert "(10) 0.4838 D + 0.7 × ρ Q_E. Q_E acts in either sense; with overstrength, Ω_0" in (
        line(early, "combinations").text
    )


def test_allowable_stress_coefficient_carries_rho() -> None:
    calc = begin(C_s=0.16)
    calc.asce7.load_effects()
    assert value(calc, "C_sA") == pytest.approx(0.7 * 1.3 * 0.16, rel=1e-11)


@pytest.mark.parametrize(
    ("inputs", "verdict", "words"),
    [
        ({"SDC": "B"}, "OK", "design category B: each direction by itself"),
        ({"SDC": "C", "H5": "no"}, "OK", "design category C: each direction by itself"),
        ({"SDC": "C"}, "NOT CHECKED", "answers H5"),
        ({"SDC": "D"}, "NOT CHECKED", "answers H5, two_systems"),
        ({"SDC": "D", "H5": "no", "two_systems": "no"}, "OK", "design category D: each direction by itself"),
        ({"SDC": "C", "H5": "no", "two_systems": "yes"}, "OK", "design category C: each direction by itself"),
        ({"SDC": "E", "two_systems": "yes"}, "NOT CHECKED", "answer orthogonal"),
        ({"SDC": "C", "H5": "yes", "orthogonal": "yes"}, "OK", "design category C, nonparallel systems (H5): 100 %"),
        ({"SDC": "D", "two_systems": "yes", "orthogonal": "no"}, "NOT OK", "of two intersecting systems: 100 %"),
        ({"SDC": None}, "NOT CHECKED", "SDC (seismic design category)"),
    ],
)
@pytest.mark.parametrize("standard", EDITIONS)
def test_directions_taken_together(standard: str, inputs: dict[str, Any], verdict: str, words: str) -> None:
    calc = begin(standard, **inputs)
    calc.asce7.load_effects()
    found = line(calc, "directions")
    assert found.verdict == verdict
    assert words in (found.missing or found.detail)


def test_category_a_is_refused() -> None:
    with pytest.raises(ScopeError, match=r"12\.4 does not apply in design category A"):
        begin(SDC="A").asce7.load_effects()


@pytest.mark.parametrize("standard", EDITIONS)
@pytest.mark.parametrize("units", ["US", "SI"])
@pytest.mark.parametrize("overstrength", ["yes", "no"])
def test_printed_digits(standard: str, units: str, overstrength: str) -> None:
    calc = combined(standard, units, "kN" if units == "SI" else "kip", S_DS=0.8337, overstrength=overstrength,
                    D=(121.37, -8.1), Q_E=(77.7, 31.13))  # fmt: skip
    assert faults(calc) == []


def test_equation_numbers_stand_under_7_16_alone() -> None:
    printed = dict(sources(combined()))
    assert (printed["E_h"], printed["r_Ev"]) == (
        "ASCE/SEI 7-16 12.4.2.1, eq. 12.4-3", "ASCE/SEI 7-16 12.4.2.2, eq. 12.4-4a",
    )  # fmt: skip
    later = dict(sources(combined("ASCE 7-22")))
    assert later["c_S9"] == "ASCE/SEI 7-22 2.4.5"
    assert not [text for text in later.values() if "eq." in text]
