"""What a result rests on: every use drawn as an arrow, boxes legible, the nearest lines kept."""

from itertools import combinations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Polygon, Rectangle

from calckit import plots
from calckit.errors import InputError
from calckit.plots.chain import MOST
from calckit.plots.style import SIZE
from tests.plots import ink

LINES = {
    "h_n": (2, "h_n", "80 ft"),
    "w_x": (5, "w_x", "880 to 1100 kip"),
    "W": (6, "W", "6060 kip"),
    "X.C_t": (7, "X.C_t", "0.028"),
    "X.T_a": (9, "X.T_a", "0.9325 s"),
    "X.C_s": (11, "X.C_s", "0.04357"),
    "X.V": (12, "X.V", "264.0 kip"),
    "X.demo": (13, "X: Base shear at least 1 % of W", "OK"),
}
EDGES = [
    ("h_n", "X.T_a"), ("X.C_t", "X.T_a"), ("X.T_a", "X.C_s"), ("w_x", "W"), ("W", "X.V"), ("X.C_s", "X.V"),
    ("X.V", "X.demo"), ("W", "X.demo"),
]  # fmt: skip


def frames(figure: Figure) -> list[Rectangle]:
    """The boxes, from the top."""
    found = [artist for artist in figure.artists if isinstance(artist, Rectangle)]
    return sorted(found, key=lambda box: -box.get_y())


def wires(figure: Figure) -> list[tuple[tuple[float, float], tuple[float, float]]]:
    """The ends of every line beside the boxes."""
    right = frames(figure)[0].get_x() + frames(figure)[0].get_width()
    lines = [artist for artist in figure.artists if isinstance(artist, Line2D) and len(artist.get_xdata()) == 2]
    ends = [tuple(zip(line.get_xdata(), line.get_ydata(), strict=True)) for line in lines]
    return [(a, b) for a, b in ends if min(a[0], b[0]) >= right]


def uses(figure: Figure) -> set[tuple[int, int]]:
    """Rows of giver and user, traced along the drawn lines from every arrow head back to the box it came from."""
    boxes = frames(figure)
    right = boxes[0].get_x() + boxes[0].get_width()

    def row(y: float) -> int:
        return next(n for n, box in enumerate(boxes) if box.get_y() <= y <= box.get_y() + box.get_height())

    found = set()
    heads = [artist.get_xy()[0] for artist in figure.artists if isinstance(artist, Polygon)]
    across = [(min(a[0], b[0]), max(a[0], b[0]), a[1]) for a, b in wires(figure) if a[1] == b[1]]
    down = [(a[0], max(a[1], b[1]), min(a[1], b[1])) for a, b in wires(figure) if a[0] == b[0]]
    tips = {(round(x, 9), round(y, 9)) for x, y in heads}
    for start, end, y in across:
        if (round(start, 9), round(y, 9)) not in tips:
            continue
        (top,) = [top for x, top, low in down if x == pytest.approx(end) and low - 1e-9 <= y <= top + 1e-9]
        (origin,) = [out for begin, out_end, out in across if out_end == pytest.approx(end) and out == top]
        assert start == pytest.approx(right)
        found.add((row(origin), row(y)))
    return found


def test_every_use_is_an_arrow_from_input_to_user() -> None:
    figure = plots.dependency(LINES, EDGES, result="X.demo")
    place = {id_: n for n, id_ in enumerate(LINES)}
    assert uses(figure) == {(place[giver], place[user]) for giver, user in EDGES}
    assert len([artist for artist in figure.artists if isinstance(artist, Polygon)]) == len(EDGES)


def test_boxes_say_number_symbol_and_value() -> None:
    words = ink.words(plots.dependency(LINES, EDGES, result="X.demo"))
    assert words[:6] == ["2", "$h_{n}$", "80 ft", "5", "$w_{x}$", "880 to 1100 kip"]
    assert words[-3:] == ["13", "X: Base shear at least 1 % of W", "OK"]
    assert "X: $C_{s}$" in words


def test_only_what_the_result_rests_on_is_drawn_and_it_stands_last() -> None:
    figure = plots.dependency(LINES, EDGES, result="X.C_s")
    assert [word for word in ink.words(figure) if word.isdigit()] == ["2", "7", "9", "11"]
    weights = [box.get_linewidth() for box in frames(figure)]
    assert weights[-1] > max(weights[:-1])


def test_inputs_stand_above_whatever_the_order_given() -> None:
    lines = dict(reversed(LINES.items()))
    figure = plots.dependency(lines, EDGES, result="X.demo")
    order = [word for word in ink.words(figure) if word.isdigit()]
    for giver, user in EDGES:
        assert order.index(str(LINES[giver][0])) < order.index(str(LINES[user][0]))


def test_one_line_alone() -> None:
    figure = plots.dependency(LINES, [], result="h_n")
    assert ink.words(figure) == ["2", "$h_{n}$", "80 ft"]
    assert len(frames(figure)) == 1


def chain(count: int) -> tuple[dict[str, tuple[int, str, str]], list[tuple[str, str]]]:
    """`count` lines, each resting on the one before and on one of its own."""
    lines = {f"{stem}_{n}": (2 * n + place, f"{stem}_{n}", f"{n} kip") for n in range(count) for place, stem in
             enumerate("ab")}  # fmt: skip
    edges = [(f"b_{n - 1}", f"b_{n}") for n in range(1, count)] + [(f"a_{n}", f"b_{n}") for n in range(count)]
    return lines, edges


def test_of_many_lines_the_nearest_are_drawn_and_it_says_so() -> None:
    lines, edges = chain(40)
    figure = plots.dependency(lines, edges, result="b_39")
    words = ink.words(figure)
    drawn = len(frames(figure))
    assert drawn <= MOST
    assert f"{80 - drawn} of 80 lines, further from the result, are not drawn." in words
    numbers = {int(word) for word in words if word.isdigit()}
    missing = [{lines[giver][0] for giver, user in edges if user == id_} - numbers for id_, (n, *_) in lines.items()
               if n in numbers]  # fmt: skip
    expected = ["from " + ", ".join(map(str, sorted(some))) for some in missing if some]
    assert [word for word in words if word.startswith("from ")] == expected
    assert numbers >= set(range(79 - drawn + 2, 80)), "those with the fewest steps to the result"
    assert figure.get_size_inches()[1] <= 7.5


def test_many_that_feed_one_box_are_summed_up() -> None:
    lines = {f"a_{n}": (n, f"a_{n}", "1") for n in range(1, 61)} | {"s": (61, "s", "60")}
    figure = plots.dependency(lines, [(f"a_{n}", "s") for n in range(1, 61)], result="s")
    drawn = len(frames(figure)) - 1
    assert f"from {drawn + 1}, {drawn + 2}, {drawn + 3}, {drawn + 4} and {60 - drawn - 4} more" in ink.words(figure)


def legible(figure: Figure) -> None:
    """Nothing over anything, nothing off the sheet, black on white."""
    assert ink.overlaps(figure) == []
    assert ink.struck_through(figure) == []
    assert ink.outside(figure) == []
    width, height = figure.get_size_inches()
    assert (width, ink.smallest(figure)) == (6.5, SIZE)
    assert height <= 7.5
    boxes = [box.get_bbox() for box in frames(figure)]
    assert not any(one.overlaps(other) for one, other in combinations(boxes, 2))
    assert all(0 <= x <= width and 0 <= y <= height for ends in wires(figure) for x, y in ends)


@pytest.mark.parametrize("count", [1, 15, 40])
def test_look(count: int) -> None:
    lines, edges = chain(count)
    figure = plots.dependency(lines, edges, result=f"b_{count - 1}")
    legible(figure)
    assert ink.colors(plots.svg_bytes(figure)) <= {"#000000", "#ffffff"}
    again = plots.dependency(lines, edges, result=f"b_{count - 1}")
    assert plots.svg_bytes(figure) == plots.svg_bytes(again)


@given(st.data())
@settings(max_examples=15, deadline=None)
def test_any_uses_are_traced_back_from_the_drawing(data: st.DataObject) -> None:
    count = data.draw(st.integers(2, 14))
    pairs = list(combinations(range(count), 2))
    chosen = data.draw(st.lists(st.sampled_from(pairs), max_size=16, unique=True))
    edges = {*chosen, *((n, n + 1) for n in range(count - 1))}
    lines = {f"s_{n}": (n, f"s_{n}", f"{n} kip") for n in range(count)}
    figure = plots.dependency(lines, sorted((f"s_{a}", f"s_{b}") for a, b in edges), result=f"s_{count - 1}")
    legible(figure)
    assert uses(figure) == edges


def test_long_titles_are_cut_short() -> None:
    lines = {"a": (1, "X: " + "a long title " * 9, "moment frame: " + "steel " * 20)}
    figure = plots.dependency(lines, [], result="a")
    legible(figure)
    assert sum(word.endswith("...") for word in ink.words(figure)) == 2


@pytest.mark.parametrize(
    ("call", "match"),
    [
        (lambda: plots.dependency(LINES, EDGES, result="Y.V"), "lines: needed every line .*; given none for Y.V"),
        (lambda: plots.dependency(LINES, [("Z", "W")], result="W"), "given none for Z; cure: add the lines"),
        (
            lambda: plots.dependency(LINES, [*EDGES, ("X.V", "X.T_a")], result="X.V"),
            "edges: needed lines that do not rest on themselves; given X.T_a, X.C_s, X.V, X.demo; cure: leave out",
        ),
        (lambda: plots.dependency({"a": (1, "屋", "1")}, [], result="a"), "lines.*needed characters"),
    ],
)
def test_bad_input_is_refused(call, match) -> None:
    with pytest.raises(InputError, match=match):
        call()
