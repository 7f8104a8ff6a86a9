"""A ground motion: its samples, its step, and what must be said of it wherever it is used.

Knows one horizontal or vertical component in m/s2 and its integrals. Must not know where it comes from or what is
made of it.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array

KINDS = ("recorded", "simulated", "synthetic")
"""What a motion may be: taken by an instrument, computed from a model of the source, or made from random numbers."""


@dataclass(frozen=True, eq=False)
class Motion:
    """One component of ground motion at equal steps, straight lines in between.

    Arguments: `name`, which stays with it; `acceleration` (n,) in m/s2, at least 2 samples, the first at time 0; `dt`
    in s; `kind`, one of KINDS; `notes`, what a reader must be told. The samples are copied and cannot be changed.
    Raises InputError naming every bad argument.

    >>> Motion("sketch", [0.0, 1.0, -1.0, 0.0], 0.5, kind="simulated").duration
    1.5
    >>> Motion("", [0.0, float("nan")], 0.0, kind="real")
    Traceback (most recent call last):
    calckit.errors.InputError: motion: acceleration: needed finite numbers; given NaN or infinity; ...
    """

    name: str
    acceleration: Array
    dt: float
    kind: str
    notes: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        read = Arguments("motion")
        samples = read.numbers("acceleration", self.acceleration, (1,)).copy()
        if samples.size < 2:
            read.fault("acceleration", "at least 2 samples", f"{samples.size}")
        read.positive("dt", self.dt, (0,))
        read.choice("kind", self.kind, KINDS)
        if not self.name.strip():
            read.fault("name", "a name", "a blank")
        read.settle()
        samples.setflags(write=False)
        object.__setattr__(self, "acceleration", samples)
        object.__setattr__(self, "notes", tuple(self.notes))

    @property
    def time(self) -> Array:
        """The times of the samples (n,) in s.

        >>> Motion("sketch", [0, 1, 0], 0.5, kind="simulated").time.tolist()
        [0.0, 0.5, 1.0]
        """
        return np.arange(self.acceleration.size) * self.dt

    @property
    def duration(self) -> float:
        """The time from the first sample to the last, in s.

        >>> Motion("sketch", [0, 1, 0], 0.5, kind="simulated").duration
        1.0
        """
        return (self.acceleration.size - 1) * self.dt

    def changed(self, acceleration: ArrayLike, note: str) -> Motion:
        """The motion with other samples, and a note of what was done.

        >>> Motion("sketch", [0, 1], 0.5, kind="simulated").changed([0, 2], "doubled").notes
        ('doubled',)
        """
        return replace(self, acceleration=np.asarray(acceleration), notes=(*self.notes, note))


def integrals(motion: Motion) -> tuple[Array, Array]:
    """Velocity in m/s and displacement in m of the ground from rest, exact for straight lines between the samples.

    >>> velocity, displacement = integrals(Motion("sketch", [1.0, 1.0, 1.0], 0.5, kind="simulated"))
    >>> velocity.tolist(), displacement.tolist()
    ([0.0, 0.5, 1.0], [0.0, 0.125, 0.5])
    """
    a, dt = motion.acceleration, motion.dt
    velocity = np.concatenate([[0.0], np.cumsum(a[:-1] + a[1:]) * (dt / 2)])
    moved = velocity[:-1] * dt + (2 * a[:-1] + a[1:]) * (dt**2 / 6)
    return velocity, np.concatenate([[0.0], np.cumsum(moved)])
