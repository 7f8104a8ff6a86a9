"""The table of levels: every way to type it, and the lines it becomes."""

from __future__ import annotations

import json
from collections.abc import Sequence
from pathlib import Path

import pytest

from calckit import Calc
from calckit.core.assemble import assemble
from calckit.errors import UnknownNameError
from tests.printed_audit import audit


@pytest.fixture
def calc() -> Calc:
    """A calculation with a document and two parts."""
    made = Calc(project="Levels")
    made.document("S-1", title="Elevations and weights")
    made.part("X", "East-west")
    made.part("Y", "North-south")
    return made


def column(calc: Calc, name: str) -> tuple[Sequence[str], object, object]:
    """Rows, values and printed entries of a list line."""
    line = calc[name].line
    return line.rows, line.value, line.shown


FALLING = "level, h_x [ft], w_x [kip]\nRoof, 40.5, 880\n3, 28, 1020.5\n2, 15, 1100"
RISING = "level, h_x [ft], w_x [kip]\n2, 15, 1100\n3, 28, 1020.5\nRoof, 40.5, 880"


@pytest.mark.parametrize(
    "text",
    [FALLING, RISING, FALLING.replace(",", ";"), FALLING.replace(", ", "\t"), FALLING.replace(", ", ","),
     "\n\n" + FALLING.replace("\n", "\n\n") + "\n"],
    ids=["falling", "rising", "semicolons", "tabs", "no blanks", "blank rows"],
)  # fmt: skip
def test_order_and_separator_do_not_matter(calc: Calc, text: str) -> None:
    calc.levels(text, source="S-1 sheet 2")
    assert column(calc, "h_x") == (["Roof", "3", "2"], [40.5, 28.0, 15.0], ["40.5", "28.0", "15.0"])
    assert column(calc, "w_x") == (["Roof", "3", "2"], [880.0, 1020.5, 1100.0], ["880.0", "1020.5", "1100.0"])
    assert column(calc, "h_sx")[1] == [12.5, 13.0, 15.0]
    assert calc["h_x"].line.source and calc["h_x"].line.source.where == "sheet 2"


def test_story_heights_give_heights(calc: Calc) -> None:
    calc.levels("level, h_sx [m], w_x [kN]\nRoof, 3.81, 10\n3, 3.96, 20\n2, 4.57, 30", source="S-1")
    assert calc["h_x"].value == [12.34, 8.53, 4.57]
    line = calc["h_x"].line
    assert (line.formula, line.row) == ("total(h_sx) - above(h_sx) + h_sx", "3")
    assert line.forms["plain"][1] == "3.81 m + 3.96 m + 4.57 m - (3.81 m + 3.96 m) + 3.96 m"
    assert line.shown[1].startswith("8.53")
    assert audit(json.loads(assemble(calc).to_json())).faults == []


def test_elevations_give_heights_above_the_base(calc: Calc) -> None:
    text = "level, elevation [ft], w_x [kip]\nRoof, 136.25, 10\n3, 124, 20\n2, 112, 30\nbase, 100,"
    calc.levels(text, source="S-1")
    assert calc["h_x"].value == [36.25, 24.0, 12.0] and calc["h_sx"].value == [12.25, 12.0, 12.0]
    assert (calc["z_b"].value, calc["z_x"].value) == (100.0, [136.25, 124.0, 112.0])
    assert calc["h_x"].line.forms["plain"] == ["z_x - z_b", "136.25 ft - 100 ft"]
    assert audit(json.loads(assemble(calc).to_json())).faults == []


def test_loads_of_levels_add_up_from_the_roof(calc: Calc) -> None:
    calc.levels("level, h_x [ft], P_level [kip]\n3, 36, 100\n2, 24, 200\n1, 12, 250", source="S-1")
    assert calc["P_x"].value == [100, 300, 550]
    assert calc["P_x"].line.forms["plain"] == ["Σ(i ≥ x) P_level", "100 kip + 200 kip"]


def test_displacements_belong_to_their_part(calc: Calc) -> None:
    text = "level, h_x [ft], w_x [kip], X.delta_xe [in], Y.delta_xe [mm]\n2, 24, 10, 0.50, 6.0\n1, 12, 20, 0.25, 2.5"
    calc.levels(text, source="S-1")
    assert calc["X.delta_xe"].value == [0.5, 0.25] and calc["X.delta_xe"].unit == "in"
    assert calc["Y.delta_xe"].value == [6.0, 2.5] and calc["Y.delta_xe"].unit == "mm"
    assert [column.line for column in calc.lines.tables["levels"].columns][-2:] == ["X.delta_xe", "Y.delta_xe"]


def test_a_column_may_have_a_source_of_its_own(calc: Calc) -> None:
    text = "level, h_x [ft], w_x [kip], X.delta_xe [in]\n2, 24, 10, 0.50\n1, 12, 20, 0.25"
    calc.document("M-1", title="Analysis model")
    calc.levels(text, source="S-1", sources={"delta_xe": "M-1 p. 12"})
    assert calc["X.delta_xe"].line.source.text() == "M-1 p. 12" and calc["w_x"].line.source.text() == "S-1"
    with pytest.raises(UnknownNameError, match="source of column 'P_x' is not known; known: h_x, w_x, delta_xe"):
        calc.levels(text, source="S-1", sources={"P_x": "M-1 p. 15"})
    assert "P_x" not in calc.lines.entries, "never guessed from the weights"


def test_table_prints_the_columns_in_order(calc: Calc) -> None:
    calc.levels("level, w_x [kip], P_x [kip], h_x [ft]\n2, 10, 11, 24\n1, 20, 31, 12", source="S-1")
    table = calc.lines.tables["levels"]
    assert [item.symbol for item in table.columns] == ["h_x", "h_sx", "w_x", "P_x"]
    assert table.rows == ["2", "1"] and table.shown == [["24", "12.00", "10", "11"], ["12", "12.00", "20", "31"]]


def test_levels_read_from_a_file_travel_with_the_report(
    calc: Calc, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    (tmp_path / "levels.csv").write_bytes(b"\xef\xbb\xbf" + FALLING.encode())
    calc.levels("@levels.csv", source="S-1")
    assert calc["h_x"].value == [40.5, 28.0, 15.0]
    assert list(calc.files) == ["levels.csv"] and calc.files["levels.csv"].endswith(b"1100")


def test_one_story(calc: Calc) -> None:
    calc.levels("level, h_x [ft], w_x [kip]\nRoof, 14, 300", source="S-1")
    calc.line("F_s", "above(w_x)*h_x", unit="kip*ft", meaning="first moment")
    assert calc["F_s"].value == [4200.0] and calc["h_sx"].value == [14.0]
    assert audit(json.loads(assemble(calc).to_json())).faults == []
