"""Timings of what a user waits for: `python -m tests.bench`. Ratios travel between machines, seconds do not."""

import itertools
import os
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

ROOT = Path(__file__).parents[1]
TEMPLATE = ROOT / "templates/building_lateral_force.ipynb"


def best(work: Callable[[], object], repeats: int) -> float:
    """The shortest of several runs, in seconds."""
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        work()
        times.append(time.perf_counter() - start)
    return min(times)


def fresh(*arguments: str) -> Callable[[], object]:
    """A run in a process of its own."""
    source = os.environ | {"PYTHONPATH": str(ROOT)}
    return lambda: subprocess.run([sys.executable, *arguments], check=True, capture_output=True, cwd=ROOT, env=source)


def show(what: str, seconds: float, beside: str = "") -> None:
    """One row."""
    value, unit = (seconds, "s ") if seconds >= 0.1 else (seconds * 1000, "ms")
    print(f"{what:<60}{value:>10.3f} {unit}  {beside}".rstrip())


def processes() -> None:
    """Starting up, and a whole issue against a plain export of the same notebook."""
    bare = best(fresh("-c", ""), 5)
    show("python alone", bare)
    show("import of the command line", best(fresh("-c", "import calckit.cli"), 5) - bare, "beyond python alone")
    show("import of Calc", best(fresh("-c", "from calckit import Calc"), 5) - bare, "beyond python alone")
    show("import of plots", best(fresh("-c", "import calckit.plots"), 5) - bare, "beyond python alone")
    with tempfile.TemporaryDirectory() as folder:
        issued = best(fresh("-m", "calckit", "issue", str(TEMPLATE), "--to", folder), 3)
        export = ("--to", "html", "--execute", "--output-dir", folder, str(TEMPLATE))
        plain = best(fresh("-m", "nbconvert", *export), 3)
    show("issue of the template, HTML and PDF", issued, f"{issued / plain:.2f} of a plain HTML export by nbconvert")
    show("verify, all checks", best(fresh("-m", "calckit", "verify"), 3))


def formulas() -> None:
    """One formula: value, slope, printed forms; one line."""
    from calckit import Calc
    from calckit.core.formula import Formula
    from calckit.core.printers import print_all
    from calckit.core.record import Source
    from calckit.core.symbol import Symbol

    T_a = Formula("T_a", "C_t*h_n**x", Source("bench"))
    values = {"C_t": 0.028, "h_n": 62.0, "x": 0.8}
    T_a.value(values)

    def each(work: Callable[[], object], count: int = 1000) -> float:
        return best(lambda: [work() for _ in range(count)], 5) / count

    show("value of a formula", each(lambda: T_a.value(values)))
    show("slope of a formula", each(lambda: T_a.slope(values, "h_n")))
    symbols = {name: Symbol(name, name) for name in values}
    show("four printed forms", each(lambda: print_all(T_a.node, symbols.__getitem__), 200))
    calc = Calc(project="bench", number="B-1")
    calc.document("D", title="Document")
    calc.given("h_n", "62 ft", source="D")
    number = itertools.count()

    def own_line() -> None:
        calc.line(f"a{next(number)}", "h_n*2/3", unit="ft", meaning="a length")

    show("a user's own line, digits included", each(own_line, 50))


def filtered(record: Any, dt: float, omega: float, damping: float) -> tuple[Any, Any]:
    """Largest displacement and total acceleration of each row by scipy.signal.lfilter, from the same recurrence."""
    import numpy as np
    from scipy.signal import lfilter

    from calckit.dynamics import recurrence

    transition, start, end = recurrence(omega, damping, dt)
    (a, b), (c, d) = transition
    below = [1, -(a + d), a * d - b * c]
    u = lfilter([end[0], start[0] + b * end[1] - d * end[0], b * start[1] - d * start[0]], below, -record)
    v = lfilter([end[1], start[1] + c * end[0] - a * end[1], c * start[0] - a * start[1]], below, -record)
    total = 2 * damping * omega * v + omega**2 * u
    return np.abs(u).max(axis=1), np.abs(total).max(axis=1)


def spectra(count: int = 50, samples: int = 20_000, natural: int = 200) -> None:
    """Response spectra of a suite against a loop over the periods with scipy.signal.lfilter, equally refined.

    lfilter has one thread, so the row stands twice: with the threads as they come, and in a process of one thread.
    """
    import numpy as np

    from calckit.dynamics import response_spectrum
    from calckit.dynamics.spectrum import STEPS, straight

    dt, periods = 0.005, np.geomspace(0.05, 5, natural)
    records = np.random.default_rng(1).normal(size=(count, samples))
    records[:, 0] = 0  # lfilter takes the sample before the first as 0

    def loop() -> Any:
        found, parts = [], 2 ** np.ceil(np.log2(np.maximum(STEPS * dt / periods, 1))).astype(int)
        finer: dict[int, Any] = {}
        for period, part in zip(periods, parts.tolist(), strict=True):
            if part not in finer:
                rest = int(np.ceil(periods[parts == part].max() / 2 * part / dt))
                finer = {part: np.pad(straight(records, part), ((0, 0), (0, rest)))}
            found.append(filtered(finer[part], dt / part, 2 * np.pi / period, 0.05))
        return np.array(found)

    kept: dict[str, Any] = {}
    ours = best(lambda: kept.update(a=response_spectrum(records, dt, periods, 0.05, refine="straight-line")), 2)
    theirs = best(lambda: kept.update(b=loop()), 2)
    apart = np.abs(kept["a"].displacement.T / kept["b"][:, 0] - 1).max()
    beside = f"{ours / theirs:.2f} of a loop with lfilter; largest difference {apart:.0e}"
    show(f"spectra, {count} records x {samples} samples x {natural} periods", ours, beside)


ONE_RECORD = """
import numpy as np
dt, periods = 0.01, np.geomspace(0.05, 5, 100)
record = np.random.default_rng(1).normal(size=(1, 4000)).cumsum() * np.hanning(4000)
record[:, 0] = 0
"""
OURS = "from calckit.dynamics import response_spectrum as s; s(record, dt, periods, 0.05, refine='straight-line')"
THEIRS = """
from calckit.dynamics.spectrum import straight
from tests.bench import filtered
for period in periods:
    part = int(2 ** np.ceil(np.log2(max(50 * dt / period, 1))))
    finer = np.pad(straight(record, part), ((0, 0), (0, int(np.ceil(period / 2 * part / dt)))))
    filtered(finer, dt / part, 2 * np.pi / period, 0.05)
"""


def one_record() -> None:
    """One record from a fresh process, against a script that imports scipy.signal."""
    ours, theirs = best(fresh("-c", ONE_RECORD + OURS), 3), best(fresh("-c", ONE_RECORD + THEIRS), 3)
    show("one record from a fresh process", ours, f"{ours / theirs:.2f} of a script with scipy.signal")


def modal(freedoms: int = 200) -> None:
    """Modes of a chain against scipy.linalg.eigh; in a process of one thread, where the two share no threads."""
    import numpy as np
    from scipy.linalg import eigh

    from calckit.dynamics import modes, shear_building

    random = np.random.default_rng(2)
    mass, stiffness = random.uniform(0.5, 2, freedoms), shear_building(random.uniform(0.5, 2, freedoms))
    ours = best(lambda: modes(mass, stiffness), 7)
    theirs = best(lambda: eigh(stiffness, np.diag(mass)), 7)
    show(f"modes of {freedoms} freedoms", ours, f"{ours / theirs:.2f} of scipy.linalg.eigh")


def figures() -> None:
    """Drawings with their SVG."""
    from calckit import plots

    levels, h_x = [str(n) for n in range(12, 0, -1)], [13.0 * n for n in range(12, 0, -1)]
    forces = {"X": h_x, "Y": h_x}
    show(
        "forces at 12 levels in two directions, as SVG",
        best(lambda: plots.svg_bytes(plots.level_forces(levels, h_x, forces, force_unit="kip", length_unit="ft")), 5),
    )


if __name__ == "__main__":
    formulas()
    spectra()
    print("in a process of one thread:", flush=True)
    one_thread = os.environ | {"PYTHONPATH": str(ROOT), "OMP_NUM_THREADS": "1"}
    rows = "from tests import bench; bench.spectra(); bench.modal()"
    subprocess.run([sys.executable, "-c", rows], check=True, env=one_thread)
    one_record()
    figures()
    processes()
