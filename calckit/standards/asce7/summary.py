"""What the first sheets say of a calculation under ASCE/SEI 7: the answer by direction, the data for the drawings.

Knows which results govern and their order. Must not compute anything.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.record import NOT_CHECKED, Summary, SummaryRow

if TYPE_CHECKING:
    from calckit.core.calc import Calc
    from calckit.core.scope import Scope

SUPPLIERS = {
    "S_DS": "asce7.design_spectrum(), or asce7.site_specific_values(...)",
    "S_D1": "asce7.design_spectrum(), or asce7.site_specific_values(...)",
    "T_S": "asce7.design_spectrum()",
    "I_e": "asce7.design_category()",
    "SDC": "asce7.design_category()",
    "R": "asce7.system()",
    "C_d": "asce7.system()",
    "T_a": "asce7.approximate_period()",
    "T": "asce7.period()",
    "W": "asce7.seismic_weight()",
    "V_t": 'methods.combine("V_m", ...) after asce7.modal_response()',
    "C_sfloor1": "asce7.base_shear()",
    "V": "asce7.base_shear()",
    "C_s": "asce7.base_shear()",
    "V_x": "asce7.vertical_distribution()",
    "Delta": "asce7.drift()",
    "w_x": "levels(...)",
    "h_x": "levels(...)",
    "h_sx": "levels(...)",
    "delta_xe": "levels(...), column X.delta_xe",
    "P_x": "levels(...), column P_x",
}
"""What supplies a symbol that is missing."""

_COMMON = (
    ("Seismic design category", "SDC"),
    ("Design ordinate, short periods", "S_DS"),
    ("Design ordinate at 1 s", "S_D1"),
    ("Importance factor", "I_e"),
    ("Effective seismic weight", "W"),
)
_ANSWER = (
    ("Force-resisting system", "system"),
    ("Response modification coefficient", "R"),
    ("Overstrength factor", "Omega_0"),
    ("Deflection amplification factor", "C_d"),
    ("System and height permitted", "system_permitted"),
    ("Equivalent lateral forces permitted", "procedure"),
    ("Approximate period", "T_a"),
    ("Upper limit on the period", "T_max"),
    ("Period from analysis", "T_analysis"),
    ("Period for strength", "T"),
    ("Seismic response coefficient", "C_s"),
    ("Design base shear", "V"),
    ("Exponent of the distribution", "k"),
    ("Redundancy factor", "rho"),
    ("Largest story drift over allowable", "drift"),
    ("Largest stability coefficient over its maximum", "stability"),
)
_MODAL = (
    ("Base shear, modes combined", "V_t"),
    ("Factor on combined forces", "f_V"),
    ("Factor on combined drifts", "f_Delta"),
    ("Largest modal story drift over allowable", "modal_drift"),
)
"""Further rows of the answer where modes were combined."""
_DRAWINGS = (
    ("Risk category", ("risk_category",)),
    ("Importance factor", ("I_e",)),
    ("Mapped ordinates S_S, S_1", ("S_S", "S_1")),
    ("Site class", ("site_class",)),
    ("Design ordinates S_DS, S_D1", ("S_DS", "S_D1")),
    ("Seismic design category", ("SDC",)),
    ("Force-resisting system", ("system",)),
    ("Design base shear", ("V",)),
    ("Seismic response coefficient", ("C_s",)),
    ("Response modification coefficient", ("R",)),
)

CHECKS = ("drift", "stability", "procedure", "system_permitted", "modal_drift")
"""Checks among the rows of the answer."""


def summaries(calc: Calc) -> list[Summary]:
    """The two tables of the first sheets, from the lines as they stand."""
    parts: list[Scope] = [*calc.parts.values()] or [calc]
    modal = [part.find("f_V") is not None for part in parts]
    rows = _ANSWER + (_MODAL if any(modal) else ())
    answer = [SummaryRow(label, *_row(parts, (name,))) for label, name in rows]
    governing = SummaryRow("Governing equation", *_governing(parts))
    answer.insert([name for _, name in _ANSWER].index("C_s") + 1, governing)
    head = [SummaryRow(label, *_row(parts, (name,))) for label, name in _COMMON]
    drawings = [SummaryRow(label, *_row(parts, names)) for label, names in _DRAWINGS]
    procedures = ["modal response spectrum" if by_modes else "equivalent lateral force" for by_modes in modal]
    drawings.append(SummaryRow("Analysis procedure", procedures, [""] * len(parts)))
    columns = [f"{part.id}: {part.title}" if part.id else "Calculation" for part in parts]
    return [
        Summary("answer", "Governing results", columns, head + answer),
        Summary("drawings", "Seismic data for the drawings", columns, drawings),
    ]


def _row(parts: list[Scope], names: tuple[str, ...]) -> tuple[list[str], list[str]]:
    return [", ".join(_shown(part, name) for name in names) for part in parts], [
        _line(part, names[0]) for part in parts
    ]


def _line(part: Scope, name: str) -> str:
    entry = part.find(name)
    return entry.line.id if entry else ""


def _shown(part: Scope, name: str) -> str:
    entry = part.find(name)
    if entry is None:
        return NOT_CHECKED if name in CHECKS else "not stated"
    line = entry.line
    if line.kind == "check":
        at = f" ({line.row})" if line.row else ""
        ratio = f"{line.shown}{at}, " if line.shown and line.rows else ""
        return f"{ratio}{line.verdict}"
    return str(line.shown)


def _equation(name: str) -> str:
    """An equation by its number, or the clause of one without."""
    return f"eq. {name}" if name[:1].isdigit() else name


def _governing(parts: list[Scope]) -> tuple[list[str], list[str]]:
    cells, lines = [], []
    for part in parts:
        entry = part.find("C_s")
        named = [c for c in entry.line.candidates if c.governs] if entry else []
        text = f"{_equation(named[0].equation)}, {named[0].reason}" if named else "not stated"
        cells.append("override" if entry and entry.line.override else text)
        lines.append(named[0].line if named else "")
    return cells, lines
