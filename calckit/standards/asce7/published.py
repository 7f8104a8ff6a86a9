"""What the adapters of the published checks have in common.

Knows how a check's inputs become a calculation, and how a line is read in a unit. Must not know any check.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from calckit import units
from calckit.core.calc import Calc
from calckit.core.handle import Handle


def start(edition: str = "ASCE 7-16", /, **inputs: Any) -> Calc:
    """A calculation with the inputs of a check, each from the document that the check names.

    >>> start(S_1=0.4)["S_1"].value
    0.4
    """
    calc = Calc(project="Published check", number="verify", standard=edition)
    calc.document("P", title="The document named by the check")
    for name, value in inputs.items():
        calc.given(name, value, source="P")
    return calc


def in_force(calc: Calc, name: str, unit: str = "") -> Any:
    """The value in force of a line, in `unit` (blank: in its own); words as they are.

    >>> in_force(start(h_n="10 ft"), "h_n", "in")
    120.0
    """
    return in_unit(Handle(calc, name), unit)


def in_unit(handle: Handle, unit: str) -> Any:
    """The value of a handle in `unit` (blank: in its own), a list entry by entry; words as they are.

    >>> in_unit(start(h_n="10 ft")["h_n"], "in")
    120.0
    """
    found = handle.value
    if not unit:
        return found
    if isinstance(found, list):
        return [units.convert(entry, handle.unit, unit) for entry in found]
    return units.convert(found, handle.unit, unit) if isinstance(found, float) else found


def pasted(head: str, names: Sequence[Any], columns: Mapping[str, Sequence[Any]]) -> str:
    """A table to paste: the names of its rows under `head`, then the columns by their headings.

    >>> pasted("wall", ["A"], {"L_w [ft]": [20]})
    'wall, L_w [ft]\\nA, 20'
    """
    rows = zip(names, *columns.values(), strict=True)
    return "\n".join(", ".join(map(str, row)) for row in ((head, *columns), *rows))
