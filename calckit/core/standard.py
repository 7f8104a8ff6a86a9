"""What a standard gives to the core: one edition's names, symbols, steps and statements.

Knows where standards and the methods owned by none are found. Must not know any one of them.
"""

from __future__ import annotations

import importlib
import pkgutil
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from functools import cache
from typing import Any

from calckit.core.record import Source, Summary
from calckit.core.symbol import Symbol
from calckit.errors import UnknownNameError


@dataclass(frozen=True)
class Standard:
    """One edition of a family.

    `family` is the folder and the name under which steps hang on a part; `edition` what the title block says
    ("ASCE 7-16"); `name` what sources print ("ASCE/SEI 7-16"). `steps(scope)` gives the steps of a part,
    `summaries(calc)` the tables of the first sheets, `suppliers` what supplies a symbol that is missing.
    `in_this_edition(source)` is a source as this edition prints it, where declarations are shared between editions.
    """

    family: str
    edition: str
    name: str
    symbols: Mapping[str, Symbol]
    steps: Callable[[Any], Any]
    summaries: Callable[[Any], list[Summary]]
    suppliers: Mapping[str, str] = field(default_factory=dict)
    field_of_use: tuple[str, ...] = ()
    not_covered: tuple[str, ...] = ()
    in_this_edition: Callable[[Source], Source] = field(default=lambda source: source)

    def source(self, where: str = "", equation: str = "", obtained: str = "") -> Source:
        """A source in this edition."""
        return Source(self.name, where, equation, obtained, standard=True)


@cache
def editions() -> dict[str, Standard]:
    """Every edition offered, by what the title block says; to each belong the symbols of the methods."""
    package = importlib.import_module("calckit.standards")
    found: dict[str, Standard] = {}
    for module in pkgutil.iter_modules(package.__path__, "calckit.standards."):
        found |= importlib.import_module(module.name).EDITIONS
    shared = methods()
    return {
        name: replace(
            standard,
            symbols={**shared.SYMBOLS, **standard.symbols},
            suppliers={**shared.SUPPLIERS, **standard.suppliers},
        )
        for name, standard in found.items()
    }


def methods() -> Any:
    """The package of steps owned by no standard: `SYMBOLS`, `SUPPLIERS` and `attached(scope)`."""
    return importlib.import_module("calckit.methods")


def edition(text: str) -> Standard:
    """The edition named in a title block; UnknownNameError lists those offered."""
    if text not in editions():
        raise UnknownNameError("standard", text, editions())
    return editions()[text]
