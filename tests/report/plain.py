"""A small record and two plain writers, so that issuing is tested apart from what a report looks like."""

from __future__ import annotations

import base64
import html
from collections.abc import Mapping, Sequence
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import typst

from calckit.core.record import NOT_CHECKED, NOT_OK, Line, OpenItem, Record
from calckit.report import seal
from calckit.report.attachments import Attachment


def record(**fields: Any) -> Record:
    """A calculation of four lines; `fields` change its title block."""
    calculation = {
        "project": "Harbor Street Clinic",
        "number": "C-101",
        "revision": "A",
        "date": "2026-12-01",
        "status": "for check",
        "prepared_by": "J. Doe",
        "checked_by": "",
    }
    return Record(
        calculation | fields,
        lines=[
            Line("h_n", "given", "h_n", "structural height", 62.0, "ft", "62 ft", n=1),
            Line("X.T_a", "computed", "T_a", "approximate period", 0.76, "s", "0.76 s", n=2),
            Line(
                "X.stability",
                "check",
                part="X",
                meaning="Stability, story 3",
                verdict=NOT_OK,
                n=3,
                forms={"plain": ["theta <= theta_max", "0.12 <= 0.09"]},
            ),
            Line(
                "X.drift",
                "check",
                meaning="Story drift",
                verdict=NOT_CHECKED,
                missing="displacements of the model",
                n=4,
            ),
        ],
        open_items=[
            OpenItem("h_n-1", "h_n", "height to be surveyed", "architect", "open"),
            OpenItem("confirm-12.8.2.1", "X.T_a", "ASCE/SEI 7-16 12.8.2.1", "holder of the standard", "confirm"),
        ],
    )


def html_file(
    _model: object, *, figures: Mapping[str, bytes], attachments: Sequence[Attachment], enclosed: object = ()
) -> bytes:
    """A page with the seal and the attachments as downloads."""
    links = ""
    for attached in attachments:
        link = f"data:{attached.media_type};base64,{base64.b64encode(attached.data).decode()}"
        links += f'<a download="{html.escape(attached.name)}" href="{link}">x</a>'
    head = f'<meta name="calckit-seal" content="{seal.PLACEHOLDER}">'
    return f"<!DOCTYPE html>\n<html><head>{head}</head><body>{links}</body></html>\n".encode()


def pdf_file(
    _model: object, *, figures: Mapping[str, bytes], attachments: Sequence[Attachment], date: str, enclosed: object = ()
) -> bytes:
    """A page with the seal in its keywords and the attachments."""
    with TemporaryDirectory() as name:
        folder = Path(name)
        source = [f'#set document(title: "Sample", keywords: ("{seal.PLACEHOLDER}",))', "= Sample"]
        for number, attached in enumerate(attachments):
            (folder / str(number)).write_bytes(attached.data)
            source.append(
                f'#pdf.attach("{attached.name}", read("{number}", encoding: none), mime-type: "{attached.media_type}", '
                f'relationship: "{attached.relationship}", description: "{attached.description}")'
            )
        (folder / "a.typ").write_text("\n".join(source))
        data: bytes = typst.compile(str(folder / "a.typ"), root=name, pdf_standards=["a-3a"], timestamp=0)
        return data
