"""Steps owned by no standard, which put structural dynamics and ground motions into lines.

Knows which steps and symbols there are. Must not know any standard: a step takes inputs by symbol and writes symbols
that a standard's own steps may take.
"""

from typing import Any

from calckit.methods.symbols import SUPPLIERS, SYMBOLS

__all__ = ["SUPPLIERS", "SYMBOLS", "attached"]


def attached(scope: Any) -> Any:
    """The steps of a calculation or part, which hang on it as `methods`."""
    from calckit.methods.steps import Methods

    return Methods(scope)
