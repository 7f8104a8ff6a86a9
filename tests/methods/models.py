"""Structures for the tests of the methods; invented where no source is named."""

from __future__ import annotations

from collections.abc import Sequence

from calckit import Calc
from calckit.core.calc import Part

NAMES = ("Roof", "5", "4", "3", "2")
CHOPRA_G = "386 in/s**2"


def calculation(
    weights: Sequence[float] = (100,) * 5, h_sx: str = "12 ft", names: Sequence[str] = NAMES, units: str = "US"
) -> tuple[Calc, Part]:
    """A calculation with levels, roof first, and a part X."""
    calc = Calc(project="Modes", number="T-1", units=units)
    calc.document("P", title="Inputs")
    height, _, unit = h_sx.partition(" ")
    rows = "\n".join(f"{name}, {height}, {weight}" for name, weight in zip(names, weights, strict=True))
    calc.levels(f"level, h_sx [{unit}], w_x [{'kN' if units == 'SI' else 'kip'}]\n{rows}", source="P")
    return calc, calc.part("X", "East-west")


def stiffnesses(part: Part, values: Sequence[float] = (31.54,) * 5, unit: str = "kip/in") -> None:
    """The story stiffnesses, roof first."""
    names = part["h_x"].rows
    rows = "\n".join(f"{name}, {value}" for name, value in zip(names, values, strict=True))
    part.rows("stories", f"level, k_x [{unit}]\n{rows}", source="P")


def five_story() -> Part:
    """A. K. Chopra, Dynamics of Structures, the five-story frame of section 12.11 (from memory, high)."""
    calc, part = calculation()
    calc.given("g", CHOPRA_G, source="P")
    calc.given("zeta", 0.05, source="P")
    stiffnesses(part)
    return part
