"""The nbconvert exporters give, byte for byte, what `issue` writes, wherever they are called from."""

import asyncio
import json
import subprocess
import sys
import threading
import tomllib
from importlib import import_module
from pathlib import Path
from typing import Any

import nbformat
import pytest
from nbconvert.exporters import Exporter
from nbconvert.exporters.base import get_exporter

from calckit.errors import CommandError, NotebookError
from calckit.report import issue, notebook
from calckit.report.exporters import HTMLReportExporter, PDFReportExporter
from tests.conftest import WriteNotebook, notebook_json
from tests.report import plain
from tests.report.stand_in import KERNEL, RECORD

BOTH = pytest.mark.parametrize("kind", [HTMLReportExporter, PDFReportExporter])


@pytest.fixture
def path(write_notebook: WriteNotebook, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A notebook, run for real, that plain writers report on."""
    monkeypatch.setattr(issue.view, "build", lambda *_: None)
    monkeypatch.setattr(issue.html, "render", plain.html_file)
    monkeypatch.setattr(issue.pdf, "render", plain.pdf_file)
    for writer in (issue.html, issue.pdf):
        monkeypatch.setattr(writer, "missing_glyphs", lambda _view: [])
    return write_notebook("# Demo", KERNEL, RECORD)


def issued(path: Path, form: str) -> bytes:
    return issue.produce(notebook.read(path), issue.settings_from(), (form,)).files[form]


@BOTH
def test_same_bytes_as_issue(kind: type[Exporter], path: Path) -> None:
    output, resources = kind().from_filename(str(path))
    assert output == issued(path, kind.form)
    assert isinstance(output, bytes)
    assert resources["output_extension"] == f".{kind.form}"
    assert not resources["outputs"]


@BOTH
def test_same_bytes_from_the_export_menu(kind: type[Exporter], path: Path) -> None:
    """As the server calls it: a notebook node that has been through the editor, in a worker thread."""
    node = nbformat.read(path, as_version=4)
    for cell in node.cells:
        cell.metadata["trusted"] = True
    node.metadata["kernelspec"] = {"name": "some", "display_name": "some"}
    resources = {"metadata": {"name": "demo", "modified_date": "today", "path": str(path.parent)}, "config_dir": "x"}
    output: list[Any] = []
    worker = threading.Thread(target=lambda: output.append(kind().from_notebook_node(node, resources=resources)[0]))
    worker.start()
    worker.join()
    assert output == [issued(path, kind.form)]


def test_same_bytes_under_a_running_event_loop(path: Path) -> None:
    async def export() -> bytes:
        output: bytes = PDFReportExporter().from_filename(str(path))[0]
        return output

    assert asyncio.run(export()) == issued(path, "pdf")


def test_relative_path(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(path.parent)
    assert HTMLReportExporter().from_filename("demo.ipynb")[0] == issued(path, "html")


def test_a_notebook_without_a_place_runs_here(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(path.parent)
    node = nbformat.read(path, as_version=4)
    output, _ = HTMLReportExporter().from_notebook_node(node, resources={"metadata": {"name": "demo"}})
    assert output == issued(path, "html")


def test_epoch_counts(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1796083199")
    assert b"demo.ipynb" in HTMLReportExporter().from_filename(str(path))[0]
    assert HTMLReportExporter().from_filename(str(path))[0] == issued(path, "html")


@BOTH
def test_the_first_line_of_an_error_carries_the_cure(kind: type[Exporter], write_notebook: WriteNotebook) -> None:
    path = write_notebook("## Site", "raise ValueError('S_S: needed a number; given text; cure: write 1.25')")
    with pytest.raises(NotebookError, match="cure") as caught:
        kind().from_filename(str(path))
    assert str(caught.value).splitlines()[0] == (
        'cell [1] under "Site", line 1: ValueError: S_S: needed a number; given text; cure: write 1.25'
    )


def test_a_notebook_without_ids_is_refused_not_repaired(tmp_path: Path) -> None:
    data = notebook_json(["1"], nbformat_minor=4)
    del data["cells"][0]["id"]
    path = tmp_path / "old.ipynb"
    path.write_text(json.dumps(data))
    with pytest.raises(CommandError, match=r"no id.*; cure: open it in a current notebook editor and save it once"):
        PDFReportExporter().from_filename(str(path))
    with pytest.raises(CommandError, match="no id"):
        PDFReportExporter().from_notebook_node(nbformat.from_dict(data))


def test_constructors_load_nothing_of_the_report() -> None:
    code = (
        "import sys\n"
        "from calckit.report.exporters import HTMLReportExporter, PDFReportExporter\n"
        "HTMLReportExporter(), PDFReportExporter()\n"
        "print([name for name in ('typst', 'sympy', 'numpy', 'calckit.report.issue') if name in sys.modules])"
    )
    result = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert result.stdout == "[]\n"


def test_other_exporters_are_left_as_they_are() -> None:
    before = get_exporter("html")().default_preprocessors
    HTMLReportExporter()
    assert get_exporter("html")().default_preprocessors == before != []


def test_entry_points() -> None:
    project = tomllib.loads((Path(__file__).parents[2] / "pyproject.toml").read_text())["project"]
    points = project["entry-points"]["nbconvert.exporters"]
    assert set(points) == {"calckit_html", "calckit_pdf"}
    for target in points.values():
        module, _, name = target.partition(":")
        assert issubclass(getattr(import_module(module), name), Exporter)
