"""Clauses of ASCE/SEI 7: as declared, numbered as in 7-16, and as each other edition prints them.

Knows the names of the editions and which clauses moved. Must not know formulas, symbols or lines.

What the editions share is declared once, with the clause and equation of 7-16. In another edition a declared source
prints under that edition's name: with the clause and equation known for it, else under the same clause without an
equation number, as the numbers shifted and were not looked at.
"""

from __future__ import annotations

from dataclasses import replace

from calckit.core.record import Source

NAMES = {"ASCE 7-16": "ASCE/SEI 7-16", "ASCE 7-22": "ASCE/SEI 7-22"}
"""What sources print, by what the title block says."""

DECLARED = NAMES["ASCE 7-16"]
NOT_LOOKED_AT = "memory, medium"
_IN_7_22 = {
    ("11.4.5", "11.4-3"): ("11.4.4", "11.4-1", "memory, high"),
    ("11.4.5", "11.4-4"): ("11.4.4", "11.4-2", "memory, high"),
    ("11.4.6", ""): ("11.4.5.2", "", "memory, high"),
    ("11.4.6", "11.4-5 to 11.4-7"): ("11.4.5.2", "11.4-3 to 11.4-5", "memory, high"),
    ("21.4", ""): ("21.4", "", "memory, high"),
    ("13.3.1", "13.3-2"): ("13.3.1", "13.3-2", "memory, high"),
    ("13.3.1", "13.3-3"): ("13.3.1", "13.3-3", "memory, high"),
}
"""Clause and equation of 7-16 -> clause, equation and how they were obtained for 7-22."""


def rule(where: str, equation: str = "", obtained: str = "memory, high") -> Source:
    """A clause as declared, with the numbers of 7-16."""
    return Source(DECLARED, where, equation, obtained, standard=True)


def rule_of(edition: str, where: str, equation: str = "", obtained: str = NOT_LOOKED_AT) -> Source:
    """A clause that one edition alone has; `edition` is what the title block says.

    >>> rule_of("ASCE 7-22", "11.4.5.1").text()
    'ASCE/SEI 7-22 11.4.5.1'
    """
    return Source(NAMES[edition], where, equation, obtained, standard=True)


def in_7_22(source: Source) -> Source:
    """A declared source as 7-22 prints it.

    >>> in_7_22(rule("12.8.1.1", "12.8-2", "found")).text(), in_7_22(rule("11.4.5", "11.4-3")).text()
    ('ASCE/SEI 7-22 12.8.1.1', 'ASCE/SEI 7-22 11.4.4, eq. 11.4-1')
    """
    if source.document != DECLARED:
        return source
    known = (source.where, "", NOT_LOOKED_AT)
    where, equation, obtained = _IN_7_22.get((source.where, source.equation), known)
    return replace(source, document=NAMES["ASCE 7-22"], where=where, equation=equation, obtained=obtained)
