"""Make example_reports anew: `python -m tests.make_examples`.

Issues every template and the second pass of the building under both editions, tells what the edition moves, keeps the
executed notebook beside each report, and draws
the pictures of README.md from the first report (with pdftoppm, of the poppler utilities).
"""

import shutil
import subprocess
import tempfile
from pathlib import Path

import nbformat

from calckit.report import notebook as notebooks
from calckit.report.compare import compare, write
from calckit.report.issue import issue
from calckit.report.run import Settings, run
from tests.second_pass import PASSES, second_pass

ROOT = Path(__file__).parents[1]
EXAMPLES = ROOT / "example_reports"
TEMPLATES = sorted((ROOT / "templates").glob("*.ipynb"))
PICTURES = {"answer": 2, "lines": 5, "spectrum": 10}
"""Picture -> sheet of the first report."""


def main() -> None:
    """Write the examples; earlier ones are replaced."""
    EXAMPLES.mkdir(exist_ok=True)
    with tempfile.TemporaryDirectory() as folder:
        edited = [Path(folder) / name for name in PASSES]
        for path in edited:
            nbformat.write(second_pass(TEMPLATES[0], PASSES[path.name]), path)
        for notebook in (*TEMPLATES, *edited):
            source = notebooks.read(notebook)
            issued = issue(source, Settings(), EXAMPLES)
            executed = run(source, Settings()).executed
            nbformat.write(executed, EXAMPLES / notebook.name)
            if notebook == TEMPLATES[0]:
                draw(next(path for path in issued.paths if path.suffix == ".pdf"))
    changed = compare(EXAMPLES / "C-101_B.pdf", EXAMPLES / "C-102_B.pdf")
    write(changed, EXAMPLES / "7-16_to_7-22.html")


def draw(report: Path) -> None:
    """The pictures of README.md."""
    if not shutil.which("pdftoppm"):
        raise SystemExit("pdftoppm (poppler utilities) was not found: pictures are left as they are")
    (EXAMPLES / "pictures").mkdir(exist_ok=True)
    for name, sheet in PICTURES.items():
        with tempfile.TemporaryDirectory() as folder:
            target = Path(folder) / name
            command = ["pdftoppm", "-png", "-gray", "-r", "80", "-singlefile", "-f", str(sheet), "-l", str(sheet)]
            subprocess.run([*command, str(report), str(target)], check=True)
            shutil.copyfile(f"{target}.png", EXAMPLES / "pictures" / f"{name}.png")


if __name__ == "__main__":
    main()
