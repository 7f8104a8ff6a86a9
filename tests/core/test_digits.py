"""Decimal rounding and the search for the fewest digits."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from calckit.core import digits

VALUES = st.decimals(min_value="1e-6", max_value="9.9e6", allow_nan=False).map(lambda v: digits.carried(v))


def half_up(value: Decimal, places: int) -> Fraction:
    """The value rounded half away from zero, by whole numbers alone."""
    scaled = abs(Fraction(value)) * 10**places
    return (-1 if value < 0 else 1) * Fraction((scaled + Fraction(1, 2)).__floor__()) / 10**places


@given(st.decimals(min_value=-9999, max_value=9999, places=9), st.integers(0, 9))
def test_numeral_rounds_half_up(value: Decimal, places: int) -> None:
    text = digits.numeral(value, places)
    assert Fraction(text) == half_up(value, places)
    assert len(text.partition(".")[2]) == places
    assert text != "-0" and not text.startswith("-0." + "0" * places + "!")


@pytest.mark.parametrize(
    ("value", "places", "text"),
    [("0.12345", 4, "0.1235"), ("-0.12345", 4, "-0.1235"), ("-0.00001", 2, "0.00"), ("0", 3, "0.000"), ("2.5", 0, "3"),
     ("0.99995", 4, "1.0000"), ("121937234", -2, "121937200"), ("1e-7", 7, "0.0000001"), ("1234.5", 1, "1234.5")],
)  # fmt: skip
def test_numeral(value: str, places: int, text: str) -> None:
    assert digits.numeral(Decimal(value), places) == text


@given(st.floats(min_value=1e-9, max_value=1e12))
def test_twelve_digits_are_carried(value: float) -> None:
    carried = digits.carried(value)
    assert len(carried.normalize().as_tuple().digits) <= 12
    assert abs(Fraction(carried) - Fraction(repr(value))) <= Fraction(5, 10**12) * Fraction(repr(value))
    assert digits.carried(carried) == carried
    assert digits.carried(-value) == -carried


def test_nothing_is_carried_of_nothing() -> None:
    assert digits.carried(0.0) == 0 and digits.carried(0.1 + 0.2) == Decimal("0.3")


@given(VALUES, st.integers(1, 9))
def test_decimals_give_the_digits_asked_for(value: Decimal, count: int) -> None:
    places = digits.decimals_for([value], count)
    if value.adjusted() < count - 1:
        assert places == count - 1 - value.adjusted()
    else:
        assert places == 0, "a whole number of up to 7 digits prints in full"


@given(st.lists(VALUES, min_size=1, max_size=6))
def test_decimals_of_a_list_are_those_of_its_largest(values: list[Decimal]) -> None:
    assert digits.decimals_for(values, 4) == digits.decimals_for([max(values)], 4)


def operand(value: Decimal, least: int = 0) -> digits.Operand:
    """A computed operand whose own shown form has `least` decimals."""
    return digits.Operand((value,), least)


@given(VALUES, st.integers(0, 4))
def test_printed_digits_round_to_every_shorter_form(value: Decimal, least: int) -> None:
    one = operand(value, least)
    for places in one.choices():
        (text,) = one.numerals(places)
        for shorter in range(least, len(text.partition(".")[2])):
            assert digits.numeral(Decimal(text), shorter) == digits.numeral(value, shorter)


def test_digits_that_would_mislead_are_not_printed() -> None:
    # 0.12348 shows as 0.1235; of 0.12345 4, the form 0.12345 would round to 0.1235 while the value shows as 0.1234
    one = operand(Decimal("0.123449"), 4)
    assert digits.numeral(one.values[0], 4) == "0.1234"
    assert one.numerals(5) == ("0.123449",)
    # a value that is all but a tie needs everything that is carried
    assert operand(Decimal("468.749999999"), 1).numerals(7) == ("468.749999999",)


def test_typed_numerals_stay_as_typed() -> None:
    typed = digits.Operand((Decimal("18.9"),), 2, ("18.90",))
    assert list(typed.choices()) == [2]
    assert typed.numerals(7) == ("18.90",) and typed.column(7) == ("18.90",)


def product(target: str, places: int) -> object:
    """Accepts operands whose product shows as `target`."""

    def accept(numbers: Mapping[str, Sequence[Decimal]]) -> bool:
        return digits.numeral(digits.carried(numbers["a"][0] * numbers["b"][0]), places) == target

    return accept


@given(VALUES, VALUES)
@settings(max_examples=300, deadline=None)
def test_fewest_digits_that_give_the_result(a: Decimal, b: Decimal) -> None:
    value = digits.carried(a * b)
    places = digits.decimals_for([value], 4)
    accept = product(digits.numeral(value, places), places)
    operands = {"a": operand(a, digits.decimals_for([a], 4)), "b": operand(b, digits.decimals_for([b], 4))}
    found = digits.fewest(operands, accept)  # type: ignore[arg-type]
    assert found is not None
    printed = {name: [Decimal(text) for text in operands[name].numerals(found[name])] for name in operands}
    assert accept(printed)  # type: ignore[operator]
    # no operand alone can do with fewer
    for name in operands:
        for fewer in range(operands[name].least, found[name]):
            shorter = printed | {name: [Decimal(text) for text in operands[name].numerals(fewer)]}
            assert not accept(shorter)  # type: ignore[operator]


@given(VALUES)
def test_nothing_is_found_where_nothing_is_accepted(a: Decimal) -> None:
    assert digits.fewest({"a": operand(a)}, lambda numbers: False) is None


@given(st.integers(-10**6, 10**6), st.floats(min_value=1e-6, max_value=1e6))
def test_numerals_of_numbers_typed_without_text(whole: int, number: float) -> None:
    assert digits.typed_numeral(whole) == str(whole)
    text = digits.typed_numeral(number)
    assume("E" not in repr(number))
    assert float(text) == number and "e" not in text.lower()
