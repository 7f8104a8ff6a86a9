"""Handing a finished run to the issuing process.

Knows the run folder and what is left in it. Must not know how a notebook is run or reported.
"""

from __future__ import annotations

import json
from collections.abc import Mapping
from pathlib import Path

from calckit.core import settings
from calckit.core.assemble import assemble
from calckit.core.calc import current


def deliver() -> None:
    """Write outcome.json, figures and files into the run folder; outside a run nothing happens."""
    run = settings.current()
    if run.folder is None:
        return
    calc = current()
    record = json.loads(assemble(calc).to_json()) if calc else None
    known: set[str] = set()
    files = {}
    if calc:
        known = {*calc.lines.entries, *calc.standard.symbols, *calc.title_block, "levels"}
        _write(run.folder / "figures", calc.figure_data)
        files = {name: f"files/{number}" for number, name in enumerate(calc.files)}
        _write(run.folder / "files", {str(number): data for number, data in enumerate(calc.files.values())})
    outcome = {"record": record, "problems": run.problems(known), "files": files}
    (run.folder / "outcome.json").write_text(json.dumps(outcome, ensure_ascii=False, allow_nan=False), encoding="utf-8")


def _write(folder: Path, data: Mapping[str, bytes]) -> None:
    folder.mkdir(exist_ok=True)
    for name, content in data.items():
        (folder / name).write_bytes(content)
