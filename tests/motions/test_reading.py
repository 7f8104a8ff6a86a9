"""Reading of motions: every way a file may be written, and every way it may be wrong."""

from __future__ import annotations

import re
from typing import Any

import numpy as np
import pytest

from calckit.errors import InputError
from calckit.motions import Motion, read_motion

VALUES = [0.0, 0.11, -0.2, 0.35, -0.4, 0.02]


def read(data: bytes | str, **how: Any) -> Motion:
    """A file read with what most of these tests state alike."""
    return read_motion(data, **{"name": "demo", "unit": "m/s2", "kind": "simulated", "step": 0.01, **how})


@pytest.mark.parametrize(
    ("data", "how"),
    [
        ("\n".join(map(str, VALUES)), {}),
        ("0 0.11 -0.2\n0.35 -0.4 0.02\n", {}),
        ("0, 0.11, -0.2, 0.35\n-0.4, 0.02,\n", {}),
        (b"\xef\xbb\xbf0\r\n0.11\r\n-0.2\r\n0.35\r\n-.4\r\n2.0D-02\r\n", {}),
        ("Demo wall, made by hand\ntime s\tacc\n" + "\n".join(f"{i * 0.01:.2f}\t{v}" for i, v in enumerate(VALUES)),
         {"step": "column"}),
        ("\n".join(f"{i};{v};9.9" for i, v in enumerate(VALUES)), {"column": 2}),
        ("\n".join(f"{i * 0.01:.2f} 9.9 {v}" for i, v in enumerate(VALUES)), {"step": "column", "column": 3}),
        ("NPTS= 6, DT= .0100 SEC\n" + " ".join(map(str, VALUES)), {"step": "header"}),
        ("# 6 values, sampling rate: 100 Hz\n" + " ".join(map(str, VALUES)) + "\n# end\n\n", {"step": "header"}),
        ("! step 10 ms\n" + " ".join(map(str, VALUES)), {"step": "header"}),
        ("4 6\n" + " ".join(map(str, VALUES)), {"skip": 1}),
        ("   0.00000   0.11000  -0.20000\n   0.35000  -0.40000   0.02000\n", {"width": 10}),
        ("-0.00000+0.11000-0.20000\n+0.35000-0.40000+0.02000\n", {"width": 8}),
    ],
    ids=["column", "row", "commas", "windows", "times", "index", "three columns", "header", "rate", "milliseconds",
         "skip", "fixed", "no blanks"],
)  # fmt: skip
def test_one_motion_written_in_many_ways(data: bytes | str, how: dict[str, Any]) -> None:
    motion = read(data, **how)
    assert motion.acceleration.tolist() == VALUES
    assert motion.dt == pytest.approx(0.01, rel=1e-12)
    assert (motion.name, motion.kind) == ("demo", "simulated")
    assert not any("header says" in note for note in motion.notes)


@pytest.mark.parametrize(
    ("unit", "factor"),
    # standard gravity 9.80665 m/s2, gal 1 cm/s2 (BIPM, The International System of Units); inch 0.0254 m
    [("m/s2", 1.0), ("m/s^2", 1.0), ("m/s**2", 1.0), ("g", 9.80665), ("gal", 0.01), ("Gal", 0.01), ("cm/s2", 0.01),
     ("mm/s2", 0.001), ("in/s2", 0.0254), ("ft/s2", 0.3048)],
)  # fmt: skip
def test_units(unit: str, factor: float) -> None:
    assert read("1.0 -2.0", unit=unit).acceleration == pytest.approx([factor, -2 * factor], rel=1e-15)


def test_what_is_said_of_a_file() -> None:
    text = "# 9 points at equal spacing of 0.01 sec\n# columns of 8 points\n0.5 1.0 -2.0 0.3 -0.2 0 0\n"
    assert read(text).notes == (
        "2 lines of header or comment, the first: # 9 points at equal spacing of 0.01 sec",
        "the header says 9 values, 7 are present (all are kept)",
        "ends with 2 values of zero, which may be padding (kept)",
        "starts at 0.5 m/s2: integrals from rest may drift",
        "holds nothing above 50 Hz, half the sampling rate: no waves of periods below 0.02 s",
    )
    begun = read(text, zero_first=True)
    assert "a(0) = 0 was put in front" in begun.notes
    assert not any("starts at" in note for note in begun.notes)
    assert begun.acceleration.tolist() == [0, 0.5, 1.0, -2.0, 0.3, -0.2, 0, 0]


def test_a_record_cut_while_shaking_is_said() -> None:
    assert "ends while shaking, at 50% of its peak: responses are followed beyond the end" in read("0 1 -2 1").notes
    assert not any("shaking" in note for note in read("0 1 -2 0.01").notes)


BAD = {
    "text in a column": ("0.1\n0.2\nbroken\n0.3", {},
        "line 3: needed numbers alone, with decimal points; given 'broken'"),
    "first row broken": ("0.1 x 0.2\n0.3 0.4 0.5", {}, "line 1: needed numbers alone"),
    "decimal commas": ("0,1;0,2\n0,3;0,4\n0.1;0.2", {"skip": 0}, "line 1: .*\n  line 2: .*with decimal points"),
    "gap in a row": ("0.1,,0.2\n0.3,0.4,0.5", {"skip": 0}, "line 1: needed numbers alone"),
    "no blanks": ("  0.10000 -0.20000\n  0.10000-10.20000", {}, r"line 2: .*pass width= if"),
    "NaN": ("0.1\nNaN\n0.3\ninf", {}, "line 2: needed finite numbers; given 'NaN'.*\n  line 4: needed finite"),
    "binary": (b"\x00\x01\x02", {}, "data: needed text; given a binary file"),
    "empty": (b"", {}, "data: needed a file with numbers; given an empty one"),
    "blank": (" \n\n", {}, "data: needed a file with numbers"),
    "header alone": ("a demo\n# nothing\n", {}, "data: needed lines of numbers; given 2 lines of header"),
    "one value": ("0.1", {}, "data: needed at least 2 values; given 1"),
    "zero step": ("0.1 0.2", {"step": 0.0}, "step: needed numbers above 0; given 0"),
    "negative step": ("0.1 0.2", {"step": -0.01}, "step: needed numbers above 0; given -0.01"),
    "no unit": ("0.1 0.2", {"unit": ""},
        "unit: needed a unit of acceleration, such as g, gal, cm/s2, m/s2; given ''"),
    "wrong kind of unit": ("0.1 0.2", {"unit": "cm"}, "unit: needed a unit of acceleration.*given 'cm'"),
    "no such kind": ("0.1 0.2", {"kind": "real"}, "kind: needed one of recorded, simulated, synthetic; given 'real'"),
    "no step in the header": ("demo\n0.1 0.2", {"step": "header"},
        "step: needed one time step with its unit.*given none"),
    "step without unit": ("dt 0.01\n0.1 0.2", {"step": "header"},
        "step: needed one time step with its unit.*given none"),
    "two in the header": ("dt 0.01 s\nstep 0.02 s\n.1 .2", {"step": "header"}, r"step: .*given 0\.01 s, 0\.02 s"),
    "header and caller": ("dt = 0.02 s\n0.1 0.2", {}, r"step: needed 0\.02 s, as the header states; given 0\.01 s"),
    "two steps": ("0 1\n0.01 2\n0.02 1\n0.04 2\n0.05 1\n0.06 1", {"step": "column"},
                  r"step: needed one time step; given 0\.01 s, and 0\.02 s before line 4"),
    "times fall": ("0 1\n0.01 2\n0.005 1\n", {"step": "column"},
        r"rise down the first column; given 0\.005 s after 0\.01"),
    "times taken for values": ("0 1\n0.01 2\n0.02 1\n0.03 2", {}, "column: needed accelerations in every column"),
    "missing column": ("0 1\n0.01\n0.02 1", {"step": "column"},
        "column: needed 2 columns on every line; given fewer on 1"),
    "the column of times": ("0 1\n0.01 2\n0.02 1", {"step": "column", "column": 1},
        "another column than the one with the"),
    "fixed without point": ("      0.10      1.23\n      0.10      1234", {"width": 10},
        "line 2: needed numbers alone"),
    "nonsense": ("0.1 0.2", {"column": 0, "width": 0, "skip": -1},
        "(?s)column: .*width: .*skip: needed a whole number"),
}  # fmt: skip


@pytest.mark.parametrize("case", BAD)
def test_a_bad_file_is_named(case: str) -> None:
    data, how, message = BAD[case]
    with pytest.raises(InputError, match=message):
        read(data, **how)


def test_all_that_is_wrong_is_named_at_once() -> None:
    with pytest.raises(InputError, match=r"(?s)unit.*kind.*step.*data") as caught:
        read(b"", unit="stone", kind="seen", step=-1)
    assert [fault.symbol for fault in caught.value.faults] == ["unit", "kind", "step", "data"]
    with pytest.raises(InputError, match="data: needed finite numbers; given 15 more such lines"):
        read("0.1\n" + "nan\n" * 20)


def test_a_column_that_stays_the_same_is_no_column_of_times() -> None:
    assert read("0 1\n0 2\n0 1\n0 2\n").acceleration.size == 8


def test_rounded_times_are_one_step() -> None:
    text = "\n".join(f"{i / 128:.4f} {i % 3}" for i in range(2000))
    assert read(text, step="column").dt == pytest.approx(1 / 128, rel=1e-5)
    with pytest.raises(InputError, match="needed one time step"):
        read("\n".join(f"{i / 128 + 1 / 128 * (i > 900):.4f} {i % 3}" for i in range(2000)), step="column")


def test_a_million_lines() -> None:
    text = "\n".join(["0.125", "-0.25"] * 500_000)
    motion = read(text)
    assert motion.acceleration.size == 1_000_000
    assert float(motion.acceleration.sum()) == -62_500.0


def test_samples_cannot_be_changed() -> None:
    source = np.array([0.0, 1.0])
    motion = Motion("demo", source, 0.1, kind="simulated")
    with pytest.raises(ValueError, match="read-only"):
        motion.acceleration[0] = 2.0
    source[0] = 5.0
    assert motion.acceleration.tolist() == [0.0, 1.0]


def test_a_bad_motion_names_all() -> None:
    with pytest.raises(InputError, match=r"(?s)acceleration: needed at least 2.*dt: .*kind: .*name: needed a name"):
        Motion(" ", [1.0], -1.0, kind="felt")


def test_unmended_lines_are_quoted_as_they_are() -> None:
    message = "line 2: needed numbers alone, with decimal points; given '0.2 [m]'"
    with pytest.raises(InputError, match=re.escape(message)):
        read("0.1\n0.2 [m]\n")
