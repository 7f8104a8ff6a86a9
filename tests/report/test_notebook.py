"""Notebook files: what is refused, the headings, the hash and the bare copy."""

import json
from pathlib import Path
from typing import Any

import nbformat
import pytest

from calckit.errors import CommandError
from calckit.report import notebook
from calckit.report.notebook import Notebook
from tests.conftest import notebook_json

CODE = {"cell_type": "code", "metadata": {}, "source": "", "outputs": []}


def parsed(*cells: str) -> Notebook:
    return notebook.parse(json.dumps(notebook_json(cells)), "demo", Path())


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"cells": [CODE]}, "1 of its 1 cells have no id.*save it once"),
        ({"cells": [{**CODE, "id": "a"}, {**CODE, "id": "a"}]}, "the same id on more than one cell: a; cure"),
        ({"nbformat": 3}, "has format 3; needed 4"),
        ({"cells": ["text"]}, "cells that are neither code, markdown, raw"),
        ({"cells": None}, "cells that are neither code, markdown, raw"),
    ],
)
def test_notebooks_that_are_refused(changes: dict[str, Any], message: str, tmp_path: Path) -> None:
    path = tmp_path / "demo.ipynb"
    path.write_text(json.dumps(notebook_json(["1"]) | changes))
    with pytest.raises(CommandError, match=message):
        notebook.read(path)


def test_what_is_no_notebook(tmp_path: Path) -> None:
    with pytest.raises(CommandError, match=r"none\.ipynb cannot be read: No such file"):
        notebook.read(tmp_path / "none.ipynb")
    (tmp_path / "latin.ipynb").write_bytes(b"\xff")
    with pytest.raises(CommandError, match=r"latin\.ipynb cannot be read: not UTF-8 text"):
        notebook.read(tmp_path / "latin.ipynb")
    for text, message in (("{", "is no notebook"), ("[]", "names no notebook format")):
        with pytest.raises(CommandError, match=message):
            notebook.parse(text, "demo", tmp_path)


def test_headings_leave_code_out() -> None:
    cells = parsed("1", "## One ##\n\n```python\n## not one\n```\n### Deeper", "2", "  ", "# Top", "3")
    assert cells.headings() == ["", "One", "One"]


def test_source_hash_covers_id_type_and_text_alone() -> None:
    plain = notebook_json(["# Title", "x = 1\nx"])
    base = notebook.parse(json.dumps(plain), "demo", Path()).source_hash()
    same = json.loads(json.dumps(plain))
    same["cells"][1] |= {"source": "x = 1\nx", "metadata": {"a": 1}, "execution_count": 3}
    assert notebook.parse(json.dumps(same), "other", Path()).source_hash() == base
    for field, value in (("id", "other"), ("cell_type", "raw"), ("source", "x = 2\nx")):
        other = json.loads(json.dumps(plain))
        other["cells"][1][field] = value
        assert notebook.parse(json.dumps(other), "demo", Path()).source_hash() != base, field


def test_the_bare_copy_has_the_same_source_hash_and_no_output() -> None:
    cells = notebook_json(["# Title\n\nünïcode", "x = 1\nx\u2028"])
    stream = {"output_type": "stream", "name": "stdout", "text": "secret"}
    cells["cells"][1] |= {"outputs": [stream], "execution_count": 7}
    cells["metadata"] = {"kernelspec": {"name": "old", "display_name": "old"}}
    whole = notebook.parse(json.dumps(cells), "demo", Path())
    bare = notebook.parse(whole.bare().decode(), "demo", Path())
    assert bare.source_hash() == whole.source_hash()
    assert bare.bare() == whole.bare()
    assert b"secret" not in whole.bare()
    assert b"kernelspec" not in whole.bare()


def test_the_bare_copy_is_a_valid_notebook() -> None:
    nbformat.validate(json.loads(parsed("# Title", "1").bare()))
