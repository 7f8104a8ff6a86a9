"""A calculation with inputs of our own for the tests of diaphragms, load effects, base and walls."""

from __future__ import annotations

import json
from collections.abc import Iterator, Mapping, Sequence
from typing import Any

from calckit.core.assemble import assemble
from calckit.core.calc import Calc
from calckit.core.record import Line
from tests.printed_audit import audit

EDITIONS = ("ASCE 7-16", "ASCE 7-22")
LEVELS = ("Roof", "3", "2")
HEIGHTS = (39.0, 26.0, 13.0)  # ft
WEIGHTS = (410.0, 655.0, 690.0)  # kip


def begin(standard: str = "ASCE 7-16", units: str = "US", **inputs: Any) -> Calc:
    """A calculation with these inputs; design values that most tests need unless they are replaced."""
    calc = Calc(project="Demo", number="D-1", standard=standard, units=units)
    calc.document("P", title="Demo data")
    of_demo = {"S_DS": 0.83, "I_e": 1.0, "SDC": "D", "rho": 1.3, "Omega_0": 2.5}
    for name, value in (of_demo | inputs).items():
        if value is not None:
            calc.given(name, value, source="P")
    return calc


def pasted(head: str, names: Sequence[str], columns: Mapping[str, Sequence[Any]]) -> str:
    """A table as an engineer pastes it."""
    rows = zip(names, *columns.values(), strict=True)
    return "\n".join("; ".join(map(str, row)) for row in ((head, *columns), *rows))


def distributed(calc: Calc, V: str = "182 kip", T: str = "0.7 s") -> Calc:
    """The levels and the level forces of a base shear."""
    for name, value in (("V", V), ("T", T)):
        calc.given(name, value, source="P")
    calc.levels(pasted("level", LEVELS, {"h_x [ft]": HEIGHTS, "w_x [kip]": WEIGHTS}), source="P")
    calc.asce7.vertical_distribution()
    return calc


def line(calc: Calc, id_: str) -> Line:
    """A line as it stands."""
    return calc.lines.entries[id_].line


def value(calc: Calc, id_: str) -> Any:
    """The value of a line."""
    return line(calc, id_).value


def sources(calc: Calc) -> Iterator[tuple[str, str]]:
    """Id and printed source of every line that rests on the standard."""
    for id_, entry in calc.lines.entries.items():
        if entry.line.source and entry.line.source.standard:
            yield id_, entry.line.source.text()


def faults(calc: Calc) -> list[str]:
    """What the audit of printed digits finds in the record."""
    return audit(json.loads(assemble(calc).to_json())).faults
