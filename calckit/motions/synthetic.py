"""Motions made from random numbers: filtered noise under an envelope.

Knows the spectral density of the ground, envelopes, and how lines of random phase are added up. Must not pass for a
recording: what it makes says that it is none.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array
from calckit.motions.correction import LONGEST, correct
from calckit.motions.motion import Motion


@dataclass(frozen=True)
class Ground:
    """A filter of the ground: `omega_g` in rad/s and `zeta_g` (K. Kanai, H. Tajimi), `omega_f` in rad/s and `zeta_f` of
    the second filter, which takes out the longest waves (R. W. Clough and J. Penzien).

    >>> filtered_noise(7, peak=1.0, ground=Ground(15.6, 0.6, 1.5, 0.6)).dt  # firm ground as of Kanai
    0.01
    """

    omega_g: float
    zeta_g: float
    omega_f: float
    zeta_f: float


GROUNDS = {
    "firm": Ground(15.0, 0.6, 1.5, 0.6),
    "medium": Ground(10.0, 0.4, 1.0, 0.6),
    "soft": Ground(5.0, 0.2, 0.5, 0.6),
}
"""A. Der Kiureghian and A. Neuenhofer, Earthquake Engineering and Structural Dynamics 21, 1992; from memory, medium."""


def ground_density(omega: ArrayLike, ground: Ground) -> Array:
    """The spectral density of the acceleration over that of the white noise that drives the filters.

    Arguments: `omega` in rad/s, not below 0. Raises InputError.

    >>> ground_density([0.0, 15.0], GROUNDS["firm"]).round(4).tolist()
    [0.0, 1.7038]
    """
    read = Arguments("ground_density")
    w = read.between("omega", omega, 0, np.inf)
    for name in ("omega_g", "zeta_g", "omega_f", "zeta_f"):
        read.positive(name, getattr(ground, name), (0,))
    read.settle()
    r, s = (w / ground.omega_g) ** 2, (w / ground.omega_f) ** 2
    kept = (1 + 4 * ground.zeta_g**2 * r) / ((1 - r) ** 2 + 4 * ground.zeta_g**2 * r)
    return np.asarray(kept * s**2 / ((1 - s) ** 2 + 4 * ground.zeta_f**2 * s))


def three_part_envelope(time: ArrayLike, rise: float = 4.0, strong_until: float = 15.0, decay: float = 0.0992) -> Array:
    """An envelope that rises with the square of time, stays at 1, and decays exponentially.

    Arguments: `time` in s; `rise` and `strong_until`, the times in s at which it reaches and leaves 1; `decay` in 1/s.
    Left out, they are those of type B of P. C. Jennings, G. W. Housner and N. C. Tsai, 1968 (from memory, medium).
    Raises InputError.

    >>> three_part_envelope([2.0, 10.0, 25.0]).round(4).tolist()
    [0.25, 1.0, 0.3708]
    """
    read = Arguments("three_part_envelope")
    t = read.between("time", time, 0, np.inf)
    for name, value in (("rise", rise), ("strong_until", strong_until), ("decay", decay)):
        read.positive(name, value, (0,))
    if strong_until < rise:
        read.fault("strong_until", "a time not before the end of the rise", f"{strong_until:g} s before {rise:g} s")
    read.settle()
    return np.where(t < rise, (t / rise) ** 2, np.exp(-decay * np.maximum(t - strong_until, 0)))


def exponential_envelope(share: ArrayLike, peak_at: float = 0.2, end_level: float = 0.05) -> Array:
    """The envelope a x^b exp(-c x), 1 at x = `peak_at` and `end_level` at x = 1.

    Arguments: `share` x of the duration, not below 0. (G. R. Saragoni and G. C. Hart, 1973; D. M. Boore, 2003; from
    memory, high.) Raises InputError.

    >>> exponential_envelope([0.0, 0.2, 1.0]).round(9).tolist()
    [0.0, 1.0, 0.05]
    """
    read = Arguments("exponential_envelope")
    x = read.between("share", share, 0, np.inf)
    for name, value in (("peak_at", peak_at), ("end_level", end_level)):
        read.positive(name, value, (0,))
        read.between(name, value, 0, 1, (0,))
    read.settle()
    b = -peak_at * np.log(end_level) / (1 + peak_at * (np.log(peak_at) - 1))
    ratio = x / peak_at
    return np.asarray(ratio**b * np.exp(b * (1 - ratio)))


def filtered_noise(
    seed: int, *, peak: float, duration: float = 25.0, dt: float = 0.01, ground: str | Ground = "firm"
) -> Motion:
    """A synthetic motion: lines of random phase with the density of the ground, under an envelope, brought to rest.

    Arguments: `seed`, a whole number; `peak` ground acceleration in m/s2; `duration` and `dt` in s; `ground`, one of
    GROUNDS or a Ground. The envelope is three_part_envelope where the motion outlasts its strong part of 15 s, else
    exponential_envelope. Lines lie half as far apart as would make the sum repeat within the motion. The zero line is
    mended so that velocity and displacement end at zero, then the motion is scaled to the peak. The same seed gives the
    same motion with the same version of numpy. Returns a Motion of kind "synthetic". Raises InputError naming every bad
    argument. (M. Shinozuka and C.-M. Jan, Journal of Sound and Vibration 25, 1972.)

    >>> made = filtered_noise(1940, peak=2.5)
    >>> made.kind, float(abs(made.acceleration).max().round(9)), made.notes[0]
    ('synthetic', 2.5, 'synthetic, seed 1940, filtered noise, not a recording')
    """
    read = Arguments("filtered_noise")
    for name, value in (("peak", peak), ("duration", duration), ("dt", dt)):
        read.positive(name, value, (0,))
    if isinstance(seed, bool) or not isinstance(seed, int) or seed < 0:
        read.fault("seed", "a whole number not below 0", repr(seed))
    if isinstance(ground, str):
        ground = GROUNDS[read.choice("ground", ground, tuple(GROUNDS))]
    if not read.faults and not 32 * dt <= duration <= LONGEST:
        read.fault("duration", f"from 32 steps to {LONGEST:g} s", f"{duration:g} s at steps of {dt:g} s")
    read.settle()
    count = round(duration / dt) + 1
    lines = 2 * np.pi * np.fft.rfftfreq(2 * count, dt)[1:-1]
    sizes = np.sqrt(2 * ground_density(lines, ground) * (lines[1] - lines[0]))
    phases = np.random.Generator(np.random.PCG64(seed)).uniform(0, 2 * np.pi, lines.size)
    noise = count * np.fft.irfft(np.concatenate([[0], sizes * np.exp(1j * phases), [0]]), 2 * count)[:count]
    time = np.arange(count) * dt
    envelope = three_part_envelope(time) if duration > 15 else exponential_envelope(time / duration)
    notes = (
        f"synthetic, seed {seed}, filtered noise, not a recording",
        f"filter omega_g {ground.omega_g:g} rad/s, zeta_g {ground.zeta_g:g}, omega_f {ground.omega_f:g} rad/s, "
        f"zeta_f {ground.zeta_f:g}; envelope {'in three parts' if duration > 15 else 'exponential'}",
    )
    made = correct(Motion(f"synthetic, seed {seed}", noise * envelope, dt, "synthetic", notes), "zero end")
    factor = peak / float(np.abs(made.acceleration).max())
    return made.changed(made.acceleration * factor, f"scaled to a peak of {peak:.4g} m/s2")
