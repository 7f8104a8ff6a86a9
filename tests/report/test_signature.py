"""The signature report, read back as a stranger would."""

from __future__ import annotations

import hashlib
from pathlib import Path

import pytest

from calckit import cli
from calckit.errors import CommandError
from calckit.report import seal, signature
from calckit.report.attachments import Parcel
from tests.report import plain
from tests.report.sheets import Sheets

Capture = pytest.CaptureFixture[str]
MM = 72 / 25.4


def issue(folder: Path, **fields: str) -> list[Path]:
    """An issued report with its record; `fields` change the title block."""
    record = plain.record(notebook="demo", **fields)
    attached = Parcel("demo", b"{}", b"{}", {}, record.to_json().encode()).pack()
    name = f"C-101_{record.calculation['revision']}"
    contents = {
        "html": seal.apply(plain.html_file(None, figures={}, attachments=attached)),
        "pdf": seal.apply(plain.pdf_file(None, figures={}, attachments=attached, date="2026-12-01")),
    }
    seals = {form: seal.seal_of(data) for form, data in contents.items()}
    contents["record.json"] = record.sealed(seals).to_json().encode()
    paths = [folder / f"{name}.{ending}" for ending in contents]
    for path, data in zip(paths, contents.values(), strict=True):
        path.write_bytes(data)
    return paths


def sheet(files: list[Path]) -> Sheets:
    return Sheets(signature.render(signature.look(files)))


def test_the_sheet_lists_each_file_with_size_digests_and_description(tmp_path: Path) -> None:
    files = issue(tmp_path)
    found = sheet(files)
    assert len(found) == 1
    text = found.text()
    for path in files:
        data = path.read_bytes()
        size = f"{len(data):,}bytes"
        said = "HarborStreetClinic,C-101,revisionA,forcheck,2026-12-01"
        state = "" if path.suffix == ".json" else "Fileseal:intact"
        digests = f"SHA-256{hashlib.sha256(data).hexdigest()}SHA-1{hashlib.sha1(data).hexdigest()}"
        assert f"{path.name}{size}{said}{state}{digests}" in text


def test_digests_are_those_of_the_published_example(tmp_path: Path) -> None:
    # the one-block message "abc": NIST, Cryptographic Standards and Guidelines, Example Values, SHA1.pdf and
    # SHA256.pdf (examples of FIPS 180); from memory
    path = tmp_path / "abc"
    path.write_bytes(b"abc")
    (listed,) = signature.look([path])
    assert listed.sha1 == "a9993e364706816aba3e25717850c26c9cd0d89d"
    assert listed.sha256 == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert listed.record is None and listed.verdict is None
    assert "norecordofacalculationinthisfile" in sheet([path]).text()


def test_the_fields_of_the_person_are_blank(tmp_path: Path) -> None:
    found = sheet(issue(tmp_path, prepared_by="J. Doe", checked_by="K. Lee", firm="Own Firm"))
    assert found.text().endswith("FieldEntrybyhandNameLicensenumberJurisdictionDateSignatureandseal")
    assert "Doe" not in found.text() and "Lee" not in found.text()


def test_a_clear_space_of_51_millimeters_holds_no_text(tmp_path: Path) -> None:
    found = sheet(issue(tmp_path))
    (label,) = (run for run in found.runs(1) if run.text == "Signature and seal")
    side = 51 * MM
    box = (label.x0, label.y - side - 3 * MM, label.x0 + side, label.y - 2 * MM)
    assert box[1] > 36 and box[2] < float(found.reader.pages[0].mediabox.width) - 36
    inside = [run.text for run in found.runs(1) if run.x1 > box[0] and run.x0 < box[2] and box[1] < run.y < box[3]]
    assert inside == []


def test_no_text_is_under_8_points(tmp_path: Path) -> None:
    assert min(run.size for run in sheet(issue(tmp_path)).runs(1)) >= 8


def test_the_file_declares_archive_and_accessibility_profiles(tmp_path: Path) -> None:
    found = sheet(issue(tmp_path))
    metadata = found.catalog["/Metadata"].get_data().decode()
    for entry in ("<pdfaid:part>3</", "<pdfaid:conformance>A</", "<pdfuaid:part>1</"):
        assert entry in metadata
    assert found.elements("TH") and found.elements("H1")
    assert found.reader.metadata is not None
    assert found.reader.metadata.title == "Signature report - Harbor Street Clinic"
    assert str(found.reader.metadata.creation_date).startswith("2026-12-01")


@pytest.mark.parametrize(("paper", "size"), [("Letter", (612, 792)), ("A4", (595.28, 841.89))])
def test_paper_is_that_of_the_calculation(paper: str, size: tuple[float, float], tmp_path: Path) -> None:
    box = sheet(issue(tmp_path, paper=paper)).reader.pages[0].mediabox
    assert (float(box.width), float(box.height)) == pytest.approx(size, abs=0.01)


def test_the_same_files_give_the_same_bytes(tmp_path: Path) -> None:
    files = issue(tmp_path)
    assert signature.render(signature.look(files)) == signature.render(signature.look(files))


def test_without_a_calculation_the_day_comes_from_outside(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "model.txt"
    path.write_text("w")
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1000000000")
    metadata = sheet([path]).reader.metadata
    assert metadata is not None and str(metadata.creation_date).startswith("2001-09-09")


def test_hostile_names_come_out_as_typed(tmp_path: Path) -> None:
    names = ['#read("x") $a$ *b* [c]', "x" * 120, "漢.txt"]
    for name in names:
        (tmp_path / name).write_text("w")
    text = sheet([tmp_path / name for name in names]).text()
    assert '#read("x")$a$*b*[c]' in text and "x" * 120 in text and "[U+6F22].txt" in text


def test_more_files_than_a_sheet_holds_are_refused(tmp_path: Path) -> None:
    paths = [tmp_path / f"{number}.txt" for number in range(20)]
    for path in paths:
        path.write_text("w")
    assert len(sheet(paths[:7])) == 1
    with pytest.raises(CommandError, match="the files take 2 sheets and must fit on one; cure: name fewer files"):
        sheet(paths)


def test_every_file_that_cannot_be_read_is_named(tmp_path: Path) -> None:
    with pytest.raises(CommandError) as caught:
        signature.write([tmp_path / "a.pdf", tmp_path, *issue(tmp_path)], tmp_path / "out.pdf")
    assert str(caught.value).splitlines() == [
        f"{tmp_path}/a.pdf cannot be read: No such file or directory",
        f"{tmp_path} cannot be read: Is a directory",
    ]


def test_the_command(tmp_path: Path, capsys: Capture) -> None:
    files = issue(tmp_path)
    before = [path.read_bytes() for path in files]
    assert cli.main(["files", *map(str, files), "--to", str(tmp_path)]) == 0
    out = capsys.readouterr().out.splitlines()
    digests = [f"  {path.name}: SHA-256 {hashlib.sha256(path.read_bytes()).hexdigest()}" for path in files]
    assert out == [f"{tmp_path}/C-101_A_signature.pdf", *digests]
    assert [path.read_bytes() for path in files] == before
    assert len(Sheets((tmp_path / "C-101_A_signature.pdf").read_bytes())) == 1


def test_a_report_that_stands_is_never_overwritten(tmp_path: Path, capsys: Capture) -> None:
    files, signed = issue(tmp_path), tmp_path / "signed.pdf"
    signed.write_bytes(b"signed by hand")
    for target in (signed, files[1]):
        before = target.read_bytes()
        assert cli.main(["files", str(files[0]), "--to", str(target)]) == 2
        assert capsys.readouterr().err == (
            f"calckit: {target} exists and is not overwritten; cure: name another file with --to\n"
        )
        assert target.read_bytes() == before


def test_altered_files_and_mixed_issues_are_said(tmp_path: Path, capsys: Capture) -> None:
    first, second = issue(tmp_path), issue(tmp_path, revision="B")
    first[0].write_bytes(first[0].read_bytes() + b" ")
    first[1].write_bytes(first[1].read_bytes() + b"\n%%EOF\n")
    assert cli.main(["files", *map(str, [*first, second[2]]), "--to", str(tmp_path / "out.pdf")]) == 0
    assert capsys.readouterr().out.splitlines()[5:] == [
        "note: C-101_A.html: altered or re-saved after issue",
        "note: C-101_A.pdf: 7 bytes added after issue",
        "note: the files belong to more than one issue",
    ]
    text = Sheets((tmp_path / "out.pdf").read_bytes()).text()
    assert "Fileseal:alteredorre-savedafterissue" in text and "Fileseal:7bytesaddedafterissue" in text
    assert "C-101,revisionB,forcheck,2026-12-01" in text
