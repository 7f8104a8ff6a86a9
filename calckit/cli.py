"""The `calckit` command: new, issue, recheck, compare, verify.

Knows the command line, the templates and the exit codes. Must not know how a command does its work; each part is
loaded when its command is called.
"""

from __future__ import annotations

import argparse
import io
import json
import sys
import threading
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from calckit import __version__
from calckit.core.record import STATUSES
from calckit.errors import CalckitError, CommandError, MismatchError, NotebookError, UnknownNameError

if TYPE_CHECKING:
    from calckit.report.recheck import Finding

DONE, AT_FAULT, CELL_RAISED, MISMATCH, INTERRUPTED = 0, 2, 3, 4, 130
_PATIENCE = 2.0  # seconds


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command and return its exit code: 0 done, 2 the command line or a set value is at fault, 3 a cell of
    the notebook raised, 4 files or checks do not match.

    >>> main(["recheck", "no-such-file.pdf"])
    2
    """
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="replace")  # a terminal without Greek letters must not stop a command
    arguments = _parser().parse_args(argv)
    try:
        code: int = arguments.command(arguments)
    except CalckitError as error:
        print(f"calckit: {error}", file=sys.stderr)
        return _code(error)
    except OSError as error:
        print(f"calckit: {error}", file=sys.stderr)
        return AT_FAULT
    except KeyboardInterrupt:
        print("calckit: stopped", file=sys.stderr)
        return INTERRUPTED
    return code


def _code(error: CalckitError) -> int:
    if isinstance(error, NotebookError):
        return CELL_RAISED
    return MISMATCH if isinstance(error, MismatchError) else AT_FAULT


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="calckit",
        description="Seismic load calculations that a second engineer can check line by line.",
        epilog="Exit codes: 0 done; 2 the command line or a set value is at fault; 3 a cell of the notebook raised; "
        "4 files or checks do not match.",
    )
    parser.add_argument("--version", action="version", version=f"calckit {__version__}")
    commands = parser.add_subparsers(required=True, metavar="COMMAND")

    new = commands.add_parser("new", help="list the templates, or copy one to edit")
    new.add_argument("template", nargs="?", metavar="TEMPLATE", help="name of a template; without it they are listed")
    new.add_argument("--to", metavar="PATH", type=Path, default=Path(), help="file or folder to copy it to")
    new.set_defaults(command=_new)

    issue = commands.add_parser("issue", help="run a notebook clean and write its report")
    issue.add_argument("notebook", metavar="NOTEBOOK", type=Path)
    issue.add_argument("--to", metavar="FOLDER", type=Path, default=Path(), help="where to write; default here")
    issue.add_argument(
        "--set", metavar="ID=VALUE", action="append", default=[], help="value of a line; @FILE takes it from a file"
    )
    issue.add_argument("--status", metavar="WORD", help=f"one of: {', '.join(STATUSES)}")
    issue.add_argument("--date", metavar="DAY", help="date of the issue, such as 2026-12-01")
    issue.add_argument("--confirmed", metavar="FILE", help="office register of values confirmed against the standard")
    issue.add_argument("--only", choices=("html", "pdf"), help="write this form alone")
    issue.set_defaults(command=_issue)

    recheck = commands.add_parser("recheck", help="hold an issued PDF or HTML file against itself")
    recheck.add_argument("file", metavar="FILE", type=Path)
    recheck.add_argument(
        "--run", action="store_true", help="run the notebook inside the file, too: this runs the file's code"
    )
    recheck.set_defaults(command=_recheck)

    comments = commands.add_parser("comments", help="read the comments of a returned PDF into a check log")
    comments.add_argument("file", metavar="PDF", type=Path)
    comments.add_argument("--check-log", metavar="FILE", type=Path, required=True, help="check log (CSV) to add to")
    comments.set_defaults(command=_comments)

    files = commands.add_parser("files", help="write a signature report: files with digests, to be signed by hand")
    files.add_argument("files", metavar="FILE", type=Path, nargs="+")
    files.add_argument("--to", metavar="PATH", type=Path, default=Path(), help="file or folder to write to")
    files.set_defaults(command=_files)

    compare = commands.add_parser("compare", help="what changed between two issued files, in engineering terms")
    compare.add_argument("old", metavar="OLD", type=Path, help="a PDF, an HTML file or a record file")
    compare.add_argument("new", metavar="NEW", type=Path)
    compare.add_argument("--to", metavar="FILE", type=Path, help="write the comparison as an HTML file, too")
    compare.set_defaults(command=_compare)

    extract = commands.add_parser("extract", help="inputs and criteria alone, for an independent recalculation")
    extract.add_argument("file", metavar="FILE", type=Path, help="an issued PDF or HTML file")
    extract.add_argument("--ask", metavar="ID,...", required=True, help="ids of the results to be recalculated")
    extract.add_argument("--to", metavar="PATH", type=Path, default=Path(), help="folder to write to; default here")
    extract.set_defaults(command=_extract)

    reconcile = commands.add_parser("reconcile", help="set a checker's own numbers beside those of an issued file")
    reconcile.add_argument("file", metavar="FILE", type=Path, help="an issued PDF or HTML file")
    reconcile.add_argument("csv", metavar="CSV", type=Path, help="the filled CSV of calckit extract")
    reconcile.set_defaults(command=_reconcile)

    verify = commands.add_parser("verify", help="run the published checks of the kit")
    verify.add_argument("name", nargs="?", metavar="NAME", help="folder of a standard, or dynamics; default all")
    verify.add_argument("--records", metavar="FOLDER", type=Path, help="folder of the recorded motions")
    verify.set_defaults(command=_verify)
    return parser


def _new(arguments: argparse.Namespace) -> int:
    templates = {path.stem: path for path in sorted(_template_folder().glob("*.ipynb"))}
    if arguments.template is None:
        width = max(map(len, templates), default=0)
        for name, path in templates.items():
            print(f"{name:{width}}  {_first_heading(path)}")
        return DONE
    name = arguments.template.removesuffix(".ipynb")
    if name not in templates:
        raise UnknownNameError("template", name, templates)
    target: Path = arguments.to
    if target.is_dir():
        target = target / f"{name}.ipynb"
    try:
        with target.open("xb") as file:
            file.write(templates[name].read_bytes())
    except FileExistsError as error:
        raise CommandError(f"{target} exists and is not overwritten; cure: name another file with --to") from error
    print(target)
    return DONE


def _template_folder() -> Path:
    """Inside the installed package, or beside it in a source tree."""
    package = Path(__file__).resolve().parent
    for folder in (package / "templates", package.parent / "templates"):
        if folder.is_dir():
            return folder
    raise CommandError("the templates are not there; cure: install calckit again")


def _first_heading(path: Path) -> str:
    for cell in json.loads(path.read_text(encoding="utf-8"))["cells"]:
        if cell["cell_type"] == "markdown":
            for line in "".join(cell["source"]).splitlines():
                if line.startswith("#"):
                    return line.strip("# ")
    return ""


def _issue(arguments: argparse.Namespace) -> int:
    from calckit.report import issue, notebook

    settings = issue.settings_from(
        arguments.set, status=arguments.status, day=arguments.date, confirmed=arguments.confirmed
    )
    source = notebook.read(arguments.notebook)
    word = threading.Timer(_PATIENCE, print, (f"running {arguments.notebook} ...",), {"file": sys.stderr})
    word.daemon = True
    word.start()
    try:
        formats = (arguments.only,) if arguments.only else issue.FORMATS
        issued = issue.issue(source, settings, arguments.to, formats)
    finally:
        word.cancel()
    print(issued.text)
    return DONE


def _recheck(arguments: argparse.Namespace) -> int:
    from calckit.report.recheck import recheck, run_again

    findings = recheck(arguments.file)
    print(arguments.file)
    good = _print_findings(findings)
    if not arguments.run:
        return DONE if good else MISMATCH
    print("running the code inside this file, in a temporary folder, with your own rights ...", flush=True)
    try:
        good &= _print_findings(run_again(arguments.file))
    except NotebookError as error:
        if good:
            raise
        print(f"calckit: {error}", file=sys.stderr)
    return DONE if good else MISMATCH


def _print_findings(findings: Sequence[Finding]) -> bool:
    """Print findings, what each names below it; whether all are good."""
    width = max(len(finding.what) for finding in findings)
    for finding in findings:
        print(f"  {finding.what:{width}}  {finding.text.replace(chr(10), chr(10) + ' ' * (width + 6))}")
    return all(finding.good for finding in findings)


def _comments(arguments: argparse.Namespace) -> int:
    from calckit.report import comments

    print(comments.collect(arguments.file, arguments.check_log))
    return DONE


def _files(arguments: argparse.Namespace) -> int:
    from calckit.report import signature

    print(signature.write(arguments.files, arguments.to))
    return DONE


def _compare(arguments: argparse.Namespace) -> int:
    from calckit.report import compare

    comparison = compare.compare(arguments.old, arguments.new)
    written = compare.write(comparison, arguments.to) if arguments.to else None
    print(compare.text(comparison))
    if written:
        print(f"\n{written}")
    return MISMATCH if comparison.faults else DONE


def _extract(arguments: argparse.Namespace) -> int:
    from calckit.report import extract

    ids = [id_.strip() for id_ in arguments.ask.split(",") if id_.strip()]
    print(*extract.export(arguments.file, ids, arguments.to), sep="\n")
    return DONE


def _reconcile(arguments: argparse.Namespace) -> int:
    from calckit.report import reconcile

    rows = reconcile.reconcile(arguments.file, arguments.csv)
    print(reconcile.text(rows))
    return DONE if all(row.settled for row in rows) else MISMATCH


def _verify(arguments: argparse.Namespace) -> int:
    from calckit.core import checks

    text, all_pass = checks.report(arguments.name, arguments.records)
    print(text)
    return DONE if all_pass else MISMATCH
