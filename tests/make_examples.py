"""Make example_reports anew: `python -m tests.make_examples`.

Issues every template, keeps the executed notebook beside the report, and draws the pictures of README.md from the PDF
(with pdftoppm, of the poppler utilities).
"""

import shutil
import subprocess
import tempfile
from pathlib import Path

import nbformat

from calckit.report import notebook as notebooks
from calckit.report.issue import issue
from calckit.report.run import Settings, run

ROOT = Path(__file__).parents[1]
EXAMPLES = ROOT / "example_reports"
TEMPLATES = sorted((ROOT / "templates").glob("*.ipynb"))
PICTURES = {"answer": 2, "lines": 5, "spectrum": 10}
"""Picture -> sheet of the first report."""


def main() -> None:
    """Write the examples; earlier ones are replaced."""
    EXAMPLES.mkdir(exist_ok=True)
    for template in TEMPLATES:
        source = notebooks.read(template)
        issued = issue(source, Settings(), EXAMPLES)
        executed = run(source, Settings()).executed
        nbformat.write(executed, EXAMPLES / template.name)
        draw(next(path for path in issued.paths if path.suffix == ".pdf"))


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
