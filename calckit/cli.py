"""The `calckit` command: new, issue, recheck, verify.

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

from calckit import __version__
from calckit.core.record import STATUSES
from calckit.errors import CalckitError, CommandError, MismatchError, NotebookError, UnknownNameError

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

    recheck = commands.add_parser("recheck", help="hold an issued PDF or HTML file against its seal and hashes")
    recheck.add_argument("file", metavar="FILE", type=Path)
    recheck.set_defaults(command=_recheck)

    verify = commands.add_parser("verify", help="run the published checks of the kit")
    verify.add_argument("name", nargs="?", metavar="NAME", help="folder of a standard, or dynamics; default all")
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
    from calckit.report.recheck import recheck

    findings = recheck(arguments.file)
    print(arguments.file)
    width = max(len(finding.what) for finding in findings)
    for finding in findings:
        print(f"  {finding.what:{width}}  {finding.text}")
    return DONE if all(finding.good for finding in findings) else MISMATCH


def _verify(arguments: argparse.Namespace) -> int:
    from calckit.core import checks

    text, all_pass = checks.report(arguments.name)
    print(text)
    return DONE if all_pass else MISMATCH
