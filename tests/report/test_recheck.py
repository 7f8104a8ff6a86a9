"""Holding an issued file against itself."""

import io
import json
import re
from pathlib import Path

import pypdf
import pytest

from calckit.core.record import lines_hash
from calckit.errors import CommandError, MismatchError
from calckit.report import notebook, seal
from calckit.report.attachments import Parcel, inputs_hash
from calckit.report.recheck import Finding, parcel_of, recheck, record_of
from tests.conftest import notebook_json
from tests.report import plain

FORMS = ("html", "pdf")
SETTINGS = b'{"set": {}}\n'
FILES = {"data/w.csv": b"level,w_x\n", "record.json": b"a file that happens to have this name"}


def parcel(**wrong: str) -> Parcel:
    """What an issue attaches; `wrong` puts another text in place of a hash."""
    source = notebook.parse(json.dumps(notebook_json(["# Demo", "1"])), "demo", Path())
    record = plain.record(notebook="demo")
    record.source = source.source_hash()
    record.inputs = inputs_hash(record, SETTINGS, FILES)
    record.lines_hash = lines_hash(record.lines)
    for name, text in wrong.items():
        setattr(record, name, text)
    return Parcel("demo", source.bare(), SETTINGS, FILES, record.to_json().encode())


def file_of(form: str, content: Parcel) -> bytes:
    attached = content.pack()
    if form == "html":
        return seal.apply(plain.html_file(None, figures={}, attachments=attached))
    return seal.apply(plain.pdf_file(None, figures={}, attachments=attached, date="2026-12-01"))


def write(folder: Path, form: str, data: bytes) -> Path:
    path = folder / f"C-101_A.{form}"
    path.write_bytes(data)
    return path


def bad(findings: list[Finding]) -> dict[str, str]:
    return {finding.what: finding.text for finding in findings if not finding.good}


@pytest.mark.parametrize("form", FORMS)
def test_as_issued(form: str, tmp_path: Path) -> None:
    content = parcel()
    record = record_of(file_of(form, content))
    assert recheck(write(tmp_path, form, file_of(form, content))) == [
        Finding("seal", True, "intact"),
        Finding("issue", True, "C-101, revision A, for check, 2026-12-01"),
        Finding("lines", True, f"as issued ({record.lines_hash[:8]})"),
        Finding("source", True, f"as issued ({record.source[:8]})"),
        Finding("inputs", True, f"as issued ({record.inputs[:8]})"),
    ]


@pytest.mark.parametrize("form", FORMS)
def test_attachments_come_out_as_they_went_in(form: str) -> None:
    assert parcel_of(file_of(form, parcel())) == parcel()


@pytest.mark.parametrize("form", FORMS)
@pytest.mark.parametrize(("field", "what"), [("lines_hash", "lines"), ("source", "source"), ("inputs", "inputs")])
def test_a_hash_that_does_not_fit_its_content(form: str, field: str, what: str, tmp_path: Path) -> None:
    findings = recheck(write(tmp_path, form, file_of(form, parcel(**{field: "5f" * 32}))))
    assert list(bad(findings)) == [what]
    assert re.fullmatch("not as issued: the record states 5f5f5f5f, the content gives [0-9a-f]{8}", bad(findings)[what])


def test_a_changed_line_shows_even_under_a_new_seal(tmp_path: Path) -> None:
    content = parcel()
    changed = content.record.replace(b'"shown": "0.76 s"', b'"shown": "0.67 s"')
    assert changed != content.record
    data = file_of("html", Parcel("demo", content.notebook, SETTINGS, FILES, changed))
    assert list(bad(recheck(write(tmp_path, "html", data)))) == ["lines"]


def test_a_changed_file_or_setting_shows_even_under_a_new_seal(tmp_path: Path) -> None:
    whole = parcel()
    for settings, files in ((b"{}", FILES), (SETTINGS, {**FILES, "data/w.csv": b"other"})):
        data = file_of("pdf", Parcel("demo", whole.notebook, settings, files, whole.record))
        assert list(bad(recheck(write(tmp_path, "pdf", data)))) == ["inputs"]


def test_a_marked_pdf_is_read_as_it_was_issued(tmp_path: Path) -> None:
    sealed = file_of("pdf", parcel())
    writer = pypdf.PdfWriter(io.BytesIO(sealed), incremental=True)
    writer.add_attachment("record.json", b"not the record")
    out = io.BytesIO()
    writer.write(out)
    assert out.getvalue().startswith(sealed)
    findings = recheck(write(tmp_path, "pdf", out.getvalue()))
    assert findings[0] == Finding("seal", True, f"{len(out.getvalue()) - len(sealed)} bytes added after issue")
    assert bad(findings) == {}


def test_a_saved_again_pdf_keeps_its_hashes_but_not_its_seal(tmp_path: Path) -> None:
    out = io.BytesIO()
    pypdf.PdfWriter(clone_from=io.BytesIO(file_of("pdf", parcel()))).write(out)
    assert bad(recheck(write(tmp_path, "pdf", out.getvalue()))) == {"seal": "altered or re-saved after issue"}


def test_a_printed_again_pdf_has_nothing_to_hold_on_to(tmp_path: Path) -> None:
    out = io.BytesIO()
    writer = pypdf.PdfWriter()
    writer.add_blank_page(200, 200)
    writer.write(out)
    assert bad(recheck(write(tmp_path, "pdf", out.getvalue()))) == {
        "seal": "altered or re-saved after issue",
        "attachments": "the attachments of an issued report are not there: settings.json, record.json, "
        "one source notebook",
    }


@pytest.mark.parametrize("data", [b"%PDF-1.7\nbroken", b"<html><a download='record.json' href='data:x;base64,&'>"])
def test_broken_files_are_findings_not_errors(data: bytes, tmp_path: Path) -> None:
    path = write(tmp_path, "pdf" if data.startswith(b"%PDF") else "html", data)
    assert set(bad(recheck(path))) == {"seal", "attachments"}


@pytest.mark.parametrize("record", [b"{}", b"[]", b"text", b'{"schema": "calckit.record.v1"}', b"\xff"])
def test_a_record_that_cannot_be_read(record: bytes, tmp_path: Path) -> None:
    whole = parcel()
    data = file_of("html", Parcel("demo", whole.notebook, SETTINGS, FILES, record))
    assert list(bad(recheck(write(tmp_path, "html", data)))) == ["attachments"]
    with pytest.raises(MismatchError, match="the attached record cannot be read"):
        record_of(data)


@pytest.mark.parametrize("form", FORMS)
def test_the_record_beside_it(form: str, tmp_path: Path) -> None:
    data = file_of(form, parcel())
    path = write(tmp_path, form, data)
    beside = tmp_path / "C-101_A.record.json"
    for seals, good in (({form: seal.seal_of(data)}, True), ({form: "5f" * 32}, False), ({}, False), (None, False)):
        beside.write_text(record_of(data).sealed(seals).to_json())
        found = recheck(path)[-1]
        assert (found.what, found.good) == ("record beside it", good)
        assert ("names this file" if good else "the files are a mixed set") in found.text
    beside.write_text("{")
    assert not recheck(path)[-1].good


def test_a_mixed_set_is_said_of_a_marked_pdf_too(tmp_path: Path) -> None:
    data = file_of("pdf", parcel())
    path = write(tmp_path, "pdf", data + b"\n")
    (tmp_path / "C-101_A.record.json").write_text(record_of(data).sealed({"pdf": seal.seal_of(data)}).to_json())
    assert bad(recheck(path)) == {}


def test_what_is_no_report(tmp_path: Path) -> None:
    (tmp_path / "a.txt").write_text("text")
    with pytest.raises(CommandError, match="is neither a PDF nor an HTML file"):
        recheck(tmp_path / "a.txt")
    with pytest.raises(CommandError, match="cannot be read: No such file"):
        recheck(tmp_path / "none.pdf")
    with pytest.raises(CommandError, match="cannot be read: Is a directory"):
        recheck(tmp_path)
