"""House rules that no tool knows."""

import ast
import importlib
import inspect
import operator
import re
import subprocess
from collections.abc import Iterator

import pytest

from tests.house import source

MOST_LINES = 500

SHOWN = {
    "calckit.core.calc", "calckit.core.writer", "calckit.core.handle", "calckit.units", "calckit.plots.levels",
    "calckit.plots.spectrum", "calckit.plots.motions", "calckit.standards.asce7.steps",
    "calckit.methods.steps",
    "calckit.dynamics.closed_forms", "calckit.dynamics.combination", "calckit.dynamics.modal",
    "calckit.dynamics.oscillator", "calckit.dynamics.recurrence", "calckit.dynamics.spectrum",
    "calckit.dynamics.stepping",
    "calckit.motions.content", "calckit.motions.correction", "calckit.motions.measures", "calckit.motions.motion",
    "calckit.motions.reading", "calckit.motions.suites", "calckit.motions.synthetic",
}  # fmt: skip
"""Modules whose names a user writes: each name stands in an example that runs."""

NOT_SHOWN = {
    "calckit": "passes on what other modules define",
    "calckit.__main__": "starts the command line",
    "calckit.cli": "shown by the commands in README.md; run by tests/test_cli.py",
    "calckit.dynamics": "passes on what its modules define",
    "calckit.dynamics.arguments": "behind the array functions; every refusal shows it",
    "calckit.dynamics.blocks": "behind responses and spectra; shown by their examples",
    "calckit.dynamics.progress": "behind spectra; a bar on a terminal",
    "calckit.dynamics.verify": "run by `calckit verify dynamics`",
    "calckit.methods": "passes on what its modules define",
    "calckit.methods.": "behind the steps; shown by their examples",
    "calckit.motions": "passes on what its modules define",
    "calckit.motions.verify": "run by `calckit verify dynamics`",
    "calckit.errors": "raised, never called; the wording is compared in the tests of what raises it",
    "calckit.core.": "behind Calc; shown by the examples of Calc and its methods",
    "calckit.plots.": "behind the figures; shown by their examples",
    "calckit.report.": "works on whole files; shown by the commands in README.md and run by tests/report",
    "calckit.standards.": "behind the steps; shown by their examples",
}
"""Other modules, by name or by what their names start with, and why their names need no example."""


def calls(tree: ast.Module) -> Iterator[tuple[str, int]]:
    """Names that are called, without what they are called on."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Call):
            if isinstance(node.func, ast.Name):
                yield node.func.id, node.lineno
            elif isinstance(node.func, ast.Attribute):
                yield f".{node.func.attr}", node.lineno


@pytest.mark.parametrize("name", source.modules())
def test_no_text_is_evaluated(name: str) -> None:
    # typed expressions go through core/parser.py, which walks Python's own syntax tree by a list of what is allowed
    evaluating = {
        "eval",
        "exec",
        "compile",
        "sympify",
        "parse_expr",
        ".sympify",
        ".parse_expr",
        ".eval",
    }
    assert [(call, line) for call, line in calls(source.modules()[name]) if call in evaluating] == []


@pytest.mark.parametrize("name", [name for name in source.modules() if name != "calckit.cli"])
def test_only_the_command_line_prints(name: str) -> None:
    assert [line for call, line in calls(source.modules()[name]) if call == "print"] == []


@pytest.mark.parametrize("name", source.modules())
def test_every_module_says_what_it_knows(name: str) -> None:
    assert ast.get_docstring(source.modules()[name])


def public(name: str) -> Iterator[tuple[str, ast.FunctionDef | ast.ClassDef]]:
    """Public functions and classes of a module, and the public methods of its public classes."""
    for node in source.modules()[name].body:
        if isinstance(node, ast.FunctionDef | ast.ClassDef) and not node.name.startswith("_"):
            yield node.name, node
            for inner in node.body if isinstance(node, ast.ClassDef) else []:
                if isinstance(inner, ast.FunctionDef) and not inner.name.startswith("_"):
                    yield f"{node.name}.{inner.name}", inner


@pytest.mark.parametrize("name", [name for name in source.modules() if name != "calckit.__main__"])
def test_everything_public_is_documented(name: str) -> None:
    # a method that takes the place of an inherited one may keep the inherited docstring
    module = importlib.import_module(name)
    assert [inner for inner, _ in public(name) if not inspect.getdoc(operator.attrgetter(inner)(module))] == []


@pytest.mark.parametrize("name", sorted(SHOWN))
def test_what_users_write_stands_in_an_example(name: str) -> None:
    docs = {inner: ast.get_docstring(node) or "" for inner, node in public(name)}
    typed = re.compile(r"^\s*(?:>>>|\.\.\.) (.*)", re.MULTILINE)
    every = " ".join(line for doc in docs.values() for line in typed.findall(doc))
    bare = [
        inner
        for inner, doc in docs.items()
        if ">>>" not in doc and not ("." in inner and re.search(rf"\.{inner.split('.')[1]}\b", every))
    ]
    assert bare == []


def test_every_module_is_shown_or_has_a_reason() -> None:
    modules = set(source.modules())
    assert modules >= SHOWN
    reasons = tuple(start for start in NOT_SHOWN if start.endswith("."))
    assert [name for name in modules - SHOWN if name not in NOT_SHOWN and not f"{name}.".startswith(reasons)] == []


@pytest.mark.parametrize("path", [path for path in source.text_files() if path.endswith(".py")])
def test_modules_stay_short(path: str) -> None:
    assert source.text_files()[path].count("\n") < MOST_LINES


def test_the_top_of_the_repository() -> None:
    listing = subprocess.run(
        ["git", "ls-files", "--cached", "--others", "--exclude-standard"],
        capture_output=True, text=True, check=True, cwd=source.ROOT,
    ).stdout.splitlines()  # fmt: skip
    top = {path.split("/")[0] for path in listing}
    assert {entry for entry in top if not entry.startswith(".")} == {
        "README.md", "DEVELOPERS.md", "pyproject.toml", "calckit", "templates", "tests", "example_reports",
    }  # fmt: skip


UNWANTED = [
    "lec" + "ture", "trans" + "cript", "you" + "tube", "/" + "work/", "/" + "tmp/", "shared/" + "design",
    "home" + "work", "stu" + "dent", "tutor" + "ial", "class" + "room",
]  # fmt: skip
"""Words that belong to how the project was made, or to what it is not; written in two so that this file has none."""


@pytest.mark.parametrize("word", UNWANTED)
def test_words_that_stand_nowhere(word: str) -> None:
    assert [path for path, text in source.text_files().items() if word in text.lower()] == []


VERDICTS = re.compile(
    r"\b(?:" + "|".join(["appr" + "oved", "certi" + "fied", "compl" + "iant"]) + r")\b", re.IGNORECASE
)
"""What only a person may say of a calculation."""


def test_the_kit_never_speaks_for_a_person() -> None:
    printed = ("calckit/", "templates/")
    found = [
        f"{path}: {line.strip()}"
        for path, text in source.text_files().items()
        if path.startswith(printed)
        for line in text.splitlines()
        if VERDICTS.search(line)
    ]
    assert found == []
