"""Holding an issued file against itself."""

import io
import json
import re
from collections.abc import Callable
from pathlib import Path

import pypdf
import pytest
from pypdf.annotations import FreeText

from calckit import Calc, cli
from calckit.core import nodes
from calckit.core.assemble import assemble
from calckit.core.record import Record, canonical, digest, from_json, lines_hash
from calckit.errors import CommandError, MismatchError, NotebookError
from calckit.report import notebook, seal
from calckit.report import run as runner
from calckit.report.attachments import Parcel, inputs_hash
from calckit.report.recheck import Finding, parcel_of, recheck, record_of, run_again
from tests.conftest import notebook_json
from tests.report import plain

FORMS = ("html", "pdf")
SETTINGS = b'{"set": {}}\n'
FILES = {"data/w.csv": b"level,w_x\n", "record.json": b"a file that happens to have this name"}


CELLS = ["# Demo", "a = 1", "## Force", "b = 2"]


def made() -> Record:
    """A short calculation as the kit writes it; invented."""
    calc = Calc(project="Harbor Street Clinic", number="C-101", revision="A", date="2026-12-01", status="for check")
    calc.document("S-201", title="Framing elevations")
    calc.given("h_n", "62 ft", source="S-201")
    calc.given("p", "2.5 kip/ft", meaning="load per height", source="S-201")
    calc.line("V_w", "p*h_n**2/h_n", unit="kip", meaning="load on the wall")
    calc.check("V_w", "<=", "2*V_w", title="Wall")
    return from_json(assemble(calc).to_json())


def parcel(record: Record | None = None, **wrong: str) -> Parcel:
    """What an issue attaches; `wrong` puts another text in place of a hash."""
    source = notebook.parse(json.dumps(notebook_json(CELLS)), "demo", Path())
    record = record or made()
    record.calculation["notebook"] = "demo"
    record.source, record.cell_hashes = source.source_hash(), source.cell_hashes()
    record.inputs = inputs_hash(record, SETTINGS, FILES)
    record.lines_hash = lines_hash(record.lines)
    for name, text in wrong.items():
        setattr(record, name, text)
    return Parcel("demo", source.bare(), SETTINGS, FILES, record.to_json().encode())


def with_record(content: Parcel, change: Callable[[Record], None]) -> Parcel:
    """The same with a record that was altered, all its hashes left."""
    record = from_json(content.record.decode())
    change(record)
    return Parcel(content.stem, content.notebook, content.settings, content.files, record.to_json().encode())


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
        Finding("contents", True, "as hashed: 4 lines"),
        Finding("printed digits", True, "2 lines, 0 table rows follow from what is printed"),
        Finding(
            "formulas",
            True,
            "2 formulas evaluated again, 1 of them checks\n2 in the other unit set",
        ),
    ]


@pytest.mark.parametrize("form", FORMS)
def test_attachments_come_out_as_they_went_in(form: str) -> None:
    assert parcel_of(file_of(form, parcel())) == parcel()


@pytest.mark.parametrize("form", FORMS)
@pytest.mark.parametrize(("field", "what"), [("lines_hash", "lines"), ("source", "source"), ("inputs", "inputs")])
def test_a_hash_that_does_not_fit_its_content(form: str, field: str, what: str, tmp_path: Path) -> None:
    findings = recheck(write(tmp_path, form, file_of(form, parcel(**{field: "5f" * 32}))))
    assert list(bad(findings)) == [what]
    words, *cause = bad(findings)[what].splitlines()
    assert re.fullmatch("not as issued: the record states 5f5f5f5f, the content gives [0-9a-f]{8}", words)
    assert (
        cause
        == {
            "lines": ["no content of a line differs: it is a number, a printed form, a flag or this hash"],
            "source": [],
            "inputs": ["the lines are as hashed: settings.json or a file that the notebook read differs"],
        }[what]
    )


def findings_of(folder: Path, content: Parcel, form: str = "html") -> dict[str, list[str]]:
    """What is at fault in a file of this content, under a new seal: the lines of each finding."""
    return {what: text.splitlines() for what, text in bad(recheck(write(folder, form, file_of(form, content)))).items()}


@pytest.mark.parametrize("form", FORMS)
def test_one_altered_value_is_named_with_all_hashes_left(form: str, tmp_path: Path) -> None:
    def height(record: Record) -> None:
        record.line("h_n").value = 72.0

    found = findings_of(tmp_path, with_record(parcel(), height), form)
    assert set(found) == {"lines", "inputs", "contents", "printed digits", "formulas"}
    assert found["contents"] == ["at fault: 1", "line 1, h_n: not what it was hashed with"]
    assert found["printed digits"] == ["at fault: 1", "line 1, h_n: result is printed as 62 ft for 72.0"]
    assert found["formulas"] == ["at fault: 1", "line 3, V_w: takes h_n as 62 ft, but line 1, h_n is 72 ft"]


def test_an_altered_value_is_named_even_if_hashed_again(tmp_path: Path) -> None:
    record = made()
    line = record.line("V_w")
    assert line.value == 155.0
    line.value, line.shown = 145.0, "145.0 kip"
    line.content = record.line("wall").inputs["V_w"].content = digest(canonical(line.hashed()))
    check = record.line("wall")
    check.content = digest(canonical(check.hashed()))
    found = findings_of(tmp_path, parcel(record))
    assert set(found) == {"printed digits", "formulas"}
    assert "line 3, V_w: recorded 145 kip; in the other unit set p*h_n**2/h_n gives 155 kip" in found["formulas"]
    assert any(text.startswith("line 3, V_w: printed ") for text in found["printed digits"])


def test_an_altered_printed_form_is_named(tmp_path: Path) -> None:
    def printed(record: Record) -> None:
        record.line("V_w").shown = "165.0 kip"

    found = findings_of(tmp_path, with_record(parcel(), printed))
    assert found["lines"][1] == "no content of a line differs: it is a number, a printed form, a flag or this hash"
    assert "line 3, V_w: result is printed as 165.0 kip for 155.0" in found["printed digits"]
    assert "contents" not in found and "formulas" not in found


@pytest.mark.parametrize("form", FORMS)
def test_one_altered_cell_is_named(form: str, tmp_path: Path) -> None:
    content = parcel()
    changed = content.notebook.replace(b"b = 2", b"b = 3")
    assert changed != content.notebook
    found = findings_of(tmp_path, Parcel("demo", changed, SETTINGS, FILES, content.record), form)
    assert {what: text[1:] for what, text in found.items()} == {"source": ["cell cell-3: altered"]}


def test_cells_added_and_taken_out_are_named(tmp_path: Path) -> None:
    content = parcel()
    data = json.loads(content.notebook)
    data["cells"][1]["id"] = "other"
    changed = Parcel("demo", json.dumps(data).encode(), SETTINGS, FILES, content.record)
    assert findings_of(tmp_path, changed)["source"][1:] == ["cell other: added", "cell cell-1: taken out"]

    def bare(record: Record) -> None:
        record.cell_hashes = {}

    changed = with_record(changed, bare)
    assert findings_of(tmp_path, changed)["source"][1:] == ["the record holds no hash of single cells"]


@pytest.mark.parametrize("form", FORMS)
def test_one_altered_byte_is_an_alteration(form: str, tmp_path: Path) -> None:
    data = file_of(form, parcel())
    place = len(data) // 2
    path = write(tmp_path, form, data[:place] + bytes([data[place] ^ 1]) + data[place + 1 :])
    assert bad(recheck(path))["seal"] == "altered or re-saved after issue"
    assert cli.main(["recheck", str(path)]) == 4


def test_a_wrong_value_method_of_a_node_is_caught(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    with monkeypatch.context() as patch:
        patch.setattr(nodes.Power, "value", _twice)
        record = made()
    found = findings_of(tmp_path, parcel(record))
    assert "line 3, V_w: recorded 310 kip; in the other unit set p*h_n**2/h_n gives 155 kip" in found["formulas"]
    assert set(found) == {"printed digits", "formulas"}


def _twice(node: nodes.Power, env: nodes.Env) -> object:
    """A power that comes out twice as large."""
    base = node.args[0].value(env)
    return base * base + base * base


def test_a_record_whose_numbers_are_none(tmp_path: Path) -> None:
    content = parcel()
    changed = content.record.replace(b'"value": 155.0', b'"value": NaN')
    assert changed != content.record
    found = findings_of(tmp_path, Parcel("demo", content.notebook, SETTINGS, FILES, changed))
    assert {"lines", "contents", "printed digits", "formulas"} <= set(found)


def test_a_changed_file_or_setting_shows_even_under_a_new_seal(tmp_path: Path) -> None:
    whole = parcel()
    for settings, files in ((b"{}", FILES), (SETTINGS, {**FILES, "data/w.csv": b"other"})):
        data = file_of("pdf", Parcel("demo", whole.notebook, settings, files, whole.record))
        assert list(bad(recheck(write(tmp_path, "pdf", data)))) == ["inputs"]


def test_an_attachment_replaced_later_is_named_and_the_issued_one_is_read(tmp_path: Path) -> None:
    sealed = file_of("pdf", parcel())
    writer = pypdf.PdfWriter(io.BytesIO(sealed), incremental=True)
    writer.add_attachment("record.json", b"not the record")
    out = io.BytesIO()
    writer.write(out)
    assert out.getvalue().startswith(sealed)
    findings = recheck(write(tmp_path, "pdf", out.getvalue()))
    words = f"altered by {len(out.getvalue()) - len(sealed)} bytes added after issue"
    assert bad(findings) == {"seal": f"{words}\nattachment record.json: replaced"}


def test_an_annotation_added_by_a_reader_is_no_alteration(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    sealed = file_of("pdf", parcel())
    writer = pypdf.PdfWriter(io.BytesIO(sealed), incremental=True)
    writer.add_annotation(0, FreeText(text="agreed", rect=(50, 550, 200, 650)))
    out = io.BytesIO()
    writer.write(out)
    assert out.getvalue().startswith(sealed)
    assert cli.main(["recheck", str(write(tmp_path, "pdf", out.getvalue()))]) == 0
    added = len(out.getvalue()) - len(sealed)
    assert capsys.readouterr().out.splitlines()[1] == f"  seal            {added} bytes added after issue"


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


# the notebook inside run again

SOURCE = [
    "# Demonstration",
    "from calckit import Calc\n"
    'calc = Calc(project="Harbor Street Clinic", number="C-101", revision="A", date="2026-12-01")\n'
    'calc.document("S-201", title="Framing elevations")',
    "## Force",
    'calc.given("h_n", "62 ft", source="S-201")\n'
    'calc.given("p", calc.file("data/p.txt").decode(), meaning="load per height", source="S-201")\n'
    'calc.line("V_w", "p*h_n", unit="kip", meaning="load on the wall")',
]


@pytest.fixture(scope="module")
def issued(tmp_path_factory: pytest.TempPathFactory) -> Parcel:
    """What an issue of the notebook attaches, with a set value and a file that it reads."""
    folder = tmp_path_factory.mktemp("issued")
    (folder / "data").mkdir()
    (folder / "data" / "p.txt").write_text("2 kip/ft")
    source = notebook.parse(json.dumps(notebook_json(SOURCE)), "demo", folder)
    settings = runner.Settings(set={"h_n": "70 ft"})
    outcome = runner.run(source, settings)
    assert (outcome.failure, outcome.problems) == ("", ())
    record = outcome.record
    assert record is not None and record.line("V_w").value == 140.0
    given = settings.to_json().encode()
    record.source, record.cell_hashes = source.source_hash(), source.cell_hashes()
    record.inputs, record.lines_hash = inputs_hash(record, given, outcome.files), lines_hash(record.lines)
    return Parcel("demo", source.bare(), given, outcome.files, record.to_json().encode())


@pytest.mark.parametrize("form", FORMS)
def test_run_again_gives_every_line(
    form: str, issued: Parcel, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = write(tmp_path, form, file_of(form, issued))
    before = sorted(tmp_path.iterdir())
    assert cli.main(["recheck", str(path), "--run"]) == 0
    said = capsys.readouterr().out.splitlines()
    assert said[-2:] == [
        "running the code inside this file, in a temporary folder, with your own rights ...",
        "  run  every line equal (3 lines)",
    ]
    assert sorted(tmp_path.iterdir()) == before


def test_nothing_is_run_unless_asked_for(issued: Parcel, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(*_: object) -> None:
        raise AssertionError("a notebook was run")

    monkeypatch.setattr(runner, "run", fail)
    assert cli.main(["recheck", str(write(tmp_path, "html", file_of("html", issued)))]) == 0


def test_run_again_names_the_lines_that_differ(issued: Parcel, tmp_path: Path) -> None:
    changed = issued.notebook.replace(b"p*h_n", b"2*p*h_n")
    other = Parcel("demo", changed, issued.settings, {"data/p.txt": b"3 kip/ft"}, issued.record)
    path = write(tmp_path, "html", file_of("html", other))
    assert run_again(path) == [
        Finding(
            "run", False,
            "not as issued:\nline 2, p: issued 2 kip/ft, now 3 kip/ft\nline 3, V_w: issued 140.0 kip, now 420.0 kip",
        )
    ]  # fmt: skip
    assert cli.main(["recheck", str(path), "--run"]) == 4


def test_run_again_names_lines_added_and_gone(issued: Parcel, tmp_path: Path) -> None:
    def change(record: Record) -> None:
        record.line("V_w").id = "V_e"
        record.calculation["software"]["version"] = "0.0.9"

    words = run_again(write(tmp_path, "html", file_of("html", with_record(issued, change))))[0].text.splitlines()
    assert words[:3] == ["not as issued:", "line 3, V_e: no longer written", "line 3, V_w: not in the issued record"]
    assert words[3].startswith("issued with calckit 0.0.9 (Python ")
    assert words[4].startswith("run with calckit ")


def test_a_cell_that_raises(issued: Parcel, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    whole = Parcel("demo", issued.notebook, issued.settings, {}, issued.record)
    path = write(tmp_path, "html", file_of("html", whole))
    with pytest.raises(NotebookError, match=r"data/p\.txt"):
        run_again(path)
    assert cli.main(["recheck", str(path), "--run"]) == 4  # the files read are not as issued either
    assert "data/p.txt" in capsys.readouterr().err


@pytest.mark.parametrize("name", ["../p.txt", "/etc/p.txt", "a/../../p.txt", "..\\p.txt", "C:p.txt"])
def test_files_that_would_lie_elsewhere_are_not_written(name: str, issued: Parcel, tmp_path: Path) -> None:
    whole = Parcel("demo", issued.notebook, issued.settings, {name: b"x"}, issued.record)
    with pytest.raises(MismatchError, match="does not lie beside the notebook; nothing was run"):
        run_again(write(tmp_path, "html", file_of("html", whole)))


@pytest.mark.parametrize(("settings", "source"), [(b'{"speed": 1}', None), (b"[", None), (b"{}", b"{}")])
def test_settings_or_a_notebook_that_cannot_be_read(
    settings: bytes, source: bytes | None, issued: Parcel, tmp_path: Path
) -> None:
    whole = Parcel("demo", source or issued.notebook, settings, issued.files, issued.record)
    with pytest.raises(MismatchError, match="the attached settings or notebook cannot be read"):
        run_again(write(tmp_path, "html", file_of("html", whole)))
