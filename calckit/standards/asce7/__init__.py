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
    "system factors, period, base shear, distribution over the height, story drift, stability.",
    "Modal response spectrum analysis (12.9.1) from the modes of a stick model or of a three-dimensional analysis.",
    "Irregularities, redundancy, diaphragm class, torsion and the contents of the seismic weight are the engineer's "
    "answers; the kit does not compute them.",
    "Values and rules marked as to be confirmed were not read in the printed standard by the kit's authors.",
)
NOT_COVERED = (
    "computed torsion, redundancy and irregularities; diaphragms, collectors, load combinations, foundations; "
    "nonstructural components (chapter 13)",
    "response history analysis (12.9.2, chapter 16); the lumping of short modes into one rigid mode (12.9.1.1); "
    "soil-structure interaction (chapter 19)",
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
