"""Content hashes change exactly when what they cover changes; the record is the same twice."""

from __future__ import annotations

import json
from collections.abc import Callable
from dataclasses import replace

import pytest

from calckit import Calc
from calckit.core import record
from calckit.core.assemble import assemble
from calckit.core.record import Flag, Line, Operand, Override, Source
from tests.building import Building

LINE = Line(
    "X.V", "computed", "V", "base shear", 205.2, "kip", "205.2 kip", n=7, part="X", section="Base shear",
    formula="C_s*W", forms={"plain": ["C_s × W", "0.0339 × 6060 kip"]},
    inputs={"X.C_s": Operand(0.0339, "", "0.0339", "abc"), "W": Operand(6060.0, "kip", "6060 kip", "def")},
    source=Source("ASCE/SEI 7-16", "12.8.1", "12.8-1", standard=True),
)  # fmt: skip


def content(line: Line) -> str:
    """The content hash as the book takes it."""
    return record.digest(record.canonical(line.hashed()))


@pytest.mark.parametrize(
    "changed",
    [
        replace(LINE, id="Y.V"), replace(LINE, kind="analysis"), replace(LINE, symbol="V_b"),
        replace(LINE, meaning="shear"), replace(LINE, value=205.3), replace(LINE, unit="kN"),
        replace(LINE, formula="W*C_s"), replace(LINE, source=None),
        replace(LINE, source=Source("ASCE/SEI 7-16", "12.8.1", "12.8-2", standard=True)),
        replace(LINE, source=Source("H-2", "12.8.1", "12.8-1", entry="Hazard printout, revision 2")),
        replace(LINE, verdict="OK"), replace(LINE, text="a word"), replace(LINE, rows=["Roof"]),
        replace(LINE, override=Override(200.0, "200 kip", "a reason", "A. Person")),
        replace(LINE, inputs={**LINE.inputs, "W": Operand(6060.0, "kip", "6060 kip", "other")}),
        replace(LINE, inputs={"X.C_s": LINE.inputs["X.C_s"]}),
    ],
)  # fmt: skip
def test_content_changes_with(changed: Line) -> None:
    assert content(changed) != content(LINE)


@pytest.mark.parametrize(
    "same",
    [
        replace(LINE, n=8), replace(LINE, section="Other heading"), replace(LINE, shown="205 kip"),
        replace(LINE, forms={"plain": ["C_s × W", "0.03386 × 6060 kip"]}), replace(LINE, flags=[Flag("a flag", True)]),
        replace(LINE, source=Source("ASCE/SEI 7-16", "12.8.1", "12.8-1", confirmed="seen by A", standard=True)),
        replace(LINE, inputs={**LINE.inputs, "W": Operand(6060.0, "kip", "6060.0 kip", "def")}),
        replace(LINE, typeset={"plain": "V"}), replace(LINE, content="old"),
    ],
)  # fmt: skip
def test_content_does_not_change_with(same: Line) -> None:
    assert content(same) == content(LINE)


def contents(change: Callable[[Calc], None]) -> dict[str, str]:
    """The content of three lines after a change."""
    calc = Calc(project="Content")
    calc.document("S-201", title="Framing elevations", revision="2")
    change(calc)
    calc.line("M_r", "V*h_n", unit="kip*ft", meaning="rough moment")
    calc.line("M_h", "M_r/2", unit="kip*ft", meaning="half of it")
    return {id_: entry.line.content for id_, entry in calc.lines.entries.items()}


def inputs(V: str = "100 kip", h_n: str = "60 ft", source: str = "S-201") -> Callable[[Calc], None]:
    """Two givens."""

    def change(calc: Calc) -> None:
        calc.given("V", V, source=source)
        calc.given("h_n", h_n, source="S-201")

    return change


def test_content_reaches_all_that_rests_on_a_line() -> None:
    first = contents(inputs())
    assert contents(inputs()) == first
    assert {id_ for id_, hashed in contents(inputs(V="101 kip")).items() if first[id_] != hashed} == {"V", "M_r", "M_h"}
    # twice the shear on half the height gives the same moment, but not by the same content
    assert {id_ for id_, hashed in contents(inputs("200 kip", "30 ft")).items() if first[id_] != hashed} == set(first)
    assert {id_ for id_, hashed in contents(inputs(source="S-201 grid A")).items() if first[id_] != hashed} == {
        "V", "M_r", "M_h",
    }  # fmt: skip


def test_content_covers_the_entry_of_the_document() -> None:
    def other(calc: Calc) -> None:
        calc.sources.documents.clear()
        calc.document("S-201", title="Framing elevations", revision="3")
        inputs()(calc)

    first, second = contents(inputs()), contents(other)
    assert all(first[id_] != second[id_] for id_ in first)


# the record


def test_record_survives_json() -> None:
    made = Building().record()
    again = record.from_json(made.to_json())
    assert again == made
    assert again.to_json() == made.to_json()
    assert again.line("X.V") == made.line("X.V")
    with pytest.raises(KeyError, match=r"X\.nothing"):
        again.line("X.nothing")


def test_record_of_a_line_with_everything() -> None:
    line = replace(
        LINE,
        computed=Operand(205.2, "kip", "205.2 kip"),
        override=Override(200.0, "200 kip", "a reason", "A. Person"),
        flags=[Flag("a flag", True, "originator")],
        candidates=[record.Candidate("12.8-2", 0.1, "", "0.1000", "basic value", True, "X.C_sbasic")],
        margin=record.Margin("below category D", 1.8, "%", "S_DS 1.8 %"),
    )
    made = record.Record({"project": "Demo"}, [line])
    assert record.from_json(made.to_json()) == made


@pytest.mark.parametrize("text", ["[]", "{}", '{"schema": "calckit.record.v0"}', '"text"'])
def test_not_a_record(text: str) -> None:
    with pytest.raises(ValueError, match=r"not a record of schema calckit\.record\.v1"):
        record.from_json(text)


def test_two_runs_give_the_same_bytes() -> None:
    first, second = Building().record(), Building().record()
    assert first.to_json() == second.to_json()
    assert record.lines_hash(first.lines) == record.lines_hash(second.lines)
    other = Building(second=False).record()
    assert record.lines_hash(first.lines) != record.lines_hash(other.lines)


def test_hash_over_lines_covers_what_content_leaves_out() -> None:
    lines = Building(second=False).record().lines
    before = record.lines_hash(lines)
    lines[3].shown = "other"
    assert record.lines_hash(lines) != before


def test_no_day_no_path_no_machine_in_a_record() -> None:
    text = Building().record(date="2026-12-01").to_json()
    data = json.loads(text)
    assert data["schema"] == "calckit.record.v1"
    assert list(data["calculation"]["software"]) == ["name", "version", "python", "platform", "libraries"]
    assert not any(word in text for word in ("/home", "/root", "site-packages", "\\\\Users"))


def test_numbers_that_json_cannot_hold_are_refused() -> None:
    with pytest.raises(ValueError, match="Out of range float values"):
        record.Record({}, [replace(LINE, value=float("nan"))]).to_json()


def test_seals_leave_the_rest_alone() -> None:
    made = Building(second=False).record()
    sealed = made.sealed({"html": "a", "pdf": "b"})
    assert (sealed.seals, made.seals) == ({"html": "a", "pdf": "b"}, None)
    assert sealed.sealed(None) == made


def test_calculation_names_standard_documents_and_parts() -> None:
    fields = assemble(Building(second=False).calc(supplements=(3, 1))).calculation
    assert fields["standards"] == [
        {"id": "asce7", "edition": "ASCE 7-16", "name": "ASCE/SEI 7-16", "supplements": [1, 3]}
    ]
    assert fields["documents"] == [{"key": "D-1", "title": "All inputs", "author": "", "revision": "", "date": ""}]
    assert fields["parts"] == [{"id": "X", "title": "X"}, {"id": "Y", "title": "Y"}]
