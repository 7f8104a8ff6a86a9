"""The steps that hang on a calculation and its parts as `methods`.

Knows the public names and what each step takes and writes. Must not know how a step is worked.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.handle import Handles
from calckit.methods import combining, modal

if TYPE_CHECKING:
    from calckit.core.writer import Writer


class Methods:
    """Steps of one scope. Each takes its inputs by symbol, writes its lines (all or none) and returns handles.

    >>> from calckit import Calc
    >>> calc = Calc(project="Demo", number="D-1")
    >>> calc.document("S-1", title="Model")
    >>> _ = calc.levels("level, h_sx [ft], w_x [kip]\\nRoof, 12, 100\\n2, 12, 200", source="S-1")
    >>> x = calc.part("X", "East-west")
    >>> _ = x.rows("stiffnesses", "level, k_x [kip/in]\\nRoof, 50\\n2, 100", source="S-1")
    >>> x.methods.modes()
    [X.T_m = 0.6395, 0.3198, X.omega_m = 9.82, 19.65, X.Gamma_m = 1.333, -0.333, ..., X.r_sum = 1.000]
    >>> _ = calc.assume("zeta", 0.05, basis="steel frame")
    >>> x.methods.correlation()
    [X.rho_1 = 1.000, 0.018, X.rho_2 = 0.018, 1.000]
    >>> x.methods.combine("W_m", rule="ABS", into="W_t")
    [X.W_t = 300.0 kip]
    """

    def __init__(self, scope: Writer) -> None:
        self._scope = scope

    def modes(
        self, *, stiffness: str = "", source: str = "", count: int | None = None, worked: int = 1
    ) -> Handles:
        """Modes of a stick model, one freedom a level, from w_x, h_x and the story stiffnesses k_x.

        `stiffness` pastes a matrix in place of k_x, with its `source`: a header `level, K_1 [kip/in], K_2 [kip/in]`, a
        row and a column for each level from the roof down. `count` modes are kept (left out: all), the mode `worked` is
        worked in full by declared formulas. Writes lists over modes (T_m, omega_m, Gamma_m, W_m, h_em, r_m), r_sum,
        the residuals, and lists over levels of each mode n: phi_n, s_xn and d_xn, force and displacement where the
        spectral acceleration is 1 g. Raises InputError naming every missing symbol.
        """
        return modal.modes(self._scope, stiffness, source, count, worked)

    def pasted_modes(
        self, modes: str, stories: str, source: str, *, directions: str, torsion: str, P_delta: str  # noqa: N803
    ) -> Handles:
        """Modes of a three-dimensional analysis, for the direction of this part.

        `modes` is a table `mode, T_m [s], r_m` (r_m: effective mass ratio in this direction), `stories` a table
        `level, s_x1 [kip], d_x1 [in], s_x2 [kip], ...` of the force and the displacement of each mode at each level
        where the spectral acceleration is 1 g. `directions`, `torsion` and `P_delta` say how the model treats both
        directions, accidental torsion and P-delta. Raises InputError.

        >>> from calckit import Calc
        >>> calc = Calc(project="Demo", number="D-1")
        >>> calc.document("M-1", title="Three-dimensional model")
        >>> _ = calc.levels("level, h_x [ft], w_x [kip]\\nRoof, 24, 100\\n2, 12, 200", source="M-1")
        >>> calc.methods.pasted_modes("mode, T_m [s], r_m\\n1, 0.64, 0.889",
        ...     "level, s_x1 [kip], d_x1 [in]\\nRoof, 133.3, 5.33\\n2, 133.4, 2.67", source="M-1 p. 3",
        ...     directions="X and Y", torsion="mass shifted by 5 percent", P_delta="in the stiffness")
        [T_m = 0.64, r_m = 0.889, W_m = 266.7, r_sum = 0.8890]
        """
        return modal.pasted_modes(
            self._scope, modes, stories, source, directions=directions, torsion=torsion, P_delta=P_delta
        )

    def correlation(self) -> Handles:
        """Correlation coefficients of the modes for CQC, from T_m and zeta; one pair worked in full."""
        return combining.correlation(self._scope)

    def combine(self, *names: str, rule: str = "CQC", into: str = "") -> Handles:
        """Combine modal values by "CQC", "SRSS" or "ABS", each quantity mode by mode and never from combined values.

        A name that ends with m is a list over modes ("V_m" gives V_t); one that ends with n stands for a list over
        levels in each mode ("V_xn" takes V_x1, V_x2, ... and gives V_xt). `into` names the result of a single
        quantity. Raises InputError.
        """
        return combining.combine(self._scope, names, rule, into)
