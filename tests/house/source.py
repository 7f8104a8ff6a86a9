"""The source of the kit, read without importing it."""

import ast
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from pathlib import Path

ROOT = Path(__file__).parents[2]
PACKAGE = ROOT / "calckit"


@cache
def modules() -> dict[str, ast.Module]:
    """Every module of the kit by dotted name."""
    found = {}
    for path in sorted(PACKAGE.rglob("*.py")):
        parts = path.relative_to(ROOT).with_suffix("").parts
        name = ".".join(parts[:-1] if parts[-1] == "__init__" else parts)
        found[name] = ast.parse(path.read_text(encoding="utf-8"), str(path))
    assert len(found) > 20, "the kit's source was not found"
    return found


@cache
def text_files() -> dict[str, str]:
    """Every text file of the project by path, hidden tool folders and example reports left out."""
    endings = {".py", ".md", ".toml", ".txt", ".csv", ".ipynb", ".css", ".j2", ".typ", ".json", ""}
    skipped = {".git", ".venv", "__pycache__", "example_reports", "build", "dist"}
    found = {}
    for path in sorted(ROOT.rglob("*")):
        inside = path.relative_to(ROOT)
        tool = any(part in skipped or part.endswith(("_cache", ".egg-info")) for part in inside.parts)
        tool = tool or ".hypothesis" in inside.parts or ".ipynb_checkpoints" in inside.parts
        if path.is_file() and path.suffix in endings and not tool:
            found[inside.as_posix()] = path.read_text(encoding="utf-8")
    assert "pyproject.toml" in found
    return found


@dataclass(frozen=True)
class Import:
    """One imported module and how it is imported."""

    importer: str
    name: str
    line: int
    lazy: bool
    typing_only: bool


def imports(name: str) -> Iterator[Import]:
    """Every import of a module: inside functions and under TYPE_CHECKING too."""
    yield from _imports(name, modules()[name].body, lazy=False, typing_only=False)


def _imports(importer: str, body: list[ast.stmt], *, lazy: bool, typing_only: bool) -> Iterator[Import]:
    for node in body:
        names: list[str] = []
        if isinstance(node, ast.Import):
            names = [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{importer}:{node.lineno}: relative import"
            names = [_target(node.module or "", alias.name) for alias in node.names]
        for imported in names:
            yield Import(importer, imported, node.lineno, lazy, typing_only)
        inner_lazy = lazy or isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef)
        inner_typing = typing_only or (isinstance(node, ast.If) and "TYPE_CHECKING" in ast.dump(node.test))
        for field in ("body", "handlers", "finalbody", "cases"):
            for child in getattr(node, field, []):
                nested = [child] if isinstance(child, ast.stmt) else child.body
                yield from _imports(importer, nested, lazy=inner_lazy, typing_only=inner_typing)
        yield from _imports(importer, getattr(node, "orelse", []), lazy=inner_lazy, typing_only=typing_only)


def _target(module: str, name: str) -> str:
    """The module that `from module import name` reaches: a submodule of the kit, or the module itself."""
    deeper = f"{module}.{name}"
    return deeper if deeper in modules() else module
