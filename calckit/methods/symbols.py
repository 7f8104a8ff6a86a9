"""The symbols that the methods take and write; those of one mode or motion are declared for n.

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
    Symbol("f_s", "scale factor of each motion", low=0, low_open=True, index="motion"),
    Symbol("f_common", "part of the scale factors that lifts or lowers all motions alike", sub="common"),
    Symbol("PSA_mean", "pseudo-acceleration, mean of the motions, as a fraction of g", sub="mean", index="point"),
    Symbol("PSA_med", "pseudo-acceleration, median of the motions, as a fraction of g", sub="med", index="point"),
    Symbol("s_ln", "dispersion: standard deviation of the logarithm of the pseudo-acceleration", sub="ln",
           index="point"),
    Symbol("PSA_scaled", "pseudo-acceleration, mean of the scaled motions, as a fraction of g", sub="scaled",
           index="point"),
    Symbol("r_target", "mean of the scaled motions over the target", sub="target", index="point"),
    Symbol("f_T", "factor by which a damaged structure's period is longer than the elastic one", low=1),
    Symbol("T_el", "elastic period of the structure", "time", sub="el"),
    Symbol("T_long", "lengthened period of the structure", "time", sub="long"),
    Symbol("T_site", "dominant period of the site", "time", low=0, low_open=True, sub="site"),
    Symbol("T_b", "elastic and lengthened period", "time", index="period"),
    Symbol("S_ab", "design ordinate at these periods, as a fraction of g", sub="ab", index="period"),
    Symbol("PSA_b", "pseudo-acceleration of the motion at these periods, as a fraction of g", sub="b", index="period"),
    Symbol("r_code", "pseudo-acceleration of the motion over the design ordinate", sub="code", index="period"),
    Symbol("r_ground", "pseudo-acceleration over the peak ground acceleration", sub="ground", index="period"),
    Symbol("r_dom", "period over the dominant period of the motion", sub="dom", index="period"),
    Symbol("r_site", "period over the dominant period of the site", sub="site", index="period"),
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

_OF_MOTION = (
    Symbol("motion_n", "ground motion n", "words"),
    Symbol("PGA_n", "peak ground acceleration of motion n, as a fraction of g"),
    Symbol("PGV_n", "peak ground velocity of motion n", "velocity"),
    Symbol("PGD_n", "peak ground displacement of motion n", "displacement"),
    Symbol("I_An", "Arias intensity of motion n", "velocity", sub="A,n"),
    Symbol("D_n", "significant duration of motion n, between 5 and 95 percent of the energy", "time", sub="5-95,n"),
    Symbol("CAV_n", "cumulative absolute velocity of motion n", "velocity"),
    Symbol("v_endn", "velocity left at the end of motion n, over its peak", sub="end,n"),
    Symbol("T_domn", "dominant period of motion n, of its largest Fourier amplitude", "time", sub="dom,n"),
    Symbol("T_meann", "mean period of motion n", "time", sub="mean,n"),
    Symbol("r_Fn", "residual of the Fourier amplitudes of motion n: energy by frequency against energy in time",
           sub="F,n"),
    Symbol("f_sn", "scale factor of motion n", sub="s,n"),
    Symbol("SD_n", "spectral displacement of motion n", "displacement", index="point"),
    Symbol("PSV_n", "pseudo-velocity of motion n", "velocity", index="point"),
    Symbol("PSA_n", "pseudo-acceleration of motion n, as a fraction of g", index="point"),
    Symbol("r_PSAn", "residual of the spectrum of motion n: largest change where its step is halved", digits=2,
           sub="PSA,n"),
)  # fmt: skip
OF_MOTION = {symbol.name: symbol for symbol in _OF_MOTION}
"""Symbols of a numbered series, one for each ground motion."""
OF_MODE = {symbol.name: symbol for symbol in _OF_MODE}
"""Symbols of a numbered series, one for each mode."""

SYMBOLS = {symbol.name: symbol for symbol in _ALL}
"""Every other symbol by its name."""

_MODES = "methods.modes(), or methods.pasted_modes(...)"
SUPPLIERS = {
    **dict.fromkeys(("T_m", "W_m", "r_m", "r_sum", "modal_model"), _MODES),
    "k_x": 'rows("stories", "level, k_x [kip/in]...", source=...)',
    "rho_1": "methods.correlation()",
    **{f"PSA_{number}": f"methods.record_spectrum(motion, number={number})" for number in range(1, 12)},
    "T_r": "a list of periods: asce7.spectrum_ordinates([...]), or rows(...) under a name of its own",
}
"""What supplies a symbol that is missing."""
