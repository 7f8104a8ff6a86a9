"""What bytes added to an issued PDF change: marks and signatures nothing, anything else is an alteration and is named.

The updates are written by pypdf, a general-purpose library, as ISO 32000-1, 7.5.6, describes: appended to the file.
"""

import io
import re
from collections.abc import Callable
from pathlib import Path

import pypdf
import pytest
from pypdf.annotations import FreeText, Highlight, Text
from pypdf.generic import (
    ArrayObject,
    DecodedStreamObject,
    DictionaryObject,
    FloatObject,
    NameObject,
    NumberObject,
    TextStringObject,
)

from calckit import cli
from calckit.report import seal
from calckit.report.additions import changes
from calckit.report.recheck import parcel_of

EXAMPLE = Path(__file__).parents[2] / "example_reports" / "C-101_A.pdf"

Update = Callable[[pypdf.PdfWriter], None]


@pytest.fixture(scope="module")
def issued() -> bytes:
    """An issued report: links, tags, figures and attachments."""
    return EXAMPLE.read_bytes()


def updated(issued: bytes, *updates: Update) -> bytes:
    data = issued
    for update in updates:
        writer = pypdf.PdfWriter(io.BytesIO(data), incremental=True)
        update(writer)
        out = io.BytesIO()
        writer.write(out)
        assert out.getvalue().startswith(data) and len(out.getvalue()) > len(data)
        data = out.getvalue()
    return data


def comment(writer: pypdf.PdfWriter) -> None:
    writer.add_annotation(0, FreeText(text="agreed", rect=(50, 550, 200, 650)))
    writer.add_annotation(4, Text(text="which edition?", rect=(50, 550, 70, 570)))


def highlight(writer: pypdf.PdfWriter) -> None:
    points = ArrayObject(FloatObject(value) for value in (50, 560, 90, 560, 50, 550, 90, 550))
    writer.add_annotation(2, Highlight(rect=(50, 550, 90, 560), quad_points=points))


def signature(writer: pypdf.PdfWriter) -> None:
    """A signature field on the first sheet with the form that lists it, and what a signing program keeps beside it."""
    signed = DictionaryObject({NameObject("/Type"): NameObject("/Sig"), NameObject("/Name"): TextStringObject("x")})
    field = DictionaryObject(
        {
            NameObject("/Type"): NameObject("/Annot"),
            NameObject("/Subtype"): NameObject("/Widget"),
            NameObject("/FT"): NameObject("/Sig"),
            NameObject("/T"): TextStringObject("Signature1"),
            NameObject("/Rect"): ArrayObject(NumberObject(value) for value in (50, 50, 150, 90)),
            NameObject("/V"): writer._add_object(signed),
        }
    )
    reference = writer._add_object(field)
    page = writer.pages[0]
    page[NameObject("/Annots")] = ArrayObject([*page.get("/Annots", []), reference])
    form = {NameObject("/Fields"): ArrayObject([reference]), NameObject("/SigFlags"): NumberObject(3)}
    writer.root_object[NameObject("/AcroForm")] = DictionaryObject(form)


def viewer(writer: pypdf.PdfWriter) -> None:
    writer.add_metadata({"/Producer": "a viewer", "/ModDate": "D:20261205000000Z"})


@pytest.fixture(scope="module")
def marked(issued: bytes) -> bytes:
    """The same with comments of a reader."""
    return updated(issued, comment)


@pytest.mark.parametrize("updates", [(comment,), (signature,), (highlight, viewer, comment, signature)])
def test_marks_and_signatures_change_nothing(updates: tuple[Update, ...], issued: bytes) -> None:
    data = updated(issued, *updates)
    assert changes(issued, data) == []
    assert seal.check(data) == seal.Verdict("added", seal.seal_of(issued), len(data) - len(issued))


def test_recheck_of_a_signed_report(issued: bytes, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "C-101_A.pdf"
    path.write_bytes(updated(issued, signature))
    assert cli.main(["recheck", str(path)]) == 0
    said = capsys.readouterr()
    added = path.stat().st_size - len(issued)
    assert said.out.splitlines()[1].split(maxsplit=1) == ["seal", f"{added} bytes added after issue"]
    assert said.err == ""


def contents(writer: pypdf.PdfWriter) -> None:
    stream = writer.pages[4]["/Contents"].get_object()
    stream.set_data(stream.get_data() + b"\nBT ET")


def other_contents(writer: pypdf.PdfWriter) -> None:
    stream = DecodedStreamObject()
    stream.set_data(b"")
    writer.pages[1][NameObject("/Contents")] = writer._add_object(stream)


def font(writer: pypdf.PdfWriter) -> None:
    """Another alphabet under the letters of a font: other numerals on the sheet from the same contents."""
    fonts = writer.pages[3]["/Resources"]["/Font"]
    descendant = next(iter(fonts.values())).get_object()["/DescendantFonts"][0].get_object()
    descendant[NameObject("/DW")] = NumberObject(7)


def size(writer: pypdf.PdfWriter) -> None:
    writer.pages[0][NameObject("/CropBox")] = ArrayObject(NumberObject(value) for value in (0, 0, 300, 300))


def attachment(writer: pypdf.PdfWriter) -> None:
    writer.add_attachment("record.json", b"another record")


def in_the_attachment(writer: pypdf.PdfWriter) -> None:
    """The stream of the attached record itself replaced, its entry left."""
    for name, spec in zip(*[iter(writer.root_object["/Names"]["/EmbeddedFiles"]["/Names"])] * 2, strict=True):
        if name == "record.json":
            spec.get_object()["/EF"]["/F"].get_object().set_data(b"{}")


def more(writer: pypdf.PdfWriter) -> None:
    writer.add_attachment("other.txt", b"other")


def added_sheet(writer: pypdf.PdfWriter) -> None:
    writer.add_blank_page(612, 792)


def exchanged_sheets(writer: pypdf.PdfWriter) -> None:
    kids = writer.root_object["/Pages"]["/Kids"]
    while "/Kids" in kids[0].get_object():
        kids = kids[0].get_object()["/Kids"]
    first, second = list.__getitem__(kids, 0), list.__getitem__(kids, 1)
    kids[0], kids[1] = second, first


def script(writer: pypdf.PdfWriter) -> None:
    code = {NameObject("/S"): NameObject("/JavaScript"), NameObject("/JS"): TextStringObject("app.alert(1)")}
    writer.root_object[NameObject("/OpenAction")] = writer._add_object(DictionaryObject(code))


def bookmark(writer: pypdf.PdfWriter) -> None:
    writer.add_outline_item(title="Elsewhere", page_number=0)


def alternative_text(writer: pypdf.PdfWriter) -> None:
    def named(element: DictionaryObject) -> DictionaryObject | None:
        if "/Alt" in element:
            return element
        children = element.get("/K", [])
        for child in children if isinstance(children, list) else [children]:
            inner = child.get_object()
            if isinstance(inner, DictionaryObject) and (found := named(inner)):
                return found
        return None

    element = named(writer.root_object["/StructTreeRoot"])
    assert element is not None
    element[NameObject("/Alt")] = TextStringObject("another text")


def stand_in(writer: pypdf.PdfWriter) -> None:
    form = DecodedStreamObject()
    form.set_data(b"<xdp/>")
    writer.root_object[NameObject("/AcroForm")] = DictionaryObject({NameObject("/XFA"): writer._add_object(form)})


@pytest.mark.parametrize(
    ("update", "said"),
    [
        (contents, ["sheet 5: contents"]),
        (other_contents, ["sheet 2: contents"]),
        (size, ["sheet 1: CropBox"]),
        (attachment, ["attachment record.json: replaced"]),
        (in_the_attachment, ["attachment record.json: replaced"]),
        (more, ["attachment other.txt: added"]),
        (bookmark, ["bookmarks"]),
        (script, ["action on opening"]),
        (alternative_text, ["reading order and alternative texts"]),
        (stand_in, ["form that stands in for the sheets"]),
    ],
)
def test_what_is_altered_is_named(update: Update, said: list[str], issued: bytes, marked: bytes) -> None:
    data = updated(marked, update)
    assert changes(issued, data) == said
    verdict = seal.check(data)
    assert (verdict.state, list(verdict.changes)) == ("altered", said)
    assert parcel_of(seal.issued_bytes(data)) == parcel_of(issued)  # the attachments are read as they were issued


def test_recheck_names_what_is_altered(
    issued: bytes, marked: bytes, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    data = updated(marked, contents, attachment)
    path = tmp_path / "C-101_A.pdf"
    path.write_bytes(data)
    assert cli.main(["recheck", str(path)]) == 4
    words = [line.strip() for line in capsys.readouterr().out.splitlines()]
    assert words[1].split(maxsplit=1) == ["seal", f"altered by {len(data) - len(issued)} bytes added after issue"]
    assert words[2:4] == ["sheet 5: contents", "attachment record.json: replaced"]


def test_a_sheet_that_was_added_is_counted(issued: bytes) -> None:
    count = len(pypdf.PdfReader(io.BytesIO(issued)).pages)
    assert f"sheets: {count + 1} in place of {count}" in changes(issued, updated(issued, added_sheet))


def test_sheets_that_changed_places_are_named(issued: bytes) -> None:
    found = changes(issued, updated(issued, exchanged_sheets))
    assert {"sheet 1: contents", "sheet 2: contents"} <= set(found)


def test_a_font_that_was_exchanged_is_named_on_each_of_its_sheets(issued: bytes) -> None:
    found = changes(issued, updated(issued, font))
    assert "sheet 4: resources" in found
    assert all(re.fullmatch(r"sheet \d+: resources", said) for said in found)


def test_another_generation_of_an_object_is_another_object(issued: bytes) -> None:
    """Written by hand: the first sheet takes its contents from a later generation of the same object number."""
    page = pypdf.PdfReader(io.BytesIO(issued)).pages[0].indirect_reference
    assert page is not None
    found = re.search(rb"\n%d 0 obj\n(.*?)\nendobj" % page.idnum, issued, re.DOTALL)
    assert found is not None
    contents = re.search(rb"/Contents (\d+) 0 R", found[1])
    root, size = re.search(rb"/Root (\d+) 0 R", issued), re.search(rb"/Size (\d+)", issued)
    start = re.findall(rb"startxref\s+(\d+)", issued)[-1]
    assert contents and root and size
    number = int(contents[1])
    data, places = issued + b"\n", {}
    body = found[1].replace(contents[0], b"/Contents %d 1 R" % number)
    for name, text in ((page.idnum, body), (number, b"<</Length 0>>\nstream\n\nendstream")):
        places[name] = len(data)
        data += b"%d %d obj\n%s\nendobj\n" % (name, int(name == number), text)
    table = len(data)
    data += b"xref\n"
    for name, place in sorted(places.items()):
        data += b"%d 1\n%010d %05d n \n" % (name, place, int(name == number))
    data += b"trailer\n<</Size %s/Root %s 0 R/Prev %s>>\nstartxref\n%d\n%%%%EOF\n" % (size[1], root[1], start, table)
    assert pypdf.PdfReader(io.BytesIO(data)).pages[0].get_contents().get_data() == b""  # type: ignore[union-attr]
    assert changes(issued, data) == ["sheet 1: contents"]


def test_what_cannot_be_read_counts_as_altered(issued: bytes) -> None:
    broken = issued + b"\n1 0 obj\n<<>>\nendobj\nstartxref\n7\n%%EOF\n"
    assert seal.check(broken).state == "altered"
    assert changes(issued, issued + b"\n1 0 obj\n<<>>\nendobj\n") == ["objects outside any update of the file"]
    assert changes(issued, issued + b"\nplain text\n") == []


@pytest.mark.parametrize("command", [["extract", "{}", "--ask", "X.V"], ["reconcile", "{}", "none.csv"]])
def test_other_commands_refuse_an_altered_file(
    command: list[str], issued: bytes, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = tmp_path / "C-101_A.pdf"
    path.write_bytes(updated(issued, contents))
    arguments = [part.format(path) for part in command]
    assert cli.main([*arguments, *(["--to", str(tmp_path)] if command[0] == "extract" else [])]) == 4
    assert "was altered or re-saved after issue" in capsys.readouterr().err


def test_a_comparison_names_what_was_altered(issued: bytes, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "C-101_A.pdf"
    path.write_bytes(updated(issued, contents))
    assert cli.main(["compare", str(EXAMPLE), str(path)]) == 4
    assert re.search(
        r"NOT AS ISSUED  new, C-101_A\.pdf: altered by \d+ bytes added after issue; sheet 5: contents\n",
        capsys.readouterr().out,
    )
