"""Who may import whom. The table is the one in DEVELOPERS.md."""

import ast
import subprocess
import sys

import pytest

from tests.house import source

KIT = {
    "errors": set(),
    "units": {"errors"},
    "core": {"errors", "units"},
    "standards": {"errors", "units", "core"},
    "dynamics": {"errors"},
    "motions": {"errors", "units", "dynamics"},
    "methods": {"errors", "units", "core", "dynamics", "motions"},
    "plots": {"errors"},
    "report": {"errors", "units", "core.record", "core.parser", "core.numbers"},
}
"""What of the kit each package may import, beside itself."""

LIBRARIES = {
    "errors": set(),
    "units": {"pint"},
    "core": {"sympy", "IPython"},
    "standards": {"numpy"},
    "dynamics": {"numpy"},
    "motions": {"numpy"},
    "methods": {"numpy"},
    "plots": {"numpy", "matplotlib"},
    "report": {
        "nbclient", "nbformat", "jupyter_client", "mistune", "latex2mathml", "jinja2", "markupsafe", "typst",
        "fontTools", "ziamath", "pypdf",
    },
}  # fmt: skip
"""What each package may import from outside the standard library."""

ALONE = {"calckit.report.exporters": {"nbconvert", "traitlets"}}
"""What one module alone may import besides."""

LAZY = {("core", "IPython")}
"""Imported only inside functions, so that importing the package stays free of it."""

TOP = {"calckit", "calckit.__main__", "calckit.cli"}
"""Modules on top of everything; they load the rest of the kit lazily."""

TOP_AT_ONCE = {"calckit", "calckit.errors", "calckit.core.record", "calckit.cli"}
"""What the modules on top may load at once."""


def package_of(name: str) -> str:
    return name.split(".")[1]


LAYERED = [name for name in source.modules() if name not in TOP]


def test_every_package_has_its_row() -> None:
    assert {package_of(name) for name in LAYERED} <= set(KIT)
    assert set(KIT) == set(LIBRARIES)


@pytest.mark.parametrize("name", LAYERED)
def test_imports_from_the_kit(name: str) -> None:
    package = package_of(name)
    wrong = []
    for found in source.imports(name):
        if not found.name.startswith("calckit") or found.name == "calckit":
            continue
        inside = found.name.removeprefix("calckit.")
        allowed = any(inside == other or inside.startswith(f"{other}.") for other in KIT[package] | {package})
        if not allowed:
            wrong.append(f"{name}:{found.line} imports {found.name}")
    assert wrong == []


@pytest.mark.parametrize("name", LAYERED)
def test_imports_from_outside(name: str) -> None:
    package = package_of(name)
    wrong = []
    for found in source.imports(name):
        library = found.name.split(".")[0]
        if library == "calckit" or library in sys.stdlib_module_names:
            continue
        at_once = not found.lazy and not found.typing_only
        if library not in LIBRARIES[package] | ALONE.get(name, set()) or ((package, library) in LAZY and at_once):
            wrong.append(f"{name}:{found.line} imports {found.name}")
    assert wrong == []


@pytest.mark.parametrize("name", sorted(TOP))
def test_the_top_loads_the_rest_lazily(name: str) -> None:
    wrong = [
        f"{name}:{found.line} imports {found.name}"
        for found in source.imports(name)
        if not found.lazy and not found.typing_only
        if found.name not in TOP_AT_ONCE and found.name.split(".")[0] not in sys.stdlib_module_names
    ]
    assert wrong == []


def test_families_of_standards_do_not_know_each_other() -> None:
    wrong = []
    for name in LAYERED:
        family = name.split(".")[2:3]
        if package_of(name) != "standards" or not family:
            continue
        for found in source.imports(name):
            if found.name.startswith("calckit.standards.") and found.name.split(".")[2:3] != family:
                wrong.append(f"{name}:{found.line} imports {found.name}")
    assert wrong == []


@pytest.mark.parametrize(
    ("module", "absent"),
    [
        ("calckit", {"sympy", "pint", "numpy", "matplotlib", "nbconvert", "typst"}),
        ("calckit.cli", {"sympy", "pint", "numpy", "matplotlib", "nbconvert", "typst"}),
        ("calckit.core.record", {"sympy", "pint", "numpy"}),
        ("calckit.core.parser", {"sympy", "pint", "numpy"}),
        ("calckit.standards.asce7", {"sympy", "matplotlib", "nbconvert"}),
        ("calckit.report.issue", {"sympy", "nbconvert", "matplotlib"}),
        ("calckit.report.recheck", {"sympy", "nbconvert", "matplotlib"}),
        ("calckit.report.exporters", {"sympy", "typst", "matplotlib"}),
        ("calckit.plots", {"sympy", "pint", "numpy", "matplotlib"}),
    ],
)
def test_importing_stays_light(module: str, absent: set[str]) -> None:
    code = f"import sys, {module}; print(*sorted(set({sorted(absent)!r}) & set(sys.modules)))"
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True, cwd=source.ROOT)
    assert run.stdout.split() == []


BY_NAME = {"calckit.core.standard", "calckit.core.checks"}
"""Modules that find standards by name, so that none has to be registered."""


def test_only_the_finders_import_by_name() -> None:
    found = {
        name
        for name, tree in source.modules().items()
        for node in ast.walk(tree)
        if isinstance(node, ast.Attribute | ast.Name)
        and (node.attr if isinstance(node, ast.Attribute) else node.id) in {"import_module", "__import__"}
    }
    assert found <= BY_NAME
