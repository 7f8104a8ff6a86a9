"""An issued report that somebody changed: what was changed is named, and nothing inside the file is run.

The report is the committed example; each change is the least that can be made. A cell that would leave a file behind if
it were run stands in for code that should not run.
"""

import base64
import json
import random
import re
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from calckit import cli
from calckit.core.record import Record, from_json
from calckit.report import run as runner
from calckit.report import seal
from calckit.report.recheck import recheck

EXAMPLES = Path(__file__).parents[2] / "example_reports"
FORMS = ("html", "pdf")
KINDS = ("given", "table", "computed", "check", "judgment")


@pytest.fixture(autouse=True)
def nothing_runs(monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(*_: object, **__: object) -> None:
        raise AssertionError("a notebook was run")

    monkeypatch.setattr(runner, "run", fail)


def issued(form: str) -> bytes:
    return (EXAMPLES / f"C-101_A.{form}").read_bytes()


def faults(folder: Path, form: str, data: bytes) -> dict[str, list[str]]:
    """What recheck finds at fault."""
    path = folder / f"changed.{form}"
    path.write_bytes(data)
    return {finding.what: finding.text.splitlines() for finding in recheck(path) if not finding.good}


def attached(data: bytes, name: str, change: Callable[[bytes], bytes]) -> bytes:
    """The HTML file with another attachment in place, under a new seal."""
    pattern = re.compile(rb'(download="' + re.escape(name).encode() + rb'" href="data:[^,]*;base64,)([A-Za-z0-9+/=]+)')
    assert len(pattern.findall(data)) == 1
    new = pattern.sub(lambda m: m[1] + base64.b64encode(change(base64.b64decode(m[2]))), data)
    assert new != data
    return seal.apply(new.replace(seal.seal_of(data).encode(), b"0" * 64))


def with_record(data: bytes, change: Callable[[Record], None]) -> bytes:
    def changed(old: bytes) -> bytes:
        record = from_json(old.decode())
        change(record)
        return record.to_json().encode()

    return attached(data, "record.json", changed)


@pytest.mark.parametrize("form", FORMS)
def test_the_example_is_as_issued(form: str, tmp_path: Path) -> None:
    assert faults(tmp_path, form, issued(form)) == {}


@pytest.mark.parametrize("form", FORMS)
def test_one_byte(form: str, tmp_path: Path) -> None:
    data = issued(form)
    place = data.index(b"Harbor Street") if form == "html" else data.index(b"stream\n") + 60
    changed = data[:place] + bytes([data[place] ^ 1]) + data[place + 1 :]
    found = faults(tmp_path, form, changed)
    assert found["seal"] == ["altered or re-saved after issue"]
    assert set(found) == {"seal"}  # what is attached still stands
    assert cli.main(["recheck", str(tmp_path / f"changed.{form}")]) == 4


@pytest.mark.parametrize("form", FORMS)
def test_any_byte_breaks_the_seal(form: str) -> None:
    data = bytearray(issued(form))
    places = random.Random(3).sample(range(len(data)), 60)
    places += [data.index(seal.seal_of(bytes(data)).encode()) + 5, 0, len(data) - 1]
    for place in places:
        data[place] ^= 1
        assert seal.check(bytes(data)).state != "intact", place
        data[place] ^= 1
    assert seal.check(bytes(data)).state == "intact"


def _other(value: Any) -> Any:
    """The least different value."""
    if isinstance(value, list):
        return [_other(value[0]), *value[1:]]
    return value * (1 + 1e-6) if isinstance(value, float | int) and value else f"{value} " if value else 1.0


@pytest.mark.parametrize("kind", KINDS)
def test_one_value_in_the_record(kind: str, tmp_path: Path) -> None:
    """One line of each kind, changed by a millionth or a blank, every hash left as it was."""
    record = from_json((EXAMPLES / "C-101_A.record.json").read_text(encoding="utf-8"))
    line = [line for line in record.lines if line.kind == kind and line.value is not None][-1]

    def change(record: Record) -> None:
        record.line(line.id).value = _other(line.value)

    found = faults(tmp_path, "html", with_record(issued("html"), change))
    assert "seal" not in found  # the new seal fits: the change is found by the contents
    named = f"line {line.n}, {line.id}: not what it was hashed with"
    assert found["contents"] == ["at fault: 1", named]
    assert "lines" in found


def test_one_cell_of_the_notebook(tmp_path: Path) -> None:
    witness = tmp_path / "was run"

    def change(old: bytes) -> bytes:
        notebook = json.loads(old)
        cell = [cell for cell in notebook["cells"] if cell["cell_type"] == "code"][3]
        cell["source"] = ["".join(cell["source"]), f"\nopen({str(witness)!r}, 'w')\n"]
        change.id = cell["id"]  # type: ignore[attr-defined]
        return json.dumps(notebook).encode()

    name = "building_lateral_force.ipynb"
    found = faults(tmp_path, "html", attached(issued("html"), name, change))
    assert set(found) == {"source"}
    assert found["source"][1:] == [f"cell {change.id}: altered"]  # type: ignore[attr-defined]
    assert cli.main(["recheck", str(tmp_path / "changed.html")]) == 4
    assert not witness.exists()
