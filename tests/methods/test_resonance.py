"""Resonance as information: ratios by hand, words, no verdict."""

from __future__ import annotations

import numpy as np
import pytest

from calckit import Calc
from calckit.core.assemble import assemble
from calckit.errors import InputError
from calckit.motions import Motion
from calckit.report.digits_check import check_digits
from calckit.report.reevaluate import reevaluate

DESIGN = ([0.0, 0.1, 0.5, 2.0, 4.0], [0.4, 1.0, 1.0, 0.25, 0.125])
HUM = Motion("hum", np.sin(4 * np.pi * np.arange(0, 20, 0.005)), 0.005, kind="synthetic")


def calculation(T: str = "0.5 s", f_T: float = 1.6, **more: str) -> Calc:
    calc = Calc(project="Resonance", number="T-3")
    calc.document("R", title="Motions")
    for name, value in {"zeta": 0.05, "T": T, "f_T": f_T, **more}.items():
        calc.given(name, value, source="R")
    calc.methods.motion(HUM, "R")
    calc.methods.frequency_content(HUM)
    return calc


def test_at_resonance_the_amplification_is_that_of_the_closed_form() -> None:
    calc = calculation()
    calc.methods.resonance(HUM, DESIGN)
    # steady response 1/(2 zeta) = 10, reached to 1 - exp(-2 pi zeta 40) (closed form); amplitude 1 m/s2
    assert calc["PSA_b"].value[0] * 9.80665 == pytest.approx(10, rel=2e-3)
    assert calc["r_ground"].value[0] == pytest.approx(10, rel=2e-3)
    assert calc["T_b"].value == pytest.approx([0.5, 0.8])
    assert calc["r_dom"].value == pytest.approx([1.0, 1.6], rel=1e-3)
    assert calc["S_ab"].value == pytest.approx([1.0, 0.85])
    assert calc["r_code"].value[0] == pytest.approx(calc["PSA_b"].value[0] / 1.0, rel=1e-10)


def test_statement_says_where_the_structure_sits() -> None:
    calc = calculation(T_site="0.9 s")
    calc.methods.resonance(HUM, DESIGN)
    text = calc["resonance"].line.text
    assert text.startswith("Information, not a requirement of the standard. The elastic period, ")
    assert "The elastic period, 0.5000 s, is 1.000 times the dominant period of the motion, 0.5000 s: near it." in text
    assert "is 1.600 times the dominant period of the motion, 0.5000 s: longer than it." in text
    assert "dominant period of the site, 0.9 s: shorter than it." in text
    assert "0.8000 s, is 0.8889 times the dominant period of the site, 0.9 s: near it." in text
    assert "common practice, no source" in text


def test_one_motion_gets_no_verdict() -> None:
    calc = calculation()
    calc.methods.resonance(HUM, ([0.0, 4.0], [0.001, 0.001]))
    record = assemble(calc)
    assert min(calc["r_code"].value) > 100
    assert [line.id for line in record.lines if line.verdict] == []
    assert {"T_b", "r_dom", "r_code"} <= set(calc["resonance"].line.inputs)
    assert [item.text for item in record.open_items] == []
    assert reevaluate(record).faults == [] and check_digits(record).faults == []


def test_refusals() -> None:
    calc = calculation()
    with pytest.raises(InputError, match=r"design: needed a curve that reaches the lengthened period, 0\.8 s"):
        calc.methods.resonance(HUM, ([0.0, 0.6], [1.0, 1.0]))
    with pytest.raises(InputError, match=r"design: needed rising periods and an ordinate for each"):
        calc.methods.resonance(HUM, ([0.0, 0.6], [1.0]))
    with pytest.raises(InputError, match=r"T_long"):
        calc.methods.resonance(HUM, DESIGN, period="T_long")
