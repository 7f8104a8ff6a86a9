"""Tables of a standard: entries, interpolation, ends, words in cells, and the form of the file."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calckit.core.formula import Formula
from calckit.core.record import Source
from calckit.core.table import read
from calckit.errors import CalckitError, UnknownNameError

HEAD = """\
# standard: Demo Standard
# edition: DS 1
# table: 5-1
# title: demo coefficient
# clause: 5.1
# rows: class
# obtained: memory, high
# documents: none read
"""
TEXT = HEAD + "class,0.25,0.5,1.0,obtained\nA,0.8,0.8,0.8,found\nD,1.6,1.4,1.1,\nE,2.4,1.7,see 5.2,\n"
TABLE = read(TEXT, "demo")


@pytest.mark.parametrize(("at", "text", "column"), [(0.25, "1.6", "0.25"), (0.5, "1.4", "0.5"), (1.0, "1.1", "1.0")])
def test_at_a_column(at: float, text: str, column: str) -> None:
    found = TABLE.along("D", "S_S", at)
    assert (found.text, found.expression) == (text, "")
    assert found.detail == f"Table 5-1, row D, column {column}: {text}"


@pytest.mark.parametrize(("at", "text"), [(0.01, "1.6"), (0.2499, "1.6"), (1.001, "1.1"), (3.0, "1.1")])
def test_beyond_the_ends_the_end_value_holds(at: float, text: str) -> None:
    found = TABLE.along("D", "S_S", at)
    assert (found.text, found.expression) == (text, "")
    assert "end value" in found.detail and f": {text}" in found.detail


def test_detail_names_the_end_that_was_passed() -> None:
    assert TABLE.along("D", "S_S", 0.1).detail.endswith("(end value, S_S below the first column)")
    assert TABLE.along("D", "S_S", 2.0).detail.endswith("(end value, S_S beyond the last column)")


@given(st.decimals(min_value="0.25", max_value="1.0", places=3))
def test_between_columns_a_straight_line(at: Decimal) -> None:
    found = TABLE.along("D", "S_S", float(at))
    points = [(Fraction(1, 4), Fraction("1.6")), (Fraction(1, 2), Fraction("1.4")), (Fraction(1), Fraction("1.1"))]
    (a, low), (b, high) = points[:2] if at <= Decimal("0.5") else points[1:]
    exact = low + (high - low) * (Fraction(at) - a) / (b - a)
    value = Formula("F", found.expression or found.text, Source("own")).value({"S_S": float(at)})
    assert value == pytest.approx(float(exact), rel=1e-12)


def test_interpolation_prints_both_neighbors() -> None:
    found = TABLE.along("D", "S_S", 0.7)
    assert found.expression == "1.4 + (1.1 - 1.4)*(S_S - 0.5)/(1.0 - 0.5)"
    assert found.detail == "Table 5-1, row D, between columns 0.5: 1.4 and 1.0: 1.1"


def test_equal_neighbors_need_no_interpolation() -> None:
    found = TABLE.along("A", "S_S", 0.3)
    assert (found.text, found.expression) == ("0.8", "")
    assert found.detail == "Table 5-1, row A, between columns 0.25: 0.8 and 0.5: 0.8"


@pytest.mark.parametrize("at", [0.6, 1.0, 2.0])
def test_words_in_a_cell_are_never_interpolated(at: float) -> None:
    found = TABLE.along("E", "S_S", at)
    assert (found.text, found.expression) == ("see 5.2", "")


def test_named_entry_and_source() -> None:
    found = TABLE.entry("D", "0.5")
    assert (found.text, found.detail) == ("1.4", "Table 5-1, row D, column 0.5: 1.4")
    assert (found.source.text(), found.source.obtained, found.source.standard) == (
        "Demo Standard Table 5-1", "memory, high", True,
    )  # fmt: skip
    assert TABLE.source("A").obtained == "found"


def test_band_is_that_of_the_last_bound_reached() -> None:
    table = read(HEAD + "S_DS,I,IV\n0,A,A\n0.167,B,C\n0.50,D,D\n", "demo")
    assert [table.band("IV", at, "S_DS").text for at in (0.0, 0.1669, 0.167, 0.4999, 0.5, 3.0)] == list("AACCDD")
    assert table.band("IV", 0.3, "S_DS").detail == (
        "Table 5-1, row S_DS not less than 0.167 and below 0.50, column IV: C"
    )
    assert table.band("IV", 0.6, "S_DS").detail == "Table 5-1, row S_DS not less than 0.50, column IV: D"


def test_unknown_row_lists_the_known() -> None:
    with pytest.raises(UnknownNameError, match=r"Table 5-1 \(demo coefficient\): row 'F' is not known; known: A, D, E"):
        TABLE.row("F")


@pytest.mark.parametrize("key", ["standard", "edition", "table", "title", "clause", "rows", "obtained", "documents"])
def test_header_must_be_whole(key: str) -> None:
    text = "\n".join(line for line in TEXT.splitlines() if not line.startswith(f"# {key}:"))
    with pytest.raises(CalckitError, match=f"table demo: the header lacks {key}"):
        read(text, "demo")


def test_rows_must_be_whole() -> None:
    with pytest.raises(CalckitError, match="table demo: rows D do not have 3 entries"):
        read(HEAD + "class,0.25,0.5\nA,1,2\nD,1\n", "demo")
