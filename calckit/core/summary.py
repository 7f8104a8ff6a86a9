"""The governing results so far, shown in the notebook, with what about them no longer holds.

Knows how a summary table is shown. Must not know which results govern: the standard says so.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.display import escaped

if TYPE_CHECKING:
    from calckit.core.calc import Calc


def show_summary(calc: Calc) -> None:
    """Display the summaries of the standard as tables, and below them the lines that are stale or without a cell."""
    from IPython.display import Markdown, display

    for summary in calc.standard.summaries(calc):
        head = ["", *summary.columns]
        rows = [head, ["---"] * len(head), *([row.label, *row.cells] for row in summary.rows)]
        text = "\n".join("| " + " | ".join(cell.replace("|", r"\|") for cell in row) + " |" for row in rows)
        display(Markdown(f"**{summary.title}**\n\n{text}"))  # type: ignore[no-untyped-call]
    for notice in notices(calc):
        display(Markdown(escaped(notice)))  # type: ignore[no-untyped-call]


def notices(calc: Calc) -> list[str]:
    """Which lines are stale, and which were written by cells that are no longer in the notebook."""
    found = []
    if stale := calc.lines.stale():
        found.append(f"Stale lines: {', '.join(stale)}. {calc.outputs.why(stale, stale)}")
    if without := calc.lines.without_cell():
        found.append(
            f"Lines without a cell: {', '.join(without)}. The cells that wrote them were deleted from the notebook; an "
            "issue will not have them. If a cell was brought back, run it again."
        )
    return found
