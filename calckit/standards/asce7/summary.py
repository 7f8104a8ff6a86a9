"""What the first sheets say of a calculation under ASCE/SEI 7: the answer by direction, the data for the drawings.

Knows which results govern and their order. Must not compute anything.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from calckit.core.record import NOT_CHECKED, Summary, SummaryRow
from calckit.standards.asce7.component_summary import building_too, component_summary, with_components

if TYPE_CHECKING:
    from calckit.core.calc import Calc
    from calckit.core.scope import Scope

SUPPLIERS = {
    "S_DS": "asce7.design_spectrum(), or asce7.site_specific_values(...)",
    "S_D1": "asce7.design_spectrum(), or asce7.site_specific_values(...)",
    "T_S": "asce7.design_spectrum()",
    "S_MS": "asce7.geodatabase_values(...) or given(...) under 7-22, asce7.design_spectrum() under 7-16",
    "S_M1": "asce7.geodatabase_values(...) or given(...) under 7-22, asce7.design_spectrum() under 7-16",
    "S_an": "asce7.printed_ordinates(...)",
    "F_PGA": "asce7.peak_acceleration()",
    "C_sbasic": "asce7.base_shear()",
    "T_drift": "asce7.period()",
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
    "Omega_0": "asce7.system()",
    "F_x": "asce7.vertical_distribution()",
    "M_x": "asce7.vertical_distribution()",
    **dict.fromkeys(("r_Ev", "c_D6", "c_D7", "c_L", "c_S6", "c_D8", "c_D9", "c_D10", "c_S9"), "asce7.load_effects()"),
    "w_px": 'rows(...), column w_px, or given("w_px_basis", "w_x", ...)',
    "w_x": "levels(...), or asce7.weight_take_off(...)",
    "h_x": "levels(...)",
    "h_sx": "levels(...)",
    "delta_xe": "levels(...), column X.delta_xe",
    "P_x": "levels(...), column P_x",
    "A_x": "asce7.end_displacements()",
    "rho": "asce7.redundancy()",
    **dict.fromkeys(("d_1plus", "d_2plus", "d_1minus", "d_2minus"), "rows(...), a row for each level"),
    **dict.fromkeys(("x_i", "y_i", "k_ix", "k_iy"), "rows(...), a row for each element"),
    "b_i": "rows(...), a row for each line",
    **dict.fromkeys(("L_s", "d_s"), "rows(...), a row for each span"),
    **dict.fromkeys(("V_ax", "V_ay"), "rows(...), a row for each element"),
    "V_px": 'along_x="..." (the part with its V_x), or given("V_px", ...)',
    "V_py": 'along_y="..." (the part with its V_x), or given("V_py", ...)',
    **dict.fromkeys(("V_p", "F_d"), 'direction="..." (the part with its forces), or given(...)'),
    **dict.fromkeys(("diaphragm_is", "H1a", "H1b"), "answer(...)"),
    "V_applied": "analysis(V_applied=...)",
    "W_model": "analysis(W_model=...)",
    "V_drift": "asce7.analysis_model()",
    "D_i": 'rows("walls", ...), column D_i',
    "t_i": 'rows("walls", ...), column t_i',
    "report_class": 'given("report_class", ...), the class in the geotechnical report or "none: why"',
    "component": 'given("component", ...), or the factors of the component with their source',
    "I_p": 'answer("I_p", "1.0" or "1.5", basis=...)',
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
    """The tables of the first sheets, from the lines as they stand: two of the building, one of components if any."""
    carried = with_components(calc)
    components = [component_summary(carried)] if carried else []
    if components and not building_too(calc):
        return components
    parts = _directions(calc, carried)
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
    if not building_too(calc):
        return [Summary("answer", "Governing results", columns, [row for row in head + answer if any(row.lines)])]
    return [
        Summary("answer", "Governing results", columns, head + answer),
        Summary("drawings", "Seismic data for the drawings", columns, drawings),
        *components,
    ]


def directions(calc: Calc) -> list[Scope]:
    """The parts that answer for a direction, or the calculation where it has no parts."""
    return _directions(calc, with_components(calc))


def _directions(calc: Calc, carried: Sequence[Scope]) -> list[Scope]:
    """The parts that answer for a direction; components and those of one level in plan do not."""
    parts: list[Scope] = [part for part in calc.parts.values() if part not in carried]
    answering = [part for part in parts if any(part.id_of(name) in calc.lines.entries for _, name in _ANSWER)]
    return answering or parts or [calc]


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
