"""Histories and spectra against general-purpose references: scipy's lsim, lfilter, expm and solve_ivp."""

from __future__ import annotations

import io

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp
from scipy.linalg import expm
from scipy.signal import lfilter, lsim

from calckit.dynamics import oscillator_response, progress, recurrence, response_spectrum
from calckit.dynamics.spectrum import band_limited, straight
from calckit.errors import InputError

RECORD = np.random.default_rng(1940).normal(size=1200).cumsum() * np.hanning(1200)
DT = 0.01


@pytest.mark.parametrize("omega", [0.2, 2.0, 30.0, 49.9, 50.1, 200.0, 2000.0])
@pytest.mark.parametrize("damping", [0.0, 0.02, 0.5, 0.99])
def test_recurrence_against_a_matrix_exponential(omega: float, damping: float) -> None:
    # first-order hold: the state is joined by p and by its slope (scipy.linalg.expm)
    whole = np.zeros((4, 4))
    whole[0, 1], whole[1, 0], whole[1, 1], whole[1, 2], whole[2, 3] = 1, -(omega**2), -2 * damping * omega, 1, 1
    scale = np.diag([omega**2, omega, 1, DT])  # a well-scaled matrix keeps the reference itself exact
    step = np.linalg.inv(scale) @ expm(scale @ whole @ np.linalg.inv(scale) * DT) @ scale
    transition, start, end = recurrence(omega, damping, DT)
    later = step[:2, 3] / DT
    for ours, theirs in ((transition, step[:2, :2]), (start, step[:2, 2] - later), (end, later)):
        size = np.array([1, omega])
        ours, theirs = (np.asarray(part) / (size[:, None] if part.ndim == 2 else size) for part in (ours, theirs))
        assert np.abs(ours - theirs).max() <= 1e-12 * max(1.0, np.abs(theirs).max())


@pytest.mark.parametrize(("period", "damping"), [(0.05, 0.02), (0.3, 0.05), (1.7, 0.0), (6.0, 0.3)])
def test_history_against_lsim(period: float, damping: float) -> None:
    found = oscillator_response(RECORD, DT, period, damping, ring_down=0)
    w = 2 * np.pi / period
    system = ([[0, 1], [-(w**2), -2 * damping * w]], [[0], [-1]], np.eye(2), np.zeros((2, 1)))
    _, states, _ = lsim(system, RECORD, found.time, interp=True)
    for ours, theirs in ((found.displacement, states[:, 0]), (found.velocity, states[:, 1])):
        assert np.abs(ours - theirs).max() <= 1e-9 * np.abs(theirs).max()
    total = -2 * damping * w * states[:, 1] - w**2 * states[:, 0]
    assert np.abs(found.total_acceleration - total).max() <= 1e-9 * np.abs(total).max()


def test_history_against_solve_ivp() -> None:
    record, period, damping = RECORD[:300], 0.4, 0.05
    w = 2 * np.pi / period
    times = np.arange(300) * DT

    def slope(t: float, y: np.ndarray) -> list[float]:
        return [y[1], -np.interp(t, times, record) - 2 * damping * w * y[1] - w**2 * y[0]]

    theirs = solve_ivp(slope, (0, times[-1]), [0, 0], t_eval=times, rtol=1e-10, atol=1e-13, max_step=DT).y[0]
    ours = oscillator_response(record, DT, period, damping, ring_down=0).displacement
    assert np.abs(ours - theirs).max() <= 1e-7 * np.abs(theirs).max()


def filtered(record: np.ndarray, dt: float, period: float, damping: float) -> tuple[float, float]:
    """Largest displacement and total acceleration by scipy.signal.lfilter from the same recurrence."""
    transition, start, end = recurrence(2 * np.pi / period, damping, dt)
    trace, size = np.trace(transition), np.linalg.det(transition)
    cross = transition[..., 0, 1] * np.array([start[1], end[1]]) - transition[..., 1, 1] * np.array([start[0], end[0]])
    across = transition[..., 1, 0] * np.array([start[0], end[0]]) - transition[..., 0, 0] * np.array([start[1], end[1]])
    u = lfilter([end[0], start[0] + cross[1], cross[0]], [1, -trace, size], -record)
    v = lfilter([end[1], start[1] + across[1], across[0]], [1, -trace, size], -record)
    w = 2 * np.pi / period
    # lfilter takes the sample before the first as 0, so the record starts with one
    return np.abs(u).max(), np.abs(2 * damping * w * v + w**2 * u).max()


def test_spectrum_against_lfilter() -> None:
    record = np.concatenate([[0.0], RECORD])
    periods = np.array([0.25, 0.5, 1.0, 2.0, 5.0])
    found = response_spectrum(record, DT, periods, [0.02, 0.1], refine="straight-line")
    for i, damping in enumerate((0.02, 0.1)):
        for j, period in enumerate(periods):
            count = 2 ** int(np.ceil(np.log2(max(50 * DT / period, 1))))
            finer = np.pad(straight(record[None], count)[0], (0, int(np.ceil(period / 2 * count / DT))))
            displacement, total = filtered(finer, DT / count, period, damping)
            assert found.displacement[i, j] == pytest.approx(displacement, rel=1e-9)
            assert found.total_acceleration[i, j] == pytest.approx(total, rel=1e-9)


def test_stack_is_each_record_alone() -> None:
    stack = np.stack([RECORD, RECORD[::-1], 2 * RECORD])
    periods = [0.05, 0.3, 2.0]
    together = response_spectrum(stack, DT, periods, 0.05)
    for record, row in zip(stack, together.displacement, strict=True):
        alone = response_spectrum(record, DT, periods, 0.05)
        assert row == pytest.approx(alone.displacement, rel=1e-10)
    assert together.displacement[2] == pytest.approx(2 * together.displacement[0], rel=1e-12)
    assert together.pseudo_acceleration.shape == (3, 3)


def test_work_done_in_parts_is_the_same(monkeypatch: pytest.MonkeyPatch) -> None:
    stack, periods = np.stack([RECORD, RECORD[::-1], 2 * RECORD]), np.geomspace(0.02, 3, 23)
    whole = response_spectrum(stack, DT, periods, [0.02, 0.1])
    monkeypatch.setattr("calckit.dynamics.spectrum._SAMPLES", 5_000)
    monkeypatch.setattr("calckit.dynamics.spectrum._STATES", 20_000)
    monkeypatch.setattr("calckit.dynamics.blocks._COLUMNS", 40)
    parts = response_spectrum(stack, DT, periods, [0.02, 0.1])
    assert parts.displacement == pytest.approx(whole.displacement, rel=1e-10)
    assert parts.total_acceleration == pytest.approx(whole.total_acceleration, rel=1e-10)


def test_pseudo_and_total_are_told_apart() -> None:
    # at high damping the total acceleration is well above the pseudo-acceleration
    found = response_spectrum(RECORD, DT, [0.5], 0.5)
    assert found.total_acceleration[0] > 1.05 * found.pseudo_acceleration[0]
    free = response_spectrum(RECORD, DT, [0.5], 0.0)
    assert free.total_acceleration[0] == pytest.approx(free.pseudo_acceleration[0], rel=1e-12)


def test_short_and_long_periods_tend_to_ground_acceleration_and_displacement() -> None:
    t = np.arange(0, 4, DT)
    record = np.sin(2 * np.pi * t) * np.hanning(len(t))
    found = response_spectrum(record, DT, [0.01, 1000.0], 0.05)
    assert found.total_acceleration[0] == pytest.approx(np.abs(record).max(), rel=2e-3)
    velocity = np.concatenate([[0], np.cumsum((record[1:] + record[:-1]) / 2) * DT])
    ground = np.concatenate([[0], np.cumsum((velocity[1:] + velocity[:-1]) / 2) * DT])
    assert found.displacement[1] == pytest.approx(np.abs(ground).max(), rel=2e-2)


def test_band_limited_curve_through_the_samples_of_a_known_wave() -> None:
    t = np.arange(0, 2, 0.02)
    envelope = np.hanning(len(t)) ** 2
    finer_t = np.arange((len(t) - 1) * 4 + 1) * 0.005
    wave = np.sin(2 * np.pi * 12 * t) * envelope
    exact = np.sin(2 * np.pi * 12 * finer_t) * np.interp(finer_t, t, envelope)
    found = band_limited(wave[None], 4)[0]
    assert found[::4] == pytest.approx(wave, abs=1e-12)
    assert np.abs(found - exact).max() < 0.02 < np.abs(straight(wave[None], 4)[0] - exact).max()


def test_short_periods_against_a_finer_record() -> None:
    # five samples to a period; each record holds nothing above 0.4 of the coarse sampling rate and is known 32 times
    # finer
    random, samples, parts = np.random.default_rng(8), 512, 32
    lines = np.fft.rfft(random.normal(size=(30, samples)) * np.hanning(samples) ** 2, axis=1)
    lines[:, int(0.4 * samples) :] = 0
    fine = np.fft.irfft(lines, samples * parts, axis=1) * parts
    exact = response_spectrum(fine, DT / parts, [5 * DT], 0.05).pseudo_acceleration
    errors = {
        refine: (response_spectrum(fine[:, ::parts], DT, [5 * DT], 0.05, refine=refine).pseudo_acceleration / exact - 1)
        for refine in ("band-limited", "straight-line")
    }
    assert abs(errors["band-limited"].mean()) < 0.01
    assert errors["straight-line"].mean() < -0.05  # the straight line loses part of the shortest waves


def test_peak_after_the_end_of_the_record_is_found() -> None:
    # a record cut while shaking: the largest displacement comes after its end
    found = response_spectrum(np.ones(11), 0.01, [1.0], 0.0, refine="straight-line")
    w = 2 * np.pi
    assert found.displacement[0] == pytest.approx(2 * np.sin(w * 0.105 / 2) / w**2, rel=5e-3)


@settings(max_examples=25, deadline=None)
@given(st.integers(2, 200), st.floats(0.02, 5), st.floats(0, 0.9), st.integers(0, 10**6))
def test_history_of_any_length(samples: int, period: float, damping: float, seed: int) -> None:
    record = np.random.default_rng(seed).normal(size=samples)
    found = oscillator_response(record, DT, period, damping, ring_down=0)
    transition, start, end = recurrence(2 * np.pi / period, damping, DT)
    state = np.zeros(2)
    for i in range(samples - 1):
        state = transition @ state - start * record[i] - end * record[i + 1]
    assert [found.displacement[-1], found.velocity[-1]] == pytest.approx(state, rel=1e-9, abs=1e-12)


def test_every_bad_argument_is_named() -> None:
    with pytest.raises(InputError, match=r"(?s)acceleration.*dt.*periods.*damping.*refine") as caught:
        response_spectrum([1.0, float("nan")], 0.0, [1.0, -1.0], 1.0, refine="cubic")
    assert len(caught.value.faults) == 5
    with pytest.raises(InputError, match="acceleration: needed an array of 1 or 2 dimensions"):
        oscillator_response(1.0, 0.01, 1.0, 0.05)


class Terminal(io.StringIO):
    """An error stream that is a terminal."""

    def isatty(self) -> bool:
        return True


CASES = [(Terminal, 0.0, True), (Terminal, 60.0, False), (io.StringIO, 0.0, False)]


@pytest.mark.parametrize(("stream", "patience", "shown"), CASES)
def test_bar_on_a_terminal_past_two_seconds(
    monkeypatch: pytest.MonkeyPatch, stream: type[io.StringIO], patience: float, shown: bool
) -> None:
    said = stream()
    monkeypatch.setattr("sys.stderr", said)
    monkeypatch.setattr(progress, "PATIENCE", patience)
    response_spectrum(np.stack([RECORD, RECORD]), DT, [0.05, 1.0, 2.0], 0.05)
    assert ("response spectra [" in said.getvalue()) == shown
    assert not shown or said.getvalue().endswith("\r")
