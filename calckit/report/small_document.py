"""A document of its own beside the report, set from one Typst template and plain data.

Knows how such a document is set in the report's fonts and profiles. Must not know what it says.
"""

from __future__ import annotations

import json
from collections.abc import Mapping
from datetime import datetime
from importlib import resources
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import typst

from calckit.errors import CommandError
from calckit.report.glyphs import STANDARDS, code_point, lacking

_ASSETS = resources.files("calckit.report").joinpath("assets")


def typeset(template: str, data: Mapping[str, Any], day: datetime, what: str) -> bytes:
    """The document as PDF/A-3a and PDF/UA-1: the same bytes for the same data and day.

    `template` names a file among the assets, which reads its texts from data.json; `what` is what messages call the
    document. A character that no font holds is shown as its code point. Raises CommandError if it cannot be set.
    """
    text = json.dumps(data, ensure_ascii=False)
    for character in sorted(lacking(set(text))):
        text = text.replace(character, f"[{code_point(character)}]")
    with TemporaryDirectory(prefix="calckit-") as folder:
        source = Path(folder) / template
        source.write_bytes(_ASSETS.joinpath(template).read_bytes())
        source.with_name("data.json").write_text(text, encoding="utf-8")
        try:
            return typst.compile(
                str(source), root=folder, ignore_system_fonts=True, pdf_standards=[*STANDARDS],
                timestamp=int(day.timestamp()),
            )  # fmt: skip
        except typst.TypstError as error:
            raise CommandError(f"{what} cannot be set: {error.message}") from error
