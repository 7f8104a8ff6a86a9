"""The templates of modal analysis and of ground motions: lines by the printed-digits rule, and what they must say."""

from __future__ import annotations

import json

import pytest

from calckit import dynamics
from calckit.core.record import Record
from tests.printed_audit import audit
from tests.template_runs import TEMPLATES, template


@pytest.fixture(scope="module")
def modal() -> Record:
    return template(path=TEMPLATES / "building_modal_response.ipynb")


@pytest.fixture(scope="module")
def motions() -> Record:
    return template(path=TEMPLATES / "ground_motion.ipynb")


@pytest.mark.parametrize("name", ["modal", "motions"])
def test_every_line_follows_from_what_is_printed(name: str, request: pytest.FixtureRequest) -> None:
    found = audit(dict(json.loads(request.getfixturevalue(name).to_json())))
    assert found.faults == []
    assert found.counts["computed line"] >= 15


def test_modes_are_those_of_the_arrays(modal: Record) -> None:
    # kip, inch, second: weights over g in in/s2, the roof last
    weights = [float(w) for w in modal.line("w_x").value[::-1]]  # type: ignore[union-attr]
    springs = [float(k) for k in modal.line("X.k_x").value[::-1]]  # type: ignore[union-attr]
    found = dynamics.modes([w / 386.0886 for w in weights], dynamics.shear_building(springs))
    assert modal.line("X.T_m").value == pytest.approx(found.periods[:5], rel=1e-6)


def test_forces_are_scaled_to_the_static_base_shear(modal: Record) -> None:
    f_V, V, V_t = (float(modal.line(f"X.{name}").value) for name in ("f_V", "V", "V_t"))  # type: ignore[arg-type]
    assert f_V == pytest.approx(max(1.0, V / V_t), rel=1e-9)
    assert modal.line("X.V_xd").value[-1] == pytest.approx(f_V * V_t, rel=1e-3)  # type: ignore[index]


def test_a_stick_model_says_that_it_has_no_torsion(modal: Record) -> None:
    assert any("a stick model has no torsion" in item.text for item in modal.open_items)


def test_synthetic_motions_say_so(motions: Record) -> None:
    for number in range(1, 5):
        assert "synthetic" in str(motions.line(f"motion_{number}").shown)


def test_information_gets_no_verdict(motions: Record) -> None:
    section = "Information, not a requirement of the standard"
    told = [line for line in motions.lines if line.section == section]
    assert told and not any(line.verdict for line in told)


def test_the_mean_of_the_scaled_motions_is_nowhere_below_the_share(motions: Record) -> None:
    assert min(motions.line("r_target").value) == pytest.approx(0.9, abs=1e-6)  # type: ignore[type-var,arg-type]
