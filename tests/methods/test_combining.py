"""Combination as lines: published sums, the kernel against the declared coefficient, refusals."""

from __future__ import annotations

import numpy as np
import pytest

from calckit import dynamics
from calckit.core.record import OK
from calckit.errors import InputError
from calckit.methods.formulas import correlation
from tests.methods.models import five_story

SHEARS = (60.469, 24.533, 9.867, 2.943, 0.595)
"""A. K. Chopra, Dynamics of Structures, Example 13.11 (from memory, high): modal base shears in kip."""


def test_declared_coefficient_against_the_array_kernel() -> None:
    rng = np.random.default_rng(5)
    formula = correlation(1, 2)
    for _ in range(200):
        zeta, ratio = float(rng.uniform(0.005, 0.3)), float(np.exp(rng.uniform(-2, 2)))
        kernel = dynamics.correlation([ratio, 1.0], zeta)[0, 1]
        assert formula.value({"zeta": zeta, "r_12": ratio}) == pytest.approx(float(kernel), rel=1e-12)


@pytest.mark.parametrize(
    ("zeta", "ratio", "printed"),
    # E. L. Wilson, A. Der Kiureghian, E. P. Bayo 1981, the coefficient (from memory, high), worked to four decimals
    [(0.02, 0.5, 0.0030), (0.02, 0.9, 0.1257), (0.02, 0.98, 0.7967), (0.10, 0.7, 0.2336), (0.10, 0.95, 0.9380)],
)
def test_declared_coefficient_against_a_table(zeta: float, ratio: float, printed: float) -> None:
    assert correlation(1, 2).value({"zeta": zeta, "r_12": ratio}) == pytest.approx(printed, abs=5e-5)


def test_product_in_place_of_the_sum_is_another_value() -> None:
    # a slip met in print: a product between the two terms of the denominator
    zeta, r = 0.05, 0.8
    wrong = 8 * zeta**2 * (1 + r) * r**1.5 / ((1 - r**2) ** 2 * 4 * zeta**2 * r * (1 + r) ** 2)
    right = correlation(1, 2).value({"zeta": zeta, "r_12": r})
    assert right < 0.25 < 5 < wrong


def shears(rule: str) -> float:
    part = five_story()
    part.methods.modes()
    rows = "\n".join(f"{n}, {v}" for n, v in enumerate(SHEARS, 1))
    part.rows("shears", f"mode, V_o [kip]\n{rows}", source="P", meanings={"V_o": "base shear of each mode"})
    part.line("V_m", "V_o", unit="kip", meaning="base shear of each mode")
    part.methods.correlation()
    return part.methods.combine("V_m", rule=rule)[0].value


@pytest.mark.parametrize(("rule", "printed"), [("SRSS", 66.066), ("ABS", 98.407), ("CQC", 66.507)])
def test_printed_combinations(rule: str, printed: float) -> None:
    # A. K. Chopra, Example 13.11 (from memory, high): the printed modal values combine to the printed sums
    assert shears(rule) == pytest.approx(printed, abs=1e-3)


def test_correlation_of_the_five_story_frame() -> None:
    part = five_story()
    part.methods.modes()
    part.methods.correlation()
    # A. K. Chopra, Table 13.11 (from memory, high): .007 .003 .002 .001 .044 .018 .012 .136 .062 .365
    assert part["rho_1"].value == pytest.approx([1, 0.007, 0.003, 0.002, 0.001], abs=6e-4)
    assert part["rho_4"].value[2:] == pytest.approx([0.136, 1, 0.365], abs=6e-4)
    assert part["worked_pair"].line.verdict == OK


def test_signs_count() -> None:
    part = five_story()
    part.methods.modes()
    part.methods.correlation()
    part.methods.combine("s_xn")
    part.methods.combine("s_xn", rule="ABS", into="s_xa")
    signed = np.array([part[f"s_x{n}"].value for n in range(1, 6)])
    frequencies = 1 / np.array(part["T_m"].value)
    assert part["s_xt"].value == pytest.approx(dynamics.combine(signed, frequencies, 0.05).tolist(), rel=1e-10)
    unsigned = dynamics.combine(np.abs(signed), frequencies, 0.05)
    assert max(abs(unsigned - part["s_xt"].value)) > 1
    assert all(a >= b for a, b in zip(part["s_xa"].value, part["s_xt"].value, strict=True))
    assert part["r_sxt"].shown == "0.000000001"


def test_refusals_are_named_together() -> None:
    part = five_story()
    with pytest.raises(InputError, match=r"(?s)rule: needed one of CQC, SRSS, ABS.*quantity.*'V'.*T_m"):
        part.methods.combine("V", rule="sum")
    part.methods.modes()
    with pytest.raises(InputError, match=r"rho_1.*methods.correlation\(\)"):
        part.methods.combine("s_xn")
    with pytest.raises(InputError, match=r"into: needed one quantity"):
        part.methods.combine("s_xn", "d_xn", rule="ABS", into="s")
    with pytest.raises(InputError, match=r"V_x1"):
        part.methods.combine("V_xn", rule="SRSS")


def test_correlation_asks_for_the_damping() -> None:
    part = five_story()
    part.methods.modes()
    del part.calc.lines.entries["zeta"]
    with pytest.raises(InputError, match=r"zeta"):
        part.methods.correlation()
