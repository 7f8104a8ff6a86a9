"""Ground motions as lines: closed forms, statistics by hand, scaling, what is said of a motion, refusals."""

from __future__ import annotations

import json
from dataclasses import asdict, replace
from pathlib import Path

import numpy as np
import pytest

from calckit import Calc, motions
from calckit.core.assemble import assemble
from calckit.core.record import OK
from calckit.errors import InputError
from calckit.motions import Motion
from calckit.report.digits_check import check_digits
from calckit.report.reevaluate import reevaluate
from tests.printed_audit import audit

G = 9.80665
PERIODS = (0.05, 0.1, 0.2, 0.3, 0.5, 0.8, 1.0, 1.5, 2.0)
RECORD = Path(__file__).parents[3] / "shared/data/elcentro_peknold.dat"


def calculation(periods: tuple[float, ...] = PERIODS, zeta: float = 0.05, units: str = "US") -> Calc:
    calc = Calc(project="Motions", number="T-2", units=units)
    calc.document("R", title="Motions")
    calc.given("zeta", zeta, source="R")
    rows = "\n".join(f"{n}, {T}" for n, T in enumerate(periods, 1))
    calc.rows("points", f"point, T_p [s]\n{rows}", source="R", meanings={"T_p": "period"})
    return calc


def hum(size: float = 1.0) -> Motion:
    """Two waves a second for 10 s; 1 m/s2."""
    return Motion("hum", size * np.sin(4 * np.pi * np.arange(0, 10.005, 0.01)), 0.01, kind="synthetic")


def test_measures_of_a_sine() -> None:
    calc = calculation()
    calc.methods.motion(hum(), "R")
    # Arias 1970; Trifunac and Brady 1975: closed forms for a sine of 1 m/s2
    unit = 0.0254
    assert calc["PGA_1"].value == pytest.approx(np.sin(0.48 * np.pi) / G, rel=1e-9)  # no sample stands at the crest
    assert calc["I_A1"].value * unit == pytest.approx(0.800883, abs=1e-6)
    # straight lines between the samples lose 0.13 % of the area under the sine
    assert calc["CAV_1"].value * unit == pytest.approx(20 / np.pi, rel=1.5e-3)
    assert calc["D_1"].value == pytest.approx(9.0, abs=1e-6)
    assert calc["v_end1"].value == pytest.approx(0, abs=1e-9)
    flags = [flag.text for flag in calc["motion_1"].line.flags]
    assert flags == ["hum is synthetic, not a recording"]


def test_another_motion_of_the_same_name_is_another_line() -> None:
    contents = []
    for size in (1.0, 1.0, 1.000001):
        calc = calculation()
        calc.methods.motion(hum(size), "R")
        contents.append(calc["motion_1"].line.content)
    assert contents[0] == contents[1] != contents[2]


def test_frequency_content_of_a_sine() -> None:
    calc = calculation()
    calc.methods.motion(hum(), "R")
    calc.methods.frequency_content(hum())
    assert calc["T_dom1"].value == pytest.approx(0.5, rel=1e-3)
    assert calc["r_F1"].shown == "0.000000001"


def test_spectrum_of_a_long_sine_at_resonance() -> None:
    # steady response at resonance: 1/(2 zeta) times the static one (M. Paz, A. K. Chopra; closed form)
    long = Motion("hum", np.sin(4 * np.pi * np.arange(0, 60, 0.005)), 0.005, kind="synthetic")
    calc = calculation((0.5,))
    calc.methods.motion(long, "R")
    calc.methods.record_spectrum(long, periods="T_p")
    assert calc["PSA_1"].value[0] * G == pytest.approx(10, rel=2e-3)
    omega = 4 * np.pi
    assert calc["SD_1"].value[0] * 0.0254 * omega**2 == pytest.approx(calc["PSA_1"].value[0] * G, rel=1e-9)
    assert calc["PSV_1"].value[0] * 0.0254 * omega == pytest.approx(calc["PSA_1"].value[0] * G, rel=1e-9)


def test_a_coarse_record_is_said_to_be_coarse() -> None:
    rough = Motion("rough", np.random.default_rng(1).normal(size=400), 0.02, kind="synthetic")
    calc = calculation((0.45, 1.0))  # just above 20 samples a period: straight lines
    calc.methods.motion(rough, "R")
    calc.methods.record_spectrum(rough, periods="T_p")
    change = calc["r_PSA1"].value
    assert 0 < change < 0.2
    assert bool(calc["r_PSA1"].line.flags) == (change > 0.01)


def suite(count: int = 3) -> Calc:
    calc = calculation()
    for number in range(1, count + 1):
        made = motions.filtered_noise(number, peak=2.0, duration=12.0)
        calc.methods.motion(made, "R", number=number)
        calc.methods.record_spectrum(made, number=number, periods="T_p")
    return calc


def test_suite_by_hand() -> None:
    calc = suite()
    calc.methods.suite(3, periods="T_p")
    spectra = np.array([calc[f"PSA_{n}"].value for n in (1, 2, 3)])
    assert calc["PSA_mean"].value == pytest.approx(spectra.mean(axis=0).tolist(), rel=1e-10)
    assert calc["PSA_mean"].line.kind == "computed"
    assert calc["PSA_med"].value == pytest.approx(np.cbrt(spectra.prod(axis=0)).tolist(), rel=1e-10)
    assert calc["s_ln"].value == pytest.approx(np.log(spectra).std(axis=0, ddof=1).tolist(), rel=1e-9)


def targeted() -> Calc:
    calc = suite()
    rows = "\n".join(f"{n}, {min(1.0, 0.6 / T)}" for n, T in enumerate(PERIODS, 1))
    calc.rows("target", f"point, S_p\n{rows}", source="R", meanings={"S_p": "target"})
    return calc


def test_scaling_by_least_squares() -> None:
    calc = targeted()
    calc.methods.scale(3, target="S_p")
    aims = np.array(calc["S_p"].value)
    for number, factor in enumerate(calc["f_s"].value, 1):
        ratios = np.log(factor * np.array(calc[f"PSA_{number}"].value) / aims)
        assert ratios.mean() == pytest.approx(0, abs=1e-10)
    assert calc["worked_factor"].line.verdict == OK
    assert calc["f_s1"].value == pytest.approx(calc["f_s"].value[0], rel=1e-10)


def test_scaling_to_a_share_of_the_target() -> None:
    calc = targeted()
    calc.methods.scale(3, target="S_p", share=0.9)
    assert min(calc["r_target"].value) == pytest.approx(0.9, rel=1e-9)
    spectra = np.array([calc[f"PSA_{n}"].value for n in (1, 2, 3)])
    mean = (np.array(calc["f_s"].value)[:, None] * spectra).mean(axis=0)
    assert calc["PSA_scaled"].value == pytest.approx(mean.tolist(), rel=1e-9)
    assert calc["worked_factor"].line.verdict == OK


def test_lines_stand_in_the_record_as_they_must() -> None:
    calc = targeted()
    calc.methods.frequency_content(motions.filtered_noise(1, peak=2.0, duration=12.0))
    calc.methods.suite(3, periods="T_p")
    calc.methods.scale(3, target="S_p", share=0.9)
    record = assemble(calc)
    assert reevaluate(record).faults == [] and check_digits(record).faults == []
    assert audit(json.loads(json.dumps(asdict(record)))).faults == []
    assert max(len(line.rows) for line in record.lines) == len(PERIODS)  # no record is printed sample by sample


def test_curve_for_a_figure_writes_nothing() -> None:
    calc = suite(1)
    before = list(calc.lines.entries)
    T, PSA = calc.methods.spectrum_curve(motions.filtered_noise(1, peak=2.0, duration=12.0), longest=3.0)
    assert list(calc.lines.entries) == before
    assert T[-1] == pytest.approx(3.0) and len(T) == len(PSA)
    assert np.interp(1.0, T, PSA) == pytest.approx(calc["PSA_1"].value[PERIODS.index(1.0)], rel=0.05)


def test_refusals() -> None:
    calc = calculation()
    with pytest.raises(InputError, match=r"motion_1: needed a motion that stands as a line.*methods\.motion"):
        calc.methods.frequency_content(hum())
    with pytest.raises(InputError, match=r"source: needed where the motion comes from"):
        calc.methods.motion(hum(), " ")
    calc.methods.motion(hum(), "R")
    with pytest.raises(InputError, match=r"T_r.*spectrum_ordinates"):
        calc.methods.record_spectrum(hum())
    with pytest.raises(InputError, match=r"(?s)PSA_1 .*PSA_2"):
        calc.methods.suite(2, periods="T_p")
    with pytest.raises(InputError, match=r"count: needed a whole number"):
        calc.methods.suite(0, periods="T_p")
    with pytest.raises(InputError, match=r"refine: needed one of"):
        calc.methods.record_spectrum(hum(), periods="T_p", refine="spline")


@pytest.mark.skipif(not RECORD.is_file(), reason="the record of 1940 is not in ../shared/data")
def test_motion_of_1940() -> None:
    read = motions.read_motion(
        RECORD.read_bytes(), name="1940, version of Peknold", unit="g", kind="recorded", step=0.02, width=10,
        zero_first=True,
    )  # fmt: skip
    calc = calculation((0.5, 1.0, 2.0), 0.02)
    calc.methods.motion(replace(read), "R")
    calc.methods.record_spectrum(read, periods="T_p")
    # A. K. Chopra, Dynamics of Structures, Figures 6.4 and 6.6 (from memory, high): PGA 0.319 g; D in inches,
    # worked there at steps of 0.02 s: at 0.5 s shorter steps find a peak 0.5 % higher
    assert calc["PGA_1"].value == pytest.approx(0.319, rel=5e-3)
    assert calc["SD_1"].value == pytest.approx([2.67, 5.97, 7.47], rel=8e-3)
    assert calc["PSA_1"].value == pytest.approx([1.09, 0.610, 0.191], rel=1e-2)
    assert not calc["motion_1"].line.flags
