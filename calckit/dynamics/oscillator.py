"""The response of a damped linear oscillator to ground motion, exact for straight lines between samples.

Knows the recurrence and how it is worked through a record in blocks. Must not know spectra or how a record is refined.

The state of an oscillator of circular frequency omega is (u, v/omega). Over a step h = omega dt its transition is
exp(S h) with S = [[0, 1], [-1, -2 zeta]], and a load that runs straight from p_0 to p_1 adds h (phi_1 - phi_2) b p_0 +
h phi_2 b p_1, where phi_1 and phi_2 are the first two phi functions of S h and b = (0, 1/omega^2). (N. C. Nigam and
P. C. Jennings, Bulletin of the Seismological Society of America 59, 1969, give the same recurrence written out.)
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array

BLOCK = 32
"""Samples worked as one matrix product."""
_SMALL = 0.5  # of h: below it the phi functions are summed as a series, above it the closed form loses no digits
_TERMS = 20


@dataclass(frozen=True)
class Response:
    """The history of one oscillator: `time` from 0, and at each time displacement and velocity relative to the ground
    and total acceleration; one row a record where several were passed."""

    time: Array
    displacement: Array
    velocity: Array
    total_acceleration: Array


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
    transition, start, end = _scaled(np.asarray(omega * dt), np.asarray(damping))
    back = np.stack([np.ones_like(omega), omega], axis=-1)  # (u, v/omega) to (u, v)
    transition = transition * back[..., :, None] / back[..., None, :]
    return transition, start * back / omega[..., None] ** 2, end * back / omega[..., None] ** 2


def _scaled(h: Array, damping: Array) -> tuple[Array, Array, Array]:
    """Transition of (u, v/omega), and what omega^2-fold displacements p/omega^2 at both ends add."""
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


def oscillator_response(
    acceleration: ArrayLike, dt: float, period: float, damping: float, *, ring_down: float | None = None
) -> Response:
    """The history of an oscillator under ground acceleration, starting from rest at the first sample.

    Arguments: `acceleration`, of the ground in m/s2, one record (n,) or a stack (records, n), at equal steps `dt` in s
    and straight in between; `period` in s; `damping`, a ratio from 0 to below 1; `ring_down`, how long the motion is
    followed after the record, in s (left out: half a period, which holds the largest response that follows). Returns a
    Response. Raises InputError naming every bad argument.

    >>> pulse = oscillator_response([1.0, 1.0, 1.0], dt=0.05, period=0.2, damping=0.0)
    >>> round(float(abs(pulse.displacement).max()) / (0.2 / (2*np.pi))**2, 3)  # of the static displacement
    2.0
    """
    read = Arguments("oscillator_response")
    records = np.atleast_2d(read.numbers("acceleration", acceleration, (1, 2)))
    read.positive("dt", dt, (0,))
    read.positive("period", period, (0,))
    read.between("damping", damping, 0, 1, (0,))
    rest = period / 2 if ring_down is None else ring_down
    read.between("ring_down", rest, 0, np.inf, (0,))
    read.settle()
    records = lengthened(records, dt, rest)
    omega = 2 * np.pi / period
    states = Work(records, dt, np.array([omega]), np.array([damping])).states(0)
    u, v = states[..., 0], states[..., 1] * omega
    total = -(2 * damping * omega * v + omega**2 * u)
    histories = (u, v, total) if np.ndim(acceleration) == 2 else (u[0], v[0], total[0])
    return Response(np.arange(records.shape[1]) * dt, *histories)


def lengthened(records: Array, dt: float, rest: float) -> Array:
    """Records with zeros behind them for `rest` seconds."""
    return np.pad(records, ((0, 0), (0, int(np.ceil(rest / dt)))))


class Work:
    """Oscillators under a stack of records (records, n), worked in blocks of samples by matrix products.

    The state at the start of every block follows from block to block for all oscillators at once; inside a block every
    state is a linear function of that state and of the samples of the block.
    """

    def __init__(self, records: Array, dt: float, omega: Array, damping: Array) -> None:
        self.count, self.samples = records.shape
        blocks = max(1, -(-(self.samples - 1) // BLOCK))
        padded = np.pad(records, ((0, 0), (0, blocks * BLOCK + 1 - self.samples)))
        windows = np.lib.stride_tricks.sliding_window_view(padded, BLOCK + 1, axis=1)[:, ::BLOCK]
        transition, start, end = _scaled(omega * dt, damping)
        self._free, self._forced = _block(transition, -start, -end)
        self._forced /= (omega**2)[:, None, None, None]
        self._windows = windows
        self._starts = self._carried(windows)

    def _carried(self, windows: Array) -> Array:
        """The state at the start of each block: (oscillators, records, blocks, 2)."""
        last = self._forced[:, -1]  # (oscillators, 2, BLOCK + 1)
        added = np.einsum("rbs,ois->obri", windows, last, optimize=True)
        free = self._free[:, -1].transpose(0, 2, 1)
        state = np.zeros((added.shape[0], self.count, 2))
        starts = np.empty_like(added)
        for block in range(added.shape[1]):
            starts[:, block] = state
            state = state @ free + added[:, block]
        return starts.transpose(0, 2, 1, 3)

    def outputs(self, oscillator: int, weights: Array) -> Array:
        """What `weights` (outputs, 2) make of the states at all samples but the first: (records, samples, outputs)."""
        free = np.einsum("ki,sij->skj", weights, self._free[oscillator])
        forced = np.einsum("ki,sij->skj", weights, self._forced[oscillator])
        size = BLOCK * len(weights)
        joined = np.concatenate([forced.reshape(size, -1), free.reshape(size, -1)], axis=1).T
        sources = np.concatenate([self._windows, self._starts[oscillator]], axis=2)
        found = sources.reshape(-1, BLOCK + 3) @ joined
        return found.reshape(self.count, -1, len(weights))[:, : max(self.samples - 1, 0)]

    def states(self, oscillator: int) -> Array:
        """The states (u, v/omega) at every sample: (records, samples, 2)."""
        return np.concatenate([np.zeros((self.count, 1, 2)), self.outputs(oscillator, np.eye(2))], axis=1)


def _block(transition: Array, start: Array, end: Array) -> tuple[Array, Array]:
    """Every state of a block from the state before it, and from the block's samples and the one before them."""
    powers = np.empty((transition.shape[0], BLOCK + 1, 2, 2))
    powers[:, 0] = np.eye(2)
    for k in range(BLOCK):
        powers[:, k + 1] = powers[:, k] @ transition
    forced = np.zeros((transition.shape[0], BLOCK, 2, BLOCK + 1))
    for k in range(BLOCK):
        late = np.einsum("okij,oj->oki", powers[:, : BLOCK - k], end)
        early = np.einsum("okij,oj->oki", powers[:, : BLOCK - k], start)
        forced[:, k:, :, k + 1] += late
        forced[:, k:, :, k] += early
    return powers[:, 1:], forced
