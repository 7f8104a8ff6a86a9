"""The closed unit registry, quantities typed as text, and coherent unit sets.

Knows every unit the kit accepts, how a typed quantity is read and how a unit is printed. Must not know symbols,
formulas or standards.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from functools import cache
from importlib import resources
from typing import TYPE_CHECKING, Any

from calckit.errors import Fault, UnitError

if TYPE_CHECKING:
    import pint

_NUMERAL = r"[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?"
_TYPED = re.compile(rf"\s*(?P<numeral>{_NUMERAL})\s*(?P<unit>[^\d\s].*?)?\s*\Z")
_FACTOR = r"[A-Za-z]+(?:\*\*-?\d+)?"
_UNIT = re.compile(rf"(?:1/)?{_FACTOR}(?:[*/]{_FACTOR})*")
_SUPERSCRIPT = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


@dataclass(frozen=True)
class Quantity:
    """A number with a unit; `numeral` keeps the digits as they were typed.

    >>> Quantity(62.0, "ft", "62").to("m").value
    18.8976
    """

    value: float
    unit: str
    numeral: str = ""

    def to(self, unit: str) -> Quantity:
        """The same quantity in another unit of its kind; UnitError if the kinds differ."""
        return self if unit == self.unit else Quantity(convert(self.value, self.unit, unit), unit)


@cache
def _registry() -> pint.UnitRegistry[Any]:
    import pint

    with resources.as_file(resources.files(__package__) / "units.txt") as path:
        return pint.UnitRegistry(str(path), on_redefinition="raise", cache_folder=None, non_int_type=Fraction)


@cache
def canonical(unit: str) -> str:
    """A unit's one spelling: `kip*ft`, `ft**2`, `kip/ft`; UnitError if a part is unknown.

    >>> canonical("kip-ft"), canonical("ft^2"), canonical("")
    ('kip*ft', 'ft**2', '')
    """
    text = unit.strip().replace("·", "*").replace("^", "**").replace("²", "**2").replace("³", "**3")
    text = re.sub(r"(?<=[A-Za-z])\s*-\s*(?=[A-Za-z])", "*", text)
    text = re.sub(r"\s*(\*+|/)\s*", r"\1", text)
    for word in re.findall(r"[^\W\d_]+", text):
        if word not in known():
            cure = "write one of " + ", ".join(known())
            raise UnitError("unit", [Fault(unit, "a unit the kit knows", repr(word), cure)])
    if text and not _UNIT.fullmatch(text):
        raise UnitError("unit", [Fault(unit, "units joined by * and /, powers by **", repr(unit))])
    return text


@cache
def known() -> tuple[str, ...]:
    """The names of all units, in the order of the definition file.

    >>> known()[:4]
    ('m', 'mm', 'cm', 'ft')
    """
    lines = (resources.files(__package__) / "units.txt").read_text(encoding="utf-8").splitlines()
    names = [line.split("=") for line in lines if "=" in line]
    return tuple(parts[2].strip() if len(parts) > 2 else parts[0].strip() for parts in names)


@cache
def _dimension(unit: str) -> tuple[tuple[str, float], ...]:
    dimension: Any = _registry().Unit(canonical(unit)).dimensionality if unit else {}
    return tuple(sorted((name.strip("[]"), float(power)) for name, power in dimension.items()))


def powers(unit: str) -> tuple[float, float, float]:
    """The powers of mass, length and time in a unit.

    >>> powers("kip*ft")
    (1.0, 2.0, -2.0)
    """
    found = dict(_dimension(unit))
    return found.get("mass", 0.0), found.get("length", 0.0), found.get("time", 0.0)


def kind_text(powers: tuple[float, float, float]) -> str:
    """Powers of mass, length and time in words, force first.

    >>> kind_text((1.0, 2.0, -2.0)), kind_text((0.0, 0.0, 0.0))
    ('force*length', 'a plain number')
    """
    mass, length, time = powers
    named = zip(("force", "length", "time"), (mass, length - mass, time + 2 * mass), strict=True)
    return "*".join(_raised(name, power) for name, power in named if abs(power) > 1e-9) or "a plain number"


def same_kind(unit: str, other: str) -> bool:
    """Whether two units measure the same kind of quantity.

    >>> same_kind("kip*ft", "kN*m"), same_kind("ft", "s")
    (True, False)
    """
    return _dimension(unit) == _dimension(other)


@cache
def factor(unit: str, other: str) -> Fraction:
    """What a number in `unit` is multiplied by to stand in `other`, exactly; UnitError if the kinds differ.

    >>> factor("in", "ft")
    Fraction(1, 12)
    """
    if not same_kind(unit, other):
        needed = f"a unit of the kind of {other or 'a plain number'}"
        raise UnitError("conversion", [Fault(unit or "dimensionless", needed, unit or "no unit")])
    return Fraction(_registry().Quantity(Fraction(1), canonical(unit)).to(canonical(other)).magnitude)


def convert(value: float, unit: str, other: str) -> float:
    """`value` in `unit` as a number in `other`, correctly rounded.

    >>> convert(12.0, "in", "ft")
    1.0
    """
    return value if unit == other else float(Fraction(value) * factor(unit, other))


def parse(text: str) -> Quantity:
    """Read a typed quantity such as "62 ft", "1.25" or "110 kip".

    Raises UnitError if it is not a number followed by a unit.

    >>> parse("18.90 m")
    Quantity(value=18.9, unit='m', numeral='18.90')
    """
    match = _TYPED.match(text)
    if not match:
        raise UnitError("quantity", [Fault(text, 'a number and a unit, such as "62 ft"', repr(text))])
    numeral = _plain(match["numeral"])
    return Quantity(float(numeral), canonical(match["unit"] or ""), numeral)


def _plain(numeral: str) -> str:
    """A numeral without sign of plus, bare point or exponent, the digits as typed."""
    if re.fullmatch(r"-?\d+(\.\d+)?", numeral):
        return numeral
    return format(Decimal(numeral), "f")


def shown(unit: str) -> str:
    """A unit as it is printed.

    >>> shown("kip*ft"), shown("ft/s**2"), shown("")
    ('kip·ft', 'ft/s²', '')
    """
    text = re.sub(r"\*\*(-?\d+)", lambda power: power[1].translate(_SUPERSCRIPT), unit)
    return text.replace("*", "·")


@cache
def coherent(unit: str, force: str, length: str, time: str = "s") -> str:
    """The unit of the same kind built only from `force`, `length` and `time`.

    >>> [coherent(unit, "kip", "ft") for unit in ("kN*m", "in", "psf")], coherent("kg", "kip", "in")
    (['kip*ft', 'ft', 'kip/ft**2'], 'kip*s**2/in')
    """
    mass, distance, duration = powers(unit)
    found = {force: mass, length: distance - mass, time: duration + 2 * mass}
    over = [_raised(name, p) for name, p in found.items() if p > 0]
    under = [_raised(name, -p) for name, p in found.items() if p < 0]
    return "/".join(["*".join(over) or "1", *under]) if under else "*".join(over)


def _raised(name: str, power: float) -> str:
    return name if power == 1 else f"{name}**{power:g}"


def homogeneous_set(unit: str, system: str) -> tuple[str, str]:
    """Force and length unit of the coherent set in which a result in `unit` is worked.

    >>> homogeneous_set("in", "US"), homogeneous_set("kN*m", "US"), homogeneous_set("", "SI")
    (('kip', 'in'), ('kN', 'm'), ('kN', 'm'))
    """
    words = set(re.findall(r"[A-Za-z]+", canonical(unit)))
    si = bool(words & {"m", "mm", "cm", "N", "kN", "MN", "Pa", "kPa", "MPa", "kg", "tonne"})
    us = bool(words & {"ft", "in", "lb", "kip", "psi", "ksi", "psf", "ksf", "pcf", "kcf", "plf", "klf", "slug"})
    metric = si or (system == "SI" and not us)
    if metric:
        return ("N" if words & {"N", "Pa", "MPa"} else "kN"), ("mm" if words & {"mm", "MPa"} else "m")
    return ("lb" if words & {"lb", "psi", "psf", "pcf", "plf"} else "kip"), (
        "in" if words & {"in", "psi", "ksi"} else "ft"
    )
