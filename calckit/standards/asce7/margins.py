"""How near a value stands to the next limit: what the margins of the lines say.

Knows how a margin is worded and put on a line. Must not know formulas or steps.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.record import Margin

if TYPE_CHECKING:
    from calckit.core.handle import Handle


def to_limit(name: str, value: float, limit: float, words: str) -> Margin:
    """The distance of `value` from `limit`, in percent of the limit.

    >>> margin = to_limit("S_1", 0.57, 0.6, "0.6, from which a second lower limit of C_s applies")
    >>> margin.shown, margin.to
    ('S_1 5.0 %', 'below 0.6, from which a second lower limit of C_s applies')
    """
    percent = abs(value / limit - 1) * 100
    return Margin(f"{'below' if value < limit else 'above'} {words}", percent, "%", f"{name} {percent:.1f} %")


def put_on_check(made: Handle, name: str, words: str) -> Handle:
    """Put on a check the distance of its ratio from 1; over a list at the row that is worked. Returns the check."""
    line = made.line
    if isinstance(line.value, float):
        at = f" at {line.row}" if line.row else ""
        line.margin = to_limit(f"{name}{at}", line.value, 1.0, words)
    return made
