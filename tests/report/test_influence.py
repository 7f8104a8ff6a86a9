"""What matters: exact slopes against re-runs, ties, breaks and the reading order.

The reference is the kit's own second run with the input moved, and closed forms of the chain worked by hand: 1 % of a
story weight moves V = C_s W by that weight's share of W, 1 % of h_n moves C_s = S_D1/(C_t h_n^x R/I_e) by -x.
"""

from dataclasses import replace

import pytest

from calckit import Calc
from calckit.core.assemble import assemble
from calckit.core.record import Line, Operand, Record
from calckit.errors import InputError
from calckit.report import influence
from calckit.report.slopes import Break, Chain, Met, Seed
from tests.building import COLUMNS, GIVENS, NAMES, Building
from tests.template_runs import template

STEP = 1e-4
RESULTS = ("X.V", "Y.V", "X.F_x", "X.M_x", "Y.C_vx", "X.theta", "Y.theta", "X.C_sbasic", "T_S", "Y.drift")


def effects(record: Record, ids: tuple[str, ...]) -> dict[tuple[str, str], dict[str, influence.Effect]]:
    """(line, level) -> result -> effect."""
    rows = influence.table(record, ids)
    return {(row.line, row.level): {effect.result: effect for effect in row.effects} for row in rows}


def number(record: Record, id_: str) -> float:
    """A result; of a list, the row worked in full."""
    line = record.line(id_)
    value = line.value[line.rows.index(line.row)] if isinstance(line.value, list) else line.value
    assert isinstance(value, float)
    return value


def central(low: Record, here: Record, high: Record, id_: str) -> float:
    """Percent of the result per percent of an input that stands at 1 - STEP, 1 and 1 + STEP."""
    if here.line(id_).kind != "check":
        assert low.line(id_).row == here.line(id_).row == high.line(id_).row
    return (number(high, id_) - number(low, id_)) / (2 * STEP) / number(here, id_)


def moved(text: str, factor: float) -> str:
    numeral, _, unit = text.partition(" ")
    return f"{float(numeral) * factor:.10g} {unit}".strip()


def building(factor: float = 1.0, given: str = "", column: str = "", row: int = 0) -> Record:
    givens = dict(GIVENS)
    columns = {name: list(cells) for name, cells in COLUMNS.items()}
    if given:
        givens[given] = moved(givens[given], factor)
    if column:
        columns[column][row] = moved(columns[column][row], factor)
    return Building(givens, NAMES, columns).record()


@pytest.fixture(scope="module")
def here() -> Record:
    return building()


ENTRIES = [{"given": name} for name in ("S_S", "S_1", "T_L")] + [
    {"column": column, "row": row} for column, row in (
        ("h_x [ft]", 1), ("h_x [ft]", 5), ("w_x [kip]", 0), ("w_x [kip]", 4), ("X.delta_xe [in]", 2), ("P_x [kip]", 3),
    )
]  # fmt: skip


TIES: dict[tuple[str, str], list[tuple[str, str, str]]] = {("h_x", "6"): [("h_x", "6", "Y.drift")]}
"""The worst ratio of drift is that of two stories at once; the level between them moves the two apart."""


@pytest.mark.parametrize("entry", ENTRIES, ids=lambda entry: " ".join(map(str, entry.values())))
def test_slopes_equal_central_differences(entry: dict[str, str | int], here: Record) -> None:
    low, high = building(1 - STEP, **entry), building(1 + STEP, **entry)
    name = str(entry.get("given") or entry["column"]).split(" ")[0]
    level = NAMES[int(entry["row"])] if "row" in entry else ""
    found = effects(here, RESULTS)[name, level]
    ties = []
    for id_ in RESULTS:
        if here.line(id_).value is None:
            continue
        if found[id_].ties:
            ties.append((name, level, id_))
            continue
        assert found[id_].more == found[id_].less
        assert found[id_].more == pytest.approx(central(low, here, high, id_), rel=1e-6, abs=1e-7), id_
    assert ties == TIES.get((name, level), [])


def test_a_tie_of_the_worst_story_is_listed_with_both_slopes(here: Record) -> None:
    """Roof and story 6 drift alike, 0.20 in over 13 ft: the ratio only grows when the level between them is moved."""
    effect = effects(here, ("Y.drift",))["Y.delta_xe", "6"]["Y.drift"]
    assert effect.ties == ("Y.drift",)
    low, high = (building(factor, column="Y.delta_xe [in]", row=1) for factor in (1 - STEP, 1 + STEP))
    for side, moved_record in ((effect.less, low), (effect.more, high)):
        step = STEP if moved_record is high else -STEP
        assert side == pytest.approx((number(moved_record, "Y.drift") / number(here, "Y.drift") - 1) / step, rel=1e-6)
    assert effect.less is not None and effect.more is not None
    assert effect.less < 0 < effect.more


def test_slopes_equal_central_differences_of_the_notebook_run_again(tmp_path: object) -> None:
    ids = ("X.V", "Y.V", "S_DS", "X.F_x", "Y.M_x", "Y.system_permitted")
    here = template()
    found = effects(here, ids)
    for name in ("S_S", "S_1", "h_n"):
        low, high = (template({name: moved(str(here.line(name).shown), 1 + step)}) for step in (-STEP, STEP))
        for id_ in ids:
            slope = found[name, ""][id_].more
            assert slope == pytest.approx(central(low, here, high, id_), rel=1e-6, abs=1e-7), (name, id_)


def test_slopes_worked_by_hand() -> None:
    found = effects(template(), ("X.V", "Y.V"))
    assert found["w_x", "Roof"]["X.V"].more == pytest.approx(880 / 6060, rel=1e-9)
    assert found["h_n", ""]["X.V"].more == pytest.approx(-0.8, rel=1e-9)
    assert found["h_n", ""]["Y.V"].more == pytest.approx(-0.75, rel=1e-9)
    assert found["S_1", ""]["X.V"].more == pytest.approx(1.0, rel=1e-9)
    assert found["S_S", ""]["X.V"].more == 0.0


def test_one_story_weight_counts_as_one_input() -> None:
    rows = influence.table(template(), ["W"])
    assert [row.level for row in rows if row.line == "w_x"] == ["2", "6", "5", "4", "3", "Roof"]  # the heaviest first
    assert sum(row.effects[0].more or 0.0 for row in rows) == pytest.approx(1.0, rel=1e-12)


# --- ties


def dimensionless(expression: str, **values: str) -> Record:
    calc = Calc(project="Harbor Street Clinic")
    calc.document("D-1", title="All inputs")
    for name, value in values.items():
        calc.given(name, value, source="D-1", meaning=f"number {name}")
    calc.line("r", expression, meaning="result")
    return assemble(calc)


def test_a_tie_is_listed_with_both_slopes() -> None:
    record = dimensionless("1 if q <= 0.5 else 2 if q >= 2.5 else 1 + (q - 0.5)/(2.5 - 0.5)", q="0.5")
    effect = effects(record, ("r",))["q", ""]["r"]
    assert effect.ties == ("r",)
    assert (effect.less, effect.more) == (0.0, pytest.approx(0.25, rel=1e-12))  # dr/dq = 1/2; q/r = 1/2
    upper = dimensionless("1 if q <= 0.5 else 1 + (q - 0.5)/(2.5 - 0.5)", q="0.50005")
    lower = dimensionless("1 if q <= 0.5 else 1 + (q - 0.5)/(2.5 - 0.5)", q="0.49995")
    assert (number(upper, "r") - 1) / 1e-4 == pytest.approx(effect.more, rel=1e-6)
    assert number(lower, "r") == 1.0


@pytest.mark.parametrize(
    ("expression", "less", "more"),
    [("max(p, q)", 0.0, 1.0), ("min(p, q)", 1.0, 0.0), ("1 + abs(p - q)", -2.0, 2.0), ("max(p, 2*q, q)/p", -1.0, -1.0)],
)
def test_ties_of_functions(expression: str, less: float, more: float) -> None:
    effect = effects(dimensionless(expression, p="2", q="2"), ("r",))["p", ""]["r"]
    assert (effect.less, effect.more) == (pytest.approx(less), pytest.approx(more))


def test_a_tie_that_rounding_hides_is_a_tie() -> None:
    record = dimensionless("max(p, q*3)", p="1", q="0.333333333333")  # 12 digits are carried
    assert effects(record, ("r",))["p", ""]["r"].ties == ("r",)


def test_a_jump_has_no_slope_across_it() -> None:
    record = dimensionless("p if p <= 2 else 3*p", p="2")
    effect = effects(record, ("r",))["p", ""]["r"]
    assert (effect.less, effect.more) == (pytest.approx(1.0), None)
    assert effect.breaks == (Break("r", "the value jumps from 2 to 6 at p <= 2"),)


def test_the_nearest_switch_is_named_within_ten_percent() -> None:
    effect = effects(dimensionless("max(p, q)", p="2", q="1.9"), ("r",))["p", ""]["r"]
    assert effect.switch is not None
    assert (effect.switch.line, effect.switch.branch) == ("r", "max(p, q)")
    assert effect.switch.percent == pytest.approx(-5.0)
    assert effects(dimensionless("max(p, q)", p="2", q="1.7"), ("r",))["p", ""]["r"].switch is None


@pytest.mark.parametrize("expression", ["max(p, q, s)", "max(s, p, q)", "p + max(s, min(q, t))"])
def test_what_those_behind_meet_among_themselves_is_no_switch(expression: str) -> None:
    """q passes t at 5 % and p at 10.5 %, but s = 8 stands above them all: nothing changes over."""
    record = dimensionless(expression, p="2.1", q="1.9", s="8", t="1.995")
    assert effects(record, ("r",))["q", ""]["r"] == influence.Effect("r", 0.0, 0.0)


def test_the_switch_of_the_side_looked_at() -> None:
    """Upwards q is passed at 5 %; downwards s takes over at 2 %, which is nearer."""
    effect = effects(dimensionless("min(max(p, s), q)", p="2", q="2.1", s="1.96"), ("r",))["p", ""]["r"]
    assert effect.switch is not None
    assert effect.switch.percent == pytest.approx(-2.0)


# --- where the chain is broken


def test_a_value_typed_in_place_is_a_break() -> None:
    calc = Calc(project="Harbor Street Clinic", standard="ASCE 7-16")
    calc.document("D-1", title="All inputs")
    calc.given("h_n", "80 ft", source="D-1")
    x = calc.part("X")
    x.given("system", "moment frame: steel special moment frame", source="D-1")
    x.asce7.approximate_period(h_n="70 ft")
    record = assemble(calc)
    assert influence.breaks(record, ["X.T_a"]) == [Break("X.T_a", "h_n typed in place: 70 ft")]
    assert effects(record, ("X.T_a",))["h_n", ""]["X.T_a"].more == 0.0


def test_an_overridden_value_is_a_break_and_an_input() -> None:
    calc = Calc(project="Harbor Street Clinic")
    calc.document("D-1", title="All inputs")
    calc.given("p", "2", source="D-1", meaning="number p")
    calc.override("r", "5", reason="local amendment", by="A. Engineer")
    calc.line("r", "3*p", meaning="result")
    calc.line("t", "r**2", meaning="its square")
    record = assemble(calc)
    assert influence.breaks(record, ["t"]) == [Break("r", "overridden: 5 is in force, whatever stands above it")]
    found = effects(record, ("t",))
    assert (found["r", ""]["t"].more, found["p", ""]["t"].more) == (pytest.approx(2.0), 0.0)


def test_a_result_without_a_formula_or_with_a_wrong_one_is_a_break() -> None:
    record = dimensionless("3*p", p="2")
    lost = replace(record, lines=[replace(line, formula=None, kind="analysis") if line.id == "r" else line
                                  for line in record.lines])
    assert influence.breaks(lost, ["r"]) == [Break("r", "no formula is recorded (analysis)")]
    wrong = replace(record, lines=[replace(line, formula="4*p") if line.id == "r" else line for line in record.lines])
    assert influence.breaks(wrong, ["r"]) == [Break("r", "the recorded formula does not give the recorded value")]
    assert influence.breaks(record, ["r"]) == []


def test_a_slope_without_end_is_said() -> None:
    record = dimensionless("sqrt(p - 2) + 1", p="2")
    assert effects(record, ("r",))["p", ""]["r"].breaks == (Break("r", "the slope is not finite here"),)


def test_functions_of_one_number() -> None:
    record = dimensionless("sqrt(p) + exp(p) + log(p) + sin(p) + cos(p) + tan(p) + p**p + (-p)**2 - 1", p="1.3")
    low, high = (dimensionless(str(record.line("r").formula), p=f"{1.3 * factor}") for factor in (1 - STEP, 1 + STEP))
    slope = effects(record, ("r",))["p", ""]["r"].more
    assert slope == pytest.approx(central(low, record, high, "r"), rel=1e-6)


# --- what is asked, and the order


def test_reading_order() -> None:
    lines = [
        Line("a", "given", "a", value=1.0, shown="1", content="a"),
        Line("b", "given", "b", value=2.0, shown="2", content="b"),
        Line("word", "given", "word", value="C", shown="C", content="w"),
        Line("V", "computed", "V", value=5.0, formula="a + 2*b",
             inputs={"a": Operand(1.0, "", "1", "a"), "b": Operand(2.0, "", "2", "b")}),
    ]  # fmt: skip
    rows = influence.table(Record({}, lines), ["V"])
    assert [(row.line, row.size) for row in rows] == [("b", 0.8), ("a", 0.2), ("word", 0.0)]
    assert all(row.unsourced for row in rows)
    second = template()
    by_size = influence.table(second, ["X.V"])
    assert [row.size for row in by_size] == sorted((row.size for row in by_size), reverse=True)
    still = [(not row.unsourced, not row.unconfirmed) for row in by_size if not row.size]
    assert still == sorted(still)
    assert still[0] == (False, False)


def test_every_input_stands_in_the_table_once() -> None:
    record = template()
    rows = influence.table(record, influence.governing(record))
    assert len({(row.line, row.level) for row in rows}) == len(rows)
    inputs = {line.id for line in record.lines if line.kind == "given" or (line.kind == "judgment" and line.symbol)}
    assert {row.line for row in rows} == inputs
    assert "X.V" in influence.governing(record) and "X.R" not in influence.governing(record)


def test_ids_that_are_no_numbers_are_named_together() -> None:
    with pytest.raises(InputError, match=r"X.VV: needed the id of a line; given no such line.*\n.*SDC \(seismic"):
        influence.table(template(), ["X.VV", "SDC"])


def test_units_change_on_the_way() -> None:
    record = building()
    duals = Chain(record).follow("X.Delta_a", Seed("h_x", 0, 1), Met())
    assert duals[0].value == pytest.approx(0.015 * 13 * 12)
    assert duals[0].slope == pytest.approx(0.015 * 80 * 12 / 100)
