"""Each check of the array functions that needs no record, run as a user of these functions would.

Knows how the inputs of a check become arguments and which result answers each quantity. Must not know what the check
expects.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from calckit import dynamics
from calckit.dynamics.arguments import Array

Given = Mapping[str, Any]
Results = dict[str, Any]

_INCHES = 12.0  # to a foot


def _industrial_frame(given: Given) -> Results:
    # a column fixed at both ends is two cantilevers of half its height, one after the other
    half = dynamics.flexural_cantilever(given["E_ksi"] * given["I_x_in4"], [given["h_ft"] * _INCHES / 2])[0, 0]
    k = given["n_columns"] * half / 2
    found = dynamics.modes([_roof_mass(given)], [[k]])
    return {"k": k, "omega": found.frequencies[0], "T": found.periods[0]}


def _industrial_bracing(given: Given) -> Results:
    bay, h = given["bay_ft"] * _INCHES, given["h_ft"] * _INCHES
    area, length = np.pi * given["rod_diameter_in"] ** 2 / 4, np.hypot(bay, h)
    k = given["n_braced_bays"] * area * given["E_ksi"] / length * (bay / length) ** 2
    return {"T": dynamics.modes([_roof_mass(given)], [[k]]).periods[0]}


def _roof_mass(given: Given) -> float:
    return float(np.prod(given["plan_ft"]) * given["roof_psf"] / 1000 / given["g_in_s2"])


def _pull_test(given: Given) -> Results:
    zeta = dynamics.damping_from_decay(given["u_0"] / given["u_after"], given["cycles"])
    cycles = dynamics.cycles_to_decay(given["u_0"] / given["u_target"], zeta)
    return {"zeta_exact": float(zeta), "cycles_to_target": float(cycles)}


def _free_vibration(given: Given) -> Results:
    start = np.array([given["u_0"], given["v_0"]])
    omega = 2 * np.pi / given["T"]
    return {"u": [float((dynamics.recurrence(omega, given["zeta"], t)[0] @ start)[0]) for t in given["t"]]}


def _halving(given: Given) -> Results:
    return {"j50": dynamics.cycles_to_halve(given["zeta"]).tolist()}


def _harmonic(given: Given) -> Results:
    deformation, lag, transmitted = dynamics.amplification(given["beta"], given["zeta"])
    return {"R_d": deformation.tolist(), "phi_deg": np.rad2deg(lag).tolist(), "TR": transmitted.tolist()}


def _resonance(given: Given) -> Results:
    largest, place = dynamics.resonance_peak(given["zeta_peak"])
    at_one = dynamics.amplification(1.0, given["zeta"])[0]
    return {"R_d_at_1": at_one.tolist(), "R_d_peak": largest.tolist(), "beta_peak": place.tolist()}


def _build_up(given: Given) -> Results:
    return {"envelope": dynamics.resonance_build_up(given["j"], given["zeta"]).tolist()}


def _step_force(given: Given) -> Results:
    return {"peak": dynamics.step_peak(given["zeta"]).tolist()}


def _rectangle(given: Given) -> Results:
    return {"R_d": dynamics.rectangular_pulse(given["t_d_over_T"]).tolist()}


def _half_sine(given: Given) -> Results:
    durations = np.linspace(0.5, 1.5, 100_001)
    values = dynamics.half_sine_pulse(durations)
    return {
        "R_d": dynamics.half_sine_pulse(given["t_d_over_T"]).tolist(),
        "R_d_max": float(values.max()),
        "t_d_over_T_at_max": float(durations[values.argmax()]),
    }


def _coefficients(given: Given) -> Results:
    transition, start, end = dynamics.recurrence(given["omega"], given["zeta"], given["dt"])
    to_force = given["omega"] ** 2 / given["k"]  # a force over the mass for one of 1
    return {
        "A": transition[0, 0], "B": transition[0, 1], "C": start[0] * to_force, "D": end[0] * to_force,
        "A_prime": transition[1, 0], "B_prime": transition[1, 1], "C_prime": start[1] * to_force,
        "D_prime": end[1] * to_force,
    }  # fmt: skip


def _force(given: Given, dt: float) -> Array:
    """Half a sine wave of force and nothing after it, at steps `dt`."""
    t = np.arange(round(given["t"][-1] / dt) + 1) * dt
    return np.where(t < given["t_d"] - dt / 2, given["p_0"] * np.sin(np.pi * t / given["t_d"]), 0.0)


def _sampled(history: Array, given: Given, dt: float) -> list[float]:
    places = np.round(np.array(given["t"]) / dt).astype(int)
    return [float(value) for value in history[places]]


def _piecewise_linear(given: Given) -> Results:
    m, k, zeta, dt = given["m"], given["k"], given["zeta"], given["dt"]
    fine = dt / 1000
    period = 2 * np.pi * np.sqrt(m / k)
    theory = dynamics.oscillator_response(-_force(given, fine) / m, fine, period, zeta).displacement
    # the book's table takes omega = 2 pi, so a period of 1
    found = dynamics.oscillator_response(-_force(given, dt) * (2 * np.pi) ** 2 / k, dt, 1.0, zeta)
    return {
        "u_theory": _sampled(theory, given, fine),
        "u_exact": _sampled(found.displacement, given, dt),
        "v_exact": _sampled(found.velocity, given, dt),
    }


def _stepped(given: Given, method: str) -> tuple[Array, Array, Array]:
    """The force and what a step-by-step method makes of it: displacement and acceleration."""
    m, k, dt = given["m"], given["k"], given["dt"]
    p = _force(given, dt)
    u, _, a = dynamics.step_by_step(p, dt, m, 2 * given["zeta"] * np.sqrt(k * m), k, method)
    return p, u, a


def _average_acceleration(given: Given) -> Results:
    p, u, a = _stepped(given, "average acceleration")
    dt = given["dt"]
    # from rest and without force at the start, the first displacement is the force over the effective stiffness
    return {"k_hat": p[1] / u[1], "u": _sampled(u, given, dt), "a": _sampled(a, given, dt)}


def _linear_acceleration(given: Given) -> Results:
    p, u, _ = _stepped(given, "linear acceleration")
    return {"k_hat": p[1] / u[1], "u": _sampled(u, given, given["dt"])}


def _central_difference(given: Given) -> Results:
    p, u, _ = _stepped(given, "central difference")
    # k_hat u_(i+1) = p_i - a u_(i-1) - b u_i, solved for its coefficients along the first steps
    k_hat = p[1] / u[2]
    b = (p[2] - k_hat * u[3]) / u[2]
    a = (p[3] - k_hat * u[4] - b * u[3]) / u[2]
    return {"k_hat": k_hat, "a": a, "b": b, "u": _sampled(u, given, given["dt"])}


def _stability(given: Given) -> Results:
    ratios = {
        key: dynamics.period_ratio(given["dt_over_T"], method).tolist()
        for key, method in (
            ("period_ratio_average", "average acceleration"),
            ("period_ratio_linear", "linear acceleration"),
            ("period_ratio_central", "central difference"),
        )
    }
    return ratios | {
        "limit_linear_acceleration": dynamics.stability_limit("linear acceleration"),
        "limit_central_difference": dynamics.stability_limit("central difference"),
    }


def _two_story(given: Given) -> Results:
    found = dynamics.modes(given["m"], dynamics.shear_building(given["k"]), heights=given["h"])
    assert found.effective_heights is not None
    return {
        "omega": found.frequencies.tolist(),
        "phi_1": found.shapes[:, 0].tolist(),
        "phi_2": found.shapes[:, 1].tolist(),
        "Gamma": found.participation.tolist(),
        "M_eff": found.effective_masses.tolist(),
        "h_eff": found.effective_heights.tolist(),
    }


def _chain(given: Given) -> Results:
    n = given["N"]
    found = dynamics.modes(np.ones(n), dynamics.shear_building(np.ones(n)), heights=np.arange(1, n + 1))
    assert found.effective_heights is not None
    return {
        "omega": found.frequencies.tolist(),
        "M_eff_over_M": (found.effective_masses / n).tolist(),
        "M_eff_over_m": found.effective_masses.tolist(),
        "h_eff_over_h": found.effective_heights.tolist(),
    }


def _combination(given: Given) -> Results:
    mass = np.array(given["m_kip_per_g"]) / given["g_in_s2"]
    omega = dynamics.modes(mass, dynamics.shear_building(given["k_kip_per_in"])).frequencies
    zeta, peaks = given["zeta"], given["V_bn_kip"]
    rho = dynamics.correlation(omega, zeta)
    coefficients = {f"rho_{i + 1}{j + 1}": float(rho[i, j]) for i in range(5) for j in range(i + 1, 5)}
    rules = ("ABS", "SRSS", "CQC")
    return coefficients | {f"V_b_{rule}": float(dynamics.combine(peaks, omega, zeta, rule=rule)) for rule in rules}


def _energy(given: Given) -> Results:
    n = given["N"]
    mass, heights, stiffness = np.ones(n), np.arange(1.0, n + 1), dynamics.shear_building(np.ones(n))
    exact = dynamics.modes(mass, stiffness)
    uniform, triangular = np.linalg.solve(stiffness, mass), np.linalg.solve(stiffness, heights)
    shares = mass * exact.shapes[:, 0]
    return {
        "T_exact": exact.periods[0],
        "T_linear_shape": 2 * np.pi / np.sqrt(dynamics.rayleigh_quotient(mass, stiffness, heights)),
        "d_uniform": uniform.tolist(),
        "T_uniform": dynamics.energy_period(mass, mass, uniform),
        "d_triangular": triangular.tolist(),
        "T_triangular": dynamics.energy_period(mass, heights, triangular),
        "share_mode_1": (shares / shares.sum()).tolist(),
    }


def _correlation(given: Given) -> Results:
    pairs = (dynamics.correlation([beta, 1.0], given["zeta"]) for beta in given["beta"])
    return {"rho": [float(pair[0, 1]) for pair in pairs]}


ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "dyn.A1a.industrial_NS": _industrial_frame,
    "dyn.A1b.industrial_EW": _industrial_bracing,
    "dyn.A2.tank_pull_test": _pull_test,
    "dyn.A3.free_vibration": _free_vibration,
    "dyn.A4.cycles_to_halve": _halving,
    "dyn.B1.harmonic": _harmonic,
    "dyn.B2a.resonance": _resonance,
    "dyn.B2b.resonance_build_up": _build_up,
    "dyn.B3.step_force": _step_force,
    "dyn.B5a.rectangular_pulse": _rectangle,
    "dyn.B5b.half_sine_pulse": _half_sine,
    "dyn.C1.recurrence_coefficients": _coefficients,
    "dyn.C2.theory_and_exact_piecewise_linear": _piecewise_linear,
    "dyn.C3.newmark_average_acceleration": _average_acceleration,
    "dyn.C4.newmark_linear_acceleration": _linear_acceleration,
    "dyn.C5.central_difference": _central_difference,
    "dyn.C6.stability_and_period_ratio": _stability,
    "dyn.E1.two_story": _two_story,
    "dyn.E3.chain_N2": _chain,
    "dyn.E3.chain_N3": _chain,
    "dyn.E3.chain_N5": _chain,
    "dyn.E5a.five_story_combination": _combination,
    "dyn.E7a.rayleigh_quotient": _energy,
    "dyn.F.cqc_2_percent": _correlation,
    "dyn.F.cqc_10_percent": _correlation,
}
"""What runs each check, by its id."""
