"""The template run again and again in this process, cell by cell, with values set as `calckit issue --set` sets them.

Knows how a clean run takes its settings. Must not know what is compared afterwards.
"""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import pytest

from calckit import plots
from calckit.core import calc, settings
from calckit.core.assemble import assemble
from calckit.core.record import Record
from calckit.report import notebook
from tests.template_runs import LEVELS, SECOND_PASS, TEMPLATE


def rerun(values: Mapping[str, str], files: Mapping[str, str]) -> Record:
    """The record of a clean run with these set values and the texts of the files behind @.

    Raises ValueError naming what is wrong with a set value; no figure is drawn.
    """
    run = settings.Settings(Path("run"), dict(values), dict(files))
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(settings, "current", lambda: run)
        patch.setattr(calc.Calc, "figure", _nothing)
        for name in plots.__all__:
            patch.setattr(plots, name, _nothing)
        names: dict[str, Any] = {}
        for cell in notebook.read(TEMPLATE).cells:
            if cell.runs:
                exec(cell.text, names)
    made = calc.current()
    assert made
    if run.invalid or run.unused:
        raise ValueError(f"{run.invalid | run.unused}")
    return assemble(made)


def _nothing(*_: object, **__: object) -> None:
    pass


def second_pass(values: Mapping[str, str] | None = None, levels: str = LEVELS) -> Record:
    """The second pass of the demonstration building with other values on top."""
    return rerun({**SECOND_PASS, **(values or {})}, {"levels.csv": levels})
