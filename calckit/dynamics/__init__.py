"""Structural dynamics on plain arrays in one consistent set of units, SI throughout the kit.

Knows oscillators, modes and their combination. Must not know units, lines, standards or where a motion comes from.
"""

from calckit.dynamics.closed_forms import (
    amplification,
    cycles_to_decay,
    cycles_to_halve,
    damping_from_decay,
    half_sine_pulse,
    ramp,
    rectangular_pulse,
    resonance_build_up,
    resonance_peak,
    step_peak,
    symmetric_triangular_pulse,
)
from calckit.dynamics.combination import combine, correlation
from calckit.dynamics.modal import (
    Modes,
    energy_period,
    flexural_cantilever,
    modes,
    rayleigh_damping,
    rayleigh_quotient,
    shear_building,
    shear_cantilever,
)
from calckit.dynamics.oscillator import Response, oscillator_response
from calckit.dynamics.recurrence import recurrence
from calckit.dynamics.spectrum import Spectrum, response_spectrum
from calckit.dynamics.stepping import period_ratio, stability_limit, step_by_step

__all__ = [
    "Modes", "Response", "Spectrum", "amplification", "combine", "correlation", "cycles_to_decay",
    "cycles_to_halve", "damping_from_decay", "energy_period", "flexural_cantilever", "half_sine_pulse", "modes",
    "oscillator_response", "period_ratio", "ramp", "rayleigh_damping", "rayleigh_quotient", "rectangular_pulse",
    "recurrence", "resonance_build_up", "resonance_peak", "response_spectrum", "shear_building", "shear_cantilever",
    "stability_limit", "step_by_step", "step_peak", "symmetric_triangular_pulse",
]  # fmt: skip
