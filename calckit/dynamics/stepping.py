"""Step-by-step integration of one oscillator under a force, and what the step costs in accuracy.

Knows the methods of N. M. Newmark (Journal of the Engineering Mechanics Division, ASCE 85, 1959) and central
differences. They are here to be held against; responses and spectra use the exact recurrence.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array

_BETA = {"average acceleration": 1 / 4, "linear acceleration": 1 / 6, "central difference": 0.0}
METHODS = tuple(_BETA)


def step_by_step(
    force: ArrayLike, dt: float, mass: float, damping: float, stiffness: float, method: str = "average acceleration"
) -> tuple[Array, Array, Array]:
    """Displacement, velocity and acceleration under a force known at equal steps, from rest.

    Arguments: `force` (n,) at steps `dt`; `mass`, `damping` (the viscous coefficient, not below 0) and `stiffness`, in
    any consistent units; `method`, one of METHODS. Central differences give each displacement from the two before it;
    the last velocity and acceleration are then taken back to the sample before. Returns three arrays (n,). Raises
    InputError, also where the step is above the limit of stability.

    >>> u, _, _ = step_by_step([0.0, 5.0, 8.6602], 0.1, 0.2533, 0.1592, 10.0)
    >>> u.round(4).tolist()
    [0.0, 0.0437, 0.2326]
    """
    read = Arguments("step_by_step")
    p = read.numbers("force", force, (1,))
    for name, value in (("dt", dt), ("mass", mass), ("stiffness", stiffness)):
        read.positive(name, value, (0,))
    read.between("damping", damping, 0, np.inf, (0,))
    read.choice("method", method, METHODS)
    if not read.faults:
        longest = stability_limit(method) * 2 * np.pi * np.sqrt(mass / stiffness)
        if dt > longest:
            read.fault("dt", f"a step up to {longest:.4g}, where {method} is stable", f"{dt:g}", "shorten the step")
    read.settle()
    if method == "central difference":
        return _central(p, dt, mass, damping, stiffness)
    beta = _BETA[method]
    u, v, a = (np.zeros(len(p)) for _ in range(3))
    a[0] = p[0] / mass
    effective = stiffness + damping / (2 * beta * dt) + mass / (beta * dt**2)
    for i in range(len(p) - 1):
        inertia = u[i] / (beta * dt**2) + v[i] / (beta * dt) + (1 / (2 * beta) - 1) * a[i]
        drag = u[i] / (2 * beta * dt) + (1 / (2 * beta) - 1) * v[i] + dt * (1 / (4 * beta) - 1) * a[i]
        u[i + 1] = (p[i + 1] + mass * inertia + damping * drag) / effective
        a[i + 1] = (u[i + 1] - u[i]) / (beta * dt**2) - v[i] / (beta * dt) - (1 / (2 * beta) - 1) * a[i]
        v[i + 1] = v[i] + dt * (a[i] + a[i + 1]) / 2
    return u, v, a


def _central(p: Array, dt: float, mass: float, damping: float, stiffness: float) -> tuple[Array, Array, Array]:
    u = np.zeros(len(p) + 2)  # one place before the first sample, one behind the last
    u[0] = dt**2 * p[0] / mass / 2
    ahead, behind = mass / dt**2 + damping / (2 * dt), mass / dt**2 - damping / (2 * dt)
    for i in range(1, len(p) + 1):
        u[i + 1] = (p[i - 1] - behind * u[i - 1] - (stiffness - 2 * mass / dt**2) * u[i]) / ahead
    return u[1:-1], (u[2:] - u[:-2]) / (2 * dt), (u[2:] - 2 * u[1:-1] + u[:-2]) / dt**2


def stability_limit(method: str) -> float:
    """The longest step over the period at which a method is stable; infinite for average acceleration.

    >>> round(stability_limit("linear acceleration"), 6), stability_limit("average acceleration")
    (0.551329, inf)
    """
    read = Arguments("stability_limit")
    read.choice("method", method, METHODS)
    read.settle()
    room = 1 - 4 * _BETA[method]
    return float(1 / (np.pi * np.sqrt(room))) if room else float("inf")


def period_ratio(step: ArrayLike, method: str) -> Array:
    """The period that a method gives without damping over the true one, for steps over the period.

    >>> period_ratio([0.05, 0.1], "average acceleration").round(6).tolist()
    [1.008171, 1.032075]
    """
    read = Arguments("period_ratio")
    x = read.positive("step", step)
    read.choice("method", method, METHODS)
    limit = stability_limit(method) if not read.faults else np.inf
    if (x > limit).any():
        read.fault("step", f"steps up to {limit:.6g} of the period", f"{x.max():g}")
    read.settle()
    square = (2 * np.pi * x) ** 2
    turn = np.arccos(1 - square / (2 * (1 + _BETA[method] * square)))
    return np.asarray(2 * np.pi * x / turn)
