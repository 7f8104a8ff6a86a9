"""README.md, DEVELOPERS.md and .ci/run say what the code does."""

import argparse
import re
from collections.abc import Iterator
from dataclasses import fields

import pytest

from calckit import __version__, cli, plots
from calckit.core.record import SCHEMA, Line, Record
from tests.house import source, test_layering

README = source.text_files()["README.md"]
DEVELOPERS = source.text_files()["DEVELOPERS.md"]
CI = (source.ROOT / ".ci/run").read_text(encoding="utf-8")


def test_first_paragraph_says_the_job() -> None:
    first = README.split("\n\n")[1]
    assert all(word in first for word in ("seismic", "notebook", "second engineer", "PDF"))


def test_the_two_commands() -> None:
    first = ".venv/bin/pip install . && .venv/bin/calckit issue templates/building_lateral_force.ipynb"
    second = ".venv/bin/pip install '.[test]' && .venv/bin/python -m pytest"
    assert f"```\npython -m venv .venv && {first}\n```" in README
    assert f"```\n{second}\n```" in README
    assert "'.[test]'" in CI
    assert "-m pytest" in CI
    assert (source.ROOT / "templates/building_lateral_force.ipynb").is_file()
    assert (source.ROOT / ".ci/run").stat().st_mode & 0o111


@pytest.mark.parametrize("link", re.findall(r"\]\(([^)#]+)\)", README + DEVELOPERS))
def test_links_lead_somewhere(link: str) -> None:
    assert link.startswith("https://") or (source.ROOT / link).exists()


def test_release_notes_start_with_this_version_and_what_changes() -> None:
    notes = README.split("## Release notes")[1].split("###")[1]
    assert notes.split("\n", 1)[0].strip() == __version__
    assert notes.split("\n\n")[1].startswith("**Results that change:**")


def test_layering_table_is_the_one_that_is_enforced() -> None:
    rows = re.findall(r"^\| (\w+) \| (.+?) \| (.+?) \|$", DEVELOPERS.split("## Layers")[1], re.MULTILINE)
    table = {
        name: tuple(set() if cell == "-" else set(cell.split(", ")) for cell in (kit, libraries))
        for name, kit, libraries in rows
        if name != "package"
    }
    assert table == {name: (test_layering.KIT[name], test_layering.LIBRARIES[name]) for name in test_layering.KIT}


def commands() -> Iterator[tuple[str, list[str]]]:
    """Each command with its options and the names of its arguments."""
    for action in cli._parser()._actions:
        if isinstance(action, argparse._SubParsersAction):
            for name, parser in action.choices.items():
                own = [each for each in parser._actions if not isinstance(each, argparse._HelpAction)]
                yield name, [each.option_strings[0] if each.option_strings else str(each.metavar) for each in own]


@pytest.mark.parametrize(("name", "words"), list(commands()))
def test_commands_are_described(name: str, words: list[str]) -> None:
    (row,) = re.findall(rf"^\| `calckit {name}\b(.*?)`", DEVELOPERS, re.MULTILINE)
    described = set(re.findall(r"--[\w-]+", row)) | set(re.findall(r"\b[A-Z]{3,}\b", re.sub(r"--[\w-]+ \S+", "", row)))
    assert described == set(words)
    assert f"calckit {name}" in README


def test_record_fields_are_described() -> None:
    part = DEVELOPERS.split("### The record")[1].split("###")[0]
    assert SCHEMA in part
    named = set(re.findall(r"`(\w+)`", part))
    assert {field.name for kind in (Record, Line) for field in fields(kind)} <= named


def test_notebook_names_are_described() -> None:
    from calckit.core.calc import Calc

    part = DEVELOPERS.split("### Names in a notebook")[1].split("###")[0]
    named = set(re.findall(r"`(\w+)`", part))
    assert set(plots.__all__) <= named
    own = {"document", "revise", "part"}
    both = set(
        part.split("On the calculation and on a part:")[1].split(";")[0].replace("`", "").replace(",", " ").split()
    )
    assert own | both <= set(dir(Calc))
    assert own <= named


def test_exit_codes_are_described() -> None:
    codes = re.findall(r"^\| (\d) \| (.+?) \|$", DEVELOPERS, re.MULTILINE)
    assert [int(code) for code, _ in codes] == [cli.DONE, cli.AT_FAULT, cli.CELL_RAISED, cli.MISMATCH]


def test_the_readme_speaks_for_no_person() -> None:
    from tests.house.test_rules import VERDICTS

    assert VERDICTS.findall(README + DEVELOPERS) == []
