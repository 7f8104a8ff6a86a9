"""The checker's numbers beside the originator's. The record is the invented one of tests/report/plain.py."""

import json
from pathlib import Path

import pytest

from calckit import cli
from calckit.core.record import Line, Record
from calckit.errors import CommandError, InputError, MismatchError
from calckit.report import notebook, reconcile, seal
from calckit.report.attachments import Parcel
from tests.conftest import notebook_json
from tests.report import plain

HEAD = "id,unit,checker_value,tolerance,reason\n"


def record() -> Record:
    found = plain.record(notebook="demo")
    found.lines += [
        Line("X.F_x", "computed", "F_x", "force", [200.0, 100.0], "kip", ["200.0", "100.0"], rows=["Roof", "2"]),
        Line("SDC", "table", "SDC", "design category", "D", "", "D"),
        Line("X.gap", "computed", "gap", "gap", 0.0, "", "0"),
    ]
    return found


def outcome(row: str) -> tuple[str, bool]:
    (found,) = reconcile.compare(record(), HEAD + row)
    return found.outcome, found.settled


@pytest.mark.parametrize(
    ("row", "expected"),
    [
        ("X.T_a,s,0.765,1,", (reconcile.WITHIN, True)),
        ("X.T_a,s,0.77,1 %,", (reconcile.NO_REASON, False)),
        ("X.T_a,s,0.77,1,C_t read from the SI column", (reconcile.REASON, True)),
        ("X.T_a,s,0.76,,", (reconcile.NO_TOLERANCE, False)),
        ("X.T_a,s,0.76,,same to four digits", (reconcile.REASON, True)),
        ("X.T_a,s,,1,", (reconcile.NO_VALUE, False)),
        ("X.T_a,s,,,no second program at hand", (reconcile.LEFT_OUT, True)),
        ("X.F_x[Roof],kip,202,1,", (reconcile.WITHIN, True)),
        ("X.F_x[2],kip,98.9,1,", (reconcile.NO_REASON, False)),
        ("X.F_x[2],kN,444.822161526,0.001,", (reconcile.WITHIN, True)),  # 1 lbf = 4.4482216152605 N, NIST SP 811
        ("SDC,,D,,", (reconcile.WITHIN, True)),
        ("SDC,,E,,", (reconcile.NO_REASON, False)),
        ("X.gap,,0,0,", (reconcile.WITHIN, True)),
        ("X.gap,,0.1,50,", (reconcile.NO_REASON, False)),
    ],
)
def test_outcomes(row: str, expected: tuple[str, bool]) -> None:
    assert outcome(row) == expected


def test_difference_is_checker_less_originator() -> None:
    rows = reconcile.compare(record(), HEAD + "X.T_a,s,0.798,1,x\nX.F_x[Roof],lb,198000,5,")
    assert [row.difference for row in rows] == [pytest.approx(5.0), pytest.approx(-1.0)]
    assert rows[1].checker == pytest.approx(198.0)


def test_a_table_saved_by_a_spreadsheet_is_read() -> None:
    (row,) = reconcile.compare(record(), "reason;tolerance;checker_value;unit;id\r\n;2;0.76;s;X.T_a\r\n;;;;\r\n")
    assert row.outcome == reconcile.WITHIN


def test_every_bad_row_is_named() -> None:
    text = HEAD + "X.T_a,ft,0.7,1,\nX.F_x[Roof],kip,about 5,-1,\nX.F_y,kip,1,1,\nh_n,ft,62,1,\nX.T_a,s,1,1,\n"
    with pytest.raises(InputError, match="checker's values") as caught:
        reconcile.compare(record(), text)
    assert [fault.symbol for fault in caught.value.faults] == [
        "row 2, X.T_a, unit", "row 3, X.F_x[Roof], tolerance", "row 3, X.F_x[Roof], checker_value", "row 4", "row 5",
        "row 6",
    ]  # fmt: skip
    assert "X.F_x[2]" in caught.value.faults[3].cure


@pytest.mark.parametrize(("text", "said"), [("", "first row"), ("id,unit\n", "tolerance, reason"), (HEAD, "rows")])
def test_a_table_without_its_columns_or_rows(text: str, said: str) -> None:
    with pytest.raises(InputError, match=said):
        reconcile.compare(record(), text)


def issued(folder: Path) -> Path:
    source = notebook.parse(json.dumps(notebook_json(["# Demo", "1"])), "demo", Path())
    parcel = Parcel("demo", source.bare(), b"{}", {}, record().to_json().encode())
    path = folder / "C-101_A.html"
    path.write_bytes(seal.apply(plain.html_file(None, figures={}, attachments=parcel.pack())))
    return path


def test_the_command(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path, filled = issued(tmp_path), tmp_path / "filled.csv"
    filled.write_text(HEAD + "X.T_a,s,0.765,1,\nSDC,,C,,read another table\n", encoding="utf-8-sig")
    assert cli.main(["reconcile", str(path), str(filled)]) == 0
    assert capsys.readouterr().out == (
        "id     originator  checker  difference  tolerance  outcome\n"
        "X.T_a  0.76 s      0.765 s  +0.66 %     1 %        within tolerance\n"
        "SDC    D           C                               differs, reason given: read another table\n"
        "\n2 values: 1 within tolerance, 1 with a reason, 0 not settled\n"
    )
    filled.write_text(HEAD + "X.T_a,s,0.9,1,\n")
    assert cli.main(["reconcile", str(path), str(filled)]) == 4
    assert "0 within tolerance, 0 with a reason, 1 not settled" in capsys.readouterr().out
    filled.write_text("id\n")
    assert cli.main(["reconcile", str(path), str(filled)]) == 2
    assert "filled.csv beside C-101, revision A, for check, 2026-12-01" in capsys.readouterr().err


def test_files_that_cannot_be_read(tmp_path: Path) -> None:
    path, filled = issued(tmp_path), tmp_path / "filled.csv"
    with pytest.raises(CommandError, match=r"filled.csv cannot be read: No such file"):
        reconcile.reconcile(path, filled)
    filled.write_bytes(b"\xff\xfe")
    with pytest.raises(CommandError, match="is not UTF-8 text"):
        reconcile.reconcile(path, filled)
    path.write_bytes(path.read_bytes() + b" ")
    with pytest.raises(MismatchError, match="altered or re-saved"):
        reconcile.reconcile(path, filled)
