"""The closed unit registry: factors from published definitions, typed quantities, coherent sets, refusals."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calckit import units
from calckit.errors import UnitError

FACTORS = {
    # NIST SP 811 (2008), appendix B: exact definitions of foot, inch, pound, pound-force and standard gravity
    ("ft", "m"): "0.3048",
    ("in", "m"): "0.0254",
    ("lb", "N"): "4.4482216152605",
    ("g", "m/s**2"): "9.80665",
    ("tonne", "kg"): "1000",
    # NIST SP 811, appendix B.8, to the digits printed there
    ("kip", "N"): "4448.222",
    ("psi", "Pa"): "6894.757",
    ("ksi", "MPa"): "6.894757",
    ("psf", "Pa"): "47.88026",
    ("lb*ft", "N*m"): "1.355818",
    ("lb*in", "N*m"): "0.1129848",
    ("plf", "N/m"): "14.59390",
    ("slug", "kg"): "14.59390",
    ("lb/in", "N/m"): "175.1268",
    ("ft/s**2", "m/s**2"): "0.3048",
    ("in**2", "m**2"): "0.00064516",
    # by definition
    ("kip", "lb"): "1000", ("ksf", "psf"): "1000", ("klf", "plf"): "1000", ("kcf", "pcf"): "1000", ("MN", "kN"): "1000",
    ("kPa", "Pa"): "1000", ("MPa", "N/mm**2"): "1", ("mm", "m"): "0.001", ("cm", "mm"): "10", ("ms", "s"): "0.001",
    ("Hz", "1/s"): "1", ("rad", ""): "1",
}  # fmt: skip


@pytest.mark.parametrize(("pair", "digits"), FACTORS.items())
def test_factor(pair: tuple[str, str], digits: str) -> None:
    exact = units.factor(*pair)
    shown = Decimal(digits)
    unit = Decimal(1).scaleb(shown.as_tuple().exponent)  # type: ignore[arg-type]
    exactly = digits in ("0.3048", "0.0254", "4.4482216152605", "9.80665", "0.00064516") or shown == shown.to_integral()
    if exactly or shown == unit:
        assert exact == Fraction(digits)
    else:
        assert abs(exact - Fraction(digits)) <= Fraction(unit) / 2
    assert units.factor(pair[1], pair[0]) == 1 / exact


def test_degree() -> None:
    # 180 degrees are pi, to the 20 digits written in the definition file
    assert float(units.factor("deg", "rad") * 180) == pytest.approx(3.141592653589793, rel=1e-15)


SAME = [("ft", "in", "m", "mm", "cm"), ("kip", "lb", "kN", "N", "MN"), ("psf", "ksf", "psi", "ksi", "Pa", "kPa", "MPa")]


@given(st.sampled_from(SAME).flatmap(lambda kind: st.tuples(st.sampled_from(kind), st.sampled_from(kind))),
       st.floats(min_value=1e-6, max_value=1e9))  # fmt: skip
def test_there_and_back(pair: tuple[str, str], value: float) -> None:
    there = units.convert(value, *pair)
    assert units.convert(there, pair[1], pair[0]) == pytest.approx(value, rel=4e-16)
    assert Fraction(there) == pytest.approx(Fraction(value) * units.factor(*pair), rel=2.3e-16)
    assert units.same_kind(*pair)


@pytest.mark.parametrize(
    ("text", "value", "unit", "numeral"),
    [
        ("62 ft", 62.0, "ft", "62"),
        ("62ft", 62.0, "ft", "62"),
        ("  18.90  m ", 18.9, "m", "18.90"),
        ("1.25", 1.25, "", "1.25"),
        ("-3.0 in", -3.0, "in", "-3.0"),
        ("+5 kip", 5.0, "kip", "5"),
        (".5", 0.5, "", "0.5"),
        ("62. ft", 62.0, "ft", "62"),
        ("1.50e-3", 0.0015, "", "0.00150"),
        ("2e4 kip", 20000.0, "kip", "20000"),
        ("12 kip-ft", 12.0, "kip*ft", "12"),
        ("12 kip·ft", 12.0, "kip*ft", "12"),
        ("9.81 m/s²", 9.81, "m/s**2", "9.81"),
        ("9.81 m/s^2", 9.81, "m/s**2", "9.81"),
        ("3 ft²", 3.0, "ft**2", "3"),
    ],
)
def test_typed_quantity(text: str, value: float, unit: str, numeral: str) -> None:
    assert units.parse(text) == units.Quantity(value, unit, numeral)


@pytest.mark.parametrize("text", ["", "ft", "ft 62", "1,5 m", "1 2 m", "62'", "--2", "0x10", "1e", "nan", "inf ft"])
def test_text_that_is_no_quantity(text: str) -> None:
    with pytest.raises(UnitError, match=r"needed a (number and a unit|unit the kit knows)|units joined by"):
        units.parse(text)


@pytest.mark.parametrize(
    "text", ["kNm", "meter", "KIP", "Kip", "klb", "sec", "lbf", "'", "°", "ft·kipp", "μm", "k N", "ft**x"]
)
def test_unknown_unit_lists_the_known(text: str) -> None:
    with pytest.raises(UnitError, match=r"needed a unit the kit knows; given '.*'; cure: write one of m, mm|joined"):
        units.canonical(text)


@pytest.mark.parametrize("text", ["ft*", "/ft", "ft//s", "ft**", "kip ft", "ft**1.5", "(ft)", "2*ft", "ft**2**2"])
def test_unit_that_is_malformed(text: str) -> None:
    with pytest.raises(UnitError, match=r"needed units joined by \* and /, powers by \*\*"):
        units.canonical(text)


def test_units_of_other_kinds_are_not_converted() -> None:
    with pytest.raises(UnitError, match="ft: needed a unit of the kind of s; given ft"):
        units.convert(1.0, "ft", "s")
    with pytest.raises(UnitError, match="dimensionless: needed a unit of the kind of ft; given no unit"):
        units.convert(1.0, "", "ft")
    assert not units.same_kind("kip", "kg") and not units.same_kind("kip*ft", "kip")


def test_the_set_is_closed() -> None:
    # no prefix and no plural reaches the registry by itself
    assert len(units.known()) == 30
    for word in ("km", "kilometer", "feet", "mips", "Mg", "GPa", "day", "degF", "USD"):
        with pytest.raises(UnitError, match="needed a unit the kit knows"):
            units.canonical(word)


COHERENT = [
    ("kN*m", "kip", "ft", "kip*ft"), ("in", "kip", "ft", "ft"), ("psf", "kip", "ft", "kip/ft**2"),
    ("kg", "kip", "in", "kip*s**2/in"), ("Hz", "kip", "ft", "1/s"), ("g", "N", "mm", "mm/s**2"), ("", "kip", "ft", ""),
    ("ms", "kip", "ft", "s"), ("pcf", "kN", "m", "kN/m**3"),
]  # fmt: skip


@pytest.mark.parametrize(("unit", "force", "length", "coherent"), COHERENT)
def test_coherent_unit(unit: str, force: str, length: str, coherent: str) -> None:
    assert units.coherent(unit, force, length) == coherent
    assert units.same_kind(unit, coherent)
    assert units.powers(unit) == units.powers(coherent)


@pytest.mark.parametrize(
    ("unit", "system", "found"),
    [("in", "US", ("kip", "in")), ("psi", "SI", ("lb", "in")), ("plf", "US", ("lb", "ft")), ("kN*m", "US", ("kN", "m")),
     ("MPa", "US", ("N", "mm")), ("mm", "SI", ("kN", "mm")), ("", "US", ("kip", "ft")), ("", "SI", ("kN", "m")),
     ("s", "SI", ("kN", "m")), ("kip", "SI", ("kip", "ft"))],
)  # fmt: skip
def test_set_in_which_a_result_is_worked(unit: str, system: str, found: tuple[str, str]) -> None:
    assert units.homogeneous_set(unit, system) == found
    assert units.factor(units.coherent(unit, *found), unit) == 1, "a result in this unit needs no factor"


def test_printed_units() -> None:
    assert [units.shown(u) for u in ("kip*ft", "ft/s**2", "kip*s**2/in", "1/s", "", "m**-1")] == [
        "kip·ft", "ft/s²", "kip·s²/in", "1/s", "", "m⁻¹",
    ]  # fmt: skip


def test_kinds_in_words() -> None:
    assert [units.kind_text(units.powers(u)) for u in ("kip", "kip*ft", "psf", "kg", "Hz", "")] == [
        "force", "force*length", "force*length**-2", "force*length**-1*time**2", "time**-1", "a plain number",
    ]  # fmt: skip


def test_quantity_in_another_unit() -> None:
    assert units.Quantity(62.0, "ft", "62").to("m") == units.Quantity(18.8976, "m")
    assert units.Quantity(62.0, "ft", "62").to("ft").numeral == "62"
