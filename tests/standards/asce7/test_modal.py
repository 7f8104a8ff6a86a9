"""12.9.1: each rule on a demo building of our own, and what must not happen."""

from __future__ import annotations

import json
from dataclasses import asdict
from typing import Any

import numpy as np
import pytest

from calckit import dynamics
from calckit.core.assemble import assemble
from calckit.core.calc import Calc
from calckit.core.record import NOT_CHECKED, NOT_OK, OK
from calckit.errors import InputError, ScopeError
from calckit.report.digits_check import check_digits
from calckit.report.reevaluate import reevaluate
from tests.core.session import Session
from tests.printed_audit import audit
from tests.standards.asce7.building import NAMES, open_flags, value, whole

K = (400.0, 500.0, 600.0, 700.0, 700.0)  # kip/in, roof first
NO = ("H1a", "H1b", "H4", "H5")
QUANTITIES = ("V_m", "F_xn", "V_xn", "M_xn", "delta_xn", "Delta_n")


def prepared(count: int | None = None, k: tuple[float, ...] = K, **inputs: Any) -> Calc:
    """The demo building worked to its static forces, with the modes of a stick."""
    calc = whole(**inputs)
    for name in NO:
        calc.answer(name, "no", basis="regular plan")
    calc.given("zeta", 0.05, source="P")
    calc.given("drift_class", "all other", source="P")
    calc.answer("rho", "1.0", basis="four bays")
    rows = "\n".join(f"{name}, {stiffness}" for name, stiffness in zip(NAMES, k, strict=True))
    calc.rows("stories", f"level, k_x [kip/in]\n{rows}", source="P")
    calc.methods.modes(count=count)
    return calc


def modal(count: int | None = None, **inputs: Any) -> Calc:
    """The whole modal analysis."""
    calc = prepared(count, **inputs)
    calc.asce7.modal_response()
    calc.methods.correlation()
    calc.methods.combine(*QUANTITIES)
    calc.asce7.drift()
    calc.asce7.modal_scaling()
    return calc


@pytest.fixture(scope="module")
def worked() -> Calc:
    return modal()


def test_modal_values_follow_from_the_spectrum(worked: Calc) -> None:
    S_DS, S_D1, T_S, T_L = (value(worked, name) for name in ("S_DS", "S_D1", "T_S", "T_L"))
    for T, S_a in zip(value(worked, "T_m"), value(worked, "S_am"), strict=True):
        assert value(worked, "T_0") < T < T_L
        assert S_a == pytest.approx(S_DS if T <= T_S else S_D1 / T, rel=1e-10)
    over = value(worked, "R") / value(worked, "I_e")
    assert value(worked, "C_sm") == pytest.approx([S_a / over for S_a in value(worked, "S_am")], rel=1e-10)


def test_each_mode_is_in_equilibrium(worked: Calc) -> None:
    heights = np.array(value(worked, "h_sx"))
    for number, V in enumerate(value(worked, "V_m"), 1):
        forces = np.array(value(worked, f"F_x{number}"))
        shears = np.cumsum(forces)
        assert shears[-1] == pytest.approx(V, rel=1e-9)
        assert value(worked, f"V_x{number}") == pytest.approx(shears.tolist(), rel=1e-9, abs=1e-9)
        assert value(worked, f"M_x{number}") == pytest.approx(np.cumsum(shears * heights).tolist(), rel=1e-9, abs=1e-9)
        # the elastic drift of a story is its shear over its stiffness
        elastic = shears / np.array(K) * value(worked, "C_d") / value(worked, "I_e")
        assert value(worked, f"Delta_{number}") == pytest.approx(elastic.tolist(), rel=1e-8, abs=1e-10)


def test_shears_and_drifts_are_combined_mode_by_mode(worked: Calc) -> None:
    periods = np.array(value(worked, "T_m"))
    for name, combined in (("V_x", "V_xt"), ("M_x", "M_xt"), ("Delta_", "Delta_t")):
        by_mode = np.array([value(worked, f"{name}{n}") for n in range(1, 6)])
        expected = dynamics.combine(by_mode, 1 / periods, 0.05)
        assert value(worked, combined) == pytest.approx(expected.tolist(), rel=1e-9)
    # from combined values they would be others
    from_forces = np.cumsum(value(worked, "F_xt"))
    assert max(abs(from_forces / value(worked, "V_xt") - 1)) > 0.01
    displaced = np.array(value(worked, "delta_xt"))
    from_displacements = displaced - np.append(displaced[1:], 0)
    assert max(abs(from_displacements / value(worked, "Delta_t") - 1)) > 0.01


def test_trap_11_forces_are_scaled_to_all_of_the_static_shear(worked: Calc) -> None:
    V, V_t = value(worked, "V"), value(worked, "V_t")
    assert V_t < 0.99 * V
    assert value(worked, "f_V") == pytest.approx(V / V_t, rel=1e-10)
    assert value(worked, "V_xd")[-1] == pytest.approx(V, rel=1e-9)
    assert value(worked, "F_xd") == pytest.approx([V / V_t * F for F in value(worked, "F_xt")], rel=1e-9)
    assert "100 % is asked for" in worked["f_V"].line.detail
    assert value(worked, "q_x")[-1] == pytest.approx(1, rel=1e-9)


def test_drifts_are_not_scaled_with_the_forces(worked: Calc) -> None:
    assert value(worked, "f_Delta") == 1
    assert value(worked, "Delta_d") == value(worked, "Delta_t")
    assert worked["modal_drift"].line.verdict in (OK, NOT_OK)


def test_no_factor_below_one() -> None:
    # stiff stories: every mode on the flat part, the static V at a period capped by C_u T_a is smaller
    calc = prepared(k=(20000.0,) * 5, T_analysis="2 s")
    calc.asce7.modal_response()
    calc.methods.combine("V_m", rule="SRSS")
    calc.asce7.modal_scaling()
    assert value(calc, "V_t") > value(calc, "V")
    assert value(calc, "f_V") == 1
    assert calc["modal_period"].line.verdict == OK


def test_trap_11_drifts_are_scaled_under_the_floor_by_S_1_alone() -> None:
    calc = modal(S_1=0.75, S_S=1.5, T_analysis="3 s", k=tuple(k / 20 for k in K))
    floor = value(calc, "C_sfloor1") * value(calc, "W")
    assert floor > value(calc, "V_t")
    assert value(calc, "f_Delta") == pytest.approx(floor / value(calc, "V_t"), rel=1e-10)
    assert value(calc, "f_V") > value(calc, "f_Delta")
    assert value(calc, "Delta_d")[0] == pytest.approx(value(calc, "f_Delta") * value(calc, "Delta_t")[0], rel=1e-10)


@pytest.mark.parametrize(("count", "verdict"), [(1, NOT_OK), (2, OK), (5, OK)])
def test_modes_enough(count: int, verdict: str) -> None:
    calc = prepared(count)
    calc.asce7.modal_response()
    line = calc["modes_enough"].line
    assert line.verdict == verdict
    assert (line.source is not None and "exception" in line.source.where) == (count < 5)


@pytest.mark.parametrize("name", NO)
def test_a_stick_is_refused_where_torsion_must_be_modeled(name: str) -> None:
    calc = whole()
    calc.answer(name, "yes", basis="plan")
    rows = "\n".join(f"{row}, {k}" for row, k in zip(NAMES, K, strict=True))
    calc.rows("stories", f"level, k_x [kip/in]\n{rows}", source="P")
    calc.methods.modes()
    with pytest.raises(ScopeError, match=rf"{name} answered yes, and a stick model has no torsion.*pasted_modes"):
        calc.asce7.modal_response()
    assert calc.find("V_m") is None


def test_unanswered_irregularities_leave_it_open() -> None:
    calc = whole()
    calc.answer("H1a", "no", basis="plan")
    rows = "\n".join(f"{row}, {k}" for row, k in zip(NAMES, K, strict=True))
    calc.rows("stories", f"level, k_x [kip/in]\n{rows}", source="P")
    calc.methods.modes()
    calc.asce7.modal_response()
    assert calc["modal_fit"].line.verdict == NOT_CHECKED
    assert calc["modal_fit"].line.missing == "answers H1b, H4, H5"


def test_stick_says_that_torsion_is_to_be_added(worked: Calc) -> None:
    assert any("accidental torsion" in text for text in open_flags(worked, "modal_fit"))


def test_modes_of_a_three_dimensional_analysis_are_taken() -> None:
    source = modal()
    calc = whole()
    for name in NO:
        calc.answer(name, "yes" if name == "H1a" else "no", basis="plan")
    calc.given("zeta", 0.05, source="P")
    calc.given("drift_class", "all other", source="P")
    calc.answer("rho", "1.0", basis="four bays")
    pairs = zip(value(source, "T_m"), value(source, "r_m"), strict=True)
    modes = "\n".join(f"{n}, {T:.9f}, {r:.9f}" for n, (T, r) in enumerate(pairs, 1))
    columns = [f"{stem}{n} [{unit}]" for n in range(1, 6) for stem, unit in (("s_x", "kip"), ("d_x", "in"))]
    body = "\n".join(
        ", ".join([row, *(f"{value(source, name.split()[0])[i]:.9f}" for name in columns)])
        for i, row in enumerate(NAMES)
    )
    calc.methods.pasted_modes(
        f"mode, T_m [s], r_m\n{modes}", f"level, {', '.join(columns)}\n{body}", "P", directions="X and Y",
        torsion="mass shifted by 5 percent", P_delta="in the stiffness",
    )  # fmt: skip
    calc.asce7.modal_response()
    assert calc["modal_fit"].line.verdict == OK and "mass shifted" in calc["modal_fit"].line.detail
    calc.methods.correlation()
    calc.methods.combine(*QUANTITIES)
    calc.asce7.modal_scaling()
    for name in ("f_V", "V_xd", "M_xd", "Delta_d"):
        assert value(calc, name) == pytest.approx(value(source, name), rel=1e-6)


def test_lines_stand_in_the_record_as_they_must(worked: Calc) -> None:
    record = assemble(worked)
    assert reevaluate(record).faults == [] and check_digits(record).faults == []
    assert audit(json.loads(json.dumps(asdict(record)))).faults == []


def test_same_answer_in_the_SI_set(worked: Calc) -> None:
    other = modal(units="SI")
    assert value(other, "f_V") == pytest.approx(value(worked, "f_V"), rel=1e-3)  # printed SI coefficients of T_a
    assert other["V_xd"].unit == "kN" and other["Delta_d"].unit == "mm"
    assert value(other, "q_x") == pytest.approx(value(worked, "q_x"), rel=2e-3)


def test_under_7_22() -> None:
    calc = Calc(project="Demo", standard="ASCE 7-22")
    calc.document("P", title="Demo data")
    calc.givens("V, 100 kip, P\nV_t, 80 kip, P\nS_1, 0.3, P\nW, 900 kip, P")
    factor, _ = calc.asce7.modal_scaling()
    assert factor.value == 1.25
    assert factor.line.source is not None and factor.line.source.text() == "ASCE/SEI 7-22 12.9.1.4.1"


def test_missing_inputs_are_named_together() -> None:
    calc = whole()
    with pytest.raises(InputError, match=r"(?s)r_sum.*methods\.modes\(\).*T_m.*W_m"):
        calc.asce7.modal_response()
    with pytest.raises(InputError, match=r'V_t .*methods\.combine\("V_m"'):
        calc.asce7.modal_scaling()


def test_modal_ordinates_under_exception_2_are_left_open() -> None:
    calc = prepared(site_class="D", supplements=(1,), study_exception="exception 2")
    calc.asce7.modal_response()
    assert any("exception 2" in text for text in open_flags(calc, "S_am"))


def test_first_sheets_name_the_procedure(worked: Calc) -> None:
    answer, drawings = assemble(worked).summaries
    cells = {row.label: row.cells for row in (*answer.rows, *drawings.rows)}
    assert cells["Analysis procedure"] == ["modal response spectrum"]
    assert cells["Base shear, modes combined"] == [worked["V_t"].shown]
    static = {row.label: row.cells for summary in assemble(whole()).summaries for row in summary.rows}
    assert static["Analysis procedure"] == ["equivalent lateral force"]
    assert "Base shear, modes combined" not in static


def test_drifts_are_judged_without_the_static_step() -> None:
    calc = prepared()
    calc.asce7.modal_response()
    calc.methods.correlation()
    calc.methods.combine("V_m", "Delta_n")
    calc.asce7.modal_scaling()
    assert calc["modal_drift"].line.verdict in (OK, NOT_OK)
    assert calc.find("drift") is None


def test_drifts_of_a_moment_frame_wait_for_rho() -> None:
    calc = prepared()
    del calc.lines.entries["rho"]
    calc.asce7.modal_response()
    calc.methods.correlation()
    calc.methods.combine("V_m", "Delta_n")
    calc.asce7.modal_scaling()
    assert calc["modal_drift"].line.verdict == NOT_CHECKED
    assert "redundancy factor" in calc["modal_drift"].line.missing


def test_cells_may_run_again(monkeypatch: pytest.MonkeyPatch) -> None:
    live = Session(monkeypatch)
    with live.cell("start"):
        calc = whole()
        for name in NO:
            calc.answer(name, "no", basis="regular plan")
        calc.given("zeta", 0.05, source="P")
        calc.given("drift_class", "all other", source="P")
        calc.answer("rho", "1.0", basis="four bays")
        rows = "\n".join(f"{name}, {stiffness}" for name, stiffness in zip(NAMES, K, strict=True))
        calc.rows("stories", f"level, k_x [kip/in]\n{rows}", source="P")
    cells = {
        "modes": calc.methods.modes,
        "response": calc.asce7.modal_response,
        "combine": lambda: (calc.methods.correlation(), calc.methods.combine(*QUANTITIES)),
        "scaling": calc.asce7.modal_scaling,
    }
    counts = []
    for _ in range(2):
        for key, step in cells.items():
            with live.cell(key):
                step()
        counts.append(list(calc.lines.entries))
    assert counts[0] == counts[1]
    assert {"g", "Delta_a", "r_Delta"} <= set(counts[1])
    assert calc.lines.stale() == {}
