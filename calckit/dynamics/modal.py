"""Natural modes of structures with several degrees of freedom, and periods by energy.

Knows mass and stiffness matrices, freedoms from the base up. Must not know ground motions, spectra or units.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from calckit.dynamics.arguments import Arguments, Array


@dataclass(frozen=True)
class Modes:
    """Modes, the longest period first.

    `periods` in s and `frequencies` in rad/s; `shapes` (freedoms, modes), 1 at the last freedom (at the largest where
    that one hardly moves); `participation` factors; `effective_masses`, whose sum over all modes is the whole mass;
    `effective_heights`, None unless heights were given.

    >>> found = modes([2, 1], shear_building([2, 1]))
    >>> found.periods.round(3).tolist(), found.effective_heights
    ([8.886, 4.443], None)
    """

    periods: Array
    frequencies: Array
    shapes: Array
    participation: Array
    effective_masses: Array
    effective_heights: Array | None


def modes(
    mass: ArrayLike, stiffness: ArrayLike, *, heights: ArrayLike | None = None, influence: ArrayLike | None = None
) -> Modes:
    """Modes of a structure on a ground that moves in one direction.

    Arguments: `mass`, the diagonal (n,) or a full symmetric matrix (n, n), positive definite; `stiffness` (n, n),
    symmetric and positive definite; `heights` (n,) above the base, for effective heights; `influence` (n,), the
    displacement of each freedom where the ground moves by 1 (left out: 1 at each). Any consistent units. Returns Modes.
    Raises InputError, also where the structure can move without force.

    >>> found = modes([2, 1], [[3, -1], [-1, 1]], heights=[1, 2])
    >>> found.frequencies.round(6).tolist(), found.shapes.round(3).tolist(), found.effective_masses.round(4).tolist()
    ([0.707107, 1.414214], [[0.5, -1.0], [1.0, 1.0]], [2.6667, 0.3333])
    """
    read = Arguments("modes")
    m, k = read.numbers("mass", mass, (1, 2)), read.numbers("stiffness", stiffness, (2,))
    n = len(m)
    for name, matrix in (("mass", m), ("stiffness", k)):
        if matrix.ndim == 1:
            if (matrix <= 0).any():
                read.fault(name, "numbers above 0", f"{matrix.min():g}", "give every freedom a mass")
        elif matrix.shape != (n, n):
            read.fault(name, f"a matrix of {n} rows and columns", f"shape {matrix.shape}")
        elif np.abs(matrix - matrix.T).max() > 1e-9 * np.abs(matrix).max():
            read.fault(name, "a symmetric matrix", "one that is not", "check the entries on both sides of the diagonal")
    r = np.ones(n) if influence is None else read.numbers("influence", influence, (1,))
    h = None if heights is None else read.numbers("heights", heights, (1,))
    for name, vector in (("influence", r), ("heights", h)):
        if vector is not None and vector.shape != (n,):
            read.fault(name, f"{n} numbers, one for each freedom", f"{vector.size}")
    read.settle()
    squares, shapes = _solved(read, m, k)
    if squares[0] <= 1e-12 * squares[-1]:
        read.fault("stiffness", "a positive definite matrix", "one that is not", "hold the structure at its base")
        read.settle()
    shapes = shapes / _scale(shapes)
    weighed = m[:, None] * shapes if m.ndim == 1 else m @ shapes
    modal_masses, excited = (shapes * weighed).sum(axis=0), r @ weighed
    omega = np.sqrt(squares)
    tall = None if h is None else h @ weighed / np.where(excited == 0, np.nan, excited)
    participation = excited / modal_masses
    return Modes(2 * np.pi / omega, omega, shapes, participation, participation * excited, tall)


def _solved(read: Arguments, m: Array, k: Array) -> tuple[Array, Array]:
    """Squares of the frequencies and shapes, lowest first, by way of the root of the mass."""
    if m.ndim == 1:
        root = 1 / np.sqrt(m)[:, None]
        squares, vectors = np.linalg.eigh(root * k * root.T)
        return squares, root * vectors
    try:
        inverse = np.linalg.inv(np.linalg.cholesky(m))
    except np.linalg.LinAlgError:
        read.fault("mass", "a positive definite matrix", "one that is not", "give every freedom a mass")
        read.settle()
    squares, vectors = np.linalg.eigh(inverse @ k @ inverse.T)
    return squares, inverse.T @ vectors


def _scale(shapes: Array) -> Array:
    largest = np.take_along_axis(shapes, np.abs(shapes).argmax(axis=0)[None], axis=0)[0]
    return np.where(np.abs(shapes[-1]) > 1e-6 * np.abs(largest), shapes[-1], largest)


def shear_building(story_stiffness: ArrayLike) -> Array:
    """The stiffness matrix of stories one above the other, from the lateral stiffness of each, lowest first.

    >>> shear_building([2, 1]).tolist()
    [[3.0, -1.0], [-1.0, 1.0]]
    """
    read = Arguments("shear_building")
    k = np.atleast_1d(read.positive("story_stiffness", story_stiffness))
    read.settle()
    matrix = np.diag(k + np.append(k[1:], 0))
    off = np.arange(len(k) - 1)
    matrix[off, off + 1] = matrix[off + 1, off] = -k[1:]
    return matrix


def shear_cantilever(shear_rigidity: float, heights: ArrayLike) -> Array:
    """The stiffness matrix of a uniform cantilever that deforms in shear (rigidity G A'), at heights above the base.

    >>> shear_cantilever(6.0, [2, 5]).tolist()
    [[5.0, -2.0], [-2.0, 2.0]]
    """
    return shear_building(shear_rigidity / np.diff(_rising("shear_cantilever", heights, shear_rigidity), prepend=0.0))


def flexural_cantilever(flexural_rigidity: float, heights: ArrayLike) -> Array:
    """The lateral stiffness matrix of a uniform cantilever that deforms in flexure (rigidity E I), at given heights.

    >>> flexural_cantilever(1.0, [1.0]).round(9).tolist()
    [[3.0]]
    """
    h = _rising("flexural_cantilever", heights, flexural_rigidity)
    low, high = np.minimum(h[:, None], h[None, :]), np.maximum(h[:, None], h[None, :])
    inverse = np.linalg.inv(low**2 * (3 * high - low) / (6 * flexural_rigidity))
    return np.asarray((inverse + inverse.T) / 2)


def _rising(where: str, heights: ArrayLike, rigidity: float) -> Array:
    read = Arguments(where)
    h = np.atleast_1d(read.positive("heights", heights))
    read.positive("rigidity", rigidity, (0,))
    if (np.diff(h) <= 0).any():
        read.fault("heights", "heights that rise from the lowest", "heights that do not")
    read.settle()
    return h


def rayleigh_quotient(mass: ArrayLike, stiffness: ArrayLike, shape: ArrayLike) -> float:
    """The square of the circular frequency that a guessed shape gives; never below that of the first mode.

    >>> rayleigh_quotient([1.0, 1.0], shear_building([1.0, 1.0]), [1.0, 2.0])
    0.4
    """
    read = Arguments("rayleigh_quotient")
    m, k = read.numbers("mass", mass, (1, 2)), read.numbers("stiffness", stiffness, (2,))
    d = read.numbers("shape", shape, (1,))
    if k.shape != (len(d), len(d)) or len(m) != len(d):
        read.fault("shape", f"{len(k)} numbers, one for each freedom", f"{len(d)}")
    read.settle()
    inertia = d @ (m @ d) if m.ndim == 2 else d @ (m * d)
    return float(d @ k @ d / inertia)


def energy_period(mass: ArrayLike, forces: ArrayLike, displacements: ArrayLike) -> float:
    """The period 2 pi sqrt(sum m d^2/sum F d) of a structure that forces F displace by d.

    >>> round(energy_period([1.0] * 5, [1.0] * 5, [5, 9, 12, 14, 15]), 4)
    21.9462
    """
    read = Arguments("energy_period")
    m, p, d = (
        read.numbers(name, values, (1,))
        for name, values in (("mass", mass), ("forces", forces), ("displacements", displacements))
    )
    if not m.shape == p.shape == d.shape:
        read.fault("forces", "as many as masses and displacements", f"{p.size} against {m.size} and {d.size}")
    elif p @ d <= 0:
        read.fault("displacements", "displacements in the direction of the forces", "work that is not above 0")
    read.settle()
    return float(2 * np.pi * np.sqrt(m @ d**2 / (p @ d)))


def rayleigh_damping(damping: float, first: float, second: float) -> tuple[float, float]:
    """The factors of mass and stiffness that give a damping ratio at two circular frequencies.

    >>> rayleigh_damping(0.05, 1.0, 4.0)
    (0.08, 0.02)
    """
    read = Arguments("rayleigh_damping")
    read.between("damping", damping, 0, 1, (0,))
    for name, value in (("first", first), ("second", second)):
        read.positive(name, value, (0,))
    read.settle()
    return 2 * damping * first * second / (first + second), 2 * damping / (first + second)
