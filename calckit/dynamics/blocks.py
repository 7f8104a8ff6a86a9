"""Oscillators worked through a stack of records in blocks of samples, by matrix products.

Knows how the recurrence is carried from block to block and through each block. Must not know periods, dampings or what
is done with the states.

The state at the start of every block follows from block to block for all oscillators at once; inside a block every
state is a linear function of that state and of the samples of the block.
"""

from __future__ import annotations

import numpy as np

from calckit.dynamics.arguments import Array
from calckit.dynamics.recurrence import scaled

BLOCK = 32
"""Samples worked as one matrix product."""
_COLUMNS = 4096  # blocks worked at once, few enough for their states to stay in the processor's cache
_PIECE = 100  # blocks to a matrix product, few enough for it to stay on one thread: waiting for others costs more


def lengthened(records: Array, dt: float, rest: float) -> Array:
    """Records with zeros behind them for `rest` seconds."""
    return np.pad(records, ((0, 0), (0, int(np.ceil(rest / dt)))))


class Blocks:
    """Oscillators (of circular frequencies `omega` and ratios `damping`) under records (records, n)."""

    def __init__(self, records: Array, dt: float, omega: Array, damping: Array) -> None:
        self.count, self.samples = records.shape
        blocks = max(1, -(-(self.samples - 1) // BLOCK))
        pieces = -(-blocks // _PIECE)
        blocks = pieces * -(-blocks // pieces)
        padded = np.pad(records, ((0, 0), (0, blocks * BLOCK + 1 - self.samples)))
        windows = np.lib.stride_tricks.sliding_window_view(padded, BLOCK + 1, axis=1)[:, ::BLOCK]
        transition, start, end = scaled(omega * dt, damping)
        self._free, self._forced = _block(transition, -start, -end)
        self._forced /= (omega**2)[:, None, None, None]
        self._starts = self._carried(windows.transpose(1, 2, 0))
        # rows: the samples of a block and the one before them, then the state before them
        self._sources = np.empty((BLOCK + 3, self.count, blocks))
        self._sources[: BLOCK + 1] = windows.transpose(2, 0, 1)
        self._pieces = pieces

    def _carried(self, windows: Array) -> Array:
        """The state at the start of each block: (blocks, oscillators, 2, records)."""
        last = self._forced[:, -1].reshape(-1, BLOCK + 1)
        carried = (last @ windows).reshape(len(windows), -1, 2, self.count)
        free = self._free[:, -1]
        state = np.zeros(carried.shape[1:])
        for block in carried:
            added = block.copy()
            block[:] = state
            state = added
            for i in range(2):
                state[:, i] += free[:, i, :1] * block[:, 0] + free[:, i, 1:] * block[:, 1]
        return carried

    def _worked(self, oscillator: int, weights: Array, records: slice) -> Array:
        """What `weights` (outputs, 2) make of the states of some records: (records, pieces, outputs, BLOCK, blocks)."""
        joined = np.concatenate([self._forced[oscillator], self._free[oscillator]], axis=2)
        matrix = np.einsum("ki,sij->ksj", weights, joined).reshape(-1, BLOCK + 3)
        sources = self._sources[:, records]
        sources[BLOCK + 1 :] = self._starts[:, oscillator, :, records].transpose(1, 2, 0)
        stacked = sources.reshape(BLOCK + 3, sources.shape[1], self._pieces, -1).transpose(1, 2, 0, 3)
        return (matrix @ stacked).reshape(*stacked.shape[:2], len(weights), BLOCK, -1)

    def peaks(self, oscillator: int, weights: Array) -> Array:
        """Largest absolute values of what `weights` (outputs, 2) make of the states (u, v/omega): (outputs, records).

        Free vibration after the records is followed to the end of their last block.
        """
        at_once = max(1, _COLUMNS // self._sources.shape[2])
        found = np.empty((len(weights), self.count))
        for first in range(0, self.count, at_once):
            records = slice(first, first + at_once)
            worked = self._worked(oscillator, weights, records)
            np.abs(worked, out=worked)
            found[:, records] = worked.max(axis=4).max(axis=(1, 3)).T
        return found

    def states(self, oscillator: int) -> Array:
        """The states (u, v/omega) at every sample: (2, records, samples)."""
        worked = self._worked(oscillator, np.eye(2), slice(None)).transpose(2, 0, 1, 4, 3)
        later = worked.reshape(2, self.count, -1)[..., : max(self.samples - 1, 0)]
        return np.concatenate([np.zeros((2, self.count, 1)), later], axis=2)


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
