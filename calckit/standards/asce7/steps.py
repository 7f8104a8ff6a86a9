"""The steps of ASCE/SEI 7 that hang on a calculation and its parts as `asce7`.

Knows the public names and what each step takes and writes. Must not know how a step is worked.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from calckit.core.handle import Handle, Handles
from calckit.standards.asce7 import component_list, components, forces, hazard, structure

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
    >>> fan = calc.part("F1", "Roof fan")
    >>> _ = fan.givens("component, air-side equipment, H-2\\nW_p, 800 lb, H-2\\nz, 30 ft, H-2\\nh, 30 ft, H-2")
    >>> _ = fan.answer("I_p", "1.0", basis="not needed after an earthquake", source="H-2")
    >>> fan.asce7.component_force()
    F1.F_p = 201.6 lb
    >>> listed = calc.part("P", "Plumbing")
    >>> _ = listed.givens("h, 30 ft, H-2\\nI_p, 1.0, H-2")
    >>> pasted = "tag, component, W_p [lb], z [ft]\\nB1, boiler, 900, 0\\nP1, pump, 300, 15"
    >>> listed.asce7.components(pasted, source="H-2")
    P.F_p = 136.1, 48.4
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

    # chapter 13
    def component_force(self) -> Handle:
        """F_p of a nonstructural component (13.3.1) with its limits, the vertical force, and that of its anchors.

        Takes S_DS, W_p, I_p (13.1.3), z and h (or r_zh), and `component`, a row of Table 13.5-1 or 13.6-1, or the typed
        factors a_p and R_p, in 7-22 C_AR and R_po, with Omega_0p. 7-16: a_i and A_xp in place of the height. 7-22: T_a,
        R, Omega_0 and I_e of the structure, each of T_a and R number or "none: why"; the answer `attached`.
        """
        return components.component_force(self._scope)

    def components(self, text: str, source: str) -> Handle:
        """F_p of every component of a pasted list, or "@file.csv": tag, component, W_p, z, and I_p where it differs.

        In place of the column `component` the factors may be typed in columns of their own. What all of them share
        (S_DS, h, I_p, in 7-22 T_a, R, Omega_0, I_e) is given before. One list takes rows of one table of the standard.
        """
        return component_list.components(self._scope, text, source)
