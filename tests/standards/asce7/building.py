"""A demo building of our own for the tests of the steps: five stories, round numbers."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from calckit.core.calc import Calc

STEEL = "moment frame: steel special moment frame"
BRACED = "building frame: steel special concentrically braced frame"
NAMES = ("R", "5", "4", "3", "2")
HEIGHTS = (62.0, 50.0, 38.0, 26.0, 14.0)  # ft
WEIGHTS = (400.0, 520.0, 520.0, 520.0, 540.0)  # kip
QUESTIONS = ("H1a", "H1b", "H2", "H3", "H4", "H5", "V1a", "V1b", "V2", "V3", "V4", "V5a", "V5b")


def start(units: str = "US", supplements: Sequence[int] | None = None, **inputs: Any) -> Calc:
    """A calculation with these inputs."""
    calc = Calc(project="Demo", number="D-1", units=units, supplements=supplements, supplements_source="IBC 2021")
    calc.document("P", title="Demo data")
    for name, value in inputs.items():
        calc.given(name, value, source="P")
    return calc


def levels(calc: Calc, unit: str = "ft", factor: float = 1.0, **columns: Sequence[float]) -> None:
    """Type the table of levels: heights (times `factor`, in `unit`), weights in kip, and columns like `P_x_kip`."""
    split = {name: name.rpartition("_") for name in columns}
    header = ["level", f"h_x [{unit}]", "w_x [kip]", *(f"{symbol} [{in_}]" for symbol, _, in_ in split.values())]
    heights = [round(h * factor, 6) for h in HEIGHTS]
    rows = zip(NAMES, heights, WEIGHTS, *columns.values(), strict=True)
    calc.levels("\n".join(", ".join(map(str, row)) for row in (header, *rows)), source="P")


def whole(units: str = "US", supplements: Sequence[int] | None = (), **inputs: Any) -> Calc:
    """The building worked to its level forces; `inputs` replace those of the demo."""
    of_demo = {
        "S_S": 1.25, "S_1": 0.4, "T_L": "8 s", "site_class": "C", "risk_category": "II", "system": STEEL,
        "h_n": "62 ft",
    }  # fmt: skip
    calc = start(units, supplements, **of_demo | inputs)
    levels(calc)
    calc.asce7.design_spectrum()
    calc.asce7.design_category()
    calc.asce7.seismic_weight()
    calc.asce7.system()
    calc.asce7.approximate_period()
    calc.asce7.period()
    calc.asce7.base_shear()
    calc.asce7.vertical_distribution()
    return calc


def value(calc: Calc, name: str) -> Any:
    """The value of a line."""
    return calc.lines.entries[name].line.value


def open_flags(calc: Calc, name: str) -> list[str]:
    """What a line leaves open."""
    return [flag.text for flag in calc.lines.entries[name].line.flags if flag.open]
