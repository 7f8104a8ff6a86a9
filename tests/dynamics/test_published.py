"""The checks of dynamics: each is run through public functions, or says why not. Sources stand in `checks.toml`."""

from __future__ import annotations

import tomllib
from importlib import resources

import pytest

from calckit.core import checks
from calckit.core.record import OK
from calckit.dynamics.verify import ADAPTERS

FOLDERS = [resources.files(f"calckit.{name}") for name in ("dynamics", "motions")]
TEXTS = [(folder / "checks.toml").read_text(encoding="utf-8") for folder in FOLDERS]
RAW = [check for text in TEXTS for check in tomllib.loads(text)["check"]]
CHECKS = {check.id: check for check in checks.read(TEXTS[0])}
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
    assert {raw["id"] for raw in RAW if "record" not in raw["given"] and "reached" in raw} == set(ADAPTERS)
    assert [raw["id"] for raw in RAW if ("reached" in raw) == bool(raw.get("reason"))] == []
    assert {raw.get("reached", "public function") for raw in RAW} == {"public function"}


def test_every_check_names_its_source() -> None:
    assert len({raw["id"] for raw in RAW}) == len(RAW)
    for raw in RAW:
        assert raw["source"]["document"], raw["id"]
        assert raw["source"]["place"], raw["id"]
        assert raw["obtained"] in OBTAINED, raw["id"]


def test_a_wrong_value_would_be_seen() -> None:
    check = CHECKS["dyn.E3.chain_N2"]
    results = ADAPTERS[check.id](check.given)
    wrong = checks.run(check, lambda given: results | {"omega": [value * 1.00001 for value in results["omega"]]})
    assert {row.quantity.partition(",")[0]: row.verdict for row in wrong.rows} == {
        "omega": "NOT OK", "M_eff_over_M": "OK",
    }  # fmt: skip


def test_counts_stand_apart() -> None:
    text, agrees = checks.report("dynamics")
    assert agrees
    assert "published, found: 1 of 2 checks run, 8 of 8 values agree" in text
    assert "  dyn.E7b.two_root_d: not yet in the kit: EN 1998-1" in text
