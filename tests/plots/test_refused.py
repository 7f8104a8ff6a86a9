"""Bad input is refused, all faults of a call at once, each with its cure."""

import math

import pytest

from calckit import plots
from calckit.errors import InputError
from tests.plots.examples import DRIFT_UNITS, H_X, LEVELS, UNITS, W_X


def test_all_faults_of_a_call_are_reported_at_once() -> None:
    with pytest.raises(InputError, match=r"plots\.elevation") as caught:
        plots.elevation(["Roof", "Roof"], [13, 24], [math.nan, 1], length_unit="ft", force_unit="kip\n")
    assert [fault.symbol for fault in caught.value.faults] == ["levels", "h_x", "w_x", "force_unit"]
    assert all(fault.cure for fault in caught.value.faults)


def test_message_names_symbol_need_given_and_cure() -> None:
    with pytest.raises(InputError) as caught:
        plots.elevation(LEVELS, H_X[::-1], W_X, **UNITS)
    assert str(caught.value) == (
        "plots.elevation: h_x: needed heights above the base, each above the next and the last above 0; "
        "given 14, 26, 38, 50, 62; cure: list the levels roof first, without the base"
    )


@pytest.mark.parametrize(
    ("call", "match"),
    [
        (lambda: plots.elevation([], [], [], **UNITS), "levels: needed names of levels.*given none"),
        (lambda: plots.elevation(["Roof", " "], [24, 13], [1, 1], **UNITS), "none blank"),
        (lambda: plots.elevation(LEVELS, H_X[:-1], W_X, **UNITS), "h_x: needed 5 numbers.*given 4"),
        (lambda: plots.elevation(LEVELS, [*H_X[:-1], 0], W_X, **UNITS), "h_x: .*last above 0"),
        (lambda: plots.elevation(LEVELS, H_X, ["a", *W_X[1:]], **UNITS), "w_x: needed finite numbers; given 'a'"),
        (lambda: plots.elevation(LEVELS, H_X, [None, *W_X[1:]], **UNITS), "w_x: needed finite numbers; given None"),
        (lambda: plots.elevation(["屋上"], [4], [1], **UNITS), "levels: needed characters.*屋上"),
        (lambda: plots.elevation(["Roof" * 20], [4], [1], **UNITS), "levels: .*in too wide; cure: shorten"),
        (lambda: plots.level_forces(LEVELS, H_X, {}, **UNITS), "forces: needed 1 to 2 parts"),
        (lambda: plots.level_forces(LEVELS, H_X, dict.fromkeys("XYZ", W_X), **UNITS), "forces: .*given .'X', 'Y', 'Z'"),
        (lambda: plots.level_forces(LEVELS, H_X, W_X, **UNITS), "forces: .*given list; cure: give a mapping"),
        (lambda: plots.level_forces(LEVELS, H_X, {"X": [1]}, **UNITS), r"forces\['X'\]: needed 5 numbers.*given 1"),
        (lambda: plots.level_forces(LEVELS, H_X, {"X" * 60: W_X}, **UNITS), "parts: .*cure: shorten the names"),
        (lambda: plots.story_shears(LEVELS, H_X, {"X": [math.inf] * 5}, **UNITS), r"shears\['X'\]: .*given inf, inf"),
        (
            lambda: plots.drift_profile(LEVELS, H_X, {"X": W_X}, {"Y": W_X}, **DRIFT_UNITS),
            "limits: needed the parts of drifts, X; given Y",
        ),
        (lambda: plots.design_spectrum([0], [1]), "T: needed two or more periods"),
        (lambda: plots.design_spectrum([], []), "T: needed two or more periods"),
        (lambda: plots.design_spectrum([0, 1, 1], [1, 1, 1]), "T: .*each longer than the one before"),
        (lambda: plots.design_spectrum([-1, 1], [1, 1]), "T: .*from 0 up"),
        (lambda: plots.design_spectrum([0, 1], [1, -0.1]), "S_a: needed ordinates not below 0; given -0.1"),
        (lambda: plots.design_spectrum([0, 1], [1]), "S_a: needed 2 numbers"),
        (
            lambda: plots.design_spectrum([0, 1], [1, 1], marks={"X: T_a": 1.2}),
            r"marks\['X: T_a'\]: needed a period from 0 to 1 s, where the curve is drawn; given 1.2; cure: draw",
        ),
        (lambda: plots.design_spectrum([0, 1], [1, 1], corners={"T_S": "x"}), r"corners\['T_S'\]: needed finite"),
        (lambda: plots.design_spectrum([0, 1], [1, 1], marks={"T" * 99: 1}), "cure: shorten the label"),
        (lambda: plots.mode_shapes(LEVELS, H_X, {}, length_unit="ft"), "shapes: needed 1 to 5 modes"),
        (lambda: plots.mode_shapes(LEVELS, H_X, {"1": [1]}, length_unit="ft"), r"shapes\['1'\]: needed 5 numbers"),
        (lambda: plots.modal_shears(LEVELS, H_X, W_X, W_X, **UNITS), "by_mode: .*given list; cure: give a mapping"),
        (lambda: plots.modal_shears(LEVELS, H_X, {"1": W_X}, [1], **UNITS), "combined: needed 5 numbers"),
        (lambda: plots.motion_history(0, {"a": ([1, 2], "g")}), "dt: needed a step above 0"),
        (lambda: plots.motion_history(0.1, {}), "histories: needed one to three"),
        (lambda: plots.motion_history(0.1, {"a": ([1, 2], "g"), "v": ([1], "m/s")}), r"histories\['v'\]: needed 2"),
        (lambda: plots.cumulative_energy(0.1, [0, 1, 0.5]), "share: needed shares that rise"),
        (lambda: plots.cumulative_energy(0.1, [0, 1], between=(0, 9)), "between: needed two times within the motion"),
        (lambda: plots.fourier_amplitude([1, 3, 2], [1, 1, 1], unit="m"), "periods: .*that rise or fall"),
        (lambda: plots.fourier_amplitude([1, 2], [1], unit="m"), "amplitudes: needed 2 numbers"),
        (lambda: plots.spectra([0, 1], [1, 1], {}), "curves: needed 1 to 5 curves"),
        (lambda: plots.spectra([0, 1], [1, 1], {"Design spectrum": ([0, 1], [1, 1])}), "labels other than"),
        (lambda: plots.spectra([0, 1], [1, 1], {"R": ([1, 0], [1, -1])}), r"(?s)each longer.*ordinates not below 0"),
        (lambda: plots.spectra([0, 1], [1, 1], {"R" * 99: ([0, 1], [1, 1])}), "cure: shorten the label"),
    ],
)
def test_bad_input_is_refused(call, match) -> None:
    with pytest.raises(InputError, match=match):
        call()
