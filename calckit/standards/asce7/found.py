"""Questions that numbers can decide: what a step found comes before what the engineer answered.

Knows how the two are named: the answer `H2`, the finding `H2_found`. Must not know how a finding is made.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from calckit.core.scope import Scope


def found(scope: Scope, name: str) -> str | None:
    """The word for a question, by the numbers or else as answered; None if neither says."""
    return scope.word(f"{name}_found") or scope.word(name)


def with_findings(names: Sequence[str]) -> tuple[str, ...]:
    """The names and those of their findings, for what a line rests on."""
    return (*names, *(f"{name}_found" for name in names))
