"""Holding an error against its message, and the calculation against what it was before."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import pytest

from calckit import Calc
from calckit.errors import CalckitError

UNITS = r"write one of m, mm, cm, ft, in, kg"
"""How the cure of an unknown unit starts."""


def refused(calc: Calc, kind: type[CalckitError], message: str, work: Callable[[], Any]) -> CalckitError:
    """The error of `work`, which must match `message` and leave the calculation as it was."""
    before = (dict(calc.lines.entries), dict(calc.lines.tables), list(calc.lines.blocks))
    with pytest.raises(kind, match=message) as caught:
        work()
    assert (calc.lines.entries, calc.lines.tables, calc.lines.blocks) == before
    return caught.value
