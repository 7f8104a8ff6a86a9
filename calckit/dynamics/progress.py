"""A bar on the terminal for work that takes more than two seconds.

Knows time and the error stream. Must not know what is worked; where there is no terminal it says nothing.
"""

from __future__ import annotations

import sys
from time import monotonic

PATIENCE = 2.0
"""Seconds before the bar is shown."""
_WIDTH = 40


class Progress:
    """How far work of `total` pieces has come.

    >>> bar = Progress("spectra", 4)
    >>> bar.advance(4)
    >>> bar.done, bar.shown
    (4, False)
    """

    def __init__(self, what: str, total: int) -> None:
        self.what, self.total, self.done, self.shown = what, total, 0, False
        self._since = monotonic()

    def advance(self, pieces: int) -> None:
        """Note that more pieces are worked; at the end the bar is taken away."""
        self.done += pieces
        if not sys.stderr.isatty() or monotonic() - self._since < PATIENCE:
            return
        self.shown = True
        filled = round(_WIDTH * self.done / self.total)
        bar = f"{self.what} [{'=' * filled}{' ' * (_WIDTH - filled)}] {100 * self.done // self.total} %"
        sys.stderr.write("\r" + (bar if self.done < self.total else " " * len(bar) + "\r"))
        sys.stderr.flush()
