"""House rules that no tool knows."""

import ast
import re
import subprocess
from collections.abc import Iterator

import pytest

from tests.house import source

MOST_LINES = 500

WITHOUT_EXAMPLE = {
    "calckit.errors": "an error is shown by the tests of what raises it",
    "calckit.core.record": "plain data; the fields are the documentation, and the tests read and write it",
}
"""Modules whose public names need no example, and why."""


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
        ".literal_eval",
    }
    assert [(call, line) for call, line in calls(source.modules()[name]) if call in evaluating] == []


@pytest.mark.parametrize("name", [name for name in source.modules() if name != "calckit.cli"])
def test_only_the_command_line_prints(name: str) -> None:
    assert [line for call, line in calls(source.modules()[name]) if call == "print"] == []


@pytest.mark.parametrize("name", source.modules())
def test_every_module_says_what_it_knows(name: str) -> None:
    assert ast.get_docstring(source.modules()[name])


def public(name: str) -> Iterator[tuple[str, ast.AST]]:
    """Public functions and classes of a module, and the public methods of its public classes."""
    for node in source.modules()[name].body:
        if isinstance(node, ast.FunctionDef | ast.ClassDef) and not node.name.startswith("_"):
            yield node.name, node
            for inner in node.body if isinstance(node, ast.ClassDef) else []:
                if isinstance(inner, ast.FunctionDef) and not inner.name.startswith("_"):
                    yield f"{node.name}.{inner.name}", inner


@pytest.mark.parametrize("name", source.modules())
def test_everything_public_is_documented(name: str) -> None:
    assert [f"{name}.{inner}" for inner, node in public(name) if not ast.get_docstring(node)] == []


@pytest.mark.parametrize("name", source.modules())
def test_everything_public_has_an_example(name: str) -> None:
    if name in WITHOUT_EXAMPLE:
        return
    bare = [inner for inner, node in public(name) if "." not in inner and ">>>" not in (ast.get_docstring(node) or "")]
    assert bare == []


def test_reasons_name_modules_that_exist() -> None:
    assert set(WITHOUT_EXAMPLE) <= set(source.modules())


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
    "lec" + "ture", "trans" + "cript", "you" + "tube", "/" + "work/", "/" + "tmp/", "shared/" + "design", "home" + "work",
    "stu" + "dent", "tutor" + "ial", "class" + "room",
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
