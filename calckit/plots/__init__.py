"""Figures of a calculation: plain arrays and text in, a black-and-white drawing out.

Knows how levels, forces, drifts and spectra are drawn. Must not know lines, units, standards or reports; the numbers
come in as they are to be drawn, and the words as they are to be printed.
"""

from calckit.plots.levels import drift_profile, elevation, level_forces, story_shears
from calckit.plots.spectrum import design_spectrum
from calckit.plots.style import Drawing, png_bytes, svg_bytes

__all__ = [
    "Drawing",
    "design_spectrum",
    "drift_profile",
    "elevation",
    "level_forces",
    "png_bytes",
    "story_shears",
    "svg_bytes",
]
