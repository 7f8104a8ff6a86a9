"""Arguments of the array functions, read and refused in one place, all bad ones of a call at once.

Knows shapes and ranges. Must not know what is computed.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from calckit.errors import Fault, InputError

Array = NDArray[np.float64]


class Arguments:
    """The arguments of one call; `settle` raises InputError with every fault found.

    >>> read = Arguments("modes")
    >>> _ = read.positive("period", [1.0, -2.0]), read.between("damping", 1.2, 0, 1)
    >>> read.settle()
    Traceback (most recent call last):
    calckit.errors.InputError: modes: period: needed numbers above 0; given -2 ...
    """

    def __init__(self, where: str) -> None:
        self.where = where
        self.faults: list[Fault] = []

    def fault(self, name: str, needed: str, given: str, cure: str = "") -> None:
        """Note that an argument is wrong."""
        self.faults.append(Fault(name, needed, given, cure))

    def numbers(self, name: str, values: ArrayLike, dimensions: tuple[int, ...] = (0, 1)) -> Array:
        """Finite numbers with one of these numbers of dimensions."""
        try:
            array = np.asarray(values, dtype=float)
        except (TypeError, ValueError):
            self.fault(name, "numbers", type(values).__name__, "pass an array or a list of numbers")
            return np.ones(1)
        if array.ndim not in dimensions or not array.size:
            listed = " or ".join(map(str, dimensions))
            self.fault(name, f"an array of {listed} dimensions with at least one number", f"shape {array.shape}")
            return np.ones((1,) * max(dimensions))
        if not np.isfinite(array).all():
            self.fault(name, "finite numbers", "NaN or infinity", "remove or replace them")
        return array

    def positive(self, name: str, values: ArrayLike, dimensions: tuple[int, ...] = (0, 1)) -> Array:
        """Numbers above 0."""
        array = self.numbers(name, values, dimensions)
        if (array <= 0).any():
            self.fault(name, "numbers above 0", f"{array.min():g}")
        return array

    def between(
        self, name: str, values: ArrayLike, low: float, below: float, dimensions: tuple[int, ...] = (0, 1)
    ) -> Array:
        """Numbers not below `low` and below `below`."""
        array = self.numbers(name, values, dimensions)
        if (array < low).any() or (array >= below).any():
            wrong = array[(array < low) | (array >= below)].flat[0]
            self.fault(name, f"numbers from {low:g} to below {below:g}", f"{wrong:g}")
        return array

    def choice(self, name: str, value: str, choices: tuple[str, ...]) -> str:
        """One of the words."""
        if value not in choices:
            self.fault(name, f"one of {', '.join(choices)}", repr(value))
            return choices[0]
        return value

    def settle(self) -> None:
        """Raise if anything was wrong."""
        if self.faults:
            raise InputError(self.where, self.faults)
