"""Each check that needs a recorded motion: the file is read, then worked through public functions.

Knows the two files that checks name, and which result answers each quantity. Must not know what the check expects.
`given["record"]` is the path of the file.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from calckit import dynamics
from calckit.dynamics.arguments import Array
from calckit.dynamics.spectrum import straight
from calckit.motions.measures import STANDARD_GRAVITY, peaks
from calckit.motions.motion import Motion
from calckit.motions.reading import read_motion

Given = Mapping[str, Any]
Results = dict[str, Any]

_INCH = 0.0254
_FORMS: dict[str, dict[str, Any]] = {
    "elcentro_peknold.dat": {"unit": "g", "step": "header", "width": 10, "zero_first": True},
    "elcentro_S00E_1940.dat": {"unit": "cm/s2", "step": 0.02},
}
"""How each file is written; the second says neither unit nor step."""


def _motion(given: Given) -> Motion:
    path = given["record"]
    return read_motion(path.read_bytes(), name=path.stem, kind="recorded", **_FORMS[path.name])


def _in_inches(given: Given, motion: Motion) -> Array:
    """The accelerations in in/s2, with the g of the check where the file is in g."""
    unit = STANDARD_GRAVITY / given["g_in_s2"] if "g_in_s2" in given else _INCH
    return motion.acceleration / unit


def _finer(given: Given, motion: Motion) -> Array:
    return straight(_in_inches(given, motion)[None], round(motion.dt / given["dt_fine"]))[0]


def _deformation(acceleration: Array, dt: float, periods: list[float], zeta: float) -> Array:
    """Largest relative displacements at the samples themselves, without any refinement."""
    histories = (dynamics.oscillator_response(acceleration, dt, period, zeta).displacement for period in periods)
    return np.array([np.abs(u).max() for u in histories])


def _peaks(given: Given) -> Results:
    motion = _motion(given)
    found = peaks(motion)
    inches = given["g_in_s2"] / STANDARD_GRAVITY
    return {
        "PGA_g": found.PGA / STANDARD_GRAVITY,
        "t_PGA": found.t_PGA,
        "PGV_in_s": found.PGV * inches,
        "PGD_in": found.PGD * inches,
    }


def _spectrum(given: Given) -> Results:
    motion, zeta, periods = _motion(given), given["zeta"], given["T"]
    omega = 2 * np.pi / np.array(periods)
    coarse = _deformation(_in_inches(given, motion), motion.dt, periods, zeta)
    fine = _deformation(_finer(given, motion), given["dt_fine"], periods, zeta)
    return {
        "D_in": coarse.tolist(),
        "D_fine_in": fine.tolist(),
        "A_fine_g": (fine * omega**2 / given["g_in_s2"]).tolist(),
        "V_in_s": (coarse * omega).tolist(),
    }


def _pipe(given: Given) -> Results:
    motion, h = _motion(given), given["h_ft"] * 12.0
    stiffness = dynamics.flexural_cantilever(given["E_ksi"] * given["I_in4"], [h])
    period = float(dynamics.modes([given["w_kip"] / given["g_in_s2"]], stiffness).periods[0])
    u = float(_deformation(_finer(given, motion), given["dt_fine"], [period], given["zeta"])[0])
    k = float(stiffness[0, 0])
    a = u * (2 * np.pi / period) ** 2 / given["g_in_s2"]
    return {"k": k, "T": period, "D_in": u, "A_g": a, "V_kip": k * u, "M_kip_ft": k * u * given["h_ft"]}


def _short_period(given: Given) -> Results:
    motion, period = _motion(given), given["T"]
    u = _deformation(_finer(given, motion), given["dt_fine"], [period], given["zeta"])[0]
    return {"A_g": float(u * (2 * np.pi / period) ** 2 / given["g_in_s2"])}


def _other_version(given: Given) -> Results:
    motion = _motion(given)
    found = peaks(motion)
    u = _deformation(_finer(given, motion), given["dt_fine"], given["T"], given["zeta"])
    return {"PGA_cm_s2": found.PGA * 100, "t_PGA": found.t_PGA, "D_in": u.tolist()}


def _five_story(given: Given) -> Results:
    motion, g, zeta = _motion(given), given["g_in_s2"], given["zeta"]
    mass = np.array(given["m_kip_per_g"]) / g
    heights = given["h_ft"] * np.arange(1, len(mass) + 1)
    modes = dynamics.modes(mass, dynamics.shear_building(given["k_kip_per_in"]), heights=heights)
    assert modes.effective_heights is not None
    record, dt = _finer(given, motion), given["dt_fine"]
    rest = float(modes.periods[0])
    responses = (dynamics.oscillator_response(record, dt, float(each), zeta, ring_down=rest) for each in modes.periods)
    histories = np.stack([response.displacement for response in responses])
    peak, squares = np.abs(histories).max(axis=1), modes.frequencies**2
    top = modes.participation * modes.shapes[-1]
    per_mode = {  # each quantity for a deformation of 1 in each mode
        "V_b": modes.effective_masses * squares,
        "u5": top,
        "V_5": top * mass[-1] * squares,
        "M_b": modes.effective_masses * modes.effective_heights * squares,
    }
    results: Results = {
        "T": modes.periods.tolist(),
        "D_n_in": peak.tolist(),
        "A_n_g": (peak * squares / g).tolist(),
    }
    for name, unit in (("V_b", "_kip"), ("u5", "_in"), ("V_5", "_kip"), ("M_b", "_kip_ft")):
        modal = per_mode[name] * peak
        results[name + unit] = modal.tolist()
        for rule in ("ABS", "SRSS", "CQC"):
            results[f"{name}_{rule}"] = float(dynamics.combine(modal, modes.frequencies, zeta, rule=rule))
        results[f"{name}_history"] = float(np.abs(per_mode[name] @ histories).max())
    return results


ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "dyn.D1.elcentro_peaks": _peaks,
    "dyn.D2.elcentro_spectrum_2_percent": _spectrum,
    "dyn.D3.elcentro_pipe_8_in": _pipe,
    "dyn.D4.elcentro_high_frequency": _short_period,
    "dyn.D5.elcentro_other_version": _other_version,
    "dyn.E5b.five_story_elcentro": _five_story,
}
"""What runs each check, by its id."""
