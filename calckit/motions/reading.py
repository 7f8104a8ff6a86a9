"""Reading of ground motions from delimited text.

Knows numbers in columns or in a row, fixed widths, headers and steps. Must not guess: the unit and the kind of a motion
are always stated by the caller, and a header is reported and compared, never trusted.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from math import isfinite

import numpy as np

from calckit import units
from calckit.dynamics.arguments import Arguments, Array
from calckit.errors import InputError
from calckit.motions.motion import KINDS, Motion

COMMENTS = ("#", "%", "!", "*")
"""What a line of comment starts with, wherever it stands."""
STEPS = ("column", "header")
"""Where the step may be read, in place of a number."""
_EVEN = 1e-3  # of the step: what two statements of it may differ by
_SHAKING = 0.05  # of the peak: above it a motion is cut while shaking (common practice, no source)
_TAIL = 0.01  # of the samples: the end that is looked at
_COUNT = re.compile(
    r"\b(?:npts|number of (?:points|samples|values|data)|points|samples)\b\s*[=:]\s*(\d+)"
    r"|\b(\d+)\s+(?:points|samples|values|data points)\b",
    re.IGNORECASE,
)
_STEP = re.compile(
    r"\b(?:dt|delta t|(?:time )?(?:step|interval|spacing)|sampling)\b[^\d\n]{0,20}?"
    r"(\d*\.?\d+(?:e[+-]?\d+)?)\s*(seconds?|sec|s|ms|hz)\b",
    re.IGNORECASE,
)
_WORST = 5  # bad lines named one by one


def read_motion(
    data: bytes | str,
    *,
    name: str,
    unit: str,
    kind: str,
    step: float | str,
    column: int | None = None,
    width: int | None = None,
    skip: int | None = None,
    zero_first: bool = False,
) -> Motion:
    """A motion from the text of a file.

    Arguments: `data`, the file's bytes or its text; `name`; `unit` of the accelerations, such as "g" (standard
    gravity), "gal", "cm/s2", "m/s2", "in/s2"; `kind`, "recorded", "simulated" or "synthetic"; `step`, the time step in
    s, or "column" (the first column holds times in s) or "header" (the header states it with its unit); `column`,
    counted from 1, the one with the accelerations (left out: the second where the first holds times, else every number
    of every line, in the order of reading); `width`, of fixed columns without blanks in characters, 10 for 8F10.5 (left
    out: blanks, tabs, commas or semicolons part the numbers); `skip`, lines of header (left out: those before the first
    line of numbers alone); `zero_first`, put a(0) = 0 in front, for files whose first value belongs to the time of one
    step. Lines that start with # % ! or * are comments and are searched like the header.

    Returns a Motion in m/s2. Its notes say what the header was, where it disagrees with the values, and what the
    samples themselves show: padding, a start away from zero, an end while still shaking, the shortest period that is
    held. Raises InputError naming every bad argument, or the bad lines.

    >>> text = "demo wall, 4 points, dt = 0.02 s\\n0.1 -0.2\\n0.05 0.0\\n"
    >>> motion = read_motion(text, name="demo", unit="cm/s2", kind="simulated", step="header", zero_first=True)
    >>> motion.acceleration.tolist(), motion.dt
    ([0.0, 0.001, -0.002, 0.0005, 0.0], 0.02)
    >>> read_motion("0.1 0.2", name="demo", unit="furlong", kind="seen", step=0)
    Traceback (most recent call last):
    calckit.errors.InputError: read_motion: unit: needed a unit of acceleration, such as g, gal, cm/s2, m/s2; ...
    """
    read = Arguments("read_motion")
    factor = _factor(read, unit)
    read.choice("kind", kind, KINDS)
    if isinstance(step, str):
        read.choice("step", step, STEPS)
    else:
        read.positive("step", step, (0,))
    for label, value, least in (("column", column, 1), ("width", width, 1), ("skip", skip, 0)):
        if value is not None and value < least:
            read.fault(label, f"a whole number from {least}", f"{value}")
    text = _text(read, data)
    read.settle()
    page = _page(read, text, width, skip)
    _check_columns(read, page, column, step)
    read.settle()
    stated = _stated_steps(page.header)
    dt = _step(read, page, step, stated)
    values = _values(page.rows, column, step)
    if values.size < 2:
        read.fault("data", "at least 2 values", f"{values.size}")
    read.settle()
    samples = values * factor
    notes = [*_header_notes(page.header, values.size)]
    if zero_first:
        samples = np.concatenate([[0.0], samples])
        notes.append("a(0) = 0 was put in front")
    return Motion(name, samples, dt, kind, (*notes, *_sample_notes(samples, dt)))


@dataclass(frozen=True)
class _Page:
    """A file cut up: lines of header and comment, rows of values, and the numbers of the lines these stand on."""

    header: list[str]
    rows: list[list[float]]
    numbers: list[int]


def _factor(read: Arguments, unit: str) -> float:
    """What a value in `unit` is multiplied by to stand in m/s2."""
    spelled = re.sub(r"(?<=s)\^?2$", "**2", unit.strip())
    try:
        return float(units.factor("cm/s**2" if spelled.lower() == "gal" else spelled, "m/s**2"))
    except InputError:
        cure = "take it from the file's own description, never from the size of the numbers"
        read.fault("unit", "a unit of acceleration, such as g, gal, cm/s2, m/s2", repr(unit), cure)
        return 1.0


def _text(read: Arguments, data: bytes | str) -> str:
    if isinstance(data, bytes):
        if b"\0" in data:
            read.fault("data", "text", "a binary file", "export the record as text")
            return ""
        data = data.decode("utf-8-sig", errors="replace")
    if not data.strip():
        read.fault("data", "a file with numbers", "an empty one")
    return data


def _page(read: Arguments, text: str, width: int | None, skip: int | None) -> _Page:
    page, wrong, missing = _Page([], [], []), [], []
    for number, line in enumerate(text.splitlines(), 1):
        if not line.strip():
            continue
        if (skip is not None and number <= skip) or line.lstrip().startswith(COMMENTS):
            page.header.append(line.strip())
            continue
        try:
            row = [float(cell) for cell in _cells(line, width)]
        except ValueError:
            if skip is None and not page.rows and not _half_numbers(line, width):
                page.header.append(line.strip())
            else:
                wrong.append((number, repr(line.strip()[:60])))
            continue
        if not all(map(isfinite, row)):
            missing.append((number, repr(line.strip()[:60])))
        page.rows.append(row)
        page.numbers.append(number)
    cure = "pass width= if the columns have no blanks between them, skip= if it is a line of header"
    _name_lines(read, wrong, "numbers alone, with decimal points", cure)
    _name_lines(read, missing, "finite numbers", "mend the record; a gap is not filled by guess")
    if not page.rows and not wrong:
        read.fault("data", "lines of numbers", f"{len(page.header)} lines of header or comment alone")
    read.settle()
    return page


def _name_lines(read: Arguments, found: list[tuple[int, str]], needed: str, cure: str) -> None:
    for number, given in found[:_WORST]:
        read.fault(f"line {number}", needed, given, cure)
    if len(found) > _WORST:
        read.fault("data", needed, f"{len(found) - _WORST} more such lines")


def _cells(line: str, width: int | None) -> list[str]:
    """The texts of the numbers of a line; ValueError for a fixed column that would stand for another number."""
    if width is not None:
        line = line.rstrip()
        cells = [line[i : i + width].strip() for i in range(0, len(line), width)]
        for cell in cells:  # Fortran puts a point that is not there where the format has it
            if "." not in cell and cell.strip("+-0"):
                raise ValueError(cell)
    elif ";" in line or "," in line:
        cells = [cell.strip() for cell in line.strip().removesuffix(",").split(";" if ";" in line else ",")]
    else:
        cells = line.split()
    return [cell.upper().replace("D", "E") if "D" in cell or "d" in cell else cell for cell in cells]


def _half_numbers(line: str, width: int | None) -> bool:
    """Whether a line in front of the first row looks like a row with one bad entry rather than a header."""
    try:
        cells = _cells(line, width)
    except ValueError:
        return False
    numbers = sum(re.fullmatch(r"[+-]?\d*\.\d+(?:[eE][+-]?\d+)?|nan|inf", cell.lower()) is not None for cell in cells)
    return 2 * numbers > len(cells)


def _check_columns(read: Arguments, page: _Page, column: int | None, step: float | str) -> None:
    """The columns that are asked for must be there, and what rises evenly is no acceleration."""
    if column is None and step != "column":
        lengths = {len(row) for row in page.rows}
        changes = np.diff([row[0] for row in page.rows])
        even = changes.size > 2 and changes[0] != 0 and np.allclose(changes, changes[0], rtol=0.05, atol=0)
        if even and len(lengths) == 1 and lengths != {1}:
            cure = 'pass step="column" if it holds times in s, or column= to name the accelerations'
            read.fault("column", "accelerations in every column", "a first column that changes evenly", cure)
        return
    needed = max(column or 1, 2 if step == "column" else 1)
    short = [number for number, row in zip(page.numbers, page.rows, strict=True) if len(row) < needed]
    if short:
        given = f"fewer on {len(short)} of {len(page.rows)}, the first line {short[0]}"
        read.fault("column", f"{needed} columns on every line", given)
    if step == "column" and column == 1:
        read.fault("column", "another column than the one with the times", "1")


def _values(rows: list[list[float]], column: int | None, step: float | str) -> Array:
    if column is None and step != "column":
        return np.array([value for row in rows for value in row])
    place = (2 if column is None else column) - 1
    return np.array([row[place] for row in rows])


def _step(read: Arguments, page: _Page, step: float | str, stated: list[float]) -> float:
    """The step in s, from where the caller says; a header that states another one is a fault."""
    if step == "header":
        if len(stated) == 1:
            return stated[0]
        given = ", ".join(f"{value:g} s" for value in stated) or "none"
        read.fault("step", "one time step with its unit in the header", given, "pass step= in s")
        return 1.0
    dt = _even_step(read, page) if step == "column" else float(step)
    other = [value for value in stated if abs(value - dt) > _EVEN * dt]
    if other and not read.faults:
        cure = "find out which is right, and delete the other from a copy of the file"
        read.fault("step", f"{other[0]:g} s, as the header states", f"{dt:g} s", cure)
    return dt


def _stated_steps(header: list[str]) -> list[float]:
    """The steps in s that the header states, each once."""
    found = set()
    for line in header:
        for numeral, unit in _STEP.findall(line):
            value = float(numeral)
            if value > 0:
                found.add({"ms": value / 1000, "hz": 1 / value}.get(unit.lower(), value))
    return sorted(found)


def _even_step(read: Arguments, page: _Page) -> float:
    """The step of the times in the first column."""
    times = np.array([row[0] for row in page.rows])
    if times.size < 2:
        return 1.0
    steps = np.diff(times)
    typical = float(np.median(steps))
    if steps.min() <= 0:
        late = int(steps.argmin())
        given = f"{times[late + 1]:g} s after {times[late]:g} s on line {page.numbers[late + 1]}"
        read.fault("step", "times that rise down the first column", given, "pass step= and column= if they are rounded")
        return 1.0
    digit = _last_digit(times)
    # a difference of rounded times is off by up to a unit of their last digit, which must be small beside the step
    allowed = max(_EVEN * typical, 1.02 * digit if digit < typical / 10 else 0)
    odd = np.flatnonzero(np.abs(steps - typical) > allowed)
    if odd.size:
        given = f"{typical:g} s, and {steps[odd[0]]:g} s before line {page.numbers[odd[0] + 1]}"
        cure = "cut the record there, or bring it to one step; pass step= and column= if the times are rounded"
        read.fault("step", "one time step", given, cure)
    return float((times[-1] - times[0]) / (times.size - 1))


def _last_digit(times: Array) -> float:
    """A unit of the last decimal that times are printed with."""
    for decimals in range(12):
        if np.abs(times - times.round(decimals)).max() < 1e-9:
            return float(10.0**-decimals)
    return 0.0


def _header_notes(header: list[str], count: int) -> Iterator[str]:
    if header:
        yield f"{len(header)} lines of header or comment, the first: {header[0][:80]}"
    stated = next(filter(None, map(_COUNT.search, header)), None)
    if stated and int(stated[1] or stated[2]) != count:
        yield f"the header says {stated[1] or stated[2]} values, {count} are present (all are kept)"


def _sample_notes(samples: Array, dt: float) -> Iterator[str]:
    peak = float(np.abs(samples).max())
    nonzero = np.flatnonzero(samples)
    zeros = samples.size - 1 - int(nonzero[-1]) if nonzero.size else samples.size
    if zeros:
        yield f"ends with {zeros} value{'s' * (zeros > 1)} of zero, which may be padding (kept)"
    if abs(samples[0]) > 0.01 * peak:
        yield f"starts at {samples[0]:.4g} m/s2: integrals from rest may drift"
    tail = float(np.abs(samples[-max(1, int(_TAIL * samples.size)) :]).max())
    if tail > _SHAKING * peak:
        yield f"ends while shaking, at {tail / peak:.0%} of its peak: responses are followed beyond the end"
    yield f"holds nothing above {0.5 / dt:.4g} Hz, half the sampling rate: no waves of periods below {2 * dt:.3g} s"
