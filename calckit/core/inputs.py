"""Reading what the user types for a symbol: numbers with units, plain numbers, words, "none: reason".

Knows how a raw value becomes value, unit and numeral, and every way in which it can be wrong. Must not know lines.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from calckit import units
from calckit.core.digits import typed_numeral
from calckit.core.symbol import KINDS, Symbol, check_name
from calckit.errors import Fault, UnitError, nearest_first

NONE = "none"
_SAMPLES = {"length": "62", "displacement": "1.5", "time": "0.8", "force": "450", "load effect": "450"}


@dataclass(frozen=True)
class Reading:
    """A value as read: number or word, unit, numeral as typed; `text` is the reason behind "none: reason"."""

    value: float | str
    unit: str = ""
    numeral: str = ""
    text: str = ""


def read(symbol: Symbol, raw: Any, system: str) -> Reading | Fault:
    """Read a raw value for `symbol`; a Fault says what is wrong with it.

    >>> read(Symbol("h_n", "structural height", "length", low=0, low_open=True), "18.90 m", "US")
    Reading(value=18.9, unit='m', numeral='18.90', text='')
    """
    if isinstance(raw, str) and raw.strip().partition(":")[0].strip() == NONE and NONE not in symbol.choices:
        reason = raw.partition(":")[2].strip()
        if reason:
            return Reading(NONE, text=reason)
        return _fault(symbol, 'a reason after "none:"', raw, 'write "none: why"')
    if symbol.kind == "words":
        return _word(symbol, raw)
    needed = _needed(symbol, system)
    if isinstance(raw, units.Quantity):
        quantity = raw
    elif isinstance(raw, int | float) and not isinstance(raw, bool):
        quantity = units.Quantity(float(raw), "", typed_numeral(raw) if math.isfinite(raw) else str(raw))
    elif isinstance(raw, str):
        try:
            quantity = units.parse(raw)
        except UnitError as error:
            return _fault(symbol, needed, raw, error.faults[0].cure or f"write it like {_example(symbol, system)}")
    else:
        return _fault(symbol, needed, repr(raw), f"write it like {_example(symbol, system)}")
    unit = symbol.unit(system)
    if not units.same_kind(quantity.unit, unit) and not (symbol.kind == "load effect" and _of_force(quantity.unit)):
        cure = (
            f"add the unit: {_example(symbol, system)}"
            if not quantity.unit
            else f"use a unit like {units.shown(unit) or 'none'}"
        )
        return _fault(symbol, needed, f"{quantity.numeral} {quantity.unit}".strip(), cure)
    shown = units.shown(quantity.unit)
    limits_hold = unit == quantity.unit or not (symbol.low or symbol.high)
    number = quantity.value if limits_hold else quantity.to(unit).value
    fault = symbol.fault(number, shown)
    if fault and unit != quantity.unit:
        typed = f"{quantity.numeral} {shown}"
        fault = _fault(symbol, f"{fault.needed} {units.shown(unit)}", typed, fault.cure)
    return fault or Reading(quantity.value, quantity.unit, quantity.numeral)


def _of_force(unit: str) -> bool:
    """Whether a unit is one of force, alone or times a power of length."""
    mass, _, time = units.powers(unit)
    return (mass, time) == (1, -2)


def own_symbol(name: str, meaning: str, unit: str, raw: Any = None, words: bool = False) -> Symbol | Fault:
    """A symbol that no standard declares: needs a meaning, and a unit from `unit` or from the typed value."""
    check_name(name)
    if not meaning.strip():
        return Fault(name, "a meaning, as no standard declares it", "none", 'add meaning="..."')
    if words:
        return Symbol(name, meaning, "words")
    if not unit and isinstance(raw, str):
        try:
            unit = units.parse(raw).unit
        except UnitError as error:
            if not raw.strip()[:1].isdigit():
                return Symbol(name, meaning, "words")
            cure = error.faults[0].cure or "words start with a letter"
            raise UnitError("value", [Fault(name, "a number and a unit the kit knows", raw, cure, meaning)]) from None
    unit = units.canonical(unit)
    kind = next((kind for kind, pair in KINDS.items() if unit and unit in pair), "other" if unit else "number")
    return Symbol(name, meaning, kind, own_unit=unit)


def _word(symbol: Symbol, raw: Any) -> Reading | Fault:
    word = str(raw).strip()
    if not word:
        return _fault(symbol, "a word", "blank", f"write one of {', '.join(symbol.choices)}" if symbol.choices else "")
    if symbol.choices and word not in symbol.choices:
        near = nearest_first(word, symbol.choices)
        return _fault(symbol, f"one of {', '.join(symbol.choices)}", word, f"did you mean {near[0]!r}?")
    return Reading(word)


def _needed(symbol: Symbol, system: str) -> str:
    unit = symbol.unit(system)
    what = f"a {symbol.kind if symbol.kind != 'other' else 'quantity'} with its unit" if unit else "a plain number"
    return f"{what}, {symbol.range_text()}" if symbol.range_text() else what


def _example(symbol: Symbol, system: str) -> str:
    unit = symbol.unit(system)
    return f'"{_SAMPLES.get(symbol.kind, "10")} {unit}"' if unit else "1.25"


def _fault(symbol: Symbol, needed: str, given: str, cure: str) -> Fault:
    return Fault(symbol.name, needed, str(given), cure, symbol.meaning)
