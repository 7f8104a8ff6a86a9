"""Modes of a structure as lines: found from weights and stiffnesses, or pasted from a three-dimensional analysis.

Knows which lines modes become and how they are held against declared formulas. Must not know spectra or standards.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

import numpy as np

from calckit import dynamics, units
from calckit.core.handle import Handle, Handles
from calckit.core.record import Source
from calckit.core.series import formula_of, numbered, symbol_of
from calckit.errors import Fault, InputError
from calckit.methods import formulas
from calckit.methods.analysis import LIMIT, Method, tables, write_list, write_residual
from calckit.methods.symbols import OF_MODE, PASTED, STICK

if TYPE_CHECKING:
    from calckit.core.writer import Writer

GRAVITY = "9.80665 m/s**2"
STANDARD_GRAVITY = Source("3rd General Conference on Weights and Measures 1901", "standard acceleration of gravity")
EIGEN = "modes by the symmetric eigenvalue problem K φ = ω² M φ, masses w/g lumped at the levels, one freedom a level"
STORY_SUMS = 0.01
"""How far pasted story values of a mode may be from its modal weight: they are pasted with few digits."""


def modes(scope: Writer, stiffness: str, source: str, count: int | None, worked: int) -> Handles:
    """Modes of a stick from w_x, h_x and story stiffnesses k_x, or from a pasted stiffness matrix."""
    with scope.step():
        columns = _matrix(scope, stiffness, source) if stiffness else ["k_x"]
        levels = _levels(scope, ["w_x", "h_x", *columns])
        if scope.absent("g"):
            scope.state("g", GRAVITY, "table", STANDARD_GRAVITY)
        weights, heights = (_si(scope, name)[::-1] for name in ("w_x", "h_x"))
        matrix = (
            np.array([_si(scope, name)[::-1] for name in columns][::-1]).T
            if stiffness
            else dynamics.shear_building(_si(scope, "k_x")[::-1])
        )
        masses = weights / _si(scope, "g")[0]
        found = dynamics.modes(masses, matrix, heights=heights)
        kept = _count(count, len(levels), worked)
        rests = ("w_x", "h_x", "g", *columns)
        method = Method("eigenvalue problem of the stick model", formulas.DYNAMICS, rests)
        scope.state("modal_model", STICK, "analysis", formulas.DYNAMICS, text=EIGEN, rests=rests)
        made = _modal_lists(scope, found, kept, method)
        _residuals(scope, found, masses, matrix, method)
        _story_lists(scope, found, kept, levels, weights, worked, method)
        _work_in_full(scope, worked)
        return made


def _modal_lists(scope: Writer, found: dynamics.Modes, kept: int, method: Method) -> Handles:
    g = _si(scope, "g")[0]
    weights = found.effective_masses * g
    tall = np.where(weights > 1e-6 * weights.sum(), found.effective_heights, 0.0)
    columns: Mapping[str, tuple[Any, str]] = {
        "T_m": (found.periods, "s"), "omega_m": (found.frequencies, "1/s"), "Gamma_m": (found.participation, ""),
        "W_m": (weights, "N"), "h_em": (tall, "m"),
    }  # fmt: skip
    rows = [str(number) for number in range(1, kept + 1)]
    made = Handles(
        write_list(scope, name, values[:kept], unit, rows, method) for name, (values, unit) in columns.items()
    )
    scope.compute(formulas.W_TOT)
    made.append(scope.compute(formulas.R_M))
    scope.table("modes", "Modes", [*columns, "r_m"], head="Mode")
    made.append(scope.compute(formulas.R_SUM))
    return made


def _residuals(scope: Writer, found: dynamics.Modes, masses: Any, matrix: Any, method: Method) -> None:
    restoring = matrix @ found.shapes
    inertia = found.frequencies**2 * masses[:, None] * found.shapes
    off = np.abs(restoring - inertia).max(axis=0) / np.abs(restoring).max(axis=0)
    products = found.shapes.T @ (masses[:, None] * found.shapes)
    sizes = np.sqrt(np.diag(products))
    coupling = products / np.outer(sizes, sizes) - np.eye(len(sizes))
    write_residual(scope, "r_modes", float(off.max()), method)
    write_residual(scope, "r_orth", float(np.abs(coupling).max()), method)
    scope.require(
        f"max(r_modes, r_orth) <= {LIMIT}", title="Residuals of the modes", source=formulas.DYNAMICS, id_="modes_hold"
    )


def _story_lists(
    scope: Writer, found: dynamics.Modes, kept: int, levels: Sequence[str], weights: Any, worked: int, method: Method
) -> None:
    """Shapes, and the forces and displacements of each mode where S_a is 1 g; those of the worked mode follow later."""
    g = _si(scope, "g")[0]
    numbers = range(1, kept + 1)
    for number in numbers:
        shape = found.shapes[:, number - 1]
        lift = found.participation[number - 1]
        _own(scope, number)
        _write_story(scope, "phi_n", number, shape, "", levels, method)
        if number != worked:
            _write_story(scope, "s_xn", number, lift * weights * shape, "N", levels, method)
            at_one_g = lift * shape * g / found.frequencies[number - 1] ** 2
            _write_story(scope, "d_xn", number, at_one_g, "m", levels, method)
    tables(scope, "shapes", "Mode shapes", [numbered("phi_n", n) for n in numbers], "Level")


def _write_story(
    scope: Writer, name: str, number: int, values: Any, unit: str, levels: Sequence[str], method: Method
) -> Handle:
    return write_list(scope, numbered(name, number), values[::-1], unit, levels, method)


def _work_in_full(scope: Writer, number: int) -> None:
    """One mode by declared formulas, and its agreement with what was found for all."""
    row = str(number)
    kept = len(scope["T_m"].rows)
    scope.compute(formulas.level_of(numbered("omega_n", number), "omega_m", row))
    series = OF_MODE.keys()
    for formula in (formulas.GAMMA_N, formulas.W_N, formulas.H_EN, formulas.S_XN, formulas.D_XN):
        scope.compute(formula_of(formula, number, series))
    numbers = range(1, kept + 1)
    for id_, name, title in (
        ("effective", "s_xn", "Forces by mode where the spectral acceleration is 1 g"),
        ("at_one_g", "d_xn", "Displacements by mode where the spectral acceleration is 1 g"),
    ):
        tables(scope, id_, title, [numbered(name, n) for n in numbers], "Level")
    pairs = (("Gamma_n", "Gamma_m"), ("W_n", "W_m"), ("h_en", "h_em"))
    apart = ", ".join(f'abs({numbered(one, number)}/level({every}, "{row}") - 1)' for one, every in pairs)
    scope.require(
        f"max({apart}) <= {LIMIT}", title=f"Mode {row} worked in full agrees with the analysis",
        source=formulas.DYNAMICS, id_="worked_mode",
    )  # fmt: skip


def pasted_modes(
    scope: Writer, text: str, stories: str, source: str, *, directions: str, torsion: str, P_delta: str  # noqa: N803
) -> Handles:
    """Modes of a three-dimensional analysis, for the direction of the scope, as the model's owner declares them."""
    declared = {"directions": directions, "torsion": torsion, "P_delta": P_delta}
    faults = [
        Fault(name, "how the model treats it, in words", "blank", f'add {name}="..."')
        for name, words in declared.items()
        if not words.strip()
    ]
    if faults:
        raise InputError("methods.pasted_modes", faults)
    model = f"both directions: {directions}; accidental torsion: {torsion}; P-delta: {P_delta}"
    with scope.step():
        made = scope.rows("modes", text, source, title="Modes of the three-dimensional analysis")
        kept = _pasted_rows(scope)
        shared = {f"{stem}{n}": _own(scope, n)[f"{stem}n"] for n in range(1, kept + 1) for stem in ("s_x", "d_x")}
        scope.rows("stories", stories, source, title="Story values by mode where the spectral acceleration is 1 g",
                   meanings={name: symbol.meaning for name, symbol in shared.items()})  # fmt: skip
        scope.calc.own_symbols |= shared
        names = [f"{stem}{n}" for n in range(1, kept + 1) for stem in ("s_x", "d_x")]
        _levels(scope, ["w_x", *names])
        origin = scope.calc.sources.read(source, "methods.pasted_modes")
        scope.state("modal_model", PASTED, "analysis", origin, text=model, rests=("T_m", "r_m"))
        scope.compute(formulas.W_TOT)
        made.append(scope.compute(formulas.W_FROM_RATIO))
        made.append(scope.compute(formulas.R_SUM))
        _story_sums(scope, kept, origin)
        return made


def _pasted_rows(scope: Writer) -> int:
    faults = [scope.missing(name) for name in ("T_m", "r_m") if scope.find(name) is None]
    rows = scope["T_m"].rows if not faults else []
    wanted = [str(n) for n in range(1, len(rows) + 1)]
    if rows != wanted:
        faults.append(Fault("modes, first column", f"the modes {', '.join(wanted)} in order", ", ".join(rows)))
    if faults:
        raise InputError("methods.pasted_modes", faults)
    return len(rows)


def _story_sums(scope: Writer, kept: int, origin: Source) -> None:
    weights = _si(scope, "W_m")
    sums = np.array([_si(scope, f"s_x{n}").sum() for n in range(1, kept + 1)])
    worst = float(np.abs(sums - weights).max() / weights.sum())
    words = "the forces of a mode at 1 g add up to its effective modal weight; over the weight of the modes taken"
    write_residual(scope, "r_stories", worst, Method(words, origin, ("W_m", *(f"s_x{n}" for n in range(1, kept + 1)))))
    scope.require(
        f"r_stories <= {STORY_SUMS}", title="Pasted story values add up to the modal weights",
        source=formulas.DYNAMICS, id_="stories_hold",
    )  # fmt: skip


def _own(scope: Writer, number: int) -> dict[str, Any]:
    """Make the symbols of one mode known; returns them by their names for mode n."""
    made = {name: symbol_of(symbol, number) for name, symbol in OF_MODE.items()}
    scope.calc.own_symbols |= {symbol.name: symbol for symbol in made.values()}
    return made


def _count(count: int | None, most: int, worked: int) -> int:
    kept = most if count is None else count
    faults = []
    if not isinstance(kept, int) or not 1 <= kept <= most:
        faults.append(Fault("count", f"a whole number of modes from 1 to {most}", repr(count)))
    elif worked not in range(1, kept + 1):
        faults.append(Fault("worked", f"one of the modes 1 to {kept}", repr(worked)))
    if faults:
        raise InputError("methods.modes", faults)
    return kept


def _levels(scope: Writer, names: Sequence[str]) -> list[str]:
    """The rows that these lists share, roof first."""
    faults = [scope.missing(name) for name in names if scope.find(name) is None]
    rows = scope[names[0]].rows if not faults else []
    for name in names[1:] if rows else []:
        if scope[name].rows != rows:
            given, cure = ", ".join(scope[name].rows) or "one number", "name them alike and in one order"
            faults.append(Fault(name, f"the levels {', '.join(rows)}", given, cure, scope.symbol(name).meaning))
    if faults:
        raise InputError("methods: levels", faults)
    return rows


def _matrix(scope: Writer, text: str, source: str) -> list[str]:
    """The pasted stiffness matrix as lines K_1, K_2, ..., one a column, columns in the order of the rows."""
    if not source.strip():
        raise InputError("methods.modes", [Fault("source", "the source of the matrix", "nothing", 'add source="..."')])
    head = text.strip().splitlines()[0] if not text.startswith("@") else scope.file(text[1:]).decode().splitlines()[0]
    count = max(head.count(mark) for mark in ("\t", ";", ","))
    names = [f"K_{number}" for number in range(1, count + 1)]
    meanings = {
        name: f"force at level x where level {number} from the top alone is displaced, over that displacement"
        for number, name in enumerate(names, 1)
    }
    scope.rows("stiffness", text, source, title="Stiffness matrix", meanings=meanings)
    rows = scope[names[0]].rows if scope.find(names[0]) else []
    if len(rows) != count or any(scope.find(name) is None for name in names):
        needed = f"a row and a column for each level, headed {', '.join(names)}"
        raise InputError("methods.modes", [Fault("stiffness", needed, f"{len(rows)} rows and {count} columns")])
    return names


_SI = {(1.0, 1.0, -2.0): "N", (0.0, 1.0, 0.0): "m", (1.0, 0.0, -2.0): "N/m", (0.0, 1.0, -2.0): "m/s**2"}


def _si(scope: Writer, name: str) -> Any:
    """The values of a line as an array in SI, roof first."""
    entry = scope.find(name)
    assert entry is not None
    line = entry.line
    unit = _SI.get(units.powers(line.unit))
    if unit is None:
        raise InputError("methods", [Fault(name, "a weight, height or stiffness", units.shown(line.unit) or "no unit")])
    values = line.value if isinstance(line.value, list) else [line.value]
    return np.array([units.convert(float(value), line.unit, unit) for value in values])  # type: ignore[arg-type]
