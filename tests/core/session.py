"""A live session without a kernel: cells that run one after the other, and run again."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from types import SimpleNamespace
from typing import Any

import pytest

from calckit.core import book, calc


class Events:
    """The hooks that a session calls after each run of a cell."""

    def __init__(self) -> None:
        self.hooks: list[Callable[[Any], None]] = []

    def register(self, name: str, hook: Callable[[Any], None]) -> None:
        """Note a hook."""
        assert name == "post_run_cell"
        self.hooks.append(hook)


class Session:
    """A stand-in for the running shell; `ids` tells whether the notebook sends the id of the cell along."""

    def __init__(self, monkeypatch: pytest.MonkeyPatch, *, ids: bool = True) -> None:
        self.events, self.execution_count, self.ids, self.key = Events(), 0, ids, ""
        self.deleted: list[str] = []
        monkeypatch.setattr(book, "_shell", lambda: self)
        monkeypatch.setattr(calc, "_shell", lambda: self)
        monkeypatch.setattr(book, "_runs", [])
        monkeypatch.setattr(calc, "_current", [])

    def get_parent(self) -> dict[str, Any]:
        """The message that asked for the run."""
        metadata = {"cellId": self.key, "deletedCells": self.deleted} if self.ids else {}
        return {"header": {"msg_id": f"message-{self.execution_count}"}, "metadata": metadata}

    @contextmanager
    def cell(self, key: str, text: str = "") -> Iterator[None]:
        """One run of a cell with this text; the hooks are called at its end, whether it raised or not.

        The notebook says with the request which cells were `deleted` since the last one.
        """
        self.execution_count += 1
        self.key = key
        try:
            yield
        finally:
            result = SimpleNamespace(execution_count=self.execution_count, info=SimpleNamespace(raw_cell=text))
            for hook in list(self.events.hooks):
                hook(result)
            self.deleted = []
