"""What the issuing process hands to the kernel: set values, files behind @, status, date, register, headings.

Knows the settings file and which of its set values were used, invalid or never asked for. Must not know lines.
"""

from __future__ import annotations

import json
import os
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path
from typing import Any

from calckit.errors import nearest_first

FOLDER = "CALCKIT_RUN"
"""Environment variable that names the run folder; absent in a live session."""


@dataclass
class Settings:
    """The settings of one run. `folder` is None in a live session; `clean` tells the two apart. `outputs` says
    whether anybody keeps what the cells show."""

    folder: Path | None = None
    values: dict[str, str] = field(default_factory=dict)
    files: dict[str, str] = field(default_factory=dict)
    status: str | None = None
    date: str | None = None
    confirmed: str | None = None
    headings: list[str] = field(default_factory=list)
    outputs: bool = True
    used: set[str] = field(default_factory=set)
    invalid: dict[str, str] = field(default_factory=dict)
    unused: dict[str, str] = field(default_factory=dict)

    @property
    def clean(self) -> bool:
        """Whether the notebook runs top to bottom in a clean kernel."""
        return self.folder is not None

    def value(self, id_: str) -> tuple[str, str] | None:
        """The set value for a line id, as (key, text): by the id itself, else by its symbol for every part."""
        for key in dict.fromkeys((id_, id_.rpartition(".")[2])):
            if key in self.values:
                self.used.add(key)
                return key, self.values[key]
        return None

    def problems(self, known: set[str]) -> list[dict[str, str]]:
        """Everything wrong with the set values after a run in which the ids `known` were written or could have been."""
        found = [{"kind": "invalid", "id": key, "text": text} for key, text in self.invalid.items()]
        for key in self.values:
            if key in self.used:
                continue
            reason = self.unused.get(key.rpartition(".")[2])
            if reason or key in known or key.rpartition(".")[2] in known:
                text = reason or "no line of this notebook takes it"
                found.append({"kind": "unused", "id": key, "text": text})
            else:
                near = ", ".join(nearest_first(key, known)[:6])
                found.append({"kind": "unknown", "id": key, "text": f"nearest known: {near}"})
        return found


def read(folder: Path) -> Settings:
    """The settings file of a run folder."""
    data: dict[str, Any] = json.loads((folder / "settings.json").read_text(encoding="utf-8"))
    return Settings(
        folder, dict(data.get("set", {})), dict(data.get("files", {})), data.get("status"), data.get("date"),
        data.get("confirmed"), list(data.get("headings", [])), data.get("outputs", True),
    )  # fmt: skip


@cache
def current() -> Settings:
    """The settings of this process."""
    folder = os.environ.get(FOLDER)
    return read(Path(folder)) if folder else Settings()
