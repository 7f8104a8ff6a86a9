"""The templates run clean in a process of its own, once for each set of set values."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from pathlib import Path

from calckit.core.record import Record
from calckit.report import notebook
from calckit.report.run import Outcome, Settings, run

TEMPLATES = Path(__file__).parents[1] / "templates"
TEMPLATE = TEMPLATES / "building_lateral_force.ipynb"

LEVELS = """\
level, h_x [ft], w_x [kip], X.delta_xe [in], Y.delta_xe [in], P_x [kip]
Roof, 80, 880, 2.65, 1.10, 1100
6, 67, 1020, 2.31, 0.90, 2200
5, 54, 1020, 1.90, 0.70, 3300
4, 41, 1020, 1.40, 0.50, 4400
3, 28, 1020, 0.90, 0.30, 5500
2, 15, 1100, 0.45, 0.14, 6600
"""
SECOND_PASS = {
    "levels": "@levels.csv", "X.T_analysis": "1.2 s", "Y.T_analysis": "0.7 s", "rho": "1.0", "torsion": "yes",
    "H1a": "no", "H1b": "no", "V1a": "no", "V1b": "no",
}  # fmt: skip
"""The set values with which the template of the first pass is run again once there is an analysis model; invented."""


@cache
def _run(path: Path, values: tuple[tuple[str, str], ...], files: tuple[tuple[str, str], ...]) -> Outcome:
    return run(notebook.read(path), Settings(set=dict(values), files=dict(files)))


def template(values: Mapping[str, str] | None = None, folder: Path | None = None, path: Path = TEMPLATE) -> Record:
    """The record of a template with these set values; files behind @ are read from `folder`."""
    values = values or {}
    named = sorted(value[1:] for value in values.values() if value.startswith("@"))
    files = tuple((name, (folder or Path()).joinpath(name).read_text(encoding="utf-8")) for name in named)
    outcome = _run(path, tuple(sorted(values.items())), files)
    assert (outcome.failure, outcome.problems) == ("", ())
    assert outcome.record
    return outcome.record
