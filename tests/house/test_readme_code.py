"""The Python code of README.md runs as it stands there."""

import re
from pathlib import Path

import pytest
from pypdf import PdfWriter

from calckit import Calc, plots
from tests.house import source

BLOCKS = re.findall(r"```python\n(.*?)```", source.text_files()["README.md"], re.DOTALL)
INPUTS, OWN_LINES, BOUND, OVERRIDE, CONFIRM, REVISE, MODES, ARRAYS = BLOCKS
REGISTER = re.search(r"```\n(standard,.*?)```", source.text_files()["README.md"], re.DOTALL)


def test_the_blocks_run_in_a_calculation(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    PdfWriter().write("hazard.pdf")
    calc = Calc(project="Demonstration", number="D-1", date="2026-12-01", standard="ASCE 7-16")
    for key in ("B-1", "G-1", "H-2"):
        calc.document(key, title=f"Document {key}")
    x = calc.part("X", "East-west")
    names = {"calc": calc, "x": x, "plots": plots}
    exec(INPUTS, names)
    exec(OVERRIDE, names)
    calc.givens("risk_category, II, B-1\nhazard_basis, mapped, G-1\nS_S, 0.6, H-2\nS_1, 0.22, H-2\nsite_class, C, G-1")
    calc.levels("level, h_x [ft], w_x [kip]\nRoof, 62, 300\n2, 20, 400", source="B-1")
    x.given("system", "moment frame: steel special moment frame", source="B-1")
    x.given("T_a_method", "table", source="B-1")
    x.given("V_anchor", "90 kip", source="B-1", meaning="strength of the anchorage of the brace line")
    steps = (calc.asce7.design_spectrum, calc.asce7.design_category, x.asce7.system, calc.asce7.seismic_weight)
    for step in (*steps, x.asce7.approximate_period, x.asce7.period, x.asce7.base_shear):
        step()
    exec(OWN_LINES, names)
    exec(BOUND, names)
    exec(CONFIRM, names)
    exec(REVISE, names)
    x.givens("zeta, 0.05, B-1\ndrift_class, all other, B-1")
    exec(MODES, names)

    assert calc["h_n"].shown == "62 ft"
    assert calc["F_a"].value == 1.3
    assert calc["F_a"].line.override.reason == "local amendment"
    assert x["V_xd"].value[-1] == pytest.approx(max(x["V"].value, x["V_t"].value), rel=1e-11)
    assert x["M_r"].unit == "kip*ft"
    assert x["M_r"].value == pytest.approx(x["V"].value * 2 / 3 * 62, rel=1e-11)
    assert calc.enclosures["H-2"].page_numbers() == [1, 2]
    assert [figure.caption for figure in calc.lines.figures.values()] == ["What X.V rests on"]
    assert [row["revision"] for row in calc.revisions] == ["B"]
    assert x["R"].line.source.confirmed == "confirmed in office copy of ASCE/SEI 7-16 by J. Example, 2026-12-01"


def test_the_arrays_are_worked(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    Path("north.txt").write_text("made by hand, 5 points, dt = 0.02 s\n0 0.1 -0.2 0.1 0\n")
    names: dict[str, object] = {}
    exec(ARRAYS, names)
    assert names["spectrum"].pseudo_acceleration.shape == (3,)  # type: ignore[attr-defined]
    assert "ends with 1 value of zero, which may be padding (kept)" in capsys.readouterr().out


def test_the_register_is_read() -> None:
    calc = Calc(project="Demonstration", number="D-1", standard="ASCE 7-16")
    assert REGISTER
    calc.sources.read_register(REGISTER[1])
    assert calc.sources.confirmed == {"Table 12.2-1": "confirmed in office copy by J. Example, 2026-12-01"}
