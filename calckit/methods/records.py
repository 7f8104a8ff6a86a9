"""Ground motions as lines: what a record is, its frequency content, its response spectrum, a suite and its scaling.

Knows which lines a motion becomes and the residual of each. Must not know how a motion is read or where a target comes
from: targets and periods are taken by symbol.
"""

from __future__ import annotations

from collections.abc import Sequence
from hashlib import sha256
from typing import TYPE_CHECKING, Any

import numpy as np

from calckit import dynamics, motions, units
from calckit.core.formula import Formula
from calckit.core.handle import Handles
from calckit.core.record import Flag, Source
from calckit.core.series import numbered, symbol_of
from calckit.dynamics.spectrum import band_limited, straight
from calckit.errors import Fault, InputError
from calckit.methods.analysis import LIMIT, Method, write_list, write_number, write_residual
from calckit.methods.symbols import OF_MOTION

if TYPE_CHECKING:
    from calckit.core.writer import Writer
    from calckit.motions import Motion

G = 9.80665
MEASURES = Source("measures of ground motion", "peaks, A. Arias 1970, M. D. Trifunac and A. G. Brady 1975")
FOURIER = Source("Fourier amplitudes", "mean period by E. M. Rathje, N. A. Abrahamson, J. D. Bray 1998")
SPECTRUM = Source("response spectrum", "oscillators by the exact recurrence")
SUITE = Source("statistics of spectra", "period by period")
SCALING = Source("amplitude scaling", "least squares of the logarithms over the periods of the table")
CHANGE = 0.01
"""Change of an ordinate at half the step above which the reader is told."""


def motion(scope: Writer, record: Motion, source: str, number: int) -> Handles:
    """What a motion is, and its measures."""
    origin = scope.calc.sources.read(source, "methods.motion") if source.strip() else None
    if origin is None:
        raise InputError("methods.motion", [Fault("source", "where the motion comes from", "nothing", "name it")])
    digest = sha256(np.ascontiguousarray(record.acceleration).tobytes()).hexdigest()[:16]
    facts = (
        record.kind, f"{record.acceleration.size} samples at {record.dt:g} s", *record.notes,
        f"digest of the samples {digest}",
    )  # fmt: skip
    with scope.step():
        _own(scope, number)
        name = numbered("motion_n", number)
        flags = [] if record.kind == "recorded" else [Flag(f"{record.name} is {record.kind}, not a recording")]
        made = Handles([scope.state(name, record.name, "given", origin, text="; ".join(facts), flags=flags)])
        found = motions.peaks(record)
        start, end = motions.significant_duration(record)
        left = abs(float(motions.integrals(record)[0][-1])) / found.PGV if found.PGV else 0.0
        method = Method("from the samples; velocity and displacement from rest", MEASURES, (name,))
        for symbol, value, unit in (
            ("PGA_n", found.PGA / G, ""), ("PGV_n", found.PGV, "m/s"), ("PGD_n", found.PGD, "m"),
            ("I_An", motions.arias_intensity(record), "m/s"), ("D_n", end - start, "s"),
            ("CAV_n", motions.cumulative_absolute_velocity(record), "m/s"),
        ):  # fmt: skip
            made.append(write_number(scope, numbered(symbol, number), value, unit, method))
        made.append(write_residual(scope, numbered("v_endn", number), left, method))
        return made


def frequency_content(scope: Writer, record: Motion, number: int) -> Handles:
    """Dominant and mean period of a motion, and the energy its Fourier amplitudes hold."""
    _known(scope, "methods.frequency_content", number)
    with scope.step():
        _own(scope, number)
        found = motions.frequency_content(record)
        low, high = found.band
        words = f"discrete Fourier transform, not smoothed; periods from {1 / high:g} to {1 / low:g} s"
        method = Method(words, FOURIER, (numbered("motion_n", number),))
        made = Handles(
            write_number(scope, numbered(name, number), value, "s", method)
            for name, value in (("T_domn", found.dominant_period), ("T_meann", found.mean_period))
        )
        write_residual(scope, numbered("r_Fn", number), _energy_apart(record), method)
        return made


def _energy_apart(record: Motion) -> float:
    """Energy of the transform against that of the samples (Parseval), relative."""
    samples = record.acceleration
    lines = np.abs(np.fft.rfft(samples)) ** 2
    doubled = 2 * lines.sum() - lines[0] - (lines[-1] if samples.size % 2 == 0 else 0.0)
    energy = float((samples**2).sum())
    return abs(float(doubled) / samples.size / energy - 1)


def record_spectrum(scope: Writer, record: Motion, number: int, periods: str, refine: str) -> Handles:
    """The response spectrum of a motion at the listed periods."""
    faults = [scope.missing(name) for name in (periods,) if scope.find(name) is None]
    faults += [scope.missing("zeta")] if scope.number("zeta") is None else []
    if faults:
        raise InputError("methods.record_spectrum", faults)
    _known(scope, "methods.record_spectrum", number)
    natural, rows, zeta = _values(scope, periods, "s"), scope[periods].rows, scope.number("zeta") or 0.0
    with scope.step():
        _own(scope, number)
        found = dynamics.response_spectrum(record.acceleration, record.dt, natural, zeta, refine)
        finer = _REFINED[refine](record.acceleration[None], 2)[0]
        halved = dynamics.response_spectrum(finer, record.dt / 2, natural, zeta, refine).displacement
        change = float(np.abs(halved / np.where(found.displacement > 0, found.displacement, 1) - 1).max())
        shortest = f"; {refine} between samples below 20 samples a period"
        words = f"peaks of oscillators{shortest if refine in found.refinement else ''}"
        method = Method(words, SPECTRUM, (numbered("motion_n", number), periods, "zeta"))
        columns: Sequence[tuple[str, Any, str]] = (
            ("SD_n", found.displacement, "m"), ("PSV_n", found.pseudo_velocity, "m/s"),
            ("PSA_n", found.pseudo_acceleration / G, ""),
        )  # fmt: skip
        made = Handles(
            write_list(scope, numbered(name, number), values, unit, rows, method) for name, values, unit in columns
        )
        scope.table(f"spectrum_{number}", f"Response spectrum of motion {number}",
                    [periods, *(numbered(name, number) for name, _, _ in columns)], head="Point")  # fmt: skip
        text = f"ordinates of motion {number} change by up to {change:.1%} where its step is halved"
        flags = [Flag(text)] if change > CHANGE else []
        write_number(scope, numbered("r_PSAn", number), change, "", method, flags)
        return made


_REFINED = {"band-limited": band_limited, "straight-line": straight}


def spectrum_curve(scope: Writer, record: Motion, longest: float) -> tuple[list[float], list[float]]:
    """Periods and pseudo-accelerations as fractions of g, for a figure; writes no line."""
    zeta = scope.number("zeta")
    if zeta is None:
        raise InputError("methods.spectrum_curve", [scope.missing("zeta")])
    natural = np.geomspace(0.02, longest, 200)
    found = dynamics.response_spectrum(record.acceleration, record.dt, natural, zeta)
    return natural.tolist(), (found.pseudo_acceleration / G).tolist()


def suite(scope: Writer, count: int, periods: str) -> Handles:
    """Mean, median and dispersion of the spectra of motions 1 to `count`."""
    names = _spectra(scope, "methods.suite", count, [periods])
    rows = scope[periods].rows
    with scope.step():
        found = motions.statistics(np.array([_values(scope, name, "") for name in names]))
        mean = scope.compute(Formula("PSA_mean", f"({' + '.join(names)})/{count}", SUITE))
        made = Handles([mean])
        method = Method("median: geometric mean; dispersion with n - 1", SUITE, tuple(names))
        for name, values in (("PSA_med", found.median), ("s_ln", found.dispersion)):
            made.append(write_list(scope, name, values, "", rows, method))
        scope.table("suite", f"Spectra of {count} motions", [periods, "PSA_mean", "PSA_med", "s_ln"], head="Point")
        return made


def scale(scope: Writer, count: int, target: str, share: float | None) -> Handles:
    """The factor of each motion that brings its spectrum nearest to the target, and what the mean then is."""
    names = _spectra(scope, "methods.scale", count, [target])
    if share is not None and not 0 < share <= 2:
        raise InputError("methods.scale", [Fault("share", "a share of the target above 0 and up to 2", f"{share:g}")])
    aims = _values(scope, target, "")
    spectra = np.array([_values(scope, name, "") for name in names])
    rows = scope[target].rows
    numbers = [str(number) for number in range(1, count + 1)]
    # the points are only counted: every point of the table has one weight
    points = np.arange(1.0, len(aims) + 1)
    with scope.step():
        single = motions.scale_factors(spectra, points, aims, (1.0, float(len(aims))))
        common = 1.0 if share is None else motions.scale_to_mean(spectra, points, aims, (1.0, len(aims)), share).common
        method = Method("the same factor on both components of a pair", SCALING, (target, *names))
        made = Handles([write_list(scope, "f_s", single * common, "", numbers, method)])
        if share is not None:
            words = f"the factor that brings the lowest mean over target to {share:g}"
            made.append(write_number(scope, "f_common", common, "", Method(words, SCALING, (target, *names))))
        _first_in_full(scope, target, share is not None)
        mean = (single[:, None] * common * spectra).mean(axis=0)
        words = "mean of the spectra times their factors"
        made.append(write_list(scope, "PSA_scaled", mean, "", rows, Method(words, SCALING, ("f_s", *names))))
        made.append(scope.compute(Formula("r_target", f"PSA_scaled/{target}", SCALING)))
        scope.table("scaled", "Mean of the scaled motions against the target", ["PSA_scaled", target, "r_target"],
                    head="Point")  # fmt: skip
        return made


def _first_in_full(scope: Writer, target: str, common: bool) -> None:
    """The factor of motion 1 by a declared formula."""
    points = len(scope[target].rows)
    scope.calc.own_symbols["f_s1"] = symbol_of(OF_MOTION["f_sn"], 1)
    text = f"exp(total(log({target}/PSA_1))/{points})" + ("*f_common" if common else "")
    scope.compute(Formula("f_s1", text, SCALING))
    scope.require(f'abs(level(f_s, "1")/f_s1 - 1) <= {LIMIT}', title="Factor of motion 1 agrees with the analysis",
                  source=SCALING, id_="worked_factor")  # fmt: skip


def _spectra(scope: Writer, where: str, count: int, others: Sequence[str]) -> list[str]:
    if not isinstance(count, int) or count < 1:
        raise InputError(where, [Fault("count", "a whole number of motions from 1", repr(count))])
    names = [numbered("PSA_n", number) for number in range(1, count + 1)]
    faults = [scope.missing(name) for name in (*names, *others) if scope.find(name) is None]
    if not faults:
        first = scope[others[0]].rows
        faults = [
            Fault(name, f"ordinates at the {len(first)} points of {others[0]}", f"{len(scope[name].rows)} points")
            for name in names
            if scope[name].rows != first
        ]
    if faults:
        raise InputError(where, faults)
    return names


def _known(scope: Writer, where: str, number: int) -> None:
    if scope.find(numbered("motion_n", number)) is None:
        cure = f"write methods.motion(..., number={number}) first"
        raise InputError(where, [Fault(numbered("motion_n", number), "a motion that stands as a line", "none", cure)])


def _own(scope: Writer, number: int) -> None:
    made = (symbol_of(symbol, number) for symbol in OF_MOTION.values())
    scope.calc.own_symbols |= {symbol.name: symbol for symbol in made}


def _values(scope: Writer, name: str, unit: str) -> Any:
    line = scope[name].line
    if not isinstance(line.value, list):
        raise InputError("methods", [Fault(name, "a list line", str(line.shown), "", line.meaning)])
    return np.array([units.convert(value, line.unit, unit) for value in line.value])

