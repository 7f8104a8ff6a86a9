"""ASCE/SEI 7: seismic loads on buildings by equivalent lateral forces and by modes, editions 7-16 and 7-22.

Knows which editions are offered and what they are made of; the rooms are hazard, structure, forces, modal, summary.
"""

from typing import Any

from calckit.core.standard import Standard
from calckit.standards.asce7.clauses import NAMES, in_7_22
from calckit.standards.asce7.declared import SYMBOLS
from calckit.standards.asce7.summary import SUPPLIERS, summaries

FIELD_OF_USE = (
    "Equivalent lateral forces of ASCE/SEI 7, chapters 11 and 12, for buildings: design ordinates, design category, "
    "system factors, period, base shear, distribution over the height, story drift, stability; diaphragm and collector "
    "forces (12.10.1, 12.10.2), load effects and combinations (12.4, 2.3.6, 2.4.5), reactions at the base, structural "
    "walls out of plane and their anchorage (12.11.1, 12.11.2.1).",
    "Irregularities, redundancy, the class of diaphragms, torsion and the distribution in plan follow from numbers "
    "where they are given, else from the engineer's answers; without a take-off, what the seismic weight holds "
    "is the engineer's answer.",
    "Seismic forces on nonstructural components (chapter 13) and their anchors, from a row of the tables or from typed "
    "factors. Whether a component is exempt is the engineer's answer: the kit does not look at it.",
    "Modal response spectrum analysis (12.9.1) from the modes of a stick model or of a three-dimensional analysis.",
    "Values and rules marked as to be confirmed were not read in the printed standard by the kit's authors.",
    "The kit is held against published examples; the command calckit verify asce7 runs these checks again, with their "
    "sources, and names what no example reaches.",
)
NOT_COVERED = (
    "of chapter 13: exemptions, relative displacements, heavy components that act with the structure, distribution "
    "systems beyond their force, design of anchors, qualification of equipment",
    "the design of elements: collectors and chords, columns, walls, anchors, foundations; the further rules of 12.11.2 "
    "for anchorage in design categories C to F; the alternative diaphragm methods (12.10.3, 12.10.4); what is "
    "excepted for light frame in 12.10.2",
    "response history analysis (12.9.2, chapter 16); the lumping of short modes into one rigid mode (12.9.1.1); "
    "soil-structure interaction (chapter 19)",
    "the simplified method (12.14), nonbuilding structures (chapter 15), isolated and damped structures (chapters 17 "
    "and 18), existing buildings",
    "combined systems",
    "local amendments, unless entered as overrides with their document",
)


def _steps(scope: Any) -> Any:
    from calckit.standards.asce7.steps import Steps

    return Steps(scope)


OF_EDITION: dict[str, tuple[tuple[str, ...], tuple[str, ...]]] = {
    "ASCE 7-16": (
        (
            "Ground motion of 7-16: mapped values with F_a and F_v of its tables, or S_DS and S_D1 of a site-specific "
            "study held against 80 % of the general procedure.",
        ),
        ("S_a(T) of a study in place of eqs 12.8-3 and 12.8-4 (21.4)",),
    ),
    "ASCE 7-22": (
        (
            "Ground motion of 7-22: S_S, S_1, S_MS, S_M1, T_L, PGA_M and the 22 ordinates as the printout for the site "
            "class gives them, or a site-specific study; the kit reads no map and has no F_a and F_v.",
            "Rules of 7-22 that the kit's authors are not sure of print NOT CHECKED or an open item; equation numbers "
            "of 7-22 that were not looked at are left out.",
        ),
        (
            "the limit on S_DS of 12.8.1.3, and category A by small S_S and S_1 alone: not known for this edition",
            "the multi-period spectrum beyond 10 s where T_L is below 10 s",
        ),
    ),
}
"""What only one edition adds to the field of use and to what is not covered."""


def _edition(name: str, **how: Any) -> Standard:
    used, left_out = OF_EDITION[name]
    return Standard(
        "asce7", name, NAMES[name], SYMBOLS, _steps, summaries, SUPPLIERS, FIELD_OF_USE + used, NOT_COVERED + left_out,
        **how,
    )  # fmt: skip


EDITIONS = {"ASCE 7-16": _edition("ASCE 7-16"), "ASCE 7-22": _edition("ASCE 7-22", in_this_edition=in_7_22)}
"""The editions offered, by what the title block says."""
