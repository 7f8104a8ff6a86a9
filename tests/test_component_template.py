"""The template of nonstructural components: as committed, with set values, and under 7-22.

Values are worked again here in plain arithmetic (constructed: they guard, they validate nothing).
"""

from __future__ import annotations

import json
from pathlib import Path

import nbformat
import pytest

from calckit.core.record import Record, from_json
from calckit.report import notebook
from calckit.report.digits_check import check_digits
from calckit.report.run import Settings, run
from tests.printed_audit import audit
from tests.template_runs import TEMPLATES, template

PATH = TEMPLATES / "component_force.ipynb"
S_DS = 0.5567


@pytest.fixture(scope="session")
def committed() -> Record:
    """The template as it is committed."""
    return template(path=PATH)


def test_the_component_in_full(committed: Record) -> None:
    basic = 0.4 * 1 * S_DS * 8600 / (2.5 / 1.5) * 3
    assert committed.line("G1.F_p").value == pytest.approx(basic)
    assert committed.line("G1.F_pO").value == pytest.approx(2 * basic)
    assert committed.line("G1.F_pv").value == pytest.approx(0.2 * S_DS * 8600)
    assert [(each.equation, each.governs) for each in committed.line("G1.F_p").candidates] == [
        ("13.3-1", True), ("13.3-2", False), ("13.3-3", False)
    ]  # fmt: skip
    assert committed.line("G1.I_p").text.startswith("has to work after an earthquake")


def test_the_lists(committed: Record) -> None:
    line = committed.line("M.F_p")
    a_p, R_p = (2.5, 2.5, 2.5, 1, 1, 1, 2.5), (6, 6, 2, 2.5, 2.5, 2.5, 3)
    W_p, I_p = (4800, 3950, 620, 5200, 11800, 740, 410), (1, 1.5, 1, 1, 1, 1, 1)
    ratio = (1, 1, 1, 0, 1, 15 / 80, 1)
    forces = [
        max(min(0.4 * a * S_DS * W * i / r * (1 + 2 * z), 1.6 * S_DS * i * W), 0.3 * S_DS * i * W)
        for a, r, W, i, z in zip(a_p, R_p, W_p, I_p, ratio, strict=True)
    ]
    assert line.value == pytest.approx(forces)
    assert line.rows == ["AH-1", "AH-2", "EF-1", "BO-1", "CH-1", "PU-1", "ST-1"] and line.row == "CH-1"
    assert committed.line("M.i_p").value == [1, 1, 1, 3, 1, 3, 1]
    assert committed.line("A.i_p").value == [1, 1, 3, 1]


def test_first_sheets(committed: Record) -> None:
    (summary,) = committed.summaries
    rows = {row.label: row for row in summary.rows}
    assert len(rows) == 12
    assert rows["G1: Emergency generator"].cells[:4] == ["8600 lb", "3447 lb", "0.4008", "eq. 13.3-1"]
    assert (rows["M: BO-1"].cells[3], rows["M: BO-1"].lines[3]) == ("eq. 13.3-3", "M.F_pmin")
    assert [item.line for item in committed.open_items if item.group == "open"] == ["N-weights"]


def test_printed_digits(committed: Record) -> None:
    found = audit(json.loads(committed.to_json()))
    assert found.faults == []
    assert found.counts["table row"] >= 11 * 7
    assert found.counts["table value"] == 9
    again = ("column M.F_pbasic of M.component_forces", "column A.F_pbasic of A.component_forces")
    assert [text for text in found.skipped if not text.startswith(again)] == []


def test_a_wrong_entry_of_a_looked_up_column_is_found(committed: Record) -> None:
    wrong = from_json(committed.to_json())
    wrong.line("M.R_p").shown[4] = "6.0"  # type: ignore[index]
    faults = check_digits(wrong).faults
    assert any("printed 6.0 at CH-1, but the look-up reads Table 13.6-1, column R_p" in fault for fault in faults)
    assert any("M.R_p: Table 13.6-1" in fault for fault in audit(json.loads(wrong.to_json())).faults)


def test_set_values(tmp_path: Path) -> None:
    pasted = "tag, component, W_p [kip], z [m], I_p\nX1, pump, 1.2, 30, 1.5\n"
    (tmp_path / "list.csv").write_text(pasted, encoding="utf-8")
    record = template({"M.components": "@list.csv", "S_DS": "0.9"}, tmp_path, PATH)
    assert record.line("M.F_p").value == pytest.approx([0.4 * 0.9 * 1.2 * 1.5 / 2.5 * 3])
    assert record.line("M.F_p").unit == "kip"
    assert record.line("A.F_p").rows == ["PP", "CL6", "CL2", "SG"]
    assert audit(json.loads(record.to_json())).faults == []


def test_a_bad_set_list_is_named(tmp_path: Path) -> None:
    settings = Settings(set={"M.components": "@list.csv"}, files={"list.csv": "tag, W_p [lb]\nX1, 5\n"})
    outcome = run(notebook.read(PATH), settings)
    (problem,) = outcome.problems
    assert (problem.kind, problem.id) == ("invalid", "M.components")
    assert "z (height above the base" in problem.text


def test_under_7_22(tmp_path: Path) -> None:
    """The standard, the structure, and typed factors for the lists: what the cells say to edit."""
    edited = nbformat.read(PATH, as_version=4)
    cells = {cell["id"]: cell for cell in edited.cells}
    calculation = cells["calculation"]
    calculation.source = calculation.source.replace('standard="ASCE 7-16"', 'standard="ASCE 7-22"')
    for name in ("building", "generator"):
        lines = cells[name].source.splitlines()
        marks = ("# calc.", "# g1.", "# T_a,", "# R,", "# Omega_0,", "# I_e,", '# """)')
        cells[name].source = "\n".join(line[2:] if line.startswith(marks) else line for line in lines)
    typed = "tag, C_AR, R_po, Omega_0p, W_p [lb], z [ft], I_p\nX1, 1.4, 2, 2, 900, 40, 1.0"
    for part, name in (("m", "mechanical"), ("a", "architectural")):
        title = "Mechanical" if part == "m" else "Architectural"
        cells[name].source = (
            f'{part} = calc.part("{part.upper()}", "{title}")\n{part}.asce7.components("""{typed}""", source="M-601")'
        )
    path = tmp_path / "edited.ipynb"
    nbformat.write(edited, path)
    record = template(path=path)
    H_f = 1 + 1 / 0.535 + (1 - (0.4 / 0.535) ** 2)
    R_mu = max((1.1 * 6 / (1.25 * 2)) ** 0.5, 1.3)
    assert record.line("G1.F_p").value == pytest.approx(0.4 * S_DS * 1.5 * 8600 * H_f / R_mu / 1.5)
    source = record.line("G1.H_f").source
    assert source and source.text() == "ASCE/SEI 7-22 13.3.1.1, eq. 13.3-4"
    assert audit(json.loads(record.to_json())).faults == []
