"""The steps that hang on a calculation and its parts as `methods`.

Knows the public names and what each step takes and writes. Must not know how a step is worked.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from calckit.core.handle import Handles
from calckit.methods import combining, modal, records, resonance

if TYPE_CHECKING:
    from calckit.core.writer import Writer
    from calckit.motions import Motion


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

    def motion(self, motion: Motion, source: str, *, number: int = 1) -> Handles:
        """What ground motion `number` is, and its measures: PGA, PGV, PGD, Arias intensity, duration, CAV.

        `motion` comes from `calckit.motions`, `source` names its document. Writes motion_1, PGA_1, ...; v_end1 says how
        much velocity is left at the end. Raises InputError.

        >>> from calckit import Calc, motions
        >>> calc = Calc(project="Demo", number="D-1")
        >>> calc.document("R-1", title="Made motion")
        >>> shake = motions.filtered_noise(1, peak=2.0, duration=10.0)
        >>> calc.methods.motion(shake, "R-1")[1]
        PGA_1 = 0.2039
        >>> _ = calc.assume("zeta", 0.05, basis="demo")
        >>> _ = calc.rows("points", "point, T_p [s]\\n1, 0.2\\n2, 1.0", source="R-1", meanings={"T_p": "period"})
        >>> calc.methods.frequency_content(shake)[0].line.unit
        's'
        >>> calc.methods.record_spectrum(shake, periods="T_p")[2].line.symbol
        'PSA_1'
        >>> T, PSA = calc.methods.spectrum_curve(shake, longest=2.0)
        >>> _ = calc.rows("target", "point, S_p\\n1, 1.0\\n2, 0.4", source="R-1", meanings={"S_p": "target"})
        >>> calc.methods.scale(1, target="S_p", share=0.9)[-1].line.symbol
        'r_target'
        """
        return records.motion(self._scope, motion, source, number)

    def frequency_content(self, motion: Motion, *, number: int = 1) -> Handles:
        """Dominant period T_dom1 and mean period T_mean1 of a motion, with the residual of its Fourier amplitudes."""
        return records.frequency_content(self._scope, motion, number)

    def record_spectrum(
        self, motion: Motion, *, number: int = 1, periods: str = "T_r", refine: str = "band-limited"
    ) -> Handles:
        """SD_1, PSV_1 and PSA_1 of a motion at the periods of a list line, with the damping ratio zeta.

        `periods` is the symbol of that list, `refine` what is taken between the samples at short periods,
        "band-limited" or "straight-line". r_PSA1 says how far an ordinate moves where the step is halved.
        """
        return records.record_spectrum(self._scope, motion, number, periods, refine)

    def spectrum_curve(self, motion: Motion, longest: float) -> tuple[list[float], list[float]]:
        """Periods in s up to `longest` and pseudo-accelerations as fractions of g, for a figure; writes no line."""
        return records.spectrum_curve(self._scope, motion, longest)

    def suite(self, count: int, *, periods: str = "T_r") -> Handles:
        """Mean, median and dispersion of PSA_1 to PSA_`count`, period by period.

        >>> from calckit import Calc
        >>> calc = Calc(project="Demo", number="D-1")
        >>> calc.document("R-1", title="Spectra")
        >>> names = {"T_p": "period", "PSA_1": "motion 1", "PSA_2": "motion 2"}
        >>> _ = calc.rows("s", "point, T_p [s], PSA_1, PSA_2\\n1, 0.2, 1, 4\\n2, 1, 2, 2", source="R-1", meanings=names)
        >>> calc.methods.suite(2, periods="T_p")
        [PSA_mean = 2.500, 2.000, PSA_med = 2.000, 2.000, s_ln = 0.9803, 0.0000]
        """
        return records.suite(self._scope, count, periods)

    def scale(self, count: int, *, target: str = "S_a", share: float | None = None) -> Handles:
        """The factors f_s that bring PSA_1 to PSA_`count` nearest to a target, a list line at the same periods.

        Least squares of the logarithms; with `share`, all are then lifted or lowered together until the lowest ratio of
        mean to target is `share`. Writes the mean of the scaled motions and r_target; the choice of periods is the
        range of scaling.
        """
        return records.scale(self._scope, count, target, share)

    def resonance(
        self, motion: Motion, design: tuple[Sequence[float], Sequence[float]], *, number: int = 1, period: str = "T"
    ) -> Handles:
        """Where the structure's periods stand beside those of the ground: information, never a verdict.

        Takes `period` (a symbol), the stated factor f_T by which a damaged structure's period is longer, zeta, T_dom1
        and PGA_1, and T_site where it stands; `design` is what `asce7.spectrum_curve()` gives. Writes the ratios of
        periods and of ordinates and a note in plain words. Raises InputError.

        >>> from calckit import Calc, motions
        >>> calc = Calc(project="Demo", number="D-1")
        >>> calc.document("R-1", title="Made motion")
        >>> shake = motions.filtered_noise(1, peak=2.0, duration=10.0)
        >>> _, _ = calc.methods.motion(shake, "R-1"), calc.methods.frequency_content(shake)
        >>> for name, value in (("zeta", 0.05), ("T", "0.6 s"), ("f_T", 1.4)):
        ...     _ = calc.assume(name, value, basis="demo")
        >>> made = calc.methods.resonance(shake, ([0.0, 0.5, 2.0], [1.0, 1.0, 0.25]))
        >>> made[0], made[-1].line.text[:46]
        (T_b = 0.6000, 0.8400, 'Information, not a requirement of the standard')
        """
        return resonance.resonance(self._scope, motion, number, period, design)
