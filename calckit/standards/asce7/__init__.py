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
    "Seismic forces on nonstructural components (chapter 13) and their anchors, from a row of the tables or from typed "
    "factors. Whether a component is exempt is the engineer's answer: the kit does not look at it.",
    "Values and rules marked as to be confirmed were not read in the printed standard by the kit's authors.",
)
NOT_COVERED = (
    "computed torsion, redundancy and irregularities; diaphragms, collectors, load combinations, foundations",
    "of chapter 13: exemptions, relative displacements, heavy components that act with the structure, distribution "
    "systems beyond their force, design of anchors, qualification of equipment",
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


def _edition(name: str, **how: Any) -> Standard:
    return Standard(
        "asce7", name, NAMES[name], SYMBOLS, _steps, summaries, SUPPLIERS, FIELD_OF_USE, NOT_COVERED, **how
    )


EDITIONS = {"ASCE 7-16": _edition("ASCE 7-16"), "ASCE 7-22": _edition("ASCE 7-22", in_this_edition=in_7_22)}
"""The editions offered, by what the title block says."""
