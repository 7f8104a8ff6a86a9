"""Drawings of an invented five-level building, and of awkward ones."""

from itertools import accumulate
from math import cos, pi, sin

from matplotlib.figure import Figure

from calckit import plots

LEVELS = ["Roof", "5", "4", "3", "2"]
H_X = [62.0, 50.0, 38.0, 26.0, 14.0]
W_X = [410.5, 520.0, 520.0, 520.0, 548.0]
FORCES = {"X": [81.234, 70.1, 50.22, 31.1, 12.345], "Y": [101.234, 80.1, 52.22, 30.1, 2.345]}
SHEARS = {part: list(accumulate(forces)) for part, forces in FORCES.items()}
DRIFTS = {"X": [1.1, 1.6, 1.9, 2.05, 1.8], "Y": ["0.901", "1.200", "1.500", "1.703", "1.400"]}
LIMITS = {part: [2.88, 2.88, 2.88, 2.88, 3.36] for part in DRIFTS}
T = [0.0, 0.1, 0.5, 0.75, 1.0, 1.5, 2.0, 3.0, 4.0]
S_A = [0.4, 1.0, 1.0, 2 / 3, 0.5, 1 / 3, 0.25, 1 / 6, 0.125]
CORNERS = {"T_0": 0.1, "T_S": 0.5}
MARKS = {"X: T_a": "0.7605", "X: C_u T_a": "1.065", "X: T": "1.065", "Y: T_a": 0.7716, "Y: C_u T_a": 1.0801}

SHAPES = {"1": [1.0, 0.92, 0.76, 0.55, 0.28], "2": [1.0, 0.31, -0.59, -1.09, -0.83], "3": [1.0, -0.7, -1.2, 0.4, 1.3]}
MODAL = {"1": [125.2, 240.2, 335.8, 404.2, 439.8], "2": [-36.2, -47.4, -25.9, 13.5, 43.6]}
COMBINED = ["130.9", "245.1", "337.0", "404.6", "442.1"]
STEP = 0.01
A_G = [0.3 * sin(5 * n * STEP) * sin(pi * n / 5000) for n in range(5001)]
V_G = [12.0 * cos(5 * n * STEP) * sin(pi * n / 5000) for n in range(5001)]
SHARE = [n / 5000 for n in range(5001)]
PERIODS = [0.05 * n for n in range(1, 81)]
AMPLITUDES = [T_F * 2.718 ** (-2 * T_F) for T_F in PERIODS]
ORDINATES = [1.4 * T_F * 2.718 ** (-2 * T_F) for T_F in PERIODS]

MANY = [f"Level {n}" for n in range(60, 0, -1)]
MANY_H = [13.5 * n for n in range(60, 0, -1)]
CROWDED = ["Top of machine room", "Machine room", "Roof", "9", "2", "Podium"]
CROWDED_H = [100.0, 98.0, 97.0, 96.0, 20.0, 2.0]

UNITS = {"length_unit": "ft", "force_unit": "kip"}
DRIFT_UNITS = {"length_unit": "ft", "drift_unit": "in"}


def _all(levels: list[str], h_x: list[float]) -> dict[str, Figure]:
    values = [float(len(levels) - i) for i in range(len(levels))]
    pair = {"East-west direction": values, "North-south direction": values[::-1]}
    return {
        "elevation": plots.elevation(levels, h_x, values, title="Building", **UNITS),
        "level_forces": plots.level_forces(levels, h_x, pair, **UNITS),
        "story_shears": plots.story_shears(levels, h_x, pair, **UNITS),
        "drift_profile": plots.drift_profile(levels, h_x, pair, pair, **DRIFT_UNITS),
        "mode_shapes": plots.mode_shapes(levels, h_x, dict(zip("12345", [values] * 5, strict=True)), length_unit="ft"),
        "modal_shears": plots.modal_shears(
            levels, h_x, dict(zip("12345", [values, values[::-1]] * 2 + [values], strict=True)), values, **UNITS
        ),
    }


DRAWINGS: dict[str, Figure] = {
    "elevation": plots.elevation(LEVELS, H_X, W_X, **UNITS),
    "level_forces": plots.level_forces(LEVELS, H_X, FORCES, **UNITS),
    "story_shears": plots.story_shears(LEVELS, H_X, SHEARS, **UNITS),
    "drift_profile": plots.drift_profile(LEVELS, H_X, DRIFTS, LIMITS, **DRIFT_UNITS),
    "design_spectrum": plots.design_spectrum(T, S_A, corners=CORNERS, marks=MARKS),
    "design_spectrum, mark at the end": plots.design_spectrum(T, S_A, marks={"Y: T_a": 4, "X: T_a": 3.99, "Z": 0}),
    "mode_shapes": plots.mode_shapes(LEVELS, H_X, SHAPES, length_unit="ft"),
    "modal_shears": plots.modal_shears(LEVELS, H_X, MODAL, COMBINED, **UNITS),
    "motion_history": plots.motion_history(STEP, {"a": (A_G, "g"), "v": (V_G, "in/s"), "d": (V_G, "in")}),
    "cumulative_energy": plots.cumulative_energy(STEP, SHARE, between=(2.5, 47.5)),
    "fourier_amplitude": plots.fourier_amplitude(
        PERIODS, AMPLITUDES, unit="in/s", marks={"T_dom": "0.50", "T_mean": 0.61, "X: T": "1.065"}
    ),
    "spectra": plots.spectra(
        T, S_A, {"Motion 1": (PERIODS, ORDINATES), "Mean of 11 scaled motions": (PERIODS, AMPLITUDES)}
    ),
    **{f"{name}, 60 levels": figure for name, figure in _all(MANY, MANY_H).items()},
    **{f"{name}, crowded": figure for name, figure in _all(CROWDED, CROWDED_H).items()},
    **{f"{name}, one level": figure for name, figure in _all(["Roof"], [4.25]).items()},
}
