"""Cells that run again: who owns a line, what replaces what, what is stale."""

from __future__ import annotations

from pathlib import Path

import pytest

from calckit import Calc
from calckit.core import settings
from calckit.core.assemble import assemble
from calckit.errors import DuplicateError, StaleObjectError
from tests.core.session import Session


@pytest.fixture
def live(monkeypatch: pytest.MonkeyPatch) -> Session:
    """A live session."""
    return Session(monkeypatch)


def start(live: Session) -> Calc:
    """The first cell: a calculation and its document."""
    with live.cell("start"):
        calc = Calc(project="Live")
        calc.document("S-201", title="Framing elevations")
    return calc


def ids(calc: Calc) -> list[str]:
    """The ids of the lines in document order."""
    return [id_ for _, kind, id_ in calc.lines.blocks if kind == "line"]


# (a) a cell owns the lines it wrote


def test_run_again_removes_what_is_no_longer_written(live: Session) -> None:
    calc = start(live)
    with live.cell("one"):
        calc.given("h_n", "62 ft", source="S-201")
        calc.given("T_L", "8 s", source="S-201")
    with live.cell("two"):
        calc.given("S_S", "0.6", source="S-201")
    with live.cell("one"):
        calc.given("h_n", "64 ft", source="S-201")
    assert ids(calc) == ["h_n", "S_S"], "the line keeps its place"
    assert set(calc.lines.entries) == {"h_n", "S_S"}
    assert calc["h_n"].value == 64
    assert [line.n for line in assemble(calc).lines] == [1, 2]


def test_run_again_removes_tables_and_figures_too(live: Session) -> None:
    from matplotlib.figure import Figure

    calc = start(live)
    text = "level, h_x [ft], w_x [kip]\n2, 24, 10\n1, 12, 20"
    with live.cell("one"):
        calc.levels(text, source="S-201")
        calc.figure(Figure(), caption="A figure", alt="nothing", id="own")
    assert (list(calc.lines.tables), list(calc.lines.figures)) == (["levels"], ["own"])
    with live.cell("one"):
        calc.note("N-1", "nothing else")
    assert (ids(calc), calc.lines.tables, calc.lines.figures) == (["N-1"], {}, {})


def test_cell_that_raises_keeps_nothing_of_its_earlier_run_that_it_did_not_write(live: Session) -> None:
    calc = start(live)
    with live.cell("one"):
        calc.note("N-1", "first")
        calc.note("N-2", "second")
    with pytest.raises(ZeroDivisionError, match="division"), live.cell("one"):
        calc.note("N-1", "first, again")
        _ = 1 / 0
    assert ids(calc) == ["N-1"]


# (b) one id, one line


def test_id_twice_in_one_run(live: Session) -> None:
    calc = start(live)
    with pytest.raises(DuplicateError, match="line 'h_n' is written twice in one run of a cell"), live.cell("one"):
        calc.given("h_n", "62 ft", source="S-201")
        calc.given("h_n", "64 ft", source="S-201")


def test_other_cell_replaces_with_a_notice(live: Session) -> None:
    calc = start(live)
    with live.cell("one"):
        calc.given("h_n", "62 ft", source="S-201")
    with live.cell("two"):
        calc.given("h_n", "64 ft", source="S-201")
        assert calc.lines.notices == ["line h_n replaces the one that another cell wrote"]
    assert calc["h_n"].value == 64
    with live.cell("one"):
        pass
    assert ids(calc) == ["h_n"], "the line belongs to the cell that wrote it last"
    with live.cell("two"):
        pass
    assert ids(calc) == []


def test_same_cell_replaces_without_a_notice(live: Session) -> None:
    calc = start(live)
    for value in ("62 ft", "64 ft"):
        with live.cell("one"):
            calc.given("h_n", value, source="S-201")
            assert calc.lines.notices == []


def test_two_cells_in_a_clean_run(live: Session, monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.setattr(settings, "current", lambda: settings.Settings(folder=tmp_path))
    calc = start(live)
    assert calc.lines.settings.clean
    with live.cell("one"):
        calc.given("h_n", "62 ft", source="S-201")
    message = "line 'h_n' is written by two cells; give one of them another id"
    with pytest.raises(DuplicateError, match=message), live.cell("two"):
        calc.given("h_n", "64 ft", source="S-201")


def test_session_that_sends_no_cell_ids(monkeypatch: pytest.MonkeyPatch) -> None:
    live = Session(monkeypatch, ids=False)
    calc = start(live)
    for value in ("62 ft", "64 ft"):
        with live.cell("one"):
            calc.given("h_n", value, source="S-201")
    assert (ids(calc), calc["h_n"].value) == (["h_n"], 64)
    with pytest.raises(DuplicateError, match="twice in one run"), live.cell("one"):
        calc.note("N-1", "once")
        calc.note("N-1", "twice")


# (c) a calculation that is started afresh


def test_started_afresh_old_objects_refuse(live: Session) -> None:
    old = start(live)
    with live.cell("parts"):
        part = old.part("X", "East-west")
        handle = old.given("h_n", "62 ft", source="S-201")
        steps = part.asce7
    new = start(live)
    afresh = "this object belongs to a calculation that was started afresh; run again the cell that makes "
    with live.cell("after"):
        for work in (lambda: old.given("h_n", "62 ft", source="S-201"), lambda: old["h_n"], lambda: handle.value,
                     lambda: old.part("Y")):  # fmt: skip
            with pytest.raises(StaleObjectError, match=afresh + r"Calc\(...\)"):
                work()
        for work in (lambda: part.given("h_n", "62 ft", source="S-201"), steps.system):
            with pytest.raises(StaleObjectError, match=afresh + r"part\('X'\)"):
                work()
        assert new.given("h_n", "70 ft", source="S-201").value == 70
    assert ids(new) == ["h_n"]


def test_script_may_hold_several_calculations() -> None:
    first, second = Calc(project="First"), Calc(project="Second")
    first.note("N-1", "still open")
    second.note("N-1", "open too")
    assert (ids(first), ids(second)) == (["N-1"], ["N-1"])


def test_part_twice_is_the_same(live: Session) -> None:
    calc = start(live)
    with live.cell("one"):
        x = calc.part("X", "East-west")
    with live.cell("two"):
        assert calc.part("X") is x and calc.part("X", "East-west direction") is x


# (d) stale lines, from what the lines themselves remember


def test_line_is_stale_when_an_operand_has_changed(live: Session) -> None:
    calc = start(live)
    with live.cell("in"):
        calc.given("V", "100 kip", source="S-201")
        calc.given("h_n", "60 ft", source="S-201")
    with live.cell("out"):
        calc.line("M_r", "V*h_n", unit="kip*ft", meaning="rough moment")
    with live.cell("further"):
        calc.line("M_h", "M_r/2", unit="kip*ft", meaning="half of it")
        calc.line("V_h", "V/2", unit="kip", meaning="half the shear")
    assert calc.lines.stale() == {}
    with live.cell("in"):
        calc.given("V", "100 kip", source="S-201")
        calc.given("h_n", "62 ft", source="S-201")
    assert calc.lines.stale() == {"M_r": ["h_n"], "M_h": ["M_r"]}
    with live.cell("out"):
        calc.line("M_r", "V*h_n", unit="kip*ft", meaning="rough moment")
    assert calc.lines.stale() == {"M_h": ["M_r"]}
    with live.cell("further"):
        calc.line("M_h", "M_r/2", unit="kip*ft", meaning="half of it")
        calc.line("V_h", "V/2", unit="kip", meaning="half the shear")
    assert calc.lines.stale() == {}


def test_line_is_stale_when_its_name_means_another_line(live: Session) -> None:
    calc = start(live)
    with live.cell("parts"):
        x = calc.part("X", "East-west")
    with live.cell("in"):
        calc.given("V", "100 kip", source="S-201")
    with live.cell("out"):
        x.line("V_h", "V/2", unit="kip", meaning="half the shear")
    assert calc.lines.stale() == {}
    with live.cell("own"):
        x.given("V", "120 kip", source="S-201")
    assert calc.lines.stale() == {"X.V_h": ["V"]}, "X.V stands in front of V now"


def test_what_rests_on_a_stale_line_is_found_in_any_order(live: Session) -> None:
    calc = start(live)
    with live.cell("in"):
        calc.given("V", "100 kip", source="S-201")

    def out(write: bool) -> None:
        with live.cell("out"):
            if write:
                calc.line("V_h", "V/2", unit="kip", meaning="half the shear")

    out(True)
    with live.cell("further"):
        calc.line("V_q", "V_h/2", unit="kip", meaning="a quarter")
    out(False)
    out(True)
    assert calc.lines.stale() == {}
    with live.cell("in"):
        calc.given("V", "120 kip", source="S-201")
    assert calc.lines.stale() == {"V_h": ["V"], "V_q": ["V_h"]}


def test_line_is_stale_when_an_operand_is_gone(live: Session) -> None:
    calc = start(live)
    with live.cell("in"):
        calc.given("V", "100 kip", source="S-201")
    with live.cell("out"):
        calc.line("V_h", "V/2", unit="kip", meaning="half the shear")
    with live.cell("in"):
        pass
    assert calc.lines.stale() == {"V_h": ["V"]}


def test_same_values_again_leave_nothing_stale(live: Session) -> None:
    calc = start(live)
    for _ in range(2):
        with live.cell("in"):
            calc.given("V", "100 kip", source="S-201")
        if "V_h" not in calc.lines.entries:
            with live.cell("out"):
                calc.line("V_h", "V/2", unit="kip", meaning="half the shear")
    assert calc.lines.stale() == {}


def test_operand_typed_in_place_is_never_stale(live: Session) -> None:
    calc = start(live)
    with live.cell("in"):
        calc.givens("S_S, 0.6, S-201\nS_1, 0.22, S-201\nT_L, 8 s, S-201\nsite_class, C, S-201\nh_n, 62 ft, S-201")
        calc.given("system", "moment frame: steel special moment frame", source="S-201")
    with live.cell("period"):
        T_a = calc.asce7.approximate_period(h_n="70 ft")
    assert [flag.text for flag in T_a.line.flags] == ["h_n typed in place: 70 ft"]
    assert calc.lines.stale() == {}


# (e) numbers, order, sections


def test_numbers_follow_the_document(live: Session) -> None:
    calc = start(live)
    with live.cell("one"):
        calc.note("N-1", "first")
    with live.cell("two"):
        calc.note("N-2", "second")
    assert [line.n for line in calc.lines.snapshot()] == [1, 2]
    assert [entry.line.n for entry in calc.lines.entries.values()] == [0, 0], "provisional until issue"


def test_snapshot_is_a_copy(live: Session) -> None:
    calc = start(live)
    with live.cell("one"):
        calc.note("N-1", "first")
    calc.lines.snapshot()[0].text = "changed"
    assert calc.lines.entries["N-1"].line.text == "first"


def test_record_lists_what_each_cell_wrote(live: Session) -> None:
    calc = start(live)
    with live.cell("one"):
        calc.levels("level, h_x [ft], w_x [kip]\n2, 24, 10\n1, 12, 20", source="S-201")
    with live.cell("two"):
        calc.note("N-1", "a note")
    assert assemble(calc).cells == [
        [["line", "h_x"], ["line", "w_x"], ["line", "h_sx"], ["table", "levels"]], [["line", "N-1"]],
    ]  # fmt: skip
