"""Questions that numbers can decide: what a step found comes before what the engineer answered.

Knows how the two are named: the answer `H2`, the finding `H2_found`. Must not know how a finding is made.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from calckit.core.scope import Scope


IRREGULARITIES = ("H1a", "H1b", "H2", "H3", "H4", "H5", "V1a", "V1b", "V2", "V3", "V4", "V5a", "V5b")
"""Types of Tables 12.3-1 and 12.3-2."""


def finding(scope: Scope, name: str) -> str | None:
    """The word for a question, by the numbers or else as answered; None if neither says."""
    return scope.word(f"{name}_found") or scope.word(name)


def present(scope: Scope, names: Sequence[str]) -> tuple[list[str], list[str]]:
    """The types among `names` that are present, and those that nothing says anything of."""
    words = {name: finding(scope, name) for name in names}
    return [n for n, word in words.items() if word == "yes"], [n for n, word in words.items() if word is None]


def with_findings(names: Sequence[str]) -> tuple[str, ...]:
    """The names and those of their findings, for what a line rests on."""
    return (*names, *(f"{name}_found" for name in names))
