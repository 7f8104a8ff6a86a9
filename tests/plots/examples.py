"""Drawings of an invented five-level building, and of awkward ones."""

from itertools import accumulate

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
    }


DRAWINGS: dict[str, Figure] = {
    "elevation": plots.elevation(LEVELS, H_X, W_X, **UNITS),
    "level_forces": plots.level_forces(LEVELS, H_X, FORCES, **UNITS),
    "story_shears": plots.story_shears(LEVELS, H_X, SHEARS, **UNITS),
    "drift_profile": plots.drift_profile(LEVELS, H_X, DRIFTS, LIMITS, **DRIFT_UNITS),
    "design_spectrum": plots.design_spectrum(T, S_A, corners=CORNERS, marks=MARKS),
    "design_spectrum, mark at the end": plots.design_spectrum(T, S_A, marks={"Y: T_a": 4, "X: T_a": 3.99, "Z": 0}),
    **{f"{name}, 60 levels": figure for name, figure in _all(MANY, MANY_H).items()},
    **{f"{name}, crowded": figure for name, figure in _all(CROWDED, CROWDED_H).items()},
    **{f"{name}, one level": figure for name, figure in _all(["Roof"], [4.25]).items()},
}
