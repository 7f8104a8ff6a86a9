"""What the first sheets say of nonstructural components: a row for each, whether by itself or of a pasted list.

Knows which results of a component are its answer. Must not compute anything.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.record import NOT_CHECKED, Line, Summary, SummaryRow
from calckit.units import shown

if TYPE_CHECKING:
    from calckit.core.calc import Calc
    from calckit.core.scope import Scope

_COLUMNS = {
    "Weight": "W_p", "Horizontal force": "F_p", "Over weight": "c_p", "Governed by": "i_p", "Vertical force": "F_pv",
    "Overstrength of anchors": "Omega_0p",
}  # fmt: skip
_GOVERNS = {"1": "F_pbasic", "2": "F_pmax", "3": "F_pmin"}
_ALL = ("F_p", "component_force", "component_forces")
_OF_A_BUILDING = ("V", "W", "T_a_method", "system")


def with_components(calc: Calc) -> list[Scope]:
    """The calculation and its parts, as far as they have worked components, or say that they could not."""
    return [scope for scope in (calc, *calc.parts.values()) if any(own(scope, name) for name in _ALL)]


def building_too(calc: Calc) -> bool:
    """Whether there is anything to say of a building."""
    return any(own(scope, name) for scope in (calc, *calc.parts.values()) for name in _OF_A_BUILDING)


def own(scope: Scope, name: str) -> Line | None:
    """The line of a name that belongs to the scope itself."""
    found = scope.find(name)
    return found.line if found and found.line.part == scope.id else None


def component_summary(scopes: list[Scope]) -> Summary:
    """The table of components."""
    rows = [row for scope in scopes for row in _rows(scope)]
    return Summary("answer", "Component forces", list(_COLUMNS), rows)


def _rows(scope: Scope) -> list[SummaryRow]:
    F_p = own(scope, "F_p")
    title = f"{scope.id}: {scope.title}" if scope.id else "Calculation"
    if F_p is None:
        return [SummaryRow(title, [NOT_CHECKED] * len(_COLUMNS), [""] * len(_COLUMNS))]
    if not F_p.rows:
        return [_row(scope, title, None)]
    within = f"{scope.id}: " if scope.id else ""
    return [_row(scope, f"{within}{name}", place) for place, name in enumerate(F_p.rows)]


def _row(scope: Scope, label: str, place: int | None) -> SummaryRow:
    cells, lines = [], []
    for name in _COLUMNS.values():
        if name == "i_p":
            text, line = _governing(scope, place)
        else:
            found = scope.find(name)
            line = found.line if found and (place is not None or not found.line.rows) else None
            text = _shown(line, place) if line else NOT_CHECKED
        cells.append(text)
        lines.append(line.id if line else "")
    return SummaryRow(label, cells, lines)


def _shown(line: Line, place: int | None) -> str:
    if place is None or isinstance(line.shown, str):
        return str(line.shown)
    return f"{line.shown[place]} {shown(line.unit)}".rstrip()


def _governing(scope: Scope, place: int | None) -> tuple[str, Line | None]:
    """The equation that governs, and the line that works it out."""
    if place is not None:
        code = own(scope, "i_p")
        line = own(scope, _GOVERNS[code.shown[place]]) if code else None
    else:
        F_p = own(scope, "F_p")
        if F_p and F_p.override:
            return "override", F_p
        line = next((own(scope, name) for name in _GOVERNS.values() if F_p and _is(scope, name, F_p)), None)
    if line is None or line.source is None:
        return "", line
    return f"eq. {line.source.equation}" if line.source.equation else line.meaning, line


def _is(scope: Scope, name: str, F_p: Line) -> bool:
    line = own(scope, name)
    return line is not None and any(each.governs and each.line == line.id for each in F_p.candidates)
