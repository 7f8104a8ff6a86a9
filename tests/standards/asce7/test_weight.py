"""The effective seismic weight built up from areas and loads, 12.7.2 of ASCE/SEI 7-16 and 7-22.

Rules of 7-16 are from memory, high; the share of snow of 7-22 from memory, medium.
"""

from __future__ import annotations

from dataclasses import asdict

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calckit import units
from calckit.core.assemble import assemble
from calckit.core.calc import Calc
from calckit.errors import InputError
from tests.printed_audit import audit

HEAD = "level, area, A_u [ft**2], q_D [psf], q_P [psf], q_L [psf], p_f [psf], W_e [kip], W_d [kip]"
ROWS = """Roof, deck, 10000, 28, 0, 0, 35, 22, 0
3, slab, 10000, 70, 15, 0, 0, 0, 12
2, slab, 10000, 70, 8, 0, 0, 0, 12
3, archive, 800, 70, 0, 125, 0, 0, 0
2, archive, 3000, 70, 0, 125, 0, 0, 0
Roof, cladding, 2500, 15, 0, 0, 0, 0, 0
3, cladding, 5000, 15, 0, 0, 0, 0, 0
2, cladding, 5500, 15, 0, 0, 0, 0, 0"""


def begin(edition: str = "ASCE 7-16", system: str = "US", **answers: str) -> Calc:
    """Three levels without weights."""
    calc = Calc(project="Demo", number="D-1", standard=edition, units=system)
    calc.document("P", title="Demo data")
    calc.levels("level, h_x [ft]\nRoof, 42\n3, 28\n2, 14", source="P")
    for name, word in answers.items():
        calc.answer(name, word, basis="demo")
    return calc


def taken_off(
    edition: str = "ASCE 7-16", system: str = "US", rows: str = ROWS, head: str = HEAD, **answers: str
) -> Calc:
    """The weights from a take-off."""
    calc = begin(edition, system, **answers)
    calc.asce7.weight_take_off(f"{head}\n{rows}", source="P")
    return calc


def weights(calc: Calc) -> list[float]:
    """w_x in kip, roof first."""
    w_x = calc["w_x"]
    assert isinstance(w_x.value, list)
    return [units.convert(value, w_x.unit, "kip") for value in w_x.value]


ROOF = 10000 * 28 / 1000 + 22 + 2500 * 15 / 1000
THIRD = 10000 * (70 + 15) / 1000 + 12 + 800 * 70 / 1000 + 5000 * 15 / 1000
SECOND = 10000 * (70 + 10) / 1000 + 12 + 3000 * 70 / 1000 + 5500 * 15 / 1000


def test_weight_of_each_level() -> None:
    """Snow 35 psf above 30: 20 %; partitions 8 psf typed: 10; 25 % of the storage load."""
    calc = taken_off()
    assert weights(calc) == pytest.approx([ROOF + 70, THIRD + 25, SECOND + 93.75])
    assert float(calc.asce7.seismic_weight()) == pytest.approx(ROOF + THIRD + SECOND + 70 + 25 + 93.75)


def test_storage_that_adds_little_may_be_left_out() -> None:
    """Level 3: 25 of 993 kip is 2.5 %; level 2: 93.75 of 1104.5 kip is 8.5 %."""
    assert weights(taken_off(storage_share="left out up to 5 %")) == pytest.approx([ROOF + 70, THIRD, SECOND + 93.75])


def test_storage_is_counted_unless_the_engineer_leaves_it_out() -> None:
    assert taken_off()["w_x"].value == taken_off(storage_share="counted")["w_x"].value


@pytest.mark.parametrize(
    ("edition", "p_f", "share"),
    [("ASCE 7-16", 30, 0), ("ASCE 7-16", 30.1, 0.20), ("ASCE 7-22", 45, 0), ("ASCE 7-22", 45.1, 0.15)],
)
def test_share_of_snow_by_edition(edition: str, p_f: float, share: float) -> None:
    rows = f"Roof, deck, 1000, 20, {p_f}\n3, slab, 1000, 80, 0\n2, slab, 1000, 80, 0"
    calc = taken_off(edition, rows=rows, head="level, area, A_u [ft**2], q_D [psf], p_f [psf]")
    assert weights(calc) == pytest.approx([20 + share * p_f, 80, 80])
    obtained = {"ASCE 7-16": "memory, high", "ASCE 7-22": "memory, medium"}[edition]
    assert calc["r_S"].line.source.obtained == obtained  # type: ignore[union-attr]


@pytest.mark.parametrize(("typed", "counted"), [(0, 0), (4, 10), (10, 10), (20, 20)])
def test_partitions_are_at_least_ten_where_there_are_any(typed: float, counted: float) -> None:
    rows = f"Roof, deck, 1000, 20, 0\n3, slab, 1000, 80, {typed}\n2, slab, 1000, 80, 12"
    calc = taken_off(rows=rows, head="level, area, A_u [ft**2], q_D [psf], q_P [psf]")
    assert weights(calc) == pytest.approx([20, 80 + counted, 92])


def test_metric_limits() -> None:
    head = "level, area, A_u [m**2], q_D [kPa], q_P [kPa], p_f [kPa]"
    rows = "Roof, deck, 1000, 1.0, 0, 1.5\n3, slab, 1000, 4, 0.3, 0\n2, slab, 1000, 4, 0.3, 0"
    calc = taken_off(system="SI", rows=rows, head=head)
    assert calc["w_x"].value == pytest.approx([1300, 4480, 4480]) and calc["w_x"].unit == "kN"
    assert (calc["q_Pmin"].shown, calc["p_flim"].shown) == ("0.48 kPa", "1.44 kPa")


def test_either_order_and_one_table_for_each_kind_of_area() -> None:
    backwards = "\n".join(reversed(ROWS.split("\n")))
    assert taken_off()["w_x"].value == taken_off(rows=backwards)["w_x"].value
    tables = taken_off().lines.tables
    assert [table.title for name, table in tables.items() if name.startswith("take_off")] == [
        "Weight take-off: deck", "Weight take-off: slab", "Weight take-off: archive", "Weight take-off: cladding",
    ]  # fmt: skip
    assert tables["take_off_1"].shown[1][:2] == ["0", "0"]


def test_one_level_is_worked_in_full() -> None:
    calc = taken_off()
    assert {calc[name].line.row for name in ("w_u2", "w_u3", "w_u4", "w_0", "w_s", "w_x")} == {"3"}


def test_weights_from_two_origins_are_refused() -> None:
    calc = Calc(project="Demo", number="D-1")
    calc.document("P", title="Demo data")
    with pytest.raises(InputError, match=r"h_x .*: needed .*; cure: supply it with levels"):
        calc.asce7.weight_take_off(f"{HEAD}\n{ROWS}", source="P")
    calc.levels("level, h_x [ft], w_x [kip]\nRoof, 42, 1\n3, 28, 1\n2, 14, 1", source="P")
    with pytest.raises(InputError, match="needed one origin of the level weights"):
        calc.asce7.weight_take_off(f"{HEAD}\n{ROWS}", source="P")


def test_every_bad_row_is_named_at_once() -> None:
    head = "level, area, A_u [ft**2], q_D [psf], q_X [psf]"
    with pytest.raises(InputError) as caught:
        taken_off(rows="Roof, deck, 100, x, 1\nRoof, deck, -1, 20, 1\n2, slab, 10", head=head)
    said = str(caught.value)
    for part in ("column 4: needed one of A_u, q_D", "Roof: deck' twice", "row 1 (Roof: deck), column q_D",
                 "row 2 (Roof: deck), column A_u", "row 3 (2: slab): needed"):  # fmt: skip
        assert part in said
    with pytest.raises(InputError) as caught:
        head = "level, area, A_u [ft**2], q_D [psf]"
        taken_off(rows="Roof, deck, 100, 20\n4, slab, 100, 20\n2, , 100, 20", head=head)
    said = str(caught.value)
    for part in ("row 2 (4): needed a level: Roof, 3, 2", "row 3 (2): needed what kind of area",
                 "level 3: needed a row at least"):  # fmt: skip
        assert part in said
    with pytest.raises(InputError, match=r"q_D .*: needed a column; given none; cure: add q_D"):
        taken_off(rows="Roof, deck, 100", head="level, area, A_u [ft**2]")
    with pytest.raises(InputError, match="needed level, kind of area, then columns"):
        taken_off(rows="Roof, 1", head="level, area")


@given(
    areas=st.lists(st.integers(0, 20000), min_size=3, max_size=3), dead=st.integers(10, 150), live=st.integers(1, 250)
)
@settings(deadline=None, max_examples=20)
def test_leaving_out_never_adds_weight_and_never_more_than_five_percent(
    areas: list[int], dead: int, live: int
) -> None:
    rows = "\n".join(
        f"{level}, slab, 10000, {dead}, 0\n{level}, store, {area}, {dead}, {live}"
        for level, area in zip(("Roof", "3", "2"), areas, strict=True)
    )
    head = "level, area, A_u [ft**2], q_D [psf], q_L [psf]"
    full = taken_off(rows=rows, head=head)["w_x"].value
    less = taken_off(rows=rows, head=head, storage_share="left out up to 5 %")["w_x"].value
    assert isinstance(full, list) and isinstance(less, list)
    for a, b in zip(full, less, strict=True):
        assert b <= a <= 1.05 * b * (1 + 1e-11)


@pytest.mark.parametrize("edition", ["ASCE 7-16", "ASCE 7-22"])
@pytest.mark.parametrize("system", ["US", "SI"])
def test_lines_follow_from_what_is_printed(edition: str, system: str) -> None:
    calc = taken_off(edition, system, storage_share="left out up to 5 %")
    calc.asce7.seismic_weight()
    found = audit(asdict(assemble(calc)))
    assert found.faults == [] and found.counts


def test_the_weights_carry_the_calculation() -> None:
    calc = taken_off()
    for name, word in {"V": "200 kip", "T": "0.5 s"}.items():
        calc.given(name, word, source="P")
    calc.asce7.seismic_weight()
    calc.asce7.vertical_distribution()
    assert sum(calc["F_x"].value) == pytest.approx(200)  # type: ignore[arg-type]


def test_weights_of_the_diaphragms_leave_out_walls_parallel_to_the_force() -> None:
    calc = taken_off()
    x = calc.part("X", "East-west")
    made = x.asce7.diaphragm_weights(without=["cladding"])
    assert made.id == "X.w_px" and made.line.formula == "w_x - w_u4"
    assert made.value == pytest.approx([ROOF + 70 - 37.5, THIRD + 25 - 75, SECOND + 93.75 - 82.5])
    y = calc.part("Y", "North-south")
    assert y.asce7.diaphragm_weights().value == calc["w_x"].value
    found = audit(asdict(assemble(calc)))
    assert found.faults == [] and found.counts


def test_walls_that_are_not_in_the_take_off_are_refused() -> None:
    with pytest.raises(InputError, match="given parapet; cure: name kinds of area of the take-off: deck; slab"):
        taken_off().asce7.diaphragm_weights(without=["parapet"])
    with pytest.raises(InputError, match=r"w_x .*: needed .*; cure: supply it with levels\(\.\.\.\), or asce7"):
        begin().asce7.diaphragm_weights()
