"""Zero lines: what is taken off, and what is left."""

from __future__ import annotations

import numpy as np
import pytest

from calckit.errors import InputError
from calckit.motions import Motion, correct, integrals

NOISE = np.random.default_rng(7).normal(size=2500)


def motion(acceleration: np.ndarray, dt: float = 0.01) -> Motion:
    return Motion("noise", acceleration, dt, kind="synthetic")


def test_integrals_are_exact_for_straight_lines() -> None:
    # a = t: v = t^2/2, u = t^3/6
    t = np.linspace(0, 3, 7)
    velocity, displacement = integrals(motion(t, 0.5))
    assert velocity == pytest.approx(t**2 / 2, rel=1e-14)
    assert displacement == pytest.approx(t**3 / 6, rel=1e-14)


@pytest.mark.parametrize("dt", [0.002, 0.01, 0.1])
def test_velocity_and_displacement_end_at_zero(dt: float) -> None:
    drifting = motion(NOISE + 0.3, dt)
    mended = correct(drifting, "zero end")
    for before, after in zip(integrals(drifting), integrals(mended), strict=True):
        assert abs(after[-1]) < 1e-12 * np.abs(before).max()
    taken = drifting.acceleration - mended.acceleration
    assert np.abs(np.diff(taken, 2)).max() < 1e-12  # a straight line
    assert mended.notes[-1].startswith("zero end: ")


def test_a_straight_line_is_taken_off_whole() -> None:
    t = np.arange(2500) * 0.01
    for method in ("linear", "zero end"):
        line = correct(motion(0.2 - 0.05 * t), method)
        assert np.abs(line.acceleration).max() < 1e-12
        assert line.notes == (f"{method}: 0.2 - 0.05 t m/s2 taken off",)


def test_linear_is_the_least_squares_line_of_numpy() -> None:
    t = np.arange(2500) * 0.01
    slope, start = np.polyfit(t, NOISE, 1)
    assert correct(motion(NOISE), "linear").acceleration == pytest.approx(NOISE - start - slope * t, abs=1e-12)


def test_mean() -> None:
    mended = correct(motion(NOISE + 2), "mean")
    assert abs(mended.acceleration.mean()) < 1e-14
    assert mended.acceleration == pytest.approx(NOISE - NOISE.mean(), abs=1e-12)


def test_long_motions_and_unknown_methods_are_refused() -> None:
    long = motion(np.ones(3002), 0.1)
    with pytest.raises(InputError, match=r"motion: needed at most 300 s for zero end; given 300\.1 s"):
        correct(long, "zero end")
    assert np.abs(correct(long, "mean").acceleration).max() == 0
    with pytest.raises(InputError, match="method: needed one of mean, linear, zero end; given 'cubic'"):
        correct(motion(NOISE), "cubic")
