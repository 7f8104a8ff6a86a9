"""The runner of published checks: what agrees, what does not, and what it says."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import pytest

from calckit.core import checks
from calckit.errors import InputError, UnknownNameError

TEXT = """
[[check]]
id = "demo.one"
obtained = "memory, high"
edition = "any"
reached = "public step"
source = {document = "A book", place = "p. 3"}
not_reached = {z = "later"}
given = {level = ["R", "2"]}
expect = {a = [2.0, 0.1], b = [[1.0, 2.0], "1%"], c = [["R"], 0], d = [true, 0], n = [12, 0], z = [1, 0]}

[[check]]
id = "demo.two"
obtained = "constructed"
edition = "any"
reason = "not yet in the kit"
source = {document = "worked out", place = "-"}
given = {}
expect = {a = [1, 0]}
"""
RIGHT = {"a": 2.099, "b": [1.009, 2.0], "c": ["R"], "d": True, "n": 12.0}


def rows(results: Mapping[str, Any]) -> dict[str, str]:
    """The verdict of each quantity."""
    outcome = checks.run(checks.read(TEXT)[0], lambda given: results)
    return {row.quantity.partition(",")[0]: row.verdict for row in outcome.rows}


def test_reads_source_and_kind() -> None:
    one, two = checks.read(TEXT)
    assert (one.source, one.kind, one.reason) == ("A book, p. 3", "published, from memory", "")
    assert (two.source, two.kind, two.reason) == ("worked out", "constructed, not published", "not yet in the kit")


def test_all_agree_within_tolerance() -> None:
    assert rows(RIGHT) == dict.fromkeys("abcdn", "OK")


@pytest.mark.parametrize(
    ("name", "value"),
    [("a", 2.101), ("a", 1.899), ("a", None), ("a", "2"), ("b", [1.011, 2.0]), ("b", [1.0]), ("b", 1.0), ("c", []),
     ("d", False), ("n", 12.0000001), ("a", float("nan")), ("b", [float("nan"), 2.0])],
)  # fmt: skip
def test_one_wrong_value_is_not_ok(name: str, value: Any) -> None:
    assert rows({**RIGHT, name: value}) == {**dict.fromkeys("abcdn", "OK"), name: "NOT OK"}


def test_list_prints_its_worst_entry_by_level() -> None:
    outcome = checks.run(checks.read(TEXT)[0], lambda given: {**RIGHT, "b": [1.001, 2.01]})
    row = next(row for row in outcome.rows if row.quantity.startswith("b"))
    assert (row.quantity, row.expected, row.obtained) == ("b, 2 entries, worst at 2", "2", "2.01")


def test_refusal_makes_every_value_not_ok() -> None:
    def refuse(given: Mapping[str, Any]) -> Mapping[str, Any]:
        raise InputError("step", [])

    outcome = checks.run(checks.read(TEXT)[0], refuse)
    assert {row.verdict for row in outcome.rows} == {"NOT OK"}
    assert outcome.refusal == "step: "


def test_unknown_name_lists_the_known() -> None:
    with pytest.raises(UnknownNameError, match=r"checks 'asce8' is not known; known: asce7, dynamics"):
        checks.report("asce8")
