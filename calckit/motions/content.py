"""What frequencies a motion is made of.

Knows the Fourier amplitude spectrum and the periods read from it. Must not know response spectra.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calckit.dynamics.arguments import Arguments, Array
from calckit.motions.motion import Motion

BAND = (0.25, 20.0)
"""Frequencies in Hz over which the mean period is defined (Rathje, Abrahamson, Bray 1998; from memory, high)."""
_FINEST = 0.05  # Hz: the widest spacing of lines for which the mean period is defined, same source


@dataclass(frozen=True, eq=False)
class FrequencyContent:
    """Fourier amplitudes of a motion, lowest frequency first, without the line at zero.

    `frequencies` (lines,) in Hz, `periods` in s, `amplitudes` in m/s; `band` in Hz, within which `dominant_period`,
    that of the largest amplitude, and `mean_period` T_m are taken, both in s.

    >>> found = frequency_content(Motion("pulse", [0.0, 1.0, 0.0], 0.02, kind="simulated"))
    >>> found.band, found.amplitudes.size == found.periods.size
    ((0.25, 20.0), True)
    """

    frequencies: Array
    periods: Array
    amplitudes: Array
    band: tuple[float, float]
    dominant_period: float
    mean_period: float


def frequency_content(motion: Motion, band: tuple[float, float] = BAND) -> FrequencyContent:
    """The Fourier amplitude spectrum of a motion, dt times the size of the discrete transform, not smoothed.

    Arguments: `band`, lowest and highest frequency in Hz of the periods given, cut at half the sampling rate. Zeros
    behind the motion bring the lines to within 0.05 Hz. The mean period is sum(C^2/f)/sum(C^2) over the band (E. M.
    Rathje, N. A. Abrahamson, J. D. Bray, Journal of Geotechnical and Geoenvironmental Engineering 124, 1998). The
    dominant period is that of a single line and moves with the length of the record: say the mean period beside it.
    Returns FrequencyContent. Raises InputError.

    >>> hum = Motion("hum", np.sin(2*np.pi*2*np.arange(0, 20, 0.01)), 0.01, kind="synthetic")
    >>> found = frequency_content(hum)
    >>> round(found.dominant_period, 3), round(found.mean_period, 2), float(found.amplitudes.max().round(6))
    (0.5, 0.5, 10.0)
    """
    read = Arguments("frequency_content")
    edges = read.positive("band", band, (1,))
    low, high = float(edges[0]), min(float(edges[-1]), 0.5 / motion.dt)
    lines = np.arange(0.0)
    if edges.size != 2 or low >= high:
        given = ", ".join(f"{edge:g}" for edge in edges)
        read.fault("band", "a lower and a higher frequency in Hz, the lower below half the sampling rate", given)
    else:
        length = max(motion.acceleration.size, int(np.ceil(1 / (_FINEST * motion.dt))))
        lines = np.fft.rfftfreq(length, motion.dt)[1:]
        inside = (lines >= low) & (lines <= high)
        if not inside.any():
            read.fault("band", f"a band that holds a line; they are {lines[0]:.3g} Hz apart", f"{low:g}, {high:g}")
        elif not motion.acceleration.any():
            read.fault("motion", "samples other than zero", "zeros alone")
    read.settle()
    amplitudes = motion.dt * np.abs(np.fft.rfft(motion.acceleration, length)[1:])
    chosen, squares = lines[inside], amplitudes[inside] ** 2
    mean = float((squares / chosen).sum() / squares.sum())
    return FrequencyContent(lines, 1 / lines, amplitudes, (low, high), float(1 / chosen[squares.argmax()]), mean)
