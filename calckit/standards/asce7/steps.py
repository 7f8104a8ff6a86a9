"""The steps of ASCE/SEI 7 that hang on a calculation and its parts as `asce7`.

Knows the public names and what each step takes and writes. Must not know how a step is worked.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from calckit.core.handle import Handle, Handles
from calckit.standards.asce7 import (
    base_reactions,
    beside,
    component_list,
    components,
    conditions,
    diaphragm_forces,
    estimate,
    forces,
    hazard,
    irregularity,
    load_effects,
    modal,
    model,
    plan,
    questions,
    redundancy,
    site_report,
    spectrum,
    structure,
    systems,
    wall_forces,
    weight,
)

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
    >>> _ = x.givens("delta_eM, 0.4 in, H-2\\nd_gap, 3 in, H-2")
    >>> x.asce7.analysis_model(), x.asce7.separation()
    (X.model_shear = NOT CHECKED, X.separation = 0.667)
    >>> other = Calc(project="Demo", number="D-2", standard="ASCE 7-16")
    >>> other.document("S-1", title="Take-off")
    >>> _ = other.levels("level, h_x [ft]\\nRoof, 30\\n2, 15", source="S-1")
    >>> areas = "level, area, A_u [ft**2], q_D [psf], q_P [psf]\\nRoof, deck, 9000, 25, 0\\n2, slab, 9000, 60, 8"
    >>> other.asce7.weight_take_off(areas, source="S-1")
    w_x = 225.0, 630.0
    >>> other.asce7.diaphragm_weights()
    w_px = 225.0, 630.0
    >>> _ = x.rows("ends", "level, d_1plus [in], d_2plus [in]\\nRoof, 0.9, 0.6\\n2, 0.4, 0.3", source="H-2")
    >>> x.asce7.end_displacements()[2:]
    [X.r_Dplus = 1.250, 1.143, X.H1a_found = yes, X.H1b_found = no, X.A_x = 1.000, 1.000]
    >>> x.asce7.irregularities()[:1], x.asce7.redundancy()
    ([X.V1a_found = no], X.rho = 1.3)
    >>> p = calc.part("P2", "Level 2 in plan")
    >>> _ = p.answer("diaphragm_is", "concrete slab or filled deck", basis="3 in of concrete on deck")
    >>> _ = p.given("r_sd", 1.5, source="H-2")
    >>> p.asce7.diaphragm()
    P2.diaphragm_found = semirigid
    >>> _ = p.rows("model", "frame, V_ax [kip]\\n1, 40\\n2, 24.3", source="H-2")
    >>> p.asce7.pasted_distribution("2", along_x="X")
    [P2.sum_Vx = 64.30 kip]
    >>> r = calc.part("P4", "Story below level 2 of the annex")
    >>> _ = r.givens("L_x, 60 ft, H-2\\nL_y, 40 ft, H-2\\nx_m, 30 ft, H-2\\ny_m, 20 ft, H-2\\nA_px, 1.2, H-2")
    >>> _ = r.rows("frames", '''frame, x_i [ft], y_i [ft], k_ix, k_iy
    ... 1, 30, 0, 5, 0
    ... 2, 30, 40, 4, 0
    ... A, 0, 20, 0, 4
    ... B, 60, 20, 0, 4''', source="H-2")
    >>> r.asce7.rigid_distribution("2", along_x="X")
    [P4.V_desx = 35.79, 31.01, 0.00, 0.00, P4.V_desy = 0.000, 0.000, 3.314, 3.314]
    >>> q = calc.part("P3", "Level 2 in plan, another floor")
    >>> _ = q.answer("diaphragm", "flexible", basis="bare deck")
    >>> _ = q.rows("lines", "line, b_i [ft]\\nA, 30\\nB, 30", source="H-2")
    >>> _ = q.rows("spans", "span, L_s [ft], d_s [ft]\\nA to B, 60, 40", source="H-2")
    >>> q.asce7.flexible_distribution("2", direction="X")[-1]
    P3.T_chord = 5.100
    >>> _ = x.givens("w_px_basis, w_x, H-2\\ndiaphragm_material, concrete on steel deck, H-2")
    >>> x.asce7.diaphragm_forces()
    X.F_px = 37.06, 45.86
    >>> x.asce7.load_effects()[:3], x.asce7.base_reactions()[0]
    ([X.r_Ev = 0.1008, X.c_D6 = 1.301, X.c_D7 = 0.7992], X.V_h = 83.54 kip)
    >>> _ = x.givens("D, 120 kip, H-2\\nL, 40 kip, H-2\\nS, 0 kip, H-2\\nQ_E, 85 kip, H-2\\nload_method, strength, H-2")
    >>> x.asce7.load_combinations()
    X.U_min = -14.60 kip
    >>> _ = x.givens("w_w, 84 psf, H-2\\ndiaphragm, rigid, H-2\\nW_pa, 900 lb, H-2")
    >>> x.asce7.wall_forces()[-1]
    X.F_an = 181.4 lb
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
    >>> _ = x.rows("stories", "level, k_x [kip/in]\\nRoof, 300\\n2, 500", source="H-2")
    >>> _, _ = x.given("zeta", 0.05, source="H-2"), x.methods.modes()
    >>> x.asce7.modal_response()
    [X.C_sm = 0.07876, 0.08400, X.V_m = 54.10, 6.56]
    >>> _, _ = x.methods.correlation(), x.methods.combine("V_m", "V_xn", "Delta_n")
    >>> x.asce7.modal_scaling()
    [X.f_V = 1.177, X.f_Delta = 1, X.V_xd = 37.13, 64.26, X.Delta_d = 0.5257, 0.5459]
    >>> x.asce7.second_estimate(), calc.asce7.site_report()
    (X.e_V = 0, site_report = NOT CHECKED)
    >>> calc.asce7.reviewers_questions()[0]
    review_Q1 = risk_category II, I_e = 1.00
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
    def weight_take_off(self, text: str, source: str) -> Handle:
        """w_x (12.7.2) from a pasted table, or "@file.csv": level, kind of area, A_u, q_D, q_P, q_L, p_f, W_e, W_d.

        Areas, dead load, partitions, storage live load, snow of the flat roof, equipment, other dead load; all but the
        first two columns may be left out. `levels` come before it, without w_x. Answer: storage_share.
        """
        return weight.weight_take_off(self._scope, text, source)

    def diaphragm_weights(self, without: Sequence[str] = ()) -> Handle:
        """w_px (12.10.1.1): w_x of the take-off without some of its kinds of area, the walls parallel to the force."""
        return weight.diaphragm_weights(self._scope, without)

    def seismic_weight(self) -> Handle:
        """W (12.7.2), the sum of w_x."""
        return structure.seismic_weight(self._scope)

    def system(self) -> Handles:
        """R, Omega_0, C_d (Table 12.2-1) and whether system and height are permitted, from the part's system.

        Answers: Omega_0_less (flexible diaphragms), height_rule (12.2.5.4, one story).
        """
        return systems.system(self._scope)

    def approximate_period(self, **typed: Any) -> Handle:
        """T_a (12.8.2.1) by T_a_method: Table 12.8-2, 0.1 N, or walls pasted with `rows` (D_i, t_i) and A_B.

        An operand typed here (`h_n="70 ft"`) is flagged.
        """
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

    def analysis_model(self) -> Handle:
        """V_drift by the answer drift_relief (12.8.6), and the model of `analysis` against V_drift or V, and W.

        Writes the scaled displacements where the model was run with V.
        """
        return model.analysis_model(self._scope)

    def drift(self) -> Handle:
        """delta_x, Delta and Delta_a (12.8.6, 12.12.1) and the check of each story."""
        return forces.drift(self._scope)

    def stability(self) -> Handle:
        """theta and theta_max (12.8.7) and the check of each story."""
        return forces.stability(self._scope)

    def second_estimate(self) -> Handle:
        """V_e by a period that does not rest on 12.8.2 (Rayleigh's from delta_xe, else by stories), e_V against V."""
        return estimate.second_estimate(self._scope)

    def separation(self) -> Handle:
        """delta_M, delta_MT (12.12.3) and their check, from delta_eM, delta_M2 of a neighbor, and d_gap."""
        return model.separation(self._scope)

    # chapter 12, the structure in plan
    def end_displacements(self) -> Handles:
        """Drifts of the diaphragm ends, types H1a and H1b (Table 12.3-1), A_x of each level (12.8-14) where asked for.

        From d_1plus, d_2plus, d_1minus, d_2minus: elastic displacements of both ends at each level, accidental torsion
        included with A_x = 1, the mass shifted toward either side.
        """
        return irregularity.end_displacements(self._scope)

    def irregularities(self) -> Handles:
        """Each type that numbers decide (12.3.2), and what irregularities bring (12.3.3, 12.7.3); after the ends.

        Takes what is there of: p_x, p_y with L_x, L_y; A_open with A_gross; the lists K_d, K_s
        (else V_x and delta_xe), w_x, b_s, V_ys over the levels; and the answers for the other types.
        """
        return irregularity.irregularities(self._scope)

    def redundancy(self) -> Handle:
        """rho of the direction with its reasons (12.3.4), from r_loss, n_bay1, n_bay2 by story or the answers."""
        return redundancy.redundancy(self._scope)

    def diaphragm(self) -> Handle:
        """The class of the diaphragm (12.3.1): from delta_md and delta_ave, else from diaphragm_is and r_sd."""
        return plan.classify(self._scope)

    def rigid_distribution(self, level: str = "", along_x: str = "", along_y: str = "") -> Handles:
        """Forces in the elements under a rigid diaphragm with both kinds of torsion (12.8.4), one level at a time.

        From x_i, y_i, k_ix, k_iy of the elements, x_m, y_m, L_x, L_y. The force is the story shear V_x of the part
        named for each axis at `level`, or V_px, V_py as typed.
        """
        return plan.rigid(self._scope, level, along_x, along_y)

    def flexible_distribution(self, level: str = "", direction: str = "") -> Handles:
        """Forces of lines by tributary width b_i, shear and chord force of simple spans L_s of depth d_s.

        The forces are V_x and F_px (else F_x) of the part named `direction` at `level`, or V_p and F_d as typed.
        """
        return plan.flexible(self._scope, level, direction)

    def pasted_distribution(self, level: str = "", along_x: str = "", along_y: str = "") -> Handles:
        """Forces V_ax, V_ay of an analysis with a semirigid diaphragm, their sums against the story shear."""
        return plan.pasted(self._scope, level, along_x, along_y)

    # chapter 12, load effects, diaphragms, base, walls
    def diaphragm_forces(self) -> Handle:
        """F_px at every level with its bounds (12.10-1 to 12.10-3) and what governs; forces for design, of collectors.

        Takes F_x, w_x, S_DS, I_e and the weights w_px of a pasted table (`w_px_basis` list) or w_x itself. Transfer
        forces F_tx take rho, or Omega_0 with H4; forces of the analysis F_pa count where larger.
        """
        return diaphragm_forces.diaphragm_forces(self._scope)

    def load_effects(self) -> Handles:
        """E_v over D (12.4.2.2), the factors of the combinations of 2.3.6 and 2.4.5 in numbers, and the rule of 12.5.

        Takes S_DS, or the vertical ordinate S_av; rho and Omega_0 where known; the answers load_method,
        vertical_effect, L_reduced, two_systems, orthogonal, H5.
        """
        return load_effects.load_effects(self._scope)

    def load_combinations(self) -> Handle:
        """Every combination with the horizontal effect in both senses, its largest and smallest (2.3.6, 2.4.5).

        Takes the effects D, L, S, Q_E, single or as columns of a pasted table, in any unit of force or moment; with
        Q_Ep and Q_Et in place of Q_E, 100 % of one direction with 30 % of the other. `overstrength` yes takes E_mh.
        One table a part: other effects are own lines with the factors, as in "c_D6*M_D + c_L*M_L + rho*M_E".
        """
        return load_effects.load_combinations(self._scope)

    def base_reactions(self) -> Handles:
        """V_h and M_b at the base, M_f at the soil (12.13.4), the couple N_f over d_f, the check against uplift."""
        return base_reactions.base_reactions(self._scope)

    def wall_forces(self) -> Handles:
        """The force on structural walls out of plane (12.11.1) and on their anchorage (12.11.2), from w_w and W_pa."""
        return wall_forces.wall_forces(self._scope)

    # the whole calculation
    def site_report(self) -> Handle:
        """The check of site_class against `report_class`, given with the geotechnical report as its source."""
        return site_report.site_report(self._scope)

    def reviewers_questions(self) -> Handles:
        """Q1 to Q22: each with the lines that answer it, in all directions; what none answers is an open item.

        Stands last. Where one does not apply, say so before: `answer("Q21", "n/a", basis=...)`, also for one part.
        """
        return questions.reviewers_questions(self._scope)

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
