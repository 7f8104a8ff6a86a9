"""Expression texts made at random, with the numbers their names stand for."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

from hypothesis import strategies as st

ROWS = ["Roof", "3", "2"]
SCALARS = ("a", "b", "T_a", "h_n")
LISTS = ("F_x", "w_x")
NUMBERS = st.decimals(min_value=-9, max_value=9, places=2).filter(bool)


@st.composite
def values(draw: st.DrawFn) -> dict[str, Any]:
    """A number for every single name, and one a row for every list."""
    found: dict[str, Any] = {name: draw(NUMBERS) for name in SCALARS}
    return found | {name: [draw(NUMBERS) for _ in ROWS] for name in LISTS}


def _over_rows(inner: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    return st.one_of(
        st.tuples(st.sampled_from(["total", "above", "below"]), inner).map(lambda p: f"{p[0]}({p[1]})"),
        st.tuples(inner, st.sampled_from(ROWS)).map(lambda p: f'level({p[0]}, "{p[1]}")'),
    )


def _grown(inner: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    sign = st.sampled_from(["+", "-", "*", "/"])
    relation = st.sampled_from(["<", "<=", ">", ">="])
    return st.one_of(
        st.tuples(inner, sign, inner).map(lambda p: f"{p[0]} {p[1]} {p[2]}"),
        st.tuples(inner, sign, inner).map(lambda p: f"({p[0]}) {p[1]} ({p[2]})"),
        inner.map(lambda text: f"-({text})"),
        st.tuples(inner, st.sampled_from(["2", "3", "(1 + 1)", "(2/1)"])).map(lambda p: f"({p[0]})**{p[1]}"),
        inner.map(lambda text: f"sqrt(abs({text}))"),
        inner.map(lambda text: f"abs({text})"),
        st.tuples(st.sampled_from(["min", "max"]), inner, inner).map(lambda p: f"{p[0]}({p[1]}, {p[2]})"),
        st.tuples(inner, inner, relation, inner, inner).map(lambda p: f"({p[0]} if {p[1]} {p[2]} {p[3]} else {p[4]})"),
    )


LITERALS = st.decimals(min_value="0.1", max_value=9, places=1).map(str)
SINGLE = st.recursive(st.one_of(st.sampled_from(SCALARS), LITERALS), _grown, max_leaves=8)
"""Expressions of single numbers."""
_LISTED = st.recursive(st.one_of(st.sampled_from(LISTS), st.sampled_from(SCALARS)), _grown, max_leaves=4)
OVER_ROWS = st.recursive(st.one_of(_over_rows(_LISTED), st.sampled_from([*LISTS, *SCALARS])), _grown, max_leaves=5)
"""Expressions with lists, worked in one row."""


def floats(numbers: dict[str, Any]) -> dict[str, Any]:
    """The same numbers as floats."""
    return {name: [float(v) for v in value] if isinstance(value, list) else float(value)
            for name, value in numbers.items()}  # fmt: skip


def shown(value: Decimal) -> str:
    """A number in plain digits."""
    return format(value, "f")
