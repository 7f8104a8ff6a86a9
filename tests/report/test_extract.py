"""The export for an independent recalculation hands over inputs and criteria, and no result."""

import base64
import copy
import csv
import io
import json
import re
from dataclasses import replace
from html import unescape
from pathlib import Path

import pytest

from calckit import cli
from calckit.core.record import Record
from calckit.errors import CommandError, InputError, MismatchError
from calckit.report import extract, notebook, seal
from calckit.report.attachments import Parcel
from tests.conftest import notebook_json
from tests.report import plain, sample
from tests.template_runs import template

ASKED = ["X.V", "Y.T_a", "SDC", "X.F_x"]


def words(page: bytes) -> str:
    """What a reader sees: the page without style sheet and tags."""
    text = re.sub(r"<style>.*?</style>", "", page.decode(), flags=re.DOTALL)
    return " ".join(unescape(re.sub(r"<[^>]*>", " ", text)).split())


def issued(folder: Path, form: str, record: Record) -> Path:
    source = notebook.parse(json.dumps(notebook_json(["# Demo", "1"])), "demo", Path())
    parcel = Parcel("demo", source.bare(), b"{}", {}, record.to_json().encode())
    write = plain.html_file if form == "html" else plain.pdf_file
    more = {} if form == "html" else {"date": "2026-12-01"}
    path = folder / f"C-101_A.{form}"
    path.write_bytes(seal.apply(write(None, figures={}, attachments=parcel.pack(), **more)))
    return path


def shown_results(record: Record) -> set[str]:
    """Every printed numeral of four or more significant digits that no input has."""
    texts: dict[bool, list[str]] = {True: [], False: []}
    for line in record.lines:
        shown = [line.shown] if isinstance(line.shown, str) else line.shown
        texts[line.kind in ("given", "assumption", "judgment")] += shown
    found = {is_input: set(re.findall(r"\d[\d.]*", " ".join(many))) for is_input, many in texts.items()}
    long = {numeral for numeral in found[False] if len(numeral.replace(".", "").lstrip("0")) >= 4}
    return long - found[True]


@pytest.mark.parametrize("form", ["html", "pdf"])
def test_no_printed_result_stands_in_the_export(form: str, tmp_path: Path) -> None:
    record = template()
    page, table = extract.export(issued(tmp_path, form, record), ASKED, tmp_path / "out")
    results = shown_results(record)
    assert {"264.0", "0.5350", "72.27", "6060"} <= results
    both = page.read_text(encoding="utf-8") + table.read_text(encoding="utf-8")
    both = re.sub(r"<style>.*?</style>", "", both, flags=re.DOTALL)
    assert [numeral for numeral in sorted(results) if re.search(rf"(?<![\d.]){re.escape(numeral)}(?!\d)", both)] == []


def test_every_numeral_of_the_export_is_an_inputs(tmp_path: Path) -> None:
    """Looked for the other way round: a numeral of four or more digits must come from what is handed over."""
    record = template()
    files = extract.export(issued(tmp_path, "html", record), ASKED, tmp_path / "out")
    both = " ".join(file.read_text(encoding="utf-8") for file in files)
    assert not re.search(r"download=|href=\"data:", both)  # nothing is attached that would have to be unpacked
    both = re.sub(r"<style>.*?</style>|http://www.w3.org/\S*|&#\w+;", "", both, flags=re.DOTALL)
    inputs = [line for line in record.lines if line.kind in ("given", "judgment")]
    typed = [(line.shown, line.meaning, line.source and line.source.text()) for line in inputs]
    given = json.dumps([record.calculation, typed])
    numeral = r"(?<![\w.])\d[\d.]*\d(?![\d])"
    long = {text for text in re.findall(numeral, both) if len(text.replace(".", "").strip("0")) >= 4}
    assert long and long - set(re.findall(numeral, given)) == set()


def test_what_is_handed_over() -> None:
    record = template()
    page = extract.render(extract.collect(record, ASKED))
    text = words(page)
    assert text.count(extract.HEADING) == 2  # the title of the file and the head of the sheet
    for expected in ("Harbor Street Clinic", "IBC 2021", "ASCE/SEI 7-16", "Supplements in force not stated",
                     "S-201 Framing elevations 2 2026-11-14", "80 ft", "0.68", "H-2 p. 1", "steel special moment frame",
                     "irregularity H2", "880", "X.F_x[Roof]", "base shear"):  # fmt: skip
        assert expected in text, expected
    assert b"<script" not in page and b"http" not in re.sub(rb"http-equiv|http://www.w3.org/\S*", b"", page)
    assert b"default-src 'none'" in page


def test_what_is_left_out() -> None:
    record = template()
    text = words(extract.render(extract.collect(record, ASKED)))
    left_out = [line.text for line in record.lines if line.text] + [line.detail for line in record.lines if line.detail]
    left_out += [flag.text for line in record.lines for flag in line.flags]
    left_out += [form for line in record.lines for form in line.forms.get("plain", []) if len(form) > 8]
    assert len(left_out) > 100
    assert [said for said in left_out if " ".join(said.split()) in text] == []
    others = [line.id for line in record.lines if line.kind == "computed" and line.part and line.id not in ASKED]
    assert [id_ for id_ in others if f" {id_} " in text] == []


def test_everything_a_record_can_hold_is_printed_as_text() -> None:
    record = sample.record()
    found = extract.collect(record, ["X.V", "SDC"])
    assert found.assumptions and found.levels
    page = extract.render(found)
    assert b"<script" not in page
    override = next(line.override for line in record.lines if line.override)
    assert override.reason not in words(page) and override.by not in words(page)


def test_the_csv_is_blank() -> None:
    rows = list(csv.reader(io.StringIO(extract.blank(extract.collect(template(), ASKED).asked).decode())))
    assert rows[:3] == [list(extract.COLUMNS), ["X.V", "kip", "", "", ""], ["Y.T_a", "s", "", "", ""]]
    assert [row[0] for row in rows[4:]] == [f"X.F_x[{level}]" for level in ("Roof", "6", "5", "4", "3", "2")]
    assert all(row[2:] == ["", "", ""] for row in rows[1:])


# --- the search for results


@pytest.mark.parametrize(
    "planted", ["264.0", "264.02", "264.019483563", "2.640e2", "0.5350", "6060", "6,060", "15463", "15,463.3"]
)
def test_a_planted_result_is_found_in_text(planted: str) -> None:
    record = template()
    leaks = extract.leaks(record, {"a.html": f"<html><body><p>about {planted} in all</p></body></html>".encode()})
    assert {leak.numeral for leak in leaks} == {planted.replace(",", "")}
    assert f"<p>: 'about {planted}" in leaks[0].where or "," in planted


@pytest.mark.parametrize(
    "page",
    [
        "<html><head><title>264.0 kip</title></head></html>",
        '<html><head><meta name="keywords" content="V 264.0"></head></html>',
        '<html><body><p title="V = 264.0 kip">x</p></body></html>',
        '<html><body><math alttext="264.0"></math></body></html>',
        "<html><body><!-- 264.0 --></body></html>",
        f'<html><a download="r.json" href="data:application/json;base64,{base64.b64encode(b"[264.0]").decode()}">x</a>',
        '<html><a download="r.txt" href="data:text/plain,264.0">x</a></html>',
        '<html><a href="data:text/plain;base64,264.0">x</a></html>',
    ],
)
def test_a_planted_result_is_found_in_metadata_and_attachments(page: str) -> None:
    assert {leak.line for leak in extract.leaks(template(), {"a.html": page.encode()})} >= {"X.V"}


def test_a_planted_result_is_found_in_a_file_name_and_in_a_csv() -> None:
    assert {leak.where.partition(":")[0] for leak in extract.leaks(template(), {"V 264.0.csv": b"X.V,kip,264.0"})} == {
        "the name V 264.0.csv", "V 264.0.csv",
    }  # fmt: skip


@pytest.mark.parametrize(
    "harmless", ["264", "0.68", "880", "1020", "1100.0", "2026-12-01", "264.1", "1264.0", "A264.0"]
)
def test_what_is_no_result(harmless: str) -> None:
    assert extract.leaks(template(), {"a.csv": f"x {harmless} y".encode()}) == []


def test_values_not_in_force_count_as_results() -> None:
    record = copy.deepcopy(sample.record())
    line = next(line for line in record.lines if line.override and line.computed)
    assert line.computed is not None
    line.computed = replace(line.computed, value=12.3456789)
    assert {leak.line for leak in extract.leaks(record, {"a.txt": b"12.3457"})} == {line.id}


def test_the_command_refuses_and_says_which(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    record = copy.deepcopy(template())
    record.calculation["documents"][0]["title"] = "Base shear of 264.0 kip from the old set"
    path = issued(tmp_path, "html", record)
    assert cli.main(["extract", str(path), "--ask", "X.V", "--to", str(tmp_path / "out")]) == 4
    said = capsys.readouterr().err
    assert "X.V as 264.0 in C-101_A_recalculation.html" in said and "Base shear of 264.0 kip" in said
    assert not (tmp_path / "out").exists()


# --- the command


def test_the_command_writes_both_files_once(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = issued(tmp_path, "pdf", template())
    arguments = ["extract", str(path), "--ask", "X.V, SDC", "--to", str(tmp_path / "out")]
    assert cli.main(arguments) == 0
    names = ["C-101_A_recalculation.html", "C-101_A_recalculation.csv"]
    assert capsys.readouterr().out.split() == [str(tmp_path / "out" / name) for name in names]
    table = tmp_path / "out" / names[1]
    table.write_text("filled")
    assert cli.main(arguments) == 2
    assert "may hold a checker's values" in capsys.readouterr().err
    assert table.read_text() == "filled"


def test_ids_that_cannot_be_asked_for_are_named_together() -> None:
    with pytest.raises(InputError, match="asked for") as caught:
        extract.collect(template(), ["X.VV", "h_n", "X.drift"])
    assert [(fault.symbol, fault.given) for fault in caught.value.faults] == [
        ("X.VV", "no such line"), ("h_n", "an input"), ("X.drift", "a check"),
    ]  # fmt: skip
    assert "X.V" in caught.value.faults[0].cure
    with pytest.raises(InputError, match="--ask: needed the ids"):
        extract.collect(template(), [])


def test_an_altered_file_is_refused(tmp_path: Path) -> None:
    path = issued(tmp_path, "html", template())
    path.write_bytes(path.read_bytes() + b" ")
    with pytest.raises(MismatchError, match="altered or re-saved after issue"):
        extract.export(path, ["X.V"], tmp_path)
    with pytest.raises(CommandError, match="cannot be read"):
        extract.export(tmp_path / "none.pdf", ["X.V"], tmp_path)
