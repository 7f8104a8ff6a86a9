"""The notes of the standard list every clause and table in use, and what no check reaches."""

from __future__ import annotations

import re
from collections.abc import Iterator
from importlib import resources

import pytest

from calckit.core import checks
from calckit.core.formula import Formula
from calckit.core.table import load
from calckit.standards.asce7.declared import FORMULAS
from calckit.standards.asce7.verify import ADAPTERS

PACKAGE = "calckit.standards.asce7"
NOTES = (resources.files(PACKAGE) / "NOTES.md").read_text(encoding="utf-8")
CHECKS = checks.read((resources.files(PACKAGE) / "checks.toml").read_text(encoding="utf-8"))


def section(title: str) -> str:
    """The text under a heading."""
    return NOTES.partition(f"### {title}\n")[2].partition("\n#")[0]


def clauses(obtained: str) -> list[str]:
    """The clauses and tables listed under a word for how they were obtained."""
    return re.findall(r"^\| \[ \] \| ([^|]+?) \|", section(obtained[0].upper() + obtained[1:]), re.M)


def in_use() -> Iterator[tuple[str, str]]:
    """Every clause or table of the kit with its word."""
    for formula in FORMULAS.values():
        if formula.source.standard:  # statics needs no copy of the standard
            yield formula.source.where, formula.source.obtained
    for path in (resources.files(PACKAGE) / "tables").iterdir():
        table = load(PACKAGE, path.name.removesuffix(".csv"))
        for key in table.rows:
            source = table.source(key)
            yield source.where, source.obtained


@pytest.mark.parametrize(("where", "obtained"), sorted(set(in_use())))
def test_every_clause_and_table_is_listed(where: str, obtained: str) -> None:
    assert where in clauses(obtained)


def test_least_certain_come_first() -> None:
    titles = re.findall(r"^### (.+)$", NOTES, re.M)
    assert titles == ["Memory, medium", "Memory, high", "Found"]


def test_formulas_without_a_check_are_listed(monkeypatch: pytest.MonkeyPatch) -> None:
    worked: set[int] = set()
    value = Formula.value

    def noted(self: Formula, *args: object, **how: object) -> float:
        worked.add(id(self))
        return value(self, *args, **how)  # type: ignore[arg-type]

    monkeypatch.setattr(Formula, "value", noted)
    for check in CHECKS:
        if check.id in ADAPTERS:
            ADAPTERS[check.id](check.given)
    absent = {name for name, formula in FORMULAS.items() if id(formula) not in worked}
    table = NOTES.partition("Formulas that no check reaches")[2].partition("Checks of")[0]
    assert set(re.findall(r"^\| (\w+) \| ", table, re.M)) - {"formula"} == absent


def test_checks_that_are_not_run_are_listed() -> None:
    table = NOTES.partition("that are not run")[2].partition("\n#")[0]
    named = set(re.findall(r"asce7\.[\w.]+\w", table))
    assert named == {check.id for check in CHECKS if check.reason or check.not_reached}


def test_count_of_remembered_system_rows() -> None:
    systems = load(PACKAGE, "systems")
    remembered = [key for key in systems.rows if systems.source(key).obtained == "memory, high"]
    assert f"heights of the {len(remembered)} rows" in NOTES
