"""Drawings of ground motions: histories, energy, Fourier amplitudes, and spectra against a design spectrum.

Knows axes over time and over the period, and how a long history is drawn without losing its peaks. Must not know how
any of the numbers came about.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import pairwise
from typing import Any

import numpy as np
from matplotlib.axes import Axes
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

_LEFT, _FOOT, _BODY, _STRIP, _GAP, _EDGE = 0.85, 0.48, 2.1, 1.0, 0.3, 0.15
_COLUMNS = 1300
"""Strokes to the width of a drawing: more would print over each other."""
_STYLES = (
    {"lw": LINE, "ls": DASHED}, {"lw": LINE, "ls": DOTTED}, {"lw": LINE, "ls": (0, (6, 2, 1, 2))},
    {"lw": LINE, "ls": (0, (1, 1))}, {"lw": THIN, "ls": "-"},
)  # fmt: skip
MOST_CURVES = len(_STYLES)


def motion_history(dt: float, histories: Mapping[str, tuple[Sequence[float], str]]) -> Drawing:
    """Histories of one ground motion over the same time, one below the other, with the largest value of each.

    Arguments: `dt`, the step in s; `histories`, for each of one to three, what it is called -> its samples and their
    unit. Of long histories the highest and lowest sample of each stroke are drawn. Raises InputError listing every bad
    argument.

    >>> drawing = motion_history(0.01, {"a": ([0.0, 0.3, -0.1], "g"), "v": ([0.0, 2.0, 3.0], "in/s")})
    >>> [axes.get_ylabel() for axes in drawing.axes]
    ['$a$ (g)', '$v$ (in/s)']
    """
    read = Reader("plots.motion_history")
    _positive(read, "dt", dt)
    if not 1 <= len(histories) <= 3:
        read.fault("histories", "one to three histories", f"{len(histories)}", 'give {"a": (samples, "g"), ...}')
    columns = {}
    count = len(next(iter(histories.values()))[0]) if histories else 0
    for name, (samples, unit) in histories.items():
        read.words(histories=name, unit=unit)
        columns[name] = (_array(read, f"histories[{name!r}]", samples, count, 2), unit)
    read.done()
    body = len(columns) * _STRIP + (len(columns) - 1) * _GAP
    with sheet(WIDTH, _FOOT + body + _GAP) as drawing:
        for place, (name, (values, unit)) in enumerate(columns.items()):
            last = place == len(columns) - 1
            foot = _FOOT + (len(columns) - 1 - place) * (_STRIP + _GAP)
            axes = _axes(drawing, foot, _STRIP)
            times, drawn = thinned(values, dt)
            largest = float(np.abs(values).max()) or 1.0
            axes.plot(times, drawn, color="black", lw=THIN, zorder=3)
            axes.axhline(0, color="black", lw=THIN)
            axes.set(xlim=(0, (count - 1) * dt), ylim=(-1.15 * largest, 1.15 * largest))
            axes.set_ylabel(typeset(name, f" ({unit})"))
            peak = int(np.abs(values).argmax())
            text = typeset(name, f": largest {values[peak]:.4g} {unit} at {peak * dt:.4g} s")
            letter(drawing, WIDTH - _EDGE, foot + _STRIP + 0.5 * PITCH, text, math=True, ha="right")
            if last:
                axes.set_xlabel("Time (s)")
            else:
                axes.set_xticklabels([])
    return drawing


def thinned(values: np.ndarray, dt: float) -> tuple[np.ndarray, np.ndarray]:
    """Times and values to draw: all of a short history, the lowest and highest of each stroke of a long one.

    >>> times, drawn = thinned(np.sin(np.arange(10_000.0)), 0.01)
    >>> len(drawn) <= 2 * 1300, float(drawn.max()) == float(np.sin(np.arange(10_000.0)).max())
    (True, True)
    """
    times = np.arange(len(values)) * dt
    if len(values) <= 2 * _COLUMNS:
        return times, values
    edges = np.linspace(0, len(values), _COLUMNS + 1).astype(int)
    kept = []
    for start, end in pairwise(edges):
        block = values[start:end]
        kept += sorted({start + int(block.argmin()), start + int(block.argmax())})
    return times[kept], values[kept]


def cumulative_energy(dt: float, share: Sequence[float], *, between: tuple[float, float] | None = None) -> Drawing:
    """The share of the energy of a motion reached over time (R. Husid's plot).

    Arguments: `dt` in s; `share`, from 0 to 1 at each sample; `between`, two times in s that bound the significant
    duration. Raises InputError listing every bad argument.

    >>> drawing = cumulative_energy(0.5, [0.0, 0.25, 0.75, 1.0], between=(0.1, 1.4))
    >>> len(drawing.axes[0].lines)
    3
    """
    read = Reader("plots.cumulative_energy")
    _positive(read, "dt", dt)
    values = _array(read, "share", share, len(share), 2)
    if len(values) and (values.min() < 0 or values.max() > 1 or (np.diff(values) < 0).any()):
        given = f"{values.min():g} to {values.max():g}"
        read.fault("share", "shares that rise from 0 to 1", given, "divide by the last")
    if between is not None and not 0 <= between[0] < between[1] <= (len(values) - 1) * dt:
        needed = "two times within the motion, the earlier first"
        read.fault("between", needed, f"{between[0]:g}, {between[1]:g}", "take significant_duration")
    read.done()
    with sheet(WIDTH, _FOOT + _BODY + 0.2) as drawing:
        axes = _axes(drawing, _FOOT, _BODY)
        axes.plot(np.arange(len(values)) * dt, values, color="black", lw=HEAVY, zorder=3)
        axes.set(xlim=(0, (len(values) - 1) * dt), ylim=(0, 1.02), xlabel="Time (s)", ylabel="Share of the energy")
        for time in between or ():
            axes.axvline(time, color="black", lw=LINE, ls=DASHED)
    return drawing


def fourier_amplitude(
    periods: Sequence[float], amplitudes: Sequence[float], *, unit: str, marks: Mapping[str, float | str] | None = None
) -> Drawing:
    """Fourier amplitudes over the period, with the periods that matter marked.

    Arguments: `periods` in s, above 0, in any order that rises or falls; `amplitudes`, one in `unit` for each; `marks`,
    label -> period in s. Raises InputError listing every bad argument.

    >>> drawing = fourier_amplitude([2.0, 1.0, 0.5], [0.1, 0.4, 0.2], unit="m/s", marks={"T_dom": 1.0})
    >>> drawing.axes[0].get_xscale()
    'log'
    """
    read = Reader("plots.fourier_amplitude")
    natural = _array(read, "periods", periods, len(periods), 2)
    sizes = _array(read, "amplitudes", amplitudes, len(periods), 2)
    steps = np.diff(natural)
    if len(natural) and (natural.min() <= 0 or not ((steps > 0).all() or (steps < 0).all())):
        read.fault("periods", "periods above 0 that rise or fall", f"{natural.min():g} s first", "sort the periods")
    read.words(unit=unit)
    shown = read.periods("marks", marks or {}, float(natural.max()) if len(natural) else 0.0)
    read.done()
    order = np.argsort(natural)
    with sheet(WIDTH, _FOOT + _BODY + (len(shown) + 1) * PITCH) as drawing:
        axes = _axes(drawing, _FOOT, _BODY)
        axes.plot(natural[order], sizes[order], color="black", lw=THIN, zorder=3)
        axes.set(xscale="log", xlim=(natural.min(), natural.max()), ylim=(0, 1.08 * sizes.max() or 1.0))
        axes.set_xlabel("$T$ (s)")
        axes.set_ylabel(f"Amplitude ({unit})")
        _plain_ticks(axes)
        for row, (label, period, numeral) in enumerate(shown):
            style = _STYLES[row % MOST_CURVES]
            axes.axvline(period, color="black", **style)
            _key_row(drawing, _FOOT + _BODY + (row + 0.7) * PITCH, typeset(label, f" = {numeral} s"), style)
    return drawing


def spectra(
    T: Numbers,  # noqa: N803
    S_a: Numbers,  # noqa: N803
    curves: Mapping[str, tuple[Sequence[float], Sequence[float]]],
    *,
    design: str = "Design spectrum",
    symbol: str = "S_a",
    unit: str = "g",
) -> Drawing:
    """Spectra of motions, or their mean, against a design spectrum.

    Arguments: `T` and `S_a`, the design spectrum, periods rising from 0 or above; `curves`, for each of up to five, its
    label -> periods in s and ordinates in `unit`; `design`, what the first is called. Raises InputError listing every
    bad argument.

    >>> drawing = spectra([0, 0.5, 2], [0.4, 1, 0.25], {"Mean of 3 motions": ([0.1, 1.0], [0.6, 0.5])})
    >>> [text.get_text() for text in drawing.texts]
    ['Design spectrum', 'Mean of 3 motions']
    """
    read = Reader("plots.spectra")
    if not 1 <= len(curves) <= MOST_CURVES:
        read.fault("curves", f"1 to {MOST_CURVES} curves", f"{len(curves)}", "draw the others on a figure of their own")
    read.words(design=design, symbol=symbol, unit=unit)
    drawn = {design: _curve(read, "T", "S_a", T, S_a)}
    for label, (periods, ordinates) in curves.items():
        read.words(curves=label)
        drawn[label] = _curve(read, f"curves[{label!r}]", f"curves[{label!r}]", periods, ordinates)
    if design in curves:
        read.fault("curves", "labels other than that of the design spectrum", design, "name it otherwise")
    read.done()
    longest = float(drawn[design][0][-1])
    with sheet(WIDTH, _FOOT + _BODY + (len(drawn) + 1) * PITCH) as drawing:
        if width_of(drawing, drawn) > WIDTH - _LEFT - 1:
            read.fault("curves", "labels that fit on a line", max(drawn, key=len), "shorten the label")
            read.done()
        axes = _axes(drawing, _FOOT, _BODY)
        styles: list[Mapping[str, Any]] = [{"lw": HEAVY}, *_STYLES]
        highest = max(float(ordinates.max()) for _, ordinates in drawn.values())
        axes.set(xlim=(0, longest), ylim=(0, 1.08 * highest or 1.0))
        axes.set_xlabel("$T$ (s)")
        axes.set_ylabel(typeset(symbol, f" ({unit})"))
        for row, ((label, (periods, ordinates)), style) in enumerate(zip(drawn.items(), styles, strict=False)):
            axes.plot(periods, ordinates, color="black", zorder=3, **style)
            _key_row(drawing, _FOOT + _BODY + (len(drawn) - row - 0.3) * PITCH, label, style, math=False)
    return drawing


def _curve(
    read: Reader, name: str, other: str, periods: Sequence[float | str], ordinates: Sequence[float | str]
) -> tuple[np.ndarray, np.ndarray]:
    natural, values = (_array(read, n, v, len(periods), 2) for n, v in ((name, periods), (other, ordinates)))
    if len(natural) and (natural[0] < 0 or (np.diff(natural) <= 0).any()):
        needed = "periods from 0 up, each longer than the one before"
        read.fault(name, needed, f"{len(natural)} periods", "sort the periods")
    if len(values) and values.min() < 0:
        read.fault(other, "ordinates not below 0", f"{values.min():g}", "correct the ordinates")
    return natural, values


def _array(read: Reader, name: str, values: Sequence[float | str], count: int, least: int) -> np.ndarray:
    """At least `least` finite numbers, `count` of them."""
    if count < least:
        read.fault(name, f"{least} or more numbers", f"{count}", "give the whole curve")
        return np.zeros(0)
    return np.array(read.column(name, values, count).values)


def _positive(read: Reader, name: str, value: float) -> None:
    if not isinstance(value, int | float) or not 0 < value < float("inf"):
        read.fault(name, "a step above 0 in s", f"{value}", "give the time step")


def _axes(drawing: Drawing, foot: float, body: float) -> Axes:
    width, height = drawing.get_size_inches()
    axes = drawing.add_axes((_LEFT / width, foot / height, (width - _LEFT - _EDGE) / width, body / height))
    axes.spines[["top", "right"]].set_visible(False)
    axes.tick_params(labelsize=SIZE, width=THIN)
    axes.grid(lw=0.3, color="black", ls=DOTTED)
    axes.locator_params(axis="y", nbins=5)
    return axes


def _plain_ticks(axes: Axes) -> None:
    """Periods on a logarithmic axis in plain digits."""
    low, high = axes.get_xlim()
    ticks = [tick for tick in (0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 50) if low <= tick <= high]
    axes.set_xticks(ticks, [f"{tick:g}" for tick in ticks])
    axes.minorticks_off()


def _key_row(drawing: Drawing, y: float, text: str, style: Mapping[str, Any], *, math: bool = True) -> None:
    """A stroke in a style and what it stands for, above the axes."""
    stroke = Line2D([_LEFT, _LEFT + 0.5], [y, y], color="black", transform=drawing.dpi_scale_trans, **style)
    drawing.add_artist(stroke)
    letter(drawing, _LEFT + 0.6, y, text, math=math)
