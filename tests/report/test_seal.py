"""The file seal, held against an independent reading of its definition and against real appended PDF revisions."""

import hashlib
import io
import re

import pypdf
import pytest
import typst
from pypdf.annotations import Text

from calckit.errors import NotebookError
from calckit.report import seal

PAGE = f'<html><head><meta name="calckit-seal" content="{seal.PLACEHOLDER}"></head><body>x</body></html>'.encode()


@pytest.fixture(scope="module")
def pdf(tmp_path_factory: pytest.TempPathFactory) -> bytes:
    """A real PDF whose keywords hold the placeholder."""
    folder = tmp_path_factory.mktemp("pdf")
    (folder / "a.typ").write_text(
        f'#set document(title: "Sample", keywords: ("{seal.PLACEHOLDER}",))\n#set text(lang: "en")\n= Sample\ntext'
    )
    return typst.compile(str(folder / "a.typ"), root=str(folder), pdf_standards=["a-3a", "ua-1"], timestamp=0)


def digest_by_definition(data: bytes) -> str:
    """SHA-256 of the file with every 64-digit seal as zeros, worked out without the module under test."""
    return hashlib.sha256(re.sub(rb"(?<=calckit-seal:)[0-9a-f]{64}", b"0" * 64, data)).hexdigest()


@pytest.mark.parametrize("form", ["html", "pdf"])
def test_seal_is_the_digest_with_zeros_and_keeps_the_length(form: str, pdf: bytes) -> None:
    plain = PAGE if form == "html" else pdf
    sealed = seal.apply(plain)
    assert len(sealed) == len(plain)
    assert seal.seal_of(sealed) == digest_by_definition(sealed)
    assert sealed.count(seal.seal_of(sealed).encode()) == (1 if form == "html" else 2)
    assert seal.check(sealed) == seal.Verdict("intact", seal.seal_of(sealed))


def test_pdf_still_opens_and_shows_the_seal(pdf: bytes) -> None:
    reader = pypdf.PdfReader(io.BytesIO(seal.apply(pdf)), strict=True)
    assert reader.metadata is not None
    assert reader.metadata["/Keywords"] == "calckit-seal:" + seal.seal_of(seal.apply(pdf))


def test_marks_added_to_a_pdf_are_counted(pdf: bytes) -> None:
    sealed = seal.apply(pdf)
    writer = pypdf.PdfWriter(io.BytesIO(sealed), incremental=True)
    writer.add_annotation(0, Text(rect=(50, 550, 200, 650), text="agreed"))
    out = io.BytesIO()
    writer.write(out)
    marked = out.getvalue()
    assert marked.startswith(sealed)
    added = len(marked) - len(sealed)
    assert seal.check(marked) == seal.Verdict("added", seal.seal_of(sealed), added)
    assert seal.check(marked).text() == f"{added} bytes added after issue"
    assert seal.issued_bytes(marked) == sealed


@pytest.mark.parametrize("added", [b"\n", b"x", b"\r\n%%EOF", b"%%EOF\n%%EOF\n"])
def test_anything_after_the_end_of_a_pdf_counts_as_added(added: bytes, pdf: bytes) -> None:
    sealed = seal.apply(pdf)
    assert seal.check(sealed + added) == seal.Verdict("added", seal.seal_of(sealed), len(added))


def test_file_that_ended_in_a_line_end_is_intact(pdf: bytes) -> None:
    sealed = seal.apply(pdf + b"\n")
    assert seal.check(sealed).state == "intact"
    assert seal.check(sealed[:-1]).state == "altered"
    assert seal.check(sealed + b"more").added == 4


def test_every_altered_byte_shows(pdf: bytes) -> None:
    for plain in (PAGE, pdf):
        sealed = seal.apply(plain)
        for place in range(5, len(sealed), max(1, len(sealed) // 60)):
            changed = sealed[:place] + bytes([sealed[place] ^ 1]) + sealed[place + 1 :]
            assert seal.check(changed).state == "altered", place


def test_a_saved_again_pdf_is_altered(pdf: bytes) -> None:
    out = io.BytesIO()
    pypdf.PdfWriter(clone_from=io.BytesIO(seal.apply(pdf))).write(out)
    assert seal.check(out.getvalue()).state == "altered"
    assert seal.check(out.getvalue()).text() == "altered or re-saved after issue"


def test_anything_appended_to_html_is_an_alteration() -> None:
    assert seal.check(seal.apply(PAGE) + b"\n").state == "altered"


def test_no_seal_is_altered() -> None:
    assert seal.check(b"<html></html>") == seal.Verdict("altered", "")
    assert seal.check(b"%PDF-1.7\n%%EOF") == seal.Verdict("altered", "")


def test_one_byte_is_singular() -> None:
    assert seal.Verdict("added", "", 1).text() == "1 byte added after issue"


@pytest.mark.parametrize("data", [PAGE + seal.PLACEHOLDER.encode(), b"<html></html>", seal.apply(PAGE)])
def test_placeholder_must_stand_where_it_belongs_and_nowhere_else(data: bytes) -> None:
    with pytest.raises(NotebookError, match="needs its blank digits 1 time in the file; found"):
        seal.apply(data)
