"""Drawings taken into the calculation as SVG.

Knows how a matplotlib Figure becomes the same bytes every time. Must not know what is drawn.
"""

from __future__ import annotations

import io
from typing import TYPE_CHECKING, Any

from calckit.core.record import Figure
from calckit.errors import Fault, InputError

if TYPE_CHECKING:
    from calckit.core.scope import Scope


def image(drawing: Any, form: str) -> bytes:
    """A matplotlib Figure as "svg" or "png" bytes, text drawn as outlines, without a date."""
    import matplotlib

    buffer = io.BytesIO()
    with matplotlib.rc_context({"svg.hashsalt": "calckit", "svg.fonttype": "path"}):
        drawing.savefig(buffer, format=form, metadata={"Date": None} if form == "svg" else {"Software": None})
    return buffer.getvalue()


def place(scope: Scope, drawing: Any, figure: Figure) -> None:
    """Put a drawing in its place and show it below the cell."""
    if not hasattr(drawing, "savefig"):
        raise InputError(
            "figure", [Fault("figure", "a matplotlib Figure", type(drawing).__name__, "pass what plots.* returns")]
        )
    figure.file = f"{figure.id}.svg"
    scope.calc.figure_data[figure.file] = image(drawing, "svg")
    with scope.step():
        scope.book.write_figure(figure)
    _show(drawing, figure)


def _show(drawing: Any, figure: Figure) -> None:
    try:
        from IPython import get_ipython
        from IPython.display import display
    except ImportError:
        return
    if get_ipython() is not None:
        data = {"image/png": image(drawing, "png"), "text/plain": f"{figure.caption}: {figure.alt}"}
        display(data, raw=True, metadata={"image/png": {"alt": figure.alt}})  # type: ignore[no-untyped-call]
