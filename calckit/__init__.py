"""Seismic load calculations in Jupyter that a second engineer can check line by line.

Knows only the names a user imports; everything behind them is loaded at first use.
"""

from typing import TYPE_CHECKING, Any

__version__ = "0.1.0"
__all__ = ["Calc", "__version__"]

if TYPE_CHECKING:
    from calckit.core.calc import Calc


def __getattr__(name: str) -> Any:
    if name == "Calc":
        from calckit.core.calc import Calc

        return Calc
    raise AttributeError(f"module 'calckit' has no attribute {name!r}")
