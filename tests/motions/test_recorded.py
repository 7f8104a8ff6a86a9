"""A recorded motion in two versions, read and worked; skipped where the files are absent.

El Centro, Imperial Valley, 18 May 1940, north-south: facts read from the files themselves, and A. K. Chopra, Dynamics
of Structures (from memory, high), to 0.5 %.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from scipy.integrate import cumulative_trapezoid, solve_ivp

from calckit.core import checks
from calckit.core.record import OK
from calckit.dynamics import oscillator_response, response_spectrum
from calckit.errors import InputError
from calckit.motions import Motion, correct, integrals, peaks, read_motion
from calckit.motions.verify import ADAPTERS
from tests.motions.test_published import CHECKS

G = 9.80665


def peknold(records: Path) -> Motion:
    data = (records / "elcentro_peknold.dat").read_bytes()
    name = "El Centro 1940 NS, Peknold version"
    return read_motion(data, name=name, unit="g", kind="recorded", step="header", width=10, zero_first=True)


def test_what_the_file_says_and_holds(records: Path) -> None:
    motion = peknold(records)
    assert (motion.dt, motion.acceleration.size) == (0.02, 1561)
    assert motion.notes[1:] == (
        "the header says 1559 values, 1560 are present (all are kept)",
        "a(0) = 0 was put in front",
        "ends with 2 values of zero, which may be padding (kept)",
        "holds nothing above 25 Hz, half the sampling rate: no waves of periods below 0.04 s",
    )


def test_peaks_of_the_file(records: Path) -> None:
    # .31882 g at 2.04 s (the file); book .319 g and 8.40 in (0.6 % above); not 13.04 in/s, which the file does not give
    motion = peknold(records)
    found = peaks(motion)
    assert pytest.approx(0.31882, abs=1e-6) == found.PGA / G
    assert found.t_PGA == pytest.approx(2.04)
    velocity = cumulative_trapezoid(motion.acceleration, dx=0.02, initial=0)
    assert pytest.approx(np.abs(velocity).max(), rel=1e-12) == found.PGV
    assert pytest.approx(8.40, rel=0.007) == found.PGD / G * 386.4


@pytest.mark.parametrize(("period", "D", "A"), [(0.5, 2.67, 1.09), (1.0, 5.97, 0.610), (2.0, 7.47, 0.191)])
def test_spectrum_against_the_book(records: Path, period: float, D: float, A: float) -> None:
    # Figures 6.4 and 6.6, damping 2 %; on the record's own steps: 2.676 in and 1.094 g at 0.5 s
    motion = peknold(records)
    u = np.abs(oscillator_response(motion.acceleration, 0.02, period, 0.02).displacement).max()
    assert u / G * 386.4 == pytest.approx(D, rel=0.005)
    assert u * (2 * np.pi / period) ** 2 / G == pytest.approx(A, rel=0.005)


@pytest.mark.parametrize("id_", list(ADAPTERS))
def test_checks_agree(records: Path, id_: str) -> None:
    outcome = checks.run(checks.with_record(CHECKS[id_], records), ADAPTERS[id_])
    assert outcome.refusal == ""
    assert [row for row in outcome.rows if row.verdict != OK] == []
    assert len(outcome.rows) == len(CHECKS[id_].expect)


def test_history_against_solve_ivp(records: Path) -> None:
    motion = peknold(records)
    a, t, w, zeta = motion.acceleration, motion.time, 2 * np.pi / 0.5, 0.05

    def slope(time: float, y: np.ndarray) -> list[float]:
        return [y[1], -np.interp(time, t, a) - 2 * zeta * w * y[1] - w**2 * y[0]]

    theirs = solve_ivp(slope, (0, 8), [0, 0], t_eval=t[:401], rtol=1e-10, atol=1e-13, max_step=0.02).y[0]
    ours = oscillator_response(a, 0.02, 0.5, zeta, ring_down=0).displacement[:401]
    assert np.abs(ours - theirs).max() <= 1e-7 * np.abs(theirs).max()


def test_two_versions_are_two_motions(records: Path) -> None:
    data = (records / "elcentro_S00E_1940.dat").read_bytes()
    other = read_motion(data, name="El Centro 1940, S00E version", unit="cm/s2", kind="recorded", step=0.02)
    assert other.acceleration.size == 2688
    assert "starts at 0.1254 m/s2: integrals from rest may drift" in other.notes
    assert integrals(other)[1][-1] == pytest.approx(-2.96, abs=0.01)  # drifts to 296 cm: it does not start from rest
    mended = correct(other, "zero end")
    assert abs(integrals(mended)[1][-1]) < 1e-12
    first, second = (response_spectrum(m.acceleration, 0.02, [0.5, 1.0, 2.0], 0.02) for m in (peknold(records), other))
    ratio = second.displacement / first.displacement
    assert np.abs(ratio - 1).min() > 0.06 and np.abs(ratio - 1).max() < 0.19


def test_fixed_columns_matter(records: Path) -> None:
    # values of this file have blanks between them, so both ways agree; a row without blanks is refused, not misread
    text = (records / "elcentro_peknold.dat").read_text()
    how = {"name": "demo", "unit": "g", "kind": "recorded", "step": "header"}
    split = read_motion(text, **how)
    assert split.acceleration.tolist() == read_motion(text, width=10, **how).acceleration.tolist()
    with pytest.raises(InputError, match=r"line 7: .*pass width="):
        read_motion(text.replace("   0.00630   0.00364", "  -0.00630-10.00364", 1), **how)
