"""Pasted tables of rows: columns become list lines, and every bad cell is named."""

from __future__ import annotations

import pytest

from calckit import Calc
from calckit.errors import InputError

WALLS = "wall, L_w [ft], t_w [in]\nA, 20, 10\nB, 12.5, 8"
MEANINGS = {"L_w": "length of the wall", "t_w": "thickness of the wall"}


@pytest.fixture
def calc() -> Calc:
    calc = Calc(project="Demo", number="D-1")
    calc.document("S-1", title="Framing plan")
    return calc


def test_columns_become_list_lines_and_one_table(calc: Calc) -> None:
    lengths, thicknesses = calc.rows("walls", WALLS, source="S-1 grid A", meanings=MEANINGS)
    assert (lengths.rows, lengths.value, lengths.unit) == (["A", "B"], [20, 12.5], "ft")
    assert lengths.shown == ["20.0", "12.5"]
    assert thicknesses.unit == "in" and thicknesses.line.source.text() == "S-1 grid A"
    table = calc.lines.tables["walls"]
    assert (table.head, table.rows, table.shown) == ("wall", ["A", "B"], [["20.0", "10"], ["12.5", "8"]])


def test_formulas_run_over_the_rows(calc: Calc) -> None:
    calc.rows("walls", WALLS, source="S-1", meanings=MEANINGS)
    areas = calc.line("A_w", "L_w*t_w", unit="ft**2", meaning="area of the wall")
    assert [round(area, 6) for area in areas.value] == [round(20 * 10 / 12, 6), round(12.5 * 8 / 12, 6)]
    assert calc.line("A_sum", "total(A_w)", unit="ft**2", meaning="area of all walls").value == pytest.approx(25)


def test_every_bad_cell_is_named_at_once(calc: Calc) -> None:
    text = "wall; L_w [ft]; t_w [kips]; n\nA; 20; 10; 1\nA; ; 8; 2\nB; 3"
    with pytest.raises(InputError) as caught:
        calc.rows("walls", text, source="S-1", meanings=MEANINGS)
    said = str(caught.value)
    for part in ("column 3: needed a unit the kit knows", "column 4: needed a meaning", "'A' twice",
                 "row 2 (A), column L_w", "row 3 (B): needed 4 entries"):  # fmt: skip
        assert part in said
    assert calc.lines.tables == {} and "L_w" not in calc.lines.entries
