"""ASCE/SEI 7: seismic loads on buildings by equivalent lateral forces, editions 7-16 and 7-22.

Knows which editions are offered and what they are made of; the rooms are hazard, structure, forces, summary.
"""

from typing import Any

from calckit.core.standard import Standard
from calckit.standards.asce7.clauses import NAMES, in_7_22
from calckit.standards.asce7.declared import SYMBOLS
from calckit.standards.asce7.summary import SUPPLIERS, summaries

FIELD_OF_USE = (
    "Equivalent lateral forces of ASCE/SEI 7, chapters 11 and 12, for buildings: design ordinates, design category, "
    "system factors, period, base shear, distribution over the height, story drift, stability.",
    "Irregularities, redundancy, diaphragm class, torsion and the contents of the seismic weight are the engineer's "
    "answers; the kit does not compute them.",
    "Values and rules marked as to be confirmed were not read in the printed standard by the kit's authors.",
)
NOT_COVERED = (
    "computed torsion, redundancy and irregularities; diaphragms, collectors, load combinations, foundations; "
    "nonstructural components (chapter 13)",
    "modal and response history analysis (12.9, chapter 16); soil-structure interaction (chapter 19)",
    "the simplified method (12.14), nonbuilding structures (chapter 15), isolated and damped structures (chapters 17 "
    "and 18), existing buildings",
    "periods of masonry and concrete shear walls by eq. 12.8-9, combined systems",
    "the waivers of vertical irregularities by drift ratio and number of stories: they belong to the engineer's answer",
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
