"""Drawings taken into the calculation as SVG.

Knows how a drawing becomes the same bytes every time. Must not know what is drawn, nor import what draws it.
"""

from __future__ import annotations

import io
import sys
from typing import TYPE_CHECKING, Any

from calckit.core.display import in_notebook
from calckit.core.record import Figure
from calckit.errors import Fault, InputError

if TYPE_CHECKING:
    from calckit.core.scope import Scope


def svg(drawing: Any) -> bytes:
    """The SVG of what `calckit.plots` returns, or of any matplotlib Figure; InputError for anything else."""
    if hasattr(drawing, "_repr_svg_"):
        return str(drawing._repr_svg_()).encode()
    matplotlib = sys.modules.get("matplotlib")
    if matplotlib is None or not hasattr(drawing, "savefig"):
        cure = "pass what plots.* returns"
        raise InputError("figure", [Fault("figure", "a matplotlib Figure", type(drawing).__name__, cure)])
    buffer = io.BytesIO()
    with matplotlib.rc_context({"svg.hashsalt": "calckit", "svg.fonttype": "path"}):
        drawing.savefig(buffer, format="svg", metadata={"Date": None})
    return buffer.getvalue()


def place(scope: Scope, drawing: Any, figure: Figure) -> None:
    """Put a drawing in its place and show it below the cell."""
    data = svg(drawing)
    figure.file = f"{figure.id}.svg"
    with scope.step():
        scope.book.write_figure(figure)
        scope.calc.figure_data[figure.file] = data
    _show(drawing, figure)


def _show(drawing: Any, figure: Figure) -> None:
    if in_notebook():
        from IPython.display import display

        display(drawing, metadata={"image/png": {"alt": figure.alt}})  # type: ignore[no-untyped-call]
