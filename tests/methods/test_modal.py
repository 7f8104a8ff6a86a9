"""Modes as lines: values against publications, worked mode against the analysis, residuals, refusals."""

from __future__ import annotations

import json
from dataclasses import asdict

import pytest

from calckit import units
from calckit.core.assemble import assemble
from calckit.core.record import NOT_OK, OK
from calckit.errors import InputError
from calckit.report.digits_check import check_digits
from calckit.report.reevaluate import reevaluate
from tests.methods.models import calculation, five_story, stiffnesses
from tests.printed_audit import audit


def test_five_story_frame() -> None:
    part = five_story()
    part.methods.modes()
    # A. K. Chopra, Dynamics of Structures, Examples 12.1 and 13.11 (from memory, high): periods, M*/m, h*/h
    assert part["T_m"].value == pytest.approx([2.0007, 0.6854, 0.4348, 0.3385, 0.2967], abs=2e-4)
    assert [w / 100 for w in part["W_m"].value] == pytest.approx([4.398, 0.436, 0.121, 0.038, 0.008], abs=6e-4)
    assert [h / 12 for h in part["h_em"].value[:4]] == pytest.approx([3.51, -1.20, 0.76, -0.59], abs=6e-3)
    assert part["r_sum"].value == pytest.approx(1, abs=1e-11)


def test_two_stories_in_closed_form() -> None:
    # A. K. Chopra, Example 10.4 (exact): masses 2 and 1, stiffness 2k and k; phi (1/2, 1), (-1, 1); Gamma 4/3, -1/3
    _, part = calculation((100, 200), names=("Roof", "2"))
    stiffnesses(part, (50, 100))
    part.methods.modes()
    assert part["phi_1"].value == pytest.approx([1, 0.5], abs=1e-12)
    assert part["phi_2"].value == pytest.approx([1, -1], abs=1e-12)
    assert part["Gamma_m"].value == pytest.approx([4 / 3, -1 / 3], abs=1e-11)
    assert part["W_m"].value == pytest.approx([800 / 3, 100 / 3], abs=1e-9)
    ratio = part["omega_m"].value[1] / part["omega_m"].value[0]
    assert ratio == pytest.approx(2, abs=1e-11)
    assert part["h_em"].value == pytest.approx([18, 0], abs=1e-9)


def test_mode_worked_in_full() -> None:
    part = five_story()
    part.methods.modes(count=3, worked=2)
    for one, every in (("Gamma_2", "Gamma_m"), ("W_2", "W_m"), ("h_e2", "h_em"), ("omega_2", "omega_m")):
        assert part[one].value == pytest.approx(part[every].value[1], rel=1e-11)
        assert part[one].line.kind == "computed" and part[every].line.kind == "analysis"
    assert part["worked_mode"].line.verdict == OK
    assert part["T_m"].rows == ["1", "2", "3"]
    # the worked mode's story values come from formulas, those of the others from the analysis; all add up
    for number, kind in ((1, "analysis"), (2, "computed"), (3, "analysis")):
        assert part[f"s_x{number}"].line.kind == kind
        assert sum(part[f"s_x{number}"].value) == pytest.approx(part["W_m"].value[number - 1], rel=1e-10)
        roof = part[f"d_x{number}"].value[0] * part["omega_m"].value[number - 1] ** 2 / 386
        assert roof == pytest.approx(part["Gamma_m"].value[number - 1], rel=1e-10)


def test_pasted_matrix_gives_the_modes_of_the_stories() -> None:
    part = five_story()
    part.methods.modes()
    calc, other = calculation()
    calc.given("g", "386 in/s**2", source="P")
    k = 31.54
    names = part["h_x"].rows
    rows = [
        [(k if i == 0 else 2 * k) if i == j else -k if abs(i - j) == 1 else 0 for j in range(5)] for i in range(5)
    ]
    head = ", ".join(f"K_{j} [kip/in]" for j in range(1, 6))
    body = "\n".join(f"{name}, {', '.join(map(str, row))}" for name, row in zip(names, rows, strict=True))
    other.methods.modes(stiffness=f"level, {head}\n{body}", source="P")
    for name in ("T_m", "W_m", "phi_1", "phi_3", "s_x2", "d_x1"):
        assert other[name].value == pytest.approx(part[name].value, rel=1e-9)


def test_same_modes_from_metric_inputs() -> None:
    part = five_story()
    part.methods.modes()
    calc, metric = calculation([units.convert(100.0, "kip", "kN")] * 5, "3.6576 m", units="SI")
    calc.given("g", "9.8044 m/s**2", source="P")
    stiffnesses(metric, [units.convert(31.54, "kip/in", "kN/m")] * 5, "kN/m")
    metric.methods.modes()
    assert metric["T_m"].value == pytest.approx(part["T_m"].value, rel=1e-10)
    assert metric["W_m"].unit == "kN" and metric["d_x1"].unit == "mm"
    given = [units.convert(value, "kN", "kip") for value in metric["W_m"].value]
    assert given == pytest.approx(part["W_m"].value, rel=1e-10)


def test_residuals_are_printed_and_judged() -> None:
    part = five_story()
    part.methods.modes()
    assert part["r_modes"].line.kind == "analysis" and part["r_modes"].shown == "0.000000001"
    assert part["modes_hold"].line.verdict == OK
    # a roof that is 13 orders stiffer than the base: the first mode is lost in rounding
    _, bad = calculation((100, 200), names=("Roof", "2"))
    stiffnesses(bad, (100000000000, 1))
    bad.methods.modes(count=1)
    assert bad["r_modes"].value > 1e-6
    assert bad["modes_hold"].line.verdict == NOT_OK


def test_lines_stand_in_the_record_as_they_must() -> None:
    part = five_story()
    part.methods.modes()
    part.methods.correlation()
    part.methods.combine("s_xn", "d_xn")
    record = assemble(part.calc)
    assert reevaluate(record).faults == [] and check_digits(record).faults == []
    assert audit(json.loads(json.dumps(asdict(record)))).faults == []
    shared = [line for line in record.lines if line.kind == "analysis" and line.rows]
    assert len(shared) > 20 and all(line.inputs and line.text and line.source for line in shared)


def test_a_changed_weight_makes_the_modes_stale() -> None:
    part = five_story()
    part.methods.modes()
    calc = part.calc
    assert calc.lines.stale() == {}
    line = calc.lines.entries["w_x"].line
    line.content = "another"
    assert "X.T_m" in calc.lines.stale()


def test_missing_inputs_are_named_together() -> None:
    _, part = calculation()
    with pytest.raises(InputError, match=r"k_x.*supply it with rows\(\"stories\""):
        part.methods.modes()
    stiffnesses(part)
    with pytest.raises(InputError, match=r"count: needed a whole number of modes from 1 to 5; given 9"):
        part.methods.modes(count=9)
    with pytest.raises(InputError, match=r"worked: needed one of the modes 1 to 2; given 3"):
        part.methods.modes(count=2, worked=3)
    assert part.find("T_m") is None


def test_levels_must_be_the_same() -> None:
    _, part = calculation((100, 200), names=("Roof", "2"))
    part.rows("stories", "level, k_x [kip/in]\nRoof, 5\nB, 6", source="P")
    with pytest.raises(InputError, match=r"k_x .*needed the levels Roof, 2; given Roof, B"):
        part.methods.modes()


PASTED = "mode, T_m [s], r_m\n1, 0.64, 0.889\n2, 0.32, 0.111"
STORIES = """level, s_x1 [kip], d_x1 [in], s_x2 [kip], d_x2 [in]
Roof, 133.3, 5.33, -33.3, -0.333
2, 133.4, 2.67, 66.6, 0.333"""
HOW = {"directions": "X and Y", "torsion": "mass shifted 5 percent", "P_delta": "in the stiffness"}


def test_pasted_modes() -> None:
    calc, part = calculation((100, 200), names=("Roof", "2"))
    part.methods.pasted_modes(PASTED, STORIES, "P", **HOW)
    assert part["W_m"].value == pytest.approx([266.7, 33.3])
    assert part["modal_model"].value == "three-dimensional analysis"
    assert "mass shifted 5 percent" in part["modal_model"].line.text
    assert part["stories_hold"].line.verdict == OK
    record = assemble(calc)
    assert reevaluate(record).faults == [] and check_digits(record).faults == []


def test_pasted_story_values_that_do_not_add_up_are_said() -> None:
    _, part = calculation((100, 200), names=("Roof", "2"))
    part.methods.pasted_modes(PASTED, STORIES.replace("133.3", "233.3"), "P", **HOW)
    assert part["stories_hold"].line.verdict == NOT_OK


def test_pasted_modes_must_say_how_they_were_made() -> None:
    _, part = calculation((100, 200), names=("Roof", "2"))
    with pytest.raises(InputError, match=r"(?s)torsion: needed how the model treats it.*P_delta"):
        part.methods.pasted_modes(PASTED, STORIES, "P", directions="X and Y", torsion="", P_delta=" ")
    with pytest.raises(InputError, match=r"first column: needed the modes 1, 2 in order; given 1, 3"):
        part.methods.pasted_modes(PASTED.replace("\n2,", "\n3,"), STORIES, "P", **HOW)
    with pytest.raises(InputError, match=r"s_x2"):
        part.methods.pasted_modes(PASTED, "level, s_x1 [kip], d_x1 [in]\nRoof, 1, 1\n2, 1, 1", "P", **HOW)
