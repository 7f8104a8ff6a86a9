"""Marks put into outputs that stand in the notebook when their lines no longer hold."""

from __future__ import annotations

import copy
import json
from collections.abc import Iterator, Mapping
from typing import Any

import nbformat
import pytest
from jupyter_client.manager import start_new_kernel
from nbclient import NotebookClient

from calckit import Calc
from calckit.core import display
from calckit.core.record import MIME
from calckit.core.summary import notices
from tests.core.session import Session
from tests.house.source import ROOT

MOMENT = 'calc.line("M_r", "V*h_n", unit="kip*ft", meaning="rough moment")'
HALVES = 'calc.line("M_h", "M_r/2", unit="kip*ft", meaning="half of it")'


class Sheet:
    """A live session and what stands below its cells: text by display id."""

    def __init__(self, monkeypatch: pytest.MonkeyPatch) -> None:
        self.live = Session(monkeypatch)
        self.below: dict[str, str] = {}
        self.updates = 0

        def show(lines: Any, tables: Any, notices: Any, display_id: str) -> Mapping[str, Any]:
            data = display.bundle(lines, tables, notices)
            self.below[display_id] = data["text/plain"]
            return data

        def show_again(data: Mapping[str, Any], mark: str, display_id: str) -> None:
            self.updates += 1
            self.below[display_id] = (display.marked(data, mark) if mark else data)["text/plain"]

        monkeypatch.setattr("calckit.core.outputs.display.show", show)
        monkeypatch.setattr("calckit.core.outputs.display.show_again", show_again)
        with self.live.cell("start"):
            self.calc = Calc(project="Live")
            self.calc.document("S-201", title="Framing elevations")

    def run(self, key: str, *texts: str) -> None:
        """Run a cell of these lines of code."""
        with self.live.cell(key, "\n".join(("", *texts))):
            for text in texts:
                exec(text, {"calc": self.calc})

    def marks(self) -> dict[str, str]:
        """The first rows of what is marked, by cell and place."""
        heads = {id_.removeprefix("calckit "): text.split("\n")[0] for id_, text in self.below.items()}
        return {id_: head for id_, head in heads.items() if head.startswith(("stale", "no longer"))}


@pytest.fixture
def sheet(monkeypatch: pytest.MonkeyPatch) -> Sheet:
    """A session in which one line rests on two inputs and another on that line."""
    sheet = Sheet(monkeypatch)
    given(sheet, "100 kip", "60 ft")
    sheet.run("out", MOMENT)
    sheet.run("further", HALVES)
    return sheet


def given(sheet: Sheet, V: str, h_n: str) -> None:
    """Run the cell of the inputs."""
    sheet.run("in", f'calc.given("V", "{V}", source="S-201")', f'calc.given("h_n", "{h_n}", source="S-201")')


def test_nothing_is_marked_while_everything_holds(sheet: Sheet) -> None:
    assert list(sheet.below) == ["calckit in 1", "calckit in 2", "calckit out 1", "calckit further 1"]
    assert (sheet.marks(), sheet.updates) == ({}, 0)


def test_mark_says_what_changed_and_which_cells_to_run_in_order(sheet: Sheet) -> None:
    shown = sheet.below["calckit out 1"]
    given(sheet, "100 kip", "62 ft")
    first = 'calc.line("M_r", "V*h_n", unit="kip*ft", meaning...'
    second = 'calc.line("M_h", "M_r/2", unit="kip*ft", meaning...'
    assert sheet.marks() == {
        "out 1": f"stale: h_n changed; run again: [3] {first}",
        "further 1": f"stale: h_n changed; run again, in this order: [3] {first}; [4] {second}",
    }
    assert sheet.below["calckit out 1"].split("\n", 1)[1] == shown, "the earlier output stands below the mark"


def test_run_again_it_is_fresh(sheet: Sheet) -> None:
    given(sheet, "100 kip", "62 ft")
    sheet.run("out", MOMENT)
    assert list(sheet.marks()) == ["further 1"]
    assert sheet.marks()["further 1"].startswith("stale: M_r changed; run again: [4] ")
    sheet.run("further", HALVES)
    assert sheet.marks() == {}


def test_value_put_back_takes_the_marks_off(sheet: Sheet) -> None:
    before = copy.copy(sheet.below)
    given(sheet, "100 kip", "62 ft")
    assert sheet.below != before
    given(sheet, "100 kip", "60 ft")
    assert sheet.below == before


def test_an_unchanged_mark_is_not_sent_again(sheet: Sheet) -> None:
    given(sheet, "100 kip", "62 ft")
    assert sheet.updates == 2
    sheet.run("note", 'calc.note("N-1", "something else")')
    assert sheet.updates == 2


def test_operand_that_is_gone_and_operand_that_means_another_line(sheet: Sheet) -> None:
    sheet.run("part", 'calc.part("X").line("V_h", "V/2", unit="kip", meaning="half the shear")')
    sheet.run("own", 'calc.part("X").given("V", "90 kip", source="S-201")')
    assert sheet.marks()["part 1"].startswith("stale: V is X.V now; run again: [5] ")
    sheet.run("in", 'calc.given("V", "100 kip", source="S-201")')
    assert sheet.marks()["out 1"].startswith("stale: h_n is gone; run again: [3] ")


def test_mark_names_the_lines_if_not_all_of_an_output_are_stale(sheet: Sheet) -> None:
    with sheet.live.cell("step", "two lines"), sheet.calc.step():
        sheet.calc.note("N-1", "a note")
        sheet.calc.line("V_h", "V/2", unit="kip", meaning="half the shear")
    sheet.run("V", 'calc.given("V", "80 kip", source="S-201")')
    assert sheet.marks()["step 1"] == "stale (V_h): V changed; run again: [5] two lines"


def test_cells_are_named_in_the_order_of_what_they_supply(sheet: Sheet) -> None:
    # the cell that is put in later supplies the earlier one
    sheet.run("late", 'calc.line("V_q", "V/4", unit="kip", meaning="a quarter")')
    sheet.run("out", 'calc.line("M_r", "V_q*h_n", unit="kip*ft", meaning="rough moment")')
    sheet.run("further", HALVES)
    given(sheet, "120 kip", "60 ft")
    cells = sheet.marks()["further 1"].partition("in this order: ")[2].split("; ")
    assert [cell[:3] for cell in cells] == ["[5]", "[6]", "[7]"]


def test_line_written_by_another_cell_since(sheet: Sheet) -> None:
    sheet.run("other", 'calc.given("V", "90 kip", source="S-201")')
    assert sheet.marks()["in 1"] == "no longer in force: V, written by another cell since"


def test_calculation_started_afresh(sheet: Sheet) -> None:
    with sheet.live.cell("start"):
        calc = Calc(project="Live")
    text = "stale: the calculation was started afresh; run this cell again"
    assert sheet.marks() == dict.fromkeys(("in 1", "in 2", "out 1", "further 1"), text)
    sheet.calc = calc
    calc.document("S-201", title="Framing elevations")
    given(sheet, "100 kip", "60 ft")
    assert list(sheet.marks()) == ["out 1", "further 1"]


def test_clean_run_marks_nothing(sheet: Sheet, monkeypatch: pytest.MonkeyPatch, tmp_path: Any) -> None:
    monkeypatch.setattr(sheet.calc.lines.settings, "folder", tmp_path)
    sheet.run("part", 'calc.part("X").line("V_h", "V/2", unit="kip", meaning="half the shear")')
    sheet.run("own", 'calc.part("X").given("V", "90 kip", source="S-201")')
    assert sheet.calc.lines.stale() == {"X.V_h": ["V"]}
    assert sheet.marks() == {}


def test_marked_forms_stand_alone(sheet: Sheet) -> None:
    data = display.bundle([sheet.calc["M_r"].line], [], [])
    assert list(data) == ["text/plain", "text/markdown", MIME, "text/latex"]
    marked = display.marked(data, "stale: V_1 changed")
    assert list(marked) == ["text/plain", "text/markdown", MIME], "LaTeX alone would show the formula without the mark"
    assert marked["text/markdown"].startswith(r"**stale: V\_1 changed**" + "\n\n**rough moment**")
    assert marked[MIME] == data[MIME]


# checks that were not made


def test_check_that_was_not_made_is_stale_when_its_value_arrives(sheet: Sheet) -> None:
    sheet.run("check", 'calc.check("V", "<=", "V_applied", title="Model")')
    assert "NOT CHECKED" in sheet.below["calckit check 1"]
    sheet.run("note", 'calc.note("N-1", "something else")')
    assert sheet.marks() == {}
    sheet.run("model", 'calc.given("V_applied", "120 kip", source="S-201")')
    assert list(sheet.marks()) == ["check 1"]
    assert sheet.marks()["check 1"].startswith('stale: V_applied is there now; run again: [5] calc.check("V", "<=",')
    sheet.run("check", 'calc.check("V", "<=", "V_applied", title="Model")')
    assert sheet.marks() == {}
    assert "NOT CHECKED" not in sheet.below["calckit check 1"]


def test_check_that_waits_for_a_stated_lack_is_stale_when_the_value_is_given(sheet: Sheet) -> None:
    sheet.run("model", 'calc.given("V_applied", "none: no model yet", source="S-201")')
    sheet.run("check", 'calc.check("V", "<=", "V_applied", title="Model")')
    assert sheet.calc["Model".lower()].line.inputs["V_applied"].shown == "none: no model yet"
    sheet.run("model", 'calc.given("V_applied", "120 kip", source="S-201")')
    assert sheet.marks()["check 1"].startswith("stale: V_applied changed; run again: [6] calc.check(")
    sheet.run("model", 'calc.given("V_applied", "none: no model yet", source="S-201")')
    assert sheet.marks() == {}, "put back, the check waits as before"


def test_steps_record_what_their_checks_wait_for(sheet: Sheet) -> None:
    with sheet.live.cell("inputs"):
        part = sheet.calc.part("X", "East-west")
        sheet.calc.levels("level, h_x [ft], w_x [kip]\nRoof, 30, 310\n2, 15, 455", source="S-201")
        part.given("C_d", "5", source="S-201")
    with sheet.live.cell("stability", "x.asce7.stability()"):
        made = part.asce7.stability()
    absent = {name for name, operand in made.line.inputs.items() if operand.is_absent()}
    assert absent == {"P_x", "Delta", "V_x"}
    sheet.run("P_x", 'calc.part("X").given("P_x", "20 kip", source="S-201")')
    assert sheet.marks()["stability 1"].startswith("stale (X.stability): P_x is there now; run again: ")


# lines without a cell


def test_summary_names_stale_lines_and_lines_whose_cell_was_deleted(sheet: Sheet) -> None:
    assert notices(sheet.calc) == []
    sheet.live.deleted = ["out"]
    sheet.run("note", 'calc.note("N-1", "something else")')
    assert [text.partition(".")[0] for text in notices(sheet.calc)] == ["Lines without a cell: M_r"]
    given(sheet, "100 kip", "62 ft")
    stale, without = notices(sheet.calc)
    assert stale.startswith("Stale lines: M_r, M_h. h_n changed; run again, in this order: [3] calc.line(")
    assert "(deleted); [4] calc.line(" in stale
    assert without.startswith("Lines without a cell: M_r. ")
    sheet.run("out", MOMENT)
    sheet.run("further", HALVES)
    assert notices(sheet.calc) == [], "a cell that runs is there"


def test_cell_deleted_just_before_the_summary(sheet: Sheet) -> None:
    sheet.live.deleted = ["further"]
    with sheet.live.cell("summary"):
        assert notices(sheet.calc)[0].startswith("Lines without a cell: M_h. ")


# a real kernel


class Kernel:
    """A kernel, spoken to as a notebook does: the id of the cell and the deleted cells go with each request."""

    def __init__(self) -> None:
        self.manager, self.client = start_new_kernel(kernel_name="python3", cwd=str(ROOT))

    def run(self, key: str, code: str) -> list[dict[str, Any]]:
        """The messages that a cell sends."""
        content = {"code": code, "silent": False, "store_history": True, "user_expressions": {}, "allow_stdin": False}
        message = self.client.session.msg("execute_request", content)
        message["metadata"] = {"cellId": key, "deletedCells": []}
        self.client.shell_channel.send(message)
        sent = []
        while True:
            reply = self.client.get_iopub_msg(timeout=60)
            if reply["parent_header"].get("msg_id") != message["header"]["msg_id"]:
                continue
            assert reply["msg_type"] != "error", reply["content"]
            if reply["msg_type"] == "status" and reply["content"]["execution_state"] == "idle":
                return sent
            if reply["msg_type"] in ("display_data", "update_display_data"):
                sent.append(reply)


@pytest.fixture
def this_kit(monkeypatch: pytest.MonkeyPatch) -> None:
    """Kernels load the kit that is tested."""
    monkeypatch.setenv("PYTHONPATH", str(ROOT))


@pytest.fixture
def kernel(this_kit: None) -> Iterator[Kernel]:
    """A kernel of this Python."""
    kernel = Kernel()
    yield kernel
    kernel.client.stop_channels()
    kernel.manager.shutdown_kernel(now=True)


def test_marks_reach_the_notebook_from_a_real_kernel(kernel: Kernel) -> None:
    kernel.run("start", 'from calckit import Calc\ncalc = Calc(project="Live")\ncalc.document("S-1", title="Sketch")')
    for V in ("100 kip", "110 kip", "100 kip"):
        sent = kernel.run("in", f'calc.given("V", "{V}", source="S-1")')
        if V == "100 kip" and len(sent) == 1:
            (first,) = kernel.run("out", 'calc.line("V_h", "V/2", unit="kip", meaning="half the shear")')
            assert first["msg_type"] == "display_data"
            continue
        own, update = sent
        assert (own["msg_type"], update["msg_type"]) == ("display_data", "update_display_data")
        assert own["content"]["transient"] == {"display_id": "calckit in 1"}
        assert update["content"]["transient"] == first["content"]["transient"] == {"display_id": "calckit out 1"}
        now, before = update["content"]["data"], first["content"]["data"]
        if V == "110 kip":
            head, body = now["text/plain"].split("\n", 1)
            assert head == 'stale: V changed; run again: [3] calc.line("V_h", "V/2", unit="kip", meaning="hal...'
            assert (body, now[MIME]) == (before["text/plain"], before[MIME])
        else:
            assert now == before, "put back, the output is as it was"


@pytest.mark.usefixtures("this_kit")
def test_two_runs_of_a_notebook_give_the_same_bytes_and_no_mark() -> None:
    text = (ROOT / "templates" / "building_lateral_force.ipynb").read_text(encoding="utf-8")

    def run() -> str:
        notebook = nbformat.reads(text, as_version=4)
        resources = {"metadata": {"path": str(ROOT / "templates")}}
        NotebookClient(notebook, kernel_name="python3", record_timing=False, resources=resources).execute()
        return json.dumps(notebook, sort_keys=True)

    first = run()
    assert first == run()
    assert "stale: " not in first
    assert "vnd.calckit" in first
