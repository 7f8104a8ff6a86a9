"""Overrides and set values: where they take effect, what is printed, and what is said of those that do not fit."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from calckit import Calc
from calckit.core import settings
from calckit.core.assemble import assemble
from calckit.core.record import Override
from calckit.core.settings import Settings
from calckit.errors import InputError
from tests.building import Building
from tests.printed_audit import audit


def issued(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path, values: dict[str, str] | None = None, **more: Any
) -> Settings:
    """Settings of a clean run, put in force."""
    made = Settings(folder=tmp_path, values=values or {}, **more)
    monkeypatch.setattr(settings, "current", lambda: made)
    return made


def known(calc: Calc) -> set[str]:
    """The ids that a run could have taken a set value for."""
    return {*calc.lines.entries, *calc.standard.symbols, *calc.title_block, "levels"}


# overrides


def overridden(**how: Any) -> Calc:
    """A shear, overridden, and a line that rests on it."""
    calc = Calc(project="Overrides")
    calc.document("L-1", title="Local amendments")
    calc.given("C_s", "0.0366", source="L-1")
    calc.given("W", "30394 kip", source="L-1")
    calc.override("V", "1124.6 kip", reason="as the earlier design", by="A. Person", **how)
    from calckit.standards.asce7 import formulas

    calc.compute(formulas.V)
    calc.line("V_h", "V/2", unit="kip", meaning="half the shear")
    return calc


def test_override_prints_both_values() -> None:
    line = overridden()["V"].line
    assert (line.value, line.unit, line.shown) == (1124.6, "kip", "1124.6 kip")
    assert line.computed and (line.computed.value, line.computed.shown) == (1112.4204, "1112 kip")
    assert line.override == Override(1124.6, "1124.6 kip", "as the earlier design", "A. Person", "")
    assert line.forms["plain"][1] == "0.0366 × 30394 kip"
    assert [flag.text for flag in line.flags] == [
        "V overridden: 1124.6 kip in place of 1112 kip (+1.09 %); as the earlier design"
    ]


def test_value_in_force_is_what_later_lines_use() -> None:
    calc = overridden()
    assert calc["V_h"].value == 562.3
    assert calc["V_h"].line.inputs["V"].shown == "1124.6 kip"
    found = audit(json.loads(assemble(calc).to_json()))
    assert (found.faults, found.counts["computed line"]) == ([], 2)


def test_override_with_a_document_is_an_amendment() -> None:
    line = overridden(document="L-1 section 3")["V"].line
    assert line.override and line.override.document == "L-1 section 3"


def test_override_in_another_unit() -> None:
    calc = Calc(project="Overrides")
    calc.document("L-1", title="Local amendments")
    calc.given("V", "100 kip", source="L-1")
    calc.override("W", "200 kN", reason="rounded", by="A. Person")
    line = calc.line("W", "V/2", unit="kip", meaning="half the shear").line
    assert (line.value, line.unit, line.shown) == (200, "kN", "200 kN")
    assert "(-10.08 %)" in line.flags[0].text


def test_override_stands_before_the_computing_cell(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    issued(monkeypatch, tmp_path)
    calc = overridden()
    message = "V: needed a line not yet computed; given a computed line; cure: move the override above the cell"
    with pytest.raises(InputError, match=message):
        calc.override("V", "1100 kip", reason="too late", by="A. Person")


def test_override_that_meets_nothing_is_an_open_item() -> None:
    calc = overridden()
    assert not [item for item in assemble(calc).open_items if item.id.startswith("override")]
    calc.override("F_x", "5 kip", reason="a list cannot be overridden", by="A. Person")
    items = [item for item in assemble(calc).open_items if item.id.startswith("override")]
    assert [(item.id, item.owner, item.group) for item in items] == [("override-F_x", "originator", "open")]
    assert items[0].text == "the override of 'F_x' meets no single value computed in this calculation"


# set values


def test_settings_file(tmp_path: Path) -> None:
    text = {"set": {"h_n": "70 ft"}, "files": {"a.csv": "x"}, "status": "for check", "date": "2026-12-01",
            "confirmed": "c", "headings": ["One"]}  # fmt: skip
    (tmp_path / "settings.json").write_text(json.dumps(text), encoding="utf-8")
    made = settings.read(tmp_path)
    assert (made.values, made.files, made.status, made.date, made.confirmed, made.headings, made.clean) == (
        {"h_n": "70 ft"}, {"a.csv": "x"}, "for check", "2026-12-01", "c", ["One"], True,
    )  # fmt: skip
    assert not Settings().clean


def test_set_value_of_an_input(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    made = issued(monkeypatch, tmp_path, {"h_n": "90 ft", "X.T_analysis": "1.1 s", "rho": "1.3"})
    calc = Building().calc()
    assert (calc["h_n"].value, calc["h_n"].line.detail) == (90, "set at issue")
    assert calc.part("X")["T_analysis"].value == 1.1 and calc.part("Y")["T_analysis"].value == 0.7
    assert [calc.part(part)["rho"].value for part in ("X", "Y")] == [1.3, 1.3], "a bare symbol reaches every part"
    assert made.problems(known(calc)) == []


def test_set_value_of_a_computed_line_is_an_override(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    made = issued(monkeypatch, tmp_path, {"X.C_s": "0.05", "SDC": "C"})
    calc = Building().calc()
    line = calc.part("X")["C_s"].line
    assert (line.value, line.computed and line.computed.shown, line.override and line.override.by) == (
        0.05, "0.03385", "the command line",
    )  # fmt: skip
    assert line.override and line.override.reason == "set at issue"
    assert calc.part("X")["V"].value == pytest.approx(0.05 * 6060)
    assert calc.part("Y")["C_s"].line.override is None
    assert calc["SDC"].value == "C" and calc["SDC"].line.computed and calc["SDC"].line.computed.value == "D"
    assert made.problems(known(calc)) == []
    assert audit(json.loads(assemble(calc).to_json())).faults == []


def test_set_answer_is_an_answer(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    issued(monkeypatch, tmp_path, {"H1a": "no"})
    calc = Calc(project="Answers")
    line = calc.answer("H1a").line
    assert (line.value, line.text, line.flags) == ("no", "set at issue", [])


def test_set_levels_from_a_file(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    issued(monkeypatch, tmp_path, {"levels": "@my.csv"}, files={"my.csv": "level, h_x [ft], w_x [kip]\n1, 12, 400"})
    calc = Calc(project="Levels")
    calc.document("S-1", title="Weights")
    calc.levels("level, h_x [ft], w_x [kip]\n2, 24, 10\n1, 12, 20", source="S-1")
    assert calc["w_x"].value == [400]


def test_everything_wrong_is_said_together(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    values = {"h_n": "90 s", "X.C_s": "7", "H1a": "perhaps", "levels": "level", "C_S": "0.1", "X.S_S": "0.5",
              "units": "XX", "F_x": "5 kip", "supplements": "a"}  # fmt: skip
    made = issued(monkeypatch, tmp_path, values)
    calc = Building().calc()
    calc.answer("H1a", "no", basis="the model")
    assert (calc["h_n"].value, calc.part("X")["C_s"].line.override, calc["H1a"].value) == (80, None, "no")
    assert (calc.title_block["units"], calc.title_block["supplements"]) == ("US", None)
    found = {problem["id"]: problem for problem in made.problems(known(calc))}
    assert {id_: problem["kind"] for id_, problem in found.items()} == {
        "h_n": "invalid", "X.C_s": "invalid", "H1a": "invalid", "levels": "invalid", "units": "invalid",
        "supplements": "invalid", "C_S": "unknown", "X.S_S": "unused", "F_x": "unused",
    }  # fmt: skip
    assert "needed a length with its unit, above 0; given 90 s" in found["h_n"]["text"]
    assert "needed a finite number above 0 to 5; given 7" in found["X.C_s"]["text"]
    assert found["C_S"]["text"].startswith("nearest known: ") and "C_s" in found["C_S"]["text"]
    assert found["F_x"]["text"] == "no line of this notebook takes it"


def test_set_value_that_the_hazard_basis_leaves_aside(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    made = issued(monkeypatch, tmp_path, {"hazard_basis": "site-specific", "F_a": "1.1"})
    calc = Calc(project="Basis")
    calc.document("G-1", title="Geotechnical report")
    calc.given("hazard_basis", "mapped", source="G-1")
    calc.asce7.site_specific_values(S_DS="0.833", S_D1="0.373", source="G-1")
    assert made.problems(known(calc)) == [
        {"kind": "unused", "id": "F_a", "text": "hazard_basis is site-specific: site coefficients are not used"}
    ]


def test_title_block_is_set_at_issue(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    values = {"number": "C-202", "supplements": "3, 1", "amendments": "A-1; A-2", "paper": "A4"}
    made = issued(monkeypatch, tmp_path, values, status="for construction", date="2026-12-24")
    calc = Calc(project="Block", number="C-101", date="2026-12-01", status="for check")
    block = calc.title_block
    assert {name: block[name] for name in (*values, "status", "date")} == {
        "number": "C-202", "supplements": [1, 3], "amendments": ["A-1", "A-2"], "paper": "A4",
        "status": "for construction", "date": "2026-12-24",
    }  # fmt: skip
    assert made.problems(known(calc)) == []
    assert Calc(project="Block", supplements=()).title_block["supplements"] == [1, 3]


def test_no_supplement_in_force(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    issued(monkeypatch, tmp_path, {"supplements": "none"})
    assert Calc(project="Block").title_block["supplements"] == []


def test_headings_become_sections(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    from tests.core.session import Session

    issued(monkeypatch, tmp_path, headings=["", "Site", "Weight"])
    live = Session(monkeypatch)

    def cell(number: int) -> Any:
        (tmp_path / "cell").write_text(str(number), encoding="ascii")
        return live.cell(f"cell {number}")

    from calckit.core import book

    monkeypatch.setattr(book, "current", settings.current)
    with cell(1):
        calc = Calc(project="Sections")
    with cell(2):
        calc.note("N-1", "under Site")
    with cell(3):
        calc.note("N-2", "under Weight")
    assert [(line.id, line.section) for line in assemble(calc).lines] == [("N-1", "Site"), ("N-2", "Weight")]
    assert assemble(calc).cells == [[], [["line", "N-1"]], [["line", "N-2"]]]
