"""Class of diaphragms and distribution in plan of ASCE/SEI 7.

The shares of rigid diaphragms are read in N. Taly, Design of Reinforced Masonry Structures, 2nd edition, Examples 7.12
and 7.13 (checks asce7.ex09 and asce7.ex10); here are the rules around them, and what must hold of every plan.
"""

from __future__ import annotations

import json
from collections.abc import Sequence
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calckit.core.assemble import assemble
from calckit.core.calc import Calc
from calckit.errors import InputError, ScopeError, UnknownNameError
from tests.printed_audit import audit

from .building import value
from .test_irregularity import BOTH, detail, flags, start

WALLS = "wall, x_i [ft], y_i [ft], k_ix, k_iy\nA, 0, 20, 0, 6\nB, 60, 20, 0, 4\nC, 30, 0, 4, 0\nD, 30, 40, 4, 0"


def plan(
    standard: str = "ASCE 7-16", units: str = "US", category: str = "D", walls: str = WALLS, V_px: str = "100 kip",
    V_py: str = "100 kip", **inputs: Any,
) -> Calc:  # fmt: skip
    """Four walls in a plan of 60 ft by 40 ft, center of mass in the middle."""
    forces = {name: raw for name, raw in (("V_px", V_px), ("V_py", V_py)) if raw}
    size = {"L_x": "60 ft", "L_y": "40 ft", "x_m": "30 ft", "y_m": "20 ft"}
    calc = start(standard, units, category, **forces | size | inputs)
    calc.rows("walls", walls, source="P")
    return calc


def checks(calc: Calc) -> dict[str, str]:
    """Verdicts of the sums of a plan."""
    lines = [entry.line for entry in calc.lines.entries.values() if entry.line.kind == "check"]
    return {line.id: line.verdict or "" for line in lines}


# rigid
def test_names_of_the_cases() -> None:
    calc = plan()
    calc.asce7.rigid_distribution()
    assert calc.lines.entries["M_pyplus"].line.meaning == "torsional moment: Y, mass shifted toward +X"
    assert calc.lines.entries["V_ixminus"].line.meaning == "force along x in element i: X, mass shifted toward −Y"


def test_sums_and_equilibrium_are_checked_in_every_case() -> None:
    calc = plan()
    calc.asce7.rigid_distribution()
    made = checks(calc)
    assert len(made) == 12 and set(made.values()) == {"OK"}


@pytest.mark.parametrize("standard", BOTH)
def test_torsion_that_helps_is_not_subtracted(standard: str) -> None:
    calc = plan(standard, category="B", V_px="")
    calc.asce7.rigid_distribution()
    direct, design = value(calc, "V_diry"), value(calc, "V_desy")
    # wall A, on the stiffer side: both shifts take force from it
    assert max(value(calc, "V_iyplus")[0], value(calc, "V_iyminus")[0]) < direct[0] == design[0] == 60
    assert design[1] == value(calc, "V_iyplus")[1] > direct[1]


def test_walls_across_the_force_take_torsion() -> None:
    calc = plan(category="B", V_px="")
    calc.asce7.rigid_distribution()
    # M = 900, C at 20 ft: 900*4*20/11840
    assert value(calc, "Q_ixplus")[2:] == pytest.approx([6.0810811, -6.0810811], abs=1e-7)
    assert value(calc, "V_desx")[2:] == pytest.approx([6.0810811, 6.0810811], abs=1e-7)


def test_trap_10_amplification_on_the_accidental_moment_only_and_not_iterated() -> None:
    plain, amplified = plan(category="B", V_px=""), plan(category="D", V_px="")
    for calc in (plain, amplified):
        calc.asce7.rigid_distribution()
    A_x = value(amplified, "A_py")
    ends = value(amplified, "u_1yplus"), value(amplified, "u_2yplus")
    assert value(plain, "A_py") == 1
    assert pytest.approx((max(ends) / (1.2 * sum(ends) / 2)) ** 2, rel=1e-9) == A_x and A_x > 1
    assert value(amplified, "M_pyplus") == pytest.approx(600 + A_x * 300, rel=1e-9)
    # displacements stay those of A_x = 1: nothing is iterated
    assert ends == (value(plain, "u_1yplus"), value(plain, "u_2yplus"))


def test_trap_10_amplification_between_1_and_3() -> None:
    # all rigidity of the walls along y in one place: the ends twist far more than allowed
    walls = "wall, x_i [ft], y_i [ft], k_ix, k_iy\nA, 30, 20, 0, 6\nC, 30, 19, 4, 0\nD, 30, 21, 4, 0"
    calc = plan(walls=walls, V_px="")
    calc.asce7.rigid_distribution()
    assert value(calc, "A_py") == 3


@pytest.mark.parametrize(
    ("category", "answer", "factor"),
    [("B", "", 1), ("B", "omit", 0), ("D", "omit", None), ("A", "omit", 0)],
)
def test_accidental_torsion_needed_or_left_out(category: str, answer: str, factor: float | None) -> None:
    calc = plan(category=category, V_px="")
    if answer:
        calc.answer("accidental_y", "omitted where permitted", basis="demo")
    calc.asce7.rigid_distribution()
    if factor is None:  # type H1a in category D: it is needed all the same
        assert value(calc, "A_py") > 1 and "not shown to be omissible" in flags(calc, "A_py")[0]
    else:
        assert value(calc, "A_py") == factor
    if factor == 0:
        assert value(calc, "M_pyplus") == value(calc, "M_pyminus") == 600


def test_accidental_torsion_is_not_left_out_in_the_later_edition() -> None:
    calc = plan("ASCE 7-22", category="B", V_px="")
    calc.answer("accidental_y", "omitted where permitted", basis="demo")
    calc.asce7.rigid_distribution()
    assert value(calc, "A_py") == 1 and flags(calc, "A_py")


def test_later_edition_asks_for_the_factor() -> None:
    calc = plan("ASCE 7-22", V_px="")
    calc.asce7.rigid_distribution()
    line = calc.lines.entries["elements_y"].line
    assert (
        line.verdict == "NOT CHECKED" and "how this edition amplifies accidental torsion is not known" in line.missing
    )
    assert calc.find("V_desy") is None
    calc = plan("ASCE 7-22", V_px="", A_py=1.1)
    calc.asce7.rigid_distribution()
    assert value(calc, "M_pyplus") == pytest.approx(930)


def stories(H1a: str = "no", category: str = "D") -> Calc:
    """Two levels, story shears in the parts X and Y, walls in the part P1."""
    calc = start(category=category)
    calc.levels("level, h_x [ft], w_x [kip]\nR, 24, 90\n1, 12, 100", source="P")
    for id_, factor in (("X", 1), ("Y", 2)):
        part = calc.part(id_, id_)
        part.rows(
            "shears",
            f"story, V_x [kip], F_x [kip]\nR, {50 * factor}, {50 * factor}\n1, {80 * factor}, {30 * factor}",
            source="P",
        )
        for name, word in (("H1a", H1a), ("H1b", "no")):
            if word:
                part.answer(name, word, basis="demo")
    p = calc.part("P1", "Story below level 1 in plan")
    p.givens("L_x, 60 ft, P\nL_y, 40 ft, P\nx_m, 30 ft, P\ny_m, 20 ft, P")
    p.rows("walls", WALLS, source="P")
    return calc


def test_forces_are_taken_from_the_parts_at_the_level() -> None:
    calc = stories()
    p = calc.part("P1")
    p.asce7.rigid_distribution("1", along_x="X", along_y="Y")
    assert (value(calc, "P1.V_px"), value(calc, "P1.V_py")) == (80, 160)
    assert value(calc, "P1.A_py") == 1
    assert "but Y.H1a reads no" in flags(calc, "P1.plan_y")[0]
    assert "its class is open" in calc.lines.entries["P1.J_R"].line.flags[0].text


def test_amplification_of_several_levels_comes_from_the_ends() -> None:
    calc = stories("yes")
    p, y = calc.part("P1"), calc.part("Y")
    p.asce7.rigid_distribution("1", along_y="Y")
    assert calc.lines.entries["P1.elements_y"].line.missing == "Y.A_x: supply it with asce7.end_displacements()"
    calc = stories("yes")
    p, y = calc.part("P1"), calc.part("Y")
    y.rows("ends", "level, d_1plus [in], d_2plus [in]\nR, 1.5, 0.5\n1, 0.65, 0.35", source="P")
    y.asce7.end_displacements()
    p.asce7.rigid_distribution("1", along_y="Y")
    assert value(calc, "P1.A_py") == pytest.approx((1.3 / 1.2) ** 2, rel=1e-9)
    calc = stories("")
    calc.part("P1").asce7.rigid_distribution("1", along_x="X")
    assert calc.lines.entries["P1.elements_x"].line.missing == "X.H1a, X.H1b: paste the ends, or answer them"


def test_plan_parts_are_no_columns_of_the_first_sheets() -> None:
    calc = stories()
    calc.part("X").given("rho", 1.0, source="P")
    calc.part("P1").asce7.rigid_distribution("1", along_x="X")
    assert {tuple(summary.columns) for summary in calc.standard.summaries(calc)} == {("X: X",)}


@pytest.mark.parametrize("kind", ["flexible", "semirigid"])
def test_rigid_distribution_of_another_class_is_refused(kind: str) -> None:
    calc = plan()
    calc.answer("diaphragm", kind, basis="demo")
    with pytest.raises(ScopeError, match=f"the diaphragm is {kind}; "):
        calc.asce7.rigid_distribution()


def test_bad_plans_name_every_fault() -> None:
    with pytest.raises(InputError, match=r"(?s)x_i.*y_i.*k_ix.*k_iy.*x_m.*y_m.*L_x.*L_y.*V_px.*V_py"):
        start().asce7.rigid_distribution()
    walls = "wall, x_i [ft], y_i [ft], k_ix, k_iy\nA, 61, 20, 0, 6\nB, 0, 41, 0, 4"
    with pytest.raises(InputError, match=r"(?s)x_i of A.*within the plan, 0 to 60 ft; given 61 ft.*k_ix.*y_i of B"):
        plan(walls=walls).asce7.rigid_distribution()
    calc = stories()
    with pytest.raises(InputError, match="needed one of R, 1; given '2'"):
        calc.part("P1").asce7.rigid_distribution("2", along_x="X")
    with pytest.raises(UnknownNameError, match="'Z'"):
        calc.part("P1").asce7.rigid_distribution("1", along_x="Z")


def test_same_plan_in_both_unit_sets() -> None:
    one, other = plan(units="US"), plan(units="SI")
    for calc in (one, other):
        calc.asce7.rigid_distribution()
    for name in ("V_desx", "V_desy"):
        kips = [entry / 4.4482216152605 for entry in value(other, name)]
        assert value(one, name) == pytest.approx(kips, rel=1e-11)
    assert value(one, "A_py") == pytest.approx(value(other, "A_py"), rel=1e-11)


@pytest.mark.parametrize("standard", BOTH)
@pytest.mark.parametrize("units", ["US", "SI"])
def test_every_printed_line_follows_from_what_is_printed(standard: str, units: str) -> None:
    calc = plan(standard, units, category="B" if standard == "ASCE 7-22" else "D")
    calc.asce7.rigid_distribution()
    p = calc.part("Q", "Bare deck")
    p.rows("lines", "line, b_i [ft]\n1, 20.5\n2, 50.25\n3, 29.25", source="P")
    p.rows("spans", "span, L_s [ft], d_s [m]\n1 to 2, 41, 9.1\n2 to 3, 59, 8.3", source="P")
    p.givens("V_p, 61.3 kip, P\nF_d, 207 kN, P")
    p.asce7.flexible_distribution()
    q = calc.part("X", "East-west")
    calc.levels(
        "level, h_x [ft], w_x [kip], X.delta_xe [in]\n"
        "R, 47, 77, 1.13\n3, 36, 91, 0.92\n2, 24, 93, 0.61\n1, 12, 97, 0.31",
        source="P",
    )
    columns = "story, V_x [kip], Delta [in], b_s [ft], V_ys [kip], K_d [kip/in]"
    rows = "R, 31, 1.1, 30, 117, 51\n3, 63, 1.5, 31, 97, 67\n2, 81, 1.4, 29, 88, 71\n1, 93, 1.7, 43, 71, 93"
    q.rows("stories", f"{columns}\n{rows}", source="P")
    header = "level, d_1plus [in], d_2plus [in], d_1minus [in], d_2minus [in]"
    q.rows(
        "ends",
        f"{header}\nR, 1.51, 0.93, 1.2, 1.27\n"
        "3, 1.1, 0.71, 0.9, 0.93\n2, 0.7, 0.41, 0.6, 0.63\n1, 0.3, 0.21, 0.25, 0.3",
        source="P",
    )
    q.answer("drift_waiver", "yes", basis="demo")
    q.givens("V, 93 kip, P\np_x, 7 ft, P\np_y, 9 ft, P\nA_open, 71 ft**2, P\nA_gross, 930 ft**2, P")
    q.asce7.end_displacements()
    q.asce7.irregularities()
    q.asce7.redundancy()
    record = json.loads(assemble(calc).to_json())
    found = audit(record)
    assert found.faults == []
    wanted = [line["id"] for line in record["lines"] if line["kind"] == "computed"]
    assert found.counts["computed line"] == len(wanted)
    # a column whose operands stand elsewhere is worked in another table
    lists = {line["id"]: {key for key, operand in line["inputs"].items() if isinstance(operand["shown"], list)}
             for line in record["lines"]}  # fmt: skip
    left = [text for text in found.skipped if "no relation of numbers" not in text]
    columns = {text.split()[1] for text in left if text.startswith("column ")}
    assert [text for text in left if not text.startswith("column ")] == []
    tables = [set(table["lines"]) for table in record["tables"]]
    assert [id_ for id_ in columns if not any({id_, *lists[id_]} <= table for table in tables)] == []
    assert found.counts["computed line"] >= 60


_REAL = st.floats(1, 9.5).map(lambda v: round(v, 2))
_PLACE = st.integers(0, 40)


@settings(max_examples=15, deadline=None)
@given(
    rigidities=st.lists(_REAL, min_size=4, max_size=4), places=st.lists(_PLACE, min_size=2, max_size=2),
    center=st.integers(12, 28), category=st.sampled_from("BD"),
)  # fmt: skip
def test_torsional_shears_are_in_equilibrium(
    rigidities: Sequence[float], places: Sequence[int], center: int, category: str
) -> None:
    a, b, c, d = rigidities
    rows = [f"A, 0, {places[0]}, 0, {a}", f"B, 60, {places[1]}, 0, {b}", f"C, 30, 0, {c}, 0", f"D, 10, 40, {d}, 0"]
    calc = plan(category=category, walls="\n".join(["wall, x_i [ft], y_i [ft], k_ix, k_iy", *rows]), y_m=f"{center} ft")
    calc.asce7.rigid_distribution()
    assert set(checks(calc).values()) == {"OK"}
    x, y = ([float(v) for v in value(calc, f"{axis}_i")] for axis in "xy")
    x_R, y_R = value(calc, "x_R"), value(calc, "y_R")
    for case, sign in (("plus", 1), ("minus", -1)):
        V, Q = value(calc, f"V_ix{case}"), value(calc, f"Q_iy{case}")
        assert sum(V) == pytest.approx(100, rel=1e-9) and sum(Q) == pytest.approx(0, abs=1e-7)
        turning = sum(f * (p - y_R) for f, p in zip(V, y, strict=True))
        turning -= sum(f * (p - x_R) for f, p in zip(Q, x, strict=True))
        moment = 100 * (center - y_R) + sign * value(calc, "A_px") * 0.05 * 40 * 100
        assert turning == pytest.approx(moment, abs=1e-6)
        assert 1 <= value(calc, "A_px") <= 3 and 1 <= value(calc, "A_py") <= 3
        largest = [max(abs(v), abs(w)) for v, w in zip(V, value(calc, f"Q_ix{case}"), strict=True)]
        assert all(most >= part - 1e-9 for most, part in zip(value(calc, "V_desx"), largest, strict=True))
    assert all(m >= v - 1e-9 for m, v in zip(value(calc, "V_desx"), value(calc, "V_dirx"), strict=True))


# class of diaphragms
@pytest.mark.parametrize("standard", BOTH)
@pytest.mark.parametrize(
    ("deflection", "word"), [("2 in", "semirigid"), ("2.01 in", "flexible"), ("51 mm", "flexible")]
)
def test_class_by_calculation(standard: str, deflection: str, word: str) -> None:
    calc = start(standard, delta_md=deflection, delta_ave="1 in")
    calc.asce7.diaphragm()
    assert value(calc, "diaphragm_found") == word


@pytest.mark.parametrize(
    ("made_of", "ratio", "H2", "word"),
    [
        ("concrete slab or filled deck", 3, "no", "rigid"), ("concrete slab or filled deck", 3.01, "no", "semirigid"),
        ("concrete slab or filled deck", 2, "yes", "semirigid"), ("none of these", 2, "no", "semirigid"),
        ("untopped steel deck or wood panels on concrete, masonry or braced steel", 2, "no", "flexible"),
        ("one- or two-family dwelling", 5, "no", "flexible"),
    ],
)  # fmt: skip
def test_class_by_description(made_of: str, ratio: float, H2: str, word: str) -> None:
    calc = start(r_sd=ratio)
    calc.answer("diaphragm_is", made_of, basis="demo")
    for name in ("H1a", "H1b", "H2", "H3", "H4", "H5"):
        calc.answer(name, H2 if name == "H2" else "no", basis="demo")
    calc.asce7.diaphragm()
    assert value(calc, "diaphragm_found") == word


def test_class_waits_for_answers_and_contradicts_aloud() -> None:
    calc = start(r_sd=2)
    calc.answer("diaphragm_is", "concrete slab or filled deck", basis="demo")
    calc.asce7.diaphragm()
    assert calc.lines.entries["diaphragm_open"].line.verdict == "NOT CHECKED"
    calc = start(delta_md="5 in", delta_ave="1 in")
    calc.answer("diaphragm", "rigid", basis="demo")
    calc.asce7.diaphragm()
    assert flags(calc, "diaphragm_found") == ["diaphragm is answered rigid; found flexible, and that is used"]
    with pytest.raises(InputError, match=r"(?s)diaphragm_is.*answer\(\.\.\.\).*delta_md"):
        start().asce7.diaphragm()
    with pytest.raises(InputError, match="delta_ave"):
        start(delta_md="5 in").asce7.diaphragm()


# flexible and semirigid
def flexible(lines: Sequence[float] = (20, 50, 30), force: str = "48 kip") -> Calc:
    """Three lines, two spans."""
    calc = start(V_p="60 kip", F_d=force)
    calc.rows("lines", "\n".join(["line, b_i [ft]", *(f"{n}, {b}" for n, b in enumerate(lines, 1))]), source="P")
    calc.rows("spans", "span, L_s [ft], d_s [ft]\n1 to 2, 40, 30\n2 to 3, 60, 30", source="P")
    return calc


def test_tributary_widths_must_cover_the_spans() -> None:
    calc = flexible((20, 50, 20))
    calc.asce7.flexible_distribution()
    assert checks(calc) == {"widths": "NOT OK", "sum_lines": "OK"}


def test_flexible_takes_story_shear_for_lines_and_level_force_for_the_diaphragm() -> None:
    calc = stories()
    p = calc.part("P1")
    p.answer("diaphragm", "flexible", basis="demo")
    p.rows("lines", "line, b_i [ft]\n1, 20\n2, 20", source="P")
    p.rows("spans", "span, L_s [ft], d_s [ft]\n1 to 2, 40, 30", source="P")
    p.asce7.flexible_distribution("1", direction="X")
    assert (value(calc, "P1.V_p"), value(calc, "P1.F_d")) == (80, 30)
    assert "the design force of the diaphragm (12.10.1) may be larger" in flags(calc, "P1.w_d")[0]
    assert value(calc, "P1.V_line") == [40, 40]


def test_flexible_refuses_and_names_what_is_missing() -> None:
    with pytest.raises(InputError, match=r"(?s)b_i.*L_s.*d_s.*V_p .*F_d "):
        start().asce7.flexible_distribution()
    calc = flexible()
    calc.answer("diaphragm", "rigid", basis="demo")
    with pytest.raises(ScopeError, match="is rigid, not flexible"):
        calc.asce7.flexible_distribution()


def test_pasted_forces_are_held_against_the_story_shear() -> None:
    calc = start(V_px="60 kip")
    calc.rows("model", "frame, V_ax [kip]\n1, 30\n2, 29.3", source="P")
    calc.asce7.pasted_distribution()
    assert checks(calc) == {"sum_x": "NOT OK"}
    with pytest.raises(InputError, match=r"(?s)V_ax.*V_ay"):
        start().asce7.pasted_distribution()


def test_reason_of_the_factor_is_said() -> None:
    calc = plan(category="B", V_px="")
    calc.asce7.rigid_distribution()
    assert detail(calc, "A_py") == "design category B, not amplified: 1"
