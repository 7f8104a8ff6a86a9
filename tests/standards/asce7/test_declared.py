"""The rooms of declarations do not hide each other's names."""

from __future__ import annotations

from collections import Counter

from calckit.core.formula import Formula
from calckit.standards.asce7.declared import ROOMS


def test_every_symbol_is_declared_once() -> None:
    names = Counter(symbol.name for room in ROOMS for symbol in getattr(room, "SYMBOLS", ()))
    assert len(names) > 100
    assert [name for name, times in names.items() if times > 1] == []


def test_every_formula_has_a_name_of_its_own() -> None:
    names = Counter(name for room in ROOMS for name, it in vars(room).items() if isinstance(it, Formula))
    assert len(names) > 50
    assert [name for name, times in names.items() if times > 1] == []
