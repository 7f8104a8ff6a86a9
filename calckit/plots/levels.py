"""Drawings of what belongs to levels and stories: the sketch of the structure, forces, shears, drifts.

Knows how levels stand to scale above the base and where their names and numbers go. Must not know how any of the
numbers came about. Levels, and the stories below them, are given roof first.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from decimal import Decimal
from itertools import pairwise
from math import ceil
from typing import Any

from matplotlib.axes import Axes
from matplotlib.lines import Line2D
from matplotlib.patches import Rectangle

from calckit.plots.arguments import Column, Numbers, Reader
from calckit.plots.style import (
    DASHED,
    HEAVY,
    LINE,
    PITCH,
    THIN,
    WIDTH,
    Drawing,
    letter,
    sheet,
    spread,
    typeset,
    width_of,
)

_EDGE, _GAP = 0.05, 0.14
_FOOT = 0.38
_LOWEST, _HIGHEST = 1.5, 6.4
_NARROWEST = 0.9
_HEAD = 11.0
"""Length of an arrow's head in points; a shorter arrow is drawn without one."""
_ARROW = {"shrinkA": 0, "shrinkB": 0, "lw": HEAVY, "fc": "black", "joinstyle": "miter", "mutation_scale": 10}


class _Elevation:
    """A drawing with levels to scale, their names and heights at the left, and the base below.

    Places are in inches from the lower left corner. `left` and `right` bound what is still free.
    """

    def __init__(self, drawing: Drawing, levels: Sequence[str], h_x: Column, base: str, length_unit: str, body: float):
        self.drawing, self.heights, self.body = drawing, h_x.values, body
        self.lines = [_FOOT + height / h_x.values[0] * body for height in h_x.values]
        self.middles = [(upper + lower) / 2 for upper, lower in pairwise((*self.lines, _FOOT))]
        self.heading = _FOOT + body + 1.5 * PITCH
        last = len(levels) - 1
        self.step = max(1, ceil(last * PITCH / (body - 0.6 * PITCH)))
        self.labeled = [i for i in range(0, last, self.step) if last - i >= self.step] + [last]
        heading = typeset("h_x", f" ({length_unit})")
        numbers = _EDGE + width_of(drawing, [*levels, base, "Level"]) + _GAP
        self.right = drawing.get_figwidth() - _EDGE
        self.left = numbers + width_of(drawing, [*h_x.shown, heading], math=True) + 0.05
        letter(drawing, _EDGE, self.heading, "Level")
        letter(drawing, _EDGE, _FOOT, base)
        letter(drawing, self.left - 0.05, _FOOT, "0", ha="right")
        for i, y in self.rows(self.lines):
            letter(drawing, _EDGE, y, levels[i])
        self.numbers(self.left - 0.05, h_x, self.lines, heading)
        self.left = self.leaders(self.left, self.left + 2 * _GAP)
        if self.step > 1:
            letter(drawing, _EDGE, 0.1, f"{len(self.labeled)} of {len(levels)} levels are labeled.")

    def rows(self, places: Sequence[float]) -> list[tuple[int, float]]:
        """Which entries get lettering and how high: all, or of very many every second, third, ... and the lowest."""
        low, high = _FOOT + PITCH, _FOOT + self.body + 0.4 * PITCH
        return list(zip(self.labeled, spread([places[i] for i in self.labeled], PITCH, low, high), strict=True))

    def numbers(self, x: float, column: Column, places: Sequence[float], heading: str) -> None:
        """A column of numerals that ends at `x`, beside `places`."""
        letter(self.drawing, x, self.heading, heading, math=True, ha="right")
        for i, y in self.rows(places):
            letter(self.drawing, x, y, column.shown[i], ha="right")

    def leaders(self, lettering: float, level: float) -> float:
        """Thin lines from the height of the lettering to the height of the level; returns where they end."""
        for i, y in self.rows(self.lines):
            self.line([lettering, level], [y, self.lines[i]], lw=THIN)
        return level

    def line(self, xs: Sequence[float], ys: Sequence[float], **options: Any) -> None:
        """A black line."""
        self.drawing.add_artist(Line2D(xs, ys, color="black", transform=self.drawing.dpi_scale_trans, **options))

    def level_lines(self, start: float, end: float, **options: Any) -> None:
        """A line at every level."""
        for y in self.lines:
            self.line([start, end], [y, y], **options)

    def ground(self, start: float, end: float) -> None:
        """The base, hatched below."""
        self.line([start, end], [_FOOT, _FOOT], lw=LINE)
        earth = Rectangle((start, _FOOT - 0.07), end - start, 0.07, fill=False, lw=0, hatch="//////")
        earth.set_transform(self.drawing.dpi_scale_trans)
        self.drawing.add_artist(earth)

    def key(self, styles: Mapping[str, Mapping[str, Any]]) -> None:
        """What each style of line stands for, below the base."""
        x = self.right
        for symbol, style in reversed(list(styles.items())):
            x -= width_of(self.drawing, [typeset(symbol)], math=True)
            letter(self.drawing, x, 0.1, typeset(symbol), math=True)
            self.line([x - 0.5, x - 0.08], [0.1, 0.1], **style)
            x -= 0.5 + 2 * _GAP

    def key_above(self, styles: Mapping[str, Mapping[str, Any]]) -> float:
        """What each style of line stands for, above the drawing from the left; returns where the key ends."""
        x, y = _EDGE, self.heading + 1.3 * PITCH
        for label, style in styles.items():
            self.line([x, x + 0.38], [y, y], **style)
            letter(self.drawing, x + 0.43, y, label)
            x += 0.43 + width_of(self.drawing, [label]) + _GAP
        return x - _GAP

    def axes(self, start: float, end: float, low: float, high: float) -> Axes:
        """Unframed axes between two places, with the heights of the levels as ordinates and `low` to `high` across."""
        width, height = self.drawing.get_size_inches()
        axes = self.drawing.add_axes((start / width, _FOOT / height, (end - start) / width, self.body / height))
        axes.set(xlim=(low, high), ylim=(0, self.heights[0]))
        axes.set_axis_off()
        return axes


@contextmanager
def _elevation(
    read: Reader, levels: Sequence[str], h_x: Column, base: str, length_unit: str, *, titled: bool = False
) -> Iterator[_Elevation]:
    read.words(base=base, length_unit=length_unit)
    read.done()
    body = min(max(_LOWEST, len(levels) * 1.2 * PITCH), _HIGHEST)
    with sheet(WIDTH, _FOOT + body + (3.4 if titled else 2.2) * PITCH) as drawing:
        yield _Elevation(drawing, levels, h_x, base, length_unit, body)


def elevation(
    levels: Sequence[str],
    h_x: Numbers,
    w_x: Numbers,
    *,
    length_unit: str,
    force_unit: str,
    title: str = "",
    base: str = "Base",
) -> Drawing:
    """Sketch of the structure: its levels to scale, with names, heights, story heights and weights.

    Arguments: `levels`, names, roof first; `h_x`, heights above the base in `length_unit`, and `w_x`, effective seismic
    weights in `force_unit`, one for each level, as numbers or as printed numerals; `title`, printed above; `base`, the
    name of the base. Raises InputError listing every bad argument. Widths are not to scale.

    >>> drawing = elevation(["Roof", "2"], [24, 13], [310, 455], length_unit="ft", force_unit="kip")
    >>> [text.get_text() for text in drawing.texts if text.get_text().isdigit()]
    ['0', '2', '24', '13', '11', '13', '310', '455']
    """
    read = Reader("plots.elevation")
    names = read.levels(levels)
    heights = read.heights(h_x, len(names))
    weights = read.column("w_x", w_x, len(names))
    read.words(force_unit=force_unit, title=title)
    with _elevation(read, names, heights, base, length_unit, titled=bool(title)) as sketch:
        drawing = sketch.drawing
        heading = typeset("w_x", f" ({force_unit})")
        stories = [format(Decimal(upper) - Decimal(lower), "f") for upper, lower in pairwise((*heights.shown, "0"))]
        weight_left = sketch.right - width_of(drawing, [*weights.shown, heading], math=True) - 0.05
        dimension = weight_left - 2 * _GAP - width_of(drawing, [*stories, f"Story ({length_unit})"]) - 0.07
        _room(read, dimension - sketch.left)
        start, end = sketch.left, dimension - 3 * _GAP
        inset = 0.12 * (end - start)
        sketch.level_lines(start, weight_left - 2 * _GAP, lw=THIN)
        sketch.level_lines(start + inset, end - inset, lw=HEAVY, solid_capstyle="butt")
        for x in (start + inset, end - inset):
            sketch.line([x, x], [_FOOT, sketch.lines[0]], lw=LINE)
        sketch.ground(start, dimension + 0.07)
        sketch.line([dimension, dimension], [_FOOT, sketch.lines[0]], lw=THIN)
        for y in (*sketch.lines, _FOOT):
            sketch.line([dimension - 0.035, dimension + 0.035], [y - 0.035, y + 0.035], lw=LINE)
        letter(drawing, dimension, sketch.heading, f"Story ({length_unit})")
        for text, y, (upper, lower) in zip(stories, sketch.middles, pairwise((*sketch.lines, _FOOT)), strict=True):
            if upper - lower >= PITCH:
                letter(drawing, dimension + 0.07, y, text)
        sketch.leaders(weight_left, weight_left - 2 * _GAP)
        sketch.numbers(sketch.right, weights, sketch.lines, heading)
        if title:
            letter(drawing, WIDTH / 2, sketch.heading + 1.3 * PITCH, title, ha="center", weight="bold")
    return drawing


def level_forces(
    levels: Sequence[str],
    h_x: Numbers,
    forces: Mapping[str, Numbers],
    *,
    force_unit: str,
    length_unit: str,
    symbol: str = "F_x",
    base: str = "Base",
) -> Drawing:
    """Lateral forces at the levels, drawn as arrows to one scale, the parts side by side.

    Arguments: `levels` and `h_x` as for `elevation`; `forces`, for each of one or two parts the forces in
    `force_unit`, one for each level, roof first, as numbers or as printed numerals; `symbol`, what the forces are
    called. Raises InputError listing every bad argument.

    >>> drawing = level_forces(["Roof", "2"], [24, 13], {"X": [61.2, 48.1]}, force_unit="kip", length_unit="ft")
    >>> [text.get_text() for text in drawing.texts if text.get_text().startswith("6")]
    ['61.2']
    """
    read = Reader("plots.level_forces")
    names = read.levels(levels)
    heights = read.heights(h_x, len(names))
    parts = read.parts("forces", forces, len(names))
    read.words(force_unit=force_unit, symbol=symbol)
    with _elevation(read, names, heights, base, length_unit, titled=True) as sketch:
        heading = typeset(symbol, f" ({force_unit})")
        for panel in _panels(read, sketch, {part: {heading: column} for part, column in parts.items()}):
            sketch.level_lines(panel.start, panel.end, lw=THIN)
            sketch.line([panel.zero, panel.zero], [_FOOT, sketch.lines[0]], lw=LINE)
            sketch.ground(panel.start, panel.end)
            for height, force in zip(heights.values, panel.columns[heading].values, strict=True):
                length = 72 * abs(force) * panel.scale
                style = _ARROW | {"arrowstyle": "-|>,head_length=0.8,head_width=0.3" if length > _HEAD else "-"}
                panel.axes.annotate("", xy=(force, height), xytext=(0, height), arrowprops=style)
            sketch.leaders(panel.end + 2 * _GAP, panel.end)
            sketch.numbers(panel.ends[heading], panel.columns[heading], sketch.lines, heading)
    return sketch.drawing


def story_shears(
    levels: Sequence[str],
    h_x: Numbers,
    shears: Mapping[str, Numbers],
    *,
    force_unit: str,
    length_unit: str,
    symbol: str = "V_x",
    base: str = "Base",
) -> Drawing:
    """Story shears as a step over the height, to one scale, the parts side by side.

    Arguments as for `level_forces`; `shears` has one entry for each story, named by the level at its top. Raises
    InputError listing every bad argument.

    >>> drawing = story_shears(["Roof", "2"], [24, 13], {"X": [61.2, 109.3]}, force_unit="kip", length_unit="ft")
    >>> drawing.axes[0].patches[0].get_data().values
    array([109.3,  61.2])
    """
    read = Reader("plots.story_shears")
    names = read.levels(levels)
    heights = read.heights(h_x, len(names))
    parts = read.parts("shears", shears, len(names))
    read.words(force_unit=force_unit, symbol=symbol)
    with _elevation(read, names, heights, base, length_unit, titled=True) as sketch:
        heading = typeset(symbol, f" ({force_unit})")
        for panel in _panels(read, sketch, {part: {heading: column} for part, column in parts.items()}):
            sketch.level_lines(panel.start, panel.end, lw=THIN)
            sketch.ground(panel.start, panel.end)
            panel.steps(heading, lw=HEAVY, baseline=0, hatch="//")
            sketch.numbers(panel.ends[heading], panel.columns[heading], sketch.middles, heading)
    return sketch.drawing


def drift_profile(
    levels: Sequence[str],
    h_x: Numbers,
    drifts: Mapping[str, Numbers],
    limits: Mapping[str, Numbers],
    *,
    length_unit: str,
    drift_unit: str,
    symbol: str = "Delta",
    limit_symbol: str = "Delta_a",
    base: str = "Base",
) -> Drawing:
    """Story drifts against what is allowed, as steps over the height to one scale, the parts side by side.

    Arguments: `levels` and `h_x` as for `elevation`; `drifts` and `limits`, for each of one or two parts one entry
    for each story, named by the level at its top, in `drift_unit`, as numbers or as printed numerals; `symbol` and
    `limit_symbol`, what the two are called. Raises InputError listing every bad argument.

    >>> drawing = drift_profile(["Roof", "2"], [24, 13], {"X": [1.81, 2.02]}, {"X": [2.64, 3.12]},
    ...                         length_unit="ft", drift_unit="in")
    >>> [patch.get_data().values.tolist() for patch in drawing.axes[0].patches]
    [[2.02, 1.81], [3.12, 2.64]]
    """
    read = Reader("plots.drift_profile")
    names = read.levels(levels)
    heights = read.heights(h_x, len(names))
    parts = read.parts("drifts", drifts, len(names))
    allowed = read.parts("limits", limits, len(names))
    if list(parts) != list(allowed):
        needed = f"the parts of drifts, {', '.join(parts)}"
        read.fault("limits", needed, ", ".join(allowed), "give both for the same parts")
    read.words(drift_unit=drift_unit, symbol=symbol, limit_symbol=limit_symbol)
    with _elevation(read, names, heights, base, length_unit, titled=True) as sketch:
        unit = f" ({drift_unit})"
        drift, limit = typeset(symbol, unit), typeset(limit_symbol, unit)
        for panel in _panels(read, sketch, {part: {drift: parts[part], limit: allowed[part]} for part in parts}):
            sketch.level_lines(panel.start, panel.end, lw=THIN)
            sketch.ground(panel.start, panel.end)
            sketch.line([panel.zero, panel.zero], [_FOOT, sketch.lines[0]], lw=LINE)
            panel.steps(drift, lw=HEAVY)
            panel.steps(limit, lw=LINE, ls=DASHED)
            for heading, end in panel.ends.items():
                sketch.numbers(end, panel.columns[heading], sketch.middles, heading)
        sketch.key({symbol: {"lw": HEAVY}, limit_symbol: {"lw": LINE, "ls": DASHED}})
    return sketch.drawing


MOST_MODES = 5
_MODE_STYLES = ((0, (5, 2.5)), (0, (1, 2)), (0, (6, 2, 1, 2)), (0, (1, 1)), (0, (8, 4)))


def mode_shapes(
    levels: Sequence[str], h_x: Numbers, shapes: Mapping[str, Numbers], *, length_unit: str, base: str = "Base"
) -> Drawing:
    """Mode shapes over the height, side by side, each to its own scale.

    Arguments: `levels` and `h_x` as for `elevation`; `shapes`, for each of one to five modes its label -> the
    displacement of each level. Raises InputError listing every bad argument.

    >>> drawing = mode_shapes(["Roof", "2"], [24, 13], {"1": [1, 0.6], "2": [1, -1.7]}, length_unit="ft")
    >>> drawing.axes[1].lines[0].get_xdata().tolist()
    [1.0, -1.7, 0.0]
    """
    read = Reader("plots.mode_shapes")
    names = read.levels(levels)
    heights = read.heights(h_x, len(names))
    modes = _modes(read, "shapes", shapes, len(names))
    with _elevation(read, names, heights, base, length_unit, titled=True) as sketch:
        pitch = (sketch.right - sketch.left + _GAP) / len(modes)
        _room(read, (sketch.right - sketch.left) / 2)
        for place, (label, column) in enumerate(modes.items()):
            start = sketch.left + place * pitch
            end = start + pitch - _GAP
            sketch.level_lines(start, end, lw=THIN)
            sketch.ground(start, end)
            largest = 1.1 * max(map(abs, column.values)) or 1.0
            axes = sketch.axes(start, end, -largest, largest)
            axes.plot([*column.values, 0.0], [*heights.values, 0.0], "-o", color="black", lw=HEAVY, ms=3, clip_on=False)
            axes.plot([0, 0], [0, heights.values[0]], color="black", lw=THIN)
            letter(sketch.drawing, (start + end) / 2, sketch.heading + 1.3 * PITCH, f"Mode {label}", ha="center")
    return sketch.drawing


def modal_shears(
    levels: Sequence[str],
    h_x: Numbers,
    by_mode: Mapping[str, Numbers],
    combined: Numbers,
    *,
    force_unit: str,
    length_unit: str,
    symbol: str = "V_x",
    base: str = "Base",
) -> Drawing:
    """Story shears of single modes, with their signs, and of the modes combined, as steps over the height.

    Arguments as for `mode_shapes`; `by_mode`, for each of one to five modes its label -> the shear of each story, named
    by the level at its top; `combined`, that of the modes together. Raises InputError listing every bad argument.

    >>> drawing = modal_shears(["Roof", "2"], [24, 13], {"1": [40, 70], "2": [-12, 9]}, [42, 71],
    ...                        force_unit="kip", length_unit="ft")
    >>> [patch.get_data().values.tolist() for patch in drawing.axes[0].patches]
    [[70.0, 40.0], [9.0, -12.0], [71.0, 42.0]]
    """
    read = Reader("plots.modal_shears")
    names = read.levels(levels)
    heights = read.heights(h_x, len(names))
    modes = _modes(read, "by_mode", by_mode, len(names))
    together = read.column("combined", combined, len(names))
    read.words(force_unit=force_unit, symbol=symbol)
    with _elevation(read, names, heights, base, length_unit, titled=True) as sketch:
        heading = typeset(symbol, f" ({force_unit})")
        column = max(width_of(sketch.drawing, [heading], math=True), width_of(sketch.drawing, together.shown))
        start, end = sketch.left, sketch.right - column - 2 * _GAP
        _room(read, end - start)
        every = [0.0, *together.values, *(value for one in modes.values() for value in one.values)]
        low, high = min(every), max(every)
        high = high if high > low else low + 1
        axes = sketch.axes(start, end, low, high)
        edges = (0.0, *heights.values[::-1])
        sketch.level_lines(start, end, lw=THIN)
        sketch.ground(start, end)
        zero = start - low / (high - low) * (end - start)
        sketch.line([zero, zero], [_FOOT, sketch.lines[0]], lw=LINE)
        styles = {f"Mode {label}": {"lw": LINE, "ls": style} for label, style in zip(modes, _MODE_STYLES, strict=False)}
        styles["combined"] = {"lw": HEAVY}
        for one, style in zip([*modes.values(), together], styles.values(), strict=True):
            axes.stairs(one.values[::-1], edges, orientation="horizontal", color="black", clip_on=False, baseline=None,
                        **style)  # fmt: skip
        sketch.numbers(sketch.right, together, sketch.middles, heading)
        if sketch.key_above(styles) > sketch.right:
            read.fault("by_mode", "labels that fit on one line", ", ".join(modes), "shorten the labels")
            read.done()
    return sketch.drawing


def _modes(read: Reader, name: str, columns: Mapping[str, Numbers], count: int) -> dict[str, Column]:
    if not isinstance(columns, Mapping) or not 1 <= len(columns) <= MOST_MODES:
        given = f"{len(columns)}" if isinstance(columns, Mapping) else type(columns).__name__
        read.fault(name, f"1 to {MOST_MODES} modes with their numbers", given, 'give a mapping like {"1": [...]}')
        return {}
    for label in columns:
        read.words(**{name: str(label)})
    return {str(label): read.column(f"{name}[{label!r}]", values, count) for label, values in columns.items()}


@dataclass(frozen=True)
class _Panel:
    """The drawing of one part: axes from `start` to `end`, then one column of numerals for each heading."""

    axes: Axes
    start: float
    end: float
    zero: float
    scale: float
    heights: Sequence[float]
    columns: Mapping[str, Column]
    ends: Mapping[str, float]

    def steps(self, heading: str, **options: Any) -> None:
        """One value for each story, as a step over the height."""
        values, edges = self.columns[heading].values, (0.0, *self.heights[::-1])
        self.axes.stairs(values[::-1], edges, orientation="horizontal", color="black", clip_on=False, **options)


def _panels(read: Reader, sketch: _Elevation, parts: Mapping[str, Mapping[str, Column]]) -> list[_Panel]:
    """Panels side by side, all with one scale."""
    drawing, headings = sketch.drawing, list(next(iter(parts.values())))
    widths = [width_of(drawing, [heading], math=True) for heading in headings]
    for i, heading in enumerate(headings):
        widths[i] = max(widths[i], *(width_of(drawing, columns[heading].shown) for columns in parts.values()))
    pitch = (sketch.right - sketch.left + 2 * _GAP) / len(parts)
    graph = pitch - 2 * _GAP - sum(width + _GAP for width in widths) - _GAP
    _room(read, graph)
    if width_of(drawing, parts, weight="bold") > pitch - 2 * _GAP:
        read.fault("parts", "names that fit above their drawings", ", ".join(parts), "shorten the names")
        read.done()
    every = [value for columns in parts.values() for column in columns.values() for value in column.values]
    low, high = min(0.0, *every), max(0.0, *every)
    high = high if high > low else low + 1
    panels = []
    for n, (part, columns) in enumerate(parts.items()):
        start = sketch.left + n * pitch
        ends = [start + pitch - 2 * _GAP - sum(width + _GAP for width in widths[i + 1 :]) for i in range(len(widths))]
        axes = sketch.axes(start, start + graph, low, high)
        scale = graph / (high - low)
        panels.append(_Panel(axes, start, start + graph, start - low * scale, scale, sketch.heights, columns,
                             dict(zip(headings, ends, strict=True))))  # fmt: skip
        letter(drawing, start, sketch.heading + 1.3 * PITCH, part, weight="bold")
    return panels


def _room(read: Reader, width: float) -> None:
    if width < _NARROWEST:
        read.fault("levels", "names that leave room for the drawing", f"names {_NARROWEST - width:.1f} in too wide",
                   "shorten the names of the levels")  # fmt: skip
        read.done()
