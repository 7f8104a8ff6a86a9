"""Response spectra of ground motions.

Knows how finely each period must be worked and which peaks make a spectrum. Must not know how an oscillator moves.

A motion is known at samples only. What lies between them is a straight line, as published tables assume, or the
band-limited curve through them. The straight line loses part of the shortest waves, always on the unsafe side, so where
a period has fewer than 20 samples the band-limited curve is the default.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array
from calckit.dynamics.blocks import Blocks, lengthened
from calckit.dynamics.progress import Progress

REFINEMENTS = ("band-limited", "straight-line")
STEPS = 50
"""Steps to a period at which a sampled peak is at most 0.2 % low: 1 - cos(pi/50)."""
COARSE = 20
"""Samples to a period below which the band-limited curve is taken, where it is asked for."""
_MOST = 64
_SAMPLES, _STATES = 4_000_000, 200_000_000  # refined samples, and states from them, worked at once: under 300 MB


@dataclass(frozen=True)
class Spectrum:
    """Peaks of oscillators: arrays (periods,), with a leading axis for records and one for dampings where several.

    `displacement` relative to the ground; `pseudo_velocity` and `pseudo_acceleration`, omega and omega^2 times
    it; `total_acceleration` of the mass. `refinement` says for each period what was taken between the samples.

    >>> found = response_spectrum([0.0, 1.0, 0.0], 0.01, [0.5], [0.02, 0.05])
    >>> found.pseudo_velocity.shape, found.damping.tolist()
    ((2, 1), [0.02, 0.05])
    """

    periods: Array
    damping: Array
    displacement: Array
    pseudo_velocity: Array
    pseudo_acceleration: Array
    total_acceleration: Array
    refinement: tuple[str, ...]


def response_spectrum(
    acceleration: ArrayLike, dt: float, periods: ArrayLike, damping: ArrayLike, refine: str = "band-limited"
) -> Spectrum:
    """The response spectrum of one record, or of a stack of records, for one or several dampings.

    Arguments: `acceleration` of the ground in m/s2, (n,) or (records, n), at steps `dt` in s; `periods` in s;
    `damping`, one ratio or several, from 0 to below 1; `refine`, what is taken between the samples where a period has
    fewer than 20 of them, "band-limited" or "straight-line" (elsewhere: straight lines). Every record is worked in at
    least 50 steps to a period (64 to a sample at most) and followed for half a period after its end. Past two seconds
    a terminal shows how far it has come. Returns a Spectrum. Raises InputError naming every bad argument.

    >>> found = response_spectrum([0.0, 0.0, 1.0, 1.0], dt=0.01, periods=[0.01, 5.0], damping=0.05)
    >>> found.pseudo_acceleration.shape, found.refinement
    ((2,), ('band-limited', 'straight-line'))
    """
    read = Arguments("response_spectrum")
    records = np.atleast_2d(read.numbers("acceleration", acceleration, (1, 2)))
    read.positive("dt", dt, (0,))
    natural = np.atleast_1d(read.positive("periods", periods))
    zeta = np.atleast_1d(read.between("damping", damping, 0, 1))
    read.choice("refine", refine, REFINEMENTS)
    read.settle()
    curves = tuple(refine if period < COARSE * dt else "straight-line" for period in natural)
    parts = np.minimum(2 ** np.ceil(np.log2(np.maximum(STEPS * dt / natural, 1))), _MOST).astype(int)
    displacement, total = (np.empty((len(zeta), len(records), len(natural))) for _ in range(2))
    bar = Progress("response spectra", displacement.size)
    for curve, count in sorted(set(zip(curves, parts.tolist(), strict=True))):
        chosen = np.flatnonzero((np.array(curves) == curve) & (parts == count))
        step, rest = dt / count, float(natural[chosen].max()) / 2
        at_once = max(1, _SAMPLES // (records.shape[1] * count))
        for first in range(0, len(records), at_once):
            some = slice(first, first + at_once)
            finer = lengthened(_REFINED[curve](records[some], count), step, rest)
            together = max(1, _STATES // (finer.size * len(zeta)))
            for places in np.split(chosen, range(together, len(chosen), together)):
                peaks = _peaks(finer, step, natural[places], zeta)
                displacement[:, some, places], total[:, some, places] = peaks
                bar.advance(peaks[0].size)
    omega = 2 * np.pi / natural

    def settled(array: Array) -> Array:
        array = array if np.ndim(acceleration) == 2 else array[:, 0]
        return array if np.ndim(damping) else array[0]

    kinds = (displacement, displacement * omega, displacement * omega**2, total)
    return Spectrum(natural, zeta, *map(settled, kinds), curves)


def _peaks(records: Array, dt: float, periods: Array, damping: Array) -> tuple[Array, Array]:
    """Largest displacement and total acceleration: (dampings, records, periods)."""
    omega, zeta = np.broadcast_arrays(2 * np.pi / periods, damping[:, None])
    work = Blocks(records, dt, omega.ravel(), zeta.ravel())
    found = np.empty((omega.size, 2, len(records)))
    for place, (w, z) in enumerate(zip(omega.flat, zeta.flat, strict=True)):
        found[place] = work.peaks(place, np.array([[1.0, 0.0], [w**2, 2 * z * w**2]]))
    shaped = found.reshape(*omega.shape, 2, len(records)).transpose(2, 0, 3, 1)
    return shaped[0], shaped[1]


def straight(records: Array, count: int) -> Array:
    """Records (records, n) with `count` steps of a straight line in place of each step.

    >>> straight(np.array([[0.0, 1.0, 0.0]]), 2).tolist()
    [[0.0, 0.5, 1.0, 0.5, 0.0]]
    """
    if count == 1:
        return records
    samples = records.shape[1]
    places = np.arange((samples - 1) * count + 1) / count
    return np.stack([np.interp(places, np.arange(samples), record) for record in records])


def band_limited(records: Array, count: int) -> Array:
    """Records (records, n) with `count` steps of the band-limited curve through the samples in place of each step.

    >>> band_limited(np.array([[0.0, 1.0, 0.0]]), 2).round(3).tolist()
    [[0.0, 0.622, 1.0, 0.622, 0.0]]
    """
    if count == 1:
        return records
    samples = records.shape[1]
    length = 2 * samples  # zeros behind the record keep its end from running into its start
    lines = np.fft.rfft(records, length, axis=1)
    lines[:, -1] /= 2
    return np.fft.irfft(lines, length * count, axis=1)[:, : (samples - 1) * count + 1] * count


_REFINED = {"straight-line": straight, "band-limited": band_limited}
