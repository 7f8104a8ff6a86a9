"""Timings of what a user waits for: `python -m tests.bench`. Ratios travel between machines, seconds do not."""

import itertools
import os
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

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
    figures()
    processes()
