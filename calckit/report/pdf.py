"""The PDF report: the document model set by Typst with the kit's own template.

Knows the template, the fonts it may use and what Typst takes. Must not decide what a report says: the template prints
the model in order. Every text reaches the template as data; only formulas of the kit's own printer are evaluated.
"""

from __future__ import annotations

import json
import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import asdict, replace
from datetime import UTC, datetime
from importlib import resources
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import typst

from calckit.errors import NotebookError
from calckit.report import mathsource, seal
from calckit.report.attachments import Attachment
from calckit.report.model import View

_STANDARDS = ["a-3a", "ua-1"]
_SIZE = re.compile(r'<svg\b[^>]*?\bwidth="([\d.]+)(pt|px|)"', re.DOTALL)
_BOX = re.compile(r'viewBox="\s*(\S+)\s+(\S+)\s+(\S+)\s+(\S+)\s*"')


def render(view: View, *, figures: Mapping[str, bytes], attachments: Sequence[Attachment], date: str) -> bytes:
    """The report as PDF/A-3a and PDF/UA-1, with the seal's blank digits in its keywords.

    `figures` are SVG drawings by file name, `date` is the day of the issue ("2026-12-01"). The same arguments give the
    same bytes.
    """
    day = datetime.fromisoformat(date).replace(tzinfo=UTC)
    with TemporaryDirectory(prefix="calckit-") as name:
        folder = Path(name)
        data = _data(view)
        data["keywords"] = [seal.PLACEHOLDER]
        data["attachments"] = []
        for number, attached in enumerate(attachments):
            (folder / f"attached-{number}").write_bytes(attached.data)
            data["attachments"].append({"path": f"attached-{number}", **{k: v for k, v in asdict(attached).items() if k != "data"}})
        for number, figure in enumerate(_figures(data)):
            drawing = figures[figure["file"]]
            (folder / f"figure-{number}.svg").write_bytes(drawing)
            figure |= {"path": f"figure-{number}.svg", "width": _width(drawing.decode())}
        (folder / "view.json").write_text(json.dumps(data, ensure_ascii=False), encoding="utf-8")
        template = resources.files("calckit.report").joinpath("assets", "report.typ")
        (folder / "report.typ").write_bytes(template.read_bytes())
        return typst.compile(
            str(folder / "report.typ"), root=name, ignore_system_fonts=True, pdf_standards=_STANDARDS,
            timestamp=int(day.timestamp()),
        )
def _data(view: View) -> dict[str, Any]:
    data = asdict(view)
    _prepare(data)
    return data
def _prepare(node):
    if isinstance(node, dict):
        if "typst" in node:
            src=node["typst"]
            linear=mathsource.linear(src)
            node |= {"large": mathsource.nests_scripts(src), "pieces": mathsource.pieces(src), "linear": linear, "linear_pieces": mathsource.pieces(linear)}
        elif "svg" in node and node["svg"]:
            x,y,w,h = map(float,_BOX.search(node["svg"]).groups())
            node |= {"height": h, "depth": h+y}
        for v in list(node.values()): _prepare(v)
    elif isinstance(node,(list,tuple)):
        for v in node: _prepare(v)
def _figures(data):
    return [i for s in data["sections"] for i in s["items"] if i["type"]=="figure"]
def _width(svg):
    m=_SIZE.search(svg)
    return float(m[1])*(0.75 if m[2] in ("px","") else 1)
