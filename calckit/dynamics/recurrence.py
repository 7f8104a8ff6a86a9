"""The step of a damped linear oscillator, exact for a load that runs straight over the step.

Knows one step. Must not know records.

The state of an oscillator of circular frequency omega is (u, v/omega). Over a step h = omega dt its transition is
exp(S h) with S = [[0, 1], [-1, -2 zeta]], and a load that runs straight from p_0 to p_1 adds h (phi_1 - phi_2) b p_0 +
h phi_2 b p_1, where phi_1 and phi_2 are the first two phi functions of S h and b = (0, 1/omega^2). (N. C. Nigam and
P. C. Jennings, Bulletin of the Seismological Society of America 59, 1969, give the same recurrence written out.)
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array

_SMALL = 0.5  # of h: below it the phi functions are summed as a series, above it the closed form loses no digits
_TERMS = 20


def recurrence(omega: ArrayLike, damping: ArrayLike, dt: float) -> tuple[Array, Array, Array]:
    """The step of u'' + 2 zeta omega u' + omega^2 u = p over `dt`, exact for a straight p.

    Arguments: `omega`, circular frequencies in rad/s, and `damping`, ratios from 0 to below 1, of one shape; `dt` in s.
    Returns the transition of (u, u') (..., 2, 2), and what p at the start and p at the end of the step add (..., 2).
    Raises InputError.

    >>> transition, start, end = recurrence(2*np.pi, 0.05, 0.1)
    >>> transition.round(4).tolist(), (start / 0.2533).round(5).tolist(), (end / 0.2533).round(5).tolist()
    ([[0.8129, 0.0907], [-3.5795, 0.756]], [0.01236, 0.17089], [0.00635, 0.18707])
    """
    read = Arguments("recurrence")
    omega, damping = read.positive("omega", omega), read.between("damping", damping, 0, 1)
    read.positive("dt", dt, (0,))
    read.settle()
    transition, start, end = scaled(np.asarray(omega * dt), np.asarray(damping))
    back = np.stack([np.ones_like(omega), omega], axis=-1)  # (u, v/omega) to (u, v)
    transition = transition * back[..., :, None] / back[..., None, :]
    return transition, start * back / omega[..., None] ** 2, end * back / omega[..., None] ** 2


def scaled(h: Array, damping: Array) -> tuple[Array, Array, Array]:
    """The step for h = omega dt: transition of (u, v/omega), and what p/omega^2 at its start and at its end adds.

    >>> [part.round(4).tolist() for part in scaled(np.array(2*np.pi*0.1), np.array(0.05))]
    [[[0.8129, 0.5697], [-0.5697, 0.756]], [0.1236, 0.272], [0.0635, 0.2977]]
    """
    h, damping = np.broadcast_arrays(h, damping)
    generator = np.zeros((*h.shape, 2, 2))
    generator[..., 0, 1], generator[..., 1, 0], generator[..., 1, 1] = 1, -1, -2 * damping
    step = generator * h[..., None, None]
    exponential, first, second = _series(step)
    large = h > _SMALL
    if large.any():
        exponential[large] = _exponential(h[large], damping[large])
        inverse = np.linalg.inv(step[large])
        first[large] = (exponential[large] - np.eye(2)) @ inverse
        second[large] = (first[large] - np.eye(2)) @ inverse
    load = h[..., None]
    return exponential, load * (first - second)[..., 1], load * second[..., 1]


def _exponential(h: Array, damping: Array) -> Array:
    root = np.sqrt(1 - damping**2)
    sine, cosine = np.sin(root * h) / root, np.cos(root * h)
    rows = [[cosine + damping * sine, sine], [-sine, cosine - damping * sine]]
    return np.exp(-damping * h)[..., None, None] * np.stack([np.stack(row, -1) for row in rows], -2)


def _series(step: Array) -> tuple[Array, Array, Array]:
    """exp, phi_1 and phi_2 of small matrices."""
    term = np.broadcast_to(np.eye(2), step.shape).copy()
    exponential, first, second = term.copy(), term.copy(), term / 2
    small = np.where(np.abs(step).max(axis=(-2, -1), keepdims=True) > 2 * _SMALL, 0, step)
    for k in range(1, _TERMS):
        term = term @ small / k
        exponential += term
        first += term / (k + 1)
        second += term / ((k + 1) * (k + 2))
    return exponential, first, second
