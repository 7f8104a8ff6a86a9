"""Both editions of ASCE/SEI 7: one set of declarations, every source as its edition prints it, one building in both."""

from __future__ import annotations

import json
import re
from collections.abc import Iterator

import pytest

from calckit import Calc
from calckit.core.assemble import assemble
from calckit.core.formula import Formula
from calckit.core.record import Line, Record, Source
from calckit.errors import InputError
from calckit.standards.asce7 import EDITIONS
from calckit.standards.asce7.clauses import NAMES, in_7_22, rule
from calckit.standards.asce7.declared import FORMULAS, SYMBOLS
from calckit.standards.asce7.steps import Steps
from tests.building import GIVENS, Building
from tests.printed_audit import audit

from .printout import INPUTS, pasted

CONFIRMED = {"11.4-1", "11.4-2", "11.4-3 to 11.4-5", *(f"13.3-{number}" for number in range(1, 7))}
"""Equation numbers of 7-22 of which the kit's authors are sure (memory, high); no other is printed."""
SITE = {name: str(INPUTS[name]) for name in ("S_S", "S_1", "S_MS", "S_M1", "T_L", "site_class")}
OF_7_16 = {"S_S": "1.37", "S_1": "0.52", "T_L": "12 s", "site_class": "C"}
"""The same demo site as 7-16 maps it."""


def whole(edition: str, units: str = "US") -> Calc:
    """The demo building to its end, the edition and its hazard values apart the same."""
    calc = Building(givens=GIVENS | (SITE if edition == "ASCE 7-22" else OF_7_16)).calc(standard=edition, units=units)
    if edition == "ASCE 7-22":
        calc.asce7.printed_ordinates(pasted(), source="D-1 p. 3")
        calc.answer("C_s_method", "two-period", source="D-1")
        z = calc.part("Z", "again, with the ordinates")
        z.givens("system, moment frame: steel special moment frame, D-1\nT, 1.2 s, D-1")
        z.asce7.system()
        z.asce7.base_shear()
    calc.asce7.spectrum_ordinates([0.0, 0.33, 1.0, 4.0])
    return calc


def record(edition: str, units: str = "US") -> Record:
    """The record of that building."""
    return assemble(whole(edition, units))


def sources(lines: list[Line]) -> Iterator[Source]:
    """The sources that are clauses or tables of the standard."""
    yield from (line.source for line in lines if line.source and line.source.standard)


@pytest.mark.parametrize("edition", list(EDITIONS))
def test_every_step_is_offered(edition: str) -> None:
    steps = {name for name in vars(Steps) if not name.startswith("_")}
    offered = Calc(project="Demo", number="D-1", standard=edition).asce7
    assert {name for name in dir(offered) if not name.startswith("_")} == steps
    assert {"design_spectrum", "printed_ordinates", "base_shear", "drift"} <= steps


def test_symbols_and_suppliers_are_shared() -> None:
    first, second = EDITIONS.values()
    assert first.symbols is second.symbols is SYMBOLS
    assert first.suppliers is second.suppliers
    assert set(first.suppliers) <= set(SYMBOLS)


OF_A_CLAUSE = {name: formula for name, formula in FORMULAS.items() if formula.source.standard}


@pytest.mark.parametrize("formula", OF_A_CLAUSE.values(), ids=list(OF_A_CLAUSE))
def test_every_formula_prints_under_7_22(formula: Formula) -> None:
    source = in_7_22(formula.source)
    assert source.document == NAMES["ASCE 7-22"]
    assert source.where
    assert source.equation in {"", *CONFIRMED}
    assert source.obtained in ("found", "memory, high", "memory, medium")


def test_a_clause_that_was_not_looked_at_is_less_certain() -> None:
    assert in_7_22(rule("12.8.1.1", "12.8-2", "found")).obtained == "memory, medium"
    own = Source("H-2", "p. 4")
    assert in_7_22(own) is own


@pytest.mark.parametrize("edition", list(EDITIONS))
def test_a_report_prints_one_edition(edition: str) -> None:
    lines = record(edition).lines
    assert {source.document for source in sources(lines)} == {NAMES[edition]}


def test_no_equation_number_of_7_22_that_is_not_confirmed() -> None:
    lines = record("ASCE 7-22").lines
    assert {source.equation for source in sources(lines)} <= {"", *CONFIRMED}
    compared = [candidate.equation for line in lines for candidate in line.candidates]
    assert not [text for text in compared if re.fullmatch(r"\d+\.\d+-\d+\w?", text)]
    assert [text for text in compared if text == "clause 12.8.1.1"]


@pytest.mark.parametrize("edition", list(EDITIONS))
@pytest.mark.parametrize("units", ["US", "SI"])
def test_whole_building_in_both_editions(edition: str, units: str) -> None:
    made = record(edition, units)
    found = audit(json.loads(made.to_json()))
    assert found.faults == []
    assert found.counts["computed line"] > 50
    ids = {line.id for line in made.lines}
    assert {"S_DS", "SDC", "X.C_s", "Y.V", "X.F_x", "Y.drift", "X.stability"} <= ids
    assert ("F_a" in ids) == (edition == "ASCE 7-16")


def test_what_moved_between_the_editions() -> None:
    """Under the same site the two differ in the ground motion only: R, periods and the exponent stay."""
    first, second = ({line.id: line.value for line in record(edition).lines} for edition in EDITIONS)
    same = ("X.R", "X.C_d", "X.T_a", "X.T", "X.k", "W", "I_e", "X.h_limit", "X.r_Delta")
    assert {name: first.get(name) for name in same} == {name: second.get(name) for name in same}
    assert first["S_DS"] != second["S_DS"]


@pytest.mark.parametrize("edition", list(EDITIONS))
def test_fields_of_use_say_the_edition(edition: str) -> None:
    standard = EDITIONS[edition]
    own = edition.removeprefix("ASCE ")
    other = {"7-16", "7-22"} - {own}
    text = " ".join((*standard.field_of_use, *standard.not_covered))
    assert f"Ground motion of {own}" in text
    assert f"Ground motion of {other.pop()}" not in text


@pytest.mark.parametrize("name", list(EDITIONS))
def test_trap_18_nonbuilding_structures_are_refused_by_the_field_of_use(name: str) -> None:
    # chapter 15 has its own lower limit, 0.03, and no T_a of 12.8.2.1: none of its systems is offered, and this is said
    assert any("nonbuilding structures (chapter 15)" in text for text in EDITIONS[name].not_covered)
    calc = Calc(project="Demo", number="D-1", standard=name)
    calc.document("S-1", title="Tank")
    calc.given("system", "elevated tank, braced legs", source="S-1")
    with pytest.raises(InputError, match=r"a row of Table 12\.2-1; given elevated tank"):
        calc.asce7.system()
