"""Statistics and scaling of suites, against a general minimiser and against the rule itself."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import minimize_scalar
from scipy.stats import gmean, lognorm

from calckit.errors import InputError
from calckit.motions import Motion, scale_factors, scale_to_mean, scaled, scaling_range, statistics

PERIODS = np.geomspace(0.1, 4, 40)
TARGET = 5.0 / np.maximum(PERIODS, 0.5)
SPECTRA = TARGET * np.exp(np.random.default_rng(5).normal(0, 0.4, (12, 40))) * np.linspace(0.3, 3, 12)[:, None]
OVER = (0.2, 2.0)
INSIDE = (PERIODS >= 0.2) & (PERIODS <= 2.0)


def test_statistics_against_scipy() -> None:
    found = statistics(SPECTRA)
    assert found.mean == pytest.approx(np.mean(SPECTRA, axis=0), rel=1e-12)
    assert found.median == pytest.approx(gmean(SPECTRA, axis=0), rel=1e-12)
    assert found.dispersion == pytest.approx(np.std(np.log(SPECTRA), axis=0, ddof=1), rel=1e-12)


def test_median_and_dispersion_are_those_of_a_lognormal_sample() -> None:
    sample = lognorm(s=0.5, scale=3.0).rvs((20_000, 1), random_state=np.random.default_rng(1))
    found = statistics(sample)
    assert found.median[0] == pytest.approx(3.0, rel=0.02)
    assert found.dispersion[0] == pytest.approx(0.5, rel=0.02)


@pytest.mark.parametrize("fit", ["ln", "linear"])
def test_factors_make_the_squares_least(fit: str) -> None:
    found = scale_factors(SPECTRA, PERIODS, TARGET, OVER, fit=fit)
    for factor, spectrum in zip(found, SPECTRA[:, INSIDE], strict=True):

        def squares(ln_factor: float, row: np.ndarray = spectrum) -> float:
            scaled_row, aim = np.exp(ln_factor) * row, TARGET[INSIDE]
            difference = np.log(scaled_row / aim) if fit == "ln" else scaled_row - aim
            return float((difference**2).sum())

        assert np.log(factor) == pytest.approx(minimize_scalar(squares, tol=1e-12).x, abs=1e-6)


@pytest.mark.parametrize("floor", [0.9, 1.1])
def test_mean_of_the_suite_touches_the_floor(floor: float) -> None:
    # ASCE/SEI 7-16, 16.2 (from memory, high): mean of maximum-direction spectra >= 90 % of the target over the range
    found = scale_to_mean(SPECTRA, PERIODS, TARGET, OVER, floor=floor)
    ratios = (found.factors[:, None] * SPECTRA).mean(axis=0)[INSIDE] / TARGET[INSIDE]
    assert ratios.min() == pytest.approx(floor, rel=1e-12)
    assert found.lowest == pytest.approx(floor, rel=1e-12)
    assert found.at == PERIODS[INSIDE][ratios.argmin()]
    single = scale_factors(SPECTRA, PERIODS, TARGET, OVER)
    assert found.factors == pytest.approx(found.common * single, rel=1e-12)
    assert found.notes == ()


def test_scaling_does_not_depend_on_how_strong_the_records_were() -> None:
    weak = SPECTRA * np.linspace(0.01, 7, 12)[:, None]
    first, second = (scale_to_mean(rows, PERIODS, TARGET, OVER) for rows in (SPECTRA, weak))
    assert first.factors[:, None] * SPECTRA == pytest.approx(second.factors[:, None] * weak, rel=1e-10)


def test_small_suites_are_told() -> None:
    assert scale_to_mean(SPECTRA[:3], PERIODS, TARGET, OVER).notes == (
        "motions: 3; ASCE/SEI 7-16, 16.2, asks for at least 11",
    )


def test_range_of_the_standard() -> None:
    # upper end 2.0 times the longest first-mode period; lower end min(0.2 T, T of 90 % of the mass) (from memory, high)
    assert scaling_range(0.8, 1.0, 0.5) == pytest.approx((0.16, 2.0))
    assert scaling_range(0.8, 1.0, 0.1) == pytest.approx((0.1, 2.0))
    with pytest.raises(InputError, match="longest: needed a period not below the shortest"):
        scaling_range(1.0, 0.8, 0.1)


def test_both_components_get_the_same_factor() -> None:
    pair = [Motion(name, [0.0, value], 0.1, kind="recorded") for name, value in (("along", 1.0), ("across", -3.0))]
    along, across = scaled(pair, 0.5)
    assert (along.acceleration[1], across.acceleration[1]) == (0.5, -1.5)
    assert along.notes == across.notes == ("multiplied by 0.5",)
    assert (along.kind, across.name) == ("recorded", "across")


def test_bad_suites_are_named() -> None:
    with pytest.raises(InputError, match=r"(?s)fit.*spectra: needed numbers above 0.*target: needed 2 ordinates"):
        scale_factors([[1.0, -1.0]], [0.1, 0.2], [1.0], (0.1, 0.2), fit="cubic")
    with pytest.raises(InputError, match=r"over: needed a range within the periods, 0\.1 to 0\.2 s; given 0\.1"):
        scale_to_mean([[1.0, 1.0]], [0.1, 0.2], [1.0, 1.0], (0.1, 0.5))
    with pytest.raises(InputError, match="periods: needed periods that rise"):
        scale_to_mean([[1.0, 1.0]], [0.2, 0.1], [1.0, 1.0], (0.1, 0.2))
    with pytest.raises(InputError, match="spectra: needed at least 2 motions; given 1"):
        statistics([[1.0, 2.0]])
    with pytest.raises(InputError, match="factor: needed numbers above 0"):
        scaled([], -1.0)
