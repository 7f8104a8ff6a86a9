"""The two exporters that nbconvert and the export menu of JupyterLab find: thin shells over the same work as `issue`.

Knows what nbconvert asks of an exporter. Must not know how a report is made; constructors stay cheap, because every
exporter is built each time a menu is drawn.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

from nbconvert.exporters.exporter import Exporter
from traitlets import default

from calckit.report import notebook as notebooks


class _ReportExporter(Exporter):
    """Runs the notebook clean, whatever outputs it holds, and gives the sealed bytes of one form."""

    form = ""

    @default("default_preprocessors")
    def _no_preprocessors(self) -> list[str]:
        return []

    @default("file_extension")
    def _ending(self) -> str:
        return f".{self.form}"

    def from_filename(self, filename: str, resources: Any = None, **kw: Any) -> tuple[Any, Any]:
        """The report of a notebook file, read as it stands so that missing cell ids are seen.

        Raises as `calckit.report.issue.produce` does.
        """
        path = Path(filename)
        resources = self._init_resources(resources)  # type: ignore[no-untyped-call]
        resources["metadata"].update(name=path.stem, path=str(path.parent))
        return self._report(notebooks.read(path)), resources

    def from_notebook_node(self, nb: Any, resources: Any = None, **kw: Any) -> tuple[Any, Any]:
        """The report of a notebook in memory, run in the folder that `resources["metadata"]["path"]` names."""
        resources = self._init_resources(resources)  # type: ignore[no-untyped-call]
        fields = resources["metadata"]
        folder = Path(fields["path"] or ".").resolve()
        return self._report(notebooks.parse(json.dumps(nb), fields["name"] or "notebook", folder)), resources

    def _report(self, notebook: notebooks.Notebook) -> bytes:
        from calckit.report.issue import produce, settings_from

        return produce(notebook, settings_from(), (self.form,)).files[self.form]


class HTMLReportExporter(_ReportExporter):
    """The HTML report."""

    form = "html"
    output_mimetype = "text/html"
    export_from_notebook = "Calculation report (HTML)"


class PDFReportExporter(_ReportExporter):
    """The PDF report."""

    form = "pdf"
    output_mimetype = "application/pdf"
    export_from_notebook = "Calculation report (PDF)"
