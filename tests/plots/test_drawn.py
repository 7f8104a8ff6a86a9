"""What is drawn is what was given, read back from the drawing."""

import numpy as np
import pytest
from matplotlib.lines import Line2D
from matplotlib.patches import StepPatch
from matplotlib.text import Annotation

from calckit import plots
from tests.plots import ink
from tests.plots.examples import (
    A_G,
    AMPLITUDES,
    COMBINED,
    CORNERS,
    DRIFT_UNITS,
    DRIFTS,
    FORCES,
    H_X,
    LEVELS,
    LIMITS,
    MARKS,
    MODAL,
    ORDINATES,
    PERIODS,
    S_A,
    SHAPES,
    SHARE,
    SHEARS,
    STEP,
    UNITS,
    W_X,
    T,
)


def test_elevation_draws_the_levels_to_scale() -> None:
    figure = plots.elevation(LEVELS, H_X, W_X, title="North frame", **UNITS)
    floors = [line for line in figure.findobj(Line2D) if line.get_linewidth() == 1.7]
    heights = np.array([line.get_ydata()[0] for line in floors])
    base = min(line.get_ydata()[0] for line in ink.vertical_lines(figure))
    assert (heights - base) / (heights[0] - base) == pytest.approx(np.array(H_X) / H_X[0], abs=1e-12)


def test_elevation_prints_names_heights_stories_and_weights() -> None:
    words = ink.words(plots.elevation(LEVELS, H_X, W_X, title="North frame", base="Grade", **UNITS))
    for expected in [*LEVELS, "North frame", "Grade", "$h_{x}$ (ft)", "$w_{x}$ (kip)", "Story (ft)"]:
        assert expected in words
    assert [word for word in words if word in ("62", "50", "38", "26", "14", "12", "0")] == [
        "0", "62", "50", "38", "26", "14", "12", "12", "12", "12", "14",
    ]  # fmt: skip
    assert [word for word in words if "." in word] == ["410.5", "520.0", "520.0", "520.0", "548.0"]


def test_numerals_given_as_text_are_printed_as_they_stand() -> None:
    words = ink.words(plots.elevation(["Roof", "2"], ["24.250", "13.000"], ["310", "455.00"], **UNITS))
    assert {"24.250", "13.000", "11.250", "310", "455.00"} <= set(words)


def test_forces_are_arrows_from_the_axis_to_the_value() -> None:
    figure = plots.level_forces(LEVELS, H_X, FORCES, **UNITS)
    assert len(figure.axes) == 2
    for axes, forces in zip(figure.axes, FORCES.values(), strict=True):
        arrows = [text for text in axes.texts if isinstance(text, Annotation)]
        assert [arrow.xy for arrow in arrows] == list(zip(forces, H_X, strict=True))
        assert [arrow.xyann for arrow in arrows] == [(0, height) for height in H_X]
        assert axes.get_ylim() == (0, H_X[0])
    words = ink.words(figure)
    assert {"X", "Y", "81.23", "12.35", "101.2", "2.3", "$F_{x}$ (kip)"} <= set(words)


def test_parts_are_drawn_to_one_scale() -> None:
    figure = plots.level_forces(LEVELS, H_X, FORCES, **UNITS)
    scales = [axes.get_window_extent().width / np.ptp(axes.get_xlim()) for axes in figure.axes]
    assert scales[0] == pytest.approx(scales[1])


def test_a_force_to_the_left_points_left() -> None:
    axes = plots.level_forces(["Roof", "2"], [24, 13], {"X": [10, -4]}, **UNITS).axes[0]
    assert axes.get_xlim() == (-4, 10)
    assert axes.texts[1].xy == (-4, 13)


def test_shears_step_at_the_levels() -> None:
    figure = plots.story_shears(LEVELS, H_X, SHEARS, **UNITS)
    for axes, shears in zip(figure.axes, SHEARS.values(), strict=True):
        (step,) = [patch for patch in axes.patches if isinstance(patch, StepPatch)]
        assert step.get_data().values.tolist() == shears[::-1]
        assert step.get_data().edges.tolist() == [0.0, *H_X[::-1]]


def test_drifts_and_limits_step_at_the_levels() -> None:
    figure = plots.drift_profile(LEVELS, H_X, DRIFTS, LIMITS, **DRIFT_UNITS)
    for axes, part in zip(figure.axes, DRIFTS, strict=True):
        drift, limit = [patch for patch in axes.patches if isinstance(patch, StepPatch)]
        assert drift.get_data().values.tolist() == [float(value) for value in DRIFTS[part]][::-1]
        assert limit.get_data().values.tolist() == LIMITS[part][::-1]
        assert limit.get_linestyle() != drift.get_linestyle()
    words = ink.words(figure)
    assert {"1.10", "2.05", "0.901", "1.703", "2.88", "3.36", r"$\Delta$ (in)", r"$\Delta_{a}$ (in)"} <= set(words)


def test_spectrum_curve_corners_and_marks() -> None:
    figure = plots.design_spectrum(T, S_A, corners=CORNERS, marks=MARKS)
    (axes,) = figure.axes
    curve, dots = axes.lines
    assert curve.get_xydata().tolist() == [list(point) for point in zip(T, S_A, strict=True)]
    periods = sorted(float(period) for period in MARKS.values())
    assert sorted(dots.get_xdata()) == periods
    assert dots.get_ydata() == pytest.approx(np.interp(dots.get_xdata(), T, S_A))
    poles = sorted(
        axes.transData.inverted().transform((line.get_xdata()[0] * figure.dpi, 0))[0]
        for line in ink.vertical_lines(figure)
    )
    assert poles == pytest.approx(sorted([*CORNERS.values(), *periods]))
    words = ink.words(figure)
    assert {"X: $T_{a}$ = 0.7605 s", "X: $C_{u}$ $T_{a}$ = 1.065 s", "Y: $T_{a}$ = 0.7716 s"} <= set(words)
    assert {"$T_{0}$ = 0.1 s", "$T_{S}$ = 0.5 s", "$S_{a}$ (g)", "$T$ (s)"} <= set(words)


def test_labels_fall_from_left_to_right() -> None:
    figure = plots.design_spectrum(T, S_A, corners=CORNERS, marks=MARKS)
    flags = [(text.get_position(), text.get_text()) for text in figure.texts]
    ordered = sorted(flags, key=lambda flag: -flag[0][1])
    assert [x for (x, _), _ in ordered] == sorted(x for (x, _), _ in flags)


def test_of_many_levels_some_are_labeled_and_it_says_so() -> None:
    levels = [f"L{n}" for n in range(60, 0, -1)]
    figure = plots.elevation(levels, [13.0 * n for n in range(60, 0, -1)], [1.0] * 60, **UNITS)
    words = ink.words(figure)
    named = [word for word in words if word in levels]
    assert {"L60", "L1"} <= set(named)
    assert f"{len(named)} of 60 levels are labeled." in words
    assert len([line for line in figure.findobj(Line2D) if line.get_linewidth() == 1.7]) == 60


def test_a_drawing_of_the_users_own_is_saved_the_same_way() -> None:
    figure = plots.Drawing(figsize=(3, 2))
    figure.add_subplot().plot([0, 1], [0, 1])
    assert figure._repr_svg_() == plots.svg_bytes(figure).decode()
    assert figure._repr_png_() == plots.png_bytes(figure, 100)
    assert "<dc:date>" not in figure._repr_svg_()


def test_mode_shapes_start_at_the_base() -> None:
    figure = plots.mode_shapes(LEVELS, H_X, SHAPES, length_unit="ft")
    assert len(figure.axes) == 3
    for axes, shape in zip(figure.axes, SHAPES.values(), strict=True):
        assert axes.lines[0].get_xdata().tolist() == [*shape, 0.0]
        assert axes.lines[0].get_ydata().tolist() == [*H_X, 0.0]
        low, high = axes.get_xlim()
        assert low == -high < -max(map(abs, shape))
    assert {"Mode 1", "Mode 2", "Mode 3"} <= set(ink.words(figure))


def test_modal_shears_keep_their_signs() -> None:
    figure = plots.modal_shears(LEVELS, H_X, MODAL, COMBINED, **UNITS)
    steps = [patch for patch in figure.axes[0].patches if isinstance(patch, StepPatch)]
    values = [step.get_data().values.tolist() for step in steps]
    assert values == [[*reversed(shears)] for shears in (*MODAL.values(), list(map(float, COMBINED)))]
    assert len({step.get_linestyle() for step in steps}) == 3
    assert {*COMBINED, "Mode 1", "Mode 2", "combined"} <= set(ink.words(figure))


def test_a_long_history_keeps_its_peaks() -> None:
    figure = plots.motion_history(STEP, {"a": (A_G, "g")})
    drawn = figure.axes[0].lines[0]
    assert len(drawn.get_xdata()) < len(A_G)
    assert max(drawn.get_ydata()) == max(A_G) and min(drawn.get_ydata()) == min(A_G)
    peak = max(range(len(A_G)), key=lambda n: abs(A_G[n]))
    assert any(word.endswith(f"at {peak * STEP:.4g} s") for word in ink.words(figure))
    assert len(plots.svg_bytes(figure)) < 200_000


def test_a_short_history_is_drawn_sample_by_sample() -> None:
    figure = plots.motion_history(0.5, {"a": ([0.0, 0.2, -0.1], "g")})
    assert figure.axes[0].lines[0].get_xydata().tolist() == [[0.0, 0.0], [0.5, 0.2], [1.0, -0.1]]


def test_energy_and_its_bounds() -> None:
    axes = plots.cumulative_energy(STEP, SHARE, between=(2.5, 47.5)).axes[0]
    assert axes.lines[0].get_ydata().tolist() == SHARE
    assert [line.get_xdata()[0] for line in axes.lines[1:]] == [2.5, 47.5]


def test_fourier_amplitudes_rise_along_the_period() -> None:
    figure = plots.fourier_amplitude(PERIODS[::-1], AMPLITUDES[::-1], unit="in/s", marks={"T_dom": "0.50"})
    axes = figure.axes[0]
    assert axes.lines[0].get_xdata().tolist() == PERIODS and axes.lines[0].get_ydata().tolist() == AMPLITUDES
    assert axes.lines[1].get_xdata()[0] == 0.5
    assert any("0.50 s" in word for word in ink.words(figure))


def test_spectra_are_told_apart_without_color() -> None:
    figure = plots.spectra(T, S_A, {"Motion 1": (PERIODS, ORDINATES), "Mean": (PERIODS, AMPLITUDES)})
    lines = figure.axes[0].lines
    assert [line.get_ydata().tolist() for line in lines] == [S_A, ORDINATES, AMPLITUDES]
    assert len({(line.get_linestyle(), line.get_linewidth(), line._unscaled_dash_pattern) for line in lines}) == 3
    assert {"Design spectrum", "Motion 1", "Mean"} <= set(ink.words(figure))
