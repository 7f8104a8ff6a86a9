"""The steps of ASCE/SEI 7 that hang on a calculation and its parts as `asce7`.

Knows the public names and what each step takes and writes. Must not know how a step is worked.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from calckit.core.handle import Handle, Handles
from calckit.standards.asce7 import beside, conditions, forces, hazard, spectrum, structure

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
    >>> calc.asce7.printed_values("S_DS, 0.50, H-2 p. 1\\nS_D1, 0.22, H-2 p. 1")[-1]
    printed_agree = 0.794
    >>> calc.asce7.printed_ordinates("none: mapped", source="H-2"), calc.asce7.study_floor()
    ([], [])
    >>> calc.asce7.geodatabase_values("none: mapped", "none: mapped", source="H-2")
    []
    >>> _ = calc.given("PGA", 0.26, source="H-2 p. 1")
    >>> calc.asce7.peak_acceleration()
    [F_PGA = 1.2, PGA_M = 0.3120]
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
    >>> x.asce7.category_conditions(), x.asce7.short_building_limit()
    ([], [])
    >>> x.asce7.vertical_distribution()
    X.M_x = 556, 1520
    >>> x.asce7.procedure(), x.asce7.drift(), x.asce7.stability()
    (X.procedure = OK, X.drift = NOT CHECKED, X.stability = NOT CHECKED)
    """

    def __init__(self, scope: Scope) -> None:
        self._scope = scope

    # chapter 11
    def site_specific_values(self, S_DS: Any, S_D1: Any, source: str) -> Handles:
        """S_DS and S_D1 of a site-specific study (21.4); written only under hazard_basis site-specific."""
        return hazard.site_specific_values(self._scope, S_DS, S_D1, source)

    def geodatabase_values(self, S_MS: Any, S_M1: Any, source: str, PGA_M: Any = "none: not given") -> Handles:
        """S_MS, S_M1 and PGA_M of a printout for the site class (11.4, 11.8); written only under ASCE 7-22."""
        return hazard.geodatabase_values(self._scope, {"S_MS": S_MS, "S_M1": S_M1, "PGA_M": PGA_M}, source)

    def design_spectrum(self) -> Handles:
        """S_DS, S_D1, T_0, T_S (11.4), from S_S, S_1, T_L and site_class.

        7-16 takes F_a and F_v from its tables and works S_MS and S_M1 out; 7-22 takes S_MS and S_M1 of a printout.
        """
        return hazard.design_spectrum(self._scope)

    def spectrum_ordinates(self, periods: Sequence[float]) -> Handle:
        """S_a (11.4.6), as a fraction of g, at the given periods in s: a list line and its table."""
        return spectrum.spectrum_ordinates(self._scope, periods)

    def spectrum_curve(self, longest: float | None = None) -> tuple[list[float], list[float]]:
        """Periods in s, the corners among them, and S_a at each, for a figure; writes no line.

        The curve ends at `longest`; left out, it goes past the periods of all parts.
        """
        return spectrum.spectrum_curve(self._scope, longest)

    def printed_ordinates(self, text: str, source: str) -> Handles:
        """Ordinates pasted from a 7-22 printout (11.4.5.1) or a study, S_DS and S_D1 by 21.4 beside those in use.

        A header and one row a period: `T_n [s], S_aM` (risk-targeted), `T_n [s], S_an` (design), or for the default
        class `T_n [s], S_aC, S_aCD, S_aD`; "none: reason" writes nothing. A printout has the 22 periods of 11.4.5.1.
        """
        return spectrum.printed_ordinates(self._scope, text, source)

    def printed_values(self, text: str) -> Handles:
        """Values of a printout beside ours, with the difference in %: one `symbol, value, source` a row."""
        return beside.printed_values(self._scope, text)

    def peak_acceleration(self) -> Handles:
        """F_PGA (Table 11.8-1) and PGA_M (11.8.3) from PGA in 7-16; PGA_M as given in 7-22 or by a study."""
        return beside.peak_acceleration(self._scope)

    def study_floor(self) -> Handles:
        """Values of a site-specific study against 80 % of the general procedure (21.3, 21.4)."""
        return beside.study_floor(self._scope)

    def design_category(self) -> Handles:
        """I_e (Table 1.5-2) and the seismic design category (11.6) with its margins, from risk_category."""
        return hazard.design_category(self._scope)

    def category_conditions(self) -> Handles:
        """What 11.6 asks for where `category_basis` is "S_DS alone", in one direction; nothing with both tables."""
        return conditions.category_conditions(self._scope)

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
    def short_building_limit(self) -> Handles:
        """The limit on S_DS for C_s and E_v (12.8.1.3) where `S_DS_limit` is "taken" and its conditions hold.

        Takes N_grade, T, rho and the answers on irregularities, which stand above it; 7-22 prints NOT CHECKED.
        """
        return conditions.short_building_limit(self._scope)

    def base_shear(self) -> Handle:
        """Every candidate of C_s (12.8.1.1; in 7-22 by both methods), the governing one, and V (12.8.1)."""
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
