"""The checks of the kit against publications: read, run, compared, reported.

Knows the form of a `checks.toml` and how a result is compared with it; the `verify.py` beside it runs each check
through public steps or functions. Must not know any standard.
"""

from __future__ import annotations

import importlib
import pkgutil
import tomllib
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from importlib import resources
from pathlib import Path
from typing import Any

from calckit.core.record import NOT_OK, OK
from calckit.errors import CalckitError, CommandError, MismatchError, UnknownNameError

STANDARDS = "calckit.standards"
ARRAYS = {"dynamics": ("calckit.dynamics", "calckit.motions")}
"""Checks outside the standards, and the packages that hold them: those that need a record stand with the motions."""
KINDS = {"found": "published, found", "memory": "published, from memory", "constructed": "constructed, not published"}
"""First word of `obtained` -> the count it belongs to."""

Adapter = Callable[[Mapping[str, Any]], Mapping[str, Any]]
"""Runs one check: its `given` to the quantities it gives."""


@dataclass(frozen=True)
class Check:
    """One check as written in `checks.toml`; `reason` says why it is not run, blank if it is."""

    id: str
    source: str
    obtained: str
    edition: str
    given: dict[str, Any]
    expect: dict[str, tuple[Any, float | str]]
    reason: str = ""
    not_reached: dict[str, str] = field(default_factory=dict)

    @property
    def kind(self) -> str:
        """The count the check belongs to."""
        return KINDS[self.obtained.partition(",")[0]]


@dataclass(frozen=True)
class Row:
    """One expectation held against what the kit gives."""

    quantity: str
    expected: str
    obtained: str
    tolerance: str
    verdict: str


@dataclass(frozen=True)
class Outcome:
    """The rows of one check; `refusal` is the error if the kit refused its inputs."""

    rows: list[Row]
    refusal: str = ""


def report(name: str | None = None, records: Path | None = None) -> tuple[str, bool]:
    """Run the checks of a standard's folder or of dynamics (None: all) and say, row by row, what agrees.

    Arguments: `records`, the folder of the recorded motions that some checks name; a check whose file is not there is
    said not to be reached. Returns the text and whether every expectation that is reached agrees. Raises
    UnknownNameError for a name without checks, CommandError for a folder that is not there.

    >>> text, agrees = report("asce7")
    >>> agrees
    True
    """
    known = names()
    if name is not None and name not in known:
        raise UnknownNameError("checks", name, known)
    if records is not None and not records.is_dir():
        raise CommandError(f"{records} is no folder; cure: name the folder that holds the recorded motions")
    texts, agrees = [], True
    for each in [name] if name else known:
        text, good = _report(each, records)
        texts.append(text)
        agrees &= good
    return "\n\n".join(texts), agrees


def names() -> list[str]:
    """The folders of standards that carry checks, then the names in ARRAYS."""
    package = importlib.import_module(STANDARDS)
    folders = [module.name for module in pkgutil.iter_modules(package.__path__)]
    carrying = [name for name in folders if (resources.files(f"{STANDARDS}.{name}") / "checks.toml").is_file()]
    return [*carrying, *ARRAYS]


def read(text: str) -> list[Check]:
    """The checks of a `checks.toml`."""
    return [
        Check(
            check["id"], f"{check['source']['document']}, {check['source']['place']}".removesuffix(", -"),
            check["obtained"], check["edition"], check["given"],
            {quantity: (value, tolerance) for quantity, (value, tolerance) in check["expect"].items()},
            check.get("reason", ""), check.get("not_reached", {}),
        )
        for check in tomllib.loads(text)["check"]
    ]  # fmt: skip


def with_record(check: Check, records: Path | None) -> Check:
    """A check with the path of the recorded motion that it names, or with the reason why there is none."""
    name = check.given.get("record")
    if name is None or check.reason:
        return check
    if records is None:
        return replace(check, reason=f"needs the record {name}: name its folder with --records")
    if not (records / name).is_file():
        return replace(check, reason=f"needs the record {name}, which is not in {records}")
    return replace(check, given=check.given | {"record": records / name})


def run(check: Check, adapter: Adapter) -> Outcome:
    """A row for each expectation of a check that is reached; a refusal of the kit makes every row NOT OK."""
    wanted = {name: pair for name, pair in check.expect.items() if name not in check.not_reached}
    try:
        results = adapter(check.given)
    except CalckitError as error:
        rows = [Row(name, _shown(value), "nothing", _allowed(t), NOT_OK) for name, (value, t) in wanted.items()]
        return Outcome(rows, str(error))
    return Outcome([_compared(name, value, t, results.get(name), check.given) for name, (value, t) in wanted.items()])


def _compared(name: str, expected: Any, tolerance: float | str, given: Any, inputs: Mapping[str, Any]) -> Row:
    many = isinstance(expected, list) and not all(isinstance(entry, str) for entry in expected)
    if not many:
        verdict = OK if given is not None and _agrees(expected, given, tolerance) else NOT_OK
        return Row(name, _shown(expected), _shown(given), _allowed(tolerance), verdict)
    if not isinstance(given, Sequence) or len(given) != len(expected):
        return Row(name, _shown(expected), _shown(given), _allowed(tolerance), NOT_OK)
    worst = max(range(len(expected)), key=lambda i: abs(expected[i] - given[i]) / _width(expected[i], tolerance))
    verdict = OK if all(_agrees(e, g, tolerance) for e, g in zip(expected, given, strict=True)) else NOT_OK
    label = inputs.get("level", range(1, len(expected) + 1))[worst]
    quantity = f"{name}, {len(expected)} entries, worst at {label}"
    return Row(quantity, _shown(expected[worst]), _shown(given[worst]), _allowed(tolerance), verdict)


def _agrees(expected: Any, given: Any, tolerance: float | str) -> bool:
    if isinstance(expected, str | bool | list) or not tolerance:
        return bool(expected == given)
    return isinstance(given, int | float) and abs(given - expected) <= _width(expected, tolerance)


def _width(expected: float, tolerance: float | str) -> float:
    if isinstance(tolerance, str):
        return abs(expected) * float(tolerance.rstrip("%")) / 100
    return tolerance


def _allowed(tolerance: float | str) -> str:
    return f"{tolerance}" if tolerance else "exact"


def _shown(value: Any) -> str:
    if value is None:
        return "nothing"
    if isinstance(value, list | tuple):
        return ", ".join(_shown(entry) for entry in value) or "none"
    return f"{value:.8g}" if isinstance(value, float) else str(value)


def _report(name: str, records: Path | None) -> tuple[str, bool]:
    checks: list[Check] = []
    adapters: dict[str, Adapter] = {}
    for package in ARRAYS.get(name, (f"{STANDARDS}.{name}",)):
        checks += read((resources.files(package) / "checks.toml").read_text(encoding="utf-8"))
        adapters |= importlib.import_module(f"{package}.verify").ADAPTERS
    unmatched = sorted({check.id for check in checks if not check.reason} ^ adapters.keys())
    if unmatched:
        raise MismatchError(f"checks of {name}: {', '.join(unmatched)} stand in checks.toml or in verify.py alone")
    checks = [with_record(check, records) for check in checks]
    reached = [check for check in checks if not check.reason]
    outcomes = {check.id: run(check, adapters[check.id]) for check in reached}
    lines = [line for check in reached for line in (*_block(check, outcomes[check.id]), "")]
    lines += [*_counts(checks, outcomes), "", *_left_out(checks)]
    return "\n".join(lines), all(row.verdict == OK for outcome in outcomes.values() for row in outcome.rows)


def _block(check: Check, outcome: Outcome) -> Iterator[str]:
    yield f"{check.id}  ({check.obtained}; {check.edition})"
    yield f"  source: {check.source}"
    if outcome.refusal:
        yield f"  the kit refused: {outcome.refusal}"
    head = Row("quantity", "expected", "obtained", "tolerance", "verdict")
    cells = [(r.quantity, r.expected, r.obtained, r.tolerance, r.verdict) for r in (head, *outcome.rows)]
    widths = [max(len(row[i]) for row in cells) for i in range(5)]
    for row in cells:
        yield "  " + "  ".join(text.ljust(width) for text, width in zip(row, widths, strict=True)).rstrip()


def _counts(checks: Sequence[Check], outcomes: Mapping[str, Outcome]) -> Iterator[str]:
    for kind in KINDS.values():
        of_kind = [check for check in checks if check.kind == kind]
        ran = [outcomes[check.id] for check in of_kind if check.id in outcomes]
        rows = [row for outcome in ran for row in outcome.rows]
        agreeing = sum(row.verdict == OK for row in rows)
        yield f"{kind}: {len(ran)} of {len(of_kind)} checks run, {agreeing} of {len(rows)} values agree"


def _left_out(checks: Sequence[Check]) -> Iterator[str]:
    yield "not reached:"
    for check in checks:
        if check.reason:
            yield f"  {check.id}: {check.reason}"
        for quantity, reason in check.not_reached.items():
            yield f"  {check.id}, {quantity}: {reason}"
