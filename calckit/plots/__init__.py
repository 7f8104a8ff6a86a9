"""Figures of a calculation: plain arrays and text in, a black-and-white drawing out.

Knows how levels, forces, drifts, spectra and what a result rests on are drawn. Must not know lines, units, standards or
reports; the numbers come in as they are to be drawn, and the words as they are to be printed. matplotlib is loaded with
the first figure.
"""

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from calckit.plots.chain import dependency
    from calckit.plots.levels import drift_profile, elevation, level_forces, modal_shears, mode_shapes, story_shears
    from calckit.plots.motions import cumulative_energy, fourier_amplitude, motion_history, spectra
    from calckit.plots.spectrum import design_spectrum
    from calckit.plots.style import Drawing, png_bytes, svg_bytes

__all__ = [
    "Drawing",
    "cumulative_energy",
    "dependency",
    "design_spectrum",
    "drift_profile",
    "elevation",
    "fourier_amplitude",
    "level_forces",
    "modal_shears",
    "mode_shapes",
    "motion_history",
    "png_bytes",
    "spectra",
    "story_shears",
    "svg_bytes",
]


def __getattr__(name: str) -> Any:
    if name in __all__:
        from calckit.plots import chain, levels, motions, spectrum, style

        modules = (chain, levels, motions, spectrum, style)
        return next(getattr(module, name) for module in modules if hasattr(module, name))
    raise AttributeError(f"module 'calckit.plots' has no attribute {name!r}")


def __dir__() -> list[str]:
    return __all__
