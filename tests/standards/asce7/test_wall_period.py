"""The period of masonry and concrete shear walls, ASCE/SEI 7-16 eqs 12.8-9 and 12.8-10 (from memory, high)."""

from __future__ import annotations

from dataclasses import asdict
from math import sqrt
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calckit.core.assemble import assemble
from calckit.core.calc import Calc
from calckit.errors import InputError, ScopeError
from tests.printed_audit import audit

WALL = "bearing wall: special reinforced concrete shear wall"
WALLS = "wall, D_i [ft], t_i [in]\nA, 20, 10\nB, 12.5, 8\nC, 31, 10"
METRIC = "wall, D_i [m], t_i [mm]\nA, 6.096, 254\nB, 3.81, 203.2\nC, 9.4488, 254"


def begin(
    edition: str = "ASCE 7-16", units: str = "US", h_n: str = "50 ft", A_B: str = "6000 ft**2", walls: str = WALLS,
    system: str = WALL, **more: Any,
) -> Calc:  # fmt: skip
    """A wall structure whose period is found from its walls."""
    calc = Calc(project="Demo", number="D-1", standard=edition, units=units)
    calc.document("P", title="Demo data")
    inputs = {"h_n": h_n, "A_B": A_B, "system": system, "T_a_method": "walls", **more}
    for name, word in inputs.items():
        calc.given(name, word, source="P")
    if walls:
        calc.rows("walls", walls, source="P")
    return calc


def by_hand(h_n: float, A_B: float, walls: list[tuple[float, float]]) -> float:
    """The period in s from feet, inches for the thickness."""
    C_w = 100 / A_B * sum(D * t / 12 / (1 + 0.83 * (h_n / D) ** 2) for D, t in walls)
    return 0.0019 / sqrt(C_w) * h_n


@pytest.mark.parametrize("edition", ["ASCE 7-16", "ASCE 7-22"])
def test_period_of_walls(edition: str) -> None:
    calc = begin(edition)
    T_a = float(calc.asce7.approximate_period())
    assert T_a == pytest.approx(by_hand(50, 6000, [(20, 10), (12.5, 8), (31, 10)]), rel=1e-11)
    source = calc.lines.entries["T_a"].line.source
    said = "ASCE/SEI 7-16 12.8.2.1, eq. 12.8-9" if edition == "ASCE 7-16" else "ASCE/SEI 7-22 12.8.2.1"
    assert source is not None and source.text() == said


def test_both_unit_sets_give_the_same_period() -> None:
    """Not so with 0.00058, recalled for meters: that is 0.0019 x 0.3048, where 0.0019/0.3048 is right."""
    own = float(begin().asce7.approximate_period())
    for units in ("US", "SI"):
        metric = begin(units=units, walls=METRIC, h_n="15.24 m", A_B="557.418240 m**2")
        assert float(metric.asce7.approximate_period()) == pytest.approx(own, rel=1e-9)


def test_all_that_is_missing_is_named_at_once() -> None:
    calc = Calc(project="Demo", number="D-1")
    calc.document("P", title="Demo data")
    calc.given("system", WALL, source="P")
    calc.given("T_a_method", "walls", source="P")
    with pytest.raises(InputError) as caught:
        calc.asce7.approximate_period()
    assert [fault.symbol for fault in caught.value.faults] == ["D_i", "t_i", "A_B", "h_n"]
    assert 'supply it with rows("walls", ...), column D_i' in str(caught.value)


@pytest.mark.parametrize(
    ("system", "h_n", "match"),
    [
        ("moment frame: steel special moment frame", "50 ft", "is no masonry or concrete shear wall; set T_a_method"),
        ("dual with special moment frame: special reinforced concrete wall", "50 ft", "is no masonry or concrete"),
        (WALL, "121 ft", r"h_n = 121 ft is above 120 ft; set T_a_method to table"),
    ],
)  # fmt: skip
def test_outside_the_clause_it_is_refused(system: str, h_n: str, match: str) -> None:
    with pytest.raises(ScopeError, match=match):
        begin(system=system, h_n=h_n).asce7.approximate_period()


def test_height_limit_in_meters() -> None:
    assert float(begin(units="SI", h_n="36.6 m", walls=METRIC).asce7.approximate_period()) > 0
    with pytest.raises(ScopeError, match=r"h_n = 36\.7 m is above 36\.6 m"):
        begin(units="SI", h_n="36.7 m", walls=METRIC).asce7.approximate_period()


def test_masonry_and_typed_height() -> None:
    calc = begin(system="building frame: special reinforced masonry")
    calc.asce7.approximate_period(h_n="60 ft")
    assert "h_n typed in place: 60 ft" in [flag.text for flag in calc.lines.entries["T_a"].line.flags]


@given(lengths=st.lists(st.integers(4, 60), min_size=1, max_size=5), h_n=st.integers(12, 120))
@settings(deadline=None, max_examples=25)
def test_longer_walls_and_lower_buildings_are_stiffer(lengths: list[int], h_n: int) -> None:
    rows = "\n".join(f"{i}, {length}, 10" for i, length in enumerate(lengths))
    own = begin(h_n=f"{h_n} ft", walls=f"wall, D_i [ft], t_i [in]\n{rows}")
    T_a = float(own.asce7.approximate_period())
    assert T_a == pytest.approx(by_hand(h_n, 6000, [(length, 10) for length in lengths]), rel=1e-9)
    longer = begin(h_n=f"{h_n} ft", walls=f"wall, D_i [ft], t_i [in]\n{rows}\nmore, 10, 10")
    assert float(longer.asce7.approximate_period()) < T_a


@pytest.mark.parametrize("units", ["US", "SI"])
def test_lines_follow_from_what_is_printed(units: str) -> None:
    calc = begin(units=units)
    calc.asce7.approximate_period()
    found = audit(asdict(assemble(calc)))
    assert found.faults == [] and found.counts


@pytest.mark.parametrize("units", ["US", "SI"])
def test_trap_16_coefficient_and_height_in_one_unit(units: str) -> None:
    """The metric coefficient with feet would make T_a more than twice as long."""
    for method, slack in (("walls", 1e-11), ("table", 1e-3)):
        values = []
        for h_n, own in (("50 ft", units), ("15.24 m", units), ("50 ft", "US")):
            calc = begin(units=own, h_n=h_n, T_a_method=method)
            values.append(float(calc.asce7.approximate_period()))
        assert values[0] == pytest.approx(values[1], rel=1e-11)
        assert values[0] == pytest.approx(values[2], rel=slack)
