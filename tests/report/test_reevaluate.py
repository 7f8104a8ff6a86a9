"""Formulas evaluated again from the record: honest records pass, wrong values, operands and verdicts are named."""

from __future__ import annotations

import copy
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from calckit.core import nodes
from calckit.core.assemble import assemble
from calckit.core.parser import parse
from calckit.core.record import NOT_OK, OK, Line, Operand, Record, from_json
from calckit.report.reevaluate import DECLARED, OTHER, UNITLESS, Walk, counted, reevaluate
from tests.building import Building, metric

OWN_LINES = {
    "q1": ("sqrt(V**2 + (0.3*V)**2)", "kip"),
    "q2": ('level(F_x, "5")*level(h_x, "5")', "kip*ft"),
    "q3": ("exp(-C_s) + log(R) + sin(T/T_L) + cos(T/T_L) - tan(k/10)", ""),
    "q4": ("(V if V >= W/20 else W/20)*abs(1 - C_s)", "kip"),
    "q5": ('total(F_x*h_x) - (V - level(F_x, "Roof"))*h_n', "kip*ft"),
    "q6": ("above(w_x) - below(above(w_x))", "kip"),
    "q7": ("F_x*h_sx**2/h_n", "kip*ft"),
    "q8": ("-C_s + 2*(R - 10)/3", ""),
    "q9": ("max(V, W/20) - min(V, W/20)", "kip"),
    "q10": ("sum_F - V", "kip"),
}
"""A user's own lines; the last is a difference of equal numbers, where only what float arithmetic loses is left."""


def own_lines() -> Record:
    calc = Building().calc()
    part = calc.parts["X"]
    for name, (text, unit) in OWN_LINES.items():
        part.line(name, text, unit=unit, meaning="own line")
    part.check("q7", "<=", "q5", title="some rows not met")
    part.check("V", ">", "W", title="not met")
    return assemble(calc)


@pytest.fixture(scope="module")
def second() -> Record:
    return from_json(Building().record().to_json())


HONEST: dict[str, Callable[[], Record]] = {
    "US": lambda: Building().record(),
    "SI": lambda: Building().record(units="SI"),
    "typed in SI": lambda: metric(Building()).record(),
    "typed in SI, worked in SI": lambda: metric(Building()).record(units="SI"),
    "first pass": lambda: Building(second=False).record(),
    "own lines": own_lines,
}


@pytest.mark.parametrize("name", HONEST)
def test_honest_records(name: str) -> None:
    record = from_json(HONEST[name]().to_json())
    found = reevaluate(record)
    assert found.faults == []
    made = [line for line in record.lines if line.formula and line.verdict != "NOT CHECKED"]
    assert found.ways.total() == len(made) > 50
    assert found.checks == sum(line.kind == "check" for line in made)


def test_the_way_each_formula_goes(second: Record) -> None:
    def way(*ids: str) -> set[str]:
        return set(reevaluate(Record({}, [second.line(id_) for id_ in ids])).ways)

    assert way("X.V", "X.F_x", "X.M_x", "X.theta", "h_sx") == {OTHER}
    assert way("S_DS", "X.C_s", "X.T_max", "F_a") == {UNITLESS}
    # empirical in ASCE/SEI 7-16: T_a = C_t h_n^x takes h_n in feet (12.8.2.1), k takes T in seconds (12.8.3)
    assert way("X.T_a", "X.k", "X.wh_x", "T_S", "X.C_scap") == {DECLARED}


def test_the_account_in_words(second: Record) -> None:
    assert reevaluate(second).text() == (
        "62 formulas evaluated again, 7 of them checks; 14 candidates as in their lines\n"
        "25 in the other unit set, 27 without units of force or length, 10 in the declared units\n"
        "not made again: 1 check by a rule that is no relation of numbers"
    )
    assert [counted(n, "line") for n in (0, 1, 2)] == ["0 lines", "1 line", "2 lines"]


@pytest.mark.parametrize(
    ("node", "wrong", "ids"),
    [
        ("Power", lambda self, env: self.args[0].value(env) * self.args[1].value(env), {"X.T_a", "Y.T_a", "X.wh_x"}),
        ("Largest", lambda self, env: min(arg.value(env) for arg in self.args), {"X.C_sfloor", "X.C_s"}),
        ("Smallest", lambda self, env: max(arg.value(env) for arg in self.args), {"X.T"}),
        ("Total", lambda self, env: self.args[0].value(env.at(0)), {"W", "X.sum_F"}),
        ("Below", lambda self, env: self.args[0].value(env), {"h_sx"}),
    ],
)
def test_a_wrong_value_of_a_node_is_caught(
    node: str, wrong: Any, ids: set[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    # the kit works values and printed forms with the same nodes, so its own check of the digits cannot see it
    monkeypatch.setattr(getattr(nodes, node), "value", wrong)
    record = Building(second=node == "Smallest").record()
    monkeypatch.undo()
    assert ids <= {fault.split(", ")[1].split(":")[0] for fault in reevaluate(record).faults}


def altered(record: Record, change: Callable[[Record], None]) -> list[str]:
    changed = copy.deepcopy(record)
    change(changed)
    return reevaluate(changed).faults


def test_every_altered_value_is_named(second: Record) -> None:
    for place, line in enumerate(second.lines):
        if line.formula is None or line.value is None:
            continue
        changed = copy.deepcopy(second)
        value = changed.lines[place].value
        changed.lines[place].value = (
            [*value[:-1], value[-1] * (1 + 3e-9)] if isinstance(value, list) else float(value) * (1 + 3e-9) + 1e-9
        )
        faults = reevaluate(changed).faults
        assert any(fault.startswith(f"line {line.n}, {line.id}: recorded") for fault in faults), line.id


def test_an_altered_formula_or_operand(second: Record) -> None:
    def formula(record: Record) -> None:
        record.line("X.V").formula = "C_s*W*1.1"

    def operand(record: Record) -> None:
        record.line("X.V").inputs["W"].value = 6000.0

    def unit(record: Record) -> None:
        record.line("X.V").unit = "kip*ft"

    def given(record: Record) -> None:
        record.line("h_n").value = 90.0

    def gone(record: Record) -> None:
        record.lines.remove(record.line("S_S"))

    def not_read(record: Record) -> None:
        record.line("X.V").formula = "C_s*__import__"

    n, w = second.line("X.V").n, second.line("W").n
    faults = altered(second, formula)
    assert len(faults) == 1
    assert faults[0].startswith(f"line {n}, X.V: recorded ")
    assert " kip; in the other unit set C_s*W*1.1 gives " in faults[0]
    assert altered(second, operand)[0] == f"line {n}, X.V: takes W as 6000 kip, but line {w}, W is 6060 kip"
    assert f"line {n}, X.V: the kinds of quantity do not match, and no units are declared" in altered(second, unit)
    takes = {fault.split(": ")[1] for fault in altered(second, given)}
    assert "takes h_n as 80 ft, but line 6, h_n is 90 ft" in takes
    assert any("F_a: rests on S_S, which is not in the record" in fault for fault in altered(second, gone))
    assert altered(second, not_read) == [f"line {n}, X.V: cannot be evaluated again ('__import__')"]


def test_a_computed_line_needs_its_formula(second: Record) -> None:
    def bare(record: Record) -> None:
        record.line("X.V").formula = None

    assert altered(second, bare) == [f"line {second.line('X.V').n}, X.V: the record holds no formula of it"]


def test_an_override_leaves_the_computed_value_checked() -> None:
    line = Line("V", "computed", "V", value=300.0, unit="kip", shown="300 kip", formula="2*W", n=1)
    line.inputs = {"W": Operand(100.0, "kip", "100 kip")}
    line.computed = Operand(200.0, "kip", "200.0 kip")
    assert reevaluate(Record({}, [line])).faults == []
    line.computed.value = 300.0
    assert reevaluate(Record({}, [line])).faults == [
        "line 1, V: recorded 300 kip; in the other unit set 2*W gives 200 kip"
    ]


def test_checks_and_candidates(second: Record) -> None:
    drift = second.line("X.drift")
    assert drift.verdict == OK and drift.rows and drift.row

    def verdict(record: Record) -> None:
        record.line("X.drift").verdict = NOT_OK

    def ratio(record: Record) -> None:
        record.line("X.drift").value = 0.5

    def row(record: Record) -> None:
        line = record.line("X.drift")
        line.row = next(name for name in line.rows if name != line.row)

    def candidate(record: Record) -> None:
        record.line("X.C_s").candidates[0].shown = "0.1"

    def governs(record: Record) -> None:
        for place, one in enumerate(record.line("X.C_s").candidates):
            one.governs = place == 0

    assert altered(second, verdict) == [
        f"line {drift.n}, X.drift: recorded NOT OK; in the other unit set Delta <= Delta_a gives OK"
    ]
    assert "recorded ratio 0.5" in altered(second, ratio)[0]
    assert any("is said to be the worst row" in fault for fault in altered(second, row))
    assert "candidate 12.8-2 is 0.1, but line " in altered(second, candidate)[0]
    assert "candidate 12.8-2 is said to govern" in altered(second, governs)[0]


def test_rows_that_fail_are_named() -> None:
    record = own_lines()
    line = record.line("X.some_rows_not_met")
    assert reevaluate(record).faults == []
    if line.verdict == OK:
        line = record.line("X.not_met")
    assert line.verdict == NOT_OK
    line.verdict = OK
    assert any(fault.startswith(f"line {line.n}, {line.id}: recorded OK") for fault in reevaluate(record).faults)


def test_a_relation_as_near_as_the_record_can_tell() -> None:
    # the kit compares sides rounded to 12 digits: 0.1 + 0.2 <= 0.3 is met
    line = Line("c", "check", formula="a + b <= c", value=1.0, verdict=OK)
    line.inputs = {name: Operand(v, "", str(v)) for name, v in (("a", 0.1), ("b", 0.2), ("c", 0.3))}
    assert reevaluate(Record({}, [line])).faults == []


def test_the_walk() -> None:
    def value(text: str, row: int | None = None, **values: Any) -> Any:
        return Walk(parse(text), values, ("Roof", "3", "2"), float, lambda name, x: (name, x)).result(row)

    a = [1.0, 2.0, 4.0]
    assert value("total(a) - level(a, '3')", a=a) == 5.0
    assert [value("above(a) + 0*below(a)", row, a=a) for row in range(3)] == [1.0, 3.0, 7.0]
    assert [value("below(a)", row, a=a) for row in range(3)] == [2.0, 4.0, 0.0]
    assert value("1 if b < 2 else 3", b=2.0) == 3.0
    assert value("sqrt(b)", b=2.0) == ("sqrt", 2.0)
    assert value("-b**2", b=3.0) == -9.0
    with pytest.raises(ValueError, match="a is a list"):
        value("a", a=a)
    with pytest.raises(ValueError, match="above"):
        value("above(a)", a=a)
    with pytest.raises(ValueError, match="is no relation"):
        Walk(parse("1"), {}, (), float, abs).sides()


def test_independent_of_what_computes(tmp_path: Path) -> None:
    path = tmp_path / "record.json"
    path.write_text(Building(second=False).record().to_json(), encoding="utf-8")
    code = (
        "import sys; from calckit.core.record import from_json; from calckit.report.reevaluate import reevaluate; "
        "from calckit.report.digits_check import check_digits; record = from_json(open(sys.argv[1]).read()); "
        "print(len(reevaluate(record).faults), len(check_digits(record).faults)); "
        "print(*(m for m in sys.modules if m == 'sympy' or m.startswith('calckit.core.')))"
    )
    root = Path(__file__).parents[2]
    run = subprocess.run([sys.executable, "-c", code, str(path)], capture_output=True, text=True, check=True, cwd=root)
    assert run.stdout.splitlines() == ["0 0", "calckit.core.record calckit.core.parser"]
