"""The linter and the type checker find nothing."""

import subprocess
import sys

from tests.house import source


def run(*command: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run([sys.executable, "-m", *command], capture_output=True, text=True, cwd=source.ROOT)


def test_ruff_finds_nothing() -> None:
    done = run("ruff", "check", "--no-cache", ".")
    assert done.returncode == 0, done.stdout + done.stderr


def test_mypy_finds_nothing() -> None:
    done = run("mypy")
    assert done.returncode == 0, done.stdout + done.stderr
    assert "no issues found" in done.stdout
