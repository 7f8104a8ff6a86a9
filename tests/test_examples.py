"""The committed examples are what the kit gives today, and are intact."""

import os
import subprocess
import sys
from pathlib import Path

import nbformat
import pytest
from pypdf import PdfReader

from calckit.core.record import from_json
from calckit.report import notebook
from calckit.report.compare import compare
from calckit.report.issue import produce
from calckit.report.recheck import recheck
from calckit.report.run import Settings
from tests.second_pass import PASSES, second_pass

ROOT = Path(__file__).parents[1]
EXAMPLES = ROOT / "example_reports"
NOTEBOOKS = sorted(EXAMPLES.glob("*.ipynb"))


TEMPLATES = ROOT / "templates"


def test_there_is_an_example_of_every_template_and_of_the_second_pass() -> None:
    assert [path.name for path in NOTEBOOKS] == sorted([*(path.name for path in TEMPLATES.glob("*.ipynb")), *PASSES])

LEAST_CHECKED = {"component_force": 6, "building_modal_response": 8, "ground_motion": 6}
"""Cells whose outputs are compared, where a notebook has fewer than ten that write lines."""


def unissued(stem: str, folder: Path) -> notebook.Notebook:
    """The notebook of an example as it was before it was issued."""
    path = TEMPLATES / f"{stem}.ipynb"
    if not path.exists():
        path = folder / path.name
        nbformat.write(second_pass(TEMPLATES / "building_lateral_force.ipynb", PASSES[path.name]), path)
    return notebook.read(path)


@pytest.mark.parametrize("path", NOTEBOOKS, ids=lambda path: path.stem)
def test_stored_outputs_are_reproduced(path: Path) -> None:
    command = [sys.executable, "-m", "pytest", "-q", "-n0", "-p", "no:cacheprovider", "--nbval-lax", str(path)]
    environment = {**os.environ, "PYTHONPATH": str(ROOT)}
    ran = subprocess.run(command, cwd=path.parent, env=environment, capture_output=True, text=True, check=False)
    assert ran.returncode == 0, ran.stdout + ran.stderr
    checked = path.read_text(encoding="utf-8").count("nbval-check-output")
    assert checked >= LEAST_CHECKED.get(path.stem, 10)


@pytest.mark.parametrize("path", sorted(EXAMPLES.glob("*.record.json")), ids=lambda path: path.stem)
def test_the_same_lines_again(path: Path, tmp_path: Path) -> None:
    stored = from_json(path.read_text(encoding="utf-8"))
    again = produce(unissued(stored.calculation["notebook"], tmp_path), Settings(), formats=()).record
    assert again.lines == stored.lines
    assert again.tables == stored.tables
    assert (again.source, again.lines_hash) == (stored.source, stored.lines_hash)


ISSUED = [
    EXAMPLES / f"{path.name.removesuffix('.record.json')}.{ending}"
    for path in sorted(EXAMPLES.glob("*.record.json"))
    for ending in ("html", "pdf")
]


@pytest.mark.parametrize("path", ISSUED, ids=lambda path: path.name)
def test_the_files_are_intact(path: Path) -> None:
    assert [finding for finding in recheck(path) if not finding.good] == []


def test_sixteen_sheets_before_the_appendices() -> None:
    reader = PdfReader(EXAMPLES / "C-101_A.pdf")
    appendices = (item for item in reader.outline if not isinstance(item, list) and "Appendix A" in str(item.title))
    assert reader.get_destination_page_number(next(appendices)) <= 16


def test_what_the_edition_moves_is_told() -> None:
    told = (EXAMPLES / "7-16_to_7-22.html").read_text(encoding="utf-8")
    moved = compare(EXAMPLES / "C-101_B.pdf", EXAMPLES / "C-102_B.pdf").changed
    assert {"X.V", "Y.V", "S_D1"} <= {change.id for change in (*moved.results, *moved.formulas)}
    assert all(line in told for line in ("ASCE/SEI 7-22", "X.V", "S_D1"))
