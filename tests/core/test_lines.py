"""Lines and checks: what is printed of them, own lines of the user, values typed in place, handles."""

from __future__ import annotations

import json

import pytest

from calckit import Calc
from calckit.core.assemble import assemble
from calckit.core.display import plain
from calckit.errors import UnknownNameError
from tests.printed_audit import audit


@pytest.fixture
def calc() -> Calc:
    """A calculation with a few inputs."""
    made = Calc(project="Lines")
    made.document("S-1", title="Drawings")
    for name, value in (("V", "264.0 kip"), ("h_n", "80 ft"), ("W", "6060 kip"), ("V_applied", "120 kN")):
        made.given(name, value, source="S-1")
    made.levels("level, h_x [ft], w_x [kip]\nRoof, 26, 880\n2, 13, 1100", source="S-1")
    return made


def faults(calc: Calc) -> list[str]:
    """What the printed digits of the calculation do not show."""
    return audit(json.loads(assemble(calc).to_json())).faults


def test_own_line_as_text(calc: Calc) -> None:
    handle = calc.line("M_r", "V * 2/3 * h_n", unit="kip*ft", meaning="rough overturning moment")
    assert (handle.value, handle.unit, handle.shown, float(handle)) == (14080.0, "kip*ft", "14080 kip·ft", 14080.0)
    assert repr(handle) == "M_r = 14080 kip·ft"
    assert handle.quantity.to("kN*m").value == pytest.approx(14080 * 4.4482216152605 * 0.3048)
    assert plain(handle.line) == (
        "M_r  rough overturning moment\n"
        "    M_r = V × 2 / 3 × h_n = 264.0 kip × 2 / 3 × 80 ft = 14080 kip·ft\n"
        "    own formula"
    )
    assert faults(calc) == []


def test_converted_operands_print_both_values(calc: Calc) -> None:
    line = calc.line("V_d", "V - V_applied", unit="kip", meaning="difference").line
    assert line.inputs["V_applied"].shown == "120 kN = 26.98 kip"
    assert line.detail == "V_applied = 120 kN = 26.98 kip"
    assert line.forms["plain"][1] == "264.0 kip - 26.98 kip"
    in_newtons = calc.line("V_n", "V - V_applied", unit="kN", meaning="difference").line
    assert in_newtons.shown == "1054 kN" and in_newtons.inputs["V"].shown.startswith("264.0 kip = 1174")
    assert faults(calc) == []


def test_digits_asked_for(calc: Calc) -> None:
    assert calc.line("V_a", "V/7", unit="kip", meaning="a share", digits=6).shown == "37.7143 kip"
    assert calc.line("V_b", "V/7", unit="kip", meaning="a share", digits=2).shown == "38 kip"
    assert faults(calc) == []


def test_own_line_over_levels(calc: Calc) -> None:
    line = calc.line("M_w", "w_x*h_x", unit="kip*ft", meaning="first moment of the weight").line
    assert (line.value, line.rows, line.row) == ([22880.0, 14300.0], ["Roof", "2"], "Roof")
    assert line.forms["plain"] == ["w_x × h_x", "880 kip × 26 ft"]
    assert calc.lines.tables["M_w"].shown == [["880", "26", "22880"], ["1100", "13", "14300"]]
    total = calc.line("M_t", 'total(M_w) - level(M_w, "2")', unit="kip*ft", meaning="the roof's share").line
    assert total.value == 22880 and total.rows == []
    assert faults(calc) == []


def test_symbols_of_other_parts_carry_their_part(calc: Calc) -> None:
    for part, value in (("X", "205.2 kip"), ("Y", "468.9 kip")):
        calc.part(part).given("V", value, source="S-1")
    line = calc.line("V_s", "X.V + Y.V + V", unit="kip", meaning="sum").line
    assert line.forms["plain"] == ["V_X + V_Y + V", "205.2 kip + 468.9 kip + 264.0 kip"]
    own = calc.part("X").line("V_s", "V + Y.V", unit="kip", meaning="sum").line
    assert (own.id, own.forms["plain"][0]) == ("X.V_s", "V + V_Y")
    assert list(own.inputs) == ["X.V", "Y.V"]
    assert faults(calc) == []


# checks


def test_check_that_is_met(calc: Calc) -> None:
    line = calc.check("V", "<=", "W", title="Own limit", source="S-1 note 3").line
    assert (line.id, line.verdict, line.shown, line.value) == ("own_limit", "OK", "0.0436", 0.0435643564356)
    assert line.forms["plain"] == ["V ≤ W", "264.0 kip ≤ 6060 kip"]
    assert plain(line) == "own_limit  Own limit\n    V ≤ W; 264.0 kip ≤ 6060 kip  OK\n    S-1 note 3"
    assert faults(calc) == []


def test_check_that_is_not_met_prints_the_numbers_as_they_are(calc: Calc) -> None:
    line = calc.check("W", "<", "V", title="Own limit", id="own").line
    assert (line.id, line.verdict, line.shown) == ("own", "NOT OK", "23.0")
    assert line.forms["plain"] == ["W < V", "6060 kip ≥ 264.0 kip"]
    assert [(flag.open, flag.owner) for flag in line.flags] == [(True, "originator")]
    assert faults(calc) == []


def test_ratio_is_demand_over_limit_either_way(calc: Calc) -> None:
    assert calc.check("W", ">=", "V", title="At least").line.shown == "0.0436"
    assert calc.check("V", ">", "W", title="More than").line.shown == "23.0"
    assert faults(calc) == []


def test_relation_is_printed_with_enough_digits_to_be_true(calc: Calc) -> None:
    calc.given("V_1", "1.00004 kip", source="S-1", meaning="one shear")
    calc.line("V_2", "V_1*1.00000001", unit="kip", meaning="a little more")
    line = calc.check("V_1", "<", "V_2", title="Just less").line
    assert (line.verdict, line.forms["plain"][1]) == ("OK", "1.00004 kip < 1.00004001 kip")
    line = calc.check("V_2", "<=", "V_1", title="Just more").line
    assert (line.verdict, line.forms["plain"][1]) == ("NOT OK", "1.00004001 kip > 1.00004 kip")
    assert faults(calc) == []


def test_rounding_on_the_way_decides_no_check(calc: Calc) -> None:
    calc.line("V_3", "V/3*3", unit="kip", meaning="the same by another road")
    assert calc.check("V_3", "<=", "V", title="Not more").line.verdict == "OK"
    assert calc.check("V_3", ">=", "V", title="Not less").line.verdict == "OK"
    assert calc.check("V_3", "<", "V", title="Less").line.verdict == "NOT OK"
    assert faults(calc) == []


def test_check_of_a_list_prints_the_worst_and_names_all(calc: Calc) -> None:
    calc.line("M_w", "w_x*h_x", unit="kip*ft", meaning="first moment")
    calc.given("M_a", "14300 kip*ft", source="S-1", meaning="limit")
    line = calc.check("M_w", "<=", "M_a", title="Moment").line
    assert (line.verdict, line.row, line.detail) == ("NOT OK", "Roof", "not met at Roof")
    assert line.forms["plain"][1] == "22880 kip·ft > 14300 kip·ft"
    single = calc.check('level(M_w, "2")', "<=", "M_a", title="Moment at 2").line
    assert (single.verdict, single.rows, single.shown) == ("OK", [], "1.00")
    assert faults(calc) == []


def test_check_that_cannot_be_made(calc: Calc) -> None:
    line = calc.check("theta", "<=", "theta_max", title="Stability").line
    assert (line.verdict, line.value, line.forms, line.shown) == ("NOT CHECKED", None, {}, "")
    assert line.missing.startswith("θ (stability coefficient), θ_max (largest stability")
    calc.given("T_analysis", "none: model not run", source="S-1")
    assert calc.check("T_analysis", "<=", "T_analysis", title="Period").line.verdict == "NOT CHECKED"


# handles, values typed in place


def test_handle_reads_what_is_in_force(calc: Calc) -> None:
    handle = calc["w_x"]
    assert (handle.rows, handle.shown, handle.unit) == (["Roof", "2"], ["880", "1100"], "kip")
    assert repr(handle) == "w_x = 880, 1100"
    with pytest.raises(TypeError, match="w_x is not a single number"):
        float(handle)
    del calc.lines.entries["w_x"]
    with pytest.raises(UnknownNameError, match="line 'w_x' is not known; known: "):
        _ = handle.value


def test_operand_typed_in_place_is_flagged_and_leaves_no_line(calc: Calc) -> None:
    calc.given("system", "moment frame: steel special moment frame", source="S-1")
    line = calc.asce7.approximate_period(h_n="70 ft").line
    assert line.inputs["h_n"].shown == "70 ft" and line.value == pytest.approx(0.028 * 70**0.8)
    assert "h_n typed in place: 70 ft" in [flag.text for flag in line.flags]
    assert calc["h_n"].value == 80


def test_reason_for_a_missing_value_is_shown(calc: Calc) -> None:
    line = calc.given("T_analysis", "none: model not run yet", source="S-1").line
    assert (line.value, line.shown) == ("none", "none: model not run yet")


def test_words_have_no_formula(calc: Calc) -> None:
    line = calc.given("site_class", "D default", source="S-1").line
    assert (line.value, line.typeset, line.unit) == ("D default", {}, "")
    assert plain(line) == "site_class  site class\n    D default\n    S-1"


def test_unknown_attribute(calc: Calc) -> None:
    with pytest.raises(AttributeError, match="Calc has no attribute 'en1998'"):
        _ = calc.en1998
    with pytest.raises(AttributeError, match="has no attribute 'base_sheer'"):
        _ = calc.asce7.base_sheer
