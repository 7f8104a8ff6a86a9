"""Redundancy of ASCE/SEI 7 (12.3.4): from memory, high; the 33 % is found in a list of questions on FEMA P-2192-V1."""

from __future__ import annotations

from collections.abc import Sequence

import pytest

from calckit.core.calc import Calc
from calckit.errors import InputError

from .building import BRACED, value
from .test_irregularity import BOTH, PLAN, detail, flags, paste, start


def shears(calc: Calc) -> None:
    """Story shears whose top one is 35 % of the base shear, which is not more than 35 %."""
    paste(calc, "V_x [kip]", ([35, 60, 90, 100],), id_="shears")
    calc.given("V", "100 kip", source="P")


@pytest.mark.parametrize("standard", BOTH)
@pytest.mark.parametrize(("category", "rho"), [("A", 1.0), ("B", 1.0), ("C", 1.0), ("D", 1.3), ("E", 1.3), ("F", 1.3)])
def test_redundancy_by_category(standard: str, category: str, rho: float) -> None:
    calc = start(standard, category=category)
    shears(calc)
    assert float(calc.asce7.redundancy()) == rho
    assert bool(flags(calc, "rho")) == (rho > 1)  # neither condition is answered


@pytest.mark.parametrize("standard", BOTH)
@pytest.mark.parametrize(
    ("losses", "torsion", "rho", "says"),
    [
        ((0.33, 0.33, 0.33), "no", 1.0, "(a) met, losses"), ((0.33, 0.34, 0.33), "no", 1.3, "over 33 % at 2"),
        ((0.33, 0.33, 0.33), "yes", 1.3, "severe torsional"), ((0.1, 0.1, 0.1), "", 1.3, "removal_torsion is missing"),
    ],
)  # fmt: skip
def test_redundancy_by_removal(standard: str, losses: Sequence[float], torsion: str, rho: float, says: str) -> None:
    calc = start(standard)
    shears(calc)
    paste(calc, "r_loss", (losses,), ("3", "2", "1"), "removal")
    if torsion:
        calc.answer("removal_torsion", torsion, basis="demo")
    assert float(calc.asce7.redundancy()) == rho
    assert says in detail(calc, "rho") and "stories with over 35 % of V are 3, 2, 1;" in detail(calc, "rho")


def test_redundancy_by_perimeter() -> None:
    def rho(bays: Sequence[float], **words: str) -> tuple[float, str]:
        calc = start()
        shears(calc)
        paste(calc, "n_bay1, n_bay2", (bays, [2, 2, 2]), ("3", "2", "1"), "bays")
        for name in PLAN:
            if words.get(name) != "open":
                calc.answer(name, words.get(name, "no"), basis="demo")
        return float(calc.asce7.redundancy()), detail(calc, "rho")

    assert rho([2, 2, 2])[0] == 1.0
    assert "fewer than two bays at 1" in rho([2, 2, 1])[1]
    assert rho([2, 2, 2], H2="yes") == (1.3, rho([2, 2, 2], H2="yes")[1])
    assert "irregular in plan by H2" in rho([2, 2, 2], H2="yes")[1]
    assert "answers H5 are missing" in rho([2, 2, 2], H5="open")[1]


def test_redundancy_by_answers_and_other_direction() -> None:
    calc = start()
    shears(calc)
    calc.answers("removal_passes; no; demo\nperimeter_bays; yes; demo")
    for name in PLAN:
        calc.answer(name, "no", basis="demo")
    y = calc.part("Y", "North-south")
    y.rows("ends", "level, d_1plus [in], d_2plus [in]\nR, 1.5, 0.5", source="P")
    y.asce7.end_displacements()
    y.answer("H5", "yes", basis="demo")
    assert float(calc.asce7.redundancy()) == 1.3
    assert "irregular in plan by Y.H1a, Y.H1b, Y.H5" in detail(calc, "rho")


def test_redundancy_names_what_is_missing() -> None:
    with pytest.raises(InputError, match=r"(?s)V_x.*vertical_distribution.*V \(base shear"):
        start().asce7.redundancy()
    calc = start()
    shears(calc)
    paste(calc, "r_loss", ([0.1],), ("1",), "removal")
    with pytest.raises(InputError, match="a row for each story with over 35 % of V; given none for 3, 2"):
        calc.asce7.redundancy()


def test_trap_15_redundancy_is_not_in_drift_or_stability() -> None:
    results = []
    for rho in ("1.0", "1.3"):
        calc = start(
            risk_category="II", system=BRACED, C_d=5, I_e=1, rho=rho, drift_class="all other",
        )  # fmt: skip
        calc.levels(
            "level, h_x [ft], w_x [kip], delta_xe [in], P_x [kip]\nR, 24, 90, 0.75, 90\n1, 12, 100, 0.4, 190",
            source="P",
        )
        paste(calc, "V_x [kip]", ([50, 80],), ["R", "1"])
        calc.asce7.drift()
        calc.asce7.stability()
        results.append([value(calc, name) for name in ("Delta", "Delta_a", "theta")])
    assert results[0] == results[1]


def test_trap_15_line_says_where_redundancy_stands() -> None:
    calc = start(category="B")
    calc.asce7.redundancy()
    for words in ("drift, P-delta", "nonstructural components", "overstrength", "transfer forces take it"):
        assert words in detail(calc, "rho")
