"""The governing results so far, shown in the notebook.

Knows how a summary table is shown. Must not know which results govern: the standard says so.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from calckit.core.calc import Calc


def show_summary(calc: Calc) -> None:
    """Display the summaries of the standard as tables."""
    from IPython.display import Markdown, display

    for summary in calc.standard.summaries(calc):
        head = ["", *summary.columns]
        rows = [head, ["---"] * len(head), *([row.label, *row.cells] for row in summary.rows)]
        text = "\n".join("| " + " | ".join(cell.replace("|", r"\|") for cell in row) + " |" for row in rows)
        display(Markdown(f"**{summary.title}**\n\n{text}"))  # type: ignore[no-untyped-call]
