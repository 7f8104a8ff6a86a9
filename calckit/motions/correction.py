"""Corrections of the zero line of a motion.

Knows three ways to move it and says on the motion which was used. Must not know filters: a correction of the zero line
takes no noise out.
"""

from __future__ import annotations

import numpy as np

from calckit.dynamics.arguments import Arguments, Array
from calckit.motions.motion import Motion, integrals

METHODS = ("mean", "linear", "zero end")
LONGEST = 300.0
"""Longest motion in s that is brought to rest by a straight line in acceleration. The line is a cubic in displacement,
which over a longer motion moves the ground by more than it mends (common practice, no source)."""


def correct(motion: Motion, method: str) -> Motion:
    """A motion with another zero line.

    Arguments: `method`, "mean" (the mean is taken off), "linear" (the straight line of least squares is taken off) or
    "zero end" (c_1 + c_2 t is taken off, so that velocity and displacement from rest are zero at the end; solved, not
    fitted; motions up to 300 s). Returns a Motion with a note of what was taken off. Raises InputError.

    >>> drifting = Motion("sketch", [0.0, 1.0, 1.0, 0.5], 0.5, kind="simulated")
    >>> mended = correct(drifting, "zero end")
    >>> [abs(float(part[-1])) < 1e-15 for part in integrals(mended)], mended.notes
    ([True, True], ('zero end: 0.5556 + 0.2593 t m/s2 taken off',))
    """
    read = Arguments("correct")
    read.choice("method", method, METHODS)
    if method == "zero end" and motion.duration > LONGEST:
        cure = "cut it, or take the mean or a straight line off"
        read.fault("motion", f"at most {LONGEST:g} s for zero end", f"{motion.duration:g} s", cure)
    read.settle()
    a, t = motion.acceleration, motion.time
    if method == "mean":
        c = np.array([a.mean(), 0.0])
    elif method == "linear":
        middle = t - t.mean()
        slope = middle @ a / (middle @ middle)
        c = np.array([a.mean() - slope * t.mean(), slope])
    else:
        c = _to_rest(motion)
    line = f"{c[0]:.4g}" if not c[1] else f"{c[0]:.4g} {'-' if c[1] < 0 else '+'} {abs(c[1]):.4g} t"
    return motion.changed(a - c[0] - c[1] * t, f"{method}: {line} m/s2 taken off")


def _to_rest(motion: Motion) -> Array:
    """c_1 and c_2 from c_1 T + c_2 T^2/2 = v(T) and c_1 T^2/2 + c_2 T^3/6 = u(T)."""
    velocity, displacement = (float(history[-1]) for history in integrals(motion))
    end = motion.duration
    return np.linalg.solve([[end, end**2 / 2], [end**2 / 2, end**3 / 6]], [velocity, displacement])
