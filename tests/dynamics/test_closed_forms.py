"""Closed forms against the exact recurrence on fine steps, and the step-by-step methods against their theory."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from calckit import dynamics
from calckit.errors import InputError


def peak(load: np.ndarray, dt: float, damping: float = 0.0) -> float:
    """The largest response of an oscillator of period 1 s, over the static one of a unit load."""
    found = dynamics.oscillator_response(load, dt, 1.0, damping, ring_down=2.0)
    return float(np.abs(found.displacement).max() * (2 * np.pi) ** 2)


PULSES: dict[str, tuple[Callable[[float], float], Callable[[np.ndarray], np.ndarray]]] = {
    "half sine": (dynamics.half_sine_pulse, lambda x: np.sin(np.pi * x)),
    "triangle": (dynamics.symmetric_triangular_pulse, lambda x: 1 - np.abs(2 * x - 1)),
}


@pytest.mark.parametrize("shape", PULSES)
@pytest.mark.parametrize("duration", [0.1, 0.3, 0.5, 0.75, 0.81, 1.0, 1.5, 2.0, 2.6, 3.4])
def test_pulses_against_integration(shape: str, duration: float) -> None:
    closed, load = PULSES[shape]
    samples = 4000
    found = peak(load(np.linspace(0, 1, samples + 1)), duration / samples)
    assert float(closed(duration)) == pytest.approx(found, abs=2e-5)


@pytest.mark.parametrize("rise", [0.2, 0.5, 1.0, 1.5])
def test_ramp_against_integration(rise: float) -> None:
    dt = rise / 2000
    t = np.arange(0, rise + 2, dt)
    assert float(dynamics.ramp(rise)) == pytest.approx(peak(np.minimum(t / rise, 1), dt), abs=2e-5)


@pytest.mark.parametrize("damping", [0.02, 0.2])
def test_step_and_build_up_against_integration(damping: float) -> None:
    dt = 0.0005
    assert float(dynamics.step_peak(damping)) == pytest.approx(peak(np.ones(3000), dt, damping), abs=2e-5)
    t = np.arange(0, 5, dt)
    before, after = dynamics.resonance_build_up([4.5, 5.0], damping)
    assert before < peak(np.cos(2 * np.pi * t), dt, damping) < after


def test_peak_of_the_amplification_is_where_it_is_said() -> None:
    for damping in (0.05, 0.3):
        largest, ratio = dynamics.resonance_peak(damping)
        assert dynamics.amplification(ratio, damping)[0] == pytest.approx(largest, rel=1e-12)
        near = dynamics.amplification(ratio * np.array([0.999, 1.001]), damping)[0]
        assert (near < largest).all()


def test_peak_of_the_half_sine_pulse() -> None:
    # largest 1.768458 at 0.80994 (constructed from the closed form)
    durations = np.linspace(0.8, 0.82, 20001)
    found = dynamics.half_sine_pulse(durations)
    assert found.max() == pytest.approx(1.768458, abs=2e-6)
    assert durations[found.argmax()] == pytest.approx(0.80994, abs=1e-4)


def test_last_printed_step_is_stable_and_the_next_refused() -> None:
    m, k = 1.0, (2 * np.pi) ** 2
    for method in ("linear acceleration", "central difference"):
        limit = dynamics.stability_limit(method)
        load = np.r_[1.0, np.zeros(2000)]
        u, _, _ = dynamics.step_by_step(load, 0.99 * limit, m, 0.0, k, method)
        assert np.abs(u).max() < 10
        with pytest.raises(InputError, match=f"where {method} is stable"):
            dynamics.step_by_step(load, 1.01 * limit, m, 0.0, k, method)


@pytest.mark.parametrize("method", ["average acceleration", "linear acceleration", "central difference"])
def test_period_ratio_is_that_of_the_method(method: str) -> None:
    dt = 0.05
    load = np.r_[1.0, np.zeros(4000)]
    u, _, _ = dynamics.step_by_step(load, dt, 1.0, 0.0, (2 * np.pi) ** 2, method)
    crossings = np.flatnonzero((u[10:-1] < 0) & (u[11:] >= 0)) + 10
    exact = crossings + u[crossings] / (u[crossings] - u[crossings + 1])
    period = np.diff(exact).mean() * dt
    assert float(dynamics.period_ratio(dt, method)) == pytest.approx(period, rel=2e-5)


def test_out_of_range_is_refused() -> None:
    with pytest.raises(InputError, match="damping: needed numbers from 0 to below 1; given 1"):
        dynamics.step_peak(1.0)
    with pytest.raises(InputError, match=r"below 0\.707"):
        dynamics.resonance_peak(0.8)
    with pytest.raises(InputError, match="duration: needed numbers above 0"):
        dynamics.half_sine_pulse([0.5, 0.0])
