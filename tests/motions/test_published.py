"""The checks that need a record: each has an adapter, a source and a file; without the file it says so."""

from __future__ import annotations

from importlib import resources
from pathlib import Path

import pytest

from calckit.core import checks
from calckit.errors import CommandError
from calckit.motions.verify import ADAPTERS

TEXT = (resources.files("calckit.motions") / "checks.toml").read_text(encoding="utf-8")
CHECKS = {check.id: check for check in checks.read(TEXT)}


def test_every_check_is_run_and_names_its_file() -> None:
    assert set(CHECKS) == set(ADAPTERS)
    files = {check.given["record"] for check in CHECKS.values()}
    assert files == {"elcentro_peknold.dat", "elcentro_S00E_1940.dat"}


def test_without_records_each_check_says_what_it_needs(tmp_path: Path) -> None:
    text, agrees = checks.report("dynamics")
    assert agrees
    for id_, check in CHECKS.items():
        assert f"  {id_}: needs the record {check.given['record']}: name its folder with --records" in text
    text, agrees = checks.report("dynamics", tmp_path)
    assert agrees
    assert f"  dyn.D1.elcentro_peaks: needs the record elcentro_peknold.dat, which is not in {tmp_path}" in text


def test_a_folder_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(CommandError, match="none is no folder; cure: name the folder that holds the recorded motions"):
        checks.report("dynamics", tmp_path / "none")
