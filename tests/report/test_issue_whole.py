"""The whole chain with the real kernel side and the real writers, from the command line, in processes of its own."""

import json
import os
import shutil
import subprocess
import sys
from collections.abc import Callable
from functools import partial
from pathlib import Path

import pytest

from calckit.core.record import from_json
from calckit.report import seal
from calckit.report.recheck import parcel_of, recheck
from tests.conftest import WriteNotebook, notebook_json

ROOT = Path(__file__).parents[2]

CELLS = (
    "# Demonstration\n\nWeight $W$ by hand.",
    "from calckit import Calc\n"
    'calc = Calc(project="Harbor Street Clinic", number="C-7", revision="A", date="2026-12-01", status="for check",\n'
    '            prepared_by="J. Doe", standard="ASCE 7-16")\n'
    'calc.document("S-201", title="Framing elevations", revision="2", date="2026-11-14")',
    "## Height",
    'calc.given("h_n", "62 ft", source="S-201 grid A")\n'
    'calc.given("p", "2 kip/ft", meaning="load per height", source="S-201")\n'
    'calc.file("notes.txt")',
    "## Force",
    'calc.line("V_w", "p * h_n", unit="kip", meaning="load on the wall")\ncalc.check("V_w", "<=", "V_w", title="Wall")',
)

CLOCK_A_MONTH_AHEAD = """
import datetime, time
now = time.time
time.time = lambda: now() + 31 * 86400
time.time_ns = lambda: int(time.time() * 1e9)
class Later(datetime.datetime):
    @classmethod
    def now(cls, tz=None):
        return cls.fromtimestamp(time.time(), tz)
    @classmethod
    def utcnow(cls):
        return cls.now(datetime.timezone.utc).replace(tzinfo=None)
class LaterDay(datetime.date):
    @classmethod
    def today(cls):
        return cls.fromtimestamp(time.time())
datetime.datetime, datetime.date = Later, LaterDay
"""

Run = Callable[..., subprocess.CompletedProcess[str]]


def run_calckit(folder: Path, *arguments: object, **environment: str) -> subprocess.CompletedProcess[str]:
    """The command in a process of its own, started in a folder."""
    found = {name: value for name, value in os.environ.items() if name != "SOURCE_DATE_EPOCH"}
    found["PYTHONPATH"] = os.pathsep.join(filter(None, (str(ROOT), os.environ.get("PYTHONPATH"))))
    command = [sys.executable, "-m", "calckit", *map(str, arguments)]
    return subprocess.run(command, capture_output=True, text=True, cwd=folder, env=found | environment)


def demonstration(folder: Path) -> Path:
    """The notebook of these tests and the file it reads."""
    (folder / "notes.txt").write_text("wind governs nothing here\n")
    path = folder / "demo.ipynb"
    path.write_text(json.dumps(notebook_json(CELLS)))
    return path


def content(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir()} if folder.exists() else {}


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return demonstration(tmp_path)


def complaints(stderr: str) -> list[str]:
    """What the terminal said, without the word that a slow run is still going."""
    return [line for line in stderr.splitlines() if not line.startswith("running ")]


@pytest.fixture
def calckit(tmp_path: Path) -> Run:
    return partial(run_calckit, tmp_path)


@pytest.fixture(scope="module")
def first(tmp_path_factory: pytest.TempPathFactory) -> tuple[str, Path]:
    """One issue: what the terminal said, and the folder."""
    folder = tmp_path_factory.mktemp("first")
    result = run_calckit(folder, "issue", demonstration(folder), "--to", "out")
    assert result.returncode == 0, result.stderr
    return result.stdout, folder / "out"


@pytest.fixture
def issued(first: tuple[str, Path], tmp_path: Path) -> Path:
    """A copy of that folder."""
    return Path(shutil.copytree(first[1], tmp_path / "issued"))


def test_what_the_terminal_says_and_the_lines(first: tuple[str, Path]) -> None:
    said, folder = first
    assert said.splitlines()[:5] == [
        "C-7, revision A, for check, 2026-12-01",
        "  out/C-7_A.html",
        "  out/C-7_A.pdf",
        "  out/C-7_A.record.json",
        "NOT OK: none",
    ]
    record = from_json((folder / "C-7_A.record.json").read_text())
    assert [(line.id, line.n, line.section) for line in record.lines[:3]] == [
        ("h_n", 1, "Height"),
        ("p", 2, "Height"),
        ("V_w", 3, "Force"),
    ]
    assert record.line("V_w").value == 124.0


@pytest.mark.parametrize("form", ["html", "pdf"])
def test_recheck(form: str, issued: Path, calckit: Run) -> None:
    path = issued / f"C-7_A.{form}"
    assert all(finding.good for finding in recheck(path))
    assert dict(parcel_of(path.read_bytes()).files) == {"notes.txt": b"wind governs nothing here\n"}
    result = calckit("recheck", path)
    assert (result.returncode, result.stdout.splitlines()[1]) == (0, "  seal              intact")
    path.write_bytes(path.read_bytes() + b"\n")
    code, words = (4, "altered or re-saved after issue") if form == "html" else (0, "1 byte added after issue")
    result = calckit("recheck", path)
    assert (result.returncode, result.stdout.splitlines()[1]) == (code, f"  seal              {words}")


@pytest.mark.parametrize(("form", "times"), [("html", 1), ("pdf", 2)])
def test_seal_stands_in_its_places_alone(form: str, times: int, issued: Path) -> None:
    data = (issued / f"C-7_A.{form}").read_bytes()
    assert data.count(seal.seal_of(data).encode()) == times


def test_the_same_bytes_a_month_later_elsewhere(first: tuple[str, Path], path: Path, calckit: Run) -> None:
    ahead = path.parent / "ahead"
    ahead.mkdir()
    (ahead / "sitecustomize.py").write_text(CLOCK_A_MONTH_AHEAD)
    other = {
        "PYTHONPATH": os.pathsep.join((str(ahead), str(ROOT))),
        "TZ": "Pacific/Kiritimati",
        "LC_ALL": "C",
        "HOME": str(path.parent),
        "PYTHONHASHSEED": "7",
    }
    result = calckit("issue", path, "--to", "later", **other)
    assert result.returncode == 0, result.stderr
    assert content(path.parent / "later") == content(first[1])
    assert len(content(first[1])) == 3


def test_the_clock_of_that_test_is_ahead(tmp_path: Path) -> None:
    (tmp_path / "sitecustomize.py").write_text(CLOCK_A_MONTH_AHEAD)
    code = "import time, datetime; print(time.time(), datetime.datetime.now().timestamp(), datetime.date.today())"
    here, ahead = (
        subprocess.run(
            [sys.executable, "-c", code], env=os.environ | extra, capture_output=True, text=True, check=True
        ).stdout.split()
        for extra in ({}, {"PYTHONPATH": str(tmp_path)})
    )
    for early, late in zip(here[:2], ahead[:2], strict=True):
        assert 30.9 < (float(late) - float(early)) / 86400 < 31.1
    assert here[2] < ahead[2]


def test_the_date_given_is_the_date_of_the_report(path: Path, calckit: Run, tmp_path: Path) -> None:
    assert calckit("issue", path, "--date", "2027-01-15", "--status", "preliminary").returncode == 0
    assert calckit("issue", path, "--to", "epoch", SOURCE_DATE_EPOCH="1796083199").returncode == 0
    for place, day, status in (
        (tmp_path, "2027-01-15", "preliminary"),
        (tmp_path / "epoch", "2026-11-30", "for check"),
    ):
        fields = from_json((place / "C-7_A.record.json").read_text()).calculation
        assert (fields["date"], fields["status"]) == (day, status)
        assert day in (place / "C-7_A.html").read_text()
        assert ("D:" + day.replace("-", "")).encode() in (place / "C-7_A.pdf").read_bytes()


def test_the_issuing_process_loads_neither_nbconvert_nor_sympy(path: Path, tmp_path: Path) -> None:
    code = (
        "import sys\n"
        "from calckit.cli import main\n"
        "assert main(sys.argv[1:]) == 0\n"
        "print(sorted({name.partition('.')[0] for name in sys.modules} & {'nbconvert', 'sympy', 'matplotlib'}))"
    )
    result = subprocess.run(
        [sys.executable, "-c", code, "issue", str(path), "--to", str(tmp_path / "out")],
        capture_output=True,
        text=True,
        check=True,
        cwd=ROOT,
    )
    assert result.stdout.splitlines()[-1] == "[]"


@pytest.mark.parametrize(("form", "name"), [("html", "HTMLReportExporter"), ("pdf", "PDFReportExporter")])
def test_nbconvert_gives_the_same_bytes(form: str, name: str, path: Path, issued: Path) -> None:
    command = [sys.executable, "-m", "nbconvert", "--to", f"calckit.report.exporters.{name}", str(path)]
    subprocess.run(command, check=True, capture_output=True, cwd=ROOT)
    assert path.with_suffix(f".{form}").read_bytes() == (issued / f"C-7_A.{form}").read_bytes()


def test_set_values(path: Path, calckit: Run, tmp_path: Path) -> None:
    result = calckit("issue", path, "--set", "h_n=70 ft", "--set", "V_w=150 kip", "--set", "prepared_by=R. Roe")
    assert result.returncode == 0, result.stderr
    record = from_json((tmp_path / "C-7_A.record.json").read_text())
    assert (record.line("h_n").shown, record.line("V_w").shown) == ("70 ft", "150 kip")
    computed = record.line("V_w").computed
    assert computed is not None
    assert computed.value == 140.0
    assert record.calculation["prepared_by"] == "R. Roe"


def test_set_values_at_fault_write_nothing(path: Path, calckit: Run, tmp_path: Path) -> None:
    result = calckit("issue", path, "--to", "out", "--set", "h_m=1", "--set", "p=2 m", "--set", "h_n=70 ft")
    assert (result.returncode, result.stdout) == (2, "")
    said = complaints(result.stderr)
    assert said[0] == "calckit: set values at fault:"
    assert said[1].startswith("  p: invalid; p (load per height): needed")
    assert said[2].startswith("  h_m: unknown; nearest known: h_")
    assert len(said) == 3
    assert content(tmp_path / "out") == {}


def test_a_cell_that_raises(path: Path, calckit: Run, issued: Path) -> None:
    before = content(issued)
    path.write_text(path.read_text().replace("62 ft", "62 furlong"))
    result = calckit("issue", path, "--to", issued, "--set", "q=1")
    assert (result.returncode, result.stdout) == (3, "")
    said = complaints(result.stderr)
    assert said[0].startswith('calckit: cell [2] under "Height", line 1: ')
    assert "h_n" in said[0]
    assert said[-2] == '  1 | calc.given("h_n", "62 furlong", source="S-201 grid A")'
    assert said[-1] == "set values undecided, as the run stopped: q"
    assert "Traceback" not in result.stderr
    assert content(issued) == before


def test_a_notebook_without_a_calculation(write_notebook: WriteNotebook, calckit: Run) -> None:
    result = calckit("issue", write_notebook("# Text", "1 + 1"))
    assert (result.returncode, complaints(result.stderr)) == (
        3,
        ["calckit: the notebook starts no calculation; cure: write calc = Calc(...) in its first code cell"],
    )


def test_a_terminal_without_greek_letters(path: Path, calckit: Run) -> None:
    path.write_text(path.read_text().replace('title=\\"Wall\\"', 'title=\\"θ\\"').replace("<=", "<"))
    result = calckit("issue", path, PYTHONIOENCODING="ascii")
    assert result.returncode == 0, result.stderr
    assert "line 4  ?: 124" in result.stdout


def test_a_word_when_it_takes_long(write_notebook: WriteNotebook, calckit: Run) -> None:
    result = calckit("issue", write_notebook("import time; time.sleep(2.5)", name="slow.ipynb"))
    assert result.stderr.splitlines()[0].endswith("slow.ipynb ...")
