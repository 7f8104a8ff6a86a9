"""Fixtures shared by the tests: notebooks written from cell texts."""

import json
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import pytest

WriteNotebook = Callable[..., Path]


def notebook_json(cells: Sequence[str], **changes: Any) -> dict[str, Any]:
    """A notebook of these cells; a text that starts with `#` and a blank, or `##`, is a Markdown cell."""
    entries: list[dict[str, Any]] = []
    for place, text in enumerate(cells):
        entry: dict[str, Any] = {"id": f"cell-{place}", "metadata": {}, "source": text.splitlines(keepends=True)}
        if text.startswith(("# ", "## ")):
            entry["cell_type"] = "markdown"
        else:
            entry |= {"cell_type": "code", "execution_count": None, "outputs": []}
        entries.append(entry)
    return {"cells": entries, "metadata": {}, "nbformat": 4, "nbformat_minor": 5} | changes


@pytest.fixture
def write_notebook(tmp_path: Path) -> WriteNotebook:
    """Write a notebook into the test's folder and return its path."""

    def write(*cells: str, name: str = "demo.ipynb", **changes: Any) -> Path:
        path = tmp_path / name
        path.write_text(json.dumps(notebook_json(cells, **changes)), encoding="utf-8")
        return path

    return write
