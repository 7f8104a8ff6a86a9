"""The table of requirements: every row has its tests, these exist, and each is shown to fail without its feature."""

import subprocess
import sys
import tomllib
from pathlib import Path
from typing import Any

import pytest

from tests import mutations

ROOT = Path(__file__).parents[1]
ROWS: list[dict[str, Any]] = tomllib.loads((ROOT / "tests" / "requirements.toml").read_text(encoding="utf-8"))["row"]

COUNTS = {"A": 21, "B": 23, "C": 13, "S": 22, "D": 8, "E": 6}


def test_every_requirement_has_its_row_once() -> None:
    ids = [f"{group}{number}" for group, count in COUNTS.items() for number in range(1, count + 1)]
    assert [row["id"] for row in ROWS] == ids
    assert all(row["requirement"].strip() for row in ROWS)


def test_no_row_is_blank() -> None:
    assert [row["id"] for row in ROWS if not row.get("tests")] == []


def test_the_named_tests_exist() -> None:
    named = sorted({test for row in ROWS for test in row.get("tests", [])})
    command = [sys.executable, "-m", "pytest", "--collect-only", "-q", "-p", "no:cacheprovider", *named]
    result = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
    assert result.returncode == 0, result.stdout[-3000:] + result.stderr
    collected = {line.partition("[")[0] for line in result.stdout.splitlines() if "::" in line}
    assert [test for test in named if test.partition("[")[0] not in collected] == []


@pytest.mark.parametrize("mutation", mutations.ALL, ids=lambda mutation: "-".join(mutation.rows))
def test_a_mutation_still_finds_its_place(mutation: mutations.Mutation) -> None:
    assert (ROOT / mutation.file).read_text(encoding="utf-8").count(mutation.old) == 1
    assert mutation.old != mutation.new


def test_every_row_with_a_test_is_shown_to_fail() -> None:
    shown = {row for mutation in mutations.ALL for row in mutation.rows}
    assert [row["id"] for row in ROWS if row.get("tests") and row["id"] not in shown] == []
    tests = {row["id"]: row.get("tests", []) for row in ROWS}
    for mutation in mutations.ALL:
        for row in mutation.rows:
            assert set(mutation.tests) & set(tests[row]), (row, mutation.tests)


def test_the_last_run_is_of_these_mutations_and_none_survived() -> None:
    said = (ROOT / "tests" / "mutations.txt").read_text(encoding="utf-8").splitlines()
    assert said[2:] == [f"killed: {mutation.name}" for mutation in mutations.ALL]
