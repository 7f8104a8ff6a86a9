"""Motions from random numbers: their label, their density, their envelope and their ends."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

from calckit.errors import InputError
from calckit.motions import (
    GROUNDS,
    Ground,
    exponential_envelope,
    filtered_noise,
    frequency_content,
    ground_density,
    integrals,
    peaks,
    significant_duration,
    three_part_envelope,
)


def test_variance_of_the_first_filter() -> None:
    # two-sided: pi S_0 omega_g (1 + 4 zeta_g^2)/(2 zeta_g) = 99.651 S_0 (Kanai-Tajimi, closed form)
    firm = Ground(15.6, 0.6, 1e-3, 0.6)  # the second filter takes nothing out above 1e-3 rad/s
    parts = [quad(lambda w: float(ground_density(w, firm)), a, b, limit=200)[0] for a, b in ((0, 40), (40, np.inf))]
    assert 2 * sum(parts) == pytest.approx(99.651, abs=0.005)


def test_second_filter_takes_out_the_longest_waves() -> None:
    firm = GROUNDS["firm"]
    assert ground_density([0.0, 0.015], firm) == pytest.approx([0, 1e-8], abs=2e-9)  # (omega/omega_f)^4
    assert ground_density([1500.0], firm) == pytest.approx([4 * 0.6**2 * (15 / 1500) ** 2], rel=2e-3)


def test_exponential_envelope() -> None:
    # eps 0.2, eta 0.05: a 26.3118, b 1.25315, c 6.26575; (Saragoni and Hart; Boore; from memory, high)
    x = np.linspace(0.01, 1, 100)
    assert exponential_envelope(x) == pytest.approx(26.3118 * x**1.25315 * np.exp(-6.26575 * x), abs=2e-5)
    assert exponential_envelope([0.2, 1.0]) == pytest.approx([1, 0.05], rel=1e-12)
    assert exponential_envelope(x).max() == pytest.approx(1, rel=1e-12)


def test_three_part_envelope() -> None:
    # (t/4)^2 to 4 s, 1 to 15 s, exp(-0.0992 (t - 15)) after (Jennings, Housner and Tsai, type B; memory, medium)
    expected = [0, 0.25, 1, 1, np.exp(-0.992)]
    assert three_part_envelope([0, 2, 4, 15, 25]) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize("seed", [1, 1940])
@pytest.mark.parametrize("duration", [8.0, 25.0])
def test_label_peak_and_ends(seed: int, duration: float) -> None:
    made = filtered_noise(seed, peak=2.5, duration=duration)
    assert (made.kind, made.name) == ("synthetic", f"synthetic, seed {seed}")
    assert made.notes[0] == f"synthetic, seed {seed}, filtered noise, not a recording"
    assert made.duration == pytest.approx(duration)
    assert pytest.approx(2.5, rel=1e-12) == peaks(made).PGA
    for history in integrals(made):
        assert abs(history[-1]) < 1e-12 * np.abs(history).max()


def test_the_same_seed_gives_the_same_motion() -> None:
    again = [filtered_noise(3, peak=1.0).acceleration.tolist() for _ in range(2)]
    assert again[0] == again[1] != filtered_noise(4, peak=1.0).acceleration.tolist()


def test_strong_part_lasts_as_the_envelope_says() -> None:
    # energy of the envelope: int (t/4)^4 + 11 + ... ; its 5 and 95 % points bound the duration to a second or two
    t = np.arange(0, 25.005, 0.01)
    squares = np.cumsum(three_part_envelope(t) ** 2)
    start, end = np.interp([0.05, 0.95], squares / squares[-1], t)
    found = np.array([significant_duration(filtered_noise(seed, peak=1.0)) for seed in range(30)]).mean(axis=0)
    assert found == pytest.approx([start, end], abs=0.5)


@pytest.mark.parametrize("ground", GROUNDS)
def test_energy_lies_where_the_density_says(ground: str) -> None:
    bands = ((0.5, 1.5), (1.5, 3.0), (3.0, 6.0))
    shares = []
    for seed in range(40):
        found = frequency_content(filtered_noise(seed, peak=1.0, ground=ground))
        power = [(found.amplitudes[(found.frequencies >= a) & (found.frequencies < b)] ** 2).sum() for a, b in bands]
        shares.append(np.array(power) / sum(power))
    expected = [quad(lambda f: float(ground_density(2 * np.pi * f, GROUNDS[ground])), a, b)[0] for a, b in bands]
    assert np.mean(shares, axis=0) == pytest.approx(np.array(expected) / sum(expected), abs=0.03)


def test_bad_arguments_are_named() -> None:
    with pytest.raises(InputError, match=r"(?s)peak.*dt.*seed: needed a whole number.*ground: needed one of firm"):
        filtered_noise(-1, peak=0, dt=-1, ground="rock")
    with pytest.raises(InputError, match="duration: needed from 32 steps to 300 s; given 301 s"):
        filtered_noise(1, peak=1, duration=301)
    with pytest.raises(InputError, match="zeta_g: needed numbers above 0"):
        filtered_noise(1, peak=1, ground=Ground(15, 0, 1.5, 0.6))
    with pytest.raises(InputError, match="strong_until: needed a time not before the end of the rise"):
        three_part_envelope([1.0], rise=5, strong_until=4)
    with pytest.raises(InputError, match="end_level: needed numbers from 0 to below 1"):
        exponential_envelope([0.5], end_level=1.5)
