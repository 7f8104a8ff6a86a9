"""The template of the full package: every line by the printed-digits rule, every check made and met."""

from __future__ import annotations

import json

import pytest

from calckit.core.record import Record
from tests.printed_audit import audit
from tests.template_runs import TEMPLATES, template

PATH = TEMPLATES / "building_package.ipynb"


@pytest.fixture(scope="module")
def record() -> Record:
    return template(path=PATH)


def test_every_line_follows_from_what_is_printed(record: Record) -> None:
    found = audit(dict(json.loads(record.to_json())))
    assert found.faults == []
    assert found.counts["computed line"] >= 200 and sum(found.counts.values()) >= 1500


def test_nothing_is_left_unchecked(record: Record) -> None:
    assert {line.verdict for line in record.lines if line.verdict} == {"OK"}
    waiting = {item.line for item in record.open_items if item.group == "open"}
    assert waiting == {"X.orthogonal", "Y.orthogonal", "N-roof"}


def test_the_model_belongs_to_these_forces(record: Record) -> None:
    # the shear and the weight typed for the model are those computed here, to the digits printed
    for part in ("X", "Y"):
        assert record.line(f"{part}.V_applied").value == pytest.approx(record.line(f"{part}.V").value, rel=1e-3)
        assert record.line(f"{part}.W_model").value == pytest.approx(record.line("W").value, rel=1e-3)


def test_the_weight_is_that_of_the_take_off(record: Record) -> None:
    # by hand: roof 10080 x 62 psf + 120 kip + (1560 + 1092) x 15 psf
    w_x = record.line("w_x")
    assert w_x.value[0] == pytest.approx(10080 * 0.062 + 120 + (1560 + 1092) * 0.015)
    assert record.line("W").value == pytest.approx(sum(w_x.value))


def test_a_longer_period_leaves_the_model_behind() -> None:
    changed = template({"X.T_analysis": "1.4 s"}, path=PATH)
    assert changed.line("X.model_shear").verdict == "NOT OK"
    assert any(item.line == "X.model_shear" for item in changed.open_items)
