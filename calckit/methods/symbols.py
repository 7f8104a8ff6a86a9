"""The symbols that the methods take and write; those of one mode are declared for mode n.

Knows names, meanings and kinds of quantity. Must not know how a value comes about.
"""

from __future__ import annotations

from calckit.core.symbol import Symbol

STICK, PASTED = "stick model", "three-dimensional analysis"

_ALL = (
    Symbol("modal_model", "what the modes were found with", "words", choices=(STICK, PASTED)),
    Symbol("g", "standard acceleration of gravity", "acceleration", low=0, low_open=True),
    Symbol("zeta", "damping ratio, a fraction of critical damping", low=0, high=1, low_open=True),
    Symbol("k_x", "lateral stiffness of the story below level x", "other", low=0, low_open=True, own_unit="kip/in"),
    Symbol("W_tot", "weight of the model, the sum over its levels", "force"),
    Symbol("T_m", "period of each mode", "time", low=0, low_open=True, index="mode"),
    Symbol("omega_m", "circular frequency of each mode", "other", own_unit="1/s", index="mode"),
    Symbol("Gamma_m", "participation factor of each mode", index="mode"),
    Symbol("W_m", "effective modal weight of each mode", "force", low=0, index="mode"),
    Symbol("h_em", "height at which the effective weight of each mode acts", "length", sub="e,m", index="mode"),
    Symbol("r_m", "effective modal weight of each mode over the weight of the model", low=0, high=1,
           index="mode"),
    Symbol("r_sum", "effective modal weights of the modes taken, over the weight of the model", sub="Σ"),
    Symbol("r_modes", "residual of the modes: largest |K φ - ω² M φ| over the largest |K φ|, not above", sub="modes"),
    Symbol("r_orth", "residual of the modes: largest coupling of two modes by the masses, not above", sub="orth"),
    Symbol("r_stories", "largest difference between the pasted story values of a mode and its modal weight",
           sub="stories"),
)  # fmt: skip

_OF_MODE = (
    Symbol("T_n", "period of mode n", "time"),
    Symbol("omega_n", "circular frequency of mode n", "other", own_unit="1/s"),
    Symbol("phi_n", "shape of mode n: displacement of level x, 1 at the roof"),
    Symbol("Gamma_n", "participation factor of mode n"),
    Symbol("W_n", "effective modal weight of mode n", "force"),
    Symbol("h_en", "height at which the effective weight of mode n acts", "length", sub="e,n"),
    Symbol("s_xn", "weight effective at level x in mode n: its force where S_a is 1 g", "force", sub="x,n"),
    Symbol("d_xn", "displacement of level x in mode n where S_a is 1 g", "displacement", sub="x,n"),
    Symbol("rho_n", "correlation of each mode with mode n", index="mode"),
)

OF_MODE = {symbol.name: symbol for symbol in _OF_MODE}
"""Symbols of a numbered series, one for each mode."""

SYMBOLS = {symbol.name: symbol for symbol in _ALL}
"""Every other symbol by its name."""

_MODES = "methods.modes(), or methods.pasted_modes(...)"
SUPPLIERS = {
    **dict.fromkeys(("T_m", "W_m", "r_m", "r_sum", "modal_model"), _MODES),
    "k_x": 'rows("stories", "level, k_x [kip/in]...", source=...)',
    "rho_1": "methods.correlation()",
}
"""What supplies a symbol that is missing."""
