"""Offset and slope are found as well as they say; a metal that is not there is refused.

Truth: the axis that the spectra were made on, and the published energies in `metals.py`.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace
from functools import cache

import numpy as np
import pytest

from ident import IdentError, Identification, ScaleCalibration, Settings, Spectrum, calibrate_scale, identify
from ident.errors import InputError, SettingError, UnknownNameError
from tests.benchmarks.forward import Case, Scale, build_case, draw_setup
from tests.benchmarks.samples import draw_technical

from .metals import Axis, fermi_minimum_ev, metal_spectrum

SEEDS = range(40)
GOLD_AXIS = Axis(offset_ev=2.0, slope=0.001)


def drawn_axis(seed: int) -> Axis:
    rng = np.random.default_rng([7, seed])
    return Axis(offset_ev=rng.uniform(-8.0, 8.0), slope=rng.normal(0.001, 0.0015))


@cache
def calibrated(metals: tuple[str, ...], seed: int) -> ScaleCalibration:
    resolution = np.random.default_rng([8, seed]).uniform(0.003, 0.008)
    axis = drawn_axis(seed)
    return calibrate_scale({m: metal_spectrum(m, axis, seed, resolution=resolution) for m in metals})


def off_in_sigmas(metals: tuple[str, ...]) -> np.ndarray:
    """(seeds, 2): how far offset and slope are from the truth, in their own standard deviations."""
    found = [(calibrated(metals, seed), drawn_axis(seed)) for seed in SEEDS]
    return np.array(
        [((c.offset_ev - a.offset_ev) / c.offset_sigma_ev, (c.slope - a.slope) / c.slope_sigma) for c, a in found]
    )


def fewest(count: int, probability: float) -> float:
    """As few as chance leaves inside in all but one case in a thousand (normal approximation, 3.1 deviations)."""
    return count * probability - 3.1 * math.sqrt(count * probability * (1.0 - probability)) - 0.5


@pytest.mark.parametrize("metals", [("Cu", "Au"), ("Cu",), ("Ag", "Al")])
def test_offset_and_slope_lie_within_their_deviations_as_often_as_they_should(metals: tuple[str, ...]) -> None:
    """At least 68, 95 and 99.7 %; more, since uncertainties of recalled energies are doubled, but not absurdly so."""
    off = np.abs(off_in_sigmas(metals))
    for sigmas, probability in ((1.0, 0.683), (2.0, 0.954), (3.0, 0.997)):
        assert np.all(np.sum(off < sigmas, axis=0) >= fewest(len(SEEDS), probability)), (sigmas, off)
    assert np.all(np.sqrt(np.mean(off**2, axis=0)) > 0.3)  # a deviation three times too large tells nobody anything


def test_two_metals_far_apart_give_the_slope_and_one_does_not() -> None:
    for seed in range(8):
        assert calibrated(("Cu", "Au"), seed).slope_from == "lines"
        alone = calibrated(("Cu",), seed)
        assert alone.slope_from != "lines"
        assert any("slope" in note for note in alone.notes)
        assert alone.slope_sigma > 2.0 * calibrated(("Cu", "Au"), seed).slope_sigma
        assert alone.at(2000.0).sigma_ev > alone.at(920.0).sigma_ev


@pytest.mark.parametrize("offset_ev", [-10.0, 10.0])
def test_an_axis_ten_volts_off_is_found_below_dirt(offset_ev: float) -> None:
    axis = Axis(offset_ev=offset_ev, slope=0.001)
    found = calibrate_scale({m: metal_spectrum(m, axis, 3, dirt=4.0) for m in ("Cu", "Au")})
    assert abs(found.offset_ev - offset_ev) < 3.0 * found.offset_sigma_ev < 4.0
    assert found.within_3_ev == "no"


@pytest.mark.parametrize("resolution", [0.003, 0.012])
def test_the_axis_is_the_same_at_any_resolution(resolution: float) -> None:
    """The minimum of a line moves with resolution, by 8 eV at 2 keV between these two; the axis does not."""
    axis = Axis(offset_ev=0.0, slope=0.0)
    found = calibrate_scale({m: metal_spectrum(m, axis, 5, resolution=resolution) for m in ("Cu", "Au")})
    assert abs(found.at(920.0).deviation_ev) < 1.0
    assert abs(found.at(2000.0).deviation_ev) < 2.0
    assert found.within_3_ev != "no"


def test_the_verdict_on_three_volts_follows_the_axis() -> None:
    for offset_ev, answer in ((0.0, "yes"), (6.0, "no")):
        metals = {m: metal_spectrum(m, Axis(offset_ev=offset_ev), 4) for m in ("Ag", "Cu", "Au", "Al")}
        found = calibrate_scale(metals)
        assert found.within_3_ev == answer
        assert found.deciding.split()[0] in metals
    one_window = metal_spectrum("Cu", Axis(), 4, range_ev=(40.0, 100.0))
    assert calibrate_scale({"Cu": one_window}).within_3_ev == "cannot tell"


def test_an_axis_from_the_vacuum_level_is_told() -> None:
    """The standard vacuum level lies 4.5 eV above the Fermi level (IUPAC, Pure Appl. Chem. 92 (2020) 1781)."""
    vacuum = Axis(offset_ev=-4.5)
    found = calibrate_scale({m: metal_spectrum(m, vacuum, 2) for m in ("Ag", "Cu", "Au")})
    assert any("vacuum" in note for note in found.notes)


def test_one_metal_may_come_in_several_windows() -> None:
    parts = [metal_spectrum("Cu", GOLD_AXIS, 6, range_ev=r) for r in ((880.0, 960.0), (30.0, 110.0))]
    found = calibrate_scale({"copper": parts, "Au": metal_spectrum("Au", GOLD_AXIS, 6)})
    assert found.metals == ("Cu", "Au")
    assert abs(found.at(1000.0).deviation_ev - 3.0) < 3.0 * found.at(1000.0).sigma_ev


def test_the_oxide_of_aluminium_is_not_taken_for_the_metal() -> None:
    """The KLL line of the oxide stands 6.5 eV below that of the metal (compiled, rounded), here equally strong."""
    rng = np.random.default_rng(4)
    energy = np.arange(1330.0, 1430.0, 0.5)
    both = [np.exp(-0.5 * ((energy - top) / 2.0) ** 2) for top in (1393.0, 1386.5)]
    counts = rng.poisson(20000.0 + 8000.0 * (both[0] + both[1]))
    found = calibrate_scale({"Al": Spectrum.from_arrays(energy, counts, kind="direct")})
    assert abs(found.at(1393.0).deviation_ev) < 1.0


LINES_ABSENT = {
    "another metal": ("Cu", "Ag", (30.0, 1000.0), "L3M45M45"),
    "out of range": ("Au", "Au", (300.0, 1000.0), "none of the lines"),
    "nothing but noise": ("Cu", None, (100.0, 1000.0), "L3M45M45"),
}


@pytest.mark.parametrize("case", LINES_ABSENT)
def test_a_metal_that_is_not_there_is_refused(case: str) -> None:
    named, made, range_ev, said = LINES_ABSENT[case]
    if made is None:
        energy = np.arange(*range_ev, 1.0)
        counts = np.random.default_rng(3).poisson(4000.0 * (energy / 100.0) ** 0.3)
        spectrum = Spectrum.from_arrays(energy, counts, name="flat")
    else:
        spectrum = metal_spectrum(made, GOLD_AXIS, 1, range_ev=range_ev)
    with pytest.raises(InputError, match=said) as failed:
        calibrate_scale({named: spectrum})
    assert "\n" not in str(failed.value)
    assert spectrum.name in str(failed.value)


def test_a_line_under_the_noise_is_refused() -> None:
    with pytest.raises(InputError, match="M5N67N67"):
        calibrate_scale({"Au": metal_spectrum("Au", GOLD_AXIS, 1, signal_to_noise=12.0)})


@pytest.mark.parametrize("others", ["Ag", "Au", "Al"])
def test_silver_gold_and_aluminium_are_not_taken_for_copper(others: str) -> None:
    with pytest.raises(IdentError):
        calibrate_scale({"Cu": metal_spectrum(others, GOLD_AXIS, 2)})


def test_only_the_four_metals_are_taken() -> None:
    spectrum = metal_spectrum("Cu", GOLD_AXIS, 1)
    with pytest.raises(SettingError, match="Fe is no reference metal"):
        calibrate_scale({"iron": spectrum})
    with pytest.raises(UnknownNameError):
        calibrate_scale({"Qx": spectrum})
    for nothing in ({}, {"Cu": []}):
        with pytest.raises(SettingError):
            calibrate_scale(nothing)


def fermi_axis(scale: Scale) -> Axis:
    """The same axis against the Fermi level instead of the handbooks, whose scale the benchmark's lines are on."""
    low, high = fermi_minimum_ev(100.0), fermi_minimum_ev(2000.0)
    first, last = scale.place(100.0) - low, scale.place(2000.0) - high
    slope = (last - first) / (high - low)
    return Axis(offset_ev=first - slope * low, slope=slope)


def log_loss(answer: Identification, case: Case) -> float:
    """Price of the probabilities given, natural logarithms: of what had to be called, and of what is not there."""
    given = {a.element: a.probability for a in answer.assignments}
    missed = sum(math.log(max(given.get(element, 0.005), 0.005)) for element in case.must)
    return -missed - sum(math.log(max(1.0 - p, 0.005)) for e, p in given.items() if e not in case.truth)


@pytest.mark.slow
@pytest.mark.parametrize("kind", ["windows", "surveys"])
def test_a_calibration_beats_none_on_a_shifted_axis(kind: str) -> None:
    """Spectra of the benchmark's forward model on an axis 12 eV and 0.3 % off the handbooks'."""
    scale = Scale(offset_ev=12.0, slope=0.003)
    axis = fermi_axis(scale)
    calibration = calibrate_scale({m: metal_spectrum(m, axis, 1) for m in ("Cu", "Au")})
    wrong, loss, off_ev = np.zeros(2), np.zeros(2), np.zeros((2, 30))
    for seed in range(30):
        rng = np.random.default_rng([11, seed])
        recipe, sample = draw_technical(rng)
        setup = replace(draw_setup(rng, kind, sample), scale=scale)
        case = build_case(rng, setup, sample, kind=kind, seed=seed, recipe=recipe)
        for way, known in enumerate((None, calibration)):
            answer = identify(case.spectrum, scale=known)
            called = set(answer.called)
            wrong[way] += len(case.must - called) + len(called - set(case.truth))
            loss[way] += log_loss(answer, case)
            off_ev[way, seed] = answer.scale.offset_ev + answer.scale.slope * 500.0 - axis.place(500.0) + 500.0
    assert wrong[1] < wrong[0]
    assert loss[1] < loss[0]
    without, with_it = np.median(np.abs(off_ev), axis=1)
    assert with_it < 0.5 * without


def test_a_calibration_does_not_hide_charging() -> None:
    """Silver on an insulating film, 25 eV too high, on an axis that a calibration says is right."""
    calibration = calibrate_scale({m: metal_spectrum(m, Axis(), 1) for m in ("Cu", "Au")})
    charged = metal_spectrum("Ag", Axis(offset_ev=25.0), 3, range_ev=(30.0, 1000.0))
    answer = identify(charged, scale=calibration, insulator=True)
    assert "Ag" in answer.called
    assert answer.scale.charging == "yes"
    assert abs(answer.scale.offset_ev - 25.0) < 3.0


def test_the_answer_says_which_axis_it_started_from() -> None:
    calibration = calibrated(("Cu", "Au"), 0)
    spectrum = metal_spectrum("Cu", drawn_axis(0), 9, range_ev=(30.0, 1000.0))
    told = identify(spectrum, scale=calibration).to_dict()
    assert told["scale"]["source"] == f"calibrated with Cu, Au on {calibration.date}"
    assert told["settings"]["scale"]["metals"] == ["Cu", "Au"]
    assert identify(spectrum).to_dict()["scale"]["source"].startswith("not calibrated")
    with pytest.raises(SettingError, match="scale is a calibration"):
        Settings(scale="scale.json")  # type: ignore[arg-type]


def test_inputs_are_not_altered() -> None:
    spectrum = metal_spectrum("Cu", GOLD_AXIS, 1)
    before = spectrum.windows[0].intensity.copy()
    calibrate_scale({"Cu": spectrum})
    assert np.array_equal(before, spectrum.windows[0].intensity)


def energies(spectra: Sequence[Spectrum]) -> list[float]:
    return [line.found_ev for line in calibrate_scale({"Cu": list(spectra)}).lines]


def test_scaling_the_counts_changes_nothing() -> None:
    spectrum = metal_spectrum("Cu", GOLD_AXIS, 1)
    window = spectrum.windows[0]
    louder = replace(spectrum, windows=(replace(window, intensity=window.intensity * 8.0),))
    assert np.allclose(energies([spectrum]), energies([louder]), atol=0.05)
