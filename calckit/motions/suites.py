"""Suites of motions: statistics of their spectra, and scaling of amplitudes to a target.

Knows spectra as rows of an array, one a motion or a pair of components. Must not know how a spectrum is worked or where
a target comes from.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array
from calckit.motions.motion import Motion

FITS = ("ln", "linear")
FLOOR = 0.9
"""Share of the target that the mean of the suite reaches at every period (ASCE/SEI 7-16, 16.2; from memory, high)."""
FEWEST = 11
"""Motions of a suite (ASCE/SEI 7-16, 16.2; found, secondary sources)."""


@dataclass(frozen=True, eq=False)
class Statistics:
    """Over the motions of a suite, period by period (periods,): arithmetic `mean`, `median` (the geometric mean, which
    is the median of a lognormal distribution) and `dispersion` (standard deviation of the natural logarithm, n - 1).

    >>> statistics([[1.0], [3.0]]).mean.tolist()
    [2.0]
    """

    mean: Array
    median: Array
    dispersion: Array


def statistics(spectra: ArrayLike) -> Statistics:
    """Mean, median and dispersion of spectra.

    Arguments: `spectra` (motions, periods), above 0, at least 2 motions, any unit. Returns Statistics. Raises
    InputError.

    >>> found = statistics([[1.0, 2.0], [4.0, 2.0]])
    >>> found.mean.tolist(), found.median.round(9).tolist(), found.dispersion.round(4).tolist()
    ([2.5, 2.0], [2.0, 2.0], [0.9803, 0.0])
    """
    read = Arguments("statistics")
    found = read.positive("spectra", spectra, (2,))
    if len(found) < 2:
        read.fault("spectra", "at least 2 motions", f"{len(found)}")
    read.settle()
    logarithms = np.log(found)
    return Statistics(found.mean(axis=0), np.exp(logarithms.mean(axis=0)), logarithms.std(axis=0, ddof=1))


def scale_factors(
    spectra: ArrayLike, periods: ArrayLike, target: ArrayLike, over: tuple[float, float], fit: str = "ln"
) -> Array:
    """The factor of each motion that brings its spectrum nearest to the target over a range of periods.

    Arguments: `spectra` (motions, periods) and `target` (periods,), in one unit, above 0; `periods` (periods,) in s,
    rising; `over`, shortest and longest period of the range, within `periods`; `fit`, least squares of the differences
    of the natural logarithms ("ln": every period counts alike by ratio) or of the ordinates themselves ("linear": the
    large ordinates count most). Each of the `periods` in the range has the same weight, so their spacing matters.
    Returns (motions,). Raises InputError.

    >>> scale_factors([[1.0, 1.0], [2.0, 8.0]], [0.5, 1.0], [4.0, 4.0], (0.5, 1.0)).round(9).tolist()
    [4.0, 1.0]
    >>> scale_factors([[2.0, 8.0]], [0.5, 1.0], [4.0, 4.0], (0.5, 1.0), fit="linear").round(4).tolist()
    [0.5882]
    """
    read = Arguments("scale_factors")
    read.choice("fit", fit, FITS)
    rows, aims, _ = _within(read, spectra, periods, target, over)
    if fit == "ln":
        return np.asarray(np.exp((np.log(aims) - np.log(rows)).mean(axis=1)))
    return np.asarray((rows * aims).sum(axis=1) / (rows**2).sum(axis=1))


@dataclass(frozen=True, eq=False)
class Scaling:
    """Amplitude scaling of a suite: `factors` (motions,), the same on both components of a pair; `common`, the part of
    them that lifts the whole suite; after scaling, `lowest`, the smallest ratio of mean to target in the range, and
    `at`, its period in s; `notes`, what must be said of the suite.

    >>> scale_to_mean([[1.0, 2.0]], [0.5, 1.0], [4.0, 4.0], (0.5, 1.0)).notes
    ('motions: 1; ASCE/SEI 7-16, 16.2, asks for at least 11',)
    """

    factors: Array
    common: float
    lowest: float
    at: float
    notes: tuple[str, ...]


def scale_to_mean(
    spectra: ArrayLike, periods: ArrayLike, target: ArrayLike, over: tuple[float, float], floor: float = FLOOR
) -> Scaling:
    """Amplitude scaling by ASCE/SEI 7-16, 16.2: the mean of the maximum-direction spectra is at least `floor` times the
    target at every period of the range.

    Arguments: as of scale_factors, `spectra` being those of the maximum direction (rotated_spectrum with percentile
    100), one row a pair; `floor`, 0.9 in that standard. Each pair is first scaled by least squares in ln, then all by
    the one factor that brings the lowest ratio to `floor`, up or down. Returns a Scaling. Raises InputError.

    >>> found = scale_to_mean([[1.0, 2.0], [3.0, 2.0]], [0.5, 1.0], [4.0, 4.0], (0.5, 1.0))
    >>> found.factors.round(4).tolist(), round(found.lowest, 9), found.at
    ([2.6354, 1.5215], 0.9, 0.5)
    """
    read = Arguments("scale_to_mean")
    read.positive("floor", floor, (0,))
    rows, aims, inside = _within(read, spectra, periods, target, over)
    single = np.exp((np.log(aims) - np.log(rows)).mean(axis=1))
    ratios = (single[:, None] * rows).mean(axis=0) / aims
    common = floor / float(ratios.min())
    notes = []
    if len(rows) < FEWEST:
        notes.append(f"motions: {len(rows)}; ASCE/SEI 7-16, 16.2, asks for at least {FEWEST}")
    return Scaling(single * common, common, float(ratios.min()) * common, float(inside[ratios.argmin()]), tuple(notes))


def _within(
    read: Arguments, spectra: ArrayLike, periods: ArrayLike, target: ArrayLike, over: tuple[float, float]
) -> tuple[Array, Array, Array]:
    """Spectra, target and periods inside the range."""
    rows, aims = read.positive("spectra", spectra, (2,)), read.positive("target", target, (1,))
    natural, ends = read.positive("periods", periods, (1,)), read.positive("over", over, (1,))
    if (np.diff(natural) <= 0).any():
        read.fault("periods", "periods that rise", "periods that do not")
    if rows.shape[-1] != natural.size:
        read.fault("spectra", f"{natural.size} ordinates a motion, one for each period", f"{rows.shape[-1]}")
    if aims.size != natural.size:
        read.fault("target", f"{natural.size} ordinates, one for each period", f"{aims.size}")
    if ends.size != 2 or ends[0] >= ends[-1]:
        read.fault("over", "a shorter and a longer period", ", ".join(f"{end:g}" for end in ends))
    elif not natural.min() <= ends[0] < ends[1] <= natural.max():
        needed = f"a range within the periods, {natural.min():g} to {natural.max():g} s"
        read.fault("over", needed, f"{ends[0]:g} to {ends[1]:g} s", "work the spectra over the whole range")
    inside = (natural >= ends[0]) & (natural <= ends[-1])
    if not read.faults and not inside.any():
        read.fault("periods", "at least one period in the range", "none")
    read.settle()
    return rows[:, inside], aims[inside], natural[inside]


def scaling_range(shortest: float, longest: float, ninety_percent: float) -> tuple[float, float]:
    """The range of periods of ASCE/SEI 7-16, 16.2, in s: from the smaller of 0.2 times the shortest first-mode period
    and the period of the last mode needed for 90 % of the mass, to twice the longest first-mode period.

    Arguments: `shortest` and `longest` first-mode period of the two directions; `ninety_percent`, the period of that
    last mode. (From memory, high; the standard lets the upper end come down to 1.5 times where that is justified.)
    Raises InputError.

    >>> scaling_range(0.8, 1.0, 0.2)
    (0.16..., 2.0)
    """
    read = Arguments("scaling_range")
    for name, value in (("shortest", shortest), ("longest", longest), ("ninety_percent", ninety_percent)):
        read.positive(name, value, (0,))
    if longest < shortest:
        read.fault("longest", "a period not below the shortest", f"{longest:g} s below {shortest:g} s")
    read.settle()
    return min(0.2 * shortest, ninety_percent), 2.0 * longest


def scaled(motions: Sequence[Motion], factor: float) -> tuple[Motion, ...]:
    """The components of one motion, each multiplied by the same factor, with a note.

    >>> pair = [Motion(name, [0.0, 1.0], 0.5, kind="simulated") for name in ("along", "across")]
    >>> [(one.acceleration.tolist(), one.notes) for one in scaled(pair, 1.5)][0]
    ([0.0, 1.5], ('multiplied by 1.5',))
    """
    read = Arguments("scaled")
    read.positive("factor", factor, (0,))
    read.settle()
    return tuple(motion.changed(motion.acceleration * factor, f"multiplied by {factor:.4g}") for motion in motions)
