"""A six-story building worked in this process, with every input open to change; invented, for tests only."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from calckit import Calc, units
from calckit.core.assemble import assemble
from calckit.core.record import Record

GIVENS = {
    "S_S": "0.68", "S_1": "0.26", "T_L": "8 s", "site_class": "C", "risk_category": "III", "h_n": "80 ft",
}  # fmt: skip
SYSTEMS = {
    "X": "moment frame: steel special moment frame",
    "Y": "building frame: steel special concentrically braced frame",
}
PERIODS = {"X": "1.2 s", "Y": "0.7 s"}
NAMES = ("Roof", "6", "5", "4", "3", "2")
COLUMNS: dict[str, Sequence[str]] = {
    "h_x [ft]": ("80", "67", "54", "41", "28", "15"),
    "w_x [kip]": ("880", "1020", "1020", "1020", "1020", "1100"),
    "X.delta_xe [in]": ("2.65", "2.31", "1.90", "1.40", "0.90", "0.45"),
    "Y.delta_xe [in]": ("1.10", "0.90", "0.70", "0.50", "0.30", "0.14"),
    "P_x [kip]": ("1100", "2200", "3300", "4400", "5500", "6600"),
}
"""Columns of the second pass; the first pass takes the first two."""


@dataclass
class Building:
    """What is typed; `second` tells whether the analysis model has been run."""

    givens: Mapping[str, str] = field(default_factory=lambda: dict(GIVENS))
    names: Sequence[str] = NAMES
    columns: Mapping[str, Sequence[str]] = field(default_factory=lambda: dict(COLUMNS))
    periods: Mapping[str, str] = field(default_factory=lambda: dict(PERIODS))
    second: bool = True

    def levels(self) -> str:
        """The table of levels as text."""
        columns = dict(self.columns) if self.second else dict(list(self.columns.items())[:2])
        head = ", ".join(["level", *columns])
        rows = zip(self.names, *columns.values(), strict=True)
        return "\n".join([head, *(", ".join(row) for row in rows)])

    def calc(self, **title: Any) -> Calc:
        """The whole calculation, worked to its end."""
        calc = Calc(project="Harbor Street Clinic", **title)
        calc.document("D-1", title="All inputs")
        parts = [calc.part(name) for name in SYSTEMS]
        calc.givens("\n".join(f"{name}, {value}, D-1" for name, value in self.givens.items()))
        calc.asce7.design_spectrum()
        calc.asce7.design_category()
        calc.levels(self.levels(), source="D-1")
        calc.asce7.seismic_weight()
        for part in parts:
            part.given("system", SYSTEMS[part.id], source="D-1")
            part.given("drift_class", "all other", source="D-1")
            if self.second:
                part.given("T_analysis", self.periods[part.id], source="D-1")
                part.answer("rho", "1.0", basis="two bays of resistance on each side")
            for step in ("system", "approximate_period", "period", "base_shear", "vertical_distribution", "drift",
                         "stability", "procedure"):  # fmt: skip
                getattr(part.asce7, step)()
        return calc

    def record(self, **title: Any) -> Record:
        """The record of the calculation."""
        return assemble(self.calc(**title))


def retyped(text: str, unit: str) -> str:
    """A typed quantity in another unit, every digit written out.

    >>> retyped("80 ft", "m"), retyped("880 kip", "kN")
    ('24.384 m', '3914.43502142924 kN')
    """
    numeral, _, own = text.partition(" ")
    exact = units.Fraction(numeral) * units.factor(own, unit)
    places = 0
    while exact * 10**places % 1:
        places += 1
    whole = exact * 10**places
    digits = f"{whole.numerator:0{places + 1}d}"
    return f"{digits[: len(digits) - places]}{'.' if places else ''}{digits[len(digits) - places :]} {unit}"


def metric(building: Building) -> Building:
    """The same building typed in meters, kilonewtons and millimeters."""
    other = {"ft": "m", "kip": "kN", "in": "mm"}

    def typed(value: str) -> str:
        unit = value.partition(" ")[2]
        return retyped(value, other[unit]) if unit in other else value

    columns = {}
    for head, cells in building.columns.items():
        symbol, unit = head.rstrip("]").split(" [")
        columns[f"{symbol} [{other[unit]}]"] = [retyped(f"{cell} {unit}", other[unit]).split()[0] for cell in cells]
    givens = {name: typed(value) for name, value in building.givens.items()}
    return Building(givens, building.names, columns, building.periods, building.second)
