"""Where the periods of a structure stand beside those of the ground: information, never a verdict.

Knows ratios of periods and of ordinates and how they are put in words. Must not know a standard's requirements.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from calckit import dynamics
from calckit.core.book import Entry, this_cell
from calckit.core.formula import Formula
from calckit.core.handle import Handles
from calckit.core.record import Line, Source
from calckit.core.series import numbered
from calckit.errors import Fault, InputError
from calckit.methods.analysis import Method, write_list
from calckit.methods.records import SPECTRUM, G

if TYPE_CHECKING:
    from calckit.core.writer import Writer
    from calckit.motions import Motion

HEADING = "Information, not a requirement of the standard"
"""What stands above everything of this module."""
NEAR = (0.8, 1.25)
"""Ratios of period to dominant period called near resonance (common practice, no source)."""
ROWS = ("elastic", "lengthened")
RATIOS = Source("ratios of periods and ordinates")


def resonance(
    scope: Writer, record: Motion, number: int, period: str, design: tuple[Sequence[float], Sequence[float]]
) -> Handles:
    """Elastic and lengthened period against the dominant periods of motion and site, and ordinates beside the design's.

    `design` are the periods in s and the ordinates of the design spectrum as it is drawn.
    """
    names = (period, "f_T", "zeta", numbered("T_domn", number), numbered("PGA_n", number))
    faults = [scope.missing(name) for name in names if scope.number(name) is None]
    curve, ordinates = (np.asarray(values, dtype=float) for values in design)
    if curve.shape != ordinates.shape or curve.ndim != 1 or curve.size < 2 or (np.diff(curve) <= 0).any():
        faults.append(Fault("design", "rising periods and an ordinate for each", f"{curve.size} and {ordinates.size}"))
    if not faults:
        longest = (scope.number(period, "s") or 0.0) * (scope.number("f_T") or 1.0)
        if not curve[0] <= longest <= curve[-1]:
            needed = f"a curve that reaches the lengthened period, {longest:.4g} s"
            faults.append(Fault("design", needed, f"up to {curve[-1]:g} s", "draw the curve further"))
    if faults:
        raise InputError("methods.resonance", faults)
    with scope.step():
        scope.compute(Formula("T_el", period, RATIOS))
        scope.compute(Formula("T_long", "f_T*T_el", RATIOS))
        both = [scope.number(name, "s") or 0.0 for name in ("T_el", "T_long")]
        found = dynamics.response_spectrum(record.acceleration, record.dt, both, scope.number("zeta") or 0.0)
        rests = ("T_el", "T_long")
        periods = Method("the two periods side by side", RATIOS, rests)
        read = Method("read on the design spectrum as drawn", RATIOS, (*rests, "S_DS", "S_D1", "T_L"))
        peaks = Method("peaks of oscillators", SPECTRUM, (*rests, "zeta", numbered("motion_n", number)))
        made = Handles([
            write_list(scope, "T_b", both, "s", ROWS, periods),
            write_list(scope, "S_ab", np.interp(both, curve, ordinates), "", ROWS, read),
            write_list(scope, "PSA_b", found.pseudo_acceleration / G, "", ROWS, peaks),
        ])  # fmt: skip
        ratios = {
            "r_code": "PSA_b/S_ab", "r_ground": f"PSA_b/{numbered('PGA_n', number)}",
            "r_dom": f"T_b/{numbered('T_domn', number)}",
        }  # fmt: skip
        if scope.number("T_site") is not None:
            ratios["r_site"] = "T_b/T_site"
        made += [scope.compute(Formula(name, text, RATIOS)) for name, text in ratios.items()]
        scope.table("resonance", HEADING, ["T_b", "S_ab", "PSA_b", *ratios], head="Period")
        words = Line(scope.id_of("resonance"), "note", meaning="note", part=scope.id, text=_statement(scope, number))
        made.append(scope.write(Entry(words, this_cell()), ("T_b", numbered("T_domn", number), "T_site", *ratios)))
        return made


def _statement(scope: Writer, number: int) -> str:
    """Where the structure sits, in words."""
    sentences = [f"{HEADING}."]
    low, high = NEAR
    others = [("motion", numbered("T_domn", number), "r_dom")]
    others += [("site", "T_site", "r_site")] if scope.find("r_site") else []
    for what, dominant, ratio in others:
        for place, row in enumerate(ROWS):
            value = scope[ratio].value[place]  # type: ignore[index]
            where = "near" if low <= value <= high else "shorter than" if value < low else "longer than"
            times = f"{scope[ratio].shown[place]} times the dominant period of the {what}, {scope[dominant].shown}"
            sentences.append(f"The {row} period, {scope['T_b'].shown[place]} s, is {times}: {where} it.")
    sentences.append(f"Near is taken as {low:g} to {high:g} times (common practice, no source).")
    code = ", ".join(f"{shown} ({row})" for row, shown in zip(ROWS, scope["r_code"].shown, strict=True))
    sentences.append(f"Ordinates of this motion over those of the design: {code}; nothing follows from one motion.")
    return " ".join(sentences)
