"""The response of a damped linear oscillator to ground motion, exact for straight lines between samples.

Knows histories. Must not know spectra or how a record is refined.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array
from calckit.dynamics.blocks import Blocks, lengthened


@dataclass(frozen=True)
class Response:
    """The history of one oscillator: `time` from 0, and at each time displacement and velocity relative to the ground
    and total acceleration; one row a record where several were passed.

    >>> pulse = oscillator_response([0.0, 1.0, 0.0], dt=0.01, period=0.1, damping=0.05)
    >>> pulse.time.size, round(float(abs(pulse.total_acceleration).max()), 3)
    (8, 0.558)
    """

    time: Array
    displacement: Array
    velocity: Array
    total_acceleration: Array


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
    u, v = Blocks(records, dt, np.array([omega]), np.array([damping])).states(0)
    v *= omega
    total = -(2 * damping * omega * v + omega**2 * u)
    histories = (u, v, total) if np.ndim(acceleration) == 2 else (u[0], v[0], total[0])
    return Response(np.arange(records.shape[1]) * dt, *histories)
