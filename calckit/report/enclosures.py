"""Pages of documents that a calculation binds behind itself: each taken out of its PDF as a picture of its own.

Knows PDF files that come from outside, and which bound page a source points to. Must not know how a sheet is laid out.
A PDF page cannot be placed in an archive PDF as it is; as a drawing or a picture it can. The file itself is among the
attachments, so that nothing rests on the picture alone.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Literal

import typst

from calckit.core.record import Enclosure, Record, Source
from calckit.errors import Fault, NotebookError

PICTURE_DOTS = 150
"""Dots per inch of a page as PNG."""

_PAGE = '#set page(width: auto, height: auto, margin: 0pt)\n#image("page.pdf", page: int(sys.inputs.page))\n'
_CAUSE = re.compile(r"\((.*?)(?: in page\.pdf)?\)$")
_SIZE = re.compile(rb'<svg viewBox="0 0 ([\d.]+) ([\d.]+)"')
_CITED = re.compile(r"\b(?:pp?\.|pages?)\s*([0-9]+)")


@dataclass(frozen=True)
class Page:
    """One bound page: page `number` of `document`, as `picture`; `width` and `height` in points, before reduction."""

    document: str
    number: int
    alt: str
    width: float
    height: float
    picture: bytes


def pages(record: Record, files: Mapping[str, bytes], form: Literal["svg", "png"] = "svg") -> list[Page]:
    """The pages that a calculation binds, in the order of their documents; `files` are the files it read, by name.

    As "svg" lines and lettering stay sharp at any size; as "png", for a screen, a page of text is a sixth as large.
    The alternative text of each page is that of the enclosure with the number of the page. The same files give the
    same bytes. Raises NotebookError naming every file that is no readable PDF and every page that is not in it.
    """
    found: list[Page] = []
    faults: list[Fault] = []
    for enclosure in record.enclosures:
        with TemporaryDirectory(prefix="calckit-") as folder:
            (Path(folder) / "page.pdf").write_bytes(files[enclosure.file])
            (Path(folder) / "page.typ").write_text(_PAGE, encoding="utf-8")
            for made in _taken(enclosure, folder, form):
                (found if isinstance(made, Page) else faults).append(made)  # type: ignore[arg-type]
    if faults:
        raise NotebookError("enclose: " + "\n  ".join(map(str, faults)))
    return found


def bound(record: Record) -> list[tuple[str, int]]:
    """The document and the number of each page that a calculation binds, in the order of `pages`.

    >>> bound(Record({}, enclosures=[Enclosure("H-2", "hazard.pdf", "1, 3", "printout")]))
    [('H-2', 1), ('H-2', 3)]
    """
    return [(one.document, number) for one in record.enclosures for number in one.page_numbers()]


def place(source: Source, bound: Sequence[tuple[str, int]]) -> int | None:
    """Where in `bound` the page stands that a source names ("H-2 p. 4"); None if it is not bound.

    A source that names no page points to the first bound page of its document.

    >>> pages = [("H-2", 1), ("H-2", 4)]
    >>> place(Source("H-2", "p. 4"), pages), place(Source("H-2", "p. 2"), pages), place(Source("H-2"), pages)
    (1, None, 0)
    """
    cited = _CITED.search(source.where)
    for at, (document, number) in enumerate(bound):
        if document == source.document and (cited is None or number == int(cited[1])):
            return at
    return None


def _taken(enclosure: Enclosure, folder: str, form: Literal["svg", "png"]) -> Iterator[Page | Fault]:
    """The pages of one enclosure, or what is wrong with them; a file that cannot be read at all is named once."""
    what = f"{enclosure.document}, {enclosure.file}"
    for number in enclosure.page_numbers():
        try:
            drawing = _compiled(folder, number, "svg")
            picture = drawing if form == "svg" else _compiled(folder, number, form)
        except typst.TypstError as error:
            cause = _CAUSE.search(error.message)
            given = cause[1] if cause else error.message
            if given.endswith("does not exist"):
                yield Fault(what, "pages that are in the file", f"page {number}", "correct pages=")
                continue
            yield Fault(what, "a PDF that opens without a password", given, "print the document to PDF again")
            return
        size = _SIZE.match(drawing)
        assert size is not None
        alt = f"{enclosure.document}, page {number}: {enclosure.alt}"
        yield Page(enclosure.document, number, alt, float(size[1]), float(size[2]), picture)


def _compiled(folder: str, number: int, form: Literal["svg", "png"]) -> bytes:
    made = typst.compile(
        str(Path(folder) / "page.typ"), root=folder, format=form, ppi=PICTURE_DOTS, ignore_system_fonts=True,
        sys_inputs={"page": str(number)},
    )  # fmt: skip
    assert isinstance(made, bytes)
    return made
