"""Measures of how strong and how long a motion is.

Knows peaks, energy, duration and peaks of two components turned together. Must not know how a spectrum is worked.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics import response_spectrum
from calckit.dynamics.arguments import Arguments, Array
from calckit.motions.motion import Motion, integrals

STANDARD_GRAVITY = 9.80665
"""In m/s2."""
_ANGLES = np.deg2rad(np.arange(180))
_INTENSITY = np.linspace(0.1, 2.5, 241)
_TOGETHER = 15  # angles worked at once, which bounds the memory


@dataclass(frozen=True)
class Peaks:
    """Largest absolute values and the times in s of their samples: `PGA` in m/s2, `PGV` in m/s, `PGD` in m.

    >>> found = peaks(Motion("sketch", [0.0, -2.0, 0.0], 0.5, kind="simulated"))
    >>> found.PGA, found.t_PGA
    (2.0, 0.5)
    """

    PGA: float
    t_PGA: float
    PGV: float
    t_PGV: float
    PGD: float
    t_PGD: float


def peaks(motion: Motion) -> Peaks:
    """Peak ground acceleration, velocity and displacement at the samples; velocity and displacement from rest.

    A motion that does not start from rest, or whose zero line is off, drifts: correct it first and say so.

    >>> peaks(Motion("sketch", [0.0, 2.0, -1.0, 0.0], 0.5, kind="simulated"))
    Peaks(PGA=2.0, t_PGA=0.5, PGV=0.75, t_PGV=1.0, PGD=0.75, t_PGD=1.5)
    """
    found: list[float] = []
    for history in (motion.acceleration, *integrals(motion)):
        place = int(np.abs(history).argmax())
        found += [float(abs(history[place])), place * motion.dt]
    return Peaks(*found)


def cumulative_energy(motion: Motion) -> Array:
    """The share of the integral of a^2 reached at each sample (n,), from 0 to 1 (R. Husid's plot).

    >>> cumulative_energy(Motion("sketch", [0.0, 1.0, 1.0, 0.0], 0.5, kind="simulated")).tolist()
    [0.0, 0.25, 0.75, 1.0]
    """
    reached = _squares(motion)
    if not reached[-1]:
        read = Arguments("cumulative_energy")
        read.fault("motion", "samples other than zero", "zeros alone")
        read.settle()
    return reached / reached[-1]


def arias_intensity(motion: Motion) -> float:
    """Arias intensity pi/(2 g) times the integral of a^2 over the whole motion, in m/s (A. Arias, 1970).

    The integral is the trapezoidal rule on a^2: a straight line drawn through a would lose part of the shortest waves.

    >>> hum = Motion("hum", np.sin(4*np.pi*np.arange(0, 10.005, 0.01)), 0.01, kind="synthetic")
    >>> round(arias_intensity(hum), 6)
    0.800883
    """
    return float(np.pi / (2 * STANDARD_GRAVITY) * _squares(motion)[-1])


def _squares(motion: Motion) -> Array:
    squares = motion.acceleration**2
    return np.concatenate([[0.0], np.cumsum(squares[:-1] + squares[1:]) * (motion.dt / 2)])


def significant_duration(motion: Motion, low: float = 0.05, high: float = 0.95) -> tuple[float, float]:
    """The times in s at which two shares of the energy are reached; D5-95 is their difference, D5-75 with `high` 0.75.

    (M. D. Trifunac and A. G. Brady, Bulletin of the Seismological Society of America 65, 1975.) Raises InputError.

    >>> hum = Motion("hum", np.sin(4*np.pi*np.arange(0, 10.005, 0.01)), 0.01, kind="synthetic")
    >>> [round(time, 9) for time in significant_duration(hum)]
    [0.5, 9.5]
    """
    read = Arguments("significant_duration")
    for name, share in (("low", low), ("high", high)):
        read.between(name, share, 0, 1, (0,))
    if low >= high:
        read.fault("high", "a share above low", f"{high:g}, with low {low:g}")
    read.settle()
    reached = cumulative_energy(motion)
    start, end = (float(_reached(reached, share, motion.dt)) for share in (low, high))
    return start, end


def _reached(reached: Array, share: float, dt: float) -> float:
    after = int(np.searchsorted(reached, share, side="right"))
    before = reached[after - 1]
    return (after - 1 + (share - before) / (reached[after] - before)) * dt


def cumulative_absolute_velocity(motion: Motion) -> float:
    """The integral of the absolute acceleration, in m/s, exact for straight lines between the samples.

    >>> cumulative_absolute_velocity(Motion("sketch", [1.0, -1.0], 1.0, kind="simulated"))
    0.5
    """
    a, b = motion.acceleration[:-1], motion.acceleration[1:]
    sizes = np.abs(a) + np.abs(b)
    crossed = (a**2 + b**2) / np.where(sizes == 0, 1, sizes)
    return float(np.where(a * b < 0, crossed, sizes).sum() * motion.dt / 2)


def spectrum_intensity(motion: Motion, damping: float) -> float:
    """The integral of the pseudo-velocity spectrum over periods from 0.1 to 2.5 s, in m (G. W. Housner).

    Arguments: `damping`, a ratio, which must be said with the result. Trapezoidal rule on periods 0.01 s apart. Raises
    InputError.

    >>> pulse = Motion("pulse", [0.0, 1.0, 0.0], 0.01, kind="simulated")
    >>> round(spectrum_intensity(pulse, 0.0), 3)  # an impulse: 0.01 m/s at every period
    0.024
    """
    found = response_spectrum(motion.acceleration, motion.dt, _INTENSITY, float(damping)).pseudo_velocity
    return float(((found[:-1] + found[1:]) * np.diff(_INTENSITY)).sum() / 2)


def rotated_peak(first: Motion, second: Motion, percentile: float) -> float:
    """RotDnn of the peak ground acceleration of two horizontal components at right angles, in m/s2.

    Arguments: `percentile` nn over the angles, 50 for the median, 100 for the largest. The components are turned
    together through 0 to 179 degrees, one by one. Raises InputError.

    >>> t = np.arange(0, 2, 0.01)
    >>> along = Motion("along", np.sin(2*np.pi*t), 0.01, kind="synthetic")
    >>> across = Motion("across", 0*t, 0.01, kind="synthetic")
    >>> round(rotated_peak(along, across, 50), 4), rotated_peak(along, across, 100)
    (0.7071, 1.0)
    """
    pair = _pair("rotated_peak", first, second, percentile)
    found = [np.abs(turned).max(axis=1) for turned in _turned(pair)]
    return float(np.percentile(np.concatenate(found), percentile))


def rotated_spectrum(
    first: Motion, second: Motion, percentile: float, periods: ArrayLike, damping: float
) -> Array:
    """RotDnn of the pseudo-acceleration of two horizontal components at right angles, (periods,) in m/s2.

    Arguments: as of rotated_peak; `periods` (periods,) in s; `damping`, one ratio. The percentile is taken period by
    period, so that the result is no spectrum of one direction. (D. M. Boore, Bulletin of the Seismological Society of
    America 100, 2010.) Raises InputError.

    >>> t = np.arange(0, 4, 0.02)
    >>> along, across = (Motion("demo", wave, 0.02, kind="synthetic") for wave in (np.sin(t), 0*t))
    >>> rotated = rotated_spectrum(along, across, 50, [0.5, 1.0], 0.05)
    >>> (rotated / response_spectrum(along.acceleration, 0.02, [0.5, 1.0], 0.05).pseudo_acceleration).round(4).tolist()
    [0.7071, 0.7071]
    """
    pair = _pair("rotated_spectrum", first, second, percentile)
    # the response is linear: turning the motion turns the response
    found = [
        response_spectrum(turned, first.dt, np.atleast_1d(periods), float(damping)).pseudo_acceleration
        for turned in _turned(pair)
    ]
    return np.asarray(np.percentile(np.concatenate(found), percentile, axis=0))


def _pair(where: str, first: Motion, second: Motion, percentile: float) -> Array:
    read = Arguments(where)
    if not 0 <= percentile <= 100:
        read.fault("percentile", "a number from 0 to 100", f"{percentile:g}")
    if first.acceleration.size != second.acceleration.size or first.dt != second.dt:
        given = f"{second.acceleration.size} samples at {second.dt:g} s"
        read.fault("second", f"{first.acceleration.size} samples at {first.dt:g} s, as the first component", given)
    read.settle()
    return np.stack([first.acceleration, second.acceleration])


def _turned(pair: Array) -> list[Array]:
    """The pair turned through a few angles at a time: each (angles, n)."""
    return [
        np.cos(angles)[:, None] * pair[0] + np.sin(angles)[:, None] * pair[1]
        for angles in np.split(_ANGLES, len(_ANGLES) // _TOGETHER)
    ]
