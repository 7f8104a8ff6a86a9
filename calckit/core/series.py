"""Declarations for one of a numbered series: `F_xn`, declared once for mode n, becomes `F_x3` for mode 3.

Knows how the letter n at the end of a name gives way to a number. Must not know what is numbered.
"""

from __future__ import annotations

import re
from collections.abc import Collection, Mapping
from dataclasses import replace

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol


def numbered(name: str, number: int | str) -> str:
    """The name of one of a series.

    >>> numbered("F_xn", 3), numbered("F_xn", "t")
    ('F_x3', 'F_xt')
    """
    return name.removesuffix("n") + str(number)


def symbol_of(symbol: Symbol, number: int) -> Symbol:
    """The symbol of one of a series; "mode n" in its meaning becomes "mode 3".

    >>> symbol_of(Symbol("phi_n", "shape of mode n"), 3)
    Symbol(name='phi_3', meaning='shape of mode 3', ...)
    """
    meaning = re.sub(r"\bn\b", str(number), symbol.meaning)
    return replace(symbol, name=numbered(symbol.name, number), meaning=meaning, sub=numbered(symbol.subscript, number))


def formula_of(formula: Formula, number: int, series: Collection[str] | Mapping[str, object]) -> Formula:
    """The formula of one of a series; `series` are the names in it that are numbered.

    >>> from calckit.core.record import Source
    >>> formula_of(Formula("F_xn", "C_sn*s_xn/h_n", Source("own")), 2, {"F_xn", "C_sn", "s_xn"}).text
    'C_s2*s_x2/h_n'
    """

    def renamed(text: str) -> str:
        return re.sub(r"\b[A-Za-z]\w*\b", lambda m: numbered(m[0], number) if m[0] in series else m[0], text)

    return Formula(renamed(formula.result), renamed(formula.text), formula.source, sets=formula.sets)
