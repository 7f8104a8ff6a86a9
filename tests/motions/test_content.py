"""Fourier amplitudes against closed forms."""

from __future__ import annotations

import numpy as np
import pytest

from calckit.errors import InputError
from calckit.motions import Motion, frequency_content


def motion(acceleration: np.ndarray, dt: float = 0.01) -> Motion:
    return Motion("demo", acceleration, dt, kind="synthetic")


def test_ricker_wavelet_in_closed_form() -> None:
    # (1 - 2 pi^2 f^2 t^2) exp(-pi^2 f^2 t^2) has the amplitude 2 nu^2/(sqrt(pi) f^3) exp(-nu^2/f^2), largest at nu = f
    f, t = 2.0, np.arange(-5, 15, 0.01)
    found = frequency_content(motion((1 - 2 * (np.pi * f * t) ** 2) * np.exp(-((np.pi * f * t) ** 2))))
    nu = found.frequencies
    assert found.amplitudes == pytest.approx(2 * nu**2 / (np.sqrt(np.pi) * f**3) * np.exp(-((nu / f) ** 2)), abs=1e-9)
    assert found.dominant_period == pytest.approx(0.5, rel=1e-12)
    assert found.periods == pytest.approx(1 / nu, rel=1e-15)


def test_two_waves_of_whole_cycles() -> None:
    # amplitudes 1 at 2 Hz and 2 at 5 Hz over 20 s: C = 10 and 20 m/s; T_m = (1/2 + 4/5)/(1 + 4)
    t = np.arange(2000) * 0.01
    wave = motion(np.sin(2 * np.pi * 2 * t) + 2 * np.cos(2 * np.pi * 5 * t))
    found = frequency_content(wave)
    places = np.isclose(found.frequencies[:, None], [2.0, 5.0]).any(axis=1)
    assert found.amplitudes[places] == pytest.approx([10, 20], rel=1e-9)
    assert found.mean_period == pytest.approx(0.26, rel=1e-9)
    assert found.dominant_period == pytest.approx(0.2, rel=1e-12)
    low = frequency_content(wave, band=(0.5, 3.0))
    assert (low.mean_period, low.dominant_period) == (pytest.approx(0.5, rel=1e-9), pytest.approx(0.5, rel=1e-12))


def test_energy_is_kept() -> None:
    # Parseval: the integral of a^2 is twice the integral of the squared amplitude over positive frequencies
    noise = np.random.default_rng(3).normal(size=4001)
    noise -= noise.mean()
    found = frequency_content(motion(noise))
    assert 2 * (found.amplitudes**2).sum() * found.frequencies[0] == pytest.approx((noise**2).sum() * 0.01, rel=1e-9)


def test_short_motions_get_lines_close_enough() -> None:
    found = frequency_content(motion(np.array([0.0, 1.0, 0.0])))
    assert found.frequencies[0] == pytest.approx(0.05, rel=1e-12)


def test_band_stops_at_half_the_sampling_rate() -> None:
    assert frequency_content(motion(np.array([0.0, 1.0, 0.0]), dt=0.1)).band == (0.25, 5.0)


@pytest.mark.parametrize("band", [(3.0, 1.0), (60.0, 70.0), (1.0, 2.0, 3.0)])
def test_bands_that_are_none(band: tuple[float, ...]) -> None:
    with pytest.raises(InputError, match="band: needed a lower and a higher frequency in Hz"):
        frequency_content(motion(np.ones(10)), band)  # type: ignore[arg-type]


def test_nothing_to_find() -> None:
    with pytest.raises(InputError, match="band: needed a band that holds a line"):
        frequency_content(motion(np.ones(10)), (1.01, 1.02))
    with pytest.raises(InputError, match="motion: needed samples other than zero"):
        frequency_content(motion(np.zeros(10)))
