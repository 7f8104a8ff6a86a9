"""Modes, combination and energy periods against scipy.linalg.eigh, closed forms and each other."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.linalg import eigh

from calckit.dynamics import (
    combine,
    correlation,
    energy_period,
    flexural_cantilever,
    modes,
    rayleigh_damping,
    rayleigh_quotient,
    shear_building,
    shear_cantilever,
)
from calckit.errors import InputError


@pytest.mark.parametrize("freedoms", [1, 2, 7, 60, 200])
def test_frequencies_against_scipy(freedoms: int) -> None:
    random = np.random.default_rng(freedoms)
    mass, stiffness = random.uniform(0.5, 2, freedoms), shear_building(random.uniform(0.5, 2, freedoms))
    found = modes(mass, stiffness)
    squares = eigh(stiffness, np.diag(mass), eigvals_only=True)
    assert found.frequencies == pytest.approx(np.sqrt(squares), rel=1e-10)
    assert found.effective_masses.sum() == pytest.approx(mass.sum(), rel=1e-9)
    unit = found.shapes.T @ np.diag(mass) @ found.shapes
    assert np.abs(unit - np.diag(np.diag(unit))).max() < 1e-8 * np.abs(unit).max()


def test_full_mass_matrix_against_scipy() -> None:
    mass = np.array([[3.0, 0.5, 0.0], [0.5, 2.0, 0.2], [0.0, 0.2, 1.0]])
    stiffness = shear_building([4.0, 3.0, 2.0])
    exact = np.sqrt(eigh(stiffness, mass, eigvals_only=True))
    assert modes(mass, stiffness).frequencies == pytest.approx(exact, rel=1e-10)
    assert modes(mass, stiffness).effective_masses.sum() == pytest.approx(mass.sum(), rel=1e-12)


@pytest.mark.parametrize("N", [1, 2, 5, 20])
def test_uniform_chain_in_closed_form(N: int) -> None:
    n = np.arange(1, N + 1)
    found = modes(np.ones(N), shear_building(np.ones(N)))
    assert found.frequencies == pytest.approx(2 * np.sin((2 * n - 1) * np.pi / (2 * (2 * N + 1))), rel=1e-12)


def test_cantilevers_tend_to_the_uniform_ones() -> None:
    # T_1 = 1.7870 sqrt(m L^4/(E I)), effective mass 0.613; 4 H/V_s, effective mass 8/pi^2
    heights = np.arange(1, 201) / 200
    mass = np.full(200, 1 / 200)
    mass[-1] /= 2
    flexural = modes(mass, flexural_cantilever(1.0, heights))
    assert flexural.periods[0] == pytest.approx(1.7870, rel=1e-3)
    assert flexural.effective_masses[0] == pytest.approx(0.613, rel=5e-3)
    shear = modes(mass, shear_cantilever(1.0, heights))
    assert shear.periods[0] == pytest.approx(4.0, rel=1e-3)
    assert shear.effective_masses[0] == pytest.approx(8 / np.pi**2, rel=5e-3)


def test_correlation_is_symmetric_and_one_on_the_diagonal() -> None:
    found = correlation([1.0, 1.3, 2.0], 0.05)
    assert found == pytest.approx(found.T) and np.diag(found) == pytest.approx(1)
    unequal = correlation([1.0, 1.0], [0.02, 0.1])
    assert unequal[0, 1] < 1  # with unequal damping even modes of one frequency are not the same


def test_trap_12_square_sum_is_wrong_on_close_modes_and_the_denominator_is_a_sum() -> None:
    close = combine([1.0, -1.0], [1.0, 1.0001], 0.05)
    assert close == pytest.approx(0, abs=0.01) and combine([1.0, -1.0], [1.0, 1.0001], 0.05, rule="SRSS") > 1.4
    r, z = 0.9, 0.05
    product = 8 * z**2 * (1 + r) * r**1.5 / ((1 - r**2) ** 2 * 4 * z**2 * r * (1 + r) ** 2)
    assert correlation([r, 1.0], z)[0, 1] != pytest.approx(product, rel=0.1)


def test_signs_count_in_cqc_and_shapes_pass_through() -> None:
    same, opposite = combine([1.0, 1.0], [1.0, 1.1], 0.05), combine([1.0, -1.0], [1.0, 1.1], 0.05)
    assert same > np.sqrt(2) > opposite
    assert combine(np.ones((2, 3, 4)), [1.0, 2.0], 0.05).shape == (3, 4)


@settings(max_examples=50, deadline=None)
@given(st.lists(st.floats(0.1, 5), min_size=3, max_size=3), st.lists(st.floats(0.1, 3), min_size=3, max_size=3))
def test_guessed_shapes_give_no_longer_period(shape: list[float], stories: list[float]) -> None:
    mass, stiffness = np.array([1.0, 2.0, 0.5]), shear_building(stories)
    exact = modes(mass, stiffness).periods[0]
    assert 2 * np.pi / np.sqrt(rayleigh_quotient(mass, stiffness, shape)) <= exact * (1 + 1e-9)
    forces = np.array(shape)
    assert energy_period(mass, forces, np.linalg.solve(stiffness, forces)) <= exact * (1 + 1e-9)


def test_rayleigh_damping_gives_the_ratio_at_both_frequencies() -> None:
    a, b = rayleigh_damping(0.05, 3.0, 11.0)
    assert [a / (2 * w) + b * w / 2 for w in (3.0, 11.0)] == pytest.approx([0.05, 0.05])


def test_bad_matrices_are_named() -> None:
    with pytest.raises(InputError, match="stiffness: needed a symmetric matrix"):
        modes([1, 1], [[2, -1], [0, 1]])
    with pytest.raises(InputError, match="hold the structure at its base"):
        modes([1, 1], [[1, -1], [-1, 1]])
    with pytest.raises(InputError, match="mass: needed a positive definite matrix"):
        modes([[1, 2], [2, 1]], [[2, -1], [-1, 1]])
    with pytest.raises(InputError, match="mass: needed numbers above 0; given 0; cure: give every freedom a mass"):
        modes([1, 0], [[2, -1], [-1, 1]])
    with pytest.raises(InputError, match="heights: needed 2 numbers"):
        modes([1, 1], [[2, -1], [-1, 1]], heights=[1, 2, 3])
    with pytest.raises(InputError, match="one entry for each frequency"):
        combine([1, 2, 3], [1, 2], 0.05)
