"""ASCE/SEI 7: seismic loads on buildings by equivalent lateral forces, edition 7-16.

Knows which editions are offered and what they are made of; the rooms are hazard, structure, forces, summary.
"""

from typing import Any

from calckit.core.standard import Standard
from calckit.standards.asce7.summary import SUPPLIERS, summaries
from calckit.standards.asce7.symbols import SYMBOLS

FIELD_OF_USE = (
    "Equivalent lateral forces of ASCE/SEI 7-16, chapters 11 and 12, for buildings: design ordinates, design category, "
    "system factors, period, base shear, distribution over the height, story drift, stability.",
    "Irregularities, redundancy, diaphragm class, torsion and the contents of the seismic weight are the engineer's "
    "answers; the kit does not compute them.",
    "Values and rules marked as to be confirmed were not read in the printed standard by the kit's authors.",
    "The kit is held against published examples; the command calckit verify asce7 runs these checks again, with their "
    "sources, and names what no example reaches.",
)
NOT_COVERED = (
    "computed torsion, redundancy and irregularities; diaphragms, collectors, load combinations, foundations; "
    "nonstructural components (chapter 13)",
    "modal and response history analysis (12.9, chapter 16); soil-structure interaction (chapter 19)",
    "the simplified method (12.14), nonbuilding structures (chapter 15), isolated and damped structures (chapters 17 "
    "and 18), existing buildings",
    "the limit on S_DS of 12.8.1.3, periods of masonry and concrete shear walls by eq. 12.8-9, combined systems",
    "the waivers of vertical irregularities by drift ratio and number of stories: they belong to the engineer's answer",
    "local amendments, unless entered as overrides with their document",
)


def _steps(scope: Any) -> Any:
    from calckit.standards.asce7.steps import Steps

    return Steps(scope)


EDITIONS = {
    "ASCE 7-16": Standard(
        "asce7", "ASCE 7-16", "ASCE/SEI 7-16", SYMBOLS, _steps, summaries, SUPPLIERS, FIELD_OF_USE, NOT_COVERED
    )
}
"""The editions offered, by what the title block says."""
