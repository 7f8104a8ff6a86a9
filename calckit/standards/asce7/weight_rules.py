"""What the take-off of the effective seismic weight declares beyond the shared symbols.

Knows symbols and formulas of 12.7.2; those of one kind of area are declared once and numbered for each kind. Must not
know lines or how a take-off is typed.
"""

from __future__ import annotations

import re
from collections.abc import Collection
from dataclasses import replace

from calckit.core.formula import Formula
from calckit.core.symbol import Symbol
from calckit.standards.asce7.clauses import rule

_CLAUSE = rule("12.7.2")

TYPED = (
    Symbol("A_u", "area", "area", low=0),
    Symbol("q_D", "dead load on each unit of area, finishes and planting included", "pressure", sub="D", low=0),
    Symbol("q_P", "partition load of the floor design, 0 where it has none", "pressure", sub="P", low=0),
    Symbol("q_L", "live load of storage, 0 elsewhere and in garages", "pressure", sub="L", low=0),
    Symbol("p_f", "snow load of the flat roof", "pressure", low=0),
    Symbol("W_e", "operating weight of permanent equipment", "force", low=0),
    Symbol("W_d", "other dead load: walls, cladding, framing", "force", low=0),
)
"""What a row of a take-off may hold; the first two are always there."""

OF_A_KIND = (
    *TYPED,
    Symbol("q_Pe", "partition load that counts", "pressure", sub="P,e"),
    Symbol("q_Se", "share of the snow load that counts", "pressure", sub="S,e"),
    Symbol("w_u", "effective seismic weight without storage", "force"),
)
"""Symbols that are numbered for each kind of area."""

SYMBOLS = (
    *OF_A_KIND,
    Symbol("q_Pmin", "least partition load", "pressure", sub="P,min"),
    Symbol("p_flim", "snow load above which a share counts", "pressure", sub="f,lim"),
    Symbol("r_S", "share of the snow load that counts above it", sub="S", high=1),
    Symbol("storage_share", "how 25 % of the storage live load is counted: at every level, or left out at levels where "
           "it adds no more than 5 %", "words", choices=("counted", "left out up to 5 %")),
    Symbol("w_0", "effective seismic weight of level x without storage", "force", sub="x,0"),
    Symbol("w_s", "share of the storage live load at level x", "force", sub="x,s"),
)  # fmt: skip

PARTITIONS = Formula("q_Pe", "max(q_P, q_Pmin) if q_P > 0*q_Pmin else q_P", _CLAUSE)
SNOW = Formula("q_Se", "(r_S if p_f > p_flim else 0)*p_f", _CLAUSE)
W_X_COUNTED = Formula("w_x", "w_0 + w_s", _CLAUSE)
W_X_LEFT_OUT = Formula("w_x", "w_0 + w_s if w_s > 0.05*w_0 else w_0", _CLAUSE)


def numbered(name: str, kind: int) -> str:
    """A symbol's name for one kind of area.

    >>> numbered("q_D", 2)
    'q_D2'
    """
    return f"{name}{kind}"


def symbols_of(kind: int, words: str) -> dict[str, Symbol]:
    """The symbols of one kind of area by their numbered names; `words` is what the kind is called."""
    return {
        numbered(each.name, kind): replace(
            each, name=numbered(each.name, kind), meaning=f"{words}: {each.meaning}", sub=f"{each.subscript},{kind}"
        )
        for each in OF_A_KIND
    }


def of_kind(formula: Formula, kind: int) -> Formula:
    """A formula declared above, for one kind of area.

    >>> of_kind(SNOW, 1).text
    '(r_S if p_f1 > p_flim else 0)*p_f1'
    """
    own = {each.name for each in OF_A_KIND}

    def renamed(text: str) -> str:
        return re.sub(r"\w+", lambda word: numbered(word[0], kind) if word[0] in own else word[0], text)

    return Formula(renamed(formula.result), renamed(formula.text), formula.source)


def weight_of(columns: Collection[str]) -> Formula:
    """The weight of one area from the columns that its take-off has.

    >>> weight_of(["A_u", "q_D"]).text, weight_of(["A_u", "q_D", "q_P", "W_d"]).text
    ('A_u*q_D', 'A_u*(q_D + q_Pe) + W_d')
    """
    loads = ["q_D", *(name for name, of in (("q_Pe", "q_P"), ("q_Se", "p_f")) if of in columns)]
    spread = f"({' + '.join(loads)})" if len(loads) > 1 else loads[0]
    return Formula("w_u", " + ".join([f"A_u*{spread}", *(name for name in ("W_e", "W_d") if name in columns)]), _CLAUSE)


def diaphragm_weight(kinds: Collection[int]) -> Formula:
    """The weight of a level without some kinds of area: the walls parallel to the force.

    >>> diaphragm_weight([4]).text
    'w_x - w_u4'
    """
    return Formula("w_px", " - ".join(["w_x", *(numbered("w_u", kind) for kind in kinds)]), rule("12.10.1.1"))


def sum_over(result: str, term: str, kinds: Collection[int], factor: str = "") -> Formula:
    """The sum of a term, written for one kind of area, over several kinds.

    >>> sum_over("w_s", "A_u*q_L", [1, 3], "0.25").text
    '0.25*(A_u1*q_L1 + A_u3*q_L3)'
    """
    terms = " + ".join(of_kind(Formula(result, term, _CLAUSE), kind).text for kind in kinds)
    return Formula(result, f"{factor}*({terms})" if factor else terms, _CLAUSE)
