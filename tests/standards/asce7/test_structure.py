"""Chapter 12 of ASCE/SEI 7-16, the structure: system, periods, weight, procedure.

Rules are from memory, high, unless a document is named.
"""

from __future__ import annotations

from typing import Any

import pytest

from calckit.core.calc import Calc
from calckit.errors import InputError, ScopeError
from tests.core.session import Session

from .building import BRACED, QUESTIONS, STEEL, levels, open_flags, start, value


@pytest.mark.parametrize(
    ("system", "SDC", "h_n", "verdict"),
    [
        (STEEL, "D", "500 ft", "OK"), (BRACED, "D", "160 ft", "OK"), (BRACED, "D", "160.1 ft", "NOT OK"),
        (BRACED, "F", "120 ft", "NOT OK"), (BRACED, "C", "400 ft", "OK"),
        ("moment frame: steel ordinary moment frame", "D", "20 ft", "NOT OK"), (BRACED, "D", "48 m", "OK"),
    ],
)  # fmt: skip
def test_height_limit(system: str, SDC: str, h_n: str, verdict: str) -> None:
    calc = start(system=system, SDC=SDC, h_n=h_n)
    calc.asce7.system()
    assert calc.lines.entries["system_permitted"].line.verdict == verdict


def test_system_without_category_is_not_checked() -> None:
    calc = start(system=STEEL, h_n="62 ft")
    calc.asce7.system()
    line = calc.lines.entries["system_permitted"].line
    assert (line.verdict, line.missing) == ("NOT CHECKED", "SDC (seismic design category)")


def test_system_may_be_named_without_its_family_if_unique() -> None:
    calc = start(system="steel special moment frame")
    calc.asce7.system()
    assert value(calc, "R") == 8


def test_ambiguous_and_unknown_systems_are_refused_with_names() -> None:
    with pytest.raises(InputError, match="write one of bearing wall: detailed plain concrete; building frame"):
        start(system="detailed plain concrete").asce7.system()
    with pytest.raises(InputError, match=r"near names: .*moment frame: steel special moment frame"):
        start(system="moment frame: steel special moment").asce7.system()


@pytest.mark.parametrize("system", [STEEL, BRACED, "moment frame: reinforced concrete special moment frame"])
def test_period_is_the_same_in_both_unit_sets(system: str) -> None:
    """The metric coefficients are rounded to three digits: 0.1 %."""
    periods = []
    for units, h_n in (("US", "62 ft"), ("US", "18.8976 m"), ("SI", "18.8976 m"), ("SI", "62 ft")):
        calc = start(units, system=system, h_n=h_n)
        periods.append(float(calc.asce7.approximate_period()))
    assert periods[0] == pytest.approx(periods[1], rel=1e-11)
    assert periods[2] == pytest.approx(periods[3], rel=1e-11)
    assert periods[0] == pytest.approx(periods[2], rel=1.0e-3)


def test_height_typed_in_place_is_flagged() -> None:
    calc = start(system=STEEL)
    calc.asce7.approximate_period(h_n="70 ft")
    assert [flag.text for flag in calc.lines.entries["T_a"].line.flags] == ["h_n typed in place: 70 ft"]


def test_height_that_differs_from_the_levels_is_open() -> None:
    calc = start(system=STEEL, h_n="60 ft")
    levels(calc)
    calc.asce7.approximate_period()
    assert any("differs from the highest level" in text for text in open_flags(calc, "T_a"))


def by_stories(system: str = STEEL, factor: float = 1.0) -> Calc:
    """T_a by 0.1 N."""
    calc = start(system=system, h_n="62 ft", T_a_method="stories")
    levels(calc, factor=factor)
    calc.asce7.approximate_period()
    return calc


def test_period_by_stories() -> None:
    assert value(by_stories(), "T_a") == pytest.approx(0.5, rel=1e-12)


def test_period_by_stories_is_refused_outside_its_conditions() -> None:
    with pytest.raises(ScopeError, match="is no steel or concrete moment frame"):
        by_stories(BRACED)
    with pytest.raises(ScopeError, match=r"average story height 9\.92 ft, below 10 ft"):
        by_stories(factor=0.8)


def period(**more: Any) -> Calc:
    """The period for T_a = 1 s and C_u = 1.5."""
    calc = start(S_D1=0.2, T_a="1 s", **more)
    calc.asce7.period()
    return calc


@pytest.mark.parametrize(
    ("more", "T", "T_drift", "governs"),
    [
        ({}, 1.0, 1.0, "approximate period"),
        ({"T_analysis": "1.2 s"}, 1.2, 1.2, "analysis"),
        ({"T_analysis": "1.9 s"}, 1.5, 1.9, "upper limit C_u T_a"),
        ({"T_analysis": "0.8 s"}, 1.0, 0.8, "approximate period"),
        ({"T_analysis": "0.8 s", "T_choice": "approximate"}, 1.0, 0.8, "approximate period"),
        ({"T_analysis": "0.8 s", "T_choice": "analysis"}, 0.8, 0.8, "analysis"),
        ({"T_analysis": "none: no model yet"}, 1.0, 1.0, "approximate period"),
    ],
)
def test_which_period_is_used(more: dict[str, str], T: float, T_drift: float, governs: str) -> None:
    calc = period(**more)
    assert value(calc, "T") == pytest.approx(T, rel=1e-12)
    assert value(calc, "T_drift") == pytest.approx(T_drift, rel=1e-12)
    candidates = calc.lines.entries["T"].line.candidates
    assert [each.equation for each in candidates if each.governs] == [governs]
    assert len(candidates) == 3


def test_shorter_analysis_without_a_choice_is_open() -> None:
    assert any("until T_choice is answered" in text for text in open_flags(period(T_analysis="0.8 s"), "T"))
    assert open_flags(period(T_analysis="0.8 s", T_choice="approximate"), "T") == []


def procedure(SDC: str, h_n: str, *present: str, left_open: tuple[str, ...] = (), **more: Any) -> dict[str, str | None]:
    """The verdicts on prohibited irregularities and on the procedure."""
    calc = start(SDC=SDC, h_n=h_n, **{"risk_category": "II"} | more)
    levels(calc)
    for name in QUESTIONS:
        if name not in left_open:
            calc.answer(name, "yes" if name in present else "no", basis="demo")
    calc.asce7.procedure()
    return {name: calc.lines.entries[name].line.verdict for name in ("prohibited", "procedure")}


@pytest.mark.parametrize(
    ("SDC", "h_n", "present", "prohibited", "permitted"),
    [
        ("C", "300 ft", ("H1b", "V1a"), "OK", "OK"),
        ("D", "160 ft", (), "OK", "OK"),
        ("D", "160 ft", ("H2", "V4", "V5a"), "OK", "OK"),
        ("D", "160 ft", ("V1a",), "OK", "NOT OK"),
        ("D", "161 ft", ("H2",), "OK", "NOT OK"),
        ("D", "62 ft", ("V5b",), "NOT OK", "OK"),
        ("E", "62 ft", ("V5a",), "NOT OK", "OK"),
        ("E", "62 ft", ("H1b",), "NOT OK", "NOT OK"),
    ],
)
def test_procedure(SDC: str, h_n: str, present: tuple[str, ...], prohibited: str, permitted: str) -> None:
    """Washington Administrative Code 51-50-1613 (Table 12.6-1); N. Taly, list of prohibitions (ASCE/SEI 7-05)."""
    assert procedure(SDC, h_n, *present) == {"prohibited": prohibited, "procedure": permitted}


@pytest.mark.parametrize(("T", "permitted"), [("3.4 s", "OK"), ("3.5 s", "NOT OK"), ("3.6 s", "NOT OK")])
def test_tall_regular_structure_by_its_period(T: str, permitted: str) -> None:
    """The row asks for T below 3.5 T_S."""
    assert procedure("D", "200 ft", T=T, T_S="1 s")["procedure"] == permitted


def test_unanswered_irregularities_leave_it_not_checked() -> None:
    verdicts = procedure("E", "62 ft", left_open=("V1b",))
    assert verdicts == {"prohibited": "NOT CHECKED", "procedure": "NOT CHECKED"}


def test_a_choice_that_nobody_made_is_a_line_called_default(monkeypatch: pytest.MonkeyPatch) -> None:
    session = Session(monkeypatch)
    with session.cell("inputs"):
        calc = start(system="moment frame: steel special moment frame", h_n="62 ft")
    for _ in range(2):  # the cell is run, and run again
        with session.cell("period"):
            calc.asce7.approximate_period()
        line = calc.lines.entries["T_a_method"].line
        assert (line.kind, line.value, line.detail) == ("given", "table", "default")


def test_a_choice_that_was_made_is_no_default() -> None:
    calc = start(system="moment frame: steel special moment frame", h_n="62 ft", T_a_method="table")
    calc.asce7.approximate_period()
    assert calc.lines.entries["T_a_method"].line.detail == ""
