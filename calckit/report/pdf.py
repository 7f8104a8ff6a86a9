"""The PDF report: the document model set by Typst with the kit's own template.

Knows the template, what Typst must be told of formulas and drawings, and how text that no font holds is shown. Must
not decide what a report says: the template prints the model in order. Every text reaches the template as data; only
formulas of the kit's own printer are evaluated.
"""

from __future__ import annotations

import json
import re
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import asdict
from datetime import UTC, datetime
from importlib import resources
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import typst

from calckit.errors import NotebookError
from calckit.report import mathsource, seal
from calckit.report.attachments import Attachment
from calckit.report.enclosures import Page
from calckit.report.glyphs import STANDARDS, code_point, lacking
from calckit.report.model import View

_ASSETS = resources.files("calckit.report").joinpath("assets")
_TEMPLATES = (
    "report.typ", "pieces.typ", "sheets.typ", "revised.typ", "checked.typ", "matters.typ", "enclosures.typ",
)  # fmt: skip
_NOT_PRINTED = ("latex", "mathml", "svg")
_UNSETTLED = "Sheets are not named beside the lines of this copy, as they could not be settled; each number is a link."
_EXCERPT = 60
_SVG = re.compile(r"<svg\b[^>]*>", re.DOTALL)
_LENGTH = re.compile(r"([\d.]+)(pt|px|in|mm|cm)?")
_POINTS = {"pt": 1.0, "px": 0.75, "in": 72.0, "mm": 72 / 25.4, "cm": 720 / 25.4}


def render(
    view: View,
    *,
    figures: Mapping[str, bytes],
    attachments: Sequence[Attachment],
    date: str,
    enclosed: Sequence[Page] = (),
) -> bytes:
    """The report as PDF/A-3a and PDF/UA-1, with the blank digits of the seal in its keywords.

    `figures` are SVG drawings by file name, `enclosed` the pages bound as appendix sheets, as SVG; `date` is the day of
    the issue ("2026-12-01"). The same arguments give the same bytes. A character that no font holds is shown as its
    code point, and a notice on the cover says so.

    Raises NotebookError naming a drawing that is not there or what Typst cannot set.
    """
    data = _data(view)
    data["keywords"] = [seal.PLACEHOLDER]
    files = {name: _ASSETS.joinpath(name).read_bytes() for name in _TEMPLATES}
    data["attachments"] = []
    for number, attached in enumerate(attachments):
        path = f"attached-{number}"
        files[path] = attached.data
        about = {name: value for name, value in asdict(attached).items() if name != "data"}
        data["attachments"].append(about | {"path": path})
    for number, figure in enumerate(item for item in _items(data) if item["type"] == "figure"):
        path = f"figure-{number}.svg"
        if figure["file"] not in figures:
            raise NotebookError(f"figure {figure['id']!r}: the drawing {figure['file']!r} was not handed over")
        files[path] = figures[figure["file"]]
        width, height = _size(files[path].decode(), f"figure {figure['id']!r}", bare="px")
        figure |= {"path": path, "width": width, "height": height}
    titles = {reference["key"]: reference["title"] for reference in data["references"]}
    data["enclosed"] = []
    for number, page in enumerate(enclosed):
        path = f"enclosed-{number}.svg"
        files[path] = page.picture
        about = {name: value for name, value in asdict(page).items() if name != "picture"}
        data["enclosed"].append(about | {"path": path, "title": titles.get(page.document, "")})
    day = datetime.fromisoformat(date).replace(tzinfo=UTC)
    settled = _compile(files, data | {"sheets_named": True}, day)
    if settled is None:
        settled = _compile(files, data | {"sheets_named": False, "notices": [*data["notices"], _UNSETTLED]}, day)
    if settled is None:
        raise NotebookError("the PDF report cannot be set: its layout does not settle")
    return settled


def missing_glyphs(view: View) -> list[str]:
    """Each text with characters that the report's fonts lack, and their code points.

    They are printed as code points; nothing is dropped.
    """
    found: dict[str, None] = {}
    missing = _lacking(asdict(view))
    for text in _texts(asdict(view)):
        points = [code_point(character) for character in dict.fromkeys(text) if character in missing]
        if points:
            excerpt = text if len(text) <= _EXCERPT else f"{text[:_EXCERPT]}..."
            found[f"{', '.join(points)} in {excerpt!r}"] = None
    return list(found)


def _data(view: View) -> dict[str, Any]:
    """The model as plain data, with what Typst must be told beside it and without what no font holds."""
    data: dict[str, Any] = asdict(view)
    missing = sorted(_lacking(data))
    if missing:
        table = str.maketrans({character: f"[{code_point(character)}]" for character in missing})
        data = _mapped(data, lambda text: text.translate(table))
        shown = ", ".join(map(code_point, missing))
        notice = f"Characters that the fonts of this report lack are shown as code points in brackets: {shown}."
        data["notices"] = [*data["notices"], notice]
    for node in _nodes(data):
        if "typst" in node:
            source = node["typst"]
            linear = mathsource.linear(source)
            node |= {
                "large": mathsource.nests_scripts(source), "pieces": mathsource.pieces(source), "linear": linear,
                "linear_pieces": mathsource.pieces(linear),
            }  # fmt: skip
        elif node.get("svg"):
            width, height = _size(node["svg"], f"formula {node['text']!r}", bare="pt")
            node |= {"width": width, "height": height, "depth": _depth(node["svg"], height)}
    return data


def _compile(files: Mapping[str, bytes], data: Mapping[str, Any], day: datetime) -> bytes | None:
    """Set the template in a fresh folder that holds nothing else; None if what is printed of sheets may not be true."""
    with TemporaryDirectory(prefix="calckit-") as folder:
        for name, content in files.items():
            (Path(folder) / name).write_bytes(content)
        (Path(folder) / "view.json").write_text(json.dumps(data, ensure_ascii=False), encoding="utf-8")
        try:
            made, warnings = typst.compile_with_warnings(
                str(Path(folder) / "report.typ"), root=folder, ignore_system_fonts=True, pdf_standards=[*STANDARDS],
                timestamp=int(day.timestamp()),
            )  # fmt: skip
        except typst.TypstError as error:
            raise NotebookError(f"the PDF report cannot be set: {error.message}") from error
    return None if any("did not converge" in warning.message for warning in warnings) else made


def _items(data: Mapping[str, Any]) -> Iterator[dict[str, Any]]:
    for section in data["sections"]:
        yield from section["items"]


def _nodes(thing: Any) -> Iterator[dict[str, Any]]:
    """Every mapping in plain data."""
    if isinstance(thing, dict):
        yield thing
    for inner in thing.values() if isinstance(thing, dict) else thing if isinstance(thing, list | tuple) else ():
        yield from _nodes(inner)


def _texts(thing: Any) -> Iterator[str]:
    """Every text that is printed."""
    if isinstance(thing, str):
        yield thing
    elif isinstance(thing, dict):
        for name, value in thing.items():
            if name not in _NOT_PRINTED:
                yield from _texts(value)
    elif isinstance(thing, list | tuple):
        for value in thing:
            yield from _texts(value)


def _lacking(data: Mapping[str, Any]) -> set[str]:
    return lacking({character for text in _texts(data) for character in text})


def _mapped(thing: Any, change: Callable[[str], str]) -> Any:
    """Plain data with every printed text changed."""
    if isinstance(thing, str):
        return change(thing)
    if isinstance(thing, dict):
        return {name: value if name in _NOT_PRINTED else _mapped(value, change) for name, value in thing.items()}
    return [_mapped(value, change) for value in thing] if isinstance(thing, list | tuple) else thing


def _size(svg: str, what: str, *, bare: str) -> tuple[float, float]:
    """Width and height of a drawing in points; `bare` is the unit of a length that names none."""
    head = _SVG.search(svg)
    sides = [re.search(rf'\b{side}="([^"]*)"', head[0]) if head else None for side in ("width", "height")]
    lengths = [_LENGTH.fullmatch(side[1]) if side else None for side in sides]
    points = [float(length[1]) * _POINTS[length[2] or bare] for length in lengths if length]
    if len(points) != 2:
        raise NotebookError(f"{what}: the drawing states no width and height")
    return points[0], points[1]


def _depth(svg: str, height: float) -> float:
    """How far a drawing whose baseline is y = 0 reaches below it, in points."""
    box = re.search(r'\bviewBox="\s*\S+\s+(\S+)\s+\S+\s+(\S+)\s*"', svg)
    if box is None or not float(box[2]):
        return 0.0
    return height * (float(box[1]) + float(box[2])) / float(box[2])
