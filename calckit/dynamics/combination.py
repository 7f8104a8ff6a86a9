"""Combination of the peak values of modes.

Knows the rules by which peaks of modes that do not occur together are put together. Must not know modes themselves.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array

RULES = ("CQC", "SRSS", "ABS")


def correlation(frequencies: ArrayLike, damping: ArrayLike) -> Array:
    """Correlation coefficients of modes (E. L. Wilson, A. Der Kiureghian, E. P. Bayo, 1981).

    Arguments: `frequencies` (modes,) in any unit; `damping`, one ratio above 0 or one for each mode. Returns (modes,
    modes). Raises InputError.

    >>> correlation([1.0, 0.9], 0.02).round(4).tolist()
    [[1.0, 0.1257], [0.1257, 1.0]]
    """
    read = Arguments("correlation")
    omega = np.atleast_1d(read.positive("frequencies", frequencies))
    zeta = read.positive("damping", damping)
    if zeta.ndim and zeta.shape != omega.shape:
        read.fault("damping", "one ratio, or one for each frequency", f"{zeta.size} for {omega.size}")
    read.settle()
    zeta = np.broadcast_to(zeta, omega.shape)
    i, j = zeta[:, None], zeta[None, :]
    r = omega[:, None] / omega[None, :]
    above = 8 * np.sqrt(i * j) * (i * r + j) * r**1.5
    return np.asarray(above / ((1 - r**2) ** 2 + 4 * i * j * r * (1 + r**2) + 4 * (i**2 + j**2) * r**2))


def combine(
    modal_values: ArrayLike, frequencies: ArrayLike, damping: ArrayLike, rule: str = "CQC"
) -> Array:
    """The peak of a quantity from its peaks in each mode.

    Arguments: `modal_values` (modes, ...), signed; `frequencies` (modes,) in any unit; `damping`, one ratio or one for
    each mode; `rule`, "CQC", "SRSS" (square root of the sum of squares) or "ABS" (sum of the absolute values). Returns
    the combined values (...), never negative. Raises InputError.

    >>> combine([3.0, -4.0], [1.0, 5.0], 0.05, rule="SRSS"), combine([3.0, -4.0], [1.0, 5.0], 0.05, rule="ABS")
    (array(5.), array(7.))
    """
    read = Arguments("combine")
    values = read.numbers("modal_values", modal_values, tuple(range(1, 9)))
    omega = np.atleast_1d(read.positive("frequencies", frequencies))
    read.choice("rule", rule, RULES)
    if len(values) != len(omega):
        read.fault("modal_values", "one entry for each frequency", f"{len(values)} for {len(omega)}")
    read.settle()
    if rule == "ABS":
        return np.asarray(np.abs(values).sum(axis=0))
    if rule == "SRSS":
        return np.asarray(np.sqrt((values**2).sum(axis=0)))
    squares = np.einsum("i...,ij,j...->...", values, correlation(omega, damping), values)
    return np.asarray(np.sqrt(np.maximum(squares, 0)))
