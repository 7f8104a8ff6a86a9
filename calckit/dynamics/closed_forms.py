"""Closed forms of the response of one oscillator to simple loads.

Knows formulas only; ratios throughout, so no units. (J. M. Biggs, Introduction to Structural Dynamics, chapter 2; A. K.
Chopra, Dynamics of Structures, chapters 2 to 4.)
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array


def _damping(where: str, damping: ArrayLike, least: float = 0.0) -> Array:
    read = Arguments(where)
    zeta = read.positive("damping", damping) if least else read.between("damping", damping, 0, 1)
    if least and (zeta >= 1).any():
        read.fault("damping", "ratios below 1", f"{zeta.max():g}")
    read.settle()
    return zeta


def _ratio(where: str, name: str, values: ArrayLike) -> Array:
    read = Arguments(where)
    found = read.positive(name, values)
    read.settle()
    return found


def amplification(frequency_ratio: ArrayLike, damping: ArrayLike) -> tuple[Array, Array, Array]:
    """Steady response to a harmonic load: deformation over the static one, phase lag in rad, transmissibility.

    Arguments: `frequency_ratio`, forcing over natural frequency, above 0; `damping`, a ratio from 0 to below 1. Returns
    three arrays; at resonance without damping the first and the third are infinite. Raises InputError.

    >>> [round(float(part), 4) for part in amplification(2.0, 0.05)]
    [0.3326, 3.075, 0.3392]
    """
    zeta, beta = _damping("amplification", damping), _ratio("amplification", "frequency_ratio", frequency_ratio)
    drag = 2 * zeta * beta
    with np.errstate(divide="ignore"):
        deformation = 1 / np.hypot(1 - beta**2, drag)
    return deformation, np.arctan2(drag, 1 - beta**2), np.hypot(1, drag) * deformation


def resonance_peak(damping: ArrayLike) -> tuple[Array, Array]:
    """The largest deformation response factor and the frequency ratio at which it occurs (damping up to 0.707).

    >>> [round(float(part), 5) for part in resonance_peak(0.05)]
    [10.01252, 0.9975]
    """
    zeta = _damping("resonance_peak", damping, least=1)
    if (zeta**2 >= 0.5).any():
        read = Arguments("resonance_peak")
        read.fault("damping", "ratios below 0.707, above which there is no peak", f"{zeta.max():g}")
        read.settle()
    return 1 / (2 * zeta * np.sqrt(1 - zeta**2)), np.sqrt(1 - 2 * zeta**2)


def resonance_build_up(cycles: ArrayLike, damping: ArrayLike) -> Array:
    """The envelope of the deformation response factor after `cycles` of a load at resonance, from rest.

    >>> resonance_build_up([5, 10], 0.05).round(4).tolist()
    [7.9212, 9.5679]
    """
    zeta, j = _damping("resonance_build_up", damping, least=1), _ratio("resonance_build_up", "cycles", cycles)
    return np.asarray(-np.expm1(-2 * np.pi * zeta * j) / (2 * zeta))


def step_peak(damping: ArrayLike) -> Array:
    """The largest response to a load applied at once and kept, over the static one.

    >>> step_peak([0.0, 0.05]).round(6).tolist()
    [2.0, 1.854468]
    """
    zeta = _damping("step_peak", damping)
    return np.asarray(1 + np.exp(-np.pi * zeta / np.sqrt(1 - zeta**2)))


def ramp(rise: ArrayLike) -> Array:
    """The largest response without damping to a load that rises in `rise` periods and is kept.

    >>> ramp([0.5, 1.0]).round(4).tolist()
    [1.6366, 1.0]
    """
    return np.asarray(1 + np.abs(np.sinc(_ratio("ramp", "rise", rise))))


def rectangular_pulse(duration: ArrayLike) -> Array:
    """The largest response without damping to a rectangular pulse of `duration` periods.

    >>> rectangular_pulse([0.25, 0.75]).round(4).tolist()
    [1.4142, 2.0]
    """
    x = _ratio("rectangular_pulse", "duration", duration)
    return np.asarray(np.where(x < 0.5, 2 * np.sin(np.pi * np.minimum(x, 0.5)), 2.0))


def half_sine_pulse(duration: ArrayLike) -> Array:
    """The largest response without damping to half a sine wave of `duration` periods.

    >>> half_sine_pulse([0.25, 0.5, 1.0]).round(4).tolist()
    [0.9428, 1.5708, 1.7321]
    """
    x = np.atleast_1d(_ratio("half_sine_pulse", "duration", duration))
    found = np.full(x.shape, np.pi / 2)
    away = np.abs(x - 0.5) > 1e-7  # at one half both forms are 0/0 with the limit pi/2
    r = 1 / (2 * x[away])
    after = np.abs(2 * r * np.cos(np.pi * x[away]) / (r**2 - 1))
    peaks = [
        np.where(2 * q <= 1 + 2 * x[away], np.sin(2 * np.pi * q / (1 + 2 * x[away])) / (1 - r), -np.inf)
        for q in range(1, int(x.max()) + 2)
    ]
    during = np.where(x[away] > 0.5, np.max(peaks, axis=0), -np.inf)
    found[away] = np.maximum(after, during)
    return found if np.ndim(duration) else found[0]


def symmetric_triangular_pulse(duration: ArrayLike) -> Array:
    """The largest response without damping to a pulse that rises and falls in straight lines over `duration` periods.

    The pulse is three ramps one after the other, so the response is the sum of theirs.

    >>> symmetric_triangular_pulse([0.5, 1.0]).round(3).tolist()
    [1.273, 1.508]
    """
    x = np.atleast_1d(_ratio("symmetric_triangular_pulse", "duration", duration))
    after = np.abs(4 * np.sin(np.pi * x / 2) ** 2 / (np.pi * x))

    def risen(t: Array) -> Array:
        return np.where(t > 0, t - np.sin(2 * np.pi * t) / (2 * np.pi), 0)

    # the slope of the response is zero where cos(2 pi t) - 2 cos(2 pi (t - x/2)) + 1 = 0 in the second half
    found = []
    for one in x:
        t = np.concatenate([_stationary(one), [one]])
        found.append(np.abs(2 / one * (risen(t) - 2 * risen(t - one / 2))).max())
    result = np.maximum(after, found)
    return result if np.ndim(duration) else result[0]


def _stationary(x: float) -> Array:
    """Times from 0 to x, in periods, at which the velocity under the triangular pulse is zero."""
    # second half: (1 - 2 cos(pi x)) cos(a) - 2 sin(pi x) sin(a) + 1 = 0 with a = 2 pi t
    p, q = 1 - 2 * np.cos(np.pi * x), -2 * np.sin(np.pi * x)
    size, turn = np.hypot(p, q), np.arctan2(q, p)
    if size < 1:
        return np.array([x / 2])
    angles = turn + np.arccos(-1 / size) * np.array([[1.0], [-1.0]])
    times = (angles + 2 * np.pi * np.arange(int(x) + 3)).ravel() / (2 * np.pi)
    return np.append(times[(times >= x / 2) & (times <= x)], x / 2)


def cycles_to_decay(ratio: ArrayLike, damping: ArrayLike) -> Array:
    """The cycles of free vibration after which the amplitude is 1/`ratio` of what it was.

    >>> round(float(cycles_to_decay(10.0, 0.02757)), 2)
    13.29
    """
    zeta, times = _damping("cycles_to_decay", damping, least=1), _above_one("cycles_to_decay", ratio)
    return np.asarray(np.log(times) * np.sqrt(1 - zeta**2) / (2 * np.pi * zeta))


def cycles_to_halve(damping: ArrayLike) -> Array:
    """The cycles of free vibration after which the amplitude is half of what it was.

    >>> cycles_to_halve([0.01, 0.05]).round(3).tolist()
    [11.031, 2.204]
    """
    return cycles_to_decay(2.0, damping)


def damping_from_decay(ratio: ArrayLike, cycles: ArrayLike) -> Array:
    """The damping ratio of free vibration whose amplitude falls to 1/`ratio` in `cycles`, exact for any damping.

    >>> round(float(damping_from_decay(2.0, 4)), 5)
    0.02757
    """
    times, j = _above_one("damping_from_decay", ratio), _ratio("damping_from_decay", "cycles", cycles)
    decrement = np.log(times) / j
    return np.asarray(decrement / np.hypot(2 * np.pi, decrement))


def _above_one(where: str, ratio: ArrayLike) -> Array:
    read = Arguments(where)
    found = read.numbers("ratio", ratio)
    if (found <= 1).any():
        read.fault("ratio", "numbers above 1, the amplitude before over the one after", f"{found.min():g}")
    read.settle()
    return found
