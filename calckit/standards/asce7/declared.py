"""Everything the family declares: the symbols and the formulas of all its rooms.

Knows in which modules declarations stand. Must not know steps or lines.
"""

from __future__ import annotations

from types import ModuleType

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol
from calckit.standards.asce7 import (
    base_reactions_rules,
    components_rules,
    diaphragm_forces_rules,
    estimate_rules,
    formulas,
    ground_rules,
    irregularity_rules,
    load_effects_rules,
    modal_rules,
    model_rules,
    plan_rules,
    questions_rules,
    structure_rules,
    symbols,
    wall_forces_rules,
    weight_rules,
)

ROOMS: tuple[ModuleType, ...] = (
    symbols, formulas, ground_rules, structure_rules, model_rules, modal_rules, weight_rules, irregularity_rules,
    plan_rules, diaphragm_forces_rules, load_effects_rules, base_reactions_rules, wall_forces_rules, components_rules,
    estimate_rules, questions_rules,
)  # fmt: skip
"""Modules with declarations: a tuple SYMBOLS, formulas by their Python names."""

SYMBOLS: dict[str, Symbol] = {
    symbol.name: symbol for room in ROOMS for symbol in getattr(room, "SYMBOLS", ())
}
"""Every symbol of the family by its name."""

FORMULAS: dict[str, Formula] = {
    name: formula for room in ROOMS for name, formula in vars(room).items() if isinstance(formula, Formula)
}
"""Every formula of the family by its Python name."""
