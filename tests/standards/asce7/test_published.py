"""The published checks of ASCE/SEI 7: each is run through public steps, or says why not.

Sources stand beside the values in `checks.toml`.
"""

from __future__ import annotations

import tomllib
from importlib import resources

import pytest

from calckit.core import checks
from calckit.core.record import OK
from calckit.standards.asce7.verify import ADAPTERS

TEXT = (resources.files("calckit.standards.asce7") / "checks.toml").read_text(encoding="utf-8")
RAW = tomllib.loads(TEXT)["check"]
CHECKS = {check.id: check for check in checks.read(TEXT)}
OBTAINED = {"found", "memory, high", "memory, medium", "memory, low", "constructed"}


@pytest.mark.parametrize("id_", list(ADAPTERS))
def test_agrees_with_its_source(id_: str) -> None:
    outcome = checks.run(CHECKS[id_], ADAPTERS[id_])
    assert outcome.refusal == ""
    assert [row for row in outcome.rows if row.verdict != OK] == []


@pytest.mark.parametrize("id_", list(ADAPTERS))
def test_gives_what_is_expected_and_nothing_that_is_excused(id_: str) -> None:
    check = CHECKS[id_]
    results = ADAPTERS[id_](check.given)
    assert set(check.not_reached) <= set(check.expect)
    assert set(check.expect) - set(results) == set(check.not_reached)


def test_every_check_is_run_or_says_why_not() -> None:
    assert {raw["id"] for raw in RAW if "reached" in raw} == set(ADAPTERS)
    assert [raw["id"] for raw in RAW if ("reached" in raw) == bool(raw.get("reason"))] == []
    assert {raw.get("reached", "public step") for raw in RAW} == {"public step"}


def test_every_check_names_its_source() -> None:
    assert len(CHECKS) == len(RAW)
    for raw in RAW:
        assert raw["source"]["document"], raw["id"]
        assert raw["source"]["place"], raw["id"]
        assert raw["obtained"] in OBTAINED, raw["id"]
        assert raw["edition"], raw["id"]


def test_counts_stand_apart() -> None:
    text, agrees = checks.report("asce7")
    assert agrees
    assert "published, found: 9 of 11 checks run, 82 of 82 values agree" in text
    assert "published, from memory: 7 of 7 checks run, 32 of 32 values agree" in text
    assert "constructed, not published: 42 of 44 checks run, 167 of 167 values agree" in text
    assert "  asce7.ex23.modal_scaling, factor_7_05: edition not offered: 0.85 V of the 2005 edition" in text
