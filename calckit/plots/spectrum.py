"""Drawing of a spectrum with the periods that matter marked on it.

Knows how a curve over the period is drawn and how labels above it keep clear of each other. Must not know how the
ordinates came about.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from matplotlib.lines import Line2D

from calckit.plots.arguments import Numbers, Reader
from calckit.plots.style import (
    DASHED,
    DOTTED,
    HEAVY,
    LINE,
    PITCH,
    SIZE,
    THIN,
    WIDTH,
    Drawing,
    letter,
    sheet,
    typeset,
    width_of,
)

_LEFT, _FOOT, _BODY, _EDGE = 0.62, 0.48, 2.1, 0.1
_PAD = 0.05
_POLE = 0.7
_NARROWEST = 2.0


@dataclass
class _Flag:
    """A label at the head of a pole that stands at a period."""

    text: str
    period: float
    length: float
    mark: bool
    x: float = 0.0
    row: int = 0


def design_spectrum(
    T: Numbers,  # noqa: N803
    S_a: Numbers,  # noqa: N803
    *,
    corners: Mapping[str, float | str] | None = None,
    marks: Mapping[str, float | str] | None = None,
    symbol: str = "S_a",
    unit: str = "g",
) -> Drawing:
    """A spectrum: ordinates over the period, its corner periods, and the periods of the structure on the curve.

    Arguments: `T`, periods in s, rising from 0 or above, the corners among them so that the drawn line is exact there;
    `S_a`, one ordinate in `unit` for each; `corners` and `marks`, label -> period in s within the drawn range, printed
    with its value (a numeral given as text is printed as it stands); `symbol`, what the ordinates are called. Raises
    InputError listing every bad argument.

    >>> T, S_a = [0, 0.12, 0.6, 2, 4], [0.4, 1, 1, 0.3, 0.15]
    >>> drawing = design_spectrum(T, S_a, corners={"T_S": 0.6}, marks={"X: T_a": 0.76})
    >>> [text.get_text() for text in drawing.texts]
    ['X: $T_{a}$ = 0.76 s', '$T_{S}$ = 0.6 s']
    """
    read = Reader("plots.design_spectrum")
    periods = read.column("T", T, len(T)).values
    ordinates = read.column("S_a", S_a, len(T)).values
    if len(periods) < 2 or periods[0] < 0 or any(later <= earlier for earlier, later in pairwise(periods)):
        read.fault("T", "two or more periods from 0 up, each longer than the one before", f"{len(T)} periods",
                   "sort the periods and drop repeated ones")  # fmt: skip
    if min(ordinates, default=0.0) < 0:
        read.fault("S_a", "ordinates not below 0", f"{min(ordinates):g}", "correct the ordinates")
    read.words(symbol=symbol, unit=unit)
    longest = max(periods, default=0.0)
    labels = [(*entry, True) for entry in read.periods("marks", marks or {}, longest)]
    labels += [(*entry, False) for entry in read.periods("corners", corners or {}, longest)]
    read.done()
    with sheet(WIDTH, 1.0) as drawing:
        flags = []
        for label, period, shown, mark in sorted(labels, key=lambda entry: entry[1])[::-1]:
            text = typeset(label, f" = {shown} s")
            flags.append(_Flag(text, period, width_of(drawing, [text], math=True), mark))
        width = min([WIDTH - _LEFT - _EDGE - 0.15, *(_width_for(flag, longest) for flag in flags)])
        if width < _NARROWEST:
            read.fault("marks, corners", "labels short enough to stand beside their marks",
                       max(flags, key=lambda flag: flag.length).text, "shorten the label")  # fmt: skip
            read.done()
        _stack(flags, lambda period: _LEFT + period / longest * width)
        top = _FOOT + _BODY + 0.1
        drawing.set_size_inches(WIDTH, top + (max((flag.row for flag in flags), default=-1) + 1) * PITCH + _EDGE)
        _curve(drawing, periods, ordinates, width, typeset(symbol, f" ({unit})"))
        for flag in flags:
            y = top + (flag.row + 0.5) * PITCH
            pole = Line2D([flag.x, flag.x], [_FOOT, y + 0.3 * PITCH], color="black", transform=drawing.dpi_scale_trans)
            pole.set(lw=_POLE, ls=DASHED if flag.mark else DOTTED)
            drawing.add_artist(pole)
            letter(drawing, flag.x + _PAD, y, flag.text, math=True)
        on_curve = [flag.period for flag in flags if flag.mark]
        drawing.axes[0].plot(on_curve, np.interp(on_curve, periods, ordinates), "o", ms=5, mfc="white", mec="black",
                             mew=LINE, clip_on=False, zorder=4)  # fmt: skip
    return drawing


def _width_for(flag: _Flag, longest: float) -> float:
    """The widest axes that leave room for the label at the right of its mark."""
    return (WIDTH - _EDGE - _LEFT - _PAD - flag.length) / max(flag.period / longest, 0.01)


def _stack(flags: Sequence[_Flag], place: Callable[[float], float]) -> None:
    """Give each label, from right to left, the lowest row in which no label or pole further right is in its way."""
    for i, flag in enumerate(flags):
        flag.x = place(flag.period)
        end = flag.x + 2 * _PAD + flag.length
        flag.row = max((other.row + 1 for other in flags[:i] if other.x < end), default=0)


def _curve(drawing: Drawing, periods: Sequence[float], ordinates: Sequence[float], width: float, label: str) -> None:
    """Axes and the spectrum itself."""
    size = drawing.get_size_inches()
    axes = drawing.add_axes((_LEFT / size[0], _FOOT / size[1], width / size[0], _BODY / size[1]))
    axes.plot(periods, ordinates, color="black", lw=HEAVY, solid_joinstyle="miter", clip_on=False, zorder=3)
    axes.set(xlim=(0, periods[-1]), ylim=(0, 1.08 * max(ordinates) or 1.0))
    axes.spines[["top", "right"]].set_visible(False)
    axes.tick_params(labelsize=SIZE, width=THIN)
    axes.grid(lw=0.3, color="black", ls=DOTTED)
    axes.set_xlabel("$T$ (s)")
    axes.set_ylabel(label)
