"""Two issued files held against each other: what is read, what is said, what is written, and the exit code."""

from __future__ import annotations

import copy
import hashlib
import io
import json
import re
import shutil
from html.parser import HTMLParser
from pathlib import Path

import pypdf
import pytest

from calckit import cli
from calckit.core.record import Line, Record, from_json, lines_hash
from calckit.errors import CommandError, MismatchError
from calckit.report import notebook, seal
from calckit.report.attachments import Parcel
from calckit.report.changes import HEADINGS
from calckit.report.compare import (
    CAUTION,
    Comparison,
    Issue,
    changed_lines,
    compare,
    narrative,
    of_issues,
    open_issue,
    page,
    text,
    write,
)
from tests.conftest import notebook_json
from tests.report import plain, sample
from tests.report.test_issue_whole import demonstration, run_calckit
from tests.template_runs import template

Capture = pytest.CaptureFixture[str]


@pytest.fixture(scope="module")
def issues(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Two issues of a small notebook: revision B has another height, another text and another file."""
    folder = tmp_path_factory.mktemp("issues")
    path = demonstration(folder)
    first = run_calckit(folder, "issue", path)
    row = 'calc.revise(\\"B\\", date=\\"2026-12-01\\", reason=\\"survey\\", by=\\"J. Doe\\")\\n'
    second_state = path.read_text().replace("62 ft", "65 ft").replace("by hand", "by two persons")
    path.write_text(second_state.replace("calc.document(", row + "calc.document(", 1))
    (folder / "notes.txt").write_text("wind may govern\n")
    second = run_calckit(folder, "issue", path, "--set", "revision=B", "--set", "p=2.1 kip/ft")
    assert (first.returncode, second.returncode) == (0, 0), first.stderr + second.stderr
    return folder


@pytest.fixture
def folder(issues: Path, tmp_path: Path) -> Path:
    """A copy of the two issues."""
    return Path(shutil.copytree(issues, tmp_path / "issues"))


def held(old: Record, new: Record) -> Comparison:
    return of_issues(Issue("a.record.json", old, None), Issue("b.record.json", new, None))


SAID = """\
old  C-7, revision A, for check, 2026-12-01  (C-7_A.pdf)
new  C-7, revision B, for check, 2026-12-01  (C-7_B.html)

Title block and criteria changed: 2
    revision
      A -> B
    revision row B
      none -> date 2026-12-01; reason survey; by J. Doe

Inputs changed: 2
  1  h_n  structural height  [S-201 grid A]
       62 ft -> 65 ft  +4.8 %
  2  p  load per height  [S-201, set at issue]
       2 kip/ft -> 2.1 kip/ft  +5.0 %

Settings and files changed: 2
    set value p
      none -> 2.1 kip/ft
    file notes.txt
      26 bytes, sha256 {} -> 16 bytes, sha256 {}

Results moved: 1
  3  V_w  load on the wall  [through p, h_n]
       124.0 kip -> 136.5 kip  +10.1 %

Text of the notebook changed: 1
    under Demonstration
      Weight $W$ by hand. -> Weight $W$ by two persons.

Nothing under: """


def test_what_the_terminal_says(folder: Path, capsys: Capture) -> None:
    # 65 x 2.1 = 136.5; 65/62 - 1 = 4.8 %; 136.5/124 - 1 = 10.1 %, by pocket calculator
    assert cli.main(["compare", str(folder / "C-7_A.pdf"), str(folder / "C-7_B.html")]) == 0
    said = capsys.readouterr().out
    contents = (b"wind governs nothing here\n", b"wind may govern\n")
    assert said.startswith(SAID.format(*(hashlib.sha256(content).hexdigest()[:8] for content in contents)))
    assert said.endswith(f"\n{CAUTION}\n")


@pytest.mark.parametrize("ending", ["pdf", "html", "record.json"])
def test_every_form_holds_the_same_record(ending: str, folder: Path) -> None:
    found = compare(folder / f"C-7_A.{ending}", folder / f"C-7_B.{ending}")
    assert found.changed == compare(folder / "C-7_A.pdf", folder / "C-7_B.html").changed
    assert found.faults == ()
    said = "settings, files and text cells were not compared: a record file does not hold them"
    assert found.remarks == ((said,) if ending == "record.json" else ())
    assert bool(found.settings) == bool(found.prose) == (ending != "record.json")


def test_a_file_against_itself(folder: Path, capsys: Capture) -> None:
    path = folder / "C-7_A.pdf"
    assert cli.main(["compare", str(path), str(path)]) == 0
    said = capsys.readouterr().out
    assert [line for line in said.splitlines() if re.search(r": \d+$", line)] == []
    assert all(heading in said for heading in HEADINGS.values())
    assert narrative(compare(path, path)) == ["No input, formula, result or open item changed."]
    assert changed_lines(compare(path, path)) == {}


def altered(folder: Path, form: str) -> Path:
    """A file in which one visible byte is another; what is attached is as it was."""
    path = folder / f"C-7_A.{form}"
    data = path.read_bytes()
    place = data.index(b"D:2026" if form == "pdf" else b"Harbor") + 5
    path.write_bytes(data[:place] + bytes([data[place] ^ 1]) + data[place + 1 :])
    return path


@pytest.mark.parametrize("form", ["html", "pdf"])
def test_an_altered_page_is_said_and_compared_all_the_same(form: str, folder: Path, capsys: Capture) -> None:
    path = altered(folder, form)
    to = folder / "c.html"
    assert cli.main(["compare", str(path), str(folder / "C-7_B.html"), "--to", str(to)]) == 4
    said = capsys.readouterr().out
    fault = f"old, C-7_A.{form}: altered or re-saved after issue"
    assert f"NOT AS ISSUED  {fault}" in said.splitlines()
    assert "       62 ft -> 65 ft  +4.8 %" in said.splitlines()
    assert fault in to.read_text()


def test_a_changed_record_under_a_new_seal_is_said(tmp_path: Path) -> None:
    record = plain.record(notebook="demo")
    record.lines_hash = lines_hash(record.lines)
    good = tmp_path / "good.html"
    bad = tmp_path / "bad.html"
    for path in (good, bad):
        if path is bad:
            record.lines[1].value = 0.8
        source = notebook.parse(json.dumps(notebook_json(["# Demo", "1"])), "demo", Path())
        parcel = Parcel("demo", source.bare(), b'{"set": {}}', {}, record.to_json().encode())
        path.write_bytes(seal.apply(plain.html_file(None, figures={}, attachments=parcel.pack())))
    assert open_issue(good).faults == ()
    (fault,) = open_issue(bad).faults
    assert re.fullmatch("lines not as issued: the record states [0-9a-f]{8}, the content gives [0-9a-f]{8}", fault)
    assert [change.id for change in compare(good, bad).changed.results] == ["X.T_a"]


def test_a_mark_made_in_the_pdf_is_no_alteration(folder: Path, capsys: Capture) -> None:
    path = folder / "C-7_A.pdf"
    writer = pypdf.PdfWriter(io.BytesIO(path.read_bytes()), incremental=True)
    writer.add_metadata({"/Marked": "yes"})
    with path.open("wb") as file:
        writer.write(file)
    assert cli.main(["compare", str(path), str(folder / "C-7_B.pdf")]) == 0
    assert re.search(r"note: old, C-7_A.pdf: \d+ bytes added after issue\n", capsys.readouterr().out)


def test_a_mixed_set_is_said_from_either_side(folder: Path) -> None:
    shutil.copy(folder / "C-7_B.html", folder / "C-7_A.html")
    said = {path: open_issue(folder / path).faults for path in ("C-7_A.html", "C-7_A.record.json", "C-7_A.pdf")}
    assert said == {
        "C-7_A.html": ("C-7_A.record.json belongs to another issue: the files are a mixed set",),
        "C-7_A.record.json": ("C-7_A.html beside it belongs to another issue: the files are a mixed set",),
        "C-7_A.pdf": ("C-7_A.html beside it belongs to another issue: the files are a mixed set",),
    }


def test_a_changed_record_file_is_said(folder: Path, capsys: Capture) -> None:
    path = folder / "C-7_A.record.json"
    path.write_text(path.read_text().replace('"value": 124.0', '"value": 120.0'))
    assert cli.main(["compare", str(path), str(folder / "C-7_B.pdf")]) == 4
    said = capsys.readouterr().out
    assert "NOT AS ISSUED  old, C-7_A.record.json: lines not as issued: the record states " in said
    assert "+13.8 %" in said  # 136.5/120


@pytest.mark.parametrize(
    ("name", "content", "code", "said"),
    [
        ("no.pdf", None, 2, "cannot be read: No such file or directory"),
        ("no.record.json", None, 2, "cannot be read: No such file or directory"),
        ("letter.txt", b"Dear all", 2, "is neither a PDF nor an HTML file"),
        ("x.record.json", b'{"schema": "calckit.record.v1"}', 4, "x.record.json: its record cannot be read: 'lines'"),
        ("y.record.json", b"\xff", 4, "its record cannot be read"),
        ("bare.html", b"<!DOCTYPE html><html></html>", 4, "attachments of an issued report are not there"),
    ],
)
def test_what_cannot_be_compared(
    name: str, content: bytes | None, code: int, said: str, folder: Path, capsys: Capture
) -> None:
    path = folder / name
    if content is not None:
        path.write_bytes(content)
    assert cli.main(["compare", str(folder / "C-7_A.pdf"), str(path), "--to", str(folder / "c.html")]) == code
    result = capsys.readouterr()
    assert said in result.err
    assert name in result.err
    assert result.out == ""
    assert not (folder / "c.html").exists()


@pytest.mark.parametrize(
    ("what", "error"),
    [("settings", "the attached settings cannot be read"), ("notebook", "the attached notebook cannot be read")],
)
def test_attachments_that_cannot_be_read(what: str, error: str) -> None:
    record = plain.record()
    source = json.dumps(notebook_json(["# Demo"])).encode()
    whole = Parcel("demo", source, b"{}", {}, b"{}")
    broken = Parcel("demo", b"[]" if what == "notebook" else source, b"[]" if what == "settings" else b"{}", {}, b"{}")
    with pytest.raises(MismatchError, match=error):
        of_issues(Issue("a", record, whole), Issue("b", record, broken))


# --- the page


class _Page(HTMLParser):
    """Tags, addresses and text of a page."""

    def __init__(self, source: bytes) -> None:
        super().__init__()
        self.tags: set[str] = set()
        self.addresses: list[str] = []
        self.ids: set[str] = set()
        self.words = ""
        self.feed(source.decode())

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.add(tag)
        for name, value in attrs:
            if name in ("href", "src"):
                self.addresses.append(value or "")
            if name == "id":
                self.ids.add(value or "")

    def handle_data(self, data: str) -> None:
        self.words += data


def test_the_page(folder: Path, capsys: Capture) -> None:
    to = folder / "compared.html"
    assert cli.main(["compare", str(folder / "C-7_A.pdf"), str(folder / "C-7_B.pdf"), "--to", str(to)]) == 0
    assert capsys.readouterr().out.splitlines()[-1] == str(to)
    found = _Page(to.read_bytes())
    assert not found.tags & {"script", "link", "img", "iframe", "object", "form", "svg"}
    assert {address[1:] for address in found.addresses} <= found.ids
    assert all(address.startswith("#") for address in found.addresses)
    assert "default-src 'none'; style-src 'unsafe-inline'" in to.read_text()
    assert not re.search(r"url\(|@import|https?:", to.read_text())
    assert all(heading in found.words for heading in HEADINGS.values())
    for word in ("62 ft", "65 ft", "+4.8 %", "136.5 kip", "Weight $W$ by two persons.", CAUTION):
        assert word in found.words
    assert page(compare(folder / "C-7_A.pdf", folder / "C-7_B.pdf")) == to.read_bytes()


def test_texts_come_out_as_they_were_typed() -> None:
    old, new = template(), copy.deepcopy(template())
    new.calculation["subject"] = sample.HOSTILE
    new.lines[0].text = sample.HOSTILE
    new.lines[0].meaning = sample.HOSTILE
    new.lines.append(Line("N-x", "note", text=sample.HOSTILE, n=900))
    source = page(held(old, new))
    found = _Page(source)
    assert found.words.count(sample.HOSTILE) >= 3
    assert "script" not in found.tags


def test_write_replaces_a_comparison_and_nothing_else(folder: Path) -> None:
    found = compare(folder / "C-7_A.pdf", folder / "C-7_B.pdf")
    before = (folder / "C-7_B.html").read_bytes()
    with pytest.raises(CommandError, match="is an issued report and is never overwritten"):
        write(found, folder / "C-7_B.html")
    assert (folder / "C-7_B.html").read_bytes() == before
    with pytest.raises(CommandError, match=r"c\.pdf: needed a file name that ends in \.html"):
        write(found, folder / "c.pdf")
    assert not (folder / "c.pdf").exists()
    (folder / "c.html").write_text("an earlier comparison")
    assert write(found, folder / "c.html").read_bytes() == page(found)


# --- for a revision


def test_narrative() -> None:
    old = template()
    new = copy.deepcopy(template({"S_S": "1.1"}))
    new.line("N-roof").text = "other"
    said = narrative(held(old, new))
    assert said == [
        "Input S_S (mapped risk-targeted spectral ordinate at 0.2 s, as a fraction of g): from 0.68 to 1.1 (+61.8 %).",
        "Line F_a (site coefficient for short periods): formula from 1.3 + (1.2 - 1.3) × (S_S - 0.5) / (0.75 - 0.5) to "
        "none; look-up from Table 11.4-1, row C, between columns 0.5: 1.3 and 0.75: 1.2 to Table 11.4-1, row C, "
        "between columns 1.0: 1.2 and 1.25: 1.2.",
        "Decision at X.C_s (seismic response coefficient): governs from 12.8-3 to 12.8-5.",
        "17 results moved; of those on the summary sheets: S_DS from 0.5567 to 0.8800 (+58.1 %); X.C_sfloor from "
        "0.03062 to 0.04840 (+58.1 %); X.C_s from 0.04357 to 0.04840 (+11.1 %); X.V from 264.0 kip to 293.3 kip "
        "(+11.1 %).",
        "Notes and wording changed at: N-roof.",
    ]


def test_changed_lines() -> None:
    old = template()
    new = template({"X.system": "moment frame: steel intermediate moment frame"})
    found = changed_lines(held(old, new))
    before = {line.id: line for line in old.lines}
    assert found["X.system"] == "moment frame: steel special moment frame"
    assert found["X.R"] == "8"
    assert found["X.V"] == "264.0 kip"
    assert found["X.F_x"].startswith("72.27 kip at Roof, 67.51 kip at 6, ")
    assert found["X.h_limit"] == "not in the former issue"
    assert found["X.Omega_0"].startswith("look-up: Table 12.2-1, row C1, moment frame: steel special moment frame")
    assert all(found.values())
    differ = {line.id for line in new.lines if line.id not in before or line.value != before[line.id].value}
    assert differ <= found.keys()
    assert not {id_ for id_ in found if id_.startswith("Y.")}


def test_the_committed_example_can_be_compared() -> None:
    place = Path(__file__).parents[2] / "example_reports"
    path = sorted(place.glob("*.record.json"))[0]
    assert from_json(path.read_text(encoding="utf-8")) == open_issue(path).record
    assert text(compare(path, path)).startswith("old  ")
