"""The steps of ASCE/SEI 7 that hang on a calculation and its parts as `asce7`.

Knows the public names and what each step takes and writes. Must not know how a step is worked.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from calckit.core.handle import Handle, Handles
from calckit.standards.asce7 import forces, hazard, modal, structure

if TYPE_CHECKING:
    from calckit.core.scope import Scope


class Steps:
    """Steps of one scope. Each takes its inputs by symbol, writes its lines (all or none) and returns handles.

    >>> from calckit import Calc
    >>> calc = Calc(project="Demo", number="D-1", standard="ASCE 7-16")
    >>> calc.document("H-2", title="Hazard printout")
    >>> _ = calc.givens("S_S, 0.60, H-2 p. 1\\nS_1, 0.22, H-2 p. 1\\nT_L, 8 s, H-2 p. 1\\nsite_class, C, H-2 p. 2")
    >>> calc.asce7.design_spectrum()
    [F_a = 1.260, F_v = 1.5, S_MS = 0.7560, S_M1 = 0.3300, S_DS = 0.5040, S_D1 = 0.2200, T_0 = 0.08730 s, ...]
    >>> calc.asce7.spectrum_ordinates([0.2, 1.0])
    S_a = 0.5040, 0.2200
    >>> T, S_a = calc.asce7.spectrum_curve(longest=2.0)
    >>> S_a[0], calc.asce7.site_specific_values("none: mapped", "none: mapped", source="H-2")
    (0.2016, [])
    >>> _ = calc.givens("risk_category, II, H-2\\nh_n, 30 ft, H-2")
    >>> calc.asce7.design_category()[-1]
    SDC = D
    >>> _ = calc.levels("level, h_x [ft], w_x [kip]\\nRoof, 30, 310\\n2, 15, 455", source="H-2")
    >>> calc.asce7.seismic_weight()
    W = 765.0 kip
    >>> x = calc.part("X", "East-west")
    >>> _ = x.givens("system, steel special concentrically braced frame, H-2\\ndrift_class, all other, H-2")
    >>> x.asce7.system()
    [X.R = 6, X.Omega_0 = 2, X.C_d = 5, X.system_permitted = 0.188]
    >>> x.asce7.approximate_period(), x.asce7.period(), x.asce7.base_shear()
    (X.T_a = 0.2564 s, X.T = 0.2564 s, X.V = 64.26 kip)
    >>> x.asce7.vertical_distribution()
    X.M_x = 556, 1520
    >>> x.asce7.procedure(), x.asce7.drift(), x.asce7.stability()
    (X.procedure = OK, X.drift = NOT CHECKED, X.stability = NOT CHECKED)
    >>> _ = x.rows("stories", "level, k_x [kip/in]\\nRoof, 300\\n2, 500", source="H-2")
    >>> _, _ = x.given("zeta", 0.05, source="H-2"), x.methods.modes()
    >>> x.asce7.modal_response()
    [X.C_sm = 0.07876, 0.08400, X.V_m = 54.10, 6.56]
    >>> _, _ = x.methods.correlation(), x.methods.combine("V_m", "V_xn", "Delta_n")
    >>> x.asce7.modal_scaling()
    [X.f_V = 1.177, X.f_Delta = 1, X.V_xd = 37.13, 64.26, X.Delta_d = 0.5257, 0.5459]
    """

    def __init__(self, scope: Scope) -> None:
        self._scope = scope

    # chapter 11
    def site_specific_values(self, S_DS: Any, S_D1: Any, source: str) -> Handles:
        """S_DS and S_D1 of a site-specific study (21.4); written only under hazard_basis site-specific."""
        return hazard.site_specific_values(self._scope, S_DS, S_D1, source)

    def design_spectrum(self) -> Handles:
        """F_a, F_v, S_MS, S_M1, S_DS, S_D1, T_0, T_S (11.4), from S_S, S_1, T_L and site_class."""
        return hazard.design_spectrum(self._scope)

    def spectrum_ordinates(self, periods: Sequence[float]) -> Handle:
        """S_a (11.4.6), as a fraction of g, at the given periods in s: a list line and its table."""
        return hazard.spectrum_ordinates(self._scope, periods)

    def spectrum_curve(self, longest: float | None = None) -> tuple[list[float], list[float]]:
        """Periods in s, the corners among them, and S_a at each, for a figure; writes no line.

        The curve ends at `longest`; left out, it goes past the periods of all parts.
        """
        return hazard.spectrum_curve(self._scope, longest)

    def design_category(self) -> Handles:
        """I_e (Table 1.5-2) and the seismic design category (11.6) with its margins, from risk_category."""
        return hazard.design_category(self._scope)

    # chapter 12, the structure
    def seismic_weight(self) -> Handle:
        """W (12.7.2), the sum of w_x."""
        return structure.seismic_weight(self._scope)

    def system(self) -> Handles:
        """R, Omega_0, C_d (Table 12.2-1) and whether system and height are permitted, from the part's system."""
        return structure.system(self._scope)

    def approximate_period(self, **typed: Any) -> Handle:
        """T_a (12.8.2.1), by Table 12.8-2 or 0.1 N; an operand typed here (`h_n="70 ft"`) is flagged."""
        return structure.approximate_period(self._scope, typed)

    def period(self) -> Handle:
        """C_u, C_u T_a, the period T for strength with its candidates, T for drift (12.8.2, 12.8.6.2)."""
        return structure.period(self._scope)

    def procedure(self) -> Handle:
        """Prohibited irregularities (12.3.3.1) and the permitted procedure (Table 12.6-1), from the answers."""
        return structure.procedure(self._scope)

    # chapter 12, forces
    def base_shear(self) -> Handle:
        """Every candidate of C_s (12.8-2 to 12.8-6), the governing one, and V (12.8-1)."""
        return forces.base_shear(self._scope)

    def vertical_distribution(self) -> Handle:
        """k, C_vx, F_x, V_x, M_x over the height (12.8.3 to 12.8.5), with the check of their sum."""
        return forces.vertical_distribution(self._scope)

    def drift(self) -> Handle:
        """delta_x, Delta and Delta_a (12.8.6, 12.12.1) and the check of each story."""
        return forces.drift(self._scope)

    def stability(self) -> Handle:
        """theta and theta_max (12.8.7) and the check of each story."""
        return forces.stability(self._scope)

    # chapter 12, modal response spectrum analysis
    def modal_response(self) -> Handles:
        """S_am, C_sm and V_m of each mode, and forces, shears, moments and drifts of each mode (12.9.1.1, 12.9.1.2).

        Takes the modes by symbol: T_m, W_m, r_m, r_sum, and s_xn, d_xn of each mode n. A stick model is refused where
        an irregularity asks for a three-dimensional one.
        """
        return modal.modal_response(self._scope)

    def modal_scaling(self) -> Handles:
        """Factors on the combined forces and drifts, against the static V (12.9.1.4), and the values for design.

        Takes V_t and, where they were combined, F_xt, V_xt, M_xt, delta_xt and Delta_t; prints them beside the static
        answer and checks the drifts against Delta_a, which it writes unless `drift` did before.
        """
        return modal.modal_scaling(self._scope)
