"""A demo printout of our own for the tests of the 7-22 ground motion: round numbers at the 22 periods."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from calckit.core.calc import Calc

PERIODS = (
    0, 0.01, 0.02, 0.03, 0.05, 0.075, 0.1, 0.15, 0.2, 0.25, 0.3, 0.4, 0.5, 0.75, 1, 1.5, 2, 3, 4, 5, 7.5, 10,
)  # fmt: skip
"""From memory, high: 11.4.5.1 of 7-22."""
ORDINATES = (
    0.61, 0.62, 0.63, 0.66, 0.77, 0.95, 1.10, 1.35, 1.52, 1.61, 1.66, 1.69, 1.68, 1.45, 1.22, 0.85, 0.62, 0.38, 0.27,
    0.20, 0.11, 0.069,
)  # fmt: skip
INPUTS: Mapping[str, Any] = {
    "S_S": 1.37, "S_1": 0.52, "S_MS": 1.52, "S_M1": 1.22, "T_L": "12 s", "site_class": "D", "risk_category": "II",
}  # fmt: skip


def pasted(ordinates: Sequence[float] = ORDINATES, periods: Sequence[float] = PERIODS, column: str = "S_aM") -> str:
    """The table as it is pasted."""
    rows = zip(periods, ordinates, strict=True)
    return "\n".join([f"T_n [s], {column}", *(f"{period}, {ordinate}" for period, ordinate in rows)])


def start_22(units: str = "US", **inputs: Any) -> Calc:
    """A calculation under 7-22 with these inputs over those of the demo; None leaves one out."""
    calc = Calc(project="Demo", number="D-1", units=units, standard="ASCE 7-22")
    calc.document("P", title="Demo data")
    for name, value in {**INPUTS, **inputs}.items():
        if value is not None:
            calc.given(name, value, source="P")
    return calc


def printed(units: str = "US", text: str = "", **inputs: Any) -> Calc:
    """The design spectrum with the pasted ordinates."""
    calc = start_22(units, **inputs)
    calc.asce7.design_spectrum()
    calc.asce7.printed_ordinates(text or pasted(), source="P p. 3")
    return calc
