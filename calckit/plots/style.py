"""The one style of all figures: sizes, line weights, lettering, and the bytes of a finished drawing.

Knows how ink is put on a sheet. Must not know what is drawn. Every drawing is black on white, made to be printed at
its own size (at most 6.5 in wide), and the same drawing always gives the same bytes.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Sequence
from contextlib import contextmanager
from io import BytesIO
from typing import Any

import matplotlib.style
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.font_manager import findfont, get_font
from matplotlib.text import Text

WIDTH = 6.5
"""Width of a drawing in inches: the text width of a Letter sheet with 1 in margins."""
SIZE = 8.5
"""Size of all lettering in points; a drawing reduced to the text width of an A4 sheet keeps 8 pt."""
PITCH = 0.165
"""Least distance between two rows of lettering, in inches."""
THIN, LINE, HEAVY = 0.5, 0.9, 1.7
"""Line weights in points: leaders and levels; axes and limits; what the drawing is about."""
DASHED, DOTTED = (0, (5, 2.5)), (0, (1, 2))
"""Line styles, in units of the line weight."""

_FONT = "DejaVu Sans"
_RC: dict[str, Any] = {
    "font.family": [_FONT],
    "font.size": SIZE,
    "mathtext.fontset": "dejavusans",
    "axes.linewidth": LINE,
    "axes.labelsize": SIZE,
    "axes.unicode_minus": True,
    "xtick.labelsize": SIZE,
    "ytick.labelsize": SIZE,
    "hatch.linewidth": THIN,
    "svg.fonttype": "path",
    "svg.hashsalt": "calckit",
}
_GREEK = (
    "alpha beta gamma delta epsilon zeta eta theta iota kappa lambda mu nu xi pi rho sigma tau upsilon phi chi psi "
    "omega Gamma Delta Theta Lambda Xi Pi Sigma Upsilon Phi Psi Omega"
)
_SYMBOL = re.compile(r"(?<![A-Za-z0-9_])([A-Za-z][A-Za-z0-9]*)(?:_([A-Za-z0-9]+))?(?![A-Za-z0-9_:])")


class Drawing(Figure):
    """A matplotlib figure that shows itself in a notebook as SVG and PNG, the same bytes each time.

    >>> with sheet(2.0, 1.0) as drawing:
    ...     _ = letter(drawing, 1.0, 0.5, "Roof", ha="center")
    >>> drawing._repr_svg_() == svg_bytes(drawing).decode()
    True
    """

    def _repr_svg_(self) -> str:
        return svg_bytes(self).decode()

    def _repr_png_(self) -> bytes:
        return png_bytes(self, 100)


@contextmanager
def sheet(width: float, height: float) -> Iterator[Drawing]:
    """A blank drawing of this size in inches, with the style in force inside the block."""
    with matplotlib.style.context(_RC, after_reset=True):
        drawing = Drawing(figsize=(width, height), facecolor="white")
        FigureCanvasAgg(drawing)
        yield drawing


def svg_bytes(figure: Figure) -> bytes:
    """The figure as SVG: text as paths, no date, the same bytes each time.

    >>> with sheet(2.0, 1.0) as drawing:
    ...     _ = letter(drawing, 1.0, 0.5, "Roof", ha="center")
    >>> svg_bytes(drawing) == svg_bytes(drawing), b"<text" in svg_bytes(drawing)
    (True, False)
    """
    return _saved(figure, format="svg", metadata={"Date": None, "Creator": None})


def png_bytes(figure: Figure, dpi: int = 200) -> bytes:
    """The figure as PNG with `dpi` dots per inch.

    >>> with sheet(2.0, 1.0) as drawing:
    ...     _ = letter(drawing, 1.0, 0.5, "Roof", ha="center")
    >>> png_bytes(drawing)[1:4]
    b'PNG'
    """
    return _saved(figure, format="png", dpi=dpi, metadata={"Software": None})


def _saved(figure: Figure, **options: Any) -> bytes:
    buffer = BytesIO()
    with matplotlib.style.context(_RC, after_reset=True):
        figure.savefig(buffer, **options)
    return buffer.getvalue()


def letter(drawing: Drawing, x: float, y: float, text: str, *, math: bool = False, **options: Any) -> Text:
    """Put lettering at `x`, `y` in inches from the lower left corner, centered on `y`.

    The text is printed as it stands; with `math`, what `typeset` made of it is read.
    """
    options |= {"transform": drawing.dpi_scale_trans, "va": "center_baseline", "parse_math": math}
    return drawing.text(x, y, text, **options)


def width_of(drawing: Drawing, texts: Iterable[str], **options: Any) -> float:
    """Width in inches of the longest of these texts, set with the same options as for `letter`."""
    widest = 0.0
    for text in texts:
        probe = letter(drawing, 0, 0, text, **options)
        widest = max(widest, probe.get_window_extent().width / drawing.dpi)
        probe.remove()
    return widest


def typeset(label: str, after: str = "") -> str:
    r"""The label with its symbols set as symbols, followed by plain text.

    A word of the label is a symbol if it has a subscript, is the name of a Greek letter, or is a single letter without
    a colon after it.

    >>> typeset("X: C_u T_a", " = 1.06 s")
    'X: $C_{u}$ $T_{a}$ = 1.06 s'
    >>> typeset("delta_xe", " (in)"), typeset("Y: T")
    ('$\\delta_{\\mathrm{xe}}$ (in)', 'Y: $T$')
    """
    return _SYMBOL.sub(_as_symbol, label.replace("$", r"\$")) + after.replace("$", r"\$")


def _as_symbol(match: re.Match[str]) -> str:
    stem, sub = match.groups()
    if sub is None and not _greek(stem) and len(stem) > 1:
        return match.group()
    base = rf"\{stem}" if _greek(stem) else stem if len(stem) == 1 else rf"\mathrm{{{stem}}}"
    if sub is None:
        return f"${base}$"
    return f"${base}_{{{sub}}}$" if len(sub) == 1 else rf"${base}_{{\mathrm{{{sub}}}}}$"


def _greek(word: str) -> bool:
    return f" {word} " in f" {_GREEK} "


def unprintable(text: str) -> str:
    """The characters of `text` that the lettering cannot show.

    >>> unprintable("Level 2 (Süd)"), unprintable("2\\n3")
    ('', '\\n')
    """
    known = get_font(findfont(_FONT)).get_charmap()
    return "".join(char for char in text if not char.isprintable() or ord(char) not in known)


def spread(places: Sequence[float], gap: float, low: float, high: float) -> list[float]:
    """Places moved as little as possible so that neighbors stand at least `gap` apart between `low` and `high`.

    `places` fall from the first to the last. If there is not room for all, they start at `high` and pass `low`.

    >>> spread([10.0, 5.1, 5.0], 1.0, 0.0, 10.0)
    [10.0, 5.55, 4.55]
    """
    blocks: list[list[float]] = []
    for i, place in enumerate(places):
        blocks.append([place + i * gap, 1])
        while len(blocks) > 1 and blocks[-1][0] > blocks[-2][0]:
            mean, count = blocks.pop()
            before, size = blocks[-1]
            blocks[-1] = [(mean * count + before * size) / (count + size), count + size]
    least = low + (len(places) - 1) * gap
    level = [min(max(mean, least), high) for mean, count in blocks for _ in range(int(count))]
    return [round(place - i * gap, 9) for i, place in enumerate(level)]
