"""A table value at a knot is listed with both one-sided slopes: F_a for class C at S_S = 0.75 and C_u at S_D1 = 0.3."""

import pytest

from calckit.core.record import Record
from tests.building import GIVENS, Building
from tests.report.test_influence import effects, number

STEP = 1e-4


def at(**givens: str) -> Record:
    return Building({**GIVENS, **givens}).record()


@pytest.mark.parametrize(
    ("given", "here", "low", "high", "table", "result"),
    [("S_S", "0.75", "0.749925", "0.750075", "F_a", "S_DS"), ("S_1", "0.3", "0.29997", "0.30003", "X.C_u", "X.T_max")],
)
def test_a_table_knot_is_listed_with_both_slopes(
    given: str, here: str, low: str, high: str, table: str, result: str
) -> None:
    record = at(**{given: here})
    effect = effects(record, (result,))[given, ""][result]
    assert table in effect.ties
    for slope, moved, step in ((effect.less, low, -STEP), (effect.more, high, STEP)):
        other = at(**{given: moved})
        assert slope == pytest.approx((number(other, result) / number(record, result) - 1) / step, rel=2e-4)
    line = record.line(table)
    assert not line.forms and line.formula
