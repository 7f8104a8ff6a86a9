"""Pages of enclosed documents: taken out of their PDF, set on sheets, found by the sources that name them."""

from __future__ import annotations

import io
import json
from dataclasses import asdict
from importlib import resources
from pathlib import Path
from typing import Any

import pytest
import typst
from matplotlib.image import imread
from pypdf import PdfReader, PdfWriter

from calckit.core.record import Enclosure, Record, Source
from calckit.errors import NotebookError
from calckit.report import enclosures
from calckit.report.enclosures import PICTURE_DOTS, Page, pages, place
from tests.report.sheets import Sheets

SQUARES = b"""#set document(title: "Squares")
#set page(width: 8.5in, height: 11in, margin: 0in)
#for n in range(1, 4) {
  place(top + left, dx: n * 1in, dy: 2in, square(size: 0.5in, fill: black))
  if n < 3 { pagebreak() }
}
"""
"""A document of three pages; on page n a black square n in from the left and 2 in from the top."""

SHEET = """#import "enclosures.typ": enclosures
#set document(title: "Trial")
#set text(font: "Libertinus Serif", size: 9.5pt, lang: "en")
#set page(width: 8.5in, height: 11in, margin: (left: 0.8in, right: 0.6in, top: 1.2in, bottom: 0.9in),
  header: [TITLE BLOCK], footer: [FOOT])
See sheet #context counter(page).at(label("enclosed-1")).first().
#enclosures("Enclosures", json("pages.json"))
"""


@pytest.fixture(scope="module")
def squares() -> bytes:
    """The document of squares."""
    return typst.compile(SQUARES, ignore_system_fonts=True)


def bound(*enclosures: Enclosure) -> Record:
    """A record that binds these."""
    return Record({}, enclosures=[*enclosures])


def black_at(page: Page, x: float, y: float) -> bool:
    """Whether a picture is black at a place in inches from its upper left corner."""
    pixels = imread(io.BytesIO(page.picture))
    return bool(pixels[round(y * PICTURE_DOTS), round(x * PICTURE_DOTS), :3].max() < 0.1)


def changed(data: bytes, change: Any) -> bytes:
    """A PDF file after a change by pypdf."""
    writer = PdfWriter(clone_from=PdfReader(io.BytesIO(data)))
    change(writer)
    out = io.BytesIO()
    writer.write(out)
    return out.getvalue()


def test_each_page_is_the_right_one(squares: bytes) -> None:
    made = pages(bound(Enclosure("S-1", "squares.pdf", "1, 3", "Squares.")), {"squares.pdf": squares}, "png")
    assert [(page.document, page.number, page.width, page.height) for page in made] == [
        ("S-1", 1, 612.0, 792.0), ("S-1", 3, 612.0, 792.0),
    ]  # fmt: skip
    assert [page.alt for page in made] == ["S-1, page 1: Squares.", "S-1, page 3: Squares."]
    for page in made:
        for n in (1, 2, 3):
            assert black_at(page, n + 0.25, 2.25) == (page.number == n)
            assert not black_at(page, n + 0.25, 1.75)
            assert not black_at(page, n + 0.25, 2.75)


def test_turned_page_stands_as_a_viewer_shows_it(squares: bytes) -> None:
    # ISO 32000-1, table 30: /Rotate turns the page clockwise when it is displayed
    turned = changed(squares, lambda writer: writer.pages[0].rotate(90))
    (page,) = pages(bound(Enclosure("S-1", "a.pdf", "1", "Squares.")), {"a.pdf": turned}, "png")
    assert (page.width, page.height) == (792.0, 612.0)
    assert black_at(page, 11 - 2.25, 1.25)


def test_documents_in_their_order_and_the_same_bytes_each_time(squares: bytes) -> None:
    record = bound(Enclosure("S-2", "b.pdf", "2", "b"), Enclosure("S-1", "a.pdf", "1", "a"))
    files = {"a.pdf": squares, "b.pdf": squares}
    made = pages(record, files)
    assert [page.document for page in made] == ["S-2", "S-1"]
    assert made == pages(record, files)
    assert all(page.picture.startswith(b"<svg ") for page in made)


def test_every_page_that_is_not_there_and_every_bad_file_is_named(squares: bytes) -> None:
    files = {"a.pdf": squares, "locked.pdf": changed(squares, lambda writer: writer.encrypt("word")), "b.pdf": b"%PDF-"}
    record = bound(
        Enclosure("S-1", "a.pdf", "3-5", "a"), Enclosure("S-2", "locked.pdf", "1-2", "b"),
        Enclosure("S-3", "b.pdf", "1", "c"),
    )  # fmt: skip
    with pytest.raises(NotebookError, match="enclose: ") as caught:
        pages(record, files)
    assert str(caught.value).split("\n  ") == [
        "enclose: S-1, a.pdf: needed pages that are in the file; given page 4; cure: correct pages=",
        "S-1, a.pdf: needed pages that are in the file; given page 5; cure: correct pages=",
        "S-2, locked.pdf: needed a PDF that opens without a password; given the PDF is encrypted or "
        "password-protected; cure: print the document to PDF again",
        "S-3, b.pdf: needed a PDF that opens without a password; given the PDF could not be loaded; "
        "cure: print the document to PDF again",
    ]


@pytest.fixture(scope="module")
def set_on_sheets(squares: bytes, tmp_path_factory: pytest.TempPathFactory) -> Sheets:
    """Two upright pages and a turned one on sheets, as archive and accessible PDF."""
    folder: Path = tmp_path_factory.mktemp("sheets")
    files = {"a.pdf": squares, "b.pdf": changed(squares, lambda writer: writer.pages[0].rotate(90))}
    made = pages(bound(Enclosure("S-1", "a.pdf", "1-2", "Upright."), Enclosure("S-2", "b.pdf", "1", "Turned.")), files)
    data = []
    for number, page in enumerate(made):
        (folder / f"{number}.svg").write_bytes(page.picture)
        about = {name: value for name, value in asdict(page).items() if name != "picture"}
        data.append(about | {"title": "Squares #emph[a]", "path": f"{number}.svg"})
    (folder / "pages.json").write_text(json.dumps(data), encoding="utf-8")
    source = resources.files("calckit.report").joinpath("assets", "enclosures.typ").read_bytes()
    (folder / "enclosures.typ").write_bytes(source)
    (folder / "sheet.typ").write_text(SHEET, encoding="utf-8")
    standards: Any = ["a-3a", "ua-1"]
    return Sheets(typst.compile(str(folder / "sheet.typ"), ignore_system_fonts=True, pdf_standards=standards))


def test_one_page_a_sheet_inside_the_title_block(set_on_sheets: Sheets) -> None:
    assert len(set_on_sheets) == 4
    texts = ["".join(page.extract_text().split()) for page in set_on_sheets.reader.pages]
    assert all("TITLEBLOCK" in text and "FOOT" in text for text in texts)
    assert "Seesheet3." in texts[0]
    assert "EnclosuresS-1:Squares#emph[a]S-1,page1ofthedocument,reducedto" in texts[1]
    assert "S-1,page2ofthedocument,reducedto" in texts[2] and "Enclosures" not in texts[2]
    assert "S-2:Squares#emph[a]S-2,page1ofthedocument,reducedto64%" in texts[3]
    assert [element["/Alt"] for element in set_on_sheets.elements("Figure")] == [
        "S-1, page 1: Upright.", "S-1, page 2: Upright.", "S-2, page 1: Turned.",
    ]  # fmt: skip


def test_source_finds_its_page(squares: bytes) -> None:
    record = bound(Enclosure("S-1", "a.pdf", "1, 3", "a"), Enclosure("S-2", "a.pdf", "2", "b"))
    made = enclosures.bound(record)
    assert made == [(page.document, page.number) for page in pages(record, {"a.pdf": squares})]
    for where, number in (("p. 3", 1), ("page 3, row 2", 1), ("pp. 3-4", 1), ("grid A", 0), ("", 0)):
        assert place(Source("S-1", where), made) == number
    assert place(Source("S-2"), made) == 2
    assert place(Source("S-1", "p. 2"), made) is None
    assert place(Source("S-3"), made) is None
