"""The printed-digits rule as `calckit recheck` reads it: honest records pass, every wrong digit is named."""

from __future__ import annotations

import copy
from collections.abc import Callable
from decimal import Decimal

import pytest

from calckit.core.record import NOT_OK, Column, Line, Operand, Record, Table, from_json
from calckit.report.digits_check import _read, _rounds, check_digits
from tests.building import Building
from tests.report.test_reevaluate import HONEST

Change = Callable[[Record], None]


@pytest.fixture(scope="module")
def second() -> Record:
    return from_json(Building().record().to_json())


def altered(record: Record, change: Change) -> list[str]:
    changed = copy.deepcopy(record)
    change(changed)
    return check_digits(changed).faults


def off_by_one(shown: str) -> str:
    """A printed form with another last digit of its last number."""
    last = max(place for place, sign in enumerate(shown.partition(" ")[0]) if sign.isdigit())
    return f"{shown[:last]}{(int(shown[last]) + 1) % 10}{shown[last + 1 :]}"


@pytest.mark.parametrize("name", HONEST)
def test_honest_records(name: str) -> None:
    record = from_json(HONEST[name]().to_json())
    found = check_digits(record)
    assert found.faults == []
    read = [
        line for line in record.lines
        if line.kind == "table" or (line.formula is not None and line.verdict != "NOT CHECKED")
    ]  # fmt: skip
    assert found.lines == len(read) > 60
    assert found.rows >= 24
    assert found.text() == f"{found.lines} lines, {found.rows} table rows follow from what is printed"


def test_another_last_digit_of_any_number(second: Record) -> None:
    for place, line in enumerate(second.lines):
        if isinstance(line.value, str) or line.value is None:
            continue

        def change(record: Record, place: int = place) -> None:
            one = record.lines[place]
            many = isinstance(one.shown, list)
            one.shown = [off_by_one(text) for text in one.shown] if many else off_by_one(str(one.shown))

        named = [fault for fault in altered(second, change) if fault.startswith(f"line {line.n}, {line.id}: result")]
        assert named, line.id


def test_another_term_in_any_substituted_form(second: Record) -> None:
    for place, line in enumerate(second.lines):
        if not line.forms or line.verdict == "NOT CHECKED":
            continue

        def change(record: Record, place: int = place) -> None:
            record.lines[place].forms["plain"][1] += " + 0.01"

        assert any(f", {line.id}: printed " in fault for fault in altered(second, change)), line.id


def test_another_digit_in_any_operand(second: Record) -> None:
    for place, line in enumerate(second.lines):
        for name, operand in line.inputs.items():
            if isinstance(operand.shown, list) or isinstance(operand.value, str) or operand.is_absent():
                continue

            def change(record: Record, place: int = place, name: str = name) -> None:
                one = record.lines[place].inputs[name]
                head, equals, last = str(one.shown).rpartition(" = ")
                one.shown = head + equals + off_by_one(last)

            assert any(f", {line.id}: operand {name} is" in fault for fault in altered(second, change)), line.id


def test_any_entry_of_any_table(second: Record) -> None:
    for table in second.tables:
        for column in range(len(table.columns)):

            def change(record: Record, id_: str = table.id, column: int = column) -> None:
                row = next(table for table in record.tables if table.id == id_).shown[0]
                row[column] = off_by_one(row[column])

            faults = altered(second, change)
            assert any(fault.startswith(f"table {table.id}: column ") for fault in faults)


def test_a_row_that_does_not_follow_from_its_columns() -> None:
    a = Line("a", "given", "a", value=[2.0, 3.0], shown=["2", "3"], rows=["Roof", "2"])
    b = Line("b", "computed", "b", value=[4.0, 9.02], shown=["4.00", "9.02"], rows=["Roof", "2"], formula="a*a")
    b.row = "Roof"
    b.forms = {"plain": ["a × a", "2 × 2"]}
    b.inputs = {"a": Operand([2.0, 3.0], "", ["2", "3"], "x")}
    table = Table("t", "", "T", "Level", [], ["Roof", "2"], [["2", "4.00"], ["3", "9.02"]])
    table.columns = [Column("a", "", "a"), Column("b", "", "b")]
    assert check_digits(Record({}, [a, b], [table])).faults == ["table t: b at 2 is printed as 9.02, its row gives 9"]
    b.value, b.shown, table.shown[1][1] = [4.0, 9.01], ["4.00", "9.01"], "9.01"
    found = check_digits(Record({}, [a, b], [table]))
    assert (found.faults, found.rows) == ([], 2)


def test_a_printed_relation_must_be_true_and_say_what_the_verdict_says(second: Record) -> None:
    def untrue(record: Record) -> None:
        line = record.line("Y.system_permitted")
        line.forms["plain"][1] = "80 ft ≤ 79 ft"

    def reversed_(record: Record) -> None:
        record.line("Y.system_permitted").verdict = NOT_OK

    def ratio(record: Record) -> None:
        record.line("Y.system_permitted").forms["plain"][1] = "81 ft ≤ 160 ft"

    n = second.line("Y.system_permitted").n
    assert second.line("Y.system_permitted").forms["plain"][1] == "80 ft ≤ 160 ft"
    assert f"line {n}, Y.system_permitted: printed 80 ft ≤ 79 ft, which is not true" in altered(second, untrue)
    assert altered(second, reversed_) == [
        f"line {n}, Y.system_permitted: printed 80 ft ≤ 160 ft for h_n ≤ h_limit, but the verdict is NOT OK"
    ]
    assert any("gives the ratio 0.50625, not the printed 0.500" in fault for fault in altered(second, ratio))


def test_the_form_must_hold_the_operands_of_the_formula(second: Record) -> None:
    def swapped(record: Record) -> None:  # gives the same result
        record.line("X.V").forms["plain"][1] = record.line("X.V").forms["plain"][1] + " + 0 kip × 3 + 0.0001 kip"

    def other_form(record: Record) -> None:
        forms = record.line("X.V").forms["mathml"]
        forms[1] = forms[1].replace("6060", "6061")

    def dropped(record: Record) -> None:
        record.line("X.V").forms = {}

    n = second.line("X.V").n
    assert any("is not C_s*W with the operands of the line" in fault for fault in altered(second, swapped))
    assert altered(second, other_form) == [f"line {n}, X.V: the mathml form does not print 6060"]
    assert altered(second, dropped) == [f"line {n}, X.V: nothing is printed of its formula"]


def test_values_looked_up_in_a_table(second: Record) -> None:
    def quoted(record: Record) -> None:
        record.line("I_e").detail = "Table 1.5-2, row III, column I_e: 1.5"

    def between(record: Record) -> None:
        record.line("F_a").detail = record.line("F_a").detail.replace("0.75: 1.2", "0.75: 1.25")

    assert "printed 1.25, but the look-up reads Table 1.5-2, row III, column I_e: 1.5" in altered(second, quoted)[0]
    assert "is not the straight line between the entries of" in altered(second, between)[0]


def test_what_cannot_be_read_is_a_fault(second: Record) -> None:
    def words(record: Record) -> None:
        record.line("X.V").forms["plain"][1] = "import os"

    def short(record: Record) -> None:
        record.line("X.F_x").shown = ["1"]

    assert "X.V: what is printed cannot be read" in altered(second, words)[0]
    assert any("X.F_x: result does not print 6 values" in fault for fault in altered(second, short))


@pytest.mark.parametrize(
    ("printed", "value"),
    [
        ("0.028 × (80 ft)^0.8", "0.93245959228"),
        ("|264.1 kip / 264 kip - 1|", "0.00037878787878"),
        ("2 × |1 - 3| × |4|", "16"),
        ("15 ft - 0 ft", "15"),
        ("-2^2 + 2^-1", "-3.5"),
        ("3 kip·s²/ft / (2 1/s)", "1.5"),
        ("max(0.044 × 0.5567 × 1.25, 0.01)", "0.0306185"),
        ("sqrt((3 kN)^2 + (4 kN)^2)", "5"),
        ("12 / 3 × 2", "8"),
        ("72.27 kip × 13.00 ft + (-1 kip) × 2 ft", "937.51"),
    ],
)
def test_printed_forms_are_read_as_a_person_reads_them(printed: str, value: str) -> None:
    assert abs(_read(printed).result() - Decimal(value)) < Decimal("1e-9")


@pytest.mark.parametrize(
    ("value", "numeral", "beside", "good"),
    [
        ("0.12345", "0.1235", (), True),
        ("0.12345", "0.1234", (), False),
        ("2.4999999999999", "3", (), True),  # 12 digits carried give 2.50000000000
        ("2.49999999999", "3", (), False),
        ("-0.125", "-0.13", (), True),
        ("1234567", "1234567", (), True),
        ("12345674", "12345670", (), True),
        ("12345674", "12345700", (), False),
        ("1234564", "1234560", (), False),
        ("1234564", "1234560", ("12345670",), True),
        ("1234564", "1234560", ("12345671",), False),
        ("4893.04377678655", "4893.04377678655", (), True),
    ],
)
def test_rounding(value: str, numeral: str, beside: tuple[str, ...], good: bool) -> None:
    assert _rounds(Decimal(value), numeral, beside) is good
