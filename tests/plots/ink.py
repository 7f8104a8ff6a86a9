"""What is on a drawing, read back from it."""

import re
from itertools import combinations

from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.text import Text


def lettering(figure: Figure) -> list[Text]:
    """Every text that shows, tick labels within the axes included."""
    figure.canvas.draw()
    hidden = [text for axes in figure.axes for text in _hidden(axes)]
    return [text for text in figure.findobj(Text) if text.get_text() and text.get_visible() and text not in hidden]


def _hidden(axes: Axes) -> list[Text]:
    labels = []
    for axis in (axes.xaxis, axes.yaxis):
        low, high = axis.get_view_interval()
        ticks = axis.get_major_ticks()
        labels += [tick.label1 for tick in ticks if not (axes.axison and low <= tick.get_loc() <= high)]
    return labels


def words(figure: Figure) -> list[str]:
    """What the texts say."""
    return [text.get_text() for text in lettering(figure)]


def overlaps(figure: Figure) -> list[tuple[str, str]]:
    """Pairs of texts whose boxes overlap by more than a tenth of a point."""
    slack = 0.1 * figure.dpi / 72
    boxes = [(text.get_text(), text.get_window_extent()) for text in lettering(figure)]
    return [
        (one, other)
        for (one, a), (other, b) in combinations(boxes, 2)
        if min(a.x1, b.x1) - max(a.x0, b.x0) > slack and min(a.y1, b.y1) - max(a.y0, b.y0) > slack
    ]


def vertical_lines(figure: Figure) -> list[Line2D]:
    """Vertical lines that stand on the sheet, outside any axes."""
    return [line for line in figure.artists if isinstance(line, Line2D) and len(set(line.get_xdata())) == 1]


def struck_through(figure: Figure) -> list[str]:
    """Texts that a vertical line on the sheet runs through."""
    struck = []
    for text in lettering(figure):
        box = text.get_window_extent()
        for pole in vertical_lines(figure):
            x = pole.get_xdata()[0] * figure.dpi
            low, high = sorted(y * figure.dpi for y in pole.get_ydata())
            if box.x0 < x < box.x1 and low < box.y1 - 1 and high > box.y0 + 1:
                struck.append(text.get_text())
    return struck


def outside(figure: Figure) -> list[str]:
    """Texts that leave the sheet."""
    width, height = figure.get_size_inches() * figure.dpi
    boxes = [(text.get_text(), text.get_window_extent()) for text in lettering(figure)]
    return [word for word, box in boxes if box.x0 < 0 or box.y0 < 0 or box.x1 > width or box.y1 > height]


def smallest(figure: Figure) -> float:
    """Size of the smallest lettering in points; scripts within a symbol are left out."""
    return min(text.get_fontsize() for text in lettering(figure))


def colors(svg: bytes) -> set[str]:
    """Colors named in an SVG."""
    return {match.lower() for match in re.findall(r"#[0-9a-fA-F]{6}\b", svg.decode())}
