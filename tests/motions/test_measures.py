"""Measures of strength and duration against closed forms, and turned components against each direction alone."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import cumulative_trapezoid, trapezoid

from calckit.dynamics import response_spectrum
from calckit.errors import InputError
from calckit.motions import (
    Motion,
    arias_intensity,
    cumulative_absolute_velocity,
    cumulative_energy,
    peaks,
    rotated_peak,
    rotated_spectrum,
    significant_duration,
    spectrum_intensity,
)

NOISE = np.random.default_rng(11).normal(size=(2, 400)) * np.hanning(400)


def motion(acceleration: np.ndarray, dt: float = 0.01) -> Motion:
    return Motion("demo", acceleration, dt, kind="synthetic")


def test_sine_of_ten_seconds() -> None:
    # a = 1 sin(4 pi t) m/s2, 10 s: I_A .800883 m/s, CAV 20/pi = 6.36620 m/s, D5-95 9.00 s (constructed, closed form)
    wave = motion(np.sin(4 * np.pi * np.arange(50_001) * 0.0002), 0.0002)
    assert arias_intensity(wave) == pytest.approx(np.pi / (2 * 9.80665) * 5, rel=1e-9)
    assert arias_intensity(wave) == pytest.approx(0.800883, abs=1e-6)
    assert cumulative_absolute_velocity(wave) == pytest.approx(6.36620, abs=1e-5)
    start, end = significant_duration(wave)
    assert end - start == pytest.approx(9.0, abs=1e-6)
    start, end = significant_duration(wave, high=0.75)
    assert end - start == pytest.approx(7.0, abs=1e-6)


def test_build_up_against_scipy() -> None:
    squares = cumulative_trapezoid(NOISE[0] ** 2, dx=0.01, initial=0)
    assert cumulative_energy(motion(NOISE[0])) == pytest.approx(squares / squares[-1], abs=1e-14)
    assert arias_intensity(motion(NOISE[0])) == pytest.approx(np.pi / 2 / 9.80665 * squares[-1], rel=1e-12)


def test_absolute_velocity_follows_the_line_through_zero() -> None:
    finer = np.interp(np.arange(399 * 1000 + 1) / 1000, np.arange(400), NOISE[0])
    fine = trapezoid(np.abs(finer), dx=0.01 / 1000)  # overshoots by up to a step squared at each crossing: 1e-6
    assert cumulative_absolute_velocity(motion(NOISE[0])) == pytest.approx(fine, rel=1e-6)


def test_peaks_of_a_whole_sine_cycle() -> None:
    # a = sin(2 pi t) for 1 s: v = (1 - cos)/(2 pi), largest 1/pi at 0.5 s; u ends at 1/(2 pi)
    found = peaks(motion(np.sin(2 * np.pi * np.arange(10_001) * 0.0001), 0.0001))
    assert (found.PGA, found.t_PGA) == (pytest.approx(1, rel=1e-9), pytest.approx(0.25))
    assert (found.PGV, found.t_PGV) == (pytest.approx(1 / np.pi, rel=1e-7), pytest.approx(0.5, abs=1e-4))
    assert (found.PGD, found.t_PGD) == (pytest.approx(1 / (2 * np.pi), rel=1e-7), pytest.approx(1))


def test_spectrum_intensity_is_the_area_under_the_pseudo_velocity() -> None:
    periods = np.linspace(0.1, 2.5, 1201)
    spectrum = response_spectrum(NOISE[0], 0.01, periods, 0.2)
    area = trapezoid(spectrum.pseudo_velocity, periods)
    assert spectrum_intensity(motion(NOISE[0]), 0.2) == pytest.approx(area, rel=1e-3)
    assert spectrum_intensity(motion(2 * NOISE[0]), 0.2) == pytest.approx(
        2 * spectrum_intensity(motion(NOISE[0]), 0.2), rel=1e-9
    )


def test_polarised_motion() -> None:
    # linearly polarised at 45 degrees: RotD100 1, RotD50 .7071, geometric mean of the components .7071 (constructed)
    t = np.arange(0, 3, 0.01)
    wave = np.sin(2 * np.pi * t)
    one = motion(wave * np.sqrt(0.5))
    assert rotated_peak(one, one, 100) == pytest.approx(1.0, rel=1e-9)
    assert rotated_peak(one, one, 50) == pytest.approx(np.sqrt(0.5), rel=1e-9)
    along, across = response_spectrum(np.stack([wave, wave * np.sqrt(0.5)]), 0.01, [0.3, 1.0], 0.05).pseudo_acceleration
    assert rotated_spectrum(one, one, 100, [0.3, 1.0], 0.05) == pytest.approx(along, rel=1e-9)
    assert rotated_spectrum(one, one, 50, [0.3, 1.0], 0.05) == pytest.approx(across, rel=1e-9)


def test_circular_motion_is_the_same_in_every_direction() -> None:
    t = np.arange(0, 4, 0.001)
    pair = motion(np.cos(2 * np.pi * t), 0.001), motion(np.sin(2 * np.pi * t), 0.001)
    for percentile in (0, 50, 100):
        assert rotated_peak(*pair, percentile) == pytest.approx(1, abs=1e-5)


def test_turned_spectrum_is_that_of_each_turned_record() -> None:
    pair = motion(NOISE[0]), motion(NOISE[1])
    periods = [0.1, 0.5, 2.0]
    turned = [NOISE[0] * np.cos(a) + NOISE[1] * np.sin(a) for a in np.deg2rad(np.arange(180))]
    alone = np.stack([response_spectrum(record, 0.01, periods, 0.05).pseudo_acceleration for record in turned])
    assert rotated_spectrum(*pair, 100, periods, 0.05) == pytest.approx(alone.max(axis=0), rel=1e-9)
    assert rotated_spectrum(*pair, 50, periods, 0.05) == pytest.approx(np.median(alone, axis=0), rel=1e-9)
    components = alone[[0, 90]]
    assert (alone.max(axis=0) >= components.max(axis=0)).all()
    assert (alone.max(axis=0) < np.sqrt((components**2).sum(axis=0))).all()  # not their square sum


def test_what_cannot_be_measured() -> None:
    with pytest.raises(InputError, match="motion: needed samples other than zero"):
        significant_duration(motion(np.zeros(5)))
    with pytest.raises(InputError, match=r"high: needed a share above low; given 0\.05, with low 0\.95"):
        significant_duration(motion(NOISE[0]), 0.95, 0.05)
    with pytest.raises(InputError, match=r"(?s)percentile.*second: needed 400 samples at 0\.01 s"):
        rotated_peak(motion(NOISE[0]), motion(NOISE[1][:-1]), 101)
