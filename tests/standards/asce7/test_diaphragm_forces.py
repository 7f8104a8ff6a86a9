"""Diaphragm and collector forces (12.10.1, 12.10.2) in both editions.

Rules are those listed in NOTES.md; numbers are worked here by hand arithmetic from inputs of our own.
"""

from __future__ import annotations

from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calckit.core.calc import Calc
from calckit.errors import InputError, ScopeError

from .building import open_flags
from .loads import EDITIONS, LEVELS, WEIGHTS, begin, distributed, faults, line, pasted, sources, value

NOT_IRREGULAR = dict.fromkeys(("H1a", "H1b", "H2", "H3", "H4", "V4"), "no")
W_PX = (375.0, 610.0, 640.0)
NONE = "none: nothing of the kind"


def diaphragms(standard: str = "ASCE 7-16", units: str = "US", **inputs: Any) -> Calc:
    """The diaphragm forces of the demo with a list of weights."""
    of_demo = {"diaphragm_material": "wood", "F_tx": NONE, "F_pa": NONE, **NOT_IRREGULAR}
    columns = {f"{name} [kip]": inputs.pop(name) for name in ("F_tx", "F_pa") if isinstance(inputs.get(name), tuple)}
    for column in columns:
        of_demo.pop(column.partition(" ")[0])
    calc = distributed(begin(standard, units, **of_demo | inputs))
    calc.rows("diaphragms", pasted("level", LEVELS, {"w_px [kip]": W_PX, **columns}), source="P")
    calc.asce7.diaphragm_forces()
    return calc


@pytest.mark.parametrize("standard", EDITIONS)
def test_force_and_bounds(standard: str) -> None:
    calc = diaphragms(standard)
    F_x = value(calc, "F_x")
    basic = [w * sum(F_x[: i + 1]) / sum(WEIGHTS[: i + 1]) for i, w in enumerate(W_PX)]
    assert value(calc, "F_pxbasic") == pytest.approx(basic, rel=1e-9)
    assert value(calc, "F_pxmin") == pytest.approx([0.2 * 0.83 * w for w in W_PX], rel=1e-9)
    assert value(calc, "F_pxmax") == pytest.approx([0.4 * 0.83 * w for w in W_PX], rel=1e-9)
    wanted = [min(max(b, 0.166 * w), 0.332 * w) for b, w in zip(basic, W_PX, strict=True)]
    assert value(calc, "F_px") == pytest.approx(wanted, rel=1e-9)
    assert value(calc, "F_dx") == value(calc, "F_px")


@settings(max_examples=30, deadline=None)
@given(
    V=st.floats(5, 2000), S_DS=st.floats(0.2, 2), I_e=st.sampled_from([1.0, 1.25, 1.5]),
    weights=st.lists(st.floats(10, 400), min_size=3, max_size=3),
)  # fmt: skip
def test_force_stays_within_its_bounds(V: float, S_DS: float, I_e: float, weights: list[float]) -> None:
    calc = distributed(begin(S_DS=round(S_DS, 4), I_e=I_e, diaphragm_material="wood"), V=f"{V:.3f} kip")
    calc.rows("w", pasted("level", LEVELS, {"w_px [kip]": [f"{w:.2f}" for w in weights]}), source="P")
    calc.asce7.diaphragm_forces()
    columns = [value(calc, name) for name in ("F_pxmin", "F_px", "F_pxmax", "F_pxbasic", "i_px")]
    for low, F, high, basic, governs in zip(*columns, strict=True):
        assert low <= F <= high
        assert {1: basic, 2: low, 3: high}[int(governs)] == F


def test_trap_13_the_limits_take_w_px_and_the_importance_factor() -> None:
    calc = diaphragms(I_e=1.5)
    for name, factor in (("F_pxmin", 0.2), ("F_pxmax", 0.4)):
        assert value(calc, name) == pytest.approx([factor * 0.83 * 1.5 * w for w in W_PX], rel=1e-9)
    whole = distributed(begin(I_e=1.5, w_px_basis="w_x", diaphragm_material="wood"))
    whole.asce7.diaphragm_forces()
    assert value(whole, "w_px") == list(WEIGHTS)
    assert "on the safe side" in line(whole, "w_px").detail


def test_trap_15_rho_is_in_transfer_forces_alone() -> None:
    one, more = (diaphragms(rho=rho, F_tx=(0, 10, 24)) for rho in (1.0, 1.3))
    for name in ("F_pxbasic", "F_pxmin", "F_pxmax", "F_px", "F_ca", "F_cb", "F_cm", "F_cx"):
        assert value(one, name) == value(more, name)
    assert value(one, "F_Tx") == [0, 10, 24]
    assert value(more, "F_Tx") == pytest.approx([0, 13, 31.2], rel=1e-12)


@pytest.mark.parametrize("standard", EDITIONS)
def test_transfer_forces_take_overstrength_with_an_offset_out_of_plane(standard: str) -> None:
    calc = diaphragms(standard, H4="yes", F_tx=(0, 10, 24))
    assert value(calc, "F_Tx") == [0, 25, 60]
    total = [F + t for F, t in zip(value(calc, "F_px"), (0, 25, 60), strict=True)]
    assert value(calc, "F_dx") == pytest.approx(total, rel=1e-9)
    assert "offset out of plane" in line(calc, "F_Tx").detail


def test_transfer_forces_wait_for_their_factor_and_for_the_forces() -> None:
    waiting = diaphragms(rho=None, F_tx=(0, 10, 24))
    assert (line(waiting, "transfer").verdict, line(waiting, "transfer").missing) == (
        "NOT CHECKED", "ρ (redundancy factor)",
    )  # fmt: skip
    offset = diaphragms(H4="yes")
    assert line(offset, "transfer").verdict == "NOT CHECKED"
    assert "with irregularity H4 there are such forces" in line(offset, "transfer").missing
    assert line(diaphragms(F_tx=None), "transfer").verdict == "NOT CHECKED"
    assert (line(diaphragms(), "transfer").verdict, open_flags(diaphragms(), "F_dx")) == ("OK", [])


def test_the_force_of_the_analysis_counts_where_it_is_larger() -> None:
    calc = diaphragms(F_pa=(400, 1, 1))
    assert value(calc, "F_dx") == [400, *value(calc, "F_px")[1:]]
    assert "are not given (F_pa)" in open_flags(diaphragms(F_pa=None), "F_dx")[0]


@pytest.mark.parametrize("name", ["H1a", "H1b", "H2", "H3", "H4", "V4"])
def test_connections_are_increased_for_some_irregularities(name: str) -> None:
    calc = diaphragms(**{name: "yes"})
    assert value(calc, "F_jx") == pytest.approx([1.25 * F for F in value(calc, "F_dx")], rel=1e-9)
    assert value(calc, "F_cm") == pytest.approx([1.25 * F for F in value(calc, "F_pxmin")], rel=1e-9)
    assert line(calc, "F_jx").detail.startswith(f"irregularity {name}")


def test_what_the_numbers_found_comes_before_the_answer() -> None:
    calc = distributed(begin(diaphragm_material="wood", w_px_basis="w_x", **NOT_IRREGULAR))
    calc.given("H2_found", "yes", source="P", meaning="irregularity H2 by the numbers")
    calc.asce7.diaphragm_forces()
    assert line(calc, "F_jx").detail.startswith("irregularity H2")
    assert {"H2", "H2_found"} <= set(line(calc, "F_jx").inputs)


def test_no_increase_in_category_c_and_none_decided_while_an_answer_is_open() -> None:
    calm = diaphragms(SDC="C", H2="yes")
    assert "F_jx" not in calm.lines.entries and value(calm, "F_cm") == value(calm, "F_pxmin")
    waiting = diaphragms(H1a=None, H3=None)
    assert (line(waiting, "connections").verdict, line(waiting, "connections").missing) == (
        "NOT CHECKED", "answers H1a, H3",
    )  # fmt: skip
    assert line(diaphragms(), "connections").verdict == "OK"


def test_collectors_take_the_largest_of_three() -> None:
    calc = diaphragms()
    three = [[2.5 * F for F in value(calc, name)] for name in ("F_x", "F_pxbasic")] + [value(calc, "F_pxmin")]
    assert value(calc, "F_cx") == pytest.approx([max(each) for each in zip(*three, strict=True)], rel=1e-9)
    by_minimum = diaphragms(Omega_0=1.0, S_DS=2.0)
    assert value(by_minimum, "i_cx") == [3, 3, 3] and value(by_minimum, "F_cx") == value(by_minimum, "F_pxmin")


def test_collectors_without_overstrength_in_category_b_and_waiting_without_omega_0() -> None:
    low = diaphragms(SDC="B", diaphragm_material=None)
    assert "F_cx" not in low.lines.entries and "without overstrength" in line(low, "collectors").detail
    assert line(diaphragms(Omega_0=None), "collectors").missing == "Ω_0 (overstrength factor)"


@pytest.mark.parametrize("standard", EDITIONS)
def test_precast_diaphragms_are_refused_in_categories_c_to_f(standard: str) -> None:
    with pytest.raises(ScopeError, match=r"12\.10\.3 is mandatory for precast .* category D .* outside it"):
        diaphragms(standard, diaphragm_material="precast concrete")
    assert value(diaphragms(standard, SDC="B", diaphragm_material="precast concrete"), "F_px")
    asked = open_flags(diaphragms(standard, diaphragm_material=None, system="ordinary precast wall"), "F_px")
    assert len(asked) == 1 and "the system is of precast concrete" in asked[0] and "answer diaphragm_mat" in asked[0]


def test_category_a_is_refused() -> None:
    with pytest.raises(ScopeError, match=r"12\.10 does not apply in design category A; leave the step out"):
        diaphragms(SDC="A")


def test_every_missing_input_is_named_at_once() -> None:
    with pytest.raises(InputError, match=r"asce7\.diaphragm_forces") as caught:
        begin(S_DS=None, I_e=None).asce7.diaphragm_forces()
    assert [fault.symbol for fault in caught.value.faults] == ["S_DS", "I_e", "F_x", "w_x", "w_px"]
    assert 'or given("w_px_basis", "w_x", ...)' in str(caught.value)


def test_rows_that_are_not_the_levels_are_refused() -> None:
    calc = distributed(begin(diaphragm_material="wood"))
    calc.rows("w", pasted("level", LEVELS[::-1], {"w_px [kip]": W_PX}), source="P")
    with pytest.raises(InputError, match=r"w_px .*Roof, 3, 2; given 2, 3, Roof; cure: name the rows as the levels"):
        calc.asce7.diaphragm_forces()
    assert "F_pxbasic" not in calc.lines.entries


def test_a_list_beside_w_x_is_refused() -> None:
    with pytest.raises(InputError, match="w_x beside a list w_px; cure: answer list"):
        diaphragms(w_px_basis="w_x")


def test_the_same_forces_in_both_unit_sets() -> None:
    us, si = diaphragms(F_tx=(0, 10, 24)), diaphragms(units="SI", F_tx=(0, 10, 24))
    assert line(si, "F_dx").unit == "kN"
    in_kip = [F / 4.4482216152605 for F in value(si, "F_dx")]  # kN in a kip: NIST SP 811
    assert in_kip == pytest.approx(value(us, "F_dx"), rel=1e-10)


@pytest.mark.parametrize("standard", EDITIONS)
@pytest.mark.parametrize("units", ["US", "SI"])
def test_printed_digits(standard: str, units: str) -> None:
    calc = diaphragms(standard, units, H2="yes", F_tx=(0.3, 10.7, 24.1), F_pa=(31, 90.5, 140))
    assert faults(calc) == []
    assert {table.title for table in calc.lines.tables.values()} >= {
        "Diaphragm forces", "Diaphragm forces for design", "Collector forces",
    }  # fmt: skip


def test_equation_numbers_stand_under_7_16_alone() -> None:
    printed = dict(sources(diaphragms()))
    assert printed["F_pxmin"] == "ASCE/SEI 7-16 12.10.1.1, eq. 12.10-2"
    later = dict(sources(diaphragms("ASCE 7-22")))
    assert later["F_pxmin"] == "ASCE/SEI 7-22 12.10.1.1"
    assert not [text for text in later.values() if "eq." in text]
