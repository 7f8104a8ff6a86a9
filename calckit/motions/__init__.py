"""Ground motions on plain arrays in SI: read, corrected, measured, put into suites, or made from random numbers.

Knows motions and what must be said of them. Must not know lines, standards' spectra or drawings.
"""

from calckit.motions.content import FrequencyContent, frequency_content
from calckit.motions.correction import correct
from calckit.motions.measures import (
    Peaks,
    arias_intensity,
    cumulative_absolute_velocity,
    cumulative_energy,
    peaks,
    rotated_peak,
    rotated_spectrum,
    significant_duration,
    spectrum_intensity,
)
from calckit.motions.motion import Motion, integrals
from calckit.motions.reading import read_motion
from calckit.motions.suites import (
    Scaling,
    Statistics,
    scale_factors,
    scale_to_mean,
    scaled,
    scaling_range,
    statistics,
)
from calckit.motions.synthetic import (
    GROUNDS,
    Ground,
    exponential_envelope,
    filtered_noise,
    ground_density,
    three_part_envelope,
)

__all__ = [
    "GROUNDS", "FrequencyContent", "Ground", "Motion", "Peaks", "Scaling", "Statistics", "arias_intensity", "correct",
    "cumulative_absolute_velocity", "cumulative_energy", "exponential_envelope", "filtered_noise", "frequency_content",
    "ground_density", "integrals", "peaks", "read_motion", "rotated_peak", "rotated_spectrum", "scale_factors",
    "scale_to_mean", "scaled", "scaling_range", "significant_duration", "spectrum_intensity", "statistics",
    "three_part_envelope",
]  # fmt: skip
