"""How every drawing looks: legible, black and white, nothing over anything, the same each time."""

import hashlib
import os
import subprocess
import sys
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from matplotlib.figure import Figure

from calckit import plots
from calckit.plots.style import SIZE, spread
from tests.plots import ink
from tests.plots.examples import DRAWINGS, LEVELS, UNITS


@pytest.fixture(params=DRAWINGS)
def drawing(request: pytest.FixtureRequest) -> Figure:
    """Each drawing in turn."""
    return DRAWINGS[request.param]


def test_no_text_over_another(drawing: Figure) -> None:
    assert ink.lettering(drawing)
    assert ink.overlaps(drawing) == []


def test_no_vertical_line_through_text(drawing: Figure) -> None:
    assert ink.struck_through(drawing) == []


def test_nothing_leaves_the_sheet(drawing: Figure) -> None:
    assert ink.outside(drawing) == []


def test_size_on_paper(drawing: Figure) -> None:
    # Letter and A4 sheets with 1 in margins leave 6.5 in and 6.27 in; the title block and the caption need height too
    width, height = drawing.get_size_inches()
    assert width == 6.5
    assert height <= 7.5
    assert ink.smallest(drawing) == SIZE
    assert SIZE * 6.27 / 6.5 >= 8.0


def test_black_on_white(drawing: Figure) -> None:
    assert ink.colors(plots.svg_bytes(drawing)) == {"#000000", "#ffffff"}


def test_svg_is_the_same_each_time_and_calls_nothing(drawing: Figure) -> None:
    svg = plots.svg_bytes(drawing)
    assert svg == plots.svg_bytes(drawing)
    assert b"<text" not in svg
    assert b"<image" not in svg
    assert b"<script" not in svg
    assert drawing._repr_svg_() == svg.decode()


def test_svg_is_the_same_in_another_process_with_other_settings(tmp_path) -> None:
    (tmp_path / "matplotlibrc").write_text("font.size: 20\nfont.family: serif\nlines.color: red\naxes.grid: True\n")
    code = (
        "from calckit import plots; from tests.plots.examples import DRAWINGS; import hashlib;"
        "[print(hashlib.sha256(plots.svg_bytes(d)).hexdigest()) for d in DRAWINGS.values()]"
    )
    env = os.environ | {"MATPLOTLIBRC": str(tmp_path), "PYTHONPATH": os.getcwd()}
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, env=env, check=True)
    assert run.stdout.split() == [hashlib.sha256(plots.svg_bytes(d)).hexdigest() for d in DRAWINGS.values()]


def test_png_is_the_same_each_time(drawing: Figure) -> None:
    assert plots.png_bytes(drawing, 50) == plots.png_bytes(drawing, 50)


def test_no_picture_window_is_opened() -> None:
    code = (
        "import sys; from calckit import plots; plots.svg_bytes(plots.design_spectrum([0, 1], [1, 1]));"
        "print('matplotlib' in sys.modules, 'matplotlib.pyplot' in sys.modules)"
    )
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert run.stdout == "True False\n"


def test_what_is_not_there_is_said_so() -> None:
    assert set(dir(plots)) == set(plots.__all__)
    assert all(getattr(plots, name).__name__ == name for name in plots.__all__)
    with pytest.raises(AttributeError, match=r"module 'calckit\.plots' has no attribute 'bar_chart'"):
        _ = plots.bar_chart


@given(st.lists(st.floats(0.5, 400), min_size=1, max_size=50, unique_by=lambda h: round(h, 1)))
@settings(max_examples=15, deadline=None)
def test_levels_at_any_heights_stay_legible(heights: list[float]) -> None:
    h_x = [round(h, 1) for h in sorted(heights, reverse=True)]
    levels = [f"L{i}" for i in range(len(h_x))]
    figure = plots.elevation(levels, h_x, h_x, **UNITS)
    assert ink.overlaps(figure) == []
    assert ink.outside(figure) == []


@given(st.dictionaries(st.sampled_from([f"X: T_{i}" for i in range(9)]), st.floats(0.001, 4), max_size=9))
@settings(max_examples=15, deadline=None)
def test_marks_at_any_periods_stay_legible(marks: dict[str, float]) -> None:
    figure = plots.design_spectrum([0, 4], [1, 0.2], marks=marks)
    assert ink.overlaps(figure) == []
    assert ink.struck_through(figure) == []
    assert ink.outside(figure) == []


@given(st.lists(st.floats(0, 10), min_size=1, max_size=10), st.floats(0.01, 1))
def test_spread_keeps_the_gap_the_order_and_the_bounds(places: list[float], gap: float) -> None:
    places = sorted(places, reverse=True)
    moved = spread(places, gap, 0, 10)
    assert all(upper - lower >= gap - 1e-8 for upper, lower in pairwise(moved))
    assert all(-1e-8 <= place <= 10 + 1e-8 for place in moved)
    if all(upper - lower >= gap for upper, lower in pairwise(places)):
        assert max(abs(a - b) for a, b in zip(places, moved, strict=True)) < 1e-8


def test_user_text_is_printed_as_it_stands() -> None:
    odd = ["$x^2$", *LEVELS[1:-1], "a_b\\frac"]
    figure = plots.level_forces(odd, [5, 4, 3, 2, 1], {"$P$ & Q": [1, 2, 3, 4, 5]}, **UNITS)
    assert {"$x^2$", "a_b\\frac", "$P$ & Q"} <= set(ink.words(figure))
    assert not any(text.get_parse_math() for text in ink.lettering(figure) if text.get_text() in (*odd, "$P$ & Q"))
