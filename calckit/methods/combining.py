"""Combination of modal values as lines: correlation of the modes, and what each quantity combines to.

Knows the rules and how a combined value is held against the declared coefficient. Must not know what is combined.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from calckit import dynamics, units
from calckit.core.handle import Handles
from calckit.core.record import Source
from calckit.core.series import numbered, symbol_of
from calckit.core.symbol import Symbol
from calckit.errors import Fault, InputError
from calckit.methods import formulas
from calckit.methods.analysis import LIMIT, Method, tables, write_list, write_number, write_residual
from calckit.methods.symbols import OF_MODE

if TYPE_CHECKING:
    from calckit.core.writer import Writer

WORDS = {
    "CQC": "complete quadratic combination of the modal values with their signs",
    "SRSS": "square root of the sum of the squares of the modal values",
    "ABS": "sum of the absolute modal values, an upper bound",
}
"""The rules in words."""
_SOURCES = {"CQC": formulas.CQC, "SRSS": Source("structural dynamics", "square root of the sum of squares"),
            "ABS": Source("structural dynamics", "sum of absolute values")}  # fmt: skip


def correlation(scope: Writer) -> Handles:
    """The correlation coefficients of all pairs of modes, and one pair by the declared formula."""
    faults = [scope.missing("T_m")] if scope.find("T_m") is None else []
    faults += [scope.missing("zeta")] if scope.number("zeta") is None else []
    if faults:
        raise InputError("methods.correlation", faults)
    periods = _listed(scope, "T_m")
    rows = scope["T_m"].rows
    with scope.step():
        found = dynamics.correlation(1 / periods, scope.number("zeta") or 0.0)
        method = Method("correlation of each pair of modes, one damping ratio for all", formulas.CQC, ("T_m", "zeta"))
        made = Handles()
        for number in range(1, len(rows) + 1):
            symbol = symbol_of(OF_MODE["rho_n"], number)
            scope.calc.own_symbols[symbol.name] = symbol
            made.append(write_list(scope, symbol.name, found[:, number - 1], "", rows, method))
        tables(scope, "correlation", "Correlation of the modes", [handle.line.symbol for handle in made], "Mode")
        if len(rows) > 1:
            pair = (Symbol("r_12", "frequency of mode 1 over that of mode 2", sub="12"),
                    Symbol("rho_12", "correlation of modes 1 and 2", sub="12"))  # fmt: skip
            scope.calc.own_symbols |= {symbol.name: symbol for symbol in pair}
            scope.compute(formulas.frequency_ratio(1, 2))
            scope.compute(formulas.correlation(1, 2))
            scope.require(
                f'abs(level(rho_1, "2") - rho_12) <= {LIMIT}',
                title="Correlation of modes 1 and 2 worked in full agrees with the analysis", source=formulas.CQC,
                id_="worked_pair",
            )  # fmt: skip
        return made


def combine(scope: Writer, names: Sequence[str], rule: str, into: str) -> Handles:
    """Combine quantities by one rule; each line says which modal lines it rests on."""
    faults = [] if rule in WORDS else [Fault("rule", f"one of {', '.join(WORDS)}", repr(rule))]
    if into and len(names) != 1:
        faults.append(Fault("into", "one quantity where the result is named", f"{len(names)} quantities"))
    faults += [Fault("quantity", 'a name that ends with n or m, like "V_xn"', repr(name))
               for name in names if not name.endswith(("n", "m"))]  # fmt: skip
    needed = ["T_m", *(["rho_1"] if rule == "CQC" else [])]
    faults += [scope.missing(name) for name in needed if scope.find(name) is None]
    count = len(scope["T_m"].rows) if scope.find("T_m") else 0
    by_mode = {name: _lines_of(name, count) for name in names}
    faults += [scope.missing(each) for lines in by_mode.values() for each in lines if scope.find(each) is None]
    if faults:
        raise InputError("methods.combine", faults)
    results = [into or f"{name[:-1]}t" for name in names]
    with scope.step():
        pairs = zip(names, results, strict=True)
        apart = [_combined(scope, name, by_mode[name], rule, result) for name, result in pairs]
        if rule == "CQC":
            _write_residual(scope, results, max(apart))
        return Handles(scope[result] for result in results)


def _lines_of(name: str, count: int) -> list[str]:
    """The lines that hold the values by mode: one list over modes, or one list over levels for each mode."""
    return [name] if name.endswith("m") else [numbered(name, number) for number in range(1, count + 1)]


def _combined(scope: Writer, name: str, lines: Sequence[str], rule: str, into: str) -> float:
    """Write what one quantity combines to; returns how far it is from the declared coefficient's sum (CQC)."""
    unit = scope[lines[0]].unit
    values = np.array([_listed(scope, each, unit) for each in lines])
    values = values[0] if name.endswith("m") else values  # (modes, ...): signed
    first = scope.symbol(lines[0])
    if into not in scope.calc.standard.symbols:
        meaning = first.meaning.replace("in mode 1", "of the modes combined").replace("of each mode", "of the modes")
        kind = "other" if unit else "number"
        known = Symbol(into, f"{meaning}, {rule}", kind, sub=into.partition("_")[2], own_unit=unit)
        scope.calc.own_symbols[into] = known
    rests = ("T_m", *(("zeta",) if rule == "CQC" else ()), *lines)
    method = Method(WORDS[rule], _SOURCES[rule], rests)
    frequencies, zeta = 1 / _listed(scope, "T_m"), scope.number("zeta") or 1.0
    found = dynamics.combine(values, frequencies, zeta, rule)
    if found.ndim:
        write_list(scope, into, found, unit, scope[lines[0]].rows, method)
    else:
        write_number(scope, into, float(found), unit, method)
    return _apart(values, found, frequencies, zeta) if rule == "CQC" else 0.0


def _write_residual(scope: Writer, results: Sequence[str], value: float) -> None:
    """One residual for all quantities of a call, named after the first."""
    id_ = f"r_{results[0].replace('_', '')}"
    listed = ", ".join(scope.plain(result) for result in results)
    meaning = f"residual of {listed}: largest difference from the sum with the declared coefficient, not above"
    scope.calc.own_symbols[id_] = Symbol(id_, meaning)
    write_residual(scope, id_, value, Method("double sum over all pairs of modes", formulas.CQC, tuple(results)))


def _apart(values: np.ndarray, found: np.ndarray, frequencies: np.ndarray, zeta: float) -> float:
    """How far a combined value is from the double sum with the declared coefficient, over the largest value."""
    square = np.zeros(values.shape[1:])
    for i, first in enumerate(values):
        for j, second in enumerate(values):
            pair = {"zeta": zeta, "r_12": float(frequencies[i] / frequencies[j])}
            square += formulas.correlation(1, 2).value(pair) * first * second
    largest = float(np.abs(found).max())
    return float(np.abs(found - np.sqrt(np.maximum(square, 0))).max()) / largest if largest else 0.0


def _listed(scope: Writer, name: str, unit: str | None = None) -> np.ndarray:
    """The values of a list line, in its own unit or in `unit`."""
    line = scope[name].line
    if not isinstance(line.value, list):
        raise InputError("methods", [Fault(name, "a list over modes or levels", str(line.shown), "", line.meaning)])
    return np.array([units.convert(value, line.unit, line.unit if unit is None else unit) for value in line.value])
